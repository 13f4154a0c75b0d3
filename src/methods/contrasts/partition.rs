//! How contrasts split the sum of squares between the groups, and how much they overlap.
//!
//! ```text
//! SS_L = (Σ c_i m_i)² / Σ(c_i² / n_i)          1 df
//! r(L, D) = Σ(c_i d_i / n_i) / √(Σ(c_i² / n_i) Σ(d_i² / n_i))
//! ```
//!
//! Two contrasts are orthogonal when r = 0, which depends on the group sizes: coefficients that are orthogonal with
//! equal sizes are not with unequal ones. k - 1 contrasts of which every two are orthogonal split the sum of squares
//! between k groups exactly; the sums of squares of any others do not add up. r is also the correlation of the two
//! estimates when all groups have one variance. Orthogonality is no protection against the number of comparisons.
//!
//! Reference: Scheffé (1959), The Analysis of Variance, section 3.5.

use super::{Contrast, rank};
use crate::numerics::sums::sum;

/// Correlations smaller than this are zero but for the rounding of coefficients such as 1/3.
const NONE: f64 = 1e-9;

/// What contrasts say about the differences between groups, each by itself and all together.
#[derive(Debug, Clone, PartialEq)]
pub struct Partition {
    /// One a contrast, in their order.
    pub parts: Vec<Part>,
    /// Σ n (m - centre)², the sum of squares between the groups that have observations.
    pub ss_between: f64,
    /// The number of groups that have observations, less one: more contrasts than this cannot be independent.
    pub df_between: usize,
    /// How many of the contrasts are linearly independent.
    pub rank: usize,
    /// The correlation of each contrast with each, one row a contrast; 1 on the diagonal.
    pub correlations: Vec<Vec<f64>>,
}

/// The share of one contrast.
#[derive(Debug, Clone, PartialEq)]
pub struct Part {
    /// The name of the contrast.
    pub name: String,
    /// Σ c m, in the unit of the outcome.
    pub estimate: f64,
    /// (Σ c m)² / Σ(c² / n); it does not depend on the scale of the coefficients.
    pub ss: f64,
    /// `ss` over the sum of squares between the groups, from 0 to 1; `None` where that is 0.
    pub share: Option<f64>,
}

/// Two contrasts that are not orthogonal.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Overlap {
    /// Indices of the contrasts, `first` the smaller one.
    pub first: usize,
    pub second: usize,
    pub correlation: f64,
}

/// Why contrasts split nothing.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoPartition {
    #[error("contrast \"{name}\" has {coefficients} coefficients for {groups} groups; each group needs one")]
    Coefficients { name: String, coefficients: usize, groups: usize },
    #[error("{means} means were given for {groups} groups; each needs one")]
    Means { means: usize, groups: usize },
    #[error("contrast \"{name}\" weighs group {}, which has no observation", index + 1)]
    EmptyGroup { name: String, index: usize },
    #[error(
        "contrast \"{name}\" has no finite sum of squares: its coefficients are all 0 or not finite, or the means are too large to compute with"
    )]
    NotFinite { name: String },
}

impl Partition {
    /// Whether the contrasts at these indices are orthogonal for the actual group sizes: |r| < 1e-9.
    ///
    /// # Panics
    /// If there are not as many contrasts.
    pub fn orthogonal(&self, one: usize, other: usize) -> bool {
        self.correlations[one][other].abs() < NONE
    }

    /// Every two contrasts that are not orthogonal.
    pub fn overlaps(&self) -> impl Iterator<Item = Overlap> {
        let of = |(first, row): (usize, &'_ Vec<f64>)| -> Vec<Overlap> {
            let later = row.iter().copied().enumerate().skip(first + 1);
            let met = later.filter(|(_, r)| r.abs() >= NONE);
            met.map(|(second, correlation)| Overlap { first, second, correlation }).collect()
        };
        self.correlations.iter().enumerate().flat_map(of)
    }

    /// Whether every two of the contrasts are orthogonal.
    pub fn all_orthogonal(&self) -> bool {
        self.overlaps().next().is_none()
    }

    /// Whether the sums of squares add up to the one between the groups: all are orthogonal, and there are as many as
    /// degrees of freedom.
    pub fn complete(&self) -> bool {
        self.rank == self.df_between && self.parts.len() == self.rank && self.all_orthogonal()
    }

    /// Whether there are more contrasts than degrees of freedom between the groups.
    pub fn exceeds_df(&self) -> bool {
        self.parts.len() > self.df_between
    }

    /// Whether some contrast follows from the others.
    pub fn dependent(&self) -> bool {
        self.rank < self.parts.len()
    }
}

