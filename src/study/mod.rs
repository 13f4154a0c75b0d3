//! A study's design and what was observed in it: levels, samples, summaries, and the estimates that every
//! comparison starts from. Nothing here tests a hypothesis; nothing here knows a cell or a page.

mod assign;
mod estimates;
mod levels;
mod sample;
mod summary;

pub use assign::{Apart, Assigned, MOST_LEVELS, TooManyLevels, assign};
pub use estimates::{ContrastEstimate, DegreesOfFreedom, Estimates, NoEstimates};
pub use levels::{LevelAccount, Levels};
pub use sample::Sample;
pub use summary::{GroupSummary, Pooled, Summary};

use serde::Serialize;

/// Whether one standard deviation is assumed for all levels or each has its own.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Variances {
    Equal,
    Unequal,
}

/// Which direction of the outcome is the desirable one.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Better {
    Higher,
    Lower,
}

/// What has been observed so far.
#[derive(Debug, Clone, PartialEq)]
pub enum Observed {
    /// Nothing yet: the study stands as a plan.
    Plan,
    /// Every single value.
    Sample(Sample),
    /// Size, mean and standard deviation of each group only.
    Summary(Summary),
}

/// One outcome compared over the levels of one grouping variable.
#[derive(Debug, Clone, PartialEq)]
pub struct Study {
    /// Name of the outcome, as in the table's header or as typed.
    pub outcome: String,
    /// Name of the grouping variable.
    pub factor: String,
    pub levels: Levels,
    pub variances: Variances,
    /// Error rate, between 0 and 1.
    pub alpha: f64,
    /// Confidence of intervals, between 0 and 1; 1 - alpha unless chosen otherwise.
    pub confidence: f64,
    /// Unit of the outcome, for reports ("points", "mg/l").
    pub unit: Option<String>,
    pub better: Option<Better>,
    /// One entry a level, in the order of `levels`; empty for a plan.
    pub account: Vec<LevelAccount>,
    pub observed: Observed,
}

impl Study {
    /// Sizes, means and variances of the groups, whether raw values or summaries were observed; `None` for a plan.
    pub fn summary(&self) -> Option<Summary> {
        match &self.observed {
            Observed::Plan => None,
            Observed::Sample(sample) => Some(sample.summary()),
            Observed::Summary(summary) => Some(summary.clone()),
        }
    }
}
