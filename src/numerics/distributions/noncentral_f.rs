//! The noncentral F distribution: F' = (χ'²/df1) / (χ²/df2), where χ'² is noncentral chi-squared with df1 degrees of
//! freedom and noncentrality ncp (in a one-way layout Σ nᵢ (μᵢ - μ)²/σ²) and χ² central with df2.
//!
//! A Poisson mixture of incomplete beta functions, summed in the direction of growing terms. Domain: f >= 0, df1 finite,
//! df2 may be infinite (χ'²/df1), ncp from 0 to 1e7.
//!
//! # References
//! 1. Johnson, Kotz and Balakrishnan (1995), Continuous Univariate Distributions 2, chapter 30.

use super::poisson_mixture::{self, Kernel};
use super::{
    degrees_of_freedom, fisher_f, inner_probability, noncentral, normal, not_negative, probability, shape,
};
use crate::numerics::special::{Share, Tail};
use crate::numerics::{OutOfDomain, roots};

/// Lower-tail probability P(F' <= `f`) with `df1`, `df2` degrees of freedom and noncentrality `ncp`.
///
/// # Errors
/// [`OutOfDomain`] if `f` is negative or not finite, a df is not positive, `df1` is above 1e30, or `ncp` is not from 0
/// to 1e7.
///
/// # Accuracy
/// Relative error below 1e-12 for probabilities from 1e-100, over degrees of freedom from 1 to 1e6, or infinite,
/// and `ncp` to 1e4 (`tests/reference/data/wide/noncentral_f.json`).
pub fn cdf(f: f64, df1: f64, df2: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    tail(f, df1, df2, ncp, Tail::Lower)
}

/// Upper-tail probability P(F' > `f`) with `df1`, `df2` degrees of freedom and noncentrality `ncp`: the power of an F
/// test with critical value `f`.
///
/// # Errors
/// [`OutOfDomain`] if `f` is negative or not finite, a df is not positive, `df1` is above 1e30, or `ncp` is not from 0
/// to 1e7.
///
/// # Accuracy
/// Relative error below 1e-12 for probabilities from 1e-100, over degrees of freedom from 1 to 1e6, or infinite,
/// and `ncp` to 1e4 (`tests/reference/data/wide/noncentral_f.json`).
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::noncentral_f;
/// let power = noncentral_f::sf(3.0, 2.0, 10.0, 4.0)?;
/// assert!((power - 0.451_032_109_121_465).abs() < 1e-14); // 20-digit ball arithmetic
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(f: f64, df1: f64, df2: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    tail(f, df1, df2, ncp, Tail::Upper)
}

/// The f with P(F' <= f) = `p`; 0 at 0, infinite at 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, or as for [`cdf`].
///
/// # Accuracy
/// Relative error below 1e-12, over the same ranges as [`cdf`].
pub fn quantile(p: f64, df1: f64, df2: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    let p = probability("p", p)?;
    if p > 0.5 {
        at_tail(1.0 - p, df1, df2, ncp, Tail::Upper)
    } else {
        at_tail(p, df1, df2, ncp, Tail::Lower)
    }
}

/// The f with P(F' > f) = `upper_p`; infinite at 0, 0 at 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, or as for [`sf`].
///
/// # Accuracy
/// Relative error below 1e-12, over the same ranges as [`sf`].
pub fn upper_quantile(upper_p: f64, df1: f64, df2: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    let p = probability("upper_p", upper_p)?;
    if p > 0.5 {
        at_tail(1.0 - p, df1, df2, ncp, Tail::Lower)
    } else {
        at_tail(p, df1, df2, ncp, Tail::Upper)
    }
}

/// The noncentrality with P(F' <= `f`) = `lower_p`, a limit of a confidence interval for it; 0 where even
/// noncentrality 0 gives no more than `lower_p`.
///
/// # Errors
/// [`OutOfDomain`] if `f` is negative, not finite or so large that the noncentrality would exceed 1e7, a df is not
/// positive, or `lower_p` is not between 0 and 1.
///
/// # Accuracy
/// Relative error below 1e-10 for noncentralities from 0.05 to 1e4, except where the probability hardly depends on them (a small
/// one beside large degrees of freedom): the result then solves for a probability that is within a relative 1e-13 of the given one.
///
/// # Source
/// Steiger and Fouladi (1997), in What if there were no significance tests, chapter 9.
pub fn noncentrality(f: f64, df1: f64, df2: f64, lower_p: f64) -> Result<f64, OutOfDomain> {
    let lower_p = inner_probability("lower_p", lower_p)?;
    let found = solve_noncentrality(kernel(f, df1, df2)?, f, df1, df2, lower_p);
    found.ok_or(OutOfDomain {
        argument: "f",
        value: f,
        allowed: "so small that the noncentrality stays below 1e7",
    })
}

