//! Aims whose answers can be checked by another way than the one that found them.

use super::*;
use crate::ephemeris::{Ephemeris, Propagation, events};
use crate::initial::InitialState;
use crate::resolve::resolve;
use crate::scenario::{BodyId, EventKind, EventRef, parse};
use crate::units::Length;

const AIRLESS: &str = r#"format = 1
title = "A throw"

[[body]]
name = "Skerry"
mass = "1 Moon masses"
radius = "1737 km"   # without air

[[body]]
name = "Ball"
# Found by aiming:
throw = { from = "Skerry", height = "2 km", speed = "0.9 km/s", elevation = "45 deg", heading = "80 deg" }
"#;

fn paths(text: &str, until_s: f64) -> (InitialState, Ephemeris) {
    let initial = resolve(&parse(text).scenario.unwrap()).unwrap();
    let mut propagation = Propagation::new(&initial);
    assert!(propagation.advance(until_s, 1_000_000).unwrap());
    (initial, propagation.into_ephemeris())
}

fn first(
    text: &str,
    until_s: f64,
    kind: EventKind,
    body: usize,
    other: usize,
) -> (f64, f64, crate::Vector3<f64>) {
    let (initial, eph) = paths(text, until_s);
    let event = EventRef { kind, body: BodyId(body), other: Some(BodyId(other)), nth: 1, distance: None };
    let found = events::first(&eph, &initial, &event, 0.0).unwrap();
    let state = eph.relative(BodyId(body), BodyId(other), found.t_s).unwrap();
    (found.t_s, found.value, state.pos)
}

#[test]
fn a_throw_hits_a_stated_place() {
    let text = format!(
        "{AIRLESS}\n[[aim]]\nwant = [{{ event = \"contact of Ball with Skerry\", until = \"3 h\", longitude = \"40 deg\", latitude = \"-10 deg\" }}]\n\
         free = [\n  {{ body = \"Ball\", quantity = \"throw.speed\", from = \"0.3 km/s\", to = \"1.6 km/s\" }},\n  \
         {{ body = \"Ball\", quantity = \"throw.heading\", from = \"0 deg\", to = \"180 deg\" }},\n]\n"
    );
    let solved = solve(&text).unwrap();
    let (_, _, pos) = first(&solved.text, 10_800.0, EventKind::Contact, 1, 0);
    let longitude = crate::math::float::atan2(pos.y, pos.x).to_degrees();
    let latitude = crate::math::float::asin(pos.z / pos.norm()).to_degrees();
    // What is allowed of an angle is 2e-7 rad.
    assert!((longitude - 40.0).abs() < 1.2e-5 && (latitude + 10.0).abs() < 1.2e-5, "{longitude} {latitude}");
    assert_eq!(solved.misses.len(), 2);
    assert!(solved.misses.iter().all(|m| m.share.abs() <= 1.0), "{:?}", solved.misses);
    // Only the two numbers have changed, all else stands to the byte.
    let plain = |text: &str| {
        text.lines().filter(|line| !line.starts_with("throw")).map(str::to_owned).collect::<Vec<_>>()
    };
    assert_eq!(plain(&solved.text), plain(&text));
    assert!(
        solved.text.contains("throw = { from = \"Skerry\", height = \"2 km\", speed = \""),
        "{}",
        solved.text
    );
    // What meets its aim stays as it is.
    assert_eq!(solve(&solved.text).unwrap().text, solved.text);
}

const SYSTEM: &str = r#"format = 1
title = "A passage"
[[body]]
name = "Orla"
mass = "0.9 Sun masses"
[[body]]
name = "Brae"
mass = "1.3 Earth masses"
radius = "6900 km"
orbit = { around = "Orla", semi-major = "1.1 au", eccentricity = 0.02, anomaly = "40 deg" }
[[body]]
name = "Pell"
kind = "comet"
orbit = { around = "Orla", periapsis = "0.6 au", eccentricity = 0.95, inclination = "3 deg", before-periapsis = "140 d" }
"#;

