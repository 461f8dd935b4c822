//! Text of quantities, both ways.

use super::*;
use crate::constants::*;
use proptest::prelude::*;

fn close(got: f64, want: f64) {
    assert!((got - want).abs() <= want.abs() * 4.0 * f64::EPSILON, "got {got:e}, want {want:e}");
}

#[test]
fn people_write_quantities_in_many_ways() {
    for (text, want) in [
        ("1 m", 1.0),
        ("-2.5 km", -2500.0),
        ("−2.5 km", -2500.0),
        ("+2.5e0km", 2500.0),
        ("620_000 km", 6.2e8),
        ("0.6 AU", 0.6 * AU_M),
        ("2 astronomical units", 2.0 * AU_M),
        ("1 Earth radius", RADIUS_EARTH_NOMINAL_M),
        ("3 earth radii", 3.0 * RADIUS_EARTH_NOMINAL_M),
        ("2 R_E", 2.0 * RADIUS_EARTH_NOMINAL_M),
        ("1.5 R☉", 1.5 * RADIUS_SUN_NOMINAL_M),
        ("150 million km", 1.5e11),
        ("30\u{a0}cm", 0.3),
        ("1 ly", LIGHT_YEAR_M),
        (".5 m", 0.5),
        ("5. m", 5.0),
    ] {
        close(Length::parse(text).unwrap_or_else(|e| panic!("{text}: {e}")).m(), want);
    }
    for (text, want) in [
        ("90 min", 5400.0),
        ("1 day", 86_400.0),
        ("3 months", 3.0 * 30.4375 * 86_400.0),
        ("2 weeks", 14.0 * 86_400.0),
        ("1 yr", 365.25 * 86_400.0),
        ("1.2 kyr", 1200.0 * 365.25 * 86_400.0),
        ("20 ms", 0.02),
    ] {
        close(Span::parse(text).unwrap_or_else(|e| panic!("{text}: {e}")).s(), want);
    }
    for (text, want) in [
        ("7.8 km/s", 7800.0),
        ("36 km/h", 10.0),
        ("36 km per hour", 10.0),
        ("60 mph", 26.8224),
        ("1 au/yr", AU_M / YEAR_S),
        ("100 m / min", 100.0 / 60.0),
        ("1 Earth radius/day", RADIUS_EARTH_NOMINAL_M / DAY_S),
    ] {
        close(Speed::parse(text).unwrap_or_else(|e| panic!("{text}: {e}")).m_s(), want);
    }
    for (text, want) in [
        ("180 deg", std::f64::consts::PI),
        ("180°", std::f64::consts::PI),
        ("30'", 0.5 * DEGREE_RAD),
        ("84381.406 arcsec", OBLIQUITY_J2000_RAD),
        ("0.5 turns", std::f64::consts::PI),
    ] {
        close(Angle::parse(text).unwrap_or_else(|e| panic!("{text}: {e}")).rad(), want);
    }
    for (text, want) in [
        ("0.9 Sun masses", 0.9 * GM_SUN_NOMINAL_M3_S2),
        ("1 solar mass", GM_SUN_NOMINAL_M3_S2),
        ("2 M_J", 2.0 * GM_JUPITER_NOMINAL_M3_S2),
        ("1 Moon mass", GM_MOON_M3_S2),
        ("5e24 kg", 5e24 * G_SI),
        ("1.2e20 m³/s²", 1.2e20),
        ("398600.4 km^3/s^2", 3.986_004e14),
    ] {
        close(Gm::parse(text).unwrap_or_else(|e| panic!("{text}: {e}")).m3_s2(), want);
    }
    for (text, want) in [
        ("12 d/s", 1_036_800.0),
        ("12 days/s", 1_036_800.0),
        ("1 yr/s", YEAR_S),
        ("1 h/min", 60.0),
        ("5 x", 5.0),
    ] {
        close(Pace::parse(text).unwrap_or_else(|e| panic!("{text}: {e}")).s_per_s(), want);
    }
}

#[test]
fn what_is_no_quantity_is_answered_with_what_would_fit() {
    for (text, wrong, remedy) in [
        ("", "\"\" doesn't start with a number", "a length is wanted: m, km, au"),
        ("far", "\"far\" doesn't start with a number", "as in \"0.6 au\""),
        ("7", "\"7\" has no unit", "m, km, au, Earth radii, Sun radii, as in \"0.6 au\""),
        ("0,6 au", "has a comma", "0.6"),
        ("620 000 km", "has a space between its digits", "620_000"),
        ("1__0 m", "has an underscore", "620_000"),
        ("3 × 10^8 m", "has a power of ten", "3e8"),
        ("1e999 m", "is too large", "1e308"),
        ("1e300 ly", "is too large", "1e308"),
        ("3 deg", "deg is an angle", "a length is wanted: m, km"),
        ("3 kmm", "there is no unit \"kmm\"", "perhaps km; a length"),
        ("3 eath radii", "there is no unit \"eath radii\"", "perhaps Earth radii"),
        ("3 Mm", "there is no unit \"Mm\"", ""),
        ("inf m", "doesn't start with a number", ""),
        ("0x10 m", "", ""),
    ] {
        let error = Length::parse(text).expect_err(text);
        assert!(error.wrong.contains(wrong), "{text:?}: {error}");
        assert!(error.remedy.contains(remedy), "{text:?}: {error}");
    }
    let error = Angle::parse("3 km").expect_err("a length");
    assert_eq!(error.to_string(), "km is a length; an angle is wanted: deg, arcmin, arcsec, rad, turns");
    assert!(Gm::parse_mass("1 m^3/s^2").is_err());
    assert!(Gm::parse_gm("1 kg").is_err());
}

