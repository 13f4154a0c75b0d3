//! Every observed value, by level.

use super::{GroupSummary, Summary};
use crate::numerics::sums;

/// Observed values by level, as offsets from a common origin: value = `origin` + offset.
///
/// The offsets come from exact decimals, so that all work that does not depend on location (sums of squares,
/// differences, tests) is free of the rounding that large leading digits would bring.
#[derive(Debug, Clone, PartialEq)]
pub struct Sample {
    pub origin: f64,
    /// One vector a level, in the order of the study's levels; finite numbers only.
    pub groups: Vec<Vec<f64>>,
}

impl Sample {
    /// Sizes, means and variances: the two-pass formula on compensated sums.
    pub fn summary(&self) -> Summary {
        let groups = self.groups.iter().map(|offsets| describe(offsets)).collect();
        Summary { origin: self.origin, groups }
    }

    /// Residuals from the group means, in the order of the groups.
    pub fn residuals(&self) -> Vec<f64> {
        let summary = self.summary();
        let pairs = self.groups.iter().zip(&summary.groups);
        pairs.flat_map(|(values, group)| values.iter().map(|value| value - group.mean)).collect()
    }
}

fn describe(offsets: &[f64]) -> GroupSummary {
    let n = offsets.len();
    if n == 0 {
        return GroupSummary { n, mean: 0.0, variance: None };
    }
    // The mean of equal values is that value, not its neighbour: else rounding would pass for variation.
    if offsets.iter().all(|x| *x == offsets[0]) {
        return GroupSummary { n, mean: offsets[0], variance: (n > 1).then_some(0.0) };
    }
    let mean = sums::sum(offsets.iter().copied()) / n as f64;
    // The correction term removes what the rounding of the mean leaves behind (Chan, Golub, LeVeque 1983, eq. 1.7).
    let squares = sums::sum(offsets.iter().map(|x| (x - mean) * (x - mean)));
    let left = sums::sum(offsets.iter().map(|x| x - mean));
    // Beyond the range of numbers it is infinite, never 0 by the way of NaN.
    let corrected =
        if squares.is_finite() { (squares - left * left / n as f64).max(0.0) } else { f64::INFINITY };
    let variance = (n > 1).then(|| corrected / (n - 1) as f64);
    GroupSummary { n, mean, variance }
}
