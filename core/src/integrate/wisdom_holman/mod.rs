//! The Wisdom-Holman method: long spans of a planetary system, in steps of fixed length.
//!
//! Most of a planet's motion is its conic about the central body, which is known exactly; what the others do to it comes as kicks in the
//! middle of each step. The flow is symplectic, so energy errors don't grow with time but for roundings, and steps may be twenty times
//! longer than those of [`super::Radau`]. It can't do what isn't small: close passages, a periapsis that a step doesn't resolve,
//! moons. It says so ([`Trouble`]), and never goes on beyond.
//!
//! Coordinates are democratic heliocentric: places from the centre, velocities from the barycentre. What the steps carry is not the true
//! state, but one that differs from it by what is periodic with the step; a corrector of 11th order leads there and back.
//! The error of second order in the masses, which a corrector leaves, is made up for in each kick (`kick.rs` derives it). For the Sun
//! and eight planets and steps of 4 days the relative error of the energy is 2e-8 without corrector, 1e-11 with it, and 3e-13 with both.
//!
//! Forces: Newton's, and relativity of the central body to first order. Not: relativity between planets, oblateness, air, contacts,
//! changes on the way.
//!
//! # Source
//! J. Wisdom & M. Holman, AJ 102 (1991), 1528; M. J. Duncan, H. F. Levison & M. H. Lee, AJ 116 (1998), 2067; J. Wisdom, M. Holman &
//! J. Touma, Fields Inst. Commun. 10 (1996), 217. Those of the parts stand with them.

mod corrector;
mod kepler;
mod kick;
mod rows;
#[cfg(test)]
mod tests;
mod tracers;

pub use tracers::{Fate, TRACER_HILL_RADII};

use crate::math::float::cbrt;
use kepler::Lost;
use kick::{Kick, PER_C2};
use rows::Rows;
use std::f64::consts::TAU;
use tracers::Tracers;

/// Pairs nearer than this many of their common Hill radii are no longer planets that disturb one another a little.
pub const NEAR_HILL_RADII: f64 = 3.0;

/// Steps that the period of a circle at periapsis must have at least: with fewer, steps and turns begin to beat.
pub const STEPS_PER_PERIAPSIS: f64 = 12.0;

/// Why the method can't go on. Bodies are named by their places in the list that was given.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Trouble {
    /// Two bodies come within [`NEAR_HILL_RADII`] of each other in the next step.
    Near {
        /// Which ones.
        bodies: [usize; 2],
    },
    /// A body is so near the centre that [`STEPS_PER_PERIAPSIS`] no longer hold.
    Steep {
        /// Which one.
        body: usize,
    },
    /// A body falls into the centre, or its numbers are out of range. Its state is lost.
    Lost {
        /// Which one.
        body: usize,
    },
}

/// Where bodies start. Positions and velocities have three numbers for each body, in one inertial frame.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Start<'a> {
    /// The central body, by its place in the list.
    pub centre: usize,
    /// GM of all bodies, m³/s²; 0 for a tracer.
    pub gms: &'a [f64],
    /// Positions, m.
    pub pos: &'a [f64],
    /// Velocities, m/s.
    pub vel: &'a [f64],
    /// When, s.
    pub t_s: f64,
    /// Whether the central body acts by relativity to first order.
    pub relativity: bool,
}

/// Bodies on their way, one step at a time.
#[derive(Debug, Clone, PartialEq)]
pub struct WisdomHolman {
    centre: usize,
    /// Places in the list of all but the central body.
    planets: Vec<usize>,
    /// The centre's GM, once for each of them.
    gms: Vec<f64>,
    kick: Kick,
    slowing: f64,
    /// What the steps carry: after the kick of the last step where `kicked`, else at its end.
    rows: Rows,
    kicked: bool,
    /// The true state, while it is worked out.
    shown: Rows,
    done: Vec<f64>,
    tracers: Tracers,
    /// For each pair of planets, the distance that they may not come within, m.
    limits_m: Vec<f64>,
    /// Place and velocity of the barycentre at the start.
    barycentre: [[f64; 3]; 2],
    start_s: f64,
    step_s: f64,
    /// Whole steps since then.
    steps: f64,
}

