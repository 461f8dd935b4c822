//! The course of a body by Kepler's laws alone: where a start leads, and which starts lead to a place.
//!
//! One centre pulls; where the body starts close to another body that goes around the centre, it first leaves that one on a
//! hyperbola whose asymptote it then follows ("patched conics": R. R. Bate, D. D. Mueller & J. E. White, Fundamentals of
//! Astrodynamics (1971), 8.3). What comes out is a start for the search on the real paths, and no more.

use super::fit::{Fit, cost};
use super::put::put;
use super::scattered;
use super::trial::Trial;
use crate::Vector3;
use crate::conic::{elements_from_state, lambert, propagate};
use crate::ephemeris::State;
use crate::initial::{InitialBody, InitialState};
use crate::math::float::{asin, atan2};
use crate::resolve::resolve_among;
use crate::scenario::{BodyId, Form, Free, Scenario};
use std::f64::consts::TAU;

/// Whole turns on the way, at most.
const MOST_TURNS: u32 = 2;

/// Scattered starts, where Lambert's paths lead nowhere within the limits.
const SCATTERED: usize = 12;

/// Iterations of one search at most.
const ITERATIONS: usize = 25;

/// A place is reached when it is missed by this part of its distance from the centre.
const REACHED: f64 = 1e-4;

/// Courses as near to each other as this, in parts of the ranges, are the same.
const SAME: f64 = 1e-3;

/// Most courses to one place.
const MOST: usize = 6;

/// A place to be reached.
#[derive(Debug, Clone, Copy)]
pub(super) struct Target {
    /// The body whose gravity leads there.
    pub(super) centre: BodyId,
    /// A body that goes around the centre, and has to be left first.
    pub(super) leaving: Option<BodyId>,
    /// The place, m from the centre.
    pub(super) place: Vector3<f64>,
    /// At what distance it is to be passed, m.
    pub(super) beside_m: f64,
    /// When, s.
    pub(super) t_s: f64,
}

/// Starts of one body, as its free numbers make them.
pub(super) struct Course<'a> {
    pub(super) trial: &'a Trial<'a>,
    /// With all numbers as they are so far.
    pub(super) scenario: &'a Scenario,
    pub(super) initial: &'a InitialState,
    pub(super) shooter: BodyId,
    /// The free numbers that are its own, and where they stand so far, in parts of their ranges.
    pub(super) own: Vec<(&'a Free, f64)>,
}

