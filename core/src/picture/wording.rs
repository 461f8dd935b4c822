//! Numbers as an audience reads them: grouped, rounded, with words for units.

use crate::math::float;
use crate::time::Epoch;

const AU_M: f64 = 149_597_870_700.0;
const DAY_S: f64 = 86_400.0;
const YEAR_S: f64 = 365.25 * DAY_S;

const MONTHS: [&str; 12] = [
    "January",
    "February",
    "March",
    "April",
    "May",
    "June",
    "July",
    "August",
    "September",
    "October",
    "November",
    "December",
];

/// A number with so many decimals, thousands grouped by commas, with a true minus sign. "–" where it is none.
pub fn grouped(value: f64, decimals: usize) -> String {
    if !value.is_finite() {
        return "–".into();
    }
    let plain = format!("{:.*}", decimals, value.abs());
    let (whole, rest) = plain.split_once('.').map_or((plain.as_str(), None), |(w, r)| (w, Some(r)));
    let mut text = String::new();
    if value < 0.0 && plain.bytes().any(|b| (b'1'..=b'9').contains(&b)) {
        text.push('−');
    }
    for (i, digit) in whole.chars().enumerate() {
        if i > 0 && (whole.len() - i) % 3 == 0 {
            text.push(',');
        }
        text.push(digit);
    }
    if let Some(rest) = rest {
        text.push('.');
        text.push_str(rest);
    }
    text
}

/// Decimals with which a number has at least so many significant digits, at most 6.
pub fn decimals(value: f64, digits: i32) -> usize {
    if !(value.abs() > 0.0 && value.is_finite()) {
        return 0;
    }
    // Rounding may carry into the next power of ten ("9.996" has to become "10.0", not "10.00").
    let power = float::log10(value.abs() * (1.0 + 0.5 * float::pow(10.0, -f64::from(digits)))).floor();
    (0..=6)
        .find(|&d| f64::from(d) >= f64::from(digits) - 1.0 - power)
        .map_or(6, |d| usize::try_from(d).unwrap_or(6))
}

/// A number with so many significant digits.
pub fn significant(value: f64, digits: i32) -> String {
    grouped(value, decimals(value, digits))
}

/// The units in which lengths are said.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum LengthUnit {
    /// Metres.
    Metre,
    /// Kilometres.
    Kilometre,
    /// Millions of kilometres.
    MillionKilometres,
    /// Astronomical units.
    Au,
}

impl LengthUnit {
    /// The unit for lengths up to this one, m.
    pub fn upto(largest_m: f64, in_au: bool) -> Self {
        match largest_m {
            l if in_au && l >= 0.1 * AU_M => Self::Au,
            l if l >= 1e9 => Self::MillionKilometres,
            l if l >= 2e3 => Self::Kilometre,
            _ => Self::Metre,
        }
    }

    /// Its length, m.
    pub const fn metres(self) -> f64 {
        match self {
            Self::Metre => 1.0,
            Self::Kilometre => 1e3,
            Self::MillionKilometres => 1e9,
            Self::Au => AU_M,
        }
    }

    /// Its words.
    pub const fn words(self) -> &'static str {
        match self {
            Self::Metre => "m",
            Self::Kilometre => "km",
            Self::MillionKilometres => "million km",
            Self::Au => "au",
        }
    }

    /// A round length in it, without needless decimals.
    pub fn say_round(self, length_m: f64) -> String {
        format!("{} {}", round_number(length_m / self.metres()), self.words())
    }

    /// A length in it, with the decimals that fit the largest one.
    pub fn say(self, length_m: f64, largest_m: f64) -> String {
        let number = grouped(length_m / self.metres(), decimals(largest_m / self.metres(), 3));
        format!("{number} {}", self.words())
    }
}

/// The units in which speeds are said.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SpeedUnit {
    /// Kilometres a second: what worlds do.
    KilometresASecond,
    /// Kilometres an hour: what is thrown, and what can be compared with things that people ride in.
    KilometresAnHour,
}

impl SpeedUnit {
    const fn of(self) -> (f64, &'static str) {
        match self {
            Self::KilometresASecond => (1000.0, "km/s"),
            Self::KilometresAnHour => (1000.0 / 3600.0, "km/h"),
        }
    }

    /// A speed, with the decimals that fit the largest one.
    pub fn say(self, speed_m_s: f64, largest_m_s: f64) -> String {
        let (unit, words) = self.of();
        // Four figures and a rest that flickers say nothing more: hundreds of km/h are enough.
        let coarse = if largest_m_s / unit >= 1e5 { 100.0 } else { 1.0 };
        let value = (speed_m_s / unit / coarse).round() * coarse;
        let places = decimals(largest_m_s / unit, 3);
        format!("{} {words}", grouped(if places == 0 { value } else { speed_m_s / unit }, places))
    }

