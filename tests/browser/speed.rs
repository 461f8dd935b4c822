//! How fast the product is where it runs: the same work natively and in Chromium, and what a frame costs there.
//!
//! The numbers are printed. What fails is only what an audience would see: the limits leave room for a slow, busy computer.

use std::time::Instant;

use serde_json::{Value, json};

use crate::house;
use crate::server::Server;
use crate::session::Session;

/// A hundred years of the Sun and its planets, to be rehearsed in one go. Without the Moon, which alone asks for steps of a day.
const CENTURY: &str = r#"
format = 1
title = "A hundred years"
date = "1950-01-01T00:00:00Z"
physics = { companions = false }

[[body]]
name = "Sun"
real = "Sun"

[[body]]
name = "Mercury"
real = "Mercury"

[[body]]
name = "Venus"
real = "Venus"

[[body]]
name = "Earth"
real = "Earth"

[[body]]
name = "Mars"
real = "Mars"

[[body]]
name = "Jupiter"
real = "Jupiter"

[[body]]
name = "Saturn"
real = "Saturn"

[[body]]
name = "Uranus"
real = "Uranus"

[[body]]
name = "Neptune"
real = "Neptune"

[[beat]]
title = "All of it"
clock = { span = "100 yr", lasts = "60 s" }
view = { centre = "Sun", span = "2 au" }
"#;

/// The show with the most lines, and the one with the most points.
const SHOWS: [&str; 2] = ["../scenarios/equal-areas.toml", "../scenarios/ten-thousand-falls.toml"];
/// How many times slower the browser may be: simple loops take up to twice as long in wasm, and the worker sends its result.
const MOST_RATIO: f64 = 6.0;
/// A frame in this time leaves half of a 30 Hz projector's for the rest, ms.
const MOST_FRAME_MS: f64 = 16.0;
const WATCH_MS: u64 = 6000;

/// Times every frame that the page draws from now on, painting included: a pixel that is copied and read waits for it.
const TIMED_FRAMES: &str = "window.frameTimes = []; const ask = window.requestAnimationFrame.bind(window);\
    const copy = new OffscreenCanvas(1, 1).getContext('2d', { willReadFrequently: true });\
    window.requestAnimationFrame = draw => ask(now => { const start = performance.now(); draw(now);\
      const canvas = document.querySelector('canvas'); if (canvas && canvas.width > 800) {\
        copy.drawImage(canvas, 0, 0, 1, 1, 0, 0, 1, 1); copy.getImageData(0, 0, 1, 1);\
        window.frameTimes.push(performance.now() - start); } });";

#[test]
fn a_century_of_the_solar_system_is_rehearsed_in_the_browser_nearly_as_fast_as_natively() {
    let started = Instant::now();
    let show = house::rehearse(CENTURY);
    let native_s = started.elapsed().as_secs_f64();
    let steps = (show.ephemeris.forward().len() + show.ephemeris.backward().len()) as f64;

    let server = Server::start();
    let session = Session::start();
    session.open(&server.address);
    // The shipped shows' own cards are worked out first.
    session.wait_for("the cards", || {
        let lengths = session
            .run("return [...document.querySelectorAll('button.show .length')].map(l => l.textContent)", &[]);
        let lengths = lengths.as_array()?.clone();
        (!lengths.is_empty() && lengths.iter().all(|length| length != "")).then_some(())
    });
    let script = "const [text, done] = arguments; const transfer = new DataTransfer();\
        transfer.items.add(new File([text], 'century.toml')); const start = performance.now();\
        document.body.dispatchEvent(new DragEvent('drop', { bubbles: true, cancelable: true, dataTransfer: transfer }));\
        const look = () => window.fallaround_fingerprint() ? done(performance.now() - start) : setTimeout(look, 2); look();";
    let browser_s = session.run_async(script, &[json!(CENTURY)]).as_f64().expect("a number") / 1000.0;
    let ratio = browser_s / native_s;
    println!(
        "solar system, 100 years, {steps} steps of 9 bodies: native {native_s:.3} s ({:.0} steps/s), \
         Chromium {browser_s:.3} s ({:.0} steps/s), ratio {ratio:.2}",
        steps / native_s,
        steps / browser_s
    );
    assert!(ratio < MOST_RATIO, "the browser takes {ratio:.1} times as long");
    session.assert_quiet();
}

#[test]
fn a_frame_at_full_hd_leaves_time_to_spare() {
    for show in SHOWS {
        time_frames(show);
    }
}

fn time_frames(name: &str) {
    let show = house::rehearse(&house::text(&house::folder(name)));
    let server = Server::start();
    let session = Session::start();
    session.devtools("Page.addScriptToEvaluateOnNewDocument", json!({ "source": TIMED_FRAMES }));
    session.open(&server.address);
    session.open_show(&show.scenario.title);
    for beat in 0..show.plan.beats.len() {
        assert_eq!(session.next()["beat"], beat);
        let script = "const [ms, done] = arguments; window.frameTimes.length = 0; setTimeout(() => done(window.frameTimes), ms);";
        let times = session.run_async(script, &[json!(WATCH_MS / 2)]);
        let mut times: Vec<f64> = times.as_array().expect("times").iter().filter_map(Value::as_f64).collect();
        times.sort_by(f64::total_cmp);
        assert!(times.len() > 10, "beat {}: only {} frames", beat + 1, times.len());
        let (median, late) = (times[times.len() / 2], times[times.len() * 95 / 100]);
        println!(
            "frame at 1920x1080 of {name}, beat {}: median {median:.2} ms, 95th percentile {late:.2} ms of {}",
            beat + 1,
            times.len()
        );
        assert!(
            median < MOST_FRAME_MS,
            "beat {}: half of the frames take more than {median:.1} ms",
            beat + 1
        );
    }
    session.assert_quiet();
}
