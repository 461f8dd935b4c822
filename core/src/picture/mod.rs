//! From a show and an instant of its clock to a list of things to paint.

pub mod list;

pub use list::*;
