//! Probability distributions, one a file, each with `cdf`, `sf` (upper tail), `quantile` (argument: lower-tail
//! probability) and `upper_quantile` (argument: upper-tail probability). The value or the probability comes
//! first, then the parameters.
//!
//! Tails are computed as tails, never as 1 minus the other side. Every function answers for every f64 that its
//! documentation allows, and names the argument otherwise.

pub mod amalgamated_means;
pub mod beta;
pub mod chi_squared;
pub mod continuous;
pub mod fisher_f;
pub mod many_to_one;
pub mod multivariate_t;
pub mod noncentral_chi_squared;
pub mod noncentral_f;
pub mod noncentral_t;
pub mod normal;
mod poisson_mixture;
pub mod rank_counts;
mod scale_mixture;
pub mod student_t;
pub mod studentized_maximum;
pub mod studentized_range;

use crate::numerics::OutOfDomain;

/// `value` if it is a finite number.
fn finite(argument: &'static str, value: f64) -> Result<f64, OutOfDomain> {
    if value.is_finite() {
        Ok(value)
    } else {
        Err(OutOfDomain { argument, value, allowed: "a finite number" })
    }
}

/// `value` if it is finite and at least 0.
fn not_negative(argument: &'static str, value: f64) -> Result<f64, OutOfDomain> {
    if value.is_finite() && value >= 0.0 {
        Ok(value)
    } else {
        Err(OutOfDomain { argument, value, allowed: "a finite number, at least 0" })
    }
}

/// `value` if it is from 0 to 1.
fn probability(argument: &'static str, value: f64) -> Result<f64, OutOfDomain> {
    if (0.0..=1.0).contains(&value) {
        Ok(value)
    } else {
        Err(OutOfDomain { argument, value, allowed: "from 0 to 1" })
    }
}

/// Shapes and degrees of freedom below this are refused: the distributions there are all but two points, and
/// intermediate results would leave the range of doubles.
const SMALLEST_SHAPE: f64 = 1e-3;

/// `value` if it can be a shape parameter.
fn shape(argument: &'static str, value: f64) -> Result<f64, OutOfDomain> {
    if (SMALLEST_SHAPE..=1e30).contains(&value) {
        Ok(value)
    } else {
        Err(OutOfDomain { argument, value, allowed: "greater than 0 (from 0.001 to 1e30)" })
    }
}

/// `value` if it can be degrees of freedom: positive, infinity included.
///
/// From 10³⁰ on the answer is infinity: down to probabilities of 1e-300 the limit then differs by less than rounding.
fn degrees_of_freedom(argument: &'static str, value: f64) -> Result<f64, OutOfDomain> {
    if value >= 1e30 {
        Ok(f64::INFINITY)
    } else if value >= SMALLEST_SHAPE {
        Ok(value)
    } else {
        Err(OutOfDomain { argument, value, allowed: "greater than 0 (at least 0.001; infinity is allowed)" })
    }
}

/// `value` if it can be the noncentrality of a noncentral chi-squared or F.
fn noncentral(argument: &'static str, value: f64) -> Result<f64, OutOfDomain> {
    if (0.0..=2.0 * poisson_mixture::LARGEST_MEAN).contains(&value) {
        Ok(value)
    } else {
        Err(OutOfDomain { argument, value, allowed: "from 0 to 1e7" })
    }
}

/// `value` if it is a probability that is neither 0 nor 1.
fn inner_probability(argument: &'static str, value: f64) -> Result<f64, OutOfDomain> {
    if value > 0.0 && value < 1.0 {
        Ok(value)
    } else {
        Err(OutOfDomain { argument, value, allowed: "greater than 0 and less than 1" })
    }
}
