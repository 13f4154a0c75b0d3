//! Least-squares fits of dose-response shapes, and the dose with a target effect.
//!
//! Sources: `data/shapes/fits.json` by `fits.py` beside it (normal equations solved with 40 digits by mpmath 1.4.1, from the
//! estimates of SciPy 1.17.1's curve_fit, which stand there too); curves that the data lie on; numeric differentiation;
//! closed forms of the linear shape.

use crate::cases::{cases, number, relative_error};
use crate::shapes::{in_units, numbers};
use levelwise::methods::slices::{Advance, InSlices};
use levelwise::methods::trend::shapes::{
    Bootstrap, BootstrapWork, Curve, DoseResponse, NoFit, Shape, ShapeFit, target_dose,
};
use levelwise::methods::trend::{TrendRequest, Weights, polynomial};
use levelwise::numerics::distributions::student_t;
use levelwise::numerics::random::Streams;
use levelwise::study::{Estimates, GroupSummary, Sample, Summary, Variances};
use serde_json::Value;

/// The guess of a fit is not where its search begins, but it must be allowed.
fn shape(name: &str, highest: f64) -> Shape {
    match name {
        "linear" => Shape::Linear,
        "log-linear" => Shape::LogLinear { offset: 1.0 },
        "Emax" => Shape::Emax { e50: 0.3 * highest },
        "exponential" => Shape::Exponential { delta: highest },
        "quadratic" => Shape::Quadratic { peak: highest },
        "sigmoid Emax" => Shape::SigmoidEmax { e50: 0.3 * highest, h: 1.0 },
        "logistic" => Shape::Logistic { e50: 0.5 * highest, delta: highest },
        other => panic!("{other}"),
    }
}

/// Offsets from a nearby number, as the table reader hands them on.
fn sample(case: &Value) -> (Vec<f64>, Summary) {
    let groups: Vec<Vec<f64>> = case["groups"].as_array().unwrap().iter().map(numbers).collect();
    let origin = groups[0][0].floor();
    let groups = groups.iter().map(|group| group.iter().map(|y| y - origin).collect()).collect();
    (numbers(&case["doses"]), Sample { origin, groups }.summary())
}

/// Calls `check` with every fit of the file, ours beside the expected one.
fn every_fit(mut check: impl FnMut(&str, &Value, &Value, &ShapeFit)) {
    let mut seen = 0;
    for case in cases("shapes/fits") {
        let (doses, summary) = sample(&case);
        let data = DoseResponse::new(&doses, &summary).unwrap();
        for expected in case["fits"].as_array().unwrap() {
            let name = expected["shape"].as_str().unwrap();
            let what = format!("{} {name}", case["label"]);
            let fit =
                data.fit(&shape(name, doses[doses.len() - 1])).unwrap_or_else(|e| panic!("{what}: {e}"));
            check(&what, &case, expected, &fit);
            seen += 1;
        }
    }
    assert_eq!(seen, 23);
}

#[test]
fn fits_agree_with_forty_digits_and_with_scipy() {
    every_fit(|what, _, expected, fit| {
        assert_eq!(fit.df, number(&expected["df"]), "{what}");
        assert!(relative_error(fit.residual_ss, number(&expected["rss"])) < 1e-12, "{what}");
        let at = |i: usize| fit.parameters[i].value + if i == 0 { fit.origin } else { 0.0 };
        let (exact, scipy) = (&expected["covariance"], &expected["curve_fit"]);
        let values = numbers(&expected["parameters"]);
        assert_eq!(values.len(), fit.parameters.len());
        for (i, value) in values.iter().enumerate() {
            let se = number(&exact[i][i]).sqrt();
            assert!((at(i) - value).abs() < 1e-9 * se, "{what} {i}: {} {value} {se}", at(i));
            assert!(
                relative_error(fit.parameters[i].se, se) < 1e-8,
                "{what} {i}: {:?} {se}",
                fit.parameters[i]
            );
            // SciPy ends where the sum of squares stays the same: at half of the digits.
            let theirs = number(&scipy["parameters"][i]);
            assert!((at(i) - theirs).abs() < 1e-4 * se, "{what} {i}: {} {theirs}", at(i));
            for j in 0..values.len() {
                let scale = se * number(&exact[j][j]).sqrt();
                let (ours, exact, theirs) =
                    (fit.covariance[i][j], number(&exact[i][j]), number(&scipy["covariance"][i][j]));
                assert!((ours - exact).abs() < 1e-8 * scale, "{what} {i} {j}: {ours} {exact}");
                assert!((ours - theirs).abs() < 1e-3 * scale, "{what} {i} {j}: {ours} {theirs}");
            }
        }
    });
}

