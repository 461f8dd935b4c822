//! Beats: what is said, shown and timed.

use super::{BodyId, SwarmId};
use crate::scenario::problem::Place;
use crate::units::{Angle, Length, Pace, Span};

/// One step of the talk.
#[derive(Debug, Clone, PartialEq)]
pub struct Beat {
    /// What it is called.
    pub title: String,
    /// What to say; paragraphs are parted by an empty line.
    pub say: String,
    /// What the audience reads, by language. `*so*` marks the words that are being explained.
    pub captions: Vec<Caption>,
    /// How model time goes.
    pub clock: BeatClock,
    /// Where model time starts.
    pub start: BeatStart,
    /// What happens when its time is over.
    pub then: Then,
    /// How the audience looks; a beat that states none keeps the one before.
    pub view: View,
    /// What is drawn to explain.
    pub marks: Vec<Mark>,
    /// Who is on stage, `cast = ["Orla", "Fenn"]`; the others pull unseen, and marks of theirs are not drawn.
    /// `None`: all. A beat that states none keeps those of the one before; `cast = []` brings all back.
    pub cast: Option<Cast>,
    /// Where its `[[beat]]` stands in the text.
    pub place: Place,
    /// Where its clock stands in the text.
    pub clock_place: Place,
}

/// The bodies and swarms that a beat shows.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Cast {
    /// The bodies.
    pub bodies: Vec<BodyId>,
    /// The swarms.
    pub swarms: Vec<SwarmId>,
}

/// A caption in one language.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Caption {
    /// BCP 47 tag.
    pub language: String,
    /// The words; line breaks are kept.
    pub text: String,
}

/// How model time goes during a beat.
#[derive(Debug, Clone, PartialEq)]
pub enum BeatClock {
    /// The model stands still.
    Hold {
        /// Show time planned.
        lasts: Span,
    },
    /// At a stated pace.
    Pace {
        /// Model time per show time.
        pace: Pace,
        /// Show time planned.
        lasts: Span,
    },
    /// A stated span of model time in a stated show time.
    Stretch {
        /// Model time to cover.
        span: ModelSpan,
        /// Show time to cover it in.
        lasts: Span,
    },
    /// An event is reached at a stated time into the beat.
    Reach {
        /// The event.
        event: EventRef,
        /// Show time from the start of the beat to the event.
        at: Span,
        /// Show time planned for the beat; at least `at`.
        lasts: Span,
    },
}

/// A stated span of model time.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum ModelSpan {
    /// So long.
    Fixed(Span),
    /// So many periods of a body around its primary, as it moves when the beat starts.
    Periods {
        /// How many.
        count: f64,
        /// Of which body.
        body: BodyId,
    },
}

/// Where model time starts in a beat.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum BeatStart {
    /// Where the beat before ends.
    GoOn,
    /// At the start of the scenario.
    Restart,
    /// At a model time, from the scenario's start.
    Time(Span),
    /// At an event, or a stated time after it (negative: before it). The first one after the scenario's start, unless numbered.
    Event {
        /// The event.
        event: EventRef,
        /// Model time after it.
        after: Span,
    },
}

/// What happens when the planned time of a beat is over.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Then {
    /// The model goes on at the same pace until the presenter goes on.
    GoOn,
    /// The model eases to a hold.
    Hold,
    /// The next beat starts by itself.
    Next,
}

/// Which event is meant: "periapsis of Fenn", "2nd contact of Ball with Brae", "distance 1 au of Fenn from Orla".
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct EventRef {
    /// What kind.
    pub kind: EventKind,
    /// Of which body.
    pub body: BodyId,
    /// To, with or from which other body; `None`: its primary.
    pub other: Option<BodyId>,
    /// The how-manieth after the time from which it is sought, from 1.
    pub nth: usize,
    /// With [`EventKind::Distance`], and only there: the distance that is crossed.
    pub distance: Option<Length>,
}

impl EventRef {
    /// "2nd periapsis of Fenn", as files say it; `name` gives the names of bodies.
    pub fn said<'a>(&self, name: impl Fn(BodyId) -> &'a str) -> String {
        let ordinal = match (self.nth, self.nth % 10, self.nth % 100) {
            (1, ..) => String::new(),
            (n, _, 11..=13) => format!("{n}th "),
            (n, 1, _) => format!("{n}st "),
            (n, 2, _) => format!("{n}nd "),
            (n, 3, _) => format!("{n}rd "),
            (n, ..) => format!("{n}th "),
        };
        let distance = self.distance.map(|distance| format!(" {distance}")).unwrap_or_default();
        let other = self.other.map(|other| format!(" {} {}", self.kind.joiner(), name(other)));
        let kind = self.kind.name();
        format!("{ordinal}{kind}{distance} of {}{}", name(self.body), other.unwrap_or_default())
    }
}

/// The kinds of event.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum EventKind {
    /// Nearest to the primary.
    Periapsis,
    /// Farthest from the primary.
    Apoapsis,
    /// Nearest to any other body.
    ClosestApproach,
    /// Touching another body's surface.
    Contact,
    /// Up (northwards) through the ecliptic, relative to the primary.
    AscendingNode,
    /// Down (southwards) through the ecliptic, relative to the primary.
    DescendingNode,
    /// In the direction of the primary (same ecliptic longitude), seen from another body.
    Conjunction,
    /// Opposite to the primary in ecliptic longitude, seen from another body.
    Opposition,
    /// Its ecliptic longitude stands still, seen from another body: it turns back or forth again.
    Stationary,
    /// Farthest from the star, in angle, seen from another body that is farther out.
    GreatestElongation,
    /// The first of it meets the umbra of another body.
    ShadowEntry,
    /// The last of it leaves the umbra of another body.
    ShadowExit,
    /// The first of it meets the penumbra of another body.
    PenumbraEntry,
    /// The last of it leaves the penumbra of another body.
    PenumbraExit,
    /// Its disc meets that of the star and lies before it, seen from the centre of another body.
    TransitEntry,
    /// Its disc leaves that of the star.
    TransitExit,
    /// A stated distance from another body is crossed, inwards or outwards.
    Distance,
}

