//! Where everything starts: what a scenario comes down to, and all that the integrator needs.

use crate::Vector3;
use crate::air::Air;
use crate::scenario::{BodyId, ChangeKind, Surface};

/// Everything that the integrator needs. Barycentric: the centre of mass of all massive bodies is at rest at the origin.
#[derive(Debug, Clone, PartialEq)]
pub struct InitialState {
    /// The bodies of the scenario in its order, then the unseen companions.
    pub bodies: Vec<InitialBody>,
    /// How many of them the scenario names; the rest are companions, never shown or listed.
    pub listed: usize,
    /// The forces beyond Newton's attraction of points.
    pub forces: Forces,
    /// What is done to the bodies on the way, in the order of time, as far as it is known when. They act from time 0 on; going back,
    /// nothing changes.
    pub changes: Vec<TimedChange>,
    /// Swarms of tracers, in the order of the file. They feel the bodies and pull on nothing.
    pub swarms: Vec<InitialSwarm>,
}

impl InitialState {
    /// Of these bodies, all of them listed, under Newton's forces alone, with nothing done to them on the way.
    pub fn of(bodies: Vec<InitialBody>) -> Self {
        Self {
            listed: bodies.len(),
            bodies,
            forces: Forces::default(),
            changes: Vec::new(),
            swarms: Vec::new(),
        }
    }

    /// Name of a body; empty where there is none.
    pub fn name(&self, body: BodyId) -> &str {
        self.bodies.get(body.0).map_or("", |body| body.name.as_str())
    }
}

/// Many tracers at the start, with one origin.
#[derive(Debug, Clone, PartialEq)]
pub struct InitialSwarm {
    /// Its name.
    pub name: String,
    /// The body relative to whose centre its tracers are placed.
    pub about: BodyId,
    /// Positions relative to that body, m.
    pub pos: Vec<Vector3<f64>>,
    /// Velocities relative to that body, m/s; as many as positions.
    pub vel: Vec<Vector3<f64>>,
    /// Coefficient of drag times cross-section over mass of each tracer, m²/kg; 0: air does not slow them.
    pub area_m2_kg: f64,
}

/// Something done to a body on the way, at an instant that is known.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TimedChange {
    /// When, seconds from the scenario's start; not negative.
    pub t_s: f64,
    /// To which body.
    pub body: BodyId,
    /// What.
    pub what: ChangeKind,
}

/// One body at the start.
#[derive(Debug, Clone, PartialEq)]
pub struct InitialBody {
    /// Its name.
    pub name: String,
    /// Its gravity, m³/s²; 0 for a tracer.
    pub gm_m3_s2: f64,
    /// Its radius, m; 0 for a point.
    pub radius_m: f64,
    /// What contact with it does.
    pub surface: Surface,
    /// The body that it goes around, falls onto or was placed about.
    pub primary: Option<BodyId>,
    /// Position, m.
    pub pos: Vector3<f64>,
    /// Velocity, m/s.
    pub vel: Vector3<f64>,
}

/// The forces beyond Newton's attraction of points.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Forces {
    /// Whether the massive bodies act on one another, and on tracers, by relativity to first post-Newtonian order.
    pub relativity: bool,
    /// Oblate bodies.
    pub oblate: Vec<Oblate>,
    /// Bodies with air around them.
    pub atmospheres: Vec<Atmosphere>,
    /// Bodies that air slows.
    pub drags: Vec<Drag>,
    /// Over which length Newton's attraction is softened, m; 0: bodies attract as points. Never beside relativity or oblate bodies.
    pub softening_m: f64,
}

/// The air around a body. It does not turn.
#[derive(Debug, Clone, PartialEq)]
pub struct Atmosphere {
    /// Around which one.
    pub body: BodyId,
    /// From which radius heights are counted, m.
    pub radius_m: f64,
    /// The air.
    pub air: Air,
}

/// What a body offers to air.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Drag {
    /// Which body.
    pub body: BodyId,
    /// Coefficient of drag times cross-section over mass, m²/kg.
    pub area_m2_kg: f64,
}

/// A body whose equator bulges.
#[derive(Debug, Clone, PartialEq)]
pub struct Oblate {
    /// Which one.
    pub body: BodyId,
    /// J2, without dimension.
    pub j2: f64,
    /// The equatorial radius that belongs to that J2, m.
    pub radius_m: f64,
    /// Direction of the pole, a unit vector.
    pub pole: Vector3<f64>,
}
