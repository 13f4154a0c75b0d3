//! The noncentral t distribution: T = (Z + ncp) / S, where df·S² is chi-squared with df degrees of freedom.
//!
//! P(T <= t) = ∫ h(s) Φ(t s - ncp) ds, each tail an integral of a positive function of its own, so that neither is a
//! difference; a tail of nearly 1 comes from the other. Domain: any finite t, ncp up to 1e8 in size, any positive df or infinity (a normal variable
//! with mean ncp).
//!
//! # References
//! 1. Johnson, Kotz and Balakrishnan (1995), Continuous Univariate Distributions 2, chapter 31.

use super::{degrees_of_freedom, finite, inner_probability, normal, probability, scale_mixture};
use crate::numerics::special::incomplete_gamma;
use crate::numerics::{OutOfDomain, quadrature, roots};
use std::f64::consts::PI;

const TOLERANCE: f64 = 1e-16;
/// Beyond this |t| the tail is its leading power: the next term is about (1 + ncp²) df / t² of it.
const FAR: f64 = 1e25;

/// Lower-tail probability P(T <= `t`) with `df` degrees of freedom and noncentrality `ncp`.
///
/// # Errors
/// [`OutOfDomain`] if `t` is not finite, `ncp` is beyond ±1e8 or not a number, or `df` is not positive.
///
/// # Accuracy
/// Relative error below 1e-12 for probabilities from 1e-100, over degrees of freedom from 1 to 1e6, or infinite,
/// and `ncp` from -1e4 to 1e4 (`tests/reference/data/wide/noncentral_t.json`).
pub fn cdf(t: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    let (t, df, ncp) = (finite("t", t)?, degrees_of_freedom("df", df)?, moderate("ncp", ncp)?);
    Ok(lower(t, df, ncp))
}

/// Upper-tail probability P(T > `t`) with `df` degrees of freedom and noncentrality `ncp`.
///
/// # Errors
/// [`OutOfDomain`] if `t` is not finite, `ncp` is beyond ±1e8 or not a number, or `df` is not positive.
///
/// # Accuracy
/// Relative error below 1e-12 for probabilities from 1e-100, over degrees of freedom from 1 to 1e6, or infinite,
/// and `ncp` from -1e4 to 1e4 (`tests/reference/data/wide/noncentral_t.json`).
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::noncentral_t;
/// // Power of a one-sided t test at its own critical value, without an effect: the level.
/// let level = noncentral_t::sf(1.812_461_122_811_676, 10.0, 0.0)?;
/// assert!((level - 0.05).abs() < 1e-14);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(t: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    let (t, df, ncp) = (finite("t", t)?, degrees_of_freedom("df", df)?, moderate("ncp", ncp)?);
    Ok(lower(-t, df, -ncp))
}

/// The t with P(T <= t) = `p`; infinite at 0 and 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, `ncp` is beyond ±1e8 or not a number, or `df` is not positive.
///
/// # Accuracy
/// Relative error below 1e-12, over the same ranges as [`cdf`].
pub fn quantile(p: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    let (p, df, ncp) = (probability("p", p)?, degrees_of_freedom("df", df)?, moderate("ncp", ncp)?);
    if p == 0.0 || p == 1.0 {
        return Ok(if p == 0.0 { f64::NEG_INFINITY } else { f64::INFINITY });
    }
    if p > 0.5 {
        return Ok(-lower_quantile(1.0 - p, df, -ncp));
    }
    Ok(lower_quantile(p, df, ncp))
}

/// The t with P(T > t) = `upper_p`; infinite at 0 and 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, `ncp` is beyond ±1e8 or not a number, or `df` is not positive.
///
/// # Accuracy
/// Relative error below 1e-12, over the same ranges as [`sf`].
pub fn upper_quantile(upper_p: f64, df: f64, ncp: f64) -> Result<f64, OutOfDomain> {
    probability("upper_p", upper_p)?;
    quantile(upper_p, df, -moderate("ncp", ncp)?).map(|t| -t)
}

