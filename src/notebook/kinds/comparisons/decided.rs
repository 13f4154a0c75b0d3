//! Lays out decided comparisons: headline, table, figures, explanation, write-up.

use super::{Laid, cautions, figures, json, words};
use crate::answer::{Answer, Cell, Precision, Row, Table, number};
use crate::methods::effect_size::Interval;
use crate::methods::multiplicity::{
    Adjust, ComparisonRow, Disagreement, ErrorRate, Explanation, Family, Sides,
};
use crate::notebook::kinds::wording::{left_out, listed, outcome_with_unit, p_cell, p_statement, sizes};
use crate::notebook::outcome::Outcome;
use crate::study::Variances;

/// Rows that a write-up says one by one; beyond that it says those that differ and sums up the others.
const SAID_EACH: usize = 10;

/// The settled answer.
pub fn outcome(laid: &Laid) -> Outcome {
    let mut answer = Answer::new(headline(laid)).with_table(table(laid));
    for table in [effects(laid), beside(laid)].into_iter().flatten() {
        answer = answer.with_table(table);
    }
    answer = answer.with_figure(figures::differences(laid)).with_figure(figures::groups(laid));
    if let Some(found) = &laid.explanation {
        answer = answer.with_text(explanation(laid, found));
    }
    answer = answer.with_writeup(writeup(laid));
    answer.cautions = cautions::of(laid);
    Outcome::settled(answer, json::results(laid))
}

fn name(laid: &Laid, row: &ComparisonRow) -> String {
    words::row_name(&row.name, laid.asked.family)
}

/// What a row's estimate is: a difference of two sets of means, or any contrast.
fn estimate_word(laid: &Laid) -> &'static str {
    if laid.asked.family == Family::Contrasts { "estimate" } else { "difference" }
}

fn headline(laid: &Laid) -> String {
    let result = &laid.comparisons;
    let method =
        format!("{}, {}", words::procedure(result.adjust), words::error_rate(result.adjust, result.alpha));
    let found: Vec<&ComparisonRow> = result.rows.iter().filter(|row| row.rejected).collect();
    let (of, all) = (found.len(), result.rows.len());
    let says = match (of, all) {
        (0, 1) => format!("{} is {}", name(laid, &result.rows[0]), not_shown(result.sides)),
        (0, _) => format!("None of the {} shows a difference", words::comparisons(all)),
        (1, 1) => format!("{}: {}", name(laid, found[0]), direction(laid, found[0])),
        (2, 2) => "Both comparisons show a difference".to_string(),
        (of, all) if of == all => format!("All {} show a difference", words::comparisons(all)),
        (of, all) => format!(
            "{of} of {} {} a difference",
            words::comparisons(all),
            if of == 1 { "shows" } else { "show" }
        ),
    };
    let which = if (1..=3).contains(&of) && all > 1 {
        let each = found
            .iter()
            .map(|row| format!("{} {}", name(laid, row), number::signed(row.estimate, laid.precision)));
        format!(": {}", listed(each))
    } else {
        String::new()
    };
    format!("{says}{which} ({method})")
}

fn not_shown(sides: Sides) -> &'static str {
    match sides {
        Sides::Both => "not shown to differ from zero",
        Sides::Greater => "not shown to be greater than zero",
        Sides::Less => "not shown to be less than zero",
    }
}

fn direction(laid: &Laid, row: &ComparisonRow) -> String {
    let size = number::signed(row.estimate, laid.precision);
    format!("{size}, a difference is shown")
}

/// Names the method in full: error term, df, side, adjustment, family and its size.
fn caption(laid: &Laid) -> String {
    let (result, study) = (&laid.comparisons, laid.study);
    let k = study.levels.count();
    format!(
        "{}: {}; {}, {}; {} over the family of {}, {}",
        outcome_with_unit(study),
        words::family(laid.asked, study),
        words::error_term(study.variances, Some(laid.estimates), k),
        words::sides(result.sides),
        words::procedure_in_full(result.adjust, &laid.estimates.n),
        words::comparisons(result.family_size),
        words::error_rate(result.adjust, result.alpha),
    )
}

/// What decides stands first: the estimate, its interval, the adjusted p and the decision; how they came about follows.
fn table(laid: &Laid) -> Table {
    let result = &laid.comparisons;
    let statistic = result.rows.first().map_or("t", |row| row.statistic_name);
    let interval = words::interval(result);
    let mut table = Table::new(caption(laid))
        .text_column("Comparison")
        .number_column(capital(estimate_word(laid)))
        .number_column(capital(&interval))
        .number_column("p, adjusted")
        .text_column("Decision")
        .number_column(statistic)
        .number_column("df")
        .number_column("p, raw")
        .number_column("alpha for raw p");
    result.rows.iter().for_each(|row| table.push(table_row(laid, row)));
    notes(laid).into_iter().fold(table, Table::note)
}

