//! The command line.

use clap::{Args, Parser, Subcommand};

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
