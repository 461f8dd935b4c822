//! From text to a quantity and back, and what to tell a person whose text is neither.

use super::number::{self, NumberFault};
use super::table::{Dimension, Unit};

/// Why a text is not the quantity that is wanted, and what would be right.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("{wrong}; {remedy}")]
pub struct UnitError {
    /// What is wrong, as one sentence without a full stop.
    pub wrong: String,
    /// What would be right, as one sentence without a full stop.
    pub remedy: String,
}

impl UnitError {
    fn new(wrong: impl Into<String>, remedy: impl Into<String>) -> Self {
        Self { wrong: wrong.into(), remedy: remedy.into() }
    }
}

/// "a length is wanted: m, km, au, …".
pub(crate) fn wanted(dimensions: &[Dimension]) -> String {
    let names: Vec<&str> = dimensions.iter().map(|d| d.with_article()).collect();
    let units: Vec<&str> = dimensions.iter().flat_map(|d| d.usual()).copied().collect();
    format!("{} is wanted: {}", names.join(" or "), units.join(", "))
}

/// What is wrong with a bare number where a quantity is wanted.
pub(crate) fn bare_number(number: &str, dimensions: &[Dimension], example: &str) -> UnitError {
    UnitError::new(format!("{number} has no unit"), format!("{}, as in \"{example}\"", wanted(dimensions)))
}

/// The SI value of a number with a unit.
pub(crate) fn parse(text: &str, dimensions: &[Dimension], example: &str) -> Result<f64, UnitError> {
    let shown = clip(text);
    let (value, rest) =
        number::leading(text).map_err(|fault| number_error(&shown, fault, dimensions, example))?;
    let form = normal_form(rest);
    if form.is_empty() {
        return Err(bare_number(&format!("\"{shown}\""), dimensions, example));
    }
    let unit = find(&form, dimensions)?;
    let si = unit.to_si(value);
    if si.is_finite() {
        Ok(si)
    } else {
        Err(number_error(&shown, NumberFault::TooLarge, dimensions, example))
    }
}

pub(crate) fn text_in(si: f64, unit: &str, dimensions: &[Dimension]) -> Result<String, UnitError> {
    let form = normal_form(unit);
    let found = find(&form, dimensions)?;
    let number = reading_back(si, &found).unwrap_or_else(|| number::with_digits(found.from_si(si), 17));
    Ok(named(&number, &found, &form))
}

pub(crate) fn to_text(si: f64, dimensions: &[Dimension]) -> String {
    let mut best: Option<String> = None;
    for dimension in dimensions {
        for name in dimension.written() {
            let Some(unit) = dimension.find(name) else { continue };
            let size = unit.from_si(si).abs();
            let readable = size == 0.0 || (1e-4..1e7).contains(&size);
            if !readable && !is_si(&unit) {
                continue;
            }
            let Some(number) = reading_back(si, &unit) else { continue };
            let text = named(&number, &unit, name);
            if best.as_ref().is_none_or(|b| text.chars().count() < b.chars().count()) {
                best = Some(text);
            }
        }
    }
    // Only infinities and NaN come here: an SI unit writes every other value.
    best.unwrap_or_else(|| si.to_string())
}

/// Whether numbers in this unit are the SI values themselves.
fn is_si(unit: &Unit) -> bool {
    unit.to_si(1.0).to_bits() == 1.0_f64.to_bits()
}

/// The number with the fewest digits that gives exactly this SI value in this unit.
fn reading_back(si: f64, unit: &Unit) -> Option<String> {
    if !si.is_finite() {
        return None;
    }
    let near = unit.from_si(si);
    let gives = |value: f64| unit.to_si(value).to_bits() == si.to_bits();
    for digits in 1..=17 {
        let text = number::with_digits(near, digits);
        if text.parse().is_ok_and(gives) {
            return Some(text);
        }
    }
    // Rounding of the two conversions may have led one or two doubles astray.
    let (down, up) = (near.next_down(), near.next_up());
    [down, up, down.next_down(), up.next_up()].into_iter().find(|v| gives(*v)).map(number::shortest)
}

