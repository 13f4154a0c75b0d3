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
    let codes = Codes::of(groups, table.rows);
    if listed.is_none() {
        let mut seen = vec![false; codes.texts.len()];
        for (code, _) in codes.rows.iter().zip(&excluded).filter(|(_, excluded)| !**excluded) {
            if let Some(code) = *code
                && !std::mem::replace(&mut seen[code as usize], true)
            {
                labels.take_in(codes.texts[code as usize])?;
            }
        }
    }
    let levels: Vec<Option<usize>> = codes.texts.iter().map(|text| labels.find(text)).collect();
    let mut counts = vec![Counts::default(); labels.labels.len()];
    let mut values = vec![Vec::new(); labels.labels.len()];
    let (mut without_level, mut not_listed) = (Apart::default(), Apart::default());
    for (row, (code, &excluded)) in codes.rows.iter().zip(&excluded).enumerate() {
        let apart = match code.map(|code| levels[code as usize]) {
            Some(Some(level)) => {
                let counts = &mut counts[level];
                counts.received += 1;
                match outcome.offset(row) {
                    _ if excluded => counts.excluded += 1,
                    None => counts.missing += 1,
                    Some(offset) => values[level].push(offset),
                }
                continue;
            }
            Some(None) => &mut not_listed,
            None => &mut without_level,
        };
        apart.received += 1;
        apart.excluded += usize::from(excluded);
    }
    let strangers = codes.texts.iter().zip(&levels).filter(|(_, level)| level.is_none());
    let not_listed_levels = strangers.map(|(text, _)| (*text).to_owned()).take(MOST_NAMED).collect();
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

/// The different texts of a column, and which of them each row has; `None` where it is missing.
struct Codes<'a> {
    texts: Vec<&'a str>,
    rows: Vec<Option<u32>>,
}

impl<'a> Codes<'a> {
    fn of(column: &'a Column, rows: usize) -> Self {
        let mut codes = Self { texts: Vec::new(), rows: Vec::with_capacity(rows) };
        let mut known: BTreeMap<&str, Option<u32>> = BTreeMap::new();
        // Rows of one group often follow each other.
        let mut last: Option<(&str, Option<u32>)> = None;
        for row in 0..rows {
            let text = column.text(row);
            let code = match last {
                Some((before, code)) if before == text => code,
                _ => *known.entry(text).or_insert_with(|| {
                    (!column.missing(row)).then(|| {
                        codes.texts.push(text);
                        codes.texts.len() as u32 - 1
                    })
                }),
            };
            last = Some((text, code));
            codes.rows.push(code);
        }
        codes
    }
}

/// Finds levels by text and, in a column of numbers, by value.
struct Labels {
    labels: Vec<String>,
    /// Value of each label in a column of numbers.
    values: Option<Vec<Option<f64>>>,
    mark: DecimalMark,
}

impl Labels {
    fn new(groups: &Column, mark: DecimalMark, listed: Option<&[String]>) -> Self {
        let labels = listed.unwrap_or_default().to_vec();
        // A listed level is written in the cell's text, where the point is the decimal mark.
        let value = |label: &String| number(label, mark).or_else(|| number(label, DecimalMark::Point));
        let values = (groups.kind == ColumnKind::Number).then(|| labels.iter().map(value).collect());
        Self { labels, values, mark }
    }

    fn find(&self, text: &str) -> Option<usize> {
        let by_text = self.labels.iter().position(|label| label == text);
        by_text.or_else(|| {
            let values = self.values.as_ref()?;
            let value = number(text, self.mark)?;
            values.iter().position(|known| *known == Some(value))
        })
    }

    /// Adds the level if it is new.
    fn take_in(&mut self, text: &str) -> Result<(), TooManyLevels> {
        if self.find(text).is_some() {
            return Ok(());
        }
        if self.labels.len() == MOST_LEVELS {
            return Err(TooManyLevels);
        }
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
