//! From what a swarm states to where each of its tracers starts.
//!
//! All is drawn from the swarm's seed, in a fixed order, one tracer after the other.

use super::draws::Draws;
use super::forms::horizon;
use super::shape::Fault;
use crate::Vector3;
use crate::conic::{ConicError, Elements, state_from_elements};
use crate::initial::{InitialBody, InitialSwarm};
use crate::math::float::{acos, asin, sin_cos};
use crate::math::frame::{rotation_x, rotation_z};
use crate::scenario::{Plane, Spot, Swarm, SwarmShape};
use crate::units::Length;
use std::f64::consts::TAU;

/// Sows a swarm. `drag`: whether air slows anything.
///
/// # Errors
/// What is wrong with its numbers beside those of its body.
pub(super) fn sow(swarm: &Swarm, bodies: &[InitialBody], drag: bool) -> Result<InitialSwarm, Fault> {
    let mut about = swarm.shape.body();
    let body = bodies.get(about.0).ok_or_else(out_of_range)?;
    let orbits = |from: Length, plane: Plane, draw: &dyn Fn(&mut Draws) -> Size| {
        clear_of_surface(from, body)?;
        // The swarm turns one way as axes would turn the other way.
        let turned = rotation_z(-plane.node.rad()) * rotation_x(-plane.inclination.rad());
        all(swarm, |draws| {
            let size = draw(draws);
            let (pos, vel) = state_from_elements(&elements(draws, size)?, body.gm_m3_s2)?;
            Ok((turned * pos, turned * vel))
        })
    };
    let starts = match swarm.shape {
        SwarmShape::Ring { from, to, thickness, plane, .. } => {
            orbits(from, plane, &|draws| ring(draws, from.m(), to.m(), thickness.m()))
        }
        SwarmShape::Belt { from, to, eccentricity, spread, plane, .. } => {
            orbits(from, plane, &|draws| Size {
                semi_major_m: draws.between(from.m(), to.m()),
                eccentricity: draws.between(0.0, eccentricity),
                inclination_rad: draws.between(0.0, spread.rad()),
            })
        }
        SwarmShape::Cloud { from, to, eccentricity, .. } => orbits(from, Plane::default(), &|draws| Size {
            semi_major_m: draws.between(from.m(), to.m()),
            eccentricity: draws.between(0.0, eccentricity),
            // Poles of orbits even over the sphere: the cosine of the inclination is even (Archimedes).
            inclination_rad: acos(draws.between(-1.0, 1.0)),
        }),
        SwarmShape::Burst { slowest, fastest, spot, .. } => {
            let corner = spot.map(|spot| Corner::of(&spot, body)).transpose()?;
            // What flies off a thing without gravity goes on around whatever that thing goes around.
            let mut base = (Vector3::zeros(), Vector3::zeros());
            if body.gm_m3_s2 <= 0.0
                && let Some((primary, around)) = body.primary.and_then(|p| Some((p, bodies.get(p.0)?)))
            {
                about = primary;
                base = (body.pos - around.pos, body.vel - around.vel);
            }
            all(swarm, |draws| {
                let speed_m_s = draws.between(slowest.m_s(), fastest.m_s());
                let (pos, vel) = fragment(draws, speed_m_s, corner.as_ref(), body.radius_m);
                Ok((base.0 + pos, base.1 + vel))
            })
        }
    }?;
    if !starts.iter().all(|(pos, vel)| pos.norm().is_finite() && vel.norm().is_finite()) {
        return Err(out_of_range());
    }
    let (pos, vel) = starts.into_iter().unzip();
    let area_m2_kg = swarm.drag.filter(|_| drag).map_or(0.0, |d| d.coefficient * d.area_per_mass.m2_kg());
    Ok(InitialSwarm { name: swarm.name.clone(), about, pos, vel, area_m2_kg })
}

