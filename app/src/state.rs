//! What the page knows: signals for what people read and toggle, and, outside the signals, the running show.
//!
//! [`State::apply`] is the only way by which a command changes anything.

use crate::command::{Command, Hands, Heard};
use crate::dom::{self, WakeLock};
use crate::files::Trouble;
use crate::keep::{self, LastShow, Place, Source};
use crate::link::{Link, News};
use crate::protocol::{FromWorker, ToWorker};
use crate::shows::Shows;
use crate::stage::{House, Readout};
use fallaround_core::show::Action;
use leptos::prelude::*;
use std::cell::RefCell;
use std::rc::{Rc, Weak};

/// The places in the program.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Where {
    /// The list of shows.
    Start,
    /// A show.
    Present,
}

/// A rehearsal that people wait for.
#[derive(Debug, Clone, PartialEq)]
pub struct Rehearsing {
    /// The file's name, or the show's title.
    pub name: String,
    /// 0 to 1.
    pub fraction: f64,
    /// What is being worked out.
    pub what: String,
}

/// A rehearsal that was asked for.
#[derive(Debug, Clone)]
struct Pending {
    run: u32,
    source: Source,
    at: Option<Place>,
}

/// A rehearsed show that waits for the presenter's word.
#[derive(Debug)]
struct Offer {
    pending: Pending,
    fingerprint: String,
    numbers: Vec<f64>,
}

/// What isn't reactive.
#[derive(Debug, Default)]
struct Works {
    house: Rc<RefCell<Option<House>>>,
    link: RefCell<Option<Link>>,
    pending: RefCell<Option<Pending>>,
    /// A show that is ready while another one runs.
    offer: RefCell<Option<Offer>>,
    hands: RefCell<Hands>,
    runs: RefCell<u32>,
    wake: RefCell<Option<WakeLock>>,
    said: RefCell<u32>,
}

/// The page's state. Made once in the root and provided; cheap to copy.
#[derive(Debug, Clone, Copy)]
pub struct State {
    /// Where the presenter is.
    pub place: RwSignal<Where>,
    /// The shipped shows.
    pub shows: Shows,
    /// The show that was last left or interrupted.
    pub last: RwSignal<Option<LastShow>>,
    /// The rehearsal under way.
    pub rehearsing: RwSignal<Option<Rehearsing>>,
    /// A file that can't be shown.
    pub trouble: RwSignal<Option<Trouble>>,
    /// The quiet line; empty: none.
    pub line: RwSignal<String>,
    /// What people read of the running show.
    pub readout: RwSignal<Readout>,
    /// What is said in the beat at hand.
    pub say: RwSignal<String>,
    /// Title of the running show.
    pub title: RwSignal<String>,
    /// Whether the words to say are open.
    pub words: RwSignal<bool>,
    /// Whether the help card is open.
    pub keys: RwSignal<bool>,
    /// Whether the question before leaving is open.
    pub leaving: RwSignal<bool>,
    /// Whether the question before another show is open.
    pub offering: RwSignal<bool>,
    works: StoredValue<Rc<Works>, LocalStorage>,
}

thread_local! {
    /// The running show, for the read-only functions that tests call.
    static HOUSE: RefCell<Weak<RefCell<Option<House>>>> = const { RefCell::new(Weak::new()) };
}

/// Looks at the running show from outside the page's own code.
pub fn peek<T>(look: impl FnOnce(&House) -> T) -> Option<T> {
    let house = HOUSE.with(|house| house.borrow().upgrade())?;
    let house = house.try_borrow().ok()?;
    house.as_ref().map(look)
}

/// Said to a key that comes before its show.
pub const NOT_READY: &str = "The show isn't ready yet";

/// How long the quiet line stays, ms.
const LINE_MS: u64 = 3000;

