//! The studentized maximum modulus: M = the largest of `count` independent |Zᵢ|, divided by S, where the Z are standard
//! normal and df·S² is chi-squared with df degrees of freedom.
//!
//! P(M > m) = ∫ h(s) {1 - [2Φ(m s) - 1]ᵏ} ds, with the power formed so that the upper tail keeps its relative accuracy.
//! Domain: 1 to 1e6 variables, any positive df or infinity, m >= 0.
//!
//! A lower tail above 1/2 is the complement of the upper one; below, it is an integral of its own.
//!
//! # References
//! 1. Stoline and Ury (1979), Technometrics 21, 87-93 (the distribution; one of its table values is in the example).
//! 2. Trefethen and Weideman (2014), SIAM Review 56, 385-458 (the quadrature).

use super::{
    degrees_of_freedom, normal, not_negative, probability,
    scale_mixture::{self, FAR, Tail},
    student_t,
};
use crate::numerics::{OutOfDomain, roots};
use std::f64::consts::FRAC_1_SQRT_2;

/// Lower-tail probability P(M <= `m`) for `count` variables and `df` degrees of freedom.
///
/// # Errors
/// [`OutOfDomain`] if `m` is negative or not finite, `count` is not from 1 to 1000000, or `df` is not positive.
///
/// # Accuracy
/// For 1 to 200 variables and df from 0.5: absolute error at most 1e-12; relative error at most 1e-12 down to 1e-14.
/// Reached: `tests/reference/ACCURACY.md`.
pub fn cdf(m: f64, count: usize, df: f64) -> Result<f64, OutOfDomain> {
    let (m, count, df) = (not_negative("m", m)?, variables(count)?, degrees_of_freedom("df", df)?);
    let upper = upper(m, count, df).value;
    // An integral that is nearly the whole has a sharp left end; its complement is smooth.
    Ok(if upper <= 0.5 { 1.0 - upper } else { lower(m, count, df).value })
}

/// Upper-tail probability P(M > `m`) for `count` variables and `df` degrees of freedom, which may be infinite.
///
/// # Errors
/// [`OutOfDomain`] if `m` is negative or not finite, `count` is not from 1 to 1000000, or `df` is not positive.
///
/// # Accuracy
/// For 1 to 200 variables and df from 0.5: absolute error at most 1e-12; relative error at most 1e-12 down to 1e-14.
/// Reached: `tests/reference/ACCURACY.md`.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::studentized_maximum;
/// let m = studentized_maximum::upper_quantile(0.05, 3, f64::INFINITY)?;
/// assert!((m - 2.388).abs() < 5e-4); // Stoline and Ury's table: 2.388
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(m: f64, count: usize, df: f64) -> Result<f64, OutOfDomain> {
    let (m, count, df) = (not_negative("m", m)?, variables(count)?, degrees_of_freedom("df", df)?);
    Ok(if m == 0.0 { 1.0 } else { upper(m, count, df).value })
}

/// The m with P(M <= m) = `p`; 0 at 0, infinite at 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, `count` is not from 1 to 1000000, or `df` is not positive.
///
/// # Accuracy
/// Relative error at most 1e-12 for 1 to 200 variables, df from 0.5 and probabilities down to 1e-14.
pub fn quantile(p: f64, count: usize, df: f64) -> Result<f64, OutOfDomain> {
    let p = probability("p", p)?;
    solve(p, 1.0 - p, variables(count)?, degrees_of_freedom("df", df)?)
}

/// The m with P(M > m) = `upper_p`; infinite at 0, 0 at 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, `count` is not from 1 to 1000000, or `df` is not positive.
///
/// # Accuracy
/// Relative error at most 1e-12 for 1 to 200 variables, df from 0.5 and probabilities down to 1e-14.
pub fn upper_quantile(upper_p: f64, count: usize, df: f64) -> Result<f64, OutOfDomain> {
    let p = probability("upper_p", upper_p)?;
    solve(1.0 - p, p, variables(count)?, degrees_of_freedom("df", df)?)
}

/// The m with the given tails, found on the smaller of the two.
fn solve(p: f64, upper_p: f64, count: f64, df: f64) -> Result<f64, OutOfDomain> {
    if p == 0.0 || upper_p == 0.0 {
        return Ok(if p == 0.0 { 0.0 } else { f64::INFINITY });
    }
    // Bonferroni's bound, sharp in the tail; one variable and a p below the rounding of 1 leave 0, and then m is about p.
    let bound = student_t::upper_quantile(0.5 * upper_p / count, df)?;
    let start = libm::log(if bound > 0.0 { bound } else { p });
    let log_m = if upper_p <= 0.5 {
        roots::log_tail(|log_m| upper(libm::exp(log_m), count, df).pair(), upper_p, true, start)
    } else {
        roots::log_tail(|log_m| lower(libm::exp(log_m), count, df).pair(), p, false, start)
    };
    Ok(libm::exp(log_m))
}

/// P(M > m), and the derivative of its logarithm by log m.
fn upper(m: f64, count: f64, df: f64) -> Tail {
    if m > FAR {
        return upper(FAR, count, df).beyond(m, df);
    }
    let log_shape = |s: f64| (libm::log(2.0 * count) + normal::log_lower(-m * s)).min(0.0);
    let inner = |s: f64| -libm::expm1(count * libm::log1p(-2.0 * normal::lower(-m * s)));
    scale_mixture::tail(df, 1e-13, log_shape, inner)
}

/// P(M <= m), and the derivative of its logarithm by log m.
fn lower(m: f64, count: f64, df: f64) -> Tail {
    let log_inner = |s: f64| count * libm::log(libm::erf(m * s * FRAC_1_SQRT_2));
    let inner = |s: f64| libm::exp(log_inner(s));
    scale_mixture::tail(df, 1e-13, log_inner, inner)
}

fn variables(count: usize) -> Result<f64, OutOfDomain> {
    let value = count as f64;
    if (1..=1_000_000).contains(&count) {
        Ok(value)
    } else {
        Err(OutOfDomain { argument: "count", value, allowed: "from 1 to 1000000" })
    }
}
