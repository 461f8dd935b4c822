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

/// A table, to be read from where it lies: as constants in the code, its numbers would be made anew for each use in wasm,
/// which takes longer than what they are used for.
#[inline]
pub(crate) fn from_memory<T>(table: &T) -> &T {
    std::hint::black_box(table)
}
