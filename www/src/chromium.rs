//! The browser that the tests drive: found, or installed from the distribution where that is possible.

use std::path::{Path, PathBuf};
use std::process::Command;

use anyhow::{Context as _, Result, bail};

use crate::child;

/// Names under which Chromium and its relatives are installed.
const BROWSERS: [&str; 5] =
    ["chromium", "chromium-browser", "google-chrome", "google-chrome-stable", "chrome"];
/// Places off the search path.
const BROWSER_PLACES: [&str; 2] = [
    "/Applications/Chromium.app/Contents/MacOS/Chromium",
    "/Applications/Google Chrome.app/Contents/MacOS/Google Chrome",
];
const DRIVERS: [&str; 1] = ["chromedriver"];
const DRIVER_PLACES: [&str; 2] = ["/usr/lib/chromium/chromedriver", "/usr/lib/chromium-browser/chromedriver"];

const INSTALL: &str = "install Chromium and ChromeDriver of the same version (Debian: `apt-get install chromium \
                       chromium-driver`), or name them in the environment as CHROME and CHROMEDRIVER";

/// A browser and the program that drives it.
#[derive(Debug)]
pub(crate) struct Chromium {
    /// The browser.
    pub(crate) browser: PathBuf,
    /// The driver.
    pub(crate) driver: PathBuf,
}

/// Finds both; as root on Debian and its relatives, installs what is missing.
///
/// # Errors
/// When one is missing and can't be installed; the message says what to install.
pub(crate) fn obtain() -> Result<Chromium> {
    if let Some(found) = find() {
        return Ok(found);
    }
    if !child::is_root() || child::answer(Command::new("apt-get").arg("--version")).is_none() {
        bail!("the browser tests need Chromium: {INSTALL}");
    }
    eprintln!("Installing Chromium and ChromeDriver.");
    let apt = |arguments: &[&str]| {
        child::run(Command::new("apt-get").args(arguments).env("DEBIAN_FRONTEND", "noninteractive"))
            .context("apt-get")
    };
    // An update that fails in one source may still have brought what is needed; the installation tells.
    apt(&["-q", "update"])?;
    let status = apt(&["-q", "install", "-y", "--no-install-recommends", "chromium", "chromium-driver"])?;
    if !status.success() {
        bail!("`apt-get install chromium chromium-driver` failed; {INSTALL}");
    }
    find().with_context(|| format!("Chromium was installed and isn't found; {INSTALL}"))
}

fn find() -> Option<Chromium> {
    Some(Chromium {
        browser: one("CHROME", &BROWSERS, &BROWSER_PLACES)?,
        driver: one("CHROMEDRIVER", &DRIVERS, &DRIVER_PLACES)?,
    })
}

/// The program that a variable names, else the first of some names on the search path, else the first of some places.
fn one(variable: &str, names: &[&str], places: &[&str]) -> Option<PathBuf> {
    if let Some(named) = std::env::var_os(variable).filter(|value| !value.is_empty()) {
        return Some(PathBuf::from(named));
    }
    let path = std::env::var_os("PATH").unwrap_or_default();
    let on_path = names.iter().flat_map(|name| {
        let file = format!("{name}{}", std::env::consts::EXE_SUFFIX);
        std::env::split_paths(&path).map(move |folder| folder.join(&file)).collect::<Vec<_>>()
    });
    on_path.chain(places.iter().map(PathBuf::from)).find(|file: &PathBuf| is_program(file))
}

fn is_program(file: &Path) -> bool {
    file.is_file()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_search_path_is_searched_and_nothing_made_up() {
        let shell = if cfg!(windows) { "cmd" } else { "sh" };
        assert!(one("FALLAROUND_NO_SUCH_VARIABLE", &["no-such-program", shell], &[]).is_some());
        assert!(one("FALLAROUND_NO_SUCH_VARIABLE", &["no-such-program"], &["/no/such/place"]).is_none());
    }
}
