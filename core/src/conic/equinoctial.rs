//! Equinoctial elements: smooth where the usual ones are not, so that they can be interpolated in time.
//!
//! The usual elements have no node in the ecliptic and no periapsis on a circle. These have no such places but one: an inclination
//! of 180°. So an orbit that goes round the other way is described in axes turned over ([`Sense::Retrograde`]).
//!
//! # Source
//! R. A. Broucke & P. J. Cefola, Celestial Mechanics 5 (1972), 303: `h = e sin ϖ`, `k = e cos ϖ`, `p = tan(i/2) sin Ω`,
//! `q = tan(i/2) cos Ω`, the mean longitude λ, and Kepler's equation `λ = F + h cos F - k sin F`.

use super::ConicError;
use super::kepler::eccentric_anomaly;
use crate::Vector3;
use crate::math::float::{atan2, hypot, sin_cos};

/// Which way round an orbit goes, seen from the north of the ecliptic.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Sense {
    /// As the planets go.
    Direct,
    /// The other way: y and z are taken with the other sign.
    Retrograde,
}

impl Sense {
    /// That of a motion.
    pub fn of(pos: Vector3<f64>, vel: Vector3<f64>) -> Self {
        if pos.x * vel.y - pos.y * vel.x < 0.0 { Self::Retrograde } else { Self::Direct }
    }

    fn turn(self, v: Vector3<f64>) -> Vector3<f64> {
        match self {
            Self::Direct => v,
            Self::Retrograde => Vector3::new(v.x, -v.y, -v.z),
        }
    }
}

/// A closed orbit and the place on it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Equinoctial {
    /// Semi-major axis, m.
    pub semi_major_m: f64,
    /// e sin ϖ.
    pub h: f64,
    /// e cos ϖ.
    pub k: f64,
    /// tan(i/2) sin Ω.
    pub p: f64,
    /// tan(i/2) cos Ω.
    pub q: f64,
    /// Mean longitude, rad.
    pub mean_longitude_rad: f64,
}

impl Equinoctial {
    /// Of a motion relative to the centre: m, m/s; `gm_m3_s2` is that of both bodies together. The mean longitude is between -2π and 2π.
    ///
    /// # Errors
    /// [`ConicError::Open`] where the orbit is not closed, [`ConicError::Rectilinear`] where it is a straight line, or lies in the
    /// plane of the ecliptic and goes the other way than `sense` says; [`ConicError::OutOfRange`] where a number is not finite.
    pub fn from_state(
        pos: Vector3<f64>,
        vel: Vector3<f64>,
        gm_m3_s2: f64,
        sense: Sense,
    ) -> Result<Self, ConicError> {
        let (pos, vel) = (sense.turn(pos), sense.turn(vel));
        let (r, v2) = (pos.norm(), vel.norm_squared());
        let semi_major_m = 1.0 / (2.0 / r - v2 / gm_m3_s2);
        if !(semi_major_m.is_finite() && gm_m3_s2 > 0.0) {
            return Err(ConicError::OutOfRange);
        }
        if semi_major_m <= 0.0 {
            return Err(ConicError::Open);
        }
        let momentum = pos.cross(&vel);
        let up = momentum / momentum.norm();
        let (p, q) = (up.x / (1.0 + up.z), -up.y / (1.0 + up.z));
        if !(p.is_finite() && q.is_finite()) {
            return Err(ConicError::Rectilinear);
        }
        let (f, g) = axes(p, q);
        let to_periapsis = vel.cross(&momentum) / gm_m3_s2 - pos / r;
        let (h, k) = (to_periapsis.dot(&g), to_periapsis.dot(&f));
        let (x, y) = (pos.dot(&f) / semi_major_m, pos.dot(&g) / semi_major_m);
        let root = (1.0 - h * h - k * k).sqrt();
        let beta = 1.0 / (1.0 + root);
        let cos_f = k + ((1.0 - k * k * beta) * x - h * k * beta * y) / root;
        let sin_f = h + ((1.0 - h * h * beta) * y - h * k * beta * x) / root;
        let mean_longitude_rad = atan2(sin_f, cos_f) + h * cos_f - k * sin_f;
        // The orbit is closed by its energy; a line is what is left without a width.
        if !mean_longitude_rad.is_finite() {
            return Err(ConicError::Rectilinear);
        }
        Ok(Self { semi_major_m, h, k, p, q, mean_longitude_rad })
    }

    /// Position (m) and velocity (m/s) relative to the centre.
    ///
    /// # Errors
    /// [`ConicError::Open`] where the eccentricity is 1 or more, [`ConicError::OutOfRange`] where a number is not finite.
    pub fn to_state(&self, gm_m3_s2: f64, sense: Sense) -> Result<(Vector3<f64>, Vector3<f64>), ConicError> {
        let Self { semi_major_m, h, k, p, q, mean_longitude_rad } = *self;
        let periapsis_rad = atan2(h, k);
        let eccentric = eccentric_anomaly(mean_longitude_rad - periapsis_rad, self.eccentricity())?;
        let (sin_f, cos_f) = sin_cos(eccentric + periapsis_rad);
        let beta = 1.0 / (1.0 + (1.0 - h * h - k * k).sqrt());
        let (hh, kk, hk) = (1.0 - h * h * beta, 1.0 - k * k * beta, h * k * beta);
        let (f, g) = axes(p, q);
        let pos = f * (hh * cos_f + hk * sin_f - k) + g * (kk * sin_f + hk * cos_f - h);
        let speed = (gm_m3_s2 / semi_major_m).sqrt() / (1.0 - h * sin_f - k * cos_f);
        let vel = f * (hk * cos_f - hh * sin_f) + g * (kk * cos_f - hk * sin_f);
        Ok((sense.turn(pos * semi_major_m), sense.turn(vel * speed)))
    }

