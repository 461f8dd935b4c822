//! Drag in air, from the text of a scenario to the paths, against closed forms.

use fallaround_core::air::Air;
use fallaround_core::ephemeris::Ephemeris;
use fallaround_core::math::float::{atan2, cosh, exp, ln};
use fallaround_core::scenario::BodyId;
use fallaround_tests::{assert_close, paths, scenario, start};

const WORLD: BodyId = BodyId(0);
const BALL: BodyId = BodyId(1);

/// A world so large that gravity is 10 m/s² all the way, to two parts in a million for each kilometre, in air of 1 kg/m³ all the way.
const RADIUS_M: f64 = 1e9;
const GRAVITY_M_S2: f64 = 10.0;
const WORLD_IN_AIR: &str = "[[body]]\nname = \"World\"\ngm = \"1e19 m^3/s^2\"\nradius = \"1e9 m\"\n\
     atmosphere = { heights = [\"0 m\", \"1e6 m\"], densities = [\"1 kg/m^3\", \"1 kg/m^3\"] }\n";

fn fly(text: &str, until_s: f64) -> Ephemeris {
    paths(&start(&scenario(text)), 0.0, until_s)
}

/// Height and speed outwards of the ball.
fn flight(eph: &Ephemeris, radius_m: f64, t_s: f64) -> (f64, f64) {
    let ball = eph.relative(BALL, WORLD, t_s).unwrap_or_else(|| panic!("{t_s} s is not covered"));
    (ball.pos.norm() - radius_m, ball.vel.dot(&ball.pos) / ball.pos.norm())
}

/// # Source
/// With the terminal speed u, √(g / (1/2 ρ C A / m)): v = u tanh(g t / u), way u² / g ln cosh(g t / u). R. A. Becker, Introduction to
/// Theoretical Mechanics (1954), ch. 6.
#[test]
fn falls_end_at_the_terminal_speed_along_the_closed_form() {
    // A stone, a leaf and a feather.
    for (area, coefficient) in [(0.02, 0.5), (2.0, 1.0), (80.0, 1.0)] {
        let eph = fly(
            &format!(
                "{WORLD_IN_AIR}[[body]]\nname = \"Ball\"\ndrag = {{ area-per-mass = \"{area} m^2/kg\", coefficient = {coefficient} }}\n\
                 drop = {{ onto = \"World\", height = \"1500 m\" }}\n"
            ),
            20.0,
        );
        let u = (GRAVITY_M_S2 / (0.5 * area * coefficient)).sqrt();
        for t_s in [0.1, 1.0, 5.0, 20.0] {
            let (height, outwards) = flight(&eph, RADIUS_M, t_s);
            let way = u * u / GRAVITY_M_S2 * ln(cosh(GRAVITY_M_S2 * t_s / u));
            // Gravity is up to 3e-6 less up there, and places are known to 2e-7 m.
            assert_close("way", 1500.0 - height, way, 5e-6 * way + 1e-6, "m");
            let speed = u * (1.0 - 2.0 / (exp(2.0 * GRAVITY_M_S2 * t_s / u) + 1.0));
            assert_close("speed", -outwards, speed, 5e-6 * speed, "m/s");
        }
    }
}

/// # Source
/// As above, upwards: u² / 2 g ln(1 + v² / u²) high, after u / g arctan(v / u).
#[test]
fn a_throw_upwards_comes_as_high_as_the_closed_form_says() {
    let (u, v) = (20.0_f64, 50.0);
    let area = 2.0 * GRAVITY_M_S2 / (u * u);
    let eph = fly(
        &format!(
            "{WORLD_IN_AIR}[[body]]\nname = \"Ball\"\ndrag = {{ area-per-mass = \"{area} m^2/kg\" }}\n\
             throw = {{ from = \"World\", speed = \"{v} m/s\", elevation = \"90 deg\" }}\n"
        ),
        10.0,
    );
    let (height, outwards) = flight(&eph, RADIUS_M, u / GRAVITY_M_S2 * atan2(v, u));
    assert_close("height", height, u * u / (2.0 * GRAVITY_M_S2) * ln(1.0 + v * v / (u * u)), 1e-5, "m");
    assert_close("speed at the top", outwards, 0.0, 1e-5, "m/s");
}

