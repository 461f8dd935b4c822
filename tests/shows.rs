//! Every shipped show can be rehearsed, is a talk's length, and says numbers that are true.
//!
//! The numbers are those of the words and captions in `scenarios/`; each is computed here from the show's own paths.

#![allow(clippy::expect_used, reason = "what a test needs and lacks fails it")]

use fallaround_core::check::{Proof, Weight};
use fallaround_core::conic::semi_major_from_state;
use fallaround_core::ephemeris::events::{self, Query};
use fallaround_core::ephemeris::osculating::osculating;
use fallaround_core::math::float::atan2;
use fallaround_core::scenario::{BodyId, EventKind, dated};
use fallaround_core::show::{Action, Clock, Rehearsal, Show};
use fallaround_core::swarm::Cursor;
use fallaround_core::sweep;
use std::fs;
use std::path::Path;

/// 2026-12-01, for shows about the day on which they are opened.
const NOW_UNIX_S: f64 = 1_796_132_700.0;
const DAY_S: f64 = 86_400.0;
const YEAR_S: f64 = 365.25 * DAY_S;

fn show(name: &str) -> Show {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../scenarios").join(name);
    let text = fs::read_to_string(&path).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
    Rehearsal::whole(&dated(&text, NOW_UNIX_S)).unwrap_or_else(|problems| panic!("{name}: {problems:?}"))
}

fn body(show: &Show, name: &str) -> BodyId {
    let index = show.scenario.bodies.iter().position(|b| b.name == name);
    BodyId(index.unwrap_or_else(|| panic!("no body {name}")))
}

fn speed(show: &Show, of: &str, about: &str, t_s: f64) -> f64 {
    show.ephemeris.relative(body(show, of), body(show, about), t_s).expect("a state").vel.norm()
}

/// A number as it is said: rounded, so right to half of its last digit.
fn said(what: &str, got: f64, said: f64, last_digit: f64) {
    assert!((got - said).abs() <= 0.5 * last_digit, "{what}: it is {got}, and {said} is said");
}

fn all() -> Vec<(String, Show)> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("../scenarios");
    let mut names: Vec<String> = fs::read_dir(folder)
        .expect("the scenarios")
        .map(|entry| entry.expect("an entry").file_name().to_string_lossy().into_owned())
        .filter(|name| name.ends_with(".toml"))
        .collect();
    names.sort();
    assert!(names.len() >= 3, "{names:?}");
    names.into_iter().map(|name| (name.clone(), show(&name))).collect()
}

#[test]
fn every_show_is_a_talk_of_about_ten_minutes_with_words_and_captions() {
    for (name, show) in all() {
        let minutes = show.plan.lasts_s() / 60.0;
        assert!((8.0..=12.0).contains(&minutes), "{name}: {minutes:.1} min");
        assert!(!show.scenario.summary.is_empty() && !show.scenario.audience.is_empty(), "{name}");
        for (beat, planned) in show.scenario.beats.iter().zip(&show.plan.beats) {
            let words = beat.say.split_whitespace().count();
            // Common practice, no source: nobody follows more than 130 words a minute while looking at something new.
            let a_minute = f64::from(u32::try_from(words).expect("few words")) * 60.0 / planned.lasts_s;
            assert!(
                (30.0..=130.0).contains(&a_minute),
                "{name}, {}: {a_minute:.0} words a minute",
                beat.title
            );
            let languages: Vec<&str> = beat.captions.iter().map(|c| c.language.as_str()).collect();
            assert!(
                languages.contains(&"en") && languages.len() >= 2,
                "{name}, {}: {languages:?}",
                beat.title
            );
        }
    }
}

#[test]
fn every_show_is_ready_and_nothing_about_it_is_warned_of() {
    for (name, _) in all() {
        let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../scenarios").join(&name);
        let text = fs::read_to_string(&path).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
        let proven = Proof::whole(&dated(&text, NOW_UNIX_S)).unwrap_or_else(|p| panic!("{name}: {p:?}"));
        assert!(proven.report.is_ready(), "{name}: {:#?}", proven.report.findings);
        let warned: Vec<_> = proven.report.findings.iter().filter(|f| f.weight != Weight::Note).collect();
        assert!(warned.is_empty(), "{name}: {warned:#?}");
        for (index, beat) in proven.report.beats.iter().enumerate() {
            // A hundredth of a pixel is drawn as none.
            let off = beat.off.map_or(0.0, |off| off.px);
            assert!(off < 0.01, "{name}, beat {}: {off} px", index + 1);
            assert!(beat.frame_ms < 10.0, "{name}, beat {}: {} ms", index + 1, beat.frame_ms);
        }
    }
}

