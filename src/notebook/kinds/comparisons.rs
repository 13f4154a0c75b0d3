//! Which groups differ: families of comparisons with their error rate controlled.

use super::{Kind, Read};
use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece, choice};
use crate::notebook::outcome::Outcome;

const FAMILIES: &[Choice] = &[
    choice("all pairs"),
    choice("each against control"),
    choice("neighbours"),
    choice("each against the rest"),
    choice("contrasts"),
    choice("given p-values"),
];
const ADJUSTMENTS: &[Choice] = &[
    choice("none"),
    choice("Bonferroni"),
    choice("Sidak"),
    choice("Holm"),
    choice("Holm-Sidak"),
    choice("Hochberg"),
    choice("Benjamini-Hochberg"),
    choice("Tukey"),
    choice("Games-Howell"),
    choice("Scheffe"),
    choice("Dunnett"),
];
const SIDES: &[Choice] = &[
    Choice { value: "both", shown: "in either direction" },
    Choice { value: "greater", shown: "only whether it is greater" },
    Choice { value: "less", shown: "only whether it is less" },
];

pub const TABLE: KindTable = KindTable {
    purpose: "Compare groups: all pairs, against a control, neighbours, your own contrasts",
    fields: &[
        Field::new("study", Holds::Cell(&[Kind::Study]), "study", "The study whose levels are compared"),
        Field::new("family", Holds::Choice(FAMILIES), "family", "Which comparisons belong together")
            .or("all pairs"),
        Field::new(
            "contrasts",
            Holds::NamedTexts,
            "contrasts",
            "Named contrasts: a line \"name: expression\" each, such as \"late: (15 min + 30 min)/2 - none\"",
        ),
        Field::new(
            "given",
            Holds::NamedNumbers,
            "p-values",
            "Named p-values from elsewhere: a line \"name: p\" each",
        ),
        Field::new(
            "adjust",
            Holds::Choice(ADJUSTMENTS),
            "adjustment",
            "How the error rate of the family is kept",
        )
        .or("what suits the family"),
        Field::new("sides", Holds::Choice(SIDES), "direction", "Which direction of a difference counts")
            .or("in either direction"),
        Field::new(
            "also",
            Holds::Choices(ADJUSTMENTS),
            "adjustments beside it",
            "Other adjustments whose p-values are set beside",
        )
        .or("none"),
        Field::new("alpha", Holds::Between(0.0, 1.0), "error rate", "The family's error rate")
            .or("the study's"),
    ],
    sentence: &[
        Piece::Words("Compare"),
        Piece::Blank("family"),
        Piece::When(
            "family",
            &["all pairs", "each against control", "neighbours", "each against the rest", "contrasts"],
            &[Piece::Words("of"), Piece::Blank("study")],
        ),
        Piece::When("family", &["contrasts"], &[Piece::Words(":"), Piece::Blank("contrasts")]),
        Piece::When("family", &["given p-values"], &[Piece::Words(":"), Piece::Blank("given")]),
        Piece::Words(", keeping the error rate with"),
        Piece::Blank("adjust"),
        Piece::When(
            "family",
            &["all pairs", "each against control", "neighbours", "each against the rest", "contrasts"],
            &[Piece::Words("and asking"), Piece::Blank("sides")],
        ),
        Piece::Words("; beside it:"),
        Piece::Blank("also"),
        Piece::Words("."),
    ],
    starts_with: "family = \"all pairs\"\n",
};

pub fn evaluate(_ask: &Ask, _read: &Read) -> Outcome {
    Outcome::mend(Vec::new())
}
