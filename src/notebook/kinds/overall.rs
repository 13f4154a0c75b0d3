//! The overall test: do any levels differ at all?

use super::{Kind, Read};
use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece};
use crate::notebook::outcome::Outcome;

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

pub fn evaluate(_ask: &Ask, _read: &Read) -> Outcome {
    Outcome::mend(Vec::new())
}
