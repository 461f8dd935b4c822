//! Bodies that come near each other while they are shown.

use super::report::Encounter;
use crate::ephemeris::events::{self, Query};
use crate::ephemeris::{Ephemeris, Track};
use crate::math::counts::number_from;
use crate::math::float;
use crate::scenario::{BodyId, EventKind};
use crate::show::{PlannedBeat, Show};

/// Nearer than this, in Hill radii of the heavier one, is near: out to there it turns others about.
const HILL_RADII: f64 = 3.0;
/// Nearer than this, in the sum of their radii, is near, where neither goes around the other.
const RADII: f64 = 10.0;
/// And where one goes around the other: it all but skims the surface.
const SKIMMED_RADII: f64 = 1.1;
/// Nearer to each other than this part of how far they are from their primary, they have one place (balls that leave the same hand), and
/// don't pass each other.
const SAME_PLACE: f64 = 1e-9;

/// An event nearer to the scenario's start than this is the start itself, s.
const START_S: f64 = 1e-3;

/// Steps of the integrator in which passes of a pair are looked for at a time.
const STEPS: f64 = 2000.0;

/// The passes of all pairs in all beats, being looked for.
#[derive(Debug, Default)]
pub(super) struct Near {
    /// Which pair, which beat, and which piece of it comes next.
    pair: [usize; 2],
    beat: usize,
    piece: u32,
    /// The nearest pass of the pair, by the measure that makes it near.
    best: Option<(f64, Encounter)>,
    found: Vec<(f64, Encounter)>,
}

impl Near {
    /// Looks at the next pair, in the next piece of the next beat. True once all have been looked at.
    pub(super) fn work(&mut self, show: &Show) -> bool {
        let [a, b] = self.pair;
        if a + 1 >= show.initial.listed {
            return true;
        }
        let pair = (a != b).then(|| Pair::of(show, BodyId(a), BodyId(b))).flatten();
        match pair.and_then(|pair| Some((pair, show.plan.beats.get(self.beat)?))) {
            Some((pair, planned)) => {
                let pieces = pieces(show, planned);
                let share = |piece: u32| f64::from(piece) / f64::from(pieces);
                let (from_s, until_s) =
                    (planned.from_s.min(planned.until_s), planned.from_s.max(planned.until_s));
                let at_s = |piece| from_s + (until_s - from_s) * share(piece);
                let ends_s = if self.piece + 1 < pieces { at_s(self.piece + 1) } else { until_s };
                self.best = pair.nearest(show, self.beat, at_s(self.piece), ends_s, self.best.take());
                self.piece += 1;
                if self.piece >= pieces {
                    (self.beat, self.piece) = (self.beat + 1, 0);
                }
            }
            None => {
                self.found.extend(self.best.take());
                (self.beat, self.piece) = (0, 0);
                self.pair = if b + 1 < show.initial.listed { [a, b + 1] } else { [a + 1, a + 2] };
            }
        }
        false
    }

    /// Share of the pairs looked at, 0 to 1.
    pub(super) fn fraction(&self, show: &Show) -> f64 {
        (number_from(self.pair[0]) / number_from(show.initial.listed.max(1))).min(1.0)
    }

    /// The nearest of every pair that comes near, the nearest (in the measure that made it near) first.
    pub(super) fn into_encounters(mut self) -> Vec<Encounter> {
        self.found.sort_by(|x, y| x.0.total_cmp(&y.0));
        self.found.into_iter().map(|(_, encounter)| encounter).collect()
    }
}

/// Into how many pieces a beat is cut.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "bounded")]
fn pieces(show: &Show, planned: &PlannedBeat) -> u32 {
    const MOST: f64 = 10_000.0;
    let eph = &show.ephemeris;
    let steps = number_from(eph.forward().len() + eph.backward().len());
    let share = (planned.until_s - planned.from_s).abs() / (eph.until_s() - eph.from_s());
    (share * steps / STEPS).ceil().clamp(1.0, MOST) as u32
}

/// Two bodies that may pass each other.
struct Pair {
    /// The lighter one, which is said to pass the heavier.
    body: BodyId,
    other: BodyId,
    query: Query,
    /// From centre to centre when they touch, m.
    touch_m: f64,
}

impl Pair {
    fn of(show: &Show, a: BodyId, b: BodyId) -> Option<Self> {
        let bodies = &show.initial.bodies;
        let gm = |body: BodyId| bodies.get(body.0).map_or(0.0, |one| one.gm_m3_s2);
        let radius = |body: BodyId| bodies.get(body.0).map_or(0.0, |one| one.radius_m);
        let primary = |body: BodyId| bodies.get(body.0).and_then(|one| one.primary);
        let (body, other) = if gm(a) > gm(b) { (b, a) } else { (a, b) };
        let touch_m = radius(body) + radius(other);
        if gm(other) == 0.0 && touch_m == 0.0 {
            return None; // Points without gravity pass through each other unharmed.
        }
        let (kind, of) = match (primary(body) == Some(other), primary(other) == Some(body)) {
            (true, _) => (EventKind::Periapsis, body),
            (_, true) => (EventKind::Periapsis, other),
            _ => (EventKind::ClosestApproach, body),
        };
        let to = if of == body { other } else { body };
        Some(Self { body, other, query: Query::new(kind, of, Some(to)), touch_m })
    }

