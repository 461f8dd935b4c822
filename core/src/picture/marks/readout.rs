//! Numbers under a body's name: speed, distance, height, period.

use super::super::scene::Scene;
use super::super::wording::{self, LengthUnit};
use super::super::words::fill;
use super::conic::Osculating;
use crate::scenario::{BodyId, Mark, Readout};

/// Over how many instants of a beat the largest value is looked for.
const LOOKS: u32 = 48;

/// A read-out of a beat, with what is known once for the whole beat so that digits stand still.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Reading {
    /// Which number.
    pub what: Readout,
    /// Of which body.
    pub body: BodyId,
    /// Relative to which.
    pub about: BodyId,
    /// Relative to which, as the mark says it.
    pub stated: Option<BodyId>,
    /// The largest value over the beat (a period: of all in the beat), m, m/s or s: unit and decimals follow from it.
    pub largest: f64,
}

/// The read-outs of a beat.
pub fn of_beat(scene: &Scene<'_>) -> Vec<Reading> {
    let marks = scene.beat.marks.iter();
    let mut readings: Vec<Reading> = marks
        .filter_map(|mark| {
            let Mark::Readout { what, body, about: stated } = *mark else {
                return None;
            };
            let about = stated.or_else(|| scene.primary(body)).filter(|&a| a != body)?;
            let mut reading = Reading { what, body, about, stated, largest: 0.0 };
            for look in 0..=LOOKS {
                let t_s = scene.beat_from_s
                    + (scene.until_s - scene.beat_from_s) * f64::from(look) / f64::from(LOOKS);
                let value = value(scene, &reading, t_s).unwrap_or(0.0).abs();
                if value.is_finite() {
                    reading.largest = reading.largest.max(value);
                }
            }
            Some(reading)
        })
        .collect();
    // Periods are there to be compared: one unit for all.
    let periods = readings.iter().filter(|r| r.what == Readout::Period).map(|r| r.largest);
    let longest = periods.fold(0.0, f64::max);
    for reading in readings.iter_mut().filter(|r| r.what == Readout::Period) {
        reading.largest = longest;
    }
    readings
}

fn value(scene: &Scene<'_>, reading: &Reading, t_s: f64) -> Option<f64> {
    let state = scene.show.ephemeris.relative(reading.body, reading.about, t_s)?;
    match reading.what {
        Readout::Speed => Some(state.vel.norm()),
        Readout::Distance => Some(state.pos.norm()),
        Readout::Height => {
            let radius = scene.show.initial.bodies.get(reading.about.0)?.radius_m;
            Some(state.pos.norm() - radius)
        }
        Readout::Period => Osculating::of(scene, reading.body, reading.stated).and_then(|o| o.period_s()),
    }
}

/// What a read-out says at the scene's instant; `None` where there is nothing to say.
pub fn words(scene: &Scene<'_>, reading: &Reading, in_au: bool) -> Option<String> {
    let (largest, l) = (reading.largest, scene.language);
    match reading.what {
        Readout::Speed => {
            Some(scene.speed_unit(reading.body).say(l, value(scene, reading, scene.t_s)?, largest))
        }
        Readout::Distance => {
            let unit = LengthUnit::upto(largest, in_au);
            Some(unit.say(l, value(scene, reading, scene.t_s)?, largest))
        }
        Readout::Height => {
            // A body at rest on the ground is at height 0, not at a rounding error below it.
            let height = value(scene, reading, scene.t_s)?;
            let height = if height.abs() < 1e-6 * largest.max(1.0) { 0.0 } else { height };
            let unit = LengthUnit::upto(largest, in_au);
            Some(fill(l.up, &unit.say(l, height, largest)))
        }
        Readout::Period => {
            let conic = Osculating::of(scene, reading.body, reading.stated)?;
            Some(conic.period_s().map_or_else(|| l.never_returns.into(), |p| wording::span(l, p, largest)))
        }
    }
}
