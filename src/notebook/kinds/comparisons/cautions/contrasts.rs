//! What the contrasts call for: too many of them, or the same question twice.

use super::super::decided::Laid;
use crate::methods::multiplicity::Family;
use crate::notebook::kinds::wording::listed;

/// More contrasts than the levels have degrees of freedom.
pub fn too_many_contrasts(laid: &Laid) -> Option<String> {
    let (size, free) = (laid.asked.contrasts.len(), laid.study.levels.count() - 1);
    (laid.asked.family == Family::Contrasts && size > free).then(|| {
        format!(
            "{size} contrasts are more than the {free} degrees of freedom between {} levels: they cannot all be independent questions. The error rate is kept over all {size}.",
            free + 1
        )
    })
}

/// Contrasts that are multiples of one another.
pub fn same_question(laid: &Laid) -> Option<String> {
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
