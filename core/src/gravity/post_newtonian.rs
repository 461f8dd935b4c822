//! Relativity between all massive bodies: the first post-Newtonian form of Einstein, Infeld and Hoffmann.

/// Speed of light, m/s: exact by the definition of the metre (SI, 1983).
const LIGHT_M_S: f64 = 299_792_458.0;

/// Its inverse square, s²/m².
const PER_C2: f64 = 1.0 / (LIGHT_M_S * LIGHT_M_S);

/// Instants of a step for which accelerations are kept.
const INSTANTS: usize = 8;

/// Bodies worked on side by side. Four fill the vector registers of every target twice over.
const LANES: usize = 4;

/// The bodies in the order in which they are worked on, and room for what the pairs of them need.
///
/// The massive bodies come first, so that pairs of tracers can be left out. Each quantity has its own array, with room for the
/// lanes that reach beyond the last body.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct PostNewtonian {
    order: Vec<usize>,
    massive: usize,
    gm: Vec<f64>,
    pos: [Vec<f64>; 3],
    vel: [Vec<f64>; 3],
    /// Newton's accelerations.
    acc: [Vec<f64>; 3],
    /// What is added to them.
    sum: [Vec<f64>; 3],
    /// Newton's potential of all others, taken as positive.
    potential: Vec<f64>,
    speed2: Vec<f64>,
    /// Inverse distances of each massive body, a row each, to the bodies after it.
    inverse: Vec<f64>,
    /// What was added at each instant of a step, m/s².
    kept: [Vec<f64>; INSTANTS],
}

impl PostNewtonian {
    /// For bodies of these GM.
    pub(super) fn new(gms: &[f64]) -> Self {
        let mut order: Vec<usize> = (0..gms.len()).filter(|&i| gms[i] != 0.0).collect();
        let massive = order.len();
        order.extend((0..gms.len()).filter(|&i| gms[i] == 0.0));
        let width = gms.len() + LANES;
        let row = || vec![0.0; width];
        let rows = || [row(), row(), row()];
        let mut gm = row();
        for (gm, &body) in gm.iter_mut().zip(&order) {
            *gm = gms[body];
        }
        let mut pos = rows();
        for axis in &mut pos {
            // Beyond the last body, where no body is: what is worked out there has no mass, and must only stay finite.
            axis[gms.len()..].fill(1e30);
        }
        Self {
            massive,
            gm,
            pos,
            vel: rows(),
            acc: rows(),
            sum: rows(),
            potential: row(),
            speed2: row(),
            inverse: vec![0.0; massive * width],
            kept: std::array::from_fn(|_| vec![0.0; 3 * gms.len()]),
            order,
        }
    }

    /// Adds the relativistic accelerations to `out`, which holds those of Newton and no others, and keeps them for this instant of
    /// the step.
    ///
    /// With d = r_B - r_A, r its length, v velocities, a Newton's accelerations and U_A the sum of GM / r over all but A, body
    /// A gets from each B, divided by c²:
    ///
    /// GM_B / r³ { -4 U_A - U_B + v_A² + 2 v_B² - 4 v_A·v_B - 3/2 (d·v_B / r)² + 1/2 d·a_B } d
    /// - GM_B / r³ { d·(4 v_A - 3 v_B) } (v_A - v_B) + 7/2 GM_B / r a_B.
    ///
    /// For a tracer in the field of one mass at rest it is the term of the Schwarzschild field in harmonic coordinates. What it
    /// keeps is the momentum and energy of the same order, not Newton's.
    ///
    /// # Source
    /// A. Einstein, L. Infeld & B. Hoffmann, Ann. Math. 39 (1938), 65; in this form T. D. Moyer, Formulation for Observed and
    /// Computed Values of Deep Space Network Data Types for Navigation (2003), eq. 4-26, with β = γ = 1, as in R. S. Park, W. M.
    /// Folkner, J. G. Williams & D. H. Boggs, AJ 161 (2021), 105.
    pub(super) fn add(&mut self, instant: usize, pos: &[f64], vel: &[f64], out: &mut [f64]) {
        self.gather(pos, vel, out);
        let n = self.order.len();
        for i in 0..self.massive {
            let mut j = i + 1;
            while j < n {
                self.potentials(i, j);
                j += LANES;
            }
        }
        for i in 0..self.massive {
            let mut j = i + 1;
            while j < n {
                self.pairs(i, j);
                j += LANES;
            }
        }
        for (place, &body) in self.order.iter().enumerate() {
            for axis in 0..3 {
                self.kept[instant][3 * body + axis] = self.sum[axis][place] * PER_C2;
            }
        }
        self.add_kept(instant, out);
    }

    /// Adds again what was last found for an instant of the step.
    pub(super) fn add_kept(&self, instant: usize, out: &mut [f64]) {
        for (a, kept) in out.iter_mut().zip(&self.kept[instant]) {
            *a += kept;
        }
    }

    /// How much of Newton's accelerations the last ones found were at most, roughly and rather too much.
    pub(super) fn share(&self) -> f64 {
        let most = |row: &[f64]| row.iter().take(self.order.len()).fold(0.0_f64, |most, x| most.max(*x));
        // The sums of the factors in the formula, without their signs.
        (9.0 * most(&self.potential) + 20.0 * most(&self.speed2)) * PER_C2
    }