impl Course<'_> {
    /// Numbers (in parts of their ranges) that lead to a place, the nearest first.
    pub(super) fn to(&self, target: &Target) -> Vec<Vec<f64>> {
        let velocities = self.velocities(target).unwrap_or_default();
        let mut starts: Vec<Vec<f64>> = velocities.into_iter().filter_map(|v| self.numbers(v)).collect();
        let mut found = Vec::new();
        self.follow(target, &mut starts, &mut found);
        let reached =
            |found: &[(f64, Vec<f64>)]| found.iter().any(|(cost, _)| *cost < 0.5 * REACHED * REACHED);
        if !reached(&found) {
            starts.push(self.own.iter().map(|(_, share)| *share).collect());
            starts.extend((1..=SCATTERED).map(|index| scattered(index, self.own.len())));
            self.follow(target, &mut starts, &mut found);
        }
        found.sort_by(|a, b| a.0.total_cmp(&b.0));
        let mut kept: Vec<Vec<f64>> = Vec::new();
        for (_, numbers) in found {
            let same = |other: &Vec<f64>| numbers.iter().zip(other).all(|(a, b)| (a - b).abs() < SAME);
            if !kept.iter().any(same) {
                kept.push(numbers);
            }
        }
        kept.truncate(MOST);
        kept
    }

    /// Goes from starts to where the place is missed least.
    fn follow(&self, target: &Target, starts: &mut Vec<Vec<f64>>, found: &mut Vec<(f64, Vec<f64>)>) {
        for start in starts.drain(..) {
            let Some(residuals) = self.miss(target, &start) else { continue };
            let mut fit = Fit::new(start, residuals);
            for _ in 0..ITERATIONS {
                if fit.done || cost(&fit.residuals) < 0.5 * (0.01 * REACHED) * (0.01 * REACHED) {
                    break;
                }
                fit.step(&mut |numbers: &[f64]| self.miss(target, numbers));
            }
            found.push((cost(&fit.residuals), fit.point));
        }
    }

    /// By how much a place is missed, in parts of its distance from the centre.
    fn miss(&self, target: &Target, numbers: &[f64]) -> Option<Vec<f64>> {
        let mut scenario = self.scenario.clone();
        for ((free, _), share) in self.own.iter().zip(numbers) {
            put(&mut scenario, free, free.value(*share));
        }
        let initial = resolve_among(&scenario, self.trial.solar).ok()?;
        let body = initial.bodies.get(self.shooter.0)?;
        let centre = initial.bodies.get(target.centre.0)?;
        let mut state = relative(body, centre);
        if let Some(leaving) = target.leaving {
            let left = initial.bodies.get(leaving.0)?;
            let gm = left.gm_m3_s2 + body.gm_m3_s2;
            state.vel = left.vel - centre.vel + asymptote(relative(body, left), gm)?;
        }
        let gm = centre.gm_m3_s2 + body.gm_m3_s2;
        let (pos, _) = propagate(state.pos, state.vel, gm, target.t_s).ok()?;
        let off = pos - target.place;
        let beside = (1.0 - target.beside_m / off.norm().max(f64::MIN_POSITIVE)) / target.place.norm();
        Some((off * beside).iter().copied().collect())
    }

    /// Velocities of the start relative to the centre, from Lambert's problem.
    fn velocities(&self, target: &Target) -> Option<Vec<Vector3<f64>>> {
        let body = self.initial.bodies.get(self.shooter.0)?;
        let centre = self.initial.bodies.get(target.centre.0)?;
        let from = body.pos - centre.pos;
        let normal = from.cross(&target.place);
        // In one line with the centre: the plane is anybody's choice.
        let in_line = normal.norm() <= 1e-9 * from.norm() * target.place.norm();
        let axis = if in_line { Vector3::z() } else { normal };
        // Beyond a body that is to be passed, as seen from the centre: the plane is the same.
        let to = target.place + target.place.normalize() * target.beside_m;
        let gm = body.gm_m3_s2 + centre.gm_m3_s2;
        let arcs = [axis, -axis]
            .into_iter()
            .flat_map(|axis| lambert(from, to, target.t_s, gm, axis, MOST_TURNS).unwrap_or_default());
        let left = target.leaving.and_then(|left| self.initial.bodies.get(left.0));
        let start = |velocity: Vector3<f64>| match left {
            None => Some(velocity),
            Some(left) => {
                let away = velocity - (left.vel - centre.vel);
                let gm = left.gm_m3_s2 + body.gm_m3_s2;
                Some(leave(body.pos - left.pos, away, gm)? + (left.vel - centre.vel))
            }
        };
        Some(arcs.filter_map(|arc| start(arc.from_vel)).map(|vel| vel + centre.vel).collect())
    }

    /// The free numbers, in parts of their ranges, with which the body starts at a velocity (barycentric, m/s) from where it is: as
    /// nearly as their limits allow.
    fn numbers(&self, velocity: Vector3<f64>) -> Option<Vec<f64>> {
        let body = self.initial.bodies.get(self.shooter.0)?;
        let form = &self.scenario.bodies.get(self.shooter.0)?.form;
        let anchor = body.primary.and_then(|primary| self.initial.bodies.get(primary.0));
        let now = anchor.map(|anchor| State { pos: body.pos - anchor.pos, vel: velocity - anchor.vel });
        let orbit = now.zip(anchor).and_then(|(now, anchor)| {
            let gm = anchor.gm_m3_s2 + body.gm_m3_s2;
            Some((elements_from_state(now.pos, now.vel, gm).ok()?, gm))
        });
        let number = |free: &Free| -> Option<f64> {
            let turns = |angle_rad: f64| Some(brought_in(angle_rad, TAU, free));
            match (form, free.keys.as_slice()) {
                (Form::Place(placed), ["place", "velocity", axis]) => {
                    let axis: usize = axis.parse().ok()?;
                    Some(placed.velocity.get(axis)?.m_s() + velocity[axis] - body.vel[axis])
                }
                (Form::Throw(_), ["throw", "speed"]) => Some(now?.vel.norm()),
                (Form::Throw(_), ["throw", "elevation"]) => {
                    let now = now?;
                    let sine = now.pos.dot(&now.vel) / (now.pos.norm() * now.vel.norm());
                    Some(asin(sine.clamp(-1.0, 1.0)))
                }
                (Form::Throw(_), ["throw", "heading"]) => {
                    let now = now?;
                    // At a pole every way is north; another start will do there.
                    let up = now.pos.normalize();
                    let east = Vector3::z().cross(&up).try_normalize(1e-9)?;
                    turns(atan2(now.vel.dot(&east), now.vel.dot(&up.cross(&east))))
                }
                (Form::Orbit(_), ["orbit", key]) => {
                    let (conic, gm) = orbit?;
                    match *key {
                        "periapsis" => Some(conic.periapsis_m),
                        "apoapsis" => conic.apoapsis_m(),
                        "semi-major" => Some(conic.semi_major_m()),
                        "period" => conic.period_s(gm),
                        "eccentricity" => Some(conic.eccentricity),
                        "inclination" => turns(conic.inclination_rad),
                        "node" => turns(conic.node_rad),
                        "argument" => turns(conic.argument_rad),
                        "anomaly" => turns(conic.true_anomaly_rad),
                        "mean-anomaly" => turns(conic.mean_anomaly_rad()?),
                        "after-periapsis" | "before-periapsis" => {
                            let sign = if *key == "after-periapsis" { 1.0 } else { -1.0 };
                            let span_s = sign * conic.after_periapsis_s(gm).ok()?;
                            Some(
                                conic
                                    .period_s(gm)
                                    .map_or(span_s, |period_s| brought_in(span_s, period_s, free)),
                            )
                        }
                        _ => None,
                    }
                }
                _ => None,
            }
        };
        let share =
            |&(free, so_far): &(&Free, f64)| number(free).map_or(so_far, |si| free.share(si).clamp(0.0, 1.0));
        Some(self.own.iter().map(share).collect())
    }
}

