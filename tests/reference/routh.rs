//! The triangular points: a tracer beside L4 stays while the lighter of two masses in circular motion has less than 0.0385209 of both, and leaves when it has more.
//!
//! Standard: E. J. Routh (1875, Proc. London Math. Soc. 6, 86); C. D. Murray & S. F. Dermott, Solar System Dynamics (1999), section 3.7: small
//! displacements go as exp(λ n t), λ⁴ + λ² + 27/4 μ (1 - μ) = 0, and the limit is μ = (1 - √(23/27)) / 2 = 0.0385209 (from memory; checked against the equation below).

use fallaround_core::Vector3;
use fallaround_core::gravity::Field;
use fallaround_core::initial::{InitialBody, InitialState};
use fallaround_core::integrate::Radau;
use fallaround_core::math::float::ln;
use fallaround_core::scenario::Surface;
use std::f64::consts::TAU;

/// How far beside L4 it starts, in distances of the masses.
const ASIDE: f64 = 1e-8;

/// The largest distance from L4, as it turns with the masses, in each of some turns.
fn wanders(mu: f64, turns: u32) -> Vec<f64> {
    let body = |gm_m3_s2: f64, pos: [f64; 2], vel: [f64; 2]| InitialBody {
        name: String::new(),
        gm_m3_s2,
        radius_m: 0.0,
        surface: Surface::Stop,
        primary: None,
        pos: Vector3::new(pos[0], pos[1], 0.0),
        vel: Vector3::new(vel[0], vel[1], 0.0),
    };
    // Distance, mean motion and GM of both together are 1.
    let l4 = [0.5 - mu, 0.75_f64.sqrt()];
    let bodies = vec![
        body(1.0 - mu, [-mu, 0.0], [0.0, -mu]),
        body(mu, [1.0 - mu, 0.0], [0.0, 1.0 - mu]),
        body(0.0, [l4[0] + ASIDE, l4[1]], [-l4[1], l4[0]]),
    ];
    let flat = |of: fn(&InitialBody) -> Vector3<f64>| -> Vec<f64> {
        bodies.iter().flat_map(|body| <[f64; 3]>::from(of(body))).collect()
    };
    let (mut pos, mut vel) = (flat(|body| body.pos), flat(|body| body.vel));
    let mut field = Field::new(&InitialState::of(bodies));
    let mut radau = Radau::new(0.0, &pos, &vel, 0.01);
    let (mut most, mut turn) = (vec![0.0_f64], 1);
    while turn <= turns {
        assert!(radau.solve(&mut field).is_ok(), "something falls into something");
        radau.finish();
        radau.state(&mut pos, &mut vel);
        // L4 makes a triangle of equal sides with the masses, wherever they are.
        let (x, y) = (pos[3] - pos[0], pos[4] - pos[1]);
        let at = [pos[0] + 0.5 * x - l4[1] * y, pos[1] + 0.5 * y + l4[1] * x];
        let off = ((pos[6] - at[0]) * (pos[6] - at[0]) + (pos[7] - at[1]) * (pos[7] - at[1])).sqrt();
        if let Some(most) = most.last_mut() {
            *most = most.max(off);
        }
        if radau.t_s() > TAU * f64::from(turn) {
            turn += 1;
            most.push(0.0);
        }
    }
    most.pop();
    most
}

#[test]
fn the_triangular_points_hold_below_rouths_mass_ratio_and_not_above() {
    let limit = 0.5 * (1.0 - (23.0_f64 / 27.0).sqrt());
    assert!((limit - 0.038_520_9).abs() < 1e-7);
    assert!((27.0 / 4.0 * limit * (1.0 - limit) - 0.25).abs() < 1e-15);
    let most = |mu| wanders(mu, 100).into_iter().fold(0.0, f64::max);
    // Below, two close frequencies beat: what was put aside grows by a few times 1 / √(1 - 27 μ (1 - μ)), which is 13, and comes back.
    let held = most(0.0383);
    assert!(held < 100.0 * ASIDE, "at 0.0383 it wanders by {held:e}");
    // Above, it grows e-fold in five turns, until it is so far that more than the small counts.
    let left = most(0.0388);
    assert!(left > 0.05, "at 0.0388 it wanders by no more than {left:e}");
}

#[test]
fn beyond_it_leaves_at_the_rate_of_the_equation() {
    let mu = 0.042_f64;
    // λ² = (-1 + i s) / 2; its root's real part is √((|λ²| + Re λ²) / 2).
    let s = (27.0 * mu * (1.0 - mu) - 1.0).sqrt();
    let rate = (0.5 * (0.5 * (1.0 + s * s).sqrt() - 0.5)).sqrt();
    // Swings, of the root's imaginary part, are compared at the same place of a swing: ten of them take 14 turns.
    let swings = (0.5 * (0.5 * (1.0 + s * s).sqrt() + 0.5)).sqrt() * 14.0;
    assert!((swings - 10.0).abs() < 0.01, "{swings}");
    let left = wanders(mu, 20);
    let grown = ln(left[19] / left[5]) / (14.0 * TAU);
    assert!((grown / rate - 1.0).abs() < 0.02, "rate {grown}, want {rate}");
}
