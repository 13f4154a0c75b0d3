//! Standardised effects and their intervals.
//!
//! Sources: `data/values/datasets.json` (pairs, the SD of the two groups; 15 digits), `ncp_limits_f.json` and
//! `ncp_limits_t.json` (ball arithmetic, 20 digits), blood counts as in `one_way.rs` (independent computation by
//! quadrature, 6 digits); J(10) and J(12) likewise.

use crate::cases::{cases, number};
use crate::one_way::{agrees, blood_counts, etch, labels, sample_of};
use levelwise::methods::effect_size::{
    Coverage, StandardisedBy, StandardisedEffect, Standardiser, WelchEffect, WholeFactor, hedges_correction,
};
use levelwise::methods::overall::{AnovaTable, WelchTest};
use levelwise::numerics::distributions::noncentral_t;
use levelwise::study::{ContrastEstimate, Estimates, Sample, Summary, Variances};

fn effect(
    summary: &Summary,
    variances: Variances,
    coefficients: &[f64],
    coverage: Coverage,
) -> StandardisedEffect {
    let labels = labels(summary.groups.len());
    let estimates = Estimates::one_way(&labels, summary, variances).expect("estimates");
    let standardiser = Standardiser::of(summary, variances, coefficients).expect("an SD");
    let contrast = estimates.contrast(coefficients);
    StandardisedEffect::of(&contrast, coefficients, standardiser, coverage).expect("an effect")
}

#[test]
fn pairs_of_the_twelve_data_sets_agree() {
    for case in cases("datasets") {
        let sample = sample_of(&case);
        for pair in case["pairs"].as_array().expect("pairs") {
            let group = |key: &str| sample.groups[number(&pair[key]) as usize - 1].clone();
            let two = Sample { origin: 0.0, groups: vec![group("i"), group("j")] };
            let coverage = Coverage::Both { outside: 0.05 };
            let found = effect(&two.summary(), Variances::Equal, &[1.0, -1.0], coverage);
            let (d, g) = (found.d_interval.expect("an interval"), found.g_interval.expect("an interval"));
            let expected = &pair["effect"];
            let (t, df) = (number(&expected["t"]), number(&expected["df"]));
            let noncentrality = |p: f64| noncentral_t::noncentrality(t, df, p).expect("a noncentrality");
            for (computed, key) in [
                (found.d, "cohen_d"),
                (found.g, "hedges_g"),
                (hedges_correction(found.standardiser.df), "hedges_J"),
                (noncentrality(0.975), "ncp_lower"),
                (noncentrality(0.025), "ncp_upper"),
                (d.lower, "d_ci_lower"),
                (d.upper, "d_ci_upper"),
                (g.lower, "g_ci_lower"),
                (g.upper, "g_ci_upper"),
            ] {
                agrees(computed, number(&expected[key]), 1e-10, &format!("{}, {key}", case["name"]));
            }
        }
    }
}

#[test]
fn noncentrality_bounds_of_t_come_through_unchanged() {
    // With n = 1 in each of many groups the scale would be free; a made-up contrast with SD = se and coefficients
    // of total 2 makes d the t value and its bounds those of the noncentrality.
    for case in cases("ncp_limits_t") {
        let (t, df, level) = (number(&case["t"]), number(&case["df"]), number(&case["level"]));
        let contrast = ContrastEstimate { estimate: t, se: 1.0, df };
        let standardiser = Standardiser { sd: 1.0, df: 30.0, by: StandardisedBy::PooledOverAllGroups };
        let coverage = Coverage::Both { outside: 1.0 - level };
        let found =
            StandardisedEffect::of(&contrast, &[1.0, -1.0], standardiser, coverage).expect("an effect");
        let interval = found.d_interval.unwrap_or_else(|| panic!("no interval for {case}"));
        let bound = if case["side"] == "lower" { interval.lower } else { interval.upper };
        agrees(bound, number(&case["value"]), 1e-9, &case.to_string());
    }
}

#[test]
fn noncentrality_bounds_of_f_come_through_unchanged() {
    for case in cases("ncp_limits_f") {
        let (f, df1, df2) = (number(&case["f"]), number(&case["df1"]), number(&case["df2"]));
        let n = 100;
        let test = WelchTest { f, df1, df2, p: 0.5 };
        let size = WelchEffect::of(&test, n, number(&case["level"])).f;
        let bound = if case["side"] == "lower" { size.lower } else { size.upper };
        let bound = bound.unwrap_or_else(|| panic!("no bound for {case}"));
        agrees(bound * bound * n as f64, number(&case["value"]), 1e-9, &case.to_string());
    }
}

#[test]
fn intervals_of_eta_squared_agree_with_the_worked_examples() {
    let cases = [
        (etch(), 0.9, 0.820063, 0.944187),
        (blood_counts(), 0.9, 0.114675, 0.683102),
        (blood_counts(), 0.95, 0.056428, 0.712639),
    ];
    for (sample, confidence, lower, upper) in cases {
        let table = AnovaTable::of(&labels(sample.groups.len()), &sample.summary()).expect("a table");
        let eta = WholeFactor::of(&table, confidence).eta_squared;
        agrees(eta.lower.expect("a bound"), lower, 1e-5, "lower bound of eta squared");
        agrees(eta.upper.expect("a bound"), upper, 1e-6, "upper bound of eta squared");
    }
}

/// A row of the worked example: coefficients, d, g, and two intervals of d.
type Row = ([f64; 3], f64, f64, [f64; 2], [f64; 2]);

