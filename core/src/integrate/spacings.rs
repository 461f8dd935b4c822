//! The numbers of the Gauss-Radau method, all derived from its eight spacings when the crate is compiled.
//!
//! Within a step, with h from 0 to 1, the acceleration is a polynomial in two forms:
//! a0 + g0 h + g1 h (h - h1) + g2 h (h - h1)(h - h2) + … (found from values at the spacings, one after the other) and
//! a0 + b0 h + b1 h² + … + b6 h⁷ (integrated and evaluated).
//!
//! # Source
//! E. Everhart, "An efficient integrator that uses Gauss-Radau spacings", in A. Carusi & G. B. Valsecchi (eds.),
//! Dynamics of Comets: Their Origin and Evolution (1985), 185; the notation is that of H. Rein & D. S. Spiegel,
//! MNRAS 446 (2015), 1424, section 2.

/// The spacings: 0 and the zeros of (P7(x) + P8(x)) / (1 + x), x = 2h - 1, P being Legendre's polynomials.
pub(crate) const SPACINGS: [f64; 8] = [
    0.0,
    0.056_262_560_536_922_146_465_65,
    0.180_240_691_736_892_364_987_58,
    0.352_624_717_113_169_637_373_91,
    0.547_153_626_330_555_383_001_45,
    0.734_210_177_215_410_531_523_21,
    0.885_320_946_839_095_768_090_36,
    0.977_520_613_561_287_501_891_17,
];

/// `INVERSE[n][j]`: 1 / (h_n - h_j) for j < n.
pub(crate) const INVERSE: [[f64; 8]; 8] = {
    let mut inverse = [[0.0; 8]; 8];
    let mut n = 1;
    while n < 8 {
        let mut j = 0;
        while j < n {
            inverse[n][j] = 1.0 / (SPACINGS[n] - SPACINGS[j]);
            j += 1;
        }
        n += 1;
    }
    inverse
};

/// b from g: b_k = Σ over j ≥ k of `B_FROM_G[j][k]` g_j; the powers of h in h (h - h1) … (h - h_j).
pub(crate) const B_FROM_G: [[f64; 7]; 7] = {
    let mut c = [[0.0; 7]; 7];
    c[0][0] = 1.0;
    let mut j = 1;
    while j < 7 {
        let mut k = 0;
        while k <= j {
            let lower = if k > 0 { c[j - 1][k - 1] } else { 0.0 };
            let same = if k < j { c[j - 1][k] } else { 0.0 };
            c[j][k] = lower - SPACINGS[j] * same;
            k += 1;
        }
        j += 1;
    }
    c
};

/// g from b: g_k = Σ over j ≥ k of `G_FROM_B[j][k]` b_j.
pub(crate) const G_FROM_B: [[f64; 7]; 7] = {
    let mut d = [[0.0; 7]; 7];
    d[0][0] = 1.0;
    let mut j = 1;
    while j < 7 {
        let mut k = 0;
        while k <= j {
            let lower = if k > 0 { d[j - 1][k - 1] } else { 0.0 };
            let same = if k < j { d[j - 1][k] } else { 0.0 };
            d[j][k] = lower + SPACINGS[k + 1] * same;
            k += 1;
        }
        j += 1;
    }
    d
};

/// Weights of a0, b0, … b6 in the change of velocity over the first h of a step, in units of the step:
/// h, h²/2, h³/3, …
pub(crate) const fn velocity_weights(h: f64) -> [f64; 8] {
    let mut weights = [0.0; 8];
    let mut power = h;
    let mut k = 0;
    let mut divisor = 1.0;
    while k < 8 {
        weights[k] = power / divisor;
        power *= h;
        divisor += 1.0;
        k += 1;
    }
    weights
}

/// Weights of a0, b0, … b6 in the change of position over the first h of a step beyond h v0, in units of the step
/// squared: h²/2, h³/6, h⁴/12, …
pub(crate) const fn position_weights(h: f64) -> [f64; 8] {
    let mut weights = [0.0; 8];
    let mut power = h * h;
    let mut k = 0;
    let mut divisor = 1.0;
    while k < 8 {
        weights[k] = power / (divisor * (divisor + 1.0));
        power *= h;
        divisor += 1.0;
        k += 1;
    }
    weights
}

/// [`velocity_weights`] at each spacing.
pub(crate) const VELOCITY: [[f64; 8]; 8] = {
    let mut table = [[0.0; 8]; 8];
    let mut n = 0;
    while n < 8 {
        table[n] = velocity_weights(SPACINGS[n]);
        n += 1;
    }
    table
};

