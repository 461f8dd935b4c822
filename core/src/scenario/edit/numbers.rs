//! Every number that a section of a scenario states, wherever in it it stands: bare ones, and those with a unit in a text.

use super::holder::Holder;
use super::{Document, Path, Root, Value, without_mark};
use crate::scenario::problem::Place;
use crate::scenario::source::Source;
use crate::units::{number, text::is_unit};
use std::ops::Range;

/// A number that is stated.
#[derive(Debug, Clone, PartialEq)]
pub struct StatedNumber {
    /// In which section.
    pub root: Root<'static>,
    /// The keys that lead to it.
    pub keys: Vec<String>,
    /// What stands there: the number, or the text that holds it.
    pub stated: String,
    /// Its value, in the unit that is stated.
    pub value: f64,
    /// Where it stands in the text.
    pub place: Place,
    /// Where the number stands in `stated`; `None`: it is all of it, and no text.
    within: Option<Range<usize>>,
}

impl StatedNumber {
    /// Puts another number in its place, and leaves the rest of its text as it is.
    ///
    /// # Errors
    /// As [`Document::set`].
    pub fn put(&self, document: &mut Document, value: f64) -> Result<(), super::EditError> {
        let value = match &self.within {
            None => Value::Number(value),
            Some(within) => {
                let mut text = self.stated.clone();
                text.replace_range(within.clone(), &number::shortest(value));
                Value::Text(text)
            }
        };
        let keys: Vec<&str> = self.keys.iter().map(String::as_str).collect();
        document.set(Path { root: self.root, keys: &keys }, value)
    }
}

impl Document {
    /// The numbers that a section states, in its order: bare ones, and in texts the first that has a unit ("0.6 au", "2 periods of Fenn",
    /// "distance 1 au of Fenn from Orla"). Empty where there is no such section.
    pub fn numbers(&self, root: Root<'static>) -> Vec<StatedNumber> {
        let mut found = Vec::new();
        let looked = self.look(|document, text| {
            let holder = Holder::root(document, root)?;
            gather(&holder, root, &mut Vec::new(), text, &Source::new(without_mark(&self.text)), &mut found);
            Ok(())
        });
        if looked.is_err() {
            found.clear();
        }
        found
    }
}

fn gather(
    holder: &Holder<'_>,
    root: Root<'static>,
    way: &mut Vec<String>,
    text: &str,
    source: &Source<'_>,
    found: &mut Vec<StatedNumber>,
) {
    for key in holder.keys() {
        way.push(key.clone());
        if let Some(inside) = holder.inside(&key) {
            gather(&inside, root, way, text, source, found);
        } else if let Some(entry) = holder.entry(&key) {
            let (stated, number) = match holder.text(&key) {
                Some(stated) => {
                    let number = with_unit(&stated).map(|(within, value)| (Some(within), value));
                    (stated, number)
                }
                None => {
                    let stated = text.get(entry.at.clone()).unwrap_or("").to_owned();
                    let bare = number::leading(&stated).ok().filter(|(_, rest)| rest.is_empty());
                    let bare = bare.map(|(value, _)| (None, value));
                    (stated, bare)
                }
            };
            found.extend(number.map(|(within, value)| StatedNumber {
                root,
                keys: way.clone(),
                stated,
                value,
                place: source.place(entry.at.start),
                within,
            }));
        }
        way.pop();
    }
}

/// The first number in a text behind which a unit stands, up to " of ": where it stands, and its value.
fn with_unit(text: &str) -> Option<(Range<usize>, f64)> {
    const PERIODS: [&str; 2] = ["period", "periods"];
    let words = text.match_indices(char::is_whitespace).map(|(at, space)| at + space.len());
    std::iter::once(0).chain(words).find_map(|start| {
        let from = text.get(start..)?;
        let start = start + from.len() - from.trim_start().len();
        let (value, rest) = number::leading(from).ok()?;
        let unit = rest.split_once(" of ").map_or(rest, |(unit, _)| unit).trim();
        if !is_unit(unit) && !PERIODS.contains(&unit) {
            return None;
        }
        let end = text.trim_end().len() - rest.len();
        let end = start + text.get(start..end)?.trim_end().len();
        Some((start..end, value))
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn found(text: &str, root: Root<'static>) -> Vec<(String, String, f64)> {
        let document = Document::parse(text).expect("TOML");
        let all = document.numbers(root);
        all.into_iter().map(|one| (one.keys.join("."), one.stated, one.value)).collect()
    }

    fn row(keys: &str, stated: &str, value: f64) -> (String, String, f64) {
        (keys.to_owned(), stated.to_owned(), value)
    }

    #[test]
    fn numbers_are_found_wherever_they_stand() {
        let text = "[[body]]\nname = \"HD 1\"\nkind = \"star\"\nmass = \"1_000 kg\"\nrestitution = 1\n\
                    orbit.semi-major = \"-2.5e3km\"\norbit.around = \"Orla\"\n\
                    place = { position = [\"1 au\", \"0 au\", \"+3 au\"], velocity = [] }\n\
                    [body.atmosphere]\nheights = [\"0 m\", \"1 km\"]\n";
        assert_eq!(
            found(text, Root::BodyAt(0)),
            [
                row("mass", "1_000 kg", 1000.0),
                row("restitution", "1", 1.0),
                row("orbit.semi-major", "-2.5e3km", -2500.0),
                row("place.position.0", "1 au", 1.0),
                row("place.position.1", "0 au", 0.0),
                row("place.position.2", "+3 au", 3.0),
                row("atmosphere.heights.0", "0 m", 0.0),
                row("atmosphere.heights.1", "1 km", 1.0),
            ]
        );
        assert!(found(text, Root::Change(0)).is_empty());
    }

    #[test]
    fn texts_that_are_more_than_a_quantity_give_the_number_that_has_a_unit() {
        let text = "[[change]]\nat = { event = \"2nd distance 1.5 au of Fenn from Orla\", after = \"3 d\" }\nkick = \"Fenn\"\n\
                    [[beat]]\ntitle = \"7 stars\"\nclock = { span = \"2 periods of Fenn\", lasts = \"60 s\" }\n\
                    start = { date = \"2031-03-05T20:00:00Z\" }\n";
        assert_eq!(
            found(text, Root::Change(0)),
            [row("at.event", "2nd distance 1.5 au of Fenn from Orla", 1.5), row("at.after", "3 d", 3.0)]
        );
        assert_eq!(
            found(text, Root::Beat(0)),
            [row("clock.span", "2 periods of Fenn", 2.0), row("clock.lasts", "60 s", 60.0)]
        );
    }

    #[test]
    fn another_number_leaves_the_rest_of_the_text_alone() {
        let text = "# so\n[[change]]\nat = { event = \"distance  1.5 au of Fenn\" } # then\nvelocity = [ \"1 km/s\", \"2km/s\" ]\n\
                    [physics]\nsoftening = \"3 km\"\n[[body]]\nrestitution = 0.5\n";
        let mut document = Document::parse(text).unwrap();
        for root in [Root::Change(0), Root::BodyAt(0)] {
            for number in document.numbers(root) {
                number.put(&mut document, number.value + 0.25).unwrap();
            }
        }
        let wanted = text.replace("1.5", "1.75").replace("\"1 ", "\"1.25 ").replace("2km", "2.25km");
        assert_eq!(document.text(), wanted.replace("0.5", "0.75"));
        let softening = document.numbers(Root::Top).into_iter().find(|one| one.keys[0] == "physics").unwrap();
        assert_eq!((softening.value, softening.place), (3.0, Place { line: 6, column: 13 }));
    }
}