#[test]
fn blood_counts_agree_at_both_levels() {
    let summary = blood_counts().summary();
    // A - control, B - control, B - A; intervals of 95 % each, then at the level of the Tukey-Kramer critical value.
    let rows: [Row; 3] = [
        ([-1.0, 1.0, 0.0], 0.553212, 0.517774, [-0.741803, 1.826101], [-0.975664, 2.060317]),
        ([-1.0, 0.0, 1.0], 2.236678, 2.093401, [0.726776, 3.687414], [0.465940, 3.965787]),
        ([0.0, -1.0, 1.0], 1.683466, 1.575626, [0.181978, 3.129768], [-0.082871, 3.402178]),
    ];
    let tukey_level = Coverage::beyond_both(2.667_864, 12.0).expect("a coverage");
    for (coefficients, d, g, single, tukey) in rows {
        for (coverage, bounds) in [(Coverage::Both { outside: 0.05 }, single), (tukey_level, tukey)] {
            let found = effect(&summary, Variances::Equal, &coefficients, coverage);
            agrees(found.d, d, 2e-6, "d");
            agrees(found.g, g, 2e-6, "g");
            let interval = found.d_interval.expect("an interval");
            agrees(interval.lower, bounds[0], 2e-5, "lower bound of d");
            agrees(interval.upper, bounds[1], 2e-6, "upper bound of d");
        }
    }
    // (A + B)/2 - control = 1.639 in units of the pooled SD, whatever multiple of the contrast is asked for.
    for scale in [0.5, 1.0, 7.0] {
        let coefficients = [-scale, scale / 2.0, scale / 2.0];
        let found = effect(&summary, Variances::Equal, &coefficients, Coverage::Both { outside: 0.05 });
        agrees(found.d, 1.639 / 1.380523_f64.sqrt(), 1e-6, "d of a contrast");
    }
}

#[test]
fn hedges_factor_is_exact_and_its_series_joins_without_a_step() {
    agrees(hedges_correction(10.0), 0.922746, 1e-6, "J(10)");
    agrees(hedges_correction(12.0), 0.935942, 1e-6, "J(12)");
    // Γ(1)/(1·Γ(1/2)) = 1/√π at df 2.
    agrees(hedges_correction(2.0), 1.0 / std::f64::consts::PI.sqrt(), 1e-14, "J(2)");
    // J(df) J(df - 1) = (df - 2)/√(df (df - 1)), from Γ(z + 1) = z Γ(z): across the join and far out.
    for df in [3.0, 50.0, 99.5, 100.5, 101.0, 1e4, 1e8] {
        let product = hedges_correction(df) * hedges_correction(df - 1.0);
        agrees(product, (df - 2.0) / (df * (df - 1.0)).sqrt(), 1e-13, &format!("J({df})"));
    }
}

#[test]
fn the_interval_excludes_zero_exactly_when_the_row_rejects() {
    for variances in [Variances::Equal, Variances::Unequal] {
        let summary = blood_counts().summary();
        let estimates = Estimates::one_way(&labels(3), &summary, variances).expect("estimates");
        for coefficients in [[-1.0, 1.0, 0.0], [-1.0, 0.0, 1.0], [0.0, -1.0, 1.0], [-1.0, 0.5, 0.5]] {
            let row = estimates.contrast(&coefficients);
            let t = row.estimate / row.se;
            for critical in [0.5 * t.abs(), 0.999 * t.abs(), 1.001 * t.abs(), 2.0 * t.abs()] {
                let coverage = Coverage::beyond_both(critical, row.df).expect("a coverage");
                let found = effect(&summary, variances, &coefficients, coverage);
                let interval = found.d_interval.expect("an interval");
                assert_eq!(
                    interval.lower > 0.0 || interval.upper < 0.0,
                    t.abs() >= critical,
                    "{variances:?} {t}"
                );
                assert!(interval.lower <= found.d && found.d <= interval.upper);
            }
        }
    }
}

#[test]
fn the_interval_of_eta_squared_excludes_zero_exactly_when_f_rejects() {
    let table = AnovaTable::of(&labels(3), &blood_counts().summary()).expect("a table");
    for alpha in [table.p * 0.99, table.p * 1.01] {
        let lower = WholeFactor::of(&table, 1.0 - 2.0 * alpha).eta_squared.lower.expect("a bound");
        assert_eq!(lower > 0.0, table.p < alpha, "alpha {alpha}, bound {lower}");
    }
}

#[test]
fn unequal_variances_take_the_groups_of_the_contrast_alone() {
    let summary = blood_counts().summary();
    let found = effect(&summary, Variances::Unequal, &[-1.0, 0.0, 1.0], Coverage::Both { outside: 0.05 });
    let variance = |i: usize| summary.groups[i].variance.expect("a variance");
    let sd = ((variance(0) + variance(2)) / 2.0).sqrt();
    agrees(found.standardiser.sd, sd, 1e-15, "SD");
    assert_eq!(found.standardiser.by, StandardisedBy::AverageVarianceOf(vec![0, 2]));
    agrees(found.d, (summary.groups[2].mean - summary.groups[0].mean) / sd, 1e-14, "d");
}

#[test]
fn one_sided_rows_have_one_bound() {
    let summary = blood_counts().summary();
    let coefficients = [-1.0, 0.0, 1.0];
    let lower = effect(&summary, Variances::Equal, &coefficients, Coverage::LowerBound { outside: 0.025 });
    let both = effect(&summary, Variances::Equal, &coefficients, Coverage::Both { outside: 0.05 });
    let (lower, both) = (lower.d_interval.expect("an interval"), both.d_interval.expect("an interval"));
    assert_eq!((lower.lower, lower.upper), (both.lower, f64::INFINITY));
    let upper = effect(&summary, Variances::Equal, &coefficients, Coverage::UpperBound { outside: 0.025 });
    let upper = upper.d_interval.expect("an interval");
    assert_eq!((upper.lower, upper.upper), (f64::NEG_INFINITY, both.upper));
}