#[test]
fn target_doses_and_their_standard_errors_agree_with_forty_digits() {
    let (mut reached, mut missed) = (0, 0);
    every_fit(|what, case, expected, fit| {
        let target = number(&case["target"]);
        let found = target_dose(fit, target, 0.9).unwrap();
        let Some(dose) = expected.get("dose") else {
            missed += 1;
            assert_eq!((found.dose, found.se, found.interval), (None, None, None), "{what}");
            return assert!(found.farthest.abs() < target.abs(), "{what}: {}", found.farthest);
        };
        reached += 1;
        let (dose, se) = (number(dose), number(&expected["dose_se"]));
        assert!((found.dose.unwrap() - dose).abs() < 1e-9 * se, "{what}: {:?} {dose}", found.dose);
        assert!(relative_error(found.se.unwrap(), se) < 1e-8, "{what}: {:?} {se}", found.se);
        let (interval, t) = (found.interval.unwrap(), student_t::upper_quantile(0.05, fit.df).unwrap());
        assert!((interval.upper - dose - t * se).abs() < 1e-8 * se && interval.lower < dose);
        assert!(found.farthest.abs() >= target.abs());
    });
    assert!(reached > 15 && missed > 0, "{reached} {missed}");
}

const DOSES: [f64; 8] = [0.0, 5.0, 10.0, 20.0, 40.0, 60.0, 80.0, 100.0];

fn curves() -> Vec<Curve> {
    let all = [
        (Shape::Linear, vec![3.0, -0.02]),
        (Shape::LogLinear { offset: 2.0 }, vec![3.0, 1.4]),
        (Shape::Emax { e50: 17.0 }, vec![2.0, 5.0]),
        (Shape::Exponential { delta: 31.0 }, vec![1.0, 0.25]),
        (Shape::Quadratic { peak: 70.0 }, vec![1.0, 0.14, -0.001]),
        (Shape::SigmoidEmax { e50: 33.0, h: 3.7 }, vec![10.0, -6.0]),
        (Shape::Logistic { e50: 45.0, delta: 9.0 }, vec![-1.0, 8.0]),
        (Shape::Step { threshold: 20.0 }, vec![2.0, 3.0]),
    ];
    all.into_iter().map(|(shape, coefficients)| Curve { shape, coefficients }).collect()
}

fn on(curve: &Curve, doses: &[f64], n: usize, variance: f64) -> Summary {
    let group = |x: &f64| GroupSummary { n, mean: curve.at(*x), variance: Some(variance) };
    Summary { origin: 0.0, groups: doses.iter().map(group).collect() }
}

#[test]
fn data_that_lie_on_a_curve_give_that_curve_back() {
    for curve in curves() {
        let data = DoseResponse::new(&DOSES, &on(&curve, &DOSES, 5, 0.0)).unwrap();
        let guess = match curve.shape {
            Shape::LogLinear { .. } | Shape::Step { .. } => curve.shape,
            _ => shape(curve.shape.name(), 100.0),
        };
        let fit = data.fit(&guess).unwrap();
        let expected = curve.coefficients.iter().copied().chain(match curve.shape {
            Shape::LogLinear { .. } | Shape::Step { .. } | Shape::Quadratic { .. } => vec![],
            _ => curve.shape.guesses().iter().map(|(_, value)| *value).collect(),
        });
        for (found, expected) in fit.parameters.iter().zip(expected) {
            assert!(relative_error(found.value, expected) < 1e-9, "{:?} {found:?} {expected}", curve.shape);
        }
        assert!(fit.residual_ss < 1e-18, "{:?} {}", curve.shape, fit.residual_ss);
        assert_eq!(fit.lack_of_fit, None);
        if let Shape::Quadratic { peak } = curve.shape {
            assert!(relative_error(fit.turn().unwrap(), peak) < 1e-12);
        }
    }
}

