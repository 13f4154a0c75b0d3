//! The sentences for the report.

use super::decided::Laid;
use super::{effects, rows, words};
use crate::answer::number;
use crate::methods::multiplicity::{
    Adjust, Basis, Claim, ComparisonRow, Comparisons, Family, PValueMethod, Sides,
};
use crate::notebook::kinds::wording::{outcome_with_unit, p_statement, sizes};

/// Rows that a write-up says one by one; beyond that it says those that differ and sums up the others.
const SAID_EACH: usize = 10;

/// What was compared and how, and every row in words.
pub fn writeup(laid: &Laid) -> String {
    let (result, study) = (laid.comparisons, laid.study);
    let mean = if matches!(result.basis, Basis::Ranks(_)) { "The values of" } else { "Mean" };
    let was = if matches!(result.basis, Basis::Ranks(_)) { "were" } else { "was" };
    let opening = format!(
        "{mean} {} {was} compared {} {} ({}; {}, {}; {} over {}, {}).",
        outcome_with_unit(study),
        if laid.asked.family == Family::Contrasts { "by" } else { "for" },
        words::family(laid.asked, study),
        sizes(&study.levels.labels, laid.n().into_iter()),
        words::tests(result.basis, study.variances, laid.estimates, study.levels.count()),
        words::sides(result.sides, result.claim),
        words::procedure_in_full(result.adjust, &laid.n()),
        words::comparisons(result.family_size),
        words::error_rate(result.adjust, result.alpha),
    );
    let all = result.rows.len() <= SAID_EACH;
    let said = result.rows.iter().filter(|row| all || row.rejected).take(SAID_EACH * 3);
    let mut sentences: Vec<String> = vec![opening];
    sentences.extend(result.rearranged.as_ref().map(|rearranged| rows::rearrangements(rearranged, laid)));
    sentences.extend(said.map(|row| row_sentence(laid, row)));
    if !all {
        sentences.extend(others(laid));
    }
    if result.rows.iter().any(|row| row.effects.standardised.is_some()) {
        let level = match result.rows.iter().any(|row| row.critical.is_some()) {
            true => "at the level of the row's critical value".to_string(),
            false => format!("of {} for the comparison alone", number::percent(result.confidence)),
        };
        sentences.push(format!(
            "d is the {} divided by {}, its interval {level}; g is d without its small-sample bias.",
            laid.estimate_word(),
            effects::standardiser(laid)
        ));
    }
    sentences.join(" ")
}

/// "B − A: difference 2.59 (simultaneous 95 % interval 0.7 to 4.5), q(12) = 5.22, adjusted p = 0.008, d = 2.24 (0.47 to 3.97), g = 2.09; a difference is shown."
fn row_sentence(laid: &Laid, row: &ComparisonRow) -> String {
    let (result, precision) = (laid.comparisons, laid.precision);
    let p_name = if result.adjust == Adjust::PValues(PValueMethod::None) { "" } else { "adjusted " };
    let interval = row.interval.map_or_else(String::new, |bounds| {
        let shown = number::interval_in_words(bounds.lower, bounds.upper, precision);
        format!(" ({} {shown})", words::interval(result))
    });
    format!(
        "{}: {} {}{interval}, {} = {}, {p_name}{}{}; {}.",
        laid.name(row),
        laid.estimate_word(),
        number::estimate(row.estimate, precision),
        statistic(laid, row),
        number::statistic(row.statistic),
        p_statement(row.p_adjusted, result.alpha),
        effect(row),
        decided(row, result),
    )
}

/// "q(3, 12)", "t(12)", "z".
fn statistic(laid: &Laid, row: &ComparisonRow) -> String {
    match row.statistic_name {
        "q" if row.df.is_finite() => format!("q({}, {})", laid.study.levels.count(), number::df(row.df)),
        other if row.df.is_finite() => format!("{other}({})", number::df(row.df)),
        other => other.to_string(),
    }
}

fn effect(row: &ComparisonRow) -> String {
    if let Some(effect) = &row.effects.standardised {
        let bounds = effects::bounds(effect.d_interval).map_or_else(String::new, |it| format!(" ({it})"));
        return format!(", d = {}{bounds}, g = {}", number::fixed(effect.d, 2), number::fixed(effect.g, 2));
    }
    row.effects.superiority.map_or_else(String::new, |size| {
        let bounds = effects::bounds(size.interval).map_or_else(String::new, |it| format!(" ({it})"));
        format!(", superiority {}{bounds}", number::fixed(size.estimate, 2))
    })
}

fn decided(row: &ComparisonRow, result: &Comparisons) -> String {
    match (result.claim, row.rejected, result.sides) {
        (Claim::Difference, false, Sides::Greater | Sides::Less) => {
            "a difference in this direction is not shown".to_string()
        }
        (claim, true, _) => format!("{} is shown", words::shown(claim)),
        (claim, false, _) => format!("{} is not shown", words::shown(claim)),
    }
}

fn others(laid: &Laid) -> Option<String> {
    let result = laid.comparisons;
    let rest = result.rows.iter().filter(|row| !row.rejected);
    let smallest = rest.clone().map(|row| row.p_adjusted).fold(f64::INFINITY, f64::min);
    let count = rest.count();
    let clause = if count == 1 { "The other comparison is" } else { "The other comparisons are" };
    (count > 0).then(|| {
        let smallest = p_statement(smallest, result.alpha);
        match result.claim {
            Claim::Difference => {
                format!("{clause} not shown to differ ({count} rows, smallest adjusted {smallest}).")
            }
            claim => format!(
                "In {count} others {} is not shown (smallest adjusted {smallest}).",
                words::shown(claim)
            ),
        }
    })
}
