//! Paths of long steps: the orbits of all bodies at knots in time, and smooth elements between them.
//!
//! A million years of planets have no room as polynomials. What has room is a state of the system every few months or years. Each
//! body's orbit about the mass within it (Jacobi's coordinates) changes slowly, whatever the body does on it, and its mean longitude grows evenly:
//! so equinoctial elements between knots are polynomials of third degree through the four nearest. What is lost are changes quicker than the knots
//! are apart; how much that is, is measured at knots that are left out.
//!
//! Where memory is full, every second knot goes.
//!
//! # Source
//! Jacobi's coordinates: C. D. Murray & S. F. Dermott, Solar System Dynamics (1999), 9.10 (9.5.3 in the reprint); elements:
//! [`crate::conic::equinoctial`].

use super::{State, Tolerance};
use crate::Vector3;
use crate::conic::{Equinoctial, Sense};
use crate::integrate::PER_BODY;
use crate::math::counts::{count_from, number_from, take};
use std::f64::consts::TAU;

/// Numbers of the orbit of one body at a knot.
const PER_ORBIT: usize = 6;

/// Above this eccentricity an orbit is not kept in knots: its elements change too fast near the centre.
const MOST_ECCENTRIC: f64 = 0.98;

/// The angle, as seen from the centre at the fastest periapsis, that a polynomial of degree 9 covers to rounding, rad.
///
/// Through ten of Chebyshev's points the error of a circle is 2 (angle / 4)¹⁰ / 10!, here 5e-16 of the distance; periapsis of an orbit of
/// eccentricity 0.9 takes some digits of it.
const PIECE_RAD: f64 = 0.5;

/// The ends and the extremes between them of Chebyshev's polynomial T9, on 0 to 1, computed to 40 digits.
const POINTS: [f64; 10] = [
    0.0,
    0.030_153_689_607_045_807_972_95,
    0.116_977_778_440_510_982_398_8,
    0.25,
    0.413_175_911_166_534_825_574_1,
    0.586_824_088_833_465_174_425_9,
    0.75,
    0.883_022_221_559_489_017_601_2,
    0.969_846_310_392_954_192_027_0,
    1.0,
];

/// A body that goes with another.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Rider {
    pub(super) body: usize,
    pub(super) host: usize,
    /// Where it is relative to its host, m.
    pub(super) offset: [f64; 3],
}

/// The bodies of a stretch of long steps, as they are at its start.
#[derive(Debug, Clone, Copy)]
pub(super) struct Company<'a> {
    /// All that move by themselves, by their places in the list of bodies.
    pub(super) members: &'a [usize],
    /// Their GM, m³/s².
    pub(super) gms: &'a [f64],
    /// Which of the members the others go round.
    pub(super) centre: usize,
    pub(super) riders: &'a [Rider],
}

/// A stretch of long steps.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Knots {
    /// Members from the centre outwards, by their places in the list of bodies; the centre first.
    order: Vec<usize>,
    /// GM of each, and of each together with all within it, m³/s².
    gms: Vec<f64>,
    within: Vec<f64>,
    riders: Vec<Rider>,
    /// Of each but the centre.
    senses: Vec<Sense>,
    /// When it starts; place and velocity of the barycentre of the members there.
    start_s: f64,
    barycentre: [Vector3<f64>; 2],
    /// Until when its paths are settled.
    settled_s: f64,
    closed: bool,
    times_s: Vec<f64>,
    /// [`PER_ORBIT`] numbers for each body but the centre, knot by knot.
    orbits: Vec<f64>,
    /// The largest errors measured at knots left out, as parts of distance and speed.
    errors: Tolerance,
}

