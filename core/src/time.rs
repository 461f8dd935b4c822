//! Instants of the model. There is no clock here.
//!
//! Inside, an instant is seconds of Barycentric Dynamical Time (TDB) past J2000. People write UTC. Between the two
//! stand the calendar and the leap seconds (from `hifitime`), 32.184 s, and the small periodic TDB − TT.
//! Before 1972, when leap seconds began, UTC is taken to run with International Atomic Time.

use crate::constants::{DAY_S, J2000_JD};
use crate::math::float;
use std::fmt;

/// An instant: seconds of TDB past J2000 (JD 2451545.0 TDB).
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Epoch {
    tdb_s: f64,
}

impl Epoch {
    /// From seconds of TDB past J2000.
    pub const fn from_tdb_s(tdb_s: f64) -> Self {
        Self { tdb_s }
    }

    /// Seconds of TDB past J2000.
    pub const fn tdb_s(self) -> f64 {
        self.tdb_s
    }

    /// From a Julian date of TDB, d. A double resolves about 40 µs of it.
    pub fn from_tdb_jd(jd: f64) -> Self {
        Self { tdb_s: (jd - J2000_JD) * DAY_S }
    }

    /// Julian date of TDB, d.
    pub fn tdb_jd(self) -> f64 {
        J2000_JD + self.tdb_s / DAY_S
    }

    /// The instant `seconds` later.
    pub fn plus_s(self, seconds: f64) -> Self {
        Self { tdb_s: self.tdb_s + seconds }
    }

    /// From UTC as people and RFC 3339 write it: "2031-03-05T20:00:00Z", a space for the T, seconds left out or
    /// with a fraction, or the date alone (midnight). Years 1 to 9999 of the Gregorian calendar.
    ///
    /// # Errors
    /// When the text is no such date, or the calendar has no such day.
    pub fn parse_utc(text: &str) -> Result<Self, TimeError> {
        let fields = Fields::read(text.trim())?;
        let epoch = hifitime::Epoch::maybe_from_gregorian_utc(
            fields.year,
            fields.month,
            fields.day,
            fields.hour,
            fields.minute,
            fields.second.min(59),
            fields.nanosecond,
        )
        .ok()
        .ok_or(TimeError::NoSuchDay)?;
        let since_j2000 = epoch.to_tt_since_j2k().total_nanoseconds();
        let (whole, part) = (since_j2000.div_euclid(NS_PER_S), since_j2000.rem_euclid(NS_PER_S));
        let leap_s = f64::from(fields.second.saturating_sub(59));
        let tt_s = whole as f64 + leap_s + part as f64 * 1e-9;
        Ok(Self { tdb_s: tt_s + tdb_minus_tt_s(tt_s) })
    }

    /// UTC by the Gregorian calendar, rounded to the millisecond. A leap second shows as the second after it.
    ///
    /// Instants more than two million years from J2000 show as that bound.
    pub fn utc(self) -> Calendar {
        const BOUND_S: f64 = 6.3e13;
        let tdb_s = if self.tdb_s.is_nan() { 0.0 } else { self.tdb_s.clamp(-BOUND_S, BOUND_S) };
        let tt_s = tdb_s - tdb_minus_tt_s(tdb_s);
        let whole_s = tt_s.floor();
        #[expect(clippy::cast_possible_truncation, reason = "both lie far inside an i64: bounded above")]
        let (whole, ms) = (whole_s as i64, ((tt_s - whole_s) * 1e3).round() as i64);
        let since_j2000 = hifitime::Unit::Second * whole + hifitime::Unit::Millisecond * ms;
        let utc = hifitime::Epoch::from_tt_duration(since_j2000 + hifitime::Unit::Second * J2000_PAST_1900_S);
        let (year, month, day, hour, minute, second, nanosecond) = utc.to_gregorian_utc();
        Calendar {
            year,
            month,
            day,
            hour,
            minute,
            second: f64::from(second) + f64::from(nanosecond / NS_PER_MS) / 1e3,
        }
    }

    /// UTC as RFC 3339 writes it, with milliseconds where there are any: "2031-03-05T20:00:00Z". Reads back to the
    /// same millisecond.
    pub fn to_utc_text(self) -> String {
        self.utc().to_string()
    }
}

/// Seconds from 1900-01-01T00:00, from where `hifitime` counts, to J2000: 36,524.5 d.
const J2000_PAST_1900_S: i64 = 3_155_716_800;
const NS_PER_S: i128 = 1_000_000_000;
const NS_PER_MS: u32 = 1_000_000;

