//! What happens on the integrated paths, and when, by root finding on the step polynomials.
//!
//! Each kind of event is a sign change of a polynomial in each step; all of them are found, also several in one step,
//! and polished to rounding. An event counts only where it can be told from rounding:
//!
//! - apsides and closest approaches: the distance must have a minimum or maximum as marked as the apsis of an orbit of
//!   eccentricity [`FAINTEST`]; on rounder orbits, and of bodies at rest on each other, there are none;
//! - conjunctions and oppositions: the difference in longitude must change at a rate of at least [`FAINTEST`] of what the
//!   motions give.
//!
//! A rebound is a contact and no apsis. Directions are geometric (without light time), longitudes those of the
//! ecliptic of J2000.

use super::Ephemeris;
use crate::Vector3;
use crate::initial::InitialState;
use crate::math::float::atan2;
use crate::scenario::{BodyId, EventKind, EventRef};

mod roots;
mod steps;
#[cfg(test)]
mod tests;

use steps::{MARGIN, Relative, Step, steps};

/// The smallest eccentricity at which an orbit has apsides.
pub const FAINTEST: f64 = 1e-9;

/// Values of a step's polynomial below this part of its terms are rounding.
const NOISE: f64 = 1e-14;

/// What is sought.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Query {
    /// What kind.
    pub kind: EventKind,
    /// Of which body.
    pub body: BodyId,
    /// To, with or from which other body; `None`: its primary, and for contacts any body.
    pub other: Option<BodyId>,
}

/// Something that happens on the paths.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Event {
    /// When, seconds from the scenario's start.
    pub t_s: f64,
    /// What kind.
    pub kind: EventKind,
    /// Of which body.
    pub body: BodyId,
    /// To, with or from which other body; `None` where that is an unseen companion.
    pub other: Option<BodyId>,
    /// Distance from centre to centre (apsides, closest approach), relative speed (contact), or the angle between the
    /// body and the star (conjunction, opposition).
    pub value: f64,
    /// Unit of the value: "m", "m/s" or "deg".
    pub unit: &'static str,
}

/// All events of one kind between two instants (both counted in), in order. What the ephemeris doesn't cover is left out.
///
/// An event within a millionth of an integration step of an end of the interval counts as on it: a body that starts at
/// periapsis has one at 0.
pub fn find(eph: &Ephemeris, initial: &InitialState, query: &Query, from_s: f64, until_s: f64) -> Vec<Event> {
    let mut found = Vec::new();
    search(eph, initial, query, from_s, until_s, |event, same_s| {
        if event.t_s >= from_s - same_s && event.t_s <= until_s + same_s {
            found.push(Event { t_s: event.t_s.clamp(from_s, until_s), ..event });
        }
        true
    });
    found
}

/// The event that a scenario names: the n-th after an instant, as far as the ephemeris reaches. One at that very
/// instant (within a millionth of an integration step) doesn't count.
pub fn first(eph: &Ephemeris, initial: &InitialState, event: &EventRef, after_s: f64) -> Option<Event> {
    let query = Query { kind: event.kind, body: event.body, other: event.other };
    let mut left = event.nth.max(1);
    let mut found = None;
    search(eph, initial, &query, after_s, eph.until_s(), |event, same_s| {
        if event.t_s > after_s + same_s {
            left -= 1;
            if left == 0 {
                found = Some(event);
            }
        }
        left > 0
    });
    found
}

/// All events between the bodies that the scenario names, in order of time: apsides about the primary, closest approaches of all
/// other pairs, contacts, and conjunctions and oppositions seen from every body with mass that goes around the same star.
pub fn all(eph: &Ephemeris, initial: &InitialState, from_s: f64, until_s: f64) -> Vec<Event> {
    let mut found = Vec::new();
    let mut add = |kind, body, other| {
        found.extend(find(eph, initial, &Query { kind, body, other }, from_s, until_s));
    };
    for i in 0..initial.listed {
        let body = BodyId(i);
        add(EventKind::Periapsis, body, None);
        add(EventKind::Apoapsis, body, None);
        add(EventKind::Contact, body, None);
        for j in (0..initial.listed).filter(|&j| j != i) {
            let other = BodyId(j);
            let related = primary(initial, body) == Some(other) || primary(initial, other) == Some(body);
            if i < j && !related {
                add(EventKind::ClosestApproach, body, Some(other));
            }
            let star = star(initial, other);
            if initial.bodies[j].gm_m3_s2 > 0.0 && star != other && self::star(initial, body) == star {
                add(EventKind::Conjunction, body, Some(other));
                add(EventKind::Opposition, body, Some(other));
            }
        }
    }
    found.sort_by(|a, b| {
        a.t_s
            .total_cmp(&b.t_s)
            .then(a.kind.cmp(&b.kind))
            .then(a.body.cmp(&b.body))
            .then(a.other.cmp(&b.other))
    });
    found
}

fn primary(initial: &InitialState, body: BodyId) -> Option<BodyId> {
    initial.bodies.get(body.0)?.primary.filter(|p| *p != body && p.0 < initial.bodies.len())
}

