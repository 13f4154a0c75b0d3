//! Williams's statistic against values in ball arithmetic.
//!
//! Sources: `data/values/williams_sf.json` and `williams_quantile.json`, 20 digits, each telling how; doses of unequal sizes in
//! `data/williams/unequal.json` for a known standard deviation, 11 to 15 digits, the script beside it.

use crate::accuracy::{agree, agree_on};
use crate::cases::{number, relative_error};
use levelwise::numerics::OutOfDomain;
use levelwise::numerics::distributions::{amalgamated_means, student_t};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use serde_json::Value;

/// The doses' sizes; the control's is 1.
fn sizes(case: &Value) -> Vec<f64> {
    vec![number(&case["n_over_n0"]); case["k"].as_u64().unwrap() as usize]
}

#[test]
pub fn tails_and_quantiles_of_williamss_statistic_agree_with_the_reference_values() {
    agree("williams_sf", "amalgamated means, tail", |case| {
        amalgamated_means::sf(number(&case["t"]), &sizes(case), 1.0, number(&case["df"])).unwrap()
    });
    agree("williams_quantile", "amalgamated means, quantile", |case| {
        let p = number(&case["upper_p"]);
        amalgamated_means::upper_quantile(p, &sizes(case), 1.0, number(&case["df"])).unwrap()
    });
}

#[test]
pub fn doses_of_unequal_sizes_agree_with_the_walk_followed_density_by_density() {
    type Tail = fn(f64, &[f64], f64, f64) -> Result<f64, OutOfDomain>;
    for (field, tail) in [("value", amalgamated_means::sf as Tail), ("lower", amalgamated_means::cdf)] {
        agree_on("williams/unequal", field, "amalgamated means of unequal sizes", |case| {
            let sizes: Vec<f64> = case["sizes"].as_array().unwrap().iter().map(number).collect();
            let (t, control, df) = (number(&case["t"]), number(&case["control"]), number(&case["df"]));
            Some(tail(t, &sizes, control, df).unwrap())
        });
    }
}

/// Source: 5 % points, four decimals, computed independently by quadrature; they round to the two decimals of Williams's
/// (1971) table, printed digits FROM MEMORY.
#[test]
fn the_published_points_for_equal_sizes_come_out() {
    for (df, points) in [
        (f64::INFINITY, [1.7162, 1.7390, 1.7498, 1.7602]),
        (20.0, [1.8071, 1.8343, 1.8475, 1.8603]),
        (42.0, [1.7584, 1.7832, 1.7951, 1.8066]),
    ] {
        for (count, point) in [2, 3, 4, 6].into_iter().zip(points) {
            let t = amalgamated_means::upper_quantile(0.05, &vec![1.0; count], 1.0, df).unwrap();
            assert!((t - point).abs() <= 5e-5, "{count} {df}: {t}");
        }
    }
}

/// Source: the worked example of Williams (1971), FROM MEMORY: the statistics of doses 6 to 3 of 8 animals each are 2.600,
/// 2.600, 1.857 and 0.371, with 42 degrees of freedom and s² = 1.16; the lowest dose with an effect at 5 % is the fourth.
#[test]
fn the_worked_example_ends_at_the_fourth_dose() {
    let p = |t: f64, doses: usize| amalgamated_means::sf(t, &vec![8.0; doses], 8.0, 42.0).unwrap();
    assert!(p(2.600, 6) < 0.01 && p(2.600, 5) < 0.01 && p(1.857, 4) < 0.05, "{}", p(1.857, 4));
    assert!(p(0.371, 3) > 0.05);
}

#[test]
fn arguments_outside_the_domain_are_refused_by_name() {
    let message = |result: Result<f64, OutOfDomain>| result.unwrap_err().to_string();
    assert_eq!(
        message(amalgamated_means::sf(1.0, &[], 1.0, 5.0)),
        "number of doses is 0, but must be from 1 to 20"
    );
    assert_eq!(
        message(amalgamated_means::sf(1.0, &[30.0, 1.0], 1.0, 5.0)),
        "sizes is 30, but must be positive, and from 0.1 to 10 times that of the highest dose"
    );
    assert_eq!(
        message(amalgamated_means::cdf(1.0, &[1.0, 1.0], 2e3, 5.0)),
        "control is 2000, but must be from 0.001 to 1000 times the size of the highest dose"
    );
    assert_eq!(
        message(amalgamated_means::sf(f64::NAN, &[1.0], 1.0, 5.0)),
        "t is NaN, but must be a finite number"
    );
    assert_eq!(
        message(amalgamated_means::quantile(1.5, &[1.0], 1.0, 5.0)),
        "p is 1.5, but must be from 0 to 1"
    );
}

fn doses() -> impl Strategy<Value = (Vec<f64>, f64)> {
    let size = prop::sample::select(vec![2.0, 4.0, 5.0, 6.0, 8.0, 12.0]);
    (prop::collection::vec(size, 1..6), prop_oneof![1.0..40.0f64, 40.0..1500.0f64, 0.02..1.0f64])
}

