//! What is asked of a family: which comparisons, on what, towards which side, with what claim.

use crate::methods::contrasts::Set;
use crate::study::Variances;
use serde::Serialize;

/// The set of comparisons over which the error is controlled.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Family {
    Set(Set),
    /// Contrasts that the person wrote.
    Contrasts,
    /// p-values from elsewhere.
    Given,
}

/// Which deviations from the hypothesis count.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Sides {
    Both,
    /// The contrast is greater than its value under the hypothesis.
    Greater,
    /// The contrast is less than that.
    Less,
}

/// What the tests are made from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Basis {
    /// t tests of the means.
    Means,
    Ranks(Ranking),
    /// Rearrangements of the values, with the t statistics of the means.
    Permutation,
}

/// Which values are ranked together.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Ranking {
    /// All values of the study; a comparison then depends on the other levels' values (Dunn 1964).
    Joint,
    /// Those of the two levels compared, by themselves.
    PairByPair,
}

/// What a rejected hypothesis says.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Claim {
    /// The contrast is not 0, or is beyond 0 on the side asked for.
    Difference,
    /// The contrast is no worse than the margin: with [`Sides::Greater`] above -margin, with [`Sides::Less`] below it.
    NonInferiority { margin: f64 },
    /// The contrast lies between the margins: two one-sided tests (Schuirmann 1987).
    Equivalence { lower: f64, upper: f64 },
}

impl Claim {
    /// The value of the contrast at the border of the hypothesis; for equivalence 0, which lies between its borders.
    pub fn null(self, sides: Sides) -> f64 {
        match (self, sides) {
            (Self::NonInferiority { margin }, Sides::Less) => margin,
            (Self::NonInferiority { margin }, _) => -margin,
            _ => 0.0,
        }
    }

    pub fn is_equivalence(self) -> bool {
        matches!(self, Self::Equivalence { .. })
    }
}

/// Everything on which it depends whether a procedure suits.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Setting {
    pub family: Family,
    pub basis: Basis,
    pub variances: Variances,
    pub sides: Sides,
    pub claim: Claim,
}

/// Which levels' standard deviations make the one that standardises.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Standardise {
    AllLevels,
    LevelsCompared,
}

/// Random rearrangements, where not all can be counted.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Resampling {
    pub repeats: u64,
    pub seed: u64,
}

impl Default for Resampling {
    fn default() -> Self {
        Self { repeats: 10_000, seed: 1 }
    }
}
