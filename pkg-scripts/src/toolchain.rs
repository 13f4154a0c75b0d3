//! What has to be on the machine besides Rust itself: a WebAssembly standard library, Node with the page's
//! libraries, and for the tests a browser. Each is found where it is, else fetched in the gentlest way that the
//! machine allows, else one sentence says what to install. For the benchmarks alone there is SciPy; without it they
//! measure ours.

use crate::project::{Project, printed_by, read, run};
use anyhow::{Context, Result, bail};
use std::ffi::OsString;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::Command;

const TARGET: &str = "wasm32-unknown-unknown";

/// The way to compile for WebAssembly on this machine.
#[derive(Clone, Copy, PartialEq)]
pub enum Wasm {
    /// The Rust in use has the standard library for the target.
    Installed,
    /// Debian's Rust, which builds its standard library from its sources.
    Debian,
}

const DEBIAN_PACKAGES: [&str; 4] = ["rustc-web", "cargo-web", "rust-web-src", "lld-22"];

impl Wasm {
    /// The first way that works: installed, added by rustup, Debian's packages.
    pub fn find(project: &Project) -> Result<Wasm> {
        if target_installed() {
            return Ok(Wasm::Installed);
        }
        // Rustup said no on an earlier run: it is not asked again while Debian's packages are there.
        let chosen = project.kept("wasm-toolchain");
        if fs::read_to_string(&chosen).is_ok_and(|way| way == "debian") && debian_complete() {
            return Ok(Wasm::Debian);
        }
        let added = Command::new("rustup").args(["target", "add", TARGET]).output();
        if added.is_ok_and(|output| output.status.success()) && target_installed() {
            return Ok(Wasm::Installed);
        }
        if !debian_complete() {
            let names = DEBIAN_PACKAGES.join(" ");
            debian_install(&DEBIAN_PACKAGES).with_context(|| {
                format!(
                    "The WebAssembly standard library for Rust is missing: install it with \
                     `rustup target add {TARGET}`, or on Debian as root with `apt-get install {names}`."
                )
            })?;
        }
        fs::write(chosen, "debian")?;
        Ok(Wasm::Debian)
    }

    /// Cargo, ready for `build`: the right program, environment, target and target folder.
    pub fn cargo_build(self, project: &Project, remapped: &[String]) -> Result<Command> {
        let mut command = match self {
            Wasm::Installed => Command::new(cargo()),
            Wasm::Debian => {
                let mut command = Command::new("/usr/bin/cargo");
                // Rustup's variables would lead Debian's Cargo to rustup's compiler.
                for name in ["RUSTUP_TOOLCHAIN", "CARGO", "LD_LIBRARY_PATH", "RUSTDOC", "RUSTC_WRAPPER"] {
                    command.env_remove(name);
                }
                command.env("RUSTC", "/usr/bin/rustc").env("RUSTC_BOOTSTRAP", "1");
                command.env("PATH", path_with_linker(project)?);
                command
            }
        };
        command
            .current_dir(&project.root)
            .env("CARGO_ENCODED_RUSTFLAGS", remapped.join("\u{1f}"))
            .arg("build");
        if self == Wasm::Debian {
            command.arg("-Zbuild-std=std,panic_abort");
        }
        command.args(["--target", TARGET, "--target-dir"]).arg(project.target.join("web"));
        Ok(command)
    }
}

/// The Cargo that started this helper.
pub fn cargo() -> OsString {
    std::env::var_os("CARGO").unwrap_or_else(|| "cargo".into())
}

fn target_installed() -> bool {
    printed_by(Command::new("rustc").args(["--print", "target-libdir", "--target", TARGET]))
        .is_ok_and(|folder| Path::new(folder.trim()).is_dir())
}

fn debian_complete() -> bool {
    DEBIAN_PACKAGES[..3].iter().all(|name| {
        printed_by(Command::new("dpkg-query").args(["-W", "-f=${db:Status-Status}", name]))
            .is_ok_and(|status| status == "installed")
    }) && debian_linker().is_some()
}

fn debian_linker() -> Option<PathBuf> {
    let mut found: Vec<PathBuf> = fs::read_dir("/usr/lib")
        .ok()?
        .filter_map(|entry| Some(entry.ok()?.path()))
        .filter(|path| path.file_name().is_some_and(|name| name.to_string_lossy().starts_with("llvm-")))
        .map(|path| path.join("bin/lld"))
        .filter(|path| path.exists())
        .collect();
    found.sort();
    found.pop()
}

