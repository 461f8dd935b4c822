//! The command line.

use std::path::PathBuf;

use clap::builder::PossibleValuesParser;
use clap::{ArgAction, Args, Parser, Subcommand, ValueEnum};
use fallaround_core::scenario::EventKind;
use fallaround_core::time::Epoch;
use fallaround_core::units::Span;

/// Prepares, rehearses and runs live demonstrations of gravity and orbits.
#[derive(Debug, Parser)]
#[command(name = "fallaround", version, args_conflicts_with_subcommands = true)]
pub(crate) struct Cli {
    #[command(subcommand)]
    pub(crate) command: Option<Command>,
    #[command(flatten)]
    pub(crate) serve: Serve,
}

/// What to do.
#[derive(Debug, Subcommand)]
pub(crate) enum Command {
    /// Build the app where needed, serve it on this computer alone and open the browser (the default).
    Serve(Serve),
    /// Set up what the tests need, and run formatting, lints and every test, browser included.
    Test,
    /// Prove scenarios before a show; exit code 1 when one of them can't be shown.
    Check(Check),
    /// Print where every body is and how it moves, as CSV.
    Trace(Trace),
    /// Print what happens, as CSV: apsides, nodes, contacts, conjunctions, stations, ways through shadows and so on.
    Events(Events),
    /// Solve the outcomes that a scenario states for its free numbers; exit code 1 when there are none that lead there.
    Aim(Aim),
    /// Print the digest that the app shows for the same file.
    Fingerprint(Fingerprint),
    /// Compile a crate of the project as the app is compiled, for Node: what benches run.
    #[command(hide = true)]
    Module(Module),
}

/// How to serve.
#[derive(Debug, Clone, Default, Args)]
pub(crate) struct Serve {
    /// Serve at this port [default: 7040, or the next free one]. What the browser keeps belongs to the port.
    #[arg(long, value_name = "PORT")]
    pub(crate) port: Option<u16>,
    /// Leave the browser closed.
    #[arg(long)]
    pub(crate) no_open: bool,
}

/// What to take as the day of a scenario that says `date = "today"`.
#[derive(Debug, Clone, Default, Args)]
pub(crate) struct Today {
    /// Take this day where a scenario says `date = "today"` [default: today's, UTC].
    #[arg(long, value_name = "YYYY-MM-DD", value_parser = day)]
    pub(crate) today: Option<f64>,
}

/// What to compile for Node.
#[derive(Debug, Args)]
pub(crate) struct Module {
    /// The crate's name.
    #[arg(value_name = "CRATE")]
    pub(crate) package: String,
    /// The folder that takes CRATE.js and CRATE_bg.wasm.
    #[arg(short, long, value_name = "FOLDER")]
    pub(crate) output: PathBuf,
}

/// What to check.
#[derive(Debug, Args)]
pub(crate) struct Check {
    /// Scenario files.
    #[arg(required = true, value_name = "SCENARIO")]
    pub(crate) scenarios: Vec<PathBuf>,
    /// Print JSON.
    #[arg(long)]
    pub(crate) json: bool,
    #[command(flatten)]
    pub(crate) today: Today,
}

/// What to trace.
#[derive(Debug, Args)]
pub(crate) struct Trace {
    /// Scenario file.
    #[arg(value_name = "SCENARIO")]
    pub(crate) scenario: PathBuf,
    #[command(flatten)]
    pub(crate) between: Between,
    /// From one row to the next: seconds, or with a unit ("12 h").
    #[arg(long, value_name = "STEP", value_parser = time, allow_hyphen_values = true)]
    pub(crate) step: f64,
    /// Relative to this body instead of the barycentre.
    #[arg(long, value_name = "BODY")]
    pub(crate) about: Option<String>,
    /// Axes of the coordinates.
    #[arg(long, value_enum, default_value_t = Axes::Ecliptic)]
    pub(crate) axes: Axes,
    /// Print JSON.
    #[arg(long)]
    pub(crate) json: bool,
    #[command(flatten)]
    pub(crate) today: Today,
}

