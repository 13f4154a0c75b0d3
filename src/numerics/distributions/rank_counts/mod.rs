//! Null distributions of rank statistics: the rank-sum statistic U of Mann and Whitney, Jonckheere and Terpstra's J (U with
//! more groups), and Kruskal and Wallis's H. Exact by counting within stated limits, with and without ties; beyond them the
//! normal and chi-squared approximations with the correction for ties, in [`large_samples`].
//!
//! U is the number of pairs of an observation of the first and one of the second group in which the second is larger, a
//! tied pair counting ½; J is the same over all pairs of an earlier and a later group. Under the hypothesis every way of
//! dealing the observations out to the groups is equally likely, given which of them are tied.
//!
//! | statistic | ties | method | limit | at the limit |
//! | --- | --- | --- | --- | --- |
//! | U, J | none | recurrence and convolution (`untied`) | [`MOST_PAIRS`] pairs from different groups | 0.02 s |
//! | U, J | any | one set of tied values after the other (`tied`) | and [`MOST_ADDITIONS`] additions | 0.15 s (17 groups of 1; 0.03 s for 100 and 100) |
//! | H | any | one rank after the other (`kruskal_wallis`) | [`MOST_ARRANGEMENTS`] arrangements, [`MOST_OBSERVATIONS`] observations | 0.8 s (8 groups), 0.2 s for up to 5 |
//!
//! (Measured natively, release build, one thread.)
//!
//! All terms are positive, so that the smallest probabilities keep their digits.
//!
//! # References
//! 1. Mann and Whitney (1947), Ann. Math. Statist. 18, 50-60, eq. (6) (the recurrence).
//! 2. Jonckheere (1954), Biometrika 41, 133-145, doi 10.1093/biomet/41.1-2.133; Terpstra (1952), Indag. Math. 14, 327-333.
//! 3. Kruskal and Wallis (1952), J. Amer. Statist. Assoc. 47, 583-621, doi 10.1080/01621459.1952.10483441.
//! 4. Lancaster (1961), J. Amer. Statist. Assoc. 56, 223-234 (half the point in each tail).

mod kruskal_wallis;
pub mod large_samples;
mod tied;
mod untied;

pub use kruskal_wallis::{MOST_ARRANGEMENTS, MOST_OBSERVATIONS, kruskal_wallis};
pub use tied::{MOST_ADDITIONS, jonckheere_with_ties, rank_sum_with_ties};
pub use untied::{jonckheere, rank_sum};

use crate::numerics::OutOfDomain;
use crate::numerics::sums::sum;

/// Most pairs of observations from different groups for which U and J are counted: two groups of 100, say.
pub const MOST_PAIRS: usize = 10_000;

/// Both tails of a discrete statistic, the value itself counted in each: `lower + upper - point` is 1.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct InclusiveTails {
    /// P(statistic <= value)
    pub lower: f64,
    /// P(statistic >= value)
    pub upper: f64,
    /// P(statistic = value); 0 for a value that the statistic cannot take.
    pub point: f64,
}

impl InclusiveTails {
    /// Twice the smaller tail, at most 1: the two-sided p-value.
    ///
    /// # Accuracy
    /// Relative, that of the tails.
    pub fn two_sided(&self) -> f64 {
        (2.0 * self.lower.min(self.upper)).min(1.0)
    }

    /// The lower tail with half the point (Lancaster 1961); with [`InclusiveTails::mid_upper`] it makes 1.
    ///
    /// # Accuracy
    /// Relative, that of the tails: at least half the tail is left.
    pub fn mid_lower(&self) -> f64 {
        self.lower - 0.5 * self.point
    }

    /// The upper tail with half the point.
    ///
    /// # Accuracy
    /// As for [`InclusiveTails::mid_lower`].
    pub fn mid_upper(&self) -> f64 {
        self.upper - 0.5 * self.point
    }
}

/// The tails at `value` of a statistic whose possible values 0, `step`, 2 `step`, ... have the given probabilities.
fn tails(probabilities: &[f64], step: f64, value: f64) -> InclusiveTails {
    let total = |keep: &dyn Fn(f64) -> bool| -> f64 {
        let kept = probabilities.iter().enumerate().filter(|(index, _)| keep(step * *index as f64));
        sum(kept.map(|(_, p)| *p)).min(1.0)
    };
    InclusiveTails {
        lower: total(&|possible| possible <= value),
        upper: total(&|possible| possible >= value),
        point: total(&|possible| possible == value),
    }
}

/// Refuses fewer than two groups and groups without observations.
fn check_groups(sizes: &[usize]) -> Result<(), OutOfDomain> {
    if sizes.len() < 2 {
        return Err(OutOfDomain {
            argument: "number of groups",
            value: sizes.len() as f64,
            allowed: "at least 2",
        });
    }
    if sizes.contains(&0) {
        return Err(OutOfDomain { argument: "sizes", value: 0.0, allowed: "at least 1" });
    }
    Ok(())
}

/// Pairs of observations from different groups, if U and J are counted for so many.
fn countable_pairs(sizes: &[usize]) -> Result<usize, OutOfDomain> {
    check_groups(sizes)?;
    let (mut pairs, mut before) = (0_usize, 0_usize);
    for &size in sizes {
        pairs = pairs.saturating_add(before.saturating_mul(size));
        before = before.saturating_add(size);
    }
    if pairs > MOST_PAIRS {
        let allowed = "at most 10000 for an exact count";
        return Err(OutOfDomain { argument: "number of pairs", value: pairs as f64, allowed });
    }
    Ok(pairs)
}

/// Refuses sets of tied values that are empty or together not `total` observations.
fn check_ties(ties: &[usize], total: usize) -> Result<(), OutOfDomain> {
    if ties.contains(&0) {
        return Err(OutOfDomain { argument: "ties", value: 0.0, allowed: "at least 1" });
    }
    let tied = ties.iter().fold(0_usize, |sum, &t| sum.saturating_add(t));
    if tied != total {
        let allowed = "together as many as the observations in all groups";
        return Err(OutOfDomain { argument: "ties", value: tied as f64, allowed });
    }
    Ok(())
}
