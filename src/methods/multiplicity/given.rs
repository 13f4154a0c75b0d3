//! p-values that come from elsewhere, adjusted as one family.

use super::graph::GraphDecision;
use super::ordered::in_order;
use super::p_values;
use super::{Adjust, CannotCompare, Order};

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
    pub adjust: Adjust,
    pub family_size: usize,
    pub alpha: f64,
    /// The rows' per-comparison alpha where it is one for all.
    pub alpha_per_comparison: Option<f64>,
    pub rows: Vec<GivenRow>,
    /// How an ordered procedure went, in its own order.
    pub path: Option<GraphDecision>,
}

/// The decision on every given p-value; each must be from 0 to 1. `order` is for the ordered procedures.
///
/// # Errors
/// [`CannotCompare`] for a procedure that needs more than p-values, or an ordered one without its order.
pub fn adjust_given(
    given: &[(String, f64)],
    adjust: Adjust,
    order: Option<&Order>,
    alpha: f64,
) -> Result<GivenComparisons, CannotCompare> {
    let raw: Vec<f64> = given.iter().map(|(_, p)| *p).collect();
    let (adjusted, levels, path) = match adjust {
        Adjust::PValues(method) => {
            let levels = p_values::alpha_per_comparison(&raw, method, alpha);
            (p_values::adjusted(&raw, method), levels, None)
        }
        adjust if adjust.ordered() => {
            let found = in_order(order, &raw, alpha)?;
            (found.adjusted, Some(found.levels), Some(found.path))
        }
        _ => return Err(CannotCompare::NoOrder),
    };
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
    Ok(GivenComparisons { adjust, family_size: rows.len(), alpha, alpha_per_comparison: common, rows, path })
}
