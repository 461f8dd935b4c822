//! Changes that are made when a beat starts, or at an event.

use super::*;

const DAY_S: f64 = 86_400.0;

/// A star and a comet whose periapsis comes 100 d after the start.
fn text(changes: &str, beats: &str) -> String {
    format!(
        "format = 1\ntitle = \"T\"\n\
         [[body]]\nname = \"Orla\"\nmass = \"1 Sun masses\"\nradius = \"700000 km\"\n\
         [[body]]\nname = \"Fenn\"\norbit = {{ around = \"Orla\", semi-major = \"2 au\", eccentricity = 0.5, before-periapsis = \"100 d\" }}\n\
         {changes}\
         [[beat]]\ntitle = \"First\"\nclock = {{ pace = \"1 d/s\", lasts = \"30 s\" }}\nview = {{ centre = \"Orla\", span = \"6 au\" }}\n{beats}"
    )
}

fn off(at: &str) -> String {
    format!("[[change]]\nat = {at}\ngravity = \"Orla\"\non = false\n")
}

fn kick(at: &str) -> String {
    format!("[[change]]\nat = {at}\nkick = \"Fenn\"\nspeed = \"3 km/s\"\n")
}

const CUT: &str = "[[beat]]\ntitle = \"Cut\"\nclock = { pace = \"2 d/s\", lasts = \"30 s\" }\n";

fn show(text: &str) -> Show {
    match Rehearsal::whole(text) {
        Ok(show) => show,
        Err(problems) => panic!("{text}\n{problems:#?}"),
    }
}

fn refused(text: &str) -> String {
    let problems = Rehearsal::whole(text).expect_err("a problem");
    assert_eq!(problems.len(), 1, "{problems:#?}");
    problems[0].to_string()
}

#[test]
fn a_change_at_a_beat_is_made_when_that_beat_starts_and_as_if_its_time_were_stated() {
    let at_beat = show(&text(&off("{ beat = \"Cut\" }"), CUT));
    let [switch] = at_beat.ephemeris.switches() else { panic!("one switch") };
    let from_s = at_beat.plan.beats[1].from_s;
    assert_eq!(switch.t_s.to_bits(), from_s.to_bits());
    // Thirty seconds at a day a second, but for the pace that has to build up.
    assert!(from_s > 20.0 * DAY_S && from_s <= 30.0 * DAY_S, "{from_s}");
    let stated = show(&text(&off(&format!("\"{from_s:?} s\"")), CUT));
    assert_eq!(stated.ephemeris, at_beat.ephemeris);
    let later = show(&text(&off("{ beat = \"Cut\", after = \"2 d\" }"), CUT));
    assert!((later.ephemeris.switches()[0].t_s - from_s - 2.0 * DAY_S).abs() < 1e-6);
    // Small steps make the same show.
    let text = text(&off("{ beat = \"Cut\" }"), CUT);
    let mut rehearsal = Rehearsal::start(&text).expect("a rehearsal");
    let mut last = 0.0;
    while let Ok(progress) = rehearsal.work(2) {
        assert!(progress.fraction >= last);
        last = progress.fraction;
        if progress.done {
            break;
        }
    }
    assert_eq!(rehearsal.finish().expect("a show").ephemeris, at_beat.ephemeris);
}

#[test]
fn a_change_at_an_event_is_made_there_and_others_may_follow_it() {
    let changes = [
        kick("{ event = \"periapsis of Fenn\", before = \"10 d\" }"),
        off("{ event = \"apoapsis of Fenn\" }"),
    ]
    .concat();
    let beats =
        "[[beat]]\ntitle = \"Out\"\nstart = \"restart\"\nclock = { span = \"6 yr\", lasts = \"30 s\" }\n";
    let show = show(&text(&changes, beats));
    let [kicked, gone] = show.initial.changes.as_slice() else { panic!("{:?}", show.initial.changes) };
    assert!((kicked.t_s - 90.0 * DAY_S).abs() < 1e-3, "{}", kicked.t_s);
    // Slower without the kick: half the period of 2.83 years, and the 100 days before.
    assert!(gone.t_s > 1.6 * 365.25 * DAY_S + 100.0 * DAY_S, "{}", gone.t_s);
    let at = |t_s: f64| show.ephemeris.relative(scenario::BodyId(1), scenario::BodyId(0), t_s);
    let (apoapsis, after) = (at(gone.t_s).expect("covered"), at(gone.t_s + 30.0 * DAY_S).expect("covered"));
    assert!(apoapsis.pos.dot(&apoapsis.vel).abs() < 1e-6 * apoapsis.pos.norm() * apoapsis.vel.norm());
    assert!((after.vel - apoapsis.vel).norm() < 1e-9 * after.vel.norm(), "it goes straight on");
    let (_, initial) = Rehearsal::settled(&text(&changes, beats)).expect("settled");
    assert_eq!(initial, show.initial);
}

#[test]
fn a_beat_that_goes_back_sees_the_one_course_of_things() {
    let beats = format!(
        "{CUT}[[beat]]\ntitle = \"Again\"\nstart = \"restart\"\nclock = {{ pace = \"2 d/s\", lasts = \"40 s\" }}\n"
    );
    let show = show(&text(&off("{ beat = \"Cut\" }"), &beats));
    assert_eq!(show.ephemeris.switches().len(), 1);
    assert!(show.plan.beats[2].from_s < show.ephemeris.switches()[0].t_s);
    assert!(show.plan.beats[2].until_s > show.ephemeris.switches()[0].t_s);
}

#[test]
fn times_of_changes_that_cannot_be_are_refused_with_the_changes_place() {
    let early = "[[beat]]\ntitle = \"Early\"\nstart = { event = \"periapsis of Fenn\", before = \"90 d\" }\n";
    for (changes, beats, says) in [
        (kick("{ event = \"contact of Fenn with Orla\" }"), CUT, "10:1: no contact of Fenn within"),
        (
            kick("{ event = \"periapsis of Fenn\", before = \"200 d\" }"),
            CUT,
            "10:1: this change comes before the scenario's start",
        ),
        (
            [off("{ event = \"periapsis of Fenn\" }"), kick("{ beat = \"Cut\" }")].concat(),
            CUT,
            "14:1: this change comes before another at a beat or an event that stands above it",
        ),
        (kick("{ beat = \"Early\" }"), early, "10:1: this change moves the start of its own beat"),
    ] {
        let problem = refused(&text(&changes, beats));
        assert!(problem.starts_with(says), "got  {problem}\nwant {says}");
    }
}
