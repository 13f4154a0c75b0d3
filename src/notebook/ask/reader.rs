//! Typed values out of an ask, with everything that must be mended collected on the way.

use super::{Ask, canonical};
use crate::notebook::diagnostics::{Diagnostic, quoted_choices, suggestion};
use crate::notebook::fields::{Field, Holds, Part};
use std::ops::Range;
use toml_edit::{Item, TableLike, Value};

/// A value with the bytes at which it stands.
#[derive(Debug, Clone, PartialEq)]
pub struct At<T> {
    pub value: T,
    pub span: Range<usize>,
}

/// Reads typed values out of an ask. A value of the wrong type or outside its range is noted and reads as
/// `None`; [`Reader::finish`] hands back everything that was noted.
pub struct Reader<'a> {
    ask: &'a Ask,
    problems: Vec<Diagnostic>,
}

impl<'a> Reader<'a> {
    pub(super) fn new(ask: &'a Ask) -> Self {
        Self { ask, problems: Vec::new() }
    }

    /// The ask that is read.
    pub fn ask(&self) -> &'a Ask {
        self.ask
    }

    /// Notes a problem with the field.
    pub fn problem(&mut self, field: &str, message: impl Into<String>) {
        self.problems.push(Diagnostic::new(message, self.ask.span(field), Some(field)));
    }

    /// Notes a problem with a part of the field.
    pub fn problem_at(&mut self, field: &str, span: Range<usize>, message: impl Into<String>) {
        self.problems.push(Diagnostic::new(message, span, Some(field)));
    }

    /// The value when nothing was noted.
    ///
    /// # Errors
    /// All that was noted.
    pub fn finish<T>(self, value: T) -> Result<T, Vec<Diagnostic>> {
        if self.problems.is_empty() { Ok(value) } else { Err(self.problems) }
    }

    /// Everything noted so far.
    pub fn problems(&self) -> &[Diagnostic] {
        &self.problems
    }

    fn field(&self, name: &str) -> Option<&'static Field> {
        self.ask.kind.table().field(name)
    }

    /// The item, noting a required field that is not given.
    fn item(&mut self, name: &str) -> Option<&'a Item> {
        let item = self.ask.item(name);
        if item.is_none()
            && let Some(field) = self.field(name).filter(|field| field.required)
        {
            let value = match (field.choices(), field.holds) {
                ([], Holds::Column) => "\"the name of a column\"".to_string(),
                ([], Holds::Cell(_)) => "\"the name of a cell\"".to_string(),
                ([], Holds::LongText | Holds::Text) => "\"the text\"".to_string(),
                ([], _) => "the value".to_string(),
                (choices, _) => quoted_choices(choices.iter().map(|choice| choice.value)),
            };
            self.problem(
                name,
                format!(
                    "The field \"{name}\" is missing ({}). Fill in its blank, or add {name} = {value}.",
                    field.help.trim_end_matches('.')
                ),
            );
        }
        item
    }

    fn wrong(&mut self, name: &str, span: Range<usize>, found: &str, needed: &str) {
        self.problem_at(name, span, format!("{name}: {found} was found, but {needed} is needed."));
    }

    /// One text, trimmed.
    pub fn text(&mut self, name: &str) -> Option<String> {
        let item = self.item(name)?;
        match item.as_str() {
            Some(text) if !text.trim().is_empty() => Some(text.trim().to_string()),
            Some(_) => {
                self.wrong(name, self.ask.span(name), "an empty text", "a text in quotes");
                None
            }
            None => {
                self.wrong(name, self.ask.span(name), &describe(item), "a text in quotes");
                None
            }
        }
    }

    /// One text exactly as it stands; empty is allowed.
    pub fn raw_text(&mut self, name: &str) -> Option<&'a str> {
        let item = self.item(name)?;
        if item.as_str().is_none() {
            self.wrong(name, self.ask.span(name), &describe(item), "a text in quotes");
        }
        item.as_str()
    }

    /// One of the field's choices; where it is not given, `None`.
    pub fn choice(&mut self, name: &str) -> Option<&'static str> {
        let item = self.item(name)?;
        let span = self.ask.span(name);
        match item.as_str() {
            Some(given) => self.known_choice(name, given, span),
            None => {
                self.wrong(name, span, &describe(item), "a text in quotes");
                None
            }
        }
    }

    fn known_choice(&mut self, name: &str, given: &str, span: Range<usize>) -> Option<&'static str> {
        let choices = self.field(name)?.choices();
        let found = choices.iter().find(|choice| choice.value.eq_ignore_ascii_case(given.trim()));
        if found.is_none() {
            let known = || choices.iter().map(|choice| choice.value);
            let message = format!(
                "{name}: \"{given}\" is not one of its choices; they are {}.{}",
                quoted_choices(known()),
                suggestion(given, known())
            );
            self.problem_at(name, span, message);
        }
        found.map(|choice| choice.value)
    }

    /// Some of the field's choices.
    pub fn choices(&mut self, name: &str) -> Vec<&'static str> {
        let given = self.texts(name).unwrap_or_default();
        given.into_iter().filter_map(|text| self.known_choice(name, &text.value, text.span)).collect()
    }

    /// A number within the range that the field's table states.
    pub fn number(&mut self, name: &str) -> Option<f64> {
        let item = self.item(name)?;
        let span = self.ask.span(name);
        let number = item
            .as_float()
            .or_else(|| item.as_integer().map(|whole| whole as f64))
            .filter(|number| number.is_finite());
        let (fits, needed) = match (self.field(name)?.holds, number) {
            (Holds::Between(low, high), number) => {
                (number.is_some_and(|x| x > low && x < high), format!("a number between {low} and {high}"))
            }
            (Holds::Above(low), number) => (number.is_some_and(|x| x > low), format!("a number above {low}")),
            (Holds::Whole(low, high), number) => (
                number.is_some_and(|x| x.fract() == 0.0 && x >= low as f64 && x <= high as f64),
                format!("a whole number from {low} to {high}"),
            ),
            (_, number) => (number.is_some(), "a finite number".to_string()),
        };
        if !fits {
            let per_cent = match (self.field(name)?.holds, number) {
                (Holds::Between(0.0, 1.0), Some(x)) if x > 1.0 && x < 100.0 => {
                    format!(" For {x} % write {}.", (x * 1e8).round() / 1e10)
                }
                _ => String::new(),
            };
            let found = describe(item);
            self.problem_at(
                name,
                span,
                format!("{name}: {found} was found, but {needed} is needed.{per_cent}"),
            );
            return None;
        }
        number
    }

    /// A list of texts; numbers in the list are taken as they are written.
    pub fn texts(&mut self, name: &str) -> Option<Vec<At<String>>> {
        let item = self.item(name)?;
        let values: Vec<&Value> = match item.as_array() {
            Some(array) => array.iter().collect(),
            None => item.as_value().filter(|value| value.is_str()).into_iter().collect(),
        };
        if values.is_empty() && item.as_array().is_none() {
            self.wrong(
                name,
                self.ask.span(name),
                &describe(item),
                "a list of texts, such as [\"a\", \"b\"],",
            );
            return None;
        }
        let mut texts = Vec::with_capacity(values.len());
        for value in values {
            let span = value.span().unwrap_or_else(|| self.ask.span(name));
            match written(self.ask.source(), value) {
                Some(text) => texts.push(At { value: text, span }),
                None => self.wrong(name, span, value.type_name(), "a text in quotes"),
            }
        }
        Some(texts)
    }

    /// A list of finite numbers.
    pub fn numbers(&mut self, name: &str) -> Option<Vec<At<f64>>> {
        let item = self.item(name)?;
        let Some(array) = item.as_array() else {
            self.wrong(name, self.ask.span(name), &describe(item), "a list of numbers, such as [0, 10, 20],");
            return None;
        };
        let mut numbers = Vec::with_capacity(array.len());
        for value in array {
            let span = value.span().unwrap_or_else(|| self.ask.span(name));
            match finite(value) {
                Some(number) => numbers.push(At { value: number, span }),
                None => self.wrong(name, span, &describe_value(value), "a finite number"),
            }
        }
        Some(numbers)
    }

    /// A table from names to values, in the order written.
    pub fn entries(&mut self, name: &str) -> Option<Vec<(At<String>, &'a Value)>> {
        let item = self.item(name)?;
        let span = self.ask.span(name);
        let Some(table) = item.as_table_like() else {
            match item.as_str().and_then(name_there_twice) {
                Some(twice) => self.problem_at(
                    name,
                    span,
                    format!("{name}: two lines have the name \"{twice}\". Give each line a name of its own."),
                ),
                None => self.wrong(name, span, &describe(item), "a table of names, such as { \"a\" = ... },"),
            }
            return None;
        };
        let entries = table.iter().filter_map(|(key, item)| {
            let span = table.key(key).and_then(toml_edit::Key::span).unwrap_or_else(|| span.clone());
            Some((At { value: key.to_string(), span }, item.as_value()?))
        });
        Some(entries.collect())
    }

    /// A table from names to finite numbers.
    pub fn named_numbers(&mut self, name: &str) -> Option<Vec<(At<String>, f64)>> {
        let entries = self.entries(name)?;
        let mut numbers = Vec::with_capacity(entries.len());
        for (key, value) in entries {
            match finite(value) {
                Some(number) => numbers.push((key, number)),
                None => {
                    let found = describe_value(value);
                    let message = format!(
                        "{name}, \"{}\": {found} was found, but a finite number is needed.",
                        key.value
                    );
                    self.problem_at(name, value.span().unwrap_or(key.span), message);
                }
            }
        }
        Some(numbers)
    }

    /// A list of records: for each, the texts or numbers of its parts as written, in the table's order.
    pub fn records(&mut self, name: &str) -> Option<Vec<At<Vec<String>>>> {
        let item = self.item(name)?;
        let Some(Field { holds: Holds::Records(parts), .. }) = self.field(name) else { return None };
        let example = parts.iter().map(|part| format!("{} = ...", part.name)).collect::<Vec<_>>().join(", ");
        let Some(array) = item.as_array() else {
            self.wrong(
                name,
                self.ask.span(name),
                &describe(item),
                &format!("a list, such as [{{ {example} }}],"),
            );
            return None;
        };
        let mut records = Vec::with_capacity(array.len());
        for (index, value) in array.iter().enumerate() {
            let span = value.span().unwrap_or_else(|| self.ask.span(name));
            let Some(table) = value.as_inline_table() else {
                self.wrong(name, span, &describe_value(value), &format!("{{ {example} }}"));
                continue;
            };
            if let Some(values) = self.record(name, index, table, parts, &span) {
                records.push(At { value: values, span });
            }
        }
        Some(records)
    }

    fn record(
        &mut self,
        name: &str,
        index: usize,
        table: &dyn TableLike,
        parts: &[Part],
        span: &Range<usize>,
    ) -> Option<Vec<String>> {
        let known = || parts.iter().map(|part| part.name);
        for (key, _) in table.iter() {
            if !known().any(|part| part == key) {
                let message = format!(
                    "{name}, entry {}: no part is called \"{key}\"; the parts are {}.{}",
                    index + 1,
                    quoted_choices(known()).replace(" or ", " and "),
                    suggestion(key, known())
                );
                self.problem_at(name, span.clone(), message);
                return None;
            }
        }
        let mut values = Vec::with_capacity(parts.len());
        let source = self.ask.source();
        for part in parts {
            let value =
                table.get(part.name).and_then(Item::as_value).and_then(|value| written(source, value));
            let Some(value) = value else {
                self.problem_at(
                    name,
                    span.clone(),
                    format!(
                        "{name}, entry {}: \"{}\" is missing. In the blank a line is \"{}\"; in the text, add \"{}\" to the entry.",
                        index + 1,
                        part.name,
                        known().collect::<Vec<_>>().join("; "),
                        part.name
                    ),
                );
                return None;
            };
            values.push(value);
        }
        Some(values)
    }
}

