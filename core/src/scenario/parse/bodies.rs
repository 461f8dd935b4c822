//! `[[body]]`: names, quantities and looks. The forms are read in [`super::forms`].

use super::super::grammar::FORMS;
use super::super::model::{Body, BodyId, Colour, Form, Kind, RealBody, Surface};
use super::super::names::Names;
use super::super::reader::{Field, Reading};
use super::super::source::At;
use super::{air, forms};
use crate::time::Epoch;
use crate::units::{Gm, UnitError};

/// A body with what is not settled before all are read.
#[derive(Debug)]
pub(super) struct ReadBody {
    pub(super) body: Body,
    /// The body by which this one's form is stated, how, and where that stands.
    pub(super) by: Option<Relation>,
    /// Whether it states a radius, a wrong one included.
    pub(super) radius_stated: bool,
    /// Where `real` stands.
    real_at: Option<At>,
    kind: Option<Kind>,
    colour: Option<Colour>,
}

/// That a form names another body.
#[derive(Debug, Clone)]
pub(super) struct Relation {
    pub(super) body: BodyId,
    pub(super) needs: Needs,
    pub(super) at: At,
}

/// What the other body must have for it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Needs {
    /// Nothing: it is a place to measure from.
    Nothing,
    /// Gravity: something goes around it.
    Gravity,
    /// A surface, and gravity where something is let go.
    Surface,
}

/// Longest name, characters: what fits beside a body on a screen.
const LONGEST_NAME: usize = 60;

/// The usable name of a body, or "".
pub(super) fn name(section: &Reading<'_>) -> String {
    let Some(field) = section.get("name") else {
        // A real body is called what it is, unless it is called something else.
        let real = section.get("real").and_then(|f| f.item.as_str()).and_then(forms::real_body);
        return real.map(|r| forms::real_name(r).to_owned()).unwrap_or_default();
    };
    let name = field.item.as_str().unwrap_or("").trim();
    let usable = !name.chars().any(char::is_control) && name.chars().count() <= LONGEST_NAME;
    if usable { name.to_owned() } else { String::new() }
}

/// Reports names that are missing, unusable or stated twice, of bodies and swarms alike. `names`: of all sections.
pub(super) fn check_names(sections: &[Reading<'_>], names: &[String]) {
    for (index, (section, name)) in sections.iter().zip(names).enumerate() {
        let before = names.get(..index).unwrap_or_default();
        let Some(field) = section.get("name") else {
            if name.is_empty() {
                // A real body would be called by what it is; that it isn't one has its own problem.
                if section.get("real").is_none() {
                    section.need("name");
                }
                continue;
            }
            report_twin(section, &section.at, name, before);
            continue;
        };
        let Some(text) = field.text() else { continue };
        if name.is_empty() {
            let wrong =
                if text.trim().is_empty() { "a name is empty" } else { "a name is too long or broken" };
            field.error(wrong, format!("write one line of at most {LONGEST_NAME} characters"));
        } else if name.eq_ignore_ascii_case("barycentre") {
            field.error("\"barycentre\" is no name for a body", "it means the common centre of mass");
        } else {
            report_twin(section, &field.at, name, before);
        }
    }
}

fn report_twin(section: &Reading<'_>, at: &At, name: &str, before: &[String]) {
    let folded = name.to_lowercase();
    if let Some(twin) = before.iter().find(|other| other.to_lowercase() == folded) {
        let wrong = if twin == name {
            format!("there are two bodies called \"{name}\"")
        } else {
            format!("\"{name}\" and \"{twin}\" differ only in capitals")
        };
        section.report().error(at, wrong, "give each body its own name");
    }
}

/// Reads one body. Problems are reported; `None` when there were some that leave it without a form.
pub(super) fn read(section: &Reading<'_>, names: &Names) -> Option<ReadBody> {
    let kind = section.get("kind").and_then(|f| f.choice(KINDS));
    let colour = colour(section);
    let gm = gravity(section);
    let radius = section.positive("radius");
    let surface = surface(section);
    let atmosphere = air::atmosphere(section);
    let drag = air::drag(section);

    let stated = section.stated(&FORMS);
    if let [first, second, ..] = stated.as_slice() {
        section.report().error(
            &second.key_at,
            format!("a body has both {} and {}", first.name(), second.name()),
            "say in one way how it comes to be there",
        );
    }
    let mut by = None;
    let mut real_at = None;
    let form = match stated.first() {
        None => Form::Origin,
        Some(field) => {
            if field.name() == "real" {
                real_at = Some(field.at.clone());
            }
            let (form, relation) = forms::read(field, names)?;
            by = relation;
            form
        }
    };
    let body = Body {
        name: name(section),
        kind: Kind::Rock,
        gm,
        radius,
        colour: Colour::Bone,
        surface,
        atmosphere,
        drag,
        form,
        place: section.report().source().place(section.at.start),
    };
    let radius_stated = section.get("radius").is_some();
    Some(ReadBody { body, by, radius_stated, real_at, kind, colour })
}

/// The colour that is stated.
pub(super) fn colour(section: &Reading<'_>) -> Option<Colour> {
    section.get("colour").and_then(|f| f.choice(COLOURS))
}

fn gravity(section: &Reading<'_>) -> Option<Gm> {
    let mass = section.get("mass");
    let gm = section.get("gm");
    if let (Some(mass), Some(gm)) = (&mass, &gm) {
        let later = if mass.key_at.start < gm.key_at.start { gm } else { mass };
        section.report().error(&later.key_at, "a body has both mass and gm", "state one of them");
    }
    let read = |field: Field<'_>, parse: fn(&str) -> Result<Gm, UnitError>| {
        let gm: Gm = field.quantity_by(parse)?;
        if gm.m3_s2() == 0.0 {
            field.error(format!("{} is 0", field.name()), "leave it out for a body that pulls nothing");
            return None;
        }
        field.check_positive(gm)
    };
    mass.and_then(|field| read(field, Gm::parse_mass)).or(gm.and_then(|field| read(field, Gm::parse_gm)))
}

