use super::*;
use crate::constants::{ARCSEC_RAD, AU_M, DAY_S, GM_SUN_M3_S2 as SUN, YEAR_S};
use crate::gravity::Field;
use crate::integrate::drift;
use crate::integrate::exactly::exactly;
use crate::math::float::atan2;
use crate::solar_system::{PLANETS, solar_system};

struct Bodies {
    gms: Vec<f64>,
    pos: Vec<f64>,
    vel: Vec<f64>,
}

impl Bodies {
    fn planets() -> Self {
        let bodies = solar_system(&PLANETS).bodies;
        Self {
            gms: bodies.iter().map(|body| body.gm_m3_s2).collect(),
            pos: bodies.iter().flat_map(|body| <[f64; 3]>::from(body.pos)).collect(),
            vel: bodies.iter().flat_map(|body| <[f64; 3]>::from(body.vel)).collect(),
        }
    }

    fn start(&self) -> Start<'_> {
        Start { centre: 0, gms: &self.gms, pos: &self.pos, vel: &self.vel, t_s: 0.0, relativity: false }
    }

    fn energy(&self) -> f64 {
        drift::energy(&self.gms, &self.pos, &self.vel)
    }

    /// Where they are `t_s` later, to rounding.
    fn by_radau(&self, t_s: f64, relativity: bool) -> Self {
        let mut initial = solar_system(&PLANETS);
        initial.bodies.truncate(self.gms.len());
        for (body, gm) in initial.bodies.iter_mut().zip(&self.gms) {
            body.gm_m3_s2 = *gm;
        }
        initial.forces.relativity = relativity;
        let (pos, vel) = exactly(Field::new(&initial), &self.pos, &self.vel, t_s);
        Self { gms: self.gms.clone(), pos, vel }
    }
}

fn vector(of: &[f64], body: usize) -> [f64; 3] {
    [of[3 * body], of[3 * body + 1], of[3 * body + 2]]
}

fn minus(a: [f64; 3], b: [f64; 3]) -> [f64; 3] {
    [a[0] - b[0], a[1] - b[1], a[2] - b[2]]
}

/// How the state is read off the steps.
#[derive(Clone, Copy, PartialEq)]
enum Way {
    /// Without a corrector, and without the term of second order.
    Plain,
    /// With the corrector alone.
    Corrected,
    /// As it is made.
    Whole,
}

/// Largest relative error of the energy over so many years, looked at every 97 steps.
fn worst_energy(bodies: &Bodies, step_d: f64, years: f64, way: Way) -> f64 {
    let start = bodies.energy();
    let h = step_d * DAY_S;
    let mut wh = WisdomHolman::new(&bodies.start(), h).unwrap();
    if way == Way::Plain {
        let mut shown = wh.rows.clone();
        std::mem::swap(&mut wh.shown, &mut shown);
        wh.correct(-1.0, h).unwrap();
        wh.rows = wh.shown.clone();
    }
    let (mut pos, mut vel) = (bodies.pos.clone(), bodies.vel.clone());
    let (mut worst, mut steps) = (0.0_f64, 0);
    while wh.t_s() < years * YEAR_S {
        if way == Way::Whole {
            wh.step().unwrap();
        } else {
            wh.drift(if wh.kicked { h } else { 0.5 * h }).unwrap();
            wh.kick.prepare(h, false, &mut wh.rows);
            wh.kick.give(h, &mut wh.rows);
            wh.kicked = true;
            wh.steps += 1.0;
        }
        steps += 1;
        if steps % 97 == 0 {
            if way == Way::Plain {
                wh.shown = wh.rows.clone();
                wh.drift_shown(0.5 * h).unwrap();
                wh.write(wh.t_s(), &mut pos, &mut vel);
            } else {
                wh.state(&mut pos, &mut vel).unwrap();
            }
            worst = worst.max((drift::energy(&bodies.gms, &pos, &vel) / start - 1.0).abs());
        }
    }
    worst
}

