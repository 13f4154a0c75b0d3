//! p-values that come from elsewhere, adjusted as one family.

use super::p_values::{self, PValueMethod};

/// One given p-value, decided.
#[derive(Debug, Clone, PartialEq)]
pub struct GivenRow {
    pub name: String,
    pub p: f64,
    pub p_adjusted: f64,
    /// The level at which the raw p-value is judged; `None` where the method has none.
    pub alpha: Option<f64>,
    pub rejected: bool,
}

/// A family of given p-values, decided.
#[derive(Debug, Clone, PartialEq)]
pub struct GivenComparisons {
    pub method: PValueMethod,
    pub family_size: usize,
    pub alpha: f64,
    /// The rows' per-comparison alpha where it is one for all.
    pub alpha_per_comparison: Option<f64>,
    pub rows: Vec<GivenRow>,
}

/// The decision on every given p-value; each must be from 0 to 1.
pub fn adjust_given(given: &[(String, f64)], method: PValueMethod, alpha: f64) -> GivenComparisons {
    let raw: Vec<f64> = given.iter().map(|(_, p)| *p).collect();
    let adjusted = p_values::adjusted(&raw, method);
    let levels = p_values::alpha_per_comparison(&raw, method, alpha);
    let rows: Vec<GivenRow> = (0..raw.len())
        .map(|i| GivenRow {
            name: given[i].0.clone(),
            p: raw[i],
            p_adjusted: adjusted[i],
            alpha: levels.as_ref().map(|levels| levels[i]),
            rejected: adjusted[i] <= alpha,
        })
        .collect();
    let first = rows.first().and_then(|row| row.alpha);
    let common = first.filter(|first| rows.iter().all(|row| row.alpha == Some(*first)));
    GivenComparisons { method, family_size: rows.len(), alpha, alpha_per_comparison: common, rows }
}
