//! What a frame asks of the ephemeris.

use divan::Bencher;
use fallaround_core::ephemeris::Propagation;
use fallaround_core::scenario::BodyId;

#[path = "common/solar_system.rs"]
mod solar_system;
use solar_system::{PLANETS, solar_system};

const YEAR_S: f64 = 365.25 * 86_400.0;

fn main() {
    divan::main();
}

/// One body's trail of 2,000 points, over 100 years of 19,180 steps.
#[divan::bench]
fn trail_of_2000_points(bencher: Bencher<'_, '_>) {
    let mut propagation = Propagation::new(&solar_system(&PLANETS));
    assert!(propagation.advance(100.0 * YEAR_S, usize::MAX).is_ok_and(|there| there), "integration stopped");
    let ephemeris = propagation.into_ephemeris();
    bencher.bench_local(|| {
        (0..2000)
            .filter_map(|k| ephemeris.state(BodyId(3), f64::from(k) * 0.05 * YEAR_S))
            .map(|state| state.pos.x)
            .sum::<f64>()
    });
}

/// All bodies at one instant.
#[divan::bench]
fn one_frame(bencher: Bencher<'_, '_>) {
    let mut propagation = Propagation::new(&solar_system(&PLANETS));
    assert!(propagation.advance(100.0 * YEAR_S, usize::MAX).is_ok_and(|there| there), "integration stopped");
    let ephemeris = propagation.into_ephemeris();
    bencher.bench_local(|| {
        let t_s = divan::black_box(37.3 * YEAR_S);
        (0..9).filter_map(|body| ephemeris.state(BodyId(body), t_s)).map(|state| state.pos.x).sum::<f64>()
    });
}
