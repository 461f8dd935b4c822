//! The rules of the house that a machine can see.

#![allow(clippy::expect_used, reason = "what a test needs and lacks fails it")]

use std::fs;
use std::path::{Path, PathBuf};

/// The floors of core, from the ground up. A module may use what lies below it, and nothing beside or above.
const FLOORS: [&str; 18] = [
    "math",
    "constants",
    "units",
    "time",
    "air",
    "scenario",
    "initial",
    "conic",
    "gravity",
    "integrate",
    "ephemeris",
    "swarm",
    "resolve",
    "sweep",
    "show",
    "picture",
    "aim",
    "check",
];

/// Lines beyond which a file no longer fits in a head.
const MOST_LINES: usize = 500;

fn root() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).parent().expect("the tests live in the repository").to_path_buf()
}

fn files(folder: &Path, ending: &str, found: &mut Vec<PathBuf>) {
    let mut entries: Vec<_> = fs::read_dir(folder)
        .expect("a readable folder")
        .map(|e| e.expect("a readable entry").path())
        .collect();
    entries.sort();
    for path in entries {
        if path.is_dir() {
            files(&path, ending, found);
        } else if path.to_string_lossy().ends_with(ending) {
            found.push(path);
        }
    }
}

fn sources() -> Vec<PathBuf> {
    let mut found = Vec::new();
    for folder in ["core", "app", "www", "tests"] {
        files(&root().join(folder), ".rs", &mut found);
    }
    assert!(found.len() > 30, "only {} source files found", found.len());
    found
}

fn floor_of(name: &str) -> Option<usize> {
    FLOORS.iter().position(|floor| *floor == name)
}

#[test]
fn core_imports_downwards_only() {
    let base = root().join("core/src");
    let mut found = Vec::new();
    files(&base, ".rs", &mut found);
    let mut wrong = Vec::new();
    for path in found {
        let inside = path.strip_prefix(&base).expect("below core/src");
        let first =
            inside.components().next().expect("a name").as_os_str().to_string_lossy().replace(".rs", "");
        let Some(floor) = floor_of(&first) else { continue };
        let text = fs::read_to_string(&path).expect("a readable file");
        // What tests at the foot of a file reach for is their own affair.
        let text = text.split("#[cfg(test)]").next().unwrap_or_default();
        if inside.to_string_lossy().contains("tests") {
            continue;
        }
        for name in text.match_indices("crate::").filter_map(|(at, word)| {
            let rest = &text[at + word.len()..];
            rest.split(|c: char| !c.is_ascii_lowercase() && c != '_').next()
        }) {
            if floor_of(name).is_some_and(|used| used > floor) {
                wrong.push(format!("{}: uses crate::{name}, which lies above it", inside.display()));
            }
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn every_file_says_what_it_is_for_and_fits_in_a_head() {
    let mut wrong = Vec::new();
    for path in sources() {
        let text = fs::read_to_string(&path).expect("a readable file");
        let name = path.strip_prefix(root()).expect("below the root").display().to_string();
        let is_test_child = name.ends_with("tests.rs");
        if !text.starts_with("//!") && !is_test_child {
            wrong.push(format!("{name}: does not open with what it is for"));
        }
        let lines = text.lines().count();
        if lines > MOST_LINES {
            wrong.push(format!("{name}: {lines} lines"));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn the_developers_page_names_only_what_is_there() {
    let text = fs::read_to_string(root().join("DEVELOPERS.md")).expect("DEVELOPERS.md");
    let mut seen = 0;
    let mut wrong = Vec::new();
    for word in text.split('`').skip(1).step_by(2) {
        let is_path =
            ["core/", "app/", "www/", "tests/", "scenarios/", ".ci/"].iter().any(|top| word.starts_with(top));
        if is_path && !word.contains(['*', '<', ' ']) {
            seen += 1;
            if !root().join(word).exists() {
                wrong.push(word.to_string());
            }
        }
    }
    assert!(seen > 10, "only {seen} paths named");
    assert!(wrong.is_empty(), "named but not there: {}", wrong.join(", "));
}

#[test]
fn browser_types_stay_where_they_belong() {
    let mut wrong = Vec::new();
    for path in sources() {
        let name = path.strip_prefix(root()).expect("below the root").display().to_string();
        let text = fs::read_to_string(&path).expect("a readable file");
        let browser = text.contains("web_sys") || text.contains("js_sys");
        if browser && !name.starts_with("app/") && !name.starts_with("tests/") {
            wrong.push(name);
        }
    }
    assert!(wrong.is_empty(), "browser types in {}", wrong.join(", "));
}
