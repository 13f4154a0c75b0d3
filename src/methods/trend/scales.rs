//! Which scale of dose? The linear trend in the scores themselves, in their ranks and in their logarithms, tested together so that
//! choosing the strongest of them is paid for (Tukey, Ciminera and Heyse).
//!
//! For the scores a_i of a scale the contrast is c_i = n_i (a_i - ā), ā the mean of the a_i weighted by n: the least-squares slope
//! on a. The t statistics of the scales are jointly t; each adjusted p-value is P(max |T| > |t|) over the scales. Scales that
//! come to the same contrast (equally spaced scores are their own ranks; with two levels all three) are one member of the family.
//!
//! A score of 0 has no logarithm. On the log scale it stands as many steps below the lowest positive score x₁ as it does on
//! the arithmetic one, a step being that from x₁ to x₂: log x₁ - (x₁ - 0)/(x₂ - x₁) (log x₂ - log x₁) \[1, the rule from memory\].
//!
//! # References
//! 1. Tukey, Ciminera and Heyse (1985), Biometrics 41, 295-301, doi 10.2307/2530666.
//! 2. Hothorn, Bretz and Westfall (2008), Biometrical J. 50, 346-363, doi 10.1002/bimj.200810425 (the joint distribution).

use crate::methods::multiplicity::Sides;
use crate::methods::multiplicity::joint::{JointWork, Procedure};
use crate::methods::slices::InSlices;
use crate::numerics::OutOfDomain;
use crate::numerics::sums::sum;
use crate::study::Estimates;
use serde::Serialize;

/// A scale of dose.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Scale {
    /// The scores as they are.
    Arithmetic,
    /// 0, 1, 2, ...
    Ordinal,
    /// Natural logarithms.
    Log,
}

/// The three scales of Tukey, Ciminera and Heyse.
pub const SCALES: [Scale; 3] = [Scale::Arithmetic, Scale::Ordinal, Scale::Log];

/// What is asked for.
#[derive(Debug, Clone, Copy)]
pub struct ScaleRequest<'a> {
    pub estimates: &'a Estimates,
    /// One a level, strictly increasing.
    pub scores: &'a [f64],
    /// The family, without repetitions: [`SCALES`], or fewer where the scores have no logarithms.
    pub scales: &'a [Scale],
    pub sides: Sides,
    /// Of the critical values.
    pub alpha: f64,
}

/// The linear trend in one scale.
#[derive(Debug, Clone, PartialEq)]
pub struct ScaleRow {
    pub scale: Scale,
    /// The scores in this scale, one a level.
    pub scores: Vec<f64>,
    /// c_i = n_i (a_i - ā).
    pub coefficients: Vec<f64>,
    /// Change of the outcome per unit of this scale, least squares with the weights n.
    pub slope: f64,
    /// Standard error of `slope`.
    pub se: f64,
    pub t: f64,
    pub df: f64,
    /// Of this scale by itself, on the sides asked for.
    pub p: f64,
    /// In the family of the scales.
    pub p_adjusted: f64,
    /// Bound of the error of `p_adjusted`.
    pub p_error: f64,
    /// The t that has an adjusted p-value of alpha, on the side or sides asked for.
    pub critical: f64,
    /// The earlier scale that gives the same contrast, so that both are one test.
    pub same_as: Option<Scale>,
}

/// The scales tested as one family.
#[derive(Debug, Clone, PartialEq)]
pub struct ScaleTests {
    /// In the order of the scales asked for.
    pub rows: Vec<ScaleRow>,
    /// Place of the row that speaks most clearly for a trend: the smallest adjusted p-value, then the largest t on the side asked
    /// for; the first of equals.
    pub strongest: usize,
    /// Different contrasts in the family: with one of them nothing is adjusted.
    pub distinct: usize,
    /// Where a score of 0 stands on the log scale, if there is one and three levels or more.
    pub zero_on_log_scale: Option<f64>,
}