/// The body at the head of the line of primaries.
fn star(initial: &InitialState, body: BodyId) -> BodyId {
    let mut top = body;
    for _ in 0..initial.bodies.len() {
        match primary(initial, top) {
            Some(next) => top = next,
            None => break,
        }
    }
    top
}

/// Gives every event of a query to `take`, in order, with the time within which events count as one; until `take` says no.
fn search(
    eph: &Ephemeris,
    initial: &InitialState,
    query: &Query,
    from_s: f64,
    until_s: f64,
    mut take: impl FnMut(Event, f64) -> bool,
) {
    let listed = |other: BodyId| (other.0 < initial.listed).then_some(other);
    let other = query.other.or_else(|| primary(initial, query.body));
    let inside = query.body.0 < eph.bodies() && other.is_none_or(|o| o.0 < eph.bodies() && o != query.body);
    if !inside || from_s.is_nan() || until_s.is_nan() || from_s > until_s {
        return;
    }
    if query.kind == EventKind::Contact {
        contacts(eph, query, from_s, until_s, take);
        return;
    }
    let Some(other) = other else { return };
    let look = match query.kind {
        EventKind::Conjunction | EventKind::Opposition => {
            let star = star(initial, other);
            if star == query.body || star == other {
                return;
            }
            Look::Longitude { body: query.body.0, observer: other.0, star: star.0, kind: query.kind }
        }
        kind => Look::Distance { body: query.body.0, other: other.0, kind },
    };
    let event = |sight: &Sight| Event {
        t_s: sight.t_s.clamp(eph.from_s(), eph.until_s()),
        kind: query.kind,
        body: query.body,
        other: listed(other),
        value: sight.value,
        unit: look.unit(),
    };
    let mut last: Option<Sight> = None;
    for step in steps(eph, from_s, until_s) {
        if look.at_rest(eph, step.at(0.5)) {
            continue;
        }
        for sight in look.sights(&step) {
            match last {
                // The same event, seen from both sides of the border between two steps; the one on its own side counts.
                Some(before) if (sight.t_s - before.t_s).abs() <= before.same_s.max(sight.same_s) => {
                    if sight.inside {
                        last = Some(sight);
                    }
                }
                _ => {
                    if let Some(before) = last.replace(sight)
                        && !take(event(&before), before.same_s)
                    {
                        return;
                    }
                }
            }
        }
    }
    if let Some(before) = last {
        take(event(&before), before.same_s);
    }
}

fn contacts(
    eph: &Ephemeris,
    query: &Query,
    from_s: f64,
    until_s: f64,
    mut take: impl FnMut(Event, f64) -> bool,
) {
    let mut found: Vec<Event> = eph
        .contacts()
        .iter()
        .filter(|c| c.t_s >= from_s && c.t_s <= until_s)
        .filter(|c| {
            c.body == query.body && query.other.is_none_or(|other| other == c.onto)
                || c.onto == query.body && query.other == Some(c.body)
        })
        .map(|c| Event {
            t_s: c.t_s,
            kind: EventKind::Contact,
            body: query.body,
            other: Some(if c.body == query.body { c.onto } else { c.body }),
            value: c.speed_m_s,
            unit: "m/s",
        })
        .collect();
    found.sort_by(|a, b| a.t_s.total_cmp(&b.t_s));
    for event in found {
        if !take(event, 0.0) {
            return;
        }
    }
}

/// An event as seen from one step.
#[derive(Debug, Clone, Copy)]
struct Sight {
    t_s: f64,
    value: f64,
    same_s: f64,
    /// Whether it lies within the step, not in the margin beyond.
    inside: bool,
}

/// What is looked at.
#[derive(Debug, Clone, Copy)]
enum Look {
    Distance { body: usize, other: usize, kind: EventKind },
    Longitude { body: usize, observer: usize, star: usize, kind: EventKind },
}

impl Look {
    fn unit(&self) -> &'static str {
        match self {
            Self::Distance { .. } => "m",
            Self::Longitude { .. } => "deg",
        }
    }

    /// Whether one of the two rests on the other, or both on the same body.
    fn at_rest(&self, eph: &Ephemeris, t_s: f64) -> bool {
        let (a, b) = match *self {
            Self::Distance { body, other, .. } => (body, other),
            Self::Longitude { body, observer, .. } => (body, observer),
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
    fn sights(&self, step: &Step<'_>) -> Vec<Sight> {
        let found = match *self {
            Self::Distance { body, other, kind } => {
                step.relative(body, other).map(|r| extremes(&r, kind)).unwrap_or_default()
            }
            Self::Longitude { body, observer, star, kind } => {
                match (step.relative(body, observer), step.relative(star, observer)) {
                    (Some(body), Some(star)) => alignments(&body, &star, kind),
                    _ => Vec::new(),
                }
            }
        };
        let sight = |(h, value)| Sight {
            t_s: step.at(h),
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
