//! The scenario as data, valid by construction: names are resolved to [`BodyId`]s, quantities have units,
//! and every choice is one of those the format knows.

pub mod aim;
pub mod beat;
pub mod change;
pub mod form;
pub mod swarm;

pub use aim::*;
pub use beat::*;
pub use change::*;
pub use form::*;
pub use swarm::*;

use super::problem::Place;
use crate::time::Epoch;
use crate::units::{AreaPerMass, Density, Gm, Length};

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
    /// The swarms, in the order of the file.
    pub swarms: Vec<Swarm>,
    /// What is done to them on the way, in the order of the file.
    pub changes: Vec<Change>,
    /// The beats, in the order of the talk.
    pub beats: Vec<Beat>,
    /// The aims, in the order of the file. Only aiming minds them.
    pub aims: Vec<Aim>,
}

impl Scenario {
    /// The languages of its captions, its own first, the others in the order in which they come.
    pub fn languages(&self) -> Vec<String> {
        let mut found = vec![self.language.clone()];
        for caption in self.beats.iter().flat_map(|beat| &beat.captions) {
            if !found.contains(&caption.language) {
                found.push(caption.language.clone());
            }
        }
        found
    }
}

/// `[physics]`. `None` leaves the choice to what the bodies bring along.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Physics {
    /// First post-Newtonian relativity between all bodies; on by itself where a body is `real`.
    pub relativity: Option<bool>,
    /// Oblateness (J2) of the Earth; on by itself where a body is `real`.
    pub oblateness: Option<bool>,
    /// Drag in the air of bodies that have some; on unless stated.
    pub drag: Option<bool>,
    /// Whether the solar-system bodies that the file doesn't name pull on its `real` ones, unseen; on unless stated.
    pub companions: Option<bool>,
    /// Length over which Newton's attraction is softened; `None`: bodies attract as points. Never beside relativity, oblateness
    /// or `real` bodies.
    pub softening: Option<Length>,
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

/// The air around a body; it does not turn.
#[derive(Debug, Clone, PartialEq)]
pub enum Atmosphere {
    /// As the Earth's: the U.S. Standard Atmosphere 1976.
    Earth,
    /// Density falls by e with every scale height.
    Exponential {
        /// At the surface.
        surface_density: Density,
        /// Scale height.
        scale_height: Length,
    },
    /// Densities at heights, the lowest first: two at least.
    Table(Vec<(Length, Density)>),
}

/// What a body offers to air.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Drag {
    /// Cross-section over mass.
    pub area_per_mass: AreaPerMass,
    /// Coefficient of drag; 1 unless stated.
    pub coefficient: f64,
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
    /// The air around it; only with a radius.
    pub atmosphere: Option<Atmosphere>,
    /// What it offers to the air of others; `None`: nothing.
    pub drag: Option<Drag>,
    /// How it comes to be there.
    pub form: Form,
    /// Where its `[[body]]` stands in the text.
    pub place: Place,
}