#[test]
fn texts_are_as_short_as_a_person_would_write_them() {
    assert_eq!(Length::from_m(0.6 * AU_M).to_text(), "0.6 au");
    assert_eq!(Length::from_m(6.9e6).to_text(), "6900 km");
    assert_eq!(Length::from_m(0.0).to_text(), "0 m");
    assert_eq!(Span::from_s(140.0 * DAY_S).to_text(), "140 d");
    assert_eq!(Span::from_s(40.0).to_text(), "40 s");
    assert_eq!(Angle::parse("12 deg").unwrap().to_text(), "12 deg");
    assert_eq!(Angle::from_rad(1.0).to_text(), "1 rad");
    assert_eq!(Gm::parse("1 Earth mass").unwrap().to_text(), "1 Earth mass");
    assert_eq!(Gm::parse("1.3 Earth masses").unwrap().to_text(), "1.3 Earth masses");
    assert_eq!(Pace::parse("12 d/s").unwrap().to_text(), "12 d/s");
    assert_eq!(Length::from_m(1e30).to_text(), "1e30 m");
    assert_eq!(Length::from_m(1.5e11).text_in("km").unwrap(), "1.5e8 km");
    assert_eq!(Gm::parse("2 Earth masses").unwrap().text_in("earth mass").unwrap(), "2 Earth masses");
    assert_eq!(Speed::from_m_s(100.0).text_in("m/min").unwrap(), "6000 m/min");
    assert!(Length::from_m(1.0).text_in("deg").is_err());
}

/// Every finite double, by its bits.
fn finite() -> impl Strategy<Value = f64> {
    any::<u64>().prop_map(f64::from_bits).prop_filter("finite", |v| v.is_finite())
}

/// Doubles of the sizes that scenarios have.
fn usual() -> impl Strategy<Value = f64> {
    (-9.0..25.0_f64, any::<bool>(), 1.0..10.0_f64).prop_map(|(e, minus, m)| {
        let size = m * number::leading(&format!("1e{}", e.floor())).unwrap().0;
        if minus { -size } else { size }
    })
}

proptest! {
    #[test]
    fn every_value_reads_back_to_the_same_bits(v in prop_oneof![finite(), usual()]) {
        let text = Length::from_m(v).to_text();
        prop_assert_eq!(Length::parse(&text).unwrap().m().to_bits(), v.to_bits(), "{}", text);
        let text = Span::from_s(v).to_text();
        prop_assert_eq!(Span::parse(&text).unwrap().s().to_bits(), v.to_bits(), "{}", text);
        let text = Speed::from_m_s(v).to_text();
        prop_assert_eq!(Speed::parse(&text).unwrap().m_s().to_bits(), v.to_bits(), "{}", text);
        let text = Angle::from_rad(v).to_text();
        prop_assert_eq!(Angle::parse(&text).unwrap().rad().to_bits(), v.to_bits(), "{}", text);
        let text = Gm::from_m3_s2(v).to_text();
        prop_assert_eq!(Gm::parse(&text).unwrap().m3_s2().to_bits(), v.to_bits(), "{}", text);
        let text = Pace::from_s_per_s(v).to_text();
        prop_assert_eq!(Pace::parse(&text).unwrap().s_per_s().to_bits(), v.to_bits(), "{}", text);
    }

    #[test]
    fn what_was_written_in_a_unit_reads_back_to_the_same_bits(digits in 1_u32..1_000_000, scale in 0_usize..7) {
        let number = f64::from(digits) / [1.0, 10.0, 100.0, 1e3, 1e4, 1e5, 1e6][scale];
        for dimension in Dimension::ALL {
            for unit in dimension.units() {
                let text = format!("{number} {}", unit.name);
                let si = text::parse(&text, &[dimension], "").unwrap();
                let again = text::text_in(si, unit.name, &[dimension]).unwrap();
                let back = text::parse(&again, &[dimension], "").unwrap();
                prop_assert_eq!(back.to_bits(), si.to_bits(), "{} {}", text, again);
                prop_assert!(again.len() <= text.len() + 1, "{} {}", text, again);
            }
        }
    }

    #[test]
    fn no_text_panics(text in "\\PC{0,30}", unit in "[0-9eE+−_., ×x*^/a-zA-Z°☉]{0,20}") {
        let given = Length::parse(&text).map(Length::m);
        prop_assert!(given.is_err() || given.is_ok_and(f64::is_finite));
        let given = Gm::parse(&unit).map(Gm::m3_s2);
        prop_assert!(given.is_err() || given.is_ok_and(f64::is_finite));
    }
}

#[test]
fn no_form_of_a_unit_means_two_things_in_a_dimension() {
    for dimension in Dimension::ALL {
        for unit in dimension.units() {
            for form in [unit.name, unit.one].iter().chain(unit.forms) {
                let found = dimension.find(form).unwrap_or_else(|| panic!("{form}"));
                assert_eq!(found.name, unit.name, "{form}");
            }
        }
        for name in dimension.usual().iter().chain(dimension.written()) {
            assert!(dimension.find(name).is_some(), "{name}");
        }
    }
}
