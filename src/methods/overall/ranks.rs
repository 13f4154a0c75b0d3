//! The Kruskal-Wallis test on joint ranks.

use super::{NoOverallTest, check_levels};
use crate::methods::effect_size::rank_epsilon_squared;
use crate::numerics::distributions::rank_counts::{self, large_samples, large_samples::ChiSquaredTail};
use crate::study::Sample;
use serde::Serialize;

/// The Kruskal-Wallis test, corrected for ties: exact where the arrangements can be counted, else for large samples.
///
/// Hypothesis: the groups come from one distribution. It is a test of equal medians only if the distributions
/// have the same shape.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct KruskalWallis {
    /// The statistic, divided by `tie_correction`.
    #[serde(rename = "H")]
    pub h: f64,
    /// Levels less 1.
    pub df: f64,
    /// P(H at least as large as observed): `p_exact` where it is known, else `p_chi_squared`.
    pub p: f64,
    /// Whether `p` is exact.
    pub exact: bool,
    /// From chi-squared on `df`: asymptotic, rough where groups are smaller than about five.
    pub p_chi_squared: f64,
    /// 1 - Σ(t³ - t)/(N³ - N) over the sets of t tied values; 1 without ties.
    pub tie_correction: f64,
    /// H / (N - 1).
    pub epsilon_squared: f64,
    /// Mean rank of each level, in the order of the levels.
    pub mean_ranks: Vec<f64>,
}

impl KruskalWallis {
    /// The test of the values in `sample`, the levels being named by `labels`.
    ///
    /// # Errors
    /// [`NoOverallTest::NoEstimates`] for fewer than two levels or an empty level, [`NoOverallTest::AllTied`] if
    /// all values are equal.
    ///
    /// # Accuracy
    /// The exact p-value counts every way of dealing the observed (mid)ranks out to the groups, each equally likely
    /// under the hypothesis, within the limits of [`rank_counts::kruskal_wallis`].
    ///
    /// # Source
    /// Kruskal and Wallis (1952), J. Amer. Statist. Assoc. 47, 583–621, doi 10.1080/01621459.1952.10483441.
    pub fn of(labels: &[String], sample: &Sample) -> Result<Self, NoOverallTest> {
        check_levels(labels, sample.groups.iter().map(Vec::len))?;
        let (ranks, ties) = midranks(&sample.groups);
        if ties.len() == 1 {
            return Err(NoOverallTest::AllTied);
        }
        let mean_ranks: Vec<f64> =
            ranks.iter().map(|ranks| ranks.iter().sum::<f64>() / ranks.len() as f64).collect();
        let sizes: Vec<usize> = ranks.iter().map(Vec::len).collect();
        let ChiSquaredTail { h, tie_correction, df, upper: p_chi_squared } =
            large_samples::kruskal_wallis(&mean_ranks, &sizes, &ties)?;
        let epsilon_squared = rank_epsilon_squared(h, sizes.iter().sum());
        let counted = exact_p(&ranks);
        Ok(Self {
            h,
            df,
            p: counted.unwrap_or(p_chi_squared),
            exact: counted.is_some(),
            p_chi_squared,
            tie_correction,
            epsilon_squared,
            mean_ranks,
        })
    }
}

/// The exact p-value of these midranks; `None` beyond the limits of counting.
fn exact_p(ranks: &[Vec<f64>]) -> Option<f64> {
    let sizes: Vec<usize> = ranks.iter().map(Vec::len).collect();
    if sizes.iter().sum::<usize>() > rank_counts::MOST_OBSERVATIONS {
        return None;
    }
    // Twice a midrank is whole.
    let doubled: Vec<Vec<u32>> =
        ranks.iter().map(|ranks| ranks.iter().map(|rank| (2.0 * rank) as u32).collect()).collect();
    let sums: Vec<u32> = doubled.iter().map(|ranks| ranks.iter().sum()).collect();
    rank_counts::kruskal_wallis(&doubled.concat(), &sizes, &sums).ok()
}

/// Ranks of all values together, in the shape of `groups`, tied values sharing their mean rank; and how many values share
/// each distinct value, in ascending order.
pub fn midranks(groups: &[Vec<f64>]) -> (Vec<Vec<f64>>, Vec<usize>) {
    let mut order: Vec<(f64, usize, usize)> = Vec::new();
    for (level, values) in groups.iter().enumerate() {
        order.extend(values.iter().enumerate().map(|(place, value)| (*value, level, place)));
    }
    order.sort_by(|one, other| one.0.total_cmp(&other.0));
    let mut ranks: Vec<Vec<f64>> = groups.iter().map(|values| vec![0.0; values.len()]).collect();
    let (mut ties, mut before) = (Vec::new(), 0);
    // The == of numbers decides a tie, so that 0 and -0 share their rank.
    for run in order.chunk_by(|one, other| one.0 == other.0) {
        for &(_, level, place) in run {
            ranks[level][place] = before as f64 + (run.len() as f64 + 1.0) / 2.0;
        }
        ties.push(run.len());
        before += run.len();
    }
    (ranks, ties)
}
