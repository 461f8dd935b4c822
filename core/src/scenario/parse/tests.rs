//! Whole files: the format's example, what is left out, and what is refused.

use super::*;
use crate::scenario::*;
use crate::units::{Gm, Length, Pace, Span, Speed};

/// The example that the format is defined by.
const EXAMPLE: &str = include_str!("../testdata/example.toml");

/// A file that uses every key of the format.
const FULL: &str = include_str!("../testdata/full.toml");

/// A file with what does not go with real bodies.
const SOFTENED: &str =
    "format = 1\ntitle = \"T\"\n[physics]\nsoftening = \"1000 km\"\n[[body]]\nname = \"Orla\"\n";

/// A frame for tests of single sections.
fn with(more: &str) -> String {
    format!(
        "format = 1\ntitle = \"T\"\n[[body]]\nname = \"Orla\"\nmass = \"1 Sun mass\"\nradius = \"1 Sun radius\"\n{more}"
    )
}

fn good(text: &str) -> Scenario {
    let parsed = parse(text);
    let errors: Vec<String> = parsed.problems.iter().map(ToString::to_string).collect();
    parsed.scenario.unwrap_or_else(|| panic!("{errors:#?}"))
}

/// The problems of a text, as people read them, notes left out.
fn errors(text: &str) -> Vec<String> {
    let parsed = parse(text);
    assert!(parsed.scenario.is_none(), "no error in {text}");
    parsed.problems.iter().filter(|p| p.severity == Severity::Error).map(ToString::to_string).collect()
}

fn one_error(text: &str) -> String {
    let errors = errors(text);
    assert_eq!(errors.len(), 1, "{errors:#?}");
    errors.into_iter().next().unwrap()
}

#[test]
fn the_example_of_the_format_parses_as_it_stands() {
    let parsed = parse(EXAMPLE);
    assert_eq!(parsed.problems, []);
    let scenario = parsed.scenario.unwrap();
    assert_eq!(scenario.title, "Equal areas, unequal speeds");
    assert_eq!(scenario.date.unwrap().to_utc_text(), "2031-03-05T20:00:00Z");
    let [orla, brae, fenn] = scenario.bodies.as_slice() else { panic!("three bodies") };
    assert_eq!((orla.kind, orla.colour, &orla.form), (Kind::Star, Colour::Bone, &Form::Origin));
    assert_eq!(orla.gm, Some(Gm::parse("0.9 Sun masses").unwrap()));
    assert_eq!(orla.radius, Some(Length::from_m(6.2e8)));
    assert_eq!(orla.place, Place { line: 5, column: 1 });
    assert_eq!((brae.kind, brae.colour, brae.surface), (Kind::Planet, Colour::Green, Surface::Stop));
    let Form::Orbit(orbit) = &fenn.form else { panic!("an orbit") };
    assert_eq!((fenn.kind, fenn.colour, fenn.gm), (Kind::Comet, Colour::Vermilion, None));
    assert_eq!(orbit.around, BodyId(0));
    assert_eq!(orbit.eccentricity, Some(0.88));
    assert_eq!(orbit.now, OrbitNow::AfterPeriapsis(Span::from_s(-140.0 * 86_400.0)));
    let [beat] = scenario.beats.as_slice() else { panic!("one beat") };
    let periapsis =
        EventRef { kind: EventKind::Periapsis, body: BodyId(2), other: None, nth: 1, distance: None };
    assert_eq!(
        beat.clock,
        BeatClock::Reach { event: periapsis, at: Span::from_s(40.0), lasts: Span::from_s(50.0) }
    );
    assert_eq!(beat.captions.iter().map(|c| c.language.as_str()).collect::<Vec<_>>(), ["en", "cy"]);
    assert_eq!(beat.marks[0], Mark::Trail { body: BodyId(2), lasts: None });
    let every = Some(Span::from_s(20.0 * 86_400.0));
    assert_eq!(beat.marks[1], Mark::Sector { body: BodyId(2), about: None, every, count: None, area: true });
    assert_eq!((beat.start, beat.then), (BeatStart::GoOn, Then::GoOn));
    assert_eq!(beat.clock_place.line, 32);
}

