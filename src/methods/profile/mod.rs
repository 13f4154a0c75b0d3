//! What each group looks like, and what the values say about the assumptions: information for the reader, on
//! which no other procedure here depends.

mod normality;
mod spread;

pub use normality::{ShapiroWilk, shapiro_wilk};
pub use spread::{Bartlett, Centre, SpreadTest, bartlett, spread_test};

use crate::numerics::OutOfDomain;
use crate::numerics::distributions::student_t;
use crate::study::{GroupSummary, LevelAccount, Observed, Study};
use serde::Serialize;

/// One group described. What cannot be known is left out: a group of one has no standard deviation, a typed
/// summary no median.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct GroupProfile {
    pub level: String,
    /// Values analysed.
    pub n: usize,
    pub missing: usize,
    pub excluded: usize,
    #[serde(flatten)]
    pub moments: Moments,
    #[serde(flatten)]
    pub order: Option<OrderStatistics>,
}

/// Mean and spread of one group.
#[derive(Debug, Clone, Copy, Default, PartialEq, Serialize)]
pub struct Moments {
    #[serde(skip_serializing_if = "Option::is_none")]
    pub mean: Option<f64>,
    /// With divisor n - 1.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub sd: Option<f64>,
    /// sd / √n.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub se: Option<f64>,
    /// Bounds of the mean from the group's own standard deviation and Student's t on n - 1 df.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub lower: Option<f64>,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub upper: Option<f64>,
}

/// Order statistics of one group with at least one value.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct OrderStatistics {
    pub min: f64,
    pub lower_quartile: f64,
    pub median: f64,
    pub upper_quartile: f64,
    pub max: f64,
}

/// The groups described, and the checks of the assumptions. A check that cannot be given says why.
#[derive(Debug, Clone, PartialEq)]
pub struct Profile {
    pub groups: Vec<GroupProfile>,
    /// Root of the mean square within; `None` where no group has two values.
    pub pooled_sd: Option<f64>,
    /// Levene's test: one-way F on the distances from the group means.
    pub levene: Result<SpreadTest, NoCheck>,
    /// The same on the distances from the group medians (Brown and Forsythe).
    pub brown_forsythe: Result<SpreadTest, NoCheck>,
    pub bartlett: Result<Bartlett, NoCheck>,
    /// Shapiro and Wilk's test on the residuals from the group means.
    pub shapiro_wilk: Result<ShapiroWilk, NoCheck>,
    /// Confidence of the intervals of the means.
    pub confidence: f64,
}

/// Why a check cannot be given.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoCheck {
    #[error("it needs the single values, and this study has only summaries")]
    OnlySummaries,
    #[error("fewer than two levels have observations")]
    OneLevel,
    #[error("level \"{level}\" has no observation")]
    EmptyLevel { level: String },
    #[error("level \"{level}\" has 1 observation and so no variance; at least 2 are needed")]
    SingleObservation { level: String },
    #[error("level \"{level}\" has no variation: all its values are equal")]
    NoVariation { level: String },
    #[error("the distances from the group centres do not vary inside any group")]
    NoVariationOfDistances,
    #[error("the residuals do not vary")]
    NoResiduals,
    #[error("it needs at least 3 residuals, and there are {n}")]
    TooFew { n: usize },
    #[error("it is known for at most 5000 residuals, and there are {n}")]
    TooMany { n: usize },
    #[error("the squares of the values are beyond the range of numbers; give the outcome in another unit")]
    OutOfRange,
    #[error("its p-value cannot be computed: {0}")]
    NoProbability(#[from] OutOfDomain),
}

