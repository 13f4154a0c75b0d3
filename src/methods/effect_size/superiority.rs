//! The probability of superiority A = P(Y₂ > Y₁) + ½ P(Y₂ = Y₁) of a second group over a first, its interval, and Cliff's
//! delta = 2A - 1.
//!
//! The estimate is U/(nm), the share of the pairs of an observation of either group in which the second group's is the larger, tied
//! pairs counting ½. An observation's placement is the share of the other group's values that it exceeds (or that exceed it),
//! ties counting ½. With S₁² and S₂² the variances of the n and the m placements (divisor n - 1, m - 1),
//!
//! ```text
//! se² = S₁²/n + S₂²/m                                       [1], [2], [3]
//! logit A ± z se / (A(1-A))                                 bounds, transformed back: never outside 0 to 1
//! ```
//!
//! Where that gives nothing (A is 0 or 1, a group has one observation, or all placements are equal), the bounds are the θ that
//! solve |A - θ| = z √V(θ) with
//!
//! ```text
//! V(θ) = θ(1-θ)/(nm) [1 + N* ((1-θ)/(2-θ) + θ/(1+θ))]       N* = (n+m)/2 - 1
//! ```
//!
//! the variance that U/(nm) has for exponential distributions [4], with the two sizes averaged: method 5 of [5] (its number and
//! N* from memory; the formula is derived from [4]: Q₁ - θ² = θ(1-θ)²/(2-θ), Q₂ - θ² = θ²(1-θ)/(1+θ), where n-1 and m-1
//! become N*).
//!
//! The interval need not agree with a rank test, whose variance is the one under the hypothesis that the distributions are the
//! same; this one holds for any two distributions.
//!
//! References: \[1\] Sen (1967), Sankhya A 29, 95–102 (variance by placements; from memory). \[2\] Cliff (1993), Psychol. Bull. 114,
//! 494–509, doi 10.1037/0033-2909.114.3.494. \[3\] DeLong, DeLong and Clarke-Pearson (1988), Biometrics 44, 837–845. \[4\] Hanley and
//! McNeil (1982), Radiology 143, 29–36. \[5\] Newcombe (2006), Statist. Med. 25, 559–573, doi 10.1002/sim.2324.

use super::{Coverage, Interval};
use crate::numerics::distributions::normal;
use crate::numerics::{roots, sums::sum};
use serde::Serialize;

/// How an interval of A was found.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum SuperiorityMethod {
    /// On the logit scale, with the standard error by placements.
    Logit,
    /// By the variance that depends on A itself (Newcombe 2006).
    Score,
}

/// How often a second group's observation exceeds a first group's.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Superiority {
    /// P(Y₂ > Y₁) + ½ P(Y₂ = Y₁), estimated.
    pub a: f64,
    /// By placements; `None` for a group of one observation.
    pub se: Option<f64>,
    /// Of A; a side that the coverage does not bound is infinite.
    pub interval: Interval,
    pub method: SuperiorityMethod,
    /// Cliff's delta, 2A - 1: from -1 to 1.
    pub delta: f64,
    /// Of delta: the same bounds on its scale.
    pub delta_interval: Interval,
}

impl Superiority {
    /// The probability of superiority of `second` over `first`, with the interval that leaves outside what `coverage` says by the
    /// normal distribution: `Coverage::beyond_both(z, f64::INFINITY)` for a critical z.
    ///
    /// Sorts each group once: time of order (n+m) log(n+m).
    ///
    /// `None` for an empty group, a value that is no finite number, or a coverage outside 0 to 1.
    ///
    /// # Accuracy
    /// A and delta to the last bit or two, their standard error and bounds to a relative 1e-12 (`tests/reference/superiority.rs`).
    /// What the interval covers is approximate: measured shares stand in the head of that file.
    ///
    /// # Source
    /// As in the head of this module.
    ///
    /// # Example
    /// ```
    /// # use levelwise::methods::effect_size::{Coverage, superiority::Superiority};
    /// let found = Superiority::of(&[1.0, 2.0, 4.0], &[3.0, 4.0], Coverage::Both { outside: 0.05 }).unwrap();
    /// assert_eq!(found.a, 4.5 / 6.0); // 3 exceeds two values; 4 exceeds two and ties with one
    /// assert_eq!(found.delta, 0.5);
    /// ```
    pub fn of(first: &[f64], second: &[f64], coverage: Coverage) -> Option<Self> {
        let usable = |values: &[f64]| !values.is_empty() && values.iter().all(|value| value.is_finite());
        if !usable(first) || !usable(second) {
            return None;
        }
        let counts = Counts::of(first, second);
        let se = counts.se();
        let (z, sides) = deviate(coverage)?;
        let logit = se.filter(|se| *se > 0.0 && counts.below > 0 && counts.above > 0);
        let (interval, method) = match logit {
            Some(se) => (counts.logit_interval(se, z), SuperiorityMethod::Logit),
            None => (counts.score_interval(z), SuperiorityMethod::Score),
        };
        let interval = sides.kept(interval);
        let (above, below) = (counts.above as f64, counts.below as f64);
        Some(Self {
            a: above / (above + below),
            se,
            interval,
            method,
            delta: (above - below) / (above + below),
            delta_interval: Interval { lower: 2.0 * interval.lower - 1.0, upper: 2.0 * interval.upper - 1.0 },
        })
    }
}

/// Which bounds are asked for.
struct Asked {
    lower: bool,
    upper: bool,
}

impl Asked {
    fn kept(&self, both: Interval) -> Interval {
        Interval {
            lower: if self.lower { both.lower } else { f64::NEG_INFINITY },
            upper: if self.upper { both.upper } else { f64::INFINITY },
        }
    }
}