impl EventKind {
    /// Every kind, in the order in which they are listed to people.
    pub const ALL: [Self; 17] = [
        Self::Periapsis,
        Self::Apoapsis,
        Self::ClosestApproach,
        Self::Contact,
        Self::AscendingNode,
        Self::DescendingNode,
        Self::Conjunction,
        Self::Opposition,
        Self::Stationary,
        Self::GreatestElongation,
        Self::ShadowEntry,
        Self::ShadowExit,
        Self::PenumbraEntry,
        Self::PenumbraExit,
        Self::TransitEntry,
        Self::TransitExit,
        Self::Distance,
    ];

    /// Its name in files and in what the commands print.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Periapsis => "periapsis",
            Self::Apoapsis => "apoapsis",
            Self::ClosestApproach => "closest-approach",
            Self::Contact => "contact",
            Self::AscendingNode => "ascending-node",
            Self::DescendingNode => "descending-node",
            Self::Conjunction => "conjunction",
            Self::Opposition => "opposition",
            Self::Stationary => "stationary",
            Self::GreatestElongation => "greatest-elongation",
            Self::ShadowEntry => "shadow-entry",
            Self::ShadowExit => "shadow-exit",
            Self::PenumbraEntry => "penumbra-entry",
            Self::PenumbraExit => "penumbra-exit",
            Self::TransitEntry => "transit-entry",
            Self::TransitExit => "transit-exit",
            Self::Distance => "distance",
        }
    }

    /// The word that joins the other body to it: "closest-approach of Pell **to** Brae".
    pub const fn joiner(self) -> &'static str {
        match self {
            Self::Periapsis | Self::Apoapsis | Self::ClosestApproach => "to",
            Self::Contact => "with",
            _ => "from",
        }
    }

    /// Whether it is seen from another body, which has to be named.
    pub const fn is_seen(self) -> bool {
        matches!(
            self,
            Self::Conjunction
                | Self::Opposition
                | Self::Stationary
                | Self::GreatestElongation
                | Self::TransitEntry
                | Self::TransitExit
        )
    }
}

/// How the audience looks.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct View {
    /// What stands in the middle; it is followed.
    pub centre: Centre,
    /// The length that the height of the picture covers (of the largest 16:9 frame inside the window).
    pub span: Length,
    /// How far the eye is tipped from the ecliptic's north pole; 0: looking straight down on it.
    pub tilt: Angle,
    /// How far the picture is turned about the line of sight: the direction of the ecliptic that points right.
    pub turn: Angle,
}

/// What stands in the middle of a view.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Centre {
    /// The body, or the barycentre of all.
    pub about: Option<BodyId>,
    /// Offset from it, ecliptic axes.
    pub offset: [Length; 3],
}

/// Something drawn to explain. `about` is the body relative to which it is meant; `None`: the primary.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Mark {
    /// The way a body came, relative to the view's centre.
    Trail {
        /// Of which body.
        body: BodyId,
        /// How far back; `None`: from the start of the beat's stretch of model time.
        lasts: Option<Span>,
    },
    /// The way a body will go, relative to the view's centre.
    Path {
        /// Of which body.
        body: BodyId,
        /// How far ahead; `None`: one period, or to the end of the beat where there is none.
        ahead: Option<Span>,
    },
    /// Sectors, one after another, each of the same time.
    Sector {
        /// Of which body.
        body: BodyId,
        /// About which centre.
        about: Option<BodyId>,
        /// Model time of each; `None`: a twelfth of its period, or of the beat's model time where it has none.
        every: Option<Span>,
        /// How many; `None`: as many as the beat has time for.
        count: Option<usize>,
        /// Whether each one's area is written beside it.
        area: bool,
    },
    /// Arrow of velocity.
    Velocity {
        /// Of which body.
        body: BodyId,
        /// Relative to which; `None`: the view's centre.
        about: Option<BodyId>,
    },
    /// Arrow of the gravity that a body feels.
    Gravity {
        /// Which body feels it.
        body: BodyId,
    },
    /// The conic on which a body is at this instant.
    Conic {
        /// Of which body.
        body: BodyId,
        /// About which centre.
        about: Option<BodyId>,
    },
    /// Both foci of that conic.
    Foci {
        /// Of which body.
        body: BodyId,
        /// About which centre.
        about: Option<BodyId>,
    },
    /// Nearest and farthest point of that conic, with their distances.
    Apsides {
        /// Of which body.
        body: BodyId,
        /// About which centre.
        about: Option<BodyId>,
    },
    /// A number under a body's name.
    Readout {
        /// Which number.
        what: Readout,
        /// Of which body.
        body: BodyId,
        /// Relative to which; `None`: the primary.
        about: Option<BodyId>,
    },
    /// The scale bar.
    Scale,
    /// The model's date, or its time since the start where the scenario has no date.
    Date,
    /// The pace.
    Pace,
}

/// A number that is shown under a body's name.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Readout {
    /// Speed relative to `about`.
    Speed,
    /// Distance from the centre of `about`.
    Distance,
    /// Height above the surface of `about`.
    Height,
    /// Period of the orbit around `about`.
    Period,
}
