//! How long a tracer's step may be.

use super::field::{Field, Node};

/// Length of a step in time scales: for a circle, a radian on; 80 to 160 steps go into a circle's period. Measured: at the longest of them five periods of
/// an orbit with eccentricity 0.2 are off by 1e-9 of its size, and at 52 steps a period the method becomes unstable.
const STEP_IN_TIME_SCALES: f64 = 0.07;

/// A step isn't shortened further than this for a periapsis to come: there a tracer is followed by itself.
const LEAST_FOR_PERIAPSIS: f64 = 1.0 / 16.0;

/// Exponents of steps in seconds that are ever of use.
const EXPONENTS: (i32, i32) = (-20, 40);

/// Exponent k of the step 2^k s of a tracer in such a state (position and velocity relative to the origin).
pub(super) fn exponent(field: &Field, node: &Node, speeds: &[[f64; 3]], state: &[f64]) -> i32 {
    let mut least_s = f64::INFINITY;
    for (n, source) in field.sources[..field.massive].iter().enumerate() {
        let (at, moving) = (node.at[n], speeds[n]);
        let r = [state[0] - at[0], state[1] - at[1], state[2] - at[2]];
        let v = [state[3] - moving[0], state[4] - moving[1], state[5] - moving[2]];
        let r1 = (r[0] * r[0] + r[1] * r[1] + r[2] * r[2]).sqrt();
        let v2 = v[0] * v[0] + v[1] * v[1] + v[2] * v[2];
        let rv = r[0] * v[0] + r[1] * v[1] + r[2] * v[2];
        let gm = source.gm;
        let here_s = (r1 * r1 * r1 / gm).sqrt();
        // e² = 1 + 2 E L² / GM², and the angular speed at periapsis is √(GM (1 + e) / q³), where q = L² / GM / (1 + e).
        let l2 = (r1 * r1 * v2 - rv * rv).max(0.0);
        let e2 = 1.0 + (v2 - 2.0 * gm / r1) * l2 / (gm * gm);
        let one_e = 1.0 + e2.max(0.0).sqrt();
        let q = l2 / gm / one_e;
        let there_s = (q * q * q / (gm * one_e)).sqrt();
        // Only a bound orbit is sure to come to its periapsis, or one that is on its way there.
        let bound = v2 * r1 < 2.0 * gm;
        let scale_s = if bound { there_s.max(LEAST_FOR_PERIAPSIS * here_s).min(here_s) } else { here_s };
        least_s = least_s.min(scale_s);
    }
    if least_s.is_finite() { floor_log2(STEP_IN_TIME_SCALES * least_s) } else { EXPONENTS.1 }
        .clamp(EXPONENTS.0, EXPONENTS.1)
}

/// 2^k, for exponents that f64 has.
pub(super) fn seconds(exponent: i32) -> f64 {
    let biased = u64::try_from(exponent.clamp(-1022, 1023) + 1023).unwrap_or_default();
    f64::from_bits(biased << 52)
}

/// The largest k with 2^k not above a number; far below all of use where there is none.
pub(super) fn floor_log2(x: f64) -> i32 {
    if x > 0.0 { i32::try_from(x.to_bits() >> 52).unwrap_or_default() - 1023 } else { -1023 }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn powers_of_two_are_exact_both_ways() {
        for (x, k) in
            [(1.0, 0), (1.99, 0), (2.0, 1), (0.5, -1), (0.74, -1), (3e5, 18), (0.0, -1023), (-1.0, -1023)]
        {
            assert_eq!(floor_log2(x), k, "{x}");
        }
        assert_eq!(seconds(-3).to_bits(), 0.125_f64.to_bits());
        assert_eq!(seconds(40).to_bits(), 1_099_511_627_776.0_f64.to_bits());
    }
}
