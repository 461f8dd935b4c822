//! Owns the worker: handshake, queue until it can hear, restart when it dies, end on drop.

use crate::dom::DomError;
use crate::protocol::{self, FromWorker, PROTOCOL, ToWorker};
use std::cell::{Cell, RefCell};
use std::rc::{Rc, Weak};
use wasm_bindgen::prelude::*;
use web_sys::{ErrorEvent, MessageEvent, Worker, WorkerOptions, WorkerType};

/// What the page hears through the link.
#[derive(Debug)]
pub enum News {
    /// A message, with the numbers that came beside it.
    Message(FromWorker, Option<js_sys::Float64Array>),
    /// The worker died. Requests without an answer are asked again of its successor, except the rehearsal that it
    /// died of twice, named here.
    GaveUp {
        /// That rehearsal.
        run: u32,
    },
    /// No worker can be had at all.
    Broken(String),
}

/// Deaths in a row after which a request isn't asked again.
const DEATHS_MOST: u32 = 2;

struct Inner {
    worker: RefCell<Option<Running>>,
    ready: Cell<bool>,
    /// Requests without an answer, oldest first.
    open: RefCell<Vec<ToWorker>>,
    deaths: Cell<u32>,
    hear: Box<dyn Fn(News)>,
}

struct Running {
    worker: Worker,
    _message: Closure<dyn FnMut(MessageEvent)>,
    _error: Closure<dyn FnMut(ErrorEvent)>,
}

impl Drop for Running {
    fn drop(&mut self) {
        self.worker.set_onmessage(None);
        self.worker.set_onerror(None);
        self.worker.terminate();
    }
}

/// The page's end of the worker.
pub struct Link(Rc<Inner>);

impl std::fmt::Debug for Link {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Link").field("ready", &self.0.ready.get()).finish_non_exhaustive()
    }
}

impl Link {
    /// Starts a worker; `hear` is told everything from it.
    pub fn new(hear: impl Fn(News) + 'static) -> Self {
        let inner = Rc::new(Inner {
            worker: RefCell::new(None),
            ready: Cell::new(false),
            open: RefCell::new(Vec::new()),
            deaths: Cell::new(0),
            hear: Box::new(hear),
        });
        Inner::start(&inner);
        Self(inner)
    }

    /// Asks the worker, at once or as soon as it can hear.
    pub fn send(&self, message: ToWorker) {
        if self.0.ready.get() {
            self.0.post(&message);
        }
        let mut open = self.0.open.borrow_mut();
        match &message {
            ToWorker::Rehearse { .. } | ToWorker::Stop { .. } => {
                open.retain(|m| !matches!(m, ToWorker::Rehearse { .. }));
            }
            ToWorker::Card { .. } => {}
        }
        if !matches!(message, ToWorker::Stop { .. }) {
            open.push(message);
        }
    }
}

impl Inner {
    fn start(this: &Rc<Self>) {
        this.ready.set(false);
        match Self::spawn(this) {
            Ok(running) => {
                this.worker.replace(Some(running));
            }
            Err(error) => (this.hear)(News::Broken(error.to_string())),
        }
    }

    fn spawn(this: &Rc<Self>) -> Result<Running, DomError> {
        let options = WorkerOptions::new();
        options.set_type(WorkerType::Module);
        let worker = Worker::new_with_options("worker.js", &options)
            .map_err(|error| DomError::new("starting the worker", &error))?;
        let weak = Rc::downgrade(this);
        let message = Closure::<dyn FnMut(MessageEvent)>::new(move |event: MessageEvent| {
            if let Some(inner) = weak.upgrade() {
                inner.heard(&event);
            }
        });
        let weak = Rc::downgrade(this);
        let error = Closure::<dyn FnMut(ErrorEvent)>::new(move |_: ErrorEvent| {
            Self::died(&weak);
        });
        worker.set_onmessage(Some(message.as_ref().unchecked_ref()));
        worker.set_onerror(Some(error.as_ref().unchecked_ref()));
        Ok(Running { worker, _message: message, _error: error })
    }

    fn post(&self, message: &ToWorker) {
        let Ok(text) = protocol::encode(message) else { return };
        if let Some(running) = self.worker.borrow().as_ref() {
            // Text can always be posted; a worker that is gone reports itself through its error event.
            drop(running.worker.post_message(&text.into()));
        }
    }

    fn heard(&self, event: &MessageEvent) {
        let parcel = js_sys::Array::from(&event.data());
        let Some(text) = parcel.get(0).as_string() else { return };
        let numbers = parcel.get(1).dyn_into::<js_sys::Float64Array>().ok();
        let message = match protocol::decode::<FromWorker>(&text) {
            Ok(message) => message,
            Err(error) => return (self.hear)(News::Broken(error.to_string())),
        };
        if let FromWorker::Ready { protocol } = message {
            if protocol != PROTOCOL {
                return (self.hear)(News::Broken("page and worker are of different builds".into()));
            }
            self.ready.set(true);
            for request in self.open.borrow().iter() {
                self.post(request);
            }
            return;
        }
        self.settle(&message);
        (self.hear)(News::Message(message, numbers));
    }

    /// Forgets the request that a message answers for good.
    fn settle(&self, message: &FromWorker) {
        let mut open = self.open.borrow_mut();
        match message {
            FromWorker::Rehearsed { run, .. } | FromWorker::Failed { run, .. } => {
                self.deaths.set(0);
                open.retain(|m| !matches!(m, ToWorker::Rehearse { run: asked, .. } if asked == run));
                open.retain(|m| !matches!(m, ToWorker::Card { run: asked, .. } if asked == run));
            }
            FromWorker::Picture { run, .. } => {
                self.deaths.set(0);
                open.retain(|m| !matches!(m, ToWorker::Card { run: asked, .. } if asked == run));
            }
            _ => {}
        }
    }

    fn died(weak: &Weak<Self>) {
        let Some(inner) = weak.upgrade() else { return };
        inner.deaths.set(inner.deaths.get() + 1);
        let was_ready = inner.ready.replace(false);
        if inner.deaths.get() >= DEATHS_MOST {
            if !was_ready {
                return (inner.hear)(News::Broken("the worker doesn't start".into()));
            }
            inner.deaths.set(0);
            // The oldest rehearsal, or else the oldest request, is what it died of.
            let mut open = inner.open.borrow_mut();
            let at = open.iter().position(|m| matches!(m, ToWorker::Rehearse { .. })).unwrap_or(0);
            let dropped = if at < open.len() { Some(open.remove(at)) } else { None };
            drop(open);
            if let Some(ToWorker::Rehearse { run, .. }) = dropped {
                (inner.hear)(News::GaveUp { run });
            }
        }
        // Not from within the old worker's own event.
        wasm_bindgen_futures::spawn_local(async move { Self::start(&inner) });
    }
}
