//! Newton's attraction of points.

/// Sets the accelerations by which all massive bodies pull on all bodies.
///
/// Each pair is computed once and acts both ways; pairs of two tracers are left out, so a tracer costs one
/// term for each massive body.
///
/// # Source
/// I. Newton, Principia (1687), book III, proposition 7: a = GM r / r³.
pub(super) fn set(gms: &[f64], massive: &[usize], pos: &[f64], out: &mut [f64]) {
    out.fill(0.0);
    for (i, &gm) in gms.iter().enumerate() {
        if gm != 0.0 {
            for j in i + 1..gms.len() {
                pair(i, j, gm, gms[j], pos, out);
            }
        } else {
            for &j in massive.iter().filter(|&&j| j > i) {
                pair(i, j, gm, gms[j], pos, out);
            }
        }
    }
}

#[inline]
fn pair(i: usize, j: usize, gm_i: f64, gm_j: f64, pos: &[f64], out: &mut [f64]) {
    let (i, j) = (3 * i, 3 * j);
    let d = [pos[j] - pos[i], pos[j + 1] - pos[i + 1], pos[j + 2] - pos[i + 2]];
    let r2 = d[0] * d[0] + d[1] * d[1] + d[2] * d[2];
    let w = 1.0 / (r2 * r2.sqrt());
    for axis in 0..3 {
        out[i + axis] += gm_j * w * d[axis];
        out[j + axis] -= gm_i * w * d[axis];
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn two_bodies_pull_by_the_inverse_square_each_by_the_others_mass() {
        let mut out = [9.0; 6];
        set(&[8.0, 2.0], &[0, 1], &[1.0, 0.0, 0.0, 1.0, 2.0, 0.0], &mut out);
        assert_eq!(out.map(f64::to_bits), [0.0, 0.5, 0.0, 0.0, -2.0, 0.0].map(f64::to_bits));
    }

    #[test]
    fn tracers_feel_masses_on_both_sides_of_them_in_the_order_and_not_each_other() {
        let pos = [0.0, 0.0, 0.0, 3.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 4.0, 0.0];
        let mut out = [9.0; 12];
        set(&[0.0, 9.0, 0.0, 16.0], &[1, 3], &pos, &mut out);
        // Both tracers are in the same place, and feel the same.
        assert_eq!(out[0..3], [1.0, 1.0, 0.0]);
        assert_eq!(out[6..9], [1.0, 1.0, 0.0]);
        // The two masses feel each other alone: distance 5.
        let near = |got: f64, want: f64| assert!((got - want).abs() < 1e-15, "got {got}, want {want}");
        near(out[3], -16.0 / 25.0 * 0.6);
        near(out[10], -9.0 / 25.0 * 0.8);
    }
}
