//! How the paths change with the start: first-order variations, integrated along paths that are known.
//!
//! A start that differs a little leads along a path beside the known one. To first order the difference obeys linear equations, whose
//! coefficients are the tides on the known path. They cost little: the tides of a step are worked out once for all variations, and
//! where only bodies without mass start otherwise, nothing but these is moved.
//!
//! Steps are as those of the paths: the acceleration is a polynomial of degree 7 through eight instants. As the equations are linear,
//! they need not be as short.
//!
//! Relativity is left out, which makes the derivatives off by a part of some v² / c². With drag, after a contact of a body that
//! varies, and after a kick whose direction varies, there are none.
//!
//! # Source
//! The equations: C. D. Murray and S. F. Dermott, Solar System Dynamics (1999), 9.2 (tangent equations); for all N bodies
//! S. Mikkola and K. Innanen, Celest. Mech. Dyn. Astr. 74 (1999), 59. The steps: E. Everhart, in Dynamics of Comets (1985), 185.

use super::{Ephemeris, State};
use crate::Vector3;
use crate::constants::C_M_S;
use crate::gravity::Tides;
use crate::initial::InitialState;
use crate::integrate::spacings::{
    B_FROM_G, INVERSE, POSITION_FROM_G, SPACINGS, position_weights, velocity_weights,
};
use crate::scenario::{BodyId, ChangeKind, Kick};
use nalgebra::Matrix3;

/// Length of a step in the shortest time scale, √(r³ / GM) or r / v, of all pairs that matter. The error of a step goes with the
/// 15th power of this: an orbit's derivatives come out to some 1e-12.
const STEP_IN_TIME_SCALES: f64 = 0.35;

/// Steps at most.
const MOST_STEPS: usize = 20_000;

/// Rounds of correction at most, and the relative change after which there is no need for more.
const MOST_ROUNDS: usize = 16;
const CONVERGED: f64 = 1e-13;

/// The largest v² / c² with which relativity is left out.
const SLIGHT: f64 = 1e-6;

/// Derivatives of a start by one number: what is varied.
#[derive(Debug, Clone, PartialEq)]
pub struct StartVariation {
    /// Of the state of each body.
    pub states: Vec<State>,
    /// Of the GM of each body, m³/s².
    pub gms_m3_s2: Vec<f64>,
}

/// Variations on their way along known paths, from time 0 on.
#[derive(Debug)]
pub struct Variations<'a> {
    initial: &'a InitialState,
    eph: &'a Ephemeris,
    starts: &'a [StartVariation],
    tides: Tides,
    /// The bodies that vary.
    moving: Vec<usize>,
    /// Instants at which something is done to the bodies; the last one first.
    halts_s: Vec<f64>,
    t_s: f64,
    /// Variations of the moving bodies, those of one start together.
    pos: Vec<Vector3<f64>>,
    vel: Vec<Vector3<f64>>,
    step: Step,
}

/// What a step needs.
#[derive(Debug, Default)]
struct Step {
    /// GM of each body, m³/s².
    gms: Vec<f64>,
    /// Of each body at one instant.
    places: Vec<Vector3<f64>>,
    /// Of each moving body at each instant: the tide of all others on it, and what each moving body does to it.
    own: [Vec<Matrix3<f64>>; 8],
    mutual: [Vec<Matrix3<f64>>; 8],
    /// Of each variation at each instant: what the change of masses does to it.
    direct: [Vec<Vector3<f64>>; 8],
    /// Accelerations of the variations at the start and at one instant, and the coefficients of their polynomials.
    start: Vec<Vector3<f64>>,
    acc: Vec<Vector3<f64>>,
    at: Vec<Vector3<f64>>,
    g: [Vec<Vector3<f64>>; 7],
}

impl<'a> Variations<'a> {
    /// Variations of the start of an ephemeris, for the bodies of `asked`. `None` where air slows one of those that vary, or relativity is
    /// more than slight.
    pub fn new(
        initial: &'a InitialState,
        eph: &'a Ephemeris,
        starts: &'a [StartVariation],
        asked: &[BodyId],
    ) -> Option<Self> {
        let still = |state: &State| state.pos == Vector3::zeros() && state.vel == Vector3::zeros();
        let bodies = &initial.bodies;
        let varies = |body: usize| {
            starts.iter().any(|start| !start.states.get(body).is_none_or(still) || gm_of(start, body) != 0.0)
        };
        let massive = |body: usize| {
            bodies[body].gm_m3_s2 != 0.0 || starts.iter().any(|start| gm_of(start, body) != 0.0)
        };
        // What has mass takes all others along; what has none matters only where it is asked for.
        let all = (0..bodies.len()).any(|body| massive(body) && varies(body));
        let matters = |body: usize| massive(body) || asked.contains(&BodyId(body));
        let moving: Vec<usize> =
            (0..bodies.len()).filter(|&body| matters(body) && (all || varies(body))).collect();
        if initial.forces.drags.iter().any(|drag| moving.contains(&drag.body.0)) {
            return None;
        }
        let fast = |body: &usize| bodies[*body].vel.norm_squared() > SLIGHT * C_M_S * C_M_S;
        if initial.forces.relativity && moving.iter().any(fast) {
            return None;
        }
        let mut halts_s: Vec<f64> = initial.changes.iter().map(|change| change.t_s).collect();
        halts_s.extend(eph.contacts().iter().map(|contact| contact.t_s).filter(|&t_s| t_s > 0.0));
        halts_s.sort_by(|a, b| b.total_cmp(a));
        let state = |start: &StartVariation, body: &usize| start.states.get(*body).copied();
        let states = || starts.iter().flat_map(|start| moving.iter().filter_map(move |b| state(start, b)));
        let (pos, vel): (Vec<_>, Vec<_>) = states().map(|state| (state.pos, state.vel)).unzip();
        if pos.len() != starts.len() * moving.len() {
            return None;
        }
        let step = Step::new(bodies.len(), moving.len(), pos.len());
        let tides = Tides::new(initial);
        Some(Self { initial, eph, starts, tides, moving, halts_s, t_s: 0.0, pos, vel, step })
    }