/// The normal deviate of a coverage.
fn deviate(coverage: Coverage) -> Option<(f64, Asked)> {
    let (tail, lower, upper) = match coverage {
        Coverage::Both { outside } => (outside / 2.0, true, true),
        Coverage::LowerBound { outside } => (outside, true, false),
        Coverage::UpperBound { outside } => (outside, false, true),
    };
    Some((normal::upper_quantile(tail).ok()?, Asked { lower, upper }))
}

/// The pairs of an observation of either group, and each observation's share in them, all counted twice: ties are then 1.
struct Counts {
    /// Pairs in which the second group's is the larger.
    above: u64,
    /// Pairs in which it is the smaller.
    below: u64,
    /// Of each observation of the first group: the second group's that exceed it.
    of_first: Vec<u64>,
    /// Of each observation of the second group: the first group's that it exceeds.
    of_second: Vec<u64>,
}

impl Counts {
    fn of(first: &[f64], second: &[f64]) -> Self {
        let (first, second) = (sorted(first), sorted(second));
        let of_second = exceeded(&second, &first);
        let of_first: Vec<u64> =
            exceeded(&first, &second).iter().map(|count| 2 * second.len() as u64 - count).collect();
        let above = of_second.iter().sum();
        let below = 2 * first.len() as u64 * second.len() as u64 - above;
        Self { above, below, of_first, of_second }
    }

    fn se(&self) -> Option<f64> {
        // A count is twice the placement times the size of the other group.
        let share = |counts: &[u64], others: &[u64]| {
            let n = counts.len() as f64;
            let to_placement = 2.0 * others.len() as f64;
            let squares = squares_about_mean(counts) / (to_placement * to_placement);
            (counts.len() > 1).then(|| squares / (n - 1.0) / n)
        };
        Some((share(&self.of_first, &self.of_second)? + share(&self.of_second, &self.of_first)?).sqrt())
    }

    fn logit_interval(&self, se: f64, z: f64) -> Interval {
        let (above, below) = (self.above as f64, self.below as f64);
        let pairs = above + below;
        let logit = libm::log(above / below);
        let reach = z * se / ((above / pairs) * (below / pairs));
        Interval { lower: from_logit(logit - reach), upper: from_logit(logit + reach) }
    }

    fn score_interval(&self, z: f64) -> Interval {
        let (n, m) = (self.of_first.len() as f64, self.of_second.len() as f64);
        let (above, below) = (self.above as f64, self.below as f64);
        let (a, complement) = (above / (above + below), below / (above + below));
        // V(θ) = V(1-θ): the upper bound of A is 1 less the lower bound of 1 - A.
        Interval {
            lower: score_bound(a, complement, n, m, z),
            upper: 1.0 - score_bound(complement, a, n, m, z),
        }
    }
}

fn sorted(values: &[f64]) -> Vec<f64> {
    let mut values = values.to_vec();
    values.sort_unstable_by(f64::total_cmp);
    values
}

/// For each of `values`: twice the number of `others` that it exceeds, plus the number of those it equals; both sorted. The == of
/// numbers decides a tie, so that 0 and -0 are one value.
fn exceeded(values: &[f64], others: &[f64]) -> Vec<u64> {
    let (mut smaller, mut not_larger) = (0, 0);
    let count = values.iter().map(|value| {
        while smaller < others.len() && others[smaller] < *value {
            smaller += 1;
        }
        not_larger = not_larger.max(smaller);
        while not_larger < others.len() && others[not_larger] <= *value {
            not_larger += 1;
        }
        (smaller + not_larger) as u64
    });
    count.collect()
}

/// Deviations are whole numbers over the number of counts: groups that change places have the same squares to the last bit.
fn squares_about_mean(counts: &[u64]) -> f64 {
    let n = counts.len() as i128;
    let total: i128 = counts.iter().map(|&count| i128::from(count)).sum();
    let deviation = |count: u64| (n * i128::from(count) - total) as f64 / n as f64;
    sum(counts.iter().map(|&count| deviation(count) * deviation(count)))
}

fn from_logit(logit: f64) -> f64 {
    1.0 / (1.0 + libm::exp(-logit))
}

/// The lower bound of A = `a` = 1 - `complement` by method 5 of \[5\]: the θ below A with A - θ = z √V(θ).
///
/// √V is concave, so that A - θ - z √V(θ) is convex, positive at 0 and negative just below A: one root. It is
/// found in logit θ.
fn score_bound(a: f64, complement: f64, n: f64, m: f64, z: f64) -> f64 {
    if a == 0.0 || z == f64::INFINITY {
        return 0.0;
    }
    if z.is_nan() || z <= 0.0 {
        return a;
    }
    let averaged = 0.5 * (n + m) - 1.0;
    let target = libm::asinh(z);
    let beyond = |logit: f64| {
        let (theta, rest) = (from_logit(logit), from_logit(-logit));
        let variance =
            theta * rest / (n * m) * (1.0 + averaged * (rest / (1.0 + rest) + theta / (1.0 + theta)));
        // Differences of the smaller of the two complementary numbers.
        let short = if a < 0.5 { theta - a } else { complement - rest };
        // Nearly straight in the logit, both for small and for large z.
        libm::asinh(short / variance.sqrt()) + target
    };
    // Wald's bound, where it is inside, starts the iteration.
    let sd = ((a * complement).max(0.05) * averaged.max(1.0) / (n * m)).sqrt();
    let start = (a - z * sd).clamp(0.02, 0.98);
    from_logit(roots::increasing_secant(beyond, libm::log(start / (1.0 - start)), 1.0)).min(a)
}
