//! What the page asks and what it is told. `www/page/messages.js` has the same types for the page.

use crate::answer::html;
use crate::notebook::diagnostics::{Diagnostic, position};
use crate::notebook::engine::{CellView, Edit, Engine};
use crate::notebook::kinds::Kind;
use crate::notebook::outcome::Value;
use crate::notebook::sentence::{Control, Part};
use crate::table::{ColumnKind, Table};
use serde::{Deserialize, Serialize};

/// A request of the page, with the number that it gave it.
#[derive(Debug, Deserialize)]
pub struct Numbered {
    pub seq: u32,
    #[serde(flatten)]
    pub request: Request,
}

/// What the page may ask.
#[derive(Debug, Deserialize)]
#[serde(tag = "type", rename_all = "snake_case")]
pub enum Request {
    Open { text: String },
    EditText { cell: u32, text: String },
    SetField { cell: u32, field: String, value: String },
    Add { kind: String, after: Option<u32> },
    Duplicate { cell: u32 },
    Remove { cell: u32 },
    Move { cell: u32, to: usize },
    Rename { cell: u32, name: String },
    Undo {},
    Redo {},
    SetValue { cell: u32, row: usize, column: usize, value: String },
    SetTable { cell: Option<u32>, text: String },
    Rows { cell: u32, from: usize, count: usize },
    Save {},
    Report { date: Option<String> },
}

impl Request {
    /// The edit that the request stands for; the request itself when it is none.
    ///
    /// # Errors
    /// A request that changes nothing.
    pub fn into_edit(self) -> Result<Edit, Request> {
        Ok(match self {
            Request::EditText { cell, text } => Edit::Text { cell, text },
            Request::SetField { cell, field, value } => Edit::Field { cell, field, value },
            Request::Add { kind, after } => {
                Edit::Add { kind: Kind::named(&kind).unwrap_or(Kind::Note), after }
            }
            Request::Duplicate { cell } => Edit::Duplicate { cell },
            Request::Remove { cell } => Edit::Remove { cell },
            Request::Move { cell, to } => Edit::Move { cell, to },
            Request::Rename { cell, name } => Edit::Rename { cell, name },
            Request::Undo {} => Edit::Undo,
            Request::Redo {} => Edit::Redo,
            Request::SetValue { cell, row, column, value } => Edit::TableValue { cell, row, column, value },
            Request::SetTable { cell, text } => Edit::Table { cell, text },
            other => return Err(other),
        })
    }
}

/// What the page is told.
#[derive(Debug, Serialize)]
#[serde(tag = "type", rename_all = "snake_case")]
pub enum Message {
    Ready {
        version: &'static str,
        /// Every kind of cell: its name and what it is for.
        kinds: Vec<KindMessage>,
    },
    Update {
        seq: u32,
        order: Vec<u32>,
        cells: Vec<CellMessage>,
        recomputed: Vec<u32>,
        settled: bool,
        can_undo: bool,
        can_redo: bool,
        notice: Option<String>,
    },
    Rows {
        cell: u32,
        from: usize,
        columns: Vec<ColumnMessage>,
        total: usize,
        rows: Vec<Vec<String>>,
        excluded: Vec<usize>,
    },
    Saved {
        text: String,
    },
    Report {
        html: String,
    },
    Refused {
        seq: u32,
        message: String,
    },
}

/// A kind of cell, for the list of cells to add.
#[derive(Debug, Serialize)]
pub struct KindMessage {
    pub name: &'static str,
    pub purpose: &'static str,
    /// Names of its fields, for completion in the text face.
    pub fields: Vec<&'static str>,
}

impl KindMessage {
    /// Every kind.
    pub fn all() -> Vec<Self> {
        let of = |kind: &Kind| {
            let table = kind.table();
            Self {
                name: kind.name(),
                purpose: table.purpose,
                fields: table.fields.iter().map(|field| field.name).collect(),
            }
        };
        Kind::ALL.iter().map(of).collect()
    }
}

/// A cell as the page shows it.
#[derive(Debug, Serialize)]
pub struct CellMessage {
    id: u32,
    kind: Option<&'static str>,
    name: Option<String>,
    /// Left out when the page has it already and it is long.
    #[serde(skip_serializing_if = "Option::is_none")]
    text: Option<String>,
    condition: &'static str,
    sentence: Vec<PartMessage>,
    diagnostics: Vec<DiagnosticMessage>,
    headline: String,
    progress: Option<String>,
    answer: String,
    writeup: Option<String>,
    table_rows: Option<usize>,
    revision: u32,
}