#[test]
fn the_linear_shape_is_the_regression_line_with_its_lack_of_fit() {
    for case in cases("shapes/fits") {
        let (doses, summary) = sample(&case);
        let fit = DoseResponse::new(&doses, &summary).unwrap().fit(&Shape::Linear).unwrap();
        let labels: Vec<String> = doses.iter().map(f64::to_string).collect();
        let estimates = Estimates::one_way(&labels, &summary, Variances::Equal).unwrap();
        let request = TrendRequest {
            estimates: &estimates,
            summary: None,
            scores: &doses,
            degree: 1,
            weights: Weights::N,
            confidence: 0.95,
        };
        let trend = polynomial(&request).unwrap();
        assert!((fit.parameters[1].value - trend.rows[0].slope).abs() < 1e-12 * trend.rows[0].slope.abs());
        let (ours, theirs) = (fit.lack_of_fit.unwrap(), trend.lack_of_fit[0].test);
        assert_eq!((ours.df1, ours.df2), (theirs.df1, theirs.df2));
        assert!(relative_error(ours.f, theirs.f) < 1e-10 && relative_error(ours.p, theirs.p) < 1e-9);
    }
}

#[test]
fn the_unit_of_the_dose_changes_the_curve_only_in_it() {
    for (which, curve) in curves().iter().enumerate() {
        let mut summary = on(curve, &DOSES, 6, 0.8);
        // Off the curve, up and down by turns.
        summary
            .groups
            .iter_mut()
            .zip([0.1, -0.2, 0.15, 0.1, -0.25, 0.2, -0.1, 0.05])
            .for_each(|(g, by)| g.mean += by);
        let one = DoseResponse::new(&DOSES, &summary).unwrap().fit(&curve.shape).unwrap();
        for unit in [1e-4, 1e3] {
            let doses = DOSES.map(|x| x * unit);
            let data = DoseResponse::new(&doses, &summary).unwrap();
            let other = data.fit(&in_units(&curve.shape, unit)).unwrap();
            assert!(relative_error(other.residual_ss, one.residual_ss) < 1e-12, "{which}");
            for x in [0.0, 13.0, 77.0, 100.0] {
                let se = one.se_at(x);
                // The curve of a log-linear shape has its level at another dose, but is the same curve.
                assert!((one.curve.at(x) - other.curve.at(x * unit)).abs() < 1e-9 * se, "{which} {x}");
                assert!(relative_error(other.se_at(x * unit), se) < 1e-8, "{which} {x}");
            }
            let target = one.curve.above(50.0, 0.0);
            let (one, other) =
                (target_dose(&one, target, 0.95).unwrap(), target_dose(&other, target, 0.95).unwrap());
            assert!(relative_error(other.dose.unwrap(), one.dose.unwrap() * unit) < 1e-9, "{which}");
            assert_eq!(one.se.is_some(), other.se.is_some());
            if let (Some(one), Some(other)) = (one.se, other.se) {
                assert!(relative_error(other, one * unit) < 1e-8, "{which}");
            }
        }
    }
}

