//! Changes keep what they don't change, to the byte.

use super::*;
use crate::scenario::{Form, Severity};
use crate::units::{Length, Span};
use proptest::prelude::*;

const EXAMPLE: &str = include_str!("../testdata/example.toml");
const FULL: &str = include_str!("../testdata/full.toml");

fn open(text: &str) -> Document {
    Document::parse(text).unwrap_or_else(|p| panic!("{p:?}"))
}

/// What differs between two texts: the lines that are gone and the lines that came.
fn difference(before: &str, after: &str) -> (Vec<String>, Vec<String>) {
    let (a, b): (Vec<&str>, Vec<&str>) = (before.split('\n').collect(), after.split('\n').collect());
    let head = a.iter().zip(&b).take_while(|(x, y)| x == y).count();
    let tail = a[head..].iter().rev().zip(b[head..].iter().rev()).take_while(|(x, y)| x == y).count();
    let own = |lines: &[&str]| lines[head..lines.len() - tail].iter().map(|l| (*l).to_owned()).collect();
    (own(&a), own(&b))
}

#[test]
fn an_unchanged_document_is_the_same_to_the_byte() {
    for text in [EXAMPLE, FULL, "", "\u{feff}a = 1\r\n\r\n# end", &FULL.replace('\n', "\r\n")] {
        assert_eq!(open(text).to_text(), text);
    }
    assert!(Document::parse("a = ").is_err());
}

#[test]
fn a_value_is_replaced_alone() {
    let mut document = open(EXAMPLE);
    let path = Path::body("Fenn", &["orbit", "periapsis"]);
    assert_eq!(document.get_text(path).as_deref(), Some("0.42 au"));
    document.set(path, "0.5 au").unwrap();
    assert_eq!(document.to_text(), EXAMPLE.replacen("\"0.42 au\"", "\"0.5 au\"", 1));
    assert_eq!(document.get(path).as_deref(), Some("\"0.5 au\""));
    let scenario = document.scenario().scenario.unwrap();
    let Form::Orbit(orbit) = &scenario.bodies[2].form else { panic!("an orbit") };
    assert_eq!(orbit.periapsis, Some(Length::parse("0.5 au").unwrap()));

    document.set(Path::beat(0, &["clock", "at"]), "50 s").unwrap();
    document.set(Path::beat(0, &["marks", "1", "count"]), 3.0).unwrap();
    document.set(Path::beat(0, &["marks", "0"]), "path of Fenn").unwrap();
    let (gone, came) = difference(EXAMPLE, document.text());
    assert!(gone.len() == came.len() && document.text().contains("# or { pace = \"12 d/s\" }"), "{came:?}");
    assert!(document.text().contains(
        "marks = [\"path of Fenn\", { sector = \"Fenn\", every = \"20 d\", area = true, count = 3.0 }]"
    ));
}

#[test]
fn what_is_missing_is_added_behind_the_rest() {
    for (path, value, want) in [
        (Path::top(&["summary"]), "S", "summary = \"S\""),
        (Path::top(&["physics", "relativity"]), "x", "physics = { relativity = \"x\" }"),
        (Path::body("Orla", &["colour"]), "sky", "colour = \"sky\""),
        (
            Path::beat(0, &["view", "tilt"]),
            "30 deg",
            "view = { centre = \"Orla\", span = \"6 au\", tilt = \"30 deg\" }",
        ),
        (Path::beat(0, &["start", "event"]), "apoapsis of Fenn", "start = { event = \"apoapsis of Fenn\" }"),
    ] {
        let mut document = open(EXAMPLE);
        document.set(path, value).unwrap();
        let (_, came) = difference(EXAMPLE, document.text());
        assert_eq!(came, [want]);
        assert_eq!(document.get_text(path).as_deref(), Some(value));
        let again = document.clone();
        document.set(path, value).unwrap();
        assert_eq!(document, again);
        document.remove(path).unwrap();
        assert_eq!(document.get(path), None);
    }
    let mut empty = open("");
    empty.set(Path::top(&["format"]), Value::Toml("1".into())).unwrap();
    assert_eq!(empty.text(), "format = 1\n");
    empty.insert(List::Beats, 9, "title = \"T\"").unwrap();
    empty.insert(List::Bodies, 9, "name = \"B\"").unwrap();
    assert_eq!(empty.text(), "format = 1\n\n[[body]]\nname = \"B\"\n\n[[beat]]\ntitle = \"T\"\n");
    empty.remove_section(List::Beats, 0).unwrap();
    empty.remove_section(List::Bodies, 0).unwrap();
    assert_eq!(empty.text(), "format = 1\n");
}