    fn gather(&mut self, pos: &[f64], vel: &[f64], acc: &[f64]) {
        for (place, &body) in self.order.iter().enumerate() {
            let v = &vel[3 * body..3 * body + 3];
            self.speed2[place] = v[0] * v[0] + v[1] * v[1] + v[2] * v[2];
            for axis in 0..3 {
                self.pos[axis][place] = pos[3 * body + axis];
                self.vel[axis][place] = v[axis];
                self.acc[axis][place] = acc[3 * body + axis];
            }
        }
        for sum in &mut self.sum {
            sum.fill(0.0);
        }
        self.potential.fill(0.0);
    }

    /// What a body and some after it add to each other's potentials.
    #[inline]
    fn potentials(&mut self, i: usize, first: usize) {
        let row = i * self.gm.len();
        let [x, y, z] = &self.pos;
        let at = [x[i], y[i], z[i]];
        let (x, y, z) = (lanes(x, first), lanes(y, first), lanes(z, first));
        let mut inverse = [0.0; LANES];
        for l in 0..LANES {
            let d = [x[l] - at[0], y[l] - at[1], z[l] - at[2]];
            inverse[l] = 1.0 / (d[0] * d[0] + d[1] * d[1] + d[2] * d[2]).sqrt();
        }
        self.inverse[row + first..row + first + LANES].copy_from_slice(&inverse);
        let (gm, gms) = (self.gm[i], lanes(&self.gm, first));
        let mut mine = self.potential[i];
        let theirs = &mut self.potential[first..first + LANES];
        for l in 0..LANES {
            mine += gms[l] * inverse[l];
            theirs[l] += gm * inverse[l];
        }
        self.potential[i] = mine;
    }

    /// What a body and some after it do to each other.
    #[inline]
    fn pairs(&mut self, i: usize, first: usize) {
        let row = i * self.gm.len();
        let inverse = lanes(&self.inverse, row + first);
        let (gms, u, v2) =
            (lanes(&self.gm, first), lanes(&self.potential, first), lanes(&self.speed2, first));
        let (gm_i, u_i, v2_i) = (self.gm[i], self.potential[i], self.speed2[i]);
        let (pos, vel, acc) = (&self.pos, &self.vel, &self.acc);
        // d·v_i, d·v_j, v_i·v_j, d·a_i, d·a_j.
        let (mut dvi, mut dvj, mut vv, mut dai, mut daj) =
            ([0.0; LANES], [0.0; LANES], [0.0; LANES], [0.0; LANES], [0.0; LANES]);
        let mut d = [[0.0; LANES]; 3];
        for axis in 0..3 {
            let (x, v, a) = (lanes(&pos[axis], first), lanes(&vel[axis], first), lanes(&acc[axis], first));
            let (x_i, v_i, a_i) = (pos[axis][i], vel[axis][i], acc[axis][i]);
            for l in 0..LANES {
                let along = x[l] - x_i;
                d[axis][l] = along;
                dvi[l] += along * v_i;
                dvj[l] += along * v[l];
                vv[l] += v_i * v[l];
                dai[l] += along * a_i;
                daj[l] += along * a[l];
            }
        }
        // Weights of d, of v_i - v_j and of the other's acceleration: for the body, and for those after it.
        let (mut dw_i, mut vw_i, mut aw_i) = ([0.0; LANES], [0.0; LANES], [0.0; LANES]);
        let (mut dw, mut vw, mut aw) = ([0.0; LANES], [0.0; LANES], [0.0; LANES]);
        for l in 0..LANES {
            let w = inverse[l];
            let cube = w * w * w;
            let (i_by_j, j_by_i) = (gms[l] * cube, gm_i * cube);
            let (along_i, along_j) = (dvi[l] * w, dvj[l] * w);
            let common = 4.0 * vv[l];
            dw_i[l] = i_by_j
                * (v2_i + 2.0 * v2[l] - common - 4.0 * u_i - u[l] - 1.5 * along_j * along_j + 0.5 * daj[l]);
            dw[l] = j_by_i
                * (4.0 * u[l] + u_i + common - v2[l] - 2.0 * v2_i + 1.5 * along_i * along_i + 0.5 * dai[l]);
            vw_i[l] = i_by_j * (3.0 * dvj[l] - 4.0 * dvi[l]);
            vw[l] = j_by_i * (3.0 * dvi[l] - 4.0 * dvj[l]);
            aw_i[l] = 3.5 * gms[l] * w;
            aw[l] = 3.5 * gm_i * w;
        }
        for axis in 0..3 {
            let (v, a) = (lanes(&vel[axis], first), lanes(&acc[axis], first));
            let (v_i, a_i) = (vel[axis][i], acc[axis][i]);
            let mut own = [0.0; LANES];
            let theirs = &mut self.sum[axis][first..first + LANES];
            for l in 0..LANES {
                let rate = v_i - v[l];
                own[l] = dw_i[l] * d[axis][l] + vw_i[l] * rate + aw_i[l] * a[l];
                theirs[l] += dw[l] * d[axis][l] + vw[l] * rate + aw[l] * a_i;
            }
            self.sum[axis][i] += (own[0] + own[1]) + (own[2] + own[3]);
        }
    }
}

#[inline]
fn lanes(row: &[f64], first: usize) -> [f64; LANES] {
    let mut lanes = [0.0; LANES];
    lanes.copy_from_slice(&row[first..first + LANES]);
    lanes
}
