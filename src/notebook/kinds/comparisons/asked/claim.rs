//! What a rejected hypothesis is to say, and towards which side.

use crate::methods::multiplicity::{Claim, Sides};
use crate::notebook::ask::{At, Reader};
use crate::study::{Better, Study};

/// The claim with its margins, and the side that counts.
pub fn claim(reader: &mut Reader, study: Option<&Study>) -> (Claim, Sides) {
    let chosen = reader.choice("sides");
    let sides = match chosen {
        Some("greater") => Sides::Greater,
        Some("less") => Sides::Less,
        _ => Sides::Both,
    };
    match reader.choice("claim") {
        Some("non-inferiority") => {
            let sides = better_side(reader, study, sides);
            (Claim::NonInferiority { margin: one_margin(reader).unwrap_or(1.0) }, sides)
        }
        Some("equivalence") => {
            if sides != Sides::Both {
                reader.problem(
                    "sides",
                    "Equivalence looks to both sides by itself. Leave \"sides\" out, or choose claim = \"non-inferiority\".",
                );
            }
            let (lower, upper) = two_margins(reader).unwrap_or((-1.0, 1.0));
            (Claim::Equivalence { lower, upper }, Sides::Both)
        }
        _ => {
            if reader.ask().given("margin") {
                reader.problem(
                    "margin",
                    "A margin is written, but the claim is a difference. Choose claim = \"non-inferiority\" or \"equivalence\", or leave the margin out.",
                );
            }
            (Claim::Difference, sides)
        }
    }
}

/// The side on which more is better: as asked, else as the study says.
fn better_side(reader: &mut Reader, study: Option<&Study>, asked: Sides) -> Sides {
    match (asked, study.and_then(|study| study.better)) {
        (Sides::Both, Some(Better::Higher)) => Sides::Greater,
        (Sides::Both, Some(Better::Lower)) => Sides::Less,
        (Sides::Both, None) => {
            let message = "Non-inferiority needs to know which direction is the good one. Set better = \"higher\" or \"lower\" in the study, or sides = \"greater\" or \"less\" here.";
            reader.problem("claim", message);
            Sides::Greater
        }
        (asked, _) => asked,
    }
}

fn margins(reader: &mut Reader) -> Option<Vec<At<f64>>> {
    if !reader.ask().given("margin") {
        reader.problem(
            "claim",
            "This claim needs a margin: the largest difference that would not matter, in units of the outcome. Add margin = [0.5].",
        );
        return None;
    }
    reader.numbers("margin")
}

fn one_margin(reader: &mut Reader) -> Option<f64> {
    let margins = margins(reader)?;
    match margins.as_slice() {
        [one] if one.value > 0.0 => Some(one.value),
        [one] => {
            let message = format!(
                "The margin is {}; it is a size and must be above 0. Which direction is the good one is said by the study's \"better\" or by \"sides\".",
                one.value
            );
            reader.problem_at("margin", one.span.clone(), message);
            None
        }
        many => {
            let message = format!(
                "Non-inferiority has one margin, and {} are written. Write margin = [0.5].",
                many.len()
            );
            reader.problem("margin", message);
            None
        }
    }
}

fn two_margins(reader: &mut Reader) -> Option<(f64, f64)> {
    let margins = margins(reader)?;
    let (lower, upper) = match margins.as_slice() {
        [one] => (-one.value, one.value),
        [lower, upper] => (lower.value, upper.value),
        many => {
            let message = format!(
                "Equivalence has one margin for both sides or two, and {} are written. Write margin = [0.5], or margin = [-0.4, 0.6].",
                many.len()
            );
            reader.problem("margin", message);
            return None;
        }
    };
    if lower < 0.0 && upper > 0.0 {
        return Some((lower, upper));
    }
    let message = match margins.as_slice() {
        [one] => format!("The margin is {}; it is a size and must be above 0.", one.value),
        _ => format!("The margins are {lower} and {upper}; the first must be below 0 and the second above."),
    };
    reader.problem("margin", message);
    None
}
