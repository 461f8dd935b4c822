//! Stumpff's functions, and two differences that lose their digits when they are taken as they stand.

use crate::math::float::{cosh, sin, sin_cos, sinh};

/// `x - sin x` without cancellation; relative error a few units of the last place.
pub fn x_minus_sin(x: f64) -> f64 {
    if x.abs() < 1.0 { x * x * x * c3_series(x * x) } else { x - sin(x) }
}

/// `sinh x - x` without cancellation; relative error a few units of the last place.
pub fn sinh_minus_x(x: f64) -> f64 {
    if x.abs() < 1.0 { x * x * x * c3_series(-x * x) } else { sinh(x) - x }
}

/// Stumpff's functions c0 to c3 of `x`: `cₖ(x) = Σ (-x)ⁿ / (k + 2n)!`.
///
/// Closed forms away from 0, series near it, none of which cancels. Overflows to infinity below about `x = -5e5`.
///
/// # Source
/// K. Stumpff, Himmelsmechanik I (1959); J. M. A. Danby, Fundamentals of Celestial Mechanics, 2nd ed. (1988), 6.9.
pub fn stumpff(x: f64) -> [f64; 4] {
    let root = x.abs().sqrt();
    let (c0, c1, c3) = if x.abs() < 1.0 {
        let c3 = c3_series(x);
        let c1 = 1.0 - x * c3;
        let half = 1.0 - 0.25 * x * c3_series(0.25 * x);
        (1.0 - 0.5 * x * half * half, c1, c3)
    } else if x > 0.0 {
        let (s, c) = sin_cos(root);
        (c, s / root, x_minus_sin(root) / (x * root))
    } else {
        (cosh(root), sinh(root) / root, sinh_minus_x(root) / (-x * root))
    };
    // c2(x) = c1(x/4)² / 2, which can't cancel.
    let half = if x.abs() < 1.0 {
        1.0 - 0.25 * x * c3_series(0.25 * x)
    } else if x > 0.0 {
        sin(0.5 * root) / (0.5 * root)
    } else {
        sinh(0.5 * root) / (0.5 * root)
    };
    [c0, c1, 0.5 * half * half, c3]
}

/// c3 by its series, for `|x| <= 1`: the first term left out is below 1e-17 of the sum.
fn c3_series(x: f64) -> f64 {
    let mut sum = 1.0;
    let mut k = 17.0;
    while k > 4.0 {
        sum = 1.0 - x / (k * (k - 1.0)) * sum;
        k -= 2.0;
    }
    sum / 6.0
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Ten units of the last place: each value is a handful of operations.
    const TOL: f64 = 10.0 * f64::EPSILON;

    fn by_series(k: u32, x: f64) -> f64 {
        let mut term = 1.0 / (1..=k).map(f64::from).product::<f64>();
        let mut sum = 0.0;
        for n in 1..40 {
            sum += term;
            let m = f64::from(k + 2 * n);
            term *= -x / (m * (m - 1.0));
        }
        sum
    }

    #[test]
    fn closed_forms_and_series_agree_on_both_sides_of_their_border() {
        for x in [-4.0, -1.0001, -0.9999, -0.3, -1e-9, 0.0, 1e-300, 1e-9, 0.3, 0.9999, 1.0001, 4.0] {
            let got = stumpff(x);
            for k in 0..4_u32 {
                let want = by_series(k, x);
                // Near a zero of c0 (x = 2.47) the absolute error counts.
                let diff = (got[k as usize] - want).abs();
                assert!(diff <= TOL * want.abs().max(0.5), "c{k}({x}): got {}, want {want}", got[k as usize]);
            }
        }
    }

    #[test]
    fn small_differences_keep_their_digits() {
        for x in [1e-12, 1e-6, 1e-3] {
            let want = x * x * x / 6.0 * (1.0 - x * x / 20.0);
            assert!((x_minus_sin(x) / want - 1.0).abs() < TOL, "x {x}");
            let want = x * x * x / 6.0 * (1.0 + x * x / 20.0);
            assert!((sinh_minus_x(x) / want - 1.0).abs() < TOL, "x {x}");
        }
        // The two ways meet at 1.
        assert!((x_minus_sin(0.999_999_999_999) - x_minus_sin(1.0)).abs() < 1e-11);
    }
}
