//! Positions of JPL DE440 (Park, Folkner, Williams & Boggs 2021, AJ 161:105): `data/de440-check.csv`, 12 dates from 1950 to 2050.
//!
//! Heliocentric and geocentric vectors are compared, not barycentric ones: the barycentre of DE440 counts asteroids too.

use fallaround_core::Vector3;
use fallaround_core::ephemeris::{State, states_at};
use fallaround_core::math::frame::ecliptic_from_equatorial;
use fallaround_core::resolve::real;
use fallaround_core::scenario::RealBody;
use fallaround_core::time::Epoch;
use fallaround_tests::{Row, Table, angle_arcsec, scenario, start};

const ARCSEC: f64 = std::f64::consts::PI / 648_000.0;

const POSITION: [&str; 3] = ["x_km", "y_km", "z_km"];
const VELOCITY: [&str; 3] = ["vx_km_s", "vy_km_s", "vz_km_s"];

/// The published states at one date, in the order of [`real::ALL`].
struct Published {
    at: Epoch,
    states: Vec<State>,
}

/// Splits a table with eleven bodies a date into dates.
fn published(table: &Table) -> Vec<Published> {
    assert!(table.rows.len().is_multiple_of(real::ALL.len()), "eleven bodies at each date");
    let state = |(row, body): (&Row, RealBody)| {
        assert!(row.text("body").eq_ignore_ascii_case(real::facts(body).name), "order of the bodies");
        State {
            pos: ecliptic_from_equatorial(row.kilo_vector(POSITION)),
            vel: ecliptic_from_equatorial(row.kilo_vector(VELOCITY)),
        }
    };
    let date = |rows: &[Row]| Published {
        at: Epoch::from_tdb_jd(rows[0].number("jd_tdb")),
        states: rows.iter().zip(real::ALL).map(state).collect(),
    };
    table.rows.chunks(real::ALL.len()).map(date).collect()
}

/// Where the Sun, the Earth and the Moon stand in the lists.
const SUN: usize = 0;
const EARTH: usize = 3;
const MOON: usize = 4;

/// Largest errors in position over distance, arcsec: of the planets from the Sun and from the Earth, of the Moon from the Earth.
fn errors(got: &[Vector3<f64>], want: &[State]) -> (f64, f64) {
    let mut planets: f64 = 0.0;
    for centre in [SUN, EARTH] {
        for body in (0..11).filter(|&body| body != centre && body != MOON) {
            let (got, want) = (got[body] - got[centre], want[body].pos - want[centre].pos);
            planets = planets.max((got - want).norm() / want.norm() / ARCSEC);
        }
    }
    let (got, want) = (got[MOON] - got[EARTH], want[MOON].pos - want[EARTH].pos);
    (planets, (got - want).norm() / want.norm() / ARCSEC)
}

/// Required: planets 0.02 arcsec, the Moon 30 arcsec. What the model misses in at most 2.5 years from a published state is less: for the
/// planets the asteroids; for the Moon the tides and the figures of both bodies beyond the Earth's J2.
const PLANETS_ARCSEC: f64 = 0.006;
const MOON_ARCSEC: f64 = 1.5;

#[test]
fn real_bodies_stand_where_de440_has_them() {
    let all = real::ALL.map(|body| {
        let name = real::facts(body).name;
        format!("[[body]]\nname = \"{name}\"\nreal = \"{name}\"\n")
    });
    let mut asked = scenario(&format!("date = \"2000-01-01T12:00:00Z\"\n{}", all.concat()));
    let dates = published(&Table::read("de440-check.csv"));
    assert_eq!(dates.len(), 12);
    for date in dates {
        asked.date = Some(date.at);
        let initial = start(&asked);
        let got: Vec<_> = initial.bodies.iter().map(|body| body.pos).collect();
        let (planets, moon) = errors(&got, &date.states);
        println!("JD {}: planets {planets:.6} arcsec, Moon {moon:.4} arcsec", date.at.tdb_jd());
        assert!(planets < PLANETS_ARCSEC, "JD {}: planets {planets} arcsec off", date.at.tdb_jd());
        assert!(moon < MOON_ARCSEC, "JD {}: the Moon {moon} arcsec off", date.at.tdb_jd());
        for (body, want) in initial.bodies.iter().zip(&date.states) {
            let (got, want) = (body.vel - initial.bodies[SUN].vel, want.vel - date.states[SUN].vel);
            // 1.5 arcsec of the Moon's 1 km/s about the Earth, and as much again for where it is on its ellipse.
            assert!((got - want).norm() < 0.015, "{}: {} m/s off", body.name, (got - want).norm());
        }
    }
}

/// What a model of 11 points with relativity between all of them and Earth's J2 reaches over 50 years from J2000, as an
/// independent implementation measured it against DE440 (angle seen from Earth, arcsec), and the factor allowed on it.
const SUN_TO_MARS_ARCSEC: f64 = 0.015;
const JUPITER_TO_PLUTO_ARCSEC: f64 = 0.009;
const MOON_50_YEARS_ARCSEC: f64 = 16.0;
const FACTOR: f64 = 1.2;

#[test]
fn from_j2000_alone_fifty_years_lead_to_de440() {
    let j2000 = Epoch::from_tdb_jd(2_451_545.0);
    let table = Table::read("solar-system-j2000.csv");
    let mut states = Vec::new();
    for (row, &body) in table.rows.iter().zip(&real::ALL) {
        let facts = real::facts(body);
        assert!(row.text("body").eq_ignore_ascii_case(facts.name));
        // The constants of the engine are those of the same table.
        assert!(
            (facts.gm_m3_s2 / (1e9 * row.number("gm_km3_s2")) - 1.0).abs() < 1e-15,
            "GM of {}",
            facts.name
        );
        let pos = ecliptic_from_equatorial(row.kilo_vector(POSITION));
        let vel = ecliptic_from_equatorial(row.kilo_vector(VELOCITY));
        states.push(State { pos, vel });
    }
    let initial = real::system(&states.try_into().expect("eleven bodies"), j2000);
    let mut worst = [0.0_f64; 3];
    for date in published(&Table::read("de440-check.csv")) {
        let got = states_at(&initial, date.at.tdb_s() - j2000.tdb_s()).expect("no collision");
        for body in (0..11).filter(|&body| body != EARTH) {
            let angle =
                angle_arcsec(got[body].pos - got[EARTH].pos, date.states[body].pos - date.states[EARTH].pos);
            let group = match body {
                MOON => 2,
                0..=5 => 0,
                _ => 1,
            };
            worst[group] = worst[group].max(angle);
        }
    }
    println!("Sun to Mars {:.4}, Jupiter to Pluto {:.4}, Moon {:.1} arcsec", worst[0], worst[1], worst[2]);
    for (worst, limit, what) in [
        (worst[0], SUN_TO_MARS_ARCSEC, "Sun to Mars"),
        (worst[1], JUPITER_TO_PLUTO_ARCSEC, "Jupiter to Pluto"),
        (worst[2], MOON_50_YEARS_ARCSEC, "the Moon"),
    ] {
        assert!(worst <= FACTOR * limit, "{what}: {worst} arcsec, allowed {}", FACTOR * limit);
    }
}
