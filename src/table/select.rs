//! Rows taken out with a reason, and columns computed from others.

/// Rows to take out: those that meet the condition `where`, for a reason that is reported.
#[derive(Debug, Clone, PartialEq)]
pub struct Exclude {
    /// A condition on columns: `score > 100`, `id = "p12"`, `'time taken' >= 3.5 and group != "pilot"`.
    pub condition: String,
    pub reason: String,
}

/// A column to compute: `name` from an expression such as `log(after) - log(before)`.
#[derive(Debug, Clone, PartialEq)]
pub struct Derive {
    pub name: String,
    pub expression: String,
}

/// An exclusion that has been applied.
#[derive(Debug, Clone, PartialEq)]
pub struct Exclusion {
    pub condition: String,
    pub reason: String,
    /// Rows taken out under it; a row that an earlier exclusion took out counts there.
    pub rows: usize,
}

/// A row taken out.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Excluded {
    /// Counted from 0.
    pub row: usize,
    /// Index into [`super::Table::exclusions`].
    pub exclusion: usize,
}

/// Which entry an error is about, by its place in the list.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Which {
    Derive(usize),
    Exclude(usize),
}

/// Why an exclusion or a derived column could not be understood or computed.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[error("{message}")]
pub struct SelectError {
    pub which: Which,
    /// Bytes of the condition or expression that it is about.
    pub span: std::ops::Range<usize>,
    pub message: String,
}
