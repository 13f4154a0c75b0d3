//! Any contrast, also one suggested by the data: Scheffé (1953), Biometrika 40, 87–104.
//!
//! t² / (k - 1) is referred to F on (k - 1, df). Some contrast is significant exactly when the overall F is.

use crate::numerics::OutOfDomain;
use crate::numerics::distributions::fisher_f;

/// Adjusted p-value of a contrast of `levels` means with this t.
///
/// # Errors
/// [`OutOfDomain`] from the distribution.
pub fn adjusted_p(t: f64, levels: usize, df: f64) -> Result<f64, OutOfDomain> {
    let free = levels as f64 - 1.0;
    fisher_f::sf(t * t / free, free, df)
}

/// The number of standard errors that a contrast must exceed: √((k - 1) F).
///
/// # Errors
/// [`OutOfDomain`] from the distribution.
pub fn critical(alpha: f64, levels: usize, df: f64) -> Result<f64, OutOfDomain> {
    let free = levels as f64 - 1.0;
    Ok((free * fisher_f::upper_quantile(alpha, free, df)?).sqrt())
}