/// The noncentrality at which the lower tail is `lower_p`, with the central distribution of f at its point; none if it would
/// exceed 1e7.
pub(super) fn solve_noncentrality(kernel: Kernel, f: f64, df1: f64, df2: f64, lower_p: f64) -> Option<f64> {
    let (side, p) = if lower_p > 0.5 { (Tail::Upper, 1.0 - lower_p) } else { (Tail::Lower, lower_p) };
    let deviate = normal::upper_quantile_unchecked(p);
    // The normal deviate of the tail is nearly linear in √(ncp + df1); the shift makes it smooth at 0.
    let root = df1.sqrt();
    let ncp_at = |x: f64| x * (x + 2.0 * root);
    let excess = |x: f64| {
        let ncp = ncp_at(x);
        if x < 0.0 || ncp > 2.0 * poisson_mixture::LARGEST_MEAN {
            return if x < 0.0 { f64::NEG_INFINITY } else { f64::INFINITY };
        }
        let reached = normal::upper_quantile_unchecked(poisson_mixture::tail(kernel, 0.5 * ncp, side));
        if side == Tail::Lower { reached - deviate } else { deviate - reached }
    };
    if excess(0.0) >= 0.0 {
        return Some(0.0);
    }
    let z = if side == Tail::Lower { deviate } else { -deviate };
    let start = (df1 * f).sqrt() + z * (1.0 + 0.5 * df1 * f / df2).sqrt() - root;
    let ncp = ncp_at(roots::increasing_secant(excess, start.clamp(0.1, 3e3), 1.0));
    (ncp < 1.999 * poisson_mixture::LARGEST_MEAN).then_some(ncp)
}

fn tail(f: f64, df1: f64, df2: f64, ncp: f64, side: Tail) -> Result<f64, OutOfDomain> {
    Ok(poisson_mixture::tail(kernel(f, df1, df2)?, 0.5 * noncentral("ncp", ncp)?, side))
}

/// The central distribution at f.
fn kernel(f: f64, df1: f64, df2: f64) -> Result<Kernel, OutOfDomain> {
    let f = not_negative("f", f)?;
    let df1 = shape("df1", df1)?;
    let df2 = degrees_of_freedom("df2", df2)?;
    if df2 == f64::INFINITY {
        let a = 0.5 * df1;
        return Ok(Kernel::Gamma { a, x: a * f, excess: a * (f - 1.0) });
    }
    let (a, b) = (0.5 * df1, 0.5 * df2);
    Ok(Kernel::Beta { a, b, point: Share::at_ratio(f, f - 1.0, a, b) })
}

/// The f whose given tail is p, at most 1/2.
fn at_tail(p: f64, df1: f64, df2: f64, ncp: f64, side: Tail) -> Result<f64, OutOfDomain> {
    let (df1, df2) = (shape("df1", df1)?, degrees_of_freedom("df2", df2)?);
    let ncp = noncentral("ncp", ncp)?;
    if p == 0.0 {
        return Ok(if side == Tail::Lower { 0.0 } else { f64::INFINITY });
    }
    // Patnaik's central F with the same first two moments of the numerator.
    let (stretch, df) = (1.0 + ncp / df1, (df1 + ncp) * (df1 + ncp) / (df1 + 2.0 * ncp));
    let start = match side {
        Tail::Lower => fisher_f::quantile(p, df, df2)?,
        Tail::Upper => fisher_f::upper_quantile(p, df, df2)?,
    };
    let deviate = normal::upper_quantile_unchecked(p);
    let excess = |log_f: f64| {
        let f = libm::exp(log_f);
        let reached = normal::upper_quantile_unchecked(match tail(f, df1, df2, ncp, side) {
            Ok(p) => p,
            // Only an infinite f is refused here.
            Err(_) => return f64::INFINITY,
        });
        if side == Tail::Lower { deviate - reached } else { reached - deviate }
    };
    let scale = (1.0 / df + if df2.is_finite() { 1.0 / df2 } else { 0.0 }).sqrt().min(1.0);
    let start = libm::log(stretch * start).clamp(-700.0, 700.0);
    Ok(libm::exp(roots::increasing_secant(excess, start, scale)))
}
