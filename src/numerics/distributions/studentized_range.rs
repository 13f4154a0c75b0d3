//! The studentized range: Q = (largest - smallest of `groups` independent standard normal variables) / S, where
//! df·S² is chi-squared with df degrees of freedom.
//!
//! P(Q > q) = ∫ h(s) R(q s) ds with the tail of the range for known σ, k groups and n = k - 1,
//! R(w) = k ∫ φ(z) {Φ(z)ⁿ - [Φ(z) - Φ(z-w)]ⁿ} dz; z is the largest of the variables and Φ(z-w) the chance that
//! another one lies more than w below it. The difference of powers is formed without cancellation, so the upper tail
//! keeps its relative accuracy. Both integrals are trapezoidal sums of analytic, bell-shaped integrands.
//!
//! [`Family`] keeps R tabulated for many values with one number of groups ([`panels`]); the functions here are for one value.
//!
//! Domain: 2 to 1000 groups, any positive df or infinity, q >= 0.
//!
//! # References
//! 1. Copenhaver and Holland (1988), J. Statist. Comput. Simul. 30, 1-15 (the distribution; its tables are reproduced).
//! 2. Trefethen and Weideman (2014), SIAM Review 56, 385-458 (the quadrature).

mod panels;

use super::{
    degrees_of_freedom, normal, not_negative, probability,
    scale_mixture::{self, FAR, Tail},
    student_t,
};
use crate::numerics::{OutOfDomain, quadrature, roots};
use panels::Panels;
use std::f64::consts::{FRAC_1_SQRT_2, SQRT_2};

/// Lower-tail probability P(Q <= `q`) for `groups` means with `df` degrees of freedom.
///
/// # Errors
/// [`OutOfDomain`] if `q` is negative or not finite, `groups` is not from 2 to 1000, or `df` is not positive.
///
/// # Accuracy
/// For 2 to 200 groups and df from 0.5: absolute error at most 1e-12; relative error at most 1e-12 down to 1e-14.
/// Reached: `tests/reference/ACCURACY.md`.
pub fn cdf(q: f64, groups: usize, df: f64) -> Result<f64, OutOfDomain> {
    let upper = sf(q, groups, df)?;
    Ok(if upper <= 0.9 {
        1.0 - upper
    } else {
        Range::new(groups)?.lower(q, degrees_of_freedom("df", df)?).value
    })
}

/// Upper-tail probability of the studentized range: P(Q > `q`) for `groups` means with `df` degrees of freedom
/// for the standard error.
///
/// `q` is the range of the means divided by the standard error of one mean (dimensionless). It is computed
/// directly, not as `1 - cdf`, so the smallest probabilities keep their relative accuracy. `df` may be infinite:
/// the range of independent standard normal variables.
///
/// # Errors
/// [`OutOfDomain`] if `q` is negative or not finite, `groups` is not from 2 to 1000, or `df` is not positive.
///
/// # Accuracy
/// For 2 to 200 groups and df from 0.5: absolute error at most 1e-12; relative error at most 1e-12 down to 1e-14.
/// Reached: `tests/reference/ACCURACY.md`.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::studentized_range;
/// let p = studentized_range::sf(3.876_776_75, 3, 10.0)?; // the upper 5 % point
/// assert!((p - 0.05).abs() < 1e-8);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(q: f64, groups: usize, df: f64) -> Result<f64, OutOfDomain> {
    not_negative("q", q)?;
    Range::new(groups)?.sf(q, df)
}

/// The q with P(Q <= q) = `p`; 0 at 0, infinite at 1.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, `groups` is not from 2 to 1000, or `df` is not positive.
///
/// # Accuracy
/// Relative error at most 1e-12 for 2 to 200 groups, df from 0.5 and probabilities down to 1e-14.
pub fn quantile(p: f64, groups: usize, df: f64) -> Result<f64, OutOfDomain> {
    let p = probability("p", p)?;
    Range::new(groups)?.solve(p, 1.0 - p, df)
}

/// The q with P(Q > q) = `upper_p`; infinite at 0, 0 at 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, `groups` is not from 2 to 1000, or `df` is not positive.
///
/// # Accuracy
/// Relative error at most 1e-12 for 2 to 200 groups, df from 0.5 and probabilities down to 1e-14.
pub fn upper_quantile(upper_p: f64, groups: usize, df: f64) -> Result<f64, OutOfDomain> {
    let p = probability("upper_p", upper_p)?;
    Range::new(groups)?.solve(1.0 - p, p, df)
}

/// The studentized range of one number of groups, for many values: the adjusted p-values of a family of comparisons, whether
/// they share their df or not.
///
/// The first value takes about as long as [`sf`] does, those after it a tenth of that.
pub struct Family {
    range: Range,
}

impl Family {
    /// The family for `groups` means.
    ///
    /// # Errors
    /// [`OutOfDomain`] if `groups` is not from 2 to 1000.
    pub fn new(groups: usize) -> Result<Family, OutOfDomain> {
        let mut range = Range::new(groups)?;
        range.panels = Some(Panels::new());
        Ok(Family { range })
    }