#[test]
fn every_key_of_the_format_is_read() {
    let scenario = good(FULL);
    assert!(scenario.bodies.iter().any(|b| b.surface == Surface::Bounce { restitution: 0.8 }));
    assert_eq!(scenario.physics.companions, Some(false));
    let [off, kicked, pushed] = scenario.changes.as_slice() else { panic!("three changes") };
    assert_eq!((off.body, off.what), (BodyId(0), ChangeKind::Gravity { on: false }));
    assert_eq!(off.at, ChangeTime::Time(Span::from_s(120.0 * 86_400.0)));
    let kick = Kick::Along {
        speed: Speed::from_m_s(-200.0),
        direction: Direction::Outwards,
        about: Some(BodyId(1)),
    };
    assert_eq!(kicked.what, ChangeKind::Kick(kick));
    let by = [0.0, 1000.0, 0.0].map(Speed::from_m_s);
    assert_eq!(pushed.what, ChangeKind::Kick(Kick::By(by)));
    let cast = scenario.beats[0].cast.as_ref().unwrap();
    assert_eq!(
        (cast.bodies.as_slice(), cast.swarms.as_slice()),
        (&[BodyId(0), BodyId(2)][..], &[SwarmId(1)][..])
    );
    let [ring, belt, cloud, plume] = scenario.swarms.as_slice() else { panic!("four swarms") };
    assert_eq!(
        (ring.name.as_str(), ring.colour, ring.count, ring.seed),
        ("Ring of Brae", Colour::Yellow, 5000, 7)
    );
    assert!(
        matches!(ring.shape, SwarmShape::Ring { around: BodyId(1), thickness, .. } if thickness == Length::from_m(2e3))
    );
    assert_eq!((belt.colour, belt.seed, belt.drag), (Colour::Bone, 1, None));
    assert!(matches!(belt.shape, SwarmShape::Belt { around: BodyId(0), .. }));
    assert!(matches!(cloud.shape, SwarmShape::Cloud { around: BodyId(0), .. }));
    assert!(matches!(plume.shape, SwarmShape::Burst { of: BodyId(1), spot: Some(_), .. }));
    let last = scenario.bodies.last().unwrap();
    assert_eq!(last.name, "Late one", "swarms are not counted among the bodies");
    let beats = &scenario.beats;
    assert_eq!(beats[0].clock, BeatClock::Hold { lasts: Span::from_s(30.0) });
    assert_eq!(
        beats[1].clock,
        BeatClock::Pace { pace: Pace::parse("12 d/s").unwrap(), lasts: Span::from_s(60.0) }
    );
    assert_eq!(beats[1].view.centre.about, None);
    assert_eq!(beats[1].view.span, beats[0].view.span, "a view goes on from the beat before");
    assert_eq!(beats[1].marks, beats[0].marks, "marks go on from the beat before");
    assert!(beats[2].marks.is_empty());
    assert_eq!(beats[2].then, Then::Hold, "a span is over when it is over");
    let BeatStart::Event { after, .. } = beats[2].start else { panic!("an event") };
    assert!((after.s() + 3.0 * 86_400.0).abs() < 1e-6);
    let BeatStart::Time(time) = beats[3].start else { panic!("a time") };
    assert!((time.s() - 10.0 * 86_400.0).abs() < 1e-3, "a date counts from the scenario's");
    // Each key of the grammar stands in the file: the tables and this test hold each other up.
    for section in grammar::SECTIONS {
        for key in section.keys {
            assert!(FULL.contains(key.name) || SOFTENED.contains(key.name), "{}: {}", section.what, key.name);
        }
    }
}