/// Why the scales are not tested.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoScaleTest {
    #[error("there are {levels} levels, and a trend needs at least 2")]
    TooFewLevels { levels: usize },
    #[error("{scores} scores were given for {levels} levels; each level needs one")]
    ScoreCount { scores: usize, levels: usize },
    #[error("the scores must be strictly increasing, but {after} follows {before}")]
    NotIncreasing { before: f64, after: f64 },
    #[error(
        "the score {score} is negative and has no logarithm; leave the log scale out, or shift the scores"
    )]
    NegativeScore { score: f64 },
    #[error("no scale was asked for")]
    NoScale,
    #[error(
        "the trend has no finite t: the values or scores are too large, too small or too close to compute with"
    )]
    NotFinite,
    #[error("{0}")]
    OutOfDomain(#[from] OutOfDomain),
}

/// The linear trend in each scale, tested as one family.
///
/// Hypothesis: the means do not change with the score. The family-wise error is controlled, exactly for normal values with one
/// error term; with a variance for each mean every scale has Satterthwaite's df, and the control is approximate.
///
/// # Errors
/// [`NoScaleTest`] for fewer than two levels, scores that do not fit or rise, a negative score under logarithms, or extreme
/// numbers.
///
/// # Accuracy
/// Adjusted p-values and critical values: at most three contrasts, by integrals with a relative error below 1e-11.
///
/// # Source
/// \[1\], with the joint distribution of \[2\].
pub fn scale_tests(request: &ScaleRequest) -> Result<ScaleTests, NoScaleTest> {
    check(request)?;
    let estimates = request.estimates;
    let mut contrasts: Vec<(Scale, Vec<f64>, Vec<f64>, usize)> = Vec::new();
    let mut family: Vec<Vec<f64>> = Vec::new();
    for &scale in request.scales {
        let scores = scores_in(scale, request.scores)?;
        let c = contrast(&scores, &estimates.n)?;
        let member = family.iter().position(|other| same(other, &c, &estimates.n)).unwrap_or(family.len());
        if member == family.len() {
            family.push(c.clone());
        }
        contrasts.push((scale, scores, c, member));
    }
    let finite = family.iter().all(|c| {
        let found = estimates.contrast(c);
        (found.estimate / found.se).is_finite() && found.se > 0.0
    });
    if !finite {
        return Err(NoScaleTest::NotFinite);
    }
    let work = JointWork::new(estimates, &family, 0.0, request.sides, Procedure::SingleStep, request.alpha)?;
    let joint = work.finish()?;
    let mut rows: Vec<ScaleRow> = Vec::new();
    for (place, (scale, scores, c, member)) in contrasts.iter().enumerate() {
        let same_as = contrasts[..place].iter().find(|other| other.3 == *member).map(|other| other.0);
        let (found, decided) = (estimates.contrast(c), joint.rows[*member]);
        let size = sum(c.iter().zip(&estimates.n).map(|(c, n)| c * c / *n as f64));
        rows.push(ScaleRow {
            scale: *scale,
            scores: scores.clone(),
            coefficients: c.clone(),
            slope: found.estimate / size,
            se: found.se / size,
            t: decided.t,
            df: decided.df,
            p: decided.p,
            p_adjusted: decided.p_adjusted,
            p_error: decided.p_error,
            critical: decided.critical,
            same_as,
        });
    }
    if !rows.iter().all(|row| row.slope.is_finite() && row.se.is_finite()) {
        return Err(NoScaleTest::NotFinite);
    }
    let has_zero = request.scores.len() > 2 && request.scores[0] == 0.0;
    let log = rows.iter().find(|row| row.scale == Scale::Log && has_zero);
    let zero_on_log_scale = log.map(|row| row.scores[0]);
    Ok(ScaleTests {
        strongest: strongest(&rows, request.sides),
        rows,
        distinct: family.len(),
        zero_on_log_scale,
    })
}

