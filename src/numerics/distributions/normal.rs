//! The standard normal distribution: Φ(x) = ∫ exp(-t²/2) dt / √(2π) up to x.
//!
//! Through the complementary error function of `libm`, whose relative error is below one unit in the last place
//! everywhere; quantiles by Halley's iteration on the tail.
//!
//! # References
//! 1. Abramowitz and Stegun (1964), 26.2.22 (the iteration's start).

use super::{finite, probability};
use crate::numerics::OutOfDomain;
use std::f64::consts::{FRAC_1_SQRT_2, PI};
use std::sync::OnceLock;

/// Lower-tail probability P(X <= `x`) of a standard normal variable.
///
/// # Errors
/// [`OutOfDomain`] if `x` is not finite.
///
/// # Accuracy
/// Relative error below 1e-14 for probabilities above 1e-20 and below 3e-13 down to 1e-300
/// (`tests/reference/data/wide/normal.json`).
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::normal;
/// assert!((normal::cdf(-1.959_963_984_540_054)? - 0.025).abs() < 1e-16);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn cdf(x: f64) -> Result<f64, OutOfDomain> {
    Ok(lower(finite("x", x)?))
}

/// Upper-tail probability P(X > `x`) of a standard normal variable.
///
/// # Errors
/// [`OutOfDomain`] if `x` is not finite.
///
/// # Accuracy
/// Relative error below 1e-14 for probabilities above 1e-20 and below 3e-13 down to 1e-300
/// (`tests/reference/data/wide/normal.json`).
pub fn sf(x: f64) -> Result<f64, OutOfDomain> {
    Ok(lower(-finite("x", x)?))
}

/// The x with P(X <= x) = `p`; infinite at 0 and 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1.
///
/// # Accuracy
/// Relative error below 1e-13 for `p` from 1e-300, over the same ranges as [`cdf`].
pub fn quantile(p: f64) -> Result<f64, OutOfDomain> {
    Ok(-upper_quantile_unchecked(probability("p", p)?))
}

/// The x with P(X > x) = `upper_p`; infinite at 0 and 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1.
///
/// # Accuracy
/// Relative error below 1e-13 for `upper_p` from 1e-300, over the same ranges as [`sf`].
pub fn upper_quantile(upper_p: f64) -> Result<f64, OutOfDomain> {
    Ok(upper_quantile_unchecked(probability("upper_p", upper_p)?))
}

/// Density of the standard normal distribution at any `x`.
pub(crate) fn density(x: f64) -> f64 {
    libm::exp(-0.5 * x * x) / (2.0 * PI).sqrt()
}

/// P(X <= x) for any x that is not NaN, faster than [`lower`]: for the inside of integrals.
///
/// Taylor's series of degree 11 about the nearest multiple of 1/32, for -9.5 <= x <= 9; relative error below 2e-14
/// (x²ε: the rounding of x/√2, as in [`lower`]).
/// The derivatives are those of φ: φ⁽ⁿ⁺¹⁾(g) = -g φ⁽ⁿ⁾(g) - n φ⁽ⁿ⁻¹⁾(g) (Abramowitz and Stegun 26.2.31).
pub(crate) fn lower_in_integrals(x: f64) -> f64 {
    static TABLE: OnceLock<Vec<[f64; 12]>> = OnceLock::new();
    if !(-9.5..9.0).contains(&x) {
        return lower(x);
    }
    let table = TABLE.get_or_init(|| (-320..=288).map(|i| taylor(f64::from(i) / 32.0)).collect());
    let index = (32.0 * x + 320.5) as usize;
    let offset = x - (index as f64 - 320.0) / 32.0;
    // Estrin's scheme: a shorter chain of dependent steps than Horner's.
    let [c0, c1, c2, c3, c4, c5, c6, c7, c8, c9, c10, c11] = table[index];
    let square = offset * offset;
    let fourth = square * square;
    let low = (c0 + c1 * offset) + (c2 + c3 * offset) * square;
    let middle = (c4 + c5 * offset) + (c6 + c7 * offset) * square;
    let high = (c8 + c9 * offset) + (c10 + c11 * offset) * square;
    low + (middle + high * fourth) * fourth
}

/// Taylor coefficients of Φ at g.
fn taylor(g: f64) -> [f64; 12] {
    let mut coefficients =
        [lower(g), density(g), -0.5 * g * density(g), 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0];
    // With cₙ = Φ⁽ⁿ⁾(g)/n! the recurrence above becomes cₙ₊₁ = -(g cₙ + (n-1)/n cₙ₋₁)/(n+1).
    for n in 2..11 {
        let order = n as f64;
        coefficients[n + 1] =
            -(g * coefficients[n] + (order - 1.0) / order * coefficients[n - 1]) / (order + 1.0);
    }
    coefficients
}

/// P(X <= x) for any x, infinities included.
pub(crate) fn lower(x: f64) -> f64 {
    0.5 * libm::erfc(-x * FRAC_1_SQRT_2)
}

/// P(X between `middle` - `length`/2 and `middle` + `length`/2) for lengths below 0.02, where a difference would lose digits.
///
/// Taylor's series about the middle: φ(m) w (1 + w² He₂(m)/24 + w⁴ He₄(m)/1920).
pub(crate) fn short_interval(middle: f64, length: f64) -> f64 {
    let (m, w2) = (middle * middle, length * length);
    let series = 1.0 + w2 * ((m - 1.0) / 24.0 + w2 * ((m - 6.0) * m + 3.0) / 1920.0);
    density(middle) * length * series
}

/// log P(X <= x), also where the probability underflows (there to three digits: it only locates integrands).
pub(crate) fn log_lower(x: f64) -> f64 {
    if x > -35.0 {
        return libm::log(lower(x));
    }
    -0.5 * x * x - libm::log(-x) - 0.918_938_533_204_672_8 // log(2π) / 2
}

/// The x with P(X > x) = p, for p from 0 to 1.
pub(crate) fn upper_quantile_unchecked(p: f64) -> f64 {
    if p > 0.5 {
        return -upper_quantile_unchecked(1.0 - p);
    }
    if p == 0.0 {
        return f64::INFINITY;
    }
    let t = (-2.0 * libm::log(p)).sqrt();
    // Abramowitz and Stegun 26.2.22: error below 3e-3.
    let mut x = t - (2.30753 + 0.27061 * t) / (1.0 + t * (0.99229 + 0.04481 * t));
    // Halley's step on log P(X > x): the error is cubed each time, 3e-3 → 1e-8 → 1e-16.
    for _ in 0..3 {
        let tail = lower(-x);
        let hazard = density(x) / tail;
        let value = libm::log(tail / p);
        let newton = value / hazard;
        x += newton / (1.0 + 0.5 * newton * (hazard - x));
    }
    x
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_tabulated_distribution_function_agrees_with_the_exact_one() {
        let mut x = -12.0;
        while x < 12.0 {
            let (fast, exact) = (lower_in_integrals(x), lower(x));
            assert!((fast / exact - 1.0).abs() < 2e-14, "{x}: {fast:e} {exact:e}");
            x += 0.001_234_567;
        }
    }
}
