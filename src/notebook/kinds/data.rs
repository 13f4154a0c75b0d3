//! A table of raw values.

use crate::answer::{self, Answer, Cell, Precision, Row, number};
use crate::notebook::ask::{Ask, Reader, describe_value};
use crate::notebook::diagnostics::Diagnostic;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Part, Piece};
use crate::notebook::outcome::{Outcome, Value};
use crate::numerics::decimal::DecimalMark;
use crate::table::{
    self, Column, ColumnKind, Derive, Exclude, ReadError, ReadOptions, SelectError, Separator, Table, Which,
};
use serde_json::{Value as Json, json};
use std::collections::BTreeSet;
use std::ops::Range;
use std::sync::Arc;

const SEPARATORS: &[Choice] = &[
    Choice { value: "auto", shown: "whatever separates them in the first line" },
    Choice { value: ",", shown: "commas" },
    Choice { value: ";", shown: "semicolons" },
    Choice { value: "tab", shown: "tabs" },
];
const DECIMALS: &[Choice] = &[
    Choice { value: "auto", shown: "a point or a comma, as found" },
    Choice { value: ".", shown: "a decimal point" },
    Choice { value: ",", shown: "a decimal comma" },
];

pub const TABLE: KindTable = KindTable {
    purpose: "Bring in a table of raw values: one row a participant, a header on top",
    fields: &[
        Field::new("table", Holds::LongText, "table", "Delimited text with a header row").required(),
        Field::new("separator", Holds::Choice(SEPARATORS), "column separator", "What stands between two columns").or("whatever separates them in the first line"),
        Field::new("decimal", Holds::Choice(DECIMALS), "decimal sign", "How decimals are written").or("a point or a comma, as found"),
        Field::new("missing", Holds::Texts, "codes for missing values", "What is written where a value is missing, besides an empty cell; a semicolon after each keeps commas in them").or("nothing, \"NA\" or \".\""),
        Field::new("columns", Holds::NamedTexts, "forced types", "Columns whose type is not the one found: a line \"name: number\" or \"name: label\" each").or("as found").such_as("ward: label"),
        Field::new("exclude", Holds::Records(&[Part { name: "where", number: false }, Part { name: "reason", number: false }]), "rows left out", "Rows left out of every analysis: a line \"condition; reason\" each, such as \"score > 100; typing error\"").or("no row").such_as("score > 100; typing error"),
        Field::new("derive", Holds::NamedTexts, "new columns", "New columns computed from others: a line \"name: expression\" each, such as \"gain: after - before\"").or("none").such_as("gain: after - before"),
    ],
    sentence: &[
        Piece::Words("A table with columns separated by"),
        Piece::Blank("separator"),
        Piece::Words("and numbers written with"),
        Piece::Blank("decimal"),
        Piece::Words("; missing values are written as"),
        Piece::Blank("missing"),
        Piece::Words(". Column types:"),
        Piece::Blank("columns"),
        Piece::Words("; new columns:"),
        Piece::Blank("derive"),
        Piece::Words("; rows left out:"),
        Piece::Blank("exclude"),
        Piece::Words("."),
    ],
    starts_with: "table = \"\"\"\n\"\"\"\n",
};

/// How many rows of an exclusion, and texts of a column, the answer names.
const NAMED: usize = 12;

/// Reads the table, derives columns and takes out rows; shows how everything was read.
pub fn evaluate(ask: &Ask) -> Outcome {
    let mut reader = ask.reader();
    let text = reader.raw_text("table").unwrap_or_default();
    let options = options(&mut reader);
    let exclude = exclusions(&mut reader);
    let derive = derived(&mut reader);
    if let Err(problems) = reader.finish(()) {
        return Outcome::mend(problems);
    }
    let mut table = match table::read(text, &options) {
        Ok(table) => table,
        Err(error) => return Outcome::mend(vec![unreadable(ask, &error)]),
    };
    if let Err(errors) = table.select(&derive, &exclude) {
        return Outcome::mend(errors.iter().map(|error| unselectable(ask, error)).collect());
    }
    let separator = format!("{} (as found)", separator_in_words(table.separator));
    let decimal = format!("{} (as found)", decimal_in_words(table.decimal));
    Outcome::settled(answer(&table), results(&table))
        .with_in_force("separator", separator)
        .with_in_force("decimal", decimal)
        .with_value(Value::Table(Arc::new(table)))
}

