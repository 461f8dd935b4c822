//! First guesses: by what velocity a body gets to a place in time, from Lambert's problem around its primary.
//!
//! Where the rest of the bodies pulls little, such a guess all but meets the aim, and lies where scattered points would hardly fall. It is a
//! start for the search among others, and no more: nothing else depends on it.

use super::trial::{Trial, horizon_s};
use crate::Vector3;
use crate::conic::lambert;
use crate::ephemeris::{Ephemeris, Propagation};
use crate::initial::InitialState;
use crate::math::float::{asin, atan2, sin_cos};
use crate::resolve::resolve_among;
use crate::scenario::{BodyId, EventKind, Form, Free, Outcome, Want, Wanted};
use std::f64::consts::TAU;

/// Whole turns on the way, at most.
const MOST_TURNS: u32 = 2;

/// Steps of the integrator at most, to see where the others will be.
const STEPS: usize = 100_000;

/// Points of the unit cube from which to start.
pub(super) fn points(trial: &Trial<'_>) -> Vec<Vec<f64>> {
    let scenario = trial.document.scenario().scenario;
    let Some((scenario, initial)) =
        scenario.and_then(|s| resolve_among(&s, trial.solar).ok().map(|initial| (s, initial)))
    else {
        return Vec::new();
    };
    let shooters = trial.aim.free.iter().filter(|free| is_velocity(free)).map(|free| free.body);
    let Some(shooter) = shooters.min() else { return Vec::new() };
    let Some(form) = scenario.bodies.get(shooter.0).map(|body| &body.form) else { return Vec::new() };
    let until_s = trial.aim.want.iter().map(horizon_s).fold(1.0, f64::max);
    let mut propagation = Propagation::new(&initial);
    // Where the integration ends early, times beyond are simply not covered.
    if propagation.advance(until_s, STEPS).is_err() {
        return Vec::new();
    }
    let sight = Sight { initial: &initial, ephemeris: propagation.ephemeris(), shooter };
    let velocities = trial.aim.want.iter().flat_map(|want| sight.velocities(want));
    velocities.filter_map(|velocity| point(trial, &sight, form, velocity)).collect()
}

fn is_velocity(free: &Free) -> bool {
    matches!(free.keys.as_slice(), ["place", "velocity", _] | ["throw", "speed" | "elevation" | "heading"])
}

/// What is seen from the body that is aimed with.
struct Sight<'a> {
    initial: &'a InitialState,
    ephemeris: &'a Ephemeris,
    shooter: BodyId,
}

