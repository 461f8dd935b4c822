//! Numbers of many bodies, a row for each axis, so that the loops over bodies work on several side by side.

/// Positions (m) and velocities (m/s), and what rounding has put into each too much.
#[derive(Debug, Clone, Default, PartialEq)]
pub(super) struct Rows {
    pub(super) pos: [Vec<f64>; 3],
    pub(super) vel: [Vec<f64>; 3],
    pub(super) pos_excess: [Vec<f64>; 3],
    pub(super) vel_excess: [Vec<f64>; 3],
}

impl Rows {
    pub(super) fn of(bodies: usize) -> Self {
        let rows = || std::array::from_fn(|_| vec![0.0; bodies]);
        Self { pos: rows(), vel: rows(), pos_excess: rows(), vel_excess: rows() }
    }

    /// Becomes the same as another of the same length, without allocating.
    pub(super) fn copy_from(&mut self, other: &Self) {
        let pairs = [
            (&mut self.pos, &other.pos),
            (&mut self.vel, &other.vel),
            (&mut self.pos_excess, &other.pos_excess),
            (&mut self.vel_excess, &other.vel_excess),
        ];
        for (mine, others) in pairs {
            for (row, other) in mine.iter_mut().zip(others) {
                row.copy_from_slice(other);
            }
        }
    }

    /// Takes a body out, and puts the last one in its place.
    pub(super) fn swap_remove(&mut self, body: usize) {
        for rows in [&mut self.pos, &mut self.vel, &mut self.pos_excess, &mut self.vel_excess] {
            for row in rows {
                row.swap_remove(body);
            }
        }
    }

    /// Sets a body anew, and forgets what rounding had done to it.
    pub(super) fn set(&mut self, body: usize, pos: [f64; 3], vel: [f64; 3]) {
        for axis in 0..3 {
            self.pos[axis][body] = pos[axis];
            self.vel[axis][body] = vel[axis];
            self.pos_excess[axis][body] = 0.0;
            self.vel_excess[axis][body] = 0.0;
        }
    }

    pub(super) fn pos_of(&self, body: usize) -> [f64; 3] {
        std::array::from_fn(|axis| self.pos[axis][body])
    }

    pub(super) fn vel_of(&self, body: usize) -> [f64; 3] {
        std::array::from_fn(|axis| self.vel[axis][body])
    }

    /// Adds to positions and velocities of some bodies, compensated.
    #[inline]
    pub(super) fn add<const N: usize>(&mut self, first: usize, pos: &[[f64; N]; 3], vel: &[[f64; N]; 3]) {
        for axis in 0..3 {
            compensate(&mut self.pos[axis], &mut self.pos_excess[axis], first, &pos[axis]);
            compensate(&mut self.vel[axis], &mut self.vel_excess[axis], first, &vel[axis]);
        }
    }

    /// The same to positions alone.
    #[inline]
    pub(super) fn add_pos<const N: usize>(&mut self, first: usize, pos: &[[f64; N]; 3]) {
        for axis in 0..3 {
            compensate(&mut self.pos[axis], &mut self.pos_excess[axis], first, &pos[axis]);
        }
    }
}

/// `N` numbers of a row from `first` on.
#[inline]
pub(super) fn lanes<const N: usize>(row: &[f64], first: usize) -> [f64; N] {
    let mut lanes = [0.0; N];
    lanes.copy_from_slice(&row[first..first + N]);
    lanes
}

/// The same of three rows.
#[inline]
pub(super) fn lanes3<const N: usize>(rows: &[Vec<f64>; 3], first: usize) -> [[f64; N]; 3] {
    [lanes(&rows[0], first), lanes(&rows[1], first), lanes(&rows[2], first)]
}

/// # Source
/// W. Kahan, "Further remarks on reducing truncation errors", Comm. ACM 8 (1965), 40.
#[inline]
fn compensate<const N: usize>(sum: &mut [f64], excess: &mut [f64], first: usize, addend: &[f64; N]) {
    let (old, over): ([f64; N], [f64; N]) = (lanes(sum, first), lanes(excess, first));
    let (mut new, mut left) = ([0.0; N], [0.0; N]);
    for l in 0..N {
        let term = addend[l] - over[l];
        new[l] = old[l] + term;
        left[l] = (new[l] - old[l]) - term;
    }
    sum[first..first + N].copy_from_slice(&new);
    excess[first..first + N].copy_from_slice(&left);
}

/// Goes over `count` bodies four, two and one at a time: `$one::<N>` is called with the first of each group.
macro_rules! by_lanes {
    ($count:expr, $first:ident, $n:ident => $body:expr) => {{
        let count: usize = $count;
        let mut $first = 0;
        while $first + 4 <= count {
            const $n: usize = 4;
            $body;
            $first += 4;
        }
        if $first + 2 <= count {
            const $n: usize = 2;
            $body;
            $first += 2;
        }
        if $first < count {
            const $n: usize = 1;
            $body;
        }
    }};
}
pub(super) use by_lanes;
