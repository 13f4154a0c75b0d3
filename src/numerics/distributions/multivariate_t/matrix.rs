//! The correlation matrix: what is accepted, and its factor A with A Aᵀ = R by Cholesky's method with pivoting, which reveals
//! the rank.
//!
//! # References
//! 1. Higham (2002), Accuracy and Stability of Numerical Algorithms, section 10.3 (semi-definite matrices).

use crate::numerics::OutOfDomain;

/// Asymmetries, deviations of the diagonal from 1 and negative pivots below this are taken for rounding.
const ROUNDING: f64 = 1e-9;
/// A pivot below this counts as 0. Entries that are right to a few units in the last place leave pivots of 1e-15 per
/// row eliminated where the exact one is 0.
const NO_PIVOT: f64 = 1e-12;
/// Most rows.
const MOST_ROWS: usize = 1000;

/// The rows of A, each of length 1, one for each row of the matrix.
pub(super) fn factor(correlation: &[Vec<f64>]) -> Result<Vec<Vec<f64>>, OutOfDomain> {
    check(correlation)?;
    let count = correlation.len();
    let mut rest: Vec<Vec<f64>> = correlation.to_vec();
    let mut rows = vec![Vec::new(); count];
    // Each step takes one row out, so that there are at most as many.
    for _ in 0..count {
        let mut pivot = 0;
        for (i, row) in rest.iter().enumerate() {
            if row[i] < -ROUNDING {
                let allowed = "positive semi-definite (no negative pivot)";
                return Err(OutOfDomain { argument: "correlation", value: row[i], allowed });
            }
            if row[i] > rest[pivot][pivot] {
                pivot = i;
            }
        }
        if rest[pivot][pivot] <= NO_PIVOT {
            break;
        }
        let root = rest[pivot][pivot].sqrt();
        let column: Vec<f64> = rest.iter().map(|row| row[pivot] / root).collect();
        for i in 0..count {
            rows[i].push(column[i]);
            for j in 0..count {
                rest[i][j] -= column[i] * column[j];
            }
        }
        rest[pivot].fill(0.0);
        rest.iter_mut().for_each(|row| row[pivot] = 0.0);
    }
    // What is left of a semi-definite matrix is at most the root of a product of pivots.
    if let Some(&value) = rest.iter().flatten().find(|value| value.abs() > 1e-6) {
        let allowed = "positive semi-definite (a remainder of 0)";
        return Err(OutOfDomain { argument: "correlation", value, allowed });
    }
    for row in &mut rows {
        let length = row.iter().map(|x| x * x).sum::<f64>().sqrt();
        row.iter_mut().for_each(|x| *x /= length);
    }
    Ok(rows)
}

/// Refuses what is not square, symmetric and made of correlations.
fn check(correlation: &[Vec<f64>]) -> Result<(), OutOfDomain> {
    let refuse = |value, allowed| Err(OutOfDomain { argument: "correlation", value, allowed });
    let count = correlation.len();
    if count == 0 || count > MOST_ROWS {
        return refuse(count as f64, "a matrix with 1 to 1000 rows");
    }
    if let Some(row) = correlation.iter().find(|row| row.len() != count) {
        return refuse(row.len() as f64, "square: as many columns as rows");
    }
    for (i, row) in correlation.iter().enumerate() {
        for (j, &value) in row.iter().enumerate() {
            if !value.is_finite() || value.abs() > 1.0 + ROUNDING {
                return refuse(value, "made of numbers from -1 to 1");
            }
            if i == j && (value - 1.0).abs() > ROUNDING {
                return refuse(value, "1 on the diagonal");
            }
            if (value - correlation[j][i]).abs() > ROUNDING {
                return refuse(value, "symmetric");
            }
        }
    }
    Ok(())
}
