//! Relative energy error of the Sun and eight planets over a thousand years: it must grow like the square root of the number
//! of steps, by roundings alone. `cargo run --release -p fallaround-core --example drift [YEARS]`

#[path = "../benches/common/solar_system.rs"]
mod solar_system;

use fallaround_core::gravity::Field;
use fallaround_core::integrate::{Radau, drift};

#[expect(clippy::print_stdout, reason = "printing is what it is for")]
fn main() {
    const YEAR_S: f64 = 365.25 * 86_400.0;
    let years = std::env::args().nth(1).and_then(|years| years.parse().ok()).unwrap_or(1000.0);
    let initial = solar_system::solar_system(&solar_system::PLANETS);
    let mut field = Field::new(&initial);
    let mut pos: Vec<f64> = initial.bodies.iter().flat_map(|body| <[f64; 3]>::from(body.pos)).collect();
    let mut vel: Vec<f64> = initial.bodies.iter().flat_map(|body| <[f64; 3]>::from(body.vel)).collect();
    let start = drift::energy(field.gms_m3_s2(), &pos, &vel);
    let mut radau = Radau::new(0.0, &pos, &vel, 86_400.0);
    let (mut steps, mut next_year, mut largest) = (0_u32, 1.0, 0.0_f64);
    println!("{:>8} {:>10} {:>12} {:>12}", "years", "steps", "error", "largest");
    while next_year <= 1.001 * years {
        if radau.solve(&mut field).is_err() {
            println!("the step became too small");
            return;
        }
        radau.finish();
        steps += 1;
        radau.state(&mut pos, &mut vel);
        let error = drift::energy(field.gms_m3_s2(), &pos, &vel) / start - 1.0;
        largest = largest.max(error.abs());
        if radau.t_s() >= next_year * YEAR_S {
            println!("{next_year:8} {steps:10} {error:12.2e} {largest:12.2e}");
            next_year *= 10.0_f64.sqrt();
        }
    }
}
