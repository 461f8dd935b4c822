//! Numbers as people read them: few digits, in a unit of their size.

use crate::constants::{AU_M, DAY_S};
use crate::units::number::with_digits;

/// Digits that people read.
const DIGITS: usize = 5;

fn text(value: f64, units: &[(f64, &str)]) -> String {
    // The first unit of which there is at least one; else the last.
    let unit = units.iter().find(|(size, _)| value.abs() >= *size).or(units.last());
    unit.map_or_else(String::new, |(size, name)| format!("{} {name}", with_digits(value / size, DIGITS)))
}

pub(super) fn length_text(m: f64) -> String {
    // From a tenth of it on: people don't say "fifteen million kilometres" in digits.
    if m.abs() >= 0.1 * AU_M {
        return format!("{} au", with_digits(m / AU_M, DIGITS));
    }
    text(m, &[(1e3, "km"), (1.0, "m")])
}

pub(super) fn speed_text(m_s: f64) -> String {
    text(m_s, &[(1e3, "km/s"), (1.0, "m/s")])
}

pub(super) fn time_text(s: f64) -> String {
    text(s, &[(DAY_S, "d"), (3600.0, "h"), (60.0, "min"), (1.0, "s")])
}

pub(super) fn angle_text(rad: f64) -> String {
    format!("{} deg", with_digits(rad.to_degrees(), DIGITS))
}
