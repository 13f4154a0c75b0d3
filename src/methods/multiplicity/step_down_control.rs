//! Each level against a control, step by step: Dunnett and Tamhane (1991).
//!
//! The comparison with the largest statistic is judged in the family of all, the next in the family of those that are
//! left, and so on until one is not significant. The adjusted p-value of a comparison is the largest of
//! P(max over those left > t) up to its own step. This is the closed test (Marcus, Peritz and Gabriel 1976) whose
//! test of each intersection is Dunnett's, so the family-wise error is controlled strongly for any group sizes, under
//! the model of Dunnett's test: normal errors with one variance. It rejects whatever the single-step test rejects.
//!
//! # References
//! 1. Dunnett and Tamhane (1991), Statistics in Medicine 10, 939-947, doi 10.1002/sim.4780100614.
//! 2. Marcus, Peritz and Gabriel (1976), Biometrika 63, 655-660, doi 10.1093/biomet/63.3.655.

use super::Sides;
use super::control;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::student_t;

/// What one comparison was held to.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Judged {
    /// The value that |t| (both sides), t (greater) or -t (less) had to reach.
    pub critical: f64,
    /// The same as a level of the comparison's own p-value.
    pub level: f64,
    /// How many comparisons were left at the step that decided, this one included.
    pub left: usize,
}

/// The adjusted p-values, in the order of `t`: each the smallest level at which the whole procedure rejects.
///
/// `t` are the statistics of level less control; `loadings` the λ of the same comparisons = √(n_i / (n_i + n_0)); `df`
/// those of the error term, which may be infinite. An empty family has no p-values.
///
/// # Errors
/// [`OutOfDomain`] if there are not as many loadings as statistics, a statistic is not finite, a loading is not
/// strictly between -1 and 1, or `df` is not positive.
///
/// # Accuracy
/// Relative error at most 1e-11, that of `many_to_one::sf`.
pub fn adjusted(t: &[f64], loadings: &[f64], df: f64, sides: Sides) -> Result<Vec<f64>, OutOfDomain> {
    let steps = Steps::new(t, loadings, sides)?;
    let mut result = vec![0.0; t.len()];
    let mut so_far = 0.0_f64;
    for (step, &i) in steps.order.iter().enumerate() {
        let alone = control::adjusted_p(t[i], &loadings[i..=i], df, sides)?;
        let p = control::adjusted_p(t[i], &steps.left(step, loadings), df, sides)?;
        so_far = so_far.max(p).max(alone).min(1.0);
        result[i] = so_far;
    }
    Ok(result)
}

/// What each comparison was held to at `alpha`, in the order of `t`.
///
/// The procedure stops at its first failure: that comparison and all with smaller statistics are held to the critical
/// value of that step. Comparisons with equal statistics are held to the same one.
///
/// # Errors
/// As for [`adjusted`], and if `alpha` is not from 0 to 1.
///
/// # Accuracy
/// Relative error of the critical values at most 1e-11.
pub fn judged(
    t: &[f64],
    loadings: &[f64],
    df: f64,
    sides: Sides,
    alpha: f64,
) -> Result<Vec<Judged>, OutOfDomain> {
    let steps = Steps::new(t, loadings, sides)?;
    let mut result = vec![Judged { critical: f64::INFINITY, level: 0.0, left: 0 }; t.len()];
    let mut last: Option<(f64, Judged)> = None;
    let mut failed = false;
    for (step, &i) in steps.order.iter().enumerate() {
        let statistic = towards(t[i], sides);
        let judged = match last {
            Some((before, judged)) if failed || before == statistic => judged,
            _ => at_step(&steps.left(step, loadings), df, sides, alpha)?,
        };
        failed |= statistic < judged.critical;
        last = Some((statistic, judged));
        result[i] = judged;
    }
    Ok(result)
}

fn at_step(left: &[f64], df: f64, sides: Sides, alpha: f64) -> Result<Judged, OutOfDomain> {
    let critical = control::critical(alpha, left, df, sides)?;
    let tails = if sides == Sides::Both { 2.0 } else { 1.0 };
    // The critical value is infinite at alpha 0 and, for one side, minus infinity at 1.
    let level = if critical.is_finite() { (tails * student_t::sf(critical, df)?).min(1.0) } else { alpha };
    Ok(Judged { critical, level, left: left.len() })
}

/// The comparisons in the order in which they are judged.
struct Steps {
    order: Vec<usize>,
}

impl Steps {
    fn new(t: &[f64], loadings: &[f64], sides: Sides) -> Result<Self, OutOfDomain> {
        if t.len() != loadings.len() {
            let (value, allowed) = (loadings.len() as f64, "one for each statistic");
            return Err(OutOfDomain { argument: "number of loadings", value, allowed });
        }
        let mut order: Vec<usize> = (0..t.len()).collect();
        order.sort_by(|&i, &j| towards(t[j], sides).total_cmp(&towards(t[i], sides)));
        Ok(Self { order })
    }

    /// The loadings of the comparisons that are left at this step.
    fn left(&self, step: usize, loadings: &[f64]) -> Vec<f64> {
        self.order[step..].iter().map(|&i| loadings[i]).collect()
    }
}

/// The statistic on the side that counts: the larger, the more it speaks against the hypothesis.
fn towards(t: f64, sides: Sides) -> f64 {
    match sides {
        Sides::Both => t.abs(),
        Sides::Greater => t,
        Sides::Less => -t,
    }
}