fn relative(body: &InitialBody, about: &InitialBody) -> State {
    State { pos: body.pos - about.pos, vel: body.vel - about.vel }
}

/// A number that means the same after each period, brought into the limits of a free number where it can be.
fn brought_in(value: f64, period: f64, free: &Free) -> f64 {
    let least = value + period * ((free.from - value) / period).ceil();
    if least <= free.to { least } else { value }
}

/// The velocity at a place, relative to what pulls there, that leaves for ever with the velocity `away`; `None` straight through the middle.
///
/// # Source
/// R. H. Battin, An Introduction to the Mathematics and Methods of Astrodynamics, rev. ed. (1999), 11.4: `v = (D + v∞/2) ŝ + (D - v∞/2) r̂`, with
/// `D² = GM / (r (1 + cos θ)) + v∞²/4` and θ the angle between both directions.
fn leave(pos: Vector3<f64>, away: Vector3<f64>, gm_m3_s2: f64) -> Option<Vector3<f64>> {
    let (out, along) = (pos.try_normalize(0.0)?, away.try_normalize(0.0)?);
    let half = 0.5 * away.norm();
    let square = gm_m3_s2 / (pos.norm() * (1.0 + out.dot(&along))) + half * half;
    let d = square.sqrt();
    d.is_finite().then(|| along * (d + half) + out * (d - half))
}

/// The velocity with which a body at a state leaves for ever what pulls on it; `None` where it doesn't.
///
/// # Source
/// The direction is that of the true anomaly whose cosine is -1/e (R. H. Battin, as at [`leave`], 3.3).
fn asymptote(state: State, gm_m3_s2: f64) -> Option<Vector3<f64>> {
    let square = state.vel.norm_squared() - 2.0 * gm_m3_s2 / state.pos.norm();
    if square <= 0.0 || gm_m3_s2 <= 0.0 {
        return (square > 0.0).then_some(state.vel);
    }
    let momentum = state.pos.cross(&state.vel);
    let e = state.vel.cross(&momentum) / gm_m3_s2 - state.pos.normalize();
    // Straight up: that way it goes on.
    let Some(across) = momentum.cross(&e).try_normalize(0.0) else {
        return Some(state.vel.normalize() * square.sqrt());
    };
    let size = e.norm();
    let direction = (across * (size * size - 1.0).max(0.0).sqrt() - e / size) / size;
    Some(direction * square.sqrt())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_leaves_with_a_velocity_comes_from_where_that_was_asked() {
        let gm = 4e14;
        for (pos, away) in [
            ([7e6, 0.0, 0.0], [0.0, 3e3, 0.0]),
            ([7e6, 1e6, -2e6], [-2e3, 3e3, 1e3]),
            ([0.0, 9e6, 0.0], [0.0, 2e3, 0.0]),
            ([1e9, 2e8, 0.0], [1e3, 1e3, 5.0]),
        ] {
            let (pos, away) = (Vector3::from(pos), Vector3::from(away));
            let vel = leave(pos, away, gm).unwrap();
            // By energy, and by the asymptote.
            let energy = vel.norm_squared() - 2.0 * gm / pos.norm();
            assert!((energy / away.norm_squared() - 1.0).abs() < 1e-12);
            let got = asymptote(State { pos, vel }, gm).unwrap();
            assert!((got - away).norm() < 1e-7 * away.norm(), "got {got}, want {away}");
            // Long after, it flies nearly that way: it turns by GM / (v² r) more.
            let (far, late) = propagate(pos, vel, gm, 1e10).unwrap();
            assert!(
                (late.normalize() - away.normalize()).norm() < 2.0 * gm / (far.norm() * away.norm_squared())
            );
        }
        assert!(leave(Vector3::x(), -Vector3::x(), gm).is_none());
        let bound = State { pos: Vector3::new(7e6, 0.0, 0.0), vel: Vector3::new(0.0, 7.5e3, 0.0) };
        assert!(asymptote(bound, gm).is_none());
    }

    #[test]
    fn what_recurs_is_brought_within_its_limits() {
        let free = |from, to| Free {
            body: BodyId(0),
            section: 0,
            keys: vec!["orbit", "node"],
            measure: crate::scenario::Measure::Angle,
            from,
            to,
            unit: "rad".to_owned(),
        };
        assert!((brought_in(6.0, TAU, &free(-1.0, 1.0)) - (6.0 - TAU)).abs() < 1e-15);
        assert!((brought_in(-1.0, TAU, &free(0.0, TAU)) - (TAU - 1.0)).abs() < 1e-15);
        assert!((brought_in(2.0, TAU, &free(-1.0, 1.0)) - 2.0).abs() < 1e-15, "nowhere within");
    }
}
