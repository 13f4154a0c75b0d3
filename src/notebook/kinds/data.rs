//! A table of raw values.

use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Part, Piece};
use crate::notebook::outcome::Outcome;

const SEPARATORS: &[Choice] = &[
    Choice { value: "auto", shown: "whatever separates them in the first line" },
    Choice { value: ",", shown: "commas" },
    Choice { value: ";", shown: "semicolons" },
    Choice { value: "tab", shown: "tabs" },
];
const DECIMALS: &[Choice] = &[
    Choice { value: "auto", shown: "a point or a comma, as found" },
    Choice { value: ".", shown: "a decimal point" },
    Choice { value: ",", shown: "a decimal comma" },
];

pub const TABLE: KindTable = KindTable {
    purpose: "Bring in a table of raw values: one row a participant, a header on top",
    fields: &[
        Field::new("table", Holds::LongText, "table", "Delimited text with a header row").required(),
        Field::new("separator", Holds::Choice(SEPARATORS), "column separator", "What stands between two columns").or("whatever separates them in the first line"),
        Field::new("decimal", Holds::Choice(DECIMALS), "decimal sign", "How decimals are written").or("a point or a comma, as found"),
        Field::new("missing", Holds::Texts, "codes for missing values", "What is written where a value is missing").or("nothing, NA or ."),
        Field::new("columns", Holds::NamedTexts, "forced types", "Columns whose type is not the one found: a line \"name: number\" or \"name: label\" each").or("as found"),
        Field::new("exclude", Holds::Records(&[Part { name: "where", number: false }, Part { name: "reason", number: false }]), "rows left out", "Rows left out of every analysis: a line \"condition; reason\" each, such as \"score > 100; typing error\"").or("none"),
        Field::new("derive", Holds::NamedTexts, "new columns", "New columns computed from others: a line \"name: expression\" each, such as \"gain: after - before\"").or("none"),
    ],
    sentence: &[
        Piece::Words("A table with columns separated by"),
        Piece::Blank("separator"),
        Piece::Words("and numbers written with"),
        Piece::Blank("decimal"),
        Piece::Words("; missing values are written as"),
        Piece::Blank("missing"),
        Piece::Words(". Column types:"),
        Piece::Blank("columns"),
        Piece::Words("; new columns:"),
        Piece::Blank("derive"),
        Piece::Words("; rows left out:"),
        Piece::Blank("exclude"),
        Piece::Words("."),
    ],
    starts_with: "table = \"\"\"\n\"\"\"\n",
};

pub fn evaluate(_ask: &Ask) -> Outcome {
    Outcome::mend(Vec::new())
}
