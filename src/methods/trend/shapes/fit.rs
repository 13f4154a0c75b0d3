//! Least-squares fits of dose-response shapes, from the groups' sizes, means and variation.
//!
//! The curve is e0 + e1 g(x; θ) (the quadratic e0 + b1 x + b2 x²). Σ (y - f)² = SS within + Σ n (m - f)², so that means and sizes
//! decide the curve and the variation inside the groups only its precision. e0 and e1 follow exactly for given θ; θ is looked
//! for inside bounds (`search`). Covariance of the estimates: s² (J'J)⁻¹, J the derivatives of the curve at each observation, s² the
//! residual sum of squares over N less the number of parameters. One variance for all observations is assumed.
//!
//! Lack of fit: F = [Σ n (m - f)² / (k - p)] / [SS within / (N - k)], exact for the shapes that are linear in their
//! parameters, approximate for the others.
//!
//! The offset of the log-linear and the threshold of the step are not fitted: they stay as guessed.
//!
//! Accuracy: estimates to about 1e-9 of their standard errors, the covariance to about 1e-8 of itself, where the Jacobian's columns
//! keep more than 1e-4 of their length beside one another.
//!
//! # References
//! 1. Pinheiro, Bornkamp and Bretz (2006), J. Biopharm. Statist. 16, 639-656, doi 10.1080/10543400600860428.
//! 2. Bates and Watts (1988), Nonlinear Regression Analysis and Its Applications, sections 2.2 and 3.5.2.

use super::least_squares::Orthogonal;
use super::search::Search;
use super::shape::{Doses, NoDoses, NoShape, Shape};
use crate::methods::departure::Departure;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::fisher_f;
use crate::numerics::sums::sum;
use crate::study::Summary;

/// Less than this of a column of the Jacobian beside the others makes it singular: fewer than six digits of the covariance
/// would be left.
const LEAST_LEFT: f64 = 1e-10;

/// The means of the groups over their doses, with the variation inside the groups: all that a fit needs.
#[derive(Debug, Clone, PartialEq)]
pub struct DoseResponse {
    pub(super) doses: Doses,
    /// Observations at each dose.
    pub(super) n: Vec<f64>,
    /// As offsets from `origin`.
    means: Vec<f64>,
    origin: f64,
    ss_within: f64,
}

/// One estimate of a fit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Parameter {
    /// "e0", then "slope", "rise", "emax" or "e1", then e50, delta or h as in [`Shape`]; of the quadratic "e0", "b1", "b2".
    pub name: &'static str,
    /// "e0" is an offset from the fit's origin.
    pub value: f64,
    pub se: f64,
}

/// A curve: a shape with its height and level.
#[derive(Debug, Clone, PartialEq)]
pub struct Curve {
    /// With its fitted parameters.
    pub shape: Shape,
    /// e0 and e1; e0, b1 and b2.
    pub coefficients: Vec<f64>,
}

/// A fitted shape.
#[derive(Debug, Clone, PartialEq)]
pub struct ShapeFit {
    pub curve: Curve,
    pub parameters: Vec<Parameter>,
    /// Of the parameters, in their order.
    pub covariance: Vec<Vec<f64>>,
    /// The curve's values are offsets from this number.
    pub origin: f64,
    /// Σ (y - f)².
    pub residual_ss: f64,
    /// Observations less parameters.
    pub df: f64,
    /// `residual_ss` / `df`.
    pub variance: f64,
    /// Whether the means depart from the curve; none if it has as many parameters as there are doses, or no group varies.
    pub lack_of_fit: Option<Departure>,
    /// The range of the doses: the curve is not known beyond.
    pub lowest: f64,
    pub highest: f64,
}

/// Why data give no fits at all.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoDoseResponse {
    #[error("{0}")]
    Doses(#[from] NoDoses),
    #[error("dose {dose} has no observation")]
    EmptyDose { dose: f64 },
    #[error(
        "the values are beyond the range of numbers that can be squared; give the outcome in another unit"
    )]
    OutOfRange,
}

