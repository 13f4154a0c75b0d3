//! Mixtures over the estimated standard deviation: ∫ h(s) G(s) ds, where df·S² is chi-squared with df degrees of
//! freedom and h the density of S. Everything "studentized" is one: G(s) is the probability for known σ.
//!
//! In u = log s the density is exp(-(df/2)(e²ᵘ - 1 - 2u)) times a constant, free of cancellation for any df.
//! The integrand is log-concave in s, so there is one peak; u = u₀ + v + 1 - e⁻ᵛ around it makes the slow left tail
//! (sᵈᶠ) fall double-exponentially, and the trapezoidal rule in v converges geometrically.
//!
//! The slope of the mixture costs nothing more: G(q s) depends on log q + u alone, so that integrating by parts,
//! d/d log q ∫ h(u) G(q eᵘ) du = -∫ h'(u) G(q eᵘ) du, with (log h)' = df (1 - e²ᵘ) for the density h of u.
//!
//! # References
//! 1. Takahasi and Mori (1974), Publ. RIMS Kyoto 9, 721-741 (the substitution).
//! 2. Trefethen and Weideman (2014), SIAM Review 56, 385-458 (the rule).

use crate::numerics::quadrature::{self, Estimate};
use crate::numerics::special::{exp_minus_linear, stirling_error};
use std::f64::consts::PI;

/// ∫ h(s) `inner`(s) ds with `df` degrees of freedom.
///
/// `log_shape`(s) is the logarithm of `inner`(s) up to a few units, cheap and concave in s: it only tells where the
/// integrand lives. `count` is the first number of steps: 12, or more where `inner` changes faster than the density of
/// S. For infinite df the answer is `inner`(1).
pub(super) fn mix(
    df: f64,
    count: usize,
    tolerance: f64,
    log_shape: impl Fn(f64) -> f64,
    inner: impl FnMut(f64) -> f64,
) -> Estimate {
    mix_with_slope(df, count, tolerance, log_shape, inner).0
}

/// A tail probability.
#[derive(Debug, Clone, Copy)]
pub(super) struct Tail {
    pub value: f64,
    /// d log(value) / d log q where `inner`(s) depends on q s alone; NaN for infinite df, where it is not known.
    pub slope: f64,
}

/// From here on a studentized tail is its leading power q^-df to all digits (the next is smaller by about df²/q²), and squares
/// of q come near the end of the range of doubles.
pub(super) const FAR: f64 = 1e100;

/// The share of a tail at [`FAR`] that is left at `q`.
pub(super) fn left_beyond(q: f64, df: f64) -> f64 {
    libm::pow(FAR / q, df)
}

impl Tail {
    /// The tail at `q` from this one, which is that at [`FAR`].
    pub fn beyond(self, q: f64, df: f64) -> Tail {
        Tail { value: self.value * left_beyond(q, df), slope: -df }
    }

    /// Value and slope, as the search for a quantile takes them.
    pub fn pair(self) -> (f64, f64) {
        (self.value, self.slope)
    }
}

/// A tail of a studentized quantity as the mixture of its tails for known σ.
///
/// The integral ends when the square of its relative change by halving the step is below `tolerance`. That square is the error
/// unless a sharp part of the integrand carries a small share c of the whole; the error is then up to 1/c times as large. A tail
/// that is nearly the whole has such a part, where it begins to fall, and is taken to a change of 1e-13 itself.
pub(super) fn tail(
    df: f64,
    tolerance: f64,
    log_shape: impl Fn(f64) -> f64,
    mut inner: impl FnMut(f64) -> f64,
) -> Tail {
    // For a bell curve the first halving of 18 steps changes the integral by 4e-10; with fewer degrees of freedom the
    // integrand is wider than the steepest part of it, and takes more.
    let steps = match df {
        // log S spreads over about 1/df, but `inner` still falls over a length of about 1.
        _ if df < 0.5 => (12.0 / df).min(1000.0) as usize,
        _ if df < 60.0 => 24,
        _ => 18,
    };
    let (mut estimate, mut slope) = mix_with_slope(df, steps, tolerance, &log_shape, &mut inner);
    if estimate.value > 0.9 && df.is_finite() {
        (estimate, slope) = mix_with_slope(df, steps.max(36), 1e-26, &log_shape, &mut inner);
    }
    Tail { value: estimate.value.min(1.0), slope }
}

/// The same as [`mix`], and the slope of [`Tail`].
fn mix_with_slope(
    df: f64,
    count: usize,
    tolerance: f64,
    log_shape: impl Fn(f64) -> f64,
    mut inner: impl FnMut(f64) -> f64,
) -> (Estimate, f64) {
    if df == f64::INFINITY {
        return (Estimate { value: inner(1.0), error: 0.0 }, f64::NAN);
    }
    let log_density = |u: f64| -0.5 * df * exp_minus_linear(2.0 * u);
    let peak = quadrature::peak(|u| log_density(u) + log_shape(libm::exp(u)), 0.0, 1.0 / (2.0 * df).sqrt());
    let at = |v: f64| peak + v - libm::expm1(-v);
    let log_integrand = |v: f64| {
        let u = at(v);
        log_density(u) + log_shape(libm::exp(u))
    };
    let top = log_integrand(0.0);
    let scale = 0.5 / (2.0 * df).sqrt();
    let low = -quadrature::fall(|v| log_integrand(-v), top, scale);
    let high = quadrature::fall(log_integrand, top, scale);
    let constant = 0.5 * libm::log(df / PI) - stirling_error(0.5 * df);
    let (mut total, mut moment) = (0.0, 0.0);
    let estimate = quadrature::trapezoid_refined(low, high, count, tolerance, |v| {
        let u = at(v);
        let s = libm::exp(u);
        let term = libm::exp(constant + log_density(u)) * (1.0 + libm::exp(-v)) * inner(s);
        total += term;
        moment += term * libm::expm1(2.0 * u);
        term
    });
    (estimate, df * moment / total)
}
