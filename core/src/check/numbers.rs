//! What hangs on the last digits: each stated number is changed by one part in 1e9, in the text, and the show integrated anew.
//!
//! Pictures of each beat are compared at the same model times, from its start to its end. The work is bounded: where a file states more
//! numbers than there is time for, those of the first bodies are tried, and the report says how many.

use super::finding::{Finding, Topic, Weight};
use super::report::{BeatReport, Encounter, Lever, Shift};
use super::sight::{self, Seen, called, name};
use crate::Vector3;
use crate::ephemeris::{Ephemeris, Propagation, SHOW_BYTES};
use crate::initial::InitialState;
use crate::resolve::resolve;
use crate::scenario::edit::{Document, Path, Root, Value};
use crate::scenario::{self, BodyId, QUANTITIES};
use crate::show::Show;
use crate::units::number;

/// By what part each number is changed.
const PART: f64 = 1e-9;

/// Pieces of a beat between the instants compared.
const PIECES: u32 = 16;

/// Pairs of bodies worked out in all steps of all runs, at most: some seconds on one core.
const MOST_PAIR_STEPS: f64 = 4e7;

/// From here on, px, the sixth digit of a number, which few authors state, moves the picture by ten pixels. A planet that is ahead
/// after hundreds of rounds stays far below.
const WARNED_PX: f64 = 0.01;

/// Up to here, px, larger changes do as much more; beyond, the body is simply elsewhere.
const FAR_PX: f64 = 1.0;

/// An encounter hangs on the sixth digit, the last that authors state as a rule, when the gap is less than so many times what one
/// part in 1e9 does.
const SIXTH_DIGIT: f64 = 1000.0;

/// The runs on their way.
#[derive(Debug)]
pub(super) struct Numbers {
    /// The numbers left to be tried, the next one last.
    left: Vec<Number>,
    stated: usize,
    tried: usize,
    /// How many will be.
    to_try: usize,
    current: Option<Trial>,
    levers: Vec<Lever>,
}

/// A stated number, and the text that has it changed.
#[derive(Debug)]
struct Number {
    body: BodyId,
    quantity: &'static str,
    stated: String,
    text: String,
}

/// One run with a changed number.
#[derive(Debug)]
struct Trial {
    number: Number,
    propagation: Propagation,
    ends_s: Vec<f64>,
}

impl Numbers {
    /// Finds the numbers in the text that a show was made from.
    pub(super) fn new(text: &str, show: &Show) -> Self {
        let mut left = stated(text, show);
        let stated = left.len();
        let bodies = count(show.initial.bodies.len());
        let steps = count(show.ephemeris.forward().len() + show.ephemeris.backward().len());
        let one = steps * (bodies + 0.5 * bodies * (bodies - 1.0));
        let fits = (0..stated).take_while(|&n| count(n + 1) * one <= MOST_PAIR_STEPS).count();
        let to_try = fits.max(1).min(stated);
        left.truncate(to_try);
        left.reverse();
        Self { left, stated, tried: 0, to_try, current: None, levers: Vec::new() }
    }

    /// Integrates on. True once all numbers have been tried.
    pub(super) fn work(&mut self, show: &Show, encounters: &mut [Encounter], max_steps: usize) -> bool {
        let Some(trial) = &mut self.current else {
            let Some(number) = self.left.pop() else { return true };
            self.current = Trial::start(number, show);
            self.tried += usize::from(self.current.is_some());
            return false;
        };
        if let Some(&end_s) = trial.ends_s.last() {
            match trial.propagation.advance(end_s, max_steps) {
                Ok(false) => {}
                Ok(true) => drop(trial.ends_s.pop()),
                // What ends early is compared as far as it goes.
                Err(_) => trial.ends_s.clear(),
            }
            return false;
        }
        let run = trial.propagation.ephemeris();
        for encounter in encounters {
            let far = |eph: &Ephemeris| {
                Some(eph.relative(encounter.body, encounter.other, encounter.t_s)?.pos.norm())
            };
            let moved_m = far(&show.ephemeris).zip(far(run)).map_or(0.0, |(a, b)| (a - b).abs());
            encounter.moved_m = encounter.moved_m.max(moved_m);
        }
        let shifts = shifts(show, run);
        if let Some(Trial { number, .. }) = self.current.take() {
            let Number { body, quantity, stated, .. } = number;
            self.levers.push(Lever { body, quantity: quantity.to_owned(), stated, shifts });
        }
        false
    }