fn options(reader: &mut Reader) -> ReadOptions {
    let mut options = ReadOptions {
        separator: match reader.choice("separator") {
            Some(",") => Some(Separator::Comma),
            Some(";") => Some(Separator::Semicolon),
            Some("tab") => Some(Separator::Tab),
            _ => None,
        },
        decimal: match reader.choice("decimal") {
            Some(".") => Some(DecimalMark::Point),
            Some(",") => Some(DecimalMark::Comma),
            _ => None,
        },
        ..ReadOptions::default()
    };
    if let Some(missing) = reader.texts("missing") {
        // An empty cell is missing whatever the other codes are: nobody thinks of naming it.
        options.missing = missing.into_iter().map(|code| code.value).chain([String::new()]).collect();
    }
    for (name, value) in reader.entries("columns").unwrap_or_default() {
        let kind = [ColumnKind::Number, ColumnKind::Label]
            .into_iter()
            .find(|kind| value.as_str().is_some_and(|word| word.trim().eq_ignore_ascii_case(kind.word())));
        match kind {
            Some(kind) => options.kinds.push((name.value, kind)),
            None => {
                let message = format!(
                    "columns: the type of \"{}\" is {}, but \"number\" or \"label\" is needed.",
                    name.value,
                    describe_value(value)
                );
                reader.problem_at("columns", value.span().unwrap_or(name.span), message);
            }
        }
    }
    options
}

fn exclusions(reader: &mut Reader) -> Vec<Exclude> {
    let records = reader.records("exclude").unwrap_or_default();
    let mut exclude = Vec::with_capacity(records.len());
    for record in records {
        if let [condition, reason] = record.value.as_slice() {
            exclude.push(Exclude { condition: condition.clone(), reason: reason.clone() });
        }
    }
    exclude
}

fn derived(reader: &mut Reader) -> Vec<Derive> {
    let mut derive = Vec::new();
    for (name, value) in reader.entries("derive").unwrap_or_default() {
        match value.as_str() {
            Some(expression) => {
                derive.push(Derive { name: name.value, expression: expression.to_owned() });
            }
            None => {
                let message = format!(
                    "derive: \"{}\" is {}, but an expression in quotes is needed, such as \"after - before\".",
                    name.value,
                    describe_value(value)
                );
                reader.problem_at("derive", value.span().unwrap_or(name.span), message);
            }
        }
    }
    derive
}

/// The reader's error at its place: the line of the table, or the entry of `columns`.
fn unreadable(ask: &Ask, error: &ReadError) -> Diagnostic {
    if error.line.is_none() && error.row.is_none() && error.column.is_some() {
        return Diagnostic::new(format!("columns: {}", error.message), ask.span("columns"), Some("columns"));
    }
    let span = error.line.and_then(|line| table_line(ask, line)).unwrap_or_else(|| ask.span("table"));
    Diagnostic::new(error.message.clone(), span, Some("table"))
}

/// Where a line of the table stands in the cell's text, when the table is written over several lines.
fn table_line(ask: &Ask, line: u32) -> Option<Range<usize>> {
    let span = ask.span("table");
    let written = ask.source().get(span.clone())?;
    let inside = written.strip_prefix("\"\"\"").or_else(|| written.strip_prefix("'''"))?;
    let inside = inside.strip_prefix("\r\n").or_else(|| inside.strip_prefix('\n')).unwrap_or(inside);
    let mut start = span.end - inside.len();
    for (index, text) in inside.split_inclusive('\n').enumerate() {
        if index + 1 == line as usize {
            return Some(start..start + text.trim_end_matches(['\r', '\n']).len());
        }
        start += text.len();
    }
    None
}

