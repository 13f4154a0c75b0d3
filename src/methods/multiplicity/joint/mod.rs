//! Single-step and step-down max-t for any list of contrasts, from the joint distribution of their t statistics
//! (Hothorn, Bretz and Westfall 2008).
//!
//! With one error term T = (T₁, ..., T_m) is multivariate t with its df and with correlations
//! ρ_lh = c_l' Σ c_h / √(c_l' Σ c_l · c_h' Σ c_h), Σ the covariance of the means, exact for any sizes. With a variance for each mean
//! every row is referred to the multivariate t with *its own* Satterthwaite df and the correlations that the estimated variances
//! give (Hasler and Hothorn 2008), which is approximate, and liberal for groups of a few observations.
//!
//! * Single step: p_l = P(max |T| > |t_l|) over all rows, or P(max T > t_l) towards the side asked for. The critical value goes
//!   with it: simultaneous intervals that exclude zero exactly when p_l <= alpha.
//! * Step-down: p_l is the largest P(max over K) of the sets K of hypotheses that can be true together and contain l. Which
//!   those are [`Steps`] says: any, where the rows are linearly independent; those that logic leaves (Westfall 1997), which for
//!   all pairs are the partitions of the levels (Shaffer 1986); or those left at each step of the order of the statistics,
//!   which is valid always and conservative where logic would leave fewer.
//!
//! The family-wise error is controlled strongly under normal errors, exactly in the single step and in the sense of the closed test
//! (Marcus, Peritz and Gabriel 1976) in the step-down. With Satterthwaite's df the row of a set with the smallest own p-value
//! stands for the set.
//!
//! Probabilities come from the shortest exact way (`law`): Student's t for one row, the studentized range for all pairs of
//! means that are alike, the many-to-one distribution where correlations are products, integrals up to rank 3. Beyond, they are means
//! over lattice points, refined until their standard error is below 1e-5, or below a tenth of |p - alpha| and 1e-3 p; at the
//! latest with 16384 points of each lattice. Every number has its error beside it. Seeds are fixed: the same question has the
//! same answer.
//!
//! # References
//! 1. Hothorn, Bretz and Westfall (2008), Biometrical Journal 50, 346-363, doi 10.1002/bimj.200810425.
//! 2. Westfall (1997), J. Amer. Statist. Assoc. 92, 299-306, doi 10.1080/01621459.1997.10473627.
//! 3. Shaffer (1986), J. Amer. Statist. Assoc. 81, 826-831.
//! 4. Marcus, Peritz and Gabriel (1976), Biometrika 63, 655-660, doi 10.1093/biomet/63.3.655.
//! 5. Hasler and Hothorn (2008), Biometrical Journal 50, 793-800.

mod cells;
mod law;
mod null_sets;
mod refined;
mod statistics;
mod work;

pub use work::JointWork;

/// Which of the two procedures.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Procedure {
    SingleStep,
    StepDown,
}

/// Which sets of hypotheses were judged.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Steps {
    /// The set of all, once.
    Single,
    /// The rows left at each step: they are linearly independent, so that any of them can be true together.
    FreeCombinations,
    /// The sets that can be true together, as they imply all that they imply.
    LogicalRestrictions,
    /// The rows left at each step, although they depend on one another: there are too many of them to list the sets (pairs of
    /// more than 7 levels, more than 10 other rows), or the hypotheses are one-sided. Valid, and conservative.
    RestrictionsIgnored,
}

/// One contrast, decided.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct JointRow {
    /// Estimate over standard error.
    pub t: f64,
    /// Common, or Satterthwaite's.
    pub df: f64,
    /// Of this contrast by itself, on the sides asked for.
    pub p: f64,
    pub p_adjusted: f64,
    /// Error of `p_adjusted`: a bound if it is exact, else the standard error.
    pub p_error: f64,
    /// Whether `p_adjusted` comes from closed forms and integrals rather than lattice points.
    pub exact: bool,
    /// The number of standard errors that the single-step interval reaches at the alpha asked for.
    pub critical: f64,
    /// Its error, of the same kind.
    pub critical_error: f64,
}

/// The contrasts, in the order in which they were given.
#[derive(Debug, Clone, PartialEq)]
pub struct Joint {
    pub rows: Vec<JointRow>,
    pub steps: Steps,
}
