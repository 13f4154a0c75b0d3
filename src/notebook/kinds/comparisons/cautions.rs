//! What could mislead in a family of comparisons, said in place.

use super::asked::Asked;
use super::decided::Laid;
use super::{attainable, words};
use crate::answer::number;
use crate::methods::contrasts::Set;
use crate::methods::multiplicity::{
    Adjust, Basis, Claim, ComparisonRow, Family, IntervalKind, PValueMethod, Ranking, Sides, ranks,
};
use crate::notebook::kinds::wording::listed;
use crate::numerics::distributions::{normal, studentized_range};
use crate::study::Variances;

/// Below this group size the procedures for unequal variances and for ranks deserve a word. Measured at 5 %, all levels alike
/// (tests/benches/ERROR_RATES.md): with n = 3, 5, 8, 12 and the largest spread in the smallest group Games-Howell 8.5 %,
/// T3 7.3 %, C 4.6 %; with n = 5, 10, 15, 20 5.8, 4.9 and 3.9 %; Steel-Dwass 0.0 % with n = 4 and 2.1 % with n = 6.
const SMALL: usize = 6;

/// From this size on Dunnett's T3 keeps its rate; below, only his C was seen to.
const ENOUGH_FOR_T3: usize = 5;

/// A ratio of standard deviations from which pooling them deserves a word.
const RATIO: f64 = 2.0;

