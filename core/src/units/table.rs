//! The units that people write, and the only conversion factors.

use crate::constants::{
    AU_M, DAY_S, DEGREE_RAD, G_SI, GM_EARTH_NOMINAL_M3_S2, GM_JUPITER_NOMINAL_M3_S2, GM_MOON_M3_S2,
    GM_SUN_NOMINAL_M3_S2, LIGHT_YEAR_M, MONTH_S, RADIUS_EARTH_NOMINAL_M, RADIUS_JUPITER_NOMINAL_M,
    RADIUS_MOON_M, RADIUS_SUN_NOMINAL_M, YEAR_S,
};

/// What a unit measures.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Dimension {
    /// Length; m inside.
    Length,
    /// Time; s inside.
    Span,
    /// Speed; m/s inside.
    Speed,
    /// Angle; rad inside.
    Angle,
    /// Mass; turned into GM, m³/s² inside.
    Mass,
    /// GM; m³/s² inside.
    Gm,
    /// Model time per show time; s/s inside.
    Pace,
    /// Density; kg/m³ inside.
    Density,
    /// Area per mass; m²/kg inside.
    AreaPerMass,
}

/// A unit: `value × times ÷ over` is the SI value. Two factors, because 1/3600 has no exact double, but 3600 has.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Unit {
    /// Its name after any number but 1.
    pub name: &'static str,
    /// Its name after 1.
    pub one: &'static str,
    /// Other forms that people write.
    pub forms: &'static [&'static str],
    /// What a value is multiplied by.
    pub times: f64,
    /// What it is then divided by.
    pub over: f64,
}

impl Unit {
    /// SI value of a number in this unit.
    pub fn to_si(&self, value: f64) -> f64 {
        value * self.times / self.over
    }

    /// Number in this unit, nearest to an SI value.
    pub fn from_si(&self, si: f64) -> f64 {
        si / self.times * self.over
    }
}

const fn unit(name: &'static str, forms: &'static [&'static str], times: f64) -> Unit {
    Unit { name, one: name, forms, times, over: 1.0 }
}

const fn plural(name: &'static str, one: &'static str, forms: &'static [&'static str], times: f64) -> Unit {
    Unit { name, one, forms, times, over: 1.0 }
}

