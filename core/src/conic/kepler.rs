//! Kepler's equation for every eccentricity, both ways.
//!
//! Near the parabola the usual forms subtract nearly equal numbers. Written as `(1 - e) E + e (E - sin E) = M`
//! with both parts free of cancellation, no digit is lost down to the last place of `1 - e`.

use super::ConicError;
use super::stumpff::{sinh_minus_x, x_minus_sin};
use crate::math::float::{asinh, atan, atan2, cbrt, cos, sin, sin_cos, sinh, tan, tanh};
use std::f64::consts::{PI, TAU};

/// Newton's steps at most; from the side they start on they can't overshoot, and a dozen are enough.
const STEPS: usize = 60;

/// Eccentric anomaly of a closed orbit: `E - e sin E = M`.
///
/// `mean_rad` is any angle, `eccentricity` is 0 ≤ e < 1. The answer is on the same turn as `mean_rad`.
/// On the turn around periapsis the error is a few units of the last place, relative to the answer.
///
/// # Errors
/// [`ConicError::Open`] when e ≥ 1, [`ConicError::OutOfRange`] when e is negative or a number is not finite.
///
/// # Source
/// J. M. A. Danby, Fundamentals of Celestial Mechanics, 2nd ed. (1988), 6.6. The start here is an upper bound of the root, from
/// which Newton's steps fall monotonically: the left side is convex between 0 and π.
pub fn eccentric_anomaly(mean_rad: f64, eccentricity: f64) -> Result<f64, ConicError> {
    let e = eccentricity;
    if !(mean_rad.is_finite() && e >= 0.0) {
        return Err(ConicError::OutOfRange);
    }
    if e >= 1.0 {
        return Err(ConicError::Open);
    }
    let turns = (mean_rad / TAU).round();
    let rest = if turns == 0.0 { mean_rad } else { mean_rad - turns * TAU };
    let m = rest.abs().min(PI);
    if m == 0.0 {
        return Ok(mean_rad);
    }
    // (E - sin E) ≥ E³ / π² on the whole half turn.
    let start = PI.min(m + e).min(m / (1.0 - e)).min(cbrt(m * PI * PI / e));
    let slope = |x: f64| {
        let half = sin(0.5 * x);
        (1.0 - e) + 2.0 * e * half * half
    };
    let root = fall(start, |x| ((1.0 - e) * x + e * x_minus_sin(x) - m, slope(x)));
    Ok(turns * TAU + root.copysign(rest))
}

/// Mean anomaly of a closed orbit, `M = E - e sin E`, without cancellation near the parabola.
pub fn mean_from_eccentric(eccentric_rad: f64, eccentricity: f64) -> f64 {
    (1.0 - eccentricity) * eccentric_rad + eccentricity * x_minus_sin(eccentric_rad)
}

/// Hyperbolic anomaly: `e sinh H - H = M`.
///
/// `mean_rad` is any number, `eccentricity` is e > 1. The error is a few units of the last place, relative to the answer.
///
/// # Errors
/// [`ConicError::OutOfRange`] when e ≤ 1 or a number is not finite.
///
/// # Source
/// As at [`eccentric_anomaly`]; the left side is convex for H > 0, and both `sinh H - H ≥ H³ / 6` and
/// `sinh H = (M + H) / e` give upper bounds.
pub fn hyperbolic_anomaly(mean_rad: f64, eccentricity: f64) -> Result<f64, ConicError> {
    let e = eccentricity;
    if !(mean_rad.is_finite() && e.is_finite() && e > 1.0) {
        return Err(ConicError::OutOfRange);
    }
    let m = mean_rad.abs();
    if m == 0.0 {
        return Ok(mean_rad);
    }
    let first = (m / (e - 1.0)).min(cbrt(6.0 * m / e));
    let start = first.min(asinh((m + first) / e));
    let slope = |x: f64| {
        let half = sinh(0.5 * x);
        (e - 1.0) + 2.0 * e * half * half
    };
    let root = fall(start, |x| ((e - 1.0) * x + e * sinh_minus_x(x) - m, slope(x)));
    Ok(root.copysign(mean_rad))
}

/// Mean anomaly of a hyperbola, `M = e sinh H - H`, without cancellation near the parabola.
pub fn mean_from_hyperbolic(hyperbolic: f64, eccentricity: f64) -> f64 {
    (eccentricity - 1.0) * hyperbolic + eccentricity * sinh_minus_x(hyperbolic)
}

/// Tangent of half the true anomaly on a parabola: Barker's equation `s + s³ / 3 = W`.
///
/// `w` is the time from periapsis times `√(GM / (2 q³))`. In closed form, without cancellation.
///
/// # Source
/// With `s = 2 sinh θ`, the left side is `(2/3) sinh 3θ`.
pub fn barker(w: f64) -> f64 {
    2.0 * sinh(asinh(1.5 * w) / 3.0)
}

