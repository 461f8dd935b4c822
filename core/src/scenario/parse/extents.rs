//! Events that points can't have: shadows of what has no radius, contacts of two that have none.

use super::super::model::{BodyId, EventKind, Form};
use super::super::names::Names;
use super::super::reader::Reading;
use super::bodies::ReadBody;
use super::events;
use toml_edit::{Item, TableLike};

/// Reports events that need a radius which no body states. `keys` says where a section's events stand: in which table, or list of
/// tables, and behind which of its keys.
pub(super) fn check(
    sections: &[Reading<'_>],
    keys: &[(&str, &str)],
    bodies: &[Option<ReadBody>],
    names: &Names,
) {
    for section in sections {
        for &(outer, inner) in keys {
            let Some(field) = section.get(outer) else { continue };
            for item in tables(field.item).into_iter().filter_map(|table| table.get(inner)) {
                // What is no event has its own problem.
                let Some(Ok(event)) = item.as_str().map(|text| events::event(text, names)) else { continue };
                if let Some((wrong, remedy)) = fault(event.kind, event.body, event.other, bodies, names) {
                    section.report().error(&item.span().unwrap_or_else(|| field.at.clone()), wrong, remedy);
                }
            }
        }
    }
}

fn tables(item: &Item) -> Vec<&dyn TableLike> {
    if let Some(table) = item.as_table_like() {
        return vec![table];
    }
    if let Some(tables) = item.as_array_of_tables() {
        return tables.iter().map(|table| table as &dyn TableLike).collect();
    }
    let values = item.as_array().into_iter().flat_map(toml_edit::Array::iter);
    values.filter_map(|value| value.as_inline_table().map(|table| table as &dyn TableLike)).collect()
}

fn fault(
    kind: EventKind,
    body: BodyId,
    other: Option<BodyId>,
    bodies: &[Option<ReadBody>],
    names: &Names,
) -> Option<events::Fault> {
    let read = |id: BodyId| bodies.get(id.0)?.as_ref();
    // A body that couldn't be read has its own problem.
    let is_point = |id: BodyId| {
        read(id).is_some_and(|read| !read.radius_stated && !matches!(read.body.form, Form::Real(_)))
    };
    match kind {
        EventKind::ShadowEntry
        | EventKind::ShadowExit
        | EventKind::PenumbraEntry
        | EventKind::PenumbraExit => {
            // Unless named, it is what the body goes around.
            let caster = other.or_else(|| Some(read(body)?.by.as_ref()?.body))?;
            let name = names.name(caster);
            is_point(caster).then(|| {
                (format!("{name} has no radius, so it casts no shadow"), format!("give {name} its radius"))
            })
        }
        EventKind::Contact => {
            let other = other?;
            let (one, two) = (names.name(body), names.name(other));
            (is_point(body) && is_point(other)).then(|| {
                let wrong = format!("neither {one} nor {two} has a radius, so they never touch");
                (wrong, format!("give {two} its radius"))
            })
        }
        _ => None,
    }
}

#[cfg(test)]
mod tests {
    use super::super::parse;

    const BODIES: &str = "format = 1\ntitle = \"T\"\n[[body]]\nname = \"Orla\"\nmass = \"1 Sun mass\"\nradius = \"1 Sun radius\"\n\
         [[body]]\nname = \"Brae\"\nmass = \"1 Earth mass\"\norbit = { around = \"Orla\", periapsis = \"1 au\", eccentricity = 0 }\n\
         [[body]]\nname = \"Ball\"\norbit = { around = \"Brae\", periapsis = \"9000 km\", eccentricity = 0 }\n";

    fn told(more: &str) -> Vec<String> {
        let parsed = parse(&format!("{BODIES}{more}\n"));
        parsed.problems.iter().filter(|p| !p.wrong.contains("no beat")).map(ToString::to_string).collect()
    }

    #[test]
    fn an_event_that_needs_a_radius_is_refused_where_it_stands() {
        const VIEW: &str = "view = { centre = \"Orla\", span = \"6 au\" }";
        for (more, want) in [
            (
                format!(
                    "[[beat]]\n{VIEW}\nclock = {{ reach = \"shadow-entry of Ball from Brae\", at = \"3 s\" }}"
                ),
                "16:19: Brae has no radius, so it casts no shadow; give Brae its radius",
            ),
            (
                format!("[[beat]]\n{VIEW}\nstart = {{ event = \"penumbra-exit of Ball\" }}"),
                "16:19: Brae has no radius, so it casts no shadow",
            ),
            (
                format!("[[beat]]\n{VIEW}\nstart = {{ event = \"contact of Ball with Brae\" }}"),
                "16:19: neither Ball nor Brae has a radius, so they never touch; give Brae its radius",
            ),
            (
                "[[aim]]\nwant = [{ event = \"shadow-exit of Orla from Ball\", at = \"3 d\" }]\n\
                 free = [{ body = \"Ball\", quantity = \"orbit.periapsis\", from = \"1 km\", to = \"2 km\" }]"
                    .to_owned(),
                "15:19: Ball has no radius, so it casts no shadow",
            ),
        ] {
            let told = told(&more);
            assert!(told.len() == 1 && told[0].starts_with(want), "{more}: {told:#?}");
        }
        let fine = format!("[[beat]]\n{VIEW}\nstart = {{ event = \"shadow-entry of Brae from Orla\" }}");
        assert_eq!(told(&fine), Vec::<String>::new());
    }
}
