//! The report for programs. Keys are stable; their endings say the unit.

use fallaround_core::check::{BeatReport, Encounter, Finding, LeftOut, Lever, Mover, Number, Shift, Why};
use fallaround_core::scenario::{Problem, Severity};
use fallaround_core::show::Show;
use serde_json::{Value, json};

use super::{Shown, outcome};

/// How many of the numbers that move the picture are written.
const LEVERS: usize = 5;

/// The keys of a report, by the alphabet.
#[cfg(test)]
pub(super) const KEYS: [&str; 22] = [
    "beats",
    "bodies",
    "bytes",
    "contacts",
    "encounters",
    "energy_error",
    "file",
    "findings",
    "fingerprint",
    "from_s",
    "holds",
    "lasts_s",
    "long_steps",
    "method",
    "most_bytes",
    "numbers",
    "path_tolerance",
    "problems",
    "ready",
    "steps",
    "title",
    "until_s",
];

/// Those of one beat.
#[cfg(test)]
pub(super) const BEAT_KEYS: [&str; 17] = [
    "capital_arcmin",
    "flashing",
    "frame_ms",
    "from_s",
    "lasts_s",
    "line_arcmin",
    "off",
    "off_m",
    "pace",
    "pan_heights_s",
    "reaches",
    "reading_s",
    "show_s",
    "title",
    "turn_deg_s",
    "turns_a_frame",
    "until_s",
];

/// Of a file that can't be shown.
pub(super) fn wrong(file: &str, problems: &[Problem]) -> Value {
    json!({ "file": file, "holds": false, "ready": false, "problems": self::problems(problems) })
}

/// Of a show.
pub(super) fn of(file: &str, shown: &Shown) -> Value {
    let (show, report) = (&shown.proven.show, &shown.proven.report);
    let beats: Vec<Value> = (0..show.plan.beats.len())
        .filter_map(|index| Some(beat(show, index, report.beats.get(index)?)))
        .collect();
    let contacts = show.ephemeris.contacts().iter().map(|contact| {
        json!({
            "t_s": contact.t_s,
            "body": show.initial.name(contact.body),
            "onto": show.initial.name(contact.onto),
            "outcome": outcome(contact.outcome),
            "speed_m_s": contact.speed_m_s,
        })
    });
    let bodies: Vec<&str> = show.scenario.bodies.iter().map(|body| body.name.as_str()).collect();
    json!({
        "file": file,
        "holds": true,
        "ready": report.is_ready(),
        "title": show.scenario.title,
        "fingerprint": shown.fingerprint.to_string(),
        "bodies": bodies,
        "lasts_s": show.plan.lasts_s(),
        "from_s": show.ephemeris.from_s(),
        "until_s": show.ephemeris.until_s(),
        "steps": show.ephemeris.forward().len() + show.ephemeris.backward().len(),
        "path_tolerance": {
            "place": show.ephemeris.tolerance().place,
            "velocity": show.ephemeris.tolerance().velocity,
        },
        "method": report.method,
        "long_steps": long_steps(show),
        "bytes": report.bytes,
        "most_bytes": report.most_bytes,
        "energy_error": shown.energy_error,
        "beats": beats,
        "contacts": contacts.collect::<Vec<_>>(),
        "encounters": report.encounters.iter().map(|one| encounter(show, one)).collect::<Vec<_>>(),
        "numbers": {
            "tried": report.levers.len(),
            "part": 1e-9,
            "worst": report.levers.iter().take(LEVERS).map(|one| lever(show, one)).collect::<Vec<_>>(),
            "left_out": report.left_out.iter().map(|one| left_out(show, one)).collect::<Vec<_>>(),
        },
        "findings": report.findings.iter().map(finding).collect::<Vec<_>>(),
        "problems": problems(&shown.proven.notes),
    })
}

