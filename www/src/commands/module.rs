//! `module`: a crate of the project for Node, compiled as the app is. For benches: it measures what the app would run.

use std::process::ExitCode;

use anyhow::Result;

use crate::bundle::{self, Host};
use crate::{cli, root, toolchain};

/// Compiles and binds.
///
/// # Errors
/// When there is no compiler for it, or the crate doesn't compile.
pub(crate) fn command(options: &cli::Module) -> Result<ExitCode> {
    let root = root::find()?;
    let toolchain = toolchain::obtain()?;
    let module = bundle::compile(&root, &toolchain, &options.package)?;
    bundle::bind(&module, &options.output, &options.package, Host::Node)?;
    Ok(ExitCode::SUCCESS)
}
