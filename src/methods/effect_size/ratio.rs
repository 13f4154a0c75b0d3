//! The ratio of two means, and its set of plausible values at a row's own critical value: Fieller (1954).
//!
//! A contrast takes the mean b of one set of levels from the mean a of another. With d = a - b, φ = a/b - 1 = d/b and c the row's
//! critical value, the set is made of all φ whose own test does not reject:
//!
//! ```text
//! (d - φ b)² <= c² (v_dd - 2 φ v_db + φ² v_bb)
//! A φ² - 2 B φ + C <= 0    A = b² - c² v_bb    B = d b - c² v_db    C = d² - c² v_dd
//! B² - A C = c² [b² v_dd - 2 d b v_db + d² v_bb - c² (v_dd v_bb - v_db²)]
//! ```
//!
//! At φ = 0 it is the row's own test of the difference: the set leaves out the ratio 1 exactly when d ± c se leaves out 0. It is an
//! interval only where b itself is significantly above 0 (A > 0); else it is everything but a gap, or everything, and the
//! result says so. On one side the set is that of the one-sided tests.
//!
//! Exact under normality with one error term, for the c of one row; with a variance for each mean, as approximate as
//! the row's df, which are kept for every φ.
//!
//! References: \[1\] Fieller (1954), J. R. Statist. Soc. B 16, 175–185. \[2\] Scheffé (1970), Ann. Math. Statist. 41, 1–29 (the three
//! shapes of the set; from memory). \[3\] Dilba, Bretz, Guiard and Hothorn (2004), Methods Inf. Med. 43, 465–469 (simultaneous sets
//! for ratios; from memory): there c depends on φ through the correlations, here it is kept at the row's own.

use super::Interval;
use crate::numerics::sums::sum;
use crate::study::Estimates;

/// What the caller knows of the outcome's zero.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Zero {
    /// Zero means that there is nothing of it, and less is not possible: a ratio has a meaning.
    Natural,
    /// Zero is a convention, as with degrees Celsius or a score.
    Arbitrary,
}

/// How many standard errors a row's interval reaches, and to which side.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Reach {
    /// To both: the row rejects when |t| exceeds this.
    Both(f64),
    /// Downwards, for a lower bound: the row rejects when t exceeds this.
    LowerBound(f64),
    /// Upwards, for an upper bound: the row rejects when -t exceeds this.
    UpperBound(f64),
}

impl Reach {
    fn critical(self) -> f64 {
        match self {
            Self::Both(critical) | Self::LowerBound(critical) | Self::UpperBound(critical) => critical,
        }
    }
}

/// The ratios that the data do not contradict.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum RatioSet {
    /// All from the lower to the upper bound; a side that is not asked for is infinite.
    Bounded(Interval),
    /// All but those strictly inside this gap: the denominator may be 0, and the ratio as large as you like in either direction.
    AllBut(Interval),
    /// All: the data say nothing about the ratio.
    All,
}

impl RatioSet {
    /// Whether the ratio 1, no difference, is left out.
    pub fn excludes_one(&self) -> bool {
        match self {
            Self::Bounded(interval) => interval.lower > 1.0 || interval.upper < 1.0,
            Self::AllBut(gap) => gap.lower < 1.0 && 1.0 < gap.upper,
            Self::All => false,
        }
    }

    /// The bounds, if the set is an interval.
    pub fn interval(&self) -> Option<Interval> {
        match self {
            Self::Bounded(interval) => Some(*interval),
            Self::AllBut(_) | Self::All => None,
        }
    }
}

/// The mean of one set of levels over that of another.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RatioOfMeans {
    pub ratio: f64,
    /// Mean of the levels with positive coefficients, weighted by these.
    pub numerator: f64,
    /// Mean of the levels with negative coefficients, weighted by their size.
    pub denominator: f64,
    pub set: RatioSet,
}

/// Why there is no ratio of means.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum NoRatio {
    #[error("the outcome's zero is a convention, so a ratio of its means has no meaning")]
    ArbitraryZero,
    #[error("the mean of level {} is {mean}; a ratio of means needs all means above 0", level + 1)]
    Mean { level: usize, mean: f64 },
    #[error("the coefficients are no difference of two means: both sides must have the same total weight")]
    NotADifference,
    #[error("the critical value {critical} is no number from 0 up")]
    Critical { critical: f64 },
    #[error("the means or their variances are too large or too small to compute with")]
    OutOfRange,
}

