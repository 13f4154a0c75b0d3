//! Tests for a trend by the best contrasts of candidate shapes.
//!
//! Sources: `data/shapes/joint.json` by `joint.py` beside it (contrasts from Lagrange's equations; tails of the multivariate t by
//! SciPy 1.17.1 with their standard errors); brute-force maximisation of the noncentrality; otherwise closed forms that other
//! checks stand behind (Student's t, the regression slope).

use crate::cases::{cases, number};
use levelwise::methods::multiplicity::Sides;
use levelwise::methods::slices::InSlices;
use levelwise::methods::trend::shapes::{Doses, NoShapes, Shape, ShapeTests, ShapesWork, optimal_contrast};
use levelwise::methods::trend::{TrendRequest, Weights, polynomial};
use levelwise::numerics::distributions::student_t;
use levelwise::numerics::random::Streams;
use levelwise::study::{DegreesOfFreedom, Estimates, GroupSummary, Summary, Variances};
use nalgebra::{DMatrix, DVector};
use serde_json::Value;

pub fn numbers(value: &Value) -> Vec<f64> {
    value.as_array().unwrap().iter().map(number).collect()
}

fn estimates(n: &[usize], means: &[f64], variances: &[f64], kind: Variances) -> Estimates {
    let groups = n.iter().zip(means).zip(variances);
    let groups = groups.map(|((&n, &mean), &v)| GroupSummary { n, mean, variance: Some(v) }).collect();
    let labels: Vec<String> = (0..n.len()).map(|i| format!("L{i}")).collect();
    Estimates::one_way(&labels, &Summary { origin: 0.0, groups }, kind).unwrap()
}

fn equal(n: &[usize], means: &[f64], variance: f64) -> Estimates {
    estimates(n, means, &vec![variance; n.len()], Variances::Equal)
}

fn tests(estimates: &Estimates, doses: &[f64], shapes: &[Shape], sides: Sides) -> ShapeTests {
    ShapesWork::new(estimates, doses, shapes, sides, 0.05).unwrap().finish().unwrap()
}

fn shape(written: &Value) -> Shape {
    let guess = |i: usize| number(&written[i]);
    match written[0].as_str().unwrap() {
        "linear" => Shape::Linear,
        "log-linear" => Shape::LogLinear { offset: guess(1) },
        "Emax" => Shape::Emax { e50: guess(1) },
        "exponential" => Shape::Exponential { delta: guess(1) },
        "quadratic" => Shape::Quadratic { peak: guess(1) },
        "sigmoid Emax" => Shape::SigmoidEmax { e50: guess(1), h: guess(2) },
        "logistic" => Shape::Logistic { e50: guess(1), delta: guess(2) },
        "step" => Shape::Step { threshold: guess(1) },
        other => panic!("{other}"),
    }
}

const DOSES: [f64; 5] = [0.0, 1.0, 3.0, 10.0, 30.0];

fn candidates() -> Vec<Shape> {
    vec![
        Shape::Linear,
        Shape::LogLinear { offset: 1.0 },
        Shape::Emax { e50: 4.0 },
        Shape::Exponential { delta: 12.0 },
        Shape::Quadratic { peak: 20.0 },
        Shape::SigmoidEmax { e50: 6.0, h: 3.0 },
        Shape::Logistic { e50: 8.0, delta: 3.0 },
        Shape::Step { threshold: 3.0 },
    ]
}

