//! A show from the worker to the page: its ephemeris as numbers, and the rest made again from the text.
//!
//! Reading, resolving and planning are exact functions of the text and the ephemeris, and quick; only the
//! ephemeris takes long to make. So it alone travels.

use fallaround_core::ephemeris::{ChunkError, Ephemeris};
use fallaround_core::resolve;
use fallaround_core::scenario;
use fallaround_core::show::{Limits, Need, Show, planner};

/// Why a show couldn't be put together again.
#[derive(Debug, Clone, PartialEq)]
pub enum CarryError {
    /// The text or what it states isn't what the ephemeris was made from.
    OtherText,
    /// The numbers are no ephemeris.
    Numbers(ChunkError),
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

/// The ephemeris of a show, to be sent.
pub fn pack(show: &Show) -> Vec<f64> {
    show.ephemeris.to_numbers()
}

/// The show of a text and of the ephemeris that was made from it.
///
/// # Errors
/// [`CarryError`] when the two don't belong together.
pub fn unpack(text: &str, numbers: &[f64]) -> Result<Show, CarryError> {
    let scenario = scenario::parse(text).scenario.ok_or(CarryError::OtherText)?;
    let Ok(initial) = resolve::resolve(&scenario) else { return Err(CarryError::OtherText) };
    let ephemeris = Ephemeris::from_numbers(numbers).map_err(CarryError::Numbers)?;
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
        Ok(plan) => Ok(Show { scenario, initial, ephemeris, plan }),
        Err(_) => Err(CarryError::TooShort),
    }
}
