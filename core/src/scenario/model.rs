//! The scenario as data, valid by construction: names are resolved to [`BodyId`]s, quantities have units,
//! and every choice is one of those the format knows.

use super::problem::Place;
use crate::time::Epoch;
use crate::units::{Angle, Gm, Length, Pace, Span, Speed};

/// A body of a scenario: its index in [`Scenario::bodies`].
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct BodyId(pub usize);

/// A whole scenario file.
#[derive(Debug, Clone, PartialEq)]
pub struct Scenario {
    /// What it is called.
    pub title: String,
    /// One line that says what it shows, for lists of shows; may be empty.
    pub summary: String,
    /// For whom it is ("12 and up"); may be empty.
    pub audience: String,
    /// Language of captions that state none, as a BCP 47 tag; "en" unless stated.
    pub language: String,
    /// The instant at which model time is 0.
    pub date: Option<Epoch>,
    /// Which physics beyond Newton's is wanted.
    pub physics: Physics,
    /// The bodies, in the order of the file.
    pub bodies: Vec<Body>,
    /// The beats, in the order of the talk.
    pub beats: Vec<Beat>,
}

/// `[physics]`. `None` leaves the choice to what the bodies bring along.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Physics {
    /// First post-Newtonian term; on by itself where a body is `real`.
    pub relativity: Option<bool>,
    /// Oblateness (J2) of the Earth; on by itself where a body is `real`.
    pub oblateness: Option<bool>,
    /// Whether the solar-system bodies that the file doesn't name pull on its `real` ones, unseen; on unless stated.
    pub companions: Option<bool>,
}

/// What a body is, for its drawing only.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Kind {
    /// A star.
    Star,
    /// A planet.
    Planet,
    /// A moon.
    Moon,
    /// A comet; drawn with a tail that points away from the star.
    Comet,
    /// A rock: an asteroid, a stone.
    Rock,
    /// A thrown or let-go thing.
    Ball,
    /// Something built.
    Station,
}

/// The colours that bodies can have, by name of the look.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Colour {
    /// Stars first.
    Bone,
    /// Green.
    Green,
    /// Vermilion.
    Vermilion,
    /// Yellow.
    Yellow,
    /// Sky.
    Sky,
    /// Blue.
    Blue,
}

/// What contact with a body does.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Surface {
    /// The other body rests where it touched.
    Stop,
    /// The other body is thrown back; `restitution` is the share of the approach speed that it keeps, 0 to 1.
    Bounce {
        /// Share of the approach speed kept.
        restitution: f64,
    },
    /// The other body becomes part of this one.
    Merge,
}

/// A body.
#[derive(Debug, Clone, PartialEq)]
pub struct Body {
    /// Its name, unique in the file.
    pub name: String,
    /// What it is.
    pub kind: Kind,
    /// Its gravity; `None` for a tracer. A `real` body that states none has the planet's own.
    pub gm: Option<Gm>,
    /// Its radius; `None`: a point. A `real` body that states none has the planet's own.
    pub radius: Option<Length>,
    /// Its colour, stated or given in order.
    pub colour: Colour,
    /// What contact with it does; matters only with a radius. [`Surface::Stop`] unless stated.
    pub surface: Surface,
    /// How it comes to be there.
    pub form: Form,
    /// Where its `[[body]]` stands in the text.
    pub place: Place,
}

/// How a body comes to be there.
#[derive(Debug, Clone, PartialEq)]
pub enum Form {
    /// At rest at the origin of the file's coordinates (no form stated).
    Origin,
    /// A solar-system body at the scenario's date.
    Real(RealBody),
    /// On a conic around a body.
    Orbit(Orbit),
    /// At a position with a velocity.
    Place(Placed),
    /// Thrown from a surface.
    Throw(Throw),
    /// Let go above a surface.
    Drop(Drop),
}

/// The solar-system bodies with published states. Those with moons, but for the Earth, are system barycentres.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
#[expect(missing_docs, reason = "the names say it")]
pub enum RealBody {
    Sun,
    Mercury,
    Venus,
    Earth,
    Moon,
    Mars,
    Jupiter,
    Saturn,
    Uranus,
    Neptune,
    Pluto,
}

