//! Tracers among the planets.

use fallaround_core::Vector3;
use fallaround_core::constants::{AU_M, GM_SUN_M3_S2};
use fallaround_core::ephemeris::{Ephemeris, Propagation};
use fallaround_core::initial::{InitialState, InitialSwarm};
use fallaround_core::math::float::{cos, sin};
use fallaround_core::scenario::BodyId;
use fallaround_core::swarm::{Cursor, SwarmRun};

use crate::{Outcome, starts};

/// How many tracers there are.
pub const TRACERS: usize = 10_000;

/// How many of them tell where they are in the end.
pub const TOLD: usize = 20;

/// Tracers in a belt between 2.2 and 3.2 au, on orbits that are nearly circles, among the Sun and eight planets.
#[derive(Debug)]
pub struct Swarm {
    initial: InitialState,
    ephemeris: Ephemeris,
    run: SwarmRun,
}

impl Swarm {
    /// The bodies' own paths are worked out here, to `until_s`.
    #[must_use]
    pub fn new(until_s: f64) -> Self {
        let mut initial = starts::planets();
        let (pos, vel) = (0..TRACERS).map(tracer).unzip();
        initial.swarms.push(InitialSwarm {
            name: "belt".to_owned(),
            about: BodyId(0),
            pos,
            vel,
            area_m2_kg: 0.0,
        });
        let mut propagation = Propagation::new(&initial);
        // Where it stops early, so does the swarm, and its places show it.
        propagation.advance(until_s, usize::MAX).ok();
        Self { ephemeris: propagation.into_ephemeris(), run: SwarmRun::new(&initial, 0), initial }
    }

    /// From the start to a time, once more.
    pub fn run(&mut self, until_s: f64) -> Outcome {
        self.run = SwarmRun::new(&self.initial, 0);
        self.run.advance(&self.ephemeris, until_s, usize::MAX);
        Outcome { steps: self.run.steps() as f64, energy_error: 0.0, pos: Vec::new() }
    }

    /// Where some of the tracers are at the end of the last run, relative to the Sun. It takes the time that a jump in a show takes.
    #[must_use]
    pub fn told(&self, until_s: f64) -> Vec<f64> {
        let mut cursor = Cursor::new(&self.initial, 0);
        cursor.seek(self.run.path(), &self.ephemeris, until_s, usize::MAX);
        let at = cursor.positions();
        (0..TOLD).flat_map(|i| [at.x[i], at.y[i], at.z[i]]).collect()
    }
}

/// A tracer's place and velocity relative to the Sun. Neighbours in the list are far from each other in the belt.
#[must_use]
pub fn tracer(index: usize) -> (Vector3<f64>, Vector3<f64>) {
    let golden = 0.618_033_988_749_894_9;
    let n = index as f64;
    let share = |factor: f64| (n * factor) % 1.0;
    let a = (2.2 + share(golden)) * AU_M;
    let angle = std::f64::consts::TAU * share(golden * golden * golden);
    let tilt = 0.1 * share(0.414_213_562_373_095_1);
    let speed = (GM_SUN_M3_S2 / a).sqrt();
    let (s, c) = (sin(angle), cos(angle));
    let pos = Vector3::new(c, s * cos(tilt), s * sin(tilt)) * a;
    let vel = Vector3::new(-s, c * cos(tilt), c * sin(tilt)) * speed;
    (pos, vel)
}

/// The planets and the first tracers as bodies without mass: to be integrated by another method.
#[must_use]
pub fn as_bodies(tracers: usize) -> InitialState {
    let mut initial = starts::planets();
    let sun = initial.bodies[0].clone();
    for index in 0..tracers {
        let (pos, vel) = tracer(index);
        let mut body = sun.clone();
        body.gm_m3_s2 = 0.0;
        body.name = format!("tracer {index}");
        body.pos += pos;
        body.vel += vel;
        initial.bodies.push(body);
    }
    initial.listed = initial.bodies.len();
    initial
}