fn table_row(laid: &Laid, row: &ComparisonRow) -> Row {
    let (result, precision) = (&laid.comparisons, laid.precision);
    let raw = match row.alpha {
        Some(alpha) => p_cell(row.p, alpha),
        None => Cell::p_value(row.p),
    };
    let cells = [
        Cell::text(name(laid, row)),
        Cell::estimate(row.estimate, precision),
        Cell::interval(row.interval.lower, row.interval.upper, precision),
        p_cell(row.p_adjusted, result.alpha),
        Cell::text(words::decision(row, result.sides)),
        Cell::statistic(row.statistic),
        Cell::df(row.df),
        raw,
        row.alpha.map_or_else(Cell::absent, level_cell),
    ];
    let row_cells = Row::new(cells);
    if row.rejected { row_cells.strong() } else { row_cells }
}

/// A level such as 0.0167: four decimals, or the power of ten that keeps it apart from zero.
pub fn level_cell(alpha: f64) -> Cell {
    let shown = if alpha >= 0.001 {
        number::fixed(alpha, 4)
    } else {
        number::estimate(alpha, Precision::from_spread(alpha))
    };
    Cell::number(shown, alpha)
}

/// The first letter as a capital.
pub fn capital(text: &str) -> String {
    let mut letters = text.chars();
    letters.next().map(|first| first.to_uppercase().to_string()).unwrap_or_default() + letters.as_str()
}

fn notes(laid: &Laid) -> Vec<String> {
    let (result, study) = (&laid.comparisons, laid.study);
    let alpha = number::plain(result.alpha);
    let mut notes =
        vec![format!("Analysed: {}.", sizes(&laid.estimates.labels, laid.estimates.n.iter().copied()))];
    notes.extend(left_out(study));
    if study.levels.order_of_appearance {
        notes.push(
            "The levels stand in the order of their first appearance in the data; the study can set another."
                .to_string(),
        );
    }
    if result.rows.iter().any(|row| row.alpha.is_some())
        && result.adjust.error_rate() != ErrorRate::PerComparison
    {
        let step = if result.adjust.single_step() {
            ""
        } else {
            " The alpha beside a row is that of the step at which it was decided."
        };
        notes.push(format!(
            "Two readings of one decision: the adjusted p against {alpha}, or the raw p against the alpha beside it. Never both corrections at once.{step}"
        ));
    }
    if laid.asked.family == Family::Contrasts {
        let rank = crate::methods::contrasts::rank(&json::coefficients(&laid.asked.contrasts));
        if rank < result.family_size {
            notes.push(format!(
                "The {} contrasts carry {rank} independent questions: some of them follow from others.",
                result.family_size
            ));
        }
        let each = result.rows.iter().map(|row| format!("{}: {}", row.name, row.words));
        notes.push(format!("In words: {}.", each.collect::<Vec<_>>().join("; ")));
    }
    notes
}

/// The standard deviation that standardises.
fn standardiser(laid: &Laid) -> &'static str {
    match laid.study.variances {
        Variances::Equal => "the SD pooled over all levels",
        Variances::Unequal => "the root of the mean variance of the levels compared",
    }
}

/// d and g of every row, with the interval that goes with its decision.
fn effects(laid: &Laid) -> Option<Table> {
    let result = &laid.comparisons;
    if result.rows.iter().all(|row| row.effect.is_none()) {
        return None;
    }
    let scaled = laid.asked.contrasts.iter().any(|contrast| (contrast.half_weight() - 1.0).abs() > 1e-9);
    let scale = if scaled { ", scaled to the mean of one set less the mean of another" } else { "" };
    let mut table = Table::new(format!(
        "Effect sizes of the same comparisons: d, the {} divided by {}{scale}; g, the same without its small-sample bias",
        estimate_word(laid),
        standardiser(laid),
    ))
    .text_column("Comparison")
    .number_column("d")
    .number_column("Interval of d")
    .number_column("g")
    .number_column("Interval of g");
    let two = Precision::decimals(2);
    let bounds = |interval: Option<Interval>| {
        interval.map_or_else(Cell::absent, |it| Cell::interval(it.lower, it.upper, two))
    };
    for row in &result.rows {
        let effect = row.effect.as_ref();
        let cells = Row::new([
            Cell::text(name(laid, row)),
            effect.map_or_else(Cell::absent, |effect| Cell::estimate(effect.d, two)),
            bounds(effect.and_then(|effect| effect.d_interval)),
            effect.map_or_else(Cell::absent, |effect| Cell::estimate(effect.g, two)),
            bounds(effect.and_then(|effect| effect.g_interval)),
        ]);
        table.push(if row.rejected { cells.strong() } else { cells });
    }
    Some(table.note(
        "The intervals are from the noncentral t at the level of the row's critical value, so they agree with those of the estimates above.",
    ))
}

