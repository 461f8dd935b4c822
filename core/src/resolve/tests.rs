//! What scenarios come down to, and what is said when they can't.

use super::*;
use crate::conic::elements_from_state;
use crate::constants::{AU_M, DAY_S, DEGREE_RAD, GM_EARTH_M3_S2, GM_SUN_M3_S2, GM_SUN_NOMINAL_M3_S2};
use crate::scenario::{Orbit, OrbitNow, parse};

/// Relative rounding of states that went through a handful of conversions.
const TOL: f64 = 1e-13;

const ORLA: &str = "[[body]]\nname = \"Orla\"\nkind = \"star\"\nmass = \"1 Sun masses\"\n";

fn file(date: &str, bodies: &str) -> String {
    format!(
        "format = 1\ntitle = \"Test\"\n{date}\n{bodies}\n[[beat]]\ntitle = \"One\"\nsay = \"x\"\nclock = {{ hold = \"1 s\" }}\nview = {{ centre = \"barycentre\", span = \"1 au\" }}\n"
    )
}

fn outcome(date: &str, bodies: &str) -> Result<InitialState, Vec<Problem>> {
    let parsed = parse(&file(date, bodies));
    // What the reader of the file refuses never comes to be resolved.
    resolve(&parsed.scenario.ok_or(parsed.problems)?)
}

fn body(name: &str, form: &str) -> String {
    format!("[[body]]\nname = \"{name}\"\n{form}\n")
}

/// Resolves a body on an orbit around a star of one nominal Sun; elements about it.
fn orbit(quantities: &str) -> crate::conic::Elements {
    let fenn = body("Fenn", &format!("orbit = {{ around = \"Orla\", {quantities} }}"));
    let initial = outcome("", &format!("{ORLA}{fenn}")).unwrap();
    let [orla, fenn] = &initial.bodies[..] else { panic!("two bodies") };
    elements_from_state(fenn.pos - orla.pos, fenn.vel - orla.vel, orla.gm_m3_s2).unwrap()
}

#[test]
fn every_sufficient_pair_gives_the_same_ellipse() {
    // a = 2 au, e = 0.4: 1.2 au to 2.8 au; the period by Kepler's third law.
    let a = 2.0 * AU_M;
    let days = std::f64::consts::TAU * (a * a * a / GM_SUN_NOMINAL_M3_S2).sqrt() / DAY_S;
    let period = format!("period = \"{days} d\"");
    let quantities = [
        "periapsis = \"1.2 au\"",
        "apoapsis = \"2.8 au\"",
        "semi-major = \"2 au\"",
        &period,
        "eccentricity = 0.4",
    ];
    for i in 0..5 {
        for j in i + 1..5 {
            if (i, j) == (2, 3) {
                continue;
            }
            let got = orbit(&format!("{}, {}, inclination = \"10 deg\"", quantities[i], quantities[j]));
            assert!((got.periapsis_m / (1.2 * AU_M) - 1.0).abs() < TOL, "{i} {j}: {got:?}");
            assert!((got.eccentricity - 0.4).abs() < TOL, "{i} {j}: {got:?}");
            assert!((got.inclination_rad / DEGREE_RAD - 10.0).abs() < 1e-11, "{i} {j}: {got:?}");
            assert!(got.true_anomaly_rad.abs() < TOL, "{i} {j}: {got:?}");
        }
    }
}

#[test]
fn open_orbits_and_every_way_to_say_where() {
    let got = orbit("semi-major = \"-2 au\", eccentricity = 1.5, before-periapsis = \"100 d\"");
    assert!((got.periapsis_m / AU_M - 1.0).abs() < TOL);
    assert!((got.after_periapsis_s(GM_SUN_NOMINAL_M3_S2).unwrap() / DAY_S + 100.0).abs() < 1e-9);
    let got = orbit("periapsis = \"1 au\", eccentricity = 1, after-periapsis = \"30 d\"");
    assert!((got.eccentricity - 1.0).abs() < TOL && got.true_anomaly_rad > 0.0);
    let got = orbit("periapsis = \"1 au\", eccentricity = 0.5, anomaly = \"250 deg\"");
    assert!((got.true_anomaly_rad / DEGREE_RAD + 110.0).abs() < 1e-11);
    let got = orbit("periapsis = \"1 au\", eccentricity = 0.5, mean-anomaly = \"90 deg\"");
    assert!((got.mean_anomaly_rad().unwrap() / DEGREE_RAD - 90.0).abs() < 1e-11);
}

