//! Describes each group and checks the assumptions.

use super::{Kind, Read};
use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece};
use crate::notebook::outcome::Outcome;

const SHOW: &[Choice] = &[
    Choice { value: "groups", shown: "the groups" },
    Choice { value: "assumptions", shown: "the assumptions" },
    Choice { value: "figure", shown: "the figure" },
];

pub const TABLE: KindTable = KindTable {
    purpose: "Describe each group and look at the assumptions",
    fields: &[
        Field::new("study", Holds::Cell(&[Kind::Study]), "study", "The study to describe").required(),
        Field::new("show", Holds::Choices(SHOW), "what to show", "Any of groups, assumptions, figure")
            .or("groups, assumptions, figure"),
    ],
    sentence: &[
        Piece::Words("Describe each group of"),
        Piece::Blank("study"),
        Piece::Words("and show"),
        Piece::Blank("show"),
        Piece::Words("."),
    ],
    starts_with: "",
};

pub fn evaluate(_ask: &Ask, _read: &Read) -> Outcome {
    Outcome::mend(Vec::new())
}
