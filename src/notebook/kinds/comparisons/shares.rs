//! How the contrasts split what lies between the groups, and which of them overlap.

use super::decided::Laid;
use crate::answer::{Cell, Precision, Row, Table, number};
use crate::methods::contrasts::{Partition, Set};
use crate::methods::multiplicity::Family;
use crate::notebook::kinds::wording::listed;

/// Overlaps that are named one by one.
const NAMED: usize = 6;

/// Most contrasts whose overlaps are looked at.
const MOST: usize = 100;

/// Whether it says something how the contrasts split the differences: the many pairs overlap by their nature.
pub fn worth_splitting(family: Family, contrasts: usize) -> bool {
    contrasts <= MOST && !matches!(family, Family::Set(Set::AllPairs | Set::AgainstControl(_)))
}

/// Coefficients, sums of squares and shares; for contrasts of means with one error term, and not for the many pairs.
pub fn table(laid: &Laid) -> Option<Table> {
    let partition = laid.partition.as_ref()?;
    let mut table =
        Table::new("Coefficients, and how the contrasts split the sum of squares between the groups")
            .text_column("Contrast");
    for level in &laid.study.levels.labels {
        table = table.number_column(level.clone());
    }
    table = table.number_column("Sum of squares").number_column("Share of SS between");
    let precision = Precision::from_spread(partition.ss_between / 100.0);
    for (part, contrast) in partition.parts.iter().zip(&laid.asked.contrasts) {
        let mut cells = vec![Cell::text(super::words::row_name(&part.name, laid.asked.family))];
        cells.extend(contrast.coefficients.iter().map(|c| weight(*c)));
        cells.push(Cell::estimate(part.ss, precision));
        cells.push(
            part.share
                .map_or_else(Cell::absent, |share| Cell::number(number::percent(share_shown(share)), share)),
        );
        table.push(Row::new(cells));
    }
    Some(table.note(adding_up(laid, partition)))
}

/// A coefficient: whole, or with three decimals.
pub fn weight(c: f64) -> Cell {
    let whole = (c - c.round()).abs() < 1e-12;
    Cell::estimate(c, Precision::decimals(if whole { 0 } else { 3 }))
}

/// A share to a tenth of a per cent.
fn share_shown(share: f64) -> f64 {
    (share * 1000.0).round() / 1000.0
}

fn adding_up(laid: &Laid, partition: &Partition) -> String {
    if partition.complete() {
        return format!(
            "Every two of the contrasts are orthogonal for these group sizes, and they are all {} degrees of freedom: their sums of squares add up to that between the groups.",
            partition.df_between
        );
    }
    let overlaps: Vec<_> = partition.overlaps().collect();
    if overlaps.is_empty() {
        return format!(
            "Every two of the contrasts are orthogonal for these group sizes; they are {} of the {} degrees of freedom between the groups.",
            partition.rank, partition.df_between
        );
    }
    let name = |i: usize| super::words::row_name(&partition.parts[i].name, laid.asked.family);
    let mut named: Vec<String> = overlaps
        .iter()
        .take(NAMED)
        .map(|overlap| {
            format!(
                "{} with {} (r = {})",
                name(overlap.first),
                name(overlap.second),
                number::fixed(overlap.correlation, 2)
            )
        })
        .collect();
    if overlaps.len() > NAMED {
        named.push(format!("{} more pairs", overlaps.len() - NAMED));
    }
    format!(
        "Not orthogonal for these group sizes: {}. The sums of squares overlap and do not add up.",
        listed(named.into_iter())
    )
}
