//! First guesses: with which numbers a body gets to a place in time, by Kepler's laws.
//!
//! Where the rest of the bodies pulls little, such a guess all but meets the aim, and lies where scattered points would hardly fall. It is a
//! start for the search among others, and no more: nothing else depends on it. Several bodies are aimed one after the other.

use super::course::{Course, Target};
use super::put::put;
use super::trial::{Trial, horizon_s};
use crate::Vector3;
use crate::ephemeris::{Ephemeris, Propagation};
use crate::initial::InitialState;
use crate::math::float::sin_cos;
use crate::resolve::resolve_among;
use crate::scenario::{BodyId, EventKind, Outcome, Scenario, Want, Wanted};

/// Steps of the integrator at most, to see where the others will be.
const STEPS: usize = 100_000;

/// Guesses at most.
const MOST: usize = 24;

/// Where no time is wanted, this many are tried, evenly spread over the search.
const TIMES: u32 = 8;

/// Points of the unit cube from which to start.
pub(super) fn points(trial: &Trial<'_>) -> Vec<Vec<f64>> {
    let Some(scenario) = trial.document.scenario().scenario else { return Vec::new() };
    let free = &trial.aim.free;
    let moved = free.iter().filter(|free| free.keys.first() != Some(&"mass")).map(|free| free.body);
    let mut shooters: Vec<BodyId> = moved.collect();
    shooters.sort_unstable();
    shooters.dedup();
    let so_far: Vec<f64> = free.iter().map(|free| trial.stated_share(free).unwrap_or(0.5)).collect();
    let mut points = vec![so_far];
    let mut any = false;
    for (index, &shooter) in shooters.iter().enumerate() {
        let mut next: Vec<Vec<f64>> = Vec::new();
        let each = MOST.div_ceil(points.len());
        for point in &points {
            let found = of_one(trial, &scenario, shooter, &shooters[index + 1..], point);
            next.extend(found.unwrap_or_default().into_iter().take(each));
        }
        if !next.is_empty() {
            (points, any) = (next, true);
        }
    }
    if any { points } else { Vec::new() }
}

/// Guesses for the numbers of one body, with all others as a point has them. `later` will be aimed after it.
fn of_one(
    trial: &Trial<'_>,
    scenario: &Scenario,
    shooter: BodyId,
    later: &[BodyId],
    point: &[f64],
) -> Option<Vec<Vec<f64>>> {
    let mut scenario = scenario.clone();
    for (free, share) in trial.aim.free.iter().zip(point) {
        put(&mut scenario, free, free.value(*share));
    }
    let initial = resolve_among(&scenario, trial.solar).ok()?;
    let until_s = trial.aim.want.iter().map(horizon_s).fold(1.0, f64::max);
    let mut propagation = Propagation::new(&initial);
    // Where the integration ends early, times beyond are simply not covered.
    propagation.advance(until_s, STEPS).ok()?;
    let sight = Sight { initial: &initial, ephemeris: propagation.ephemeris(), shooter, later };
    let targets: Vec<Target> = trial.aim.want.iter().flat_map(|want| sight.targets(want)).collect();
    let own = trial.aim.free.iter().zip(point).filter(|(free, _)| free.body == shooter);
    let own: Vec<_> = own.map(|(free, share)| (free, *share)).collect();
    let course = Course { trial, scenario: &scenario, initial: &initial, shooter, own };
    let mut ways: Vec<_> = targets.iter().map(|target| course.to(target).into_iter()).collect();
    // The best of each target first, then the second of each.
    let mut found = Vec::new();
    loop {
        let round: Vec<Vec<f64>> = ways.iter_mut().filter_map(Iterator::next).collect();
        if round.is_empty() {
            return Some(found);
        }
        found.extend(round.into_iter().map(|numbers| {
            let mut numbers = numbers.into_iter();
            let of = |(free, share): (&crate::scenario::Free, &f64)| {
                if free.body == shooter { numbers.next().unwrap_or(*share) } else { *share }
            };
            trial.aim.free.iter().zip(point).map(of).collect()
        }));
    }
}

/// What is seen from the body that is aimed with.
struct Sight<'a> {
    initial: &'a InitialState,
    ephemeris: &'a Ephemeris,
    shooter: BodyId,
    later: &'a [BodyId],
}

