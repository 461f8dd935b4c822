//! Events in text: "2nd periapsis of Fenn", "contact of Ball with Brae", "distance 1 au of Fenn from Orla".

use super::super::model::{BodyId, EventKind, EventRef};
use super::super::names::{Names, nearest};
use super::super::reader::Field;
use crate::units::{Length, number, text::clip};

/// What stands between the body of an event and the other one; each may stand for each.
const JOINERS: [&str; 4] = ["to", "with", "from", "on"];

/// Most that an event can be numbered.
const MOST: usize = 10_000;

/// What is wrong with a text, and what would be right.
pub(super) type Fault = (String, String);

/// The event that a field states.
pub(super) fn read(field: &Field<'_>, names: &Names) -> Option<EventRef> {
    let text = field.text()?;
    match event(text, names) {
        Ok(event) => Some(event),
        Err((wrong, remedy)) => {
            field.error(wrong, remedy);
            None
        }
    }
}

/// The event that a text states.
pub(super) fn event(text: &str, names: &Names) -> Result<EventRef, Fault> {
    let text = text.trim();
    let shown = clip(text);
    let Some((head, tail)) = text.split_once(" of ") else {
        return Err((
            format!("\"{shown}\" is no event"),
            format!("write a kind and a body, as in \"periapsis of Fenn\"; the kinds are: {}", kinds()),
        ));
    };
    let (nth, word) = numbered(head.trim())?;
    let (kind, distance) = kind_of(word)?;
    let (body, rest) = body_in(tail.trim_start(), names)?;
    let other = other_body(rest.trim(), names)?;
    if other == Some(body) {
        let name = names.name(body);
        return Err((format!("\"{shown}\" names {name} twice"), "name another body".to_owned()));
    }
    if kind.is_seen() && other.is_none() {
        return Err((
            format!("\"{shown}\" doesn't say from where it is seen"),
            format!("add from, as in \"{text} from Earth\""),
        ));
    }
    Ok(EventRef { kind, body, other, nth, distance })
}

fn kinds() -> String {
    EventKind::ALL.map(EventKind::name).join(", ")
}

/// "2nd periapsis" without its number, which is 1 when there is none.
fn numbered(head: &str) -> Result<(usize, &str), Fault> {
    let digits = head.bytes().take_while(u8::is_ascii_digit).count();
    let (number, rest) = head.split_at(digits);
    if number.is_empty() {
        return Ok((1, head));
    }
    let ending = rest.get(..2).filter(|e| ["st", "nd", "rd", "th"].contains(e));
    let word = ending.and(rest.get(2..)).map(str::trim_start);
    match (number.parse::<usize>(), word) {
        (Ok(nth @ 1..=MOST), Some(word)) => Ok((nth, word)),
        _ => Err((
            format!("\"{}\" is no number of an event", clip(head.split_whitespace().next().unwrap_or(head))),
            format!("write 1st, 2nd, 3rd and so on, up to {MOST}"),
        )),
    }
}

/// The kind of event, and the distance that its word states: "distance 1 au".
fn kind_of(word: &str) -> Result<(EventKind, Option<Length>), Fault> {
    let plain = word.to_lowercase().replace(' ', "-");
    let (first, rest) = word.split_at(word.find(char::is_whitespace).unwrap_or(word.len()));
    if first.to_lowercase() == EventKind::Distance.name() {
        return distance(rest.trim()).map(|distance| (EventKind::Distance, Some(distance)));
    }
    if let Some(kind) = EventKind::ALL.into_iter().find(|k| k.name() == plain) {
        return Ok((kind, None));
    }
    let remedy = match nearest(&plain, EventKind::ALL.into_iter().map(EventKind::name)) {
        Some(near) => format!("perhaps \"{near}\"; the kinds are: {}", kinds()),
        None => format!("the kinds are: {}", kinds()),
    };
    Err((format!("there is no event \"{}\"", clip(word)), remedy))
}

/// The distance whose crossing is an event.
fn distance(text: &str) -> Result<Length, Fault> {
    const AS_IN: &str = "as in \"distance 1 au of Fenn from Orla\"";
    if text.is_empty() {
        return Err(("a distance event doesn't say which distance".to_owned(), format!("write it, {AS_IN}")));
    }
    match Length::parse(text) {
        Ok(distance) if distance.m() > 0.0 => Ok(distance),
        Ok(_) => Err((format!("the distance is {}", clip(text)), format!("it must be more than 0, {AS_IN}"))),
        Err(error) => Err((error.wrong, error.remedy)),
    }
}

/// The body at the start of a text, and what follows it.
pub(super) fn body_in<'t>(text: &'t str, names: &Names) -> Result<(BodyId, &'t str), Fault> {
    names.leading(text).ok_or_else(|| {
        // What looks like the name: up to a joiner.
        let words: Vec<&str> = text.split_whitespace().take_while(|w| !JOINERS.contains(w)).collect();
        let name = words.join(" ");
        names.no_body(&name)
    })
}

fn other_body(rest: &str, names: &Names) -> Result<Option<BodyId>, Fault> {
    if rest.is_empty() {
        return Ok(None);
    }
    let joined = JOINERS.iter().find_map(|j| rest.strip_prefix(j)?.strip_prefix(char::is_whitespace));
    let Some(name) = joined else {
        return Err((
            format!("\"{}\" follows the body of an event", clip(rest)),
            "name the other body after to, with or from, as in \"contact of Ball with Brae\"".to_owned(),
        ));
    };
    whole_name(name.trim(), names).map(Some)
}

/// The body whose name a text is.
pub(super) fn whole_name(name: &str, names: &Names) -> Result<BodyId, Fault> {
    names.find(name).ok_or_else(|| names.no_body(name))
}