#[test]
fn contrasts_and_adjusted_p_agree_with_lagranges_equations_and_quasi_monte_carlo() {
    for case in cases("shapes/joint") {
        let n: Vec<usize> = numbers(&case["n"]).iter().map(|n| *n as usize).collect();
        let estimates = equal(&n, &numbers(&case["means"]), number(&case["variance"]));
        let shapes: Vec<Shape> = case["shapes"].as_array().unwrap().iter().map(shape).collect();
        let t = numbers(&case["t"]);
        for (sides, key) in [(Sides::Greater, "greater"), (Sides::Less, "greater"), (Sides::Both, "both")] {
            // A falling response is the rising one turned over.
            let turned = if sides == Sides::Less { -1.0 } else { 1.0 };
            let means: Vec<f64> = estimates.means.iter().map(|m| turned * m).collect();
            let these = Estimates { means, ..estimates.clone() };
            let found = tests(&these, &numbers(&case["doses"]), &shapes, sides);
            assert!(found.refused.is_empty() && found.coincide.is_empty());
            for (i, row) in found.rows.iter().enumerate() {
                let what = format!("{sides:?} {:?}", row.shape);
                for (c, expected) in row.coefficients.iter().zip(numbers(&case["contrasts"][i])) {
                    assert!((c - expected).abs() < 1e-13, "{what}: {c} {expected}");
                }
                assert!((turned * row.t - t[i]).abs() < 1e-11 * t[i].abs(), "{what}: {} {}", row.t, t[i]);
                let (expected, error) = (number(&case[key][i][0]), number(&case[key][i][1]));
                // Five standard errors of both, and the rounding of 1 - cdf in the reference.
                let allowed = 5.0 * (error + row.p_error) + 1e-9;
                assert!(allowed < 1e-3, "{what}: {error} {}", row.p_error);
                assert!(
                    (row.p_adjusted - expected).abs() <= allowed,
                    "{what}: {} {expected} {allowed}",
                    row.p_adjusted
                );
                assert!(row.p <= row.p_adjusted && row.significant == (row.p_adjusted <= 0.05));
                let towards = if sides == Sides::Both { row.t.abs() } else { turned * row.t };
                assert_eq!(row.significant, towards >= row.critical, "{what}");
            }
            let towards = |t: &f64| if sides == Sides::Both { t.abs() } else { *t };
            let farthest = t.iter().map(towards).fold(f64::NEG_INFINITY, f64::max);
            assert_eq!(towards(&t[found.best]), farthest);
        }
    }
}

/// (c'g)² / c'Vc.
fn noncentrality(c: &DVector<f64>, g: &DVector<f64>, covariance: &DMatrix<f64>) -> f64 {
    let along = c.dot(g);
    along * along / (covariance * c).dot(c)
}

/// The best contrast by brute force: from a random start, steps in random directions that are kept if they help, ever shorter.
fn climb(g: &DVector<f64>, covariance: &DMatrix<f64>, seed: u64) -> DVector<f64> {
    let k = g.len();
    let mut stream = Streams::new(seed, "climbing").stream(0);
    let mut direction = || {
        let d = DVector::from_fn(k, |_, _| stream.normal());
        let d = d.add_scalar(-d.mean());
        let length = d.norm();
        d / length
    };
    let (mut best, mut step) = (direction(), 1.0);
    while step > 1e-9 {
        let helped = (0..20 * k).any(|_| {
            let next = &best + direction() * step;
            let better = noncentrality(&next, g, covariance) > noncentrality(&best, g, covariance);
            if better {
                let length = next.norm();
                best = next / length;
            }
            better
        });
        if !helped {
            step *= 0.5;
        }
    }
    if best.dot(g) < 0.0 { -best } else { best }
}