/// # Source
/// H. J. Allen & A. J. Eggers, NACA Report 1381 (1958): without gravity, straight down through exponential air, the speed is
/// v exp(-1/2 ρ C A / m H), with the density ρ where it is; the greatest deceleration v² / (2 e H).
#[test]
fn an_entry_slows_as_exponential_air_makes_it() {
    let (radius_m, scale_m, speed_m_s, high_m) = (6.4e6, 7000.0, 7800.0, 120e3);
    let eph = fly(
        "[[body]]\nname = \"World\"\nradius = \"6400 km\"\natmosphere = { surface-density = \"1.3 kg/m^3\", scale-height = \"7 km\" }\n\
         [[body]]\nname = \"Ball\"\ndrag = { area-per-mass = \"0.005 m^2/kg\" }\n\
         place = { about = \"World\", position = [\"6520 km\", \"0 km\", \"0 km\"], velocity = [\"-7.8 km/s\", \"0 km/s\", \"0 km/s\"] }\n",
        40.0,
    );
    let depth = |height_m: f64| 0.5 * 1.3 * 0.005 * scale_m * exp(-height_m / scale_m);
    let (mut before, mut hardest) = (speed_m_s, 0.0_f64);
    for tenth in 1..=400 {
        let t_s = 0.1 * f64::from(tenth);
        let (height_m, outwards) = flight(&eph, radius_m, t_s);
        let want = speed_m_s * exp(depth(high_m) - depth(height_m));
        // Height is known to 2e-9 m, the rest is rounding in some hundred steps.
        assert_close("speed", -outwards, want, 1e-9 * speed_m_s, "m/s");
        hardest = hardest.max((before + outwards) / 0.1);
        before = -outwards;
    }
    let want = speed_m_s * speed_m_s / (2.0 * std::f64::consts::E * scale_m);
    // The mean over a tenth of a second is at most this much below the peak.
    assert_close("hardest deceleration", hardest, want, 2e-3 * want, "m/s^2");
}

/// The same fall, straight down and integrated by the classical fourth-order method of Runge and Kutta in tiny steps.
fn plain_fall(mut height_m: f64, gm: f64, radius_m: f64, area: f64, until_s: f64) -> (f64, f64) {
    const STEP_S: f64 = 1e-3;
    let air = Air::standard();
    let acc = |height: f64, v: f64| {
        let r = radius_m + height;
        -gm / (r * r) - 0.5 * air.density_kg_m3(height) * area * v * v.abs()
    };
    let (mut v, mut t_s) = (0.0_f64, 0.0);
    while t_s < until_s - 0.5 * STEP_S {
        let (v1, a1) = (v, acc(height_m, v));
        let (v2, a2) = (v + 0.5 * STEP_S * a1, acc(height_m + 0.5 * STEP_S * v1, v + 0.5 * STEP_S * a1));
        let (v3, a3) = (v + 0.5 * STEP_S * a2, acc(height_m + 0.5 * STEP_S * v2, v + 0.5 * STEP_S * a2));
        let (v4, a4) = (v + STEP_S * a3, acc(height_m + STEP_S * v3, v + STEP_S * a3));
        height_m += STEP_S / 6.0 * (v1 + 2.0 * v2 + 2.0 * v3 + v4);
        v += STEP_S / 6.0 * (a1 + 2.0 * a2 + 2.0 * a3 + a4);
        t_s += STEP_S;
    }
    (height_m, v)
}

#[test]
fn a_fall_through_all_layers_of_the_standard_atmosphere_is_followed_through_their_kinks() {
    let (gm, radius_m, area) = (3.986_004_418e14, 6_371_000.0, 0.01);
    let eph = fly(
        "[[body]]\nname = \"World\"\ngm = \"3.986004418e14 m^3/s^2\"\nradius = \"6371 km\"\natmosphere = \"Earth\"\n\
         [[body]]\nname = \"Ball\"\ndrag = { area-per-mass = \"0.02 m^2/kg\", coefficient = 0.5 }\n\
         drop = { onto = \"World\", height = \"150 km\" }\n",
        400.0,
    );
    for t_s in [100.0, 170.0, 200.0, 300.0, 400.0] {
        let (height, outwards) = flight(&eph, radius_m, t_s);
        let (want, speed) = plain_fall(150e3, gm, radius_m, area, t_s);
        // Where layers meet, density bends, and polynomials are off by a small part of what it bends in 300 m.
        assert_close("height", height, want, 0.1, "m");
        assert_close("speed", outwards, speed, 0.02, "m/s");
    }
    let (height, outwards) = flight(&eph, radius_m, 400.0);
    let gravity = gm / (radius_m * radius_m);
    let terminal = (gravity / (0.5 * area * Air::standard().density_kg_m3(height))).sqrt();
    // It falls into ever denser air, so it is a little faster than what the air bears where it is.
    assert_close("near the terminal speed", -outwards, terminal, 0.03 * terminal, "m/s");
}

#[test]
fn without_drag_stated_or_with_drag_off_air_does_nothing() {
    for (physics, drag) in
        [("", ""), ("[physics]\ndrag = false\n", "drag = { area-per-mass = \"1 m^2/kg\" }\n")]
    {
        let eph = fly(
            &format!(
                "{physics}{WORLD_IN_AIR}[[body]]\nname = \"Ball\"\n{drag}drop = {{ onto = \"World\", height = \"1500 m\" }}\n"
            ),
            10.0,
        );
        let (height, _) = flight(&eph, RADIUS_M, 10.0);
        assert_close("way", 1500.0 - height, 500.0, 3e-3, "m");
    }
}