#[test]
fn gm_of_both_bodies_counts_and_the_centre_of_mass_rests() {
    let pair = body(
        "Other",
        "mass = \"0.5 Sun masses\"\norbit = { around = \"Orla\", semi-major = \"1 au\", eccentricity = 0 }",
    );
    let initial = outcome("", &format!("{ORLA}{pair}")).unwrap();
    let [a, b] = &initial.bodies[..] else { panic!("two bodies") };
    let speed = (b.vel - a.vel).norm();
    let want = (1.5 * GM_SUN_NOMINAL_M3_S2 / AU_M).sqrt();
    assert!((speed / want - 1.0).abs() < TOL, "got {speed}, want {want}");
    assert!((a.pos * 2.0 + b.pos).norm() < 1e-3 && (a.vel * 2.0 + b.vel).norm() < 1e-10);
    assert_eq!(b.primary, Some(BodyId(0)));
}

#[test]
fn throws_and_drops_start_above_the_surface() {
    let brae = body("Brae", "mass = \"1 Earth masses\"\nradius = \"6000 km\"");
    let ball = body(
        "Ball",
        "throw = { from = \"Brae\", height = \"200 km\", speed = \"8 km/s\", elevation = \"30 deg\", heading = \"90 deg\", longitude = \"90 deg\" }",
    );
    let stone = body("Stone", "drop = { onto = \"Brae\", height = \"100 m\", latitude = \"90 deg\" }");
    let initial = outcome("", &format!("{brae}{ball}{stone}")).unwrap();
    let [_, ball, stone] = &initial.bodies[..] else { panic!("three bodies") };
    let near = |got: Vector3<f64>, want: [f64; 3], tol: f64| {
        assert!((got - Vector3::from(want)).norm() < tol, "got {got}, want {want:?}");
    };
    near(ball.pos, [0.0, 6.2e6, 0.0], 1e-8);
    // East of +y is -x; 30 degrees up.
    near(ball.vel, [-8000.0 * 0.75_f64.sqrt(), 4000.0, 0.0], 1e-10);
    near(stone.pos, [0.0, 0.0, 6_000_100.0], 1e-8);
    near(stone.vel, [0.0; 3], 1e-300);
}

#[test]
fn forms_may_stand_in_any_order() {
    let moon = body(
        "Moonlet",
        "place = { about = \"Brae\", position = [\"1000 km\", \"0 km\", \"0 km\"], velocity = [\"0 km/s\", \"0 km/s\", \"0 km/s\"] }",
    );
    let brae = body("Brae", "orbit = { around = \"Orla\", semi-major = \"1 au\", eccentricity = 0 }");
    let initial = outcome("", &format!("{moon}{brae}{ORLA}")).unwrap();
    assert!(
        (initial.bodies[0].pos - initial.bodies[2].pos - Vector3::new(AU_M + 1e6, 0.0, 0.0)).norm() < 1e-3
    );
    assert_eq!(initial.bodies[0].vel, initial.bodies[1].vel);
}

/// A valid scenario of Orla, a planet Brae with a surface, and Fenn around Orla: to be spoilt.
fn sound() -> Scenario {
    let brae = body(
        "Brae",
        "mass = \"1 Earth masses\"\nradius = \"6000 km\"\norbit = { around = \"Orla\", semi-major = \"1 au\", eccentricity = 0 }",
    );
    let ball = body(
        "Ball",
        "throw = { from = \"Brae\", height = \"1 m\", speed = \"1 m/s\", elevation = \"0 deg\", heading = \"0 deg\" }",
    );
    let fenn = body("Fenn", "orbit = { around = \"Orla\", periapsis = \"2 au\", eccentricity = 0 }");
    parse(&file("", &format!("{ORLA}{brae}{ball}{fenn}"))).scenario.unwrap()
}

