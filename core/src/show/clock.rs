//! The show clock: a pure machine that turns actions and elapsed show time into model time.
//!
//! Beat time is show time within a beat: it stands while the presenter holds, and runs faster or slower when
//! told to. Model time is a monotone function of beat time, [`Pacing`]. Between beats the clock glides from
//! where the model is to where the next beat starts, or, where that is too far to follow with the eye,
//! changes over under a veil.

use super::glide::Glide;
use super::lately::Lately;
use super::pacing::Pacing;
use super::plan::{Plan, PlannedBeat, Run};
use crate::scenario::Then;

/// What a presenter can do to the clock.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Action {
    /// Starts the show; then on to the next beat. Lets go of a hold.
    Next,
    /// To the start of the beat before. Right after a change of beat: back to where that was asked for.
    Back,
    /// The model stands still, or goes on again.
    Hold,
    /// To the start of this beat.
    RestartBeat,
    /// To the start of the show, waiting.
    RestartShow,
    /// To the start of a beat, by its index.
    Jump(usize),
    /// A faster pace.
    Faster,
    /// A slower pace.
    Slower,
}

/// Everything about the instant that the picture needs.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Moment {
    /// Model time, seconds from the scenario's start.
    pub model_s: f64,
    /// Pace now, model seconds per show second.
    pub pace: f64,
    /// Whether the presenter holds (or the show waits for its first `Next`).
    pub held: bool,
    /// The beat.
    pub beat: usize,
    /// The beat that was left for this one.
    pub before: Option<usize>,
    /// The beats left so lately that the picture still moves on from their views.
    pub lately: Lately,
    /// Show time since this beat was entered, holding or not, seconds.
    pub since_cut_s: f64,
    /// Model time at which this beat's sectors start.
    pub beat_from_s: f64,
    /// Model time from which the model has run on without a cut: where trails start.
    pub run_from_s: f64,
    /// The veil over a change that is too far to glide: 0 clear, 1 only ground.
    pub veil: f64,
}

/// What is needed to come back to the same instant of the same plan: plain numbers, to be kept anywhere.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bookmark {
    /// The beat.
    pub beat: usize,
    /// Beat time since the beat's start was reached, seconds.
    pub beat_s: f64,
    /// Beat time that went into getting there, seconds.
    pub lead_s: f64,
    /// Model time at which the beat was entered, seconds.
    pub from_s: f64,
    /// Pace at which it was entered.
    pub first_pace: f64,
    /// Model time at which its sectors start.
    pub beat_from_s: f64,
    /// Model time at which its trails start.
    pub run_from_s: f64,
    /// Whether the presenter holds.
    pub held: bool,
    /// Whether the show has not been started yet.
    pub waiting: bool,
    /// Steps faster (or slower, negative).
    pub speed: i32,
}

/// Pace changes by this factor for each [`Action::Faster`].
pub const SPEED_STEP: f64 = 1.25;
/// Steps faster or slower at most.
pub const SPEED_MOST: i32 = 8;
/// Show seconds in which a hold takes hold.
const HOLD_S: f64 = 0.4;
/// Show seconds after a change of beat in which `Back` undoes it.
const UNDO_S: f64 = 5.0;

/// The show clock.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Clock {
    beat: usize,
    before: Option<usize>,
    lately: Lately,
    /// Beat time since the beat's start was reached.
    beat_s: f64,
    /// Beat time that went into getting there.
    lead_s: f64,
    pacing: Pacing,
    beat_from_s: f64,
    run_from_s: f64,
    since_cut_s: f64,
    show_s: f64,
    waiting: bool,
    held: bool,
    speed: i32,
    /// Beat seconds per show second now; eased towards what is wanted.
    rate: f64,
    /// Rate from which it is being eased.
    rate_from: f64,
    glide: Option<Glide>,
    /// Where a change was asked for that can still be taken back, and the show time there.
    undo: Option<(Bookmark, f64)>,
    /// Whether model time changes under a veil only, for people whom motion disturbs.
    calm: bool,
}