    /// Eccentricity.
    pub fn eccentricity(&self) -> f64 {
        hypot(self.h, self.k)
    }

    /// Mean motion, rad/s.
    pub fn mean_motion_rad_s(&self, gm_m3_s2: f64) -> f64 {
        let a = self.semi_major_m;
        (gm_m3_s2 / a).sqrt() / a
    }
}

/// The axes from which longitudes in the plane of the orbit are counted.
fn axes(p: f64, q: f64) -> (Vector3<f64>, Vector3<f64>) {
    let whole = 1.0 + p * p + q * q;
    (
        Vector3::new(1.0 - p * p + q * q, 2.0 * p * q, -2.0 * p) / whole,
        Vector3::new(2.0 * p * q, 1.0 + p * p - q * q, 2.0 * q) / whole,
    )
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::conic::{Elements, propagate, state_from_elements};
    use crate::math::float::{cos, sin};
    use std::f64::consts::TAU;

    const GM: f64 = 1.327e20;

    fn state(e: f64, i: f64, node: f64, argument: f64, anomaly: f64) -> (Vector3<f64>, Vector3<f64>) {
        let elements = Elements {
            periapsis_m: 1.5e11 * (1.0 - e),
            eccentricity: e,
            inclination_rad: i,
            node_rad: node,
            argument_rad: argument,
            true_anomaly_rad: anomaly,
        };
        state_from_elements(&elements, GM).unwrap()
    }

    #[test]
    fn every_closed_orbit_comes_back_both_ways_round() {
        for e in [0.0, 1e-9, 0.2, 0.9] {
            for i in [0.0, 1e-9, 0.4, 1.6, 2.9, std::f64::consts::PI] {
                for turn in 0..8 {
                    let angle = f64::from(turn) * 0.81;
                    let (pos, vel) = state(e, i, angle, 2.0 * angle, 3.0 * angle);
                    let sense = Sense::of(pos, vel);
                    let elements = Equinoctial::from_state(pos, vel, GM, sense).unwrap();
                    let (x, v) = elements.to_state(GM, sense).unwrap();
                    // Roundings, grown where an orbit is drawn out as 1 / (1 - e).
                    let most = 2e-15 / (1.0 - e) / (1.0 - e);
                    let (off, fast) = ((x - pos).norm() / pos.norm(), (v - vel).norm() / vel.norm());
                    assert!(off < most && fast < most, "e {e}, i {i}, {angle}: {off:e} and {fast:e}");
                    assert!((elements.semi_major_m / 1.5e11 - 1.0).abs() < most);
                    assert!((elements.eccentricity() - e).abs() < 1e-15 / (1.0 - e));
                }
            }
        }
    }

    #[test]
    fn only_the_mean_longitude_changes_and_evenly() {
        let (pos, vel) = state(0.6, 0.7, 1.0, 2.0, 3.0);
        let start = Equinoctial::from_state(pos, vel, GM, Sense::Direct).unwrap();
        let dt_s = 1e7;
        let (pos, vel) = propagate(pos, vel, GM, dt_s).unwrap();
        let end = Equinoctial::from_state(pos, vel, GM, Sense::Direct).unwrap();
        let turned = end.mean_longitude_rad - start.mean_longitude_rad - dt_s * start.mean_motion_rad_s(GM);
        assert!((turned / TAU - (turned / TAU).round()).abs() < 1e-14, "{turned}");
        for (a, b) in [(start.h, end.h), (start.k, end.k), (start.p, end.p), (start.q, end.q)] {
            assert!((a - b).abs() < 1e-14, "{a} and {b}");
        }
    }

    /// h, k, p and q are what they are named after.
    #[test]
    fn they_are_those_of_the_usual_elements() {
        let (i, node, argument, e) = (0.7, 1.1, 0.4, 0.3);
        let (pos, vel) = state(e, i, node, argument, 2.0);
        let it = Equinoctial::from_state(pos, vel, GM, Sense::Direct).unwrap();
        let tilt = sin(0.5 * i) / cos(0.5 * i);
        let of = [it.h, it.k, it.p, it.q];
        let stated = [e * sin(node + argument), e * cos(node + argument), tilt * sin(node), tilt * cos(node)];
        for (a, b) in of.into_iter().zip(stated) {
            assert!((a - b).abs() < 1e-15, "{of:?} and {stated:?}");
        }
    }

    #[test]
    fn what_has_no_closed_orbit_is_refused() {
        let x = Vector3::new(1.5e11, 0.0, 0.0);
        let of = |vel| Equinoctial::from_state(x, vel, GM, Sense::Direct);
        assert_eq!(of(Vector3::new(0.0, 5e4, 0.0)), Err(ConicError::Open));
        assert_eq!(of(Vector3::new(-1e3, 0.0, 0.0)), Err(ConicError::Rectilinear));
        assert_eq!(of(Vector3::new(0.0, f64::NAN, 0.0)), Err(ConicError::OutOfRange));
    }
}
