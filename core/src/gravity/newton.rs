//! Newton's attraction of points.
//!
//! Square roots and quotients are the slowest parts, so they are worked out two at a time, natively and in wasm: bodies are
//! laid out in twos, `x` beside `x`, and each body meets all later twos. Sums keep one order. Left to themselves, compilers find
//! the twos natively and lose them in wasm.

use wide::f64x2;

/// Numbers of two bodies, side by side.
type Two = [f64; 2];

/// Two bodies; no vector of theirs lies across cache lines.
#[derive(Debug, Clone, Copy, PartialEq)]
#[repr(align(16))]
struct Bodies {
    x: Two,
    y: Two,
    z: Two,
    /// GM, m³/s²; 0 for a tracer.
    gm: Two,
    /// What each pulls the other by: the GM of the second, and that of the first with the other sign.
    each_other: Two,
    /// The pull on them.
    ax: Two,
    ay: Two,
    az: Two,
}

/// Where there is no second body: so far away, and without mass, that it gives exact zeros.
const NOBODY: f64 = 1e150;

const EMPTY: Bodies = Bodies {
    x: [NOBODY; 2],
    y: [NOBODY; 2],
    z: [NOBODY; 2],
    gm: [0.0; 2],
    each_other: [0.0; 2],
    ax: [0.0; 2],
    ay: [0.0; 2],
    az: [0.0; 2],
};

/// The pull of massive bodies on each other and on tracers.
///
/// Each pair is computed once and acts both ways; pairs of two tracers are left out, so a tracer costs one
/// term for each massive body.
///
/// # Source
/// I. Newton, Principia (1687), book III, proposition 7: a = GM r / r³.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Newton {
    /// Those with mass first.
    twos: Vec<Bodies>,
    /// How many of the twos have mass.
    massive: usize,
    /// Which bodies each of the twos is; [`NONE`] where there is no second.
    bodies: Vec<[usize; 2]>,
}

/// No body.
const NONE: usize = usize::MAX;

impl Newton {
    /// Bodies by their GM, m³/s²; 0 for a tracer.
    pub(super) fn new(gms: &[f64]) -> Self {
        let with_mass = gms.iter().filter(|gm| **gm != 0.0).count();
        let massive = with_mass.div_ceil(2);
        let mut twos = vec![EMPTY; massive + (gms.len() - with_mass).div_ceil(2)];
        let mut bodies = vec![[NONE; 2]; twos.len()];
        let (mut next_massive, mut next_tracer) = (0, 2 * massive);
        for (body, &gm) in gms.iter().enumerate() {
            let next = if gm != 0.0 { &mut next_massive } else { &mut next_tracer };
            twos[*next / 2].gm[*next % 2] = gm;
            bodies[*next / 2][*next % 2] = body;
            *next += 1;
        }
        for two in &mut twos {
            two.each_other = [two.gm[1], -two.gm[0]];
        }
        Self { twos, massive, bodies }
    }

    /// Sets the accelerations of all bodies.
    pub(super) fn set(&mut self, pos: &[f64], out: &mut [f64]) {
        let (pos, _) = pos.as_chunks::<3>();
        for (two, bodies) in self.twos.iter_mut().zip(&self.bodies) {
            for (l, body) in bodies.iter().enumerate() {
                if let Some(pos) = pos.get(*body) {
                    (two.x[l], two.y[l], two.z[l]) = (pos[0], pos[1], pos[2]);
                }
            }
            (two.ax, two.ay, two.az) = ([0.0; 2], [0.0; 2], [0.0; 2]);
        }
        // All of these at once: each waits for its root and its quotient, and they needn't wait for one another.
        for pair in self.twos[..self.massive].chunks_mut(2) {
            match pair {
                [one, two] => Bodies::pull_each_other(one, two),
                one => one.iter_mut().for_each(|one| Bodies::pull_each_other(one, &mut EMPTY.clone())),
            }
        }
        for i in 0..self.massive {
            let (here, later) = self.twos.split_at_mut(i + 1);
            here[i].pull_later(later);
        }
        for (two, bodies) in self.twos.iter().zip(&self.bodies) {
            two.tell(*bodies, out);
        }
    }
}

impl Bodies {
    /// Writes what pulls on them to where bodies have three numbers each: as whole vectors where the second stands next to the first.
    #[inline]
    fn tell(&self, [one, two]: [usize; 2], out: &mut [f64]) {
        let ([ax, bx], [ay, by], [az, bz]) = (self.ax, self.ay, self.az);
        if one + 1 == two
            && let Some(both) = out.get_mut(3 * one..3 * one + 6)
            && let [first, second, third] = both.as_chunks_mut::<2>().0
        {
            *first = f64x2::new([ax, ay]).to_array();
            *second = f64x2::new([az, bx]).to_array();
            *third = f64x2::new([by, bz]).to_array();
            return;
        }
        let (out, _) = out.as_chunks_mut::<3>();
        for (body, pull) in [(one, [ax, ay, az]), (two, [bx, by, bz])] {
            if let Some(out) = out.get_mut(body) {
                *out = pull;
            }
        }
    }

