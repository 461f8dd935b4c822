use super::*;
use crate::scenario::{BodyId, EventKind, EventRef};
use crate::show::plan::{Cue, Way};
use proptest::prelude::*;

const DAY: f64 = 86_400.0;

fn beat(from_s: f64, until_s: f64, lasts_s: f64, way: Way, then: Then, run: Run) -> PlannedBeat {
    let mut beat = PlannedBeat {
        show_s: 0.0,
        lasts_s,
        from_s,
        until_s,
        pace: 0.0,
        cue: None,
        way,
        then,
        run,
        keeps_sectors: false,
    };
    beat.pace = beat.pacing(from_s, 0.0, 0.0).pace;
    beat
}

/// A hold, a span of 100 days, a cue 50 days later at 20 s, and a beat that goes back to the start.
fn plan() -> Plan {
    let still = beat(0.0, 0.0, 10.0, Way::Still, Then::GoOn, Run::Anew);
    let span = beat(0.0, 100.0 * DAY, 50.0, Way::Span(100.0 * DAY), Then::Hold, Run::GoesOn);
    let event = EventRef { kind: EventKind::Periapsis, body: BodyId(0), other: None, nth: 1, distance: None };
    let mut cued = beat(100.0 * DAY, 160.0 * DAY, 25.0, Way::Still, Then::GoOn, Run::GoesOn);
    cued.way = Way::Cue;
    cued.cue = Some(Cue { at_s: 20.0, model_s: 150.0 * DAY, event });
    cued.pace = cued.pacing(cued.from_s, 0.0, 0.0).pace;
    let again = beat(0.0, 30.0 * DAY, 30.0, Way::Span(30.0 * DAY), Then::Next, Run::Anew);
    let last = beat(30.0 * DAY, 60.0 * DAY, 30.0, Way::Span(30.0 * DAY), Then::Hold, Run::GoesOn);
    let mut plan =
        Plan { beats: vec![still, span, cued, again, last], covers_from_s: 0.0, covers_until_s: 400.0 * DAY };
    let mut show_s = 0.0;
    for beat in &mut plan.beats {
        beat.show_s = show_s;
        show_s += beat.lasts_s;
    }
    plan
}

fn run(clock: &mut Clock, plan: &Plan, seconds: f64) {
    let frames = (seconds * 60.0).round();
    let mut frame = 0.0;
    while frame < frames {
        clock.advance(plan, seconds / frames);
        frame += 1.0;
    }
}

fn at(plan: &Plan, beat: usize) -> Clock {
    let mut clock = Clock::new(plan);
    clock.act(plan, Action::Next);
    clock.act(plan, Action::Jump(beat));
    run(&mut clock, plan, 3.0);
    clock.act(plan, Action::RestartBeat);
    run(&mut clock, plan, 3.0);
    clock
}

#[test]
fn nothing_moves_before_the_first_next() {
    let plan = plan();
    let mut clock = Clock::new(&plan);
    run(&mut clock, &plan, 5.0);
    assert!(clock.waiting() && clock.moment(&plan).model_s == 0.0 && clock.show_s() == 0.0);
    assert!(clock.act(&plan, Action::Next));
    assert_eq!((clock.beat(), clock.waiting()), (0, false));
}

#[test]
fn a_span_is_covered_in_its_time_and_then_stands() {
    let plan = plan();
    let mut clock = Clock::new(&plan);
    clock.act(&plan, Action::Next);
    clock.act(&plan, Action::Next);
    run(&mut clock, &plan, 50.0);
    let there = clock.moment(&plan);
    assert!((there.model_s - 100.0 * DAY).abs() < 1.0, "{}", there.model_s / DAY);
    run(&mut clock, &plan, 500.0);
    assert!((clock.moment(&plan).model_s - 100.0 * DAY).abs() < 1.0);
    assert!(clock.moment(&plan).pace.abs() < 1e-6);
}

