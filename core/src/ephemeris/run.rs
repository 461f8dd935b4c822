//! The integration in one direction of time: steps, contacts, changes, and what these do to the bodies.

mod lift;

use super::changes::added;
use super::knots::Rider;
use super::track::evaluate;
use super::{Contact, Outcome, Release, State, Stopped, Switch, Why, touch};
use crate::Vector3;
use crate::gravity::Field;
use crate::initial::InitialState;
use crate::integrate::long_steps::Members;
use crate::integrate::{PER_BODY, Radau, StepTooSmall};
use crate::scenario::{BodyId, ChangeKind, Kick, Surface};
use lift::{Laid, is_seen};

/// When a contact is noted that happens at the very start of the backward run, s: it belongs to the time before 0.
const JUST_BEFORE_START_S: f64 = -1e-9;

/// A body at rest on another.
#[derive(Debug, Clone, Copy)]
struct AtRest {
    body: usize,
    host: usize,
    offset: Vector3<f64>,
}

/// What a step ended in.
pub(super) struct Step {
    /// Start and length, s; no length where a contact or a change came at once.
    pub(super) start_s: f64,
    pub(super) step_s: f64,
    pub(super) contact: Option<Contact>,
    pub(super) switches: Vec<Switch>,
    pub(super) releases: Vec<Release>,
    /// Whether the motion goes on otherwise from its end: a contact, or a change.
    pub(super) cut: bool,
}

/// The integration in one direction of time.
#[derive(Debug, Clone)]
pub(super) struct Run {
    /// The bodies that move by themselves.
    free: Vec<usize>,
    at_rest: Vec<AtRest>,
    laid: Vec<Laid>,
    /// GM of every body, after merges.
    gms: Vec<f64>,
    /// Whether the gravity of each body acts.
    acts: Vec<bool>,
    /// How many of the changes have been made.
    changed: usize,
    /// Whether bodies can touch.
    solid: bool,
    /// Pairs of places in `free` that can touch, with the distance at which they do.
    pairs: Vec<(usize, usize, f64)>,
    field: Field,
    radau: Radau,
    /// Share of the usual length that steps have.
    step_share: f64,
    /// Numbers of the free bodies in the step.
    moving: Vec<f64>,
    /// Numbers of all bodies in the step.
    numbers: Vec<f64>,
    reaches_m: Vec<f64>,
    /// Positions and velocities of the free bodies, where the field looks at them before a step.
    pos: Vec<f64>,
    vel: Vec<f64>,
}

impl Run {
    /// From time 0; `direction` is 1 or -1.
    pub(super) fn new(initial: &InitialState, direction: f64) -> Self {
        let states: Vec<State> = initial.bodies.iter().map(|b| State { pos: b.pos, vel: b.vel }).collect();
        let gms: Vec<f64> = initial.bodies.iter().map(|body| body.gm_m3_s2).collect();
        let first_s = direction * first_step_s(&gms, &states);
        let n = states.len();
        let mut run = Self {
            free: (0..n).collect(),
            at_rest: Vec::new(),
            laid: Vec::new(),
            gms,
            acts: vec![true; n],
            changed: if direction < 0.0 { initial.changes.len() } else { 0 },
            solid: true,
            pairs: Vec::new(),
            field: Field::new(initial),
            radau: Radau::new(0.0, &[], &[], first_s),
            step_share: 1.0,
            moving: Vec::new(),
            numbers: vec![0.0; n * PER_BODY],
            reaches_m: Vec::new(),
            pos: Vec::new(),
            vel: Vec::new(),
        };
        run.set_off(initial, 0.0, &states, first_s);
        run
    }

    /// Without contacts: every body goes through every other.
    pub(super) fn without_contacts(initial: &InitialState, direction: f64) -> Self {
        let mut run = Self::new(initial, direction);
        run.solid = false;
        run.pairs.clear();
        run
    }

    /// Makes all steps a share of their usual length.
    pub(super) fn set_step_share(&mut self, share: f64) {
        self.step_share = share;
        self.radau.set_step_share(share);
    }

    /// Time reached, s.
    pub(super) const fn t_s(&self) -> f64 {
        self.radau.t_s()
    }

    /// The numbers of all bodies in the last step.
    pub(super) fn numbers(&self) -> &[f64] {
        &self.numbers
    }

