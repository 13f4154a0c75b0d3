//! The sentence face of a cell: words and blanks, made from the kind's table of fields and the cell's text. What
//! a blank shows and what is typed into it are the same thing as the text; `edit` writes it there.

use super::ask::Ask;
use super::fields::{Field, Holds, Piece};
use super::outcome::Outcome;
use toml_edit::{Item, TableLike, Value};

/// A part of a sentence.
#[derive(Debug, Clone, PartialEq)]
pub enum Part {
    Words(String),
    Blank(Blank),
}

/// A blank: one field as a person fills it in.
#[derive(Debug, Clone, PartialEq)]
pub struct Blank {
    pub field: &'static str,
    pub label: &'static str,
    pub help: &'static str,
    /// What a line looks like; empty where none is needed.
    pub example: &'static str,
    /// What was given, as typed; empty while the default is in force.
    pub value: String,
    /// What the sentence shows: the value or the default in words.
    pub shown: String,
    pub control: Control,
    /// What may be chosen, or is suggested.
    pub choices: Vec<Offer>,
    pub is_default: bool,
    /// True when a diagnostic speaks of this field.
    pub problem: bool,
}

/// How a blank is filled in.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Control {
    Choice,
    /// Any number of the choices.
    Several,
    Text,
    Number,
    /// Several lines.
    Long,
}

/// One thing to choose.
#[derive(Debug, Clone, PartialEq)]
pub struct Offer {
    pub value: String,
    pub label: String,
}

/// What is known around the cell while its sentence is made.
pub struct Around<'a> {
    /// The cell's latest outcome.
    pub outcome: Option<&'a Outcome>,
    /// Fields that a diagnostic speaks of.
    pub problems: &'a [&'a str],
    /// Names of the cells that a field may read from.
    pub cells: &'a dyn Fn(&Field) -> Vec<String>,
}

/// The sentence of `ask`.
pub fn sentence(ask: &Ask, around: &Around) -> Vec<Part> {
    let mut parts = Vec::new();
    add_pieces(ask.kind.table().sentence, ask, around, &mut parts);
    parts
}

/// The sentence as plain words, blanks filled in.
pub fn in_words(parts: &[Part]) -> String {
    let mut words = String::new();
    for part in parts {
        let next = match part {
            Part::Words(text) => text.as_str(),
            Part::Blank(blank) => blank.shown.as_str(),
        };
        if !words.is_empty() && !next.starts_with([',', '.', ';', ':', '?', ')']) {
            words.push(' ');
        }
        words.push_str(next);
    }
    words
}

fn add_pieces(pieces: &[Piece], ask: &Ask, around: &Around, parts: &mut Vec<Part>) {
    for piece in pieces {
        match piece {
            Piece::Words(words) => parts.push(Part::Words((*words).to_string())),
            Piece::Blank(name) => {
                if let Some(field) = ask.kind.table().field(name) {
                    parts.push(Part::Blank(blank(field, ask, around)));
                }
            }
            Piece::When(name, values, inner) => {
                if in_force(ask, name).is_some_and(|value| values.contains(&value)) {
                    add_pieces(inner, ask, around, parts);
                }
            }
        }
    }
}

/// The value of a choice field that counts: the given one, else the default.
fn in_force<'a>(ask: &'a Ask, name: &str) -> Option<&'a str> {
    let field = ask.kind.table().field(name)?;
    let by_words =
        |words: &str| field.choices().iter().find(|choice| choice.shown == words || choice.value == words);
    match ask.text_of(name) {
        Some(given) => field
            .choices()
            .iter()
            .find(|choice| choice.value.eq_ignore_ascii_case(given))
            .map(|choice| choice.value),
        None => field.default.and_then(by_words).map(|choice| choice.value),
    }
}

fn blank(field: &'static Field, ask: &Ask, around: &Around) -> Blank {
    let value = ask.item(field.name).map(|item| typed(item, field)).unwrap_or_default();
    let words_in_force =
        around.outcome.and_then(|outcome| outcome.in_force.get(field.name)).map(String::as_str);
    let default = words_in_force.or(field.default).unwrap_or(if field.required { "…" } else { "—" });
    let shown = match field.choices().iter().find(|choice| choice.value == value) {
        _ if value.is_empty() => default.to_string(),
        Some(choice) => choice.shown.to_string(),
        None => value.clone(),
    };
    let choices = offers(field, around, default, &value);
    Blank {
        field: field.name,
        label: field.label,
        help: field.help,
        example: field.example,
        is_default: value.is_empty(),
        problem: around.problems.contains(&field.name),
        control: control(field, &choices),
        value,
        shown,
        choices,
    }
}