fn unselectable(ask: &Ask, error: &SelectError) -> Diagnostic {
    let (field, value) = match error.which {
        Which::Derive(index) => {
            let entries = ask.item("derive").and_then(|item| item.as_table_like());
            ("derive", entries.and_then(|entries| entries.iter().nth(index)?.1.as_value()))
        }
        Which::Exclude(index) => {
            let records = ask.item("exclude").and_then(|item| item.as_array());
            let record = records.and_then(|records| records.get(index)?.as_inline_table());
            ("exclude", record.and_then(|record| record.get("where")))
        }
    };
    let span = value.map_or_else(|| ask.span(field), |value| part_of(ask, value, &error.span));
    let message = format!("{field}, entry {}: {}", entry(error.which) + 1, error.message);
    Diagnostic::new(message, span, Some(field))
}

fn entry(which: Which) -> usize {
    match which {
        Which::Derive(index) | Which::Exclude(index) => index,
    }
}

/// Where a part of a text in quotes stands in the cell's text; the whole of it where it is written with escapes.
fn part_of(ask: &Ask, value: &toml_edit::Value, part: &Range<usize>) -> Range<usize> {
    let Some(span) = value.span() else { return 0..0 };
    let written = ask.source().get(span.start + 1..span.end.saturating_sub(1));
    match (written, value.as_str()) {
        // Condition texts are trimmed before they are read.
        (Some(written), Some(text)) if written == text && text.trim() == text => {
            let start = span.start + 1;
            start + part.start..start + part.end
        }
        _ => span,
    }
}

fn separator_in_words(separator: Separator) -> &'static str {
    match separator {
        Separator::Comma => "commas",
        Separator::Semicolon => "semicolons",
        Separator::Tab => "tabs",
    }
}

fn decimal_in_words(mark: DecimalMark) -> &'static str {
    match mark {
        DecimalMark::Point => "a decimal point",
        DecimalMark::Comma => "a decimal comma",
    }
}

fn answer(table: &Table) -> Answer {
    let mut columns = answer::Table::new("The columns, as they were read")
        .text_column("Column")
        .text_column("Type")
        .number_column("Missing")
        .text_column("Values")
        .note(format!(
            "Columns separated by {}, numbers with {}.",
            separator_in_words(table.separator),
            decimal_in_words(table.decimal)
        ));
    for column in &table.columns {
        columns.push(Row::new([
            Cell::text(&column.name),
            Cell::text(column.kind.word()),
            Cell::count(column.n_missing),
            Cell::text(values_in_words(table, column)),
        ]));
    }
    let mut answer = Answer::new(headline(table)).with_table(columns);
    if !table.exclusions.is_empty() {
        answer = answer.with_table(exclusions_table(table));
    }
    answer.cautions.extend(table.remarks.iter().cloned());
    answer.cautions.extend(table.columns.iter().filter_map(|column| nearly_numbers(table, column)));
    answer.cautions.extend(table.columns.iter().filter_map(per_cent));
    answer.cautions.extend(no_header(table));
    if table.columns.len() == 1 {
        answer.cautions.push("The table has only one column; a study needs two, the groups and the outcome. Columns are separated by tabs, commas or semicolons, not by spaces.".to_owned());
    }
    answer
}

fn headline(table: &Table) -> String {
    let plural = |n: usize, word: &str| match n {
        1 => format!("1 {word}"),
        n => format!("{} {word}s", number::count(n)),
    };
    let mut headline = format!("{} in {}", plural(table.rows, "row"), plural(table.columns.len(), "column"));
    let missing: usize = table.columns.iter().map(|column| column.n_missing).sum();
    if missing > 0 {
        headline.push_str(&format!(", {} missing", plural(missing, "value")));
    }
    if !table.excluded.is_empty() {
        headline.push_str(&format!(", {} left out", plural(table.excluded.len(), "row")));
    }
    headline + "."
}

