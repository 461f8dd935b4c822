//! Times and counts as people read them.

use fallaround_core::constants::DAY_S;
use fallaround_core::picture::wording::{self, Grain};
use fallaround_core::picture::words::Language;
use fallaround_core::time::Epoch;

/// Show time as "9:40"; below zero as "0:00".
pub fn minutes(seconds: f64) -> String {
    let whole = whole(seconds);
    format!("{}:{:02}", whole / 60, whole % 60)
}

/// A length for a list: "9 min", or "40 s" below a minute.
pub fn length(seconds: f64) -> String {
    let whole_s = whole(seconds);
    if whole_s < 60 { format!("{whole_s} s") } else { format!("{} min", (whole_s + 30) / 60) }
}

/// The model's date, or its time from the start where the scenario has no date, as the picture's foot line has it in English.
pub fn model_time(date: Option<Epoch>, model_s: f64) -> String {
    let english = Language::of("en");
    match date {
        Some(start) => wording::date(english, start.plus_s(model_s), Grain::Day),
        None if model_s.abs() < 2.0 * DAY_S => wording::since_start(english, model_s, Grain::Minute),
        None => wording::since_start(english, model_s, Grain::Day),
    }
}

/// A language by its own name; its tag where that is not known.
pub fn own_name(tag: &str) -> String {
    let name = match tag.split('-').next().unwrap_or(tag) {
        "en" => "English",
        "es" => "Español",
        "de" => "Deutsch",
        "fr" => "Français",
        "it" => "Italiano",
        "pt" => "Português",
        "nl" => "Nederlands",
        "pl" => "Polski",
        "cy" => "Cymraeg",
        "ga" => "Gaeilge",
        _ => tag,
    };
    name.to_owned()
}

/// Full seconds, none below zero.
fn whole(seconds: f64) -> u64 {
    let most = f64::from(u32::MAX);
    let floor = if seconds.is_nan() { 0.0 } else { seconds.clamp(0.0, most).floor() };
    // Between 0 and u32::MAX by the line above.
    format!("{floor:.0}").parse().unwrap_or(0)
}

/// A number of bytes for people: "50 MB".
pub fn bytes(count: f64) -> String {
    if count >= 1e6 { format!("{:.0} MB", count / 1e6) } else { format!("{:.0} kB", (count / 1e3).max(1.0)) }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn times_are_read_as_people_say_them() {
        assert_eq!(minutes(580.9), "9:40");
        assert_eq!(minutes(-3.0), "0:00");
        assert_eq!(minutes(f64::NAN), "0:00");
        assert_eq!(length(530.0), "9 min");
        assert_eq!(length(40.0), "40 s");
    }

    #[test]
    fn a_model_without_a_date_counts_its_days() {
        assert_eq!(model_time(None, 3.5 * 86_400.0), "day 3");
        assert_eq!(model_time(None, 5_400.0), "1 h 30 min");
    }

    #[test]
    fn a_model_with_a_date_says_it() {
        let start = Epoch::parse_utc("2031-03-05T20:00:00Z").unwrap();
        assert_eq!(model_time(Some(start), 86_400.0), "6 March 2031");
    }
}
