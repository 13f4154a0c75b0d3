//! The polynomial trend: asked of the methods, and laid out as headline, tables, figure, write-up and cautions.

mod json;
mod plan;

use super::asked::Asked;
use super::words;
use crate::answer::figure::{self, Point, Span, Trend, TrendPoint};
use crate::answer::{Answer, Cell, Figure, Precision, Row, Table, number};
use crate::methods::trend::{LackOfFit, PolynomialTrend, TrendRequest, TrendRow, Weights, polynomial};
use crate::notebook::ask::Ask;
use crate::notebook::kinds::wording::{
    left_out, listed, outcome_with_unit, p_cell, p_statement, refused, remedy, sentence, sizes,
};
use crate::notebook::outcome::Outcome;
use crate::numerics::distributions::student_t;
use crate::study::{DegreesOfFreedom, Estimates, Study, Variances};

/// Points of the drawn curve.
const CURVE: usize = 120;

/// Everything from which the answer is laid out.
struct Laid<'a> {
    asked: &'a Asked,
    study: &'a Study,
    estimates: &'a Estimates,
    trend: PolynomialTrend,
}

/// The trend, or the plan for it, or why there is none.
pub fn outcome(ask: &Ask, asked: &Asked, study: &Study) -> Outcome {
    let Some(summary) = study.summary() else {
        return plan::outcome(asked, study);
    };
    let estimates = match Estimates::one_way(&study.levels.labels, &summary, study.variances) {
        Ok(estimates) => estimates,
        Err(error) => return refused(ask, format!("The trend cannot be given: {error}.{}", remedy(&error))),
    };
    let request = TrendRequest {
        estimates: &estimates,
        summary: Some(&summary),
        scores: &asked.scores,
        degree: asked.degree,
        weights: asked.weights,
        confidence: asked.confidence,
    };
    match polynomial(&request) {
        Ok(trend) => settled(&Laid { asked, study, estimates: &estimates, trend }),
        Err(error) => refused(ask, sentence(&error.to_string())),
    }
}

fn settled(laid: &Laid) -> Outcome {
    let mut answer = Answer::new(headline(laid)).with_table(table(laid));
    if !laid.trend.lack_of_fit.is_empty() {
        answer = answer.with_table(lack_of_fit(laid));
    }
    answer = answer
        .with_table(sizes_of_trends(laid))
        .with_figure(drawing(laid))
        .with_table(contrasts(laid))
        .with_writeup(writeup(laid));
    answer.cautions = cautions(laid);
    Outcome::settled(answer, json::results(laid))
}

fn shown(laid: &Laid, row: &TrendRow) -> bool {
    row.p <= laid.asked.alpha
}

fn headline(laid: &Laid) -> String {
    let found = laid.trend.rows.iter().filter(|row| shown(laid, row));
    let parts: Vec<String> = found
        .map(|row| {
            format!(
                "{} trend, {} ({})",
                row.name,
                words::direction(row),
                p_statement(row.p, laid.asked.alpha)
            )
        })
        .collect();
    let (outcome, factor) = (&laid.study.outcome, &laid.study.factor);
    match parts.as_slice() {
        [] => {
            let linear = laid.trend.rows.first().map_or_else(String::new, |row| {
                format!(" (linear: {})", p_statement(row.p, laid.asked.alpha))
            });
            format!(
                "A trend of {outcome} over the scores of {factor} is not shown up to degree {}{linear}",
                laid.asked.degree
            )
        }
        parts => format!("{outcome} follows the scores of {factor}: {}", listed(parts.iter().cloned())),
    }
}

/// The error term in full.
fn error_term(laid: &Laid) -> String {
    match (&laid.estimates.df, laid.study.variances) {
        (DegreesOfFreedom::Common(df), Variances::Equal) => {
            format!(
                "t tests with one SD pooled over all {} levels (df {})",
                laid.estimates.labels.len(),
                number::df(*df)
            )
        }
        _ => "t tests with separate variances (Satterthwaite's df per contrast)".to_string(),
    }
}

