//! How the contrasts split what lies between the groups, and which of them overlap.

use super::decided::Laid;
use super::words;
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

/// The coefficients of the contrasts; for means with one error term also their sums of squares and shares.
pub fn table(laid: &Laid) -> Option<Table> {
    let asked = laid.asked;
    if !worth_splitting(asked.family, asked.contrasts.len()) {
        return None;
    }
    let split = laid.partition.as_ref();
    let title = match split {
        Some(_) => "Coefficients, and how the contrasts split the sum of squares between the groups",
        None => "Coefficients of the contrasts",
    };
    let mut table = Table::new(title).text_column("Contrast");
    for level in &laid.study.levels.labels {
        table = table.number_column(level.clone());
    }
    if split.is_some() {
        table = table.number_column("Sum of squares").number_column("Share of SS between");
    }
    for (i, contrast) in asked.contrasts.iter().enumerate() {
        let mut cells = vec![Cell::text(words::row_name(&contrast.name, asked.family))];
        cells.extend(contrast.coefficients.iter().map(|c| weight(*c)));
        cells.extend(split.into_iter().flat_map(|split| shares(split, i)));
        table.push(Row::new(cells));
    }
    Some(match split {
        Some(partition) => table.note(adding_up(laid, partition)),
        None => table.note("Each row sums to 0."),
    })
}

fn shares(partition: &Partition, i: usize) -> [Cell; 2] {
    let (part, precision) = (&partition.parts[i], Precision::from_spread(partition.ss_between / 100.0));
    let share = |share: f64| Cell::number(number::percent((share * 1000.0).round() / 1000.0), share);
    [Cell::estimate(part.ss, precision), part.share.map_or_else(Cell::absent, share)]
}

/// A coefficient: whole, or with three decimals.
pub fn weight(c: f64) -> Cell {
    let whole = (c - c.round()).abs() < 1e-12;
    Cell::estimate(c, Precision::decimals(if whole { 0 } else { 3 }))
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
    let name = |i: usize| words::row_name(&partition.parts[i].name, laid.asked.family);
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
