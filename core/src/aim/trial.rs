//! One trial: numbers written into the text, integrated, and compared with what is wanted.

use super::wording::{angle_text, length_text, speed_text, time_text};
use crate::ephemeris::osculating::osculating;
use crate::ephemeris::{Ephemeris, Propagation, State, events};
use crate::initial::InitialState;
use crate::math::float::{asin, atan2};
use crate::resolve::{Solar, resolve_among};
use crate::scenario::edit::{Document, EditError, Path, Root, Value};
use crate::scenario::{
    Aim, BodyId, EventKind, EventRef, Free, Measure, Outcome, Problem, Severity, Want, Wanted,
};
use crate::units::{Angle, Gm, Length, Span, Speed, UnitError, number};
use std::f64::consts::PI;

/// Steps of the integrator at most: what takes longer is no trial.
const STEPS: usize = 200_000;

/// An event nearer to the start than this is the start itself, s.
const START_S: f64 = 1e-3;

/// What is allowed of a time, s.
const TIME_S: f64 = 1.0;
/// What is allowed of a distance: a part of it, and at least so many metres.
const PART: f64 = 1e-6;
const LENGTH_M: f64 = 1.0;
/// What is allowed of a speed at least, m/s; else a part of it.
const SPEED_M_S: f64 = 1e-3;
/// What is allowed of an angle, rad: 0.04 arcsec.
const ANGLE_RAD: f64 = 2e-7;

/// By how much an outcome is missed.
#[derive(Debug, Clone, PartialEq)]
pub struct Miss {
    /// Of what: "distance at closest-approach of Pell to Brae".
    pub what: String,
    /// What is wanted, with its unit.
    pub wanted: String,
    /// What comes out, with its unit.
    pub got: String,
    /// How far off that is, with its unit.
    pub off: String,
    /// The difference by what is allowed; met within -1 to 1.
    pub share: f64,
    /// The difference by the size of what is wanted: what the search makes small. That of a distance has three parts, so
    /// that the search sees which way to go: the length alone is a cone, on whose slope steps zigzag.
    pub(super) residual: Vec<f64>,
}

impl Miss {
    /// Whether the outcome is met.
    pub fn is_met(&self) -> bool {
        self.share.abs() <= 1.0
    }
}

/// What a trial is made of.
#[derive(Debug)]
pub(super) struct Trial<'a> {
    pub(super) document: &'a Document,
    pub(super) aim: &'a Aim,
    /// The solar system at the scenario's date.
    pub(super) solar: &'a Solar,
    /// The size of the scene, m: by it distances are compared with times and angles.
    pub(super) scene_m: f64,
}

impl Trial<'_> {
    /// The text with the numbers at a point of the unit cube; rounded to so many digits, where stated.
    pub(super) fn written(&self, point: &[f64], digits: Option<usize>) -> Result<Document, EditError> {
        let mut document = self.document.clone();
        for (free, share) in self.aim.free.iter().zip(point) {
            let si = free.from + share * (free.to - free.from);
            let path = Path { root: Root::BodyAt(free.section), keys: &free.keys };
            document.set(path, value(free, si, digits).map_err(|e| EditError::WouldBreak(e.to_string()))?)?;
        }
        Ok(document)
    }

    /// The point at which the numbers stand in the text, where all are stated and within their ranges.
    pub(super) fn stated(&self) -> Option<Vec<f64>> {
        self.aim.free.iter().map(|free| self.stated_share(free)).collect()
    }

    /// Where in its range a number stands in the text, where it is stated and within it.
    pub(super) fn stated_share(&self, free: &Free) -> Option<f64> {
        let path = Path { root: Root::BodyAt(free.section), keys: &free.keys };
        let si = match free.measure {
            Measure::Number => self.document.get(path)?.trim().parse().ok()?,
            _ => read(free.measure, &self.document.get_text(path)?).ok()?,
        };
        let share = (si - free.from) / (free.to - free.from);
        (0.0..=1.0).contains(&share).then_some(share)
    }

    /// The paths that the numbers at a point lead to.
    ///
    /// # Errors
    /// Why there are none.
    pub(super) fn fly(&self, point: &[f64], digits: Option<usize>) -> Result<Flight, String> {
        let document = self.written(point, digits).map_err(|e| e.to_string())?;
        let parsed = document.scenario();
        let Some(scenario) = parsed.scenario else {
            return Err(first_error(&parsed.problems));
        };
        let initial = resolve_among(&scenario, self.solar).map_err(|problems| first_error(&problems))?;
        let until_s = self.aim.want.iter().map(horizon_s).fold(1.0, f64::max);
        let mut propagation = Propagation::new(&initial);
        if !propagation.advance(until_s, STEPS).map_err(|stopped| stopped.to_string())? {
            return Err("it takes too long to integrate".to_owned());
        }
        Ok(Flight { initial, ephemeris: propagation.into_ephemeris() })
    }

    /// What a flight misses.
    ///
    /// # Errors
    /// Why there is nothing to compare.
    pub(super) fn compare(&self, flight: &Flight) -> Result<Vec<Miss>, String> {
        let view = self.view(flight);
        let mut misses = Vec::new();
        for want in &self.aim.want {
            view.compare(want, &mut misses)?;
        }
        Ok(misses)
    }

    /// What the numbers at a point lead to.
    ///
    /// # Errors
    /// Why there is nothing to compare.
    pub(super) fn misses(&self, point: &[f64], digits: Option<usize>) -> Result<Vec<Miss>, String> {
        self.compare(&self.fly(point, digits)?)
    }

    pub(super) fn view<'a>(&self, flight: &'a Flight) -> View<'a> {
        View { initial: &flight.initial, ephemeris: &flight.ephemeris, scene_m: self.scene_m }
    }
}

