//! How trends, scores and their order are said.

use crate::answer::number;
use crate::methods::trend::{TrendRow, Weights};

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
