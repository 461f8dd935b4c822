//! Nodes, stations, elongations, distances and shadows on paths whose events are known in closed form.

use super::tests::{AU, GM, elements, orbiting, period, point, run, same_times, star, state, times};
use super::{Event, Query, all, find, first};
use crate::Vector3;
use crate::initial::InitialState;
use crate::math::float::{acos, sin_cos};
use crate::scenario::{BodyId, EventKind, EventRef};
use crate::units::Length;
use std::f64::consts::{PI, TAU};

/// Time after periapsis at which an orbit of [`orbiting`] comes to a true anomaly, 0 to one period.
fn at_anomaly(q: f64, e: f64, nu: f64) -> f64 {
    elements(q, e, nu).after_periapsis_s(GM).unwrap().rem_euclid(period(q, e))
}

#[test]
fn nodes_come_where_the_argument_puts_them_on_both_sides_of_the_start() {
    for e in [0.0, 0.3, 0.9] {
        let q = AU * (1.0 - e);
        let initial = state(vec![star(), orbiting(GM, 0.0, q, e, 0.0)]);
        let p = period(q, e);
        let eph = run(&initial, -2.0 * p, 3.0 * p);
        for (kind, nu, longitude) in
            [(EventKind::AscendingNode, -2.0, 1.0), (EventKind::DescendingNode, PI - 2.0, 1.0 + PI)]
        {
            let found = find(&eph, &initial, &Query::new(kind, BodyId(1), None), -2.0 * p, 3.0 * p);
            let t = at_anomaly(q, e, nu);
            same_times(&times(&found), &[-2.0, -1.0, 0.0, 1.0, 2.0].map(|k| t + k * p), 1e-10 * p);
            for event in found {
                assert!((event.value - longitude.to_degrees()).abs() < 1e-7, "{event:?}");
                assert_eq!(event.unit, "deg");
            }
        }
    }
}

#[test]
fn orbits_in_the_ecliptic_have_no_nodes() {
    let v = (GM / AU).sqrt();
    let flat = |z: f64| point("p", 0.0, Some(0), Vector3::new(AU, 0.0, 0.0), Vector3::new(0.0, v, z * v));
    let initial = state(vec![star(), flat(0.0), flat(1e-11)]);
    let eph = run(&initial, 0.0, 1e8);
    for body in [1, 2] {
        for kind in [EventKind::AscendingNode, EventKind::DescendingNode] {
            assert_eq!(find(&eph, &initial, &Query::new(kind, BodyId(body), None), 0.0, 1e8), vec![]);
        }
    }
}

#[test]
fn stations_and_greatest_elongations_of_circles_keep_their_angles() {
    let circle = |a: f64, angle: f64| {
        let (s, c) = sin_cos(angle);
        let v = (GM / a).sqrt();
        point("p", 1.0, Some(0), Vector3::new(a * c, a * s, 0.0), Vector3::new(-v * s, v * c, 0.0))
    };
    let (inner, outer) = (AU, 1.5 * AU);
    let initial = state(vec![star(), circle(inner, 0.0), circle(outer, 1.0)]);
    let rate = TAU / period(inner, 0.0) - TAU / period(outer, 0.0);
    let eph = run(&initial, 0.0, 4.0 * TAU / rate);
    let until = eph.until_s();
    // Times at which the inner planet leads the outer one by an angle.
    let at =
        |angle: f64| (0..6).map(move |k| (angle + 1.0 + TAU * f64::from(k)) / rate).filter(|&t| t <= until);
    let both = |angle: f64| {
        let mut both: Vec<f64> = at(angle).chain(at(-angle)).collect();
        both.sort_by(f64::total_cmp);
        both
    };
    // Angles turn into times by dividing by `rate`; the paths are good to some 1e-13 of the time covered.
    let tol = 1e-12 * until;
    // The line of sight keeps its direction when r₁v₁ + r₂v₂ = (r₁v₂ + r₂v₁) cos Δ.
    let (v1, v2) = ((GM / inner).sqrt(), (GM / outer).sqrt());
    let still = acos((inner * v1 + outer * v2) / (inner * v2 + outer * v1));
    for (body, observer) in [(2, 1), (1, 2)] {
        let query = Query::new(EventKind::Stationary, BodyId(body), Some(BodyId(observer)));
        same_times(&times(&find(&eph, &initial, &query, 0.0, until)), &both(still), tol);
    }
    // The line of sight touches the inner orbit when cos Δ = r₁ / r₂; then sin E = r₁ / r₂.
    let query = Query::new(EventKind::GreatestElongation, BodyId(1), Some(BodyId(2)));
    let found = find(&eph, &initial, &query, 0.0, until);
    // The maximum of a smooth angle: its derivative is known to rounding, so the time is as good as the paths.
    same_times(&times(&found), &both(acos(inner / outer)), tol);
    let widest = crate::math::float::asin(inner / outer).to_degrees();
    for event in &found {
        assert!((event.value.abs() - widest).abs() < 1e-9 && event.unit == "deg", "{event:?}");
    }
    // East in the evening before the inner planet overtakes, west after.
    assert!(found.windows(2).all(|w| (w[0].value > 0.0) != (w[1].value > 0.0)), "{found:?}");
    let overtaking = at(0.0).next().unwrap();
    let before = found.iter().rfind(|e| e.t_s < overtaking);
    assert!(before.is_none_or(|e| e.value > 0.0), "{found:?}");
    // What is farther out has oppositions instead.
    let query = Query::new(EventKind::GreatestElongation, BodyId(2), Some(BodyId(1)));
    assert_eq!(find(&eph, &initial, &query, 0.0, until), vec![]);
}