const fn ratio(name: &'static str, forms: &'static [&'static str], times: f64, over: f64) -> Unit {
    Unit { name, one: name, forms, times, over }
}

const LENGTHS: &[Unit] = &[
    unit("m", &["metre", "metres", "meter", "meters"], 1.0),
    unit("km", &["Km", "KM", "kilometre", "kilometres", "kilometer", "kilometers"], 1e3),
    unit("au", &["AU", "Au", "ua", "astronomical unit", "astronomical units"], AU_M),
    plural("Earth radii", "Earth radius", &["R_E", "R_Earth", "R⊕", "R_⊕"], RADIUS_EARTH_NOMINAL_M),
    plural(
        "Sun radii",
        "Sun radius",
        &["solar radius", "solar radii", "R_S", "R_Sun", "R☉", "R_☉"],
        RADIUS_SUN_NOMINAL_M,
    ),
    plural("Jupiter radii", "Jupiter radius", &["R_J", "R_Jup", "R_Jupiter", "R♃"], RADIUS_JUPITER_NOMINAL_M),
    plural("Moon radii", "Moon radius", &["lunar radius", "lunar radii", "R_M", "R_Moon"], RADIUS_MOON_M),
    unit("million km", &["million kilometres", "million kilometers", "Mkm"], 1e9),
    unit("ly", &["light-year", "light-years", "light year", "light years", "lyr"], LIGHT_YEAR_M),
    ratio("cm", &["centimetre", "centimetres", "centimeter", "centimeters"], 1.0, 100.0),
    ratio("mm", &["millimetre", "millimetres", "millimeter", "millimeters"], 1.0, 1000.0),
];

const SPANS: &[Unit] = &[
    unit("s", &["sec", "secs", "second", "seconds"], 1.0),
    unit("min", &["mins", "minute", "minutes"], 60.0),
    unit("h", &["hr", "hrs", "hour", "hours"], 3600.0),
    unit("d", &["day", "days"], DAY_S),
    plural("weeks", "week", &["wk", "wks"], 7.0 * DAY_S),
    plural("months", "month", &["mo", "mon"], MONTH_S),
    unit("yr", &["y", "a", "yrs", "year", "years"], YEAR_S),
    unit("kyr", &["thousand years", "ka"], 1e3 * YEAR_S),
    unit("Myr", &["million years", "Ma"], 1e6 * YEAR_S),
    ratio("ms", &["millisecond", "milliseconds"], 1.0, 1000.0),
];

const SPEEDS: &[Unit] = &[
    unit("m/s", &["mps"], 1.0),
    unit("km/s", &["kps"], 1e3),
    ratio("km/h", &["kph", "kmh"], 1e3, 3600.0),
    // The international mile is 1609.344 m.
    ratio("mph", &[], 1609.344, 3600.0),
    ratio("au/yr", &[], AU_M, YEAR_S),
    ratio("au/d", &[], AU_M, DAY_S),
];

const ANGLES: &[Unit] = &[
    unit("deg", &["°", "degree", "degrees", "degs"], DEGREE_RAD),
    ratio("arcmin", &["′", "'", "arcminute", "arcminutes", "arcmins"], DEGREE_RAD, 60.0),
    ratio("arcsec", &["″", "\"", "arcsecond", "arcseconds", "arcsecs"], DEGREE_RAD, 3600.0),
    unit("rad", &["radian", "radians", "rads"], 1.0),
    plural("turns", "turn", &["rev", "revs", "revolution", "revolutions"], 2.0 * std::f64::consts::PI),
];

const MASSES: &[Unit] = &[
    unit("kg", &["Kg", "KG", "kilogram", "kilograms", "kilogramme", "kilogrammes"], G_SI),
    plural(
        "Sun masses",
        "Sun mass",
        &["solar mass", "solar masses", "M_S", "M_Sun", "M☉", "M_☉"],
        GM_SUN_NOMINAL_M3_S2,
    ),
    plural("Earth masses", "Earth mass", &["M_E", "M_Earth", "M⊕", "M_⊕"], GM_EARTH_NOMINAL_M3_S2),
    plural("Jupiter masses", "Jupiter mass", &["M_J", "M_Jup", "M_Jupiter", "M♃"], GM_JUPITER_NOMINAL_M3_S2),
    plural("Moon masses", "Moon mass", &["lunar mass", "lunar masses", "M_M", "M_Moon"], GM_MOON_M3_S2),
];

const GMS: &[Unit] = &[unit("m^3/s^2", &["m3/s2"], 1.0), unit("km^3/s^2", &["km3/s2"], 1e9)];

const PACES: &[Unit] = &[
    unit("s/s", &["x", "×", "times"], 1.0),
    unit("min/s", &[], 60.0),
    unit("h/s", &[], 3600.0),
    unit("d/s", &[], DAY_S),
    unit("weeks/s", &["week/s"], 7.0 * DAY_S),
    unit("months/s", &["month/s"], MONTH_S),
    unit("yr/s", &[], YEAR_S),
];

const DENSITIES: &[Unit] = &[
    unit("kg/m^3", &["kg/m3", "kg/m³"], 1.0),
    unit("g/cm^3", &["g/cm3", "g/cm³"], 1000.0),
    ratio("g/m^3", &["g/m3", "g/m³"], 1.0, 1000.0),
];

const AREAS_PER_MASS: &[Unit] =
    &[unit("m^2/kg", &["m2/kg", "m²/kg"], 1.0), ratio("cm^2/g", &["cm2/g", "cm²/g"], 1.0, 10.0)];

impl Dimension {
    /// Every dimension.
    pub const ALL: [Self; 9] = [
        Self::Length,
        Self::Span,
        Self::Speed,
        Self::Angle,
        Self::Mass,
        Self::Gm,
        Self::Pace,
        Self::Density,
        Self::AreaPerMass,
    ];

    /// Its units, the one that is SI inside or the most usual one first.
    pub const fn units(self) -> &'static [Unit] {
        match self {
            Self::Length => LENGTHS,
            Self::Span => SPANS,
            Self::Speed => SPEEDS,
            Self::Angle => ANGLES,
            Self::Mass => MASSES,
            Self::Gm => GMS,
            Self::Pace => PACES,
            Self::Density => DENSITIES,
            Self::AreaPerMass => AREAS_PER_MASS,
        }
    }

    /// What it is called in messages, with its article.
    pub const fn with_article(self) -> &'static str {
        match self {
            Self::Length => "a length",
            Self::Span => "a time",
            Self::Speed => "a speed",
            Self::Angle => "an angle",
            Self::Mass => "a mass",
            Self::Gm => "a GM",
            Self::Pace => "a pace",
            Self::Density => "a density",
            Self::AreaPerMass => "an area per mass",
        }
    }

    /// The units that a person is told of when one is wanted.
    pub const fn usual(self) -> &'static [&'static str] {
        match self {
            Self::Length => &["m", "km", "au", "Earth radii", "Sun radii"],
            Self::Span => &["s", "min", "h", "d", "weeks", "months", "yr"],
            Self::Speed => &["m/s", "km/s", "km/h", "au/yr"],
            Self::Angle => &["deg", "arcmin", "arcsec", "rad", "turns"],
            Self::Mass => &["kg", "Sun masses", "Earth masses", "Jupiter masses", "Moon masses"],
            Self::Gm => &["m^3/s^2", "km^3/s^2"],
            Self::Pace => &["s/s", "min/s", "h/s", "d/s", "months/s", "yr/s"],
            Self::Density => &["kg/m^3", "g/m^3", "g/cm^3"],
            Self::AreaPerMass => &["m^2/kg", "cm^2/g"],
        }
    }

    /// The units among which text is written when none is stated, the preferred one first; the last one writes every value.
    pub(crate) const fn written(self) -> &'static [&'static str] {
        match self {
            Self::Length => &["au", "km", "m"],
            Self::Span => &["d", "yr", "h", "min", "s"],
            Self::Speed => &["km/s", "m/s"],
            Self::Angle => &["deg", "rad"],
            Self::Mass => &["Sun masses", "Earth masses", "Moon masses", "kg"],
            Self::Gm => &["km^3/s^2", "m^3/s^2"],
            Self::Pace => &["d/s", "yr/s", "h/s", "min/s", "s/s"],
            Self::Density => &["kg/m^3"],
            Self::AreaPerMass => &["m^2/kg"],
        }
    }

    /// The unit of a form that people write.
    ///
    /// Forms match as they are written; those of three letters and more also in other capitals ("Deg", "earth
    /// masses"), shorter ones not, for "Mm" is not "mm". Any length over any time is a speed, any time over
    /// any time a pace.
    pub fn find(self, form: &str) -> Option<Unit> {
        let units = self.units();
        let written = |u: &&Unit| u.name == form || u.one == form || u.forms.contains(&form);
        let folded = |u: &&Unit| {
            form.chars().count() >= 3
                && [u.name, u.one].iter().chain(u.forms).any(|f| f.to_lowercase() == form.to_lowercase())
        };
        if let Some(found) = units.iter().find(written).or_else(|| units.iter().find(folded)) {
            return Some(*found);
        }
        let above = match self {
            Self::Speed => Self::Length,
            Self::Pace => Self::Span,
            _ => return None,
        };
        let (top, bottom) = form.split_once('/')?;
        let (top, bottom) = (above.find(top.trim())?, Self::Span.find(bottom.trim())?);
        let (times, over) = (top.times * bottom.over, top.over * bottom.times);
        // "days/s" is "d/s": say it as the table does.
        let same = |u: &&Unit| (u.times * over).to_bits() == (times * u.over).to_bits();
        Some(units.iter().find(same).copied().unwrap_or(Unit { name: "", one: "", forms: &[], times, over }))
    }
}
