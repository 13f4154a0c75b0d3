//! Adjustments that need nothing but the p-values, for a family of `m` hypotheses.
//!
//! Two readings of one decision: the adjusted p-value against alpha itself, or the raw p-value against the
//! per-comparison alpha. A hypothesis is rejected exactly when `adjusted <= alpha`, and then its raw p-value is at
//! most its per-comparison alpha; never both corrections at once.
//!
//! | method | controls | needs |
//! | --- | --- | --- |
//! | Bonferroni, Holm (1979) | family-wise error | nothing |
//! | Šidák (1967), Holm-Šidák | family-wise error | independence or positive orthant dependence |
//! | Hochberg (1988), Hommel (1988) | family-wise error | Simes' inequality (positive dependence) |
//! | Benjamini-Hochberg (1995) | false discovery rate | independence or positive regression dependence |
//! | Benjamini-Yekutieli (2001) | false discovery rate | nothing |

use serde::Serialize;

/// A way to adjust p-values by themselves.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
pub enum PValueMethod {
    None,
    Bonferroni,
    Sidak,
    Holm,
    HolmSidak,
    Hochberg,
    Hommel,
    BenjaminiHochberg,
    BenjaminiYekutieli,
}

/// The adjusted p-values, in the order of `p`: each the smallest level at which the whole procedure rejects.
///
/// Values are at least the raw ones, at most 1, and in the same order.
///
/// # Source
/// methods as in the table above; Hommel by Wright (1992), Biometrics 48, 1005–1013.
pub fn adjusted(p: &[f64], method: PValueMethod) -> Vec<f64> {
    let m = p.len() as f64;
    match method {
        PValueMethod::None => p.to_vec(),
        PValueMethod::Bonferroni => p.iter().map(|p| (m * p).min(1.0)).collect(),
        PValueMethod::Sidak => p.iter().map(|p| sidak(*p, m)).collect(),
        PValueMethod::Holm => step_down(p, |p, left| (left * p).min(1.0)),
        PValueMethod::HolmSidak => step_down(p, sidak),
        PValueMethod::Hochberg => step_up(p, |p, rank| (m - rank + 1.0) * p),
        PValueMethod::Hommel => hommel(p),
        PValueMethod::BenjaminiHochberg => step_up(p, |p, rank| m / rank * p),
        PValueMethod::BenjaminiYekutieli => step_up(p, |p, rank| harmonic(m as usize) * m / rank * p),
    }
}

/// The per-comparison alpha of each hypothesis, in the order of `p`: a raw p-value at most this large is rejected.
///
/// For stepwise methods it is the level at which the hypothesis was judged: a step-down method stops at its first
/// failure, and all that come later are held to the level of that step; a step-up method rejects all that come
/// before its first success at the level of that step. `None` for Hommel's method, which has no such levels.
pub fn alpha_per_comparison(p: &[f64], method: PValueMethod, alpha: f64) -> Option<Vec<f64>> {
    let levels = levels_by_rank(p.len(), method, alpha)?;
    let adjusted = adjusted(p, method);
    let order = ascending(p);
    let judged_at = match method {
        PValueMethod::Holm | PValueMethod::HolmSidak => {
            let failed = order.iter().position(|i| adjusted[*i] > alpha).unwrap_or(p.len());
            by_rank(&order, |rank| levels[rank.min(failed)])
        }
        PValueMethod::Hochberg | PValueMethod::BenjaminiHochberg | PValueMethod::BenjaminiYekutieli => {
            let succeeded = order.iter().rposition(|i| adjusted[*i] <= alpha).unwrap_or(0);
            by_rank(&order, |rank| levels[rank.max(succeeded)])
        }
        _ => levels,
    };
    Some(judged_at)
}

/// The levels that `m` p-values will be judged at, from the smallest p-value to the largest, before they are known;
/// `None` for Hommel's method, which has no such levels.
pub fn levels_by_rank(m: usize, method: PValueMethod, alpha: f64) -> Option<Vec<f64>> {
    let size = m as f64;
    let level = |rank: f64| match method {
        PValueMethod::None => Some(alpha),
        PValueMethod::Bonferroni => Some(alpha / size),
        PValueMethod::Sidak => Some(sidak_level(alpha, size)),
        PValueMethod::Holm | PValueMethod::Hochberg => Some(alpha / (size - rank + 1.0)),
        PValueMethod::HolmSidak => Some(sidak_level(alpha, size - rank + 1.0)),
        PValueMethod::BenjaminiHochberg => Some(alpha * rank / size),
        PValueMethod::BenjaminiYekutieli => Some(alpha * rank / (size * harmonic(m))),
        PValueMethod::Hommel => None,
    };
    (1..=m).map(|rank| level(rank as f64)).collect()
}

