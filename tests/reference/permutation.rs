//! The exact permutation test of F against full enumeration in exact integers.
//!
//! Source: `data/values/permutation_f_exact.json` (every assignment, exact rationals; equal to scipy's permutation test).

use crate::accuracy::agree;
use crate::cases::{cases, number};
use crate::one_way::{blood_counts, labels};
use levelwise::methods::overall::PermutationF;
use levelwise::study::Sample;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use serde_json::Value;

fn test(groups: Vec<Vec<f64>>) -> PermutationF {
    PermutationF::of(&labels(groups.len()), &Sample { origin: 0.0, groups }).unwrap()
}

fn groups(case: &Value) -> Vec<Vec<f64>> {
    let list = |values: &Value| values.as_array().unwrap().iter().map(number).collect();
    case["data"].as_array().unwrap().iter().map(list).collect()
}

#[test]
pub fn shares_of_assignments_agree_with_full_enumeration() {
    agree("permutation_f_exact", "permutation F", |case| test(groups(case)).p);
    for case in cases("permutation_f_exact") {
        assert_eq!(test(groups(&case)).assignments, case["assignments"].as_u64().unwrap(), "{case}");
    }
}

/// Source: counted independently for the blood counts of Dunnett (1955): 5624 of 630630 assignments.
#[test]
fn the_blood_counts_have_5624_of_630630_assignments_at_least_as_extreme() {
    let test = PermutationF::of(&labels(3), &blood_counts()).unwrap();
    assert_eq!((test.at_least, test.assignments), (5624, 630_630));
}

#[test]
fn too_many_assignments_and_bad_groups_are_refused_by_name() {
    let message = |groups: Vec<Vec<f64>>| {
        PermutationF::of(&labels(groups.len()), &Sample { origin: 0.0, groups }).unwrap_err().to_string()
    };
    assert_eq!(
        message(vec![vec![1.0, 2.0, 3.0, 4.0]; 4]),
        "the p-value cannot be computed: number of assignments is 63063000, but must be at most 2000000 for an exact \
         permutation test"
    );
    assert!(message(vec![vec![1.0; 40_000]; 2]).contains("number of assignments is "));
    assert!(
        message(vec![vec![1.0, f64::NAN], vec![2.0]]).contains("range"),
        "{}",
        message(vec![vec![1.0, f64::NAN], vec![2.0]])
    );
}

/// One observation against very many: an assignment is the choice of the one.
#[test]
fn one_against_a_million_is_counted() {
    let many: Vec<f64> = (0..1_000_000).map(|i| f64::from(i % 1000) / 8.0).collect();
    let test = test(vec![vec![124.875], many]);
    // A thousand more have the observed value, and the thousand zeros are farther from the mean, which it has drawn up.
    assert_eq!(test.assignments, 1_000_001);
    assert_eq!(test.at_least, 2001);
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(13), failure_persistence: None, ..ProptestConfig::with_cases(60) })]

    #[test]
    fn the_share_knows_no_scale_no_origin_and_no_order(
        groups in prop::collection::vec(prop::collection::vec(-20..20_i32, 1..4), 2..5), shift in -40..40_i32
    ) {
        let as_values = |scale: f64, shift: i32| -> Vec<Vec<f64>> {
            groups.iter().map(|group| group.iter().map(|&x| f64::from(x + shift) * scale).collect()).collect()
        };
        let plain = test(as_values(1.0, 0));
        prop_assert_eq!(plain, test(as_values(1.0, shift)));
        prop_assert_eq!(plain, test(as_values(-0.125, shift)));
        // Thirds are no decimals: their rounding must not break ties.
        prop_assert_eq!(plain, test(as_values(1.0 / 3.0, 0)));
        prop_assert_eq!(plain, test(as_values(1e300, 0)));
        let mut turned = as_values(1.0, 0);
        turned.reverse();
        prop_assert_eq!(plain, test(turned));
        prop_assert!(plain.p > 0.0 && plain.p <= 1.0);
    }
}
