//! The ratio of means and Fieller's set.
//!
//! Source: `data/effects/ratio.json`: the ratios whose own test does not reject, found by going along all ratios in 40-digit arithmetic,
//! without the quadratic formula.

use crate::accuracy::permitted;
use crate::cases::{cases, number};
use crate::one_way::{agrees, blood_counts, labels};
use levelwise::methods::effect_size::ratio::{NoRatio, RatioOfMeans, RatioSet, Reach, Zero};
use levelwise::numerics::random::{Stream, Streams};
use levelwise::study::{Estimates, Sample, Variances};
use serde_json::Value;

fn list(value: &Value) -> Vec<f64> {
    value.as_array().expect("a list").iter().map(number).collect()
}

fn estimates(groups: Vec<Vec<f64>>, variances: Variances) -> Estimates {
    let labels = labels(groups.len());
    let sample = Sample { origin: 0.0, groups };
    Estimates::one_way(&labels, &sample.summary(), variances).expect("estimates")
}

fn ratio(estimates: &Estimates, coefficients: &[f64], reach: Reach) -> RatioOfMeans {
    RatioOfMeans::of(estimates, coefficients, reach, Zero::Natural).expect("a ratio")
}

#[test]
fn sets_agree_with_the_ratios_that_are_not_rejected() {
    let allowed = permitted("ratio of means");
    let mut shapes = [0; 3];
    for case in cases("effects/ratio") {
        let groups = case["groups"].as_array().expect("groups").iter().map(list).collect();
        let variances = if case["variances"] == "equal" { Variances::Equal } else { Variances::Unequal };
        let coefficients = list(&case["coefficients"]);
        let found =
            ratio(&estimates(groups, variances), &coefficients, Reach::Both(number(&case["critical"])));
        agrees(found.ratio, number(&case["ratio"]), allowed, "ratio");
        agrees(found.numerator / found.denominator, found.ratio, allowed, "ratio");
        let (shape, which, ends) = match found.set {
            RatioSet::Bounded(interval) => ("bounded", 0, Some(interval)),
            RatioSet::AllBut(gap) => ("all but", 1, Some(gap)),
            RatioSet::All => ("all", 2, None),
        };
        shapes[which] += 1;
        assert_eq!(case["shape"], shape, "{case}");
        if let Some(ends) = ends {
            agrees(ends.lower, number(&case["low"]), allowed, &format!("lower end, {case}"));
            agrees(ends.upper, number(&case["high"]), allowed, &format!("upper end, {case}"));
        }
    }
    assert!(shapes.iter().all(|count| *count > 0), "every shape occurs: {shapes:?}");
}

/// Means above 0, some of them hardly.
fn drawn(stream: &mut Stream) -> (Estimates, Vec<f64>) {
    loop {
        let k = 2 + stream.below(4) as usize;
        let spread = libm::exp(2.0 * stream.normal());
        let groups: Vec<Vec<f64>> = (0..k)
            .map(|_| {
                let (n, mean) = (2 + stream.below(6), 1.0 + stream.uniform());
                (0..n).map(|_| mean + spread * stream.normal()).collect()
            })
            .collect();
        let variances = if stream.below(2) == 0 { Variances::Equal } else { Variances::Unequal };
        let found = estimates(groups, variances);
        let mut coefficients: Vec<f64> = (0..k).map(|_| f64::from(stream.below(5)) - 2.0).collect();
        let excess: f64 = coefficients.iter().sum();
        coefficients[0] -= excess;
        if found.means.iter().all(|mean| *mean > 0.0) && coefficients.iter().any(|c| *c != 0.0) {
            return (found, coefficients);
        }
    }
}

#[test]
fn the_set_leaves_out_1_exactly_when_the_interval_of_the_difference_leaves_out_0() {
    let mut stream = Streams::new(2026, "ratios of means").stream(0);
    let mut seen = std::collections::BTreeMap::new();
    for _ in 0..4000 {
        let (estimates, coefficients) = drawn(&mut stream);
        let row = estimates.contrast(&coefficients);
        let t = row.estimate / row.se;
        if t == 0.0 {
            continue;
        }
        for critical in [0.5 * t.abs(), t.abs() * (1.0 - 1e-9), t.abs() * (1.0 + 1e-9), 1.0, 2.5, 6.0] {
            let both = ratio(&estimates, &coefficients, Reach::Both(critical));
            let lower = ratio(&estimates, &coefficients, Reach::LowerBound(critical));
            let upper = ratio(&estimates, &coefficients, Reach::UpperBound(critical));
            assert_eq!(
                both.set.excludes_one(),
                t.abs() > critical,
                "{t} {critical} {estimates:?} {coefficients:?}"
            );
            assert_eq!(
                lower.set.excludes_one(),
                t > critical,
                "{t} {critical} {estimates:?} {coefficients:?}"
            );
            assert_eq!(
                upper.set.excludes_one(),
                -t > critical,
                "{t} {critical} {estimates:?} {coefficients:?}"
            );
            if let Some(interval) = both.set.interval() {
                assert!(interval.lower <= both.ratio && both.ratio <= interval.upper);
            }
            let shape = match both.set {
                RatioSet::Bounded(_) => "bounded",
                RatioSet::AllBut(_) => "all but",
                RatioSet::All => "all",
            };
            *seen.entry((shape, both.set.excludes_one())).or_insert(0) += 1;
        }
    }
    // All shapes, the bounded one and the gap with and without 1 in it, many times.
    assert!(seen.len() == 5 && seen.values().all(|count| *count > 100), "{seen:?}");
}

