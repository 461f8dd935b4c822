//! The kick: planets pull on one another, and the centre's own motion carries all of them along.
//!
//! In democratic heliocentric coordinates what is left of the energy beside the conics is U + J: the planets' potential of one
//! another, and J = m₀ σ² / 2 with the centre's velocity -σ, σ = Σ m v / m₀. U knows only differences of positions, and J moves all
//! alike, so U and J commute, and `exp(h U) exp(h J)` is the flow of both together. That makes the splitting one of two parts, as
//! a corrector needs it.
//!
//! The error that no corrector can take away is of the second order in the masses, h²/24 {B, {B, A}} with B = U + J and A the
//! conics. Because U and J commute and U sums to no net force, its mixed terms vanish, and it is
//!
//! Σ m a² + Σ m GM₀ { σ² / r³ - 3 (σ·r)² / r⁵ },
//!
//! a being the planets' pull on one, r its place from the centre. Its flow over -h³/24 is added to the kick. It is so small (1e-9 of
//! the motion for planets and days) that it is taken to first order: the square of it is lost in roundings.
//!
//! # Source
//! M. J. Duncan, H. F. Levison & M. H. Lee, AJ 116 (1998), 2067 (the coordinates and parts); M. Takahashi & M. Imada, J. Phys. Soc.
//! Japan 53 (1984), 3765, and J. Wisdom, M. Holman & J. Touma, Fields Inst. Commun. 10 (1996), 217 (the term Σ m a²); the term of J, and
//! that the mixed ones vanish, are worked out here. Relativity: P. Saha & S. Tremaine, AJ 108 (1994), 1962, eq. 12 to 15.

use super::rows::{Rows, by_lanes, lanes, lanes3};
use crate::constants::C_M_S;

/// Inverse square of the speed of light, s²/m².
pub(super) const PER_C2: f64 = 1.0 / (C_M_S * C_M_S);

/// Room for the pulls, and what a kick needs to know of the planets.
///
/// Pairs are gone through by how far apart they stand in the list, going round: 0-1, 1-2, … n-0, then 0-2, 1-3, …. So
/// each body of a group has a partner of its own, and groups are worked on side by side.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Kick {
    centre_gm: f64,
    relativity: bool,
    /// GM of the planets, going round once and a half.
    gms: Vec<f64>,
    /// m / m₀ of each.
    shares: Vec<f64>,
    /// Their positions, going round.
    around: [Vec<f64>; 3],
    acc: Sums,
    /// By how much the pulls change when all move along them, per unit of it.
    tide: Sums,
    /// For each pair: way from the first to the second, 1 / r³, 3 / r².
    ways: [Vec<f64>; 3],
    cubes: Vec<f64>,
    squares: Vec<f64>,
    /// Square of the distance below which a pair is to be looked at, m².
    watch_m2: Vec<f64>,
    /// By how much the centre's motion shifts all, m.
    shift: [f64; 3],
}

/// What each body gets from those after it in the order and from those before it.
#[derive(Debug, Clone, PartialEq)]
struct Sums {
    /// From those after it; folded: from all, and going round.
    first: [Vec<f64>; 3],
    second: [Vec<f64>; 3],
}

impl Sums {
    fn of(count: usize) -> Self {
        let rows = || std::array::from_fn(|_| vec![0.0; count]);
        Self { first: rows(), second: rows() }
    }

    /// Some planets after the others: filling row by row, or copying rows, would be left to the browser in wasm, and takes longer there
    /// than a few numbers are worth.
    fn clear(&mut self) {
        by_lanes!(self.first[0].len(), first, N => {
            for row in self.first.iter_mut().chain(&mut self.second) {
                row[first..first + N].copy_from_slice(&[0.0; N]);
            }
        });
    }

    fn fold(&mut self, bodies: usize) {
        for (first, second) in self.first.iter_mut().zip(&self.second) {
            let (once, again) = second.split_at(bodies);
            for (sum, one) in first.iter_mut().zip(once) {
                *sum += one;
            }
            for (sum, one) in first.iter_mut().zip(again) {
                *sum += one;
            }
        }
        wrap(&mut self.first, bodies);
    }
}

/// Lets rows go round: what lies beyond the bodies is what they begin with.
fn wrap(rows: &mut [Vec<f64>; 3], bodies: usize) {
    by_lanes!(bodies / 2, first, N => {
        for row in rows.iter_mut() {
            let once: [f64; N] = lanes(row, first);
            row[bodies + first..bodies + first + N].copy_from_slice(&once);
        }
    });
}

