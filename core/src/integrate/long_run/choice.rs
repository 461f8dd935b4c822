//! Whether a scenario can go by long steps, by which, and how exact that is: measured on a stretch of it.

use super::super::drift;
use super::super::wisdom_holman::{NEAR_HILL_RADII, STEPS_PER_PERIAPSIS, Start, Trouble, WisdomHolman};
use crate::conic::{ConicError, elements_from_state};
use crate::constants::{ARCSEC_RAD, C_M_S, DAY_S, YEAR_S};
use crate::initial::InitialState;
use std::f64::consts::TAU;

/// Steps in the period of a circle at the lowest periapsis. The method's limit is [`STEPS_PER_PERIAPSIS`]; a third more keeps it
/// while orbits change.
const STEPS: f64 = 16.0;

/// The heaviest that all bodies together may be, in parts of the central one.
const HEAVIEST: f64 = 0.03;

/// The most drawn-out orbit: beyond it, steps that resolve periapsis are wasted on the rest, and Gauss-Radau is faster.
const MOST_ECCENTRIC: f64 = 0.9;

/// The most that forces left out may be of the centre's pull.
const LEFT_OUT: f64 = 1e-9;

/// Steps of the trial at most. It takes a tenth of a second.
const TRIAL_STEPS: f64 = 20_000.0;

/// Looks at the energy in the trial.
const LOOKS: f64 = 50.0;

/// The relative error of the energy above which steps are halved.
const ENERGY: f64 = 1e-9;

/// How a scenario goes by long steps.
#[derive(Debug, Clone, PartialEq)]
pub struct Choice {
    /// The central body, by its place in the list.
    pub centre: usize,
    /// Length of a step, s; above 0.
    pub step_s: f64,
    /// Largest relative error of the energy.
    pub energy_error: f64,
    /// Largest error of a place at the end of the span, as an angle seen from the centre, rad.
    pub angle_error_rad: f64,
    /// What to tell about it, in whole sentences.
    pub sentences: Vec<String>,
}

/// Chooses long steps for so many seconds of a scenario, or says in whole sentences why it can't.
///
/// The errors are measured: on a trial stretch, from the energy, and from a second run with half the step, whose difference
/// in places is taken to grow evenly with time, as phases do.
///
/// # Errors
/// The reasons against.
pub fn choose(initial: &InitialState, span_s: f64) -> Result<Choice, Vec<String>> {
    let (gms, pos, vel) = flat(initial);
    let mut against = Vec::new();
    let centre = (0..gms.len()).max_by(|&a, &b| gms[a].total_cmp(&gms[b]).then(b.cmp(&a)));
    let Some(centre) = centre.filter(|&centre| gms.len() > 1 && gms[centre] > 0.0) else {
        return Err(vec!["Long steps need a central body with mass, and others about it.".to_owned()]);
    };
    let name = |body: usize| initial.bodies[body].name.as_str();
    let others: f64 = gms.iter().sum::<f64>() - gms[centre];
    if others > HEAVIEST * gms[centre] {
        against.push(format!(
            "Long steps need one body that outweighs all others; here the others together have {:.2} of the mass of {}.",
            others / gms[centre],
            name(centre)
        ));
    }
    let mut sentences = Vec::new();
    forces(initial, centre, span_s, &mut sentences, &mut against);
    let step_s = match longest_step(initial, centre) {
        Ok(step_s) => step_s,
        Err(reasons) => {
            against.extend(reasons);
            return Err(against);
        }
    };
    if !against.is_empty() {
        return Err(against);
    }
    let start = |relativity| Start { centre, gms: &gms, pos: &pos, vel: &vel, t_s: 0.0, relativity };
    let told = |trouble| vec![tell(initial, centre, trouble)];
    let relativity = initial.forces.relativity;
    let mut step_s = step_s;
    let trial_s = span_s.abs().min(TRIAL_STEPS * step_s);
    let mut energy_error = energy(&start(false), step_s, trial_s).map_err(told)?;
    for _ in 0..3 {
        if energy_error > ENERGY {
            step_s = (0.5 * step_s).max(1.0);
            energy_error = energy(&start(false), step_s, trial_s).map_err(told)?;
        }
    }
    let off = difference(&start(relativity), step_s, trial_s).map_err(told)?;
    // Roundings: a random walk of the mean motions, some 1e-16 a step, summed up over the steps.
    let steps = span_s.abs() / step_s;
    let rounding = 1e-17 * steps * steps.sqrt();
    let angle_error_rad = off * (span_s.abs() / trial_s).max(1.0) + rounding;
    sentences.insert(
        0,
        format!(
            "Long steps of {} about {} (Wisdom-Holman with corrector): the energy stays within {energy_error:.0e} of itself, and places within {} as seen from {} after {}.",
            time(step_s),
            name(centre),
            angle(angle_error_rad),
            name(centre),
            time(span_s.abs()),
        ),
    );
    Ok(Choice { centre, step_s, energy_error, angle_error_rad, sentences })
}