/// The figures of the module's page: measured, with room for half as much again.
#[test]
fn the_corrector_gains_a_thousandfold_and_the_term_of_second_order_fiftyfold_more() {
    let planets = Bodies::planets();
    let [plain, corrected, whole] =
        [Way::Plain, Way::Corrected, Way::Whole].map(|way| worst_energy(&planets, 4.0, 50.0, way));
    println!("plain {plain:e}, corrected {corrected:e}, whole {whole:e}");
    assert!(plain < 3e-8 && corrected < plain / 1000.0, "plain {plain:e}, corrected {corrected:e}");
    assert!(whole < 2.3e-13 && whole < corrected / 50.0, "corrected {corrected:e}, whole {whole:e}");
}

/// What is left after the term of second order goes with the fourth power of the step, and with higher ones where Mercury's
/// harmonics come into play.
#[test]
fn half_the_step_is_at_least_twelve_times_as_exact() {
    let planets = Bodies::planets();
    let [long, short] = [4.0, 2.0].map(|step_d| worst_energy(&planets, step_d, 50.0, Way::Whole));
    println!("4 days {long:e}, 2 days {short:e}");
    assert!(short < long / 12.0, "4 days {long:e}, 2 days {short:e}");
    let [long, short] = [4.0, 2.0].map(|step_d| worst_energy(&planets, step_d, 50.0, Way::Plain));
    // The bare method is of second order.
    assert!((3.0..5.0).contains(&(long / short)), "plain: 4 days {long:e}, 2 days {short:e}");
}

/// The differences are phases along the orbits, from a mean motion that is off by what is left of the energy of the steps. They grow
/// evenly with time.
#[test]
fn a_century_ends_within_milliarcseconds_of_the_exact_one() {
    let planets = Bodies::planets();
    let exact = planets.by_radau(100.0 * YEAR_S, false);
    let mut wh = WisdomHolman::new(&planets.start(), 4.0 * DAY_S).unwrap();
    while wh.t_s() < 100.0 * YEAR_S - 2.0 * DAY_S {
        wh.step().unwrap();
    }
    let (mut pos, mut vel) = (planets.pos.clone(), planets.vel.clone());
    wh.state_after(100.0 * YEAR_S - wh.t_s(), &mut pos, &mut vel).unwrap();
    let mut worst = [0.0_f64; 9];
    for (body, worst) in worst.iter_mut().enumerate().skip(1) {
        let (got, want) = (
            minus(vector(&pos, body), vector(&pos, 0)),
            minus(vector(&exact.pos, body), vector(&exact.pos, 0)),
        );
        let off = minus(got, want);
        *worst = (dot(off, off) / dot(want, want)).sqrt() / ARCSEC_RAD;
    }
    println!("arcseconds off, Mercury to Neptune: {worst:?}");
    assert!(worst[1] < 2e-2 && worst[2..].iter().all(|off| *off < 2e-3), "{worst:?}");
}

#[test]
fn time_turns_back_and_angular_momentum_stays() {
    let planets = Bodies::planets();
    let before = drift::angular_momentum(&planets.gms, &planets.pos, &planets.vel);
    let mut wh = WisdomHolman::new(&planets.start(), 4.0 * DAY_S).unwrap();
    for _ in 0..5000 {
        wh.step().unwrap();
    }
    let mut there = Bodies::planets();
    wh.state(&mut there.pos, &mut there.vel).unwrap();
    let after = drift::angular_momentum(&there.gms, &there.pos, &there.vel);
    // Roundings of 5000 steps, each of a part in 1e16 of the largest of its terms.
    let change = minus(after, before);
    let lost = (dot(change, change) / dot(before, before)).sqrt();
    assert!(lost < 3e-14, "angular momentum off by {lost:e}");
    let mut back = WisdomHolman::new(&Start { t_s: wh.t_s(), ..there.start() }, -4.0 * DAY_S).unwrap();
    for _ in 0..5000 {
        back.step().unwrap();
    }
    assert!(back.t_s().abs() < 1e-9);
    let (mut pos, mut vel) = (planets.pos.clone(), planets.vel.clone());
    back.state(&mut pos, &mut vel).unwrap();
    for body in 0..9 {
        let (got, want) = (vector(&pos, body), vector(&planets.pos, body));
        let off = minus(got, want);
        // The same roundings, each of which has gone on as a change of mean motion: Mercury has made 227 turns.
        assert!(dot(off, off).sqrt() < 1e-10 * AU_M, "body {body} is off by {} m", dot(off, off).sqrt());
    }
}

