//! What a check measured: numbers for every beat and for the whole show.

use super::finding::{Finding, Weight};
use crate::initial::InitialState;
use crate::scenario::{BodyId, EventRef, Place, SwarmId};
use crate::show::Show;

/// All that was measured and found.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Report {
    /// What was found, the heaviest first, then in the order of the file.
    pub findings: Vec<Finding>,
    /// What was measured of each beat, in their order.
    pub beats: Vec<BeatReport>,
    /// What one part in 1e9 of each stated number does, the worst first.
    pub levers: Vec<Lever>,
    /// The numbers that bear on the motion and were not changed, in the order of the file.
    pub left_out: Vec<LeftOut>,
    /// The nearest that bodies come to each other while they are shown, the nearest first.
    pub encounters: Vec<Encounter>,
    /// Memory that the show takes, bytes.
    pub bytes: usize,
    /// Memory that it may take, bytes.
    pub most_bytes: usize,
    /// By which method the paths were integrated, and why: whole sentences.
    pub method: Vec<String>,
}

impl Report {
    /// Whether the show is ready: nothing fails.
    pub fn is_ready(&self) -> bool {
        self.findings.iter().all(|finding| finding.weight != Weight::Failure)
    }
}

/// What was measured of one beat. `None` and 0 where there is nothing to measure.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct BeatReport {
    /// How far off the worst body in the picture is drawn in the second run.
    pub off: Option<Shift>,
    /// How far off the worst body on stage is, in the picture or not, m.
    pub off_m: f64,
    /// The stated number of which one part in 1e9 moves its picture farthest: an index into [`Report::levers`].
    pub lever: Option<usize>,
    /// The event that it reaches.
    pub cue: Option<CueReport>,
    /// Largest part of a turn around its primary that a body in the picture makes from one frame to the next.
    pub turns_a_frame: f64,
    /// Time to paint its dearest picture, without a graphics card, ms.
    pub frame_ms: f64,
    /// Height of the smallest capitals from the back row, arcmin.
    pub capital_arcmin: Option<f64>,
    /// Width of the thinnest line from the back row, arcmin.
    pub line_arcmin: Option<f64>,
    /// Time to read the longest of its captions, s.
    pub reading_s: f64,
    /// How fast the view turns when it begins, at its fastest, degrees a second.
    pub turn_deg_s: f64,
    /// How fast the view slides when it begins, at its fastest, picture heights a second.
    pub pan_heights_s: f64,
    /// Largest share of ten degrees of sight that flashes more than three times in a second around its beginning.
    pub flashing: f64,
}

/// How far something is from where it should be.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Shift {
    /// Of what.
    pub of: Mover,
    /// Show time into the beat, s.
    pub beat_s: f64,
    /// How far in the picture of the house, relative to the view's centre, px at 1080 px of height.
    pub px: f64,
    /// How far in space, relative to the view's centre, m.
    pub m: f64,
}

/// An event that a beat reaches, as it comes about.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CueReport {
    /// Which event.
    pub event: EventRef,
    /// Show time into the beat at which it is to happen, s.
    pub at_s: f64,
    /// Model time at which it happens, s.
    pub model_s: f64,
    /// How much later the clock comes to it, when the show is run by its plan, s of show time; negative: earlier.
    pub late_s: f64,
    /// How much later it happens in the second run, s of model time; `None`: it does not.
    pub again_s: Option<f64>,
    /// The same in frames of the show.
    pub again_frames: f64,
}

/// What moves in a picture.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Mover {
    /// A body.
    Body(BodyId),
    /// One of the tracers of a swarm that were looked at.
    Tracer(SwarmId),
}

impl Mover {
    /// How people call it: "Fenn", "a tracer of Ring".
    pub fn called(self, initial: &InitialState) -> String {
        match self {
            Self::Body(body) => initial.name(body).to_owned(),
            Self::Tracer(_) => format!("a tracer of {}", self.name(initial)),
        }
    }

    /// Name of the body or swarm.
    pub fn name(self, initial: &InitialState) -> &str {
        match self {
            Self::Body(body) => initial.name(body),
            Self::Tracer(swarm) => initial.swarms.get(swarm.0).map_or("", |swarm| swarm.name.as_str()),
        }
    }
}

/// Of what a number is stated.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Owner {
    /// `[physics]`.
    Physics,
    /// A body.
    Body(BodyId),
    /// A swarm.
    Swarm(SwarmId),
    /// A change, by its place in the file's order.
    Change(usize),
    /// A beat, by its place in the file's order: changes wait for it, or for one after it.
    Beat(usize),
}

/// A number that bears on the motion.
#[derive(Debug, Clone, PartialEq)]
pub struct Number {
    /// Of what.
    pub owner: Owner,
    /// Which number of it: "mass", "orbit.periapsis", "place.velocity.x".
    pub quantity: String,
    /// What stands in the file.
    pub stated: String,
    /// Where it stands in the text.
    pub place: Place,
}

impl Number {
    /// Of what it is, as people call it: Fenn, change 2, beat 3, `[physics]`.
    pub fn of(&self, show: &Show) -> String {
        match self.owner {
            Owner::Physics => "[physics]".to_owned(),
            Owner::Body(body) => show.initial.name(body).to_owned(),
            Owner::Swarm(swarm) => Mover::Tracer(swarm).name(&show.initial).to_owned(),
            Owner::Change(change) => format!("change {}", change + 1),
            Owner::Beat(beat) => super::sight::called(beat),
        }
    }

    /// How people call it: "orbit.periapsis of Fenn".
    pub fn called(&self, show: &Show) -> String {
        format!("{} of {}", self.quantity, self.of(show))
    }
}

/// A number that was not changed.
#[derive(Debug, Clone, PartialEq)]
pub struct LeftOut {
    /// Which one.
    pub number: Number,
    /// Why.
    pub why: Why,
}

/// Why a number was not changed.
#[derive(Debug, Clone, PartialEq)]
pub enum Why {
    /// It is 0, of which every part is 0.
    Zero,
    /// The file takes no number that is so near to it: whole numbers.
    Alone,
    /// Those before it took the time that there is.
    NoTime,
    /// With it changed the show can't be given: what is wrong then.
    Breaks(String),
}

/// A stated number, and what a change by one part in 1e9 does.
#[derive(Debug, Clone, PartialEq)]
pub struct Lever {
    /// The number.
    pub number: Number,
    /// How far the picture of each beat moves, at the worst instant looked at; `None` where nothing is in it.
    pub shifts: Vec<Option<Shift>>,
}

impl Lever {
    /// The beat in which the picture moves farthest, and how far.
    pub fn worst(&self) -> Option<(usize, Shift)> {
        let all = self.shifts.iter().enumerate().filter_map(|(beat, shift)| Some((beat, (*shift)?)));
        all.fold(None, |worst: Option<(usize, Shift)>, one| match worst {
            Some(worst) if worst.1.px >= one.1.px => Some(worst),
            _ => Some(one),
        })
    }
}

/// Two bodies near each other.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Encounter {
    /// One body.
    pub body: BodyId,
    /// The other.
    pub other: BodyId,
    /// When, model time, s.
    pub t_s: f64,
    /// The first beat that shows it.
    pub beat: usize,
    /// From centre to centre, m.
    pub distance_m: f64,
    /// From surface to surface, m.
    pub gap_m: f64,
    /// The distance in Hill radii of the heavier one, where that goes around something.
    pub hill_radii: Option<f64>,
    /// How far one part in 1e9 of a stated number moves them apart or together then, m.
    pub moved_m: f64,
}