/// The paths of one trial.
#[derive(Debug, Clone)]
pub(super) struct Flight {
    pub(super) initial: InitialState,
    pub(super) ephemeris: Ephemeris,
}

/// One body relative to another at the instant of which something is wanted.
#[derive(Debug, Clone)]
pub(super) struct Moment {
    pub(super) body: BodyId,
    pub(super) about: BodyId,
    pub(super) t_s: f64,
    /// Before what a contact does.
    pub(super) state: State,
    /// Of an event: what kind.
    pub(super) kind: Option<EventKind>,
}

/// How far the bodies of an aim are from their primaries, and from what they are to be compared with, at the start, m: the size of the scene.
pub(super) fn scene_m(document: &Document, aim: &Aim, solar: &Solar) -> f64 {
    const OTHERWISE_M: f64 = 1e9;
    let initial = document.scenario().scenario.and_then(|scenario| resolve_among(&scenario, solar).ok());
    let Some(initial) = initial else { return OTHERWISE_M };
    let far = aim.want.iter().flat_map(|want| {
        let (body, other) = match want.of {
            Wanted::Event { event, .. } => (event.body, event.other),
            Wanted::Instant { body, about, .. } => (body, about),
        };
        let pos = |body: Option<BodyId>| Some(initial.bodies.get(body?.0)?.pos);
        let primary = initial.bodies.get(body.0).and_then(|body| body.primary);
        let apart = |from: Option<BodyId>| Some((pos(Some(body))? - pos(from)?).norm());
        [apart(primary), apart(other)].into_iter().flatten()
    });
    let scene_m = far.fold(0.0, f64::max);
    if scene_m > 0.0 { scene_m } else { OTHERWISE_M }
}

fn first_error(problems: &[Problem]) -> String {
    let error = problems.iter().find(|problem| problem.severity == Severity::Error);
    error.map(ToString::to_string).unwrap_or_default()
}

pub(super) fn horizon_s(want: &Want) -> f64 {
    match want.of {
        Wanted::Event { until, .. } => until.s(),
        Wanted::Instant { at, .. } => at.s(),
    }
}

/// A flight as outcomes see it.
pub(super) struct View<'a> {
    initial: &'a InitialState,
    ephemeris: &'a Ephemeris,
    scene_m: f64,
}

