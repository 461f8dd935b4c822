//! The path of a body as a line in the picture: as few points as the eye needs, taken from the ephemeris.
//!
//! The line goes through points of the path itself. How far it strays between them is bounded by what position and
//! velocity at both ends of an interval say (the cubic through them), and that cubic is checked against the ephemeris
//! in the interval's middle. Interval ends are multiples of powers of two seconds, so that from frame to frame
//! the same points are taken and nothing swims.

use super::geometry::{Px, Rect, between, length};
use super::view::Camera;
use crate::Vector3;
use crate::ephemeris::Ephemeris;
use crate::scenario::BodyId;

/// How far a line may stray from the path, px.
pub const TOLERANCE_PX: f64 = 0.25;
/// The most points of one path; what is farther away in time is left out.
pub const MOST_POINTS: usize = 1600;
/// The most intervals tried for one path.
const MOST_TRIALS: usize = 6 * MOST_POINTS;

/// The path of a body relative to another (or to the barycentre), set where that other one is now.
#[derive(Debug, Clone, Copy)]
pub struct Curve<'a> {
    /// All paths.
    pub ephemeris: &'a Ephemeris,
    /// Whose path.
    pub body: BodyId,
    /// Relative to which; `None`: the barycentre.
    pub about: Option<BodyId>,
    /// Where `about` is now, m.
    pub origin: Vector3<f64>,
}

/// A point of a path in the picture.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sample {
    /// Where, px.
    pub at: Px,
    /// How far in front of the centre, px.
    pub depth: f64,
    /// When, model time.
    pub t_s: f64,
}

#[derive(Clone, Copy)]
struct Knot {
    sample: Sample,
    /// Pixels a second.
    velocity: Px,
}

impl Curve<'_> {
    fn knot(&self, camera: &Camera, t_s: f64) -> Option<Knot> {
        let (pos, vel) = match self.about {
            Some(about) => {
                let state = self.ephemeris.relative(self.body, about, t_s)?;
                (state.pos, state.vel)
            }
            None => {
                let state = self.ephemeris.state(self.body, t_s)?;
                (state.pos, state.vel)
            }
        };
        let point = self.origin + pos;
        let sample = Sample { at: camera.project(point), depth: camera.depth(point), t_s };
        let velocity = camera.turn(vel);
        let finite = sample.at.iter().chain(&velocity).all(|v| v.is_finite());
        finite.then_some(Knot { sample, velocity })
    }

    /// The path from one model time to another, in that direction, which may be back. Points outside `keep` are
    /// sparse. Empty where nothing is covered.
    pub fn trace(&self, camera: &Camera, keep: &Rect, from_s: f64, until_s: f64) -> Vec<Sample> {
        let (low, high) = (self.ephemeris.from_s(), self.ephemeris.until_s());
        let (from_s, until_s) = (from_s.clamp(low, high), until_s.clamp(low, high));
        let Some(mut last) = self.knot(camera, from_s) else {
            return Vec::new();
        };
        let mut samples = vec![last.sample];
        let total = (until_s - from_s).abs();
        if !(total > 0.0 && total.is_finite()) {
            return samples;
        }
        let forward = until_s > from_s;
        // Starting far below the time in which anything can happen and at most doubling, no turn is stepped over.
        let mut step = power_of_two_below(total / 16384.0);
        let (least, most) = (step / 65536.0, total / 8.0);
        let mut trials = 0;
        while samples.len() < MOST_POINTS && trials < MOST_TRIALS {
            let t = last.sample.t_s;
            if (forward && t >= until_s) || (!forward && t <= until_s) {
                break;
            }
            trials += 1;
            let grid =
                if forward { ((t / step).floor() + 1.0) * step } else { ((t / step).ceil() - 1.0) * step };
            let next_s = if forward { grid.min(until_s) } else { grid.max(until_s) };
            let (Some(middle), Some(next)) =
                (self.knot(camera, 0.5 * (t + next_s)), self.knot(camera, next_s))
            else {
                break;
            };
            match judge(&last, &middle, &next, keep) {
                Verdict::Finer if step > least => step *= 0.5,
                verdict => {
                    samples.push(next.sample);
                    last = next;
                    if verdict == Verdict::Coarser && 2.0 * step <= most {
                        step *= 2.0;
                    }
                }
            }
        }
        samples
    }
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Verdict {
    Finer,
    Good,
    Coarser,
}

