//! Studies that nobody would design: the cells about whole studies stay calm. Properties, from seeded inputs.

use super::given::{evaluated, shown, study, summarised};
use levelwise::study::Variances;
use proptest::prelude::*;
use proptest::test_runner::{Config, RngAlgorithm, TestRng, TestRunner};
use serde_json::Value;

fn value() -> impl Strategy<Value = f64> {
    let odd = prop::sample::select(vec![
        0.0,
        1.0,
        0.1,
        -0.1,
        1e-300,
        -5e-324,
        1e-160,
        1e160,
        -1e200,
        1e300,
        1.7e308,
        -1.7e308,
        1e12,
        1e12 + 0.001,
    ]);
    prop_oneof![odd, -10.0..10.0_f64, (-3_i32..3).prop_map(f64::from)]
}

fn groups() -> impl Strategy<Value = Vec<Vec<f64>>> {
    prop::collection::vec(prop::collection::vec(value(), 0..7), 0..6)
}

fn no_null(results: &Value) -> bool {
    match results {
        Value::Null => false,
        Value::Array(values) => values.iter().all(no_null),
        Value::Object(values) => values.values().all(no_null),
        _ => true,
    }
}

#[test]
fn no_study_makes_a_cell_panic_or_show_what_is_no_number() {
    let rng = TestRng::from_seed(RngAlgorithm::ChaCha, &[11; 32]);
    let config = Config { cases: 400, failure_persistence: None, ..Config::default() };
    let mut runner = TestRunner::new_with_rng(config, rng);
    let outcome = runner.run(&groups(), |groups| {
        let names = ["a", "b", "c", "d", "e", "f"];
        let named: Vec<(&str, &[f64])> = names.into_iter().zip(groups.iter().map(Vec::as_slice)).collect();
        for variances in [Variances::Equal, Variances::Unequal] {
            for text in
                ["kind = \"profile\"\n", "kind = \"overall\"\n", "kind = \"overall\"\ntest = \"ranks\"\n"]
            {
                for study in [study(&named, variances), summarised(study(&named, variances))] {
                    let outcome = evaluated(&format!("{text}study = \"trial\"\n"), study);
                    let shown = shown(&outcome);
                    prop_assert!(!shown.contains("NaN") && !shown.contains('∞'), "{}", shown);
                    if outcome.diagnostics.is_empty() {
                        prop_assert!(no_null(&outcome.results), "{}", outcome.results);
                    } else {
                        prop_assert!(!outcome.diagnostics[0].message.is_empty());
                    }
                }
            }
        }
        Ok(())
    });
    outcome.unwrap_or_else(|error| panic!("{error}"));
}
