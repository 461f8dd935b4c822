//! Swarms lie as stated, evenly where that is said, and the same from the same seed.

use super::*;
use crate::conic::{Elements, elements_from_state, state_from_elements};
use crate::constants::AU_M;
use crate::initial::InitialSwarm;
use crate::scenario::parse;

/// Relative rounding of an orbit that went to a state and back.
const TOL: f64 = 1e-12;

fn resolved(swarm: &str) -> Result<InitialState, Vec<Problem>> {
    let text = format!(
        "format = 1\n[[body]]\nname = \"Dust\"\n{swarm}\n[[body]]\nname = \"Orla\"\nmass = \"1 Sun mass\"\nradius = \"700000 km\"\n\
         [[body]]\nname = \"Brae\"\nmass = \"1 Earth mass\"\nradius = \"6400 km\"\norbit = {{ around = \"Orla\", semi-major = \"1 au\", eccentricity = 0 }}\n\
         [[body]]\nname = \"Station\"\norbit = {{ around = \"Brae\", semi-major = \"8000 km\", eccentricity = 0, inclination = \"50 deg\" }}\n"
    );
    let parsed = parse(&text);
    resolve(&parsed.scenario.ok_or(parsed.problems)?)
}

/// The swarm of a form, with the body that it is about.
fn sown(form: &str) -> (InitialSwarm, InitialBody) {
    let mut initial = resolved(&format!("swarm = {{ {form} }}")).unwrap();
    let swarm = initial.swarms.remove(0);
    let about = initial.bodies.swap_remove(swarm.about.0);
    (swarm, about)
}

fn elements(form: &str) -> Vec<Elements> {
    let (swarm, about) = sown(form);
    let orbits = swarm.pos.iter().zip(&swarm.vel);
    orbits.map(|(p, v)| elements_from_state(*p, *v, about.gm_m3_s2).unwrap()).collect()
}

fn mean(values: impl Iterator<Item = f64>) -> f64 {
    let (sum, count) = values.fold((0.0, 0.0), |(s, n), v| (s + v, n + 1.0));
    sum / count
}

#[test]
fn a_ring_is_even_over_its_area_and_no_thicker_than_stated() {
    let (swarm, brae) = sown(
        "ring = \"Brae\", from = \"10000 km\", to = \"20000 km\", thickness = \"200 km\", count = 20000",
    );
    assert_eq!((brae.name.as_str(), swarm.pos.len(), swarm.vel.len()), ("Brae", 20_000, 20_000));
    let mut inner = 0.0;
    for (pos, vel) in swarm.pos.iter().zip(&swarm.vel) {
        let r = pos.norm();
        assert!((1e7 * (1.0 - TOL)..=2e7 * (1.0 + TOL)).contains(&r), "{r}");
        assert!(pos.z.abs() <= 1e5 * (1.0 + TOL), "{}", pos.z);
        let circular = (brae.gm_m3_s2 / r).sqrt();
        assert!((vel.norm() / circular - 1.0).abs() < TOL && (pos.dot(vel) / (r * circular)).abs() < TOL);
        assert!(pos.x * vel.y - pos.y * vel.x > 0.0, "all go the same way round");
        if r < 1.5e7 {
            inner += 1.0;
        }
    }
    // Of the area from 1 to 2, (1.5² - 1) / (2² - 1) lies inside 1.5. Five standard deviations.
    let share: f64 = 1.25 / 3.0;
    assert!((inner / 2e4 - share).abs() < 5.0 * (share * (1.0 - share) / 2e4).sqrt(), "{inner}");
    // The thickness is used: the mean height of sines of even sizes up to 100 km is 100 km / 2 · 2/π.
    let height = mean(swarm.pos.iter().map(|p| p.z.abs()));
    assert!((height / 1e5 - std::f64::consts::FRAC_1_PI).abs() < 0.01, "{height}");
}

