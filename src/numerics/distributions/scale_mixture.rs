//! Mixtures over the estimated standard deviation: ∫ h(s) G(s) ds, where df·S² is chi-squared with df degrees of
//! freedom and h the density of S. Everything "studentized" is one: G(s) is the probability for known σ.
//!
//! In u = log s the density is exp(-(df/2)(e²ᵘ - 1 - 2u)) times a constant, free of cancellation for any df.
//! The integrand is log-concave in s, so there is one peak; u = u₀ + v + 1 - e⁻ᵛ around it makes the slow left tail
//! (sᵈᶠ) fall double-exponentially, and the trapezoidal rule in v converges geometrically.
//!
//! # References
//! 1. Takahasi and Mori (1974), Publ. RIMS Kyoto 9, 721-741 (the substitution).
//! 2. Trefethen and Weideman (2014), SIAM Review 56, 385-458 (the rule).

use crate::numerics::quadrature::{self, Estimate};
use crate::numerics::special::{exp_minus_linear, stirling_error};
use std::f64::consts::PI;

/// The integrand is followed until it has fallen by e⁻³⁶ ≈ 2e-16 of its peak.
const DROP: f64 = 36.0;

/// ∫ h(s) `inner`(s) ds with `df` degrees of freedom.
///
/// `log_shape`(s) is the logarithm of `inner`(s) up to a few units, cheap and concave in s: it only tells where the
/// integrand lives. For infinite df the answer is `inner`(1).
pub(super) fn mix(
    df: f64,
    tolerance: f64,
    log_shape: impl Fn(f64) -> f64,
    mut inner: impl FnMut(f64) -> f64,
) -> Estimate {
    if df == f64::INFINITY {
        return Estimate { value: inner(1.0), error: 0.0 };
    }
    let log_density = |u: f64| -0.5 * df * exp_minus_linear(2.0 * u);
    let peak = peak(|u| log_density(u) + log_shape(libm::exp(u)), 1.0 / (2.0 * df).sqrt());
    let at = |v: f64| peak + v - libm::expm1(-v);
    let log_integrand = |v: f64| {
        let u = at(v);
        log_density(u) + log_shape(libm::exp(u))
    };
    let top = log_integrand(0.0);
    let scale = 0.5 / (2.0 * df).sqrt();
    let low = -drop_distance(|v| log_integrand(-v), top, scale);
    let high = drop_distance(log_integrand, top, scale);
    let constant = 0.5 * libm::log(df / PI) - stirling_error(0.5 * df);
    quadrature::trapezoid_refined(low, high, 12, tolerance, |v| {
        let u = at(v);
        libm::exp(constant + log_density(u)) * (1.0 + libm::exp(-v)) * inner(libm::exp(u))
    })
}

/// Where the unimodal `f` is largest, to about a tenth of the width of its peak, searched from 0.
fn peak(f: impl Fn(f64) -> f64, scale: f64) -> f64 {
    let mut best = (0.0, f(0.0));
    let mut step = scale.min(0.5);
    // Walk uphill with growing steps, then back with shrinking ones, until a step changes f by little.
    let mut direction = -1.0;
    for _ in 0..200 {
        let next = best.0 + direction * step;
        let value = f(next);
        if value > best.1 {
            best = (next, value);
            step *= 1.7;
        } else {
            if best.1 - value < 0.02 && value.is_finite() {
                return best.0;
            }
            direction = -direction;
            step *= 0.4;
        }
    }
    best.0
}

/// How far from 0 the function `f`, falling from `top`, has fallen by [`DROP`].
fn drop_distance(f: impl Fn(f64) -> f64, top: f64, scale: f64) -> f64 {
    let (mut inside, mut outside) = (0.0, scale.min(0.5));
    while f(outside) > top - DROP && outside < 1e3 {
        (inside, outside) = (outside, 1.5 * outside);
    }
    for _ in 0..4 {
        let middle = 0.5 * (inside + outside);
        if f(middle) > top - DROP { inside = middle } else { outside = middle }
    }
    outside
}
