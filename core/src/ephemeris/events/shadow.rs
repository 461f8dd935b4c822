//! Shadows: where a body meets the umbra or the penumbra of another one that the star lights.
//!
//! Both are cones around the line from the star through the caster, which touch both globes: the umbra, from which all of the
//! star is hidden, narrows to a tip (unless the caster is the larger one); the penumbra widens. A body is in a shadow as
//! long as any part of it is: the entry is the first touch of its limb, the exit the last. A point has one instant for both.

use super::roots::{self, Poly};
use super::steps::{DEGREE, MARGIN, Relative};
use super::{FAINTEST, NOISE};
use crate::Vector3;
use crate::initial::InitialState;
use crate::scenario::{BodyId, EventKind};

/// Coefficients of the cone's equation.
const WIDE: usize = 6 * DEGREE + 1;

/// The edge of a shadow, and which way it is crossed.
#[derive(Debug, Clone, Copy)]
pub(super) struct Edge {
    /// Radius of the caster, m.
    caster_m: f64,
    /// Radius of the body that is shaded, m.
    body_m: f64,
    /// By how much the cone's generators come nearer to the axis between star and caster, m: the difference of the radii for the
    /// umbra, minus their sum for the penumbra.
    narrows_m: f64,
    /// Whether entries are sought.
    entry: bool,
}

impl Edge {
    /// The edge that a kind of event crosses; `None` where the caster has no extent.
    pub(super) fn new(
        initial: &InitialState,
        body: BodyId,
        caster: BodyId,
        star: BodyId,
        kind: EventKind,
    ) -> Option<Self> {
        let radius = |body: BodyId| initial.bodies.get(body.0).map(|b| b.radius_m);
        let (caster_m, body_m, star_m) = (radius(caster)?, radius(body)?, radius(star)?);
        let umbra = matches!(kind, EventKind::ShadowEntry | EventKind::ShadowExit);
        let entry = matches!(kind, EventKind::ShadowEntry | EventKind::PenumbraEntry);
        let narrows_m = if umbra { star_m - caster_m } else { -star_m - caster_m };
        (caster_m > 0.0).then_some(Self { caster_m, body_m, narrows_m, entry })
    }

    /// The edge of the penumbra of a body, for an observer without extent: within it, the body covers a part of the star.
    pub(super) fn before(initial: &InitialState, body: BodyId, star: BodyId, entry: bool) -> Option<Self> {
        let radius = |body: BodyId| initial.bodies.get(body.0).map(|b| b.radius_m);
        let (caster_m, star_m) = (radius(body)?, radius(star)?);
        (caster_m > 0.0).then_some(Self { caster_m, body_m: 0.0, narrows_m: -star_m - caster_m, entry })
    }

    /// Crossings in a step: fraction of the step, and distance from the caster in metres.
    ///
    /// `d` is the body relative to the caster, `a` the caster relative to the star. With D = |a|, δ what the cone narrows by, R and r
    /// the radii of caster and body, the distance along the axis s = d · a / D and that from the axis ρ = |d × a| / D, the limb
    /// touches the flank where `ρ √(1 - δ²/D²) + s δ/D = R + r`. Squared, and multiplied by D⁴:
    /// `|d × a|² (D² - δ²) = ((R + r) D² - δ (d · a))²`, with the right side's root positive.
    /// Around the tip, at `a R / δ` behind the caster, it is the limb's distance from the tip that counts.
    pub(super) fn crossings(&self, d: &Relative, a: &Relative, forward: bool) -> Vec<(f64, f64)> {
        if self.is_out_of_reach(d, a) {
            return Vec::new();
        }
        let mut found = self.of_flank(d, a, forward);
        if self.narrows_m > 0.0 && self.body_m > 0.0 {
            found.extend(self.of_tip(d, a, forward));
            found.sort_by(|x, y| x.0.total_cmp(&y.0));
        }
        found
    }

    fn of_flank(&self, d: &Relative, a: &Relative, forward: bool) -> Vec<(f64, f64)> {
        let (poly, size) = self.cone(d, a);
        let depth = |h: f64| {
            let (d, a) = (d.at(h)[0], a.at(h)[0]);
            self.flank(d, a)
        };
        let mut found = Vec::new();
        for h in roots::sign_changes(&poly, MARGIN, NOISE * size, depth) {
            let ([d, dd, _], [a, da, _]) = (d.at(h), a.at(h));
            let along = d.dot(&a) / a.norm();
            if along <= 0.0 || self.rest(d, a) <= 0.0 || self.is_beyond_tip(d, a) {
                continue;
            }
            // The change of the flank's distance, by a difference over so little that it is a derivative.
            let by = 1e-6;
            let rate =
                (self.flank(d + dd * by, a + da * by) - self.flank(d - dd * by, a - da * by)) / (2.0 * by);
            if self.wanted(rate, forward) && rate.abs() >= FAINTEST * (dd.norm() + da.norm()) {
                found.push((h, d.norm()));
            }
        }
        found
    }

