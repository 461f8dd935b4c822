//! `aim`: solves the outcomes that a scenario states, and writes the file with the numbers filled in.

use std::fs;
use std::io::Write as _;
use std::process::ExitCode;

use anyhow::{Context as _, Result};
use fallaround_core::aim::{AimFailure, Aiming, Miss, Solved};
use fallaround_core::scenario::Problem;

use crate::cli::Aim;
use crate::load;

/// Solves and writes; exit code 1, and nothing written, when an aim can't be met.
///
/// # Errors
/// When the file is wrong, or the result can't be written.
pub(crate) fn command(options: &Aim) -> Result<ExitCode> {
    let text = load::text(&options.scenario, &options.today)?;
    let solved = match solve(&text)? {
        Ok(solved) => solved,
        Err(AimFailure::Problems(problems)) => return Err(load::wrong(&options.scenario, problems)),
        Err(failure) => {
            let (AimFailure::Missed { place, .. } | AimFailure::Nothing { place, .. }) = &failure else {
                return Ok(ExitCode::FAILURE);
            };
            let problem =
                Problem::error(*place, failure.to_string(), "widen its limits, or free more numbers");
            eprintln!("{}", load::line(&options.scenario.display().to_string(), &problem));
            if let AimFailure::Missed { nearest, .. } = &failure {
                nearest.iter().for_each(|miss| eprintln!("{}", told(miss)));
            }
            return Ok(ExitCode::FAILURE);
        }
    };
    match &options.output {
        Some(path) => {
            fs::write(path, &solved.text).with_context(|| path.display().to_string())?;
            solved.misses.iter().for_each(|miss| println!("{}", told(miss)));
        }
        None => {
            solved.misses.iter().for_each(|miss| eprintln!("{}", told(miss)));
            std::io::stdout().write_all(solved.text.as_bytes()).context("standard output")?;
        }
    }
    Ok(ExitCode::SUCCESS)
}

fn solve(text: &str) -> Result<Result<Solved, AimFailure>> {
    let mut aiming = match Aiming::start(text) {
        Ok(aiming) => aiming,
        Err(failure) => return Ok(Err(failure)),
    };
    let bar = load::bar("Aiming")?;
    loop {
        match aiming.work() {
            Ok(progress) if progress.done => break,
            Ok(progress) => bar.set_position(load::share(progress.fraction)),
            Err(failure) => {
                bar.finish_and_clear();
                return Ok(Err(failure));
            }
        }
    }
    bar.finish_and_clear();
    Ok(Ok(aiming.finish()))
}

/// A line about an outcome.
fn told(miss: &Miss) -> String {
    format!("{}: wanted {}, comes out {}, off by {}", miss.what, miss.wanted, miss.got, miss.off)
}