    /// Upper-tail probability P(Q > `q`), as by [`sf`].
    ///
    /// # Errors
    /// [`OutOfDomain`] if `q` is negative or not finite, or `df` is not positive.
    ///
    /// # Accuracy
    /// As for [`sf`].
    pub fn sf(&mut self, q: f64, df: f64) -> Result<f64, OutOfDomain> {
        not_negative("q", q)?;
        self.range.sf(q, df)
    }

    /// The q with P(Q > q) = `upper_p`, as by [`upper_quantile`].
    ///
    /// # Errors
    /// [`OutOfDomain`] if `upper_p` is not from 0 to 1, or `df` is not positive.
    ///
    /// # Accuracy
    /// As for [`upper_quantile`].
    pub fn upper_quantile(&mut self, upper_p: f64, df: f64) -> Result<f64, OutOfDomain> {
        let p = probability("upper_p", upper_p)?;
        self.range.solve(1.0 - p, p, df)
    }
}

/// The range of k standard normal variables, with what its integrals share kept from one to the next.
struct Range {
    /// k - 1
    others: usize,
    /// Step of the trapezoidal rule in z.
    step: f64,
    /// Where the largest variable's density φ(z) Φ(z)ⁿ has its peak.
    peak: f64,
    /// What does not depend on w at z = step · i, from `first` on; filled as far as it has been needed.
    grid: Vec<Node>,
    first: i32,
    /// (n-1)/2, (n-2)/3, ...: 1 - (1-x)ⁿ = n x (1 - (n-1)/2 x (1 - (n-2)/3 x (...))); for n x <= 0.1 they are multiplied by
    /// less than 0.1/j, so that the first one left out counts for less than 1e-10/10! = 3e-17.
    ratios: [f64; TERMS],
    /// R, where it is wanted tabulated.
    panels: Option<Panels>,
}

/// Number of ratios of the binomial series.
const TERMS: usize = 8;

/// At one z: k φ(z) Φ(z)ⁿ, Φ(z) and 1/Φ(z).
#[derive(Clone, Copy)]
struct Node {
    density: f64,
    inverse: f64,
}

impl Range {
    fn new(groups: usize) -> Result<Range, OutOfDomain> {
        if !(2..=1000).contains(&groups) {
            let value = groups as f64;
            return Err(OutOfDomain { argument: "groups", value, allowed: "from 2 to 1000" });
        }
        let others = groups - 1;
        let k = groups as f64;
        // The more groups, the steeper the left flank of φΦⁿ: steps with errors of 1e-13 for 2 to 200 groups, found
        // against a step of 0.05 and values in quadruple precision.
        let step = 1.0 / (1.78 + 1.2 * libm::log(0.5 * k));
        let peak = normal::upper_quantile_unchecked(1.0 / k).max(0.0);
        let ratios = std::array::from_fn(|i| (others as f64 - (i + 1) as f64) / (i + 2) as f64);
        Ok(Range {
            others,
            step,
            peak,
            grid: Vec::with_capacity(160),
            first: libm::floor(-9.0 / step) as i32,
            ratios,
            panels: None,
        })
    }

    /// P(Q > q) for a q that is not negative.
    fn sf(&mut self, q: f64, df: f64) -> Result<f64, OutOfDomain> {
        let df = degrees_of_freedom("df", df)?;
        Ok(if q == 0.0 { 1.0 } else { self.upper(q, df).value })
    }

    /// The q with the given tails, found on the smaller of the two.
    fn solve(&mut self, lower: f64, upper: f64, df: f64) -> Result<f64, OutOfDomain> {
        let df = degrees_of_freedom("df", df)?;
        if lower == 0.0 || upper == 0.0 {
            return Ok(if lower == 0.0 { 0.0 } else { f64::INFINITY });
        }
        // Bonferroni's bound for k(k-1)/2 pairs, sharp in the tail.
        let share = upper / (self.others * (self.others + 1)) as f64;
        let bound = SQRT_2 * student_t::upper_quantile(share, df)?;
        // Two groups and a probability below the rounding of 1 leave 0, and then q is about that probability.
        let start = libm::log(if bound > 0.0 { bound } else { lower });
        let log_q = if upper <= 0.5 {
            roots::log_tail(|log_q| self.upper(libm::exp(log_q), df).pair(), upper, true, start)
        } else {
            roots::log_tail(|log_q| self.lower(libm::exp(log_q), df).pair(), lower, false, start)
        };
        Ok(libm::exp(log_q))
    }

    /// P(Q > q), and the derivative of its logarithm by log q.
    fn upper(&mut self, q: f64, df: f64) -> Tail {
        if q > FAR {
            return self.upper(FAR, df).beyond(q, df);
        }
        let pairs = libm::log((self.others * (self.others + 1)) as f64);
        let log_shape = |s: f64| (pairs + normal::log_lower(-q * s * FRAC_1_SQRT_2)).min(0.0);
        scale_mixture::tail(df, 1e-13, log_shape, |s| self.known_sigma_tail(q * s))
    }

