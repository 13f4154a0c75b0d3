//! Why the overall test and the comparisons can differ, on a study's own numbers.
//!
//! The overall F asks whether *some* contrast of the means differs from zero: its value times (k - 1) is the t² of
//! the contrast that carries most, c ∝ w (m - m_w) with w = 1 / variance of the mean (n for one error term; Scheffé
//! 1959, section 3.5). That contrast need not be a pair, nor anything that was planned. Planned comparisons in
//! turn look at few directions, each with more power than a test that looks at all.

use super::Comparisons;
use crate::methods::contrasts::{Contrast, in_words};
use crate::methods::departure::{Departure, overall, precision};
use crate::numerics::OutOfDomain;
use crate::numerics::sums::sum;
use crate::study::{ContrastEstimate, Estimates};
use serde::Serialize;

/// Which of the two found something and the other did not.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Disagreement {
    OverallOnly,
    ComparisonsOnly,
}

/// Why the overall test and the comparisons of one study differ.
#[derive(Debug, Clone, PartialEq)]
pub struct Explanation {
    pub disagreement: Disagreement,
    pub overall: Departure,
    /// The contrast that carries the overall test, scaled so that Σ|c| = 2, positive in its estimate.
    pub carrying: Contrast,
    /// The same in words.
    pub carrying_words: String,
    pub carrying_estimate: ContrastEstimate,
    /// Index of the row with the smallest adjusted p-value.
    pub nearest: usize,
}

/// The explanation, where the overall test and the comparisons differ at the same alpha; else `None`.
///
/// # Errors
/// [`OutOfDomain`] when the numbers are too extreme for an F statistic.
pub fn explain(estimates: &Estimates, comparisons: &Comparisons) -> Result<Option<Explanation>, OutOfDomain> {
    let (Some(test), Some(carrying)) = (overall(estimates)?, carrying_contrast(estimates)) else {
        return Ok(None);
    };
    let found = comparisons.rows.iter().any(|row| row.rejected);
    let disagreement = match (test.p <= comparisons.alpha, found) {
        (true, false) => Disagreement::OverallOnly,
        (false, true) => Disagreement::ComparisonsOnly,
        _ => return Ok(None),
    };
    let rows = comparisons.rows.iter().enumerate();
    let smallest = rows.min_by(|(_, one), (_, other)| {
        one.p_adjusted.total_cmp(&other.p_adjusted).then(one.p.total_cmp(&other.p))
    });
    let Some((nearest, _)) = smallest else {
        return Ok(None);
    };
    Ok(Some(Explanation {
        disagreement,
        overall: test,
        carrying_words: in_words(&carrying.coefficients, &estimates.labels),
        carrying_estimate: estimates.contrast(&carrying.coefficients),
        carrying,
        nearest,
    }))
}

/// The contrast with the largest |t|, c ∝ w (m - m_w), scaled so that Σ|c| = 2; `None` when all means are equal.
pub fn carrying_contrast(estimates: &Estimates) -> Option<Contrast> {
    let w = precision(estimates);
    let centre = sum(w.iter().zip(&estimates.means).map(|(w, m)| w * m)) / sum(w.iter().copied());
    let raw: Vec<f64> = w.iter().zip(&estimates.means).map(|(w, m)| w * (m - centre)).collect();
    // The rounding of the centre would leave a sum that is not quite zero; every weight takes its part of it.
    let left = sum(raw.iter().copied());
    let total = sum(w.iter().copied());
    let raw: Vec<f64> = raw.iter().zip(&w).map(|(c, w)| c - left * w / total).collect();
    let size = sum(raw.iter().map(|c| c.abs())) / 2.0;
    let coefficients: Vec<f64> = raw.iter().map(|c| c / size).collect();
    Contrast::new("the contrast that carries the overall test", coefficients, &estimates.labels).ok()
}
