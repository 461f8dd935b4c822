//! How model time runs inside one beat: eased in from the pace before, eased out to a hold where one follows.

/// Show seconds in which one pace turns into another.
pub(super) const EASE_S: f64 = 1.2;

/// Model time as a function of beat time. Monotone: it never turns back within a beat.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pacing {
    /// Model time at beat time 0.
    pub from_s: f64,
    /// Pace at beat time 0, model seconds per show second.
    pub first_pace: f64,
    /// Pace once eased in.
    pub pace: f64,
    /// Beat time in which it eases in.
    pub ease_in_s: f64,
    /// Beat time at which it starts to ease out to a hold, if it does.
    pub ease_out: Option<EaseOut>,
}

/// The last stretch before a hold.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct EaseOut {
    /// Beat time at which it starts.
    pub at_s: f64,
    /// How long it takes.
    pub lasts_s: f64,
}

impl Pacing {
    /// The model stands still.
    pub const fn still(from_s: f64) -> Self {
        Self { from_s, first_pace: 0.0, pace: 0.0, ease_in_s: 0.0, ease_out: None }
    }

    /// At a stated pace; with `hold_at_s`, standing still from that beat time on.
    pub fn steady(from_s: f64, first_pace: f64, pace: f64, hold_at_s: Option<f64>) -> Self {
        let ease_in_s = hold_at_s.map_or(EASE_S, |hold| EASE_S.min(hold / 3.0));
        let ease_out = hold_at_s.map(|hold| EaseOut { at_s: hold - ease_in_s, lasts_s: ease_in_s });
        Self { from_s, first_pace, pace, ease_in_s, ease_out }
    }

    /// So paced that `model_span_s` is covered when beat time is `at_s`. With `hold`, it stands still there;
    /// else it goes on at the pace it has then.
    ///
    /// The pace never turns against the span: where easing in from `first_pace` alone would overshoot, the
    /// easing is shortened.
    pub fn covering(from_s: f64, first_pace: f64, model_span_s: f64, at_s: f64, hold: bool) -> Self {
        let at_s = at_s.max(1e-3);
        // A pace against the direction of the span is not carried over.
        let first_pace = if first_pace * model_span_s > 0.0 { first_pace } else { 0.0 };
        let mut ease_in_s = EASE_S.min(at_s / 3.0);
        if first_pace != 0.0 {
            ease_in_s = ease_in_s.min(model_span_s / first_pace);
        }
        // The integral of a smooth step over its ease is half of it.
        let lead = 0.5 * ease_in_s * first_pace;
        if hold {
            let lasts_s = EASE_S.min(at_s / 3.0);
            let pace = (model_span_s - lead) / (at_s - 0.5 * ease_in_s - 0.5 * lasts_s);
            Self {
                from_s,
                first_pace,
                pace,
                ease_in_s,
                ease_out: Some(EaseOut { at_s: at_s - lasts_s, lasts_s }),
            }
        } else {
            let pace = (model_span_s - lead) / (at_s - 0.5 * ease_in_s);
            Self { from_s, first_pace, pace, ease_in_s, ease_out: None }
        }
    }

    /// The same, but easing to a hold that ends at beat time `hold_at_s`, if there is room for it after `not_before_s`.
    pub fn then_hold(mut self, not_before_s: f64, hold_at_s: f64) -> Self {
        let lasts_s = EASE_S.min(hold_at_s - not_before_s).max(0.0);
        self.ease_out = Some(EaseOut { at_s: hold_at_s - lasts_s, lasts_s });
        self
    }

    /// Model time at a beat time, seconds.
    pub fn model_s(&self, beat_s: f64) -> f64 {
        let t = beat_s.max(0.0);
        let mut covered = if t < self.ease_in_s {
            let x = t / self.ease_in_s;
            self.first_pace * t + (self.pace - self.first_pace) * self.ease_in_s * rising_integral(x)
        } else {
            0.5 * self.ease_in_s * (self.first_pace + self.pace) + self.pace * (t - self.ease_in_s)
        };
        if let Some(out) = self.ease_out
            && t > out.at_s
        {
            let past = t - out.at_s;
            let shed = if past < out.lasts_s {
                out.lasts_s * rising_integral(past / out.lasts_s)
            } else {
                0.5 * out.lasts_s + (past - out.lasts_s)
            };
            covered -= self.pace * shed;
        }
        self.from_s + covered
    }

    /// Pace at a beat time, model seconds per show second.
    pub fn pace_at(&self, beat_s: f64) -> f64 {
        let t = beat_s.max(0.0);
        let mut pace = if t < self.ease_in_s {
            self.first_pace + (self.pace - self.first_pace) * rising(t / self.ease_in_s)
        } else {
            self.pace
        };
        if let Some(out) = self.ease_out
            && t > out.at_s
        {
            let past = t - out.at_s;
            pace -= self.pace * if past < out.lasts_s { rising(past / out.lasts_s) } else { 1.0 };
        }
        pace
    }
}

/// The smooth step 3x² - 2x³.
fn rising(x: f64) -> f64 {
    x * x * (3.0 - 2.0 * x)
}

/// Its integral from 0, x³ - x⁴/2.
fn rising_integral(x: f64) -> f64 {
    x * x * x * (1.0 - 0.5 * x)
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        #[test]
        fn a_covered_span_is_covered_exactly_at_its_time(
            first in 0.0..1e7f64, span in 1.0..1e10f64, at in 0.1..600.0f64, hold: bool,
        ) {
            let pacing = Pacing::covering(5.0, first, span, at, hold);
            prop_assert!((pacing.model_s(at) - 5.0 - span).abs() <= 1e-12 * span + 1e-9);
        }

        #[test]
        fn model_time_never_turns_back(
            first in 0.0..1e7f64, span in 1.0..1e10f64, at in 0.1..600.0f64, hold: bool,
        ) {
            let pacing = Pacing::covering(0.0, first, span, at, hold);
            let mut last = f64::NEG_INFINITY;
            for i in 0..2000 {
                let now = pacing.model_s(at * 1.5 * f64::from(i) / 2000.0);
                prop_assert!(now >= last - 1e-12 * span, "{now} after {last}");
                last = now;
            }
        }

        #[test]
        fn the_pace_is_the_slope(first in 0.0..100.0f64, span in 1.0..1e5f64, at in 1.0..100.0f64, hold: bool, x in 0.01..1.2f64) {
            let pacing = Pacing::covering(0.0, first, span, at, hold);
            let (t, d) = (x * at, 1e-5 * at);
            let slope = (pacing.model_s(t + d) - pacing.model_s(t - d)) / (2.0 * d);
            // A central difference errs by d²/6 times the pace's second derivative, about pace/ease².
            let ease = pacing.ease_in_s.clamp(1e-9, 1.0);
            let tolerance = 1e-6 * (span / at + first) + (first + pacing.pace) * (d / ease) * (d / ease) * 12.0 + (first + pacing.pace) * d / ease * 1e-2;
            prop_assert!((slope - pacing.pace_at(t)).abs() <= tolerance, "{slope} {} {tolerance}", pacing.pace_at(t));
        }
    }

    #[test]
    fn a_hold_is_never_run_past() {
        let pacing = Pacing::covering(0.0, 3.0, 100.0, 10.0, true);
        assert!((pacing.model_s(10.0) - 100.0).abs() < 1e-12);
        assert!((pacing.model_s(1000.0) - 100.0).abs() < 1e-9);
        assert!(pacing.pace_at(1000.0).abs() < 1e-12);
    }
}