    /// A round speed that is at most so large: its size in m/s, and its words.
    pub fn round_below(self, most_m_s: f64) -> (f64, String) {
        let (unit, words) = self.of();
        let round = round_below(most_m_s / unit);
        (round * unit, format!("{} {words}", round_number(round)))
    }
}

/// A round acceleration: m/s², or thousandths and millionths of it.
pub fn pull_round(m_s2: f64) -> String {
    match m_s2 {
        a if a >= 0.01 => format!("{} m/s²", round_number(a)),
        a if a >= 1e-5 => format!("{} mm/s²", round_number(a * 1e3)),
        a => format!("{} µm/s²", round_number(a * 1e6)),
    }
}

/// A number of one or two digits, without zeros after its last one.
fn round_number(value: f64) -> String {
    let text = grouped(value, decimals(value, 2));
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}

/// A span of time, three digits, in the unit that fits the largest one.
pub fn span(seconds: f64, largest_s: f64) -> String {
    let (unit, one, many) = match largest_s.abs() {
        s if s >= 1.5 * YEAR_S => (YEAR_S, "year", "years"),
        s if s >= 2.0 * DAY_S => (DAY_S, "day", "days"),
        s if s >= 3.0 * 3600.0 => (3600.0, "hour", "hours"),
        s if s >= 120.0 => (60.0, "minute", "minutes"),
        _ => (1.0, "second", "seconds"),
    };
    let number = significant(seconds / unit, 3);
    let words = if number.trim_end_matches('0').trim_end_matches('.') == "1" { one } else { many };
    format!("{number} {words}")
}

/// A pace as people say it: "12 days a second". Standing still has words of its own.
pub fn pace(seconds_per_second: f64) -> String {
    let p = seconds_per_second;
    if p.is_nan() || p.abs() < 1e-3 {
        return "time stands still".into();
    }
    if (p - 1.0).abs() < 0.005 {
        return "as fast as it is".into();
    }
    let (unit, one, many) = [
        (YEAR_S, "year", "years"),
        (DAY_S, "day", "days"),
        (3600.0, "hour", "hours"),
        (60.0, "minute", "minutes"),
    ]
    .into_iter()
    .find(|(unit, ..)| p.abs() >= 0.995 * unit)
    .unwrap_or((1.0, "second", "seconds"));
    let value = p / unit;
    let mut number = significant(value, 2);
    if number.ends_with(".0") {
        number.truncate(number.len() - 2);
    }
    let words = if number == "1" { one } else { many };
    format!("{number} {words} a second")
}

/// How finely model time is told.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Grain {
    /// To the month.
    Month,
    /// To the day.
    Day,
    /// To the minute.
    Minute,
    /// To the second.
    Second,
}

impl Grain {
    /// What can still be read at a pace, model seconds a second.
    pub fn at_pace(pace: f64) -> Self {
        match pace.abs() / DAY_S {
            p if p > 45.0 => Self::Month,
            p if p > 0.2 => Self::Day,
            p if p > 0.001 => Self::Minute,
            _ => Self::Second,
        }
    }
}

impl Grain {
    /// The same, but never coarser than a day: what can be read while the model stands still.
    pub const fn min_day(self) -> Self {
        match self {
            Self::Month => Self::Day,
            finer => finer,
        }
    }
}

/// The model's date: "1 September 2031", with the time of day (UTC) where time goes slowly.
pub fn date(epoch: Epoch, grain: Grain) -> String {
    let c = epoch.utc();
    let month = MONTHS.get(usize::from(c.month).wrapping_sub(1)).copied().unwrap_or("");
    match grain {
        Grain::Month => format!("{month} {}", c.year),
        Grain::Day => format!("{} {month} {}", c.day, c.year),
        Grain::Minute => format!("{} {month} {}, {:02}:{:02}", c.day, c.year, c.hour, c.minute),
        Grain::Second => {
            format!("{} {month} {}, {:02}:{:02}:{:02.0}", c.day, c.year, c.hour, c.minute, c.second.floor())
        }
    }
}

