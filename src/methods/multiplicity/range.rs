//! All pairs by the studentized range: Tukey (1953) and Kramer (1956) with one error term, Games and Howell
//! (1976) with a variance for each level.
//!
//! q = √2 |t|, referred to the range of k means. With one error term and unequal group sizes the procedure is
//! conservative (Hayter 1984, Ann. Statist. 12, 61–75); with a variance each and Satterthwaite's df per pair it is
//! approximate, and liberal for very small groups.

use crate::numerics::OutOfDomain;
use crate::numerics::distributions::studentized_range::Family;

/// Relative error that the distribution's tail stays below (`tests/reference/accuracy.rs` lists what it reaches).
pub const RELATIVE_ERROR: f64 = 1e-12;

/// The statistic q of a pair with this t.
pub fn q(t: f64) -> f64 {
    t.abs() * std::f64::consts::SQRT_2
}

/// Adjusted p-value of a pair with this t on `df` degrees of freedom; `range` is that of all levels.
///
/// # Errors
/// [`OutOfDomain`] from the distribution.
pub fn adjusted_p(t: f64, range: &mut Family, df: f64) -> Result<f64, OutOfDomain> {
    range.sf(q(t), df)
}

/// The value of q that is exceeded with probability `alpha`; a difference is t = q / √2 standard errors.
///
/// # Errors
/// [`OutOfDomain`] from the distribution.
pub fn critical_q(alpha: f64, range: &mut Family, df: f64) -> Result<f64, OutOfDomain> {
    range.upper_quantile(alpha, df)
}
