//! Elements of a conic from position and velocity, and back.

use super::{ConicError, Elements, kepler};
use crate::Vector3;
use crate::math::float::{atan2, hypot, sin_cos};
use std::f64::consts::TAU;

/// Below this eccentricity an orbit counts as a circle: it is the rounding of the states themselves.
pub const CIRCULAR: f64 = 1e-14;

/// Below this sine of the inclination an orbit counts as lying in the ecliptic plane: rounding as well.
pub const EQUATORIAL: f64 = 1e-15;

/// Below this ratio of semi-latus rectum to distance a path counts as a straight line through the centre. An ellipse
/// that narrow is a millionth of its length wide, and its two elements of shape no longer tell its length.
pub const RECTILINEAR: f64 = 1e-12;

/// Elements of the conic on which a body is, from its position (m) and velocity (m/s) relative to the centre.
///
/// `gm_m3_s2` is that of both bodies together.
///
/// Singular cases:
/// - a circle (e < [`CIRCULAR`]) has eccentricity 0 and argument of periapsis 0: the body is counted from the node;
/// - an orbit in the ecliptic plane (sine of the inclination < [`EQUATORIAL`]) has its node at +x, and inclination 0, or π if
///   it is retrograde;
/// - both: the true anomaly is the longitude from +x, in the sense of motion;
/// - a straight line through the centre ([`RECTILINEAR`]) has no elements.
///
/// # Errors
/// [`ConicError::Rectilinear`], [`ConicError::AtCentre`], or [`ConicError::OutOfRange`] where nothing attracts or a
/// number is not finite.
///
/// # Source
/// D. A. Vallado, Fundamentals of Astrodynamics and Applications, 4th ed. (2013), 2.5, with the eccentricity from
/// `e cos ν = p/r - 1` and `e sin ν = h (r·v) / (r GM)`, which keeps small ones exact.
pub fn elements_from_state(
    pos: Vector3<f64>,
    vel: Vector3<f64>,
    gm_m3_s2: f64,
) -> Result<Elements, ConicError> {
    let r = pos.norm();
    if !(r.is_finite() && vel.norm().is_finite() && gm_m3_s2 > 0.0 && gm_m3_s2.is_finite()) {
        return Err(ConicError::OutOfRange);
    }
    if r == 0.0 {
        return Err(ConicError::AtCentre);
    }
    let momentum = pos.cross(&vel);
    let h = momentum.norm();
    let p = h * (h / gm_m3_s2);
    if p < RECTILINEAR * r {
        return Err(ConicError::Rectilinear);
    }
    let up = momentum / h;
    let tilt = hypot(up.x, up.y);
    let (inclination_rad, node_rad) = if tilt < EQUATORIAL {
        (if up.z > 0.0 { 0.0 } else { std::f64::consts::PI }, 0.0)
    } else {
        (atan2(tilt, up.z), turn(atan2(up.x, -up.y)))
    };
    let (s, c) = sin_cos(node_rad);
    let node = Vector3::new(c, s, 0.0);
    // Argument of latitude: from the node to the body, in the sense of motion.
    let latitude = atan2(pos.dot(&up.cross(&node)), pos.dot(&node));
    let e_cos = p / r - 1.0;
    let e_sin = h / r * (pos.dot(&vel) / gm_m3_s2);
    let eccentricity = hypot(e_cos, e_sin);
    Ok(if eccentricity < CIRCULAR {
        Elements {
            periapsis_m: p,
            eccentricity: 0.0,
            inclination_rad,
            node_rad,
            argument_rad: 0.0,
            true_anomaly_rad: latitude,
        }
    } else {
        let true_anomaly_rad = atan2(e_sin, e_cos);
        Elements {
            periapsis_m: p / (1.0 + eccentricity),
            eccentricity,
            inclination_rad,
            node_rad,
            argument_rad: turn(latitude - true_anomaly_rad),
            true_anomaly_rad,
        }
    })
}