#[test]
fn a_cue_is_hit_within_a_frame_however_long_or_short_the_beat_before_was() {
    let plan = plan();
    for (lingered, ran) in [(0.0, 40.0), (3.0, 40.0), (77.0, 60.0), (0.0, 5.0), (1.0, 29.0)] {
        let mut clock = Clock::new(&plan);
        clock.act(&plan, Action::Next);
        clock.act(&plan, Action::Next);
        run(&mut clock, &plan, 20.0);
        clock.act(&plan, Action::Hold);
        run(&mut clock, &plan, lingered);
        clock.act(&plan, Action::Hold);
        run(&mut clock, &plan, ran);
        clock.act(&plan, Action::Next);
        assert_eq!(clock.beat(), 2);
        run(&mut clock, &plan, 20.0);
        let off_s = (clock.moment(&plan).model_s - 150.0 * DAY).abs();
        assert!(off_s < clock.moment(&plan).pace / 60.0, "{lingered}: {off_s} s off");
    }
}

#[test]
fn next_before_the_beat_is_over_glides_to_where_the_next_one_starts() {
    let plan = plan();
    let mut clock = Clock::new(&plan);
    clock.act(&plan, Action::Next);
    clock.act(&plan, Action::Next);
    run(&mut clock, &plan, 30.0);
    clock.act(&plan, Action::Next);
    let mut last = clock.moment(&plan).model_s;
    for _ in 0..180 {
        clock.advance(&plan, 1.0 / 60.0);
        let now = clock.moment(&plan);
        assert!(now.model_s >= last, "turned back at {}", now.model_s / DAY);
        assert!(now.veil == 0.0);
        last = now.model_s;
    }
    assert!(last >= 100.0 * DAY);
}

#[test]
fn a_hold_stops_within_its_ease_and_loses_nothing() {
    let plan = plan();
    let mut clock = at(&plan, 1);
    run(&mut clock, &plan, 10.0);
    clock.act(&plan, Action::Hold);
    run(&mut clock, &plan, 0.5);
    let held = clock.moment(&plan).model_s;
    run(&mut clock, &plan, 30.0);
    assert!((clock.moment(&plan).model_s - held).abs() == 0.0 && clock.moment(&plan).held);
    clock.act(&plan, Action::Hold);
    run(&mut clock, &plan, 60.0);
    assert!((clock.moment(&plan).model_s - 100.0 * DAY).abs() < 1.0);
}

#[test]
fn back_right_after_next_undoes_it() {
    let plan = plan();
    let mut clock = at(&plan, 1);
    run(&mut clock, &plan, 12.0);
    let before = clock.moment(&plan);
    clock.act(&plan, Action::Next);
    run(&mut clock, &plan, 0.5);
    clock.act(&plan, Action::Back);
    assert_eq!(clock.beat(), 1);
    for _ in 0..240 {
        clock.advance(&plan, 1.0 / 60.0);
        if clock.moment(&plan).pace > 0.0 {
            break;
        }
    }
    let off_s = clock.moment(&plan).model_s - before.model_s;
    assert!((0.0..0.1 * DAY).contains(&off_s), "{} d off", off_s / DAY);
    // Later it goes to the beat before.
    run(&mut clock, &plan, 10.0);
    clock.act(&plan, Action::Back);
    assert_eq!(clock.beat(), 0);
}

#[test]
fn a_beat_that_says_so_starts_the_next_by_itself_at_its_time() {
    let plan = plan();
    let mut clock = at(&plan, 3);
    clock.act(&plan, Action::Jump(3));
    while clock.glide.is_some() {
        clock.advance(&plan, 1.0 / 60.0);
    }
    run(&mut clock, &plan, 31.0);
    assert_eq!(clock.beat(), 4);
    assert!(clock.moment(&plan).model_s > 30.0 * DAY);
    run(&mut clock, &plan, 100.0);
    assert!((clock.moment(&plan).model_s - 60.0 * DAY).abs() < 1.0);
}

