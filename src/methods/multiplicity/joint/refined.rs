//! Probabilities and critical values that are refined slice by slice until they are good enough.

use super::law::{Law, Tail};
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::many_to_one::Sides;
use crate::numerics::distributions::multivariate_t::{Answer, Method, Refinement};
use crate::numerics::distributions::student_t;

/// Relative error that is said of what is exact.
const EXACT: f64 = 1e-11;
/// Standard error of a p-value at which it is good enough in any case.
const SMALL: f64 = 1e-5;
/// Relative standard error that is enough where the decision is clear.
const RELATIVE: f64 = 1e-3;
/// Standard error of a critical value, relative to it, at which it is good enough.
const OF_CRITICAL: f64 = 1e-4;

/// A number with its error.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Found {
    pub value: f64,
    /// A bound where the number is exact, else its standard error.
    pub error: f64,
    pub exact: bool,
}

impl Found {
    pub fn exactly(value: f64) -> Self {
        Self { value, error: EXACT * value.abs(), exact: true }
    }

    fn of(answer: Answer) -> Self {
        if answer.method == Method::Exact {
            return Self::exactly(answer.value);
        }
        Self { value: answer.value, error: answer.error, exact: false }
    }
}

/// One tail probability in the making.
pub enum TailWork {
    Known(Found),
    Points { refinement: Box<Refinement>, alpha: f64 },
}

impl TailWork {
    /// P(max > `c`), which is to be compared with `alpha`.
    ///
    /// # Errors
    /// [`OutOfDomain`] from the law.
    pub fn new(law: &mut Law, c: f64, alpha: f64) -> Result<Self, OutOfDomain> {
        Ok(match law.tail(c)? {
            Tail::Known(p) => Self::Known(Found::exactly(p)),
            Tail::Points(refinement) => Self::Points { refinement, alpha },
        })
    }

    /// One slice; the probability once it is good enough, or cannot be refined any more.
    pub fn advance(&mut self) -> Option<Found> {
        match self {
            Self::Known(found) => Some(*found),
            Self::Points { refinement, alpha } => {
                let more = refinement.advance();
                let found = Found::of(refinement.estimate()?);
                let clear = found.error <= 0.1 * (found.value - *alpha).abs();
                let enough = found.error <= SMALL || (clear && found.error <= RELATIVE * found.value);
                (enough || !more).then_some(found)
            }
        }
    }

    /// The probability as far as it is known.
    pub fn estimate(&self) -> Option<Found> {
        match self {
            Self::Known(found) => Some(*found),
            Self::Points { refinement, .. } => refinement.estimate().map(Found::of),
        }
    }
}

/// One critical value in the making: the root of log P(max > c) = log alpha by the secant method, first on few points, then
/// on as many as its error takes. On the same points the probability is a smooth function of c.
pub struct CriticalWork {
    alpha: f64,
    c: f64,
    /// The points that every probability rests on; 0 until the first answer tells.
    points: usize,
    /// The c before and its log P - log alpha.
    last: Option<(f64, f64)>,
    /// d log P / dc, negative.
    slope: f64,
    sides: Sides,
    refinement: Option<Box<Refinement>>,
    /// Whether the points are those of the result.
    fine: bool,
    steps: usize,
}

/// A step that is so small, relative to the critical value, ends the search on few points.
const NEAR: f64 = 1e-2;
/// Most evaluations of one root; the secant method takes three or four from Bonferroni's bound.
const MOST_STEPS: usize = 30;

impl CriticalWork {
    /// For a law that is not exact, of `rows` rows.
    ///
    /// # Errors
    /// [`OutOfDomain`] from Student's t.
    pub fn new(rows: usize, df: f64, sides: Sides, alpha: f64) -> Result<Self, OutOfDomain> {
        let tails = rows as f64 * if sides == Sides::Both { 2.0 } else { 1.0 };
        let c = student_t::upper_quantile((alpha / tails).min(0.5), df)?;
        // One statistic's own slope to start with.
        let (here, further) = (student_t::sf(c, df)?, student_t::sf(c + 0.01, df)?);
        let slope = libm::log(further / here) / 0.01;
        Ok(Self { alpha, c, points: 0, last: None, slope, sides, refinement: None, fine: false, steps: 0 })
    }

    /// One slice; the critical value once it is good enough.
    ///
    /// # Errors
    /// [`OutOfDomain`] from the law.
    pub fn advance(&mut self, law: &mut Law) -> Result<Option<Found>, OutOfDomain> {
        let mut refinement = match self.refinement.take() {
            Some(refinement) => refinement,
            None => match law.tail(self.c)? {
                Tail::Points(refinement) => refinement,
                Tail::Known(_) => return Ok(law.critical(self.alpha)?.map(Found::exactly)),
            },
        };
        let more = refinement.advance();
        let Some(answer) = refinement.estimate().filter(|answer| answer.points >= self.points || !more)
        else {
            self.refinement = Some(refinement);
            return Ok(None);
        };
        let excess = libm::log(answer.value / self.alpha);
        if let Some((before, its)) = self.last {
            let slope = (excess - its) / (self.c - before);
            self.slope = if slope < 0.0 && slope.is_finite() { slope } else { self.slope };
        }
        let scale = self.c.abs().max(0.1);
        let step = (-excess / self.slope).clamp(-2.0, 2.0);
        let error = (answer.error / answer.value / self.slope).abs();
        let error = if error.is_finite() { error } else { scale };
        self.steps += 1;
        if !self.fine && step.abs() <= NEAR * scale {
            // Here the points are doubled until the error is small; from then on they stay.
            if error > OF_CRITICAL * scale && more {
                self.points = answer.points + 1;
                self.refinement = Some(refinement);
                return Ok(None);
            }
            self.fine = true;
        }
        self.points = answer.points;
        self.last = Some((self.c, excess));
        let next = self.c + step;
        if (self.fine && step.abs() <= 0.05 * OF_CRITICAL * scale) || self.steps >= MOST_STEPS {
            return Ok(Some(Found { value: next, error, exact: false }));
        }
        // Where both sides count a level is not negative.
        self.c = if self.sides == Sides::Both && next <= 0.0 { 0.5 * self.c } else { next };
        Ok(None)
    }
}
