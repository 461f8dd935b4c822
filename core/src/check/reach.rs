//! Whether the events that beats reach happen when the beats say: by the show clock, and in a second run.

use super::finding::{Finding, Topic, Weight};
use super::report::{BeatReport, CueReport};
use super::sight::{FRAME_S, called};
use crate::ephemeris::{Ephemeris, events};
use crate::scenario::{EventRef, Scenario, Then};
use crate::show::{Action, Clock, Cue, Plan, Show};

/// A show that is run by its plan, frame by frame, with one key.
#[derive(Debug)]
pub(super) struct Player {
    pub(super) clock: Clock,
}

impl Player {
    pub(super) fn new(plan: &Plan) -> Self {
        Self { clock: Clock::new(plan) }
    }

    /// A frame later; the key is pressed where a beat's time is over. False at the end of the show.
    pub(super) fn step(&mut self, plan: &Plan) -> bool {
        let Some(beat) = plan.beats.get(self.clock.beat()) else { return false };
        let over = self.clock.beat_s() >= beat.lasts_s;
        let last = self.clock.beat() + 1 >= plan.beats.len();
        if over && last {
            return false;
        }
        if self.clock.waiting() || over && beat.then != Then::Next {
            self.clock.act(plan, Action::Next);
        }
        self.clock.advance(plan, FRAME_S);
        true
    }
}

/// Checks every beat that reaches an event.
pub(super) fn check(show: &Show, second: &Ephemeris, beats: &mut [BeatReport], findings: &mut Vec<Finding>) {
    let late_s = late_by_clock(&show.plan);
    let all = show.scenario.beats.iter().zip(&show.plan.beats).zip(beats.iter_mut().zip(late_s));
    for (index, ((beat, planned), (report, late_s))) in all.enumerate() {
        let (Some(cue), Some(late_s)) = (planned.cue, late_s) else { continue };
        // As the plan sought it.
        let after_s = planned.from_s + 1e-3 + 1e-9 * planned.from_s.abs();
        let again =
            events::first(second, &show.initial, &cue.event, after_s).map(|event| event.t_s - cue.model_s);
        let again_frames = again.map_or(f64::INFINITY, |s| s.abs() / (planned.pace.abs() * FRAME_S));
        report.cue = Some(CueReport {
            event: cue.event,
            at_s: cue.at_s,
            model_s: cue.model_s,
            late_s,
            again_s: again,
            again_frames,
        });
        let event = said(&show.scenario, &cue.event);
        let mut add = |wrong, remedy: &str| {
            let (weight, topic, place) = (Weight::Failure, Topic::Event, beat.clock_place);
            findings.push(Finding { weight, topic, place, wrong, remedy: remedy.to_owned() });
        };
        if late_s.abs() > FRAME_S {
            let way = if late_s > 0.0 { "late" } else { "early" };
            add(
                format!("{} comes to {event} {:.2} s {way}", called(index), late_s.abs()),
                "give it more time: `at` must leave room for the way from the beat before",
            );
        }
        if again.is_none() {
            add(
                format!(
                    "{event}, which {} reaches, does not happen in a second run in shorter steps",
                    called(index)
                ),
                "name an event that does not hang on the last digits, or start the beat nearer to it",
            );
        } else if again_frames > 1.0 {
            add(
                format!(
                    "{event}, which {} reaches, happens {again_frames:.1} frames off in a second run in shorter steps",
                    called(index)
                ),
                "start the beat nearer to the event, or keep the bodies from passing so close before it",
            );
        }
    }
}

/// How late the clock comes to each beat's event when the show is run by its plan, s of show time.
fn late_by_clock(plan: &Plan) -> Vec<Option<f64>> {
    let mut late = vec![None; plan.beats.len()];
    let mut player = Player::new(plan);
    loop {
        let before = player.clock;
        if !player.step(plan) {
            return late;
        }
        let (Some(beat), Some(slot)) =
            (plan.beats.get(player.clock.beat()), late.get_mut(player.clock.beat()))
        else {
            return late;
        };
        let Some(cue) = beat.cue.filter(|cue| slot.is_none() && player.clock.beat_s() >= cue.at_s) else {
            continue;
        };
        *slot = Some(late_s(plan, before, player.clock, &cue, beat.pace));
    }
}

/// How late, from the clock one frame before the event's time and the clock after it.
fn late_s(plan: &Plan, before: Clock, after: Clock, cue: &Cue, pace: f64) -> f64 {
    let mut clock = before;
    if before.beat() == after.beat() {
        clock.advance(plan, cue.at_s - before.beat_s());
    } else {
        clock = after;
    }
    let short_s = cue.model_s - clock.moment(plan).model_s;
    if short_s == 0.0 { 0.0 } else { short_s / pace }
}

/// "2nd periapsis of Fenn", as files say it.
pub fn said(scenario: &Scenario, event: &EventRef) -> String {
    event.said(|body| super::sight::name(scenario, body))
}