/// Whether the straight line from `a` to `b` is near enough to the path whose middle in time is `m`.
fn judge(a: &Knot, m: &Knot, b: &Knot, keep: &Rect) -> Verdict {
    let dt = b.sample.t_s - a.sample.t_s;
    let chord = between(a.sample.at, b.sample.at);
    let turn = [0.125 * dt * (a.velocity[0] - b.velocity[0]), 0.125 * dt * (a.velocity[1] - b.velocity[1])];
    let half = [0.5 * (a.sample.at[0] + b.sample.at[0]), 0.5 * (a.sample.at[1] + b.sample.at[1])];
    // The cubic's middle against the true one: what the ends alone can't know.
    let surprise = length(between([half[0] + turn[0], half[1] + turn[1]], m.sample.at));
    let across = |v: Px| match super::geometry::unit(chord) {
        Some(u) => (v[0] * u[1] - v[1] * u[0]).abs(),
        None => length(v),
    };
    let strays = across(between(half, m.sample.at)).max(across(turn)) + surprise;
    let reach = length(chord) + length(turn) + surprise;
    if strays < 0.5 * TOLERANCE_PX && surprise < 0.1 * TOLERANCE_PX {
        // Three quarters of a bound that grows with the square of the step.
        return if strays < 0.2 * TOLERANCE_PX { Verdict::Coarser } else { Verdict::Good };
    }
    if strays < TOLERANCE_PX || reach < TOLERANCE_PX {
        return Verdict::Good;
    }
    // Outside the picture only the way back in matters: a wide box around the piece must miss the picture.
    let box_of = Rect {
        left: a.sample.at[0].min(b.sample.at[0]).min(m.sample.at[0]),
        top: a.sample.at[1].min(b.sample.at[1]).min(m.sample.at[1]),
        right: a.sample.at[0].max(b.sample.at[0]).max(m.sample.at[0]),
        bottom: a.sample.at[1].max(b.sample.at[1]).max(m.sample.at[1]),
    }
    .grown(2.0 * length(turn) + 4.0 * surprise);
    let same_way = a.velocity[0] * b.velocity[0] + a.velocity[1] * b.velocity[1]
        > 0.5 * length(a.velocity) * length(b.velocity);
    if box_of.gap(keep) > 0.0 && same_way && surprise < 0.05 * reach {
        return Verdict::Coarser;
    }
    Verdict::Finer
}

/// The largest power of two that is not above a positive number.
fn power_of_two_below(value: f64) -> f64 {
    let mut power = 1.0;
    while power > value && power > f64::MIN_POSITIVE {
        power *= 0.5;
    }
    while 2.0 * power <= value {
        power *= 2.0;
    }
    power
}

#[cfg(test)]
mod tests {
    use super::super::fixture;
    use super::*;
    use crate::scenario::BodyId;

    /// Distance of a point from a line through samples, px.
    fn off_line(samples: &[Sample], p: Px) -> f64 {
        samples
            .windows(2)
            .map(|w| {
                let d = between(w[0].at, w[1].at);
                let v = between(w[0].at, p);
                let l2 = d[0] * d[0] + d[1] * d[1];
                let along = if l2 > 0.0 { ((v[0] * d[0] + v[1] * d[1]) / l2).clamp(0.0, 1.0) } else { 0.0 };
                length([v[0] - along * d[0], v[1] - along * d[1]])
            })
            .fold(f64::INFINITY, f64::min)
    }

    #[test]
    fn lines_stray_less_than_stated_and_take_few_points() {
        let show = fixture::equal_areas();
        let view = show.scenario.beats[0].view;
        let period = fixture::FENN_PERIOD_S;
        for zoom in [1.0, 4.0, 30.0] {
            let mut near = view;
            near.span = crate::units::Length::from_m(view.span.m() / zoom);
            let camera = Camera::of(&show, &near, 0.0, &fixture::HOUSE);
            let curve = Curve {
                ephemeris: &show.ephemeris,
                body: BodyId(1),
                about: Some(BodyId(0)),
                origin: super::super::scene::position(&show, BodyId(0), 0.0),
            };
            let keep = fixture::HOUSE.whole().grown(20.0);
            for (from, until) in [(0.0, 0.9 * period), (0.9 * period, 0.0)] {
                let samples = curve.trace(&camera, &keep, from, until);
                assert!(samples.len() < 700, "{} points at zoom {zoom}", samples.len());
                assert!((samples.last().unwrap().t_s - until).abs() < 1e-6);
                let mut worst = 0.0_f64;
                for i in 0..4000 {
                    let t = from + (until - from) * f64::from(i) / 4000.0;
                    let p = curve.knot(&camera, t).unwrap().sample.at;
                    if keep.holds(p) {
                        worst = worst.max(off_line(&samples, p));
                    }
                }
                assert!(worst < 0.3, "strays {worst} px at zoom {zoom}");
            }
        }
    }

    #[test]
    fn points_stay_where_they_are_from_frame_to_frame() {
        let show = fixture::equal_areas();
        let camera = Camera::of(&show, &show.scenario.beats[0].view, 0.0, &fixture::HOUSE);
        let curve = Curve {
            ephemeris: &show.ephemeris,
            body: BodyId(1),
            about: Some(BodyId(0)),
            origin: super::super::scene::position(&show, BodyId(0), 0.0),
        };
        let keep = fixture::HOUSE.whole();
        let trace = |t: f64| curve.trace(&camera, &keep, t, 0.0);
        let (a, b) = (trace(9.00e6), trace(9.02e6));
        let shared = a.iter().filter(|s| b.iter().any(|r| (r.t_s - s.t_s).abs() < 1e-6)).count();
        assert!(shared * 10 >= a.len() * 8, "{shared} of {}", a.len());
    }

    #[test]
    fn a_body_at_rest_costs_next_to_nothing() {
        let show = fixture::equal_areas();
        let camera = Camera::of(&show, &show.scenario.beats[0].view, 0.0, &fixture::HOUSE);
        let curve = Curve {
            ephemeris: &show.ephemeris,
            body: BodyId(0),
            about: Some(BodyId(0)),
            origin: Vector3::zeros(),
        };
        let samples = curve.trace(&camera, &fixture::HOUSE.whole(), 0.0, 1e7);
        assert!(samples.len() < 40, "{}", samples.len());
    }

    #[test]
    fn powers_of_two() {
        for (value, want) in [(1.0, 1.0), (0.3, 0.25), (1000.0, 512.0), (64.0, 64.0)] {
            assert!((power_of_two_below(value) - want).abs() < 1e-12);
        }
    }
}
