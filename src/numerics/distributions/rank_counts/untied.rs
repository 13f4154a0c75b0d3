//! Exact tails of U and J without ties: U by its recurrence; J as the sum of independent U, one for each group against
//! all before it.

use super::{InclusiveTails, countable_pairs, tails};
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::finite;

/// Both exact tails of U, the number of pairs in which the observation of the second group is the larger, without ties,
/// for groups of `first` and `second` observations.
///
/// U is the rank sum of the second group less its least possible value `second (second + 1) / 2`.
///
/// # Errors
/// [`OutOfDomain`] if `u` is not finite, a group is empty, or there are more than [`super::MOST_PAIRS`] pairs.
///
/// # Accuracy
/// Relative error below 1e-13: sums of positive terms.
///
/// # Source
/// Mann and Whitney (1947), Ann. Math. Statist. 18, 50-60.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::rank_counts;
/// let tails = rank_counts::rank_sum(1.0, 3, 3)?;
/// assert!((tails.lower - 0.1).abs() < 1e-15); // Mann and Whitney's table for n = 3, m = 3: 0.100
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn rank_sum(u: f64, first: usize, second: usize) -> Result<InclusiveTails, OutOfDomain> {
    let u = finite("u", u)?;
    countable_pairs(&[first, second])?;
    Ok(tails(&rank_sum_probabilities(first, second), 1.0, u))
}

/// Both exact tails of J, the number of pairs from an earlier and a later group in which the later is larger, without
/// ties, for groups of the given `sizes` in their order.
///
/// # Errors
/// [`OutOfDomain`] if `j` is not finite, there are fewer than 2 groups, a group is empty, or there are more than
/// [`super::MOST_PAIRS`] pairs.
///
/// # Accuracy
/// Relative error below 1e-13: sums of positive terms.
///
/// # Source
/// Jonckheere (1954), Biometrika 41, 133-145.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::rank_counts;
/// let tails = rank_counts::jonckheere(12.0, &[2, 2, 2])?;
/// assert!((tails.upper - 1.0 / 90.0).abs() < 1e-16); // one of 90 arrangements
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn jonckheere(j: f64, sizes: &[usize]) -> Result<InclusiveTails, OutOfDomain> {
    let j = finite("j", j)?;
    countable_pairs(sizes)?;
    let mut probabilities = vec![1.0];
    let mut before = sizes[0];
    for &size in &sizes[1..] {
        probabilities = convolve(&probabilities, &rank_sum_probabilities(before, size));
        before += size;
    }
    Ok(tails(&probabilities, 1.0, j))
}

/// P(U = u) for u = 0..mn: by whether the largest of all observations is one of the m, which then exceeds no later one, or
/// one of the n, which exceeds all m.
fn rank_sum_probabilities(m: usize, n: usize) -> Vec<f64> {
    // U is distributed symmetrically, so that the groups may change places; few rows cost less.
    let (m, n) = (m.max(n), m.min(n));
    // rows[j] is the distribution for i of the first and j of the second sample.
    let mut rows: Vec<Vec<f64>> = vec![vec![1.0]; n + 1];
    for i in 1..=m {
        rows[0] = vec![1.0];
        for j in 1..=n {
            let total = (i + j) as f64;
            let (first, second) = (i as f64 / total, j as f64 / total);
            let mut row = vec![0.0; i * j + 1];
            // rows[j] still holds (i-1, j); rows[j-1] already holds (i, j-1).
            for (sum, p) in row.iter_mut().zip(&rows[j]) {
                *sum += first * p;
            }
            for (sum, p) in row[i..].iter_mut().zip(&rows[j - 1]) {
                *sum += second * p;
            }
            rows[j] = row;
        }
    }
    rows.swap_remove(n)
}

fn convolve(a: &[f64], b: &[f64]) -> Vec<f64> {
    let mut product = vec![0.0; a.len() + b.len() - 1];
    for (i, x) in a.iter().enumerate() {
        for (sum, y) in product[i..].iter_mut().zip(b) {
            *sum += x * y;
        }
    }
    product
}
