//! Decides every comparison of a family once.

use super::p_values::{self, PValueMethod};
use super::{Adjust, Family, Sides, control, range, scheffe, suitable};
use crate::methods::contrasts::{Contrast, Set, in_words};
use crate::methods::effect_size::{Coverage, StandardisedEffect, Standardiser};
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::{student_t, studentized_range};
use crate::study::{ContrastEstimate, DegreesOfFreedom, Estimates, Summary, Variances};
use serde::Serialize;

/// What is to be compared, and how.
#[derive(Debug, Clone, Copy)]
pub struct Request<'a> {
    pub estimates: &'a Estimates,
    /// For the standard deviation of the standardised effects; without it there are none.
    pub summary: Option<&'a Summary>,
    /// The whole family: its size is their number.
    pub contrasts: &'a [Contrast],
    pub family: Family,
    pub adjust: Adjust,
    pub sides: Sides,
    /// Error rate, between 0 and 1.
    pub alpha: f64,
    /// Confidence of the intervals; 1 - alpha where they are to agree with the decisions.
    pub confidence: f64,
}

/// What the intervals of a result hold for.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum IntervalKind {
    /// All of them together, by the procedure itself.
    Simultaneous,
    /// All of them together, by this single-step relative of a stepwise procedure: a row's interval may disagree
    /// with its decision.
    SimultaneousBy(PValueMethod),
    /// Each by itself.
    PerComparison,
}

/// One comparison, decided.
#[derive(Debug, Clone, PartialEq)]
pub struct ComparisonRow {
    pub name: String,
    /// What is taken from what: "mean of B and C minus A".
    pub words: String,
    /// One a level.
    pub coefficients: Vec<f64>,
    pub estimate: f64,
    pub se: f64,
    pub df: f64,
    /// estimate / se, whatever statistic the procedure uses.
    pub t: f64,
    /// The procedure's statistic: q = √2 |t| for the studentized range, else t.
    pub statistic: f64,
    /// "t" or "q".
    pub statistic_name: &'static str,
    /// Of this comparison by itself, on the sides asked for.
    pub p: f64,
    pub p_adjusted: f64,
    /// Bound on the error of `p_adjusted` where it comes from numerical integration.
    pub p_error: Option<f64>,
    /// The level at which the raw p-value is judged; `None` where the procedure has none.
    pub alpha: Option<f64>,
    /// p_adjusted <= alpha of the family.
    pub rejected: bool,
    /// The value that the statistic must reach for its interval to exclude zero, on the scale of `statistic`.
    pub critical: f64,
    /// Interval of the kind that the result names; infinite on a side that is not bounded.
    pub interval: Bounds,
    /// d and g with the interval of the same critical value; `None` without a standard deviation.
    pub effect: Option<StandardisedEffect>,
}

/// Lower and upper bound.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct Bounds {
    pub lower: f64,
    pub upper: f64,
}

impl Bounds {
    /// Whether zero lies outside.
    pub fn excludes_zero(&self) -> bool {
        self.lower > 0.0 || self.upper < 0.0
    }
}

/// A family of comparisons, decided.
#[derive(Debug, Clone, PartialEq)]
pub struct Comparisons {
    pub adjust: Adjust,
    pub family: Family,
    pub family_size: usize,
    pub sides: Sides,
    pub variances: Variances,
    pub alpha: f64,
    pub confidence: f64,
    pub interval_kind: IntervalKind,
    /// The rows' critical value where it is one for all.
    pub critical: Option<f64>,
    /// The rows' per-comparison alpha where it is one for all.
    pub alpha_per_comparison: Option<f64>,
    pub rows: Vec<ComparisonRow>,
    /// Indices of rows whose interval excludes zero without a rejection, or the reverse.
    pub disagreeing: Vec<usize>,
}

/// Why a family cannot be compared as asked.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum CannotCompare {
    #[error("{reason}. Suitable here: {}.", names(suitable))]
    Unsuitable { reason: &'static str, suitable: Vec<Adjust> },
    #[error(
        "comparison \"{name}\" has no finite estimate and standard error: its values are too large or too small to compute with"
    )]
    NotFinite { name: String },
    #[error("there is nothing to compare: the family is empty")]
    Empty,
    #[error("{0}")]
    OutOfDomain(#[from] OutOfDomain),
}

