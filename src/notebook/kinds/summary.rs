//! Groups known only by size, mean and standard deviation.

use crate::notebook::ask::Ask;
use crate::notebook::fields::{Field, Holds, KindTable, Part, Piece};
use crate::notebook::outcome::Outcome;

const PARTS: &[Part] = &[
    Part { name: "level", number: false },
    Part { name: "n", number: true },
    Part { name: "mean", number: true },
    Part { name: "sd", number: true },
];

pub const TABLE: KindTable = KindTable {
    purpose: "Type sizes, means and standard deviations, for instance from a publication",
    fields: &[Field::new(
        "groups",
        Holds::Records(PARTS),
        "groups",
        "A line \"level; n; mean; sd\" for each group",
    )
    .required()],
    sentence: &[
        Piece::Words("Groups known by size, mean and standard deviation (level; n; mean; sd):"),
        Piece::Blank("groups"),
    ],
    starts_with: "groups = [\n  { level = \"A\", n = 10, mean = 0, sd = 1 },\n  { level = \"B\", n = 10, mean = 0, sd = 1 },\n]\n",
};

pub fn evaluate(_ask: &Ask) -> Outcome {
    Outcome::mend(Vec::new())
}