fn flat(initial: &InitialState) -> (Vec<f64>, Vec<f64>, Vec<f64>) {
    let bodies = &initial.bodies;
    (
        bodies.iter().map(|body| body.gm_m3_s2).collect(),
        bodies.iter().flat_map(|body| <[f64; 3]>::from(body.pos)).collect(),
        bodies.iter().flat_map(|body| <[f64; 3]>::from(body.vel)).collect(),
    )
}

/// What of the forces is left out, and which can't be.
fn forces(
    initial: &InitialState,
    centre: usize,
    span_s: f64,
    sentences: &mut Vec<String>,
    against: &mut Vec<String>,
) {
    let (bodies, forces) = (&initial.bodies, &initial.forces);
    if forces.softening_m > 0.0 {
        against.push("Attraction is softened, which long steps don't know of.".to_owned());
    }
    for drag in &forces.drags {
        if !forces.atmospheres.is_empty() {
            against.push(format!("Air slows {}, which long steps don't know of.", bodies[drag.body.0].name));
        }
    }
    if let Some(change) = initial.changes.iter().find(|change| change.t_s <= span_s) {
        against.push(format!(
            "Something is changed on the way, {} from the start, which long steps don't know of.",
            time(change.t_s)
        ));
    }
    for oblate in &forces.oblate {
        let body = oblate.body.0;
        let nearest = (0..bodies.len())
            .filter(|&other| other != body)
            .map(|other| (bodies[other].pos - bodies[body].pos).norm())
            .fold(f64::INFINITY, f64::min);
        let share = 1.5 * oblate.j2 * (oblate.radius_m / nearest) * (oblate.radius_m / nearest);
        let name = &bodies[body].name;
        if share > LEFT_OUT {
            against.push(format!(
                "The bulge of {name} changes the pull on its neighbour by {share:.0e}, and long steps leave it out."
            ));
        } else {
            sentences.push(format!("The bulge of {name} is left out: {share:.0e} of its pull."));
        }
    }
    if forces.relativity {
        let heaviest = (0..bodies.len())
            .filter(|&body| body != centre)
            .map(|body| bodies[body].gm_m3_s2)
            .fold(0.0, f64::max);
        let nearest = (0..bodies.len())
            .filter(|&body| body != centre)
            .map(|body| (bodies[body].pos - bodies[centre].pos).norm())
            .fold(f64::INFINITY, f64::min);
        let share = bodies[centre].gm_m3_s2 / (C_M_S * C_M_S * nearest) * heaviest / bodies[centre].gm_m3_s2;
        sentences.push(format!(
            "Relativity is that of {} alone; that between the others is left out: some {share:.0e} of the pull.",
            bodies[centre].name
        ));
    }
}