fn names(procedures: &[Adjust]) -> String {
    procedures.iter().map(|adjust| adjust.name()).collect::<Vec<_>>().join(", ")
}

/// The decision on every comparison of the family.
///
/// Hypotheses: each contrast of the population means is zero (or not beyond zero on the side asked for). What is
/// controlled depends on `adjust` ([`Adjust::error_rate`]); with one error term the t statistics share it and its
/// df, with a variance for each mean every row has Satterthwaite's df.
///
/// # Errors
/// [`CannotCompare`] where the procedure does not suit the family, the variances or the sides, the family is empty,
/// or the numbers are too extreme.
pub fn compare(request: &Request) -> Result<Comparisons, CannotCompare> {
    let variances = match request.estimates.df {
        DegreesOfFreedom::Common(_) => Variances::Equal,
        DegreesOfFreedom::PerMean(_) => Variances::Unequal,
    };
    if let Some(reason) = request.adjust.unsuitable(request.family, variances, request.sides) {
        let suitable = suitable(request.family, variances, request.sides);
        return Err(CannotCompare::Unsuitable { reason, suitable });
    }
    if request.contrasts.is_empty() {
        return Err(CannotCompare::Empty);
    }
    let tests = request
        .contrasts
        .iter()
        .map(|contrast| Test::of(request, contrast))
        .collect::<Result<Vec<_>, _>>()?;
    let raw: Vec<f64> = tests.iter().map(|test| test.p).collect();
    let loadings = match request.family {
        Family::Set(Set::AgainstControl(control)) => control::loadings(request.estimates, control),
        _ => Vec::new(),
    };
    let mut range = None;
    let adjusted = adjusted(request, &tests, &raw, &loadings, &mut range)?;
    let outside = outside(request);
    let critical = critical_at(outside, request, &tests, &loadings, &mut range)?;
    let deciding = match request.adjust {
        // The raw p-value of a comparison that just reaches the critical value of the decision is its alpha.
        Adjust::PValues(_) => Vec::new(),
        _ if outside == request.alpha => critical.clone(),
        _ => critical_at(request.alpha, request, &tests, &loadings, &mut range)?,
    };
    let alphas = alphas(request, &tests, &raw, &deciding)?;
    let decided = Decided { adjusted, critical, alphas };
    let rows = (0..tests.len())
        .map(|i| decided.row(i, request, variances, &tests[i]))
        .collect::<Result<Vec<_>, _>>()?;
    Ok(Comparisons {
        adjust: request.adjust,
        family: request.family,
        family_size: rows.len(),
        sides: request.sides,
        variances,
        alpha: request.alpha,
        confidence: request.confidence,
        interval_kind: interval_kind(request.adjust),
        critical: common(rows.iter().map(|row| Some(row.critical))),
        alpha_per_comparison: common(rows.iter().map(|row| row.alpha)),
        disagreeing: (0..rows.len())
            .filter(|i| rows[*i].interval.excludes_zero() != rows[*i].rejected)
            .collect(),
        rows,
    })
}

impl Comparisons {
    /// The p-values of the same comparisons under another procedure, in the order of the rows.
    ///
    /// # Errors
    /// As [`compare`].
    pub fn adjusted_by(request: &Request, adjust: Adjust) -> Result<Vec<f64>, CannotCompare> {
        let other = compare(&Request { adjust, summary: None, ..*request })?;
        Ok(other.rows.iter().map(|row| row.p_adjusted).collect())
    }
}

/// What the intervals of a procedure hold for.
fn interval_kind(adjust: Adjust) -> IntervalKind {
    match adjust {
        Adjust::PValues(method) => match method {
            PValueMethod::Bonferroni | PValueMethod::Sidak => IntervalKind::Simultaneous,
            PValueMethod::Holm | PValueMethod::Hochberg | PValueMethod::Hommel => {
                IntervalKind::SimultaneousBy(PValueMethod::Bonferroni)
            }
            PValueMethod::HolmSidak => IntervalKind::SimultaneousBy(PValueMethod::Sidak),
            PValueMethod::None | PValueMethod::BenjaminiHochberg | PValueMethod::BenjaminiYekutieli => {
                IntervalKind::PerComparison
            }
        },
        _ => IntervalKind::Simultaneous,
    }
}

