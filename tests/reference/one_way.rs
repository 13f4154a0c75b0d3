//! The one-way layout as a whole: table, Welch, Levene, Brown-Forsythe, Kruskal-Wallis, effect sizes.
//!
//! Sources:
//! - `data/values/datasets.json`: twelve data sets, sums of squares, ranks and statistics in exact rational
//!   arithmetic, tails in ball arithmetic; 15 digits.
//! - Etch rates: Montgomery, Design and Analysis of Experiments, table 3.1 (published data and F); the further
//!   numbers computed independently by quadrature, 6 digits.
//! - Blood counts: Dunnett (1955), J. Amer. Statist. Assoc. 50, 1096–1121 (data quoted from memory); the further
//!   numbers computed independently by quadrature and enumeration, 6 digits.
//! - Resistors: NIST/SEMATECH e-Handbook 7.4.3.3, `data/nist-handbook/one-way-anova-7.4.3.json`.

use crate::cases::{cases, number, relative_error};
use levelwise::methods::effect_size::WholeFactor;
use levelwise::methods::overall::{AnovaTable, KruskalWallis, NoOverallTest, WelchTest};
use levelwise::methods::profile::{Centre, bartlett, shapiro_wilk, spread_test};
use levelwise::study::{NoEstimates, Sample};
use serde_json::Value;

pub fn labels(count: usize) -> Vec<String> {
    (1..=count).map(|i| format!("level {i}")).collect()
}

/// The groups of one case as offsets from its first value. In the set with a large offset all values are multiples
/// of 1/32, so that the offsets are exact; elsewhere they carry the rounding of the values.
pub fn sample_of(case: &Value) -> Sample {
    let groups = case["groups"].as_array().expect("groups");
    let values = |group: &Value| {
        let data = group["data"].as_array().or(group["values"].as_array()).expect("values");
        data.iter().map(number).collect()
    };
    let groups: Vec<Vec<f64>> = groups.iter().map(values).collect();
    let origin = groups[0][0];
    let offsets = |group: Vec<f64>| group.into_iter().map(|value| value - origin).collect();
    Sample { origin, groups: groups.into_iter().map(offsets).collect() }
}

/// Etch rates at 160, 180, 200 and 220 watts.
pub fn etch() -> Sample {
    Sample {
        origin: 0.0,
        groups: vec![
            vec![575.0, 542.0, 530.0, 539.0, 570.0],
            vec![565.0, 593.0, 590.0, 579.0, 610.0],
            vec![600.0, 651.0, 610.0, 637.0, 629.0],
            vec![725.0, 700.0, 715.0, 685.0, 710.0],
        ],
    }
}

/// Blood counts under control, A and B.
pub fn blood_counts() -> Sample {
    Sample {
        origin: 0.0,
        groups: vec![
            vec![7.40, 8.50, 7.20, 8.24, 9.84, 8.32],
            vec![9.76, 8.80, 7.68, 9.36],
            vec![12.80, 9.68, 12.16, 9.20, 10.55],
        ],
    }
}

/// Fails unless `computed` has the digits of `expected`, named by `what`.
pub fn agrees(computed: f64, expected: f64, allowed: f64, what: &str) {
    let error = relative_error(computed, expected);
    assert!(
        error <= allowed,
        "{what}: computed {computed:e}, expected {expected:e}, relative error {error:e}"
    );
}

#[test]
fn twelve_data_sets_agree_in_every_statistic() {
    for case in cases("datasets") {
        let name = case["name"].as_str().expect("a name");
        let sample = sample_of(&case);
        let labels = labels(sample.groups.len());
        let summary = sample.summary();
        let check = |computed: f64, expected: &Value, what: &str| {
            agrees(computed, number(expected), 2e-12, &format!("{name}, {what}"));
        };
        for (group, expected) in summary.groups.iter().zip(case["groups"].as_array().expect("groups")) {
            check(sample.origin + group.mean, &expected["mean"], "mean");
            check(group.variance.expect("a variance"), &expected["variance"], "variance");
        }
        let table = AnovaTable::of(&labels, &summary).expect("a table");
        let expected = &case["anova"];
        check(table.ss_between, &expected["ss_between"], "SS between");
        check(table.ms_between, &expected["ms_between"], "MS between");
        check(table.ss_within, &expected["ss_within"], "SS within");
        check(table.ms_within, &expected["ms_within"], "MS within");
        check(table.df_between, &expected["df_between"], "df between");
        check(table.ss_total(), &expected["ss_total"], "SS in all");
        check(table.n as f64 - 1.0, &expected["df_total"], "df in all");
        check(table.df_within, &expected["df_within"], "df within");
        check(table.f, &expected["F"], "F");
        check(table.p, &expected["p"], "p of F");
        let welch = WelchTest::of(&labels, &summary).expect("Welch's test");
        check(welch.f, &case["welch"]["F"], "Welch's F");
        check(welch.df2, &case["welch"]["df2"], "Welch's df2");
        check(welch.p, &case["welch"]["p"], "p of Welch's F");
        for (centre, key) in [(Centre::Mean, "levene_mean"), (Centre::Median, "brown_forsythe")] {
            let test = spread_test(&labels, &sample, centre).expect("a test of spread");
            check(test.f, &case[key]["F"], key);
            check(test.p, &case[key]["p"], key);
            check(test.df2, &case[key]["df2"], key);
        }
        let ranks = KruskalWallis::of(&labels, &sample).expect("a rank test");
        check(ranks.h, &case["kruskal_wallis"]["H"], "H");
        check(ranks.p_chi_squared, &case["kruskal_wallis"]["p"], "p of H");
        check(ranks.tie_correction, &case["kruskal_wallis"]["tie_correction"], "tie correction");
        check(ranks.h * ranks.tie_correction, &case["kruskal_wallis"]["H_uncorrected"], "H, ties ignored");
        let rank_sums = case["kruskal_wallis"]["rank_sums"].as_array().expect("rank sums");
        for ((mean, group), expected) in ranks.mean_ranks.iter().zip(&sample.groups).zip(rank_sums) {
            check(mean * group.len() as f64, expected, "rank sum");
        }
        let effects = WholeFactor::of(&table, 0.9);
        let expected = &case["effect_sizes"];
        check(effects.eta_squared.estimate, &expected["eta2"], "eta squared");
        check(effects.omega_squared.estimate, &expected["omega2"], "omega squared");
        check(effects.epsilon_squared.estimate, &expected["epsilon2"], "epsilon squared");
        check(ranks.epsilon_squared, &expected["kruskal_epsilon2_R"], "rank epsilon squared");
    }
}

