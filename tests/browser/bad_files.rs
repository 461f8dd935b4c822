//! Bad files let fall on a running show: each is answered in full, and the show goes on untouched.

use std::fs;

use fallaround_core::scenario::{Severity, parse_bytes};

use crate::house;
use crate::server::Server;
use crate::session::{ESCAPE, Session};

const SHOW: &str = "../scenarios/equal-areas.toml";

#[test]
fn bad_files_are_answered_in_full_and_the_running_show_goes_on() {
    let files = house::scenarios("data/bad");
    assert!(files.len() >= 10, "{} bad files", files.len());
    let show = house::rehearse(&house::text(&house::folder(SHOW)));
    let server = Server::start();
    let session = Session::start();
    session.open(&server.address);
    session.open_show(&show.scenario.title);
    session.next();
    let fingerprint = session.fingerprint();
    let mut model_s = session.wait_for_frame()["model_s"].as_f64().expect("a number");

    for path in files {
        let name = path.file_name().expect("a file").to_string_lossy().into_owned();
        let bytes = fs::read(&path).unwrap_or_else(|error| panic!("{name}: {error}"));
        session.drop_file(&name, &bytes);
        let panel = session.wait_for(&format!("the answer to {name}"), || {
            session.text(".problems").filter(|text| text.contains(&format!("{name} can't be shown")))
        });
        let mut problems = parse_bytes(&bytes).problems;
        problems.retain(|problem| problem.severity == Severity::Error);
        // What isn't text at all is told about the file as a whole, before anything reads it.
        if std::str::from_utf8(&bytes).is_ok_and(|text| !text.contains('\0')) {
            for problem in problems {
                let place = format!("{}:{}", problem.place.line, problem.place.column);
                let told = sentence_part(&problem.wrong);
                assert!(
                    panel.contains(&place) && panel.contains(told),
                    "{name}: {place} {told:?} isn't in\n{panel}"
                );
            }
        }
        let frame = session.wait_for_frame();
        assert_eq!(session.fingerprint(), fingerprint, "{name} changed the show");
        assert_eq!(frame["beat"], 0, "{name} moved the show");
        let now_s = frame["model_s"].as_f64().expect("a number");
        assert!(now_s > model_s, "{name} stopped the show at {now_s} s");
        model_s = now_s;
        session.press(ESCAPE);
        session.wait_for("the answer to close", || session.text(".problems").is_none().then_some(()));
    }
    session.assert_quiet();
}

/// A half sentence without its first letter, which the page writes large.
fn sentence_part(half: &str) -> &str {
    let mut chars = half.chars();
    chars.next();
    chars.as_str().lines().next().unwrap_or_default().trim_end()
}
