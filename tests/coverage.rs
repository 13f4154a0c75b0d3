//! Nothing that gives a number goes without a check from outside: every public distribution and every procedure of
//! adjustment is called by name somewhere in `tests/reference`; and no reference values lie there unread.

use std::fs;
use std::path::Path;

fn read(path: &str) -> String {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join(path);
    fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

/// Everything in `tests/reference/*.rs`, one text.
fn reference_checks() -> String {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference");
    let files =
        fs::read_dir(folder).expect("the reference checks").map(|entry| entry.expect("a file").path());
    let sources = files.filter(|path| path.extension().is_some_and(|ending| ending == "rs"));
    sources.map(|path| fs::read_to_string(path).expect("readable")).collect()
}

/// The string literals of a source text; escaped quotes do not matter for names of files.
fn literals(text: &str) -> Vec<&str> {
    text.split('"').skip(1).step_by(2).collect()
}

/// Whether `text` is `pattern`, where `{...}` in the pattern stands for anything (as in a `format!`).
fn fits(text: &str, pattern: &str) -> bool {
    let Some((before, rest)) = pattern.split_once('{') else { return text == pattern };
    let after = rest.split_once('}').map_or("", |(_, after)| after);
    // A name that is a placeholder alone would fit everything.
    if before.len() + after.len() < 6 || !text.starts_with(before) {
        return false;
    }
    (before.len()..=text.len()).any(|end| text.is_char_boundary(end) && fits(&text[end..], after))
}

/// Every file of reference values under `folder`, as "FOLDER/NAME" without its ending.
fn value_files(folder: &Path) -> Vec<String> {
    let mut found = Vec::new();
    for entry in
        fs::read_dir(folder).expect("the reference values").map(|entry| entry.expect("a file").path())
    {
        if entry.is_dir() {
            found.extend(value_files(&entry));
        } else if entry.extension().is_some_and(|ending| ending == "json") {
            let name = |path: &Path| path.file_stem().expect("a name").to_string_lossy().into_owned();
            found.push(format!("{}/{}", name(folder), name(&entry)));
        }
    }
    found.sort();
    found
}

#[test]
fn every_file_of_reference_values_is_read_by_a_check() {
    let checks = reference_checks();
    let names: Vec<&str> = literals(&checks).into_iter().map(|name| name.trim_end_matches(".json")).collect();
    let files = value_files(&Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference/data"));
    assert!(files.len() > 30, "the files were found: {files:?}");
    // A check names a file alone, with its folder, or by the end of its path.
    let read = |file: &String| {
        let alone = file.split_once('/').expect("a folder").1;
        names.iter().any(|name| fits(file, name) || fits(alone, name) || name.ends_with(&format!("/{file}")))
    };
    let unread: Vec<&String> = files.iter().filter(|file| !read(file)).collect();
    assert!(unread.is_empty(), "no check in tests/reference reads {unread:?}");
}

#[test]
fn every_check_against_a_list_of_values_is_on_the_page_of_accuracies() {
    let page = read("tests/reference/accuracy_page.rs");
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference");
    let mut checks = 0;
    for entry in
        fs::read_dir(folder).expect("the reference checks").map(|entry| entry.expect("a file").path())
    {
        let source = if entry.is_file() { fs::read_to_string(&entry).expect("readable") } else { continue };
        if !source.contains("use crate::accuracy::{agree") && !source.contains("use crate::accuracy::agree") {
            continue;
        }
        let module = entry.file_stem().expect("a name").to_string_lossy();
        for test in source.split("#[test]").skip(1) {
            let (name, body) =
                test.split_once("fn ").and_then(|(_, rest)| rest.split_once('(')).expect("a function");
            // Up to the end of the function: helpers that stand below it are not its own.
            let body = body.split("\n}").next().expect("a body");
            if ["agree(", "agree_on(", "agree_each(", "agree_by_rank(", "tails_agree("]
                .iter()
                .any(|call| body.contains(call))
            {
                let listed = format!("{module}::{name},");
                assert!(page.contains(&listed), "tests/reference/accuracy_page.rs does not list {listed}");
                checks += 1;
            }
        }
    }
    assert!(checks > 10, "the checks were found: {checks}");
}

/// The names that follow `before` at the start of a line of `text`, up to the first sign that is no part of a name.
fn names_after<'a>(text: &'a str, before: &str) -> Vec<&'a str> {
    let lines = text.lines().filter_map(|line| line.strip_prefix(before));
    lines
        .filter_map(|rest| rest.split(|c: char| !c.is_alphanumeric() && c != '_').next())
        .filter(|name| !name.is_empty())
        .collect()
}

#[test]
fn every_public_distribution_has_a_reference_check() {
    let checks = reference_checks();
    let source = read("src/numerics/distributions/mod.rs");
    let distributions = names_after(&source, "pub mod ");
    assert!(distributions.len() > 10, "the list was read: {distributions:?}");
    let without: Vec<_> =
        distributions.iter().filter(|name| !checks.contains(&format!("{name}::"))).collect();
    assert!(without.is_empty(), "no file in tests/reference calls {without:?}");
}

#[test]
fn every_procedure_of_adjustment_has_a_reference_check() {
    let checks = reference_checks();
    let sources =
        [read("src/methods/multiplicity/procedure.rs"), read("src/methods/multiplicity/p_values.rs")];
    let mut procedures = Vec::new();
    for (source, list) in sources.iter().zip(["pub enum Adjust {", "pub enum PValueMethod {"]) {
        let body = source
            .split(list)
            .nth(1)
            .and_then(|rest| rest.split("\n}").next())
            .expect("the list of procedures");
        procedures.extend(
            names_after(body, "    ").into_iter().filter(|name| name.starts_with(char::is_uppercase)),
        );
    }
    procedures.retain(|name| *name != "PValues");
    assert!(procedures.len() > 10, "the lists were read: {procedures:?}");
    let named = |name: &str| checks.split(|c: char| !c.is_alphanumeric()).any(|word| word == name);
    let without: Vec<_> = procedures.into_iter().filter(|name| !named(name)).collect();
    assert!(without.is_empty(), "no file in tests/reference names {without:?}");
}
