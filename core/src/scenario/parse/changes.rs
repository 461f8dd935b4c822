//! `[[change]]`: what is done to bodies on the model's way.

use super::super::grammar;
use super::super::model::{BodyId, Change, ChangeKind, ChangeTime, Direction, Form, Kick};
use super::super::names::{Names, nearest};
use super::super::reader::{Field, Reading, tidy_text};
use super::bodies::ReadBody;
use super::events;
use crate::units::Span;
use crate::units::text::clip;

const DIRECTIONS: &[(&str, Direction)] =
    &[("velocity", Direction::Velocity), ("outwards", Direction::Outwards)];

/// Reads all changes; `None` when one has a problem.
pub(super) fn read(
    sections: &[Reading<'_>],
    bodies: &[Option<ReadBody>],
    names: &Names,
    beats: &[Reading<'_>],
) -> Option<Vec<Change>> {
    let titles: Vec<String> = beats.iter().map(title).collect();
    let changes: Vec<Option<Change>> =
        sections.iter().map(|section| one(section, bodies, names, &titles)).collect();
    changes.into_iter().collect()
}

/// Title of a beat, or "".
fn title(beat: &Reading<'_>) -> String {
    beat.get("title").and_then(|field| field.item.as_str()).map(tidy_text).unwrap_or_default()
}

fn one(
    section: &Reading<'_>,
    bodies: &[Option<ReadBody>],
    names: &Names,
    titles: &[String],
) -> Option<Change> {
    let at = section.need("at").and_then(|field| time(&field, names, titles));
    let stated = section.stated(&grammar::CHANGES);
    if let [first, second, ..] = stated.as_slice() {
        section.report().error(
            &second.key_at,
            format!("a change has both {} and {}", first.name(), second.name()),
            "write a [[change]] for each",
        );
    }
    let Some(field) = stated.first() else {
        section
            .error("nothing says what changes", "add gravity = \"Orla\" with on = false, or kick = \"Ball\"");
        return None;
    };
    let body = field.body(names);
    let what = if field.name() == "gravity" {
        refuse(section, "gravity", &["speed", "along", "about", "velocity"]);
        if let Some(body) = body
            && !pulls(bodies, body)
        {
            let name = names.name(body);
            field.error(format!("{name} has no gravity to switch"), format!("give {name} its mass or gm"));
        }
        section.need("on").and_then(|on| on.flag()).map(|on| ChangeKind::Gravity { on })
    } else {
        refuse(section, "kick", &["on"]);
        kick(section, body, names).map(ChangeKind::Kick)
    };
    let place = section.report().source().place(section.at.start);
    Some(Change { at: at?, body: body?, what: what?, place })
}

fn time(field: &Field<'_>, names: &Names, titles: &[String]) -> Option<ChangeTime> {
    if !field.item.is_table_like() {
        return field.not_negative().map(ChangeTime::Time);
    }
    let table = field.table(&grammar::CHANGE_TIME)?;
    let stated = table.stated(&["beat", "event"]);
    let Some(main) = stated.first() else {
        table.error(
            "the time of a change says neither beat nor event",
            "state one of them, as in { event = \"periapsis of Fenn\" }",
        );
        return None;
    };
    if let Some(second) = stated.get(1) {
        let wrong = "the time of a change has both beat and event";
        table.report().error(&second.key_at, wrong, "state one of them");
    }
    let (before, after) = (table.get("before"), table.get("after"));
    if let (Some(before), true) = (&before, after.is_some() || main.name() == "beat") {
        let beside = if after.is_some() { "after" } else { "beat" };
        let wrong = format!("before does not go with {beside}");
        table.report().error(&before.key_at, wrong, "leave it out");
    }
    let shift = match after.or(before) {
        None => Some(Span::default()),
        Some(field) => field.not_negative::<Span>().map(|by| match field.name() {
            "before" => Span::from_s(-by.s()),
            _ => by,
        }),
    };
    if main.name() == "event" {
        let event = events::read(main, names);
        return Some(ChangeTime::Event { event: event?, after: shift? });
    }
    let beat = beat(main, titles);
    Some(ChangeTime::Beat { beat: beat?, after: shift? })
}

/// The beat that a field names by its title.
fn beat(field: &Field<'_>, titles: &[String]) -> Option<usize> {
    let name = tidy_text(field.text()?);
    let mut named = titles.iter().enumerate().filter(|(_, title)| **title == name && !name.is_empty());
    let Some((beat, _)) = named.next() else {
        let known = titles.iter().map(String::as_str).filter(|title| !title.is_empty());
        let remedy = match nearest(&name, known) {
            Some(near) => format!("perhaps \"{near}\""),
            None => "write the title of a [[beat]]".to_owned(),
        };
        field.error(format!("there is no beat \"{}\"", clip(&name)), remedy);
        return None;
    };
    if named.next().is_some() {
        field.error(format!("two beats are called \"{}\"", clip(&name)), "give one of them another title");
        return None;
    }
    Some(beat)
}

/// Whether a body has gravity; one that is wrong has its own problem already.
fn pulls(bodies: &[Option<ReadBody>], body: BodyId) -> bool {
    let body = bodies.get(body.0).and_then(Option::as_ref);
    body.is_none_or(|read| read.body.gm.is_some() || matches!(read.body.form, Form::Real(_)))
}

/// Reports keys that belong to the other kind of change.
fn refuse(section: &Reading<'_>, kind: &str, keys: &[&str]) {
    for field in section.stated(keys) {
        let name = field.name();
        section.report().error(
            &field.key_at,
            format!("{name} does not belong to {kind}"),
            format!("leave {name} out"),
        );
    }
}

fn kick(section: &Reading<'_>, body: Option<BodyId>, names: &Names) -> Option<Kick> {
    if let Some(field) = section.get("velocity") {
        refuse(section, "a kick with velocity", &["speed", "along", "about"]);
        return field.three().map(Kick::By);
    }
    let speed = section.need("speed").and_then(|field| field.quantity());
    let direction = match section.get("along") {
        Some(field) => field.choice(DIRECTIONS),
        None => Some(Direction::Velocity),
    };
    let about = match section.get("about") {
        Some(field) => {
            let about = field.body(names);
            if about.is_some() && about == body {
                field.error("a body is kicked relative to itself", "name another body");
            }
            Some(about?)
        }
        None => None,
    };
    Some(Kick::Along { speed: speed?, direction: direction?, about })
}
