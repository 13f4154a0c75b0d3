//! Families of pairs that are ranked alone: all pairs (Steel; Dwass; Critchlow and Fligner) and each group against a control
//! (Steel). Both refer z of [`super::pairwise`] to the joint normal distribution that many large samples have.

use crate::methods::multiplicity::{Sides, control, range};
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::studentized_range::Family;
use std::f64::consts::SQRT_2;

/// Adjusted p-value of a pair with this `z`, of all pairs of the groups whose `range` is given (made once for all pairs):
/// P(range of as many independent standard normal variables ≥ √2 |z|).
///
/// Controls the family-wise error strongly in large samples; with fewer than about six observations in a group the normal
/// shape is too rough. With two groups it is the two-sided normal p-value of z.
///
/// # Errors
/// [`OutOfDomain`] if `z` is not finite.
///
/// # Accuracy
/// That of [`Family::sf`].
///
/// # Source
/// Steel (1960), Technometrics 2, 197–207; Dwass (1960); Critchlow and Fligner (1991), Commun. Statist. Theory Meth. 20, 127–139.
///
/// # Example
/// ```
/// # use levelwise::methods::multiplicity::ranks::steel_dwass;
/// # use levelwise::numerics::distributions::studentized_range::Family;
/// let mut two = Family::new(2)?;
/// assert!((steel_dwass(1.959_963_984_540_054, &mut two)? - 0.05).abs() < 1e-13);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn steel_dwass(z: f64, range: &mut Family) -> Result<f64, OutOfDomain> {
    range::adjusted_p(checked(z)?, range, f64::INFINITY)
}

/// The |z| that is exceeded with probability `alpha` by some pair of the groups whose `range` is given.
///
/// # Errors
/// [`OutOfDomain`] if `alpha` is not from 0 to 1.
///
/// # Accuracy
/// That of [`Family::upper_quantile`].
///
/// # Source
/// As [`steel_dwass`].
pub fn steel_dwass_critical(alpha: f64, range: &mut Family) -> Result<f64, OutOfDomain> {
    Ok(range::critical_q(alpha, range, f64::INFINITY)? / SQRT_2)
}

/// The loading √(n_i / (n_0 + n_i + 1)) of each group, for a control of `control` observations and `others` in their order.
///
/// Two groups' U beside the same control of n_0 have under the hypothesis the covariance n_i n_j n_0/12 and the variances n_i n_0
/// (n_i + n_0 + 1)/12: their correlation is the product of their loadings, without ties exactly.
///
/// # Errors
/// [`OutOfDomain`] if a group is empty.
///
/// # Accuracy
/// To the last bits.
///
/// # Source
/// Steel (1959), Biometrics 15, 560–572, for equal sizes; for any sizes by the covariance above.
pub fn steel_loadings(control: usize, others: &[usize]) -> Result<Vec<f64>, OutOfDomain> {
    if control == 0 || others.contains(&0) {
        return Err(OutOfDomain { argument: "sizes", value: 0.0, allowed: "at least 1" });
    }
    let n0 = control as f64;
    Ok(others.iter().map(|&size| (size as f64 / (n0 + size as f64 + 1.0)).sqrt()).collect())
}

/// Adjusted p-value of a comparison with the control with this `z`, the group less the control, where the family has these
/// `loadings` ([`steel_loadings`]).
///
/// Controls the family-wise error strongly in large samples.
///
/// # Errors
/// [`OutOfDomain`] if `z` is not finite, or the loadings are not as for
/// [`many_to_one::sf`](crate::numerics::distributions::many_to_one::sf).
///
/// # Accuracy
/// That of [`many_to_one::sf`](crate::numerics::distributions::many_to_one::sf).
///
/// # Source
/// Steel (1959), Biometrics 15, 560–572.
pub fn steel(z: f64, loadings: &[f64], sides: Sides) -> Result<f64, OutOfDomain> {
    control::adjusted_p(checked(z)?, loadings, f64::INFINITY, sides)
}

/// The z (|z| on both sides) that is exceeded with probability `alpha` by some comparison with the control; for "less" its
/// negative is what counts.
///
/// # Errors
/// [`OutOfDomain`] if `alpha` is not from 0 to 1, or the loadings are not as for
/// [`many_to_one::sf`](crate::numerics::distributions::many_to_one::sf).
///
/// # Accuracy
/// That of [`many_to_one::upper_quantile`](crate::numerics::distributions::many_to_one::upper_quantile).
///
/// # Source
/// As [`steel`].
pub fn steel_critical(alpha: f64, loadings: &[f64], sides: Sides) -> Result<f64, OutOfDomain> {
    control::critical(alpha, loadings, f64::INFINITY, sides)
}

fn checked(z: f64) -> Result<f64, OutOfDomain> {
    if z.is_finite() {
        Ok(z)
    } else {
        Err(OutOfDomain { argument: "z", value: z, allowed: "a finite number" })
    }
}
