//! The folder that is served: the shell, the app, the scenarios, and what says which version they are.

use std::fs;
use std::io::Write as _;
use std::path::{Path, PathBuf};
use std::time::Instant;

use anyhow::{Context as _, Result};
use sha2::{Digest as _, Sha256};

use crate::bundle::{self, Host};
use crate::toolchain;

/// The service worker in the shell; these two marks in it are filled in.
const WORKER: &str = "sw.js";
/// Stands for the version, a hash of everything in the folder.
const VERSION_MARK: &str = "__VERSION__";
/// Stands for a JSON array of all paths, in quotes: `["./", "./app.js", …]`.
const FILES_MARK: &str = "[\"__FILES__\"]";
/// Changes when this file assembles the same inputs differently.
const LAYOUT: &str = "1";
/// Compressing less than this saves nothing.
const SMALLEST_COMPRESSED: usize = 1024;

/// A built site.
#[derive(Debug, Clone)]
pub(crate) struct Site {
    /// The folder to serve.
    pub(crate) folder: PathBuf,
    /// Hash of everything in it.
    pub(crate) version: String,
}

/// A file of the site: its path with `/`, and what is in it.
type File = (String, Vec<u8>);

/// Builds what is missing or out of date, and says how large the module is.
///
/// # Errors
/// When there is no compiler for it, the app doesn't compile, or a file can't be read or written.
pub(crate) fn build(root: &Path) -> Result<Site> {
    let started = Instant::now();
    let toolchain = toolchain::obtain()?;
    let module = bundle::compile(root, &toolchain, bundle::APP)?;
    let folder = root.join("target").join("site");
    let stamp_file = root.join("target").join("site.stamp");

    let mut inputs = files_below(&root.join("www").join("shell"), "")?;
    inputs.extend(scenarios(&root.join("scenarios"))?);
    let stamp =
        stamp(&fs::read(&module).with_context(|| format!("{} can't be read", module.display()))?, &inputs);
    if fs::read_to_string(&stamp_file).is_ok_and(|old| old == stamp)
        && let Ok(version) = fs::read_to_string(folder.join("version.txt"))
    {
        return Ok(Site { folder, version: version.trim().to_owned() });
    }

    let bound = tempfile::tempdir_in(root.join("target")).context("no temporary folder in target")?;
    bundle::bind(&module, bound.path(), "app", Host::Browser)?;
    inputs.extend(files_below(bound.path(), "")?);
    inputs.sort();
    let version = finish(&mut inputs);
    write_folder(&folder, &inputs)?;
    fs::write(&stamp_file, stamp).with_context(|| format!("{} can't be written", stamp_file.display()))?;
    report(&folder, started)?;
    Ok(Site { folder, version })
}

/// Hash of everything that the site is made of.
fn stamp(module: &[u8], inputs: &[File]) -> String {
    let mut hash = Sha256::new();
    hash.update(LAYOUT);
    hash.update(env!("CARGO_PKG_VERSION"));
    hash.update(Sha256::digest(module));
    hash_files(&mut hash, inputs);
    hex(&hash.finalize())
}

fn hash_files(hash: &mut Sha256, files: &[File]) {
    for (path, bytes) in files {
        hash.update(path.as_bytes());
        hash.update([0]);
        hash.update(Sha256::digest(bytes));
    }
}

fn hex(bytes: &[u8]) -> String {
    bytes.iter().map(|byte| format!("{byte:02x}")).collect()
}

/// Fills in the service worker and adds `version.txt`; gives the version.
fn finish(files: &mut Vec<File>) -> String {
    let mut hash = Sha256::new();
    hash_files(&mut hash, files);
    let version = hex(&hash.finalize()[..8]);
    let mut paths = vec!["./".to_owned()];
    paths.extend(files.iter().filter(|(path, _)| path != WORKER).map(|(path, _)| format!("./{path}")));
    let list = serde_json::Value::from(paths).to_string();
    if let Some((_, worker)) = files.iter_mut().find(|(path, _)| path == WORKER) {
        let text = String::from_utf8_lossy(worker).replace(VERSION_MARK, &version).replace(FILES_MARK, &list);
        *worker = text.into_bytes();
    }
    files.push(("version.txt".to_owned(), format!("{version}\n").into_bytes()));
    version
}

/// The scenarios in the order of their names, and `index.json` that lists them.
fn scenarios(folder: &Path) -> Result<Vec<File>> {
    let mut files = files_below(folder, "")?;
    files.retain(|(path, _)| path.ends_with(".toml") && !path.contains('/'));
    let names: Vec<&str> = files.iter().map(|(path, _)| path.as_str()).collect();
    let index = serde_json::Value::from(names).to_string();
    let mut files: Vec<File> =
        files.into_iter().map(|(path, bytes)| (format!("scenarios/{path}"), bytes)).collect();
    files.push(("scenarios/index.json".to_owned(), index.into_bytes()));
    Ok(files)
}

/// All files below a folder, sorted by path; none when it isn't there.
fn files_below(folder: &Path, prefix: &str) -> Result<Vec<File>> {
    let mut files = Vec::new();
    if !folder.is_dir() {
        return Ok(files);
    }
    let entries = fs::read_dir(folder).with_context(|| format!("{} can't be read", folder.display()))?;
    for entry in entries {
        let path = entry.with_context(|| format!("{} can't be read", folder.display()))?.path();
        let name = path.file_name().unwrap_or_default().to_string_lossy().into_owned();
        if name.starts_with('.') {
            continue;
        }
        let below = format!("{prefix}{name}");
        if path.is_dir() {
            files.extend(files_below(&path, &format!("{below}/"))?);
        } else {
            files
                .push((below, fs::read(&path).with_context(|| format!("{} can't be read", path.display()))?));
        }
    }
    files.sort();
    Ok(files)
}

