//! From a crate to its module: compile for WebAssembly, bind to JavaScript, optimise.
//!
//! The engine and the module of `tests/numbers`, which compares its numbers with the native ones, go the same way, so that
//! what is compared is built like what is handed out.
//!
//! The binding step is a library call, so its version is the one in Cargo.lock and cannot drift apart from the
//! crate's. Compiled code carries the names of source files in its panic messages; they are rewritten so that the
//! page does not tell on whose machine it was built.

use crate::page::Finish;
use crate::project::{Project, read, read_text, run, write};
use crate::toolchain::{Wasm, cargo};
use anyhow::{Context, Result};
use serde_json::Value;
use std::fs;
use std::path::PathBuf;
use std::process::Command;
use wasm_bindgen_cli_support::Bindgen;

/// A crate of the workspace that becomes a module.
#[derive(Clone, Copy)]
pub struct Source {
    package: &'static str,
    /// What its files among those kept are called.
    name: &'static str,
}

/// What the page carries.
pub const ENGINE: Source = Source { package: "levelwise", name: "engine" };
/// The table of points and the timed jobs of `tests/numbers`.
pub const NUMBERS: Source = Source { package: "levelwise-numbers", name: "numbers" };

/// A module and what stands between it and JavaScript.
pub struct Module {
    pub wasm: Vec<u8>,
    /// Defines the global `wasm_bindgen`, through which the module is started and called.
    pub glue: String,
}

impl Source {
    /// Where a script finds the optimised module and its JavaScript, as variables of its environment.
    pub fn variables(self, project: &Project) -> [(String, PathBuf); 2] {
        let name = self.name.to_uppercase();
        [
            (format!("LEVELWISE_{name}_WASM"), self.wasm(project)),
            (format!("LEVELWISE_{name}_GLUE"), self.glue(project, Finish::Release)),
        ]
    }

    /// Where the optimised module is kept.
    fn wasm(self, project: &Project) -> PathBuf {
        project.kept(&format!("{}.wasm", self.name))
    }

    /// Where the JavaScript beside it is kept.
    pub fn glue(self, project: &Project, finish: Finish) -> PathBuf {
        project.kept(&format!("{}-glue-{}.js", self.name, finish.name()))
    }
}

/// The module, built as far as its sources have changed. `metadata` is Cargo's description of the project.
pub fn build(project: &Project, metadata: &Value, source: Source, finish: Finish) -> Result<Module> {
    let compiled = compile(project, metadata, source, finish)?;
    let raw = read(&compiled)?;
    let kind = format!("{}-{}", source.name, finish.name());
    let bound = project.kept(&format!("{kind}-bound.wasm"));
    let glue = source.glue(project, finish);
    project.step(&format!("{kind}-bind"), &[&raw], &[bound.clone(), glue.clone()], || {
        let mut output = Bindgen::new()
            .input_bytes(source.name, raw.clone())
            .no_modules(true)?
            .typescript(false)
            .omit_default_module_path(true)
            .remove_name_section(finish == Finish::Release)
            .generate_output()?;
        write(&glue, output.js())?;
        write(&bound, output.wasm_mut().emit_wasm())
    })?;
    let wasm = match finish {
        Finish::Fast => read(&bound)?,
        Finish::Release => read(&optimise(project, source, &bound)?)?,
    };
    Ok(Module { wasm, glue: read_text(&glue)? })
}

fn compile(project: &Project, metadata: &Value, source: Source, finish: Finish) -> Result<PathBuf> {
    let toolchain = Wasm::find(project)?;
    let mut command = toolchain.cargo_build(project, &remapped_paths(project, metadata)?)?;
    if finish == Finish::Fast {
        // The release profile without what makes it slow to build; one profile keeps panics and features the same.
        command.env("CARGO_PROFILE_RELEASE_LTO", "off");
        command.env("CARGO_PROFILE_RELEASE_OPT_LEVEL", "1");
        command.env("CARGO_PROFILE_RELEASE_CODEGEN_UNITS", "16");
        command.env("CARGO_PROFILE_RELEASE_INCREMENTAL", "true");
    }
    run(command.args(["--release", "--package", source.package, "--lib"]))?;
    let file = format!("{}.wasm", source.package.replace('-', "_"));
    Ok(project.target.join("web/wasm32-unknown-unknown/release").join(file))
}

fn optimise(project: &Project, source: Source, bound: &PathBuf) -> Result<PathBuf> {
    let optimised = source.wasm(project);
    project.step(
        &format!("{}-optimise", source.name),
        &[&read(bound)?],
        std::slice::from_ref(&optimised),
        || {
            run(Command::new("node")
                .current_dir(project.www())
                .args(["node_modules/binaryen/bin/wasm-opt", "-O3", "--strip-debug", "--strip-producers"])
                // What the compiler's baseline has had since 2024; every browser that runs the page has them all.
                .args(["--enable-bulk-memory", "--enable-multivalue", "--enable-mutable-globals"])
                .args(["--enable-nontrapping-float-to-int", "--enable-reference-types", "--enable-sign-ext"])
                .arg("-o")
                .arg(&optimised)
                .arg(bound))
        },
    )?;
    Ok(optimised)
}

/// Compiler flags that shorten source paths to something that is the same on every machine.
fn remapped_paths(project: &Project, metadata: &Value) -> Result<Vec<String>> {
    // Libraries stand in folders named after the registry: the parent of a package's folder.
    let mut folders: Vec<String> = packages(metadata)?
        .iter()
        .filter(|package| !package["source"].is_null())
        .filter_map(|package| {
            let manifest = PathBuf::from(package["manifest_path"].as_str()?);
            Some(manifest.parent()?.parent()?.display().to_string())
        })
        .collect();
    folders.sort();
    folders.dedup();
    let mut flags: Vec<String> =
        folders.iter().map(|folder| format!("--remap-path-prefix={folder}=libraries")).collect();
    flags.push(format!("--remap-path-prefix={}=levelwise", project.root.display()));
    for sources in ["/usr/src", "/usr/lib/rustlib/src/rust"] {
        let real = fs::canonicalize(sources).unwrap_or_else(|_| PathBuf::from(sources));
        flags.push(format!("--remap-path-prefix={sources}=rust"));
        if real.display().to_string() != sources {
            flags.push(format!("--remap-path-prefix={}=rust", real.display()));
        }
    }
    Ok(flags)
}

/// Cargo's description of the project and of every library that the WebAssembly build uses.
pub fn metadata(project: &Project) -> Result<Value> {
    let mut command = Command::new(cargo());
    command.current_dir(&project.root).args(["metadata", "--format-version", "1"]);
    command.args(["--filter-platform", "wasm32-unknown-unknown"]);
    Ok(serde_json::from_str(&crate::project::printed_by(&mut command)?)?)
}

/// The packages in Cargo's description.
pub fn packages(metadata: &Value) -> Result<&Vec<Value>> {
    metadata["packages"].as_array().context("cargo metadata lists no packages")
}