/// A stretch of model time.
#[derive(Debug, Clone, Copy, Args)]
pub(crate) struct Between {
    /// First instant, from the scenario's start: seconds, or with a unit ("-3 d", "1.5 yr").
    #[arg(long, value_name = "TIME", value_parser = time, allow_hyphen_values = true)]
    pub(crate) from: f64,
    /// Last instant, from the scenario's start.
    #[arg(long, value_name = "TIME", value_parser = time, allow_hyphen_values = true)]
    pub(crate) to: f64,
}

/// Axes of coordinates.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub(crate) enum Axes {
    /// The ecliptic and equinox of J2000.
    Ecliptic,
    /// Those of the International Celestial Reference System: the equator of J2000.
    Icrs,
}

/// Which events to print.
#[derive(Debug, Args)]
pub(crate) struct Events {
    /// Scenario file.
    #[arg(value_name = "SCENARIO")]
    pub(crate) scenario: PathBuf,
    #[command(flatten)]
    pub(crate) between: Between,
    /// Only this kind; may be given several times.
    #[arg(long, value_name = "KIND", action = ArgAction::Append,
          value_parser = PossibleValuesParser::new(EventKind::ALL.map(EventKind::name)))]
    pub(crate) kind: Vec<String>,
    /// Only what this body takes part in; may be given several times.
    #[arg(long, value_name = "BODY", action = ArgAction::Append)]
    pub(crate) body: Vec<String>,
    /// Print JSON.
    #[arg(long)]
    pub(crate) json: bool,
    #[command(flatten)]
    pub(crate) today: Today,
}

/// What to aim.
#[derive(Debug, Args)]
pub(crate) struct Aim {
    /// Scenario file.
    #[arg(value_name = "SCENARIO")]
    pub(crate) scenario: PathBuf,
    /// Write the scenario with the numbers filled in to this file [default: standard output].
    #[arg(short, long, value_name = "FILE")]
    pub(crate) output: Option<PathBuf>,
    #[command(flatten)]
    pub(crate) today: Today,
}

/// What to take the fingerprint of.
#[derive(Debug, Args)]
pub(crate) struct Fingerprint {
    /// Scenario file.
    #[arg(value_name = "SCENARIO")]
    pub(crate) scenario: PathBuf,
    #[command(flatten)]
    pub(crate) today: Today,
}

/// Seconds from a bare number or from a quantity with a unit.
fn time(text: &str) -> Result<f64, String> {
    let seconds = match text.trim().parse::<f64>() {
        Ok(seconds) => seconds,
        Err(_) => Span::parse(text).map_err(|error| error.to_string())?.s(),
    };
    if seconds.is_finite() { Ok(seconds) } else { Err(format!("{text} is no time")) }
}

/// The middle of a day, in seconds since 1970 without leap seconds.
fn day(text: &str) -> Result<f64, String> {
    const SECONDS_OF_1970_BEFORE_J2000: f64 = 946_728_000.0;
    let noon = Epoch::parse_utc(&format!("{text}T12:00:00Z")).map_err(|error| error.to_string())?;
    // TDB is about a minute ahead of UTC: too little to leave the day.
    Ok(noon.tdb_s() + SECONDS_OF_1970_BEFORE_J2000)
}

#[cfg(test)]
mod tests {
    use clap::CommandFactory as _;

    use super::*;

    #[test]
    fn the_command_line_holds_together() {
        Cli::command().debug_assert();
    }

    #[test]
    fn times_are_seconds_or_quantities_and_may_be_negative() {
        assert_eq!(time("-86400"), Ok(-86_400.0));
        assert_eq!(time("2 d"), Ok(172_800.0));
        assert!(time("2 km").is_err());
        assert!(time("inf").is_err());
        assert!(time("NaN").is_err());
        let cli = Cli::try_parse_from([
            "fallaround",
            "trace",
            "x.toml",
            "--from",
            "-1.5 d",
            "--to",
            "-3",
            "--step",
            "1 h",
        ]);
        let Some(Command::Trace(trace)) = cli.unwrap().command else { panic!("not a trace") };
        assert_eq!((trace.between.from, trace.between.to, trace.step), (-129_600.0, -3.0, 3600.0));
    }

    #[test]
    fn a_day_is_a_day() {
        // From `date -u -d 2026-03-01T12:00:00Z +%s`.
        assert!((day("2026-03-01").unwrap() - 1_772_366_400.0).abs() < 120.0);
        assert!(day("2026-13-01").is_err());
    }
}
