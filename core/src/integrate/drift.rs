//! What an exact integration would keep: how honest an integration is can be read off them.

/// Energy, in units in which a mass counts as its GM, m⁵/s⁴: Newton's alone. Tracers count nothing.
///
/// `pos` and `vel` hold three numbers for each body.
pub fn energy(gms: &[f64], pos: &[f64], vel: &[f64]) -> f64 {
    softened_energy(gms, 0.0, pos, vel)
}

/// The same where attraction is softened over a length, m, in Plummer's way: a pair has -GM m / √(r² + ε²).
pub fn softened_energy(gms: &[f64], softening_m: f64, pos: &[f64], vel: &[f64]) -> f64 {
    let softening2 = softening_m * softening_m;
    // Compensated (Kahan 1965), so that its own rounding stays below what it is to show.
    let (mut sum, mut excess) = (0.0, 0.0);
    let mut add = |term: f64| {
        let term = term - excess;
        let new = sum + term;
        excess = (new - sum) - term;
        sum = new;
    };
    for (i, gm) in gms.iter().enumerate() {
        let v = &vel[3 * i..3 * i + 3];
        add(0.5 * gm * (v[0] * v[0] + v[1] * v[1] + v[2] * v[2]));
        for (j, other) in gms.iter().enumerate().skip(i + 1) {
            if *gm != 0.0 && *other != 0.0 {
                let d = [
                    pos[3 * i] - pos[3 * j],
                    pos[3 * i + 1] - pos[3 * j + 1],
                    pos[3 * i + 2] - pos[3 * j + 2],
                ];
                add(-gm * other / (d[0] * d[0] + d[1] * d[1] + d[2] * d[2] + softening2).sqrt());
            }
        }
    }
    sum
}

/// Angular momentum about the origin, in units in which a mass counts as its GM, m⁵/s³.
///
/// `pos` and `vel` hold three numbers for each body.
pub fn angular_momentum(gms: &[f64], pos: &[f64], vel: &[f64]) -> [f64; 3] {
    let mut sum = [0.0; 3];
    for (i, gm) in gms.iter().enumerate() {
        let (r, v) = (&pos[3 * i..3 * i + 3], &vel[3 * i..3 * i + 3]);
        sum[0] += gm * (r[1] * v[2] - r[2] * v[1]);
        sum[1] += gm * (r[2] * v[0] - r[0] * v[2]);
        sum[2] += gm * (r[0] * v[1] - r[1] * v[0]);
    }
    sum
}
