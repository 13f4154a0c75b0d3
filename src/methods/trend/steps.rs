//! Williams's test and Williams-type contrasts: comparisons with the control that use that the response is monotone in the dose.
//!
//! *Williams's test* finds the lowest dose that differs from the control. With m₀, n₀ the control's mean and size and m_i, n_i those
//! of doses 1..k, the doses' means alone are amalgamated to M₁ <= ... <= M_k (the monotone fit with weights n; falling: the same with
//! all signs changed), and
//!
//! t̄_i = (M_i - m₀) / (s √(1/n_i + 1/n₀))
//!
//! is referred to its distribution for i doses, from the top dose down, as long as it is significant. If the means turn down at the
//! top dose although the response should rise, amalgamation carries the lower doses' effect to it.
//!
//! *Williams-type contrasts* compare the control with the mean of the top u doses together, weighted by n, for u = 1..k; the
//! largest t proves a trend, adjusted by the joint distribution of all.
//!
//! # References
//! 1. Williams (1971), Biometrics 27, 103-117, doi 10.2307/2528930; Williams (1972), Biometrics 28, 519-531,
//!    doi 10.2307/2556164.
//! 2. Bretz (2006), Comput. Statist. Data Anal. 50, 1735-1748 (the contrasts, for unequal sizes; pages from memory).

use super::isotonic::{Block, Direction, NoMonotoneFit, monotone};
use super::lowest_dose::{LowestDose, NoSequence, lowest_dose};
use crate::methods::multiplicity::Sides;
use crate::methods::multiplicity::joint::{JointWork, Procedure};
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::amalgamated_means;
use crate::study::{DegreesOfFreedom, Estimates};

/// One dose against the control.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WilliamsStep {
    /// Place of the level, from 1: 0 is the control.
    pub level: usize,
    /// M_i, as an offset from the estimates' origin.
    pub amalgamated: f64,
    /// t̄_i, with its sign changed for a falling response: the larger, the more it speaks for an effect.
    pub t: f64,
    /// One-sided, of this dose by itself: P(T > t) for the doses up to this one.
    pub p: f64,
    /// The largest of the p-values from the top dose down to this one.
    pub p_adjusted: f64,
    /// Whether it and all higher doses are significant at alpha.
    pub rejected: bool,
}

/// Williams's test, decided.
#[derive(Debug, Clone, PartialEq)]
pub struct Williams {
    pub direction: Direction,
    /// From the lowest dose to the top one.
    pub steps: Vec<WilliamsStep>,
    /// Blocks of doses that were amalgamated, with places from 0 for the first dose.
    pub blocks: Vec<Block>,
    pub df: f64,
    /// Place of the lowest level that differs from the control, from 1; `None` if the top dose does not.
    pub lowest_effective: Option<usize>,
}

