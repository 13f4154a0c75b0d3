//! Regularised incomplete beta function, both tails: I(x; a, b) = ∫₀ˣ tᵃ⁻¹ (1-t)ᵇ⁻¹ dt / B(a, b) and 1 - I.
//!
//! A point is given by x, by y = 1 - x and by its distance from the peak, each exact: near x = 1 the digits are in y, and where
//! a and b are large those of the distance count, because the distribution is narrow. The series of positive
//! terms serves where it is short, the integral of the log-concave density tᵃ(1-t)ᵇ in logit t, from x away from
//! its peak at a/(a+b), everything else; the smaller tail is computed directly. The factor xᵃyᵇ/B(a, b) comes from
//! Stirling's formula with its error, so that large a and b cost no digits.
//!
//! # References
//! 1. Abramowitz and Stegun (1964), 26.5.4 (series, in the form of 6.6.8 with 15.3.3).
//! 2. Loader (2000), Fast and accurate computation of binomial probabilities (the factor).

use super::gamma::solve_tail;
use super::{
    Tail, Tails, exp_minus_linear, log_minus_linear, log_ratio_minus_linear, product_minus, stirling_error,
    tail_integral,
};
use std::f64::consts::PI;

/// Longest series used; beyond it rounding errors in the terms would add up, and the integral is as fast.
const MAX_TERMS: usize = 300;

/// A point of [0, 1] as the incomplete beta function with certain a and b sees it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Share {
    /// The distance from 0.
    pub x: f64,
    /// The distance from 1.
    pub y: f64,
    /// b x - a y, free of cancellation: how far the point lies beyond the peak at a/(a+b).
    pub excess: f64,
}

impl Share {
    /// The point `x`, taken as exact.
    pub fn at(x: f64, a: f64, b: f64) -> Share {
        // b x - a (1 - x) with the rounding error of a + b carried along (Knuth 1969, section 4.2.2, theorem C).
        let n = a + b;
        let rounding = (a - (n - (n - a))) + (b - (n - a));
        Share { x, y: 1.0 - x, excess: product_minus(x, n, a) + rounding * x }
    }

    /// The point where the odds x/y are `ratio` times those at the peak, a/b; `beyond` is ratio - 1, computed without
    /// cancellation.
    pub fn at_ratio(ratio: f64, beyond: f64, a: f64, b: f64) -> Share {
        let odds = a / b * ratio;
        if odds.is_infinite() {
            return Share { x: 1.0, y: 0.0, excess: b };
        }
        let y = 1.0 / (1.0 + odds);
        Share { x: odds * y, y, excess: a * y * beyond }
    }

    /// The same point seen from the other end, with a and b exchanged.
    pub fn mirrored(self) -> Share {
        Share { x: self.y, y: self.x, excess: -self.excess }
    }
}

/// I(x; a, b), its complement, and the derivative of I by logit x.
///
/// `a`, `b` must be positive and finite, the point's x and y in [0, 1]: callers check.
///
/// # Accuracy
/// Relative error about 1e-14 in the middle, growing to 2e-13 · |log p| / 700 in the tails.
pub fn incomplete_beta(a: f64, b: f64, point: Share) -> Tails {
    let Share { x, y, excess } = point;
    if x == 0.0 {
        return Tails { lower: 0.0, upper: 1.0, slope: 0.0 };
    }
    if y == 0.0 {
        return Tails { lower: 1.0, upper: 0.0, slope: 0.0 };
    }
    let slope = libm::exp(log_beta_density(a, b, point));
    if excess <= 0.0 {
        let lower = smaller_side(a, b, point, slope);
        Tails { lower, upper: 1.0 - lower, slope }
    } else {
        let upper = smaller_side(b, a, point.mirrored(), slope);
        Tails { lower: 1.0 - upper, upper, slope }
    }
}

