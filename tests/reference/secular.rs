//! A million years of the giant planets: how fast their orbits turn.
//!
//! Standard: the fundamental frequencies of the solar system, g₅ and g₆ (of the perihelia of Jupiter and Saturn) and s₆ (of Saturn's node),
//! in arcseconds a year: 4.2574, 28.2452 and -26.3478, from J. Laskar et al., Astronomy & Astrophysics 428 (2004), 261, table 3
//! (from memory). Theirs are those of all planets over twenty million years; of the four giants alone, with the mass of the
//! inner planets added to the Sun's, they differ by parts in a thousand.

use fallaround_core::Vector3;
use fallaround_core::conic::{Equinoctial, Sense};
use fallaround_core::constants::{ARCSEC_RAD, YEAR_S};
use fallaround_core::ephemeris::{Ephemeris, Propagation};
use fallaround_core::initial::{InitialBody, InitialState};
use fallaround_core::math::float::{cos, sin};
use fallaround_core::math::frame::ecliptic_from_equatorial;
use fallaround_core::scenario::{BodyId, Surface};
use fallaround_tests::Table;

const GIANTS: [&str; 4] = ["jupiter", "saturn", "uranus", "neptune"];
const YEARS: f64 = 1e6;
/// Looks at the orbits.
const LOOKS: u32 = 4_000;
/// Inner planets that are no more than mass of the Sun, and relativity left out, turn perihelia and nodes by up to this part differently.
const LEFT_OUT: f64 = 3e-3;
/// That of Uranus, g₇ = 3.088, is too near g₅ to be told from it in a million years (the maximum is 1.3 wide). It has a thirtieth of g₅'s part in Jupiter's
/// eccentricity, and draws the maximum by up to that part of the way over, arcseconds a year.
const DRAWN: f64 = 1.17 / 30.0;

fn giants() -> Option<InitialState> {
    let table = Table::read("solar-system-j2000.csv");
    let mut bodies = Vec::new();
    let mut sun_gm = 0.0;
    for row in &table.rows {
        let (name, gm) = (row.text("body"), 1e9 * row.number("gm_km3_s2"));
        let giant = GIANTS.contains(&name);
        if !giant {
            // The Sun, and what circles so near that it acts with it.
            sun_gm += gm;
        }
        if giant || name == "sun" {
            bodies.push(InitialBody {
                name: name.to_owned(),
                gm_m3_s2: gm,
                radius_m: 0.0,
                surface: Surface::Stop,
                primary: None,
                pos: ecliptic_from_equatorial(row.kilo_vector(["x_km", "y_km", "z_km"])),
                vel: ecliptic_from_equatorial(row.kilo_vector(["vx_km_s", "vy_km_s", "vz_km_s"])),
            });
        }
    }
    let sun = bodies.iter_mut().find(|body| body.name == "sun")?;
    sun.gm_m3_s2 = sun_gm;
    // The centre of mass comes to rest.
    let all: f64 = bodies.iter().map(|body| body.gm_m3_s2).sum();
    let drift = bodies.iter().fold(Vector3::zeros(), |sum, body| sum + body.vel * (body.gm_m3_s2 / all));
    for body in &mut bodies {
        body.vel -= drift;
    }
    Some(InitialState::of(bodies))
}

/// The frequency near a guess at which a series of points in the plane turns most, arcseconds a year.
///
/// The series is tapered by Hann's window, so that other frequencies don't lean in; then the maximum is as sharp as the span allows.
fn frequency(series: &[[f64; 2]], span_yr: f64, guess: f64) -> f64 {
    let size = |rate: f64| {
        let (mut re, mut im) = (0.0, 0.0);
        for (k, [x, y]) in series.iter().enumerate() {
            let part = k as f64 / (series.len() - 1) as f64;
            let weight = 1.0 - cos(std::f64::consts::TAU * part);
            let (s, c) = (sin(rate * ARCSEC_RAD * part * span_yr), cos(rate * ARCSEC_RAD * part * span_yr));
            re += weight * (x * c + y * s);
            im += weight * (y * c - x * s);
        }
        re * re + im * im
    };
    // Golden section about the guess, within the width of the maximum.
    let resolution = std::f64::consts::TAU / span_yr / ARCSEC_RAD;
    let (mut low, mut high) = (guess - resolution, guess + resolution);
    let golden = 0.5 * (5.0_f64.sqrt() - 1.0);
    while high - low > 1e-6 {
        let (a, b) = (high - golden * (high - low), low + golden * (high - low));
        if size(a) > size(b) { high = b } else { low = a }
    }
    0.5 * (low + high)
}

fn orbit(eph: &Ephemeris, initial: &InitialState, name: &str, t_s: f64) -> Option<Equinoctial> {
    let place = |name: &str| initial.bodies.iter().position(|body| body.name == name);
    let (body, sun) = (place(name)?, place("sun")?);
    let state = eph.relative(BodyId(body), BodyId(sun), t_s)?;
    let gm = initial.bodies[body].gm_m3_s2 + initial.bodies[sun].gm_m3_s2;
    Equinoctial::from_state(state.pos, state.vel, gm, Sense::Direct).ok()
}

#[test]
fn jupiters_and_saturns_orbits_turn_at_the_published_rates_over_a_million_years() {
    let initial = giants().expect("the Sun is in the table");
    let mut propagation = Propagation::new(&initial);
    while !propagation.advance(YEARS * YEAR_S, 10_000).expect("they go on") {}
    let eph = propagation.into_ephemeris();
    let long: Vec<_> = eph.forward().long_stretches().collect();
    println!("{long:?}, {:.1} MB", eph.bytes() as f64 / 1e6);
    assert!(long.len() == 1 && long[0].from_s < 0.1 * YEARS * YEAR_S, "long steps from early on: {long:?}");
    let instants = (0..=LOOKS).map(|k| f64::from(k) / f64::from(LOOKS) * YEARS * YEAR_S);
    let (mut jupiter, mut saturn, mut node) = (Vec::new(), Vec::new(), Vec::new());
    for t_s in instants {
        let at = |name| orbit(&eph, &initial, name, t_s).expect("a closed orbit");
        let (five, six) = (at("jupiter"), at("saturn"));
        jupiter.push([five.k, five.h]);
        saturn.push([six.k, six.h]);
        node.push([six.q, six.p]);
    }
    // About the invariable plane, whose pole is fixed: the mean is no frequency.
    let mean = [0, 1].map(|axis| node.iter().map(|point| point[axis]).sum::<f64>() / node.len() as f64);
    for point in &mut node {
        *point = [point[0] - mean[0], point[1] - mean[1]];
    }
    for (name, series, published, drawn) in
        [("g5", &jupiter, 4.2574, DRAWN), ("g6", &saturn, 28.2452, 0.0), ("s6", &node, -26.3478, 0.0)]
    {
        let got = frequency(series, YEARS, published);
        println!("{name}: {got:.4} arcsec/yr, published {published}");
        let most = LEFT_OUT * f64::abs(published) + drawn;
        assert!(
            (got - published).abs() < most,
            "{name}: {got} for {published}, which is off by more than {most}"
        );
    }
}
