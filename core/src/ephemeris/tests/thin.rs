//! Joined pieces against the steps that they were made of.

use super::*;
use crate::ephemeris::run::Run;
use crate::ephemeris::{Tolerance, Track};
use crate::math::float::sin;
use crate::solar_system::{PLANETS, solar_system};

const YEAR_S: f64 = 365.25 * 86_400.0;

/// The track of the very steps.
fn unjoined(start: &InitialState, direction: f64, until_s: f64) -> Track {
    let mut run = Run::new(start, direction);
    let mut track = Track::new(start.bodies.len(), direction);
    while track.end_s().abs() < until_s {
        let step = run.step(start).expect("a step");
        track.push(step.start_s, step.step_s, run.numbers());
    }
    track
}

/// Instants all over an interval, in no order.
fn instants(until_s: f64, count: usize) -> impl Iterator<Item = f64> {
    (0..count).map(move |k| until_s * (0.5 + 0.499_999 * sin(12_345.678 * k as f64)))
}

/// A comet of eccentricity 0.95 and a planet with a moon, on slanted ways about a star that moves.
fn comet_and_moon() -> InitialState {
    initial(vec![
        body(1.0, [0.1, -0.2, 0.0], [0.01, 0.02, 0.0]),
        body(0.0, [0.05, 0.1, 0.02], [0.0, 5.0, 0.6]),
        body(1e-3, [2.1, -0.2, 0.0], [0.01, 0.727, 0.0]),
        body(1e-6, [2.13, -0.2, 0.0], [0.01, 0.727, 0.18]),
    ])
}

#[test]
fn joined_pieces_lie_within_their_tolerance_of_the_steps() {
    let Tolerance { place, velocity } = Tolerance::ROUNDING;
    for (name, start, until_s) in [
        ("the solar system", solar_system(&[]), 4.0 * YEAR_S),
        ("the solar system without the Moon, back", solar_system(&PLANETS), -6.0 * YEAR_S),
        ("comet and moon", comet_and_moon(), 60.0),
    ] {
        let eph = paths(&start, until_s);
        let joined = if until_s < 0.0 { eph.backward() } else { eph.forward() };
        let steps = unjoined(&start, until_s.signum(), until_s.abs());
        let mut worst = (0.0_f64, 0.0_f64);
        for t_s in instants(until_s, 20_000) {
            for body in 0..start.bodies.len() {
                let (got, want) = (joined.state(body, t_s).unwrap(), steps.state(body, t_s).unwrap());
                // The tolerance counts from the largest distance and speed on the piece.
                let piece = joined.find(body, t_s).unwrap();
                let ends =
                    [0.0, 0.5, 1.0].map(|h| joined.state(body, piece.start_s + h * piece.step_s).unwrap());
                let most = |of: fn(&State) -> f64| ends.iter().map(of).fold(of(&want), f64::max);
                let (far, fast) = (most(|s| s.pos.norm()), most(|s| s.vel.norm()));
                worst.0 = worst.0.max((got.pos - want.pos).norm() / (far * place));
                worst.1 = worst.1.max((got.vel - want.vel).norm() / (fast * velocity));
            }
        }
        let pieces: usize = (0..start.bodies.len()).map(|body| joined.pieces(body)).sum();
        let all = joined.len() * start.bodies.len();
        assert!(worst.0 < 1.0 && worst.1 < 1.0, "{name}: {worst:?} of the tolerance");
        assert!(3 * pieces < 2 * all, "{name}: {pieces} pieces of {all}");
    }
}

#[test]
fn the_solar_system_with_its_moon_fills_64_megabytes_in_two_centuries_and_a_half() {
    let eph = paths(&solar_system(&[]), 10.0 * YEAR_S);
    let years = crate::ephemeris::SHOW_BYTES as f64 / (eph.bytes() as f64 / 10.0);
    // 61 without joining.
    assert!(years > 240.0, "{years:.0} years");
}