/// The search path with a folder at its end in which Debian's linker goes by the name that rustc asks for.
fn path_with_linker(project: &Project) -> Result<OsString> {
    let linker = debian_linker().context("Debian's linker is missing: install the package lld-22.")?;
    let folder = project.kept("linker");
    fs::create_dir_all(&folder)?;
    let link = folder.join("rust-lld");
    if fs::read_link(&link).ok().as_deref() != Some(linker.as_path()) {
        let _ = fs::remove_file(&link);
        symlink(&linker, &link)?;
    }
    let mut folders: Vec<PathBuf> =
        std::env::var_os("PATH").map(|path| std::env::split_paths(&path).collect()).unwrap_or_default();
    folders.push(folder);
    Ok(std::env::join_paths(folders)?)
}

#[cfg(unix)]
fn symlink(original: &Path, link: &Path) -> std::io::Result<()> {
    std::os::unix::fs::symlink(original, link)
}

#[cfg(not(unix))]
fn symlink(_: &Path, _: &Path) -> std::io::Result<()> {
    Err(std::io::Error::other("Debian's packages are for Debian"))
}

/// Installs packages of the distribution; refuses where that is not ours to do.
fn debian_install(packages: &[&str]) -> Result<()> {
    if !Path::new("/etc/debian_version").exists() {
        bail!("this is not a Debian system");
    }
    if printed_by(Command::new("id").arg("-u"))?.trim() != "0" {
        bail!("installing packages is for root");
    }
    println!("Installing {} from the distribution", packages.join(", "));
    let apt = |arguments: &[&str]| {
        let mut command = Command::new("apt-get");
        command
            .env("DEBIAN_FRONTEND", "noninteractive")
            .args(["-qq", "-o", "Dpkg::Use-Pty=0"])
            .args(arguments);
        run(&mut command)
    };
    apt(&["update"])?;
    apt(&[&["install", "-y", "--no-install-recommends"], packages].concat())
}

/// Node, and the page's libraries as its lock file has them.
pub fn page_libraries(project: &Project) -> Result<()> {
    let has =
        |name: &str| Command::new(name).arg("--version").output().is_ok_and(|output| output.status.success());
    if !has("node") || !has("npm") {
        debian_install(&["nodejs", "npm"])
            .context("Node is missing: install Node 20 or later, with npm, and start again.")?;
    }
    let www = project.www();
    let lock = read(&www.join("package-lock.json"))?;
    let manifest = read(&www.join("package.json"))?;
    project.step("page-libraries", &[&lock, &manifest], &[www.join("node_modules")], || {
        run(Command::new("npm").current_dir(&www).args(["ci", "--no-audit", "--no-fund", "--loglevel=error"]))
    })
}

/// What the numerics are measured beside, as a Python installer takes it.
const SCIPY: [&str; 2] = ["numpy==2.4.6", "scipy==1.17.1"];

/// A Python with SciPy in an environment of its own under the target folder; `None`, and a sentence, where there is none to be had.
pub fn scipy(project: &Project) -> Option<PathBuf> {
    let folder = project.kept("scipy");
    let python = folder.join("bin/python");
    let wanted = SCIPY.join(" ");
    let installed = project.step("scipy", &[wanted.as_bytes()], std::slice::from_ref(&python), || {
        // What an interrupted or an older run left behind is not mixed with the new.
        let _ = fs::remove_dir_all(&folder);
        println!("Installing {wanted} for this benchmark alone");
        run(Command::new("python3").args(["-m", "venv"]).arg(&folder))?;
        run(Command::new(&python)
            .args([
                "-m",
                "pip",
                "install",
                "--quiet",
                "--disable-pip-version-check",
                "--only-binary",
                ":all:",
            ])
            .args(SCIPY))
    });
    if let Err(error) = &installed {
        println!("SciPy cannot be installed here, so ours is measured alone: {error:#}");
    }
    installed.is_ok().then_some(python)
}

/// The browser that the tests drive: the one named by `CHROMIUM`, else the one on the machine.
pub fn browser() -> Result<PathBuf> {
    if let Some(named) = std::env::var_os("CHROMIUM") {
        return Ok(PathBuf::from(named));
    }
    if let Some(found) = browser_on_machine() {
        return Ok(found);
    }
    debian_install(&["chromium"])
        .context("Chromium is missing: install it, or say where it is in the variable CHROMIUM.")?;
    browser_on_machine().context("Chromium was installed but cannot be found; say where it is in CHROMIUM.")
}

fn browser_on_machine() -> Option<PathBuf> {
    let path = std::env::var_os("PATH")?;
    let names = ["chromium", "chromium-browser", "google-chrome"];
    std::env::split_paths(&path)
        .flat_map(|folder| names.map(|name| folder.join(name)))
        .find(|program| program.is_file())
}
