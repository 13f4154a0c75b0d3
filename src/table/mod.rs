//! Reading tables: delimited text into columns, with types, missing values, exclusions and derived columns.
//!
//! Numbers are kept as an exact decimal origin and offsets from it. Every text a person typed stays available as
//! it was, and every row keeps its line. What is on purpose not here: levels, outcomes and studies, and any
//! guess that could change a value silently; where a table can be read in two ways, a remark or an error says so.

mod column;
mod condition;
mod edit;
#[cfg(not(target_arch = "wasm32"))]
pub mod encoding;
mod expression;
mod infer;
mod nearest;
mod read;
mod select;
mod split;
mod tokens;

pub use column::{Column, ColumnKind, NotANumber, Numbers};
pub use edit::{quoted, replace_value};
pub use nearest::nearest;
pub use read::{ReadError, ReadOptions, read};
pub use select::{Derive, Exclude, Excluded, Exclusion, SelectError, Which};
pub use split::Separator;

use crate::numerics::decimal::DecimalMark;

/// A table that has been read: columns of equal length, and where each row came from.
#[derive(Debug, Clone)]
pub struct Table {
    pub columns: Vec<Column>,
    /// Number of data rows; the header is not counted. Rows are numbered from 1 in messages, from 0 in code.
    pub rows: usize,
    /// Line of the text on which each row begins, from 1; the header is usually line 1.
    pub lines: Vec<u32>,
    /// The separator in use, chosen or found.
    pub separator: Separator,
    /// The decimal mark in use, chosen or found.
    pub decimal: DecimalMark,
    /// What a person should know about how the table was read, in full sentences.
    pub remarks: Vec<String>,
    /// The exclusions applied, in the order given, with how many rows each took out.
    pub exclusions: Vec<Exclusion>,
    /// Rows taken out, ascending; each under the first exclusion that names it.
    pub excluded: Vec<Excluded>,
}

impl Table {
    /// The column called `name`.
    pub fn column(&self, name: &str) -> Option<&Column> {
        self.columns.iter().find(|column| column.name == name)
    }

    /// The column name most like `name`; `None` where nothing comes near.
    pub fn nearest_column(&self, name: &str) -> Option<&str> {
        nearest(name, self.columns.iter().map(|column| column.name.as_str()))
    }

    /// The exclusion that took out `row`; `None` where the row stands.
    pub fn exclusion_of(&self, row: usize) -> Option<&Exclusion> {
        let at = self.excluded.binary_search_by_key(&row, |excluded| excluded.row).ok()?;
        self.exclusions.get(self.excluded[at].exclusion)
    }
}
