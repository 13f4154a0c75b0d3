//! From which dose on? A fixed sequence from the top dose down.
//!
//! The hypothesis of dose i is tested at the full alpha, the top dose first, and only as long as every higher dose was rejected.
//! The order is fixed beforehand, so that nothing is adjusted: the first true hypothesis in the order is rejected wrongly with a
//! probability of at most alpha, and none after it unless it was. The adjusted p-value of a dose is the largest p-value from the
//! top dose down to it.
//!
//! # References
//! 1. Maurer, Hothorn and Lehmacher (1995), in Biometrie in der chemisch-pharmazeutischen Industrie 6, 3-18 (from memory).
//! 2. Tukey, Ciminera and Heyse (1985), Biometrics 41, 295-301, doi 10.2307/2530666 (trends without the top doses).

use crate::study::{DegreesOfFreedom, Estimates};

/// One dose in the sequence.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct DoseStep {
    /// Of the dose by itself.
    pub p: f64,
    /// The largest p-value from the top dose down to this one.
    pub p_adjusted: f64,
    pub rejected: bool,
}

/// The sequence, decided.
#[derive(Debug, Clone, PartialEq)]
pub struct LowestDose {
    /// From the lowest dose to the top one, as the p-values were given.
    pub steps: Vec<DoseStep>,
    /// Place of the lowest dose of the unbroken sequence of rejections, from 0; `None` if the top dose is not rejected.
    pub lowest: Option<usize>,
}

/// Why there is no sequence.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoSequence {
    #[error("there is no dose to test")]
    NoDose,
    #[error("the p-value of dose {} is {value}, but must be from 0 to 1", place + 1)]
    PValue { place: usize, value: f64 },
    #[error("alpha is {alpha}, but must be greater than 0 and less than 1")]
    Alpha { alpha: f64 },
}

/// The fixed sequence from the top dose down: `p_values` from the lowest dose to the top one, each of a test of its own at
/// level `alpha`.
///
/// Controls the family-wise error strongly at `alpha`, however the tests depend on one another, if each holds its level.
///
/// # Errors
/// [`NoSequence`] without doses, for a p-value or an alpha out of its range.
///
/// # Source
/// \[1\].
///
/// # Example
/// ```
/// # use levelwise::methods::trend::lowest_dose;
/// let sequence = lowest_dose(&[0.01, 0.30, 0.04, 0.002], 0.05)?;
/// assert_eq!(sequence.lowest, Some(2)); // the second dose breaks the sequence
/// assert_eq!(sequence.steps[0].p_adjusted, 0.30);
/// # Ok::<(), levelwise::methods::trend::NoSequence>(())
/// ```
pub fn lowest_dose(p_values: &[f64], alpha: f64) -> Result<LowestDose, NoSequence> {
    if p_values.is_empty() {
        return Err(NoSequence::NoDose);
    }
    if !(alpha > 0.0 && alpha < 1.0) {
        return Err(NoSequence::Alpha { alpha });
    }
    if let Some(place) = p_values.iter().position(|p| !(0.0..=1.0).contains(p)) {
        return Err(NoSequence::PValue { place, value: p_values[place] });
    }
    let mut largest = 0.0_f64;
    let mut steps: Vec<DoseStep> = Vec::new();
    for &p in p_values.iter().rev() {
        largest = largest.max(p);
        steps.push(DoseStep { p, p_adjusted: largest, rejected: largest <= alpha });
    }
    steps.reverse();
    let lowest = steps.iter().position(|step| step.rejected);
    Ok(LowestDose { steps, lowest })
}

/// The estimates of the lowest `count` levels alone, with the error term of all: a trend without the top doses is tested on them.
///
/// All levels if there are not as many.
pub fn lowest_levels(estimates: &Estimates, count: usize) -> Estimates {
    let count = count.min(estimates.means.len());
    let df = match &estimates.df {
        DegreesOfFreedom::Common(df) => DegreesOfFreedom::Common(*df),
        DegreesOfFreedom::PerMean(df) => DegreesOfFreedom::PerMean(df[..count].to_vec()),
    };
    Estimates {
        labels: estimates.labels[..count].to_vec(),
        origin: estimates.origin,
        means: estimates.means[..count].to_vec(),
        n: estimates.n[..count].to_vec(),
        covariance: estimates.covariance.view((0, 0), (count, count)).into_owned(),
        df,
    }
}
