//! Forces, steps and frames of a swarm allocate nothing: counted by an allocator of this program's own.

use allocation_counter::measure;
use fallaround_core::Vector3;
use fallaround_core::air::Air;
use fallaround_core::constants::{AU_M, DAY_S, YEAR_S};
use fallaround_core::ephemeris::Propagation;
use fallaround_core::gravity::Field;
use fallaround_core::initial::{Atmosphere, Drag, Forces, InitialBody, InitialState, InitialSwarm, Oblate};
use fallaround_core::integrate::wisdom_holman::Start;
use fallaround_core::integrate::{Radau, WisdomHolman};
use fallaround_core::scenario::{BodyId, Surface};
use fallaround_core::swarm::{Cursor, SwarmRun};

const GM_SUN: f64 = 1.327_124_4e20;

/// How many allocations some work makes.
fn allocations(work: impl FnOnce()) -> u64 {
    measure(work).count_total
}

/// A star with planets on circles, each some au further out, and a tracer.
fn planets(gms: &[f64]) -> InitialState {
    let body = |gm_m3_s2: f64, pos, vel| InitialBody {
        name: String::new(),
        gm_m3_s2,
        radius_m: 1e6,
        surface: Surface::Stop,
        primary: None,
        pos,
        vel,
    };
    let mut bodies = vec![body(GM_SUN, Vector3::zeros(), Vector3::zeros())];
    for (n, &gm) in gms.iter().enumerate() {
        let r = (1.0 + 2.0 * n as f64) * AU_M;
        bodies.push(body(gm, Vector3::new(r, 0.0, 0.0), Vector3::new(0.0, (GM_SUN / r).sqrt(), 0.0)));
    }
    InitialState::of(bodies)
}

fn numbers(initial: &InitialState) -> [Vec<f64>; 3] {
    let flat = |of: fn(&InitialBody) -> Vector3<f64>| {
        initial.bodies.iter().flat_map(|body| <[f64; 3]>::from(of(body))).collect()
    };
    [initial.bodies.iter().map(|body| body.gm_m3_s2).collect(), flat(|body| body.pos), flat(|body| body.vel)]
}

/// Every force there is; softening stands in for Newton's law and goes with neither relativity nor bulges.
fn all_forces() -> [Forces; 2] {
    let bulge = Oblate { body: BodyId(1), j2: 1e-3, radius_m: 7e6, pole: Vector3::new(0.0, 0.6, 0.8) };
    // As far as the star, so that it slows what goes round it.
    let atmospheres =
        vec![Atmosphere { body: BodyId(0), radius_m: AU_M, air: Air::exponential(1e-18, 1e12) }];
    let drags = vec![Drag { body: BodyId(2), area_m2_kg: 1e-2 }];
    let points = Forces { relativity: true, oblate: vec![bulge], atmospheres, drags, ..Forces::default() };
    [points, Forces { softening_m: 1e9, ..Forces::default() }]
}

#[test]
fn the_counter_sees_what_is_allocated() {
    assert_eq!(allocations(|| drop(std::hint::black_box(vec![1.0; 1000]))), 1);
}

#[test]
fn no_force_and_no_gauss_radau_step_allocates() {
    for forces in all_forces() {
        let mut initial = planets(&[1e14, 1e16, 0.0]);
        initial.forces = forces;
        let mut field = Field::new(&initial);
        let [_, pos, vel] = numbers(&initial);
        let mut out = vec![0.0; pos.len()];
        assert_eq!(allocations(|| field.accelerations(&pos, &vel, &mut out)), 0, "{:?}", initial.forces);
        let mut radau = Radau::new(0.0, &pos, &vel, DAY_S);
        let steps = allocations(|| {
            for _ in 0..100 {
                radau.solve(&mut field).expect("a step");
                radau.finish();
            }
        });
        assert_eq!(steps, 0, "{:?}", initial.forces);
        assert!(radau.t_s() > 100.0 * DAY_S);
    }
}

#[test]
fn no_wisdom_holman_step_and_no_look_at_its_state_allocates() {
    let [gms, mut pos, mut vel] = numbers(&planets(&[1e14, 1e16, 0.0]));
    let start = Start { centre: 0, gms: &gms, pos: &pos, vel: &vel, t_s: 0.0, relativity: true };
    let mut run = WisdomHolman::new(&start, 4.0 * DAY_S).expect("a start");
    let steps = allocations(|| {
        for _ in 0..100 {
            run.step().expect("a step");
            run.state(&mut pos, &mut vel).expect("a state");
        }
    });
    assert_eq!(steps, 0);
}

#[test]
fn frames_of_a_swarm_allocate_nothing_within_a_stretch() {
    let mut initial = planets(&[1e14, 1e16]);
    let tracers = 1000;
    let speed = (GM_SUN / (2.0 * AU_M)).sqrt();
    initial.swarms.push(InitialSwarm {
        name: String::new(),
        about: BodyId(0),
        pos: vec![Vector3::new(0.0, 2.0 * AU_M, 0.0); tracers],
        vel: vec![Vector3::new(-speed, 0.0, 0.0); tracers],
        area_m2_kg: 0.0,
    });
    let mut propagation = Propagation::new(&initial);
    assert_eq!(propagation.advance(2.0 * YEAR_S, usize::MAX), Ok(true));
    let ephemeris = propagation.into_ephemeris();
    let mut run = SwarmRun::new(&initial, 0);
    assert!(run.advance(&ephemeris, 2.0 * YEAR_S, usize::MAX));
    let mut cursor = Cursor::new(&initial, 0);
    assert!(cursor.seek(run.path(), &ephemeris, 0.1 * YEAR_S, usize::MAX));
    let frames = allocations(|| {
        for frame in 0..100 {
            let t_s = 0.1 * YEAR_S + f64::from(frame) * DAY_S;
            assert!(cursor.seek(run.path(), &ephemeris, t_s, usize::MAX));
        }
    });
    assert_eq!(frames, 0);
}