#[test]
fn neither_the_order_of_the_bodies_nor_a_common_motion_matters() {
    let planets = Bodies::planets();
    let moved = |body: usize| 8 - body;
    let mut other = Bodies { gms: vec![0.0; 9], pos: vec![0.0; 27], vel: vec![0.0; 27] };
    let drifting = [300.0, -20.0, 5000.0];
    for body in 0..9 {
        other.gms[moved(body)] = planets.gms[body];
        for axis in 0..3 {
            other.pos[3 * moved(body) + axis] = planets.pos[3 * body + axis] + 1e9;
            other.vel[3 * moved(body) + axis] = planets.vel[3 * body + axis] + drifting[axis];
        }
    }
    let run = |bodies: &Bodies, centre| {
        let mut wh = WisdomHolman::new(&Start { centre, ..bodies.start() }, 3.0 * DAY_S).unwrap();
        for _ in 0..200 {
            wh.step().unwrap();
        }
        let (mut pos, mut vel) = (bodies.pos.clone(), bodies.vel.clone());
        wh.state(&mut pos, &mut vel).unwrap();
        (pos, vel)
    };
    let (a, b) = (run(&planets, 0), run(&other, 8));
    let gone_s = 600.0 * DAY_S;
    for body in 0..9 {
        for axis in 0..3 {
            let (i, j) = (3 * body + axis, 3 * moved(body) + axis);
            // Positions of 1e12 m are rounded to 1e-4 m, speeds of 5e3 m/s to 1e-12 m/s over 5e7 s.
            let off = b.0[j] - 1e9 - drifting[axis] * gone_s - a.0[i];
            assert!(off.abs() < 0.1, "place of {body}: off by {off} m");
            let off = b.1[j] - drifting[axis] - a.1[i];
            assert!(off.abs() < 1e-7, "speed of {body}: off by {off} m/s");
        }
    }
}

/// Two planets on crossing orbits: the trouble is told before they are near, and the state is a good one, a few steps before.
#[test]
fn a_close_passage_is_told_beforehand() {
    let speed = (SUN / AU_M).sqrt();
    let (gm, far) = (1e-4 * SUN, 1.3 * AU_M);
    // The second comes the other way round.
    let bodies = Bodies {
        gms: vec![SUN, gm, gm],
        pos: vec![0.0, 0.0, 0.0, AU_M, 0.0, 0.0, far, 0.0, 0.0],
        vel: vec![0.0, 0.0, 0.0, 0.0, speed, 0.0, 0.0, -0.75 * speed, 0.0],
    };
    let mut wh = WisdomHolman::new(&bodies.start(), DAY_S).unwrap();
    let trouble = loop {
        if let Err(trouble) = wh.step() {
            break trouble;
        }
        assert!(wh.t_s() < 10.0 * YEAR_S, "they never met");
    };
    assert_eq!(trouble, Trouble::Near { bodies: [1, 2] });
    let (mut pos, mut vel) = (bodies.pos.clone(), bodies.vel.clone());
    wh.state(&mut pos, &mut vel).unwrap();
    let exact = bodies.by_radau(wh.t_s(), false);
    // Both orbits are about 1 au large.
    let hill_m = cbrt(2e-4 / 3.0) * AU_M;
    let apart = |bodies: &Bodies| {
        let d = minus(vector(&bodies.pos, 1), vector(&bodies.pos, 2));
        dot(d, d).sqrt() / hill_m
    };
    assert!(apart(&exact) > 1.5 * NEAR_HILL_RADII, "{} Hill radii", apart(&exact));
    let nearest = (1..40)
        .map(|quarters| apart(&bodies.by_radau(wh.t_s() + 0.25 * f64::from(quarters) * DAY_S, false)))
        .fold(f64::INFINITY, f64::min);
    assert!(nearest < NEAR_HILL_RADII, "there was no passage: {nearest} Hill radii");
    for body in 0..3 {
        let off = minus(vector(&pos, body), vector(&exact.pos, body));
        // Ten years with passages at 60 km/s, 5 million km a step, that were told to be far enough: 12 m when this was written.
        assert!(dot(off, off).sqrt() < 100.0, "body {body} off by {} m", dot(off, off).sqrt());
    }
    // A comet that steps of 4 days don't resolve.
    let bodies = Bodies {
        gms: vec![SUN, 0.0],
        pos: vec![0.0, 0.0, 0.0, 0.0, AU_M, 0.0],
        vel: vec![0.0, 0.0, 0.0, 0.3 * speed, 0.0, 0.0],
    };
    let mut wh = WisdomHolman::new(&bodies.start(), 4.0 * DAY_S).unwrap();
    let trouble = (0..100).find_map(|_| wh.step().err());
    assert_eq!(trouble, Some(Trouble::Steep { body: 1 }));
}

