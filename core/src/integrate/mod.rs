//! Integration of the equations of motion.

pub mod drift;
pub mod radau;
mod spacings;

pub use radau::{PER_BODY, Radau, StepTooSmall};
