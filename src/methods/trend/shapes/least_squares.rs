//! Weighted least squares with a handful of columns, by orthogonalisation.
//!
//! The columns, scaled to length 1 in the weights, are made orthonormal by Gram and Schmidt's process, twice: A = Q R. With p
//! columns (A'A)⁻¹ = R⁻¹ R⁻ᵀ. What remains of a column beside those before it, as a share of its length, tells how well the
//! parameters can be told apart.
//!
//! Reference: Björck (1967), BIT 7, 1-21 (orthogonalisation repeated once is orthogonal to working precision).

use crate::numerics::sums::sum;

/// Columns that are orthonormal in the weights, with what they were made from.
pub struct Orthogonal {
    weights: Vec<f64>,
    q: Vec<Vec<f64>>,
    /// Column j of the triangle: the scaled column j along the first j + 1 of `q`.
    r: Vec<Vec<f64>>,
    lengths: Vec<f64>,
}

impl Orthogonal {
    /// The columns in the weights; `None` if one is zero or has a value that is not finite, or if less than `least` of its length
    /// is left beside those before it.
    pub fn of(columns: &[Vec<f64>], weights: &[f64], least: f64) -> Option<Self> {
        let mut this = Self { weights: weights.to_vec(), q: vec![], r: vec![], lengths: vec![] };
        for column in columns {
            // Against overflow of the squares.
            let largest = column.iter().fold(0.0_f64, |most, value| most.max(value.abs()));
            let scaled: Vec<f64> = column.iter().map(|value| value / largest).collect();
            let length = this.product(&scaled, &scaled).sqrt();
            if !(largest > 0.0 && largest.is_finite() && length > 0.0 && length.is_finite()) {
                return None;
            }
            let mut rest: Vec<f64> = scaled.iter().map(|value| value / length).collect();
            let mut along = this.remove(&mut rest);
            let again = this.remove(&mut rest);
            along.iter_mut().zip(again).for_each(|(along, again)| *along += again);
            let left = this.product(&rest, &rest).sqrt();
            if !(left >= least && left > 0.0) {
                return None;
            }
            along.push(left);
            this.q.push(rest.into_iter().map(|value| value / left).collect());
            this.r.push(along);
            this.lengths.push(length * largest);
        }
        Some(this)
    }

    /// Coefficients of the orthonormal columns in the fit of `y`, and what the fit leaves.
    pub fn project(&self, y: &[f64]) -> (Vec<f64>, Vec<f64>) {
        let mut left = y.to_vec();
        let mut along = self.remove(&mut left);
        let again = self.remove(&mut left);
        along.iter_mut().zip(again).for_each(|(along, again)| *along += again);
        (along, left)
    }

    /// Coefficients of the columns themselves for those of the orthonormal ones: R x = `along`, backwards.
    pub fn coefficients(&self, along: &[f64]) -> Vec<f64> {
        let p = self.q.len();
        let mut x = vec![0.0; p];
        for i in (0..p).rev() {
            let later = sum((i + 1..p).map(|j| self.r[j][i] * x[j]));
            x[i] = (along[i] - later) / self.r[i][i];
        }
        x.iter().zip(&self.lengths).map(|(x, length)| x / length).collect()
    }

    /// (A'A)⁻¹ of the columns in the weights.
    pub fn inverse(&self) -> Vec<Vec<f64>> {
        let p = self.q.len();
        let unit = |j: usize| (0..p).map(|i| f64::from(i == j)).collect::<Vec<f64>>();
        // Column j is R⁻¹ e_j, with the columns' lengths taken out.
        let inverse: Vec<Vec<f64>> = (0..p).map(|j| self.coefficients(&unit(j))).collect();
        let entry = |a: usize, b: usize| sum(inverse.iter().map(|column| column[a] * column[b]));
        (0..p).map(|a| (0..p).map(|b| entry(a, b)).collect()).collect()
    }

    /// Takes out of `rest` what lies along the columns so far.
    fn remove(&self, rest: &mut [f64]) -> Vec<f64> {
        let mut found = Vec::with_capacity(self.q.len() + 1);
        for q in &self.q {
            let along = self.product(q, rest);
            rest.iter_mut().zip(q).for_each(|(rest, q)| *rest -= along * q);
            found.push(along);
        }
        found
    }

    fn product(&self, one: &[f64], other: &[f64]) -> f64 {
        sum(self.weights.iter().zip(one).zip(other).map(|((w, a), b)| w * a * b))
    }
}
