//! Levels that are not shown to differ share a letter: all pairs at a glance.

use super::decided::Laid;
use crate::answer::{Cell, Row, Table};

/// Level, size, mean and letters; for all pairs only.
pub fn table(laid: &Laid) -> Option<Table> {
    let letters = laid.comparisons.letters.as_ref()?;
    let mut table = Table::new("Levels that share a letter are not shown to differ")
        .text_column("Level")
        .number_column("n")
        .number_column("Mean")
        .text_column("Letters");
    for (i, group) in laid.summary.groups.iter().enumerate() {
        table.push(Row::new([
            Cell::text(laid.study.levels.labels[i].clone()),
            Cell::count(group.n),
            Cell::estimate(laid.summary.origin + group.mean, laid.precision),
            Cell::text(letters.of_level[i].clone()),
        ]));
    }
    Some(table.note(CAPTION))
}

/// What sharing a letter does not say.
pub const CAPTION: &str = "Two levels share a letter exactly when their comparison is not shown to differ. Sharing a letter is not evidence of equality.";
