//! Three equal masses that follow one another on a figure of eight: A. Chenciner and R. Montgomery, "A remarkable periodic solution
//! of the three-body problem in the case of equal masses", Annals of Mathematics 152 (2000), 881.
//!
//! Initial conditions computed by C. Simó, as printed there to eight digits, here to fourteen (from memory; that the orbit closes
//! proves them): G = 1, masses 1.

use fallaround_core::Vector3;
use fallaround_core::ephemeris::states_at;
use fallaround_core::initial::{InitialBody, InitialState};
use fallaround_core::scenario::Surface;
use fallaround_tests::assert_close;

const X: [f64; 2] = [0.970_004_356_697_34, -0.243_087_531_535_83];
const V: [f64; 2] = [-0.932_407_371_441_04, -0.864_731_460_921_02];
const PERIOD: f64 = 6.325_913_982_926_21;

/// The fourteenth digit of the start, times the growth of an error over one turn (the orbit is stable: below a hundred).
const CLOSES: f64 = 1e-11;

fn eight() -> InitialState {
    let body = |name: &str, pos: [f64; 2], vel: [f64; 2]| InitialBody {
        name: name.to_owned(),
        gm_m3_s2: 1.0,
        radius_m: 0.0,
        surface: Surface::Stop,
        primary: None,
        pos: Vector3::new(pos[0], pos[1], 0.0),
        vel: Vector3::new(vel[0], vel[1], 0.0),
    };
    let half = [-0.5 * V[0], -0.5 * V[1]];
    let bodies = vec![body("A", X, half), body("B", [-X[0], -X[1]], half), body("C", [0.0, 0.0], V)];
    InitialState::of(bodies)
}

#[test]
fn the_figure_of_eight_closes_after_its_period() {
    let initial = eight();
    let end = states_at(&initial, PERIOD).expect("no collision");
    for (body, end) in initial.bodies.iter().zip(&end) {
        assert_close(&body.name, (end.pos - body.pos).norm(), 0.0, CLOSES, "lengths");
        assert_close(&body.name, (end.vel - body.vel).norm(), 0.0, CLOSES, "speeds");
    }
}

#[test]
fn after_a_third_of_it_each_body_stands_where_the_next_one_stood() {
    let initial = eight();
    let third = states_at(&initial, PERIOD / 3.0).expect("no collision");
    let places: Vec<_> = initial.bodies.iter().map(|body| body.pos).collect();
    // One turn of the names; which way round follows from the first body.
    let shift = (1..3).min_by(|&a, &b| {
        let off = |k: usize| (third[0].pos - places[k]).norm();
        off(a).total_cmp(&off(b))
    });
    let shift = shift.expect("two candidates");
    for (index, state) in third.iter().enumerate() {
        let want = places[(index + shift) % 3];
        assert_close("place of the next body", (state.pos - want).norm(), 0.0, CLOSES, "lengths");
    }
}
