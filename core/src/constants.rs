//! Constants of nature, of the solar system and of the calendar, each with its unit and its publication.
//!
//! Sources, cited below by their short names:
//! - **IAU 2012 B2**: International Astronomical Union, 28th General Assembly, Resolution B2, "on the
//!   re-definition of the astronomical unit of length" (2012).
//! - **IAU 2015 B3**: International Astronomical Union, 29th General Assembly, Resolution B3, "on recommended
//!   nominal conversion constants for selected solar and planetary properties" (2015); also Prša et al. 2016,
//!   AJ 152:41.
//! - **IAU 2006**: Resolution B1 on the P03 precession; Capitaine, Wallace & Chapront 2003, A&A 412, 567.
//! - **CODATA 2022**: Mohr, Newell, Taylor & Tiesinga, "CODATA recommended values of the fundamental physical
//!   constants: 2022", Rev. Mod. Phys. 97, 025002 (2025).
//! - **DE440**: Park, Folkner, Williams & Boggs 2021, "The JPL planetary and lunar ephemerides DE440 and DE441",
//!   AJ 161:105; values from the comment area of the kernel de440.bsp.
//! - **WGCCRE 2015**: Archinal et al. 2018, "Report of the IAU Working Group on Cartographic Coordinates and
//!   Rotational Elements: 2015", Celest. Mech. Dyn. Astr. 130:22, mean radii.
//! - **IERS 2010**: Petit & Luzum (eds.), IERS Conventions (2010), IERS Technical Note 36, Table 1.1.

/// Astronomical unit, m. Exact. IAU 2012 B2.
pub const AU_M: f64 = 149_597_870_700.0;

/// Speed of light in vacuum, m/s. Exact. CODATA 2022.
pub const C_M_S: f64 = 299_792_458.0;

/// Newton's constant of gravitation, m³/(kg s²); standard uncertainty 0.00015e-11. CODATA 2022.
pub const G_SI: f64 = 6.674_30e-11;

/// Obliquity of the ecliptic at J2000, arcsec. IAU 2006.
pub const OBLIQUITY_J2000_ARCSEC: f64 = 84_381.406;

/// Obliquity of the ecliptic at J2000, rad. IAU 2006.
pub const OBLIQUITY_J2000_RAD: f64 = OBLIQUITY_J2000_ARCSEC * ARCSEC_RAD;

/// One degree, rad.
pub const DEGREE_RAD: f64 = std::f64::consts::PI / 180.0;

/// One second of arc, rad.
pub const ARCSEC_RAD: f64 = std::f64::consts::PI / 648_000.0;

/// Julian date (TDB) of the epoch J2000, d. IAU 2006.
pub const J2000_JD: f64 = 2_451_545.0;

/// Length of a day, s: the unit of astronomical time, IAU (1976) System of Astronomical Constants.
pub const DAY_S: f64 = 86_400.0;

/// Length of a year, s: the Julian year of 365.25 d, IAU Style Manual (1989), Table 6.
pub const YEAR_S: f64 = 365.25 * DAY_S;

/// Length of a month, s: a twelfth of a Julian year, 30.4375 d. A convention of this format; months of the
/// calendar differ.
pub const MONTH_S: f64 = YEAR_S / 12.0;

/// Terrestrial Time minus International Atomic Time, s. Exact. IAU 1991 Resolution A4, Recommendation IV.
pub const TT_MINUS_TAI_S: f64 = 32.184;

/// Light-year, m: the way of light in a Julian year. IAU Style Manual (1989).
pub const LIGHT_YEAR_M: f64 = C_M_S * YEAR_S;

// --- nominal values, for units of mass and length in text ---

/// Nominal GM of the Sun, m³/s². IAU 2015 B3.
pub const GM_SUN_NOMINAL_M3_S2: f64 = 1.327_124_4e20;

/// Nominal GM of the Earth, m³/s². IAU 2015 B3.
pub const GM_EARTH_NOMINAL_M3_S2: f64 = 3.986_004e14;

/// Nominal GM of Jupiter, m³/s². IAU 2015 B3.
pub const GM_JUPITER_NOMINAL_M3_S2: f64 = 1.266_865_3e17;

/// Nominal radius of the Sun, m. IAU 2015 B3.
pub const RADIUS_SUN_NOMINAL_M: f64 = 695_700_000.0;

/// Nominal equatorial radius of the Earth, m. IAU 2015 B3.
pub const RADIUS_EARTH_NOMINAL_M: f64 = 6_378_100.0;

/// Nominal equatorial radius of Jupiter, m. IAU 2015 B3.
pub const RADIUS_JUPITER_NOMINAL_M: f64 = 71_492_000.0;

// --- GM of the solar-system bodies with published states ---

