//! Thinning: steps of the integrator joined to longer pieces, for each body by itself, as far as its path stays the same.
//!
//! All bodies make the steps of the one that turns fastest: a year of the Sun and its planets has 392, because of the Moon, though one
//! piece would do for Neptune. So the pieces of a body are joined while a polynomial of the same form keeps within a
//! [`Tolerance`] of them. What is joined depends on the steps alone, not on how they were asked for.
//!
//! Where paths would outgrow their memory at one tolerance, all that is there is joined again to the next one, and so what follows.

use super::Track;
use super::track::{VELOCITY, evaluate};
use crate::initial::{InitialBody, InitialState};
use crate::integrate::PER_BODY;

/// How far a path may lie from the integrated one.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Tolerance {
    /// Distance, as a part of the body's distance from the origin, or, beyond [`Tolerance::ROUNDING`], of that from the nearest
    /// body with mass at the start, if that is less.
    pub place: f64,
    /// Difference of velocity, as a part of the body's speed.
    pub velocity: f64,
}

impl Tolerance {
    /// So near that it is the same path: a position at a distance r is rounded to about 2⁻⁵² r whenever it is worked out, and a
    /// velocity by as much of itself in each of the several steps of a piece. 1 au: 0.3 mm; 30 km/s: 0.1 nm/s.
    pub const ROUNDING: Self = Self { place: 8.0 * f64::EPSILON, velocity: 16.0 * f64::EPSILON };

    /// The tolerances, each to be used where paths don't fit into their memory at those before it.
    ///
    /// The last one is 7 km at 1 au, and 20 m for Earth and Moon: a ten-thousandth of a pixel where that distance is 2,000 of
    /// them. Each factor of 100 makes pieces about 1.6 times as long.
    pub const ALL: [Self; 5] = [
        Self::ROUNDING,
        Self { place: 5e-14, velocity: 4e-13 },
        Self { place: 5e-12, velocity: 4e-11 },
        Self { place: 5e-10, velocity: 4e-9 },
        Self { place: 5e-8, velocity: 4e-7 },
    ];
}

/// A joined piece is kept where its checks stay below this part of the tolerance, as they are made at some instants only.
const SAFE: f64 = 0.5;

/// Instants at which a joined piece is checked, besides its end: the extremes of its error if it is made of a few equal steps;
/// what is made of many, or is long, may err in many ways.
const CHECKS: [usize; 2] = [6, 11];

/// From here on these are many.
const MANY: usize = 8;

/// What roundings alone add to a checked error, and the least that is then taken as known, in units of the tolerance.
const ROUNDED: f64 = 0.12;
const LEAST: f64 = 0.003;

/// Most pieces joined to one.
const MOST_JOINED: usize = 256;

/// How many are joined first, where nothing is known of a path.
const FIRST: usize = 4;

/// Most memory for pieces not joined yet, bytes.
const MOST_OPEN_BYTES: usize = 2 << 20;

/// What is known of the error fades so with each piece that is kept without a look.
const FADES: f64 = 0.8;

/// Where velocities are taken from: the zeros of the derivative of Legendre's P8(2s - 1), and the end. With the start they are
/// the points of Lobatto's quadrature of degree 15, so that the place at the end is all but that of the integration.
///
/// # Source
/// Computed to 40 digits; Abramowitz & Stegun, Handbook of Mathematical Functions (1964), 25.4.32.
const NODES: [f64; 8] = [
    0.050_121_002_294_269_921_343_827,
    0.161_406_860_244_631_123_277_057,
    0.318_441_268_086_910_920_644_624,
    0.5,
    0.681_558_731_913_089_079_355_376,
    0.838_593_139_755_368_876_722_943,
    0.949_878_997_705_730_078_656_173,
    1.0,
];

/// `INVERSE[n][j]`: 1 / (node n - node j) for j < n.
const INVERSE: [[f64; 8]; 8] = {
    let mut inverse = [[0.0; 8]; 8];
    let mut n = 1;
    while n < 8 {
        let mut j = 0;
        while j < n {
            inverse[n][j] = 1.0 / (NODES[n] - NODES[j]);
            j += 1;
        }
        n += 1;
    }
    inverse
};