/// Other procedures beside the one that decides.
fn beside(laid: &Laid) -> Option<Table> {
    if laid.also.is_empty() {
        return None;
    }
    let result = &laid.comparisons;
    let mut table = Table::new(format!(
        "The same {} under other procedures: adjusted p-values. {} decides, as chosen; the others are for comparison.",
        words::comparisons(result.family_size),
        capital(words::procedure(result.adjust))
    ))
    .text_column("Comparison")
    .number_column(capital(words::procedure(result.adjust)));
    for (adjust, _) in &laid.also {
        table = table.number_column(capital(words::procedure(*adjust)));
    }
    for (i, row) in result.rows.iter().enumerate() {
        let others = laid.also.iter().map(|(_, p)| p_cell(p[i], result.alpha));
        let first = [Cell::text(name(laid, row)), p_cell(row.p_adjusted, result.alpha)];
        table.push(Row::new(first.into_iter().chain(others)));
    }
    Some(table)
}

/// Why the overall test and the comparisons differ, on the study's own numbers.
fn explanation(laid: &Laid, found: &Explanation) -> String {
    let result = &laid.comparisons;
    let test = &found.overall;
    let overall = format!(
        "F({}, {}) = {}, {}",
        number::df(test.df1),
        number::df(test.df2),
        number::statistic(test.f),
        p_statement(test.p, result.alpha)
    );
    let nearest = &result.rows[found.nearest];
    let near =
        format!("{} (adjusted {})", name(laid, nearest), p_statement(nearest.p_adjusted, result.alpha));
    // With one error term the overall F is t²/(k - 1) of this contrast; Welch's F is scaled besides.
    let makes_f = match (laid.study.variances, laid.estimates.labels.len()) {
        (Variances::Unequal, _) => String::new(),
        (Variances::Equal, 2) => "; t\u{b2} is the overall F".to_string(),
        (Variances::Equal, k) => format!("; t\u{b2}/{} is the overall F", k - 1),
    };
    let carrying = format!(
        "{} ({}, t = {}{makes_f})",
        found.carrying_words,
        number::signed(found.carrying_estimate.estimate, laid.precision),
        number::statistic(found.carrying_estimate.estimate / found.carrying_estimate.se)
    );
    match found.disagreement {
        Disagreement::OverallOnly => format!(
            "Why the overall test is significant ({overall}) and no comparison here is: the overall test asks whether any contrast of the means differs from zero, and it is carried by this one: {carrying}. {} The comparison nearest to significance is {near}. Both results stand: the levels differ somewhere, and it is not shown between which of those compared.",
            why_no_comparison(laid, found)
        ),
        Disagreement::ComparisonsOnly => format!(
            "Why a comparison is significant ({near}) and the overall test is not ({overall}): {} The overall test is carried by this contrast: {carrying}. {}",
            why_a_comparison(laid, found),
            standing(result.adjust)
        ),
    }
}

/// Why the comparisons miss what the overall test finds, for this family.
fn why_no_comparison(laid: &Laid, found: &Explanation) -> String {
    let result = &laid.comparisons;
    let carried = &found.carrying.coefficients;
    let alike = |row: &ComparisonRow| is_multiple(&row.coefficients, carried);
    let mut reasons = Vec::new();
    match result.rows.iter().find(|row| alike(row)) {
        Some(row) if result.family_size > 1 => reasons.push(format!(
            "It is the comparison {}, which is judged more strictly as one of {}.",
            name(laid, row),
            words::comparisons(result.family_size)
        )),
        Some(_) => {}
        None if result.family_size > 1 => reasons.push(format!(
            "It is not among the {} of this family, and each of them is judged more strictly than it would be alone.",
            words::comparisons(result.family_size)
        )),
        None => reasons.push("It is not the comparison made here.".to_string()),
    }
    if result.sides != Sides::Both {
        reasons.push(
            "The comparisons look to one side only; the overall test looks to both, and a difference to the other side counts in it alone."
                .to_string(),
        );
    }
    reasons.join(" ")
}

/// Why the overall test misses what a comparison finds, for this study.
fn why_a_comparison(laid: &Laid, found: &Explanation) -> String {
    let k = laid.estimates.labels.len();
    let mut reasons = Vec::new();
    if k > 2 {
        reasons.push(format!(
            "the overall test spreads its power over all {} independent directions in which {k} means can differ, and a comparison looks in one.",
            number::df(found.overall.df1)
        ));
    }
    if laid.comparisons.sides != Sides::Both {
        let also = if k > 2 { "Besides, the" } else { "the" };
        reasons.push(format!(
            "{also} comparisons look to the one side that was chosen, where their whole error rate is spent; the overall test looks to both."
        ));
    }
    if reasons.is_empty() {
        reasons.push("the two p-values lie on either side of the error rate by rounding alone.".to_string());
    }
    reasons.join(" ")
}

