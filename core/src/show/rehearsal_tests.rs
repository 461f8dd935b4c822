use super::*;
use crate::show::{Action, Clock, Fingerprint, Run};

const YEAR_S: f64 = 365.25 * 86_400.0;

/// A star and a comet; periapsis 100 d after the start, period sqrt(8) yr around one Sun mass.
fn text(beats: &str) -> String {
    format!(
        "format = 1\ntitle = \"T\"\n\
         [[body]]\nname = \"Orla\"\nmass = \"1 Sun masses\"\nradius = \"700000 km\"\n\
         [[body]]\nname = \"Fenn\"\norbit = {{ around = \"Orla\", semi-major = \"2 au\", eccentricity = 0.5, before-periapsis = \"100 d\" }}\n\
         [[beat]]\ntitle = \"First\"\nclock = {{ pace = \"1 d/s\", lasts = \"30 s\" }}\nview = {{ centre = \"Orla\", span = \"6 au\" }}\n{beats}"
    )
}

fn show(beats: &str) -> Show {
    match Rehearsal::whole(&text(beats)) {
        Ok(show) => show,
        Err(problems) => panic!("{problems:?}"),
    }
}

fn refused(beats: &str) -> Vec<Problem> {
    Rehearsal::whole(&text(beats)).expect_err("a problem")
}

#[test]
fn a_reach_beat_is_paced_to_its_event() {
    let show = show("[[beat]]\ntitle = \"R\"\nclock = { reach = \"periapsis of Fenn\", at = \"40 s\" }\n");
    let beat = show.plan.beats[1];
    let cue = beat.cue.expect("a cue");
    // Kepler's own time, from the file; the root is found to far below a millisecond.
    assert!((cue.model_s - 100.0 * 86_400.0).abs() < 1e-3, "{}", cue.model_s);
    assert!((beat.pacing(beat.from_s, 0.0, 0.0).model_s(40.0) - cue.model_s).abs() < 1e-6);
    assert_eq!(beat.run, Run::GoesOn);
    assert!(beat.until_s > cue.model_s);
}

#[test]
fn a_period_is_that_of_the_third_law() {
    let show = show(
        "[[beat]]\ntitle = \"P\"\nstart = \"restart\"\nclock = { span = \"1 period of Fenn\", lasts = \"60 s\" }\n",
    );
    let beat = show.plan.beats[1];
    // a = 2 au around the nominal Sun: 2^1.5 Gaussian years of 365.2568983 d (k = 0.01720209895), to the nominal GM's digits.
    let want_s = 8.0f64.sqrt() * 365.256_898_3 * 86_400.0;
    assert!(((beat.until_s - beat.from_s) / want_s - 1.0).abs() < 1e-6, "{}", beat.until_s / YEAR_S);
    assert!(show.ephemeris.until_s() >= beat.until_s);
}

#[test]
fn the_second_periapsis_comes_a_period_after_the_first() {
    let both = show(
        "[[beat]]\ntitle = \"A\"\nstart = { event = \"periapsis of Fenn\" }\n\
         [[beat]]\ntitle = \"B\"\nstart = { event = \"2nd periapsis of Fenn\", before = \"5 d\" }\n",
    );
    let apart_s = both.plan.beats[2].from_s + 5.0 * 86_400.0 - both.plan.beats[1].from_s;
    assert!((apart_s / (8.0f64.sqrt() * YEAR_S) - 1.0).abs() < 1e-4, "{apart_s}");
}

#[test]
fn an_event_on_which_a_beat_starts_is_not_the_one_it_reaches() {
    let show = show(
        "[[beat]]\ntitle = \"A\"\nstart = { event = \"periapsis of Fenn\" }\nclock = { reach = \"periapsis of Fenn\", at = \"60 s\" }\n",
    );
    let beat = show.plan.beats[1];
    assert!((beat.cue.expect("a cue").model_s - beat.from_s) > 2.0 * YEAR_S);
}

