//! Entry in the worker: passes messages to the [`Engine`] and its answers back, and lets it work between them.

use crate::engine::{Answer, Engine};
use crate::protocol::{self, FromWorker};
use std::cell::RefCell;
use std::rc::Rc;
use wasm_bindgen::prelude::*;
use web_sys::{DedicatedWorkerGlobalScope, MessageChannel, MessageEvent};

/// The worker's two closures, which live as long as it does.
struct Ears {
    _message: Closure<dyn FnMut(MessageEvent)>,
    _turn: Closure<dyn FnMut()>,
}

thread_local! {
    static EARS: RefCell<Option<Ears>> = const { RefCell::new(None) };
}

/// Starts the worker. It answers [`FromWorker::Ready`] once it can hear.
///
/// # Errors
/// When this isn't a worker, or the browser refuses a message channel.
#[wasm_bindgen]
pub fn worker_main() -> Result<(), JsValue> {
    console_error_panic_hook::set_once();
    let scope: DedicatedWorkerGlobalScope = js_sys::global().dyn_into()?;
    let engine = Rc::new(RefCell::new(Engine::default()));
    // Work goes on by messages to itself: a turn of work, then whatever has arrived, then the next turn.
    let channel = MessageChannel::new()?;
    let again = channel.port2();

    let turn = {
        let (scope, engine, again) = (scope.clone(), Rc::clone(&engine), again.clone());
        Closure::<dyn FnMut()>::new(move || {
            let mut engine = engine.borrow_mut();
            post_all(&scope, engine.turn(js_sys::Date::now));
            if engine.busy() {
                poke(&again);
            }
        })
    };
    channel.port1().set_onmessage(Some(turn.as_ref().unchecked_ref()));

    let message = {
        let scope = scope.clone();
        Closure::<dyn FnMut(MessageEvent)>::new(move |event: MessageEvent| {
            let Some(text) = event.data().as_string() else { return };
            match protocol::decode(&text) {
                Ok(message) => {
                    let mut engine = engine.borrow_mut();
                    let was_busy = engine.busy();
                    post_all(&scope, engine.handle(message));
                    if engine.busy() && !was_busy {
                        poke(&again);
                    }
                }
                // The page sees a worker that died of it, and starts one of its own build.
                Err(error) => wasm_bindgen::throw_str(&error.to_string()),
            }
        })
    };
    scope.set_onmessage(Some(message.as_ref().unchecked_ref()));
    EARS.with(|ears| ears.replace(Some(Ears { _message: message, _turn: turn })));
    post(&scope, &Answer::from(FromWorker::Ready { protocol: protocol::PROTOCOL }));
    Ok(())
}

fn poke(port: &web_sys::MessagePort) {
    // Only a closed port refuses, and this one is never closed.
    drop(port.post_message(&JsValue::NULL));
}

fn post_all(scope: &DedicatedWorkerGlobalScope, answers: Vec<Answer>) {
    for answer in &answers {
        post(scope, answer);
    }
}

/// Sends `[text]`, or `[text, numbers]` with the numbers' buffer handed over.
fn post(scope: &DedicatedWorkerGlobalScope, answer: &Answer) {
    let text = match protocol::encode(&answer.message) {
        Ok(text) => text,
        Err(error) => wasm_bindgen::throw_str(&error.to_string()),
    };
    let parcel = js_sys::Array::of1(&text.into());
    let sent = if answer.numbers.is_empty() {
        scope.post_message(&parcel)
    } else {
        let numbers = js_sys::Float64Array::from(answer.numbers.as_slice());
        parcel.push(&numbers);
        scope.post_message_with_transfer(&parcel, &js_sys::Array::of1(&numbers.buffer()))
    };
    if let Err(error) = sent {
        wasm_bindgen::throw_val(error);
    }
}