impl Profile {
    /// The groups of `study` described; `None` while the study is a plan.
    ///
    /// From typed summaries come n, mean, SD, SE, interval, the pooled SD and Bartlett's test; what needs the
    /// single values is left out.
    pub fn of(study: &Study) -> Option<Self> {
        let summary = study.summary()?;
        let labels = &study.levels.labels;
        let sample = match &study.observed {
            Observed::Sample(sample) => Some(sample),
            Observed::Plan | Observed::Summary(_) => None,
        };
        let groups = labels.iter().zip(&summary.groups).enumerate().map(|(i, (level, group))| GroupProfile {
            level: level.clone(),
            n: group.n,
            missing: study.account.get(i).map_or(0, |account: &LevelAccount| account.missing),
            excluded: study.account.get(i).map_or(0, |account| account.excluded),
            moments: moments(group, summary.origin, study.confidence),
            order: sample.and_then(|sample| OrderStatistics::of(&sample.groups[i], sample.origin)),
        });
        let from_values =
            |centre| sample.map_or(Err(NoCheck::OnlySummaries), |sample| spread_test(labels, sample, centre));
        Some(Self {
            groups: groups.collect(),
            pooled_sd: summary.pooled().map(|pooled| pooled.variance.sqrt()).filter(|sd| sd.is_finite()),
            levene: from_values(Centre::Mean),
            brown_forsythe: from_values(Centre::Median),
            bartlett: bartlett(labels, &summary),
            shapiro_wilk: sample
                .map_or(Err(NoCheck::OnlySummaries), |sample| shapiro_wilk(&sample.residuals())),
            confidence: study.confidence,
        })
    }
}

fn moments(group: &GroupSummary, origin: f64, confidence: f64) -> Moments {
    if group.n == 0 {
        return Moments::default();
    }
    let mean = origin + group.mean;
    let sd = group.sd().filter(|sd| sd.is_finite());
    let se = sd.map(|sd| sd / (group.n as f64).sqrt());
    let half = se.and_then(|se| {
        let t = student_t::upper_quantile((1.0 - confidence) / 2.0, group.n as f64 - 1.0).ok()?;
        Some(t * se).filter(|half| half.is_finite())
    });
    // The offset and its half width are added first: both are small beside the origin.
    let bound =
        |sign: f64| half.map(|half| origin + (group.mean + sign * half)).filter(|bound| bound.is_finite());
    // The sum of the largest numbers has no mean that could be written.
    Moments {
        mean: Some(mean).filter(|mean| mean.is_finite()),
        sd,
        se,
        lower: bound(-1.0),
        upper: bound(1.0),
    }
}

impl OrderStatistics {
    /// Minimum, quartiles, median and maximum of values given as offsets from `origin`; `None` without values,
    /// or where an offset and the origin together leave the range of numbers.
    pub fn of(offsets: &[f64], origin: f64) -> Option<Self> {
        let mut sorted = offsets.to_vec();
        sorted.sort_by(f64::total_cmp);
        let (first, last) = (*sorted.first()?, *sorted.last()?);
        if !(origin + first).is_finite() || !(origin + last).is_finite() {
            return None;
        }
        Some(Self {
            min: origin + first,
            lower_quartile: origin + quantile(&sorted, 0.25),
            median: origin + quantile(&sorted, 0.5),
            upper_quartile: origin + quantile(&sorted, 0.75),
            max: origin + last,
        })
    }
}

/// The `p` quantile of `sorted` values (ascending, at least one): linear interpolation between the order
/// statistics around position (n - 1) p, counted from 0. For `p` 0.5 this is the usual median.
///
/// # Source
/// Hyndman and Fan (1996), The American Statistician 50, 361–365, definition 7.
pub fn quantile(sorted: &[f64], p: f64) -> f64 {
    let position = (sorted.len() as f64 - 1.0) * p;
    let below = position.floor();
    let (part, index) = (position - below, below as usize);
    let lower = sorted[index];
    let upper = sorted[(index + 1).min(sorted.len() - 1)];
    // As a weighted sum where the difference would leave the range of numbers.
    let gap = upper - lower;
    if part == 0.5 || !gap.is_finite() { lower * (1.0 - part) + upper * part } else { lower + part * gap }
}
