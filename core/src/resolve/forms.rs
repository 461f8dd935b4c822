//! Where a body is by what its form says, relative to the body that the form names.

use super::shape::{Fault, periapsis_and_eccentricity};
use crate::Vector3;
use crate::conic::{ConicError, Elements, state_from_elements};
use crate::ephemeris::State;
use crate::math::float::sin_cos;
use crate::scenario::{Drop, Orbit, OrbitNow, Placed, Throw};
use crate::units::{Angle, Length};
use std::f64::consts::{FRAC_PI_2, PI};

/// State on an orbit. `gm_m3_s2` is that of both bodies together.
pub(super) fn on_orbit(orbit: &Orbit, gm_m3_s2: f64) -> Result<State, Fault> {
    let (periapsis_m, eccentricity) = periapsis_and_eccentricity(orbit, gm_m3_s2)?;
    let at_periapsis = Elements {
        periapsis_m,
        eccentricity,
        inclination_rad: orbit.inclination.rad(),
        node_rad: orbit.node.rad(),
        argument_rad: orbit.argument.rad(),
        true_anomaly_rad: 0.0,
    };
    let now = match orbit.now {
        OrbitNow::Anomaly(angle) => Ok(Elements { true_anomaly_rad: angle.rad(), ..at_periapsis }),
        OrbitNow::MeanAnomaly(angle) => at_periapsis.at_mean_anomaly(angle.rad()),
        OrbitNow::AfterPeriapsis(span) => at_periapsis.at_after_periapsis(span.s(), gm_m3_s2),
    };
    match now.and_then(|elements| state_from_elements(&elements, gm_m3_s2)) {
        Ok((pos, vel)) => Ok(State { pos, vel }),
        Err(ConicError::Open) => Err(Fault {
            wrong: format!("an orbit of eccentricity {eccentricity} is open and has no mean anomaly"),
            remedy: "state anomaly, before-periapsis or after-periapsis".to_owned(),
        }),
        Err(ConicError::BeyondAsymptote) => {
            let limit = Angle::from_rad(crate::math::float::acos(-1.0 / eccentricity));
            Err(Fault {
                wrong: format!("an orbit of eccentricity {eccentricity} never reaches that anomaly"),
                remedy: format!(
                    "its anomalies lie between -{0:.3} and {0:.3} deg; before-periapsis and after-periapsis always fit",
                    limit.rad() * 180.0 / PI
                ),
            })
        }
        Err(_) => Err(Fault {
            wrong: "the numbers of the orbit are out of range".to_owned(),
            remedy: "state a size above 0 and an eccentricity of at least 0".to_owned(),
        }),
    }
}

/// State of a placed body.
pub(super) fn placed(placed: &Placed) -> State {
    State {
        pos: Vector3::from(placed.position.map(|x| x.m())),
        vel: Vector3::from(placed.velocity.map(|v| v.m_s())),
    }
}

/// State of a thrown body, above a surface of a radius in metres.
pub(super) fn thrown(throw: &Throw, radius_m: f64) -> Result<State, Fault> {
    let [up, north, east] = horizon(throw.latitude, throw.longitude)?;
    let (sin_el, cos_el) = sin_cos(throw.elevation.rad());
    let (sin_hd, cos_hd) = sin_cos(throw.heading.rad());
    let direction = up * sin_el + (north * cos_hd + east * sin_hd) * cos_el;
    Ok(State { pos: up * above(throw.height, radius_m)?, vel: direction * throw.speed.m_s() })
}

/// State of a body let go, above a surface of a radius in metres.
pub(super) fn dropped(drop: &Drop, radius_m: f64) -> Result<State, Fault> {
    let [up, ..] = horizon(drop.latitude, drop.longitude)?;
    Ok(State { pos: up * above(drop.height, radius_m)?, vel: Vector3::zeros() })
}

/// Distance from the centre at a height of the body's own centre above the surface, m.
fn above(height: Length, radius_m: f64) -> Result<f64, Fault> {
    if height.m() >= 0.0 {
        return Ok(radius_m + height.m());
    }
    Err(Fault {
        wrong: format!("a height of {} lies below the surface", height.to_text()),
        remedy: "state a height of 0 or more".to_owned(),
    })
}

/// Directions up, north and east at a place on a sphere: north is the ecliptic pole, longitude 0 is +x.
pub(super) fn horizon(latitude: Angle, longitude: Angle) -> Result<[Vector3<f64>; 3], Fault> {
    // A little slack for 90 degrees written in radians.
    if latitude.rad().abs() > FRAC_PI_2 + 1e-9 {
        return Err(Fault {
            wrong: format!("a latitude of {} lies beyond the pole", latitude.to_text()),
            remedy: "latitudes lie between -90 deg and 90 deg".to_owned(),
        });
    }
    let (sin_lat, cos_lat) = sin_cos(latitude.rad());
    let (sin_lon, cos_lon) = sin_cos(longitude.rad());
    Ok([
        Vector3::new(cos_lat * cos_lon, cos_lat * sin_lon, sin_lat),
        Vector3::new(-sin_lat * cos_lon, -sin_lat * sin_lon, cos_lat),
        Vector3::new(-sin_lon, cos_lon, 0.0),
    ])
}
