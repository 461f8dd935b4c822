//! The native program of Fallaround: it builds the app, serves it, and answers questions about scenarios.
//!
//! Data goes to standard output alone; progress, notes and errors go to standard error. Exit codes: 0 done, 1 a
//! check or a test failed, 2 it could not be done (a wrong argument, a wrong file, a missing tool), 130 ended by Ctrl-C.

#![allow(clippy::print_stdout, reason = "standard output is this program's trade")]

mod browser_open;
mod bundle;
mod child;
mod chromium;
mod cli;
mod commands;
mod load;
mod root;
mod serve;
mod site;
mod table;
mod toolchain;

use std::process::ExitCode;

use anyhow::Result;
use clap::Parser as _;

use cli::{Cli, Command};

fn main() -> ExitCode {
    if let Err(error) = child::end_children_with_us() {
        eprintln!("note: Ctrl-C may leave helpers of this program running: {error}");
    }
    match run(Cli::parse()) {
        Ok(code) => code,
        Err(error) => {
            // What is wrong with a file starts with its place, so that editors can go there.
            let prefix = if error.is::<load::Wrong>() { "" } else { "error: " };
            eprintln!("{prefix}{error:#}");
            ExitCode::from(2)
        }
    }
}

fn run(cli: Cli) -> Result<ExitCode> {
    match cli.command.unwrap_or(Command::Serve(cli.serve)) {
        Command::Serve(options) => serve::command(&options),
        Command::Test => commands::test::command(),
        Command::Check(options) => commands::check::command(&options),
        Command::Trace(options) => commands::trace::command(&options),
        Command::Events(options) => commands::events::command(&options),
        Command::Aim(options) => commands::aim::command(&options),
        Command::Fingerprint(options) => commands::fingerprint::command(&options),
        Command::Module(options) => commands::module::command(&options),
    }
}
