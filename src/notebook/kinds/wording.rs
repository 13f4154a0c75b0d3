//! Phrases and tables that the kinds about whole studies share, so that the same thing reads the same everywhere.

use crate::answer::{Cell, Precision, Row, Table, number};
use crate::methods::effect_size::EffectSize;
use crate::notebook::ask::Ask;
use crate::notebook::diagnostics::Diagnostic;
use crate::notebook::outcome::Outcome;
use crate::study::{NoEstimates, Study, Summary};

/// A cell whose study gives no answer: the message stands on the study's name.
pub fn refused(ask: &Ask, message: impl Into<String>) -> Outcome {
    Outcome::mend(vec![Diagnostic::new(message, ask.span("study"), Some("study"))])
}

/// What a person can do about a study that gives no estimates: a sentence with a leading space, or nothing.
pub fn remedy(error: &NoEstimates) -> &'static str {
    match error {
        NoEstimates::OneLevel => " Give the study at least two levels with values.",
        NoEstimates::EmptyLevel { .. } => {
            " Correct its name in the study's levels, add its data, or take it out of the levels."
        }
        NoEstimates::SingleObservation { .. } | NoEstimates::NoVariation { .. } => {
            " Add data, leave the level out of the study's levels, or set variances = \"equal\" in the study if one standard deviation for all levels is credible."
        }
        NoEstimates::NoErrorTerm => " Look whether the outcome was entered as meant.",
        NoEstimates::OutOfRange => "",
    }
}

/// `text` with its first letter as a capital: an error's clause as a sentence.
pub fn sentence(text: &str) -> String {
    let mut letters = text.chars();
    let first = letters.next().map(|letter| letter.to_uppercase().to_string()).unwrap_or_default();
    format!("{first}{}.", letters.as_str().trim_end_matches('.'))
}

/// "p = 0.012", with as many decimals as show on which side of `alpha` it lies.
pub fn p_statement(p: f64, alpha: f64) -> String {
    let shown = number::p_value_beside(p, alpha);
    match shown.split_at_checked(1) {
        Some((sign @ ("<" | ">"), number)) => format!("p {sign} {number}"),
        _ => format!("p = {shown}"),
    }
}

/// A p-value in a table beside `alpha`.
pub fn p_cell(p: f64, alpha: f64) -> Cell {
    Cell::number(number::p_value_beside(p, alpha), p)
}

/// A standardised effect with three decimals; a positive one that would round to zero as "<0.001".
pub fn effect(value: f64) -> String {
    if value > 0.0 && value < 0.000_5 { "<0.001".to_owned() } else { number::fixed(value, 3) }
}

/// "omega squared = 0.271", or "omega squared < 0.001".
pub fn effect_equals(name: &str, value: f64) -> String {
    let shown = effect(value);
    match shown.strip_prefix('<') {
        Some(bound) => format!("{name} < {bound}"),
        None => format!("{name} = {shown}"),
    }
}

/// "omega squared = 0.271, 90 % CI 0.000 to 0.442"; without an interval the estimate alone.
pub fn effect_with_interval(name: &str, size: &EffectSize, confidence: f64) -> String {
    let estimate = effect_equals(name, size.estimate);
    match (size.lower, size.upper) {
        (Some(lower), Some(upper)) => {
            format!("{estimate}, {} CI {} to {}", number::percent(confidence), effect(lower), effect(upper))
        }
        _ => estimate,
    }
}

/// A row of a table of effect sizes: name, estimate, bounds.
pub fn effect_row(name: &str, size: &EffectSize) -> Row {
    let cell =
        |value: Option<f64>| value.map_or_else(Cell::absent, |value| Cell::number(effect(value), value));
    Row::new([Cell::text(name), cell(Some(size.estimate)), cell(size.lower), cell(size.upper)])
}

/// "none (n = 6), 15 min (n = 4) and 30 min (n = 5)", in full up to eight levels.
pub fn sizes(labels: &[String], n: impl Iterator<Item = usize>) -> String {
    let n: Vec<usize> = n.collect();
    if labels.len() > 8 {
        let (least, most) = (n.iter().min().copied().unwrap_or(0), n.iter().max().copied().unwrap_or(0));
        let each = if least == most { format!("{least}") } else { format!("{least} to {most}") };
        return format!("{} levels with {each} observations each", labels.len());
    }
    listed(labels.iter().zip(&n).map(|(level, n)| format!("{level} (n = {})", number::count(*n))))
}

/// "a, b and c".
pub fn listed(words: impl Iterator<Item = String>) -> String {
    let words: Vec<String> = words.collect();
    match words.split_last() {
        None => String::new(),
        Some((only, [])) => only.clone(),
        Some((last, others)) => format!("{} and {last}", others.join(", ")),
    }
}

/// The outcome with its unit: "recalled (words)".
pub fn outcome_with_unit(study: &Study) -> String {
    match &study.unit {
        Some(unit) => format!("{} ({unit})", study.outcome),
        None => study.outcome.clone(),
    }
}

/// The groups that a test compares: level, n, mean, SD.
pub fn groups_table(study: &Study, summary: &Summary) -> Table {
    let spreads = summary.groups.iter().filter_map(|group| Some(group.sd()? / (group.n as f64).sqrt()));
    let precision = Precision::for_column(spreads);
    let mut table = Table::new(format!("Groups analysed: {}", outcome_with_unit(study)))
        .text_column("Level")
        .number_column("n")
        .number_column("Mean")
        .number_column("SD");
    for (level, group) in study.levels.labels.iter().zip(&summary.groups) {
        let sd = group.sd().map_or_else(Cell::absent, |sd| Cell::estimate(sd, precision.finer()));
        let mean = Cell::estimate(summary.origin + group.mean, precision);
        table.push(Row::new([Cell::text(level.clone()), Cell::count(group.n), mean, sd]));
    }
    match left_out(study) {
        Some(note) => table.note(note),
        None => table,
    }
}

/// "Not analysed: 3 rows with a missing value and 1 row excluded by rule …", where there were any.
pub fn left_out(study: &Study) -> Option<String> {
    let missing: usize = study.account.iter().map(|account| account.missing).sum();
    let excluded: usize = study.account.iter().map(|account| account.excluded).sum();
    let rows = |n: usize, why: &str| match n {
        0 => None,
        1 => Some(format!("1 row {why}")),
        n => Some(format!("{} rows {why}", number::count(n))),
    };
    let parts = [rows(missing, "with a missing value"), rows(excluded, "excluded by rule")];
    let parts = listed(parts.into_iter().flatten());
    (!parts.is_empty()).then(|| format!("Not analysed: {parts}; the study's answer accounts for them."))
}
