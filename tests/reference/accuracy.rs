//! The one table of permitted relative errors; a row only ever gets tighter. What is reached stands in `ACCURACY.md`
//! (`accuracy_page.rs` writes it); run with `--nocapture` to see it here.

use crate::cases::{cases, number, relative_error};
use serde_json::Value;
use std::cell::RefCell;

/// How well one function agrees with one list of reference values.
#[derive(Debug, Clone)]
pub struct Agreement {
    pub file: String,
    pub field: String,
    /// Its row in the table of permitted errors.
    pub row: String,
    pub cases: usize,
    pub permitted: String,
    /// The largest relative error.
    pub worst: f64,
    /// The case where it is, as in the file.
    pub at: Value,
}

thread_local! {
    /// Of the checks that have run in this thread: the page of accuracies collects them here.
    static FOUND: RefCell<Vec<Agreement>> = const { RefCell::new(Vec::new()) };
}

/// Takes what has been found in this thread so far.
pub fn take_found() -> Vec<Agreement> {
    FOUND.take()
}

/// Checks `compute` against the `value` of every case of `data/values/FILE.json` to the relative error permitted for
/// `row`, and notes the worst case.
pub fn agree(file: &str, row: &str, compute: impl Fn(&Value) -> f64) {
    agree_on(file, "value", row, |case| Some(compute(case)));
}

/// The same for another `field` than `value`, and for those cases alone for which `compute` has an answer.
pub fn agree_on(file: &str, field: &str, row: &str, compute: impl Fn(&Value) -> Option<f64>) {
    let allowed = permitted(row);
    agree_each(file, field, row, &format!("{allowed:.0e}"), |case| {
        compute(case).map(|value| (value, allowed))
    });
}

/// The same where each case has a permitted error of its own, which comes with the answer; `permitted` says in words what
/// it is.
pub fn agree_each(
    file: &str,
    field: &str,
    row: &str,
    permitted: &str,
    compute: impl Fn(&Value) -> Option<(f64, f64)>,
) {
    let (mut count, mut worst, mut at) = (0, 0.0, Value::Null);
    for case in cases(file) {
        let Some((computed, allowed)) = compute(&case) else { continue };
        let error = relative_error(computed, number(&case[field]));
        assert!(error <= allowed, "{file}: {case}: got {computed:e}, relative error {error:e}");
        if error > worst {
            (worst, at) = (error, case);
        }
        count += 1;
    }
    assert!(count > 0, "{file} has no case for {row}");
    println!("{file}, {field}: worst relative error {worst:.1e} at {at}");
    let (file, field, row, permitted) = (file.into(), field.into(), row.into(), permitted.into());
    FOUND.with_borrow_mut(|found| {
        found.push(Agreement { file, field, row, cases: count, permitted, worst, at })
    });
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
    ("central, a shape near 0", 1e-12),
    ("central over wide ranges, p above 1e-20", 3e-14),
    ("central over wide ranges, p down to 1e-300", 1e-12),
    ("central over wide ranges, quantile", 1e-13),
    ("noncentral over wide ranges, tail", 3e-13),
    ("noncentral over wide ranges, quantile", 1e-13),
    ("noncentral over wide ranges, noncentrality", 1e-11),
    ("studentized range, tail", 1e-13),
    ("studentized range, tabulated tail", 1e-13),
    ("studentized range, quantile", 1e-13),
    ("many to one, tail", 1e-13),
    ("many to one, quantile", 1e-12),
    ("studentized maximum, tail", 1e-13),
    ("studentized maximum, quantile", 1e-13),
    ("studentized range, wide, tail", 2e-13),
    ("studentized range, wide, quantile", 1e-13),
    ("studentized maximum, wide, tail", 1e-13),
    ("studentized maximum, wide, quantile", 1e-13),
    ("many to one, wide, tail", 2e-12),
    ("many to one, wide, quantile", 1e-12),
    ("amalgamated means, tail", 1e-13),
    ("amalgamated means, quantile", 1e-13),
    ("amalgamated means of unequal sizes", 1e-13),
    ("permutation F", 1e-15),
    ("rank counts", 1e-14),
    ("rank counts with ties", 1e-14),
    ("rank statistics in large samples", 1e-13),
    ("comparisons by ranks", 1e-13),
    ("probability of superiority", 1e-12),
    ("Glass's delta", 1e-9),
    ("ratio of means", 1e-12),
    ("detectable difference", 1e-10),
    ("multivariate t, rank 2 and 3", 1e-13),
    ("multivariate t, quantile", 1e-12),
    ("multivariate t, rectangle, absolute", 1e-14),
    ("noncentral t, tail", 1e-13),
    // One limit is 1.2e-5 beside a standard error of 1: its last bits are those of the level.
    ("noncentral t, noncentrality", 1e-10),
    ("noncentral F, tail", 1e-13),
    ("noncentral F, noncentrality", 1e-12),
    ("power of the F test", 1e-13),
    // The reference is another program's double-precision result for an approximation with constants of six digits.
    ("Shapiro-Wilk, W", 1e-8),
    ("Shapiro-Wilk, p", 1e-7),
    ("noncentral F, round trip of a quantile", 1e-11),
];
