//! Sectors: the area that the line from a centre to a body covers, by quadrature of the areal velocity.
//!
//! Nothing is counted in pixels or cut into triangles. In one piece of the ephemeris position and velocity are
//! polynomials of degree 9 and 8, so the areal velocity of a motion in a plane is one of degree 17, which nine points
//! of Gauss integrate exactly.

use crate::ephemeris::{Ephemeris, Track};
use crate::scenario::BodyId;

/// Nodes and weights of Gauss-Legendre quadrature of nine points on 0 to 1: exact to degree 17.
///
/// # Source
/// Roots of the Legendre polynomial P₉, computed to 50 digits; Abramowitz & Stegun, Handbook of Mathematical Functions (1964), 25.4.30.
const NODES: [(f64, f64); 9] = [
    (0.015_919_880_246_186_955_082_2, 0.040_637_194_180_787_205_985_9),
    (0.081_984_446_336_682_102_850_3, 0.090_324_080_347_428_702_029_2),
    (0.193_314_283_649_704_801_345_6, 0.130_305_348_201_467_731_159_4),
    (0.337_873_288_298_095_535_480_7, 0.156_173_538_520_001_420_034_3),
    (0.5, 0.165_119_677_500_629_881_582_3),
    (0.662_126_711_701_904_464_519_3, 0.156_173_538_520_001_420_034_3),
    (0.806_685_716_350_295_198_654_4, 0.130_305_348_201_467_731_159_4),
    (0.918_015_553_663_317_897_149_7, 0.090_324_080_347_428_702_029_2),
    (0.984_080_119_753_813_044_917_8, 0.040_637_194_180_787_205_985_9),
];

/// Area that the line from `about` to `body` covers between two instants, m²; the order of the instants doesn't matter.
///
/// It is the area of the surface itself (half the integral of |r × v|), also where the motion is not in a plane, and whichever way
/// round it goes; the centre may move. `None` where the ephemeris doesn't cover the interval or doesn't have the bodies.
pub fn area_m2(eph: &Ephemeris, body: BodyId, about: BodyId, from_s: f64, until_s: f64) -> Option<f64> {
    let (from_s, until_s) = if from_s <= until_s { (from_s, until_s) } else { (until_s, from_s) };
    let known = body.0 < eph.bodies() && about.0 < eph.bodies();
    // False for NaN too.
    let covered = from_s >= eph.from_s() && until_s <= eph.until_s();
    if !(known && covered) {
        return None;
    }
    let before =
        if from_s < 0.0 { on_track(eph.backward(), body, about, until_s.min(0.0), from_s)? } else { 0.0 };
    let after =
        if until_s > 0.0 { on_track(eph.forward(), body, about, from_s.max(0.0), until_s)? } else { 0.0 };
    Some(before + after)
}

/// The area on one track; `near_s` is the end of the interval nearer to time 0.
fn on_track(track: &Track, body: BodyId, about: BodyId, near_s: f64, far_s: f64) -> Option<f64> {
    let mut sum = 0.0;
    for (start_s, step_s) in track.stretches(&[body.0, about.0], near_s, far_s) {
        let (a, b) = (track.numbers(body.0, start_s, step_s)?, track.numbers(about.0, start_s, step_s)?);
        // Of the very numbers, not of the states, so that nothing of their size is lost twice.
        let mut apart = [0.0; crate::ephemeris::PER_BODY];
        for ((d, a), b) in apart.iter_mut().zip(&a).zip(&b) {
            *d = a - b;
        }
        let part = |t_s: f64| ((t_s - start_s) / step_s).clamp(0.0, 1.0);
        let (from, until) = (part(near_s), part(far_s));
        let mut mean = 0.0;
        for (node, weight) in NODES {
            let state = crate::ephemeris::track::evaluate(&apart, step_s, from + (until - from) * node);
            mean += weight * state.pos.cross(&state.vel).norm();
        }
        sum += 0.5 * mean * ((until - from) * step_s).abs();
    }
    Some(sum)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::Vector3;
    use crate::conic::{Elements, state_from_elements};
    use crate::ephemeris::Propagation;
    use crate::initial::{InitialBody, InitialState};
    use crate::scenario::Surface;
    use std::f64::consts::PI;

    const GM: f64 = 1.327e20;

    fn pair(e: f64, gm_own: f64) -> (Ephemeris, f64, f64) {
        let q = 1.5e11 * (1.0 - e);
        let elements = Elements {
            periapsis_m: q,
            eccentricity: e,
            inclination_rad: 0.5,
            node_rad: 1.0,
            argument_rad: 2.0,
            true_anomaly_rad: 0.4,
        };
        let (pos, vel) = state_from_elements(&elements, GM + gm_own).unwrap();
        let share = gm_own / (GM + gm_own);
        let point = |name: &str, gm_m3_s2: f64, pos: Vector3<f64>, vel: Vector3<f64>| InitialBody {
            name: name.into(),
            gm_m3_s2,
            radius_m: 0.0,
            surface: Surface::Stop,
            primary: None,
            pos,
            vel,
        };
        let bodies = vec![
            point("star", GM, -pos * share, -vel * share),
            point("planet", gm_own, pos * (1.0 - share), vel * (1.0 - share)),
        ];
        let initial = InitialState::of(bodies);
        let period = elements.period_s(GM + gm_own).unwrap();
        let mut propagation = Propagation::new(&initial);
        assert!(propagation.advance(1.1 * period, 100_000).unwrap());
        assert!(propagation.advance(-1.1 * period, 100_000).unwrap());
        let a = elements.semi_major_m();
        (propagation.into_ephemeris(), period, PI * a * a * (1.0 - e * e).sqrt())
    }

    #[test]
    fn a_whole_turn_covers_the_ellipse_about_a_moving_star_too() {
        for e in [0.0, 0.3, 0.8, 0.97] {
            for gm_own in [0.0, 0.2 * GM] {
                let (eph, period, ellipse) = pair(e, gm_own);
                for from in [0.0, -0.3 * period, -period] {
                    let got = area_m2(&eph, BodyId(1), BodyId(0), from, from + period).unwrap();
                    assert!((got / ellipse - 1.0).abs() < 1e-12, "e {e}: {}", got / ellipse - 1.0);
                }
            }
        }
    }

    #[test]
    fn areas_add_up_and_have_no_direction() {
        let (eph, period, _) = pair(0.6, 0.0);
        let area = |from: f64, until: f64| {
            area_m2(&eph, BodyId(1), BodyId(0), from * period, until * period).unwrap()
        };
        let whole = area(-0.7, 0.9);
        assert!((area(-0.7, 0.1234) + area(0.1234, 0.9) - whole).abs() < 1e-13 * whole);
        assert!((area(0.9, -0.7) - whole).abs() < 1e-15 * whole);
        assert!(area(0.3, 0.3).abs() < 1e-15 * whole);
    }

    #[test]
    fn what_is_not_covered_has_no_area() {
        let (eph, period, _) = pair(0.1, 0.0);
        assert_eq!(area_m2(&eph, BodyId(1), BodyId(0), 0.0, 10.0 * period), None);
        assert_eq!(area_m2(&eph, BodyId(1), BodyId(7), 0.0, 1.0), None);
        assert_eq!(area_m2(&eph, BodyId(1), BodyId(0), f64::NAN, 1.0), None);
    }
}
