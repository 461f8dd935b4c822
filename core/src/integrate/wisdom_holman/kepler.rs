//! The drift: many bodies at once along their conics about the centre.
//!
//! Universal variables, `dt = r ds`, from a first guess of third order in the step, one step of Halley and one of Newton: no branch,
//! three quotients and a root for each body. That is exact to rounding wherever a step resolves the path. Where it isn't, the
//! search of [`crate::conic::propagate`] takes over, which knows every conic and every step.
//!
//! # Source
//! J. Wisdom & D. M. Hernandez, MNRAS 453 (2015), 3015, sections 2 and 3: the equation of time in the form
//! `dt = r₀ s + η G₂ + ζ G₃`, `η = r·v`, `ζ = r₀ v² - GM`, with Stumpff's series.

use super::rows::{Rows, by_lanes, lanes, lanes3};
use crate::Vector3;
use crate::conic;
use crate::integrate::from_memory;

/// Largest |β s²| for which the series below hold to the last place. A step of a twentieth of the period that belongs to periapsis
/// stays below a third of it.
const LARGEST_ARGUMENT: f64 = 0.3;

/// Largest last correction of s, as a part of it, that is taken in to first order only: its square is lost in roundings.
const LAST_CORRECTION: f64 = 1e-9;

/// A body that could not be moved on: it falls into the centre, or its numbers are out of range.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Lost(pub(super) usize);

/// What stands in `done` for a body that is lost.
pub(super) const LOST: f64 = 2.0;

/// Moves bodies on by `h_s` seconds. `gms` are those of their motions about the centre, `done` is room for a number for each.
/// One that is lost stays where it is; the first of them is told.
///
/// `slowing` is the part of `β = 2 GM / r - v²` by which time runs slower along the conic, s²/m²: 0 for Newton.
pub(super) fn drift(
    h_s: f64,
    slowing: f64,
    gms: &[f64],
    rows: &mut Rows,
    done: &mut [f64],
) -> Result<(), Lost> {
    let mut good = 0;
    by_lanes!(gms.len(), first, N => good += fast::<N>(first, h_s, slowing, gms, rows, done));
    if good == gms.len() {
        return Ok(());
    }
    let mut first = Ok(());
    for body in 0..gms.len() {
        if done[body] == 0.0 && slow(body, h_s, slowing, gms[body], rows).is_none() {
            done[body] = LOST;
            first = first.and(Err(Lost(body)));
        }
    }
    first
}

/// One body, by the search that always ends.
#[cold]
fn slow(body: usize, h_s: f64, slowing: f64, gm: f64, rows: &mut Rows) -> Option<()> {
    let (pos, vel) = (Vector3::from(rows.pos_of(body)), Vector3::from(rows.vel_of(body)));
    let h_s = h_s - h_s * slowing * (2.0 * gm / pos.norm() - vel.norm_squared());
    let (pos, vel) = conic::propagate(pos, vel, gm, h_s).ok()?;
    rows.set(body, pos.into(), vel.into());
    Some(())
}