/// What a kick noticed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Noticed {
    /// How many pairs are near enough to be looked at.
    pub(super) near: usize,
    /// The largest h² GM₀ / r³: the square of the angle that a step covers at that distance.
    pub(super) steepest: f64,
}

impl Kick {
    pub(super) fn new(centre_gm: f64, gms: &[f64], relativity: bool) -> Self {
        let n = gms.len();
        let (round, pairs) = (n + n / 2, n * n.saturating_sub(1) / 2);
        let rows = |count: usize| std::array::from_fn(|_| vec![0.0; count]);
        Self {
            centre_gm,
            relativity,
            gms: gms.iter().chain(gms).take(round).copied().collect(),
            shares: gms.iter().map(|gm| gm / centre_gm).collect(),
            around: rows(round),
            acc: Sums::of(round),
            tide: Sums::of(round),
            ways: rows(pairs),
            cubes: vec![0.0; pairs],
            squares: vec![0.0; pairs],
            watch_m2: vec![0.0; pairs],
            shift: [0.0; 3],
        }
    }

    pub(super) fn bodies(&self) -> usize {
        self.shares.len()
    }

    /// One axis of the planets' places at the kick that was worked out last, m.
    pub(super) fn planets(&self, axis: usize) -> &[f64] {
        &self.around[axis][..self.shares.len()]
    }

    /// GM of a planet, m³/s².
    pub(super) fn gm(&self, planet: usize) -> f64 {
        self.gms[planet]
    }

    /// By how much the kick that was worked out last shifts all, m.
    pub(super) fn shift(&self) -> [f64; 3] {
        self.shift
    }

    /// One axis of σ = Σ m v / m₀: the centre moves the other way, m/s.
    pub(super) fn sigma(&self, axis: usize, rows: &Rows) -> f64 {
        dot(&self.shares, &rows.vel[axis])
    }

    pub(super) fn relativity(&self) -> bool {
        self.relativity
    }

    pub(super) fn centre_gm(&self) -> f64 {
        self.centre_gm
    }

    /// m / m₀ of each planet.
    pub(super) fn shares(&self) -> &[f64] {
        &self.shares
    }

    /// Calls `each` with the two planets of every pair, and sets the distance (m) below which it counts as near.
    pub(super) fn watch(&mut self, mut each: impl FnMut(usize, usize) -> f64) {
        let n = self.bodies();
        let mut pair = 0;
        for apart in 1..=n / 2 {
            for i in 0..self.count(apart) {
                let near_m = each(i, (i + apart) % n);
                self.watch_m2[pair] = near_m * near_m;
                pair += 1;
            }
        }
    }

    /// Pairs so far apart in the list. With an even number the last round would meet each pair twice.
    fn count(&self, apart: usize) -> usize {
        let n = self.bodies();
        if 2 * apart == n { apart } else { n }
    }

    /// Works out a kick of `h_s` seconds, and does not give it yet: positions and velocities stay, but for what relativity slips.
    ///
    /// `whole` adds the term that makes up for the second order in the masses: in steps, not in a corrector's kicks.
    pub(super) fn prepare(&mut self, h_s: f64, whole: bool, rows: &mut Rows) -> Noticed {
        if self.relativity {
            self.slip(0.5 * h_s, rows);
        }
        let near = self.pulls(rows, whole);
        let sigma = std::array::from_fn(|axis| self.sigma(axis, rows));
        let bend = if whole { -h_s * h_s * h_s / 24.0 } else { 0.0 };
        let mut steepest = 0.0;
        let mut all = [0.0; 3];
        by_lanes!(self.bodies(), first, N => {
            steepest = larger(steepest, self.centre::<N>(first, h_s, bend, sigma, rows, &mut all));
        });
        self.shift = std::array::from_fn(|axis| h_s * sigma[axis] + all[axis]);
        Noticed { near, steepest: steepest * h_s * h_s }
    }

    /// Gives the kick that was worked out for the same seconds.
    pub(super) fn give(&mut self, h_s: f64, rows: &mut Rows) {
        by_lanes!(self.bodies(), first, N => {
            rows.add::<N>(first, &self.shift.map(|s| [s; N]), &lanes3(&self.acc.first, first));
        });
        if self.relativity {
            self.slip(0.5 * h_s, rows);
        }
    }