#[test]
fn a_comet_passes_a_planet_at_a_stated_distance_and_time() {
    let text = format!(
        "{SYSTEM}[[aim]]\nwant = [{{ event = \"closest-approach of Pell to Brae\", at = \"210 d\", distance = \"300000 km\" }}]\n\
         free = [\n  {{ body = \"Pell\", quantity = \"orbit.before-periapsis\", from = \"100 d\", to = \"200 d\" }},\n  \
         {{ body = \"Pell\", quantity = \"orbit.argument\", from = \"-180 deg\", to = \"180 deg\" }},\n  \
         {{ body = \"Pell\", quantity = \"orbit.node\", from = \"-90 deg\", to = \"90 deg\" }},\n]\n"
    );
    let solved = solve(&text).unwrap();
    let (initial, eph) = paths(&solved.text, 300.0 * 86_400.0);
    let query = events::Query::new(EventKind::ClosestApproach, BodyId(2), Some(BodyId(1)));
    let found = events::find(&eph, &initial, &query, 0.0, 300.0 * 86_400.0);
    let meant = found.iter().find(|e| (e.t_s - 210.0 * 86_400.0).abs() <= 1.0);
    let meant = meant.unwrap_or_else(|| panic!("{found:?} {:?}", solved.misses));
    assert!((meant.value - 3e8).abs() <= 300.0, "{meant:?}");
}

#[test]
fn what_cannot_be_reached_is_told_with_the_nearest_miss() {
    let text = format!(
        "{AIRLESS}[[aim]]\nwant = [{{ event = \"apoapsis of Ball\", until = \"1 h\", distance = \"4000 km\" }}]\n\
         free = [{{ body = \"Ball\", quantity = \"throw.speed\", from = \"0.2 km/s\", to = \"0.4 km/s\" }}]\n"
    );
    let failure = solve(&text).unwrap_err();
    let AimFailure::Missed { nearest, place, .. } = &failure else { panic!("{failure:?}") };
    assert_eq!(place.line, 13);
    // At 45 degrees, 0.4 km/s rises to 26.9 km above the 2 km it starts from (conserved energy and angular momentum).
    let (gm, r, v) = (4.902_800_118e12, 1.739e6, 400.0_f64);
    let (energy, h) = (0.5 * v * v - gm / r, r * v * 0.5_f64.sqrt());
    let a = -0.5 * gm / energy;
    let highest = a * (1.0 + (1.0 - h * h / (gm * a)).sqrt());
    let off = Length::parse(&nearest[0].off).unwrap().m();
    assert!((off - (4e6 - highest)).abs() < 1e-4 * off, "{off} {}", 4e6 - highest);
    assert!(failure.to_string().starts_with("no such throw: nearest miss 2235"), "{failure}");
    // Nothing to compare: it never comes down in time.
    let text = text.replace("apoapsis of Ball", "3rd apoapsis of Ball");
    let failure = solve(&text).unwrap_err();
    assert!(
        failure.to_string().starts_with("no such throw: no 3rd apoapsis of Ball within 1 h"),
        "{failure}"
    );
}

