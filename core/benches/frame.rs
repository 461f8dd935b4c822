//! What a frame of the house costs before painting: observe and compose, at 1920x1080.
//!
//! Every beat of every shipped show is played at 60 frames a second through its planned time, in steps of one
//! frame; the first frame of a beat, which lays it out, is timed apart.

#![allow(clippy::print_stdout, reason = "a bench prints what it measured")]
#![allow(clippy::expect_used, reason = "a bench that can't read its shows has nothing to measure")]

use fallaround_core::picture::{Composer, Options, Screen};
use fallaround_core::scenario;
use fallaround_core::show::{Action, Clock, Rehearsal};
use std::time::{Duration, Instant};

/// 2026-12-01, so that a show of "today" is the same show at every run.
const DAY_UNIX_S: f64 = 1_796_083_200.0;
const FRAME_S: f64 = 1.0 / 60.0;

fn main() {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/../scenarios");
    println!("show                  frames  median µs  95 % µs  worst µs  first of a beat, worst ms   items");
    for name in ["equal-areas", "planets-today", "thrown-and-let-go"] {
        let text = std::fs::read_to_string(format!("{folder}/{name}.toml")).expect("a shipped scenario");
        let show =
            Rehearsal::whole(&scenario::dated(&text, DAY_UNIX_S)).expect("a shipped scenario rehearses");
        let screen = Screen { width_px: 1920.0, height_px: 1080.0, density: 1.0 };
        let mut composer = Composer::new(&show, screen, Options::default());
        let mut clock = Clock::new(&show.plan);
        let (mut frames, mut firsts, mut items) = (Vec::new(), Vec::new(), 0);
        for beat in &show.plan.beats {
            clock.act(&show.plan, Action::Next);
            let mut left_s = beat.lasts_s;
            let mut first = true;
            while left_s > 0.0 {
                let moment = clock.moment(&show.plan);
                let start = Instant::now();
                let list = composer.compose(&show, &moment);
                let took = start.elapsed();
                items = items.max(std::hint::black_box(list).items.len());
                if first {
                    firsts.push(took)
                } else {
                    frames.push(took)
                }
                first = false;
                clock.advance(&show.plan, FRAME_S);
                left_s -= FRAME_S;
            }
        }
        frames.sort_unstable();
        let at = |share: usize| frames.get(frames.len() * share / 100).copied().unwrap_or_default();
        let worst = frames.last().copied().unwrap_or_default();
        let first = firsts.into_iter().max().unwrap_or_default();
        println!(
            "{name:20} {:7} {:10.0} {:8.0} {:9.0} {:26.1} {items:7}",
            frames.len(),
            micro(at(50)),
            micro(at(95)),
            micro(worst),
            micro(first) / 1000.0
        );
    }
}

fn micro(time: Duration) -> f64 {
    time.as_secs_f64() * 1e6
}