#[test]
fn the_next_beat_starts_by_itself_also_where_the_ephemeris_ends_with_the_beat() {
    let mut plan = plan();
    plan.beats[4].until_s = 30.0 * DAY;
    plan.beats[4].way = Way::Still;
    plan.covers_until_s = 30.0 * DAY;
    let mut clock = at(&plan, 3);
    run(&mut clock, &plan, 40.0);
    assert_eq!(clock.beat(), 4);
}

#[test]
fn a_hold_holds_a_glide_too() {
    let plan = plan();
    let mut clock = at(&plan, 1);
    run(&mut clock, &plan, 10.0);
    clock.act(&plan, Action::Next);
    run(&mut clock, &plan, 0.5);
    assert!(clock.glide.is_some());
    clock.act(&plan, Action::Hold);
    run(&mut clock, &plan, 0.5);
    let held = clock.moment(&plan).model_s;
    run(&mut clock, &plan, 20.0);
    assert!((clock.moment(&plan).model_s - held).abs() == 0.0 && held < 100.0 * DAY);
    // What stands still has no pace to be shown.
    assert!(clock.moment(&plan).pace.abs() == 0.0, "{}", clock.moment(&plan).pace);
    clock.act(&plan, Action::Hold);
    run(&mut clock, &plan, 25.0);
    assert!(clock.moment(&plan).model_s > 140.0 * DAY);
}

#[test]
fn the_show_goes_back_to_its_start_and_waits_there() {
    let plan = plan();
    let mut clock = at(&plan, 2);
    run(&mut clock, &plan, 10.0);
    clock.act(&plan, Action::RestartShow);
    run(&mut clock, &plan, 10.0);
    let there = clock.moment(&plan);
    assert!(there.model_s == 0.0 && there.veil == 0.0 && there.beat == 0 && clock.waiting());
}

#[test]
fn back_undoes_a_restart_and_a_jump_too() {
    let plan = plan();
    for wrong in [Action::RestartShow, Action::RestartBeat, Action::Jump(3)] {
        let mut clock = at(&plan, 1);
        run(&mut clock, &plan, 20.0);
        let (before, show_s) = (clock.moment(&plan), clock.show_s());
        clock.act(&plan, wrong);
        run(&mut clock, &plan, 2.0);
        clock.act(&plan, Action::Back);
        clock.act(&plan, Action::Hold);
        run(&mut clock, &plan, 5.0);
        clock.act(&plan, Action::Hold);
        run(&mut clock, &plan, 3.2);
        let now = clock.moment(&plan);
        assert!(now.beat == 1 && !clock.waiting(), "{wrong:?}");
        let off_s = now.model_s - before.model_s;
        assert!((-0.1 * DAY..8.0 * DAY).contains(&off_s), "{wrong:?}: {} d off", off_s / DAY);
        assert!(clock.show_s() >= show_s, "{wrong:?}");
    }
}

#[test]
fn nothing_starts_a_waiting_show_but_next_and_hold_and_a_jump() {
    let plan = plan();
    let mut clock = Clock::new(&plan);
    for action in [Action::Back, Action::RestartBeat, Action::RestartShow] {
        assert!(!clock.act(&plan, action) && clock.waiting(), "{action:?}");
    }
}

#[test]
fn a_calm_clock_changes_model_time_under_a_full_veil_only() {
    let plan = plan();
    let mut clock = at(&plan, 1);
    clock.set_calm(true);
    run(&mut clock, &plan, 20.0);
    clock.act(&plan, Action::RestartBeat);
    let mut before = clock.moment(&plan);
    for _ in 0..120 {
        clock.advance(&plan, 1.0 / 60.0);
        let now = clock.moment(&plan);
        assert!(now.model_s >= before.model_s || now.veil.min(before.veil) > 0.9);
        before = now;
    }
}

