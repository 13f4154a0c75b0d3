//! The figures: differences with their intervals, and the groups with their means.

use super::{Laid, words};
use crate::answer::figure::{self, Group, Groups, IntervalRow, Intervals, Mark, Span};
use crate::answer::{Figure, number};
use crate::methods::multiplicity::Family;
use crate::notebook::kinds::wording::outcome_with_unit;
use crate::numerics::distributions::student_t;
use crate::study::{Observed, Variances};

/// The differences with the intervals of the table, one row a comparison.
pub fn differences(laid: &Laid) -> Figure {
    let result = &laid.comparisons;
    let what = if laid.asked.family == Family::Contrasts { "Contrast" } else { "Difference" };
    let rows = result.rows.iter().map(|row| IntervalRow {
        label: words::row_name(&row.name, laid.asked.family),
        estimate: row.estimate,
        interval: Some(Span { lower: row.interval.lower, upper: row.interval.upper }),
        mark: if row.rejected { Mark::Solid } else { Mark::Hollow },
    });
    figure::intervals(&Intervals {
        title: format!("{what}s of {}", laid.study.outcome),
        axis: format!("{what} in {}", outcome_with_unit(laid.study)),
        bars: format!("Bars: {} ({})", words::interval(result), words::procedure(result.adjust)),
        solid: "a difference is shown".to_string(),
        hollow: "not shown to differ".to_string(),
        reference: Some(0.0),
        rows: rows.collect(),
    })
}

/// Every value where it is known, with the means and their own intervals.
pub fn groups(laid: &Laid) -> Figure {
    let (study, estimates) = (laid.study, laid.estimates);
    let values = |i: usize| match &study.observed {
        Observed::Sample(sample) => sample.groups[i].iter().map(|offset| sample.origin + offset).collect(),
        _ => Vec::new(),
    };
    let groups = (0..estimates.labels.len()).map(|i| Group {
        label: estimates.labels[i].clone(),
        values: values(i),
        mean: Some(estimates.origin + estimates.means[i]),
        interval: mean_interval(laid, i),
    });
    let spread = match study.variances {
        Variances::Equal => "SD pooled over all levels",
        Variances::Unequal => "own SD",
    };
    let level = number::percent(laid.comparisons.confidence);
    figure::groups(&Groups {
        title: format!("{} by {}", study.outcome, study.factor),
        axis: outcome_with_unit(study),
        bars: format!(
            "Bars: mean with its {level} interval, each level by itself ({spread}); they do not decide the comparisons"
        ),
        groups: groups.collect(),
    })
}

/// The mean with t times its standard error, from the same error term as the comparisons.
fn mean_interval(laid: &Laid, i: usize) -> Option<Span> {
    let estimates = laid.estimates;
    let df = match &estimates.df {
        crate::study::DegreesOfFreedom::Common(df) => *df,
        crate::study::DegreesOfFreedom::PerMean(dfs) => dfs[i],
    };
    let t = student_t::upper_quantile((1.0 - laid.comparisons.confidence) / 2.0, df).ok()?;
    let (mean, reach) = (estimates.origin + estimates.means[i], t * estimates.covariance[(i, i)].sqrt());
    Some(Span { lower: mean - reach, upper: mean + reach })
}