fn named(number: &str, unit: &Unit, form: &str) -> String {
    let name = match (unit.name, number) {
        ("", _) => form,
        (_, "1") => unit.one,
        (name, _) => name,
    };
    format!("{number} {name}")
}

/// The unit of a form in normal spelling, of one of the wanted dimensions.
fn find(form: &str, dimensions: &[Dimension]) -> Result<Unit, UnitError> {
    if let Some(unit) = dimensions.iter().find_map(|d| d.find(form)) {
        return Ok(unit);
    }
    let shown = clip(form);
    if let Some(other) = Dimension::ALL.into_iter().find(|d| d.find(form).is_some()) {
        let what = other.with_article();
        return Err(UnitError::new(format!("{shown} is {what}"), wanted(dimensions)));
    }
    let remedy = match nearest(form, dimensions) {
        Some(near) => format!("perhaps {near}; {}", wanted(dimensions)),
        None => wanted(dimensions),
    };
    Err(UnitError::new(format!("there is no unit \"{shown}\""), remedy))
}

/// Whether a text is a unit, of whatever it measures.
pub(crate) fn is_unit(text: &str) -> bool {
    let form = normal_form(text);
    Dimension::ALL.into_iter().any(|dimension| dimension.find(&form).is_some())
}

/// The unit whose spelling is nearest, when it is near: one letter wrong in a short one, two in a long one.
fn nearest(form: &str, dimensions: &[Dimension]) -> Option<&'static str> {
    let long = form.chars().count();
    if !(2..=40).contains(&long) {
        return None;
    }
    let allowed = if long < 6 { 1 } else { 2 };
    let form = form.to_lowercase();
    dimensions
        .iter()
        .flat_map(|d| d.units())
        .flat_map(|u| [u.name, u.one].into_iter().chain(u.forms.iter().copied()).map(|f| (u.name, f)))
        .filter(|(_, f)| f.chars().count() > 1)
        .map(|(name, f)| (strsim::damerau_levenshtein(&f.to_lowercase(), &form), name))
        .filter(|(distance, _)| *distance <= allowed)
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, name)| name)
}

/// Spelling made uniform: single spaces, `^` before exponents, `/` for "per".
fn normal_form(unit: &str) -> String {
    let plain = unit.replace('²', "^2").replace('³', "^3").replace("**", "^");
    let words: Vec<&str> = plain.split_whitespace().collect();
    words.join(" ").replace(" per ", "/").replace(" / ", "/").replace(" /", "/").replace("/ ", "/")
}

fn number_error(shown: &str, fault: NumberFault, dimensions: &[Dimension], example: &str) -> UnitError {
    let wrong = match fault {
        NumberFault::None => format!("\"{shown}\" doesn't start with a number"),
        NumberFault::Comma => format!("\"{shown}\" has a comma in its number"),
        NumberFault::SpacedDigits => format!("\"{shown}\" has a space between its digits"),
        NumberFault::Underscore => format!("\"{shown}\" has an underscore that is not between two digits"),
        NumberFault::PowerOfTen => format!("\"{shown}\" has a power of ten written out"),
        NumberFault::TooLarge => format!("\"{shown}\" is too large a number"),
    };
    let remedy = match fault {
        NumberFault::None => format!("{}, as in \"{example}\"", wanted(dimensions)),
        NumberFault::Comma | NumberFault::SpacedDigits | NumberFault::Underscore => {
            "decimals follow a point, as in 0.6; thousands may be parted by underscores, as in 620_000"
                .to_owned()
        }
        NumberFault::PowerOfTen => "powers of ten are written with e, as in 3e8".to_owned(),
        NumberFault::TooLarge => "numbers go up to about 1e308".to_owned(),
    };
    UnitError::new(wrong, remedy)
}

/// Text short enough for a message, without control characters.
pub(crate) fn clip(text: &str) -> String {
    const LONGEST: usize = 40;
    let mut short: String =
        text.chars().map(|c| if c.is_control() { '\u{fffd}' } else { c }).take(LONGEST).collect();
    if text.chars().count() > LONGEST {
        short.push('…');
    }
    short
}
