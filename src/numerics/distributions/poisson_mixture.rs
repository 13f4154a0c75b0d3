//! Poisson mixtures of central distributions, which the noncentral chi-squared and F are: Σ pⱼ I(a + j), with
//! pⱼ = e^(-λ) λʲ / j! and I one tail of the incomplete gamma or beta function.
//!
//! Neighbouring I differ by a term T with a simple ratio, so each tail is a sum of positive terms in the direction
//! in which I grows: downwards in j for the lower tail, upwards for the upper. The walk begins where the products
//! are at most 1e-17 of the largest, and ends where they no longer count. Nothing is subtracted, and
//! I and T are carried with a common scale, so that tails below 1e-300 of the start do not underflow.
//!
//! # References
//! 1. Johnson, Kotz and Balakrishnan (1995), Continuous Univariate Distributions 2, (29.3) and (30.10).
//! 2. Abramowitz and Stegun (1964), 6.5.21 and 26.5.16 (the recurrences).

use crate::numerics::special::{
    Share, Tail, log_beta_density, log_gamma_density, log_ratio_minus_linear, lower_beta_over_density,
    lower_gamma_over_density, stirling_error, upper_gamma_over_density,
};
use std::f64::consts::{LN_10, PI};

/// Largest mean of the Poisson weights that is allowed: the walk may be that long.
pub(super) const LARGEST_MEAN: f64 = 5e6;

/// The central distribution at the point of interest: I(x; a, b), or P(a, x).
#[derive(Debug, Clone, Copy)]
pub(super) enum Kernel {
    /// Regularised incomplete beta function.
    Beta { a: f64, b: f64, point: Share },
    /// Regularised incomplete gamma function, with `excess` = x - a.
    Gamma { a: f64, x: f64, excess: f64 },
}

/// A tail at one index, and the term by which the next differs; both times exp(scale).
struct Step {
    probability: f64,
    term: f64,
    scale: f64,
}

/// The given tail of the mixture with Poisson mean `mean`.
pub(super) fn tail(kernel: Kernel, mean: f64, tail: Tail) -> f64 {
    match kernel {
        Kernel::Beta { point: Share { x, .. }, .. } | Kernel::Gamma { x, .. } if x == 0.0 => {
            return if tail == Tail::Lower { 0.0 } else { 1.0 };
        }
        Kernel::Beta { point: Share { y: 0.0, .. }, .. } => {
            return if tail == Tail::Lower { 1.0 } else { 0.0 };
        }
        // Chernoff's bound with exp(X/2): the tail is below exp(-x/2 + mean + a log 2), here at most exp(-0.4 x).
        Kernel::Gamma { a, x, .. } if tail == Tail::Upper && x > 2000.0 && x > 10.0 * (a + mean) => {
            return 0.0;
        }
        _ => {}
    }
    // Bennett's and Chernoff's bounds: beyond these the weight has fallen by e⁻⁴⁰.
    let mut first = match tail {
        Tail::Lower => {
            let turn = kernel.turn(mean);
            let first = libm::ceil(turn + 0.5 * (80.0 / 3.0 + (80.0 * 80.0 / 9.0 + 320.0 * turn).sqrt()));
            kernel.last_that_counts(mean, first)
        }
        Tail::Upper => libm::floor((mean - (80.0 * mean).sqrt()).max(0.0)),
    };
    // A small mean makes that far too far: its powers would underflow.
    while first > mean && first > 0.0 && log_weight(mean, first) < -100.0 {
        first -= 1.0;
    }
    walk(kernel, mean, tail, first)
}

/// The sum from index `first` in the direction in which the tail grows.
fn walk(kernel: Kernel, mean: f64, tail: Tail, first: f64) -> f64 {
    let mut j = first;
    let mut weight = libm::exp(log_weight(mean, j));
    let mut step = kernel.start(j, tail);
    let (mut sum, mut last) = (0.0, 0.0);
    loop {
        let product = weight * step.probability;
        sum += product;
        if product < last && product <= 1e-17 * sum {
            break;
        }
        last = product;
        match tail {
            Tail::Lower => {
                if j == 0.0 {
                    break;
                }
                // T of the lower index comes first: I(j-1) = I(j) + T(j-1).
                step.term /= kernel.ratio(j - 1.0);
                step.probability += step.term;
                weight *= j / mean;
                j -= 1.0;
            }
            Tail::Upper => {
                step.probability += step.term;
                step.term *= kernel.ratio(j);
                weight *= mean / (j + 1.0);
                j += 1.0;
            }
        }
        if weight == 0.0 {
            break;
        }
        if step.probability > 1e250 {
            for number in [&mut step.probability, &mut step.term, &mut sum, &mut last] {
                *number *= 1e-250;
            }
            step.scale += 250.0 * LN_10;
        }
    }
    (libm::exp(step.scale) * sum).min(1.0)
}

