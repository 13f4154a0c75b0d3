//! One column: its texts as they stand in the table, and its numbers where it holds numbers.

use super::split::Cells;
use crate::numerics::decimal::{Decimal, DecimalMark, NotADecimal};
use std::sync::Arc;

/// What a column holds.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ColumnKind {
    /// Every value that is not missing is a number.
    Number,
    /// Texts: names of groups, remarks, or numbers that serve as names.
    Label,
}

impl ColumnKind {
    /// The word used in the notebook's text and in results.
    pub fn word(self) -> &'static str {
        match self {
            Self::Number => "number",
            Self::Label => "label",
        }
    }
}

/// The numbers of a column: value = `origin` + offset, exactly the decimal in the text up to one rounding of the
/// offset.
#[derive(Debug, Clone)]
pub struct Numbers {
    /// Zero where the values spread over their own size; else their common leading digits.
    pub origin: Decimal,
    /// One a row, NaN where the value is missing. Read them through [`Numbers::offset`].
    offsets: Vec<f64>,
}

impl Numbers {
    pub(super) fn new(origin: Decimal, offsets: Vec<f64>) -> Self {
        Self { origin, offsets }
    }

    /// Value of `row` less the origin; `None` where it is missing.
    pub fn offset(&self, row: usize) -> Option<f64> {
        self.offsets.get(row).copied().filter(|offset| !offset.is_nan())
    }

    /// Number of values that are not missing.
    pub fn count(&self) -> usize {
        self.offsets.iter().filter(|offset| !offset.is_nan()).count()
    }
}

/// A cell that is no number in a column of numbers.
#[derive(Debug, Clone, PartialEq)]
pub struct NotANumber {
    /// Counted from 0.
    pub row: usize,
    pub text: String,
    pub why: NotADecimal,
}

impl NotANumber {
    /// What to tell a person who needs `column` to be numbers: place, finding, and what to do.
    pub fn message(&self, column: &str, mark: DecimalMark) -> String {
        let (row, text, other) = (self.row + 1, shortened(&self.text), mark.other());
        let place = format!("Row {row}, column \"{column}\": \"{text}\"");
        let sign = mark.character();
        match self.why {
            NotADecimal::TooLarge => {
                format!(
                    "{place} is too large; numbers go up to about 1.8e308. Correct it, or list it under missing."
                )
            }
            NotADecimal::TooSmall => format!(
                "{place} is too close to zero; numbers other than 0 start at about 4.9e-324. Correct it, or list it under missing."
            ),
            NotADecimal::NotANumber if Decimal::parse(&self.text, other).is_ok() => format!(
                "{place} is not a number with decimal \"{sign}\". Set decimal = \"{}\", or list it under missing.",
                other.character()
            ),
            NotADecimal::NotANumber if is_grouped(&self.text) => format!(
                "{place} is not a number with decimal \"{sign}\". Remove the thousands separators, or list it under missing."
            ),
            NotADecimal::NotANumber => {
                format!("{place} is not a number. Correct it, or list it under missing.")
            }
        }
    }
}

/// Whether the text would be a number without commas, points, spaces or apostrophes between its digits.
fn is_grouped(text: &str) -> bool {
    let digits: String =
        text.chars().filter(|c| !matches!(c, ',' | '.' | ' ' | '\u{a0}' | '\u{202f}' | '\'' | '’')).collect();
    digits.len() < text.len() && Decimal::parse(&digits, DecimalMark::Point).is_ok()
}

/// At most 60 characters of a text, for messages.
pub(super) fn shortened(text: &str) -> String {
    match text.char_indices().nth(60) {
        Some((end, _)) => format!("{}…", &text[..end]),
        None => text.to_owned(),
    }
}

