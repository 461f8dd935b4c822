//! Kepler's second law (Astronomia nova, 1609): equal areas in equal times, on unperturbed orbits of every closed shape.

use fallaround_core::sweep::area_m2;
use fallaround_tests::{assert_close, body, paths, scenario, start};
use std::f64::consts::{PI, TAU};

/// Relative. The integration is good to some 1e-14; what is asked for is 1e-12.
const EQUAL: f64 = 1e-12;

#[test]
fn equal_times_cover_equal_areas_from_the_circle_to_the_long_comet() {
    for e in [0.0_f64, 0.1, 0.3, 0.5, 0.7, 0.88, 0.95, 0.99] {
        let initial = start(&scenario(&format!(
            "[[body]]\nname = \"Orla\"\nmass = \"0.9 Sun masses\"\n\
             [[body]]\nname = \"Fenn\"\norbit = {{ around = \"Orla\", semi-major = \"3 au\", eccentricity = {e}, inclination = \"20 deg\", node = \"70 deg\", argument = \"30 deg\", anomaly = \"100 deg\" }}\n"
        )));
        let (orla, fenn) = (body(&initial, "Orla"), body(&initial, "Fenn"));
        let a = 3.0 * 149_597_870_700.0;
        let period = TAU * (a * a * a / initial.bodies[orla.0].gm_m3_s2).sqrt();
        let eph = paths(&initial, 0.0, 2.0 * period);
        let sector = period / 24.0;
        // The areal velocity of the ellipse: its whole area in one period.
        let want = PI * a * a * (1.0 - e * e).sqrt() / 24.0;
        for k in 0..48_u32 {
            let from = f64::from(k) * sector;
            let got = area_m2(&eph, fenn, orla, from, from + sector).expect("covered");
            assert_close(
                &format!("e {e}, sector {k}: area"),
                got / want,
                1.0,
                EQUAL,
                "of the 24th part of the ellipse",
            );
        }
    }
}
