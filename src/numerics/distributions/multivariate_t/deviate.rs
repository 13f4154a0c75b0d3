//! What turns evenly spread numbers into normal deviates and estimated standard deviations, fast, for the inside of sums.

use crate::numerics::distributions::normal;
use crate::numerics::special::{Tail, exp_minus_linear, log_gamma_quantile, stirling_error};
use std::f64::consts::PI;

/// The z with P(Z <= z) = p for 0 < p < 1, to 1e-9: a thousandth of the smallest error that is ever asked for.
///
/// Hastings' approximation (error below 4.5e-4; Abramowitz and Stegun (1964), 26.2.23) and one step of Halley's
/// iteration, which cubes the error and multiplies it by (2z² + 1)/6.
pub(super) fn normal(p: f64) -> f64 {
    let (tail, sign) = if p < 0.5 { (p, -1.0) } else { (1.0 - p, 1.0) };
    let t = (-2.0 * libm::log(tail)).sqrt();
    let above = 2.515_517 + t * (0.802_853 + t * 0.010_328);
    let below = 1.0 + t * (1.432_788 + t * (0.189_269 + t * 0.001_308));
    let x = t - above / below;
    let excess = (normal::lower_in_integrals(-x) - tail) / normal::density(x);
    sign * (x + excess / (1.0 - 0.5 * excess * x))
}

/// Steps per unit of z in the table.
const STEPS: f64 = 16.0;
/// The table reaches from -END to END: beyond lies less than the smallest number that a lattice point can have.
const END: f64 = 8.5;

/// The quantiles of S, where df·S² is chi-squared: log S as a function of the normal deviate z with the same tail, by Hermite
/// interpolation between exact values and slopes. The function is nearly straight; its fourth derivative stays
/// below 0.2, so that the error is below 0.2 (1/16)⁴/384 = 1e-8.
#[derive(Debug, Clone)]
pub(super) struct Spread {
    /// log S and its derivative by z, times the step.
    nodes: Vec<[f64; 2]>,
}

impl Spread {
    pub fn new(df: f64) -> Spread {
        // Density of log S, as in `scale_mixture`.
        let constant = 0.5 * libm::log(df / PI) - stirling_error(0.5 * df);
        let count = (2.0 * END * STEPS) as i32;
        let nodes = (0..=count).map(|i| {
            let z = f64::from(i) / STEPS - END;
            let tail = normal::lower(-z.abs());
            let side = if z < 0.0 { Tail::Lower } else { Tail::Upper };
            let log_s = 0.5 * log_gamma_quantile(0.5 * df, tail, side);
            let log_density = constant - 0.5 * df * exp_minus_linear(2.0 * log_s);
            let slope = libm::exp(-0.5 * z * z - log_density) / (2.0 * PI).sqrt();
            [log_s, slope / STEPS]
        });
        Spread { nodes: nodes.collect() }
    }

    /// The S with P(S <= s) = p.
    pub fn quantile(&self, p: f64) -> f64 {
        let place = ((normal(p) + END) * STEPS).clamp(0.0, (self.nodes.len() - 1) as f64);
        let index = (place as usize).min(self.nodes.len() - 2);
        let x = place - index as f64;
        let ([a, slope_a], [b, slope_b]) = (self.nodes[index], self.nodes[index + 1]);
        let y = 1.0 - x;
        // Cubic Hermite interpolation.
        let log_s =
            a * y * y * (1.0 + 2.0 * x) + b * x * x * (1.0 + 2.0 * y) + x * y * (slope_a * y - slope_b * x);
        libm::exp(log_s)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numerics::distributions::chi_squared;

    #[test]
    fn fast_deviates_agree_with_the_exact_ones() {
        for i in 1..4000 {
            let z = f64::from(i) * 0.004 - 8.0;
            assert!((normal(normal::lower(z)) - z).abs() < 1e-8 + 1e-16 / normal::density(z), "{z}");
        }
    }

    #[test]
    fn interpolated_quantiles_of_the_spread_agree_with_the_exact_ones() {
        for df in [1.001, 1.5, 2.0, 3.0, 6.0, 21.0, 400.0, 1e6, 1e15] {
            let spread = Spread::new(df);
            for i in 1..600 {
                let p = f64::from(i) / 600.0;
                let p = p * p * p;
                let exact = (chi_squared::quantile(p, df).unwrap() / df).sqrt();
                let error = spread.quantile(p) / exact - 1.0;
                assert!(error.abs() < 1e-8, "{df} {p}: {error:e}");
            }
        }
    }
}
