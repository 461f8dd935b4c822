//! Instants of the model. There is no clock here.
//!
//! Inside, an instant is seconds of Barycentric Dynamical Time (TDB) past J2000. People write UTC. Between the two
//! stand the calendar and the leap seconds (from `hifitime`), 32.184 s, and the small periodic TDB − TT.
//! Before 1972, when leap seconds began, UTC is taken to run with International Atomic Time.

use crate::constants::{DAY_S, J2000_JD, TT_MINUS_TAI_S};
use crate::math::float;
use std::fmt;

/// An instant: seconds of TDB past J2000 (JD 2451545.0 TDB).
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Epoch {
    tdb_s: f64,
}
