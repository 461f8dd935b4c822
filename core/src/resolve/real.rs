//! The solar system at a date: the nearest published states, integrated to it.

use crate::Vector3;
use crate::constants as c;
use crate::ephemeris::{State, states_at};
use crate::initial::{Forces, InitialBody, InitialState, Oblate};
use crate::math::float::sin_cos;
use crate::math::frame::ecliptic_from_equatorial;
use crate::scenario::{BodyId, RealBody, Surface};
use crate::time::Epoch;

/// States of DE440 every five years; the head of the file names the source.
const EPOCHS: &str = include_str!("data/solar-system-epochs.csv");

/// The bodies, in the order in which [`states`] gives them.
pub const ALL: [RealBody; 11] = [
    RealBody::Sun,
    RealBody::Mercury,
    RealBody::Venus,
    RealBody::Earth,
    RealBody::Moon,
    RealBody::Mars,
    RealBody::Jupiter,
    RealBody::Saturn,
    RealBody::Uranus,
    RealBody::Neptune,
    RealBody::Pluto,
];

/// Where the Sun and the Earth stand in [`ALL`].
const SUN: BodyId = BodyId(0);
const EARTH: BodyId = BodyId(3);

/// First and last instant for which states are given: 1900-01-01 and 2100-01-01, 0 h UTC.
const FIRST_JD: f64 = 2_415_020.5;
const LAST_JD: f64 = 2_488_069.5;

/// How far TDB and UTC may be apart at the ends of that range, d.
const UTC_SLACK_D: f64 = 120.0 / c::DAY_S;

/// What a solar-system body is called, and what it is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Facts {
    /// Its English name.
    pub name: &'static str,
    /// GM, m³/s², of the whole system where it is a system barycentre (DE440).
    pub gm_m3_s2: f64,
    /// Mean radius, m, of the planet itself (IAU WGCCRE 2015; the Sun: IAU 2015 B3).
    pub radius_m: f64,
}

/// What is known of a solar-system body.
pub const fn facts(body: RealBody) -> Facts {
    let (name, gm_m3_s2, radius_m) = match body {
        RealBody::Sun => ("Sun", c::GM_SUN_M3_S2, c::RADIUS_SUN_M),
        RealBody::Mercury => ("Mercury", c::GM_MERCURY_M3_S2, c::RADIUS_MERCURY_M),
        RealBody::Venus => ("Venus", c::GM_VENUS_M3_S2, c::RADIUS_VENUS_M),
        RealBody::Earth => ("Earth", c::GM_EARTH_M3_S2, c::RADIUS_EARTH_M),
        RealBody::Moon => ("Moon", c::GM_MOON_M3_S2, c::RADIUS_MOON_M),
        RealBody::Mars => ("Mars", c::GM_MARS_M3_S2, c::RADIUS_MARS_M),
        RealBody::Jupiter => ("Jupiter", c::GM_JUPITER_M3_S2, c::RADIUS_JUPITER_M),
        RealBody::Saturn => ("Saturn", c::GM_SATURN_M3_S2, c::RADIUS_SATURN_M),
        RealBody::Uranus => ("Uranus", c::GM_URANUS_M3_S2, c::RADIUS_URANUS_M),
        RealBody::Neptune => ("Neptune", c::GM_NEPTUNE_M3_S2, c::RADIUS_NEPTUNE_M),
        RealBody::Pluto => ("Pluto", c::GM_PLUTO_M3_S2, c::RADIUS_PLUTO_M),
    };
    Facts { name, gm_m3_s2, radius_m }
}

/// Earth's bulge as a force, with its pole as it points at an instant, in ecliptic axes of J2000.
///
/// # Source
/// J2 and radius: IERS Conventions (2010), Table 1.1. Pole: Archinal et al. 2018 (IAU WGCCRE 2015), Table 1: right ascension
/// -0.641° T, declination 90° - 0.557° T, with T in Julian centuries from J2000.
pub fn earth_bulge(earth: BodyId, at: Epoch) -> Oblate {
    let centuries = at.tdb_s() / (100.0 * c::YEAR_S);
    let (sin_ra, cos_ra) = sin_cos(-0.641 * centuries * c::DEGREE_RAD);
    // Of the polar distance, which is small: nothing is lost near 90°.
    let (sin_pd, cos_pd) = sin_cos(0.557 * centuries * c::DEGREE_RAD);
    let pole = ecliptic_from_equatorial(Vector3::new(sin_pd * cos_ra, sin_pd * sin_ra, cos_pd));
    Oblate { body: earth, j2: c::EARTH_J2, radius_m: c::EARTH_J2_RADIUS_M, pole }
}

/// The solar system as [`states`] integrates it: all eleven bodies in the order of [`ALL`], with
/// relativity between all of them and Earth's bulge. `states` are those at the instant `at`, ecliptic, m and m/s.
pub fn system(states: &[State; 11], at: Epoch) -> InitialState {
    let bodies = ALL.iter().zip(states).map(|(&body, state)| {
        let facts = facts(body);
        InitialBody {
            name: facts.name.to_owned(),
            gm_m3_s2: facts.gm_m3_s2,
            radius_m: facts.radius_m,
            surface: Surface::Stop,
            primary: match body {
                RealBody::Sun => None,
                RealBody::Moon => Some(EARTH),
                _ => Some(SUN),
            },
            pos: state.pos,
            vel: state.vel,
        }
    });
    let forces = Forces { relativity: true, oblate: vec![earth_bulge(EARTH, at)], ..Forces::default() };
    InitialState { forces, ..InitialState::of(bodies.collect()) }
}