#[test]
fn periods_speeds_and_counts_can_be_wanted() {
    let text = format!(
        "{SYSTEM}[[aim]]\nwant = [{{ body = \"Pell\", about = \"Brae\", at = \"0 d\", period-ratio = 8 }}]\n\
         free = [{{ body = \"Pell\", quantity = \"orbit.eccentricity\", from = 0.5, to = 0.99 }}]\n\
         [[aim]]\nwant = [{{ event = \"periapsis of Pell\", until = \"3 yr\", speed = \"52 km/s\" }}]\n\
         free = [{{ body = \"Orla\", quantity = \"mass\", from = \"0.5 Sun masses\", to = \"1.5 Sun masses\" }}]\n\
         [[aim]]\nwant = [{{ event = \"periapsis of Brae\", until = \"3 yr\", count = 6 }}]\n\
         free = [{{ body = \"Brae\", quantity = \"orbit.semi-major\", from = \"0.4 au\", to = \"1.1 au\" }}]\n"
    );
    let mut aiming = Aiming::start(&text).unwrap();
    let mut last = aiming.progress();
    while !last.done {
        let progress = aiming.work().unwrap();
        assert!(progress.trials >= last.trials && (0.0..=1.0).contains(&progress.fraction));
        last = progress;
    }
    let solved = aiming.finish();
    assert_eq!(solved.misses.len(), 3);
    let scenario = parse(&solved.text).scenario.unwrap();
    let crate::scenario::Form::Orbit(pell) = &scenario.bodies[2].form else { panic!("an orbit") };
    // T² ∝ a³ / (M + m): the ratio of 8 makes a four times Brae's 1.1 au, and that e = 1 - 0.6 / 4.4; Brae's mass adds 2e-6.
    let e = pell.eccentricity.unwrap();
    assert!((e - (1.0 - 0.6 / 4.4)).abs() < 1e-5, "{e}");
    let (initial, eph) = paths(&solved.text, 3.0 * 365.25 * 86_400.0);
    let query = |body| events::Query::new(EventKind::Periapsis, BodyId(body), None);
    let brae = events::find(&eph, &initial, &query(1), 1.0, 3.0 * 365.25 * 86_400.0);
    assert_eq!(brae.len(), 6);
}

#[test]
fn a_file_without_aims_or_with_problems_is_told() {
    let failure = solve(AIRLESS).unwrap_err();
    assert!(failure.to_string().starts_with("1:1: the scenario states no aim; add [[aim]]"), "{failure}");
    assert!(matches!(solve("format = 1\n[[body]]"), Err(AimFailure::Problems(_))));
    // A number that can't be written where the file states none.
    let text = format!(
        "{SYSTEM}[[aim]]\nwant = [{{ event = \"periapsis of Pell\", at = \"90 d\" }}]\n\
         free = [{{ body = \"Pell\", quantity = \"orbit.apoapsis\", from = \"2 au\", to = \"9 au\" }}]\n"
    );
    let failure = solve(&text).unwrap_err();
    assert!(failure.to_string().contains("apoapsis beside periapsis and eccentricity"), "{failure}");
}

#[test]
fn a_rounder_number_does_where_more_is_allowed() {
    let solved = |within: &str| {
        let text = format!(
            "{SYSTEM}[[aim]]\nwant = [{{ event = \"periapsis of Pell\", at = \"90 d\"{within} }}]\n\
             free = [{{ body = \"Pell\", quantity = \"orbit.before-periapsis\", from = \"50 d\", to = \"120.5 d\" }}]\n"
        );
        solve(&text).unwrap()
    };
    let (exact, loose) = (solved(""), solved(", within = \"6 h\""));
    assert!(exact.misses[0].is_met() && loose.misses[0].is_met());
    let off_s = |solved: &Solved| {
        let (t_s, ..) = first(&solved.text, 100.0 * 86_400.0, EventKind::Periapsis, 2, 0);
        (t_s - 90.0 * 86_400.0).abs()
    };
    // A second is allowed unless stated.
    assert!(off_s(&exact) <= 1.0 && off_s(&loose) <= 6.0 * 3600.0, "{} {}", off_s(&exact), off_s(&loose));
    assert!(loose.trials <= exact.trials, "{} and {}", loose.trials, exact.trials);
}

const MOON: &str = r#"format = 1
title = "A shot"
[[body]]
name = "Brae"
mass = "1 Earth masses"
radius = "6400 km"
[[body]]
name = "Moonlet"
mass = "1e15 kg"
orbit = { around = "Brae", semi-major = "384000 km", eccentricity = 0.05, inclination = "5 deg", anomaly = "20 deg" }
[[body]]
name = "Shot"
place = { about = "Brae", position = ["7000 km", "0 km", "0 km"], velocity = ["0 km/s", "7 km/s", "0 km/s"] }
"#;

