//! `test`: sets up what is missing, and runs every test there is.

use std::io::{BufRead as _, BufReader};
use std::path::Path;
use std::process::{Command, ExitCode, Stdio};
use std::time::Instant;

use anyhow::{Context as _, Result, bail, ensure};

use crate::bundle;
use crate::child::{self, Running};
use crate::chromium;
use crate::root;
use crate::site;
use crate::toolchain::{self, Toolchain};

/// How many tests passed and failed; a step that has none counts as one.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
struct Count {
    passed: u64,
    failed: u64,
}

/// A step's name and what it does in the project's folder.
type Step = (&'static str, fn(&Path) -> Result<Count>);

/// What came of a step.
struct Outcome {
    name: &'static str,
    seconds: f64,
    count: Count,
}

/// Runs all steps, one after another, each to its end; exit code 1 when one failed.
///
/// # Errors
/// When the project's folder isn't found.
pub(crate) fn command() -> Result<ExitCode> {
    let root = root::find()?;
    let steps: [Step; 7] = [
        ("formatting", formatting),
        ("lints", lints),
        ("lints of the app for wasm32", lints_for_wasm),
        ("tests", tests),
        ("documentation", documentation),
        ("the app is built", site_is_built),
        ("tests in Chromium", browser_tests),
    ];
    let mut outcomes = Vec::new();
    for (name, step) in steps {
        println!("\n== {name} ==");
        let started = Instant::now();
        let count = step(&root).unwrap_or_else(|error| {
            eprintln!("error: {error:#}");
            Count { passed: 0, failed: 1 }
        });
        outcomes.push(Outcome { name, seconds: started.elapsed().as_secs_f64(), count });
    }
    Ok(summary(&outcomes))
}

fn summary(outcomes: &[Outcome]) -> ExitCode {
    println!("\n== summary ==");
    let mut total = Count::default();
    for Outcome { name, seconds, count } in outcomes {
        let word = if count.failed == 0 { "passed" } else { "FAILED" };
        println!("{word}  {seconds:>7.1} s  {name} ({} of {})", count.passed, count.passed + count.failed);
        total.passed += count.passed;
        total.failed += count.failed;
    }
    println!("{} passed, {} failed", total.passed, total.failed);
    if total.failed == 0 { ExitCode::SUCCESS } else { ExitCode::FAILURE }
}

/// The cargo at hand, in the project's folder.
fn cargo(root: &Path) -> Command {
    let mut cargo = toolchain::clean("cargo");
    cargo.current_dir(root);
    cargo
}

/// Runs a command that counts as one test.
fn one(command: &mut Command, remedy: &str) -> Result<Count> {
    let status = child::run(command)?;
    ensure!(status.success(), "{remedy}");
    Ok(Count { passed: 1, failed: 0 })
}

fn formatting(root: &Path) -> Result<Count> {
    one(
        cargo(root).args(["fmt", "--all", "--check"]),
        "`cargo fmt --all` puts it right (`rustup component add rustfmt` brings it)",
    )
}

fn lints(root: &Path) -> Result<Count> {
    // In the release profile, so that macros and build scripts are those that the tests use.
    let arguments =
        ["clippy", "--release", "--locked", "--workspace", "--all-targets", "--", "-D", "warnings"];
    one(cargo(root).args(arguments), "see above (`rustup component add clippy` brings the lints)")
}

/// What of the app exists for wasm32 alone. Clippy belongs to one compiler: where another one compiles the app, that
/// one's own warnings must be enough; all that compiles natively has been through clippy by then.
fn lints_for_wasm(root: &Path) -> Result<Count> {
    let toolchain = toolchain::obtain()?;
    let mut cargo = toolchain.cargo();
    cargo.current_dir(root);
    match toolchain {
        Toolchain::AtHand => cargo.arg("clippy"),
        Toolchain::Apart { .. } => {
            eprintln!("note: clippy can't use this compiler; its own warnings are checked");
            cargo.args(["check", "-Zwarnings", "--config", "build.warnings='deny'"])
        }
    };
    cargo
        .args(["--profile", "web", "--locked", "-p", "fallaround-app"])
        .args(toolchain.arguments())
        .arg("--target-dir")
        .arg(bundle::target_dir(root));
    if matches!(toolchain, Toolchain::AtHand) {
        cargo.args(["--", "-D", "warnings"]);
    }
    one(&mut cargo, "see above")
}

fn tests(root: &Path) -> Result<Count> {
    counted(cargo(root).args(["test", "--release", "--locked", "--workspace", "--no-fail-fast"]))
}

fn documentation(root: &Path) -> Result<Count> {
    let arguments =
        ["doc", "--release", "--locked", "--no-deps", "-p", "fallaround-core", "-p", "fallaround-app"];
    one(cargo(root).args(arguments).env("RUSTDOCFLAGS", "-D warnings"), "see above")
}

fn site_is_built(root: &Path) -> Result<Count> {
    let site = site::build(root)?;
    eprintln!("version {} in {}", site.version, site.folder.display());
    Ok(Count { passed: 1, failed: 0 })
}

fn browser_tests(root: &Path) -> Result<Count> {
    let chromium = chromium::obtain()?;
    let program = std::env::current_exe().context("this program's own path")?;
    counted(
        cargo(root)
            .args(["test", "--release", "--locked", "-p", "fallaround-tests", "--test", "browser"])
            // At real frame rate: two at once would take each other's time.
            .args(["--", "--test-threads", "1", "--nocapture"])
            .env("FALLAROUND_PROGRAM", program)
            .env("CHROME", &chromium.browser)
            .env("CHROMEDRIVER", &chromium.driver),
    )
}

/// Runs Rust's test programs, shows what they write, and adds up what they count.
fn counted(command: &mut Command) -> Result<Count> {
    let mut running = Running::start(command.stdout(Stdio::piped()))?;
    let output = running.take_stdout().context("no output to read")?;
    let mut count = Count::default();
    for line in BufReader::new(output).lines() {
        let line = line.context("the tests' output")?;
        println!("{line}");
        if let Some(more) = result_line(&line) {
            count.passed += more.passed;
            count.failed += more.failed;
        }
    }
    let status = running.wait()?;
    if !status.success() && count.failed == 0 {
        // It didn't come to the tests, or a test program died.
        count.failed = 1;
    }
    if status.success() && count.passed == 0 {
        bail!("no test ran");
    }
    Ok(count)
}

/// Reads `test result: ok. 3 passed; 0 failed; …`.
fn result_line(line: &str) -> Option<Count> {
    let rest = line.strip_prefix("test result: ")?;
    let number = |word: &str| {
        let before = rest.split(word).next()?.trim_end();
        before.rsplit(' ').next()?.parse::<u64>().ok()
    };
    Some(Count { passed: number("passed")?, failed: number("failed")? })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_closing_lines_of_test_programs_are_read() {
        let ok =
            "test result: ok. 12 passed; 0 failed; 0 ignored; 0 measured; 0 filtered out; finished in 0.01s";
        assert_eq!(result_line(ok), Some(Count { passed: 12, failed: 0 }));
        let bad = "test result: FAILED. 3 passed; 2 failed; 0 ignored; 0 measured; 0 filtered out; finished in 1.20s";
        assert_eq!(result_line(bad), Some(Count { passed: 3, failed: 2 }));
        assert_eq!(result_line("test clock::tests::a ... ok"), None);
    }
}
