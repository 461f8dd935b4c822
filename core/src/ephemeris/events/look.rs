//! What is looked at in a step, and what is seen of the kinds that two bodies make between them.

use super::steps::{MARGIN, Relative, Step};
use super::{FAINTEST, NOISE, Query, roots, star};
use super::{elongation, shadow};
use crate::Vector3;
use crate::ephemeris::Ephemeris;
use crate::initial::InitialState;
use crate::math::float::atan2;
use crate::scenario::{BodyId, EventKind};

/// An event as seen from one step.
#[derive(Debug, Clone, Copy)]
pub(super) struct Sight {
    pub(super) t_s: f64,
    pub(super) value: f64,
    pub(super) same_s: f64,
    /// Whether it lies within the step, not in the margin beyond.
    pub(super) inside: bool,
}

/// What is looked at.
#[derive(Debug, Clone, Copy)]
pub(super) enum Look {
    /// Minima or maxima of the distance.
    Extreme { body: usize, other: usize, kind: EventKind },
    /// Same or opposite longitudes of body and star.
    Alignment { body: usize, observer: usize, star: usize, kind: EventKind },
    /// The body goes through the ecliptic.
    Node { body: usize, other: usize, kind: EventKind },
    /// Its longitude stands still.
    Station { body: usize, observer: usize },
    /// Its angle from the star is at its greatest.
    Elongation { body: usize, observer: usize, star: usize },
    /// A distance is crossed.
    Crossing { body: usize, other: usize, distance_m: f64 },
    /// The edge of a shadow is crossed.
    Shadow { body: usize, caster: usize, star: usize, edge: shadow::Edge },
    /// The disc of the body and that of the star touch: the observer crosses the edge of the body's penumbra.
    Transit { body: usize, observer: usize, star: usize, edge: shadow::Edge },
}

impl Look {
    /// What a query looks at; `None` where there is nothing to be seen.
    pub(super) fn of(initial: &InitialState, query: &Query, other: BodyId) -> Option<Self> {
        let (body, seen_from, kind) = (query.body.0, other.0, query.kind);
        // What is seen against the star, or shaded from it, is neither the star itself nor on it.
        let lit = || {
            let star = star(initial, other);
            (star != query.body && star != other).then_some(star.0)
        };
        Some(match kind {
            EventKind::Periapsis | EventKind::Apoapsis | EventKind::ClosestApproach => {
                Self::Extreme { body, other: seen_from, kind }
            }
            // These are found when the paths are made.
            EventKind::Contact => return None,
            EventKind::Conjunction | EventKind::Opposition => {
                Self::Alignment { body, observer: seen_from, star: lit()?, kind }
            }
            EventKind::AscendingNode | EventKind::DescendingNode => {
                Self::Node { body, other: seen_from, kind }
            }
            EventKind::Stationary => Self::Station { body, observer: seen_from },
            EventKind::GreatestElongation => Self::Elongation { body, observer: seen_from, star: lit()? },
            EventKind::Distance => {
                let distance_m = query.distance_m.filter(|d| *d > 0.0 && d.is_finite())?;
                Self::Crossing { body, other: seen_from, distance_m }
            }
            EventKind::ShadowEntry
            | EventKind::ShadowExit
            | EventKind::PenumbraEntry
            | EventKind::PenumbraExit => {
                let star = lit()?;
                let edge = shadow::Edge::new(initial, query.body, other, BodyId(star), kind)?;
                Self::Shadow { body, caster: seen_from, star, edge }
            }
            EventKind::TransitEntry | EventKind::TransitExit => {
                let star = lit()?;
                let entry = kind == EventKind::TransitEntry;
                let edge = shadow::Edge::before(initial, query.body, BodyId(star), entry)?;
                Self::Transit { body, observer: seen_from, star, edge }
            }
        })
    }