    /// Share of the numbers tried, 0 to 1.
    pub(super) fn fraction(&self) -> f64 {
        count(self.tried) / count(self.to_try.max(1))
    }

    /// How many numbers are stated, and how many were tried.
    pub(super) const fn counts(&self) -> [usize; 2] {
        [self.stated, self.tried]
    }

    /// What came of them, the worst first.
    pub(super) fn rank(
        &mut self,
        show: &Show,
        beats: &mut [BeatReport],
        findings: &mut Vec<Finding>,
    ) -> Vec<Lever> {
        let px = |lever: &Lever| lever.worst().map_or(0.0, |(_, shift)| shift.px);
        self.levers.sort_by(|a, b| px(b).total_cmp(&px(a)));
        for (beat, report) in beats.iter_mut().enumerate() {
            let at = |lever: &Lever| lever.shifts.get(beat).copied().flatten().map_or(-1.0, |shift| shift.px);
            report.lever = (0..self.levers.len())
                .filter(|&lever| at(&self.levers[lever]) >= 0.0)
                .max_by(|&a, &b| at(&self.levers[a]).total_cmp(&at(&self.levers[b])).then(b.cmp(&a)));
        }
        if let Some(lever) = self.levers.first()
            && let Some((beat, shift)) = lever.worst().filter(|(_, shift)| shift.px > WARNED_PX)
        {
            let scenario = &show.scenario;
            findings.push(Finding {
                weight: Weight::Warning,
                topic: Topic::Sensitivity,
                place: scenario.beats.get(beat).map_or_else(Default::default, |beat| beat.place),
                wrong: format!(
                    "a billionth more of {} of {} ({}) moves {} by {} px in {}{}",
                    lever.quantity,
                    name(scenario, lever.body),
                    lever.stated,
                    name(scenario, shift.body),
                    number::with_digits(shift.px, 2),
                    called(beat),
                    if shift.px < FAR_PX { ", and its sixth digit a thousand times as far" } else { "" }
                ),
                remedy: "the show is the same from this file on every computer, but change no digit of it, and don't tell it as \
                         the one way it must go; or end the beat sooner"
                    .to_owned(),
            });
        }
        std::mem::take(&mut self.levers)
    }
}

/// Encounters that hang on digits that authors don't state.
pub(super) fn close_calls(show: &Show, encounters: &[Encounter], findings: &mut Vec<Finding>) {
    let scenario = &show.scenario;
    for one in encounters {
        // Within the bodies there is a contact, or none is wanted.
        if one.gap_m <= 0.0 || one.gap_m > SIXTH_DIGIT * one.moved_m {
            continue;
        }
        findings.push(Finding {
            weight: Weight::Warning,
            topic: Topic::Encounter,
            place: scenario.beats.get(one.beat).map_or_else(Default::default, |beat| beat.place),
            wrong: format!(
                "{} misses {} by {} km in {}, and the sixth digit of a stated number moves that by {} km",
                name(scenario, one.body),
                name(scenario, one.other),
                number::with_digits(one.gap_m / 1e3, 3),
                called(one.beat),
                number::with_digits(SIXTH_DIGIT * one.moved_m / 1e3, 3)
            ),
            remedy: "let them pass farther apart, or state the number in full as `aim` writes it".to_owned(),
        });
    }
}

