//! The same effect of a whole factor in different clothes.

use super::NoPower;
use crate::numerics::sums::sum;

/// Cohen's f for an eta squared: √(eta² / (1 - eta²)).
///
/// # Errors
/// [`NoPower::EtaSquared`] outside 0 ≤ eta² < 1.
pub fn f_of_eta_squared(eta_squared: f64) -> Result<f64, NoPower> {
    if !(0.0..1.0).contains(&eta_squared) {
        return Err(NoPower::EtaSquared { eta_squared });
    }
    Ok((eta_squared / (1.0 - eta_squared)).sqrt())
}

/// Eta squared for a Cohen's f: f² / (1 + f²), the share of the total variance in equal groups.
///
/// # Errors
/// [`NoPower::F`] if f is negative or no number.
pub fn eta_squared_of_f(f: f64) -> Result<f64, NoPower> {
    let f = checked_f(f)?;
    if f > 1.0 { Ok(1.0 / (1.0 + 1.0 / (f * f))) } else { Ok(f * f / (1.0 + f * f)) }
}

/// Cohen's f of population means in groups of equal size with the common standard deviation `sd`: the root mean
/// square of the means about their average, over `sd`.
///
/// # Errors
/// [`NoPower`] for fewer than two means, a mean that is not finite, or an SD that is not above 0.
///
/// # Source
/// Cohen (1988), Statistical Power Analysis for the Behavioral Sciences, section 8.2.
pub fn f_of_means(means: &[f64], sd: f64) -> Result<f64, NoPower> {
    if means.len() < 2 {
        return Err(NoPower::TooFewGroups { groups: means.len() });
    }
    if !(sd > 0.0 && sd.is_finite()) {
        return Err(NoPower::Sd { sd });
    }
    if let Some(&mean) = means.iter().find(|mean| !mean.is_finite()) {
        return Err(NoPower::Mean { mean });
    }
    // From the first mean, so that equal means give exactly 0.
    let k = means.len() as f64;
    let offsets: Vec<f64> = means.iter().map(|mean| (mean - means[0]) / sd).collect();
    let centre = sum(offsets.iter().copied()) / k;
    checked_f((sum(offsets.iter().map(|offset| (offset - centre) * (offset - centre))) / k).sqrt())
}

/// `f` if it is an effect that can be worked with.
pub(super) fn checked_f(f: f64) -> Result<f64, NoPower> {
    if f >= 0.0 && f.is_finite() { Ok(f) } else { Err(NoPower::F { f }) }
}
