//! Falling onto surfaces.

use super::*;
use crate::ephemeris::{Outcome, Why};
use crate::math::float::acos;
use proptest::prelude::*;

/// An airless world.
const GM: f64 = 4.9e12;
const RADIUS_M: f64 = 1.7e6;

/// Time of a fall from rest at `from_m` to `to_m` from the centre: Kepler's equation of a straight ellipse.
fn fall_s(gm: f64, from_m: f64, to_m: f64) -> f64 {
    let x = to_m / from_m;
    (from_m * from_m * from_m / (2.0 * gm)).sqrt() * (acos(x.sqrt()) + (x * (1.0 - x)).sqrt())
}

/// Speed after that fall.
fn fall_m_s(gm: f64, from_m: f64, to_m: f64) -> f64 {
    (2.0 * gm * (from_m - to_m) / (from_m * to_m)).sqrt()
}

fn dropped(surface: Surface, height_m: f64) -> InitialState {
    initial(vec![
        ball(GM, RADIUS_M, surface, [0.0; 3], [0.0; 3]),
        body(0.0, [0.0, RADIUS_M + height_m, 0.0], [0.0; 3]),
    ])
}

#[test]
fn a_dropped_ball_lands_when_keplers_equation_says_and_stays() {
    for height_m in [1.0, 100.0, 2e5, 1e7, 4e8] {
        let want_s = fall_s(GM, RADIUS_M + height_m, RADIUS_M);
        let eph = paths(&dropped(Surface::Stop, height_m), 3.0 * want_s);
        let contact = eph.contacts()[0];
        let speed_m_s = fall_m_s(GM, RADIUS_M + height_m, RADIUS_M);
        // The place is known to a rounding of the radius, in the formula too (acos near 1 loses more of a low fall).
        let tol_s = 8.0 * f64::EPSILON * (RADIUS_M / speed_m_s + RADIUS_M / height_m * want_s + want_s);
        near("time", contact.t_s, want_s, tol_s);
        near("speed", contact.speed_m_s, speed_m_s, 1e-9 * speed_m_s);
        assert_eq!((contact.body, contact.onto, contact.outcome), (BodyId(1), BodyId(0), Outcome::Stopped));
        assert_eq!(eph.contacts().len(), 1);
        for t_s in [want_s * (1.0 + 1e-9), 2.0 * want_s, 3.0 * want_s] {
            let state = at(&eph, 1, t_s);
            // The time of the contact is rounded, and the ball moves on within that.
            let tol_m = 1e-9 + f64::EPSILON * want_s * speed_m_s;
            near("distance at rest", state.pos.norm(), RADIUS_M, tol_m);
            assert_eq!(state.vel, Vector3::zeros());
        }
        assert_eq!(eph.at_rest(BodyId(1), 3.0 * want_s).map(|c| c.onto), Some(BodyId(0)));
    }
}

#[test]
fn a_low_drop_takes_the_square_root_of_twice_the_height_over_g() {
    let eph = paths(&dropped(Surface::Stop, 1.0), 10.0);
    let g = GM / (RADIUS_M * RADIUS_M);
    // g isn't the same one metre higher: 5/6 of height over radius, of the time.
    let want_s = (2.0 / g).sqrt() * (1.0 + 5.0 / 6.0 / RADIUS_M);
    near("time", eph.contacts()[0].t_s, want_s, 1e-9 * want_s);
}

#[test]
fn a_bounce_rises_to_the_height_that_its_speed_allows_and_comes_to_rest_in_the_end() {
    let eph = paths(&dropped(Surface::Bounce { restitution: 0.8 }, 100.0), 2000.0);
    let contacts = eph.contacts();
    let mut speed_m_s = fall_m_s(GM, RADIUS_M + 100.0, RADIUS_M);
    for (n, pair) in contacts.windows(2).enumerate().take(6) {
        near("speed of impact", pair[0].speed_m_s, speed_m_s, 1e-8 * speed_m_s);
        speed_m_s *= 0.8;
        let top_m = 1.0 / (1.0 / RADIUS_M - speed_m_s * speed_m_s / (2.0 * GM));
        let middle_s = 0.5 * (pair[0].t_s + pair[1].t_s);
        near("height of the rebound", at(&eph, 1, middle_s).pos.norm(), top_m, 1e-6);
        near("time of the flight", pair[1].t_s - pair[0].t_s, 2.0 * fall_s(GM, top_m, RADIUS_M), 1e-6);
        assert_eq!(pair[0].outcome, Outcome::Bounced, "contact {n}");
    }
    assert_eq!(contacts.last().map(|c| c.outcome), Some(Outcome::Stopped));
    assert!(contacts.len() < 60, "{} contacts", contacts.len());
    near("rest", at(&eph, 1, 2000.0).pos.norm(), RADIUS_M, 1e-6);
}

