//! Swarms: many tracers that share their origin.

use super::{BodyId, Colour, Drag};
use crate::scenario::problem::Place;
use crate::units::{Angle, Length, Speed};

/// A swarm of a scenario: its index in [`super::Scenario::swarms`].
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct SwarmId(pub usize);

/// Many tracers, sown at random from a seed: the same seed, the same swarm.
#[derive(Debug, Clone, PartialEq)]
pub struct Swarm {
    /// Its name, unlike any other's in the file, bodies included.
    pub name: String,
    /// Its colour; [`Colour::Bone`] unless stated.
    pub colour: Colour,
    /// What each of its tracers offers to air; `None`: nothing.
    pub drag: Option<Drag>,
    /// How the tracers lie.
    pub shape: SwarmShape,
    /// How many there are.
    pub count: usize,
    /// Where the random numbers start.
    pub seed: u64,
    /// Where its `[[body]]` stands in the text.
    pub place: Place,
}

/// How the tracers of a swarm lie at the start.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum SwarmShape {
    /// On circles around a body, near one plane, evenly over its area.
    Ring {
        /// The body.
        around: BodyId,
        /// Smallest radius.
        from: Length,
        /// Largest radius, not less.
        to: Length,
        /// How thick the ring is; at most twice its smallest radius.
        thickness: Length,
        /// Its plane.
        plane: Plane,
    },
    /// On ellipses around a body, turned at random.
    Belt {
        /// The body.
        around: BodyId,
        /// Smallest semi-major axis.
        from: Length,
        /// Largest semi-major axis, not less; evenly between.
        to: Length,
        /// Largest eccentricity, 0 to below 1; evenly from 0.
        eccentricity: f64,
        /// Largest inclination of an orbit to the belt's plane; evenly from 0.
        spread: Angle,
        /// Its plane.
        plane: Plane,
    },
    /// On ellipses around a body, in all directions alike.
    Cloud {
        /// The body.
        around: BodyId,
        /// Smallest semi-major axis.
        from: Length,
        /// Largest semi-major axis, not less; evenly between.
        to: Length,
        /// Largest eccentricity, 0 to below 1; evenly from 0.
        eccentricity: f64,
    },
    /// Flying apart from a body.
    Burst {
        /// The body.
        of: BodyId,
        /// Least speed relative to it.
        slowest: Speed,
        /// Greatest speed relative to it, not less; evenly between.
        fastest: Speed,
        /// From one spot of its surface, upwards; `None`: from all around it.
        spot: Option<Spot>,
    },
}

/// A plane through the centre of a body.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Plane {
    /// Inclination to the ecliptic.
    pub inclination: Angle,
    /// Longitude of the ascending node.
    pub node: Angle,
}

/// A spot on or above a surface.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Spot {
    /// Height above the surface.
    pub height: Length,
    /// Latitude.
    pub latitude: Angle,
    /// Longitude, to the east.
    pub longitude: Angle,
}

impl SwarmShape {
    /// The body that it goes around or flies apart from.
    pub const fn body(&self) -> BodyId {
        match self {
            Self::Ring { around, .. } | Self::Belt { around, .. } | Self::Cloud { around, .. } => *around,
            Self::Burst { of, .. } => *of,
        }
    }
}
