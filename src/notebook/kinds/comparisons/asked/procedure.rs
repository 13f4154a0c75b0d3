//! The basis of the tests, the procedure that decides, and those set beside it.

use super::all_pairs_of_levels;
use crate::methods::contrasts::Contrast;
use crate::methods::multiplicity::{
    Adjust, Basis, Claim, Family, Ranking, Setting, default_adjust, suitable,
};
use crate::notebook::ask::Reader;
use crate::notebook::diagnostics::quoted_choices;

/// What the tests are made from.
pub fn basis(reader: &mut Reader, family: Family, contrasts: &[Contrast], claim: Claim) -> Basis {
    let basis = match reader.choice("basis") {
        Some("ranks") => Basis::Ranks(ranking(reader, family, contrasts)),
        Some("permutation") => Basis::Permutation,
        _ => Basis::Means,
    };
    if basis != Basis::Means && claim != Claim::Difference {
        let message = format!(
            "A margin is a difference of means, and the basis is \"{}\". Choose basis = \"means\", or ask for a difference.",
            basis.word()
        );
        reader.problem("claim", message);
    }
    basis
}

/// As chosen; else pair by pair where every comparison is between two levels, which is what the procedures for ranks need.
fn ranking(reader: &mut Reader, family: Family, contrasts: &[Contrast]) -> Ranking {
    let pairs = all_pairs_of_levels(family, contrasts);
    match reader.choice("ranking") {
        Some("joint") => Ranking::Joint,
        Some(_) => {
            if !pairs {
                reader.problem(
                    "ranking",
                    "Ranking pair by pair needs comparisons between two levels, and this family has others. Choose ranking = \"joint\".",
                );
            }
            Ranking::PairByPair
        }
        None if pairs => Ranking::PairByPair,
        None => Ranking::Joint,
    }
}

/// The procedure that decides; an unsuitable one is noted, where the family is `known`.
pub fn adjust(reader: &mut Reader, setting: &Setting, known: bool) -> Adjust {
    let default = default_adjust(setting);
    let Some(chosen) = reader.choice("adjust").and_then(Adjust::from_name) else {
        return default;
    };
    if known && let Some(message) = objection(chosen, setting) {
        reader.problem("adjust", message);
    }
    chosen
}

/// The procedures beside it.
pub fn also(reader: &mut Reader, setting: &Setting, adjust: Adjust) -> Vec<Adjust> {
    if !reader.ask().given("also") {
        return Vec::new();
    }
    let mut found: Vec<Adjust> = Vec::new();
    for beside in reader.choices("also").into_iter().filter_map(Adjust::from_name) {
        if let Some(message) = objection(beside, setting) {
            reader.problem("also", message);
        } else if beside.ordered() {
            reader.problem(
                "also",
                format!(
                    "\"{}\" has an order of its own and can only be the adjustment itself.",
                    beside.name()
                ),
            );
        } else if beside != adjust && !found.contains(&beside) {
            found.push(beside);
        }
    }
    found
}

/// Why the procedure does not suit, with those that do.
fn objection(adjust: Adjust, setting: &Setting) -> Option<String> {
    let reason = adjust.unsuitable(setting)?;
    let fitting = suitable(setting);
    let names = quoted_choices(fitting.iter().map(|adjust| adjust.name()));
    let mut letters = reason.chars();
    let first = letters.next().map(|letter| letter.to_uppercase().to_string()).unwrap_or_default();
    Some(format!("{first}{}. Suitable here: {names}.", letters.as_str()))
}