fn method(laid: &Laid) -> String {
    format!(
        "polynomial trends up to degree {} over the scores {} of {}; {}; {}, two-sided, each judged by itself at {}",
        laid.asked.degree,
        words::scores(&laid.asked.scores),
        laid.study.factor,
        words::weights(laid.asked.weights),
        error_term(laid),
        number::percent(laid.asked.alpha)
    )
}

fn table(laid: &Laid) -> Table {
    let level = number::percent(laid.asked.confidence);
    let mut table = Table::new(format!("{}: {}", outcome_with_unit(laid.study), method(laid)))
        .text_column("Trend")
        .number_column("Coefficient")
        .number_column(format!("{level} interval"))
        .number_column("t")
        .number_column("df")
        .number_column("p")
        .text_column("Decision")
        .number_column("SS");
    laid.trend.rows.iter().for_each(|row| table.push(table_row(laid, row)));
    let mut notes = vec![
        "Coefficient: of the orthogonal polynomial of this degree. The linear one is the slope of the straight line, the change per unit of score; the others say how the curve departs from the degrees before, per squared unit (quadratic) and so on.".to_string(),
        format!(
            "Each degree lets the curve bend once more: {}.",
            listed(laid.trend.rows.iter().map(|row| format!("{} is {}", row.name, words::meaning(row.degree))))
        ),
    ];
    notes.extend(left_out(laid.study));
    notes.into_iter().fold(table, Table::note)
}

/// How much of the differences between the means each degree has: its share, d and g.
fn sizes_of_trends(laid: &Laid) -> Table {
    let by = match laid.study.variances {
        Variances::Equal => "the SD pooled over all levels",
        Variances::Unequal => "the root of the mean variance of the levels",
    };
    let mut table = Table::new(format!(
        "Sizes of the same trends: share of the sum of squares between the groups; d, the contrast scaled to the mean of one set less the mean of another and divided by {by}; g, the same without its small-sample bias"
    ))
    .text_column("Trend")
    .number_column("Share")
    .number_column("d")
    .number_column(format!("{} interval of d", number::percent(laid.asked.confidence)))
    .number_column("g");
    let two = Precision::decimals(2);
    for row in &laid.trend.rows {
        let effect = row.effect.as_ref();
        let bounds = effect.and_then(|effect| effect.d_interval);
        table.push(Row::new([
            Cell::text(row.name),
            row.share.map_or_else(Cell::absent, |share| Cell::number(number::percent(share), share)),
            effect.map_or_else(Cell::absent, |effect| Cell::estimate(effect.d, two)),
            bounds.map_or_else(Cell::absent, |it| Cell::interval(it.lower, it.upper, two)),
            effect.map_or_else(Cell::absent, |effect| Cell::estimate(effect.g, two)),
        ]));
    }
    table
        .note(share_note(laid))
        .note("The intervals of d are from the noncentral t, so they agree with the tests above.")
}

fn share_note(laid: &Laid) -> String {
    let total =
        number::estimate(laid.trend.ss_between, Precision::from_spread(laid.trend.ss_between / 100.0));
    let even = laid.estimates.n.windows(2).all(|pair| pair[0] == pair[1]);
    if laid.asked.weights == Weights::N || even {
        format!(
            "The shares are of the sum of squares between the groups, {total}; with all degrees they add up to it."
        )
    } else {
        format!(
            "The shares are of the sum of squares between the groups, {total}; with unequal group sizes the textbook contrasts overlap, so they do not add up."
        )
    }
}

fn table_row(laid: &Laid, row: &TrendRow) -> Row {
    let precision = Precision::from_spread((row.slope_interval.upper - row.slope_interval.lower) / 2.0);
    let ss = Precision::from_spread(laid.trend.ss_between / 100.0);
    let decision = if shown(laid, row) { words::direction(row) } else { "not shown" };
    let cells = Row::new([
        Cell::text(row.name),
        Cell::estimate(row.slope, precision),
        Cell::interval(row.slope_interval.lower, row.slope_interval.upper, precision),
        Cell::statistic(row.t),
        Cell::df(row.df),
        p_cell(row.p, laid.asked.alpha),
        Cell::text(decision),
        Cell::estimate(row.ss, ss),
    ]);
    if shown(laid, row) { cells.strong() } else { cells }
}

