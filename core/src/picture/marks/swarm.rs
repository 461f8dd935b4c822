//! Swarms: a point for each tracer, and the name beside them.
//!
//! Where a tracer is at an instant is integrated again from what is kept of its swarm, in working memory that goes along from
//! frame to frame; what comes out depends on the instant alone.

use super::super::geometry::{Px, between, length};
use super::super::labels::{Block, Key, Line};
use super::super::list::{Colour, Item, Shape, Tag};
use super::super::scene::{Scene, Spot};
use super::super::{look, type_metrics};
use super::body;
use crate::Vector3;
use crate::math::float;
use crate::scenario::{Beat, Plane, SwarmId, SwarmShape};
use crate::show::Show;
use crate::swarm::{Cursor, Positions};

/// Up to so many tracers of a swarm, points have their full size and opacity; of more, less, so that they don't light the room.
const FEW: f64 = 1000.0;
/// Size of a point of few, part of the picture's height.
const SIZE: f64 = 1.0 / 390.0;
/// Opacity of a point of few.
const OPACITY: f64 = 0.95;
/// By which power of their number points get smaller, and by which fainter.
const SMALLER: f64 = 0.12;
const FAINTER: f64 = 0.12;
/// Points of its outer edge at which a name may stand.
const EDGE_POINTS: u32 = 32;
/// Frames without arriving after which the work of a frame is not doubled any more.
const MOST_DOUBLINGS: u32 = 12;

/// Working memory: where the tracers of each swarm are.
#[derive(Debug, Clone)]
pub struct Tracers {
    cursors: Vec<Cursor>,
    /// Most tracer steps of a frame, of all swarms together.
    most_steps: usize,
    /// Frames since all were where they should be.
    late: u32,
}

impl Tracers {
    /// For a show.
    pub fn new(show: &Show) -> Self {
        let cursors = (0..show.swarms.len()).map(|index| Cursor::new(&show.initial, index)).collect();
        Self { cursors, most_steps: usize::MAX, late: 0 }
    }

    /// Draws none from now on.
    pub fn leave(&mut self) {
        self.cursors.clear();
    }

    /// Lets a frame take about so many tracer steps; a swarm that has not arrived is not drawn. Each frame in which one has not
    /// doubles them, so that it arrives at any pace.
    pub const fn work_at_most(&mut self, tracer_steps: usize) {
        self.most_steps = tracer_steps;
    }

    /// Brings the swarms that a beat shows to an instant ahead of being drawn, by about so many tracer steps. True once all are there.
    pub fn arrive(&mut self, show: &Show, beat: &Beat, t_s: f64, tracer_steps: usize) -> bool {
        self.cursors.iter_mut().zip(&show.swarms).enumerate().all(|(id, (cursor, path))| {
            !is_in_cast(beat, SwarmId(id)) || cursor.seek(path, &show.ephemeris, t_s, tracer_steps)
        })
    }

    /// Adds the points of the swarms on stage: those on open ground before everything else in the list, where a painter is
    /// quickest with them; those in front of a solid at `front`, after the solids. What a solid hides is left out.
    pub fn draw(&mut self, scene: &mut Scene<'_>, spots: &[Spot], front: usize) {
        let part = scene.frame.part(1.0);
        let solids: Vec<Spot> = spots.iter().filter(|s| body::is_solid(s, part)).copied().collect();
        let on_stage: Vec<SwarmId> =
            (0..self.cursors.len()).map(SwarmId).filter(|id| is_on_stage(scene, *id)).collect();
        let all: usize = on_stage.iter().map(|id| count(scene.show, *id)).sum();
        let most = self.most_steps.saturating_mul(1 << self.late.min(MOST_DOUBLINGS));
        let (mut ground, mut before) = (Vec::new(), Vec::new());
        let mut arrived = true;
        for id in on_stage {
            let (Some(cursor), Some(path)) = (self.cursors.get_mut(id.0), scene.show.swarms.get(id.0)) else {
                continue;
            };
            let share = (most / all.max(1)).saturating_mul(count(scene.show, id)).max(1);
            if !cursor.seek(path, &scene.show.ephemeris, scene.t_s, share) {
                arrived = false;
                continue;
            }
            let [far, near] = project(scene, id, &cursor.positions(), &solids);
            let (size, colour) = appearance(scene, id);
            for (points, items) in [(far, &mut ground), (near, &mut before)] {
                if !points.is_empty() {
                    items.push(Item { tag: Tag::Swarm(id), shape: Shape::Points { points, size, colour } });
                }
            }
        }
        self.late = if arrived { 0 } else { self.late.saturating_add(1) };
        let front = front.min(scene.items.len());
        scene.items.splice(front..front, before);
        scene.items.splice(0..0, ground);
    }
}

/// Whether a beat shows a swarm.
pub fn is_on_stage(scene: &Scene<'_>, id: SwarmId) -> bool {
    is_in_cast(scene.beat, id)
}

fn is_in_cast(beat: &Beat, id: SwarmId) -> bool {
    beat.cast.as_ref().is_none_or(|cast| cast.swarms.contains(&id))
}

