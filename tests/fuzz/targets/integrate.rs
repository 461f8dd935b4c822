//! Resolving any scenario, integrating it and its swarms one second, and planning its beats as far as some hundred steps reach.

#![no_main]

use fallaround_core::ephemeris::Propagation;
use fallaround_core::resolve::resolve;
use fallaround_core::scenario::{BodyId, parse};
use fallaround_core::show::Rehearsal;
use fallaround_core::swarm::SwarmRun;
use libfuzzer_sys::fuzz_target;

/// Steps after which an integration may go on for ever: that is slow, and no fault.
const MOST_STEPS: usize = 300;

/// Tracers with which it is, and steps of them.
const MOST_TRACERS: usize = 300;
const TRACER_STEPS: usize = 3000;

/// Bodies with which a step is still quick enough to be tried often.
const MOST_BODIES: usize = 24;

fuzz_target!(|text: &str| {
    let Some(scenario) = parse(text).scenario else { return };
    let Ok(initial) = resolve(&scenario) else { return };
    let tracers: usize = initial.swarms.iter().map(|swarm| swarm.pos.len()).sum();
    if initial.bodies.len() > MOST_BODIES || tracers > MOST_TRACERS {
        return;
    }
    let mut propagation = Propagation::new(&initial);
    for until_s in [1.0, -1.0] {
        let covered = propagation.advance(until_s, MOST_STEPS);
        let eph = propagation.ephemeris();
        let reached_s = if until_s > 0.0 { eph.until_s() } else { eph.from_s() };
        if covered == Ok(true) {
            assert!(reached_s.abs() >= 1.0, "{reached_s}");
        }
        for body in 0..initial.bodies.len() {
            let state = eph.state(BodyId(body), reached_s);
            if let Some(state) = state {
                assert!(state.pos.iter().chain(&state.vel).all(|x| x.is_finite()), "body {body}: {state:?}");
            }
        }
    }
    for swarm in 0..initial.swarms.len() {
        SwarmRun::new(&initial, swarm).advance(propagation.ephemeris(), 1.0, TRACER_STEPS);
    }
    let Ok(mut rehearsal) = Rehearsal::start(text) else { return };
    for _ in 0..4 {
        match rehearsal.work(MOST_STEPS / 4) {
            Ok(progress) if !progress.done => assert!((0.0..=1.0).contains(&progress.fraction)),
            _ => break,
        }
    }
});
