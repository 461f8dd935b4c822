//! The work in wasm: compiled as the app is, and run by Node.

use std::path::Path;
use std::process::Command;

use fallaround_bench_work::Outcome;
use serde_json::Value;

use crate::Measured;

/// The crate that Node runs.
const CRATE: &str = "fallaround-bench-work";

/// Does all the work in wasm, each so many times.
///
/// # Errors
/// Why there is nothing: no Node, or no compiler.
pub(crate) fn all(folder: &Path, target: &Path, times: usize) -> Result<Vec<Measured>, String> {
    if Command::new("node").arg("--version").output().is_err() {
        return Err(
            "there is no `node` (https://nodejs.org, or your distribution's package `nodejs`)".to_owned()
        );
    }
    let module = target.join("wasm");
    let cargo = std::env::var_os("CARGO").unwrap_or_else(|| "cargo".into());
    let built = Command::new(cargo)
        .current_dir(folder)
        .args(["run", "--release", "--locked", "-p", "fallaround", "--", "module", CRATE, "-o"])
        .arg(&module)
        .status()
        .map_err(|e| format!("cargo can't be started: {e}"))?;
    if !built.success() {
        return Err("the work could not be compiled for wasm; what is said above is the reason".to_owned());
    }
    let output = Command::new("node")
        .arg(folder.join("run.js"))
        .arg(module.join(format!("{CRATE}.js")))
        .arg(times.to_string())
        .output()
        .map_err(|e| format!("node can't be started: {e}"))?;
    if !output.status.success() {
        return Err(format!("node failed: {}", String::from_utf8_lossy(&output.stderr)));
    }
    let answers: Vec<Value> =
        serde_json::from_slice(&output.stdout).map_err(|e| format!("node's answer: {e}"))?;
    answers.iter().map(|answer| measured(answer).ok_or_else(|| format!("node's answer: {answer}"))).collect()
}

fn measured(answer: &Value) -> Option<Measured> {
    let seconds = numbers(&answer["seconds"])?.into_iter().fold(f64::INFINITY, f64::min);
    let mut outcome = Outcome::of(&numbers(&answer["outcome"])?)?;
    outcome.pos.extend(numbers(&answer["told"])?);
    Some(Measured { seconds, outcome })
}

fn numbers(array: &Value) -> Option<Vec<f64>> {
    array.as_array()?.iter().map(Value::as_f64).collect()
}
