//! Programs that this one starts: each ends when this one is ended.
//!
//! Each child leads a process group of its own, so that what it starts in turn (compilers, test programs, browsers)
//! can be ended with it.

use std::io;
use std::process::{Child, ChildStdout, Command, ExitStatus, Output, Stdio};
use std::sync::{Mutex, PoisonError};

use anyhow::{Context as _, Result};

/// The children that are running, by process id. An exit by signal has no other way to know them.
static RUNNING: Mutex<Vec<u32>> = Mutex::new(Vec::new());

/// Sees to it that Ctrl-C, and being asked to terminate, ends the running children too.
///
/// # Errors
/// When the system refuses the handler.
pub(crate) fn end_children_with_us() -> Result<()> {
    ctrlc::set_handler(|| {
        for id in RUNNING.lock().unwrap_or_else(PoisonError::into_inner).drain(..) {
            end_group(id);
        }
        // A bar may have left the cursor hidden in the middle of a line.
        eprintln!("\x1b[?25h");
        std::process::exit(130);
    })
    .context("no handler for Ctrl-C")
}

/// A child that is ended when this is dropped.
#[derive(Debug)]
pub(crate) struct Running {
    child: Child,
}

impl Running {
    /// Starts a command without standard input.
    ///
    /// # Errors
    /// When it can't be started; the message names the program.
    pub(crate) fn start(command: &mut Command) -> Result<Self> {
        command.stdin(Stdio::null());
        #[cfg(unix)]
        std::os::unix::process::CommandExt::process_group(command, 0);
        let mut running = RUNNING.lock().unwrap_or_else(PoisonError::into_inner);
        let child = command
            .spawn()
            .with_context(|| format!("{} can't be started", command.get_program().to_string_lossy()))?;
        running.push(child.id());
        Ok(Self { child })
    }

    /// Waits for its end.
    ///
    /// # Errors
    /// When the system can't say.
    pub(crate) fn wait(&mut self) -> io::Result<ExitStatus> {
        self.child.wait()
    }

    /// What it writes to standard output, when that was piped and hasn't been taken yet.
    pub(crate) fn take_stdout(&mut self) -> Option<ChildStdout> {
        self.child.stdout.take()
    }
}

impl Drop for Running {
    fn drop(&mut self) {
        let id = self.child.id();
        RUNNING.lock().unwrap_or_else(PoisonError::into_inner).retain(|other| *other != id);
        if !matches!(self.child.try_wait(), Ok(Some(_))) {
            end_group(id);
            // It has been told to end; nobody is left to hear of a failure.
            self.child.kill().ok();
            self.child.wait().ok();
        }
    }
}

/// Runs a command to its end. What it writes goes to standard error: standard output is for our own data.
///
/// # Errors
/// When it can't be started.
pub(crate) fn run(command: &mut Command) -> Result<ExitStatus> {
    Ok(Running::start(command.stdout(io::stderr()))?.wait()?)
}

/// Runs a command to its end and keeps what it wrote.
///
/// # Errors
/// When it can't be started.
pub(crate) fn output(command: &mut Command) -> Result<Output> {
    command
        .stdin(Stdio::null())
        .output()
        .with_context(|| format!("{} can't be started", command.get_program().to_string_lossy()))
}

/// What a command wrote to standard output, when it could be started and succeeded.
pub(crate) fn answer(command: &mut Command) -> Option<String> {
    let output = output(command).ok()?;
    output.status.success().then(|| String::from_utf8_lossy(&output.stdout).trim().to_owned())
}

/// Whether this program may change the system.
#[cfg(unix)]
pub(crate) fn is_root() -> bool {
    nix::unistd::Uid::effective().is_root()
}

/// Whether this program may change the system.
#[cfg(not(unix))]
pub(crate) fn is_root() -> bool {
    false
}

#[cfg(unix)]
fn end_group(id: u32) {
    use nix::sys::signal::{Signal, killpg};
    use nix::unistd::Pid;
    if let Ok(id) = i32::try_from(id) {
        // An error means that the group is gone already.
        killpg(Pid::from_raw(id), Signal::SIGTERM).ok();
    }
}

#[cfg(not(unix))]
fn end_group(id: u32) {
    // /T: with everything that it started.
    Command::new("taskkill").args(["/F", "/T", "/PID", &id.to_string()]).output().ok();
}