fn count(show: &Show, id: SwarmId) -> usize {
    show.initial.swarms.get(id.0).map_or(0, |swarm| swarm.pos.len())
}

/// Size, px, and colour of a swarm's points.
fn appearance(scene: &Scene<'_>, id: SwarmId) -> (f64, Colour) {
    let many = f64::from(u32::try_from(count(scene.show, id)).unwrap_or(u32::MAX)).max(FEW) / FEW;
    let size = scene.frame.part(SIZE) * float::pow(many, -SMALLER);
    let colour = scene.show.scenario.swarms.get(id.0).map_or(look::INK, |swarm| look::body(swarm.colour));
    (size.max(1.0), look::fade(colour, OPACITY * float::pow(many, -FAINTER)))
}

/// The points in the picture: those clear of all solids, and those in front of one.
fn project(scene: &Scene<'_>, id: SwarmId, at: &Positions<'_>, solids: &[Spot]) -> [Vec<Px>; 2] {
    let camera = &scene.camera;
    let origin = origin(scene, id) - camera.centre;
    let keep = scene.frame.whole().grown(scene.frame.part(2.0 * SIZE));
    let [mut far, mut near] = [Vec::with_capacity(at.x.len()), Vec::new()];
    for (((x, y), z), gone) in at.x.iter().zip(at.y).zip(at.z).zip(at.gone) {
        if *gone {
            continue;
        }
        let place = origin + Vector3::new(*x, *y, *z);
        let [right, down] = camera.turn(place);
        let point = [camera.middle[0] + right, camera.middle[1] + down];
        if !keep.holds(point) {
            continue;
        }
        let mut solid = false;
        let mut hidden = false;
        for spot in solids {
            if length(between(spot.at, point)) < spot.true_radius {
                solid = true;
                hidden |= place.dot(&camera.toward) * camera.px_per_m < spot.depth;
            }
        }
        match (solid, hidden) {
            (false, _) => far.push(point),
            (true, false) => near.push(point),
            (true, true) => {}
        }
    }
    [far, near]
}

/// Where the middle of a swarm's body is, m.
fn origin(scene: &Scene<'_>, id: SwarmId) -> Vector3<f64> {
    scene.show.initial.swarms.get(id.0).map_or_else(Vector3::zeros, |swarm| scene.position(swarm.about))
}

/// The outer edge of a swarm that has one: its radius, m, and its plane; none for one without a plane.
const fn rim(shape: &SwarmShape) -> Option<(f64, Option<Plane>)> {
    match shape {
        SwarmShape::Ring { to, plane, .. } | SwarmShape::Belt { to, plane, .. } => {
            Some((to.m(), Some(*plane)))
        }
        SwarmShape::Cloud { to, .. } => Some((to.m(), None)),
        SwarmShape::Burst { .. } => None,
    }
}

/// The names of the swarms on stage, each at the point of its outer edge that lies farthest to the upper right in the picture. A burst has no edge,
/// and no name: what bursts has one.
pub fn names(scene: &Scene<'_>) -> Vec<Block> {
    let mut blocks = Vec::new();
    for (index, swarm) in scene.show.scenario.swarms.iter().enumerate() {
        let id = SwarmId(index);
        let Some((radius_m, plane)) = rim(&swarm.shape).filter(|_| is_on_stage(scene, id)) else { continue };
        let width = type_metrics::width(&swarm.name, scene.frame.label, NAME_WEIGHT);
        // Where its name has room.
        let window = scene.frame.whole().grown(-scene.frame.label);
        let room = |p: &Px| window.holds(*p) && window.holds([p[0] + width, p[1]]);
        let middle = origin(scene, id);
        let (one, other) = axes(scene, plane);
        let edge = (0..EDGE_POINTS).map(|i| {
            let (sin, cos) = float::sin_cos(std::f64::consts::TAU * f64::from(i) / f64::from(EDGE_POINTS));
            scene.camera.project(middle + (one * cos + other * sin) * radius_m)
        });
        let Some(at) = edge.filter(room).max_by(|a, b| (a[0] - a[1]).total_cmp(&(b[0] - b[1]))) else {
            continue;
        };
        let line =
            Line { text: swarm.name.clone(), weight: NAME_WEIGHT, colour: look::INK_2, tag: Tag::Swarm(id) };
        let radius = scene.frame.part(SIZE);
        blocks.push(Block { key: Key::Swarm(index), at, radius, lines: vec![line] });
    }
    blocks
}

const NAME_WEIGHT: u16 = 500;

/// Two directions at right angles in a plane; without one, in that of the picture.
fn axes(scene: &Scene<'_>, plane: Option<Plane>) -> (Vector3<f64>, Vector3<f64>) {
    let Some(plane) = plane else { return (scene.camera.right, scene.camera.up) };
    let (sin_node, cos_node) = float::sin_cos(plane.node.rad());
    let (sin_incl, cos_incl) = float::sin_cos(plane.inclination.rad());
    let node = Vector3::new(cos_node, sin_node, 0.0);
    (node, Vector3::new(-sin_node * cos_incl, cos_node * cos_incl, sin_incl))
}
