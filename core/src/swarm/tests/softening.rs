//! Tracers in a softened field, against bodies without mass by the exact integrator.

use super::*;

/// The same tracers as bodies without mass.
fn as_bodies(initial: &InitialState) -> InitialState {
    let mut all = initial.clone();
    let swarm = all.swarms.remove(0);
    let about = initial.bodies[swarm.about.0].clone();
    for (pos, vel) in swarm.pos.iter().zip(&swarm.vel) {
        let (pos, vel) = (about.pos + pos, about.vel + vel);
        all.bodies.push(InitialBody { gm_m3_s2: 0.0, radius_m: 0.0, pos, vel, ..about.clone() });
    }
    all.listed = all.bodies.len();
    all
}

/// Largest distance between tracers and such bodies at some instants, as part of the size of the swarm, m.
fn off(initial: &InitialState, size_m: f64, until_s: f64) -> f64 {
    let all = as_bodies(initial);
    let exact = ephemeris(&all, -0.3 * until_s, until_s);
    let eph = ephemeris(initial, -0.3 * until_s, until_s);
    let run = whole(initial, &eph, -0.3 * until_s, until_s);
    let about = initial.swarms[0].about;
    let mut cursor = Cursor::new(initial, 0);
    let mut most = 0.0_f64;
    for share in [0.0, 0.11, 0.5, 0.77, 1.0, -0.1, -0.3] {
        let t_s = share * until_s;
        assert!(cursor.seek(run.path(), &eph, t_s, usize::MAX));
        assert!(cursor.positions().gone.iter().all(|gone| !gone), "points have no surface");
        for (tracer, place) in places(&cursor).iter().enumerate() {
            let body = BodyId(initial.bodies.len() + tracer);
            let want = exact.relative(body, about, t_s).unwrap().pos;
            most = most.max((place - want).norm() / size_m);
        }
    }
    most
}

#[test]
fn tracers_about_the_star_and_through_its_middle_go_as_bodies_without_mass_do() {
    let mut initial = with_planet();
    initial.forces.softening_m = 0.4 * AU;
    for body in &mut initial.bodies {
        body.radius_m = 0.0;
    }
    let swarm = &mut initial.swarms[0];
    swarm.pos.truncate(60);
    swarm.vel.truncate(60);
    // Let go at rest, and nearly so: these fall through the middle of the star. The last one starts in the middle.
    swarm.vel[7] *= 0.0;
    swarm.vel[20] *= 0.05;
    (swarm.pos[59], swarm.vel[59]) = (Vector3::new(1e9, 0.0, 0.0), Vector3::new(0.0, 1e3, 0.0));
    // Those that fall through the middle are off as much as those about points that a planet passes; the others by 1e-11.
    let got = off(&initial, 2.0 * AU, 12.0 * YEAR_S);
    assert!(got < 1e-7, "off by {got:e}");
}

#[test]
fn tracers_about_a_planet_which_itself_falls_go_as_bodies_without_mass_do() {
    let mut initial = with_planet();
    initial.forces.softening_m = 3e8;
    for body in &mut initial.bodies {
        body.radius_m = 0.0;
    }
    let planet = initial.bodies[1].gm_m3_s2;
    let swarm = &mut initial.swarms[0];
    swarm.about = BodyId(1);
    let circle = |k: u32| {
        let (sin, cos) = sin_cos(2.4 * f64::from(k));
        let r_m = 1e9 + 3e7 * f64::from(k);
        let vel = Vector3::new(-sin, cos, 0.1) * (planet / r_m).sqrt() * 0.9;
        (Vector3::new(cos, sin, 0.03) * r_m, vel)
    };
    (swarm.pos, swarm.vel) = (0..40).map(circle).unzip();
    swarm.vel[11] *= 0.0;
    let got = off(&initial, 2e9, 40.0 * 86_400.0);
    assert!(got < 1e-8, "off by {got:e}");
}

#[test]
fn a_tracer_oscillates_through_the_middle_of_a_softened_mass_with_the_period_that_plummer_gives() {
    // Deep inside, the pull is GM x / ε³: x = x0 cos(t √(GM/ε³)), to a part of (x0/ε)².
    let softening_m = AU;
    let mut initial = belt(vec![body(GM, 0.0, [0.0; 3], [0.0; 3])], 1);
    initial.forces.softening_m = softening_m;
    let swarm = &mut initial.swarms[0];
    (swarm.pos[0], swarm.vel[0]) = (Vector3::new(1e-3 * softening_m, 0.0, 0.0), Vector3::zeros());
    let rate = (GM / (softening_m * softening_m * softening_m)).sqrt();
    let eph = ephemeris(&initial, 0.0, 10.0 / rate);
    let run = whole(&initial, &eph, 0.0, 10.0 / rate);
    let mut cursor = Cursor::new(&initial, 0);
    for phase in [1.0, 2.0, 5.0, 9.0] {
        assert!(cursor.seek(run.path(), &eph, phase / rate, usize::MAX));
        let (_, cos) = sin_cos(phase);
        let got = places(&cursor)[0].x / (1e-3 * softening_m);
        // The period is longer by 9/16 of 1e-6.
        assert!((got - cos).abs() < 1e-5, "after {phase} rad: {got}, want {cos}");
    }
}