impl Clock {
    /// At the start of the first beat, waiting for [`Action::Next`].
    pub fn new(plan: &Plan) -> Self {
        let from_s = plan.beats.first().map_or(0.0, |beat| beat.from_s);
        let mut clock = Self {
            beat: 0,
            before: None,
            lately: Lately::default(),
            beat_s: 0.0,
            lead_s: 0.0,
            pacing: Pacing::still(from_s),
            beat_from_s: from_s,
            run_from_s: from_s,
            since_cut_s: 0.0,
            show_s: 0.0,
            waiting: true,
            held: false,
            speed: 0,
            rate: 0.0,
            rate_from: 0.0,
            glide: None,
            undo: None,
            calm: false,
        };
        if let Some(beat) = plan.beats.first() {
            clock.pacing = beat.pacing(from_s, 0.0, 0.0);
        }
        clock
    }

    /// Where a bookmark was made. Beats that the plan no longer has give its last one.
    pub fn resume(plan: &Plan, mark: Bookmark) -> Self {
        let mut clock = Self::new(plan);
        let Some(last) = plan.beats.len().checked_sub(1) else { return clock };
        if mark.beat > last {
            clock.enter(plan, last, None);
            return clock;
        }
        clock.beat = mark.beat;
        clock.lead_s = if mark.lead_s.is_finite() { mark.lead_s.max(0.0) } else { 0.0 };
        clock.beat_s = if mark.beat_s.is_finite() { mark.beat_s.max(0.0) } else { 0.0 };
        clock.pacing = plan.beats[mark.beat].pacing(mark.from_s, mark.first_pace, clock.lead_s);
        clock.beat_from_s = mark.beat_from_s;
        clock.run_from_s = mark.run_from_s;
        clock.held = mark.held;
        clock.waiting = mark.waiting;
        clock.speed = mark.speed.clamp(-SPEED_MOST, SPEED_MOST);
        clock.rate = clock.wanted_rate();
        clock.rate_from = clock.rate;
        // A view that was reached before is not moved into again.
        clock.since_cut_s = 1e3;
        clock
    }

    /// This instant, to come back to.
    pub fn bookmark(&self) -> Bookmark {
        Bookmark {
            beat: self.beat,
            beat_s: self.beat_s,
            lead_s: self.lead_s,
            from_s: self.pacing.from_s,
            first_pace: self.pacing.first_pace,
            beat_from_s: self.beat_from_s,
            run_from_s: self.run_from_s,
            held: self.held,
            waiting: self.waiting,
            speed: self.speed,
        }
    }

    /// The instant, for the picture.
    pub fn moment(&self, plan: &Plan) -> Moment {
        let (model_s, pace, veil) = match &self.glide {
            Some(glide) => {
                let rate = if glide.veiled() || self.waiting { 1.0 } else { self.rate };
                (glide.model_s(), glide.pace() * rate, glide.veil())
            }
            None => (self.pacing.model_s(self.beat_s), self.pacing.pace_at(self.beat_s) * self.rate, 0.0),
        };
        let within = model_s.clamp(plan.covers_from_s, plan.covers_until_s);
        Moment {
            model_s: within,
            pace: if (within - model_s).abs() > 0.0 { 0.0 } else { pace },
            held: self.held || self.waiting,
            beat: self.beat,
            before: self.before,
            lately: self.lately,
            since_cut_s: self.since_cut_s,
            beat_from_s: self.beat_from_s,
            run_from_s: self.run_from_s,
            veil,
        }
    }

    /// The beat, by its index.
    pub const fn beat(&self) -> usize {
        self.beat
    }

    /// Beat time, seconds: show time within the beat, without holds.
    pub fn beat_s(&self) -> f64 {
        self.glide.map_or(self.lead_s, |glide| glide.gone_s()) + self.beat_s
    }

    /// Show time since the first `Next`, holds included, seconds.
    pub const fn show_s(&self) -> f64 {
        self.show_s
    }

    /// Whether the show waits for its first `Next`.
    pub const fn waiting(&self) -> bool {
        self.waiting
    }

    /// Whether the presenter holds.
    pub const fn held(&self) -> bool {
        self.held
    }

    /// Steps faster than planned (negative: slower).
    pub const fn speed(&self) -> i32 {
        self.speed
    }

    /// Whether model time is to change under a veil only, for people whom motion disturbs.
    pub const fn set_calm(&mut self, calm: bool) {
        self.calm = calm;
    }

