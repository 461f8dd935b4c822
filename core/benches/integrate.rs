//! The solar system over years: integrated alone, and into an ephemeris.

use divan::Bencher;
use fallaround_core::ephemeris::{Propagation, states_at};

#[path = "common/solar_system.rs"]
mod solar_system;
use solar_system::{PLANETS, solar_system};

const YEAR_S: f64 = 365.25 * 86_400.0;

fn main() {
    divan::main();
}

/// 19,180 steps.
#[divan::bench(sample_count = 5)]
fn sun_and_planets_100_years(bencher: Bencher<'_, '_>) {
    let initial = solar_system(&PLANETS);
    bencher.bench_local(|| states_at(divan::black_box(&initial), 100.0 * YEAR_S));
}

/// 39,180 steps, with the Moon and with relativity.
#[divan::bench(sample_count = 5)]
fn eleven_bodies_with_relativity_100_years(bencher: Bencher<'_, '_>) {
    let mut initial = solar_system(&[]);
    initial.forces.relativity = true;
    bencher.bench_local(|| states_at(divan::black_box(&initial), 100.0 * YEAR_S));
}

/// 3,918 steps, kept, with a look at every pair for contacts.
#[divan::bench(sample_count = 10)]
fn eleven_bodies_into_an_ephemeris_10_years(bencher: Bencher<'_, '_>) {
    let mut initial = solar_system(&[]);
    for body in &mut initial.bodies {
        body.radius_m = 1e6;
    }
    bencher.bench_local(|| {
        let mut propagation = Propagation::new(divan::black_box(&initial));
        propagation.advance(10.0 * YEAR_S, usize::MAX)
    });
}
