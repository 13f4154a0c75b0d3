//! A number that somebody cites needs its fine print: every public function of `numerics` says what it returns, what it
//! refuses, how accurate it is, and the file says where the method comes from.

use std::fs;
use std::path::{Path, PathBuf};

/// The Rust files below `folder`, in order.
fn files_below(folder: &Path) -> Vec<PathBuf> {
    let mut files = Vec::new();
    for entry in fs::read_dir(folder).unwrap_or_else(|error| panic!("{}: {error}", folder.display())) {
        let path = entry.expect("an entry").path();
        if path.is_dir() {
            files.extend(files_below(&path));
        } else if path.extension().is_some_and(|ending| ending == "rs") {
            files.push(path);
        }
    }
    files.sort();
    files
}

/// The `mod.rs` of the folder in which `file` is one of several: it tells which of them can be seen from outside.
fn folder_head(file: &Path) -> String {
    let head = file.with_file_name("mod.rs");
    if head == file { String::new() } else { fs::read_to_string(head).unwrap_or_default() }
}

/// Whether what `file` makes public can be seen outside its folder.
fn is_seen(file: &Path) -> bool {
    let name = file.file_stem().expect("a name").to_string_lossy().into_owned();
    let head = folder_head(file);
    head.is_empty()
        || [format!("pub mod {name};"), format!("pub use {name}::")].iter().any(|line| head.contains(line))
}

/// A public function: the line on which it begins, its comment, and its signature.
struct Function {
    line: usize,
    comment: String,
    signature: String,
}

/// The functions that `source` makes public, up to its own tests.
fn public_functions(source: &str) -> Vec<Function> {
    let mut functions = Vec::new();
    let mut comment = String::new();
    let mut lines = source.lines().enumerate().take_while(|(_, text)| *text != "#[cfg(test)]");
    while let Some((number, text)) = lines.next() {
        let text = text.trim_start();
        if let Some(rest) = text.strip_prefix("///") {
            comment.push_str(rest.trim());
            comment.push('\n');
        } else if text.starts_with("pub fn ") || text.starts_with("pub const fn ") {
            let mut signature = text.to_owned();
            while !signature.contains('{') {
                let Some((_, next)) = lines.next() else { break };
                signature.push_str(next);
            }
            functions.push(Function { line: number + 1, comment: std::mem::take(&mut comment), signature });
        } else if !text.starts_with("#[") {
            comment.clear();
        }
    }
    functions
}

/// What `function` should say and does not.
fn missing(function: &Function, is_distribution: bool) -> Option<&'static str> {
    if function.comment.trim().is_empty() {
        return Some("says nothing");
    }
    if function.signature.contains("Result<") && !function.comment.contains("# Errors") {
        return Some("can fail and has no section Errors");
    }
    if is_distribution && computes(function) && !function.comment.contains("# Accuracy") {
        return Some("has no section Accuracy");
    }
    None
}

/// Whether a number comes out, as such or with what is known of it.
fn computes(function: &Function) -> bool {
    let result = function.signature.split("->").nth(1).unwrap_or_default();
    ["f64", "Answer", "Tails", "Tail,", "Estimate"].iter().any(|number| result.contains(number))
}

#[test]
fn public_functions_of_numerics_state_errors_and_accuracy_and_files_their_sources() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut faults = Vec::new();
    let mut seen = 0;
    for path in files_below(&root.join("src/numerics")).into_iter().filter(|path| is_seen(path)) {
        let source = fs::read_to_string(&path).expect("a source file");
        let name = path.strip_prefix(root).expect("below the root").display().to_string();
        let is_distribution = name.contains("/distributions/");
        for function in public_functions(&source) {
            seen += 1;
            if let Some(fault) = missing(&function, is_distribution) {
                faults.push(format!("{name}:{}: {fault}", function.line));
            }
        }
        let heads = [&source, &folder_head(&path)];
        // The head of a folder of distributions is a list of them, and no source.
        let silent = !heads.iter().any(|head| head.contains("# References") || head.contains("# Source"));
        if is_distribution && silent && public_functions(&source).iter().any(computes) {
            faults.push(format!("{name}: no section References in its head, and no function with a Source"));
        }
    }
    assert!(seen > 60, "the files were read: {seen} functions");
    assert!(faults.is_empty(), "{}", faults.join("\n"));
}

#[test]
fn a_function_without_its_fine_print_is_found() {
    let source = "/// The half.\npub fn half(x: f64) -> Result<f64, OutOfDomain> {\n}\n\npub fn bare() {\n}\n\n/// Twice.\n///\n/// # Accuracy\n/// Exact.\n#[inline]\npub fn twice(\n    x: f64,\n) -> f64 {\n}\n";
    let functions = public_functions(source);
    let faults: Vec<_> = functions.iter().map(|function| (function.line, missing(function, true))).collect();
    let expected = [(2, Some("can fail and has no section Errors")), (5, Some("says nothing")), (13, None)];
    assert_eq!(faults, expected);
}