#[test]
fn forms_change_in_all_the_ways_in_which_they_are_written() {
    for orbit in [
        "orbit = { around = \"A\", periapsis = \"1 au\", eccentricity = 0 } # its way",
        "orbit.around = \"A\"\norbit.periapsis = \"1 au\" # its way\norbit.eccentricity = 0",
        "[body.orbit]\naround = \"A\"\nperiapsis = \"1 au\" # its way\neccentricity = 0",
    ] {
        let text = format!(
            "format = 1\n[[body]]\nname = \"A\"\nmass = \"1 kg\"\n\n# the other\n[[body]]\nname = \"B\"\n{orbit}\n\n[[beat]]\nview = {{ centre = \"A\", span = \"1 m\" }}\n"
        );
        let mut document = open(&text);
        assert!(document.scenario().scenario.is_some(), "{:?}", document.scenario());
        document.set(Path::body("B", &["orbit", "periapsis"]), "2 au").unwrap();
        assert_eq!(document.text(), text.replacen("1 au", "2 au", 1));
        document.set(Path::body("B", &["orbit", "node"]), "2 deg").unwrap();
        let scenario = document.scenario().scenario.unwrap_or_else(|| panic!("{}", document.text()));
        let Form::Orbit(orbit) = &scenario.bodies[1].form else { panic!("an orbit") };
        assert!(orbit.node.rad() > 0.03 && document.text().contains("# its way"));
        document
            .set(
                Path::body("B", &["orbit"]),
                Value::Toml("{ around = \"A\", period = \"1 d\", eccentricity = 0 }".into()),
            )
            .unwrap();
        let scenario = document.scenario().scenario.unwrap_or_else(|| panic!("{}", document.text()));
        let Form::Orbit(orbit) = &scenario.bodies[1].form else { panic!("an orbit") };
        assert_eq!(orbit.period, Some(Span::from_s(86_400.0)));
        document.remove(Path::body("B", &["orbit"])).unwrap();
        document
            .set(Path::body("B", &["place", "position"]), Value::Toml("[\"1 m\", \"0 m\", \"0 m\"]".into()))
            .unwrap();
        let parsed = document.scenario();
        assert!(matches!(parsed.scenario.unwrap().bodies[1].form, Form::Place(_)));
        assert!(document.text().contains("# the other\n[[body]]\nname = \"B\"\n"));
    }
}

#[test]
fn sections_move_with_their_comments() {
    let text = "# top\nformat = 1\n\n# first\n[[body]]\nname = \"A\" # a\n\n# second\n# of two\n[[body]]\nname = \"B\"\n[body.place]\nposition = 1\n\n[[beat]]\ntitle = \"T\"\n";
    let mut document = open(text);
    document.shift(List::Bodies, 1, 0).unwrap();
    assert_eq!(
        document.text(),
        "# top\nformat = 1\n\n# second\n# of two\n[[body]]\nname = \"B\"\n[body.place]\nposition = 1\n\n# first\n[[body]]\nname = \"A\" # a\n\n[[beat]]\ntitle = \"T\"\n"
    );
    document.shift(List::Bodies, 0, 1).unwrap();
    assert_eq!(document.text(), text);
    document.remove_section(List::Bodies, 0).unwrap();
    assert_eq!(document.text(), text.replace("# first\n[[body]]\nname = \"A\" # a\n\n", ""));
    let windows = text.replace('\n', "\r\n");
    let mut document = open(&windows);
    document.insert(List::Bodies, 1, "name = \"C\"\nkind = \"rock\"").unwrap();
    assert!(!document.text().replace("\r\n", "").contains('\n'), "{:?}", document.text());
    document.remove_section(List::Bodies, 1).unwrap();
    assert_eq!(document.text(), windows);
}