impl View<'_> {
    fn compare(&self, want: &Want, misses: &mut Vec<Miss>) -> Result<(), String> {
        match want.of {
            Wanted::Event { event, until } => self.compare_event(want, event, until.s(), misses),
            Wanted::Instant { body, about, at } => {
                let about = about.or(self.primary(body));
                let of = match about {
                    Some(about) => format!("{} and {}", self.initial.name(body), self.initial.name(about)),
                    None => self.initial.name(body).to_owned(),
                };
                let state = self.relative(body, about, at.s())?;
                for outcome in &want.outcomes {
                    let allowed = allowed(want, *outcome);
                    let ratio = || self.period_s(body, at.s()).zip(self.period_s(about?, at.s()));
                    match *outcome {
                        Outcome::PeriodRatio(wanted) => {
                            let (a, b) = ratio().ok_or_else(|| format!("{of} have not both a period"))?;
                            misses.push(plain(format!("period-ratio of {of}"), a / b, wanted, allowed));
                        }
                        other => {
                            misses.extend(self.state_miss(other, allowed, &format!("of {of}"), state, None))
                        }
                    }
                }
                Ok(())
            }
        }
    }

    fn compare_event(
        &self,
        want: &Want,
        event: EventRef,
        until_s: f64,
        misses: &mut Vec<Miss>,
    ) -> Result<(), String> {
        let of = event.said(|body| self.initial.name(body));
        if let [Outcome::Count(wanted)] = want.outcomes[..] {
            let allowed = allowed(want, Outcome::Count(wanted));
            let found = self.events(&event, until_s);
            misses.push(plain(format!("count of {of}"), count(found.len()), count(wanted), allowed));
            return Ok(());
        }
        let meant = self.meant(want, &event, until_s)?;
        let about = event.other.or(meant.other).or(self.primary(event.body));
        let state = self.relative(event.body, about, meant.t_s)?;
        // What has touched may rest by then: its speed is that of the contact.
        let speed = (event.kind == EventKind::Contact).then_some(meant.value);
        for outcome in &want.outcomes {
            let allowed = allowed(want, *outcome);
            match *outcome {
                Outcome::At(at) => misses.push(Miss {
                    what: format!("time of {of}"),
                    wanted: time_text(at.s()),
                    got: time_text(meant.t_s),
                    off: time_text((meant.t_s - at.s()).abs()),
                    share: (meant.t_s - at.s()) / allowed,
                    residual: vec![(meant.t_s - at.s()) / at.s()],
                }),
                other => misses.extend(self.state_miss(other, allowed, &format!("at {of}"), state, speed)),
            }
        }
        Ok(())
    }

    /// The events of a kind after the start.
    fn events(&self, event: &EventRef, until_s: f64) -> Vec<events::Event> {
        let mut found = events::find(self.ephemeris, self.initial, &event.into(), 0.0, until_s);
        found.retain(|e| e.t_s > START_S);
        found
    }

    /// The event of which something is wanted.
    fn meant(&self, want: &Want, event: &EventRef, until_s: f64) -> Result<events::Event, String> {
        let found = self.events(event, until_s);
        let at_s = want.outcomes.iter().find_map(|outcome| match outcome {
            Outcome::At(at) => Some(at.s()),
            _ => None,
        });
        let meant = match at_s {
            Some(at_s) if event.nth == 1 => {
                found.iter().min_by(|a, b| (a.t_s - at_s).abs().total_cmp(&(b.t_s - at_s).abs()))
            }
            _ => found.get(event.nth - 1),
        };
        let of = || event.said(|body| self.initial.name(body));
        meant.copied().ok_or_else(|| format!("no {} within {}", of(), time_text(until_s)))
    }

    /// The instant of which something is wanted; `None` for a count, which is of none.
    ///
    /// # Errors
    /// Why there is no such instant.
    pub(super) fn moment(&self, want: &Want) -> Result<Option<Moment>, String> {
        let (body, other, t_s, kind) = match want.of {
            Wanted::Event { event, until } => {
                if matches!(want.outcomes[..], [Outcome::Count(_)]) {
                    return Ok(None);
                }
                let meant = self.meant(want, &event, until.s())?;
                (event.body, event.other.or(meant.other), meant.t_s, Some(event.kind))
            }
            Wanted::Instant { body, about, at } => (body, about, at.s(), None),
        };
        let about = other
            .or(self.primary(body))
            .ok_or_else(|| format!("{} has no primary", self.initial.name(body)))?;
        let before_s = if kind == Some(EventKind::Contact) { t_s.next_down() } else { t_s };
        let state = self.relative(body, Some(about), before_s)?;
        Ok(Some(Moment { body, about, t_s, state, kind }))
    }

    /// By how much an outcome of position and velocity is missed; `speed` stands for the state's where it is known better.
    fn state_miss(
        &self,
        outcome: Outcome,
        allowed: f64,
        of: &str,
        state: State,
        speed: Option<f64>,
    ) -> Option<Miss> {
        Some(match outcome {
            Outcome::Distance(wanted) => {
                let (got, wanted) = (state.pos.norm(), wanted.m());
                Miss {
                    what: format!("distance {of}"),
                    wanted: length_text(wanted),
                    got: length_text(got),
                    off: length_text((got - wanted).abs()),
                    share: (got - wanted) / allowed,
                    residual: (state.pos * ((got - wanted) / got / self.scene_m)).iter().copied().collect(),
                }
            }
            Outcome::Speed(wanted) => {
                let (got, wanted) = (speed.unwrap_or_else(|| state.vel.norm()), wanted.m_s());
                Miss {
                    what: format!("speed {of}"),
                    wanted: speed_text(wanted),
                    got: speed_text(got),
                    off: speed_text((got - wanted).abs()),
                    share: (got - wanted) / allowed,
                    residual: vec![(got - wanted) / speed_size(Speed::from_m_s(wanted))],
                }
            }
            Outcome::Longitude(wanted) => {
                angle_miss(format!("longitude {of}"), atan2(state.pos.y, state.pos.x), wanted, allowed)
            }
            Outcome::Latitude(wanted) => {
                let sine = (state.pos.z / state.pos.norm()).clamp(-1.0, 1.0);
                angle_miss(format!("latitude {of}"), asin(sine), wanted, allowed)
            }
            Outcome::At(_) | Outcome::PeriodRatio(_) | Outcome::Count(_) => return None,
        })
    }

    fn relative(&self, body: BodyId, about: Option<BodyId>, t_s: f64) -> Result<State, String> {
        let about = about.ok_or_else(|| format!("{} has no primary", self.initial.name(body)))?;
        let state = self.ephemeris.relative(body, about, t_s);
        state.ok_or_else(|| format!("{} is not known at that time", self.initial.name(body)))
    }

    fn period_s(&self, body: BodyId, t_s: f64) -> Option<f64> {
        osculating(self.ephemeris, self.initial, body, None, t_s)?.period_s()
    }

    fn primary(&self, body: BodyId) -> Option<BodyId> {
        self.initial.bodies.get(body.0)?.primary
    }
}