    fn of_tip(&self, d: &Relative, a: &Relative, forward: bool) -> Vec<(f64, f64)> {
        let from_tip = self.off_tip(d, a);
        let mut poly = from_tip.dot(&from_tip);
        let noise = NOISE * (poly.size() + self.body_m * self.body_m);
        poly.c[0] -= self.body_m * self.body_m;
        let mut found = Vec::new();
        for h in roots::sign_changes(&poly, MARGIN, noise, |h| from_tip.at(h)[0].norm() - self.body_m) {
            let [pos, vel, _] = from_tip.at(h);
            let (d, a) = (d.at(h)[0], a.at(h)[0]);
            let rate = pos.dot(&vel) / pos.norm();
            let behind = d.dot(&a) > 0.0 && self.is_beyond_tip(d, a);
            if behind && self.wanted(rate, forward) && rate.abs() >= FAINTEST * vel.norm() {
                found.push((h, d.norm()));
            }
        }
        found
    }

    /// Whether a distance from the edge that changes at this rate by the fraction of the step is a crossing that is sought.
    fn wanted(&self, rate: f64, forward: bool) -> bool {
        ((rate < 0.0) == self.entry) == forward
    }

    /// Distance of the limb from the flank, m; negative within the shadow.
    fn flank(&self, d: Vector3<f64>, a: Vector3<f64>) -> f64 {
        let (axis, sine) = self.axis(a);
        let cosine = (1.0 - sine * sine).max(0.0).sqrt();
        d.cross(&axis).norm() * cosine + d.dot(&axis) * sine - self.caster_m - self.body_m
    }

    /// Direction of the axis, and sine of the angle between it and the flank; positive where the shadow narrows.
    fn axis(&self, a: Vector3<f64>) -> (Vector3<f64>, f64) {
        let distance = a.norm();
        (a / distance, (self.narrows_m / distance).clamp(-1.0, 1.0))
    }

    /// What is left of the cone's width: negative beyond the tip, where the squared equation shows its mirror image.
    fn rest(&self, d: Vector3<f64>, a: Vector3<f64>) -> f64 {
        let (axis, sine) = self.axis(a);
        self.caster_m + self.body_m - d.dot(&axis) * sine
    }

    /// Whether the tip is the part of the cone that is nearest to the body.
    fn is_beyond_tip(&self, d: Vector3<f64>, a: Vector3<f64>) -> bool {
        if self.narrows_m <= 0.0 {
            return false;
        }
        let (axis, sine) = self.axis(a);
        let cosine = (1.0 - sine * sine).max(0.0).sqrt();
        let from_tip = d - a * (self.caster_m / self.narrows_m);
        from_tip.dot(&axis) * cosine > d.cross(&axis).norm() * sine
    }

    /// The body relative to the tip.
    fn off_tip(&self, d: &Relative, a: &Relative) -> Relative {
        let factor = self.caster_m / self.narrows_m;
        let mut from_tip = *d;
        for (d, a) in from_tip.c.iter_mut().zip(&a.c) {
            for (d, a) in d.iter_mut().zip(a) {
                *d -= factor * a;
            }
        }
        from_tip
    }

    /// The cone's equation, left side minus right side, and a bound of its terms.
    fn cone(&self, d: &Relative, a: &Relative) -> (Poly<WIDE>, f64) {
        let aa = a.dot(a);
        let mut narrow = aa;
        narrow.c[0] -= self.narrows_m * self.narrows_m;
        let along = d.dot(a);
        let mut rest = aa;
        for (rest, along) in rest.c.iter_mut().zip(&along.c) {
            *rest = (self.caster_m + self.body_m) * *rest - self.narrows_m * along;
        }
        let mut across = Poly::<{ 4 * DEGREE + 1 }>::ZERO;
        for (x, y) in [(1, 2), (2, 0), (0, 1)] {
            let mut part = Poly::<{ 2 * DEGREE + 1 }>::ZERO;
            part.add_product(&d.c[x], &a.c[y], 1.0);
            part.add_product(&d.c[y], &a.c[x], -1.0);
            across.add_product(&part.c, &part.c, 1.0);
        }
        let mut poly = Poly::<WIDE>::ZERO;
        poly.add_product(&across.c, &narrow.c, 1.0);
        poly.add_product(&rest.c, &rest.c, -1.0);
        let size = across.size() * narrow.size() + rest.size() * rest.size();
        (poly, size)
    }

    /// Whether the body is too far from the axis in the whole step, or before the caster.
    fn is_out_of_reach(&self, d: &Relative, a: &Relative) -> bool {
        let ([d0, ..], [a0, ..]) = (d.at(0.5), a.at(0.5));
        // No motion in half a step (and its margin) is longer than the derivative's bound.
        let (moved, turned) = (d.size().1, 2.0 * a.size().1 / a0.norm());
        let reach = d0.norm() + moved;
        let nearest = a0.norm() - a.size().1;
        let axis = a0 / a0.norm();
        let slack = moved + reach * turned;
        if d0.dot(&axis) + slack < 0.0 {
            return true;
        }
        let sine = self.narrows_m.abs() / nearest;
        if !(nearest > 0.0 && sine < 0.5) {
            return false;
        }
        // 1 / cos of less than 30 degrees is below 1.2.
        d0.cross(&axis).norm() - slack > 1.2 * (self.caster_m + self.body_m + reach * sine)
    }
}
