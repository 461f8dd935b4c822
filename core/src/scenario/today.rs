//! `date = "today"`: shows that are about the sky of the day on which they are opened.
//!
//! The core has no clock. Whoever opens a scenario knows the time and writes the day into the text, once, before
//! anything is made of it; from then on the date is as fixed as a written one, and so is the fingerprint.

use std::borrow::Cow;
use toml_edit::Document;

/// The text with the day of an instant, at 0 h UTC, in the place of a top-level `date = "today"`; any other text as it is.
///
/// `unix_s` is seconds since 1970-01-01 UTC, leap seconds not counted.
pub fn dated(text: &str, unix_s: f64) -> Cow<'_, str> {
    match Document::parse(text).ok().and_then(|document| {
        let item = document.get("date")?;
        (item.as_str() == Some("today")).then(|| item.span()).flatten()
    }) {
        Some(span) if unix_s.is_finite() => {
            let (year, month, day, ..) = hifitime::Epoch::from_unix_seconds(unix_s).to_gregorian_utc();
            let day = format!("\"{year:04}-{month:02}-{day:02}T00:00:00Z\"");
            match (text.get(..span.start), text.get(span.end..)) {
                (Some(before), Some(after)) => Cow::Owned([before, &day, after].concat()),
                _ => Cow::Borrowed(text),
            }
        }
        _ => Cow::Borrowed(text),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// 2026-12-01T13:45:00Z, from `date -u -d 2026-12-01T13:45:00Z +%s`.
    const NOW_UNIX_S: f64 = 1_796_132_700.0;

    #[test]
    fn the_day_takes_the_place_of_the_word_and_nothing_else_changes() {
        let text = "format = 1\ndate = \"today\"  # when it is opened\n[[body]]\nname = \"today\"\n";
        let dated = dated(text, NOW_UNIX_S);
        assert_eq!(dated, text.replacen("\"today\"", "\"2026-12-01T00:00:00Z\"", 1));
    }

    #[test]
    fn every_other_text_stays() {
        for text in ["date = \"2031-03-05\"", "[a]\ndate = \"today\"", "not toml = = ", "", "date = 7"] {
            assert_eq!(dated(text, NOW_UNIX_S), text);
        }
        assert_eq!(dated("date = \"today\"", f64::NAN), "date = \"today\"");
    }
}
