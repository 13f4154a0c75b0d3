//! The test for a trend by the contrasts that are best for several candidate shapes, as one family.
//!
//! For a shape g the contrast c'm has its largest noncentrality (c'g)² / c'Vc, among all c with Σc = 0, at
//!
//! c ∝ V⁻¹ (g - ḡ 1), ḡ = 1'V⁻¹g / 1'V⁻¹1,
//!
//! V the covariance of the means; with one error term this is c_i ∝ n_i (g_i - ḡ), ḡ weighted by the n. It is scaled to
//! Σc² = 1 and rises with the shape. Each shape's p is adjusted in a single step by the joint multivariate t of all (`joint`),
//! exact up to three linearly independent contrasts, else from lattice points with an error beside it. With a variance for each
//! mean the contrasts are built from the estimated variances, and rows have Satterthwaite's df, which is approximate.
//!
//! # References
//! 1. Bretz, Pinheiro and Branson (2005), Biometrics 61, 738-748, doi 10.1111/j.1541-0420.2005.00344.x, section 3.
//! 2. Abelson and Tukey (1963), Ann. Math. Statist. 34, 1347-1369 (contrasts of highest correlation with a shape).

use super::shape::{Doses, NoDoses, NoShape, Shape};
use crate::methods::multiplicity::Sides;
use crate::methods::multiplicity::joint::{Joint, JointWork, Procedure};
use crate::methods::slices::{Advance, InSlices};
use crate::numerics::OutOfDomain;
use crate::numerics::sums::sum;
use crate::study::Estimates;
use nalgebra::DVector;

/// Contrasts of length 1 whose coefficients differ by less are the same: they were computed.
const SAME: f64 = 1e-10;

/// One candidate shape, tested.
#[derive(Debug, Clone, PartialEq)]
pub struct ShapeRow {
    /// Its place in the list that was given.
    pub candidate: usize,
    pub shape: Shape,
    /// One a level, Σc = 0, Σc² = 1.
    pub coefficients: Vec<f64>,
    /// Σ c m.
    pub estimate: f64,
    pub se: f64,
    /// Common, or Satterthwaite's.
    pub df: f64,
    pub t: f64,
    /// By itself, on the sides asked for.
    pub p: f64,
    pub p_adjusted: f64,
    /// Error of `p_adjusted`: a bound if it is exact, else the standard error.
    pub p_error: f64,
    pub exact: bool,
    /// The t from which on the shape is significant.
    pub critical: f64,
    pub critical_error: f64,
    /// Whether `p_adjusted` is at most the alpha asked for.
    pub significant: bool,
}

/// A candidate that could not be used, and why; the others went on.
#[derive(Debug, Clone, PartialEq)]
pub struct Refused {
    pub candidate: usize,
    pub shape: Shape,
    pub reason: NoShape,
}

/// All candidate shapes, tested as one family.
#[derive(Debug, Clone, PartialEq)]
pub struct ShapeTests {
    /// In the order in which the candidates were given.
    pub rows: Vec<ShapeRow>,
    pub refused: Vec<Refused>,
    /// The row whose t goes farthest towards the side asked for; the first of equal ones.
    pub best: usize,
    /// Rows that are one and the same contrast: each row with an earlier one. No data tell these shapes apart by their test.
    pub coincide: Vec<(usize, usize)>,
    pub sides: Sides,
    pub alpha: f64,
}

/// Why there is no test of shapes.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoShapes {
    #[error("{0}")]
    Doses(#[from] NoDoses),
    #[error("no candidate shape was given")]
    NoCandidates,
    #[error("none of the candidate shapes can be used: {}", .0.iter().map(|refused| refused.reason.to_string()).collect::<Vec<_>>().join("; "))]
    AllRefused(Vec<Refused>),
    #[error(
        "the variances of the means are too different, or too large or small, to weigh them against one another"
    )]
    Covariance,
    #[error("{0}")]
    OutOfDomain(#[from] OutOfDomain),
}

/// The test of several shapes in the making. It owns all it needs.
#[derive(Debug)]
pub struct ShapesWork {
    estimates: Estimates,
    candidates: Vec<(usize, Shape, Vec<f64>)>,
    refused: Vec<Refused>,
    /// For each candidate the contrast of the joint test that is its own.
    contrast: Vec<usize>,
    sides: Sides,
    alpha: f64,
    joint: JointWork,
}

impl ShapesWork {
    /// The test of `candidates` over the means' `doses`: towards a rising response ([`Sides::Greater`]), a falling one, or
    /// both, to be decided at `alpha`, between 0 and 1.
    ///
    /// # Errors
    /// [`NoShapes`] for doses that do not fit the means, no usable candidate, covariances that cannot be inverted, an `alpha`
    /// out of range or numbers too extreme for a t.
    pub fn new(
        estimates: &Estimates,
        doses: &[f64],
        candidates: &[Shape],
        sides: Sides,
        alpha: f64,
    ) -> Result<Self, NoShapes> {
        let doses = Doses::new(doses, estimates.means.len())?;
        if candidates.is_empty() {
            return Err(NoShapes::NoCandidates);
        }
        let (mut found, mut refused) = (Vec::new(), Vec::new());
        for (candidate, shape) in candidates.iter().enumerate() {
            match shape.check(&doses).and_then(|()| shape.over(&doses)) {
                Ok(values) => {
                    let coefficients = best_for(estimates, &values).ok_or(NoShapes::Covariance)?;
                    found.push((candidate, *shape, coefficients));
                }
                Err(reason) => refused.push(Refused { candidate, shape: *shape, reason }),
            }
        }
        if found.is_empty() {
            return Err(NoShapes::AllRefused(refused));
        }
        let (rows, contrast) = distinct(&found);
        let joint = JointWork::new(estimates, &rows, 0.0, sides, Procedure::SingleStep, alpha)?;
        let estimates = estimates.clone();
        Ok(Self { estimates, candidates: found, refused, contrast, sides, alpha, joint })
    }

