//! Cohen's d and Hedges' g of a contrast, d = L / SD with the contrast scaled so that Σ|c| = 2 (the mean of
//! one set less the mean of another), and the interval of the population value by inverting the noncentral t.
//!
//! The interval's level is handed in as what stays outside, so that it can be the level that belongs to a
//! row's own critical value: then it excludes 0 exactly when the interval of the difference does.
//!
//! References: \[1\] Hedges (1981), J. Educ. Statist. 6, 107–128, doi 10.3102/10769986006002107 (g and its
//! exact factor). \[2\] Steiger and Fouladi (1997), in What If There Were No Significance Tests?, 221–257
//! (inverting the noncentral t). \[3\] Bonett (2008), Psychol. Methods 13, 99–109 (the average variance as the
//! standardiser where variances differ).

use crate::numerics::OutOfDomain;
use crate::numerics::distributions::{noncentral_t, student_t};
use crate::study::{ContrastEstimate, Summary, Variances};
use serde::Serialize;

/// Which standard deviation a difference is divided by.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum StandardisedBy {
    /// The root of the mean square within, pooled over all groups of the study.
    PooledOverAllGroups,
    /// The root of the mean square within, pooled over these groups.
    PooledOver(Vec<usize>),
    /// The root of the plain average of the variances of these groups.
    AverageVarianceOf(Vec<usize>),
}

/// A standard deviation with the degrees of freedom behind it.
#[derive(Debug, Clone, PartialEq)]
pub struct Standardiser {
    pub sd: f64,
    pub df: f64,
    pub by: StandardisedBy,
}

impl Standardiser {
    /// The standard deviation that fits the study's variances, for the contrast with these coefficients.
    ///
    /// Equal variances: pooled over all groups, on observations less groups. Unequal variances: the root of the
    /// average variance of the groups whose coefficient is not 0, each counting alike whatever its size, so that
    /// the same populations give the same standardiser for any allocation; its df are Satterthwaite's,
    /// (Σs²)² / Σ(s⁴/(n - 1)).
    ///
    /// `None` where no such standard deviation exists or it is 0: no group has two observations, a group of the
    /// contrast has fewer than two (unequal variances), or nothing varies.
    pub fn of(summary: &Summary, variances: Variances, coefficients: &[f64]) -> Option<Self> {
        match variances {
            Variances::Equal => {
                let pooled = summary.pooled()?;
                let sd = pooled.variance.sqrt();
                (sd > 0.0).then_some(Self { sd, df: pooled.df, by: StandardisedBy::PooledOverAllGroups })
            }
            Variances::Unequal => Self::average(summary, compared(coefficients)),
        }
    }

    /// The standard deviation of all groups, whatever is compared: pooled, or the root of the average variance.
    ///
    /// `None` as [`Standardiser::of`].
    pub fn over_all(summary: &Summary, variances: Variances) -> Option<Self> {
        match variances {
            Variances::Equal => Self::of(summary, variances, &[]),
            Variances::Unequal => Self::average(summary, (0..summary.groups.len()).collect()),
        }
    }

    /// The standard deviation of the groups compared: pooled over them alone, or the root of their average variance.
    ///
    /// `None` as [`Standardiser::of`].
    pub fn over_compared(summary: &Summary, variances: Variances, coefficients: &[f64]) -> Option<Self> {
        let involved = compared(coefficients);
        if variances == Variances::Unequal {
            return Self::average(summary, involved);
        }
        let groups = involved.iter().map(|i| summary.groups.get(*i).copied()).collect::<Option<Vec<_>>>()?;
        let pooled = Summary { origin: summary.origin, groups }.pooled()?;
        let sd = pooled.variance.sqrt();
        (sd > 0.0).then_some(Self { sd, df: pooled.df, by: StandardisedBy::PooledOver(involved) })
    }

    fn average(summary: &Summary, involved: Vec<usize>) -> Option<Self> {
        let (mut total, mut below) = (0.0, 0.0);
        for &i in &involved {
            let group = summary.groups.get(i)?;
            let variance = group.variance?;
            total += variance;
            below += variance * variance / (group.n as f64 - 1.0);
        }
        let sd = (total / involved.len() as f64).sqrt();
        let df = total * total / below;
        let usable = sd > 0.0 && sd.is_finite() && df.is_finite();
        usable.then_some(Self { sd, df, by: StandardisedBy::AverageVarianceOf(involved) })
    }
}

/// The groups with a coefficient that is not 0.
fn compared(coefficients: &[f64]) -> Vec<usize> {
    (0..coefficients.len()).filter(|&i| coefficients[i] != 0.0).collect()
}

/// How much probability an interval leaves outside, and on which sides it is closed.
///
/// The outside is kept, not the confidence: a critical value far out leaves 1e-20 outside, and 1 - 1e-20 is 1.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Coverage {
    /// Half of `outside` on either side.
    Both { outside: f64 },
    /// All of `outside` below the lower bound; no upper bound.
    LowerBound { outside: f64 },
    /// All of `outside` above the upper bound; no lower bound.
    UpperBound { outside: f64 },
}

impl Coverage {
    /// The two-sided coverage that belongs to rejecting when |t| >= `critical` on `df` degrees of freedom.
    ///
    /// # Errors
    /// [`OutOfDomain`] as from [`student_t::sf`].
    pub fn beyond_both(critical: f64, df: f64) -> Result<Self, OutOfDomain> {
        Ok(Self::Both { outside: (2.0 * student_t::sf(critical, df)?).min(1.0) })
    }

    /// The lower bound that belongs to rejecting when t >= `critical`.
    ///
    /// # Errors
    /// [`OutOfDomain`] as from [`student_t::sf`].
    pub fn lower_beyond(critical: f64, df: f64) -> Result<Self, OutOfDomain> {
        Ok(Self::LowerBound { outside: student_t::sf(critical, df)? })
    }