impl WisdomHolman {
    /// Bodies at their start; `step_s` is negative where time goes back.
    ///
    /// # Errors
    /// [`Trouble::Lost`] when the corrector meets the centre.
    pub fn new(start: &Start<'_>, step_s: f64) -> Result<Self, Trouble> {
        let Start { centre, gms, pos, vel, t_s, relativity } = *start;
        debug_assert!(pos.len() == 3 * gms.len() && vel.len() == pos.len());
        let planets: Vec<usize> = (0..gms.len()).filter(|&body| body != centre).collect();
        let (n, gm) = (planets.len(), gms[centre]);
        let total: f64 = gms.iter().sum();
        let mean = |of: &[f64]| -> [f64; 3] {
            std::array::from_fn(|axis| {
                gms.iter().enumerate().map(|(i, gm)| gm * of[3 * i + axis]).sum::<f64>() / total
            })
        };
        let barycentre = [mean(pos), mean(vel)];
        let mut rows = Rows::of(n);
        for (place, &body) in planets.iter().enumerate() {
            let at: [f64; 3] = std::array::from_fn(|axis| pos[3 * body + axis] - pos[3 * centre + axis]);
            let v: [f64; 3] = std::array::from_fn(|axis| vel[3 * body + axis] - barycentre[1][axis]);
            rows.set(place, at, momentum(relativity, gm, at, v));
        }
        let planet_gms: Vec<f64> = planets.iter().map(|&body| gms[body]).collect();
        let mut it = Self {
            centre,
            gms: vec![gm; n],
            kick: Kick::new(gm, &planet_gms, relativity),
            slowing: if relativity { 1.5 * PER_C2 } else { 0.0 },
            shown: rows.clone(),
            rows,
            kicked: false,
            done: vec![0.0; n],
            tracers: Tracers::default(),
            limits_m: vec![0.0; n * n],
            barycentre,
            start_s: t_s,
            step_s,
            steps: 0.0,
            planets,
        };
        it.set_limits(&planet_gms);
        it.correct(1.0, step_s)?;
        it.rows.copy_from(&it.shown);
        Ok(it)
    }

    /// Time at the end of the last step, s.
    pub fn t_s(&self) -> f64 {
        self.start_s + self.steps * self.step_s
    }

    /// Until when no trouble ahead can be felt yet, s: a few steps before the end of the last, as far as [`Trouble`] would take it back.
    pub fn sure_until_s(&self) -> f64 {
        self.start_s + (self.steps - BACK).max(0.0) * self.step_s
    }

    /// Length of the steps, s; negative where time goes back.
    pub const fn step_s(&self) -> f64 {
        self.step_s
    }

    /// One step on.
    ///
    /// # Errors
    /// [`Trouble`]. The step is not made then; but for [`Trouble::Lost`], the run has gone back by a few steps that it had made, to where the
    /// corrector, which looks two steps ahead, meets nothing of the trouble. From the state there another method can go on.
    pub fn step(&mut self) -> Result<(), Trouble> {
        let h = self.step_s;
        let way = if self.kicked { h } else { 0.5 * h };
        self.drift(way)?;
        let noticed = self.kick.prepare(h, true, &mut self.rows);
        if (noticed.near > 0 || noticed.steepest > STEEPEST)
            && let Some(trouble) = self.trouble_within(0.5)
        {
            self.kick.leave(h, &mut self.rows);
            self.drift(-way)?;
            self.go_back()?;
            return Err(trouble);
        }
        if !self.tracers.is_empty() {
            let t_s = self.t_s();
            self.tracers.drift(way, self.slowing, t_s);
            self.tracers.kick(h, &self.kick, &self.planets, t_s + 0.5 * h);
        }
        self.kick.give(h, &mut self.rows);
        self.kicked = true;
        self.steps += 1.0;
        Ok(())
    }

    /// Unmakes the last few steps, as far as there are any.
    fn go_back(&mut self) -> Result<(), Trouble> {
        let h = self.step_s;
        self.show()?;
        let mut left = BACK;
        while left > 0.0 && self.steps > 0.0 {
            self.step_shown(-h)?;
            self.steps -= 1.0;
            left -= 1.0;
        }
        self.rows.copy_from(&self.shown);
        self.tracers.rows.copy_from(&self.tracers.shown);
        self.kicked = false;
        Ok(())
    }

