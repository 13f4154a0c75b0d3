//! Student's t distribution: T = Z / √(χ²/df).
//!
//! P(T > t) = I(df/(df+t²); df/2, 1/2) / 2 for t >= 0; both arguments of the incomplete beta function are formed
//! exactly from t²/df, so that neither tail is a difference. df may be any positive number or infinity (the
//! standard normal distribution).
//!
//! # References
//! 1. Abramowitz and Stegun (1964), 26.7.1, 26.5.27.

use super::{degrees_of_freedom, finite, normal, probability};
use crate::numerics::OutOfDomain;
use crate::numerics::special::{Share, Tail, incomplete_beta, log_beta_quantile, stirling_error};
use std::f64::consts::PI;

/// Lower-tail probability P(T <= `t`) with `df` degrees of freedom.
///
/// # Errors
/// [`OutOfDomain`] if `t` is not finite or `df` is not positive.
///
/// # Accuracy
/// Relative error below 1e-13 for probabilities above 1e-20 and below 1e-12 down to 1e-300, for
/// degrees of freedom from 0.5 to 1e7, or infinite (`tests/reference/data/wide/student_t.json`).
pub fn cdf(t: f64, df: f64) -> Result<f64, OutOfDomain> {
    sf(-t, df).map_err(|error| if error.argument == "t" { OutOfDomain { value: t, ..error } } else { error })
}

/// Upper-tail probability P(T > `t`) with `df` degrees of freedom, which may be infinite.
///
/// # Errors
/// [`OutOfDomain`] if `t` is not finite or `df` is not positive.
///
/// # Accuracy
/// Relative error below 1e-13 for probabilities above 1e-20 and below 1e-12 down to 1e-300, for
/// degrees of freedom from 0.5 to 1e7, or infinite (`tests/reference/data/wide/student_t.json`).
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::student_t;
/// let p = student_t::sf(1e6, 1.0)?; // atan(1e-6) / π
/// assert!((p / 3.183_098_861_836_845_7e-7 - 1.0).abs() < 1e-13);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(t: f64, df: f64) -> Result<f64, OutOfDomain> {
    let t = finite("t", t)?;
    let df = degrees_of_freedom("df", df)?;
    if df == f64::INFINITY {
        return normal::sf(t);
    }
    let r = t.abs() / df.sqrt();
    // Beyond 1e100 the square would lose exponent range, and the tail is its leading power.
    let upper = if r > 1e100 { far_tail(r, df) } else { incomplete(t.abs(), r, df).upper };
    Ok(if t >= 0.0 { 0.5 * upper } else { 1.0 - 0.5 * upper })
}

/// The t with P(T <= t) = `p`; infinite at 0 and 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1 or `df` is not positive.
///
/// # Accuracy
/// Relative error below 1e-13 for `p` from 1e-300, over the same ranges as [`cdf`].
pub fn quantile(p: f64, df: f64) -> Result<f64, OutOfDomain> {
    let p = probability("p", p)?;
    upper_quantile(p, df).map(|t| -t)
}

/// The t with P(T > t) = `upper_p`; infinite at 0 and 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1 or `df` is not positive.
///
/// # Accuracy
/// Relative error below 1e-13 for `upper_p` from 1e-300, over the same ranges as [`sf`].
pub fn upper_quantile(upper_p: f64, df: f64) -> Result<f64, OutOfDomain> {
    let p = probability("upper_p", upper_p)?;
    let df = degrees_of_freedom("df", df)?;
    if df == f64::INFINITY {
        return normal::upper_quantile(p);
    }
    if p > 0.5 {
        return upper_quantile(1.0 - p, df).map(|t| -t);
    }
    if p == 0.0 || p == 0.5 {
        return Ok(if p == 0.0 { f64::INFINITY } else { 0.0 });
    }
    // P(|T| > t) = 2p; close to the middle its complement has the digits.
    let (p, tail) = if p < 0.25 { (2.0 * p, Tail::Upper) } else { (1.0 - 2.0 * p, Tail::Lower) };
    Ok(libm::exp(0.5 * log_beta_quantile(0.5, 0.5 * df, p, tail)))
}

/// The incomplete beta function of t²/(df+t²), with r = |t|/√df.
fn incomplete(t: f64, r: f64, df: f64) -> crate::numerics::special::Tails {
    let y = 1.0 / (1.0 + r * r);
    let excess = 0.5 * y * (t - 1.0) * (t + 1.0);
    incomplete_beta(0.5, 0.5 * df, Share { x: r * r * y, y, excess })
}

/// P(|T| > t) for r = |t|/√df so large that only the leading power counts: r^-df / (df/2 B(df/2, 1/2)).
fn far_tail(r: f64, df: f64) -> f64 {
    let a = 0.5 * df;
    // log(a B(a, 1/2)) = log √π + log Γ(a + 1) - log Γ(a + 1/2), by Stirling's formula with its error.
    let half = a + 0.5;
    let log_gamma_ratio =
        half * libm::log1p(0.5 / half) - 0.5 + 0.5 * libm::log(half) + stirling_error(a + 1.0)
            - stirling_error(half);
    libm::exp(-df * libm::log(r) - log_gamma_ratio - 0.5 * libm::log(PI))
}
