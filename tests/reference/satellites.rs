//! How the bulge of a body turns the orbits around it, against the closed forms.
//!
//! # Source
//! W. M. Kaula, Theory of Satellite Geodesy (1966), eq. 3.74; also D. A. Vallado, Fundamentals of Astrodynamics and Applications, 4th ed.
//! (2013), section 9.6: to first order in J2, with the mean motion n and p = a (1 - e²), the node drifts by
//! -3/2 n J2 (R/p)² cos i, and periapsis along the orbit by 3/4 n J2 (R/p)² (5 cos² i - 1).

use fallaround_core::Vector3;
use fallaround_core::ephemeris::events::{Event, Query, find};
use fallaround_core::initial::Oblate;
use fallaround_core::math::float::{acos, atan2, cos};
use fallaround_core::scenario::{BodyId, EventKind};
use fallaround_tests::{assert_close, paths, scenario, start};

const EARTH: BodyId = BodyId(0);
const SATELLITE: BodyId = BodyId(1);
const DAY_S: f64 = 86_400.0;
const DEGREE: f64 = std::f64::consts::PI / 180.0;

/// Of the Earth, as EGM96 and GRS 80 have them (from memory).
const GM: f64 = 3.986_004_418e14;
const RADIUS_M: f64 = 6_378_137.0;
const J2: f64 = 1.082_63e-3;

/// An orbit around a body whose pole is that of the axes.
struct Orbit {
    semi_major_m: f64,
    eccentricity: f64,
    inclination_deg: f64,
    j2: f64,
}

impl Orbit {
    /// n J2 (R/p)², rad/s.
    fn scale(&self) -> f64 {
        let a = self.semi_major_m;
        let to_p = RADIUS_M / (a * (1.0 - self.eccentricity * self.eccentricity));
        (GM / (a * a * a)).sqrt() * self.j2 * to_p * to_p
    }

    fn node_drift(&self) -> f64 {
        -1.5 * self.scale() * cos(self.inclination_deg * DEGREE)
    }

    fn periapsis_drift(&self) -> f64 {
        let c = cos(self.inclination_deg * DEGREE);
        0.75 * self.scale() * (5.0 * c * c - 1.0)
    }

    /// Events of the integrated orbit, with the place relative to the centre and the direction of the orbit's pole.
    fn events(&self, kind: EventKind, days: f64) -> Vec<(Event, Vector3<f64>, Vector3<f64>)> {
        let mut initial = start(&scenario(&format!(
            "[[body]]\nname = \"Earth\"\ngm = \"{GM:e} m^3/s^2\"\nradius = \"{RADIUS_M} m\"\n\
             [[body]]\nname = \"Satellite\"\norbit = {{ around = \"Earth\", semi-major = \"{} m\", eccentricity = {:?}, \
             inclination = \"{} deg\", node = \"40 deg\", argument = \"90 deg\", anomaly = \"30 deg\" }}\n",
            self.semi_major_m, self.eccentricity, self.inclination_deg
        )));
        initial.forces.oblate =
            vec![Oblate { body: EARTH, j2: self.j2, radius_m: RADIUS_M, pole: Vector3::new(0.0, 0.0, 1.0) }];
        let eph = paths(&initial, 0.0, days * DAY_S);
        let found = find(&eph, &initial, &Query::new(kind, SATELLITE, Some(EARTH)), 0.0, days * DAY_S);
        found
            .into_iter()
            .map(|event| {
                let state = eph
                    .relative(SATELLITE, EARTH, event.t_s)
                    .unwrap_or_else(|| panic!("{} s is not covered", event.t_s));
                let pole = state.pos.cross(&state.vel);
                (event, state.pos, pole)
            })
            .collect()
    }

    /// Rate at which the ascending node turns, from the first crossing to the last, rad/s. Short terms are the same at both.
    fn node_rate(&self, days: f64) -> f64 {
        let crossings = self.events(EventKind::AscendingNode, days);
        let [(first, at_first, _), .., (last, at_last, _)] = crossings.as_slice() else {
            panic!("two crossings")
        };
        atan2(
            at_first.x * at_last.y - at_first.y * at_last.x,
            at_first.x * at_last.x + at_first.y * at_last.y,
        ) / (last.t_s - first.t_s)
    }
}