impl Knots {
    /// From a state of the members: positions (m) and velocities (m/s), three numbers each. `None` where one of them has no
    /// closed orbit.
    pub(super) fn start(company: &Company<'_>, t_s: f64, pos: &[f64], vel: &[f64]) -> Option<Self> {
        let centre = company.centre;
        let far = |place: &usize| {
            let (r, v) = (at(pos, *place) - at(pos, centre), at(vel, *place) - at(vel, centre));
            1.0 / (2.0 / r.norm() - v.norm_squared() / (company.gms[centre] + company.gms[*place]))
        };
        let mut places: Vec<usize> = (0..company.members.len()).filter(|place| *place != centre).collect();
        places.sort_by(|a, b| far(a).total_cmp(&far(b)));
        places.insert(0, centre);
        let gms: Vec<f64> = places.iter().map(|&place| company.gms[place]).collect();
        let mut sum = 0.0;
        let mut within = Vec::with_capacity(gms.len());
        for gm in &gms {
            sum += gm;
            within.push(sum);
        }
        let mean = |of: &[f64]| {
            places.iter().zip(&gms).fold(Vector3::zeros(), |sum, (&place, gm)| sum + at(of, place) * *gm)
                / sum
        };
        let sense =
            |place: &usize| Sense::of(at(pos, *place) - at(pos, centre), at(vel, *place) - at(vel, centre));
        let mut knots = Self {
            order: places.iter().map(|&place| company.members[place]).collect(),
            within,
            riders: company.riders.to_vec(),
            senses: places[1..].iter().map(sense).collect(),
            start_s: t_s,
            barycentre: [mean(pos), mean(vel)],
            settled_s: t_s,
            closed: false,
            times_s: Vec::new(),
            orbits: Vec::new(),
            errors: Tolerance { place: 0.0, velocity: 0.0 },
            gms,
        };
        let by_body = |of: &[f64]| -> Vec<f64> {
            places.iter().flat_map(|&place| of[3 * place..3 * place + 3].to_vec()).collect()
        };
        knots.push(t_s, &by_body(pos), &by_body(vel)).then_some(knots)
    }

    /// Members from the centre outwards, by their places in the list of bodies: in this order states are given to it.
    pub(super) fn order(&self) -> &[usize] {
        &self.order
    }

    /// Adds a knot: positions (m) and velocities (m/s) of the members in [`Knots::order`]. False, and nothing added, where one of them
    /// has no closed orbit.
    pub(super) fn push(&mut self, t_s: f64, pos: &[f64], vel: &[f64]) -> bool {
        let n = self.senses.len();
        let kept = self.orbits.len();
        // The mean of all within, where and how fast.
        let mut middle = (at(pos, 0), at(vel, 0));
        for place in 1..=n {
            let (x, v) = (at(pos, place), at(vel, place));
            let gm = self.within[place];
            let sense = self.senses[place - 1];
            let orbit = Equinoctial::from_state(x - middle.0, v - middle.1, gm, sense);
            let Some(mut orbit) = orbit.ok().filter(|orbit| orbit.eccentricity() < MOST_ECCENTRIC) else {
                self.orbits.truncate(kept);
                return false;
            };
            if let Some(&last_s) = self.times_s.last() {
                let last = self.orbit(self.times_s.len() - 1, place - 1);
                let mean = 0.5 * (orbit.mean_motion_rad_s(gm) + last.mean_motion_rad_s(gm));
                let ahead = last.mean_longitude_rad + mean * (t_s - last_s) - orbit.mean_longitude_rad;
                orbit.mean_longitude_rad += TAU * (ahead / TAU).round();
            }
            let share = self.gms[place] / gm;
            middle = (middle.0 + (x - middle.0) * share, middle.1 + (v - middle.1) * share);
            self.orbits.extend(numbers_of(&orbit));
        }
        self.times_s.push(t_s);
        self.measure();
        // What lies beyond the last knot but one changes with the next.
        let settled = self.times_s.len().saturating_sub(2);
        self.settled_s = self.times_s[settled];
        true
    }

    /// Ends the stretch with its last knot.
    pub(super) fn close(&mut self) {
        self.closed = true;
        self.settled_s = self.times_s.last().copied().unwrap_or(self.start_s);
    }

    /// How many knots there are.
    pub(super) fn len(&self) -> usize {
        self.times_s.len()
    }

    pub(super) const fn start_s(&self) -> f64 {
        self.start_s
    }

    /// Until when its paths don't change any more but by leaving out knots.
    pub(super) const fn settled_s(&self) -> f64 {
        self.settled_s
    }

    /// The largest errors measured at knots left out, as parts of the distance and speed on each orbit.
    pub(super) const fn errors(&self) -> Tolerance {
        self.errors
    }

