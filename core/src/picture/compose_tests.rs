use super::super::fixture::{self, DAY};
use super::super::geometry::Rect;
use super::super::type_metrics;
use super::super::view::Camera;
use super::*;
use crate::ephemeris::Ephemeris;
use crate::scenario::{BodyId, Cast};

const HOUSE: Screen = Screen { width_px: 1920.0, height_px: 1080.0, density: 1.0 };

fn composer(show: &Show, screen: Screen) -> Composer {
    Composer::new(show, screen, Options::default())
}

/// The box of a text's ink, and whether it is in full sight.
fn ink(item: &Item) -> Option<(Rect, String, u8)> {
    let Shape::Text { at, text, size, weight, colour, anchor, .. } = &item.shape else {
        return None;
    };
    let width = type_metrics::width(text, *size, *weight);
    let left = match anchor {
        Anchor::Start => at[0],
        Anchor::Middle => at[0] - 0.5 * width,
        Anchor::End => at[0] - width,
    };
    let rect = Rect {
        left,
        top: at[1] - type_metrics::CAP_HEIGHT * size,
        right: left + width,
        bottom: at[1] + 0.02 * size,
    };
    Some((rect, text.clone(), colour.a))
}

fn texts(list: &DisplayList) -> Vec<(Tag, Rect, String, u8)> {
    list.items.iter().filter_map(|i| ink(i).map(|(r, t, a)| (i.tag, r, t, a))).collect()
}

fn disc(list: &DisplayList, body: BodyId) -> Option<([f64; 2], f64)> {
    list.items.iter().find_map(|i| match (i.tag, &i.shape) {
        (Tag::Body(b), Shape::Disc { at, radius, .. }) if b == body => Some((*at, *radius)),
        _ => None,
    })
}

/// Whole shows, frame by frame: no words over words.
#[test]
fn words_never_overlap_over_a_whole_beat() {
    for (show, until_d, lasts_s) in [(fixture::planets(), 800.0, 60.0), (fixture::equal_areas(), 120.0, 60.0)]
    {
        for screen in [HOUSE, Screen { width_px: 390.0, height_px: 844.0, density: 1.0 }] {
            let mut composer = composer(&show, screen);
            let frames = 480;
            for frame in 0..=frames {
                let day = until_d * f64::from(frame) / f64::from(frames);
                let moment = fixture::moment(0, day * DAY, 0.0, until_d * DAY / lasts_s);
                let found = texts(&composer.compose(&show, &moment));
                for (i, a) in found.iter().enumerate() {
                    for b in &found[..i] {
                        // Lines of one label or caption are set solid; words of one line touch.
                        if (a.0 == Tag::Caption && b.0 == Tag::Caption)
                            || (of_body(a.0).is_some() && of_body(a.0) == of_body(b.0))
                        {
                            continue;
                        }
                        let gap = a.1.gap(&b.1);
                        assert!(gap >= 0.0, "day {day}: {:?} over {:?} by {}", a.2, b.2, -gap);
                    }
                }
            }
        }
    }
}

fn of_body(tag: Tag) -> Option<BodyId> {
    match tag {
        Tag::Label(b) | Tag::Number(b) => Some(b),
        _ => None,
    }
}

#[test]
fn names_keep_clear_of_bodies_and_move_calmly() {
    /// The farthest that a name may move beside its body in a sixtieth of a second, px: it slides 0.3 of its way in
    /// an eighth of a second, and the longest way, from one side to the other, is about 350 px.
    const MOST_PX: f64 = 350.0 * 0.3 * 8.0 / 60.0;
    let show = fixture::planets();
    let mut composer = composer(&show, HOUSE);
    let mut last: Vec<(BodyId, [f64; 2])> = Vec::new();
    let mut seen = 0;
    for frame in 0..3600 {
        let day = 800.0 * f64::from(frame) / 3600.0;
        let list = composer.compose(&show, &fixture::moment(0, day * DAY, 0.0, 800.0 * DAY / 60.0));
        let mut now = Vec::new();
        for (tag, rect, text, _) in texts(&list) {
            let Tag::Label(body) = tag else {
                continue;
            };
            let (at, _) = disc(&list, body).unwrap();
            for other in (0..6).map(BodyId).filter(|b| *b != body) {
                let (other_at, radius) = disc(&list, other).unwrap();
                let gap = rect.gap_to_disc(other_at, radius - 2.0);
                assert!(gap >= 0.0, "day {day}: {text} over body {} by {}", other.0, -gap);
            }
            seen += 1;
            now.push((body, [rect.left - at[0], rect.top - at[1]]));
        }
        for (body, at) in &now {
            if let Some((_, before)) = last.iter().find(|l| l.0 == *body) {
                let moved = super::super::geometry::length([at[0] - before[0], at[1] - before[1]]);
                assert!(moved <= MOST_PX, "day {day}: the name of body {} hops {moved} px", body.0);
            }
        }
        last = now;
    }
    // Six names in 3600 frames; those that wait unseen are few.
    assert!(seen > 6 * 3600 * 85 / 100, "only {seen} names seen");
}