    /// The unit of the values.
    pub(super) const fn unit(&self) -> &'static str {
        match self {
            Self::Extreme { .. } | Self::Shadow { .. } => "m",
            Self::Crossing { .. } => "m/s",
            Self::Alignment { .. }
            | Self::Node { .. }
            | Self::Station { .. }
            | Self::Elongation { .. }
            | Self::Transit { .. } => "deg",
        }
    }

    /// The bodies looked at: so many of these.
    pub(super) const fn bodies(&self) -> ([usize; 3], usize) {
        match *self {
            Self::Extreme { body, other, .. }
            | Self::Node { body, other, .. }
            | Self::Crossing { body, other, .. }
            | Self::Station { body, observer: other } => ([body, other, other], 2),
            Self::Alignment { body, observer, star, .. }
            | Self::Transit { body, observer, star, .. }
            | Self::Elongation { body, observer, star } => ([body, observer, star], 3),
            Self::Shadow { body, caster, star, .. } => ([body, caster, star], 3),
        }
    }

    /// Whether one of the two rests on the other, or both on the same body.
    pub(super) fn at_rest(&self, eph: &Ephemeris, t_s: f64) -> bool {
        let (a, b) = match *self {
            Self::Extreme { body, other, .. }
            | Self::Node { body, other, .. }
            | Self::Crossing { body, other, .. }
            | Self::Alignment { body, observer: other, .. }
            | Self::Station { body, observer: other }
            | Self::Elongation { body, observer: other, .. }
            | Self::Transit { body, observer: other, .. }
            | Self::Shadow { body, caster: other, .. } => (body, other),
        };
        if eph.contacts().is_empty() {
            return false;
        }
        // The body that carries it, through bodies that rest on bodies.
        let host = |mut body: usize| {
            for _ in 0..eph.bodies() {
                match eph.at_rest(BodyId(body), t_s) {
                    Some(contact) => body = contact.onto.0,
                    None => break,
                }
            }
            body
        };
        host(a) == host(b)
    }

    /// The events in one step, in order of time.
    pub(super) fn sights(&self, step: &Step<'_>) -> Vec<Sight> {
        let found = self.found(step).unwrap_or_default();
        let sight = |(h, value): (f64, f64)| Sight {
            // A root nearer to the step's start than the fraction is known is on it.
            t_s: step.at(if h.abs() < f64::EPSILON { 0.0 } else { h }),
            value,
            same_s: step.same_s(),
            inside: (0.0..=1.0).contains(&h),
        };
        let mut sights: Vec<Sight> = found.into_iter().map(sight).collect();
        if step.step_s < 0.0 {
            sights.reverse();
        }
        sights
    }

    /// Fraction of the step and value of each event.
    fn found(&self, step: &Step<'_>) -> Option<Vec<(f64, f64)>> {
        let motion = |body, about| step.relative(body, about);
        Some(match *self {
            Self::Extreme { body, other, kind } => extremes(&motion(body, other)?, kind),
            Self::Alignment { body, observer, star, kind } => {
                alignments(&motion(body, observer)?, &motion(star, observer)?, kind)
            }
            Self::Node { body, other, kind } => {
                // In a step that leads back in time, what rises with the fraction sinks with time.
                let rising = (kind == EventKind::AscendingNode) == (step.step_s > 0.0);
                nodes(&motion(body, other)?, rising)
            }
            Self::Station { body, observer } => stations(&motion(body, observer)?),
            Self::Elongation { body, observer, star } => {
                elongation::greatest(&motion(body, observer)?, &motion(star, observer)?)
            }
            Self::Crossing { body, other, distance_m } => {
                crossings(&motion(body, other)?, distance_m, step.step_s)
            }
            Self::Shadow { body, caster, star, edge } => {
                edge.crossings(&motion(body, caster)?, &motion(caster, star)?, step.step_s > 0.0)
            }
            Self::Transit { body, observer, star, edge } => {
                let (seen, light) = (motion(observer, body)?, motion(body, star)?);
                let mut found = edge.crossings(&seen, &light, step.step_s > 0.0);
                for (h, value) in &mut found {
                    let from_body = seen.at(*h)[0];
                    let from_star = from_body + light.at(*h)[0];
                    let across = from_body.cross(&from_star).norm();
                    *value = atan2(across, from_body.dot(&from_star)).to_degrees();
                }
                found
            }
        })
    }
}

