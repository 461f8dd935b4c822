//! From the text of a scenario to the [`Scenario`], and every problem of the text at once.
//!
//! A text that is not TOML has one problem, where the reading of TOML ends. In one that is, each section is read to
//! its end whatever is wrong with it, and a fault that follows from another one isn't told.

mod aims;
mod air;
mod beats;
mod bodies;
mod changes;
mod clock;
mod dates;
mod events;
mod extents;
mod forms;
mod marks;
mod physics;
mod relations;
mod swarms;
mod syntax;
mod view;

pub use aims::QUANTITIES;

use super::grammar;
use super::model::{Form, Scenario};
use super::names::Names;
use super::problem::{Place, Problem, Severity};
use super::reader::{Reading, Report};

/// Largest size of a scenario, bytes.
pub const MAX_BYTES: usize = 1_000_000;
/// Most bodies in a scenario.
pub const MAX_BODIES: usize = 200;
/// Most tracers in all swarms of a scenario together.
pub const MAX_TRACERS: usize = 50_000;
/// Most changes in a scenario.
pub const MAX_CHANGES: usize = 200;
/// Most beats in a scenario.
pub const MAX_BEATS: usize = 200;
/// Most aims in a scenario.
pub const MAX_AIMS: usize = 20;
/// The version of the format that is read.
pub const FORMAT: i64 = 1;

/// What reading a text gave.
#[derive(Debug, Clone, PartialEq)]
pub struct Parsed {
    /// The scenario; `Some` exactly when no problem is an error.
    pub scenario: Option<Scenario>,
    /// All problems, in the order of the text.
    pub problems: Vec<Problem>,
}

impl Parsed {
    fn refused(place: Place, wrong: impl Into<String>, remedy: impl Into<String>) -> Self {
        Self { scenario: None, problems: vec![Problem::error(place, wrong, remedy)] }
    }
}

const START: Place = Place { line: 1, column: 1 };

/// Reads a file's bytes: as [`parse()`], and a problem where they are not UTF-8 text.
pub fn parse_bytes(bytes: &[u8]) -> Parsed {
    if bytes.len() > MAX_BYTES {
        return too_large();
    }
    match std::str::from_utf8(bytes) {
        Ok(text) => parse(text),
        Err(error) => {
            let valid = bytes.get(..error.valid_up_to()).unwrap_or_default();
            let valid = std::str::from_utf8(valid).unwrap_or("");
            let report = Report::new(without_mark(valid));
            Parsed::refused(
                report.source().place(valid.len()),
                "this file is not text",
                "a scenario is a text file in UTF-8 that starts with format = 1",
            )
        }
    }
}

/// Reads the text of a scenario file.
pub fn parse(text: &str) -> Parsed {
    if text.len() > MAX_BYTES {
        return too_large();
    }
    let text = without_mark(text);
    if text.trim().is_empty() {
        return Parsed::refused(START, "the file is empty", "a scenario starts with format = 1");
    }
    let report = Report::new(text);
    let document = match toml_edit::Document::parse(text) {
        Ok(document) => document,
        Err(error) => {
            let problem = syntax::problem(&error, report.source());
            return Parsed { scenario: None, problems: vec![problem] };
        }
    };
    let table = document.as_table();
    if let Some(other) = table.get("format").and_then(toml_edit::Item::as_integer)
        && other != FORMAT
    {
        // The keys of another version are not ours to judge.
        let at = table.get("format").and_then(toml_edit::Item::span).unwrap_or(0..0);
        report.error(
            &at,
            format!("this file is written in format {other}"),
            format!("this program reads format {FORMAT}"),
        );
        return Parsed { scenario: None, problems: report.into_problems() };
    }
    let scenario = read(&Reading::start(table, 0..0, &grammar::TOP, &report));
    let problems = report.into_problems();
    let failed = problems.iter().any(|p| p.severity == Severity::Error);
    Parsed { scenario: if failed { None } else { scenario }, problems }
}

/// The text without its byte order mark.
pub(super) fn without_mark(text: &str) -> &str {
    text.strip_prefix('\u{feff}').unwrap_or(text)
}

fn too_large() -> Parsed {
    Parsed::refused(
        START,
        "the file is larger than 1 MB",
        "a scenario is a text of some thousand lines at most",
    )
}

