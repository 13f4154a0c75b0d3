//! Every number in the answers of the example notebooks: the whole way from text to result.

use crate::table::{Point, Table};
use levelwise::notebook::engine::Engine;
use levelwise::notebook::results;
use serde_json::Value;

/// The example notebooks of the page; `tests/coverage.rs` sees that none is left out.
pub const EXAMPLES: [(&str, &str); 5] = [
    ("plan-before-data", include_str!("../../../../www/examples/plan-before-data.levelwise.toml")),
    ("published-summaries", include_str!("../../../../www/examples/published-summaries.levelwise.toml")),
    ("relief-by-dose", include_str!("../../../../www/examples/relief-by-dose.levelwise.toml")),
    ("teaching-trial", include_str!("../../../../www/examples/teaching-trial.levelwise.toml")),
    ("ward-noise", include_str!("../../../../www/examples/ward-noise.levelwise.toml")),
];

pub fn add(table: &mut Table) {
    for (name, text) in EXAMPLES {
        let mut engine = Engine::new();
        if let Err(refused) = engine.open(text) {
            let value = Err(refused.to_string());
            table.points.push(Point { function: "answers", arguments: name.to_owned(), value });
            continue;
        }
        engine.settle();
        add_numbers(table, &results::results(&engine)["cells"], name);
    }
}

fn add_numbers(table: &mut Table, value: &Value, path: &str) {
    match value {
        Value::Number(number) => {
            let value = number.as_f64().ok_or_else(|| "not a number of 64 bits".to_owned());
            table.points.push(Point { function: "answers", arguments: path.to_owned(), value });
        }
        Value::Array(items) => {
            for (index, item) in items.iter().enumerate() {
                add_numbers(table, item, &format!("{path}/{index}"));
            }
        }
        Value::Object(fields) => {
            for (name, field) in fields {
                add_numbers(table, field, &format!("{path}/{name}"));
            }
        }
        Value::Null | Value::Bool(_) | Value::String(_) => {}
    }
}
