use super::super::fixture::{self, AU, DAY};
use super::super::geometry::{Px, length};
use super::super::{Composer, Options, Screen, Shape, Tag};
use super::*;
use crate::scenario::{Beat, BodyId};
use crate::show::{Action, Clock, PlannedBeat};
use crate::units::Angle;

const HOUSE: Screen = Screen { width_px: 1920.0, height_px: 1080.0, density: 1.0 };
const FRAME_S: f64 = 1.0 / 60.0;

/// Six beats at one instant of model time, each with a view of its own.
fn looking_round() -> Show {
    let mut show = fixture::planets();
    let views = [
        fixture::view(0, [0.0; 3], 4.4 * AU, 0.0),
        fixture::view(3, [0.0; 3], 0.9 * AU, 170.0),
        fixture::view(0, [1.0 * AU, 0.0, 0.0], 3.0 * AU, 20.0),
        fixture::view(4, [0.0, 0.3 * AU, 0.0], 1.5 * AU, 300.0),
        fixture::view(0, [0.0; 3], 9.0 * AU, 60.0),
        fixture::view(5, [0.0; 3], 4.0 * AU, 240.0),
    ];
    let beats = views.iter().enumerate().map(|(i, view)| {
        let mut view = *view;
        view.tilt = Angle::from_rad(if i % 2 == 1 { 0.7 } else { 0.0 });
        (fixture::beat("Here", view, vec![]), fixture::planned(80.0 * DAY, 80.0 * DAY, 30.0))
    });
    let (beats, planned): (Vec<Beat>, Vec<PlannedBeat>) = beats.unzip();
    show.scenario.beats = beats;
    show.plan.beats = planned;
    show
}

fn discs(composer: &mut Composer, show: &Show, clock: &Clock) -> (Vec<(BodyId, Px)>, f64) {
    let list = composer.compose(show, &clock.moment(&show.plan));
    let veil = list.items.iter().find(|i| i.tag == Tag::Veil).map_or(0.0, |i| match i.shape {
        Shape::Area { fill, .. } => f64::from(fill.a) / 255.0,
        _ => 0.0,
    });
    let discs = list.items.iter().filter_map(|i| match (i.tag, &i.shape) {
        (Tag::Body(body), Shape::Disc { at, .. }) => Some((body, *at)),
        _ => None,
    });
    (discs.collect(), veil)
}

/// The farthest that a body inside the window moves from one list of discs to another, px.
fn farthest(before: &[(BodyId, Px)], now: &[(BodyId, Px)]) -> f64 {
    let inside = |p: &Px| p[0] > 0.0 && p[0] < 1920.0 && p[1] > 0.0 && p[1] < 1080.0;
    now.iter()
        .filter_map(|(body, at)| {
            let (_, was) = before.iter().find(|b| b.0 == *body)?;
            (inside(at) && inside(was)).then(|| length([at[0] - was[0], at[1] - was[1]]))
        })
        .fold(0.0, f64::max)
}

/// The farthest that a body moves in a sixtieth of a second while a presenter presses keys so many frames apart, px.
fn worst(show: &Show, keys: &[Action], frames_apart: usize) -> f64 {
    let mut composer = Composer::new(show, HOUSE, Options::default());
    let mut clock = Clock::new(&show.plan);
    clock.act(&show.plan, Action::Next);
    let (mut before, _) = discs(&mut composer, show, &clock);
    let mut worst = 0.0_f64;
    for (i, key) in keys.iter().enumerate() {
        clock.act(&show.plan, *key);
        // After the last one the picture comes to rest.
        for _ in 0..if i + 1 < keys.len() { frames_apart } else { 90 } {
            let (now, veil) = discs(&mut composer, show, &clock);
            if veil < 0.9 {
                worst = worst.max(farthest(&before, &now));
            }
            before = now;
            clock.advance(&show.plan, FRAME_S);
        }
    }
    worst
}

#[test]
fn hammering_the_keys_never_makes_the_picture_jump() {
    let show = looking_round();
    let next = [Action::Next; 6];
    let to_and_fro: Vec<Action> =
        (0..24).map(|i| if i % 3 == 2 { Action::Back } else { Action::Next }).collect();
    // One move after another, each alone: what the eye is given by design.
    let alone = worst(&show, &next, 90);
    assert!(alone > 10.0 && alone < 120.0, "{alone} px in a frame");
    for frames_apart in [1, 2, 3, 5, 8, 13, 21, 34, 55] {
        for keys in [&next[..], &to_and_fro] {
            // A jump would be several hundred pixels.
            let moved = worst(&show, keys, frames_apart);
            assert!(moved < 1.1 * alone, "{moved} px, keys {frames_apart} frames apart; alone {alone}");
        }
    }
}

#[test]
fn the_same_beat_again_lets_a_move_go_on() {
    let show = looking_round();
    let keys = [Action::Next, Action::RestartBeat, Action::RestartBeat, Action::Hold, Action::RestartBeat];
    let moved = worst(&show, &keys, 20);
    assert!(moved < 120.0, "{moved} px in a frame");
}

#[test]
fn without_moves_a_view_changes_only_under_a_full_veil() {
    let show = looking_round();
    for frames_apart in [2, 5, 9, 40] {
        let options = Options { reduced_motion: true, ..Options::default() };
        let mut composer = Composer::new(&show, HOUSE, options);
        let mut clock = Clock::new(&show.plan);
        clock.act(&show.plan, Action::Next);
        let (mut before, mut veil_before) = discs(&mut composer, &show, &clock);
        let mut changes = 0;
        for frame in 0..400 {
            if frame % frames_apart == 0 {
                clock.act(&show.plan, Action::Next);
            }
            clock.advance(&show.plan, FRAME_S);
            let (now, veil) = discs(&mut composer, &show, &clock);
            // A tenth of a second down, as long up.
            let most = FRAME_S / 0.1 + 0.01;
            assert!((veil - veil_before).abs() < most || veil.max(veil_before) > 1.0 - most);
            if farthest(&before, &now) > 1e-6 {
                changes += 1;
                assert!(veil.max(veil_before) > 1.0 - most, "a view changes under a veil of {veil}");
            }
            (before, veil_before) = (now, veil);
        }
        assert!(changes > 0 && veil_before <= 0.0, "{changes} changes");
    }
}