#[test]
fn a_ball_that_loses_nothing_bounces_to_the_same_height_again_and_again() {
    let flight_s = 2.0 * fall_s(GM, RADIUS_M + 1e5, RADIUS_M);
    let eph = paths(&dropped(Surface::Bounce { restitution: 1.0 }, 1e5), 200.0 * flight_s);
    assert_eq!(eph.contacts().len(), 200);
    for n in [1.0, 10.0, 100.0, 199.0] {
        // Each contact rounds the place to 2e-10 m and the time with it.
        near("height", at(&eph, 1, n * flight_s).pos.norm(), RADIUS_M + 1e5, 1e-5);
    }
}

#[test]
fn merging_keeps_momentum_and_adds_up_gravity() {
    let bodies = vec![
        ball(3e13, 1e6, Surface::Merge, [-1e7, 0.0, 0.0], [0.0, 10.0, 0.0]),
        ball(1e13, 8e5, Surface::Stop, [3e7, 0.0, 0.0], [0.0, -30.0, 5.0]),
    ];
    let initial = initial(bodies);
    let eph = paths(&initial, 1e6);
    let contact = eph.contacts()[0];
    assert_eq!((contact.body, contact.onto, contact.outcome), (BodyId(1), BodyId(0), Outcome::Merged));
    let momentum =
        |t_s: f64| (0..2).map(|i| at(&eph, i, t_s).vel * initial.bodies[i].gm_m3_s2).sum::<Vector3<f64>>();
    // Before, and after, when both move as one.
    near("momentum", (momentum(contact.t_s + 1.0) - momentum(0.0)).norm(), 0.0, 1e-12 * 3e14);
    assert_eq!(eph.gm_m3_s2(BodyId(0), contact.t_s + 1.0).to_bits(), 4e13_f64.to_bits());
    assert_eq!(eph.gm_m3_s2(BodyId(1), contact.t_s + 1.0).to_bits(), 0);
    let rest = at(&eph, 1, 1e6).pos - at(&eph, 0, 1e6).pos;
    near("distance", rest.norm(), 1.8e6, 1e-7);
}

#[test]
fn a_mass_that_stops_on_another_goes_on_pulling_and_the_two_keep_momentum() {
    let initial = initial(vec![
        ball(3e13, 1e6, Surface::Stop, [-1e7, 0.0, 0.0], [0.0, 10.0, 0.0]),
        ball(1e13, 8e5, Surface::Stop, [3e7, 0.0, 0.0], [0.0, -30.0, 0.0]),
        body(2e13, [0.0, 4e8, 0.0], [300.0, 0.0, 0.0]),
    ]);
    let eph = paths(&initial, 5e6);
    assert_eq!(eph.contacts()[0].outcome, Outcome::Stopped);
    let centre = |t_s: f64| {
        (0..3).map(|i| at(&eph, i, t_s).vel * initial.bodies[i].gm_m3_s2).sum::<Vector3<f64>>() / 6e13
    };
    near("drift of the centre of mass", (centre(5e6) - centre(0.0)).norm(), 0.0, 1e-11);
}

#[test]
fn a_bounce_of_two_masses_keeps_momentum_and_energy() {
    let bounce = Surface::Bounce { restitution: 1.0 };
    let initial = initial(vec![
        ball(3e13, 1e6, bounce, [-1e7, 0.0, 0.0], [0.0; 3]),
        ball(1e13, 8e5, Surface::Stop, [3e7, 0.0, 0.0], [0.0; 3]),
    ]);
    let eph = paths(&initial, 1e6);
    assert!(eph.contacts().len() > 2);
    let vel = |i: usize| at(&eph, i, 1e6).vel;
    near("momentum", (3.0 * vel(0) + vel(1)).norm(), 0.0, 1e-9);
    let gap = (at(&eph, 1, 1e6).pos - at(&eph, 0, 1e6).pos).norm();
    let energy = 0.5 * (vel(1) - vel(0)).norm_squared() - 4e13 / gap;
    near("energy", energy, -4e13 / 4e7, 1e-9 * 1e6);
}

#[test]
fn what_is_thrown_up_lands_again_and_back_in_time_it_stood_on_the_ground() {
    let initial = initial(vec![
        ball(GM, RADIUS_M, Surface::Stop, [0.0; 3], [0.0; 3]),
        body(0.0, [0.0, 0.0, RADIUS_M], [0.0, 0.0, 500.0]),
    ]);
    let mut propagation = Propagation::new(&initial);
    assert!(propagation.advance(2000.0, 10_000).unwrap());
    assert!(propagation.advance(-2000.0, 10_000).unwrap());
    let eph = propagation.into_ephemeris();
    let top_m = 1.0 / (1.0 / RADIUS_M - 500.0 * 500.0 / (2.0 * GM));
    let [landed, stood] = eph.contacts() else { panic!("{:?}", eph.contacts()) };
    near("landing", landed.t_s, 2.0 * fall_s(GM, top_m, RADIUS_M), 1e-9);
    assert!(stood.t_s < 0.0 && stood.t_s > -1e-6);
    assert_eq!(at(&eph, 1, -1000.0), State { pos: Vector3::new(0.0, 0.0, RADIUS_M), vel: Vector3::zeros() });
    assert_eq!(eph.at_rest(BodyId(1), 1.0), None);
}

