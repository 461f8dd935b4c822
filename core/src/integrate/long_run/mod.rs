//! Long spans of a planetary system: steps of [`WisdomHolman`] where they are good, [`Radau`] through what they are not.
//!
//! [`choose`] says beforehand whether that is possible for a scenario, with which steps, and how exact it will be.

mod choice;
#[cfg(test)]
mod tests;

pub use choice::{Choice, choose};

use super::radau::{PER_BODY, Radau};
use super::wisdom_holman::{Start, Trouble, WisdomHolman};
use crate::gravity::Field;
use crate::initial::InitialState;

/// Long steps after which it is tried again whether they would do.
const TRY_AGAIN: f64 = 4.0;

/// Why a long run can't go on.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Stopped {
    /// Two points fall into each other.
    Collapse {
        /// When, s.
        t_s: f64,
    },
    /// Two bodies touch, as far as that was looked for.
    Contact {
        /// Which ones, by their places in the list.
        bodies: [usize; 2],
        /// When at the latest, s: a sixteenth of a step of the exact method is not told apart.
        t_s: f64,
    },
    /// A body falls into the centre.
    IntoCentre {
        /// Which one, by its place in the list.
        body: usize,
        /// When, s.
        t_s: f64,
    },
}

/// What a run has done so far.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Tally {
    /// Long steps made.
    pub long_steps: u64,
    /// Steps of the exact method.
    pub exact_steps: u64,
    /// How often it went over to the exact method.
    pub stretches: u64,
    /// Why it did so first, and when (s).
    pub first: Option<(Trouble, f64)>,
}

#[derive(Debug, Clone, PartialEq)]
enum Now {
    Long(Box<WisdomHolman>),
    /// In a step that is `solved` or still to be solved; long steps are tried again from a time on.
    Exact {
        radau: Radau,
        solved: bool,
        again_s: f64,
    },
}

/// Bodies on their way over a long span.
///
/// Steps don't depend on what is asked for, so the same times asked in the same order give the same bits.
#[derive(Debug, Clone, PartialEq)]
pub struct LongRun {
    centre: usize,
    relativity: bool,
    step_s: f64,
    gms: Vec<f64>,
    /// Empty where contacts are not looked for.
    radii_m: Vec<f64>,
    field: Field,
    now: Now,
    tally: Tally,
    pos: Vec<f64>,
    vel: Vec<f64>,
}

impl LongRun {
    /// The bodies of a scenario from its start on, as was chosen for it, or back from there. It stops when two of them touch.
    pub fn of(initial: &InitialState, choice: &Choice, backward: bool) -> Self {
        let bodies = &initial.bodies;
        let gms: Vec<f64> = bodies.iter().map(|body| body.gm_m3_s2).collect();
        let pos: Vec<f64> = bodies.iter().flat_map(|body| <[f64; 3]>::from(body.pos)).collect();
        let vel: Vec<f64> = bodies.iter().flat_map(|body| <[f64; 3]>::from(body.vel)).collect();
        let start = Start {
            centre: choice.centre,
            gms: &gms,
            pos: &pos,
            vel: &vel,
            t_s: 0.0,
            relativity: initial.forces.relativity,
        };
        let step_s = if backward { -choice.step_s } else { choice.step_s };
        let mut run = Self::new(&start, Field::new(initial), step_s);
        run.radii_m = bodies.iter().map(|body| body.radius_m).collect();
        run
    }

    /// Bodies at their start; contacts are not looked for. `field` is that of the same bodies in the same order, for the exact stretches. `step_s` is the length of the
    /// long steps, negative where time goes back.
    pub fn new(start: &Start<'_>, field: Field, step_s: f64) -> Self {
        debug_assert_eq!(field.bodies(), start.gms.len());
        let mut run = Self {
            centre: start.centre,
            relativity: start.relativity,
            step_s,
            gms: start.gms.to_vec(),
            radii_m: Vec::new(),
            field,
            now: Now::Exact {
                radau: Radau::new(start.t_s, start.pos, start.vel, 0.05 * step_s),
                solved: false,
                again_s: start.t_s,
            },
            tally: Tally::default(),
            pos: start.pos.to_vec(),
            vel: start.vel.to_vec(),
        };
        if let Ok(long) = WisdomHolman::new(start, step_s)
            && long.trouble_within(TRY_AGAIN).is_none()
        {
            run.now = Now::Long(Box::new(long));
        }
        run
    }

    /// Until when the way is known, s.
    pub fn known_until_s(&self) -> f64 {
        match &self.now {
            Now::Long(long) => long.sure_until_s(),
            Now::Exact { radau, solved, .. } => radau.t_s() + if *solved { radau.step_s() } else { 0.0 },
        }
    }

    /// What it has done so far.
    pub const fn tally(&self) -> Tally {
        self.tally
    }

    /// Goes on towards `until_s` by at most so many steps. True once that instant is known.
    ///
    /// # Errors
    /// [`Stopped`] when it can't go on.
    pub fn advance(&mut self, until_s: f64, most_steps: usize) -> Result<bool, Stopped> {
        for _ in 0..most_steps {
            if self.knows(until_s) {
                return Ok(true);
            }
            self.step()?;
        }
        Ok(self.knows(until_s))
    }

    fn knows(&self, until_s: f64) -> bool {
        (self.known_until_s() - until_s) * self.step_s.signum() >= 0.0
    }