/// TDB − TT at the centre of the Earth, s, for an instant given as seconds past J2000 (of either scale).
///
/// Right to about 10 µs between the years 1600 and 2200.
///
/// # Source
/// G. H. Kaplan, "The IAU Resolutions on Astronomical Reference Systems, Time Scales, and Earth Rotation Models",
/// USNO Circular 179 (2005), equation 2.6, after Fairhead & Bretagnon 1990, A&A 229, 240.
pub fn tdb_minus_tt_s(since_j2000_s: f64) -> f64 {
    /// Amplitude, s; frequency, rad a Julian century; phase, rad.
    const TERMS: [[f64; 3]; 6] = [
        [0.001_657, 628.307_6, 6.240_1],
        [0.000_022, 575.338_5, 4.297_0],
        [0.000_014, 1_256.615_2, 6.196_9],
        [0.000_005, 606.977_7, 4.021_2],
        [0.000_005, 52.969_1, 0.444_4],
        [0.000_002, 21.329_9, 5.543_1],
    ];
    let t = since_j2000_s / (36_525.0 * DAY_S);
    let mut sum = 0.0;
    for [amplitude, frequency, phase] in TERMS {
        sum += amplitude * float::sin(frequency * t + phase);
    }
    // The one term that grows is right for some centuries only; further away it stays as it is there.
    sum + 0.000_010 * t.clamp(-10.0, 10.0) * float::sin(628.307_6 * t + 4.249_0)
}

/// A date and time of day of the Gregorian calendar, UTC.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Calendar {
    /// Year; 0 is 1 BC.
    pub year: i32,
    /// Month, 1 to 12.
    pub month: u8,
    /// Day of the month, from 1.
    pub day: u8,
    /// Hour, 0 to 23.
    pub hour: u8,
    /// Minute, 0 to 59.
    pub minute: u8,
    /// Second with its milliseconds, 0 to below 60.
    pub second: f64,
}

impl fmt::Display for Calendar {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self { year, month, day, hour, minute, second } = self;
        write!(f, "{year:04}-{month:02}-{day:02}T{hour:02}:{minute:02}:")?;
        let text = format!("{second:06.3}");
        let text = text.trim_end_matches('0').trim_end_matches('.');
        // Two digits before the point stay, also where both are 0.
        write!(f, "{text:0<2}Z")
    }
}

/// Why a text is not an instant.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
pub enum TimeError {
    /// It is not written like a date.
    #[error("this is not a date as \"2031-03-05\" or \"2031-03-05T20:00:00Z\" is one")]
    NotADate,
    /// It states no zone, or another than UTC.
    #[error("the time of day doesn't end in Z: dates are UTC, as in \"2031-03-05T20:00:00Z\"")]
    NotUtc,
    /// The calendar has no such day, or the day no such time.
    #[error("the calendar has no such day or the day no such time")]
    NoSuchDay,
}

/// The numbers of a date, not yet asked whether they make sense together.
struct Fields {
    year: i32,
    month: u8,
    day: u8,
    hour: u8,
    minute: u8,
    second: u8,
    nanosecond: u32,
}

impl Fields {
    fn read(text: &str) -> Result<Self, TimeError> {
        let mut rest = text;
        let year = i32::from(take_number::<u16>(&mut rest, 4)?);
        take(&mut rest, &['-'])?;
        let month = take_number(&mut rest, 2)?;
        take(&mut rest, &['-'])?;
        let day = take_number(&mut rest, 2)?;
        let mut fields = Self { year, month, day, hour: 0, minute: 0, second: 0, nanosecond: 0 };
        if !rest.is_empty() {
            take(&mut rest, &['T', 't', ' '])?;
            fields.hour = take_number(&mut rest, 2)?;
            take(&mut rest, &[':'])?;
            fields.minute = take_number(&mut rest, 2)?;
            if take(&mut rest, &[':']).is_ok() {
                fields.second = take_number(&mut rest, 2)?;
                if take(&mut rest, &['.']).is_ok() {
                    fields.nanosecond = take_nanoseconds(&mut rest)?;
                }
            }
            if !matches!(rest, "Z" | "z") {
                return Err(TimeError::NotUtc);
            }
        }
        if year < 1 || fields.hour > 23 {
            return Err(TimeError::NoSuchDay);
        }
        // A 61st second is one only where the calendar has it.
        let valid =
            hifitime::is_gregorian_valid(year, month, day, fields.hour, fields.minute, fields.second, 0);
        if valid { Ok(fields) } else { Err(TimeError::NoSuchDay) }
    }
}

fn take(rest: &mut &str, any: &[char]) -> Result<(), TimeError> {
    *rest = rest.strip_prefix(any).ok_or(TimeError::NotADate)?;
    Ok(())
}

fn take_number<N: std::str::FromStr>(rest: &mut &str, digits: usize) -> Result<N, TimeError> {
    let (number, after) = rest.split_at_checked(digits).ok_or(TimeError::NotADate)?;
    if !number.bytes().all(|b| b.is_ascii_digit()) {
        return Err(TimeError::NotADate);
    }
    *rest = after;
    number.parse().ok().ok_or(TimeError::NotADate)
}

