//! The same bits everywhere: a show rehearsed in the browser is the one rehearsed natively.

use fallaround_core::show::Fingerprint;

use crate::house;
use crate::server::Server;
use crate::session::Session;

#[test]
fn every_shipped_show_has_the_same_fingerprint_natively_and_in_chromium() {
    let server = Server::start();
    for path in house::scenarios("../scenarios") {
        let text = house::text(&path);
        let show = house::rehearse(&text);
        let native = Fingerprint::of(&text, &show).to_string();
        let session = Session::start();
        session.open(&server.address);
        session.open_show(&show.scenario.title);
        assert_eq!(session.fingerprint(), native, "{}", path.display());
        session.assert_quiet();
    }
}

#[test]
fn long_steps_and_tracers_have_the_same_fingerprint_natively_and_in_chromium() {
    let server = Server::start();
    let path = house::folder("data/long-span.toml");
    let text = house::text(&path);
    let show = house::rehearse(&text);
    assert!(show.ephemeris.forward().long_stretches().count() > 0 && !show.swarms.is_empty());
    let native = Fingerprint::of(&text, &show).to_string();
    let session = Session::start();
    session.open(&server.address);
    session.drop_file("long-span.toml", text.as_bytes());
    session.wait_for_frame();
    assert_eq!(session.fingerprint(), native);
    session.assert_quiet();
}
