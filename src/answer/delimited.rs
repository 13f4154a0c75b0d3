//! A table of an answer as delimited text, for a spreadsheet or a script.

use super::clean::one_line;
use super::number::MINUS;
use super::{Align, Cell, Table};

/// The table as comma-separated text after RFC 4180: a header line, then one line per row, each ended by CR LF.
///
/// A number is written in full precision with a point and a hyphen-minus, whatever the table shows; "inf" and "-inf"
/// stand for infinities, and what is not available is an empty field. Caption and notes are left out, so that the
/// text is a table and nothing else. A field of words that a spreadsheet would take for a formula (it starts with
/// `=`, `@`, `+` or `-` and is no number) gets an apostrophe in front, which makes it text there.
///
/// # Example
/// ```
/// use levelwise::answer::{Cell, Row, Table, delimited};
/// let table = Table::new("Means").text_column("Level").number_column("Mean")
///     .row(Row::new([Cell::text("15 min, late"), Cell::number("−1.25", -1.2512)]));
/// assert_eq!(delimited::table(&table), "Level,Mean\r\n\"15 min, late\",-1.2512\r\n");
/// ```
pub fn table(table: &Table) -> String {
    let mut text = String::new();
    line(&mut text, table.columns.iter().map(|c| words(&c.heading)));
    for row in &table.rows {
        let empty = Cell::empty();
        line(
            &mut text,
            table.columns.iter().enumerate().map(|(place, column)| {
                let cell = row.cells.get(place).unwrap_or(&empty);
                match (cell.value, column.align) {
                    _ if cell.absent => String::new(),
                    (Some(value), _) if value.is_nan() => String::new(),
                    (Some(value), _) => format!("{value}"),
                    (None, Align::Number) => words(&cell.text.replace(MINUS, "-")),
                    (None, Align::Text) => words(&cell.text),
                }
            }),
        );
    }
    text
}

fn line(text: &mut String, fields: impl Iterator<Item = String>) {
    for (place, field) in fields.enumerate() {
        if place > 0 {
            text.push(',');
        }
        if field.contains([',', '"', '\n', '\r', ';', '\t']) || field != field.trim() {
            text.push('"');
            text.push_str(&field.replace('"', "\"\""));
            text.push('"');
        } else {
            text.push_str(&field);
        }
    }
    text.push_str("\r\n");
}

fn words(text: &str) -> String {
    let text = one_line(text);
    let looks_like_formula = match text.trim_start().chars().next() {
        Some('=' | '@') => true,
        Some('+' | '-') => text.trim().parse::<f64>().is_err(),
        _ => false,
    };
    if looks_like_formula { format!("'{text}") } else { text }
}