/// GM of the Sun, m³/s². DE440.
pub const GM_SUN_M3_S2: f64 = 1.327_124_400_412_794_19e20;
/// GM of Mercury, m³/s². DE440.
pub const GM_MERCURY_M3_S2: f64 = 2.203_186_855_1e13;
/// GM of Venus, m³/s². DE440.
pub const GM_VENUS_M3_S2: f64 = 3.248_585_92e14;
/// GM of the Earth, m³/s². DE440.
pub const GM_EARTH_M3_S2: f64 = 3.986_004_355_07e14;
/// GM of the Moon, m³/s². DE440.
pub const GM_MOON_M3_S2: f64 = 4.902_800_118e12;
/// GM of the system of Mars, m³/s². DE440.
pub const GM_MARS_M3_S2: f64 = 4.282_837_581_6e13;
/// GM of the system of Jupiter, m³/s². DE440.
pub const GM_JUPITER_M3_S2: f64 = 1.267_127_641e17;
/// GM of the system of Saturn, m³/s². DE440.
pub const GM_SATURN_M3_S2: f64 = 3.794_058_484_18e16;
/// GM of the system of Uranus, m³/s². DE440.
pub const GM_URANUS_M3_S2: f64 = 5.794_556_4e15;
/// GM of the system of Neptune, m³/s². DE440.
pub const GM_NEPTUNE_M3_S2: f64 = 6.836_527_100_58e15;
/// GM of the system of Pluto, m³/s². DE440.
pub const GM_PLUTO_M3_S2: f64 = 9.755e11;

// --- mean radii of those bodies ---

/// Mean radius of the Sun, m. IAU 2015 B3 (its nominal radius).
pub const RADIUS_SUN_M: f64 = RADIUS_SUN_NOMINAL_M;
/// Mean radius of Mercury, m. WGCCRE 2015.
pub const RADIUS_MERCURY_M: f64 = 2_439_400.0;
/// Mean radius of Venus, m. WGCCRE 2015.
pub const RADIUS_VENUS_M: f64 = 6_051_800.0;
/// Mean radius of the Earth, m. WGCCRE 2015.
pub const RADIUS_EARTH_M: f64 = 6_371_008.4;
/// Mean radius of the Moon, m. WGCCRE 2015.
pub const RADIUS_MOON_M: f64 = 1_737_400.0;
/// Mean radius of Mars, m. WGCCRE 2015.
pub const RADIUS_MARS_M: f64 = 3_389_500.0;
/// Mean radius of Jupiter, m. WGCCRE 2015.
pub const RADIUS_JUPITER_M: f64 = 69_911_000.0;
/// Mean radius of Saturn, m. WGCCRE 2015.
pub const RADIUS_SATURN_M: f64 = 58_232_000.0;
/// Mean radius of Uranus, m. WGCCRE 2015.
pub const RADIUS_URANUS_M: f64 = 25_362_000.0;
/// Mean radius of Neptune, m. WGCCRE 2015.
pub const RADIUS_NEPTUNE_M: f64 = 24_622_000.0;
/// Mean radius of Pluto, m. WGCCRE 2015.
pub const RADIUS_PLUTO_M: f64 = 1_188_300.0;

// --- the shape of the Earth ---

/// J2 of the Earth, without dimension. IERS 2010.
pub const EARTH_J2: f64 = 1.082_635_9e-3;

/// Equatorial radius that belongs to [`EARTH_J2`], m. IERS 2010.
pub const EARTH_J2_RADIUS_M: f64 = 6_378_136.6;

#[cfg(test)]
mod tests {
    use super::*;

    /// Worked values printed in the resolutions themselves, or a known ratio of two constants.
    #[test]
    fn constants_agree_with_one_another() {
        // Nominal and DE440 GM of the same body differ only by what was learnt since, below 1e-7 of the Sun's.
        assert!((GM_SUN_M3_S2 / GM_SUN_NOMINAL_M3_S2 - 1.0).abs() < 1e-7);
        assert!((GM_EARTH_M3_S2 / GM_EARTH_NOMINAL_M3_S2 - 1.0).abs() < 1e-6);
        // DE440 states the ratio of the masses of Earth and Moon as 81.300568221497215; the GM have ten digits.
        assert!((GM_EARTH_M3_S2 / GM_MOON_M3_S2 - 81.300_568_221_497_215).abs() < 1e-7);
        // 1/173.1446 of a light-day is one au; light needs 499.004784 s for it (IAU System of constants).
        assert!((AU_M / C_M_S - 499.004_784).abs() < 1e-6);
        assert!((OBLIQUITY_J2000_RAD / DEGREE_RAD - 23.439_279_444).abs() < 1e-9);
        assert!((LIGHT_YEAR_M - 9_460_730_472_580_800.0).abs() < 2.0);
    }
}
