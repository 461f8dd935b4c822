//! How long a tracer's step may be.

use super::field::{Field, Node};

/// Length of a step in time scales: for a circle, a radian on; 80 to 160 steps go into a circle's period. Measured: at the longest of them five periods of
/// an orbit with eccentricity 0.2 are off by 1e-9 of its size, and at 52 steps a period the method becomes unstable.
const STEP_IN_TIME_SCALES: f64 = 0.07;

/// A step isn't shortened further than this for a periapsis to come: there a tracer is followed by itself.
const LEAST_FOR_PERIAPSIS: f64 = 1.0 / 16.0;

/// Exponents of steps in seconds that are ever of use.
const EXPONENTS: (i32, i32) = (-20, LONGEST);
pub(super) const LONGEST: i32 = 40;

/// Part of a tracer's acceleration that may be missed in a step for want of following how the bodies move; it comes and goes with their periods. Ten
/// years of a belt are then off by less than 1e-9 of its size. The error of the method for an acceleration that changes as a wave is
/// [`OF_ORDER`] times the phase of a step, to its order.
const MISSED: f64 = 1e-7;
const OF_ORDER: f64 = 0.07;

/// How a massive source moves about the one that it circles.
#[derive(Debug, Clone, Copy)]
pub(super) struct Motion {
    /// Its distance from that, squared; 0 for one that circles none.
    from2: f64,
    /// How its pull from afar swings, radians a second: twice its angular speed at periapsis, for what is left of its pull and its partner's
    /// reaction is that of their ellipse.
    rate: f64,
}

/// How the massive sources move.
pub(super) fn motions(field: &Field, node: &Node) -> Vec<Motion> {
    let massive = &field.sources[..field.massive];
    massive
        .iter()
        .enumerate()
        .map(|(n, source)| {
            let hosts = massive.iter().enumerate().filter(|(_, host)| host.gm > source.gm);
            let nearest = hosts
                .map(|(host, _)| (host, relative(node, host, node.at[n], node.moving[n])))
                .max_by(|(a, at_a), (b, at_b)| {
                    let bends = |host: usize, r: [f64; 3]| massive[host].gm / cube(dot(r, r).sqrt());
                    bends(*a, at_a.0).total_cmp(&bends(*b, at_b.0))
                });
            nearest.map_or(Motion { from2: 0.0, rate: 0.0 }, |(host, (r, v))| Motion {
                from2: dot(r, r),
                rate: 2.0 / shortest_s(massive[host].gm + source.gm, r, v),
            })
        })
        .collect()
}

/// Exponent k of the step 2^k s of a tracer in such a state (position and velocity relative to the origin).
pub(super) fn exponent(field: &Field, motions: &[Motion], node: &Node, state: &[f64]) -> i32 {
    let (mut least_s, mut felt_m_s2) = (f64::INFINITY, 0.0_f64);
    let (pos, vel) = ([state[0], state[1], state[2]], [state[3], state[4], state[5]]);
    for (n, source) in field.sources[..field.massive].iter().enumerate() {
        let (r, v) = relative(node, n, pos, vel);
        let r2 = dot(r, r);
        felt_m_s2 = felt_m_s2.max(source.gm / (r2 + field.softened2_m2));
        let here_s = (cube(r2.sqrt()) / source.gm).sqrt();
        // Only a bound orbit is sure to come to its periapsis.
        let bound = dot(v, v) * r2.sqrt() < 2.0 * source.gm;
        let scale_s =
            if bound { shortest_s(source.gm, r, v).max(LEAST_FOR_PERIAPSIS * here_s) } else { here_s };
        least_s = least_s.min(scale_s.max(field.softest_s(n)));
    }
    if !least_s.is_finite() {
        return EXPONENTS.1;
    }
    let mut exponent = floor_log2(STEP_IN_TIME_SCALES * least_s).clamp(EXPONENTS.0, EXPONENTS.1);
    for ((source, motion), at) in field.sources.iter().zip(motions).zip(&node.at) {
        let r = [pos[0] - at[0], pos[1] - at[1], pos[2] - at[2]];
        let r2 = dot(r, r);
        let swings_m_s2 = OF_ORDER * source.gm / r2 * (3.0 * motion.from2 / r2).min(1.0);
        while exponent > EXPONENTS.0
            && swings_m_s2 * to_the_12th(motion.rate * seconds(exponent)) > MISSED * felt_m_s2
        {
            exponent -= 1;
        }
    }
    exponent
}

/// Time scale of an orbit at its shortest, s: at periapsis, if that lies within where it is now.
fn shortest_s(gm: f64, r: [f64; 3], v: [f64; 3]) -> f64 {
    let (r2, v2, rv) = (dot(r, r), dot(v, v), dot(r, v));
    let r1 = r2.sqrt();
    // e² = 1 + 2 E L² / GM², and the angular speed at periapsis is √(GM (1 + e) / q³), where q = L² / GM / (1 + e).
    let l2 = (r2 * v2 - rv * rv).max(0.0);
    let e2 = 1.0 + (v2 - 2.0 * gm / r1) * l2 / (gm * gm);
    let one_e = 1.0 + e2.max(0.0).sqrt();
    let there_s = (cube(l2 / gm / one_e) / (gm * one_e)).sqrt();
    there_s.min((cube(r1) / gm).sqrt())
}

/// A place and a velocity as seen from a source.
fn relative(node: &Node, source: usize, pos: [f64; 3], vel: [f64; 3]) -> ([f64; 3], [f64; 3]) {
    let (at, moving) = (node.at[source], node.moving[source]);
    ([0, 1, 2].map(|axis| pos[axis] - at[axis]), [0, 1, 2].map(|axis| vel[axis] - moving[axis]))
}

fn dot(a: [f64; 3], b: [f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

fn cube(x: f64) -> f64 {
    x * x * x
}

fn to_the_12th(x: f64) -> f64 {
    let fourth = x * x * x * x;
    fourth * fourth * fourth
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
