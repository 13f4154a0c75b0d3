//! The beta distribution on [0, 1], with density proportional to xᵃ⁻¹(1-x)ᵇ⁻¹.
//!
//! # References
//! 1. Abramowitz and Stegun (1964), 26.5.1.

use super::{probability, shape};
use crate::numerics::OutOfDomain;
use crate::numerics::special::{Share, Tail, Tails, incomplete_beta, log_beta_quantile};

/// Lower-tail probability P(X <= `x`) with shapes `a` and `b`.
///
/// # Errors
/// [`OutOfDomain`] if `x` is not from 0 to 1, or a shape is not from 0.001 to 1e30.
///
/// # Accuracy
/// Relative error below 1e-13 for probabilities above 1e-20 and below 1e-12 down to 1e-300, for
/// shapes from 0.5 to 1e7 (`tests/reference/data/wide/beta.json`).
pub fn cdf(x: f64, a: f64, b: f64) -> Result<f64, OutOfDomain> {
    tails(x, a, b).map(|tails| tails.lower)
}

/// Upper-tail probability P(X > `x`) with shapes `a` and `b`.
///
/// # Errors
/// [`OutOfDomain`] if `x` is not from 0 to 1, or a shape is not from 0.001 to 1e30.
///
/// # Accuracy
/// Relative error below 1e-13 for probabilities above 1e-20 and below 1e-12 down to 1e-300, for
/// shapes from 0.5 to 1e7 (`tests/reference/data/wide/beta.json`).
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::beta;
/// assert!((beta::sf(0.25, 1.0, 2.0)? - 0.5625).abs() < 1e-15); // (1 - x)²
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(x: f64, a: f64, b: f64) -> Result<f64, OutOfDomain> {
    tails(x, a, b).map(|tails| tails.upper)
}

/// The x with P(X <= x) = `p`; 0 at 0, 1 at 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, or a shape is not from 0.001 to 1e30.
///
/// # Accuracy
/// Relative error below 1e-13 for `p` from 1e-300, over the same ranges as [`cdf`].
pub fn quantile(p: f64, a: f64, b: f64) -> Result<f64, OutOfDomain> {
    let p = probability("p", p)?;
    if p > 0.5 { upper_quantile(1.0 - p, a, b) } else { at_tail(p, a, b, Tail::Lower) }
}

/// The x with P(X > x) = `upper_p`; 1 at 0, 0 at 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, or a shape is not from 0.001 to 1e30.
///
/// # Accuracy
/// Relative error below 1e-13 for `upper_p` from 1e-300, over the same ranges as [`sf`].
pub fn upper_quantile(upper_p: f64, a: f64, b: f64) -> Result<f64, OutOfDomain> {
    let p = probability("upper_p", upper_p)?;
    if p > 0.5 { quantile(1.0 - p, a, b) } else { at_tail(p, a, b, Tail::Upper) }
}

/// Both tails at x.
fn tails(x: f64, a: f64, b: f64) -> Result<Tails, OutOfDomain> {
    let (x, a, b) = (probability("x", x)?, shape("a", a)?, shape("b", b)?);
    Ok(incomplete_beta(a, b, Share::at(x, a, b)))
}

/// The x whose given tail is p, at most 1/2.
fn at_tail(p: f64, a: f64, b: f64, tail: Tail) -> Result<f64, OutOfDomain> {
    let (a, b) = (shape("a", a)?, shape("b", b)?);
    Ok(match tail {
        Tail::Lower if p == 0.0 => 0.0,
        Tail::Upper if p == 0.0 => 1.0,
        _ => 1.0 / (1.0 + b / a * libm::exp(-log_beta_quantile(a, b, p, tail))),
    })
}
