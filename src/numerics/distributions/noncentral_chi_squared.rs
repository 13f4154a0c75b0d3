//! The noncentral chi-squared distribution: the sum of `df` squared independent normal variables with variance 1
//! whose squared means sum to the noncentrality ncp.
//!
//! A Poisson mixture of incomplete gamma functions: df times the noncentral F with infinite second df. Domain: x >= 0,
//! df from 0.001 to 1e30, ncp from 0 to 1e7.
//!
//! # References
//! 1. Johnson, Kotz and Balakrishnan (1995), Continuous Univariate Distributions 2, chapter 29.

use super::poisson_mixture::{self, Kernel};
use super::{inner_probability, noncentral, noncentral_f, not_negative, shape};
use crate::numerics::OutOfDomain;
use crate::numerics::special::Tail;

/// Lower-tail probability P(X <= `x`) with `df` degrees of freedom and noncentrality `ncp`.
///
/// # Errors
/// [`OutOfDomain`] if `x` is negative or not finite, `df` is not from 0.001 to 1e30, or `ncp` is not from 0 to 1e7.
///
/// # Accuracy
/// Relative error below 1e-12 for probabilities from 1e-100, over degrees of freedom from 0.5 to 1e6 and
/// `ncp` to 1e4 (`tests/reference/data/wide/noncentral_chi_squared.json`).
pub fn cdf(x: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    tail(x, df, ncp, Tail::Lower)
}

/// Upper-tail probability P(X > `x`) with `df` degrees of freedom and noncentrality `ncp`.
///
/// # Errors
/// [`OutOfDomain`] if `x` is negative or not finite, `df` is not from 0.001 to 1e30, or `ncp` is not from 0 to 1e7.
///
/// # Accuracy
/// Relative error below 1e-12 for probabilities from 1e-100, over degrees of freedom from 0.5 to 1e6 and
/// `ncp` to 1e4 (`tests/reference/data/wide/noncentral_chi_squared.json`).
pub fn sf(x: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    tail(x, df, ncp, Tail::Upper)
}

/// The x with P(X <= x) = `p`; 0 at 0, infinite at 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, `df` is not from 0.001 to 1e30, or `ncp` is not from 0 to 1e7.
///
/// # Accuracy
/// Relative error below 1e-12, over the same ranges as [`cdf`].
pub fn quantile(p: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    Ok(shape("df", df)? * noncentral_f::quantile(p, df, f64::INFINITY, ncp)?)
}

/// The x with P(X > x) = `upper_p`; infinite at 0, 0 at 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, `df` is not from 0.001 to 1e30, or `ncp` is not from 0 to 1e7.
///
/// # Accuracy
/// Relative error below 1e-12, over the same ranges as [`sf`].
pub fn upper_quantile(upper_p: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    Ok(shape("df", df)? * noncentral_f::upper_quantile(upper_p, df, f64::INFINITY, ncp)?)
}

/// The noncentrality with P(X <= `x`) = `lower_p`, a limit of a confidence interval for it; 0 where even noncentrality 0 gives
/// no more than `lower_p`.
///
/// # Errors
/// [`OutOfDomain`] if `x` is negative, not finite or so large that the noncentrality would exceed 1e7, `df` is not from 0.001 to
/// 1e30, or `lower_p` is not between 0 and 1.
///
/// # Accuracy
/// Relative error below 1e-10 for noncentralities from 0.05 to 1e4, except where the probability hardly depends on them (a small
/// one beside large degrees of freedom): the result then solves for a probability that is within a relative 1e-13 of the given one.
///
/// # Source
/// Steiger and Fouladi (1997), in What if there were no significance tests, chapter 9.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::noncentral_chi_squared;
/// let limit = noncentral_chi_squared::noncentrality(20.0, 3.0, 0.025)?;
/// assert!((noncentral_chi_squared::cdf(20.0, 3.0, limit)? - 0.025).abs() < 1e-14);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn noncentrality(x: f64, df: f64, lower_p: f64) -> Result<f64, OutOfDomain> {
    let lower_p = inner_probability("lower_p", lower_p)?;
    let kernel = kernel(x, df)?;
    let found = noncentral_f::solve_noncentrality(kernel, x / df, df, f64::INFINITY, lower_p);
    found.ok_or(OutOfDomain {
        argument: "x",
        value: x,
        allowed: "so small that the noncentrality stays below 1e7",
    })
}

/// The central distribution at x.
fn kernel(x: f64, df: f64) -> Result<Kernel, OutOfDomain> {
    let (x, df) = (not_negative("x", x)?, shape("df", df)?);
    Ok(Kernel::Gamma { a: 0.5 * df, x: 0.5 * x, excess: 0.5 * (x - df) })
}

fn tail(x: f64, df: f64, ncp: f64, side: Tail) -> Result<f64, OutOfDomain> {
    Ok(poisson_mixture::tail(kernel(x, df)?, 0.5 * noncentral("ncp", ncp)?, side))
}