/// How far off an outcome may be, SI: as stated, or so little that nobody sees it.
fn allowed(want: &Want, outcome: Outcome) -> f64 {
    want.within.unwrap_or(match outcome {
        Outcome::At(_) => TIME_S,
        Outcome::Distance(wanted) => (PART * wanted.m()).max(LENGTH_M),
        Outcome::Speed(wanted) => (PART * wanted.m_s()).max(SPEED_M_S),
        Outcome::Longitude(_) | Outcome::Latitude(_) => ANGLE_RAD,
        Outcome::PeriodRatio(wanted) => PART * wanted,
        // Half an event: whole numbers are met or not.
        Outcome::Count(_) => 0.5,
    })
}

/// By what differences of a speed are divided to be compared with others, m/s.
pub(super) fn speed_size(wanted: Speed) -> f64 {
    wanted.m_s().max(SPEED_M_S / PART)
}

fn angle_miss(what: String, got_rad: f64, wanted: Angle, allowed: f64) -> Miss {
    // The shorter way round.
    let off = (got_rad - wanted.rad() + PI).rem_euclid(2.0 * PI) - PI;
    Miss {
        what,
        wanted: angle_text(wanted.rad()),
        got: angle_text(wanted.rad() + off),
        off: angle_text(off.abs()),
        share: off / allowed,
        residual: vec![off],
    }
}

/// A miss of numbers without unit.
fn plain(what: String, got: f64, wanted: f64, allowed: f64) -> Miss {
    Miss {
        what,
        wanted: number::shortest(wanted),
        got: number::with_digits(got, 8),
        off: number::with_digits((got - wanted).abs(), 3),
        share: (got - wanted) / allowed,
        residual: vec![(got - wanted) / wanted.max(1.0)],
    }
}

fn count(n: usize) -> f64 {
    u32::try_from(n).map_or(f64::MAX, f64::from)
}

/// A number to so many digits, with its unit.
fn rounded(value: f64, unit: &str, digits: usize) -> String {
    let number = number::with_digits(value, digits);
    if unit.is_empty() { number } else { format!("{number} {unit}") }
}

/// The number nearest to another among those of so many digits.
fn to_digits(value: f64, digits: usize) -> f64 {
    number::with_digits(value, digits).parse().unwrap_or(value)
}

/// The SI value of a text.
fn read(measure: Measure, text: &str) -> Result<f64, UnitError> {
    Ok(match measure {
        Measure::Length => Length::parse(text)?.m(),
        Measure::Speed => Speed::parse(text)?.m_s(),
        Measure::Angle => Angle::parse(text)?.rad(),
        Measure::Span => Span::parse(text)?.s(),
        Measure::Mass | Measure::Number => Gm::parse_mass(text)?.m3_s2(),
    })
}

/// A number as the file states it.
fn value(free: &Free, si: f64, digits: Option<usize>) -> Result<Value, UnitError> {
    let text = match free.measure {
        Measure::Length => Length::from_m(si).text_in(&free.unit)?,
        Measure::Speed => Speed::from_m_s(si).text_in(&free.unit)?,
        Measure::Angle => Angle::from_rad(si).text_in(&free.unit)?,
        Measure::Span => Span::from_s(si).text_in(&free.unit)?,
        Measure::Mass => Gm::from_m3_s2(si).text_in(&free.unit)?,
        Measure::Number => return Ok(Value::Number(digits.map_or(si, |digits| to_digits(si, digits)))),
    };
    Ok(Value::Text(match (digits, number::leading(&text)) {
        (Some(digits), Ok((value, unit))) => rounded(value, unit.trim(), digits),
        _ => text,
    }))
}