/// Moves `N` bodies on where the short way is exact, and leaves the others where they are. Gives the number of those moved.
#[inline]
fn fast<const N: usize>(
    first: usize,
    h_s: f64,
    slowing: f64,
    gms: &[f64],
    rows: &mut Rows,
    done: &mut [f64],
) -> usize {
    let gms: [f64; N] = lanes(gms, first);
    let ([x, y, z], [u, v, w]) = (lanes3::<N>(&rows.pos, first), lanes3::<N>(&rows.vel, first));
    let (mut moved, mut kicked) = ([[0.0; N]; 3], [[0.0; N]; 3]);
    let mut held = [0.0; N];
    let [c2s, c3s] = from_memory(&SERIES);
    for l in 0..N {
        let gm = gms[l];
        let r0 = (x[l] * x[l] + y[l] * y[l] + z[l] * z[l]).sqrt();
        let inv_r0 = 1.0 / r0;
        let eta = x[l] * u[l] + y[l] * v[l] + z[l] * w[l];
        let v2 = u[l] * u[l] + v[l] * v[l] + w[l] * w[l];
        let beta = 2.0 * gm * inv_r0 - v2;
        let zeta = v2 * r0 - gm;
        let h = h_s - h_s * slowing * beta;
        let (e, k, t) = (eta * inv_r0, zeta * inv_r0, h * inv_r0);
        let s = t * (1.0 - t * (0.5 * e - t * (0.5 * e * e - k * c3s[0])));
        // Halley's step; what the series lack is far less than what the step leaves.
        let q = beta * s * s;
        let q2 = q * q;
        let (c2, c3) = (low(c2s, q, q2), low(c3s, q, q2));
        let (g2, g3) = (s * s * c2, s * s * s * c3);
        let (g0, g1) = (1.0 - beta * g2, s - beta * g3);
        let late = r0 * s + eta * g2 + zeta * g3 - h;
        let r = r0 + eta * g1 + zeta * g2;
        let s = s - late * r / (r * r - 0.5 * late * (eta * g0 + zeta * g1));
        // Newton's.
        let q = beta * s * s;
        let (c2, c3) = (series(c2s, q), series(c3s, q));
        let (g2, g3) = (s * s * c2, s * s * s * c3);
        let (g0, g1) = (1.0 - beta * g2, s - beta * g3);
        let late = r0 * s + eta * g2 + zeta * g3 - h;
        let r = r0 + eta * g1 + zeta * g2;
        let inv_r = 1.0 / r;
        let d = -late * inv_r;
        // False for what is not a number, too.
        let good = (d.abs() <= LAST_CORRECTION * s.abs()) & (q.abs() <= LARGEST_ARGUMENT);
        let inv_r = inv_r - d * (eta * g0 + zeta * g1) * inv_r * inv_r;
        let (g1, g2, g3) = (g1 + d * g0, g2 + d * g1, g3 + d * g2);
        // Lagrange's f, g and their rates, less what they are without a step.
        let f = if good { -gm * g2 * inv_r0 } else { 0.0 };
        let g = if good { h - gm * g3 } else { 0.0 };
        let f_rate = if good { -gm * g1 * inv_r0 * inv_r } else { 0.0 };
        let g_rate = if good { -gm * g2 * inv_r } else { 0.0 };
        held[l] = if good { 1.0 } else { 0.0 };
        moved[0][l] = f * x[l] + g * u[l];
        moved[1][l] = f * y[l] + g * v[l];
        moved[2][l] = f * z[l] + g * w[l];
        kicked[0][l] = f_rate * x[l] + g_rate * u[l];
        kicked[1][l] = f_rate * y[l] + g_rate * v[l];
        kicked[2][l] = f_rate * z[l] + g_rate * w[l];
    }
    rows.add(first, &moved, &kicked);
    done[first..first + N].copy_from_slice(&held);
    held.iter().filter(|&&held| held != 0.0).count()
}

/// Coefficients of Stumpff's c2 and c3, without their signs.
const SERIES: [[f64; 7]; 2] = [
    [
        0.5,
        1.0 / 24.0,
        1.0 / 720.0,
        1.0 / 40_320.0,
        1.0 / 3_628_800.0,
        1.0 / 479_001_600.0,
        1.0 / 87_178_291_200.0,
    ],
    [
        1.0 / 6.0,
        1.0 / 120.0,
        1.0 / 5_040.0,
        1.0 / 362_880.0,
        1.0 / 39_916_800.0,
        1.0 / 6_227_020_800.0,
        1.0 / 1_307_674_368_000.0,
    ],
];

/// A series of Stumpff for |q| <= [`LARGEST_ARGUMENT`]: the first term left out is below 1e-17 of it. Terms are taken in pairs, which
/// don't wait for each other.
#[inline]
fn series(c: &[f64; 7], q: f64) -> f64 {
    let q2 = q * q;
    let high = (c[4] - q * c[5]) + q2 * c[6];
    low(c, q, q2) + (q2 * q2) * high
}