/// What is open at the end of the path of one body.
#[derive(Debug, Clone)]
struct Open {
    /// Pieces that stay as they are.
    settled: usize,
    /// How many of the others can be joined, as far as is known, and the numbers of the piece that they make.
    good: usize,
    joined: [f64; PER_BODY],
    /// The least number that can't be joined, as far as is known.
    bad: usize,
    /// Error of a piece, in units of the tolerance, by the ninth power of its length, s⁻⁹; 0 where nothing is known.
    curve: f64,
}

impl Open {
    const NOTHING: Self = Self { settled: 0, good: 1, joined: [0.0; PER_BODY], bad: usize::MAX, curve: 0.0 };

    /// Whether a piece of this length can be expected to keep within the tolerance.
    fn expects(&self, length_s: f64) -> bool {
        self.curve * ninth(length_s) <= SAFE
    }
}

/// Where the motion goes on otherwise.
#[derive(Debug, Clone)]
struct Cut {
    t_s: f64,
    /// On which body each one rests from then on; empty where that stays as it is.
    hosts: Vec<usize>,
}

/// What thins one track while it grows.
#[derive(Debug, Clone)]
pub(super) struct Thinner {
    /// Which of [`Tolerance::ALL`] is kept.
    level: usize,
    /// Distance of each body from the nearest one with mass at the start, m.
    near_m: Vec<f64>,
    most: usize,
    cuts: Vec<Cut>,
    open: Vec<Open>,
    /// On which body each one rests; itself where it moves freely.
    hosts: Vec<usize>,
    /// Whether any does.
    resting: bool,
}

impl Thinner {
    /// For a track of so many bodies that is empty.
    pub(super) fn new(initial: &InitialState) -> Self {
        let bodies = initial.bodies.len();
        let step_bytes = bodies.max(1) * PER_BODY * size_of::<f64>();
        let near_m = |body: &InitialBody| {
            let massive = initial.bodies.iter().filter(|other| other.gm_m3_s2 > 0.0);
            let apart_m = massive.map(|other| (other.pos - body.pos).norm()).filter(|apart_m| *apart_m > 0.0);
            apart_m.fold(f64::INFINITY, f64::min)
        };
        Self {
            level: 0,
            near_m: initial.bodies.iter().map(near_m).collect(),
            cuts: Vec::new(),
            most: (MOST_OPEN_BYTES / step_bytes).clamp(2, MOST_JOINED),
            open: vec![Open::NOTHING; bodies],
            hosts: (0..bodies).collect(),
            resting: false,
        }
    }

    /// Joins what can be joined after a step was added.
    pub(super) fn grow(&mut self, track: &mut Track) {
        for body in 0..self.open.len() {
            self.join(track, body, false);
        }
    }

    /// The motion goes on otherwise from `t_s`, the end of the track (a contact, a kick): nothing is joined across it. From now on
    /// bodies rest on `hosts`.
    pub(super) fn close(&mut self, track: &mut Track, t_s: f64, hosts: impl Iterator<Item = usize>) {
        let hosts: Vec<usize> = hosts.collect();
        self.cut(track, Cut { t_s, hosts: if hosts == self.hosts { Vec::new() } else { hosts } });
    }

    fn cut(&mut self, track: &mut Track, cut: Cut) {
        for body in 0..self.open.len() {
            self.join(track, body, true);
        }
        if !cut.hosts.is_empty() {
            self.hosts.clone_from(&cut.hosts);
            self.resting = true;
        }
        self.cuts.push(cut);
    }

    /// Joins all pieces of a track again, to the next tolerance, and keeps to that from then on. False where there is none.
    pub(super) fn coarsen(&mut self, track: &mut Track) -> bool {
        let Some(&tolerance) = Tolerance::ALL.get(self.level + 1) else { return false };
        let bodies = self.open.len();
        let mut next = Self {
            level: self.level + 1,
            near_m: std::mem::take(&mut self.near_m),
            most: self.most,
            cuts: Vec::new(),
            open: vec![Open::NOTHING; bodies],
            hosts: (0..bodies).collect(),
            resting: false,
        };
        let old = track.start_anew(tolerance);
        let mut done = vec![0; bodies];
        let mut cuts = std::mem::take(&mut self.cuts).into_iter();
        loop {
            let cut = cuts.next();
            let until_s = cut.as_ref().map_or(f64::INFINITY, |cut| cut.t_s.abs());
            for host in 0..bodies {
                if next.hosts[host] != host {
                    continue;
                }
                while old.piece(host, done[host]).is_some_and(|piece| piece.start_s.abs() < until_s) {
                    for guest in 0..bodies {
                        if next.hosts[guest] == host {
                            track.push_piece(guest, old.piece(guest, done[guest]));
                            done[guest] += 1;
                        }
                    }
                    next.join(track, host, false);
                }
            }
            let Some(cut) = cut else { break };
            next.cut(track, cut);
        }
        *self = next;
        true
    }

