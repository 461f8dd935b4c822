//! Orbits whose way is known, and what no integration may change.

use super::*;
use crate::ephemeris::states_at;
use crate::integrate::drift;
use crate::math::float::{atan2, cos};
use crate::solar_system::{PLANETS, solar_system};
use proptest::prelude::*;
use std::f64::consts::TAU;

const DAY_S: f64 = 86_400.0;

/// Roundings of a position that one step leaves, with room for their random sum over some hundred steps.
const ROUNDINGS: f64 = 50.0 * f64::EPSILON;

/// A tracer at the periapsis of an orbit of semi-major axis 1 around GM 1.
fn ellipse(eccentricity: f64) -> InitialState {
    let speed = ((1.0 + eccentricity) / (1.0 - eccentricity)).sqrt();
    initial(vec![body(1.0, [0.0; 3], [0.0; 3]), body(0.0, [1.0 - eccentricity, 0.0, 0.0], [0.0, speed, 0.0])])
}

#[test]
fn ellipses_return_after_one_period_to_round_off() {
    for eccentricity in [0.0, 0.1, 0.3, 0.5, 0.7, 0.8, 0.9, 0.95, 0.98, 0.99] {
        let start = ellipse(eccentricity);
        for turns in [1.0, -1.0, 5.0] {
            let end = states_at(&start, turns * TAU).unwrap()[1];
            let speed = start.bodies[1].vel.norm();
            // A rounding of the energy (near periapsis GM / q times larger than the orbit's own) shifts the time of return.
            let late = ROUNDINGS * TAU * 5.0 / (1.0 - eccentricity);
            near(
                &format!("e = {eccentricity}, {turns} turns"),
                (end.pos - start.bodies[1].pos).norm(),
                0.0,
                speed * late,
            );
        }
    }
}

#[test]
fn a_circle_is_at_its_angle_between_steps_too() {
    let eph = paths(&ellipse(0.0), 20.0);
    for k in 0..2000 {
        let t = f64::from(k) * 0.01;
        let State { pos, vel } = at(&eph, 1, t);
        near("x", pos.x, cos(t), ROUNDINGS * (1.0 + t));
        near("vy", vel.y, cos(t), ROUNDINGS * (1.0 + t));
    }
}

/// # Source
/// A. Chenciner & R. Montgomery, Annals of Mathematics 152 (2000), 881: initial values found by C. Simó, to eight decimals.
#[test]
fn the_figure_of_eight_closes_on_itself() {
    let (x, y, vx, vy) = (0.970_004_36, -0.243_087_53, -0.932_407_37, -0.864_731_46);
    let start = initial(vec![
        body(1.0, [x, y, 0.0], [-0.5 * vx, -0.5 * vy, 0.0]),
        body(1.0, [-x, -y, 0.0], [-0.5 * vx, -0.5 * vy, 0.0]),
        body(1.0, [0.0; 3], [vx, vy, 0.0]),
    ]);
    // Half a unit of the eighth decimal, in all six numbers and the period, grown over one round.
    const DECIMALS: f64 = 2e-7;
    let period = 6.325_913_98;
    let end = states_at(&start, period).unwrap();
    for (body, state) in start.bodies.iter().zip(&end) {
        near(&body.name, (state.pos - body.pos).norm(), 0.0, DECIMALS);
    }
    // A third of a period on, each is where another was.
    let third = states_at(&start, period / 3.0).unwrap();
    for state in &third {
        let nearest = start.bodies.iter().map(|b| (b.pos - state.pos).norm()).fold(f64::INFINITY, f64::min);
        near("a third on", nearest, 0.0, DECIMALS);
    }
}

#[test]
fn a_tracer_swings_through_equal_pulls_without_losing_its_step() {
    // Two masses circle each other, a tracer swings through the middle, where all that pulls on it cancels (the problem of Sitnikov);
    // another rests there.
    let start = initial(vec![
        body(0.5, [0.5, 0.0, 0.0], [0.0, 0.5, 0.0]),
        body(0.5, [-0.5, 0.0, 0.0], [0.0, -0.5, 0.0]),
        body(0.0, [0.0, 0.0, 0.3], [0.0; 3]),
        body(0.0, [0.0; 3], [0.0; 3]),
    ]);
    let mut propagation = Propagation::new(&start);
    assert!(propagation.advance(100.0, 6000).unwrap(), "more than 6000 steps for 16 turns");
    let eph = propagation.ephemeris();
    let energy = |t: f64| {
        let state = at(eph, 2, t);
        0.5 * state.vel.norm_squared() - 1.0 / (0.25 + state.pos.norm_squared()).sqrt()
    };
    near("energy", energy(100.0), energy(0.0), 1e-13);
}

