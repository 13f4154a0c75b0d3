//! Orthogonal polynomial contrasts of the level means over their real scores, for any spacing and group sizes.
//!
//! P_0 = 1 and P_r(x) = x P_{r-1}(x) less its projections on all lower P, orthogonal in Σ w P_q P_r, each monic in
//! x. The contrast of degree r is c_i = w_i P_r(x_i): with w = n the contrasts are orthogonal for the actual group
//! sizes and their sums of squares add up to the sum of squares between the groups; with w = 1 they are the
//! textbook coefficients, test the trend of the population means, and do not add up when group sizes differ.
//! The linear contrast with w = n is the least-squares slope of the outcome on the scores, tested against the
//! variation inside the groups.
//!
//! References: \[1\] Robson (1959), Biometrics 15, 187–191 (unequal spacing). \[2\] Scheffé (1959), The Analysis of
//! Variance, section 3.5 (sums of squares of contrasts).

use crate::methods::departure::{Departure, departure, precision};
use crate::methods::effect_size::{Coverage, StandardisedEffect, Standardiser};
use crate::methods::multiplicity::Bounds;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::student_t;
use crate::numerics::sums::sum;
use crate::study::{ContrastEstimate, DegreesOfFreedom, Estimates, Summary, Variances};
use serde::Serialize;

/// The weights in which the polynomials are orthogonal.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Weights {
    /// The group sizes.
    N,
    /// One for each level.
    Equal,
}

/// Which trend is asked for.
#[derive(Debug, Clone, Copy)]
pub struct TrendRequest<'a> {
    pub estimates: &'a Estimates,
    /// For the standardised effects; without it there are none.
    pub summary: Option<&'a Summary>,
    /// One a level, strictly increasing.
    pub scores: &'a [f64],
    /// The highest degree, from 1.
    pub degree: usize,
    pub weights: Weights,
    /// Confidence of the intervals, each by itself.
    pub confidence: f64,
}

/// The contrast of one degree.
#[derive(Debug, Clone, PartialEq)]
pub struct TrendRow {
    pub degree: usize,
    /// "linear", "quadratic", "cubic", "quartic".
    pub name: &'static str,
    /// c_i = w_i P_r(x_i) with P_r monic.
    pub coefficients: Vec<f64>,
    /// Σ c m.
    pub estimate: f64,
    pub se: f64,
    pub df: f64,
    pub t: f64,
    /// Two-sided, of this degree by itself.
    pub p: f64,
    /// Interval of `estimate`.
    pub interval: Bounds,
    /// The coefficient of P_r in the fit: for the linear degree the change of the outcome per unit of score.
    pub slope: f64,
    /// Interval of `slope`, from the same critical value.
    pub slope_interval: Bounds,
    /// (Σ c m)² / Σ(c² / n).
    pub ss: f64,
    /// `ss` over the sum of squares between the groups; `None` where that is 0.
    pub share: Option<f64>,
    pub effect: Option<StandardisedEffect>,
}

/// What the polynomial up to a degree leaves unexplained.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LackOfFit {
    /// The polynomial that is tested has all degrees up to this one.
    pub degree: usize,
    pub test: Departure,
}

/// Polynomial contrasts of every degree up to the one asked for.
#[derive(Debug, Clone, PartialEq)]
pub struct PolynomialTrend {
    pub weights: Weights,
    pub scores: Vec<f64>,
    pub variances: Variances,
    pub confidence: f64,
    pub ss_between: f64,
    pub rows: Vec<TrendRow>,
    /// The mean of the levels in the weights of the contrasts, as an offset from the estimates' origin.
    pub centre: f64,
    /// The weight of each level in the contrasts.
    pub level_weights: Vec<f64>,
    /// One for each degree up to the one asked for that leaves something to test.
    pub lack_of_fit: Vec<LackOfFit>,
}

/// Why there is no polynomial trend.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoTrend {
    #[error("{scores} scores were given for {levels} levels; each level needs one")]
    ScoreCount { scores: usize, levels: usize },
    #[error("the scores must be strictly increasing, but {after} follows {before}")]
    NotIncreasing { before: f64, after: f64 },
    #[error("{levels} levels allow a polynomial of degree {} at most: a curve with {degree} parts needs {} levels", levels - 1, degree + 1)]
    TooFewLevels { degree: usize, levels: usize },
    #[error("the degree is {degree}, but must be from 1 to 4")]
    Degree { degree: usize },
    #[error("some scores are too close together, for the range of all, to compute the {name} contrast")]
    TooClose { name: &'static str },
    #[error(
        "the {name} contrast has no finite estimate and standard error: the values or scores are too large or too small to compute with"
    )]
    NotFinite { name: &'static str },
    #[error("{0}")]
    OutOfDomain(#[from] OutOfDomain),
}

/// The highest degree that `levels` levels allow here: one less than their number, and at most 4.
pub fn highest_degree(levels: usize) -> usize {
    levels.saturating_sub(1).min(4)
}

/// "linear", "quadratic", "cubic", "quartic" or "quintic".
pub fn degree_name(degree: usize) -> &'static str {
    ["constant", "linear", "quadratic", "cubic", "quartic", "quintic"]
        .get(degree)
        .copied()
        .unwrap_or("higher")
}

