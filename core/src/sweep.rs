//! Sectors.
