//! Without a server, and after a reload.

use serde_json::json;

use crate::house;
use crate::server::Server;
use crate::session::Session;

const SHOW: &str = "../scenarios/equal-areas.toml";
/// A reload must have the show back within this, ms.
const BACK_MS: f64 = 2000.0;

#[test]
fn a_show_opens_after_the_server_has_stopped() {
    let title = house::rehearse(&house::text(&house::folder(SHOW))).scenario.title;
    let server = Server::start();
    let session = Session::start();
    session.open(&server.address);
    let kept = "const done = arguments[0]; navigator.serviceWorker.ready.then(() => done(true));";
    assert_eq!(session.run_async(kept, &[]), json!(true));
    session.assert_quiet();

    drop(server);
    session.reload();
    assert_eq!(session.text("h1").as_deref(), Some("Fallaround"));
    session.open_show(&title);
    assert!(!session.fingerprint().is_empty());
    // Whether there is a newer build is asked of the server; that it isn't there is the browser's own remark.
    let console = session.console();
    assert!(console.iter().all(|line| line.contains("version.txt")), "{console:#?}");
}

#[test]
fn a_reload_comes_back_to_the_same_beat_and_instant() {
    let show = house::rehearse(&house::text(&house::folder(SHOW)));
    let server = Server::start();
    let session = Session::start();
    session.open(&server.address);
    session.open_show(&show.scenario.title);
    for beat in 0..3 {
        assert_eq!(session.next()["beat"], beat);
    }
    let from_s = show.plan.beats[2].from_s;
    session.wait_for("the beat itself, after the way to it", || {
        (session.frame()?["model_s"].as_f64()? > from_s).then_some(())
    });
    session.press("x");
    let held = session.wait_for("the model to stand still", || {
        let frame = session.frame()?;
        (frame["held"] == true && frame["pace"].as_f64()? == 0.0).then_some(frame)
    });
    // A second load must not wait for the first one's worker to keep the whole build.
    session
        .run_async("const done = arguments[0]; navigator.serviceWorker.ready.then(() => done(true));", &[]);

    session.reload();
    let back = session.wait_for_frame();
    let took_ms = session.run("return performance.now()", &[]).as_f64().expect("a number");
    assert_eq!(back["beat"], held["beat"]);
    assert_eq!(back["model_s"], held["model_s"], "the model stood at another instant");
    assert_eq!(back["held"], true);
    assert!(took_ms < BACK_MS, "it took {took_ms:.0} ms");
    session.assert_quiet();
}
