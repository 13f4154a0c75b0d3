//! What could mislead in a family of comparisons, said in place.

mod contrasts;
mod groups;
mod procedure;

use super::asked::Asked;
use super::decided::Laid;
use super::{attainable, words};
use crate::answer::number;
use crate::methods::multiplicity::{Basis, Claim, IntervalKind, Ranking};
use crate::notebook::kinds::wording::listed;
pub use procedure::of_procedure;

/// Cautions about this result.
pub fn of(laid: &Laid) -> Vec<String> {
    let (result, asked) = (laid.comparisons, laid.asked);
    let mut found = Vec::new();
    found.extend(groups::borrowed_spread(laid));
    found.extend(groups::pooled_spread(laid));
    found.extend(groups::small_groups(laid));
    found.extend(groups::out_of_reach(laid));
    found.extend(attainable::caution(laid));
    found.extend(of_ask(asked, laid.study.levels.count()));
    found.extend(groups::unequal_steps(laid));
    found.extend(contrasts::too_many_contrasts(laid));
    found.extend(contrasts::same_question(laid));
    found.extend(disagreeing(laid));
    if result.interval_kind != IntervalKind::None && (result.confidence - (1.0 - result.alpha)).abs() > 1e-12
    {
        found.push(format!(
            "The intervals have the study's confidence of {} and the decisions an error rate of {}: they need not agree.",
            number::percent(result.confidence),
            number::percent(result.alpha)
        ));
    }
    found
}

/// Cautions that what is asked calls for, whatever the data.
pub fn of_ask(asked: &Asked, levels: usize) -> Vec<String> {
    let size = asked.given.as_ref().map_or(asked.contrasts.len(), Vec::len);
    let mut found = of_procedure(asked.adjust, asked.family, asked.sides, size, asked.alpha, levels);
    found.extend(of_basis(asked.basis));
    if asked.claim != Claim::Difference {
        found.push(MARGIN.to_string());
    }
    found.extend(never_tested(asked));
    found.extend(unused(&asked.unused));
    found
}

/// What holds for every claim with a margin, in clinical work above all.
const MARGIN: &str = "The margin must have been fixed, with its reasons, before the data were seen. A decision on treatment or safety rests on the approved protocol, a qualified statistician and local rules; this cell does not replace them.";

fn of_basis(basis: Basis) -> Option<String> {
    match basis {
        Basis::Ranks(Ranking::Joint) => Some(
            "With joint ranks the values of the other levels enter every comparison: levels far away make it miss differences, levels with a narrower spread make it too ready to find them. Ranking pair by pair has neither trait."
                .to_string(),
        ),
        Basis::Ranks(Ranking::PairByPair) => None,
        Basis::Permutation => Some(
            "The hypothesis of a rearrangement is that the levels compared have one distribution, spread included: it is exact after random assignment, and a difference in spread can also lead to a rejection."
                .to_string(),
        ),
        Basis::Means => None,
    }
}

/// Comparisons that hold no weight and to which none can come.
fn never_tested(asked: &Asked) -> Option<String> {
    let order = asked.order.as_ref()?;
    let mut reached: Vec<bool> = order.graph.weights().iter().map(|weight| *weight > 0.0).collect();
    if reached.iter().all(|reached| *reached) {
        return None;
    }
    let transitions = order.graph.transitions();
    let mut waiting: Vec<usize> = (0..reached.len()).filter(|i| reached[*i]).collect();
    while let Some(from) = waiting.pop() {
        for (to, share) in transitions[from].iter().enumerate() {
            if *share > 0.0 && !reached[to] {
                reached[to] = true;
                waiting.push(to);
            }
        }
    }
    let names = |row: &usize| match &asked.given {
        Some(given) => given[*row].0.clone(),
        None => words::row_name(&asked.contrasts[*row].name, asked.family),
    };
    let left: Vec<String> = order
        .places
        .iter()
        .zip(&reached)
        .filter(|(_, reached)| !**reached)
        .map(|(row, _)| names(row))
        .collect();
    let (start, them) = if left.len() == 1 { ("starts", "it") } else { ("start", "them") };
    (!left.is_empty()).then(|| {
        format!(
            "{} {start} with no share of the error rate, and no transition can bring {them} one: never tested, whatever the others show.",
            listed(left.into_iter())
        )
    })
}

/// Fields that are written and not used.
pub fn unused(fields: &[(&'static str, String)]) -> Vec<String> {
    fields
        .iter()
        .map(|(field, by)| format!("\"{field}\" is written in this cell but not used by {by}."))
        .collect()
}

fn disagreeing(laid: &Laid) -> Option<String> {
    let result = laid.comparisons;
    // A bound that goes with the decisions ends at the border itself where the hypothesis is rejected.
    if result.disagreeing.is_empty() || result.interval_kind == IntervalKind::Compatible {
        return None;
    }
    let rows = listed(result.disagreeing.iter().map(|i| laid.name(&result.rows[*i])));
    Some(if result.adjust.single_step() {
        format!(
            "The interval of {rows} and its decision do not say the same, because they are at different levels or by different approximations."
        )
    } else {
        format!(
            "{} decides step by step and has no intervals of its own; those shown are each a {}. They disagree with the decision on {rows}: the decision is the one in words.",
            words::procedure_as_subject(result.adjust),
            words::interval(result)
        )
    })
}
