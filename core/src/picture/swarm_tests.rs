//! Swarms in pictures: seen where they are, hidden where they should be, and the same however one came there.

use super::*;
use crate::scenario::{Cast, SwarmId};
use crate::show::{Action, Clock, Rehearsal};
use crate::swarm::Cursor;

const HOUSE: Screen = Screen { width_px: 1920.0, height_px: 1080.0, density: 1.0 };

/// A planet with a ring, seen from the side so that it hides a part of it.
fn ringed() -> Show {
    let text = "format = 1\ntitle = \"T\"\n\
        [[body]]\nname = \"Brae\"\nkind = \"planet\"\nmass = \"1 Earth mass\"\nradius = \"6400 km\"\n\
        [[body]]\nname = \"Ring\"\nswarm = { ring = \"Brae\", from = \"9000 km\", to = \"14000 km\", count = 600 }\n\
        [[beat]]\ntitle = \"A\"\nclock = { pace = \"5 min/s\", lasts = \"30 s\" }\n\
        view = { centre = \"Brae\", span = \"30000 km\", tilt = \"80 deg\" }\n";
    Rehearsal::whole(text).expect("a show")
}

fn composer(show: &Show) -> Composer {
    Composer::new(show, HOUSE, Options::default())
}

fn moment(show: &Show, at_s: f64) -> Moment {
    let mut clock = Clock::new(&show.plan);
    clock.act(&show.plan, Action::Next);
    for _ in 0..64 {
        clock.advance(&show.plan, at_s / 64.0);
    }
    clock.moment(&show.plan)
}

/// The points of the list, and where in it they stand.
fn points(list: &DisplayList) -> Vec<(usize, usize)> {
    let of_item = |(index, item): (usize, &Item)| match &item.shape {
        Shape::Points { points, .. } => Some((index, points.len())),
        _ => None,
    };
    list.items.iter().enumerate().filter_map(of_item).collect()
}

#[test]
fn what_a_planet_hides_is_left_out_and_what_is_before_it_is_drawn_over_it() {
    let show = ringed();
    let moment = moment(&show, 7.0);
    let list = composer(&show).compose(&show, &moment);
    let mut cursor = Cursor::new(&show.initial, 0);
    assert!(cursor.seek(&show.swarms[0], &show.ephemeris, moment.model_s, usize::MAX));
    let at = cursor.positions();
    // The eye stands over y < 0, 80 degrees from the pole; the planet is in the middle.
    let (sin, cos) = crate::math::float::sin_cos(80.0_f64.to_radians());
    let (mut open, mut before, mut behind) = (0, 0, 0);
    for ((x, y), z) in at.x.iter().zip(at.y).zip(at.z) {
        let (up, toward) = (y * cos + z * sin, z * cos - y * sin);
        match ((x * x + up * up).sqrt() < 6.4e6, toward > 0.0) {
            (false, _) => open += 1,
            (true, true) => before += 1,
            (true, false) => behind += 1,
        }
    }
    assert!(before > 30 && behind > 30, "{before} before, {behind} behind");
    let planet = list.items.iter().position(|i| matches!(i.tag, Tag::Body(_))).expect("a planet");
    let [(first, far), (second, near)] = points(&list)[..] else { panic!("{:?}", points(&list)) };
    assert_eq!((first, far, near), (0, open, before));
    assert!(second > planet);
}

#[test]
fn a_picture_of_a_swarm_follows_from_the_moment_alone() {
    let show = ringed();
    let mut roaming = composer(&show);
    for at_s in [20.0, 3.0, 29.0, 11.0, 11.5] {
        let moment = moment(&show, at_s);
        let list = roaming.compose(&show, &moment);
        assert!(!points(&list).is_empty());
        assert!(list == composer(&show).compose(&show, &moment), "at {at_s} s");
    }
}

#[test]
fn a_swarm_that_is_late_is_not_drawn_and_comes_within_a_few_pictures() {
    let show = ringed();
    let moment = moment(&show, 29.0);
    let mut hurried = composer(&show);
    hurried.work_at_most(1);
    assert_eq!(points(&hurried.compose(&show, &moment)), []);
    let mut pictures = 1;
    let list = loop {
        let list = hurried.compose(&show, &moment);
        pictures += 1;
        if !points(&list).is_empty() {
            break list;
        }
        assert!(pictures < 30, "it never comes");
    };
    assert!(list == composer(&show).compose(&show, &moment));
    let resized = hurried.for_other(&show, HOUSE, Options::default()).compose(&show, &moment);
    assert!(list == resized, "what was worked out goes along");
}

