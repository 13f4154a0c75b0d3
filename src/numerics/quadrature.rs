//! Integrals of smooth functions, by Gauss-Legendre rules over intervals and by the trapezoidal rule for
//! bell-shaped integrands on the line. Every integral of this crate goes through here.
//!
//! A Gauss-Legendre rule with n nodes is exact for polynomials of degree 2n - 1. For an analytic integrand that
//! vanishes with all its derivatives at both ends the trapezoidal rule is better still: its error falls like
//! exp(-c/h) or faster with the step h, so that halving the step squares it. Callers choose the interval so
//! that what is left outside is negligible, and say why.
//!
//! # Sources
//! Trapezoidal rule: Trefethen and Weideman (2014), SIAM Review 56, 385-458. Gauss-Legendre: nodes are the roots of the Legendre polynomial by Newton's iteration from Tricomi's estimate, weights
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
}

/// The shared rule with 32 nodes.
pub fn rule_32() -> &'static Rule {
    static RULE: OnceLock<Rule> = OnceLock::new();
    RULE.get_or_init(|| Rule::gauss_legendre(32))
}

/// The shared rule with 16 nodes.
pub fn rule_16() -> &'static Rule {
    static RULE: OnceLock<Rule> = OnceLock::new();
    RULE.get_or_init(|| Rule::gauss_legendre(16))
}

/// The integral of an even, positive `integrand` from `low` to `high`, which may be infinite, where the integrand varies over
/// lengths of `narrow` near 0, has singular points no nearer to the line than that, and falls off over lengths of
/// `wide`, with a tail that is at most a power at many times that length.
///
/// Panels with 16 nodes that double in length away from 0: from a panel [x, 2x] the nearest singular point is three
/// half-lengths away from its middle, so that the error is about (3 + √8)⁻³² (Trefethen 2013, Approximation
/// Theory and Approximation Practice, theorem 19.3). The sum ends where the rest no longer counts.
pub fn graded(low: f64, high: f64, narrow: f64, wide: f64, integrand: impl Fn(f64) -> f64) -> f64 {
    if low > high {
        return -graded(high, low, narrow, wide, integrand);
    }
    let away_from_zero = |from: f64, to: f64| {
        let (mut x, mut sum) = (from, 0.0);
        while x < to {
            let doubled = x.max(1.5 * narrow);
            let step = if x < 8.0 * wide { doubled.min(2.5 * wide) } else { doubled };
            let next = (x + step).min(to);
            // Neither a step of no length nor one without end may be taken.
            if next <= x || next == f64::INFINITY {
                break;
            }
            sum += rule_16().integrate(x, next, &integrand);
            x = next;
            let counts = integrand(x) * x > 1e-18 * sum;
            if !counts {
                break;
            }
        }
        sum
    };
    if low >= 0.0 {
        away_from_zero(low, high)
    } else if high <= 0.0 {
        away_from_zero(-high, -low)
    } else {
        away_from_zero(0.0, high) + away_from_zero(0.0, -low)
    }
}

/// An integral and what is known of its error.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Estimate {
    /// The integral.
    pub value: f64,
    /// An estimate of its absolute error from the last halving of the step.
    pub error: f64,
}

/// The integral of a bell-shaped `integrand` between two points where it is negligible, by the trapezoidal
/// rule with its step halved until halving it again would no longer count at relative error `tolerance`.
pub fn trapezoid_refined(
    low: f64,
    high: f64,
    first_count: usize,
    tolerance: f64,
    mut integrand: impl FnMut(f64) -> f64,
) -> Estimate {
    let mut step = (high - low) / first_count as f64;
    let mut sum: f64 = (1..first_count).map(|i| integrand(low + step * i as f64)).sum();
    let mut count = first_count;
    loop {
        let coarse = step * sum;
        sum += (0..count).map(|i| integrand(low + step * (i as f64 + 0.5))).sum::<f64>();
        (step, count) = (0.5 * step, 2 * count);
        let value = step * sum;
        // The error of the finer rule is about the square of that of the coarser one, relative to the integral.
        let change = ((value - coarse) / value).abs();
        if change * change <= tolerance || count > 3000 || value == 0.0 {
            return Estimate { value, error: change * change * value.abs() };
        }
    }
}

/// The integral of an `integrand` that falls off on both sides of `peak`, by the trapezoidal rule on the multiples
/// of `step`, outwards until a term no longer counts.
pub fn trapezoid_outward(peak: f64, step: f64, mut integrand: impl FnMut(i32) -> f64) -> f64 {
    let middle = libm::rint(peak / step) as i32;
    let mut sum = integrand(middle);
    for direction in [1, -1] {
        let mut index = middle;
        loop {
            index += direction;
            let term = integrand(index);
            sum += term;
            // Written so that a term that is no number ends the sum too.
            let counts = term > 1e-17 * sum;
            if !counts {
                break;
            }
        }
    }
    step * sum
}

/// The integral of an even `integrand` from -`end` to `end`, negligible beyond, by the trapezoidal rule.
pub fn trapezoid_even(end: f64, step: f64, mut integrand: impl FnMut(f64) -> f64) -> f64 {
    let count = libm::ceil(end / step) as i64;
    let mut sum = 0.5 * integrand(0.0);
    for i in 1..=count {
        sum += integrand(step * i as f64);
    }
    2.0 * step * sum
}

/// The integral of an `integrand` that is negligible outside the interval, by the trapezoidal rule.
pub fn trapezoid(low: f64, high: f64, step: f64, mut integrand: impl FnMut(f64) -> f64) -> f64 {
    let count = libm::ceil((high - low) / step) as i64;
    step * (0..=count).map(|i| integrand(low + step * i as f64)).sum::<f64>()
}

/// The integral over the line of a positive function with one peak, given by its logarithm: the peak is searched
/// from `start`, `scale` is about its width.
pub fn bell(log_integrand: impl Fn(f64) -> f64, start: f64, scale: f64, tolerance: f64) -> Estimate {
    let peak = peak(&log_integrand, start, scale);
    let top = log_integrand(peak);
    let low = peak - fall(|x| log_integrand(peak - x), top, scale);
    let high = peak + fall(|x| log_integrand(peak + x), top, scale);
    trapezoid_refined(low, high, 12, tolerance, |x| libm::exp(log_integrand(x)))
}

/// Where the unimodal logarithm `f` is largest, to about a tenth of the width of its peak, searched from `start`.
pub fn peak(f: impl Fn(f64) -> f64, start: f64, scale: f64) -> f64 {
    let mut best = (start, f(start));
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

/// How far from 0 the logarithm `f`, falling from `top`, has fallen by 36: the integrand is then 2e-16 of its peak.
pub fn fall(f: impl Fn(f64) -> f64, top: f64, scale: f64) -> f64 {
    const DROP: f64 = 36.0;
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
