//! The studentized maximum modulus: M = the largest of `count` independent |Zᵢ|, divided by S, where the Z are standard
//! normal and df·S² is chi-squared with df degrees of freedom.
//!
//! P(M > m) = ∫ h(s) {1 - [2Φ(m s) - 1]ᵏ} ds, with the power formed so that the upper tail keeps its relative accuracy.
//! Domain: 1 to 1e6 variables, any positive df or infinity, m >= 0.
//!
//! # References
//! 1. Stoline and Ury (1979), Technometrics 21, 87-93.

use super::{degrees_of_freedom, normal, not_negative, probability, scale_mixture, student_t};
use crate::numerics::{OutOfDomain, roots};
use std::f64::consts::FRAC_1_SQRT_2;

/// Relative error at which the integral stops.
const TOLERANCE: f64 = 1e-14;

/// Lower-tail probability P(M <= `m`) for `count` variables and `df` degrees of freedom.
///
/// # Errors
/// [`OutOfDomain`] if `m` is negative or not finite, `count` is not from 1 to 1000000, or `df` is not positive.
///
/// # Accuracy
/// As listed in `tests/reference/accuracy.rs`.
pub fn cdf(m: f64, count: usize, df: f64) -> Result<f64, OutOfDomain> {
    Ok(lower(not_negative("m", m)?, variables(count)?, degrees_of_freedom("df", df)?))
}

/// Upper-tail probability P(M > `m`) for `count` variables and `df` degrees of freedom, which may be infinite.
///
/// # Errors
/// [`OutOfDomain`] if `m` is negative or not finite, `count` is not from 1 to 1000000, or `df` is not positive.
///
/// # Accuracy
/// As listed in `tests/reference/accuracy.rs`.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::studentized_maximum;
/// let m = studentized_maximum::upper_quantile(0.05, 3, f64::INFINITY)?;
/// assert!((m - 2.388).abs() < 5e-4); // Stoline and Ury's table: 2.388
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(m: f64, count: usize, df: f64) -> Result<f64, OutOfDomain> {
    Ok(upper(not_negative("m", m)?, variables(count)?, degrees_of_freedom("df", df)?))
}

/// The m with P(M <= m) = `p`; 0 at 0, infinite at 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, `count` is not from 1 to 1000000, or `df` is not positive.
pub fn quantile(p: f64, count: usize, df: f64) -> Result<f64, OutOfDomain> {
    let p = probability("p", p)?;
    solve(p, 1.0 - p, variables(count)?, degrees_of_freedom("df", df)?)
}

/// The m with P(M > m) = `upper_p`; infinite at 0, 0 at 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, `count` is not from 1 to 1000000, or `df` is not positive.
pub fn upper_quantile(upper_p: f64, count: usize, df: f64) -> Result<f64, OutOfDomain> {
    let p = probability("upper_p", upper_p)?;
    solve(1.0 - p, p, variables(count)?, degrees_of_freedom("df", df)?)
}

/// The m with the given tails, found on the smaller of the two.
fn solve(p: f64, upper_p: f64, count: f64, df: f64) -> Result<f64, OutOfDomain> {
    if p == 0.0 || upper_p == 0.0 {
        return Ok(if p == 0.0 { 0.0 } else { f64::INFINITY });
    }
    // Bonferroni's bound, sharp in the tail.
    let start = libm::log(student_t::upper_quantile(0.5 * upper_p / count, df)?);
    let log_m = roots::increasing_secant(
        |log_m| {
            let m = libm::exp(log_m);
            if upper_p <= 0.5 {
                libm::log(upper_p / upper(m, count, df))
            } else {
                libm::log(lower(m, count, df) / p)
            }
        },
        start,
        1.0,
    );
    Ok(libm::exp(log_m))
}

fn upper(m: f64, count: f64, df: f64) -> f64 {
    let log_shape = |s: f64| (libm::log(2.0 * count) + normal::log_lower(-m * s)).min(0.0);
    let inner = |s: f64| -libm::expm1(count * libm::log1p(-2.0 * normal::lower(-m * s)));
    scale_mixture::mix(df, 12, TOLERANCE, log_shape, inner).value.min(1.0)
}

fn lower(m: f64, count: f64, df: f64) -> f64 {
    let log_inner = |s: f64| count * libm::log(libm::erf(m * s * FRAC_1_SQRT_2));
    scale_mixture::mix(df, 12, TOLERANCE, log_inner, |s| libm::exp(log_inner(s))).value.min(1.0)
}

fn variables(count: usize) -> Result<f64, OutOfDomain> {
    let value = count as f64;
    if (1..=1_000_000).contains(&count) {
        Ok(value)
    } else {
        Err(OutOfDomain { argument: "count", value, allowed: "from 1 to 1000000" })
    }
}
