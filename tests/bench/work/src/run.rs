//! Bodies, integrated step by step.

use fallaround_core::gravity::Field;
use fallaround_core::initial::InitialState;
use fallaround_core::integrate::wisdom_holman::Start;
use fallaround_core::integrate::{Radau, WisdomHolman, drift};

use crate::Outcome;

/// The energy is looked at once in so many steps of the Gauss-Radau method: at each, it would take a noticeable part of the time.
const STEPS_TO_A_LOOK: u32 = 16;

/// The same for the Wisdom-Holman method, where the look takes the corrector besides.
const LONG_STEPS_TO_A_LOOK: u32 = 1000;

/// Positions and velocities of the bodies, three numbers for each.
#[must_use]
pub fn states(initial: &InitialState) -> (Vec<f64>, Vec<f64>) {
    let pos = initial.bodies.iter().flat_map(|body| <[f64; 3]>::from(body.pos)).collect();
    let vel = initial.bodies.iter().flat_map(|body| <[f64; 3]>::from(body.vel)).collect();
    (pos, vel)
}

/// Integrates by the Gauss-Radau method to the time `until`, in steps that are `share` of what the method itself would take.
///
/// A run that can't go on gives NaN as its energy error.
#[must_use]
pub fn gauss_radau(initial: &InitialState, until: f64, share: f64) -> Outcome {
    let mut largest = 0.0_f64;
    let (steps, pos) = follow(initial, until, share, |_, error| largest = largest.max(error.abs()));
    Outcome { steps: f64::from(steps), energy_error: if steps > 0 { largest } else { f64::NAN }, pos }
}

/// The same, and tells of each look at the energy: after how many steps, and its relative error. No steps: it couldn't go on.
pub fn follow(
    initial: &InitialState,
    until: f64,
    share: f64,
    mut look: impl FnMut(u32, f64),
) -> (u32, Vec<f64>) {
    let mut field = Field::new(initial);
    let (mut pos, mut vel) = states(initial);
    let start = drift::energy(field.gms_m3_s2(), &pos, &vel);
    let mut radau = Radau::new(0.0, &pos, &vel, 1e-5 * until);
    radau.set_step_share(share);
    let mut steps = 0_u32;
    while radau.t_s() < until {
        radau.limit_step(until - radau.t_s());
        if radau.solve(&mut field).is_err() {
            return (0, pos);
        }
        radau.finish();
        steps += 1;
        if steps.is_multiple_of(STEPS_TO_A_LOOK) || radau.t_s() >= until {
            radau.state(&mut pos, &mut vel);
            look(steps, drift::energy(field.gms_m3_s2(), &pos, &vel) / start - 1.0);
        }
    }
    (steps, pos)
}

/// Integrates by the Wisdom-Holman method with its corrector, about the first body, by steps of `step_s`.
///
/// A run that can't go on gives NaN as its energy error.
#[must_use]
pub fn wisdom_holman(initial: &InitialState, until_s: f64, step_s: f64) -> Outcome {
    let gms: Vec<f64> = initial.bodies.iter().map(|body| body.gm_m3_s2).collect();
    let (mut pos, mut vel) = states(initial);
    let start = drift::energy(&gms, &pos, &vel);
    let (mut steps, mut largest) = (0_u32, 0.0_f64);
    let begin = Start { centre: 0, gms: &gms, pos: &pos, vel: &vel, t_s: 0.0, relativity: false };
    let done = WisdomHolman::new(&begin, step_s).and_then(|mut run| {
        while run.t_s() + step_s <= until_s {
            run.step()?;
            steps += 1;
            if steps.is_multiple_of(LONG_STEPS_TO_A_LOOK) {
                run.state(&mut pos, &mut vel)?;
                largest = largest.max((drift::energy(&gms, &pos, &vel) / start - 1.0).abs());
            }
        }
        run.state_after(until_s - run.t_s(), &mut pos, &mut vel)
    });
    largest = largest.max((drift::energy(&gms, &pos, &vel) / start - 1.0).abs());
    Outcome { steps: f64::from(steps), energy_error: if done.is_ok() { largest } else { f64::NAN }, pos }
}
