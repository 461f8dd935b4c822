//! Which tracers come so near to a body that the step of their block no longer does.

use super::block::LANES;
use super::field::{Field, Node};
use crate::math::float::pow;

/// Gravity bends a way in a step by this much at most, in radians of a circle: half as much again as steps are chosen for.
const MOST_BENT: f64 = 0.11;

/// Part of the acceleration that may be missed for a moment while a body is passed: in a step it moves a tracer by less than 1e-9 of its distance. What
/// is missed before the nearest point is nearly made up for after it.
const MISSED: f64 = 2e-7;

/// Error of the method for an acceleration that passes as that of a body at distance r with speed v does: this times (PASSING h v / r) to its
/// order. The derivatives of such an acceleration grow by factorials, of which PASSING is the mean.
const OF_ORDER: f64 = 0.07;
const PASSING: f64 = 6.0;

/// Passing is something else than going around together, or far inside: nearer than this part of the distance from the body that is circled.
const BESIDE: f64 = 0.5;

/// Room left for what bends the way to a body.
const ROOM: f64 = 1.05;

/// Bounds for one source.
#[derive(Debug, Clone, Copy)]
struct Bound {
    /// Within this distance gravity isn't resolved, or its surface or air begins, m.
    within_m: f64,
    /// Time in which a passing body must not come near, in steps; 0 for one that is circled or doesn't pull.
    steps: f64,
    /// Whether it is looked at at all: it may be out of reach for the whole block.
    looked_at: bool,
}

/// Bounds for all sources, for tracers that circle one of them with one step.
#[derive(Debug, Clone)]
pub(super) struct Watch {
    bounds: Vec<Bound>,
    circled: Option<usize>,
}

/// A tracer's place and velocity.
pub(super) type Moving = ([f64; 3], [f64; 3]);

impl Watch {
    /// For tracers such as this one.
    pub(super) fn new(field: &Field, node: &Node, step_s: f64, (pos, vel): Moving) -> Self {
        let apart = |n: usize| {
            let (at, moving) = (node.at[n], node.moving[n]);
            let (mut r2, mut v2) = (0.0, 0.0);
            for axis in 0..3 {
                r2 += (pos[axis] - at[axis]) * (pos[axis] - at[axis]);
                v2 += (vel[axis] - moving[axis]) * (vel[axis] - moving[axis]);
            }
            (r2, v2)
        };
        let circled = field.strongest(node, pos);
        // What is felt most, and how fast things pass here.
        let (felt_m_s2, speed_m_s) = circled.map_or((0.0, 0.0), |n| {
            let (r2, v2) = apart(n);
            (field.sources[n].gm / (r2 + field.softened2_m2), v2.sqrt())
        });
        let step = step_s.abs();
        let bound = |(n, source): (usize, &super::field::Source)| {
            let bent = source.gm * step * step / (MOST_BENT * MOST_BENT);
            // Where the cube of the softened distance is that.
            let softened_m = crate::math::float::cbrt(bent);
            let resolved_m = (softened_m * softened_m - field.softened2_m2).max(0.0).sqrt();
            let within_m = resolved_m.max(field.reach_m(n));
            let passes = source.gm > 0.0 && circled != Some(n);
            let beyond_m = 8.0 * speed_m_s * step;
            let share = source.gm / (felt_m_s2 * beyond_m * beyond_m);
            let steps = PASSING * pow(OF_ORDER * share / MISSED, 1.0 / 12.0).clamp(0.5, 6.0);
            Bound { within_m: ROOM * within_m, steps: if passes { steps } else { 0.0 }, looked_at: true }
        };
        Self { bounds: field.sources.iter().enumerate().map(bound).collect(), circled }
    }

