use super::*;
use crate::Vector3;
use crate::conic::universal;
use crate::ephemeris::{Ephemeris, Propagation};
use crate::initial::{Forces, InitialBody, InitialState, InitialSwarm};
use crate::scenario::Surface;

const GM: f64 = 1.327e20;
const AU: f64 = 1.496e11;
const YEAR_S: f64 = 3.156e7;

fn body(gm: f64, radius_m: f64, pos: [f64; 3], vel: [f64; 3]) -> InitialBody {
    InitialBody {
        name: String::new(),
        gm_m3_s2: gm,
        radius_m,
        surface: Surface::Stop,
        primary: None,
        pos: Vector3::from(pos),
        vel: Vector3::from(vel),
    }
}

/// A star with a belt of tracers on slightly excentric, inclined orbits.
fn belt(mut bodies: Vec<InitialBody>, tracers: usize) -> InitialState {
    let (mut pos, mut vel) = (Vec::new(), Vec::new());
    for k in 0..tracers {
        #[expect(clippy::cast_precision_loss, reason = "a few")]
        let k = k as f64;
        let (sin, cos) = crate::math::float::sin_cos(2.4 * k);
        let r = (2.0 + 0.011 * k) * AU;
        let speed = (GM / r).sqrt() * (0.93 + 0.0013 * k);
        pos.push(Vector3::new(cos, sin, 0.02) * r);
        vel.push(Vector3::new(-sin, cos, 0.05) * speed);
    }
    let total: f64 = bodies.iter().map(|b| b.gm_m3_s2).sum();
    let middle = bodies.iter().map(|b| b.pos * b.gm_m3_s2).sum::<Vector3<f64>>() / total;
    let drift = bodies.iter().map(|b| b.vel * b.gm_m3_s2).sum::<Vector3<f64>>() / total;
    for b in &mut bodies {
        b.pos -= middle;
        b.vel -= drift;
    }
    let swarm = InitialSwarm { name: "Belt".into(), about: BodyId(0), pos, vel, area_m2_kg: 0.0 };
    InitialState {
        listed: bodies.len(),
        bodies,
        forces: Forces::default(),
        changes: Vec::new(),
        swarms: vec![swarm],
    }
}

fn ephemeris(initial: &InitialState, from_s: f64, until_s: f64) -> Ephemeris {
    let mut propagation = Propagation::new(initial);
    propagation.advance(until_s, usize::MAX).unwrap();
    if from_s < 0.0 {
        propagation.advance(from_s, usize::MAX).unwrap();
    }
    propagation.into_ephemeris()
}

fn whole(initial: &InitialState, eph: &Ephemeris, from_s: f64, until_s: f64) -> SwarmRun {
    let mut run = SwarmRun::new(initial, 0);
    assert!(run.advance(eph, until_s, usize::MAX));
    assert!(run.advance(eph, from_s, usize::MAX));
    run
}

fn places(cursor: &Cursor) -> Vec<Vector3<f64>> {
    let Positions { x, y, z, .. } = cursor.positions();
    (0..x.len()).map(|i| Vector3::new(x[i], y[i], z[i])).collect()
}

fn bits(cursor: &Cursor) -> Vec<[u64; 3]> {
    places(cursor).iter().map(|p| <[f64; 3]>::from(*p).map(f64::to_bits)).collect()
}

#[test]
fn about_a_lone_star_every_tracer_keeps_to_its_conic() {
    let initial = belt(vec![body(GM, 7e8, [0.0; 3], [0.0; 3])], 150);
    let (from_s, until_s) = (-4.0 * YEAR_S, 10.0 * YEAR_S);
    let eph = ephemeris(&initial, from_s, until_s);
    let run = whole(&initial, &eph, from_s, until_s);
    let mut cursor = Cursor::new(&initial, 0);
    let swarm = &initial.swarms[0];
    for t_s in [0.0, 3e5, 1e7, until_s, -2.2e6, from_s] {
        assert!(cursor.seek(run.path(), &eph, t_s, usize::MAX));
        for ((got, pos), vel) in places(&cursor).iter().zip(&swarm.pos).zip(&swarm.vel) {
            let (want, _) = universal::propagate(*pos, *vel, GM, t_s).unwrap();
            let off = (got - want).norm() / want.norm();
            // The method: see `scale`.
            assert!(off < 2e-9, "at {t_s} s: off by {off:e}");
        }
    }
}

fn with_planet() -> InitialState {
    belt(
        vec![
            body(GM, 7e8, [0.0; 3], [0.0; 3]),
            body(1.267e17, 7e7, [5.2 * AU, 0.0, 0.0], [0.0, 13_060.0, 0.0]),
        ],
        150,
    )
}

