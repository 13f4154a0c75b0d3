//! Changes to a cell's text that keep its comments and order: a blank filled in, a name changed, a new cell.

use super::fields::{Field, Holds};
use super::kinds::Kind;
use toml_edit::{Array, DocumentMut, InlineTable, Item, Value};

/// The cell's text with `field` set to what was typed into its blank; an empty text takes the field out, so that
/// its default comes back. What cannot be read as the field's type is kept as text, for the diagnostic to show.
///
/// # Errors
/// A sentence, when the text cannot be parsed and so cannot be changed from the sentence.
pub fn set_field(text: &str, field: &Field, typed: &str) -> Result<String, String> {
    let mut document = parse(text)?;
    let table = document.as_table_mut();
    let keeps_empty = matches!(field.holds, Holds::LongText);
    if typed.trim().is_empty() && !keeps_empty {
        table.remove(field.name);
        return Ok(document.to_string());
    }
    let value = value_of(field, typed);
    match table.get_mut(field.name) {
        Some(Item::Value(old)) => {
            let decor = old.decor().clone();
            *old = value;
            *old.decor_mut() = decor;
        }
        _ => {
            table.remove(field.name);
            table.insert(field.name, Item::Value(value));
        }
    }
    Ok(document.to_string())
}

/// The text with the cell's name set.
///
/// # Errors
/// As [`set_field`].
pub fn set_name(text: &str, name: &str) -> Result<String, String> {
    let mut document = parse(text)?;
    let table = document.as_table_mut();
    let has_kind = table.contains_key("kind");
    match table.get_mut("name") {
        Some(item) => replace_text(item, name),
        None if has_kind => return Ok(after_kind(text, name)),
        None => {
            table.insert("name", toml_edit::value(name));
        }
    }
    Ok(document.to_string())
}

/// The text with every reference to the cell `old` changed to `new`; `None` when there is none.
pub fn rename_references(text: &str, kind: Kind, old: &str, new: &str) -> Option<String> {
    let mut document = parse(text).ok()?;
    let mut changed = false;
    for field in kind.table().fields.iter().filter(|field| matches!(field.holds, Holds::Cell(_))) {
        if let Some(item) =
            document.as_table_mut().get_mut(field.name).filter(|item| item.as_str() == Some(old))
        {
            replace_text(item, new);
            changed = true;
        }
    }
    changed.then(|| document.to_string())
}

/// The text of a new cell, reading from the cells named in `references` (field and name).
pub fn new_cell(kind: Kind, name: &str, references: &[(&str, String)]) -> String {
    let mut text = format!("kind = \"{}\"\n", kind.name());
    if !name.is_empty() {
        text.push_str(&format!("name = {}\n", Value::from(name)));
    }
    for (field, to) in references {
        text.push_str(&format!("{field} = {}\n", Value::from(to.as_str())));
    }
    text.push_str(kind.table().starts_with);
    text
}

fn parse(text: &str) -> Result<DocumentMut, String> {
    text.parse().map_err(|error: toml_edit::TomlError| {
        format!(
            "The cell's text cannot be read, so nothing was changed: {}. Mend the text first.",
            error.message()
        )
    })
}

fn replace_text(item: &mut Item, text: &str) {
    if let Item::Value(value) = item {
        let decor = value.decor().clone();
        *value = Value::from(text);
        *value.decor_mut() = decor;
    }
}

/// A name line right after the line of the kind, where a reader looks for it.
fn after_kind(text: &str, name: &str) -> String {
    let line = format!("name = {}\n", Value::from(name));
    let mut lines: Vec<&str> = text.split_inclusive('\n').collect();
    let kind_line = lines.iter().position(|line| line.trim_start().starts_with("kind")).unwrap_or(0);
    lines.insert((kind_line + 1).min(lines.len()), &line);
    lines.concat()
}