#[test]
fn lamberts_path_is_a_guess_that_all_but_meets_a_moving_body() {
    let free = ["x", "y", "z"].map(|axis| {
        format!("{{ body = \"Shot\", quantity = \"place.velocity.{axis}\", from = \"-14 km/s\", to = \"14 km/s\" }}")
    });
    let text = format!(
        "{MOON}[[aim]]\nwant = [{{ body = \"Shot\", about = \"Moonlet\", at = \"3 d\", distance = \"2000 km\" }}]\nfree = [{}]\n",
        free.join(", ")
    );
    let document = Document::parse(&text).unwrap();
    let aims = parse(&text).scenario.unwrap().aims;
    let solar = Solar::of(&parse(&text).scenario.unwrap());
    let trial = Trial { document: &document, aim: &aims[0], solar: &solar, scene_m: 4e8 };
    let guesses = guess::points(&trial);
    let nearest_m = guesses
        .iter()
        .filter_map(|guess| trial.misses(guess, None).ok())
        .map(|misses| Length::parse(&misses[0].off).unwrap().m())
        .fold(f64::INFINITY, f64::min);
    // The little moon's own pull is 2.5e-10 of the planet's, and its orbit was stated about both.
    assert!(nearest_m < 1e3, "{nearest_m} m off after {} guesses", guesses.len());
    let solved = solve(&text).unwrap();
    let (_, eph) = paths(&solved.text, 3.0 * 86_400.0);
    let apart = eph.relative(BodyId(2), BodyId(1), 3.0 * 86_400.0).unwrap().pos.norm();
    assert!((apart - 2e6).abs() <= 2.0, "{apart}");
}

#[test]
fn a_throw_that_is_a_conic_is_found_at_the_first_guesses() {
    let text = format!(
        "{AIRLESS}[[aim]]\nwant = [{{ event = \"contact of Ball with Skerry\", at = \"25 min\", longitude = \"40 deg\", latitude = \"-10 deg\" }}]\n\
         free = [\n  {{ body = \"Ball\", quantity = \"throw.speed\", from = \"0.3 km/s\", to = \"2.3 km/s\" }},\n  \
         {{ body = \"Ball\", quantity = \"throw.heading\", from = \"0 deg\", to = \"180 deg\" }},\n  \
         {{ body = \"Ball\", quantity = \"throw.elevation\", from = \"0 deg\", to = \"90 deg\" }},\n]\n"
    );
    let solved = solve(&text).unwrap();
    // What the file states, a handful of ways, and the number of digits to write.
    assert!(solved.trials < 20, "{}", solved.trials);
    let (t_s, _, pos) = first(&solved.text, 3600.0, EventKind::Contact, 1, 0);
    assert!((t_s - 1500.0).abs() <= 1.0, "{t_s}");
    let longitude = crate::math::float::atan2(pos.y, pos.x).to_degrees();
    assert!((longitude - 40.0).abs() < 1.2e-5, "{longitude}");
}

const MOONS: &str = r#"format = 1
title = "From moon to moon"
[[body]]
name = "Gros"
mass = "0.8 Jupiter masses"
radius = "68000 km"
[[body]]
name = "Ile"
mass = "1.2 Moon masses"
radius = "1800 km"
orbit = { around = "Gros", semi-major = "420000 km", eccentricity = 0.004, anomaly = "30 deg" }
[[body]]
name = "Ode"
mass = "2 Moon masses"
radius = "2600 km"
orbit = { around = "Gros", semi-major = "1070000 km", eccentricity = 0.01, inclination = "1 deg", anomaly = "200 deg" }
[[body]]
name = "Probe"
throw = { from = "Ile", height = "200 km", speed = "4 km/s", elevation = "10 deg", heading = "80 deg", longitude = "120 deg" }
[[aim]]
want = [{ event = "closest-approach of Probe to Ode", at = "8 d", distance = "3000 km" }]
free = [
  { body = "Probe", quantity = "throw.speed", from = "2.2 km/s", to = "9 km/s" },
  { body = "Probe", quantity = "throw.elevation", from = "0 deg", to = "90 deg" },
  { body = "Probe", quantity = "throw.heading", from = "0 deg", to = "360 deg" },
]
"#;

