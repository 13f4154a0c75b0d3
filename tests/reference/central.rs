//! Tails of the central t, F, chi-squared, beta and normal distributions.
//!
//! Source: `data/values/central_tails.json`, incomplete beta and gamma functions in ball arithmetic to 20 digits.
//! Quantiles are checked by going back through `cdf` and `sf`.

use crate::accuracy::{agree_each, agree_on, permitted};
use crate::cases::{number, relative_error};
use levelwise::numerics::distributions::{beta, chi_squared, fisher_f, normal, student_t};
use serde_json::Value;

fn tail_of(case: &Value) -> f64 {
    let x = number(&case["x"]);
    let get = |name: &str| number(&case[name]);
    match (case["distribution"].as_str().unwrap(), case["tail"].as_str().unwrap()) {
        ("t", "upper") => student_t::sf(x, get("df")),
        ("t", "lower") => student_t::cdf(x, get("df")),
        ("F", "upper") => fisher_f::sf(x, get("df1"), get("df2")),
        ("F", "lower") => fisher_f::cdf(x, get("df1"), get("df2")),
        ("chi2", "upper") => chi_squared::sf(x, get("df")),
        ("chi2", "lower") => chi_squared::cdf(x, get("df")),
        ("beta", "upper") => beta::sf(x, get("a"), get("b")),
        ("beta", "lower") => beta::cdf(x, get("a"), get("b")),
        other => panic!("{other:?}"),
    }
    .unwrap()
}

#[test]
pub fn central_tails_agree_with_the_reference_values() {
    for (row, wanted) in [("central, p above 1e-20", true), ("central, p down to 1e-300", false)] {
        let wanted = |case: &Value| (number(&case["value"]) > 1e-20) == wanted;
        let is_beta = |case: &Value| case["distribution"] == "beta";
        agree_on("central_tails", "value", row, |case| {
            (wanted(case) && !is_beta(case)).then(|| tail_of(case))
        });
        // The table's decimal x is rounded to a double before it reaches us; next to 1 that alone moves 1 - x.
        let given = |case: &Value| permitted(row).max(f64::EPSILON / (1.0 - number(&case["x"])));
        let words = format!("{:.0e}, or the rounding of x", permitted(row));
        agree_each("central_tails", "value", row, &words, |case| {
            (wanted(case) && is_beta(case)).then(|| (tail_of(case), given(case)))
        });
    }
}

/// Source: Abramowitz and Stegun (1964), table 26.1 and 26.2, from memory, and 50-digit arithmetic for
/// the far tails (mpmath's erfc).
#[test]
fn normal_tails_agree_with_fifty_digit_arithmetic() {
    for (x, expected) in [
        (1.0, 0.158_655_253_931_457_05),
        (5.0, 2.866_515_718_791_939e-7),
        (10.0, 7.619_853_024_160_527e-24),
        (37.0, 5.725_571_222_524_577e-300),
    ] {
        assert!(relative_error(normal::sf(x).unwrap(), expected) < permitted("central, p down to 1e-300"));
        assert!(relative_error(normal::cdf(-x).unwrap(), expected) < permitted("central, p down to 1e-300"));
    }
}

/// Shapes near 0 put nearly all of a beta distribution beside one end. Source: mpmath 1.4.1 with 40 digits,
/// `1 - betainc(b, a, 0, 1 - x, regularized=True)`, x and the shapes being the doubles written here.
#[test]
fn lower_tails_of_beta_and_f_with_a_shape_near_zero_agree_with_forty_digit_arithmetic() {
    for (a, b, x, expected) in [
        (3.2, 0.01, 0.996_093_75, 0.039_056_604_753_829_155),
        (3.0, 0.02, 0.99, 0.060_813_955_423_585_41),
        (50.0, 0.001, 0.9999, 0.004_725_635_129_707_298),
        (0.1, 0.001, 0.99, 0.014_290_026_397_182_007),
        (12.0, 0.001, 0.9999, 0.006_173_207_245_024_341),
        (0.5, 0.001, 0.75, 0.002_628_952_444_221_206),
    ] {
        let error = relative_error(beta::cdf(x, a, b).unwrap(), expected);
        assert!(error < permitted("central, a shape near 0"), "beta({a}, {b}) at {x}: {error:e}");
    }
    let f = fisher_f::cdf(1.0, 3.0, 0.01).unwrap();
    assert!(relative_error(f, 0.025_162_155_252_394_484) < permitted("central, a shape near 0"), "{f}");
}

#[test]
fn quantiles_go_back_to_their_probability_in_both_tails() {
    let tails = [1e-300, 1e-100, 1e-20, 1e-9, 1e-3, 0.05, 0.2, 0.3, 0.5, 0.8];
    let dfs = [0.7, 1.0, 2.0, 5.5, 30.0, 1000.0, 1e7, f64::INFINITY];
    // Beside the permitted error, the effect of the quantile's own last two bits is allowed: it reaches 1e-11 where
    // df is large and p is 1e-300.
    let check = |what: &str, p: f64, quantile: f64, back: &dyn Fn(f64) -> f64| {
        if !(1e-300..1e300).contains(&quantile.abs()) {
            return;
        }
        let bits = 2.0 * f64::EPSILON;
        let rounding = (back(quantile * (1.0 + bits)) - back(quantile * (1.0 - bits))).abs() / p;
        let error = relative_error(back(quantile), p);
        let allowed = permitted("central, round trip of a quantile").max(rounding);
        assert!(error <= allowed, "{what} at {p:e}: {error:e}");
    };
    for p in tails {
        check("normal", p, normal::upper_quantile(p).unwrap(), &|x| normal::sf(x).unwrap());
        for df in dfs {
            let t = student_t::upper_quantile(p, df).unwrap();
            check(&format!("t({df})"), p, t, &|x| student_t::sf(x, df).unwrap());
            assert_eq!(student_t::quantile(p, df).unwrap(), -t);
            if df.is_finite() {
                let (low, high) =
                    (chi_squared::quantile(p, df).unwrap(), chi_squared::upper_quantile(p, df).unwrap());
                check(&format!("chi2({df})"), p, high, &|x| chi_squared::sf(x, df).unwrap());
                check(&format!("chi2({df}) lower"), p, low, &|x| chi_squared::cdf(x, df).unwrap());
            }
            for df2 in dfs.into_iter().filter(|df2| df.is_finite() || df2.is_finite()) {
                let low = fisher_f::quantile(p, df, df2).unwrap();
                let high = fisher_f::upper_quantile(p, df, df2).unwrap();
                check(&format!("F({df}, {df2})"), p, high, &|x| fisher_f::sf(x, df, df2).unwrap());
                check(&format!("F({df}, {df2}) lower"), p, low, &|x| fisher_f::cdf(x, df, df2).unwrap());
            }
        }
    }
}
