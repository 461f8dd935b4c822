//! The elements of a conic.

use super::{ConicError, kepler};
use std::f64::consts::TAU;

/// A conic around a centre, and where on it the body is.
///
/// Size and shape are the distance at periapsis and the eccentricity, because these two stay finite through
/// every conic. They can't tell how long a needle is: of an ellipse with `1 - e` = k the semi-major axis is
/// known to about `2e-16 / k` of itself; [`super::semi_major_from_state`] has it from the energy instead.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Elements {
    /// Distance at periapsis from the centre, m; above 0.
    pub periapsis_m: f64,
    /// Eccentricity: 0 circle, below 1 ellipse, 1 parabola, above 1 hyperbola.
    pub eccentricity: f64,
    /// Inclination to the ecliptic plane, 0 to π.
    pub inclination_rad: f64,
    /// Longitude of the ascending node, from +x, 0 to 2π.
    pub node_rad: f64,
    /// Argument of periapsis, from the node, 0 to 2π.
    pub argument_rad: f64,
    /// True anomaly, from periapsis, -π to π.
    pub true_anomaly_rad: f64,
}

impl Elements {
    /// Semi-major axis, m; infinite for a parabola, negative for a hyperbola.
    pub fn semi_major_m(&self) -> f64 {
        self.periapsis_m / (1.0 - self.eccentricity)
    }

    /// Distance at apoapsis, m, of a closed orbit.
    pub fn apoapsis_m(&self) -> Option<f64> {
        (self.eccentricity < 1.0)
            .then(|| self.periapsis_m * (1.0 + self.eccentricity) / (1.0 - self.eccentricity))
    }

    /// Semi-latus rectum, m: the distance a quarter turn from periapsis.
    pub fn parameter_m(&self) -> f64 {
        self.periapsis_m * (1.0 + self.eccentricity)
    }

    /// Distance now, m.
    pub fn distance_m(&self) -> f64 {
        self.parameter_m() / kepler::one_plus_e_cos(self.true_anomaly_rad, self.eccentricity)
    }

    /// Distance at another true anomaly, m; `None` where the conic doesn't reach it.
    pub fn distance_at_m(&self, true_anomaly_rad: f64) -> Option<f64> {
        let d = kepler::one_plus_e_cos(true_anomaly_rad, self.eccentricity);
        (d > 0.0).then(|| self.parameter_m() / d)
    }

    /// Period of a closed orbit, s, with the GM of both bodies together.
    pub fn period_s(&self, gm_m3_s2: f64) -> Option<f64> {
        let a = self.semi_major_m();
        (self.eccentricity < 1.0 && gm_m3_s2 > 0.0).then(|| TAU * a * (a / gm_m3_s2).sqrt())
    }

    /// Mean anomaly of a closed orbit, -π to π.
    pub fn mean_anomaly_rad(&self) -> Option<f64> {
        (self.eccentricity < 1.0).then(|| {
            let x = kepler::eccentric_from_true(self.true_anomaly_rad, self.eccentricity);
            kepler::mean_from_eccentric(x, self.eccentricity)
        })
    }

    /// Time since periapsis, s; negative before it. `gm_m3_s2` is that of both bodies together.
    ///
    /// # Errors
    /// As [`kepler::time_after_periapsis`].
    pub fn after_periapsis_s(&self, gm_m3_s2: f64) -> Result<f64, ConicError> {
        kepler::time_after_periapsis(self.true_anomaly_rad, self.periapsis_m, self.eccentricity, gm_m3_s2)
    }

    /// The same conic, a stated time after periapsis (before it when negative).
    ///
    /// # Errors
    /// As [`kepler::true_anomaly_after`].
    pub fn at_after_periapsis(self, after_s: f64, gm_m3_s2: f64) -> Result<Self, ConicError> {
        let true_anomaly_rad =
            kepler::true_anomaly_after(after_s, self.periapsis_m, self.eccentricity, gm_m3_s2)?;
        Ok(Self { true_anomaly_rad, ..self })
    }

    /// The same conic at a mean anomaly (closed orbits only).
    ///
    /// # Errors
    /// As [`kepler::eccentric_anomaly`].
    pub fn at_mean_anomaly(self, mean_rad: f64) -> Result<Self, ConicError> {
        let x = kepler::eccentric_anomaly(mean_rad, self.eccentricity)?;
        Ok(Self { true_anomaly_rad: kepler::true_from_eccentric(x, self.eccentricity), ..self })
    }
}
