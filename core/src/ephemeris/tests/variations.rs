//! Variations whose way is known: those that a symmetry of gravity makes, those of a circle, and those that differences show.

use super::*;
use crate::ephemeris::variations::{StartVariation, Variations};
use crate::initial::TimedChange;
use crate::math::float::sin_cos;
use crate::scenario::ChangeKind;

const ALL: [BodyId; 4] = [BodyId(0), BodyId(1), BodyId(2), BodyId(3)];

fn start(states: Vec<State>) -> StartVariation {
    StartVariation { gms_m3_s2: vec![0.0; states.len()], states }
}

/// What relative states of all bodies to the first are off by, as parts of the largest.
fn off(got: &Variations<'_>, start: usize, want: &[State]) -> f64 {
    let states = (1..want.len()).map(|body| {
        let got = got.relative(start, BodyId(body), BodyId(0));
        let want = State { pos: want[body].pos - want[0].pos, vel: want[body].vel - want[0].vel };
        [(got.pos - want.pos).norm(), want.pos.norm(), (got.vel - want.vel).norm(), want.vel.norm()]
    });
    let most = states.fold([0.0_f64; 4], |most, row| std::array::from_fn(|k| most[k].max(row[k])));
    (most[0] / most[1]).max(most[2] / most[3])
}

/// Three bodies with mass, one of them passing near another, and a tracer.
fn crowd() -> InitialState {
    initial(vec![
        body(1.0, [0.0, 0.0, 0.0], [0.0, -0.07, 0.0]),
        body(0.1, [1.0, 0.1, 0.0], [0.0, 1.0, 0.02]),
        body(0.02, [-1.3, -0.7, 0.1], [0.6, -0.5, 0.0]),
        body(0.0, [0.3, 0.0, 0.1], [0.0, 1.5, 0.3]),
    ])
}

#[test]
fn symmetries_of_gravity_carry_their_variations_along() {
    const UNTIL_S: f64 = 9.0;
    let initial = crowd();
    let eph = paths(&initial, UNTIL_S);
    let none: Vec<StartVariation> = Vec::new();
    let states = |t_s| (0..4).map(|i| at(&eph, i, t_s)).collect::<Vec<State>>();
    let accelerations = |t_s: f64| {
        let mut there = Variations::new(&initial, &eph, &none, &ALL).unwrap();
        there.advance(t_s).unwrap();
        // The first one's own doesn't matter: all is compared relative to it.
        let of = |i| there.acceleration(BodyId(i), BodyId(0)).unwrap();
        (0..4).map(of).collect::<Vec<_>>()
    };
    let axis = Vector3::new(0.2, -0.4, 0.5);
    let of = |vary: &dyn Fn(State, Vector3<f64>) -> State, t_s: f64| -> Vec<State> {
        states(t_s).into_iter().zip(accelerations(t_s)).map(|(state, acc)| vary(state, acc)).collect()
    };
    // Later: along the path. Turned: about an axis. Larger: with times as the power 3/2 of lengths (Kepler's third law).
    let later = |state: State, acc| State { pos: state.vel, vel: acc };
    let turned = |state: State, _| State { pos: axis.cross(&state.pos), vel: axis.cross(&state.vel) };
    let larger = |t_s: f64| {
        move |state: State, acc: Vector3<f64>| State {
            pos: state.pos - state.vel * (1.5 * t_s),
            vel: state.vel * -0.5 - acc * (1.5 * t_s),
        }
    };
    // Heavier: the same paths, run through faster, as the square root of all masses.
    let heavier = |t_s: f64| {
        move |state: State, acc: Vector3<f64>| State {
            pos: state.vel * (0.5 * t_s),
            vel: state.vel * 0.5 + acc * (0.5 * t_s),
        }
    };
    // The start must be barycentric, and so are accelerations relative to the first body only up to a common one, which does nothing.
    let mut heavy = start(of(&heavier(0.0), 0.0));
    heavy.gms_m3_s2 = initial.bodies.iter().map(|body| body.gm_m3_s2).collect();
    let starts = [start(of(&later, 0.0)), start(of(&turned, 0.0)), start(of(&larger(0.0), 0.0)), heavy];
    let mut variations = Variations::new(&initial, &eph, &starts, &ALL).unwrap();
    for t_s in [0.5, 3.0, UNTIL_S] {
        variations.advance(t_s).unwrap();
        let wants = [of(&later, t_s), of(&turned, t_s), of(&larger(t_s), t_s), of(&heavier(t_s), t_s)];
        for (index, want) in wants.iter().enumerate() {
            let off = off(&variations, index, want);
            // Roundings of the paths, 1e-15, grow as variations do: some ten thousandfold by the end.
            assert!(off < 1e-10, "variation {index} at {t_s} s: off by {off:e}");
        }
    }
}

