//! The steps in which some bodies of an ephemeris keep their polynomials, in order of time, and the relative motion of two of them.

use super::roots::Poly;
use crate::Vector3;
use crate::ephemeris::{Ephemeris, PER_BODY, Track};

/// How far beyond its ends a step is searched, in parts of it: an event in the rounding between two steps is then
/// seen from both sides, never from none.
pub(super) const MARGIN: f64 = 1e-6;

/// A stretch of a track in which the bodies looked at keep their polynomials.
#[derive(Debug, Clone, Copy)]
pub(super) struct Step<'a> {
    track: &'a Track,
    pub(super) start_s: f64,
    pub(super) step_s: f64,
}

impl Step<'_> {
    /// The instant at a fraction of the step.
    pub(super) fn at(&self, h: f64) -> f64 {
        self.start_s + h * self.step_s
    }

    /// Events nearer to each other than this are one seen twice, s.
    pub(super) fn same_s(&self) -> f64 {
        2.0 * MARGIN * self.step_s.abs()
    }

    /// Motion of a body relative to another as a polynomial of the fraction of the step.
    pub(super) fn relative(&self, body: usize, about: usize) -> Option<Relative> {
        let a = self.track.numbers(body, self.start_s, self.step_s)?;
        let b = self.track.numbers(about, self.start_s, self.step_s)?;
        let t = self.step_s;
        let mut c = [[0.0; DEGREE + 1]; 3];
        for (axis, c) in c.iter_mut().enumerate() {
            for row in 0..PER_BODY / 3 {
                // The acceleration's k-th coefficient, integrated twice.
                let weight = match row {
                    0 => 1.0,
                    1 => t,
                    _ => t * t / ((row * (row - 1)) as f64),
                };
                c[row] = weight * (a[3 * row + axis] - b[3 * row + axis]);
            }
        }
        Some(Relative { c })
    }
}

/// Degree of positions in a step.
pub(super) const DEGREE: usize = PER_BODY / 3 - 1;

/// Coefficients of products of two positions.
pub(super) const SQUARE: usize = 2 * DEGREE + 1;

/// Relative motion in one step: coefficients of each axis in powers of the fraction of the step, m.
#[derive(Debug, Clone, Copy)]
pub(super) struct Relative {
    pub(super) c: [[f64; DEGREE + 1]; 3],
}

impl Relative {
    /// Position, and its first and second derivative by the fraction of the step.
    pub(super) fn at(&self, h: f64) -> [Vector3<f64>; 3] {
        let mut out = [Vector3::zeros(); 3];
        for (axis, c) in self.c.iter().enumerate() {
            let (mut p, mut d, mut dd) = (0.0, 0.0, 0.0);
            for &x in c.iter().rev() {
                dd = dd * h + 2.0 * d;
                d = d * h + p;
                p = p * h + x;
            }
            out[0][axis] = p;
            out[1][axis] = d;
            out[2][axis] = dd;
        }
        out
    }

    /// Height above the ecliptic.
    pub(super) fn height(&self) -> Poly<{ DEGREE + 1 }> {
        Poly { c: self.c[2] }
    }

    /// a · b of two relative motions.
    pub(super) fn dot(&self, other: &Self) -> Poly<SQUARE> {
        let mut poly = Poly::ZERO;
        for (a, b) in self.c.iter().zip(&other.c) {
            poly.add_product(a, b, 1.0);
        }
        poly
    }

    /// a · b′ of two relative motions.
    pub(super) fn dot_rate(&self, other: &Self) -> Poly<SQUARE> {
        let mut poly = Poly::ZERO;
        for (a, b) in self.c.iter().zip(&other.c) {
            poly.add_product(a, &derivative(b), 1.0);
        }
        poly
    }

    /// r · r′, half the derivative of the squared distance.
    pub(super) fn range_rate(&self) -> Poly<SQUARE> {
        self.dot_rate(self)
    }

    /// x y′ - y x′: 0 where the longitude stands still.
    pub(super) fn turning(&self) -> Poly<SQUARE> {
        let mut poly = Poly::ZERO;
        poly.add_product(&self.c[0], &derivative(&self.c[1]), 1.0);
        poly.add_product(&self.c[1], &derivative(&self.c[0]), -1.0);
        poly
    }

    /// x₁ y₂ - y₁ x₂ of two relative motions: 0 where both have the same or the opposite longitude.
    pub(super) fn cross_in_plane(&self, other: &Self) -> Poly<SQUARE> {
        let mut poly = Poly::ZERO;
        poly.add_product(&self.c[0], &other.c[1], 1.0);
        poly.add_product(&self.c[1], &other.c[0], -1.0);
        poly
    }

    /// Bounds of distance and of its derivative in the step.
    pub(super) fn size(&self) -> (f64, f64) {
        let (mut r, mut d) = (0.0, 0.0);
        for c in &self.c {
            for (k, x) in c.iter().enumerate() {
                r += x.abs();
                d += k as f64 * x.abs();
            }
        }
        (r, d)
    }
}

fn derivative(c: &[f64; DEGREE + 1]) -> [f64; DEGREE] {
    std::array::from_fn(|k| (k + 1) as f64 * c[k + 1])
}

/// The steps of some bodies that cover an interval, in order of time.
pub(super) fn steps<'a>(
    eph: &'a Ephemeris,
    bodies: &'a [usize],
    from_s: f64,
    until_s: f64,
) -> impl Iterator<Item = Step<'a>> {
    let (forward, backward) = (eph.forward(), eph.backward());
    let step = |track: &'a Track| move |(start_s, step_s)| Step { track, start_s, step_s };
    let back: Vec<Step<'a>> = if from_s < 0.0 {
        backward.stretches(bodies, until_s.min(0.0), from_s).map(step(backward)).collect()
    } else {
        Vec::new()
    };
    let on = (until_s >= 0.0).then(|| forward.stretches(bodies, from_s.max(0.0), until_s).map(step(forward)));
    back.into_iter().rev().chain(on.into_iter().flatten())
}
