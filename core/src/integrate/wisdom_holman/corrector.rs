//! The corrector: between the true state and the one that steps carry.
//!
//! To first order in the masses a step of drift, kick, drift follows exactly an energy that differs from the true one, by what is
//! periodic with the step. A canonical change of variables takes that away: made of kicks back and forth along the conics,
//! `X(a, b) = drift a, kick b, drift -a` and `X(-a, -b)`, with lengths in steps. Together they have the generator
//! `2 Σ b sinh(a θ) B`, θ being h times the derivative along the conic, and it has to be
//! `(x / sinh x - 1) / θ` with x = θ / 2: θ, θ³, θ⁵, θ⁷ and θ⁹ are met here, which is order 11. The product is taken there and back with half of
//! the kicks each, so that its own error of second order in the masses vanishes with them.
//!
//! # Source
//! J. Wisdom, M. Holman & J. Touma, Fields Inst. Commun. 10 (1996), 217 (the idea and the products); J. Wisdom, AJ 131 (2006), 2294 (high
//! orders). The coefficients belong to the spacing of two fifths of a step chosen here, and were solved for as fractions; the test
//! below checks the conditions.

/// Spacing of the kicks, in steps. Wider: fewer digits lost in the sum, but what is left out grows as its tenth power.
pub(super) const SPACING: f64 = 0.4;

/// Half of the kicks at 1 to 5 spacings, in steps.
pub(super) const HALVES: [f64; 5] = [
    0.5 * (-135_134_534_785.0 / 837_115_969_536.0),
    0.5 * (3_086_043_865.0 / 34_879_832_064.0),
    0.5 * (-5_444_828_695.0 / 186_025_771_008.0),
    0.5 * (3_560_366_555.0 / 627_836_977_152.0),
    0.5 * (-2_494_554_071.0 / 5_022_695_817_216.0),
];

/// Calls `each` with the place and the length of every kick of the corrector, in steps, in its order.
///
/// `sign` is 1 from the true state to that of the steps, -1 back. The order is the same both ways read backwards, so the second
/// undoes the first.
pub(super) fn kicks<E>(sign: f64, mut each: impl FnMut(f64, f64) -> Result<(), E>) -> Result<(), E> {
    let places = [1.0, 2.0, 3.0, 4.0, 5.0].map(|i| SPACING * i);
    for (place, half) in places.iter().zip(HALVES) {
        each(*place, sign * half)?;
        each(-place, -sign * half)?;
    }
    for (place, half) in places.iter().zip(HALVES).rev() {
        each(-place, -sign * half)?;
        each(*place, sign * half)?;
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    /// # Source
    /// x / sinh x = 1 - x²/6 + 7x⁴/360 - 31x⁶/15120 + 127x⁸/604800 - 73x¹⁰/3421440 (Abramowitz & Stegun 1964, 4.5.65, from memory; the first
    /// terms follow by division of the series).
    #[test]
    fn the_sum_of_the_kicks_is_what_a_step_leaves() {
        let wanted = [-1.0 / 6.0, 7.0 / 360.0, -31.0 / 15_120.0, 127.0 / 604_800.0, -73.0 / 3_421_440.0];
        let mut power_of_half = 0.25;
        for (k, wanted) in (1_u8..).zip(wanted) {
            let (mut sum, mut factorial) = (0.0, 1.0);
            for i in 2..=(2 * k - 1) {
                factorial *= f64::from(i);
            }
            kicks::<()>(1.0, |place, length| {
                let mut power = length;
                for _ in 0..(2 * k - 1) {
                    power *= place;
                }
                sum += power;
                Ok(())
            })
            .unwrap();
            let (got, want) = (sum / factorial, wanted * power_of_half);
            // Alternating sums of terms up to some hundred times larger.
            assert!((got / want - 1.0).abs() < 1e-11, "power {}: got {got}, want {want}", 2 * k - 1);
            power_of_half *= 0.25;
        }
    }

    #[test]
    fn back_is_the_same_kicks_from_the_end_with_the_other_sign() {
        let list = |sign| {
            let mut list = Vec::new();
            kicks::<()>(sign, |place, length| {
                list.push((place, length));
                Ok(())
            })
            .unwrap();
            list
        };
        let (there, mut back) = (list(1.0), list(-1.0));
        back.reverse();
        assert_eq!(there.len(), 20);
        for (a, b) in there.iter().zip(back) {
            assert_eq!((a.0.to_bits(), a.1.to_bits()), (b.0.to_bits(), (-b.1).to_bits()), "{a:?} {b:?}");
        }
    }
}
