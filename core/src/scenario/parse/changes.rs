//! `[[change]]`: what is done to bodies on the model's way.

use super::super::grammar;
use super::super::model::{BodyId, Change, ChangeKind, Direction, Form, Kick};
use super::super::names::Names;
use super::super::reader::Reading;
use super::bodies::ReadBody;

const DIRECTIONS: &[(&str, Direction)] =
    &[("velocity", Direction::Velocity), ("outwards", Direction::Outwards)];

/// Reads all changes; `None` when one has a problem.
pub(super) fn read(
    sections: &[Reading<'_>],
    bodies: &[Option<ReadBody>],
    names: &Names,
) -> Option<Vec<Change>> {
    let changes: Vec<Option<Change>> = sections.iter().map(|section| one(section, bodies, names)).collect();
    changes.into_iter().collect()
}

fn one(section: &Reading<'_>, bodies: &[Option<ReadBody>], names: &Names) -> Option<Change> {
    let at = section.need("at").and_then(|field| field.not_negative());
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
