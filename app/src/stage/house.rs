//! One running show: its clock, its pictures, and the blackout over them.

use super::paint;
use super::points::Pixels;
use super::readout::{self, Readout};
use crate::dom;
use crate::drawing::Drawing;
use crate::keep::{Place, Source};
use fallaround_core::picture::frame::Frame;
use fallaround_core::picture::view::Camera;
use fallaround_core::picture::{Composer, DisplayList, Options, Screen, Shape, Tag};
use fallaround_core::show::{Action, Clock, Moment, Show};
use serde::Serialize;
use web_sys::{CanvasRenderingContext2d, HtmlCanvasElement};

/// Seconds that a blackout takes to fall or to lift.
const BLACKOUT_S: f64 = 0.4;
/// A frame that comes later than this after the last one (the page was hidden) counts as this long, seconds.
const FRAME_MOST_S: f64 = 0.5;
/// Show time into a beat after which the next one is prepared, seconds.
const PREPARE_AFTER_S: f64 = 2.0;
/// Steps of tracers in a frame: several times what 10,000 of them need at ordinary paces.
const FRAME_STEPS: usize = 200_000;
/// The picture that is kept for the start page, px.
const KEPT_PX: [f64; 2] = [1120.0, 628.0];

/// A running show.
#[derive(Debug)]
pub struct House {
    show: Show,
    source: Source,
    fingerprint: String,
    clock: Clock,
    blackout: bool,
    /// 0 clear, 1 black.
    dark: f64,
    reduced_motion: bool,
    /// The languages of its captions, the scenario's own first.
    languages: Vec<String>,
    /// The one in which the audience reads, by its place among them.
    language: usize,
    last_ms: Option<f64>,
    composer: Option<(Screen, Composer)>,
    /// Whether options have changed since the composer was made.
    stale: bool,
    /// The beat whose successor has been prepared.
    prepared: Option<usize>,
    list: DisplayList,
    moment: Option<Moment>,
    painted: Option<f64>,
    pixels: Pixels,
}

impl House {
    /// A show that waits for its first beat, or goes on from a kept place.
    pub fn new(show: Show, source: Source, fingerprint: String, at: Option<&Place>) -> Self {
        let clock = match at {
            Some(place) => Clock::resume(&show.plan, place.mark),
            None => Clock::new(&show.plan),
        };
        let blackout = at.is_some_and(|place| place.blackout);
        let languages = show.scenario.languages();
        let kept = at.and_then(|place| place.language.as_ref());
        let language = languages.iter().position(|tag| Some(tag) == kept).unwrap_or(0);
        Self {
            show,
            source,
            fingerprint,
            clock,
            blackout,
            dark: if blackout { 1.0 } else { 0.0 },
            reduced_motion: false,
            languages,
            language,
            last_ms: None,
            composer: None,
            stale: false,
            prepared: None,
            list: DisplayList::default(),
            moment: None,
            painted: None,
            pixels: Pixels::default(),
        }
    }

    /// The show.
    pub const fn show(&self) -> &Show {
        &self.show
    }

    /// The text that it was made of.
    pub const fn source(&self) -> &Source {
        &self.source
    }

    /// Its fingerprint, as people read it.
    pub fn fingerprint(&self) -> &str {
        &self.fingerprint
    }

    /// Does what the presenter asks of the clock; whether that changed anything.
    pub fn act(&mut self, action: Action) -> bool {
        self.clock.act(&self.show.plan, action)
    }

    /// Blackout, or back; whether the house is now going black.
    pub fn toggle_blackout(&mut self) -> bool {
        self.blackout = !self.blackout;
        self.blackout
    }

    /// The language in which the audience reads, as a BCP 47 tag.
    fn language(&self) -> &str {
        self.languages.get(self.language).map_or(self.show.scenario.language.as_str(), String::as_str)
    }

    /// The language after that one, where the captions have more than one.
    fn language_after(&self) -> Option<&str> {
        let after = (self.language + 1) % self.languages.len().max(1);
        (after != self.language).then(|| self.languages.get(after).map(String::as_str)).flatten()
    }

