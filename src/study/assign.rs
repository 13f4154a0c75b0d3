//! The rows of a table become a sample by level, and every row is accounted for.

use super::{LevelAccount, Sample};
use crate::numerics::decimal::{Decimal, DecimalMark};
use crate::table::{Column, ColumnKind, Numbers, Table};
use std::collections::BTreeMap;

/// More levels than this are no grouping: a column of identifiers was chosen.
pub const MOST_LEVELS: usize = 200;

/// How many levels outside the list are named.
const MOST_NAMED: usize = 10;

/// Rows that belong to no level of the study.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Apart {
    pub received: usize,
    /// Of these, rows that an exclusion took out.
    pub excluded: usize,
}

/// The rows of a table by level.
#[derive(Debug, Clone, PartialEq)]
pub struct Assigned {
    /// Labels in the order asked for, or of first appearance among the rows that are not excluded.
    pub labels: Vec<String>,
    /// One entry a level; received = n + missing + excluded.
    pub account: Vec<LevelAccount>,
    pub sample: Sample,
    /// Rows whose level is missing.
    pub without_level: Apart,
    /// Rows whose level is not one of `labels`.
    pub not_listed: Apart,
    /// The first of those levels.
    pub not_listed_levels: Vec<String>,
}

/// The grouping column has more than [`MOST_LEVELS`] different values.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct TooManyLevels;

/// Sorts the rows of `table` by the level that they have in `groups`, with their values of `outcome`.
///
/// With `listed`, those are the levels, in that order; rows of other levels are counted apart. Without it the levels
/// are those of the rows that are not excluded, in order of first appearance. In a column of numbers, levels are
/// compared as numbers: 15 and 15.0 are one level. An excluded row counts as excluded, whether its value is
/// missing or not.
///
/// # Errors
/// [`TooManyLevels`], only without `listed`.
pub fn assign(
    table: &Table,
    outcome: &Numbers,
    groups: &Column,
    listed: Option<&[String]>,
) -> Result<Assigned, TooManyLevels> {
    let mut labels = Labels::new(groups, table.decimal, listed);
    let excluded = excluded_rows(table);
    if listed.is_none() {
        for row in (0..table.rows).filter(|&row| !excluded[row] && !groups.missing(row)) {
            labels.take_in(groups.text(row))?;
        }
    }
    let mut counts = vec![Counts::default(); labels.labels.len()];
    let mut values = vec![Vec::new(); labels.labels.len()];
    let (mut without_level, mut not_listed) = (Apart::default(), Apart::default());
    let mut not_listed_levels: Vec<String> = Vec::new();
    for (row, &excluded) in excluded.iter().enumerate() {
        let text = groups.text(row);
        let apart = if groups.missing(row) {
            &mut without_level
        } else if let Some(level) = labels.find(text) {
            let counts = &mut counts[level];
            counts.received += 1;
            match outcome.offset(row) {
                _ if excluded => counts.excluded += 1,
                None => counts.missing += 1,
                Some(offset) => values[level].push(offset),
            }
            continue;
        } else {
            if not_listed_levels.len() < MOST_NAMED && !not_listed_levels.iter().any(|known| known == text) {
                not_listed_levels.push(text.to_owned());
            }
            &mut not_listed
        };
        apart.received += 1;
        apart.excluded += usize::from(excluded);
    }
    let labels = labels.labels;
    let account = labels.iter().zip(&counts).zip(&values).map(|((level, counts), values)| LevelAccount {
        level: level.clone(),
        score: None,
        received: counts.received,
        n: values.len(),
        missing: counts.missing,
        excluded: counts.excluded,
    });
    let account = account.collect();
    let sample = Sample { origin: outcome.origin.to_f64(), groups: values };
    Ok(Assigned { labels, account, sample, without_level, not_listed, not_listed_levels })
}

#[derive(Clone, Default)]
struct Counts {
    received: usize,
    missing: usize,
    excluded: usize,
}

fn excluded_rows(table: &Table) -> Vec<bool> {
    let mut excluded = vec![false; table.rows];
    for gone in &table.excluded {
        excluded[gone.row] = true;
    }
    excluded
}

/// Finds levels by text and, in a column of numbers, by value.
struct Labels<'a> {
    labels: Vec<String>,
    /// Value of each label in a column of numbers.
    values: Option<Vec<Option<f64>>>,
    mark: DecimalMark,
    known: BTreeMap<&'a str, Option<usize>>,
}

impl<'a> Labels<'a> {
    fn new(groups: &Column, mark: DecimalMark, listed: Option<&[String]>) -> Self {
        let labels = listed.unwrap_or_default().to_vec();
        // A listed level is written in the cell's text, where the point is the decimal mark.
        let value = |label: &String| number(label, mark).or_else(|| number(label, DecimalMark::Point));
        let values = (groups.kind == ColumnKind::Number).then(|| labels.iter().map(value).collect());
        Self { labels, values, mark, known: BTreeMap::new() }
    }

    fn find(&mut self, text: &'a str) -> Option<usize> {
        if let Some(known) = self.known.get(text) {
            return *known;
        }
        let by_text = self.labels.iter().position(|label| label == text);
        let found = by_text.or_else(|| {
            let value = number(text, self.mark)?;
            self.values.as_ref()?.iter().position(|known| *known == Some(value))
        });
        self.known.insert(text, found);
        found
    }

    /// Adds the level if it is new.
    fn take_in(&mut self, text: &'a str) -> Result<(), TooManyLevels> {
        if self.find(text).is_some() {
            return Ok(());
        }
        if self.labels.len() == MOST_LEVELS {
            return Err(TooManyLevels);
        }
        self.known.insert(text, Some(self.labels.len()));
        self.labels.push(text.to_owned());
        if let Some(values) = &mut self.values {
            values.push(number(text, self.mark));
        }
        Ok(())
    }
}

fn number(text: &str, mark: DecimalMark) -> Option<f64> {
    Decimal::parse(text, mark).ok().map(Decimal::to_f64)
}