/// Range of the numbers, or the first different texts.
fn values_in_words(table: &Table, column: &Column) -> String {
    if let Some(numbers) = &column.numbers {
        // Offsets stand in the order of the values.
        let rows = || (0..table.rows).filter_map(|row| Some((numbers.offset(row)?, row)));
        let lowest = rows().min_by(|a, b| a.0.total_cmp(&b.0));
        let highest = rows().max_by(|a, b| a.0.total_cmp(&b.0));
        return match (lowest, highest) {
            // A computed column starts at zero, so that its offsets are its values.
            (Some((low, _)), Some((high, _))) if column.derived => {
                let precision = Precision::for_values(&[low, high]);
                format!("{} to {}", number::estimate(low, precision), number::estimate(high, precision))
            }
            (Some((_, low)), Some((_, high))) => {
                format!("{} to {}", column.text(low), column.text(high))
            }
            _ => "none".to_owned(),
        };
    }
    let mut seen = BTreeSet::new();
    let mut named: Vec<&str> = Vec::new();
    for row in (0..table.rows).filter(|&row| !column.missing(row)) {
        if seen.insert(column.text(row)) {
            if named.len() == NAMED {
                return format!("{}, …", named.join(", "));
            }
            named.push(column.text(row));
        }
    }
    if named.is_empty() { "none".to_owned() } else { named.join(", ") }
}

fn exclusions_table(table: &Table) -> answer::Table {
    let mut shown = answer::Table::new("Rows left out, each under the first condition that it meets")
        .text_column("Condition")
        .text_column("Reason")
        .number_column("Rows")
        .text_column("Which");
    for (index, exclusion) in table.exclusions.iter().enumerate() {
        let rows = || table.excluded.iter().filter(|gone| gone.exclusion == index);
        let mut which: Vec<String> = rows().take(NAMED).map(|gone| (gone.row + 1).to_string()).collect();
        if exclusion.rows > NAMED {
            which.push("…".to_owned());
        }
        shown.push(Row::new([
            Cell::text(&exclusion.condition),
            Cell::text(&exclusion.reason),
            Cell::count(exclusion.rows),
            Cell::text(which.join(", ")),
        ]));
    }
    shown
}

/// A word on a column that is read as labels though most of its cells are numbers.
fn nearly_numbers(table: &Table, column: &Column) -> Option<String> {
    let present = table.rows - column.n_missing;
    let nearly = column.kind == ColumnKind::Label
        && !column.forced
        && column.n_not_numbers > 0
        && 2 * column.n_not_numbers <= present;
    if !nearly {
        return None;
    }
    let why = column.needs_numbers()?;
    Some(format!(
        "Column \"{}\" was read as labels, because not all its values are numbers. {why}",
        column.name
    ))
}

/// A word on a column whose values carry a percent sign.
fn per_cent(column: &Column) -> Option<String> {
    let signed = |text: &str| {
        let number = text.strip_suffix('%').map(str::trim_end);
        number.is_some_and(|number| number.replace(',', ".").parse::<f64>().is_ok())
    };
    let all = !column.forced && !column.not_numbers.is_empty();
    (all && column.not_numbers.iter().all(|cell| signed(&cell.text))).then(|| {
        format!(
            "Column \"{}\" was read as labels: \"{}\" carries a percent sign, which is no part of a number. Remove the signs to use it as an outcome; the study's unit can say \"%\".",
            column.name, column.not_numbers[0].text
        )
    })
}

/// A word on a first row that looks like values, not like names.
fn no_header(table: &Table) -> Option<String> {
    let number = |column: &&Column| {
        column.kind == ColumnKind::Number && column.name.replace(',', ".").parse::<f64>().is_ok()
    };
    let found = table.columns.iter().find(number)?;
    Some(format!(
        "The first row gives the columns their names, and one of them is \"{}\". If the table has no such row, add one; else the first observation is missing from every answer.",
        found.name
    ))
}

fn results(table: &Table) -> Json {
    let columns = table.columns.iter().map(
        |column| json!({ "name": column.name, "type": column.kind.word(), "missing": column.n_missing }),
    );
    let excluded = table.exclusions.iter().enumerate().map(|(index, exclusion)| {
        let rows = table.excluded.iter().filter(|gone| gone.exclusion == index).map(|gone| gone.row + 1);
        json!({ "where": exclusion.condition, "reason": exclusion.reason, "rows": rows.collect::<Vec<_>>() })
    });
    json!({
        "rows": table.rows,
        "columns": columns.collect::<Vec<_>>(),
        "excluded": excluded.collect::<Vec<_>>(),
        "separator": if table.separator == Separator::Tab { "tab".to_owned() } else { table.separator.character().to_string() },
        "decimal": table.decimal.character().to_string(),
    })
}
