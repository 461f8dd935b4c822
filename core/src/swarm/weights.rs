//! Weights of Störmer's multistep method, and of its positions and velocities between the nodes.
//!
//! Accelerations at [`KEPT`] equally spaced nodes define a polynomial. With s the time in steps, 0 at the newest node and -i at
//! the i-th before it, L_i(s) is Lagrange's polynomial of that node. Integrated twice, the polynomial gives positions, integrated once
//! velocities. What a step needs is worked out in whole numbers, so every weight is exact to rounding; what frames
//! and starts need, at any s, by a quadrature that is exact for these polynomials.
//!
//! # Source
//! C. Störmer, Arch. sci. phys. nat. Genève 24 (1907), 5; E. Hairer, S. P. Nørsett & G. Wanner, Solving Ordinary Differential Equations I
//! (2nd ed. 1993), section III.10.

/// Accelerations kept of each tracer: the order of the method.
pub(super) const KEPT: usize = 12;

/// One number for each node kept, the newest first.
pub(super) type Weights = [f64; KEPT];

/// Polynomials with whole coefficients, the constant term first, and the whole numbers to divide them by: Lagrange's of each node.
const LAGRANGE: ([[i128; KEPT]; KEPT], [i128; KEPT]) = {
    let mut rows = [[0; KEPT]; KEPT];
    let mut by = [1; KEPT];
    let mut i = 0;
    while i < KEPT {
        rows[i][0] = 1;
        let (mut j, mut node) = (0, 0);
        let mut own = 0;
        let mut k = 0;
        while k < i {
            own += 1;
            k += 1;
        }
        while j < KEPT {
            if j != i {
                // Times (s + j) / (j - i), from the highest term down.
                let mut m = KEPT - 1;
                while m > 0 {
                    rows[i][m] = rows[i][m] * node + rows[i][m - 1];
                    m -= 1;
                }
                rows[i][0] *= node;
                by[i] *= node - own;
            }
            j += 1;
            node += 1;
        }
        i += 1;
    }
    (rows, by)
};

/// Divisible by every (m + 1)(m + 2) with m below [`KEPT`].
const COMMON: i128 = {
    let mut common = 1;
    let mut m = 1;
    while m <= KEPT as i128 {
        let next = m * (m + 1);
        let (mut a, mut b) = (common, next);
        while b != 0 {
            (a, b) = (b, a % b);
        }
        common = common / a * next;
        m += 1;
    }
    common
};

/// Weights ∫ k(s) L_i(s) ds, given what the kernel makes of each power of s, times [`COMMON`].
const fn integrated(powers: &[i128; KEPT]) -> Weights {
    let mut weights = [0.0; KEPT];
    let mut i = 0;
    while i < KEPT {
        let mut sum = 0;
        let mut m = 0;
        while m < KEPT {
            sum += LAGRANGE.0[i][m] * powers[m];
            m += 1;
        }
        weights[i] = quotient(sum, LAGRANGE.1[i] * COMMON);
        i += 1;
    }
    weights
}

/// A quotient as f64, to a few roundings.
#[expect(clippy::cast_precision_loss, reason = "those roundings")]
const fn quotient(top: i128, bottom: i128) -> f64 {
    let (mut a, mut b) = (top, bottom);
    while b != 0 {
        (a, b) = (b, a % b);
    }
    if a == 0 { 0.0 } else { (top / a) as f64 / (bottom / a) as f64 }
}

/// `[∫ (1 - s) s^m ds from 0 to 1, that with -s for s in the power]`, each for all m, times [`COMMON`].
const MOMENTS: [[i128; KEPT]; 2] = {
    let mut moments = [[0; KEPT]; 2];
    let (mut m, mut power, mut sign) = (0, 0, 1);
    while m < KEPT {
        moments[0][m] = COMMON / ((power + 1) * (power + 2));
        moments[1][m] = sign * moments[0][m];
        m += 1;
        power += 1;
        sign = -sign;
    }
    moments
};

/// x_{n+1} - 2 x_n + x_{n-1} = h² Σ `STEP[i]` a_{n-i}: Störmer's own.
pub(super) const STEP: Weights = {
    let mut powers = MOMENTS[0];
    let mut m = 0;
    while m < KEPT {
        powers[m] += MOMENTS[1][m];
        m += 1;
    }
    integrated(&powers)
};

/// h v_n = x_n - x_{n-1} + h² Σ `SPEED[i]` a_{n-i}.
pub(super) const SPEED: Weights = integrated(&MOMENTS[1]);

