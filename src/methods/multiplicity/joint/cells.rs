//! All pairs inside disjoint cells of levels whose means have equal variances and covariances: the largest |T| is that of
//! independent ranges over one S, divided by √2.
//!
//! P(max > c) = ∫ h(s) {1 - Π [1 - R_g(√2 c s)]} ds with R_g the tail of the range of the g means of a cell for known σ and
//! h the density of S, df·S² chi-squared. The union is built up as U + R (1 - U), a sum of positive terms, so that the
//! tail keeps its relative accuracy. In u = log s the density is exp(-(df/2)(e²ᵘ - 1 - 2u)) times a constant.

use super::statistics::Statistics;
use crate::numerics::distributions::{student_t, studentized_range::Family};
use crate::numerics::special::{exp_minus_linear, stirling_error};
use crate::numerics::{OutOfDomain, quadrature, roots};
use std::cell::RefCell;
use std::f64::consts::{PI, SQRT_2};

/// Variances and covariances that differ by less than this share of the variance are equal: they were computed.
const SAME: f64 = 1e-13;

/// The sizes of the cells if these rows are all pairs inside disjoint cells of levels that are alike.
pub fn sizes(statistics: &Statistics, rows: &[usize]) -> Option<Vec<usize>> {
    let pairs: Vec<(usize, usize)> =
        rows.iter().map(|&row| difference(&statistics.coefficients[row])).collect::<Option<_>>()?;
    let mut cell: Vec<usize> = (0..statistics.covariance.nrows()).collect();
    for &(i, j) in &pairs {
        let (one, other) = (cell[i], cell[j]);
        cell.iter_mut().filter(|cell| **cell == other).for_each(|cell| *cell = one);
    }
    let mut distinct: Vec<(usize, usize)> = pairs.iter().map(|&(i, j)| (i.min(j), i.max(j))).collect();
    distinct.sort_unstable();
    distinct.dedup();
    let sizes: Vec<usize> = (0..cell.len())
        .map(|name| cell.iter().filter(|cell| **cell == name).count())
        .filter(|size| *size > 1)
        .collect();
    let complete: usize = sizes.iter().map(|size| size * (size - 1) / 2).sum();
    let levels: Vec<usize> =
        (0..cell.len()).filter(|&i| pairs.iter().any(|&(a, b)| a == i || b == i)).collect();
    (distinct.len() == pairs.len() && complete == pairs.len() && alike(statistics, &levels)).then_some(sizes)
}

/// The two levels of a row that is a difference.
pub fn difference(row: &[f64]) -> Option<(usize, usize)> {
    let mut counts = row.iter().enumerate().filter(|(_, c)| **c != 0.0);
    let ((i, one), (j, other)) = (counts.next()?, counts.next()?);
    (counts.next().is_none() && *one == -*other).then_some((i, j))
}

fn alike(statistics: &Statistics, levels: &[usize]) -> bool {
    let at = |i: usize, j: usize| statistics.covariance[(levels[i], levels[j])];
    let (variance, covariance) = (at(0, 0), at(0, 1));
    (0..levels.len()).all(|i| {
        (0..levels.len()).all(|j| {
            let expected = if i == j { variance } else { covariance };
            (at(i, j) - expected).abs() <= SAME * variance
        })
    })
}

/// Two or more cells.
pub struct Cells {
    ranges: RefCell<Vec<Family>>,
    pairs: f64,
    df: f64,
}

impl Cells {
    /// # Errors
    /// [`OutOfDomain`] for cells of fewer than 2 or more than 1000 levels.
    pub fn new(sizes: &[usize], df: f64) -> Result<Self, OutOfDomain> {
        let ranges = sizes.iter().map(|&size| Family::new(size)).collect::<Result<Vec<_>, _>>()?;
        let pairs = sizes.iter().map(|&size| size as f64 * (size as f64 - 1.0) / 2.0).sum();
        Ok(Self { ranges: RefCell::new(ranges), pairs, df })
    }

