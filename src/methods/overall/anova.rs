//! The one-way F test with its table.

use super::{NoOverallTest, check_levels, finite};
use crate::numerics::distributions::fisher_f;
use crate::study::{NoEstimates, Summary};
use serde::Serialize;

/// The table of a one-way analysis of variance and its F test.
///
/// Hypothesis: all level means are equal, the observations being independent and about normal with one common
/// variance. With unequal variances *and* unequal sizes the error rate is not kept: too many rejections where the
/// small groups vary most, too few in the opposite case. [`super::WelchTest`] does without equal variances.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct AnovaTable {
    /// Observations in all.
    #[serde(skip)]
    pub n: usize,
    pub ss_between: f64,
    pub df_between: f64,
    pub ms_between: f64,
    pub ss_within: f64,
    pub df_within: f64,
    pub ms_within: f64,
    #[serde(rename = "F")]
    pub f: f64,
    pub p: f64,
}

impl AnovaTable {
    /// The F test of the groups in `summary`, named by `labels`.
    ///
    /// A level with a single observation counts for its mean. Sums of squares come from offsets and compensated
    /// sums, so that a large common level of the values costs no digits.
    ///
    /// # Errors
    /// [`NoOverallTest::NoEstimates`] for fewer than two levels, an empty level, or no variation inside the groups.
    ///
    /// # Source
    /// Fisher (1925), Statistical Methods for Research Workers; Scheffé (1959), The Analysis of Variance, chapter 3.
    pub fn of(labels: &[String], summary: &Summary) -> Result<Self, NoOverallTest> {
        check_levels(labels, summary.groups.iter().map(|group| group.n))?;
        let pooled = summary.pooled().filter(|pooled| pooled.variance > 0.0);
        let pooled = pooled.ok_or(NoEstimates::NoErrorTerm)?;
        let ss_between = finite(summary.ss_between())?;
        let df_between = summary.groups.len() as f64 - 1.0;
        let ms_between = ss_between / df_between;
        let f = finite(ms_between / finite(pooled.variance)?)?;
        Ok(Self {
            n: summary.total_n(),
            ss_between,
            df_between,
            ms_between,
            ss_within: pooled.ss,
            df_within: pooled.df,
            ms_within: pooled.variance,
            f,
            p: fisher_f::sf(f, df_between, pooled.df)?,
        })
    }

    /// Sum of squares in all.
    pub fn ss_total(&self) -> f64 {
        self.ss_between + self.ss_within
    }
}
