//! How many observations, how much power, how small an effect: planning the next study.

mod effect;
mod overall;

pub use effect::{eta_squared_of_f, f_of_eta_squared, f_of_means};
pub use overall::{CurvePoint, MAX_GROUPS, MAX_PER_GROUP, OverallDesign, SampleSize};

use crate::numerics::OutOfDomain;

/// Why a plan has no answer. Every message says what would be accepted.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoPower {
    #[error("there are {groups} groups; at least 2 are needed")]
    TooFewGroups { groups: usize },
    #[error("there are {groups} groups; at most {MAX_GROUPS} can be planned for")]
    TooManyGroups { groups: usize },
    #[error("{n} per group is too few; at least 2 are needed, or nothing shows the variation inside groups")]
    TooFewPerGroup { n: usize },
    #[error("{n} per group is more than the {MAX_PER_GROUP} that are looked at")]
    TooManyPerGroup { n: usize },
    #[error("alpha is {alpha} and must lie between 0 and 1")]
    Alpha { alpha: f64 },
    #[error("the target power is {target} and must lie between 0 and 1")]
    Target { target: f64 },
    #[error(
        "the target power {target} is not above alpha {alpha}: a test without any effect already reaches alpha"
    )]
    TargetNotAboveAlpha { target: f64, alpha: f64 },
    #[error("Cohen's f is {f} and must be a number from 0 up")]
    F { f: f64 },
    #[error(
        "Cohen's f is {f}, which is too large to compute with; effects that can be planned for are below 100"
    )]
    TooLargeEffect { f: f64 },
    #[error("eta squared is {eta_squared} and must be from 0 to below 1")]
    EtaSquared { eta_squared: f64 },
    #[error("the standard deviation is {sd} and must be above 0")]
    Sd { sd: f64 },
    #[error("a mean is {mean}, which is not a number to work with")]
    Mean { mean: f64 },
    #[error(
        "the effect is 0: then no sample size raises the power above alpha. Give means that differ, or an effect above 0"
    )]
    NoEffect,
    #[error(
        "the target power {target} is not reached with {MAX_PER_GROUP} per group, where the power is {power:.3}. The effect is too small to plan for"
    )]
    TargetNotReached { target: f64, power: f64 },
    #[error("the power cannot be computed: {0}")]
    NoProbability(#[from] OutOfDomain),
}