#[test]
fn level_shots_fall_short_circle_or_escape() {
    let circular = (GM / RADIUS_M).sqrt();
    let shot = |part: f64| {
        let start = [RADIUS_M * (1.0 + 1e-3), 0.0, 0.0];
        let speed = part * (GM / start[0]).sqrt();
        let world = ball(GM, RADIUS_M, Surface::Stop, [0.0; 3], [0.0; 3]);
        let eph =
            paths(&initial(vec![world, body(0.0, start, [0.0, speed, 0.0])]), 10.0 * RADIUS_M / circular);
        eph.contacts().len()
    };
    // Periapsis touches the surface where 2a = r + R: v² = GM/r · 2R/(r+R).
    let grazing = (2.0 / (2.0 + 1e-3_f64)).sqrt();
    assert_eq!(shot(0.5), 1);
    assert_eq!(shot(grazing * (1.0 - 1e-9)), 1, "a graze must be seen");
    assert_eq!(shot(grazing * (1.0 + 1e-9)), 0, "a miss by millimetres is none");
    assert_eq!(shot(1.0), 0);
    assert_eq!(shot(1.5), 0);
}

#[test]
fn points_that_fall_into_each_other_are_named_with_the_time() {
    let bodies = vec![
        body(1e20, [0.0; 3], [0.0; 3]),
        body(0.0, [3e12, 0.0, 0.0], [0.0, 4e3, 0.0]),
        body(1e15, [0.0, 1e10, 0.0], [0.0; 3]),
    ];
    let mut propagation = Propagation::new(&initial(bodies));
    let stopped = propagation.advance(1e9, 1_000_000).unwrap_err();
    assert_eq!(stopped.why, Why::Collapse);
    assert_eq!(stopped.names, ["A", "C"]);
    near("time", stopped.t_s, fall_s(1e20 + 1e15, 1e10, 0.0), 1e-3);
    assert_eq!(propagation.advance(1e9, 10).unwrap_err(), stopped, "it says so again");
    assert!(stopped.to_string().contains("A and C"));
    // Two bodies in one place from the start.
    let bodies = vec![body(1.0, [1.0; 3], [0.0; 3]), body(1.0, [1.0; 3], [0.0; 3])];
    let stopped = Propagation::new(&initial(bodies)).advance(1.0, 10).unwrap_err();
    assert_eq!((stopped.t_s.to_bits(), stopped.why), (0, Why::Collapse));
}

#[test]
fn what_rests_on_a_body_goes_with_it_when_that_lands_on_a_third() {
    let initial = initial(vec![
        ball(0.0, 10.0, Surface::Stop, [0.0, RADIUS_M + 1e4, 0.0], [0.0; 3]),
        ball(GM, RADIUS_M, Surface::Stop, [0.0; 3], [0.0; 3]),
        body(0.0, [0.0, RADIUS_M + 1e4 + 11.0, 0.0], [0.0, -1.0, 0.0]),
    ]);
    let eph = paths(&initial, 1000.0);
    let pairs: Vec<_> = eph.contacts().iter().map(|c| (c.body.0, c.onto.0)).collect();
    assert_eq!(pairs, [(2, 0), (0, 1)]);
    near("the tower", at(&eph, 2, 1000.0).pos.y, RADIUS_M + 20.0, 1e-6);
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(48))]
    #[test]
    fn nothing_with_a_surface_is_ever_entered(x in 2.0..20.0_f64, y in -3.0..3.0_f64, u in -1.5..0.5_f64, v in -1.0..1.0_f64, restitution in prop_oneof![Just(None), (0.0..1.0_f64).prop_map(Some)]) {
        let surface = restitution.map_or(Surface::Stop, |restitution| Surface::Bounce { restitution });
        let speed = (GM / RADIUS_M).sqrt();
        let initial = initial(vec![
            ball(GM, RADIUS_M, surface, [0.0; 3], [0.0; 3]),
            body(0.0, [x * RADIUS_M, y * RADIUS_M, 0.0], [u * speed, v * speed, 0.0]),
        ]);
        let eph = paths(&initial, 3e5);
        for k in 0..3000 {
            let t_s = f64::from(k) * 100.0;
            let r = at(&eph, 1, t_s).pos.norm();
            prop_assert!(r > RADIUS_M * (1.0 - 3e-12), "{r} at {t_s}");
        }
    }
}