/// The noncentrality with P(T <= `t`) = `lower_p`: the limits of a confidence interval for it.
///
/// # Errors
/// [`OutOfDomain`] if `t` is beyond ±1e8 or not a number, `df` is not positive, or `lower_p` is not between 0 and 1.
///
/// # Accuracy
/// Relative error below 1e-10 for noncentralities from 0.05 to 1e4, except where the probability hardly depends on them (a small
/// one beside large degrees of freedom): the result then solves for a probability that is within a relative 1e-13 of the given one.
///
/// # Source
/// Steiger and Fouladi (1997), in What if there were no significance tests, chapter 9.
pub fn noncentrality(t: f64, df: f64, lower_p: f64) -> Result<f64, OutOfDomain> {
    let (t, df) = (moderate("t", t)?, degrees_of_freedom("df", df)?);
    let lower_p = inner_probability("lower_p", lower_p)?;
    if lower_p > 0.5 {
        return Ok(-noncentrality_at_lower(-t, df, 1.0 - lower_p));
    }
    Ok(noncentrality_at_lower(t, df, lower_p))
}

/// The noncentrality at which the lower tail is `p`, at most 1/2. The normal deviate of the tail is nearly linear in
/// it.
fn noncentrality_at_lower(t: f64, df: f64, p: f64) -> f64 {
    let deviate = normal::upper_quantile_unchecked(p);
    // T is about normal with this standard deviation, relative to its noncentrality.
    let spread = (1.0 + 0.5 * t * t / df).sqrt();
    let excess = |ncp| normal::upper_quantile_unchecked(lower(t, df, ncp)) - deviate;
    roots::increasing_secant_from(excess, t + deviate * spread, 1.0, 1.0 / spread)
}

/// The t at which the lower tail is `p`, at most 1/2, solved in arsinh t because the tails may be heavy.
fn lower_quantile(p: f64, df: f64, ncp: f64) -> f64 {
    let deviate = normal::upper_quantile_unchecked(p);
    let start = libm::asinh(ncp - deviate * (1.0 + 0.5 * ncp * ncp / df).sqrt());
    // Relative to ncp, arsinh t changes over lengths of this order.
    let scale = (1.0 + ncp * ncp / df.max(1.0)).sqrt() / (1.0 + ncp * ncp).sqrt();
    let arsinh = roots::increasing_secant(
        |x| deviate - normal::upper_quantile_unchecked(lower(libm::sinh(x), df, ncp)),
        start,
        scale.min(1.0),
    );
    libm::sinh(arsinh)
}

/// P(T <= t).
fn lower(t: f64, df: f64, ncp: f64) -> f64 {
    if t.abs() > FAR {
        // S is then so small that its density is its leading power: P(|T| > t) is proportional to t^-df.
        let share = libm::exp(-df * libm::log(t.abs() / FAR));
        return if t < 0.0 {
            share * integral(-FAR, df, ncp)
        } else {
            1.0 - share * integral(-FAR, df, -ncp)
        };
    }
    let tail = integral(t, df, ncp);
    // So near 1 the complement has more digits.
    if tail > 0.9 { 1.0 - integral(-t, df, -ncp).min(1.0) } else { tail }
}

/// P(T <= t), as an integral of its own.
fn integral(t: f64, df: f64, ncp: f64) -> f64 {
    // log S has a standard deviation of about 1/√(2 df), and Φ(t s - ncp) rises over a change of log s by 1/ncp.
    let sharpness = if t * ncp > 0.0 { ncp.abs() / (2.0 * df).sqrt().max(1.0) } else { 0.0 };
    if sharpness > 20.0 && df.is_finite() {
        return lower_given_z(t, df, ncp);
    }
    let count = 12 * (2 + sharpness as usize / 2);
    let log_shape = |s: f64| normal::log_lower(t * s - ncp);
    scale_mixture::mix(df, count, TOLERANCE, log_shape, |s| normal::lower(t * s - ncp)).value.min(1.0)
}

/// P(T <= t) for t and ncp of one sign and a large ncp, as a mixture over the normal variable: ∫ φ(z) P(t S >= z + ncp)
/// dz.
fn lower_given_z(t: f64, df: f64, ncp: f64) -> f64 {
    let log_integrand = |z: f64| {
        let s = ((z + ncp) / t).max(0.0);
        let tails = incomplete_gamma(0.5 * df, 0.5 * df * s * s, 0.5 * df * (s - 1.0) * (s + 1.0));
        -0.5 * z * z + libm::log(if t > 0.0 { tails.upper } else { tails.lower })
    };
    let integral = quadrature::bell(log_integrand, 0.0, 1.0, TOLERANCE).value;
    (integral / (2.0 * PI).sqrt()).min(1.0)
}

/// `value` if it is a number of moderate size.
fn moderate(argument: &'static str, value: f64) -> Result<f64, OutOfDomain> {
    if value.abs() <= 1e8 {
        Ok(value)
    } else {
        Err(OutOfDomain { argument, value, allowed: "from -1e8 to 1e8" })
    }
}