fn told(scenario: &Scenario) -> String {
    resolve(scenario).unwrap_err().iter().map(|p| format!("{p}\n")).collect()
}

#[test]
fn contradictions_are_named_with_their_place() {
    // Most of these the reader of the file refuses first, with the place of the very key.
    let (length, span) =
        (|au: f64| Some(Length::from_m(au * AU_M)), |d: f64| Some(crate::units::Span::from_s(d * DAY_S)));
    let none = match sound().bodies[3].form {
        Form::Orbit(orbit) => Orbit { periapsis: None, eccentricity: None, ..orbit },
        _ => panic!("an orbit"),
    };
    let anomaly = OrbitNow::Anomaly(crate::units::Angle::from_rad(130.0 * DEGREE_RAD));
    let mean = OrbitNow::MeanAnomaly(crate::units::Angle::from_rad(0.1));
    for (orbit, says) in [
        (
            Orbit { periapsis: length(2.0), apoapsis: length(1.0), ..none },
            "apoapsis (1 au) is nearer than periapsis (2 au)",
        ),
        (Orbit { periapsis: length(2.0), period: span(365.25), ..none }, "which a period of 1 yr gives"),
        (
            Orbit { periapsis: length(2.0), semi_major: length(1.0), ..none },
            "farther than the semi-major axis (1 au)",
        ),
        (
            Orbit { apoapsis: length(3.0), semi_major: length(1.0), ..none },
            "doesn't fit the semi-major axis (1 au)",
        ),
        (
            Orbit { apoapsis: length(3.0), semi_major: length(-1.0), ..none },
            "hyperbola, which has no apoapsis",
        ),
        (Orbit { apoapsis: length(3.0), eccentricity: Some(1.5), ..none }, "open and has no apoapsis"),
        (Orbit { period: span(365.25), eccentricity: Some(1.0), ..none }, "open and has no period"),
        (Orbit { semi_major: length(1.0), eccentricity: Some(1.2), ..none }, "write semi-major = \"-1 au\""),
        (
            Orbit { semi_major: length(-1.0), eccentricity: Some(0.2), ..none },
            "an eccentricity of 0.2 doesn't",
        ),
        (
            Orbit { semi_major: length(1.0), eccentricity: Some(1.0), ..none },
            "a parabola (eccentricity 1) has no semi-major axis",
        ),
        (Orbit { semi_major: length(1.0), period: span(365.25), ..none }, "say the same thing"),
        (Orbit { periapsis: length(1.0), ..none }, "exactly two quantities"),
        (Orbit { periapsis: length(-1.0), eccentricity: Some(0.1), ..none }, "not above 0"),
        (Orbit { periapsis: length(1.0), eccentricity: Some(1.2), now: mean, ..none }, "has no mean anomaly"),
        (
            Orbit { periapsis: length(1.0), eccentricity: Some(2.0), now: anomaly, ..none },
            "between -120.000 and 120.000 deg",
        ),
    ] {
        let mut scenario = sound();
        scenario.bodies[3].form = Form::Orbit(orbit);
        let got = told(&scenario);
        assert!(got.contains(says) && got.contains("Fenn"), "{says}: {got}");
        let place = scenario.bodies[3].place;
        assert!(got.starts_with(&format!("{}:{}: ", place.line, place.column)), "{got}");
    }
}

