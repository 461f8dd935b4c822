//! `[[aim]]`: what is wanted, and which numbers are free.

use super::super::grammar;
use super::super::model::{Aim, Form, Free, Measure, Outcome, Want, Wanted};
use super::super::names::{Names, nearest};
use super::super::reader::{Field, Reading};
use super::events;
use crate::units::{Angle, Gm, Length, Span, Speed, number, text::clip};

/// Most wants of an aim, and most numbers that are free in one.
const MOST: usize = 8;
/// Most events that can be wanted.
const MOST_EVENTS: i64 = 10_000;

/// The numbers of a body and its form that can be free: form and key, the keys that lead there, and what they measure.
pub const QUANTITIES: [(&str, &[&str], Measure); 28] = [
    ("mass", &["mass"], Measure::Mass),
    ("orbit.periapsis", &["orbit", "periapsis"], Measure::Length),
    ("orbit.apoapsis", &["orbit", "apoapsis"], Measure::Length),
    ("orbit.semi-major", &["orbit", "semi-major"], Measure::Length),
    ("orbit.period", &["orbit", "period"], Measure::Span),
    ("orbit.eccentricity", &["orbit", "eccentricity"], Measure::Number),
    ("orbit.inclination", &["orbit", "inclination"], Measure::Angle),
    ("orbit.node", &["orbit", "node"], Measure::Angle),
    ("orbit.argument", &["orbit", "argument"], Measure::Angle),
    ("orbit.anomaly", &["orbit", "anomaly"], Measure::Angle),
    ("orbit.mean-anomaly", &["orbit", "mean-anomaly"], Measure::Angle),
    ("orbit.before-periapsis", &["orbit", "before-periapsis"], Measure::Span),
    ("orbit.after-periapsis", &["orbit", "after-periapsis"], Measure::Span),
    ("place.position.x", &["place", "position", "0"], Measure::Length),
    ("place.position.y", &["place", "position", "1"], Measure::Length),
    ("place.position.z", &["place", "position", "2"], Measure::Length),
    ("place.velocity.x", &["place", "velocity", "0"], Measure::Speed),
    ("place.velocity.y", &["place", "velocity", "1"], Measure::Speed),
    ("place.velocity.z", &["place", "velocity", "2"], Measure::Speed),
    ("throw.height", &["throw", "height"], Measure::Length),
    ("throw.speed", &["throw", "speed"], Measure::Speed),
    ("throw.elevation", &["throw", "elevation"], Measure::Angle),
    ("throw.heading", &["throw", "heading"], Measure::Angle),
    ("throw.latitude", &["throw", "latitude"], Measure::Angle),
    ("throw.longitude", &["throw", "longitude"], Measure::Angle),
    ("drop.height", &["drop", "height"], Measure::Length),
    ("drop.latitude", &["drop", "latitude"], Measure::Angle),
    ("drop.longitude", &["drop", "longitude"], Measure::Angle),
];

/// Reads an aim. `forms` are those of the bodies, where they could be read.
pub(super) fn read(section: &Reading<'_>, names: &Names, forms: &[Option<&Form>]) -> Option<Aim> {
    let want = entries(section, "want", &grammar::WANT);
    let free = entries(section, "free", &grammar::FREE);
    let want = want.map(|list| list.iter().map(|table| want_of(table, names)).collect::<Vec<_>>());
    let free = free.map(|list| list.iter().map(|table| free_of(table, names, forms)).collect::<Vec<_>>());
    Some(Aim {
        want: want?.into_iter().collect::<Option<_>>()?,
        free: free?.into_iter().collect::<Option<_>>()?,
        place: section.report().source().place(section.at.start),
    })
}

fn entries<'a>(
    section: &Reading<'a>,
    key: &str,
    grammar: &'static grammar::Section,
) -> Option<Vec<Reading<'a>>> {
    let field = section.need(key)?;
    let list = field.tables(grammar);
    if list.is_empty() {
        // A list that is none, or holds what is no table, has its own problem.
        if field.item.as_array().is_some_and(toml_edit::Array::is_empty) {
            field.error(format!("{key} is empty"), format!("write {key} = {}", field.key.example));
        }
        return None;
    }
    if list.len() > MOST {
        field.error(format!("{key} has more than {MOST} entries"), format!("an aim has at most {MOST}"));
        return None;
    }
    Some(list)
}

