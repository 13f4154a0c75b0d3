//! Does the outcome follow the scores, and in what shape?
//!
//! `asked` reads the ask against its study, `plan` shows what can be said before there are data, `fitted` lays out
//! the result of `methods::trend::polynomial`.

mod asked;
mod fitted;
mod json;
mod plan;
mod words;

use super::wording::{refused, remedy, sentence};
use super::{Kind, Read};
use crate::methods::trend::{PolynomialTrend, TrendRequest, polynomial};
use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece, choice};
use crate::notebook::outcome::Outcome;
use crate::study::{Estimates, Study};
use asked::Asked;

const METHODS: &[Choice] = &[choice("polynomial")];
const WEIGHTS: &[Choice] =
    &[Choice { value: "n", shown: "by their size" }, Choice { value: "equal", shown: "equally" }];

pub const TABLE: KindTable = KindTable {
    purpose: "Ask whether the outcome follows the scores (the dose, the minutes) and in what shape",
    fields: &[
        Field::new("study", Holds::Cell(&[Kind::Study]), "study", "The study whose levels have scores")
            .required(),
        Field::new("method", Holds::Choice(METHODS), "method", "How the trend is taken apart")
            .or("polynomial"),
        Field::new(
            "degree",
            Holds::Whole(1, 4),
            "highest degree",
            "1 straight, 2 one bend, 3 two bends, 4 three bends; at most one less than the number of levels",
        )
        .or("as high as the levels allow"),
        Field::new("scores", Holds::Numbers, "scores", "Scores to use instead of the study's")
            .or("of the study"),
        Field::new(
            "weights",
            Holds::Choice(WEIGHTS),
            "weights of the levels",
            "By size: the sums of squares add up. Equally: the textbook coefficients",
        )
        .or("by their size"),
        Field::new("alpha", Holds::Between(0.0, 1.0), "error rate", "The error rate of each test")
            .or("the study"),
    ],
    sentence: &[
        Piece::Words("Does the outcome of"),
        Piece::Blank("study"),
        Piece::Words("follow the scores"),
        Piece::Blank("scores"),
        Piece::Words("? Take it apart by"),
        Piece::Blank("method"),
        Piece::Words("trends (highest degree:"),
        Piece::Blank("degree"),
        Piece::Words("), weighting the levels"),
        Piece::Blank("weights"),
        Piece::Words(", each at an error rate of"),
        Piece::Blank("alpha"),
        Piece::Words("."),
    ],
    starts_with: "",
};

/// The trend, or the plan for it, or what to mend.
pub fn evaluate(ask: &Ask, read: &Read) -> Outcome {
    let Some(study) = read.study() else {
        let mut reader = ask.reader();
        let _ = reader.text("study");
        return Outcome::mend(reader.finish(()).err().unwrap_or_default());
    };
    let asked = match Asked::of(ask, study) {
        Ok(asked) => asked,
        Err(problems) => return Outcome::mend(problems),
    };
    outcome(ask, &asked, study)
        .with_in_force("degree", asked.degree.to_string())
        .with_in_force("scores", words::scores(&asked.scores))
        .with_in_force("alpha", crate::answer::number::plain(asked.alpha))
}

fn outcome(ask: &Ask, asked: &Asked, study: &Study) -> Outcome {
    let Some(summary) = study.summary() else {
        return plan::outcome(asked, study);
    };
    let estimates = match Estimates::one_way(&study.levels.labels, &summary, study.variances) {
        Ok(estimates) => estimates,
        Err(error) => return refused(ask, format!("The trend cannot be given: {error}.{}", remedy(&error))),
    };
    let request = TrendRequest {
        estimates: &estimates,
        summary: Some(&summary),
        scores: &asked.scores,
        degree: asked.degree,
        weights: asked.weights,
        confidence: asked.confidence,
    };
    match polynomial(&request) {
        Ok(trend) => fitted::outcome(&Laid { asked, study, estimates: &estimates, trend }),
        Err(error) => refused(ask, sentence(&error.to_string())),
    }
}

/// Everything from which the answer is laid out.
struct Laid<'a> {
    asked: &'a Asked,
    study: &'a Study,
    estimates: &'a Estimates,
    trend: PolynomialTrend,
}