    /// The true state at the end of the last step: positions (m) and velocities (m/s) of all bodies, in the order and frame of
    /// the start.
    ///
    /// # Errors
    /// [`Trouble::Lost`] when the corrector meets the centre.
    pub fn state(&mut self, pos: &mut [f64], vel: &mut [f64]) -> Result<(), Trouble> {
        self.state_after(0.0, pos, vel)
    }

    /// The same, some seconds after the end of the last step, by one step of that length, which may be as long as a step; or some
    /// seconds before it, by unmaking steps. Nothing of the run itself changes.
    ///
    /// # Errors
    /// [`Trouble::Lost`] when a body meets the centre.
    pub fn state_after(&mut self, dt_s: f64, pos: &mut [f64], vel: &mut [f64]) -> Result<(), Trouble> {
        self.show()?;
        let t_s = self.t_s() + dt_s;
        let mut dt_s = dt_s;
        while dt_s / self.step_s <= -1.0 {
            self.step_shown(-self.step_s)?;
            dt_s += self.step_s;
        }
        self.correct(-1.0, self.step_s)?;
        if dt_s != 0.0 {
            self.correct(1.0, dt_s)?;
            self.step_shown(dt_s)?;
            self.correct(-1.0, dt_s)?;
        }
        self.write(t_s, pos, vel);
        Ok(())
    }

    /// From what is shown to inertial axes.
    fn write(&self, t_s: f64, pos: &mut [f64], vel: &mut [f64]) {
        let shares = self.kick.shares();
        let whole = 1.0 + shares.iter().sum::<f64>();
        for axis in 0..3 {
            let (mut place, mut speed) = (0.0, 0.0);
            for (i, share) in shares.iter().enumerate() {
                place += share * self.shown.pos[axis][i];
                speed += share * self.shown.vel[axis][i];
            }
            let [at, going] = [self.barycentre[0][axis], self.barycentre[1][axis]];
            let place = at + going * (t_s - self.start_s) - place / whole;
            pos[3 * self.centre + axis] = place;
            vel[3 * self.centre + axis] = going - speed;
            for (i, &body) in self.planets.iter().enumerate() {
                pos[3 * body + axis] = place + self.shown.pos[axis][i];
                vel[3 * body + axis] = self.shown.vel[axis][i];
            }
        }
        for (i, &body) in self.planets.iter().enumerate() {
            let (at, p) = (self.shown.pos_of(i), self.shown.vel_of(i));
            let v = velocity(self.kick.relativity(), self.gms[i], at, p);
            for axis in 0..3 {
                vel[3 * body + axis] = self.barycentre[1][axis] + v[axis];
            }
        }
    }

    fn drift(&mut self, h_s: f64) -> Result<(), Trouble> {
        kepler::drift(h_s, self.slowing, &self.gms, &mut self.rows, &mut self.done)
            .map_err(|Lost(place)| Trouble::Lost { body: self.planets[place] })
    }

    fn drift_shown(&mut self, h_s: f64) -> Result<(), Trouble> {
        self.tracers.drift_shown(h_s, self.slowing);
        kepler::drift(h_s, self.slowing, &self.gms, &mut self.shown, &mut self.done)
            .map_err(|Lost(place)| Trouble::Lost { body: self.planets[place] })
    }

    /// Copies what the steps carry, to the end of the last step.
    fn show(&mut self) -> Result<(), Trouble> {
        self.shown.copy_from(&self.rows);
        self.tracers.shown.copy_from(&self.tracers.rows);
        if self.kicked { self.drift_shown(0.5 * self.step_s) } else { Ok(()) }
    }

    fn step_shown(&mut self, h_s: f64) -> Result<(), Trouble> {
        self.drift_shown(0.5 * h_s)?;
        self.kick_shown(h_s, true);
        self.drift_shown(0.5 * h_s)
    }

    fn kick_shown(&mut self, h_s: f64, whole: bool) {
        self.kick.prepare(h_s, whole, &mut self.shown);
        self.tracers.kick_shown(h_s, &self.kick);
        self.kick.give(h_s, &mut self.shown);
    }

    /// Takes what is shown from the true state to that of steps of `h_s`, or back where `sign` is -1.
    fn correct(&mut self, sign: f64, h_s: f64) -> Result<(), Trouble> {
        corrector::kicks(sign, |place, length| {
            self.drift_shown(place * h_s)?;
            self.kick_shown(length * h_s, false);
            self.drift_shown(-place * h_s)
        })
    }