#[test]
fn no_contrast_has_a_larger_noncentrality_and_climbing_ends_at_the_formula() {
    let separate = [1.0, 4.0, 0.5, 2.0, 7.0];
    let (n, means) = ([4, 9, 6, 12, 5], [0.0; 5]);
    let mut dependent = equal(&n, &means, 1.3);
    for i in 0..5 {
        for j in 0..5 {
            if i != j {
                dependent.covariance[(i, j)] = 0.02 + 0.01 * (i.min(j) as f64);
            }
        }
    }
    let designs = [equal(&n, &means, 1.3), estimates(&n, &means, &separate, Variances::Unequal), dependent];
    let doses = Doses::new(&DOSES, 5).unwrap();
    for (which, estimates) in designs.iter().enumerate() {
        for (seed, shape) in candidates().iter().enumerate() {
            let c = DVector::from_vec(optimal_contrast(estimates, &doses, shape).unwrap());
            let g = DVector::from_iterator(5, DOSES.iter().map(|x| shape.at(*x)));
            let climbed = climb(&g, &estimates.covariance, seed as u64);
            let (ours, theirs) = (
                noncentrality(&c, &g, &estimates.covariance),
                noncentrality(&climbed, &g, &estimates.covariance),
            );
            assert!(theirs <= ours * (1.0 + 1e-13), "{which} {shape:?}: {theirs} {ours}");
            // Near the top the noncentrality falls with the square of the distance: 1e-16 of it is 1e-8 of the contrast.
            assert!((&c - &climbed).amax() < 1e-6, "{which} {shape:?}: {c} {climbed}");
            assert!(c.sum().abs() < 1e-14 && (c.norm() - 1.0).abs() < 1e-14 && c.dot(&g) > 0.0);
        }
    }
}

/// With the n as weights the linear shape's contrast is the least-squares slope, tested against the pooled variance.
#[test]
fn the_linear_shape_alone_is_the_linear_trend() {
    for (variances, n) in [(Variances::Equal, [4, 9, 6, 12, 5]), (Variances::Unequal, [6; 5])] {
        let estimates = estimates(&n, &[1.0, 1.5, 1.2, 2.8, 3.0], &[1.0; 5], variances);
        let found = tests(&estimates, &DOSES, &[Shape::Linear], Sides::Both);
        let request = TrendRequest {
            estimates: &estimates,
            summary: None,
            scores: &DOSES,
            degree: 1,
            weights: Weights::N,
            confidence: 0.95,
        };
        let trend = &polynomial(&request).unwrap().rows[0];
        let row = &found.rows[0];
        assert!((row.t - trend.t).abs() < 1e-12 * trend.t.abs(), "{} {}", row.t, trend.t);
        assert!((row.p_adjusted - trend.p).abs() < 1e-10 * trend.p && row.p == row.p_adjusted);
        assert!((row.critical - student_t::upper_quantile(0.025, row.df).unwrap()).abs() < 1e-10);
    }
}

#[test]
fn shapes_that_are_one_contrast_are_told_and_cost_nothing() {
    let two = equal(&[7, 5], &[1.0, 2.0], 1.5);
    let shapes = [Shape::Linear, Shape::Emax { e50: 2.0 }, Shape::Step { threshold: 4.0 }];
    let found = tests(&two, &[0.0, 4.0], &shapes, Sides::Greater);
    assert_eq!(found.coincide, [(0, 1), (0, 2)]);
    assert_eq!(found.best, 0);
    let p = student_t::sf(found.rows[0].t, 10.0).unwrap();
    assert!(found.rows.iter().all(|row| (row.p_adjusted - p).abs() < 1e-12 * p && row.exact));
    // The exponent 1 makes the sigmoid the plain Emax; the others stay apart.
    let five = equal(&[6; 5], &[1.0, 1.5, 1.2, 2.8, 3.0], 1.5);
    let shapes = [Shape::Emax { e50: 3.0 }, Shape::Linear, Shape::SigmoidEmax { e50: 3.0, h: 1.0 }];
    let with = tests(&five, &DOSES, &shapes, Sides::Greater);
    assert_eq!(with.coincide, [(0, 2)]);
    let without = tests(&five, &DOSES, &shapes[..2], Sides::Greater);
    assert_eq!(with.rows[0].p_adjusted, without.rows[0].p_adjusted);
    assert_eq!(with.rows[0].p_adjusted, with.rows[2].p_adjusted);
    assert_eq!(with.rows[1].critical, without.rows[1].critical);
}