/// Minima or maxima of a distance: fraction of the step, and distance in metres.
fn extremes(motion: &Relative, kind: EventKind) -> Vec<(f64, f64)> {
    let (r, d) = motion.size();
    let rate = |h: f64| {
        let [pos, vel, _] = motion.at(h);
        pos.dot(&vel)
    };
    let mut found = Vec::new();
    for h in roots::sign_changes(&motion.range_rate(), MARGIN, NOISE * r * d, rate) {
        let [pos, vel, acc] = motion.at(h);
        let (square, pull) = (vel.norm_squared(), pos.dot(&acc));
        // On an orbit this is e / 2, with the sign of the second derivative of the distance.
        let marked = (square + pull) / (square + pull.abs());
        let is_minimum = marked > 0.0;
        let wanted = match kind {
            EventKind::Apoapsis => !is_minimum,
            _ => is_minimum,
        };
        if wanted && marked.abs() >= 0.5 * FAINTEST {
            found.push((h, pos.norm()));
        }
    }
    found
}

/// Same or opposite longitudes of a body and a star: fraction of the step, and the angle between them in degrees.
fn alignments(body: &Relative, star: &Relative, kind: EventKind) -> Vec<(f64, f64)> {
    let cross = |a: Vector3<f64>, b: Vector3<f64>| a.x * b.y - a.y * b.x;
    let noise = NOISE * body.size().0 * star.size().0;
    let exact = |h: f64| cross(body.at(h)[0], star.at(h)[0]);
    let mut found = Vec::new();
    for h in roots::sign_changes(&body.cross_in_plane(star), MARGIN, noise, exact) {
        let ([a, da, _], [b, db, _]) = (body.at(h), star.at(h));
        let rate = cross(da, b) + cross(a, db);
        let same_side = a.x * b.x + a.y * b.y > 0.0;
        if same_side == (kind == EventKind::Conjunction)
            && rate.abs() >= FAINTEST * (a.norm() * db.norm() + da.norm() * b.norm())
        {
            let angle = atan2(a.cross(&b).norm(), a.dot(&b));
            found.push((h, angle.to_degrees()));
        }
    }
    found
}

/// Passages through the ecliptic, upwards (by the fraction of the step) or downwards: fraction, and longitude in degrees.
fn nodes(motion: &Relative, rising: bool) -> Vec<(f64, f64)> {
    let mut found = Vec::new();
    for h in roots::sign_changes(&motion.height(), MARGIN, NOISE * motion.size().0, |h| motion.at(h)[0].z) {
        let [pos, vel, _] = motion.at(h);
        if (vel.z > 0.0) == rising && vel.z.abs() >= FAINTEST * vel.norm() {
            found.push((h, longitude_deg(pos)));
        }
    }
    found
}

/// Stations in longitude: fraction of the step, and longitude in degrees.
fn stations(motion: &Relative) -> Vec<(f64, f64)> {
    let (r, d) = motion.size();
    let turning = |h: f64| {
        let [pos, vel, _] = motion.at(h);
        pos.x * vel.y - pos.y * vel.x
    };
    let mut found = Vec::new();
    for h in roots::sign_changes(&motion.turning(), MARGIN, NOISE * r * d, turning) {
        let [pos, vel, acc] = motion.at(h);
        let rate = pos.x * acc.y - pos.y * acc.x;
        // At a station along the line of sight the body comes or goes at `vel` and turns at `acc`.
        if rate.abs() >= FAINTEST * (pos.norm() * acc.norm() + vel.norm_squared()) {
            found.push((h, longitude_deg(pos)));
        }
    }
    found
}

/// Where a distance is crossed: fraction of the step, and the rate at which it grows, m/s.
fn crossings(motion: &Relative, distance_m: f64, step_s: f64) -> Vec<(f64, f64)> {
    let mut poly = motion.dot(motion);
    let noise = NOISE * (poly.size() + distance_m * distance_m);
    poly.c[0] -= distance_m * distance_m;
    let mut found = Vec::new();
    for h in roots::sign_changes(&poly, MARGIN, noise, |h| motion.at(h)[0].norm() - distance_m) {
        let [pos, vel, _] = motion.at(h);
        let rate = pos.dot(&vel) / pos.norm();
        if rate.abs() >= FAINTEST * vel.norm() {
            found.push((h, rate / step_s));
        }
    }
    found
}

/// Longitude on the ecliptic, 0 to 360 degrees.
fn longitude_deg(direction: Vector3<f64>) -> f64 {
    let deg = atan2(direction.y, direction.x).to_degrees();
    if deg < 0.0 { deg + 360.0 } else { deg }
}
