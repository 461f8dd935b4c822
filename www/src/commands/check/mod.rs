//! `check`: what can be proven about a scenario before the show.
//!
//! Core does the proving; this shows how far it has come, and prints what it gives, as text for people or as JSON.

mod energy;
mod json;
mod text;

use std::process::ExitCode;

use anyhow::{Context as _, Result};
use fallaround_core::check::{Proof, Proven};
use fallaround_core::ephemeris::Outcome;
use fallaround_core::scenario::Problem;
use fallaround_core::show::Fingerprint;
use serde_json::Value;

use crate::cli::Check;
use crate::load;

/// Steps between two looks at the progress bar: a few milliseconds of work.
const STEPS: usize = 500;

/// Checks each file; exit code 1 when one of them is not ready.
///
/// # Errors
/// When a file can't be read, or the output can't be made; a wrong file is a result, not an error.
pub(crate) fn command(options: &Check) -> Result<ExitCode> {
    // What can't be read is told before work is done on the others.
    let texts = options.scenarios.iter().map(|path| load::text(path, &options.today));
    let texts = texts.collect::<Result<Vec<String>>>()?;
    let mut reports = Vec::new();
    for (path, text) in options.scenarios.iter().zip(texts) {
        let report = Checked { file: path.display().to_string(), result: check(text)? };
        if !options.json {
            print!("{}", report.text());
        }
        for problem in report.problems() {
            eprintln!("{}", load::line(&report.file, problem));
        }
        reports.push(report);
    }
    if options.json {
        let all: Vec<Value> = reports.iter().map(Checked::json).collect();
        println!("{}", serde_json::to_string_pretty(&all)?);
    }
    Ok(if reports.iter().all(Checked::is_ready) { ExitCode::SUCCESS } else { ExitCode::FAILURE })
}

/// What came of one file.
struct Checked {
    file: String,
    /// A show that can be given, or why there is none.
    result: Result<Shown, Vec<Problem>>,
}

/// A show that can be given.
struct Shown {
    proven: Proven,
    fingerprint: Fingerprint,
    energy_error: Option<f64>,
}

impl Checked {
    fn is_ready(&self) -> bool {
        self.result.as_ref().is_ok_and(|shown| shown.proven.report.is_ready())
    }

    fn problems(&self) -> &[Problem] {
        match &self.result {
            Ok(shown) => &shown.proven.notes,
            Err(problems) => problems,
        }
    }

    /// For people.
    fn text(&self) -> String {
        match &self.result {
            Ok(shown) => text::of(&self.file, shown),
            Err(_) => format!("{}: can't be shown\n", self.file),
        }
    }

    /// For programs.
    fn json(&self) -> Value {
        match &self.result {
            Ok(shown) => json::of(&self.file, shown),
            Err(problems) => json::wrong(&self.file, problems),
        }
    }
}

fn check(text: String) -> Result<Result<Shown, Vec<Problem>>> {
    let mut proof = match Proof::start(&text) {
        Ok(proof) => proof,
        Err(problems) => return Ok(Err(problems)),
    };
    let bar = load::bar("Checking")?;
    loop {
        match proof.work(STEPS) {
            Ok(progress) if progress.done => break,
            Ok(progress) => bar.set_position(load::share(progress.fraction)),
            Err(problems) => {
                bar.finish_and_clear();
                return Ok(Err(problems));
            }
        }
    }
    bar.finish_and_clear();
    let proven = proof.finish().context("the check came to no end")?;
    let fingerprint = Fingerprint::of(&text, &proven.show);
    let energy_error = energy::error(&proven.show);
    Ok(Ok(Shown { proven, fingerprint, energy_error }))
}

const fn outcome(outcome: Outcome) -> &'static str {
    match outcome {
        Outcome::Stopped => "comes to rest on",
        Outcome::Bounced => "bounces off",
        Outcome::Merged => "becomes part of",
    }
}

#[cfg(test)]
mod tests {
    use std::fs;
    use std::path::Path;

    use clap::Parser as _;

    use super::*;
    use crate::cli::{Cli, Command};

    const SKERRY: &str = "format = 1\ntitle = \"A ball\"\n[[body]]\nname = \"Skerry\"\nmass = \"1 Moon masses\"\nradius = \"1737 km\"\n\
        [[body]]\nname = \"Ball\"\ndrop = { onto = \"Skerry\", height = \"100 m\" }\n\
        [[beat]]\ntitle = \"Fall\"\nclock = { reach = \"contact of Ball with Skerry\", at = \"10 s\" }\nview = { centre = \"Ball\", span = \"300 m\" }\n";

    fn checked(text: &str) -> Checked {
        Checked { file: "x.toml".to_owned(), result: check(text.to_owned()).unwrap() }
    }

    fn exit(folder: &Path, text: Option<&str>) -> Result<ExitCode> {
        let path = folder.join("x.toml");
        if let Some(text) = text {
            fs::write(&path, text).unwrap();
        }
        let cli =
            Cli::try_parse_from(["fallaround", "check", "--json", &path.display().to_string()]).unwrap();
        let Some(Command::Check(options)) = cli.command else { panic!("not a check") };
        command(&options)
    }

    #[test]
    fn a_ready_show_gives_0_one_that_is_not_1_and_a_missing_file_an_error() {
        let folder = tempfile::tempdir().unwrap();
        assert!(exit(folder.path(), None).is_err());
        let code = |text| format!("{:?}", exit(folder.path(), Some(text)).unwrap());
        assert_eq!(code(SKERRY), format!("{:?}", ExitCode::SUCCESS));
        assert_eq!(code("format = 1"), format!("{:?}", ExitCode::FAILURE));
        let late = format!(
            "{SKERRY}[[beat]]\ntitle = \"Again\"\nstart = \"restart\"\n\
             clock = {{ reach = \"contact of Ball with Skerry\", at = \"0.5 s\", lasts = \"30 s\" }}\n"
        );
        assert_eq!(code(&late), format!("{:?}", ExitCode::FAILURE));
    }

    #[test]
    fn people_read_that_it_is_ready_and_how_exact_it_is() {
        let text = checked(SKERRY).text();
        assert!(text.starts_with("x.toml: \"A ball\" is ready\n"), "{text}");
        assert!(text.contains("contact of Ball with Skerry after 10.0 s"), "{text}");
        assert!(text.contains("under 0.001 px"), "{text}");
    }

    #[test]
    fn programs_find_the_same_keys_in_every_report() {
        let keys = |value: &Value| {
            let mut keys: Vec<String> = value.as_object().unwrap().keys().cloned().collect();
            keys.sort();
            keys
        };
        let report = checked(SKERRY).json();
        assert_eq!(keys(&report), json::KEYS);
        assert_eq!(keys(&report["beats"][0]), json::BEAT_KEYS);
        let wrong = checked("format = 1").json();
        assert_eq!(keys(&wrong), ["file", "holds", "problems", "ready"]);
        assert_eq!(wrong["ready"], false);
    }
}
