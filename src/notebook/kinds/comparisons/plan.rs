//! What can be said before there are data: the family, its size, its contrasts and coefficients, the method.

use super::asked::Asked;
use super::rows::{capital, level_cell};
use super::shares::weight;
use super::{cautions, figures, json, words};
use crate::answer::{Answer, Cell, Row, Table};
use crate::methods::contrasts::in_words;
use crate::methods::multiplicity::{Adjust, p_values};
use crate::notebook::outcome::Outcome;
use crate::study::Study;

/// The plan; the cell waits for numbers.
pub fn outcome(asked: &Asked, study: &Study) -> Outcome {
    let labels = &study.levels.labels;
    if asked.contrasts.is_empty() {
        let answer = Answer::new(
            "Waiting for the study's levels: they come with its data, or can be named in the study",
        );
        return Outcome::plan(answer, json::planned(asked, labels));
    }
    let size = words::comparisons(asked.contrasts.len());
    let method = words::procedure(asked.adjust);
    let headline = format!("Planned: {size} ({}), {method}; waiting for data", words::family(asked, study));
    let mut answer =
        Answer::new(headline).with_table(table(asked, study)).with_writeup(writeup(asked, study));
    if let Some(order) = &asked.order {
        let names = asked.contrasts.iter().map(|contrast| words::row_name(&contrast.name, asked.family));
        answer = answer.with_figure(figures::planned_graph(&names.collect::<Vec<_>>(), order));
    }
    answer.cautions = cautions::of_ask(asked, study.levels.count());
    Outcome::plan(answer, json::planned(asked, labels))
}

fn table(asked: &Asked, study: &Study) -> Table {
    let labels = &study.levels.labels;
    let mut table = Table::new(format!("Planned comparisons: {}", method(asked, study)))
        .text_column("Comparison")
        .text_column("In words");
    for level in labels {
        table = table.number_column(level.clone());
    }
    for contrast in &asked.contrasts {
        let names = [
            Cell::text(words::row_name(&contrast.name, asked.family)),
            Cell::text(in_words(&contrast.coefficients, labels)),
        ];
        let weights = contrast.coefficients.iter().map(|c| weight(*c));
        table.push(Row::new(names.into_iter().chain(weights)));
    }
    let rank = json::independent(asked, labels.len());
    table = table.note(format!(
        "Coefficients by level; each row sums to 0. {} of the {} {} independent.",
        rank,
        words::comparisons(asked.contrasts.len()),
        if rank == 1 { "is" } else { "are" }
    ));
    match levels_note(asked) {
        Some(note) => table.note(note),
        None => table,
    }
}

/// The levels at which raw p-values will be judged, where they are known beforehand.
fn levels_note(asked: &Asked) -> Option<String> {
    let Adjust::PValues(method) = asked.adjust else { return None };
    let m = asked.contrasts.len();
    // By rank the levels are known before the p-values are.
    let levels = p_values::levels_by_rank(m, method, asked.alpha)?;
    let shown: Vec<String> = levels.iter().take(6).map(|level| level_cell(*level).text).collect();
    let more = if levels.len() > 6 { ", …" } else { "" };
    Some(if levels.windows(2).all(|pair| pair[0] == pair[1]) {
        format!("Each raw p-value will be judged at {}.", shown.first()?)
    } else {
        format!("The raw p-values, from the smallest, will be judged at {}{more}.", shown.join(", "))
    })
}

fn method(asked: &Asked, study: &Study) -> String {
    format!(
        "{}; {}, {}; {} over the family of {}, {}",
        words::family(asked, study),
        words::tests(asked.basis, study.variances, None, study.levels.count()),
        words::sides(asked.sides, asked.claim),
        // Group sizes are not known yet; the procedure's plain name fits both cases.
        capital(words::procedure(asked.adjust)),
        words::comparisons(asked.contrasts.len()),
        words::error_rate(asked.adjust, asked.alpha),
    )
}

fn writeup(asked: &Asked, study: &Study) -> String {
    format!("Planned comparisons of {}: {}.", study.outcome, method(asked, study))
}