fn want_of(table: &Reading<'_>, names: &Names) -> Option<Want> {
    let stated = table.stated(&["event", "body"]);
    let Some(main) = stated.first() else {
        table.error(
            "a want says neither event nor body",
            "state one of them, as in { event = \"periapsis of Fenn\", at = \"140 d\" }",
        );
        return None;
    };
    if let Some(second) = stated.get(1) {
        let wrong = "a want has both event and body";
        table.report().error(&second.key_at, wrong, "state one of them");
    }
    let of_event = main.name() == "event";
    let foreign: &[&str] = if of_event { &["about", "period-ratio"] } else { &["until", "count"] };
    for extra in table.stated(foreign) {
        table.report().error(
            &extra.key_at,
            format!("{} means nothing beside {}", extra.name(), main.name()),
            format!("leave it out, or state {} instead", if of_event { "body" } else { "event" }),
        );
    }
    let of = if of_event { event_of(main, table, names) } else { instant_of(main, table, names) };
    let outcomes = outcomes(table, of_event);
    let of = of?;
    if let Some([]) = outcomes.as_deref() {
        table.error(
            "nothing is wanted",
            "state at, distance, speed, longitude, latitude, period-ratio or count",
        );
        return None;
    }
    let outcomes = outcomes?;
    let counts = outcomes.iter().any(|o| matches!(o, Outcome::Count(_)));
    if counts && outcomes.len() > 1 {
        table.error("a count stands beside other outcomes", "write a want of its own for each");
        return None;
    }
    let within = match table.get("within") {
        Some(field) => Some(within(&field, &outcomes)?),
        None => None,
    };
    Some(Want { of, outcomes, within })
}

/// How far off the one outcome of a want may be, SI.
fn within(field: &Field<'_>, outcomes: &[Outcome]) -> Option<f64> {
    match outcomes {
        [Outcome::At(_)] => field.positive::<Span>().map(Span::s),
        [Outcome::Distance(_)] => field.positive::<Length>().map(Length::m),
        [Outcome::Speed(_)] => field.positive::<Speed>().map(Speed::m_s),
        [Outcome::Longitude(_) | Outcome::Latitude(_)] => field.positive::<Angle>().map(Angle::rad),
        [Outcome::PeriodRatio(_)] => field.number().and_then(|within| {
            if within <= 0.0 {
                field.error(format!("within is {within}"), "it must be more than 0");
            }
            (within > 0.0).then_some(within)
        }),
        [Outcome::Count(_)] => {
            field.error("within means nothing beside count", "leave it out: a count is met or it isn't");
            None
        }
        _ => {
            field.error("within doesn't say of which outcome", "write a want of its own for each outcome");
            None
        }
    }
}

fn event_of(main: &Field<'_>, table: &Reading<'_>, names: &Names) -> Option<Wanted> {
    let event = events::read(main, names);
    // It is an outcome too, and what is wrong with it is told there.
    let at_field = table.get("at");
    let at = at_field.as_ref().and_then(|f| f.item.as_str()).and_then(|text| Span::parse(text).ok());
    let until: Span = match (table.get("until"), at) {
        (Some(field), at) => {
            let until: Span = field.positive()?;
            if at.is_some_and(|at| at > until) {
                field.error("the search ends before the event is wanted", "until must not be less than at");
                return None;
            }
            until
        }
        (None, Some(at)) => Span::from_s(2.0 * at.s()),
        (None, None) if at_field.is_some() => return None,
        (None, None) => {
            table.error("a want doesn't say how far the event is looked for", "add until = \"2 yr\"");
            return None;
        }
    };
    Some(Wanted::Event { event: event?, until })
}

fn instant_of(main: &Field<'_>, table: &Reading<'_>, names: &Names) -> Option<Wanted> {
    let body = main.body(names);
    let about = match table.get("about") {
        Some(field) => {
            let about = field.body(names)?;
            if Some(about) == body {
                field.error("a body is wanted relative to itself", "name another body");
                return None;
            }
            Some(about)
        }
        None => None,
    };
    let at = table.need("at").and_then(|f| f.not_negative());
    if let (Some(ratio), None) = (table.get("period-ratio"), about) {
        ratio.error("period-ratio doesn't say to whose period", "add about = \"Brae\"");
        return None;
    }
    Some(Wanted::Instant { body: body?, about, at: at? })
}

/// The numbers wanted; `None` when one of them is wrong.
fn outcomes(table: &Reading<'_>, of_event: bool) -> Option<Vec<Outcome>> {
    let keys = ["at", "distance", "speed", "longitude", "latitude", "period-ratio", "count"];
    let mut outcomes = Vec::new();
    let mut sound = true;
    for field in table.stated(&keys) {
        let outcome = match field.name() {
            // Beside a body it says when, and is read there.
            "at" if !of_event => continue,
            "at" => field.positive().map(Outcome::At),
            "distance" => field.positive().map(Outcome::Distance),
            "speed" => field.not_negative().map(Outcome::Speed),
            "longitude" => field.quantity().map(Outcome::Longitude),
            "latitude" => field.quantity().map(Outcome::Latitude),
            "period-ratio" => field.number().and_then(|ratio| {
                if ratio > 0.0 {
                    return Some(Outcome::PeriodRatio(ratio));
                }
                field.error(format!("period-ratio is {ratio}"), "it must be more than 0");
                None
            }),
            _ => field.whole(0, MOST_EVENTS).map(Outcome::Count),
        };
        sound &= outcome.is_some();
        outcomes.extend(outcome);
    }
    sound.then_some(outcomes)
}