    /// The nearest of what was found before and of the passes between two instants of a beat.
    fn nearest(
        &self,
        show: &Show,
        beat: usize,
        from_s: f64,
        until_s: f64,
        mut best: Option<(f64, Encounter)>,
    ) -> Option<(f64, Encounter)> {
        let Self { body, other, touch_m, .. } = *self;
        let primary = show.initial.bodies.get(body.0).and_then(|one| one.primary);
        let kind = self.query.kind;
        let passes = exact_parts(&show.ephemeris, from_s, until_s)
            .flat_map(|(from_s, until_s)| {
                events::find(&show.ephemeris, &show.initial, &self.query, from_s, until_s)
            })
            .collect::<Vec<_>>();
        // What starts at its nearest doesn't pass.
        for t_s in passes.iter().map(|event| event.t_s).filter(|t_s| t_s.abs() > START_S) {
            let Some(state) = show.ephemeris.relative(body, other, t_s) else { continue };
            if resting(show, body, other, t_s) {
                continue;
            }
            let distance_m = state.pos.norm();
            let hill_m = hill_radius_m(show, other, t_s);
            let far_m = primary.and_then(|p| show.ephemeris.relative(body, p, t_s)).map(|s| s.pos.norm());
            if kind == EventKind::ClosestApproach && far_m.is_some_and(|far| distance_m < SAME_PLACE * far) {
                continue;
            }
            // What goes round and round is near all the time, and meant to be.
            let gm_m3_s2 = show.ephemeris.gm_m3_s2(body, t_s) + show.ephemeris.gm_m3_s2(other, t_s);
            let bound = state.vel.norm_squared() * distance_m < 2.0 * gm_m3_s2;
            let goes_round = kind == EventKind::Periapsis && bound;
            let in_radii = distance_m / (if goes_round { SKIMMED_RADII } else { RADII } * touch_m);
            let in_hill =
                hill_m.filter(|_| !goes_round).map_or(f64::INFINITY, |hill| distance_m / (HILL_RADII * hill));
            let nearness = in_radii.min(in_hill);
            if nearness < 1.0 && best.as_ref().is_none_or(|best| nearness < best.0) {
                let hill_radii = hill_m.map(|hill| distance_m / hill);
                let gap_m = distance_m - touch_m;
                let moved_m = 0.0;
                best = Some((
                    nearness,
                    Encounter { body, other, t_s, beat, distance_m, gap_m, hill_radii, moved_m },
                ));
            }
        }
        best
    }
}

/// The parts of an interval on which paths are exact. On the others nothing comes near: there long steps are left before it does.
fn exact_parts(eph: &Ephemeris, from_s: f64, until_s: f64) -> impl Iterator<Item = (f64, f64)> {
    let mut long: Vec<(f64, f64)> = [eph.backward(), eph.forward()]
        .into_iter()
        .flat_map(Track::long_stretches)
        .map(|stretch| (stretch.from_s.min(stretch.until_s), stretch.from_s.max(stretch.until_s)))
        .collect();
    long.sort_by(|a, b| a.0.total_cmp(&b.0));
    long.push((until_s, until_s));
    let mut start_s = from_s;
    let parts = long.into_iter().map(move |(a_s, b_s)| {
        let part = (start_s, a_s.min(until_s));
        start_s = start_s.max(b_s);
        part
    });
    parts.filter(|(start_s, end_s)| start_s < end_s)
}

/// Whether either lies on something, or has become part of it: what they touch is told as a contact.
fn resting(show: &Show, body: BodyId, other: BodyId, t_s: f64) -> bool {
    show.ephemeris.at_rest(body, t_s).is_some() || show.ephemeris.at_rest(other, t_s).is_some()
}

/// Radius within which a body holds what is near it against what it goes around, m.
///
/// # Source
/// C. D. Murray and S. F. Dermott, Solar System Dynamics (1999), 3.13: the distance times the cube root of a third of the mass ratio.
fn hill_radius_m(show: &Show, body: BodyId, t_s: f64) -> Option<f64> {
    let primary = show.initial.bodies.get(body.0)?.primary?;
    let distance_m = show.ephemeris.relative(body, primary, t_s)?.pos.norm();
    let ratio = show.ephemeris.gm_m3_s2(body, t_s) / (3.0 * show.ephemeris.gm_m3_s2(primary, t_s));
    (ratio.is_finite() && ratio > 0.0).then(|| distance_m * float::cbrt(ratio))
}