/// Writes the folder beside its place and then renames it: a build that was broken off leaves the old one.
fn write_folder(folder: &Path, files: &[File]) -> Result<()> {
    let new = folder.with_extension("new");
    if new.exists() {
        fs::remove_dir_all(&new).with_context(|| format!("{} can't be removed", new.display()))?;
    }
    for (path, bytes) in files {
        let place = new.join(path);
        if let Some(parent) = place.parent() {
            fs::create_dir_all(parent).with_context(|| format!("{} can't be made", parent.display()))?;
        }
        write(&place, bytes)?;
        if compressible(path) && bytes.len() >= SMALLEST_COMPRESSED {
            write(&with_suffix(&place, ".br"), &brotli(bytes)?)?;
            write(&with_suffix(&place, ".gz"), &gzip(bytes)?)?;
        }
    }
    if folder.exists() {
        fs::remove_dir_all(folder).with_context(|| format!("{} can't be removed", folder.display()))?;
    }
    fs::rename(&new, folder).with_context(|| format!("{} can't be made", folder.display()))
}

fn write(place: &Path, bytes: &[u8]) -> Result<()> {
    fs::write(place, bytes).with_context(|| format!("{} can't be written", place.display()))
}

fn with_suffix(place: &Path, suffix: &str) -> PathBuf {
    let mut name = place.as_os_str().to_owned();
    name.push(suffix);
    name.into()
}

/// Fonts and pictures are compressed as they are.
fn compressible(path: &str) -> bool {
    [".html", ".css", ".js", ".json", ".wasm", ".svg", ".toml", ".txt", ".webmanifest"]
        .iter()
        .any(|end| path.ends_with(end))
}

fn brotli(bytes: &[u8]) -> Result<Vec<u8>> {
    let mut out = Vec::new();
    let parameters = brotli::enc::BrotliEncoderParams { quality: 9, lgwin: 22, ..Default::default() };
    brotli::BrotliCompress(&mut &*bytes, &mut out, &parameters).context("brotli")?;
    Ok(out)
}

fn gzip(bytes: &[u8]) -> Result<Vec<u8>> {
    let mut encoder = flate2::write::GzEncoder::new(Vec::new(), flate2::Compression::best());
    encoder.write_all(bytes).context("gzip")?;
    encoder.finish().context("gzip")
}

fn report(folder: &Path, started: Instant) -> Result<()> {
    let module = folder.join("app_bg.wasm");
    let size = |path: &Path| -> Result<u64> {
        Ok(fs::metadata(path).with_context(|| format!("{} can't be read", path.display()))?.len())
    };
    let kilobytes = |bytes: u64| (bytes + 500) / 1000;
    let compressed = with_suffix(&module, ".br");
    let compressed = if compressed.is_file() { compressed } else { module.clone() };
    eprintln!(
        "Built the app in {:.1} s: {} kB of wasm, {} kB compressed (brotli)",
        started.elapsed().as_secs_f64(),
        kilobytes(size(&module)?),
        kilobytes(size(&compressed)?)
    );
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn file(path: &str, text: &str) -> File {
        (path.to_owned(), text.as_bytes().to_vec())
    }

    #[test]
    fn the_version_follows_every_byte() {
        let version =
            |text| finish(&mut vec![file("app.js", text), file(WORKER, "const v = '__VERSION__';")]);
        assert_eq!(version("a"), version("a"));
        assert_ne!(version("a"), version("b"));
    }

    #[test]
    fn the_service_worker_learns_version_and_files() {
        let mut files = vec![
            file("app.js", "x"),
            file("scenarios/a \"b\".toml", "x"),
            file(WORKER, "const v = '__VERSION__'; const f = [\"__FILES__\"];"),
        ];
        let version = finish(&mut files);
        let worker = String::from_utf8(files[2].1.clone()).unwrap();
        assert_eq!(
            worker,
            format!(
                "const v = '{version}'; const f = [\"./\",\"./app.js\",\"./scenarios/a \\\"b\\\".toml\"];"
            )
        );
        assert_eq!(files[3], file("version.txt", &format!("{version}\n")));
    }

    #[test]
    fn a_folder_is_replaced_whole_and_compressed_beside() {
        let top = tempfile::tempdir().unwrap();
        let folder = top.path().join("site");
        write_folder(&folder, &[file("old.js", "x")]).unwrap();
        write_folder(&folder, &[file("deep/new.js", &"word ".repeat(1000))]).unwrap();
        let names: Vec<String> =
            files_below(&folder, "").unwrap().into_iter().map(|(path, _)| path).collect();
        assert_eq!(names, ["deep/new.js", "deep/new.js.br", "deep/new.js.gz"]);
    }

    #[test]
    fn the_index_lists_scenarios_only() {
        let folder = tempfile::tempdir().unwrap();
        for name in ["b.toml", "a.toml", "README.md"] {
            fs::write(folder.path().join(name), name).unwrap();
        }
        let files = scenarios(folder.path()).unwrap();
        let names: Vec<&str> = files.iter().map(|(path, _)| path.as_str()).collect();
        assert_eq!(names, ["scenarios/a.toml", "scenarios/b.toml", "scenarios/index.json"]);
        assert_eq!(files[2].1, br#"["a.toml","b.toml"]"#);
    }
}