fn any_number() -> impl Strategy<Value = f64> {
    prop_oneof![
        2 => any::<f64>(),
        1 => prop::sample::select(vec![
            0.0, 1.0, -1.0, 0.5, 1e-308, 5e-324, 1e308, f64::MAX, f64::MIN, f64::INFINITY, f64::NEG_INFINITY, f64::NAN, 0.001,
        ]),
        3 => -12.0..12.0f64,
        2 => 0.0..1.0f64,
    ]
}

/// Far out a tail is a power of t, also where squares of t are no numbers any more.
#[test]
fn far_tails_are_those_of_students_t() {
    for df in [0.2, 1.0, 1.7] {
        for t in [1e90, 1e101, 1e154, 1e160] {
            let expected = student_t::sf(t, df).unwrap();
            let upper = amalgamated_means::sf(t, &[3.0], 5.0, df).unwrap();
            let lower = amalgamated_means::cdf(-t, &[3.0], 5.0, df).unwrap();
            assert!(
                relative_error(upper, expected) < 1e-12 && relative_error(lower, expected) < 1e-12,
                "{df} {t:e}"
            );
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(12), failure_persistence: None, ..ProptestConfig::with_cases(60) })]

    #[test]
    fn one_dose_gives_students_t(t in -8.0..30.0f64, size in 0.5..50.0f64, control in 1.0..400.0f64, df in 1.0..300.0f64) {
        prop_assume!((1e-3..1e3).contains(&(control / size)));
        for (ours, theirs) in [
            (amalgamated_means::sf(t, &[size], control, df).unwrap(), student_t::sf(t, df).unwrap()),
            (amalgamated_means::cdf(t, &[size], control, df).unwrap(), student_t::cdf(t, df).unwrap()),
        ] {
            prop_assert!(relative_error(ours, theirs) < 1e-12, "{ours:e} {theirs:e}");
        }
    }

    #[test]
    fn tails_add_to_one_and_fall_and_go_back((sizes, control) in doses(), t in -6.0..30.0f64, more in 0.01..1.0f64, df in 1.0..200.0f64) {
        let upper = |t| amalgamated_means::sf(t, &sizes, control, df).unwrap();
        let lower = amalgamated_means::cdf(t, &sizes, control, df).unwrap();
        prop_assert!((lower + upper(t) - 1.0).abs() < 1e-13, "{lower} {}", upper(t));
        prop_assert!(upper(t + more) < upper(t) + 1e-14);
        // At least the highest dose alone, at most Bonferroni's bound over the means of u..k, none of which varies more.
        let alone = student_t::sf(t, df).unwrap();
        prop_assert!(upper(t) > alone * (1.0 - 1e-12), "{} {alone}", upper(t));
        prop_assert!(t < 0.0 || upper(t) < alone * sizes.len() as f64 * (1.0 + 1e-12), "{} {alone}", upper(t));
        let (p, back) = if t > 0.0 {
            (upper(t), amalgamated_means::upper_quantile(upper(t), &sizes, control, df).unwrap())
        } else {
            (lower, amalgamated_means::quantile(lower, &sizes, control, df).unwrap())
        };
        prop_assert!((back - t).abs() < 1e-10 * (1.0 + t.abs()), "{p}: {back} {t}");
    }

    #[test]
    fn more_doses_make_a_larger_maximum((sizes, control) in doses(), t in -1.0..6.0f64, df in 2.0..60.0f64) {
        let p = |from: usize| amalgamated_means::sf(t, &sizes[from..], control, df).unwrap();
        for from in 1..sizes.len() {
            prop_assert!(p(from - 1) > p(from) * (1.0 - 1e-12), "{} {}", p(from - 1), p(from));
        }
    }

    #[test]
    fn every_argument_is_answered_or_refused(
        x in any_number(), df in any_number(), control in any_number(), sizes in prop::collection::vec(any_number(), 0..4),
        (good, good_control) in doses()
    ) {
        for (sizes, control) in [(&sizes, control), (&good, good_control), (&good, control)] {
            for p in [amalgamated_means::cdf(x, sizes, control, df), amalgamated_means::sf(x, sizes, control, df)] {
                prop_assert!(p.is_err() || p.is_ok_and(|p| (0.0..=1.0).contains(&p)));
            }
            for t in [amalgamated_means::quantile(x, sizes, control, df), amalgamated_means::upper_quantile(x, sizes, control, df)] {
                prop_assert!(t.is_err() || t.is_ok_and(|t| !t.is_nan()));
            }
        }
    }
}

/// With few degrees of freedom the tail for known σ falls over a small part of the integral, which a coarse one steps over.
#[test]
fn tails_add_to_one_with_the_fewest_degrees_of_freedom() {
    for df in [0.001, 0.01, 0.15, 0.5, 1.0] {
        for t in [-25.3, -1.0, -0.01, 0.3, 2.0, 54.2] {
            for sizes in [&[8.0][..], &[8.0; 3], &[5.0, 6.0, 9.0]] {
                let sum = amalgamated_means::cdf(t, sizes, 8.0, df).unwrap()
                    + amalgamated_means::sf(t, sizes, 8.0, df).unwrap();
                assert!((sum - 1.0).abs() < 2e-11, "{df} {t} {sizes:?}: {:e}", sum - 1.0);
            }
        }
    }
}
