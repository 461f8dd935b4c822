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
//!
//! ```
//! use fallaround_core::scenario::BodyId;
//! use fallaround_core::show::Rehearsal;
//!
//! let text = r#"
//! format = 1
//! title = "A ball and a world"
//! [[body]]
//! name = "Skerry"
//! mass = "1 Moon masses"
//! radius = "1737 km"
//! [[body]]
//! name = "Ball"
//! drop = { onto = "Skerry", height = "100 m" }
//! [[beat]]
//! title = "Let go"
//! clock = { reach = "contact of Ball with Skerry", at = "10 s" }
//! view = { centre = "Ball", span = "300 m" }
//! "#;
//! let show = Rehearsal::whole(text).map_err(|problems| problems[0].to_string())?;
//! let fall_s = show.ephemeris.contacts()[0].t_s;
//! assert!((fall_s - 11.1).abs() < 0.05); // sqrt(2 h / g) with g = 1.625 m/s²
//! let ball = show.ephemeris.relative(BodyId(1), BodyId(0), fall_s).ok_or("no state")?;
//! assert!((ball.pos.norm() - 1_737_000.0).abs() < 1e-6);
//! # Ok::<(), String>(())
//! ```

// Test data is shared with benches and examples, which see the crate from outside.
#[cfg(test)]
extern crate self as fallaround_core;

pub mod aim;
pub mod air;
pub mod check;
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
pub mod swarm;
pub mod sweep;
pub mod time;
pub mod units;

#[cfg(test)]
#[path = "../benches/common/solar_system.rs"]
mod solar_system;

pub use nalgebra::Vector3;
