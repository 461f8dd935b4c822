//! Every sign change of a polynomial on an interval: none missed, however close two of them are.

use crate::math::root::bracketed;

/// Halvings at most: closer than this (a part in 10¹² of the interval) two sign changes cancel.
const DEPTH: u32 = 40;

/// Where an interval is parted; not in the middle, where roots of symmetric things like to be.
const PART: f64 = 0.487;

/// A polynomial in powers of the fraction of a step, with `N` coefficients.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Poly<const N: usize> {
    pub(super) c: [f64; N],
}

impl<const N: usize> Poly<N> {
    pub(super) const ZERO: Self = Self { c: [0.0; N] };

    /// Adds `factor` times the product of two polynomials; the degrees must fit.
    pub(super) fn add_product(&mut self, a: &[f64], b: &[f64], factor: f64) {
        debug_assert!(a.len() + b.len() <= N + 1, "the product has {} coefficients", a.len() + b.len() - 1);
        for (i, x) in a.iter().enumerate() {
            for (j, y) in b.iter().enumerate() {
                if i + j < N {
                    self.c[i + j] += factor * x * y;
                }
            }
        }
    }

    /// A bound of its values on a step: the sum of its coefficients' sizes.
    pub(super) fn size(&self) -> f64 {
        self.c.iter().map(|c| c.abs()).sum()
    }

    /// Coefficients of Bernstein's basis on the interval from `-margin` to `1 + margin`.
    fn bernstein(&self, margin: f64) -> [f64; N] {
        let mut a = self.c;
        // h = u (1 + 2 margin) - margin: a shift by Horner's scheme, then a scale.
        for i in 0..N - 1 {
            for k in (i..N - 1).rev() {
                a[k] -= margin * a[k + 1];
            }
        }
        let mut scale = 1.0;
        for x in &mut a {
            *x *= scale;
            scale *= 1.0 + 2.0 * margin;
        }
        // b_j = Σ C(j,k) / C(n,k) a_k, by the differences that de Casteljau's scheme runs backwards.
        let n = (N - 1) as f64;
        let mut binomial = 1.0;
        for (k, x) in a.iter_mut().enumerate() {
            *x /= binomial;
            binomial *= (n - k as f64) / (k as f64 + 1.0);
        }
        for level in 1..N {
            for j in (level..N).rev() {
                a[j] += a[j - 1];
            }
        }
        a
    }
}

/// 0 counts as above, everywhere alike: then each sign change belongs to one interval only.
fn above(x: f64) -> bool {
    x >= 0.0
}

fn variations(b: &[f64]) -> usize {
    b.windows(2).filter(|w| above(w[0]) != above(w[1])).count()
}

/// Where a polynomial changes its sign between `-margin` and `1 + margin`, in order.
///
/// `exact` is the same function as its author would evaluate it; the polynomial only isolates its roots. `noise` is the size
/// below which values mean nothing.
///
/// # Source
/// Descartes' rule of signs in Bernstein's basis: no change of sign among the coefficients proves that there is no root, one that
/// there is exactly one; else the interval is parted (J. M. Lane and R. F. Riesenfeld, BIT 21 (1981), 112).
pub(super) fn sign_changes<const N: usize>(
    poly: &Poly<N>,
    margin: f64,
    noise: f64,
    exact: impl Fn(f64) -> f64,
) -> Vec<f64> {
    let whole = poly.bernstein(margin);
    let mut roots = Vec::new();
    if variations(&whole) == 0 || whole.iter().all(|b| b.abs() <= noise) {
        return roots;
    }
    let h = |u: f64| u * (1.0 + 2.0 * margin) - margin;
    // From the left to the right: the right part waits below the left one.
    let mut stack = vec![(whole, 0.0, 1.0, 0)];
    while let Some((b, from, until, depth)) = stack.pop() {
        match variations(&b) {
            0 => {}
            1 => roots.push(polish(h(from), h(until), &exact)),
            _ if depth >= DEPTH => {
                if above(b[0]) != above(b[N - 1]) {
                    roots.push(polish(h(from), h(until), &exact));
                }
            }
            _ => {
                let middle = from + PART * (until - from);
                let (left, right) = part(&b);
                stack.push((right, middle, until, depth + 1));
                stack.push((left, from, middle, depth + 1));
            }
        }
    }
    roots
}

/// de Casteljau's scheme: the coefficients on both parts.
fn part<const N: usize>(b: &[f64; N]) -> ([f64; N], [f64; N]) {
    let (mut left, mut right) = ([0.0; N], *b);
    left[0] = right[0];
    for level in 1..N {
        for j in 0..N - level {
            right[j] = (1.0 - PART) * right[j] + PART * right[j + 1];
        }
        left[level] = right[0];
    }
    (left, right)
}

/// The root in a bracket, to the last places. Where rounding hides the change of sign, the better end.
fn polish(from: f64, until: f64, exact: impl Fn(f64) -> f64) -> f64 {
    bracketed(&exact, from, until, 0.0)
        .unwrap_or_else(|| if exact(from).abs() <= exact(until).abs() { from } else { until })
}

#[cfg(test)]
mod tests {
    use super::*;

    const MOST: usize = 19;

    fn of_roots(roots: &[f64]) -> Poly<MOST> {
        let mut poly = Poly::ZERO;
        poly.c[0] = 1.0;
        for root in roots {
            for k in (0..MOST).rev() {
                poly.c[k] = if k > 0 { poly.c[k - 1] } else { 0.0 } - root * poly.c[k];
            }
        }
        poly
    }

    fn found(roots: &[f64]) -> Vec<f64> {
        let exact = |x: f64| roots.iter().map(|r| x - r).product::<f64>();
        sign_changes(&of_roots(roots), 1e-6, 0.0, exact)
    }

    #[test]
    fn pairs_close_together_are_both_found() {
        let got = found(&[0.2, 0.5, 0.500_01, 0.9, 1.4]);
        assert_eq!(got.len(), 4, "{got:?}");
        for (got, want) in got.iter().zip([0.2, 0.5, 0.500_01, 0.9]) {
            assert!((got - want).abs() < 1e-14, "got {got}, want {want}");
        }
    }

    #[test]
    fn roots_at_the_ends_and_where_an_interval_is_parted_are_found_once() {
        assert_eq!(found(&[0.0]).len(), 1);
        assert_eq!(found(&[1.0]).len(), 1);
        assert_eq!(found(&[0.0, 1.0, 0.487]).len(), 3);
        assert_eq!(found(&[-0.1, 1.1]).len(), 0);
    }

    #[test]
    fn touching_without_crossing_is_no_sign_change() {
        assert!(found(&[0.3, 0.3]).len().is_multiple_of(2));
        assert!(found(&[]).is_empty());
    }
}
