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
