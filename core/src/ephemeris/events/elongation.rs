//! Greatest elongations: where the angle between a body and the star, seen from another body, is at its greatest.
//!
//! The angle is the true one, not the difference in longitude. Only a body nearer to the star than the observer has one: the
//! maximum of a body farther out is all but 180 degrees, and is told as its opposition.

use super::roots::{self, Poly};
use super::steps::{DEGREE, MARGIN, Relative};
use super::{FAINTEST, NOISE};
use crate::math::float::atan2;

/// Coefficients of the derivative of the angle's cosine.
const WIDE: usize = 6 * DEGREE;

/// The greatest elongations in a step: fraction of the step, and the angle in degrees, negative west of the star.
///
/// `body` and `star` are relative to the observer.
///
/// With a and b the directions of body and star, `|a|³ |b|³ (cos E)′ = b² (a × a′) · (a × b) - a² (b × b′) · (a × b)`, which is a
/// polynomial.
pub(super) fn greatest(body: &Relative, star: &Relative) -> Vec<(f64, f64)> {
    if is_farther_out(body, star) {
        return Vec::new();
    }
    let exact = |h: f64| {
        let ([a, da, _], [b, db, _]) = (body.at(h), star.at(h));
        let across = a.cross(&b);
        b.norm_squared() * a.cross(&da).dot(&across) - a.norm_squared() * b.cross(&db).dot(&across)
    };
    let mut found = Vec::new();
    let (poly, size) = cosine_rate(body, star);
    for h in roots::sign_changes(&poly, MARGIN, NOISE * size, exact) {
        let ([a, da, dda], [b, db, ddb]) = (body.at(h), star.at(h));
        let across = a.cross(&b);
        let d_across = da.cross(&b) + a.cross(&db);
        let (turn_a, turn_b) = (a.cross(&da), b.cross(&db));
        let (p, q) = (turn_a.dot(&across), turn_b.dot(&across));
        let dp = a.cross(&dda).dot(&across) + turn_a.dot(&d_across);
        let dq = b.cross(&ddb).dot(&across) + turn_b.dot(&d_across);
        let (aa, bb) = (a.norm_squared(), b.norm_squared());
        let curve = dp * bb + 2.0 * p * b.dot(&db) - dq * aa - 2.0 * q * a.dot(&da);
        let pace = da.norm() / a.norm() + db.norm() / b.norm();
        let scale = aa * bb * a.norm() * b.norm() * pace * pace;
        // The cosine's minimum is the angle's maximum.
        if curve >= FAINTEST * scale && (a - b).norm() < b.norm() {
            let angle = atan2(across.norm(), a.dot(&b)).to_degrees();
            found.push((h, if across.z > 0.0 { -angle } else { angle }));
        }
    }
    found
}

/// Whether the body is farther from the star than the observer in the whole step.
fn is_farther_out(body: &Relative, star: &Relative) -> bool {
    let ([a, ..], [b, ..]) = (body.at(0.5), star.at(0.5));
    // No motion in half a step (and its margin) is longer than the derivative's bound.
    let moved = body.size().1 + 2.0 * star.size().1;
    (a - b).norm() - b.norm() > moved
}

/// `b² [(a′ · b) a² - (a · b)(a · a′)] + a² [(a · b′) b² - (a · b)(b · b′)]`, and a bound of its terms.
fn cosine_rate(a: &Relative, b: &Relative) -> (Poly<WIDE>, f64) {
    let (aa, bb, ab) = (a.dot(a), b.dot(b), a.dot(b));
    let mut ab_rate = a.dot_rate(b);
    for (x, y) in ab_rate.c.iter_mut().zip(&b.dot_rate(a).c) {
        *x += y;
    }
    // (a · b)′ a² b² - (a · b) [(a · a′) b² + (b · b′) a²]. Rates have one coefficient fewer.
    let rate = |poly: &Poly<{ 2 * DEGREE + 1 }>| -> [f64; 2 * DEGREE] { std::array::from_fn(|k| poly.c[k]) };
    let mut squares = Poly::<{ 4 * DEGREE + 1 }>::ZERO;
    squares.add_product(&aa.c, &bb.c, 1.0);
    let mut stretch = Poly::<{ 4 * DEGREE }>::ZERO;
    stretch.add_product(&rate(&a.range_rate()), &bb.c, 1.0);
    stretch.add_product(&rate(&b.range_rate()), &aa.c, 1.0);
    let mut poly = Poly::<WIDE>::ZERO;
    poly.add_product(&rate(&ab_rate), &squares.c, 1.0);
    poly.add_product(&ab.c, &stretch.c, -1.0);
    (poly, ab_rate.size() * squares.size() + ab.size() * stretch.size())
}
