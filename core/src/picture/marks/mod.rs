//! Marks: what is drawn to explain, each kind in a file of its own.

pub mod apsides;
pub mod area;
pub mod arrow;
pub mod body;
pub mod conic;
pub mod foot;
pub mod line;
pub mod path;
pub mod readout;
pub mod sector;
pub mod swarm;
pub mod tail;
pub mod trail;

use super::scene::Scene;
use crate::scenario::{BodyId, Mark};

/// The body of a mark; `None`: it belongs to the picture.
pub const fn body_of(mark: &Mark) -> Option<BodyId> {
    match *mark {
        Mark::Trail { body, .. }
        | Mark::Path { body, .. }
        | Mark::Sector { body, .. }
        | Mark::Velocity { body, .. }
        | Mark::Gravity { body }
        | Mark::Conic { body, .. }
        | Mark::Foci { body, .. }
        | Mark::Apsides { body, .. }
        | Mark::Readout { body, .. } => Some(body),
        Mark::Scale | Mark::Date | Mark::Pace => None,
    }
}

/// The marks of the beat whose bodies are on stage now.
pub fn on_stage(scene: &Scene<'_>) -> Vec<Mark> {
    let seen = |mark: &&Mark| body_of(mark).is_none_or(|body| scene.on_stage(body));
    scene.beat.marks.iter().filter(seen).copied().collect()
}