fn strongest(rows: &[ScaleRow], sides: Sides) -> usize {
    let towards = |row: &ScaleRow| match sides {
        Sides::Both => row.t.abs(),
        Sides::Greater => row.t,
        Sides::Less => -row.t,
    };
    let clearer = |one: &ScaleRow, other: &ScaleRow| {
        one.p_adjusted < other.p_adjusted
            || (one.p_adjusted == other.p_adjusted && towards(one) > towards(other))
    };
    (0..rows.len()).fold(0, |best, place| if clearer(&rows[place], &rows[best]) { place } else { best })
}

/// The scores in a scale; for strictly increasing scores.
///
/// With two levels every scale is the same comparison, and a score of 0 has no step to be measured by: 0 and 1 stand for its log
/// scale then.
///
/// # Errors
/// [`NoScaleTest::NegativeScore`] under logarithms.
pub fn scores_in(scale: Scale, scores: &[f64]) -> Result<Vec<f64>, NoScaleTest> {
    let ranks = || (0..scores.len()).map(|rank| rank as f64).collect();
    match (scale, scores) {
        (Scale::Arithmetic, _) => Ok(scores.to_vec()),
        (Scale::Ordinal, _) => Ok(ranks()),
        (Scale::Log, [first, ..]) if *first < 0.0 => Err(NoScaleTest::NegativeScore { score: *first }),
        (Scale::Log, [zero, rest @ ..]) if *zero == 0.0 => Ok(match rest {
            [one, other, ..] => {
                let step = libm::log(*other) - libm::log(*one);
                let of_zero = libm::log(*one) - one / (other - one) * step;
                std::iter::once(of_zero).chain(rest.iter().map(|x| libm::log(*x))).collect()
            }
            _ => ranks(),
        }),
        (Scale::Log, _) => Ok(scores.iter().map(|x| libm::log(*x)).collect()),
    }
}

/// n_i (a_i - ā).
fn contrast(scores: &[f64], n: &[usize]) -> Result<Vec<f64>, NoScaleTest> {
    let total: f64 = n.iter().map(|n| *n as f64).sum();
    let mean = sum(scores.iter().zip(n).map(|(a, n)| a * (*n as f64 / total)));
    let c: Vec<f64> = scores.iter().zip(n).map(|(a, n)| *n as f64 * (a - mean)).collect();
    let usable = c.iter().all(|c| c.is_finite()) && c.iter().any(|c| *c != 0.0);
    if usable { Ok(c) } else { Err(NoScaleTest::NotFinite) }
}

/// Whether two contrasts are multiples of one another but for the rounding of logarithms.
fn same(one: &[f64], other: &[f64], n: &[usize]) -> bool {
    // Two proportional scores have the same shares of the way from the first to the last.
    let shares = |c: &[f64]| -> Vec<f64> {
        let a: Vec<f64> = c.iter().zip(n).map(|(c, n)| c / *n as f64).collect();
        let (first, last) = (a[0], a[a.len() - 1]);
        a.iter().map(|a| (a - first) / (last - first)).collect()
    };
    shares(one).iter().zip(shares(other)).all(|(one, other)| (one - other).abs() <= 1e-12)
}

fn check(request: &ScaleRequest) -> Result<(), NoScaleTest> {
    let (levels, scores) = (request.estimates.means.len(), request.scores);
    if levels < 2 {
        return Err(NoScaleTest::TooFewLevels { levels });
    }
    if scores.len() != levels {
        return Err(NoScaleTest::ScoreCount { scores: scores.len(), levels });
    }
    let falls = |pair: &&[f64]| !(pair[0] < pair[1] && pair[0].is_finite() && pair[1].is_finite());
    if let Some(pair) = scores.windows(2).find(falls) {
        return Err(NoScaleTest::NotIncreasing { before: pair[0], after: pair[1] });
    }
    if request.scales.is_empty() {
        return Err(NoScaleTest::NoScale);
    }
    Ok(())
}