impl Sight<'_> {
    /// Velocities relative to the primary that lead to what is wanted.
    fn velocities(&self, want: &Want) -> Vec<Vector3<f64>> {
        let found = || {
            let body = self.initial.bodies.get(self.shooter.0)?;
            let primary = body.primary?;
            let centre = self.initial.bodies.get(primary.0)?;
            let (mut to, t_s) = self.target(want, primary)?;
            let from = body.pos - centre.pos;
            let normal = from.cross(&to);
            // In one line with the centre: the plane is anybody's choice.
            let axis = if normal.norm() > 1e-9 * from.norm() * to.norm() { normal } else { Vector3::z() };
            // Beyond a body that is to be passed at a distance, as seen from the centre: the plane is the same.
            to += to.normalize() * self.beside_m(want, primary);
            let gm = body.gm_m3_s2 + centre.gm_m3_s2;
            let ways =
                [axis, -axis].map(|axis| lambert(from, to, t_s, gm, axis, MOST_TURNS).unwrap_or_default());
            Some(ways.into_iter().flatten().map(|arc| arc.from_vel).collect())
        };
        found().unwrap_or_default()
    }

    /// At what distance another body than the primary is wanted to be passed, m.
    fn beside_m(&self, want: &Want, primary: BodyId) -> f64 {
        let of_primary = match want.of {
            Wanted::Instant { body, about, .. } => {
                body == primary || about.is_none_or(|about| about == primary)
            }
            Wanted::Event { event, .. } => event.other.is_none_or(|other| other == primary),
        };
        if of_primary { 0.0 } else { distance(want).unwrap_or(0.0) }
    }

    /// Where the body should be, relative to its primary, and when.
    fn target(&self, want: &Want, primary: BodyId) -> Option<(Vector3<f64>, f64)> {
        let (body, other, t_s) = match want.of {
            Wanted::Instant { body, about, at } => (body, about, at.s()),
            Wanted::Event { event, .. } => {
                let meets = matches!(event.kind, EventKind::ClosestApproach | EventKind::Contact);
                let at = want.outcomes.iter().find_map(|outcome| match outcome {
                    Outcome::At(at) => Some(at.s()),
                    _ => None,
                });
                (event.body, event.other, at.filter(|_| meets)?)
            }
        };
        if t_s > self.ephemeris.until_s() {
            return None;
        }
        let other = if body == self.shooter { other.unwrap_or(primary) } else { body };
        if body != self.shooter && want_other(want) != Some(self.shooter) {
            return None;
        }
        if other != primary {
            return Some((self.ephemeris.relative(other, primary, t_s)?.pos, t_s));
        }
        // A direction from the primary, and how far.
        let stated = |of: fn(&Outcome) -> Option<f64>| want.outcomes.iter().find_map(of);
        let longitude = stated(|outcome| match outcome {
            Outcome::Longitude(angle) => Some(angle.rad()),
            _ => None,
        })?;
        let latitude = stated(|outcome| match outcome {
            Outcome::Latitude(angle) => Some(angle.rad()),
            _ => None,
        });
        let distance = distance(want).unwrap_or(self.initial.bodies.get(primary.0)?.radius_m);
        let ((sin_lat, cos_lat), (sin_lon, cos_lon)) = (sin_cos(latitude.unwrap_or(0.0)), sin_cos(longitude));
        let direction = Vector3::new(cos_lat * cos_lon, cos_lat * sin_lon, sin_lat);
        (distance > 0.0).then_some((direction * distance, t_s))
    }
}

/// The distance that is wanted, m.
fn distance(want: &Want) -> Option<f64> {
    want.outcomes.iter().find_map(|outcome| match outcome {
        Outcome::Distance(distance) => Some(distance.m()),
        _ => None,
    })
}

fn want_other(want: &Want) -> Option<BodyId> {
    match want.of {
        Wanted::Instant { about, .. } => about,
        Wanted::Event { event, .. } => event.other,
    }
}

/// The point at which the body starts with a velocity relative to its primary; `None` where the free numbers don't reach so far.
fn point(trial: &Trial<'_>, sight: &Sight<'_>, form: &Form, velocity: Vector3<f64>) -> Option<Vec<f64>> {
    let body = sight.initial.bodies.get(sight.shooter.0)?;
    let centre = sight.initial.bodies.get(body.primary?.0)?;
    // What the file states, and by how much it has to change.
    let change = velocity - (body.vel - centre.vel);
    let up = (body.pos - centre.pos).normalize();
    let east = Vector3::z().cross(&up);
    let shares = trial.aim.free.iter().map(|free| {
        if free.body != sight.shooter || !is_velocity(free) {
            return trial.stated_share(free).or(Some(0.5));
        }
        let si = match (form, free.keys.as_slice()) {
            (Form::Place(placed), ["place", "velocity", axis]) => {
                let axis: usize = axis.parse().ok()?;
                placed.velocity.get(axis)?.m_s() + change[axis]
            }
            (Form::Throw(_), ["throw", "speed"]) => velocity.norm(),
            (Form::Throw(_), ["throw", "elevation"]) => {
                asin((velocity.dot(&up) / velocity.norm()).clamp(-1.0, 1.0))
            }
            (Form::Throw(_), ["throw", "heading"]) => {
                // At a pole every way is north; scattered points will do there.
                let east = east.try_normalize(1e-9)?;
                let heading = atan2(velocity.dot(&east), velocity.dot(&up.cross(&east)));
                if heading < free.from { heading + TAU } else { heading }
            }
            _ => return None,
        };
        let share = (si - free.from) / (free.to - free.from);
        (0.0..=1.0).contains(&share).then_some(share)
    });
    shares.collect()
}
