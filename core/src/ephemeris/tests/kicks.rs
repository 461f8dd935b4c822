//! Kicks of bodies that rest on others.

use super::*;
use crate::ephemeris::{Contact, Outcome, Release};
use crate::initial::TimedChange;
use crate::math::float::acos;
use crate::scenario::{ChangeKind, Direction, Kick};
use crate::units::Speed;

/// An airless world, and how it moves: a host that rests would hide what forgets its motion.
const GM: f64 = 4.9e12;
const RADIUS_M: f64 = 1.7e6;
const ALONG: [f64; 3] = [1e4, -2e3, 500.0];

fn kick(t_s: f64, body: usize, up_m_s: f64) -> TimedChange {
    let speed = Speed::from_m_s(up_m_s);
    let kick = Kick::Along { speed, direction: Direction::Outwards, about: Some(BodyId(0)) };
    TimedChange { t_s, body: BodyId(body), what: ChangeKind::Kick(kick) }
}

fn push(t_s: f64, body: usize, m_s: [f64; 3]) -> TimedChange {
    let kick = Kick::By(m_s.map(Speed::from_m_s));
    TimedChange { t_s, body: BodyId(body), what: ChangeKind::Kick(kick) }
}

/// A ball of so much gravity, let go 100 m above the ground of the moving world: it lands after some 11 s.
fn dropped(ball_gm: f64, changes: Vec<TimedChange>) -> InitialState {
    let mut start = initial(vec![
        ball(GM, RADIUS_M, Surface::Stop, [0.0; 3], ALONG),
        body(ball_gm, [0.0, RADIUS_M + 100.0, 0.0], ALONG),
    ]);
    start.changes = changes;
    start
}

/// Of one body relative to another.
fn relative(eph: &Ephemeris, body: usize, about: usize, t_s: f64) -> State {
    let (a, b) = (at(eph, body, t_s), at(eph, about, t_s));
    State { pos: a.pos - b.pos, vel: a.vel - b.vel }
}

/// Greatest distance from the centre of what leaves the ground upwards, and how long it is away: the energy, and Kepler's equation of a
/// straight ellipse.
fn flight(gm: f64, up_m_s: f64) -> (f64, f64) {
    let top_m = 1.0 / (1.0 / RADIUS_M - up_m_s * up_m_s / (2.0 * gm));
    let x = RADIUS_M / top_m;
    (top_m, 2.0 * (top_m * top_m * top_m / (2.0 * gm)).sqrt() * (acos(x.sqrt()) + (x * (1.0 - x)).sqrt()))
}

#[test]
fn a_ball_kicked_up_from_the_ground_flies_as_high_as_its_speed_allows_and_falls_back() {
    // A tracer, and a ball with an eighth of the world's own gravity, which pulls the world along.
    for ball_gm in [0.0, GM / 8.0] {
        let (kicked_s, up_m_s) = (100.0, 20.0);
        let eph = paths(&dropped(ball_gm, vec![kick(kicked_s, 1, up_m_s)]), 300.0);
        // Roundings of places 3e6 m from the start of the file's coordinates, over the speed.
        let (tol_m, tol_s) = (1e-8, 1e-8);
        let (top_m, away_s) = flight(GM + ball_gm, up_m_s);
        let top = relative(&eph, 1, 0, kicked_s + 0.5 * away_s);
        near("height", top.pos.norm() - RADIUS_M, top_m - RADIUS_M, tol_m);
        near("v²/2g", top.pos.norm() - RADIUS_M, 200.0 * RADIUS_M * RADIUS_M / (GM + ball_gm), 0.01);
        let [landed, again] = eph.contacts() else { panic!("{:?}", eph.contacts()) };
        assert_eq!((landed.outcome, again.outcome), (Outcome::Stopped, Outcome::Stopped));
        near("time away", again.t_s - kicked_s, away_s, tol_s);
        near("speed of the fall", again.speed_m_s, up_m_s, 1e-8 * up_m_s);
        assert_eq!(eph.releases(), [Release { t_s: kicked_s, body: BodyId(1) }]);
        let rests = |t_s| eph.at_rest(BodyId(1), t_s).map(|contact| contact.t_s);
        let (first, second) = (Some(landed.t_s), Some(again.t_s));
        assert_eq!([0.0, landed.t_s, 99.9].map(rests), [None, first, first]);
        assert_eq!([kicked_s, kicked_s + 0.5 * away_s, again.t_s - 1e-3].map(rests), [None; 3]);
        assert_eq!([again.t_s, 300.0].map(rests), [second; 2]);
        for t_s in [50.0, 299.0] {
            let rest = relative(&eph, 1, 0, t_s);
            near("at rest", rest.pos.norm(), RADIUS_M, tol_m);
            assert_eq!(rest.vel, Vector3::zeros(), "at {t_s}");
        }
    }
}

#[test]
fn kicks_that_do_not_lift_it_off_leave_a_ball_where_it_is() {
    let plain = paths(&dropped(0.0, Vec::new()), 200.0);
    // Into the ground, along it, and upwards by so little that nobody sees it come back: 2v/g of 0.01 s are 8 mm/s.
    for changes in
        [vec![kick(100.0, 1, -20.0)], vec![push(100.0, 1, [30.0, 0.0, 0.0])], vec![kick(100.0, 1, 0.005)]]
    {
        let eph = paths(&dropped(0.0, changes.clone()), 200.0);
        assert!(eph.releases().is_empty() && eph.contacts().len() == 1, "{changes:?}");
        assert_eq!(eph.at_rest(BodyId(1), 150.0), plain.at_rest(BodyId(1), 150.0), "{changes:?}");
        near("place", (at(&eph, 1, 200.0).pos - at(&plain, 1, 200.0).pos).norm(), 0.0, 1e-8);
    }
}

