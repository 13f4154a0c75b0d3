//! Fisher's F distribution: F = (χ²₁/df1) / (χ²₂/df2).
//!
//! P(F > f) = I(y; df2/2, df1/2) with y = df2/(df1 f + df2); both arguments of the incomplete beta function are
//! formed from their ratio, so that neither tail is a difference. Each df may be any positive number or infinity
//! (a chi-squared divided by its df, or its reciprocal; with both infinite F is 1).
//!
//! # References
//! 1. Abramowitz and Stegun (1964), 26.6.2, 26.5.28.

use super::{chi_squared, degrees_of_freedom, not_negative, probability};
use crate::numerics::OutOfDomain;
use crate::numerics::special::{Share, Tail, Tails, incomplete_beta, incomplete_gamma, log_beta_quantile};

/// Lower-tail probability P(F <= `f`) with `df1` and `df2` degrees of freedom.
///
/// # Errors
/// [`OutOfDomain`] if `f` is negative or not finite, or a df is not positive.
///
/// # Accuracy
/// Relative error below 1e-13 for probabilities above 1e-20 and below 1e-12 down to 1e-300, for
/// degrees of freedom from 0.5 to 1e7, or infinite (`tests/reference/data/wide/fisher_f.json`).
pub fn cdf(f: f64, df1: f64, df2: f64) -> Result<f64, OutOfDomain> {
    tails(f, df1, df2).map(|tails| tails.lower)
}

/// Upper-tail probability P(F > `f`) with `df1` and `df2` degrees of freedom, which may be infinite.
///
/// # Errors
/// [`OutOfDomain`] if `f` is negative or not finite, or a df is not positive.
///
/// # Accuracy
/// Relative error below 1e-13 for probabilities above 1e-20 and below 1e-12 down to 1e-300, for
/// degrees of freedom from 0.5 to 1e7, or infinite (`tests/reference/data/wide/fisher_f.json`).
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::fisher_f;
/// let p = fisher_f::sf(1e6, 2.0, 2.0)?; // 1 / (1 + f)
/// assert!((p / 9.999_990_000_01e-7 - 1.0).abs() < 1e-13);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(f: f64, df1: f64, df2: f64) -> Result<f64, OutOfDomain> {
    tails(f, df1, df2).map(|tails| tails.upper)
}

/// The f with P(F <= f) = `p`; 0 at 0, infinite at 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, or a df is not positive.
///
/// # Accuracy
/// Relative error below 1e-13 for `p` from 1e-300, over the same ranges as [`cdf`].
pub fn quantile(p: f64, df1: f64, df2: f64) -> Result<f64, OutOfDomain> {
    let p = probability("p", p)?;
    if p > 0.5 { upper_quantile(1.0 - p, df1, df2) } else { at_tail(p, df1, df2, Tail::Lower) }
}

/// The f with P(F > f) = `upper_p`; infinite at 0, 0 at 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, or a df is not positive.
///
/// # Accuracy
/// Relative error below 1e-13 for `upper_p` from 1e-300, over the same ranges as [`sf`].
pub fn upper_quantile(upper_p: f64, df1: f64, df2: f64) -> Result<f64, OutOfDomain> {
    let p = probability("upper_p", upper_p)?;
    if p > 0.5 { quantile(1.0 - p, df1, df2) } else { at_tail(p, df1, df2, Tail::Upper) }
}

/// Both tails at f; the slope is by log f.
fn tails(f: f64, df1: f64, df2: f64) -> Result<Tails, OutOfDomain> {
    let f = not_negative("f", f)?;
    let df1 = degrees_of_freedom("df1", df1)?;
    let df2 = degrees_of_freedom("df2", df2)?;
    Ok(match (df1.is_infinite(), df2.is_infinite()) {
        (false, false) => {
            let (a, b) = (0.5 * df1, 0.5 * df2);
            incomplete_beta(a, b, Share::at_ratio(f, f - 1.0, a, b))
        }
        (false, true) => incomplete_gamma(0.5 * df1, 0.5 * df1 * f, 0.5 * df1 * (f - 1.0)),
        (true, false) => {
            let a = 0.5 * df2;
            let Tails { lower, upper, slope } = incomplete_gamma(a, a / f, a * ((1.0 - f) / f));
            Tails { lower: upper, upper: lower, slope }
        }
        (true, true) if f < 1.0 => Tails { lower: 0.0, upper: 1.0, slope: 0.0 },
        (true, true) => Tails { lower: 1.0, upper: 0.0, slope: 0.0 },
    })
}

/// The f whose given tail is p, at most 1/2.
fn at_tail(p: f64, df1: f64, df2: f64, tail: Tail) -> Result<f64, OutOfDomain> {
    let df1 = degrees_of_freedom("df1", df1)?;
    let df2 = degrees_of_freedom("df2", df2)?;
    let infinite = (df1.is_infinite(), df2.is_infinite());
    Ok(match (infinite, tail) {
        ((true, true), _) => 1.0,
        (_, Tail::Lower) if p == 0.0 => 0.0,
        (_, Tail::Upper) if p == 0.0 => f64::INFINITY,
        ((false, true), Tail::Lower) => chi_squared::quantile(p, df1)? / df1,
        ((false, true), Tail::Upper) => chi_squared::upper_quantile(p, df1)? / df1,
        ((true, false), Tail::Lower) => df2 / chi_squared::upper_quantile(p, df2)?,
        ((true, false), Tail::Upper) => df2 / chi_squared::quantile(p, df2)?,
        ((false, false), _) => libm::exp(log_beta_quantile(0.5 * df1, 0.5 * df2, p, tail)),
    })
}