    /// Leaves out every second knot. False where there are not enough.
    ///
    /// Only for an odd number of knots: the last one stays.
    pub(super) fn thin(&mut self) -> bool {
        /// Below it, a knot is a good part of the stretch.
        const FEWEST: usize = 9;
        if self.len() < FEWEST || self.len().is_multiple_of(2) {
            return false;
        }
        let row = self.senses.len() * PER_ORBIT;
        let mut kept = 0;
        for index in (0..self.len()).step_by(2) {
            self.times_s[kept] = self.times_s[index];
            self.orbits.copy_within(index * row..(index + 1) * row, kept * row);
            kept += 1;
        }
        self.times_s.truncate(kept);
        self.orbits.truncate(kept * row);
        self.times_s.shrink_to_fit();
        self.orbits.shrink_to_fit();
        true
    }

    /// Measures how far the last knot but three would be off if every second were left out.
    fn measure(&mut self) {
        let last = self.len() - 1;
        if !last.is_multiple_of(2) || last < 6 {
            return;
        }
        let without = [last - 6, last - 4, last - 2, last];
        let middle = last - 3;
        let t_s = self.times_s[middle];
        for place in 0..self.senses.len() {
            let (gm, sense) = (self.within[place + 1], self.senses[place]);
            let [here, there] = [self.orbit(middle, place), self.between(without, t_s, place)]
                .map(|orbit| orbit.to_state(gm, sense));
            let (Ok((x, v)), Ok((y, w))) = (here, there) else { continue };
            self.errors.place = self.errors.place.max((x - y).norm() / x.norm());
            self.errors.velocity = self.errors.velocity.max((v - w).norm() / v.norm());
        }
    }

    fn orbit(&self, knot: usize, place: usize) -> Equinoctial {
        let from = (knot * self.senses.len() + place) * PER_ORBIT;
        orbit_of(std::array::from_fn(|number| self.orbits[from + number]))
    }

    /// The interval of knots that holds an instant: the number of its first knot.
    fn interval(&self, t_s: f64) -> usize {
        let backward = self.times_s.last().is_some_and(|last| *last < self.start_s);
        let past = self.times_s.partition_point(|knot| if backward { *knot >= t_s } else { *knot <= t_s });
        past.clamp(1, self.len().saturating_sub(1).max(1)) - 1
    }

    /// The knots from which orbits in an interval are taken; fewer than four near the ends, where one stands twice.
    fn stencil(&self, interval: usize) -> [usize; 4] {
        let last = self.len() - 1;
        [interval.saturating_sub(1), interval, (interval + 1).min(last), (interval + 2).min(last)]
    }

    /// The orbit at an instant by the polynomial through some knots; of those that stand there twice, once.
    fn between(&self, knots: [usize; 4], t_s: f64, place: usize) -> Equinoctial {
        let origin = numbers_of(&self.orbit(knots[1], place));
        let mut sum = [0.0; PER_ORBIT];
        for (i, &knot) in knots.iter().enumerate() {
            if i > 0 && knots[i - 1] == knot {
                continue;
            }
            let mut weight = 1.0;
            for (j, &other) in knots.iter().enumerate() {
                if other != knot && !(j > 0 && knots[j - 1] == other) {
                    weight *= (t_s - self.times_s[other]) / (self.times_s[knot] - self.times_s[other]);
                }
            }
            // Differences from the first, so that nothing of the size of the longitude is lost.
            let from = (knot * self.senses.len() + place) * PER_ORBIT;
            for ((sum, number), origin) in sum.iter_mut().zip(&self.orbits[from..]).zip(origin) {
                *sum += weight * (number - origin);
            }
        }
        let mut orbit = orbit_of(std::array::from_fn(|i| origin[i] + sum[i]));
        // A polynomial may overshoot.
        let e = orbit.eccentricity();
        if e > MOST_ECCENTRIC {
            orbit.h *= MOST_ECCENTRIC / e;
            orbit.k *= MOST_ECCENTRIC / e;
        }
        orbit
    }