    /// On which body each body rests; itself where it moves freely.
    pub(super) fn hosts(&self) -> impl Iterator<Item = usize> {
        let host = |body| self.at_rest.iter().find(|rest| rest.body == body).map_or(body, |rest| rest.host);
        (0..self.gms.len()).map(host)
    }

    /// The bodies that move by themselves where the integration stands, each with the mass of what rests on it.
    pub(super) fn members(&self, initial: &InitialState) -> Members {
        let states = self.states();
        let pull = |&body: &usize| {
            let resting = self.at_rest.iter().filter(|rest| rest.host == body).map(|rest| rest.body);
            let all = std::iter::once(body).chain(resting).filter(|&body| self.acts[body]);
            all.map(|body| self.gms[body]).sum()
        };
        Members::of(
            initial,
            self.free.clone(),
            self.free.iter().map(pull).collect(),
            states.iter().flat_map(|state| <[f64; 3]>::from(state.pos)).collect(),
            states.iter().flat_map(|state| <[f64; 3]>::from(state.vel)).collect(),
        )
    }

    /// The bodies that rest on others.
    pub(super) fn riders(&self) -> impl Iterator<Item = Rider> {
        self.at_rest.iter().map(|rest| Rider { body: rest.body, host: rest.host, offset: rest.offset.into() })
    }

    /// Takes a companion that is not shown as one with the body that it goes round, from where the integration stands.
    pub(super) fn unite(&mut self, initial: &InitialState, moon: usize, host: usize) {
        let mut states = self.states();
        let place = |body: usize| self.free.iter().position(|&free| free == body);
        let (Some(at), Some(onto)) = (place(moon), place(host)) else { return };
        let share = self.gms[moon] / (self.gms[moon] + self.gms[host]);
        let (moon_state, host_state) = (states[at], states[onto]);
        states[onto] = State {
            pos: host_state.pos + (moon_state.pos - host_state.pos) * share,
            vel: host_state.vel + (moon_state.vel - host_state.vel) * share,
        };
        self.gms[host] += self.gms[moon];
        self.gms[moon] = 0.0;
        self.at_rest.push(AtRest { body: moon, host, offset: Vector3::zeros() });
        self.free.remove(at);
        states.remove(at);
        self.set_off(initial, self.t_s(), &states, self.radau.step_s());
    }

    /// Starts from states of the free bodies.
    pub(super) fn set_off(&mut self, initial: &InitialState, t_s: f64, states: &[State], first_step_s: f64) {
        self.pos.clear();
        self.pos.extend(states.iter().flat_map(|s| <[f64; 3]>::from(s.pos)));
        self.vel.clear();
        self.vel.extend(states.iter().flat_map(|s| <[f64; 3]>::from(s.vel)));
        self.radau = Radau::new(t_s, &self.pos, &self.vel, first_step_s);
        self.radau.set_step_share(self.step_share);
        let pull = |body: usize| if self.acts[body] { self.gms[body] } else { 0.0 };
        self.field =
            Field::of(self.free.iter().map(|&body| pull(body)).collect(), &initial.forces, &self.free);
        for rest in &self.at_rest {
            if let Some(host) = self.free.iter().position(|&body| body == rest.host)
                && pull(rest.body) != 0.0
            {
                self.field.rest(host, rest.offset.into(), pull(rest.body));
            }
        }
        self.moving.resize(self.free.len() * PER_BODY, 0.0);
        self.pairs.clear();
        if !self.solid {
            return;
        }
        for i in 0..self.free.len() {
            for j in i + 1..self.free.len() {
                let radius_m = initial.bodies[self.free[i]].radius_m + initial.bodies[self.free[j]].radius_m;
                if radius_m > 0.0 {
                    self.pairs.push((i, j, radius_m));
                }
            }
        }
    }