/// 1 - (1 - p)^m without the loss of small p, and never below p by rounding.
pub fn sidak(p: f64, m: f64) -> f64 {
    if p >= 1.0 { 1.0 } else { (-libm::expm1(m * libm::log1p(-p))).max(p) }
}

/// 1 - (1 - alpha)^(1/m): the level per comparison.
pub fn sidak_level(alpha: f64, m: f64) -> f64 {
    -libm::expm1(libm::log1p(-alpha) / m)
}

fn harmonic(m: usize) -> f64 {
    (1..=m).rev().map(|i| 1.0 / i as f64).sum()
}

/// Positions of `p` from the smallest to the largest; ties in the given order.
fn ascending(p: &[f64]) -> Vec<usize> {
    let mut order: Vec<usize> = (0..p.len()).collect();
    order.sort_by(|i, j| p[*i].total_cmp(&p[*j]));
    order
}

/// Running maximum from the smallest p upwards of `one(p, hypotheses not yet tested)`.
fn step_down(p: &[f64], one: impl Fn(f64, f64) -> f64) -> Vec<f64> {
    let mut result = vec![0.0; p.len()];
    let mut so_far = 0.0_f64;
    for (rank, i) in ascending(p).into_iter().enumerate() {
        so_far = so_far.max(one(p[i], (p.len() - rank) as f64)).max(p[i]);
        result[i] = so_far;
    }
    result
}

/// Running minimum from the largest p downwards of `one(p, rank from 1)`.
fn step_up(p: &[f64], one: impl Fn(f64, f64) -> f64) -> Vec<f64> {
    let mut result = vec![0.0; p.len()];
    let mut so_far = 1.0_f64;
    for (rank, i) in ascending(p).into_iter().enumerate().rev() {
        so_far = so_far.min(one(p[i], (rank + 1) as f64));
        result[i] = so_far.max(p[i]);
    }
    result
}

/// Wright (1992): the closed test with Simes' inequality for every intersection.
fn hommel(p: &[f64]) -> Vec<f64> {
    let m = p.len();
    let order = ascending(p);
    let sorted: Vec<f64> = order.iter().map(|i| p[*i]).collect();
    let simes = (1..=m).map(|j| m as f64 * sorted[j - 1] / j as f64).fold(1.0, f64::min);
    let mut best = vec![simes; m];
    for size in (2..m).rev() {
        let upper = size as f64;
        let c =
            (1..size).map(|j| upper * sorted[m - size + j] / (j as f64 + 1.0)).fold(f64::INFINITY, f64::min);
        let split = m - size + 1;
        let last = (upper * sorted[split - 1]).min(c);
        for (i, best) in best.iter_mut().enumerate() {
            let level = if i < split { (upper * sorted[i]).min(c) } else { last };
            *best = best.max(level);
        }
    }
    let mut result = vec![0.0; m];
    order.iter().enumerate().for_each(|(rank, i)| result[*i] = best[rank].max(p[*i]).min(1.0));
    result
}

/// `value` of each hypothesis by its rank from 0.
fn by_rank(order: &[usize], value: impl Fn(usize) -> f64) -> Vec<f64> {
    let mut result = vec![0.0; order.len()];
    order.iter().enumerate().for_each(|(rank, i)| result[*i] = value(rank));
    result
}

#[cfg(test)]
mod tests {
    use super::*;
    use PValueMethod as M;

    #[test]
    fn the_empty_family_and_the_single_hypothesis_are_left_alone() {
        for method in [M::None, M::Bonferroni, M::Sidak, M::Holm, M::HolmSidak, M::Hochberg, M::Hommel] {
            assert_eq!(adjusted(&[], method), Vec::<f64>::new());
            assert!((adjusted(&[0.03], method)[0] - 0.03).abs() < 1e-16, "{method:?}");
        }
        for p in [0.0, 1.0] {
            assert_eq!(adjusted(&[p, p, p], M::Sidak), [p, p, p]);
            assert_eq!(adjusted(&[p, p, p], M::BenjaminiYekutieli), [p, p, p]);
        }
    }

    #[test]
    fn sidak_keeps_tiny_p_values() {
        assert!((adjusted(&[1e-300, 0.5], M::Sidak)[0] / 2e-300 - 1.0).abs() < 1e-15);
    }
}