/// What was typed, as the field's type of value.
fn value_of(field: &Field, typed: &str) -> Value {
    let trimmed = typed.trim();
    match field.holds {
        Holds::LongText => long_text(&typed.replace("\r\n", "\n").replace('\r', "\n")),
        Holds::Choice(choices) => {
            let known = choices.iter().find(|choice| choice.value.eq_ignore_ascii_case(trimmed));
            Value::from(known.map_or(trimmed, |choice| choice.value))
        }
        Holds::Between(..) | Holds::Above(_) | Holds::Number | Holds::Whole(..) => number(trimmed),
        Holds::Texts | Holds::Choices(_) => list(trimmed, |part| Value::from(part)),
        Holds::Numbers => list(trimmed, number),
        Holds::NamedTexts => {
            named(typed, |line| line.split_once(':').unwrap_or((line, line)), |text| Value::from(text))
        }
        Holds::NamedNumbers => named(typed, |line| line.rsplit_once(':').unwrap_or((line, "")), number),
        Holds::Records(parts) => {
            let mut records = Array::new();
            for line in typed.lines().map(str::trim).filter(|line| !line.is_empty()) {
                let mut record = InlineTable::new();
                let mut values = line.splitn(parts.len(), ';');
                for part in parts {
                    if let Some(value) = values.next().map(str::trim).filter(|value| !value.is_empty()) {
                        record
                            .insert(part.name, if part.number { number(value) } else { Value::from(value) });
                    }
                }
                records.push(Value::InlineTable(record));
            }
            one_a_line(&mut records);
            Value::Array(records)
        }
        Holds::Text | Holds::Cell(_) | Holds::Column | Holds::Level => Value::from(trimmed),
    }
}

/// Several lines between quotes that leave everything as it is, tabs and backslashes included, so that a pasted
/// table can be read in the file; escaped only where the text itself rules that out.
fn long_text(text: &str) -> Value {
    let plain = !text.contains("'''")
        && !text.ends_with('\'')
        && !text.chars().any(|c| c.is_control() && !matches!(c, '\n' | '\t'));
    let literal = plain.then(|| format!("'''\n{text}'''").parse::<Value>().ok()).flatten();
    literal.unwrap_or_else(|| Value::from(text))
}

/// A number as TOML writes it: a decimal comma and a per cent sign are understood. Anything else stays text.
fn number(typed: &str) -> Value {
    let text = typed.trim().replace('\u{2212}', "-");
    let (text, per_cent) = match text.strip_suffix('%') {
        Some(number) => (number.trim_end().to_string(), true),
        None => (text, false),
    };
    let text =
        if text.matches(',').count() == 1 && !text.contains('.') { text.replace(',', ".") } else { text };
    match text.parse::<f64>() {
        Ok(number) if number.is_finite() && per_cent => Value::from(number / 100.0),
        Ok(number) if number.is_finite() => match text.parse::<i64>() {
            Ok(whole) => Value::from(whole),
            Err(_) => text.parse::<Value>().unwrap_or_else(|_| Value::from(number)),
        },
        _ => Value::from(typed),
    }
}

/// Parts between semicolons where there is one, else between commas.
fn list(typed: &str, part: impl Fn(&str) -> Value) -> Value {
    let separator = if typed.contains(';') { ';' } else { ',' };
    let parts = typed.split(separator).map(str::trim).filter(|text| !text.is_empty());
    Value::Array(parts.map(part).collect())
}

/// Lines `name: value` as a table. Two lines with one name stay the text they are, for the reader to complain about:
/// a table would keep only one of them.
fn named(typed: &str, cut: impl Fn(&str) -> (&str, &str), value: impl Fn(&str) -> Value) -> Value {
    let mut table = InlineTable::new();
    for line in typed.lines().map(str::trim).filter(|line| !line.is_empty()) {
        let (name, text) = cut(line);
        if table.contains_key(name.trim()) {
            return Value::from(typed);
        }
        table.insert(name.trim(), value(text.trim()));
    }
    Value::InlineTable(table)
}

fn one_a_line(array: &mut Array) {
    for value in array.iter_mut() {
        value.decor_mut().set_prefix("\n  ");
    }
    array.set_trailing("\n");
    array.set_trailing_comma(true);
}
