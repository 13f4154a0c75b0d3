//! All pairs with a variance for each level: Tamhane's T2 and Dunnett's T3 and C.
//!
//! Every pair has Welch's t = (m_i - m_j) / √(v_i + v_j) with v = s²/n, and his degrees of freedom
//! ν = (v_i + v_j)² / (v_i²/(n_i-1) + v_j²/(n_j-1)). With k levels and M = k(k-1)/2 pairs,
//!
//! | procedure | adjusted p-value |
//! | --- | --- |
//! | T2 | 1 - (1 - p)^M, p the pair's own (Šidák) |
//! | T3 | P(M* > abs t), M* the studentized maximum modulus of M variables on ν df |
//! | C | the α at which abs t = (q_i v_i + q_j v_j) / (√2 (v_i + v_j)), q_i the α point of the range of k on n_i - 1 df |
//!
//! All three are two-sided and keep the family-wise error in practice, whatever the variances: T2 is the most conservative,
//! T3 is the sharper of the others for few degrees of freedom and C for many (Dunnett 1980, whose simulations these
//! statements rest on). Equal means of some levels only are covered as well, since no step depends on another.
//!
//! # References
//! 1. Tamhane (1979), J. Amer. Statist. Assoc. 74, 471-480.
//! 2. Dunnett (1980), J. Amer. Statist. Assoc. 75, 796-800, doi 10.1080/01621459.1980.10477552.
//! 3. Welch (1947), Biometrika 34, 28-35.

use super::p_values;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::{student_t, studentized_maximum, studentized_range};
use crate::numerics::roots::{self, Value};
use crate::study::{DegreesOfFreedom, Estimates};
use std::f64::consts::SQRT_2;

/// Which of the procedures.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Separate {
    TamhaneT2,
    DunnettT3,
    DunnettC,
}

/// The variance of one mean, s²/n, and its degrees of freedom n - 1.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OfMean {
    pub variance: f64,
    pub df: f64,
}

/// One pair of levels: the later level less the earlier one.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pair {
    pub t: f64,
    /// Welch's.
    pub df: f64,
    pub later: OfMean,
    pub earlier: OfMean,
}

/// All pairs of the levels. One serves both p-values and critical values, so that what they share is tabulated once.
pub struct Pairs {
    /// In the order of the ready set of all pairs: by the earlier level, then by the later.
    pub pairs: Vec<Pair>,
    range: studentized_range::Family,
}

impl Pairs {
    /// All pairs of these means.
    ///
    /// # Errors
    /// [`OutOfDomain`] if the estimates have one error term, if there are fewer than 2 levels or more than 1000, or if the
    /// means and variances of a pair give no finite t.
    pub fn of(estimates: &Estimates) -> Result<Self, OutOfDomain> {
        let dfs = match &estimates.df {
            DegreesOfFreedom::PerMean(dfs) => dfs,
            DegreesOfFreedom::Common(df) => {
                let allowed = "those of a variance for each mean, and not common to all";
                return Err(OutOfDomain { argument: "df", value: *df, allowed });
            }
        };
        let k = estimates.means.len();
        let range = studentized_range::Family::new(k)?;
        let of_mean = |i: usize| OfMean { variance: estimates.covariance[(i, i)], df: dfs[i] };
        let mut pairs = Vec::with_capacity(k * (k - 1) / 2);
        for earlier in 0..k {
            for later in earlier + 1..k {
                let mut coefficients = vec![0.0; k];
                (coefficients[later], coefficients[earlier]) = (1.0, -1.0);
                let found = estimates.contrast(&coefficients);
                let t = found.estimate / found.se;
                if !t.is_finite() {
                    return Err(OutOfDomain { argument: "t", value: t, allowed: "a finite number" });
                }
                pairs.push(Pair { t, df: found.df, later: of_mean(later), earlier: of_mean(earlier) });
            }
        }
        Ok(Self { pairs, range })
    }

    /// The adjusted p-values, in the order of the pairs.
    ///
    /// # Errors
    /// [`OutOfDomain`] from the distributions, for degrees of freedom outside their range.
    ///
    /// # Accuracy
    /// Relative error at most 1e-11 down to 1e-14.
    pub fn adjusted_p(&mut self, procedure: Separate) -> Result<Vec<f64>, OutOfDomain> {
        let (m, range) = (self.pairs.len(), &mut self.range);
        let one = |pair: &Pair| {
            let raw = (2.0 * student_t::sf(pair.t.abs(), pair.df)?).min(1.0);
            Ok(match procedure {
                Separate::TamhaneT2 => p_values::sidak(raw, m as f64),
                // Never below the pair's own p-value by the rounding of an integral.
                Separate::DunnettT3 => studentized_maximum::sf(pair.t.abs(), m, pair.df)?.clamp(raw, 1.0),
                Separate::DunnettC => p_of_c(pair, range)?,
            })
        };
        self.pairs.iter().map(one).collect()
    }

