//! Candidate shapes of a dose-response curve, each without its level and height: the curve is e0 + e1 g(x).
//!
//! | shape | g(x) | guesses | domain |
//! | --- | --- | --- | --- |
//! | linear | x | | |
//! | log-linear | ln(x + offset) | offset | x + offset > 0 |
//! | Emax | x / (e50 + x) | e50 > 0 | x >= 0 |
//! | exponential | exp(x / δ) - 1 | δ > 0 | \|x\| <= 600 δ |
//! | quadratic | -(x - peak)² | peak | lowest dose < peak <= highest |
//! | sigmoid Emax | xʰ / (e50ʰ + xʰ) | e50, h > 0 | x >= 0 |
//! | logistic | 1 / (1 + exp((e50 - x) / δ)) | e50, δ > 0 | |
//! | step | 0 below the threshold, 1 from it on | threshold | lowest dose < threshold <= highest |
//!
//! All rise, the quadratic up to its peak; a falling response has e1 < 0. The quadratic is x - x² / (2 peak) up to a factor and a
//! constant, written so that it is defined for every peak.
//!
//! Accuracy: a few units in the last place of g.
//!
//! # References
//! 1. Bretz, Pinheiro and Branson (2005), Biometrics 61, 738-748, doi 10.1111/j.1541-0420.2005.00344.x, table 1.
//! 2. Pinheiro, Bornkamp and Bretz (2006), J. Biopharm. Statist. 16, 639-656, doi 10.1080/10543400600860428.

/// Largest |x| / δ of an exponential: exp(600) squared and summed is still far inside the range of numbers for
/// the ratios that are formed, and no outcome rises by a factor of 10²⁶⁰.
const LARGEST_EXPONENT: f64 = 600.0;

/// A shape with its guesses, in the units of the dose.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Shape {
    Linear,
    LogLinear {
        offset: f64,
    },
    /// Half of the largest effect at `e50`.
    Emax {
        e50: f64,
    },
    Exponential {
        delta: f64,
    },
    /// An umbrella with its top at `peak`.
    Quadratic {
        peak: f64,
    },
    /// Half of the largest effect at `e50`, the steeper the greater `h`.
    SigmoidEmax {
        e50: f64,
        h: f64,
    },
    /// Half-way up at `e50`; `delta` is the dose over which the odds of the way up grow by a factor of e.
    Logistic {
        e50: f64,
        delta: f64,
    },
    Step {
        threshold: f64,
    },
}

/// Doses of the levels, finite and strictly increasing, at least two.
#[derive(Debug, Clone, PartialEq)]
pub struct Doses {
    values: Vec<f64>,
}

/// Why numbers are no doses.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoDoses {
    #[error("{doses} doses were given for {levels} levels; each level needs one")]
    Count { doses: usize, levels: usize },
    #[error("a curve over the doses needs at least two of them, but there are {doses}")]
    TooFew { doses: usize },
    #[error("dose {dose} is not a finite number")]
    NotFinite { dose: f64 },
    #[error("the doses must be strictly increasing, but {after} follows {before}")]
    NotIncreasing { before: f64, after: f64 },
    #[error("the doses from {lowest} to {highest} span more than the range of numbers")]
    TooWide { lowest: f64, highest: f64 },
}

impl Doses {
    /// The doses of `levels` levels.
    ///
    /// # Errors
    /// [`NoDoses`] if there is not one for each level, there are fewer than two, one is not finite, or they do not rise.
    pub fn new(values: &[f64], levels: usize) -> Result<Self, NoDoses> {
        if values.len() != levels {
            return Err(NoDoses::Count { doses: values.len(), levels });
        }
        if levels < 2 {
            return Err(NoDoses::TooFew { doses: levels });
        }
        if let Some(&dose) = values.iter().find(|dose| !dose.is_finite()) {
            return Err(NoDoses::NotFinite { dose });
        }
        if let Some(pair) = values.windows(2).find(|pair| pair[0] >= pair[1]) {
            return Err(NoDoses::NotIncreasing { before: pair[0], after: pair[1] });
        }
        let (lowest, highest) = (values[0], values[levels - 1]);
        if !(highest - lowest).is_finite() {
            return Err(NoDoses::TooWide { lowest, highest });
        }
        Ok(Self { values: values.to_vec() })
    }

    pub fn values(&self) -> &[f64] {
        &self.values
    }

    /// The lowest dose: zero, or that of the control.
    pub fn lowest(&self) -> f64 {
        self.values[0]
    }

    pub fn highest(&self) -> f64 {
        self.values[self.values.len() - 1]
    }
}

