//! Tracers: what has no mass, by the thousand, in the same steps as the planets.
//!
//! Each drifts along its conic and is kicked by the planets where they are in the middle of the step; the corrector takes tracers along.
//! The term of second order is left out for them: it is some parts in 1e10 of their motion. What steps can't do is not done: a tracer that comes
//! within a Hill radius of a planet, too near to the centre for the steps, or too far away, is removed, and why is told.

use super::kepler::{self, LOST};
use super::kick::{self, Kick, PER_C2};
use super::rows::{Rows, by_lanes, lanes3};
use super::{STEEPEST, Trouble, WisdomHolman, dot, momentum, velocity};
use crate::math::float::cbrt;

/// A tracer nearer to a planet than this many of its Hill radii is removed: steps don't resolve what happens there.
pub const TRACER_HILL_RADII: f64 = 1.0;

/// Why a tracer was removed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Fate {
    /// It came within the inner distance, or so near to the centre that steps don't resolve its way.
    IntoCentre,
    /// It went beyond the outer distance.
    Away,
    /// It came within [`TRACER_HILL_RADII`] of a planet, named by its place in the list of bodies.
    Near(usize),
}

/// The tracers that are left, and what became of the others.
#[derive(Debug, Clone, Default, PartialEq)]
pub(super) struct Tracers {
    pub(super) rows: Rows,
    pub(super) shown: Rows,
    gms: Vec<f64>,
    done: Vec<f64>,
    /// Which tracer stands at a place of the rows.
    at: Vec<usize>,
    /// At which place a tracer stands, of those that are left.
    places: Vec<Option<usize>>,
    fates: Vec<Option<(Fate, f64)>>,
    /// Squares of the distances to planets and centre that end it, m².
    near_m2: Vec<f64>,
    inner_m2: f64,
    outer_m2: f64,
    steep_m2: f64,
}

impl WisdomHolman {
    /// Puts tracers in, in place of any that were there: positions (m) and velocities (m/s) in the frame of the start, at the end of the
    /// last step. `between_m` are the distances from the centre below and above which they are removed.
    ///
    /// # Errors
    /// [`Trouble::Lost`] when the corrector meets the centre.
    pub fn set_tracers(&mut self, pos: &[f64], vel: &[f64], between_m: [f64; 2]) -> Result<(), Trouble> {
        debug_assert_eq!(pos.len(), vel.len());
        let (n, gm, relativity) = (self.planets.len(), self.kick.centre_gm(), self.kick.relativity());
        let (mut places, mut speeds) = (vec![0.0; 3 * n + 3], vec![0.0; 3 * n + 3]);
        self.tracers = Tracers::default();
        self.state(&mut places, &mut speeds)?;
        let near_m = (0..n)
            .map(|planet| {
                let at = self.shown.pos_of(planet);
                TRACER_HILL_RADII * dot(at, at).sqrt() * cbrt(self.kick.gm(planet) / (3.0 * gm))
            })
            .collect();
        self.tracers = Tracers::of(pos.len() / 3, gm, self.step_s, near_m, between_m);
        for tracer in 0..pos.len() / 3 {
            let at = std::array::from_fn(|axis| pos[3 * tracer + axis] - places[3 * self.centre + axis]);
            let v = std::array::from_fn(|axis| vel[3 * tracer + axis] - self.barycentre[1][axis]);
            self.tracers.shown.set(tracer, at, momentum(relativity, gm, at, v));
        }
        self.correct(1.0, self.step_s)?;
        if self.kicked {
            self.drift_shown(-0.5 * self.step_s)?;
        }
        self.tracers.rows.copy_from(&self.tracers.shown);
        Ok(())
    }

    /// Place (m) and velocity (m/s) of a tracer relative to the centre, at the instant for which a state was last asked; `None` once
    /// it is removed.
    pub fn tracer(&self, tracer: usize) -> Option<([f64; 3], [f64; 3])> {
        let place = self.tracers.places.get(tracer).copied().flatten()?;
        let (at, p) = (self.tracers.shown.pos_of(place), self.tracers.shown.vel_of(place));
        let v = velocity(self.kick.relativity(), self.kick.centre_gm(), at, p);
        Some((at, std::array::from_fn(|axis| v[axis] + self.kick.sigma(axis, &self.shown))))
    }

    /// What became of a tracer, and when (s); `None` while it is on its way.
    pub fn fate(&self, tracer: usize) -> Option<(Fate, f64)> {
        self.tracers.fates.get(tracer).copied().flatten()
    }

    /// How many tracers are on their way.
    pub fn tracers_left(&self) -> usize {
        self.tracers.left()
    }
}

impl Tracers {
    /// Room for so many, all at the centre still. `near_m` are the distances from the planets.
    fn of(count: usize, gm: f64, step_s: f64, near_m: Vec<f64>, between_m: [f64; 2]) -> Self {
        let steep_m = cbrt(step_s * step_s * gm / STEEPEST);
        Self {
            rows: Rows::of(count),
            shown: Rows::of(count),
            gms: vec![gm; count],
            done: vec![0.0; count],
            at: (0..count).collect(),
            places: (0..count).map(Some).collect(),
            fates: vec![None; count],
            near_m2: near_m.into_iter().map(|near| near * near).collect(),
            inner_m2: between_m[0] * between_m[0],
            outer_m2: between_m[1] * between_m[1],
            steep_m2: steep_m * steep_m,
        }
    }

