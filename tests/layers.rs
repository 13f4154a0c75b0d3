//! The layers, checked: imports point down only.
//!
//! Every path that starts with `crate::` is read, in `use` lines and in the code, and its first name is a room.
//! A room may name the rooms below it and itself. What stands on the same floor does not know of each other.

use std::fs;
use std::path::{Path, PathBuf};

/// Each room with the rooms that its files may name.
const MAY_NAME: [(&str, &[&str]); 7] = [
    ("numerics", &[]),
    ("answer", &[]),
    ("table", &["numerics"]),
    ("study", &["numerics", "table"]),
    ("methods", &["numerics", "table", "study"]),
    ("notebook", &["numerics", "answer", "table", "study", "methods"]),
    ("web", &["numerics", "answer", "table", "study", "methods", "notebook"]),
];

/// The rooms that read no clock, no file and no global: seeds and settings come to them as arguments.
const CLOSED: [&str; 5] = ["numerics", "answer", "table", "study", "methods"];
const OUTSIDE: [&str; 6] = ["std::fs", "std::time", "std::env", "std::net", "std::process", "std::thread"];
/// Names of the browser, for `web` alone.
const BROWSER: [&str; 3] = ["wasm_bindgen", "js_sys", "web_sys"];

#[test]
fn imports_point_down_only() {
    let source = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let mut broken = Vec::new();
    let mut seen = 0;
    for (room, _) in MAY_NAME {
        for file in files_under(&source.join(room)) {
            let text = fs::read_to_string(&file).unwrap();
            let name = file.strip_prefix(env!("CARGO_MANIFEST_DIR")).unwrap().display().to_string();
            seen += 1;
            broken.extend(
                objections(room, &text).into_iter().map(|(line, rule)| format!("{name}:{line}: {rule}")),
            );
        }
    }
    assert!(seen >= MAY_NAME.len(), "each room has at least its mod.rs");
    assert!(broken.is_empty(), "imports point down only:\n{}", broken.join("\n"));
}

#[test]
fn every_room_of_the_crate_has_its_rule() {
    let source = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    for entry in fs::read_dir(source).unwrap() {
        let path = entry.unwrap().path();
        let name = path.file_name().unwrap().to_string_lossy().into_owned();
        let known = MAY_NAME.iter().any(|(room, _)| *room == name) || ["lib.rs", "main.rs"].contains(&&*name);
        assert!(known, "src/{name} is no room of the layers: put it into one, or give it a rule here");
    }
}

#[test]
fn an_import_that_points_up_or_sideways_is_found() {
    let found = |room: &str, line: &str| objections(room, &format!("// first line\n{line}\n"));
    assert_eq!(
        found("study", "use crate::methods::contrasts;"),
        [(2, "study must not name methods, which is not below it".to_owned())]
    );
    for (room, line) in [
        ("numerics", "use crate::answer::number;"),
        ("answer", "use crate::numerics::sums;"),
        ("methods", "use crate::answer::Table;"),
        ("methods", "    let x = crate::notebook::Cell::new();"),
        ("table", "use crate::{numerics::decimal, study};"),
        ("table", "use std::fs;"),
        ("methods", "use std::{collections::BTreeMap, time::Instant};"),
        ("notebook", "use js_sys::Function;"),
        ("notebook", "use std::time::Instant;"),
    ] {
        assert_eq!(found(room, line).len(), 1, "{room}: {line}");
    }
}

#[test]
fn an_import_that_points_down_is_fine_and_so_are_comments_and_tests() {
    for (room, text) in [
        ("study", "use crate::study::levels::Levels;\nuse crate::numerics::sums;"),
        ("web", "use crate::notebook::Engine;\nuse wasm_bindgen::prelude::*;"),
        ("methods", "// crate::notebook knows more\n/// As in [`crate::answer`].\n//! std::fs"),
        ("methods", "use crate::{\n    numerics::{sums, decimal},\n    study::Levels,\n};"),
        ("notebook", "use std::collections::BTreeMap;\nuse crate::answer::Answer;"),
    ] {
        assert_eq!(objections(room, text), [], "{room}: {text}");
    }
    // A list over several lines is read to its end.
    let list = "use crate::{\n    numerics::sums,\n    methods::{contrasts, profile},\n};";
    assert_eq!(objections("study", list).len(), 1);
}

