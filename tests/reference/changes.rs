//! Changes on the way, from the text of a scenario to the paths.

use fallaround_core::scenario::BodyId;
use fallaround_tests::{assert_close, paths, scenario, start};

const DAY_S: f64 = 86_400.0;

#[test]
fn a_comet_whose_star_stops_pulling_goes_straight_on() {
    let initial = start(&scenario(
        "[[body]]\nname = \"Orla\"\nmass = \"1 Sun mass\"\n\
         [[body]]\nname = \"Fenn\"\norbit = { around = \"Orla\", periapsis = \"0.5 au\", eccentricity = 0.9, before-periapsis = \"40 d\" }\n\
         [[change]]\nat = \"50 d\"\ngravity = \"Orla\"\non = true\n\
         [[change]]\nat = \"30 d\"\ngravity = \"Orla\"\non = false\n",
    ));
    let eph = paths(&initial, 0.0, 60.0 * DAY_S);
    let at = |days: f64| eph.state(BodyId(1), days * DAY_S).expect("covered");
    let left = at(30.0);
    for days in [35.0, 45.0, 50.0] {
        let off = at(days).pos - (left.pos + left.vel * ((days - 30.0) * DAY_S));
        // Roundings of 1e11 m, added up over some steps.
        assert_close("off the line", off.norm(), 0.0, 1e-3, "m");
    }
    let bent = at(60.0).pos - (left.pos + left.vel * (30.0 * DAY_S));
    assert!(bent.norm() > 1e9, "pulled again from the 50th day on: {} m", bent.norm());
}

/// # Source
/// W. Hohmann, Die Erreichbarkeit der Himmelskörper (1925). Low orbit to the height of the geostationary one: both kicks
/// together are 3.89 km/s from 300 km up (from memory; the handbooks of the trade all work it out).
#[test]
fn two_kicks_raise_a_satellite_by_hohmanns_ellipse() {
    const GM: f64 = 3.986_004_418e14;
    let (low, high) = (6_678_000.0_f64, 42_164_000.0_f64);
    let a = 0.5 * (low + high);
    let first = (GM * (2.0 / low - 1.0 / a)).sqrt() - (GM / low).sqrt();
    let second = (GM / high).sqrt() - (GM * (2.0 / high - 1.0 / a)).sqrt();
    assert_close("both kicks", first + second, 3890.0, 10.0, "m/s");
    let half_s = std::f64::consts::PI * (a * a * a / GM).sqrt();
    let initial = start(&scenario(&format!(
        "[[body]]\nname = \"World\"\ngm = \"{GM} m^3/s^2\"\nradius = \"6378 km\"\n\
         [[body]]\nname = \"Kite\"\norbit = {{ around = \"World\", semi-major = \"{low} m\", eccentricity = 0 }}\n\
         [[change]]\nat = \"1000 s\"\nkick = \"Kite\"\nspeed = \"{first} m/s\"\n\
         [[change]]\nat = \"{} s\"\nkick = \"Kite\"\nspeed = \"{second} m/s\"\nalong = \"velocity\"\n",
        1000.0 + half_s
    )));
    let eph = paths(&initial, 0.0, 2.0 * DAY_S);
    for t_s in [1000.0 + half_s, 1.2 * DAY_S, 2.0 * DAY_S] {
        let kite = eph.relative(BodyId(1), BodyId(0), t_s).expect("covered");
        // Roundings, and what they turn into in two days.
        assert_close("height", kite.pos.norm(), high, 1e-2, "m");
        assert_close("speed", kite.vel.norm(), (GM / high).sqrt(), 1e-6, "m/s");
    }
}
