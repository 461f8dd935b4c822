//! Rotations of axes, and the two sets of axes in use: equatorial (ICRF) and ecliptic, both of J2000.

use super::float::sin_cos;
use nalgebra::{Matrix3, Vector3};

/// Obliquity of the ecliptic at J2000, radians: 84381.406 arcseconds.
///
/// # Source
/// IAU 2006 Resolution B1 (P03 precession; Capitaine, Wallace & Chapront 2003, A&A 412, 567).
pub const OBLIQUITY_J2000_RAD: f64 = 84_381.406 / 3600.0 * (std::f64::consts::PI / 180.0);

/// Turns the axes by an angle about x: the components of a fixed vector along the turned axes.
pub fn rotation_x(angle_rad: f64) -> Matrix3<f64> {
    let (s, c) = sin_cos(angle_rad);
    Matrix3::new(1.0, 0.0, 0.0, 0.0, c, s, 0.0, -s, c)
}

/// Turns the axes by an angle about y: the components of a fixed vector along the turned axes.
pub fn rotation_y(angle_rad: f64) -> Matrix3<f64> {
    let (s, c) = sin_cos(angle_rad);
    Matrix3::new(c, 0.0, -s, 0.0, 1.0, 0.0, s, 0.0, c)
}

/// Turns the axes by an angle about z: the components of a fixed vector along the turned axes.
pub fn rotation_z(angle_rad: f64) -> Matrix3<f64> {
    let (s, c) = sin_cos(angle_rad);
    Matrix3::new(c, s, 0.0, -s, c, 0.0, 0.0, 0.0, 1.0)
}

/// Components along the ecliptic axes of J2000 of a vector given along the equatorial ones.
pub fn ecliptic_from_equatorial(v: Vector3<f64>) -> Vector3<f64> {
    rotation_x(OBLIQUITY_J2000_RAD) * v
}

/// Components along the equatorial axes of J2000 (ICRF) of a vector given along the ecliptic ones.
pub fn equatorial_from_ecliptic(v: Vector3<f64>) -> Vector3<f64> {
    rotation_x(-OBLIQUITY_J2000_RAD) * v
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::math::float::{cos, sin};
    use std::f64::consts::FRAC_PI_2;

    /// A few roundings of numbers of order 1.
    const ROUNDING: f64 = 4.0 * f64::EPSILON;

    #[test]
    fn the_pole_of_the_equator_leans_to_ecliptic_longitude_90() {
        let pole = ecliptic_from_equatorial(Vector3::z());
        let want = Vector3::new(0.0, sin(OBLIQUITY_J2000_RAD), cos(OBLIQUITY_J2000_RAD));
        assert!((pole - want).norm() < ROUNDING, "got {pole}, want {want}");
    }

    #[test]
    fn the_equinox_is_on_both_axes_and_the_way_back_is_exact_to_rounding() {
        assert_eq!(ecliptic_from_equatorial(Vector3::x()), Vector3::x());
        let v = Vector3::new(0.3, -0.5, 0.8);
        assert!((equatorial_from_ecliptic(ecliptic_from_equatorial(v)) - v).norm() < ROUNDING);
    }

    #[test]
    fn a_quarter_turn_of_the_axes_brings_y_where_x_was() {
        assert!((rotation_z(FRAC_PI_2) * Vector3::y() - Vector3::x()).norm() < ROUNDING);
        assert!((rotation_x(FRAC_PI_2) * Vector3::z() - Vector3::y()).norm() < ROUNDING);
        assert!((rotation_y(FRAC_PI_2) * Vector3::x() - Vector3::z()).norm() < ROUNDING);
    }
}
