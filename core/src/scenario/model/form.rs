//! The forms in which a file states how a body comes to be there.

use super::BodyId;
use crate::units::{Angle, Length, Span, Speed};

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
