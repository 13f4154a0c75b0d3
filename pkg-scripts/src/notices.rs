//! The licence notices that the single file carries: those of every library compiled or bundled into it.

use crate::engine::packages;
use crate::project::{Project, read_text};
use anyhow::{Context, Result};
use serde_json::Value;
use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::{Path, PathBuf};

/// Rust's own standard library comes with the compiler, not as a package: its notice stands here.
const STANDARD_LIBRARY: &str = "\
The Rust standard library, and the parts of it named alloc, core, std, compiler_builtins, dlmalloc and hashbrown.
Copyright (c) The Rust Project Contributors. MIT OR Apache-2.0.";

/// The terms of the MIT licence, for libraries that offer it without bringing its text along.
const MIT_TERMS: &str = "\
Permission is hereby granted, free of charge, to any person obtaining a copy of this software and associated
documentation files (the \"Software\"), to deal in the Software without restriction, including without limitation
the rights to use, copy, modify, merge, publish, distribute, sublicense, and/or sell copies of the Software, and to
permit persons to whom the Software is furnished to do so, subject to the following conditions:

The above copyright notice and this permission notice shall be included in all copies or substantial portions of
the Software.

THE SOFTWARE IS PROVIDED \"AS IS\", WITHOUT WARRANTY OF ANY KIND, EXPRESS OR IMPLIED, INCLUDING BUT NOT LIMITED TO
THE WARRANTIES OF MERCHANTABILITY, FITNESS FOR A PARTICULAR PURPOSE AND NONINFRINGEMENT. IN NO EVENT SHALL THE
AUTHORS OR COPYRIGHT HOLDERS BE LIABLE FOR ANY CLAIM, DAMAGES OR OTHER LIABILITY, WHETHER IN AN ACTION OF CONTRACT,
TORT OR OTHERWISE, ARISING FROM, OUT OF OR IN CONNECTION WITH THE SOFTWARE OR THE USE OR OTHER DEALINGS IN THE
SOFTWARE.
";

/// All notices as one text. Libraries with word-for-word the same licence text share it.
///
/// `bundled` are the files that the bundler put into the page's scripts, relative to `www`.
pub fn collect(project: &Project, metadata: &Value, bundled: &BTreeSet<String>) -> Result<String> {
    let mut by_text: BTreeMap<String, Vec<String>> = BTreeMap::new();
    let mut add = |title: String, text: String| by_text.entry(text).or_default().push(title);
    for linked in linked_crates(metadata)? {
        add(linked.title, licence_text(&linked.folder, &linked.declared, &linked.authors)?);
    }
    for folder in bundled_packages(project, bundled) {
        let manifest: Value = serde_json::from_str(&read_text(&folder.join("package.json"))?)?;
        let title = format!("{} {}", text_of(&manifest["name"]), text_of(&manifest["version"]));
        add(
            title,
            licence_text(&folder, text_of(&manifest["license"]), text_of(&manifest["author"]["name"]))?,
        );
    }
    let own = read_text(&project.root.join("LICENSE"))?;
    let mut parts =
        vec![format!("Levelwise\n\n{}", own.trim()), format!("{STANDARD_LIBRARY}\n\n{}", MIT_TERMS.trim())];
    let mut groups: Vec<(String, String)> =
        by_text.into_iter().map(|(text, titles)| (titles.join(", "), text)).collect();
    groups.sort();
    parts.extend(groups.into_iter().map(|(titles, text)| format!("{titles}\n\n{}", text.trim())));
    Ok(parts.join("\n\n----------------------------------------\n\n") + "\n")
}

fn text_of(value: &Value) -> &str {
    value.as_str().unwrap_or("")
}

/// A crate whose code ends in the module.
struct Linked {
    title: String,
    folder: PathBuf,
    declared: String,
    authors: String,
}

/// The crates whose code ends in the module: reached over normal dependencies, macros left out.
fn linked_crates(metadata: &Value) -> Result<Vec<Linked>> {
    let by_id: BTreeMap<&str, &Value> =
        packages(metadata)?.iter().map(|package| (text_of(&package["id"]), package)).collect();
    let nodes = metadata["resolve"]["nodes"].as_array().context("cargo metadata resolves nothing")?;
    let nodes: BTreeMap<&str, &Value> = nodes.iter().map(|node| (text_of(&node["id"]), node)).collect();
    let root = by_id.values().find(|package| package["name"] == "levelwise").context("no crate levelwise")?;
    let mut to_visit = vec![text_of(&root["id"])];
    let mut seen = BTreeSet::new();
    let mut found = Vec::new();
    while let Some(id) = to_visit.pop() {
        let (Some(package), Some(node)) = (by_id.get(id), nodes.get(id)) else { continue };
        if !seen.insert(id) || is_macro(package) {
            continue;
        }
        let folder =
            Path::new(text_of(&package["manifest_path"])).parent().context("a manifest has a folder")?;
        if !package["source"].is_null() {
            let authors: Vec<&str> =
                package["authors"].as_array().into_iter().flatten().map(text_of).collect();
            found.push(Linked {
                title: format!("{} {}", text_of(&package["name"]), text_of(&package["version"])),
                folder: folder.to_owned(),
                declared: text_of(&package["license"]).to_owned(),
                authors: authors.join(", "),
            });
        }
        for dependency in node["deps"].as_array().into_iter().flatten() {
            let kinds = dependency["dep_kinds"].as_array();
            if kinds.into_iter().flatten().any(|kind| kind["kind"].is_null()) {
                to_visit.push(text_of(&dependency["pkg"]));
            }
        }
    }
    Ok(found)
}

fn is_macro(package: &Value) -> bool {
    let targets = package["targets"].as_array();
    targets.into_iter().flatten().any(|target| target["kind"][0] == "proc-macro")
}

/// The package folders under `node_modules` that the bundled files belong to.
fn bundled_packages(project: &Project, bundled: &BTreeSet<String>) -> BTreeSet<PathBuf> {
    let mut found = BTreeSet::new();
    for file in bundled {
        let Some((before, inside)) = file.rsplit_once("node_modules/") else { continue };
        let depth = if inside.starts_with('@') { 2 } else { 1 };
        let name: Vec<&str> = inside.split('/').take(depth).collect();
        found.insert(project.www().join(before).join("node_modules").join(name.join("/")));
    }
    found
}

/// The text of the licence that comes with a library: where several are offered the shorter MIT text is enough.
/// A package that brings no text is named with its authors and the licence it declares.
fn licence_text(folder: &Path, declared: &str, authors: &str) -> Result<String> {
    let mut names: Vec<String> = fs::read_dir(folder)
        .with_context(|| format!("cannot list {}", folder.display()))?
        .filter_map(|entry| Some(entry.ok()?.file_name().to_string_lossy().into_owned()))
        .filter(|name| {
            let upper = name.to_uppercase();
            ["LICENSE", "LICENCE", "COPYING", "NOTICE"].iter().any(|start| upper.starts_with(start))
        })
        .filter(|name| folder.join(name).is_file())
        .collect();
    names.sort();
    if names.iter().any(|name| name.to_uppercase().contains("MIT")) {
        names.retain(|name| name.to_uppercase().contains("MIT") || name.to_uppercase().starts_with("NOTICE"));
    }
    let mut texts = Vec::new();
    for name in names {
        texts.push(read_text(&folder.join(name))?.replace('\r', "").trim().to_owned());
    }
    if texts.is_empty() {
        texts.push(format!(
            "Copyright (c) {}. {declared}.",
            if authors.is_empty() { "its authors" } else { authors }
        ));
        if declared.contains("MIT") {
            texts.push(MIT_TERMS.trim().to_owned());
        }
    }
    Ok(texts.join("\n\n"))
}