/// True anomaly, -π to π, a stated time after periapsis (before it when negative), for every eccentricity.
///
/// `periapsis_m` > 0 in metres, `gm_m3_s2` > 0.
///
/// # Errors
/// [`ConicError::OutOfRange`] when a number is out of the range stated.
pub fn true_anomaly_after(
    after_s: f64,
    periapsis_m: f64,
    eccentricity: f64,
    gm_m3_s2: f64,
) -> Result<f64, ConicError> {
    let (q, e) = (periapsis_m, eccentricity);
    if !(q > 0.0 && e >= 0.0 && e.is_finite() && gm_m3_s2 > 0.0 && after_s.is_finite()) {
        return Err(ConicError::OutOfRange);
    }
    let n = (gm_m3_s2 / q).sqrt() / q;
    if e < 1.0 {
        let k = 1.0 - e;
        eccentric_anomaly(after_s * n * k * k.sqrt(), e).map(|x| true_from_eccentric(x, e))
    } else if e > 1.0 {
        let k = e - 1.0;
        hyperbolic_anomaly(after_s * n * k * k.sqrt(), e).map(|x| true_from_hyperbolic(x, e))
    } else {
        Ok(2.0 * atan(barker(after_s * n * std::f64::consts::FRAC_1_SQRT_2)))
    }
}

/// Time from periapsis to a true anomaly, seconds; negative before periapsis.
///
/// `true_rad` is any angle; on a closed orbit the passage nearest to it is meant, on the turn -π to π.
///
/// # Errors
/// [`ConicError::BeyondAsymptote`] where a parabola or hyperbola doesn't reach that anomaly;
/// [`ConicError::OutOfRange`] as at [`true_anomaly_after`].
pub fn time_after_periapsis(
    true_rad: f64,
    periapsis_m: f64,
    eccentricity: f64,
    gm_m3_s2: f64,
) -> Result<f64, ConicError> {
    let (q, e) = (periapsis_m, eccentricity);
    if !(q > 0.0 && e >= 0.0 && e.is_finite() && gm_m3_s2 > 0.0 && true_rad.is_finite()) {
        return Err(ConicError::OutOfRange);
    }
    let n = (gm_m3_s2 / q).sqrt() / q;
    let nu = half_turn(true_rad);
    if e < 1.0 {
        let k = 1.0 - e;
        return Ok(mean_from_eccentric(eccentric_from_true(nu, e), e) / (n * k * k.sqrt()));
    }
    if one_plus_e_cos(nu, e) <= 0.0 {
        return Err(ConicError::BeyondAsymptote);
    }
    let s = tan(0.5 * nu);
    if e > 1.0 {
        let k = e - 1.0;
        // tanh(H/2) = √((e-1)/(e+1)) tan(ν/2); sinh H = 2 tanh(H/2) / (1 - tanh²(H/2)).
        let t = (k / (e + 1.0)).sqrt() * s;
        let h = asinh(2.0 * t / ((1.0 - t) * (1.0 + t)));
        Ok(mean_from_hyperbolic(h, e) / (n * k * k.sqrt()))
    } else {
        Ok((s + s * s * s / 3.0) * std::f64::consts::SQRT_2 / n)
    }
}

/// `1 + e cos ν`, which keeps its digits at the far end of a long orbit.
pub(super) fn one_plus_e_cos(true_rad: f64, eccentricity: f64) -> f64 {
    let c = cos(0.5 * true_rad);
    (1.0 - eccentricity) + 2.0 * eccentricity * c * c
}

/// Eccentric from true anomaly, on the turn -π to π.
pub fn eccentric_from_true(true_rad: f64, eccentricity: f64) -> f64 {
    let (s, c) = sin_cos(0.5 * half_turn(true_rad));
    2.0 * atan2((1.0 - eccentricity).sqrt() * s, (1.0 + eccentricity).sqrt() * c)
}

/// True from eccentric anomaly, on the turn -π to π.
pub fn true_from_eccentric(eccentric_rad: f64, eccentricity: f64) -> f64 {
    let (s, c) = sin_cos(0.5 * half_turn(eccentric_rad));
    2.0 * atan2((1.0 + eccentricity).sqrt() * s, (1.0 - eccentricity).sqrt() * c)
}

/// True from hyperbolic anomaly.
pub fn true_from_hyperbolic(hyperbolic: f64, eccentricity: f64) -> f64 {
    let half = 0.5 * hyperbolic;
    // tanh by sin and cos of the half anomaly would overflow; its own function doesn't.
    let t = tanh(half);
    2.0 * atan2((eccentricity + 1.0).sqrt() * t, (eccentricity - 1.0).sqrt())
}

/// The same angle on the turn -π to π.
pub(super) fn half_turn(angle_rad: f64) -> f64 {
    let turns = (angle_rad / TAU).round();
    if turns == 0.0 { angle_rad } else { angle_rad - turns * TAU }
}

