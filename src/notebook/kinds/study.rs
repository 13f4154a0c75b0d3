//! The study: one outcome compared over the levels of one grouping variable.

mod answer;
mod design;
mod observe;

use super::{Kind, Read};
use crate::answer::number;
use crate::notebook::ask::Ask;
use crate::notebook::diagnostics::Diagnostic;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece};
use crate::notebook::outcome::{Outcome, Value};
use crate::study::Study;
use crate::table::ColumnKind;
use std::sync::Arc;

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
        Field::new("levels", Holds::Texts, "levels in order", "The levels in their order. Enter keeps the order that stands here").or("in order of first appearance"),
        Field::new("scores", Holds::Numbers, "scores", "A number for each level, increasing: the dose, the minutes; needed for trends").or("no scores"),
        Field::new("control", Holds::Level, "control", "The level that others are compared with").or("no control"),
        Field::new("variances", Holds::Choice(VARIANCES), "variances", "Pooling with unequal spread and unequal group sizes can triple the error rate, so the default does not pool").or("possibly unequal, each level with its own"),
        Field::new("alpha", Holds::Between(0.0, 1.0), "error rate", "The error rate of tests, such as 0.05").or("0.05"),
        Field::new("confidence", Holds::Between(0.0, 1.0), "confidence", "The confidence of intervals, such as 0.95").or("0.95"),
        Field::new("unit", Holds::Text, "unit", "The unit of the outcome, for figures and sentences").or("no unit"),
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

/// The study that the ask and the data make, with the account of rows; without data, a plan.
pub fn evaluate(ask: &Ask, read: &Read) -> Outcome {
    let mut reader = ask.reader();
    let design = design::read(&mut reader);
    let observed = match (design, read.value("data")) {
        (Some(design), Some(Value::Table(table))) if reader.problems().is_empty() => {
            observe::rows(&mut reader, design, table)
        }
        (Some(design), Some(Value::Groups(groups))) if reader.problems().is_empty() => {
            observe::groups(&mut reader, design, groups)
        }
        (Some(design), None) if reader.problems().is_empty() => observe::plan(&mut reader, design),
        _ => None,
    };
    let offers = offers(ask, read, observed.as_ref().map(|observed| &observed.study));
    let mut outcome = match (reader.finish(()), observed) {
        (Err(problems), _) => Outcome::mend(problems),
        (Ok(()), None) => {
            Outcome::mend(vec![Diagnostic::new("The study cannot be made.", ask.span("kind"), None)])
        }
        (Ok(()), Some(observed)) => {
            let settled = Outcome::settled(answer::answer(&observed), answer::results(&observed))
                .with_in_force("levels", answer::levels_in_words(&observed.study))
                .with_in_force("confidence", number::plain(observed.study.confidence));
            settled.with_value(Value::Study(Arc::new(observed.study)))
        }
    };
    outcome.choices.extend(offers);
    outcome
}

/// What the sentence offers: columns of the table, and the levels as far as they are known.
fn offers(ask: &Ask, read: &Read, study: Option<&Study>) -> Vec<(&'static str, Vec<String>)> {
    let mut offers = Vec::new();
    if let Some(Value::Table(table)) = read.value("data") {
        let names = |kind: ColumnKind| {
            let of_kind = table.columns.iter().filter(move |column| column.kind == kind);
            of_kind.map(|column| column.name.clone())
        };
        offers.push(("outcome", names(ColumnKind::Number).collect()));
        // Numbers may name groups too, a dose for instance; they come after the labels.
        offers.push(("groups", names(ColumnKind::Label).chain(names(ColumnKind::Number)).collect()));
    }
    let levels = match study {
        Some(study) => study.levels.labels.clone(),
        None => {
            ask.reader().texts("levels").unwrap_or_default().into_iter().map(|level| level.value).collect()
        }
    };
    if !levels.is_empty() {
        offers.push(("levels", levels.clone()));
        offers.push(("control", levels));
    }
    offers
}
