//! Orbits.