    /// Goes on to an instant, s; a contact at that very instant has not yet changed anything. `None` where it can't be reached.
    pub fn advance(&mut self, until_s: f64) -> Option<()> {
        if until_s > self.eph.until_s() || !self.is_smooth(until_s) {
            return None;
        }
        for _ in 0..MOST_STEPS {
            if self.t_s >= until_s {
                return Some(());
            }
            while self.halts_s.pop_if(|halt_s| *halt_s <= self.t_s).is_some() {}
            let end_s = self.halts_s.last().map_or(until_s, |halt_s| halt_s.min(until_s));
            let left_s = end_s - self.t_s;
            let longest_s = self.longest_step_s(left_s)?;
            let last = longest_s >= left_s;
            // Two even steps rather than a long one and a rest.
            let step_s = if last { left_s } else { longest_s.min(0.5 * left_s) };
            self.step(step_s)?;
            self.t_s = if last { end_s } else { self.t_s + step_s };
        }
        None
    }

    /// Variation of the state of one body relative to another, by the number of a start.
    pub fn relative(&self, start: usize, body: BodyId, about: BodyId) -> State {
        let of = |body: BodyId| {
            let place = self.moving.iter().position(|&moving| moving == body.0);
            place.map_or((Vector3::zeros(), Vector3::zeros()), |place| {
                let index = start * self.moving.len() + place;
                (self.pos[index], self.vel[index])
            })
        };
        let ((pos, vel), (about_pos, about_vel)) = (of(body), of(about));
        State { pos: pos - about_pos, vel: vel - about_vel }
    }

    /// Acceleration of one body relative to another on the known paths, m/s², at the instant that was reached; without relativity.
    pub fn acceleration(&self, body: BodyId, about: BodyId) -> Option<Vector3<f64>> {
        let of = |i: usize| {
            let here = self.eph.state(BodyId(i), self.t_s)?.pos;
            let mut sum = Vector3::zeros();
            for j in (0..self.initial.bodies.len()).filter(|&j| j != i) {
                let gm = self.eph.gm_m3_s2(BodyId(j), self.t_s);
                if gm != 0.0 {
                    sum += self.tides.between(i, j, here - self.eph.state(BodyId(j), self.t_s)?.pos).0 * gm;
                }
            }
            Some(sum)
        };
        Some(of(body.0)? - of(about.0)?)
    }

    /// Whether nothing on the way changes the motion of what varies otherwise than the tides do.
    fn is_smooth(&self, until_s: f64) -> bool {
        let moving = |body: BodyId| self.moving.contains(&body.0);
        let touched = self.eph.contacts().iter().any(|contact| {
            let pushes = self.eph.gm_m3_s2(contact.body, 0.0) != 0.0;
            (0.0..until_s).contains(&contact.t_s) && (moving(contact.body) || pushes && moving(contact.onto))
        });
        let kicked = self.initial.changes.iter().any(|change| {
            let ChangeKind::Kick(Kick::Along { about, .. }) = change.what else { return false };
            let about = about.or(self.initial.bodies.get(change.body.0).and_then(|body| body.primary));
            change.t_s < until_s && (moving(change.body) || about.is_some_and(moving))
        });
        !touched && !kicked
    }

    /// The longest step from here, s; at most `most_s`.
    fn longest_step_s(&self, most_s: f64) -> Option<f64> {
        let mut square = f64::INFINITY;
        for &i in &self.moving {
            let a = self.eph.state(BodyId(i), self.t_s)?;
            for j in (0..self.initial.bodies.len()).filter(|&j| j != i) {
                let gm = self.eph.gm_m3_s2(BodyId(j), self.t_s);
                if gm == 0.0 {
                    continue;
                }
                let b = self.eph.state(BodyId(j), self.t_s)?;
                let r = self.tides.reach_m(a.pos - b.pos);
                let gm = gm + self.eph.gm_m3_s2(BodyId(i), self.t_s);
                square = square.min(r * r * r / gm).min(r * r / (a.vel - b.vel).norm_squared());
            }
        }
        Some((STEP_IN_TIME_SCALES * square.sqrt()).min(most_s))
    }