fn read(top: &Reading<'_>) -> Option<Scenario> {
    if let Some(format) = top.need("format")
        && format.item.as_integer().is_none()
    {
        format.wrong_type("the version of the format");
    }
    let title = title(top);
    let language = match top.get("language") {
        Some(field) => beats::language(&field),
        None => Some("en".to_owned()),
    };
    let date = top.get("date").map(|field| dates::read(&field));
    let mut sections = top.get("body").map(|field| field.tables(&grammar::BODY)).unwrap_or_default();
    if top.get("body").is_none() {
        top.error("the scenario has no body", "add [[body]] with its name, for one thing that moves");
    }
    cut_at(&mut sections, MAX_BODIES, "bodies");
    let all_names: Vec<String> = sections.iter().map(bodies::name).collect();
    bodies::check_names(&sections, &all_names);
    let mut names = Names::default();
    let mut of_swarms = Vec::new();
    let mut of_bodies = Vec::new();
    for (index, (section, name)) in sections.into_iter().zip(all_names).enumerate() {
        if section.get("swarm").is_some() {
            names.swarms.push(name);
            of_swarms.push(section);
        } else {
            names.bodies.push(name);
            names.sections.push(index);
            of_bodies.push(section);
        }
    }
    let sections = of_bodies;
    let mut read: Vec<Option<bodies::ReadBody>> = sections.iter().map(|s| bodies::read(s, &names)).collect();
    relations::check(&sections, &read, &names);
    bodies::check_real(&read, date, top);
    let physics = physics::read(top, &read);
    bodies::give_kinds(&mut read);
    bodies::give_colours(&mut read);
    let swarms = swarms::read(&of_swarms, &sections, &names);

    let mut beats = top.get("beat").map(|field| field.tables(&grammar::BEAT)).unwrap_or_default();
    cut_at(&mut beats, MAX_BEATS, "beats");
    let mut sections = top.get("change").map(|field| field.tables(&grammar::CHANGE)).unwrap_or_default();
    cut_at(&mut sections, MAX_CHANGES, "changes");
    extents::check(&sections, &[("at", "event")], &read, &names);
    let changes = changes::read(&sections, &read, &names, &beats);

    if top.get("beat").is_none() {
        top.report().note(&top.at, "the scenario has no beat", "add [[beat]] for each step of the talk");
    }
    let language = language?;
    extents::check(&beats, &[("clock", "reach"), ("start", "event")], &read, &names);
    let beats = beats::read(&beats, &beats::Around { names: &names, language: &language, date });

    let mut sections = top.get("aim").map(|field| field.tables(&grammar::AIM)).unwrap_or_default();
    cut_at(&mut sections, MAX_AIMS, "aims");
    extents::check(&sections, &[("want", "event")], &read, &names);
    let forms: Vec<Option<&Form>> = read.iter().map(|b| b.as_ref().map(|b| &b.body.form)).collect();
    let aims: Option<Vec<_>> = sections.iter().map(|section| aims::read(section, &names, &forms)).collect();

    Some(Scenario {
        title,
        summary: top.text_or_empty("summary"),
        audience: top.text_or_empty("audience"),
        language,
        date: date.flatten(),
        physics,
        bodies: read.into_iter().map(|b| b.map(|b| b.body)).collect::<Option<_>>()?,
        swarms: swarms?,
        changes: changes?,
        beats: beats?,
        aims: aims?,
    })
}

fn title(top: &Reading<'_>) -> String {
    let title = top.text_or_empty("title");
    if top.get("title").is_none() {
        top.report().note(&top.at, "the scenario has no title", "add title = \"…\"");
    }
    if title.is_empty() { "Untitled".to_owned() } else { title }
}

/// Leaves away, with one problem, the sections beyond a limit.
fn cut_at(sections: &mut Vec<Reading<'_>>, most: usize, what: &str) {
    if let Some(beyond) = sections.get(most) {
        beyond.error(format!("there are more than {most} {what}"), format!("a scenario has at most {most}"));
        sections.truncate(most);
    }
}

#[cfg(test)]
mod damage_tests;
#[cfg(test)]
mod tests;
