//! The dose with a target effect, read from a fitted curve: the smallest dose d with f(d) - f(lowest dose) = Δ.
//!
//! Every shape has d in closed form. Its standard error is the delta method's: with F(d, β) = f(d) - f(lowest) - Δ the implicit
//! derivative is dd/dβ = -(∂F/∂β) / f'(d), and se² = (dd/dβ)' C (dd/dβ), C the covariance of the estimates. The interval is d ± t se
//! with the fit's degrees of freedom; it is symmetric and may reach beyond the doses, which says that the data do not
//! confine the dose. The threshold of a step is a guess and has no standard error.
//!
//! # References
//! 1. Pinheiro, Bornkamp and Bretz (2006), J. Biopharm. Statist. 16, 639-656, doi 10.1080/10543400600860428, section 4.
//! 2. Bretz, Pinheiro and Branson (2005), Biometrics 61, 738-748, doi 10.1111/j.1541-0420.2005.00344.x, section 4.

use super::fit::{Curve, ShapeFit};
use super::shape::Shape;
use crate::methods::multiplicity::Bounds;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::student_t;

/// The dose with a target effect.
#[derive(Debug, Clone, PartialEq)]
pub struct TargetDose {
    /// The effect Δ over the lowest dose, below 0 for a fall.
    pub target: f64,
    /// Between the lowest and the highest dose; `None` if the curve does not reach the target there.
    pub dose: Option<f64>,
    /// `None` where there is no dose, for a step, and where the curve is level at the dose.
    pub se: Option<f64>,
    /// d ± t se.
    pub interval: Option<Bounds>,
    /// The effect nearest to the target or farthest beyond it that the curve reaches inside the range of the doses.
    pub farthest: f64,
}

/// The smallest dose at which `fit` is `target` above the lowest dose (below it, for a negative target), with its
/// interval at this `confidence`, between 0 and 1.
///
/// # Errors
/// [`OutOfDomain`] if the target is 0 or not finite, or the confidence is not between 0 and 1.
///
/// # Accuracy
/// About 1e-13 of the dose, given the parameters, where the curve is not nearly level.
pub fn target_dose(fit: &ShapeFit, target: f64, confidence: f64) -> Result<TargetDose, OutOfDomain> {
    check_target(target)?;
    if !(confidence > 0.0 && confidence < 1.0) {
        let allowed = "greater than 0 and less than 1";
        return Err(OutOfDomain { argument: "confidence", value: confidence, allowed });
    }
    let dose = dose_of(&fit.curve, target, fit.lowest, fit.highest);
    let se = dose.and_then(|dose| se(fit, dose));
    let critical = student_t::upper_quantile(0.5 * (1.0 - confidence), fit.df)?;
    let interval =
        dose.zip(se).map(|(dose, se)| Bounds { lower: dose - critical * se, upper: dose + critical * se });
    Ok(TargetDose { target, dose, se, interval, farthest: farthest(fit, target) })
}

pub(super) fn check_target(target: f64) -> Result<(), OutOfDomain> {
    if target == 0.0 || !target.is_finite() {
        let allowed = "a finite number other than 0";
        return Err(OutOfDomain { argument: "target effect", value: target, allowed });
    }
    Ok(())
}

/// The smallest dose above `lowest` and up to `highest` with the effect `target` over `lowest`.
pub(super) fn dose_of(curve: &Curve, target: f64, lowest: f64, highest: f64) -> Option<f64> {
    let dose = match curve.coefficients[..] {
        [_, b1, b2] => lowest + of_parabola(b1 + 2.0 * b2 * lowest, b2, target)?,
        _ => {
            // g has to rise by this much.
            let rise = target / curve.coefficients[1];
            if rise.is_nan() || rise <= 0.0 {
                return None;
            }
            inverse(&curve.shape, curve.shape.at(lowest), rise)?
        }
    };
    (dose > lowest && dose <= highest).then_some(dose)
}

/// The smallest u > 0 with b u + c u² = `target`, by the form of the root that does not cancel.
fn of_parabola(b: f64, c: f64, target: f64) -> Option<f64> {
    let discriminant = b * b + 4.0 * c * target;
    if discriminant.is_nan() || discriminant < 0.0 {
        return None;
    }
    let q = b + libm::copysign(discriminant.sqrt(), b);
    let roots = [2.0 * target / q, -q / (2.0 * c)];
    roots.into_iter().filter(|u| *u > 0.0 && u.is_finite()).min_by(f64::total_cmp)
}

/// The x with g(x) = `from` + `rise`, from = g(lowest dose).
fn inverse(shape: &Shape, from: f64, rise: f64) -> Option<f64> {
    let to = from + rise;
    // The odds of the way up, where it has an end.
    let odds = || (to > 0.0 && to < 1.0).then(|| to / (1.0 - to));
    Some(match *shape {
        Shape::Linear => to,
        Shape::LogLinear { offset } => libm::exp(to) - offset,
        Shape::Emax { e50 } => e50 * odds()?,
        Shape::Exponential { delta } => delta * libm::log1p(to),
        Shape::SigmoidEmax { e50, h } => e50 * libm::pow(odds()?, 1.0 / h),
        Shape::Logistic { e50, delta } => e50 + delta * libm::log(odds()?),
        Shape::Step { threshold } => return (rise <= 1.0).then_some(threshold),
        // Parabolas have their own way.
        Shape::Quadratic { .. } => return None,
    })
}

fn se(fit: &ShapeFit, dose: f64) -> Option<f64> {
    let (here, there) = (fit.curve.gradient(dose), fit.curve.gradient(fit.lowest));
    let slope = fit.curve.slope(dose);
    let gradient: Vec<f64> = here.iter().zip(&there).map(|(here, there)| (there - here) / slope).collect();
    let se = fit.se_of(&gradient);
    (slope != 0.0 && se.is_finite()).then_some(se)
}

/// The extreme of the effect in the direction of the target: at an end of the range or where a parabola turns.
fn farthest(fit: &ShapeFit, target: f64) -> f64 {
    let places = [Some(fit.highest), fit.turn()];
    let effects = places.into_iter().flatten().map(|x| fit.curve.above(x, fit.lowest));
    effects.fold(0.0, |most: f64, effect| if target > 0.0 { most.max(effect) } else { most.min(effect) })
}
