//! Where the project's folders are, how other programs are run, and which steps are up to date.

use anyhow::{Context, Result, bail};
use sha2::{Digest, Sha256};
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

/// The repository's folders.
pub struct Project {
    pub root: PathBuf,
    /// Cargo's target folder; everything made on the way to the page stands in its `pack` folder.
    pub target: PathBuf,
}

impl Project {
    /// The project this helper was started in by Cargo.
    pub fn here() -> Result<Project> {
        let manifest = std::env::var_os("CARGO_MANIFEST_DIR").context("start this helper as `cargo pack`")?;
        let root =
            Path::new(&manifest).parent().context("the helper's folder stands in the project")?.to_owned();
        let target = match std::env::var_os("CARGO_TARGET_DIR") {
            Some(folder) => root.join(folder),
            None => root.join("target"),
        };
        fs::create_dir_all(target.join("pack"))?;
        Ok(Project { root, target })
    }

    /// A file of the helper's own, kept between runs.
    pub fn kept(&self, name: &str) -> PathBuf {
        self.target.join("pack").join(name)
    }

    pub fn www(&self) -> PathBuf {
        self.root.join("www")
    }

    /// The finished page.
    pub fn html(&self) -> PathBuf {
        self.root.join("dist").join("levelwise.html")
    }

    /// Does `work` unless it was done before with the same `inputs` and left all of `outputs` behind.
    pub fn step(
        &self,
        name: &str,
        inputs: &[&[u8]],
        outputs: &[PathBuf],
        work: impl FnOnce() -> Result<()>,
    ) -> Result<()> {
        let stamp = self.kept(&format!("{name}.stamp"));
        let fingerprint = fingerprint(inputs);
        let same = fs::read_to_string(&stamp).is_ok_and(|old| old == fingerprint);
        if same && outputs.iter().all(|path| path.exists()) {
            return Ok(());
        }
        // Without its stamp a step that is broken off half-way is done again.
        let _ = fs::remove_file(&stamp);
        work()?;
        fs::write(&stamp, fingerprint)?;
        Ok(())
    }
}

/// The SHA-256 of the parts, each preceded by its length so that parts cannot run into each other.
fn fingerprint(parts: &[&[u8]]) -> String {
    let mut hash = Sha256::new();
    for part in parts {
        hash.update((part.len() as u64).to_le_bytes());
        hash.update(part);
    }
    hash.finalize().iter().map(|byte| format!("{byte:02x}")).collect()
}

/// Every file under `folder` for which `wanted` holds, sorted by path, as one text that names and holds them all.
pub fn contents_of(folder: &Path, wanted: &dyn Fn(&Path) -> bool) -> Result<Vec<u8>> {
    let mut all = Vec::new();
    for path in files_under(folder)? {
        if wanted(&path) {
            let bytes = read(&path)?;
            all.extend_from_slice(format!("{} {}\n", path.display(), bytes.len()).as_bytes());
            all.extend_from_slice(&bytes);
        }
    }
    Ok(all)
}

/// Every file under `folder`, sorted by path; nothing when there is no such folder.
pub fn files_under(folder: &Path) -> Result<Vec<PathBuf>> {
    let mut found = Vec::new();
    let mut folders = vec![folder.to_owned()];
    while let Some(folder) = folders.pop() {
        let Ok(entries) = fs::read_dir(&folder) else { continue };
        for entry in entries {
            let path = entry?.path();
            if path.is_dir() {
                folders.push(path);
            } else {
                found.push(path);
            }
        }
    }
    found.sort();
    Ok(found)
}

pub fn read(path: &Path) -> Result<Vec<u8>> {
    fs::read(path).with_context(|| format!("cannot read {}", path.display()))
}

pub fn read_text(path: &Path) -> Result<String> {
    fs::read_to_string(path).with_context(|| format!("cannot read {}", path.display()))
}

pub fn write(path: &Path, bytes: impl AsRef<[u8]>) -> Result<()> {
    if let Some(folder) = path.parent() {
        fs::create_dir_all(folder)?;
    }
    fs::write(path, bytes).with_context(|| format!("cannot write {}", path.display()))
}

/// Runs a program to its end, its output going where ours goes.
pub fn run(command: &mut Command) -> Result<()> {
    let name = command.get_program().to_string_lossy().into_owned();
    let status = command.stdin(Stdio::null()).status().with_context(|| format!("cannot start {name}"))?;
    if !status.success() {
        bail!("{} failed ({status})", spelled_out(command));
    }
    Ok(())
}

/// What a program prints on its standard output.
pub fn printed_by(command: &mut Command) -> Result<String> {
    let name = command.get_program().to_string_lossy().into_owned();
    let output = command.stdin(Stdio::null()).output().with_context(|| format!("cannot start {name}"))?;
    if !output.status.success() {
        let said = String::from_utf8_lossy(&output.stderr);
        bail!("{} failed ({}): {}", spelled_out(command), output.status, said.trim());
    }
    Ok(String::from_utf8(output.stdout)?)
}

fn spelled_out(command: &Command) -> String {
    let mut words = vec![command.get_program().to_string_lossy().into_owned()];
    words.extend(command.get_args().map(|word| word.to_string_lossy().into_owned()));
    words.join(" ")
}
