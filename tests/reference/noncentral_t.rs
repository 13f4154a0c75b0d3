//! The noncentral t distribution and limits of its noncentrality against values in ball arithmetic.
//!
//! Sources: `data/values/noncentral_t_*.json` and `data/values/ncp_limits_t.json`, 20 digits, each file telling how.

use crate::accuracy::agree;
use crate::cases::{number, relative_error};
use levelwise::numerics::distributions::{noncentral_t, student_t};

#[test]
pub fn both_tails_of_the_noncentral_t_agree_with_the_reference_values() {
    agree("noncentral_t_cdf", "noncentral t, tail", |case| {
        noncentral_t::cdf(number(&case["t"]), number(&case["df"]), number(&case["delta"])).unwrap()
    });
    agree("noncentral_t_sf", "noncentral t, tail", |case| {
        noncentral_t::sf(number(&case["t"]), number(&case["df"]), number(&case["delta"])).unwrap()
    });
}

#[test]
pub fn limits_of_the_noncentrality_of_t_agree_with_the_reference_values() {
    agree("ncp_limits_t", "noncentral t, noncentrality", |case| {
        let a = 0.5 * (1.0 - number(&case["level"]));
        let p = if case["side"] == "lower" { 1.0 - a } else { a };
        noncentral_t::noncentrality(number(&case["t"]), number(&case["df"]), p).unwrap()
    });
}

#[test]
fn quantiles_of_the_noncentral_t_go_back_to_their_probability() {
    for df in [0.5, 1.0, 3.0, 10.0, 200.0, 1e5, f64::INFINITY] {
        for ncp in [-40.0, -3.0, 0.0, 0.5, 2.0, 10.0, 1000.0, 1e4] {
            for p in [1e-10, 1e-3, 0.05, 0.4, 0.7, 0.95] {
                let low = noncentral_t::quantile(p, df, ncp).unwrap();
                let high = noncentral_t::upper_quantile(p, df, ncp).unwrap();
                if low.is_finite() && high.is_finite() {
                    let back = noncentral_t::cdf(low, df, ncp).unwrap();
                    assert!(relative_error(back, p) < 1e-10, "cdf {p} {df} {ncp}: {back}");
                    let back = noncentral_t::sf(high, df, ncp).unwrap();
                    assert!(relative_error(back, p) < 1e-10, "sf {p} {df} {ncp}: {back}");
                }
            }
        }
        for t in [-20.0, -1.0, 0.0, 0.3, 5.0] {
            let (central, noncentral) =
                (student_t::sf(t, df).unwrap(), noncentral_t::sf(t, df, 0.0).unwrap());
            assert!(relative_error(noncentral, central) < 1e-13, "{t} {df}");
        }
    }
}

/// Far out the tail is its leading power; with noncentrality 0 that is the central tail, and from one point to the next it falls
/// like t^-df for any noncentrality.
#[test]
fn the_tails_of_the_noncentral_t_are_powers_far_out() {
    for df in [0.01, 0.5, 2.0] {
        for t in [1e9, 1e24, 1e26, 1e60, 1e100] {
            let (central, noncentral) =
                (student_t::sf(t, df).unwrap(), noncentral_t::sf(t, df, 0.0).unwrap());
            let allowed = if df < 0.5 { 1e-10 } else { 1e-12 };
            assert!(relative_error(noncentral, central) < allowed, "{t:e} {df}: {noncentral:e} {central:e}");
            for ncp in [-3.0, 0.5, 20.0] {
                let ratio =
                    noncentral_t::cdf(-2.0 * t, df, ncp).unwrap() / noncentral_t::cdf(-t, df, ncp).unwrap();
                assert!(relative_error(ratio, libm::exp2(-df)) < 1e-7, "{t:e} {df} {ncp}: {ratio}");
            }
        }
    }
}
