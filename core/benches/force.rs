//! One evaluation of all forces.

use divan::Bencher;
use fallaround_core::Vector3;
use fallaround_core::gravity::Field;
use fallaround_core::initial::Oblate;
use fallaround_core::scenario::BodyId;

#[path = "common/solar_system.rs"]
mod solar_system;
use solar_system::{PLANETS, solar_system};

fn main() {
    divan::main();
}

fn evaluate(bencher: Bencher<'_, '_>, names: &[&str], more: bool) {
    let mut initial = solar_system(names);
    if more {
        initial.forces.relativity = true;
        let pole = Vector3::z();
        initial.forces.oblate.push(Oblate { body: BodyId(3), j2: 1.0826e-3, radius_m: 6.378e6, pole });
    }
    let mut field = Field::new(&initial);
    let pos: Vec<f64> = initial.bodies.iter().flat_map(|body| <[f64; 3]>::from(body.pos)).collect();
    let vel: Vec<f64> = initial.bodies.iter().flat_map(|body| <[f64; 3]>::from(body.vel)).collect();
    let mut out = vec![0.0; pos.len()];
    bencher.bench_local(|| field.accelerations(divan::black_box(&pos), &vel, divan::black_box(&mut out)));
}

#[divan::bench]
fn newton_sun_and_planets(bencher: Bencher<'_, '_>) {
    evaluate(bencher, &PLANETS, false);
}

#[divan::bench]
fn newton_eleven_bodies(bencher: Bencher<'_, '_>) {
    evaluate(bencher, &[], false);
}

#[divan::bench]
fn relativity_and_oblateness_too_eleven_bodies(bencher: Bencher<'_, '_>) {
    evaluate(bencher, &[], true);
}
