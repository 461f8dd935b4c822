//! Worked examples of handbooks (all from memory):
//!
//! - D. A. Vallado, Fundamentals of Astrodynamics and Applications, 4th ed. (2013), chapter 2; GM 398,600.4418 km³/s²;
//! - H. D. Curtis, Orbital Mechanics for Engineering Students, 3rd ed. (2014), chapters 3 and 4; GM 398,600 km³/s²;
//! - J. Meeus, Astronomical Algorithms, 2nd ed. (1998), chapters 30, 34 and 35; Gauss's constant 0.01720209895.
//!
//! Tolerances are half a unit of the last digit printed, and where a book carries rounded numbers on from step to step, one or a few units.

use fallaround_core::Vector3;
use fallaround_core::conic::{
    elements_from_state, kepler, propagate, semi_major_from_state, state_from_elements,
};
use fallaround_core::math::float::{cos, sin, sinh, tan};
use fallaround_tests::assert_close;

const DEGREE: f64 = std::f64::consts::PI / 180.0;

const VALLADO_GM: f64 = 398_600.441_8e9;
const CURTIS_GM: f64 = 398_600.0e9;

/// GM of the Sun in au³/d².
const GAUSS: f64 = 0.017_202_098_95;

fn km(x: f64, y: f64, z: f64) -> Vector3<f64> {
    Vector3::new(x, y, z) * 1e3
}

#[test]
fn keplers_equation_vallado_2_1_to_2_3() {
    // Example 2-1: M = 235.4°, e = 0.4.
    let e = 0.4;
    let x = kepler::eccentric_anomaly(235.4 * DEGREE, e).expect("closed");
    assert_close("E of example 2-1", x / DEGREE, 220.512_074, 1e-6, "deg");
    assert_close("M of example 2-1", (x - e * sin(x)) / DEGREE, 235.4, 1e-12, "deg");
    // Example 2-2: a parabola with p = 25,512 km, 53.7874 minutes after periapsis: tan(ν/2) = 0.8177.
    let q = 0.5 * 25_512e3;
    let nu = kepler::true_anomaly_after(53.7874 * 60.0, q, 1.0, VALLADO_GM).expect("in range");
    let b = tan(0.5 * nu);
    assert_close("B of example 2-2", b, 0.8177, 5.1e-5, "");
    let n_p = 2.0 * (VALLADO_GM / (8.0 * q * q * q)).sqrt();
    assert_close("Barker's equation of example 2-2", (b + b * b * b / 3.0) / n_p, 53.7874 * 60.0, 1e-9, "s");
    // Example 2-3: M = 235.4°, e = 2.4.
    let e = 2.4;
    let h = kepler::hyperbolic_anomaly(235.4 * DEGREE, e).expect("open");
    assert_close("H of example 2-3", h, 1.601_376_14, 1e-8, "rad");
    assert_close("M of example 2-3", (e * sinh(h) - h) / DEGREE, 235.4, 1e-12, "deg");
}

#[test]
fn keplers_equation_meeus_30() {
    for (e, mean, want, last) in [(0.1, 5.0, 5.554_589, 5e-7), (0.99, 2.0, 32.361_007, 5e-7)] {
        let x = kepler::eccentric_anomaly(mean * DEGREE, e).expect("closed");
        assert_close(&format!("E of e {e}, M {mean}"), x / DEGREE, want, last, "deg");
        assert_close(&format!("M of e {e}"), (x - e * sin(x)) / DEGREE, mean, 1e-13, "deg");
    }
}

#[test]
fn parabola_and_its_neighbours_meeus_34_and_35() {
    // Perihelion in au, eccentricity, days from perihelion; true anomaly in degrees and distance in au.
    for (q, e, days, nu, r) in [
        (1.487_469, 1.0, 112.564_2, 66.788_62, 2.133_911),
        (0.921_326, 1.0, 138.478_3, 102.744_26, 2.364_192),
        (0.1, 0.987, 254.9, 164.500_29, 4.063_777),
        (0.123_456, 0.999_97, -30.47, 221.911_90 - 360.0, 0.965_053),
        (3.363_943, 1.057_31, 1237.1, 109.405_98, 10.668_551),
        (0.587_101_8, 0.967_274_6, 20.0, 52.853_31, 0.729_116),
        (0.587_101_8, 0.967_274_6, 0.0, 0.0, 0.587_101_8),
    ] {
        let got = kepler::true_anomaly_after(days, q, e, GAUSS * GAUSS).expect("in range");
        let what = format!("q {q}, e {e}, {days} d");
        assert_close(&format!("true anomaly of {what}"), got / DEGREE, nu, 6e-6, "deg");
        assert_close(&format!("distance of {what}"), q * (1.0 + e) / (1.0 + e * cos(got)), r, 6e-7, "au");
        let back = kepler::time_after_periapsis(got, q, e, GAUSS * GAUSS).expect("reached");
        assert_close(&format!("time of {what}"), back, days, 1e-11 * days.abs(), "d");
    }
}