/// "1.5 periods of Fenn", or `None` when the text is not of that kind.
pub(super) fn periods(text: &str, names: &Names) -> Option<Result<(f64, BodyId), Fault>> {
    let (count, rest) = number::leading(text).ok()?;
    let name = rest.strip_prefix("periods of ").or_else(|| rest.strip_prefix("period of "))?;
    Some(whole_name(name.trim(), names).map(|body| (count, body)))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn names() -> Names {
        let bodies = ["Fenn", "Fenn to Brae", "Brae", "Old Moon of Brae", "Ball"].map(str::to_owned).to_vec();
        Names { bodies, ..Names::default() }
    }

    #[test]
    fn events_are_read_in_all_their_forms() {
        for (text, kind, body, other, nth) in [
            ("periapsis of Fenn", EventKind::Periapsis, 0, None, 1),
            ("2nd  periapsis of Fenn", EventKind::Periapsis, 0, None, 2),
            ("closest-approach of Fenn to Brae", EventKind::ClosestApproach, 0, Some(2), 1),
            ("closest approach of Fenn to Brae to Ball", EventKind::ClosestApproach, 1, Some(4), 1),
            ("21st contact of Old Moon of Brae with Fenn", EventKind::Contact, 3, Some(0), 21),
            ("Opposition of Brae from Fenn", EventKind::Opposition, 2, Some(0), 1),
            ("contact of Ball on Brae", EventKind::Contact, 4, Some(2), 1),
            ("ascending node of Fenn", EventKind::AscendingNode, 0, None, 1),
            ("3rd stationary of Brae from Ball", EventKind::Stationary, 2, Some(4), 3),
            ("greatest-elongation of Brae from Ball", EventKind::GreatestElongation, 2, Some(4), 1),
            ("shadow-entry of Ball", EventKind::ShadowEntry, 4, None, 1),
            ("penumbra-exit of Ball from Brae", EventKind::PenumbraExit, 4, Some(2), 1),
            ("transit-entry of Brae from Ball", EventKind::TransitEntry, 2, Some(4), 1),
        ] {
            // The longest name wins: "Fenn to Brae" is a body, so "Fenn to Brae" alone states no other one.
            let got = event(text, &names());
            if text == "closest-approach of Fenn to Brae" {
                assert_eq!(got.unwrap().body, BodyId(1), "{text}");
                continue;
            }
            let want = EventRef { kind, body: BodyId(body), other: other.map(BodyId), nth, distance: None };
            assert_eq!(got, Ok(want), "{text}");
        }
    }

    #[test]
    fn a_distance_is_stated_before_the_body() {
        for text in ["2nd distance 1.5 au of Ball from Brae", "2nd Distance  1.5 au of Ball to Brae"] {
            let want = EventRef {
                kind: EventKind::Distance,
                body: BodyId(4),
                other: Some(BodyId(2)),
                nth: 2,
                distance: Some(Length::parse("1.5 au").unwrap()),
            };
            assert_eq!(event(text, &names()), Ok(want));
        }
    }

    #[test]
    fn what_is_said_of_an_event_is_read_as_that_event() {
        let names = names();
        let said = |event: &EventRef| event.said(|body| names.bodies[body.0].as_str());
        for (nth, ordinal) in [
            (1, ""),
            (2, "2nd "),
            (3, "3rd "),
            (4, "4th "),
            (11, "11th "),
            (12, "12th "),
            (13, "13th "),
            (21, "21st "),
            (111, "111th "),
            (222, "222nd "),
            (1003, "1003rd "),
        ] {
            let periapsis =
                EventRef { kind: EventKind::Periapsis, body: BodyId(0), other: None, nth, distance: None };
            assert_eq!(said(&periapsis), format!("{ordinal}periapsis of Fenn"));
            assert_eq!(event(&said(&periapsis), &names), Ok(periapsis));
            for kind in EventKind::ALL {
                let distance =
                    (kind == EventKind::Distance).then(|| Length::parse("1.5 au").expect("a length"));
                let other = EventRef { kind, body: BodyId(4), other: Some(BodyId(2)), nth, distance };
                assert_eq!(event(&said(&other), &names), Ok(other), "{}", said(&other));
            }
        }
    }

    #[test]
    fn what_is_no_event_is_answered_with_what_would_be() {
        for (text, wrong, remedy) in [
            ("", "\"\" is no event", "periapsis, apoapsis"),
            ("periapsis", "is no event", "periapsis of Fenn"),
            ("periapis of Fenn", "there is no event \"periapis\"", "perhaps \"periapsis\""),
            ("periapsis of Fen", "there is no body \"Fen\"", "perhaps \"Fenn\""),
            ("periapsis of Fenn Brae", "\"Brae\" follows", "to, with or from"),
            ("contact of Ball with Bral", "there is no body \"Bral\"", "perhaps \"Brae\""),
            ("contact of Ball with Ball", "names Ball twice", "another"),
            ("opposition of Brae", "from where it is seen", "add from"),
            ("stationary of Brae", "from where it is seen", "add from"),
            ("distance of Ball from Brae", "doesn't say which distance", "distance 1 au of Fenn"),
            ("distance 0 km of Ball from Brae", "the distance is 0 km", "more than 0"),
            ("distance 3 d of Ball from Brae", "d is a time", "a length is wanted"),
            ("0th periapsis of Fenn", "is no number of an event", "2nd"),
            ("2 periapsis of Fenn", "is no number of an event", "2nd"),
            ("99999999999999999999th periapsis of Fenn", "is no number", "10000"),
        ] {
            let (w, r) = event(text, &names()).expect_err(text);
            assert!(w.contains(wrong) && r.contains(remedy), "{text}: {w}; {r}");
        }
    }
}