#[test]
fn an_instant_has_the_same_bits_whatever_was_asked_before() {
    let initial = with_planet();
    let (from_s, until_s) = (-3.0 * YEAR_S, 40.0 * YEAR_S);
    let eph = ephemeris(&initial, from_s, until_s);
    let once = whole(&initial, &eph, from_s, until_s);
    let mut bit_by_bit = SwarmRun::new(&initial, 0);
    for k in 1..=80 {
        while !bit_by_bit.advance(&eph, f64::from(k) / 80.0 * until_s, 3000) {}
        if k % 20 == 0 {
            while !bit_by_bit.advance(&eph, f64::from(k) / 80.0 * from_s, 700) {}
        }
    }
    let numbers = |run: &SwarmRun| -> Vec<u64> {
        run.path().chunk_since(Mark::default()).into_numbers().iter().map(|x| x.to_bits()).collect()
    };
    assert_eq!(numbers(&once), numbers(&bit_by_bit));
    assert!(once.path().forward.starts.len() > 1, "one stretch tells nothing of snapshots");
    let mut used = Cursor::new(&initial, 0);
    // Forward frames, jumps, and frames going back.
    let instants = (0..40).map(|k| 3e5 * f64::from(k)).chain([until_s, 0.0, 7.7e8, from_s, -1e3, 1e6]);
    let instants = instants.chain((0..30).map(|k| 1e9 - 4e5 * f64::from(k)));
    for t_s in instants {
        assert!(used.seek(once.path(), &eph, t_s, usize::MAX));
        let mut fresh = Cursor::new(&initial, 0);
        while !fresh.seek(once.path(), &eph, t_s, 20_000) {}
        assert_eq!(bits(&used), bits(&fresh), "at {t_s} s");
    }
}

#[test]
fn chunks_put_together_are_the_same_path() {
    let initial = with_planet();
    let eph = ephemeris(&initial, -YEAR_S, 40.0 * YEAR_S);
    let mut run = SwarmRun::new(&initial, 0);
    let mut copy = SwarmPath::default();
    for until_s in [1e6, -1e7, 20.0 * YEAR_S, 40.0 * YEAR_S, -YEAR_S] {
        let mark = run.path().mark();
        assert!(run.advance(&eph, until_s, usize::MAX));
        let chunk = run.path().chunk_since(mark);
        copy.append(&Chunk::from_numbers(chunk.clone().into_numbers()).unwrap()).unwrap();
        assert_eq!(&copy, run.path());
        if run.path().mark() != mark {
            assert!(copy.append(&chunk).is_err(), "a part twice");
        }
    }
    let numbers = run.path().chunk_since(Mark::default()).into_numbers();
    assert!(numbers.len() > 900, "no snapshot in it");
    for cut in [0, 1, 9, numbers.len() - 1] {
        assert!(Chunk::from_numbers(numbers[..cut].to_vec()).is_err(), "cut at {cut}");
    }
}

#[test]
fn snapshots_keep_to_their_bytes_and_thinned_ones_lead_to_the_same_bits() {
    let initial = with_planet();
    let eph = ephemeris(&initial, 0.0, 300.0 * YEAR_S);
    let whole = whole(&initial, &eph, 0.0, 300.0 * YEAR_S);
    let mut few = whole.path().clone();
    few.most_bytes = 4 * 150 * 48;
    let starts = few.forward.starts.len();
    assert!(starts > 5, "{starts} starts");
    few.forward.thin(few.afforded());
    assert!(few.forward.snapshots.len() <= 2 && few.bytes() < whole.path().bytes());
    let (mut a, mut b) = (Cursor::new(&initial, 0), Cursor::new(&initial, 0));
    for t_s in [9.1e9, 2.3e9] {
        assert!(a.seek(whole.path(), &eph, t_s, usize::MAX));
        assert!(b.seek(&few, &eph, t_s, usize::MAX));
        assert_eq!(bits(&a), bits(&b));
    }
}

#[test]
fn a_tracer_that_falls_onto_the_star_is_gone_from_then_on() {
    let mut initial = belt(vec![body(GM, 0.2 * AU, [0.0; 3], [0.0; 3])], 12);
    initial.swarms[0].vel[3] = Vector3::zeros();
    let eph = ephemeris(&initial, 0.0, YEAR_S);
    let run = whole(&initial, &eph, 0.0, YEAR_S);
    let losses: Vec<Loss> = run.path().losses().copied().collect();
    let [Loss { t_s, tracer: 3, onto: BodyId(0) }] = losses[..] else { panic!("{losses:?}") };
    // Falling from rest at r to R takes √(r³ / 2 GM) (acos √(R / r) + √((R / r) (1 - R / r))).
    let r = initial.swarms[0].pos[3].norm();
    let part = 0.2 * AU / r;
    let angle = crate::math::float::acos(part.sqrt()) + (part * (1.0 - part)).sqrt();
    let fall_s = (r * r * r / (2.0 * GM)).sqrt() * angle;
    // It is found at the first node within.
    assert!((0.0..1e5).contains(&(t_s - fall_s)), "gone at {t_s}, falls in {fall_s}");
    let mut cursor = Cursor::new(&initial, 0);
    for (at_s, gone) in [(0.5 * fall_s, false), (t_s + 1e6, true), (0.9 * fall_s, false)] {
        assert!(cursor.seek(run.path(), &eph, at_s, usize::MAX));
        assert_eq!(cursor.positions().gone[3], gone, "at {at_s}");
        assert!(!cursor.positions().gone[4]);
    }
}
