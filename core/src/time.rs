//! Instants of the model. There is no clock here.

/// An instant: seconds of TDB past J2000 (JD 2451545.0 TDB).
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Epoch {
    tdb_s: f64,
}

impl Epoch {
    /// From seconds of TDB past J2000.
    pub const fn from_tdb_s(tdb_s: f64) -> Self {
        Self { tdb_s }
    }
    /// Seconds of TDB past J2000.
    pub const fn tdb_s(self) -> f64 {
        self.tdb_s
    }
}