    /// Joins pieces of a body; all of them where its path is to be closed.
    fn join(&mut self, track: &mut Track, body: usize, closing: bool) {
        // What rests on another body goes with it.
        if self.hosts[body] != body {
            return;
        }
        let measure = self.measure(body);
        loop {
            let state = &mut self.open[body];
            let settled = state.settled;
            let open = track.pieces(body) - settled;
            let (Some(first), Some(last)) =
                (track.piece(body, settled), track.piece(body, settled + open.max(1) - 1))
            else {
                return;
            };
            let known = state.curve > 0.0;
            if !closing && open < self.most && state.bad > open {
                let longer_s = last.start_s + 2.0 * last.step_s - first.start_s;
                if if known { state.expects(longer_s) } else { open < FIRST } {
                    return;
                }
            }
            // The longest piece that can be expected to do.
            let mut count = open.min(self.most).min(state.bad - 1);
            while known && count > state.good {
                let Some(end) = track.piece(body, settled + count - 1) else { return };
                if state.expects(end.start_s + end.step_s - first.start_s) {
                    break;
                }
                count -= 1;
            }
            if count <= state.good {
                if state.good == 1 {
                    state.curve *= FADES;
                }
                self.settle(track, body);
                continue;
            }
            let (joined, length_s, error) = join(track, body, settled, count, measure);
            if error <= SAFE {
                (state.good, state.joined) = (count, joined);
                state.curve = (error - ROUNDED).max(LEAST) / ninth(length_s);
            } else {
                state.bad = count;
                state.curve = if error.is_finite() { error / ninth(length_s) } else { 0.0 };
            }
        }
    }

    /// What errors of a body are measured by.
    fn measure(&self, body: usize) -> Measure {
        let far_m = if self.level == 0 { f64::INFINITY } else { self.near_m[body] };
        Measure { tolerance: Tolerance::ALL[self.level], far_m }
    }

    /// Makes one piece of the open ones of a body that can be joined, and of those of what rests on it.
    fn settle(&mut self, track: &mut Track, body: usize) {
        let Open { good, joined, .. } = self.open[body];
        let all = if self.resting { 0..self.open.len() } else { body..body + 1 };
        for guest in all {
            if self.hosts[guest] != body {
                continue;
            }
            let state = &mut self.open[guest];
            if good > 1 {
                let mut joined = joined;
                if let Some(first) = track.piece(guest, state.settled) {
                    joined[..3].copy_from_slice(&first.numbers[..3]);
                }
                track.merge(guest, state.settled, good, &joined);
            }
            state.settled += 1;
            (state.good, state.bad) = (1, usize::MAX);
        }
    }
}

/// What errors are measured by.
#[derive(Debug, Clone, Copy)]
struct Measure {
    tolerance: Tolerance,
    /// The largest distance that the tolerance of places counts from, m.
    far_m: f64,
}

/// The ninth power of a length.
fn ninth(length_s: f64) -> f64 {
    let cube = length_s * length_s * length_s;
    (cube * cube * cube).abs()
}