impl State {
    /// Makes it, starts the worker, and reads what was kept.
    pub fn start() -> Self {
        let works = Rc::new(Works::default());
        HOUSE.with(|house| house.replace(Rc::downgrade(&works.house)));
        let state = Self {
            place: RwSignal::new(Where::Start),
            shows: Shows::new(),
            last: RwSignal::new(LastShow::read()),
            rehearsing: RwSignal::new(None),
            trouble: RwSignal::new(None),
            line: RwSignal::new(String::new()),
            readout: RwSignal::new(Readout::default()),
            say: RwSignal::new(String::new()),
            title: RwSignal::new(String::new()),
            words: RwSignal::new(false),
            keys: RwSignal::new(false),
            leaving: RwSignal::new(false),
            offering: RwSignal::new(false),
            works: StoredValue::new_local(Rc::clone(&works)),
        };
        let link = Link::new(move |news| state.hear(news));
        works.link.replace(Some(link));
        state
    }

    fn works(&self) -> Rc<Works> {
        self.works.get_value()
    }

    /// Does something with the running show, if there is one.
    pub fn with_house<T>(&self, act: impl FnOnce(&mut House) -> T) -> Option<T> {
        let works = self.works();
        let mut house = works.house.try_borrow_mut().ok()?;
        house.as_mut().map(act)
    }

    /// Says a sentence in the quiet line, which goes away by itself.
    pub fn say(&self, sentence: impl Into<String>) {
        let works = self.works();
        let number = works.said.borrow().wrapping_add(1);
        works.said.replace(number);
        self.line.set(sentence.into());
        let state = *self;
        set_timeout(
            move || {
                if *state.works().said.borrow() == number {
                    state.line.set(String::new());
                }
            },
            std::time::Duration::from_millis(LINE_MS),
        );
    }

    /// Takes the stage's words and numbers; the page changes only where they did.
    pub fn read_out(&self, readout: Readout) {
        if self.readout.with_untracked(|old| *old != readout) {
            let beat = readout.beat;
            self.readout.set(readout);
            let words = self.with_house(|house| house.show().scenario.beats.get(beat).map(|b| b.say.clone()));
            let words = words.flatten().unwrap_or_default();
            if self.say.with_untracked(|old| *old != words) {
                self.say.set(words);
            }
        }
    }

    /// Asks the worker for something that nobody waits for.
    pub fn ask(&self, message: impl FnOnce(u32) -> ToWorker) -> u32 {
        let works = self.works();
        let run = works.runs.borrow().wrapping_add(1);
        works.runs.replace(run);
        if let Some(link) = works.link.borrow().as_ref() {
            link.send(message(run));
        }
        run
    }

    /// Makes a show of a text; it replaces the running one when it is ready, and at a kept place if one is given.
    pub fn rehearse(&self, source: Source, at: Option<Place>) {
        self.trouble.set(None);
        let asked = |pending: &Pending| pending.source == source && pending.at == at;
        if self.works().pending.borrow().as_ref().is_some_and(asked) {
            return;
        }
        let known = at.as_ref().map(|place| place.title.clone()).or_else(|| self.shows.title_of(&source));
        let name = known.unwrap_or_else(|| source.name.clone());
        self.rehearsing.set(Some(Rehearsing { name, fraction: 0.0, what: String::new() }));
        let text = source.text.clone();
        let run = self.ask(|run| ToWorker::Rehearse { run, text });
        self.works().pending.replace(Some(Pending { run, source, at }));
    }

    /// Gives up the rehearsal under way.
    pub fn cancel(&self) {
        if let Some(pending) = self.works().pending.take() {
            self.ask(|_| ToWorker::Stop { run: pending.run });
        }
        self.rehearsal_over();
    }

    /// Without a show on the stage there is only the list to go to.
    fn rehearsal_over(&self) {
        self.rehearsing.set(None);
        if self.with_house(|_| ()).is_none() {
            self.place.set(Where::Start);
        }
    }

    /// Lays a file's faults before the presenter.
    pub fn lay_open(&self, trouble: Trouble) {
        self.rehearsal_over();
        self.trouble.set(Some(trouble));
    }

    fn take_pending(&self, run: u32) -> Option<Pending> {
        self.works().pending.borrow_mut().take_if(|pending| pending.run == run)
    }

