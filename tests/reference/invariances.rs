//! What must not change when values are shifted, scaled or relabelled, and what two levels must reproduce.
//! Properties, from seeded inputs; no outside numbers.

use crate::cases::relative_error;
use levelwise::methods::effect_size::WholeFactor;
use levelwise::methods::overall::{AnovaTable, KruskalWallis, WelchTest};
use levelwise::methods::profile::{Centre, bartlett, shapiro_wilk, spread_test};
use levelwise::numerics::distributions::student_t;
use levelwise::study::{Estimates, Sample, Variances};
use proptest::prelude::*;
use proptest::test_runner::{Config, RngAlgorithm, TestRng, TestRunner};

/// Groups of whole numbers (so that shifts and scales by powers of two are exact), two to five of them.
fn groups() -> impl Strategy<Value = Vec<Vec<f64>>> {
    let group = prop::collection::vec((-40_i32..40).prop_map(f64::from), 3..9);
    prop::collection::vec(group, 2..6).prop_filter("every group varies", |groups| {
        groups.iter().all(|group| group.iter().any(|value| *value != group[0]))
    })
}

fn seeded(check: impl Fn(Vec<Vec<f64>>)) {
    seeded_up_to(200, check);
}

fn seeded_up_to(cases: u32, check: impl Fn(Vec<Vec<f64>>)) {
    let rng = TestRng::from_seed(RngAlgorithm::ChaCha, &[7; 32]);
    let mut runner =
        TestRunner::new_with_rng(Config { cases, failure_persistence: None, ..Config::default() }, rng);
    runner
        .run(&groups(), |groups| {
            check(groups);
            Ok(())
        })
        .unwrap_or_else(|error| panic!("{error}"));
}

/// Every p-value and scale-free number of the layout, by name; a test that is refused is left out.
fn scale_free(groups: &[Vec<f64>]) -> Vec<(&'static str, f64)> {
    let labels: Vec<String> = (0..groups.len()).map(|i| i.to_string()).collect();
    let sample = Sample { origin: 0.0, groups: groups.to_vec() };
    let summary = sample.summary();
    let table = AnovaTable::of(&labels, &summary).expect("a table");
    let effects = WholeFactor::of(&table, 0.9);
    let welch = WelchTest::of(&labels, &summary).expect("Welch's test");
    let mut found = vec![
        ("F", table.f),
        ("p", table.p),
        ("eta squared", effects.eta_squared.estimate),
        ("omega squared", effects.omega_squared.estimate),
        ("Welch", welch.f),
        ("Welch df", welch.df2),
        ("Welch p", welch.p),
        ("Bartlett", bartlett(&labels, &summary).expect("Bartlett's test").p),
        ("Shapiro-Wilk", shapiro_wilk(&sample.residuals()).expect("W").w),
    ];
    found.extend(effects.eta_squared.lower.map(|bound| ("lower bound", bound)));
    found.extend(spread_test(&labels, &sample, Centre::Mean).map(|test| ("Levene", test.p)));
    found.extend(spread_test(&labels, &sample, Centre::Median).map(|test| ("Brown-Forsythe", test.p)));
    found
}

fn same(one: &[(&str, f64)], other: &[(&str, f64)], allowed: f64) {
    assert_eq!(one.len(), other.len());
    for ((name, one), (_, other)) in one.iter().zip(other) {
        let error = relative_error(*one, *other).min((one - other).abs());
        assert!(error <= allowed, "{name}: {one:e} became {other:e}");
    }
}

#[test]
fn shifting_and_scaling_change_no_decision() {
    seeded(|groups| {
        let plain = scale_free(&groups);
        for (scale, shift) in [(1.0, 1024.0), (4.0, -8.0), (0.03125, 0.0), (0.001, 7.7)] {
            let moved: Vec<Vec<f64>> =
                groups.iter().map(|group| group.iter().map(|x| scale * x + shift).collect()).collect();
            // Powers of two keep the values exact; the last pair rounds each value to about 1e-14 of their spread.
            same(&plain, &scale_free(&moved), if scale == 0.001 { 1e-8 } else { 1e-10 });
        }
    });
}

/// Fewer studies than elsewhere, because exact p-values are counted anew for each.
#[test]
fn ranks_know_no_scale_and_no_order() {
    let ranks = |groups: &[Vec<f64>]| {
        let labels: Vec<String> = (0..groups.len()).map(|i| i.to_string()).collect();
        let test =
            KruskalWallis::of(&labels, &Sample { origin: 0.0, groups: groups.to_vec() }).expect("a test");
        [("H", test.h), ("p", test.p), ("p of chi-squared", test.p_chi_squared)]
    };
    seeded_up_to(50, |mut groups| {
        let plain = ranks(&groups);
        let moved: Vec<Vec<f64>> =
            groups.iter().map(|group| group.iter().map(|x| 4.0 * x + 1024.0).collect()).collect();
        same(&plain, &ranks(&moved), 1e-14);
        groups.reverse();
        groups.iter_mut().for_each(|group| group.reverse());
        same(&plain, &ranks(&groups), 1e-12);
    });
}

#[test]
fn the_order_of_levels_and_rows_changes_nothing() {
    seeded(|mut groups| {
        let plain = scale_free(&groups);
        groups.reverse();
        groups.iter_mut().for_each(|group| group.reverse());
        same(&plain, &scale_free(&groups), 1e-11);
    });
}

#[test]
fn two_levels_reproduce_the_t_tests() {
    seeded(|mut groups| {
        groups.truncate(2);
        let labels = vec!["one".to_owned(), "other".to_owned()];
        let summary = Sample { origin: 0.0, groups }.summary();
        let table = AnovaTable::of(&labels, &summary).expect("a table");
        let welch = WelchTest::of(&labels, &summary).expect("Welch's test");
        for (variances, f, p, df) in [
            (Variances::Equal, table.f, table.p, table.df_within),
            (Variances::Unequal, welch.f, welch.p, welch.df2),
        ] {
            let row =
                Estimates::one_way(&labels, &summary, variances).expect("estimates").contrast(&[1.0, -1.0]);
            let t = row.estimate / row.se;
            let tail = 2.0 * student_t::sf(t.abs(), row.df).expect("a tail");
            same(&[("F", t * t), ("p", tail), ("df", row.df)], &[("F", f), ("p", p), ("df", df)], 1e-11);
        }
    });
}

#[test]
fn a_far_away_origin_costs_no_digits() {
    seeded(|groups| {
        let labels: Vec<String> = (0..groups.len()).map(|i| i.to_string()).collect();
        let near = Sample { origin: 0.0, groups: groups.clone() };
        let far = Sample { origin: 1e12, groups };
        let table = |sample: &Sample| AnovaTable::of(&labels, &sample.summary()).expect("a table");
        assert_eq!(table(&near), table(&far));
    });
}
