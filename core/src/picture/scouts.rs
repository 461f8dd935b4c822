//! Scouts: a few tracers of each swarm that say where it goes, so that words are set clear of it.
//!
//! Where all tracers are costs too much to be looked up at every instant of a beat ahead of time. Tracers don't act on one
//! another, so a few of them alone go where they go among all.

use super::geometry::Px;
use super::marks::swarm;
use super::scene::Scene;
use crate::Vector3;
use crate::initial::{InitialState, InitialSwarm};
use crate::scenario::SwarmId;
use crate::show::Show;
use crate::swarm::{Cursor, SwarmPath, SwarmRun};

/// How many of each swarm.
const FEW: usize = 100;

/// A few tracers of each swarm of a show, and their ways.
#[derive(Debug, Clone)]
pub struct Scouts {
    initial: InitialState,
    paths: Vec<SwarmPath>,
}

impl Scouts {
    /// For a show.
    pub fn new(show: &Show) -> Self {
        let all = &show.initial;
        let swarms = all.swarms.iter().take(show.swarms.len()).map(few).collect();
        let initial = InitialState {
            bodies: all.bodies.clone(),
            listed: all.listed,
            forces: all.forces.clone(),
            changes: all.changes.clone(),
            swarms,
        };
        let path = |index| {
            let mut run = SwarmRun::new(&initial, index);
            for t_s in [show.plan.covers_until_s, show.plan.covers_from_s] {
                run.advance(&show.ephemeris, t_s, usize::MAX);
            }
            run.into_path()
        };
        Self { paths: (0..initial.swarms.len()).map(path).collect(), initial }
    }

    /// Working memory for [`Scouts::points`], which is quickest from one instant to a later one.
    pub fn cursors(&self) -> Vec<Cursor> {
        (0..self.paths.len()).map(|index| Cursor::new(&self.initial, index)).collect()
    }

    /// Those in the picture, of the swarms on stage.
    pub fn points(&self, cursors: &mut [Cursor], scene: &Scene<'_>) -> Vec<Px> {
        let mut found = Vec::new();
        let ways = self.paths.iter().zip(&self.initial.swarms).zip(cursors);
        for (index, ((path, start), cursor)) in ways.enumerate() {
            if !swarm::is_on_stage(scene, SwarmId(index))
                || !cursor.seek(path, &scene.show.ephemeris, scene.t_s, usize::MAX)
            {
                continue;
            }
            let middle = scene.position(start.about);
            let at = cursor.positions();
            for (((x, y), z), gone) in at.x.iter().zip(at.y).zip(at.z).zip(at.gone) {
                let point = scene.camera.project(middle + Vector3::new(*x, *y, *z));
                if !*gone && scene.frame.whole().holds(point) {
                    found.push(point);
                }
            }
        }
        found
    }
}

fn few(swarm: &InitialSwarm) -> InitialSwarm {
    let step = swarm.pos.len().div_ceil(FEW).max(1);
    InitialSwarm {
        name: swarm.name.clone(),
        about: swarm.about,
        pos: swarm.pos.iter().step_by(step).copied().collect(),
        vel: swarm.vel.iter().step_by(step).copied().collect(),
        area_m2_kg: swarm.area_m2_kg,
    }
}