impl RatioOfMeans {
    /// The ratio that belongs to the contrast with these `coefficients`: the mean of the levels with positive coefficients over that of
    /// the levels with negative ones, each side weighted by its coefficients.
    ///
    /// # Errors
    /// [`NoRatio`] if the outcome's `zero` is arbitrary, a mean of `estimates` is not above 0, the coefficients are not as many as
    /// the means, not finite, or |Σc| exceeds 1e-9 Σ|c|, the critical value is not finite and at least 0, or a number is
    /// out of range.
    ///
    /// # Accuracy
    /// Bounds to 1e-12 of 1 or of themselves, whichever is larger, checked in `tests/reference/ratio.rs`.
    ///
    /// # Source
    /// \[1\].
    ///
    /// # Example
    /// ```
    /// # use levelwise::methods::effect_size::ratio::{RatioOfMeans, Reach, Zero};
    /// # use levelwise::study::{Estimates, Sample, Variances};
    /// let sample = Sample { origin: 0.0, groups: vec![vec![9.0, 10.0, 11.0], vec![19.0, 20.0, 21.0]] };
    /// let labels = ["a".to_string(), "b".to_string()];
    /// let estimates = Estimates::one_way(&labels, &sample.summary(), Variances::Equal).unwrap();
    /// let found = RatioOfMeans::of(&estimates, &[-1.0, 1.0], Reach::Both(2.776), Zero::Natural)?;
    /// assert_eq!(found.ratio, 2.0);
    /// let interval = found.set.interval().unwrap();
    /// assert!(1.5 < interval.lower && interval.lower < 2.0 && 2.0 < interval.upper && interval.upper < 2.7);
    /// # Ok::<(), levelwise::methods::effect_size::ratio::NoRatio>(())
    /// ```
    pub fn of(
        estimates: &Estimates,
        coefficients: &[f64],
        reach: Reach,
        zero: Zero,
    ) -> Result<Self, NoRatio> {
        if zero == Zero::Arbitrary {
            return Err(NoRatio::ArbitraryZero);
        }
        let critical = reach.critical();
        if !(critical >= 0.0 && critical.is_finite()) {
            return Err(NoRatio::Critical { critical });
        }
        for (level, mean) in estimates.means.iter().map(|mean| estimates.origin + mean).enumerate() {
            if mean.is_nan() || mean <= 0.0 {
                return Err(NoRatio::Mean { level, mean });
            }
        }
        let weight = total_weight(coefficients, estimates.means.len())?;
        let terms = Terms::of(estimates, coefficients, weight, critical)?;
        let (numerator, denominator) = (terms.denominator * (1.0 + terms.phi), terms.denominator);
        Ok(Self { ratio: 1.0 + terms.phi, numerator, denominator, set: terms.set(reach) })
    }
}

/// Σ of the positive coefficients, where the negative ones weigh the same.
fn total_weight(coefficients: &[f64], levels: usize) -> Result<f64, NoRatio> {
    let size = sum(coefficients.iter().map(|c| c.abs()));
    let total = sum(coefficients.iter().copied());
    let usable = size > 0.0 && size.is_finite() && total.abs() <= 1e-9 * size;
    if coefficients.len() == levels && usable { Ok(size / 2.0) } else { Err(NoRatio::NotADifference) }
}

/// The terms of the quadratic inequality, everything in units of b: A, B, C and B² - AC over b².
struct Terms {
    denominator: f64,
    /// d/b.
    phi: f64,
    square: f64,
    linear: f64,
    constant: f64,
    discriminant: f64,
}

impl Terms {
    fn of(estimates: &Estimates, coefficients: &[f64], weight: f64, critical: f64) -> Result<Self, NoRatio> {
        let below: Vec<f64> = coefficients.iter().map(|c| (-c).max(0.0) / weight).collect();
        let denominator =
            estimates.origin + sum(below.iter().zip(&estimates.means).map(|(c, mean)| c * mean));
        let row = estimates.contrast(coefficients);
        let unit = weight * denominator;
        let phi = row.estimate / unit;
        let v_dd = (row.se / unit) * (row.se / unit);
        let v_bb = estimates.covariance_of(&below, &below) / denominator / denominator;
        let v_db = estimates.covariance_of(coefficients, &below) / unit / denominator;
        let reach = critical * v_bb.sqrt();
        let c2 = critical * critical;
        let spread = v_dd - 2.0 * phi * v_db + phi * phi * v_bb;
        let terms = Self {
            denominator,
            phi,
            square: (1.0 - reach) * (1.0 + reach),
            linear: phi - c2 * v_db,
            // The row's interval, bound times bound: its sign is the row's own decision.
            constant: ((row.estimate - critical * row.se) / unit)
                * ((row.estimate + critical * row.se) / unit),
            discriminant: c2 * (spread - c2 * (v_dd * v_bb - v_db * v_db)),
        };
        let all = [denominator, phi, terms.square, terms.linear, terms.constant, terms.discriminant];
        let usable = all.iter().all(|term| term.is_finite()) && denominator > 0.0;
        if usable { Ok(terms) } else { Err(NoRatio::OutOfRange) }
    }

    fn set(&self, reach: Reach) -> RatioSet {
        let bounded = self.square > 0.0;
        if !bounded && self.discriminant < 0.0 {
            return RatioSet::All;
        }
        let (low, high) = self.roots();
        if bounded {
            // An interval contains its estimate; rounding may miss it where the critical value is 0.
            let lower = 1.0 + low.min(self.phi);
            let upper = 1.0 + high.max(self.phi);
            return RatioSet::Bounded(match reach {
                Reach::Both(_) => Interval { lower, upper },
                Reach::LowerBound(_) => Interval { lower, upper: f64::INFINITY },
                Reach::UpperBound(_) => Interval { lower: f64::NEG_INFINITY, upper },
            });
        }
        // The gap lies on one side of the estimate: the tests that it stands for reject towards that side alone.
        let gap = RatioSet::AllBut(Interval { lower: 1.0 + low, upper: 1.0 + high });
        match reach {
            Reach::LowerBound(_) if low >= self.phi => RatioSet::All,
            Reach::UpperBound(_) if high <= self.phi => RatioSet::All,
            _ => gap,
        }
    }

    /// Both roots, without subtracting nearly equal numbers. With A = 0 one of them is infinite.
    fn roots(&self) -> (f64, f64) {
        let root = self.discriminant.max(0.0).sqrt();
        let far = if self.linear < 0.0 { self.linear - root } else { self.linear + root };
        let one = if far == 0.0 { 0.0 } else { self.constant / far };
        let other = match (self.square, far) {
            (_, 0.0) => 0.0,
            (0.0, far) => -f64::INFINITY.copysign(far),
            (square, far) => far / square,
        };
        (one.min(other), one.max(other))
    }
}