    /// Leaves out the sources that none of these tracers can have to do with within the next `steps`: by their distances from the one that is
    /// circled. Each is given by its place and what it moves in a step.
    pub(super) fn narrow(&mut self, node: &Node, step_s: f64, steps: f64, all: impl Iterator<Item = Moving>) {
        let Some(circled) = self.circled else { return };
        let centre = node.at[circled];
        let (mut least2, mut most2, mut moved2) = (f64::INFINITY, 0.0_f64, 0.0_f64);
        for (pos, moved) in all {
            let (r2, m2) = (square([0, 1, 2].map(|axis| pos[axis] - centre[axis])), square(moved));
            least2 = if r2 < least2 { r2 } else { least2 };
            most2 = if r2 > most2 { r2 } else { most2 };
            moved2 = if m2 > moved2 { m2 } else { moved2 };
        }
        let (least_m, most_m, moved_m) = (least2.sqrt(), most2.sqrt(), moved2.sqrt());
        for (n, bound) in self.bounds.iter_mut().enumerate() {
            let from_m = square([0, 1, 2].map(|axis| node.at[n][axis] - centre[axis])).sqrt();
            let gap_m = (from_m - most_m).max(least_m - from_m);
            let near_m = bound.within_m + steps * (moved_m + step_s.abs() * square(node.moving[n]).sqrt());
            let beside_m = if bound.steps > 0.0 { BESIDE * most_m.min(2.0 * from_m) } else { 0.0 };
            bound.looked_at = n == circled || gap_m < near_m.max(beside_m);
        }
    }

    /// Whether a tracer has to go by itself, within the next `steps` of such length.
    pub(super) fn near(&self, node: &Node, (pos, vel): Moving, step_s: f64, steps: f64) -> bool {
        let moved = vel.map(|v| [v * step_s; LANES]);
        self.margins(node, &pos.map(|x| [x; LANES]), &moved, step_s, steps)[0] < 0.0
    }

    /// Below 0 for tracers that have to go by themselves: of some side by side, given by their places and what they move in a step.
    #[inline]
    pub(super) fn margins(
        &self,
        node: &Node,
        pos: &[[f64; LANES]; 3],
        moved: &[[f64; LANES]; 3],
        step_s: f64,
        steps: f64,
    ) -> [f64; LANES] {
        let mut beside2 = [f64::INFINITY; LANES];
        if let Some(n) = self.circled {
            for l in 0..LANES {
                let r = [0, 1, 2].map(|axis| pos[axis][l] - node.at[n][axis]);
                beside2[l] = BESIDE * BESIDE * (r[0] * r[0] + r[1] * r[1] + r[2] * r[2]);
            }
        }
        let mut margins = [f64::INFINITY; LANES];
        for (n, bound) in self.bounds.iter().enumerate().filter(|(_, bound)| bound.looked_at) {
            let (at, own) = (node.at[n], node.moving[n].map(|v| v * step_s));
            let within2 = bound.within_m * bound.within_m;
            let passing2 = bound.steps * bound.steps;
            for l in 0..LANES {
                let r = [0, 1, 2].map(|axis| pos[axis][l] - at[axis]);
                let v = [0, 1, 2].map(|axis| moved[axis][l] - own[axis]);
                let r2 = r[0] * r[0] + r[1] * r[1] + r[2] * r[2];
                let v2 = v[0] * v[0] + v[1] * v[1] + v[2] * v[2];
                let rv = r[0] * v[0] + r[1] * v[1] + r[2] * v[2];
                // Nearest, in a straight line, after so many steps.
                let soonest = -rv / (v2 + f64::MIN_POSITIVE);
                let soonest = if soonest > 0.0 { soonest } else { 0.0 };
                let nearest = if soonest < steps { soonest } else { steps };
                let nearest2 = r2 + nearest * (2.0 * rv + nearest * v2);
                let closing = nearest2 - within2;
                let (beside, passed) = (r2 - beside2[l], nearest2 - passing2 * v2);
                let both = if beside > passed { beside } else { passed };
                let margin = if closing < both { closing } else { both };
                margins[l] = if margin < margins[l] { margin } else { margins[l] };
            }
        }
        margins
    }
}

fn square(a: [f64; 3]) -> f64 {
    a[0] * a[0] + a[1] * a[1] + a[2] * a[2]
}
