//! The start page: there at once, with every shipped show, under a strict policy.

use fallaround_core::scenario::parse;

use crate::house;
use crate::server::Server;
use crate::session::Session;

#[test]
fn the_start_page_lists_every_shipped_show_with_its_length() {
    let server = Server::start();
    let session = Session::start();
    session.open(&server.address);
    assert_eq!(session.text("h1").as_deref(), Some("Fallaround"));
    for path in house::scenarios("../scenarios") {
        let title = parse(&house::text(&path)).scenario.expect("shipped scenarios are sound").title;
        session.wait_for(&format!("{title:?} with its length"), || {
            let rows = session.run(
                "return [...document.querySelectorAll('button.show')].map(row => \
                   [row.querySelector('.title').textContent, row.querySelector('.length').textContent])",
                &[],
            );
            let rows = rows.as_array()?.clone();
            rows.iter()
                .any(|row| row[0] == title.as_str() && row[1].as_str().is_some_and(|s| !s.is_empty()))
                .then_some(())
        });
    }
    let text = session.text("body").unwrap_or_default();
    assert!(text.contains("Never look straight at the Sun"), "the reminder is missing: {text}");
    session.assert_quiet();
}

#[test]
fn nothing_from_outside_may_run_in_the_page() {
    let server = Server::start();
    let session = Session::start();
    session.open(&server.address);
    let ran = session.run(
        "const script = document.createElement('script'); script.textContent = 'window.stranger = true';\
         document.head.append(script); return window.stranger === true",
        &[],
    );
    assert_eq!(ran, false, "a script in the text of the page was run");
    // The refusal itself is what the console must tell, and nothing else.
    let console = session.console();
    assert!(console.iter().all(|line| line.contains("Content Security Policy")), "{console:#?}");
    assert!(!console.is_empty(), "the policy wasn't what stopped it");
}
