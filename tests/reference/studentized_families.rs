//! Studentized range, studentized maximum modulus and comparisons with a control, widely and at random: tails and quantiles
//! against quadruple precision, properties, and the messages for arguments outside the domain.
//!
//! Sources: `data/wide/*.json`, 18 digits, each file telling how; `data/wide/studentized.cpp` computes them.

use crate::accuracy::{agree_on, permitted};
use crate::cases::{number, relative_error};
use levelwise::numerics::OutOfDomain;
use levelwise::numerics::distributions::many_to_one::{self, Sides};
use levelwise::numerics::distributions::{student_t, studentized_maximum, studentized_range};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use serde_json::Value;

/// One of the families: its functions with the parameters of a case.
struct Family {
    cdf: fn(f64, &Value) -> Result<f64, OutOfDomain>,
    sf: fn(f64, &Value) -> Result<f64, OutOfDomain>,
    quantile: fn(f64, &Value) -> Result<f64, OutOfDomain>,
    upper_quantile: fn(f64, &Value) -> Result<f64, OutOfDomain>,
    /// The field of a case that holds the point.
    point: &'static str,
}

fn count(case: &Value) -> usize {
    case["k"].as_u64().unwrap() as usize
}

fn df(case: &Value) -> f64 {
    number(&case["df"])
}

fn loadings(case: &Value) -> Vec<f64> {
    case["loadings"].as_array().unwrap().iter().map(number).collect()
}

/// Both tails and the quantile of the smaller one at every case of `data/wide/FILE.json`.
///
/// A tail above 1/2 has an absolute error of the same size as its relative one.
fn agrees(file: &str, row: &str, family: &Family) {
    let file = format!("wide/{file}");
    let point = |case: &Value| number(&case[family.point]);
    agree_on(&file, "value", &format!("{row}, wide, tail"), |case| {
        Some((family.sf)(point(case), case).unwrap())
    });
    agree_on(&file, "lower", &format!("{row}, wide, tail"), |case| {
        Some((family.cdf)(point(case), case).unwrap())
    });
    agree_on(&file, family.point, &format!("{row}, wide, quantile"), |case| {
        let (lower, upper) = (number(&case["lower"]), number(&case["value"]));
        Some(if upper < 0.5 {
            (family.upper_quantile)(upper, case).unwrap()
        } else {
            (family.quantile)(lower, case).unwrap()
        })
    });
}

#[test]
pub fn the_studentized_range_agrees_with_values_at_random_points() {
    agrees(
        "studentized_range",
        "studentized range",
        &Family {
            cdf: |q, case| studentized_range::cdf(q, count(case), df(case)),
            sf: |q, case| studentized_range::sf(q, count(case), df(case)),
            quantile: |p, case| studentized_range::quantile(p, count(case), df(case)),
            upper_quantile: |p, case| studentized_range::upper_quantile(p, count(case), df(case)),
            point: "q",
        },
    );
}

#[test]
pub fn the_studentized_maximum_agrees_with_values_at_random_points() {
    agrees(
        "studentized_maximum",
        "studentized maximum",
        &Family {
            cdf: |m, case| studentized_maximum::cdf(m, count(case), df(case)),
            sf: |m, case| studentized_maximum::sf(m, count(case), df(case)),
            quantile: |p, case| studentized_maximum::quantile(p, count(case), df(case)),
            upper_quantile: |p, case| studentized_maximum::upper_quantile(p, count(case), df(case)),
            point: "m",
        },
    );
}

#[test]
pub fn comparisons_with_a_control_agree_with_values_at_random_points() {
    agrees(
        "many_to_one_both",
        "many to one",
        &Family {
            cdf: |d, case| many_to_one::cdf(d, &loadings(case), df(case), Sides::Both),
            sf: |d, case| many_to_one::sf(d, &loadings(case), df(case), Sides::Both),
            quantile: |p, case| many_to_one::quantile(p, &loadings(case), df(case), Sides::Both),
            upper_quantile: |p, case| many_to_one::upper_quantile(p, &loadings(case), df(case), Sides::Both),
            point: "d",
        },
    );
    agrees(
        "many_to_one_greater",
        "many to one",
        &Family {
            cdf: |d, case| many_to_one::cdf(d, &loadings(case), df(case), Sides::Greater),
            sf: |d, case| many_to_one::sf(d, &loadings(case), df(case), Sides::Greater),
            quantile: |p, case| many_to_one::quantile(p, &loadings(case), df(case), Sides::Greater),
            upper_quantile: |p, case| {
                many_to_one::upper_quantile(p, &loadings(case), df(case), Sides::Greater)
            },
            point: "d",
        },
    );
}

