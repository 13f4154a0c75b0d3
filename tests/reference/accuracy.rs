//! The one table of permitted relative errors; a row only ever gets tighter.

/// Permitted relative error of `quantity`.
pub fn permitted(quantity: &str) -> f64 {
    PERMITTED
        .iter()
        .find(|(name, _)| *name == quantity)
        .unwrap_or_else(|| panic!("no row for {quantity} in the table of permitted errors"))
        .1
}

const PERMITTED: &[(&str, f64)] = &[
    ("central, p above 1e-20", 1e-13),
    ("central, p down to 1e-300", 1e-12),
    ("central, round trip of a quantile", 1e-12),
];
