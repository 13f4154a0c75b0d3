//! The special functions that the distributions are made of: incomplete gamma and beta with both tails.

mod beta;
mod elementary;
mod gamma;

pub use beta::{Share, incomplete_beta, log_beta_density, log_beta_quantile, lower_beta_over_density};
pub use elementary::{
    exp_minus_linear, log_minus_linear, log_ratio_minus_linear, product_minus, stirling_error,
};
pub use gamma::{
    incomplete_gamma, log_gamma_density, log_gamma_quantile, lower_gamma_over_density,
    upper_gamma_over_density,
};

use crate::numerics::quadrature;

/// A distribution function seen from both sides at one point.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Tails {
    /// Probability of a value at most this.
    pub lower: f64,
    /// Probability of a larger value. It is computed, not 1 - lower, wherever it is the smaller of the two.
    pub upper: f64,
    /// Derivative of `lower` by the variable's logarithm (gamma) or logit (beta).
    pub slope: f64,
}

/// Which tail a probability is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Tail {
    /// P(X <= x)
    Lower,
    /// P(X > x)
    Upper,
}

/// Integral of exp(-`energy`(h)) for h from 0 to infinity, where `energy` is convex, 0 at 0 and not
/// decreasing; `slope` and `curvature` are its first two derivatives at 0.
///
/// The integral is cut where the integrand has fallen by e⁻³⁸ ≈ 3e-17: by convexity the rest is smaller than that
/// share of what is kept. Two panels, because the fall may be steep at first and slow later.
fn tail_integral(energy: impl Fn(f64) -> f64, slope: f64, curvature: f64) -> f64 {
    let mut end = 80.0 / (slope + (slope * slope + 80.0 * curvature).sqrt());
    for _ in 0..200 {
        if energy(end) < 38.0 {
            end *= 1.4;
        } else if energy(0.8 * end) > 38.0 {
            end *= 0.8;
        } else {
            break;
        }
    }
    let rule = quadrature::rule_32();
    let integrand = |h| libm::exp(-energy(h));
    rule.integrate(0.0, 0.25 * end, integrand) + rule.integrate(0.25 * end, end, integrand)
}