/// Contrasts of every degree from 1 to the one asked for, with the tests of what they leave over.
///
/// Each degree is one planned comparison, judged by itself: nothing is adjusted. With one error term all share its
/// df; with a variance for each mean every contrast has Satterthwaite's df, and the lack of fit is Johansen's test.
///
/// # Errors
/// [`NoTrend`] for scores that do not fit or rise, a degree that the levels do not allow, or extreme numbers.
pub fn polynomial(request: &TrendRequest) -> Result<PolynomialTrend, NoTrend> {
    let estimates = request.estimates;
    let ss_between = ss_between(estimates);
    let contrasts = coefficients(request.scores, &weights_of(request), request.degree)?;
    let rows = contrasts.into_iter().enumerate();
    let rows = rows.map(|(i, c)| row(request, i + 1, c, ss_between)).collect::<Result<Vec<_>, _>>()?;
    Ok(PolynomialTrend {
        weights: request.weights,
        scores: request.scores.to_vec(),
        variances: variances(estimates),
        confidence: request.confidence,
        ss_between,
        centre: centre(request),
        level_weights: weights_of(request),
        rows,
        lack_of_fit: lack_of_fit(request)?,
    })
}

impl PolynomialTrend {
    /// The curve with the degrees up to `degree` at a score inside the range of the scores, as an offset from the
    /// estimates' origin.
    ///
    /// It is the polynomial through `degree` + 1 of its own points at the scores, by Lagrange's formula.
    pub fn at(&self, x: f64, degree: usize) -> f64 {
        let (last, degree) = (self.scores.len() - 1, degree.min(self.rows.len()));
        let nodes: Vec<usize> = (0..=degree).map(|j| j * last / degree.max(1)).collect();
        let part = |i: usize| {
            let others = nodes.iter().filter(|j| **j != i);
            others.map(|j| (x - self.scores[*j]) / (self.scores[i] - self.scores[*j])).product::<f64>()
        };
        sum(nodes.iter().map(|i| self.fitted(*i, degree) * part(*i)))
    }

    /// The centre plus the slopes of the degrees up to `degree` times their polynomials, at the level `i`.
    fn fitted(&self, i: usize, degree: usize) -> f64 {
        let terms =
            self.rows.iter().take(degree).map(|row| row.slope * row.coefficients[i] / self.level_weights[i]);
        self.centre + sum(terms)
    }
}

fn centre(request: &TrendRequest) -> f64 {
    let w = weights_of(request);
    sum(w.iter().zip(&request.estimates.means).map(|(w, m)| w * m)) / sum(w.iter().copied())
}

/// The contrasts c_i = w_i P_r(x_i) for r = 1..=`degree`, P_r monic and orthogonal in the weights.
///
/// # Errors
/// [`NoTrend`] for scores that are not strictly increasing or a degree that they do not allow.
///
/// # Source
/// \[1\], with every polynomial orthogonalised twice on centred and scaled scores.
pub fn coefficients(scores: &[f64], weights: &[f64], degree: usize) -> Result<Vec<Vec<f64>>, NoTrend> {
    let polynomials = orthogonal(scores, weights, degree)?;
    let weighted = polynomials.iter().skip(1).map(|p| p.iter().zip(weights).map(|(p, w)| w * p).collect());
    Ok(weighted.collect())
}

/// P_0 .. P_degree at the scores, each monic in the score.
fn orthogonal(scores: &[f64], weights: &[f64], degree: usize) -> Result<Vec<Vec<f64>>, NoTrend> {
    if !(1..=4).contains(&degree) {
        return Err(NoTrend::Degree { degree });
    }
    let Scaled { mut polynomials, half_range } = scaled(scores, weights, degree)?;
    // Monic in the scaled score; times the scale to the power r it is monic in the score itself.
    let mut scale = 1.0;
    for polynomial in polynomials.iter_mut().skip(1) {
        scale *= half_range;
        polynomial.iter_mut().for_each(|p| *p *= scale);
    }
    Ok(polynomials)
}

/// Orthogonal polynomials of the scores moved and scaled to the range from about -1 to 1.
pub(in crate::methods) struct Scaled {
    /// P_0 .. P_degree, each monic in the scaled score.
    pub polynomials: Vec<Vec<f64>>,
    /// What a scaled score of 1 is in the scores.
    pub half_range: f64,
}