    /// P(max > `c`) for c >= 0.
    ///
    /// # Accuracy
    /// Relative error below 1e-11 down to 1e-14.
    pub fn tail(&self, c: f64) -> f64 {
        if c <= 0.0 || self.df >= 1e30 {
            return if c <= 0.0 { 1.0 } else { self.known_sigma_tail(c) };
        }
        let constant = 0.5 * libm::log(self.df / PI) - stirling_error(0.5 * self.df);
        let log_integrand = |u: f64| {
            let log_density = constant - 0.5 * self.df * exp_minus_linear(2.0 * u);
            log_density + libm::log(self.known_sigma_tail(c * libm::exp(u)))
        };
        // Where the range of a few means is not far out.
        let start = libm::log(10.0 / c).min(0.0);
        quadrature::bell(log_integrand, start, 1.0 / (2.0 * self.df).sqrt(), 1e-24).value.min(1.0)
    }

    /// The c with P(max > c) = `alpha`, which is between 0 and 1.
    ///
    /// # Errors
    /// [`OutOfDomain`] from the bound that the search starts from.
    ///
    /// # Accuracy
    /// Relative error below 1e-11.
    pub fn critical(&self, alpha: f64) -> Result<f64, OutOfDomain> {
        let bound = student_t::upper_quantile(0.5 * alpha / self.pairs, self.df)?;
        let excess = |log_c: f64| libm::log(alpha / self.tail(libm::exp(log_c)));
        Ok(libm::exp(roots::increasing_secant(excess, libm::log(bound), 1.0)))
    }

    fn known_sigma_tail(&self, c: f64) -> f64 {
        let w = (SQRT_2 * c).min(f64::MAX);
        let mut union = 0.0;
        for range in self.ranges.borrow_mut().iter_mut() {
            // w is a finite number that is not negative: nothing can be refused.
            union += range.sf(w, f64::INFINITY).unwrap_or(0.0) * (1.0 - union);
        }
        union
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numerics::distributions::many_to_one::Sides;
    use crate::numerics::distributions::multivariate_t;

    /// The correlations of all pairs inside cells of these sizes.
    fn correlation(sizes: &[usize]) -> Vec<Vec<f64>> {
        let mut pairs = Vec::new();
        let mut from = 0;
        for size in sizes {
            pairs.extend((from..from + size).flat_map(|i| (i + 1..from + size).map(move |j| (i, j))));
            from += size;
        }
        let is = |a: usize, b: usize| f64::from(a == b);
        let product = |(i, j): (usize, usize), (k, l): (usize, usize)| {
            0.5 * (is(i, k) + is(j, l) - is(i, l) - is(j, k))
        };
        pairs.iter().map(|one| pairs.iter().map(|other| product(*one, *other)).collect()).collect()
    }

    #[test]
    fn cells_agree_with_the_exact_integrals_up_to_rank_three() {
        for sizes in [&[3, 2][..], &[2, 2, 2], &[2, 2], &[4]] {
            for df in [1.0, 3.5, 12.0, 300.0, f64::INFINITY] {
                let cells = Cells::new(sizes, df).unwrap();
                let family = multivariate_t::Family::new(&correlation(sizes), df, Sides::Both).unwrap();
                for c in [0.05, 0.6, 1.9, 2.8, 7.0, 30.0] {
                    let exact = family.sf(c, Default::default()).unwrap().value;
                    // The integrals are good to 1e-12 of themselves or 1e-14 of 1.
                    let error = (cells.tail(c) - exact).abs() / exact.max(1e-14);
                    assert!(error < 1e-11, "{sizes:?} {df} {c}: {} {exact}", cells.tail(c));
                }
                let critical = cells.critical(0.03).unwrap();
                assert!((cells.tail(critical) / 0.03 - 1.0).abs() < 1e-11);
            }
        }
    }
}