#[test]
fn a_picture_is_the_same_whichever_way_it_was_come_to() {
    let show = fixture::planets();
    let mut through = composer(&show, HOUSE);
    for day in (0..700).step_by(7) {
        through.compose(&show, &fixture::moment(0, f64::from(day) * DAY, 0.0, DAY));
    }
    let moment = fixture::moment(0, 444.4 * DAY, 0.0, DAY);
    assert_eq!(through.compose(&show, &moment), composer(&show, HOUSE).compose(&show, &moment));
}

#[test]
fn captions_lie_in_the_picture_and_can_be_read_in_every_window() {
    for show in [fixture::planets(), fixture::equal_areas()] {
        for (w, h, d) in [
            (1920.0, 1080.0, 1.0),
            (1280.0, 720.0, 1.0),
            (1024.0, 768.0, 1.0),
            (390.0, 844.0, 1.0),
            (1170.0, 2532.0, 3.0),
            (3840.0, 2160.0, 2.0),
            (844.0, 390.0, 1.0),
            (320.0, 480.0, 1.0),
            (2560.0, 700.0, 1.0),
        ] {
            let screen = Screen { width_px: w, height_px: h, density: d };
            let list = composer(&show, screen).compose(&show, &fixture::moment(0, 60.0 * DAY, 0.0, DAY));
            let captions: Vec<_> = texts(&list).into_iter().filter(|t| t.0 == Tag::Caption).collect();
            assert!(!captions.is_empty());
            let window = Rect { left: 0.0, top: 0.0, right: w, bottom: h };
            for (tag, rect, text, _) in texts(&list) {
                let words = matches!(tag, Tag::Caption | Tag::Foot);
                assert!(!words || window.encloses(&rect), "{w}x{h}: {text} at {rect:?}");
            }
            for item in &list.items {
                if let Shape::Text { size, .. } = item.shape {
                    assert!(size >= 13.0 * d, "{size} px at {w}x{h}");
                }
            }
        }
    }
}

#[test]
fn areas_beside_sectors_are_equal_and_right() {
    let show = fixture::equal_areas();
    // Where the last sector closes, and the beat may stand still.
    let list = composer(&show, HOUSE).compose(&show, &fixture::moment(0, 120.0 * DAY, 0.0, DAY));
    let areas: Vec<String> = texts(&list)
        .into_iter()
        .filter(|t| matches!(t.0, Tag::Sector(..)) && t.3 == 255)
        .map(|t| t.2)
        .collect();
    let e = fixture::FENN;
    // Half the angular momentum times the time.
    let area = 0.5 * (e.gm * e.a * (1.0 - e.e * e.e)).sqrt() * 20.0 * DAY / 1e18;
    assert_eq!(areas, vec![super::super::wording::grouped(&super::super::words::ENGLISH, area, 0); 6]);
    assert!(texts(&list).iter().any(|t| t.2 == "areas in million million km²"));
}

#[test]
fn discs_stand_where_the_ephemeris_says() {
    let show = fixture::equal_areas();
    let moment = fixture::moment(0, 33.0 * DAY, 0.0, DAY);
    let list = composer(&show, HOUSE).compose(&show, &moment);
    let camera = Camera::of(&show, &show.scenario.beats[0].view, moment.model_s, &fixture::HOUSE);
    for body in [BodyId(0), BodyId(1)] {
        let want = camera.project(show.ephemeris.state(body, moment.model_s).unwrap().pos);
        let (got, _) = disc(&list, body).unwrap();
        assert!((got[0] - want[0]).abs() < 1e-9 && (got[1] - want[1]).abs() < 1e-9);
    }
}

#[test]
fn a_conic_passes_through_its_body() {
    let mut show = fixture::planets();
    show.scenario.beats[0].marks = vec![Mark::Conic { body: BodyId(1), about: None }];
    let list = composer(&show, HOUSE).compose(&show, &fixture::moment(0, 77.0 * DAY, 0.0, DAY));
    let (at, _) = disc(&list, BodyId(1)).unwrap();
    let nearest = list
        .items
        .iter()
        .filter_map(|i| match (&i.shape, i.tag) {
            (Shape::Line { points, .. }, Tag::Line(_)) => Some(points),
            _ => None,
        })
        .flat_map(|p| p.windows(2))
        .map(|w| {
            let d = [w[1][0] - w[0][0], w[1][1] - w[0][1]];
            let v = [at[0] - w[0][0], at[1] - w[0][1]];
            let s = ((v[0] * d[0] + v[1] * d[1]) / (d[0] * d[0] + d[1] * d[1])).clamp(0.0, 1.0);
            super::super::geometry::length([v[0] - s * d[0], v[1] - s * d[1]])
        })
        .fold(f64::INFINITY, f64::min);
    assert!(nearest < 0.3, "the conic passes {nearest} px from its body");
}