#[test]
fn bodies_that_nothing_can_be_placed_by_are_named() {
    assert!(resolve(&sound()).is_ok());
    let mut scenario = sound();
    scenario.bodies[0].gm = None;
    assert!(told(&scenario).contains("Fenn: it orbits Orla, which has no mass"), "{}", told(&scenario));

    let mut scenario = sound();
    scenario.bodies[1].radius = None;
    let one = told(&scenario);
    assert!(one.contains("Ball: it is thrown from Brae, which has no radius"), "{one}");
    // Every problem at once, but none for what only waits for a body with a problem.
    if let Form::Orbit(orbit) = &mut scenario.bodies[3].form {
        orbit.around = BodyId(3);
    }
    let two = told(&scenario);
    assert!(two.starts_with(&one) && two.contains("Fenn is placed relative to itself"), "{two}");
    assert_eq!(two.lines().count(), 2);

    let mut scenario = sound();
    for (body, around) in [(1, 3), (3, 1)] {
        scenario.bodies[body].gm = scenario.bodies[0].gm;
        if let Form::Orbit(orbit) = &mut scenario.bodies[body].form {
            orbit.around = BodyId(around);
        }
    }
    assert!(told(&scenario).contains("Brae, Fenn wait for one another"), "{}", told(&scenario));
    assert_eq!(told(&scenario).lines().count(), 1);

    let mut scenario = sound();
    scenario.bodies[3].form = Form::Origin;
    assert!(told(&scenario).contains("Orla and Fenn are at the same place"), "{}", told(&scenario));
}

#[test]
fn real_bodies_bring_the_rest_of_the_solar_system_along() {
    let date = "date = \"2031-03-05T20:00:00Z\"";
    let bodies = [
        body("Mars", "real = \"Mars\""),
        body("Luna", "real = \"Moon\""),
        body("Speck", "orbit = { around = \"Mars\", semi-major = \"20000 km\", eccentricity = 0.1 }"),
    ]
    .concat();
    let initial = outcome(date, &bodies).unwrap();
    assert_eq!((initial.listed, initial.bodies.len()), (3, 12));
    let index = |name: &str| initial.bodies.iter().position(|b| b.name == name).unwrap();
    assert_eq!(initial.bodies[1].primary, Some(BodyId(index("Earth"))));
    assert_eq!(initial.bodies[0].primary, Some(BodyId(index("Sun"))));
    assert_eq!(initial.bodies[2].primary, Some(BodyId(0)));
    assert!((initial.bodies[index("Sun")].gm_m3_s2 / GM_SUN_M3_S2 - 1.0).abs() < TOL);
    assert!(initial.forces.relativity);
    assert_eq!(initial.forces.oblate[0].body, BodyId(index("Earth")));
    let mut sum = Vector3::zeros();
    for b in &initial.bodies {
        sum += b.vel * (b.gm_m3_s2 / GM_SUN_M3_S2);
    }
    assert!(sum.norm() < 1e-10, "{sum}");

    let alone =
        outcome(&format!("{date}\n[physics]\ncompanions = false\nrelativity = false"), &bodies).unwrap();
    assert_eq!(alone.bodies.len(), 3);
    assert_eq!(alone.bodies[1].primary, None);
    assert_eq!(alone.forces, Forces::default());
    // The pull of others aside, what is stated of a real body counts.
    let heavy = outcome(date, &body("Mars", "real = \"Mars\"\nmass = \"1 Earth masses\"\nradius = \"1 km\""))
        .unwrap();
    assert!(
        (heavy.bodies[0].gm_m3_s2 / GM_EARTH_M3_S2 - 1.0).abs() < 1e-6
            && (heavy.bodies[0].radius_m - 1000.0).abs() < 1e-9
    );
}

#[test]
fn real_bodies_need_a_date_in_range() {
    let mars = body("Mars", "real = \"Mars\"");
    for (date, says) in [("", "date"), ("date = \"1800-01-01\"", "1900-01-01 to 2100-01-01")] {
        let parsed = parse(&file(date, &mars));
        let problems = match parsed.scenario {
            Some(scenario) => resolve(&scenario).unwrap_err(),
            None => parsed.problems,
        };
        let text: String = problems.iter().map(ToString::to_string).collect();
        assert!(text.contains(says), "{text}");
    }
}
