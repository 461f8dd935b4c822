//! From a show and an instant of its clock to a list of things to paint.

pub mod list;
pub mod look;
pub mod type_metrics;

pub use list::*;
