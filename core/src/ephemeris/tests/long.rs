//! Paths of long steps, kept in knots, against the exact ones.

use super::*;
use crate::conic::{Elements, state_from_elements};
use crate::constants::{AU_M, GM_SUN_M3_S2 as SUN, YEAR_S};
use crate::ephemeris::events::{self, Query};
use crate::ephemeris::{Stopped, Why, states_at};
use crate::math::float::sin;
use crate::scenario::EventKind;
use crate::solar_system::{PLANETS, solar_system};
use crate::sweep::area_m2;

/// As [`paths`], within a bound of the memory; that is never exceeded.
fn within(start: &InitialState, most_bytes: usize, until_s: f64) -> Ephemeris {
    let mut propagation = Propagation::with_most_bytes(start, most_bytes);
    while !propagation.advance(until_s, 100).unwrap() {
        assert!(propagation.ephemeris().bytes() <= most_bytes);
    }
    propagation.into_ephemeris()
}

/// The largest distance between the places of bodies on both, as a part of their distance from the first.
fn worst(a: &Ephemeris, b: &Ephemeris, bodies: std::ops::Range<usize>, from_s: f64, until_s: f64) -> f64 {
    let instants =
        (0..500).map(|k| from_s + (until_s - from_s) * (0.5 + 0.499 * sin(12_345.678 * f64::from(k))));
    let mut worst = 0.0_f64;
    for t_s in instants {
        for body in bodies.clone() {
            let (x, y, centre) = (at(a, body, t_s), at(b, body, t_s), at(b, 0, t_s));
            let (far, fast) = ((y.pos - centre.pos).norm(), (y.vel - centre.vel).norm());
            worst = worst.max((x.pos - y.pos).norm() / far).max((x.vel - y.vel).norm() / fast);
        }
    }
    worst
}

#[test]
fn planets_go_on_by_long_steps_both_ways_as_exactly_as_is_told() {
    let start = solar_system(&PLANETS);
    for until_s in [60.0 * YEAR_S, -60.0 * YEAR_S] {
        let exact = {
            let mut propagation = Propagation::new(&start);
            assert!(propagation.advance(until_s, 1_000_000).unwrap());
            propagation.into_ephemeris()
        };
        for (most_bytes, most) in [(400_000, 2e-4), (150_000, 3e-3)] {
            let long = within(&start, most_bytes * if until_s < 0.0 { 3 } else { 1 }, until_s);
            let track = if until_s < 0.0 { long.backward() } else { long.forward() };
            let stretches: Vec<_> = track.long_stretches().collect();
            assert_eq!(stretches.len(), 1);
            let [stretch] = stretches[..] else { return };
            let errors = stretch.errors;
            println!("{most_bytes} bytes: from {} yr, {errors:?}", stretch.from_s / YEAR_S);
            assert!(stretch.from_s.abs() < 0.8 * until_s.abs() && track.choice().is_some());
            // Before the first knots are measured, nothing is known.
            assert!(errors.place > 0.0 && errors.place < most, "{errors:?}");
            let off = worst(&long, &exact, 1..9, stretch.from_s, until_s);
            // Checked in the middle of twice as wide knots.
            assert!(off < 1.1 * errors.place.max(errors.velocity) && off > 1e-10, "{off:e} of {errors:?}");
            assert!(worst(&long, &exact, 1..9, 0.0, stretch.from_s) < 1e-6);
            // The seam has no step.
            let (before, after) = (stretch.from_s * (1.0 - 1e-12), stretch.from_s * (1.0 + 1e-12));
            for body in 0..9 {
                let way_m = (at(&long, body, before).pos - at(&long, body, after).pos).norm();
                near("the seam", way_m, 0.0, 1e5);
            }
        }
    }
}

#[test]
fn long_steps_are_the_same_bits_of_any_sequence_of_calls_and_go_as_numbers() {
    let start = solar_system(&["Sun", "Jupiter", "Saturn"]);
    let until_s = 4e3 * YEAR_S;
    let whole = within(&start, 400_000, until_s);
    let mut parts = Propagation::with_most_bytes(&start, 400_000);
    for k in 1..50 {
        while !parts.advance(until_s / 50.0 * f64::from(k), 7).unwrap() {}
    }
    while !parts.advance(until_s, 5).unwrap() {}
    assert_eq!(&whole, parts.ephemeris());
    assert!(whole.forward().long_stretches().count() == 1);
    let sent = whole.to_numbers();
    let copy = Ephemeris::from_numbers(&sent).unwrap();
    assert_eq!(copy, whole);
    for cut in [1, 100, 1000] {
        assert!(Ephemeris::from_numbers(&sent[..sent.len() - cut]).is_err());
    }
}

