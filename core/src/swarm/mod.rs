//! Swarms: tracers by the ten thousand, in the field of the integrated bodies.
//!
//! Tracers pull on nothing, so each is integrated by itself, in the field that an ephemeris gives, and many side by side. What is kept of them
//! is little: states at sparse instants, from which every other is integrated again, always by the same steps. So where a tracer is
//! at an instant is a function of that instant alone, to the bit, whatever was looked at before.
//!
//! They feel Newton's attraction of all bodies, softened where that of the bodies is, the bulges of oblate ones and air. Relativity is left out for them: in ten years it turns the orbit
//! of a tracer at 2 au by less than a thousandth of a degree. Tracers that touch a body are gone.
//!
//! Most go in blocks, by a multistep method with one evaluation of the pulls a step (`block`). Those that come near to a body, or into air, leave
//! their block and go by themselves until they are clear of it (`watch`, `lone`). Ten years of a belt among the planets are off by 1e-9 of its
//! size in the middle, and by a few times 1e-8 for tracers that a planet passes.

mod block;
mod cursor;
mod field;
mod flat;
mod flock;
mod lone;
mod path;
mod pulls;
mod run;
mod scale;
#[cfg(test)]
mod tests;
mod watch;
mod weights;

pub use cursor::{Cursor, Positions};
pub use path::{SNAPSHOT_BYTES, SwarmPath};
pub use run::SwarmRun;

use crate::scenario::BodyId;
use path::Start;

/// A tracer that touched a body, and is gone.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Loss {
    /// When, seconds from the scenario's start.
    pub t_s: f64,
    /// Which tracer of the swarm.
    pub tracer: usize,
    /// The body that it touched.
    pub onto: BodyId,
}