    /// Does what the presenter asks. Returns whether it changed anything (on the last beat there is no next).
    pub fn act(&mut self, plan: &Plan, action: Action) -> bool {
        if plan.beats.is_empty() {
            return false;
        }
        match action {
            Action::Next if self.waiting => {
                self.waiting = false;
                self.held = false;
                self.ease_rate();
            }
            Action::Next => {
                if self.beat + 1 >= plan.beats.len() {
                    return false;
                }
                let undo = (self.bookmark(), self.show_s);
                self.enter(plan, self.beat + 1, Some(self.beat));
                self.undo = Some(undo);
            }
            Action::Back if self.waiting && self.undo.is_none() => return false,
            Action::Back => self.back(plan),
            Action::Hold if self.waiting => return self.act(plan, Action::Next),
            Action::Hold => {
                self.held = !self.held;
                self.ease_rate();
            }
            Action::RestartBeat | Action::RestartShow if self.waiting => return false,
            Action::RestartBeat => self.leap(plan, self.beat),
            Action::RestartShow => {
                self.leap(plan, 0);
                self.waiting = true;
                self.show_s = 0.0;
                self.ease_rate();
            }
            Action::Jump(beat) => {
                if beat >= plan.beats.len() {
                    return false;
                }
                self.leap(plan, beat);
            }
            Action::Faster | Action::Slower => {
                let step = if action == Action::Faster { 1 } else { -1 };
                let speed = (self.speed + step).clamp(-SPEED_MOST, SPEED_MOST);
                if speed == self.speed {
                    return false;
                }
                self.speed = speed;
                self.ease_rate();
            }
        }
        true
    }

    /// Lets show time pass, seconds. Negative and unreal amounts are taken as none.
    pub fn advance(&mut self, plan: &Plan, elapsed_s: f64) {
        if !elapsed_s.is_finite() || elapsed_s <= 0.0 {
            return;
        }
        self.since_cut_s += elapsed_s;
        self.lately.advance(elapsed_s);
        if !self.waiting {
            self.show_s += elapsed_s;
        }
        if self.since_cut_s > UNDO_S {
            self.undo = None;
        }
        let flow_s = self.flow(elapsed_s);
        let mut left_s = flow_s;
        if let Some(glide) = &mut self.glide {
            // A hold holds a glide too; but a veil is never left down, and the way back to the start is gone before the show waits.
            left_s = glide.advance(if glide.veiled() || self.waiting { elapsed_s } else { flow_s });
            if !glide.over() {
                return;
            }
            self.glide = None;
        }
        self.beat_s += left_s.min(flow_s);
        // A beat that starts the next by itself hands over what is left of the time; each turn enters a later beat.
        while let Some(beat) = plan.beats.get(self.beat)
            && beat.then == Then::Next
            && self.beat_s + self.lead_s > beat.lasts_s
            && self.glide.is_none()
            && self.beat + 1 < plan.beats.len()
        {
            let over_s = self.beat_s + self.lead_s - beat.lasts_s;
            self.beat_s -= over_s;
            self.lately.advance(-over_s);
            self.enter(plan, self.beat + 1, Some(self.beat));
            let left_s = match &mut self.glide {
                Some(glide) => glide.advance(over_s),
                None => over_s,
            };
            if self.glide.is_none_or(|glide| glide.over()) {
                self.glide = None;
                self.beat_s += left_s;
            }
            self.since_cut_s = over_s;
            self.lately.advance(over_s);
        }
    }

    /// Beat time that passes in an amount of show time, at a rate that eases towards what is wanted.
    fn flow(&mut self, elapsed_s: f64) -> f64 {
        let wanted = self.wanted_rate();
        let slope = (wanted - self.rate_from) / HOLD_S;
        let ramp_s =
            if (wanted - self.rate).abs() > 0.0 && slope != 0.0 { (wanted - self.rate) / slope } else { 0.0 };
        if elapsed_s < ramp_s {
            let before = self.rate;
            self.rate += slope * elapsed_s;
            0.5 * (before + self.rate) * elapsed_s
        } else {
            let passed_s = 0.5 * (self.rate + wanted) * ramp_s + wanted * (elapsed_s - ramp_s);
            self.rate = wanted;
            self.rate_from = wanted;
            passed_s
        }
    }

    fn wanted_rate(&self) -> f64 {
        if self.held || self.waiting {
            return 0.0;
        }
        let mut rate = 1.0;
        for _ in 0..self.speed.unsigned_abs() {
            rate = if self.speed > 0 { rate * SPEED_STEP } else { rate / SPEED_STEP };
        }
        rate
    }