/// The dose as a function of the parameters, moved one after the other.
#[test]
fn the_standard_error_of_a_dose_is_the_one_of_numeric_differentiation() {
    // From a lowest dose above 0 too, where the closed forms start from somewhere else.
    for lowest in [0.0, 3.0] {
        let doses: Vec<f64> = DOSES.iter().map(|x| x + lowest).collect();
        for curve in curves().into_iter().filter(|curve| !matches!(curve.shape, Shape::Step { .. })) {
            let data = DoseResponse::new(&doses, &on(&curve, &doses, 9, 1.7)).unwrap();
            let fit = data.fit(&curve.shape).unwrap();
            let target = fit.curve.above(41.0, lowest);
            let found = target_dose(&fit, target, 0.95).unwrap();
            // 41 or, on a parabola, the first dose of that height.
            assert!((found.dose.unwrap() - 41.0).abs() < 1e-8, "{:?} {:?}", fit.curve.shape, found.dose);
            let moved = |i: usize, by: f64| {
                let mut values: Vec<f64> = fit.parameters.iter().map(|parameter| parameter.value).collect();
                values[i] += by;
                let shape = match (fit.curve.shape, &values[..]) {
                    (Shape::Emax { .. }, &[_, _, e50]) => Shape::Emax { e50 },
                    (Shape::Exponential { .. }, &[_, _, delta]) => Shape::Exponential { delta },
                    (Shape::SigmoidEmax { .. }, &[_, _, e50, h]) => Shape::SigmoidEmax { e50, h },
                    (Shape::Logistic { .. }, &[_, _, e50, delta]) => Shape::Logistic { e50, delta },
                    (shape, _) => shape,
                };
                values.truncate(fit.curve.coefficients.len());
                let changed = Curve { shape, coefficients: values };
                target_dose(&ShapeFit { curve: changed, ..fit.clone() }, target, 0.95).unwrap().dose.unwrap()
            };
            let gradient: Vec<f64> = (0..fit.parameters.len())
                .map(|i| {
                    let h = 1e-5 * fit.parameters[i].value.abs();
                    (moved(i, h) - moved(i, -h)) / (2.0 * h)
                })
                .collect();
            let variance: f64 = (0..gradient.len())
                .flat_map(|i| (0..gradient.len()).map(move |j| (i, j)))
                .map(|(i, j)| gradient[i] * fit.covariance[i][j] * gradient[j])
                .sum();
            assert!(relative_error(found.se.unwrap(), variance.sqrt()) < 1e-6, "{:?}", fit.curve.shape);
        }
    }
}

#[test]
fn a_step_reaches_its_target_at_the_threshold_or_not_at_all() {
    let step = Curve { shape: Shape::Step { threshold: 20.0 }, coefficients: vec![2.0, 3.0] };
    let data = DoseResponse::new(&DOSES, &on(&step, &DOSES, 5, 1.0)).unwrap();
    let fit = data.fit(&step.shape).unwrap();
    let found = target_dose(&fit, 2.5, 0.95).unwrap();
    assert_eq!((found.dose, found.se, found.interval), (Some(20.0), None, None));
    let missed = target_dose(&fit, 3.5, 0.95).unwrap();
    assert!(missed.dose.is_none() && (missed.farthest - 3.0).abs() < 1e-12);
    assert_eq!(target_dose(&fit, -1.0, 0.95).unwrap().farthest, 0.0);
}

fn refusal(doses: &[f64], groups: &[(usize, f64, f64)], shape: Shape) -> String {
    let groups = groups.iter().map(|&(n, mean, v)| GroupSummary { n, mean, variance: Some(v) }).collect();
    let data = DoseResponse::new(doses, &Summary { origin: 0.0, groups }).unwrap();
    data.fit(&shape).unwrap_err().to_string()
}

