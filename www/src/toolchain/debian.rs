//! Debian's own compiler for the web, unpacked into a cache of the user's.
//!
//! Nothing is installed and root isn't needed: `apt-get` works on lists of its own in the cache, the packages are
//! unpacked with `dpkg`, and a wrapper tells the compiler where its libraries are. It is a newer compiler than Debian's
//! usual one (browsers are built with it), and comes with the sources of the standard library.

use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::{Path, PathBuf};
use std::process::Command;

use anyhow::{Context as _, Result, bail, ensure};
use indicatif::{ProgressBar, ProgressStyle};

use crate::child;

/// The packages asked for; what they depend on comes along. The linker is added when its version is known.
const WANTED: [&str; 2] = ["rustc-web", "rust-web-src"];
/// The folder in the cache.
const FOLDER: &str = "toolchain";
/// Needed by the native build as well: whoever runs this program has them.
const AT_HAND: [&str; 4] = ["gcc", "libc-dev", "binutils", "libc6"];

/// The compiler (a wrapper) and the linker that an earlier start unpacked.
///
/// # Errors
/// When there are none.
pub(super) fn unpacked() -> Result<(PathBuf, PathBuf)> {
    parts(&cache()?.join(FOLDER))
}

/// The compiler (a wrapper) and the linker, unpacked into the cache.
///
/// # Errors
/// When this isn't Debian, the packages can't be fetched, or they don't hold what they should.
pub(super) fn obtain() -> Result<(PathBuf, PathBuf)> {
    let cache = cache()?;
    let unpacked = cache.join(FOLDER);
    for tool in ["apt-get", "apt-cache", "dpkg", "dpkg-query"] {
        ensure!(
            child::answer(Command::new(tool).arg("--version")).is_some(),
            "there is no {tool} on this computer"
        );
    }
    fs::create_dir_all(&cache).with_context(|| format!("{} can't be made", cache.display()))?;
    // Beside its final place, so that the last step is a rename: a start that was broken off leaves nothing half done.
    let work =
        tempfile::tempdir_in(&cache).with_context(|| format!("{} can't be written to", cache.display()))?;

    let apt = Apt::new(work.path().join("apt"))?;
    eprintln!("Getting Debian's compiler for the web (about 150 MB; 900 MB in {}).", unpacked.display());
    apt.update()?;
    let packages = apt.closure()?;
    let debs = apt.download(&packages)?;
    let folder = work.path().join("unpacked");
    unpack(&debs, &folder)?;
    write_wrapper(&folder, &unpacked)?;
    if unpacked.exists() {
        fs::remove_dir_all(&unpacked).with_context(|| format!("{} can't be removed", unpacked.display()))?;
    }
    fs::rename(&folder, &unpacked).with_context(|| format!("{} can't be made", unpacked.display()))?;
    parts(&unpacked)
}

/// The cache folder of the user.
fn cache() -> Result<PathBuf> {
    let variable = |name| std::env::var_os(name).filter(|value| !value.is_empty()).map(PathBuf::from);
    let base = variable("XDG_CACHE_HOME")
        .filter(|path| path.is_absolute())
        .or_else(|| variable("HOME").map(|home| home.join(".cache")))
        .context("neither XDG_CACHE_HOME nor HOME says where caches go")?;
    Ok(base.join("fallaround"))
}

/// The wrapper and the linker in an unpacked folder.
fn parts(folder: &Path) -> Result<(PathBuf, PathBuf)> {
    let wrapper = folder.join("rustc");
    ensure!(wrapper.is_file(), "{} is missing", wrapper.display());
    let linker = newest(&folder.join("usr/bin"), "wasm-ld-")?;
    Ok((wrapper, linker))
}