#[test]
fn paths_are_continuous_where_pieces_meet() {
    let eph = paths(&comet_and_moon(), 60.0);
    let track = eph.forward();
    for body in 0..4 {
        for index in 1..track.pieces(body) {
            let (before, after) = (track.piece(body, index - 1).unwrap(), track.piece(body, index).unwrap());
            near("the end", before.start_s + before.step_s, after.start_s, 1e-15 * after.start_s);
            let end = crate::ephemeris::track::evaluate(before.numbers, before.step_s, 1.0);
            let start = crate::ephemeris::track::evaluate(after.numbers, after.step_s, 0.0);
            near("place", (end.pos - start.pos).norm(), 0.0, 8.0 * f64::EPSILON * start.pos.norm());
            near("velocity", (end.vel - start.vel).norm(), 0.0, 8.0 * f64::EPSILON * start.vel.norm());
        }
    }
}

#[test]
fn stretches_are_the_common_parts_of_pieces_and_show_the_same_path() {
    let start = comet_and_moon();
    for until_s in [30.0, -30.0] {
        let eph = paths(&start, until_s);
        let track = if until_s < 0.0 { eph.backward() } else { eph.forward() };
        let (near_s, far_s) = (0.1 * until_s, 0.8 * until_s);
        let stretches: Vec<(f64, f64)> = track.stretches(&[0, 1, 3], near_s, far_s).collect();
        assert!(stretches[0].0.abs() <= near_s.abs() && stretches[1].0.abs() > near_s.abs());
        let (last_s, length_s) = stretches[stretches.len() - 1];
        assert!(last_s.abs() <= far_s.abs() && (last_s + length_s).abs() > far_s.abs());
        for pair in stretches.windows(2) {
            near("the next", pair[0].0 + pair[0].1, pair[1].0, 1e-14);
        }
        for &(start_s, step_s) in &stretches {
            for body in [0, 1, 3] {
                let numbers = track.numbers(body, start_s, step_s).unwrap();
                for h in [0.0, 0.3, 0.77, 1.0] {
                    let got = crate::ephemeris::track::evaluate(&numbers, step_s, h);
                    let piece = track.find(body, start_s + 0.5 * step_s).unwrap();
                    let part = (start_s + h * step_s - piece.start_s) / piece.step_s;
                    let want = crate::ephemeris::track::evaluate(piece.numbers, piece.step_s, part);
                    near("place", (got.pos - want.pos).norm(), 0.0, 1e-14 * want.pos.norm());
                    near("velocity", (got.vel - want.vel).norm(), 0.0, 1e-14 * want.vel.norm());
                }
            }
        }
    }
}

#[test]
fn what_rests_goes_exactly_with_what_it_rests_on() {
    let start = initial(vec![
        ball(1.0, 0.1, Surface::Stop, [1.0, 0.0, 0.0], [0.0, 0.3, 0.0]),
        ball(0.0, 0.0, Surface::Stop, [1.3, 0.0, 0.0], [0.0, 0.3, 0.0]),
        body(0.5, [-2.0, 0.0, 0.0], [0.0, -0.6, 0.0]),
    ]);
    let eph = paths(&start, 40.0);
    let landed_s = eph.contacts()[0].t_s;
    assert!(landed_s < 1.0 && eph.forward().len() > eph.forward().pieces(1), "nothing joined");
    for t_s in instants(40.0, 200).filter(|t_s| *t_s > landed_s) {
        let (host, guest) = (at(&eph, 0, t_s), at(&eph, 1, t_s));
        assert_eq!(host.vel, guest.vel, "{t_s}");
        near("apart", (guest.pos - host.pos).norm(), 0.1, 1e-14);
    }
}

/// The ephemeris up to two instants, within a bound of its memory.
fn within(start: &InitialState, most_bytes: usize, ends_s: &[f64]) -> Ephemeris {
    let mut propagation = Propagation::with_most_bytes(start, most_bytes);
    for end_s in ends_s {
        while !propagation.advance(*end_s, 100).unwrap() {
            assert!(propagation.ephemeris().bytes() <= most_bytes);
        }
    }
    propagation.into_ephemeris()
}