#[test]
fn a_fit_that_fails_says_which_and_why() {
    let emax = Shape::Emax { e50: 10.0 };
    let flat = [(5, 2.0, 1.0); 4];
    assert_eq!(
        refusal(&[0.0, 1.0, 5.0, 20.0], &flat, emax),
        "all means are equal, so that the Emax shape has nothing to follow"
    );
    assert_eq!(
        refusal(&[0.0, 1.0], &flat[..2], emax),
        "the Emax shape has 3 parameters and needs as many doses, but there are 2"
    );
    let single = [(1, 1.0, 0.0), (1, 2.0, 0.0), (1, 2.5, 0.0)];
    assert_eq!(
        refusal(&[0.0, 1.0, 5.0], &single, emax),
        "the Emax shape has 3 parameters and needs more observations than that, but there are 3"
    );
    // A line is the limit of Emax curves with ever greater e50; a jump at the first dose that of ever smaller ones.
    let line = [(5, 0.0, 1.0), (5, 1.0, 1.0), (5, 2.0, 1.0), (5, 3.1, 1.0)];
    assert_eq!(
        refusal(&[0.0, 1.0, 2.0, 3.0], &line, emax),
        "the Emax shape fits the better the greater its e50 is: the search ended at its bound, 30, where the data do not tell curves apart"
    );
    let jump = [(5, 0.0, 1.0), (5, 3.0, 1.0), (5, 3.0, 1.0), (5, 2.9, 1.0)];
    assert!(
        refusal(&[0.0, 1.0, 2.0, 3.0], &jump, emax)
            .starts_with("the Emax shape fits the better the smaller its e50 is")
    );
    assert_eq!(
        refusal(&[0.0, 1.0, 2.0, 3.0], &jump, Shape::Emax { e50: 0.0 }),
        "the guess e50 of the Emax shape is 0, but must be greater than 0"
    );
    // The curve of case 1 is Emax: the best logistic has its middle infinitely far below the doses, and SciPy finds no minimum.
    let (doses, summary) = sample(&cases("shapes/fits")[0]);
    let data = DoseResponse::new(&doses, &summary).unwrap();
    let refused = data.fit(&Shape::Logistic { e50: 10.0, delta: 5.0 }).unwrap_err();
    assert!(matches!(refused, NoFit::AtBound { parameter: "e50", direction: "smaller", .. }), "{refused}");
    // Equal means are nothing strange for a line.
    let groups = flat.iter().map(|&(n, mean, v)| GroupSummary { n, mean, variance: Some(v) }).collect();
    let data = DoseResponse::new(&[0.0, 1.0, 5.0, 20.0], &Summary { origin: 0.0, groups }).unwrap();
    assert!(data.fit(&Shape::Linear).unwrap().parameters[1].value.abs() < 1e-15);
}

fn emax(n: usize, variance: f64) -> (DoseResponse, ShapeFit) {
    let curve = Curve { shape: Shape::Emax { e50: 17.0 }, coefficients: vec![2.0, 5.0] };
    let data = DoseResponse::new(&DOSES, &on(&curve, &DOSES, n, variance)).unwrap();
    let fit = data.fit(&curve.shape).unwrap();
    (data, fit)
}

#[test]
fn the_bootstrap_is_the_same_for_every_slicing_and_another_for_another_seed() {
    let (data, fit) = emax(10, 4.0);
    let work = |seed: u64| BootstrapWork::new(&data, &fit, 3.0, 0.95, 300, seed).unwrap();
    let whole = work(7).finish();
    for per_slice in [1, 7, 299, 300, 10_000] {
        let mut sliced = work(7).per_slice(per_slice);
        let (mut slices, mut last) = (1, 0.0);
        let result: Bootstrap = loop {
            match sliced.advance() {
                Advance::Done(result) => break result,
                Advance::Working(progress) => {
                    assert!(progress.done > last && progress.done < 1.0);
                    (slices, last) = (slices + 1, progress.done);
                }
            }
        };
        assert_eq!(result, whole);
        assert_eq!(slices, 300_u64.div_ceil(per_slice));
    }
    assert_ne!(work(8).finish().median, whole.median);
}

#[test]
fn the_bootstrap_is_near_the_delta_interval_for_many_observations() {
    let (data, fit) = emax(200_000, 4.0);
    let delta = target_dose(&fit, 3.0, 0.95).unwrap();
    let (dose, se, interval) = (delta.dose.unwrap(), delta.se.unwrap(), delta.interval.unwrap());
    let bootstrap = BootstrapWork::new(&data, &fit, 3.0, 0.95, 8000, 1).unwrap().finish();
    assert_eq!((bootstrap.not_reached, bootstrap.at_bound, bootstrap.share_not_reached()), (0, 0, 0.0));
    // The standard error of the 2.5 % point of 8000 normal values is 0.030 of their standard deviation, of their median 0.014;
    // four of them, and the asymmetry of the dose, which is of the order of se / dose = 0.006.
    assert!(se / dose < 0.01, "{se} {dose}");
    let near = |one: f64, other: f64, allowed: f64| {
        assert!((one - other).abs() < allowed * se, "{one} {other} {se}")
    };
    near(bootstrap.lower.unwrap(), interval.lower, 0.13);
    near(bootstrap.upper.unwrap(), interval.upper, 0.13);
    near(bootstrap.median.unwrap(), dose, 0.07);
}

