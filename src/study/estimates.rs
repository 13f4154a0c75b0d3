//! The joint that every comparison starts from: estimated means, their covariance, and degrees of freedom.

use super::{Summary, Variances};
use nalgebra::DMatrix;

/// Degrees of freedom of the variances in an [`Estimates`].
#[derive(Debug, Clone, PartialEq)]
pub enum DegreesOfFreedom {
    /// One error term for all.
    Common(f64),
    /// Independent means with a variance each: a contrast's df follow from Satterthwaite (1946).
    PerMean(Vec<f64>),
}

/// Estimated means of the levels with their covariance. Comparisons, contrasts and trends consume this and do
/// not know which design it came from.
#[derive(Debug, Clone, PartialEq)]
pub struct Estimates {
    pub labels: Vec<String>,
    /// Means are offsets from this number.
    pub origin: f64,
    pub means: Vec<f64>,
    /// Observations behind each mean.
    pub n: Vec<usize>,
    /// Covariance of the estimated means (levels x levels).
    pub covariance: DMatrix<f64>,
    pub df: DegreesOfFreedom,
}

/// A contrast of the means: estimate, standard error and degrees of freedom.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ContrastEstimate {
    pub estimate: f64,
    pub se: f64,
    pub df: f64,
}

/// Why a study's observations give no estimates.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoEstimates {
    #[error("fewer than two levels have observations")]
    OneLevel,
    #[error("level \"{level}\" has no observation")]
    EmptyLevel { level: String },
    #[error("level \"{level}\" has 1 observation; unequal variances need at least 2")]
    SingleObservation { level: String },
    #[error("level \"{level}\" has no variation: all its values are equal, so it has no variance of its own")]
    NoVariation { level: String },
    #[error("there is no variation inside any group, so there is no error term to test against")]
    NoErrorTerm,
    #[error("the squares of the values are beyond the range of numbers; give the outcome in another unit")]
    OutOfRange,
}

impl Estimates {
    /// Estimates of a one-way layout.
    ///
    /// With equal variances the error term is pooled over all groups (df = observations - groups); with unequal
    /// variances each mean has its own variance s²/n on n - 1 df.
    ///
    /// # Errors
    /// [`NoEstimates`] where a group is empty, the error term is zero or beyond the range of numbers, or, with
    /// unequal variances, a group has fewer than two observations or no variation.
    pub fn one_way(labels: &[String], summary: &Summary, variances: Variances) -> Result<Self, NoEstimates> {
        let groups = &summary.groups;
        if groups.len() < 2 {
            return Err(NoEstimates::OneLevel);
        }
        if let Some(empty) = groups.iter().position(|group| group.n == 0) {
            return Err(NoEstimates::EmptyLevel { level: labels[empty].clone() });
        }
        let (diagonal, df): (Vec<f64>, _) = match variances {
            Variances::Equal => {
                let pooled = summary.pooled().filter(|pooled| pooled.variance > 0.0);
                let pooled = pooled.ok_or(NoEstimates::NoErrorTerm)?;
                let of_means = groups.iter().map(|group| pooled.variance / group.n as f64).collect();
                (of_means, DegreesOfFreedom::Common(pooled.df))
            }
            Variances::Unequal => (separate(labels, summary)?, per_mean(summary)),
        };
        if !diagonal.iter().chain(groups.iter().map(|group| &group.mean)).all(|number| number.is_finite()) {
            return Err(NoEstimates::OutOfRange);
        }
        Ok(Self {
            labels: labels.to_vec(),
            origin: summary.origin,
            means: groups.iter().map(|group| group.mean).collect(),
            n: groups.iter().map(|group| group.n).collect(),
            covariance: DMatrix::from_diagonal(&nalgebra::DVector::from_vec(diagonal)),
            df,
        })
    }

    /// Estimate, standard error and df of the contrast with these coefficients (one a level, sum zero).
    pub fn contrast(&self, coefficients: &[f64]) -> ContrastEstimate {
        let estimate =
            crate::numerics::sums::sum(coefficients.iter().zip(&self.means).map(|(c, mean)| c * mean));
        let variance = self.covariance_of(coefficients, coefficients);
        let df = match &self.df {
            DegreesOfFreedom::Common(df) => *df,
            DegreesOfFreedom::PerMean(dfs) => self.satterthwaite(coefficients, dfs, variance),
        };
        ContrastEstimate { estimate, se: variance.sqrt(), df }
    }

    /// Covariance of two contrasts.
    pub fn covariance_of(&self, one: &[f64], other: &[f64]) -> f64 {
        let (one, other) =
            (nalgebra::DVector::from_column_slice(one), nalgebra::DVector::from_column_slice(other));
        (&self.covariance * other).dot(&one)
    }

    /// Satterthwaite (1946): (Σu)² / Σ(u²/df) with u = c² times the variance of the mean.
    fn satterthwaite(&self, coefficients: &[f64], dfs: &[f64], variance: f64) -> f64 {
        let shares = coefficients.iter().enumerate().map(|(i, c)| c * c * self.covariance[(i, i)]);
        let below: f64 = shares.zip(dfs).map(|(share, df)| share * share / df).sum();
        variance * variance / below
    }
}

fn separate(labels: &[String], summary: &Summary) -> Result<Vec<f64>, NoEstimates> {
    if summary.groups.iter().all(|group| group.variance.is_none_or(|variance| variance == 0.0)) {
        return Err(NoEstimates::NoErrorTerm);
    }
    let variances = summary.groups.iter().zip(labels).map(|(group, label)| match group.variance {
        None => Err(NoEstimates::SingleObservation { level: label.clone() }),
        Some(0.0) => Err(NoEstimates::NoVariation { level: label.clone() }),
        Some(variance) => Ok(variance / group.n as f64),
    });
    variances.collect()
}

fn per_mean(summary: &Summary) -> DegreesOfFreedom {
    DegreesOfFreedom::PerMean(summary.groups.iter().map(|group| group.n as f64 - 1.0).collect())
}
