//! Where the project's own folder is.

use std::path::{Path, PathBuf};

use anyhow::{Context as _, Result};

/// The folder that holds `Cargo.toml`, `app` and `www`.
///
/// # Errors
/// When the program was moved away from it and isn't started inside it either.
pub(crate) fn find() -> Result<PathBuf> {
    let built_in = Path::new(env!("CARGO_MANIFEST_DIR")).parent().map(Path::to_path_buf);
    let exe = std::env::current_exe().ok();
    let here = std::env::current_dir().ok();
    let above = |start: Option<PathBuf>| {
        start.into_iter().flat_map(|path| path.ancestors().map(Path::to_path_buf).collect::<Vec<_>>())
    };
    // The folder in which it lies comes first: a copy of the whole tree must not build the tree it was copied from.
    above(exe)
        .chain(above(here))
        .chain(built_in)
        .find(|folder| is_root(folder))
        .context("the project's folder was not found; start this inside it, with `cargo run --release`")
}

fn is_root(folder: &Path) -> bool {
    ["Cargo.lock", "app/Cargo.toml", "core/Cargo.toml", "www/Cargo.toml"]
        .iter()
        .all(|file| folder.join(file).is_file())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_tests_run_inside_the_projects_folder() {
        let root = find().unwrap();
        assert!(is_root(&root), "{} lacks the files of the project", root.display());
        assert!(!is_root(&root.join("www")));
    }
}
