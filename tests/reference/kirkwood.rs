//! The Kirkwood gap at 2.50 au: where a year is a third of Jupiter's, orbits become long-drawn and cross those of the inner planets; beside it they don't.
//!
//! Standard: J. Wisdom (1983, Icarus 56, 51), who found by a mapping, and by integration, that eccentricities near the 3:1 commensurability
//! stay low for long and then rise above 0.3, enough to cross the orbit of Mars, within some ten thousand to some hundred thousand years, in a zone as wide as the observed gap.

use fallaround_core::Vector3;
use fallaround_core::conic::{Elements, elements_from_state, state_from_elements};
use fallaround_core::constants::{AU_M, DAY_S, YEAR_S};
use fallaround_core::ephemeris::Propagation;
use fallaround_core::initial::{InitialBody, InitialState, InitialSwarm};
use fallaround_core::integrate::WisdomHolman;
use fallaround_core::integrate::wisdom_holman::Start;
use fallaround_core::math::float::cbrt;
use fallaround_core::math::frame::ecliptic_from_equatorial;
use fallaround_core::scenario::{BodyId, Surface};
use fallaround_core::swarm::{Cursor, SwarmRun};
use fallaround_tests::Table;
use std::f64::consts::{PI, TAU};

const TRACERS: u8 = 64;
const YEARS: f64 = 50_000.0;

/// Half of the width of the zone, au: the gap among the asteroids reaches from about 2.48 to 2.52 au.
const ZONE_AU: f64 = 0.025;

/// A period of 4 years has 36 such steps.
const STEP_S: f64 = 40.0 * DAY_S;

/// The Sun, Jupiter and a belt of tracers about the commensurability: positions (m) and velocities (m/s), three numbers each.
struct Belt {
    gms: Vec<f64>,
    pos: Vec<f64>,
    vel: Vec<f64>,
    tracer_pos: Vec<f64>,
    tracer_vel: Vec<f64>,
    /// Semi-major axes of the tracers at the start, au.
    semi_majors_au: Vec<f64>,
    /// That at which a year is a third of Jupiter's, au.
    gap_au: f64,
}

fn vector(of: &[f64], body: usize) -> Vector3<f64> {
    Vector3::new(of[3 * body], of[3 * body + 1], of[3 * body + 2])
}

impl Belt {
    fn new() -> Option<Self> {
        let table = Table::read("solar-system-j2000.csv");
        let (mut gms, mut pos, mut vel) = (Vec::new(), Vec::<f64>::new(), Vec::<f64>::new());
        for body in ["sun", "jupiter"] {
            let row = table.rows.iter().find(|row| row.text("body") == body)?;
            gms.push(1e9 * row.number("gm_km3_s2"));
            pos.extend(ecliptic_from_equatorial(row.kilo_vector(["x_km", "y_km", "z_km"])).iter());
            vel.extend(ecliptic_from_equatorial(row.kilo_vector(["vx_km_s", "vy_km_s", "vz_km_s"])).iter());
        }
        // About their centre of mass, at rest.
        let all = gms[0] + gms[1];
        for of in [&mut pos, &mut vel] {
            let mean = (vector(of, 0) * gms[0] + vector(of, 1) * gms[1]) / all;
            for (number, mean) in of.iter_mut().zip(mean.iter().cycle()) {
                *number -= mean;
            }
        }
        let sun = gms[0];
        let jupiter = elements_from_state(
            vector(&pos, 1) - vector(&pos, 0),
            vector(&vel, 1) - vector(&vel, 0),
            sun + gms[1],
        )
        .ok()?;
        // Kepler's third law: a third of the year.
        let gap_au = jupiter.semi_major_m() / AU_M / cbrt(9.0);
        assert!((gap_au - 2.50).abs() < 0.01, "{gap_au}");
        // Evenly over a tenth of an au, at all longitudes (steps by the golden angle and others that don't repeat).
        let mut semi_majors_au = Vec::new();
        let (mut tracer_pos, mut tracer_vel) = (Vec::<f64>::new(), Vec::<f64>::new());
        for i in (0..TRACERS).map(f64::from) {
            let a_au = 2.45 + 0.1 * (i + 0.5) / f64::from(TRACERS);
            let orbit = Elements {
                periapsis_m: 0.85 * a_au * AU_M,
                eccentricity: 0.15,
                inclination_rad: 0.02,
                node_rad: (2.399 * i) % TAU,
                argument_rad: (1.7 * i) % TAU,
                true_anomaly_rad: (3.883 * i) % TAU - PI,
            };
            let (at, v) = state_from_elements(&orbit, sun).ok()?;
            semi_majors_au.push(a_au);
            tracer_pos.extend((at + vector(&pos, 0)).iter());
            tracer_vel.extend((v + vector(&vel, 0)).iter());
        }
        Some(Self { gms, pos, vel, tracer_pos, tracer_vel, semi_majors_au, gap_au })
    }

    /// How many tracers near the commensurability, or beside it, rise or don't.
    fn count(&self, rises: &[bool], near: bool, high: bool) -> usize {
        let of = self.semi_majors_au.iter().zip(rises);
        of.filter(|(a, rises)| ((**a - self.gap_au).abs() < ZONE_AU) == near && **rises == high).count()
    }
}

