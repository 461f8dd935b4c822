//! Least squares within bounds, one iteration at a time.
//!
//! The variables run from 0 to 1. Derivatives are central differences: an integration has too many switches (contacts, the
//! choice of an event) for derivatives carried along to be worth their price.

/// Step of the differences, as part of a variable's range: short beside a near passage, long beside rounding.
const DIFFERENCE: f64 = 1e-7;

/// Damping at the start, and how it changes after a good and a bad step.
const DAMPING: f64 = 1e-3;
const EASE: f64 = 0.1;
const STIFFEN: f64 = 8.0;

/// Bad steps in a row after which there is no better point near.
const TRIES: usize = 14;

/// Iterations at most.
const ITERATIONS: usize = 60;

/// An iteration that saves less than this part of the cost is the last.
const LEAST_GAIN: f64 = 1e-9;

/// A cost below which there is nothing left but rounding; residuals are by the size of what is wanted.
const ROUNDING: f64 = 1e-26;

/// Residuals at a point; `None` where the point can't be tried.
pub(super) type Residuals = Option<Vec<f64>>;

/// A search in progress.
#[derive(Debug, Clone)]
pub(super) struct Fit {
    pub(super) point: Vec<f64>,
    pub(super) residuals: Vec<f64>,
    damping: f64,
    iterations: usize,
    pub(super) done: bool,
}

/// Half the sum of the squares.
pub(super) fn cost(residuals: &[f64]) -> f64 {
    0.5 * residuals.iter().map(|r| r * r).sum::<f64>()
}

impl Fit {
    pub(super) const fn new(point: Vec<f64>, residuals: Vec<f64>) -> Self {
        Self { point, residuals, damping: DAMPING, iterations: 0, done: false }
    }

    /// One iteration: derivatives, and the best step that they lead to.
    ///
    /// # Source
    /// Levenberg and Marquardt's damping with Marquardt's scaling (J. J. Moré, in Numerical Analysis, ed. G. A. Watson (1978), 105), steps
    /// projected onto the bounds, and variables that lean against a bound left out (C. T. Kelley, Iterative Methods for Optimization
    /// (1999), 5.5).
    pub(super) fn step(&mut self, mut residuals_at: impl FnMut(&[f64]) -> Residuals) {
        self.iterations += 1;
        let before = cost(&self.residuals);
        let Some(columns) = self.derivatives(&mut residuals_at) else {
            self.done = true;
            return;
        };
        let slope: Vec<f64> = columns.iter().map(|c| dot(c, &self.residuals)).collect();
        let free: Vec<usize> = (0..self.point.len())
            .filter(|&k| {
                let leans = self.point[k] <= 0.0 && slope[k] > 0.0 || self.point[k] >= 1.0 && slope[k] < 0.0;
                !leans && slope[k] != 0.0
            })
            .collect();
        for _ in 0..TRIES {
            let Some(step) = damped(&columns, &slope, &free, self.damping) else { break };
            let mut trial = self.point.clone();
            for (&k, by) in free.iter().zip(&step) {
                trial[k] = (trial[k] + by).clamp(0.0, 1.0);
            }
            if trial == self.point {
                break;
            }
            match residuals_at(&trial) {
                Some(residuals) if cost(&residuals) < before => {
                    let after = cost(&residuals);
                    self.damping = (self.damping * EASE).max(1e-12);
                    (self.point, self.residuals) = (trial, residuals);
                    self.done = before - after < LEAST_GAIN * before
                        || after < ROUNDING
                        || self.iterations >= ITERATIONS;
                    return;
                }
                _ => self.damping *= STIFFEN,
            }
        }
        self.done = true;
    }

