//! Changes on the way: gravity off and on, and kicks.

use super::*;
use crate::ephemeris::states_at;
use crate::initial::TimedChange;
use crate::scenario::{ChangeKind, Direction, Kick};
use crate::units::Speed;
use std::f64::consts::{PI, TAU};

/// Roundings of some hundred steps.
const TOL: f64 = 1e-13;

fn change(t_s: f64, body: usize, what: ChangeKind) -> TimedChange {
    TimedChange { t_s, body: BodyId(body), what }
}

fn gravity(t_s: f64, body: usize, on: bool) -> TimedChange {
    change(t_s, body, ChangeKind::Gravity { on })
}

fn kick(t_s: f64, body: usize, speed: f64, direction: Direction, about: Option<BodyId>) -> TimedChange {
    let speed = Speed::from_m_s(speed);
    change(t_s, body, ChangeKind::Kick(Kick::Along { speed, direction, about }))
}

/// A tracer on the unit circle around GM 1.
fn circle(changes: Vec<TimedChange>) -> InitialState {
    let mut start = initial(vec![body(1.0, [0.0; 3], [0.0; 3]), body(0.0, [1.0, 0.0, 0.0], [0.0, 1.0, 0.0])]);
    start.bodies[1].primary = Some(BodyId(0));
    start.changes = changes;
    start
}

#[test]
fn without_the_stars_gravity_a_comet_goes_straight_on_and_the_past_stays() {
    let off_s = 0.75 * PI;
    let eph = paths(&circle(vec![gravity(off_s, 0, false)]), 20.0);
    let before = paths(&circle(Vec::new()), 20.0);
    for t_s in [0.0, 0.3, 1.0, 2.0, off_s] {
        let (a, b) = (at(&eph, 1, t_s), at(&before, 1, t_s));
        assert!((a.pos - b.pos).norm() < TOL, "{t_s}: {} and {}", a.pos, b.pos);
    }
    let left = at(&eph, 1, off_s);
    for t_s in [off_s + 0.1, 5.0, 20.0] {
        let now = at(&eph, 1, t_s);
        let straight = left.pos + left.vel * (t_s - off_s);
        assert!((now.pos - straight).norm() < TOL * t_s, "{t_s}: {} is not on the line", now.pos);
    }
    let pulls = |t_s| eph.gm_m3_s2(BodyId(0), t_s) > 0.0;
    assert_eq!([0.0, 2.0, off_s, 20.0].map(pulls), [true, true, false, false]);
    assert_eq!(eph.switches().len(), 1);
}

#[test]
fn gravity_that_comes_back_makes_a_new_orbit_of_what_is_there() {
    let start = circle(vec![gravity(0.0, 0, false), gravity(1.0, 0, true)]);
    let eph = paths(&start, 10.0);
    // From (1, 1) with speed 1 upwards, √2 from the centre: semi-major axis from the energy 1/2 - 1/√2.
    let met = at(&eph, 1, 1.0);
    assert!((met.pos - Vector3::new(1.0, 1.0, 0.0)).norm() < TOL);
    let a = 0.5 / (1.0 / 2.0_f64.sqrt() - 0.5);
    let period = TAU * (a * a * a).sqrt();
    let eph = paths(&start, 1.0 + period);
    let round = at(&eph, 1, 1.0 + period);
    assert!((round.pos - met.pos).norm() < 1e-11, "{}", round.pos);
    assert_eq!([0.5, 1.0].map(|t_s| eph.gm_m3_s2(BodyId(0), t_s) > 0.0), [false, true]);
    // The same without contacts, and at an instant of change itself.
    assert!((states_at(&start, 1.0).unwrap()[1].pos - met.pos).norm() < TOL);
    assert!((states_at(&start, 1.0 + period).unwrap()[1].pos - met.pos).norm() < 1e-11);
}

/// # Source
/// W. Hohmann, Die Erreichbarkeit der Himmelskörper (1925): from the circle of radius 1 to that of radius a.
#[test]
fn two_kicks_lead_from_one_circle_to_another() {
    let a = 4.0_f64;
    let first = (2.0 * a / (1.0 + a)).sqrt() - 1.0;
    let second = (1.0 / a).sqrt() - (2.0 / (a * (1.0 + a))).sqrt();
    let half = PI * ((1.0 + a) / 2.0 * ((1.0 + a) / 2.0) * ((1.0 + a) / 2.0)).sqrt();
    let eph = paths(
        &circle(vec![
            kick(2.0, 1, first, Direction::Velocity, None),
            kick(2.0 + half, 1, second, Direction::Velocity, None),
        ]),
        60.0,
    );
    near("speed after the first kick", at(&eph, 1, 2.0).vel.norm(), 1.0 + first, TOL);
    for t_s in [2.0 + half, 30.0, 45.0, 60.0] {
        let now = at(&eph, 1, t_s);
        near("distance", now.pos.norm(), a, 1e-12);
        near("speed", now.vel.norm(), 0.5, 1e-12);
    }
}

#[test]
fn kicks_are_relative_to_what_they_are_about() {
    let mut start = circle(Vec::new());
    start.bodies.push(InitialBody { name: "C".into(), ..body(0.0, [0.0, 50.0, 0.0], [0.0, 0.0, 3.0]) });
    start.listed = 3;
    let added = |change: TimedChange| {
        let mut start = start.clone();
        start.changes = vec![change];
        at(&paths(&start, 1.0), 1, 0.0).vel - Vector3::new(0.0, 1.0, 0.0)
    };
    let close = |got: Vector3<f64>, want: [f64; 3]| {
        assert!((got - Vector3::from(want)).norm() < TOL, "got {got}, want {want:?}");
    };
    close(added(kick(0.0, 1, -0.5, Direction::Outwards, None)), [-0.5, 0.0, 0.0]);
    let (length, away) = (2501.0_f64.sqrt(), [1.0, -50.0, 0.0]);
    close(added(kick(0.0, 1, 2.0, Direction::Outwards, Some(BodyId(2)))), away.map(|x| 2.0 * x / length));
    let by = [0.1, 0.2, 0.3].map(Speed::from_m_s);
    close(added(change(0.0, 1, ChangeKind::Kick(Kick::By(by)))), [0.1, 0.2, 0.3]);
    let ten = 10.0_f64.sqrt();
    close(added(kick(0.0, 1, 1.0, Direction::Velocity, Some(BodyId(2)))), [0.0, 1.0 / ten, -3.0 / ten]);
}

#[test]
fn gravity_off_lets_a_fall_go_on_with_the_speed_that_it_has() {
    let world = ball(1.0, 1.0, Surface::Stop, [0.0; 3], [0.0; 3]);
    let mut start = initial(vec![world, body(0.0, [1.5, 0.0, 0.0], [0.0; 3])]);
    start.changes = vec![gravity(0.5, 0, false)];
    let eph = paths(&start, 10.0);
    let (left, lands) = (at(&eph, 1, 0.5), eph.contacts()[0].t_s);
    near("landing", lands, 0.5 + (left.pos.x - 1.0) / -left.vel.x, TOL);
}

#[test]
fn going_back_nothing_changes() {
    let mut propagation = Propagation::new(&circle(vec![gravity(0.0, 0, false)]));
    assert!(propagation.advance(-PI, 1000).unwrap());
    assert!(propagation.advance(PI, 1000).unwrap());
    let eph = propagation.into_ephemeris();
    assert!((at(&eph, 1, -PI).pos - Vector3::new(-1.0, 0.0, 0.0)).norm() < 1e-12);
    assert!((at(&eph, 1, PI).pos - Vector3::new(1.0, PI, 0.0)).norm() < 1e-12);
}