    /// Takes back what working it out slipped.
    pub(super) fn leave(&mut self, h_s: f64, rows: &mut Rows) {
        if self.relativity {
            self.slip(-0.5 * h_s, rows);
        }
    }

    /// The part -v⁴ / 2c² of relativity: positions slip back a little.
    fn slip(&self, h_s: f64, rows: &mut Rows) {
        by_lanes!(self.bodies(), first, N => slip::<N>(first, h_s, rows));
    }

    /// Accelerations, and where asked how they change; gives the number of near pairs.
    fn pulls(&mut self, rows: &Rows, whole: bool) -> usize {
        let n = self.bodies();
        by_lanes!(n, first, N => {
            for (around, pos) in self.around.iter_mut().zip(&rows.pos) {
                around[first..first + N].copy_from_slice(&lanes::<N>(pos, first));
            }
        });
        wrap(&mut self.around, n);
        self.acc.clear();
        let (mut near, mut pair) = (0, 0);
        for apart in 1..=n / 2 {
            by_lanes!(self.count(apart), first, N => {
                near += self.pull::<N>(first, apart, pair);
                pair += N;
            });
        }
        self.acc.fold(n);
        if whole {
            self.tide.clear();
            let mut pair = 0;
            for apart in 1..=n / 2 {
                by_lanes!(self.count(apart), first, N => {
                    self.tide::<N>(first, apart, pair);
                    pair += N;
                });
            }
            self.tide.fold(n);
        }
        near
    }

    #[inline]
    fn pull<const N: usize>(&mut self, first: usize, apart: usize, pair: usize) -> usize {
        let second = first + apart;
        let (at, to) = (lanes3::<N>(&self.around, first), lanes3::<N>(&self.around, second));
        let (gm, other): ([f64; N], [f64; N]) = (lanes(&self.gms, first), lanes(&self.gms, second));
        let watch: [f64; N] = lanes(&self.watch_m2, pair);
        let (mut cube, mut square, mut way) = ([0.0; N], [0.0; N], [[0.0; N]; 3]);
        let mut near = 0;
        for l in 0..N {
            let d = [to[0][l] - at[0][l], to[1][l] - at[1][l], to[2][l] - at[2][l]];
            let r2 = d[0] * d[0] + d[1] * d[1] + d[2] * d[2];
            let inv = 1.0 / r2.sqrt();
            let inv2 = inv * inv;
            (way[0][l], way[1][l], way[2][l]) = (d[0], d[1], d[2]);
            (cube[l], square[l]) = (inv2 * inv, 3.0 * inv2);
            near += usize::from(r2 < watch[l]);
        }
        self.cubes[pair..pair + N].copy_from_slice(&cube);
        self.squares[pair..pair + N].copy_from_slice(&square);
        for axis in 0..3 {
            self.ways[axis][pair..pair + N].copy_from_slice(&way[axis]);
        }
        spread(&mut self.acc, first, second, &gm, &other, &cube, &way);
        near
    }

    #[inline]
    fn tide<const N: usize>(&mut self, first: usize, apart: usize, pair: usize) {
        let second = first + apart;
        let (mine, theirs) = (lanes3::<N>(&self.acc.first, first), lanes3::<N>(&self.acc.first, second));
        let (gm, other): ([f64; N], [f64; N]) = (lanes(&self.gms, first), lanes(&self.gms, second));
        let (cube, square): ([f64; N], [f64; N]) = (lanes(&self.cubes, pair), lanes(&self.squares, pair));
        let d = lanes3::<N>(&self.ways, pair);
        let mut change = [[0.0; N]; 3];
        for l in 0..N {
            let a = [theirs[0][l] - mine[0][l], theirs[1][l] - mine[1][l], theirs[2][l] - mine[2][l]];
            let along = (d[0][l] * a[0] + d[1][l] * a[1] + d[2][l] * a[2]) * square[l];
            change[0][l] = a[0] - along * d[0][l];
            change[1][l] = a[1] - along * d[1][l];
            change[2][l] = a[2] - along * d[2][l];
        }
        spread(&mut self.tide, first, second, &gm, &other, &cube, &change);
    }