/// The lines of a file that break a rule, each with the rule.
fn objections(room: &str, text: &str) -> Vec<(usize, String)> {
    let allowed = MAY_NAME.iter().find(|(name, _)| *name == room).unwrap().1;
    let code = without_comments(text);
    let mut found = Vec::new();
    for (line, name) in first_names_after(&code, "crate::") {
        let is_room = MAY_NAME.iter().any(|(other, _)| *other == name);
        if is_room && name != room && !allowed.contains(&&*name) {
            found.push((line, format!("{room} must not name {name}, which is not below it")));
        }
    }
    for (line, name) in first_names_after(&code, "std::") {
        // The notebook layer may look at nothing outside either; the clock is the browser's or the program's.
        let path = format!("std::{name}");
        if (CLOSED.contains(&room) || room == "notebook") && OUTSIDE.contains(&&*path) {
            found.push((
                line,
                format!("{room} must not use {path}: it reads no clock, no file and no global"),
            ));
        }
    }
    for (number, line) in code.lines().enumerate() {
        let named = BROWSER.iter().find(|name| line.contains(&format!("{name}::")));
        if let Some(name) = named.filter(|_| room != "web") {
            found.push((number + 1, format!("{room} must not use {name}: only web knows the browser")));
        }
    }
    found.sort();
    found
}

/// The text with every comment blanked, its lines kept.
fn without_comments(text: &str) -> String {
    text.lines()
        .map(|line| match line.find("//") {
            // A comment sign inside quotes is an address, not a comment.
            Some(at) if line[..at].matches('"').count() % 2 == 0 => &line[..at],
            _ => line,
        })
        .collect::<Vec<_>>()
        .join("\n")
}

/// The first name of every path that starts with `start`, with its line: one, or those of the list in braces.
fn first_names_after(code: &str, start: &str) -> Vec<(usize, String)> {
    let mut found = Vec::new();
    for (at, _) in code.match_indices(start) {
        let before = code[..at].chars().next_back();
        if before.is_some_and(|letter| letter.is_alphanumeric() || letter == '_' || letter == ':') {
            continue;
        }
        let rest = &code[at + start.len()..];
        let mut add = |name: &str, offset: usize| {
            let line = code[..at + start.len() + offset].matches('\n').count() + 1;
            found.push((line, name.to_owned()));
        };
        match rest.strip_prefix('{') {
            None => add(leading_name(rest), 0),
            Some(list) => top_level_items(list).into_iter().for_each(|(offset, name)| add(name, offset + 1)),
        }
    }
    found
}

fn leading_name(text: &str) -> &str {
    let end = text.find(|letter: char| !letter.is_alphanumeric() && letter != '_').unwrap_or(text.len());
    &text[..end]
}

/// The leading name of each item of a list in braces (the opening brace is gone already), with its place.
fn top_level_items(list: &str) -> Vec<(usize, &str)> {
    let mut found = Vec::new();
    let (mut depth, mut fresh) = (0, true);
    for (at, letter) in list.char_indices() {
        match letter {
            '{' => depth += 1,
            '}' if depth == 0 => break,
            '}' => depth -= 1,
            ',' if depth == 0 => fresh = true,
            letter if fresh && !letter.is_whitespace() => {
                found.push((at, leading_name(&list[at..])));
                fresh = false;
            }
            _ => {}
        }
    }
    found
}

/// Every Rust file under a folder.
fn files_under(folder: &Path) -> Vec<PathBuf> {
    let mut found = Vec::new();
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            found.extend(files_under(&path));
        } else if path.extension().is_some_and(|extension| extension == "rs") {
            found.push(path);
        }
    }
    found.sort();
    found
}