/// Every tracer of a swarm, drawn one after the other.
fn all(swarm: &Swarm, mut draw: impl FnMut(&mut Draws) -> Result<Start, Fault>) -> Result<Vec<Start>, Fault> {
    let mut draws = Draws::new(swarm.seed);
    (0..swarm.count).map(|_| draw(&mut draws)).collect()
}

/// Position, m, and velocity, m/s.
type Start = (Vector3<f64>, Vector3<f64>);

fn out_of_range() -> Fault {
    Fault {
        wrong: "its numbers are out of range".to_owned(),
        remedy: "state sizes and speeds that can be computed with".to_owned(),
    }
}

impl From<ConicError> for Fault {
    fn from(_: ConicError) -> Self {
        out_of_range()
    }
}

/// Orbits whose semi-major axes start inside their body are a mistake; those with eccentricity may reach down to it.
fn clear_of_surface(from: Length, body: &InitialBody) -> Result<(), Fault> {
    if from.m() > body.radius_m {
        return Ok(());
    }
    let radius = Length::from_m(body.radius_m).to_text();
    Err(Fault {
        wrong: format!("it starts at {} from the centre of {}, inside it", from.to_text(), body.name),
        remedy: format!("from must be more than the radius, {radius}"),
    })
}

/// Size, shape and tip of an orbit, to the swarm's own plane.
struct Size {
    semi_major_m: f64,
    eccentricity: f64,
    inclination_rad: f64,
}

/// A circle of a ring: even over the area, so the square of its radius is even, and within the thickness all around.
fn ring(draws: &mut Draws, from_m: f64, to_m: f64, thickness_m: f64) -> Size {
    let semi_major_m = draws.between(from_m * from_m, to_m * to_m).sqrt().clamp(from_m, to_m);
    let highest_m = draws.between(0.0, 0.5 * thickness_m);
    Size { semi_major_m, eccentricity: 0.0, inclination_rad: asin((highest_m / semi_major_m).min(1.0)) }
}

/// An orbit turned at random, and somewhere on it.
fn elements(draws: &mut Draws, size: Size) -> Result<Elements, ConicError> {
    let at_periapsis = Elements {
        periapsis_m: size.semi_major_m * (1.0 - size.eccentricity),
        eccentricity: size.eccentricity,
        inclination_rad: size.inclination_rad,
        node_rad: draws.between(0.0, TAU),
        argument_rad: draws.between(0.0, TAU),
        true_anomaly_rad: 0.0,
    };
    at_periapsis.at_mean_anomaly(draws.between(0.0, TAU))
}

/// A spot of a surface: where it is, m, and its directions up, north and east.
struct Corner {
    pos: Vector3<f64>,
    axes: [Vector3<f64>; 3],
}

impl Corner {
    fn of(spot: &Spot, body: &InitialBody) -> Result<Self, Fault> {
        let axes = horizon(spot.latitude, spot.longitude)?;
        Ok(Self { pos: axes[0] * (body.radius_m + spot.height.m()), axes })
    }
}

/// One fragment, relative to the body that bursts. From a spot they go upwards, evenly over the half of the sky; else each
/// leaves the surface straight away from the centre.
fn fragment(draws: &mut Draws, speed_m_s: f64, spot: Option<&Corner>, radius_m: f64) -> Start {
    let (sin_around, cos_around) = sin_cos(draws.between(0.0, TAU));
    // Directions even over the sphere: their height is even.
    let height = if spot.is_some() { draws.share() } else { draws.between(-1.0, 1.0) };
    let level = (1.0 - height * height).max(0.0).sqrt();
    match spot {
        Some(Corner { pos, axes: [up, north, east] }) => {
            let direction = up * height + (north * cos_around + east * sin_around) * level;
            (*pos, direction * speed_m_s)
        }
        None => {
            let direction = Vector3::new(level * cos_around, level * sin_around, height);
            (direction * radius_m, direction * speed_m_s)
        }
    }
}
