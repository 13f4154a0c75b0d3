//! Power of the one-way F test with equal group sizes, exact under normality and equal variances: the test
//! statistic is noncentral F with λ = N f² on k - 1 and k (n - 1) degrees of freedom.
//!
//! It is the power to find *some* difference among the levels. A claim about particular pairs needs another
//! calculation, and usually more observations.
//!
//! Reference: Cohen (1988), Statistical Power Analysis for the Behavioral Sciences, chapter 8.

use super::NoPower;
use super::effect::checked_f;
use crate::numerics::distributions::{fisher_f, noncentral_f};
use serde::Serialize;

/// The largest group size that a search looks at.
pub const MAX_PER_GROUP: usize = 10_000_000;

/// The largest number of groups that is worked with.
pub const MAX_GROUPS: usize = 10_000;

/// Up to here the noncentral F is computed.
const LARGEST_NONCENTRALITY: f64 = 1e7;

/// A planned one-way F test: how many groups, all of one size, tested at which alpha.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OverallDesign {
    groups: usize,
    alpha: f64,
}

/// The smallest equal group size that reaches a target.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct SampleSize {
    pub per_group: usize,
    pub total: usize,
    /// Power with this size: at least the target.
    pub power: f64,
    /// Power with one observation fewer in every group: below the target. `None` at the smallest size, 2.
    pub power_one_fewer: Option<f64>,
}

/// One point of a power curve.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct CurvePoint {
    pub per_group: usize,
    pub power: f64,
}

impl OverallDesign {
    /// A design with `groups` groups, tested at `alpha`.
    ///
    /// # Errors
    /// [`NoPower`] for fewer than 2 or more than [`MAX_GROUPS`] groups, and [`NoPower::Alpha`] unless 0 < alpha < 1.
    pub fn new(groups: usize, alpha: f64) -> Result<Self, NoPower> {
        if groups < 2 {
            return Err(NoPower::TooFewGroups { groups });
        }
        if groups > MAX_GROUPS {
            return Err(NoPower::TooManyGroups { groups });
        }
        if !(alpha > 0.0 && alpha < 1.0) {
            return Err(NoPower::Alpha { alpha });
        }
        Ok(Self { groups, alpha })
    }

    /// Power with `per_group` observations in each group for the effect `f`; alpha itself for an effect of 0.
    ///
    /// # Errors
    /// [`NoPower`] for sizes outside 2 to [`MAX_PER_GROUP`], an `f` that is negative or no number, and one so large
    /// that the noncentrality exceeds 1e7 while the power is not yet 1 to twelve digits.
    pub fn power(&self, per_group: usize, f: f64) -> Result<f64, NoPower> {
        let f = checked_f(f)?;
        let (df1, df2) = self.df(per_group)?;
        if f == 0.0 {
            return Ok(self.alpha);
        }
        let critical = fisher_f::upper_quantile(self.alpha, df1, df2)?;
        let noncentrality = self.groups as f64 * per_group as f64 * f * f;
        let power = noncentral_f::sf(critical, df1, df2, noncentrality.min(LARGEST_NONCENTRALITY))?;
        // Power grows with the noncentrality: beyond the largest one it lies between the power there and 1.
        if noncentrality > LARGEST_NONCENTRALITY && power < 1.0 - 1e-12 {
            return Err(NoPower::TooLargeEffect { f });
        }
        Ok(power)
    }

    /// The smallest equal group size (at least 2) whose power for the effect `f` is at least `target`.
    ///
    /// # Errors
    /// [`NoPower::NoEffect`] for `f` 0, [`NoPower::TargetNotReached`] if even [`MAX_PER_GROUP`] does not do, and
    /// the errors of [`OverallDesign::power`] and of a target outside alpha to 1.
    pub fn sample_size(&self, f: f64, target: f64) -> Result<SampleSize, NoPower> {
        self.check_target(target)?;
        if checked_f(f)? == 0.0 {
            return Err(NoPower::NoEffect);
        }
        // Power grows with n: double until it is enough, then halve the gap.
        let (mut too_few, mut enough) = (1, 2);
        let mut power = self.power(enough, f)?;
        while power < target {
            if enough == MAX_PER_GROUP {
                return Err(NoPower::TargetNotReached { target, power });
            }
            (too_few, enough) = (enough, (2 * enough).min(MAX_PER_GROUP));
            power = self.power(enough, f)?;
        }
        while enough - too_few > 1 {
            let middle = too_few + (enough - too_few) / 2;
            let there = self.power(middle, f)?;
            if there < target {
                too_few = middle;
            } else {
                (enough, power) = (middle, there);
            }
        }
        let power_one_fewer = if too_few < 2 { None } else { Some(self.power(too_few, f)?) };
        Ok(SampleSize { per_group: enough, total: enough * self.groups, power, power_one_fewer })
    }

    /// The smallest effect f that is found with probability `target` with `per_group` observations a group.
    ///
    /// # Errors
    /// [`NoPower`] for a target outside alpha to 1 and for sizes outside 2 to [`MAX_PER_GROUP`].
    pub fn smallest_effect(&self, per_group: usize, target: f64) -> Result<f64, NoPower> {
        self.check_target(target)?;
        let (df1, df2) = self.df(per_group)?;
        let critical = fisher_f::upper_quantile(self.alpha, df1, df2)?;
        let noncentrality = noncentral_f::noncentrality(critical, df1, df2, 1.0 - target)?;
        Ok((noncentrality / (self.groups as f64 * per_group as f64)).sqrt())
    }

    /// Power for the effect `f` at about `points` group sizes from 2 to `up_to`, evenly spread, both ends included.
    ///
    /// # Errors
    /// As [`OverallDesign::power`].
    pub fn curve(&self, f: f64, up_to: usize, points: usize) -> Result<Vec<CurvePoint>, NoPower> {
        let (last, steps) = (up_to.max(3), points.max(2) - 1);
        let mut sizes: Vec<usize> = (0..=steps).map(|i| 2 + (last - 2) * i / steps).collect();
        sizes.dedup();
        let at = |per_group| Ok(CurvePoint { per_group, power: self.power(per_group, f)? });
        sizes.into_iter().map(at).collect()
    }

    fn df(&self, per_group: usize) -> Result<(f64, f64), NoPower> {
        match per_group {
            0..2 => Err(NoPower::TooFewPerGroup { n: per_group }),
            n if n > MAX_PER_GROUP => Err(NoPower::TooManyPerGroup { n }),
            n => Ok((self.groups as f64 - 1.0, self.groups as f64 * (n as f64 - 1.0))),
        }
    }

    fn check_target(&self, target: f64) -> Result<(), NoPower> {
        if !(target > 0.0 && target < 1.0) {
            return Err(NoPower::Target { target });
        }
        if target <= self.alpha {
            return Err(NoPower::TargetNotAboveAlpha { target, alpha: self.alpha });
        }
        Ok(())
    }
}
