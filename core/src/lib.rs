//! Gravity, orbits and shows: the engine of Fallaround.
//!
//! The crate turns the text of a scenario into what an audience sees, in one direction:
//! text → [`scenario::Scenario`] → [`resolve::InitialState`] → [`ephemeris::Ephemeris`] →
//! [`picture::DisplayList`]. Each arrow is a pure function of what stands left of it.
//!
//! What it does not do: it has no input or output, no browser types, no clock, no threads, no
//! randomness and no global state. The caller says how much time has passed. The same input gives the
//! same bits natively and in WebAssembly: transcendental functions come from `libm` through
//! [`math::float`], sums are taken in a fixed order, and nothing is fused.
//!
//! Inside, quantities are SI (metres, seconds, radians, GM in m³/s²), axes are the ecliptic and equinox of
//! J2000, and times are seconds of TDB from the scenario's start, unless a name says otherwise.

// Test data is shared with benches and examples, which see the crate from outside.
#[cfg(test)]
extern crate self as fallaround_core;

pub mod conic;
pub mod constants;
pub mod ephemeris;
pub mod gravity;
pub mod initial;
pub mod integrate;
pub mod math;
pub mod picture;
pub mod resolve;
pub mod scenario;
pub mod show;
pub mod sweep;
pub mod time;
pub mod units;

pub use nalgebra::Vector3;
