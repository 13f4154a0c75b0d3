//! How trends, scores and their order are said.

use crate::answer::number;
use crate::methods::trend::{TrendRow, Weights};
use crate::study::Levels;

/// "none, 15 min, 30 min", in order; empty without levels.
pub fn order(labels: &[String]) -> String {
    let shown: Vec<String> = labels.iter().take(12).map(|label| format!("\"{label}\"")).collect();
    let more = if labels.len() > 12 { ", …" } else { "" };
    shown.join(", ") + more
}

/// "0, 15, 30".
pub fn scores(scores: &[f64]) -> String {
    scores.iter().map(|score| number::plain(*score)).collect::<Vec<_>>().join(", ")
}

/// An order that was taken from the data and that nobody has confirmed.
pub fn unconfirmed_order(levels: &Levels) -> Option<String> {
    levels.order_of_appearance.then(|| {
        format!(
            "The levels stand in the order of their first appearance in the data: {}. A trend depends on it; confirm it by writing levels in the study.",
            order(&levels.labels)
        )
    })
}

/// The scores that the levels' names suggest: the first number in each, 0 for a single first level without any, where that makes
/// an increasing list. "none", "15 min" and "30 min" suggest 0, 15 and 30.
pub fn scores_in_names(labels: &[String]) -> Option<Vec<f64>> {
    let found: Vec<Option<f64>> = labels.iter().map(|label| first_number(label)).collect();
    let without_digits = labels.first().is_some_and(|label| !label.contains(|c: char| c.is_ascii_digit()));
    let scores: Option<Vec<f64>> = match found.split_first() {
        Some((None, others)) if without_digits => {
            std::iter::once(Some(0.0)).chain(others.iter().copied()).collect()
        }
        _ => found.into_iter().collect(),
    };
    scores.filter(|scores| scores.len() > 1 && scores.windows(2).all(|pair| pair[0] < pair[1]))
}

fn first_number(label: &str) -> Option<f64> {
    let start = label.find(|c: char| c.is_ascii_digit())?;
    let rest = &label[start..];
    let end = rest.find(|c: char| !(c.is_ascii_digit() || c == '.' || c == ',')).unwrap_or(rest.len());
    let text = rest[..end].trim_end_matches(['.', ',']).replace(',', ".");
    text.parse::<f64>().ok().filter(|number| number.is_finite())
}

/// What a degree looks for, in plain words.
pub fn meaning(degree: usize) -> &'static str {
    match degree {
        1 => "a straight line",
        2 => "one bend",
        3 => "two bends",
        _ => "three bends",
    }
}

/// Which way the part of this degree goes.
pub fn direction(row: &TrendRow) -> &'static str {
    match (row.degree, row.slope > 0.0) {
        (1, true) => "rising",
        (1, false) => "falling",
        (2, true) => "curving upwards",
        (2, false) => "curving downwards",
        (_, true) => "turning up at the end",
        (_, false) => "turning down at the end",
    }
}

/// How the levels are weighted.
pub fn weights(weights: Weights) -> &'static str {
    match weights {
        Weights::N => "contrasts orthogonal for the actual group sizes",
        Weights::Equal => "textbook contrasts, every level weighted alike",
    }
}

/// The first letter as a capital.
pub fn capital(text: &str) -> String {
    let mut letters = text.chars();
    letters.next().map(|first| first.to_uppercase().to_string()).unwrap_or_default() + letters.as_str()
}

#[cfg(test)]
mod tests {
    use super::scores_in_names;

    fn suggested(labels: &[&str]) -> Option<Vec<f64>> {
        scores_in_names(&labels.iter().map(|label| (*label).to_string()).collect::<Vec<_>>())
    }

    #[test]
    fn names_with_numbers_suggest_scores() {
        assert_eq!(suggested(&["none", "15 min", "30 min"]), Some(vec![0.0, 15.0, 30.0]));
        assert_eq!(suggested(&["0,5 mg", "1 mg", "2.5 mg"]), Some(vec![0.5, 1.0, 2.5]));
        assert_eq!(suggested(&["grade 1", "grade 2"]), Some(vec![1.0, 2.0]));
    }

    #[test]
    fn names_that_do_not_rise_or_have_no_numbers_suggest_nothing() {
        for labels in [
            &["none", "low", "high"][..],
            &["30 min", "15 min"],
            &["a1", "b1"],
            &["low", "mid", "10"],
            &["1.2.3", "4"],
            &[],
        ] {
            assert_eq!(suggested(labels), None, "{labels:?}");
        }
    }
}
