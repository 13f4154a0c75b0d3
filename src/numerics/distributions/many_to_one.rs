//! Comparisons of several groups with one control: the largest of Tᵢ = (λᵢ Z₀ + √(1-λᵢ²) Zᵢ)/S (or of |Tᵢ|), where the Z are
//! independent standard normal, df·S² is chi-squared with df degrees of freedom, and the loadings
//! λᵢ = √(nᵢ/(nᵢ + n₀)) give the correlations λᵢλⱼ of the differences.
//!
//! Given Z₀ = z and S = s the Tᵢ are independent, so P(max > d) = ∫ h(s) ∫ φ(z) U(z, d s) dz ds with
//! U = 1 - Π(1 - Bᵢ) and Bᵢ the chance that comparison i alone exceeds. U is built up as U + B(1-U), a sum of positive
//! terms, so the upper tail keeps its relative accuracy. Both integrals are trapezoidal sums.
//!
//! Domain: 1 to 1000 comparisons, loadings strictly between -1 and 1, any positive df or infinity.
//!
//! # References
//! 1. Dunnett (1955), J. Amer. Statist. Assoc. 50, 1096-1121; Dunnett (1989), Applied Statistics 38, 564-579.
//! 2. Trefethen and Weideman (2014), SIAM Review 56, 385-458 (the quadrature).

use super::{
    degrees_of_freedom, finite, normal, probability,
    scale_mixture::{self, FAR, Tail},
    student_t,
};
use crate::numerics::{OutOfDomain, quadrature, roots};
use std::f64::consts::{FRAC_1_SQRT_2, PI};

/// Step of the trapezoidal rule for a bell curve of standard deviation 1. Its error is 2 exp(-2π²/0.5²) = 1e-34, with something
/// left for curves whose flanks are steeper than their peaks: at most 1.6 times, Φ(x)ⁿ with its peak at x = 0, say.
const BELL_STEP: f64 = 0.5;
/// Largest loading in size: a group a million times as large as the control.
const LARGEST_LOADING: f64 = 0.999_999_5;

/// Which deviations from the control count.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Sides {
    /// Either direction: the largest |Tᵢ|.
    Both,
    /// Upwards only: the largest Tᵢ. For "less", change the signs.
    Greater,
}

/// Lower-tail probability P(max <= `d`).
///
/// # Errors
/// [`OutOfDomain`] if `d` is not finite (or negative with both sides), the loadings are none, more than 1000 or not
/// strictly between -1 and 1 (to 5e-7), or `df` is not positive.
///
/// # Accuracy
/// For 1 to 50 comparisons, loadings up to 0.999 in size and df from 0.5: absolute error at most 1e-12; relative error at
/// most 1e-11 down to 1e-14. Reached: `tests/reference/ACCURACY.md`.
pub fn cdf(d: f64, loadings: &[f64], df: f64, sides: Sides) -> Result<f64, OutOfDomain> {
    let upper = sf(d, loadings, df, sides)?;
    if upper <= 0.9 {
        return Ok(1.0 - upper);
    }
    Ok(Comparisons::new(loadings, sides)?.lower(d, degrees_of_freedom("df", df)?).value)
}

/// Upper-tail probability P(max > `d`), the adjusted p-value of a comparison with statistic `d`, for comparisons with
/// the given `loadings` √(nᵢ/(nᵢ + n₀)) and `df` degrees of freedom, which may be infinite.
///
/// # Errors
/// [`OutOfDomain`] if `d` is not finite (or negative with both sides), the loadings are none, more than 1000 or not
/// strictly between -1 and 1 (to 5e-7), or `df` is not positive.
///
/// # Accuracy
/// For 1 to 50 comparisons, loadings up to 0.999 in size and df from 0.5: absolute error at most 1e-12; relative error at
/// most 1e-11 down to 1e-14. Reached: `tests/reference/ACCURACY.md`.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::many_to_one::{self, Sides};
/// let equal = [std::f64::consts::FRAC_1_SQRT_2; 3]; // three groups as large as the control
/// let d = many_to_one::upper_quantile(0.05, &equal, 20.0, Sides::Both)?;
/// assert!((d - 2.54).abs() < 0.005); // Dunnett's table: 2.54
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn sf(d: f64, loadings: &[f64], df: f64, sides: Sides) -> Result<f64, OutOfDomain> {
    let d = finite("d", d)?;
    if sides == Sides::Both && d < 0.0 {
        return Err(OutOfDomain { argument: "d", value: d, allowed: "at least 0 when both sides count" });
    }
    let (comparisons, df) = (Comparisons::new(loadings, sides)?, degrees_of_freedom("df", df)?);
    Ok(if sides == Sides::Both && d == 0.0 { 1.0 } else { comparisons.upper(d, df).value })
}

