//! What is kept of a swarm: sparse snapshots both ways from time 0, from which every instant is found again.

use super::Loss;
use super::flock::{PER_TRACER, START_STEPS, STEPS};
use crate::math::counts::number_from;

/// Most memory that the snapshots of all swarms of a show take together, bytes.
pub const SNAPSHOT_BYTES: usize = 16 << 20;

/// Snapshots that are always afforded each way, however large they are.
const FEWEST: usize = 2;

/// Where a stretch starts.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Start {
    /// When, seconds from the scenario's start.
    pub(super) t_s: f64,
    /// Steps are 2^this seconds at most: where a break of the forces, or the end of what was known of the bodies, came soon.
    pub(super) most_exponent: i32,
}

/// States of all tracers at a start.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Snapshot {
    /// At which start of its way.
    pub(super) start: usize,
    /// Positions and velocities relative to the origin, six numbers for each tracer; NaN for one that is gone.
    pub(super) numbers: Vec<f64>,
}

/// One direction of time.
#[derive(Debug, Clone, PartialEq, Default)]
pub(super) struct Way {
    pub(super) starts: Vec<Start>,
    pub(super) snapshots: Vec<Snapshot>,
    pub(super) losses: Vec<Loss>,
    pub(super) end_s: f64,
    /// Changes with any bit of any tracer's way.
    pub(super) digest: u64,
}

/// The ways of a swarm over an interval that contains time 0.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct SwarmPath {
    pub(super) tracers: usize,
    pub(super) most_bytes: usize,
    pub(super) forward: Way,
    pub(super) backward: Way,
}

impl SwarmPath {
    /// Nothing known yet of so many tracers. Snapshots may take so many bytes; where they would take more, every second one goes.
    pub(super) fn new(tracers: usize, most_bytes: usize) -> Self {
        Self { tracers, most_bytes, ..Self::default() }
    }

    /// How many tracers, those that are gone included.
    pub fn tracers(&self) -> usize {
        self.tracers
    }

    /// First instant covered, seconds from the scenario's start; 0 or before.
    pub fn from_s(&self) -> f64 {
        self.backward.end_s
    }

    /// Last instant covered, seconds from the scenario's start; 0 or after.
    pub fn until_s(&self) -> f64 {
        self.forward.end_s
    }

    /// Whether it covers an instant, seconds from the scenario's start.
    pub fn covers(&self, t_s: f64) -> bool {
        if t_s < 0.0 { self.from_s() <= t_s } else { self.until_s() >= t_s }
    }

    /// The tracers that touch a body, of the time from 0 on and then of the time before, in no order.
    pub fn losses(&self) -> impl Iterator<Item = &Loss> {
        self.forward.losses.iter().chain(&self.backward.losses)
    }

    /// About how many steps its tracers took together: so many in each stretch in the mean, and the work of its start.
    pub fn steps(&self) -> f64 {
        let stretches = self.forward.starts.len() + self.backward.starts.len();
        number_from(stretches) * number_from(self.tracers) * (STEPS + f64::from(START_STEPS))
    }

    /// Memory held, bytes.
    pub fn bytes(&self) -> usize {
        [&self.forward, &self.backward].iter().map(|way| way.bytes()).sum()
    }

    pub(super) fn way(&self, direction: f64) -> &Way {
        if direction < 0.0 { &self.backward } else { &self.forward }
    }

    pub(super) fn way_mut(&mut self, direction: f64) -> &mut Way {
        if direction < 0.0 { &mut self.backward } else { &mut self.forward }
    }

    /// Snapshots afforded each way.
    pub(super) fn afforded(&self) -> usize {
        let each = (self.tracers * PER_TRACER * size_of::<f64>()).max(1);
        (self.most_bytes / 2 / each).max(FEWEST)
    }
}

impl Way {
    /// The stretch that an instant lies in; the first one before anything is known.
    pub(super) fn stretch(&self, t_s: f64, direction: f64) -> usize {
        self.starts.partition_point(|start| start.t_s * direction <= t_s * direction).max(1) - 1
    }

    /// The last snapshot at a start or before it; `None` where that is time 0 itself.
    pub(super) fn snapshot_before(&self, start: usize) -> Option<&Snapshot> {
        self.snapshots.iter().rfind(|snapshot| snapshot.start <= start)
    }

    /// Which starts keep their snapshots when there are so many and so many are afforded: every so many.
    pub(super) fn spacing(starts: usize, afforded: usize) -> usize {
        starts.div_ceil(afforded.max(1)).next_power_of_two()
    }

    /// Drops what is not afforded any more.
    pub(super) fn thin(&mut self, afforded: usize) {
        let spacing = Self::spacing(self.starts.len(), afforded);
        self.snapshots.retain(|snapshot| snapshot.start.is_multiple_of(spacing));
    }

    fn bytes(&self) -> usize {
        let snapshots: usize = self.snapshots.iter().map(|snapshot| size_of_val(&*snapshot.numbers)).sum();
        snapshots + size_of_val(&*self.starts) + size_of_val(&*self.losses)
    }
}
