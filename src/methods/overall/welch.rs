//! Welch's test of equal means without equal variances.

use super::{NoOverallTest, check_levels, finite};
use crate::numerics::distributions::fisher_f;
use crate::numerics::sums::sum;
use crate::study::{NoEstimates, Summary};
use serde::Serialize;

/// Welch's F test: all level means are equal, whatever the variances.
///
/// Groups weigh by w = n/s². Approximate: good from about six observations a group. For two levels F is the
/// square of Welch's t.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct WelchTest {
    #[serde(rename = "F")]
    pub f: f64,
    /// Levels less 1.
    pub df1: f64,
    /// Approximate df of the denominator, rarely a whole number.
    pub df2: f64,
    pub p: f64,
}

impl WelchTest {
    /// Welch's test of the groups in `summary`, named by `labels`.
    ///
    /// # Errors
    /// [`NoOverallTest::NoEstimates`] for fewer than two levels, an empty level, a level with one observation or
    /// without variation of its own: its weight would be unknown or infinite. Or values whose squares leave the
    /// range of numbers.
    ///
    /// # Source
    /// Welch (1951), Biometrika 38, 330–336, doi 10.1093/biomet/38.3-4.330; for using it by default Delacre et al.
    /// (2019), doi 10.5334/irsp.198.
    pub fn of(labels: &[String], summary: &Summary) -> Result<Self, NoOverallTest> {
        check_levels(labels, summary.groups.iter().map(|group| group.n))?;
        let weights = weights(labels, summary)?;
        let groups = &summary.groups;
        let k = groups.len() as f64;
        let total = finite(sum(weights.iter().copied()))?;
        let centre = sum(weights.iter().zip(groups).map(|(w, group)| w / total * group.mean));
        let between = sum(weights.iter().zip(groups).map(|(w, group)| {
            let deviation = group.mean - centre;
            w * deviation * deviation
        }));
        let imbalance = sum(weights.iter().zip(groups).map(|(w, group)| {
            let rest = 1.0 - w / total;
            rest * rest / (group.n as f64 - 1.0)
        }));
        let f = finite(between / (k - 1.0) / (1.0 + 2.0 * (k - 2.0) * imbalance / (k * k - 1.0)))?;
        let (df1, df2) = (k - 1.0, finite((k * k - 1.0) / (3.0 * imbalance))?);
        Ok(Self { f, df1, df2, p: fisher_f::sf(f, df1, df2)? })
    }
}

/// n/s² of each level.
fn weights(labels: &[String], summary: &Summary) -> Result<Vec<f64>, NoEstimates> {
    let groups = &summary.groups;
    if groups.iter().all(|group| group.variance.is_none_or(|variance| variance == 0.0)) {
        return Err(NoEstimates::NoErrorTerm);
    }
    let weights = groups.iter().zip(labels).map(|(group, label)| match group.variance {
        None => Err(NoEstimates::SingleObservation { level: label.clone() }),
        Some(0.0) => Err(NoEstimates::NoVariation { level: label.clone() }),
        Some(variance) if !variance.is_finite() => Err(NoEstimates::OutOfRange),
        Some(variance) => Ok(group.n as f64 / variance),
    });
    weights.collect()
}