#[test]
fn the_inverse_contrast_has_the_inverse_ratio_and_bounds() {
    let estimates = estimates(blood_counts().groups, Variances::Equal);
    for coefficients in [[-1.0, 1.0, 0.0], [-1.0, 0.5, 0.5], [4.0, -8.0, 4.0]] {
        let turned: Vec<f64> = coefficients.iter().map(|c| -c).collect();
        let one = ratio(&estimates, &coefficients, Reach::Both(2.5));
        let other = ratio(&estimates, &turned, Reach::Both(2.5));
        let (bounds, inverse) = (one.set.interval().expect("bounds"), other.set.interval().expect("bounds"));
        agrees(other.ratio, 1.0 / one.ratio, 1e-14, "ratio");
        agrees(inverse.lower, 1.0 / bounds.upper, 1e-13, "lower bound");
        agrees(inverse.upper, 1.0 / bounds.lower, 1e-13, "upper bound");
        agrees(other.numerator, one.denominator, 1e-14, "numerator");
        agrees(other.denominator, one.numerator, 1e-14, "denominator");
        // One-sided sets at the same critical value share the bounds.
        for (reach, lower, upper) in [
            (Reach::LowerBound(2.5), bounds.lower, f64::INFINITY),
            (Reach::UpperBound(2.5), f64::NEG_INFINITY, bounds.upper),
        ] {
            let found = ratio(&estimates, &coefficients, reach).set.interval().expect("a bound");
            assert_eq!((found.lower, found.upper), (lower, upper));
        }
    }
}

#[test]
fn the_unit_of_the_outcome_and_a_multiple_of_the_contrast_change_nothing() {
    let groups = blood_counts().groups;
    let plain = ratio(&estimates(groups.clone(), Variances::Equal), &[-1.0, 0.5, 0.5], Reach::Both(2.0));
    for (unit, factor) in [(1e-9, 1.0), (1e12, 3.0), (0.5, 1e-30), (1.0, 1e30)] {
        let scaled = groups.iter().map(|group| group.iter().map(|x| x * unit).collect()).collect();
        let coefficients = [-factor, factor / 2.0, factor / 2.0];
        let found = ratio(&estimates(scaled, Variances::Equal), &coefficients, Reach::Both(2.0));
        let (one, two) = (plain.set.interval().expect("bounds"), found.set.interval().expect("bounds"));
        agrees(found.ratio, plain.ratio, 1e-13, "ratio");
        agrees(two.lower, one.lower, 1e-13, "lower bound");
        agrees(two.upper, one.upper, 1e-13, "upper bound");
    }
    // Means as offsets from another origin.
    let mut moved = estimates(groups, Variances::Equal);
    moved.origin = 8.0;
    moved.means = moved.means.iter().map(|mean| mean - 8.0).collect();
    agrees(ratio(&moved, &[-1.0, 0.5, 0.5], Reach::Both(2.0)).ratio, plain.ratio, 1e-14, "ratio");
}

#[test]
fn what_has_no_ratio_is_refused_with_the_reason() {
    let sound = estimates(blood_counts().groups, Variances::Equal);
    let refused = |estimates: &Estimates, coefficients: &[f64], critical: f64, zero: Zero| -> NoRatio {
        RatioOfMeans::of(estimates, coefficients, Reach::Both(critical), zero).expect_err("no ratio")
    };
    let pair = [-1.0, 1.0, 0.0];
    assert_eq!(refused(&sound, &pair, 2.0, Zero::Arbitrary), NoRatio::ArbitraryZero);
    for coefficients in [&[-1.0, 1.0][..], &[0.0; 3], &[1.0, 1.0, 0.0], &[f64::NAN, 1.0, -1.0]] {
        assert_eq!(refused(&sound, coefficients, 2.0, Zero::Natural), NoRatio::NotADifference);
    }
    for critical in [-1.0, f64::INFINITY] {
        assert_eq!(refused(&sound, &pair, critical, Zero::Natural), NoRatio::Critical { critical });
    }
    assert!(matches!(refused(&sound, &pair, f64::NAN, Zero::Natural), NoRatio::Critical { .. }));
    // Every mean counts, also of a level that the contrast leaves out.
    let low = estimates(vec![vec![1.0, 2.0], vec![3.0, 4.0], vec![-1.0, -3.0]], Variances::Equal);
    let error = refused(&low, &pair, 2.0, Zero::Natural);
    assert_eq!(error.to_string(), "the mean of level 3 is -2; a ratio of means needs all means above 0");
}
