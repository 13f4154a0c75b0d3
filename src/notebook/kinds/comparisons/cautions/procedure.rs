//! What a procedure calls for, whatever the data.

use super::super::words;
use crate::answer::number;
use crate::methods::contrasts::Set;
use crate::methods::multiplicity::{Adjust, Family, PValueMethod, Sides};
use crate::numerics::distributions::{normal, studentized_range};

/// Cautions that the procedure itself calls for.
pub fn of_procedure(
    adjust: Adjust,
    family: Family,
    sides: Sides,
    size: usize,
    alpha: f64,
    levels: usize,
) -> Vec<String> {
    let name = words::procedure(adjust);
    let chance = |tests: usize| number::percent(1.0 - libm::pow(1.0 - alpha, tests as f64));
    let found = match adjust {
        Adjust::PValues(PValueMethod::Hochberg | PValueMethod::Hommel) => {
            let doubt = match family {
                Family::Set(Set::AllPairs) => " For all pairs this is not guaranteed.",
                _ => "",
            };
            Some(format!(
                "{name}'s procedure keeps its error rate when the tests are independent or positively dependent.{doubt} Holm's needs no such condition."
            ))
        }
        Adjust::PValues(PValueMethod::BenjaminiHochberg | PValueMethod::BenjaminiYekutieli) => Some(format!(
            "{name} controls the expected share of false findings among the findings, not the chance of any false one: it is for exploratory screening, not for confirming."
        )),
        Adjust::PValues(PValueMethod::Sidak | PValueMethod::HolmSidak)
            if sides != Sides::Both || family == Family::Given =>
        {
            Some(format!(
                "{name} keeps its error rate for two-sided t tests with a common error term and for independent tests; here it also needs positive dependence."
            ))
        }
        Adjust::PValues(PValueMethod::None) if size > 1 => Some(format!(
            "Nothing is adjusted: if no level differed, the chance of at least one false finding among {size} tests could reach {}.",
            chance(size)
        )),
        Adjust::NewmanKeuls if levels > 3 => Some(format!(
            "The Newman-Keuls procedure does not control the family-wise error strongly: with {} well separated pairs of equal levels the chance of a false finding approaches {}. It is offered for reading older work, not for a plan.",
            levels / 2,
            chance(levels / 2)
        )),
        Adjust::LeastSignificantDifference if levels > 3 => Some(format!(
            "The least significant difference does not control the family-wise error strongly: once one level is far from the others, the overall test opens the gate, and the chance of a false finding among the other {} is about {}. It is offered for reading older work, not for a plan.",
            levels - 1,
            number::percent(open_gate(levels, alpha))
        )),
        _ => None,
    };
    found.into_iter().collect()
}

/// The chance that the largest of all differences of `levels` - 1 equal means exceeds a t test's critical value, in large
/// samples: what Fisher's procedure does behind an open gate (Hayter 1986, J. Amer. Statist. Assoc. 81, 1000-1004).
fn open_gate(levels: usize, alpha: f64) -> f64 {
    let q = normal::upper_quantile(alpha / 2.0).map(|z| z * std::f64::consts::SQRT_2);
    q.and_then(|q| studentized_range::sf(q, levels - 1, f64::INFINITY))
        .map_or(1.0, |chance| (chance * 1e3).round() / 1e3)
}
