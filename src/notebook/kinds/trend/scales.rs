//! Which scale of dose? The scores as they are, their ranks and their logarithms, tested together as one family.

use super::asked::Asked;
use super::words;
use crate::answer::{Answer, Cell, Precision, Row, Table, number};
use crate::methods::multiplicity::Sides;
use crate::methods::trend::{SCALES, Scale, ScaleRequest, ScaleRow, ScaleTests, scale_tests, scores_in};
use crate::notebook::ask::Ask;
use crate::notebook::kinds::wording::{
    left_out, outcome_with_unit, p_cell, p_statement, refused, remedy, sentence, sizes,
};
use crate::notebook::outcome::Outcome;
use crate::notebook::results::number as json_number;
use crate::study::{Estimates, Study, Variances};
use serde_json::{Map, Value, json};

/// The tests, the plan for them, or why there are none.
pub fn outcome(ask: &Ask, asked: &Asked, study: &Study) -> Outcome {
    let Some(summary) = study.summary() else { return plan(asked, study) };
    let estimates = match Estimates::one_way(&study.levels.labels, &summary, study.variances) {
        Ok(estimates) => estimates,
        Err(error) => return refused(ask, format!("The trend cannot be given: {error}.{}", remedy(&error))),
    };
    let request = ScaleRequest {
        estimates: &estimates,
        scores: &asked.scores,
        scales: &SCALES,
        sides: asked.sides,
        alpha: asked.alpha,
    };
    match scale_tests(&request) {
        Ok(tests) => settled(&Laid { asked, study, estimates: &estimates, tests }),
        Err(error) => refused(ask, sentence(&error.to_string())),
    }
}

/// Everything from which the answer is laid out.
struct Laid<'a> {
    asked: &'a Asked,
    study: &'a Study,
    estimates: &'a Estimates,
    tests: ScaleTests,
}

fn name(scale: Scale) -> &'static str {
    match scale {
        Scale::Arithmetic => "scores as they are",
        Scale::Ordinal => "ranks of the scores",
        Scale::Log => "logarithms of the scores",
    }
}

fn shown(laid: &Laid, row: &ScaleRow) -> bool {
    row.p_adjusted <= laid.asked.alpha
}

fn direction(row: &ScaleRow) -> &'static str {
    if row.slope > 0.0 { "rising" } else { "falling" }
}

fn settled(laid: &Laid) -> Outcome {
    let mut answer = Answer::new(headline(laid)).with_table(table(laid)).with_writeup(writeup(laid));
    answer.cautions = words::unconfirmed_order(&laid.study.levels).into_iter().collect();
    answer.cautions.push("The largest t says in which scale the means lie nearest to a straight line here; that it is the true scale is not shown by it.".to_string());
    Outcome::settled(answer, results(laid))
}

fn headline(laid: &Laid) -> String {
    let strongest = &laid.tests.rows[laid.tests.strongest];
    let (outcome, factor) = (&laid.study.outcome, &laid.study.factor);
    let p = p_statement(strongest.p_adjusted, laid.asked.alpha);
    match shown(laid, strongest) {
        true => format!(
            "{outcome} follows the scores of {factor}, {}: most clearly in the {} (adjusted {p})",
            direction(strongest),
            name(strongest.scale)
        ),
        false => format!(
            "A trend of {outcome} over the scores of {factor} is not shown in any of the scales (smallest adjusted {p})"
        ),
    }
}

fn method(laid: &Laid) -> String {
    let error_term = match laid.study.variances {
        Variances::Equal => "one SD pooled over all levels",
        Variances::Unequal => "own variances, Satterthwaite's df",
    };
    let sides = match laid.asked.sides {
        Sides::Both => "two-sided",
        Sides::Greater => "one-sided (rising)",
        Sides::Less => "one-sided (falling)",
    };
    format!(
        "linear trends in {} scales of the scores {}, tested together (Tukey, Ciminera and Heyse) by their joint t distribution; {error_term}; {sides}; family-wise error {}",
        laid.tests.rows.len(),
        words::scores(&laid.asked.scores),
        number::percent(laid.asked.alpha)
    )
}

fn table(laid: &Laid) -> Table {
    let mut table = Table::new(format!("{}: {}", outcome_with_unit(laid.study), method(laid)))
        .text_column("Scale")
        .text_column("Scores in it")
        .number_column("Slope")
        .number_column("t")
        .number_column("df")
        .number_column("p, adjusted")
        .text_column("Decision")
        .number_column("p, raw");
    for row in &laid.tests.rows {
        let used: Vec<String> =
            row.scores.iter().map(|score| number::plain((score * 1e4).round() / 1e4)).collect();
        let decision = if shown(laid, row) { direction(row) } else { "not shown" };
        let cells = Row::new([
            Cell::text(words::capital(name(row.scale))),
            Cell::text(used.join(", ")),
            Cell::estimate(row.slope, Precision::from_spread(row.se)),
            Cell::statistic(row.t),
            Cell::df(row.df),
            p_cell(row.p_adjusted, laid.asked.alpha),
            Cell::text(decision),
            Cell::p_value(row.p),
        ]);
        table.push(if shown(laid, row) { cells.strong() } else { cells });
    }
    notes(laid).into_iter().fold(table, Table::note)
}

