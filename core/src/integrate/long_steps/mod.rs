//! Whether bodies can go on by long steps, by which, and how exact that is: measured on a stretch of their way.

mod told;

pub use told::{describe, time};

use super::drift;
use super::wisdom_holman::{NEAR_HILL_RADII, STEPS_PER_PERIAPSIS, Start, Trouble, WisdomHolman};
use crate::Vector3;
use crate::conic::{ConicError, Elements, elements_from_state};
use crate::initial::InitialState;
use crate::math::float::cbrt;
use std::f64::consts::TAU;
use told::{LeftOut, left_out, tell};

/// Steps in the period of a circle at the lowest periapsis. The method's limit is [`STEPS_PER_PERIAPSIS`]; a third more keeps it
/// while orbits change.
const STEPS: f64 = 16.0;

/// The heaviest that all bodies together may be, in parts of the central one.
const HEAVIEST: f64 = 0.03;

/// The most drawn-out orbit: beyond it, steps that resolve periapsis are wasted on the rest, and Gauss-Radau is faster.
const MOST_ECCENTRIC: f64 = 0.9;

/// The most that forces left out may be of the centre's pull.
const LEFT_OUT: f64 = 1e-9;

/// Steps of the trial, if nothing comes between. It takes a tenth of a second.
const TRIAL_STEPS: u32 = 20_000;

/// Steps of a trial that tell enough. What comes earlier comes too often for long steps.
const LEAST_STEPS: u32 = 500;

/// Steps from look to look at the energy in the trial.
const LOOK_STEPS: u32 = 400;

/// Steps before the first trouble that belong to it: it takes steps back, and half steps notice it earlier.
const BEFORE_TROUBLE: u32 = 16;

/// The relative error of the energy above which steps are halved.
const ENERGY: f64 = 1e-9;

/// How bodies go by long steps.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Choice {
    /// The central body, by its place in the list of all bodies.
    pub centre: usize,
    /// Length of a step, s; above 0.
    pub step_s: f64,
    /// Largest relative error of the energy in the trial.
    pub energy_error: f64,
    /// Largest error of a place at the end of the trial, as an angle seen from the centre, rad.
    pub trial_error_rad: f64,
    /// How long the trial was, s.
    pub trial_s: f64,
}

impl Choice {
    /// Largest error of a place after so many seconds, as an angle seen from the centre, rad: that of the trial, growing evenly with time, as
    /// phases do; and roundings, a random walk of the mean motions of some 1e-17 a step, summed up over the steps.
    pub fn angle_error_rad(&self, span_s: f64) -> f64 {
        let steps = span_s.abs() / self.step_s;
        let trials = (span_s.abs() / self.trial_s).max(1.0);
        self.trial_error_rad * trials + 1e-17 * steps * steps.sqrt()
    }
}

/// The bodies that move by themselves, with those unseen companions that go round one of them taken as one with it.
#[derive(Debug, Clone, PartialEq)]
pub struct Members {
    /// Their places in the list of all bodies.
    pub bodies: Vec<usize>,
    /// Their GM, m³/s².
    pub gms: Vec<f64>,
    /// Their positions, m: three numbers each.
    pub pos: Vec<f64>,
    /// Their velocities, m/s.
    pub vel: Vec<f64>,
    /// Companions and what they were united with, by their places in the list of all bodies.
    pub united: Vec<(usize, usize)>,
}

impl Members {
    /// All bodies of an initial state, where they start.
    pub fn at_start(initial: &InitialState) -> Self {
        let bodies = &initial.bodies;
        Self::of(
            initial,
            (0..bodies.len()).collect(),
            bodies.iter().map(|body| body.gm_m3_s2).collect(),
            bodies.iter().flat_map(|body| <[f64; 3]>::from(body.pos)).collect(),
            bodies.iter().flat_map(|body| <[f64; 3]>::from(body.vel)).collect(),
        )
    }

    /// Some bodies on their way.
    pub fn of(
        initial: &InitialState,
        bodies: Vec<usize>,
        gms: Vec<f64>,
        pos: Vec<f64>,
        vel: Vec<f64>,
    ) -> Self {
        let mut it = Self { bodies, gms, pos, vel, united: Vec::new() };
        let heaviest = it.heaviest();
        while let Some((moon, host)) = (0..it.bodies.len())
            .filter(|&moon| it.bodies[moon] >= initial.listed)
            .find_map(|moon| Some((moon, it.host(moon).filter(|host| Some(*host) != heaviest)?)))
        {
            it.unite(moon, host);
        }
        it
    }

    fn heaviest(&self) -> Option<usize> {
        let gms = &self.gms;
        (0..gms.len()).max_by(|&a, &b| gms[a].total_cmp(&gms[b]).then(b.cmp(&a)))
    }

    fn pos_of(&self, place: usize) -> Vector3<f64> {
        Vector3::from_column_slice(&self.pos[3 * place..3 * place + 3])
    }

    fn vel_of(&self, place: usize) -> Vector3<f64> {
        Vector3::from_column_slice(&self.vel[3 * place..3 * place + 3])
    }

