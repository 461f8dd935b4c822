//! Tracers: how many steps a second, and what a frame costs.

use divan::{Bencher, counter::ItemsCount};
use fallaround_core::Vector3;
use fallaround_core::ephemeris::{Ephemeris, Propagation};
use fallaround_core::initial::{InitialState, InitialSwarm};
use fallaround_core::math::float::sin_cos;
use fallaround_core::scenario::BodyId;
use fallaround_core::swarm::{Cursor, SwarmRun};

#[path = "common/solar_system.rs"]
mod solar_system;
use solar_system::{PLANETS, solar_system};

const YEAR_S: f64 = 365.25 * 86_400.0;
const TRACERS: u32 = 10_000;

/// The step that all tracers of the belt get: half of what their own orbits allow, for Mercury's sake.
const STEP_S: f64 = 524_288.0;

fn main() {
    divan::main();
}

/// Ten massive bodies and a belt in which every tracer has the same step.
fn belt() -> (InitialState, Ephemeris) {
    let mut names = PLANETS.to_vec();
    names.push("Pluto");
    let mut initial = solar_system(&names);
    let gm = initial.bodies[0].gm_m3_s2;
    let (mut pos, mut vel) = (Vec::new(), Vec::new());
    for k in 0..TRACERS {
        let k = f64::from(k);
        let (sin, cos) = sin_cos(2.4 * k);
        let r = (2.7 + 0.4 * k / f64::from(TRACERS)) * 1.495_978_707e11;
        pos.push(Vector3::new(cos, sin, 0.05) * r);
        vel.push(Vector3::new(-sin, cos, 0.03) * (gm / r).sqrt());
    }
    initial.swarms.push(InitialSwarm {
        name: "Belt".to_owned(),
        about: BodyId(0),
        pos,
        vel,
        area_m2_kg: 0.0,
    });
    let mut propagation = Propagation::new(&initial);
    assert!(propagation.advance(10.0 * YEAR_S, usize::MAX).is_ok_and(|there| there), "integration stopped");
    (initial, propagation.into_ephemeris())
}

/// The steps alone: thirty-two of each tracer.
#[divan::bench]
fn tracer_steps(bencher: Bencher<'_, '_>) {
    let (initial, eph) = belt();
    let mut run = SwarmRun::new(&initial, 0);
    assert!(run.advance(&eph, 32.0 * STEP_S, usize::MAX));
    bencher
        .counter(ItemsCount::new(32 * TRACERS as usize))
        .with_inputs(|| run.clone())
        .bench_local_refs(|run| run.advance(&eph, 64.0 * STEP_S, usize::MAX));
}

/// Ten years, the start included.
#[divan::bench(sample_count = 10)]
fn ten_years(bencher: Bencher<'_, '_>) {
    let (initial, eph) = belt();
    bencher.bench_local(|| SwarmRun::new(&initial, 0).advance(&eph, 10.0 * YEAR_S, usize::MAX));
}

/// A frame of a show at this pace: days in a sixtieth of a second.
#[divan::bench(args = [1.0, 5.0, 20.0])]
fn frame(bencher: Bencher<'_, '_>, days: f64) {
    let (initial, eph) = belt();
    let mut run = SwarmRun::new(&initial, 0);
    assert!(run.advance(&eph, 10.0 * YEAR_S, usize::MAX));
    let mut cursor = Cursor::new(&initial, 0);
    let mut at_s = 100.0 * 86_400.0;
    bencher.bench_local(|| {
        // Round and round; the way back to the start is one frame in a hundred or less.
        at_s = if at_s > 9.9 * YEAR_S { 100.0 * 86_400.0 } else { at_s + days * 86_400.0 };
        cursor.seek(run.path(), &eph, at_s, usize::MAX)
    });
}

/// What bounds it: the pulls of ten bodies, and nothing else.
#[divan::bench]
fn pulls_alone(bencher: Bencher<'_, '_>) {
    const LANES: usize = 4;
    let (initial, _) = belt();
    let row = |axis: usize| initial.swarms[0].pos.iter().map(|pos| pos[axis]).collect::<Vec<f64>>();
    let pos = [row(0), row(1), row(2)];
    let mut acc = [vec![0.0; pos[0].len()], vec![0.0; pos[0].len()], vec![0.0; pos[0].len()]];
    let bodies: Vec<(f64, Vector3<f64>)> = initial.bodies.iter().map(|b| (b.gm_m3_s2, b.pos)).collect();
    bencher.counter(ItemsCount::new(TRACERS as usize)).bench_local(|| {
        for from in (0..pos[0].len()).step_by(LANES) {
            let mut at = [[0.0; LANES]; 3];
            for axis in 0..3 {
                at[axis].copy_from_slice(&pos[axis][from..from + LANES]);
            }
            let mut sum = [[0.0; LANES]; 3];
            for (gm, body) in &bodies {
                for l in 0..LANES {
                    let d = [body[0] - at[0][l], body[1] - at[1][l], body[2] - at[2][l]];
                    let r2 = d[0] * d[0] + d[1] * d[1] + d[2] * d[2];
                    let w = gm / (r2 * r2.sqrt());
                    for axis in 0..3 {
                        sum[axis][l] += w * d[axis];
                    }
                }
            }
            for axis in 0..3 {
                acc[axis][from..from + LANES].copy_from_slice(&sum[axis]);
            }
        }
        acc[0][0]
    });
}
