//! Long steps, where paths no longer fit into their memory otherwise: by Wisdom-Holman while bodies keep apart, by the exact method
//! through what such steps can't do.

use super::knots::{Company, Knots, Rider};
use super::run::{Run, states_of};
use super::thin::Thinner;
use super::track::Track;
use crate::initial::InitialState;
use crate::integrate::WisdomHolman;
use crate::integrate::long_steps::Choice;

/// Long steps after which it is tried again whether they would do.
const TRY_AGAIN: f64 = 4.0;

/// Long steps made at a time at most; after a knot it is looked whether there is still room.
const BATCH: usize = 64;

/// Long steps between knots at first. Taking a state out costs as much as a dozen of them.
const FIRST_SPACING: usize = 4;

/// Steps after which a state is sure to stay: a trouble ahead takes back as many.
const SURE: usize = 3;

/// The long steps of one direction of time.
#[derive(Debug, Clone)]
pub(super) struct Long {
    choice: Choice,
    /// Length of a step, s; negative where time goes back.
    step_s: f64,
    /// Long steps from knot to knot.
    spacing: usize,
    now: Option<Leap>,
    /// When they are tried again, s.
    again_s: f64,
}

/// Bodies while they go by long steps. States are in the order of the run's free bodies.
#[derive(Debug, Clone)]
struct Leap {
    steps: WisdomHolman,
    /// How many were made since the last knot.
    since: usize,
    /// A state that becomes a knot once it is sure, and how many steps after the last one it was.
    pending: Option<(f64, usize)>,
    pos: Vec<f64>,
    vel: Vec<f64>,
    /// The last knot: when, positions, velocities.
    last: (f64, Vec<f64>, Vec<f64>),
    /// For each member of the knots its place among the free bodies.
    places: Vec<usize>,
    /// Room for a state in the order of the knots.
    ordered: [Vec<f64>; 2],
}

impl Long {
    /// None made yet.
    pub(super) fn new(choice: Choice, backward: bool) -> Self {
        let step_s = choice.step_s * if backward { -1.0 } else { 1.0 };
        Self { choice, step_s, spacing: FIRST_SPACING, now: None, again_s: 0.0 }
    }

    /// Whether they are being made.
    pub(super) const fn is_on(&self) -> bool {
        self.now.is_some()
    }

    /// Goes over to long steps from where the run stands, if it is time to try and they would do.
    pub(super) fn try_on(
        &mut self,
        run: &mut Run,
        initial: &InitialState,
        track: &mut Track,
        thinner: &mut Thinner,
    ) {
        let t_s = run.t_s();
        if (t_s - self.again_s) * self.step_s < 0.0 {
            return;
        }
        self.again_s = t_s + TRY_AGAIN * self.step_s;
        let members = run.members(initial);
        let Some(centre) = members.bodies.iter().position(|body| *body == self.choice.centre) else { return };
        let start = members.start(centre, t_s, initial.forces.relativity);
        let Ok(steps) = WisdomHolman::new(&start, self.step_s) else { return };
        if steps.trouble_within(TRY_AGAIN).is_some() {
            return;
        }
        let united = members.united.iter().map(|&(body, host)| Rider { body, host, offset: [0.0; 3] });
        let riders: Vec<Rider> = run.riders().chain(united).collect();
        let company = Company { members: &members.bodies, gms: &members.gms, centre, riders: &riders };
        let Some(knots) = Knots::start(&company, t_s, &members.pos, &members.vel) else { return };
        // Companions stay with their hosts from now on, whatever comes.
        for &(moon, host) in &members.united {
            run.unite(initial, moon, host);
        }
        thinner.close(track, t_s, run.hosts());
        let place =
            |body: &usize| members.bodies.iter().position(|member| member == body).unwrap_or_default();
        let places: Vec<usize> = knots.order().iter().map(place).collect();
        track.begin_long(knots);
        self.now = Some(Leap {
            steps,
            since: 0,
            pending: None,
            pos: members.pos.clone(),
            vel: members.vel.clone(),
            last: (t_s, members.pos, members.vel),
            ordered: std::array::from_fn(|_| Vec::with_capacity(3 * places.len())),
            places,
        });
    }

    /// Some long steps on; where they end, the run goes on from there.
    pub(super) fn leap(&mut self, run: &mut Run, initial: &InitialState, track: &mut Track) {
        let Some(leap) = &mut self.now else { return };
        let known_s = track.end_s();
        let mut left = BATCH;
        loop {
            if left == 0 || track.end_s().to_bits() != known_s.to_bits() {
                return;
            }
            left -= 1;
            match leap.one(self.spacing, track) {
                Ok(true) => {}
                Ok(false) => break,
                Err(_trouble) => {
                    leap.take_last(track);
                    break;
                }
            }
        }
        track.end_long();
        let (t_s, pos, vel) = &leap.last;
        run.set_off(initial, *t_s, &states_of(pos, vel), 0.05 * self.step_s);
        // The trouble lies beyond the steps gone back.
        self.again_s = t_s + 2.0 * TRY_AGAIN * self.step_s;
        self.now = None;
    }

    /// Leaves out every second knot, and makes half as many from now on. False where that can't be done.
    pub(super) fn thin(&mut self, track: &mut Track) -> bool {
        let thinned = track.thin_knots();
        if thinned {
            self.spacing *= 2;
        }
        thinned
    }
}

impl Leap {
    /// One step. False where a body no longer has an orbit that knots can hold; the last knot then stands.
    fn one(&mut self, spacing: usize, track: &mut Track) -> Result<bool, ()> {
        self.steps.step().map_err(|_trouble| ())?;
        self.since += 1;
        if let Some((t_s, at)) = self.pending
            && self.since >= at + SURE
        {
            self.pending = None;
            self.since -= at;
            return Ok(self.knot(t_s, at, track));
        }
        if self.pending.is_none() && self.since.is_multiple_of(spacing) {
            self.steps.state(&mut self.pos, &mut self.vel).map_err(|_trouble| ())?;
            self.pending = Some((self.steps.t_s(), self.since));
        }
        Ok(true)
    }

    /// Makes a knot of the state that was taken out.
    fn knot(&mut self, t_s: f64, steps: usize, track: &mut Track) -> bool {
        for (ordered, of) in self.ordered.iter_mut().zip([&self.pos, &self.vel]) {
            ordered.clear();
            ordered.extend(self.places.iter().flat_map(|place| &of[3 * place..3 * place + 3]));
        }
        let added = track.push_knot(t_s, &self.ordered[0], &self.ordered[1], steps);
        if added {
            self.last.0 = t_s;
            self.last.1.copy_from_slice(&self.pos);
            self.last.2.copy_from_slice(&self.vel);
        }
        added
    }

    /// Makes a last knot of the state where a trouble left the steps; where that can't be, the one before is the last.
    fn take_last(&mut self, track: &mut Track) {
        let (t_s, step_s) = (self.steps.t_s(), self.steps.step_s());
        let beyond = (t_s - self.last.0) / step_s > 0.5;
        if beyond && self.steps.state(&mut self.pos, &mut self.vel).is_ok() {
            self.knot(t_s, self.since, track);
        }
    }
}
