use super::*;
use crate::scenario::BodyId;

/// A star, a planet and a comet: nothing that a talk would not show.
pub(super) const QUIET: &str = r#"
format = 1
title = "Quiet"
[[body]]
name = "Orla"
kind = "star"
mass = "0.9 Sun masses"
radius = "620000 km"
[[body]]
name = "Brae"
mass = "1.3 Earth masses"
radius = "6900 km"
orbit = { around = "Orla", semi-major = "1.1 au", eccentricity = 0.02, anomaly = "40 deg" }
[[body]]
name = "Fenn"
kind = "comet"
orbit = { around = "Orla", periapsis = "0.42 au", eccentricity = 0.5, before-periapsis = "100 d" }
"#;

/// Three masses let go at the corners of a triangle of sides 3, 4 and 5 (C. Burrau, Astron. Nachr. 195 (1913), 113): they pass each
/// other closely many times.
const BURRAU: &str = r#"
format = 1
title = "Three"
[[body]]
name = "Ash"
mass = "3 Sun masses"
place = { position = ["1 au", "3 au", "0 au"], velocity = ["0 km/s", "0 km/s", "0 km/s"] }
[[body]]
name = "Birch"
mass = "4 Sun masses"
place = { position = ["-2 au", "-1 au", "0 au"], velocity = ["0 km/s", "0 km/s", "0 km/s"] }
[[body]]
name = "Cedar"
mass = "5 Sun masses"
place = { position = ["1 au", "-1 au", "0 au"], velocity = ["0 km/s", "0 km/s", "0 km/s"] }
[[beat]]
title = "Dance"
clock = { span = "11 yr", lasts = "60 s" }
view = { centre = "barycentre", span = "8 au" }
"#;

/// A small world and a ball 100 m above its ground.
pub(super) const BALL: &str = r#"
format = 1
title = "A ball"
[[body]]
name = "Skerry"
mass = "1 Moon masses"
radius = "1737 km"
[[body]]
name = "Ball"
drop = { onto = "Skerry", height = "100 m" }
"#;

pub(super) fn proven(bodies: &str, beats: &str) -> Proven {
    match Proof::whole(&format!("{bodies}{beats}")) {
        Ok(proven) => proven,
        Err(problems) => panic!("{problems:#?}"),
    }
}

/// The findings about something.
fn about(proven: &Proven, topic: Topic) -> Vec<&Finding> {
    proven.report.findings.iter().filter(|finding| finding.topic == topic).collect()
}

#[track_caller]
pub(super) fn found<'a>(proven: &'a Proven, topic: Topic, words: &str) -> &'a Finding {
    let all = about(proven, topic);
    let one = all.iter().find(|finding| finding.wrong.contains(words));
    one.unwrap_or_else(|| panic!("nothing about {words:?} in {:#?}", proven.report.findings))
}

#[track_caller]
pub(super) fn lever<'a>(proven: &'a Proven, owner: Owner, quantity: &str) -> &'a Lever {
    let is_it = |one: &&Lever| one.number.owner == owner && one.number.quantity == quantity;
    let one = proven.report.levers.iter().find(is_it);
    one.unwrap_or_else(|| panic!("{quantity} not among {:#?}", proven.report.levers))
}

pub(super) const REACH: &str = "[[beat]]\ntitle = \"R\"\nclock = { reach = \"periapsis of Fenn\", at = \"30 s\" }\n\
                     view = { centre = \"Orla\", span = \"6 au\" }\nmarks = [\"speed of Fenn\"]\n";

#[test]
fn a_quiet_show_is_ready_and_drawn_where_it_should_be() {
    let proven = proven(QUIET, REACH);
    let report = &proven.report;
    assert!(report.is_ready() && report.findings.is_empty(), "{:#?}", report.findings);
    let off = report.beats[0].off.expect("something is in the picture");
    // Rounding of a few hundred steps: 1e-16 · sqrt(300) of an au, at 180 px an au, is far below a millionth.
    assert!(off.px < 1e-6 && off.px > 0.0, "{off:?}");
    let cue = report.beats[0].cue.expect("a cue");
    assert!(cue.late_s.abs() < 1e-6 && cue.again_frames < 1e-3, "{cue:?}");
}

