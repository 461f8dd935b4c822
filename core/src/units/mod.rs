//! Quantities, and their text both ways.
//!
//! Every quantity is kept in SI inside. The newtypes keep a length from being taken for an angle; the text
//! forms are what people write in scenario files ("0.6 au", "7.8 km/s"). All conversion factors stand in
//! [`table`]. It builds on [`crate::constants`] alone.

pub mod number;
pub mod table;
pub mod text;

pub use table::{Dimension, Unit};
pub use text::UnitError;

/// What all quantities have in common.
pub trait Quantity: Copy + Sized {
    /// The dimensions whose units fit, the usual one first.
    const DIMENSIONS: &'static [Dimension];
    /// A text that parses.
    const EXAMPLE: &'static str;
    /// From a number with a unit.
    ///
    /// # Errors
    /// When the text is not a number with a unit that fits.
    fn parse(text: &str) -> Result<Self, UnitError>;
    /// The SI value.
    fn si(self) -> f64;
}

macro_rules! quantity {
    ($(#[$doc:meta])* $name:ident, $from:ident, $get:ident, $dimensions:expr, $example:literal) => {
        $(#[$doc])*
        #[derive(Debug, Clone, Copy, PartialEq, PartialOrd, Default)]
        pub struct $name(f64);

        impl $name {
            /// The dimensions whose units fit, the usual one first.
            pub const DIMENSIONS: &'static [Dimension] = $dimensions;

            /// A text that parses, to show people how one looks.
            pub const EXAMPLE: &'static str = $example;

            /// From the SI value.
            pub const fn $from(value: f64) -> Self {
                Self(value)
            }
            /// The SI value.
            pub const fn $get(self) -> f64 {
                self.0
            }
            /// From a number with a unit. The result is finite.
            ///
            /// # Errors
            /// When the text is not a number with a unit that fits; the error says which units do.
            pub fn parse(text: &str) -> Result<Self, UnitError> {
                text::parse(text, Self::DIMENSIONS, Self::EXAMPLE).map(Self)
            }
            /// Text in a stated unit: the shortest that reads back to the same value, where that unit has one;
            /// else all 17 digits.
            ///
            /// # Errors
            /// When there is no such unit, or it measures something else.
            pub fn text_in(self, unit: &str) -> Result<String, UnitError> {
                text::text_in(self.0, unit, Self::DIMENSIONS)
            }
            /// Text in a unit that fits its size: the shortest that reads back to the same value, to the bit.
            /// (Infinities and NaN, which no text gives, are written but don't read back.)
            pub fn to_text(self) -> String {
                text::to_text(self.0, Self::DIMENSIONS)
            }
        }

        impl Quantity for $name {
            const DIMENSIONS: &'static [Dimension] = Self::DIMENSIONS;
            const EXAMPLE: &'static str = Self::EXAMPLE;

            fn parse(text: &str) -> Result<Self, UnitError> {
                Self::parse(text)
            }
            fn si(self) -> f64 {
                self.0
            }
        }

        impl std::fmt::Display for $name {
            fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
                f.write_str(&self.to_text())
            }
        }
    };
}

quantity!(
    /// A length, in metres.
    Length, from_m, m, &[Dimension::Length], "0.6 au"
);
quantity!(
    /// A span of time (of the model or of the show), in seconds.
    Span, from_s, s, &[Dimension::Span], "140 d"
);
quantity!(
    /// A speed, in metres a second.
    Speed, from_m_s, m_s, &[Dimension::Speed], "7.8 km/s"
);
quantity!(
    /// An angle, in radians.
    Angle, from_rad, rad, &[Dimension::Angle], "12 deg"
);
quantity!(
    /// The gravity of a body, GM, in m³/s². A mass in text is turned into GM once, here.
    Gm, from_m3_s2, m3_s2, &[Dimension::Mass, Dimension::Gm], "1.3 Earth masses"
);
quantity!(
    /// Pace: seconds of model time per second of show time.
    Pace, from_s_per_s, s_per_s, &[Dimension::Pace], "12 d/s"
);

quantity!(
    /// A density, in kg/m³.
    Density, from_kg_m3, kg_m3, &[Dimension::Density], "1.2 kg/m^3"
);
quantity!(
    /// An area for each unit of mass, in m²/kg.
    AreaPerMass, from_m2_kg, m2_kg, &[Dimension::AreaPerMass], "0.01 m^2/kg"
);

impl Gm {
    /// From a mass in text alone ("1.3 Earth masses", "5e24 kg").
    ///
    /// # Errors
    /// When the text is not a number with a unit of mass.
    pub fn parse_mass(text: &str) -> Result<Self, UnitError> {
        text::parse(text, &[Dimension::Mass], "1.3 Earth masses").map(Self)
    }

    /// From a GM in text alone ("1.2e20 m^3/s^2").
    ///
    /// # Errors
    /// When the text is not a number with a unit of GM.
    pub fn parse_gm(text: &str) -> Result<Self, UnitError> {
        text::parse(text, &[Dimension::Gm], "1.2e20 m^3/s^2").map(Self)
    }
}

#[cfg(test)]
mod tests;
