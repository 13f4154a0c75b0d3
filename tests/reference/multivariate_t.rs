//! The largest of correlated t statistics against values by other methods.
//!
//! Source: `data/values/multivariate_t_general_*.json`, cutting the polytope or nested quadrature, digits stated per case.
//! Up to rank 3 the answer is exact; beyond, it must lie within five of its own standard errors.

use crate::accuracy::permitted;
use crate::cases::{cases, number, relative_error};
use levelwise::numerics::distributions::many_to_one::Sides;
use levelwise::numerics::distributions::multivariate_t::{self, Effort};
use levelwise::numerics::distributions::{many_to_one, student_t, studentized_range};
use serde_json::Value;

/// The correlations of the contrasts' estimates.
fn correlation(case: &Value) -> Vec<Vec<f64>> {
    let numbers = |value: &Value| -> Vec<f64> { value.as_array().unwrap().iter().map(number).collect() };
    let sizes = numbers(&case["n"]);
    let contrasts: Vec<Vec<f64>> = case["contrasts"].as_array().unwrap().iter().map(numbers).collect();
    let product =
        |a: &[f64], b: &[f64]| -> f64 { a.iter().zip(b).zip(&sizes).map(|((a, b), n)| a * b / n).sum() };
    contrasts
        .iter()
        .map(|a| contrasts.iter().map(|b| product(a, b) / (product(a, a) * product(b, b)).sqrt()).collect())
        .collect()
}

#[test]
fn tails_for_general_correlations_agree_with_the_reference_values() {
    let effort = Effort { relative_error: 1e-3, most_points: 1024, seed: 7 };
    let (mut exact, mut within) = (0.0_f64, 0.0_f64);
    for case in cases("multivariate_t_general_sf") {
        let expected = number(&case["value"]);
        let df = number(&case["df"]);
        let got =
            multivariate_t::sf(number(&case["c"]), &correlation(&case), df, Sides::Both, effort).unwrap();
        let error = relative_error(got.value, expected);
        if got.error == 0.0 {
            assert!(error < permitted("multivariate t, rank 2 and 3"), "{case}: {} {error:e}", got.value);
            exact = exact.max(error);
        } else {
            assert!((got.value - expected).abs() < 5.0 * got.error, "{case}: {got:?}");
            assert!(got.error < 0.01 * got.value, "{case}: {got:?}");
            within = within.max(error);
        }
    }
    println!(
        "multivariate_t_general_sf: worst relative error {exact:.1e} (rank 2 and 3), {within:.1e} (lattice of 1024)"
    );
}

#[test]
fn quantiles_for_general_correlations_agree_with_the_reference_values() {
    let effort = Effort { relative_error: 1e-2, most_points: 256, seed: 7 };
    for case in cases("multivariate_t_general_quantile") {
        let (p, df) = (number(&case["upper_p"]), number(&case["df"]));
        let got = multivariate_t::upper_quantile(p, &correlation(&case), df, Sides::Both, effort).unwrap();
        let expected = number(&case["value"]);
        let allowed = if got.error == 0.0 { 1e-11 * expected } else { 6.0 * got.error };
        assert!((got.value - expected).abs() < allowed, "{case}: {got:?}");
    }
}

#[test]
fn special_correlations_give_the_distributions_that_have_their_own_names() {
    let exact = Effort::default();
    for df in [3.0, 25.0, f64::INFINITY] {
        for c in [0.3, 1.7, 4.0] {
            let one = multivariate_t::sf(c, &[vec![1.0]], df, Sides::Both, exact).unwrap().value;
            assert!(relative_error(one, 2.0 * student_t::sf(c, df).unwrap()) < 1e-12);
            let pairs = [vec![1.0, 0.5, -0.5], vec![0.5, 1.0, 0.5], vec![-0.5, 0.5, 1.0]];
            let range = studentized_range::sf(c * f64::sqrt(2.0), 3, df).unwrap();
            let three = multivariate_t::sf(c, &pairs, df, Sides::Both, exact).unwrap().value;
            assert!(relative_error(three, range) < 1e-11, "{df} {c}: {three} {range}");
            let two = [vec![1.0, 0.42], vec![0.42, 1.0]];
            for sides in [Sides::Both, Sides::Greater] {
                let product = many_to_one::sf(c, &[0.6, 0.7], df, sides).unwrap();
                let general = multivariate_t::sf(c, &two, df, sides, exact).unwrap().value;
                assert!(relative_error(general, product) < 1e-11, "{df} {c} {sides:?}: {general} {product}");
            }
        }
    }
}

#[test]
fn a_matrix_that_is_no_correlation_matrix_is_refused_with_the_reason() {
    let message = |matrix: &[Vec<f64>]| {
        multivariate_t::sf(1.0, matrix, 5.0, Sides::Both, Effort::default()).unwrap_err().to_string()
    };
    assert_eq!(message(&[vec![1.0, 0.2], vec![0.3, 1.0]]), "correlation is 0.2, but must be symmetric");
    assert_eq!(message(&[vec![2.0]]), "correlation is 2, but must be made of numbers from -1 to 1");
    assert_eq!(message(&[]), "correlation is 0, but must be a matrix with 1 to 1000 rows");
    let indefinite = [vec![1.0, 0.9, -0.9], vec![0.9, 1.0, 0.9], vec![-0.9, 0.9, 1.0]];
    assert!(message(&indefinite).contains("positive semi-definite"));
}
