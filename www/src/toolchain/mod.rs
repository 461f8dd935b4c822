//! The compiler for wasm32: found, or obtained.
//!
//! In this order: the toolchain at hand has the target already; `rustup` adds it; on Debian, the distribution's own
//! compiler for the web is unpacked into a cache of the user's, without root. Only then is it given up, with words
//! that say what to install.

use std::path::{Path, PathBuf};
use std::process::Command;

use anyhow::{Context as _, Result};

use crate::child;

mod debian;

/// The target that browsers run.
pub(crate) const TARGET: &str = "wasm32-unknown-unknown";

/// simd128 doubles the speed of long loops; every current browser has it.
const FLAGS: &str = "-C target-feature=+simd128";

/// A way to compile for wasm32.
#[derive(Debug)]
pub(crate) enum Toolchain {
    /// The one at hand, with the target installed.
    AtHand,
    /// A compiler apart from the one at hand, whose standard library is built from its sources.
    Apart {
        /// The compiler.
        rustc: PathBuf,
        /// The linker.
        linker: PathBuf,
    },
}

/// Finds a toolchain, or obtains one.
///
/// # Errors
/// When there is none and none can be had; the message says what was tried and what to do.
pub(crate) fn obtain() -> Result<Toolchain> {
    if installed() {
        return Ok(Toolchain::AtHand);
    }
    // Unpacked at an earlier start: nothing is asked of the network again.
    if let Ok((rustc, linker)) = debian::unpacked() {
        return Ok(Toolchain::Apart { rustc, linker });
    }
    eprintln!("The {TARGET} target is needed to build the app, and is not installed.");
    let mut tried = vec!["it is not among the installed targets".to_owned()];
    match add_by_rustup() {
        Ok(()) => return Ok(Toolchain::AtHand),
        Err(error) => tried.push(format!("{error:#}")),
    }
    match debian::obtain() {
        Ok((rustc, linker)) => return Ok(Toolchain::Apart { rustc, linker }),
        Err(error) => tried.push(format!("Debian's compiler for the web: {error:#}")),
    }
    anyhow::bail!(
        "no compiler for {TARGET}:\n  - {}\nConnect to the network and start this again, or install the target yourself \
         (`rustup target add {TARGET}`, or your distribution's package of the Rust standard library for wasm32)",
        tried.join("\n  - ")
    )
}

impl Toolchain {
    /// Cargo, ready to build for wasm32; the caller adds the command and its arguments.
    pub(crate) fn cargo(&self) -> Command {
        let mut cargo = clean("cargo");
        cargo.env("CARGO_TARGET_WASM32_UNKNOWN_UNKNOWN_RUSTFLAGS", FLAGS);
        if let Self::Apart { rustc, linker } = self {
            cargo
                .env("RUSTC", rustc)
                // Lets a released compiler build its own standard library.
                .env("RUSTC_BOOTSTRAP", "1")
                .env("CARGO_TARGET_WASM32_UNKNOWN_UNKNOWN_LINKER", linker);
        }
        cargo
    }

    /// What is to be added to `cargo build` and `cargo check`.
    pub(crate) const fn arguments(&self) -> &'static [&'static str] {
        match self {
            Self::AtHand => &["--target", TARGET],
            Self::Apart { .. } => &["--target", TARGET, "-Zbuild-std=std,panic_abort"],
        }
    }
}

/// A program of the toolchain at hand, without what the cargo that started us left in the environment: it would
/// make the inner build differ from start to start.
pub(crate) fn clean(program: &str) -> Command {
    let mut command = Command::new(program);
    for (name, _) in std::env::vars_os() {
        let Some(name) = name.to_str() else { continue };
        if leftover(name) {
            command.env_remove(name);
        }
    }
    command
}

/// Whether a variable must not reach an inner cargo.
fn leftover(name: &str) -> bool {
    const KEPT: [&str; 5] = [
        "CARGO_HOME",
        "CARGO_BUILD_JOBS",
        "CARGO_NET_OFFLINE",
        "RUSTUP_HOME",
        // Which toolchain is the one at hand.
        "RUSTUP_TOOLCHAIN",
    ];
    const KEPT_STARTS: [&str; 4] = ["CARGO_HTTP_", "CARGO_REGISTR", "CARGO_TERM_", "RUSTUP_DIST_"];
    let ours = name.starts_with("CARGO") || name.starts_with("RUST") || name == "LD_LIBRARY_PATH";
    ours && !KEPT.contains(&name) && !KEPT_STARTS.iter().any(|start| name.starts_with(start))
}

/// Whether the toolchain at hand has the target's standard library.
fn installed() -> bool {
    let folder = child::answer(clean("rustc").args(["--print", "target-libdir", "--target", TARGET]));
    folder.is_some_and(|folder| {
        std::fs::read_dir(Path::new(&folder)).is_ok_and(|files| {
            files.flatten().any(|file| file.file_name().to_string_lossy().starts_with("libstd-"))
        })
    })
}

fn add_by_rustup() -> Result<()> {
    if child::answer(clean("rustup").arg("--version")).is_none() {
        anyhow::bail!("there is no rustup that could add it");
    }
    eprintln!("Adding it: rustup target add {TARGET}");
    let status = child::run(clean("rustup").args(["target", "add", TARGET])).context("rustup")?;
    if !status.success() || !installed() {
        anyhow::bail!("`rustup target add {TARGET}` failed (no network, or its server is out of reach)");
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_inner_cargo_inherits_only_what_is_the_persons_own() {
        for name in ["CARGO", "CARGO_MANIFEST_DIR", "CARGO_PKG_NAME", "RUSTFLAGS", "RUSTC", "LD_LIBRARY_PATH"]
        {
            assert!(leftover(name), "{name} reaches the inner build");
        }
        for name in
            ["CARGO_HOME", "RUSTUP_HOME", "CARGO_HTTP_PROXY", "CARGO_REGISTRIES_X_INDEX", "PATH", "HOME"]
        {
            assert!(!leftover(name), "{name} is lost");
        }
    }
}
