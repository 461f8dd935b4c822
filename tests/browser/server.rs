//! The program's own server, as a person starts it, at a free port.

use std::io::{BufRead as _, BufReader};
use std::process::{Child, Command, Stdio};

use crate::house::variable;

/// A running server; it ends with this.
pub(crate) struct Server {
    child: Child,
    /// Where the app is.
    pub(crate) address: String,
}

impl Server {
    /// Starts one.
    pub(crate) fn start() -> Self {
        let program = variable("FALLAROUND_PROGRAM");
        let mut child = Command::new(&program)
            .args(["serve", "--no-open", "--port", "0"])
            .stdout(Stdio::piped())
            .spawn()
            .unwrap_or_else(|error| panic!("{program} can't be started: {error}"));
        let output = child.stdout.take().expect("piped");
        let address = BufReader::new(output)
            .lines()
            .map_while(Result::ok)
            .find_map(|line| line.strip_prefix("Fallaround is at ").map(str::to_owned))
            .expect("the server says its address");
        Self { child, address }
    }
}

impl Drop for Server {
    fn drop(&mut self) {
        self.child.kill().ok();
        self.child.wait().ok();
    }
}