    fn ease_rate(&mut self) {
        self.rate_from = self.rate;
    }

    fn back(&mut self, plan: &Plan) {
        match self.undo.take() {
            Some((mark, show_s)) => {
                let now = self.moment(plan);
                let mut clock = Self::resume(plan, mark);
                clock.calm = self.calm;
                let target_s = clock.pacing.model_s(clock.beat_s);
                let reach = self.reach_pace(plan, mark.beat);
                clock.glide = Glide::between(now.model_s, target_s, [0.0; 2], reach, now.veil);
                clock.before = Some(self.beat);
                clock.lately = self.lately;
                clock.lately.leave(self.beat, self.beat_from_s, self.run_from_s);
                clock.since_cut_s = 0.0;
                clock.show_s = show_s;
                *self = clock;
            }
            None => self.go_to(plan, self.beat.saturating_sub(1)),
        }
    }

    /// To the planned start of a beat, with a way back.
    fn leap(&mut self, plan: &Plan, index: usize) {
        let undo = (self.bookmark(), self.show_s);
        self.go_to(plan, index);
        self.undo = Some(undo);
    }

    /// To the planned start of a beat.
    fn go_to(&mut self, plan: &Plan, index: usize) {
        let before = (index != self.beat).then_some(self.beat);
        let beat = plan.beats[index];
        self.start(plan, index, before, beat.from_s);
        self.run_from_s = plan.run_from_s(index);
        self.beat_from_s = plan.sectors_from_s(index);
    }

    /// Into the beat that follows: from where the model is where it goes on and time is not lost by it, else from its planned start.
    fn enter(&mut self, plan: &Plan, index: usize, before: Option<usize>) {
        let beat = plan.beats[index];
        let now = self.moment(plan);
        let lingered = beat.run == Run::GoesOn
            && self.glide.is_none()
            && now.model_s >= beat.from_s
            && beat.can_start_at(now.model_s);
        let from_s = if lingered { now.model_s } else { beat.from_s };
        let (beat_from_s, run_from_s) = (self.beat_from_s, self.run_from_s);
        self.start(plan, index, before, from_s);
        if beat.run == Run::GoesOn {
            self.run_from_s = run_from_s.min(from_s);
        }
        if beat.keeps_sectors {
            self.beat_from_s = beat_from_s;
        }
    }

    fn start(&mut self, plan: &Plan, index: usize, before: Option<usize>, from_s: f64) {
        let now = self.moment(plan);
        let beat: PlannedBeat = plan.beats[index];
        self.undo = None;
        self.waiting = false;
        self.held = false;
        self.speed = 0;
        let seamless = before.is_some()
            && now.veil <= 0.0
            && (from_s - now.model_s).abs() <= 1e-9 * from_s.abs().max(1.0);
        let mut first_pace = 0.0;
        if seamless {
            first_pace = now.pace;
            self.glide = None;
        } else {
            let arriving = beat.pacing(from_s, 0.0, 0.0).pace;
            let reach = self.reach_pace(plan, index);
            self.glide = Glide::between(now.model_s, from_s, [now.pace, arriving], reach, now.veil);
            if let Some(glide) = &self.glide {
                first_pace = glide.last_pace();
            }
        }
        if index != self.beat {
            self.lately.leave(self.beat, self.beat_from_s, self.run_from_s);
        }
        self.beat = index;
        self.before = before;
        self.beat_s = 0.0;
        self.lead_s = self.glide.map_or(0.0, |glide| glide.lasts_s());
        self.pacing = beat.pacing(from_s, first_pace, self.lead_s);
        self.beat_from_s = from_s;
        self.run_from_s = from_s;
        self.since_cut_s = 0.0;
        self.rate = 1.0;
        self.rate_from = 1.0;
    }

    /// The quicker of the planned paces on both sides of a change: what the eye is used to.
    fn reach_pace(&self, plan: &Plan, to: usize) -> f64 {
        if self.calm {
            return 0.0;
        }
        let pace = |index: usize| plan.beats.get(index).map_or(0.0, |beat| beat.pace.abs());
        pace(self.beat).max(pace(to))
    }
}

#[cfg(test)]
#[path = "clock_tests.rs"]
mod tests;
