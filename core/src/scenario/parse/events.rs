//! Events in text: "2nd periapsis of Fenn", "contact of Ball with Brae".

use super::super::model::{BodyId, EventKind, EventRef};
use super::super::names::{Names, nearest};
use super::super::reader::Field;
use crate::units::{number, text::clip};

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

fn event(text: &str, names: &Names) -> Result<EventRef, Fault> {
    let text = text.trim();
    let shown = clip(text);
    let Some((head, tail)) = text.split_once(" of ") else {
        return Err((
            format!("\"{shown}\" is no event"),
            format!("write a kind and a body, as in \"periapsis of Fenn\"; the kinds are: {}", kinds()),
        ));
    };
    let (nth, word) = numbered(head.trim())?;
    let kind = kind_of(word)?;
    let (body, rest) = body_in(tail.trim_start(), names)?;
    let other = other_body(rest.trim(), names)?;
    if other == Some(body) {
        let name = names.name(body);
        return Err((format!("\"{shown}\" names {name} twice"), "name another body".to_owned()));
    }
    let from = matches!(kind, EventKind::Conjunction | EventKind::Opposition);
    if from && other.is_none() {
        return Err((
            format!("\"{shown}\" doesn't say from where it is seen"),
            format!("add from, as in \"{text} from Earth\""),
        ));
    }
    Ok(EventRef { kind, body, other, nth })
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

fn kind_of(word: &str) -> Result<EventKind, Fault> {
    let plain = word.to_lowercase().replace(' ', "-");
    if let Some(kind) = EventKind::ALL.into_iter().find(|k| k.name() == plain) {
        return Ok(kind);
    }
    let remedy = match nearest(&plain, EventKind::ALL.into_iter().map(EventKind::name)) {
        Some(near) => format!("perhaps \"{near}\"; the kinds are: {}", kinds()),
        None => format!("the kinds are: {}", kinds()),
    };
    Err((format!("there is no event \"{}\"", clip(word)), remedy))
}

/// The body at the start of a text, and what follows it.
pub(super) fn body_in<'t>(text: &'t str, names: &Names) -> Result<(BodyId, &'t str), Fault> {
    names.leading(text).ok_or_else(|| {
        // What looks like the name: up to a joiner.
        let words: Vec<&str> = text.split_whitespace().take_while(|w| !JOINERS.contains(w)).collect();
        let name = words.join(" ");
        (format!("there is no body \"{}\"", clip(&name)), names.remedy(&name))
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
    names.find(name).ok_or_else(|| (format!("there is no body \"{}\"", clip(name)), names.remedy(name)))
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
        Names(["Fenn", "Fenn to Brae", "Brae", "Old Moon of Brae", "Ball"].map(str::to_owned).to_vec())
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
        ] {
            // The longest name wins: "Fenn to Brae" is a body, so "Fenn to Brae" alone states no other one.
            let got = event(text, &names());
            if text == "closest-approach of Fenn to Brae" {
                assert_eq!(got.unwrap().body, BodyId(1), "{text}");
                continue;
            }
            let want = EventRef { kind, body: BodyId(body), other: other.map(BodyId), nth };
            assert_eq!(got, Ok(want), "{text}");
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
            ("0th periapsis of Fenn", "is no number of an event", "2nd"),
            ("2 periapsis of Fenn", "is no number of an event", "2nd"),
            ("99999999999999999999th periapsis of Fenn", "is no number", "10000"),
        ] {
            let (w, r) = event(text, &names()).expect_err(text);
            assert!(w.contains(wrong) && r.contains(remedy), "{text}: {w}; {r}");
        }
    }
}