    /// One step, cut short by the first contact or change in it.
    pub(super) fn step(&mut self, initial: &InitialState) -> Result<Step, StepTooSmall> {
        let start_s = self.radau.t_s();
        let change_s = initial.changes.get(self.changed).map(|change| change.t_s);
        if let Some(t_s) = change_s.filter(|&t_s| t_s <= start_s) {
            let (switches, releases) = self.change(initial, t_s, self.states(), self.radau.step_s());
            return Ok(Step { start_s, step_s: 0.0, contact: None, switches, releases, cut: true });
        }
        self.radau.state(&mut self.pos, &mut self.vel);
        if let Some(longest_s) = self.field.longest_step_s(&self.pos, &self.vel) {
            self.radau.limit_step(longest_s);
        }
        self.radau.solve(&mut self.field)?;
        for (place, numbers) in self.moving.chunks_exact_mut(PER_BODY).enumerate() {
            numbers.copy_from_slice(&self.radau.numbers(place));
        }
        let whole_s = self.radau.step_s();
        let touch = self.first_touch(whole_s).map(|(i, j, h)| (i, j, start_s + h * whole_s));
        // A contact at the very instant of a change comes first: it belongs to what was before.
        let touch = touch.filter(|&(_, _, t_s)| change_s.is_none_or(|change_s| t_s <= change_s));
        let Some((i, j, t_s)) = touch else {
            let Some(change_s) = change_s.filter(|&change_s| change_s < start_s + whole_s) else {
                self.spread();
                self.radau.finish();
                return Ok(Step {
                    start_s,
                    step_s: whole_s,
                    contact: None,
                    switches: Vec::new(),
                    releases: Vec::new(),
                    cut: false,
                });
            };
            let step_s = change_s - start_s;
            let states = self.cut(whole_s, step_s / whole_s);
            let (switches, releases) = self.change(initial, change_s, states, whole_s);
            return Ok(Step { start_s, step_s, contact: None, switches, releases, cut: true });
        };
        let step_s = t_s - start_s;
        let mut states = self.cut(whole_s, step_s / whole_s);
        let mut contact = self.collide(initial, i, j, &mut states);
        contact.t_s = if whole_s < 0.0 && t_s >= 0.0 { JUST_BEFORE_START_S } else { t_s };
        self.set_off(initial, t_s, &states, whole_s);
        let (switches, releases) = (Vec::new(), Vec::new());
        Ok(Step { start_s, step_s, contact: Some(contact), switches, releases, cut: true })
    }

    /// Ends the step at a part of it, and gives the states there.
    fn cut(&mut self, whole_s: f64, h: f64) -> Vec<State> {
        let states = self.moving.chunks_exact(PER_BODY).map(|n| evaluate(n, whole_s, h)).collect();
        shorten(&mut self.moving, h);
        self.spread();
        states
    }

    /// States of the free bodies where the integration stands.
    fn states(&self) -> Vec<State> {
        let (mut pos, mut vel) = (self.pos.clone(), self.vel.clone());
        self.radau.state(&mut pos, &mut vel);
        states_of(&pos, &vel)
    }

    /// Makes all changes up to an instant, from states of the free bodies there, and sets off anew.
    fn change(
        &mut self,
        initial: &InitialState,
        t_s: f64,
        mut states: Vec<State>,
        step_s: f64,
    ) -> (Vec<Switch>, Vec<Release>) {
        let (mut switches, mut releases) = (Vec::new(), Vec::new());
        while let Some(change) = initial.changes.get(self.changed).filter(|change| change.t_s <= t_s) {
            self.changed += 1;
            match &change.what {
                ChangeKind::Gravity { on } => {
                    self.acts[change.body.0] = *on;
                    switches.push(Switch { t_s, body: change.body, on: *on });
                }
                ChangeKind::Kick(kick) => {
                    let about = match kick {
                        Kick::Along { about, .. } => about.or(initial.bodies[change.body.0].primary),
                        Kick::By(_) => None,
                    };
                    let still = State { pos: Vector3::zeros(), vel: Vector3::zeros() };
                    let from = about.map_or(still, |about| self.state_among(about.0, &states));
                    let body = change.body.0;
                    let State { pos, vel } = self.state_among(body, &states);
                    let kick = added(kick, &State { pos: pos - from.pos, vel: vel - from.vel });
                    if let Some(place) = self.free.iter().position(|&free| free == body) {
                        states[place].vel += kick;
                    } else if self.release(body, kick, &mut states) {
                        releases.push(Release { t_s, body: change.body });
                    }
                }
            }
        }
        let gms: Vec<f64> = self.free.iter().map(|&body| self.gms[body]).collect();
        // What was at rest may have left steps of any length.
        let anew = step_s == 0.0 || !releases.is_empty();
        let next_s = if anew { first_step_s(&gms, &states) } else { step_s };
        self.set_off(initial, t_s, &states, next_s);
        (switches, releases)
    }

