//! Every shipped scenario reads without a problem; every bad file gives the problems that its neighbour lists.
//!
//! Beside each `data/bad/NAME.toml` stands `NAME.expect`: a line for each problem, in order, with line, column and
//! a piece of its text, parted by colons: `7:1: perhaps "radius"`.

use fallaround_core::scenario::{Severity, dated, parse, parse_bytes};
use std::fs;
use std::path::{Path, PathBuf};

/// 2026-12-01, for scenarios about the day on which they are opened.
const NOW_UNIX_S: f64 = 1_796_132_700.0;

fn toml_files(folder: &str) -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join(folder);
    let entries = fs::read_dir(&folder).unwrap_or_else(|e| panic!("{}: {e}", folder.display()));
    let mut files: Vec<PathBuf> = entries
        .map(|entry| entry.unwrap_or_else(|e| panic!("{}: {e}", folder.display())).path())
        .filter(|path| path.extension().is_some_and(|e| e == "toml"))
        .collect();
    files.sort();
    files
}

#[test]
fn shipped_scenarios_have_no_problem() {
    let files = toml_files("../scenarios");
    assert!(files.len() >= 3, "{} scenarios", files.len());
    for file in files {
        let text = fs::read_to_string(&file).unwrap_or_else(|e| panic!("{}: {e}", file.display()));
        let parsed = parse(&dated(&text, NOW_UNIX_S));
        let problems: Vec<String> = parsed.problems.iter().map(ToString::to_string).collect();
        assert!(parsed.scenario.is_some() && problems.is_empty(), "{}: {problems:#?}", file.display());
    }
}

#[test]
fn bad_files_give_each_of_their_problems_with_its_place() {
    let files = toml_files("data/bad");
    assert!(files.len() >= 10, "{} bad files", files.len());
    for file in files {
        let bytes = fs::read(&file).unwrap_or_else(|e| panic!("{}: {e}", file.display()));
        let expect = file.with_extension("expect");
        let expect = fs::read_to_string(&expect).unwrap_or_else(|e| panic!("{}: {e}", expect.display()));
        let parsed = parse_bytes(&bytes);
        assert!(parsed.scenario.is_none(), "{} is taken for a scenario", file.display());
        let got: Vec<String> = parsed
            .problems
            .iter()
            .filter(|p| p.severity == Severity::Error)
            .map(ToString::to_string)
            .collect();
        let want: Vec<(String, &str)> = expect
            .lines()
            .map(|line| {
                let mut parts = line.splitn(3, ':');
                let mut part = || parts.next().unwrap_or_else(|| panic!("{}: {line}", file.display()));
                (format!("{}:{}: ", part(), part()), part().trim())
            })
            .collect();
        assert_eq!(got.len(), want.len(), "{}: got {got:#?}", file.display());
        for (got, (place, piece)) in got.iter().zip(&want) {
            assert!(
                got.starts_with(place.as_str()) && got.contains(piece),
                "{}: got {got}, want {place}…{piece}",
                file.display()
            );
        }
    }
}

#[test]
fn the_format_page_is_what_the_program_reads() {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("../scenarios/FORMAT.md");
    let written = fs::read_to_string(&path).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
    assert!(
        written.replace("\r\n", "\n") == fallaround_core::scenario::format_page(),
        "scenarios/FORMAT.md is out of date: cargo run -p fallaround-core --example format > scenarios/FORMAT.md"
    );
}
