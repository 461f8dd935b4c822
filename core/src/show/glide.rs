//! From where the model is to where a beat starts, without a jump in the picture.

/// Shortest glide, show seconds.
const SHORTEST_S: f64 = 1.2;
/// Longest glide, show seconds.
const LONGEST_S: f64 = 3.0;
/// A way that would take longer than this at the usual pace is not glided over but changed under a veil.
const FARTHEST_SHOW_S: f64 = 180.0;
/// Show seconds for the veil to fall and to rise.
const VEIL_S: f64 = 1.0;

/// A change of model time under way.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Glide {
    from_s: f64,
    to_s: f64,
    first_pace: f64,
    last_pace: f64,
    lasts_s: f64,
    gone_s: f64,
    veiled: bool,
    /// The veil under which it begins.
    first_veil: f64,
}

impl Glide {
    /// A glide between two model times, from a pace to a pace; `usual_pace` says what the eye is used to. A veil
    /// that has begun to fall goes on falling where one is needed, and rises where none is.
    /// `None` where there is no way to go and nothing to be unveiled.
    pub(super) fn between(
        from_s: f64,
        to_s: f64,
        [first_pace, last_pace]: [f64; 2],
        usual_pace: f64,
        first_veil: f64,
    ) -> Option<Self> {
        let way = to_s - from_s;
        if !way.is_finite() || (way == 0.0 && first_veil <= 0.0) {
            return None;
        }
        let show_s = way.abs() / usual_pace.max(f64::MIN_POSITIVE);
        let veiled = show_s > FARTHEST_SHOW_S;
        let lasts_s = if veiled {
            VEIL_S * (1.0 - 0.5 * first_veil)
        } else {
            (SHORTEST_S + show_s / 40.0).clamp(SHORTEST_S, LONGEST_S)
        };
        // A cubic through both ends is monotone when both slopes have the sign of the way and are at most three
        // times its mean slope (Fritsch and Carlson 1980, SIAM J. Numer. Anal. 17, 238).
        let most = 3.0 * way / lasts_s;
        let fit = |pace: f64| {
            if pace * way <= 0.0 || veiled { 0.0 } else { pace.abs().min(most.abs()) * way.signum() }
        };
        let last_pace = if veiled { last_pace } else { fit(last_pace) };
        let first_pace = fit(first_pace);
        Some(Self { from_s, to_s, first_pace, last_pace, lasts_s, gone_s: 0.0, veiled, first_veil })
    }

    /// Lets show time pass; what is left of it when the glide is over, else 0.
    pub(super) fn advance(&mut self, elapsed_s: f64) -> f64 {
        let gone_s = self.gone_s + elapsed_s;
        // Arriving is set, not added up to: a sum could stay one rounding short of the end for ever.
        self.gone_s = gone_s.min(self.lasts_s);
        (gone_s - self.lasts_s).max(0.0)
    }

    /// Whether it changes over under a veil.
    pub(super) const fn veiled(&self) -> bool {
        self.veiled || self.first_veil > 0.0
    }

    /// Whether it has arrived.
    pub(super) fn over(&self) -> bool {
        self.gone_s >= self.lasts_s
    }

    /// Show time that it takes.
    pub(super) const fn lasts_s(&self) -> f64 {
        self.lasts_s
    }

    /// Show time that has passed of it.
    pub(super) const fn gone_s(&self) -> f64 {
        self.gone_s
    }

    /// Pace with which it arrives.
    pub(super) const fn last_pace(&self) -> f64 {
        self.last_pace
    }

    /// Model time now.
    pub(super) fn model_s(&self) -> f64 {
        if self.veiled {
            return if self.lasts_s - self.gone_s > 0.5 * VEIL_S { self.from_s } else { self.to_s };
        }
        if self.over() {
            return self.to_s;
        }
        let x = self.gone_s / self.lasts_s;
        let (a, b) = (self.first_pace * self.lasts_s, self.last_pace * self.lasts_s);
        let way = self.to_s - self.from_s;
        self.from_s + x * (a + x * ((3.0 * way - 2.0 * a - b) + x * (a + b - 2.0 * way)))
    }

    /// Pace now, model seconds per show second.
    pub(super) fn pace(&self) -> f64 {
        if self.veiled {
            return 0.0;
        }
        let x = self.gone_s / self.lasts_s;
        let (a, b) = (self.first_pace * self.lasts_s, self.last_pace * self.lasts_s);
        let way = self.to_s - self.from_s;
        (a + x * (2.0 * (3.0 * way - 2.0 * a - b) + x * 3.0 * (a + b - 2.0 * way))) / self.lasts_s
    }

    /// The veil: 0 clear, 1 only ground.
    pub(super) fn veil(&self) -> f64 {
        let moved = self.gone_s / (0.5 * VEIL_S);
        let left = (self.lasts_s - self.gone_s) / (0.5 * VEIL_S);
        let veil = if self.veiled { (self.first_veil + moved).min(left) } else { self.first_veil - moved };
        veil.clamp(0.0, 1.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        #[test]
        fn a_glide_is_monotone_and_arrives(
            from in -1e9..1e9f64, way in prop::sample::select(vec![-1e8, -3.0, 1.0, 5e7]),
            first in 0.0..1e7f64, last in 0.0..1e7f64, usual in 1.0..1e6f64,
        ) {
            let mut glide = Glide::between(from, from + way, [first, last], usual, 0.0).unwrap();
            let mut before = glide.model_s();
            let mut left = 0.0;
            for _ in 0..400 {
                left += glide.advance(0.01);
                let now = glide.model_s();
                prop_assert!((now - before) * way >= -1e-6 * way.abs());
                before = now;
            }
            prop_assert!(glide.over());
            prop_assert!((glide.model_s() - from - way).abs() < 1e-6);
            prop_assert!((left - (4.0 - glide.lasts_s)).abs() < 1e-9);
        }
    }

    #[test]
    fn a_glide_ends_however_its_time_is_parted() {
        for parts in 1..5000 {
            let mut glide = Glide::between(0.0, 1.0, [0.0, 0.0], 1.0, 0.0).unwrap();
            let frame_s = 1.3 / f64::from(parts);
            let mut frames = 0;
            while !glide.over() {
                glide.advance(frame_s);
                frames += 1;
                assert!(frames <= parts, "still gliding after {frames} frames of {frame_s} s");
            }
        }
    }

    #[test]
    fn a_long_way_is_changed_under_a_full_veil() {
        let mut glide = Glide::between(0.0, 1e9, [1.0, 1.0], 1.0, 0.0).unwrap();
        glide.advance(0.499);
        assert!(glide.model_s() == 0.0 && glide.veil() > 0.99);
        glide.advance(0.002);
        assert!((glide.model_s() - 1e9).abs() == 0.0 && glide.veil() > 0.99);
    }

    #[test]
    fn a_veil_that_has_begun_to_fall_never_jumps() {
        for (way, level) in [(1e9, 0.3), (1e9, 1.0), (1.0, 0.7), (0.0, 0.5)] {
            let mut glide = Glide::between(0.0, way, [0.0, 0.0], 1.0, level).unwrap();
            let mut before = glide.veil();
            assert!((before - level).abs() < 1e-12);
            while !glide.over() {
                glide.advance(0.01);
                assert!((glide.veil() - before).abs() < 0.0201, "from {before} to {}", glide.veil());
                before = glide.veil();
            }
            assert!(before < 1e-9 && (glide.model_s() - way).abs() < 1e-9);
        }
    }
}
