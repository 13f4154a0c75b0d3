//! Contrasts of mean ranks when all groups are ranked together: Dunn (1964) for a pair, with the correction for ties.
//!
//! Under the hypothesis that all N observations come from one distribution, every way of dealing the midranks out to the
//! groups is equally likely. The midranks have the variance (divisor N - 1)
//!
//! ```text
//! S² = N(N+1)/12 - Σ(t³-t)/(12(N-1))        t: numbers of observations that share a value
//! ```
//!
//! and sampling without replacement gives the mean ranks the covariance S² (δ_ij/n_i - 1/N). The second part drops out of a
//! contrast Σ c_i R̄_i with Σ c_i = 0, whose variance is S² Σ c_i²/n_i: exact, only the normal shape is approximate.

use super::{CannotRank, check, tied_share};
use crate::methods::multiplicity::Sides;
use crate::methods::overall::midranks;
use crate::numerics::distributions::normal;
use crate::numerics::sums::sum;

/// The mean ranks of groups that are ranked together, for as many contrasts as a family has.
#[derive(Debug, Clone, PartialEq)]
pub struct JointRanks {
    /// Observations of each group.
    pub sizes: Vec<usize>,
    /// Mean midrank of each group.
    pub mean_ranks: Vec<f64>,
    /// S², the variance of all midranks with divisor N - 1.
    pub rank_variance: f64,
    /// The share of the observations that share their value with another one.
    pub tied_share: f64,
    /// Mean rank less (N + 1)/2, from whole numbers: groups with the same mean rank have the same to the last bit.
    deviations: Vec<f64>,
}

/// A contrast of mean ranks beside the normal distribution.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RankContrast {
    /// Σ c R̄, in ranks.
    pub estimate: f64,
    /// Its standard deviation under the hypothesis, given the ties.
    pub se: f64,
    /// `estimate / se`, about standard normal in large samples.
    pub z: f64,
}

impl JointRanks {
    /// The midranks of all `groups` together: sorted once, whatever the number of contrasts.
    ///
    /// # Errors
    /// [`CannotRank`] for fewer than two groups, an empty group, a value that is not finite, or if all values are equal.
    pub fn of(groups: &[Vec<f64>]) -> Result<Self, CannotRank> {
        check(&groups.iter().map(Vec::as_slice).collect::<Vec<_>>())?;
        let (ranks, ties) = midranks(groups);
        if ties.len() == 1 {
            return Err(CannotRank::AllTied { groups: (0..groups.len()).collect() });
        }
        let sizes: Vec<usize> = groups.iter().map(Vec::len).collect();
        let total: usize = sizes.iter().sum();
        let n = total as f64;
        // Rank sums are multiples of ½ far below 2⁵³, so plain sums are exact.
        let sums: Vec<f64> = ranks.iter().map(|ranks| ranks.iter().sum()).collect();
        let deviations = sums.iter().zip(&sizes).map(|(sum, &size)| {
            let size = size as f64;
            (2.0 * sum - size * (n + 1.0)) / (2.0 * size)
        });
        Ok(Self {
            deviations: deviations.collect(),
            mean_ranks: sums.iter().zip(&sizes).map(|(sum, &size)| sum / size as f64).collect(),
            rank_variance: rank_variance(&ties, n),
            tied_share: tied_share(&ties, total),
            sizes,
        })
    }

    /// The contrast of mean ranks with these `coefficients`, one a group, their sum 0. For Dunn's z of a pair, -1 for the
    /// first, 1 for the second, 0 for all others.
    ///
    /// Hypothesis: all groups come from one distribution, also those with the coefficient 0, whose values take part in the
    /// ranking. Adjusting the p-values of a family (Holm's way, usually) does not control its error rate strongly
    /// for that reason. Nothing is approximate but the normal shape.
    ///
    /// # Errors
    /// [`CannotRank::CoefficientCount`], and [`CannotRank::NoContrast`] if a coefficient is not finite, all are 0, or |Σc| exceeds
    /// 1e-9 Σ|c|.
    ///
    /// # Accuracy
    /// Relative error of z of a pair below 1e-14; of other contrasts, up to what cancels in Σ c R̄.
    ///
    /// # Source
    /// Dunn (1964), Technometrics 6, 241–252; the variance of a contrast as in the head of this module.
    ///
    /// # Example
    /// ```
    /// # use levelwise::methods::multiplicity::ranks::JointRanks;
    /// # use levelwise::methods::multiplicity::Sides;
    /// let joint = JointRanks::of(&[vec![1.0, 2.0], vec![3.0, 4.0]])?;
    /// let test = joint.test(&[-1.0, 1.0])?;
    /// assert_eq!(test.estimate, 2.0); // mean ranks 1.5 and 3.5
    /// assert!((test.z - 2.0 / (5.0_f64 / 3.0).sqrt()).abs() < 1e-15); // S² = 4·5/12
    /// assert!(test.p(Sides::Both) > 0.1);
    /// # Ok::<(), levelwise::methods::multiplicity::ranks::CannotRank>(())
    /// ```
    pub fn test(&self, coefficients: &[f64]) -> Result<RankContrast, CannotRank> {
        if coefficients.len() != self.sizes.len() {
            let (given, groups) = (coefficients.len(), self.sizes.len());
            return Err(CannotRank::CoefficientCount { given, groups });
        }
        let total = sum(coefficients.iter().copied());
        let size = sum(coefficients.iter().map(|c| c.abs()));
        if !size.is_finite() || size == 0.0 || total.abs() > 1e-9 * size {
            return Err(CannotRank::NoContrast { sum: total });
        }
        // By the size of the coefficients, so that neither their squares nor anything after is out of range.
        let scaled = || coefficients.iter().map(|c| c / size);
        let estimate = sum(scaled().zip(&self.deviations).map(|(c, deviation)| c * deviation));
        let per_variance = sum(scaled().zip(&self.sizes).map(|(c, &n)| c * c / n as f64));
        let se = (self.rank_variance * per_variance).sqrt();
        Ok(RankContrast { estimate: estimate * size, se: se * size, z: estimate / se })
    }
}

impl RankContrast {
    /// The p-value of this contrast by itself: normal, on the sides asked for.
    ///
    /// # Accuracy
    /// Relative to the normal tail of z, 1e-13 down to 1e-300.
    pub fn p(&self, sides: Sides) -> f64 {
        match sides {
            Sides::Both => (2.0 * normal::lower(-self.z.abs())).min(1.0),
            Sides::Greater => normal::lower(-self.z),
            Sides::Less => normal::lower(self.z),
        }
    }
}

/// S² from how many of the `n` observations share each distinct value.
fn rank_variance(ties: &[usize], n: f64) -> f64 {
    // N(N+1)(N-1) - Σ(t+1)t(t-1), both whole: nothing is lost where nearly everything is tied.
    let cubes = |count: u128| (count + 1) * count * count.saturating_sub(1);
    let total: u128 = ties.iter().map(|&t| t as u128).sum();
    let left = cubes(total) - ties.iter().map(|&t| cubes(t as u128)).sum::<u128>();
    left as f64 / (12.0 * (n - 1.0))
}
