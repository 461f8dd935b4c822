//! Making the plan: a pure function of the scenario and of the ephemeris.
//!
//! Where the ephemeris does not reach far enough to tell, [`make`] says how far it must reach, and is called again.

use super::plan::{Cue, Plan, PlannedBeat, Run, Way};
use crate::constants;
use crate::ephemeris::osculating::osculating;
use crate::ephemeris::{Ephemeris, events};
use crate::initial::InitialState;
use crate::scenario::{
    Beat, BeatClock, BeatStart, BodyId, Change, ChangeTime, EventRef, Mark, ModelSpan, Place, Problem,
    Scenario, Then,
};

/// Show seconds for which a beat that goes on may be lingered on before the model comes to its end.
const LINGER_S: f64 = 120.0;
/// An event is sought at most so many times farther than the first look.
const SEARCH_TIMES: f64 = 256.0;

/// The model times beyond which the model can't be integrated.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limits {
    /// First, seconds from the scenario's start.
    pub from_s: f64,
    /// Last, seconds from the scenario's start.
    pub until_s: f64,
}

impl Limits {
    /// None known.
    pub const NONE: Self = Self { from_s: f64::NEG_INFINITY, until_s: f64::INFINITY };
}

/// Why there is no plan yet.
#[derive(Debug, Clone, PartialEq)]
pub enum Need {
    /// The ephemeris has to cover this model time, seconds from the scenario's start.
    Until {
        /// The model time.
        t_s: f64,
        /// The beat for which it has to.
        beat: usize,
    },
    /// A beat needs a model time that lies beyond the limits.
    Beyond {
        /// The model time.
        t_s: f64,
        /// The beat.
        beat: usize,
    },
    /// A beat can't be done.
    Impossible(Problem),
}

/// The plan of a scenario's beats.
///
/// # Errors
/// [`Need::Until`] where the ephemeris has to reach farther, [`Need::Beyond`] where it can't, and
/// [`Need::Impossible`] where a beat asks for what never happens.
pub fn make(
    scenario: &Scenario,
    initial: &InitialState,
    ephemeris: &Ephemeris,
    limits: Limits,
) -> Result<Plan, Need> {
    Planner { scenario, initial, ephemeris, limits }.plan()
}

/// When a change is made, seconds from the scenario's start, as far as the changes that the ephemeris knows tell.
///
/// # Errors
/// As [`make`].
pub fn change_s(
    scenario: &Scenario,
    initial: &InitialState,
    ephemeris: &Ephemeris,
    limits: Limits,
    change: &Change,
) -> Result<f64, Need> {
    let planner = Planner { scenario, initial, ephemeris, limits };
    match change.at {
        ChangeTime::Time(at) => Ok(at.s()),
        ChangeTime::Event { event, after } => Ok(planner.event(0, change.place, event, 0.0)? + after.s()),
        ChangeTime::Beat { beat, after } => {
            let before = planner.beats(beat)?;
            let beats = &scenario.beats;
            let (from_s, _) = match beats.get(beat) {
                Some(stated) => planner.start(beat, stated, before.last().copied())?,
                None => (0.0, Run::Anew),
            };
            Ok(from_s + after.s())
        }
    }
}

struct Planner<'a> {
    limits: Limits,
    scenario: &'a Scenario,
    initial: &'a InitialState,
    ephemeris: &'a Ephemeris,
}