/// The stretches of long steps, in the order of time from the start on, and then of that back from it.
fn long_steps(show: &Show) -> Vec<Value> {
    let tracks = [show.ephemeris.forward(), show.ephemeris.backward()];
    let stretches = tracks.into_iter().flat_map(|track| {
        track.long_stretches().map(move |stretch| {
            json!({
                "from_s": stretch.from_s,
                "until_s": stretch.until_s,
                "step_s": track.choice().map(|choice| choice.step_s),
                "knots": stretch.knots,
                "place": stretch.errors.place,
                "velocity": stretch.errors.velocity,
            })
        })
    });
    stretches.collect()
}

fn problems(problems: &[Problem]) -> Vec<Value> {
    let one = |problem: &Problem| {
        json!({
            "line": problem.place.line,
            "column": problem.place.column,
            "severity": match problem.severity { Severity::Error => "error", Severity::Note => "note" },
            "wrong": problem.wrong,
            "remedy": problem.remedy,
        })
    };
    problems.iter().map(one).collect()
}

fn finding(finding: &Finding) -> Value {
    json!({
        "weight": finding.weight.name(),
        "topic": finding.topic.name(),
        "line": finding.place.line,
        "column": finding.place.column,
        "wrong": finding.wrong,
        "remedy": finding.remedy,
    })
}

fn beat(show: &Show, index: usize, report: &BeatReport) -> Value {
    let planned = show.plan.beats.get(index);
    json!({
        "title": show.scenario.beats.get(index).map(|beat| beat.title.as_str()),
        "show_s": planned.map(|planned| planned.show_s),
        "lasts_s": planned.map(|planned| planned.lasts_s),
        "from_s": planned.map(|planned| planned.from_s),
        "until_s": planned.map(|planned| planned.until_s),
        "pace": planned.map(|planned| planned.pace),
        "reaches": report.cue.as_ref().map(|cue| {
            json!({
                "event": cue.event.said(|body| show.initial.name(body)),
                "at_s": cue.at_s,
                "t_s": cue.model_s,
                "late_s": cue.late_s,
                "again_off_s": cue.again_s,
                "again_off_frames": cue.again_s.map(|_| cue.again_frames),
            })
        }),
        "off": report.off.map(|off| shift(show, &off)),
        "off_m": report.off_m,
        "turns_a_frame": report.turns_a_frame,
        "frame_ms": report.frame_ms,
        "capital_arcmin": report.capital_arcmin,
        "line_arcmin": report.line_arcmin,
        "reading_s": report.reading_s,
        "turn_deg_s": report.turn_deg_s,
        "pan_heights_s": report.pan_heights_s,
        "flashing": report.flashing,
    })
}

fn shift(show: &Show, shift: &Shift) -> Value {
    let of = match shift.of {
        Mover::Body(_) => "body",
        Mover::Tracer(_) => "swarm",
    };
    json!({ of: shift.of.name(&show.initial), "beat_s": shift.beat_s, "px": shift.px, "m": shift.m })
}

fn lever(show: &Show, lever: &Lever) -> Value {
    let moves: Vec<Value> =
        lever.shifts.iter().map(|one| one.map_or(Value::Null, |one| shift(show, &one))).collect();
    let mut value = number(show, &lever.number);
    value["moves"] = moves.into();
    value
}

fn left_out(show: &Show, one: &LeftOut) -> Value {
    let mut value = number(show, &one.number);
    value["why"] = match one.why {
        Why::Zero => "zero",
        Why::Alone => "no number so near",
        Why::NoTime => "no time",
        Why::Breaks(_) => "no show",
    }
    .into();
    value
}

fn number(show: &Show, number: &Number) -> Value {
    json!({
        "of": number.of(show),
        "quantity": number.quantity,
        "stated": number.stated,
        "line": number.place.line,
        "column": number.place.column,
    })
}

fn encounter(show: &Show, one: &Encounter) -> Value {
    json!({
        "body": show.initial.name(one.body),
        "other": show.initial.name(one.other),
        "t_s": one.t_s,
        "beat": one.beat + 1,
        "distance_m": one.distance_m,
        "gap_m": one.gap_m,
        "hill_radii": one.hill_radii,
        "moved_m": one.moved_m,
    })
}