#[test]
fn around_a_circle_they_are_those_of_clohessy_and_wiltshire() {
    let (gm, r) = (4e14, 7e6_f64);
    let n = (gm / (r * r * r)).sqrt();
    let initial = initial(vec![body(gm, [0.0; 3], [0.0; 3]), body(0.0, [r, 0.0, 0.0], [0.0, n * r, 0.0])]);
    let until_s = 3.3 * std::f64::consts::TAU / n;
    let eph = paths(&initial, until_s);
    // Each of the six numbers of the start by itself, velocities in the axes that turn with the circle: x outwards, y along.
    let starts: Vec<StartVariation> = (0..6)
        .map(|k| {
            let (mut pos, mut vel) = (Vector3::zeros(), Vector3::zeros());
            if k < 3 {
                pos[k] = 1.0
            } else {
                vel[k - 3] = 1.0
            }
            let vel = vel + Vector3::new(0.0, 0.0, n).cross(&pos);
            let still = State { pos: Vector3::zeros(), vel: Vector3::zeros() };
            start(vec![still, State { pos, vel }])
        })
        .collect();
    let mut variations = Variations::new(&initial, &eph, &starts, &ALL).unwrap();
    for share in [0.01, 0.4, 1.0] {
        let t = share * until_s;
        variations.advance(t).unwrap();
        let (s, c) = sin_cos(n * t);
        // W. H. Clohessy & R. S. Wiltshire, J. Aerospace Sci. 27 (1960), 653: places in the turning axes, by column.
        let places = [
            [4.0 - 3.0 * c, 6.0 * (s - n * t), 0.0],
            [0.0, 1.0, 0.0],
            [0.0, 0.0, c],
            [s / n, 2.0 * (c - 1.0) / n, 0.0],
            [2.0 * (1.0 - c) / n, (4.0 * s - 3.0 * n * t) / n, 0.0],
            [0.0, 0.0, s / n],
        ];
        for (k, [x, y, z]) in places.into_iter().enumerate() {
            let got = variations.relative(k, BodyId(1), BodyId(0)).pos;
            let want = Vector3::new(c * x - s * y, s * x + c * y, z);
            assert!((got - want).norm() < 1e-10 * want.norm(), "{k} at {t} s: got {got}, want {want}");
        }
    }
}

/// The derivative of all states by a number that makes a start, from differences whose error is of the fourth order.
fn by_differences(made: impl Fn(f64) -> InitialState, h: f64, t_s: f64) -> Vec<State> {
    let states = |x: f64| {
        let eph = paths(&made(x), t_s);
        (0..eph.bodies()).map(|body| at(&eph, body, t_s)).collect::<Vec<State>>()
    };
    let [up, down, far_up, far_down] = [h, -h, 2.0 * h, -2.0 * h].map(states);
    let mix = |of: fn(&State) -> Vector3<f64>, i: usize| {
        ((of(&up[i]) - of(&down[i])) * 8.0 - (of(&far_up[i]) - of(&far_down[i]))) / (12.0 * h)
    };
    (0..up.len()).map(|i| State { pos: mix(|s| s.pos, i), vel: mix(|s| s.vel, i) }).collect()
}