/// How `contrasts` split the sum of squares between groups of these sizes and means.
///
/// # Arguments
/// `n` and `means`, one a group in the order of the coefficients. Means may be offsets from any number. A group without
/// observations counts for nothing, and its mean may be anything, but no contrast may weigh it.
///
/// # Errors
/// [`NoPartition`] if the lengths do not match, a contrast weighs a group without observations, or a sum of squares is
/// not finite.
///
/// # Accuracy
/// About 1e-14 relative where the means are offsets from a number near them; a contrast of almost equal means has the
/// digits that their difference has.
///
/// # Source
/// Scheffé (1959), section 3.5.
///
/// # Example
/// ```
/// # use levelwise::methods::contrasts::{Contrast, partition};
/// let levels = ["A", "B", "C"].map(String::from);
/// let contrasts = ["(B + C)/2 - A", "C - B"].map(|text| Contrast::from_expression(text, text, &levels).unwrap());
/// assert!(partition(&contrasts, &[5, 5, 5], &[1.0, 2.0, 4.0])?.complete());
/// // With other group sizes the same two overlap.
/// assert!(!partition(&contrasts, &[5, 4, 6], &[1.0, 2.0, 4.0])?.complete());
/// # Ok::<(), levelwise::methods::contrasts::NoPartition>(())
/// ```
pub fn partition(contrasts: &[Contrast], n: &[usize], means: &[f64]) -> Result<Partition, NoPartition> {
    if means.len() != n.len() {
        return Err(NoPartition::Means { means: means.len(), groups: n.len() });
    }
    let seen: Vec<usize> = (0..n.len()).filter(|i| n[*i] > 0).collect();
    let sizes: Vec<f64> = seen.iter().map(|i| n[*i] as f64).collect();
    let means: Vec<f64> = seen.iter().map(|i| means[*i]).collect();
    let ss_between = ss_between(&sizes, &means);
    let mut parts = Vec::with_capacity(contrasts.len());
    let mut directions = Vec::with_capacity(contrasts.len());
    for contrast in contrasts {
        check(contrast, n)?;
        let c: Vec<f64> = seen.iter().map(|i| contrast.coefficients[*i]).collect();
        let estimate = sum(c.iter().zip(&means).map(|(c, m)| c * m));
        let c = scaled(&c);
        let along = sum(c.iter().zip(&means).map(|(c, m)| c * m));
        let ss = along * along / sum(c.iter().zip(&sizes).map(|(c, n)| c * c / n));
        if !(ss.is_finite() && estimate.is_finite() && ss_between.is_finite()) {
            return Err(NoPartition::NotFinite { name: contrast.name.clone() });
        }
        let share = (ss_between > 0.0).then(|| (ss / ss_between).min(1.0));
        parts.push(Part { name: contrast.name.clone(), estimate, ss, share });
        directions.push(direction(&c, &sizes));
    }
    Ok(Partition {
        parts,
        ss_between,
        df_between: seen.len().saturating_sub(1),
        rank: rank(&contrasts.iter().map(|contrast| contrast.coefficients.clone()).collect::<Vec<_>>()),
        correlations: correlations(&directions),
    })
}

fn check(contrast: &Contrast, n: &[usize]) -> Result<(), NoPartition> {
    let (name, c) = (|| contrast.name.clone(), &contrast.coefficients);
    if c.len() != n.len() {
        return Err(NoPartition::Coefficients { name: name(), coefficients: c.len(), groups: n.len() });
    }
    if let Some(index) = (0..c.len()).find(|i| c[*i] != 0.0 && n[*i] == 0) {
        return Err(NoPartition::EmptyGroup { name: name(), index });
    }
    if !c.iter().all(|c| c.is_finite()) || c.iter().all(|c| *c == 0.0) {
        return Err(NoPartition::NotFinite { name: name() });
    }
    Ok(())
}

/// The coefficients times a power of 2, which rounds nothing, such that the largest lies between 1/2 and 1: squares of
/// the largest and the smallest numbers would be out of range.
fn scaled(c: &[f64]) -> Vec<f64> {
    let largest = c.iter().fold(0.0_f64, |most, c| most.max(c.abs()));
    let exponent = libm::frexp(largest).1;
    c.iter().map(|c| libm::ldexp(*c, -exponent)).collect()
}

/// c_i / √n_i, scaled to length 1: the sum of products of two of these is their correlation.
fn direction(c: &[f64], sizes: &[f64]) -> Vec<f64> {
    let weighted: Vec<f64> = c.iter().zip(sizes).map(|(c, n)| c / n.sqrt()).collect();
    let length = sum(weighted.iter().map(|w| w * w)).sqrt();
    weighted.into_iter().map(|w| w / length).collect()
}

fn correlations(directions: &[Vec<f64>]) -> Vec<Vec<f64>> {
    let mut rows = vec![vec![1.0; directions.len()]; directions.len()];
    for i in 0..directions.len() {
        for j in 0..i {
            let r: f64 = directions[i].iter().zip(&directions[j]).map(|(one, other)| one * other).sum();
            let r = r.clamp(-1.0, 1.0);
            (rows[i][j], rows[j][i]) = (r, r);
        }
    }
    rows
}

fn ss_between(sizes: &[f64], means: &[f64]) -> f64 {
    let each = || sizes.iter().zip(means);
    let centre = sum(each().map(|(n, m)| n * m)) / sum(sizes.iter().copied());
    sum(each().map(|(n, m)| n * (m - centre) * (m - centre)))
}
