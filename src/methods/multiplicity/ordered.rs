//! Hypotheses in a declared order: a graph decides in its own order, and the rows have theirs.

use super::CannotCompare;
use super::graph::{Graph, GraphDecision};

/// The declared order of a family, with the graph whose hypotheses stand in that order.
#[derive(Debug, Clone)]
pub struct Order {
    /// Index of the comparison at each place.
    pub places: Vec<usize>,
    pub graph: Graph,
}

/// What the graph decides, by row.
pub(super) struct InOrder {
    pub adjusted: Vec<f64>,
    /// The level at which each was judged.
    pub levels: Vec<f64>,
    /// In the declared order.
    pub path: GraphDecision,
}

/// The decisions on the raw p-values of the rows.
pub(super) fn in_order(order: Option<&Order>, raw: &[f64], alpha: f64) -> Result<InOrder, CannotCompare> {
    let order = order.filter(|order| order.places.len() == raw.len()).ok_or(CannotCompare::NoOrder)?;
    let placed: Vec<f64> = order.places.iter().map(|row| raw[*row]).collect();
    let path = order.graph.decide(&placed, alpha)?;
    Ok(InOrder { adjusted: by_row(order, &path.adjusted), levels: by_row(order, &path.level), path })
}

/// Values in the declared order as values by row.
pub(super) fn by_row<T: Clone + Default>(order: &Order, values: &[T]) -> Vec<T> {
    let mut rows = vec![T::default(); values.len()];
    order.places.iter().zip(values).for_each(|(row, value)| rows[*row] = value.clone());
    rows
}
