//! The place in the show that is kept, so that a reload or a power cut loses nothing.
//!
//! Three entries: the text (once), the place (each second), and the last picture (now and then, it is larger).

use crate::dom::{self, DomError};
use crate::drawing::Drawing;
use fallaround_core::show::Bookmark;
use serde::{Deserialize, Serialize};

const TEXT: &str = "fallaround.text";
const PLACE: &str = "fallaround.place";
const PICTURE: &str = "fallaround.picture";

/// A show that was being presented less than this ago is gone on with at once, without asking, ms.
pub const AT_ONCE_MS: f64 = 15.0 * 60.0 * 1000.0;

/// A scenario's text and the name it came under.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize)]
pub struct Source {
    /// The file's name.
    pub name: String,
    /// The text.
    pub text: String,
}

impl Source {
    /// The same with the day of opening written in, where the text asks for it. A kept text has its day already.
    pub fn dated(self, now_ms: f64) -> Self {
        let text = fallaround_core::scenario::dated(&self.text, now_ms / 1000.0).into_owned();
        Self { name: self.name, text }
    }
}

/// A place in a show.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Place {
    /// Title of the show.
    pub title: String,
    /// Where the clock is.
    #[serde(with = "KeptBookmark")]
    pub mark: Bookmark,
    /// How many beats there are.
    pub beats: usize,
    /// Planned show time up to here, seconds.
    pub into_s: f64,
    /// Planned show time from here, seconds.
    pub left_s: f64,
    /// The model's date or day, as people read it.
    pub model: String,
    /// Whether the house was black.
    pub blackout: bool,
    /// The language in which the audience read.
    #[serde(default)]
    pub language: Option<String>,
    /// Whether the words to say were open.
    pub words: bool,
    /// Whether it was being presented, rather than left.
    pub presenting: bool,
    /// When, wall clock, ms.
    pub kept_ms: f64,
}

/// How a [`Bookmark`] is kept; core has no serde.
#[derive(Serialize, Deserialize)]
#[serde(remote = "Bookmark")]
struct KeptBookmark {
    beat: usize,
    beat_s: f64,
    from_s: f64,
    first_pace: f64,
    beat_from_s: f64,
    run_from_s: f64,
    held: bool,
    waiting: bool,
    speed: i32,
    lead_s: f64,
}

/// The last show: its text, its place and, where it was kept, its picture.
#[derive(Debug, Clone, PartialEq)]
pub struct LastShow {
    /// The text.
    pub source: Source,
    /// The place.
    pub place: Place,
    /// The picture at that place.
    pub picture: Option<Drawing>,
}

impl LastShow {
    /// What was kept; `None` when nothing was, or by a build that kept it otherwise.
    pub fn read() -> Option<Self> {
        let source = serde_json::from_str(&dom::kept(TEXT)?).ok()?;
        let place = serde_json::from_str(&dom::kept(PLACE)?).ok()?;
        let picture = dom::kept(PICTURE).and_then(|text| serde_json::from_str(&text).ok());
        Some(Self { source, place, picture })
    }

    /// Whether it was interrupted so lately that the audience is still there.
    pub fn goes_on_at_once(&self, now_ms: f64) -> bool {
        let ago_ms = now_ms - self.place.kept_ms;
        self.place.presenting && (0.0..AT_ONCE_MS).contains(&ago_ms)
    }
}

/// Keeps a text.
///
/// # Errors
/// When the browser keeps nothing for this page.
pub fn keep_source(source: &Source) -> Result<(), DomError> {
    keep(TEXT, source)
}

/// Keeps a place.
///
/// # Errors
/// When the browser keeps nothing for this page.
pub fn keep_place(place: &Place) -> Result<(), DomError> {
    keep(PLACE, place)
}

/// Keeps a picture.
///
/// # Errors
/// When the browser keeps nothing for this page.
pub fn keep_picture(picture: &Drawing) -> Result<(), DomError> {
    keep(PICTURE, picture)
}

fn keep<T: Serialize>(key: &str, value: &T) -> Result<(), DomError> {
    let text = serde_json::to_string(value)
        .map_err(|error| DomError::new("writing the place down", &error.to_string().into()))?;
    dom::keep(key, &text)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn place() -> Place {
        let mark = Bookmark {
            beat: 4,
            beat_s: 0.1 + 0.2,
            from_s: -1.0e9 / 3.0,
            first_pace: 63_072.000_000_000_01,
            beat_from_s: 5e-324,
            run_from_s: 0.0,
            held: true,
            waiting: false,
            speed: -2,
            lead_s: 0.0,
        };
        Place {
            title: "Equal areas".into(),
            mark,
            beats: 7,
            into_s: 580.0,
            left_s: 320.0,
            model: "6 August 2031".into(),
            blackout: false,
            language: Some("es".into()),
            words: false,
            presenting: true,
            kept_ms: 1e12,
        }
    }

    #[test]
    fn a_kept_place_is_the_same_to_the_bit() {
        let kept = serde_json::to_string(&place()).unwrap();
        assert_eq!(serde_json::from_str::<Place>(&kept).unwrap(), place());
    }

    #[test]
    fn only_a_show_just_interrupted_goes_on_by_itself() {
        let source = Source { name: "a.toml".into(), text: String::new() };
        let mut last = LastShow { source, place: place(), picture: None };
        assert!(last.goes_on_at_once(1e12 + 5_000.0));
        assert!(!last.goes_on_at_once(1e12 + AT_ONCE_MS + 1.0));
        assert!(!last.goes_on_at_once(1e12 - 5_000.0), "a clock that was set back proves nothing");
        last.place.presenting = false;
        assert!(!last.goes_on_at_once(1e12 + 5_000.0));
    }
}
