//! What comes out of deciding a family: one row a comparison, and what holds for all of them.

use super::graph::{GraphDecision, NoDecision};
use super::letters::Letters;
use super::long::Rearranged;
use super::permutation::NoPermutation;
use super::ranks::CannotRank;
use super::setting::{Basis, Claim, Family, Sides};
use super::{Adjust, setting::Setting};
use crate::methods::effect_size::{Interval, StandardisedEffect};
use crate::numerics::OutOfDomain;
use crate::study::Variances;
use serde::Serialize;

/// What the intervals of a result hold for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum IntervalKind {
    /// All of them together, by the procedure itself.
    Simultaneous,
    /// All of them together, by this single-step relative of a stepwise procedure: a row's interval may disagree
    /// with its decision.
    SimultaneousBy(Adjust),
    /// One-sided bounds of an ordered procedure: they say no more than the decision where it is a rejection, unless all
    /// are rejected (Guilbaud 2008; Strassburger and Bretz 2008).
    Compatible,
    /// Each by itself.
    PerComparison,
    /// There are none.
    None,
}

/// One comparison, decided.
#[derive(Debug, Clone, PartialEq)]
pub struct ComparisonRow {
    pub name: String,
    /// What is taken from what: "mean of B and C minus A".
    pub words: String,
    /// One a level.
    pub coefficients: Vec<f64>,
    /// Of the means; of the mean ranks (joint ranking); the shift by the median of all differences (pair by pair).
    pub estimate: f64,
    /// `None` for a shift, which has its interval without one.
    pub se: Option<f64>,
    /// Infinite for a normal statistic.
    pub df: f64,
    /// The statistic before the procedure puts it on its own scale: t, or z for ranks.
    pub t: f64,
    /// The procedure's statistic: q = √2 |t| for the studentized range, else t or z.
    pub statistic: f64,
    /// "t", "z" or "q".
    pub statistic_name: &'static str,
    /// Of this comparison by itself, on the sides asked for.
    pub p: f64,
    /// Whether `p` is counted exactly, not referred to a distribution that fits large samples.
    pub p_counted: bool,
    pub p_adjusted: f64,
    /// Bound on the error of `p_adjusted`, or its standard error, where it comes from integration or simulation.
    pub p_error: Option<f64>,
    /// The level at which the raw p-value is judged; `None` where the procedure has none.
    pub alpha: Option<f64>,
    /// p_adjusted <= alpha of the family.
    pub rejected: bool,
    /// The value that the statistic must reach for its interval to support the claim, on the scale of `statistic`.
    pub critical: Option<f64>,
    /// Interval of the kind that the result names; infinite on a side that is not bounded.
    pub interval: Option<Bounds>,
    pub effects: RowEffects,
    /// The smallest true difference that a test at this row's level would find with a power of 80 %: a property of the
    /// design, the same for any result.
    pub detectable: Option<f64>,
}

/// The sizes of one comparison's effect, with intervals at its critical value.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct RowEffects {
    /// d and g.
    pub standardised: Option<StandardisedEffect>,
    /// The difference in standard deviations of the control.
    pub control_sd: Option<Sized>,
    /// Mean of the one set over the mean of the other.
    pub ratio: Option<Sized>,
    /// The chance that a value of the one level exceeds one of the other.
    pub superiority: Option<Sized>,
}

/// An effect size with its interval.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sized {
    pub estimate: f64,
    pub interval: Option<Interval>,
}

/// Lower and upper bound.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Bounds {
    pub lower: f64,
    pub upper: f64,
}

impl Bounds {
    /// Whether everything between the bounds is what is claimed.
    pub fn supports(&self, claim: Claim, sides: Sides) -> bool {
        match claim {
            Claim::Equivalence { lower, upper } => self.lower > lower && self.upper < upper,
            _ => {
                let null = claim.null(sides);
                self.lower > null || self.upper < null
            }
        }
    }
}

/// A family of comparisons, decided.
#[derive(Debug, Clone, PartialEq)]
pub struct Comparisons {
    pub adjust: Adjust,
    pub family: Family,
    pub basis: Basis,
    pub claim: Claim,
    pub family_size: usize,
    pub sides: Sides,
    pub variances: Variances,
    pub alpha: f64,
    pub confidence: f64,
    pub interval_kind: IntervalKind,
    /// The rows' critical value where it is one for all.
    pub critical: Option<f64>,
    /// The rows' per-comparison alpha where it is one for all.
    pub alpha_per_comparison: Option<f64>,
    pub rows: Vec<ComparisonRow>,
    /// Indices of rows whose interval supports the claim without a rejection, or the reverse.
    pub disagreeing: Vec<usize>,
    /// Levels that share a letter are not shown to differ; for all pairs only.
    pub letters: Option<Letters>,
    /// How an ordered procedure went, in its own order.
    pub path: Option<GraphDecision>,
    /// How the values were rearranged.
    pub rearranged: Option<Rearranged>,
}

/// Why a family cannot be compared as asked.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum CannotCompare {
    #[error("{reason}. Suitable here: {}.", names(suitable))]
    Unsuitable { reason: String, suitable: Vec<Adjust> },
    #[error(
        "comparison \"{name}\" has no finite estimate and standard error: its values are too large or too small to compute with"
    )]
    NotFinite { name: String },
    #[error("there is nothing to compare: the family is empty")]
    Empty,
    #[error("the means have no estimates")]
    NoMeans,
    #[error("{0} need every single value, and only sizes, means and standard deviations are known")]
    NoValues(&'static str),
    #[error("comparison \"{name}\" is of more than two levels, and pairs are ranked by themselves")]
    NoPair { name: String },
    #[error("{0}")]
    OutOfDomain(#[from] OutOfDomain),
    #[error("comparison \"{name}\" cannot be ranked: {reason}")]
    NoRanks { name: String, reason: CannotRank },
    #[error("the values cannot be ranked: {0}")]
    NoJointRanks(CannotRank),
    #[error(
        "the step-down max-t procedure works out the joint distribution of what is left at every step, and {comparisons} comparisons would take too long: at most {most} are gone through. Choose max-t, which takes one step, or Holm"
    )]
    TooManySteps { comparisons: usize, most: usize },
    #[error("{0}")]
    NoPermutation(#[from] NoPermutation),
    #[error("the procedure needs an order, with weights where it has them, and none is given")]
    NoOrder,
    #[error("{0}")]
    NoDecision(#[from] NoDecision),
}

impl CannotCompare {
    /// The refusal of a procedure that does not suit.
    pub(super) fn unsuitable(reason: String, setting: &Setting) -> Self {
        Self::Unsuitable { reason, suitable: super::suitable(setting) }
    }
}

fn names(procedures: &[Adjust]) -> String {
    procedures.iter().map(|adjust| adjust.name()).collect::<Vec<_>>().join(", ")
}
