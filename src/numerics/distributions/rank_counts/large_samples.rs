//! The normal and chi-squared approximations to U, J and H for large samples, corrected for ties.
//!
//! J has mean (N² - Σn²)/4. With the falling products x₂ = x(x-1) and x₃ = x(x-1)(x-2), summed over the group sizes n
//! and the numbers t of observations that share a value, its variance is
//!
//! ```text
//! (N₃ - Σn₃)(N₃ - Σt₃) / (36 N₃) + (N₂ - Σn₂)(N₂ - Σt₂) / (8 N₂)
//! ```
//!
//! This is the published formula (Kendall 1970) {N(N-1)(2N+5) - Σn(n-1)(2n+5) - Σt(t-1)(2t+5)}/72 + Σn₃Σt₃/(36N₃) + Σn₂Σt₂/(8N₂)
//! with x(x-1)(2x+5) = 2x₃ + 9x₂ put in: then nothing is subtracted but whole numbers. For two groups it is
//! n₁n₂/12 [(N+1) - Σ(t³-t)/(N(N-1))].
//!
//! # References
//! 1. Kendall (1970), Rank Correlation Methods, 4th ed., section 4.5 (the variance with ties in both rankings; section from memory).
//! 2. Jonckheere (1954), Biometrika 41, 133-145; Kruskal and Wallis (1952), J. Amer. Statist. Assoc. 47, 583-621.

use super::{check_groups, check_ties};
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::{chi_squared, finite, normal};
use crate::numerics::sums::sum;

/// Most observations: the cubes of counts then fit into whole numbers of 128 bits.
const MOST: u64 = 1_000_000_000_000;

/// Whether the normal curve is read half a unit beyond the value, towards the inside of a tail that includes it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Continuity {
    /// At the value itself.
    Uncorrected,
    /// Half a unit of the statistic further in each tail, as fits a statistic of whole numbers.
    Half,
}

/// A rank statistic beside the normal distribution.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct NormalTails {
    /// Its mean under the hypothesis.
    pub mean: f64,
    /// Its variance under the hypothesis, given the ties.
    pub variance: f64,
    /// (value - mean) / √variance, without correction for continuity.
    pub z: f64,
    /// About P(statistic <= value), with the correction asked for.
    pub lower: f64,
    /// About P(statistic >= value), with the correction asked for.
    pub upper: f64,
}

impl NormalTails {
    /// Twice the smaller tail, at most 1: the two-sided p-value.
    ///
    /// # Accuracy
    /// Relative, that of the tails.
    pub fn two_sided(&self) -> f64 {
        (2.0 * self.lower.min(self.upper)).min(1.0)
    }
}

/// The normal approximation to U, the number of pairs in which the observation of the second group is the larger, tied
/// pairs counting ½, for groups of `first` and `second` observations.
///
/// `ties` tells how many observations share each distinct value, in any order; an empty list says that there are no ties.
///
/// # Errors
/// [`OutOfDomain`] if `u` is not finite, a group or a set of tied values is empty, `ties` are not together as many as the
/// observations, all observations are tied, or there are more than 1e12 of them.
///
/// # Accuracy
/// Of the approximation itself, relative error below 1e-13 down to probabilities of 1e-20: the statistic's z is exact to a
/// few units in the last place. How near the approximation is to the exact tail depends on the sizes.
///
/// # Source
/// Mann and Whitney (1947), Ann. Math. Statist. 18, 50-60; the variance with ties as in the head of this module.
pub fn rank_sum(
    u: f64,
    first: usize,
    second: usize,
    ties: &[usize],
    continuity: Continuity,
) -> Result<NormalTails, OutOfDomain> {
    beside_normal(finite("u", u)?, &[first, second], ties, continuity)
}

/// The normal approximation to J, the number of pairs from an earlier and a later group in which the later is larger, tied
/// pairs counting ½.
///
/// `ties` tells how many observations share each distinct value, in any order; an empty list says that there are no ties.
///
/// # Errors
/// [`OutOfDomain`] if `j` is not finite, there are fewer than 2 groups, a group or a set of tied values is empty, `ties`
/// are not together as many as the observations, all observations are tied, or there are more than 1e12 of them.
///
/// # Accuracy
/// Of the approximation itself, relative error below 1e-13 down to probabilities of 1e-20: the statistic's z is exact to a
/// few units in the last place. How near the approximation is to the exact tail depends on the sizes.
///
/// # Source
/// Jonckheere (1954), Biometrika 41, 133-145; the variance with ties as in the head of this module.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::rank_counts::large_samples::{self, Continuity};
/// let tails = large_samples::jonckheere(137.0, &[6, 5, 5, 4], &[], Continuity::Uncorrected)?;
/// assert!((tails.mean - 74.5).abs() < 1e-12 && tails.upper < 1e-4);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn jonckheere(
    j: f64,
    sizes: &[usize],
    ties: &[usize],
    continuity: Continuity,
) -> Result<NormalTails, OutOfDomain> {
    beside_normal(finite("j", j)?, sizes, ties, continuity)
}