    /// The upper bound that belongs to rejecting when t <= -`critical`.
    ///
    /// # Errors
    /// [`OutOfDomain`] as from [`student_t::sf`].
    pub fn upper_beyond(critical: f64, df: f64) -> Result<Self, OutOfDomain> {
        Ok(Self::UpperBound { outside: student_t::sf(critical, df)? })
    }
}

/// An interval; a side without a bound is infinite.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Interval {
    pub lower: f64,
    pub upper: f64,
}

impl Interval {
    /// Both bounds times a positive `factor`.
    pub fn scaled(self, factor: f64) -> Self {
        Self { lower: self.lower * factor, upper: self.upper * factor }
    }
}

/// Cohen's d and Hedges' g of one contrast, with the sign of the contrast.
#[derive(Debug, Clone, PartialEq)]
pub struct StandardisedEffect {
    pub d: f64,
    /// `d` times Hedges' exact factor at the standardiser's df.
    pub g: f64,
    /// Interval of the population value on the scale of d; `None` where the noncentral t gives no bound (a
    /// t value beyond all measure, or a coverage of 0).
    pub d_interval: Option<Interval>,
    /// The same interval on the scale of g: its bounds times the same factor.
    pub g_interval: Option<Interval>,
    pub standardiser: Standardiser,
}

impl StandardisedEffect {
    /// d, g and their interval for a contrast with its standard error and degrees of freedom.
    ///
    /// The interval inverts the noncentral t at t = estimate / se on the *contrast's* df, and brings the bounds of
    /// the noncentrality to the scale of d by se / SD. With a pooled SD this is exact under normality and equal
    /// variances. With unequal variances it is an approximation, in the same way as Welch's t: the row's
    /// Satterthwaite df stand for the distribution of the standard error, and se / SD is taken as known. It
    /// excludes 0 exactly when the row's t test does, which an interval from a variance formula would not.
    ///
    /// `None` if the effect is not a finite number (the coefficients are all 0, or the SD is vanishingly small).
    ///
    /// # Source
    /// \[1\], \[2\]; for unequal variances the standardiser of \[3\].
    pub fn of(
        contrast: &ContrastEstimate,
        coefficients: &[f64],
        standardiser: Standardiser,
        coverage: Coverage,
    ) -> Option<Self> {
        let scale = 2.0 / coefficients.iter().map(|c| c.abs()).sum::<f64>();
        let d = contrast.estimate * scale / standardiser.sd;
        let correction = hedges_correction(standardiser.df);
        if !d.is_finite() || !correction.is_finite() {
            return None;
        }
        let per_noncentrality = contrast.se * scale / standardiser.sd;
        let bounds = noncentrality_interval(contrast.estimate / contrast.se, contrast.df, coverage);
        let d_interval = bounds.map(|bounds| bounds.scaled(per_noncentrality)).filter(is_ordered);
        let g_interval = d_interval.map(|interval| interval.scaled(correction));
        Some(Self { d, g: correction * d, d_interval, g_interval, standardiser })
    }
}

fn is_ordered(interval: &Interval) -> bool {
    interval.lower <= interval.upper
}

/// Bounds of the noncentrality of a t value \[2\]. The lower bound is found as minus the upper bound of -t, so
/// that a small probability outside is never written as 1 minus itself.
fn noncentrality_interval(t: f64, df: f64, coverage: Coverage) -> Option<Interval> {
    let upper = |t: f64, outside: f64| noncentral_t::noncentrality(t, df, outside).ok();
    match coverage {
        Coverage::Both { outside } => {
            Some(Interval { lower: -upper(-t, outside / 2.0)?, upper: upper(t, outside / 2.0)? })
        }
        Coverage::LowerBound { outside } => {
            Some(Interval { lower: -upper(-t, outside)?, upper: f64::INFINITY })
        }
        Coverage::UpperBound { outside } => {
            Some(Interval { lower: f64::NEG_INFINITY, upper: upper(t, outside)? })
        }
    }
}

/// Hedges' exact factor J(`df`) = Γ(df/2) / (√(df/2) Γ((df - 1)/2)), which makes d unbiased.
///
/// 0 for `df` 1, where d has no mean. NaN, which no caller here shows, for `df` below 1.
///
/// # Accuracy
/// Relative error below 1e-13, checked in `tests/reference/effect_size.rs`.
///
/// # Source
/// \[1\]. Beyond df 100 the gamma functions are taken by Stirling's formula with three terms of its series.
pub fn hedges_correction(df: f64) -> f64 {
    if df < 1.0 || df.is_nan() {
        return f64::NAN;
    }
    if df > 100.0 {
        return correction_series(df);
    }
    if df == 1.0 {
        return 0.0;
    }
    libm::exp(libm::lgamma(df / 2.0) - libm::lgamma((df - 1.0) / 2.0)) / (df / 2.0).sqrt()
}

/// ln J with both gamma functions by Stirling's formula. The leading parts combine, with z = df/2 and
/// w = z - 1/2, to (z - 1) ln(z/w) - 1/2, where nothing large cancels.
fn correction_series(df: f64) -> f64 {
    let z = df / 2.0;
    let w = z - 0.5;
    libm::exp((z - 1.0) * libm::log1p(0.5 / w) - 0.5 + stirling_tail(z) - stirling_tail(w))
}

/// What Stirling's formula leaves over: 1/(12z) - 1/(360z³) + 1/(1260z⁵).
fn stirling_tail(z: f64) -> f64 {
    let square = z * z;
    (1.0 / 12.0 - (1.0 / 360.0 - 1.0 / (1260.0 * square)) / square) / z
}