    /// R(w), from the table if there is one.
    fn known_sigma_tail(&mut self, w: f64) -> f64 {
        // The table is put aside while it asks for what it does not know yet.
        let Some(mut panels) = self.panels.take() else { return self.range_tail(w) };
        let tail = panels.at(w, |w| self.range_tail(w));
        self.panels = Some(panels);
        tail
    }

    /// P(Q <= q), and the derivative of its logarithm by log q.
    fn lower(&mut self, q: f64, df: f64) -> Tail {
        let n = self.others as f64;
        // k (2Φ(w/2) - 1)ⁿ bounds the probability; it is concave in w.
        let log_shape =
            |s: f64| (libm::log(n + 1.0) + n * libm::log(libm::erf(0.5 * FRAC_1_SQRT_2 * q * s))).min(0.0);
        scale_mixture::tail(df, 1e-13, log_shape, |s| self.range_cdf(q * s))
    }

    /// R(w), the probability of a range above w when σ is known.
    fn range_tail(&mut self, w: f64) -> f64 {
        if w > 80.0 {
            return 0.0; // below 1e-600
        }
        let (n, step, ratios) = (self.others, self.step, self.ratios);
        quadrature::trapezoid_outward(self.peak.max(0.5 * w), step, |i| {
            let Node { density, inverse } = self.node(i);
            let share = normal::lower_in_integrals(step * i as f64 - w) * inverse;
            density * one_minus_power(share, n, &ratios)
        })
    }

    /// 1 - R(w) as an integral of its own: k ∫ φ(z) [Φ(z) - Φ(z-w)]ⁿ dz.
    ///
    /// The step is halved: the rule's error is relative to 1, and here the small values count.
    fn range_cdf(&self, w: f64) -> f64 {
        if w > 80.0 {
            return 1.0; // short of it by less than 1e-600
        }
        let k = (self.others + 1) as f64;
        // Far down in the tail the integrand is a bell curve: log(Φ(r+x) - Φ(r-x)) has the second derivative
        // -2rφ(r)/(2Φ(r)-1) in the middle, r = w/2, and a step of 0.7 standard deviations has an error of 6e-18.
        let r = 0.5 * w;
        let bend = if r < 1e-3 { 1.0 } else { 2.0 * r * normal::density(r) / libm::erf(r * FRAC_1_SQRT_2) };
        let step = (0.5 * self.step).min(0.7 / (1.0 + self.others as f64 * bend).sqrt());
        quadrature::trapezoid_outward(self.peak.min(0.5 * w), step, |i| {
            let z = step * i as f64;
            k * normal::density(z) * power(normal_interval(z, w), self.others)
        })
    }

    /// The node at z = step · i.
    fn node(&mut self, i: i32) -> Node {
        while self.grid.len() as i32 <= i - self.first {
            let z = self.step * (self.first + self.grid.len() as i32) as f64;
            let lower = normal::lower(z);
            let k = (self.others + 1) as f64;
            let density = k * normal::density(z) * power(lower, self.others);
            self.grid.push(Node { density, inverse: 1.0 / lower });
        }
        self.grid
            .get((i - self.first).max(0) as usize)
            .copied()
            .unwrap_or(Node { density: 0.0, inverse: 1.0 })
    }
}

/// Φ(z) - Φ(z-w), with the digits that a short interval or one far out would lose by subtraction.
fn normal_interval(z: f64, w: f64) -> f64 {
    let middle = z - 0.5 * w;
    if w < 0.02 {
        return normal::short_interval(middle, w);
    }
    if middle > 0.0 {
        normal::lower_in_integrals(w - z) - normal::lower_in_integrals(-z)
    } else {
        normal::lower_in_integrals(z) - normal::lower_in_integrals(z - w)
    }
}

/// xⁿ by repeated squaring.
fn power(x: f64, n: usize) -> f64 {
    let (mut result, mut square, mut left) = (1.0, x, n);
    while left > 0 {
        if left & 1 == 1 {
            result *= square;
        }
        square *= square;
        left >>= 1;
    }
    result
}

/// 1 - (1-x)ⁿ without cancellation, for 0 <= x <= 1 and n = `count`.
fn one_minus_power(x: f64, count: usize, ratios: &[f64; TERMS]) -> f64 {
    let mean = count as f64 * x;
    if mean > 40.0 {
        return 1.0; // short of it by less than exp(-40)
    }
    if mean > 0.1 {
        return 1.0 - power(1.0 - x, count);
    }
    mean * ratios.iter().rev().fold(1.0, |sum, ratio| 1.0 - ratio * x * sum)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_table_agrees_with_the_integrals() {
        for groups in [2, 3, 7, 20, 77, 200, 1000] {
            let mut family = Family::new(groups).unwrap();
            for i in 1..1200 {
                let w = f64::from(i) * 0.0451;
                let (table, integral) = (family.range.known_sigma_tail(w), family.range.range_tail(w));
                assert!((table / integral - 1.0).abs() < 3e-13, "{groups} {w}: {table:e} {integral:e}");
            }
        }
    }
}