    /// Derivatives of the residuals by each variable; `None` where no difference can be taken.
    fn derivatives(&self, residuals_at: &mut impl FnMut(&[f64]) -> Residuals) -> Option<Vec<Vec<f64>>> {
        let at = |k: usize, by: f64| {
            let mut point = self.point.clone();
            point[k] = (point[k] + by).clamp(0.0, 1.0);
            point
        };
        let mut columns = Vec::new();
        for k in 0..self.point.len() {
            let mut ends = Vec::new();
            for by in [DIFFERENCE, -DIFFERENCE] {
                let point = at(k, by);
                // Where one side is out of bounds or can't be tried, the middle is that end.
                match if point == self.point { None } else { residuals_at(&point) } {
                    Some(residuals) => ends.push((point[k], residuals)),
                    None => ends.push((self.point[k], self.residuals.clone())),
                }
            }
            let (above, below) = (&ends[0], &ends[1]);
            let width = above.0 - below.0;
            if width <= 0.0 {
                return None;
            }
            columns.push(above.1.iter().zip(&below.1).map(|(a, b)| (a - b) / width).collect());
        }
        Some(columns)
    }
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(x, y)| x * y).sum()
}

/// The solution of the damped normal equations for the free variables; `None` when they are singular.
fn damped(columns: &[Vec<f64>], slope: &[f64], free: &[usize], damping: f64) -> Option<Vec<f64>> {
    if free.is_empty() {
        return None;
    }
    let mut rows: Vec<Vec<f64>> = free
        .iter()
        .map(|&i| {
            let mut row: Vec<f64> = free
                .iter()
                .map(|&j| dot(&columns[i], &columns[j]) * if i == j { 1.0 + damping } else { 1.0 })
                .collect();
            row.push(-slope[i]);
            row
        })
        .collect();
    // Gauss's elimination with the largest pivot.
    let n = rows.len();
    for k in 0..n {
        let pivot = (k..n).max_by(|&a, &b| rows[a][k].abs().total_cmp(&rows[b][k].abs()))?;
        rows.swap(k, pivot);
        if rows[k][k] == 0.0 || !rows[k][k].is_finite() {
            return None;
        }
        for i in k + 1..n {
            let factor = rows[i][k] / rows[k][k];
            for j in k..=n {
                rows[i][j] -= factor * rows[k][j];
            }
        }
    }
    let mut solution = vec![0.0; n];
    for k in (0..n).rev() {
        let known: f64 = (k + 1..n).map(|j| rows[k][j] * solution[j]).sum();
        solution[k] = (rows[k][n] - known) / rows[k][k];
    }
    solution.iter().all(|x| x.is_finite()).then_some(solution)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn solve(start: &[f64], f: impl Fn(&[f64]) -> Residuals) -> Fit {
        let mut fit = Fit::new(start.to_vec(), f(start).unwrap());
        while !fit.done {
            fit.step(&f);
        }
        fit
    }

    #[test]
    fn a_curved_valley_is_followed_to_its_end() {
        // Rosenbrock's valley, its minimum at (0.7, 0.49).
        let fit = solve(&[0.05, 0.9], |x| Some(vec![10.0 * (x[1] - x[0] * x[0]), 0.7 - x[0]]));
        assert!((fit.point[0] - 0.7).abs() < 1e-8 && (fit.point[1] - 0.49).abs() < 1e-8, "{fit:?}");
    }

    #[test]
    fn what_lies_beyond_a_bound_is_sought_along_it() {
        // The minimum without bounds is at (1.5, 0.75); on the bound x = 1 the other one is best at 0.5.
        let fit = solve(&[0.3, 0.3], |x| Some(vec![10.0 * (x[0] - 1.5), 10.0 * (x[1] - 0.5 * x[0])]));
        assert!((fit.point[0] - 1.0).abs() < 1e-12 && (fit.point[1] - 0.5).abs() < 1e-7, "{fit:?}");
    }

    #[test]
    fn points_that_cannot_be_tried_are_gone_around() {
        let fit = solve(&[0.1], |x| (x[0] < 0.6).then(|| vec![(x[0] * x[0] - 0.25) * 1e4]));
        assert!((fit.point[0] - 0.5).abs() < 1e-9, "{fit:?}");
        // A flat cost leads nowhere, and ends.
        assert!(solve(&[0.4], |_| Some(vec![3.0])).done);
    }
}