    pub(super) fn is_empty(&self) -> bool {
        self.at.is_empty()
    }

    fn left(&self) -> usize {
        self.at.len()
    }

    /// Drifts what the steps carry; those that fall into the centre are removed.
    pub(super) fn drift(&mut self, h_s: f64, slowing: f64, t_s: f64) {
        if kepler::drift(h_s, slowing, &self.gms, &mut self.rows, &mut self.done).is_err() {
            for place in (0..self.left()).rev() {
                if self.done[place] == LOST {
                    self.remove(place, Fate::IntoCentre, t_s);
                }
            }
        }
    }

    /// Drifts what is shown. Those that fall into the centre stay where they are: the next step removes them.
    pub(super) fn drift_shown(&mut self, h_s: f64, slowing: f64) {
        kepler::drift(h_s, slowing, &self.gms, &mut self.shown, &mut self.done).unwrap_or(());
    }

    /// Gives the kick that was worked out for the planets, before they get it, and removes what has to be; `bodies` are the places of
    /// the planets in the list of bodies.
    pub(super) fn kick(&mut self, h_s: f64, kick: &Kick, bodies: &[usize], t_s: f64) {
        if self.give(h_s, kick, false) == 0 {
            return;
        }
        for place in (0..self.left()).rev() {
            let pos = self.rows.pos_of(place);
            let r2 = dot(pos, pos);
            let near = (0..bodies.len()).find(|&planet| {
                let d: [f64; 3] = std::array::from_fn(|axis| kick.planets(axis)[planet] - pos[axis]);
                dot(d, d) < self.near_m2[planet]
            });
            if let Some(planet) = near {
                self.remove(place, Fate::Near(bodies[planet]), t_s);
            } else if r2 < self.inner_m2.max(self.steep_m2) {
                self.remove(place, Fate::IntoCentre, t_s);
            } else if r2.is_nan() || r2 > self.outer_m2 {
                self.remove(place, Fate::Away, t_s);
            }
        }
    }

    pub(super) fn kick_shown(&mut self, h_s: f64, kick: &Kick) {
        self.give(h_s, kick, true);
    }

    /// Gives the number of those that something is the matter with.
    fn give(&mut self, h_s: f64, kick: &Kick, shown: bool) -> usize {
        let mut found = 0;
        by_lanes!(self.left(), first, N => found += self.lanes::<N>(first, h_s, kick, shown));
        found
    }

    #[inline]
    fn lanes<const N: usize>(&mut self, first: usize, h_s: f64, kick: &Kick, shown: bool) -> usize {
        let rows = if shown { &mut self.shown } else { &mut self.rows };
        if kick.relativity() {
            kick::slip::<N>(first, 0.5 * h_s, rows);
        }
        let pos = lanes3::<N>(&rows.pos, first);
        let mut acc = [[0.0; N]; 3];
        let mut found = [0_u64; N];
        let [x, y, z] = [kick.planets(0), kick.planets(1), kick.planets(2)];
        for (planet, &near_m2) in self.near_m2.iter().enumerate() {
            let (at, gm) = ([x[planet], y[planet], z[planet]], kick.gm(planet));
            for l in 0..N {
                let d = [at[0] - pos[0][l], at[1] - pos[1][l], at[2] - pos[2][l]];
                let r2 = d[0] * d[0] + d[1] * d[1] + d[2] * d[2];
                let w = gm / (r2 * r2.sqrt());
                acc[0][l] += w * d[0];
                acc[1][l] += w * d[1];
                acc[2][l] += w * d[2];
                found[l] |= u64::from(r2 < near_m2);
            }
        }
        let shift = kick.shift();
        let closest_m2 = self.inner_m2.max(self.steep_m2);
        let bend = if kick.relativity() { 2.0 * kick.centre_gm() * kick.centre_gm() * PER_C2 } else { 0.0 };
        for l in 0..N {
            let q = [pos[0][l] + 0.5 * shift[0], pos[1][l] + 0.5 * shift[1], pos[2][l] + 0.5 * shift[2]];
            let r2 = q[0] * q[0] + q[1] * q[1] + q[2] * q[2];
            let own = bend / (r2 * r2);
            // What is not a number is found as well.
            found[l] |= u64::from(!((r2 >= closest_m2) & (r2 <= self.outer_m2)));
            for axis in 0..3 {
                acc[axis][l] = h_s * (acc[axis][l] - own * q[axis]);
            }
        }
        rows.add::<N>(first, &shift.map(|s| [s; N]), &acc);
        if kick.relativity() {
            kick::slip::<N>(first, 0.5 * h_s, rows);
        }
        found.iter().filter(|&&found| found != 0).count()
    }

    fn remove(&mut self, place: usize, fate: Fate, t_s: f64) {
        let tracer = self.at.swap_remove(place);
        self.rows.swap_remove(place);
        self.shown.swap_remove(place);
        self.gms.pop();
        self.done.swap_remove(place);
        self.places[tracer] = None;
        self.fates[tracer] = Some((fate, t_s));
        if let Some(&moved) = self.at.get(place) {
            self.places[moved] = Some(place);
        }
    }
}
