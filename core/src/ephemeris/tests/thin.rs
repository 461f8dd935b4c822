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
