//! Quantities, and their text both ways.
//!
//! Every quantity is kept in SI inside. The newtypes keep a length from being taken for an angle; the text
//! forms are what people write in scenario files ("0.6 au", "7.8 km/s").

macro_rules! quantity {
    ($(#[$doc:meta])* $name:ident, $from:ident, $get:ident) => {
        $(#[$doc])*
        #[derive(Debug, Clone, Copy, PartialEq, PartialOrd, Default)]
        pub struct $name(f64);

        impl $name {
            /// From the SI value.
            pub const fn $from(value: f64) -> Self {
                Self(value)
            }
            /// The SI value.
            pub const fn $get(self) -> f64 {
                self.0
            }
        }
    };
}

quantity!(
    /// A length, in metres.
    Length, from_m, m
);
quantity!(
    /// A span of time (of the model or of the show), in seconds.
    Span, from_s, s
);
quantity!(
    /// A speed, in metres a second.
    Speed, from_m_s, m_s
);
quantity!(
    /// An angle, in radians.
    Angle, from_rad, rad
);
quantity!(
    /// The gravity of a body, GM, in m³/s². A mass in text is turned into GM once, here.
    Gm, from_m3_s2, m3_s2
);
quantity!(
    /// Pace: seconds of model time per second of show time.
    Pace, from_s_per_s, s_per_s
);
