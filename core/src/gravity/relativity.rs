//! The first post-Newtonian term of one central body.

/// Speed of light, m/s: exact by the definition of the metre (SI, 1983).
const LIGHT_M_S: f64 = 299_792_458.0;

/// Adds the relativistic acceleration that the central body gives to all others, and its reaction on that body.
///
/// With r and v from the central body of gravity GM: GM / (c² r³) [(4 GM / r - v²) r + 4 (r·v) v]. It is the term of
/// a test body in the Schwarzschild field, in harmonic (to this order also isotropic) coordinates; what the other bodies'
/// masses add is left out. The reaction is the same force turned round, so that momentum is kept.
///
/// # Source
/// J. D. Anderson, P. B. Esposito, W. Martin, C. L. Thornton & D. O. Muhleman, "Experimental test of general relativity
/// using time-delay data from Mariner 6 and Mariner 7", ApJ 200 (1975), 221, with β = γ = 1; also F. Benitez & T. Gallardo,
/// Celest. Mech. Dyn. Astr. 101 (2008), 289, eq. 1.
pub(super) fn add(gms: &[f64], centre: usize, pos: &[f64], vel: &[f64], out: &mut [f64]) {
    let c = 3 * centre;
    let gm = gms[centre];
    let mut reaction = [0.0; 3];
    for (i, &gm_i) in gms.iter().enumerate() {
        if i == centre {
            continue;
        }
        let k = 3 * i;
        let r = [pos[k] - pos[c], pos[k + 1] - pos[c + 1], pos[k + 2] - pos[c + 2]];
        let v = [vel[k] - vel[c], vel[k + 1] - vel[c + 1], vel[k + 2] - vel[c + 2]];
        let r2 = r[0] * r[0] + r[1] * r[1] + r[2] * r[2];
        let v2 = v[0] * v[0] + v[1] * v[1] + v[2] * v[2];
        let rv = r[0] * v[0] + r[1] * v[1] + r[2] * v[2];
        let length = r2.sqrt();
        let w = gm / (LIGHT_M_S * LIGHT_M_S * r2 * length);
        let along_r = w * (4.0 * gm / length - v2);
        let along_v = w * 4.0 * rv;
        for axis in 0..3 {
            let a = along_r * r[axis] + along_v * v[axis];
            out[k + axis] += a;
            reaction[axis] += gm_i * a;
        }
    }
    for axis in 0..3 {
        out[c + axis] -= reaction[axis] / gm;
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn on_a_circular_orbit_it_pushes_outwards_three_parts_of_the_field_strength() {
        // v² = GM/r: the bracket becomes 3 GM/r, the acceleration 3 (GM/r)² / (c² r).
        let (gm, r) = (1.327e20, 5.8e10_f64);
        let speed = (gm / r).sqrt();
        let mut out = [0.0; 6];
        add(&[gm, 0.0], 0, &[0.0, 0.0, 0.0, r, 0.0, 0.0], &[0.0, 0.0, 0.0, 0.0, speed, 0.0], &mut out);
        let want = 3.0 * (gm / r) * (gm / r) / (LIGHT_M_S * LIGHT_M_S * r);
        assert!((out[3] - want).abs() < 1e-14 * want, "got {}, want {want}", out[3]);
        assert_eq!(out[4..], [0.0, 0.0]);
        assert_eq!(out[..3], [0.0, 0.0, 0.0]);
    }

    #[test]
    fn on_a_radial_fall_it_is_along_the_line_and_reacts_on_the_centre() {
        let (gm, m, r, v) = (1e20, 1e18, 1e10, -1e5);
        let mut out = [0.0; 6];
        add(&[gm, m], 0, &[0.0, 0.0, 0.0, 0.0, 0.0, r], &[0.0, 0.0, 0.0, 0.0, 0.0, v], &mut out);
        let want = gm / (LIGHT_M_S * LIGHT_M_S * r * r) * (4.0 * gm / r + 3.0 * v * v);
        assert!((out[5] - want).abs() < 1e-14 * want, "got {}, want {want}", out[5]);
        assert!((out[2] + want * m / gm).abs() < 1e-14 * want * m / gm);
    }
}
