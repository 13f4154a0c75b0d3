//! The largest of correlated t statistics, and rectangles, against values by other methods.
//!
//! Sources: `data/values/multivariate_t_general_*.json`, digits stated per case (rank 2 and 3 in ball arithmetic by cutting
//! the circle and the polyhedron; rank 4 and 5 by nested quadrature); `data/multivariate/rank3.json`, made by the script beside
//! it in 30-digit arithmetic by integrating over the leading face, and by nested quadrature. Up to rank 3 the answer is
//! exact; beyond, it must lie within four of its own standard errors, and these must be what was asked for.

use crate::accuracy::{agree_each, agree_on, permitted};
use crate::cases::{number, relative_error};
use levelwise::numerics::distributions::many_to_one::Sides;
use levelwise::numerics::distributions::multivariate_t::{self, Answer, Effort, Family, Method};
use levelwise::numerics::distributions::{many_to_one, normal, student_t, studentized_range};
use serde_json::Value;

/// The correlations of the contrasts' estimates.
fn correlation(case: &Value) -> Vec<Vec<f64>> {
    let sizes = numbers(&case["n"]);
    let contrasts: Vec<Vec<f64>> = case["contrasts"].as_array().unwrap().iter().map(numbers).collect();
    correlation_of(&contrasts, &sizes)
}

fn correlation_of(contrasts: &[Vec<f64>], sizes: &[f64]) -> Vec<Vec<f64>> {
    let product =
        |a: &[f64], b: &[f64]| -> f64 { a.iter().zip(b).zip(sizes).map(|((a, b), n)| a * b / n).sum() };
    contrasts
        .iter()
        .map(|a| contrasts.iter().map(|b| product(a, b) / (product(a, a) * product(b, b)).sqrt()).collect())
        .collect()
}

fn numbers(value: &Value) -> Vec<f64> {
    value.as_array().unwrap().iter().map(number).collect()
}

/// The correlations of all pairs of groups of these sizes.
pub fn all_pairs(sizes: &[f64]) -> Vec<Vec<f64>> {
    let contrast = |i: usize, j: usize| {
        (0..sizes.len())
            .map(|k| if k == i { 1.0 } else { 0.0 } - if k == j { 1.0 } else { 0.0 })
            .collect::<Vec<f64>>()
    };
    let contrasts: Vec<Vec<f64>> =
        (0..sizes.len()).flat_map(|i| (0..i).map(move |j| contrast(i, j))).collect();
    correlation_of(&contrasts, sizes)
}

/// Answers up to rank 3 to the permitted error, beyond that to four of their own standard errors, which must be what was asked for.
fn agree_by_rank(file: &str, exact: &str, by_points: &str, compute: impl Fn(&Family, &Value) -> Answer) {
    let family = |case: &Value| Family::new(&correlation(case), number(&case["df"]), Sides::Both).unwrap();
    agree_on(file, "value", exact, |case| {
        let family = family(case);
        (family.rank() <= 3).then(|| {
            let got = compute(&family, case);
            assert_eq!((got.method, got.error), (Method::Exact, 0.0), "{case}");
            got.value
        })
    });
    agree_each(file, "value", by_points, "4 standard errors", |case| {
        let family = family(case);
        (family.rank() > 3).then(|| {
            let got = compute(&family, case);
            assert!(got.error <= Effort::default().relative_error * got.value, "{case}: {got:?}");
            (got.value, 4.0 * got.error / number(&case["value"]))
        })
    });
}

#[test]
pub fn tails_for_general_correlations_agree_with_the_reference_values() {
    let (exact, by_points) = ("multivariate t, rank 2 and 3", "multivariate t, rank 4 and 5");
    agree_by_rank("multivariate_t_general_sf", exact, by_points, |family, case| {
        family.sf(number(&case["c"]), Effort::default()).unwrap()
    });
}

#[test]
pub fn quantiles_for_general_correlations_agree_with_the_reference_values() {
    let (exact, by_points) = ("multivariate t, quantile", "multivariate t, quantile, rank 4 and 5");
    agree_by_rank("multivariate_t_general_quantile", exact, by_points, |family, case| {
        family.upper_quantile(number(&case["upper_p"]), Effort::default()).unwrap()
    });
}