/// Positive degrees of freedom, infinity included.
fn any_df() -> impl Strategy<Value = f64> {
    prop_oneof![4 => (-0.6..16.0f64).prop_map(libm::exp), 1 => Just(f64::INFINITY)]
}

/// Some loadings, positive ones with both sides as well as not.
fn any_loadings() -> impl Strategy<Value = Vec<f64>> {
    prop_oneof![
        (1..30usize, 0.05..0.99f64).prop_map(|(count, loading)| vec![loading; count]),
        prop::collection::vec(0.05..0.99f64, 1..8),
    ]
}

/// A tail and its neighbour may differ the wrong way by their errors alone.
fn not_above(less: f64, more: f64) -> Result<(), TestCaseError> {
    prop_assert!(less <= more + 1e-12 * more.max(1e-3), "{less:e} {more:e}");
    Ok(())
}

/// `quantile` and `upper_quantile` give back the point of which the tails are given; relative to `size`.
fn goes_back(
    x: f64,
    size: f64,
    tails: (f64, f64),
    quantile: impl Fn(f64) -> f64,
    upper_quantile: impl Fn(f64) -> f64,
) -> Result<(), TestCaseError> {
    let (lower, upper) = tails;
    prop_assert!((lower + upper - 1.0).abs() < 1e-12, "{lower} {upper}");
    // A tail near 1 has lost the digits of its complement.
    if (1e-14..0.9).contains(&lower) {
        let back = quantile(lower);
        prop_assert!((back - x).abs() <= 1e-10 * size, "{back} {x}, {lower:e} below");
    }
    if (1e-14..0.9).contains(&upper) {
        let back = upper_quantile(upper);
        prop_assert!((back - x).abs() <= 1e-10 * size, "{back} {x}, {upper:e} above");
    }
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(3), failure_persistence: None, ..ProptestConfig::with_cases(100) })]

    #[test]
    fn tails_of_the_range_are_monotone_and_go_back(p in 0.001..0.999f64, groups in 2..150usize, df in any_df(), by in 1.001..1.3f64) {
        let q = studentized_range::upper_quantile(p, groups, df).unwrap();
        let sf = |q, groups, df| studentized_range::sf(q, groups, df).unwrap();
        not_above(sf(q * by, groups, df), sf(q, groups, df))?;
        not_above(sf(q, groups, df), sf(q, groups + 1, df))?;
        let tails = (studentized_range::cdf(q, groups, df).unwrap(), sf(q, groups, df));
        goes_back(q, q, tails, |p| studentized_range::quantile(p, groups, df).unwrap(),
            |p| studentized_range::upper_quantile(p, groups, df).unwrap())?;
        // Above the median more degrees of freedom make the tail lighter.
        if p < 0.3 {
            not_above(sf(q, groups, df * by), sf(q, groups, df))?;
        }
        prop_assert!(studentized_range::upper_quantile(p / by, groups, df).unwrap() > q);
    }

    #[test]
    fn tails_of_the_maximum_are_monotone_and_go_back(p in 0.001..0.999f64, count in 1..150usize, df in any_df(), by in 1.001..1.3f64) {
        let m = studentized_maximum::upper_quantile(p, count, df).unwrap();
        let sf = |m, count, df| studentized_maximum::sf(m, count, df).unwrap();
        not_above(sf(m * by, count, df), sf(m, count, df))?;
        not_above(sf(m, count, df), sf(m, count + 1, df))?;
        let tails = (studentized_maximum::cdf(m, count, df).unwrap(), sf(m, count, df));
        goes_back(m, m, tails, |p| studentized_maximum::quantile(p, count, df).unwrap(),
            |p| studentized_maximum::upper_quantile(p, count, df).unwrap())?;
        if p < 0.3 {
            not_above(sf(m, count, df * by), sf(m, count, df))?;
        }
        prop_assert!(studentized_maximum::upper_quantile(p / by, count, df).unwrap() > m);
        let comparisons = many_to_one::sf(m, &vec![0.0; count], df, Sides::Both).unwrap();
        prop_assert!(relative_error(comparisons, sf(m, count, df)) < 1e-12, "{comparisons}");
        let single = 2.0 * student_t::sf(m, df).unwrap();
        prop_assert!(relative_error(sf(m, 1, df), single) < 1e-12, "{single}");
    }

    #[test]
    fn tails_for_comparisons_are_monotone_and_go_back(p in 0.001..0.999f64, loadings in any_loadings(), df in any_df(), by in 1.001..1.3f64) {
        for sides in [Sides::Both, Sides::Greater] {
            let d = many_to_one::upper_quantile(p, &loadings, df, sides).unwrap();
            let sf = |d, loadings: &[f64], df| many_to_one::sf(d, loadings, df, sides).unwrap();
            not_above(sf(d + (by - 1.0) * d.abs(), &loadings, df), sf(d, &loadings, df))?;
            let more: Vec<f64> = loadings.iter().copied().chain([0.5]).collect();
            not_above(sf(d, &loadings, df), sf(d, &more, df))?;
            let tails = (many_to_one::cdf(d, &loadings, df, sides).unwrap(), sf(d, &loadings, df));
            goes_back(d, d.abs().max(0.1), tails, |p| many_to_one::quantile(p, &loadings, df, sides).unwrap(),
                |p| many_to_one::upper_quantile(p, &loadings, df, sides).unwrap())?;
            if p < 0.3 {
                not_above(sf(d, &loadings, df * by), sf(d, &loadings, df))?;
            }
            prop_assert!(many_to_one::upper_quantile(p / by, &loadings, df, sides).unwrap() > d);
        }
    }
}

