//! The noncentral chi-squared distribution: the sum of `df` squared independent normal variables with variance 1
//! whose squared means sum to the noncentrality ncp.
//!
//! A Poisson mixture of incomplete gamma functions: df times the noncentral F with infinite second df. Domain: x >= 0,
//! df from 0.001 to 1e30, ncp from 0 to 1e7.
//!
//! # References
//! 1. Johnson, Kotz and Balakrishnan (1995), Continuous Univariate Distributions 2, chapter 29.

use super::poisson_mixture::{self, Kernel};
use super::{noncentral, noncentral_f, not_negative, shape};
use crate::numerics::OutOfDomain;
use crate::numerics::special::Tail;

/// Lower-tail probability P(X <= `x`) with `df` degrees of freedom and noncentrality `ncp`.
///
/// # Errors
/// [`OutOfDomain`] if `x` is negative or not finite, `df` is not from 0.001 to 1e30, or `ncp` is not from 0 to 1e7.
///
/// # Accuracy
/// As listed in `tests/reference/accuracy.rs`.
pub fn cdf(x: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    tail(x, df, ncp, Tail::Lower)
}

/// Upper-tail probability P(X > `x`) with `df` degrees of freedom and noncentrality `ncp`.
///
/// # Errors
/// [`OutOfDomain`] if `x` is negative or not finite, `df` is not from 0.001 to 1e30, or `ncp` is not from 0 to 1e7.
///
/// # Accuracy
/// As listed in `tests/reference/accuracy.rs`.
pub fn sf(x: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    tail(x, df, ncp, Tail::Upper)
}

/// The x with P(X <= x) = `p`; 0 at 0, infinite at 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, `df` is not from 0.001 to 1e30, or `ncp` is not from 0 to 1e7.
pub fn quantile(p: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    Ok(shape("df", df)? * noncentral_f::quantile(p, df, f64::INFINITY, ncp)?)
}

/// The x with P(X > x) = `upper_p`; infinite at 0, 0 at 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, `df` is not from 0.001 to 1e30, or `ncp` is not from 0 to 1e7.
pub fn upper_quantile(upper_p: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    Ok(shape("df", df)? * noncentral_f::upper_quantile(upper_p, df, f64::INFINITY, ncp)?)
}

fn tail(x: f64, df: f64, ncp: f64, side: Tail) -> Result<f64, OutOfDomain> {
    let (x, df) = (not_negative("x", x)?, shape("df", df)?);
    let kernel = Kernel::Gamma { a: 0.5 * df, x: 0.5 * x, excess: 0.5 * (x - df) };
    Ok(poisson_mixture::tail(kernel, 0.5 * noncentral("ncp", ncp)?, side))
}
