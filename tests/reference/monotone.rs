//! Monotone fits. Sources: `data/trend/monotone.json` (the closed form in exact rationals; script and second opinion beside it,
//! which include the means of Williams's (1971) worked example, FROM MEMORY); the properties of a least-squares fit.

use crate::cases::{cases, number, relative_error};
use levelwise::methods::trend::{Direction, NoMonotoneFit, monotone};
use proptest::prelude::*;
use serde_json::Value;

fn numbers(value: &Value) -> Vec<f64> {
    value.as_array().unwrap().iter().map(number).collect()
}

#[test]
fn fits_agree_with_the_closed_form_in_exact_rationals() {
    let all = cases("trend/monotone");
    for case in &all {
        let direction =
            if case["falling"].as_bool().unwrap() { Direction::Falling } else { Direction::Rising };
        let fit = monotone(&numbers(&case["means"]), &numbers(&case["weights"]), direction).unwrap();
        for (fitted, expected) in fit.fitted.iter().zip(numbers(&case["fitted"])) {
            assert!(relative_error(*fitted, expected) < 1e-15, "{case}: {fitted} {expected}");
        }
    }
    assert!(all.len() > 40);
}

#[test]
fn levels_that_are_equal_without_pooling_stay_blocks_of_their_own() {
    let fit = monotone(&[1.0, 2.0, 2.0, 7.0, 6.0], &[1.0; 5], Direction::Rising).unwrap();
    let blocks: Vec<(usize, usize, f64, f64)> =
        fit.blocks.iter().map(|block| (block.first, block.last, block.mean, block.weight)).collect();
    assert_eq!(blocks, [(0, 0, 1.0, 1.0), (1, 1, 2.0, 1.0), (2, 2, 2.0, 1.0), (3, 4, 6.5, 2.0)]);
}

#[test]
fn what_cannot_be_fitted_is_said() {
    let says =
        |means: &[f64], weights: &[f64]| monotone(means, weights, Direction::Rising).unwrap_err().to_string();
    assert_eq!(says(&[], &[]), "there is no level to fit");
    assert_eq!(says(&[1.0], &[1.0, 2.0]), "2 weights were given for 1 means; each mean needs one");
    assert_eq!(says(&[1.0, f64::NAN], &[1.0, 1.0]), "mean 2 is NaN, but must be a finite number");
    let weight = "weight 2 is 0, but must be a positive number, and the sum of all be finite";
    assert_eq!(says(&[1.0, 2.0], &[1.0, 0.0]), weight);
    let too_much = monotone(&[1.0, 2.0], &[f64::MAX; 2], Direction::Falling).unwrap_err();
    assert_eq!(too_much, NoMonotoneFit::Weight { place: 1, value: f64::MAX });
}

fn levels() -> impl Strategy<Value = (Vec<f64>, Vec<f64>)> {
    let level = (-9.0..9.0_f64, prop_oneof![Just(1.0), 0.01..50.0_f64]);
    proptest::collection::vec(level, 1..15).prop_map(|levels| levels.into_iter().unzip())
}

proptest! {
    /// Least squares over a cone: the residuals of each block add up to 0, and no cut of a block could improve it.
    #[test]
    fn the_fit_is_monotone_keeps_the_weighted_total_and_no_block_can_be_improved((means, weights) in levels()) {
        let fit = monotone(&means, &weights, Direction::Rising).unwrap();
        prop_assert!(fit.fitted.windows(2).all(|pair| pair[0] <= pair[1]));
        prop_assert_eq!(fit.blocks.iter().map(|block| block.last - block.first + 1).sum::<usize>(), means.len());
        for block in &fit.blocks {
            let mut left = 0.0;
            for i in block.first..=block.last {
                left += weights[i] * (means[i] - block.mean);
                prop_assert_eq!(fit.fitted[i], block.mean);
                // The first of a block are above its mean, or they would be a block of their own.
                prop_assert!(left > -1e-11 * block.weight);
            }
            prop_assert!(left.abs() < 1e-11 * block.weight);
        }
    }

    #[test]
    fn a_falling_fit_is_the_rising_one_backwards_and_with_the_signs_changed((means, weights) in levels()) {
        let falling = monotone(&means, &weights, Direction::Falling).unwrap();
        let negated: Vec<f64> = means.iter().map(|mean| -mean).collect();
        let rising = monotone(&negated, &weights, Direction::Rising).unwrap();
        prop_assert!(falling.fitted.iter().zip(&rising.fitted).all(|(one, other)| *one == -other));
        let (back, heavy): (Vec<f64>, Vec<f64>) =
            (means.iter().rev().copied().collect(), weights.iter().rev().copied().collect());
        let backwards = monotone(&back, &heavy, Direction::Rising).unwrap();
        for (one, other) in falling.fitted.iter().zip(backwards.fitted.iter().rev()) {
            prop_assert!((one - other).abs() < 1e-13 * 9.0);
        }
    }

    #[test]
    fn no_numbers_make_it_panic_or_answer_with_what_is_no_number(
        levels in proptest::collection::vec((any::<f64>(), any::<f64>()), 0..6)
    ) {
        let (means, weights): (Vec<f64>, Vec<f64>) = levels.into_iter().unzip();
        for direction in [Direction::Rising, Direction::Falling] {
            if let Ok(fit) = monotone(&means, &weights, direction) {
                prop_assert!(fit.fitted.iter().all(|f| f.is_finite()), "{:?}", fit);
            }
        }
    }
}