/// The d with P(max <= d) = `p`; infinite at 1, the least possible value at 0.
///
/// # Errors
/// [`OutOfDomain`] if `p` is not from 0 to 1, or the loadings or `df` are not as for [`sf`].
///
/// # Accuracy
/// For 1 to 50 comparisons, loadings up to 0.999 in size, df from 0.5 and probabilities down to 1e-14: error at most 1e-11,
/// relative to the quantile, or to 0.1 where a one-sided one is smaller in size.
pub fn quantile(p: f64, loadings: &[f64], df: f64, sides: Sides) -> Result<f64, OutOfDomain> {
    let p = probability("p", p)?;
    solve(p, 1.0 - p, &Comparisons::new(loadings, sides)?, degrees_of_freedom("df", df)?)
}

/// The d with P(max > d) = `upper_p`: the critical value of the family; infinite at 0, the least possible value at 1.
///
/// # Errors
/// [`OutOfDomain`] if `upper_p` is not from 0 to 1, or the loadings or `df` are not as for [`sf`].
///
/// # Accuracy
/// For 1 to 50 comparisons, loadings up to 0.999 in size, df from 0.5 and probabilities down to 1e-14: error at most 1e-11,
/// relative to the quantile, or to 0.1 where a one-sided one is smaller in size.
pub fn upper_quantile(upper_p: f64, loadings: &[f64], df: f64, sides: Sides) -> Result<f64, OutOfDomain> {
    let p = probability("upper_p", upper_p)?;
    solve(1.0 - p, p, &Comparisons::new(loadings, sides)?, degrees_of_freedom("df", df)?)
}

/// The d with the given tails, found on the smaller of the two.
fn solve(lower: f64, upper: f64, comparisons: &Comparisons, df: f64) -> Result<f64, OutOfDomain> {
    let both = comparisons.sides == Sides::Both;
    if lower == 0.0 || upper == 0.0 {
        let least = if both { 0.0 } else { f64::NEG_INFINITY };
        return Ok(if lower == 0.0 { least } else { f64::INFINITY });
    }
    // Bonferroni's bound, sharp in the tail.
    let share = upper / (comparisons.count as f64 * if both { 2.0 } else { 1.0 });
    let bound = student_t::upper_quantile(share, df)?;
    // One comparison and a probability below the rounding of 1 leave nothing to start from.
    let start = match comparisons.sides {
        Sides::Both if bound == 0.0 => lower,
        Sides::Greater if bound == f64::NEG_INFINITY => student_t::quantile(lower, df)?,
        _ => bound,
    };
    let falling = upper <= 0.5;
    let target = if falling { upper } else { lower };
    let tail = |d: f64| if falling { comparisons.upper(d, df) } else { comparisons.lower(d, df) };
    Ok(if both {
        libm::exp(roots::log_tail(|log_d| tail(libm::exp(log_d)).pair(), target, falling, libm::log(start)))
    } else {
        // Heavy tails are straight in log d, the middle in d: x = arsinh d is both, with d log d / dx = coth x.
        let at = |x: f64| {
            let Tail { value, slope } = tail(libm::sinh(x));
            (value, slope / libm::tanh(x))
        };
        libm::sinh(roots::log_tail(at, target, falling, libm::asinh(start)))
    })
}

