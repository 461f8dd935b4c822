//! Events on paths whose events are known.

use super::*;
use crate::Vector3;
use crate::conic::{Elements, state_from_elements};
use crate::ephemeris::Propagation;
use crate::initial::InitialBody;
use crate::scenario::Surface;
use std::f64::consts::TAU;

pub(super) const GM: f64 = 1.327e20;
pub(super) const AU: f64 = 1.495_978_707e11;

pub(super) fn point(
    name: &str,
    gm_m3_s2: f64,
    primary: Option<usize>,
    pos: Vector3<f64>,
    vel: Vector3<f64>,
) -> InitialBody {
    let primary = primary.map(BodyId);
    InitialBody { name: name.into(), gm_m3_s2, radius_m: 0.0, surface: Surface::Stop, primary, pos, vel }
}

/// The orbit of [`orbiting`], at a true anomaly.
pub(super) fn elements(q: f64, e: f64, nu: f64) -> Elements {
    Elements {
        periapsis_m: q,
        eccentricity: e,
        inclination_rad: 0.1,
        node_rad: 1.0,
        argument_rad: 2.0,
        true_anomaly_rad: nu,
    }
}

pub(super) fn orbiting(gm: f64, gm_own: f64, q: f64, e: f64, nu: f64) -> InitialBody {
    let (pos, vel) = state_from_elements(&elements(q, e, nu), gm).unwrap();
    point("p", gm_own, Some(0), pos, vel)
}

pub(super) fn state(bodies: Vec<InitialBody>) -> InitialState {
    InitialState::of(bodies)
}

pub(super) fn run(initial: &InitialState, from_s: f64, until_s: f64) -> Ephemeris {
    let mut propagation = Propagation::new(initial);
    assert!(propagation.advance(until_s, 1_000_000).unwrap());
    if from_s < 0.0 {
        assert!(propagation.advance(from_s, 1_000_000).unwrap());
    }
    propagation.into_ephemeris()
}

pub(super) fn star() -> InitialBody {
    point("star", GM, None, Vector3::zeros(), Vector3::zeros())
}

pub(super) fn period(q: f64, e: f64) -> f64 {
    let a = q / (1.0 - e);
    TAU * (a * a * a / GM).sqrt()
}

pub(super) fn times(found: &[Event]) -> Vec<f64> {
    found.iter().map(|e| e.t_s).collect()
}

/// Times are as good as the integration: some 1e-14 of the time covered, more where speed hardly changes along the way.
pub(super) fn same_times(got: &[f64], want: &[f64], tol_s: f64) {
    assert_eq!(got.len(), want.len(), "got {got:?}, want {want:?}");
    for (got, want) in got.iter().zip(want) {
        assert!((got - want).abs() <= tol_s, "got {got}, want {want}, difference {} s", got - want);
    }
}

const PERI: Query = Query::new(EventKind::Periapsis, BodyId(1), None);
const APO: Query = Query::new(EventKind::Apoapsis, BodyId(1), None);

#[test]
fn apsides_come_once_a_period_for_every_eccentricity() {
    for (e, tol) in [(1e-6, 1e-4), (0.02, 1e-9), (0.5, 1e-10), (0.9, 1e-10), (0.99, 1e-10)] {
        let initial = state(vec![star(), orbiting(GM, 0.0, AU * (1.0 - e), e, 0.0)]);
        let p = period(AU * (1.0 - e), e);
        let eph = run(&initial, -2.2 * p, 3.7 * p);
        let peri = find(&eph, &initial, &PERI, -2.2 * p, 3.7 * p);
        same_times(&times(&peri), &[-2.0, -1.0, 0.0, 1.0, 2.0, 3.0].map(|k| k * p), tol * p);
        let apo = find(&eph, &initial, &APO, -2.2 * p, 3.7 * p);
        same_times(&times(&apo), &[-1.5, -0.5, 0.5, 1.5, 2.5, 3.5].map(|k| k * p), tol * p);
        for event in &peri {
            assert!((event.value / (AU * (1.0 - e)) - 1.0).abs() < 1e-11, "e {e}: {event:?}");
        }
        for event in &apo {
            assert!((event.value / (AU * (1.0 + e)) - 1.0).abs() < 1e-11, "e {e}: {event:?}");
        }
    }
}

