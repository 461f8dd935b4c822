//! Ways from orbit to orbit: Hohmann's, flown by kicks, and Lambert's, against worked examples of handbooks (all from memory).

use fallaround_core::Vector3;
use fallaround_core::conic::{lambert, propagate};
use fallaround_core::ephemeris::events::{Query, find};
use fallaround_core::scenario::{BodyId, EventKind};
use fallaround_tests::{assert_close, paths, scenario, start};
use std::f64::consts::PI;

const CRAFT: BodyId = BodyId(1);
const CENTRE: BodyId = BodyId(0);

/// Both kicks, m/s, and the time of a Hohmann transfer, s.
///
/// # Source
/// W. Hohmann, Die Erreichbarkeit der Himmelskörper (1925).
fn hohmann(gm: f64, from_m: f64, to_m: f64) -> ([f64; 2], f64) {
    let semi_major_m = 0.5 * (from_m + to_m);
    let on_ellipse = |r: f64| (gm * (2.0 / r - 1.0 / semi_major_m)).sqrt();
    let kicks = [on_ellipse(from_m) - (gm / from_m).sqrt(), (gm / to_m).sqrt() - on_ellipse(to_m)];
    (kicks, PI * semi_major_m * (semi_major_m / gm).sqrt())
}

/// Flies it from a file's text: the craft arrives half a turn later, and then stays on the new circle.
fn fly(gm: f64, from_m: f64, to_m: f64) {
    let ([depart, arrive], time_s) = hohmann(gm, from_m, to_m);
    let change = |at_s: f64, by: f64| {
        format!("[[change]]\nat = \"{at_s:?} s\"\nkick = \"Craft\"\nspeed = \"{by:?} m/s\"\n")
    };
    let initial = start(&scenario(&format!(
        "[[body]]\nname = \"Centre\"\ngm = \"{gm:e} m^3/s^2\"\n\
         [[body]]\nname = \"Craft\"\norbit = {{ around = \"Centre\", semi-major = \"{from_m:?} m\", eccentricity = 0, inclination = \"23 deg\" }}\n\
         {}{}",
        change(0.0, depart),
        change(time_s, arrive)
    )));
    let eph = paths(&initial, 0.0, 3.0 * time_s);
    let at = |t_s: f64| eph.relative(CRAFT, CENTRE, t_s).unwrap_or_else(|| panic!("{t_s} s is not covered"));
    // The centre doesn't move, so distances are exact to the rounding of some steps.
    assert_close("arrival", at(time_s).pos.norm() / to_m, 1.0, 1e-12, "");
    assert_close("half a turn", at(time_s).pos.angle(&-at(0.0).pos), 0.0, 1e-7, "rad");
    for part in [1.2, 1.9, 2.7] {
        assert_close("on the new circle", at(part * time_s).pos.norm() / to_m, 1.0, 1e-11, "");
    }
    let on_the_way = Query::new(EventKind::Apoapsis, CRAFT, Some(CENTRE));
    let found = find(&eph, &initial, &on_the_way, 0.01 * time_s, 0.99 * time_s);
    assert!(found.is_empty(), "it rises all the way: {found:?}");
}

/// # Source
/// D. A. Vallado, Fundamentals of Astrodynamics and Applications, 4th ed. (2013), example 6-1: from 191.344 11 km to 35,781.348 57 km above the
/// Earth; 2.457 038 and 1.478 187 km/s, 315.403 minutes.
#[test]
fn to_the_height_of_the_clarke_belt_as_in_the_handbook() {
    let (gm, earth_m) = (398_600.441_8e9, 6_378_137.0);
    let (from_m, to_m) = (earth_m + 191_344.11, earth_m + 35_781_348.57);
    let ([depart, arrive], time_s) = hohmann(gm, from_m, to_m);
    assert_close("first kick", depart, 2457.038, 0.01, "m/s");
    assert_close("second kick", arrive, 1478.187, 0.01, "m/s");
    // The book goes on with a semi-major axis of nine digits.
    assert_close("time", time_s / 60.0, 315.403, 2e-3, "min");
    fly(gm, from_m, to_m);
}

/// # Source
/// R. R. Bate, D. D. Mueller & J. E. White, Fundamentals of Astrodynamics (1971), table 8.3-1: from the Earth's distance to those of the planets,
/// 105.5 days to Mercury, 146.1 to Venus, 258.9 to Mars, 2.74 years to Jupiter, 6.04 to Saturn.
#[test]
fn to_the_planets_in_the_times_of_the_table() {
    const SUN: f64 = 1.327_124_400_18e20;
    const AU_M: f64 = 1.495_978_707e11;
    const DAY_S: f64 = 86_400.0;
    for (to_au, days, last) in [
        (0.387_1, 105.5, 0.1),
        (0.723_3, 146.1, 0.1),
        (1.523_7, 258.9, 0.1),
        // A hundredth of a year, printed, is 3.7 days.
        (5.202_8, 2.74 * 365.25, 4.0),
        (9.54, 6.04 * 365.25, 10.0),
    ] {
        let (_, time_s) = hohmann(SUN, AU_M, to_au * AU_M);
        assert_close(&format!("to {to_au} au"), time_s / DAY_S, days, last, "d");
        fly(SUN, AU_M, to_au * AU_M);
    }
}

/// One of Lambert's problems, in the units of its book.
struct Example {
    name: &'static str,
    gm: f64,
    from: [f64; 3],
    to: [f64; 3],
    time: f64,
    leaves: [f64; 3],
    /// The last digit printed, in units of speed.
    last: f64,
}

/// # Source
/// R. H. Battin, An Introduction to the Mathematics and Methods of Astrodynamics, rev. ed. (1999), problem 7-12: au and years. R. R. Bate, D. D.
/// Mueller & J. E. White (1971), section 5.3: canonical units, the short way. D. A. Vallado, example 7-5, and H. D. Curtis, 3rd ed., example
/// 5.2, stand beside the solver.
#[test]
fn lamberts_problem_as_the_handbooks_solve_it() {
    for example in [
        Example {
            name: "Battin",
            gm: 4.0 * PI * PI,
            from: [0.159_321_004, 0.579_266_185, 0.052_359_607],
            to: [0.057_594_337, 0.605_750_797, 0.068_345_246],
            time: 0.010_794_065,
            leaves: [-9.303_603_251, 3.018_641_330, 1.536_362_143],
            // The places have nine digits, on a chord of a tenth.
            last: 1e-5,
        },
        Example {
            name: "Bate, Mueller & White",
            gm: 1.0,
            from: [0.5, 0.6, 0.7],
            to: [0.0, 1.0, 0.0],
            time: 0.966_766_3,
            leaves: [-0.361_677_49, 0.769_735_87, -0.506_348_48],
            last: 1e-4,
        },
    ] {
        let [from, to, leaves] = [example.from, example.to, example.leaves].map(Vector3::from);
        let axis = from.cross(&to);
        let arcs = lambert(from, to, example.time, example.gm, axis, 0).expect("a path");
        let [arc] = arcs.as_slice() else { panic!("{}: one path, not {arcs:?}", example.name) };
        assert_close(example.name, (arc.from_vel - leaves).norm(), 0.0, example.last, "");
        // Not by the book alone: Kepler's motion with that velocity arrives.
        let (arrives, _) = propagate(from, arc.from_vel, example.gm, example.time).expect("in range");
        assert_close("arrival", (arrives - to).norm(), 0.0, 1e-13, "");
    }
}
