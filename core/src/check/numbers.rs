//! What hangs on the last digits: each number that bears on the motion is changed by one part in 1e9, in the text, and the show
//! integrated anew.
//!
//! Pictures of each beat are compared at the same model times, from its start to its end; of swarms, some tracers. The work is bounded:
//! where a file states more numbers than there is time for, the first are tried. What is not tried is named, with the reason.

use super::finding::{Finding, Topic, Weight};
use super::report::{BeatReport, Encounter, LeftOut, Lever, Mover, Report, Shift, Why};
use super::sample::{Places, Sample};
use super::sight::{self, called};
use super::stated::{self, Found};
use super::trial::{PIECES, TRACER_STEPS, Trial};
use crate::math::counts::number_from;
use crate::resolve::Solar;
use crate::scenario::ChangeTime;
use crate::scenario::edit::Document;
use crate::show::Show;
use crate::units::number;

/// By what part each number is changed.
const PART: f64 = 1e-9;

/// Pairs of bodies worked out in all steps of all runs, at most: some seconds on one core.
const MOST_PAIR_STEPS: f64 = 4e7;

/// A step of a tracer for each body that pulls on it, in pairs of bodies in a step of theirs. Measured: the tables in `core/benches/README.md`.
const TRACER_STEP: f64 = 0.05;

/// To sow a tracer anew, in the same. Measured: a microsecond.
const SOWN: f64 = 10.0;

/// From here on, px, the sixth digit of a number, which few authors state, moves the picture by ten pixels. A planet that is ahead
/// after hundreds of rounds stays far below.
const WARNED_PX: f64 = 0.01;

/// What moves by fewer times the part of its distance by which the number was changed does not hang on digits: it is the view that is close to
/// something far from its centre, such as the ground.
const GROWN: f64 = 10.0;

/// Up to here, px, larger changes do as much more; beyond, the body is simply elsewhere.
const FAR_PX: f64 = 1.0;

/// An encounter hangs on the sixth digit, the last that authors state as a rule, when the gap is less than so many times what one
/// part in 1e9 does.
const SIXTH_DIGIT: f64 = 1000.0;

/// What to do about a number on whose last digits a show hangs.
const KEEP: &str = "the show is the same from this file on every computer, but change no digit of it, and don't tell it as the one way it must go; \
                    or end the beat sooner";

/// The runs on their way.
#[derive(Debug)]
pub(super) struct Numbers {
    document: Document,
    /// The solar system at the date, once a number is tried.
    solar: Option<Solar>,
    found: Vec<Found>,
    /// The next to be tried, and how many there is time for; not known while the tracers are being looked at.
    next: usize,
    to_try: Option<usize>,
    /// Some tracers of the show itself, and where they are at each instant of each beat.
    tracers: Sample,
    places: Vec<Vec<Places>>,
    current: Option<Trial>,
    levers: Vec<Lever>,
    left_out: Vec<(usize, Why)>,
}

impl Numbers {
    /// Finds the numbers in the text that a show was made from.
    pub(super) fn new(text: &str, show: &Show) -> Self {
        // The show was read from it.
        let document = Document::parse(text).unwrap_or_default();
        let mut found = stated::all(&document, &show.scenario);
        // Those that are 0 come last: none of them is tried.
        found.sort_by_key(|one| one.at.value == 0.0);
        Self {
            document,
            solar: None,
            found,
            next: 0,
            to_try: None,
            tracers: Sample::new(&show.initial),
            places: Vec::new(),
            current: None,
            levers: Vec::new(),
            left_out: Vec::new(),
        }
    }

    /// Goes on by about the time of so many steps of the integrator. True once all numbers have been tried.
    pub(super) fn work(&mut self, show: &Show, encounters: &mut [Encounter], max_steps: usize) -> bool {
        let Some(to_try) = self.to_try else {
            if self.look(show, max_steps.saturating_mul(TRACER_STEPS)) {
                self.to_try = Some(self.affordable(show));
            }
            return false;
        };
        let Some(found) = self.found.get(self.next).filter(|_| self.next < to_try) else {
            let why = |one: &Found| if one.at.value == 0.0 { Why::Zero } else { Why::NoTime };
            self.left_out.extend(self.found.iter().enumerate().skip(to_try).map(|(i, one)| (i, why(one))));
            return true;
        };
        let Some(trial) = &mut self.current else {
            let solar = self.solar.get_or_insert_with(|| Solar::of(&show.scenario));
            self.current = start(&self.document, found, show, solar);
            if self.current.is_none() {
                self.left_out.push((self.next, Why::Alone));
                self.next += 1;
            }
            return false;
        };
        match trial.work(show, &self.places, encounters, max_steps) {
            Ok(false) => return false,
            Ok(true) => {
                let shifts = self.current.take().map(Trial::into_shifts).unwrap_or_default();
                self.levers.push(Lever { number: found.number.clone(), shifts });
            }
            Err(wrong) => self.left_out.push((self.next, Why::Breaks(wrong))),
        }
        self.current = None;
        self.next += 1;
        false
    }