/// I(x; a, b) for x at most a/(a+b), given xᵃ yᵇ / B(a, b).
fn smaller_side(a: f64, b: f64, point: Share, density: f64) -> f64 {
    // With b near 0 nearly all lies beside y = 0, and the integral would cross a long flat stretch before it falls.
    // The other side is a short series, and what it leaves of 1 keeps 12 digits; where the stretch is short enough for the
    // integral, at least a tenth must be left, which keeps 14.
    if b < 0.5 && point.y < 0.125 && a * point.y < 16.0 {
        let left = 1.0 - density * lower_beta_over_density(b, a, point.mirrored());
        if left > if b < 0.1 { 1e-3 } else { 0.1 } {
            return left;
        }
    }
    (density * lower_beta_over_density(a, b, point)).min(1.0)
}

/// The logarithm of (x/y)/(a/b) at which the given tail has probability `p`, for 0 < p < 1.
///
/// The odds x/y relative to those at the peak keep their digits however large a and b are.
pub fn log_beta_quantile(a: f64, b: f64, p: f64, tail: Tail) -> f64 {
    if tail == Tail::Upper {
        return -log_beta_quantile(b, a, p, Tail::Lower);
    }
    let log_p = libm::log(p);
    let scale = (1.0 / a + 1.0 / b).sqrt();
    // For small x the lower tail is xᵃ / (a B(a, b)); in the middle logit x is roughly normal.
    let log_a_beta =
        0.5 * libm::log(2.0 * PI * scale * scale * a * a) - a * libm::log1p(b / a) - b * libm::log1p(a / b)
            + stirling_error(a)
            + stirling_error(b)
            - stirling_error(a + b);
    let leading = (log_p + log_a_beta) / a;
    let peak = libm::log(a / b);
    if leading < -40.0 - libm::log1p(b) {
        return leading - peak;
    }
    let middle = -scale * crate::numerics::distributions::normal::upper_quantile_unchecked(p);
    let start = middle.max((leading - peak).min(0.0));
    let tails = |w: f64| incomplete_beta(a, b, Share::at_ratio(libm::exp(w), libm::expm1(w), a, b));
    solve_tail(tails, log_p, tail, start, scale)
}

/// log of xᵃ yᵇ / B(a, b).
///
/// With x = (1 + u) a/(a+b) and y = (1 + v) b/(a+b) the terms a u and b v cancel exactly, which leaves
/// two terms of one sign.
pub fn log_beta_density(a: f64, b: f64, point: Share) -> f64 {
    let Share { x, y, excess } = point;
    let n = a + b;
    a * log_ratio_minus_linear(x * (1.0 + b / a), excess / a)
        + b * log_ratio_minus_linear(y * (1.0 + a / b), -excess / b)
        + (stirling_error(n) - stirling_error(a) - stirling_error(b))
        + 0.5 * libm::log(a / n * b / (2.0 * PI))
}

/// I(x; a, b) divided by xᵃ yᵇ / B(a, b), for x at most a/(a+b).
pub fn lower_beta_over_density(a: f64, b: f64, point: Share) -> f64 {
    let Share { x, y, excess } = point;
    let (mut term, mut sum) = (1.0 / a, 1.0 / a);
    for n in 0..MAX_TERMS {
        let n = n as f64;
        let ratio = (a + b + n) / (a + 1.0 + n) * x;
        term *= ratio;
        sum += term;
        // The ratios fall towards x (b > 1) or rise towards it: the rest is below term r / (1 - r).
        let bound = ratio.max(x);
        if term * bound < 1e-17 * sum * (1.0 - bound) {
            return sum;
        }
    }
    let (n, slope) = (a + b, -excess);
    // Towards x = 0 by h in logit: the logarithm of the density falls by this much, n times log(x + y eʰ) - y h and the
    // slope. Several forms, so that neither x nor y near 1 makes its terms cancel and none overflows.
    let energy = |h: f64| {
        let growth = y * libm::expm1(h);
        let rest = if x <= 0.5 {
            log_minus_linear(x * libm::expm1(-h)) + x * exp_minus_linear(-h)
        } else if growth <= 1.0 {
            log_minus_linear(growth) + y * exp_minus_linear(h)
        } else if growth.is_finite() {
            libm::log1p(growth) - y * h
        } else {
            x * h + libm::log(y + x * libm::exp(-h))
        };
        slope * h + n * rest
    };
    tail_integral(energy, slope, n * x * y)
}