#[test]
fn the_planets_keep_their_energy_to_round_off_for_a_thousand_years() {
    let start = solar_system(&PLANETS);
    let gms: Vec<f64> = start.bodies.iter().map(|b| b.gm_m3_s2).collect();
    let energy = |states: &[State]| {
        let flat = |pick: fn(&State) -> Vector3<f64>| -> Vec<f64> {
            states.iter().flat_map(|s| <[f64; 3]>::from(pick(s))).collect()
        };
        drift::energy(&gms, &flat(|s| s.pos), &flat(|s| s.vel))
    };
    let before = energy(&start.bodies.iter().map(|b| State { pos: b.pos, vel: b.vel }).collect::<Vec<_>>());
    let after = energy(&states_at(&start, 365_250.0 * DAY_S).unwrap());
    // Brouwer's law: 192,000 steps, each with a rounding of some 1e-17 of the energy: √192,000 · 1e-17 = 4e-15.
    near("relative energy", after / before, 1.0, 4e-15);
}

/// # Source
/// W. M. Kaula, Theory of Satellite Geodesy (1966), eq. 3.74: dΩ/dt = -3/2 n J2 (R / p)² cos i, to first order in J2.
#[test]
fn oblateness_turns_the_node_of_an_orbit_backwards() {
    let (j2, i_cos, r) = (1e-5, 0.5_f64, 3.0_f64);
    let i_sin = (1.0 - i_cos * i_cos).sqrt();
    let speed = r.sqrt().recip();
    let mut start = initial(vec![
        body(1.0, [0.0; 3], [0.0; 3]),
        body(0.0, [r, 0.0, 0.0], [0.0, speed * i_cos, speed * i_sin]),
    ]);
    start.forces.oblate.push(crate::initial::Oblate {
        body: BodyId(0),
        j2,
        radius_m: 1.0,
        pole: Vector3::z(),
    });
    let period = TAU * r * r.sqrt();
    let end = states_at(&start, 100.0 * period).unwrap()[1];
    let normal = end.pos.cross(&end.vel);
    let node = atan2(normal.x, -normal.y);
    let want = -1.5 * TAU * 100.0 * j2 / (r * r) * i_cos;
    // Short-period swings are of the order of one turn's change over 2π, those of second order J2² times 600.
    near("node", node, want, 2.0 * j2 / (r * r));
}

#[test]
fn what_nothing_pulls_on_goes_straight_and_no_bodies_are_no_trouble() {
    let start = initial(vec![body(0.0, [1.0, 2.0, 3.0], [4.0, 0.0, -1.0]), body(0.0, [0.0; 3], [0.0; 3])]);
    let eph = paths(&start, 1e15);
    assert!(eph.forward().len() < 2000, "{} steps", eph.forward().len());
    near("x", at(&eph, 0, 1e9).pos.x, 4e9 + 1.0, 1e-5);
    assert_eq!(at(&eph, 1, 1e15).pos, Vector3::zeros());
    let nobody = paths(&initial(Vec::new()), -5.0);
    assert_eq!((nobody.bodies(), nobody.state(BodyId(0), -1.0)), (0, None));
}

#[test]
fn the_same_bits_come_of_any_sequence_of_calls() {
    let start = solar_system(&[]);
    let mut whole = Propagation::new(&start);
    assert!(whole.advance(400.0 * DAY_S, usize::MAX).unwrap());
    assert!(whole.advance(-50.0 * DAY_S, usize::MAX).unwrap());
    let mut parts = Propagation::new(&start);
    for t in (0..400).step_by(7) {
        parts.advance(f64::from(-t) / 8.0 * DAY_S, 1).unwrap();
        while !parts.advance(f64::from(t) * DAY_S, 2).unwrap() {}
    }
    while !parts.advance(400.0 * DAY_S, 3).unwrap() {}
    while !parts.advance(-50.0 * DAY_S, 1).unwrap() {}
    assert_eq!(whole.ephemeris(), parts.ephemeris());
}

