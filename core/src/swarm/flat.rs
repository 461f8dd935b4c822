//! A swarm's path as one flat array of numbers, to be handed from one thread to another.

use super::Loss;
use super::flock::PER_TRACER;
use super::path::{Snapshot, Start, SwarmPath, Way};
use crate::ephemeris::Malformed;
use crate::math::counts::{count_from, number_from, take};
use crate::scenario::BodyId;

/// Numbers before a way's starts.
const HEADER: usize = 6;
/// Numbers of a start.
const PER_START: usize = 2;
/// Numbers of a loss.
const PER_LOSS: usize = 3;

impl SwarmPath {
    /// All of it, bit for bit; also what tells whether two paths are the same.
    ///
    /// How many tracers, the bound on bytes; then for the time from 0 on, and for the time before: how many starts, snapshots and losses follow, the
    /// last instant covered, the digest in two halves; two numbers for each start; for each snapshot its start and six numbers for each
    /// tracer; three for each loss.
    pub fn to_numbers(&self) -> Vec<f64> {
        let mut numbers = vec![number_from(self.tracers), number_from(self.most_bytes)];
        write(&self.forward, &mut numbers);
        write(&self.backward, &mut numbers);
        numbers
    }

    /// From numbers that [`SwarmPath::to_numbers`] wrote.
    ///
    /// # Errors
    /// [`Malformed`] when they don't fit together.
    pub fn from_numbers(numbers: &[f64]) -> Result<Self, Malformed> {
        let whole = |mut rest: &[f64]| {
            let [tracers, most_bytes] = *take(&mut rest, 2)? else { return None };
            let (tracers, most_bytes) = (count_from(tracers)?, count_from(most_bytes)?);
            let (forward, backward) = (read(&mut rest, tracers)?, read(&mut rest, tracers)?);
            rest.is_empty().then_some(Self { tracers, most_bytes, forward, backward })
        };
        whole(numbers).ok_or(Malformed)
    }
}

fn read(rest: &mut &[f64], tracers: usize) -> Option<Way> {
    let header = take(rest, HEADER)?;
    let count = |at: usize| count_from(header[at]);
    let (starts, snapshots, losses) = (count(0)?, count(1)?, count(2)?);
    let half = |at: usize| count(at).map(|half| half as u64);
    let mut way = Way { end_s: header[3], digest: half(4)? << 32 | half(5)?, ..Way::default() };
    for row in take(rest, starts.checked_mul(PER_START)?)?.chunks_exact(PER_START) {
        way.starts.push(Start { t_s: row[0], most_exponent: exponent_from(row[1])? });
    }
    for row in take(rest, snapshots.checked_mul(tracers.checked_mul(PER_TRACER)?.checked_add(1)?)?)?
        .chunks_exact(tracers * PER_TRACER + 1)
    {
        let start = count_from(row[0]).filter(|start| *start < starts)?;
        way.snapshots.push(Snapshot { start, numbers: row[1..].to_vec() });
    }
    for row in take(rest, losses.checked_mul(PER_LOSS)?)?.chunks_exact(PER_LOSS) {
        let tracer = count_from(row[1]).filter(|tracer| *tracer < tracers)?;
        way.losses.push(Loss { t_s: row[0], tracer, onto: BodyId(count_from(row[2])?) });
    }
    Some(way)
}

fn write(way: &Way, numbers: &mut Vec<f64>) {
    numbers.extend([way.starts.len(), way.snapshots.len(), way.losses.len()].map(number_from));
    let halves = [way.digest >> 32, way.digest & u64::from(u32::MAX)];
    numbers.push(way.end_s);
    numbers.extend(halves.map(|half| f64::from(u32::try_from(half).unwrap_or_default())));
    for start in &way.starts {
        numbers.extend([start.t_s, f64::from(start.most_exponent)]);
    }
    for snapshot in &way.snapshots {
        numbers.push(number_from(snapshot.start));
        numbers.extend_from_slice(&snapshot.numbers);
    }
    for loss in &way.losses {
        numbers.extend([loss.t_s, number_from(loss.tracer), number_from(loss.onto.0)]);
    }
}

#[expect(clippy::cast_possible_truncation, reason = "checked to be a whole number that fits")]
fn exponent_from(number: f64) -> Option<i32> {
    (number.abs() <= f64::from(i32::MAX) && number.fract() == 0.0).then_some(number as i32)
}