/// What a significant comparison is worth without a significant overall test.
fn standing(adjust: Adjust) -> &'static str {
    match adjust.error_rate() {
        ErrorRate::FamilyWise => {
            "The comparisons control their own error rate, so they need no significant overall test before them."
        }
        ErrorRate::FalseDiscovery => {
            "The comparisons control the expected share of false findings, not the chance of any: such a finding is a lead, not a proof."
        }
        ErrorRate::PerComparison => {
            "Nothing is adjusted here, so a single significant comparison among several may well be a false finding; an adjustment would keep the error rate of the family."
        }
    }
}

/// Whether two contrasts ask the same, up to scale and sign.
fn is_multiple(one: &[f64], other: &[f64]) -> bool {
    let size = |c: &[f64]| c.iter().map(|c| c * c).sum::<f64>();
    let along: f64 = one.iter().zip(other).map(|(a, b)| a * b).sum();
    (along * along / (size(one) * size(other)) - 1.0).abs() < 1e-9
}

fn writeup(laid: &Laid) -> String {
    let (result, study) = (&laid.comparisons, laid.study);
    let opening = format!(
        "Mean {} was compared {} {} ({}; {}, {}; {} over {}, {}).",
        outcome_with_unit(study),
        if laid.asked.family == Family::Contrasts { "by" } else { "over" },
        words::family(laid.asked, study),
        sizes(&laid.estimates.labels, laid.estimates.n.iter().copied()),
        words::error_term(study.variances, Some(laid.estimates), study.levels.count()),
        words::sides(result.sides),
        words::procedure_in_full(result.adjust, &laid.estimates.n),
        words::comparisons(result.family_size),
        words::error_rate(result.adjust, result.alpha),
    );
    let all = result.rows.len() <= SAID_EACH;
    let said = result.rows.iter().filter(|row| all || row.rejected).take(SAID_EACH * 3);
    let mut sentences: Vec<String> = vec![opening];
    sentences.extend(said.map(|row| row_sentence(laid, row)));
    if !all {
        sentences.extend(others(laid));
    }
    if result.rows.iter().any(|row| row.effect.is_some()) {
        sentences.push(format!(
            "d is the {} divided by {}, its interval at the level of the row's critical value; g is d without its small-sample bias.",
            estimate_word(laid),
            standardiser(laid)
        ));
    }
    sentences.join(" ")
}

/// "B − A: difference 2.59 (simultaneous 95 % interval 0.7 to 4.5), q(12) = 5.22, adjusted p = 0.008, d = 2.24 (0.47 to 3.97), g = 2.09; a difference is shown."
fn row_sentence(laid: &Laid, row: &ComparisonRow) -> String {
    let (result, precision) = (&laid.comparisons, laid.precision);
    let two = Precision::decimals(2);
    let size = estimate_word(laid);
    let p_name = if result.adjust == Adjust::PValues(crate::methods::multiplicity::PValueMethod::None) {
        ""
    } else {
        "adjusted "
    };
    let statistic = match row.statistic_name {
        "q" => format!("q({}, {})", laid.estimates.labels.len(), number::df(row.df)),
        other => format!("{other}({})", number::df(row.df)),
    };
    let effect = row.effect.as_ref().map_or_else(String::new, |effect| {
        let bounds = effect.d_interval.map_or_else(String::new, |it| {
            format!(" ({})", number::interval_in_words(it.lower, it.upper, two))
        });
        format!(", d = {}{bounds}, g = {}", number::fixed(effect.d, 2), number::fixed(effect.g, 2))
    });
    let decided = match (row.rejected, result.sides) {
        (true, _) => "a difference is shown",
        (false, Sides::Both) => "a difference is not shown",
        (false, _) => "a difference in this direction is not shown",
    };
    format!(
        "{}: {size} {} ({} {}), {statistic} = {}, {p_name}{}{effect}; {decided}.",
        name(laid, row),
        number::estimate(row.estimate, precision),
        words::interval(result),
        number::interval_in_words(row.interval.lower, row.interval.upper, precision),
        number::statistic(row.statistic),
        p_statement(row.p_adjusted, result.alpha),
    )
}

fn others(laid: &Laid) -> Option<String> {
    let result = &laid.comparisons;
    let rest = result.rows.iter().filter(|row| !row.rejected);
    let smallest = rest.clone().map(|row| row.p_adjusted).fold(f64::INFINITY, f64::min);
    let count = rest.count();
    let clause = if count == 1 { "The other comparison is" } else { "The other comparisons are" };
    (count > 0).then(|| {
        format!(
            "{clause} not shown to differ ({count} rows, smallest adjusted {}).",
            p_statement(smallest, result.alpha)
        )
    })
}