#[test]
fn etch_rates_agree_with_the_worked_example() {
    let (sample, labels) = (etch(), labels(4));
    let summary = sample.summary();
    let table = AnovaTable::of(&labels, &summary).expect("a table");
    agrees(table.ss_between, 66_870.55, 1e-12, "SS between");
    agrees(table.ss_within, 5_339.20, 1e-12, "SS within");
    agrees(table.f, 66.7971, 1e-6, "F");
    agrees(table.p, 2.8829e-9, 2e-5, "p");
    let welch = WelchTest::of(&labels, &summary).expect("Welch's test");
    agrees(welch.f, 68.71906, 1e-7, "Welch's F");
    agrees(welch.df2, 8.827817, 1e-7, "Welch's df2");
    agrees(welch.p, 1.9128e-6, 2e-5, "p of Welch's F");
    let test = spread_test(&labels, &sample, Centre::Median).expect("a test of spread");
    agrees(test.f, 0.195868, 3e-6, "Brown-Forsythe");
    agrees(test.p, 0.897669, 1e-6, "p of Brown-Forsythe");
    let test = bartlett(&labels, &summary).expect("Bartlett's test");
    agrees(test.chi2, 0.433488, 2e-6, "Bartlett");
    agrees(test.p, 0.933241, 1e-6, "p of Bartlett");
    let ranks = KruskalWallis::of(&labels, &sample).expect("a rank test");
    agrees(ranks.h, 16.906998, 1e-7, "H");
    agrees(ranks.p_chi_squared, 0.000738560, 1e-6, "p of H");
    let normality = shapiro_wilk(&sample.residuals()).expect("W");
    agrees(normality.w, 0.937520, 1e-6, "W");
    agrees(normality.p, 0.215165, 1e-5, "p of W");
    let effects = WholeFactor::of(&table, 0.9);
    agrees(effects.eta_squared.estimate, 0.926060, 1e-6, "eta squared");
    agrees(effects.omega_squared.estimate, 0.908000, 1e-6, "omega squared");
    agrees(effects.epsilon_squared.estimate, 0.912196, 1e-6, "epsilon squared");
}

#[test]
fn blood_counts_agree_with_the_worked_example() {
    let (sample, labels) = (blood_counts(), labels(3));
    let summary = sample.summary();
    let table = AnovaTable::of(&labels, &summary).expect("a table");
    agrees(table.ms_within, 1.380523, 1e-6, "MS within");
    agrees(table.f, 7.136936, 1e-6, "F");
    agrees(table.p, 0.00907701, 1e-6, "p");
    let welch = WelchTest::of(&labels, &summary).expect("Welch's test");
    agrees(welch.f, 5.002074, 2e-7, "Welch's F");
    agrees(welch.df2, 7.207311, 2e-7, "Welch's df2");
    agrees(welch.p, 0.0434168, 2e-6, "p of Welch's F");
    let test = spread_test(&labels, &sample, Centre::Median).expect("a test of spread");
    agrees(test.f, 1.147120, 1e-6, "Brown-Forsythe");
    agrees(test.p, 0.350043, 2e-6, "p of Brown-Forsythe");
    let test = bartlett(&labels, &summary).expect("Bartlett's test");
    agrees(test.chi2, 1.389598, 1e-6, "Bartlett");
    agrees(test.p, 0.499175, 2e-6, "p of Bartlett");
    let ranks = KruskalWallis::of(&labels, &sample).expect("a rank test");
    agrees(ranks.h, 6.75, 1e-12, "H");
    agrees(ranks.p_chi_squared, 0.0342181, 2e-6, "p of H");
    agrees(ranks.epsilon_squared, 0.482143, 1e-6, "rank epsilon squared");
}

