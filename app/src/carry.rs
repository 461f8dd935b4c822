//! A show from the worker to the page: its paths as numbers, and the rest made again from the text.
//!
//! Reading, resolving and planning are exact functions of the text and the ephemeris, and quick; only the
//! ephemeris and the paths of swarms take long to make. So they alone travel.

use fallaround_core::ephemeris::{Ephemeris, Malformed};
use fallaround_core::initial::TimedChange;
use fallaround_core::math::counts::{count_from, number_from, take};
use fallaround_core::resolve;
use fallaround_core::scenario::{self, ChangeTime, Scenario};
use fallaround_core::show::{Limits, Need, Show, planner};
use fallaround_core::swarm::SwarmPath;

/// Why a show couldn't be put together again.
#[derive(Debug, Clone, PartialEq)]
pub enum CarryError {
    /// The text or what it states isn't what the ephemeris was made from.
    OtherText,
    /// The numbers are no ephemeris.
    Numbers(Malformed),
    /// The ephemeris doesn't reach as far as the beats need.
    TooShort,
}

impl std::fmt::Display for CarryError {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            Self::OtherText => f.write_str("what was worked out doesn't belong to this text"),
            Self::Numbers(error) => error.fmt(f),
            Self::TooShort => f.write_str("what was worked out doesn't reach to the end of the show"),
        }
    }
}

impl std::error::Error for CarryError {}

/// The paths of a show, to be sent: how many numbers the ephemeris has, its numbers, so for the times of its changes, s, and for each
/// swarm.
pub fn pack(show: &Show) -> Vec<f64> {
    let ephemeris = show.ephemeris.to_numbers();
    let swarms = show.swarms.iter().map(SwarmPath::to_numbers);
    let mut numbers = Vec::new();
    let changes = show.initial.changes.iter().map(|change| change.t_s).collect();
    for part in [ephemeris, changes].into_iter().chain(swarms) {
        numbers.push(number_from(part.len()));
        numbers.extend(part);
    }
    numbers
}

/// The parts of what was packed; `None` where it isn't whole.
fn parts(mut rest: &[f64]) -> Option<Vec<&[f64]>> {
    let mut parts = Vec::new();
    while !rest.is_empty() {
        let count = count_from(*take(&mut rest, 1)?.first()?)?;
        parts.push(take(&mut rest, count)?);
    }
    Some(parts)
}

/// The changes of a scenario from the times of all, in order.
fn changes(scenario: &Scenario, times_s: &[f64]) -> Option<Vec<TimedChange>> {
    let mut times_s = times_s.to_vec();
    for change in &scenario.changes {
        if let ChangeTime::Time(at) = change.at {
            let index = times_s.iter().position(|t_s| t_s.to_bits() == at.s().to_bits())?;
            times_s.remove(index);
        }
    }
    // What is left was found, in the order of the file.
    let mut found_s = times_s.into_iter();
    let found_s: Vec<Option<f64>> = scenario
        .changes
        .iter()
        .map(|change| if matches!(change.at, ChangeTime::Time(_)) { None } else { found_s.next() })
        .collect();
    Some(resolve::timed(scenario, &found_s))
}

/// The show of a text and of the paths that were made from it.
///
/// # Errors
/// [`CarryError`] when the two don't belong together.
pub fn unpack(text: &str, numbers: &[f64]) -> Result<Show, CarryError> {
    let scenario = scenario::parse(text).scenario.ok_or(CarryError::OtherText)?;
    let Ok(mut initial) = resolve::resolve(&scenario) else { return Err(CarryError::OtherText) };
    let parts = parts(numbers).ok_or(CarryError::Numbers(Malformed))?;
    if parts.len() != 2 + initial.swarms.len() {
        return Err(CarryError::OtherText);
    }
    let mut parts = parts.into_iter();
    let of_bodies = parts.next().unwrap_or_default();
    let ephemeris = Ephemeris::from_numbers(of_bodies).map_err(CarryError::Numbers)?;
    let times_s = parts.next().unwrap_or_default();
    initial.changes = changes(&scenario, times_s).ok_or(CarryError::OtherText)?;
    let mut swarms = Vec::new();
    for (part, start) in parts.zip(&initial.swarms) {
        let path = SwarmPath::from_numbers(part).map_err(CarryError::Numbers)?;
        if path.tracers() != start.pos.len() {
            return Err(CarryError::OtherText);
        }
        swarms.push(path);
    }
    if ephemeris.bodies() != initial.bodies.len() {
        return Err(CarryError::OtherText);
    }
    let plan = match planner::make(&scenario, &initial, &ephemeris, Limits::NONE) {
        Err(Need::Until { .. }) => {
            // The integration ended before the beats did; the plan was made with what there is.
            let ends = Limits { from_s: ephemeris.from_s(), until_s: ephemeris.until_s() };
            planner::make(&scenario, &initial, &ephemeris, ends)
        }
        made => made,
    };
    match plan {
        Ok(plan) => Ok(Show { scenario, initial, ephemeris, swarms, plan }),
        Err(_) => Err(CarryError::TooShort),
    }
}
