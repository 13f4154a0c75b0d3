//! The grids: the middle, far tails, tiny and infinite degrees of freedom, many groups. Every argument is written as a
//! number and none is computed by what is tested, so that the two builds are asked the same.

pub mod answers;
pub mod central;
pub mod counts;
pub mod families;
pub mod foundations;
pub mod noncentral;

/// Probabilities from the far lower to the far upper tail.
const PROBABILITIES: [f64; 13] =
    [0.0, 1e-300, 1e-100, 1e-20, 1e-8, 1e-3, 0.025, 0.2, 0.5, 0.8, 0.975, 0.999_999, 1.0];

const INFINITY: f64 = f64::INFINITY;
