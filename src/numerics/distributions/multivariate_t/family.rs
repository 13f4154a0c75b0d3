//! One family of statistics, factored once: tails, quantiles and rectangles for as many limits as are wanted.

use super::deviate::Spread;
use super::estimator::Estimator;
use super::leader::{Leader, Level, Side, times};
use super::refinement::Refinement;
use super::region::{self, SAME, Slab};
use super::separation::Separation;
use super::{Answer, Effort, critical, lattice, matrix};
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::many_to_one::Sides;
use crate::numerics::distributions::{degrees_of_freedom, finite, probability, student_t};

/// Highest rank for which everything is exact.
const EXACT: usize = 3;
/// Up to this sum of the tails the outside is integrated, beyond it the inside, which is then likely to be the smaller one.
const MANY: f64 = 1.5;
/// See [`Level::typical`]: a usual critical value.
const TYPICAL: f64 = 3.0;

/// Several statistics T = A Z / S with their correlations and degrees of freedom, and which deviations count.
#[derive(Debug, Clone)]
pub struct Family {
    /// Rows of the factor; a row and its negative are kept once.
    rows: Vec<Vec<f64>>,
    /// For each statistic its row and sign.
    members: Vec<(usize, f64)>,
    df: f64,
    sides: Sides,
    /// Quantiles of the standard deviation given the leader; none where df is infinite.
    spread: Option<Spread>,
}

impl Family {
    /// The family with these correlations (rows of a matrix), degrees of freedom (infinity is allowed), and sides.
    ///
    /// # Errors
    /// [`OutOfDomain`] if `df` is not positive, or `correlation` is not a correlation matrix with up to 1000 rows: square,
    /// 1 on the diagonal, symmetric and positive semi-definite, each to 1e-9.
    pub fn new(correlation: &[Vec<f64>], df: f64, sides: Sides) -> Result<Family, OutOfDomain> {
        let df = degrees_of_freedom("df", df)?;
        let mut rows: Vec<Vec<f64>> = Vec::new();
        let mut members = Vec::new();
        for row in matrix::factor(correlation)? {
            let apart = |other: &Vec<f64>, sign: f64| {
                other.iter().zip(&row).map(|(a, b)| (a - sign * b) * (a - sign * b)).sum::<f64>()
                    < SAME * SAME
            };
            let known = rows.iter().enumerate().find_map(|(i, other)| {
                [1.0, -1.0].into_iter().find(|&sign| apart(other, sign)).map(|sign| (i, sign))
            });
            members.push(known.unwrap_or((rows.len(), 1.0)));
            if known.is_none() {
                rows.push(row);
            }
        }
        let mut family = Family { rows, members, df, sides, spread: None };
        if family.rank() > EXACT && df < f64::INFINITY {
            family.spread = Some(Spread::new(df + 1.0));
        }
        Ok(family)
    }

    /// The rank of the correlation matrix.
    pub fn rank(&self) -> usize {
        self.rows.first().map_or(0, Vec::len)
    }

    /// P(max > `c`), the single-step adjusted p-value of a statistic `c`.
    ///
    /// # Errors
    /// [`OutOfDomain`] if `c` is not finite, or negative when both sides count.
    ///
    /// # Accuracy
    /// Relative error below 1e-12 up to rank 3 (`tests/reference/ACCURACY.md` has what is reached); beyond, the standard error that
    /// is returned.
    pub fn sf(&self, c: f64, effort: Effort) -> Result<Answer, OutOfDomain> {
        Ok(self.refine(c, effort.seed)?.run(effort))
    }

    /// P(max <= `c`).
    ///
    /// # Errors
    /// As for [`Family::sf`]; with one side and `c` below 0 up to rank 3 an absolute error of 1e-14 times the tail of one
    /// statistic.
    ///
    /// # Accuracy
    /// As for [`Family::sf`]; for negative `c` up to rank 3 an absolute error of 1e-14 P(T₁ <= c).
    pub fn cdf(&self, c: f64, effort: Effort) -> Result<Answer, OutOfDomain> {
        Ok(self.at_level(self.limit(c)?, Side::Inside, effort.seed).run(effort))
    }

    /// P(max > `c`) as an object that is refined slice by slice; `seed` decides the random shifts.
    ///
    /// # Errors
    /// As for [`Family::sf`].
    pub fn refine(&self, c: f64, seed: u64) -> Result<Refinement, OutOfDomain> {
        Ok(self.at_level(self.limit(c)?, Side::Outside, seed))
    }

