//! Paths whose way is known: orbits, and what contacts do.

use super::{Ephemeris, Propagation, State};
use crate::Vector3;
use crate::initial::{Forces, InitialBody, InitialState};
use crate::scenario::{BodyId, Surface};

mod changes;
mod contacts;
mod kicks;
mod long;
mod orbits;
mod relativity;
mod softening;
mod thin;
mod variations;

/// A point.
fn body(gm_m3_s2: f64, pos: [f64; 3], vel: [f64; 3]) -> InitialBody {
    InitialBody {
        name: String::new(),
        gm_m3_s2,
        radius_m: 0.0,
        surface: Surface::Stop,
        primary: None,
        pos: Vector3::from(pos),
        vel: Vector3::from(vel),
    }
}

/// A body with a surface.
fn ball(gm_m3_s2: f64, radius_m: f64, surface: Surface, pos: [f64; 3], vel: [f64; 3]) -> InitialBody {
    InitialBody { radius_m, surface, ..body(gm_m3_s2, pos, vel) }
}

/// Bodies under Newton's forces, named A, B, C …
fn initial(bodies: Vec<InitialBody>) -> InitialState {
    let named = ('A'..).zip(bodies).map(|(name, body)| InitialBody { name: name.to_string(), ..body });
    let bodies: Vec<InitialBody> = named.collect();
    InitialState::of(bodies)
}

/// The ephemeris up to an instant.
fn paths(initial: &InitialState, until_s: f64) -> Ephemeris {
    let mut propagation = Propagation::new(initial);
    assert!(propagation.advance(until_s, 1_000_000).unwrap(), "not there in a million steps");
    propagation.into_ephemeris()
}

/// State of a body that must be covered.
fn at(eph: &Ephemeris, body: usize, t_s: f64) -> State {
    assert!(eph.from_s() <= t_s && t_s <= eph.until_s(), "{t_s} isn't covered");
    eph.state(BodyId(body), t_s).unwrap()
}

#[track_caller]
fn near(what: &str, got: f64, want: f64, tol: f64) {
    assert!(
        (got - want).abs() <= tol,
        "{what}: got {got}, want {want}, difference {:e} over {tol:e}",
        got - want
    );
}