#[test]
fn replicates_that_do_not_reach_the_target_open_the_interval() {
    let (data, fit) = emax(10, 4.0);
    // The curve itself is 4.27 above the control at the highest dose: about half of the replicates are below.
    let half = BootstrapWork::new(&data, &fit, 4.2, 0.95, 1000, 3).unwrap().finish();
    assert!((0.3..0.7).contains(&half.share_not_reached()), "{half:?}");
    assert!(half.upper.is_none() && half.lower.is_some());
    // Sixteen standard deviations beyond the highest curve no replicate gets there.
    let never = BootstrapWork::new(&data, &fit, 40.0, 0.95, 200, 3).unwrap().finish();
    assert_eq!((never.not_reached, never.lower, never.median, never.upper), (200, None, None, None));
    let refused = |target: f64, confidence: f64, repeats: u64| {
        BootstrapWork::new(&data, &fit, target, confidence, repeats, 1).unwrap_err().to_string()
    };
    assert_eq!(refused(0.0, 0.95, 200), "target effect is 0, but must be a finite number other than 0");
    assert_eq!(refused(1.0, 1.0, 200), "confidence is 1, but must be greater than 0 and less than 1");
    let few = "must be from 100 to 1000000, and at least 2 / (1 - confidence)";
    assert_eq!(refused(1.0, 0.95, 99), format!("number of replicates is 99, but {few}"));
    assert_eq!(refused(1.0, 0.999, 1000), format!("number of replicates is 1000, but {few}"));
}

/// Residual sum of squares of the means around the best curve of exactly this shape, by the textbook formula of a regression;
/// infinite where the shape is flat to seven digits, too flat for that formula.
fn left_by(shape: &Shape, doses: &[f64], n: &[f64], means: &[f64]) -> f64 {
    let g: Vec<f64> = doses.iter().map(|x| shape.at(*x)).collect();
    let weighted = |of: &dyn Fn(usize) -> f64| (0..n.len()).map(|i| n[i] * of(i)).sum::<f64>();
    let total: f64 = n.iter().sum();
    let (mg, mm) = (weighted(&|i| g[i]) / total, weighted(&|i| means[i]) / total);
    let spread = weighted(&|i| (g[i] - mg) * (g[i] - mg));
    if spread < 1e-14 * weighted(&|i| g[i] * g[i]) {
        return f64::INFINITY;
    }
    let slope = weighted(&|i| (g[i] - mg) * (means[i] - mm)) / spread;
    weighted(&|i| {
        let left = means[i] - mm - slope * (g[i] - mg);
        left * left
    })
}

