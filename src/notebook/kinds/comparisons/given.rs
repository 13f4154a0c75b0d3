//! p-values from elsewhere, adjusted as one family.

use super::asked::Asked;
use super::rows::level_cell;
use super::{cautions, figures, json as shared, words};
use crate::answer::{Answer, Cell, Row, Table, number};
use crate::methods::multiplicity::{
    Adjust, CannotCompare, ErrorRate, GivenComparisons, GivenRow, PValueMethod, adjust_given,
};
use crate::notebook::kinds::wording::{listed, p_cell, p_statement};
use crate::notebook::outcome::Outcome;
use crate::notebook::results::number as json_number;
use serde_json::{Map, Value, json};

/// The settled answer, or what to mend.
pub fn outcome(asked: &Asked, given: &[(String, f64)]) -> Outcome {
    let Ok(result) = decide(asked, given, asked.adjust) else { return Outcome::mend(Vec::new()) };
    let also: Vec<(Adjust, Vec<f64>)> = asked
        .also
        .iter()
        .filter_map(|adjust| {
            let rows = decide(asked, given, *adjust).ok()?.rows;
            Some((*adjust, rows.iter().map(|row| row.p_adjusted).collect()))
        })
        .collect();
    let mut answer = Answer::new(headline(asked, &result)).with_table(table(asked, &result, &also));
    if let (Some(order), Some(path)) = (&asked.order, &result.path) {
        let names: Vec<String> = given.iter().map(|(name, _)| name.clone()).collect();
        answer = figures::graphs(&names, order, path).into_iter().fold(answer, Answer::with_figure);
    }
    answer = answer.with_writeup(writeup(asked, &result));
    answer.cautions = cautions::of_ask(asked, 0);
    Outcome::settled(answer, results(asked, &result, &also))
}

fn decide(asked: &Asked, given: &[(String, f64)], adjust: Adjust) -> Result<GivenComparisons, CannotCompare> {
    adjust_given(given, adjust, asked.order.as_ref(), asked.alpha)
}

fn headline(asked: &Asked, result: &GivenComparisons) -> String {
    let found = result.rows.iter().filter(|row| row.rejected);
    let names: Vec<String> = found.map(|row| row.name.clone()).collect();
    let size = result.family_size;
    let method =
        format!("{}, {}", words::procedure(asked.adjust), words::error_rate(asked.adjust, asked.alpha));
    match names.len() {
        0 if size == 1 => format!("The given p-value is not significant ({method})"),
        1 if size == 1 => format!("The given p-value is significant: {} ({method})", names[0]),
        0 => format!("None of the {size} given p-values is significant ({method})"),
        few @ 1..=3 => {
            format!(
                "{few} of {size} given p-values {} significant: {} ({method})",
                verb(few),
                listed(names.into_iter())
            )
        }
        many => format!("{many} of {size} given p-values are significant ({method})"),
    }
}

fn verb(count: usize) -> &'static str {
    if count == 1 { "is" } else { "are" }
}

fn table(asked: &Asked, result: &GivenComparisons, also: &[(Adjust, Vec<f64>)]) -> Table {
    let mut table = Table::new(format!(
        "Given p-values: {} over the family of {}, {}",
        words::procedure_in_full(asked.adjust, &[]),
        words::comparisons(result.family_size),
        words::error_rate(asked.adjust, asked.alpha)
    ))
    .text_column("Comparison")
    .number_column("p, given")
    .number_column("alpha for given p")
    .number_column("p, adjusted")
    .text_column("Decision");
    for (adjust, _) in also {
        table = table.number_column(format!("p, {}", words::procedure(*adjust)));
    }
    for (i, row) in result.rows.iter().enumerate() {
        let raw = row.alpha.map_or_else(|| Cell::p_value(row.p), |alpha| p_cell(row.p, alpha));
        let cells = [
            Cell::text(row.name.clone()),
            raw,
            row.alpha.map_or_else(Cell::absent, level_cell),
            p_cell(row.p_adjusted, asked.alpha),
            Cell::text(decision(row)),
        ];
        let others = also.iter().map(|(_, p)| p_cell(p[i], asked.alpha));
        let cells = Row::new(cells.into_iter().chain(others));
        table.push(if row.rejected { cells.strong() } else { cells });
    }
    if asked.adjust.error_rate() == ErrorRate::PerComparison
        || result.rows.iter().all(|row| row.alpha.is_none())
    {
        return table;
    }
    table.note(format!(
        "Two readings of one decision: the adjusted p against {}, or the given p against the alpha beside it. Never both corrections at once.",
        number::plain(asked.alpha)
    ))
}

fn decision(row: &GivenRow) -> &'static str {
    if row.rejected { "significant" } else { "not shown" }
}

fn writeup(asked: &Asked, result: &GivenComparisons) -> String {
    let p_name = if asked.adjust == Adjust::PValues(PValueMethod::None) { "" } else { "adjusted " };
    let each = result
        .rows
        .iter()
        .map(|row| format!("{}: {p_name}{}", row.name, p_statement(row.p_adjusted, asked.alpha)));
    format!(
        "{} as one family ({}, {}). {}.",
        match result.family_size {
            1 => "One p-value was judged".to_string(),
            size => format!("{} p-values were judged", number::count(size)),
        },
        words::procedure_in_full(asked.adjust, &[]),
        words::error_rate(asked.adjust, asked.alpha),
        each.collect::<Vec<_>>().join("; ")
    )
}

fn results(asked: &Asked, result: &GivenComparisons, also: &[(Adjust, Vec<f64>)]) -> Value {
    let row = |i: usize| {
        let row = &result.rows[i];
        let mut object = Map::new();
        object.insert("name".into(), json!(row.name));
        object.insert("p".into(), json_number(row.p));
        object.insert("p_adjusted".into(), json_number(row.p_adjusted));
        if let Some(alpha) = row.alpha {
            object.insert("alpha".into(), json_number(alpha));
        }
        object.insert("rejected".into(), json!(row.rejected));
        if !also.is_empty() {
            let others = also.iter().map(|(adjust, p)| (adjust.name().to_string(), json_number(p[i])));
            object.insert("also".into(), Value::Object(others.collect()));
        }
        Value::Object(object)
    };
    let mut object = Map::new();
    object.insert("family".into(), json!(asked.family_name));
    object.insert("adjust".into(), json!(asked.adjust.name()));
    object.insert("family_size".into(), json!(result.family_size));
    object.insert("alpha".into(), json_number(asked.alpha));
    if let Some(level) = result.alpha_per_comparison {
        object.insert("alpha_per_comparison".into(), json_number(level));
    }
    if let (Some(order), Some(path)) = (&asked.order, &result.path) {
        let names: Vec<&str> = result.rows.iter().map(|row| row.name.as_str()).collect();
        object.insert("path".into(), shared::path(&names, order, path));
    }
    object.insert("rows".into(), (0..result.rows.len()).map(row).collect());
    Value::Object(object)
}