    /// On to the next language of the captions; whether there is one.
    pub fn change_language(&mut self) -> bool {
        let more = self.language_after().is_some();
        if more {
            self.language = (self.language + 1) % self.languages.len();
            self.stale = true;
        }
        more
    }

    /// The clock.
    pub const fn clock(&self) -> &Clock {
        &self.clock
    }

    /// Whether motion is to be kept down.
    pub fn set_reduced_motion(&mut self, reduced: bool) {
        if self.reduced_motion != reduced {
            self.reduced_motion = reduced;
            self.clock.set_calm(reduced);
            self.stale = true;
        }
    }

    /// What people read of it now.
    pub fn readout(&self) -> Readout {
        Readout::of(&self.show, &self.clock, self.blackout, self.language(), self.language_after())
    }

    /// Lets time pass up to a frame's time, and paints that frame.
    pub fn frame(&mut self, time_ms: f64, canvas: &HtmlCanvasElement, ctx: &CanvasRenderingContext2d) {
        let elapsed_s = self.last_ms.map_or(0.0, |last| (time_ms - last) / 1000.0).clamp(0.0, FRAME_MOST_S);
        self.last_ms = Some(time_ms);
        self.clock.advance(&self.show.plan, elapsed_s);
        let goal = if self.blackout { 1.0 } else { 0.0 };
        let step = elapsed_s / BLACKOUT_S;
        self.dark =
            if self.dark < goal { (self.dark + step).min(goal) } else { (self.dark - step).max(goal) };
        self.paint(canvas, ctx);
    }

    fn paint(&mut self, canvas: &HtmlCanvasElement, ctx: &CanvasRenderingContext2d) {
        let density = density();
        let width_px = (f64::from(canvas.client_width()) * density).round().max(1.0);
        let height_px = (f64::from(canvas.client_height()) * density).round().max(1.0);
        let resized = f64::from(canvas.width()).to_bits() != width_px.to_bits()
            || f64::from(canvas.height()).to_bits() != height_px.to_bits();
        if resized {
            set_size(canvas, width_px, height_px);
        }
        let moment = self.clock.moment(&self.show.plan);
        let list = self.compose(Screen { width_px, height_px, density }, &moment);
        let same = !resized
            && self.painted.is_some_and(|dark| dark.to_bits() == self.dark.to_bits())
            && list == self.list;
        self.list = list;
        self.moment = Some(moment);
        if !same {
            paint::paint(ctx, &self.list, self.dark, Some(&mut self.pixels));
            self.painted = Some(self.dark);
        }
    }

    fn compose(&mut self, screen: Screen, moment: &Moment) -> DisplayList {
        let options = Options { language: self.language().to_owned(), reduced_motion: self.reduced_motion };
        let show = &self.show;
        let fits = |made_for: &Screen| *made_for == screen && !self.stale;
        if !self.composer.as_ref().is_some_and(|(made_for, _)| fits(made_for)) {
            self.prepared = None;
            let mut composer = match &self.composer {
                Some((_, other)) => other.for_other(show, screen, options),
                None => Composer::new(show, screen, options),
            };
            composer.work_at_most(FRAME_STEPS);
            self.composer = Some((screen, composer));
            self.stale = false;
        }
        let Some((_, composer)) = &mut self.composer else { return DisplayList::default() };
        let list = composer.compose(show, moment);
        // While nothing moves into place, what the next beat needs is decided, so that its first frame is as quick as the rest.
        if moment.since_cut_s > PREPARE_AFTER_S && self.prepared != Some(moment.beat) {
            let mut ahead = self.clock;
            if ahead.act(&show.plan, Action::Next) {
                composer.prepare(show, &ahead.moment(&show.plan));
            }
            self.prepared = Some(moment.beat);
        }
        list
    }

