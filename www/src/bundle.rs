//! The app as browsers take it: compiled for wasm32, and bound to JavaScript.

use std::fs;
use std::path::{Path, PathBuf};

use anyhow::{Context as _, Result, ensure};
use wasm_bindgen_cli_support::Bindgen;

use crate::child;
use crate::toolchain::{TARGET, Toolchain};

/// Compiles the app and gives the module's path. Cargo sees for itself whether there is anything to do.
///
/// # Errors
/// When cargo fails; it has said why.
pub(crate) fn compile(root: &Path, toolchain: &Toolchain) -> Result<PathBuf> {
    let target = target_dir(root);
    let mut cargo = toolchain.cargo();
    cargo
        .current_dir(root)
        .args(["build", "--locked", "--profile", "web", "-p", "fallaround-app"])
        .args(toolchain.arguments())
        .arg("--target-dir")
        .arg(&target);
    let status = child::run(&mut cargo)?;
    ensure!(status.success(), "the app could not be compiled; what cargo says above is the reason");
    Ok(target.join(TARGET).join("web").join("fallaround_app.wasm"))
}

/// A target folder of its own: its flags differ, and sharing one would rebuild everything at each turn.
pub(crate) fn target_dir(root: &Path) -> PathBuf {
    root.join("target").join("wasm")
}

/// Writes `app.js` and `app_bg.wasm` into a folder.
///
/// # Errors
/// When the module isn't what wasm-bindgen of this version expects.
pub(crate) fn bind(module: &Path, folder: &Path) -> Result<()> {
    fs::create_dir_all(folder).with_context(|| format!("{} can't be made", folder.display()))?;
    let mut bindgen = Bindgen::new();
    bindgen
        .input_path(module)
        .web(true)
        .and_then(|bindgen| {
            bindgen
                .typescript(false)
                .remove_name_section(true)
                .remove_producers_section(true)
                .out_name("app")
                .generate(folder)
        })
        .with_context(|| format!("{} can't be bound to JavaScript", module.display()))
}