#[test]
fn pieces_of_long_steps_are_their_states_without_gaps() {
    let start = solar_system(&["Sun", "Mercury", "Jupiter"]);
    let long = within(&start, 100_000, 40.0 * YEAR_S);
    let track = long.forward();
    let seam_s = track.long_stretches().next().unwrap().from_s;
    let (near_s, far_s) = (0.7 * seam_s, 1.4 * seam_s + YEAR_S);
    let stretches: Vec<(f64, f64)> = track.stretches(&[0, 1], near_s, far_s).collect();
    assert!(stretches.first().unwrap().0 <= near_s);
    let last = stretches.last().unwrap();
    assert!(last.0 + last.1 >= far_s && last.0 < far_s);
    for pair in stretches.windows(2) {
        near("borders", pair[0].0 + pair[0].1, pair[1].0, 4.0 * f64::EPSILON * far_s);
    }
    for (start_s, step_s) in stretches {
        assert!(step_s > 0.0);
        for body in 0..3 {
            let numbers = track.numbers(body, start_s, step_s).unwrap();
            for h in [0.01, 0.3, 0.77, 0.99] {
                let got = crate::ephemeris::track::evaluate(&numbers, step_s, h);
                let want = track.state(body, start_s + h * step_s).unwrap();
                let what = format!("body {body} at {:.3} yr", (start_s + h * step_s) / YEAR_S);
                // Velocities belong to the orbit, whose elements change a little: by a part of 1e-5 of it.
                near(&what, (got.pos - want.pos).norm() / AU_M, 0.0, 1e-12);
                near(
                    &what,
                    (got.vel - want.vel).norm() / want.vel.norm(),
                    0.0,
                    if body == 0 { 1e-2 } else { 1e-4 },
                );
            }
        }
    }
}

#[test]
fn events_and_areas_on_long_steps_are_those_of_the_exact_paths() {
    let start = solar_system(&["Sun", "Venus", "Earth", "Jupiter"]);
    let until_s = 100.0 * YEAR_S;
    let exact = paths(&start, until_s);
    let long = within(&start, 300_000, until_s);
    let stretch = long.forward().long_stretches().next().unwrap();
    assert!(stretch.from_s < 0.5 * until_s, "{stretch:?}");
    let mut initial = start;
    for body in &mut initial.bodies[1..] {
        body.primary = Some(BodyId(0));
    }
    for (kind, body, other) in [
        (EventKind::Periapsis, 2, None),
        (EventKind::Conjunction, 1, Some(BodyId(2))),
        (EventKind::Opposition, 3, Some(BodyId(2))),
        (EventKind::Stationary, 1, Some(BodyId(2))),
        (EventKind::AscendingNode, 1, None),
    ] {
        let query = Query::new(kind, BodyId(body), other);
        let of = |eph: &Ephemeris| events::find(eph, &initial, &query, 0.0, until_s);
        let (want, got) = (of(&exact), of(&long));
        assert!(want.len() == got.len() && want.len() > 40, "{kind:?}: {} and {}", want.len(), got.len());
        for (a, b) in want.iter().zip(&got) {
            // As long as a body takes for the error of its place; the apsis of the Earth is known to that by its eccentricity, and where a planet
            // stands still, an error of its direction lasts.
            let slow = if matches!(kind, EventKind::Periapsis | EventKind::Stationary) { 60.0 } else { 4.0 };
            near(&format!("{kind:?}"), b.t_s, a.t_s, slow * stretch.errors.place * YEAR_S / 6.0);
        }
    }
    let t_s = 90.0 * YEAR_S;
    let area = |eph: &Ephemeris| area_m2(eph, BodyId(2), BodyId(0), t_s, t_s + 0.3 * YEAR_S).unwrap();
    near("area", area(&long) / area(&exact), 1.0, 3.0 * stretch.errors.place);
}

/// Two planets that pass at 0.004 au, shown from some time before on. Their ways have no other point in common, and their periods no
/// small ratio.
fn meeting(before_s: f64) -> InitialState {
    let speed = (SUN / AU_M).sqrt();
    let met = initial(vec![
        body(SUN, [0.0; 3], [0.0; 3]),
        body(3e-6 * SUN, [AU_M, 0.0, 0.0], [0.0, speed, 0.0]),
        body(3e-6 * SUN, [1.004 * AU_M, 0.0, 0.0], [0.3, 1.05, 0.3].map(|v| v * speed)),
    ]);
    let mut start = met.clone();
    for (body, state) in start.bodies.iter_mut().zip(states_at(&met, -before_s).unwrap()) {
        (body.pos, body.vel) = (state.pos, state.vel);
    }
    start
}