#[test]
fn infinite_degrees_of_freedom_are_the_limit_of_many() {
    for count in [2, 7, 60] {
        for x in [0.5, 3.0, 5.0] {
            let pairs = [1e12, f64::INFINITY].map(|df| {
                let loadings = vec![0.6; count];
                [
                    studentized_range::sf(x, count, df).unwrap(),
                    studentized_maximum::sf(x, count, df).unwrap(),
                    many_to_one::sf(x, &loadings, df, Sides::Both).unwrap(),
                    many_to_one::sf(x, &loadings, df, Sides::Greater).unwrap(),
                ]
            });
            for (many, limit) in pairs[0].iter().zip(pairs[1]) {
                // The tails differ by the order of x⁴/df relative.
                assert!(relative_error(*many, limit) < 1e-9, "{count} {x}: {many:e} {limit:e}");
            }
        }
    }
}

/// A search that comes upon the quantile to the last bit once went on by bisection, fifty tails long, and a narrow integrand over
/// the control was stepped over.
#[test]
fn hard_places_keep_their_digits() {
    let q = studentized_range::upper_quantile(1e-6, 200, 20.0).unwrap();
    assert!(
        relative_error(studentized_range::sf(q, 200, 20.0).unwrap(), 1e-6)
            < permitted("studentized range, wide, tail")
    );
    for d in [1e-9, 1e-3, 0.3] {
        let both = many_to_one::cdf(d, &[0.95], 14.5, Sides::Both).unwrap();
        let t = 2.0 * (student_t::cdf(d, 14.5).unwrap() - 0.5);
        assert!((both - t).abs() < 1e-15 && both > 0.0, "{d}: {both:e} {t:e}");
    }
}

#[test]
fn an_argument_outside_its_range_is_named_with_the_range() {
    let two = [0.5, 0.5];
    let texts = [
        (studentized_range::sf(-1.0, 3, 5.0), "q is -1, but must be a finite number, at least 0"),
        (studentized_range::cdf(f64::NAN, 3, 5.0), "q is NaN, but must be a finite number, at least 0"),
        (studentized_range::sf(f64::INFINITY, 3, 5.0), "q is inf, but must be a finite number, at least 0"),
        (studentized_range::cdf(1.0, 1, 5.0), "groups is 1, but must be from 2 to 1000"),
        (
            studentized_range::sf(1.0, 3, 0.0),
            "df is 0, but must be greater than 0 (at least 0.001; infinity is allowed)",
        ),
        (studentized_range::quantile(1.5, 3, 5.0), "p is 1.5, but must be from 0 to 1"),
        (studentized_range::upper_quantile(-0.5, 3, 5.0), "upper_p is -0.5, but must be from 0 to 1"),
        (studentized_range::upper_quantile(0.5, 0, 5.0), "groups is 0, but must be from 2 to 1000"),
        (studentized_maximum::sf(-1.0, 3, 5.0), "m is -1, but must be a finite number, at least 0"),
        (studentized_maximum::cdf(f64::NAN, 3, 5.0), "m is NaN, but must be a finite number, at least 0"),
        (studentized_maximum::sf(1.0, 0, 5.0), "count is 0, but must be from 1 to 1000000"),
        (
            studentized_maximum::cdf(1.0, 3, -2.0),
            "df is -2, but must be greater than 0 (at least 0.001; infinity is allowed)",
        ),
        (studentized_maximum::quantile(f64::NAN, 3, 5.0), "p is NaN, but must be from 0 to 1"),
        (studentized_maximum::upper_quantile(2.0, 3, 5.0), "upper_p is 2, but must be from 0 to 1"),
        (
            many_to_one::sf(-1.0, &two, 5.0, Sides::Both),
            "d is -1, but must be at least 0 when both sides count",
        ),
        (many_to_one::sf(f64::NAN, &two, 5.0, Sides::Greater), "d is NaN, but must be a finite number"),
        (
            many_to_one::cdf(f64::NEG_INFINITY, &two, 5.0, Sides::Greater),
            "d is -inf, but must be a finite number",
        ),
        (many_to_one::cdf(1.0, &[], 5.0, Sides::Both), "number of loadings is 0, but must be from 1 to 1000"),
        (many_to_one::sf(1.0, &[0.5, 1.0], 5.0, Sides::Both), "loadings is 1, but must be between -1 and 1"),
        (
            many_to_one::cdf(1.0, &two, f64::NAN, Sides::Both),
            "df is NaN, but must be greater than 0 (at least 0.001; infinity is allowed)",
        ),
        (many_to_one::quantile(-0.1, &two, 5.0, Sides::Both), "p is -0.1, but must be from 0 to 1"),
        (many_to_one::upper_quantile(1.1, &two, 5.0, Sides::Both), "upper_p is 1.1, but must be from 0 to 1"),
    ];
    for (result, text) in texts {
        assert_eq!(result.unwrap_err().to_string(), text);
    }
}

