//! Motion on any conic by universal variables: one equation for ellipse, parabola, hyperbola and straight line.

use super::ConicError;
use super::stumpff::stumpff;
use crate::Vector3;
use std::f64::consts::TAU;

/// Newton's steps and halvings at most. A bracket of any two numbers shrinks to their last place in about 1,100 halvings;
/// Newton's method takes over long before.
const STEPS: usize = 2_000;

/// Position (m) and velocity (m/s) relative to the centre, `dt_s` seconds later (earlier when negative).
///
/// `gm_m3_s2` is that of both bodies together; with 0 the motion is straight and even. A body that falls straight
/// into the centre comes out again the way it came (the limit of ever narrower ellipses).
///
/// On closed orbits the whole turns are taken off first, so that the error grows only with the rounding of the period.
///
/// # Errors
/// [`ConicError::AtCentre`] when it starts at the centre, or ends there to the last bit;
/// [`ConicError::OutOfRange`] when a number is not finite or leaves the range of the numbers.
///
/// # Source
/// J. M. A. Danby, Fundamentals of Celestial Mechanics, 2nd ed. (1988), 6.9, in the form of E. Everhart & E. T. Pitkin,
/// Am. J. Phys. 51 (1983), 712: `dt = r ds`, `Gₖ = sᵏ cₖ(β s²)`, `β = 2 GM / r - v²`. The time is a rising function of s: Newton's
/// steps are kept in a bracket, which stops every search.
pub fn propagate(
    pos: Vector3<f64>,
    vel: Vector3<f64>,
    gm_m3_s2: f64,
    dt_s: f64,
) -> Result<(Vector3<f64>, Vector3<f64>), ConicError> {
    let gm = gm_m3_s2;
    let r0 = pos.norm();
    if !(r0.is_finite() && vel.norm().is_finite() && gm >= 0.0 && gm.is_finite() && dt_s.is_finite()) {
        return Err(ConicError::OutOfRange);
    }
    if gm == 0.0 {
        return finite(pos + vel * dt_s, vel);
    }
    if r0 == 0.0 {
        return Err(ConicError::AtCentre);
    }
    let eta = pos.dot(&vel);
    let beta = 2.0 * gm / r0 - vel.norm_squared();
    let period = if beta > 0.0 { TAU * gm / (beta * beta.sqrt()) } else { f64::INFINITY };
    let dt = if dt_s.abs() > 0.5 * period { dt_s - period * (dt_s / period).round() } else { dt_s };
    if dt == 0.0 {
        return Ok((pos, vel));
    }
    let start = Start { r0, eta, beta, gm };
    let s = start.anomaly(dt)?;
    let g = start.g(s);
    let r = start.distance(&g);
    let f = 1.0 - gm * g[2] / r0;
    let g_ = r0 * g[1] + eta * g[2];
    let to = pos * f + vel * g_;
    if r <= 0.0 || to.norm() == 0.0 {
        return Err(ConicError::AtCentre);
    }
    let f_dot = -gm * g[1] / (r * r0);
    let g_dot = 1.0 - gm * g[2] / r;
    let with = pos * f_dot + vel * g_dot;
    finite(to, with)
}

/// The state, unless it left the range of the numbers.
fn finite(pos: Vector3<f64>, vel: Vector3<f64>) -> Result<(Vector3<f64>, Vector3<f64>), ConicError> {
    if pos.norm().is_finite() && vel.norm().is_finite() {
        Ok((pos, vel))
    } else {
        Err(ConicError::OutOfRange)
    }
}

/// What the equation of time needs to know of the start.
struct Start {
    r0: f64,
    eta: f64,
    beta: f64,
    gm: f64,
}

impl Start {
    /// `Gₖ = sᵏ cₖ(β s²)`.
    fn g(&self, s: f64) -> [f64; 4] {
        let [c0, c1, c2, c3] = stumpff(self.beta * s * s);
        [c0, s * c1, s * s * c2, s * s * s * c3]
    }

