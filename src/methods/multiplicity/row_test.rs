//! The test of each comparison by itself, before the family is looked at.

use super::compare::Request;
use super::ranks::{JointRanks, PairwiseRanks, pairwise};
use super::result::CannotCompare;
use super::setting::{Basis, Claim, Ranking, Sides};
use crate::methods::contrasts::{Contrast, in_words};
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::student_t;
use crate::study::Estimates;

/// A comparison's own test.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Test {
    pub name: String,
    pub words: String,
    pub coefficients: Vec<f64>,
    /// 0 until the shift is known, for pairs of levels that are ranked by themselves.
    pub estimate: f64,
    /// `None` for a shift.
    pub se: Option<f64>,
    /// Infinite for a normal statistic.
    pub df: f64,
    pub t: f64,
    pub p: f64,
    pub p_counted: bool,
    /// The two levels that are ranked by themselves.
    pub pair: Option<RankedPair>,
}

/// Two levels ranked by themselves.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct RankedPair {
    /// Index of the level with the negative coefficient.
    pub first: usize,
    pub second: usize,
    pub ranks: PairwiseRanks,
}

/// The tests of all comparisons, in their order.
pub(super) fn tests(request: &Request) -> Result<Vec<Test>, CannotCompare> {
    let contrasts = request.contrasts.iter();
    match request.basis {
        Basis::Means | Basis::Permutation => {
            let estimates = request.estimates()?;
            contrasts.map(|contrast| of_means(request, estimates, contrast)).collect()
        }
        Basis::Ranks(ranking) => {
            let groups = &request.sample.ok_or(CannotCompare::NoValues("ranks"))?.groups;
            match ranking {
                Ranking::Joint => {
                    let ranks = JointRanks::of(groups).map_err(CannotCompare::NoJointRanks)?;
                    contrasts.map(|contrast| of_joint_ranks(request, contrast, &ranks)).collect()
                }
                Ranking::PairByPair => contrasts.map(|contrast| of_pair(request, contrast, groups)).collect(),
            }
        }
    }
}

fn named(request: &Request, contrast: &Contrast) -> Test {
    Test {
        name: contrast.name.clone(),
        words: in_words(&contrast.coefficients, request.labels),
        coefficients: contrast.coefficients.clone(),
        estimate: 0.0,
        se: None,
        df: f64::INFINITY,
        t: 0.0,
        p: 1.0,
        p_counted: false,
        pair: None,
    }
}

/// The t test of a contrast of means.
fn of_means(request: &Request, estimates: &Estimates, contrast: &Contrast) -> Result<Test, CannotCompare> {
    let found = estimates.contrast(&contrast.coefficients);
    let finite = found.estimate.is_finite() && found.se > 0.0 && found.se.is_finite() && found.df > 0.0;
    let (t, p) = match request.claim {
        _ if !finite => (f64::NAN, f64::NAN),
        Claim::Equivalence { lower, upper } => {
            let (above, below) = ((found.estimate - lower) / found.se, (found.estimate - upper) / found.se);
            let (p_above, p_below) = (student_t::sf(above, found.df)?, student_t::sf(-below, found.df)?);
            // Both must be rejected: the weaker of the two decides.
            if p_above >= p_below { (above, p_above) } else { (below, p_below) }
        }
        claim => {
            let t = (found.estimate - claim.null(request.sides)) / found.se;
            (t, if t.is_finite() { tail(t, found.df, request.sides)? } else { f64::NAN })
        }
    };
    if !t.is_finite() {
        return Err(CannotCompare::NotFinite { name: contrast.name.clone() });
    }
    let (estimate, se, df) = (found.estimate, Some(found.se), found.df);
    Ok(Test { estimate, se, df, t, p, ..named(request, contrast) })
}

/// Dunn's z of a contrast of mean ranks.
fn of_joint_ranks(request: &Request, contrast: &Contrast, ranks: &JointRanks) -> Result<Test, CannotCompare> {
    let found = ranks.test(&contrast.coefficients).map_err(CannotCompare::NoJointRanks)?;
    let (estimate, se, t, p) = (found.estimate, Some(found.se), found.z, found.p(request.sides));
    Ok(Test { estimate, se, t, p, ..named(request, contrast) })
}

/// The rank sum test of two levels by themselves.
fn of_pair(request: &Request, contrast: &Contrast, groups: &[Vec<f64>]) -> Result<Test, CannotCompare> {
    let at = |sign: f64| {
        let mut which = (0..groups.len()).filter(|i| contrast.coefficients[*i] * sign > 0.0);
        which.next().filter(|_| which.next().is_none())
    };
    let (Some(first), Some(second)) = (at(-1.0), at(1.0)) else {
        return Err(CannotCompare::NoPair { name: contrast.name.clone() });
    };
    let ranks = pairwise(&groups[first], &groups[second]).map_err(|reason| CannotCompare::NoRanks {
        name: contrast.name.clone(),
        reason: reason.among(&[first, second]),
    })?;
    // The procedures for ranks refer z to one joint distribution; only p-values by themselves can be counted.
    let counted = ranks.exact.filter(|_| request.adjust.takes_p_values());
    Ok(Test {
        t: ranks.z,
        p: counted.unwrap_or(ranks.normal).on(request.sides),
        p_counted: counted.is_some(),
        pair: Some(RankedPair { first, second, ranks }),
        ..named(request, contrast)
    })
}

/// P(T beyond t) on the sides asked for.
pub(super) fn tail(t: f64, df: f64, sides: Sides) -> Result<f64, OutOfDomain> {
    match sides {
        Sides::Both => Ok((2.0 * student_t::sf(t.abs(), df)?).min(1.0)),
        Sides::Greater => student_t::sf(t, df),
        Sides::Less => student_t::sf(-t, df),
    }
}