/// # Source
/// 42.98″ a century (A. Einstein, Sitzungsber. Preuss. Akad. 1915, 831), as in the ephemeris's own test of relativity.
#[test]
fn relativity_turns_mercury_and_keeps_its_mean_motion() {
    let (a, e) = (5.790_905e10, 0.205_63);
    let speed = (SUN / a * (1.0 + e) / (1.0 - e)).sqrt();
    let bodies = Bodies {
        gms: vec![SUN, 0.0],
        pos: vec![0.0, 0.0, 0.0, a * (1.0 - e), 0.0, 0.0],
        vel: vec![0.0, 0.0, 0.0, 0.0, speed, 0.0],
    };
    let period_s = TAU * (a * a * a / SUN).sqrt();
    let end_s = 415.0 * period_s;
    let mut wh = WisdomHolman::new(&Start { relativity: true, ..bodies.start() }, period_s / 40.0).unwrap();
    while wh.t_s() < end_s - 0.01 * period_s {
        wh.step().unwrap();
    }
    let (mut pos, mut vel) = (bodies.pos.clone(), bodies.vel.clone());
    wh.state_after(end_s - wh.t_s(), &mut pos, &mut vel).unwrap();
    let (r, v) = (minus(vector(&pos, 1), vector(&pos, 0)), minus(vector(&vel, 1), vector(&vel, 0)));
    let h = r[0] * v[1] - r[1] * v[0];
    let far = dot(r, r).sqrt();
    let arcsec = atan2(-v[0] * h / SUN - r[1] / far, v[1] * h / SUN - r[0] / far) / ARCSEC_RAD;
    let want = 415.0 * 6.0 * std::f64::consts::PI * SUN * PER_C2 / (a * (1.0 - e * e)) / ARCSEC_RAD;
    // Within a turn the osculating ellipse swings by a part of one turn's advance, 0.1″.
    assert!((arcsec - want).abs() < 0.1, "advance of {arcsec}″, want {want}″");
    let century = arcsec * 100.0 * YEAR_S / end_s;
    assert!((century - 42.98).abs() < 0.1, "{century}″ a century");
    // The exact path of the same field: what is left is of the square of GM / (c² a), 6e-16 a radian, over 2,600 radians, and the steps'.
    let exact = bodies.by_radau(end_s, true);
    let off = minus(r, minus(vector(&exact.pos, 1), vector(&exact.pos, 0)));
    let off = (dot(off, off)).sqrt() / far / ARCSEC_RAD;
    println!("off by {off:e}″");
    assert!(off < 1e-3, "the place is off by {off}″");
}

/// Tracers go as bodies without mass do, and pull on nothing.
#[test]
fn tracers_go_as_massless_bodies_and_change_nothing() {
    let planets = Bodies::planets();
    let (h, years) = (4.0 * DAY_S, 20.0);
    let at = |i: usize| {
        let r = AU_M * (2.2 + 0.1 * f64::from(u8::try_from(i).unwrap()));
        ([0.0, r, 0.02 * r], [-(1.1 * SUN / r).sqrt(), 10.0, 0.0])
    };
    let mut with = Bodies::planets();
    let (mut pos, mut vel) = (Vec::new(), Vec::new());
    for i in 0..7 {
        let (p, v) = at(i);
        pos.extend(p);
        vel.extend(v);
        with.gms.push(0.0);
        with.pos.extend(p);
        with.vel.extend(v);
    }
    for relativity in [false, true] {
        let mut bodies = WisdomHolman::new(&Start { relativity, ..with.start() }, h).unwrap();
        let mut alone = WisdomHolman::new(&Start { relativity, ..planets.start() }, h).unwrap();
        let mut tracers = alone.clone();
        tracers.set_tracers(&pos, &vel, [7e8, 1e13]).unwrap();
        while bodies.t_s() < years * YEAR_S {
            for run in [&mut bodies, &mut alone, &mut tracers] {
                run.step().unwrap();
            }
        }
        let (mut a, mut b) = (with.pos.clone(), with.vel.clone());
        bodies.state(&mut a, &mut b).unwrap();
        let (mut c, mut d) = (planets.pos.clone(), planets.vel.clone());
        tracers.state(&mut c, &mut d).unwrap();
        let (mut e, mut f) = (planets.pos.clone(), planets.vel.clone());
        alone.state(&mut e, &mut f).unwrap();
        assert_eq!((c, d), (e, f), "tracers moved a planet");
        assert_eq!(tracers.tracers_left(), 7);
        for i in 0..7 {
            let (at, v) = tracers.tracer(i).unwrap();
            let (want, want_v) =
                (minus(vector(&a, 9 + i), vector(&a, 0)), minus(vector(&b, 9 + i), vector(&b, 0)));
            let (off, off_v) = (minus(at, want), minus(v, want_v));
            // The term of second order, which they go without: some 1e-10 of their motion, over 30 radians.
            assert!(dot(off, off).sqrt() < 1e-8 * AU_M, "tracer {i} off by {} m", dot(off, off).sqrt());
            assert!(dot(off_v, off_v).sqrt() < 1e-4, "tracer {i} off by {} m/s", dot(off_v, off_v).sqrt());
        }
    }
}

