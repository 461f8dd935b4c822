//! The work by SciPy's DOP853, in a virtual environment of its own below `target`.

use std::io::Write as _;
use std::path::Path;
use std::process::{Command, Stdio};

use fallaround_bench_work::{Work, run, starts, swarm};
use fallaround_core::constants::{AU_M, YEAR_S};
use fallaround_core::initial::InitialState;
use serde_json::{Value, json};

/// What came of a work.
#[derive(Debug, Clone)]
pub(crate) struct Answer {
    pub(crate) work: Work,
    /// Seconds of what was done, times what is left out of the work.
    pub(crate) seconds: f64,
    /// How many times that was.
    pub(crate) scale: f64,
    /// Largest relative error of the energy.
    pub(crate) energy_error: f64,
    /// See [`crate::error_of`], where it stopped.
    pub(crate) error: f64,
}

/// What it is given: not all of what takes it long.
struct Task {
    work: Work,
    initial: InitialState,
    until: f64,
    scale: f64,
}

/// Tracers that it is given, and for how much of the time.
const TRACERS: usize = 1000;

fn tasks() -> Vec<Task> {
    let task = |work: Work, initial, part: f64, fewer: f64| Task {
        work,
        initial,
        until: work.until() / part,
        scale: part * fewer,
    };
    vec![
        task(Work::Planets, starts::planets(), 10.0, 1.0),
        task(Work::LongPlanets, starts::planets(), 10.0, 1.0),
        task(Work::Moon, starts::planets_and_moon(), 4.0, 1.0),
        task(Work::Pythagorean, starts::pythagorean(), 1.0, 1.0),
        task(Work::Comet, starts::comet(), 1.0, 1.0),
        task(Work::Swarm, swarm::as_bodies(TRACERS), 10.0, swarm::TRACERS as f64 / TRACERS as f64),
    ]
}

/// Does all the work.
///
/// # Errors
/// Why there is nothing: no Python, or no SciPy to be had.
pub(crate) fn all(folder: &Path, target: &Path) -> Result<Vec<Answer>, String> {
    let python = environment(target)?;
    let tasks = tasks();
    // The same for both methods of ours: done once.
    let asked: Vec<Value> =
        tasks.iter().filter(|task| task.work != Work::LongPlanets).map(question).collect();
    let mut child = Command::new(python)
        .arg(folder.join("dop853.py"))
        // One thread, as ours.
        .envs(["OMP_NUM_THREADS", "OPENBLAS_NUM_THREADS", "MKL_NUM_THREADS"].map(|name| (name, "1")))
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .spawn()
        .map_err(|e| format!("python can't be started: {e}"))?;
    let text = Value::from(asked).to_string();
    child
        .stdin
        .take()
        .map_or(Ok(()), |mut stdin| stdin.write_all(text.as_bytes()))
        .map_err(|e| e.to_string())?;
    let output = child.wait_with_output().map_err(|e| e.to_string())?;
    if !output.status.success() {
        return Err("the script failed; what it says above is the reason".to_owned());
    }
    let mut answers: Vec<Value> =
        serde_json::from_slice(&output.stdout).map_err(|e| format!("the script's answer: {e}"))?;
    answers.insert(1, answers[0].clone());
    let read = |(task, answer): (&Task, &Value)| {
        read(task, answer).ok_or_else(|| format!("the script's answer: {answer}"))
    };
    tasks.iter().zip(&answers).map(read).collect()
}

fn question(task: &Task) -> Value {
    let (pos, vel) = run::states(&task.initial);
    let gms: Vec<f64> = task.initial.bodies.iter().map(|body| body.gm_m3_s2).collect();
    let (length, time) = if task.work == Work::Pythagorean { (1.0, 1.0) } else { (AU_M, YEAR_S) };
    json!({ "gms": gms, "pos": pos, "vel": vel, "until": task.until, "length": length, "time": time, "times": 2 })
}

fn read(task: &Task, answer: &Value) -> Option<Answer> {
    let mut pos: Vec<f64> = answer["pos"].as_array()?.iter().map(Value::as_f64).collect::<Option<_>>()?;
    if task.work == Work::Swarm {
        // Of the first tracers, relative to the Sun.
        let first = starts::planets().bodies.len() - 1;
        pos = crate::relative(&pos)[3 * first..3 * (first + swarm::TOLD)].to_vec();
    }
    Some(Answer {
        work: task.work,
        seconds: answer["seconds"].as_f64()? * task.scale,
        scale: task.scale,
        energy_error: answer["energy_error"].as_f64()?,
        error: crate::error_of(task.work, &pos, task.until),
    })
}

/// Python with SciPy: made at the first run.
fn environment(target: &Path) -> Result<std::path::PathBuf, String> {
    let venv = target.join("venv");
    let bin = venv.join(if cfg!(windows) { "Scripts" } else { "bin" });
    let python = bin.join("python");
    let works = |python: &Path| {
        let asked =
            Command::new(python).args(["-c", "import scipy.integrate"]).stderr(Stdio::null()).status();
        asked.is_ok_and(|status| status.success())
    };
    if works(&python) {
        return Ok(python);
    }
    let system =
        ["python3", "python"].into_iter().find(|name| Command::new(name).arg("--version").output().is_ok());
    let system =
        system.ok_or("there is no Python 3 (https://www.python.org, or your distribution's package)")?;
    eprintln!("Getting SciPy from PyPI into {}.", venv.display());
    let done = |command: &mut Command| command.status().is_ok_and(|status| status.success());
    if !done(Command::new(system).args(["-m", "venv"]).arg(&venv)) {
        return Err("no virtual environment could be made (on Debian, the package `python3-venv` is needed)"
            .to_owned());
    }
    let install = ["-m", "pip", "install", "--quiet", "--disable-pip-version-check", "numpy", "scipy"];
    if !done(Command::new(&python).args(install)) || !works(&python) {
        return Err("SciPy could not be fetched from PyPI; is the network up?".to_owned());
    }
    Ok(python)
}
