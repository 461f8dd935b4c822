//! One trial: numbers written into the text, integrated, and compared with what is wanted.

use super::outcome::{Miss, View};
use crate::ephemeris::{Ephemeris, Propagation};
use crate::initial::InitialState;
use crate::resolve::{Solar, resolve_among};
use crate::scenario::edit::{Document, EditError, Path, Root, Value};
use crate::scenario::{Aim, BodyId, Free, Measure, Problem, Severity, Want, Wanted};
use crate::units::{Angle, Gm, Length, Span, Speed, UnitError, number};

/// Steps of the integrator at most: what takes longer is no trial.
const STEPS: usize = 200_000;

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
            let si = free.value(*share);
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
        let share = free.share(si);
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
