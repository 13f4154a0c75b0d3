//! What rearrangements can show at all: no p-value is below the share of one arrangement.

use super::decided::Laid;
use crate::answer::number;
use crate::methods::multiplicity::{Adjust, Basis, ComparisonRow, Rearranged, Sides, p_values};

/// Beyond this many values the arrangements of two levels are too many to be any limit.
const MANY: usize = 60;

/// That no comparison could be shown, whatever the values: too few arrangements, or too few drawn for so large a family.
pub fn caution(laid: &Laid) -> Option<String> {
    let result = laid.comparisons;
    let rearranged = result.rearranged.as_ref().filter(|_| result.basis == Basis::Permutation)?;
    let floors: Vec<f64> = result.rows.iter().map(|row| floor(laid, row, rearranged)).collect();
    let best = match result.adjust {
        Adjust::PValues(method) => p_values::adjusted(&floors, method),
        _ => floors.clone(),
    };
    let (at, smallest) = best.iter().enumerate().min_by(|one, other| one.1.total_cmp(other.1))?;
    if *smallest <= result.alpha {
        return None;
    }
    let shown = number::p_value(*smallest);
    let opening = "No values could show anything here:";
    if result.rows.iter().any(|row| !row.p_counted) {
        let drawn = number::count(rearranged.repeats as usize);
        // Each adjustment multiplies p by at most the size of the family.
        let enough = number::count((result.family_size as f64 / result.alpha).ceil() as usize);
        return Some(format!(
            "{opening} with {drawn} repeats the smallest adjusted p is {shown}. Set repeats to {enough} or more."
        ));
    }
    let sizes: Vec<String> = compared(laid, &result.rows[at]).into_iter().map(number::count).collect();
    Some(format!("{opening} the smallest adjusted p that {} values allow is {shown}.", sizes.join(" and ")))
}

/// The sizes of the levels that the row compares.
fn compared(laid: &Laid, row: &ComparisonRow) -> Vec<usize> {
    let n = laid.n();
    (0..n.len()).filter(|i| row.coefficients[*i] != 0.0).map(|i| n[i]).collect()
}

/// No p-value of the row can be below this; 0 where that is not known.
fn floor(laid: &Laid, row: &ComparisonRow, rearranged: &Rearranged) -> f64 {
    if !row.p_counted {
        // (b + 1) / (B + 1) with b = 0; see `methods::multiplicity::permutation`.
        return 1.0 / (rearranged.repeats as f64 + 1.0);
    }
    let sizes = compared(laid, row);
    let &[first, second] = sizes.as_slice() else { return 0.0 };
    if first + second > MANY {
        return 0.0;
    }
    // With equal sizes the two levels can change places, which is as extreme to the other side.
    let twin = laid.comparisons.sides == Sides::Both && first == second;
    let least = first.min(second);
    let arrangements =
        (1..=least).fold(1.0, |product, i| product * (first + second - least + i) as f64 / i as f64);
    if twin { 2.0 / arrangements } else { 1.0 / arrangements }
}
