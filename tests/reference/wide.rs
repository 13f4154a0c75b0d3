//! Tails, quantiles and noncentralities over wide ranges of the arguments.
//!
//! Source: `data/wide/*.json`, ball arithmetic to 22 digits (`compute.py` beside them), parameters and points being the very
//! doubles that the functions get. Quantiles are compared with the root itself.

use crate::accuracy::agree_on;
use crate::cases::number;
use levelwise::numerics::OutOfDomain;
use levelwise::numerics::distributions::{
    beta, chi_squared, fisher_f, noncentral_chi_squared, noncentral_f, noncentral_t, normal, student_t,
};
use serde_json::Value;

/// The functions of one distribution, of a value or a probability and the parameters of a case.
type Function = fn(f64, &Value) -> Result<f64, OutOfDomain>;
struct Functions {
    cdf: Function,
    sf: Function,
    quantile: Function,
    upper_quantile: Function,
}

macro_rules! functions {
    ($module:ident $(, $parameter:literal)*) => {
        Functions {
            cdf: |x, _case| $module::cdf(x $(, number(&_case[$parameter]))*),
            sf: |x, _case| $module::sf(x $(, number(&_case[$parameter]))*),
            quantile: |p, _case| $module::quantile(p $(, number(&_case[$parameter]))*),
            upper_quantile: |p, _case| $module::upper_quantile(p $(, number(&_case[$parameter]))*),
        }
    };
}

/// Checks both tails at x, split by size into `rows` (above 1e-20, below), and the quantile of p.
fn check(file: &str, rows: [&str; 2], quantile_row: &str, functions: &Functions) {
    for (field, tail) in [("lower", functions.cdf), ("upper", functions.sf)] {
        for (row, large) in [(rows[0], true), (rows[1], false)] {
            agree_on(file, field, row, |case| {
                // A tail below the smallest normal double is no part of the promise.
                let expected = number(&case[field]);
                let wanted = expected > 1e-300 && (expected > 1e-20) == large;
                wanted.then(|| tail(number(&case["x"]), case).unwrap())
            });
        }
    }
    agree_on(file, "quantile", quantile_row, |case| {
        let function = if case["tail"] == "l" { functions.quantile } else { functions.upper_quantile };
        Some(function(number(&case["p"]), case).unwrap())
    });
}

#[test]
pub fn central_distributions_agree_with_ball_arithmetic_over_wide_ranges() {
    let rows = ["central over wide ranges, p above 1e-20", "central over wide ranges, p down to 1e-300"];
    let quantile = "central over wide ranges, quantile";
    check("wide/normal", rows, quantile, &functions!(normal));
    check("wide/student_t", rows, quantile, &functions!(student_t, "df"));
    check("wide/chi_squared", rows, quantile, &functions!(chi_squared, "df"));
    check("wide/fisher_f", rows, quantile, &functions!(fisher_f, "df1", "df2"));
    check("wide/beta", rows, quantile, &functions!(beta, "a", "b"));
}

#[test]
pub fn noncentral_distributions_agree_with_ball_arithmetic_over_wide_ranges() {
    let rows = ["noncentral over wide ranges, tail"; 2];
    let quantile = "noncentral over wide ranges, quantile";
    check("wide/noncentral_t", rows, quantile, &functions!(noncentral_t, "df", "ncp"));
    check("wide/noncentral_chi_squared", rows, quantile, &functions!(noncentral_chi_squared, "df", "ncp"));
    check("wide/noncentral_f", rows, quantile, &functions!(noncentral_f, "df1", "df2", "ncp"));
}

#[test]
pub fn solved_noncentralities_agree_with_ball_arithmetic_over_wide_ranges() {
    let solvers: [(&str, Function); 3] = [
        ("wide/noncentral_t", |x, case| {
            noncentral_t::noncentrality(x, number(&case["df"]), number(&case["p"]))
        }),
        ("wide/noncentral_chi_squared", |x, case| {
            noncentral_chi_squared::noncentrality(x, number(&case["df"]), number(&case["p"]))
        }),
        ("wide/noncentral_f", |x, case| {
            noncentral_f::noncentrality(x, number(&case["df1"]), number(&case["df2"]), number(&case["p"]))
        }),
    ];
    let row = "noncentral over wide ranges, noncentrality";
    for (file, solve) in solvers {
        agree_on(file, "noncentrality", row, |case| {
            // Some cases have no such noncentrality in the range of the promise.
            case.get("noncentrality").map(|_| solve(number(&case["x"]), case).unwrap())
        });
    }
}