    /// State of a body, given those of the free ones: of one at rest, from what it rests on.
    fn state_among(&self, body: usize, states: &[State]) -> State {
        let (mut host, mut offset) = (body, Vector3::zeros());
        while let Some(rest) = self.at_rest.iter().find(|rest| rest.body == host) {
            (host, offset) = (rest.host, offset + rest.offset);
        }
        let place = self.free.iter().position(|&free| free == host).unwrap_or_default();
        State { pos: states[place].pos + offset, vel: states[place].vel }
    }

    /// The first touch of the step: places of the two bodies, and the part of the step.
    fn first_touch(&mut self, step_s: f64) -> Option<(usize, usize, f64)> {
        if self.pairs.is_empty() {
            return None;
        }
        self.reaches_m.clear();
        self.reaches_m.extend(self.moving.chunks_exact(PER_BODY).map(|n| touch::reach_m(n, step_s)));
        let mut first: Option<(usize, usize, f64)> = None;
        for &(i, j, radius_m) in &self.pairs {
            let (a, b) = (&self.moving[i * PER_BODY..][..PER_BODY], &self.moving[j * PER_BODY..][..PER_BODY]);
            let d = [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
            let within_m = radius_m + self.reaches_m[i] + self.reaches_m[j];
            if d[0] * d[0] + d[1] * d[1] + d[2] * d[2] > within_m * within_m {
                continue;
            }
            let size = |n: &[f64]| n[0].abs() + n[1].abs() + n[2].abs();
            let rounding_m = 4.0 * f64::EPSILON * (size(a) + size(b));
            if let Some(h) = touch::first(a, b, step_s, radius_m, rounding_m)
                && first.is_none_or(|(_, _, earlier)| h < earlier)
            {
                first = Some((i, j, h));
            }
        }
        first
    }

    /// Gives every body its numbers: the free ones their own, those at rest their host's.
    fn spread(&mut self) {
        for (place, &body) in self.free.iter().enumerate() {
            self.numbers[body * PER_BODY..][..PER_BODY]
                .copy_from_slice(&self.moving[place * PER_BODY..][..PER_BODY]);
        }
        for rest in &self.at_rest {
            self.numbers.copy_within(rest.host * PER_BODY..(rest.host + 1) * PER_BODY, rest.body * PER_BODY);
            for (x, offset) in self.numbers[rest.body * PER_BODY..][..3].iter_mut().zip(&rest.offset) {
                *x += offset;
            }
        }
    }

    /// GM of a body and all that rests on it.
    fn total(&self, body: usize) -> f64 {
        self.gms[body]
            + self
                .at_rest
                .iter()
                .filter(|rest| rest.host == body)
                .map(|rest| self.gms[rest.body])
                .sum::<f64>()
    }

    /// Two bodies touch: changes their states, and which bodies are free. The time of the contact is left to the caller.
    fn collide(&mut self, initial: &InitialState, i: usize, j: usize, states: &mut Vec<State>) -> Contact {
        let rank = |place: usize| {
            let body = self.free[place];
            (initial.bodies[body].radius_m, self.gms[body])
        };
        let (onto, touching) = if rank(j) > rank(i) { (j, i) } else { (i, j) };
        let (host, body) = (self.free[onto], self.free[touching]);
        let (host_gm, body_gm) = (self.total(host), self.total(body));
        let apart = states[touching].pos - states[onto].pos;
        let rate = states[touching].vel - states[onto].vel;
        let distance_m = apart.norm();
        let outwards = apart / distance_m;
        let closing_m_s = -rate.dot(&outwards);
        let surface = initial.bodies[host].surface;
        let outcome = match surface {
            Surface::Merge => Outcome::Merged,
            Surface::Stop => Outcome::Stopped,
            Surface::Bounce { restitution } => {
                let along2 = rate.norm_squared() - closing_m_s * closing_m_s;
                let rises = is_seen(restitution * closing_m_s, along2, distance_m, host_gm + body_gm);
                if rises { Outcome::Bounced } else { Outcome::Stopped }
            }
        };
        // Shares of the impulse; two tracers: the smaller one takes all of it.
        let all = host_gm + body_gm;
        let (to_host, to_body) = if all > 0.0 { (body_gm / all, host_gm / all) } else { (0.0, 1.0) };
        if let (Outcome::Bounced, Surface::Bounce { restitution }) = (outcome, surface) {
            let change = outwards * ((1.0 + restitution) * closing_m_s);
            states[touching].vel += change * to_body;
            states[onto].vel -= change * to_host;
        } else {
            states[onto].vel += rate * to_host;
            for rest in self.at_rest.iter_mut().filter(|rest| rest.host == body) {
                rest.host = host;
                rest.offset += apart;
            }
            self.at_rest.push(AtRest { body, host, offset: apart });
            let merged = outcome == Outcome::Merged;
            self.laid.push(Laid { body, onto: host, merged });
            if merged {
                self.gms[host] += self.gms[body];
                self.gms[body] = 0.0;
            }
            self.free.remove(touching);
            states.remove(touching);
        }
        Contact {
            t_s: 0.0,
            body: BodyId(body),
            onto: BodyId(host),
            outcome,
            speed_m_s: rate.norm(),
            onto_gm_m3_s2: self.gms[host],
        }
    }

    /// What stopped it when the step became too small.
    pub(super) fn collapse(&self, initial: &InitialState) -> Stopped {
        let bodies = self.closest().to_vec();
        let names = bodies.iter().map(|&body| initial.name(body).to_owned()).collect();
        Stopped { bodies, names, t_s: self.t_s(), why: Why::Collapse }
    }

    /// The pair with the shortest time scale: those that fall into each other when the step becomes too small.
    fn closest(&self) -> [BodyId; 2] {
        let gms = self.field.gms_m3_s2();
        let place = |place: usize| {
            let n = self.radau.numbers(place);
            Vector3::new(n[0], n[1], n[2])
        };
        let mut pair = (0, 0);
        let mut least = f64::INFINITY;
        for i in 0..gms.len() {
            for j in i + 1..gms.len() {
                let square = fall_squared(gms[i] + gms[j], (place(i) - place(j)).norm());
                if square < least {
                    (pair, least) = ((i, j), square);
                }
            }
        }
        [BodyId(self.free[pair.0]), BodyId(self.free[pair.1])]
    }
}

/// States from positions (m) and velocities (m/s), three numbers each.
pub(super) fn states_of(pos: &[f64], vel: &[f64]) -> Vec<State> {
    let both = pos.chunks_exact(3).zip(vel.chunks_exact(3));
    let vector = |row: &[f64]| Vector3::from_column_slice(row);
    both.map(|(pos, vel)| State { pos: vector(pos), vel: vector(vel) }).collect()
}

/// Makes polynomials of a step those of its first part: the same path in new units.
fn shorten(numbers: &mut [f64], h: f64) {
    for n in numbers.chunks_exact_mut(PER_BODY) {
        let mut power = 1.0;
        for row in n[9..].chunks_exact_mut(3) {
            power *= h;
            for b in row {
                *b *= power;
            }
        }
    }
}

/// Where the search for the first step starts, s: a small part of the shortest time in which a pair falls or passes.
fn first_step_s(gms: &[f64], states: &[State]) -> f64 {
    /// The search shortens a step more cheaply than steps grow.
    const PART: f64 = 0.05;
    /// Where nothing pulls on anything; any number does.
    const FREE_S: f64 = 1e6;
    let mut least = f64::INFINITY;
    for i in 0..gms.len() {
        for j in i + 1..gms.len() {
            let gm = gms[i] + gms[j];
            if gm > 0.0 {
                let r = (states[i].pos - states[j].pos).norm();
                let passing = r * r / (states[i].vel - states[j].vel).norm_squared();
                least = least.min(fall_squared(gm, r)).min(passing);
            }
        }
    }
    if least.is_finite() && least > 0.0 { PART * least.sqrt() } else { FREE_S }
}

/// Square of the time in which two bodies would fall into each other, to a factor; infinite for two tracers.
fn fall_squared(gm: f64, r: f64) -> f64 {
    r * r * r / gm
}
