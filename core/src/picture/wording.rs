//! Numbers as an audience reads them in its language: grouped, rounded, with words for units.

use super::words::{Language, fill};
use crate::math::float;
use crate::time::Epoch;

const AU_M: f64 = 149_597_870_700.0;
const DAY_S: f64 = 86_400.0;
const YEAR_S: f64 = 365.25 * DAY_S;

/// A number with so many decimals, thousands grouped, with a true minus sign. "–" where it is none.
pub fn grouped(l: &Language, value: f64, decimals: usize) -> String {
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
        if i > 0 && (whole.len() - i) % 3 == 0 && whole.len() >= l.parted_from {
            text.push(l.thousands);
        }
        text.push(digit);
    }
    if let Some(rest) = rest {
        text.push(l.decimal);
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
pub fn significant(l: &Language, value: f64, digits: i32) -> String {
    grouped(l, value, decimals(value, digits))
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

    /// Its words after a number.
    fn words(self, l: &Language, number: &str) -> &'static str {
        match self {
            Self::Metre => "m",
            Self::Kilometre => "km",
            Self::MillionKilometres => l.form(l.million_km, number),
            Self::Au => l.au,
        }
    }

    /// A round length in it, without needless decimals.
    pub fn say_round(self, l: &Language, length_m: f64) -> String {
        let number = round_number(l, length_m / self.metres());
        format!("{number} {}", self.words(l, &number))
    }

    /// A length in it, with the decimals that fit the largest one.
    pub fn say(self, l: &Language, length_m: f64, largest_m: f64) -> String {
        let number = grouped(l, length_m / self.metres(), decimals(largest_m / self.metres(), 3));
        format!("{number} {}", self.words(l, &number))
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
    pub fn say(self, l: &Language, speed_m_s: f64, largest_m_s: f64) -> String {
        let (unit, words) = self.of();
        // Four figures and a rest that flickers say nothing more: hundreds of km/h are enough.
        let coarse = if largest_m_s / unit >= 1e5 { 100.0 } else { 1.0 };
        let value = (speed_m_s / unit / coarse).round() * coarse;
        let places = decimals(largest_m_s / unit, 3);
        format!("{} {words}", grouped(l, if places == 0 { value } else { speed_m_s / unit }, places))
    }

    /// A round speed that is at most so large: its size in m/s, and its words.
    pub fn round_below(self, l: &Language, most_m_s: f64) -> (f64, String) {
        let (unit, words) = self.of();
        let round = round_below(most_m_s / unit);
        (round * unit, format!("{} {words}", round_number(l, round)))
    }
}

/// A round acceleration: m/s², or thousandths and millionths of it.
pub fn pull_round(l: &Language, m_s2: f64) -> String {
    match m_s2 {
        a if a >= 0.01 => format!("{} m/s²", round_number(l, a)),
        a if a >= 1e-5 => format!("{} mm/s²", round_number(l, a * 1e3)),
        a => format!("{} µm/s²", round_number(l, a * 1e6)),
    }
}

/// A number of one or two digits, without zeros after its last one.
fn round_number(l: &Language, value: f64) -> String {
    let places = decimals(value, 2);
    let text = grouped(l, value, places);
    if places > 0 { text.trim_end_matches('0').trim_end_matches(l.decimal).to_owned() } else { text }
}

/// The index of a unit of time in [`Language::times`] and its length, s.
const TIMES: [(usize, f64); 5] = [(4, YEAR_S), (3, DAY_S), (2, 3600.0), (1, 60.0), (0, 1.0)];

/// A span of time, three digits, in the unit that fits the largest one.
pub fn span(l: &Language, seconds: f64, largest_s: f64) -> String {
    let (name, unit) = match largest_s.abs() {
        s if s >= 1.5 * YEAR_S => TIMES[0],
        s if s >= 2.0 * DAY_S => TIMES[1],
        s if s >= 3.0 * 3600.0 => TIMES[2],
        s if s >= 120.0 => TIMES[3],
        _ => TIMES[4],
    };
    // A year that wavers about one ("0.999", "1.00") keeps its digits.
    let value = seconds / unit;
    let number = grouped(l, value, decimals(1.04 * value, 3));
    format!("{number} {}", l.form(l.times[name], &number))
}

/// A pace as people say it: "12 days a second". Standing still has words of its own.
pub fn pace(l: &Language, seconds_per_second: f64) -> String {
    let p = seconds_per_second;
    if p.is_nan() || p.abs() < 1e-3 {
        return l.still.into();
    }
    if (p - 1.0).abs() < 0.005 {
        return l.real_time.into();
    }
    let (name, unit) = TIMES.into_iter().find(|(_, unit)| p.abs() >= 0.995 * unit).unwrap_or(TIMES[4]);
    let mut number = significant(l, p / unit, 2);
    if let Some(whole) = number.strip_suffix('0').and_then(|n| n.strip_suffix(l.decimal)) {
        number = whole.to_owned();
    }
    fill(l.a_second, &format!("{number} {}", l.form(l.times[name], &number)))
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
pub fn date(l: &Language, epoch: Epoch, grain: Grain) -> String {
    let c = epoch.utc();
    let month = l.months.get(usize::from(c.month).wrapping_sub(1)).copied().unwrap_or("");
    let day = if c.day == 1 { l.first.to_owned() } else { c.day.to_string() };
    let put =
        |phrase: &str| phrase.replace("{d}", &day).replace("{m}", month).replace("{y}", &c.year.to_string());
    let day = put(l.day);
    match grain {
        Grain::Month => put(l.month),
        Grain::Day => day,
        Grain::Minute => format!("{day}, {:02}:{:02}", c.hour, c.minute),
        Grain::Second => format!("{day}, {:02}:{:02}:{:02.0}", c.hour, c.minute, c.second.floor()),
    }
}

/// Model time since the start, where the scenario has no date: "day 123", "2 h 05 min", "1 min 09 s".
pub fn since_start(l: &Language, t_s: f64, grain: Grain) -> String {
    let sign = if t_s < 0.0 { "−" } else { "" };
    let t = t_s.abs();
    match grain {
        Grain::Month if t >= 3.0 * YEAR_S => {
            fill(l.nth_year, &format!("{sign}{}", grouped(l, (t / YEAR_S).floor(), 0)))
        }
        Grain::Month | Grain::Day => {
            fill(l.nth_day, &format!("{sign}{}", grouped(l, (t / DAY_S).floor(), 0)))
        }
        Grain::Minute => {
            let minutes = (t / 60.0).floor();
            let (hours, rest) = ((minutes / 60.0).floor(), minutes % 60.0);
            format!("{sign}{} h {rest:02.0} min", grouped(l, hours, 0))
        }
        Grain::Second => {
            let seconds = t.floor();
            let (minutes, rest) = ((seconds / 60.0).floor(), seconds % 60.0);
            if minutes >= 60.0 {
                let hours = (minutes / 60.0).floor();
                format!("{sign}{} h {:02.0} min {rest:02.0} s", grouped(l, hours, 0), minutes % 60.0)
            } else {
                format!("{sign}{minutes:.0} min {rest:02.0} s")
            }
        }
    }
}

/// A common unit for areas up to the largest: its size in m², and its words.
pub fn area_unit(l: &Language, largest_m2: f64) -> (f64, &'static str) {
    match largest_m2 / 1e6 {
        a if a >= 1e18 => (1e24, l.areas[2]),
        a if a >= 1e12 => (1e18, l.areas[1]),
        a if a >= 1e6 => (1e12, l.areas[0]),
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
    use super::super::words::ENGLISH;
    use super::*;

    const EN: &Language = &ENGLISH;

    #[test]
    fn numbers_are_grouped() {
        assert_eq!(grouped(EN, 3245.2, 0), "3,245");
        assert_eq!(grouped(EN, -1_234_567.891, 2), "−1,234,567.89");
        assert_eq!(grouped(EN, -0.001, 1), "0.0");
        assert_eq!(grouped(EN, f64::NAN, 1), "–");
        assert_eq!(significant(EN, 0.4236, 3), "0.424");
        assert_eq!(significant(EN, 9.999, 3), "10.0");
        assert_eq!(significant(EN, 149.6, 3), "150");
    }

    #[test]
    fn units_fit() {
        assert_eq!(LengthUnit::upto(2e11, false).say(EN, 1.5e11, 2e11), "150 million km");
        assert_eq!(LengthUnit::upto(2e11, true).say(EN, 1.5e11, 2e11), "1.00 au");
        assert_eq!(LengthUnit::upto(4e5, false).say(EN, 2e5, 4e5), "200 km");
        assert_eq!(SpeedUnit::KilometresASecond.say(EN, 29_784.0, 40_000.0), "29.8 km/s");
        assert_eq!(SpeedUnit::KilometresAnHour.say(EN, 59_800.0, 59_800.0), "215,300 km/h");
        assert_eq!(SpeedUnit::KilometresAnHour.say(EN, 0.0, 0.0), "0 km/h");
        assert_eq!(span(EN, 365.25 * 86_400.0, 365.25 * 86_400.0), "365 days");
        assert_eq!(span(EN, 365.25 * 86_400.0, 1e9), "1.00 year");
        assert_eq!(span(EN, 5280.0, 5280.0), "88.0 minutes");
        assert_eq!(area_unit(EN, 3.245e21), (1e18, "million million km²"));
    }

    #[test]
    fn pace_is_said_plainly() {
        assert_eq!(pace(EN, 12.0 * 86_400.0), "12 days a second");
        assert_eq!(pace(EN, 86_400.0), "1 day a second");
        assert_eq!(pace(EN, 0.73 * 86_400.0), "18 hours a second");
        assert_eq!(pace(EN, 1.0), "as fast as it is");
        assert_eq!(pace(EN, 0.0), "time stands still");
        assert_eq!(pace(EN, f64::NAN), "time stands still");
        assert_eq!(pace(EN, 0.5), "0.50 seconds a second");
    }

    #[test]
    fn dates_and_days() {
        let epoch = Epoch::parse_utc("2031-09-01T14:05:07Z").unwrap();
        assert_eq!(date(EN, epoch, Grain::Day), "1 September 2031");
        assert_eq!(date(EN, epoch, Grain::Minute), "1 September 2031, 14:05");
        assert_eq!(since_start(EN, 123.4 * 86_400.0, Grain::Day), "day 123");
        assert_eq!(since_start(EN, 7500.0, Grain::Minute), "2 h 05 min");
        assert_eq!(since_start(EN, 69.2, Grain::Second), "1 min 09 s");
    }

    #[test]
    fn round_lengths() {
        for (value, want) in [(160.0, 150.0), (9.9, 7.5), (1.0, 1.0), (0.023, 0.02), (4.9, 3.0)] {
            assert!((round_below(value) - want).abs() < 1e-9 * want, "{value}: {}", round_below(value));
        }
    }

    #[test]
    fn every_language_writes_numbers_and_dates_in_its_way() {
        let first = Epoch::parse_utc("2031-09-01T14:05:07Z").unwrap();
        let later = Epoch::parse_utc("2031-03-08T14:05:07Z").unwrap();
        for (tag, number, small, one, month, day, pace_of, length) in [
            (
                "en",
                "215,000.5",
                "3,245",
                "1 September 2031",
                "March 2031",
                "8 March 2031",
                "1 day a second",
                "1.00 au",
            ),
            (
                "es",
                "215\u{2009}000,5",
                "3245",
                "1 de septiembre de 2031",
                "marzo de 2031",
                "8 de marzo de 2031",
                "1 día por segundo",
                "1,00 ua",
            ),
            (
                "de",
                "215.000,5",
                "3.245",
                "1. September 2031",
                "März 2031",
                "8. März 2031",
                "1 Tag pro Sekunde",
                "1,00 AE",
            ),
            (
                "fr",
                "215\u{2009}000,5",
                "3\u{2009}245",
                "1er septembre 2031",
                "mars 2031",
                "8 mars 2031",
                "1 jour par seconde",
                "1,00 ua",
            ),
        ] {
            let l = Language::of(tag);
            assert_eq!(grouped(l, 215_000.5, 1), number);
            assert_eq!(grouped(l, 3245.0, 0), small);
            assert_eq!(date(l, first, Grain::Day), one);
            assert_eq!(date(l, later, Grain::Month), month);
            assert_eq!(date(l, later, Grain::Day), day);
            assert_eq!(pace(l, DAY_S), pace_of);
            assert_eq!(LengthUnit::Au.say(l, AU_M, AU_M), length);
        }
    }

    #[test]
    fn round_numbers_keep_their_zeros_before_the_decimal_sign() {
        for (tag, want) in [("en", "1,500 km"), ("de", "1.500 km"), ("es", "1500 km")] {
            assert_eq!(LengthUnit::Kilometre.say_round(Language::of(tag), 1.5e6), want);
        }
        assert_eq!(LengthUnit::Au.say_round(Language::of("fr"), 0.5 * AU_M), "0,5 ua");
        assert_eq!(LengthUnit::MillionKilometres.say_round(Language::of("es"), 1e9), "1 millón de km");
    }

    #[test]
    fn a_year_that_wavers_keeps_its_digits() {
        assert_eq!(span(EN, 0.9992 * YEAR_S, 1e9), "1.00 year");
        assert_eq!(span(EN, 1.0004 * YEAR_S, 1e9), "1.00 year");
        assert_eq!(span(EN, 0.615 * YEAR_S, 1e9), "0.615 years");
    }
}
