//! What a comparisons cell can be asked, and its sentence.

use crate::notebook::fields::{Choice, Field, Holds, KindTable, Part, Piece, choice};
use crate::notebook::kinds::Kind;

const FAMILIES: &[Choice] = &[
    choice("all pairs"),
    Choice { value: "each against control", shown: "each against the control" },
    choice("neighbours"),
    choice("each against the rest"),
    Choice { value: "each against the earlier", shown: "each against the earlier ones" },
    Choice { value: "polynomial", shown: "polynomial trends" },
    choice("contrasts"),
    choice("given p-values"),
];
/// The families that are of a study's levels.
const OF_LEVELS: &[&str] = &[
    "all pairs",
    "each against control",
    "neighbours",
    "each against the rest",
    "each against the earlier",
    "polynomial",
    "contrasts",
];
/// How a choice reads that the sentence also shows where it is not chosen but follows from the rest.
pub const PAIR_BY_PAIR: &str = "each pair by itself";
pub const JOINT: &str = "all levels together";
pub const ALL_LEVELS: &str = "all levels";
pub const LEVELS_COMPARED: &str = "the levels compared";

const BASES: &[Choice] = &[choice("means"), choice("ranks"), choice("permutation")];
const RANKINGS: &[Choice] =
    &[Choice { value: "pair by pair", shown: PAIR_BY_PAIR }, Choice { value: "joint", shown: JOINT }];
const CLAIMS: &[Choice] = &[
    Choice { value: "difference", shown: "a difference" },
    Choice { value: "non-inferiority", shown: "no loss beyond a margin" },
    Choice { value: "equivalence", shown: "equivalence within margins" },
];
const ADJUSTMENTS: &[Choice] = &[
    choice("Tukey"),
    choice("Games-Howell"),
    choice("Dunnett"),
    choice("Steel-Dwass"),
    choice("Steel"),
    choice("step-down Dunnett"),
    choice("step-down max-t"),
    choice("max-t"),
    choice("Dunnett T3"),
    choice("Dunnett C"),
    choice("Tamhane T2"),
    choice("Holm"),
    choice("Holm-Sidak"),
    choice("Hochberg"),
    choice("Hommel"),
    choice("Bonferroni"),
    choice("Sidak"),
    choice("Scheffe"),
    Choice { value: "fixed sequence", shown: "a fixed sequence" },
    Choice { value: "fallback", shown: "the fallback procedure" },
    Choice { value: "graph", shown: "a graph of weights" },
    choice("Benjamini-Hochberg"),
    choice("Benjamini-Yekutieli"),
    choice("Ryan-Einot-Gabriel-Welsch"),
    choice("Newman-Keuls"),
    Choice { value: "least significant difference", shown: "the least significant difference" },
    Choice { value: "none", shown: "no adjustment" },
];
const SIDES: &[Choice] = &[
    Choice { value: "both", shown: "in either direction" },
    Choice { value: "greater", shown: "only upwards" },
    Choice { value: "less", shown: "only downwards" },
];
const STANDARDS: &[Choice] = &[
    Choice { value: "all levels", shown: ALL_LEVELS },
    Choice { value: "levels compared", shown: LEVELS_COMPARED },
];
const TRANSITIONS: &[Part] = &[
    Part { name: "from", number: false },
    Part { name: "to", number: false },
    Part { name: "share", number: true },
];

pub const TABLE: KindTable = KindTable {
    purpose: "Compare groups: all pairs, against a control, neighbours, your own contrasts",
    fields: FIELDS,
    sentence: SENTENCE,
    starts_with: "family = \"all pairs\"\n",
};

