//! A contrast in words: "mean of B and C minus A".

use super::tidy;

/// What the contrast with these coefficients compares, in words.
///
/// Where each side averages its levels, the averages are named; otherwise every weight is written out.
pub fn in_words(coefficients: &[f64], levels: &[String]) -> String {
    let side = |sign: f64| -> Vec<(f64, &str)> {
        let weighted = coefficients.iter().zip(levels).filter(|(c, _)| **c * sign > 0.0);
        weighted.map(|(c, level)| (c.abs(), level.as_str())).collect()
    };
    let (plus, minus) = (side(1.0), side(-1.0));
    let total: f64 = plus.iter().map(|(weight, _)| weight).sum();
    match (average(&plus, total), average(&minus, total)) {
        (Some(plus), Some(minus)) if (total - 1.0).abs() < 1e-9 => format!("{plus} minus {minus}"),
        (Some(plus), Some(minus)) => format!("{} times ({plus} minus {minus})", tidy(total)),
        _ => format!("{} minus ({})", weights(&plus), weights(&minus)),
    }
}

/// "mean of A, B and C" where all weights are alike and make up `total`.
fn average(side: &[(f64, &str)], total: f64) -> Option<String> {
    let share = total / side.len() as f64;
    let alike = side.iter().all(|(weight, _)| (weight - share).abs() <= 1e-9 * total);
    let names: Vec<&str> = side.iter().map(|(_, level)| *level).collect();
    match (alike, names.as_slice()) {
        (false, _) | (_, []) => None,
        (_, [one]) => Some(one.to_string()),
        (_, [first @ .., last]) => Some(format!("mean of {} and {last}", first.join(", "))),
    }
}

fn weights(side: &[(f64, &str)]) -> String {
    let parts = side.iter().map(|(weight, level)| {
        if (weight - 1.0).abs() < 1e-9 { level.to_string() } else { format!("{} × {level}", short(*weight)) }
    });
    parts.collect::<Vec<_>>().join(" + ")
}

/// Four significant digits are enough to recognise a weight; the coefficients themselves are shown beside.
fn short(value: f64) -> String {
    let rounded: f64 = format!("{value:.3e}").parse().unwrap_or(value);
    format!("{rounded}")
}

#[cfg(test)]
mod tests {
    use super::in_words;

    #[test]
    fn averages_are_named_and_other_weights_written_out() {
        let levels = ["A", "B", "C", "D"].map(String::from);
        let words = |c: [f64; 4]| in_words(&c, &levels);
        assert_eq!(words([-1.0, 1.0, 0.0, 0.0]), "B minus A");
        assert_eq!(words([-1.0, 0.5, 0.5, 0.0]), "mean of B and C minus A");
        assert_eq!(words([1.0, -1.0 / 3.0, -1.0 / 3.0, -1.0 / 3.0]), "A minus mean of B, C and D");
        assert_eq!(words([-2.0, 1.0, 1.0, 0.0]), "2 times (mean of B and C minus A)");
        assert_eq!(words([-3.0, -1.0, 1.0, 3.0]), "C + 3 × D minus (3 × A + B)");
    }
}