prop_compose! {
    /// A heavy body and some light ones and tracers on orbits around it, none near another at first.
    fn system()(phases in prop::collection::vec((0.0..TAU, 0.6..1.3_f64, -0.2..0.2_f64, prop_oneof![Just(0.0), 1e-6..1e-3_f64]), 1..6)) -> InitialState {
        let mut bodies = vec![body(1.0, [0.0; 3], [0.0; 3])];
        let mut r = 1.0;
        for (phase, part, tilt, gm) in phases {
            let (s, c) = crate::math::float::sin_cos(phase);
            let v = part / f64::sqrt(r);
            bodies.push(body(gm, [r * c, r * s, 0.0], [-v * s, v * c, v * tilt]));
            r *= 1.9;
        }
        initial(bodies)
    }
}

/// Growth of roundings over the time of the random systems, which have close passes: a bound that a wrong term, a lost step or a wrong
/// sign exceeds by many powers of ten.
const AFTER_CLOSE_PASSES: f64 = 1e-9;

fn restart(start: &InitialState, states: &[State]) -> InitialState {
    let mut next = start.clone();
    for (body, state) in next.bodies.iter_mut().zip(states) {
        (body.pos, body.vel) = (state.pos, state.vel);
    }
    next
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]

    #[test]
    fn there_and_back_again(start in system(), t in 0.5..30.0_f64) {
        let there = states_at(&start, t).unwrap();
        let back = states_at(&restart(&start, &there), -t).unwrap();
        for (state, body) in back.iter().zip(&start.bodies) {
            prop_assert!((state.pos - body.pos).norm() < AFTER_CLOSE_PASSES, "{}: {}", body.name, (state.pos - body.pos).norm());
            prop_assert!((state.vel - body.vel).norm() < AFTER_CLOSE_PASSES);
        }
    }

    #[test]
    fn back_in_time_is_forward_with_the_velocities_turned_round(start in system(), t in 0.5..30.0_f64) {
        let back = states_at(&start, -t).unwrap();
        let turned: Vec<State> = start.bodies.iter().map(|b| State { pos: b.pos, vel: -b.vel }).collect();
        let forward = states_at(&restart(&start, &turned), t).unwrap();
        for (a, b) in back.iter().zip(&forward) {
            // The same operations with other signs: the same bits.
            prop_assert_eq!(a.pos, b.pos);
            prop_assert_eq!(a.vel, -b.vel);
        }
    }

    #[test]
    fn the_order_of_the_bodies_does_not_matter(start in system(), t in 0.5..20.0_f64) {
        let mut other = start.clone();
        other.bodies.reverse();
        let mut turned = states_at(&other, t).unwrap();
        turned.reverse();
        for (a, b) in states_at(&start, t).unwrap().iter().zip(&turned) {
            prop_assert!((a.pos - b.pos).norm() < AFTER_CLOSE_PASSES);
        }
    }

    #[test]
    fn a_common_motion_changes_nothing_else(start in system(), t in 0.5..20.0_f64, drift in prop::array::uniform3(-3.0..3.0_f64)) {
        let drift = Vector3::from(drift);
        let moving: Vec<State> = start.bodies.iter().map(|b| State { pos: b.pos + drift, vel: b.vel + drift }).collect();
        let moved = states_at(&restart(&start, &moving), t).unwrap();
        for (a, b) in states_at(&start, t).unwrap().iter().zip(&moved) {
            prop_assert!((a.pos + drift * (1.0 + t) - b.pos).norm() < AFTER_CLOSE_PASSES);
        }
    }

    #[test]
    fn momentum_and_angular_momentum_stay(start in system(), t in 0.5..20.0_f64) {
        let gms: Vec<f64> = start.bodies.iter().map(|b| b.gm_m3_s2).collect();
        let end = states_at(&start, t).unwrap();
        let momentum = |vels: &mut dyn Iterator<Item = Vector3<f64>>| vels.zip(&gms).map(|(v, gm)| v * *gm).sum::<Vector3<f64>>();
        let change = momentum(&mut end.iter().map(|s| s.vel)) - momentum(&mut start.bodies.iter().map(|b| b.vel));
        prop_assert!(change.norm() < 1e-15, "{}", change.norm());
        let spin = |pos: Vec<f64>, vel: Vec<f64>| Vector3::from(drift::angular_momentum(&gms, &pos, &vel));
        let flat = |vectors: &mut dyn Iterator<Item = Vector3<f64>>| vectors.flat_map(<[f64; 3]>::from).collect::<Vec<f64>>();
        let before = spin(flat(&mut start.bodies.iter().map(|b| b.pos)), flat(&mut start.bodies.iter().map(|b| b.vel)));
        let after = spin(flat(&mut end.iter().map(|s| s.pos)), flat(&mut end.iter().map(|s| s.vel)));
        prop_assert!((after - before).norm() < 1e-14);
    }
}