#[test]
fn nodes_of_earth_satellites_drift_as_the_closed_form_says() {
    // Rates in degrees a day, as they are often quoted (from memory): of a crewed station, of a laser satellite that goes round backwards,
    // of a satellite of navigation.
    for (name, semi_major_m, eccentricity, inclination_deg, quoted) in [
        ("station", 6_780e3, 0.001, 51.64, -5.0),
        ("laser satellite", 12_270e3, 0.0045, 109.84, 0.343),
        ("navigation satellite", 26_560e3, 0.01, 55.0, -0.039),
    ] {
        let orbit = |j2| Orbit { semi_major_m, eccentricity, inclination_deg, j2 };
        let earth = orbit(J2);
        let got = earth.node_rate(5.0);
        assert_close(
            &format!("{name}, as quoted"),
            got / DEGREE * DAY_S,
            quoted,
            0.02 * quoted.abs(),
            "deg/d",
        );
        // What is left out is of second order: a part of J2 (R/p)², some times it. With a hundredth of J2 it is a hundredth.
        for (j2, rate) in [(J2, got), (1e-2 * J2, orbit(1e-2 * J2).node_rate(5.0))] {
            let want = orbit(j2).node_drift();
            let part = 5.0 * orbit(j2).scale() / (GM / (semi_major_m * semi_major_m * semi_major_m)).sqrt();
            // The orbit is not quite round: its short terms come back by the drift of periapsis only.
            let part = part * (1.0 + 10.0 * eccentricity);
            assert_close(&format!("{name}, J2 {j2:e}"), rate / want, 1.0, part, "");
        }
    }
}

/// # Source
/// H. D. Curtis, Orbital Mechanics for Engineering Students, 3rd ed. (2014), example 4.8 (from memory): a Sun-synchronous orbit of a period of
/// 100 minutes is 758.63 km high, at an inclination of 98.43°. And as the trade has it, 98.6° at 800 km.
#[test]
fn a_sun_synchronous_orbit_turns_once_a_year() {
    let a_year = 360.0 / 365.242_2;
    for (height_m, inclination_deg) in [(758.63e3, 98.43), (800e3, 98.6)] {
        let orbit = Orbit { semi_major_m: 6_378e3 + height_m, eccentricity: 0.0, inclination_deg, j2: J2 };
        let rate = orbit.node_rate(5.0) / DEGREE * DAY_S;
        // 0.01° of inclination are 0.12 % of the rate; terms of second order as much again.
        assert_close(&format!("{:.0} km up", height_m / 1e3), rate, a_year, 4e-3 * a_year, "deg/d");
        // The inclination that the closed form gives is the one that is quoted.
        let cosine = -(a_year * DEGREE / DAY_S) / (1.5 * orbit.scale());
        assert_close("inclination", acos(cosine) / DEGREE, inclination_deg, 0.02, "deg");
    }
    let period_min = std::f64::consts::TAU * (7.136_63e6_f64 * 7.136_63e6 * 7.136_63e6 / GM).sqrt() / 60.0;
    assert_close("period of the example", period_min, 100.0, 0.01, "min");
}

#[test]
fn periapsis_turns_along_the_orbit_and_stands_at_the_critical_inclination() {
    // With a hundredth of the Earth's J2, terms of second order are a few parts in 1e5; and while periapsis turns by half a degree,
    // the short terms at it, of J2 / e with twice its angle from the node, change by some 1e-4 of what it turns.
    let j2 = 1e-2 * J2;
    for inclination_deg in [10.0, 40.0, 63.434_95, 90.0, 120.0] {
        let orbit = Orbit { semi_major_m: 8_500e3, eccentricity: 0.2, inclination_deg, j2 };
        let passages = orbit.events(EventKind::Periapsis, 5.0);
        let [(first, at_first, pole_first), .., (last, at_last, pole_last)] = passages.as_slice() else {
            panic!("two passages")
        };
        // From the node, in the plane of the orbit at the time.
        let argument = |pos: &Vector3<f64>, pole: &Vector3<f64>| {
            let node = Vector3::new(-pole.y, pole.x, 0.0).normalize();
            atan2(pole.normalize().cross(&node).dot(pos), node.dot(pos))
        };
        let rate = (argument(at_last, pole_last) - argument(at_first, pole_first)) / (last.t_s - first.t_s);
        // Of the whole scale, because it vanishes at the critical inclination.
        let want = orbit.periapsis_drift();
        assert_close(&format!("at {inclination_deg} deg"), (rate - want) / orbit.scale(), 0.0, 3e-4, "");
    }
}