#[test]
fn changes_that_cannot_be_are_refused() {
    let orbit =
        "[[body]]\nname = \"B\"\norbit = { around = \"Orla\", periapsis = \"1 au\", eccentricity = 0 }\n";
    for (change, says) in [
        ("gravity = \"Orla\"\non = false", "a change needs its at"),
        ("at = \"-3 d\"\ngravity = \"Orla\"\non = false", "it must not be negative"),
        ("at = \"3 d\"", "nothing says what changes"),
        ("at = \"3 d\"\ngravity = \"Orla\"", "a change needs its on"),
        ("at = \"3 d\"\ngravity = \"B\"\non = true", "B has no gravity to switch"),
        (
            "at = \"3 d\"\ngravity = \"Orla\"\non = true\nspeed = \"1 m/s\"",
            "speed does not belong to gravity",
        ),
        ("at = \"3 d\"\ngravity = \"Orla\"\nkick = \"B\"\non = true", "both gravity and kick"),
        ("at = \"3 d\"\nkick = \"B\"", "a change needs its speed"),
        ("at = \"3 d\"\nkick = \"B\"\nspeed = \"1 m/s\"\nabout = \"B\"", "relative to itself"),
        ("at = \"3 d\"\nkick = \"B\"\nspeed = \"1 m/s\"\nalong = \"velosity\"", "perhaps \"velocity\""),
        ("at = \"3 d\"\nkick = \"C\"\nspeed = \"1 m/s\"", "there is no body \"C\""),
        (
            "at = { beat = \"Cuts\" }\nkick = \"B\"\nspeed = \"1 m/s\"",
            "there is no beat \"Cuts\"; perhaps \"Cut\"",
        ),
        ("at = { beat = \"Twice\" }\nkick = \"B\"\nspeed = \"1 m/s\"", "two beats are called \"Twice\""),
        ("at = { after = \"3 d\" }\nkick = \"B\"\nspeed = \"1 m/s\"", "says neither beat nor event"),
        (
            "at = { beat = \"Cut\", event = \"apoapsis of B\" }\nkick = \"B\"\nspeed = \"1 m/s\"",
            "has both beat and event",
        ),
        (
            "at = { beat = \"Cut\", before = \"3 d\" }\nkick = \"B\"\nspeed = \"1 m/s\"",
            "before does not go with beat",
        ),
        ("at = { event = \"apopsis of B\" }\nkick = \"B\"\nspeed = \"1 m/s\"", "perhaps \"apoapsis\""),
    ] {
        let beats = ["Cut", "Twice", "Twice"].map(|title| {
            format!("[[beat]]\ntitle = \"{title}\"\nview = {{ centre = \"Orla\", span = \"6 au\" }}\n")
        });
        let error = one_error(&with(&format!("{orbit}[[change]]\n{change}\n{}", beats.concat())));
        assert!(error.contains(says), "{change}: {error}");
    }
}

#[test]
fn byte_order_mark_line_ends_and_tabs_change_nothing() {
    let plain = good(EXAMPLE);
    let windows = format!("\u{feff}{}", EXAMPLE.replace('\n', "\r\n").replace(" = ", "\t=\t"));
    let mut other = good(&windows);
    for (a, b) in other.beats.iter_mut().zip(&plain.beats) {
        a.clock_place = b.clock_place;
    }
    assert_eq!(other, plain);
    let error = one_error(&format!("\u{feff}{}\r\nmas = 1", with("").replace('\n', "\r\n").trim_end()));
    assert!(error.starts_with("7:1: a body has no key \"mas\"; perhaps \"mass\""), "{error}");
    let error = one_error(&with("kind = \"stär\" # é"));
    assert!(error.starts_with("7:8: there is no kind"), "{error}");
}

#[test]
fn a_bare_number_is_told_the_units_that_fit() {
    let error = one_error(&with(
        "[[body]]\nname = \"B\"\nradius = 6900\nplace = { position = [\"1 m\", \"0 m\", \"0 m\"] }",
    ));
    assert_eq!(
        error,
        "9:10: radius = 6900 is a bare number; a length is wanted: m, km, au, Earth radii, Sun radii, as in \"0.6 au\""
    );
}

#[test]
fn all_problems_of_a_file_come_at_once_and_in_order() {
    let errors = errors(
        "format = 1\ntitle = 3\n[[body]]\nnam = \"A\"\nmass = \"1 km\"\n[[body]]\nname = \"B\"\n\
         orbit = { around = \"C\", periapsis = 1 }\n[[beat]]\nclock = { pace = \"3 d\" }\nmarks = [\"trial of B\"]\n",
    );
    let starts: Vec<&str> = errors.iter().map(|e| e.split(';').next().unwrap()).collect();
    assert_eq!(
        starts,
        [
            "2:9: title is a number",
            "3:1: a body needs its name",
            "4:1: a body has no key \"nam\"",
            "5:8: km is a length",
            "8:9: an orbit needs more than its periapsis",
            "8:20: there is no body \"C\"",
            "8:37: periapsis = 1 is a bare number",
            "9:1: the first beat has no view",
            "10:18: d is a time",
            "11:10: there is no mark \"trial\"",
        ]
    );
}