    /// The place, to be kept.
    pub fn place(&self, words: bool, presenting: bool) -> Place {
        let (into_s, left_s) = readout::show_times(&self.show, &self.clock);
        let moment = self.clock.moment(&self.show.plan);
        Place {
            title: self.show.scenario.title.clone(),
            mark: self.clock.bookmark(),
            beats: self.show.plan.beats.len(),
            into_s,
            left_s,
            model: crate::words::model_time(self.show.scenario.date, moment.model_s),
            blackout: self.blackout,
            language: Some(self.language().to_owned()),
            words,
            presenting,
            kept_ms: dom::wall_ms(),
        }
    }

    /// The picture of this instant for the start page.
    pub fn kept_picture(&self) -> Drawing {
        let screen = Screen { width_px: KEPT_PX[0], height_px: KEPT_PX[1], density: 1.0 };
        let options = Options { language: self.language().to_owned(), reduced_motion: true };
        let moment = self.clock.moment(&self.show.plan);
        let mut composer = match &self.composer {
            Some((_, other)) => other.for_other(&self.show, screen, options),
            None => Composer::new(&self.show, screen, options),
        };
        Drawing::of(&composer.compose(&self.show, &moment))
    }

    /// The last composed picture as JSON: where the clock is, and for every body drawn its centre on the canvas (px) and
    /// the model position it was drawn from (m, barycentric, ecliptic axes).
    pub fn frame_json(&self) -> String {
        let Some(moment) = self.moment else { return "null".into() };
        let bodies = self.list.items.iter().filter_map(|item| {
            let (Tag::Body(id), Shape::Disc { at, radius, .. }) = (item.tag, &item.shape) else {
                return None;
            };
            let state = self.show.ephemeris.state(id, moment.model_s)?;
            let name = self.show.scenario.bodies.get(id.0)?.name.clone();
            Some(FrameBody { name, x_px: at[0], y_px: at[1], radius_px: *radius, pos_m: state.pos.into() })
        });
        let frame = FrameOut {
            beat: moment.beat,
            model_s: moment.model_s,
            pace: moment.pace,
            held: moment.held,
            waiting: self.clock.waiting(),
            blackout: self.blackout,
            veil: moment.veil,
            metres_per_px: self.metres_per_px(&moment),
            width_px: self.list.width,
            height_px: self.list.height,
            items: self.list.items.len(),
            bodies: bodies.collect(),
        };
        serde_json::to_string(&frame).unwrap_or_else(|_| "null".into())
    }

    /// Metres of the model in a pixel of the canvas, once the beat's own view is reached.
    fn metres_per_px(&self, moment: &Moment) -> Option<f64> {
        let (screen, _) = self.composer.as_ref()?;
        let view = &self.show.scenario.beats.get(moment.beat)?.view;
        let moving = !moment.lately.as_slice().is_empty();
        let camera = Camera::of(&self.show, view, moment.model_s, &Frame::new(*screen));
        (!moving).then(|| 1.0 / camera.px_per_m)
    }
}

/// Device pixels per CSS pixel.
pub(super) fn density() -> f64 {
    web_sys::window().map_or(1.0, |w| w.device_pixel_ratio()).clamp(0.5, 4.0)
}

#[derive(Serialize)]
struct FrameOut {
    beat: usize,
    model_s: f64,
    pace: f64,
    held: bool,
    waiting: bool,
    blackout: bool,
    veil: f64,
    metres_per_px: Option<f64>,
    width_px: f64,
    height_px: f64,
    items: usize,
    bodies: Vec<FrameBody>,
}

#[derive(Serialize)]
struct FrameBody {
    name: String,
    x_px: f64,
    y_px: f64,
    radius_px: f64,
    pos_m: [f64; 3],
}

#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "rounded, positive and far below u32::MAX"
)]
pub(super) fn set_size(canvas: &HtmlCanvasElement, width_px: f64, height_px: f64) {
    canvas.set_width(width_px.min(16_384.0) as u32);
    canvas.set_height(height_px.min(16_384.0) as u32);
}
