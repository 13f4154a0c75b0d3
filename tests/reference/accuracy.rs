//! The one table of permitted relative errors; a row only ever gets tighter. Run with `--nocapture` to see the
//! accuracy that was reached.

use crate::cases::{cases, number, relative_error};
use serde_json::Value;

/// Checks `compute` against the `value` of every case of `data/values/FILE.json` to the relative error permitted for
/// `row`, and prints the worst case.
pub fn agree(file: &str, row: &str, compute: impl Fn(&Value) -> f64) {
    agree_on(file, "value", row, |case| Some(compute(case)));
}

/// The same for another `field` than `value`, and for those cases alone for which `compute` has an answer.
pub fn agree_on(file: &str, field: &str, row: &str, compute: impl Fn(&Value) -> Option<f64>) {
    let (mut count, mut worst) = (0, (0.0, String::new()));
    for case in cases(file) {
        let Some(computed) = compute(&case) else { continue };
        let error = relative_error(computed, number(&case[field]));
        assert!(error <= permitted(row), "{file}: {case}: got {computed:e}, relative error {error:e}");
        if error >= worst.0 {
            worst = (error, case.to_string());
        }
        count += 1;
    }
    assert!(count > 0, "{file} has no case for {row}");
    println!("{file}, {field}: worst relative error {:.1e} at {}", worst.0, worst.1);
}

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
    ("studentized range, tail", 1e-13),
    ("studentized range, quantile", 1e-13),
    ("many to one, tail", 1e-13),
    ("many to one, quantile", 1e-12),
    ("studentized maximum, tail", 1e-13),
    ("studentized maximum, quantile", 1e-13),
    ("amalgamated means, tail", 1e-13),
    ("amalgamated means, quantile", 1e-13),
    ("amalgamated means of unequal sizes", 1e-12),
    ("permutation F", 1e-15),
    ("rank counts", 1e-14),
    ("rank counts with ties", 1e-14),
    ("rank statistics in large samples", 1e-13),
    ("multivariate t, rank 2 and 3", 1e-13),
    ("noncentral t, tail", 1e-13),
    // One limit is 1.2e-5 beside a standard error of 1: its last bits are those of the level.
    ("noncentral t, noncentrality", 1e-10),
    ("noncentral F, tail", 1e-13),
    ("noncentral F, noncentrality", 1e-12),
    ("noncentral F, round trip of a quantile", 1e-11),
];
