//! Size, mean and variance of each level: all that the mean-based methods need.

use crate::numerics::sums;

/// One level. A group without observations has `n` 0 and mean 0.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct GroupSummary {
    pub n: usize,
    /// Mean as an offset from the summary's origin.
    pub mean: f64,
    /// Variance with divisor n - 1; `None` for fewer than two observations.
    pub variance: Option<f64>,
}

impl GroupSummary {
    /// Standard deviation; `None` for fewer than two observations.
    pub fn sd(&self) -> Option<f64> {
        self.variance.map(f64::sqrt)
    }
}

/// All levels, with means as offsets from `origin`.
#[derive(Debug, Clone, PartialEq)]
pub struct Summary {
    pub origin: f64,
    pub groups: Vec<GroupSummary>,
}

/// The variance inside the groups, pooled over all of them.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pooled {
    /// Mean square within: `ss / df`.
    pub variance: f64,
    /// Observations less groups that have any.
    pub df: f64,
    /// Sum of squares within.
    pub ss: f64,
}

impl Summary {
    /// Observations in all.
    pub fn total_n(&self) -> usize {
        self.groups.iter().map(|group| group.n).sum()
    }

    /// Mean of all observations, as an offset from the origin.
    pub fn grand_mean(&self) -> f64 {
        sums::sum(self.groups.iter().map(|group| group.n as f64 * group.mean)) / self.total_n() as f64
    }

    /// Sum of squares between the groups.
    pub fn ss_between(&self) -> f64 {
        let centre = self.grand_mean();
        sums::sum(self.groups.iter().map(|group| {
            let deviation = group.mean - centre;
            group.n as f64 * deviation * deviation
        }))
    }

    /// The pooled variance; `None` when no group has two observations.
    pub fn pooled(&self) -> Option<Pooled> {
        let parts = self.groups.iter().filter_map(|group| Some((group.n as f64 - 1.0, group.variance?)));
        let df: f64 = parts.clone().map(|(df, _)| df).sum();
        let ss = sums::sum(parts.map(|(df, variance)| df * variance));
        (df > 0.0).then(|| Pooled { variance: ss / df, df, ss })
    }
}