    /// Positions (m) and velocities (m/s) of all bodies at `t_s`, which lies within the last step made towards it: after
    /// [`LongRun::advance`] has said that `t_s` is known, and before it goes further.
    ///
    /// # Errors
    /// [`Stopped`] when a body meets the centre.
    pub fn state(&mut self, t_s: f64, pos: &mut [f64], vel: &mut [f64]) -> Result<(), Stopped> {
        match &mut self.now {
            Now::Long(long) => {
                let dt_s = t_s - long.t_s();
                long.state_after(dt_s, pos, vel).map_err(|trouble| lost(trouble, t_s))
            }
            Now::Exact { radau, solved, .. } => {
                let step_s = if *solved { radau.step_s() } else { 0.0 };
                if step_s == 0.0 {
                    radau.state(pos, vel);
                    return Ok(());
                }
                let share = (t_s - radau.t_s()) / step_s;
                for (body, (pos, vel)) in pos.chunks_exact_mut(3).zip(vel.chunks_exact_mut(3)).enumerate() {
                    evaluate(&radau.numbers(body), step_s, share, pos, vel);
                }
                Ok(())
            }
        }
    }

    fn step(&mut self) -> Result<(), Stopped> {
        match &mut self.now {
            Now::Long(long) => match long.step() {
                Ok(()) => {
                    self.tally.long_steps += 1;
                    Ok(())
                }
                Err(trouble) => self.leave_long_steps(trouble),
            },
            Now::Exact { radau, solved: false, .. } => {
                radau.solve(&mut self.field).map_err(|_too_small| Stopped::Collapse { t_s: radau.t_s() })?;
                self.tally.exact_steps += 1;
                if let Now::Exact { solved, .. } = &mut self.now {
                    *solved = true;
                }
                self.look_for_contact()
            }
            Now::Exact { radau, solved, again_s } => {
                radau.finish();
                *solved = false;
                let t_s = radau.t_s();
                if (t_s - *again_s) * self.step_s.signum() >= 0.0 {
                    *again_s = t_s + TRY_AGAIN * self.step_s;
                    radau.state(&mut self.pos, &mut self.vel);
                    self.try_long_steps(t_s);
                }
                Ok(())
            }
        }
    }

    /// Looks whether two bodies touch in the exact step that was solved. In long steps they keep apart by Hill radii.
    fn look_for_contact(&mut self) -> Result<(), Stopped> {
        let Now::Exact { radau, .. } = &self.now else { return Ok(()) };
        if self.radii_m.iter().all(|radius| *radius == 0.0) {
            return Ok(());
        }
        for sixteenth in 1..=16_u8 {
            let share = f64::from(sixteenth) / 16.0;
            let states = self.pos.chunks_exact_mut(3).zip(self.vel.chunks_exact_mut(3));
            for (body, (pos, vel)) in states.enumerate() {
                evaluate(&radau.numbers(body), radau.step_s(), share, pos, vel);
            }
            for a in 0..self.radii_m.len() {
                for b in a + 1..self.radii_m.len() {
                    let near_m = self.radii_m[a] + self.radii_m[b];
                    let mut apart2 = 0.0;
                    for axis in 0..3 {
                        let d = self.pos[3 * b + axis] - self.pos[3 * a + axis];
                        apart2 += d * d;
                    }
                    if apart2 < near_m * near_m {
                        return Err(Stopped::Contact {
                            bodies: [a, b],
                            t_s: radau.t_s() + share * radau.step_s(),
                        });
                    }
                }
            }
        }
        Ok(())
    }

    fn leave_long_steps(&mut self, trouble: Trouble) -> Result<(), Stopped> {
        let Now::Long(long) = &mut self.now else { return Ok(()) };
        let t_s = long.t_s();
        if matches!(trouble, Trouble::Lost { .. }) {
            return Err(lost(trouble, t_s));
        }
        long.state(&mut self.pos, &mut self.vel).map_err(|trouble| lost(trouble, t_s))?;
        self.tally.stretches += 1;
        self.tally.first.get_or_insert((trouble, t_s));
        self.now = Now::Exact {
            radau: Radau::new(t_s, &self.pos, &self.vel, 0.05 * self.step_s),
            solved: false,
            // The trouble lies beyond the steps gone back.
            again_s: t_s + 2.0 * TRY_AGAIN * self.step_s,
        };
        Ok(())
    }

    fn try_long_steps(&mut self, t_s: f64) {
        let start = Start {
            centre: self.centre,
            gms: &self.gms,
            pos: &self.pos,
            vel: &self.vel,
            t_s,
            relativity: self.relativity,
        };
        if let Ok(long) = WisdomHolman::new(&start, self.step_s)
            && long.trouble_within(TRY_AGAIN).is_none()
        {
            self.now = Now::Long(Box::new(long));
        }
    }
}

fn lost(trouble: Trouble, t_s: f64) -> Stopped {
    match trouble {
        Trouble::Lost { body } | Trouble::Steep { body } => Stopped::IntoCentre { body, t_s },
        Trouble::Near { .. } => Stopped::Collapse { t_s },
    }
}

/// Place and velocity at a share of a step of [`Radau`], from the polynomial of the acceleration.
fn evaluate(numbers: &[f64; PER_BODY], step_s: f64, share: f64, pos: &mut [f64], vel: &mut [f64]) {
    let t_s = share * step_s;
    for axis in 0..3 {
        let (mut bent, mut faster) = (0.0, 0.0);
        let mut k = 7.0;
        for b in (0..7).rev() {
            let b = numbers[9 + 3 * b + axis];
            bent = share * (bent + b / ((k + 1.0) * (k + 2.0)));
            faster = share * (faster + b / (k + 1.0));
            k -= 1.0;
        }
        let (x, v, a) = (numbers[axis], numbers[3 + axis], numbers[6 + axis]);
        pos[axis] = x + t_s * (v + t_s * (0.5 * a + bent));
        vel[axis] = v + t_s * (a + faster);
    }
}
