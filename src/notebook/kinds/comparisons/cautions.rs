//! What could mislead in a family of comparisons, said in place.

use super::{Laid, words};
use crate::answer::number;
use crate::methods::contrasts::Set;
use crate::methods::multiplicity::{Adjust, Family, PValueMethod, Sides};
use crate::notebook::kinds::wording::listed;
use crate::study::Variances;

/// Below this group size Games and Howell's procedure is measurably liberal (0.058 at n = 5 and six groups, 0.081 at
/// n = 3, 5, 8, 12 with the largest spread in the smallest group, both at 0.05; 30,000 simulated null trials).
const SMALL: usize = 6;

/// A ratio of standard deviations from which pooling them deserves a word.
const RATIO: f64 = 2.0;

/// Cautions about this result.
pub fn of(laid: &Laid) -> Vec<String> {
    let (result, family) = (&laid.comparisons, laid.asked.family);
    let mut found = Vec::new();
    found.extend(pooled_spread(laid));
    found.extend(small_groups(laid));
    found.extend(of_procedure(result.adjust, family, result.sides, result.family_size, result.alpha));
    found.extend(disagreeing(laid));
    if (result.confidence - (1.0 - result.alpha)).abs() > 1e-12 {
        found.push(format!(
            "The intervals have the study's confidence of {} and the decisions an error rate of {}: they need not agree.",
            number::percent(result.confidence),
            number::percent(result.alpha)
        ));
    }
    found.extend(unused(&laid.asked.unused, laid.asked.family_name));
    found
}

/// Cautions that the procedure itself calls for, whatever the data.
pub fn of_procedure(adjust: Adjust, family: Family, sides: Sides, size: usize, alpha: f64) -> Vec<String> {
    let mut found = Vec::new();
    let Adjust::PValues(method) = adjust else { return found };
    let name = words::procedure(adjust);
    match method {
        PValueMethod::Hochberg | PValueMethod::Hommel => {
            let doubt = match family {
                Family::Set(Set::AllPairs) => " For all pairs this is not guaranteed.",
                _ => "",
            };
            found.push(format!(
                "{name}'s procedure keeps its error rate when the tests are independent or positively dependent.{doubt} Holm's needs no such condition."
            ));
        }
        PValueMethod::BenjaminiHochberg | PValueMethod::BenjaminiYekutieli => found.push(format!(
            "{name} controls the expected share of false findings among the findings, not the chance of any false one: it is for exploratory screening, not for confirming."
        )),
        PValueMethod::Sidak | PValueMethod::HolmSidak if sides != Sides::Both || family == Family::Given => {
            found.push(format!(
                "{name} keeps its error rate for two-sided t tests with a common error term and for independent tests; here it also needs positive dependence."
            ));
        }
        PValueMethod::None if size > 1 => found.push(format!(
            "Nothing is adjusted: if no level differed, the chance of at least one false finding among {size} tests could reach {}.",
            number::percent(1.0 - libm::pow(1.0 - alpha, size as f64))
        )),
        _ => {}
    }
    found
}

/// Fields that are written and not used.
pub fn unused(fields: &[&str], family: &str) -> Option<String> {
    let names = listed(fields.iter().map(|field| format!("\"{field}\"")));
    let verb = if fields.len() == 1 { "is" } else { "are" };
    (!fields.is_empty())
        .then(|| format!("{names} {verb} written in this cell but not used by the family \"{family}\"."))
}

fn pooled_spread(laid: &Laid) -> Option<String> {
    if laid.study.variances != Variances::Equal {
        return None;
    }
    let groups = laid.summary.groups.iter().zip(&laid.estimates.labels);
    let spreads: Vec<(f64, usize, &String)> =
        groups.filter_map(|(g, level)| Some((g.sd()?, g.n, level))).collect();
    let largest = spreads.iter().max_by(|one, other| one.0.total_cmp(&other.0))?;
    let smallest = spreads.iter().min_by(|one, other| one.0.total_cmp(&other.0))?;
    if largest.0 <= RATIO * smallest.0 {
        return None;
    }
    let sizes = match largest.1.cmp(&smallest.1) {
        std::cmp::Ordering::Less => {
            " The smaller group has the larger spread, which makes the pooled tests too ready to find differences."
        }
        std::cmp::Ordering::Greater => {
            " The larger group has the larger spread, which makes the pooled tests miss differences."
        }
        std::cmp::Ordering::Equal => "",
    };
    let ratio = if smallest.0 > 0.0 {
        format!("{} times", number::fixed(largest.0 / smallest.0, 1))
    } else {
        "far above".to_string()
    };
    Some(format!(
        "One standard deviation is assumed for all levels, but that of \"{}\" is {ratio} that of \"{}\".{sizes} The study can set variances = \"unequal\".",
        largest.2, smallest.2
    ))
}

fn small_groups(laid: &Laid) -> Option<String> {
    let small = laid.estimates.n.iter().zip(&laid.estimates.labels).filter(|(n, _)| **n < SMALL);
    let names: Vec<String> = small.map(|(n, level)| format!("\"{level}\" (n = {n})")).collect();
    // With two levels it is Welch's t test alone.
    let liberal = laid.comparisons.adjust == Adjust::GamesHowell && laid.estimates.labels.len() > 2;
    (liberal && !names.is_empty()).then(|| {
        format!(
            "The Games-Howell procedure finds somewhat too many differences with groups smaller than {SMALL}: {}. Holm with Welch's t tests is the careful choice.",
            listed(names.into_iter())
        )
    })
}

fn disagreeing(laid: &Laid) -> Option<String> {
    let result = &laid.comparisons;
    let names: Vec<String> = result
        .disagreeing
        .iter()
        .map(|i| words::row_name(&result.rows[*i].name, laid.asked.family))
        .collect();
    if names.is_empty() {
        return None;
    }
    let rows = listed(names.into_iter());
    Some(if result.adjust.single_step() {
        format!(
            "The interval of {rows} and its decision do not say the same, because they are at different levels."
        )
    } else {
        format!(
            "{} decides step by step and has no intervals of its own; those shown are each a {}. They disagree with the decision on {rows}: the decision is the one in words.",
            words::procedure(result.adjust),
            words::interval(result)
        )
    })
}