    fn step(&mut self, step_s: f64) -> Option<()> {
        let (step, count) = (&mut self.step, self.moving.len());
        for (j, gm) in step.gms.iter_mut().enumerate() {
            *gm = self.eph.gm_m3_s2(BodyId(j), self.t_s + 0.5 * step_s);
        }
        for (node, spacing) in SPACINGS.iter().enumerate() {
            let t_s = self.t_s + spacing * step_s;
            for (j, place) in step.places.iter_mut().enumerate() {
                *place = self.eph.state(BodyId(j), t_s)?.pos;
            }
            step.look(node, &self.tides, &self.moving, self.starts);
        }
        step.at.copy_from_slice(&self.pos);
        step.accelerate(0, count);
        step.start.copy_from_slice(&step.acc);
        step.g.iter_mut().for_each(|g| g.fill(Vector3::zeros()));
        for _ in 0..MOST_ROUNDS {
            let mut changed = false;
            for node in 1..8 {
                let along = step_s * SPACINGS[node];
                for k in 0..self.pos.len() {
                    let mut bent = step.start[k] * POSITION_FROM_G[node][0];
                    for (g, weight) in step.g.iter().zip(&POSITION_FROM_G[node][1..]) {
                        bent += g[k] * *weight;
                    }
                    step.at[k] = self.pos[k] + self.vel[k] * along + bent * (step_s * step_s);
                }
                step.accelerate(node, count);
                for k in 0..self.pos.len() {
                    let mut g = (step.acc[k] - step.start[k]) * INVERSE[node][0];
                    for j in 1..node {
                        g = (g - step.g[j - 1][k]) * INVERSE[node][j];
                    }
                    changed |= node == 7 && (g - step.g[6][k]).norm() > CONVERGED * step.acc[k].norm();
                    step.g[node - 1][k] = g;
                }
            }
            if !changed {
                break;
            }
        }
        const POS: [f64; 8] = position_weights(1.0);
        const VEL: [f64; 8] = velocity_weights(1.0);
        for k in 0..self.pos.len() {
            let (mut bent, mut change) = (step.start[k] * POS[0], step.start[k] * VEL[0]);
            for power in 0..7 {
                let mut b = Vector3::zeros();
                for j in power..7 {
                    b += step.g[j][k] * B_FROM_G[j][power];
                }
                bent += b * POS[power + 1];
                change += b * VEL[power + 1];
            }
            self.pos[k] += self.vel[k] * step_s + bent * (step_s * step_s);
            self.vel[k] += change * step_s;
        }
        self.pos.iter().chain(&self.vel).all(|v| v.norm().is_finite()).then_some(())
    }
}

impl Step {
    fn new(bodies: usize, moving: usize, variations: usize) -> Self {
        let zeros = || vec![Vector3::zeros(); variations];
        Self {
            gms: vec![0.0; bodies],
            places: vec![Vector3::zeros(); bodies],
            own: std::array::from_fn(|_| vec![Matrix3::zeros(); moving]),
            mutual: std::array::from_fn(|_| vec![Matrix3::zeros(); moving * moving]),
            direct: std::array::from_fn(|_| zeros()),
            start: zeros(),
            acc: zeros(),
            at: zeros(),
            g: std::array::from_fn(|_| zeros()),
        }
    }

    /// Works out the tides at one of the eight instants, from where the bodies are there.
    fn look(&mut self, node: usize, tides: &Tides, moving: &[usize], starts: &[StartVariation]) {
        let count = moving.len();
        self.direct[node].fill(Vector3::zeros());
        self.mutual[node].fill(Matrix3::zeros());
        for (place, &i) in moving.iter().enumerate() {
            self.own[node][place] = Matrix3::zeros();
            for (j, &gm) in self.gms.iter().enumerate() {
                if j == i || gm == 0.0 {
                    continue;
                }
                let (pull, tide) = tides.between(i, j, self.places[i] - self.places[j]);
                self.own[node][place] += tide * gm;
                if let Some(other) = moving.iter().position(|&body| body == j) {
                    self.mutual[node][place * count + other] = tide * -gm;
                }
                for (start, direct) in starts.iter().zip(self.direct[node].chunks_exact_mut(count)) {
                    direct[place] += pull * gm_of(start, j);
                }
            }
        }
    }

    /// The accelerations of the variations where they are at one of the eight instants.
    fn accelerate(&mut self, node: usize, count: usize) {
        for (index, acc) in self.acc.iter_mut().enumerate() {
            let (first, place) = (index / count * count, index % count);
            *acc = self.direct[node][index] + self.own[node][place] * self.at[index];
            for (other, tide) in self.mutual[node][place * count..][..count].iter().enumerate() {
                *acc += tide * self.at[first + other];
            }
        }
    }
}

fn gm_of(start: &StartVariation, body: usize) -> f64 {
    start.gms_m3_s2.get(body).copied().unwrap_or(0.0)
}
