//! This engine natively, this engine in wasm, and a general-purpose library, at the same work in one go.
//!
//! `cargo bench -p fallaround-tests --bench side_by_side` prints the table, and writes it and the plot of the energy error into
//! `tests/bench/`. It takes about five minutes, and more the first time: then it compiles the work for wasm and fetches SciPy from
//! PyPI. Where Node or Python are missing it says so and does the rest. Times are processor times of one thread, the fastest
//! of several, so that other work on the machine disturbs them little.

mod dop853;
mod node;
mod plot;
mod table;

use std::path::Path;

use cpu_time::ThreadTime;
use fallaround_bench_work::{Outcome, Work, run, starts, swarm};

/// What one side needed, and what came of it.
#[derive(Debug, Clone, Default)]
struct Measured {
    seconds: f64,
    outcome: Outcome,
}

/// All that is known about a piece of work.
#[derive(Debug)]
struct Row {
    work: Work,
    native: Measured,
    /// See [`error_of`].
    error: f64,
    wasm: Option<Measured>,
    /// Whether it gave the same bits natively and in wasm.
    same_bits: Option<bool>,
    dop853: Option<dop853::Answer>,
}

/// How often each work is done: the fastest counts.
const TIMES: usize = 4;

fn main() -> Result<(), String> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("bench");
    let target = folder.join("../../target/bench");
    std::fs::create_dir_all(&target).map_err(|e| format!("{}: {e}", target.display()))?;
    let only_plot = std::env::args().any(|argument| argument == "--plot");
    if !only_plot {
        measure(&folder, &target)?;
    }
    eprintln!("Plotting the energy error of several starts.");
    plot::draw(&folder.join("energy-error.svg"))
}

fn measure(folder: &Path, target: &Path) -> Result<(), String> {
    eprintln!("Natively.");
    let mut rows: Vec<Row> = Work::ALL.into_iter().map(natively).collect();
    eprintln!("In wasm.");
    match node::all(folder, target, TIMES) {
        Ok(all) => {
            for (row, wasm) in rows.iter_mut().zip(all) {
                row.same_bits = Some(bits(&row.native.outcome) == bits(&wasm.outcome));
                row.wasm = Some(wasm);
            }
        }
        Err(why) => eprintln!("note: nothing in wasm: {why}"),
    }
    eprintln!("By SciPy's DOP853.");
    match dop853::all(folder, target) {
        Ok(answers) => {
            for row in &mut rows {
                row.dop853 = answers.iter().find(|answer| answer.work == row.work).cloned();
            }
        }
        Err(why) => eprintln!("note: nothing by DOP853: {why}"),
    }
    let text = table::text(&rows);
    table::print(&text);
    table::keep(&folder.join("README.md"), &text)
}

fn bits(outcome: &Outcome) -> Vec<u64> {
    outcome.flat().iter().map(|number| number.to_bits()).collect()
}

/// Does a work natively, and once more by half the steps.
fn natively(work: Work) -> Row {
    let mut setting = work.prepare();
    let until = work.until();
    let mut native = Measured { seconds: f64::INFINITY, outcome: Outcome::default() };
    for _ in 0..TIMES {
        let start = ThreadTime::now();
        let outcome = work.run(&mut setting, until, 1.0);
        native = Measured { seconds: native.seconds.min(start.elapsed().as_secs_f64()), outcome };
    }
    native.outcome.pos.extend(setting.told(until));
    let error = error_of(work, &native.outcome.pos, until);
    Row { work, native, error, wasm: None, same_bits: None, dop853: None }
}

/// The largest error of a place at some time, as a part of the distance from the first body: against steps of half the length
/// of the Gauss-Radau method, whatever the method.
fn error_of(work: Work, pos: &[f64], until: f64) -> f64 {
    let exact = match work {
        Work::Swarm => run::gauss_radau(&swarm::as_bodies(swarm::TOLD), until, 0.5).pos,
        Work::LongPlanets => run::gauss_radau(&starts::planets(), until, 0.5).pos,
        _ => work.run(&mut work.prepare(), until, 0.5).pos,
    };
    let exact = relative(&exact);
    // Of a swarm, places are those of tracers alone, and relative already.
    let got = if work == Work::Swarm { pos.to_vec() } else { relative(pos) };
    let exact = &exact[exact.len() - got.len()..];
    let distance = |a: &[f64], b: &[f64]| a.iter().zip(b).map(|(a, b)| (a - b) * (a - b)).sum::<f64>().sqrt();
    let pairs = got.chunks_exact(3).zip(exact.chunks_exact(3));
    pairs.map(|(got, want)| distance(got, want) / distance(want, &[0.0; 3])).fold(0.0, f64::max)
}

/// Places of all but the first body, relative to it.
fn relative(pos: &[f64]) -> Vec<f64> {
    pos.iter().enumerate().skip(3).map(|(i, x)| x - pos[i % 3]).collect()
}