#[test]
fn nothing_odd_breaks_a_picture() {
    let mut show = fixture::planets();
    let everything: Vec<Mark> = (0..6)
        .map(BodyId)
        .flat_map(|body| {
            [
                Mark::Path { body, ahead: None },
                Mark::Conic { body, about: None },
                Mark::Foci { body, about: None },
                Mark::Apsides { body, about: Some(BodyId(0)) },
                Mark::Gravity { body },
                Mark::Sector { body, about: None, every: None, count: None, area: true },
                Mark::Sector { body, about: Some(body), every: None, count: Some(0), area: true },
                Mark::Trail { body, lasts: Some(crate::units::Span::from_s(1e30)) },
            ]
        })
        .collect();
    show.scenario.beats[0].marks.extend(everything);
    let mut uncovered = show.clone();
    uncovered.ephemeris = Ephemeris::new(vec![1e20; 6]);
    let mut heap = show.clone();
    // All bodies at one point.
    let still = fixture::Ellipse { a: 0.0, e: 0.0, lon_rad: 0.0, tau_s: 0.0, gm: 1.0 };
    heap.ephemeris = fixture::ephemeris(vec![1e20; 6], &[still; 6], 0.0, 1e8, 1e6);
    let mut empty = show.clone();
    empty.plan.beats.clear();
    for show in [show, uncovered, heap, empty] {
        for screen in [HOUSE, Screen { width_px: 0.0, height_px: f64::NAN, density: 0.0 }] {
            let mut composer = composer(&show, screen);
            for (beat, t) in
                [(0, 0.0), (0, 3e7), (0, -5e9), (1, 7e7), (0, f64::NAN), (7, 0.0), (0, f64::INFINITY)]
            {
                let mut moment = fixture::moment(beat, t, 0.0, DAY);
                moment.veil = 0.4;
                let list = composer.compose(&show, &moment);
                assert_eq!(list.items.last().map(|i| i.tag), Some(Tag::Veil));
                assert!(list.items.iter().all(|i| is_finite(&i.shape)));
                assert!(list.items.len() < 600, "{} items", list.items.len());
            }
        }
    }
}

#[test]
fn merged_bodies_are_gone_and_the_cast_is_kept() {
    use crate::ephemeris::{Contact, Outcome};
    let mut show = fixture::planets();
    show.ephemeris.push_contact(Contact {
        t_s: 100.0 * DAY,
        body: BodyId(2),
        onto: BodyId(0),
        outcome: Outcome::Merged,
        speed_m_s: 0.0,
        onto_gm_m3_s2: 1.2e20,
    });
    show.scenario.beats[0].cast =
        Some(Cast { bodies: vec![BodyId(0), BodyId(2), BodyId(3)], swarms: Vec::new() });
    let mut composer = composer(&show, HOUSE);
    let mut bodies = |day: f64| -> Vec<usize> {
        let list = composer.compose(&show, &fixture::moment(0, day * DAY, 0.0, DAY));
        (0..6).filter(|&b| disc(&list, BodyId(b)).is_some()).collect()
    };
    assert_eq!(bodies(99.0), [0, 2, 3]);
    assert_eq!(bodies(101.0), [0, 3]);
}

#[test]
fn foot_line_and_read_outs_speak_the_language_asked_for_or_the_shows_own() {
    let mut show = fixture::equal_areas();
    let moment = fixture::moment(0, 125.0 * DAY, 0.0, DAY);
    let mut said = |own: &str, asked: &str| -> Vec<String> {
        show.scenario.language = own.into();
        let options = Options { language: asked.into(), ..Options::default() };
        let list = Composer::new(&show, HOUSE, options).compose(&show, &moment);
        texts(&list).into_iter().filter(|t| t.0 == Tag::Foot).map(|t| t.2).collect()
    };
    let spanish = said("es", "");
    assert!(spanish.contains(&"áreas en billones de km²".to_owned()), "{spanish:?}");
    assert!(spanish.contains(&"6 de septiembre de 2031".to_owned()), "{spanish:?}");
    assert!(said("es", "de").contains(&"6. September 2031".to_owned()));
    assert_eq!(said("es", "en"), said("en", "cy"));
}