    /// Distance from the centre; also the slope of the time.
    fn distance(&self, g: &[f64; 4]) -> f64 {
        self.r0 * g[0] + self.eta * g[1] + self.gm * g[2]
    }

    /// Time since the start.
    fn time(&self, g: &[f64; 4]) -> f64 {
        self.r0 * g[1] + self.eta * g[2] + self.gm * g[3]
    }

    /// The universal anomaly that belongs to a time.
    fn anomaly(&self, dt: f64) -> Result<f64, ConicError> {
        let sign = dt.signum();
        // Whether the time at `s` (of the sign of dt) is past; overflow can only mean past.
        let past = |time: f64| !time.is_finite() || time * sign >= dt * sign;
        let mut near = 0.0;
        // Never 0, which doubling wouldn't move.
        let mut far = (dt / self.r0).abs().max(f64::MIN_POSITIVE) * sign;
        while !past(self.time(&self.g(far))) {
            near = far;
            far *= 2.0;
            if !far.is_finite() {
                return Err(ConicError::OutOfRange);
            }
        }
        let mut s = near + 0.5 * (far - near);
        for _ in 0..STEPS {
            let g = self.g(s);
            let time = self.time(&g);
            if past(time) {
                far = s;
            } else {
                near = s;
            }
            let newton = s - (time - dt) / self.distance(&g);
            // NaN and steps out of the bracket are replaced by halving.
            let inside = (newton - near) * sign > 0.0 && (far - newton) * sign > 0.0;
            let next = if inside { newton } else { near + 0.5 * (far - near) };
            // A bracket of two neighbours, and a step below the last place, end it.
            let settled = (next - s).abs() <= f64::EPSILON * s.abs();
            s = next;
            if settled {
                break;
            }
        }
        Ok(s)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::conic::{Elements, elements_from_state, state_from_elements};
    use crate::math::float::pow;
    use proptest::prelude::*;

    const GM: f64 = 1.327_124_4e20;

    /// How much an error of the start may have grown: by the ratios of distances, and with the turns covered,
    /// whose length follows from a small difference where the orbit is long.
    fn growth(a: &Elements, dt: f64, r1: f64, r2: f64) -> f64 {
        let turns = a.period_s(GM).map_or(0.0, |p| (dt / p).abs()) / (1.0 - a.eccentricity).abs().max(1e-16);
        let spread = (r1 / a.periapsis_m).max(1.0) * (r2 / a.periapsis_m).max(1.0);
        spread * (1.0 + turns) * (1.0 + a.eccentricity)
    }

    #[test]
    fn a_stone_falls_straight_and_comes_back() {
        // From rest at 1 au the fall to the centre takes T / (4 √2) of the circular orbit's year (Kepler's third law).
        let r: f64 = 1.496e11;
        let pos = Vector3::new(r, 0.0, 0.0);
        let year = TAU * (r * r * r / GM).sqrt();
        let fall = year / (4.0 * std::f64::consts::SQRT_2);
        let (near, vel) = propagate(pos, Vector3::zeros(), GM, fall * 0.999_999).unwrap();
        assert!(near.x > 0.0 && near.x < 1e-3 * r && vel.x < 0.0, "{near}");
        let (again, vel) = propagate(pos, Vector3::zeros(), GM, 2.0 * fall).unwrap();
        assert!((again - pos).norm() < 1e-12 * r && vel.norm() < 1e-3, "{again} {vel}");
    }

    #[test]
    fn without_gravity_the_path_is_straight() {
        let (pos, vel) = (Vector3::new(1.0, 2.0, 3.0), Vector3::new(4.0, 5.0, 6.0));
        assert_eq!(propagate(pos, vel, 0.0, 2.0).unwrap(), (Vector3::new(9.0, 12.0, 15.0), vel));
        assert_eq!(propagate(Vector3::zeros(), vel, 1.0, 2.0), Err(ConicError::AtCentre));
        assert_eq!(propagate(pos, vel, -1.0, 2.0), Err(ConicError::OutOfRange));
        assert_eq!(propagate(pos, vel, 1.0, f64::INFINITY), Err(ConicError::OutOfRange));
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(2000))]