/// Why a shape cannot be used with these doses.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoShape {
    #[error("the guess {guess} of the {shape} shape is {value}, but must be {allowed}")]
    Guess { shape: &'static str, guess: &'static str, value: f64, allowed: String },
    #[error("the {shape} shape is defined for doses from 0 on, but a dose is {dose}")]
    NegativeDose { shape: &'static str, dose: f64 },
    #[error("with these guesses the {shape} shape is the same at all doses, so that no contrast shows it")]
    Flat { shape: &'static str },
}

impl Shape {
    /// "linear", "log-linear", "Emax", "exponential", "quadratic", "sigmoid Emax", "logistic" or "step".
    pub fn name(&self) -> &'static str {
        match self {
            Self::Linear => "linear",
            Self::LogLinear { .. } => "log-linear",
            Self::Emax { .. } => "Emax",
            Self::Exponential { .. } => "exponential",
            Self::Quadratic { .. } => "quadratic",
            Self::SigmoidEmax { .. } => "sigmoid Emax",
            Self::Logistic { .. } => "logistic",
            Self::Step { .. } => "step",
        }
    }

    /// The names of the guesses with their values.
    pub fn guesses(&self) -> Vec<(&'static str, f64)> {
        match *self {
            Self::Linear => vec![],
            Self::LogLinear { offset } => vec![("offset", offset)],
            Self::Emax { e50 } => vec![("e50", e50)],
            Self::Exponential { delta } => vec![("delta", delta)],
            Self::Quadratic { peak } => vec![("peak", peak)],
            Self::SigmoidEmax { e50, h } => vec![("e50", e50), ("h", h)],
            Self::Logistic { e50, delta } => vec![("e50", e50), ("delta", delta)],
            Self::Step { threshold } => vec![("threshold", threshold)],
        }
    }

    /// g(`x`) of the table above, for an x in the shape's domain.
    pub fn at(&self, x: f64) -> f64 {
        match *self {
            Self::Linear => x,
            Self::LogLinear { offset } => libm::log(x + offset),
            Self::Emax { e50 } => x / (e50 + x),
            Self::Exponential { delta } => libm::expm1(x / delta),
            Self::Quadratic { peak } => -(x - peak) * (x - peak),
            Self::SigmoidEmax { e50, h } => of_odds(log_ratio(x, e50) * h),
            Self::Logistic { e50, delta } => of_odds((x - e50) / delta),
            Self::Step { threshold } => f64::from(x >= threshold),
        }
    }

    /// dg/dx at an `x` in the shape's domain; 0 for a step. Above 0 for the sigmoid Emax.
    pub fn slope(&self, x: f64) -> f64 {
        match *self {
            Self::Linear => 1.0,
            Self::LogLinear { offset } => 1.0 / (x + offset),
            Self::Emax { e50 } => e50 / (e50 + x) / (e50 + x),
            Self::Exponential { delta } => libm::exp(x / delta) / delta,
            Self::Quadratic { peak } => -2.0 * (x - peak),
            Self::SigmoidEmax { e50, h } => bell(log_ratio(x, e50) * h) * h / x,
            Self::Logistic { e50, delta } => bell((x - e50) / delta) / delta,
            Self::Step { .. } => 0.0,
        }
    }

    /// Derivatives of g(`x`) with respect to the parameters that a fit looks for: e50; δ; e50 and h; e50 and δ. The others have
    /// none: offset and threshold stay as they are, and the peak follows from the parabola's coefficients.
    pub fn gradient(&self, x: f64) -> Vec<f64> {
        match *self {
            Self::Emax { e50 } => vec![-x / (e50 + x) / (e50 + x)],
            Self::Exponential { delta } => vec![-x / delta * libm::exp(x / delta) / delta],
            Self::SigmoidEmax { e50, h } => {
                let log_ratio = log_ratio(x, e50);
                let bell = bell(log_ratio * h);
                // At dose 0 the bell is 0 and the logarithm infinite: the limit of their product is 0.
                vec![-bell * h / e50, if bell == 0.0 { 0.0 } else { bell * log_ratio }]
            }
            Self::Logistic { e50, delta } => {
                let z = (x - e50) / delta;
                vec![-bell(z) / delta, -bell(z) * z / delta]
            }
            _ => vec![],
        }
    }

    /// The same shape with other values of the parameters that a fit looks for, in the order of [`Self::gradient`].
    pub(super) fn with(&self, parameters: &[f64]) -> Self {
        match (self, parameters) {
            (Self::Emax { .. }, &[e50]) => Self::Emax { e50 },
            (Self::Exponential { .. }, &[delta]) => Self::Exponential { delta },
            (Self::SigmoidEmax { .. }, &[e50, h]) => Self::SigmoidEmax { e50, h },
            (Self::Logistic { .. }, &[e50, delta]) => Self::Logistic { e50, delta },
            _ => *self,
        }
    }

    /// Whether the shape can be used with these doses.
    ///
    /// # Errors
    /// [`NoShape`] with the guess, its value and what is allowed; for a negative dose under Emax shapes; and where the guesses
    /// make the shape the same at all doses.
    pub fn check(&self, doses: &Doses) -> Result<(), NoShape> {
        for (guess, value) in self.guesses() {
            if let Some(allowed) = self.refuses(guess, value, doses) {
                return Err(NoShape::Guess { shape: self.name(), guess, value, allowed });
            }
        }
        if matches!(self, Self::Emax { .. } | Self::SigmoidEmax { .. }) && doses.lowest() < 0.0 {
            return Err(NoShape::NegativeDose { shape: self.name(), dose: doses.lowest() });
        }
        self.over(doses).map(|_| ())
    }

    /// g at the doses, moved to 0 at the lowest dose and scaled to a largest modulus of 1.
    pub(super) fn over(&self, doses: &Doses) -> Result<Vec<f64>, NoShape> {
        let values: Vec<f64> = doses.values().iter().map(|x| self.at(*x)).collect();
        let moved: Vec<f64> = values.iter().map(|value| value - values[0]).collect();
        let largest = |of: &[f64]| of.iter().fold(0.0_f64, |most, value| most.max(value.abs()));
        let (range, size) = (largest(&moved), largest(&values));
        // Differences within the rounding of the values are no shape.
        if !(range > 1e-13 * size && range.is_finite()) {
            return Err(NoShape::Flat { shape: self.name() });
        }
        Ok(moved.into_iter().map(|value| value / range).collect())
    }

    /// What is allowed instead of this value of a guess, if it is refused.
    fn refuses(&self, guess: &str, value: f64, doses: &Doses) -> Option<String> {
        let (lowest, highest) = (doses.lowest(), doses.highest());
        let (fine, allowed) = match (self, guess) {
            (Self::LogLinear { .. }, _) => {
                // The offset that brings the lowest dose to 0; adding 0 keeps it from being written as -0.
                (lowest + value > 0.0, format!("greater than {}", 0.0 - lowest))
            }
            (Self::Exponential { .. }, _) => {
                let least = lowest.abs().max(highest.abs()) / LARGEST_EXPONENT;
                (value > 0.0 && value >= least, format!("greater than 0 and at least {least}"))
            }
            (Self::Quadratic { .. } | Self::Step { .. }, _) => (
                value > lowest && value <= highest,
                format!("greater than the lowest dose, {lowest}, and at most the highest, {highest}"),
            ),
            (Self::Logistic { .. }, "e50") => (true, String::new()),
            _ => (value > 0.0, "greater than 0".to_string()),
        };
        let allowed = if allowed.is_empty() { "a finite number".to_string() } else { allowed };
        (!(fine && value.is_finite())).then_some(allowed)
    }
}