/// A text, or a number as it is written in `source`: 0.50 stays 0.50.
fn written(source: &str, value: &Value) -> Option<String> {
    match value {
        Value::String(text) => Some(text.value().trim().to_string()),
        Value::Integer(_) | Value::Float(_) => source.get(value.span()?).map(|text| text.trim().to_string()),
        Value::Boolean(flag) => Some(flag.value().to_string()),
        _ => None,
    }
}

/// A finite number.
pub fn finite(value: &Value) -> Option<f64> {
    value
        .as_float()
        .or_else(|| value.as_integer().map(|whole| whole as f64))
        .filter(|number| number.is_finite())
}

/// The first name that two of the lines `name: value` have.
fn name_there_twice(lines: &str) -> Option<&str> {
    let names: Vec<&str> = lines
        .lines()
        .filter(|line| !line.trim().is_empty())
        .map(|line| line.split_once(':').map_or(line, |(name, _)| name).trim())
        .collect();
    names.iter().enumerate().find(|(at, name)| names[..*at].contains(name)).map(|(_, name)| *name)
}

fn describe(item: &Item) -> String {
    item.as_value().map_or_else(|| "a table".to_string(), describe_value)
}

/// What a value is, for a message: short values are shown as they stand.
pub fn describe_value(value: &Value) -> String {
    let shown = canonical(value);
    if shown.chars().count() <= 30 { shown } else { format!("a value of type {}", value.type_name()) }
}