    /// The pairs that two twos are themselves.
    #[inline]
    fn pull_each_other(one: &mut Self, two: &mut Self) {
        let x = f64x2::new([one.x[1] - one.x[0], two.x[1] - two.x[0]]);
        let y = f64x2::new([one.y[1] - one.y[0], two.y[1] - two.y[0]]);
        let z = f64x2::new([one.z[1] - one.z[0], two.z[1] - two.z[0]]);
        let r2 = x * x + y * y + z * z;
        let w = (f64x2::ONE / (r2 * r2.sqrt())).to_array();
        for (l, bodies) in [one, two].into_iter().enumerate() {
            let by = f64x2::new(bodies.each_other) * w[l];
            bodies.add(by * x.to_array()[l], by * y.to_array()[l], by * z.to_array()[l]);
        }
    }

    /// Adds to the accelerations, as whole vectors, as they are read elsewhere.
    #[inline]
    fn add(&mut self, ax: f64x2, ay: f64x2, az: f64x2) {
        self.ax = (f64x2::new(self.ax) + ax).to_array();
        self.ay = (f64x2::new(self.ay) + ay).to_array();
        self.az = (f64x2::new(self.az) + az).to_array();
    }

    /// The pairs of each of the two with all later ones.
    #[inline]
    fn pull_later(&mut self, later: &mut [Self]) {
        let [mut first, mut second] = [0, 1].map(|l| Puller {
            x: f64x2::splat(self.x[l]),
            y: f64x2::splat(self.y[l]),
            z: f64x2::splat(self.z[l]),
            minus_gm: f64x2::splat(-self.gm[l]),
            ax: f64x2::ZERO,
            ay: f64x2::ZERO,
            az: f64x2::ZERO,
        });
        for other in later {
            let (x, y, z) = (f64x2::new(other.x), f64x2::new(other.y), f64x2::new(other.z));
            let gm = f64x2::new(other.gm);
            let [x1, y1, z1] = first.meet(x, y, z, gm);
            let [x2, y2, z2] = second.meet(x, y, z, gm);
            other.add(x1 + x2, y1 + y2, z1 + z2);
        }
        let sums = |one: f64x2, two: f64x2| {
            let [[a, b], [c, d]] = [one.to_array(), two.to_array()];
            f64x2::new([a + b, c + d])
        };
        self.add(sums(first.ax, second.ax), sums(first.ay, second.ay), sums(first.az, second.az));
    }
}

/// One body, twice side by side, and what twos that it met pull on it.
struct Puller {
    x: f64x2,
    y: f64x2,
    z: f64x2,
    minus_gm: f64x2,
    ax: f64x2,
    ay: f64x2,
    az: f64x2,
}

impl Puller {
    /// The two pairs with two others; gives what is to be added to the acceleration of those.
    #[inline]
    fn meet(&mut self, x: f64x2, y: f64x2, z: f64x2, gm: f64x2) -> [f64x2; 3] {
        let (x, y, z) = (x - self.x, y - self.y, z - self.z);
        let r2 = x * x + y * y + z * z;
        let w = f64x2::ONE / (r2 * r2.sqrt());
        let by = gm * w;
        self.ax += by * x;
        self.ay += by * y;
        self.az += by * z;
        let on = self.minus_gm * w;
        [on * x, on * y, on * z]
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn two_bodies_pull_by_the_inverse_square_each_by_the_others_mass() {
        let mut out = [9.0; 6];
        Newton::new(&[8.0, 2.0]).set(&[1.0, 0.0, 0.0, 1.0, 2.0, 0.0], &mut out);
        assert_eq!(out.map(f64::to_bits), [0.0, 0.5, 0.0, 0.0, -2.0, 0.0].map(f64::to_bits));
    }

    #[test]
    fn tracers_feel_masses_on_both_sides_of_them_in_the_order_and_not_each_other() {
        let pos = [0.0, 0.0, 0.0, 3.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 4.0, 0.0];
        let mut out = [9.0; 12];
        Newton::new(&[0.0, 9.0, 0.0, 16.0]).set(&pos, &mut out);
        // Both tracers are in the same place, and feel the same.
        assert_eq!(out[0..3], [1.0, 1.0, 0.0]);
        assert_eq!(out[6..9], [1.0, 1.0, 0.0]);
        // The two masses feel each other alone: distance 5.
        let near = |got: f64, want: f64| assert!((got - want).abs() < 1e-15, "got {got}, want {want}");
        near(out[3], -16.0 / 25.0 * 0.6);
        near(out[10], -9.0 / 25.0 * 0.8);
    }
}
