//! Studies handed to a kind directly, without the cells that would read them from a table.

use levelwise::notebook::ask::Ask;
use levelwise::notebook::kinds::Read;
use levelwise::notebook::outcome::{Outcome, Value};
use levelwise::study::{LevelAccount, Levels, Observed, Sample, Study, Variances};
use std::sync::Arc;

/// A study of these groups, in the order given.
pub fn study(groups: &[(&str, &[f64])], variances: Variances) -> Study {
    let account = |(level, values): &(&str, &[f64])| LevelAccount {
        level: (*level).to_owned(),
        score: None,
        received: values.len(),
        n: values.len(),
        missing: 0,
        excluded: 0,
    };
    Study {
        outcome: "count".to_owned(),
        factor: "drug".to_owned(),
        levels: Levels {
            labels: groups.iter().map(|(level, _)| (*level).to_owned()).collect(),
            scores: None,
            control: None,
            order_of_appearance: false,
        },
        variances,
        alpha: 0.05,
        confidence: 0.95,
        unit: None,
        better: None,
        account: groups.iter().map(account).collect(),
        observed: Observed::Sample(Sample {
            origin: 0.0,
            groups: groups.iter().map(|(_, values)| values.to_vec()).collect(),
        }),
    }
}

/// Blood counts of three groups of animals (Dunnett 1955, J. Amer. Statist. Assoc. 50, 1096–1121; from memory).
pub fn blood_counts(variances: Variances) -> Study {
    study(
        &[
            ("control", &[7.40, 8.50, 7.20, 8.24, 9.84, 8.32]),
            ("A", &[9.76, 8.80, 7.68, 9.36]),
            ("B", &[12.80, 9.68, 12.16, 9.20, 10.55]),
        ],
        variances,
    )
}

/// The same study as sizes, means and SDs only.
pub fn summarised(mut study: Study) -> Study {
    if let Observed::Sample(sample) = &study.observed {
        study.observed = Observed::Summary(sample.summary());
    }
    study
}

/// The outcome of a cell with this text that reads from `study`.
pub fn evaluated(text: &str, study: Study) -> Outcome {
    let (ask, problems) = Ask::parse(text).expect("an ask");
    assert!(problems.is_empty(), "{problems:?}");
    ask.kind.evaluate(&ask, &Read::new(vec![("study", Value::Study(Arc::new(study)))])).finish()
}

/// The answer as text, wide enough that no line breaks inside a number.
pub fn shown(outcome: &Outcome) -> String {
    levelwise::answer::text::answer(&outcome.answer, 160)
}

/// The blood counts with their control.
pub fn controlled(variances: Variances) -> Study {
    let mut study = blood_counts(variances);
    study.levels.control = Some(0);
    study
}

/// A comparisons cell with these lines.
pub fn ask(rest: &str) -> String {
    format!("kind = \"comparisons\"\nstudy = \"blood\"\n{rest}")
}

/// An answer without diagnostics.
pub fn settled(rest: &str, study: Study) -> Outcome {
    let outcome = evaluated(&ask(rest), study);
    assert!(outcome.diagnostics.is_empty() && !outcome.waiting, "{:?}", outcome.diagnostics);
    outcome
}

/// A number of every row of the results.
pub fn numbers(outcome: &Outcome, key: &str) -> Vec<f64> {
    outcome.results["rows"].as_array().unwrap().iter().map(|row| row[key].as_f64().unwrap()).collect()
}

/// Fails where a number is further from the expected one than the tolerance.
pub fn near(found: &[f64], expected: &[f64], tolerance: f64) {
    let close = found.iter().zip(expected).all(|(f, e)| (f - e).abs() <= tolerance);
    assert!(found.len() == expected.len() && close, "{found:?}, expected {expected:?}");
}
