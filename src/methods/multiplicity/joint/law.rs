//! The distribution of the largest of some rows' statistics, by the shortest way that is exact, else by lattice points.

use super::cells::{self, Cells};
use super::statistics::Statistics;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::many_to_one::{self, Sides};
use crate::numerics::distributions::multivariate_t::{self, Effort, Refinement};
use crate::numerics::distributions::{student_t, studentized_range};
use std::f64::consts::SQRT_2;

/// Seed of the lattices' shifts: one for all, so that the same question has the same answer everywhere.
const SEED: u64 = 1;
/// Correlations that differ by less are equal: they were computed.
const SAME: f64 = 1e-13;
/// `many_to_one` refuses loadings nearer to 1.
const LARGEST_LOADING: f64 = 0.999_999;

/// How P(max > c) of some rows is found.
pub enum Law {
    /// One row: Student's t.
    One { df: f64, sides: Sides },
    /// All pairs of levels that are alike: the studentized range.
    Range { range: studentized_range::Family, df: f64 },
    /// All pairs inside each of several cells of such levels.
    Cells(Cells),
    /// Correlations that are products of loadings, as against a control; independent rows have loadings of 0.
    Loadings { loadings: Vec<f64>, df: f64, sides: Sides },
    /// Any correlations: exact up to rank 3, lattice points beyond.
    Any(Box<multivariate_t::Family>),
}

/// A tail probability, or the way to it.
pub enum Tail {
    Known(f64),
    Points(Box<Refinement>),
}

impl Law {
    /// The law of these rows of the statistics with `df` degrees of freedom.
    ///
    /// # Errors
    /// [`OutOfDomain`] from the distributions.
    pub fn of(statistics: &Statistics, rows: &[usize], df: f64) -> Result<Self, OutOfDomain> {
        let sides = statistics.tails();
        if rows.len() == 1 {
            return Ok(Self::One { df, sides });
        }
        if sides == Sides::Both
            && let Some(sizes) = cells::sizes(statistics, rows)
        {
            return Ok(match sizes[..] {
                [levels] => Self::Range { range: studentized_range::Family::new(levels)?, df },
                _ => Self::Cells(Cells::new(&sizes, df)?),
            });
        }
        let correlation = statistics.correlation_of(rows);
        Ok(match loadings(&correlation) {
            Some(loadings) => Self::Loadings { loadings, df, sides },
            None => Self::Any(Box::new(multivariate_t::Family::new(&correlation, df, sides)?)),
        })
    }

    /// P(max > `c`).
    ///
    /// # Errors
    /// [`OutOfDomain`] if `c` is not finite, or negative where both sides count.
    ///
    /// # Accuracy
    /// Relative error at most 1e-11 where it is known at once; else the error that comes with it.
    pub fn tail(&mut self, c: f64) -> Result<Tail, OutOfDomain> {
        Ok(Tail::Known(match self {
            Self::One { df, sides: Sides::Both } => (2.0 * student_t::sf(c, *df)?).min(1.0),
            Self::One { df, sides: Sides::Greater } => student_t::sf(c, *df)?,
            Self::Range { range, df } => range.sf((SQRT_2 * c).min(f64::MAX), *df)?,
            Self::Cells(cells) => cells.tail(c),
            Self::Loadings { loadings, df, sides } => many_to_one::sf(c, loadings, *df, *sides)?,
            Self::Any(family) => return Ok(Tail::Points(Box::new(family.refine(c, SEED)?))),
        }))
    }

    /// The c with P(max > c) = `alpha` where it is exact; none where it takes lattice points.
    ///
    /// # Errors
    /// [`OutOfDomain`] from the distributions.
    pub fn critical(&mut self, alpha: f64) -> Result<Option<f64>, OutOfDomain> {
        Ok(Some(match self {
            Self::One { df, sides: Sides::Both } => student_t::upper_quantile(0.5 * alpha, *df)?,
            Self::One { df, sides: Sides::Greater } => student_t::upper_quantile(alpha, *df)?,
            Self::Range { range, df } => range.upper_quantile(alpha, *df)? / SQRT_2,
            Self::Cells(cells) => cells.critical(alpha)?,
            Self::Loadings { loadings, df, sides } => {
                many_to_one::upper_quantile(alpha, loadings, *df, *sides)?
            }
            Self::Any(family) if family.rank() <= 3 => family.upper_quantile(alpha, Effort::default())?.value,
            Self::Any(_) => return Ok(None),
        }))
    }
}

/// The λ with ρ_ij = λ_i λ_j for all i and j that differ, where there are such.
fn loadings(correlation: &[Vec<f64>]) -> Option<Vec<f64>> {
    let count = correlation.len();
    let pairs = (0..count).flat_map(|i| (i + 1..count).map(move |j| (i, j)));
    let (i, j) =
        pairs.max_by(|&a, &b| correlation[a.0][a.1].abs().total_cmp(&correlation[b.0][b.1].abs()))?;
    let together = correlation[i][j];
    if together.abs() <= SAME {
        return Some(vec![0.0; count]);
    }
    // λ_i² = ρ_ij ρ_ik / ρ_jk, with the k that tells most; if there is none, no third row is correlated with both.
    let third = (0..count).filter(|k| *k != i && *k != j).max_by(|&a, &b| {
        let tells = |k: usize| (correlation[i][k] * correlation[j][k]).abs();
        tells(a).total_cmp(&tells(b))
    })?;
    let square = if correlation[j][third].abs() > SAME {
        together * correlation[i][third] / correlation[j][third]
    } else {
        together.abs()
    };
    if !(square > 0.0 && square < 1.0) {
        return None;
    }
    let first = square.sqrt();
    let found: Vec<f64> =
        (0..count).map(|l| if l == i { first } else { correlation[i][l] / first }).collect();
    let fits = (0..count).all(|a| {
        let differs = |b: usize| (correlation[a][b] - found[a] * found[b]).abs() > SAME;
        found[a].abs() < LARGEST_LOADING && !(0..count).any(|b| b != a && differs(b))
    });
    fits.then_some(found)
}

#[cfg(test)]
mod tests {
    use super::loadings;

    fn products(of: &[f64]) -> Vec<Vec<f64>> {
        let one = |i: usize, j: usize| if i == j { 1.0 } else { of[i] * of[j] };
        (0..of.len()).map(|i| (0..of.len()).map(|j| one(i, j)).collect()).collect()
    }

    #[test]
    fn loadings_are_found_where_there_are_some() {
        for of in [&[0.7, 0.5, 0.6, 0.8][..], &[0.0, 0.0, 0.0], &[0.5, -0.5, 0.0, 0.9], &[0.6, 0.8, 0.0]] {
            let found = loadings(&products(of)).unwrap();
            for (row, again) in products(of).iter().zip(products(&found)) {
                assert!(row.iter().zip(&again).all(|(a, b)| (a - b).abs() < 1e-15), "{of:?} {found:?}");
            }
        }
        let pairs = [vec![1.0, 0.5, -0.5], vec![0.5, 1.0, 0.5], vec![-0.5, 0.5, 1.0]];
        assert_eq!(loadings(&pairs), None);
        let same = [vec![1.0, 1.0, 0.2], vec![1.0, 1.0, 0.2], vec![0.2, 0.2, 1.0]];
        assert_eq!(loadings(&same), None);
    }
}