#[test]
fn the_last_beat_has_no_next_and_wrong_jumps_are_refused() {
    let plan = plan();
    let mut clock = at(&plan, 4);
    let before = clock;
    assert!(!clock.act(&plan, Action::Next));
    assert!(!clock.act(&plan, Action::Jump(5)));
    assert_eq!(clock, before);
}

#[test]
fn lingering_ends_where_the_ephemeris_ends() {
    let mut plan = plan();
    plan.covers_until_s = 170.0 * DAY;
    let mut clock = at(&plan, 2);
    run(&mut clock, &plan, 600.0);
    let there = clock.moment(&plan);
    assert!(there.model_s <= 170.0 * DAY && there.model_s > 165.0 * DAY, "{}", there.model_s / DAY);
}

#[test]
fn a_show_without_beats_takes_every_action() {
    let plan = Plan::default();
    let mut clock = Clock::new(&plan);
    for action in [Action::Next, Action::Back, Action::Hold, Action::RestartBeat, Action::Faster] {
        assert!(!clock.act(&plan, action));
    }
    clock.advance(&plan, 1.0);
    assert!(clock.moment(&plan).model_s == 0.0);
}

fn action() -> impl Strategy<Value = Action> {
    prop_oneof![
        Just(Action::Next),
        Just(Action::Back),
        Just(Action::Hold),
        Just(Action::RestartBeat),
        Just(Action::RestartShow),
        (0usize..7).prop_map(Action::Jump),
        Just(Action::Faster),
        Just(Action::Slower),
    ]
}

proptest! {
    #[test]
    fn hammering_never_leaves_what_is_covered_nor_jumps_without_a_veil(
        keys in prop::collection::vec((action(), 0.0..4.0f64), 1..60),
    ) {
        let plan = plan();
        let mut clock = Clock::new(&plan);
        for (key, wait) in keys {
            clock.act(&plan, key);
            let mut left = wait;
            while left > 0.0 {
                let before = clock.moment(&plan);
                clock.advance(&plan, 1.0 / 60.0);
                let now = clock.moment(&plan);
                prop_assert!(now.model_s >= plan.covers_from_s && now.model_s <= plan.covers_until_s);
                // In a frame, no more than the fastest glide of the longest unveiled way.
                let most = 3.0 * 180.0 * 3.0 * DAY * 6.0 / 60.0;
                prop_assert!((now.model_s - before.model_s).abs() < most || now.veil > 0.9);
                left -= 1.0 / 60.0;
            }
        }
    }

    #[test]
    fn a_bookmark_comes_back_to_the_same_instant(
        keys in prop::collection::vec((action(), 0.0..20.0f64), 1..20),
    ) {
        let plan = plan();
        let mut clock = Clock::new(&plan);
        for (key, wait) in keys {
            clock.act(&plan, key);
            run(&mut clock, &plan, wait + 0.1);
        }
        while clock.glide.is_some() {
            // A hold holds a glide too.
            if clock.held() {
                clock.act(&plan, Action::Hold);
            }
            clock.advance(&plan, 1.0 / 60.0);
        }
        let again = Clock::resume(&plan, clock.bookmark());
        let (a, b) = (clock.moment(&plan), again.moment(&plan));
        prop_assert_eq!((a.beat, a.model_s, a.held), (b.beat, b.model_s, b.held));
    }

    #[test]
    fn the_frame_rate_does_not_matter(rate in 5.0..200.0f64) {
        let plan = plan();
        let mut fast = at(&plan, 1);
        let mut slow = fast;
        run(&mut fast, &plan, 10.0);
        fast.act(&plan, Action::Hold);
        fast.act(&plan, Action::Hold);
        run(&mut fast, &plan, 10.0);
        let n = (10.0 * rate).floor();
        for _ in 0..2 {
            let mut i = 0.0;
            while i < n {
                slow.advance(&plan, 10.0 / n);
                i += 1.0;
            }
        }
        let off_s = (fast.moment(&plan).model_s - slow.moment(&plan).model_s).abs();
        prop_assert!(off_s < 1e-6 * DAY, "{off_s} s");
    }
}
