//! How many participants the next study needs.

use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece, choice};
use crate::notebook::outcome::Outcome;

const QUESTIONS: &[Choice] = &[Choice { value: "overall", shown: "the overall test" }];
const FIND: &[Choice] = &[choice("n per group"), choice("power"), choice("smallest effect")];

pub const TABLE: KindTable = KindTable {
    purpose: "Find how many participants the next study needs, its power, or the smallest effect it can find",
    fields: &[
        Field::new("question", Holds::Choice(QUESTIONS), "question", "What the study is sized for")
            .or("the overall test"),
        Field::new(
            "find",
            Holds::Choice(FIND),
            "what to find",
            "The one of n, power and effect that is asked for",
        )
        .or("n per group"),
        Field::new("groups", Holds::Whole(2, 200), "number of groups", "How many groups the study has"),
        Field::new(
            "effect",
            Holds::Above(0.0),
            "effect f",
            "Cohen's f: the SD of the true means over the SD inside the groups",
        ),
        Field::new(
            "eta_squared",
            Holds::Between(0.0, 1.0),
            "eta squared",
            "The share of the variance that lies between the groups",
        ),
        Field::new(
            "means",
            Holds::Numbers,
            "expected means",
            "The true means that are expected, one a group",
        ),
        Field::new(
            "sd",
            Holds::Above(0.0),
            "expected SD",
            "The expected standard deviation inside the groups",
        ),
        Field::new("n", Holds::Whole(2, 1_000_000), "n per group", "Participants in each group"),
        Field::new("target", Holds::Between(0.0, 1.0), "target power", "The power that is wanted").or("0.8"),
        Field::new("alpha", Holds::Between(0.0, 1.0), "error rate", "The error rate of the test").or("0.05"),
    ],
    sentence: &[
        Piece::Words("For"),
        Piece::Blank("question"),
        Piece::Words("of"),
        Piece::Blank("groups"),
        Piece::Words("groups, find the"),
        Piece::Blank("find"),
        Piece::Words("at error rate"),
        Piece::Blank("alpha"),
        Piece::When(
            "find",
            &["n per group", "smallest effect"],
            &[Piece::Words("and power"), Piece::Blank("target")],
        ),
        Piece::When(
            "find",
            &["power", "smallest effect"],
            &[Piece::Words("with"), Piece::Blank("n"), Piece::Words("in each group")],
        ),
        Piece::When(
            "find",
            &["n per group", "power"],
            &[
                Piece::Words("for an effect given as f"),
                Piece::Blank("effect"),
                Piece::Words("or eta squared"),
                Piece::Blank("eta_squared"),
                Piece::Words("or expected means"),
                Piece::Blank("means"),
                Piece::Words("with SD"),
                Piece::Blank("sd"),
            ],
        ),
        Piece::Words("."),
    ],
    starts_with: "groups = 3\neffect = 0.25\n",
};

pub fn evaluate(_ask: &Ask) -> Outcome {
    Outcome::mend(Vec::new())
}
