//! Opening the browser, where there is a desktop.

/// Opens an address in the person's browser. Says so where that fails: the address has been printed anyway.
pub(crate) fn open(address: &str) {
    if !desktop() {
        return;
    }
    if let Err(error) = open::that_detached(address) {
        eprintln!("note: the browser could not be opened ({error}); open {address} yourself");
    }
}

/// Whether somebody sits in front of a desktop that this program can reach.
fn desktop() -> bool {
    if cfg!(any(target_os = "macos", windows)) {
        return true;
    }
    ["DISPLAY", "WAYLAND_DISPLAY"]
        .iter()
        .any(|name| std::env::var_os(name).is_some_and(|value| !value.is_empty()))
}
