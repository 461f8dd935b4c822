//! The scenario: one TOML file that a presenter writes.

pub mod model;
pub mod problem;
pub mod today;

pub use model::*;
pub use problem::{Place, Problem, Severity};
pub use today::dated;
