//! A text becomes a table, or an error that says where and what to do.

use super::column::{Column, ColumnKind, shortened};
use super::infer;
use super::split::{Cells, Separator, Split, find_separator, split};
use super::{Table, nearest};
use crate::numerics::decimal::DecimalMark;
use std::sync::Arc;

/// How a table's text is to be read. The default finds out everything that is `None`.
#[derive(Debug, Clone)]
pub struct ReadOptions {
    pub separator: Option<Separator>,
    pub decimal: Option<DecimalMark>,
    /// Texts that stand for a missing value, compared after the spaces around a cell are removed.
    pub missing: Vec<String>,
    /// Kinds that the person names for columns.
    pub kinds: Vec<(String, ColumnKind)>,
}

impl Default for ReadOptions {
    fn default() -> Self {
        let missing = ["", "NA", "."].map(String::from).to_vec();
        Self { separator: None, decimal: None, missing, kinds: Vec::new() }
    }
}

/// Why a text could not be read as a table. `message` is complete; the places are for marking.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[error("{message}")]
pub struct ReadError {
    /// Line of the text, from 1.
    pub line: Option<u32>,
    /// Data row, from 0.
    pub row: Option<usize>,
    pub column: Option<String>,
    pub message: String,
}

impl ReadError {
    pub(super) fn whole(message: impl Into<String>) -> Self {
        Self { line: None, row: None, column: None, message: message.into() }
    }

    pub(super) fn at_line(line: u32, message: String) -> Self {
        Self { line: Some(line), row: None, column: None, message }
    }

    /// The same, with the line on which its row begins.
    fn on_its_line(self, lines: &[u32]) -> Self {
        Self { line: self.row.and_then(|row| lines.get(row).copied()).or(self.line), ..self }
    }

    pub(super) fn at_cell(row: usize, column: &str, message: String) -> Self {
        Self { line: None, row: Some(row), column: Some(column.to_owned()), message }
    }
}

/// The table in `text`: a header row, then one row a line, in columns of numbers or labels.
///
/// Spaces around fields are removed, empty lines passed over, and so are empty columns without a name after the last one.
/// Lines that hold separators only are passed over with a remark. A column is a column of numbers where every value
/// that is not missing is a number; thousands separators are not accepted. Separator and decimal mark are found where
/// the options leave them open; where the text can be read in two ways the table carries a remark, or, where
/// that would change values unnoticed, the text is refused.
///
/// # Errors
/// [`ReadError`] for an empty text, a header alone, a column name that is empty or there twice, a row with too few or
/// too many fields, a quote that is never closed, a comma that may begin decimals or separate thousands, a named
/// kind for a column that is not there, and text in a column declared to hold numbers.
pub fn read(text: &str, options: &ReadOptions) -> Result<Table, ReadError> {
    let mut remarks = Vec::new();
    let separator = options.separator.unwrap_or_else(|| {
        let found = find_separator(text);
        if let Some(rival) = found.rival {
            remarks.push(format!(
                "The rows split evenly at {} and at {}; they were read with {}. Set separator if that is not meant.",
                found.separator.shown(),
                rival.shown(),
                found.separator.shown()
            ));
        }
        found.separator
    });
    let Split { mut header, header_line, cells, lines } = split(text, separator)?;
    // A spreadsheet copies the empty columns beside a table with it.
    while header.len() > 1 && header.last().is_some_and(String::is_empty) && cells.is_blank(header.len() - 1)
    {
        header.pop();
    }
    check_header(&header, header_line)?;
    if lines.is_empty() {
        return Err(ReadError::at_line(
            header_line,
            format!(
                "The table has a header (line {header_line}) but no rows. Add at least one row of values under it."
            ),
        ));
    }
    let kinds = named_kinds(&header, &options.kinds)?;
    let (cells, missing) = (Arc::new(cells), Arc::from(options.missing.as_slice()));
    let first = options.decimal.unwrap_or(DecimalMark::Point);
    let mut sources = infer::sources(&cells, header.len(), &missing, first);
    let mut tallies: Vec<infer::Tally> = sources.iter().map(infer::tally).collect();
    let mut decimal = first;
    if options.decimal.is_none() {
        let labels: Vec<bool> = kinds.iter().map(|kind| *kind == Some(ColumnKind::Label)).collect();
        decimal = infer::find_mark(&header, &sources, &tallies, &labels, separator, &mut remarks)
            .map_err(|error| error.on_its_line(&lines))?;
        if decimal != first {
            sources = infer::sources(&cells, header.len(), &missing, decimal);
            tallies = sources.iter().map(infer::tally).collect();
        }
    }
    let parts = header.iter().zip(sources).zip(tallies).zip(kinds);
    let columns: Vec<Column> = parts
        .map(|(((name, source), tally), kind)| infer::column(name, source, tally, kind))
        .collect::<Result<_, _>>()
        .map_err(|error: ReadError| error.on_its_line(&lines))?;
    let rows = lines.len();
    remarks.extend(spaces(&columns, &cells));
    Ok(Table {
        columns,
        rows,
        lines,
        separator,
        decimal,
        remarks,
        exclusions: Vec::new(),
        excluded: Vec::new(),
    })
}

/// Labels that are the same only once the spaces around them are left out.
fn spaces(columns: &[Column], cells: &Cells) -> Vec<String> {
    let labels = columns.iter().enumerate().filter(|(_, column)| column.kind == ColumnKind::Label);
    let found = labels.filter_map(|(at, column)| {
        let (value, rows) = cells.spaced_and_bare(at)?;
        let rows = if rows == 1 { "1 row".to_string() } else { format!("{rows} rows") };
        let (name, value) = (&column.name, shortened(value));
        Some(format!(
            "Column \"{name}\": \"{value}\" stands with spaces around it in {rows} and without in others; they count as the same value."
        ))
    });
    found.collect()
}

fn check_header(header: &[String], line: u32) -> Result<(), ReadError> {
    for (at, name) in header.iter().enumerate() {
        if name.is_empty() {
            let message = format!(
                "Line {line}: column {} has no name. Name it in the header, or remove the separator that makes it.",
                at + 1
            );
            return Err(ReadError::at_line(line, message));
        }
        if let Some(before) = header[..at].iter().position(|other| other == name) {
            let message = format!(
                "Line {line}: columns {} and {} are both called \"{}\". Rename one of them.",
                before + 1,
                at + 1,
                shortened(name)
            );
            return Err(ReadError::at_line(line, message));
        }
    }
    Ok(())
}

/// The kind that the person named, for each column of the header.
fn named_kinds(
    header: &[String],
    kinds: &[(String, ColumnKind)],
) -> Result<Vec<Option<ColumnKind>>, ReadError> {
    let mut named = vec![None; header.len()];
    for (name, kind) in kinds {
        let Some(at) = header.iter().position(|known| known == name) else {
            let message = unknown_column(name, header.iter().map(String::as_str));
            return Err(ReadError { column: Some(name.clone()), ..ReadError::whole(message) });
        };
        named[at] = Some(*kind);
    }
    Ok(named)
}

/// The message for a column that is not there: the nearest name, or all of them.
pub(super) fn unknown_column<'a>(name: &str, known: impl Iterator<Item = &'a str> + Clone) -> String {
    let name_shown = shortened(name);
    match nearest(name, known.clone()) {
        Some(near) => format!("There is no column \"{name_shown}\". Did you mean \"{near}\"?"),
        None => {
            let names: Vec<String> =
                known.take(12).map(|known| format!("\"{}\"", shortened(known))).collect();
            format!("There is no column \"{name_shown}\". The columns are {}.", names.join(", "))
        }
    }
}