/// log of e^(-mean) meanʲ / j!.
fn log_weight(mean: f64, j: f64) -> f64 {
    if j == 0.0 {
        return -mean;
    }
    j * log_ratio_minus_linear(mean / j, (mean - j) / j) - stirling_error(j) - 0.5 * libm::log(2.0 * PI * j)
}

impl Kernel {
    /// An index above which the products pⱼ I(a + j) of the lower tail fall at least as fast as Poisson weights of that
    /// mean do.
    ///
    /// I(j)/I(j-1) is at most 1 and at most the largest ratio of terms from there on, so that the products' ratio is at most
    /// mean/j times that: below 1 from its root on, and falling at least like 1/j.
    fn turn(&self, mean: f64) -> f64 {
        let (mut low, mut high) = (0.0, mean);
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            if mean * self.growth(middle) > middle { low = middle } else { high = middle }
        }
        high
    }

    /// An index of at most `first` beyond which the products pⱼ I(a + j) of the lower tail are below e⁻⁶⁰ of that at 0. Near
    /// x = 0 they fall by hundreds of powers of ten at each step, which no common scale could follow.
    fn last_that_counts(&self, mean: f64, first: f64) -> f64 {
        let (mut j, mut bound) = (0.0, 0.0);
        // Far beyond this the products fall no faster than Poisson weights do.
        while j < first.min(200.0) {
            bound += libm::log(mean * self.growth(j + 1.0) / (j + 1.0));
            if bound < -60.0 {
                return j;
            }
            j += 1.0;
        }
        first
    }

    /// A bound of I(j)/I(j-1).
    fn growth(&self, j: f64) -> f64 {
        let growth = match *self {
            Kernel::Beta { a, b, point } => point.x * ((a + b + j - 1.0) / (a + j)).max(1.0),
            Kernel::Gamma { a, x, .. } => x / (a + j),
        };
        growth.min(1.0)
    }

    /// T(j+1) / T(j).
    fn ratio(&self, j: f64) -> f64 {
        match *self {
            Kernel::Beta { a, b, point } => point.x * (a + b + j) / (a + j + 1.0),
            Kernel::Gamma { a, x, .. } => x / (a + j + 1.0),
        }
    }

    /// The tail and T at index j.
    fn start(&self, j: f64, tail: Tail) -> Step {
        let (shape, log_density, over_density, below_peak) = match *self {
            Kernel::Beta { a, b, point: Share { x, y, excess } } => {
                let (shape, excess) = (a + j, excess - j * y);
                let point = Share { x, y, excess };
                let log_density = log_beta_density(shape, b, point);
                let below_peak = excess <= 0.0;
                let over_density = if below_peak {
                    lower_beta_over_density(shape, b, point)
                } else {
                    lower_beta_over_density(b, shape, point.mirrored())
                };
                (shape, log_density, over_density, below_peak)
            }
            Kernel::Gamma { a, x, excess } => {
                let (shape, excess) = (a + j, excess - j);
                let log_density = log_gamma_density(shape, x, excess);
                let below_peak = excess <= 0.0;
                let over_density = if below_peak {
                    lower_gamma_over_density(shape, x, excess)
                } else {
                    upper_gamma_over_density(x, excess)
                };
                (shape, log_density, over_density, below_peak)
            }
        };
        // The smaller tail comes from its ratio to the density, the larger one as its complement.
        if below_peak == (tail == Tail::Lower) {
            Step { probability: over_density, term: 1.0 / shape, scale: log_density }
        } else {
            let density = libm::exp(log_density);
            Step { probability: 1.0 - density * over_density, term: density / shape, scale: 0.0 }
        }
    }
}
