//! How well the energy is kept: a measure of the integration that needs no second run.

use fallaround_core::integrate::drift;
use fallaround_core::scenario::BodyId;
use fallaround_core::show::Show;

/// At how many instants it is looked at.
const SAMPLES: u32 = 400;

/// Greatest relative deviation of the energy from that at the start, where the model keeps it: with Newton's forces alone,
/// and without contacts and changes.
pub(super) fn error(show: &Show) -> Option<f64> {
    let forces = &show.initial.forces;
    let eph = &show.ephemeris;
    let changed = !eph.contacts().is_empty() || !show.initial.changes.is_empty();
    if forces.relativity || !forces.oblate.is_empty() || !forces.drags.is_empty() || changed {
        return None;
    }
    let gms: Vec<f64> = show.initial.bodies.iter().map(|body| body.gm_m3_s2).collect();
    let energy = |t_s: f64| -> Option<f64> {
        let states: Vec<_> =
            (0..gms.len()).map(|body| eph.state(BodyId(body), t_s)).collect::<Option<_>>()?;
        let pos: Vec<f64> = states.iter().flat_map(|state| <[f64; 3]>::from(state.pos)).collect();
        let vel: Vec<f64> = states.iter().flat_map(|state| <[f64; 3]>::from(state.vel)).collect();
        Some(drift::softened_energy(&gms, forces.softening_m, &pos, &vel))
    };
    let start = energy(0.0)?;
    if start == 0.0 {
        return None; // One massive body, or none: nothing is exchanged.
    }
    let (from_s, until_s) = (eph.from_s(), eph.until_s());
    (0..=SAMPLES)
        .map(|sample| from_s + (until_s - from_s) * f64::from(sample) / f64::from(SAMPLES))
        .map(|t_s| energy(t_s).map(|now| ((now - start) / start).abs()))
        .try_fold(0.0_f64, |worst, one| one.map(|one| worst.max(one)))
}
