//! Tides: how the pull of one body on another changes with the place.

use super::oblateness::Bulge;
use crate::Vector3;
use crate::initial::InitialState;
use nalgebra::Matrix3;

/// The pull between two bodies and its gradient, for Newton's attraction, softened or not, and bulges. Not for relativity and drag.
#[derive(Debug, Clone)]
pub(crate) struct Tides {
    softening_m: f64,
    bulges: Vec<Bulge>,
}

impl Tides {
    /// Of all bodies of an initial state, in their order.
    pub(crate) fn new(initial: &InitialState) -> Self {
        let forces = &initial.forces;
        let bulges = forces.oblate.iter().map(|oblate| Bulge::new(oblate.body.0, oblate)).collect();
        Self { softening_m: forces.softening_m, bulges }
    }

    /// The acceleration of body `i` for GM 1 of body `j`, at `d` (m) from it, and its derivatives by `d`. The matrix is symmetric.
    ///
    /// # Source
    /// The derivatives of a = -d / ρ³, ρ² = d² + ε²: (3 d dᵀ / ρ² - 1) / ρ³ (J. M. A. Danby, Fundamentals of Celestial Mechanics,
    /// 2nd ed. (1988), 11.9, for ε = 0).
    pub(crate) fn between(&self, i: usize, j: usize, d: Vector3<f64>) -> (Vector3<f64>, Matrix3<f64>) {
        let square = d.norm_squared() + self.softening_m * self.softening_m;
        let w = 1.0 / (square * square.sqrt());
        let mut pull = d * -w;
        let mut tide = (d * d.transpose() * (3.0 / square) - Matrix3::identity()) * w;
        // What the bulge of one gives to the other, and takes back from it.
        for bulge in self.bulges.iter().filter(|bulge| bulge.body == i || bulge.body == j) {
            pull += Vector3::from(bulge.pull(d.into()));
            tide += bulge.gradient(d);
        }
        (pull, tide)
    }

    /// The distance that counts for the strength of a pull, m: softening adds to it.
    pub(crate) fn reach_m(&self, d: Vector3<f64>) -> f64 {
        (d.norm_squared() + self.softening_m * self.softening_m).sqrt()
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::gravity::Field;
    use crate::initial::{Forces, InitialBody, Oblate};
    use crate::scenario::{BodyId, Surface};

    #[test]
    fn tides_are_the_differences_of_the_pull() {
        let body = |gm_m3_s2, pos| InitialBody {
            name: String::new(),
            gm_m3_s2,
            radius_m: 0.0,
            surface: Surface::Stop,
            primary: None,
            pos,
            vel: Vector3::zeros(),
        };
        let bulge = Oblate { body: BodyId(1), j2: 0.05, radius_m: 2.0, pole: Vector3::new(0.0, 0.6, 0.8) };
        for forces in [
            Forces::default(),
            Forces { softening_m: 3.0, ..Forces::default() },
            Forces { oblate: vec![bulge], ..Forces::default() },
        ] {
            let at = Vector3::new(6.0, -3.0, 5.0);
            let bodies = vec![body(7.0, at), body(100.0, Vector3::zeros())];
            let initial = InitialState { forces, ..InitialState::of(bodies) };
            let mut field = Field::new(&initial);
            // Accelerations of both with the first one moved.
            let mut pulls = |by: Vector3<f64>| {
                let p = at + by;
                let mut out = [0.0; 6];
                field.accelerations(&[p.x, p.y, p.z, 0.0, 0.0, 0.0], &[0.0; 6], &mut out);
                [Vector3::from_column_slice(&out[..3]), Vector3::from_column_slice(&out[3..])]
            };
            let tides = Tides::new(&initial);
            let [here, there] = pulls(Vector3::zeros());
            let (pull, tide) = tides.between(0, 1, at);
            assert!((pull * 100.0 - here).norm() < 1e-15 * here.norm());
            assert!((tides.between(1, 0, -at).0 * 7.0 - there).norm() < 1e-15 * there.norm().max(1e-2));
            const H: f64 = 1e-3;
            for axis in 0..3 {
                let mut by = Vector3::zeros();
                by[axis] = H;
                let (up, down) = (pulls(by), pulls(-by));
                let want = (up[0] - down[0]) / (2.0 * H);
                let got = tide.column(axis) * 100.0;
                // The difference quotient is off by H² of the third derivative, some H² / r² of the first.
                assert!((got - want).norm() < 1e-6 * want.norm(), "axis {axis}: got {got}, want {want}");
                let want = (up[1] - down[1]) / (2.0 * H);
                let got = tides.between(1, 0, -at).1.column(axis) * -7.0;
                assert!((got - want).norm() < 1e-6 * want.norm(), "axis {axis}: got {got}, want {want}");
            }
        }
    }
}