#[test]
fn a_probe_leaves_one_moon_and_passes_another() {
    let solved = solve(MOONS).unwrap();
    // Scattered points alone end hours off, after thousands of trials.
    assert!(solved.trials < 200, "{}", solved.trials);
    let (initial, eph) = paths(&solved.text, 9.0 * 86_400.0);
    let query = events::Query::new(EventKind::ClosestApproach, BodyId(3), Some(BodyId(2)));
    let found = events::find(&eph, &initial, &query, 0.0, 9.0 * 86_400.0);
    let meant = found.iter().find(|e| (e.t_s - 8.0 * 86_400.0).abs() <= 1.0).expect("a passage");
    assert!((meant.value - 3e6).abs() <= 3.0, "{meant:?}");
    // What it leaves with, by energy, is what Lambert's problem around the planet asks for (the moon it leaves is on it until then:
    // the sphere in which that counts most is 2 % of the orbit).
    let [planet, moon, probe] = [0, 1, 3].map(|body| &initial.bodies[body]);
    let (from, vel) = (probe.pos - moon.pos, probe.vel - moon.vel);
    let away = (vel.norm_squared() - 2.0 * moon.gm_m3_s2 / from.norm()).sqrt();
    let to = eph.relative(BodyId(2), BodyId(0), 8.0 * 86_400.0).unwrap().pos;
    let at = moon.pos - planet.pos;
    let arcs =
        crate::conic::lambert(at, to, 8.0 * 86_400.0, planet.gm_m3_s2, crate::Vector3::z(), 2).unwrap();
    let asked = arcs.iter().map(|arc| (arc.from_vel - (moon.vel - planet.vel)).norm());
    let nearest = asked.fold(f64::INFINITY, |a, b| if (b - away).abs() < (a - away).abs() { b } else { a });
    assert!((nearest - away).abs() < 0.03 * away, "{away} m/s, asked {nearest} m/s");
}

#[test]
fn an_orbit_stated_by_its_elements_is_led_to_a_planet() {
    let text = format!(
        "{SYSTEM}[[body]]\nname = \"Probe\"\norbit = {{ around = \"Orla\", periapsis = \"0.8 au\", eccentricity = 0.1, anomaly = \"-20 deg\" }}\n\
         [[aim]]\nwant = [{{ event = \"closest-approach of Probe to Brae\", at = \"400 d\", distance = \"50000 km\" }}]\n\
         free = [\n  {{ body = \"Probe\", quantity = \"orbit.periapsis\", from = \"0.7 au\", to = \"0.9 au\" }},\n  \
         {{ body = \"Probe\", quantity = \"orbit.eccentricity\", from = 0, to = 0.6 }},\n  \
         {{ body = \"Probe\", quantity = \"orbit.argument\", from = \"-180 deg\", to = \"180 deg\" }},\n]\n"
    );
    let document = Document::parse(&text).unwrap();
    let scenario = parse(&text).scenario.unwrap();
    let solar = Solar::of(&scenario);
    let trial = Trial { document: &document, aim: &scenario.aims[0], solar: &solar, scene_m: 1.6e11 };
    let nearest = guess::points(&trial).iter().filter_map(|guess| trial.misses(guess, None).ok()).fold(
        f64::INFINITY,
        |nearest, misses| {
            let far_m = Length::parse(&misses[1].off).unwrap().m();
            far_m.min(nearest)
        },
    );
    // Before the search: by Kepler's laws alone, which leave out the planet itself and its pull on the star (4e-6 of an au, and more as it goes).
    assert!(nearest < 3e8, "{nearest} m");
    let solved = solve(&text).unwrap();
    assert!(solved.trials < 100, "{}", solved.trials);
    let (initial, eph) = paths(&solved.text, 450.0 * 86_400.0);
    let query = events::Query::new(EventKind::ClosestApproach, BodyId(3), Some(BodyId(1)));
    let found = events::find(&eph, &initial, &query, 0.0, 450.0 * 86_400.0);
    let meant = found.iter().find(|e| (e.t_s - 400.0 * 86_400.0).abs() <= 1.0).expect("a passage");
    assert!((meant.value - 5e7).abs() <= 50.0, "{meant:?}");
}

