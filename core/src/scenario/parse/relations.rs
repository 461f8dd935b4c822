//! What bodies must be to one another: no circles, gravity to go around, a surface to be thrown from.

use super::super::model::{BodyId, Form};
use super::super::names::Names;
use super::super::reader::Reading;
use super::bodies::{Needs, ReadBody};

/// Reports forms that can't be: stated by one another in a circle, around a body without gravity, from one without
/// a surface, and a second body without a form.
pub(super) fn check(sections: &[Reading<'_>], read: &[Option<ReadBody>], names: &Names) {
    check_origins(sections, read, names);
    check_circles(sections, read, names);
    for (index, body) in read.iter().enumerate() {
        let Some((relation, section)) = body.as_ref().and_then(|b| b.by.as_ref()).zip(sections.get(index))
        else {
            continue;
        };
        let Some(other) = read.get(relation.body.0).and_then(Option::as_ref) else { continue };
        if relation.body == BodyId(index) {
            continue;
        }
        let stated = |key: &str| sections.get(relation.body.0).is_some_and(|s| s.get(key).is_some());
        let real = matches!(other.body.form, Form::Real(_));
        // A key that is stated wrongly has its own problem already.
        let pulls = real || stated("mass") || stated("gm");
        let solid = real || stated("radius");
        let name = names.name(relation.body);
        if relation.needs == Needs::Gravity && !pulls {
            section.report().error(
                &relation.at,
                format!("{name} has no mass, so nothing goes around it"),
                format!("give {name} its mass or gm"),
            );
        }
        if relation.needs == Needs::Surface && !solid {
            section.report().error(
                &relation.at,
                format!("{name} has no radius, so it has no surface"),
                format!("give {name} its radius"),
            );
        }
    }
}

fn check_origins(sections: &[Reading<'_>], read: &[Option<ReadBody>], names: &Names) {
    let mut first: Option<usize> = None;
    for (index, body) in read.iter().enumerate() {
        if body.as_ref().is_none_or(|b| b.body.form != Form::Origin) {
            continue;
        }
        let Some(before) = first else {
            first = Some(index);
            continue;
        };
        let (one, other) = (names.name(BodyId(before)), names.name(BodyId(index)));
        if let Some(section) = sections.get(index) {
            section.error(
                format!("nothing says where {other} is, as nothing says where {one} is"),
                "one body may rest at the origin; add orbit, place, throw, drop or real to the other",
            );
        }
    }
}

/// Each circle is reported once, at the first of its bodies.
fn check_circles(sections: &[Reading<'_>], read: &[Option<ReadBody>], names: &Names) {
    let parent = |index: usize| read.get(index)?.as_ref()?.by.as_ref();
    for (index, section) in sections.iter().enumerate() {
        let Some(relation) = parent(index) else { continue };
        let mut way = vec![index];
        let mut at = relation.body.0;
        while at != index && way.len() <= read.len() {
            way.push(at);
            let Some(next) = parent(at) else { break };
            at = next.body.0;
        }
        let closed = at == index;
        if !closed || way.iter().any(|i| *i < index) {
            continue;
        }
        let name = |i: &usize| names.name(BodyId(*i)).to_owned();
        let wrong = if way.len() == 1 {
            format!("{} is stated by itself", name(&index))
        } else {
            let others: Vec<String> = way.iter().skip(1).chain([&index]).map(name).collect();
            format!("{} is stated by {}", name(&index), others.join(", that by "))
        };
        section.report().error(&relation.at, wrong, "name a body that is there without this one");
    }
}
