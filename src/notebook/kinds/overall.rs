//! The overall test: do any levels differ at all?

mod means;
mod ranks;

use super::{Kind, Read};
use crate::answer::{Answer, number};
use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece};
use crate::notebook::outcome::Outcome;
use crate::study::{Study, Variances};
use serde_json::json;

const TESTS: &[Choice] =
    &[Choice { value: "means", shown: "means" }, Choice { value: "ranks", shown: "ranks" }];

pub const TABLE: KindTable = KindTable {
    purpose: "Ask whether any levels differ at all, and how large the differences are as a whole",
    fields: &[
        Field::new("study", Holds::Cell(&[Kind::Study]), "study", "The study to test").required(),
        Field::new(
            "test",
            Holds::Choice(TESTS),
            "basis",
            "What is compared: means (F test) or ranks (Kruskal-Wallis)",
        )
        .or("means"),
    ],
    sentence: &[
        Piece::Words("Do any levels of"),
        Piece::Blank("study"),
        Piece::Words("differ in their"),
        Piece::Blank("test"),
        Piece::Words("?"),
    ],
    starts_with: "",
};

pub fn evaluate(ask: &Ask, read: &Read) -> Outcome {
    let mut reader = ask.reader();
    let test = reader.choice("test").unwrap_or("means");
    if let Err(problems) = reader.finish(()) {
        return Outcome::mend(problems);
    }
    let Some(study) = read.study() else { return Outcome::mend(Vec::new()) };
    let Some(summary) = study.summary() else { return planned(study, test) };
    match test {
        "ranks" => ranks::outcome(ask, study),
        _ => means::outcome(ask, study, &summary),
    }
}

fn planned(study: &Study, test: &str) -> Outcome {
    let k = study.levels.count();
    let method = match (test, study.variances) {
        ("ranks", _) => "Kruskal-Wallis test on joint ranks",
        (_, Variances::Unequal) => "Welch's F test, which does not assume equal variances",
        (_, Variances::Equal) => "the one-way F test with one pooled variance",
    };
    let headline = format!("Planned: {method}, over {k} levels at {}", number::percent(study.alpha));
    let answer = Answer::new(headline).with_text(format!(
        "One test of all {k} levels together, {} degrees of freedom between the groups. It waits for the numbers.",
        k.saturating_sub(1)
    ));
    Outcome::plan(answer, json!({ "test": test, "levels": k, "alpha": study.alpha }))
}
