//! Which groups differ: families of comparisons with their error rate controlled.
//!
//! `asked` reads the ask against its study, `plan` shows what can be said before there are data, `given` adjusts
//! p-values from elsewhere, and `decided` lays out the result of `methods::multiplicity::compare` (with `words` for
//! what the method is called, `cautions`, `figures` and `json` as further views of that one result).

mod asked;
mod cautions;
mod decided;
mod figures;
mod given;
mod json;
mod plan;
mod words;

use super::wording::{refused, remedy};
use super::{Kind, Read};
use crate::answer::Precision;
use crate::methods::multiplicity::{Comparisons, Request, compare, explain};
use crate::notebook::ask::Ask;
use crate::notebook::fields::{Choice, Field, Holds, KindTable, Piece, choice};
use crate::notebook::outcome::Outcome;
use crate::study::{Estimates, Study, Summary};
use asked::Asked;

const FAMILIES: &[Choice] = &[
    choice("all pairs"),
    choice("each against control"),
    choice("neighbours"),
    choice("each against the rest"),
    choice("contrasts"),
    choice("given p-values"),
];
const ADJUSTMENTS: &[Choice] = &[
    choice("Tukey"),
    choice("Games-Howell"),
    choice("Dunnett"),
    choice("Holm"),
    choice("Holm-Sidak"),
    choice("Hochberg"),
    choice("Hommel"),
    choice("Bonferroni"),
    choice("Sidak"),
    choice("Scheffe"),
    choice("Benjamini-Hochberg"),
    choice("Benjamini-Yekutieli"),
    Choice { value: "none", shown: "no adjustment" },
];
const SIDES: &[Choice] = &[
    Choice { value: "both", shown: "in either direction" },
    Choice { value: "greater", shown: "only upwards" },
    Choice { value: "less", shown: "only downwards" },
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
            "adjust",
            Holds::Choice(ADJUSTMENTS),
            "adjustment",
            "How the error rate of the family is kept",
        )
        .or("the suitable procedure"),
        Field::new("sides", Holds::Choice(SIDES), "direction", "Which direction of a difference counts")
            .or("in either direction"),
        Field::new(
            "also",
            Holds::Choices(ADJUSTMENTS),
            "adjustments beside it",
            "Other adjustments whose p-values are set beside",
        )
        .or("nothing"),
        Field::new("alpha", Holds::Between(0.0, 1.0), "error rate", "The family's error rate")
            .or("the study's rate"),
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
        Piece::Words(", keeping the error at"),
        Piece::Blank("alpha"),
        Piece::Words("with"),
        Piece::Blank("adjust"),
        Piece::When(
            "family",
            &["all pairs", "each against control", "neighbours", "each against the rest", "contrasts"],
            &[Piece::Words("and looking"), Piece::Blank("sides")],
        ),
        Piece::Words("; beside it:"),
        Piece::Blank("also"),
        Piece::Words("."),
    ],
    starts_with: "family = \"all pairs\"\n",
};

/// The decision on every comparison of the family, or the plan, or what to mend.
pub fn evaluate(ask: &Ask, read: &Read) -> Outcome {
    let asked = match Asked::of(ask, read.study()) {
        Ok(asked) => asked,
        Err(problems) => return Outcome::mend(problems),
    };
    let outcome = match (&asked.given, read.study()) {
        (Some(given), _) => given::outcome(&asked, given),
        (None, Some(study)) => with_study(ask, &asked, study),
        (None, None) => Outcome::mend(Vec::new()),
    };
    let alpha = crate::answer::number::plain(asked.alpha);
    outcome.with_in_force("adjust", words::procedure(asked.adjust)).with_in_force("alpha", alpha)
}

fn with_study(ask: &Ask, asked: &Asked, study: &Study) -> Outcome {
    let Some(summary) = study.summary() else {
        return plan::outcome(asked, study);
    };
    let estimates = match Estimates::one_way(&study.levels.labels, &summary, study.variances) {
        Ok(estimates) => estimates,
        Err(error) => {
            return refused(ask, format!("The comparisons cannot be made: {error}.{}", remedy(&error)));
        }
    };
    match decide(asked, study, &summary, &estimates) {
        Ok(result) => decided::outcome(&result),
        Err(message) => refused(ask, format!("The comparisons cannot be made: {message}.")),
    }
}

/// Everything from which the answer is laid out.
struct Laid<'a> {
    asked: &'a Asked,
    study: &'a Study,
    summary: &'a Summary,
    estimates: &'a Estimates,
    comparisons: Comparisons,
    /// One for all estimates, from their standard errors.
    precision: Precision,
    /// Adjusted p-values of the same rows under other procedures.
    also: Vec<(crate::methods::multiplicity::Adjust, Vec<f64>)>,
    explanation: Option<crate::methods::multiplicity::Explanation>,
}

fn decide<'a>(
    asked: &'a Asked,
    study: &'a Study,
    summary: &'a Summary,
    estimates: &'a Estimates,
) -> Result<Laid<'a>, String> {
    let request = Request {
        estimates,
        summary: Some(summary),
        contrasts: &asked.contrasts,
        family: asked.family,
        adjust: asked.adjust,
        sides: asked.sides,
        alpha: asked.alpha,
        confidence: asked.confidence,
    };
    let comparisons = compare(&request).map_err(|error| error.to_string())?;
    let beside = |adjust| Comparisons::adjusted_by(&request, adjust).map(|p| (adjust, p));
    let also = asked.also.iter().map(|adjust| beside(*adjust)).collect::<Result<Vec<_>, _>>();
    let also = also.map_err(|error| error.to_string())?;
    let explanation = explain(estimates, &comparisons).map_err(|error| error.to_string())?;
    let precision = Precision::for_column(comparisons.rows.iter().map(|row| row.se));
    Ok(Laid { asked, study, summary, estimates, comparisons, precision, also, explanation })
}