#[test]
fn they_are_what_differences_converge_to() {
    const UNTIL_S: f64 = 6.0;
    const H: f64 = 1e-4;
    // With a bulge, with softening, with gravity off for a while and a kick.
    let bulge = crate::initial::Oblate {
        body: BodyId(0),
        j2: 0.02,
        radius_m: 0.1,
        pole: Vector3::new(0.0, 0.6, 0.8),
    };
    let change = |t_s, body, what| TimedChange { t_s, body: BodyId(body), what };
    let kick = crate::scenario::Kick::By([0.1, 0.0, -0.05].map(crate::units::Speed::from_m_s));
    let changes = vec![
        change(1.1, 1, ChangeKind::Gravity { on: false }),
        change(1.7, 3, ChangeKind::Kick(kick)),
        change(2.3, 1, ChangeKind::Gravity { on: true }),
    ];
    let plain = crowd();
    for (forces, changes) in [
        (Forces { oblate: vec![bulge], ..Forces::default() }, Vec::new()),
        (Forces { softening_m: 0.1, ..Forces::default() }, Vec::new()),
        (Forces::default(), changes),
    ] {
        // A mass, a place of a body with mass, a velocity of one without.
        for what in 0..3 {
            let made = |x: f64| {
                let mut initial = plain.clone();
                initial.forces = forces.clone();
                initial.changes.clone_from(&changes);
                match what {
                    0 => initial.bodies[1].gm_m3_s2 += x,
                    1 => initial.bodies[2].pos.x += x,
                    _ => initial.bodies[3].vel.y += x,
                }
                initial
            };
            let initial = made(0.0);
            let eph = paths(&initial, UNTIL_S);
            let still = State { pos: Vector3::zeros(), vel: Vector3::zeros() };
            let mut first = start(vec![still; 4]);
            match what {
                0 => first.gms_m3_s2[1] = 1.0,
                1 => first.states[2].pos.x = 1.0,
                _ => first.states[3].vel.y = 1.0,
            }
            let starts = [first];
            let mut variations = Variations::new(&initial, &eph, &starts, &ALL).unwrap();
            variations.advance(UNTIL_S).unwrap();
            let off = off(&variations, 0, &by_differences(made, H, UNTIL_S));
            assert!(off < 1e-6, "number {what}, {forces:?}: off by {off:e}");
        }
    }
}

#[test]
fn where_they_would_not_be_true_there_are_none() {
    let ball = |surface| ball(1.0, 0.1, surface, [0.0; 3], [0.0; 3]);
    let initial = initial(vec![ball(Surface::Stop), body(0.0, [1.0, 0.0, 0.0], [0.0, 0.1, 0.0])]);
    let eph = paths(&initial, 3.0);
    let hit_s = eph.contacts()[0].t_s;
    let still = State { pos: Vector3::zeros(), vel: Vector3::zeros() };
    let starts = [start(vec![still, State { pos: Vector3::x(), vel: Vector3::zeros() }])];
    let mut variations = Variations::new(&initial, &eph, &starts, &ALL).unwrap();
    assert!(variations.advance(hit_s).is_some(), "up to the contact");
    assert!(variations.advance(hit_s + 0.1).is_none(), "at rest");
    assert!(
        Variations::new(&initial, &eph, &starts, &ALL).unwrap().advance(9.0).is_none(),
        "beyond the paths"
    );
    // What moves beside it is not concerned.
    let elsewhere = [start(vec![State { pos: Vector3::x(), vel: Vector3::zeros() }, still])];
    let mut variations = Variations::new(&initial, &eph, &elsewhere, &[BodyId(0)]).unwrap();
    assert!(variations.advance(hit_s + 0.1).is_some(), "a pebble on a planet");
    let mut slowed = initial.clone();
    slowed.forces.drags.push(crate::initial::Drag { body: BodyId(1), area_m2_kg: 1.0 });
    assert!(Variations::new(&slowed, &eph, &starts, &ALL).is_none(), "in air");
}
