//! Does the outcome follow the scores, and in what shape?

use super::{Kind, Read};
use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece, choice};
use crate::notebook::outcome::Outcome;

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
        .or("the highest possible"),
        Field::new("scores", Holds::Numbers, "scores", "Scores to use instead of the study's")
            .or("the study's"),
        Field::new(
            "weights",
            Holds::Choice(WEIGHTS),
            "weights of the levels",
            "By size: the sums of squares add up. Equally: the textbook coefficients",
        )
        .or("by their size"),
        Field::new("alpha", Holds::Between(0.0, 1.0), "error rate", "The error rate of each test")
            .or("the study's"),
    ],
    sentence: &[
        Piece::Words("Does the outcome of"),
        Piece::Blank("study"),
        Piece::Words("follow the scores"),
        Piece::Blank("scores"),
        Piece::Words("? Take it apart by"),
        Piece::Blank("method"),
        Piece::Words("trends up to degree"),
        Piece::Blank("degree"),
        Piece::Words(", weighting the levels"),
        Piece::Blank("weights"),
        Piece::Words("."),
    ],
    starts_with: "",
};

pub fn evaluate(_ask: &Ask, _read: &Read) -> Outcome {
    Outcome::mend(Vec::new())
}