/// Noise of all sizes around curves of all kinds, and none: the sum of squares as a function of the parameters has several minima.
#[test]
fn no_random_parameters_fit_better_than_the_fit() {
    let n: [f64; 8] = [4.0, 9.0, 6.0, 7.0, 3.0, 8.0, 5.0, 6.0];
    let (mut fitted, mut at_bound) = (0, 0);
    for run in 0..120 {
        let mut stream = Streams::new(run, "many curves").stream(0);
        let truth = &curves()[run as usize % 8];
        let noise = [0.0, 0.1, 0.5, 2.0][run as usize % 4] * truth.above(60.0, 0.0).abs().max(0.5);
        let means: Vec<f64> =
            DOSES.iter().zip(n).map(|(x, n)| truth.at(*x) + noise * stream.normal() / n.sqrt()).collect();
        let groups =
            means.iter().zip(n).map(|(m, n)| GroupSummary { n: n as usize, mean: *m, variance: Some(1.0) });
        let data = DoseResponse::new(&DOSES, &Summary { origin: 0.0, groups: groups.collect() }).unwrap();
        let within = n.iter().sum::<f64>() - 8.0;
        for name in ["Emax", "exponential", "sigmoid Emax", "logistic"] {
            let fit = match data.fit(&shape(name, 100.0)) {
                Ok(fit) => fit,
                Err(NoFit::AtBound { .. }) => {
                    at_bound += 1;
                    continue;
                }
                Err(other) => panic!("{name} {run}: {other}"),
            };
            fitted += 1;
            let around = fit.residual_ss - within;
            for _ in 0..3000 {
                let mut between = |low: f64, high: f64| low * libm::pow(high / low, stream.uniform());
                let (e50, h) = (between(0.05, 1000.0), between(0.125, 32.0));
                let tried = match name {
                    "Emax" => Shape::Emax { e50 },
                    "exponential" => Shape::Exponential { delta: between(4.4, 1000.0) },
                    "sigmoid Emax" => Shape::SigmoidEmax { e50, h },
                    _ => Shape::Logistic { e50: between(1.0, 201.0) - 51.0, delta: between(1.0, 200.0) },
                };
                let left = left_by(&tried, &DOSES, &n, &means);
                // The sum of squares within, 40, takes digits from what the fit reports.
                assert!(
                    left > around - 1e-12 * within,
                    "{name} {run}: {tried:?} {left} {:?} {around}",
                    fit.curve
                );
            }
        }
    }
    assert!(fitted > 100 && at_bound > 10, "{fitted} {at_bound}");
}

/// Numbers from the whole range, in every place: an answer has no NaN, and nothing panics.
#[test]
fn extreme_numbers_are_fitted_or_refused() {
    const ODD: [f64; 12] =
        [0.0, 1.0, -1.0, 3.5, 1e-300, 1e300, -1e300, 1e-9, 1e9, 5e-324, f64::NAN, f64::INFINITY];
    let (mut fitted, mut refused) = (0, 0);
    for run in 0..500 {
        let mut stream = Streams::new(run, "extremes").stream(0);
        let mut odd = |usual: f64| {
            if stream.uniform() < 0.1 {
                ODD[stream.below(12) as usize]
            } else {
                usual * (1.0 + stream.uniform())
            }
        };
        let doses: Vec<f64> = (0..5).map(|i| odd(2.0 * f64::from(i))).collect();
        let group = |_| GroupSummary { n: 3, mean: odd(1.0), variance: Some(odd(1.0)) };
        let summary = Summary { origin: 0.0, groups: (0..5).map(group).collect() };
        let Ok(data) = DoseResponse::new(&doses, &summary) else { continue };
        let (a, b) = (odd(3.0), odd(1.0));
        for shape in [
            Shape::Linear,
            Shape::LogLinear { offset: a },
            Shape::Emax { e50: a },
            Shape::Exponential { delta: a },
            Shape::Quadratic { peak: a },
            Shape::SigmoidEmax { e50: a, h: b },
            Shape::Logistic { e50: a, delta: b },
            Shape::Step { threshold: a },
        ] {
            let Ok(fit) = data.fit(&shape) else {
                refused += 1;
                continue;
            };
            fitted += 1;
            let numbers = fit.parameters.iter().flat_map(|parameter| [parameter.value, parameter.se]);
            assert!(numbers.clone().all(f64::is_finite), "{run} {fit:?}");
            if let Ok(found) = target_dose(&fit, b, 0.95) {
                let all = [found.dose, found.se, found.interval.map(|interval| interval.lower)];
                assert!(all.into_iter().flatten().all(f64::is_finite), "{run} {found:?}");
                BootstrapWork::new(&data, &fit, b, 0.95, 100, run).unwrap().finish();
            }
        }
    }
    assert!(fitted > 300 && refused > 300, "{fitted} {refused}");
}
