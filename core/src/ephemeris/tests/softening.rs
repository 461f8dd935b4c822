//! Points that attract less and less when they come close.

use super::*;
use crate::integrate::drift;
use crate::math::float::{cos, sin};
use std::f64::consts::FRAC_PI_2;

fn softened(bodies: Vec<InitialBody>, softening_m: f64) -> InitialState {
    InitialState { forces: Forces { softening_m, ..Forces::default() }, ..initial(bodies) }
}

/// The time of a fall from rest at a distance through the centre of GM 1 and back.
///
/// Energy gives the speed, and with x = x0 sin θ the time is 4 ∫ √(s s0 (s + s0) / 2) dθ from 0 to π/2, s = √(x² + ε²). The integrand
/// is smooth and periodic, so the midpoint rule is exact to rounding.
fn there_and_back_s(from_m: f64, softening_m: f64) -> f64 {
    const PARTS: u32 = 4000;
    let away = |x: f64| (x * x + softening_m * softening_m).sqrt();
    let s0 = away(from_m);
    let width = FRAC_PI_2 / f64::from(PARTS);
    let sum: f64 = (0..PARTS)
        .map(|part| {
            let s = away(from_m * sin((f64::from(part) + 0.5) * width));
            (0.5 * s * s0 * (s + s0)).sqrt()
        })
        .sum();
    4.0 * width * sum
}

#[test]
fn a_fall_goes_through_a_softened_centre_and_comes_back_when_the_integral_says() {
    for softening_m in [1e-3, 0.1, 3.0] {
        let start =
            softened(vec![body(1.0, [0.0; 3], [0.0; 3]), body(0.0, [1.0, 0.0, 0.0], [0.0; 3])], softening_m);
        let period_s = there_and_back_s(1.0, softening_m);
        let eph = paths(&start, 3.0 * period_s);
        for (rounds, want) in [(0.25, 0.0), (0.5, -1.0), (0.75, 0.0), (1.0, 1.0), (3.0, 1.0)] {
            let x = at(&eph, 1, rounds * period_s).pos.x;
            // At the centre it is fastest, √(2 / ε), and is off by as much more for the same error of time.
            let tol = if want == 0.0 { 1e-12 * (2.0 / softening_m).sqrt() } else { 1e-12 };
            near(&format!("softened over {softening_m}, after {rounds} rounds"), x, want, tol);
        }
    }
}

#[test]
fn nearby_a_softened_centre_a_swing_takes_as_long_as_that_of_a_spring() {
    // GM x / ε³ for x far below ε: the period is 2π √(ε³ / GM), longer by 9/16 (x / ε)² of it.
    let (softening_m, from_m) = (2.0_f64, 1e-3_f64);
    let spring_s = std::f64::consts::TAU * (softening_m * softening_m * softening_m).sqrt();
    let want = spring_s * (1.0 + 9.0 / 16.0 * (from_m / softening_m) * (from_m / softening_m));
    near("the integral", there_and_back_s(from_m, softening_m) / want, 1.0, 1e-12);
    let start =
        softened(vec![body(1.0, [0.0; 3], [0.0; 3]), body(0.0, [0.0, from_m, 0.0], [0.0; 3])], softening_m);
    let eph = paths(&start, spring_s);
    for part in [0.1, 0.4, 0.9] {
        let turned = part * std::f64::consts::TAU * spring_s / want;
        // The next harmonic has a few parts of (x / ε)².
        near("place", at(&eph, 1, part * spring_s).pos.y / from_m, cos(turned), 1e-6);
    }
}

#[test]
fn what_falls_into_each_other_as_points_passes_softened_and_keeps_energy_and_momentum() {
    // Four at rest: as points, the pairs would collapse.
    let bodies = || {
        vec![
            body(3.0, [1.0, 0.0, 0.0], [0.0; 3]),
            body(3.0, [-1.0, 0.0, 0.0], [0.0; 3]),
            body(0.5, [0.0, 4.0, 0.0], [0.0; 3]),
            body(0.5, [0.0, -4.0, 0.0], [0.0; 3]),
        ]
    };
    let mut points = Propagation::new(&initial(bodies()));
    assert!(points.advance(30.0, 100_000).is_err());
    let start = softened(bodies(), 0.05);
    let eph = paths(&start, 30.0);
    let gms: Vec<f64> = start.bodies.iter().map(|b| b.gm_m3_s2).collect();
    let energy = |t_s: f64| {
        let states: Vec<State> = (0..4).map(|body| at(&eph, body, t_s)).collect();
        let flat = |pick: fn(&State) -> Vector3<f64>| -> Vec<f64> {
            states.iter().flat_map(|s| <[f64; 3]>::from(pick(s))).collect()
        };
        let momentum: Vector3<f64> = states.iter().zip(&gms).map(|(s, gm)| s.vel * *gm).sum();
        near("momentum", momentum.norm(), 0.0, 1e-12);
        drift::softened_energy(&gms, 0.05, &flat(|s| s.pos), &flat(|s| s.vel))
    };
    let before = energy(0.0);
    for t_s in [1.0, 7.7, 30.0] {
        // Some thousand steps, at speeds whose squares are forty times the energy at the start.
        near("energy", energy(t_s) / before, 1.0, 1e-13);
    }
}
