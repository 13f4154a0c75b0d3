//! The largest of several correlated t statistics, for any correlation matrix, singular ones included: the largest Tᵢ or
//! |Tᵢ| with T = A Z / S, A Aᵀ the correlation, Z independent standard normal and df·S² chi-squared with df degrees of
//! freedom; and the probability of any rectangle. With df infinite T is multivariate normal.
//!
//! The statistics stay within their limits in a polytope of r dimensions, r the rank. Up to rank 3 its outside is cut into
//! cones over its faces, whose probabilities are integrals of one variable (`line`, `plane`, `space`): exact up to rounding,
//! in both tails. Beyond, the answer is a mean over randomly shifted lattices (`lattice`) with its standard error: where all
//! limits are equal, or lie around the origin, of the integral over the statistic that leads (`leader`), whose relative
//! error vanishes in the far tail; for other rectangles by separation of variables (`separation`). Points are doubled until the
//! error asked for is reached. The same seed gives the same answer everywhere.
//!
//! [`Family`] factors the matrix once, for many limits; [`Refinement`] works in slices; the functions here are for one answer.
//!
//! # References
//! 1. Genz and Bretz (2009), Computation of Multivariate Normal and t Probabilities.
//! 2. What each method rests on stands at the head of its file.

mod conditioning;
mod critical;
mod deviate;
mod estimator;
mod facet;
mod family;
mod lattice;
mod leader;
mod line;
mod matrix;
mod plane;
mod radial;
mod ray;
mod refinement;
mod region;
mod separation;
mod space;

pub use family::Family;
pub use refinement::Refinement;

use super::finite;
use super::many_to_one::Sides;
use crate::numerics::OutOfDomain;

/// How much work may be spent where the rank is above 3.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Effort {
    /// Standard error, relative to the answer, at which to stop.
    pub relative_error: f64,
    /// Most points of one lattice; there are at least two for each statistic. From 64 to 16384, in powers of 2; what is
    /// outside is moved in.
    pub most_points: usize,
    /// Seed of the shifts.
    pub seed: u64,
}

impl Default for Effort {
    /// A relative standard error of 1e-4, and as many points as that takes, up to 16384 of each lattice.
    fn default() -> Self {
        Effort { relative_error: 1e-4, most_points: lattice::MOST, seed: 1 }
    }
}

/// Which method gave an answer.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Method {
    /// Integrals of one variable, exact up to rounding.
    Exact,
    /// Lattice points for the integral over the statistic that leads.
    Leader,
    /// Lattice points for the integral by separation of variables.
    Separation,
}

/// A probability or a quantile, and what is known of its error.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Answer {
    /// The probability or the quantile.
    pub value: f64,
    /// Its standard error; 0 if the method is exact.
    pub error: f64,
    /// Lattice points that it rests on.
    pub points: usize,
    /// How it was found.
    pub method: Method,
}

/// P(max <= `c`) for statistics with the given `correlation` (rows) and `df` degrees of freedom.
///
/// # Errors
/// As for [`sf`].
///
/// # Accuracy
/// As for [`sf`]; with one side and `c` below 0 up to rank 3 an absolute error of 1e-14 times the tail of one statistic.
pub fn cdf(
    c: f64,
    correlation: &[Vec<f64>],
    df: f64,
    sides: Sides,
    effort: Effort,
) -> Result<Answer, OutOfDomain> {
    finite("c", c)?;
    Family::new(correlation, df, sides)?.cdf(c, effort)
}

/// P(max > `c`), the single-step adjusted p-value of a statistic `c`, for statistics with the given `correlation` (rows) and
/// `df` degrees of freedom, which may be infinite. `error` is the standard error, 0 up to rank 3.
///
/// # Errors
/// [`OutOfDomain`] if `c` is not finite (or negative with both sides), `df` is not positive, or `correlation` is not a
/// correlation matrix: square, 1 on the diagonal, symmetric and positive semi-definite, each to 1e-9.
///
/// # Accuracy
/// Relative error below 1e-12 up to rank 3 (`tests/reference/ACCURACY.md` has what is reached); beyond, the error that is returned.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::{many_to_one::Sides, multivariate_t};
/// // All pairs of three equal groups: the correlations have rank 2.
/// let pairs = [vec![1.0, 0.5, -0.5], vec![0.5, 1.0, 0.5], vec![-0.5, 0.5, 1.0]];
/// let c = 3.876_776_75 / f64::sqrt(2.0); // the studentized range's 5 % point for 10 df
/// let p = multivariate_t::sf(c, &pairs, 10.0, Sides::Both, Default::default())?;
/// assert!((p.value - 0.05).abs() < 1e-8);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(
    c: f64,
    correlation: &[Vec<f64>],
    df: f64,
    sides: Sides,
    effort: Effort,
) -> Result<Answer, OutOfDomain> {
    finite("c", c)?;
    Family::new(correlation, df, sides)?.sf(c, effort)
}

/// The c with P(max > c) = `upper_p`: the critical value of the family; infinite at 0, the least possible value at 1. Found on
/// one fixed set of points, so that it is smooth in its arguments; `error` is the standard error of c.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, or as for [`sf`].
///
/// # Accuracy
/// As for [`Family::upper_quantile`].
pub fn upper_quantile(
    upper_p: f64,
    correlation: &[Vec<f64>],
    df: f64,
    sides: Sides,
    effort: Effort,
) -> Result<Answer, OutOfDomain> {
    Family::new(correlation, df, sides)?.upper_quantile(upper_p, effort)
}

/// The c with P(max <= c) = `p`.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, or as for [`sf`].
///
/// # Accuracy
/// As for [`Family::upper_quantile`].
pub fn quantile(
    p: f64,
    correlation: &[Vec<f64>],
    df: f64,
    sides: Sides,
    effort: Effort,
) -> Result<Answer, OutOfDomain> {
    Family::new(correlation, df, sides)?.quantile(p, effort)
}

/// P(`lower`ᵢ <= Tᵢ <= `upper`ᵢ for all i); limits may be infinite.
///
/// # Errors
/// As for [`Family::new`] and [`Family::rectangle`].
///
/// # Accuracy
/// As for [`Family::rectangle`].
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::multivariate_t;
/// // Three independent normal variables are all positive with probability 1/8.
/// let independent = [vec![1.0, 0.0, 0.0], vec![0.0, 1.0, 0.0], vec![0.0, 0.0, 1.0]];
/// let infinite = [f64::INFINITY; 3];
/// let p = multivariate_t::rectangle(&[0.0; 3], &infinite, &independent, f64::INFINITY, Default::default())?;
/// assert!((p.value - 0.125).abs() < 1e-14);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn rectangle(
    lower: &[f64],
    upper: &[f64],
    correlation: &[Vec<f64>],
    df: f64,
    effort: Effort,
) -> Result<Answer, OutOfDomain> {
    Family::new(correlation, df, Sides::Both)?.rectangle(lower, upper, effort)
}
