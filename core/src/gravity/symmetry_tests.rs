//! What does not change when the same bodies are looked at in another way.

use super::*;
use crate::Vector3;
use crate::air::Air;
use crate::initial::{Atmosphere, Drag, InitialBody, Oblate};
use crate::scenario::{BodyId, Surface};
use nalgebra::{Rotation3, Unit};
use proptest::prelude::*;

/// Bodies and what acts on them, with all forces that are told.
#[derive(Debug, Clone)]
struct Scene {
    gms: Vec<f64>,
    pos: Vec<Vector3<f64>>,
    vel: Vec<Vector3<f64>>,
    pole: Vector3<f64>,
    /// Places of the bulging body, of the one with air, and of the one that the air slows.
    roles: [usize; 3],
    softening_m: f64,
    relativity: bool,
}

impl Scene {
    fn accelerations(&self) -> Vec<Vector3<f64>> {
        let body = |i: usize| InitialBody {
            name: String::new(),
            gm_m3_s2: self.gms[i],
            radius_m: 0.0,
            surface: Surface::Stop,
            primary: None,
            pos: self.pos[i],
            vel: self.vel[i],
        };
        let [oblate, host, slowed] = self.roles.map(BodyId);
        let forces = Forces {
            relativity: self.relativity,
            oblate: vec![Oblate { body: oblate, j2: 0.01, radius_m: 3e9, pole: self.pole }],
            atmospheres: vec![Atmosphere { body: host, radius_m: 1e9, air: Air::exponential(1e-9, 1e11) }],
            drags: vec![Drag { body: slowed, area_m2_kg: 1e-2 }],
            softening_m: self.softening_m,
        };
        let initial = InitialState { forces, ..InitialState::of((0..self.gms.len()).map(body).collect()) };
        let flat =
            |of: &[Vector3<f64>]| -> Vec<f64> { of.iter().flat_map(|v| <[f64; 3]>::from(*v)).collect() };
        let mut out = vec![0.0; 3 * self.gms.len()];
        Field::new(&initial).accelerations(&flat(&self.pos), &flat(&self.vel), &mut out);
        out.chunks_exact(3).map(|a| Vector3::new(a[0], a[1], a[2])).collect()
    }

    /// How much rounding of places and speeds, from here and after a shift, can change accelerations by, m/s².
    fn rounding(&self, shift_m: f64, boost_m_s: f64) -> f64 {
        let mut nearest = f64::INFINITY;
        for (i, a) in self.pos.iter().enumerate() {
            nearest = self.pos[..i].iter().map(|b| (a - b).norm()).fold(nearest, f64::min);
        }
        let far = self.pos.iter().map(Vector3::norm).fold(shift_m, f64::max);
        let fast = self.vel.iter().map(Vector3::norm).fold(boost_m_s, f64::max);
        let largest = self.accelerations().iter().map(Vector3::norm).fold(0.0, f64::max);
        // The steepest force goes like the fourth power of the distance; sums have up to eight terms.
        100.0 * f64::EPSILON * largest * (far / nearest + fast / 1.0e3)
    }
}

prop_compose! {
    fn scenes()(
        rows in prop::collection::vec((prop_oneof![Just(0.0), 1e14..1e20_f64], prop::array::uniform3(-1e11..1e11_f64), prop::array::uniform3(-1e5..1e5_f64)), 3..8),
        pole in prop::array::uniform3(-1.0..1.0_f64),
        softening_m in prop_oneof![Just(0.0), 1e8..1e11_f64],
        relativity in any::<bool>(),
    ) -> Scene {
        let mut gms: Vec<f64> = rows.iter().map(|row| row.0).collect();
        gms[1] += 1e16;
        Scene {
            gms,
            pos: rows.iter().map(|row| Vector3::from(row.1)).collect(),
            vel: rows.iter().map(|row| Vector3::from(row.2)).collect(),
            pole: (Vector3::from(pole) + Vector3::new(0.0, 0.0, 2.0)).normalize(),
            roles: [0, 1, 2],
            softening_m,
            relativity,
        }
    }
}

