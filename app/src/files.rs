//! Files from people: picked or dropped. Whatever it is, the answer is a text or a sentence that says why not.

use crate::keep::Source;
use crate::protocol::Fault;
use crate::words;
use fallaround_core::scenario;
use wasm_bindgen::JsCast;
use wasm_bindgen_futures::JsFuture;
use web_sys::{DataTransfer, File, FileList, FileSystemEntry};

/// A scenario is a few kilobytes that a person wrote; a file beyond this is something else, bytes.
const LARGEST: f64 = 2e6;

/// A file that can't be shown, as it is laid before the presenter.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Trouble {
    /// The file's name.
    pub name: String,
    /// Its text, for the lines that the faults are about; empty where there is none.
    pub text: String,
    /// Everything that is wrong.
    pub faults: Vec<Fault>,
}

impl Trouble {
    /// Trouble with a file as a whole.
    pub fn whole(name: impl Into<String>, wrong: impl Into<String>, remedy: impl Into<String>) -> Self {
        let fault = Fault { line: 0, column: 0, wrong: wrong.into(), remedy: remedy.into() };
        Self { name: name.into(), text: String::new(), faults: vec![fault] }
    }
}

const ONE_SCENARIO: &str = "choose one scenario, a text file whose name ends in .toml";

/// The one file of a drop.
///
/// # Errors
/// A folder, several files, or nothing that is a file.
pub fn dropped(transfer: &DataTransfer) -> Result<File, Trouble> {
    let items = transfer.items();
    for index in 0..items.length() {
        let Some(item) = items.get(index) else { continue };
        let entry = item.webkit_get_as_entry().ok().flatten();
        if let Some(entry) = entry.as_ref().filter(|entry| FileSystemEntry::is_directory(entry)) {
            return Err(Trouble::whole(
                entry.name(),
                "this is a folder",
                format!("open it and {ONE_SCENARIO}"),
            ));
        }
    }
    picked(transfer.files().as_ref())
}

/// Whether what is dragged over the page is files, rather than a piece of it.
pub fn are_held(transfer: &DataTransfer) -> bool {
    transfer.types().includes(&"Files".into(), 0)
}

/// The one file of a list.
///
/// # Errors
/// Several files, or none.
pub fn picked(files: Option<&FileList>) -> Result<File, Trouble> {
    let count = files.map_or(0, FileList::length);
    match files.and_then(|list| list.get(0)) {
        Some(file) if count == 1 => Ok(file),
        Some(_) => Err(Trouble::whole(
            format!("{count} files"),
            "only one show can be opened at a time",
            ONE_SCENARIO,
        )),
        None => Err(Trouble::whole("What was let fall here", "it isn't a file", ONE_SCENARIO)),
    }
}

/// The text of a file.
///
/// # Errors
/// A file that is too large, can't be read, or isn't text.
pub async fn read(file: File) -> Result<Source, Trouble> {
    let name = file.name();
    if file.size() > LARGEST {
        let wrong = format!("this file has {}, and a scenario has a few kB", words::bytes(file.size()));
        return Err(Trouble::whole(name, wrong, ONE_SCENARIO));
    }
    let unreadable = || {
        Trouble::whole(
            file.name(),
            "the browser can't read this file",
            "see that it still is where it was and that you may read it, then open it again",
        )
    };
    let Ok(buffer) = JsFuture::from(file.array_buffer()).await else { return Err(unreadable()) };
    let Ok(buffer) = buffer.dyn_into::<js_sys::ArrayBuffer>() else { return Err(unreadable()) };
    source(name, js_sys::Uint8Array::new(&buffer).to_vec())
}

/// Bytes as a scenario's text. A byte order mark is left in: the fingerprint is of the file as it is.
fn source(name: String, bytes: Vec<u8>) -> Result<Source, Trouble> {
    String::from_utf8(bytes).map(|text| Source { name: name.clone(), text }).map_err(|error| {
        let bytes = error.into_bytes();
        let faults = Fault::errors(&scenario::parse_bytes(&bytes).problems);
        Trouble { name, text: String::from_utf8_lossy(&bytes).into_owned(), faults }
    })
}

#[cfg(test)]
mod tests {
    use super::source;

    #[test]
    fn text_is_kept_to_the_byte() {
        let kept = source("a.toml".into(), b"\xef\xbb\xbftitle\r\n".to_vec()).unwrap();
        assert_eq!(kept.text.as_bytes(), b"\xef\xbb\xbftitle\r\n");
    }

    #[test]
    fn what_is_not_text_says_where_it_stops_being_text() {
        let trouble = source("a.toml".into(), b"format = 1\ntitle = \"caf\xe9\"".to_vec()).unwrap_err();
        assert_eq!((trouble.faults.len(), trouble.faults[0].line, trouble.faults[0].column), (1, 2, 13));
    }
}
