//! The values of the grouping variable, in order.

use serde::Serialize;

/// The levels of the grouping variable in the person's order.
#[derive(Debug, Clone, PartialEq)]
pub struct Levels {
    pub labels: Vec<String>,
    /// Numeric scores, one a level, strictly increasing; `None` where the study gives none.
    pub scores: Option<Vec<f64>>,
    /// Index of the level that others are compared with.
    pub control: Option<usize>,
    /// True when the order was taken from first appearance in the data and nobody has confirmed it.
    pub order_of_appearance: bool,
}

impl Levels {
    /// Number of levels.
    pub fn count(&self) -> usize {
        self.labels.len()
    }

    /// Position of the level called `label`.
    pub fn index_of(&self, label: &str) -> Option<usize> {
        self.labels.iter().position(|known| known == label)
    }
}

/// Where the rows of one level went: `received = n + missing + excluded`.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct LevelAccount {
    pub level: String,
    #[serde(skip_serializing_if = "Option::is_none")]
    pub score: Option<f64>,
    pub received: usize,
    /// Rows analysed.
    pub n: usize,
    pub missing: usize,
    pub excluded: usize,
}
