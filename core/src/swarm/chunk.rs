//! Parts of a swarm's path as one flat array of numbers, to be handed from one thread to another.

use super::Loss;
use super::flock::PER_TRACER;
use super::path::{Snapshot, Start, SwarmPath, Way};
use crate::ephemeris::ChunkError;
use crate::scenario::BodyId;

/// How far a path had grown: what a chunk starts from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Mark {
    forward: WayMark,
    backward: WayMark,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
struct WayMark {
    starts: usize,
    losses: usize,
}

/// What a path has grown by since a [`Mark`], bit for bit.
///
/// The numbers: how many tracers, the bound on bytes; then for the time from 0 on, and for the time before: starts and losses of the mark, how many
/// starts, snapshots and losses follow, the last instant covered, the digest in two halves; two numbers for each start; for each snapshot its start
/// and six numbers for each tracer; three for each loss.
#[derive(Debug, Clone, PartialEq)]
pub struct Chunk {
    numbers: Vec<f64>,
}

/// Numbers before a way's starts.
const HEADER: usize = 8;
/// Numbers of a start.
const PER_START: usize = 2;
/// Numbers of a loss.
const PER_LOSS: usize = 3;

impl Chunk {
    /// Its numbers, to be sent. They are also what tells whether two paths are the same.
    pub fn into_numbers(self) -> Vec<f64> {
        self.numbers
    }

    /// From numbers that were sent.
    ///
    /// # Errors
    /// [`ChunkError::Malformed`] when they don't fit together.
    pub fn from_numbers(numbers: Vec<f64>) -> Result<Self, ChunkError> {
        let chunk = Self { numbers };
        chunk.parts().ok_or(ChunkError::Malformed)?;
        Ok(chunk)
    }

    fn parts(&self) -> Option<Parts> {
        let mut rest = &self.numbers[..];
        let tracers = count_from(take(&mut rest, 1)?[0])?;
        let most_bytes = count_from(take(&mut rest, 1)?[0])?;
        let ways = [read(&mut rest, tracers)?, read(&mut rest, tracers)?];
        rest.is_empty().then_some(Parts { tracers, most_bytes, ways })
    }
}

struct Parts {
    tracers: usize,
    most_bytes: usize,
    ways: [(WayMark, Way); 2],
}

fn take<'a>(rest: &mut &'a [f64], count: usize) -> Option<&'a [f64]> {
    let (part, tail) = rest.split_at_checked(count)?;
    *rest = tail;
    Some(part)
}

fn read(rest: &mut &[f64], tracers: usize) -> Option<(WayMark, Way)> {
    let header = take(rest, HEADER)?;
    let count = |at: usize| count_from(header[at]);
    let mark = WayMark { starts: count(0)?, losses: count(1)? };
    let (starts, snapshots, losses) = (count(2)?, count(3)?, count(4)?);
    let half = |at: usize| count(at).map(|half| half as u64);
    let mut way = Way { end_s: header[5], digest: half(6)? << 32 | half(7)?, ..Way::default() };
    for row in take(rest, starts.checked_mul(PER_START)?)?.chunks_exact(PER_START) {
        way.starts.push(Start { t_s: row[0], most_exponent: exponent_from(row[1])? });
    }
    for row in take(rest, snapshots.checked_mul(tracers.checked_mul(PER_TRACER)?.checked_add(1)?)?)?
        .chunks_exact(tracers * PER_TRACER + 1)
    {
        let start = count_from(row[0]).filter(|start| (mark.starts..mark.starts + starts).contains(start))?;
        way.snapshots.push(Snapshot { start, numbers: row[1..].to_vec() });
    }
    for row in take(rest, losses.checked_mul(PER_LOSS)?)?.chunks_exact(PER_LOSS) {
        let tracer = count_from(row[1]).filter(|tracer| *tracer < tracers)?;
        way.losses.push(Loss { t_s: row[0], tracer, onto: BodyId(count_from(row[2])?) });
    }
    Some((mark, way))
}

