//! The scenario: one TOML file that a presenter writes.
//!
//! [`parse()`] turns its text into a [`Scenario`] and every problem at once; [`edit`] changes the text and keeps
//! comments and order; [`grammar`] is the format as data, which parsing follows and a reference can be made from.

pub mod edit;
pub mod grammar;
pub mod model;
mod names;
mod page;
pub mod parse;
pub mod problem;
mod reader;
mod source;
pub mod today;

pub use model::*;
pub use page::format_page;
pub use parse::{Parsed, QUANTITIES, parse, parse_bytes};
pub use problem::{Place, Problem, Severity};
pub use today::dated;
