//! Do the groups vary alike? Levene's test, its form with medians, and Bartlett's.

use super::NoCheck;
use crate::methods::overall::{AnovaTable, NoOverallTest};
use crate::numerics::distributions::chi_squared;
use crate::numerics::sums::sum;
use crate::study::{NoEstimates, Sample, Summary};
use serde::Serialize;

/// From which centre of its group the distance of a value is taken.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Centre {
    /// Levene (1960).
    Mean,
    /// Brown and Forsythe (1974): keeps the error rate better for skewed values.
    Median,
}

/// A one-way F test on distances.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct SpreadTest {
    #[serde(rename = "F")]
    pub f: f64,
    pub df1: f64,
    pub df2: f64,
    pub p: f64,
}

/// The one-way F test on |value - centre of its group|: large where the groups vary differently.
///
/// Groups of one or two values have no spread of their distances, and with medians every group of odd size has
/// one distance that is 0 by construction (grave for groups of three): the test says little about such groups.
///
/// # Errors
/// [`NoCheck`] for an empty level, fewer than two levels, or distances that vary in no group.
///
/// # Source
/// Levene (1960), in Contributions to Probability and Statistics, 278–292; Brown and Forsythe (1974), J. Amer.
/// Statist. Assoc. 69, 364–367, doi 10.1080/01621459.1974.10482955.
pub fn spread_test(labels: &[String], sample: &Sample, centre: Centre) -> Result<SpreadTest, NoCheck> {
    let groups: Vec<Vec<f64>> = sample.groups.iter().map(|values| distances(values, centre)).collect();
    if !vary_somewhere(&groups) && groups.iter().all(|group| !group.is_empty()) && groups.len() > 1 {
        return Err(NoCheck::NoVariationOfDistances);
    }
    let table = AnovaTable::of(labels, &Sample { origin: 0.0, groups }.summary()).map_err(as_check)?;
    Ok(SpreadTest { f: table.f, df1: table.df_between, df2: table.df_within, p: table.p })
}

fn distances(values: &[f64], centre: Centre) -> Vec<f64> {
    if values.is_empty() {
        return Vec::new();
    }
    let centre = match centre {
        Centre::Mean => sum(values.iter().copied()) / values.len() as f64,
        Centre::Median => {
            let mut sorted = values.to_vec();
            sorted.sort_by(f64::total_cmp);
            super::quantile(&sorted, 0.5)
        }
    };
    values.iter().map(|value| (value - centre).abs()).collect()
}

/// Whether the distances vary inside a group by more than rounding: two values lie equally far from their
/// centre, but rarely to the last bit, and an F from such noise would be monstrous.
fn vary_somewhere(groups: &[Vec<f64>]) -> bool {
    let largest = groups.iter().flatten().copied().fold(0.0, f64::max);
    groups.iter().any(|group| {
        let (low, high) =
            group.iter().fold((f64::INFINITY, 0.0_f64), |(low, high), z| (low.min(*z), high.max(*z)));
        high - low > 1e-13 * largest
    })
}

fn as_check(error: NoOverallTest) -> NoCheck {
    match error {
        NoOverallTest::NoEstimates(NoEstimates::OneLevel) => NoCheck::OneLevel,
        NoOverallTest::NoEstimates(NoEstimates::EmptyLevel { level }) => NoCheck::EmptyLevel { level },
        NoOverallTest::NoEstimates(NoEstimates::OutOfRange) => NoCheck::OutOfRange,
        NoOverallTest::NoEstimates(_) | NoOverallTest::AllTied => NoCheck::NoVariationOfDistances,
        NoOverallTest::NoProbability(error) => NoCheck::NoProbability(error),
    }
}

/// Bartlett's test of equal variances.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Bartlett {
    pub chi2: f64,
    pub df: f64,
    pub p: f64,
}

/// Bartlett's test of equal variances: sensitive to any departure from normality, and then about that.
///
/// # Errors
/// [`NoCheck`] for fewer than two levels and for a level with fewer than two values or without variation.
///
/// # Source
/// Bartlett (1937), Proc. Roy. Soc. A 160, 268–282.
pub fn bartlett(labels: &[String], summary: &Summary) -> Result<Bartlett, NoCheck> {
    if labels.len() < 2 {
        return Err(NoCheck::OneLevel);
    }
    for (group, level) in summary.groups.iter().zip(labels) {
        let level = || level.clone();
        match (group.n, group.variance) {
            (0, _) => return Err(NoCheck::EmptyLevel { level: level() }),
            (_, None) => return Err(NoCheck::SingleObservation { level: level() }),
            (_, Some(0.0)) => return Err(NoCheck::NoVariation { level: level() }),
            _ => {}
        }
    }
    let pooled = summary.pooled().ok_or(NoCheck::OneLevel)?;
    let parts = summary.groups.iter().filter_map(|group| Some((group.n as f64 - 1.0, group.variance?)));
    let raw = sum(parts.clone().map(|(df, variance)| df * libm::log(pooled.variance / variance)));
    let df = labels.len() as f64 - 1.0;
    let correction = 1.0 + (sum(parts.map(|(df, _)| 1.0 / df)) - 1.0 / pooled.df) / (3.0 * df);
    let chi2 = (raw / correction).max(0.0);
    if !chi2.is_finite() {
        return Err(NoCheck::OutOfRange);
    }
    Ok(Bartlett { chi2, df, p: chi_squared::sf(chi2, df)? })
}
