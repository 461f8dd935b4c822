//! `[[beat]]`: the steps of the talk.

use super::super::model::{Beat, Caption, Cast, Mark};
use super::super::names::Names;
use super::super::reader::{Field, Reading, kind_of, tidy_text};
use super::{clock, marks, view};
use crate::time::Epoch;
use crate::units::text::clip;

/// What beats refer to.
pub(super) struct Around<'a> {
    /// The bodies.
    pub(super) names: &'a Names,
    /// The language of captions that state none.
    pub(super) language: &'a str,
    /// The scenario's date: `Some(None)` when it is stated wrongly.
    pub(super) date: Option<Option<Epoch>>,
}

/// Reads all beats, in order; views and marks go on from one to the next.
pub(super) fn read(sections: &[Reading<'_>], around: &Around<'_>) -> Option<Vec<Beat>> {
    let mut view_before: Option<view::Known> = None;
    let mut marks_before: Vec<Mark> = Vec::new();
    let mut cast_before: Option<Cast> = None;
    let mut beats = Vec::new();
    for (index, section) in sections.iter().enumerate() {
        let known = view::read(section, view_before, around.names);
        view_before = Some(known);
        if let Some(marks) = marks::read(section, around.names) {
            marks_before = marks;
        }
        if let Some(cast) = cast(section, around.names) {
            cast_before = cast;
        }
        let clock = clock::read(section, around.names);
        let start = clock::start(section, around.names, around.date);
        let then = clock::then(section, clock.as_ref());
        let title = section.text_or_empty("title");
        let source = section.report().source();
        let clock_at = section.get("clock").map_or_else(|| section.at.clone(), |f| f.at);
        let say = section.text_or_empty("say");
        let captions = captions(section, around.language);
        let whole = (|| {
            Some(Beat {
                title: if title.is_empty() { format!("Beat {}", index + 1) } else { title },
                say,
                captions,
                clock: clock?,
                start: start?,
                then: then?,
                view: known.view()?,
                marks: marks_before.clone(),
                cast: cast_before.clone(),
                place: source.place(section.at.start),
                clock_place: source.place(clock_at.start),
            })
        })();
        beats.push(whole);
    }
    // A beat that is missing here has had its problem reported.
    beats.into_iter().collect()
}

/// Who is on stage: `None` for those of the beat before, `Some(None)` for all.
fn cast(beat: &Reading<'_>, names: &Names) -> Option<Option<Cast>> {
    let cast = beat.get("cast")?.cast(names);
    Some(if cast == Cast::default() { None } else { Some(cast) })
}

fn captions(beat: &Reading<'_>, language: &str) -> Vec<Caption> {
    let Some(field) = beat.get("caption") else { return Vec::new() };
    if let Some(text) = field.item.as_str() {
        return vec![Caption { language: language.to_owned(), text: tidy_text(text) }];
    }
    let Some(table) = field.item.as_table_like() else {
        field.wrong_type("a text, or a table of texts by language,");
        return Vec::new();
    };
    let mut captions = Vec::new();
    for (tag, item) in table.iter() {
        let at = item.span().unwrap_or_else(|| field.at.clone());
        let key_at = table.key(tag).and_then(toml_edit::Key::span).unwrap_or_else(|| at.clone());
        if !is_language(tag) {
            field.report.error(&key_at, not_a_language(tag), LANGUAGE_REMEDY);
        }
        match item.as_str() {
            Some(text) => captions.push(Caption { language: tag.to_owned(), text: tidy_text(text) }),
            None => field.report.error(
                &at,
                format!("the caption in \"{}\" is {}", clip(tag), kind_of(item)),
                "a text in quotes is wanted",
            ),
        }
    }
    captions
}

/// The language tag that a field states.
pub(super) fn language(field: &Field<'_>) -> Option<String> {
    let tag = field.text()?;
    if is_language(tag) {
        return Some(tag.to_owned());
    }
    field.error(not_a_language(tag), LANGUAGE_REMEDY);
    None
}

const LANGUAGE_REMEDY: &str = "write a language tag, as in \"en\", \"cy\" or \"pt-BR\"";

fn not_a_language(tag: &str) -> String {
    format!("\"{}\" is no language", clip(tag))
}

/// The shape of a BCP 47 tag (RFC 5646): two or three letters, then parts of one to eight letters or digits.
fn is_language(tag: &str) -> bool {
    let mut parts = tag.split('-');
    let first = parts.next().unwrap_or("");
    (2..=3).contains(&first.len())
        && first.bytes().all(|b| b.is_ascii_alphabetic())
        && parts.all(|p| (1..=8).contains(&p.len()) && p.bytes().all(|b| b.is_ascii_alphanumeric()))
}
