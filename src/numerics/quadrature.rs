//! Integrals of smooth functions over finite intervals, by Gauss-Legendre rules. Every integral of this crate
//! goes through here.
//!
//! A rule with n nodes is exact for polynomials of degree 2n - 1; for an analytic integrand the error falls
//! geometrically with n. Callers choose the interval so that what is left outside is negligible, and say why.
//!
//! # Source
//! Nodes are the roots of the Legendre polynomial by Newton's iteration from Tricomi's estimate, weights
//! 2 / ((1 - x²) P'(x)²): Abramowitz and Stegun (1964), 25.4.29 and 22.16.6.

use std::sync::OnceLock;

/// A Gauss-Legendre rule on [-1, 1].
#[derive(Debug, Clone)]
pub struct Rule {
    nodes: Vec<f64>,
    weights: Vec<f64>,
}

impl Rule {
    /// The rule with `count` nodes, in ascending order.
    pub fn gauss_legendre(count: usize) -> Rule {
        let mut nodes = vec![0.0; count];
        let mut weights = vec![0.0; count];
        let n = count as f64;
        for i in 0..count.div_ceil(2) {
            let mut x = libm::cos(std::f64::consts::PI * (i as f64 + 0.75) / (n + 0.5));
            // Quadratic convergence from Tricomi's estimate: four steps suffice, the fifth confirms.
            for _ in 0..5 {
                let (value, slope) = legendre(count, x);
                x -= value / slope;
            }
            if 2 * i + 1 == count {
                x = 0.0;
            }
            let (_, slope) = legendre(count, x);
            let weight = 2.0 / ((1.0 - x) * (1.0 + x) * slope * slope);
            (nodes[i], weights[i]) = (-x, weight);
            (nodes[count - 1 - i], weights[count - 1 - i]) = (x, weight);
        }
        Rule { nodes, weights }
    }

    /// The integral of `integrand` from `low` to `high`.
    pub fn integrate(&self, low: f64, high: f64, mut integrand: impl FnMut(f64) -> f64) -> f64 {
        let (middle, half) = (0.5 * (low + high), 0.5 * (high - low));
        let mut sum = 0.0;
        for (node, weight) in self.nodes.iter().zip(&self.weights) {
            sum += weight * integrand(middle + half * node);
        }
        half * sum
    }

    /// The nodes and weights of this rule moved to the interval from `low` to `high`.
    pub fn points(&self, low: f64, high: f64) -> impl Iterator<Item = (f64, f64)> + '_ {
        let (middle, half) = (0.5 * (low + high), 0.5 * (high - low));
        self.nodes.iter().zip(&self.weights).map(move |(node, weight)| (middle + half * node, half * weight))
    }
}

/// The shared rule with 16 nodes.
pub fn rule_16() -> &'static Rule {
    static RULE: OnceLock<Rule> = OnceLock::new();
    RULE.get_or_init(|| Rule::gauss_legendre(16))
}

/// The shared rule with 32 nodes.
pub fn rule_32() -> &'static Rule {
    static RULE: OnceLock<Rule> = OnceLock::new();
    RULE.get_or_init(|| Rule::gauss_legendre(32))
}

/// The shared rule with 64 nodes.
pub fn rule_64() -> &'static Rule {
    static RULE: OnceLock<Rule> = OnceLock::new();
    RULE.get_or_init(|| Rule::gauss_legendre(64))
}

/// The Legendre polynomial of degree `count` at `x`, and its derivative.
fn legendre(count: usize, x: f64) -> (f64, f64) {
    let (mut before, mut here) = (1.0, x);
    for j in 2..=count {
        let j = j as f64;
        (before, here) = (here, ((2.0 * j - 1.0) * x * here - (j - 1.0) * before) / j);
    }
    let slope = if x.abs() == 1.0 {
        0.5 * count as f64 * (count as f64 + 1.0)
    } else {
        count as f64 * (before - x * here) / ((1.0 - x) * (1.0 + x))
    };
    (here, slope)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_rule_is_exact_for_polynomials_up_to_twice_its_nodes() {
        for count in [1, 2, 5, 16, 32, 64] {
            let rule = Rule::gauss_legendre(count);
            let degree = 2 * count - 2;
            let power = rule.integrate(0.0, 1.0, |x| libm::pow(x, degree as f64));
            assert!((power * (degree as f64 + 1.0) - 1.0).abs() < 1e-13, "{count} nodes: {power}");
        }
    }
}