#[test]
fn small_steps_and_one_big_one_find_the_same_and_progress_never_goes_back() {
    let text = format!("{QUIET}{REACH}");
    let mut proof = Proof::start(&text).expect("a scenario");
    let mut last = 0.0;
    loop {
        let progress = proof.work(5).expect("progress");
        assert!(progress.fraction >= last && progress.fraction <= 1.0, "{progress:?} after {last}");
        last = progress.fraction;
        if progress.done {
            break;
        }
    }
    let piecewise = proof.finish().expect("done");
    assert_eq!(piecewise.report, proven(QUIET, REACH).report);
}

#[test]
fn what_is_not_done_gives_no_report() {
    let proof = Proof::start(&format!("{QUIET}{REACH}")).expect("a scenario");
    assert!(proof.finish().is_none());
    assert!(Proof::start("format = 1").is_err());
}

#[test]
fn every_stated_number_is_tried_and_does_what_the_third_law_says() {
    let proven = proven(QUIET, REACH);
    let report = &proven.report;
    // Orla: mass, radius. Brae: mass, radius, semi-major, eccentricity, anomaly. Fenn: periapsis, eccentricity, before-periapsis.
    assert_eq!((report.levers.len(), report.left_out.len()), (10, 0));
    let of = |body: usize, quantity: &str| lever(&proven, Owner::Body(BodyId(body)), quantity);
    // Brae runs ahead by 3/2 · 1e-9 of its mean motion, where its semi-major axis is 1e-9 less: in the time of the beat.
    let beat = proven.show.plan.beats[0];
    let gm = 0.9 * 1.327_124_4e20 + 1.3 * 3.986_004e14;
    let a = 1.1 * 149_597_870_700.0f64;
    let along_m = 1.5e-9 * (gm / a).sqrt() * beat.until_s;
    let got_m = of(1, "orbit.semi-major").shifts[0].expect("in the picture").m;
    // The orbit itself grows by 1e-9 of it; with eccentricity 0.02, speed varies by as much.
    assert!(
        (got_m / crate::math::float::hypot(along_m, 1e-9 * a) - 1.0).abs() < 0.1,
        "{got_m} m, {along_m} m"
    );
    assert!(of(0, "radius").shifts[0].is_none_or(|shift| shift.m < 1e-3), "a radius moves nothing");
}

#[test]
fn three_bodies_that_pass_closely_are_told_as_sensitive() {
    let proven = proven(&BURRAU.replace("\"1 au\", \"3 au\"", "\"0.5 au\", \"2.5 au\""), "");
    assert!(proven.report.is_ready(), "the same bits come of it everywhere: {:#?}", proven.report.findings);
    let finding = found(&proven, Topic::Sensitivity, ", changed by a billionth, moves");
    assert_eq!(finding.weight, Weight::Warning);
    assert_eq!(finding.place, proven.show.scenario.beats[0].place);
    let (_, worst) = proven.report.levers[0].worst().expect("moved");
    assert!(worst.px > 0.01, "{worst:?}");
}

#[test]
fn the_last_digits_of_a_radius_are_not_told_of_a_close_view_of_the_ground() {
    // A billionth of the radius are 1.7 mm, of which 150 m show 0.0125 px: all that lies on the ground moves by as much, and no more.
    let beat = "[[beat]]\ntitle = \"Down\"\nclock = { span = \"30 s\", lasts = \"30 s\" }\n\
                view = { centre = { about = \"Skerry\", offset = [\"1737.06 km\", \"0 km\", \"0 km\"] }, span = \"150 m\" }\n";
    let proven = proven(BALL, beat);
    let shift = lever(&proven, Owner::Body(BodyId(0)), "radius").shifts[0].expect("in the picture");
    assert!(shift.px > 0.01 && (shift.m / 1.737e-3 - 1.0).abs() < 0.1, "{shift:?}");
    assert!(about(&proven, Topic::Sensitivity).is_empty(), "{:#?}", proven.report.findings);
}