    /// The body other than the heaviest that one goes round: heavier than it, and bound to it.
    fn host(&self, place: usize) -> Option<usize> {
        let heaviest = self.heaviest();
        (0..self.bodies.len())
            .filter(|&other| other != place && Some(other) != heaviest)
            .filter(|&other| {
                let (own, others) = (self.gms[place], self.gms[other]);
                others > own || others >= own && others > 0.0 && other < place
            })
            .filter(|&other| {
                let (d, v) =
                    (self.pos_of(place) - self.pos_of(other), self.vel_of(place) - self.vel_of(other));
                0.5 * v.norm_squared() < (self.gms[place] + self.gms[other]) / d.norm()
            })
            .min_by(|&a, &b| {
                let far = |other: usize| (self.pos_of(place) - self.pos_of(other)).norm();
                far(a).total_cmp(&far(b))
            })
    }

    fn unite(&mut self, moon: usize, host: usize) {
        let all = self.gms[moon] + self.gms[host];
        let share = self.gms[moon] / all;
        for axis in 0..3 {
            for of in [&mut self.pos, &mut self.vel] {
                of[3 * host + axis] += share * (of[3 * moon + axis] - of[3 * host + axis]);
            }
        }
        self.gms[host] = all;
        self.united.push((self.bodies[moon], self.bodies[host]));
        self.bodies.remove(moon);
        self.gms.remove(moon);
        self.pos.drain(3 * moon..3 * moon + 3);
        self.vel.drain(3 * moon..3 * moon + 3);
    }

    /// As [`WisdomHolman`] takes them.
    pub fn start(&self, centre: usize, t_s: f64, relativity: bool) -> Start<'_> {
        Start { centre, gms: &self.gms, pos: &self.pos, vel: &self.vel, t_s, relativity }
    }
}

/// Chooses long steps for bodies from an instant on (or back from it), or says in whole sentences why it can't.
///
/// The errors are measured: on a trial stretch, from the energy, and from a second run with half the step.
///
/// # Errors
/// The reasons against.
pub fn choose(
    initial: &InitialState,
    members: &Members,
    t_s: f64,
    backward: bool,
) -> Result<Choice, Vec<String>> {
    let mut against = Vec::new();
    let gms = &members.gms;
    let Some(centre) = members.heaviest().filter(|&centre| gms.len() > 1 && gms[centre] > 0.0) else {
        return Err(vec!["Long steps need a central body with mass, and others about it.".to_owned()]);
    };
    let others: f64 = gms.iter().sum::<f64>() - gms[centre];
    if others > HEAVIEST * gms[centre] {
        against.push(format!(
            "Long steps need one body that outweighs all others; here the others together have {:.2} of the mass of {}.",
            others / gms[centre],
            initial.bodies[members.bodies[centre]].name
        ));
    }
    forces(initial, members, centre, &mut against);
    if let Some(change) = initial.changes.iter().find(|change| !backward && change.t_s > t_s) {
        against.push(format!(
            "Something is changed on the way, {} from the start, which long steps don't know of.",
            time(change.t_s)
        ));
    }
    let mut step_s = longest_step(initial, members, centre, &mut against);
    touching(initial, members, centre, step_s, &mut against);
    if !against.is_empty() {
        return Err(against);
    }
    let sign = if backward { -1.0 } else { 1.0 };
    let told = |trouble| vec![tell(initial, members, centre, trouble)];
    let newton = members.start(centre, t_s, false);
    let (mut energy_error, mut steps) = energy(&newton, sign * step_s).map_err(told)?;
    for _ in 0..3 {
        if energy_error > ENERGY {
            step_s *= 0.5;
            (energy_error, steps) = energy(&newton, sign * step_s).map_err(told)?;
        }
    }
    let start = members.start(centre, t_s, initial.forces.relativity);
    let trial_error_rad = difference(&start, sign * step_s, steps).map_err(told)?;
    let trial_s = f64::from(steps) * step_s;
    Ok(Choice { centre: members.bodies[centre], step_s, energy_error, trial_error_rad, trial_s })
}

/// Forces that long steps don't know of.
fn forces(initial: &InitialState, members: &Members, centre: usize, against: &mut Vec<String>) {
    let forces = &initial.forces;
    if forces.softening_m > 0.0 {
        against.push("Attraction is softened, which long steps don't know of.".to_owned());
    }
    for drag in forces.drags.iter().filter(|drag| members.bodies.contains(&drag.body.0)) {
        if !forces.atmospheres.is_empty() {
            let name = &initial.bodies[drag.body.0].name;
            against.push(format!("Air slows {name}, which long steps don't know of."));
        }
    }
    let much = left_out(initial, members, centre).into_iter().filter(|force| force.share > LEFT_OUT);
    against.extend(
        much.map(|LeftOut { what, share }| {
            format!("{what} can't be left out: it is {share:.0e} of the pull.")
        }),
    );
}

/// Orbit of a member about the centre.
fn orbit(members: &Members, centre: usize, place: usize) -> Result<Elements, ConicError> {
    elements_from_state(
        members.pos_of(place) - members.pos_of(centre),
        members.vel_of(place) - members.vel_of(centre),
        members.gms[centre] + members.gms[place],
    )
}