impl CellMessage {
    /// The cell; its text is left out when `text_known`.
    pub fn new(cell: &CellView<'_>, text_known: bool, revision: u32) -> Self {
        let answer =
            cell.outcome.filter(|outcome| outcome.diagnostics.is_empty()).map(|outcome| &outcome.answer);
        let table_rows = match cell.outcome.and_then(|outcome| outcome.value.as_ref()) {
            Some(Value::Table(table)) => Some(table.rows),
            _ => None,
        };
        Self {
            id: cell.id,
            kind: cell.kind.map(Kind::name),
            name: cell.name.map(str::to_string),
            text: (!text_known).then(|| cell.text.to_string()),
            condition: cell.condition.words(),
            sentence: cell.sentence.iter().map(PartMessage::new).collect(),
            diagnostics: cell
                .diagnostics
                .iter()
                .map(|problem| DiagnosticMessage::new(problem, cell.text))
                .collect(),
            headline: cell.headline.clone(),
            progress: cell.progress.map(str::to_string),
            answer: answer.map(html::answer).unwrap_or_default(),
            writeup: answer.and_then(|answer| answer.writeup.clone()),
            table_rows,
            revision,
        }
    }
}

#[derive(Debug, Serialize)]
#[serde(tag = "type", rename_all = "snake_case")]
enum PartMessage {
    Words {
        text: String,
    },
    Blank {
        field: &'static str,
        label: &'static str,
        value: String,
        shown: String,
        control: &'static str,
        choices: Vec<OfferMessage>,
        help: &'static str,
        example: &'static str,
        is_default: bool,
        problem: bool,
    },
}

#[derive(Debug, Serialize)]
struct OfferMessage {
    value: String,
    label: String,
}

impl PartMessage {
    fn new(part: &Part) -> Self {
        match part {
            Part::Words(text) => PartMessage::Words { text: text.clone() },
            Part::Blank(blank) => PartMessage::Blank {
                field: blank.field,
                label: blank.label,
                value: blank.value.clone(),
                shown: blank.shown.clone(),
                control: match blank.control {
                    Control::Choice => "choice",
                    Control::Several => "several",
                    Control::Text => "text",
                    Control::Number => "number",
                    Control::Long => "long",
                },
                choices: blank
                    .choices
                    .iter()
                    .map(|offer| OfferMessage { value: offer.value.clone(), label: offer.label.clone() })
                    .collect(),
                help: blank.help,
                example: blank.example,
                is_default: blank.is_default,
                problem: blank.problem,
            },
        }
    }
}

#[derive(Debug, Serialize)]
struct DiagnosticMessage {
    message: String,
    start: usize,
    end: usize,
    line: usize,
    column: usize,
    field: Option<String>,
}

impl DiagnosticMessage {
    fn new(problem: &Diagnostic, text: &str) -> Self {
        let (line, column) = position(text, problem.span.start);
        let (start, end) = (utf16(text, problem.span.start), utf16(text, problem.span.end));
        Self { message: problem.message.clone(), start, end, line, column, field: problem.field.clone() }
    }
}

/// UTF-16 code units before the byte at `offset`.
fn utf16(text: &str, offset: usize) -> usize {
    text.char_indices().take_while(|(at, _)| *at < offset).map(|(_, character)| character.len_utf16()).sum()
}

/// A column of a table window.
#[derive(Debug, Serialize)]
pub struct ColumnMessage {
    name: String,
    r#type: &'static str,
}

/// The rows of a data cell's table from `from` on, at most `count`.
pub fn rows(cell: u32, table: &Table, from: usize, count: usize) -> Message {
    let end = from.saturating_add(count).min(table.rows);
    let shown = from.min(end)..end;
    let row_of = |row: usize| table.columns.iter().map(|column| column.text(row).to_string()).collect();
    let type_of = |kind| match kind {
        ColumnKind::Number => "number",
        ColumnKind::Label => "label",
    };
    Message::Rows {
        cell,
        from,
        columns: table
            .columns
            .iter()
            .map(|column| ColumnMessage { name: column.name.clone(), r#type: type_of(column.kind) })
            .collect(),
        total: table.rows,
        rows: shown.clone().map(row_of).collect(),
        excluded: table.excluded.iter().map(|gone| gone.row).filter(|row| shown.contains(row)).collect(),
    }
}

/// What has changed in the engine since the page was last told.
pub fn update(
    engine: &mut Engine,
    seq: u32,
    text_known: &mut dyn FnMut(&CellView<'_>) -> bool,
    revision: u32,
) -> Message {
    let changes = engine.take_changes();
    let cells = changes.changed.iter().filter_map(|&id| engine.cell(id));
    Message::Update {
        seq,
        order: engine.order(),
        cells: cells.map(|cell| CellMessage::new(&cell, text_known(&cell), revision)).collect(),
        recomputed: changes.recomputed,
        settled: engine.is_settled(),
        can_undo: engine.can_undo(),
        can_redo: engine.can_redo(),
        notice: engine.notice().map(str::to_string),
    }
}