/// Its first four terms.
#[inline]
fn low(c: &[f64; 7], q: f64, q2: f64) -> f64 {
    (c[0] - q * c[1]) + q2 * (c[2] - q * c[3])
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::conic::{Elements, state_from_elements};
    use crate::math::float::pow;
    use proptest::prelude::*;
    use std::f64::consts::TAU;

    const GM: f64 = 1.327_124_4e20;

    /// One body; whether it went the short way.
    fn moved(pos: Vector3<f64>, vel: Vector3<f64>, h_s: f64) -> (Vector3<f64>, Vector3<f64>, bool) {
        let mut rows = Rows::of(1);
        rows.set(0, pos.into(), vel.into());
        let mut done = [0.0];
        drift(h_s, 0.0, &[GM], &mut rows, &mut done).unwrap();
        (Vector3::from(rows.pos_of(0)), Vector3::from(rows.vel_of(0)), done[0] != 0.0)
    }

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(2000))]

        #[test]
        fn every_conic_goes_as_the_search_has_it(
            near in -12.0..1.0_f64, kind in 0..3, from in -2.5..2.5_f64, share in -0.08..0.08_f64, far: bool,
        ) {
            let k = pow(10.0, near);
            let eccentricity = match kind { 0 => (1.0 - k).max(0.0), 1 => 1.0, _ => 1.0 + k };
            let q: f64 = 5e10;
            let orbit = Elements {
                periapsis_m: q, eccentricity, inclination_rad: 0.3, node_rad: 1.0, argument_rad: 2.0, true_anomaly_rad: from,
            };
            if !orbit.distance_at_m(from).is_some_and(|r| r < 1e13) { return Ok(()); }
            // Up to a twelfth of the period that belongs to periapsis; or far beyond.
            let h_s = share * TAU * (q * q * q / GM).sqrt() * if far { 60.0 } else { 1.0 };
            let (pos, vel) = state_from_elements(&orbit, GM).unwrap();
            let (got, got_vel, short) = moved(pos, vel, h_s);
            // Not where a step is longer, nor on the straighter hyperbolas.
            prop_assert!(short || far || kind > 0 || share.abs() > 0.04, "{orbit:?}: the short way was not taken");
            let (want, want_vel) = conic::propagate(pos, vel, GM, h_s).unwrap();
            // Ten roundings, grown by the ratios of the distances.
            let grown = (pos.norm() / q).max(1.0) * (want.norm() / q).max(1.0) * (1.0 + eccentricity);
            let tol = 1e-14 * if far { 10.0 * grown } else { 1.0 };
            prop_assert!((got - want).norm() < tol * want.norm(), "{orbit:?}: {:e}", (got - want).norm() / want.norm());
            prop_assert!((got_vel - want_vel).norm() < tol * want_vel.norm(), "{orbit:?}: {:e}", (got_vel - want_vel).norm() / want_vel.norm());
        }
    }

    #[test]
    fn bodies_side_by_side_go_as_each_alone() {
        let mut rows = Rows::of(7);
        let mut alone = Vec::new();
        for body in 0..7_u8 {
            let r = 6e10 * (1.0 + f64::from(body));
            let (pos, vel) = (Vector3::new(r, 0.1 * r, 0.0), Vector3::new(0.0, 0.9 * (GM / r).sqrt(), 3e3));
            rows.set(usize::from(body), pos.into(), vel.into());
            // The fifth falls almost straight, and has to be searched for.
            let vel = if body == 4 { vel * 1e-3 } else { vel };
            rows.set(usize::from(body), pos.into(), vel.into());
            alone.push(moved(pos, vel, 8.0 * 86_400.0));
        }
        let mut done = [0.0; 7];
        drift(8.0 * 86_400.0, 0.0, &[GM; 7], &mut rows, &mut done).unwrap();
        for (body, (pos, vel, _)) in alone.into_iter().enumerate() {
            assert_eq!((rows.pos_of(body), rows.vel_of(body)), (pos.into(), vel.into()), "body {body}");
        }
    }

    /// Brouwer (1937, AJ 46, 149): without a bias the error of the energy grows as the square root of the steps.
    #[test]
    fn a_million_steps_lose_energy_by_a_random_walk_only() {
        let r: f64 = 4.6e10;
        let mut rows = Rows::of(1);
        rows.set(0, [r, 0.0, 0.0], [0.0, (1.2 * GM / r).sqrt(), 1e3]);
        let energy = |rows: &Rows| {
            let (pos, vel) = (Vector3::from(rows.pos_of(0)), Vector3::from(rows.vel_of(0)));
            0.5 * vel.norm_squared() - GM / pos.norm()
        };
        let start = energy(&rows);
        let mut done = [0.0];
        for _ in 0..1_000_000 {
            drift(4.0 * 86_400.0, 0.0, &[GM], &mut rows, &mut done).unwrap();
        }
        let change = energy(&rows) / start - 1.0;
        // A thousand times a rounding or three; a bias of one in ten of them would be 3e-11.
        assert!(change.abs() < 1e-12, "{change:e}");
    }
}
