//! The chi-squared distribution: the sum of `df` squared independent standard normal variables.
//!
//! P(X > x) = Q(df/2, x/2), the regularised incomplete gamma function; df may be any positive number.
//!
//! # References
//! 1. Abramowitz and Stegun (1964), 26.4.19.

use super::{not_negative, probability, shape};
use crate::numerics::OutOfDomain;
use crate::numerics::special::{Tail, Tails, incomplete_gamma, log_gamma_quantile};

/// Lower-tail probability P(X <= `x`) with `df` degrees of freedom.
///
/// # Errors
/// [`OutOfDomain`] if `x` is negative or not finite, or `df` is not from 0.001 to 1e30.
///
/// # Accuracy
/// Relative error below 1e-13 for probabilities above 1e-20 and below 1e-12 down to 1e-300, for
/// degrees of freedom from 0.5 to 1e7 (`tests/reference/data/wide/chi_squared.json`).
pub fn cdf(x: f64, df: f64) -> Result<f64, OutOfDomain> {
    tails(x, df).map(|tails| tails.lower)
}

/// Upper-tail probability P(X > `x`) with `df` degrees of freedom.
///
/// # Errors
/// [`OutOfDomain`] if `x` is negative or not finite, or `df` is not from 0.001 to 1e30.
///
/// # Accuracy
/// Relative error below 1e-13 for probabilities above 1e-20 and below 1e-12 down to 1e-300, for
/// degrees of freedom from 0.5 to 1e7 (`tests/reference/data/wide/chi_squared.json`).
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::chi_squared;
/// let p = chi_squared::sf(60.0, 2.0)?; // exp(-30)
/// assert!((p / 9.357_622_968_840_175e-14 - 1.0).abs() < 1e-13);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(x: f64, df: f64) -> Result<f64, OutOfDomain> {
    tails(x, df).map(|tails| tails.upper)
}

/// The x with P(X <= x) = `p`; 0 at 0, infinite at 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, or `df` is not from 0.001 to 1e30.
///
/// # Accuracy
/// Relative error below 1e-13 for `p` from 1e-300, over the same ranges as [`cdf`].
pub fn quantile(p: f64, df: f64) -> Result<f64, OutOfDomain> {
    let p = probability("p", p)?;
    if p > 0.5 { upper_quantile(1.0 - p, df) } else { at_tail(p, df, Tail::Lower) }
}

/// The x with P(X > x) = `upper_p`; infinite at 0, 0 at 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, or `df` is not from 0.001 to 1e30.
///
/// # Accuracy
/// Relative error below 1e-13 for `upper_p` from 1e-300, over the same ranges as [`sf`].
pub fn upper_quantile(upper_p: f64, df: f64) -> Result<f64, OutOfDomain> {
    let p = probability("upper_p", upper_p)?;
    if p > 0.5 { quantile(1.0 - p, df) } else { at_tail(p, df, Tail::Upper) }
}

/// Both tails at x.
fn tails(x: f64, df: f64) -> Result<Tails, OutOfDomain> {
    let (x, df) = (not_negative("x", x)?, shape("df", df)?);
    Ok(incomplete_gamma(0.5 * df, 0.5 * x, 0.5 * (x - df)))
}

/// The x whose given tail is p, at most 1/2.
fn at_tail(p: f64, df: f64, tail: Tail) -> Result<f64, OutOfDomain> {
    let df = shape("df", df)?;
    Ok(match tail {
        Tail::Lower if p == 0.0 => 0.0,
        Tail::Upper if p == 0.0 => f64::INFINITY,
        _ => df * libm::exp(log_gamma_quantile(0.5 * df, p, tail)),
    })
}