#[test]
fn the_one_at_the_start_is_there_and_is_not_the_first() {
    let initial = state(vec![star(), orbiting(GM, 0.0, AU, 0.3, 0.0)]);
    let p = period(AU, 0.3);
    let eph = run(&initial, 0.0, 4.2 * p);
    let with_past = run(&initial, -1.0, 4.2 * p);
    for eph in [&eph, &with_past] {
        let found = find(eph, &initial, &PERI, 0.0, 4.2 * p);
        assert_eq!(found.len(), 5);
        assert!(found[0].t_s.abs() < 1e-3);
        let mut after = 0.0;
        for nth in 1..5_u32 {
            let event =
                EventRef { kind: EventKind::Periapsis, body: BodyId(1), other: None, nth: 1, distance: None };
            after = first(eph, &initial, &event, after).unwrap().t_s;
            let numbered = EventRef { nth: nth as usize, ..event };
            let again = first(eph, &initial, &numbered, 0.0).unwrap().t_s;
            same_times(&[after, again], &[f64::from(nth) * p; 2], 1e-10 * p);
        }
        let fifth =
            EventRef { kind: EventKind::Periapsis, body: BodyId(1), other: None, nth: 5, distance: None };
        assert_eq!(first(eph, &initial, &fifth, 0.0), None);
    }
}

#[test]
fn circles_and_bodies_at_rest_have_no_apsides() {
    let initial = state(vec![star(), orbiting(GM, 0.0, AU, 0.0, 0.4), orbiting(GM, 0.0, AU, 1e-10, 0.7)]);
    let p = period(AU, 0.0);
    let eph = run(&initial, -10.0 * p, 10.0 * p);
    for body in [BodyId(1), BodyId(2)] {
        for kind in [EventKind::Periapsis, EventKind::Apoapsis, EventKind::ClosestApproach] {
            let found = find(&eph, &initial, &Query::new(kind, body, None), -10.0 * p, 10.0 * p);
            assert_eq!(found, vec![], "{kind:?}");
        }
    }
    let resting = state(vec![
        point("a", 0.0, None, Vector3::zeros(), Vector3::zeros()),
        point("b", 0.0, Some(0), Vector3::new(1e9, 2e9, 0.0), Vector3::zeros()),
    ]);
    let eph = run(&resting, 0.0, 1e9);
    assert_eq!(all(&eph, &resting, 0.0, 1e9), vec![]);
}

#[test]
fn a_straight_pass_has_one_closest_approach_and_no_apoapsis() {
    let initial = state(vec![
        point("a", 0.0, None, Vector3::zeros(), Vector3::zeros()),
        point("b", 0.0, Some(0), Vector3::new(-3e6, 4e6, 0.0), Vector3::new(1e3, 0.0, 0.0)),
    ]);
    let eph = run(&initial, 0.0, 1e5);
    let query = Query::new(EventKind::ClosestApproach, BodyId(1), Some(BodyId(0)));
    let found = find(&eph, &initial, &query, 0.0, 1e5);
    same_times(&times(&found), &[3000.0], 1e-9);
    assert!((found[0].value - 4e6).abs() < 1e-6);
    assert_eq!(find(&eph, &initial, &APO, 0.0, 1e5), vec![]);
}

