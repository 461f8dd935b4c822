//! The scenario: one TOML file that a presenter writes.

pub mod model;
pub mod problem;

pub use model::*;
pub use problem::{Place, Problem, Severity};