fn free_of(table: &Reading<'_>, names: &Names, forms: &[Option<&Form>]) -> Option<Free> {
    let body = table.need("body").and_then(|f| f.body(names));
    let field = table.need("quantity")?;
    let name = field.text()?;
    let Some((_, keys, measure)) = QUANTITIES.iter().find(|(n, ..)| *n == name) else {
        let known = || QUANTITIES.iter().map(|(n, ..)| *n);
        let remedy = match nearest(name, known()) {
            Some(near) => format!("perhaps \"{near}\""),
            None => format!("these can be free: {}", known().collect::<Vec<_>>().join(", ")),
        };
        field.error(format!("no quantity \"{}\" can be free", clip(name)), remedy);
        return None;
    };
    if let (Some(body), Some(form)) = (body, keys.first().filter(|form| **form != "mass")) {
        let has = match forms.get(body.0).copied().flatten() {
            // A form that couldn't be read has its own problem.
            None => true,
            Some(Form::Orbit(_)) => *form == "orbit",
            Some(Form::Place(_)) => *form == "place",
            Some(Form::Throw(_)) => *form == "throw",
            Some(Form::Drop(_)) => *form == "drop",
            Some(Form::Origin | Form::Real(_)) => false,
        };
        if !has {
            let wrong = format!("{} has no {form}", names.name(body));
            field.error(wrong, "name a quantity of the form that the body has");
            return None;
        }
    }
    let from = limit(&table.need("from")?, *measure);
    let to_field = table.need("to")?;
    let to = limit(&to_field, *measure);
    let (from, to) = (from?, to?);
    if to.0 <= from.0 {
        to_field.error("the range is empty", "to must be more than from");
        return None;
    }
    let body = body?;
    let section = names.sections.get(body.0).copied()?;
    let (keys, measure) = (keys.to_vec(), *measure);
    Some(Free { body, section, keys, measure, from: from.0, to: to.0, unit: from.1 })
}

/// An end of a range, SI, and the unit in which it stands.
fn limit(field: &Field<'_>, measure: Measure) -> Option<(f64, String)> {
    let si = match measure {
        Measure::Length => field.quantity::<Length>()?.m(),
        Measure::Speed => field.quantity::<Speed>()?.m_s(),
        Measure::Angle => field.quantity::<Angle>()?.rad(),
        Measure::Span => field.quantity::<Span>()?.s(),
        Measure::Mass => field.quantity_by(Gm::parse_mass)?.m3_s2(),
        Measure::Number => return field.number().map(|number| (number, String::new())),
    };
    let unit =
        field.item.as_str().and_then(|text| number::leading(text).ok()).map_or("", |(_, rest)| rest.trim());
    Some((si, unit.to_owned()))
}

#[cfg(test)]
mod tests {
    use super::super::parse;
    use super::*;
    use crate::scenario::Severity;

    const FRAME: &str = "format = 1\ntitle = \"T\"\n[[body]]\nname = \"Orla\"\nmass = \"1 Sun mass\"\n[[body]]\nname = \"Pell\"\n\
         orbit = { around = \"Orla\", periapsis = \"1 au\", eccentricity = 0.5 }\n[[aim]]\n";
    const WANT: &str = "{ event = \"periapsis of Pell\", at = \"140 d\" }";
    const FREE: &str =
        "{ body = \"Pell\", quantity = \"orbit.periapsis\", from = \"0.3 au\", to = \"0.5 au\" }";

    fn text(want: &str, free: &str) -> String {
        format!("{FRAME}want = [{want}]\nfree = [{free}]\n")
    }

    #[test]
    fn an_aim_is_read() {
        let aims = parse(&text(WANT, FREE)).scenario.unwrap().aims;
        let [aim] = aims.as_slice() else { panic!("{aims:?}") };
        assert_eq!(aim.place.line, 9);
        let Wanted::Event { until, .. } = aim.want[0].of else { panic!("an event") };
        assert_eq!(until, Span::parse("280 d").unwrap(), "twice its time");
        assert_eq!(aim.want[0].outcomes, [Outcome::At(Span::parse("140 d").unwrap())]);
        let free = &aim.free[0];
        assert_eq!((free.keys.as_slice(), free.unit.as_str()), (["orbit", "periapsis"].as_slice(), "au"));
        assert_eq!(
            (free.from, free.to),
            (Length::parse("0.3 au").unwrap().m(), Length::parse("0.5 au").unwrap().m())
        );
    }