    fn result(&self, joint: &Joint) -> ShapeTests {
        let row = |(which, (candidate, shape, c)): (usize, &(usize, Shape, Vec<f64>))| {
            let (found, tested) = (self.estimates.contrast(c), joint.rows[self.contrast[which]]);
            ShapeRow {
                candidate: *candidate,
                shape: *shape,
                coefficients: c.clone(),
                estimate: found.estimate,
                se: found.se,
                df: tested.df,
                t: tested.t,
                p: tested.p,
                p_adjusted: tested.p_adjusted,
                p_error: tested.p_error,
                exact: tested.exact,
                critical: tested.critical,
                critical_error: tested.critical_error,
                significant: tested.p_adjusted <= self.alpha,
            }
        };
        let rows: Vec<ShapeRow> = self.candidates.iter().enumerate().map(row).collect();
        let towards = |row: &ShapeRow| match self.sides {
            Sides::Both => row.t.abs(),
            Sides::Greater => row.t,
            Sides::Less => -row.t,
        };
        let farthest = (0..rows.len()).rev().max_by(|&i, &j| towards(&rows[i]).total_cmp(&towards(&rows[j])));
        let first = |row: usize| self.contrast.iter().position(|its| *its == self.contrast[row]);
        let coincide = (0..rows.len()).filter_map(|row| Some((first(row)?, row)));
        ShapeTests {
            best: farthest.unwrap_or(0),
            coincide: coincide.filter(|(first, row)| first != row).collect(),
            rows,
            refused: self.refused.clone(),
            sides: self.sides,
            alpha: self.alpha,
        }
    }
}

impl InSlices for ShapesWork {
    type Result = Result<ShapeTests, OutOfDomain>;

    /// One slice of the joint distribution's, some ten milliseconds.
    fn advance(&mut self) -> Advance<Self::Result> {
        match self.joint.advance() {
            Advance::Working(progress) => Advance::Working(progress),
            Advance::Done(joint) => Advance::Done(joint.map(|joint| self.result(&joint))),
        }
    }
}

/// The contrast of the means that is best for `shape`: Σc = 0, Σc² = 1, rising with the shape.
///
/// # Errors
/// [`NoShapes`] for a shape that does not suit the doses or covariances that cannot be inverted.
///
/// # Accuracy
/// About 1e-14 of the largest coefficient where the means are independent.
pub fn optimal_contrast(estimates: &Estimates, doses: &Doses, shape: &Shape) -> Result<Vec<f64>, NoShapes> {
    let (levels, count) = (estimates.means.len(), doses.values().len());
    if levels != count {
        return Err(NoDoses::Count { doses: count, levels }.into());
    }
    let refused = |reason| NoShapes::AllRefused(vec![Refused { candidate: 0, shape: *shape, reason }]);
    shape.check(doses).map_err(refused)?;
    best_for(estimates, &shape.over(doses).map_err(refused)?).ok_or(NoShapes::Covariance)
}

fn best_for(estimates: &Estimates, values: &[f64]) -> Option<Vec<f64>> {
    let independent =
        (0..values.len()).all(|i| (0..values.len()).all(|j| i == j || estimates.covariance[(i, j)] == 0.0));
    let direction = if independent { of_independent(estimates, values) } else { of_any(estimates, values)? };
    let length = sum(direction.iter().map(|c| c * c)).sqrt();
    let unit: Vec<f64> = direction.iter().map(|c| c / length).collect();
    unit.iter().all(|c| c.is_finite()).then_some(unit)
}

/// V diagonal: the weights are relative to the greatest, so that their unit does not matter.
fn of_independent(estimates: &Estimates, values: &[f64]) -> Vec<f64> {
    let variances = estimates.covariance.diagonal();
    let least = variances.iter().copied().fold(f64::INFINITY, f64::min);
    let weights: Vec<f64> = variances.iter().map(|variance| least / variance).collect();
    let total = sum(weights.iter().copied());
    let centre = sum(weights.iter().zip(values).map(|(w, g)| w * g)) / total;
    weights.iter().zip(values).map(|(w, g)| w * (g - centre)).collect()
}

fn of_any(estimates: &Estimates, values: &[f64]) -> Option<Vec<f64>> {
    let factor = estimates.covariance.clone().cholesky()?;
    let one = factor.solve(&DVector::from_element(values.len(), 1.0));
    let shape = factor.solve(&DVector::from_column_slice(values));
    let centre = sum(shape.iter().copied()) / sum(one.iter().copied());
    Some(shape.iter().zip(&one).map(|(shape, one)| shape - centre * one).collect())
}

/// The contrasts that differ, and for each candidate which of them is its own.
fn distinct(candidates: &[(usize, Shape, Vec<f64>)]) -> (Vec<Vec<f64>>, Vec<usize>) {
    let (mut rows, mut contrast): (Vec<Vec<f64>>, Vec<usize>) = (Vec::new(), Vec::new());
    for (_, _, c) in candidates {
        let same = |row: &Vec<f64>| row.iter().zip(c).all(|(one, other)| (one - other).abs() <= SAME);
        let known = rows.iter().position(same);
        contrast.push(known.unwrap_or(rows.len()));
        if known.is_none() {
            rows.push(c.clone());
        }
    }
    (rows, contrast)
}