#[test]
fn bodies_that_cannot_be_are_refused() {
    for (more, want) in [
        ("mass = \"1 kg\"", "not TOML or stated twice"),
        (
            "[[body]]\nname = \"orla\"\ndrop = { onto = \"Orla\", height = \"1 km\" }",
            "8:8: \"orla\" and \"Orla\" differ only in capitals",
        ),
        ("[[body]]\nname = \" \"\ndrop = { onto = \"Orla\", height = \"1 km\" }", "8:8: a name is empty"),
        ("[[body]]\nname = \"B\"", "7:1: nothing says where B is, as nothing says where Orla is"),
        (
            "[[body]]\nname = \"B\"\nmass = \"-1 kg\"\ndrop = { onto = \"Orla\", height = \"1 km\" }",
            "9:8: mass is -1 kg; it must be more than 0",
        ),
        (
            "[[body]]\nname = \"B\"\nmass = \"0 kg\"\ndrop = { onto = \"Orla\", height = \"1 km\" }",
            "9:8: mass is 0; leave it out",
        ),
        ("[[body]]\nname = \"B\"\nreal = \"Mars\"", "9:8: a real body needs the scenario's date"),
        ("[[body]]\nname = \"B\"\nreal = \"Mras\"", "perhaps \"Mars\""),
        ("[[body]]\nname = \"B\"\nwheel = []", "8:1"),
        (
            "[[body]]\nname = \"B\"\norbit = { around = \"B\", periapsis = \"1 au\", eccentricity = 0 }",
            "9:20: B is stated by itself",
        ),
        (
            "[[body]]\nname = \"B\"\ndrop = { onto = \"Orla\", height = \"1 km\" }\n[[body]]\nname = \"C\"\norbit = { around = \"B\", periapsis = \"1 au\", eccentricity = 0 }",
            "12:20: B has no mass, so nothing goes around it",
        ),
        (
            "[[body]]\nname = \"B\"\nmass = \"1 kg\"\ndrop = { onto = \"Orla\", height = \"1 km\" }\n[[body]]\nname = \"C\"\ndrop = { onto = \"B\", height = \"1 m\" }",
            "13:17: B has no radius, so it has no surface",
        ),
        (
            "[[body]]\nname = \"B\"\nplace = { position = [\"1 au\", \"2 au\"] }",
            "9:22: position is a list; a list of three is wanted",
        ),
        (
            "[[body]]\nname = \"B\"\nsurface = \"bounce\"\nrestitution = 1.5\ndrop = { onto = \"Orla\", height = \"1 km\" }",
            "10:15: restitution is 1.5; it must be 0 to 1",
        ),
        (
            "[[body]]\nname = \"B\"\nthrow = { from = \"Orla\", speed = \"1 km/s\", latitude = \"91 deg\" }",
            "latitude is beyond a pole",
        ),
        (
            "[[body]]\nname = \"B\"\nplace = { position = [\"1 au\", \"2 au\", \"0 m\"] }\ndrop = { onto = \"Orla\", height = \"1 m\" }",
            "10:1: a body has both place and drop",
        ),
    ] {
        let got = errors(&with(more));
        if more.starts_with("mass") {
            assert!(got[0].contains("stated twice"), "{got:?}");
        } else if more.contains("wheel") {
            assert!(got.iter().any(|e| e.contains("has no key \"wheel\"")), "{got:?}");
        } else {
            assert_eq!(got.len(), 1, "{got:#?}");
            assert!(got[0].contains(want), "{more}\ngot  {}\nwant {want}", got[0]);
        }
    }
}

#[test]
fn circles_of_bodies_are_told_once() {
    let circle = |name: &str, around: &str| {
        format!(
            "[[body]]\nname = \"{name}\"\nmass = \"1 kg\"\norbit = {{ around = \"{around}\", periapsis = \"1 au\", eccentricity = 0 }}\n"
        )
    };
    let text = with(&[circle("A", "B"), circle("B", "C"), circle("C", "A"), circle("D", "A")].concat());
    let error = one_error(&text);
    assert!(error.contains("10:20: A is stated by B, that by C, that by A"), "{error}");
}