#[test]
fn what_never_happens_is_said_with_its_place() {
    let problems = refused(
        "[[beat]]\ntitle = \"A\"\nclock = { reach = \"contact of Fenn with Orla\", at = \"20 s\" }\n",
    );
    assert_eq!(problems.len(), 1);
    assert!(problems[0].wrong.contains("no contact of Fenn"), "{}", problems[0]);
    assert_eq!(problems[0].place.line, 16);
}

#[test]
fn small_steps_and_one_big_one_make_the_same_show() {
    let text = text("[[beat]]\ntitle = \"R\"\nclock = { reach = \"apoapsis of Fenn\", at = \"40 s\" }\n");
    let whole = Rehearsal::whole(&text).expect("a show");
    let mut rehearsal = Rehearsal::start(&text).expect("a rehearsal");
    let mut last = 0.0;
    loop {
        let progress = rehearsal.work(3).expect("progress");
        assert!(progress.fraction >= last, "{} after {last}", progress.fraction);
        last = progress.fraction;
        if progress.done {
            break;
        }
    }
    let piecewise = rehearsal.finish().expect("a show");
    assert_eq!(Fingerprint::of(&text, &whole), Fingerprint::of(&text, &piecewise));
}

#[test]
fn swarms_come_as_far_as_the_plan_goes_in_any_steps_with_the_same_bits() {
    let swarm = "[[body]]\nname = \"Belt\"\nswarm = { belt = \"Orla\", from = \"2 au\", to = \"3 au\", eccentricity = 0.1, count = 20 }\n";
    let beats = format!(
        "[[beat]]\ntitle = \"B\"\nstart = {{ time = \"-50 d\" }}\nclock = {{ span = \"2 yr\", lasts = \"60 s\" }}\n{swarm}"
    );
    let text = text(&beats);
    let whole = Rehearsal::whole(&text).expect("a show");
    let path = &whole.swarms[0];
    assert_eq!(path.tracers(), 20);
    assert!(path.from_s() <= whole.plan.covers_from_s && path.until_s() >= whole.plan.covers_until_s);
    let mut rehearsal = Rehearsal::start(&text).expect("a rehearsal");
    let (mut last, mut works) = (0.0, 0);
    loop {
        let progress = rehearsal.work(1).expect("progress");
        assert!(progress.fraction >= last && (progress.done || progress.fraction < 1.0), "{progress:?}");
        (last, works) = (progress.fraction, works + 1);
        if progress.done {
            break;
        }
    }
    assert!(works > 10, "{works} turns");
    let mut piecewise = rehearsal.finish().expect("a show");
    let print = Fingerprint::of(&text, &whole);
    assert_eq!(print, Fingerprint::of(&text, &piecewise));
    piecewise.swarms.clear();
    assert_ne!(print, Fingerprint::of(&text, &piecewise), "a fingerprint minds the tracers");
}

#[test]
fn a_fingerprint_minds_every_word_but_not_how_lines_end() {
    let text = text("");
    let show = Rehearsal::whole(&text).expect("a show");
    let print = Fingerprint::of(&text, &show);
    assert_eq!(print, Fingerprint::of(&text.replace('\n', "\r\n"), &show));
    assert_ne!(print, Fingerprint::of(&text.replace("First", "Frist"), &show));
    let shown = print.to_string();
    assert!(
        shown.len() == 9 && shown.chars().all(|c| c == ' ' || c.is_ascii_digit() || c.is_ascii_uppercase()),
        "{shown}"
    );
    assert_eq!(print.hex().len(), 64);
}

#[test]
fn a_whole_show_can_be_clicked_through() {
    let show = show("[[beat]]\ntitle = \"R\"\nclock = { reach = \"periapsis of Fenn\", at = \"4 s\" }\n");
    let mut clock = Clock::new(&show.plan);
    clock.act(&show.plan, Action::Next);
    for _ in 0..90 {
        clock.advance(&show.plan, 1.0 / 3.0);
    }
    clock.act(&show.plan, Action::Next);
    clock.advance(&show.plan, 4.0);
    let moment = clock.moment(&show.plan);
    assert!((moment.model_s - 100.0 * 86_400.0).abs() < 1.0, "{}", moment.model_s / 86_400.0);
}