#[test]
fn a_tipped_ring_lies_in_its_plane() {
    let (swarm, _) = sown(
        "ring = \"Brae\", from = \"10000 km\", to = \"20000 km\", inclination = \"30 deg\", node = \"40 deg\", count = 500",
    );
    let (i, node) = (30.0_f64.to_radians(), 40.0_f64.to_radians());
    let at = Elements {
        periapsis_m: 1.0,
        eccentricity: 0.0,
        inclination_rad: i,
        node_rad: node,
        argument_rad: 0.3,
        true_anomaly_rad: 0.0,
    };
    let (p, v) = state_from_elements(&at, 1.0).unwrap();
    let pole = p.cross(&v).normalize();
    for (pos, vel) in swarm.pos.iter().zip(&swarm.vel) {
        assert!((pos.cross(vel).normalize() - pole).norm() < 1e-12);
    }
}

#[test]
fn orbits_of_a_belt_stay_within_what_is_stated_and_fill_it() {
    let orbits = elements(
        "belt = \"Orla\", from = \"2 au\", to = \"3.5 au\", eccentricity = 0.2, spread = \"10 deg\", count = 20000",
    );
    let spread = 10.0_f64.to_radians();
    for o in &orbits {
        let a = o.semi_major_m() / AU_M;
        assert!((2.0 - 1e-9..=3.5 + 1e-9).contains(&a), "{a}");
        assert!(o.eccentricity <= 0.2 + TOL && o.inclination_rad <= spread + TOL);
    }
    // Means of even draws, within five standard deviations: the range / sqrt(12 n).
    let near = |got: f64, from: f64, to: f64| {
        let allowed = 5.0 * (to - from) / (12.0 * 2e4_f64).sqrt();
        assert!((got - 0.5 * (from + to)).abs() < allowed, "{got} between {from} and {to}");
    };
    near(mean(orbits.iter().map(|o| o.semi_major_m() / AU_M)), 2.0, 3.5);
    near(mean(orbits.iter().map(|o| o.eccentricity)), 0.0, 0.2);
    near(mean(orbits.iter().map(|o| o.inclination_rad)), 0.0, spread);
    near(mean(orbits.iter().map(|o| o.node_rad)), 0.0, std::f64::consts::TAU);
    near(
        mean(orbits.iter().map(|o| o.mean_anomaly_rad().unwrap())),
        -std::f64::consts::PI,
        std::f64::consts::PI,
    );
}

#[test]
fn a_cloud_has_no_preferred_direction() {
    let (swarm, orla) =
        sown("cloud = \"Orla\", from = \"100 au\", to = \"1000 au\", eccentricity = 0.9, count = 20000");
    let mut sum = Vector3::zeros();
    let mut squares = Vector3::zeros();
    for (p, v) in swarm.pos.iter().zip(&swarm.vel) {
        let o = elements_from_state(*p, *v, orla.gm_m3_s2).unwrap();
        let a = o.semi_major_m() / AU_M;
        assert!((100.0 - 1e-6..=1000.0 + 1e-6).contains(&a) && o.eccentricity <= 0.9 + TOL, "{o:?}");
        let pole = p.cross(v).normalize();
        sum += pole;
        squares += pole.component_mul(&pole);
    }
    // Each part of an even direction has mean 0 and mean square 1/3, its square a variance of 4/45: five standard deviations.
    for axis in 0..3 {
        assert!((sum[axis] / 2e4).abs() < 5.0 / (3.0 * 2e4_f64).sqrt(), "{sum}");
        assert!((squares[axis] / 2e4 - 1.0 / 3.0).abs() < 5.0 * (4.0 / 45.0 / 2e4_f64).sqrt(), "{squares}");
    }
}