/// Shapes with their guesses in another unit of dose.
pub fn in_units(shape: &Shape, unit: f64) -> Shape {
    match *shape {
        Shape::Linear => Shape::Linear,
        Shape::LogLinear { offset } => Shape::LogLinear { offset: offset * unit },
        Shape::Emax { e50 } => Shape::Emax { e50: e50 * unit },
        Shape::Exponential { delta } => Shape::Exponential { delta: delta * unit },
        Shape::Quadratic { peak } => Shape::Quadratic { peak: peak * unit },
        Shape::SigmoidEmax { e50, h } => Shape::SigmoidEmax { e50: e50 * unit, h },
        Shape::Logistic { e50, delta } => Shape::Logistic { e50: e50 * unit, delta: delta * unit },
        Shape::Step { threshold } => Shape::Step { threshold: threshold * unit },
    }
}

#[test]
fn the_unit_of_the_dose_changes_no_t_and_turning_the_outcome_over_changes_signs_only() {
    let estimates = equal(&[4, 9, 6, 12, 5], &[1.0, 1.5, 1.2, 2.8, 3.0], 1.5);
    let one = tests(&estimates, &DOSES, &candidates(), Sides::Both);
    assert_eq!(one.rows.len(), 8);
    for unit in [1e-3, 1e6] {
        let doses: Vec<f64> = DOSES.iter().map(|x| x * unit).collect();
        let shapes: Vec<Shape> = candidates().iter().map(|shape| in_units(shape, unit)).collect();
        let other = tests(&estimates, &doses, &shapes, Sides::Both);
        for (one, other) in one.rows.iter().zip(&other.rows) {
            assert!((one.t - other.t).abs() < 1e-12, "{unit} {:?}: {} {}", one.shape, one.t, other.t);
        }
    }
    let means = estimates.means.iter().map(|m| -m).collect();
    let turned = tests(&Estimates { means, ..estimates.clone() }, &DOSES, &candidates(), Sides::Both);
    for (one, other) in one.rows.iter().zip(&turned.rows) {
        assert_eq!((one.t, one.p_adjusted), (-other.t, other.p_adjusted));
    }
    assert_eq!(one.best, turned.best);
}

#[test]
fn a_variance_for_each_mean_gives_satterthwaites_df_to_each_shape() {
    let estimates = estimates(
        &[5, 6, 7, 6, 5],
        &[1.0, 1.5, 1.2, 2.8, 3.0],
        &[1.0, 4.0, 0.5, 2.0, 3.0],
        Variances::Unequal,
    );
    let found = tests(&estimates, &DOSES, &candidates()[..3], Sides::Greater);
    let DegreesOfFreedom::PerMean(_) = &estimates.df else { panic!("one error term") };
    for row in &found.rows {
        let c = estimates.contrast(&row.coefficients);
        assert_eq!((row.estimate, row.se, row.df), (c.estimate, c.se, c.df));
    }
    assert!(found.rows[0].df != found.rows[1].df && found.rows[0].critical != found.rows[1].critical);
}

