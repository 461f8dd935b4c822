//! `check`: what can be proven about a scenario before the show.
//!
//! It is read, resolved, integrated over all its beats, and planned; what that gives is printed, problems with their place.

use std::fmt::Write as _;
use std::path::Path;
use std::process::ExitCode;

use anyhow::Result;
use fallaround_core::ephemeris::Outcome;
use fallaround_core::integrate::drift;
use fallaround_core::scenario::{BodyId, EventRef, Problem, Severity};
use fallaround_core::show::{Fingerprint, Show};
use serde_json::{Value, json};

use crate::cli::{Check, Today};
use crate::load::{self, Rehearsed, Wrong};

/// At how many instants the energy is looked at.
const ENERGY_SAMPLES: u32 = 400;

/// Checks each file; exit code 1 when one of them can't be shown.
///
/// # Errors
/// When the output can't be made; a wrong file is a result, not an error.
pub(crate) fn command(options: &Check) -> Result<ExitCode> {
    let mut reports = Vec::new();
    for path in &options.scenarios {
        let report = check(path, &options.today)?;
        if !options.json {
            print!("{}", report.text());
        }
        for problem in &report.problems {
            eprintln!("{}", load::line(&report.file, problem));
        }
        reports.push(report);
    }
    if options.json {
        let all: Vec<Value> = reports.iter().map(Report::json).collect();
        println!("{}", serde_json::to_string_pretty(&all)?);
    }
    let good = reports.iter().all(|report| report.proven.is_some());
    Ok(if good { ExitCode::SUCCESS } else { ExitCode::FAILURE })
}

/// What came of one file.
struct Report {
    file: String,
    proven: Option<Proven>,
    problems: Vec<Problem>,
}

/// A show that holds.
struct Proven {
    show: Show,
    fingerprint: Fingerprint,
    energy_error: Option<f64>,
}

fn check(path: &Path, today: &Today) -> Result<Report> {
    let file = path.display().to_string();
    match load::rehearsed(path, today) {
        Ok(Rehearsed { text, show, notes }) => {
            let fingerprint = Fingerprint::of(&text, &show);
            let energy_error = energy_error(&show);
            Ok(Report { file, proven: Some(Proven { show, fingerprint, energy_error }), problems: notes })
        }
        Err(error) => match error.downcast::<Wrong>() {
            Ok(wrong) => Ok(Report { file, proven: None, problems: wrong.problems }),
            Err(error) => Err(error),
        },
    }
}

/// Greatest relative deviation of the energy from that at the start, where the model keeps it: with Newton's forces alone,
/// and without contacts and changes.
fn energy_error(show: &Show) -> Option<f64> {
    let forces = &show.initial.forces;
    let eph = &show.ephemeris;
    let changed = !eph.contacts().is_empty() || !show.initial.changes.is_empty();
    if forces.relativity || !forces.oblate.is_empty() || !forces.drags.is_empty() || changed {
        return None;
    }
    let gms: Vec<f64> = show.initial.bodies.iter().map(|body| body.gm_m3_s2).collect();
    let energy = |t_s: f64| -> Option<f64> {
        let states: Vec<_> =
            (0..gms.len()).map(|body| eph.state(BodyId(body), t_s)).collect::<Option<_>>()?;
        let pos: Vec<f64> = states.iter().flat_map(|state| <[f64; 3]>::from(state.pos)).collect();
        let vel: Vec<f64> = states.iter().flat_map(|state| <[f64; 3]>::from(state.vel)).collect();
        Some(drift::softened_energy(&gms, forces.softening_m, &pos, &vel))
    };
    let start = energy(0.0)?;
    if start == 0.0 {
        return None; // One massive body, or none: nothing is exchanged.
    }
    let (from_s, until_s) = (eph.from_s(), eph.until_s());
    (0..=ENERGY_SAMPLES)
        .map(|sample| from_s + (until_s - from_s) * f64::from(sample) / f64::from(ENERGY_SAMPLES))
        .map(|t_s| energy(t_s).map(|now| ((now - start) / start).abs()))
        .try_fold(0.0_f64, |worst, one| one.map(|one| worst.max(one)))
}

impl Report {
    /// For people.
    fn text(&self) -> String {
        let Some(Proven { show, fingerprint, energy_error }) = &self.proven else {
            return format!("{}: can't be shown\n", self.file);
        };
        let mut out = String::new();
        let plan = &show.plan;
        let bodies: Vec<&str> = show.scenario.bodies.iter().map(|body| body.name.as_str()).collect();
        // Writing to a string can't fail.
        let mut line = |text: String| writeln!(out, "{text}").unwrap_or_default();
        line(format!("{}: \"{}\" holds", self.file, show.scenario.title));
        line(format!("  fingerprint  {fingerprint}"));
        line(format!("  bodies       {}", bodies.join(", ")));
        line(format!("  length       {} in {} beats", minutes(plan.lasts_s()), plan.beats.len()));
        line(format!(
            "  model time   {} to {}, {} steps, {:.1} MB",
            days(show.ephemeris.from_s()),
            days(show.ephemeris.until_s()),
            show.ephemeris.forward().len() + show.ephemeris.backward().len(),
            show.ephemeris.bytes() as f64 / 1e6
        ));
        match energy_error {
            Some(error) => line(format!("  energy       kept to {error:.1e} of it")),
            None => line("  energy       not a measure here (contact, change, relativity, oblateness, drag, or nothing massive moves)".to_owned()),
        }
        for (index, (planned, beat)) in plan.beats.iter().zip(&show.scenario.beats).enumerate() {
            line(format!(
                "  beat {:<3} {:>6}  {:<28} {} to {}",
                index + 1,
                minutes(planned.show_s),
                beat.title,
                days(planned.from_s),
                days(planned.until_s)
            ));
            if let Some(cue) = &planned.cue {
                let event = event_text(show, &cue.event);
                line(format!(
                    "                    reaches {event} after {:.1} s, at {}",
                    cue.at_s,
                    days(cue.model_s)
                ));
            }
        }
        for contact in show.ephemeris.contacts() {
            line(format!(
                "  contact      {} {} {} at {}, {:.1} m/s",
                name(show, contact.body),
                outcome(contact.outcome),
                name(show, contact.onto),
                days(contact.t_s),
                contact.speed_m_s
            ));
        }
        out
    }