fn write(way: &Way, mark: WayMark, numbers: &mut Vec<f64>) {
    let starts = way.starts.get(mark.starts..).unwrap_or_default();
    let losses = way.losses.get(mark.losses..).unwrap_or_default();
    let snapshots: Vec<&Snapshot> = way.snapshots.iter().filter(|s| s.start >= mark.starts).collect();
    numbers.extend([mark.starts, mark.losses, starts.len(), snapshots.len(), losses.len()].map(number_from));
    let halves = [way.digest >> 32, way.digest & u64::from(u32::MAX)];
    numbers.push(way.end_s);
    numbers.extend(halves.map(|half| f64::from(u32::try_from(half).unwrap_or_default())));
    for start in starts {
        numbers.extend([start.t_s, f64::from(start.most_exponent)]);
    }
    for snapshot in snapshots {
        numbers.push(number_from(snapshot.start));
        numbers.extend_from_slice(&snapshot.numbers);
    }
    for loss in losses {
        numbers.extend([loss.t_s, number_from(loss.tracer), number_from(loss.onto.0)]);
    }
}

impl Way {
    fn mark(&self) -> WayMark {
        WayMark { starts: self.starts.len(), losses: self.losses.len() }
    }

    fn append(&mut self, way: Way, afforded: usize) {
        self.starts.extend(way.starts);
        self.snapshots.extend(way.snapshots);
        self.losses.extend(way.losses);
        (self.end_s, self.digest) = (way.end_s, way.digest);
        self.thin(afforded);
    }
}

impl SwarmPath {
    /// How far it has grown.
    pub fn mark(&self) -> Mark {
        Mark { forward: self.forward.mark(), backward: self.backward.mark() }
    }

    /// What it has grown by since a mark of its own; [`Mark::default`] for all of it.
    pub fn chunk_since(&self, mark: Mark) -> Chunk {
        let mut numbers = vec![number_from(self.tracers), number_from(self.most_bytes)];
        write(&self.forward, mark.forward, &mut numbers);
        write(&self.backward, mark.backward, &mut numbers);
        Chunk { numbers }
    }

    /// Adds a chunk that follows what is there. A path without tracers takes them over from the first chunk.
    ///
    /// # Errors
    /// [`ChunkError`]; the path is then as before.
    pub fn append(&mut self, chunk: &Chunk) -> Result<(), ChunkError> {
        let Parts { tracers, most_bytes, ways } = chunk.parts().ok_or(ChunkError::Malformed)?;
        let [(forward_mark, forward), (backward_mark, backward)] = ways;
        let mark = Mark { forward: forward_mark, backward: backward_mark };
        let new = self.tracers == 0 && self.mark() == Mark::default();
        if mark != self.mark() || !new && (tracers, most_bytes) != (self.tracers, self.most_bytes) {
            return Err(ChunkError::OutOfOrder);
        }
        (self.tracers, self.most_bytes) = (tracers, most_bytes);
        let afforded = self.afforded();
        self.forward.append(forward, afforded);
        self.backward.append(backward, afforded);
        Ok(())
    }
}

/// Counts stay far below 2⁵³, where f64 is exact.
#[expect(clippy::cast_precision_loss, reason = "counts of things in memory are exact in f64")]
fn number_from(count: usize) -> f64 {
    count as f64
}

#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "checked to be a whole number that fits"
)]
fn count_from(number: f64) -> Option<usize> {
    (number >= 0.0 && number <= f64::from(u32::MAX) && number.fract() == 0.0).then_some(number as usize)
}

#[expect(clippy::cast_possible_truncation, reason = "checked to be a whole number that fits")]
fn exponent_from(number: f64) -> Option<i32> {
    (number.abs() <= f64::from(i32::MAX) && number.fract() == 0.0).then_some(number as i32)
}