#[test]
fn every_show_fits_in_memory_with_room_to_linger() {
    for (name, show) in all() {
        // Half of what a show may have, swarms included.
        assert!(show.bytes() < 32 << 20, "{name}: {} MB", show.bytes() >> 20);
        if !show.swarms.is_empty() {
            assert!(show.bytes() > show.ephemeris.bytes(), "{name}: nothing is kept of its swarms");
        }
        let last = show.plan.beats.last().expect("beats");
        assert!(show.plan.covers_until_s >= last.until_s, "{name}");
    }
}

#[test]
fn every_show_runs_to_its_end_by_one_key() {
    for (name, show) in all() {
        let mut clock = Clock::new(&show.plan);
        let mut presses = 0;
        while clock.act(&show.plan, Action::Next) {
            presses += 1;
            for _ in 0..show.plan.beats.len() * 30 {
                let before = clock.moment(&show.plan);
                clock.advance(&show.plan, 0.2);
                let now = clock.moment(&show.plan);
                assert!(now.model_s.is_finite() && now.pace.is_finite(), "{name}: {before:?} to {now:?}");
            }
        }
        assert_eq!(presses, show.plan.beats.len(), "{name}");
    }
}

#[test]
fn equal_areas_says_true_numbers() {
    let show = show("equal-areas.toml");
    let (orla, fenn, brae) = (body(&show, "Orla"), body(&show, "Fenn"), body(&show, "Brae"));
    let periapsis = show.plan.beats[2].cue.expect("the comet rounds the star").model_s;
    let km_h = |t_s| speed(&show, "Fenn", "Orla", t_s) * 3.6;
    said("speed at periapsis, km/h", km_h(periapsis), 215_000.0, 1000.0);
    said("speed at the start, km/h", km_h(0.0), 15_000.0, 1000.0);
    let conic = osculating(&show.ephemeris, &show.initial, fenn, Some(orla), periapsis).expect("a conic");
    let period_s = conic.period_s().expect("a closed orbit");
    let farthest = conic.elements.apoapsis_m().expect("a closed orbit");
    said("times as far", farthest / conic.elements.periapsis_m, 16.0, 1.0);
    said("years for once round", period_s / YEAR_S, 7.0, 0.3);
    let slice = |body, from_s: f64, days: f64| {
        sweep::area_m2(&show.ephemeris, body, orla, from_s, from_s + days * DAY_S).expect("an area") / 1e6
    };
    // The sheet of the first look and the words: 3,245 million million km².
    for beat in [3, 4] {
        for part in 0..6 {
            let from_s = show.plan.beats[beat].from_s + f64::from(part) * 20.0 * DAY_S;
            said("a slice, million million km²", slice(fenn, from_s, 20.0) / 1e12, 3245.0, 1.0);
        }
    }
    let ratio = {
        let year = show.plan.beats[6];
        let speeds = (0..200).map(|i| {
            speed(&show, "Brae", "Orla", year.from_s + f64::from(i) / 200.0 * (year.until_s - year.from_s))
        });
        let (least, most) = speeds.fold((f64::MAX, 0.0f64), |(a, b), v| (a.min(v), b.max(v)));
        most / least
    };
    said("Brae's speed, most over least", ratio, 1.04, 0.01);
    let inside = (0..4000).filter(|i| {
        let t_s = periapsis + (f64::from(*i) / 4000.0 - 0.5) * period_s * 0.2;
        let far = |b| show.ephemeris.relative(b, orla, t_s).expect("a state").pos.norm();
        far(fenn) < far(brae)
    });
    let days = f64::from(u32::try_from(inside.count()).expect("few")) / 4000.0 * period_s * 0.2 / DAY_S;
    assert!(
        days > 90.0 && days < 4.0 * 30.0,
        "inside Brae's orbit for {days} d, said to be less than four months"
    );
}