fn surface(section: &Reading<'_>) -> Surface {
    let stated = section.get("surface");
    let surface = stated.as_ref().and_then(|f| f.choice(SURFACES));
    let Some(field) = section.get("restitution") else {
        return match surface {
            Some(Contact::Bounce) => Surface::Bounce { restitution: 1.0 },
            Some(Contact::Merge) => Surface::Merge,
            _ => Surface::Stop,
        };
    };
    let restitution = field.number().unwrap_or(1.0);
    if !(0.0..=1.0).contains(&restitution) {
        field.error(format!("restitution is {restitution}"), "it must be 0 to 1");
    }
    match surface {
        Some(Contact::Bounce) => Surface::Bounce { restitution },
        // A surface that is wrong has its own problem already.
        None if stated.is_some() => Surface::Stop,
        _ => {
            field.report.error(
                &field.key_at,
                "restitution is stated without surface = \"bounce\"",
                "add surface = \"bounce\", or leave restitution out",
            );
            Surface::Stop
        }
    }
}

/// Reports real bodies without a date, outside the dates that are known, and stated twice.
pub(super) fn check_real(read: &[Option<ReadBody>], date: Option<Option<Epoch>>, top: &Reading<'_>) {
    let mut seen: Vec<RealBody> = Vec::new();
    let mut dated = false;
    for body in read.iter().flatten() {
        let (Form::Real(real), Some(at)) = (&body.body.form, &body.real_at) else { continue };
        if seen.contains(real) {
            let wrong = format!("{} is in the scenario twice", forms::real_name(*real));
            top.report().error(at, wrong, "each real body can be there once");
        }
        seen.push(*real);
        match date {
            None if !dated => {
                let remedy = "add date = \"2031-03-05T20:00:00Z\" at the top of the file";
                top.report().error(at, "a real body needs the scenario's date", remedy);
            }
            Some(Some(date)) if !dated && !known_dates().is_some_and(|(a, b)| (a..=b).contains(&date)) => {
                let date_at = top.get("date").map_or_else(|| at.clone(), |f| f.at);
                top.report().error(
                    &date_at,
                    "the solar system is not known at this date",
                    "real bodies need a date from 1900-01-01 to 2100-01-01",
                );
            }
            _ => {}
        }
        dated = true;
    }
}

fn known_dates() -> Option<(Epoch, Epoch)> {
    Some((Epoch::parse_utc("1900-01-01").ok()?, Epoch::parse_utc("2100-01-01").ok()?))
}

/// Kinds of those that state none.
pub(super) fn give_kinds(read: &mut [Option<ReadBody>]) {
    let mut star_given = false;
    for read in read.iter_mut().flatten() {
        let body = &read.body;
        let first_massive_origin = !star_given && body.gm.is_some() && body.form == Form::Origin;
        let given = match &body.form {
            Form::Real(real) => forms::real_kind(*real),
            _ if first_massive_origin => Kind::Star,
            Form::Throw(_) | Form::Drop(_) => Kind::Ball,
            _ if body.gm.is_some() => Kind::Planet,
            _ => Kind::Rock,
        };
        star_given |= first_massive_origin;
        read.body.kind = read.kind.unwrap_or(given);
    }
}

/// Colours of those that state none: stars bone, the others in order, and none that a file gives away itself.
pub(super) fn give_colours(read: &mut [Option<ReadBody>]) {
    const ORDER: [Colour; 5] = [Colour::Green, Colour::Vermilion, Colour::Yellow, Colour::Sky, Colour::Blue];
    let stated: Vec<Colour> = read.iter().flatten().filter_map(|b| b.colour).collect();
    let mut free: Vec<Colour> = ORDER.into_iter().filter(|c| !stated.contains(c)).collect();
    if free.is_empty() {
        free = ORDER.to_vec();
    }
    let mut next = free.into_iter().cycle();
    for read in read.iter_mut().flatten() {
        let given = match (read.colour, read.body.kind) {
            (Some(colour), _) => Some(colour),
            (None, Kind::Star) => Some(Colour::Bone),
            (None, _) => next.next(),
        };
        read.body.colour = given.unwrap_or(Colour::Bone);
    }
}

#[derive(Clone, Copy)]
enum Contact {
    Stop,
    Bounce,
    Merge,
}

const SURFACES: &[(&str, Contact)] =
    &[("stop", Contact::Stop), ("bounce", Contact::Bounce), ("merge", Contact::Merge)];

const KINDS: &[(&str, Kind)] = &[
    ("star", Kind::Star),
    ("planet", Kind::Planet),
    ("moon", Kind::Moon),
    ("comet", Kind::Comet),
    ("rock", Kind::Rock),
    ("ball", Kind::Ball),
    ("station", Kind::Station),
];

const COLOURS: &[(&str, Colour)] = &[
    ("bone", Colour::Bone),
    ("green", Colour::Green),
    ("vermilion", Colour::Vermilion),
    ("yellow", Colour::Yellow),
    ("sky", Colour::Sky),
    ("blue", Colour::Blue),
];