    /// Looks where some tracers are in the show. True once that is known.
    fn look(&mut self, show: &Show, tracer_steps: usize) -> bool {
        let (from_s, until_s) = sight::shown_s(show);
        if show.initial.swarms.is_empty() {
            return true;
        }
        if !self.tracers.grow(&show.ephemeris, [until_s, from_s], tracer_steps) {
            return false;
        }
        let most = usize::try_from(PIECES).map_or(usize::MAX, |pieces| pieces + 1);
        if self.places.last().is_none_or(|pieces| pieces.len() >= most) {
            self.places.push(Vec::new());
        }
        let Some(seen) = sight::beats(show).into_iter().nth(self.places.len() - 1) else { return true };
        let Some(pieces) = self.places.last_mut() else { return true };
        let piece = u32::try_from(pieces.len()).unwrap_or(PIECES);
        let t_s = seen.model_s(seen.at(piece, PIECES));
        pieces.extend(self.tracers.places(&show.ephemeris, &seen, t_s, tracer_steps));
        false
    }

    /// How many numbers there is time for.
    fn affordable(&self, show: &Show) -> usize {
        let bodies = number_from(show.initial.bodies.len());
        let steps = number_from(show.ephemeris.forward().len() + show.ephemeris.backward().len());
        // To find when a change is made, all before it is integrated once more.
        let waits = |change: &&crate::scenario::Change| !matches!(change.at, ChangeTime::Time(_));
        let runs = 1.0 + number_from(show.scenario.changes.iter().filter(waits).count());
        let of_bodies = runs * steps * (bodies + 0.5 * bodies * (bodies - 1.0));
        let pulling = number_from(show.initial.bodies.iter().filter(|body| body.gm_m3_s2 > 0.0).count());
        let sown = number_from(show.initial.swarms.iter().map(|swarm| swarm.pos.len()).sum());
        let one = of_bodies + TRACER_STEP * pulling * self.tracers.steps() + SOWN * sown;
        let stated = self.found.iter().filter(|found| found.at.value != 0.0).count();
        let fits = (0..stated).take_while(|&n| number_from(n + 1) * one <= MOST_PAIR_STEPS).count();
        fits.max(1).min(stated)
    }

    /// Share of the numbers tried, 0 to 1.
    pub(super) fn fraction(&self) -> f64 {
        self.to_try.map_or(0.0, |to_try| number_from(self.next) / number_from(to_try.max(1)))
    }

    /// What came of them goes to the report: the worst first.
    pub(super) fn finish(&mut self, show: &Show, report: &mut Report) {
        report.levers = self.rank(show, &mut report.beats, &mut report.findings);
        self.left_out.sort_by_key(|(index, _)| self.found.get(*index).map(|found| found.number.place));
        let mut breaks: Vec<(&Found, String)> = Vec::new();
        for (index, why) in std::mem::take(&mut self.left_out) {
            let Some(found) = self.found.get(index) else { continue };
            if let Why::Breaks(wrong) = &why {
                breaks.push((found, wrong.clone()));
            }
            report.left_out.push(LeftOut { number: found.number.clone(), why });
        }
        let Some((Found { number, .. }, wrong)) = breaks.first() else { return };
        let others = match breaks.len() - 1 {
            0 => String::new(),
            1 => " or another number".to_owned(),
            more => format!(" or {more} other numbers"),
        };
        report.findings.push(Finding {
            weight: Weight::Warning,
            topic: Topic::Sensitivity,
            place: number.place,
            wrong: format!(
                "with {} ({}){others} changed by a billionth the show can't be given: {wrong}",
                number.called(show),
                number.stated
            ),
            remedy: KEEP.to_owned(),
        });
    }

    fn rank(&mut self, show: &Show, beats: &mut [BeatReport], findings: &mut Vec<Finding>) -> Vec<Lever> {
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
            && grown(show, beat, &shift) > GROWN
        {
            findings.push(Finding {
                weight: Weight::Warning,
                topic: Topic::Sensitivity,
                place: show.scenario.beats.get(beat).map_or_else(Default::default, |beat| beat.place),
                wrong: format!(
                    "{} ({}), changed by a billionth, moves {} by {} px in {}{}",
                    lever.number.called(show),
                    lever.number.stated,
                    shift.of.called(&show.initial),
                    number::with_digits(shift.px, 2),
                    called(beat),
                    if shift.px < FAR_PX { ", and its sixth digit a thousand times as far" } else { "" }
                ),
                remedy: KEEP.to_owned(),
            });
        }
        std::mem::take(&mut self.levers)
    }
}