    /// Puts together what the velocities of some planets change by, into `acc`, and adds to `all` what the second order of the
    /// centre's motion shifts all by. Gives the largest GM₀ / r³.
    #[inline]
    fn centre<const N: usize>(
        &mut self,
        first: usize,
        h_s: f64,
        bend: f64,
        sigma: [f64; 3],
        rows: &Rows,
        all: &mut [f64; 3],
    ) -> f64 {
        let pos = lanes3::<N>(&rows.pos, first);
        let shares: [f64; N] = lanes(&self.shares, first);
        let (acc, tide) = (lanes3::<N>(&self.acc.first, first), lanes3::<N>(&self.tide.first, first));
        let (mut shift, mut change) = ([[0.0; N]; 3], [[0.0; N]; 3]);
        let mut steep = [0.0; N];
        let s2 = sigma[0] * sigma[0] + sigma[1] * sigma[1] + sigma[2] * sigma[2];
        // From V = -GM₀² / (c² r²).
        let relativity = if self.relativity { 2.0 * self.centre_gm * PER_C2 * h_s } else { 0.0 };
        for l in 0..N {
            // Half-way through the shift, so that there and back are alike.
            let q = [
                pos[0][l] + 0.5 * h_s * sigma[0],
                pos[1][l] + 0.5 * h_s * sigma[1],
                pos[2][l] + 0.5 * h_s * sigma[2],
            ];
            let inv = 1.0 / (q[0] * q[0] + q[1] * q[1] + q[2] * q[2]).sqrt();
            let inv2 = inv * inv;
            let w = self.centre_gm * inv * inv2;
            steep[l] = w;
            let along = sigma[0] * q[0] + sigma[1] * q[1] + sigma[2] * q[2];
            let per = along * inv2;
            let (own, with) =
                (bend * w * inv2 * (3.0 * s2 - 15.0 * along * per), bend * w * inv2 * 6.0 * along);
            let own = own - relativity * w * inv;
            let gather = 2.0 * bend * w * shares[l];
            for axis in 0..3 {
                shift[axis][l] = gather * (sigma[axis] - 3.0 * per * q[axis]);
                change[axis][l] =
                    h_s * acc[axis][l] + (own * q[axis] + with * sigma[axis] - 2.0 * bend * tide[axis][l]);
            }
        }
        for axis in 0..3 {
            self.acc.first[axis][first..first + N].copy_from_slice(&change[axis]);
            for l in 0..N {
                all[axis] += shift[axis][l];
            }
        }
        steep.into_iter().fold(0.0, larger)
    }
}

/// Adds to both bodies of each pair what the other does: `weight` times GM times `way`, there and back.
#[inline(always)]
fn spread<const N: usize>(
    sums: &mut Sums,
    first: usize,
    second: usize,
    gm: &[f64; N],
    other: &[f64; N],
    weight: &[f64; N],
    way: &[[f64; N]; 3],
) {
    for axis in 0..3 {
        let mine: [f64; N] = lanes(&sums.first[axis], first);
        let theirs: [f64; N] = lanes(&sums.second[axis], second);
        let (mut sum, mut back) = ([0.0; N], [0.0; N]);
        for l in 0..N {
            let pull = weight[l] * way[axis][l];
            sum[l] = mine[l] + other[l] * pull;
            back[l] = theirs[l] - gm[l] * pull;
        }
        sums.first[axis][first..first + N].copy_from_slice(&sum);
        sums.second[axis][second..second + N].copy_from_slice(&back);
    }
}

/// What -v⁴ / 2c² moves some bodies by.
#[inline]
pub(super) fn slip<const N: usize>(first: usize, h_s: f64, rows: &mut Rows) {
    let vel = lanes3::<N>(&rows.vel, first);
    let mut moved = [[0.0; N]; 3];
    for l in 0..N {
        let v2 = vel[0][l] * vel[0][l] + vel[1][l] * vel[1][l] + vel[2][l] * vel[2][l];
        for axis in 0..3 {
            moved[axis][l] = -2.0 * h_s * PER_C2 * v2 * vel[axis][l];
        }
    }
    rows.add_pos::<N>(first, &moved);
}

/// The larger of two numbers, or the first; in wasm `f64::max` is a call.
#[inline]
fn larger(a: f64, b: f64) -> f64 {
    if b > a { b } else { a }
}

/// Sum of products, four sums side by side.
fn dot(a: &[f64], b: &[f64]) -> f64 {
    let mut sums = [0.0; 4];
    let (fours, rest) = (a.len() / 4 * 4, a.len() % 4);
    for i in (0..fours).step_by(4) {
        for l in 0..4 {
            sums[l] += a[i + l] * b[i + l];
        }
    }
    let mut sum = (sums[0] + sums[1]) + (sums[2] + sums[3]);
    for i in fours..fours + rest {
        sum += a[i] * b[i];
    }
    sum
}
