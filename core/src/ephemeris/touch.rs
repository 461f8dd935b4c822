//! When two bodies touch, found on the polynomials of a step.

use super::track::evaluate;
use crate::integrate::PER_BODY;
use crate::math::root::bracketed;

/// Distances nearer to the surface than this part of it count as on it.
const ON_SURFACE: f64 = 1e-12;

/// Halvings after which a stretch of a step counts as an instant.
const MOST_HALVINGS: usize = 44;

/// Parts into which a step is cut for a body that starts below the surface.
const PARTS_BELOW: usize = 32;

/// How far a body can get from its place within a step, m.
pub(super) fn reach_m(numbers: &[f64], step_s: f64) -> f64 {
    let (speed, _) = bounds(numbers, step_s);
    speed
}

/// Bounds of speed and acceleration over a step, in m a step and m a step squared.
fn bounds(numbers: &[f64], step_s: f64) -> (f64, f64) {
    let size = |row: usize| {
        let n = &numbers[3 * row..3 * row + 3];
        (n[0] * n[0] + n[1] * n[1] + n[2] * n[2]).sqrt()
    };
    let (mut speed, mut acc) = (size(2), size(2));
    let mut order = 2.0;
    for row in 3..10 {
        let b = size(row);
        speed += b / order;
        acc += b;
        order += 1.0;
    }
    let step = step_s.abs();
    (step * (size(1) + step * speed), step * step * acc)
}

/// The part of the step (0 to 1) after which the two bodies first touch: their distance becomes `radius_m`.
///
/// `rounding_m` is how well their positions are known. A pair that starts on or below the surface and moves outwards isn't touching; one
/// that starts below it and moves, or begins to move, inwards is. Between its ends a step can't hide a touch: the curvature of the
/// squared distance has a bound, and stretches are halved until it settles the matter.
pub(super) fn first(a: &[f64], b: &[f64], step_s: f64, radius_m: f64, rounding_m: f64) -> Option<f64> {
    let mut relative = [0.0; PER_BODY];
    for (r, (a, b)) in relative.iter_mut().zip(a.iter().zip(b)) {
        *r = a - b;
    }
    let start = (relative[0] * relative[0] + relative[1] * relative[1] + relative[2] * relative[2]).sqrt();
    let (speed, acc) = bounds(&relative, step_s);
    if start - speed > radius_m {
        return None;
    }
    let slack_m = (ON_SURFACE * radius_m).max(rounding_m);
    let search = Search {
        relative,
        step_s,
        surface_m2: radius_m * radius_m,
        slack_m2: 2.0 * radius_m * slack_m,
        curvature_m2: 2.0 * (speed * speed + (start + speed) * acc),
    };
    search.first()
}

/// What is looked for: where the square of the distance, less that of the surface, becomes negative.
struct Search {
    relative: [f64; PER_BODY],
    step_s: f64,
    surface_m2: f64,
    slack_m2: f64,
    curvature_m2: f64,
}

/// A part of the step with the squared distance above the surface, and its slope.
#[derive(Clone, Copy)]
struct Point {
    h: f64,
    above: f64,
    slope: f64,
}

impl Search {
    fn at(&self, h: f64) -> Point {
        let state = evaluate(&self.relative, self.step_s, h);
        let above = state.pos.norm_squared() - self.surface_m2;
        Point { h, above, slope: 2.0 * self.step_s * state.pos.dot(&state.vel) }
    }

    fn first(&self) -> Option<f64> {
        let from = self.at(0.0);
        if from.above < -self.slack_m2 { self.rising_out(from) } else { self.coming_down(from) }
    }

    fn coming_down(&self, from: Point) -> Option<f64> {
        let (before, after) = self.dip(from, self.at(1.0), MOST_HALVINGS)?;
        if from.above <= self.slack_m2 && from.slope <= 0.0 && before.above <= self.slack_m2 {
            // It lay on the surface, and sinks into it.
            return Some(from.h);
        }
        if before.above <= 0.0 {
            return Some(before.h);
        }
        bracketed(|h| self.at(h).above, before.h, after.h, 0.0)
    }

    /// Two points close to each other: before the first crossing of the surface, and below it.
    fn dip(&self, low: Point, high: Point, halvings: usize) -> Option<(Point, Point)> {
        let width = high.h - low.h;
        let bent = self.curvature_m2 * width;
        let below = |p: Point| p.above < -self.slack_m2;
        if low.above.min(high.above) - 0.125 * bent * width >= -self.slack_m2 {
            return None;
        }
        // The slope keeps its sign over the whole stretch.
        let falling = low.slope + bent < 0.0 || high.slope + bent < 0.0;
        let rising = low.slope - bent > 0.0 || high.slope - bent > 0.0;
        if falling || halvings == 0 {
            return below(high).then_some((low, high));
        }
        if rising && !below(low) {
            return None;
        }
        let middle = self.at(low.h + 0.5 * width);
        self.dip(low, middle, halvings - 1).or_else(|| self.dip(middle, high, halvings - 1))
    }