#[test]
fn a_dance_that_forgets_its_start_is_not_ready() {
    // Roundings of 1e-16 grow to a thousandth of an au or so in it, by which pair goes round another at last in a period of its own:
    // after twenty years more it is somewhere else on its orbit, which is tens of pixels wide.
    let proven = proven(&BURRAU.replace("11 yr", "30 yr").replace("barycentre", "Cedar"), "");
    assert!(!proven.report.is_ready(), "{:#?}", proven.report.beats);
    let finding = found(&proven, Topic::Error, "px off in beat 1");
    assert_eq!(finding.weight, Weight::Failure);
    assert!(finding.remedy.contains("end the beat sooner"), "{finding:?}");
}

#[test]
fn an_event_that_the_clock_has_no_time_for_is_found() {
    // The glide back to the start takes longer than the second that `at` leaves.
    let proven = proven(
        QUIET,
        "[[beat]]\ntitle = \"A\"\nclock = { pace = \"2 d/s\", lasts = \"45 s\" }\nview = { centre = \"Orla\", span = \"6 au\" }\n\
         [[beat]]\ntitle = \"B\"\nstart = \"restart\"\nclock = { reach = \"periapsis of Fenn\", at = \"1 s\", lasts = \"30 s\" }\n",
    );
    let finding = found(&proven, Topic::Event, "late");
    assert_eq!(finding.weight, Weight::Failure);
    assert_eq!(finding.place, proven.show.scenario.beats[1].clock_place);
}

#[test]
fn bodies_that_lie_before_they_are_to_move_are_found() {
    let beats = "[[beat]]\ntitle = \"Fall\"\nclock = { span = \"30 s\", lasts = \"20 s\" }\nview = { centre = \"Ball\", span = \"300 m\" }\n\
                 [[beat]]\ntitle = \"Late\"\nclock = { span = \"30 s\", lasts = \"20 s\" }\nmarks = [\"velocity of Ball\"]\n";
    let finding = proven(BALL, beats);
    let finding = found(&finding, Topic::Motion, "lies on Skerry before it begins");
    assert!(finding.wrong.contains("beat 2"), "{finding:?}");
}

#[test]
fn kicks_that_come_to_nothing_are_found_and_those_that_lift_it_off_are_not() {
    let beat = "[[beat]]\ntitle = \"Up\"\nstart = { time = \"30 s\" }\nclock = { span = \"60 s\", lasts = \"20 s\" }\n\
                view = { centre = \"Ball\", span = \"300 m\" }\nmarks = [\"velocity of Ball\"]\n";
    let kicked = |speed: &str| {
        let change = format!(
            "[[change]]\nat = \"40 s\"\nkick = \"Ball\"\nspeed = \"{speed}\"\nalong = \"outwards\"\n"
        );
        proven(BALL, &format!("{change}{beat}"))
    };
    let up = kicked("10 m/s");
    assert!(about(&up, Topic::Motion).is_empty(), "{:#?}", up.report.findings);
    assert_eq!(up.show.ephemeris.releases().len(), 1);
    let down = kicked("-10 m/s");
    let finding = found(&down, Topic::Motion, "change 1 kicks Ball, which lies on Skerry then");
    assert_eq!(finding.place, down.show.scenario.changes[0].place);
    found(&down, Topic::Motion, "is to move in beat 1, but lies on Skerry");
    let merging = BALL.replace("radius = \"1737 km\"", "radius = \"1737 km\"\nsurface = \"merge\"");
    let change = "[[change]]\nat = \"40 s\"\nkick = \"Ball\"\nspeed = \"9 m/s\"\nalong = \"outwards\"\n";
    let part =
        proven(&merging, &format!("{change}{}", beat.replace("centre = \"Ball\"", "centre = \"Skerry\"")));
    found(&part, Topic::Motion, "change 1 kicks Ball, which is part of Skerry by then");
}

#[test]
fn a_view_of_what_has_merged_is_found() {
    let merging = BALL.replace("radius = \"1737 km\"", "radius = \"1737 km\"\nsurface = \"merge\"");
    let beats = "[[beat]]\ntitle = \"Fall\"\nclock = { span = \"30 s\", lasts = \"20 s\" }\nview = { centre = \"Ball\", span = \"300 m\" }\n\
                 [[beat]]\ntitle = \"Late\"\nclock = { span = \"30 s\", lasts = \"20 s\" }\n";
    let proven = proven(&merging, beats);
    let finding = found(&proven, Topic::Motion, "follows Ball, which is part of Skerry");
    assert_eq!(finding.place, proven.show.scenario.beats[1].place);
}

