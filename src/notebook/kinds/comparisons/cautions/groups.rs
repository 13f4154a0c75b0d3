//! What the groups call for: their sizes and spreads beside the procedure.

use super::super::decided::Laid;
use super::super::words;
use crate::answer::number;
use crate::methods::multiplicity::{Adjust, Basis, ComparisonRow, Ranking, ranks};
use crate::notebook::kinds::wording::listed;
use crate::study::Variances;

/// Below this group size the procedures for unequal variances and for ranks deserve a word. Measured at 5 %, all levels alike
/// (tests/benches/ERROR_RATES.md): with n = 3, 5, 8, 12 and the largest spread in the smallest group Games-Howell 8.5 %,
/// T3 7.3 %, C 4.6 %; with n = 5, 10, 15, 20 5.8, 4.9 and 3.9 %; Steel-Dwass 0.0 % with n = 4 and 2.1 % with n = 6.
const SMALL: usize = 6;

/// From this size on Dunnett's T3 keeps its rate; below, only his C was seen to.
const ENOUGH_FOR_T3: usize = 5;

/// A ratio of standard deviations from which pooling them deserves a word.
const RATIO: f64 = 2.0;

/// Levels whose spread is that of the others, because their own values show none.
pub fn borrowed_spread(laid: &Laid) -> Option<String> {
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

pub fn pooled_spread(laid: &Laid) -> Option<String> {
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

pub fn small_groups(laid: &Laid) -> Option<String> {
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
pub fn out_of_reach(laid: &Laid) -> Option<String> {
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
pub fn unequal_steps(laid: &Laid) -> Option<String> {
    let n = laid.n();
    let stepwise = matches!(laid.comparisons.adjust, Adjust::RyanEinotGabrielWelsch | Adjust::NewmanKeuls);
    (stepwise && n.windows(2).any(|pair| pair[0] != pair[1])).then(|| {
        format!(
            "{} is made for equal group sizes; with unequal ones its error rate is not proven. The step-down max-t procedure holds for any sizes.",
            words::procedure(laid.comparisons.adjust)
        )
    })
}