/// Newton's steps down from an upper bound of the root of a convex, rising function; `f` gives value and slope.
/// Ends when a step no longer goes down: the value is then rounding alone.
fn fall(start: f64, f: impl Fn(f64) -> (f64, f64)) -> f64 {
    let mut x = start;
    for _ in 0..STEPS {
        let (value, slope) = f(x);
        let next = x - value / slope;
        let falls = next > 0.0 && next < x;
        if !falls {
            // The last step may go up by a rounding error; it still brings the root nearer.
            return if next.is_finite() && next > 0.0 && (next - x).abs() < 1e-12 * x { next } else { x };
        }
        x = next;
    }
    x
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    /// Relative error of the solvers: some operations of a unit of the last place each.
    const TOL: f64 = 20.0 * f64::EPSILON;

    #[test]
    fn closed_orbits_at_the_ends_of_the_range() {
        assert_eq!(eccentric_anomaly(0.0, 0.5), Ok(0.0));
        assert_eq!(eccentric_anomaly(1.25, 0.0), Ok(1.25));
        assert!((eccentric_anomaly(PI, 0.9).unwrap() - PI).abs() < 1e-15);
        assert_eq!(eccentric_anomaly(1.0, 1.0), Err(ConicError::Open));
        assert_eq!(eccentric_anomaly(1.0, -0.1), Err(ConicError::OutOfRange));
        assert_eq!(eccentric_anomaly(f64::NAN, 0.1), Err(ConicError::OutOfRange));
        assert_eq!(hyperbolic_anomaly(1.0, 1.0), Err(ConicError::OutOfRange));
    }

    #[test]
    fn near_the_parabola_the_anomaly_joins_barkers() {
        // Half a year after periapsis at 0.5 au from one Sun; by the parabola and by its neighbours on both sides.
        let (q, gm, t) = (7.5e10, 1.327e20, 1.6e7);
        let parabola = true_anomaly_after(t, q, 1.0, gm).unwrap();
        for k in [1e-6, 1e-9, 1e-12, 1e-15, f64::EPSILON] {
            for e in [1.0 - k, 1.0 + k] {
                let nu = true_anomaly_after(t, q, e, gm).unwrap();
                // The anomaly depends smoothly on e, with a slope of order 1.
                assert!((nu - parabola).abs() < 2.0 * (e - 1.0).abs() + TOL, "e - 1 = {}", e - 1.0);
            }
        }
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(2000))]

        #[test]
        fn eccentric_anomaly_solves_the_equation(exponent in -18.0..0.0_f64, near in -16.0..0.0_f64, negative: bool) {
            let e = 1.0 - crate::math::float::pow(10.0, near);
            let want = PI * crate::math::float::pow(10.0, exponent) * if negative { -1.0 } else { 1.0 };
            let got = eccentric_anomaly(mean_from_eccentric(want, e), e).unwrap();
            // Near π with e near 1 the mean anomaly's own rounding is all there is.
            prop_assert!((got - want).abs() <= TOL * want.abs(), "e {e}: got {got}, want {want}");
        }

        #[test]
        fn hyperbolic_anomaly_solves_the_equation(exponent in -18.0..2.5_f64, near in -15.0..4.0_f64, negative: bool) {
            let e = 1.0 + crate::math::float::pow(10.0, near);
            let want = crate::math::float::pow(10.0, exponent) * if negative { -1.0 } else { 1.0 };
            let got = hyperbolic_anomaly(mean_from_hyperbolic(want, e), e).unwrap();
            prop_assert!((got - want).abs() <= TOL * want.abs(), "e {e}: got {got}, want {want}");
        }

        #[test]
        fn mean_anomalies_of_any_size_stay_on_their_turn(mean in -1e4..1e4_f64, e in 0.0..1.0_f64) {
            let got = eccentric_anomaly(mean, e).unwrap();
            // Rounding of an angle of a thousand turns.
            prop_assert!((got - e * sin(got) - mean).abs() < 1e-11, "got {got}");
        }

        #[test]
        fn time_and_true_anomaly_go_both_ways(nu in -3.1..3.1_f64, exponent in -16.0..1.5_f64, above: bool) {
            let k = crate::math::float::pow(10.0, exponent);
            let e = if above { 1.0 + k } else { (1.0 - k).max(0.0) };
            if one_plus_e_cos(nu, e) <= 1e-3 { return Ok(()); }
            let (q, gm) = (7e6, 3.986e14);
            let t = time_after_periapsis(nu, q, e, gm).unwrap();
            let got = true_anomaly_after(t, q, e, gm).unwrap();
            // Towards the asymptote time grows without bound while the anomaly stands still.
            prop_assert!((got - nu).abs() < 1e-13 / one_plus_e_cos(nu, e), "e {e}: got {got}, want {nu}");
        }
    }
}
