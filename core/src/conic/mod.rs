//! Two bodies: the paths that Newton's gravity allows them, through every eccentricity.
//!
//! One description for all conics: the distance at periapsis and the eccentricity ([`Elements`]) stay finite
//! from the circle through the parabola to the straightest hyperbola. [`propagate`] needs no elements at all
//! and also moves bodies that fall straight down.
//!
//! What the singular cases mean is written at [`elements_from_state`].

pub mod convert;
pub mod elements;
pub mod equinoctial;
pub mod kepler;
pub mod lambert;
pub mod stumpff;
pub mod universal;

pub use convert::{elements_from_state, semi_major_from_state, state_from_elements};
pub use elements::Elements;
pub use equinoctial::{Equinoctial, Sense};
pub use lambert::lambert;
pub use universal::propagate;

/// Why a conic has no answer.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
#[non_exhaustive]
pub enum ConicError {
    /// A number is not finite, or GM is negative, or nothing attracts where something has to.
    #[error("a number is out of range")]
    OutOfRange,
    /// The body is at the centre itself.
    #[error("the body is at the centre of what attracts it")]
    AtCentre,
    /// The path is a straight line through the centre, which the elements can't describe.
    #[error("the path is a straight line through the centre")]
    Rectilinear,
    /// The true anomaly lies on or beyond the asymptote of the hyperbola.
    #[error("the hyperbola doesn't reach that anomaly")]
    BeyondAsymptote,
    /// A quantity that only closed orbits have.
    #[error("the orbit is not closed")]
    Open,
}