    /// What each pair may come within, and from where on it is looked at closely: from where it could get there within half a step.
    fn set_limits(&mut self, gms: &[f64]) {
        let n = gms.len();
        let centre = self.gms.first().copied().unwrap_or_default();
        let reach: Vec<(f64, f64)> = (0..n)
            .map(|i| {
                let (pos, vel) = (self.rows.pos_of(i), self.rows.vel_of(i));
                let (r, v2, along) = (dot(pos, pos).sqrt(), dot(vel, vel), dot(pos, vel));
                let energy = 2.0 / r - v2 / centre;
                let size = if energy * r > 0.1 { 1.0 / energy } else { r };
                // The fastest is at periapsis, p / (1 + e) from the centre: there the speed is GM (1 + e) / |r × v|.
                let momentum = (r * r * v2 - along * along).max(0.0).sqrt();
                let eccentricity = (1.0 - momentum * momentum / centre * energy).max(0.0).sqrt();
                (size, (centre * (1.0 + eccentricity) / momentum).max(v2.sqrt()))
            })
            .collect();
        let half_s = 0.5 * self.step_s.abs();
        let limits = &mut self.limits_m;
        self.kick.watch(|i, j| {
            let both = gms[i] + gms[j];
            let hill = cbrt(both / (3.0 * centre)) * 0.5 * (reach[i].0 + reach[j].0);
            (limits[n * i + j], limits[n * j + i]) = (NEAR_HILL_RADII * hill, NEAR_HILL_RADII * hill);
            if both == 0.0 { 0.0 } else { NEAR_HILL_RADII * hill + half_s * (reach[i].1 + reach[j].1) }
        });
    }

    /// What is the matter within so many steps both ways, if anything is, with each pair on its straight way.
    #[cold]
    pub(crate) fn trouble_within(&self, steps: f64) -> Option<Trouble> {
        let n = self.planets.len();
        let distance = |i: usize| dot(self.rows.pos_of(i), self.rows.pos_of(i)).sqrt();
        let nearest = (0..n).min_by(|&a, &b| distance(a).total_cmp(&distance(b)))?;
        let r = distance(nearest);
        if self.step_s * self.step_s * self.gms[nearest] > STEEPEST * r * r * r {
            return Some(Trouble::Steep { body: self.planets[nearest] });
        }
        let half_s = steps * self.step_s.abs();
        for i in 0..n {
            for j in i + 1..n {
                let minus = |a: [f64; 3], b: [f64; 3]| [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
                let d = minus(self.rows.pos_of(j), self.rows.pos_of(i));
                let v = minus(self.rows.vel_of(j), self.rows.vel_of(i));
                let nearest_s = (-dot(d, v) / dot(v, v).max(f64::MIN_POSITIVE)).clamp(-half_s, half_s);
                let then: [f64; 3] = std::array::from_fn(|axis| d[axis] + nearest_s * v[axis]);
                if dot(then, then).sqrt() < self.limits_m[n * i + j] {
                    return Some(Trouble::Near { bodies: [self.planets[i], self.planets[j]] });
                }
            }
        }
        None
    }
}

/// Steps gone back before a trouble: the reach of the corrector, and one more.
const BACK: f64 = 3.0;

/// The largest h² GM / r³ of a step that resolves periapsis.
const STEEPEST: f64 = (TAU / STEPS_PER_PERIAPSIS) * (TAU / STEPS_PER_PERIAPSIS);

/// Momentum over mass, which is what kicks change: by relativity it is a little more than the velocity.
fn momentum(relativity: bool, gm: f64, at: [f64; 3], v: [f64; 3]) -> [f64; 3] {
    if !relativity {
        return v;
    }
    let more = 1.0 + PER_C2 * (0.5 * dot(v, v) + 3.0 * gm / dot(at, at).sqrt());
    v.map(|v| v * more)
}

/// The velocity that belongs to a momentum over mass.
fn velocity(relativity: bool, gm: f64, at: [f64; 3], p: [f64; 3]) -> [f64; 3] {
    if !relativity {
        return p;
    }
    let less = 1.0 - PER_C2 * (0.5 * dot(p, p) + 3.0 * gm / dot(at, at).sqrt());
    p.map(|p| p * less)
}

fn dot(a: [f64; 3], b: [f64; 3]) -> f64 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}