/// One piece for `count` pieces of a body: its numbers, its length, and its largest error in units of the tolerance.
fn join(
    track: &Track,
    body: usize,
    from: usize,
    count: usize,
    measure: Measure,
) -> ([f64; PER_BODY], f64, f64) {
    let piece = |index: usize| track.piece(body, from + index);
    let (Some(first), Some(last)) = (piece(0), piece(count - 1)) else {
        return ([0.0; PER_BODY], 0.0, f64::INFINITY);
    };
    let length_s = last.start_s + last.step_s - first.start_s;
    let mut numbers = [0.0; PER_BODY];
    numbers[..6].copy_from_slice(&first.numbers[..6]);
    // Newton's form of (v - v0) / (T s), a polynomial of degree 7, by divided differences.
    let mut form = [[0.0; 3]; 8];
    let (mut index, mut here) = (0, first);
    for (n, node) in NODES.iter().enumerate() {
        // Counted from the start of the piece: instants themselves are rounded.
        let since_s = node * length_s;
        while let Some(next) = piece(index + 1)
            && index + 1 < count
            && (next.start_s - first.start_s).abs() <= since_s.abs()
        {
            (index, here) = (index + 1, next);
        }
        let h = (since_s - (here.start_s - first.start_s)) / here.step_s;
        let vel = velocity(here.numbers, here.step_s, if n == 7 { 1.0 } else { h });
        let by_time = since_s.recip();
        for axis in 0..3 {
            let mut value = (vel[axis] - numbers[3 + axis]) * by_time;
            for (inverse, coefficient) in INVERSE[n].iter().zip(&form).take(n) {
                value = (value - coefficient[axis]) * inverse;
            }
            form[n][axis] = value;
        }
    }
    // In powers of s: (v - v0) / (T s) = a0 + b0 s / 2 + b1 s² / 3 + …
    for axis in 0..3 {
        let mut c = [0.0; 8];
        for n in (0..8).rev() {
            for k in (0..8 - n).rev() {
                let lower = if k > 0 { c[k - 1] } else { form[n][axis] };
                c[k] = lower - NODES[n] * c[k];
            }
        }
        let mut order = 1.0;
        for (k, c) in c.into_iter().enumerate() {
            numbers[6 + 3 * k + axis] = order * c;
            order += 1.0;
        }
    }
    let error = error(track, body, from, count, (&numbers, length_s), measure);
    (numbers, length_s, error)
}

/// The velocity of [`evaluate`] alone.
fn velocity(numbers: &[f64], step_s: f64, h: f64) -> [f64; 3] {
    std::array::from_fn(|axis| {
        let mut v = 0.0;
        for k in (0..7).rev() {
            v = VELOCITY[k] * numbers[9 + 3 * k + axis] + h * v;
        }
        numbers[3 + axis] + step_s * h * (numbers[6 + axis] + h * v)
    })
}

/// The largest error of a joined piece, in units of the tolerance: of the velocity at instants evenly spread over the steps, of the
/// place, which errs less, in the middle and at the end.
fn error(
    track: &Track,
    body: usize,
    from: usize,
    count: usize,
    (numbers, length_s): (&[f64], f64),
    Measure { tolerance, far_m }: Measure,
) -> f64 {
    let Some(first) = track.piece(body, from) else { return f64::INFINITY };
    // At rounding, where velocities do, places do by far.
    let places_too = tolerance.place > Tolerance::ROUNDING.place;
    let (mut place, mut off) = (0.0_f64, 0.0_f64);
    let (mut distance, mut speed) = (0.0_f64, 0.0_f64);
    let apart = |a: [f64; 3], b: [f64; 3]| square([a[0] - b[0], a[1] - b[1], a[2] - b[2]]);
    let checks = CHECKS[usize::from(count >= MANY || places_too)];
    for check in 0..=checks {
        let parts = (2 * check + 1) * count;
        let (index, part) = (parts / (2 * checks), parts % (2 * checks));
        #[expect(clippy::cast_precision_loss, reason = "small numbers")]
        let inside = part as f64 / (2 * checks) as f64;
        let (index, h) = if check == checks { (count - 1, 1.0) } else { (index, inside) };
        let Some(piece) = track.piece(body, from + index) else { return f64::INFINITY };
        let along = ((piece.start_s - first.start_s) + h * piece.step_s) / length_s;
        let want = velocity(piece.numbers, piece.step_s, h);
        off = larger(off, apart(want, velocity(numbers, length_s, along)));
        speed = speed.max(square(want));
        if places_too || check == checks / 2 || check == checks {
            let want = evaluate(piece.numbers, piece.step_s, h).pos;
            let got = evaluate(numbers, length_s, along).pos;
            place = larger(place, apart(want.into(), got.into()));
            distance = distance.max(want.norm_squared());
        }
    }
    let part = |error: f64, size: f64, tolerance: f64| {
        if error == 0.0 { 0.0 } else { (error / size).sqrt() / tolerance }
    };
    larger(part(place, distance.min(far_m * far_m), tolerance.place), part(off, speed, tolerance.velocity))
}

fn square(v: [f64; 3]) -> f64 {
    v[0] * v[0] + v[1] * v[1] + v[2] * v[2]
}

/// The larger of two numbers; NaN when one of them is (`f64::max` would lose it).
fn larger(a: f64, b: f64) -> f64 {
    if b > a || b.is_nan() { b } else { a }
}