/// Gauss-Legendre quadrature with seven points, exact up to degree 13: places from -1 to 1 (0 or above; each but 0 counts twice) and weights.
/// Source: M. Abramowitz & I. A. Stegun, Handbook of Mathematical Functions (1964), table 25.4, to f64.
const GAUSS: [(f64, f64); 4] = [
    (0.0, 0.417_959_183_673_469_4),
    (0.405_845_151_377_397_2, 0.381_830_050_505_118_9),
    (0.741_531_185_599_394_4, 0.279_705_391_489_276_7),
    (0.949_107_912_342_758_5, 0.129_484_966_168_869_7),
];

/// From one place in the history to another, in steps: weights of the accelerations in the position, x = x_from + (to - from) h v_from + h² Σ w a,
/// and in the velocity, h v = h v_from + h² Σ u a.
pub(super) fn between(from: f64, to: f64) -> (Weights, Weights) {
    let (mut places, mut speeds) = ([0.0; KEPT], [0.0; KEPT]);
    let half = 0.5 * (to - from);
    let mut take = |x: f64, weight: f64| {
        let s = from + half * (1.0 + x);
        for (i, l) in lagrange(s).into_iter().enumerate() {
            places[i] += half * weight * (to - s) * l;
            speeds[i] += half * weight * l;
        }
    };
    for (x, weight) in GAUSS {
        take(x, weight);
        if x > 0.0 {
            take(-x, weight);
        }
    }
    (places, speeds)
}

/// Lagrange's polynomials of all nodes at one s.
fn lagrange(s: f64) -> Weights {
    let mut values = [1.0; KEPT];
    let mut own = 0.0;
    for value in &mut values {
        let mut node = 0.0;
        for _ in 0..KEPT {
            #[expect(clippy::float_cmp, reason = "both count the same whole numbers")]
            if node != own {
                *value *= (s + node) / (node - own);
            }
            node += 1.0;
        }
        own += 1.0;
    }
    values
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Backward differences of a weight row: Σ w_i a_{n-i} = Σ g_j ∇^j a_n.
    fn by_differences(row: &Weights) -> Vec<f64> {
        // a_{n-i} = Σ_j (-1)^j C(i, j) ∇^j a_n.
        let mut differences = vec![0.0; KEPT];
        for (i, w) in row.iter().enumerate() {
            let mut c = 1.0;
            for (j, g) in differences.iter_mut().enumerate().take(i + 1) {
                *g += w * c;
                #[expect(clippy::cast_precision_loss, reason = "a few")]
                let (i, j) = (i as f64, j as f64);
                c *= -(i - j) / (j + 1.0);
            }
        }
        differences
    }

    #[test]
    fn a_step_has_the_published_coefficients() {
        // Hairer, Nørsett & Wanner, table III.10.1: 1, 0, 1/12, 1/12, 19/240, 3/40, 863/12096, 275/4032.
        let want =
            [1.0, 0.0, 1.0 / 12.0, 1.0 / 12.0, 19.0 / 240.0, 3.0 / 40.0, 863.0 / 12096.0, 275.0 / 4032.0];
        for (j, (got, want)) in by_differences(&STEP).iter().zip(want).enumerate() {
            // The sums cancel terms of several thousand.
            assert!((got - want).abs() < 2e-11, "∇^{j}: got {got}, want {want}");
        }
    }

    #[test]
    fn steps_are_what_quadrature_gives() {
        let (ahead, _) = between(0.0, 1.0);
        let (back, _) = between(0.0, -1.0);
        let (last, speed) = between(-1.0, 0.0);
        for i in 0..KEPT {
            // A few roundings of weights up to several hundred.
            let near = |got: f64, want: f64| {
                assert!((got - want).abs() < 1e-12 * want.abs().max(1.0), "{i}: got {got}, want {want}")
            };
            near(ahead[i] + back[i], STEP[i]);
            near(back[i], SPEED[i]);
            near(speed[i] - last[i], SPEED[i]);
        }
        assert!((STEP.iter().sum::<f64>() - 1.0).abs() < 1e-13);
    }

    #[test]
    fn polynomials_up_to_their_degree_are_integrated_to_rounding() {
        // a = s^11, so x = s^13 / 156 and v = s^12 / 12, from -3.5 to 0.25.
        let power = |s: f64, n: usize| (0..n).fold(1.0, |p, _| p * s);
        let (places, speeds) = between(-3.5, 0.25);
        let (mut x, mut v, mut s) = (0.0, 0.0, 0.0);
        for i in 0..KEPT {
            x += places[i] * power(s, 11);
            v += speeds[i] * power(s, 11);
            s -= 1.0;
        }
        let v0 = power(-3.5, 12) / 12.0;
        let want_x = (power(0.25, 13) - power(-3.5, 13)) / 156.0 - 3.75 * v0;
        let want_v = power(0.25, 12) / 12.0 - v0;
        // The terms are as large as 11^11.
        assert!((x - want_x).abs() < 1e-3, "got {x}, want {want_x}");
        assert!((v - want_v).abs() < 1e-3, "got {v}, want {want_v}");
    }
}
