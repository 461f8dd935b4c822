//! The app as browsers take it: compiled for wasm32, and bound to JavaScript. Other crates go the same way, for benches in Node.

use std::fs;
use std::path::{Path, PathBuf};

use anyhow::{Context as _, Result, ensure};
use wasm_bindgen_cli_support::Bindgen;

use crate::child;
use crate::toolchain::{TARGET, Toolchain};

/// The crate that is the app.
pub(crate) const APP: &str = "fallaround-app";

/// What loads the module.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Host {
    /// A page, or its worker.
    Browser,
    /// Node, by `require`.
    Node,
}

/// Compiles a crate of the workspace and gives the module's path. Cargo sees for itself whether there is anything to do.
///
/// # Errors
/// When cargo fails; it has said why.
pub(crate) fn compile(root: &Path, toolchain: &Toolchain, package: &str) -> Result<PathBuf> {
    let target = target_dir(root);
    let mut cargo = toolchain.cargo();
    cargo
        .current_dir(root)
        .args(["build", "--locked", "--profile", "web", "-p", package])
        .args(toolchain.arguments())
        .arg("--target-dir")
        .arg(&target);
    let status = child::run(&mut cargo)?;
    ensure!(status.success(), "{package} could not be compiled; what cargo says above is the reason");
    Ok(target.join(TARGET).join("web").join(format!("{}.wasm", package.replace('-', "_"))))
}

/// A target folder of its own: its flags differ, and sharing one would rebuild everything at each turn.
pub(crate) fn target_dir(root: &Path) -> PathBuf {
    root.join("target").join("wasm")
}

/// Writes `NAME.js` and `NAME_bg.wasm` into a folder.
///
/// # Errors
/// When the module isn't what wasm-bindgen of this version expects.
pub(crate) fn bind(module: &Path, folder: &Path, name: &str, host: Host) -> Result<()> {
    fs::create_dir_all(folder).with_context(|| format!("{} can't be made", folder.display()))?;
    let mut bindgen = Bindgen::new();
    bindgen.input_path(module);
    let chosen = match host {
        Host::Browser => bindgen.web(true),
        Host::Node => bindgen.nodejs(true),
    };
    chosen
        .and_then(|bindgen| {
            bindgen
                .typescript(false)
                // Profilers read names; an audience's browser needn't load them.
                .remove_name_section(host == Host::Browser)
                .remove_producers_section(true)
                .out_name(name)
                .generate(folder)
        })
        .with_context(|| format!("{} can't be bound to JavaScript", module.display()))
}
