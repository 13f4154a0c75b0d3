//! The monotone fit: the rising (or falling) values nearest to the means in weighted least squares.
//!
//! It minimises Σ w (m - f)² over f₁ <= f₂ <= ... and has the closed form f_i = max over u <= i of the min over v >= i of
//! Σ_{u..v} w m / Σ_{u..v} w. Pool adjacent violators finds it: blocks of levels are put down one after the other, and as long as
//! the block before has the larger mean, both become one block with their weighted mean. One pass; a falling fit is the rising
//! one of the means with their signs changed.
//!
//! # References
//! 1. Ayer, Brunk, Ewing, Reid and Silverman (1955), Ann. Math. Statist. 26, 641-647 (the fit and the pooling).
//! 2. Barlow, Bartholomew, Bremner and Brunk (1972), Statistical Inference under Order Restrictions, section 1.2 (from memory).

use crate::numerics::sums::sum;
use serde::Serialize;

/// Which way the fit goes with the order of the levels.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Direction {
    /// No level below an earlier one.
    Rising,
    /// No level above an earlier one.
    Falling,
}

impl Direction {
    /// 1 for rising, -1 for falling.
    pub fn sign(self) -> f64 {
        match self {
            Self::Rising => 1.0,
            Self::Falling => -1.0,
        }
    }
}

/// Adjacent levels with one fitted mean.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Block {
    /// Place of the first level, from 0.
    pub first: usize,
    /// Place of the last level, which belongs to the block.
    pub last: usize,
    /// Weighted mean of the levels' means.
    pub mean: f64,
    /// Sum of the levels' weights.
    pub weight: f64,
}

/// Means made monotone.
#[derive(Debug, Clone, PartialEq)]
pub struct MonotoneFit {
    pub direction: Direction,
    /// One a level, in the unit of the means and from the same origin.
    pub fitted: Vec<f64>,
    /// In the order of the levels. Levels that are equal without pooling stay blocks of their own.
    pub blocks: Vec<Block>,
}

/// Why there is no monotone fit.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoMonotoneFit {
    #[error("there is no level to fit")]
    NoLevel,
    #[error("{weights} weights were given for {means} means; each mean needs one")]
    WeightCount { weights: usize, means: usize },
    #[error("mean {} is {value}, but must be a finite number", place + 1)]
    NotFinite { place: usize, value: f64 },
    #[error("weight {} is {value}, but must be a positive number, and the sum of all be finite", place + 1)]
    Weight { place: usize, value: f64 },
}

/// The monotone fit to `means` with the given positive `weights`, the numbers of observations for the fit to the observations.
///
/// # Errors
/// [`NoMonotoneFit`] without means, with another number of weights, or for numbers that are not finite or weights not positive.
///
/// # Accuracy
/// Each fitted mean to a few units in the last place of the largest mean in its block: weighted sums over the block's
/// members, however it came together.
///
/// # Source
/// \[1\].
///
/// # Example
/// ```
/// # use levelwise::methods::trend::{Direction, monotone};
/// let fit = monotone(&[1.0, 3.0, 2.0], &[1.0, 1.0, 3.0], Direction::Rising)?;
/// assert_eq!(fit.fitted, [1.0, 2.25, 2.25]);
/// assert_eq!(fit.blocks.len(), 2);
/// # Ok::<(), levelwise::methods::trend::NoMonotoneFit>(())
/// ```
pub fn monotone(means: &[f64], weights: &[f64], direction: Direction) -> Result<MonotoneFit, NoMonotoneFit> {
    check(means, weights)?;
    let sign = direction.sign();
    let mut blocks: Vec<Block> = Vec::new();
    for (place, (mean, weight)) in means.iter().zip(weights).enumerate() {
        let mut block = Block { first: place, last: place, mean: *mean, weight: *weight };
        while let Some(before) = blocks.pop_if(|before| sign * before.mean > sign * block.mean) {
            block = pooled(means, weights, before.first, place);
        }
        blocks.push(block);
    }
    let fitted = blocks.iter().flat_map(|block| (block.first..=block.last).map(|_| block.mean)).collect();
    Ok(MonotoneFit { direction, fitted, blocks })
}

/// One block of the levels from `first` to `last`.
fn pooled(means: &[f64], weights: &[f64], first: usize, last: usize) -> Block {
    let (means, weights) = (&means[first..=last], &weights[first..=last]);
    let weight = sum(weights.iter().copied());
    // Shares before products: no sum exceeds the largest mean, whatever the weights.
    let mean = sum(means.iter().zip(weights).map(|(mean, w)| mean * (w / weight)));
    let least = means.iter().copied().fold(f64::INFINITY, f64::min);
    let most = means.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    Block { first, last, mean: mean.clamp(least, most), weight }
}

fn check(means: &[f64], weights: &[f64]) -> Result<(), NoMonotoneFit> {
    if means.is_empty() {
        return Err(NoMonotoneFit::NoLevel);
    }
    if weights.len() != means.len() {
        return Err(NoMonotoneFit::WeightCount { weights: weights.len(), means: means.len() });
    }
    if let Some(place) = means.iter().position(|mean| !mean.is_finite()) {
        return Err(NoMonotoneFit::NotFinite { place, value: means[place] });
    }
    let mut total = 0.0;
    for (place, weight) in weights.iter().enumerate() {
        total += weight;
        if !(*weight > 0.0 && total.is_finite()) {
            return Err(NoMonotoneFit::Weight { place, value: *weight });
        }
    }
    Ok(())
}