/// Why there is no solar system at a date.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum RealError {
    /// The date is not covered.
    #[error("the states of solar-system bodies reach from 1900-01-01 to 2100-01-01")]
    OutOfRange,
    /// The table of states can't be read.
    #[error("the table of solar-system states can't be read")]
    Table,
    /// The integration to the date stopped.
    #[error("{0}")]
    Stopped(#[from] crate::ephemeris::Stopped),
}

/// States of the bodies of [`ALL`] at an instant: relative to the barycentre of the solar system, ecliptic axes, m and m/s.
///
/// # Errors
/// [`RealError::OutOfRange`] before 1900-01-01 and after 2100-01-01.
pub fn states(at: Epoch) -> Result<[State; 11], RealError> {
    let jd = at.tdb_jd();
    if !(FIRST_JD - UTC_SLACK_D..=LAST_JD + UTC_SLACK_D).contains(&jd) {
        return Err(RealError::OutOfRange);
    }
    let (from_jd, start) = nearest(jd).ok_or(RealError::Table)?;
    let from = Epoch::from_tdb_jd(from_jd);
    let dt_s = at.tdb_s() - from.tdb_s();
    let states = states_at(&system(&start, from.plus_s(0.5 * dt_s)), dt_s)?;
    states.try_into().ok().ok_or(RealError::Table)
}

/// The Julian date of the nearest table epoch, and the states there.
fn nearest(jd: f64) -> Option<(f64, [State; 11])> {
    let rows = || {
        EPOCHS.lines().filter_map(|line| {
            let (date, rest) = line.split_once(',')?;
            Some((date.parse::<f64>().ok()?, rest))
        })
    };
    let mut best = f64::INFINITY;
    for (date, _) in rows() {
        if (date - jd).abs() < (best - jd).abs() {
            best = date;
        }
    }
    let mut found: [Option<State>; 11] = [None; 11];
    for (_, rest) in rows().filter(|(date, _)| date.total_cmp(&best).is_eq()) {
        let mut fields = rest.split(',').skip(1);
        let name = fields.next()?;
        let slot = ALL.iter().position(|&body| facts(body).name.eq_ignore_ascii_case(name))?;
        let mut numbers = [0.0; 6];
        for number in &mut numbers {
            *number = 1e3 * fields.next()?.trim().parse::<f64>().ok()?;
        }
        let [x, y, z, vx, vy, vz] = numbers;
        found[slot] = Some(State {
            pos: ecliptic_from_equatorial(Vector3::new(x, y, z)),
            vel: ecliptic_from_equatorial(Vector3::new(vx, vy, vz)),
        });
    }
    let states: Option<Vec<State>> = found.into_iter().collect();
    Some((best, states?.try_into().ok()?))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_epoch_of_the_table_can_be_read() {
        let mut jd = FIRST_JD;
        while jd < LAST_JD {
            let (epoch, states) = nearest(jd).unwrap();
            // Five years apart, so never more than half of that away.
            assert!((epoch - jd).abs() <= 2.5 * 365.25 + 1.0, "{jd}: {epoch}");
            let from_sun = (states[3].pos - states[0].pos).norm() / c::AU_M;
            assert!((0.98..1.02).contains(&from_sun), "Earth {from_sun} au from the Sun");
            jd += 400.0;
        }
    }

    #[test]
    fn dates_out_of_range_are_refused() {
        for text in ["1899-12-31", "2100-01-02", "1066-10-14"] {
            assert_eq!(states(Epoch::parse_utc(text).unwrap()), Err(RealError::OutOfRange), "{text}");
        }
        for text in ["1900-01-01", "2100-01-01"] {
            assert!(states(Epoch::parse_utc(text).unwrap()).is_ok(), "{text}");
        }
    }

    #[test]
    fn neighbouring_epochs_lead_to_the_same_midway_states() {
        // 2.5 years from both sides: the planets agree to what the model can do in that time (below a milliarcsecond of
        // heliocentric longitude), so the choice of the epoch can't be seen.
        let midway = 2_451_545.0 + 2.5 * 365.25;
        let before = states(Epoch::from_tdb_jd(midway - 1e-3)).unwrap();
        let after = states(Epoch::from_tdb_jd(midway + 1e-3)).unwrap();
        for (index, body) in ALL.iter().enumerate().skip(1) {
            let moved = 2e-3 * c::DAY_S;
            let a = before[index].pos - before[0].pos + (before[index].vel - before[0].vel) * moved;
            let b = after[index].pos - after[0].pos;
            let angle = (a - b).norm() / b.norm() / c::ARCSEC_RAD;
            let limit = if *body == RealBody::Moon { 0.03 } else { 0.004 };
            assert!(angle < limit, "{body:?}: {angle} arcsec");
        }
    }
}
