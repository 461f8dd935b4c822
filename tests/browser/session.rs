//! A browser with the app in it: what a presenter can do, and what a test can see.

use std::thread;
use std::time::{Duration, Instant};

use serde_json::{Value, json};
use tempfile::TempDir;

use crate::webdriver::Driver;

/// How long the page may take for anything that it works out, on two busy cores.
pub(crate) const PATIENCE: Duration = Duration::from_secs(60);

/// Keys that have no character of their own, in WebDriver's code.
const PAGE_DOWN: &str = "\u{E00F}";
pub(crate) const ESCAPE: &str = "\u{E00C}";

/// A browser at work.
pub(crate) struct Session {
    driver: Driver,
    path: String,
    _profile: TempDir,
}

impl Session {
    /// A browser with a new profile and a window of 1920 by 1080.
    pub(crate) fn start() -> Self {
        let driver = Driver::start();
        let profile = tempfile::tempdir().expect("a temporary folder");
        let path = driver.browser(profile.path(), (1920, 1080));
        // The window's size above includes what the headless browser takes for itself.
        let session = Self { driver, path, _profile: profile };
        session.devtools(
            "Emulation.setDeviceMetricsOverride",
            json!({ "width": 1920, "height": 1080, "deviceScaleFactor": 1, "mobile": false }),
        );
        session
    }

    /// Opens an address and waits until the program has started.
    pub(crate) fn open(&self, address: &str) {
        self.driver.post(&format!("{}/url", self.path), &json!({ "url": address }));
        self.wait_until_ready();
    }

    /// Loads the page anew and waits until the program has started.
    pub(crate) fn reload(&self) {
        self.driver.post(&format!("{}/refresh", self.path), &json!({}));
        self.wait_until_ready();
    }

    fn wait_until_ready(&self) {
        self.wait_for("the program to start", || {
            (self.run("return document.documentElement.dataset.ready", &[]) == json!("true")).then_some(())
        });
    }

    /// Runs a function's body in the page and gives what it returns.
    pub(crate) fn run(&self, script: &str, arguments: &[Value]) -> Value {
        self.driver
            .post(&format!("{}/execute/sync", self.path), &json!({ "script": script, "args": arguments }))
    }

    /// Runs a function's body in the page; its last argument is a function that takes the result.
    pub(crate) fn run_async(&self, script: &str, arguments: &[Value]) -> Value {
        self.driver.post(&format!("{}/timeouts", self.path), &json!({ "script": 100_000 }));
        self.driver
            .post(&format!("{}/execute/async", self.path), &json!({ "script": script, "args": arguments }))
    }

    /// Presses and lets go a key.
    pub(crate) fn press(&self, key: &str) {
        let actions = json!([{ "type": "keyDown", "value": key }, { "type": "keyUp", "value": key }]);
        let actions = json!({ "actions": [{ "type": "key", "id": "keyboard", "actions": actions }] });
        self.driver.post(&format!("{}/actions", self.path), &actions);
    }

    /// Goes on by a clicker's key: a show that waits for its start starts, any other goes to its next beat.
    pub(crate) fn next(&self) -> Value {
        let before = self.wait_for_frame();
        // A second press right after the first is taken for a slip of the hand.
        thread::sleep(Duration::from_millis(300));
        self.press(PAGE_DOWN);
        let starts = before["waiting"] == true;
        self.wait_for("the show to go on", || {
            let frame = self.frame()?;
            let on = if starts { frame["waiting"] == false } else { frame["beat"] != before["beat"] };
            on.then_some(frame)
        })
    }

    /// Sends a command of the browser's own debugging protocol.
    pub(crate) fn devtools(&self, command: &str, parameters: Value) -> Value {
        let body = json!({ "cmd": command, "params": parameters });
        self.driver.post(&format!("{}/goog/cdp/execute", self.path), &body)
    }

    /// Waits until something is there.
    pub(crate) fn wait_for<T>(&self, what: &str, mut look: impl FnMut() -> Option<T>) -> T {
        let started = Instant::now();
        loop {
            if let Some(found) = look() {
                return found;
            }
            if started.elapsed() > PATIENCE {
                let text = self.run("return document.body.innerText.slice(0, 2000)", &[]);
                panic!(
                    "waited in vain for {what}\nthe page says: {text}\nits console: {:#?}",
                    self.console()
                );
            }
            thread::sleep(Duration::from_millis(50));
        }
    }

    /// Opens the shipped show of a title by its row on the start page, and waits until it is on.
    pub(crate) fn open_show(&self, title: &str) {
        let click = "for (const row of document.querySelectorAll('button.show'))\
                       if (row.querySelector('.title').textContent === arguments[0]) { row.click(); return true; }\
                     return false;";
        self.wait_for(&format!("the row of {title:?}"), || {
            self.run(click, &[json!(title)]).as_bool()?.then_some(())
        });
        self.wait_for_frame();
    }

    /// Lets a file fall on the page, as from the desktop.
    pub(crate) fn drop_file(&self, name: &str, bytes: &[u8]) {
        let script = "const transfer = new DataTransfer();\
                      transfer.items.add(new File([new Uint8Array(arguments[1])], arguments[0]));\
                      for (const type of ['dragover', 'drop'])\
                        document.body.dispatchEvent(new DragEvent(type, { bubbles: true, cancelable: true, dataTransfer: transfer }));";
        self.run(script, &[json!(name), json!(bytes)]);
    }

    /// What was last drawn, once there is something.
    pub(crate) fn wait_for_frame(&self) -> Value {
        self.wait_for("a show on the stage", || self.frame())
    }

    /// What was last drawn; `None` without a show.
    pub(crate) fn frame(&self) -> Option<Value> {
        let text = self.run("return window.fallaround_frame()", &[]);
        let frame: Value = serde_json::from_str(text.as_str()?).expect("a frame is JSON");
        (!frame.is_null()).then_some(frame)
    }

    /// The fingerprint of the running show.
    pub(crate) fn fingerprint(&self) -> String {
        self.run("return window.fallaround_fingerprint()", &[]).as_str().unwrap_or_default().to_owned()
    }

    /// What is written on the page.
    pub(crate) fn text(&self, selector: &str) -> Option<String> {
        let script = "return document.querySelector(arguments[0])?.innerText ?? null";
        self.run(script, &[json!(selector)]).as_str().map(str::to_owned)
    }

    /// Warnings and errors on the console since the last look.
    pub(crate) fn console(&self) -> Vec<String> {
        let log = self.driver.post(&format!("{}/se/log", self.path), &json!({ "type": "browser" }));
        let entries = log.as_array().cloned().unwrap_or_default();
        entries
            .into_iter()
            .filter(|entry| matches!(entry["level"].as_str(), Some("WARNING" | "SEVERE")))
            .map(|entry| entry["message"].as_str().unwrap_or_default().to_owned())
            .collect()
    }

    /// Fails when the console has a warning or an error.
    pub(crate) fn assert_quiet(&self) {
        let console = self.console();
        assert!(console.is_empty(), "the console isn't quiet: {console:#?}");
    }
}
