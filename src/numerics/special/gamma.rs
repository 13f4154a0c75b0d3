//! Regularised incomplete gamma function, both tails: P(a, x) = γ(a, x) / Γ(a) and Q = 1 - P.
//!
//! Domain: a > 0 finite, x >= 0. The series of positive terms serves x below about a, the integral of the
//! log-concave density tᵃe⁻ᵗ in log t, from x away from its peak at t = a, everything else; the smaller tail is always
//! computed directly. The factor xᵃe⁻ˣ/Γ(a) comes from Stirling's formula with its error, so that large a
//! costs no digits.
//!
//! # References
//! 1. Abramowitz and Stegun (1964), 6.5.29 (series).
//! 2. Loader (2000), Fast and accurate computation of binomial probabilities (the factor).

use super::{Tail, Tails, exp_minus_linear, log_ratio_minus_linear, stirling_error, tail_integral};
use crate::numerics::roots::{self, Value};
use std::f64::consts::PI;

/// Longest series used; beyond it rounding errors in the terms would add up, and the integral is as fast.
const MAX_TERMS: usize = 300;

/// P(a, x), Q(a, x) and the derivative of P by log x.
///
/// `a` must be positive and finite, `x` not negative: callers check. `excess` is x - a, computed without cancellation: where a is
/// large the distribution is narrow, and the digits of the distance from its peak are those that count.
///
/// # Accuracy
/// Relative error about 1e-14 in the middle, growing to 2e-13 · |log p| / 700 in the tails.
pub fn incomplete_gamma(a: f64, x: f64, excess: f64) -> Tails {
    if x == 0.0 {
        return Tails { lower: 0.0, upper: 1.0, slope: 0.0 };
    }
    if x == f64::INFINITY {
        return Tails { lower: 1.0, upper: 0.0, slope: 0.0 };
    }
    let slope = libm::exp(log_gamma_density(a, x, excess));
    if excess <= 0.0 {
        let lower = (slope * lower_gamma_over_density(a, x, excess)).min(1.0);
        Tails { lower, upper: 1.0 - lower, slope }
    } else {
        let upper = (slope * upper_gamma_over_density(x, excess)).min(1.0);
        Tails { lower: 1.0 - upper, upper, slope }
    }
}

/// The logarithm of x/a at which the given tail has probability `p`, for 0 < p < 1.
///
/// x relative to the peak at a keeps its digits however large a is.
pub fn log_gamma_quantile(a: f64, p: f64, tail: Tail) -> f64 {
    let log_p = libm::log(p);
    let normal = crate::numerics::distributions::normal::upper_quantile_unchecked(p);
    // For small x the lower tail is xᵃ / Γ(a + 1) up to a factor 1 - x; elsewhere the cube root is nearly normal
    // (Wilson and Hilferty 1931), which is poor where the first is good.
    let start = match tail {
        Tail::Lower => {
            let leading = (log_p + libm::lgamma(a + 1.0)) / a;
            if leading < -40.0 {
                return leading - libm::log(a);
            }
            (leading - libm::log(a)).max(wilson_hilferty(a, -normal))
        }
        Tail::Upper => wilson_hilferty(a, normal),
    };
    let tails = |w: f64| incomplete_gamma(a, a * libm::exp(w), a * libm::expm1(w));
    solve_tail(tails, log_p, tail, start, (1.0 / a).sqrt())
}

/// The w at which the logarithm of a tail equals `log_p`, by Newton's iteration on that logarithm: log-concave
/// densities have log-concave tails, so that it converges from everywhere where the tail does not underflow.
pub(super) fn solve_tail(
    tails: impl Fn(f64) -> Tails,
    log_p: f64,
    tail: Tail,
    start: f64,
    scale: f64,
) -> f64 {
    roots::increasing(
        |w| {
            let at = tails(w);
            match tail {
                Tail::Lower => {
                    Value { value: libm::log(at.lower) - log_p, slope: at.slope / at.lower, chord: 0.0 }
                }
                Tail::Upper => {
                    Value { value: log_p - libm::log(at.upper), slope: at.slope / at.upper, chord: 0.0 }
                }
            }
        },
        start,
        scale,
    )
}

/// log(x/a) of the approximate quantile at normal deviate `z`; far below where the cube would be negative.
fn wilson_hilferty(a: f64, z: f64) -> f64 {
    let c = 1.0 / (9.0 * a);
    let root = 1.0 - c + z * c.sqrt();
    if root > 0.0 { 3.0 * libm::log(root) } else { f64::NEG_INFINITY }
}

/// log of xᵃ e⁻ˣ / Γ(a).
pub fn log_gamma_density(a: f64, x: f64, excess: f64) -> f64 {
    a * log_ratio_minus_linear(x / a, excess / a) - stirling_error(a) + 0.5 * libm::log(a / (2.0 * PI))
}

/// Q(a, x) divided by xᵃ e⁻ˣ / Γ(a), for x >= a; it depends on a through `excess` = x - a alone.
pub fn upper_gamma_over_density(x: f64, excess: f64) -> f64 {
    tail_integral(|h| excess * h + x * exp_minus_linear(h), excess, x)
}

/// P(a, x) divided by xᵃ e⁻ˣ / Γ(a), for x <= a, with `excess` = x - a.
pub fn lower_gamma_over_density(a: f64, x: f64, excess: f64) -> f64 {
    let (mut term, mut sum) = (1.0 / a, 1.0 / a);
    for n in 1..MAX_TERMS {
        term *= x / (a + n as f64);
        sum += term;
        if term < 1e-17 * sum {
            return sum;
        }
    }
    tail_integral(|h| x * exp_minus_linear(-h) - excess * h, -excess, x)
}