#[test]
pub fn regions_of_rank_3_agree_with_values_in_high_precision() {
    let family = |case: &Value| Family::new(&correlation(case), number(&case["df"]), Sides::Both).unwrap();
    let limits = |case: &Value| (numbers(&case["low"]), numbers(&case["high"]));
    agree_on("multivariate/rank3", "value", "multivariate t, rank 2 and 3", |case| {
        assert!(number(&case["digits"]) >= 14.0, "{case}");
        let (low, high) = limits(case);
        (case["kind"] == "outside").then(|| {
            let got = family(case).outside_rectangle(&low, &high, Effort::default()).unwrap().value;
            if low.iter().chain(&high).all(|limit| limit.abs() == high[0]) {
                let same = family(case).sf(high[0], Effort::default()).unwrap().value;
                assert!(relative_error(same, got) < 1e-14, "{case}: {same}");
            }
            got
        })
    });
    // Inside a rectangle that is not around the origin small values are differences of larger ones.
    let absolute = permitted("multivariate t, rectangle, absolute");
    let words = format!("{absolute:.0e} absolute");
    agree_each("multivariate/rank3", "value", "multivariate t, rectangle", &words, |case| {
        let (low, high) = limits(case);
        (case["kind"] == "rectangle").then(|| {
            let got = family(case).rectangle(&low, &high, Effort::default()).unwrap().value;
            (got, absolute / number(&case["value"]))
        })
    });
}

#[test]
fn special_correlations_give_the_distributions_that_have_their_own_names() {
    let exact = Effort::default();
    for df in [3.0, 25.0, f64::INFINITY] {
        for c in [0.3, 1.7, 4.0] {
            let one = multivariate_t::sf(c, &[vec![1.0]], df, Sides::Both, exact).unwrap().value;
            assert!(relative_error(one, 2.0 * student_t::sf(c, df).unwrap()) < 1e-12);
            let greater = multivariate_t::sf(-c, &[vec![1.0]], df, Sides::Greater, exact).unwrap().value;
            assert!(relative_error(greater, student_t::sf(-c, df).unwrap()) < 1e-14);
            for groups in [3, 4] {
                let range = studentized_range::sf(c * f64::sqrt(2.0), groups, df).unwrap();
                let pairs = all_pairs(&vec![1.0; groups]);
                let general = multivariate_t::sf(c, &pairs, df, Sides::Both, exact).unwrap().value;
                assert!(relative_error(general, range) < 1e-12, "{df} {c}: {general} {range}");
            }
            for loadings in [vec![0.6, 0.7], vec![0.6, -0.7], vec![0.6, 0.7, 0.2], vec![0.9, -0.5, 0.8]] {
                for sides in [Sides::Both, Sides::Greater] {
                    let product = many_to_one::sf(c, &loadings, df, sides).unwrap();
                    let correlation = product_structure(&loadings);
                    let general = multivariate_t::sf(c, &correlation, df, sides, exact).unwrap().value;
                    assert!(
                        relative_error(general, product) < 1e-12,
                        "{df} {c} {sides:?}: {general} {product}"
                    );
                    // All below -c: the origin is outside, and what is left of the faces' tails is a difference.
                    if sides == Sides::Greater {
                        let product = many_to_one::cdf(-c, &loadings, df, sides).unwrap();
                        let below = multivariate_t::cdf(-c, &correlation, df, sides, exact).unwrap().value;
                        let tail = student_t::sf(c, df).unwrap();
                        assert!((below - product).abs() < 1e-14 * tail, "{df} {c}: {below} {product}");
                    }
                }
            }
        }
    }
}

/// The correlations λᵢλⱼ of comparisons with a control.
pub fn product_structure(loadings: &[f64]) -> Vec<Vec<f64>> {
    let entry = |i: usize, j: usize| if i == j { 1.0 } else { loadings[i] * loadings[j] };
    (0..loadings.len()).map(|i| (0..loadings.len()).map(|j| entry(i, j)).collect()).collect()
}