#[test]
fn tracers_that_steps_can_t_follow_are_removed_and_told_of() {
    let planets = Bodies::planets();
    let speed = (SUN / AU_M).sqrt();
    let jupiter = vector(&planets.pos, 5);
    let beside = [jupiter[0] + 1e10, jupiter[1], jupiter[2]];
    let pos =
        [[AU_M, 0.0, 0.0], [0.0, AU_M, 0.0], beside, [0.0, 3.0 * AU_M, 0.0], [3.0 * AU_M, 0.0, 0.0]].concat();
    let vel = [
        [0.0, 0.05 * speed, 0.0],
        [2.0 * speed, 0.0, 0.0],
        vector(&planets.vel, 5),
        [0.0; 3],
        [0.0, 0.57 * speed, 0.0],
    ]
    .concat();
    let mut run = WisdomHolman::new(&planets.start(), 4.0 * DAY_S).unwrap();
    run.set_tracers(&pos, &vel, [7e8, 20.0 * AU_M]).unwrap();
    let (mut p, mut v) = (planets.pos.clone(), planets.vel.clone());
    while run.t_s() < 20.0 * YEAR_S {
        run.step().unwrap();
    }
    run.state(&mut p, &mut v).unwrap();
    let fates: Vec<Option<Fate>> = (0..6).map(|i| run.fate(i).map(|(fate, _)| fate)).collect();
    let (down, away) = (Some(Fate::IntoCentre), Some(Fate::Away));
    assert_eq!(fates, [down, away, Some(Fate::Near(5)), down, None, None]);
    // At rest 3 au away, it falls for 3^1.5 / (4 √2) of a year.
    let fell = run.fate(3).unwrap().1 / YEAR_S;
    assert!((fell - 0.918_5).abs() < 0.02, "{fell} years");
    assert_eq!(run.tracers_left(), 1);
    let (at, _) = run.tracer(4).unwrap();
    assert!((2.8..3.2).contains(&(dot(at, at).sqrt() / AU_M)), "{at:?}");
    assert!(run.tracer(0).is_none() && run.tracer(5).is_none());
}

/// What every build has to give for 50 years of the planets, as one number made of all bits (FNV-1a over positions, then velocities); the same
/// came out natively and in wasm with vectors.
#[test]
fn bits_are_the_same_on_every_target() {
    let mut planets = Bodies::planets();
    let mut run = WisdomHolman::new(&planets.start(), 4.0 * DAY_S).unwrap();
    while run.t_s() < 50.0 * YEAR_S {
        run.step().unwrap();
    }
    run.state(&mut planets.pos, &mut planets.vel).unwrap();
    let numbers = planets.pos.iter().chain(&planets.vel);
    let bits = numbers.fold(0xcbf2_9ce4_8422_2325_u64, |hash, number| {
        (hash ^ number.to_bits()).wrapping_mul(0x0100_0000_01b3)
    });
    assert_eq!(bits, 0x8fa6_10d5_de73_4ae6, "{bits:x}");
}