impl Planner<'_> {
    fn plan(&self) -> Result<Plan, Need> {
        let mut plan = Plan { beats: self.beats(self.scenario.beats.len())?, ..Plan::default() };
        plan.covers_from_s = plan.beats.iter().map(|b| b.from_s.min(b.until_s)).fold(0.0, f64::min);
        plan.covers_until_s = plan.beats.iter().map(|b| b.from_s.max(b.until_s)).fold(0.0, f64::max);
        let (mut from_s, mut until_s) = (plan.covers_from_s, plan.covers_until_s);
        let mut last = plan.beats.len().saturating_sub(1);
        for (index, (beat, planned)) in self.scenario.beats.iter().zip(&plan.beats).enumerate() {
            let spare_s = self.linger_s(planned).max(self.ahead_s(beat, planned));
            if planned.until_s + spare_s > until_s {
                until_s = planned.until_s + spare_s;
                last = index;
            }
            from_s = from_s.min(planned.until_s + self.linger_s(planned).min(0.0));
        }
        // Room for lingering and paths ahead is taken as far as there is any.
        until_s = until_s.min(self.limits.until_s);
        from_s = from_s.max(self.limits.from_s);
        self.want(until_s, last)?;
        self.want(from_s, last)?;
        plan.covers_until_s = until_s.min(self.ephemeris.until_s());
        plan.covers_from_s = from_s.max(self.ephemeris.from_s());
        Ok(plan)
    }

    /// The first of the beats, so many.
    fn beats(&self, count: usize) -> Result<Vec<PlannedBeat>, Need> {
        let mut beats: Vec<PlannedBeat> = Vec::new();
        let mut first_pace = 0.0;
        for (index, beat) in self.scenario.beats.iter().enumerate().take(count) {
            let planned = self.beat(index, beat, beats.last().copied(), first_pace)?;
            let pacing = planned.pacing(planned.from_s, first_pace, 0.0);
            first_pace = pacing.pace_at(planned.lasts_s);
            beats.push(planned);
        }
        Ok(beats)
    }

    /// Model time at which a beat starts, and whether it follows from the one before.
    fn start(&self, index: usize, beat: &Beat, before: Option<PlannedBeat>) -> Result<(f64, Run), Need> {
        let goes_on = before.map_or(0.0, |b| b.until_s);
        Ok(match beat.start {
            BeatStart::GoOn if before.is_some() => (goes_on, Run::GoesOn),
            BeatStart::GoOn | BeatStart::Restart => (0.0, Run::Anew),
            BeatStart::Time(time) => (time.s(), Run::Anew),
            BeatStart::Event { event, after } => {
                (self.event(index, beat.clock_place, event, 0.0)? + after.s(), Run::Anew)
            }
        })
    }

    fn beat(
        &self,
        index: usize,
        beat: &Beat,
        before: Option<PlannedBeat>,
        first_pace: f64,
    ) -> Result<PlannedBeat, Need> {
        let (from_s, run) = self.start(index, beat, before)?;
        self.want(from_s, index)?;
        let first_pace = if run == Run::GoesOn { first_pace } else { 0.0 };
        let before_beat = index.checked_sub(1).and_then(|i| self.scenario.beats.get(i));
        let mut planned = PlannedBeat {
            show_s: before.map_or(0.0, |b| b.show_s + b.lasts_s),
            lasts_s: 0.0,
            from_s,
            until_s: from_s,
            pace: 0.0,
            cue: None,
            way: Way::Still,
            then: beat.then,
            run,
            keeps_sectors: run == Run::GoesOn && before_beat.is_some_and(|b| sectors(b).eq(sectors(beat))),
        };
        match beat.clock {
            BeatClock::Hold { lasts } => planned.lasts_s = lasts.s(),
            BeatClock::Pace { pace, lasts } => {
                planned.lasts_s = lasts.s();
                planned.way = Way::Pace;
                planned.pace = pace.s_per_s();
            }
            BeatClock::Stretch { span, lasts } => {
                planned.lasts_s = lasts.s();
                planned.way = Way::Span(self.span_s(index, beat, span, from_s)?);
            }
            BeatClock::Reach { event, at, lasts } => {
                let model_s = self.event(index, beat.clock_place, event, from_s)?;
                planned.lasts_s = lasts.s().max(at.s());
                planned.cue = Some(Cue { at_s: at.s(), model_s, event });
                planned.way = Way::Cue;
            }
        }
        let pacing = planned.pacing(from_s, first_pace, 0.0);
        planned.pace = pacing.pace;
        planned.until_s = pacing.model_s(planned.lasts_s);
        self.want(planned.until_s, index)?;
        Ok(planned)
    }

    /// Asks for the ephemeris to cover a model time.
    fn want(&self, t_s: f64, beat: usize) -> Result<(), Need> {
        if t_s > self.limits.until_s || t_s < self.limits.from_s {
            return Err(Need::Beyond { t_s, beat });
        }
        if t_s > self.ephemeris.until_s() || t_s < self.ephemeris.from_s() {
            return Err(Need::Until { t_s, beat });
        }
        Ok(())
    }

    /// Model time that the presenter may linger past the end of a beat.
    fn linger_s(&self, planned: &PlannedBeat) -> f64 {
        if planned.then == Then::GoOn { planned.pace * LINGER_S.max(0.5 * planned.lasts_s) } else { 0.0 }
    }

    /// Model time past the end of a beat that its paths ahead show.
    fn ahead_s(&self, beat: &Beat, planned: &PlannedBeat) -> f64 {
        let ahead = |mark: &Mark| match *mark {
            Mark::Path { ahead: Some(ahead), .. } => ahead.s(),
            Mark::Path { body, ahead: None } => self.period_s(body, planned.from_s).unwrap_or(0.0),
            _ => 0.0,
        };
        beat.marks.iter().map(ahead).fold(0.0, f64::max)
    }

    /// Period of a body around its primary at an instant, where it has one.
    fn period_s(&self, body: BodyId, t_s: f64) -> Option<f64> {
        osculating(self.ephemeris, self.initial, body, None, t_s)?.period_s()
    }

    fn span_s(&self, index: usize, beat: &Beat, span: ModelSpan, from_s: f64) -> Result<f64, Need> {
        match span {
            ModelSpan::Fixed(span) => Ok(span.s()),
            ModelSpan::Periods { count, body } => {
                self.touch(from_s, index)?;
                let period = self.period_s(body, from_s).ok_or_else(|| {
                    Need::Impossible(Problem::error(
                        beat.clock_place,
                        format!("{} has no period: it does not come round", self.initial.name(body)),
                        "state the span as a time, such as span = \"200 d\"",
                    ))
                })?;
                Ok(count * period)
            }
        }
    }

    /// The first steps of an ephemeris have to be there before anything can be asked of it.
    fn touch(&self, t_s: f64, beat: usize) -> Result<(), Need> {
        if self.ephemeris.forward().is_empty() {
            return Err(Need::Until { t_s: t_s.max(1.0), beat });
        }
        self.want(t_s, beat)
    }

    /// Model time of an event after an instant.
    fn event(&self, index: usize, place: Place, event: EventRef, after_s: f64) -> Result<f64, Need> {
        self.touch(after_s, index)?;
        // An event on which the beat itself starts is not meant.
        let after_s = after_s + 1e-3 + 1e-9 * after_s.abs();
        if let Some(found) = events::first(self.ephemeris, self.initial, &event, after_s) {
            return Ok(found.t_s);
        }
        let look_s = self.first_look_s(event, after_s);
        let reached_s = (self.ephemeris.until_s() - after_s).max(0.0);
        if reached_s > SEARCH_TIMES * look_s {
            return Err(Need::Impossible(self.never(place, event, after_s)));
        }
        let t_s = after_s + (2.0 * reached_s).max(look_s);
        if self.ephemeris.until_s() >= self.limits.until_s {
            return Err(Need::Beyond { t_s, beat: index });
        }
        Err(Need::Until { t_s: t_s.min(self.limits.until_s), beat: index })
    }

    /// Where to look for an event first: a little more than as many periods as its number.
    fn first_look_s(&self, event: EventRef, t_s: f64) -> f64 {
        let count = 1.05 * u32::try_from(event.nth).map_or(1.0, f64::from);
        let round_s = self.period_s(event.body, t_s);
        let other_s = event.other.and_then(|other| self.period_s(other, t_s));
        let slower = match (round_s, other_s) {
            (Some(a), Some(b)) => a.max(b),
            (a, b) => a.or(b).unwrap_or(self.fall_s(event.body, t_s)),
        };
        count * slower
    }

    /// The time that belongs to a body's distance and speed, or to its fall, where it has no period.
    fn fall_s(&self, body: BodyId, t_s: f64) -> f64 {
        let Some(primary) = self.initial.bodies.get(body.0).and_then(|b| b.primary) else {
            return constants::DAY_S;
        };
        let Some(state) = self.ephemeris.relative(body, primary, t_s) else { return constants::DAY_S };
        let r = state.pos.norm();
        let gm = self.ephemeris.gm_m3_s2(primary, t_s) + self.ephemeris.gm_m3_s2(body, t_s);
        let time_s = (r / state.vel.norm()).min(std::f64::consts::TAU * r * (r / gm).sqrt());
        if time_s.is_finite() { time_s.max(1.0) } else { constants::DAY_S }
    }

    fn never(&self, place: Place, event: EventRef, after_s: f64) -> Problem {
        let searched = readable(self.ephemeris.until_s() - after_s);
        Problem::error(
            place,
            format!(
                "no {} of {} within the {searched} searched",
                event.kind.name(),
                self.initial.name(event.body)
            ),
            "name an event that happens, or change the motion so that it does",
        )
    }
}

fn sectors(beat: &Beat) -> impl Iterator<Item = &Mark> {
    beat.marks.iter().filter(|mark| matches!(mark, Mark::Sector { .. }))
}

/// A time for people: days, or years where it is long.
fn readable(seconds: f64) -> String {
    let days = seconds / constants::DAY_S;
    if days > 1000.0 { format!("{:.0} years", days / 365.25) } else { format!("{days:.1} days") }
}