#[test]
fn two_bodies_are_led_to_one_place() {
    let placed = |name: &str, position: &str, velocity: &str| {
        format!(
            "[[body]]\nname = \"{name}\"\nplace = {{ about = \"Orla\", position = [{position}], velocity = [{velocity}] }}\n"
        )
    };
    let free = |name: &str, axis: &str, from: i32, to: i32| {
        format!(
            "{{ body = \"{name}\", quantity = \"place.velocity.{axis}\", from = \"{from} km/s\", to = \"{to} km/s\" }},\n"
        )
    };
    let text = [
        SYSTEM,
        &placed("One", "\"0.8 au\", \"0 au\", \"0.01 au\"", "\"0 km/s\", \"33 km/s\", \"0 km/s\""),
        &placed("Two", "\"0 au\", \"1.3 au\", \"0 au\"", "\"-26 km/s\", \"0 km/s\", \"0 km/s\""),
        "[[aim]]\nwant = [\n  { body = \"One\", about = \"Brae\", at = \"150 d\", distance = \"50000 km\" },\n  \
         { body = \"Two\", about = \"One\", at = \"150 d\", distance = \"20000 km\" },\n]\nfree = [\n",
        &free("One", "x", -30, 30),
        &free("One", "y", 15, 45),
        &free("One", "z", -5, 5),
        &free("Two", "x", -45, -10),
        &free("Two", "y", -30, 30),
        &free("Two", "z", -5, 5),
        "]\n",
    ]
    .concat();
    let solved = solve(&text).unwrap();
    let (_, eph) = paths(&solved.text, 150.0 * 86_400.0);
    let apart = |a, b| eph.relative(BodyId(a), BodyId(b), 150.0 * 86_400.0).unwrap().pos.norm();
    assert!((apart(3, 1) - 5e7).abs() <= 50.0 && (apart(4, 3) - 2e7).abs() <= 20.0, "{:?}", solved.misses);
    assert!(solved.trials < 200, "{}", solved.trials);
}

#[test]
fn a_stone_is_led_onto_a_moon_that_most_throws_miss() {
    let text = format!(
        "{}\n[[body]]\nname = \"Stone\"\nthrow = {{ from = \"Brae\", height = \"200 km\", speed = \"11 km/s\", elevation = \"5 deg\", heading = \"80 deg\", longitude = \"-100 deg\" }}\n\
         [[aim]]\nwant = [{{ event = \"contact of Stone with Moonlet\", at = \"3 d\" }}]\n\
         free = [\n  {{ body = \"Stone\", quantity = \"throw.speed\", from = \"10.5 km/s\", to = \"12.5 km/s\" }},\n  \
         {{ body = \"Stone\", quantity = \"throw.elevation\", from = \"0 deg\", to = \"90 deg\" }},\n  \
         {{ body = \"Stone\", quantity = \"throw.heading\", from = \"0 deg\", to = \"360 deg\" }},\n]\n",
        MOON.replace("mass = \"1e15 kg\"", "mass = \"1 Moon masses\"\nradius = \"1737 km\"")
    );
    let solved = solve(&text).unwrap();
    assert!(solved.trials < 60, "{}", solved.trials);
    let (t_s, speed_m_s, _) = first(&solved.text, 4.0 * 86_400.0, EventKind::Contact, 3, 1);
    assert!((t_s - 3.0 * 86_400.0).abs() <= 1.0, "{t_s}");
    // What falls onto the Moon from afar is at least as fast as what escapes from it, 2.375 km/s.
    assert!(speed_m_s > 2375.0, "{speed_m_s}");
}

