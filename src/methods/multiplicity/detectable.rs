//! The smallest difference that a design could have detected with a given power, comparison by comparison: δ standard errors,
//! where δ solves
//!
//! ```text
//! P(|T'(δ)| > c) = power        T': noncentral t on the row's df;  c: the row's critical value
//! ```
//!
//! or P(T'(δ) > c) on one side. It is a property of the design and of the error term, the same whatever the observed
//! difference; it is not the power "observed" at the difference that was found, which says nothing that the p-value does not say
//! (Hoenig and Heisey 2001, Amer. Statist. 55, 19–24, doi 10.1198/000313001300339897).
//!
//! Exact under normality with one error term and a fixed critical value, so for every single-step procedure. For a stepwise
//! one, c of its single-step relative gives a difference that is detected with at least that power; with a variance for each mean
//! it is as approximate as the row's df.

use super::Sides;
use crate::numerics::distributions::{noncentral_t, normal};
use crate::numerics::{OutOfDomain, roots};

/// An opposite tail that is less than this share of the probability to miss moves δ by less than a relative 1e-12.
const NEGLIGIBLE: f64 = 1e-13;

/// Solves for δ, each pair of df and critical value once: rows that share both share δ.
#[derive(Debug, Clone)]
pub struct Detectable {
    power: f64,
    sides: Sides,
    /// Critical value, df and δ of what has been asked for; a family has one pair, or a pair a row.
    known: Vec<(f64, f64, f64)>,
}

impl Detectable {
    /// For this `power` of each comparison by itself (0.8, usually), tested on these `sides`.
    ///
    /// # Errors
    /// [`OutOfDomain`] if `power` is not between 0 and 1.
    pub fn with_power(power: f64, sides: Sides) -> Result<Self, OutOfDomain> {
        if !(power > 0.0 && power < 1.0) {
            return Err(OutOfDomain { argument: "power", value: power, allowed: "between 0 and 1" });
        }
        Ok(Self { power, sides, known: Vec::new() })
    }

    /// The smallest difference, in the unit of `se`, that a row detects with the power asked for: its size, whatever the side.
    /// A row with this `critical` value is tested by |t| >= `critical`, or on one side by t >= `critical` with the sign that counts.
    ///
    /// # Errors
    /// [`OutOfDomain`] if `se` is not finite or below 0, or as [`Detectable::noncentrality`].
    ///
    /// # Accuracy
    /// As [`Detectable::noncentrality`].
    ///
    /// # Example
    /// ```
    /// # use levelwise::methods::multiplicity::{Sides, detectable::Detectable};
    /// // Two groups of 64, SD 1, two-sided 5 %: Cohen's (1988) tables have power 0.80 at d = 0.50.
    /// let mut design = Detectable::with_power(0.80, Sides::Both)?;
    /// let difference = design.difference(1.978_971, 126.0, (2.0_f64 / 64.0).sqrt())?;
    /// assert!((difference - 0.50).abs() < 0.002);
    /// # Ok::<(), levelwise::numerics::OutOfDomain>(())
    /// ```
    pub fn difference(&mut self, critical: f64, df: f64, se: f64) -> Result<f64, OutOfDomain> {
        if !(se >= 0.0 && se.is_finite()) {
            return Err(OutOfDomain { argument: "se", value: se, allowed: "finite and at least 0" });
        }
        Ok(self.noncentrality(critical, df)? * se)
    }

    /// δ: the difference in standard errors that is detected with the power asked for.
    ///
    /// 0 where no difference at all is needed: a critical value so small that the hypothesis itself is rejected as often.
    ///
    /// # Errors
    /// [`OutOfDomain`] if `critical` is beyond 1e8 in size or not a number (or negative, on both sides), or `df` is not positive.
    ///
    /// # Accuracy
    /// Relative error below 1e-10, checked against 30-digit arithmetic in `tests/reference/detectable.rs`.
    ///
    /// # Source
    /// Cohen (1988), Statistical Power Analysis for the Behavioral Sciences, chapter 2, for the power; solved for δ.
    pub fn noncentrality(&mut self, critical: f64, df: f64) -> Result<f64, OutOfDomain> {
        if let Some((_, _, delta)) = self.known.iter().rev().find(|(c, d, _)| *c == critical && *d == df) {
            return Ok(*delta);
        }
        let delta = match self.sides {
            Sides::Both => on_both_sides(critical, df, self.power)?,
            Sides::Greater | Sides::Less => on_one_side(critical, df, self.power)?,
        };
        self.known.push((critical, df, delta));
        Ok(delta)
    }
}

fn on_one_side(critical: f64, df: f64, power: f64) -> Result<f64, OutOfDomain> {
    Ok(noncentral_t::noncentrality(critical, df, 1.0 - power)?.max(0.0))
}

/// The opposite tail adds to the power that the one-sided δ has, which is therefore an upper bound.
fn on_both_sides(critical: f64, df: f64, power: f64) -> Result<f64, OutOfDomain> {
    if critical < 0.0 {
        let allowed = "at least 0 when both sides count";
        return Err(OutOfDomain { argument: "critical", value: critical, allowed });
    }
    let alone = on_one_side(critical, df, power)?;
    let opposite = |delta: f64| noncentral_t::cdf(-critical, df, delta);
    if opposite(alone)? < NEGLIGIBLE * (1.0 - power) {
        return Ok(alone);
    }
    let missed = |delta: f64| Ok(noncentral_t::cdf(critical, df, delta)? - opposite(delta)?);
    if missed(0.0)? <= 1.0 - power {
        return Ok(0.0);
    }
    // The normal deviate of the power is nearly linear in δ.
    let target = normal::upper_quantile(1.0 - power)?;
    let mut fault: Option<OutOfDomain> = None;
    let excess = |delta: f64| {
        let deviate = missed(delta).and_then(|missed: f64| normal::upper_quantile(missed.clamp(0.0, 1.0)));
        deviate.map_or_else(
            |error| {
                fault = Some(error);
                0.0
            },
            |deviate| deviate - target,
        )
    };
    let delta = roots::increasing_secant(excess, alone, 1.0);
    fault.map_or(Ok(delta), Err)
}
