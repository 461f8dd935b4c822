//! What Newton's laws keep, on an invented system that nobody can integrate by hand: energy, momentum, angular momentum, and time
//! turned round.

use fallaround_core::Vector3;
use fallaround_core::ephemeris::{State, states_at};
use fallaround_core::integrate::drift;
use fallaround_core::resolve::InitialState;
use fallaround_tests::{scenario, start};

const YEAR_S: f64 = 365.25 * 86_400.0;

/// Relative: a random walk of the rounding of some thousand steps, in the most eccentric of the orbits.
const KEEPS: f64 = 1e-13;

fn system() -> InitialState {
    start(&scenario(
        "[[body]]\nname = \"Orla\"\nmass = \"0.9 Sun masses\"\n\
         [[body]]\nname = \"Brae\"\nmass = \"300 Earth masses\"\norbit = { around = \"Orla\", semi-major = \"1.1 au\", eccentricity = 0.2, anomaly = \"40 deg\" }\n\
         [[body]]\nname = \"Pell\"\nmass = \"2 Jupiter masses\"\norbit = { around = \"Orla\", semi-major = \"3 au\", eccentricity = 0.1, inclination = \"15 deg\", node = \"50 deg\" }\n\
         [[body]]\nname = \"Moonlet\"\nmass = \"1 Moon masses\"\norbit = { around = \"Brae\", semi-major = \"600000 km\", eccentricity = 0.05 }\n\
         [[body]]\nname = \"Fenn\"\norbit = { around = \"Orla\", periapsis = \"0.42 au\", eccentricity = 0.88, inclination = \"4 deg\", before-periapsis = \"140 d\" }\n",
    ))
}

fn flat(states: &[State], of: fn(&State) -> Vector3<f64>) -> Vec<f64> {
    states.iter().flat_map(|s| <[f64; 3]>::from(of(s))).collect()
}

fn initial_states(initial: &InitialState) -> Vec<State> {
    initial.bodies.iter().map(|b| State { pos: b.pos, vel: b.vel }).collect()
}

fn gms(initial: &InitialState) -> Vec<f64> {
    initial.bodies.iter().map(|b| b.gm_m3_s2).collect()
}

#[test]
fn energy_and_angular_momentum_are_kept() {
    let initial = system();
    let gms = gms(&initial);
    let energy = |s: &[State]| drift::energy(&gms, &flat(s, |s| s.pos), &flat(s, |s| s.vel));
    let spin =
        |s: &[State]| Vector3::from(drift::angular_momentum(&gms, &flat(s, |s| s.pos), &flat(s, |s| s.vel)));
    let at_start = initial_states(&initial);
    for years in [-20.0, -1.0, 0.3, 5.0, 20.0] {
        let states = states_at(&initial, years * YEAR_S).expect("no collision");
        let off = (energy(&states) / energy(&at_start) - 1.0).abs();
        assert!(off < KEEPS, "energy after {years} years: {off:e}");
        let off = (spin(&states) - spin(&at_start)).norm() / spin(&at_start).norm();
        assert!(off < KEEPS, "angular momentum after {years} years: {off:e}");
    }
}

#[test]
fn the_centre_of_mass_stays_at_rest_at_the_origin() {
    let initial = system();
    let gms = gms(&initial);
    let total: f64 = gms.iter().sum();
    for years in [0.0, -20.0, 20.0] {
        let states = if years == 0.0 {
            initial_states(&initial)
        } else {
            states_at(&initial, years * YEAR_S).expect("no collision")
        };
        let mut momentum = Vector3::zeros();
        let mut centre = Vector3::zeros();
        for (state, gm) in states.iter().zip(&gms) {
            momentum += state.vel * (gm / total);
            centre += state.pos * (gm / total);
        }
        // Of speeds of 1e4 m/s; the place drifts by as much a second, over the years.
        assert!(momentum.norm() < 1e4 * KEEPS, "momentum after {years} years: {momentum}");
        assert!(
            centre.norm() < 1e-3 + 1e4 * KEEPS * years.abs() * YEAR_S,
            "centre after {years} years: {centre}"
        );
    }
}

#[test]
fn time_turned_round_leads_back() {
    let initial = system();
    let there = states_at(&initial, 3.0 * YEAR_S).expect("no collision");
    let mut turned = initial.clone();
    for (body, state) in turned.bodies.iter_mut().zip(&there) {
        body.pos = state.pos;
        body.vel = -state.vel;
    }
    let back = states_at(&turned, 3.0 * YEAR_S).expect("no collision");
    for (body, state) in initial.bodies.iter().zip(&back) {
        // The moonlet goes round 360 times each way, at 24 microradians a second. A rounding of its speed grows along its
        // path with time; a metre of that turns its velocity by 24 micrometres a second.
        let off = (state.pos - body.pos).norm() / 1.5e11;
        assert!(off < 1e-11, "{}: {off:e} au from where it started", body.name);
        let off = (state.vel + body.vel).norm() / 3e4;
        assert!(off < 2e-9, "{}: speed {off:e}", body.name);
    }
    // The backward track is the same thing without turning anything.
    let mut later = initial.clone();
    for (body, state) in later.bodies.iter_mut().zip(&there) {
        body.pos = state.pos;
        body.vel = state.vel;
    }
    let back = states_at(&later, -3.0 * YEAR_S).expect("no collision");
    for (body, state) in initial.bodies.iter().zip(&back) {
        assert!((state.pos - body.pos).norm() / 1.5e11 < 1e-11, "{}", body.name);
    }
}