#[test]
fn a_distance_is_crossed_outwards_and_inwards_and_numbered() {
    let (q, e) = (AU, 0.3);
    let initial = state(vec![star(), orbiting(GM, 0.0, q, e, 0.0)]);
    let p = period(q, e);
    let eph = run(&initial, -p, 2.0 * p);
    let distance_m = 1.4 * AU;
    let nu = acos((q * (1.0 + e) / distance_m - 1.0) / e);
    let out = at_anomaly(q, e, nu);
    let query = Query { distance_m: Some(distance_m), ..Query::new(EventKind::Distance, BodyId(1), None) };
    let found = find(&eph, &initial, &query, -p, 2.0 * p);
    same_times(&times(&found), &[out - p, -out, out, p - out, out + p, 2.0 * p - out], 1e-11 * p);
    // Radial speed by the vis-viva of the radius: √(GM / p) e sin ν.
    let speed = (GM / (q * (1.0 + e))).sqrt() * e * crate::math::float::sin(nu);
    for (k, event) in found.iter().enumerate() {
        let want = if k % 2 == 0 { speed } else { -speed };
        assert!((event.value - want).abs() < 1e-6 * speed && event.unit == "m/s", "{event:?}, want {want}");
    }
    let named = EventRef {
        kind: EventKind::Distance,
        body: BodyId(1),
        other: Some(BodyId(0)),
        nth: 2,
        distance: Some(Length::from_m(distance_m)),
    };
    same_times(&[first(&eph, &initial, &named, 0.0).unwrap().t_s], &[p - out], 1e-11 * p);
    // Never reached, touched at most, and not stated.
    for distance_m in [Some(0.5 * AU), Some(AU * (1.0 - 1e-12)), None] {
        assert_eq!(find(&eph, &initial, &Query { distance_m, ..query }, -p, 2.0 * p), vec![]);
    }
}

/// A star of 700, a globe of 6 at 1000 from it, and a body that flies straight past behind the globe; no gravity.
fn past(behind: f64, radius: f64, speed: f64) -> InitialState {
    let at_rest = |name: &str, primary, x: f64, radius| {
        let mut body = point(name, 0.0, primary, Vector3::new(x, 0.0, 0.0), Vector3::zeros());
        body.radius_m = radius;
        body
    };
    let mut body =
        point("body", 0.0, Some(1), Vector3::new(1e6 + behind, -1e5, 0.0), Vector3::new(0.0, speed, 0.0));
    body.radius_m = radius;
    state(vec![at_rest("star", None, 0.0, 7e3), at_rest("globe", Some(0), 1e6, 6e2), body])
}

const SHADOWS: [EventKind; 4] =
    [EventKind::PenumbraEntry, EventKind::ShadowEntry, EventKind::ShadowExit, EventKind::PenumbraExit];

fn shadows(initial: &InitialState, until_s: f64) -> Vec<Vec<f64>> {
    let eph = run(initial, 0.0, until_s);
    SHADOWS.map(|kind| times(&find(&eph, initial, &Query::new(kind, BodyId(2), None), 0.0, until_s))).to_vec()
}

