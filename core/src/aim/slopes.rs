//! Derivatives of what is wanted by the free numbers, without further trials.
//!
//! From the numbers to the start they are differences of what the numbers resolve to, which takes no integration; from the start to an
//! instant they are the variations of the paths; and from there to the outcome a formula. An event's own time shifts so that what
//! marks the event stays 0 (the theorem of implicit functions).
//!
//! A count does not change in steps so small. There are none, and differences of whole trials are taken instead, for a ratio of periods,
//! for events other than apsides, passages, contacts, nodes and crossings of a distance, and wherever the variations have none.

use super::outcome::{Moment, speed_size};
use super::put::put;
use super::trial::{Flight, Trial};
use crate::Vector3;
use crate::ephemeris::State;
use crate::ephemeris::variations::{StartVariation, Variations};
use crate::initial::InitialState;
use crate::resolve::resolve_among;
use crate::scenario::{EventKind, Free, Outcome, Scenario};

/// Step of the differences of the start, as part of a number's range: what numbers resolve to is smooth, and known to rounding.
const DIFFERENCE: f64 = 1e-5;

impl Trial<'_> {
    /// Derivatives of all residuals by each free number, as part of its range, at the point of a flight; `None` where only further trials
    /// can tell.
    pub(super) fn slopes(&self, point: &[f64], flight: &Flight) -> Option<Vec<Vec<f64>>> {
        let starts = self.starts(point)?;
        let view = self.view(flight);
        let moments: Vec<Option<Moment>> =
            self.aim.want.iter().map(|want| view.moment(want).ok()).collect::<Option<_>>()?;
        let mut order: Vec<usize> = (0..moments.len()).collect();
        let time = |want: usize| moments[want].as_ref().map_or(0.0, |moment| moment.t_s);
        order.sort_by(|&a, &b| time(a).total_cmp(&time(b)));
        let asked: Vec<_> = moments.iter().flatten().flat_map(|moment| [moment.body, moment.about]).collect();
        let mut variations = Variations::new(&flight.initial, &flight.ephemeris, &starts, &asked)?;
        // Of each want, by each number.
        let mut slopes = vec![vec![Vec::new(); starts.len()]; moments.len()];
        for index in order {
            let want = &self.aim.want[index];
            let Some(moment) = &moments[index] else {
                slopes[index].iter_mut().for_each(|slopes| slopes.push(0.0));
                continue;
            };
            variations.advance(moment.t_s)?;
            let acc = variations.acceleration(moment.body, moment.about)?;
            for (start, slopes) in slopes[index].iter_mut().enumerate() {
                let varied = variations.relative(start, moment.body, moment.about);
                let turn = Turn { moment, varied, acc, scene_m: self.scene_m };
                *slopes = turn.slopes(&view.outcomes(want, moment))?;
                if moment.touches() {
                    slopes.extend([0.0; 3]);
                }
            }
        }
        let column = |start: usize| slopes.iter().flat_map(|want| want[start].iter().copied()).collect();
        Some((0..starts.len()).map(column).collect())
    }

    /// Derivatives of the start by each free number.
    fn starts(&self, point: &[f64]) -> Option<Vec<StartVariation>> {
        let scenario = self.written(point, None).ok()?.scenario().scenario?;
        let start = |(free, &share): (&Free, &f64)| {
            let [above, below] = [DIFFERENCE, -DIFFERENCE].map(|by| (share + by).clamp(0.0, 1.0));
            let [up, down] = [above, below].map(|share| self.start(&scenario, free, share));
            let ((up, down), width) = (up.zip(down)?, above - below);
            let pairs = || up.bodies.iter().zip(&down.bodies);
            let states = pairs()
                .map(|(a, b)| State { pos: (a.pos - b.pos) / width, vel: (a.vel - b.vel) / width })
                .collect();
            let gms_m3_s2 = pairs().map(|(a, b)| (a.gm_m3_s2 - b.gm_m3_s2) / width).collect();
            (width > 0.0).then_some(StartVariation { states, gms_m3_s2 })
        };
        self.aim.free.iter().zip(point).map(start).collect()
    }

    fn start(&self, scenario: &Scenario, free: &Free, share: f64) -> Option<InitialState> {
        let mut scenario = scenario.clone();
        put(&mut scenario, free, free.value(share));
        resolve_among(&scenario, self.solar).ok()
    }
}

/// A relative state, and how it varies with one number.
struct Turn<'a> {
    moment: &'a Moment,
    /// At the same time.
    varied: State,
    /// The relative acceleration, m/s².
    acc: Vector3<f64>,
    scene_m: f64,
}

impl Turn<'_> {
    /// Derivatives of the residuals of outcomes, in their order.
    fn slopes(&self, outcomes: &[Outcome]) -> Option<Vec<f64>> {
        let State { pos, vel } = self.moment.state;
        let later = self.later()?;
        // At the event's own time.
        let (by_pos, by_vel) = (self.varied.pos + vel * later, self.varied.vel + self.acc * later);
        let r = pos.norm();
        let mut slopes = Vec::new();
        for outcome in outcomes {
            match *outcome {
                Outcome::At(at) => slopes.push(later / at.s()),
                Outcome::Distance(wanted) => {
                    // Of (1 - wanted / r) pos.
                    let short = wanted.m() / r;
                    let change = by_pos * (1.0 - short) + pos * (short * pos.dot(&by_pos) / (r * r));
                    slopes.extend((change / self.scene_m).iter());
                }
                Outcome::Speed(wanted) => {
                    slopes.push(vel.dot(&by_vel) / vel.norm() / speed_size(wanted));
                }
                Outcome::Longitude(_) => {
                    slopes.push((pos.x * by_pos.y - pos.y * by_pos.x) / (pos.x * pos.x + pos.y * pos.y));
                }
                Outcome::Latitude(_) => {
                    let across = (pos.x * pos.x + pos.y * pos.y).sqrt();
                    slopes.push((by_pos.z - pos.z * pos.dot(&by_pos) / (r * r)) / across);
                }
                Outcome::PeriodRatio(_) | Outcome::Count(_) => return None,
            }
        }
        slopes.iter().all(|slope| slope.is_finite()).then_some(slopes)
    }

    /// How much later the event comes: what marks it stays 0.
    fn later(&self) -> Option<f64> {
        let State { pos, vel } = self.moment.state;
        let State { pos: by_pos, vel: by_vel } = self.varied;
        // How what marks it varies at the same time, and how fast it changes with time.
        let (varies, rate) = match self.moment.kind {
            None => return Some(0.0),
            // r · v = 0.
            Some(EventKind::Periapsis | EventKind::Apoapsis | EventKind::ClosestApproach) => {
                (by_pos.dot(&vel) + pos.dot(&by_vel), vel.norm_squared() + pos.dot(&self.acc))
            }
            // r² is given.
            Some(EventKind::Contact | EventKind::Distance) => (pos.dot(&by_pos), pos.dot(&vel)),
            Some(EventKind::AscendingNode | EventKind::DescendingNode) => (by_pos.z, vel.z),
            Some(_) => return None,
        };
        Some(-varies / rate)
    }
}

#[cfg(test)]
#[path = "slopes_tests.rs"]
mod tests;