#[test]
fn only_the_cast_is_on_stage() {
    let mut show = ringed();
    let moment = moment(&show, 5.0);
    let named = |list: &DisplayList| {
        list.items.iter().any(|i| matches!(&i.shape, Shape::Text { text, .. } if text == "Ring"))
    };
    let all = composer(&show).compose(&show, &moment);
    assert!(!points(&all).is_empty() && named(&all));
    show.scenario.beats[0].cast = Some(Cast { bodies: vec![crate::scenario::BodyId(0)], swarms: Vec::new() });
    let none = composer(&show).compose(&show, &moment);
    assert!(points(&none).is_empty() && !named(&none));
    show.scenario.beats[0].cast = Some(Cast { bodies: Vec::new(), swarms: vec![SwarmId(0)] });
    let alone = composer(&show).compose(&show, &moment);
    assert!(
        points(&alone).iter().map(|p| p.1).sum::<usize>() == 600,
        "nothing hides it: {:?}",
        points(&alone)
    );
}

#[test]
fn a_caption_is_set_clear_of_where_a_burst_goes() {
    let text = "format = 1\ntitle = \"T\"\n\
        [[body]]\nname = \"Brae\"\nmass = \"1 Earth mass\"\nradius = \"6400 km\"\n\
        [[body]]\nname = \"Hut\"\norbit = { around = \"Brae\", semi-major = \"9000 km\", eccentricity = 0 }\n\
        [[body]]\nname = \"Pieces\"\nswarm = { burst = \"Hut\", fastest = \"200 m/s\", count = 300 }\n\
        [[beat]]\ntitle = \"A\"\ncaption = \"They fly apart\"\nclock = { span = \"20 min\", lasts = \"30 s\" }\n\
        view = { centre = \"Hut\", span = \"900 km\" }\n";
    let show = Rehearsal::whole(text).expect("a show");
    let list = composer(&show).compose(&show, &moment(&show, 29.0));
    let words = list.items.iter().find_map(|item| match &item.shape {
        Shape::Text { at, text, size, weight, .. } if item.tag == Tag::Caption => {
            let width = super::super::type_metrics::width(text, *size, *weight);
            Some([at[0], at[1] - size, at[0] + width, at[1]])
        }
        _ => None,
    });
    let [left, top, right, bottom] = words.expect("a caption");
    let points = list.items.iter().filter_map(|item| match &item.shape {
        Shape::Points { points, .. } => Some(points),
        _ => None,
    });
    let mut all = 0;
    for [x, y] in points.flatten() {
        all += 1;
        assert!(
            !((left..right).contains(x) && (top..bottom).contains(y)),
            "a piece at {x}, {y} is in the words"
        );
    }
    assert!(all > 250, "{all} in the picture");
}

#[test]
fn tracers_that_touched_the_ground_are_gone_from_the_picture() {
    let text = "format = 1\ntitle = \"T\"\n\
        [[body]]\nname = \"Brae\"\nmass = \"1 Earth mass\"\nradius = \"6400 km\"\n\
        [[body]]\nname = \"Plume\"\nswarm = { burst = \"Brae\", fastest = \"1 km/s\", height = \"50 km\", count = 200 }\n\
        [[beat]]\ntitle = \"A\"\nclock = { pace = \"1 min/s\", lasts = \"30 s\" }\n\
        view = { centre = \"Brae\", span = \"30000 km\" }\n";
    let show = Rehearsal::whole(text).expect("a show");
    let mut composer = composer(&show);
    let count = |list: &DisplayList| points(list).iter().map(|p| p.1).sum::<usize>();
    assert_eq!(count(&composer.compose(&show, &moment(&show, 0.1))), 200);
    // Straight up at 1 km/s: back on the ground after well under five minutes (2 v / g is 204 s).
    assert_eq!(count(&composer.compose(&show, &moment(&show, 20.0))), 0);
}
