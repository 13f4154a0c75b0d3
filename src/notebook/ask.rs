//! A cell's ask: its text, parsed against the table of fields of its kind. Either a value for every field asked
//! for, or diagnostics that say where and what to mend; never a panic, never a guess.

mod reader;

pub use reader::{At, Reader, describe_value, finite};

use super::diagnostics::{Diagnostic, quoted_choices, suggestion};
use super::fields::{Field, Holds};
use super::kinds::Kind;
use std::ops::Range;
use toml_edit::{Document, Item, Value};

/// A cell's text that parses as TOML and names a known kind.
#[derive(Debug, Clone)]
pub struct Ask {
    pub kind: Kind,
    pub name: Option<String>,
    text: Document<String>,
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
        Reader::new(self)
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