#[test]
fn thrown_and_let_go_says_true_numbers() {
    let show = show("thrown-and-let-go.toml");
    let skerry = body(&show, "Skerry");
    let contact = |name: &str| {
        let query = Query::new(EventKind::Contact, body(&show, name), Some(skerry));
        let found = events::find(&show.ephemeris, &show.initial, &query, 0.0, show.plan.covers_until_s);
        *found.first().unwrap_or_else(|| panic!("{name} does not land"))
    };
    let drop = contact("Drop");
    said("fall, s", drop.t_s, 620.0, 1.0);
    said("fall speed, km/h", drop.value * 3.6, 3000.0, 100.0);
    let (gentle, strong) = (contact("Gentle").t_s, contact("Strong").t_s);
    assert!(gentle > drop.t_s && gentle - drop.t_s < 60.0, "nearly level, a little later: {gentle}");
    assert!(strong - gentle > 120.0, "more than two minutes later: {}", strong - gentle);
    let landed = show.ephemeris.relative(body(&show, "Strong"), skerry, strong).expect("a state").pos;
    let ground_km = atan2(landed.x.abs(), landed.y) * 1750.0;
    said("ground distance of the strong throw, km", ground_km, 770.0, 10.0);
    let round =
        osculating(&show.ephemeris, &show.initial, body(&show, "Round"), Some(skerry), 0.0).expect("a conic");
    said("round trip, min", round.period_s().expect("closed") / 60.0, 133.0, 1.0);
    assert!(round.elements.eccentricity < 1e-5, "{}", round.elements.eccentricity);
    let long =
        osculating(&show.ephemeris, &show.initial, body(&show, "Long"), Some(skerry), 0.0).expect("a conic");
    let top_km = long.elements.apoapsis_m().expect("closed") / 1e3 - 1750.0;
    said("height of the long way, km", top_km, 2600.0, 100.0);
    let gm = show.initial.bodies[skerry.0].gm_m3_s2;
    let escape = (2.0 * gm / 2.0e6).sqrt();
    said("escape speed, m/s", escape, 2232.0, 1.0);
    said("escape speed, km/h", escape * 3.6, 8036.0, 1.0);
    let left_over = (2400.0f64 * 2400.0 - escape * escape).sqrt() * 3.6;
    assert!(left_over > 3000.0 && left_over < 3300.0, "{left_over} km/h left over");
    for name in ["Round", "Long", "Gone"] {
        assert!(
            show.ephemeris.at_rest(body(&show, name), show.plan.covers_until_s).is_none(),
            "{name} landed"
        );
    }
}

#[test]
fn planets_today_says_true_numbers() {
    let show = show("planets-today.toml");
    let year_s = YEAR_S;
    let orbit = |name: &str, t_s: f64| {
        osculating(&show.ephemeris, &show.initial, body(&show, name), None, t_s).expect("a conic")
    };
    for (name, km_s) in [("Mercury", 48.0), ("Venus", 35.0), ("Earth", 30.0), ("Mars", 24.0)] {
        // Said as a mean: once round at the mean distance.
        let o = orbit(name, 0.0);
        let mean = std::f64::consts::TAU * o.elements.semi_major_m() / o.period_s().expect("closed");
        said(&format!("speed of {name}, km/s"), mean / 1e3, km_s, 1.0);
    }
    const AU_M: f64 = 149_597_870_700.0;
    for (name, au, years) in
        [("Jupiter", 5.2, 11.86), ("Mars", 1.52, 1.88), ("Saturn", 9.5, 29.5), ("Neptune", 30.0, 165.0)]
    {
        let o = orbit(name, 0.0);
        let digit = if name == "Neptune" {
            1.0
        } else if name == "Mars" {
            0.01
        } else {
            0.1
        };
        // Saturn and Neptune are tugged by their neighbours: their ellipse of a day is not that of an age.
        let slack = if name == "Saturn" || name == "Neptune" { 3.0 } else { 1.0 };
        said(&format!("distance of {name}, au"), o.elements.semi_major_m() / AU_M, au, slack * digit);
        said(&format!("years of {name}"), o.period_s().expect("closed") / year_s, years, slack * digit);
    }
    said("the cube, Jupiter", 5.2 * 5.2 * 5.2, 141.0, 1.0);
    said("the square, Jupiter", 11.86 * 11.86, 141.0, 1.0);
    said("the cube, Mars", 1.52 * 1.52 * 1.52, 3.5, 0.1);
    said("the square, Mars", 1.88 * 1.88, 3.5, 0.1);
    let rounds = |name: &str| year_s / orbit(name, 0.0).period_s().expect("closed");
    assert!((4.0..4.3).contains(&rounds("Mercury")), "four times and a bit: {}", rounds("Mercury"));
    assert!((1.55..1.7).contains(&rounds("Venus")), "once and a half and a little more: {}", rounds("Venus"));
    assert!((0.5..0.56).contains(&rounds("Mars")), "a little past half way: {}", rounds("Mars"));
}

/// Longitude, rad, and distance, km, of every tracer of a swarm at an instant, from the body that it is about.
fn places(show: &Show, swarm: usize, t_s: f64) -> Vec<(f64, f64)> {
    let mut cursor = Cursor::new(&show.initial, swarm);
    assert!(cursor.seek(&show.swarms[swarm], &show.ephemeris, t_s, usize::MAX));
    let at = cursor.positions();
    assert!(!at.gone.contains(&true), "all of them are there");
    at.x.iter().zip(at.y).map(|(x, y)| (atan2(*y, *x), (x * x + y * y).sqrt() / 1e3)).collect()
}

/// Least and greatest.
fn range(values: impl Iterator<Item = f64>) -> (f64, f64) {
    values.fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), v| (a.min(v), b.max(v)))
}

