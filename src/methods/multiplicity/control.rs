//! Each level against a control: Dunnett (1955, 1964), exact for any group sizes.
//!
//! The t statistics share the control's mean: ρ_ij = λ_i λ_j with λ_i² = v_0 / (v_0 + v_i), v the variances of the
//! means, which is n_i / (n_i + n_0) with one error term.

use super::Sides;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::many_to_one;
use crate::study::Estimates;

/// Relative error that the distribution's tail stays below (`tests/reference/accuracy.rs` lists what it reaches).
pub const RELATIVE_ERROR: f64 = 1e-11;

/// The loading λ of every level but the control, in their order. The covariance of the means must be diagonal.
pub fn loadings(estimates: &Estimates, control: usize) -> Vec<f64> {
    let v = |i: usize| estimates.covariance[(i, i)];
    let others = (0..estimates.means.len()).filter(|i| *i != control);
    others.map(|i| (v(control) / (v(control) + v(i))).sqrt()).collect()
}

/// Adjusted p-value of a comparison with this t: P(max |T| ≥ |t|), or P(max T ≥ t) towards the side asked for.
///
/// # Errors
/// [`OutOfDomain`] from the distribution.
pub fn adjusted_p(t: f64, loadings: &[f64], df: f64, sides: Sides) -> Result<f64, OutOfDomain> {
    match sides {
        Sides::Both => many_to_one::sf(t.abs(), loadings, df, many_to_one::Sides::Both),
        Sides::Greater => many_to_one::sf(t, loadings, df, many_to_one::Sides::Greater),
        Sides::Less => many_to_one::sf(-t, loadings, df, many_to_one::Sides::Greater),
    }
}

/// The critical value d: differences of more than d standard errors are significant at `alpha`.
///
/// # Errors
/// [`OutOfDomain`] from the distribution.
pub fn critical(alpha: f64, loadings: &[f64], df: f64, sides: Sides) -> Result<f64, OutOfDomain> {
    let sides = match sides {
        Sides::Both => many_to_one::Sides::Both,
        Sides::Greater | Sides::Less => many_to_one::Sides::Greater,
    };
    many_to_one::upper_quantile(alpha, loadings, df, sides)
}
