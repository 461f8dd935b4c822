//! What the tests have at hand: the environment, and the shipped scenarios rehearsed natively.

use std::fs;
use std::path::{Path, PathBuf};
use std::time::{SystemTime, UNIX_EPOCH};

use fallaround_core::scenario::dated;
use fallaround_core::show::{Rehearsal, Show};

/// More than any rehearsal of a shipped show takes, in one go.
const STEPS: usize = 10_000;

/// A variable that the `test` command sets.
pub(crate) fn variable(name: &str) -> String {
    std::env::var(name)
        .unwrap_or_else(|_| panic!("{name} isn't set; these tests are run by `cargo run --release -- test`"))
}

/// A folder of this crate or beside it.
pub(crate) fn folder(path: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join(path)
}

/// The `.toml` files of a folder, in the order of their names.
pub(crate) fn scenarios(path: &str) -> Vec<PathBuf> {
    let folder = folder(path);
    let entries = fs::read_dir(&folder).unwrap_or_else(|error| panic!("{}: {error}", folder.display()));
    let mut files: Vec<PathBuf> = entries
        .map(|entry| entry.expect("readable").path())
        .filter(|path| path.extension().is_some_and(|end| end == "toml"))
        .collect();
    files.sort();
    files
}

/// The text of a scenario, with today's date written in where it asks for it.
pub(crate) fn text(path: &Path) -> String {
    let text = fs::read_to_string(path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    let now_s = SystemTime::now().duration_since(UNIX_EPOCH).expect("after 1970").as_secs_f64();
    dated(&text, now_s).into_owned()
}

/// A text as a show, rehearsed by this computer's own code.
pub(crate) fn rehearse(text: &str) -> Show {
    let mut rehearsal = Rehearsal::start(text).unwrap_or_else(|problems| panic!("{problems:#?}"));
    while !rehearsal.work(STEPS).unwrap_or_else(|problems| panic!("{problems:#?}")).done {}
    rehearsal.finish().expect("a rehearsal that is done gives a show")
}
