//! Reading any bytes as a scenario, and writing into whatever of them is TOML.

#![no_main]

use fallaround_core::scenario::edit::{Document, Path, Root};
use fallaround_core::scenario::{Severity, parse, parse_bytes};
use libfuzzer_sys::fuzz_target;

fuzz_target!(|data: &[u8]| {
    let parsed = parse_bytes(data);
    let failed = parsed.problems.iter().any(|p| p.severity == Severity::Error);
    assert_eq!(parsed.scenario.is_none(), failed, "a scenario or an error, never both and never neither");
    for problem in &parsed.problems {
        assert!(problem.place.line > 0 && problem.place.column > 0, "{problem}");
        assert!(!problem.wrong.is_empty() && !problem.remedy.is_empty(), "{problem:?}");
    }
    let Ok(text) = std::str::from_utf8(data) else { return };
    assert_eq!(parse(text), parsed, "reading again gives the same");
    write_back(text);
});

/// What is read at a path and put there again leaves the text as it was; another value stands there afterwards.
fn write_back(text: &str) {
    let Ok(mut document) = Document::parse(text) else { return };
    let paths: [Path<'_>; 5] = [
        Path::top(&["title"]),
        Path::top(&["physics", "drag"]),
        Path { root: Root::BodyAt(0), keys: &["mass"] },
        Path { root: Root::BodyAt(1), keys: &["orbit", "eccentricity"] },
        Path::beat(0, &["clock", "at"]),
    ];
    for path in paths {
        let before = document.text().to_owned();
        if let Some(value) = document.get(path) {
            let mut same = document.clone();
            if same.set(path, fallaround_core::scenario::edit::Value::Toml(value)).is_ok() {
                assert_eq!(same.scenario(), document.scenario(), "the same value at {path:?}");
            }
        }
        match document.set(path, 0.25) {
            Ok(()) => assert_eq!(document.get(path).as_deref(), Some("0.25"), "{path:?}"),
            Err(_) => assert_eq!(document.text(), before, "a refused change leaves the text alone"),
        }
        if document.remove(path).is_ok() {
            assert_eq!(document.get(path), None, "{path:?}");
        }
    }
}
