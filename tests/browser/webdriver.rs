//! As much of WebDriver (W3C, 2018) as the tests need: JSON over HTTP to a ChromeDriver of their own.

use std::io::{BufRead as _, BufReader};
use std::process::{Child, Command, Stdio};
use std::time::Duration;

use serde_json::{Value, json};

/// Longer than any command may take, a page's load and a script that waits included.
const COMMAND_TIME: Duration = Duration::from_secs(120);

/// A running ChromeDriver; it and its browsers end with this.
pub(crate) struct Driver {
    child: Child,
    address: String,
    agent: ureq::Agent,
}

impl Driver {
    /// Starts one at a free port.
    pub(crate) fn start() -> Self {
        let program = crate::house::variable("CHROMEDRIVER");
        let mut child = Command::new(&program)
            .arg("--port=0")
            .stdout(Stdio::piped())
            .stderr(Stdio::null())
            .spawn()
            .unwrap_or_else(|error| panic!("{program} can't be started: {error}"));
        let output = child.stdout.take().expect("piped");
        let port = BufReader::new(output)
            .lines()
            .map_while(Result::ok)
            .find_map(|line| {
                line.strip_suffix('.')?.split_once("successfully on port ")?.1.parse::<u16>().ok()
            })
            .expect("ChromeDriver says its port");
        let config =
            ureq::Agent::config_builder().timeout_global(Some(COMMAND_TIME)).http_status_as_error(false);
        Self { child, address: format!("http://127.0.0.1:{port}"), agent: config.build().into() }
    }

    /// Sends a command and gives its value.
    ///
    /// Panics with the browser's own words when it is refused: these are tests.
    pub(crate) fn post(&self, path: &str, body: &Value) -> Value {
        let answer = self.agent.post(format!("{}{path}", self.address)).send_json(body);
        let mut answer = answer.unwrap_or_else(|error| panic!("POST {path}: {error}"));
        let status = answer.status();
        let mut value: Value = answer
            .body_mut()
            .with_config()
            .limit(256 << 20)
            .read_json()
            .unwrap_or_else(|error| panic!("POST {path}: {error}"));
        assert!(status.is_success(), "POST {path} {body}: {status}: {}", value["value"]["message"]);
        value["value"].take()
    }

    /// Starts a browser with a new, empty profile and gives the session's path.
    pub(crate) fn browser(&self, profile: &std::path::Path, size: (u32, u32)) -> String {
        let arguments = json!([
            "--headless=new",
            "--no-sandbox",
            "--disable-gpu",
            "--disable-quic",
            "--disable-dev-shm-usage",
            "--no-first-run",
            "--disable-background-networking",
            "--disable-component-update",
            "--disable-sync",
            "--force-device-scale-factor=1",
            format!("--window-size={},{}", size.0, size.1),
            format!("--user-data-dir={}", profile.display()),
        ]);
        let capabilities = json!({ "capabilities": { "alwaysMatch": {
            "browserName": "chrome",
            "goog:chromeOptions": { "binary": crate::house::variable("CHROME"), "args": arguments },
            "goog:loggingPrefs": { "browser": "ALL" },
        } } });
        let session = self.post("/session", &capabilities);
        format!("/session/{}", session["sessionId"].as_str().expect("a session has an id"))
    }
}

impl Drop for Driver {
    fn drop(&mut self) {
        // Asked to, it closes its browsers first; killed, it would leave them running.
        let asked = self.agent.get(format!("{}/shutdown", self.address)).call();
        if asked.is_err() {
            self.child.kill().ok();
        }
        self.child.wait().ok();
    }
}
