//! Every answer as JSON with full-precision numbers, under the names that outside checks rely on.

use super::diagnostics::position;
use super::engine::{CellView, Engine};
use super::kinds::Kind;
use serde_json::{Map, Value, json};

/// `{"levelwise": VERSION, "cells": [...]}`, one entry a cell, in order. What was not computed is left out.
pub fn results(engine: &Engine) -> Value {
    let cells = engine.order().into_iter().filter_map(|id| engine.cell(id));
    json!({ "levelwise": env!("CARGO_PKG_VERSION"), "cells": cells.map(|cell| entry(engine, &cell)).collect::<Vec<_>>() })
}

fn entry(engine: &Engine, cell: &CellView) -> Value {
    let mut entry = Map::new();
    entry.insert("kind".into(), json!(cell.kind.map(Kind::name)));
    entry.insert("name".into(), json!(cell.name));
    entry.insert("condition".into(), json!(cell.condition.words()));
    let problems = cell.diagnostics.iter().map(|problem| {
        let (line, column) = position(cell.text, problem.span.start);
        json!({ "message": problem.message, "line": engine.line(cell.id) + line - 1, "column": column })
    });
    entry.insert("diagnostics".into(), problems.collect());
    entry.insert("headline".into(), json!(cell.headline));
    if let Some(outcome) = cell.outcome.filter(|outcome| outcome.diagnostics.is_empty()) {
        if let Some(writeup) = &outcome.answer.writeup {
            entry.insert("writeup".into(), json!(writeup));
        }
        if !outcome.answer.cautions.is_empty() {
            entry.insert("cautions".into(), json!(outcome.answer.cautions));
        }
        if !outcome.results.is_null() {
            entry.insert("results".into(), outcome.results.clone());
        }
    }
    Value::Object(entry)
}

/// A number for JSON: infinities are the strings "inf" and "-inf", and what is no number is null.
pub fn number(value: f64) -> Value {
    match value {
        value if value.is_finite() => json!(value),
        value if value.is_nan() => Value::Null,
        value if value > 0.0 => json!("inf"),
        _ => json!("-inf"),
    }
}
