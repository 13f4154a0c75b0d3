//! A cell's ask: its text, parsed against the table of fields of its kind. Either a value for every field asked
//! for, or diagnostics that say where and what to mend; never a panic, never a guess.

use super::diagnostics::{Diagnostic, quoted_choices, suggestion};
use super::fields::{Field, Holds, Part};
use super::kinds::Kind;
use std::ops::Range;
use toml_edit::{Document, Item, TableLike, Value};

/// A cell's text that parses as TOML and names a known kind.
#[derive(Debug, Clone)]
pub struct Ask {
    pub kind: Kind,
    pub name: Option<String>,
    text: Document<String>,
}

/// A value with the bytes at which it stands.
#[derive(Debug, Clone, PartialEq)]
pub struct At<T> {
    pub value: T,
    pub span: Range<usize>,
}

impl Ask {
    /// Parses a cell's text: the ask, and what must be mended before it can be answered (fields that the kind
    /// does not know, a name that is no text).
    ///
    /// # Errors
    /// Diagnostics when the text is no TOML or names no known kind, so that there is no ask at all.
    pub fn parse(text: &str) -> Result<(Self, Vec<Diagnostic>), Vec<Diagnostic>> {
        let document = Document::parse(text.to_string()).map_err(|error| vec![not_toml(text, &error)])?;
        let kind = kind_of(&document)?;
        let mut problems = Vec::new();
        let name = name_of(&document, &mut problems);
        for (key, item) in document.iter() {
            check_key(&document, kind, key, item, &mut problems);
        }
        Ok((Self { kind, name, text: document }, problems))
    }

    /// Whether the field is given.
    pub fn given(&self, field: &str) -> bool {
        self.item(field).is_some()
    }

    /// The field's raw item.
    pub fn item(&self, field: &str) -> Option<&Item> {
        self.text.as_table().get(field)
    }

    /// The field as text, when it is given as text.
    pub fn text_of(&self, field: &str) -> Option<&str> {
        self.item(field)?.as_str()
    }

    /// The cell's whole text, which all spans count in.
    pub fn source(&self) -> &str {
        self.text.raw()
    }

    /// Where the field's value stands; the `kind` line where it is not given.
    pub fn span(&self, field: &str) -> Range<usize> {
        let table = self.text.as_table();
        let item = table.get(field).or_else(|| table.get("kind"));
        let of_key = || table.key(field).and_then(toml_edit::Key::span);
        item.and_then(Item::span).or_else(of_key).unwrap_or(0..0)
    }

    /// The cells that this one reads from: the field and the name given in it.
    pub fn references(&self) -> Vec<(&'static Field, &str)> {
        let cells = self.kind.table().fields.iter().filter(|field| matches!(field.holds, Holds::Cell(_)));
        cells.filter_map(|field| Some((field, self.text_of(field.name)?))).collect()
    }

    /// What decides the answer: every field but the name, without comments, order or spacing. The names of the cells
    /// that it reads from are not part of it: what these hand over is.
    pub fn essence(&self) -> String {
        let mut essence = self.kind.name().to_string();
        for field in self.kind.table().fields.iter().filter(|field| !matches!(field.holds, Holds::Cell(_))) {
            if let Some(item) = self.item(field.name) {
                essence.push('\n');
                essence.push_str(field.name);
                essence.push('=');
                essence.push_str(&plain(item));
            }
        }
        essence
    }

    /// A reader of typed values that collects what must be mended.
    pub fn reader(&self) -> Reader<'_> {
        Reader { ask: self, problems: Vec::new() }
    }
}

/// An item as TOML without comments and spacing.
fn plain(item: &Item) -> String {
    if let Some(text) = item.as_str() {
        return text.to_string();
    }
    let mut item = item.clone();
    item.make_value();
    item.into_value().map(|value| canonical(&value)).unwrap_or_default()
}

fn canonical(value: &Value) -> String {
    match value {
        Value::Array(array) => format!("[{}]", array.iter().map(canonical).collect::<Vec<_>>().join(",")),
        Value::InlineTable(table) => {
            let entries = table.iter().map(|(key, value)| format!("{key:?}={}", canonical(value)));
            format!("{{{}}}", entries.collect::<Vec<_>>().join(","))
        }
        Value::String(text) => format!("{:?}", text.value()),
        Value::Integer(number) => number.value().to_string(),
        Value::Float(number) => format!("{:?}", number.value()),
        Value::Boolean(flag) => flag.value().to_string(),
        Value::Datetime(moment) => moment.value().to_string(),
    }
}