/// A contrast's own t test.
struct Test {
    name: String,
    words: String,
    coefficients: Vec<f64>,
    contrast: ContrastEstimate,
    t: f64,
    p: f64,
}

impl Test {
    fn of(request: &Request, contrast: &Contrast) -> Result<Self, CannotCompare> {
        let found = request.estimates.contrast(&contrast.coefficients);
        let t = found.estimate / found.se;
        if !(t.is_finite() && found.se > 0.0 && found.se.is_finite() && found.df > 0.0) {
            return Err(CannotCompare::NotFinite { name: contrast.name.clone() });
        }
        Ok(Self {
            name: contrast.name.clone(),
            words: in_words(&contrast.coefficients, &request.estimates.labels),
            coefficients: contrast.coefficients.clone(),
            contrast: found,
            t,
            p: tail(t, found.df, request.sides)?,
        })
    }
}

/// P(T beyond t) on the sides asked for.
fn tail(t: f64, df: f64, sides: Sides) -> Result<f64, OutOfDomain> {
    match sides {
        Sides::Both => Ok((2.0 * student_t::sf(t.abs(), df)?).min(1.0)),
        Sides::Greater => student_t::sf(t, df),
        Sides::Less => student_t::sf(-t, df),
    }
}

fn adjusted(
    request: &Request,
    tests: &[Test],
    raw: &[f64],
    loadings: &[f64],
    range: &mut Option<studentized_range::Family>,
) -> Result<Vec<f64>, OutOfDomain> {
    let levels = request.estimates.means.len();
    let each = |of: &mut dyn FnMut(&Test) -> Result<f64, OutOfDomain>| -> Result<Vec<f64>, OutOfDomain> {
        // Integration leaves errors of a few units in the last place; an adjusted p-value is never below its raw one.
        tests.iter().map(|test| Ok(of(test)?.clamp(test.p, 1.0))).collect()
    };
    match request.adjust {
        Adjust::PValues(method) => Ok(p_values::adjusted(raw, method)),
        Adjust::Tukey | Adjust::GamesHowell => {
            let range = range::of(levels, range)?;
            each(&mut |test| range::adjusted_p(test.t, range, test.contrast.df))
        }
        Adjust::Dunnett => {
            each(&mut |test| control::adjusted_p(test.t, loadings, test.contrast.df, request.sides))
        }
        Adjust::Scheffe => each(&mut |test| scheffe::adjusted_p(test.t, levels, test.contrast.df)),
    }
}

/// What the intervals leave outside: alpha to the last bit where their confidence is 1 - alpha.
fn outside(request: &Request) -> f64 {
    let outside = 1.0 - request.confidence;
    if (outside - request.alpha).abs() < 1e-12 { request.alpha } else { outside }
}

/// The number of standard errors that each row's interval reaches.
fn critical_at(
    outside: f64,
    request: &Request,
    tests: &[Test],
    loadings: &[f64],
    range: &mut Option<studentized_range::Family>,
) -> Result<Vec<f64>, OutOfDomain> {
    let (levels, m) = (request.estimates.means.len(), tests.len() as f64);
    let mut last: Option<(f64, f64)> = None;
    let mut result = Vec::with_capacity(tests.len());
    for test in tests {
        let df = test.contrast.df;
        // With one error term all rows share one critical value; finding it is the costly part.
        if let Some((_, value)) = last.filter(|(known, _)| *known == df) {
            result.push(value);
            continue;
        }
        let value = match request.adjust {
            Adjust::PValues(_) => {
                let each = match interval_kind(request.adjust) {
                    IntervalKind::PerComparison => outside,
                    IntervalKind::SimultaneousBy(PValueMethod::Sidak) => p_values::sidak_level(outside, m),
                    IntervalKind::Simultaneous if request.adjust == Adjust::PValues(PValueMethod::Sidak) => {
                        p_values::sidak_level(outside, m)
                    }
                    _ => outside / m,
                };
                let upper = if request.sides == Sides::Both { each / 2.0 } else { each };
                student_t::upper_quantile(upper, df)?
            }
            Adjust::Tukey | Adjust::GamesHowell => {
                range::critical_q(outside, range::of(levels, range)?, df)? / std::f64::consts::SQRT_2
            }
            Adjust::Dunnett => control::critical(outside, loadings, df, request.sides)?,
            Adjust::Scheffe => scheffe::critical(outside, levels, df)?,
        };
        last = Some((df, value));
        result.push(value);
    }
    Ok(result)
}