    /// State of a body at an instant within the stretch, barycentric.
    pub(super) fn state(&self, body: usize, t_s: f64) -> Option<State> {
        if self.times_s.is_empty() {
            return None;
        }
        if let Some(rider) = self.riders.iter().find(|rider| rider.body == body) {
            let host = self.state(rider.host, t_s)?;
            return Some(State { pos: host.pos + Vector3::from(rider.offset), vel: host.vel });
        }
        let place = self.order.iter().position(|member| *member == body)?;
        let [at, moving] = self.barycentre;
        let mut middle = State { pos: at + moving * (t_s - self.start_s), vel: moving };
        let knots = self.stencil(self.interval(t_s));
        // From the outermost inwards: what is left is the mean of all within.
        for outer in (1..self.order.len()).rev() {
            let light = self.gms[outer] == 0.0;
            if light && outer != place {
                continue;
            }
            let orbit = self.between(knots, t_s, outer - 1);
            let (pos, vel) = orbit.to_state(self.within[outer], self.senses[outer - 1]).ok()?;
            let share = self.gms[outer] / self.within[outer];
            middle = State { pos: middle.pos - pos * share, vel: middle.vel - vel * share };
            if outer == place {
                return Some(State { pos: middle.pos + pos, vel: middle.vel + vel });
            }
        }
        Some(middle)
    }

    /// Start and end of the piece that starts at or before an instant and ends after it: short enough for a polynomial.
    pub(super) fn piece(&self, t_s: f64) -> (f64, f64) {
        let interval = self.interval(t_s);
        let (Some(&from_s), Some(&until_s)) = (self.times_s.get(interval), self.times_s.get(interval + 1))
        else {
            return (self.start_s, self.settled_s);
        };
        let mut fastest = 0.0_f64;
        for place in 0..self.senses.len() {
            for knot in [interval, interval + 1] {
                let orbit = self.orbit(knot, place);
                let e = orbit.eccentricity();
                // The rate at periapsis is n (1 + e)² / (1 - e²)^(3/2).
                let flat = (1.0 - e) * (1.0 - e);
                let rate = orbit.mean_motion_rad_s(self.within[place + 1]) * (1.0 - e * e).sqrt() / flat;
                fastest = fastest.max(rate);
            }
        }
        let parts = ((until_s - from_s).abs() * fastest / PIECE_RAD).ceil().max(1.0);
        let border =
            |part: f64| if part < parts { from_s + (until_s - from_s) * (part / parts) } else { until_s };
        let ahead = |border_s: f64| (border_s - t_s) * (until_s - from_s) > 0.0;
        let mut part = ((t_s - from_s) / (until_s - from_s) * parts).floor().clamp(0.0, parts - 1.0);
        while part > 0.0 && ahead(border(part)) {
            part -= 1.0;
        }
        while part + 1.0 < parts && !ahead(border(part + 1.0)) {
            part += 1.0;
        }
        (border(part), border(part + 1.0))
    }

    /// The path of a body on a piece, or on a part of one, as a polynomial: through ten points of it.
    pub(super) fn numbers(&self, body: usize, start_s: f64, step_s: f64) -> Option<[f64; PER_BODY]> {
        let mut out = [0.0; PER_BODY];
        let mut places = [Vector3::zeros(); POINTS.len()];
        for (place, h) in places.iter_mut().zip(POINTS) {
            *place = self.state(body, start_s + h * step_s)?.pos;
        }
        // Newton's divided differences, and from them the powers of h.
        for level in 1..POINTS.len() {
            for i in (level..POINTS.len()).rev() {
                places[i] = (places[i] - places[i - 1]) / (POINTS[i] - POINTS[i - level]);
            }
        }
        let mut powers = [Vector3::zeros(); POINTS.len()];
        for (i, difference) in places.iter().enumerate().rev() {
            for k in (1..POINTS.len()).rev() {
                powers[k] = powers[k - 1] - powers[k] * POINTS[i];
            }
            powers[0] = difference - powers[0] * POINTS[i];
        }
        for (k, power) in powers.iter().enumerate() {
            // The acceleration's coefficients, in m/s²: position's without what two integrations gave them.
            let weight = match k {
                0 => 1.0,
                1 => 1.0 / step_s,
                _ => number_from(k * (k - 1)) / (step_s * step_s),
            };
            for axis in 0..3 {
                out[3 * k + axis] = weight * power[axis];
            }
        }
        Some(out)
    }

