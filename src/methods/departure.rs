//! How far independent means depart from a linear model of them: the F test of what the model leaves over.
//!
//! With the constant alone as the model this is the overall test: Fisher's F with one error term, Welch's (1951)
//! with a variance for each mean. With polynomials in the scores it is the lack-of-fit test.
//!
//! Q = Σ w (m - fit)² on r = k - columns degrees of freedom, w = 1 / variance of the mean. With one error term
//! F = Q / r on (r, df). With a variance each, Johansen (1980), Biometrika 67, 85–92: F = Q / c on
//! (r, r (r + 2) / (3 A)), c = r + 2 A - 6 A / (r + 2), A = Σ h² / df, h the share of the mean that the model
//! leaves over; for the constant model this is Welch's formula term by term.

use crate::numerics::OutOfDomain;
use crate::numerics::distributions::fisher_f;
use crate::numerics::sums::sum;
use crate::study::{DegreesOfFreedom, Estimates};
use serde::Serialize;

/// An F test of what a model of the means leaves over.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Departure {
    #[serde(rename = "F")]
    pub f: f64,
    pub df1: f64,
    pub df2: f64,
    pub p: f64,
}

/// The test that the means follow the model spanned by `columns`, one value a level in each.
///
/// The columns must be orthogonal in the weights [`precision`]. `None` when they are as many as the levels:
/// nothing can be left over.
///
/// # Errors
/// [`OutOfDomain`] when the numbers are too extreme for an F statistic.
pub fn departure(estimates: &Estimates, columns: &[Vec<f64>]) -> Result<Option<Departure>, OutOfDomain> {
    let k = estimates.means.len();
    if columns.len() >= k {
        return Ok(None);
    }
    let w = precision(estimates);
    let centre = sum(w.iter().zip(&estimates.means).map(|(w, m)| w * m)) / sum(w.iter().copied());
    let mut left: Vec<f64> = estimates.means.iter().map(|m| m - centre).collect();
    let mut leverage = vec![0.0; k];
    for column in columns {
        let size = sum(w.iter().zip(column).map(|(w, x)| w * x * x));
        let slope = sum(w.iter().zip(column).zip(&left).map(|((w, x), m)| w * x * m)) / size;
        left.iter_mut().zip(column).for_each(|(m, x)| *m -= slope * x);
        leverage.iter_mut().zip(w.iter().zip(column)).for_each(|(h, (w, x))| *h += w * x * x / size);
    }
    let q = sum(w.iter().zip(&left).map(|(w, m)| w * m * m));
    let r = (k - columns.len()) as f64;
    let (f, df2) = match &estimates.df {
        DegreesOfFreedom::Common(df) => (q / r, *df),
        DegreesOfFreedom::PerMean(dfs) => {
            let a: f64 = leverage.iter().zip(dfs).map(|(h, df)| (1.0 - h) * (1.0 - h) / df).sum();
            (q / (r + 2.0 * a - 6.0 * a / (r + 2.0)), r * (r + 2.0) / (3.0 * a))
        }
    };
    Ok(Some(Departure { f, df1: r, df2, p: fisher_f::sf(f, r, df2)? }))
}

/// The overall test: departure from a constant.
///
/// # Errors
/// [`OutOfDomain`] as [`departure`].
pub fn overall(estimates: &Estimates) -> Result<Option<Departure>, OutOfDomain> {
    departure(estimates, &[vec![1.0; estimates.means.len()]])
}

/// The weight of each mean: one over its variance. The covariance of the means must be diagonal.
pub fn precision(estimates: &Estimates) -> Vec<f64> {
    (0..estimates.means.len()).map(|i| 1.0 / estimates.covariance[(i, i)]).collect()
}