fn notes(laid: &Laid) -> Vec<String> {
    let mut notes =
        vec![format!("Analysed: {}.", sizes(&laid.study.levels.labels, laid.estimates.n.iter().copied()))];
    notes.extend(left_out(laid.study));
    if let Some(zero) = laid.tests.zero_on_log_scale {
        notes.push(format!(
            "A score of 0 has no logarithm: it stands at {} on that scale, as many steps below the lowest positive score as on the plain one (Tukey, Ciminera and Heyse 1985).",
            number::plain((zero * 1e4).round() / 1e4)
        ));
    }
    for row in &laid.tests.rows {
        if let Some(other) = row.same_as {
            notes.push(format!(
                "The {} are the same test as the {} here and count once.",
                name(row.scale),
                name(other)
            ));
        }
    }
    notes
}

fn writeup(laid: &Laid) -> String {
    let each = laid.tests.rows.iter().map(|row| {
        format!(
            "{}: t({}) = {}, adjusted {}",
            name(row.scale),
            number::df(row.df),
            number::statistic(row.t),
            p_statement(row.p_adjusted, laid.asked.alpha)
        )
    });
    format!(
        "The trend of {} was examined ({}). {}.",
        outcome_with_unit(laid.study),
        method(laid),
        each.collect::<Vec<_>>().join("; ")
    )
}

fn results(laid: &Laid) -> Value {
    let labels = &laid.study.levels.labels;
    let by_level = |values: &[f64]| -> Value {
        Value::Object(labels.iter().cloned().zip(values.iter().map(|value| json_number(*value))).collect())
    };
    let rows = laid.tests.rows.iter().map(|row| {
        let mut object = Map::new();
        object.insert("name".into(), json!(name(row.scale)));
        object.insert("scores".into(), by_level(&row.scores));
        object.insert("coefficients".into(), by_level(&row.coefficients));
        let numbers = [
            ("slope", row.slope),
            ("se", row.se),
            ("statistic", row.t),
            ("df", row.df),
            ("p", row.p),
            ("p_adjusted", row.p_adjusted),
            ("p_error", row.p_error),
            ("critical", row.critical),
        ];
        numbers.into_iter().for_each(|(key, value)| drop(object.insert(key.into(), json_number(value))));
        object.insert("statistic_name".into(), json!("t"));
        object.insert("rejected".into(), json!(shown(laid, row)));
        Value::Object(object)
    });
    json!({
        "method": "dose scales",
        "levels": labels,
        "sides": laid.asked.sides,
        "alpha": json_number(laid.asked.alpha),
        "strongest": name(laid.tests.rows[laid.tests.strongest].scale),
        "rows": rows.collect::<Vec<_>>(),
    })
}

fn plan(asked: &Asked, study: &Study) -> Outcome {
    let labels = &study.levels.labels;
    if labels.is_empty() {
        return Outcome::plan(Answer::new("Waiting for the study's levels"), json!({}));
    }
    let mut table = Table::new("Planned: linear trends in three scales of the scores, tested together")
        .text_column("Level");
    let scales: Vec<(Scale, Vec<f64>)> =
        SCALES.into_iter().filter_map(|scale| Some((scale, scores_in(scale, &asked.scores).ok()?))).collect();
    for (scale, _) in &scales {
        table = table.number_column(words::capital(name(*scale)));
    }
    for (i, level) in labels.iter().enumerate() {
        let scores = scales.iter().map(|(_, scores)| {
            let shown = (scores[i] * 1e4).round() / 1e4;
            Cell::number(number::plain(shown), scores[i])
        });
        table.push(Row::new(std::iter::once(Cell::text(level.clone())).chain(scores)));
    }
    let headline = "Planned: a linear trend in three scales of the scores, tested together; waiting for data";
    let writeup = format!(
        "Planned: linear trends of {} in three scales of the scores {}, tested together by their joint t distribution at a family-wise error of {}.",
        study.outcome,
        words::scores(&asked.scores),
        number::percent(asked.alpha)
    );
    let results = json!({ "method": "dose scales", "levels": labels, "sides": asked.sides });
    Outcome::plan(Answer::new(headline).with_table(table).with_writeup(writeup), results)
}
