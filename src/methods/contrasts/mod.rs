//! Contrasts of level means: coefficients that sum to zero, where they come from (arithmetic on level names,
//! coefficient tables, ready sets), what they say in words, and how many of them are independent.
//!
//! Notation: L = Σ c μ with Σ c = 0 (Scheffé 1959, The Analysis of Variance, section 3.5).

mod expression;
mod partition;
mod rank;
mod sets;
mod words;

pub use expression::{ExpressionError, coefficients};
pub use partition::{NoPartition, Overlap, Part, Partition, partition};
pub use rank::rank;
pub use sets::{Set, polynomial_set, ready_set};
pub use words::in_words;

use crate::table::nearest;
use std::ops::Range;

/// A named contrast with one coefficient a level.
#[derive(Debug, Clone, PartialEq)]
pub struct Contrast {
    pub name: String,
    /// In the order of the study's levels; their sum is zero and at least two differ from zero.
    pub coefficients: Vec<f64>,
}

/// Why numbers or an expression make no contrast.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoContrast {
    #[error("Contrast \"{name}\": the coefficients sum to {} and must sum to 0. Give both sides the same total weight.", tidy(*sum))]
    Sum { name: String, sum: f64 },
    #[error(
        "Contrast \"{name}\": all coefficients are 0, so nothing is compared. Give at least two levels different weights."
    )]
    Nothing { name: String },
    #[error("Contrast \"{name}\": the coefficient of \"{level}\" is {value}, which is no finite number.")]
    NotFinite { name: String, level: String, value: f64 },
    #[error("Contrast \"{name}\": {}", unknown_level(level, nearest.as_deref(), levels))]
    UnknownLevel { name: String, level: String, nearest: Option<String>, levels: Vec<String> },
    #[error("Contrast \"{name}\": {}", error.message)]
    Expression { name: String, error: ExpressionError },
}

impl NoContrast {
    /// Byte range inside the expression that the problem concerns; `None` where it concerns all of it.
    pub fn span(&self) -> Option<Range<usize>> {
        match self {
            Self::Expression { error, .. } => Some(error.span.clone()),
            _ => None,
        }
    }
}

impl Contrast {
    /// A contrast from its coefficients, one a level of `levels`.
    ///
    /// # Errors
    /// [`NoContrast`] if a coefficient is not finite, all are zero, or |Σc| exceeds 1e-9 Σ|c|.
    ///
    /// # Panics
    /// If there are not as many coefficients as levels.
    pub fn new(name: &str, coefficients: Vec<f64>, levels: &[String]) -> Result<Self, NoContrast> {
        assert_eq!(coefficients.len(), levels.len(), "one coefficient a level");
        let name = name.to_string();
        if let Some(i) = coefficients.iter().position(|c| !c.is_finite()) {
            return Err(NoContrast::NotFinite { name, level: levels[i].clone(), value: coefficients[i] });
        }
        let size = crate::numerics::sums::sum(coefficients.iter().map(|c| c.abs()));
        if size == 0.0 {
            return Err(NoContrast::Nothing { name });
        }
        let sum = crate::numerics::sums::sum(coefficients.iter().copied());
        if !size.is_finite() || sum.abs() > 1e-9 * size {
            return Err(NoContrast::Sum { name, sum });
        }
        Ok(Self { name, coefficients })
    }

    /// A contrast from an expression such as `(15 min + 30 min)/2 - none`.
    ///
    /// # Errors
    /// [`NoContrast`], with the place in `text` where it has one.
    pub fn from_expression(name: &str, text: &str, levels: &[String]) -> Result<Self, NoContrast> {
        let coefficients = coefficients(text, levels)
            .map_err(|error| NoContrast::Expression { name: name.to_string(), error })?;
        Self::new(name, coefficients, levels)
    }

    /// A contrast from a table of coefficients by level name; levels that are not named get 0.
    ///
    /// # Errors
    /// [`NoContrast`], also for a name that is no level.
    pub fn from_table(name: &str, table: &[(String, f64)], levels: &[String]) -> Result<Self, NoContrast> {
        let mut coefficients = vec![0.0; levels.len()];
        for (level, value) in table {
            let Some(i) = levels.iter().position(|known| known == level) else {
                let nearest = nearest(level, levels.iter().map(String::as_str)).map(str::to_string);
                let (name, level) = (name.to_string(), level.clone());
                return Err(NoContrast::UnknownLevel { name, level, nearest, levels: levels.to_vec() });
            };
            coefficients[i] += value;
        }
        Self::new(name, coefficients, levels)
    }

    /// Σ|c| / 2: the factor by which the contrast exceeds "mean of one set less mean of another".
    pub fn half_weight(&self) -> f64 {
        crate::numerics::sums::sum(self.coefficients.iter().map(|c| c.abs())) / 2.0
    }
}

/// What to say about a name that is no level.
fn unknown_level(name: &str, nearest: Option<&str>, levels: &[String]) -> String {
    match nearest {
        Some(nearest) => format!("\"{name}\" is no level of this study. Did you mean \"{nearest}\"?"),
        None => format!("\"{name}\" is no level of this study. Its levels are {}.", listed(levels)),
    }
}

/// Names in double quotes, the first dozen of them.
fn listed(names: &[String]) -> String {
    let quoted: Vec<String> = names.iter().take(12).map(|name| format!("\"{name}\"")).collect();
    let more = if names.len() > 12 { format!(" and {} more", names.len() - 12) } else { String::new() };
    quoted.join(", ") + &more
}

/// A number without the last digits that binary fractions leave behind: 0.30000000000000004 reads 0.3.
fn tidy(value: f64) -> String {
    let rounded: f64 = format!("{value:.11e}").parse().unwrap_or(value);
    format!("{rounded}")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn levels() -> Vec<String> {
        ["none", "15 min", "30 min"].map(String::from).to_vec()
    }

    #[test]
    fn a_sum_that_is_not_zero_is_said() {
        let error = Contrast::from_expression("late", "15 min - none/2", &levels()).unwrap_err();
        assert_eq!(
            error.to_string(),
            "Contrast \"late\": the coefficients sum to 0.5 and must sum to 0. Give both sides the same total weight."
        );
    }

    #[test]
    fn a_contrast_of_nothing_is_refused() {
        let error = Contrast::from_expression("empty", "none - none", &levels()).unwrap_err();
        assert!(matches!(error, NoContrast::Nothing { .. }));
    }

    #[test]
    fn a_table_names_levels_and_the_others_get_zero() {
        let table = [("30 min".to_string(), 1.0), ("none".to_string(), -1.0)];
        let contrast = Contrast::from_table("late", &table, &levels()).unwrap();
        assert_eq!(contrast.coefficients, [-1.0, 0.0, 1.0]);
        let error = Contrast::from_table("late", &[("30min".to_string(), 1.0)], &levels()).unwrap_err();
        assert_eq!(
            error.to_string(),
            "Contrast \"late\": \"30min\" is no level of this study. Did you mean \"30 min\"?"
        );
    }

    #[test]
    fn thirds_sum_to_zero() {
        assert!(Contrast::from_expression("a", "(none + 15 min + 30 min)/3 - none", &levels()).is_ok());
    }
}
