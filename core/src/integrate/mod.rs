//! Integration of the equations of motion.

pub mod drift;
#[cfg(test)]
mod exactly;
pub mod long_steps;
pub mod radau;
pub(crate) mod spacings;
pub mod wisdom_holman;

pub use radau::{PER_BODY, Radau, StepTooSmall};
pub use wisdom_holman::WisdomHolman;
