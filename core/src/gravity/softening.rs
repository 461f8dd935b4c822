//! Newton's attraction of softened points: what two masses do to each other stays finite when they meet.

/// Sets the accelerations by which all massive bodies pull on all bodies, each as if its mass were spread in Plummer's way over
/// about `softening_m`.
///
/// The pull is a = GM r / (r² + ε²)^(3/2), that of the potential -GM / √(r² + ε²): Newton's far outside ε, and none at the centre.
/// Each pair is computed once and acts both ways; pairs of two tracers are left out.
///
/// # Source
/// H. C. Plummer, MNRAS 71 (1911), 460 (the density); S. J. Aarseth, MNRAS 126 (1963), 223 (as the force between bodies).
pub(super) fn set(gms: &[f64], massive: &[usize], softening_m: f64, pos: &[f64], out: &mut [f64]) {
    out.fill(0.0);
    for (i, &gm) in gms.iter().enumerate() {
        if gm != 0.0 {
            for j in i + 1..gms.len() {
                pair(i, j, gms, softening_m, pos, out);
            }
        } else {
            for &j in massive.iter().filter(|&&j| j > i) {
                pair(i, j, gms, softening_m, pos, out);
            }
        }
    }
}

fn pair(i: usize, j: usize, gms: &[f64], softening_m: f64, pos: &[f64], out: &mut [f64]) {
    let (a, b) = (&pos[3 * i..3 * i + 3], &pos[3 * j..3 * j + 3]);
    let d = [b[0] - a[0], b[1] - a[1], b[2] - a[2]];
    let w = weight(d, softening_m);
    for axis in 0..3 {
        out[3 * i + axis] += gms[j] * w * d[axis];
        out[3 * j + axis] -= gms[i] * w * d[axis];
    }
}

/// What a distance is multiplied by to give the pull of GM 1; without softening, Newton's.
#[inline]
pub(super) fn weight(d: [f64; 3], softening_m: f64) -> f64 {
    let r2 = d[0] * d[0] + d[1] * d[1] + d[2] * d[2] + softening_m * softening_m;
    1.0 / (r2 * r2.sqrt())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_pull_is_newtons_far_away_less_nearby_and_none_at_the_centre() {
        let pull = |x: f64| {
            let mut out = [9.0; 6];
            set(&[8.0, 0.0], &[0], 2.0, &[0.0, 0.0, 0.0, x, 0.0, 0.0], &mut out);
            assert_eq!(out[0..3], [0.0; 3], "what has no mass pulls on nothing");
            -out[3]
        };
        assert_eq!(pull(0.0).abs().to_bits(), 0);
        // Distance 1.5 and softening 2 are as 2.5; the part along is 1.5 of that.
        assert!((pull(1.5) - 8.0 * 1.5 / 15.625).abs() < 1e-15);
        // 3/2 (ε / r)² less than Newton's.
        assert!((pull(2e3) / (8.0 / 4e6) - (1.0 - 1.5e-6)).abs() < 1e-11);
        // The greatest pull, at r = ε / √2.
        let top = 2.0 / 2.0_f64.sqrt();
        assert!(pull(top) > pull(0.999 * top) && pull(top) > pull(1.001 * top));
    }

    #[test]
    fn all_pairs_that_pull_are_counted_once() {
        let pos = [0.0, 0.0, 0.0, 3.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 4.0, 0.0];
        let (gms, massive) = ([0.0, 9.0, 0.0, 16.0], [1, 3]);
        let (mut soft, mut hard) = ([9.0; 12], [9.0; 12]);
        set(&gms, &massive, 0.0, &pos, &mut soft);
        super::super::newton::Newton::new(&gms).set(&pos, &mut hard);
        for (soft, hard) in soft.iter().zip(hard) {
            assert!((soft - hard).abs() < 1e-15, "without softening: got {soft}, want {hard}");
        }
    }
}