impl Sight<'_> {
    /// Where the body should be, and when, for what is wanted.
    fn targets(&self, want: &Want) -> Vec<Target> {
        let (body, other, times_s) = match want.of {
            Wanted::Instant { body, about, at } => (body, about, vec![at.s()]),
            Wanted::Event { event, until } => {
                if !matches!(event.kind, EventKind::ClosestApproach | EventKind::Contact) {
                    return Vec::new();
                }
                let at = want.outcomes.iter().find_map(|outcome| match outcome {
                    Outcome::At(at) => Some(vec![at.s()]),
                    _ => None,
                });
                let spread = || (1..=TIMES).map(|k| until.s() * f64::from(k) / f64::from(TIMES)).collect();
                (event.body, event.other, at.unwrap_or_else(spread))
            }
        };
        let other = match (body == self.shooter, other == Some(self.shooter)) {
            (true, _) => other,
            (_, true) => Some(body),
            _ => return Vec::new(),
        };
        // One that is aimed later is not yet on its way.
        if other.is_some_and(|other| self.later.contains(&other)) {
            return Vec::new();
        }
        let found = times_s.into_iter().filter(|&t_s| t_s > 0.0 && t_s <= self.ephemeris.until_s());
        found.filter_map(|t_s| self.target(want, other, t_s)).collect()
    }

    fn target(&self, want: &Want, other: Option<BodyId>, t_s: f64) -> Option<Target> {
        let above = self.above(self.shooter);
        let other = other.or(above.first().copied())?;
        let massive = |body: &BodyId| self.initial.bodies.get(body.0).is_some_and(|b| b.gm_m3_s2 > 0.0);
        // The first centre that both have, the other one perhaps being it.
        let around_other = self.above(other);
        let shared = |body: &BodyId| *body == other || around_other.contains(body);
        let level = above.iter().position(|body| massive(body) && shared(body))?;
        let centre = above[level];
        let leaving = above[..level].last().copied().filter(massive);
        let wanted_m = want.outcomes.iter().find_map(|outcome| match outcome {
            Outcome::Distance(distance) => Some(distance.m()),
            _ => None,
        });
        if other != centre {
            let place = self.ephemeris.relative(other, centre, t_s)?.pos;
            return Some(Target { centre, leaving, place, beside_m: wanted_m.unwrap_or(0.0), t_s });
        }
        // A direction from the centre, and how far.
        let stated = |of: fn(&Outcome) -> Option<f64>| want.outcomes.iter().find_map(of);
        let longitude = stated(|outcome| match outcome {
            Outcome::Longitude(angle) => Some(angle.rad()),
            _ => None,
        })?;
        let latitude = stated(|outcome| match outcome {
            Outcome::Latitude(angle) => Some(angle.rad()),
            _ => None,
        });
        let distance_m = wanted_m.unwrap_or(self.initial.bodies.get(centre.0)?.radius_m);
        let ((sin_lat, cos_lat), (sin_lon, cos_lon)) = (sin_cos(latitude.unwrap_or(0.0)), sin_cos(longitude));
        let direction = Vector3::new(cos_lat * cos_lon, cos_lat * sin_lon, sin_lat);
        let place = direction * distance_m;
        (distance_m > 0.0).then_some(Target { centre, leaving, place, beside_m: 0.0, t_s })
    }

    /// What a body goes around, what that goes around, and so on; one that names nothing goes around the heaviest.
    fn above(&self, body: BodyId) -> Vec<BodyId> {
        let bodies = &self.initial.bodies;
        let gm = |index: &usize| bodies[*index].gm_m3_s2;
        let heaviest = (0..bodies.len()).max_by(|a, b| gm(a).total_cmp(&gm(b)).then(b.cmp(a))).map(BodyId);
        let mut above = Vec::new();
        let mut last = body;
        while above.len() <= bodies.len() {
            let Some(index) = bodies.get(last.0) else { break };
            match index.primary.or(heaviest.filter(|top| *top != last && !above.contains(top))) {
                Some(next) if next != body => {
                    above.push(next);
                    last = next;
                }
                _ => break,
            }
        }
        above
    }
}
