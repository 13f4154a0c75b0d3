//! How firm the decisions are: those of other procedures beside the one that decides.

use super::decided::Laid;
use super::rows::capital;
use super::words;
use crate::answer::{Cell, Row, Table};
use crate::notebook::kinds::wording::{listed, p_cell};

/// Rows that are named one by one in the headline.
const NAMED: usize = 4;

/// The procedures that decide otherwise on the row.
fn otherwise(laid: &Laid, i: usize) -> Vec<&'static str> {
    let (result, row) = (laid.comparisons, &laid.comparisons.rows[i]);
    let others = laid.also.iter().filter(|(_, p)| (p[i] <= result.alpha) != row.rejected);
    others.map(|(adjust, _)| words::procedure(*adjust)).collect()
}

/// The decisions of the procedures beside the one that decides.
pub fn table(laid: &Laid) -> Option<Table> {
    if laid.also.is_empty() {
        return None;
    }
    let result = laid.comparisons;
    let chosen = capital(words::procedure(result.adjust));
    let mut table = Table::new(format!(
        "The same {} under other procedures: adjusted p-values. {} decides, as chosen; the others are for comparison.",
        words::comparisons(result.family_size),
        words::procedure_as_subject(result.adjust),
    ))
    .text_column("Comparison")
    .number_column(format!("{chosen} (decides)"));
    for (adjust, _) in laid.also {
        table = table.number_column(capital(words::procedure(*adjust)));
    }
    table = table.text_column("Decided otherwise by");
    for (i, row) in result.rows.iter().enumerate() {
        let others = laid.also.iter().map(|(_, p)| p_cell(p[i], result.alpha));
        let first = [Cell::text(laid.name(row)), p_cell(row.p_adjusted, result.alpha)];
        let changed = otherwise(laid, i);
        let last = match changed.is_empty() {
            true => Cell::text("none"),
            false => Cell::text(listed(changed.iter().map(|name| (*name).to_string()))),
        };
        let cells = Row::new(first.into_iter().chain(others).chain([last]));
        table.push(if changed.is_empty() { cells } else { cells.strong() });
    }
    Some(table)
}

/// The headline's last clause: how many decisions change under the procedures beside it, and which.
pub fn firmness(laid: &Laid) -> String {
    if laid.also.is_empty() {
        return String::new();
    }
    let rows = &laid.comparisons.rows;
    let changed: Vec<usize> = (0..rows.len()).filter(|i| !otherwise(laid, *i).is_empty()).collect();
    let beside = listed(laid.also.iter().map(|(adjust, _)| words::procedure(*adjust).to_string()));
    let decides = if laid.also.len() == 1 { "decides" } else { "decide" };
    if changed.is_empty() {
        return format!("; {beside} {decides} the same");
    }
    let mut names: Vec<String> = changed.iter().take(NAMED).map(|i| laid.name(&rows[*i])).collect();
    if changed.len() > NAMED {
        names.push(format!("{} more", changed.len() - NAMED));
    }
    let many = if changed.len() == 1 {
        "1 decision changes".to_string()
    } else {
        format!("{} decisions change", changed.len())
    };
    format!("; {many} under {}: {}", listed_or(laid), listed(names.into_iter()))
}

/// "Holm or Scheffé": the procedures beside the chosen one under which something changes.
fn listed_or(laid: &Laid) -> String {
    let result = laid.comparisons;
    let changes =
        |p: &Vec<f64>| result.rows.iter().zip(p).any(|(row, p)| (*p <= result.alpha) != row.rejected);
    let names =
        laid.also.iter().filter(|(_, p)| changes(p)).map(|(adjust, _)| words::procedure(*adjust).to_string());
    listed(names).replace(" and ", " or ")
}
