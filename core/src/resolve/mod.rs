//! From what a scenario states to where every body is and how it moves at the start.

pub use crate::initial::{Forces, InitialBody, InitialState, Oblate};
