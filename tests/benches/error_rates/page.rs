//! Lays the rates out as the page `ERROR_RATES.md`.

use crate::judge::ALPHA;
use crate::offered::Row;
use crate::simulate::{Counted, Rate, Tally};
use levelwise::numerics::OutOfDomain;

/// A table: one row a procedure, one column a cell.
pub struct Table<'a> {
    pub title: String,
    pub rows: &'a [Row],
    /// Heads of the columns.
    pub columns: &'a [String],
    /// One list a column.
    pub counted: &'a [Counted],
}

impl Table<'_> {
    /// The table in Markdown; procedures that do not decide are named below it.
    ///
    /// # Errors
    /// [`OutOfDomain`] never.
    pub fn markdown(&self) -> Result<String, OutOfDomain> {
        let mut text = format!("### {}\n\n| procedure | trials |", self.title);
        self.columns.iter().for_each(|column| text.push_str(&format!(" {column} |")));
        text.push_str(&format!("\n| --- | ---: |{}\n", " ---: |".repeat(self.columns.len())));
        let mut skipped = Vec::new();
        for (index, row) in self.rows.iter().enumerate() {
            let tallies: Result<Vec<&Tally>, &String> =
                self.counted.iter().map(|column| column[index].as_ref()).collect();
            match tallies {
                Err(reason) => skipped.push(format!("{} ({reason})", row.name)),
                Ok(tallies) if row.controls_false_discoveries() => {
                    let family = format!("{}: family-wise", row.name);
                    text.push_str(&line(&family, &tallies, Tally::family_wise_error)?);
                    let share = format!("{}: false discovery rate", row.name);
                    text.push_str(&line(&share, &tallies, Tally::false_discovery_rate)?);
                }
                Ok(tallies) => text.push_str(&line(&row.name, &tallies, Tally::family_wise_error)?),
            }
        }
        if !skipped.is_empty() {
            text.push_str(&format!("\nWithout a decision: {}.\n", skipped.join("; ")));
        }
        text.push('\n');
        Ok(text)
    }

    /// Seconds spent in each procedure, over all columns and threads.
    pub fn times(&self) -> String {
        let seconds = |index: usize| -> f64 {
            let tallies = self.counted.iter().filter_map(|column| column[index].as_ref().ok());
            tallies.map(|tally| tally.time.as_secs_f64()).sum()
        };
        let each = self.rows.iter().enumerate();
        each.map(|(index, row)| format!("  {:8.1} s  {}\n", seconds(index), row.name)).collect()
    }
}

fn line(
    name: &str,
    tallies: &[&Tally],
    rate: impl Fn(&Tally) -> Result<Rate, OutOfDomain>,
) -> Result<String, OutOfDomain> {
    let trials = tallies.first().map_or(0, |tally| tally.trials);
    let mut text = format!("| {name} | {trials} |");
    for tally in tallies {
        text.push_str(&format!(" {} |", entry(rate(tally)?)));
    }
    text.push('\n');
    Ok(text)
}

/// Per cent with the Monte Carlo interval; marked where the interval lies wholly above the error rate asked for.
fn entry(rate: Rate) -> String {
    let percent = |fraction: f64| format!("{:.1}", (100.0 * fraction).max(0.0));
    let text = format!("{} ({}–{})", percent(rate.estimate), percent(rate.lower), percent(rate.upper));
    if rate.lower > ALPHA { format!("**{text} above**") } else { text }
}
