//! Jonckheere and Terpstra's test. Sources: `data/trend/ordered.json` (every arrangement gone through, moments in exact
//! rationals; script and second opinion beside it; it begins with an example of Hollander and Wolfe, data FROM MEMORY, and the
//! invented dose set worked independently for this project); `data/values/jonckheere_exact.json` for the exact tails
//! (see `rank_counts.rs`).

use crate::cases::{cases, number, relative_error, rounds_to};
use levelwise::methods::multiplicity::{Sides, ranks};
use levelwise::methods::slices::{Advance, InSlices};
use levelwise::methods::trend::{JonckheereWork, NoOrderedTest, jonckheere_terpstra};
use proptest::prelude::*;
use serde_json::Value;

fn groups(case: &Value) -> Vec<Vec<f64>> {
    let groups = case["groups"].as_array().unwrap();
    groups.iter().map(|group| group.as_array().unwrap().iter().map(number).collect()).collect()
}

#[test]
fn statistic_moments_and_p_values_agree_with_every_arrangement_gone_through() {
    let mut enumerated = 0;
    for case in cases("trend/ordered") {
        let test = jonckheere_terpstra(&groups(&case)).unwrap();
        assert_eq!(test.j, number(&case["J"]), "{case}");
        assert_eq!(test.mean, number(&case["mean"]), "{case}");
        let near = |computed: f64, field: &str, allowed: f64| {
            let error = relative_error(computed, number(&case[field]));
            assert!(error < allowed, "{case}: {field} {computed}, {error:e}");
        };
        near(test.variance, "variance", 1e-15);
        near(test.z, "z", 1e-15);
        near(test.normal.greater, "normal_greater", 1e-14);
        near(test.normal.less, "normal_less", 1e-14);
        assert_eq!(test.normal.both, (2.0 * test.normal.greater.min(test.normal.less)).min(1.0));
        if case["how"] == "every arrangement" {
            let exact = test.exact.unwrap();
            near(exact.greater, "exact_greater", 1e-14);
            near(exact.less, "exact_less", 1e-14);
            assert_eq!(exact.both, (2.0 * exact.greater.min(exact.less)).min(1.0));
            assert_eq!(test.p(Sides::Greater), exact.greater);
            enumerated += 1;
        }
    }
    assert!(enumerated > 20);
}

/// Source: worked independently for this project to the digits written; the first set's data FROM MEMORY of Hollander and Wolfe.
#[test]
fn the_two_examples_give_the_digits_computed_for_them() {
    let all = cases("trend/ordered");
    let first = jonckheere_terpstra(&groups(&all[0])).unwrap();
    rounds_to(first.variance, "150.286765");
    rounds_to(first.z, "2.039293");
    rounds_to(first.normal.greater, "0.020710");
    let second = jonckheere_terpstra(&groups(&all[1])).unwrap();
    assert_eq!((second.j, second.mean), (137.0, 74.5));
    rounds_to(second.variance, "217.439620");
    rounds_to(second.z, "4.238485");
}

#[test]
fn what_cannot_be_ranked_is_said() {
    let says = |groups: &[Vec<f64>]| jonckheere_terpstra(groups).unwrap_err().to_string();
    assert_eq!(says(&[vec![1.0]]), "there are 1 levels, and an order needs at least 2");
    assert_eq!(says(&[vec![1.0], vec![]]), "level 2 has no observation; leave it out");
    assert_eq!(
        says(&[vec![1.0], vec![2.0, f64::INFINITY]]),
        "level 2 has the value inf, which is no finite number"
    );
    assert_eq!(says(&[vec![0.0, -0.0], vec![0.0]]), "all values are equal, so there is nothing to rank");
    let none = JonckheereWork::new(&[vec![1.0], vec![2.0]], 0, 1).unwrap_err();
    assert_eq!(none.to_string(), "the number of rearrangements to draw is 0, but must be from 1 to 10000000");
}

/// Many tied values: 40 in each of 4 levels, 5 different values, the higher ones more often in higher levels.
fn heavily_tied() -> Vec<Vec<f64>> {
    (0..4_u32)
        .map(|level| (0..40).map(|i| f64::from((i * (7 + level) / 5 + level / 2) % 5)).collect())
        .collect()
}

