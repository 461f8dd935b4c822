//! Which tracers come so near to a body that the step of their block no longer does.

use super::block::{GONE_M, LANES, Row};
use super::field::{Field, Node, apart};
use crate::math::float::pow;
use wide::f64x4;

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

/// Largest error of a pull in single precision, as part of the acceleration by the body that is circled. It changes sign from step to
/// step and from place to place; ten years of steps make some tens of it.
const SLIGHT: f64 = 2e-10;

/// Rounding of single precision. A pull that is worked out so is off by some eight of them, and by three for each that places are off by,
/// as a part of the distance.
const SINGLE: f64 = 6e-8;

/// How much farther in or out than its conic others may take a body until the next look.
const OTHERS: f64 = 1.05;

/// Bounds for one source.
#[derive(Debug, Clone, Copy)]
struct Bound {
    /// Within this distance gravity isn't resolved, or its surface or air begins, m.
    within_m: f64,
    /// Time in which a passing body must not come near, in steps; 0 for one that is circled or doesn't pull.
    steps: f64,
    /// Whether it is looked at at all: it may be out of reach for the whole block.
    looked_at: bool,
    gm: f64,
    /// Whether single precision does for its pull on the whole block.
    slight: bool,
}

/// Bounds for all sources, for tracers that circle one of them with one step.
#[derive(Debug, Clone)]
pub(super) struct Watch {
    bounds: Vec<Bound>,
    circled: Option<usize>,
    /// Whether pulls are softened, and ways about the one that is circled no conics.
    softened: bool,
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
            Bound {
                within_m: ROOM * within_m,
                steps: if passes { steps } else { 0.0 },
                looked_at: true,
                gm: source.gm,
                slight: false,
            }
        };
        Self {
            bounds: field.sources.iter().enumerate().map(bound).collect(),
            circled,
            softened: field.softened2_m2 > 0.0,
        }
    }

    /// Leaves out the sources that none of a block's tracers can have to do with within the next `steps`, and finds those whose pull is slight:
    /// by their distances from the one that is circled. Tracers are given by their places and what they move in a step.
    pub(super) fn narrow(
        &mut self,
        node: &Node,
        step_s: f64,
        steps: f64,
        pos: &[Row; 3],
        moved: &[Row; 3],
        width: usize,
    ) {
        let Some(circled) = self.circled else { return };
        let (centre, going) = (node.at[circled], node.moving[circled]);
        let gm = self.bounds[circled].gm;
        let shell = Shell::of(centre, pos, moved, width);
        let (least_m, most_m) = shell.after(gm * step_s * step_s, steps);
        let felt_m_s2 = gm / (most_m * most_m);
        let from_origin_m = square(centre).sqrt() + most_m;
        for (n, bound) in self.bounds.iter_mut().enumerate() {
            let (r, v) = (apart(node.at[n], centre), apart(node.moving[n], going));
            let from_m = square(r).sqrt();
            let goes_m = steps * step_s.abs() * square(v).sqrt();
            let (lowest_m, highest_m) =
                if self.softened { (0.0, f64::INFINITY) } else { between(gm + bound.gm, r, v) };
            let gap_m =
                (lowest_m.max(from_m - goes_m) - most_m).max(least_m - highest_m.min(from_m + goes_m));
            // Neither beside it, nor passed by it soon enough.
            let passing_m = bound.steps * (shell.moved_m + step_s.abs() * square(v).sqrt());
            let beside_m = (BESIDE * most_m.min(2.0 * from_m)).min(passing_m);
            bound.looked_at = gap_m < bound.within_m.max(beside_m);
            let lost = SINGLE * (8.0 + 3.0 * (from_origin_m + square(node.at[n]).sqrt()) / gap_m);
            // False for what is not a number, too.
            bound.slight = !self.softened
                && n != circled
                && gap_m > 0.0
                && lost * bound.gm <= SLIGHT * felt_m_s2 * gap_m * gap_m;
        }
    }

    /// Whether any source has to be looked at.
    pub(super) fn looks(&self) -> bool {
        self.bounds.iter().any(|bound| bound.looked_at)
    }

    /// Whether single precision does for the pull of a source.
    pub(super) fn slight(&self, source: usize) -> bool {
        self.bounds[source].slight
    }

    /// Whether a tracer has to go by itself, within the next `steps` of such length.
    pub(super) fn near(&self, node: &Node, (pos, vel): Moving, step_s: f64, steps: f64) -> bool {
        let moved = vel.map(|v| f64x4::splat(v * step_s));
        self.margins(node, pos.map(f64x4::splat), moved, step_s, steps)[0] < 0.0
    }

    /// Below 0 for tracers that have to go by themselves: of some side by side, given by their places and what they move in a step.
    pub(super) fn margins(
        &self,
        node: &Node,
        pos: [f64x4; 3],
        moved: [f64x4; 3],
        step_s: f64,
        steps: f64,
    ) -> [f64; LANES] {
        let from = |at: [f64; 3]| [0, 1, 2].map(|axis| pos[axis] - at[axis]);
        let beside2 = self.circled.map_or(f64x4::splat(f64::INFINITY), |n| {
            let r = from(node.at[n]);
            by(r, r) * (BESIDE * BESIDE)
        });
        let mut margins = f64x4::splat(f64::INFINITY);
        for (n, bound) in self.bounds.iter().enumerate().filter(|(_, bound)| bound.looked_at) {
            let own = node.moving[n];
            let r = from(node.at[n]);
            let v = [0, 1, 2].map(|axis| moved[axis] - own[axis] * step_s);
            let (r2, v2, rv) = (by(r, r), by(v, v), by(r, v));
            // Nearest, in a straight line, after so many steps.
            let nearest = smaller(larger(-rv / (v2 + f64::MIN_POSITIVE), f64x4::ZERO), f64x4::splat(steps));
            let nearest2 = r2 + nearest * (rv + rv + nearest * v2);
            let closing = nearest2 - bound.within_m * bound.within_m;
            let (beside, passed) = (r2 - beside2, nearest2 - v2 * (bound.steps * bound.steps));
            margins = smaller(smaller(closing, larger(beside, passed)), margins);
        }
        margins.to_array()
    }
}

