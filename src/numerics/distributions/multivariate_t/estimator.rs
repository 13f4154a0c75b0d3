//! What is averaged over the points: one of the two integrals, cut into parts that each have points of their own.

use super::conditioning::Order;
use super::leader::{Leader, Prepared, Side};
use super::separation::Separation;

/// Degrees of freedom that the standard error should have: its own relative standard deviation is then 1/9.
const FREEDOM: f64 = 40.0;
/// Most random shifts of one part.
const MOST_SHIFTS: f64 = 12.0;

/// One term of the answer: `constant` + `factor` times a mean.
#[derive(Debug, Clone, Copy)]
pub(super) struct Part {
    pub constant: f64,
    pub factor: f64,
    /// About how much of the variance is its share, in arbitrary units, square root.
    pub importance: f64,
}

/// Working space of one sample.
#[derive(Debug, Clone, Default)]
pub(super) struct Scratch {
    pub low: Vec<f64>,
    pub high: Vec<f64>,
    pub y: Vec<f64>,
}

/// One of the two integrals.
#[derive(Debug, Clone)]
pub(super) enum Estimator {
    Leader(Leader),
    Separation(Separation),
}

/// What one part needs.
#[derive(Debug, Clone)]
pub(super) enum Ready {
    Leader(Prepared),
    Separation(Order),
}

impl Estimator {
    /// The terms of the answer.
    pub fn parts(&self) -> Vec<Part> {
        match self {
            Estimator::Leader(leader) => leader.parts(),
            Estimator::Separation(_) => vec![Part { constant: 0.0, factor: 1.0, importance: 1.0 }],
        }
    }

    /// Which side of the region the answer is the probability of.
    pub fn side(&self) -> Side {
        match self {
            Estimator::Leader(leader) => leader.side(),
            Estimator::Separation(_) => Side::Inside,
        }
    }

    pub fn prepare(&self, part: usize) -> Ready {
        match self {
            Estimator::Leader(leader) => Ready::Leader(leader.prepare(part)),
            Estimator::Separation(separation) => Ready::Separation(separation.prepare()),
        }
    }

    pub fn dimension(&self, ready: &Ready) -> usize {
        match (self, ready) {
            (Estimator::Leader(leader), Ready::Leader(prepared)) => leader.dimension(prepared),
            (Estimator::Separation(separation), Ready::Separation(order)) => separation.dimension(order),
            _ => 0,
        }
    }

    pub fn sample(&self, ready: &Ready, point: &[f64], scratch: &mut Scratch) -> f64 {
        match (self, ready) {
            (Estimator::Leader(leader), Ready::Leader(prepared)) => leader.sample(prepared, point, scratch),
            (Estimator::Separation(separation), Ready::Separation(order)) => {
                separation.sample(order, point, scratch)
            }
            _ => 0.0,
        }
    }
}

impl Ready {
    /// About how many multiplications one point takes.
    pub fn work(&self) -> usize {
        match self {
            Ready::Leader(prepared) => prepared.work(),
            Ready::Separation(order) => order.work() + 200,
        }
    }
}

/// How many random shifts each part gets: with many parts of like importance, two each already tell the error.
pub(super) fn shifts(parts: &[Part]) -> usize {
    let sum: f64 = parts.iter().map(|part| part.importance).sum();
    let squares: f64 = parts.iter().map(|part| part.importance * part.importance).sum();
    let alike = if squares > 0.0 { sum * sum / squares } else { 1.0 };
    // Less a little, so that parts that are alike up to rounding always get the same number.
    (1.0 + libm::ceil(FREEDOM / alike - 1e-6)).clamp(2.0, MOST_SHIFTS) as usize
}