    /// The values that |t| must reach at family-wise level `alpha`, in the order of the pairs: each gives the half-width
    /// of a simultaneous interval in standard errors.
    ///
    /// # Errors
    /// [`OutOfDomain`] if `alpha` is not from 0 to 1, and as for [`Self::adjusted_p`].
    ///
    /// # Accuracy
    /// Relative error at most 1e-11.
    pub fn critical(&mut self, procedure: Separate, alpha: f64) -> Result<Vec<f64>, OutOfDomain> {
        let m = self.pairs.len();
        match procedure {
            Separate::TamhaneT2 => {
                let upper = 0.5 * p_values::sidak_level(alpha, m as f64);
                self.pairs.iter().map(|pair| student_t::upper_quantile(upper, pair.df)).collect()
            }
            Separate::DunnettT3 => {
                let mut known = Known::default();
                let each = self.pairs.iter();
                each.map(|pair| known.at(pair.df, |df| studentized_maximum::upper_quantile(alpha, m, df)))
                    .collect()
            }
            Separate::DunnettC => {
                let (mut known, range) = (Known::default(), &mut self.range);
                let mut q = |df| known.at(df, |df| range.upper_quantile(alpha, df));
                let each = self.pairs.iter();
                each.map(|pair| Ok(weighted(pair, q(pair.later.df)?, q(pair.earlier.df)?))).collect()
            }
        }
    }
}

/// Values that were worked out for degrees of freedom which may come again.
#[derive(Default)]
struct Known {
    values: Vec<(f64, f64)>,
}

impl Known {
    fn at(
        &mut self,
        df: f64,
        value: impl FnOnce(f64) -> Result<f64, OutOfDomain>,
    ) -> Result<f64, OutOfDomain> {
        // The list stays in order, so that it is searched by halving.
        match self.values.binary_search_by(|(known, _)| known.total_cmp(&df)) {
            Ok(place) => Ok(self.values[place].1),
            Err(place) => {
                let value = value(df)?;
                self.values.insert(place, (df, value));
                Ok(value)
            }
        }
    }
}

/// The critical |t| of C from the two range points.
fn weighted(pair: &Pair, of_later: f64, of_earlier: f64) -> f64 {
    if of_later == of_earlier {
        return of_later / SQRT_2;
    }
    let share = pair.later.variance / (pair.later.variance + pair.earlier.variance);
    (share * of_later + (1.0 - share) * of_earlier) / SQRT_2
}

/// The α at which C's critical value is |t|.
///
/// With w the later mean's share of the variance it is the common tail of the range at a on its df and at b on the other's,
/// where w a + (1-w) b = √2 |t|; the difference of the logarithms of the two tails falls in a.
fn p_of_c(pair: &Pair, range: &mut studentized_range::Family) -> Result<f64, OutOfDomain> {
    let q = SQRT_2 * pair.t.abs();
    let one = range.sf(q, pair.later.df)?;
    let other = if pair.later.df == pair.earlier.df { one } else { range.sf(q, pair.earlier.df)? };
    let sum = pair.later.variance + pair.earlier.variance;
    let (share, rest) = (pair.later.variance / sum, pair.earlier.variance / sum);
    // As q lies between a and b, so does the answer between the two tails at q.
    if (one - other).abs() <= 1e-13 * one || rest == 0.0 {
        return Ok(one);
    }
    if share == 0.0 {
        return Ok(other);
    }
    // In units of q, so that the search has one scale; the degrees of freedom have been accepted above.
    let mut at = |a: f64| {
        let mut log_tail = |x: f64, df: f64| libm::log(range.sf(x.clamp(0.0, f64::MAX), df).unwrap_or(0.0));
        let log_one = log_tail(a * q, pair.later.df);
        Tails { a, log_one, log_other: log_tail((1.0 - share * a) / rest * q, pair.earlier.df) }
    };
    let mut last = Tails { a: 1.0, log_one: libm::log(one), log_other: libm::log(other) };
    let mut log_p = last.log_one;
    // The first step has the slope of two means.
    let slope = steepness(q, pair.later.df)? + share / rest * steepness(q, pair.earlier.df)?;
    let start = (1.0 - last.excess() / slope).clamp(0.5, (0.5 * (1.0 + 1.0 / share)).min(2.0));
    roots::increasing(
        |a| {
            let here = at(a);
            log_p = here.meeting(&last);
            let (excess, chord) = (here.excess(), (a - last.a).abs());
            let slope = (excess - last.excess()) / (a - last.a);
            last = here;
            // Along the chords the two tails meet up to terms of this order.
            let value = if excess.abs() * chord <= 1e-13 { 0.0 } else { excess };
            Value { value, slope, chord }
        },
        start,
        1.0,
    );
    Ok(libm::exp(log_p).clamp(one.min(other), one.max(other)))
}

/// The logarithms of the two tails where the one is taken at a.
struct Tails {
    a: f64,
    log_one: f64,
    log_other: f64,
}

impl Tails {
    /// By how much the other exceeds the one: rises with a.
    fn excess(&self) -> f64 {
        // Where neither tail is within the range of doubles, they are as good as equal.
        if self.log_one == self.log_other { 0.0 } else { self.log_other - self.log_one }
    }

    /// Where the two meet if each goes on as it did from `last` to here.
    fn meeting(&self, last: &Tails) -> f64 {
        let falls = (self.log_one - last.log_one).abs();
        let rises = (self.log_other - last.log_other).abs();
        let log_p = (rises * self.log_one + falls * self.log_other) / (rises + falls);
        if log_p.is_finite() { log_p } else { self.log_one }
    }
}

/// Minus the slope of log P(|T| > q/√2) in log q.
fn steepness(q: f64, df: f64) -> Result<f64, OutOfDomain> {
    let t = q / SQRT_2;
    let (here, further) = (student_t::sf(t, df)?, student_t::sf(1.001 * t, df)?);
    let slope = libm::log(here / further) / libm::log(1.001);
    // Beyond the range of doubles any slope will do.
    Ok(if slope.is_finite() && slope > 0.0 { slope } else { 1.0 })
}