/// Model time since the start, where the scenario has no date: "day 123", "2 h 05 min", "1 min 09 s".
pub fn since_start(t_s: f64, grain: Grain) -> String {
    let sign = if t_s < 0.0 { "−" } else { "" };
    let t = t_s.abs();
    match grain {
        Grain::Month if t >= 3.0 * YEAR_S => format!("year {sign}{}", grouped((t / YEAR_S).floor(), 0)),
        Grain::Month | Grain::Day => format!("day {sign}{}", grouped((t / DAY_S).floor(), 0)),
        Grain::Minute => {
            let minutes = (t / 60.0).floor();
            let (hours, rest) = ((minutes / 60.0).floor(), minutes % 60.0);
            format!("{sign}{} h {rest:02.0} min", grouped(hours, 0))
        }
        Grain::Second => {
            let seconds = t.floor();
            let (minutes, rest) = ((seconds / 60.0).floor(), seconds % 60.0);
            if minutes >= 60.0 {
                let hours = (minutes / 60.0).floor();
                format!("{sign}{} h {:02.0} min {rest:02.0} s", grouped(hours, 0), minutes % 60.0)
            } else {
                format!("{sign}{minutes:.0} min {rest:02.0} s")
            }
        }
    }
}

/// A common unit for areas up to the largest: its size in m², and its words.
pub fn area_unit(largest_m2: f64) -> (f64, &'static str) {
    match largest_m2 / 1e6 {
        a if a >= 1e18 => (1e24, "million million million km²"),
        a if a >= 1e12 => (1e18, "million million km²"),
        a if a >= 1e6 => (1e12, "million km²"),
        a if a >= 1.0 => (1e6, "km²"),
        _ => (1.0, "m²"),
    }
}

/// The largest of 1, 2, 5 times a power of ten (or 1.5 times one) that is not above a positive number.
pub fn round_below(value: f64) -> f64 {
    if !(value > 0.0 && value.is_finite()) {
        return 0.0;
    }
    let power = float::pow(10.0, float::log10(value).floor());
    [7.5, 5.0, 3.0, 2.0, 1.5, 1.0]
        .into_iter()
        .map(|m| m * power)
        .find(|&r| r <= value * (1.0 + 1e-12))
        .unwrap_or(power)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_grouped() {
        assert_eq!(grouped(3245.2, 0), "3,245");
        assert_eq!(grouped(-1_234_567.891, 2), "−1,234,567.89");
        assert_eq!(grouped(-0.001, 1), "0.0");
        assert_eq!(grouped(f64::NAN, 1), "–");
        assert_eq!(significant(0.4236, 3), "0.424");
        assert_eq!(significant(9.999, 3), "10.0");
        assert_eq!(significant(149.6, 3), "150");
    }

    #[test]
    fn units_fit() {
        assert_eq!(LengthUnit::upto(2e11, false).say(1.5e11, 2e11), "150 million km");
        assert_eq!(LengthUnit::upto(2e11, true).say(1.5e11, 2e11), "1.00 au");
        assert_eq!(LengthUnit::upto(4e5, false).say(2e5, 4e5), "200 km");
        assert_eq!(SpeedUnit::KilometresASecond.say(29_784.0, 40_000.0), "29.8 km/s");
        assert_eq!(SpeedUnit::KilometresAnHour.say(59_800.0, 59_800.0), "215,300 km/h");
        assert_eq!(SpeedUnit::KilometresAnHour.say(0.0, 0.0), "0 km/h");
        assert_eq!(span(365.25 * 86_400.0, 365.25 * 86_400.0), "365 days");
        assert_eq!(span(365.25 * 86_400.0, 1e9), "1.00 year");
        assert_eq!(span(5280.0, 5280.0), "88.0 minutes");
        assert_eq!(area_unit(3.245e21), (1e18, "million million km²"));
    }

    #[test]
    fn pace_is_said_plainly() {
        assert_eq!(pace(12.0 * 86_400.0), "12 days a second");
        assert_eq!(pace(86_400.0), "1 day a second");
        assert_eq!(pace(0.73 * 86_400.0), "18 hours a second");
        assert_eq!(pace(1.0), "as fast as it is");
        assert_eq!(pace(0.0), "time stands still");
        assert_eq!(pace(f64::NAN), "time stands still");
        assert_eq!(pace(0.5), "0.50 seconds a second");
    }

    #[test]
    fn dates_and_days() {
        let epoch = Epoch::parse_utc("2031-09-01T14:05:07Z").unwrap();
        assert_eq!(date(epoch, Grain::Day), "1 September 2031");
        assert_eq!(date(epoch, Grain::Minute), "1 September 2031, 14:05");
        assert_eq!(since_start(123.4 * 86_400.0, Grain::Day), "day 123");
        assert_eq!(since_start(7500.0, Grain::Minute), "2 h 05 min");
        assert_eq!(since_start(69.2, Grain::Second), "1 min 09 s");
    }

    #[test]
    fn round_lengths() {
        for (value, want) in [(160.0, 150.0), (9.9, 7.5), (1.0, 1.0), (0.023, 0.02), (4.9, 3.0)] {
            assert!((round_below(value) - want).abs() < 1e-9 * want, "{value}: {}", round_below(value));
        }
    }
}