/// A family of comparisons, equal loadings taken together.
struct Comparisons {
    groups: Vec<Group>,
    count: usize,
    sides: Sides,
    /// Largest size of a loading.
    largest: f64,
    /// Step of the trapezoidal rule in z.
    step: f64,
}

/// Comparisons that share one loading.
struct Group {
    loading: f64,
    /// 1/√(1-λ²)
    inverse_rest: f64,
    count: usize,
}

impl Comparisons {
    fn new(loadings: &[f64], sides: Sides) -> Result<Comparisons, OutOfDomain> {
        if loadings.is_empty() || loadings.len() > 1000 {
            let value = loadings.len() as f64;
            return Err(OutOfDomain { argument: "number of loadings", value, allowed: "from 1 to 1000" });
        }
        if let Some(&value) =
            loadings.iter().find(|loading| loading.is_nan() || loading.abs() > LARGEST_LOADING)
        {
            return Err(OutOfDomain { argument: "loadings", value, allowed: "between -1 and 1" });
        }
        // With both sides only the size of a loading counts.
        let size = |loading: f64| if sides == Sides::Both { loading.abs() } else { loading };
        let mut sorted: Vec<f64> = loadings.iter().map(|&loading| size(loading)).collect();
        sorted.sort_by(f64::total_cmp);
        let mut groups: Vec<Group> = Vec::new();
        for loading in sorted {
            match groups.last_mut() {
                Some(group) if group.loading == loading => group.count += 1,
                _ => {
                    let inverse_rest = 1.0 / ((1.0 - loading) * (1.0 + loading)).sqrt();
                    groups.push(Group { loading, inverse_rest, count: 1 });
                }
            }
        }
        let largest = groups.iter().map(|group| group.loading.abs()).fold(0.0, f64::max);
        // The integrand is at most as narrow as φ(z/c), c² = 1 - λ², and steeper with more comparisons; found by
        // halving the step until 1e-13.
        let rest = ((1.0 - largest) * (1.0 + largest)).sqrt();
        let count = loadings.len();
        let step = rest.min(0.8) / (1.5 + 0.55 * libm::log(count as f64));
        Ok(Comparisons { groups, count, sides, largest, step })
    }

    /// P(max > d), and the derivative of its logarithm by log d.
    fn upper(&self, d: f64, df: f64) -> Tail {
        if d > FAR {
            return self.upper(FAR, df).beyond(d, df);
        }
        let pairs = libm::log(self.count as f64 * if self.sides == Sides::Both { 2.0 } else { 1.0 });
        let log_shape = |s: f64| (pairs + normal::log_lower(-d * s)).min(0.0);
        scale_mixture::tail(df, 1e-16, log_shape, |s| self.exceeds(d * s))
    }

    /// P(max <= d), and the derivative of its logarithm by log d.
    fn lower(&self, d: f64, df: f64) -> Tail {
        if d < -FAR {
            return self.lower(-FAR, df).beyond(-d, df);
        }
        // Laplace's approximation of the integral over the control.
        let log_shape = |s: f64| {
            let (_, top, curvature) = self.peak_below(d * s);
            top - 0.5 * libm::log(curvature)
        };
        scale_mixture::tail(df, 1e-16, log_shape, |s| self.stays_below(d * s))
    }

    /// P(max > w) when σ is known.
    fn exceeds(&self, w: f64) -> f64 {
        if w > 45.0 {
            return 0.0; // below 1e-400
        }
        self.over_control(w, |z| {
            let mut union = 0.0;
            for group in &self.groups {
                let alone = self.exceeds_given(group, w, z);
                let together = if group.count == 1 {
                    alone
                } else {
                    -libm::expm1(group.count as f64 * libm::log1p(-alone))
                };
                union += together * (1.0 - union);
            }
            union
        })
    }