#[test]
fn resistors_agree_with_the_handbook() {
    let path =
        concat!(env!("CARGO_MANIFEST_DIR"), "/tests/reference/data/nist-handbook/one-way-anova-7.4.3.json");
    let text = std::fs::read_to_string(path).expect("the handbook's values");
    let file: Value = serde_json::from_str(&text).expect("JSON");
    let section = &file["sections"].as_array().expect("sections")[0];
    let printed = |id: &str| {
        let values = section["values"].as_array().expect("values");
        let value = values.iter().find(|value| value["id"] == id).unwrap_or_else(|| panic!("no {id}"));
        number(&value["recomputed"])
    };
    let sample = sample_of(&file["data"]);
    let table = AnovaTable::of(&labels(3), &sample.summary()).expect("a table");
    agrees(table.ss_between, printed("ss_treatments"), 2e-14, "SS between");
    agrees(table.ss_within, printed("ss_error"), 2e-14, "SS within");
    agrees(table.ms_between, printed("ms_treatments"), 2e-14, "MS between");
    agrees(table.ms_within, printed("ms_error"), 2e-14, "MS within");
    agrees(table.f, printed("F"), 2e-14, "F");
    agrees(table.p, printed("p_value"), 2e-13, "p");
}

#[test]
fn kruskal_wallis_agrees_with_the_textbook_on_three_groups_of_lung_patients() {
    // Hollander and Wolfe, Nonparametric Statistical Methods (data quoted from memory); H and p recomputed
    // independently, 6 digits.
    let groups = vec![vec![2.9, 3.0, 2.5, 2.6, 3.2], vec![3.8, 2.7, 4.0, 2.4], vec![2.8, 3.4, 3.7, 2.2, 2.0]];
    let ranks = KruskalWallis::of(&labels(3), &Sample { origin: 0.0, groups }).expect("a rank test");
    agrees(ranks.h, 0.771429, 1e-6, "H");
    agrees(ranks.p_chi_squared, 0.679965, 1e-6, "p of H");
}

#[test]
fn what_cannot_be_tested_is_refused_by_level() {
    let labels = vec!["none".to_owned(), "15 min".to_owned()];
    let sample =
        |one: &[f64], other: &[f64]| Sample { origin: 0.0, groups: vec![one.to_vec(), other.to_vec()] };
    let single = sample(&[1.0, 2.0, 4.0], &[3.0]);
    let message =
        WelchTest::of(&labels, &single.summary()).expect_err("one value has no variance").to_string();
    assert_eq!(message, "level \"15 min\" has 1 observation; unequal variances need at least 2");
    assert!(AnovaTable::of(&labels, &single.summary()).is_ok(), "a pooled variance takes a single value");
    let empty = sample(&[1.0, 2.0], &[]);
    let error = KruskalWallis::of(&labels, &empty).expect_err("an empty level");
    assert_eq!(error.to_string(), "level \"15 min\" has no observation");
    // 0.1 has no exact binary form: a mean of three of them must not differ from it.
    let equal = sample(&[0.1, 0.1, 0.1], &[0.7, 0.7, 0.7]);
    for error in [
        AnovaTable::of(&labels, &equal.summary()).expect_err("no variation"),
        WelchTest::of(&labels, &equal.summary()).expect_err("no variation"),
    ] {
        assert_eq!(error, NoOverallTest::NoEstimates(NoEstimates::NoErrorTerm));
    }
    let constant = sample(&[5.0, 5.0], &[5.0]);
    assert_eq!(KruskalWallis::of(&labels, &constant), Err(NoOverallTest::AllTied));
    let flat = sample(&[1.0, 2.0, 3.0], &[7.0, 7.0]);
    let message = WelchTest::of(&labels, &flat.summary()).expect_err("an infinite weight").to_string();
    assert_eq!(
        message,
        "level \"15 min\" has no variation: all its values are equal, so it has no variance of its own"
    );
    let huge = sample(&[1e300, -1e300], &[1e299, 3e299]);
    assert_eq!(AnovaTable::of(&labels, &huge.summary()), Err(NoEstimates::OutOfRange.into()));
}

#[test]
fn pairs_of_values_have_no_spread_that_could_differ() {
    // Both values of a pair lie equally far from their centre; the last bit must not make an F of it.
    let sample = Sample { origin: 0.0, groups: vec![vec![0.1, 0.4], vec![0.3, 1.7], vec![2.2, 2.3]] };
    for centre in [Centre::Mean, Centre::Median] {
        let error = spread_test(&labels(3), &sample, centre).expect_err("no variation of the distances");
        assert_eq!(error.to_string(), "the distances from the group centres do not vary inside any group");
    }
}