/// The step that resolves every periapsis, in whole seconds where it has them.
fn longest_step(initial: &InitialState, centre: usize) -> Result<f64, Vec<String>> {
    let bodies = &initial.bodies;
    let gm = bodies[centre].gm_m3_s2;
    let mut against = Vec::new();
    let mut step_s = f64::INFINITY;
    for (index, body) in bodies.iter().enumerate().filter(|(index, _)| *index != centre) {
        let (pos, vel) = (body.pos - bodies[centre].pos, body.vel - bodies[centre].vel);
        let name = &body.name;
        match elements_from_state(pos, vel, gm + body.gm_m3_s2) {
            Ok(orbit) if orbit.eccentricity <= MOST_ECCENTRIC => {
                let q = orbit.periapsis_m;
                step_s = step_s.min(TAU * (q / gm * q * q).sqrt() / STEPS);
            }
            Ok(orbit) if orbit.eccentricity < 1.0 => against.push(format!(
                "The orbit of {name} is so drawn out (eccentricity {:.3}) that short steps only where it is fast do better.",
                orbit.eccentricity
            )),
            Ok(_) | Err(ConicError::Rectilinear) => {
                against.push(format!("{name} doesn't go round {}.", bodies[centre].name));
            }
            Err(_) => against.push(format!("{name} has no orbit about {}.", bodies[centre].name)),
        }
        // A moon: bound to another than the centre, and deep within its reach.
        for (other, host) in
            bodies.iter().enumerate().filter(|(other, _)| *other != index && *other != centre)
        {
            let (d, v) = (body.pos - host.pos, body.vel - host.vel);
            let both = body.gm_m3_s2 + host.gm_m3_s2;
            let bound = 0.5 * v.norm_squared() < both / d.norm();
            if bound && (other < index || body.gm_m3_s2 == 0.0) && host.gm_m3_s2 >= body.gm_m3_s2 {
                against.push(format!(
                    "{name} goes round {}, not round {} alone.",
                    host.name, bodies[centre].name
                ));
            }
        }
    }
    if !against.is_empty() {
        return Err(against);
    }
    Ok(if step_s > 100.0 { step_s.floor() } else { step_s })
}

/// The largest relative error of Newton's energy on the trial stretch.
fn energy(start: &Start<'_>, step_s: f64, trial_s: f64) -> Result<f64, Trouble> {
    let mut run = WisdomHolman::new(start, step_s)?;
    let (mut pos, mut vel) = (start.pos.to_vec(), start.vel.to_vec());
    let before = drift::energy(start.gms, &pos, &vel);
    let (mut worst, mut look_s) = (0.0_f64, 0.0);
    while run.t_s() < trial_s {
        run.step()?;
        if run.t_s() >= look_s {
            look_s += trial_s / LOOKS;
            run.state(&mut pos, &mut vel)?;
            // Tracers alone have none.
            if before != 0.0 {
                worst = worst.max((drift::energy(start.gms, &pos, &vel) / before - 1.0).abs());
            }
        }
    }
    Ok(worst)
}

/// How far, in radians seen from the centre, any place is from where half the step brings it, at the end of the trial stretch.
fn difference(start: &Start<'_>, step_s: f64, trial_s: f64) -> Result<f64, Trouble> {
    let end = |step_s: f64| -> Result<Vec<f64>, Trouble> {
        let mut run = WisdomHolman::new(start, step_s)?;
        while run.t_s() < trial_s {
            run.step()?;
        }
        let (mut pos, mut vel) = (start.pos.to_vec(), start.vel.to_vec());
        run.state_after(trial_s - run.t_s(), &mut pos, &mut vel)?;
        Ok(pos)
    };
    let (one, other) = (end(step_s)?, end(0.5 * step_s)?);
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

fn tell(initial: &InitialState, centre: usize, trouble: Trouble) -> String {
    let name = |body: usize| initial.bodies[body].name.as_str();
    match trouble {
        Trouble::Near { bodies: [a, b] } => format!(
            "{} and {} come within {NEAR_HILL_RADII:.0} Hill radii of each other, too near for long steps.",
            name(a),
            name(b)
        ),
        Trouble::Steep { body } => format!(
            "{} comes so near to {} that fewer than {STEPS_PER_PERIAPSIS:.0} long steps would go round there.",
            name(body),
            name(centre)
        ),
        Trouble::Lost { body } => format!("{} falls into {}.", name(body), name(centre)),
    }
}

fn time(t_s: f64) -> String {
    if t_s >= 2.0 * YEAR_S {
        format!("{:.0} yr", t_s / YEAR_S)
    } else if t_s >= DAY_S {
        format!("{:.2} d", t_s / DAY_S)
    } else {
        format!("{t_s:.0} s")
    }
}

fn angle(rad: f64) -> String {
    let arcsec = rad / ARCSEC_RAD;
    if arcsec < 0.1 {
        format!("{arcsec:.0e} arcsec")
    } else if arcsec < 100.0 {
        format!("{arcsec:.1} arcsec")
    } else if arcsec < 360_000.0 {
        format!("{:.1} deg", arcsec / 3600.0)
    } else {
        "nothing (they are lost)".to_owned()
    }
}