    fn hear(&self, news: News) {
        match news {
            News::Message(message, numbers) => self.heard(message, numbers),
            News::GaveUp { run } => {
                if let Some(pending) = self.take_pending(run) {
                    self.lay_open(Trouble::whole(
                        pending.source.name,
                        "the program stopped twice while working this file out",
                        "simplify the scenario; what runs goes on",
                    ));
                }
            }
            News::Broken(why) => {
                self.works().pending.take();
                self.rehearsal_over();
                self.say(format!("New shows can't be worked out: {why}. Loading the page again may help."));
            }
        }
    }

    fn heard(&self, message: FromWorker, numbers: Option<js_sys::Float64Array>) {
        match message {
            FromWorker::Ready { .. } => {}
            FromWorker::Progress { run, fraction, what } => {
                if self.works().pending.borrow().as_ref().is_some_and(|pending| pending.run == run) {
                    self.rehearsing.update(|rehearsing| {
                        if let Some(rehearsing) = rehearsing {
                            rehearsing.fraction = fraction;
                            rehearsing.what = what;
                        }
                    });
                }
            }
            FromWorker::Failed { run, problems } => {
                if let Some(Pending { source, .. }) = self.take_pending(run) {
                    self.lay_open(Trouble { name: source.name, text: source.text, faults: problems });
                } else {
                    self.shows.failed(run);
                }
            }
            FromWorker::Rehearsed { run, fingerprint } => {
                if let (Some(pending), Some(numbers)) = (self.take_pending(run), numbers) {
                    let offer = Offer { pending, fingerprint, numbers: numbers.to_vec() };
                    let running = self.with_house(|_| ()).is_some();
                    if running && self.place.get_untracked() == Where::Present {
                        self.rehearsing.set(None);
                        self.works().offer.replace(Some(offer));
                        self.keys.set(false);
                        self.leaving.set(false);
                        self.offering.set(true);
                    } else {
                        self.raise(offer);
                    }
                }
            }
            FromWorker::Card { run, facts } => self.shows.facts(run, facts),
            FromWorker::Picture { run, drawing } => self.shows.picture(run, drawing),
        }
    }

    /// Puts a rehearsed show on the stage.
    fn raise(&self, offer: Offer) {
        let Offer { pending: Pending { source, at, .. }, fingerprint, numbers } = offer;
        let show = match crate::carry::unpack(&source.text, &numbers) {
            Ok(show) => show,
            Err(why) => {
                return self.lay_open(Trouble::whole(source.name, why.to_string(), "load the page again"));
            }
        };
        self.rehearsing.set(None);
        self.title.set(show.scenario.title.clone());
        if keep::keep_source(&source).is_err() {
            self.say("This browser keeps nothing for this page; a reload will start the show anew");
        }
        let house = House::new(show, source, fingerprint, at.as_ref());
        self.words.set(at.as_ref().is_some_and(|place| place.words));
        let readout = house.readout();
        self.works().house.replace(Some(house));
        self.read_out(readout);
        self.keys.set(false);
        self.leaving.set(false);
        self.place.set(Where::Present);
        self.keep_lit();
        self.keep_place();
    }

    /// Name of the file that waits to be put on.
    pub fn offered_name(&self) -> String {
        let works = self.works();
        let offer = works.offer.borrow();
        offer.as_ref().map(|offer| offer.pending.source.name.clone()).unwrap_or_default()
    }

    /// Puts on the show that waits.
    pub fn accept(&self) {
        let offer = self.works().offer.take();
        self.offering.set(false);
        offer.into_iter().for_each(|offer| self.raise(offer));
    }

    /// Lets the running show stay on.
    pub fn decline(&self) {
        self.works().offer.take();
        self.offering.set(false);
    }

    /// Keeps the screen lit while a show is on.
    pub fn keep_lit(&self) {
        if self.place.get_untracked() == Where::Present {
            let works = self.works();
            let mut wake = works.wake.borrow_mut();
            wake.get_or_insert_default().ask();
        }
    }

    /// Keeps the place in the running show.
    pub fn keep_place(&self) {
        let presenting = self.place.get_untracked() == Where::Present;
        let words = self.words.get_untracked();
        if let Some(place) = self.with_house(|house| house.place(words, presenting)) {
            // It was said once, when the show went up, that nothing is kept here.
            drop(keep::keep_place(&place));
        }
    }

