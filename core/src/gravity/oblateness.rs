//! The pull of a body's equatorial bulge.

use crate::Vector3;
use crate::initial::Oblate;
use nalgebra::Matrix3;

/// A body whose equator bulges, by its second zonal harmonic.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Bulge {
    /// Whose place among the bodies it is.
    pub(crate) body: usize,
    /// 3/2 J2 R², m².
    strength_m2: f64,
    pole: [f64; 3],
}

impl Bulge {
    pub(crate) fn new(body: usize, oblate: &Oblate) -> Self {
        let strength_m2 = 1.5 * oblate.j2 * oblate.radius_m * oblate.radius_m;
        Self { body, strength_m2, pole: oblate.pole.into() }
    }

    /// What it adds to the acceleration at `r` from its body, for GM 1.
    ///
    /// With p its pole and s = r·p / r: -3/2 J2 R² / r⁵ [(1 - 5 s²) r + 2 (r·p) p], the gradient of the potential
    /// J2 R² P2(s) / r³. The pole keeps its direction.
    ///
    /// # Source
    /// W. M. Kaula, Theory of Satellite Geodesy (1966), ch. 1, eq. 1.31 for l = 2, m = 0.
    #[inline]
    pub(crate) fn pull(&self, r: [f64; 3]) -> [f64; 3] {
        let p = self.pole;
        let r2 = r[0] * r[0] + r[1] * r[1] + r[2] * r[2];
        let rp = r[0] * p[0] + r[1] * p[1] + r[2] * p[2];
        let w = -self.strength_m2 / (r2 * r2 * r2.sqrt());
        let along_r = w * (1.0 - 5.0 * rp * rp / r2);
        let along_p = w * 2.0 * rp;
        [along_r * r[0] + along_p * p[0], along_r * r[1] + along_p * p[1], along_r * r[2] + along_p * p[2]]
    }

    /// The derivatives of [`Bulge::pull`] by `r`, a symmetric matrix: with c = 3/2 J2 R² / r⁵ and s = r·p / r,
    /// -c [(1 - 5 s²) + 2 p pᵀ - 10 s (r pᵀ + p rᵀ) / r + 5 (7 s² - 1) r rᵀ / r²].
    pub(super) fn gradient(&self, r: Vector3<f64>) -> Matrix3<f64> {
        let p = Vector3::from(self.pole);
        let square = r.norm_squared();
        let rp = r.dot(&p);
        let s2 = rp * rp / square;
        let crossed = r * p.transpose();
        let sum = Matrix3::identity() * (1.0 - 5.0 * s2) + p * p.transpose() * 2.0
            - (crossed + crossed.transpose()) * (10.0 * rp / square)
            + r * r.transpose() * (5.0 * (7.0 * s2 - 1.0) / square);
        sum * (-self.strength_m2 / (square * square * square.sqrt()))
    }

    /// Adds what the bulge gives to all other bodies, and the reaction of the massive ones on its own body.
    pub(super) fn add(&self, gms: &[f64], pos: &[f64], out: &mut [f64]) {
        let c = 3 * self.body;
        let gm = gms[self.body];
        let mut reaction = [0.0; 3];
        for (i, &gm_i) in gms.iter().enumerate() {
            if i == self.body {
                continue;
            }
            let k = 3 * i;
            let a = self.pull([pos[k] - pos[c], pos[k + 1] - pos[c + 1], pos[k + 2] - pos[c + 2]]);
            for axis in 0..3 {
                out[k + axis] += gm * a[axis];
                reaction[axis] += gm_i * a[axis];
            }
        }
        for axis in 0..3 {
            out[c + axis] -= reaction[axis];
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::scenario::BodyId;

    fn at(pole: [f64; 3], r: [f64; 3]) -> [f64; 6] {
        let oblate = Oblate { body: BodyId(0), j2: 1e-3, radius_m: 2.0, pole: Vector3::from(pole) };
        let mut out = [0.0; 6];
        let pos = [1.0, 1.0, 1.0, 1.0 + r[0], 1.0 + r[1], 1.0 + r[2]];
        Bulge::new(0, &oblate).add(&[100.0, 1.0], &pos, &mut out);
        out
    }

    fn near(got: f64, want: f64) {
        assert!((got - want).abs() <= 1e-15, "got {got}, want {want}");
    }

    #[test]
    fn pulls_harder_above_the_equator_and_weaker_above_the_pole() {
        // 3/2 GM J2 R² / r⁴ inwards at the equator, twice that outwards at the pole; r = 10.
        let unit = 1.5 * 100.0 * 1e-3 * 4.0 / 1e4;
        near(at([0.0, 0.0, 1.0], [10.0, 0.0, 0.0])[3], -unit);
        near(at([0.0, 0.0, 1.0], [0.0, 0.0, 10.0])[5], 2.0 * unit);
        near(at([1.0, 0.0, 0.0], [10.0, 0.0, 0.0])[3], 2.0 * unit);
    }

    #[test]
    fn is_the_gradient_of_its_potential_and_reacts_on_its_body() {
        let pole = [0.0, 0.6, 0.8];
        let r = [6.0, -3.0, 5.0];
        let potential = |r: [f64; 3]| {
            let r2 = r[0] * r[0] + r[1] * r[1] + r[2] * r[2];
            let s = (r[1] * pole[1] + r[2] * pole[2]) / r2.sqrt();
            // Taken with the sign for which its gradient is the acceleration.
            -100.0 * 1e-3 * 4.0 * (1.5 * s * s - 0.5) / (r2 * r2.sqrt())
        };
        let out = at(pole, r);
        for axis in 0..3 {
            let h = 1e-3;
            let (mut up, mut down) = (r, r);
            up[axis] += h;
            down[axis] -= h;
            let want = (potential(up) - potential(down)) / (2.0 * h);
            // The difference quotient is off by h² of the third derivative.
            assert!((out[3 + axis] - want).abs() < 1e-9, "axis {axis}: got {}, want {want}", out[3 + axis]);
            near(out[axis], -out[3 + axis] / 100.0);
        }
    }
}