#[test]
fn what_cannot_be_changed_is_said_and_nothing_is_changed() {
    let mut document = open(EXAMPLE);
    let no_body = document.set(Path::body("Pell", &["kind"]), "comet");
    assert_eq!(no_body, Err(EditError::NoSuchBody("Pell".into())));
    let holds_nothing = document.set(Path::body("Orla", &["kind", "of"]), "x");
    assert_eq!(holds_nothing, Err(EditError::HoldsNothing("kind".into())));
    assert!(matches!(
        document.set(Path::top(&["title"]), Value::Toml("= [".into())),
        Err(EditError::WouldBreak(_))
    ));
    assert!(document.set(Path::top(&[]), "x").is_err());
    assert!(document.set(Path::beat(0, &["marks", "9"]), "x").is_err());
    assert!(document.remove(Path::body("Orla", &["colour"])).is_err());
    assert_eq!(document.remove_section(List::Beats, 1), Err(EditError::NoSuchSection("beat", 1)));
    assert!(document.shift(List::Bodies, 0, 3).is_err());
    assert_eq!(document.text(), EXAMPLE);
}

/// Words that are awkward in TOML.
fn awkward() -> impl Strategy<Value = String> {
    prop_oneof!["\\PC{0,20}", "[\"'\\\\#=\\[\\]{}\n\t,]{0,12}"]
}

proptest! {
    #[test]
    fn any_text_set_anywhere_is_read_back_and_nothing_else_changes(text in awkward(), at in 0_usize..6, windows in any::<bool>()) {
        let source = if windows { FULL.replace('\n', "\r\n") } else { FULL.to_owned() };
        let paths: [Path<'_>; 6] = [
            Path::top(&["title"]),
            Path::top(&["new key", "a.b", "ü"]),
            Path::body("Fenn", &["orbit", "around"]),
            Path::body("Old Moon of Brae", &["orbit", "new"]),
            Path::beat(0, &["marks", "15", "trail"]),
            Path::beat(3, &["say"]),
        ];
        let mut document = open(&source);
        document.set(paths[at], text.as_str()).unwrap();
        let want = if windows { text.replace('\n', "\r\n") } else { text.clone() };
        let got = document.get_text(paths[at]).unwrap();
        prop_assert_eq!(got.replace("\r\n", "\n"), want.replace("\r\n", "\n"));
        let (gone, came) = difference(&source, document.text());
        prop_assert!(gone.len() <= 1, "{gone:?}");
        prop_assert!(came.len() <= 2 + text.matches('\n').count(), "{came:?}");
        // Comments stay.
        for line in source.lines().filter(|l| l.starts_with('#')) {
            prop_assert!(document.text().contains(line));
        }
    }

    #[test]
    fn what_is_inserted_and_taken_away_again_leaves_no_trace(index in 0_usize..12, beats in any::<bool>(), full in any::<bool>()) {
        let (list, source) = (if beats { List::Beats } else { List::Bodies }, if full { FULL } else { EXAMPLE });
        let mut document = open(source);
        let count = document.count(list);
        document.insert(list, index, "title = \"new\"\n# with a comment\n").unwrap();
        prop_assert_eq!(document.count(list), count + 1);
        document.remove_section(list, index.min(count)).unwrap();
        prop_assert_eq!(document.text(), source);
    }

    #[test]
    fn moving_there_and_back_leaves_no_trace(from in 0_usize..9, to in 0_usize..9) {
        let mut document = open(FULL);
        document.shift(List::Bodies, from, to).unwrap();
        prop_assert!(document.scenario().problems.iter().all(|p| p.severity == Severity::Note));
        document.shift(List::Bodies, to, from).unwrap();
        prop_assert_eq!(document.text(), FULL);
    }

    #[test]
    fn no_change_to_any_text_panics(
        text in "(\\[\\[body\\]\\]|\\[\\[beat\\]\\]|\\[body\\.orbit\\]|name = \"B\"|orbit = \\{ a = 1, \\}|orbit\\.a = 1|# c|x = \\[1, 2,\\]|\\n){0,20}",
        key in "(orbit|name|a|x|0|2)", deeper in "(a|0|z)",
    ) {
        let Ok(mut document) = Document::parse(&text) else { return Ok(()) };
        for root in [Root::Top, Root::BodyAt(0), Root::Beat(1), Root::Body("B")] {
            let one = [key.as_str()];
            let two = [key.as_str(), deeper.as_str()];
            for keys in [one.as_slice(), two.as_slice()] {
                let path = Path { root, keys };
                if document.set(path, "v").is_ok() {
                    prop_assert_eq!(document.get_text(path), Some("v".to_owned()), "{}", document.text());
                    if document.remove(path).is_ok() {
                        prop_assert_eq!(document.get(path), None, "{}", document.text());
                    }
                }
            }
        }
    }
}