/// Why a shape is not fitted.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoFit {
    #[error("{0}")]
    Shape(#[from] NoShape),
    #[error("the {shape} shape has {parameters} parameters and needs as many doses, but there are {doses}")]
    TooFewDoses { shape: &'static str, parameters: usize, doses: usize },
    #[error(
        "the {shape} shape has {parameters} parameters and needs more observations than that, but there are {observations}"
    )]
    TooFewObservations { shape: &'static str, parameters: usize, observations: usize },
    #[error("all means are equal, so that the {shape} shape has nothing to follow")]
    Flat { shape: &'static str },
    #[error(
        "the {shape} shape fits the better the {direction} its {parameter} is: the search ended at its bound, {bound}, where the data do not tell curves apart"
    )]
    AtBound { shape: &'static str, parameter: &'static str, direction: &'static str, bound: f64 },
    #[error("the data do not determine all parameters of the {shape} shape: several curves fit as well")]
    Singular { shape: &'static str },
    #[error("the fit of the {shape} shape is beyond the range of numbers")]
    NotFinite { shape: &'static str },
    #[error("{0}")]
    OutOfDomain(#[from] OutOfDomain),
}

impl Curve {
    /// The curve at dose `x`, as an offset from the fit's origin.
    pub fn at(&self, x: f64) -> f64 {
        self.coefficients[0] + self.effect(x)
    }

    /// The curve at dose `x` less e0.
    fn effect(&self, x: f64) -> f64 {
        match self.coefficients[..] {
            [_, b1, b2] => x * (b1 + x * b2),
            _ => self.coefficients[1] * self.shape.at(x),
        }
    }

    /// How much the curve is above itself at the dose `from`.
    pub fn above(&self, x: f64, from: f64) -> f64 {
        match self.coefficients[..] {
            [_, b1, b2] => (x - from) * (b1 + (x + from) * b2),
            _ => self.coefficients[1] * (self.shape.at(x) - self.shape.at(from)),
        }
    }

    /// Its derivative by the dose.
    pub fn slope(&self, x: f64) -> f64 {
        match self.coefficients[..] {
            [_, b1, b2] => b1 + 2.0 * b2 * x,
            _ => self.coefficients[1] * self.shape.slope(x),
        }
    }

    /// Its derivatives by all parameters, in their order.
    pub fn gradient(&self, x: f64) -> Vec<f64> {
        let mut gradient = columns(&self.shape, x);
        let height = self.coefficients[1];
        gradient.extend(self.shape.gradient(x).into_iter().map(|derivative| height * derivative));
        gradient
    }
}

/// The values at dose `x` that the linear parameters multiply.
fn columns(shape: &Shape, x: f64) -> Vec<f64> {
    match shape {
        Shape::Quadratic { .. } => vec![1.0, x, x * x],
        _ => vec![1.0, shape.at(x)],
    }
}

fn names(shape: &Shape) -> &'static [&'static str] {
    match shape {
        Shape::Linear | Shape::LogLinear { .. } => &["e0", "slope"],
        Shape::Emax { .. } => &["e0", "emax", "e50"],
        Shape::Exponential { .. } => &["e0", "e1", "delta"],
        Shape::Quadratic { .. } => &["e0", "b1", "b2"],
        Shape::SigmoidEmax { .. } => &["e0", "emax", "e50", "h"],
        Shape::Logistic { .. } => &["e0", "emax", "e50", "delta"],
        Shape::Step { .. } => &["e0", "rise"],
    }
}

impl ShapeFit {
    /// Standard error of the curve's height at dose `x`, by the delta method.
    pub fn se_at(&self, x: f64) -> f64 {
        self.se_of(&self.curve.gradient(x))
    }

    /// Standard error of a function of the parameters with this gradient.
    pub fn se_of(&self, gradient: &[f64]) -> f64 {
        let rows = self.covariance.iter().zip(gradient);
        let variance = sum(rows.map(|(row, a)| a * sum(row.iter().zip(gradient).map(|(c, b)| c * b))));
        variance.max(0.0).sqrt()
    }

    /// The dose at which a quadratic turns, if that is inside the range of the doses. Without one it is no umbrella there.
    pub fn turn(&self) -> Option<f64> {
        let [_, b1, b2] = self.curve.coefficients[..] else { return None };
        let turn = -b1 / (2.0 * b2);
        (turn > self.lowest && turn < self.highest).then_some(turn)
    }
}

impl DoseResponse {
    /// The groups in `summary` over their doses.
    ///
    /// # Errors
    /// [`NoDoseResponse`] for doses that do not fit the groups or rise, a group without observations, or extreme values.
    pub fn new(doses: &[f64], summary: &Summary) -> Result<Self, NoDoseResponse> {
        let doses = Doses::new(doses, summary.groups.len())?;
        if let Some(empty) = summary.groups.iter().position(|group| group.n == 0) {
            return Err(NoDoseResponse::EmptyDose { dose: doses.values()[empty] });
        }
        let n: Vec<f64> = summary.groups.iter().map(|group| group.n as f64).collect();
        let means: Vec<f64> = summary.groups.iter().map(|group| group.mean).collect();
        let ss_within = summary.pooled().map_or(0.0, |pooled| pooled.ss);
        let squares = sum(means.iter().zip(&n).map(|(m, n)| n * m * m));
        if !((squares + ss_within).is_finite() && ss_within >= 0.0) {
            return Err(NoDoseResponse::OutOfRange);
        }
        Ok(Self { doses, n, means, origin: summary.origin, ss_within })
    }

    pub fn doses(&self) -> &Doses {
        &self.doses
    }

    /// The least-squares fit of `shape`. Its guesses are not where the search begins: it looks everywhere inside its bounds.
    ///
    /// # Errors
    /// [`NoFit`] if the shape does not suit the doses, there are too few doses or observations, the means are all equal (for a
    /// shape with nonlinear parameters), a parameter ends at its bound, or the parameters cannot be told apart.
    pub fn fit(&self, shape: &Shape) -> Result<ShapeFit, NoFit> {
        self.check(shape)?;
        let search = Search::new(shape, &self.doses, &self.n);
        let minimum = search.minimum(&self.means);
        if let Some((place, upper)) = minimum.at_bound {
            let (low, high) = search.bounds(place);
            let linear = names(shape).len() - minimum.shape.gradient(1.0).len();
            return Err(NoFit::AtBound {
                shape: shape.name(),
                parameter: names(shape)[linear + place],
                direction: if upper { "greater" } else { "smaller" },
                bound: if upper { high } else { low },
            });
        }
        let curve = self.curve(&minimum.shape, &self.means).ok_or(NoFit::Singular { shape: shape.name() })?;
        self.with_precision(curve)
    }

    fn check(&self, shape: &Shape) -> Result<(), NoFit> {
        shape.check(&self.doses)?;
        let (name, parameters) = (shape.name(), names(shape).len());
        let (doses, observations) = (self.n.len(), sum(self.n.iter().copied()) as usize);
        if doses < parameters {
            return Err(NoFit::TooFewDoses { shape: name, parameters, doses });
        }
        if observations <= parameters {
            return Err(NoFit::TooFewObservations { shape: name, parameters, observations });
        }
        let (low, high) = self
            .means
            .iter()
            .fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), m| (low.min(*m), high.max(*m)));
        let rounding = 4.0 * f64::EPSILON * low.abs().max(high.abs());
        if high - low <= rounding && !shape.gradient(self.doses.highest()).is_empty() {
            return Err(NoFit::Flat { shape: name });
        }
        Ok(())
    }

    /// The best curve of exactly this shape for these means, `None` if its columns cannot be told apart.
    pub(super) fn curve(&self, shape: &Shape, means: &[f64]) -> Option<Curve> {
        let rows: Vec<Vec<f64>> = self.doses.values().iter().map(|x| columns(shape, *x)).collect();
        let basis = Orthogonal::of(&transposed(&rows), &self.n, LEAST_LEFT)?;
        let coefficients = basis.coefficients(&basis.project(means).0);
        let shape = match (shape, &coefficients[..]) {
            (Shape::Quadratic { .. }, [_, b1, b2]) if *b2 != 0.0 => {
                Shape::Quadratic { peak: -b1 / (2.0 * b2) }
            }
            _ => *shape,
        };
        coefficients.iter().all(|c| c.is_finite()).then_some(Curve { shape, coefficients })
    }

    /// The curve with its standard errors and what it leaves.
    fn with_precision(&self, curve: Curve) -> Result<ShapeFit, NoFit> {
        let shape = curve.shape.name();
        let rows: Vec<Vec<f64>> = self.doses.values().iter().map(|x| curve.gradient(*x)).collect();
        let jacobian = Orthogonal::of(&transposed(&rows), &self.n, LEAST_LEFT);
        let inverse = jacobian.ok_or(NoFit::Singular { shape })?.inverse();
        let names = names(&curve.shape);
        let (k, p, total) = (self.n.len() as f64, names.len() as f64, sum(self.n.iter().copied()));
        let left = self.doses.values().iter().zip(&self.means).map(|(x, m)| m - curve.at(*x));
        let around = sum(left.zip(&self.n).map(|(left, n)| n * left * left));
        let residual_ss = self.ss_within + around;
        let df = total - p;
        let variance = residual_ss / df;
        let covariance: Vec<Vec<f64>> =
            inverse.iter().map(|row| row.iter().map(|entry| variance * entry).collect()).collect();
        if !covariance.iter().flatten().all(|entry| entry.is_finite()) {
            return Err(NoFit::NotFinite { shape });
        }
        let (df1, df2) = (k - p, total - k);
        let f = (around / df1) / (self.ss_within / df2);
        let testable = df1 > 0.0 && df2 > 0.0 && self.ss_within > 0.0 && f.is_finite();
        let lack_of_fit = testable.then(|| fisher_f::sf(f, df1, df2).map(|p| Departure { f, df1, df2, p }));
        let nonlinear = curve.shape.guesses();
        let values = curve.coefficients.iter().copied().chain(nonlinear.iter().map(|(_, value)| *value));
        let parameter = |(i, (name, value)): (usize, (&&'static str, f64))| Parameter {
            name,
            value,
            se: covariance[i][i].sqrt(),
        };
        Ok(ShapeFit {
            parameters: names.iter().zip(values).enumerate().map(parameter).collect(),
            covariance,
            origin: self.origin,
            residual_ss,
            df,
            variance,
            lack_of_fit: lack_of_fit.transpose()?,
            lowest: self.doses.lowest(),
            highest: self.doses.highest(),
            curve,
        })
    }
}

fn transposed(rows: &[Vec<f64>]) -> Vec<Vec<f64>> {
    (0..rows[0].len()).map(|j| rows.iter().map(|row| row[j]).collect()).collect()
}