fn beside_normal(
    value: f64,
    sizes: &[usize],
    ties: &[usize],
    continuity: Continuity,
) -> Result<NormalTails, OutOfDomain> {
    let total = countable(sizes)?;
    if !ties.is_empty() {
        check_ties(ties, total)?;
    }
    let (n2, groups2, ties2) = (falling(total, 2), falling_sum(sizes, 2), falling_sum(ties, 2));
    let (n3, groups3, ties3) = (falling(total, 3), falling_sum(sizes, 3), falling_sum(ties, 3));
    if n2 == ties2 {
        return Err(all_tied(total));
    }
    // Without three observations there is no n3, and nothing to divide.
    let part = |all: u128, groups: u128, ties: u128, divisor: f64| {
        if all == 0 { 0.0 } else { (all - groups) as f64 / divisor * ((all - ties) as f64 / all as f64) }
    };
    let variance = part(n3, groups3, ties3, 36.0) + part(n2, groups2, ties2, 8.0);
    // N² - Σn² = N(N-1) - Σn(n-1), twice the number of pairs.
    let mean = 0.25 * (n2 - groups2) as f64;
    let half = if continuity == Continuity::Half { 0.5 } else { 0.0 };
    let sd = variance.sqrt();
    Ok(NormalTails {
        mean,
        variance,
        z: (value - mean) / sd,
        lower: normal::lower((value - mean + half) / sd),
        upper: normal::lower((mean - value + half) / sd),
    })
}

/// Kruskal and Wallis's H beside chi-squared.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ChiSquaredTail {
    /// The statistic, divided by `tie_correction`.
    pub h: f64,
    /// 1 - Σ(t³ - t)/(N³ - N) over the sets of t tied values; 1 without ties.
    pub tie_correction: f64,
    /// Groups less 1.
    pub df: f64,
    /// About P(H at least as large).
    pub upper: f64,
}

/// H of groups with the given `mean_ranks` and `sizes`, corrected for ties, and its chi-squared approximation.
///
/// `ties` tells how many observations share each distinct value, in any order; an empty list says that there are no ties.
///
/// # Errors
/// [`OutOfDomain`] if there are fewer than 2 groups, a group or a set of tied values is empty, there are not as many mean
/// ranks as groups or one is not finite, `ties` are not together as many as the observations, all observations are tied,
/// or there are more than 1e12 of them.
///
/// # Accuracy
/// Of the approximation itself, relative error below 1e-13 down to probabilities of 1e-20: the statistic's z is exact to a
/// few units in the last place. How near the approximation is to the exact tail depends on the sizes.
///
/// # Source
/// Kruskal and Wallis (1952), J. Amer. Statist. Assoc. 47, 583-621, section 1.
pub fn kruskal_wallis(
    mean_ranks: &[f64],
    sizes: &[usize],
    ties: &[usize],
) -> Result<ChiSquaredTail, OutOfDomain> {
    let total = countable(sizes)?;
    if mean_ranks.len() != sizes.len() {
        let value = mean_ranks.len() as f64;
        return Err(OutOfDomain { argument: "number of mean ranks", value, allowed: "one for each group" });
    }
    for &rank in mean_ranks {
        finite("mean_ranks", rank)?;
    }
    if !ties.is_empty() {
        check_ties(ties, total)?;
    }
    // t³ - t = (t+1)t(t-1).
    let cubes = |count: usize| falling(count + 1, 3);
    let (all, tied) = (cubes(total), ties.iter().map(|&t| cubes(t)).sum::<u128>());
    if tied == all {
        return Err(all_tied(total));
    }
    let tie_correction = (all - tied) as f64 / all as f64;
    let n = total as f64;
    let spread = sum(mean_ranks.iter().zip(sizes).map(|(mean, &size)| {
        let deviation = mean - (n + 1.0) / 2.0;
        size as f64 * deviation * deviation
    }));
    let h = 12.0 / (n * (n + 1.0)) * spread / tie_correction;
    if !h.is_finite() {
        return Err(OutOfDomain { argument: "h", value: h, allowed: "a finite number" });
    }
    let df = sizes.len() as f64 - 1.0;
    Ok(ChiSquaredTail { h, tie_correction, df, upper: chi_squared::sf(h, df)? })
}

/// The number of observations in all, if its cube can be formed.
fn countable(sizes: &[usize]) -> Result<usize, OutOfDomain> {
    check_groups(sizes)?;
    let total = sizes.iter().fold(0_u64, |sum, &size| sum.saturating_add(size as u64));
    match usize::try_from(total) {
        Ok(countable) if total <= MOST => Ok(countable),
        _ => {
            let value = total as f64;
            Err(OutOfDomain { argument: "number of observations", value, allowed: "at most 1e12" })
        }
    }
}

fn all_tied(total: usize) -> OutOfDomain {
    OutOfDomain { argument: "ties", value: total as f64, allowed: "fewer than all observations at one value" }
}

/// count (count - 1) ..., with `factors` factors.
fn falling(count: usize, factors: usize) -> u128 {
    (0..factors).map(|i| count.saturating_sub(i) as u128).product()
}

fn falling_sum(counts: &[usize], factors: usize) -> u128 {
    counts.iter().map(|&count| falling(count, factors)).sum()
}