/// Digits after the point; those beyond the ninth say nothing here.
fn take_nanoseconds(rest: &mut &str) -> Result<u32, TimeError> {
    let end = rest.find(|c: char| !c.is_ascii_digit()).unwrap_or(rest.len());
    let (digits, after) = rest.split_at(end);
    if digits.is_empty() {
        return Err(TimeError::NotADate);
    }
    *rest = after;
    let nine: String = digits.chars().chain("000000000".chars()).take(9).collect();
    nine.parse().ok().ok_or(TimeError::NotADate)
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn utc_and_tdb_differ_by_leap_seconds_and_the_stated_constant() {
        // TT − UTC: 64.184 s in 1999 to 2005, 69.184 s since 2017 (IERS Bulletin C); TDB − TT stays below 2 ms.
        for (text, jd_utc, tt_minus_utc_s) in [
            ("2000-01-01T12:00:00Z", 2_451_545.0, 64.184),
            ("2031-03-05T20:00:00Z", 2_462_931.333_333_333, 69.184),
            ("2017-01-01", 2_457_754.5, 69.184),
            ("1972-01-01", 2_441_317.5, 42.184),
            ("1900-01-01T00:00Z", 2_415_020.5, 32.184),
        ] {
            let got = Epoch::parse_utc(text).unwrap().tdb_s();
            let want = (jd_utc - J2000_JD) * DAY_S + tt_minus_utc_s;
            // A Julian date in a double is good to 40 µs.
            assert!((got - want).abs() < 2e-3 + 4e-5, "{text}: got {got}, want {want}");
        }
    }

    #[test]
    fn tdb_minus_tt_has_its_known_size() {
        // The check value of the SOFA library's `dtdb` (787 terms of the same theory), for JD 2448939.623 TDB; its
        // observer's place on the Earth adds 2 µs, the truncation of this formula 10 µs.
        let got = tdb_minus_tt_s((2_448_939.623 - J2000_JD) * DAY_S);
        assert!((got + 1.280_368e-3).abs() < 1.2e-5, "{got}");
        for year in -400..400 {
            assert!(tdb_minus_tt_s(f64::from(year) * 3.155_76e7 + 8e6).abs() < 1.76e-3);
        }
    }

    #[test]
    fn what_is_no_instant_is_refused() {
        for (text, want) in [
            ("", TimeError::NotADate),
            ("tomorrow", TimeError::NotADate),
            ("2031-3-5", TimeError::NotADate),
            ("2031-03-05T20:00:00", TimeError::NotUtc),
            ("2031-03-05T20:00:00+01:00", TimeError::NotUtc),
            ("2031-02-29", TimeError::NoSuchDay),
            ("2031-13-01", TimeError::NoSuchDay),
            ("2031-03-05T24:00Z", TimeError::NoSuchDay),
            ("2031-03-05T23:59:60Z", TimeError::NoSuchDay),
            ("2031-03-05T20:00:00.Z", TimeError::NotADate),
            ("２０31-03-05", TimeError::NotADate),
            ("0000-01-01", TimeError::NoSuchDay),
        ] {
            assert_eq!(Epoch::parse_utc(text), Err(want), "{text}");
        }
    }

    #[test]
    fn a_leap_second_lasts_a_second() {
        let at = |text| Epoch::parse_utc(text).unwrap().tdb_s();
        let before = at("2016-12-31T23:59:59Z");
        assert!((at("2016-12-31T23:59:60Z") - before - 1.0).abs() < 1e-6);
        assert!((at("2017-01-01T00:00:00Z") - before - 2.0).abs() < 1e-6);
    }

    #[test]
    fn julian_dates_go_both_ways() {
        let epoch = Epoch::from_tdb_jd(2_462_931.25);
        assert_eq!(epoch.tdb_jd().to_bits(), 2_462_931.25_f64.to_bits());
        assert_eq!(epoch.tdb_s().to_bits(), (11_386.25 * DAY_S).to_bits());
    }

    proptest! {
        #[test]
        fn text_reads_back_to_the_same_text(
            year in 1583..2600, month in 1..=12, day in 1..=28, hour in 0..24, minute in 0..60, second in 0..60,
            ms in 0..1000,
        ) {
            let text = format!("{year:04}-{month:02}-{day:02}T{hour:02}:{minute:02}:{second:02}.{ms:03}Z");
            let epoch = Epoch::parse_utc(&text).unwrap();
            let back = epoch.to_utc_text();
            let full = epoch.utc();
            prop_assert_eq!(
                format!(
                    "{:04}-{:02}-{:02}T{:02}:{:02}:{:06.3}Z",
                    full.year, full.month, full.day, full.hour, full.minute, full.second
                ),
                text
            );
            prop_assert_eq!(Epoch::parse_utc(&back).unwrap(), epoch);
        }

        #[test]
        fn no_instant_and_no_text_panics(bits in any::<u64>(), text in "\\PC{0,24}") {
            let shown = Epoch::from_tdb_s(f64::from_bits(bits)).to_utc_text();
            prop_assert!(shown.ends_with('Z'));
            prop_assert!(Epoch::parse_utc(&text).map_or(true, |e| e.tdb_s().is_finite()));
        }
    }
}