#[test]
fn a_guess_that_is_refused_says_which_and_why_and_the_others_go_on() {
    let estimates = equal(&[6; 5], &[1.0, 1.5, 1.2, 2.8, 3.0], 1.5);
    let bad = [
        Shape::LogLinear { offset: 0.0 },
        Shape::Emax { e50: -1.0 },
        Shape::Exponential { delta: 0.01 },
        Shape::Quadratic { peak: 31.0 },
        Shape::SigmoidEmax { e50: 6.0, h: f64::NAN },
        Shape::Logistic { e50: f64::INFINITY, delta: 3.0 },
        Shape::Step { threshold: 0.0 },
        Shape::Logistic { e50: 1e9, delta: 3.0 },
    ];
    let messages = [
        "the guess offset of the log-linear shape is 0, but must be greater than 0",
        "the guess e50 of the Emax shape is -1, but must be greater than 0",
        "the guess delta of the exponential shape is 0.01, but must be greater than 0 and at least 0.05",
        "the guess peak of the quadratic shape is 31, but must be greater than the lowest dose, 0, and at most the highest, 30",
        "the guess h of the sigmoid Emax shape is NaN, but must be greater than 0",
        "the guess e50 of the logistic shape is inf, but must be a finite number",
        "the guess threshold of the step shape is 0, but must be greater than the lowest dose, 0, and at most the highest, 30",
        "with these guesses the logistic shape is the same at all doses, so that no contrast shows it",
    ];
    let mut shapes = bad.to_vec();
    shapes.insert(3, Shape::Linear);
    let found = tests(&estimates, &DOSES, &shapes, Sides::Both);
    assert_eq!((found.rows.len(), found.rows[0].candidate, found.best), (1, 3, 0));
    assert_eq!(
        found.refused.iter().map(|refused| refused.candidate).collect::<Vec<_>>(),
        [0, 1, 2, 4, 5, 6, 7, 8]
    );
    for (refused, message) in found.refused.iter().zip(messages) {
        assert_eq!(refused.reason.to_string(), message);
    }
    let refusal = |doses: &[f64], shapes: &[Shape], alpha: f64| {
        ShapesWork::new(&estimates, doses, shapes, Sides::Both, alpha).unwrap_err().to_string()
    };
    assert_eq!(
        refusal(&DOSES, &bad[1..2], 0.05),
        "none of the candidate shapes can be used: the guess e50 of the Emax shape is -1, but must be greater than 0"
    );
    assert_eq!(refusal(&DOSES, &[], 0.05), "no candidate shape was given");
    assert_eq!(
        refusal(&DOSES, &[Shape::Linear], 1.0),
        "alpha is 1, but must be greater than 0 and less than 1"
    );
    assert_eq!(
        refusal(&DOSES[..4], &[Shape::Linear], 0.05),
        "4 doses were given for 5 levels; each level needs one"
    );
    assert_eq!(
        refusal(&[0.0, 1.0, 1.0, 2.0, 3.0], &[Shape::Linear], 0.05),
        "the doses must be strictly increasing, but 1 follows 1"
    );
    assert_eq!(
        refusal(&[-1.0, 0.0, 1.0, 2.0, 3.0], &[Shape::Emax { e50: 1.0 }], 0.05),
        "none of the candidate shapes can be used: the Emax shape is defined for doses from 0 on, but a dose is -1"
    );
    assert!(matches!(
        ShapesWork::new(&estimates, &DOSES, &[], Sides::Both, 0.05),
        Err(NoShapes::NoCandidates)
    ));
}

/// The family-wise error of the test of all shapes is the level, whatever the shapes: the largest t crosses the critical value in
/// 5 % of studies without a trend.
#[test]
fn without_a_trend_some_shape_is_significant_in_five_studies_of_a_hundred() {
    let (n, df, runs) = ([4_usize, 9, 6, 12, 5], 31, 4000);
    let reference = equal(&n, &[0.0, 1.0, 2.0, 3.0, 4.0], 1.0);
    let found = tests(&reference, &DOSES, &candidates(), Sides::Greater);
    let critical = found.rows[0].critical;
    let mut hits = 0;
    let streams = Streams::new(5, "no trend");
    for run in 0..runs {
        let mut stream = streams.stream(run);
        let means: Vec<f64> = n.iter().map(|n| stream.normal() / (*n as f64).sqrt()).collect();
        let s = ((0..df).map(|_| stream.normal()).map(|z| z * z).sum::<f64>() / df as f64).sqrt();
        let crosses = |c: &[f64]| {
            let estimate: f64 = c.iter().zip(&means).map(|(c, m)| c * m).sum();
            let se = s * c.iter().zip(&n).map(|(c, n)| c * c / *n as f64).sum::<f64>().sqrt();
            estimate / se > critical
        };
        hits += u32::from(found.rows.iter().any(|row| crosses(&row.coefficients)));
    }
    let share = f64::from(hits) / runs as f64;
    // Four standard errors of a share of 0.05.
    assert!((share - 0.05).abs() < 4.0 * (0.05_f64 * 0.95 / runs as f64).sqrt(), "{share}");
}