/// ln(x / e50), -∞ at dose 0.
fn log_ratio(x: f64, e50: f64) -> f64 {
    libm::log(x / e50)
}

/// 1 / (1 + exp(-z)).
fn of_odds(z: f64) -> f64 {
    1.0 / (1.0 + libm::exp(-z))
}

/// g (1 - g) of g = 1 / (1 + exp(-z)), without subtraction.
fn bell(z: f64) -> f64 {
    of_odds(z) * of_odds(-z)
}

#[cfg(test)]
mod tests {
    use super::*;

    const ALL: [Shape; 8] = [
        Shape::Linear,
        Shape::LogLinear { offset: 0.5 },
        Shape::Emax { e50: 2.0 },
        Shape::Exponential { delta: 3.0 },
        Shape::Quadratic { peak: 6.0 },
        Shape::SigmoidEmax { e50: 3.0, h: 2.5 },
        Shape::Logistic { e50: 4.0, delta: 1.5 },
        Shape::Step { threshold: 2.0 },
    ];

    #[test]
    fn slopes_and_gradients_are_the_derivatives() {
        let close = |one: f64, other: f64| assert!((one - other).abs() <= 1e-8 * (1.0 + other.abs()));
        for shape in ALL {
            for x in [0.5, 1.5, 4.0, 9.0] {
                let h = 1e-5;
                close(shape.slope(x), (shape.at(x + h) - shape.at(x - h)) / (2.0 * h));
                let sought: Vec<f64> = shape.guesses().iter().map(|(_, value)| *value).collect();
                for (i, derivative) in shape.gradient(x).into_iter().enumerate() {
                    let moved = |by: f64| {
                        let mut parameters = sought.clone();
                        parameters[i] += by;
                        shape.with(&parameters).at(x)
                    };
                    close(derivative, (moved(h) - moved(-h)) / (2.0 * h));
                }
            }
            let at_zero = shape.gradient(0.0);
            assert!(at_zero.iter().all(|derivative| derivative.is_finite()), "{shape:?} {at_zero:?}");
        }
    }
}