    /// P(max <= w) when σ is known, as an integral of its own.
    ///
    /// Far down in the tail all comparisons must agree: the integrand is a bell curve, the narrower the more there are.
    fn stays_below(&self, w: f64) -> f64 {
        let (peak, top, curvature) = self.peak_below(w);
        // A peak below 1e-340, which may lie anywhere.
        if top < -800.0 {
            return 0.0;
        }
        let step = self.step.min(BELL_STEP / curvature.sqrt());
        let sum = quadrature::trapezoid_outward(peak, step, |i| {
            let z = step * f64::from(i);
            libm::exp(self.log_stays_below_given(w, z) - 0.5 * z * z)
        });
        sum / (2.0 * PI).sqrt()
    }

    /// Where the integrand of [`Self::stays_below`] has its peak, the logarithm of the peak's height but for √(2π), and minus
    /// the second derivative of that logarithm.
    fn peak_below(&self, w: f64) -> (f64, f64, f64) {
        if self.sides == Sides::Both {
            // By symmetry the peak is at 0, where log(Φ(r+x) - Φ(r-x)) has the second derivative -2rφ(r)/(2Φ(r)-1).
            let curvature = |group: &Group| {
                let (r, slope) = (w * group.inverse_rest, group.loading * group.inverse_rest);
                let share =
                    if r < 1e-3 { 1.0 } else { 2.0 * r * normal::density(r) / libm::erf(r * FRAC_1_SQRT_2) };
                group.count as f64 * slope * slope * share
            };
            let top = self.log_stays_below_given(w, 0.0);
            return (0.0, top, 1.0 + self.groups.iter().map(curvature).sum::<f64>());
        }
        let log_integrand = |z: f64| self.log_stays_below_given(w, z) - 0.5 * z * z;
        let peak = quadrature::peak(log_integrand, 0.0, self.step);
        let (top, length) = (log_integrand(peak), 0.1 * self.step);
        let bend = 2.0 * top - log_integrand(peak - length) - log_integrand(peak + length);
        let curvature = bend / (length * length);
        (peak, top, if curvature > 1.0 { curvature } else { 1.0 })
    }

    /// log Π P(comparison i stays below w), given Z₀ = z.
    fn log_stays_below_given(&self, w: f64, z: f64) -> f64 {
        let alone = |group: &Group| match self.sides {
            Sides::Both => {
                libm::log(normal_interval(group.loading * z * group.inverse_rest, w * group.inverse_rest))
            }
            Sides::Greater => normal::log_lower((w - group.loading * z) * group.inverse_rest),
        };
        self.groups.iter().map(|group| group.count as f64 * alone(group)).sum()
    }

    /// The chance that one comparison of the group exceeds w, given Z₀ = z.
    fn exceeds_given(&self, group: &Group, w: f64, z: f64) -> f64 {
        let upwards = normal::lower_in_integrals((group.loading * z - w) * group.inverse_rest);
        match self.sides {
            Sides::Both => {
                let downwards = normal::lower_in_integrals((-group.loading * z - w) * group.inverse_rest);
                (upwards + downwards).min(1.0)
            }
            Sides::Greater => upwards,
        }
    }

    /// ∫ φ(z) `given`(z) dz. In the tail the integrand has its peaks near z = λ w, with widths of at most 1.
    fn over_control(&self, w: f64, given: impl Fn(f64) -> f64) -> f64 {
        const WIDTH: f64 = 8.5;
        let reach = self.largest * w.abs().min(45.0) + WIDTH;
        let integrand = |z: f64| normal::density(z) * given(z);
        match self.sides {
            Sides::Both => {
                let (_, _, curvature) = self.peak_below(w);
                quadrature::trapezoid_even(reach, self.step.min(BELL_STEP / curvature.sqrt()), integrand)
            }
            Sides::Greater => quadrature::trapezoid(-reach, reach, self.step, integrand),
        }
    }
}

/// Φ(middle + half) - Φ(middle - half), with the digits that a short interval or one far out would lose by subtraction.
fn normal_interval(middle: f64, half: f64) -> f64 {
    if half < 0.01 {
        return normal::short_interval(middle, 2.0 * half);
    }
    let middle = -middle.abs();
    (normal::lower_in_integrals(middle + half) - normal::lower_in_integrals(middle - half)).max(0.0)
}
