//! What the laws keep, on an invented system that nobody can integrate by hand: energy, momentum, angular momentum; and what makes no
//! difference: time turned round, where all is, how fast all moves, which way it is turned, and the order of the bodies.

use fallaround_core::Vector3;
use fallaround_core::ephemeris::{State, states_at};
use fallaround_core::initial::Oblate;
use fallaround_core::integrate::drift;
use fallaround_core::resolve::InitialState;
use fallaround_core::scenario::BodyId;
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

/// The same system with relativity and a bulge of its planet: all forces that can be turned round in time.
fn system_with_all() -> InitialState {
    let mut initial = system();
    initial.forces.relativity = true;
    let pole = Vector3::new(0.3, -0.4, 0.866).normalize();
    initial.forces.oblate = vec![Oblate { body: BodyId(1), j2: 0.015, radius_m: 7e7, pole }];
    initial
}

/// The farthest that bodies are from where they should be, m.
fn farthest(got: &[State], want: &[State]) -> f64 {
    got.iter().zip(want).map(|(got, want)| (got.pos - want.pos).norm()).fold(0.0, f64::max)
}

/// How far off bodies may be after [`SPAN_S`], m: what shifts and turns round off in the places at the start, 1e-4 m, makes the moonlet's period
/// longer by three halves of its share of the orbit, through some forty rounds.
const OFF_M: f64 = 0.1;
const SPAN_S: f64 = 120.0 * 86_400.0;

#[test]
fn time_turned_round_leads_back_with_relativity_and_a_bulge_too() {
    let initial = system_with_all();
    let there = states_at(&initial, SPAN_S).expect("no collision");
    let mut turned = initial.clone();
    for (body, state) in turned.bodies.iter_mut().zip(&there) {
        body.pos = state.pos;
        body.vel = -state.vel;
    }
    let back = states_at(&turned, SPAN_S).expect("no collision");
    let off_m = farthest(&back, &initial_states(&initial));
    assert!(off_m < OFF_M, "{off_m} m from where it started");
    // The forces that were added count.
    let plain = states_at(&system(), SPAN_S).expect("no collision");
    assert!(farthest(&there, &plain) > 1e6);
}

#[test]
fn it_makes_no_difference_where_all_is_and_how_fast_all_moves() {
    // Relativity is not of Galilei's kind, so it is left out here.
    let mut initial = system_with_all();
    initial.forces.relativity = false;
    let want = states_at(&initial, SPAN_S).expect("no collision");
    let (shift, boost) = (Vector3::new(3e11, -1e11, 2e10), Vector3::new(-2e4, 1.5e4, 7e3));
    let mut moved = initial.clone();
    for body in &mut moved.bodies {
        body.pos += shift;
        body.vel += boost;
    }
    let got: Vec<State> = states_at(&moved, SPAN_S)
        .expect("no collision")
        .iter()
        .map(|s| State { pos: s.pos - shift - boost * SPAN_S, vel: s.vel - boost })
        .collect();
    let off_m = farthest(&got, &want);
    assert!(off_m < OFF_M, "{off_m} m");
}

#[test]
fn it_makes_no_difference_which_way_all_is_turned() {
    let initial = system_with_all();
    let want = states_at(&initial, SPAN_S).expect("no collision");
    // A turn about a slanted axis, by its rows: (x, y, z) to (z, x, y), and then by Pythagoras' triangle about z.
    let turn = |v: &Vector3<f64>| Vector3::new(0.6 * v.z - 0.8 * v.x, 0.8 * v.z + 0.6 * v.x, v.y);
    let mut turned = initial.clone();
    for body in &mut turned.bodies {
        body.pos = turn(&body.pos);
        body.vel = turn(&body.vel);
    }
    for bulge in &mut turned.forces.oblate {
        bulge.pole = turn(&bulge.pole);
    }
    let got = states_at(&turned, SPAN_S).expect("no collision");
    let want: Vec<State> = want.iter().map(|s| State { pos: turn(&s.pos), vel: turn(&s.vel) }).collect();
    let off_m = farthest(&got, &want);
    assert!(off_m < OFF_M, "{off_m} m");
}

#[test]
fn it_makes_no_difference_in_which_order_the_bodies_stand() {
    let initial = system_with_all();
    let want = states_at(&initial, SPAN_S).expect("no collision");
    let order = [3, 0, 4, 2, 1];
    let mut shuffled = initial.clone();
    shuffled.bodies = order.iter().map(|&body| initial.bodies[body].clone()).collect();
    let place = |body: BodyId| BodyId(order.iter().position(|&b| b == body.0).expect("all are there"));
    for body in &mut shuffled.bodies {
        body.primary = body.primary.map(place);
    }
    for bulge in &mut shuffled.forces.oblate {
        bulge.body = place(bulge.body);
    }
    let got = states_at(&shuffled, SPAN_S).expect("no collision");
    let want: Vec<State> = order.iter().map(|&body| want[body]).collect();
    let off_m = farthest(&got, &want);
    assert!(off_m < OFF_M, "{off_m} m");
}