    /// For programs.
    fn json(&self) -> Value {
        let problems: Vec<Value> = self
            .problems
            .iter()
            .map(|problem| {
                json!({
                    "line": problem.place.line,
                    "column": problem.place.column,
                    "severity": match problem.severity { Severity::Error => "error", Severity::Note => "note" },
                    "wrong": problem.wrong,
                    "remedy": problem.remedy,
                })
            })
            .collect();
        let Some(Proven { show, fingerprint, energy_error }) = &self.proven else {
            return json!({ "file": self.file, "holds": false, "problems": problems });
        };
        let beats: Vec<Value> = show
            .plan
            .beats
            .iter()
            .zip(&show.scenario.beats)
            .map(|(planned, beat)| {
                json!({
                    "title": beat.title,
                    "show_s": planned.show_s,
                    "lasts_s": planned.lasts_s,
                    "from_s": planned.from_s,
                    "until_s": planned.until_s,
                    "pace": planned.pace,
                    "reaches": planned.cue.as_ref().map(|cue| {
                        json!({ "event": event_text(show, &cue.event), "at_s": cue.at_s, "t_s": cue.model_s })
                    }),
                })
            })
            .collect();
        let contacts: Vec<Value> = show
            .ephemeris
            .contacts()
            .iter()
            .map(|contact| {
                json!({
                    "t_s": contact.t_s,
                    "body": name(show, contact.body),
                    "onto": name(show, contact.onto),
                    "outcome": outcome(contact.outcome),
                    "speed_m_s": contact.speed_m_s,
                })
            })
            .collect();
        let bodies: Vec<&str> = show.scenario.bodies.iter().map(|body| body.name.as_str()).collect();
        json!({
            "file": self.file,
            "holds": true,
            "title": show.scenario.title,
            "fingerprint": fingerprint.to_string(),
            "bodies": bodies,
            "lasts_s": show.plan.lasts_s(),
            "from_s": show.ephemeris.from_s(),
            "until_s": show.ephemeris.until_s(),
            "steps": show.ephemeris.forward().len() + show.ephemeris.backward().len(),
            "bytes": show.ephemeris.bytes(),
            "energy_error": energy_error,
            "beats": beats,
            "contacts": contacts,
            "problems": problems,
        })
    }
}

/// "2nd periapsis of Fenn", as files say it.
fn event_text(show: &Show, event: &EventRef) -> String {
    let ordinal = match (event.nth, event.nth % 10, event.nth % 100) {
        (1, ..) => String::new(),
        (n, _, 11..=13) => format!("{n}th "),
        (n, 1, _) => format!("{n}st "),
        (n, 2, _) => format!("{n}nd "),
        (n, 3, _) => format!("{n}rd "),
        (n, ..) => format!("{n}th "),
    };
    let joiner = event.kind.joiner();
    let distance = event.distance.map(|distance| format!(" {distance}")).unwrap_or_default();
    let other = event.other.map(|other| format!(" {joiner} {}", name(show, other))).unwrap_or_default();
    format!("{ordinal}{}{distance} of {}{other}", event.kind.name(), name(show, event.body))
}

fn name(show: &Show, body: BodyId) -> &str {
    show.initial.bodies.get(body.0).map_or("", |body| body.name.as_str())
}

const fn outcome(outcome: Outcome) -> &'static str {
    match outcome {
        Outcome::Stopped => "comes to rest on",
        Outcome::Bounced => "bounces off",
        Outcome::Merged => "becomes part of",
    }
}

/// Show time: `9:05`.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a show lasts hours, not ages")]
fn minutes(seconds: f64) -> String {
    let seconds = seconds.max(0.0).round() as u64;
    format!("{}:{:02}", seconds / 60, seconds % 60)
}

/// Model time in the unit that fits it.
fn days(seconds: f64) -> String {
    let size = seconds.abs();
    let (per, unit) = if size >= 2.0 * 31_557_600.0 {
        (31_557_600.0, "yr")
    } else if size >= 2.0 * 86_400.0 {
        (86_400.0, "d")
    } else if size >= 2.0 * 3600.0 {
        (3600.0, "h")
    } else {
        (1.0, "s")
    };
    format!("{:.3} {unit}", seconds / per)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn times_are_told_in_units_that_fit() {
        assert_eq!(minutes(545.0), "9:05");
        assert_eq!(days(90.0), "90.000 s");
        assert_eq!(days(-86_400.0 * 3.0), "-3.000 d");
        assert_eq!(days(31_557_600.0 * 12.5), "12.500 yr");
    }
}
