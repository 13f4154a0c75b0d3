//! Comparisons with a control, and the studentized maximum modulus, against values in ball arithmetic.
//!
//! Sources: `data/values/dunnett_*.json` and `data/values/max_modulus_*.json`, 20 digits, each file telling how.

use crate::accuracy::{agree, permitted};
use crate::cases::{number, relative_error};
use levelwise::numerics::distributions::many_to_one::{self, Sides};
use levelwise::numerics::distributions::{student_t, studentized_maximum};
use serde_json::Value;

fn loadings(case: &Value) -> Vec<f64> {
    let control = number(&case["n0"]);
    let sizes = case["n"].as_array().unwrap().iter().map(number);
    sizes.map(|n| (n / (n + control)).sqrt()).collect()
}

#[test]
pub fn tails_and_quantiles_for_comparisons_with_a_control_agree_with_the_reference_values() {
    for (name, sides) in [("one", Sides::Greater), ("two", Sides::Both)] {
        agree(&format!("dunnett_{name}_sided_sf"), "many to one, tail", |case| {
            many_to_one::sf(number(&case["d"]), &loadings(case), number(&case["df"]), sides).unwrap()
        });
        agree(&format!("dunnett_{name}_sided_quantile"), "many to one, quantile", |case| {
            let p = number(&case["upper_p"]);
            many_to_one::upper_quantile(p, &loadings(case), number(&case["df"]), sides).unwrap()
        });
    }
}

#[test]
pub fn the_studentized_maximum_modulus_agrees_with_the_reference_values() {
    let count = |case: &Value| case["k"].as_u64().unwrap() as usize;
    agree("max_modulus_sf", "studentized maximum, tail", |case| {
        studentized_maximum::sf(number(&case["m"]), count(case), number(&case["df"])).unwrap()
    });
    agree("max_modulus_quantile", "studentized maximum, quantile", |case| {
        studentized_maximum::upper_quantile(number(&case["upper_p"]), count(case), number(&case["df"]))
            .unwrap()
    });
}

#[test]
fn one_comparison_with_the_control_is_a_t_test() {
    for loading in [0.0, 0.3, std::f64::consts::FRAC_1_SQRT_2, 0.99] {
        for df in [1.0, 4.5, 60.0, f64::INFINITY] {
            for d in [0.1, 1.0, 2.5, 9.0] {
                let t = student_t::sf(d, df).unwrap();
                let both = many_to_one::sf(d, &[loading], df, Sides::Both).unwrap();
                let greater = many_to_one::sf(d, &[loading], df, Sides::Greater).unwrap();
                let allowed = permitted("many to one, tail");
                assert!(relative_error(both, 2.0 * t) < allowed, "{loading} {df} {d}: {both}");
                assert!(relative_error(greater, t) < allowed, "{loading} {df} {d}: {greater}");
            }
        }
    }
}

#[test]
fn uncorrelated_comparisons_give_the_studentized_maximum() {
    for df in [2.0, 30.0, f64::INFINITY] {
        for d in [0.2, 2.0, 6.0] {
            let maximum = studentized_maximum::sf(d, 4, df).unwrap();
            let comparisons = many_to_one::sf(d, &[0.0; 4], df, Sides::Both).unwrap();
            assert!(relative_error(comparisons, maximum) < 1e-12, "{df} {d}");
            let sum = maximum + studentized_maximum::cdf(d, 4, df).unwrap();
            assert!((sum - 1.0).abs() < 1e-13, "{sum}");
        }
    }
}

#[test]
fn lower_tails_and_quantiles_of_comparisons_go_back() {
    for loadings in [vec![0.5; 3], vec![0.9, 0.2, 0.7], vec![0.99, 0.99, 0.1], vec![0.8; 50]] {
        for df in [1.0, 12.0, f64::INFINITY] {
            for p in [1e-12, 1e-4, 0.05, 0.3, 0.7, 0.95, 0.999] {
                for sides in [Sides::Both, Sides::Greater] {
                    let d = many_to_one::upper_quantile(p, &loadings, df, sides).unwrap();
                    let back = many_to_one::sf(d, &loadings, df, sides).unwrap();
                    assert!(relative_error(back, p) < 1e-10, "{loadings:?} {df} {p} {sides:?}: {back:e}");
                    let sum = back + many_to_one::cdf(d, &loadings, df, sides).unwrap();
                    assert!((sum - 1.0).abs() < 1e-12, "{loadings:?} {df} {p} {sides:?}: {sum}");
                }
            }
        }
    }
}
