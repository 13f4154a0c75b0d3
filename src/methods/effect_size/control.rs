//! Glass's delta: the difference of a group and the control in units of the control's standard deviation, and its interval.
//!
//! ```text
//! delta = (m - m₀)/s₀        t₀ = (m - m₀) / (s₀ √(1/n₀ + ρ/n))        ρ = σ²/σ₀²
//! ```
//!
//! Under normality t₀ has exactly the noncentral t distribution on n₀ - 1 degrees of freedom with noncentrality
//! (μ - μ₀)/σ₀ / √(1/n₀ + ρ/n), because s₀ is independent of both means. So the interval that inverts it is
//!
//! - **exact** where both variances are taken as equal, ρ = 1 (\[1\]: the distribution of Glass's estimator);
//! - **approximate** where they may differ: the observed ratio s²/s₀² takes the place of ρ. That would be exact if
//!   the ratio were known; what its estimation adds is left out, so that coverage falls below the nominal where the treated group
//!   is small (measured shares: `tests/reference/glass.rs`).
//!
//! It uses the control's variance alone, not the error term of the row's test, and so need not agree with that test.
//!
//! References: \[1\] Hedges (1981), J. Educ. Statist. 6, 107–128, doi 10.3102/10769986006002107 (distribution of Glass's estimator, and
//! the factor that makes it unbiased). \[2\] Glass (1976), Educ. Researcher 5, 3–8. \[3\] Steiger and Fouladi (1997), in What If
//! There Were No Significance Tests?, 221–257 (inverting the noncentral t).

use super::{Coverage, Interval, StandardisedBy, StandardisedEffect, Standardiser};
use crate::study::{ContrastEstimate, GroupSummary, Variances};

/// A group beside the control, in units of the control's standard deviation.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct GlassDelta {
    /// (mean - control's mean) / control's SD.
    pub delta: f64,
    /// `delta` times Hedges' exact factor at `df`: unbiased where the variances are equal.
    pub corrected: f64,
    /// The control's standard deviation.
    pub control_sd: f64,
    /// The control's observations less 1.
    pub df: f64,
    /// Of the population's delta; exact or approximate as the head of this module says. `None` where the noncentral t gives no
    /// bound (a t value beyond all measure, or a coverage of 0).
    pub interval: Option<Interval>,
    /// The same bounds times the same factor as `corrected`; `None` as above.
    pub corrected_interval: Option<Interval>,
}

impl GlassDelta {
    /// Glass's delta of `group` beside `control`, both with their means from one origin, under the study's `variances`.
    ///
    /// `None` if the control has fewer than two observations or no variation, the group has none (unequal variances: fewer
    /// than two), or the result is no finite number.
    ///
    /// # Accuracy
    /// That of the summaries; bounds to a relative 1e-9.
    ///
    /// # Source
    /// \[1\], \[2\], \[3\].
    ///
    /// # Example
    /// ```
    /// # use levelwise::methods::effect_size::{Coverage, control::GlassDelta};
    /// # use levelwise::study::{Sample, Variances};
    /// let sample = Sample { origin: 0.0, groups: vec![vec![1.0, 2.0, 3.0], vec![4.0, 6.0]] };
    /// let groups = sample.summary().groups;
    /// let found = GlassDelta::of(&groups[1], &groups[0], Variances::Equal, Coverage::Both { outside: 0.05 }).unwrap();
    /// assert_eq!(found.delta, 3.0); // (5 - 2) / 1
    /// ```
    pub fn of(
        group: &GroupSummary,
        control: &GroupSummary,
        variances: Variances,
        coverage: Coverage,
    ) -> Option<Self> {
        if group.n == 0 || control.n < 2 {
            return None;
        }
        let (n, n0) = (group.n as f64, control.n as f64);
        let control_variance = control.variance.filter(|variance| *variance > 0.0)?;
        let group_variance = match variances {
            Variances::Equal => control_variance,
            Variances::Unequal => group.variance?,
        };
        let df = n0 - 1.0;
        let difference = ContrastEstimate {
            estimate: group.mean - control.mean,
            se: (control_variance / n0 + group_variance / n).sqrt(),
            df,
        };
        let control_sd = control_variance.sqrt();
        // The average variance of one group: the control's.
        let standardiser =
            Standardiser { sd: control_sd, df, by: StandardisedBy::AverageVarianceOf(vec![1]) };
        let effect = StandardisedEffect::of(&difference, &[1.0, -1.0], standardiser, coverage)?;
        Some(Self {
            delta: effect.d,
            corrected: effect.g,
            control_sd,
            df,
            interval: effect.d_interval,
            corrected_interval: effect.g_interval,
        })
    }
}
