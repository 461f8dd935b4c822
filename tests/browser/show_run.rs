//! A whole shipped show, run by keys at real frame rate; what is drawn is held against the native ephemeris.

use fallaround_core::Vector3;
use fallaround_core::math::float;
use fallaround_core::scenario::{BodyId, View};
use fallaround_core::show::{Run, Show};
use serde_json::{Value, json};

use crate::house;
use crate::server::Server;
use crate::session::Session;

const SHOW: &str = "../scenarios/equal-areas.toml";
/// How long each beat is watched, ms. Long enough for the move of the view, and for some seconds after it.
const WATCH_MS: u64 = 5000;
/// The longest way to where a beat starts, and the frame after it, ms.
const LONGEST_WAY_MS: f64 = 3100.0;
/// Frames a second that must be drawn even on two busy cores without a GPU.
const LEAST_RATE: f64 = 15.0;
/// The page draws from doubles, and so does this: only the order of operations differs.
const PIXELS_OFF: f64 = 1e-3;

/// Keeps each frame of some time. It looks after each frame was drawn, as often as the browser draws.
const WATCH: &str = "const [ms, done] = arguments; const frames = []; const start = performance.now();\
    const look = () => { frames.push([performance.now() - start, window.fallaround_frame()]);\
      if (performance.now() - start < ms) requestAnimationFrame(look); else done(frames); };\
    requestAnimationFrame(look);";

#[test]
fn a_whole_show_run_by_keys_draws_every_body_where_it_is() {
    let show = house::rehearse(&house::text(&house::folder(SHOW)));
    let server = Server::start();
    let session = Session::start();
    session.open(&server.address);
    session.open_show(&show.scenario.title);
    let waiting = session.wait_for_frame();
    assert_eq!(waiting["waiting"], true, "a show must wait for its presenter");
    assert_eq!(waiting["model_s"], show.plan.beats[0].from_s);
    let beats = show.plan.beats.len();
    let mut checked = 0;
    let mut slowest = f64::INFINITY;
    for beat in 0..beats {
        assert_eq!(session.next()["beat"], beat);
        let frames = session.run_async(WATCH, &[json!(WATCH_MS)]);
        let frames: Vec<(f64, Value)> = frames
            .as_array()
            .expect("frames")
            .iter()
            .map(|frame| {
                let text = frame[1].as_str().expect("text");
                (frame[0].as_f64().expect("ms"), serde_json::from_str(text).expect("JSON"))
            })
            .collect();
        let rate = frames.len() as f64 / (WATCH_MS as f64 / 1000.0);
        slowest = slowest.min(rate);
        assert!(rate >= LEAST_RATE, "beat {}: {rate:.1} frames a second", beat + 1);
        // On the way to a beat that starts at a time of its own, model time may go back; once there, never.
        let anew = show.plan.beats[beat].run == Run::Anew;
        let mut before_s = f64::NEG_INFINITY;
        for (at_ms, frame) in &frames {
            assert_eq!(frame["beat"], beat, "at {at_ms} ms of beat {}", beat + 1);
            let model_s = frame["model_s"].as_f64().expect("a number");
            let on_the_way = anew && *at_ms < LONGEST_WAY_MS;
            assert!(
                model_s >= before_s || on_the_way,
                "beat {}: model time went back from {before_s} to {model_s} s after {at_ms} ms",
                beat + 1
            );
            before_s = model_s;
            checked += check_frame(&show, beat, frame);
        }
        check_pixels(&session);
    }
    println!("{checked} bodies checked in {beats} beats; at least {slowest:.1} frames a second");
    assert!(checked > beats * 50, "only {checked} bodies were drawn");
    session.assert_quiet();
}

/// Holds what was drawn against the native ephemeris; how many bodies that were.
fn check_frame(show: &Show, beat: usize, frame: &Value) -> usize {
    let number = |value: &Value| value.as_f64().expect("a number");
    let model_s = number(&frame["model_s"]);
    let view = &show.scenario.beats[beat].view;
    let bodies = frame["bodies"].as_array().expect("bodies");
    for body in bodies {
        let name = body["name"].as_str().expect("a name");
        let id = show
            .scenario
            .bodies
            .iter()
            .position(|body| body.name == name)
            .map(BodyId)
            .expect("a body of the show");
        let want = show.ephemeris.state(id, model_s).expect("covered").pos;
        let got: Vec<f64> = body["pos_m"].as_array().expect("a vector").iter().map(number).collect();
        assert_eq!(got, [want.x, want.y, want.z], "{name} at {model_s} s: not the same bits");
        // While the view moves from one beat's to the next it is neither one's.
        let Some(metres_per_px) = frame["metres_per_px"].as_f64() else { continue };
        let middle = [number(&frame["width_px"]) / 2.0, number(&frame["height_px"]) / 2.0];
        let [x, y] = project(view, want - centre(show, view, model_s), metres_per_px, middle);
        let (dx, dy) = (number(&body["x_px"]) - x, number(&body["y_px"]) - y);
        assert!(
            dx.abs() < PIXELS_OFF && dy.abs() < PIXELS_OFF,
            "beat {}, {name} at {model_s} s is drawn {dx:.3} px right and {dy:.3} px below its place ({x:.3}, {y:.3})",
            beat + 1
        );
    }
    bodies.len()
}

/// What stands in the middle of the picture.
fn centre(show: &Show, view: &View, model_s: f64) -> Vector3<f64> {
    let about = view
        .centre
        .about
        .map_or(Vector3::zeros(), |about| show.ephemeris.state(about, model_s).expect("covered").pos);
    let [x, y, z] = view.centre.offset.map(|length| length.m());
    about + Vector3::new(x, y, z)
}

/// From metres about the centre to pixels, from what a view's tilt and turn mean: the direction `turn` of the ecliptic
/// points right, and the eye is tipped from the ecliptic's north pole by `tilt`.
fn project(view: &View, from_centre: Vector3<f64>, metres_per_px: f64, middle: [f64; 2]) -> [f64; 2] {
    let (turn_sin, turn_cos) = float::sin_cos(view.turn.rad());
    let (tilt_sin, tilt_cos) = float::sin_cos(view.tilt.rad());
    let right = Vector3::new(turn_cos, turn_sin, 0.0);
    let up = Vector3::new(-turn_sin * tilt_cos, turn_cos * tilt_cos, tilt_sin);
    [middle[0] + from_centre.dot(&right) / metres_per_px, middle[1] - from_centre.dot(&up) / metres_per_px]
}

/// At each body's place on the canvas there is something other than ground.
fn check_pixels(session: &Session) {
    // Read from a copy: the page's own canvas isn't made to be read.
    let script = "const frame = JSON.parse(window.fallaround_frame()); const canvas = document.querySelector('canvas');\
        const copy = new OffscreenCanvas(canvas.width, canvas.height).getContext('2d', { willReadFrequently: true });\
        copy.drawImage(canvas, 0, 0); const at = (x, y) => copy.getImageData(x, y, 1, 1).data.join(); const corner = at(0, 0);\
        return frame.bodies.filter(b => b.x_px > 2 && b.y_px > 2 && b.x_px < frame.width_px - 2 && b.y_px < frame.height_px - 2)\
          .filter(b => at(Math.floor(b.x_px), Math.floor(b.y_px)) === corner).map(b => b.name);";
    let blank = session.run(script, &[]);
    assert_eq!(blank, json!([]), "bodies that aren't painted");
}