/// Why there is no such comparison.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoSteps {
    #[error("there are {levels} levels, and a control with a dose needs at least 2")]
    TooFewLevels { levels: usize },
    #[error(
        "Williams's test needs one error term for all levels; use contrasts of Williams's type for unequal variances"
    )]
    NoCommonErrorTerm,
    #[error("there is no finite t: the values are too large or too small to compute with")]
    NotFinite,
    #[error("{0}")]
    Fit(#[from] NoMonotoneFit),
    #[error("{0}")]
    Sequence(#[from] NoSequence),
    #[error("{0}")]
    OutOfDomain(#[from] OutOfDomain),
}

/// Williams's test of the levels after the first, the control, at level `alpha`, one-sided towards `direction`.
///
/// The hypotheses "doses 1..i do not differ from the control" are nested, and tested from the top dose down: the family-wise
/// error is at most alpha for normal values with one variance and a response that is monotone. With one dose it is the one-sided t
/// test.
///
/// # Errors
/// [`NoSteps`] for fewer than two levels, a variance for each mean, extreme numbers, an `alpha` out of its range, more than 20
/// doses, or sizes too different (see [`amalgamated_means::sf`]).
///
/// # Accuracy
/// Relative error of the p-values below 1e-12.
///
/// # Source
/// \[1\].
pub fn williams(estimates: &Estimates, direction: Direction, alpha: f64) -> Result<Williams, NoSteps> {
    let levels = estimates.means.len();
    if levels < 2 {
        return Err(NoSteps::TooFewLevels { levels });
    }
    let DegreesOfFreedom::Common(df) = estimates.df else { return Err(NoSteps::NoCommonErrorTerm) };
    let sizes: Vec<f64> = estimates.n.iter().map(|n| *n as f64).collect();
    let fit = monotone(&estimates.means[1..], &sizes[1..], direction)?;
    let (mut t, mut p) = (Vec::new(), Vec::new());
    for level in 1..levels {
        let variance = estimates.covariance[(level, level)] + estimates.covariance[(0, 0)]
            - 2.0 * estimates.covariance[(0, level)];
        let distance = direction.sign() * (fit.fitted[level - 1] - estimates.means[0]);
        let statistic = distance / variance.sqrt();
        if !statistic.is_finite() {
            return Err(NoSteps::NotFinite);
        }
        t.push(statistic);
        p.push(amalgamated_means::sf(statistic, &sizes[1..=level], sizes[0], df)?);
    }
    let LowestDose { steps, lowest } = lowest_dose(&p, alpha)?;
    let step = |(place, step): (usize, &super::lowest_dose::DoseStep)| WilliamsStep {
        level: place + 1,
        amalgamated: fit.fitted[place],
        t: t[place],
        p: step.p,
        p_adjusted: step.p_adjusted,
        rejected: step.rejected,
    };
    Ok(Williams {
        direction,
        steps: steps.iter().enumerate().map(step).collect(),
        blocks: fit.blocks,
        df,
        lowest_effective: lowest.map(|place| place + 1),
    })
}

/// The contrasts of Williams's type for levels of the given sizes, the control first: for u = 1..k the mean of the top u doses,
/// weighted by their sizes, less the control. None for fewer than two levels.
///
/// # Source
/// \[2\].
///
/// # Example
/// ```
/// # use levelwise::methods::trend::williams_contrasts;
/// assert_eq!(williams_contrasts(&[9, 4, 12]), [vec![-1.0, 0.0, 1.0], vec![-1.0, 0.25, 0.75]]);
/// ```
pub fn williams_contrasts(n: &[usize]) -> Vec<Vec<f64>> {
    let row = |top: usize| {
        let from = n.len() - top;
        let together: f64 = n[from..].iter().map(|n| *n as f64).sum();
        let mut c: Vec<f64> = n.iter().map(|n| *n as f64 / together).collect();
        c[..from].fill(0.0);
        c[0] = -1.0;
        c
    };
    (1..n.len()).map(row).collect()
}

/// The contrasts of Williams's type, to be decided together at `alpha` by the single-step max-t, one-sided towards `direction`:
/// the rows of the result are those of [`williams_contrasts`].
///
/// The family-wise error is controlled for normal values with one error term, approximately with a variance for each mean.
///
/// # Errors
/// [`NoSteps`] for fewer than two levels, or what [`JointWork::new`] refuses.
///
/// # Accuracy
/// That of [`JointWork`]: integrals for up to three doses, lattice points with their error for more.
pub fn williams_type(estimates: &Estimates, direction: Direction, alpha: f64) -> Result<JointWork, NoSteps> {
    let levels = estimates.means.len();
    if levels < 2 {
        return Err(NoSteps::TooFewLevels { levels });
    }
    let sides = match direction {
        Direction::Rising => Sides::Greater,
        Direction::Falling => Sides::Less,
    };
    let rows = williams_contrasts(&estimates.n);
    Ok(JointWork::new(estimates, &rows, 0.0, sides, Procedure::SingleStep, alpha)?)
}