fn control(field: &Field, choices: &[Offer]) -> Control {
    match field.holds {
        Holds::Choice(_) | Holds::Cell(_) => Control::Choice,
        Holds::Choices(_) => Control::Several,
        Holds::Column | Holds::Level if !choices.is_empty() => Control::Choice,
        Holds::Between(..) | Holds::Above(_) | Holds::Number | Holds::Whole(..) => Control::Number,
        Holds::LongText | Holds::NamedTexts | Holds::NamedNumbers | Holds::Records(_) => Control::Long,
        _ => Control::Text,
    }
}

/// What may be chosen; for a field that may stay empty the first offer is its default.
fn offers(field: &Field, around: &Around, default: &str, value: &str) -> Vec<Offer> {
    let plain = |value: String| Offer { label: value.clone(), value };
    let mut offers: Vec<Offer> = match field.holds {
        Holds::Choice(choices) | Holds::Choices(choices) => choices
            .iter()
            .map(|choice| Offer { value: choice.value.to_string(), label: choice.shown.to_string() })
            .collect(),
        Holds::Cell(_) => (around.cells)(field).into_iter().map(plain).collect(),
        _ => around
            .outcome
            .and_then(|outcome| outcome.choices.get(field.name))
            .cloned()
            .unwrap_or_default()
            .into_iter()
            .map(plain)
            .collect(),
    };
    let chosen = matches!(field.holds, Holds::Choice(_) | Holds::Cell(_) | Holds::Column | Holds::Level);
    if chosen && (!offers.is_empty() || matches!(field.holds, Holds::Choice(_) | Holds::Cell(_))) {
        if !value.is_empty() && !offers.iter().any(|offer| offer.value == value) {
            offers.push(plain(value.to_string()));
        }
        offers.insert(0, Offer { value: String::new(), label: default.to_string() });
    }
    offers
}

/// An item as a person would type it into the blank.
fn typed(item: &Item, field: &Field) -> String {
    match field.holds {
        Holds::NamedTexts | Holds::NamedNumbers => match item.as_table_like() {
            Some(table) => named_lines(table),
            None => item.as_value().map(typed_value).unwrap_or_default(),
        },
        Holds::Records(parts) => match item.as_array() {
            Some(array) => {
                let lines = array.iter().map(|value| match value.as_inline_table() {
                    Some(table) => parts
                        .iter()
                        .map(|part| table.get(part.name).map(typed_value).unwrap_or_default())
                        .collect::<Vec<_>>()
                        .join("; ")
                        // A last part that is missing has no separator before it: it is about to be written.
                        .trim_end_matches("; ")
                        .to_string(),
                    None => typed_value(value),
                });
                lines.collect::<Vec<_>>().join("\n")
            }
            None => item.as_value().map(typed_value).unwrap_or_default(),
        },
        _ => item.as_value().map(typed_value).unwrap_or_default(),
    }
}

fn named_lines(table: &dyn TableLike) -> String {
    let lines = table.iter().map(|(key, item)| {
        let value = item.as_value().map(typed_value).unwrap_or_default();
        if value == key { value } else { format!("{key}: {value}") }
    });
    lines.collect::<Vec<_>>().join("\n")
}

fn typed_value(value: &Value) -> String {
    match value {
        Value::String(text) => text.value().clone(),
        Value::Array(array) => {
            let parts: Vec<String> = array.iter().map(typed_value).collect();
            match parts.as_slice() {
                // Without a second one only a semicolon at the end says that the comma is part of the text.
                [one] if one.contains(',') => format!("{one};"),
                _ if parts.iter().any(|part| part.contains([',', ';'])) => parts.join("; "),
                _ => parts.join(", "),
            }
        }
        other => {
            let mut plain = other.clone();
            plain.decor_mut().clear();
            plain.to_string()
        }
    }
}