    /// Keeps the picture of this instant.
    pub fn keep_picture(&self) {
        if let Some(picture) = self.with_house(|house| house.kept_picture()) {
            drop(keep::keep_picture(&picture));
        }
    }

    /// Hears a key. Returns whether it was one of ours.
    pub fn press(&self, press: crate::command::Press<'_>) -> bool {
        let heard = self.works().hands.borrow_mut().press(press, dom::now_ms());
        self.do_heard(heard)
    }

    /// A button was pressed.
    pub fn ask_for(&self, command: Command) {
        let heard = self.works().hands.borrow_mut().ask(command, dom::now_ms());
        self.do_heard(heard);
    }

    fn do_heard(&self, heard: Heard) -> bool {
        match heard {
            Heard::Do(command) => self.apply(command),
            Heard::Typing(digits) if digits.is_empty() => self.line.set(String::new()),
            Heard::Typing(digits) => self.say(format!("Beat {digits}: press enter to go there")),
            Heard::Swallowed => {}
            Heard::Nothing => return false,
        }
        true
    }

    /// Does what the presenter asks.
    pub fn apply(&self, command: Command) {
        match command {
            Command::Next => self.act(Action::Next, "This is the last beat"),
            Command::Back => self.act(Action::Back, "This is the first beat"),
            Command::Hold => self.act(Action::Hold, "Nothing to hold: the show waits for next"),
            Command::RestartBeat => self.act(Action::RestartBeat, "This beat is at its start"),
            Command::RestartShow => self.act(Action::RestartShow, "The show is at its start"),
            Command::Slower => self.act(Action::Slower, "As slow as it goes"),
            Command::Faster => self.act(Action::Faster, "As fast as it goes"),
            Command::Jump(beat) => {
                let beats = self.with_house(|house| house.show().plan.beats.len()).unwrap_or(0);
                if beat < beats {
                    self.line.set(String::new());
                    self.act(Action::Jump(beat), "");
                } else {
                    self.say(format!("There is no beat {}; the last is {beats}", beat + 1));
                }
            }
            Command::Blackout => {
                let readout = self.with_house(|house| {
                    house.toggle_blackout();
                    house.readout()
                });
                readout.into_iter().for_each(|readout| self.read_out(readout));
            }
            Command::Language => {
                let changed = self.with_house(|house| (house.change_language(), house.readout()));
                match changed {
                    Some((true, readout)) => {
                        self.read_out(readout);
                        self.keep_place();
                    }
                    Some((false, _)) => self.say("The captions have no other language"),
                    None => self.say(NOT_READY),
                }
            }
            Command::FullScreen => dom::toggle_full_screen(),
            Command::Words => self.words.update(|open| *open = !*open),
            Command::Keys => {
                self.leaving.set(false);
                self.keys.update(|open| *open = !*open);
            }
            Command::Leave => self.leave_or_close(),
        }
    }

    /// Closes what lies over any place; whether something did.
    pub fn close_panel(&self) -> bool {
        if self.trouble.with_untracked(Option::is_some) {
            self.trouble.set(None);
        } else if self.rehearsing.with_untracked(Option::is_some) {
            self.cancel();
        } else {
            return false;
        }
        true
    }

    /// Escape closes what is open; with nothing open it asks before leaving.
    fn leave_or_close(&self) {
        if self.close_panel() {
            return;
        }
        if self.offering.get_untracked() {
            self.decline();
        } else if self.keys.get_untracked() {
            self.keys.set(false);
        } else {
            self.leaving.update(|open| *open = !*open);
        }
    }

    fn act(&self, action: Action, refused: &str) {
        let done = self.with_house(|house| (house.act(action), house.readout()));
        match done {
            Some((changed, readout)) => {
                self.read_out(readout);
                self.keep_place();
                if !changed && !refused.is_empty() {
                    self.say(refused);
                }
            }
            None => self.say(NOT_READY),
        }
    }

    /// Leaves the show; it can be gone on with from the start page.
    pub fn leave(&self) {
        self.keep_picture();
        self.place.set(Where::Start);
        self.keep_place();
        self.leaving.set(false);
        self.keys.set(false);
        self.works().wake.take();
        self.works().house.take();
        self.last.set(LastShow::read());
    }
}
