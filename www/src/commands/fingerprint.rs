//! `fingerprint`: the digest that the app shows for the same file.

use std::process::ExitCode;

use anyhow::Result;

use crate::cli;
use crate::load::{self, Rehearsed};

/// Prints the digest.
///
/// # Errors
/// When the file can't be shown.
pub(crate) fn command(options: &cli::Fingerprint) -> Result<ExitCode> {
    let Rehearsed { text, show, .. } = load::rehearsed(&options.scenario, &options.today)?;
    println!("{}", fallaround_core::show::Fingerprint::of(&text, &show));
    Ok(ExitCode::SUCCESS)
}
