//! What a page can call: the table as text, and the jobs that are timed there.

use crate::{jobs, table::Table};
use levelwise::numerics::OutOfDomain;
use levelwise::numerics::distributions::studentized_range;
use wasm_bindgen::prelude::*;

/// The table, one point a line.
#[wasm_bindgen]
pub fn table() -> String {
    Table::complete().text()
}

/// [`jobs::all_pairs`] of groups of `size` values each, one after the other in `values`.
///
/// # Errors
/// A sentence, if the groups cannot be compared.
#[wasm_bindgen]
pub fn all_pairs(values: &[f64], size: usize) -> Result<Vec<f64>, JsValue> {
    Ok(jobs::all_pairs(groups(values, size))?)
}

/// [`jobs::against_first`] of groups of `size` values each, one after the other in `values`.
///
/// # Errors
/// A sentence, if the groups cannot be compared.
#[wasm_bindgen]
pub fn against_first(values: &[f64], size: usize) -> Result<Vec<f64>, JsValue> {
    Ok(jobs::against_first(groups(values, size))?)
}

/// Upper tail of the studentized range.
///
/// # Errors
/// A sentence, if an argument is out of its domain.
#[wasm_bindgen]
pub fn studentized_range_sf(q: f64, groups: usize, df: f64) -> Result<f64, JsValue> {
    studentized_range::sf(q, groups, df).map_err(in_words)
}

/// The studentized range that is exceeded with probability `upper_p`.
///
/// # Errors
/// A sentence, if an argument is out of its domain.
#[wasm_bindgen]
pub fn studentized_range_upper_quantile(upper_p: f64, groups: usize, df: f64) -> Result<f64, JsValue> {
    studentized_range::upper_quantile(upper_p, groups, df).map_err(in_words)
}

fn groups(values: &[f64], size: usize) -> Vec<Vec<f64>> {
    values.chunks(size.max(1)).map(<[f64]>::to_vec).collect()
}

fn in_words(error: OutOfDomain) -> JsValue {
    error.to_string().into()
}