#[test]
fn what_never_happens_is_told_with_how_far_it_is_from_happening() {
    let text = format!(
        "{}[[aim]]\nwant = [{{ event = \"contact of Ball with Skerry\", until = \"3 h\", longitude = \"40 deg\" }}]\n\
         free = [{{ body = \"Ball\", quantity = \"throw.speed\", from = \"3 km/s\", to = \"4 km/s\" }}]\n",
        AIRLESS.replace("45 deg", "90 deg").replace("0.9 km/s", "3.5 km/s")
    );
    let failure = solve(&text).unwrap_err();
    let AimFailure::Missed { nearest, .. } = &failure else { panic!("{failure:?}") };
    // All of them escape (2.4 km/s); the slowest is nearest at the end.
    let (gm, r) = (4.902_800_118e12, 1.739e6);
    let (pos, _) =
        crate::conic::propagate(crate::Vector3::x() * r, crate::Vector3::x() * 3e3, gm, 10_800.0).unwrap();
    let off = Length::parse(&nearest[0].off).unwrap().m();
    assert!((off - (pos.norm() - 1.737e6)).abs() < 1e-4 * off, "{off} {}", pos.norm());
    let said = failure.to_string();
    assert!(said.starts_with("no such throw: nearest miss "), "{said}");
    assert!(said.ends_with("(no contact of Ball with Skerry within 3 h)"), "{said}");
    // A place has a start, and an apsis that is still to come is nearer the sooner it comes.
    let text = format!(
        "{MOON}[[aim]]\nwant = [{{ event = \"apoapsis of Shot\", until = \"1 d\", distance = \"400000 km\" }}]\n\
         free = [{{ body = \"Shot\", quantity = \"place.velocity.y\", from = \"10.6 km/s\", to = \"10.66 km/s\" }}]\n"
    );
    let said = solve(&text).unwrap_err().to_string();
    assert!(said.starts_with("no such start: nearest miss "), "{said}");
    assert!(said.ends_with("(no apoapsis of Shot within 1 d)"), "{said}");
}

#[test]
fn hohmanns_first_kick_is_found_from_where_it_leads() {
    // D. A. Vallado, Fundamentals of Astrodynamics and Applications, 4th ed. (2013), example 6-1 (from memory): from 191.344 11 km to
    // 35,781.348 57 km above the Earth, the first kick 2.457 038 km/s, the way 315.403 min.
    let text = "format = 1\ntitle = \"Upwards\"\n[[body]]\nname = \"Earth\"\ngm = \"398600.4418 km^3/s^2\"\nradius = \"6378.137 km\"\n\
         [[body]]\nname = \"Ship\"\nthrow = { from = \"Earth\", height = \"191.34411 km\", speed = \"7.79 km/s\", elevation = \"0 deg\" }\n\
         [[aim]]\nwant = [{ event = \"apoapsis of Ship\", until = \"6 h\", distance = \"42159.48557 km\" }]\n\
         free = [{ body = \"Ship\", quantity = \"throw.speed\", from = \"7.7 km/s\", to = \"10.6 km/s\" }]\n";
    let solved = solve(text).unwrap();
    let (initial, eph) = paths(&solved.text, 6.0 * 3600.0);
    let circle = (398_600.441_8e9_f64 / 6_569_481.11).sqrt();
    let kick = initial.bodies[1].vel.norm() - circle;
    // A millionth of the apoapsis is some 0.02 m/s; the book rounds its constants too.
    assert!((kick - 2_457.038).abs() < 0.05, "{kick} m/s");
    let query = events::Query::new(EventKind::Apoapsis, BodyId(1), None);
    let t_s = events::find(&eph, &initial, &query, 1.0, 6.0 * 3600.0)[0].t_s;
    assert!((t_s - 315.403 * 60.0).abs() < 0.1, "{} min", t_s / 60.0);
    // From what is stated, straight there.
    assert!(solved.trials < 20, "{}", solved.trials);
}
