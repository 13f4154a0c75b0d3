//! Changing one field of a table's text and nothing else.

use super::Separator;
use super::split::Records;
use std::borrow::Cow;

/// `value` as a field: in double quotes where it contains the separator, a quote, a line end or spaces at its ends.
pub fn quoted(value: &str, separator: Separator) -> Cow<'_, str> {
    let special = |c: char| c == separator.character() || matches!(c, '"' | '\n' | '\r');
    if value.contains(special) || value.trim() != value {
        Cow::Owned(format!("\"{}\"", value.replace('"', "\"\"")))
    } else {
        Cow::Borrowed(value)
    }
}

/// `text` with the field of data row `row` (from 0) and `column` (from 0) replaced by `value`, in quotes where it
/// needs them; every other byte stays. `None` where the table has no such field.
pub fn replace_value(
    text: &str,
    separator: Separator,
    row: usize,
    column: usize,
    value: &str,
) -> Option<String> {
    let span = Records::new(text, separator).field_span(row, column)?;
    let alone = value.is_empty() && single_column(text, separator);
    // An empty line would not count as a row.
    let value = if alone { Cow::Borrowed("\"\"") } else { quoted(value, separator) };
    let mut changed = String::with_capacity(text.len() + value.len());
    changed.push_str(&text[..span.start]);
    changed.push_str(&value);
    changed.push_str(&text[span.end..]);
    Some(changed)
}

fn single_column(text: &str, separator: Separator) -> bool {
    Records::new(text, separator).next_record().is_some_and(|header| header.fields == 1)
}