/// Position (m) and velocity (m/s) relative to the centre, from elements.
///
/// `gm_m3_s2` is that of both bodies together.
///
/// # Errors
/// [`ConicError::BeyondAsymptote`] where the conic doesn't reach the true anomaly, [`ConicError::OutOfRange`] where periapsis or GM
/// is not above 0, the eccentricity negative, or a number not finite.
///
/// # Source
/// D. A. Vallado, Fundamentals of Astrodynamics and Applications, 4th ed. (2013), 2.6.
pub fn state_from_elements(
    elements: &Elements,
    gm_m3_s2: f64,
) -> Result<(Vector3<f64>, Vector3<f64>), ConicError> {
    let Elements { periapsis_m, eccentricity: e, .. } = *elements;
    let angles =
        elements.inclination_rad + elements.node_rad + elements.argument_rad + elements.true_anomaly_rad;
    if !(periapsis_m > 0.0
        && periapsis_m.is_finite()
        && e >= 0.0
        && e.is_finite()
        && gm_m3_s2 > 0.0
        && gm_m3_s2.is_finite()
        && angles.is_finite())
    {
        return Err(ConicError::OutOfRange);
    }
    let nu = elements.true_anomaly_rad;
    let d = kepler::one_plus_e_cos(nu, e);
    if d <= 0.0 {
        return Err(ConicError::BeyondAsymptote);
    }
    let p = elements.parameter_m();
    let r = p / d;
    let v = (gm_m3_s2 / p).sqrt();
    let (sn, cn) = sin_cos(elements.node_rad);
    let (si, ci) = sin_cos(elements.inclination_rad);
    let (sw, cw) = sin_cos(elements.argument_rad);
    // The unit vectors towards periapsis and a quarter turn on.
    let along = Vector3::new(cn * cw - sn * sw * ci, sn * cw + cn * sw * ci, sw * si);
    let across = Vector3::new(-cn * sw - sn * cw * ci, -sn * sw + cn * cw * ci, cw * si);
    let (s, c) = sin_cos(nu);
    Ok((along * (r * c) + across * (r * s), along * (-v * s) + across * (v * (e + c))))
}

/// Semi-major axis, m, from the energy: infinite for a parabola, negative for a hyperbola. Straight lines have one too.
pub fn semi_major_from_state(pos: Vector3<f64>, vel: Vector3<f64>, gm_m3_s2: f64) -> f64 {
    1.0 / (2.0 / pos.norm() - vel.norm_squared() / gm_m3_s2)
}