#[test]
fn oppositions_of_circular_orbits_keep_the_synodic_time() {
    // Two circles in one plane, an angle of 1 rad between the planets at the start.
    let circle = |a: f64, angle: f64| {
        let (s, c) = crate::math::float::sin_cos(angle);
        let v = (GM / a).sqrt();
        point("p", 1.0, Some(0), Vector3::new(a * c, a * s, 0.0), Vector3::new(-v * s, v * c, 0.0))
    };
    let initial = state(vec![star(), circle(AU, 0.0), circle(1.5 * AU, 1.0)]);
    let (n1, n2) = (TAU / period(AU, 0.0), TAU / period(1.5 * AU, 0.0));
    let eph = run(&initial, 0.0, 5.0 * TAU / (n1 - n2));
    let until = eph.until_s();
    let look = |kind, body, other| {
        find(&eph, &initial, &Query::new(kind, BodyId(body), Some(BodyId(other))), 0.0, until)
    };
    let at = |angle: f64| -> Vec<f64> {
        (0..7).map(|k| (angle + TAU * f64::from(k)) / (n1 - n2)).filter(|&t| t <= until).collect()
    };
    let tol = 1e-12 * until;
    // The inner one overtakes on the inside: the outer stands opposite to the star, the inner before it.
    let opposition = look(EventKind::Opposition, 2, 1);
    same_times(&times(&opposition), &at(1.0), tol);
    assert!(opposition.iter().all(|e| (e.value - 180.0).abs() < 1e-6 && e.unit == "deg"));
    let conjunctions = look(EventKind::Conjunction, 2, 1);
    same_times(&times(&conjunctions), &at(1.0 + 0.5 * TAU), tol);
    // Inner planets have two kinds of conjunction and never an opposition.
    let mut both = [at(1.0), at(1.0 + 0.5 * TAU)].concat();
    both.sort_by(f64::total_cmp);
    same_times(&times(&look(EventKind::Conjunction, 1, 2)), &both, tol);
    assert_eq!(look(EventKind::Opposition, 1, 2), vec![]);
    // Closest approaches fall on the oppositions.
    same_times(&times(&look(EventKind::ClosestApproach, 2, 1)), &at(1.0), tol);
    let listed = all(&eph, &initial, 0.0, until);
    assert!(listed.windows(2).all(|w| w[0].t_s <= w[1].t_s));
    let among = |kinds: &[EventKind]| listed.iter().filter(|e| kinds.contains(&e.kind)).count();
    assert_eq!(among(&[EventKind::Opposition, EventKind::ClosestApproach]), 2 * opposition.len());
    assert_eq!(among(&[EventKind::Conjunction]), conjunctions.len() + both.len());
    // In the plane of the ecliptic, without surfaces, all else that there is are stations and greatest elongations.
    let others = among(&[EventKind::Stationary, EventKind::GreatestElongation]);
    assert_eq!(listed.len(), 2 * opposition.len() + conjunctions.len() + both.len() + others);
    assert!(others > 20, "{others}");
}

#[test]
fn several_events_in_one_step_are_all_found() {
    // Eccentricity 1e-8, looked at in the longest steps that the integrator takes for it: apsides alternate.
    let initial = state(vec![star(), orbiting(GM, 0.0, AU, 1e-8, 0.3)]);
    let p = period(AU, 1e-8);
    let eph = run(&initial, 0.0, 20.5 * p);
    let mut both = find(&eph, &initial, &PERI, 0.0, 20.5 * p);
    both.extend(find(&eph, &initial, &APO, 0.0, 20.5 * p));
    both.sort_by(|a, b| a.t_s.total_cmp(&b.t_s));
    assert_eq!(both.len(), 41);
    assert!(both.windows(2).all(|w| w[0].kind != w[1].kind));
}

/// A stone let go 100 m above an airless ground, with what its contact does.
fn stone(surface: Surface) -> InitialState {
    let mut ground = point("ground", 4e14, None, Vector3::zeros(), Vector3::zeros());
    ground.radius_m = 6e6;
    ground.surface = surface;
    let stone = point("stone", 0.0, Some(0), Vector3::new(6e6 + 100.0, 0.0, 0.0), Vector3::zeros());
    state(vec![ground, stone])
}