#[test]
fn elements_from_a_state_vallado_2_5() {
    let (pos, vel) = (km(6524.834, 6862.875, 6448.296), km(4.901_327, 5.533_756, -1.976_341));
    let got = elements_from_state(pos, vel, VALLADO_GM).expect("a conic");
    assert_close("p", got.parameter_m() / 1e3, 11_067.790, 0.01, "km");
    assert_close("a", semi_major_from_state(pos, vel, VALLADO_GM) / 1e3, 36_127.343, 0.05, "km");
    assert_close("e", got.eccentricity, 0.832_853, 1e-6, "");
    assert_close("i", got.inclination_rad / DEGREE, 87.870, 1e-3, "deg");
    assert_close("node", got.node_rad / DEGREE, 227.898, 1e-3, "deg");
    assert_close("argument", got.argument_rad / DEGREE, 53.38, 6e-3, "deg");
    assert_close("true anomaly", got.true_anomaly_rad / DEGREE, 92.335, 1e-3, "deg");
    let (p, v) = state_from_elements(&got, VALLADO_GM).expect("on the conic");
    assert_close("position and back", (p - pos).norm(), 0.0, 1e-7, "m");
    assert_close("velocity and back", (v - vel).norm(), 0.0, 1e-10, "m/s");
}

#[test]
fn elements_from_a_state_curtis_4_3() {
    let (pos, vel) = (km(-6045.0, -3490.0, 2500.0), km(-3.457, 6.618, 2.533));
    let got = elements_from_state(pos, vel, CURTIS_GM).expect("a conic");
    assert_close("h", pos.cross(&vel).norm() / 1e6, 58_310.0, 5.0, "km²/s");
    assert_close("i", got.inclination_rad / DEGREE, 153.2, 0.06, "deg");
    assert_close("node", got.node_rad / DEGREE, 255.3, 0.06, "deg");
    assert_close("e", got.eccentricity, 0.1712, 5.1e-5, "");
    assert_close("argument", got.argument_rad / DEGREE, 20.07, 6e-3, "deg");
    assert_close("true anomaly", got.true_anomaly_rad / DEGREE, 28.45, 6e-3, "deg");
    assert_close("a", got.semi_major_m() / 1e3, 8788.0, 1.0, "km");
    assert_close("period", got.period_s(CURTIS_GM).expect("closed") / 3600.0, 2.278, 1e-3, "h");
}

#[test]
fn propagation_by_universal_variables_vallado_2_4_and_curtis_3_7() {
    let (pos, vel) = (km(1131.340, -2282.343, 6672.423), km(-5.643_05, 4.303_33, 2.428_79));
    let (p, v) = propagate(pos, vel, VALLADO_GM, 40.0 * 60.0).expect("in range");
    assert_close("position of 2-4", (p - km(-4219.7527, 4363.0292, -3958.7666)).norm(), 0.0, 1.0, "m");
    assert_close("velocity of 2-4", (v - km(3.689_866, -1.916_735, -6.112_511)).norm(), 0.0, 1e-3, "m/s");
    let (pos, vel) = (km(7000.0, -12_124.0, 0.0), km(2.6679, 4.6210, 0.0));
    let (p, v) = propagate(pos, vel, CURTIS_GM, 60.0 * 60.0).expect("in range");
    assert_close("position of 3.7", (p - km(-3297.77, 7413.40, 0.0)).norm(), 0.0, 200.0, "m");
    assert_close("velocity of 3.7", (v - km(-8.2976, -0.964_045, 0.0)).norm(), 0.0, 0.2, "m/s");
    // The energy is the same at both ends.
    let axis = |p, v| semi_major_from_state(p, v, CURTIS_GM);
    assert_close("semi-major axis of 3.7", axis(p, v) / axis(pos, vel), 1.0, 1e-13, "");
}
