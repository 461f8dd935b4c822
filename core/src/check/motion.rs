//! What moves too fast to be followed, lies still where it should move, or is out of the picture.

use super::finding::{Finding, Topic, Weight};
use super::report::BeatReport;
use super::sight::{FRAME_S, Seen, called};
use crate::ephemeris::Outcome;
use crate::scenario::{BodyId, Mark};
use crate::show::PlannedBeat;
use std::f64::consts::TAU;

/// Pieces of a beat between the instants looked at.
const PIECES: u32 = 200;

/// Part of a turn from one frame to the next from which the eye loses the way round: five turns a second. At half a turn it would
/// seem to stand, and beyond to run backwards.
const BLURRED_TURN: f64 = 1.0 / 12.0;

/// Orbits smaller than this in the picture, px, are a dot whatever they do.
const SMALLEST_ORBIT_PX: f64 = 12.0;

/// Way from one frame to the next, parts of the picture's height, from which a body jumps instead of moving. Common practice, no
/// source: it crosses the picture in a sixth of a second.
const JUMP: f64 = 0.1;

/// A body with marks that is in the picture for less than this share of a beat is missed.
const MISSED: f64 = 0.5;

/// What one body does in a beat.
#[derive(Debug, Clone, Copy, Default)]
struct Seenness {
    on_stage: u32,
    in_picture: u32,
    turn: f64,
    jump: f64,
}

/// Looks at a beat.
pub(super) fn check(seen: &Seen<'_>, report: &mut BeatReport, findings: &mut Vec<Finding>) {
    let (show, from_s) = (seen.show, seen.planned.from_s);
    findings.extend(lost_centre(seen));
    let marked = marked(&seen.beat.marks);
    let moving = moving(&seen.beat.marks);
    for body in (0..show.scenario.bodies.len()).map(BodyId) {
        let one = look(seen, body);
        report.turns_a_frame = report.turns_a_frame.max(one.turn);
        let mut add = |wrong: String, remedy: &str| {
            findings.push(Finding {
                weight: Weight::Warning,
                topic: Topic::Motion,
                place: seen.beat.place,
                wrong,
                remedy: remedy.to_owned(),
            });
        };
        let (called, name) = (called(seen.index), show.initial.name(body));
        if one.turn > BLURRED_TURN {
            add(
                format!(
                    "{name} goes round {:.0} times a second in {called}: nobody sees which way",
                    one.turn / FRAME_S
                ),
                "slow the pace, or take it off the stage with `cast`",
            );
        } else if one.jump > JUMP {
            add(
                format!(
                    "{name} jumps by {:.0} % of the picture's height from frame to frame in {called}",
                    100.0 * one.jump
                ),
                "slow the pace, or show a wider view",
            );
        }
        if !marked.contains(&body) || one.on_stage == 0 {
            continue;
        }
        let share = f64::from(one.in_picture) / f64::from(one.on_stage);
        if share < MISSED {
            add(
                format!("{name} has marks but is in the picture for {:.0} % of {called} only", 100.0 * share),
                "widen or move the view, or drop its marks",
            );
        }
        let rest = show.ephemeris.at_rest(body, from_s).filter(|_| !is_released(seen, body));
        if let Some(rest) = rest.filter(|_| moving.contains(&body)) {
            add(
                format!(
                    "{name} is to move in {called}, but lies on {} before it begins",
                    show.initial.name(rest.onto)
                ),
                "start the beat sooner, or drop the marks that need it to move",
            );
        }
    }
}

/// Whether a body is kicked off what it rests on while the beat lasts.
fn is_released(seen: &Seen<'_>, body: BodyId) -> bool {
    let PlannedBeat { from_s, until_s, .. } = *seen.planned;
    let mut releases = seen.show.ephemeris.releases().iter();
    releases.any(|release| release.body == body && (from_s..until_s).contains(&release.t_s))
}

/// A view that follows what is no longer there.
fn lost_centre(seen: &Seen<'_>) -> Option<Finding> {
    let centre = seen.beat.view.centre.about?;
    let contact = seen.show.ephemeris.at_rest(centre, seen.planned.from_s)?;
    (contact.outcome == Outcome::Merged).then(|| Finding {
        weight: Weight::Warning,
        topic: Topic::Motion,
        place: seen.beat.place,
        wrong: format!(
            "the view of {} follows {}, which is part of {} by then",
            called(seen.index),
            seen.show.initial.name(centre),
            seen.show.initial.name(contact.onto)
        ),
        remedy: "name another centre".to_owned(),
    })
}

fn look(seen: &Seen<'_>, body: BodyId) -> Seenness {
    let mut all = Seenness::default();
    let (show, frame) = (seen.show, super::sight::frame());
    let primary = show.initial.bodies.get(body.0).and_then(|one| one.primary);
    let centre = seen.beat.view.centre.about;
    for beat_s in seen.instants(PIECES) {
        let t_s = seen.model_s(beat_s);
        let Some(state) = show.ephemeris.state(body, t_s) else { continue };
        if !seen.bodies(t_s).any(|one| one == body) {
            continue;
        }
        all.on_stage += 1;
        let camera = seen.camera(t_s);
        if !seen.holds(&camera, state.pos) {
            continue;
        }
        all.in_picture += 1;
        let model_a_frame_s = seen.pace_at(beat_s).abs() * FRAME_S;
        if let Some(about) = primary.and_then(|p| show.ephemeris.state(p, t_s)) {
            let (r, v) = (state.pos - about.pos, state.vel - about.vel);
            let rate = r.cross(&v).norm() / r.norm_squared();
            if rate.is_finite() && r.norm() * camera.px_per_m > SMALLEST_ORBIT_PX {
                all.turn = all.turn.max(rate * model_a_frame_s / TAU);
            }
        }
        let drift =
            centre.and_then(|c| show.ephemeris.state(c, t_s)).map_or(state.vel, |c| state.vel - c.vel);
        let [x, y] = camera.turn(drift * model_a_frame_s);
        all.jump = all.jump.max((x * x + y * y).sqrt() / frame.scene);
    }
    all
}

/// The bodies that a beat draws something for.
fn marked(marks: &[Mark]) -> Vec<BodyId> {
    let of = |mark: &Mark| match *mark {
        Mark::Trail { .. } | Mark::Path { .. } | Mark::Conic { .. } | Mark::Foci { .. } => None, // A line says something without its body.
        Mark::Apsides { .. } | Mark::Scale | Mark::Date | Mark::Pace => None,
        Mark::Sector { body, .. }
        | Mark::Velocity { body, .. }
        | Mark::Gravity { body }
        | Mark::Readout { body, .. } => Some(body),
    };
    marks.iter().filter_map(of).collect()
}

/// The bodies that a beat's marks need to move.
fn moving(marks: &[Mark]) -> Vec<BodyId> {
    let of = |mark: &Mark| match *mark {
        Mark::Velocity { body, .. } | Mark::Path { body, .. } | Mark::Sector { body, .. } => Some(body),
        _ => None,
    };
    marks.iter().filter_map(of).collect()
}