const FIELDS: &[Field] = &[
    Field::new("study", Holds::Cell(&[Kind::Study]), "study", "The study whose levels are compared"),
    Field::new("family", Holds::Choice(FAMILIES), "family", "Which comparisons belong together")
        .or("all pairs"),
    Field::new(
        "contrasts",
        Holds::NamedTexts,
        "contrasts",
        "Named contrasts: a line \"name: expression\" each, such as \"late: (15 min + 30 min)/2 - none\"",
    )
    .such_as("late: (15 min + 30 min)/2 - none"),
    Field::new(
        "given",
        Holds::NamedNumbers,
        "p-values",
        "Named p-values from elsewhere: a line \"name: p\" each",
    )
    .such_as("first endpoint: 0.012"),
    Field::new(
        "basis",
        Holds::Choice(BASES),
        "basis",
        "What the tests are made from: means, ranks, or rearrangements of the values",
    )
    .or("means"),
    Field::new(
        "ranking",
        Holds::Choice(RANKINGS),
        "ranking",
        "Whether the two levels of a comparison are ranked by themselves, or all levels together (Dunn)",
    )
    .or("as the family needs"),
    Field::new("claim", Holds::Choice(CLAIMS), "claim", "What the tests are to show").or("a difference"),
    Field::new(
        "margin",
        Holds::Numbers,
        "margin",
        "The largest difference that would not matter, in units of the outcome; for equivalence one size or two bounds",
    ),
    Field::new(
        "adjust",
        Holds::Choice(ADJUSTMENTS),
        "adjustment",
        "How the error rate of the family is kept",
    )
    .or("the suitable procedure"),
    Field::new(
        "order",
        Holds::Texts,
        "order",
        "The comparisons in the order in which they are tested; all of them",
    )
    .or("as listed"),
    Field::new(
        "weights",
        Holds::NamedNumbers,
        "weights",
        "The share of the error rate that each comparison starts with: a line \"comparison: share\" each",
    )
    .such_as("15 min - none: 0.5")
    .or("equal shares"),
    Field::new(
        "transitions",
        Holds::Records(TRANSITIONS),
        "transitions",
        "Where a comparison's share goes when it is rejected: a line \"from; to; share\" each",
    )
    .such_as("15 min - none; 30 min - none; 1")
    .or("to all others equally"),
    Field::new("sides", Holds::Choice(SIDES), "direction", "Which direction of a difference counts")
        .or("in either direction"),
    Field::new(
        "also",
        Holds::Choices(ADJUSTMENTS),
        "adjustments beside it",
        "Other adjustments whose decisions are set beside",
    )
    .or("nothing"),
    Field::new("alpha", Holds::Between(0.0, 1.0), "error rate", "The family's error rate")
        .or("the study's rate"),
    Field::new(
        "standardise",
        Holds::Choice(STANDARDS),
        "standardised over",
        "The levels whose standard deviation divides a standardised difference",
    )
    .or("as the variances say"),
    Field::new(
        "repeats",
        Holds::Whole(100, 1_000_000),
        "repeats",
        "Random rearrangements where not all can be counted",
    )
    .or("10000"),
    Field::new("seed", Holds::Whole(0, 4_294_967_295), "seed", "Where the random rearrangements start")
        .or("1"),
];

const CLAIM: &[Piece] = &[
    Piece::Words("for"),
    Piece::Blank("claim"),
    Piece::When("claim", &["non-inferiority", "equivalence"], &[Piece::Words("of"), Piece::Blank("margin")]),
];
const LOOKING: &[Piece] = &[Piece::Words("and looking"), Piece::Blank("sides")];

const SENTENCE: &[Piece] = &[
    Piece::Words("Compare"),
    Piece::Blank("family"),
    Piece::When("family", OF_LEVELS, &[Piece::Words("of"), Piece::Blank("study")]),
    Piece::When("family", &["contrasts"], &[Piece::Words(":"), Piece::Blank("contrasts")]),
    Piece::When("family", &["given p-values"], &[Piece::Words(":"), Piece::Blank("given")]),
    Piece::When(
        "family",
        OF_LEVELS,
        &[
            Piece::Words("by"),
            Piece::Blank("basis"),
            Piece::When("basis", &["ranks"], &[Piece::Words(", ranking"), Piece::Blank("ranking")]),
            Piece::When(
                "basis",
                &["permutation"],
                &[
                    Piece::Words(", counted or with"),
                    Piece::Blank("repeats"),
                    Piece::Words("repeats from seed"),
                    Piece::Blank("seed"),
                ],
            ),
            Piece::When("basis", &["means"], CLAIM),
            // A claim that the basis cannot make is said to be wrong, and can be changed where that is said.
            Piece::When(
                "basis",
                &["ranks", "permutation"],
                &[Piece::When("claim", &["non-inferiority", "equivalence"], CLAIM)],
            ),
        ],
    ),
    Piece::Words(", keeping the error at"),
    Piece::Blank("alpha"),
    Piece::Words("with"),
    Piece::Blank("adjust"),
    Piece::When(
        "adjust",
        &["fixed sequence", "fallback", "graph"],
        &[Piece::Words("in the order"), Piece::Blank("order")],
    ),
    Piece::When(
        "adjust",
        &["fallback", "graph"],
        &[Piece::Words(", starting with"), Piece::Blank("weights")],
    ),
    Piece::When("adjust", &["graph"], &[Piece::Words("and passing them on:"), Piece::Blank("transitions")]),
    Piece::When(
        "family",
        OF_LEVELS,
        &[
            Piece::When("claim", &["difference", "non-inferiority"], LOOKING),
            // Equivalence looks to both sides by itself; what was written before can still be taken back.
            Piece::When("claim", &["equivalence"], &[Piece::When("sides", &["greater", "less"], LOOKING)]),
        ],
    ),
    Piece::Words("; beside it:"),
    Piece::Blank("also"),
    Piece::Words("."),
    Piece::When(
        "family",
        OF_LEVELS,
        &[Piece::When(
            "basis",
            &["means"],
            &[Piece::Words("Effects in SDs of"), Piece::Blank("standardise"), Piece::Words(".")],
        )],
    ),
];