/// A named column of a [`super::Table`].
#[derive(Debug, Clone)]
pub struct Column {
    pub name: String,
    pub kind: ColumnKind,
    /// Present exactly where `kind` is [`ColumnKind::Number`].
    pub numbers: Option<Numbers>,
    /// The first few cells that keep the column from being numbers; empty in a column of numbers.
    pub not_numbers: Vec<NotANumber>,
    /// How many such cells there are in all.
    pub n_not_numbers: usize,
    /// Number of missing values.
    pub n_missing: usize,
    /// True where the person named the kind instead of leaving it to be found.
    pub forced: bool,
    /// True for a column computed from others, which the table's text does not contain.
    pub derived: bool,
    pub(super) source: Source,
}

/// Where a column's texts are.
#[derive(Debug, Clone)]
pub(super) struct Source {
    pub cells: Arc<Cells>,
    pub index: usize,
    pub missing: Arc<[String]>,
    pub mark: DecimalMark,
}

impl Source {
    pub fn text(&self, row: usize) -> &str {
        self.cells.get(row, self.index)
    }

    pub fn is_missing(&self, text: &str) -> bool {
        // Asked for every cell: a look at the first byte settles nearly all of them.
        let first = text.as_bytes().first();
        self.missing.iter().any(|code| code.as_bytes().first() == first && code == text)
    }
}

impl Column {
    /// A column of computed values, NaN where missing. Its texts are the shortest that give the same numbers.
    pub(super) fn derived(name: &str, values: Vec<f64>) -> Self {
        let n_missing = values.iter().filter(|value| value.is_nan()).count();
        let text = |value: &f64| if value.is_nan() { String::new() } else { shortest(*value) };
        let cells = Arc::new(Cells::single_column(values.iter().map(text)));
        Self {
            name: name.to_owned(),
            kind: ColumnKind::Number,
            numbers: Some(Numbers::new(Decimal::ZERO, values)),
            not_numbers: Vec::new(),
            n_not_numbers: 0,
            n_missing,
            forced: false,
            derived: true,
            source: Source { cells, index: 0, missing: Arc::from([String::new()]), mark: DecimalMark::Point },
        }
    }

    /// The text of `row`, without the spaces around it. `row` must be below the table's number of rows.
    pub fn text(&self, row: usize) -> &str {
        self.source.text(row)
    }

    /// Whether the value of `row` is missing: its text is one of the missing codes.
    pub fn missing(&self, row: usize) -> bool {
        match &self.numbers {
            Some(numbers) => numbers.offset(row).is_none(),
            None => self.source.is_missing(self.text(row)),
        }
    }

    /// The nearest `f64` to the number in `row`; `None` where it is missing or the column holds labels.
    ///
    /// For differences and anything that depends on the last digits use [`Column::numbers`].
    pub fn value(&self, row: usize) -> Option<f64> {
        let numbers = self.numbers.as_ref()?;
        let offset = numbers.offset(row)?;
        if numbers.origin == Decimal::ZERO {
            return Some(offset);
        }
        Decimal::parse(self.text(row), self.source.mark).ok().map(Decimal::to_f64)
    }

    /// Why this column cannot serve where numbers are needed, with what to do; `None` for a column of numbers.
    pub fn needs_numbers(&self) -> Option<String> {
        if self.kind == ColumnKind::Number {
            return None;
        }
        if let Some(first) = self.not_numbers.first() {
            return Some(first.message(&self.name, self.source.mark));
        }
        let name = &self.name;
        if self.n_missing == self.source.cells.rows() {
            return Some(format!(
                "Column \"{name}\" has no values: all its cells are missing. Fill it, or choose another column."
            ));
        }
        Some(format!(
            "Column \"{name}\" is declared to hold labels. Set it to \"number\" under columns, or choose another column."
        ))
    }
}

/// The shortest text that gives the same number, with a power of ten only for very large and very small ones.
fn shortest(value: f64) -> String {
    let size = value.abs();
    if size == 0.0 || (1e-5..1e16).contains(&size) { format!("{value}") } else { format!("{value:e}") }
}