/// The smaller of two numbers, the second where one of them is not a number: natively and in wasm alike, which `min` is not.
#[inline]
fn smaller(a: f64x4, b: f64x4) -> f64x4 {
    a.simd_lt(b).select(a, b)
}

/// The larger, likewise.
#[inline]
fn larger(a: f64x4, b: f64x4) -> f64x4 {
    a.simd_gt(b).select(a, b)
}

/// Products of vectors side by side.
#[inline]
fn by(a: [f64x4; 3], b: [f64x4; 3]) -> f64x4 {
    a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
}

/// Between which distances from a centre tracers are.
#[derive(Debug, Clone, Copy)]
struct Shell {
    least_m: f64,
    most_m: f64,
    /// How far the fastest moves in a step, and how far along its distance the one that does so most.
    moved_m: f64,
    along_m: f64,
}

impl Shell {
    /// Of tracers that are there.
    fn of(centre: [f64; 3], pos: &[Row; 3], moved: &[Row; 3], width: usize) -> Self {
        let (mut least2, mut most2) = ([f64::INFINITY; LANES], [0.0; LANES]);
        let (mut moved2, mut along2) = ([0.0; LANES], [0.0; LANES]);
        let [x, y, z] = pos.each_ref().map(|row| row[..width].as_chunks::<LANES>().0);
        let [u, v, w] = moved.each_ref().map(|row| row[..width].as_chunks::<LANES>().0);
        for (((x, y), z), ((u, v), w)) in x.iter().zip(y).zip(z).zip(u.iter().zip(v).zip(w)) {
            for l in 0..LANES {
                let r = [x[l] - centre[0], y[l] - centre[1], z[l] - centre[2]];
                let (r2, m2) = (square(r), square([u[l], v[l], w[l]]));
                let rm = r[0] * u[l] + r[1] * v[l] + r[2] * w[l];
                let a2 = rm * rm / r2;
                least2[l] = if r2 < least2[l] { r2 } else { least2[l] };
                let there2 = if r2 < GONE_M * GONE_M { r2 } else { 0.0 };
                most2[l] = if there2 > most2[l] { there2 } else { most2[l] };
                moved2[l] = if m2 > moved2[l] { m2 } else { moved2[l] };
                along2[l] = if a2 > along2[l] { a2 } else { along2[l] };
            }
        }
        let most = |squares: [f64; LANES]| squares.into_iter().fold(0.0, f64::max).sqrt();
        Self {
            least_m: least2.into_iter().fold(f64::INFINITY, f64::min).sqrt(),
            most_m: most(most2),
            moved_m: most(moved2),
            along_m: most(along2),
        }
    }

    /// Between which distances they stay for some steps, `gm` being that of the centre by the square of a step. Along the distance nothing pulls
    /// inwards more than the centre, and nothing drives outwards more than the fastest motion across does.
    fn after(&self, gm: f64, steps: f64) -> (f64, f64) {
        let half2 = 0.5 * steps * steps;
        let way_m = steps * self.along_m;
        let lowest_m = self.least_m - way_m - half2 * gm / (self.least_m * self.least_m);
        (lowest_m, self.most_m + way_m + half2 * self.moved_m * self.moved_m / self.least_m)
    }
}

/// Between which distances from a centre a body goes round it, and a little more, by its place and velocity.
fn between(gm: f64, r: [f64; 3], v: [f64; 3]) -> (f64, f64) {
    let (r2, v2) = (square(r), square(v));
    let rv = r[0] * v[0] + r[1] * v[1] + r[2] * v[2];
    let (width, energy) = ((r2 * v2 - rv * rv).max(0.0) / gm, 2.0 / r2.sqrt() - v2 / gm);
    let eccentricity = (1.0 - width * energy).max(0.0).sqrt();
    let highest_m = if energy > 0.0 { (1.0 + eccentricity) / energy } else { f64::INFINITY };
    (width / (1.0 + eccentricity) / OTHERS, highest_m * OTHERS)
}

#[inline]
fn square(a: [f64; 3]) -> f64 {
    a[0] * a[0] + a[1] * a[1] + a[2] * a[2]
}