    #[test]
    fn aims_that_cannot_be_are_refused() {
        for (want, free, said) in [
            ("", FREE, "want is empty; write want = "),
            (WANT, "", "free is empty; write free = "),
            ("{ at = \"3 d\" }", FREE, "a want says neither event nor body"),
            ("{ event = \"periapsis of Pell\" }", FREE, "doesn't say how far the event is looked for"),
            ("{ event = \"periapsis of Pell\", at = \"3 km\" }", FREE, "km is a length"),
            ("{ event = \"periapsis of Pell\", until = \"3 d\" }", FREE, "nothing is wanted"),
            (
                "{ event = \"periapsis of Pell\", at = \"3 d\", until = \"2 d\" }",
                FREE,
                "until must not be less than at",
            ),
            (
                "{ event = \"periapsis of Pell\", at = \"3 d\", body = \"Pell\" }",
                FREE,
                "a want has both event and body",
            ),
            (
                "{ event = \"periapsis of Pell\", at = \"3 d\", about = \"Orla\" }",
                FREE,
                "about means nothing beside event",
            ),
            (
                "{ event = \"periapsis of Pell\", at = \"3 d\", count = 2 }",
                FREE,
                "a count stands beside other outcomes",
            ),
            ("{ event = \"periapsis of Pell\", at = \"3 d\", within = \"3 km\" }", FREE, "km is a length"),
            (
                "{ event = \"periapsis of Pell\", at = \"3 d\", within = \"0 h\" }",
                FREE,
                "within is 0 h; it must be",
            ),
            (
                "{ event = \"periapsis of Pell\", at = \"3 d\", distance = \"1 au\", within = \"3 km\" }",
                FREE,
                "within doesn't say of which outcome",
            ),
            (
                "{ event = \"periapsis of Pell\", until = \"3 yr\", count = 2, within = \"3 km\" }",
                FREE,
                "within means nothing beside count",
            ),
            ("{ event = \"perihel of Pell\", at = \"3 d\" }", FREE, "there is no event \"perihel\""),
            ("{ body = \"Pell\", distance = \"3 au\" }", FREE, "a want needs its at"),
            ("{ body = \"Pell\", at = \"3 d\", count = 3 }", FREE, "count means nothing beside body"),
            ("{ body = \"Pell\", at = \"3 d\", period-ratio = 2 }", FREE, "doesn't say to whose period"),
            (
                "{ body = \"Pell\", about = \"Pell\", at = \"3 d\", distance = \"1 au\" }",
                FREE,
                "relative to itself",
            ),
            (
                "{ body = \"Pell\", at = \"3 d\", distance = \"0 au\" }",
                FREE,
                "distance is 0 au; it must be more than 0",
            ),
            (
                WANT,
                "{ body = \"Pell\", quantity = \"orbit.period\", from = \"3 au\", to = \"4 d\" }",
                "au is a length",
            ),
            (
                WANT,
                "{ body = \"Pell\", quantity = \"orbit.periapis\", from = \"1 au\", to = \"2 au\" }",
                "perhaps \"orbit.periapsis\"",
            ),
            (
                WANT,
                "{ body = \"Pell\", quantity = \"throw.speed\", from = \"1 km/s\", to = \"2 km/s\" }",
                "Pell has no throw",
            ),
            (
                WANT,
                "{ body = \"Pell\", quantity = \"orbit.periapsis\", from = \"2 au\", to = \"2 au\" }",
                "the range is empty",
            ),
            (
                WANT,
                "{ body = \"Pell\", quantity = \"orbit.periapsis\", from = \"2 au\" }",
                "a free number needs its to",
            ),
            (
                WANT,
                "{ body = \"Pell\", quantity = \"orbit.eccentricity\", from = \"0.2\", to = 0.3 }",
                "from is a text; a number",
            ),
        ] {
            let parsed = parse(&text(want, free));
            let errors: Vec<String> = parsed
                .problems
                .iter()
                .filter(|p| p.severity == Severity::Error)
                .map(ToString::to_string)
                .collect();
            assert!(parsed.scenario.is_none() && errors.len() == 1, "{want} {free}: {errors:#?}");
            assert!(errors[0].contains(said), "{want} {free}\ngot  {}\nwant {said}", errors[0]);
        }
    }
}