#[test]
fn a_burst_leaves_its_body_in_all_directions_and_goes_on_around_what_that_goes_around() {
    let initial = resolved(
        "swarm = { burst = \"Station\", slowest = \"20 m/s\", fastest = \"100 m/s\", count = 5000 }",
    )
    .unwrap();
    let swarm = &initial.swarms[0];
    let [_, brae, station] = &initial.bodies[..] else { panic!("three bodies") };
    assert_eq!(swarm.about, BodyId(1));
    let mut sum = Vector3::zeros();
    for (pos, vel) in swarm.pos.iter().zip(&swarm.vel) {
        assert!((brae.pos + pos - station.pos).norm() < 1e-3, "rounding at 1 au");
        let off = vel - (station.vel - brae.vel);
        assert!((20.0 - 1e-6..=100.0 + 1e-6).contains(&off.norm()), "{}", off.norm());
        sum += off.normalize();
    }
    assert!(sum.norm() / 5e3 < 5.0 / 5e3_f64.sqrt(), "{sum}");
}

#[test]
fn a_burst_from_a_spot_goes_up_and_one_from_all_around_straight_up() {
    let (swarm, brae) = sown(
        "burst = \"Brae\", fastest = \"3 km/s\", latitude = \"30 deg\", longitude = \"90 deg\", height = \"100 km\", count = 1000",
    );
    let up = Vector3::new(0.0, 0.75_f64.sqrt(), 0.5);
    for (pos, vel) in swarm.pos.iter().zip(&swarm.vel) {
        assert!((pos - up * 6.5e6).norm() < 1e-6 && vel.dot(&up) >= 0.0 && vel.norm() <= 3e3 + 1e-9);
    }
    let (swarm, _) = sown("burst = \"Brae\", fastest = \"3 km/s\", count = 1000");
    for (pos, vel) in swarm.pos.iter().zip(&swarm.vel) {
        assert!((pos.norm() - brae.radius_m).abs() < 1e-6 && pos.cross(vel).norm() < 1e-6 * pos.norm());
        assert!(pos.dot(vel) >= 0.0);
    }
}

#[test]
fn the_same_seed_gives_the_same_bits_and_another_one_others() {
    let form = |seed: u32| {
        format!(
            "belt = \"Orla\", from = \"2 au\", to = \"3 au\", eccentricity = 0.1, seed = {seed}, count = 50"
        )
    };
    let ((a, _), (b, _), (c, _)) = (sown(&form(7)), sown(&form(7)), sown(&form(8)));
    let bits = |s: &InitialSwarm| -> Vec<u64> {
        s.pos.iter().chain(&s.vel).flat_map(|v| [v.x.to_bits(), v.y.to_bits(), v.z.to_bits()]).collect()
    };
    assert_eq!(bits(&a), bits(&b));
    assert_ne!(bits(&a), bits(&c));
}

#[test]
fn air_slows_a_swarm_as_stated_and_none_where_drag_is_off() {
    let with = |top: &str| {
        let text = format!(
            "format = 1\n{top}[[body]]\nname = \"Brae\"\nmass = \"1 Earth mass\"\n[[body]]\nname = \"Dust\"\n\
             drag = {{ area-per-mass = \"0.02 m^2/kg\", coefficient = 2 }}\nswarm = {{ ring = \"Brae\", from = \"7000 km\", to = \"7000 km\", count = 1 }}\n"
        );
        resolve(&parse(&text).scenario.unwrap()).unwrap().swarms[0].area_m2_kg
    };
    assert!((with("") - 0.04).abs() < 1e-15);
    assert!(with("[physics]\ndrag = false\n").abs() < 1e-15);
}

#[test]
fn orbits_inside_their_body_are_refused() {
    let problems =
        resolved("swarm = { ring = \"Brae\", from = \"6000 km\", to = \"9000 km\", count = 9 }").unwrap_err();
    let [problem] = problems.as_slice() else { panic!("{problems:?}") };
    assert_eq!(problem.place.line, 2);
    assert!(
        problem.wrong.contains("Dust: it starts at 6000 km from the centre of Brae"),
        "{}",
        problem.wrong
    );
    assert!(problem.remedy.contains("6400 km"), "{}", problem.remedy);
}