#[test]
fn bodies_out_of_the_picture_are_found() {
    let beats = REACH.replace("6 au", "0.2 au");
    let proven = proven(QUIET, &beats);
    found(&proven, Topic::Motion, "Fenn has marks but is in the picture for 0 %");
}

#[test]
fn what_goes_round_too_fast_to_see_is_found() {
    let proven = proven(
        QUIET,
        "[[beat]]\ntitle = \"F\"\nclock = { pace = \"7 yr/s\", lasts = \"10 s\" }\nview = { centre = \"Orla\", span = \"6 au\" }\n",
    );
    found(&proven, Topic::Motion, "Brae goes round");
    assert!(proven.report.beats[0].turns_a_frame > 1.0 / 12.0);
}

#[test]
fn what_jumps_from_frame_to_frame_is_found() {
    // 100 m in half a second, in a picture 40 m high.
    let beats = "[[beat]]\ntitle = \"F\"\nclock = { span = \"11 s\", lasts = \"0.5 s\" }\nview = { centre = \"Skerry\", span = \"40 m\" }\n";
    let beats = beats.replace(
        "centre = \"Skerry\"",
        "centre = { about = \"Skerry\", offset = [\"1737.02 km\", \"0 km\", \"0 km\"] }",
    );
    let proven = proven(BALL, &beats);
    found(&proven, Topic::Motion, "Ball jumps");
}

#[test]
fn a_pass_within_hill_radii_is_listed_and_a_hair_s_breadth_is_warned_of() {
    let text = |aside: &str| {
        format!(
            "{QUIET}[[body]]\nname = \"Pell\"\nplace = {{ about = \"Brae\", position = [\"2000000 km\", \"{aside} km\", \"0 km\"], velocity = [\"-4 km/s\", \"0 km/s\", \"0 km/s\"] }}\n\
             [[beat]]\ntitle = \"Pass\"\nclock = {{ span = \"12 d\", lasts = \"30 s\" }}\nview = {{ centre = \"Brae\", span = \"5000000 km\" }}\n"
        )
    };
    let far = proven(&text("300000"), "");
    let one = far.report.encounters.iter().find(|e| e.body == BodyId(3)).expect("a pass");
    assert!(one.hill_radii.is_some_and(|hill| hill < 0.3), "{one:?}");
    assert!(about(&far, Topic::Encounter).is_empty(), "{:#?}", far.report.findings);
    // Half a kilometre to spare, and a metre for each 1e-9: the sixth digit decides.
    let warned = |gap_m: f64| {
        let mut findings = Vec::new();
        numbers::close_calls(&far.show, &[Encounter { gap_m, moved_m: 1.0, ..*one }], &mut findings);
        findings
    };
    assert!(warned(500.0)[0].wrong.contains("Pell misses Brae by 0.5 km in beat 1"), "{:?}", warned(500.0));
    assert!(warned(2000.0).is_empty());
}

#[test]
fn captions_that_are_too_long_for_their_beat_are_found() {
    let beats = REACH.replace("at = \"30 s\"", "at = \"5 s\", lasts = \"6 s\"");
    let caption = "caption = { en = \"Nearest, and fastest\", es = \"Cuando pasa más cerca de la estrella es cuando más rápido va, y no al revés, por más vueltas que le demos\" }\n";
    let proven = proven(QUIET, &format!("{beats}{caption}"));
    let finding = found(
        &proven,
        Topic::Reading,
        "the caption \"es\" of beat 1 takes 10 s to read, and the beat lasts 6 s",
    );
    assert_eq!(finding.weight, Weight::Warning);
    assert_eq!(about(&proven, Topic::Reading).len(), 1, "{:#?}", proven.report.findings);
}