/// The polynomials of every degree up to `degree`, which is below the number of levels.
pub(in crate::methods) fn scaled(scores: &[f64], weights: &[f64], degree: usize) -> Result<Scaled, NoTrend> {
    check(scores, weights.len(), degree)?;
    let k = scores.len();
    let centre = sum(scores.iter().map(|x| x / k as f64));
    let half_range = scores[k - 1] / 2.0 - scores[0] / 2.0;
    let u: Vec<f64> = scores.iter().map(|x| (x - centre) / half_range).collect();
    let mut found: Vec<Vec<f64>> = vec![vec![1.0; k]];
    for r in 1..=degree {
        let mut next: Vec<f64> = found[r - 1].iter().zip(&u).map(|(p, u)| p * u).collect();
        for _ in 0..2 {
            for lower in &found {
                let along = sum((0..k).map(|i| weights[i] * next[i] * lower[i]));
                let size = sum((0..k).map(|i| weights[i] * lower[i] * lower[i]));
                next.iter_mut().zip(lower).for_each(|(p, q)| *p -= along / size * q);
            }
        }
        found.push(next);
    }
    Ok(Scaled { polynomials: found, half_range })
}

fn check(scores: &[f64], levels: usize, degree: usize) -> Result<(), NoTrend> {
    if scores.len() != levels {
        return Err(NoTrend::ScoreCount { scores: scores.len(), levels });
    }
    let falls = |pair: &&[f64]| !(pair[0] < pair[1] && pair[0].is_finite() && pair[1].is_finite());
    if let Some(pair) = scores.windows(2).find(falls) {
        return Err(NoTrend::NotIncreasing { before: pair[0], after: pair[1] });
    }
    if degree + 1 > levels {
        return Err(NoTrend::TooFewLevels { degree, levels });
    }
    Ok(())
}

fn weights_of(request: &TrendRequest) -> Vec<f64> {
    let n = request.estimates.n.iter();
    n.map(|n| if request.weights == Weights::N { *n as f64 } else { 1.0 }).collect()
}

fn variances(estimates: &Estimates) -> Variances {
    match estimates.df {
        DegreesOfFreedom::Common(_) => Variances::Equal,
        DegreesOfFreedom::PerMean(_) => Variances::Unequal,
    }
}

fn ss_between(estimates: &Estimates) -> f64 {
    let n = estimates.n.iter().map(|n| *n as f64);
    let centre = sum(n.clone().zip(&estimates.means).map(|(n, m)| n * m)) / sum(n.clone());
    sum(n.zip(&estimates.means).map(|(n, m)| n * (m - centre) * (m - centre)))
}

fn row(request: &TrendRequest, degree: usize, c: Vec<f64>, ss_between: f64) -> Result<TrendRow, NoTrend> {
    let name = degree_name(degree);
    let found = request.estimates.contrast(&c);
    let t = found.estimate / found.se;
    if !(t.is_finite() && found.se > 0.0 && found.se.is_finite()) {
        return Err(NoTrend::NotFinite { name });
    }
    let critical = student_t::upper_quantile((1.0 - request.confidence) / 2.0, found.df)?;
    let reach = critical * found.se;
    let interval = Bounds { lower: found.estimate - reach, upper: found.estimate + reach };
    // Σ w P² = Σ c² / w turns the contrast into the coefficient of P in the fit.
    let size = sum(c.iter().zip(weights_of(request)).map(|(c, w)| c * c / w));
    let ss = found.estimate * found.estimate
        / sum(c.iter().zip(&request.estimates.n).map(|(c, n)| c * c / *n as f64));
    let slope = found.estimate / size;
    if !(slope.is_finite() && ss.is_finite() && ss_between.is_finite()) {
        return Err(NoTrend::NotFinite { name });
    }
    Ok(TrendRow {
        degree,
        name,
        estimate: found.estimate,
        se: found.se,
        df: found.df,
        t,
        p: (2.0 * student_t::sf(t.abs(), found.df)?).min(1.0),
        interval,
        slope,
        slope_interval: Bounds { lower: interval.lower / size, upper: interval.upper / size },
        ss,
        share: (ss_between > 0.0).then(|| ss / ss_between),
        effect: effect(request, &found, &c, critical)?,
        coefficients: c,
    })
}

fn effect(
    request: &TrendRequest,
    found: &ContrastEstimate,
    c: &[f64],
    critical: f64,
) -> Result<Option<StandardisedEffect>, OutOfDomain> {
    let variances = variances(request.estimates);
    let standardiser = request.summary.and_then(|summary| Standardiser::of(summary, variances, c));
    let coverage = Coverage::beyond_both(critical, found.df)?;
    Ok(standardiser.and_then(|standardiser| StandardisedEffect::of(found, c, standardiser, coverage)))
}

/// What the polynomials of each degree leave over. The fit weighs each mean by its precision, whatever the weights
/// of the contrasts: it asks whether the curve describes the means, not which contrast shows it.
fn lack_of_fit(request: &TrendRequest) -> Result<Vec<LackOfFit>, NoTrend> {
    let columns = orthogonal(request.scores, &precision(request.estimates), request.degree)?;
    let mut found = Vec::new();
    for degree in 1..=request.degree {
        if let Some(test) = departure(request.estimates, &columns[..=degree])? {
            found.push(LackOfFit { degree, test });
        }
    }
    Ok(found)
}
