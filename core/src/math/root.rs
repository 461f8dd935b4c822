//! Roots in a bracket, with a bound on the number of steps that holds for every function.

/// Where a function changes its sign between `a` and `b`, to within `tol`.
///
/// `f(a)` and `f(b)` must have opposite signs (or one of them be 0); otherwise, and where the function gives NaN,
/// the answer is `None`. A `tol` finer than the numbers near the root allow (0 too) is taken as two of their last
/// places. The function is called at most once more than bisection would, plus twice; far less where it is smooth.
///
/// # Source
/// I. F. D. Oliveira & R. H. C. Takahashi, "An enhancement of the bisection method average performance preserving
/// minmax optimality", ACM Trans. Math. Softw. 47 (2020), 5; with κ1 = 0.2 / (b - a), κ2 = 2, n0 = 1.
pub fn bracketed(mut f: impl FnMut(f64) -> f64, a: f64, b: f64, tol: f64) -> Option<f64> {
    let (mut low, mut high) = if a <= b { (a, b) } else { (b, a) };
    let (mut f_low, mut f_high) = (f(low), f(high));
    if f_low == 0.0 {
        return Some(low);
    }
    if f_high == 0.0 {
        return Some(high);
    }
    let opposite = f_low < 0.0 && f_high > 0.0 || f_low > 0.0 && f_high < 0.0;
    // Not opposite when either is NaN.
    if !opposite || !(high - low).is_finite() {
        return None;
    }
    // Twice the spacing of the larger end: the bracket can always become as small as that.
    let finest = 2.0 * f64::EPSILON * low.abs().max(high.abs()) + f64::MIN_POSITIVE;
    let tol = tol.max(finest);
    let k1 = 0.2 / (high - low);
    // The half-width which the bracket may have before each step: once more doubled than bisection needs.
    let mut steps = 0;
    let mut allowed = tol;
    while allowed < high - low {
        allowed *= 2.0;
        steps += 1;
    }
    for _ in 0..steps {
        let width = high - low;
        if width <= 2.0 * tol {
            break;
        }
        let middle = low + 0.5 * width;
        let secant = (f_high * low - f_low * high) / (f_high - f_low);
        let towards = if middle >= secant { 1.0 } else { -1.0 };
        let nudge = k1 * width * width;
        let off = (middle - secant).abs();
        let trial = if nudge <= off { secant + towards * nudge } else { middle };
        let slack = (allowed - 0.5 * width).max(0.0);
        allowed *= 0.5;
        let x = if (trial - middle).abs() <= slack { trial } else { middle - towards * slack };
        let y = f(x);
        if y == 0.0 {
            return Some(x);
        }
        if y.is_nan() {
            return None;
        }
        if (y > 0.0) == (f_high > 0.0) {
            (high, f_high) = (x, y);
        } else {
            (low, f_low) = (x, y);
        }
    }
    let secant = (f_high * low - f_low * high) / (f_high - f_low);
    Some(if secant >= low && secant <= high { secant } else { low + 0.5 * (high - low) })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::math::float::{cos, exp};
    use proptest::prelude::*;

    fn close(got: Option<f64>, want: f64, tol: f64) {
        let got = got.unwrap();
        assert!((got - want).abs() <= tol, "got {got}, want {want}, difference {}", got - want);
    }

    #[test]
    fn finds_the_roots_of_smooth_functions_in_few_calls() {
        let mut calls = 0;
        let root = bracketed(
            |x| {
                calls += 1;
                cos(x) - x
            },
            0.0,
            1.0,
            1e-14,
        );
        close(root, 0.739_085_133_215_160_6, 1e-14);
        assert!(calls <= 12, "{calls} calls");
        close(bracketed(|x| x * x - 2.0, 2.0, 0.0, 0.0), std::f64::consts::SQRT_2, 4e-15);
    }

    #[test]
    fn never_needs_more_calls_than_bisection_and_three() {
        for f in [
            (|x: f64| exp(80.0 * x) - 1.0) as fn(f64) -> f64,
            |x| if x < 0.1 { -1.0 } else { 1e-300 },
            |x| (x - 0.3) * (x - 0.3) * (x - 0.3),
        ] {
            let mut calls = 0;
            let got = bracketed(
                |x| {
                    calls += 1;
                    f(x)
                },
                -1.0,
                1.0,
                1e-10,
            );
            assert!(got.is_some());
            // log2(2 / 2e-10) = 33.2
            assert!(calls <= 34 + 3, "{calls} calls");
        }
    }

    #[test]
    fn ends_that_are_roots_are_the_answer_and_ends_of_one_sign_have_none() {
        assert_eq!(bracketed(|x| x, 0.0, 1.0, 1e-9), Some(0.0));
        assert_eq!(bracketed(|x| x - 1.0, 0.0, 1.0, 1e-9), Some(1.0));
        assert_eq!(bracketed(|x| x * x + 1.0, -1.0, 1.0, 1e-9), None);
        assert_eq!(bracketed(|_| f64::NAN, -1.0, 1.0, 1e-9), None);
    }

    proptest! {
        #[test]
        fn the_answer_is_within_the_tolerance(root in -1e3..1e3_f64, below in 1e-3..1e6_f64, above in 1e-3..1e6_f64, power in 0..3) {
            let f = |x: f64| {
                let d = x - root;
                match power { 0 => d, 1 => d * d * d, _ => d / (1.0 + d.abs()) }
            };
            let got = bracketed(f, root - below, root + above, 1e-7).unwrap();
            prop_assert!((got - root).abs() <= 2e-7, "got {got}, want {root}");
        }
    }
}
