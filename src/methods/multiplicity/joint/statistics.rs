//! The statistics of the contrasts and their correlations.

use super::super::Sides;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::{many_to_one, student_t};
use crate::study::Estimates;
use nalgebra::DMatrix;

/// Several contrasts of one set of estimates.
#[derive(Debug, Clone)]
pub struct Statistics {
    /// One row a contrast, one coefficient a level.
    pub coefficients: Vec<Vec<f64>>,
    /// Of the estimated means.
    pub covariance: DMatrix<f64>,
    pub t: Vec<f64>,
    pub df: Vec<f64>,
    /// Each contrast's p-value by itself.
    pub raw: Vec<f64>,
    pub sides: Sides,
    correlation: Vec<Vec<f64>>,
}

impl Statistics {
    /// The statistics of the contrasts `rows`, each against the value `null`, 0 for a difference.
    ///
    /// # Errors
    /// [`OutOfDomain`] if there is no contrast, one has not as many coefficients as there are levels, or its estimate and
    /// standard error give no finite t with positive degrees of freedom.
    pub fn of(
        estimates: &Estimates,
        rows: &[Vec<f64>],
        null: f64,
        sides: Sides,
    ) -> Result<Self, OutOfDomain> {
        let levels = estimates.means.len();
        if rows.is_empty() || rows.len() > 1000 {
            let value = rows.len() as f64;
            return Err(OutOfDomain { argument: "number of contrasts", value, allowed: "from 1 to 1000" });
        }
        if let Some(row) = rows.iter().find(|row| row.len() != levels) {
            let (value, allowed) = (row.len() as f64, "one for each level");
            return Err(OutOfDomain { argument: "number of coefficients", value, allowed });
        }
        let (mut t, mut df, mut raw) = (Vec::new(), Vec::new(), Vec::new());
        for row in rows {
            let found = estimates.contrast(row);
            let statistic = (found.estimate - null) / found.se;
            if !statistic.is_finite() {
                let allowed = "a finite number (estimate over a positive standard error)";
                return Err(OutOfDomain { argument: "t", value: statistic, allowed });
            }
            let tail = student_t::sf(towards(statistic, sides), found.df)?;
            raw.push(if sides == Sides::Both { (2.0 * tail).min(1.0) } else { tail });
            t.push(statistic);
            df.push(found.df);
        }
        let correlation = correlation(rows, &estimates.covariance);
        let (coefficients, covariance) = (rows.to_vec(), estimates.covariance.clone());
        Ok(Self { coefficients, covariance, t, df, raw, sides, correlation })
    }

    pub fn count(&self) -> usize {
        self.t.len()
    }

    /// The statistic on the side that counts: the larger, the more it speaks against the hypothesis.
    pub fn towards(&self, row: usize) -> f64 {
        towards(self.t[row], self.sides)
    }

    /// The sides of the distribution of what [`Self::towards`] gives.
    pub fn tails(&self) -> many_to_one::Sides {
        if self.sides == Sides::Both { many_to_one::Sides::Both } else { many_to_one::Sides::Greater }
    }

    /// The correlations of these rows.
    pub fn correlation_of(&self, rows: &[usize]) -> Vec<Vec<f64>> {
        rows.iter().map(|&i| rows.iter().map(|&j| self.correlation[i][j]).collect()).collect()
    }

    /// From the row that speaks most against its hypothesis to the one that does least; ties in the given order.
    pub fn order(&self) -> Vec<usize> {
        let mut order: Vec<usize> = (0..self.count()).collect();
        let key = |i: usize| (self.raw[i], -self.towards(i));
        order.sort_by(|&i, &j| key(i).0.total_cmp(&key(j).0).then(key(i).1.total_cmp(&key(j).1)));
        order
    }
}

fn towards(t: f64, sides: Sides) -> f64 {
    match sides {
        Sides::Both => t.abs(),
        Sides::Greater => t,
        Sides::Less => -t,
    }
}

/// C Σ Cᵀ, scaled to 1 on the diagonal.
fn correlation(rows: &[Vec<f64>], covariance: &DMatrix<f64>) -> Vec<Vec<f64>> {
    let coefficients = DMatrix::from_fn(rows.len(), covariance.nrows(), |i, j| rows[i][j]);
    let of_rows = &coefficients * covariance * coefficients.transpose();
    let sd: Vec<f64> = (0..rows.len()).map(|i| of_rows[(i, i)].sqrt()).collect();
    let one = |i: usize, j: usize| match i.cmp(&j) {
        std::cmp::Ordering::Equal => 1.0,
        // One of the two, so that the matrix is symmetric to the last bit.
        std::cmp::Ordering::Less => (of_rows[(i, j)] / sd[i] / sd[j]).clamp(-1.0, 1.0),
        std::cmp::Ordering::Greater => (of_rows[(j, i)] / sd[j] / sd[i]).clamp(-1.0, 1.0),
    };
    (0..rows.len()).map(|i| (0..rows.len()).map(|j| one(i, j)).collect()).collect()
}