#[test]
fn names_without_room_are_noted() {
    let moons: String = (0..12)
        .map(|moon| {
            format!(
                "[[body]]\nname = \"A moon called {moon}\"\norbit = {{ around = \"Brae\", semi-major = \"{} km\", eccentricity = 0 }}\n",
                300_000 + 10_000 * moon
            )
        })
        .collect();
    let proven = proven(
        &format!("{QUIET}{moons}"),
        "[[beat]]\ntitle = \"M\"\nclock = { pace = \"1 d/s\", lasts = \"10 s\" }\nview = { centre = \"Orla\", span = \"6 au\" }\n",
    );
    let finding = found(&proven, Topic::Reading, "the name of A moon called 11 has no room");
    assert_eq!(finding.weight, Weight::Note);
    assert!(proven.report.is_ready());
}

/// Two beats, the second with another view.
fn moved(view: &str) -> Proven {
    let beat = |view: &str| {
        format!(
            "[[beat]]\ntitle = \"V\"\nclock = {{ pace = \"1 d/s\", lasts = \"8 s\" }}\nview = {{ centre = {{ about = \"Orla\", offset = [{view} }}\n"
        )
    };
    proven(QUIET, &(beat("\"0 au\", \"0 au\", \"0 au\"] }, span = \"4 au\"") + &beat(view)))
}

#[test]
fn views_that_turn_or_slide_fast_are_found() {
    let calm = moved("\"0.5 au\", \"0 au\", \"0 au\"] }, span = \"4 au\", turn = \"20 deg\"");
    assert!(about(&calm, Topic::Comfort).is_empty(), "{:#?}", calm.report.findings);
    // The easing of a move is at most 2.6 times as fast as its mean.
    let turn = calm.report.beats[1].turn_deg_s;
    assert!(turn > 20.0 / 1.2 && turn < 2.6 * 20.0 / 1.2, "{turn}");
    let turned = moved("\"0 au\", \"0 au\", \"0 au\"] }, span = \"4 au\", turn = \"170 deg\"");
    found(&turned, Topic::Comfort, "the view turns at");
    let tilted = moved("\"0 au\", \"0 au\", \"0 au\"] }, span = \"4 au\", tilt = \"80 deg\"");
    found(&tilted, Topic::Comfort, "the view turns at");
    let slid = moved("\"60 au\", \"0 au\", \"0 au\"] }, span = \"4 au\"");
    found(&slid, Topic::Comfort, "the view slides by");
}

#[test]
fn nothing_that_the_house_draws_flashes_however_fast_keys_are_hit() {
    // A star that fills the view of the second beat, and a veil on the way there.
    let proven = proven(
        QUIET,
        "[[beat]]\ntitle = \"Far\"\nclock = { pace = \"1 d/s\", lasts = \"8 s\" }\nview = { centre = \"Brae\", span = \"40000 km\" }\n\
         [[beat]]\ntitle = \"Star\"\nstart = { time = \"9 yr\" }\nclock = { pace = \"1 d/s\", lasts = \"8 s\" }\nview = { centre = \"Orla\", span = \"1500000 km\" }\n",
    );
    assert!(proven.report.beats.iter().all(|beat| beat.flashing == 0.0), "{:#?}", proven.report.beats);
}

#[test]
fn a_show_near_its_bound_of_memory_and_dear_frames_are_found() {
    let mut proven = proven(QUIET, REACH);
    assert!(proven.report.bytes > 0 && proven.report.beats[0].frame_ms > 0.3, "{:#?}", proven.report.beats);
    proven.report.bytes = proven.report.most_bytes * 4 / 5;
    reading::memory(&proven.show, &mut proven.report);
    found(&proven, Topic::Cost, "80 % of the memory");
    let sliced = self::proven(
        QUIET,
        "[[beat]]\ntitle = \"S\"\nclock = { span = \"2 periods of Brae\", lasts = \"30 s\" }\nview = { centre = \"Orla\", span = \"2.4 au\" }\n\
         marks = [{ sector = \"Brae\", every = \"10 d\" }, { sector = \"Fenn\", every = \"10 d\" }, \"trail of Brae\", \"trail of Fenn\"]\n",
    );
    found(&sliced, Topic::Cost, "ms to paint without a graphics card");
}