/// The step that resolves every periapsis, in whole seconds where it has them, s.
fn longest_step(initial: &InitialState, members: &Members, centre: usize, against: &mut Vec<String>) -> f64 {
    let gm = members.gms[centre];
    let name = |place: usize| initial.bodies[members.bodies[place]].name.as_str();
    let about = name(centre);
    let mut step_s = f64::INFINITY;
    for place in (0..members.bodies.len()).filter(|place| *place != centre) {
        match orbit(members, centre, place) {
            Ok(orbit) if orbit.eccentricity <= MOST_ECCENTRIC => {
                let q = orbit.periapsis_m;
                step_s = step_s.min(TAU * (q / gm * q * q).sqrt() / STEPS);
            }
            Ok(orbit) if orbit.eccentricity < 1.0 => against.push(format!(
                "The orbit of {} is so drawn out (eccentricity {:.3}) that short steps only where it is fast do better.",
                name(place), orbit.eccentricity
            )),
            Ok(_) | Err(ConicError::Rectilinear) => {
                against.push(format!("{} doesn't go round {about}.", name(place)));
            }
            Err(_) => against.push(format!("{} has no orbit about {about}.", name(place))),
        }
        if let Some(host) = members.host(place) {
            against.push(format!("{} goes round {}, not round {about} alone.", name(place), name(host)));
        }
    }
    if step_s > 100.0 { step_s.floor() } else { step_s }
}

/// Bodies that could touch in long steps: larger than the distance at which these are left.
fn touching(
    initial: &InitialState,
    members: &Members,
    centre: usize,
    step_s: f64,
    against: &mut Vec<String>,
) {
    let one = |place: usize| &initial.bodies[members.bodies[place]];
    let steep = step_s * STEPS_PER_PERIAPSIS / TAU;
    let steep_m = cbrt(members.gms[centre] * steep * steep);
    for a in (0..members.bodies.len()).filter(|place| *place != centre) {
        if one(a).radius_m + one(centre).radius_m > steep_m {
            against.push(format!(
                "{} goes so low over {} that it could touch it.",
                one(a).name,
                one(centre).name
            ));
        }
        for b in (a + 1..members.bodies.len()).filter(|place| *place != centre) {
            let both = members.gms[a] + members.gms[b];
            let far = 0.5 * (distance_m(members, centre, a) + distance_m(members, centre, b));
            let near_m = NEAR_HILL_RADII * far * cbrt(both / (3.0 * members.gms[centre]));
            if one(a).radius_m + one(b).radius_m > near_m {
                against.push(format!(
                    "{} and {} could touch where long steps don't see it.",
                    one(a).name,
                    one(b).name
                ));
            }
        }
    }
}

fn distance_m(members: &Members, centre: usize, place: usize) -> f64 {
    (members.pos_of(place) - members.pos_of(centre)).norm()
}

/// The largest relative error of Newton's energy in the trial, and how many steps it had: fewer where a trouble came.
fn energy(start: &Start<'_>, step_s: f64) -> Result<(f64, u32), Trouble> {
    let mut run = WisdomHolman::new(start, step_s)?;
    let (mut pos, mut vel) = (start.pos.to_vec(), start.vel.to_vec());
    let before = drift::energy(start.gms, &pos, &vel);
    let mut worst = 0.0_f64;
    for step in 1..=TRIAL_STEPS {
        if let Err(trouble) = run.step() {
            return if step > LEAST_STEPS { Ok((worst, step - BEFORE_TROUBLE)) } else { Err(trouble) };
        }
        if step % LOOK_STEPS == 0 {
            run.state(&mut pos, &mut vel)?;
            // Tracers alone have none.
            if before != 0.0 {
                worst = worst.max((drift::energy(start.gms, &pos, &vel) / before - 1.0).abs());
            }
        }
    }
    Ok((worst, TRIAL_STEPS))
}

/// How far, in radians seen from the centre, any place is after so many steps from where half of them bring it.
fn difference(start: &Start<'_>, step_s: f64, steps: u32) -> Result<f64, Trouble> {
    let end = |step_s: f64, steps: u32| -> Result<Vec<f64>, Trouble> {
        let mut run = WisdomHolman::new(start, step_s)?;
        for _ in 0..steps {
            run.step()?;
        }
        let (mut pos, mut vel) = (start.pos.to_vec(), start.vel.to_vec());
        run.state(&mut pos, &mut vel)?;
        Ok(pos)
    };
    let (one, other) = (end(step_s, steps)?, end(0.5 * step_s, 2 * steps)?);
    let mut worst = 0.0_f64;
    for body in (0..start.gms.len()).filter(|&body| body != start.centre) {
        let (mut off, mut far) = (0.0, 0.0);
        for axis in 0..3 {
            let (i, c) = (3 * body + axis, 3 * start.centre + axis);
            let (a, b) = (one[i] - one[c], other[i] - other[c]);
            off += (a - b) * (a - b);
            far += b * b;
        }
        worst = worst.max((off / far).sqrt());
    }
    Ok(worst)
}

#[cfg(test)]
mod tests;