fn same(got: &[Vector3<f64>], want: &[Vector3<f64>], tol: f64) -> Result<(), TestCaseError> {
    for (i, (got, want)) in got.iter().zip(want).enumerate() {
        prop_assert!((got - want).norm() <= tol, "body {}: got {}, want {}, allowed {:e}", i, got, want, tol);
    }
    Ok(())
}

proptest! {
    #[test]
    fn turning_everything_turns_the_forces(scene in scenes(), axis in prop::array::uniform3(-1.0..1.0_f64), angle in -3.0..3.0_f64) {
        let axis = Unit::new_normalize(Vector3::from(axis) + Vector3::new(0.0, 2.0, 0.0));
        let turn = Rotation3::from_axis_angle(&axis, angle);
        let turned = Scene {
            pos: scene.pos.iter().map(|x| turn * x).collect(),
            vel: scene.vel.iter().map(|v| turn * v).collect(),
            pole: turn * scene.pole,
            ..scene.clone()
        };
        let want: Vec<_> = scene.accelerations().iter().map(|a| turn * a).collect();
        same(&turned.accelerations(), &want, scene.rounding(0.0, 0.0))?;
    }

    #[test]
    fn it_does_not_matter_where_all_is_and_without_relativity_not_how_fast_all_moves(
        scene in scenes(), shift in prop::array::uniform3(-1e12..1e12_f64), boost in prop::array::uniform3(-1e5..1e5_f64)
    ) {
        let (shift, boost) = (Vector3::from(shift), Vector3::from(boost));
        let boost = if scene.relativity { Vector3::zeros() } else { boost };
        let moved = Scene {
            pos: scene.pos.iter().map(|x| x + shift).collect(),
            vel: scene.vel.iter().map(|v| v + boost).collect(),
            ..scene.clone()
        };
        same(&moved.accelerations(), &scene.accelerations(), scene.rounding(shift.norm(), boost.norm()))?;
    }

    #[test]
    fn the_order_of_the_bodies_does_not_matter(scene in scenes(), by in 1_usize..7) {
        let n = scene.gms.len();
        // Round by some places, and mirrored.
        let from = |i: usize| (2 * n - 1 - i + by) % n;
        let to = |old: usize| (0..n).find(|&i| from(i) == old).unwrap();
        let reordered = Scene {
            gms: (0..n).map(|i| scene.gms[from(i)]).collect(),
            pos: (0..n).map(|i| scene.pos[from(i)]).collect(),
            vel: (0..n).map(|i| scene.vel[from(i)]).collect(),
            roles: scene.roles.map(to),
            ..scene.clone()
        };
        let plain = scene.accelerations();
        let want: Vec<_> = (0..n).map(|i| plain[from(i)]).collect();
        same(&reordered.accelerations(), &want, scene.rounding(0.0, 0.0))?;
    }

    #[test]
    fn turning_time_round_changes_no_force_but_drag(scene in scenes()) {
        let back = Scene { vel: scene.vel.iter().map(|v| -v).collect(), ..scene.clone() };
        let (forth, back) = (scene.accelerations(), back.accelerations());
        // What has changed its sign is drag alone: along the motion of the slowed body relative to the air.
        let [_, host, slowed] = scene.roles;
        let wind = (scene.vel[slowed] - scene.vel[host]).normalize();
        let tol = scene.rounding(0.0, 0.0);
        for i in 0..forth.len() {
            let odd = 0.5 * (forth[i] - back[i]);
            let along = if i == slowed || i == host { wind * odd.dot(&wind) } else { Vector3::zeros() };
            prop_assert!((odd - along).norm() <= tol, "body {}: {}", i, odd);
            prop_assert!(i != slowed || odd.dot(&wind) <= tol, "drag drives body {}: {}", i, odd);
        }
    }
}