        #[test]
        fn it_agrees_with_keplers_equation(
            near in -16.0..1.5_f64, kind in 0..3, i in 0.0..3.1_f64, from in -2.8..2.8_f64, days in -2e3..2e3_f64,
        ) {
            let k = pow(10.0, near);
            let eccentricity = match kind { 0 => (1.0 - k).max(0.0), 1 => 1.0, _ => 1.0 + k };
            let a = Elements {
                periapsis_m: 9e10, eccentricity, inclination_rad: i, node_rad: 1.0, argument_rad: 2.0, true_anomaly_rad: from,
            };
            if !(a.distance_at_m(from).is_some_and(|r| r < 1e13)) { return Ok(()); }
            let dt = days * 86_400.0;
            let (pos, vel) = state_from_elements(&a, GM).unwrap();
            let b = a.at_after_periapsis(a.after_periapsis_s(GM).unwrap() + dt, GM).unwrap();
            let (want, want_vel) = state_from_elements(&b, GM).unwrap();
            let (got, got_vel) = propagate(pos, vel, GM, dt).unwrap();
            let tol = 1e-13 * growth(&a, dt, pos.norm(), want.norm());
            prop_assert!((got - want).norm() < tol * want.norm(), "{a:?}: {} of {tol}", (got - want).norm() / want.norm());
            prop_assert!((got_vel - want_vel).norm() < tol * (want_vel.norm() + vel.norm()), "{a:?}");
        }

        #[test]
        fn there_and_back_and_by_pieces(
            x in -1e12..1e12_f64, y in -1e12..1e12_f64, z in -1e12..1e12_f64,
            vx in -5e4..5e4_f64, vy in -5e4..5e4_f64, vz in -5e4..5e4_f64, exponent in 0.0..9.0_f64, back: bool, share in 0.0..1.0_f64,
        ) {
            let (pos, vel) = (Vector3::new(x, y, z), Vector3::new(vx, vy, vz));
            let Ok(a) = elements_from_state(pos, vel, GM) else { return Ok(()); };
            if a.periapsis_m <= 1e-3 * pos.norm() { return Ok(()); }
            let dt = pow(10.0, exponent) * if back { -1.0 } else { 1.0 };
            let (p1, v1) = propagate(pos, vel, GM, dt).unwrap();
            let (p0, v0) = propagate(p1, v1, GM, -dt).unwrap();
            let tol = 1e-13 * growth(&a, dt, pos.norm(), p1.norm());
            prop_assert!((p0 - pos).norm() < tol * pos.norm(), "back: {} of {tol}", (p0 - pos).norm() / pos.norm());
            prop_assert!((v0 - vel).norm() < tol * (vel.norm() + v1.norm()));
            let (pa, va) = propagate(pos, vel, GM, dt * share).unwrap();
            let (pb, _) = propagate(pa, va, GM, dt - dt * share).unwrap();
            prop_assert!((pb - p1).norm() < tol * p1.norm(), "pieces: {} of {tol}", (pb - p1).norm() / p1.norm());
        }

        #[test]
        fn it_stops_on_whatever_it_is_given(
            x in proptest::num::f64::ANY, y in proptest::num::f64::ANY, vx in proptest::num::f64::ANY,
            vy in proptest::num::f64::ANY, gm in proptest::num::f64::ANY, dt in proptest::num::f64::ANY,
        ) {
            if let Ok((p, v)) = propagate(Vector3::new(x, y, 0.0), Vector3::new(vx, vy, 0.0), gm, dt) {
                prop_assert!(p.norm().is_finite() && v.norm().is_finite());
            }
        }
    }
}