fn lack_of_fit(laid: &Laid) -> Table {
    let method = match laid.study.variances {
        Variances::Equal => "F test against the SD pooled over all levels",
        Variances::Unequal => "Johansen's F test with separate variances",
    };
    let mut table = Table::new(format!("Lack of fit: what the curve up to a degree leaves over ({method})"))
        .text_column("Curve")
        .number_column("F")
        .number_column("df 1")
        .number_column("df 2")
        .number_column("p")
        .text_column("Reading");
    for left in &laid.trend.lack_of_fit {
        let test = &left.test;
        table.push(Row::new([
            Cell::text(format!("up to degree {}", left.degree)),
            Cell::statistic(test.f),
            Cell::df(test.df1),
            Cell::df(test.df2),
            p_cell(test.p, laid.asked.alpha),
            Cell::text(reading(laid, left)),
        ]));
    }
    table.note(match laid.study.variances {
        Variances::Equal => {
            "The curve is fitted to the means by their group sizes, whatever the weights of the trends above."
        }
        Variances::Unequal => {
            "The curve is fitted to the means by their precision (group size over variance), whatever the weights of the trends above."
        }
    })
}

fn reading(laid: &Laid, left: &LackOfFit) -> &'static str {
    if left.test.p <= laid.asked.alpha {
        "the means depart from this curve"
    } else {
        "a departure is not shown"
    }
}

/// The order and the scores in use, with every contrast.
fn contrasts(laid: &Laid) -> Table {
    let estimates = laid.estimates;
    let precision =
        Precision::for_column((0..estimates.n.len()).map(|i| estimates.covariance[(i, i)].sqrt()));
    let from = if laid.asked.own_scores { "this cell" } else { "the study" };
    let mut table = Table::new(format!("Order, scores (from {from}) and contrast coefficients in use"))
        .text_column("Level")
        .number_column("Score")
        .number_column("n")
        .number_column("Mean");
    for row in &laid.trend.rows {
        table = table.number_column(row.name);
    }
    for (i, level) in estimates.labels.iter().enumerate() {
        let first = [
            Cell::text(level.clone()),
            Cell::number(number::plain(laid.asked.scores[i]), laid.asked.scores[i]),
            Cell::count(estimates.n[i]),
            Cell::estimate(estimates.origin + estimates.means[i], precision),
        ];
        let weights = laid.trend.rows.iter().map(|row| plan::coefficient(&row.coefficients, i));
        table.push(Row::new(first.into_iter().chain(weights)));
    }
    table
}

/// The degree of the drawn curve: the one asked for where it leaves something over. A curve through every mean would
/// only swing between them, so then it is the highest degree that is shown; none where none is.
fn curve_degree(laid: &Laid) -> usize {
    if laid.asked.degree + 1 < laid.asked.scores.len() {
        return laid.asked.degree;
    }
    laid.trend.rows.iter().rev().find(|row| shown(laid, row)).map_or(0, |row| row.degree)
}

fn drawing(laid: &Laid) -> Figure {
    let (study, estimates, scores) = (laid.study, laid.estimates, &laid.asked.scores);
    let points = (0..estimates.labels.len()).map(|i| TrendPoint {
        label: estimates.labels[i].clone(),
        x: scores[i],
        mean: estimates.origin + estimates.means[i],
        interval: mean_interval(laid, i),
    });
    let (first, last) = (scores[0], scores[scores.len() - 1]);
    let degree = curve_degree(laid);
    let curve = (0..=CURVE).filter(|_| degree > 0).map(|step| {
        let share = step as f64 / CURVE as f64;
        let x = first * (1.0 - share) + last * share;
        Point { x, y: estimates.origin + laid.trend.at(x, degree) }
    });
    let spread = match study.variances {
        Variances::Equal => "SD pooled over all levels",
        Variances::Unequal => "own SD",
    };
    let which = match degree {
        degree if degree + 1 == scores.len() => {
            "with as many terms as levels, so it passes through every mean"
        }
        degree if degree == laid.asked.degree => "the highest degree examined",
        _ => "the highest degree whose trend is shown",
    };
    figure::trend(&Trend {
        title: format!("{} over the scores of {}", study.outcome, study.factor),
        x_axis: format!("Score of {}", study.factor),
        y_axis: outcome_with_unit(study),
        bars: format!(
            "Bars: mean with its {} interval, each level by itself ({spread})",
            number::percent(laid.asked.confidence)
        ),
        curve_words: format!("Curve: polynomial of degree {degree} ({which})"),
        points: points.collect(),
        curve: curve.collect(),
    })
}

