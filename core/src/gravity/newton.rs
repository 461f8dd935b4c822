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
    let n = gms.len();
    for (i, &gm) in gms.iter().enumerate() {
        if gm != 0.0 {
            let mut j = i + 1;
            while j + 4 <= n {
                pairs::<4>(i, j, gms, pos, out);
                j += 4;
            }
            if j + 2 <= n {
                pairs::<2>(i, j, gms, pos, out);
                j += 2;
            }
            if j < n {
                pairs::<1>(i, j, gms, pos, out);
            }
        } else {
            for &j in massive.iter().filter(|&&j| j > i) {
                pairs::<1>(i, j, gms, pos, out);
            }
        }
    }
}

/// The pairs of one body with `N` others from `first` on. The square roots and quotients, the slowest parts, are worked out
/// side by side; each sum keeps the order of the bodies.
#[inline]
fn pairs<const N: usize>(i: usize, first: usize, gms: &[f64], pos: &[f64], out: &mut [f64]) {
    let at: &[f64] = &pos[3 * i..3 * i + 3];
    let others = &pos[3 * first..3 * (first + N)];
    let gm = gms[i];
    let (mut x, mut y, mut z, mut w) = ([0.0; N], [0.0; N], [0.0; N], [0.0; N]);
    for l in 0..N {
        x[l] = others[3 * l] - at[0];
        y[l] = others[3 * l + 1] - at[1];
        z[l] = others[3 * l + 2] - at[2];
    }
    for l in 0..N {
        let r2 = x[l] * x[l] + y[l] * y[l] + z[l] * z[l];
        w[l] = 1.0 / (r2 * r2.sqrt());
    }
    let mut sum = [out[3 * i], out[3 * i + 1], out[3 * i + 2]];
    let gms = &gms[first..first + N];
    let theirs = &mut out[3 * first..3 * (first + N)];
    for l in 0..N {
        let (mine, their) = (gms[l] * w[l], gm * w[l]);
        sum[0] += mine * x[l];
        sum[1] += mine * y[l];
        sum[2] += mine * z[l];
        theirs[3 * l] -= their * x[l];
        theirs[3 * l + 1] -= their * y[l];
        theirs[3 * l + 2] -= their * z[l];
    }
    out[3 * i..3 * i + 3].copy_from_slice(&sum);
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