    /// The c with P(max > c) = `upper_p`, the critical value of the family; infinite at 0, the least possible value at 1.
    /// Beyond rank 3 it is found on one set of points, so that it is smooth in its arguments; `error` is its
    /// standard error.
    ///
    /// # Errors
    /// [`OutOfDomain`] if `upper_p` is not from 0 to 1.
    ///
    /// # Accuracy
    /// Relative error 1e-11 up to rank 3; beyond, the standard error that is returned, which is asked for as in
    /// [`Effort`] relative to c.
    pub fn upper_quantile(&self, upper_p: f64, effort: Effort) -> Result<Answer, OutOfDomain> {
        let p = probability("upper_p", upper_p)?;
        critical::solve(self, 1.0 - p, p, effort)
    }

    /// The c with P(max <= c) = `p`; infinite at 1, the least possible value at 0.
    ///
    /// # Errors
    /// [`OutOfDomain`] if `p` is not from 0 to 1.
    ///
    /// # Accuracy
    /// As for [`Family::upper_quantile`].
    pub fn quantile(&self, p: f64, effort: Effort) -> Result<Answer, OutOfDomain> {
        let p = probability("p", p)?;
        critical::solve(self, p, 1.0 - p, effort)
    }

    /// P(`lower`ᵢ <= Tᵢ <= `upper`ᵢ for all i), whatever the sides; limits may be infinite.
    ///
    /// # Errors
    /// [`OutOfDomain`] if there are not as many limits as statistics, a limit is not a number, or a lower limit is above its upper
    /// one.
    ///
    /// # Accuracy
    /// Absolute error 1e-14 up to rank 3, beyond that the standard error that is returned.
    pub fn rectangle(&self, lower: &[f64], upper: &[f64], effort: Effort) -> Result<Answer, OutOfDomain> {
        Ok(self.refine_rectangle(lower, upper, effort.seed)?.run(effort))
    }

    /// P(some Tᵢ is not from `lower`ᵢ to `upper`ᵢ), 1 less the [`Family::rectangle`], as a tail.
    ///
    /// # Errors
    /// As for [`Family::rectangle`].
    ///
    /// # Accuracy
    /// If every lower limit is below 0 and every upper one above, relative error 1e-12 up to rank 3; otherwise as for
    /// [`Family::rectangle`].
    pub fn outside_rectangle(
        &self,
        lower: &[f64],
        upper: &[f64],
        effort: Effort,
    ) -> Result<Answer, OutOfDomain> {
        Ok(self.within(&self.limits(lower, upper)?, Side::Outside, effort.seed)?.run(effort))
    }

    /// The probability of a rectangle as an object that is refined slice by slice.
    ///
    /// # Errors
    /// As for [`Family::rectangle`].
    pub fn refine_rectangle(
        &self,
        lower: &[f64],
        upper: &[f64],
        seed: u64,
    ) -> Result<Refinement, OutOfDomain> {
        self.within(&self.limits(lower, upper)?, Side::Inside, seed)
    }

    /// `c` if it can be a limit for all.
    fn limit(&self, c: f64) -> Result<f64, OutOfDomain> {
        let c = finite("c", c)?;
        if self.sides == Sides::Both && c < 0.0 {
            return Err(OutOfDomain { argument: "c", value: c, allowed: "at least 0 when both sides count" });
        }
        Ok(c)
    }

    pub(super) fn df(&self) -> f64 {
        self.df
    }

    pub(super) fn sides(&self) -> Sides {
        self.sides
    }

    /// How many tails there are: a statistic of which both sides count has two.
    pub(super) fn tails(&self) -> f64 {
        let slabs = self.unit_slabs();
        slabs.iter().map(|slab| f64::from(slab.low.is_finite()) + f64::from(slab.high.is_finite())).sum()
    }

    /// P(max > c) or P(max <= c) exactly, if the rank allows.
    pub(super) fn exact(&self, c: f64) -> Option<region::Tails> {
        let slabs = self.unit_slabs().into_iter().map(|slab| at(&slab, c));
        (self.rank() <= EXACT).then(|| region::tails(&slabs.collect::<Vec<_>>(), self.rank(), self.df))
    }

    /// The integral over the leader for limits that are all c.
    pub(super) fn leader(&self, c: f64, side: Side) -> Estimator {
        let level = Level { level: c, typical: TYPICAL };
        Estimator::Leader(Leader::new(self.unit_slabs(), level, self.df, side, self.spread.clone()))
    }

    fn at_level(&self, c: f64, wanted: Side, seed: u64) -> Refinement {
        if let Some(tails) = self.exact(c) {
            return Refinement::known(tails.of(wanted), wanted);
        }
        if self.sides == Sides::Both && c == 0.0 {
            return Refinement::known(if wanted == Side::Outside { 1.0 } else { 0.0 }, wanted);
        }
        let alone = student_t::sf(c, self.df).unwrap_or(0.0);
        let side = if self.tails() * alone <= MANY { Side::Outside } else { Side::Inside };
        Refinement::of(self.leader(c, side), wanted, seed, lattice::FEWEST)
    }