/// The power law of the tails, and of one variable's lower tail, is that of Student's t, which has its own checks.
#[test]
fn tails_and_quantiles_at_the_ends_of_the_doubles_are_those_of_t() {
    for df in [0.7, 1.0, 1.7] {
        for t in [1e99, 1e101, 1e154, 1e155, 1e170] {
            let both = 2.0 * student_t::sf(t, df).unwrap();
            let range = studentized_range::sf(t * std::f64::consts::SQRT_2, 2, df).unwrap();
            let maximum = studentized_maximum::sf(t, 1, df).unwrap();
            let two_sided = many_to_one::sf(t, &[0.6], df, Sides::Both).unwrap();
            let above = 2.0 * many_to_one::sf(t, &[0.6], df, Sides::Greater).unwrap();
            let below = 2.0 * many_to_one::cdf(-t, &[0.6], df, Sides::Greater).unwrap();
            for found in [range, maximum, two_sided, above, below] {
                assert!((found / both - 1.0).abs() < 1e-12, "{df} {t:e}: {found:e} {both:e}");
            }
        }
    }
    for p in [1e-300, 1e-30, 1e-17, 3e-16] {
        // Next to 0 the density of t with 5 df is 8/(3π√5).
        let t = 0.5 * p * (3.0 * std::f64::consts::PI * 5.0_f64.sqrt() / 8.0);
        let range = studentized_range::quantile(p, 2, 5.0).unwrap() / std::f64::consts::SQRT_2;
        let maximum = studentized_maximum::quantile(p, 1, 5.0).unwrap();
        let two_sided = many_to_one::quantile(p, &[0.6], 5.0, Sides::Both).unwrap();
        for found in [range, maximum, two_sided] {
            assert!((found / t - 1.0).abs() < 1e-12, "{p:e}: {found:e} {t:e}");
        }
        let below = many_to_one::quantile(p, &[0.6], 5.0, Sides::Greater).unwrap();
        let t = student_t::quantile(p, 5.0).unwrap();
        assert!((below / t - 1.0).abs() < 1e-12, "{p:e}: {below:e} {t:e}");
    }
}

/// Far below 1 df the estimated standard deviation spreads over hundreds of powers of ten.
#[test]
fn single_comparisons_are_those_of_t_down_to_the_fewest_degrees_of_freedom() {
    for df in [0.001, 0.01, 0.1, 0.3] {
        for t in [0.05, 6.4, 25.3, 304.0] {
            let one = student_t::sf(t, df).unwrap();
            for (found, expected) in [
                (studentized_range::sf(t * std::f64::consts::SQRT_2, 2, df).unwrap(), 2.0 * one),
                (studentized_maximum::sf(t, 1, df).unwrap(), 2.0 * one),
                (many_to_one::sf(t, &[0.5], df, Sides::Both).unwrap(), 2.0 * one),
                (many_to_one::sf(t, &[0.5], df, Sides::Greater).unwrap(), one),
                (many_to_one::sf(-t, &[0.5], df, Sides::Greater).unwrap(), 1.0 - one),
            ] {
                assert!((found / expected - 1.0).abs() < 1e-12, "{df} {t}: {found:e} {expected:e}");
            }
        }
    }
}