#[test]
fn orbits_that_cannot_be_are_refused() {
    for (stated, want) in [
        ("", "an orbit needs its size and shape"),
        ("eccentricity = 0.1", "needs more than its eccentricity; add periapsis"),
        ("periapsis = \"1 au\"", "add eccentricity = 0 for a circle"),
        (
            "periapsis = \"1 au\", apoapsis = \"2 au\", period = \"1 yr\"",
            "an orbit has period beside periapsis and apoapsis",
        ),
        ("semi-major = \"1 au\", period = \"1 yr\"", "period says the same as semi-major"),
        ("periapsis = \"2 au\", apoapsis = \"1 au\"", "apoapsis is nearer than periapsis"),
        ("periapsis = \"2 au\", semi-major = \"1 au\"", "periapsis is farther than semi-major"),
        ("apoapsis = \"3 au\", semi-major = \"1 au\"", "apoapsis doesn't fit semi-major"),
        ("apoapsis = \"3 au\", eccentricity = 1", "an open orbit has no apoapsis"),
        ("period = \"3 d\", eccentricity = 1.5", "an open orbit has no period"),
        ("semi-major = \"3 au\", eccentricity = 1", "a parabola has no semi-major axis"),
        ("semi-major = \"3 au\", eccentricity = 1.5", "semi-major of a hyperbola is negative"),
        ("semi-major = \"-3 au\", eccentricity = 0.5", "semi-major of a closed orbit is positive"),
        ("semi-major = \"0 au\", eccentricity = 0.5", "semi-major is 0"),
        ("periapsis = \"1 au\", eccentricity = -0.5", "eccentricity is -0.5; it must be 0 or more"),
        ("periapsis = \"1 au\", eccentricity = \"0.5\"", "eccentricity is a text; a number without quotes"),
        ("periapsis = \"1 au\", eccentricity = nan", "eccentricity is not a finite number"),
        ("periapsis = \"1 au\", eccentricity = 2, anomaly = \"130 deg\"", "never gets to that anomaly"),
        (
            "periapsis = \"1 au\", eccentricity = 2, mean-anomaly = \"1 deg\"",
            "an open orbit has no mean anomaly",
        ),
        (
            "periapsis = \"1 au\", eccentricity = 0, anomaly = \"1 deg\", after-periapsis = \"1 d\"",
            "has both anomaly and after-periapsis",
        ),
        ("periapsis = \"-1 au\", eccentricity = 0", "periapsis is -1 au; it must be more than 0"),
    ] {
        let comma = if stated.is_empty() { "" } else { ", " };
        let error = one_error(&with(&format!(
            "[[body]]\nname = \"B\"\norbit = {{ around = \"Orla\"{comma}{stated} }}"
        )));
        assert!(error.contains(want), "{stated}\ngot  {error}\nwant {want}");
    }
    for stated in [
        "semi-major = \"-3 au\", eccentricity = 1.5",
        "periapsis = \"1 au\", semi-major = \"-1 au\"",
        "periapsis = \"1 au\", eccentricity = 1",
        "periapsis = \"1 au\", period = \"3 yr\"",
        "periapsis = \"1 au\", eccentricity = 2, anomaly = \"119 deg\"",
        "semi-major = \"1 au\", eccentricity = 0",
    ] {
        good(&with(&format!("[[body]]\nname = \"B\"\norbit = {{ around = \"Orla\", {stated} }}")));
    }
}

#[test]
fn beats_that_cannot_be_are_refused() {
    for (stated, want) in [
        ("view = { span = \"1 au\" }", "a view needs its centre"),
        ("view = { centre = \"Orla\" }", "a view needs its span"),
        ("view = { centre = \"Orl\", span = \"1 au\" }", "there is no body \"Orl\"; perhaps \"Orla\""),
        ("view = { centre = \"Orla\", span = \"0 au\" }", "span is 0 au; it must be more than 0"),
        ("clock = {}", "a clock says neither pace, span, reach nor hold"),
        ("clock = { pace = \"1 d/s\", hold = \"3 s\" }", "a clock has both pace and hold"),
        ("clock = { hold = \"3 s\", lasts = \"3 s\" }", "lasts means nothing beside hold"),
        ("clock = { span = \"3 d\" }", "a clock needs its lasts"),
        ("clock = { span = \"0 periods of Orla\", lasts = \"3 s\" }", "covers no periods"),
        ("clock = { reach = \"periapsis of Orla\" }", "a clock needs its at"),
        (
            "clock = { reach = \"periapsis of Orla\", at = \"9 s\", lasts = \"3 s\" }",
            "the beat ends before its event",
        ),
        ("clock = { reach = \"perihel of Orla\", at = \"9 s\" }", "there is no event \"perihel\""),
        ("clock = 3", "clock is a number; a table is wanted"),
        ("start = \"later\"", "there is no start \"later\"; the choice is: go-on, restart"),
        ("start = 3", "start is a number"),
        ("start = { date = \"2031-01-01\" }", "needs the scenario's date"),
        ("start = { time = \"3 d\", after = \"3 d\" }", "after means nothing beside time"),
        ("then = \"stop\"", "there is no then \"stop\""),
        ("caption = { english = \"x\" }", "\"english\" is no language"),
        ("caption = 3", "caption is a number"),
        ("marks = \"scale\"", "marks is a text; a list is wanted"),
        ("marks = [\"scale of Orla\"]", "\"scale\" belongs to no body"),
        ("marks = [\"trail\"]", "doesn't say of which body"),
        ("marks = [{ lasts = \"1 d\" }]", "a mark doesn't say what it is"),
        ("marks = [{ trail = \"Orla\", every = \"1 d\" }]", "every means nothing beside trail"),
        ("marks = [{ sector = \"Orla\", count = 0 }]", "count is 0; it must be 1 to 1000"),
        ("marks = [{ speed = \"Orla\", about = \"Orla\" }]", "about its own body"),
        ("cast = [\"Orl\"]", "there is no body \"Orl\""),
    ] {
        let view =
            if stated.contains("view") { "" } else { "view = { centre = \"Orla\", span = \"1 au\" }\n" };
        let error = one_error(&with(&format!("[[beat]]\n{view}{stated}")));
        assert!(error.contains(want), "{stated}\ngot  {error}\nwant {want}");
    }
}