/// An orbit as stated. What is `None` was not stated; parsing has seen to it that the set is sufficient and
/// not contradictory: exactly two of the five shape quantities (one of them a size), and at most one of the
/// four that say where on the orbit the body is now (none: at periapsis).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Orbit {
    /// The body it goes around.
    pub around: BodyId,
    /// Distance at periapsis, from centre to centre.
    pub periapsis: Option<Length>,
    /// Distance at apoapsis, from centre to centre.
    pub apoapsis: Option<Length>,
    /// Semi-major axis; negative for a hyperbola.
    pub semi_major: Option<Length>,
    /// Period.
    pub period: Option<Span>,
    /// Eccentricity, 0 and above.
    pub eccentricity: Option<f64>,
    /// Inclination to the ecliptic plane.
    pub inclination: Angle,
    /// Longitude of the ascending node.
    pub node: Angle,
    /// Argument of periapsis.
    pub argument: Angle,
    /// Where on the orbit the body is at the start.
    pub now: OrbitNow,
}

/// Where on its orbit a body is at the start.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum OrbitNow {
    /// True anomaly.
    Anomaly(Angle),
    /// Mean anomaly (closed orbits only).
    MeanAnomaly(Angle),
    /// Time since periapsis; negative before it.
    AfterPeriapsis(Span),
}

/// A position and a velocity.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Placed {
    /// Relative to this body, or to the origin of the file's coordinates.
    pub about: Option<BodyId>,
    /// Position, metres, ecliptic axes.
    pub position: [Length; 3],
    /// Velocity, ecliptic axes.
    pub velocity: [Speed; 3],
}

/// A throw from a surface. The surface does not turn. North is the ecliptic pole; latitude 0, longitude 0 is +x.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Throw {
    /// The body it is thrown from.
    pub from: BodyId,
    /// Height above the surface.
    pub height: Length,
    /// Speed relative to the body's centre.
    pub speed: Speed,
    /// Angle above the horizon.
    pub elevation: Angle,
    /// Heading, from north through east.
    pub heading: Angle,
    /// Latitude.
    pub latitude: Angle,
    /// Longitude, to the east.
    pub longitude: Angle,
}

/// A body let go at rest above a surface.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Drop {
    /// The body it falls onto.
    pub onto: BodyId,
    /// Height above the surface.
    pub height: Length,
    /// Latitude.
    pub latitude: Angle,
    /// Longitude, to the east.
    pub longitude: Angle,
}

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
    /// The bodies that are on stage, `cast = ["Orla", "Fenn"]`; the others pull unseen, and marks of theirs are
    /// not drawn. `None`: all. A beat that states none keeps those of the one before; `cast = []` brings all back.
    pub cast: Option<Vec<BodyId>>,
    /// Where its `[[beat]]` stands in the text.
    pub place: Place,
    /// Where its clock stands in the text.
    pub clock_place: Place,
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

/// Which event is meant: "periapsis of Fenn", "2nd contact of Ball with Brae".
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct EventRef {
    /// What kind.
    pub kind: EventKind,
    /// Of which body.
    pub body: BodyId,
    /// To, with or from which other body; `None`: its primary.
    pub other: Option<BodyId>,
    /// The how-manieth after the time from which it is sought, from 1.
    pub nth: usize,
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
    /// In the direction of the primary (same ecliptic longitude), seen from another body.
    Conjunction,
    /// Opposite to the primary in ecliptic longitude, seen from another body.
    Opposition,
}

impl EventKind {
    /// Every kind, in the order in which they are listed to people.
    pub const ALL: [Self; 6] = [
        Self::Periapsis,
        Self::Apoapsis,
        Self::ClosestApproach,
        Self::Contact,
        Self::Conjunction,
        Self::Opposition,
    ];

    /// Its name in files and in what the commands print.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Periapsis => "periapsis",
            Self::Apoapsis => "apoapsis",
            Self::ClosestApproach => "closest-approach",
            Self::Contact => "contact",
            Self::Conjunction => "conjunction",
            Self::Opposition => "opposition",
        }
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