#[test]
fn the_gap_at_a_third_of_jupiters_year_appears() {
    let belt = Belt::new().expect("the Sun and Jupiter are in the table");
    let Belt { gms, tracer_pos, tracer_vel, semi_majors_au, gap_au, .. } = &belt;
    let (mut pos, mut vel) = (belt.pos.clone(), belt.vel.clone());
    let start = Start { centre: 0, gms, pos: &pos, vel: &vel, t_s: 0.0, relativity: false };
    let mut run = WisdomHolman::new(&start, STEP_S).expect("Jupiter alone goes by long steps");
    run.set_tracers(tracer_pos, tracer_vel, [7e8, 30.0 * AU_M]).expect("no tracer starts in the Sun");
    let mut highest = vec![0.0_f64; usize::from(TRACERS)];
    let mut look_s = 0.0;
    while run.t_s() < YEARS * YEAR_S {
        run.step().expect("Jupiter meets nothing");
        if run.t_s() < look_s {
            continue;
        }
        look_s += 500.0 * YEAR_S;
        run.state(&mut pos, &mut vel).expect("a state");
        for (i, highest) in highest.iter_mut().enumerate() {
            // One that was removed came too near to Jupiter or to the Sun.
            let e = run.tracer(i).map_or(1.0, |(at, v)| {
                elements_from_state(at.into(), v.into(), gms[0]).map_or(1.0, |orbit| orbit.eccentricity)
            });
            *highest = highest.max(e);
        }
    }
    let rises: Vec<bool> = highest.iter().map(|e| *e > 0.3).collect();
    let count = |near, high| belt.count(&rises, near, high);
    println!("in the gap {} of {} rise above 0.3", count(true, true), count(true, true) + count(true, false));
    // Whether one rises depends on its longitudes too: the zone is that wide for the worst of them.
    assert!(count(true, true) >= 8, "only {} rise in the gap", count(true, true));
    assert_eq!(count(false, true), 0, "some rise beside the gap: {highest:?}");
    let beside = semi_majors_au.iter().zip(&highest).filter(|(a, _)| (**a - *gap_au).abs() > 1.5 * ZONE_AU);
    let highest_beside = beside.fold(0.0_f64, |most, (_, e)| most.max(*e));
    assert!(highest_beside < 0.28, "{highest_beside} beside the gap");
}

/// As a show has it: tracers of a swarm in the ephemeris, followed from snapshot to snapshot.
#[test]
fn the_gap_appears_in_a_swarm_as_well() {
    let belt = Belt::new().expect("the Sun and Jupiter are in the table");
    let bodies = ["Sun", "Jupiter"].iter().enumerate().map(|(i, name)| InitialBody {
        name: (*name).to_owned(),
        gm_m3_s2: belt.gms[i],
        radius_m: 0.0,
        surface: Surface::Stop,
        primary: None,
        pos: vector(&belt.pos, i),
        vel: vector(&belt.vel, i),
    });
    let mut initial = InitialState::of(bodies.collect());
    let all = 0..usize::from(TRACERS);
    initial.swarms.push(InitialSwarm {
        name: "Belt".to_owned(),
        about: BodyId(0),
        pos: all.clone().map(|i| vector(&belt.tracer_pos, i) - vector(&belt.pos, 0)).collect(),
        vel: all.clone().map(|i| vector(&belt.tracer_vel, i) - vector(&belt.vel, 0)).collect(),
        area_m2_kg: 0.0,
    });
    let until_s = YEARS * YEAR_S;
    let mut propagation = Propagation::new(&initial);
    while !propagation.advance(until_s, 10_000).expect("they go on") {}
    let eph = propagation.into_ephemeris();
    let mut run = SwarmRun::new(&initial, 0);
    while !run.advance(&eph, until_s, 1_000_000) {}
    let path = run.into_path();
    let mut cursor = Cursor::new(&initial, 0);
    // How far out each is seen at most, at many instants: its apoapsis all but.
    let mut farthest_au = vec![0.0_f64; usize::from(TRACERS)];
    for look in 0..=1000 {
        while !cursor.seek(&path, &eph, f64::from(look) / 1000.0 * until_s, 1_000_000) {}
        let places = cursor.positions();
        for (i, farthest) in farthest_au.iter_mut().enumerate() {
            let r =
                (places.x[i] * places.x[i] + places.y[i] * places.y[i] + places.z[i] * places.z[i]).sqrt();
            *farthest = farthest.max(r / AU_M);
        }
    }
    let rises: Vec<bool> =
        farthest_au.iter().zip(&belt.semi_majors_au).map(|(far, a)| *far > 1.3 * a).collect();
    let count = |near, high| belt.count(&rises, near, high);
    println!("in the gap {} of {} rise above 0.3", count(true, true), count(true, true) + count(true, false));
    assert!(count(true, true) >= 8, "only {} rise in the gap", count(true, true));
    assert_eq!(count(false, true), 0, "some rise beside the gap: {farthest_au:?}");
}
