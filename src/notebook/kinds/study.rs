//! The study: one outcome compared over the levels of one grouping variable.

use super::{Kind, Read};
use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece};
use crate::notebook::outcome::Outcome;

const VARIANCES: &[Choice] = &[
    Choice { value: "unequal", shown: "possibly unequal, each level with its own" },
    Choice { value: "equal", shown: "equal, one pooled over all levels" },
];
const BETTER: &[Choice] =
    &[Choice { value: "higher", shown: "higher" }, Choice { value: "lower", shown: "lower" }];

pub const TABLE: KindTable = KindTable {
    purpose: "Say what is compared: the outcome, the groups, their order, scores and control",
    fields: &[
        Field::new("data", Holds::Cell(&[Kind::Data, Kind::Summary]), "data", "The cell with the table or the summaries; a study without data is a plan").or("no data yet"),
        Field::new("outcome", Holds::Column, "outcome", "The measured outcome: a column of numbers").required(),
        Field::new("groups", Holds::Column, "grouping variable", "The column that says which level a row belongs to").required(),
        Field::new("levels", Holds::Texts, "levels in order", "The levels in their order").or("in order of first appearance"),
        Field::new("scores", Holds::Numbers, "scores", "A number for each level, increasing: the dose, the minutes; needed for trends").or("none"),
        Field::new("control", Holds::Level, "control", "The level that others are compared with").or("none"),
        Field::new("variances", Holds::Choice(VARIANCES), "variances", "Pooling with unequal spread and unequal group sizes can triple the error rate, so the default does not pool").or("possibly unequal, each level with its own"),
        Field::new("alpha", Holds::Between(0.0, 1.0), "error rate", "The error rate of tests, such as 0.05").or("0.05"),
        Field::new("confidence", Holds::Between(0.0, 1.0), "confidence", "The confidence of intervals, such as 0.95").or("0.95"),
        Field::new("unit", Holds::Text, "unit", "The unit of the outcome, for figures and sentences").or("none"),
        Field::new("better", Holds::Choice(BETTER), "better direction", "Which direction of the outcome is the good one").or("neither direction"),
    ],
    sentence: &[
        Piece::Words("Study"),
        Piece::Blank("outcome"),
        Piece::Words("over the levels of"),
        Piece::Blank("groups"),
        Piece::Words("in"),
        Piece::Blank("data"),
        Piece::Words(". Levels:"),
        Piece::Blank("levels"),
        Piece::Words("; scores:"),
        Piece::Blank("scores"),
        Piece::Words("; control:"),
        Piece::Blank("control"),
        Piece::Words(". Variances are taken as"),
        Piece::Blank("variances"),
        Piece::Words("; error rate"),
        Piece::Blank("alpha"),
        Piece::Words(", confidence"),
        Piece::Blank("confidence"),
        Piece::Words(". Unit:"),
        Piece::Blank("unit"),
        Piece::Words("; better is"),
        Piece::Blank("better"),
        Piece::Words("."),
    ],
    starts_with: "",
};

pub fn evaluate(_ask: &Ask, _read: &Read) -> Outcome {
    Outcome::mend(Vec::new())
}