#[test]
fn a_text_left_open_is_told_where_it_starts() {
    for (line, column) in [
        ("title = \"a", 9),
        ("title = \"a \\\" b", 9),
        ("title = 'a", 9),
        ("a = [\"x\", \"y]", 11),
        ("title = \"\"\"\nmore\nand more\n", 9),
    ] {
        let problem = parse(line).problems.remove(0);
        assert_eq!(problem.place, Place { line: 1, column }, "{line}: {problem}");
    }
}

#[test]
fn limits_hold() {
    let many: String = (0..201).map(|i| format!("[[body]]\nname = \"B{i}\"\nreal = \"Mars\"\n")).collect();
    assert!(errors(&with(&many)).iter().any(|e| e.contains("more than 200 bodies")));
    let long = format!("{}#{}", with(""), "x".repeat(MAX_BYTES));
    assert_eq!(one_error(&long).split(';').next(), Some("1:1: the file is larger than 1 MB"));
    let error = one_error("format = 2\nkind = 3");
    assert_eq!(error, "1:10: this file is written in format 2; this program reads format 1");
    assert_eq!(parse_bytes(b"format = 1\nt = \"\xff\"").problems[0].place, Place { line: 2, column: 6 });
    assert!(parse_bytes(&[0, 159, 146, 150]).scenario.is_none());
    let wrong: String = (0..50_000).map(|i| format!("k{i} = 1\n")).collect();
    let problems = parse(&wrong).problems;
    assert_eq!(problems.len(), 101);
    assert!(problems[100].wrong.starts_with("there may be more"));
    let deep = format!("a = {}", "[".repeat(100_000));
    assert_eq!(errors(&deep).len(), 1);
}

#[test]
fn colours_and_kinds_are_given_in_order() {
    let ball = |name: &str, more: &str| {
        format!("[[body]]\nname = \"{name}\"\ndrop = {{ onto = \"Orla\", height = \"1 km\" }}\n{more}\n")
    };
    let text = with(
        &[
            ball("A", ""),
            ball("B", "colour = \"green\""),
            ball("C", "kind = \"comet\""),
            ball("D", "mass = \"1 kg\""),
        ]
        .concat(),
    );
    let scenario = good(&text);
    let got: Vec<(Kind, Colour)> = scenario.bodies.iter().map(|b| (b.kind, b.colour)).collect();
    assert_eq!(
        got,
        [
            (Kind::Star, Colour::Bone),
            (Kind::Ball, Colour::Vermilion),
            (Kind::Ball, Colour::Green),
            (Kind::Comet, Colour::Yellow),
            (Kind::Ball, Colour::Sky),
        ]
    );
}

#[test]
fn a_throw_has_its_defaults() {
    let scenario = good(&with("[[body]]\nname = \"B\"\nthrow = { from = \"Orla\", speed = \"1 km/s\" }"));
    let Form::Throw(throw) = &scenario.bodies[1].form else { panic!("a throw") };
    assert_eq!(
        (throw.from, throw.speed, throw.height),
        (BodyId(0), Speed::from_m_s(1e3), Length::from_m(0.0))
    );
    assert!((throw.heading.rad() - std::f64::consts::FRAC_PI_2).abs() < 1e-15);
}