fn not_toml(text: &str, error: &toml_edit::TomlError) -> Diagnostic {
    let span = error.span().unwrap_or(0..text.len());
    let message = format!(
        "This text cannot be read: {}. Text stands in quotes (name = \"x\"), lists in [brackets].",
        error.message()
    );
    Diagnostic::new(message, span, None)
}

fn kind_of(document: &Document<String>) -> Result<Kind, Vec<Diagnostic>> {
    let kinds = || Kind::ALL.iter().map(|kind| kind.name());
    let complaint = |message: String, span| Err(vec![Diagnostic::new(message, span, Some("kind"))]);
    let Some(item) = document.as_table().get("kind") else {
        return complaint(format!("The cell has no kind. Add kind = {}.", quoted_choices(kinds())), 0..0);
    };
    let span = item.span().unwrap_or(0..0);
    let given = item.as_str().unwrap_or_default();
    match Kind::named(given) {
        Some(kind) => Ok(kind),
        None => complaint(
            format!(
                "\"{given}\" is no kind of cell; the kinds are {}.{}",
                quoted_choices(kinds()),
                suggestion(given, kinds())
            ),
            span,
        ),
    }
}

fn name_of(document: &Document<String>, problems: &mut Vec<Diagnostic>) -> Option<String> {
    let item = document.as_table().get("name")?;
    match item.as_str().map(str::trim) {
        Some(name) if !name.is_empty() => Some(name.to_string()),
        _ => {
            let span = item.span().unwrap_or(0..0);
            problems.push(Diagnostic::new(
                "A cell's name is text in quotes and not empty: name = \"trial\".",
                span,
                Some("name"),
            ));
            None
        }
    }
}

fn check_key(
    document: &Document<String>,
    kind: Kind,
    key: &str,
    item: &Item,
    problems: &mut Vec<Diagnostic>,
) {
    let span =
        document.as_table().key(key).and_then(toml_edit::Key::span).or_else(|| item.span()).unwrap_or(0..0);
    if item.as_table().is_some_and(|table| !table.is_dotted()) || item.is_array_of_tables() {
        let message = format!(
            "A line in [brackets] starts a new section of the file, which a cell cannot hold. Write {key} = {{ ... }} or {key} = [ ... ] instead."
        );
        problems.push(Diagnostic::new(message, span, Some(key)));
        return;
    }
    let table = kind.table();
    if key != "kind" && key != "name" && table.field(key).is_none() {
        let known = || table.fields.iter().map(|field| field.name).chain(["name"]);
        let message = format!(
            "A {} cell has no field \"{key}\"; it has {}.{}",
            kind.name(),
            quoted_choices(known()).replace(" or ", " and "),
            suggestion(key, known())
        );
        problems.push(Diagnostic::new(message, span, Some(key)));
    }
}

/// Reads typed values out of an ask. A value of the wrong type or outside its range is noted and reads as
/// `None`; [`Reader::finish`] hands back everything that was noted.
pub struct Reader<'a> {
    ask: &'a Ask,
    problems: Vec<Diagnostic>,
}

impl<'a> Reader<'a> {
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
            let choices = match field.choices() {
                [] => format!("{name} = ..."),
                choices => format!("{name} = {}", quoted_choices(choices.iter().map(|choice| choice.value))),
            };
            self.problem(
                name,
                format!(
                    "The field \"{name}\" is missing ({}). Add {choices}.",
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
            self.wrong(name, span, &describe(item), &needed);
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
            self.wrong(name, span, &describe(item), "a table of names, such as { \"a\" = ... },");
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
                None => self.wrong(
                    name,
                    value.span().unwrap_or(key.span),
                    &describe_value(value),
                    "a finite number",
                ),
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
                        "{name}, entry {}: \"{}\" is missing. Add {} = ...",
                        index + 1,
                        part.name,
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

fn describe(item: &Item) -> String {
    item.as_value().map_or_else(|| "a table".to_string(), describe_value)
}

/// What a value is, for a message: short values are shown as they stand.
pub fn describe_value(value: &Value) -> String {
    let shown = canonical(value);
    if shown.chars().count() <= 30 { shown } else { format!("a value of type {}", value.type_name()) }
}