/// Of the files `PREFIXnumber` in a folder, the one with the greatest number.
fn newest(folder: &Path, prefix: &str) -> Result<PathBuf> {
    let files = fs::read_dir(folder).with_context(|| format!("{} can't be read", folder.display()))?;
    files
        .flatten()
        .filter_map(|file| {
            let number = file.file_name().to_str()?.strip_prefix(prefix)?.parse::<u32>().ok()?;
            Some((number, file.path()))
        })
        .max()
        .map(|(_, path)| path)
        .with_context(|| format!("{} holds no {prefix}*", folder.display()))
}

/// apt with lists and a cache of its own.
struct Apt {
    folder: PathBuf,
}

impl Apt {
    fn new(folder: PathBuf) -> Result<Self> {
        for part in ["lists/partial", "cache/archives/partial", "debs"] {
            let part = folder.join(part);
            fs::create_dir_all(&part).with_context(|| format!("{} can't be made", part.display()))?;
        }
        Ok(Self { folder })
    }

    fn command(&self, program: &str) -> Command {
        let mut command = Command::new(program);
        let option = |name: &str, value: &str| ["-o".to_owned(), format!("{name}={value}")];
        command
            .args(option("Dir::State::Lists", &self.folder.join("lists").to_string_lossy()))
            .args(option("Dir::Cache", &self.folder.join("cache").to_string_lossy()))
            // Descriptions in other languages and the like are of no use here.
            .args(option("Acquire::Languages", "none"))
            .args(option("Acquire::Retries", "2"))
            .env("LC_ALL", "C");
        // As root, apt would fetch as a user who may not write here.
        if child::is_root() {
            command.args(option("APT::Sandbox::User", "root"));
        }
        command
    }

    fn update(&self) -> Result<()> {
        let status = child::run(self.command("apt-get").args(["-q", "update"]))?;
        ensure!(status.success(), "`apt-get update` failed; is the network up?");
        Ok(())
    }

    /// All packages to unpack: those wanted and what they need that this computer lacks.
    fn closure(&self) -> Result<Vec<String>> {
        let installed = installed()?;
        let mut chosen = BTreeSet::new();
        let mut queue: Vec<String> = WANTED.iter().map(|&name| name.to_owned()).collect();
        while let Some(name) = queue.pop() {
            let of_the_set =
                name.contains("rust-web") || name.starts_with("libllvm") || WANTED.contains(&name.as_str());
            if AT_HAND.contains(&name.as_str()) || chosen.contains(&name) {
                continue;
            }
            if !of_the_set && installed.contains(&name) {
                continue;
            }
            let text = child::answer(self.command("apt-cache").args(["show", "--no-all-versions", &name]))
                .with_context(|| format!("this computer's package sources don't have {name}"))?;
            let fields = fields(&text);
            queue.extend(fields.get("Depends").map(|depends| dependencies(depends)).unwrap_or_default());
            // The linker must understand what the compiler's own LLVM writes.
            if let Some(version) = name.strip_prefix("libllvm") {
                queue.push(format!("lld-{version}"));
            }
            chosen.insert(name);
        }
        Ok(chosen.into_iter().collect())
    }

    fn download(&self, packages: &[String]) -> Result<Vec<PathBuf>> {
        let folder = self.folder.join("debs");
        let status = child::run(self.command("apt-get").arg("download").args(packages).current_dir(&folder))?;
        ensure!(status.success(), "`apt-get download {}` failed; is the network up?", packages.join(" "));
        let files = fs::read_dir(&folder).with_context(|| format!("{} can't be read", folder.display()))?;
        let mut debs: Vec<PathBuf> = files.flatten().map(|file| file.path()).collect();
        debs.sort();
        Ok(debs)
    }
}

/// The names of all installed packages.
fn installed() -> Result<BTreeSet<String>> {
    let list =
        child::answer(Command::new("dpkg-query").args(["-W", "-f", "${Package} ${db:Status-Status}\n"]))
            .context("`dpkg-query -W` failed")?;
    Ok(list.lines().filter_map(|line| line.strip_suffix(" installed")).map(str::to_owned).collect())
}

/// The fields of the first paragraph of a control text.
fn fields(text: &str) -> BTreeMap<&str, &str> {
    text.lines().take_while(|line| !line.is_empty()).filter_map(|line| line.split_once(": ")).collect()
}

