//! Where the bodies of each piece of work start.

use fallaround_core::Vector3;
use fallaround_core::constants::{AU_M, GM_SUN_M3_S2};
use fallaround_core::initial::{InitialBody, InitialState};
use fallaround_core::scenario::Surface;

use crate::solar_system::{PLANETS, solar_system};

/// The Sun and the eight planets at J2000.
#[must_use]
pub fn planets() -> InitialState {
    solar_system(&PLANETS)
}

/// The Sun, the eight planets and the Moon at J2000.
#[must_use]
pub fn planets_and_moon() -> InitialState {
    let mut names = PLANETS.to_vec();
    names.push("Moon");
    solar_system(&names)
}

/// The Pythagorean problem: masses 3, 4 and 5 let go at the corners of a right triangle, each opposite to the side of its
/// number. Units in which G = 1.
///
/// # Source
/// C. Burrau, Astron. Nachr. 195 (1913), 113; V. Szebehely & C. F. Peters, AJ 72 (1967), 876.
#[must_use]
pub fn pythagorean() -> InitialState {
    let corners =
        [("three", 3.0, [1.0, 3.0, 0.0]), ("four", 4.0, [-2.0, -1.0, 0.0]), ("five", 5.0, [1.0, -1.0, 0.0])];
    bodies(corners.map(|(name, mass, pos)| (name, mass, pos, [0.0; 3])))
}

/// Eccentricity of the comet.
pub const COMET_ECCENTRICITY: f64 = 0.9995;

/// Semi-major axis of the comet, m.
const COMET_SEMI_MAJOR_M: f64 = 20.0 * AU_M;

/// GM of the comet, m³/s²: too small to be felt, but energy needs one.
const COMET_GM_M3_S2: f64 = 1e4;

/// Period of the comet, s.
#[must_use]
pub fn comet_period_s() -> f64 {
    std::f64::consts::TAU / comet_mean_motion()
}

fn comet_mean_motion() -> f64 {
    let a = COMET_SEMI_MAJOR_M;
    ((GM_SUN_M3_S2 + COMET_GM_M3_S2) / (a * a * a)).sqrt()
}

/// A comet around the Sun, inwards from the end of its orbit's minor axis: there its distance is the semi-major axis and its
/// speed that of a circle, so that an error of its place, as a part of its distance, is the error of its mean anomaly.
#[must_use]
pub fn comet() -> InitialState {
    let (a, e) = (COMET_SEMI_MAJOR_M, COMET_ECCENTRICITY);
    let pos = [-a * e, a * (1.0 - e * e).sqrt(), 0.0];
    let vel = [-a * comet_mean_motion(), 0.0, 0.0];
    bodies([("Sun", GM_SUN_M3_S2, [0.0; 3], [0.0; 3]), ("comet", COMET_GM_M3_S2, pos, vel)])
}

/// Points about their common centre of mass.
fn bodies<const N: usize>(rows: [(&str, f64, [f64; 3], [f64; 3]); N]) -> InitialState {
    let total: f64 = rows.iter().map(|row| row.1).sum();
    let mean =
        |of: &dyn Fn(usize) -> Vector3<f64>| (0..N).map(|i| of(i) * rows[i].1).sum::<Vector3<f64>>() / total;
    let pos = mean(&|i| Vector3::from(rows[i].2));
    let vel = mean(&|i| Vector3::from(rows[i].3));
    let bodies = rows
        .iter()
        .map(|&(name, gm_m3_s2, at, moving)| InitialBody {
            name: name.to_owned(),
            gm_m3_s2,
            radius_m: 0.0,
            surface: Surface::Stop,
            primary: None,
            pos: Vector3::from(at) - pos,
            vel: Vector3::from(moving) - vel,
        })
        .collect();
    InitialState::of(bodies)
}
