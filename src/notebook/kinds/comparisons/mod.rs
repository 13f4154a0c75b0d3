//! Which groups differ: families of comparisons with their error rate controlled.
//!
//! `asked` reads the ask against its study, `plan` shows what can be said before there are data, `given` adjusts
//! p-values from elsewhere, `working` does what takes long in slices, and `decided` lays out the result of
//! `methods::multiplicity` from its views: `rows`, `effects`, `shares`, `letters`, `beside`, `differs`, `writeup`,
//! `figures`, `cautions` (with `attainable`) and `json`; `words` says what things are called.

mod asked;
mod attainable;
mod beside;
mod cautions;
mod decided;
mod differs;
mod effects;
mod fields;
mod figures;
mod given;
mod json;
mod letters;
mod plan;
mod rows;
mod shares;
mod words;
mod working;
mod writeup;

pub use fields::TABLE;

use super::Read;
use crate::methods::multiplicity::{Basis, Ranking};
use crate::notebook::ask::Ask;
use crate::notebook::outcome::Outcome;
use crate::notebook::work::Evaluation;
use crate::study::Variances;
use asked::Asked;

/// The decision on every comparison of the family, or the plan, or what to mend.
pub fn evaluate(ask: &Ask, read: &Read) -> Evaluation {
    let asked = match Asked::of(ask, read.study()) {
        Ok(asked) => asked,
        Err(problems) => return Outcome::mend(problems).into(),
    };
    match (&asked.given, read.shared_study()) {
        (Some(given), _) => in_force(given::outcome(&asked, given), &asked, None).into(),
        (None, Some(study)) if study.summary().is_none() => {
            in_force(plan::outcome(&asked, study), &asked, Some(study.variances)).into()
        }
        (None, Some(study)) => working::start(ask, asked, study.clone()),
        (None, None) => Outcome::mend(Vec::new()).into(),
    }
}

/// Up to this many comparisons are offered by name where an order, weights or transitions are to be written.
const OFFERED: usize = 24;

/// What the sentence shows for fields that are not given, and what it offers.
fn in_force(outcome: Outcome, asked: &Asked, variances: Option<Variances>) -> Outcome {
    let alpha = crate::answer::number::plain(asked.alpha);
    let outcome =
        outcome.with_in_force("adjust", words::procedure(asked.adjust)).with_in_force("alpha", alpha);
    let outcome = match asked.basis {
        Basis::Ranks(Ranking::Joint) => outcome.with_in_force("ranking", fields::JOINT),
        Basis::Ranks(Ranking::PairByPair) => outcome.with_in_force("ranking", fields::PAIR_BY_PAIR),
        Basis::Means | Basis::Permutation => outcome,
    };
    let outcome = match &asked.order {
        Some(_) if asked.names().len() <= OFFERED => {
            let fields = ["order", "weights", "transitions"];
            fields.into_iter().fold(outcome, |outcome, field| outcome.with_choices(field, asked.names()))
        }
        _ => outcome,
    };
    match variances {
        Some(Variances::Equal) => outcome.with_in_force("standardise", fields::ALL_LEVELS),
        Some(Variances::Unequal) => outcome.with_in_force("standardise", fields::LEVELS_COMPARED),
        None => outcome,
    }
}