/// A run with a number changed upwards, or downwards where the file takes no more of it; `None` where it takes neither.
fn start(document: &Document, found: &Found, show: &Show, solar: &Solar) -> Option<Trial> {
    [1.0 + PART, 1.0 - PART].into_iter().find_map(|by| {
        let mut changed = document.clone();
        found.at.put(&mut changed, found.at.value * by).ok()?;
        Trial::start(changed.text(), show, solar)
    })
}

/// How many times the part by which the number was changed something moves, in parts of its distance from its primary, or from the barycentre.
fn grown(show: &Show, beat: usize, shift: &Shift) -> f64 {
    let far_m = match shift.of {
        Mover::Body(body) => {
            let t_s = sight::beats(show).get(beat).map_or(0.0, |seen| seen.model_s(shift.beat_s));
            let primary = show.initial.bodies.get(body.0).and_then(|one| one.primary);
            let state = match primary {
                Some(primary) => show.ephemeris.relative(body, primary, t_s),
                None => show.ephemeris.state(body, t_s),
            };
            state.map_or(0.0, |state| state.pos.norm())
        }
        Mover::Tracer(swarm) => {
            let places = show.initial.swarms.get(swarm.0).map_or(&[][..], |swarm| &swarm.pos);
            places.iter().map(|place| place.norm()).fold(0.0, f64::max)
        }
    };
    shift.m / (PART * far_m)
}

/// Encounters that hang on digits that authors don't state.
pub(super) fn close_calls(show: &Show, encounters: &[Encounter], findings: &mut Vec<Finding>) {
    for one in encounters {
        // Within the bodies there is a contact, or none is wanted.
        if one.gap_m <= 0.0 || one.gap_m > SIXTH_DIGIT * one.moved_m {
            continue;
        }
        findings.push(Finding {
            weight: Weight::Warning,
            topic: Topic::Encounter,
            place: show.scenario.beats.get(one.beat).map_or_else(Default::default, |beat| beat.place),
            wrong: format!(
                "{} misses {} by {} km in {}, and the sixth digit of a stated number moves that by {} km",
                show.initial.name(one.body),
                show.initial.name(one.other),
                number::with_digits(one.gap_m / 1e3, 3),
                called(one.beat),
                number::with_digits(SIXTH_DIGIT * one.moved_m / 1e3, 3)
            ),
            remedy: "let them pass farther apart, or state the number in full as `aim` writes it".to_owned(),
        });
    }
}

#[cfg(test)]
mod tests {
    use super::super::tests::{QUIET, REACH};
    use super::*;
    use crate::show::Rehearsal;

    /// A show of Quiet's bodies, so many moons and so many days.
    fn show(moons: u32, days: u32) -> (String, Show) {
        let moons: String = (0..moons)
            .map(|moon| {
                let (size, at) = (300_000 + 9_000 * moon, 17 * moon);
                format!(
                    "[[body]]\nname = \"M{moon}\"\nmass = \"1e18 kg\"\norbit = {{ around = \"Brae\", semi-major = \"{size} km\", eccentricity = 0, anomaly = \"{at} deg\" }}\n"
                )
            })
            .collect();
        let beat = REACH.replace(
            "reach = \"periapsis of Fenn\", at = \"30 s\"",
            &format!("span = \"{days} d\", lasts = \"30 s\""),
        );
        let text = format!("{QUIET}{moons}{beat}");
        let show = Rehearsal::whole(&text).unwrap_or_else(|problems| panic!("{problems:#?}"));
        (text, show)
    }

    #[test]
    fn fewer_numbers_are_tried_the_dearer_a_run_is() {
        let tried = |moons, days| {
            let (text, show) = show(moons, days);
            let numbers = Numbers::new(&text, &show);
            (numbers.affordable(&show), numbers.found.len())
        };
        assert_eq!(tried(0, 30), (10, 10), "all of a small one");
        let [(short, _), (long, _)] = [tried(40, 20), tried(40, 200)];
        assert!(long < short && long > 0, "{long} and {short}");
    }

    #[test]
    fn numbers_beyond_what_there_is_time_for_are_named() {
        let (text, show) = show(0, 30);
        let mut numbers = Numbers::new(&text, &show);
        numbers.to_try = Some(8);
        while !numbers.work(&show, &mut [], usize::MAX) {}
        let mut report = Report { beats: vec![BeatReport::default()], ..Report::default() };
        numbers.finish(&show, &mut report);
        assert_eq!(report.levers.len(), 8);
        let left: Vec<String> = report.left_out.iter().map(|one| one.number.called(&show)).collect();
        assert_eq!(left, ["orbit.eccentricity of Fenn", "orbit.before-periapsis of Fenn"]);
        assert!(report.left_out.iter().all(|one| one.why == Why::NoTime));
    }
}
