//! The animation-frame loop: one closure, re-armed, cancelled on drop.

use std::cell::{Cell, RefCell};
use std::rc::Rc;
use wasm_bindgen::prelude::*;

/// Calls a function at every animation frame, with the frame's time in ms, until dropped.
pub struct FrameLoop(Rc<Inner>);

/// What the browser calls.
type Frame = Closure<dyn FnMut(f64)>;

struct Inner {
    request: Cell<Option<i32>>,
    closure: RefCell<Option<Frame>>,
}

impl std::fmt::Debug for FrameLoop {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_tuple("FrameLoop").field(&self.0.request.get()).finish()
    }
}

impl FrameLoop {
    /// Starts it.
    pub fn new(mut frame: impl FnMut(f64) + 'static) -> Self {
        let inner = Rc::new(Inner { request: Cell::new(None), closure: RefCell::new(None) });
        // The closure is owned by what it re-arms, so it holds only a weak way back.
        let weak = Rc::downgrade(&inner);
        let closure = Frame::new(move |time_ms: f64| {
            if let Some(inner) = weak.upgrade() {
                inner.request.set(None);
                inner.arm();
                frame(time_ms);
            }
        });
        inner.closure.replace(Some(closure));
        inner.arm();
        Self(inner)
    }
}

impl Inner {
    fn arm(&self) {
        let closure = self.closure.borrow();
        let (Some(window), Some(closure)) = (web_sys::window(), closure.as_ref()) else { return };
        self.request.set(window.request_animation_frame(closure.as_ref().unchecked_ref()).ok());
    }
}

impl Drop for FrameLoop {
    fn drop(&mut self) {
        if let (Some(window), Some(request)) = (web_sys::window(), self.0.request.take()) {
            // A request that has already run can't be cancelled, and needn't be.
            drop(window.cancel_animation_frame(request));
        }
    }
}
