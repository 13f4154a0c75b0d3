//! Rows taken out with a reason, and columns computed from others.

use super::column::shortened;
use super::condition::{self, Condition};
use super::tokens::Misfit;
use super::{Column, Table, expression};

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

/// The texts of a derived column, at most 24 bytes each, must stay within 4 GB.
const MOST_ROWS: usize = 100_000_000;

impl Table {
    /// Adds the columns of `derive` and takes out the rows of `exclude`.
    ///
    /// A derived column may read those before it. It is missing where a value that it reads is missing, and in rows
    /// that are excluded by a condition on the table's own columns if it is not defined there. A row that meets
    /// several conditions goes out under the first. Conditions may read derived columns. To be called once, on a table
    /// as it was read; after an error the table is as far as it got.
    ///
    /// # Errors
    /// One [`SelectError`] for every entry that cannot be understood or computed.
    pub fn select(&mut self, derive: &[Derive], exclude: &[Exclude]) -> Result<(), Vec<SelectError>> {
        let own = self.columns.len();
        let mut names: Vec<String> = self.columns.iter().map(|column| column.name.clone()).collect();
        names.extend(derive.iter().map(|entry| entry.name.trim().to_owned()));
        let names: Vec<&str> = names.iter().map(String::as_str).collect();
        let mut errors = Vec::new();
        let conditions: Vec<Option<Condition>> = exclude
            .iter()
            .enumerate()
            .map(|(i, entry)| keep_error(Which::Exclude(i), parse_exclusion(entry, &names), &mut errors))
            .collect();
        let mut under: Vec<Option<usize>> = vec![None; self.rows];
        let mut met = vec![0; exclude.len()];
        let early = |condition: &Condition| condition.highest_column() < own;
        self.mark(&conditions, early, &mut under, &mut met, &mut errors);
        for (i, entry) in derive.iter().enumerate() {
            let column = self.derived(entry, &names[..own + i], &under);
            match keep_error(Which::Derive(i), column, &mut errors) {
                Some(column) => self.columns.push(column),
                None => return Err(errors),
            }
        }
        self.mark(&conditions, |condition| !early(condition), &mut under, &mut met, &mut errors);
        if !errors.is_empty() {
            return Err(errors);
        }
        self.record(exclude, &under, &met);
        Ok(())
    }

    /// Notes for each row the first of the `chosen` conditions that it meets, and counts for each condition the rows
    /// that meet it.
    fn mark(
        &self,
        conditions: &[Option<Condition>],
        chosen: impl Fn(&Condition) -> bool,
        under: &mut [Option<usize>],
        met: &mut [usize],
        errors: &mut Vec<SelectError>,
    ) {
        for (i, condition) in conditions.iter().enumerate() {
            let Some(condition) = condition.as_ref().filter(|condition| chosen(condition)) else { continue };
            if keep_error(Which::Exclude(i), condition.check(&self.columns), errors).is_none() {
                continue;
            }
            for (row, under) in under.iter_mut().enumerate() {
                if condition.met(&self.columns, row) {
                    met[i] += 1;
                    *under = Some(under.map_or(i, |earlier| earlier.min(i)));
                }
            }
        }
    }

    fn record(&mut self, exclude: &[Exclude], under: &[Option<usize>], met: &[usize]) {
        let rows = under.iter().enumerate();
        self.excluded = rows.filter_map(|(row, i)| Some(Excluded { row, exclusion: (*i)? })).collect();
        for (i, entry) in exclude.iter().enumerate() {
            let rows = self.excluded.iter().filter(|excluded| excluded.exclusion == i).count();
            if met[i] == 0 {
                self.remarks
                    .push(format!("The exclusion {} takes out no row.", shortened(entry.condition.trim())));
            }
            let (condition, reason) = (entry.condition.trim().to_owned(), entry.reason.trim().to_owned());
            self.exclusions.push(Exclusion { condition, reason, rows });
        }
    }

    fn derived(&self, entry: &Derive, names: &[&str], under: &[Option<usize>]) -> Result<Column, Misfit> {
        let name = entry.name.trim();
        let everything = 0..entry.expression.len();
        if name.is_empty() {
            return Err(Misfit::new(everything, "A derived column has no name. Give it one."));
        }
        if names.contains(&name) {
            let message =
                format!("There is already a column \"{name}\". Give the derived column another name.");
            return Err(Misfit::new(everything, message));
        }
        if self.rows > MOST_ROWS {
            let message = "Columns can be derived for up to 100 million rows. Split the table.";
            return Err(Misfit::new(everything, message));
        }
        let expression = expression::parse(&entry.expression, names)?;
        expression.check(&self.columns)?;
        let mut values = Vec::with_capacity(self.rows);
        for (row, under) in under.iter().enumerate() {
            match expression.value(&self.columns, row) {
                Ok(value) => values.push(value.unwrap_or(f64::NAN)),
                Err(_) if under.is_some() => values.push(f64::NAN),
                Err(why) => {
                    let message = format!(
                        "Row {}, column \"{name}\": {why}. Exclude the row with a reason, or list the value under missing.",
                        row + 1
                    );
                    return Err(Misfit::new(everything, message));
                }
            }
        }
        Ok(Column::derived(name, values))
    }
}

fn parse_exclusion(entry: &Exclude, names: &[&str]) -> Result<Condition, Misfit> {
    let condition = condition::parse(&entry.condition, names)?;
    if entry.reason.trim().is_empty() {
        let message = "This exclusion has no reason. Say why these rows are taken out.";
        return Err(Misfit::new(0..entry.condition.len(), message));
    }
    Ok(condition)
}

fn keep_error<T>(which: Which, result: Result<T, Misfit>, errors: &mut Vec<SelectError>) -> Option<T> {
    result.map_err(|Misfit { span, message }| errors.push(SelectError { which, span, message })).ok()
}
