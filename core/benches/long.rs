//! Long spans: a thousand years of the Sun and eight planets by steps of four days, and what a look at the true state costs.

use divan::Bencher;
use fallaround_core::integrate::WisdomHolman;
use fallaround_core::integrate::wisdom_holman::Start;

#[path = "common/solar_system.rs"]
mod solar_system;
use solar_system::{PLANETS, solar_system};

const DAY_S: f64 = 86_400.0;

fn main() {
    divan::main();
}

fn planets(relativity: bool) -> WisdomHolman {
    let bodies = solar_system(&PLANETS).bodies;
    let gms: Vec<f64> = bodies.iter().map(|body| body.gm_m3_s2).collect();
    let pos: Vec<f64> = bodies.iter().flat_map(|body| <[f64; 3]>::from(body.pos)).collect();
    let vel: Vec<f64> = bodies.iter().flat_map(|body| <[f64; 3]>::from(body.vel)).collect();
    let start = Start { centre: 0, gms: &gms, pos: &pos, vel: &vel, t_s: 0.0, relativity };
    match WisdomHolman::new(&start, 4.0 * DAY_S) {
        Ok(run) => run,
        Err(trouble) => panic!("{trouble:?}"),
    }
}

fn years(mut run: WisdomHolman, years: f64) -> WisdomHolman {
    while run.t_s() < years * 365.25 * DAY_S && run.step().is_ok() {}
    run
}

/// 91,313 steps.
#[divan::bench(sample_count = 10)]
fn sun_and_planets_1000_years(bencher: Bencher<'_, '_>) {
    bencher.with_inputs(|| planets(false)).bench_local_values(|run| years(run, 1000.0));
}

#[divan::bench(sample_count = 10)]
fn the_same_with_relativity(bencher: Bencher<'_, '_>) {
    bencher.with_inputs(|| planets(true)).bench_local_values(|run| years(run, 1000.0));
}

/// A thousand of them.
#[divan::bench(sample_count = 10)]
fn true_states(bencher: Bencher<'_, '_>) {
    let mut run = years(planets(false), 1.0);
    let (mut pos, mut vel) = ([0.0; 27], [0.0; 27]);
    bencher.bench_local(|| {
        for _ in 0..1000 {
            if run.state(&mut pos, &mut vel).is_err() {
                break;
            }
        }
        pos[0]
    });
}