#[test]
fn a_close_passage_among_long_steps_goes_by_the_exact_method() {
    let before_s = 60.0 * YEAR_S;
    let start = meeting(before_s);
    let until_s = before_s + 4.0 * YEAR_S;
    let exact = paths(&start, until_s);
    let long = within(&start, 120_000, until_s);
    let stretches: Vec<_> = long.forward().long_stretches().collect();
    println!("{stretches:?}");
    let among = |t_s: f64| stretches.iter().any(|s| s.from_s < t_s && t_s < s.until_s);
    assert!(stretches.len() > 1 && !among(before_s), "{stretches:?}");
    assert!(among(before_s - 5.0 * YEAR_S) && among(until_s - YEAR_S));
    let apart = |eph: &Ephemeris, t_s: f64| (at(eph, 1, t_s).pos - at(eph, 2, t_s).pos).norm();
    assert!(apart(&exact, before_s) < 0.005 * AU_M);
    for t_s in [before_s - 1e6, before_s, until_s] {
        // Errors of long steps before it, grown by the passage.
        near("distance", apart(&long, t_s) / apart(&exact, t_s), 1.0, 1e-4);
    }
}

#[test]
fn an_orbit_the_other_way_round_is_kept_as_well() {
    let mut start = solar_system(&["Sun", "Jupiter", "Saturn"]);
    let elements = Elements {
        periapsis_m: 3.0 * AU_M,
        eccentricity: 0.3,
        inclination_rad: 2.5,
        node_rad: 1.0,
        argument_rad: 2.0,
        true_anomaly_rad: 0.0,
    };
    let (pos, vel) = state_from_elements(&elements, SUN).unwrap();
    start.bodies[1].pos = start.bodies[0].pos + pos;
    start.bodies[1].vel = start.bodies[0].vel + vel;
    let until_s = 2e3 * YEAR_S;
    let exact = paths(&start, until_s);
    let long = within(&start, 300_000, until_s);
    let stretch = long.forward().long_stretches().next().unwrap();
    assert!(stretch.from_s < 0.8 * until_s, "{stretch:?}");
    let off = worst(&long, &exact, 1..3, stretch.from_s, until_s);
    assert!(off < 1.1 * stretch.errors.place.max(stretch.errors.velocity), "{off:e} of {stretch:?}");
}

#[test]
fn a_companion_that_is_not_shown_goes_on_with_its_planet() {
    let mut start = solar_system(&["Sun", "Earth", "Moon", "Jupiter"]);
    start.bodies.swap(2, 3);
    start.listed = 3;
    let until_s = 60.0 * YEAR_S;
    let exact = paths(&start, until_s);
    let long = within(&start, 500_000, until_s);
    let stretch = long.forward().long_stretches().next().unwrap();
    assert!(stretch.from_s < 0.6 * until_s);
    let t_s = 0.9 * until_s;
    assert_eq!(at(&long, 1, t_s), at(&long, 3, t_s));
    let (earth, moon) = (at(&exact, 1, t_s).pos, at(&exact, 3, t_s).pos);
    let [m, n] = [1, 3].map(|body| start.bodies[body].gm_m3_s2);
    let middle = (earth * m + moon * n) / (m + n);
    near("the middle", (at(&long, 1, t_s).pos - middle).norm() / AU_M, 0.0, 2.0 * stretch.errors.place);
    assert_eq!(long.gm_m3_s2(BodyId(3), t_s).to_bits(), n.to_bits(), "its mass is still there");
}

#[test]
fn what_long_steps_can_t_do_ends_where_memory_does_and_says_why() {
    let mut propagation = Propagation::with_most_bytes(&solar_system(&["Sun", "Earth", "Moon"]), 300_000);
    let stopped = propagation.advance(1e3 * YEAR_S, usize::MAX).unwrap_err();
    assert!(matches!(&stopped, Stopped { why: Why::TooLong { .. }, .. }), "{stopped:?}");
    let said = stopped.to_string();
    let why = "(Moon goes round Earth, not round Sun alone); show less time, fewer bodies, or wider orbits";
    assert!(said.ends_with(why), "{said}");
    assert_eq!(propagation.advance(1e3 * YEAR_S, 1).unwrap_err(), stopped);
}