impl Trial {
    /// `None` where nothing can start from the changed number.
    fn start(number: Number, show: &Show) -> Option<Self> {
        let scenario = scenario::parse(&number.text).scenario?;
        let mut initial: InitialState = resolve(&scenario).ok()?;
        // Those that wait for a beat or an event are made when the show makes them.
        initial.changes.clone_from(&show.initial.changes);
        let (from_s, until_s) = sight::shown_s(show);
        let mut ends_s = vec![until_s.max(0.0)];
        if from_s < 0.0 {
            ends_s.insert(0, from_s);
        }
        let propagation = Propagation::with_most_bytes(&initial, 2 * SHOW_BYTES);
        Some(Self { number, propagation, ends_s })
    }
}

/// The numbers that a file states of its bodies and that a change of a part changes.
fn stated(text: &str, show: &Show) -> Vec<Number> {
    let Ok(document) = Document::parse(text) else { return Vec::new() };
    let gm: (&str, &[&str]) = ("gm", &["gm"]);
    let radius: (&str, &[&str]) = ("radius", &["radius"]);
    let all = || QUANTITIES.iter().map(|(name, keys, _)| (*name, *keys)).chain([gm, radius]);
    let mut found = Vec::new();
    for (index, body) in show.scenario.bodies.iter().enumerate() {
        for (quantity, keys) in all() {
            let path = Path { root: Root::Body(&body.name), keys };
            let Some((stated, value)) = changed(&document, path) else { continue };
            let mut other = document.clone();
            if other.set(path, value).is_ok() {
                let text = other.to_text();
                found.push(Number { body: BodyId(index), quantity, stated, text });
            }
        }
    }
    found
}

/// What stands at a path, and the same with its number changed; `None` where there is none, or it is 0.
fn changed(document: &Document, path: Path<'_>) -> Option<(String, Value)> {
    if let Some(stated) = document.get_text(path) {
        let (value, unit) = number::leading(&stated).ok()?;
        let text = format!("{} {unit}", number::shortest(value * (1.0 + PART)));
        return (value != 0.0).then_some((stated, Value::Text(text)));
    }
    let stated = document.get(path)?;
    let value: f64 = stated.trim().parse().ok()?;
    (value != 0.0).then_some((stated, Value::Number(value * (1.0 + PART))))
}

/// How far the picture of each beat moves at most, of what is in it before or after.
fn shifts(show: &Show, run: &Ephemeris) -> Vec<Option<Shift>> {
    sight::beats(show).iter().map(|seen| worst(seen, run)).collect()
}

fn worst(seen: &Seen<'_>, run: &Ephemeris) -> Option<Shift> {
    let at = |eph: &Ephemeris, body: BodyId, t_s| eph.state(body, t_s).map(|state| state.pos);
    let about = seen.beat.view.centre.about;
    let first = &seen.show.ephemeris;
    let mut worst: Option<Shift> = None;
    for beat_s in seen.instants(PIECES) {
        let t_s = seen.model_s(beat_s);
        // A run that ended early stands at its end from then on: that is no shift.
        if t_s > run.until_s() || t_s < run.from_s() {
            continue;
        }
        let camera = seen.camera(t_s);
        let centre = |eph| about.map_or(Some(Vector3::zeros()), |body| at(eph, body, t_s));
        let Some(centres) = centre(first).zip(centre(run)) else { continue };
        for body in seen.bodies(t_s) {
            let Some(places) = at(first, body, t_s).zip(at(run, body, t_s)) else { continue };
            let (px, m) = seen.apart(&camera, places.into(), centres.into());
            let is_seen = seen.holds(&camera, places.0) || seen.holds(&camera, places.1);
            if is_seen && worst.is_none_or(|worst| px > worst.px) {
                worst = Some(Shift { body, beat_s, px, m });
            }
        }
    }
    worst
}

fn count(n: usize) -> f64 {
    u32::try_from(n).map_or(f64::MAX, f64::from)
}
