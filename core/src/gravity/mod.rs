//! The forces: one in each file, each adding its accelerations to those of the others.
//!
//! All of them work on flat arrays `[x0 y0 z0 x1 y1 z1 …]` in metres and metres a second, sum in a fixed order,
//! and allocate nothing. Forces between two bodies act both ways: but for relativity, whose momentum is another, Newton's
//! momentum is kept to rounding. A new force is a file with an `add` and a line in [`Field::accelerations`].

use crate::initial::{Forces, InitialState};

mod drag;
mod newton;
mod oblateness;
mod post_newtonian;
mod resting;
mod softening;
mod tide;

pub(crate) use drag::Drags;
use newton::Newton;
pub(crate) use oblateness::Bulge;
use post_newtonian::PostNewtonian;
use resting::Resting;
pub(crate) use tide::Tides;

/// Everything that pulls on the bodies of a scenario.
#[derive(Debug, Clone, PartialEq)]
pub struct Field {
    /// GM of each body, m³/s²; 0 for a tracer.
    gms: Vec<f64>,
    /// Which bodies have mass, in order.
    massive: Vec<usize>,
    newton: Newton,
    /// 0: points.
    softening_m: f64,
    relativity: Option<PostNewtonian>,
    bulges: Vec<Bulge>,
    drags: Vec<Drags>,
    resting: Resting,
}

impl Field {
    /// The field of all bodies of an initial state, in their order.
    pub fn new(initial: &InitialState) -> Self {
        let all: Vec<usize> = (0..initial.bodies.len()).collect();
        let gms = initial.bodies.iter().map(|body| body.gm_m3_s2).collect();
        Self::of(gms, &initial.forces, &all)
    }

    /// The field of some of the bodies: `gms` and `members` have the same order, `members` names their indices in
    /// `forces`. A force whose body isn't among them doesn't act.
    pub(crate) fn of(gms: Vec<f64>, forces: &Forces, members: &[usize]) -> Self {
        let local = |global: usize| members.iter().position(|&m| m == global);
        let massive: Vec<usize> = (0..gms.len()).filter(|&i| gms[i] != 0.0).collect();
        let newton = Newton::new(&gms);
        let relativity = forces.relativity.then(|| PostNewtonian::new(&gms));
        let bulges = forces.oblate.iter().filter_map(|o| Some(Bulge::new(local(o.body.0)?, o))).collect();
        let mut drags = Vec::new();
        for drag in &forces.drags {
            for air in forces.atmospheres.iter().filter(|air| air.body != drag.body) {
                if let (Some(body), Some(host)) = (local(drag.body.0), local(air.body.0)) {
                    drags.push(Drags::new(body, drag, host, air));
                }
            }
        }
        Self {
            gms,
            massive,
            newton,
            softening_m: forces.softening_m,
            relativity,
            bulges,
            drags,
            resting: Resting::default(),
        }
    }

    /// Adds a mass that rests on a body, at a fixed offset from its centre, m.
    pub(crate) fn rest(&mut self, host: usize, offset: [f64; 3], gm_m3_s2: f64) {
        self.resting.add_mass(&self.gms, host, offset, gm_m3_s2);
    }

    /// How many bodies it acts on.
    pub fn bodies(&self) -> usize {
        self.gms.len()
    }

    /// GM of each body, m³/s².
    pub fn gms_m3_s2(&self) -> &[f64] {
        &self.gms
    }

    /// Whether the accelerations depend on the velocities, with the slightest forces worked out `anew` or not.
    pub fn needs_velocities(&self, anew: bool) -> bool {
        anew && self.relativity.is_some() || !self.drags.is_empty()
    }

    /// The longest step that the forces allow from a state, s, where they allow less than gravity does: in air. It is not a
    /// number, or infinite, where they don't.
    pub fn longest_step_s(&self, pos: &[f64], vel: &[f64]) -> Option<f64> {
        let steps = self.drags.iter().map(|drag| drag.longest_step_s(&self.gms, pos, vel));
        steps.reduce(f64::min)
    }

    /// How much of the accelerations the slightest forces are at most. Taken as they were before positions and velocities
    /// changed by some part, they are off by that part of this.
    pub fn slight_share(&self) -> f64 {
        self.relativity.as_ref().map_or(0.0, PostNewtonian::share)
    }

    /// Accelerations of all bodies, m/s², into the first three numbers for each body of `out`.
    ///
    /// `pos` and `vel` hold at least three numbers for each body; `vel` is read only when
    /// [`Field::needs_velocities`]. Two bodies in the same place give infinities or NaN, unless they are softened.
    pub fn accelerations(&mut self, pos: &[f64], vel: &[f64], out: &mut [f64]) {
        self.accelerations_at(0, true, pos, vel, out);
    }