    /// How many numbers [`Knots::write`] writes.
    pub(super) fn written(&self) -> usize {
        HEADER + 3 * self.order.len() - 1 + 5 * self.riders.len() + self.times_s.len() + self.orbits.len()
    }

    /// Writes it: how many members, riders and knots; start, end of what is settled, whether it is closed, both errors, the barycentre; of each
    /// member its place, GM and (but for the centre) sense; five numbers for each rider; times; orbits.
    pub(super) fn write(&self, numbers: &mut Vec<f64>) {
        let flag = |yes: bool| if yes { 1.0 } else { 0.0 };
        numbers.extend([self.order.len(), self.riders.len(), self.times_s.len()].map(number_from));
        numbers.extend([self.start_s, self.settled_s, flag(self.closed)]);
        numbers.extend([self.errors.place, self.errors.velocity]);
        numbers.extend(self.barycentre.iter().flatten());
        numbers.extend(self.order.iter().map(|member| number_from(*member)));
        numbers.extend_from_slice(&self.gms);
        numbers.extend(self.senses.iter().map(|sense| flag(*sense == Sense::Retrograde)));
        for rider in &self.riders {
            numbers.extend([rider.body, rider.host].map(number_from));
            numbers.extend(rider.offset);
        }
        numbers.extend_from_slice(&self.times_s);
        numbers.extend_from_slice(&self.orbits);
    }

    /// As [`Knots::write`] wrote it, taken off the front of `numbers`, for so many bodies; `None` where they don't fit.
    pub(super) fn read(bodies: usize, numbers: &mut &[f64]) -> Option<Self> {
        let mut take = |count: usize| take(numbers, count);
        let body = |number: f64| count_from(number).filter(|&body| body < bodies);
        let header = take(HEADER)?;
        let [members, riders, knots] =
            [count_from(header[0])?, count_from(header[1])?, count_from(header[2])?];
        if members == 0 || members > bodies || riders > bodies || knots == 0 {
            return None;
        }
        let order = take(members)?.iter().map(|member| body(*member)).collect::<Option<Vec<_>>>()?;
        let gms = take(members)?.to_vec();
        let senses = take(members - 1)?;
        let senses = senses.iter().map(|s| if *s > 0.0 { Sense::Retrograde } else { Sense::Direct });
        let senses: Vec<Sense> = senses.collect();
        let rider = |row: &[f64]| {
            let host = body(row[1]).filter(|host| order.contains(host))?;
            Some(Rider { body: body(row[0])?, host, offset: [row[2], row[3], row[4]] })
        };
        let riders = take(riders.checked_mul(5)?)?.chunks_exact(5).map(rider).collect::<Option<Vec<_>>>()?;
        let mut sum = 0.0;
        let within = gms.iter().map(|gm| {
            sum += gm;
            sum
        });
        Some(Self {
            within: within.collect(),
            riders,
            start_s: header[3],
            settled_s: header[4],
            closed: header[5] > 0.0,
            errors: Tolerance { place: header[6], velocity: header[7] },
            barycentre: [
                Vector3::new(header[8], header[9], header[10]),
                Vector3::new(header[11], header[12], header[13]),
            ],
            times_s: take(knots)?.to_vec(),
            orbits: take(knots.checked_mul((members - 1).checked_mul(PER_ORBIT)?)?)?.to_vec(),
            order,
            gms,
            senses,
        })
    }

    /// Memory held, bytes.
    pub(super) fn bytes(&self) -> usize {
        (self.times_s.len() + self.orbits.len()) * size_of::<f64>()
    }
}

/// Numbers before those of the members.
const HEADER: usize = 14;

/// The three numbers of one among those of many.
fn at(of: &[f64], place: usize) -> Vector3<f64> {
    Vector3::from_column_slice(&of[3 * place..3 * place + 3])
}

fn numbers_of(orbit: &Equinoctial) -> [f64; PER_ORBIT] {
    let Equinoctial { semi_major_m, h, k, p, q, mean_longitude_rad } = *orbit;
    [semi_major_m, h, k, p, q, mean_longitude_rad]
}

fn orbit_of([semi_major_m, h, k, p, q, mean_longitude_rad]: [f64; PER_ORBIT]) -> Equinoctial {
    Equinoctial { semi_major_m, h, k, p, q, mean_longitude_rad }
}
