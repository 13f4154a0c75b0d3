//! Does the outcome follow the scores, and in what shape?
//!
//! `asked` reads the ask against its study; each method has a room that asks `methods::trend` and lays out the answer.

mod asked;
mod ordered_ranks;
mod polynomial;
mod scales;
mod steps;
mod words;

use super::{Kind, Read};
use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece};
use crate::notebook::outcome::Outcome;
use crate::notebook::work::Evaluation;
use asked::{Asked, Method};

const METHODS: &[Choice] = &[
    Choice { value: "polynomial", shown: "polynomial trends" },
    Choice { value: "dose scales", shown: "linear trends in three scales of dose" },
    Choice { value: "ordered ranks", shown: "ranks against the order of the levels" },
    Choice { value: "step contrasts", shown: "steps from the control (Williams)" },
];
const DIRECTIONS: &[Choice] = &[
    Choice { value: "either", shown: "in either direction" },
    Choice { value: "rising", shown: "only upwards" },
    Choice { value: "falling", shown: "only downwards" },
];
const P_VALUES: &[Choice] = &[
    Choice { value: "counted", shown: "counted, or else from the normal distribution" },
    Choice { value: "rearranged", shown: "from random rearrangements" },
];
const WEIGHTS: &[Choice] =
    &[Choice { value: "n", shown: "by their size" }, Choice { value: "equal", shown: "equally" }];

pub const TABLE: KindTable = KindTable {
    purpose: "Ask whether the outcome follows the scores (the dose, the minutes) and in what shape",
    fields: &[
        Field::new("study", Holds::Cell(&[Kind::Study]), "study", "The study whose levels have scores")
            .required(),
        Field::new("method", Holds::Choice(METHODS), "method", "How the trend is looked for")
            .or("polynomial trends"),
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
        Field::new("direction", Holds::Choice(DIRECTIONS), "direction", "Which direction of a trend counts")
            .or("in either direction"),
        Field::new("p_values", Holds::Choice(P_VALUES), "p-values", "Where the p-values of ranks come from")
            .or("counted, or else from the normal distribution"),
        Field::new("repeats", Holds::Whole(100, 1_000_000), "repeats", "Random rearrangements").or("10000"),
        Field::new("seed", Holds::Whole(0, 4_294_967_295), "seed", "Where the random rearrangements start")
            .or("1"),
        Field::new("alpha", Holds::Between(0.0, 1.0), "error rate", "The error rate of each test")
            .or("the study"),
    ],
    sentence: &[
        Piece::Words("Does the outcome of"),
        Piece::Blank("study"),
        Piece::Words("follow the levels? Look for it by"),
        Piece::Blank("method"),
        Piece::When(
            "method",
            &["polynomial"],
            &[
                Piece::Words("over the scores"),
                Piece::Blank("scores"),
                Piece::Words("up to degree"),
                Piece::Blank("degree"),
                Piece::Words(", weighting the levels"),
                Piece::Blank("weights"),
            ],
        ),
        Piece::When(
            "method",
            &["dose scales"],
            &[
                Piece::Words("over the scores"),
                Piece::Blank("scores"),
                Piece::Words(","),
                Piece::Blank("direction"),
            ],
        ),
        Piece::When("method", &["step contrasts"], &[Piece::Words(","), Piece::Blank("direction")]),
        Piece::When(
            "method",
            &["ordered ranks"],
            &[
                Piece::Words(","),
                Piece::Blank("direction"),
                Piece::Words(", with p-values"),
                Piece::Blank("p_values"),
                Piece::When(
                    "p_values",
                    &["rearranged"],
                    &[
                        Piece::Words(":"),
                        Piece::Blank("repeats"),
                        Piece::Words("of them from seed"),
                        Piece::Blank("seed"),
                    ],
                ),
            ],
        ),
        Piece::Words(", each at an error rate of"),
        Piece::Blank("alpha"),
        Piece::Words("."),
    ],
    starts_with: "",
};

/// The trend, or the plan for it, or what to mend.
pub fn evaluate(ask: &Ask, read: &Read) -> Evaluation {
    let Some(study) = read.shared_study() else {
        let mut reader = ask.reader();
        let _ = reader.text("study");
        return Outcome::mend(reader.finish(()).err().unwrap_or_default()).into();
    };
    let asked = match Asked::of(ask, study) {
        Ok(asked) => asked,
        Err(problems) => return Outcome::mend(problems).into(),
    };
    match asked.method {
        Method::Polynomial => in_force(polynomial::outcome(ask, &asked, study), &asked).into(),
        Method::DoseScales => in_force(scales::outcome(ask, &asked, study), &asked).into(),
        Method::OrderedRanks => ordered_ranks::start(ask, &asked, study),
        Method::StepContrasts => in_force(steps::outcome(ask, &asked, study), &asked).into(),
    }
}

/// What the sentence shows for fields that are not given.
fn in_force(outcome: Outcome, asked: &Asked) -> Outcome {
    outcome
        .with_in_force("degree", asked.degree.to_string())
        .with_in_force("scores", words::scores(&asked.scores))
        .with_in_force("alpha", crate::answer::number::plain(asked.alpha))
}