    /// As [`Field::accelerations`], at one of the eight instants of a step. The slightest forces, which cost most, are worked
    /// out only when `anew`; else they are taken as they last were at that instant. What that is off by is told by
    /// [`Field::slight_share`].
    pub fn accelerations_at(
        &mut self,
        instant: usize,
        anew: bool,
        pos: &[f64],
        vel: &[f64],
        out: &mut [f64],
    ) {
        let n = 3 * self.gms.len();
        let (pos, out) = (&pos[..n], &mut out[..n]);
        if self.softening_m == 0.0 {
            self.newton.set(pos, out);
        } else {
            softening::set(&self.gms, &self.massive, self.softening_m, pos, out);
        }
        if let Some(relativity) = &mut self.relativity {
            if anew {
                relativity.add(instant, pos, &vel[..n], out);
            } else {
                relativity.add_kept(instant, out);
            }
        }
        for bulge in &self.bulges {
            bulge.add(&self.gms, pos, out);
        }
        for drag in &self.drags {
            drag.add(&self.gms, pos, vel, out);
        }
        // Last: it shares out what the others found among the parts of a body.
        self.resting.add(&self.gms, self.softening_m, pos, out);
    }
}

#[cfg(test)]
mod symmetry_tests;

#[cfg(test)]
mod tests {
    use super::*;
    use crate::Vector3;
    use crate::air::Air;
    use crate::initial::{Atmosphere, Drag, InitialBody, Oblate};
    use crate::scenario::{BodyId, Surface};
    use proptest::prelude::*;

    fn body(gm: f64, pos: [f64; 3], vel: [f64; 3]) -> InitialBody {
        InitialBody {
            name: String::new(),
            gm_m3_s2: gm,
            radius_m: 0.0,
            surface: Surface::Stop,
            primary: None,
            pos: Vector3::from(pos),
            vel: Vector3::from(vel),
        }
    }

    prop_compose! {
        fn bodies()(rows in prop::collection::vec((prop_oneof![Just(0.0), 1e10..1e20_f64], prop::array::uniform3(-1e11..1e11_f64), prop::array::uniform3(-1e5..1e5_f64)), 2..8)) -> Vec<InitialBody> {
            rows.into_iter().map(|(gm, pos, vel)| body(gm, pos, vel)).collect()
        }
    }

    proptest! {
        #[test]
        fn all_forces_but_relativity_keep_momentum(bodies in bodies(), softening_m in prop_oneof![Just(0.0), 1e6..1e11_f64]) {
            let air = Atmosphere { body: BodyId(0), radius_m: 1e10, air: Air::exponential(1e-9, 1e10) };
            let forces = Forces {
                relativity: false,
                oblate: vec![Oblate { body: BodyId(1), j2: 0.01, radius_m: 7e6, pole: Vector3::new(0.0, 0.6, 0.8) }],
                // What has no mass takes up no momentum.
                atmospheres: if bodies[0].gm_m3_s2 > 0.0 { vec![air] } else { Vec::new() },
                drags: vec![Drag { body: BodyId(1), area_m2_kg: 1e-2 }],
                softening_m,
            };
            let pos: Vec<f64> = bodies.iter().flat_map(|b| b.pos.as_slice().to_vec()).collect();
            let vel: Vec<f64> = bodies.iter().flat_map(|b| b.vel.as_slice().to_vec()).collect();
            let listed = bodies.len();
            let mut field = Field::new(&InitialState { forces, ..InitialState::of(bodies) });
            field.rest(0, [1e6, 2e6, -3e6], 3e13);
            field.rest(1, [0.0, 2e5, 0.0], 3e11);
            let mut out = vec![0.0; pos.len()];
            field.accelerations(&pos, &vel, &mut out);
            let resting = [3e13, 3e11];
            let whole = |i: usize| field.gms_m3_s2()[i] + resting.get(i).copied().unwrap_or(0.0);
            let place = |i: usize| Vector3::from_column_slice(&pos[3 * i..3 * i + 3]);
            // Pulls of several bodies may all but cancel on one: what counts is how large they are by themselves.
            let mut pulls = 0.0;
            for i in 0..listed {
                for j in (0..listed).filter(|&j| j != i) {
                    pulls += whole(i) * whole(j) / (place(i) - place(j)).norm_squared();
                }
            }
            for axis in 0..3 {
                let (mut sum, mut gross) = (0.0, pulls);
                for i in 0..listed {
                    sum += whole(i) * out[3 * i + axis];
                    gross += (whole(i) * out[3 * i + axis]).abs();
                }
                // Rounding of at most eight terms, each itself a sum of eight.
                prop_assert!(sum.abs() <= 1e-14 * gross, "axis {axis}: {sum} of {gross}");
            }
        }
    }
}