#[test]
fn shadows_are_met_and_left_at_the_edges_of_their_cones() {
    // Entry and exit lie in one step when the body is fast: without gravity there is nothing to part steps for.
    for (behind, radius, speed) in [(3e4, 0.0, 10.0), (3e4, 50.0, 10.0), (9e3, 700.0, 1e4), (8e4, 0.0, 1e3)] {
        let edge = |narrows: f64| {
            let sine = narrows / 1e6;
            (6e2 + radius - behind * sine) / (1.0 - sine * sine).sqrt()
        };
        let (umbra, penumbra) = (edge(7e3 - 6e2), edge(-7e3 - 6e2));
        let found = shadows(&past(behind, radius, speed), 3e5 / speed);
        for (found, y) in found.iter().zip([-penumbra, -umbra, umbra, penumbra]) {
            same_times(found, &[(1e5 + y) / speed], 1e-9 * 1e5 / speed);
        }
    }
}

#[test]
fn beyond_the_tip_of_the_umbra_only_what_reaches_it_is_dark() {
    // The tip lies 1e6 × 600 / 6400 behind the globe.
    let tip = 1e6 * 6e2 / 6.4e3;
    let found = shadows(&past(tip + 300.0, 0.0, 10.0), 3e4);
    let counts: Vec<usize> = found.iter().map(Vec::len).collect();
    assert_eq!(counts, [1, 0, 0, 1], "a point behind the tip");
    // A globe whose limb reaches the tip: a circle of √(r² - 300²).
    let found = shadows(&past(tip + 300.0, 500.0, 10.0), 3e4);
    same_times(&found[1], &[1e4 - 40.0], 1e-7);
    same_times(&found[2], &[1e4 + 40.0], 1e-7);
    let found = shadows(&past(tip + 501.0, 500.0, 10.0), 3e4);
    assert_eq!(found[1].len() + found[2].len(), 0, "a globe that doesn't reach the tip");
    // Between the star and the globe there is no shadow.
    let found = shadows(&past(-3e4, 0.0, 10.0), 3e4);
    assert!(found.iter().all(Vec::is_empty), "before the globe: {found:?}");
}

#[test]
fn a_moon_is_shaded_at_each_round_and_listed() {
    // A planet that stands still and its moon, in the light of a distant star without pull.
    let mut sun = point("sun", 0.0, None, Vector3::new(-AU, 0.0, 0.0), Vector3::zeros());
    sun.radius_m = 7e8;
    let mut globe = point("globe", 4e14, Some(0), Vector3::zeros(), Vector3::zeros());
    globe.radius_m = 6.4e6;
    let r: f64 = 4.2e7;
    let v = (4e14 / r).sqrt();
    let moon = point("moon", 0.0, Some(1), Vector3::new(0.0, -r, 0.0), Vector3::new(v, 0.0, 0.0));
    let initial = state(vec![sun, globe, moon]);
    let p = TAU * (r * r * r / 4e14).sqrt();
    let eph = run(&initial, 0.0, 3.0 * p);
    let sine = (7e8 - 6.4e6) / AU;
    // ρ cos α + s sin α = R with ρ = r sin φ and s = r cos φ: sin(φ + α) = R / r.
    let phi = crate::math::float::asin(6.4e6 / r) - crate::math::float::asin(sine);
    let at = |phi: f64| [0.0, 1.0, 2.0].map(|k| (0.25 + phi / TAU + k) * p);
    let look = |kind| find(&eph, &initial, &Query::new(kind, BodyId(2), None), 0.0, 3.0 * p);
    same_times(&times(&look(EventKind::ShadowEntry)), &at(-phi), 1e-11 * p);
    same_times(&times(&look(EventKind::ShadowExit)), &at(phi), 1e-11 * p);
    let listed = all(&eph, &initial, 0.0, 3.0 * p);
    for kind in SHADOWS {
        let of_kind: Vec<&Event> = listed.iter().filter(|e| e.kind == kind).collect();
        assert_eq!(of_kind.len(), 3, "{kind:?}");
        assert!(of_kind.iter().all(|e| (e.value - r).abs() < 1.0 && e.other == Some(BodyId(1))));
    }
}
