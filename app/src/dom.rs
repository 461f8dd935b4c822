//! Fallible browser calls. Each says which call failed; what can't be had is `None` or an error, never a panic.

use wasm_bindgen::{JsCast, JsValue};
use wasm_bindgen_futures::JsFuture;

/// A browser call that failed.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct DomError {
    call: &'static str,
    why: String,
}

impl DomError {
    /// Names the call, with what the browser said.
    pub fn new(call: &'static str, why: &JsValue) -> Self {
        let why = why
            .dyn_ref::<js_sys::Error>()
            .map(|error| String::from(error.message()))
            .or_else(|| why.as_string())
            .unwrap_or_default();
        Self { call, why }
    }
}

impl std::fmt::Display for DomError {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{} failed: {}", self.call, self.why)
    }
}

impl std::error::Error for DomError {}

/// Milliseconds since the page was opened, never going back.
pub fn now_ms() -> f64 {
    web_sys::window().and_then(|w| w.performance()).map_or(0.0, |p| p.now())
}

/// Wall clock, milliseconds since 1970.
pub fn wall_ms() -> f64 {
    js_sys::Date::now()
}

/// The time of day of a wall-clock instant, "18:52".
pub fn time_of_day(wall_ms: f64) -> String {
    let date = js_sys::Date::new(&JsValue::from_f64(wall_ms));
    format!("{:02}:{:02}", date.get_hours(), date.get_minutes())
}

/// The name of the build, where the server states one.
pub fn build() -> Option<String> {
    web_sys::window()?.document()?.document_element()?.get_attribute("data-build")
}

/// Reads a kept text.
pub fn kept(key: &str) -> Option<String> {
    web_sys::window()?.local_storage().ok()??.get_item(key).ok()?
}

/// Keeps a text, over browser restarts.
///
/// # Errors
/// When the browser keeps nothing for this page, or no more.
pub fn keep(key: &str, text: &str) -> Result<(), DomError> {
    let storage = web_sys::window().map(|w| w.local_storage());
    match storage {
        Some(Ok(Some(storage))) => {
            storage.set_item(key, text).map_err(|e| DomError::new("keeping the place", &e))
        }
        Some(Err(error)) => Err(DomError::new("keeping the place", &error)),
        _ => Err(DomError::new("keeping the place", &JsValue::NULL)),
    }
}

/// Reads one of the page's own files.
///
/// # Errors
/// When it can't be fetched, or isn't text.
pub async fn fetch_text(url: &str) -> Result<String, DomError> {
    let failed = |why: JsValue| DomError::new("reading a file of the program", &why);
    let window = web_sys::window().ok_or_else(|| failed(JsValue::NULL))?;
    let answer = JsFuture::from(window.fetch_with_str(url)).await.map_err(failed)?;
    let answer: web_sys::Response = answer.dyn_into().map_err(failed)?;
    if !answer.ok() {
        return Err(failed(JsValue::from_str(&format!("{url}: {}", answer.status()))));
    }
    let text = JsFuture::from(answer.text().map_err(failed)?).await.map_err(failed)?;
    text.as_string().ok_or_else(|| failed(JsValue::from_str(url)))
}

/// Asks for full screen, or leaves it. A browser that refuses changes nothing.
pub fn toggle_full_screen() {
    let Some(document) = web_sys::window().and_then(|w| w.document()) else { return };
    let promise = if document.fullscreen_element().is_some() {
        call(&document, "exitFullscreen", &[])
    } else {
        document.document_element().and_then(|root| call(&root, "requestFullscreen", &[]))
    };
    forgive(promise);
}

/// Keeps the screen lit until dropped, where the browser can.
#[derive(Debug, Default)]
pub struct WakeLock {
    held: std::rc::Rc<std::cell::RefCell<Option<JsValue>>>,
}

impl WakeLock {
    /// Asks for it. Asking again after the page was hidden is right: hiding lets it go.
    pub fn ask(&self) {
        let lock = web_sys::window().and_then(|w| get(&w.navigator(), "wakeLock"));
        let Some(promise) = lock.and_then(|lock| call(&lock, "request", &["screen".into()])) else { return };
        let Ok(promise) = promise.dyn_into::<js_sys::Promise>() else { return };
        let held = std::rc::Rc::downgrade(&self.held);
        wasm_bindgen_futures::spawn_local(async move {
            let Ok(sentinel) = JsFuture::from(promise).await else { return };
            match held.upgrade() {
                Some(held) => held.replace(Some(sentinel)).into_iter().for_each(|old| release(&old)),
                None => release(&sentinel),
            }
        });
    }
}

impl Drop for WakeLock {
    fn drop(&mut self) {
        if let Some(sentinel) = self.held.take() {
            release(&sentinel);
        }
    }
}

fn release(sentinel: &JsValue) {
    forgive(call(sentinel, "release", &[]));
}

/// A property, unless missing.
fn get(of: &JsValue, name: &str) -> Option<JsValue> {
    js_sys::Reflect::get(of, &name.into()).ok().filter(|v| !v.is_undefined() && !v.is_null())
}

/// Calls a method that not every browser has.
fn call(on: &JsValue, name: &str, with: &[JsValue]) -> Option<JsValue> {
    let method: js_sys::Function = get(on, name)?.dyn_into().ok()?;
    method.apply(on, &with.iter().collect::<js_sys::Array>()).ok()
}

/// Waits for a promise whose refusal doesn't matter, so that it isn't reported as an error.
fn forgive(promise: Option<JsValue>) {
    if let Some(Ok(promise)) = promise.map(JsCast::dyn_into::<js_sys::Promise>) {
        wasm_bindgen_futures::spawn_local(async move {
            // A refusal is the browser's right; nothing depends on it.
            drop(JsFuture::from(promise).await);
        });
    }
}
