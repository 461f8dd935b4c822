//! Relativity: the turning of orbits, and what the first post-Newtonian order keeps.

use super::*;
use crate::ephemeris::states_at;
use crate::math::float::atan2;
use std::f64::consts::{PI, TAU};

const SUN: f64 = 1.327_124_400_412_794_2e20;
const C: f64 = 299_792_458.0;

/// Direction of periapsis in the plane of the orbit, arcseconds.
fn periapsis_arcsec(pos: Vector3<f64>, vel: Vector3<f64>, gm: f64) -> f64 {
    let eccentric = vel.cross(&pos.cross(&vel)) / gm - pos / pos.norm();
    atan2(eccentric.y, eccentric.x) / PI * 180.0 * 3600.0
}

/// What the periapsis advances by in so many turns, arcseconds.
fn advance_arcsec(turns: f64, gm: f64, a: f64, e: f64) -> f64 {
    turns * 6.0 * PI * gm / (C * C * a * (1.0 - e * e)) / PI * 180.0 * 3600.0
}

/// # Source
/// The advance is 6π GM / (c² a (1 - e²)) a turn (A. Einstein, Sitzungsber. Preuss. Akad. 1915, 831): 42.98″ a century for Mercury.
#[test]
fn relativity_turns_mercurys_ellipse_by_43_arcseconds_a_century() {
    let (a, e) = (5.790_905e10, 0.205_63);
    let speed = (SUN / a * (1.0 + e) / (1.0 - e)).sqrt();
    let mut start =
        initial(vec![body(SUN, [0.0; 3], [0.0; 3]), body(0.0, [a * (1.0 - e), 0.0, 0.0], [0.0, speed, 0.0])]);
    start.forces.relativity = true;
    // 415 turns are a century; at the apsis of the last one the direction of the ellipse is that of the body.
    let period = TAU * (a * a * a / SUN).sqrt();
    let end = states_at(&start, 415.0 * period).unwrap()[1];
    let turned = periapsis_arcsec(end.pos, end.vel, SUN);
    // Within a turn the osculating ellipse swings by a part of one turn's advance, 0.1 arcseconds.
    let want = advance_arcsec(415.0, SUN, a, e);
    near("advance, arcseconds", turned, want, 0.1);
    let century_d = 415.0 * period / 86_400.0;
    near("advance a century, arcseconds", turned * 36_525.0 / century_d, 42.98, 0.1);
}

/// # Source
/// H. P. Robertson, Ann. Math. 39 (1938), 101: two masses turn as one test body in the field of both together.
#[test]
fn two_equal_stars_turn_by_what_both_masses_together_give() {
    let (a, e) = (2e10, 0.4);
    let (gm, turns) = (2.0 * SUN, 100.0);
    let (r, speed) = (a * (1.0 - e), (gm / a * (1.0 + e) / (1.0 - e)).sqrt());
    let mut start = initial(vec![
        body(SUN, [-0.5 * r, 0.0, 0.0], [0.0, -0.5 * speed, 0.0]),
        body(SUN, [0.5 * r, 0.0, 0.0], [0.0, 0.5 * speed, 0.0]),
    ]);
    start.forces.relativity = true;
    let end = states_at(&start, turns * TAU * (a * a * a / gm).sqrt()).unwrap();
    let turned = periapsis_arcsec(end[1].pos - end[0].pos, end[1].vel - end[0].vel, gm);
    let want = advance_arcsec(turns, gm, a, e);
    // The ellipse of the start is off by the same small number GM / (c² a) that the advance is proportional to, some 1e-6 of it, and
    // the osculating direction swings by less than one turn's advance.
    near("advance, arcseconds", turned, want, want / turns);
}

/// Energy and momentum to first post-Newtonian order, with masses as GM.
///
/// # Source
/// L. D. Landau & E. M. Lifshitz, The Classical Theory of Fields (1975), § 106: from the Lagrangian there (eq. 106.17).
fn kept(gms: &[f64], states: &[State]) -> (f64, f64, Vector3<f64>) {
    let (mut newton, mut more) = (0.0, 0.0);
    let mut momentum = Vector3::zeros();
    for (i, (a, gm)) in states.iter().zip(gms).enumerate() {
        let v2 = a.vel.norm_squared();
        newton += 0.5 * gm * v2;
        more += 0.375 * gm * v2 * v2;
        momentum += a.vel * (gm * (1.0 + 0.5 * v2 / (C * C)));
        let mut potential = 0.0;
        for (j, (b, other)) in states.iter().zip(gms).enumerate() {
            if i == j {
                continue;
            }
            let d = a.pos - b.pos;
            let (r, n) = (d.norm(), d / d.norm());
            let pair = gm * other / r;
            potential += other / r;
            newton -= 0.5 * pair;
            more += pair * (1.5 * v2 - 0.25 * (7.0 * a.vel.dot(&b.vel) + n.dot(&a.vel) * n.dot(&b.vel)));
            momentum -= (a.vel + n * n.dot(&a.vel)) * (0.5 * pair / (C * C));
        }
        more += 0.5 * gm * potential * potential;
    }
    (newton, newton + more / (C * C), momentum)
}

#[test]
fn three_stars_keep_the_energy_and_momentum_of_their_order() {
    let gms = [SUN, 0.6 * SUN, 0.3 * SUN];
    let mut start = initial(vec![
        body(gms[0], [0.0; 3], [-1e4, 2e4, 0.0]),
        body(gms[1], [4e9, 0.0, 5e8], [0.0, 1.9e5, 3e4]),
        body(gms[2], [-2e9, 2.2e10, 1e9], [-1.0e5, 1e4, -4e4]),
    ]);
    start.forces.relativity = true;
    let before: Vec<State> = start.bodies.iter().map(|b| State { pos: b.pos, vel: b.vel }).collect();
    let (newton, energy, momentum) = kept(&gms, &before);
    let mut swing = 0.0_f64;
    // A turn of the inner two takes a day, one of the outer a week.
    for step in 1..=40 {
        let after = states_at(&start, 2e4 * f64::from(step)).unwrap();
        let (newton_now, energy_now, momentum_now) = kept(&gms, &after);
        swing = swing.max((newton_now / newton - 1.0).abs());
        // GM / (c² r) is up to 1e-6 here; what is left out is of its square.
        near("energy of first order", energy_now / energy, 1.0, 2e-10);
        let off = (momentum_now - momentum).norm() / (SUN * 1e5);
        assert!(off < 2e-11, "momentum off by {off:e} of a star's");
    }
    assert!(swing > 1e-7, "Newton's energy would not have shown it: {swing:e}");
}