/// Cautions about this result.
pub fn of(laid: &Laid) -> Vec<String> {
    let (result, asked) = (laid.comparisons, laid.asked);
    let mut found = Vec::new();
    found.extend(borrowed_spread(laid));
    found.extend(pooled_spread(laid));
    found.extend(small_groups(laid));
    found.extend(out_of_reach(laid));
    found.extend(attainable::caution(laid));
    found.extend(of_ask(asked, laid.study.levels.count()));
    found.extend(unequal_steps(laid));
    found.extend(too_many_contrasts(laid));
    found.extend(same_question(laid));
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

/// Levels whose spread is that of the others, because their own values show none.
fn borrowed_spread(laid: &Laid) -> Option<String> {
    if laid.study.variances != Variances::Equal || laid.asked.basis != Basis::Means {
        return None;
    }
    let groups = laid.summary.groups.iter().zip(&laid.study.levels.labels);
    let names: Vec<String> = groups
        .filter_map(|(group, level)| match group.sd() {
            None => Some(format!("\"{level}\" (n = 1)")),
            Some(0.0) => Some(format!("\"{level}\" (n = {}, all values equal)", group.n)),
            Some(_) => None,
        })
        .collect();
    let (have, own, them) = if names.len() == 1 { ("has", "its", "it") } else { ("have", "their", "them") };
    (!names.is_empty()).then(|| {
        format!(
            "{} {have} no spread of {own} own: that of the other levels is taken for {them}.",
            listed(names.into_iter())
        )
    })
}

fn pooled_spread(laid: &Laid) -> Option<String> {
    if laid.study.variances != Variances::Equal || matches!(laid.asked.basis, Basis::Ranks(_)) {
        return None;
    }
    let groups = laid.summary.groups.iter().zip(&laid.study.levels.labels);
    // A level without any spread is spoken of by itself.
    let spreads: Vec<(f64, usize, &String)> =
        groups.filter_map(|(g, level)| Some((g.sd().filter(|sd| *sd > 0.0)?, g.n, level))).collect();
    let largest = spreads.iter().max_by(|one, other| one.0.total_cmp(&other.0))?;
    let smallest = spreads.iter().min_by(|one, other| one.0.total_cmp(&other.0))?;
    if largest.0 <= RATIO * smallest.0 {
        return None;
    }
    let sizes = match largest.1.cmp(&smallest.1) {
        std::cmp::Ordering::Less => {
            " The smaller group has the larger spread, which makes the pooled tests too ready to find differences: at 5 % up to three or four times as often as asked for."
        }
        std::cmp::Ordering::Greater => {
            " The larger group has the larger spread, which makes the pooled tests miss differences."
        }
        std::cmp::Ordering::Equal => "",
    };
    Some(format!(
        "One standard deviation is assumed for all levels, but that of \"{}\" is {} times that of \"{}\".{sizes} The study can set variances = \"unequal\".",
        largest.2,
        number::fixed(largest.0 / smallest.0, 1),
        smallest.2
    ))
}

fn small_groups(laid: &Laid) -> Option<String> {
    let small = laid.n().into_iter().zip(&laid.study.levels.labels).filter(|(n, _)| *n < SMALL);
    let names: Vec<String> = small.map(|(n, level)| format!("\"{level}\" (n = {n})")).collect();
    if names.is_empty() {
        return None;
    }
    let names = listed(names.into_iter());
    let name = words::procedure(laid.comparisons.adjust);
    let tiny = laid.n().into_iter().any(|n| n < ENOUGH_FOR_T3);
    match laid.comparisons.adjust {
        // With two levels it is Welch's t test alone.
        _ if laid.study.levels.count() == 2 => None,
        Adjust::GamesHowell => Some(format!(
            "The Games-Howell procedure finds somewhat too many differences where small groups have unequal sizes or spreads: {names}. {} is the careful choice for all pairs with unequal variances.",
            if tiny { "Dunnett C" } else { "Dunnett T3" }
        )),
        Adjust::DunnettT3 | Adjust::TamhaneT2 if tiny => Some(format!(
            "{name} can find too many differences with groups as small as {names} where their spreads are unequal. Dunnett C is the careful choice."
        )),
        Adjust::MaxT | Adjust::StepDownMaxT
            if laid.study.variances == Variances::Unequal && laid.asked.basis == Basis::Means =>
        {
            Some(format!(
                "With a variance for each level the max-t procedures find somewhat too many differences where small groups have unequal sizes or spreads: {names}."
            ))
        }
        Adjust::Steel | Adjust::SteelDwass => Some(format!(
            "{name} refers rank sums to a distribution for large samples. With groups smaller than {SMALL} it misses differences, and with four values a group it may be unable to find any: {names}. Holm with exact rank sums is the careful choice."
        )),
        _ => None,
    }
}

/// Counted comparisons that could not be significant whatever the values: too few of them.
fn out_of_reach(laid: &Laid) -> Option<String> {
    let result = laid.comparisons;
    let Basis::Ranks(Ranking::PairByPair) = result.basis else { return None };
    let n = laid.n();
    let mut worst: Option<(f64, f64, &ComparisonRow)> = None;
    let mut count = 0;
    for row in result.rows.iter().filter(|row| row.p_counted) {
        let sizes: Vec<usize> = (0..n.len()).filter(|i| row.coefficients[*i] != 0.0).map(|i| n[i]).collect();
        let (&[first, second], Some(alpha)) = (sizes.as_slice(), row.alpha) else { continue };
        let Ok(smallest) = ranks::smallest_p(first, second, result.sides) else { continue };
        if smallest > alpha {
            count += 1;
            if worst.is_none_or(|(known, ..)| smallest > known) {
                worst = Some((smallest, alpha, row));
            }
        }
    }
    let (smallest, alpha, row) = worst?;
    Some(format!(
        "{} too few values to be significant whatever they are: the smallest p-value that the sizes of {} allow is {}, and its level is {}.",
        match count {
            1 => "One comparison has".to_string(),
            many => format!("{many} comparisons have"),
        },
        laid.name(row),
        number::p_value(smallest),
        number::plain((alpha * 1e4).round() / 1e4),
    ))
}

/// Stepwise ranges of ordered means rest on equal sizes.
fn unequal_steps(laid: &Laid) -> Option<String> {
    let n = laid.n();
    let stepwise = matches!(laid.comparisons.adjust, Adjust::RyanEinotGabrielWelsch | Adjust::NewmanKeuls);
    (stepwise && n.windows(2).any(|pair| pair[0] != pair[1])).then(|| {
        format!(
            "{} is made for equal group sizes; with unequal ones its error rate is not proven. The step-down max-t procedure holds for any sizes.",
            words::procedure(laid.comparisons.adjust)
        )
    })
}

/// More contrasts than the levels have degrees of freedom.
fn too_many_contrasts(laid: &Laid) -> Option<String> {
    let (size, free) = (laid.asked.contrasts.len(), laid.study.levels.count() - 1);
    (laid.asked.family == Family::Contrasts && size > free).then(|| {
        format!(
            "{size} contrasts are more than the {free} degrees of freedom between {} levels: they cannot all be independent questions. The error rate is kept over all {size}.",
            free + 1
        )
    })
}

/// Contrasts that are multiples of one another.
fn same_question(laid: &Laid) -> Option<String> {
    let contrasts = &laid.asked.contrasts;
    if laid.asked.family != Family::Contrasts {
        return None;
    }
    let mut said = vec![false; contrasts.len()];
    let mut sets = Vec::new();
    for i in 0..contrasts.len() {
        let same: Vec<usize> = (i..contrasts.len())
            .filter(|j| !said[*j] && proportional(&contrasts[i].coefficients, &contrasts[*j].coefficients))
            .collect();
        same.iter().for_each(|j| said[*j] = true);
        if same.len() > 1 {
            let names = same.iter().map(|j| format!("\"{}\"", contrasts[*j].name));
            sets.push(format!("{} are multiples of each other and ask the same", listed(names)));
        }
    }
    (!sets.is_empty())
        .then(|| format!("{}; each counts in the family of {}.", sets.join("; "), contrasts.len()))
}

/// Whether the one is the other times a number, up to rounding.
fn proportional(one: &[f64], other: &[f64]) -> bool {
    let product = |a: &[f64], b: &[f64]| a.iter().zip(b).map(|(x, y)| x * y).sum::<f64>();
    let (lengths, inner) = (product(one, one) * product(other, other), product(one, other));
    inner * inner >= lengths * (1.0 - 1e-12)
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
