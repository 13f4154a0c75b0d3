//! The overall test of ranks.

use crate::answer::{Answer, Cell, Precision, Row, Table, number};
use crate::methods::overall::{KruskalWallis, NoOverallTest};
use crate::methods::profile::OrderStatistics;
use crate::notebook::ask::Ask;
use crate::notebook::diagnostics::Diagnostic;
use crate::notebook::kinds::wording::{
    effect, effect_equals, left_out, outcome_with_unit, p_cell, p_statement, refused, remedy, sizes,
};
use crate::notebook::outcome::Outcome;
use crate::study::{Observed, Sample, Study};
use serde_json::json;

/// The answer about ranks, or why there is none.
pub fn outcome(ask: &Ask, study: &Study) -> Outcome {
    let Observed::Sample(sample) = &study.observed else {
        let message = "Ranks need the single values, and this study has only sizes, means and standard deviations. Set test = \"means\", or let the study read a data cell.";
        return Outcome::mend(vec![Diagnostic::new(message, ask.span("test"), Some("test"))]);
    };
    let test = match KruskalWallis::of(&study.levels.labels, sample) {
        Ok(test) => test,
        Err(error) => {
            let help = match &error {
                NoOverallTest::NoEstimates(error) => remedy(error),
                _ => "",
            };
            let message =
                format!("The Kruskal-Wallis test of \"{}\" cannot be given: {error}.{help}", study.outcome);
            return refused(ask, message);
        }
    };
    let alpha = study.alpha;
    let (outcome, factor, k) = (&study.outcome, &study.factor, study.levels.count());
    let result = format!(
        "H({}) = {}, {}{}",
        number::df(test.df),
        number::statistic(test.h),
        if test.exact { "exact " } else { "" },
        p_statement(test.p, alpha)
    );
    let headline = if test.p <= alpha {
        format!(
            "The ranks of {outcome} differ over the {k} levels of {factor} (Kruskal-Wallis test, {result})"
        )
    } else {
        format!(
            "A difference of the ranks of {outcome} over the {k} levels of {factor} was not shown (Kruskal-Wallis test, {result})"
        )
    };
    let mut answer = Answer::new(headline)
        .with_table(ranks_table(study, &test))
        .with_table(mean_ranks_table(study, sample, &test))
        .with_writeup(ranks_writeup(study, sample, &test, &result));
    answer.cautions = ranks_cautions(study, sample, &test);
    let mut results = json!({ "test": "ranks", "H": test.h, "df": test.df, "p": test.p, "exact": test.exact, "p_chi_squared": test.p_chi_squared, "alpha": alpha });
    results["epsilon_squared"] = json!({ "estimate": test.epsilon_squared });
    results["tie_correction"] = test.tie_correction.into();
    Outcome::settled(answer, results)
}

fn ranks_table(study: &Study, test: &KruskalWallis) -> Table {
    let table = Table::new(format!(
        "Kruskal-Wallis test of {} over the levels of {}",
        outcome_with_unit(study),
        study.factor
    ))
    .text_column("Test")
    .number_column("H")
    .number_column("df")
    .number_column(if test.exact { "p, exact" } else { "p, large samples" })
    .number_column("epsilon squared")
    .row(Row::new([
        Cell::text("Kruskal-Wallis, corrected for ties"),
        Cell::statistic(test.h),
        Cell::df(test.df),
        p_cell(test.p, study.alpha),
        Cell::number(effect(test.epsilon_squared), test.epsilon_squared),
    ]));
    let which = if test.exact {
        format!(
            "p is exact: every way of dealing the observed ranks out to groups of these sizes was counted. The large-sample value from chi-squared would be {}.",
            number::p_value(test.p_chi_squared)
        )
    } else {
        "p is the large-sample value from chi-squared: there are too many arrangements to count.".to_owned()
    };
    table
        .note(which)
        .note("Epsilon squared, H/(N - 1), is the share of the variation of the ranks that lies between the levels; an interval for it is not given.")
}

fn mean_ranks_table(study: &Study, sample: &Sample, test: &KruskalWallis) -> Table {
    let mut table = Table::new("Groups analysed")
        .text_column("Level")
        .number_column("n")
        .number_column("Median")
        .number_column("Mean rank");
    let all: Vec<f64> = sample.groups.iter().flatten().map(|offset| sample.origin + offset).collect();
    let precision = Precision::for_values(&all);
    for ((level, values), rank) in study.levels.labels.iter().zip(&sample.groups).zip(&test.mean_ranks) {
        let order = OrderStatistics::of(values, sample.origin);
        let median = order.map_or_else(Cell::absent, |order| Cell::estimate(order.median, precision.finer()));
        let rank = Cell::estimate(*rank, Precision::decimals(2));
        table.push(Row::new([Cell::text(level.clone()), Cell::count(values.len()), median, rank]));
    }
    match left_out(study) {
        Some(note) => table.note(note),
        None => table,
    }
}

fn ranks_writeup(study: &Study, sample: &Sample, test: &KruskalWallis, result: &str) -> String {
    let verdict = if test.p <= study.alpha { "differed" } else { "were not shown to differ" };
    format!(
        "The distributions of {} over {} were compared with the Kruskal-Wallis test (corrected for ties, {} p-value) at {}. The ranks {verdict}, {result}, {}.",
        outcome_with_unit(study),
        sizes(&study.levels.labels, sample.groups.iter().map(Vec::len)),
        if test.exact { "exact" } else { "large-sample" },
        number::percent(study.alpha),
        effect_equals("epsilon squared", test.epsilon_squared),
    )
}

fn ranks_cautions(study: &Study, sample: &Sample, test: &KruskalWallis) -> Vec<String> {
    let mut cautions = Vec::new();
    if test.p > study.alpha {
        cautions.push("Not shown to differ does not mean equal.".to_owned());
    }
    cautions.push("The test is about the distributions as a whole; it compares medians only where the distributions have the same shape.".to_owned());
    let least = sample.groups.iter().map(Vec::len).min();
    if let Some(least) = least.filter(|least| *least < 5 && !test.exact) {
        let values = if least == 1 { "value" } else { "values" };
        cautions.push(format!(
            "The smallest group has {least} {values}; below about 5 the large-sample p-value is rough."
        ));
    }
    if test.tie_correction < 0.9 {
        cautions.push("Many values are tied, so the ranks carry little information.".to_owned());
    }
    cautions
}