#[test]
fn a_fall_ends_in_a_contact_and_nothing_happens_to_what_rests() {
    let initial = stone(Surface::Stop);
    let eph = run(&initial, 0.0, 1e5);
    let found = all(&eph, &initial, 0.0, 1e5);
    // It starts at the top of its fall; the ground stops it.
    let kinds: Vec<_> = found.iter().map(|e| (e.kind, e.body, e.other)).collect();
    let (stone, ground) = (BodyId(1), Some(BodyId(0)));
    assert_eq!(
        kinds,
        vec![(EventKind::Apoapsis, stone, ground), (EventKind::Contact, stone, ground)],
        "{found:?}"
    );
    // h = g t² / 2 and v = g t with g = GM / r², which grows by 3e-5 of itself on the way.
    let g = 4e14 / (6e6 * 6e6);
    assert!((found[1].t_s - (200.0_f64 / g).sqrt()).abs() < 1e-4, "{found:?}");
    assert!((found[1].value - (200.0 * g).sqrt()).abs() < 1e-2 && found[1].unit == "m/s", "{found:?}");
}

#[test]
fn rebounds_are_contacts_and_no_apsides_but_the_tops_between_them_are() {
    let initial = stone(Surface::Bounce { restitution: 1.0 });
    let eph = run(&initial, 0.0, 60.0);
    let g = 4e14 / (6e6 * 6e6);
    let fall = (200.0_f64 / g).sqrt();
    let look = |kind| times(&find(&eph, &initial, &Query::new(kind, BodyId(1), None), 0.0, 60.0));
    let contacts = look(EventKind::Contact);
    let want: Vec<f64> = (0..20).map(|k| fall * f64::from(2 * k + 1)).filter(|&t| t < 60.0).collect();
    same_times(&contacts, &want, 1e-2);
    let tops: Vec<f64> = (0..20).map(|k| fall * f64::from(2 * k)).filter(|&t| t < 60.0).collect();
    same_times(&look(EventKind::Apoapsis), &tops, 1e-2);
    assert_eq!(look(EventKind::Periapsis), Vec::<f64>::new());
    let third = EventRef {
        kind: EventKind::Contact,
        body: BodyId(1),
        other: Some(BodyId(0)),
        nth: 3,
        distance: None,
    };
    assert_eq!(first(&eph, &initial, &third, 0.0).map(|e| e.t_s), Some(contacts[2]));
}

#[test]
fn bodies_that_are_not_there_and_empty_paths_have_no_events() {
    let initial = state(vec![star(), orbiting(GM, 0.0, AU, 0.3, 0.0)]);
    let nothing = Ephemeris::new(vec![GM, 0.0]);
    assert_eq!(find(&nothing, &initial, &PERI, -1e9, 1e9), vec![]);
    let eph = run(&initial, 0.0, 1e8);
    for (body, other) in [(7, None), (1, Some(7)), (1, Some(1)), (0, None)] {
        for kind in EventKind::ALL {
            let query = Query::new(kind, BodyId(body), other.map(BodyId));
            assert_eq!(find(&eph, &initial, &query, 0.0, 1e8), vec![], "{query:?}");
        }
    }
    assert_eq!(find(&eph, &initial, &PERI, 1e8, 0.0), vec![]);
    assert_eq!(find(&eph, &initial, &PERI, f64::NAN, 1e8), vec![]);
}

#[test]
fn two_that_leave_the_same_place_do_not_approach_each_other_there() {
    let star = point("s", GM, None, Vector3::zeros(), Vector3::zeros());
    let ball =
        |speed: f64| point("b", 0.0, Some(0), Vector3::new(AU, 0.0, 0.0), Vector3::new(0.0, speed, 0.0));
    let initial = state(vec![star, ball(25_000.0), ball(31_000.0)]);
    let year_s = 3.2e7;
    let eph = run(&initial, 0.0, year_s);
    let approaches = all(&eph, &initial, 0.0, year_s);
    let approaches = approaches.iter().filter(|event| event.kind == EventKind::ClosestApproach);
    assert!(approaches.clone().all(|event| event.t_s > 1e5), "{:?}", approaches.collect::<Vec<_>>());
}