    /// The rows with limits 1 (and -1), which the level multiplies.
    fn unit_slabs(&self) -> Vec<Slab> {
        let both = self.sides == Sides::Both;
        let mut slabs: Vec<Slab> = self
            .rows
            .iter()
            .map(|row| Slab { row: row.clone(), low: if both { -1.0 } else { f64::NEG_INFINITY }, high: 1.0 })
            .collect();
        // Upwards for the negative of a row is downwards for the row.
        for (i, _) in self.members.iter().filter(|(_, sign)| *sign < 0.0) {
            slabs[*i].low = -1.0;
        }
        slabs
    }

    /// The limits that statistics on the same row leave together; rows without limits are left out.
    fn limits(&self, lower: &[f64], upper: &[f64]) -> Result<Vec<Slab>, OutOfDomain> {
        for (argument, limits) in [("number of lower limits", lower), ("number of upper limits", upper)] {
            if limits.len() != self.members.len() {
                let allowed = "one for each row of the correlation matrix";
                return Err(OutOfDomain { argument, value: limits.len() as f64, allowed });
            }
        }
        let all = |row: &Vec<f64>| Slab { row: row.clone(), low: f64::NEG_INFINITY, high: f64::INFINITY };
        let mut slabs: Vec<Slab> = self.rows.iter().map(all).collect();
        for ((&low, &high), &(row, sign)) in lower.iter().zip(upper).zip(&self.members) {
            if low.is_nan() {
                return Err(OutOfDomain { argument: "lower", value: low, allowed: "a number or infinite" });
            }
            // Written so that an upper limit that is no number is refused too.
            let ordered = low <= high;
            if !ordered {
                let allowed = "a number or infinite, at least the lower limit";
                return Err(OutOfDomain { argument: "upper", value: high, allowed });
            }
            let (low, high) = if sign > 0.0 { (low, high) } else { (-high, -low) };
            let slab = &mut slabs[row];
            (slab.low, slab.high) = (slab.low.max(low), slab.high.min(high));
        }
        slabs.retain(|slab| slab.low > f64::NEG_INFINITY || slab.high < f64::INFINITY);
        Ok(slabs)
    }

    /// The probability of a side of the region within `slabs`.
    fn within(&self, slabs: &[Slab], wanted: Side, seed: u64) -> Result<Refinement, OutOfDomain> {
        let empty = |slab: &Slab| {
            slab.low >= slab.high || slab.low == f64::INFINITY || slab.high == f64::NEG_INFINITY
        };
        if slabs.is_empty() || slabs.iter().any(empty) {
            let inside = if slabs.is_empty() { 1.0 } else { 0.0 };
            return Ok(Refinement::known(if wanted == Side::Inside { inside } else { 1.0 - inside }, wanted));
        }
        let slabs = respanned(slabs)?;
        let rank = slabs.first().map_or(0, |slab| slab.row.len());
        if rank <= EXACT {
            return Ok(Refinement::known(region::tails(&slabs, rank, self.df).of(wanted), wanted));
        }
        let around_origin = slabs.iter().all(|slab| slab.low < 0.0 && slab.high > 0.0);
        let alone = |limit: f64| student_t::sf(limit.min(f64::MAX), self.df).unwrap_or(0.0);
        let tails: f64 = slabs.iter().map(|slab| alone(-slab.low) + alone(slab.high)).sum();
        let spread = |df: f64| (df < f64::INFINITY).then(|| Spread::new(df));
        let estimator = if around_origin && tails <= MANY {
            let level = Level { level: 1.0, typical: 1.0 };
            Estimator::Leader(Leader::new(slabs, level, self.df, Side::Outside, spread(self.df + 1.0)))
        } else {
            Estimator::Separation(Separation::new(slabs, spread(self.df)))
        };
        Ok(Refinement::of(estimator, wanted, seed, lattice::FEWEST))
    }
}

/// The same limits for rows in as few dimensions as they need.
fn respanned(slabs: &[Slab]) -> Result<Vec<Slab>, OutOfDomain> {
    let product = |a: &Slab, b: &Slab| -> f64 {
        a.row.iter().zip(&b.row).map(|(a, b)| a * b).sum::<f64>().clamp(-1.0, 1.0)
    };
    let correlation: Vec<Vec<f64>> =
        slabs.iter().map(|a| slabs.iter().map(|b| product(a, b)).collect()).collect();
    let rows = matrix::factor(&correlation)?;
    Ok(rows.into_iter().zip(slabs).map(|(row, slab)| Slab { row, low: slab.low, high: slab.high }).collect())
}

/// A slab at this level.
fn at(slab: &Slab, level: f64) -> Slab {
    Slab { row: slab.row.clone(), low: times(slab.low, level), high: times(slab.high, level) }
}
