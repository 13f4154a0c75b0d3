//! Contrast expressions and ready sets against simple arithmetic: properties, from seeded inputs. Polynomial
//! contrasts of equal steps: the whole numbers of Fisher and Yates, Statistical Tables, table XXIII, for five
//! and six levels (from memory; each row is orthogonal to the others, which the test checks as well).

use levelwise::methods::contrasts::{Contrast, Set, coefficients, in_words, polynomial_set, rank, ready_set};
use proptest::prelude::*;

fn levels() -> Vec<String> {
    ["none", "15 min", "30 min", "a-b", "2", "it's", "é(x)"].map(String::from).to_vec()
}

/// A level's name in quotes, with quotes doubled.
fn quoted(name: &str) -> String {
    format!("'{}'", name.replace('\'', "''"))
}

#[test]
fn polynomials_of_equal_steps_are_the_printed_whole_numbers() {
    let five = vec![
        vec![-2.0, -1.0, 0.0, 1.0, 2.0],
        vec![2.0, -1.0, -2.0, -1.0, 2.0],
        vec![-1.0, 2.0, 0.0, -2.0, 1.0],
        vec![1.0, -4.0, 6.0, -4.0, 1.0],
    ];
    let six = vec![
        vec![-5.0, -3.0, -1.0, 1.0, 3.0, 5.0],
        vec![5.0, -1.0, -4.0, -4.0, -1.0, 5.0],
        vec![-5.0, 7.0, 4.0, -4.0, -7.0, 5.0],
        vec![1.0, -3.0, 2.0, 2.0, -3.0, 1.0],
        vec![-1.0, 5.0, -10.0, 10.0, -5.0, 1.0],
    ];
    for printed in [five, six] {
        let labels: Vec<String> = (0..printed[0].len()).map(|i| format!("level {i}")).collect();
        let ranks = ready_set(Set::Polynomial, &labels);
        // Only differences between the scores count, up to a factor.
        let scores: Vec<f64> = (0..labels.len()).map(|i| 1e4 + 0.1 * i as f64).collect();
        let elsewhere = polynomial_set(&scores, &labels).unwrap();
        assert_eq!(ranks.len(), printed.len());
        for (i, row) in printed.iter().enumerate() {
            assert!(
                printed[..i]
                    .iter()
                    .all(|other| row.iter().zip(other).map(|(a, b)| a * b).sum::<f64>() == 0.0)
            );
            let half = row.iter().map(|c| c.abs()).sum::<f64>() / 2.0;
            for (j, c) in row.iter().enumerate() {
                assert!((ranks[i].coefficients[j] - c / half).abs() < 1e-15, "{:?}", ranks[i]);
                // A score of 1e4 in steps of 0.1 has 11 of its digits in the steps.
                assert!((elsewhere[i].coefficients[j] - c / half).abs() < 1e-10, "{:?}", elsewhere[i]);
            }
        }
    }
}

proptest! {
    #[test]
    fn polynomials_of_any_spacing_are_orthogonal_to_all_lower_powers(
        steps in prop::collection::vec(0.01..10.0_f64, 1..9), start in -50.0..50.0_f64
    ) {
        let scores: Vec<f64> =
            [0.0].iter().chain(&steps).scan(start, |at, step| { *at += step; Some(*at) }).collect();
        let labels: Vec<String> = (0..scores.len()).map(|i| format!("level {i}")).collect();
        let set = polynomial_set(&scores, &labels).unwrap();
        prop_assert_eq!(set.len(), steps.len().min(5));
        let range = scores[steps.len()] - start;
        for (i, contrast) in set.iter().enumerate() {
            prop_assert!(Contrast::new(&contrast.name, contrast.coefficients.clone(), &labels).is_ok());
            prop_assert!((contrast.half_weight() - 1.0).abs() < 1e-14);
            prop_assert!(*contrast.coefficients.last().unwrap() > 0.0);
            for power in 0..=i {
                let each = contrast.coefficients.iter().zip(&scores);
                let along: f64 = each.map(|(c, x)| c * libm::pow((x - start) / range, power as f64)).sum();
                prop_assert!(along.abs() < 1e-12, "{contrast:?}: {along}");
            }
        }
    }

    #[test]
    fn any_text_is_read_or_refused_at_a_place_inside_it(
        text in proptest::collection::vec(prop_oneof![
            Just("none".to_string()), Just("15 min".to_string()), Just("'2'".to_string()), Just("a-b".to_string()),
            Just("(".to_string()), Just(")".to_string()), Just("+".to_string()), Just("-".to_string()),
            Just("*".to_string()), Just("/".to_string()), Just("'".to_string()), Just("1e308".to_string()),
            Just(" ".to_string()), Just("0".to_string()), ".{0,3}"
        ], 0..12).prop_map(|parts| parts.concat())
    ) {
        if let Err(error) = coefficients(&text, &levels()) {
            let span = error.span.clone();
            prop_assert!(span.start <= span.end && text.get(span).is_some(), "{text:?}: {error:?}");
            prop_assert!(!error.message.is_empty());
        }
    }

    #[test]
    fn a_weighted_sum_of_quoted_levels_has_those_weights(weights in proptest::collection::vec(-9..10_i32, 7)) {
        let levels = levels();
        let terms = weights.iter().zip(&levels).map(|(w, level)| format!("{w}*{}", quoted(level)));
        let text = terms.collect::<Vec<_>>().join(" + ");
        let expected: Vec<f64> = weights.iter().map(|w| f64::from(*w)).collect();
        prop_assert_eq!(coefficients(&text, &levels).unwrap(), expected.clone());
        let divided = coefficients(&format!("-({text})/4"), &levels).unwrap();
        prop_assert!(divided.iter().zip(&expected).all(|(d, e)| *d == -e / 4.0));
        let sum: i32 = weights.iter().sum();
        let balanced = weights.iter().any(|w| *w != 0) && sum == 0;
        prop_assert_eq!(Contrast::from_expression("c", &text, &levels).is_ok(), balanced);
    }

    #[test]
    fn every_ready_set_sums_to_zero_spans_all_differences_and_has_words(k in 2..12_usize, control in 0..12_usize) {
        let levels: Vec<String> = (0..k).map(|i| format!("level {i}")).collect();
        let sets =
            [Set::AllPairs, Set::AgainstControl(control % k), Set::Neighbours, Set::AgainstRest, Set::AgainstEarlier];
        for set in sets.into_iter().chain((k < 7).then_some(Set::Polynomial)) {
            let contrasts = ready_set(set, &levels);
            let rows: Vec<Vec<f64>> = contrasts.iter().map(|contrast| contrast.coefficients.clone()).collect();
            prop_assert_eq!(rank(&rows), k - 1);
            for contrast in contrasts {
                prop_assert!(Contrast::new(&contrast.name, contrast.coefficients.clone(), &levels).is_ok());
                prop_assert!((contrast.half_weight() - 1.0).abs() < 1e-12);
                prop_assert!(in_words(&contrast.coefficients, &levels).contains(" minus "));
            }
        }
    }
}