#[test]
fn independent_normal_variables_multiply() {
    // φ and Φ only: the product of the intervals' probabilities.
    let infinite = f64::INFINITY;
    let limits = [(-1.0, 2.0), (0.5, infinite), (-infinite, 0.25)];
    let interval = |(low, high): (f64, f64)| -> f64 {
        let lower = |x: f64| {
            if x == infinite {
                1.0
            } else if x == -infinite {
                0.0
            } else {
                normal::cdf(x).unwrap()
            }
        };
        lower(high) - lower(low)
    };
    for count in [1, 2, 3] {
        let identity: Vec<Vec<f64>> =
            (0..count).map(|i| (0..count).map(|j| if i == j { 1.0 } else { 0.0 }).collect()).collect();
        let (low, high): (Vec<f64>, Vec<f64>) = limits[..count].iter().copied().unzip();
        let got = multivariate_t::rectangle(&low, &high, &identity, infinite, Effort::default()).unwrap();
        let expected: f64 = limits[..count].iter().copied().map(interval).product();
        assert!((got.value - expected).abs() < 2e-15, "{count}: {got:?} {expected}");
        for c in [1e-4, 0.02, 0.4, 1.5] {
            let got = multivariate_t::cdf(c, &identity, infinite, Sides::Both, Effort::default()).unwrap();
            let one = libm::erf(c * std::f64::consts::FRAC_1_SQRT_2);
            let expected = libm::pow(one, count as f64);
            assert!(relative_error(got.value, expected) < 1e-13, "{count} {c}: {got:?} {expected}");
        }
    }
}

#[test]
fn arguments_outside_the_domain_are_refused_with_the_reason() {
    let message = |matrix: &[Vec<f64>]| {
        multivariate_t::sf(1.0, matrix, 5.0, Sides::Both, Effort::default()).unwrap_err().to_string()
    };
    assert_eq!(message(&[vec![1.0, 0.2], vec![0.3, 1.0]]), "correlation is 0.2, but must be symmetric");
    assert_eq!(message(&[vec![2.0]]), "correlation is 2, but must be made of numbers from -1 to 1");
    assert_eq!(message(&[vec![f64::NAN]]), "correlation is NaN, but must be made of numbers from -1 to 1");
    assert_eq!(message(&[vec![0.5]]), "correlation is 0.5, but must be 1 on the diagonal");
    assert_eq!(message(&[]), "correlation is 0, but must be a matrix with 1 to 1000 rows");
    let ragged = [vec![1.0, 0.0], vec![0.0]];
    assert_eq!(message(&ragged), "correlation is 1, but must be square: as many columns as rows");
    let indefinite = [vec![1.0, 0.9, -0.9], vec![0.9, 1.0, 0.9], vec![-0.9, 0.9, 1.0]];
    assert!(message(&indefinite).contains("positive semi-definite"));
    let one = [vec![1.0]];
    let effort = Effort::default();
    let family = |df: f64| Family::new(&one, df, Sides::Both).map_err(|error| error.to_string());
    let df = "must be greater than 0 (at least 0.001; infinity is allowed)";
    assert_eq!(family(0.0).unwrap_err(), format!("df is 0, but {df}"));
    assert_eq!(family(f64::NAN).unwrap_err(), format!("df is NaN, but {df}"));
    let family = family(5.0).unwrap();
    let refused = |result: Result<Answer, levelwise::numerics::OutOfDomain>| result.unwrap_err().to_string();
    assert_eq!(refused(family.sf(f64::INFINITY, effort)), "c is inf, but must be a finite number");
    assert_eq!(refused(family.cdf(-1.0, effort)), "c is -1, but must be at least 0 when both sides count");
    assert_eq!(refused(family.upper_quantile(1.5, effort)), "upper_p is 1.5, but must be from 0 to 1");
    assert_eq!(refused(family.quantile(f64::NAN, effort)), "p is NaN, but must be from 0 to 1");
    assert_eq!(
        refused(family.rectangle(&[0.0, 1.0], &[1.0], effort)),
        "number of lower limits is 2, but must be one for each row of the correlation matrix"
    );
    assert_eq!(
        refused(family.rectangle(&[f64::NAN], &[1.0], effort)),
        "lower is NaN, but must be a number or infinite"
    );
    assert_eq!(
        refused(family.rectangle(&[0.0], &[-1.0], effort)),
        "upper is -1, but must be a number or infinite, at least the lower limit"
    );
}
