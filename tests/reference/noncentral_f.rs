//! The noncentral F and chi-squared distributions and limits of the noncentrality against values in ball arithmetic.
//!
//! Sources: `data/values/noncentral_f_*.json` and `data/values/ncp_limits_f.json`, 20 digits, each file telling how.

use crate::accuracy::{agree, permitted};
use crate::cases::{number, relative_error};
use levelwise::numerics::distributions::{
    fisher_f, noncentral_chi_squared, noncentral_f, noncentral_t, normal,
};
use serde_json::Value;

fn parameters(case: &Value) -> (f64, f64, f64, f64) {
    let get = |name: &str| number(&case[name]);
    (get("f"), get("df1"), get("df2"), get("ncp"))
}

#[test]
pub fn both_tails_of_the_noncentral_f_agree_with_the_reference_values() {
    agree("noncentral_f_cdf", "noncentral F, tail", |case| {
        let (f, df1, df2, ncp) = parameters(case);
        noncentral_f::cdf(f, df1, df2, ncp).unwrap()
    });
    agree("noncentral_f_sf", "noncentral F, tail", |case| {
        let (f, df1, df2, ncp) = parameters(case);
        noncentral_f::sf(f, df1, df2, ncp).unwrap()
    });
}

#[test]
pub fn limits_of_the_noncentrality_of_f_agree_with_the_reference_values() {
    agree("ncp_limits_f", "noncentral F, noncentrality", |case| {
        let a = 0.5 * (1.0 - number(&case["level"]));
        let p = if case["side"] == "lower" { 1.0 - a } else { a };
        noncentral_f::noncentrality(number(&case["f"]), number(&case["df1"]), number(&case["df2"]), p)
            .unwrap()
    });
}

#[test]
fn quantiles_of_the_noncentral_f_go_back_to_their_probability() {
    let allowed = permitted("noncentral F, round trip of a quantile");
    for df1 in [0.7, 1.0, 4.0, 60.0] {
        for df2 in [1.0, 7.0, 300.0, f64::INFINITY] {
            for ncp in [0.0, 0.1, 3.0, 50.0, 1e4] {
                for p in [1e-10, 1e-3, 0.05, 0.4, 0.7, 0.95] {
                    let low = noncentral_f::quantile(p, df1, df2, ncp).unwrap();
                    let back = noncentral_f::cdf(low, df1, df2, ncp).unwrap();
                    assert!(relative_error(back, p) < allowed, "cdf {p} {df1} {df2} {ncp}: {back:e}");
                    let high = noncentral_f::upper_quantile(p, df1, df2, ncp).unwrap();
                    let back = noncentral_f::sf(high, df1, df2, ncp).unwrap();
                    assert!(relative_error(back, p) < allowed, "sf {p} {df1} {df2} {ncp}: {back:e}");
                }
            }
        }
    }
}

#[test]
fn special_cases_of_the_noncentral_f_coincide() {
    for df2 in [1.0, 5.0, 80.0, f64::INFINITY] {
        for f in [0.01, 0.7, 3.0, 40.0] {
            let central = fisher_f::sf(f, 3.0, df2).unwrap();
            let noncentral = noncentral_f::sf(f, 3.0, df2, 0.0).unwrap();
            assert!(relative_error(noncentral, central) < 1e-13, "ncp 0: {f} {df2}");
            for delta in [0.0, 0.4, 2.0, 12.0] {
                // With one numerator df, F' = T'²: both tails of t make the upper tail of F.
                let t = f64::sqrt(f);
                let both =
                    noncentral_t::sf(t, df2, delta).unwrap() + noncentral_t::cdf(-t, df2, delta).unwrap();
                let upper = noncentral_f::sf(f, 1.0, df2, delta * delta).unwrap();
                assert!(relative_error(upper, both) < 1e-12, "{f} {df2} {delta}: {upper} {both}");
            }
        }
    }
    for (x, delta) in [(0.3, 0.2), (4.0, 3.0), (900.0, 20.0)] {
        let root = f64::sqrt(x);
        let both = normal::sf(root - delta).unwrap() + normal::sf(root + delta).unwrap();
        let upper = noncentral_chi_squared::sf(x, 1.0, delta * delta).unwrap();
        assert!(relative_error(upper, both) < 1e-12, "{x} {delta}");
    }
}

/// Near f = 0 each further term of the mixture is smaller by many powers of ten; the common scale once overflowed, and the tail
/// came out as 1 or with four digits. Source: the Poisson sum in ball arithmetic of `data/wide/compute.py`. The
/// upper tail far out underflows.
#[test]
fn tails_at_the_ends_of_the_range_are_tails() {
    for (f, df1, df2, ncp, expected) in [
        (
            5.319_228_130_435_352e-69,
            2.206_406_260_817_798_3,
            776_067.885_138_511_3,
            2.0,
            1.871_095_062_767_419e-76,
        ),
        (
            1.188_442_845_498_538e-27,
            5.599_531_860_321_049,
            2_732.155_874_435_665_7,
            62.261_531_204_593_13,
            4.759_059_073_744_938_6e-89,
        ),
    ] {
        let error = relative_error(noncentral_f::cdf(f, df1, df2, ncp).unwrap(), expected);
        assert!(error < permitted("noncentral over wide ranges, tail"), "{f}: {error:e}");
    }
    assert_eq!(noncentral_chi_squared::sf(1e300, 3.0, 5.0).unwrap(), 0.0);
    assert_eq!(noncentral_chi_squared::cdf(1e300, 3.0, 5.0).unwrap(), 1.0);
    assert_eq!(noncentral_f::sf(1e300, 3.0, f64::INFINITY, 1e7).unwrap(), 0.0);
}

/// Where the probability hardly depends on the noncentrality its digits are few, and what is promised is the probability itself.
#[test]
fn a_solved_noncentrality_gives_the_probability_it_was_solved_for() {
    for (df1, df2) in [(2.0, 27.0), (412_372.0, 1.55), (203_747.0, 3.07), (1.0, 1e6), (60.0, f64::INFINITY)] {
        for ncp in [0.0024, 0.2, 5.0, 400.0, 1e4] {
            for p in [1e-6, 0.025, 0.5, 0.975] {
                let f = noncentral_f::quantile(p, df1, df2, ncp).unwrap();
                let given = noncentral_f::cdf(f, df1, df2, ncp).unwrap();
                let solved = noncentral_f::noncentrality(f, df1, df2, given).unwrap();
                let back = noncentral_f::cdf(f, df1, df2, solved).unwrap();
                let error = relative_error(back, given);
                assert!(error < 1e-13, "{df1} {df2} {ncp} {p}: {solved}, {error:e}");
            }
        }
    }
}
