//! Whether every stated number is varied, and what comes of it.

use super::tests::{BALL, QUIET, REACH, found, lever, proven};
use super::*;
use crate::scenario::{BodyId, SwarmId};

fn left_out(proven: &Proven) -> Vec<(String, Why)> {
    let all = proven.report.left_out.iter();
    all.map(|one| (one.number.called(&proven.show), one.why.clone())).collect()
}

/// A probe in free space, kicked on its way.
const PROBE: &str = "format = 1\ntitle = \"Probe\"\n[[body]]\nname = \"Probe\"\n\
     place = { position = [\"0 km\", \"0 km\", \"0 km\"], velocity = [\"1 km/s\", \"0 km/s\", \"0 km/s\"] }\n\
     [[body]]\nname = \"Far\"\nmass = \"1 kg\"\nplace = { position = [\"0 km\", \"9 au\", \"0 km\"] }\n";
const FLIGHT: &str = "[[beat]]\ntitle = \"Flight\"\nclock = { span = \"100 s\", lasts = \"20 s\" }\nview = { centre = \"barycentre\", span = \"3000000 km\" }\n";

#[test]
fn kicks_and_their_times_move_what_they_kick() {
    let change = "[[change]]\nat = \"40 s\"\nkick = \"Probe\"\nspeed = \"2 km/s\"\n";
    let proven = proven(PROBE, &format!("{change}{FLIGHT}"));
    let moved_m =
        |quantity: &str| lever(&proven, Owner::Change(0), quantity).shifts[0].expect("in the picture").m;
    // A billionth of 2 km/s for 60 s; a billionth of 40 s later at 2 km/s. Places of 1e12 m are rounded to 1e-4 m, differences of them twice.
    let rounding_m = 1e-3;
    assert!((moved_m("speed") - 2e-6 * 60.0).abs() < rounding_m, "{}", moved_m("speed"));
    assert!((moved_m("at") - 4e-8 * 2e3).abs() < rounding_m, "{}", moved_m("at"));
    let zero = |axis: &str, form: &str| (format!("place.{form}.{axis} of Probe"), Why::Zero);
    assert!(left_out(&proven).contains(&zero("y", "velocity")), "{:?}", left_out(&proven));
    assert_eq!(proven.report.levers.len() + proven.report.left_out.len(), 4 + 4 + 3 + 1);
}

#[test]
fn a_kick_at_an_event_comes_when_the_changed_file_has_the_event() {
    let change = "[[change]]\nat = { event = \"periapsis of Fenn\", after = \"20 d\" }\nkick = \"Fenn\"\nspeed = \"2 km/s\"\n";
    let beat = REACH.replace("periapsis of Fenn", "2nd periapsis of Fenn");
    let proven = proven(QUIET, &format!("{change}{beat}"));
    // 100 d to periapsis, changed by a billionth, are 8.64 ms: the whole motion comes as much later, the kick too, and is off most at
    // the second periapsis. A kick left where it was would change the energy, and the time of that periapsis by 10 ms more.
    let end_s = proven.show.plan.beats[0].cue.expect("a cue").model_s;
    let speed_m_s = proven.show.ephemeris.state(BodyId(2), end_s).expect("a state").vel.norm();
    let shift = lever(&proven, Owner::Body(BodyId(2)), "orbit.before-periapsis").shifts[0].expect("seen");
    assert!((shift.m / (0.00864 * speed_m_s) - 1.0).abs() < 0.01, "{shift:?} at {speed_m_s} m/s");
    assert!(lever(&proven, Owner::Change(0), "at.after").shifts[0].is_some_and(|shift| shift.m > 1.0));
}

#[test]
fn tracers_of_swarms_move_by_what_their_numbers_say() {
    let swarm = "[[body]]\nname = \"Dust\"\nswarm = { ring = \"Orla\", from = \"1 au\", to = \"1 au\", count = 200 }\n";
    let beat = "[[beat]]\ntitle = \"Round\"\nclock = { span = \"1 yr\", lasts = \"30 s\" }\nview = { centre = \"Orla\", span = \"4 au\" }\n\
                cast = [\"Orla\", \"Dust\"]\n";
    let star = QUIET.split("[[body]]").take(2).collect::<Vec<_>>().join("[[body]]");
    let proven = proven(&star, &format!("{swarm}{beat}"));
    // Out by a billionth each orbit is longer by 1.5 of them; at 1 au around 0.9 Suns it goes 28.3 km/s, for a year.
    let speed_m_s = (0.9 * 1.327_124_4e20 / 149_597_870_700.0f64).sqrt();
    let along_m = 1.5e-9 * speed_m_s * 31_557_600.0;
    let shift = lever(&proven, Owner::Swarm(SwarmId(0)), "swarm.to").shifts[0].expect("in the picture");
    assert_eq!(shift.of, Mover::Tracer(SwarmId(0)));
    // Tracers of a ring without width: to beyond from spreads them by the square of a draw from 0 to 1.
    assert!(shift.m > 0.9 * along_m && shift.m < 1.02 * along_m, "{shift:?}, {along_m} m");
    // Sown around a heavier star they go faster by half a billionth.
    let mass = lever(&proven, Owner::Body(BodyId(0)), "mass").shifts[0].expect("in the picture");
    assert!((3.0 * mass.m / along_m - 1.0).abs() < 0.01, "{mass:?}");
    let whole = left_out(&proven);
    assert!(whole.contains(&("swarm.count of Dust".to_owned(), Why::Alone)), "{whole:?}");
}