#[test]
fn permutation_comes_near_the_exact_p_value_and_the_slices_do_not_matter() {
    let small = groups(&cases("trend/ordered")[20]);
    let exact = jonckheere_terpstra(&small).unwrap().exact.unwrap();
    let drawn = JonckheereWork::new(&small, 40_000, 7).unwrap().finish();
    for (p, error, exact) in [
        (drawn.p.greater, drawn.standard_error.greater, exact.greater),
        (drawn.p.less, drawn.standard_error.less, exact.less),
        (drawn.p.both, drawn.standard_error.both, exact.both),
    ] {
        assert!((p - exact).abs() < 4.0 * error + 1e-4, "{p} {exact} {error}");
    }
    let other = JonckheereWork::new(&small, 40_000, 8).unwrap().finish();
    assert_ne!(drawn.p, other.p);
    // Beyond counting; the normal curve is near for 160 values.
    let large = heavily_tied();
    let test = jonckheere_terpstra(&large).unwrap();
    assert_eq!((test.exact, test.tied_share), (None, 1.0));
    let mut work = JonckheereWork::new(&large, 30_000, 3).unwrap();
    let mut slices = 0;
    let drawn = loop {
        match work.advance() {
            Advance::Working(progress) => assert!((0.0..1.0).contains(&progress.done)),
            Advance::Done(drawn) => break drawn,
        }
        slices += 1;
    };
    assert!(slices > 2, "{slices}");
    assert_eq!((drawn.j, drawn.repeats), (test.j, 30_000));
    assert!((drawn.p.greater - test.normal.greater).abs() < 4.0 * drawn.standard_error.greater + 2e-3);
}

#[test]
fn four_hundred_values_of_eight_levels_are_not_counted_and_have_a_normal_p_value() {
    let values = (0..8_u32).map(|level| (0..50).map(|i| f64::from((i * 37) % 101 + 4 * level)).collect());
    let test = jonckheere_terpstra(&values.collect::<Vec<Vec<f64>>>()).unwrap();
    assert_eq!(test.exact, None);
    assert_eq!(test.p(Sides::Both), test.normal.both);
    assert!(test.z > 3.0);
}

fn some_groups() -> impl Strategy<Value = Vec<Vec<f64>>> {
    let value = (0..12_i32).prop_map(f64::from);
    proptest::collection::vec(proptest::collection::vec(value, 1..7), 2..6)
}

proptest! {
    #[test]
    fn reversing_the_levels_or_the_values_changes_the_sign_alone(groups in some_groups()) {
        let Ok(test) = jonckheere_terpstra(&groups) else { return Ok(()) };
        let backwards: Vec<Vec<f64>> = groups.iter().rev().cloned().collect();
        let negated: Vec<Vec<f64>> = groups.iter().map(|group| group.iter().map(|y| -y).collect()).collect();
        for other in [backwards, negated] {
            let other = jonckheere_terpstra(&other).unwrap();
            prop_assert_eq!((other.z, other.mean, other.variance), (-test.z, test.mean, test.variance));
            prop_assert_eq!(other.normal.both, test.normal.both);
            let (one, other) = (test.exact.unwrap(), other.exact.unwrap());
            prop_assert!(relative_error(one.both, other.both) < 1e-13);
            prop_assert!(relative_error(one.greater, other.less) < 1e-13);
        }
    }

    #[test]
    fn two_levels_are_the_rank_sum_test_and_a_rising_function_changes_nothing(groups in some_groups()) {
        let Ok(test) = jonckheere_terpstra(&groups) else { return Ok(()) };
        let other: Vec<Vec<f64>> =
            groups.iter().map(|group| group.iter().map(|y| y * y * y / 7.0 - 3.0).collect()).collect();
        prop_assert_eq!(jonckheere_terpstra(&other).unwrap(), test);
        if let Ok(pair) = ranks::pairwise(&groups[0], &groups[1]) {
            let two = jonckheere_terpstra(&groups[..2]).unwrap();
            prop_assert_eq!((two.j, two.z), (pair.u, pair.z));
            prop_assert!(relative_error(two.exact.unwrap().both, pair.exact.unwrap().both) < 1e-13);
        }
    }

    #[test]
    fn no_values_make_it_panic_or_answer_with_what_is_no_number(
        groups in proptest::collection::vec(proptest::collection::vec(any::<f64>(), 0..4), 0..5)
    ) {
        match jonckheere_terpstra(&groups) {
            Ok(test) => prop_assert!(test.z.is_finite() && (0.0..=1.0).contains(&test.p(Sides::Both))),
            Err(error) => prop_assert!(!matches!(error, NoOrderedTest::OutOfDomain(_)), "{}", error),
        }
    }
}
