//! Least squares within bounds, one iteration at a time.
//!
//! The variables run from 0 to 1. Derivatives are asked of the problem; where it has none, and where its own lead nowhere (other paths may
//! have other events), central differences are taken, which cost two trials for each variable.

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
const LEAST_GAIN: f64 = 1e-5;

/// A cost below which there is nothing left but rounding; residuals are by the size of what is wanted.
const ROUNDING: f64 = 1e-26;

/// What is to be made small.
pub(super) trait Problem {
    /// What the derivatives at a point need of its trial.
    type Kept;

    /// Residuals at a point; `None` where the point can't be tried.
    fn residuals(&mut self, point: &[f64]) -> Option<(Vec<f64>, Self::Kept)>;

    /// Derivatives of all residuals by each variable; `None` where only differences can tell.
    fn slopes(&mut self, point: &[f64], kept: Option<&Self::Kept>) -> Option<Vec<Vec<f64>>>;
}

/// A function of which nothing is known but its values.
impl<F: FnMut(&[f64]) -> Option<Vec<f64>>> Problem for F {
    type Kept = ();

    fn residuals(&mut self, point: &[f64]) -> Option<(Vec<f64>, ())> {
        Some((self(point)?, ()))
    }

    fn slopes(&mut self, _: &[f64], _: Option<&()>) -> Option<Vec<Vec<f64>>> {
        None
    }
}

/// A search in progress.
#[derive(Debug, Clone)]
pub(super) struct Fit<K = ()> {
    pub(super) point: Vec<f64>,
    pub(super) residuals: Vec<f64>,
    /// Of the trial at the point, where it was this search's own.
    kept: Option<K>,
    /// Whether the problem's own derivatives led nowhere.
    by_differences: bool,
    damping: f64,
    iterations: usize,
    pub(super) done: bool,
}

/// Half the sum of the squares.
pub(super) fn cost(residuals: &[f64]) -> f64 {
    0.5 * residuals.iter().map(|r| r * r).sum::<f64>()
}

impl<K> Fit<K> {
    pub(super) const fn new(point: Vec<f64>, residuals: Vec<f64>) -> Self {
        Self {
            point,
            residuals,
            kept: None,
            by_differences: false,
            damping: DAMPING,
            iterations: 0,
            done: false,
        }
    }

    /// One iteration: derivatives, and the best step that they lead to.
    pub(super) fn step(&mut self, problem: &mut impl Problem<Kept = K>) {
        self.iterations += 1;
        let own = if self.by_differences { None } else { problem.slopes(&self.point, self.kept.as_ref()) };
        let by_differences = own.is_none();
        let columns = own.or_else(|| self.differences(problem));
        if !columns.is_some_and(|columns| self.descend(&columns, problem)) {
            self.done = by_differences;
            self.by_differences = true;
            self.damping = DAMPING;
        }
    }

    /// The best step that derivatives lead to; false where they lead nowhere.
    ///
    /// # Source
    /// Levenberg and Marquardt's damping with Marquardt's scaling (J. J. Moré, in Numerical Analysis, ed. G. A. Watson (1978), 105), steps
    /// projected onto the bounds, and variables that lean against a bound left out (C. T. Kelley, Iterative Methods for Optimization
    /// (1999), 5.5).
    fn descend(&mut self, columns: &[Vec<f64>], problem: &mut impl Problem<Kept = K>) -> bool {
        let before = cost(&self.residuals);
        let slope: Vec<f64> = columns.iter().map(|c| dot(c, &self.residuals)).collect();
        let free: Vec<usize> = (0..self.point.len())
            .filter(|&k| {
                let leans = self.point[k] <= 0.0 && slope[k] > 0.0 || self.point[k] >= 1.0 && slope[k] < 0.0;
                !leans && slope[k] != 0.0
            })
            .collect();
        for _ in 0..TRIES {
            let Some(step) = damped(columns, &slope, &free, self.damping) else { break };
            let mut trial = self.point.clone();
            for (&k, by) in free.iter().zip(&step) {
                trial[k] = (trial[k] + by).clamp(0.0, 1.0);
            }
            if trial == self.point {
                break;
            }
            match problem.residuals(&trial) {
                Some((residuals, kept)) if cost(&residuals) < before => {
                    let after = cost(&residuals);
                    self.damping = (self.damping * EASE).max(1e-12);
                    (self.point, self.residuals, self.kept) = (trial, residuals, Some(kept));
                    self.done = before - after < LEAST_GAIN * before
                        || after < ROUNDING
                        || self.iterations >= ITERATIONS;
                    return true;
                }
                _ => self.damping *= STIFFEN,
            }
        }
        false
    }

    /// Differences of the residuals by each variable; `None` where none can be taken.
    fn differences(&self, problem: &mut impl Problem<Kept = K>) -> Option<Vec<Vec<f64>>> {
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
                match if point == self.point { None } else { problem.residuals(&point) } {
                    Some((residuals, _)) => ends.push((point[k], residuals)),
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

    fn solve(start: &[f64], mut f: impl Fn(&[f64]) -> Option<Vec<f64>>) -> Fit {
        let mut fit = Fit::new(start.to_vec(), f(start).unwrap());
        while !fit.done {
            fit.step(&mut f);
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

    /// The same valley with derivatives of its own, false ones on one side.
    struct Valley {
        tried: usize,
        asked: usize,
    }

    impl Problem for Valley {
        type Kept = f64;

        fn residuals(&mut self, x: &[f64]) -> Option<(Vec<f64>, f64)> {
            self.tried += 1;
            Some((vec![10.0 * (x[1] - x[0] * x[0]), 0.7 - x[0]], x[0]))
        }

        fn slopes(&mut self, x: &[f64], kept: Option<&f64>) -> Option<Vec<Vec<f64>>> {
            self.asked += 1;
            assert!(kept.is_none_or(|kept| kept.to_bits() == x[0].to_bits()), "of this point");
            let sign = if x[0] < 0.1 { -1.0 } else { 1.0 };
            Some(vec![vec![-20.0 * x[0] * sign, -sign], vec![10.0 * sign, 0.0]])
        }
    }

    #[test]
    fn own_derivatives_save_trials_and_false_ones_are_not_relied_on() {
        let run = |start: [f64; 2]| {
            let mut valley = Valley { tried: 0, asked: 0 };
            let (residuals, _) = valley.residuals(&start).unwrap();
            let mut fit = Fit::new(start.to_vec(), residuals);
            while !fit.done {
                fit.step(&mut valley);
            }
            assert!((fit.point[0] - 0.7).abs() < 1e-8 && (fit.point[1] - 0.49).abs() < 1e-8, "{fit:?}");
            valley
        };
        let plain = std::cell::Cell::new(0);
        solve(&[0.2, 0.9], |x| {
            plain.set(plain.get() + 1);
            Some(vec![10.0 * (x[1] - x[0] * x[0]), 0.7 - x[0]])
        });
        let own = run([0.2, 0.9]);
        assert!(2 * own.tried < plain.get(), "{} and {}", own.tried, plain.get());
        assert_eq!(run([0.05, 0.9]).asked, 1, "they led up the hill");
    }
}
