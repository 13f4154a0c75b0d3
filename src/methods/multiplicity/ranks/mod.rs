//! Comparisons by ranks: of all groups ranked together ([`JointRanks`]: Dunn, and any contrast of mean ranks), of two groups
//! ranked alone ([`pairwise`]: Wilcoxon, Mann and Whitney), and the families made of the latter: all pairs
//! ([`steel_dwass`]) and each group against a control ([`steel`]).
//!
//! The hypothesis of a pair is that its two groups come from one distribution. Ranks of all groups together make a pair's
//! result depend on the other groups' values too; ranks of the pair alone do not, but need not be transitive.
//!
//! # References
//! 1. Dunn (1964), Technometrics 6, 241–252, doi 10.1080/00401706.1964.10490181 (joint ranks; eq. (5) for ties, from memory).
//! 2. Wilcoxon (1945), Biometrics Bull. 1, 80–83; Mann and Whitney (1947), Ann. Math. Statist. 18, 50–60.
//! 3. Steel (1959), Biometrics 15, 560–572 (against a control).
//! 4. Steel (1960), Technometrics 2, 197–207; Dwass (1960), in Contributions to Probability and Statistics, 198–202; Critchlow and
//!    Fligner (1991), Commun. Statist. Theory Meth. 20, 127–139 (all pairs; page numbers from memory).

mod family;
mod joint;
mod pair;
pub mod shift;

pub use family::{steel, steel_critical, steel_dwass, steel_dwass_critical, steel_loadings};
pub use joint::{JointRanks, RankContrast};
pub use pair::{MOST_PAIRS_TIED, MOST_PAIRS_UNTIED, PairwiseRanks, TailProbabilities, pairwise, smallest_p};

use crate::numerics::OutOfDomain;

/// Why values cannot be compared by ranks. Groups are told by their place, from 0, among those handed in.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum CannotRank {
    #[error("there are {groups} groups, and a comparison needs at least 2")]
    TooFewGroups { groups: usize },
    #[error("group {} has no observation", group + 1)]
    EmptyGroup { group: usize },
    #[error("group {} has the value {value}, which is no finite number", group + 1)]
    NotFinite { group: usize, value: f64 },
    #[error("all values of {} are equal, so there is nothing to rank", listed(groups))]
    AllTied { groups: Vec<usize> },
    #[error("{given} coefficients were given for {groups} groups")]
    CoefficientCount { given: usize, groups: usize },
    #[error(
        "the coefficients are no contrast: they must be finite, not all 0, and sum to 0; their sum is {sum}"
    )]
    NoContrast { sum: f64 },
    #[error("{0}")]
    OutOfDomain(#[from] OutOfDomain),
}

impl CannotRank {
    /// The same with the groups told by their place among more: `places[g]` is the place of group `g` there.
    #[must_use]
    pub fn among(self, places: &[usize]) -> Self {
        let place = |group: usize| places.get(group).copied().unwrap_or(group);
        match self {
            Self::EmptyGroup { group } => Self::EmptyGroup { group: place(group) },
            Self::NotFinite { group, value } => Self::NotFinite { group: place(group), value },
            Self::AllTied { groups } => Self::AllTied { groups: groups.into_iter().map(place).collect() },
            other => other,
        }
    }
}

/// "groups 1, 2 and 5".
fn listed(groups: &[usize]) -> String {
    let names: Vec<String> = groups.iter().map(|group| (group + 1).to_string()).collect();
    match names.split_last() {
        Some((last, rest)) if !rest.is_empty() => format!("groups {} and {last}", rest.join(", ")),
        Some((only, _)) => format!("group {only}"),
        None => "no group".to_string(),
    }
}

/// Refuses fewer than two groups, empty groups and values that are no finite numbers.
fn check(groups: &[&[f64]]) -> Result<(), CannotRank> {
    if groups.len() < 2 {
        return Err(CannotRank::TooFewGroups { groups: groups.len() });
    }
    if let Some(group) = groups.iter().position(|values| values.is_empty()) {
        return Err(CannotRank::EmptyGroup { group });
    }
    for (group, values) in groups.iter().enumerate() {
        if let Some(&value) = values.iter().find(|value| !value.is_finite()) {
            return Err(CannotRank::NotFinite { group, value });
        }
    }
    Ok(())
}

/// The share of `total` observations that share their value with another one.
fn tied_share(ties: &[usize], total: usize) -> f64 {
    ties.iter().filter(|t| **t > 1).sum::<usize>() as f64 / total as f64
}