fn mean_interval(laid: &Laid, i: usize) -> Option<Span> {
    let estimates = laid.estimates;
    let df = match &estimates.df {
        DegreesOfFreedom::Common(df) => *df,
        DegreesOfFreedom::PerMean(dfs) => dfs[i],
    };
    let t = student_t::upper_quantile((1.0 - laid.asked.confidence) / 2.0, df).ok()?;
    let (mean, reach) = (estimates.origin + estimates.means[i], t * estimates.covariance[(i, i)].sqrt());
    Some(Span { lower: mean - reach, upper: mean + reach })
}

fn writeup(laid: &Laid) -> String {
    let opening = format!(
        "The trend of {} was examined ({}; {}).",
        outcome_with_unit(laid.study),
        method(laid),
        sizes(&laid.estimates.labels, laid.estimates.n.iter().copied())
    );
    let rows = laid.trend.rows.iter().map(|row| row_sentence(laid, row));
    let last = laid.trend.lack_of_fit.iter().find(|left| left.degree == laid.asked.degree).map(|left| {
        let test = &left.test;
        format!(
            "Beyond degree {}: F({}, {}) = {}, {}; {}.",
            left.degree,
            number::df(test.df1),
            number::df(test.df2),
            number::statistic(test.f),
            p_statement(test.p, laid.asked.alpha),
            reading(laid, left)
        )
    });
    std::iter::once(opening).chain(rows).chain(last).collect::<Vec<_>>().join(" ")
}

fn row_sentence(laid: &Laid, row: &TrendRow) -> String {
    let precision = Precision::from_spread((row.slope_interval.upper - row.slope_interval.lower) / 2.0);
    let share = row.share.map_or_else(String::new, |share| {
        format!(", {} of the sum of squares between the groups", number::percent(share))
    });
    let two = Precision::decimals(2);
    let effect = row.effect.as_ref().map_or_else(String::new, |effect| {
        let bounds = effect.d_interval.map_or_else(String::new, |it| {
            format!(" ({})", number::interval_in_words(it.lower, it.upper, two))
        });
        format!(", d = {}{bounds}, g = {}", number::fixed(effect.d, 2), number::fixed(effect.g, 2))
    });
    let decided = if shown(laid, row) { words::direction(row) } else { "not shown" };
    let name = words::capital(row.name);
    format!(
        "{name} trend: coefficient {} ({} interval {}), t({}) = {}, {}{share}{effect}; {decided}.",
        number::estimate(row.slope, precision),
        number::percent(laid.asked.confidence),
        number::interval_in_words(row.slope_interval.lower, row.slope_interval.upper, precision),
        number::df(row.df),
        number::statistic(row.t),
        p_statement(row.p, laid.asked.alpha),
    )
}

fn cautions(laid: &Laid) -> Vec<String> {
    let mut found = Vec::new();
    let count = laid.trend.rows.len();
    if count > 1 {
        found.push(format!(
            "Each of the {count} degrees is judged by itself at {}; nothing is adjusted for their number. Say in the plan which degree is the question.",
            number::percent(laid.asked.alpha)
        ));
    }
    if let Some(linear) = laid.trend.rows.first().filter(|row| shown(laid, row))
        && let Some(left) =
            laid.trend.lack_of_fit.iter().find(|left| left.degree == 1 && left.test.p <= laid.asked.alpha)
    {
        found.push(format!(
            "The straight-line part is {} and the means also depart from a straight line ({}): the outcome moves with the scores, but not in a straight line.",
            words::direction(linear),
            p_statement(left.test.p, laid.asked.alpha)
        ));
    }
    found.extend(words::unconfirmed_order(&laid.study.levels));
    found
}
