//! Marks: "trail of Fenn", or `{ sector = "Fenn", every = "20 d" }`.

use super::super::grammar::{self, BODY_MARKS, PLAIN_MARKS};
use super::super::model::{BodyId, Mark, Readout};
use super::super::names::{Names, nearest};
use super::super::reader::{Reading, Report, kind_of_value};
use super::super::source::At;
use super::events::{self, Fault};
use crate::units::{Span, text::clip};
use toml_edit::Value;

/// Most marks in a beat: more than an audience can take in by far.
const MOST: usize = 200;
/// Most sectors of one mark.
const MOST_SECTORS: i64 = 1000;

/// The marks of a beat; `None` for those of the beat before.
pub(super) fn read(beat: &Reading<'_>, names: &Names) -> Option<Vec<Mark>> {
    let field = beat.get("marks")?;
    let Some(list) = field.item.as_array() else {
        field.wrong_type("a list");
        return Some(Vec::new());
    };
    if list.len() > MOST {
        field.error(format!("there are more than {MOST} marks"), format!("a beat has at most {MOST}"));
        return Some(Vec::new());
    }
    Some(
        list.iter()
            .filter_map(|value| {
                let at = value.span().unwrap_or_else(|| field.at.clone());
                mark(value, &at, names, field.report)
            })
            .collect(),
    )
}

fn mark(value: &Value, at: &At, names: &Names, report: &Report<'_>) -> Option<Mark> {
    if let Some(text) = value.as_str() {
        return match from_text(text, names) {
            Ok(mark) => Some(mark),
            Err((wrong, remedy)) => {
                report.error(at, wrong, remedy);
                None
            }
        };
    }
    match value.as_inline_table() {
        Some(table) => from_table(&Reading::start(table, at.clone(), &grammar::MARK, report), names),
        None => {
            let wrong = format!("a mark is {}", kind_of_value(value));
            report.error(at, wrong, "a text or a table is wanted, as in \"trail of Fenn\"");
            None
        }
    }
}

fn from_text(text: &str, names: &Names) -> Result<Mark, Fault> {
    let text = text.trim();
    let (word, name) = match text.split_once(" of ") {
        Some((word, name)) => (word.trim(), Some(name.trim())),
        None => (text, None),
    };
    let of_body = BODY_MARKS.contains(&word);
    match (word, name) {
        ("scale", None) => Ok(Mark::Scale),
        ("date", None) => Ok(Mark::Date),
        ("pace", None) => Ok(Mark::Pace),
        (_, Some(name)) if of_body => Ok(plain(word, events::whole_name(name, names)?)),
        (_, None) if of_body => Err((
            format!("\"{word}\" doesn't say of which body"),
            format!("write it as in \"{word} of Fenn\""),
        )),
        (_, Some(_)) if PLAIN_MARKS.contains(&word) => {
            Err((format!("\"{word}\" belongs to no body"), format!("write \"{word}\" alone")))
        }
        _ => {
            let all = || BODY_MARKS.into_iter().chain(PLAIN_MARKS);
            let list =
                format!("the marks are: {} of a body; {}", BODY_MARKS.join(", "), PLAIN_MARKS.join(", "));
            let remedy = nearest(word, all()).map_or(list, |near| format!("perhaps \"{near}\""));
            Err((format!("there is no mark \"{}\"", clip(word)), remedy))
        }
    }
}

/// The mark of one of [`BODY_MARKS`] with nothing more stated.
fn plain(word: &str, body: BodyId) -> Mark {
    let readout = |what| Mark::Readout { what, body, about: None };
    match word {
        "trail" => Mark::Trail { body, lasts: None },
        "path" => Mark::Path { body, ahead: None },
        "sector" => Mark::Sector { body, about: None, every: None, count: None, area: false },
        "velocity" => Mark::Velocity { body, about: None },
        "gravity" => Mark::Gravity { body },
        "conic" => Mark::Conic { body, about: None },
        "foci" => Mark::Foci { body, about: None },
        "apsides" => Mark::Apsides { body, about: None },
        "speed" => readout(Readout::Speed),
        "distance" => readout(Readout::Distance),
        "height" => readout(Readout::Height),
        _ => readout(Readout::Period),
    }
}

/// The keys that add to each mark.
fn extras(word: &str) -> &'static [&'static str] {
    match word {
        "trail" => &["lasts"],
        "path" => &["ahead"],
        "sector" => &["every", "count", "area", "about"],
        "gravity" => &[],
        _ => &["about"],
    }
}

fn from_table(table: &Reading<'_>, names: &Names) -> Option<Mark> {
    let stated = table.stated(&BODY_MARKS);
    let Some(main) = stated.first() else {
        table.error(
            "a mark doesn't say what it is",
            "name it first, as in { trail = \"Fenn\", lasts = \"1 yr\" }",
        );
        return None;
    };
    if let Some(second) = stated.get(1) {
        table.report().error(
            &second.key_at,
            format!("a mark is both {} and {}", main.name(), second.name()),
            "write two marks",
        );
    }
    let fitting = extras(main.name());
    for extra in table.stated(&["lasts", "ahead", "every", "count", "area", "about"]) {
        if !fitting.contains(&extra.name()) {
            let remedy = match fitting {
                [] => "leave it out".to_owned(),
                some => format!("beside {} may stand: {}", main.name(), some.join(", ")),
            };
            let wrong = format!("{} means nothing beside {}", extra.name(), main.name());
            table.report().error(&extra.key_at, wrong, remedy);
        }
    }
    let found = main.body(names);
    let about_field = table.get("about");
    let stated_about = about_field.as_ref().map(|f| f.body(names));
    if let (Some(body), Some(Some(about)), Some(field)) = (found, stated_about, &about_field)
        && body == about
    {
        field.error("a mark is about its own body", "name another body");
    }
    let span = |key: &str| -> Option<Span> { table.positive(key) };
    let (lasts_s, ahead_s, every_s) = (span("lasts"), span("ahead"), span("every"));
    let most = table.get("count").and_then(|f| f.whole(1, MOST_SECTORS));
    let with_area = table.flag("area").unwrap_or(false);
    let mut mark = plain(main.name(), found?);
    match &mut mark {
        Mark::Trail { lasts, .. } => *lasts = lasts_s,
        Mark::Path { ahead, .. } => *ahead = ahead_s,
        Mark::Sector { about, every, count, area, .. } => {
            *about = stated_about.flatten();
            *every = every_s;
            *count = most;
            *area = with_area;
        }
        Mark::Velocity { about, .. }
        | Mark::Conic { about, .. }
        | Mark::Foci { about, .. }
        | Mark::Apsides { about, .. }
        | Mark::Readout { about, .. } => *about = stated_about.flatten(),
        Mark::Gravity { .. } | Mark::Scale | Mark::Date | Mark::Pace => {}
    }
    Some(mark)
}
