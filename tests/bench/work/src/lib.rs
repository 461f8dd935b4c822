//! What the side-by-side bench runs, natively and in wasm alike: the same numbers in, the same bits out.

#[path = "../../../../core/benches/common/solar_system.rs"]
mod solar_system;

pub mod run;
pub mod starts;
pub mod swarm;

use fallaround_core::constants::{DAY_S, YEAR_S};
use wasm_bindgen::prelude::wasm_bindgen;

/// What came of a run.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Outcome {
    /// How many steps it took; of a swarm, of all tracers together.
    pub steps: f64,
    /// Largest relative error of the energy on the way; 0 where there is none to be kept.
    pub energy_error: f64,
    /// Where the bodies are in the end, three numbers for each; of a swarm, see [`Setting::told`].
    pub pos: Vec<f64>,
}

impl Outcome {
    /// As numbers alone: steps, energy error, positions.
    #[must_use]
    pub fn flat(&self) -> Vec<f64> {
        let mut flat = vec![self.steps, self.energy_error];
        flat.extend(&self.pos);
        flat
    }

    /// From numbers in the order of [`Outcome::flat`].
    #[must_use]
    pub fn of(flat: &[f64]) -> Option<Self> {
        let [steps, energy_error, pos @ ..] = flat else { return None };
        Some(Self { steps: *steps, energy_error: *energy_error, pos: pos.to_vec() })
    }
}

/// The work, by the names that Node is told.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Work {
    /// The Sun and eight planets, a thousand years by the Gauss-Radau method.
    Planets,
    /// The same by the Wisdom-Holman method.
    LongPlanets,
    /// The Sun, the planets and the Moon, a hundred years.
    Moon,
    /// The Pythagorean problem to t = 70.
    Pythagorean,
    /// A hundred orbits of a comet with eccentricity 0.9995.
    Comet,
    /// Ten thousand tracers among the Sun and eight planets, ten years; their bodies' own paths are not counted.
    Swarm,
}

impl Work {
    /// All of it.
    pub const ALL: [Self; 6] =
        [Self::Planets, Self::LongPlanets, Self::Moon, Self::Pythagorean, Self::Comet, Self::Swarm];

    /// Until which time, in the units of its start.
    #[must_use]
    pub fn until(self) -> f64 {
        match self {
            Self::Planets | Self::LongPlanets => 1000.0 * YEAR_S,
            Self::Moon => 100.0 * YEAR_S,
            Self::Pythagorean => 70.0,
            Self::Comet => 100.0 * starts::comet_period_s(),
            Self::Swarm => 10.0 * YEAR_S,
        }
    }

    /// Does it to a time, in steps that are `share` of the usual ones. `setting` is what [`Work::prepare`] gave.
    #[must_use]
    pub fn run(self, setting: &mut Setting, until: f64, share: f64) -> Outcome {
        match (self, setting) {
            (Self::LongPlanets, Setting::Bodies(initial)) => {
                run::wisdom_holman(initial, until, 4.0 * share * DAY_S)
            }
            (_, Setting::Bodies(initial)) => run::gauss_radau(initial, until, share),
            (_, Setting::Swarm(swarm)) => swarm.run(until),
        }
    }

    /// What is there before the clock starts.
    #[must_use]
    pub fn prepare(self) -> Setting {
        match self {
            Self::Planets | Self::LongPlanets => Setting::Bodies(starts::planets()),
            Self::Moon => Setting::Bodies(starts::planets_and_moon()),
            Self::Pythagorean => Setting::Bodies(starts::pythagorean()),
            Self::Comet => Setting::Bodies(starts::comet()),
            Self::Swarm => Setting::Swarm(Box::new(swarm::Swarm::new(self.until()))),
        }
    }
}

/// What is there before the clock starts.
#[derive(Debug)]
pub enum Setting {
    /// Bodies at their start.
    Bodies(fallaround_core::initial::InitialState),
    /// Tracers at their start, among bodies whose paths are known.
    Swarm(Box<swarm::Swarm>),
}

impl Setting {
    /// Where some of a swarm's tracers are after a run to a time; nothing of bodies, whose outcome says it.
    #[must_use]
    pub fn told(&self, until: f64) -> Vec<f64> {
        match self {
            Self::Bodies(_) => Vec::new(),
            Self::Swarm(swarm) => swarm.told(until),
        }
    }
}

/// One piece of work in Node.
#[wasm_bindgen]
#[derive(Debug)]
pub struct Bench {
    work: Work,
    setting: Setting,
}

#[wasm_bindgen]
impl Bench {
    /// The work of this number in [`Work::ALL`], prepared; of none beyond them.
    #[must_use]
    pub fn prepare(number: usize) -> Option<Self> {
        let work = *Work::ALL.get(number)?;
        Some(Self { work, setting: work.prepare() })
    }

    /// Does it, to its usual time; gives what came of it in the order of [`Outcome::flat`].
    #[must_use]
    pub fn run(&mut self) -> Vec<f64> {
        self.work.run(&mut self.setting, self.work.until(), 1.0).flat()
    }

    /// What [`Setting::told`] tells after the last run.
    #[must_use]
    pub fn told(&self) -> Vec<f64> {
        self.setting.told(self.work.until())
    }
}
