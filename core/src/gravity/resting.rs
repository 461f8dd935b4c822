//! Masses that rest on other bodies.
//!
//! A body with mass that came to rest on another keeps its place on it and its pull. The two then move as one:
//! forces on either are shared by the mass of both. Its pull is Newton's alone, softened where theirs is.

use super::softening;

/// One mass at rest.
#[derive(Debug, Clone, PartialEq)]
struct Mass {
    host: usize,
    offset: [f64; 3],
    gm: f64,
}

/// All masses at rest.
#[derive(Debug, Clone, PartialEq, Default)]
pub(super) struct Resting {
    masses: Vec<Mass>,
    /// GM of each body with all that rests on it; empty while nothing does.
    totals: Vec<f64>,
}

impl Resting {
    pub(super) fn add_mass(&mut self, gms: &[f64], host: usize, offset: [f64; 3], gm: f64) {
        if self.totals.is_empty() {
            self.totals = gms.to_vec();
        }
        self.totals[host] += gm;
        self.masses.push(Mass { host, offset, gm });
    }

    /// Adds the pull of the masses at rest, and what pulls on them; shares out what `out` held for their hosts.
    pub(super) fn add(&self, gms: &[f64], softening_m: f64, pos: &[f64], out: &mut [f64]) {
        if self.masses.is_empty() {
            return;
        }
        let share =
            |part: f64, body: usize| if self.totals[body] > 0.0 { part / self.totals[body] } else { 1.0 };
        for (i, &gm) in gms.iter().enumerate() {
            let own = share(gm, i);
            for a in &mut out[3 * i..3 * i + 3] {
                *a *= own;
            }
        }
        for (n, mass) in self.masses.iter().enumerate() {
            let at = place(mass, pos);
            for (i, &gm) in gms.iter().enumerate().filter(|(i, _)| *i != mass.host) {
                let pull = pull([pos[3 * i], pos[3 * i + 1], pos[3 * i + 2]], at, softening_m);
                for axis in 0..3 {
                    out[3 * i + axis] += share(gm, i) * mass.gm * pull[axis];
                    out[3 * mass.host + axis] -= share(mass.gm, mass.host) * gm * pull[axis];
                }
            }
            for other in self.masses[..n].iter().filter(|other| other.host != mass.host) {
                let pull = pull(place(other, pos), at, softening_m);
                for axis in 0..3 {
                    out[3 * other.host + axis] += share(other.gm, other.host) * mass.gm * pull[axis];
                    out[3 * mass.host + axis] -= share(mass.gm, mass.host) * other.gm * pull[axis];
                }
            }
        }
    }
}

fn place(mass: &Mass, pos: &[f64]) -> [f64; 3] {
    let k = 3 * mass.host;
    [pos[k] + mass.offset[0], pos[k + 1] + mass.offset[1], pos[k + 2] + mass.offset[2]]
}

/// Pull on a point by another of GM 1.
fn pull(on: [f64; 3], by: [f64; 3], softening_m: f64) -> [f64; 3] {
    let d = [by[0] - on[0], by[1] - on[1], by[2] - on[2]];
    let w = softening::weight(d, softening_m);
    [w * d[0], w * d[1], w * d[2]]
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_mass_at_rest_pulls_from_its_place_and_its_host_moves_with_both_masses() {
        let gms = [3.0, 0.0, 8.0];
        let pos = [0.0, 0.0, 0.0, 0.0, 5.0, 0.0, 4.0, 0.0, 0.0];
        let mut resting = Resting::default();
        resting.add_mass(&gms, 0, [0.0, 1.0, 0.0], 1.0);
        let mut out = [0.0; 9];
        super::super::newton::Newton::new(&gms).set(&pos, &mut out);
        let before = out;
        resting.add(&gms, 0.0, &pos, &mut out);
        // The tracer: 4 away from the mass at rest.
        assert!((out[4] - (before[4] - 1.0 / 16.0)).abs() < 1e-15);
        // The host: three quarters of its own pull, one quarter of that on the mass at rest, √17 away.
        let d = 17.0_f64.sqrt();
        let want = 0.75 * 8.0 / 16.0 + 0.25 * 8.0 * 4.0 / (d * d * d);
        assert!((out[0] - want).abs() < 1e-15, "got {}, want {want}", out[0]);
    }
}