#[test]
fn ten_thousand_falls_says_true_numbers_of_what_breaks() {
    let show = show("ten-thousand-falls.toml");
    let (ammel, kestrel) = (body(&show, "Ammel"), body(&show, "Kestrel"));
    let counts: Vec<usize> = show.swarms.iter().map(|path| path.tracers()).collect();
    assert_eq!(counts, [2500, 7500]);
    let conic = osculating(&show.ephemeris, &show.initial, kestrel, Some(ammel), 0.0).expect("a conic");
    let period_s = conic.period_s().expect("a closed orbit");
    said("once round, min", period_s / 60.0, 286.0, 1.0);
    let km_h = speed(&show, "Kestrel", "Ammel", 0.0) * 3.6;
    said("its speed, km/h", km_h, 51_000.0, 1000.0);
    let pieces = &show.initial.swarms[0];
    let machine = show.ephemeris.relative(kestrel, ammel, 0.0).expect("a state").vel;
    let (_, fastest) = range(pieces.vel.iter().map(|vel| (vel - machine).norm() * 3.6));
    said("the fastest piece, km/h", fastest, 900.0, 20.0);
    assert!(fastest / km_h < 0.02);
    let gm = show.initial.bodies[ammel.0].gm_m3_s2;
    let periods = pieces.pos.iter().zip(&pieces.vel).map(|(pos, vel)| {
        let a = semi_major_from_state(*pos, *vel, gm);
        std::f64::consts::TAU * a * (a / gm).sqrt()
    });
    let (first_s, last_s) = range(periods);
    said("the last is late, min", (last_s - period_s) / 60.0, 15.0, 2.0);
    said("the first is early, min", (period_s - first_s) / 60.0, 13.0, 1.0);
    let rounds = 2.0 * DAY_S / first_s - 2.0 * DAY_S / last_s;
    // "Two days", as it is said: to an hour.
    assert!((rounds - 1.0).abs() < 1.0 / 48.0, "in two days the first gain {rounds} rounds on the last");
    // Where it broke, the ring is a thread; on the far side it is broad.
    let places_then = places(&show, 0, show.plan.beats[4].until_s);
    let width_at = |lon: f64| {
        let near = places_then.iter().filter(|(l, _)| (l.abs() - lon).abs() < 0.03).map(|(_, r)| *r);
        let (inner, outer) = range(near);
        outer - inner
    };
    let (thread, broad) = (width_at(0.0), width_at(std::f64::consts::PI));
    assert!(thread < 150.0 && broad > 3000.0, "{thread:.0} km and {broad:.0} km");
    let mut around: Vec<f64> = places(&show, 0, show.plan.beats[3].until_s).iter().map(|(l, _)| *l).collect();
    around.sort_by(f64::total_cmp);
    let gap = range(around.windows(2).map(|w| w[1] - w[0])).1;
    assert!(gap < 0.15, "a ring has no gap: {gap} rad");
}

#[test]
fn ten_thousand_falls_says_true_numbers_of_the_ring_and_its_moon() {
    let show = show("ten-thousand-falls.toml");
    let ammel = body(&show, "Ammel");
    said("Quick, km/h", speed(&show, "Quick", "Ammel", 0.0) * 3.6, 43_000.0, 1000.0);
    said("Slow, km/h", speed(&show, "Slow", "Ammel", 0.0) * 3.6, 38_000.0, 1000.0);
    // The moon pulls at both, so it comes out even to some degrees.
    let longitude = |name: &str, t_s: f64| {
        let pos = show.ephemeris.relative(body(&show, name), ammel, t_s).expect("a state").pos;
        atan2(pos.y, pos.x)
    };
    let end_s = show.plan.beats[6].until_s;
    let (quick, slow) = (longitude("Quick", end_s), longitude("Slow", end_s));
    assert!(quick.abs() < 0.1 && slow.abs() < 0.1, "on one line again: {quick} and {slow} rad");
    let (inner, outer) = range(places(&show, 1, 0.0).into_iter().map(|(_, r)| r));
    let moon = show.ephemeris.relative(body(&show, "Tyrn"), ammel, 0.0).expect("a state").pos.norm() / 1e3;
    said("inner edge, km", inner, 55_000.0, 20.0);
    said("from the ring to the moon, km", moon - outer, 7000.0, 20.0);
    // The edge swings by thousands of kilometres after the moon has passed, by none before.
    let end_s = show.plan.beats[7].until_s;
    let edge = |t_s: f64| {
        let mut outermost = [0.0_f64; 60];
        for (longitude, r) in places(&show, 1, t_s) {
            let starts = |i: u32| std::f64::consts::PI * (f64::from(i) / 30.0 - 1.0);
            let part = (1..60).filter(|i| longitude >= starts(*i)).count();
            outermost[part] = outermost[part].max(r);
        }
        let (least, most) = range(outermost.into_iter());
        most - least
    };
    let (before, after) = (edge(0.0), edge(end_s));
    assert!(before < 800.0 && after > 2000.0, "{before:.0} km and {after:.0} km");
}