/// The same angle on the turn 0 to 2π.
fn turn(angle_rad: f64) -> f64 {
    let t = angle_rad - TAU * (angle_rad / TAU).floor();
    if t >= TAU { 0.0 } else { t }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::math::float::pow;
    use proptest::prelude::*;
    use std::f64::consts::PI;

    const GM: f64 = 1.327_124_4e20;

    fn elements(e: f64, inclination_rad: f64, node_rad: f64, argument_rad: f64, nu: f64) -> Elements {
        Elements {
            periapsis_m: 5e10,
            eccentricity: e,
            inclination_rad,
            node_rad,
            argument_rad,
            true_anomaly_rad: nu,
        }
    }

    fn same(got: &Elements, want: &Elements, tol: f64) {
        let apart = |a: f64, b: f64| ((a - b) - TAU * ((a - b) / TAU).round()).abs();
        assert!((got.periapsis_m / want.periapsis_m - 1.0).abs() < tol, "got {got:?}, want {want:?}");
        assert!((got.eccentricity - want.eccentricity).abs() < tol, "got {got:?}, want {want:?}");
        for (a, b) in [
            (got.inclination_rad, want.inclination_rad),
            (got.node_rad, want.node_rad),
            (got.argument_rad, want.argument_rad),
            (got.true_anomaly_rad, want.true_anomaly_rad),
        ] {
            assert!(apart(a, b) < tol, "got {got:?}, want {want:?}");
        }
    }

    #[test]
    fn singular_cases_are_what_they_are_said_to_be() {
        let back = |want: Elements| {
            let (pos, vel) = state_from_elements(&want, GM).unwrap();
            elements_from_state(pos, vel, GM).unwrap()
        };
        // circle: counted from the node
        same(&back(elements(0.0, 0.3, 1.0, 0.0, 2.0)), &elements(0.0, 0.3, 1.0, 0.0, 2.0), 1e-13);
        same(&back(elements(0.0, 0.3, 1.0, 0.7, 2.0)), &elements(0.0, 0.3, 1.0, 0.0, 2.7), 1e-13);
        // in the ecliptic plane: node at +x
        same(&back(elements(0.4, 0.0, 1.0, 0.5, 2.0)), &elements(0.4, 0.0, 0.0, 1.5, 2.0), 1e-13);
        // retrograde in it: the node counts against the motion
        same(&back(elements(0.4, PI, 1.0, 0.5, 2.0)), &elements(0.4, PI, 0.0, TAU - 0.5, 2.0), 1e-13);
        // both
        same(&back(elements(0.0, 0.0, 1.0, 0.5, 1.0)), &elements(0.0, 0.0, 0.0, 0.0, 2.5), 1e-13);
        // the parabola
        same(&back(elements(1.0, 2.0, 1.0, 0.5, -2.0)), &elements(1.0, 2.0, 1.0, 0.5, -2.0), 1e-13);
    }

    #[test]
    fn what_has_no_elements_says_why() {
        let x = Vector3::new(1e11, 0.0, 0.0);
        let zero = Vector3::zeros();
        assert_eq!(elements_from_state(x, zero, GM), Err(ConicError::Rectilinear));
        assert_eq!(elements_from_state(x, x * 1e-7, GM), Err(ConicError::Rectilinear));
        assert_eq!(elements_from_state(zero, x, GM), Err(ConicError::AtCentre));
        assert_eq!(elements_from_state(x, x, 0.0), Err(ConicError::OutOfRange));
        assert_eq!(elements_from_state(x * f64::NAN, x, GM), Err(ConicError::OutOfRange));
        assert_eq!(
            state_from_elements(&elements(2.0, 0.0, 0.0, 0.0, 2.2), GM),
            Err(ConicError::BeyondAsymptote)
        );
        assert_eq!(state_from_elements(&elements(-0.1, 0.0, 0.0, 0.0, 0.0), GM), Err(ConicError::OutOfRange));
        assert!((semi_major_from_state(x, zero, GM) - 5e10).abs() < 1e-4);
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(2000))]

        #[test]
        fn elements_come_back_from_their_state(
            shape in -8.0..2.0_f64,
            i in 0.01..3.13_f64,
            node in 0.0..6.2_f64,
            argument in 0.0..6.2_f64,
            nu in -3.1..3.1_f64,
        ) {
            let want = elements(pow(10.0, shape), i, node, argument, nu);
            if !(want.distance_at_m(nu).is_some_and(|r| r < 1e14)) { return Ok(()); }
            let (pos, vel) = state_from_elements(&want, GM).unwrap();
            let got = elements_from_state(pos, vel, GM).unwrap();
            // The angle of periapsis is known to the rounding over e, the node's over the sine of the inclination;
            // far out on an arm by the ratio of distances.
            let far = (want.distance_m() / want.periapsis_m).max(1.0);
            same(&got, &want, 1e-13 * far * (1.0 + 1.0 / want.eccentricity) / crate::math::float::sin(i) * (1.0 + want.eccentricity));
        }

        #[test]
        fn states_come_back_from_their_elements(
            x in -1e12..1e12_f64, y in -1e12..1e12_f64, z in -1e12..1e12_f64,
            vx in -1e5..1e5_f64, vy in -1e5..1e5_f64, vz in -1e5..1e5_f64,
        ) {
            let (pos, vel) = (Vector3::new(x, y, z), Vector3::new(vx, vy, vz));
            let Ok(elements) = elements_from_state(pos, vel, GM) else { return Ok(()); };
            if elements.periapsis_m <= 1e-3 * pos.norm() { return Ok(()); }
            let (p, v) = state_from_elements(&elements, GM).unwrap();
            let tol = 1e-13 * pos.norm() / elements.periapsis_m * (1.0 + elements.eccentricity);
            prop_assert!((p - pos).norm() < tol * pos.norm(), "{elements:?}: {}", (p - pos).norm() / pos.norm());
            prop_assert!((v - vel).norm() < tol * vel.norm(), "{elements:?}: {}", (v - vel).norm() / vel.norm());
        }
    }
}
