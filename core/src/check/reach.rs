//! Whether the events that beats reach happen when the beats say: by the show clock, and in a second run.

use super::finding::{Finding, Topic, Weight};
use super::report::{BeatReport, CueReport};
use super::sight::{FRAME_S, Seen, called};
use crate::ephemeris::{Ephemeris, events};
use crate::scenario::Then;
use crate::show::{Action, Clock, Cue, Plan};

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

/// Checks a beat that reaches an event. `late_s`: how late the clock comes to it, where it does.
pub(super) fn check(
    seen: &Seen<'_>,
    second: &Ephemeris,
    late_s: Option<f64>,
    report: &mut BeatReport,
    findings: &mut Vec<Finding>,
) {
    let Seen { show, index, beat, planned, .. } = *seen;
    let (Some(cue), Some(late_s)) = (planned.cue, late_s) else { return };
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
    let event = cue.event.said(|body| show.initial.name(body));
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

/// How late the clock comes to each beat's event when the show is run by its plan, being found.
#[derive(Debug)]
pub(super) struct Lateness {
    player: Player,
    /// Of each beat that has come to its event, s of show time.
    pub(super) late_s: Vec<Option<f64>>,
}

impl Lateness {
    pub(super) fn new(plan: &Plan) -> Self {
        Self { player: Player::new(plan), late_s: vec![None; plan.beats.len()] }
    }

    /// Goes on by so many frames. True at the end of the show.
    pub(super) fn work(&mut self, plan: &Plan, frames: usize) -> bool {
        for _ in 0..frames {
            let before = self.player.clock;
            if !self.player.step(plan) {
                return true;
            }
            let after = self.player.clock;
            let (Some(beat), Some(slot)) = (plan.beats.get(after.beat()), self.late_s.get_mut(after.beat()))
            else {
                return true;
            };
            if let Some(cue) = beat.cue.filter(|cue| slot.is_none() && after.beat_s() >= cue.at_s) {
                *slot = Some(late_s(plan, before, after, &cue, beat.pace));
            }
        }
        false
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
