//! Is there any difference between the levels at all? One test for all of them together. None of these is a
//! gate for the comparisons, and nothing here chooses between them.

mod anova;
mod permutation;
mod ranks;
mod welch;

pub use anova::AnovaTable;
pub use permutation::{MOST_ASSIGNMENTS, PermutationF};
pub use ranks::{KruskalWallis, midranks};
pub use welch::WelchTest;

use crate::numerics::OutOfDomain;
use crate::study::NoEstimates;

/// Why an overall test cannot be given.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoOverallTest {
    #[error(transparent)]
    NoEstimates(#[from] NoEstimates),
    #[error("all values are equal, so their ranks cannot differ between the groups")]
    AllTied,
    #[error("the p-value cannot be computed: {0}")]
    NoProbability(#[from] OutOfDomain),
}

/// Passes on a number that is one.
fn finite(value: f64) -> Result<f64, NoOverallTest> {
    if value.is_finite() { Ok(value) } else { Err(NoEstimates::OutOfRange.into()) }
}

fn check_levels(labels: &[String], sizes: impl Iterator<Item = usize>) -> Result<(), NoEstimates> {
    if labels.len() < 2 {
        return Err(NoEstimates::OneLevel);
    }
    let empty = labels.iter().zip(sizes).find(|(_, n)| *n == 0);
    empty.map_or(Ok(()), |(level, _)| Err(NoEstimates::EmptyLevel { level: level.clone() }))
}
