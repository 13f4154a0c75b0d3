//! What can be said before there are data: the order, the scores and the contrasts.

use super::super::asked::Asked;
use super::super::words;
use super::json::by_level;
use crate::answer::{Answer, Cell, Precision, Row, Table, number};
use crate::methods::trend::{Weights, coefficients, degree_name};
use crate::notebook::outcome::Outcome;
use crate::study::{Study, Variances};
use serde_json::json;

/// The plan; the cell waits for numbers.
pub fn outcome(asked: &Asked, study: &Study) -> Outcome {
    let labels = &study.levels.labels;
    let even = vec![1.0; labels.len()];
    // The ask has been checked against the levels; a study without levels has nothing to show yet.
    let Ok(contrasts) = coefficients(&asked.scores, &even, asked.degree) else {
        return Outcome::plan(Answer::new("Waiting for the study's levels"), json!({}));
    };
    let test = match study.variances {
        Variances::Equal => "t tests with one SD pooled over all levels",
        Variances::Unequal => "t tests with separate variances (Satterthwaite's df)",
    };
    let method = format!(
        "polynomial trends up to degree {} over the scores {}; {}; {test}, two-sided, each at {}",
        asked.degree,
        words::scores(&asked.scores),
        words::weights(asked.weights),
        number::percent(asked.alpha)
    );
    let mut table = Table::new(format!("Planned {method}")).text_column("Level").number_column("Score");
    for degree in 1..=asked.degree {
        table = table.number_column(format!("{} ({})", degree_name(degree), words::meaning(degree)));
    }
    for (i, level) in labels.iter().enumerate() {
        let score = Cell::number(number::plain(asked.scores[i]), asked.scores[i]);
        let weights = contrasts.iter().map(|c| coefficient(c, i));
        table.push(Row::new([Cell::text(level.clone()), score].into_iter().chain(weights)));
    }
    if asked.weights == Weights::N {
        table = table
            .note("Coefficients as they are for equal group sizes; the actual sizes enter with the data.");
    }
    let headline = format!(
        "Planned: {} trend{} over the scores {}; waiting for data",
        asked.degree,
        if asked.degree == 1 { "" } else { "s" },
        words::scores(&asked.scores)
    );
    let rows = contrasts.iter().enumerate().map(
        |(i, c)| json!({ "name": degree_name(i + 1), "degree": i + 1, "coefficients": by_level(labels, c) }),
    );
    let results = json!({
        "method": "polynomial", "weights": asked.weights, "degree": asked.degree, "levels": labels,
        "scores": by_level(labels, &asked.scores), "rows": rows.collect::<Vec<_>>(),
    });
    let writeup = format!("Planned: {method}.");
    Outcome::plan(Answer::new(headline).with_table(table).with_writeup(writeup), results)
}

/// One coefficient of a contrast, with four significant digits of the contrast's largest.
pub fn coefficient(contrast: &[f64], i: usize) -> Cell {
    let largest = contrast.iter().fold(0.0_f64, |most, c| most.max(c.abs()));
    let whole = contrast.iter().all(|c| (c - c.round()).abs() < 1e-9 * largest.max(1.0)) && largest < 1e6;
    let precision = if whole { Precision::decimals(0) } else { Precision::from_spread(largest / 100.0) };
    Cell::estimate(contrast[i], precision)
}
