//! What happens on the integrated paths, and when, by root finding on the step polynomials.
//!
//! Each kind of event is a sign change of a polynomial in each step; all of them are found, also several in one step,
//! and polished to rounding. An event counts only where it can be told from rounding:
//!
//! - apsides and closest approaches: the distance must have a minimum or maximum as marked as the apsis of an orbit of
//!   eccentricity [`FAINTEST`]; on rounder orbits, and of bodies at rest on each other, there are none;
//! - conjunctions and oppositions: the difference in longitude must change at a rate of at least [`FAINTEST`] of what the
//!   motions give;
//! - nodes, stations, greatest elongations, crossings of a distance and shadows likewise: what changes its sign must do so at a
//!   rate of at least [`FAINTEST`] of what the motions give. An orbit in the ecliptic has no nodes.
//!
//! A rebound is a contact and no apsis. Directions are geometric (without light time), longitudes those of the
//! ecliptic of J2000. What each event's value says is written at [`Event::value`].

use super::Ephemeris;
use crate::initial::InitialState;
use crate::scenario::{BodyId, EventKind, EventRef};

mod elongation;
mod look;
mod roots;
mod shadow;
#[cfg(test)]
mod sky_tests;
mod steps;
#[cfg(test)]
mod tests;

use look::{Look, Sight};
use steps::steps;

/// The smallest eccentricity at which an orbit has apsides.
pub const FAINTEST: f64 = 1e-9;

/// Values of a step's polynomial below this part of its terms are rounding.
const NOISE: f64 = 1e-14;

/// What is sought.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Query {
    /// What kind.
    pub kind: EventKind,
    /// Of which body.
    pub body: BodyId,
    /// To, with or from which other body; `None`: its primary, and for contacts any body.
    pub other: Option<BodyId>,
    /// With [`EventKind::Distance`], the distance that is crossed, m; without one there is nothing to cross.
    pub distance_m: Option<f64>,
}

impl Query {
    /// Of a kind that states no distance.
    pub const fn new(kind: EventKind, body: BodyId, other: Option<BodyId>) -> Self {
        Self { kind, body, other, distance_m: None }
    }
}

impl From<&EventRef> for Query {
    fn from(event: &EventRef) -> Self {
        let distance_m = event.distance.map(|distance| distance.m());
        Self { kind: event.kind, body: event.body, other: event.other, distance_m }
    }
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
    /// What it says depends on the kind:
    ///
    /// | kind | value | unit |
    /// | --- | --- | --- |
    /// | periapsis, apoapsis, closest-approach | distance from centre to centre | m |
    /// | contact | relative speed | m/s |
    /// | ascending-node, descending-node | longitude of the node, seen from the primary, 0 to 360 | deg |
    /// | conjunction, opposition | angle between the body and the star | deg |
    /// | stationary | longitude at which it stands, seen from the other body, 0 to 360 | deg |
    /// | greatest-elongation | angle between the body and the star; negative: west of it | deg |
    /// | shadow-entry, shadow-exit, penumbra-entry, penumbra-exit | distance from the body that casts the shadow | m |
    /// | transit-entry, transit-exit | angle between the body and the star | deg |
    /// | distance | rate at which the distance grows; negative: it comes nearer | m/s |
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
    let query = Query::from(event);
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

/// Bodies nearer than this are in the same place, m: what is left of a difference of equal positions is rounding.
const SAME_PLACE_M: f64 = 1e-6;

/// Kinds that are seen from another body, against the star.
const SEEN: [EventKind; 6] = [
    EventKind::Conjunction,
    EventKind::Opposition,
    EventKind::Stationary,
    EventKind::GreatestElongation,
    EventKind::TransitEntry,
    EventKind::TransitExit,
];

/// Kinds that a shadow makes.
const SHADED: [EventKind; 4] =
    [EventKind::ShadowEntry, EventKind::ShadowExit, EventKind::PenumbraEntry, EventKind::PenumbraExit];

/// All events between the bodies that the scenario names, in order of time: apsides and nodes about the primary, closest
/// approaches of all other pairs, contacts; conjunctions, oppositions, stations, greatest elongations and transits seen from
/// every body with mass that goes around the same star; and ways through the shadows of bodies that do. Crossings of a
/// distance are not among them, as no distance is stated here: ask [`find`] for those.
pub fn all(eph: &Ephemeris, initial: &InitialState, from_s: f64, until_s: f64) -> Vec<Event> {
    let mut found = Vec::new();
    let mut add = |kind, body, other| {
        let events = find(eph, initial, &Query::new(kind, body, other), from_s, until_s);
        // Balls that leave the same hand don't approach one another there.
        let together = |event: &Event| kind == EventKind::ClosestApproach && event.value < SAME_PLACE_M;
        found.extend(events.into_iter().filter(|event| !together(event)));
    };
    for i in 0..initial.listed {
        let body = BodyId(i);
        add(EventKind::Periapsis, body, None);
        add(EventKind::Apoapsis, body, None);
        add(EventKind::Contact, body, None);
        add(EventKind::AscendingNode, body, None);
        add(EventKind::DescendingNode, body, None);
        for j in (0..initial.listed).filter(|&j| j != i) {
            let other = BodyId(j);
            let related = primary(initial, body) == Some(other) || primary(initial, other) == Some(body);
            if i < j && !related {
                add(EventKind::ClosestApproach, body, Some(other));
            }
            let star = star(initial, other);
            if star == other || star == body || self::star(initial, body) != star {
                continue;
            }
            if initial.bodies[j].gm_m3_s2 > 0.0 {
                for kind in SEEN {
                    add(kind, body, Some(other));
                }
            }
            if initial.bodies[j].radius_m > 0.0 {
                for kind in SHADED {
                    add(kind, body, Some(other));
                }
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
    let Some(look) = Look::of(initial, query, other) else { return };
    let event = |sight: &Sight| Event {
        t_s: sight.t_s.clamp(eph.from_s(), eph.until_s()),
        kind: query.kind,
        body: query.body,
        other: listed(other),
        value: sight.value,
        unit: look.unit(),
    };
    let mut last: Option<Sight> = None;
    let (bodies, count) = look.bodies();
    for step in steps(eph, &bodies[..count], from_s, until_s) {
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
