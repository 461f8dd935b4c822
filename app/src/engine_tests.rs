use super::*;
use crate::carry;
use std::cell::Cell;

const SHIPPED: &str = include_str!("../../scenarios/equal-areas.toml");

/// A clock that moves by itself: each look costs a millisecond.
fn clock() -> impl Fn() -> f64 {
    let now = Cell::new(0.0);
    move || {
        now.set(now.get() + 1.0);
        now.get()
    }
}

fn run_out(engine: &mut Engine) -> Vec<Answer> {
    let clock = clock();
    let mut answers = Vec::new();
    while engine.busy() {
        answers.extend(engine.turn(&clock));
    }
    answers
}

#[test]
fn a_show_arrives_whole_and_its_progress_never_goes_back() {
    let mut engine = Engine::default();
    assert_eq!(engine.handle(ToWorker::Rehearse { run: 3, text: SHIPPED.into() }), Vec::new());
    let answers = run_out(&mut engine);
    let fractions: Vec<f64> = answers
        .iter()
        .filter_map(|a| match a.message {
            FromWorker::Progress { run: 3, fraction, .. } => Some(fraction),
            _ => None,
        })
        .collect();
    assert!(fractions.is_sorted(), "{fractions:?}");
    let last = answers.last().unwrap();
    let FromWorker::Rehearsed { run: 3, fingerprint } = &last.message else { panic!("{:?}", last.message) };
    let whole = Rehearsal::whole(SHIPPED).unwrap();
    assert_eq!(*fingerprint, Fingerprint::of(SHIPPED, &whole).to_string());
    let carried = carry::unpack(SHIPPED, &last.numbers).unwrap();
    assert_eq!(carried.plan, whole.plan);
    assert_eq!(carried.initial, whole.initial);
    assert_eq!(carried.ephemeris, whole.ephemeris);
    assert_eq!(Fingerprint::of(SHIPPED, &carried).to_string(), *fingerprint);
}

#[test]
fn swarms_travel_with_their_show() {
    let text = SHIPPED.replacen(
        "[[beat]]",
        "[[body]]\nname = \"Belt\"\nswarm = { belt = \"Orla\", from = \"2 au\", to = \"3 au\", count = 30 }\n\n[[beat]]",
        1,
    );
    let show = Rehearsal::whole(&text).unwrap();
    let numbers = carry::pack(&show);
    let carried = carry::unpack(&text, &numbers).unwrap();
    assert_eq!(carried.swarms, show.swarms);
    assert_eq!(Fingerprint::of(&text, &carried), Fingerprint::of(&text, &show));
    assert!(carry::unpack(&text, &numbers[..numbers.len() - 1]).is_err(), "cut off");
    assert!(carry::unpack(SHIPPED, &numbers).is_err(), "a swarm of another text");
    let without = carry::pack(&Rehearsal::whole(SHIPPED).unwrap());
    assert!(carry::unpack(&text, &without).is_err(), "a swarm is missing");
}

#[test]
fn changes_that_wait_for_an_event_travel_with_their_times() {
    let changes = "[[change]]\nat = { event = \"periapsis of Fenn\" }\nkick = \"Fenn\"\nspeed = \"10 m/s\"\n\n\
        [[change]]\nat = \"5 d\"\nkick = \"Fenn\"\nspeed = \"1 m/s\"\n\n[[beat]]";
    let text = SHIPPED.replacen("[[beat]]", changes, 1);
    let show = Rehearsal::whole(&text).unwrap();
    assert_eq!(show.initial.changes.len(), 2);
    let carried = carry::unpack(&text, &carry::pack(&show)).unwrap();
    assert_eq!(carried.initial, show.initial);
    assert_eq!(carried.plan, show.plan);
}

#[test]
fn stop_is_heard_between_turns() {
    let mut engine = Engine::default();
    engine.handle(ToWorker::Rehearse { run: 1, text: SHIPPED.into() });
    assert!(engine.busy());
    engine.handle(ToWorker::Stop { run: 9 });
    assert!(engine.busy(), "another run's stop changes nothing");
    engine.handle(ToWorker::Stop { run: 1 });
    assert!(!engine.busy());
}

#[test]
fn a_new_rehearsal_takes_the_place_of_the_old_one() {
    let mut engine = Engine::default();
    engine.handle(ToWorker::Rehearse { run: 1, text: SHIPPED.into() });
    engine.handle(ToWorker::Rehearse { run: 2, text: SHIPPED.into() });
    let answers = run_out(&mut engine);
    assert!(answers.iter().all(|a| !matches!(
        a.message,
        FromWorker::Rehearsed { run: 1, .. } | FromWorker::Progress { run: 1, .. }
    )));
    assert!(matches!(answers.last().unwrap().message, FromWorker::Rehearsed { run: 2, .. }));
}

#[test]
fn a_bad_text_gives_every_problem_in_the_order_of_its_lines() {
    let bad = SHIPPED
        .replace("summary", "summry")
        .replace("0.42 au", "0.42")
        .replace("kind = \"star\"", "kind = \"sun\"");
    let answers = Engine::default().handle(ToWorker::Rehearse { run: 1, text: bad });
    let [Answer { message: FromWorker::Failed { run: 1, problems }, .. }] = answers.as_slice() else {
        panic!("{answers:?}")
    };
    assert!(problems.len() >= 3, "{problems:?}");
    assert!(problems.is_sorted_by_key(|p| (p.line, p.column)));
    assert!(problems.iter().all(|p| !p.remedy.is_empty()));
}

#[test]
fn small_pictures_wait_for_what_people_wait_for() {
    let mut engine = Engine::default();
    let facts = engine.handle(ToWorker::Card { run: 1, text: SHIPPED.into() });
    let FromWorker::Card { run: 1, facts } = &facts[0].message else { panic!("{facts:?}") };
    assert_eq!(facts.title, "Equal areas, unequal speeds");
    assert!(facts.lasts_s > 300.0);
    engine.handle(ToWorker::Rehearse { run: 2, text: SHIPPED.into() });
    let answers = run_out(&mut engine);
    let place = |found: fn(&FromWorker) -> bool| answers.iter().position(|a| found(&a.message)).unwrap();
    let show = place(|m| matches!(m, FromWorker::Rehearsed { run: 2, .. }));
    let picture = place(|m| matches!(m, FromWorker::Picture { run: 1, .. }));
    assert!(show < picture);
    let FromWorker::Picture { drawing, .. } = &answers[picture].message else { panic!("a picture") };
    assert!(drawing.list().items.len() > 3, "a picture with something on it");
}

#[test]
fn nothing_that_is_no_scenario_does_any_harm() {
    for text in ["", "\u{0}", "[[[[", "title = 1", "{}", &"[[body]]\n".repeat(2000), "a = \"\u{202e}\""] {
        let mut engine = Engine::default();
        let answers = engine.handle(ToWorker::Rehearse { run: 1, text: (*text).into() });
        assert!(
            matches!(&answers[0].message, FromWorker::Failed { problems, .. } if !problems.is_empty()),
            "{text:?}"
        );
    }
}