    fn rising_out(&self, from: Point) -> Option<f64> {
        if from.slope <= 0.0 {
            return Some(0.0);
        }
        let mut last = from;
        let mut h = 0.0;
        for _ in 0..PARTS_BELOW {
            #[expect(clippy::cast_precision_loss, reason = "a small constant")]
            {
                h += 1.0 / PARTS_BELOW as f64;
            }
            let next = self.at(h.min(1.0));
            if next.above > 0.0 {
                return self.coming_down(next);
            }
            if next.slope < 0.0 {
                return bracketed(|h| self.at(h).slope, last.h, next.h, 0.0);
            }
            last = next;
        }
        None
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    /// A point at `pos`, moving with `vel` and accelerating with `acc`.
    fn moving(pos: [f64; 3], vel: [f64; 3], acc: [f64; 3]) -> [f64; PER_BODY] {
        let mut numbers = [0.0; PER_BODY];
        numbers[0..3].copy_from_slice(&pos);
        numbers[3..6].copy_from_slice(&vel);
        numbers[6..9].copy_from_slice(&acc);
        numbers
    }

    const STILL: [f64; PER_BODY] = [0.0; PER_BODY];

    #[test]
    fn a_graze_by_a_hairs_breadth_is_seen_and_a_miss_by_as_much_is_not() {
        for (aside, want) in [(1.0 - 1e-10, true), (1.0 + 1e-10, false), (1.0 - 1e-6, true), (0.999, true)] {
            let ball = moving([-3.0, aside, 0.0], [7.0, 0.0, 0.0], [0.0; 3]);
            let got = first(&ball, &STILL, 1.0, 1.0, 0.0);
            assert_eq!(got.is_some(), want, "{aside}: {got:?}");
            if let Some(h) = got {
                let exact = (3.0 - (1.0 - aside * aside).sqrt()) / 7.0;
                // The root of the squared distance is found to rounding of that square: the depth of the graze magnifies it.
                let tol = 1e-15 / (1.0 - aside * aside).sqrt();
                assert!((h - exact).abs() < tol, "{aside}: got {h}, want {exact}");
            }
        }
    }

    #[test]
    fn starting_on_the_surface_counts_only_inwards() {
        let out = moving([1.0, 0.0, 0.0], [1.0, 0.0, 0.0], [0.0; 3]);
        assert_eq!(first(&out, &STILL, 1.0, 1.0, 0.0), None);
        let inwards = moving([1.0, 0.0, 0.0], [-1.0, 0.0, 0.0], [0.0; 3]);
        assert_eq!(first(&inwards, &STILL, 1.0, 1.0, 0.0), Some(0.0));
        let sinking = moving([1.0, 0.0, 0.0], [0.0; 3], [-1.0, 0.0, 0.0]);
        assert_eq!(first(&sinking, &STILL, 1.0, 1.0, 0.0), Some(0.0));
        // Up and back again: lands when it is back.
        let thrown = moving([1.0, 0.0, 0.0], [0.25, 0.0, 0.0], [-1.0, 0.0, 0.0]);
        let h = first(&thrown, &STILL, 1.0, 1.0, 0.0).unwrap();
        assert!((h - 0.5).abs() < 1e-14, "got {h}");
        // Back in time it comes from below.
        assert_eq!(first(&thrown, &STILL, -1.0, 1.0, 0.0), Some(0.0));
    }

    #[test]
    fn starting_below_the_surface_counts_where_it_turns_inwards() {
        let falls_back = moving([0.5, 0.0, 0.0], [0.25, 0.0, 0.0], [-0.5, 0.0, 0.0]);
        let h = first(&falls_back, &STILL, 1.0, 1.0, 0.0).unwrap();
        assert!((h - 0.5).abs() < 1e-14, "got {h}");
        let leaves = moving([0.5, 0.0, 0.0], [2.0, 0.0, 0.0], [0.0; 3]);
        assert_eq!(first(&leaves, &STILL, 1.0, 1.0, 0.0), None);
        let comes_back = moving([0.5, 0.0, 0.0], [8.0, 0.0, 0.0], [-16.0, 0.0, 0.0]);
        let h = first(&comes_back, &STILL, 1.0, 1.0, 0.0).unwrap();
        let exact = 0.5 + 3.0_f64.sqrt() / 4.0;
        assert!((h - exact).abs() < 1e-14, "got {h}, want {exact}");
    }

    proptest! {
        #[test]
        fn straight_paths_touch_when_geometry_says_so(aside in 0.0..2.0_f64, from in 1.5..50.0_f64, length in 0.1..120.0_f64) {
            let ball = moving([-from, aside, 0.0], [length, 0.0, 0.0], [0.0; 3]);
            prop_assume!((aside - 1.0).abs() > 1e-9 && from * from + aside * aside > 1.0);
            let exact = (from - (1.0 - aside * aside).max(0.0).sqrt()) / length;
            prop_assume!((exact - 1.0).abs() > 1e-9);
            let got = first(&ball, &STILL, 1.0, 1.0, 0.0);
            prop_assert_eq!(got.is_some(), aside < 1.0 && exact < 1.0, "{:?}", got);
        }
    }
}
