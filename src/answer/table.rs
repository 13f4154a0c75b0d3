//! A table: a caption, columns with an alignment, rows of cells, and notes below.

use super::number::{self, Precision};

/// A table of an answer. The first column names the row.
///
/// A row may be shorter than the columns (the rest stays empty); cells beyond the last column are left out.
///
/// # Example
/// ```
/// use levelwise::answer::{Cell, Row, Table};
/// let table = Table::new("Tukey's comparisons of words recalled")
///     .text_column("Comparison")
///     .number_column("Difference")
///     .number_column("adjusted p")
///     .row(Row::new([Cell::text("b − a"), Cell::number("1.25", 1.2512), Cell::text("0.012")]).strong())
///     .note("Intervals are simultaneous.");
/// assert_eq!(table.columns.len(), 3);
/// ```
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Table {
    /// Names the method in full.
    pub caption: String,
    pub columns: Vec<Column>,
    pub rows: Vec<Row>,
    /// Shown below the table, one paragraph each.
    pub notes: Vec<String>,
}

/// One column of a [`Table`].
#[derive(Debug, Clone, PartialEq)]
pub struct Column {
    pub heading: String,
    pub align: Align,
}

/// How the cells of a column are set.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Align {
    /// Words, from the left.
    Text,
    /// Numbers, from the right in figures of equal width.
    Number,
}

/// One row of a [`Table`].
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Row {
    pub cells: Vec<Cell>,
    pub emphasis: Emphasis,
}

/// How a row stands out. What it means is said in words in one of the row's cells: weight and colour carry nothing alone.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Emphasis {
    #[default]
    Plain,
    /// Heavier, for example a rejected hypothesis.
    Strong,
    /// Lighter, for example a row that was left out.
    Quiet,
    /// A sum under a rule.
    Total,
}

/// One cell: the text as shown and, for a number, its value in full precision, which delimited text uses.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Cell {
    /// What is shown. Empty with `absent` set: "not available".
    pub text: String,
    /// The number behind the text.
    pub value: Option<f64>,
    /// There is no such quantity here (a stepwise procedure has no interval): shown as a dash.
    pub absent: bool,
}

impl Table {
    /// A table that so far has only its caption.
    pub fn new(caption: impl Into<String>) -> Table {
        Table { caption: caption.into(), ..Table::default() }
    }

    /// The table with one more column of words.
    #[must_use]
    pub fn text_column(mut self, heading: impl Into<String>) -> Table {
        self.columns.push(Column { heading: heading.into(), align: Align::Text });
        self
    }

    /// The table with one more column of numbers.
    #[must_use]
    pub fn number_column(mut self, heading: impl Into<String>) -> Table {
        self.columns.push(Column { heading: heading.into(), align: Align::Number });
        self
    }

    /// The table with one more row.
    #[must_use]
    pub fn row(mut self, row: impl Into<Row>) -> Table {
        self.push(row);
        self
    }

    /// Adds a row in place, for loops.
    pub fn push(&mut self, row: impl Into<Row>) {
        self.rows.push(row.into());
    }

    /// The table with one more note below it.
    #[must_use]
    pub fn note(mut self, note: impl Into<String>) -> Table {
        self.notes.push(note.into());
        self
    }
}

impl Row {
    /// A plain row of these cells.
    pub fn new<C: Into<Cell>>(cells: impl IntoIterator<Item = C>) -> Row {
        Row { cells: cells.into_iter().map(Into::into).collect(), emphasis: Emphasis::Plain }
    }

    /// The row set heavier.
    #[must_use]
    pub fn strong(self) -> Row {
        self.with_emphasis(Emphasis::Strong)
    }

    /// The row set lighter.
    #[must_use]
    pub fn quiet(self) -> Row {
        self.with_emphasis(Emphasis::Quiet)
    }

    /// The row set as a sum under a rule.
    #[must_use]
    pub fn total(self) -> Row {
        self.with_emphasis(Emphasis::Total)
    }

    /// The row with this emphasis.
    #[must_use]
    pub fn with_emphasis(mut self, emphasis: Emphasis) -> Row {
        self.emphasis = emphasis;
        self
    }
}

impl Cell {
    /// A cell of words, or of a number without a value behind it.
    pub fn text(text: impl Into<String>) -> Cell {
        Cell { text: text.into(), value: None, absent: false }
    }

    /// A number: as shown, and in full precision.
    pub fn number(text: impl Into<String>, value: f64) -> Cell {
        Cell { text: text.into(), value: Some(value), absent: false }
    }

    /// A count.
    pub fn count(n: usize) -> Cell {
        Cell { text: n.to_string(), value: Some(n as f64), absent: false }
    }

    /// A number rounded to a precision; absent where it is not a number.
    pub fn estimate(value: f64, precision: Precision) -> Cell {
        Cell::of(value, number::estimate(value, precision))
    }

    /// A p-value with three decimals; absent where it is not a number.
    pub fn p_value(p: f64) -> Cell {
        Cell::of(p, number::p_value(p))
    }

    /// A test statistic with two decimals; absent where it is not a number.
    pub fn statistic(value: f64) -> Cell {
        Cell::of(value, number::statistic(value))
    }

    /// Degrees of freedom; absent where they are not a number.
    pub fn df(value: f64) -> Cell {
        Cell::of(value, number::df(value))
    }

    /// An interval in brackets; absent where a limit is not a number.
    pub fn interval(lower: f64, upper: f64, precision: Precision) -> Cell {
        if lower.is_nan() || upper.is_nan() {
            return Cell::absent();
        }
        Cell::text(number::interval(lower, upper, precision))
    }

    fn of(value: f64, text: String) -> Cell {
        if value.is_nan() { Cell::absent() } else { Cell::number(text, value) }
    }

    /// A quantity that does not exist in this row: shown as a dash and read out as "not available".
    pub fn absent() -> Cell {
        Cell { text: String::new(), value: None, absent: true }
    }

    /// A cell with nothing in it.
    pub fn empty() -> Cell {
        Cell::default()
    }
}

impl From<&str> for Cell {
    fn from(text: &str) -> Cell {
        Cell::text(text)
    }
}

impl From<String> for Cell {
    fn from(text: String) -> Cell {
        Cell::text(text)
    }
}

impl From<usize> for Cell {
    fn from(n: usize) -> Cell {
        Cell::count(n)
    }
}

impl<C: Into<Cell>> From<Vec<C>> for Row {
    fn from(cells: Vec<C>) -> Row {
        Row::new(cells)
    }
}

impl<C: Into<Cell>, const N: usize> From<[C; N]> for Row {
    fn from(cells: [C; N]) -> Row {
        Row::new(cells)
    }
}
