//! Why the overall test and the comparisons can differ, on the study's own numbers.

use super::decided::Laid;
use super::words;
use crate::answer::number;
use crate::methods::multiplicity::{Adjust, ComparisonRow, Disagreement, ErrorRate, Explanation, Sides};
use crate::notebook::kinds::wording::p_statement;
use crate::study::Variances;

/// Why the overall test and the comparisons differ, on the study's own numbers.
pub fn explanation(laid: &Laid, found: &Explanation) -> String {
    let result = laid.comparisons;
    let test = &found.overall;
    let overall = format!(
        "F({}, {}) = {}, {}",
        number::df(test.df1),
        number::df(test.df2),
        number::statistic(test.f),
        p_statement(test.p, result.alpha)
    );
    let nearest = &result.rows[found.nearest];
    let near = format!("{} (adjusted {})", laid.name(nearest), p_statement(nearest.p_adjusted, result.alpha));
    // With one error term the overall F is t²/(k - 1) of this contrast; Welch's F is scaled besides.
    let makes_f = match (laid.study.variances, laid.study.levels.count()) {
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
    let result = laid.comparisons;
    let carried = &found.carrying.coefficients;
    let alike = |row: &ComparisonRow| is_multiple(&row.coefficients, carried);
    let mut reasons = Vec::new();
    match result.rows.iter().find(|row| alike(row)) {
        Some(row) if result.family_size > 1 => reasons.push(format!(
            "It is the comparison {}, which is judged more strictly as one of {}.",
            laid.name(row),
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
    let k = laid.study.levels.count();
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
        ErrorRate::FamilyWise | ErrorRate::AllAlikeOnly => {
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