#[test]
fn what_would_outgrow_its_memory_is_thinned_to_the_tolerance_that_it_states() {
    let start = solar_system(&[]);
    let until_s = 30.0 * YEAR_S;
    let most_bytes = crate::ephemeris::SHOW_BYTES / 25;
    let eph = within(&start, most_bytes, &[until_s]);
    assert!(eph.bytes() <= most_bytes && eph.forward().len() > 11_000);
    let tolerance = eph.tolerance();
    assert!(tolerance.velocity > Tolerance::ROUNDING.velocity);
    let steps = unjoined(&start, 1.0, until_s);
    for t_s in instants(until_s, 5_000) {
        for body in 0..11 {
            let (got, want) = (at(&eph, body, t_s), steps.state(body, t_s).unwrap());
            let near_m = (0..11)
                .filter(|&other| other != body)
                .map(|other| (start.bodies[other].pos - start.bodies[body].pos).norm());
            let far_m = near_m.fold(1.02 * want.pos.norm(), f64::min);
            near("place", (got.pos - want.pos).norm(), 0.0, far_m * tolerance.place);
            // The Sun's speed changes along a piece.
            let fast = want.vel.norm().max(if body == 0 { 20.0 } else { 0.0 });
            near("velocity", (got.vel - want.vel).norm(), 0.0, 1.05 * fast * tolerance.velocity);
        }
    }
}

#[test]
fn thinned_paths_are_the_same_bits_of_any_sequence_of_calls() {
    let start = comet_and_moon();
    let most_bytes = paths(&start, 100.0).bytes();
    let whole = within(&start, most_bytes, &[100.0, -10.0]);
    assert!(whole.tolerance().velocity > Tolerance::ROUNDING.velocity, "never thinned");
    let mut parts = Propagation::with_most_bytes(&start, most_bytes);
    for k in 0..100 {
        parts.advance(f64::from(-k) * 0.1, 3).unwrap();
        while !parts.advance(f64::from(k), 7).unwrap() {}
    }
    for end_s in [100.0, -10.0] {
        while !parts.advance(end_s, 5).unwrap() {}
    }
    assert_eq!(&whole, parts.ephemeris());
}

#[test]
fn thinned_paths_keep_their_contacts() {
    // A ball bounces on a body that circles another, until it rests.
    let start = initial(vec![
        ball(1.0, 0.1, Surface::Bounce { restitution: 0.8 }, [1.0, 0.0, 0.0], [0.0, 0.5, 0.0]),
        ball(0.0, 0.0, Surface::Stop, [1.2, 0.0, 0.0], [0.0, 0.5, 0.0]),
        body(1.0, [-1.0, 0.0, 0.0], [0.0, -0.5, 0.0]),
    ]);
    let full = paths(&start, 400.0);
    let thin = within(&start, full.bytes(), &[400.0]);
    assert!(thin.tolerance().velocity > Tolerance::ROUNDING.velocity, "never thinned");
    assert_eq!(full.contacts(), thin.contacts());
    let rests_s = full.contacts().last().unwrap().t_s;
    assert!(full.contacts().len() > 5 && rests_s < 60.0, "{rests_s}");
    for t_s in instants(400.0, 3_000) {
        for body in 0..3 {
            near("place", (at(&full, body, t_s).pos - at(&thin, body, t_s).pos).norm(), 0.0, 1e-6);
        }
        if t_s > rests_s {
            assert_eq!(at(&thin, 0, t_s).vel, at(&thin, 1, t_s).vel, "{t_s}");
        }
    }
    for contact in thin.contacts() {
        near(
            "on the surface",
            (at(&thin, 1, contact.t_s).pos - at(&thin, 0, contact.t_s).pos).norm(),
            0.1,
            1e-12,
        );
    }
}

#[test]
fn what_fits_at_no_tolerance_is_said() {
    let mut propagation = Propagation::with_most_bytes(&comet_and_moon(), 200_000);
    let stopped = propagation.advance(1e6, usize::MAX).unwrap_err();
    assert!(matches!(stopped.why, crate::ephemeris::Why::TooLong { .. }), "{stopped}");
    assert!(stopped.t_s > 10.0);
    near("the end", propagation.ephemeris().until_s(), stopped.t_s, 1e-12);
}
