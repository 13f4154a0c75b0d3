//! Comparisons by permutation: the step-down max-t procedure of Westfall and Young, made valid for every family by
//! closed testing over the partitions of the levels.
//!
//! The hypothesis of a row is that the levels with a coefficient that is not zero have one distribution. Several such
//! hypotheses together say that levels which are connected through shared rows have one distribution: a partition of the levels
//! into cells (Petrondas and Gabriel 1983). Under it every rearrangement of the observations within the cells is as likely as the
//! one observed, so that
//!
//! p(partition) = share of rearrangements whose largest t, over the rows inside cells, is at least the largest observed one
//!
//! is valid whatever the other levels are like. By the closure principle (Marcus, Peritz and Gabriel 1976) the adjusted
//! p-value of a row is the largest p of the partitions that have its levels in one cell, and the probability of any false rejection is
//! at most alpha. Rearranging over all groups at once (the "global" permutation) has no such warranty: groups that differ mix their
//! values into the rows that do not.
//!
//! t has the error term of the study, computed anew for every rearrangement: pooled over all groups, or Welch's of the row. It
//! decides the power, not the validity: the hypothesis is of equal distributions, and unequal spread alone may reject it.
//!
//! # References
//! 1. Westfall and Young (1993), Resampling-Based Multiple Testing, chapters 2 and 5.
//! 2. Petrondas and Gabriel (1983), J. Amer. Statist. Assoc. 78, 949-957: rearrangements and partitions.
//! 3. Marcus, Peritz and Gabriel (1976), Biometrika 63, 655-660, doi 10.1093/biomet/63.3.655: closed testing.
//! 4. Phipson and Smyth (2010), Statist. Appl. Genet. Mol. Biol. 9, 39, doi 10.2202/1544-6115.1585: (b + 1) / (B + 1).

mod partitions;
mod rearranged;
mod work;

pub use work::PermutationWork;

use super::Sides;
use crate::study::{NoEstimates, Variances};
use serde::Serialize;

/// All rearrangements of a partition are counted when they are no more than would be drawn, or when counting looks at no more
/// observations than this: two groups of 10 (184,756 rearrangements of 20) take some 20 ms.
pub const MOST_LOOKS: f64 = 4e6;
/// Most partitions that closed testing goes through: all pairs of up to 7 levels have 876, a control with 10 others 1023.
pub const MOST_PARTITIONS: usize = 1024;
/// Most rearrangements that are drawn for a partition.
pub const MOST_REPEATS: u64 = 10_000_000;

/// What is compared by permutation.
#[derive(Debug, Clone, Copy)]
pub struct PermutationRequest<'a> {
    /// One a level.
    pub labels: &'a [String],
    /// The values of each level, as offsets from a common origin.
    pub groups: &'a [Vec<f64>],
    /// The coefficients of each row, one a level; the whole family.
    pub rows: &'a [Vec<f64>],
    pub sides: Sides,
    pub variances: Variances,
    /// How many rearrangements are drawn where they are too many to be counted.
    pub repeats: u64,
    pub seed: u64,
    pub closure: Closure,
}

/// Whether the rows are adjusted for one another.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Closure {
    /// Closed testing over the partitions.
    Closed,
    /// Each row by itself: p-values for a procedure that adjusts p-values, such as Holm's. For families of any size.
    Raw,
}

/// The share of rearrangements that are at least as extreme as the observed one.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Share {
    /// Never 0, since the observed arrangement counts: b / B where all B are counted, else (b + 1) / (B + 1).
    pub p: f64,
    /// Of p, from the drawing: √(p (1 - p) / B); 0 where all are counted.
    pub standard_error: f64,
    /// Whether all rearrangements were counted.
    pub exact: bool,
    /// How many there are, tied values told apart; infinite beyond 1e300.
    pub arrangements: f64,
}

/// One comparison.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct PermutationRow {
    /// By itself: the values of its own levels rearranged.
    pub raw: Share,
    /// Of the partition that decides; never below the raw one. `None` where the rows are not adjusted for one another.
    pub adjusted: Option<Share>,
}

/// A family compared by permutation.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct PermutationComparisons {
    /// In the order of the rows asked for.
    pub rows: Vec<PermutationRow>,
    /// Rearrangements drawn for each partition that has too many to be counted.
    pub repeats: u64,
    /// Different sets of cells within which values were rearranged.
    pub partitions: usize,
}

/// Why a family is not compared by permutation.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoPermutation {
    #[error(transparent)]
    NoEstimates(#[from] NoEstimates),
    #[error("there is nothing to compare: the family is empty")]
    Empty,
    #[error("all values are equal, so no rearrangement differs from the observed one")]
    AllEqual,
    #[error(
        "the coefficients of comparison {row} are no contrast: they must be one a level, sum to zero, and differ from zero for at least two"
    )]
    NoContrast {
        /// Counted from 1.
        row: usize,
    },
    #[error("the number of rearrangements to draw is {repeats}, but must be from 1 to {MOST_REPEATS}")]
    Repeats { repeats: u64 },
    #[error(
        "the family makes {} partitions of the levels to be tested, and at most {MOST_PARTITIONS} are gone through. Holm's adjustment of the permutation p-value of each comparison by itself holds for any family",
        how_many(*partitions)
    )]
    TooManyPartitions {
        /// `None` beyond 5000.
        partitions: Option<usize>,
    },
}

fn how_many(partitions: Option<usize>) -> String {
    partitions.map_or_else(|| format!("more than {COUNTED}"), |count| count.to_string())
}

/// Partitions are counted as far as this, to say how many are too many.
const COUNTED: usize = 5000;