#[test]
fn numbers_at_the_end_of_their_range_are_changed_inwards() {
    let bouncing =
        BALL.replace("radius = \"1737 km\"", "radius = \"1737 km\"\nsurface = \"bounce\"\nrestitution = 1");
    let beat = "[[beat]]\ntitle = \"Fall\"\nclock = { span = \"40 s\", lasts = \"20 s\" }\nview = { centre = \"Ball\", span = \"300 m\" }\n";
    let proven = proven(&bouncing, beat);
    assert!(left_out(&proven).is_empty(), "{:?}", left_out(&proven));
    let shift = lever(&proven, Owner::Body(BodyId(0)), "restitution").shifts[0].expect("in the picture");
    // 18 m/s, less by a billionth, for some 20 s after the bounce.
    assert!(shift.m < 18e-9 * 40.0, "{shift:?}");
}

#[test]
fn a_number_without_which_there_is_no_show_is_told() {
    // The ball is caught by its last billionth: a kick waits for a contact that a faster throw does not have within the search.
    let thrown = "format = 1\ntitle = \"Thrown\"\n[[body]]\nname = \"Brae\"\nmass = \"1 Earth masses\"\n\
                  [[body]]\nname = \"Ball\"\nplace = { about = \"Brae\", position = [\"7000 km\", \"0 km\", \"0 km\"], velocity = [\"0 km/s\", \"8 km/s\", \"0 km/s\"] }\n\
                  [[change]]\nat = { event = \"distance LIMIT km of Ball from Brae\" }\nkick = \"Ball\"\nspeed = \"1 m/s\"\n\
                  [[beat]]\ntitle = \"Rise\"\nclock = { span = \"3 h\", lasts = \"20 s\" }\nview = { centre = \"Brae\", span = \"40000 km\" }\n";
    // Its apoapsis, from the energy: 7,000 km and 8 km/s around 3.986004e14 m³/s².
    let (gm, r, v) = (3.986_004e14, 7e6, 8e3);
    let a = 1.0 / (2.0 / r - v * v / gm);
    let limit_km = (2.0 * a - r) / 1e3 * (1.0 - 3e-10);
    let proven = proven(&thrown.replace("LIMIT", &format!("{limit_km}")), "");
    found(
        &proven,
        Topic::Sensitivity,
        "with mass of Brae (1 Earth masses) or another number changed by a billionth the show can't be given: no distance of Ball",
    );
    let broken = left_out(&proven);
    assert!(
        broken.iter().any(|(number, why)| number == "at.event of change 1" && matches!(why, Why::Breaks(_))),
        "{broken:?}"
    );
}

#[test]
fn no_step_of_a_check_takes_the_whole_show() {
    let beats = REACH.repeat(5);
    let text = format!("{QUIET}{beats}");
    let mut proof = Proof::start(&text).expect("a scenario");
    let mut calls = 0;
    while !proof.work(usize::MAX).expect("progress").done {
        calls += 1;
    }
    // However much is asked for: each beat by itself in three passes and in the pictures of three pairs of bodies; each number in its text, its run,
    // and 17 instants of each beat; each picture that is read; each change of beat that is hammered on.
    let (beats, pairs, numbers) = (5, 3, 10);
    let least = 3 * beats + pairs * beats + numbers * (2 + 17 * beats);
    assert!(calls >= least, "{calls} calls, at least {least} wanted");
    // What goes by frames does so when little is asked for: 30 s of show are 1,800 frames a beat, 20 for each step.
    let mut proof = Proof::start(&text).expect("a scenario");
    let mut calls = 0;
    while !proof.work(10).expect("progress").done {
        calls += 1;
    }
    assert!(calls >= least + beats * 1800 / 200 + beats * 25 + (beats - 1) * 150, "{calls} calls");
}

#[test]
fn small_steps_find_the_same_of_swarms_and_of_changes_that_wait() {
    let swarm = "[[body]]\nname = \"Dust\"\nswarm = { belt = \"Orla\", from = \"1 au\", to = \"2 au\", eccentricity = 0.1, count = 300 }\n";
    let change = "[[change]]\nat = { beat = \"R\", after = \"30 d\" }\nkick = \"Fenn\"\nspeed = \"2 km/s\"\n";
    let first = "[[beat]]\ntitle = \"First\"\nclock = { pace = \"1 d/s\", lasts = \"20 s\" }\nview = { centre = \"Orla\", span = \"6 au\" }\n";
    let text = format!("{QUIET}{swarm}{change}{first}{REACH}");
    let whole = Proof::whole(&text).expect("a scenario").report;
    // The pace and the length of the first beat say when the second one starts, for which the change waits.
    let of_beat = whole.levers.iter().filter(|lever| lever.number.owner == Owner::Beat(0)).count();
    assert_eq!(of_beat, 2, "{:#?}", whole.levers);
    let mut proof = Proof::start(&text).expect("a scenario");
    while !proof.work(7).expect("progress").done {}
    assert_eq!(proof.finish().expect("done").report, whole);
}
