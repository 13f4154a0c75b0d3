//! Nothing that gives a number goes without points in the table, and every point has an answer.

use levelwise_numbers::table::Table;
use std::collections::BTreeSet;
use std::fs;
use std::path::{Path, PathBuf};
use std::sync::LazyLock;

/// Made once: it takes seconds.
static TABLE: LazyLock<Table> = LazyLock::new(Table::complete);

fn root() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../..")
}

fn read(path: &Path) -> String {
    fs::read_to_string(path).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

/// The names that stand after `before` at the start of a line, up to the first sign that is no part of a name.
fn names_after(text: &str, before: &str) -> Vec<String> {
    let lines = text.lines().filter_map(|line| line.strip_prefix(before));
    let names = lines.filter_map(|rest| rest.split(|c: char| !c.is_alphanumeric() && c != '_').next());
    names.filter(|name| !name.is_empty()).map(str::to_owned).collect()
}

/// What the table must hold of the module `name`, whose file is in `folder`: its public functions and those of its private
/// parts, or anything of it where all its functions belong to types; then what its public parts ask for.
fn expected(folder: &Path, name: &str) -> Vec<String> {
    let inside = folder.join(name);
    let file = folder.join(format!("{name}.rs"));
    let text = read(&if file.is_file() { file } else { inside.join("mod.rs") });
    let part = |part: String| read(&inside.join(format!("{part}.rs")));
    let private = names_after(&text, "mod ").into_iter().filter(|it| it != "tests").map(part);
    let public = names_after(&text, "pub mod ");
    let functions: Vec<String> =
        [text].into_iter().chain(private).flat_map(|it| names_after(&it, "pub fn ")).collect();
    let mut all: Vec<String> = functions.into_iter().map(|function| format!("{name}::{function}")).collect();
    if all.is_empty() && public.is_empty() {
        all.push(format!("{name}::"));
    }
    all.extend(public.iter().flat_map(|part| expected(&inside, part)));
    all
}

#[test]
fn every_public_function_of_the_numerics_has_points() {
    let calls: BTreeSet<&str> = TABLE.points.iter().map(|point| point.function).collect();
    let mut names = expected(&root().join("src"), "numerics");
    assert!(names.len() > 70, "the list was read: {names:?}");
    // A name that ends in `::` asks for any function of the module.
    names.retain(|name| {
        !calls.iter().any(|call| call == name || (name.ends_with("::") && call.starts_with(name)))
    });
    assert!(names.is_empty(), "add points to tests/numbers/src/points for {names:?}");
}

#[test]
fn every_example_notebook_has_its_answers_in_the_table() {
    let mut examples = 0;
    for entry in fs::read_dir(root().join("www/examples")).expect("the examples") {
        let file = entry.expect("an entry of a folder").file_name().to_string_lossy().into_owned();
        let Some(name) = file.strip_suffix(".levelwise.toml") else { continue };
        examples += 1;
        let start = format!("{name}/");
        let numbers =
            TABLE.points.iter().filter(|it| it.function == "answers" && it.arguments.starts_with(&start));
        assert!(numbers.count() > 5, "{file} has no answers: add it to tests/numbers/src/points/answers.rs");
    }
    assert!(examples > 0, "there are examples");
}

#[test]
fn every_point_is_a_number_under_a_name_of_its_own() {
    let mut seen = BTreeSet::new();
    for point in &TABLE.points {
        let call = format!("{}({})", point.function, point.arguments);
        assert!(point.value.as_ref().is_ok_and(|value| !value.is_nan()), "{call} is {:?}", point.value);
        assert!(seen.insert(call.clone()), "{call} is there twice");
    }
    assert!(seen.len() > 5000, "{} points", seen.len());
}