#[test]
fn a_kick_along_and_up_throws_it_over_the_ground_to_where_it_rests_again() {
    let eph = paths(&dropped(0.0, vec![push(60.0, 1, [300.0, 30.0, 0.0])]), 2000.0);
    let contacts: Vec<&Contact> = eph.contacts().iter().collect();
    assert_eq!(contacts.len(), 2, "{contacts:?}");
    let landed = relative(&eph, 1, 0, 2000.0);
    near("at rest", landed.pos.norm(), RADIUS_M, 1e-8);
    // 300 m/s for 2 · 30 m/s / g on a flat world; on a round one a little more.
    let flat_m = 300.0 * 60.0 / (GM / (RADIUS_M * RADIUS_M));
    assert!(landed.pos.x > flat_m && landed.pos.x < 1.1 * flat_m, "{} m, {flat_m} m", landed.pos.x);
}

#[test]
fn what_rests_on_a_body_goes_with_it_and_comes_back_with_it() {
    // A slab of 100 m falls; a stone, thrown after it, falls onto it before it lands. Later the slab is kicked up.
    let slab_m = 100.0;
    let after = [ALONG[0], ALONG[1] - 3.0, ALONG[2]];
    let mut start = initial(vec![
        ball(GM, RADIUS_M, Surface::Stop, [0.0; 3], ALONG),
        ball(0.0, slab_m, Surface::Stop, [0.0, RADIUS_M + slab_m + 100.0, 0.0], ALONG),
        body(0.0, [0.0, RADIUS_M + 2.0 * slab_m + 105.0, 0.0], after),
    ]);
    start.changes = vec![kick(100.0, 1, 20.0), kick(400.0, 2, 10.0)];
    let eph = paths(&start, 401.0);
    let onto = |body, t_s| eph.at_rest(BodyId(body), t_s).map(|contact| contact.onto.0);
    assert_eq!([onto(1, 99.0), onto(2, 99.0)], [Some(0), Some(1)]);
    assert_eq!([onto(1, 105.0), onto(2, 105.0)], [None, Some(1)], "the stone goes along");
    let flown = relative(&eph, 1, 0, 105.0).pos.norm() - RADIUS_M - slab_m;
    assert!(flown > 50.0, "{flown} m up");
    for t_s in [99.0, 105.0, 300.0] {
        near("on the slab", relative(&eph, 2, 1, t_s).pos.norm(), slab_m, 1e-8);
    }
    assert_eq!([onto(1, 300.0), onto(2, 300.0)], [Some(0), Some(1)], "both are back");
    assert_eq!([onto(1, 401.0), onto(2, 401.0)], [Some(0), None], "the stone by itself");
    assert!(relative(&eph, 2, 1, 401.0).pos.norm() > slab_m + 5.0);
}

#[test]
fn what_became_part_of_a_body_is_not_kicked_off_it() {
    let mut start = dropped(1e9, vec![kick(100.0, 1, 20.0)]);
    start.bodies[0].surface = Surface::Merge;
    let eph = paths(&start, 200.0);
    assert!(eph.releases().is_empty());
    assert_eq!(eph.at_rest(BodyId(1), 150.0).map(|contact| contact.outcome), Some(Outcome::Merged));
}

#[test]
fn the_time_before_the_start_knows_no_release() {
    // Thrown up before the start, so that going back it lands as well.
    let mut propagation = Propagation::new(&dropped(0.0, vec![kick(100.0, 1, 20.0)]));
    assert!(propagation.advance(-60.0, 100_000).unwrap() && propagation.advance(300.0, 100_000).unwrap());
    let eph = propagation.into_ephemeris();
    let contact = |t_s| eph.at_rest(BodyId(1), t_s).map(|contact| contact.t_s);
    assert!(contact(-59.0).is_some_and(|t_s| t_s < 0.0) && contact(-1.0).is_none());
    assert!(
        contact(50.0).is_some_and(|t_s| t_s > 0.0) && contact(101.0).is_none() && contact(299.0).is_some()
    );
    near("at rest", relative(&eph, 1, 0, -59.0).pos.norm(), RADIUS_M, 1e-8);
}

#[test]
fn thinned_paths_of_what_rests_and_leaves_stay_within_their_tolerance() {
    // Forty hops of hours, half as high as the world is wide; each cuts the paths of all. The ball pulls the world along, so that both have paths.
    let hops = (1..40).map(|hop| kick(2e4 * f64::from(hop), 1, 1900.0));
    let start = dropped(GM / 8.0, hops.collect());
    let until_s = 8e5;
    let exact = paths(&start, until_s);
    // Three quarters of what is allowed are for the time after the start.
    let mut propagation = Propagation::with_most_bytes(&start, exact.bytes());
    assert!(propagation.advance(until_s, 1_000_000).unwrap());
    let thin = propagation.into_ephemeris();
    assert_eq!((thin.releases(), thin.releases().len()), (exact.releases(), 39));
    assert!(thin.tolerance().velocity > exact.tolerance().velocity && thin.bytes() < exact.bytes());
    for n in 0..1600 {
        let t_s = 500.0 * f64::from(n);
        let (a, b) = (relative(&exact, 1, 0, t_s), relative(&thin, 1, 0, t_s));
        // Of speeds up to 2 km/s, for a hop of some hours.
        near("place", (a.pos - b.pos).norm(), 0.0, thin.tolerance().velocity * 2e3 * 1e4);
    }
}