/// The level at which each raw p-value is judged, from the critical values of the decision.
fn alphas(
    request: &Request,
    tests: &[Test],
    raw: &[f64],
    critical: &[f64],
) -> Result<Vec<Option<f64>>, OutOfDomain> {
    if let Adjust::PValues(method) = request.adjust {
        let levels = p_values::alpha_per_comparison(raw, method, request.alpha);
        return Ok(levels.map_or(vec![None; raw.len()], |levels| levels.into_iter().map(Some).collect()));
    }
    let each = tests.iter().zip(critical);
    each.map(|(test, critical)| beyond(*critical, test.contrast.df, request.sides).map(Some)).collect()
}

/// The probability that t on `df` goes beyond `critical` standard errors on the sides that count.
fn beyond(critical: f64, df: f64, sides: Sides) -> Result<f64, OutOfDomain> {
    let upper = student_t::sf(critical, df)?;
    Ok(if sides == Sides::Both { (2.0 * upper).min(1.0) } else { upper })
}

/// Relative error of the adjusted p-values of procedures whose distribution is integrated.
fn relative_error(adjust: Adjust) -> Option<f64> {
    match adjust {
        Adjust::Tukey | Adjust::GamesHowell => Some(range::RELATIVE_ERROR),
        Adjust::Dunnett => Some(control::RELATIVE_ERROR),
        _ => None,
    }
}

/// The one value of all, where there is one.
fn common(mut values: impl Iterator<Item = Option<f64>>) -> Option<f64> {
    let first = values.next()??;
    values.all(|value| value == Some(first)).then_some(first)
}

struct Decided {
    adjusted: Vec<f64>,
    critical: Vec<f64>,
    alphas: Vec<Option<f64>>,
}

impl Decided {
    fn row(
        &self,
        i: usize,
        request: &Request,
        variances: Variances,
        test: &Test,
    ) -> Result<ComparisonRow, OutOfDomain> {
        let on_range = matches!(request.adjust, Adjust::Tukey | Adjust::GamesHowell);
        let scale = if on_range { std::f64::consts::SQRT_2 } else { 1.0 };
        let reach = self.critical[i] * test.contrast.se;
        let interval = Bounds {
            lower: if request.sides == Sides::Less {
                f64::NEG_INFINITY
            } else {
                test.contrast.estimate - reach
            },
            upper: if request.sides == Sides::Greater {
                f64::INFINITY
            } else {
                test.contrast.estimate + reach
            },
        };
        Ok(ComparisonRow {
            name: test.name.clone(),
            words: test.words.clone(),
            coefficients: test.coefficients.clone(),
            estimate: test.contrast.estimate,
            se: test.contrast.se,
            df: test.contrast.df,
            t: test.t,
            statistic: if on_range { range::q(test.t) } else { test.t },
            statistic_name: if on_range { "q" } else { "t" },
            p: test.p,
            p_adjusted: self.adjusted[i],
            p_error: relative_error(request.adjust).map(|relative| relative * self.adjusted[i]),
            alpha: self.alphas[i],
            rejected: self.adjusted[i] <= request.alpha,
            critical: self.critical[i] * scale,
            interval,
            effect: effect(request, variances, test, self.critical[i])?,
        })
    }
}

fn effect(
    request: &Request,
    variances: Variances,
    test: &Test,
    critical: f64,
) -> Result<Option<StandardisedEffect>, OutOfDomain> {
    let standardiser = request.summary.and_then(|it| Standardiser::of(it, variances, &test.coefficients));
    let Some(standardiser) = standardiser else {
        return Ok(None);
    };
    let coverage = match request.sides {
        Sides::Both => Coverage::beyond_both(critical, test.contrast.df)?,
        Sides::Greater => Coverage::lower_beyond(critical, test.contrast.df)?,
        Sides::Less => Coverage::upper_beyond(critical, test.contrast.df)?,
    };
    Ok(StandardisedEffect::of(&test.contrast, &test.coefficients, standardiser, coverage))
}