/// [`position_weights`] at each spacing.
pub(crate) const POSITION: [[f64; 8]; 8] = {
    let mut table = [[0.0; 8]; 8];
    let mut n = 0;
    while n < 8 {
        table[n] = position_weights(SPACINGS[n]);
        n += 1;
    }
    table
};

/// Weights of a0, g0, … g6 in the change of position over the first h of a step beyond h v0, at each spacing, in units of the
/// step squared: the double integrals of 1, h, h (h - h1), …
pub(crate) const POSITION_FROM_G: [[f64; 8]; 8] = from_g(&POSITION);

/// As [`POSITION_FROM_G`], in the change of velocity, in units of the step.
pub(super) const VELOCITY_FROM_G: [[f64; 8]; 8] = from_g(&VELOCITY);

/// Weights of a0 and g from those of a0 and b.
const fn from_g(from_b: &[[f64; 8]; 8]) -> [[f64; 8]; 8] {
    let mut table = [[0.0; 8]; 8];
    let mut n = 0;
    while n < 8 {
        table[n][0] = from_b[n][0];
        let mut j = 0;
        while j < 7 {
            let mut k = 0;
            while k <= j {
                table[n][j + 1] += B_FROM_G[j][k] * from_b[n][k + 1];
                k += 1;
            }
            j += 1;
        }
        n += 1;
    }
    table
}

/// Binomial coefficients: `BINOMIAL[j][k]` = C(j + 1, k + 1), which move the polynomial of a step on to the next.
pub(crate) const BINOMIAL: [[f64; 7]; 7] = {
    let mut c = [[0.0; 7]; 7];
    let mut j = 0;
    while j < 7 {
        c[j][j] = 1.0;
        let mut k = 0;
        while k < j {
            // C(j+1, k+1) = C(j, k+1) + C(j, k), where C(j, 0) = 1.
            let left = if k > 0 { c[j - 1][k - 1] } else { 1.0 };
            c[j][k] = c[j - 1][k] + left;
            k += 1;
        }
        j += 1;
    }
    c
};

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_spacings_are_the_zeros_of_legendres_p7_plus_p8() {
        for h in SPACINGS {
            let x = 2.0 * h - 1.0;
            let (mut p, mut q) = (1.0, x);
            for n in 1..8 {
                let n = f64::from(n);
                (p, q) = (q, ((2.0 * n + 1.0) * x * q - n * p) / (n + 1.0));
            }
            assert!((p + q).abs() < 1e-14, "at {h}: {}", p + q);
        }
    }

    #[test]
    fn the_two_forms_of_the_polynomial_are_inverse_to_each_other() {
        for start in 0..7 {
            let mut b = [0.0; 7];
            for k in 0..7 {
                for j in k.max(start)..7 {
                    // g = the row of `start` of G_FROM_B; only g_j with j ≤ start is not 0.
                    let g = if j <= start { G_FROM_B[start][j] } else { 0.0 };
                    b[k] += B_FROM_G[j][k] * g;
                }
                for j in k..start {
                    b[k] += B_FROM_G[j][k] * G_FROM_B[start][j];
                }
                let want = if k == start { 1.0 } else { 0.0 };
                assert!((b[k] - want).abs() < 1e-15, "b{k} of b{start}: {}", b[k]);
            }
        }
    }

    #[test]
    fn weights_of_g_are_integrals_of_its_polynomials() {
        // Gauss's rule with four points is exact to degree 7, that of h … (h - h6).
        let points = [
            (-0.861_136_311_594_052_6, 0.347_854_845_137_453_85),
            (-0.339_981_043_584_856_26, 0.652_145_154_862_546_1),
            (0.339_981_043_584_856_26, 0.652_145_154_862_546_1),
            (0.861_136_311_594_052_6, 0.347_854_845_137_453_85),
        ];
        for n in 1..8 {
            for j in 0..7 {
                let (end, mut integral) = (SPACINGS[n], 0.0);
                for (x, weight) in points {
                    let h = 0.5 * end * (x + 1.0);
                    let product: f64 = SPACINGS[..=j].iter().map(|s| h - s).product();
                    integral += 0.5 * end * weight * product;
                }
                let got = VELOCITY_FROM_G[n][j + 1];
                assert!((got - integral).abs() < 1e-15, "g{j} at {end}: {got} and {integral}");
            }
        }
    }

    #[test]
    fn binomials_are_pascals() {
        assert_eq!(BINOMIAL[6].map(f64::to_bits), [7.0, 21.0, 35.0, 35.0, 21.0, 7.0, 1.0].map(f64::to_bits));
        assert_eq!(
            (BINOMIAL[1][0].to_bits(), BINOMIAL[1][1].to_bits()),
            (2.0_f64.to_bits(), 1.0_f64.to_bits())
        );
    }
}
