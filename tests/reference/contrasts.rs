//! Contrast expressions and ready sets against simple arithmetic: properties, from seeded inputs.

use levelwise::methods::contrasts::{Contrast, Set, coefficients, in_words, rank, ready_set};
use proptest::prelude::*;

fn levels() -> Vec<String> {
    ["none", "15 min", "30 min", "a-b", "2", "it's", "é(x)"].map(String::from).to_vec()
}

/// A level's name in quotes, with quotes doubled.
fn quoted(name: &str) -> String {
    format!("'{}'", name.replace('\'', "''"))
}

proptest! {
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
        for set in [Set::AllPairs, Set::AgainstControl(control % k), Set::Neighbours, Set::AgainstRest] {
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
