//! The table: what was measured, in words and numbers, kept in `tests/bench/README.md` between two marks.

use std::fmt::Write as _;
use std::path::Path;
use std::time::{SystemTime, UNIX_EPOCH};

use fallaround_bench_work::Work;
use fallaround_core::constants::DAY_S;
use fallaround_core::time::Epoch;
use fallaround_core::units::number::grouped;

use crate::Row;

/// The lines of the README between which the table stands.
const MARKS: [&str; 2] = ["<!-- table: begin -->\n", "<!-- table: end -->\n"];

fn name(work: Work) -> &'static str {
    match work {
        Work::Planets => "Sun and 8 planets, 1,000 years, Gauss-Radau",
        Work::LongPlanets => "the same, Wisdom-Holman, 4 d",
        Work::Moon => "Sun, 8 planets and Moon, 100 years, Gauss-Radau",
        Work::Pythagorean => "Pythagorean three bodies to t = 70, Gauss-Radau",
        Work::Comet => "comet, e = 0.9995, 100 orbits, Gauss-Radau",
        Work::Swarm => "9 bodies and 10,000 tracers, 10 years",
    }
}

/// The table and how it stands to the goals, in Markdown.
pub(crate) fn text(rows: &[Row]) -> String {
    let mut text = format!("Measured on {}.\n\n", today());
    text += "| work | steps | native, s | wasm, s | DOP853, s | DOP853 / native | wasm / native | same bits | error | of DOP853 | energy error | of DOP853 |\n";
    text += "| --- | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- | --- |\n";
    for row in rows {
        let native = &row.native;
        let wasm = row.wasm.as_ref();
        let other = row.dop853.as_ref();
        let cell = |number: Option<String>| number.unwrap_or_else(|| "-".to_owned());
        let energy =
            |error: f64| if row.work == Work::Swarm { "-".to_owned() } else { format!("{error:.1e}") };
        let cells = [
            name(row.work).to_owned(),
            grouped(native.outcome.steps),
            format!("{:.3}", native.seconds),
            cell(wasm.map(|wasm| format!("{:.3}", wasm.seconds))),
            cell(other.map(|other| {
                let scaled = if other.scale > 1.0 { format!(" ({} ×)", other.scale) } else { String::new() };
                format!("{:.1}{scaled}", other.seconds)
            })),
            cell(other.map(|other| format!("{:.0}", other.seconds / native.seconds))),
            cell(wasm.map(|wasm| format!("{:.2}", wasm.seconds / native.seconds))),
            cell(row.same_bits.map(|same| if same { "yes" } else { "NO" }.to_owned())),
            format!("{:.1e}", row.error),
            cell(other.map(|other| format!("{:.1e}", other.error))),
            energy(native.outcome.energy_error),
            cell(other.map(|other| energy(other.energy_error))),
        ];
        // Writing to a string does not fail.
        writeln!(text, "| {} |", cells.join(" | ")).ok();
    }
    text + "\n" + &goals(rows)
}

/// How the goals are met.
fn goals(rows: &[Row]) -> String {
    let find = |work: Work| rows.iter().find(|row| row.work == work);
    let faster = |row: &Row| row.dop853.as_ref().map(|other| other.seconds / row.native.seconds);
    let mut lines = Vec::new();
    let mut line = |goal: &str, got: Option<f64>, met: bool, shown: String| {
        let word = if got.is_none() {
            "not measured"
        } else if met {
            "met"
        } else {
            "missed"
        };
        lines.push(format!("- {goal}: {shown}, {word}.\n"));
    };
    if let Some(row) = find(Work::Planets) {
        let times = faster(row);
        line(
            "Gauss-Radau 25 times as fast as DOP853 at no larger error",
            times,
            times.is_some_and(|times| times >= 25.0)
                && row
                    .dop853
                    .as_ref()
                    .is_some_and(|other| row.native.outcome.energy_error <= other.energy_error),
            times.map_or("-".to_owned(), |times| format!("{times:.0} times")),
        );
        let energy = row.native.outcome.energy_error;
        line(
            "its energy error in 1,000 years below 4e-15",
            Some(energy),
            energy < 4e-15,
            format!("{energy:.1e}"),
        );
    }
    if let Some(row) = find(Work::LongPlanets) {
        let times = faster(row);
        line(
            "Wisdom-Holman 400 times as fast as DOP853",
            times,
            times.is_some_and(|times| times >= 400.0),
            times.map_or("-".to_owned(), |times| format!("{times:.0} times")),
        );
        let energy = row.native.outcome.energy_error;
        line("its energy error at most 7e-13", Some(energy), energy <= 7e-13, format!("{energy:.1e}"));
    }
    if let Some(row) = find(Work::Swarm) {
        let rate = row.native.outcome.steps / row.native.seconds / 1e6;
        line("30 million tracer-steps a second", Some(rate), rate >= 30.0, format!("{rate:.0} million"));
    }
    let worst =
        rows.iter().filter_map(|row| Some(row.wasm.as_ref()?.seconds / row.native.seconds)).reduce(f64::max);
    line(
        "wasm takes at most 1.25 times as long as native",
        worst,
        worst.is_some_and(|worst| worst <= 1.25),
        worst.map_or("-".to_owned(), |worst| format!("{worst:.2} times at worst")),
    );
    lines.concat()
}

/// The day, by the machine's clock, UTC.
fn today() -> String {
    let since_1970_s = SystemTime::now().duration_since(UNIX_EPOCH).map_or(0.0, |since| since.as_secs_f64());
    let text = Epoch::from_tdb_jd(2_440_587.5 + since_1970_s / DAY_S).to_utc_text();
    text.chars().take_while(|c| *c != 'T').collect()
}

/// To standard output.
#[expect(clippy::print_stdout, reason = "what a bench is for")]
pub(crate) fn print(text: &str) {
    println!("\n{text}");
}

/// Writes the table into a README, between the marks.
///
/// # Errors
/// When the file can't be read or written, or has no marks.
pub(crate) fn keep(file: &Path, table: &str) -> Result<(), String> {
    let wrong = |e: std::io::Error| format!("{}: {e}", file.display());
    let text = std::fs::read_to_string(file).map_err(wrong)?;
    let parts =
        text.split_once(MARKS[0]).and_then(|(before, rest)| Some((before, rest.split_once(MARKS[1])?.1)));
    let (before, after) =
        parts.ok_or_else(|| format!("{}: the marks for the table are missing", file.display()))?;
    std::fs::write(file, [before, MARKS[0], "\n", table, "\n", MARKS[1], after].concat()).map_err(wrong)
}
