//! The jobs that are timed: measurements in, adjusted p-values and simultaneous intervals out, all the way through the
//! procedures that the notebook uses.

use levelwise::methods::contrasts::{Set, ready_set};
use levelwise::methods::multiplicity::{Adjust, Family, Request, compare};
use levelwise::study::{Estimates, Sample, Variances};

/// What a family of comparisons came to: for each comparison in order the adjusted p-value and the two bounds of its
/// simultaneous 95 % interval.
pub type Decided = Vec<f64>;

/// All differences of the groups, adjusted by Tukey's procedure.
///
/// # Errors
/// A sentence, if the groups cannot be compared.
pub fn all_pairs(groups: Vec<Vec<f64>>) -> Result<Decided, String> {
    decide(groups, Set::AllPairs, Adjust::Tukey)
}

/// The differences of every other group from the first, adjusted by Dunnett's procedure.
///
/// # Errors
/// A sentence, if the groups cannot be compared.
pub fn against_first(groups: Vec<Vec<f64>>) -> Result<Decided, String> {
    decide(groups, Set::AgainstControl(0), Adjust::Dunnett)
}

fn decide(groups: Vec<Vec<f64>>, set: Set, adjust: Adjust) -> Result<Decided, String> {
    let labels: Vec<String> = (1..=groups.len()).map(|number| number.to_string()).collect();
    let summary = Sample { origin: 0.0, groups }.summary();
    let estimates =
        Estimates::one_way(&labels, &summary, Variances::Equal).map_err(|error| error.to_string())?;
    let contrasts = ready_set(set, &labels);
    let decided = compare(&Request::of_means(&estimates, &contrasts, Family::Set(set), adjust))
        .map_err(|error| error.to_string())?;
    let bounds = decided.rows.iter().filter_map(|row| Some((row.p_adjusted, row.interval?)));
    Ok(bounds.flat_map(|(p, interval)| [p, interval.lower, interval.upper]).collect())
}