/// The names in a `Depends` field; of alternatives the first.
fn dependencies(field: &str) -> Vec<String> {
    field
        .split(',')
        .filter_map(|one| one.split('|').next())
        .filter_map(|one| one.split_whitespace().next())
        .map(|name| name.split(':').next().unwrap_or(name).to_owned())
        .collect()
}

fn unpack(debs: &[PathBuf], folder: &Path) -> Result<()> {
    fs::create_dir_all(folder).with_context(|| format!("{} can't be made", folder.display()))?;
    let bar = ProgressBar::new(debs.len() as u64);
    bar.set_style(ProgressStyle::with_template("Unpacking {bar:30} {pos}/{len} {msg}").context("bar")?);
    for deb in debs {
        let name = deb.file_name().unwrap_or_default().to_string_lossy();
        bar.set_message(name.split('_').next().unwrap_or_default().to_owned());
        let status = child::run(Command::new("dpkg").arg("-x").arg(deb).arg(folder))?;
        ensure!(status.success(), "{name} can't be unpacked; is there room for 900 MB?");
        bar.inc(1);
    }
    bar.finish_and_clear();
    Ok(())
}

/// Writes the script that starts the compiler with its own libraries, as it will be found once `folder` has become `place`.
fn write_wrapper(folder: &Path, place: &Path) -> Result<()> {
    let mut libraries = Vec::new();
    for part in ["usr/lib", "lib"] {
        let Ok(entries) = fs::read_dir(folder.join(part)) else { continue };
        for entry in entries.flatten() {
            if entry.file_name().to_string_lossy().contains("-linux-gnu") {
                libraries.push(place.join(part).join(entry.file_name()).to_string_lossy().into_owned());
            }
        }
    }
    if !folder.join("usr/bin/rustc").exists() {
        bail!("the packages hold no usr/bin/rustc");
    }
    let quoted = |text: &str| format!("'{}'", text.replace('\'', r"'\''"));
    let script = format!(
        "#!/bin/sh\nLD_LIBRARY_PATH={} exec {} \"$@\"\n",
        quoted(&libraries.join(":")),
        quoted(&place.join("usr/bin/rustc").to_string_lossy())
    );
    let wrapper = folder.join("rustc");
    fs::write(&wrapper, script).with_context(|| format!("{} can't be written", wrapper.display()))?;
    make_executable(&wrapper).with_context(|| format!("{} can't be made executable", wrapper.display()))
}

#[cfg(unix)]
fn make_executable(file: &Path) -> std::io::Result<()> {
    use std::os::unix::fs::PermissionsExt as _;
    fs::set_permissions(file, fs::Permissions::from_mode(0o755))
}

#[cfg(not(unix))]
fn make_executable(_: &Path) -> std::io::Result<()> {
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn dependencies_are_read_without_versions_architectures_and_alternatives() {
        let field = "libc6 (>= 2.34), libxml2:any (>= 2.7.4), default-mta | mail-transport-agent, gcc";
        assert_eq!(dependencies(field), ["libc6", "libxml2", "default-mta", "gcc"]);
    }

    #[test]
    fn only_the_first_paragraph_counts() {
        let text = "Package: a\nVersion: 1:2\nDepends: b, c\n\nPackage: a\nVersion: 1\n";
        assert_eq!(fields(text).get("Version"), Some(&"1:2"));
    }

    #[test]
    fn the_newest_linker_is_taken_by_number_not_by_letter() {
        let folder = tempfile::tempdir().unwrap();
        for name in ["wasm-ld-9", "wasm-ld-22", "wasm-ld-19", "wasm-ld-x", "ld.lld-30"] {
            fs::write(folder.path().join(name), "").unwrap();
        }
        assert_eq!(newest(folder.path(), "wasm-ld-").unwrap().file_name().unwrap(), "wasm-ld-22");
        assert!(newest(folder.path(), "lld-").is_err());
    }
}
