//! Nothing that gives a number goes without a check from outside: every public distribution and every procedure of
//! adjustment is called by name somewhere in `tests/reference`.

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
