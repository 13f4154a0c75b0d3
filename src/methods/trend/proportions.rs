//! Cochran and Armitage's test: does the share of those who respond follow the scores?
//!
//! With r_i of n_i responding at score x_i, R of N in all and p = R/N,
//!
//! ```text
//! T = Σ x_i (r_i - n_i p)    V = p (1 - p) Σ n_i (x_i - x̄)²    z = T/√V
//! ```
//!
//! and what a straight line leaves of Pearson's chi-squared X² is itself chi-squared on k - 2 df; it is summed here from the
//! departures from the line, Σ n_i (p_i - p - b (x_i - x̄))²/(p (1 - p)), b = T/Σ n_i (x_i - x̄)², which is X² - z².
//!
//! The exact p-values are those of Σ x_i r_i given all totals: every choice of the R who respond is equally likely. The levels are
//! cut into a lower and an upper half; for each number of responders in a half, the possible sums with their weights Π C(n_i, r_i)
//! come from adding one level after the other, and both halves meet at the observed sum. Sums are compared in whole numbers, where
//! the scores have a common unit; else as multiples of 2⁻⁴⁰ of their range, with what rounding may do counted as equal.
//!
//! # References
//! 1. Armitage (1955), Biometrics 11, 375-386, doi 10.2307/3001775; Cochran (1954), Biometrics 10, 417-451, doi 10.2307/3001616.

use crate::methods::multiplicity::Sides;
use crate::methods::multiplicity::ranks::TailProbabilities;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::{chi_squared, normal};
use crate::numerics::sums::sum;

/// Most additions for which the exact p-values are counted: some 0.1 s native.
pub const MOST_SUMS: usize = 10_000_000;

/// What a straight line leaves unexplained.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LineDeparture {
    pub chi_squared: f64,
    /// Levels less 2.
    pub df: f64,
    pub p: f64,
}

/// The trend of shares over scores.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CochranArmitage {
    /// T/√V; positive where the share rises with the score.
    pub z: f64,
    /// b: the change of the share per unit of score.
    pub slope: f64,
    /// By the normal distribution, at `z`. Greater: the share rises.
    pub normal: TailProbabilities,
    /// By counting; `None` where that takes more than [`MOST_SUMS`] additions: not counted.
    pub exact: Option<TailProbabilities>,
    /// Pearson's X² of all levels, on `levels - 1` df: the trend's z² and what it leaves.
    pub chi_squared: f64,
    /// `None` for two levels.
    pub lack_of_fit: Option<LineDeparture>,
}

impl CochranArmitage {
    /// The p-value on the sides asked for: the exact one where there is one, else the normal one.
    pub fn p(&self, sides: Sides) -> f64 {
        self.exact.as_ref().unwrap_or(&self.normal).on(sides)
    }
}

/// Why there is no trend of shares. Levels are told by their place, from 0.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoProportionTrend {
    #[error("there are {levels} levels, and a trend needs at least 2")]
    TooFewLevels { levels: usize },
    #[error(
        "{responders} numbers of responders, {sizes} sizes and {scores} scores were given; each level needs one of each"
    )]
    Count { responders: usize, sizes: usize, scores: usize },
    #[error("level {} has no observation; leave it out", level + 1)]
    EmptyLevel { level: usize },
    #[error("level {} has {responders} responders of {size}, which is more than all", level + 1)]
    TooMany { level: usize, responders: u32, size: u32 },
    #[error("the scores must be strictly increasing, but {after} follows {before}")]
    NotIncreasing { before: f64, after: f64 },
    #[error("nobody responds at any level, so there is no trend to see")]
    NoneRespond,
    #[error("everybody responds at every level, so there is no trend to see")]
    AllRespond,
    #[error("the trend has no finite z: the scores are too large, too small or too close to compute with")]
    NotFinite,
    #[error("{0}")]
    OutOfDomain(#[from] OutOfDomain),
}

/// The trend of `responders` out of `sizes` over `scores`, one of each a level, the scores strictly increasing.
///
/// Hypothesis: the share is the same at all levels. The normal p-values have no correction for continuity. The exact ones hold for any
/// numbers; on both sides twice the smaller one, at most 1.
///
/// # Errors
/// [`NoProportionTrend`] for fewer than two levels, lists that do not fit, an empty level, more responders than observations, scores
/// that do not rise, all or none responding, or extreme scores.
///
/// # Accuracy
/// Relative error of z and of the chi-squared values below 1e-13, of the exact p-values below 1e-11.
///
/// # Source
/// \[1\].
///
/// # Example
/// ```
/// # use levelwise::methods::trend::cochran_armitage;
/// let test = cochran_armitage(&[3, 5, 9, 14], &[50; 4], &[0.0, 1.0, 2.0, 4.0])?;
/// assert!((test.z - 3.269_580).abs() < 5e-7);
/// # Ok::<(), levelwise::methods::trend::NoProportionTrend>(())
/// ```
pub fn cochran_armitage(
    responders: &[u32],
    sizes: &[u32],
    scores: &[f64],
) -> Result<CochranArmitage, NoProportionTrend> {
    check(responders, sizes, scores)?;
    let x = from_0_to_1(scores)?;
    let n: Vec<f64> = sizes.iter().map(|n| f64::from(*n)).collect();
    let r: Vec<f64> = responders.iter().map(|r| f64::from(*r)).collect();
    let (total, all) = (sum(n.iter().copied()), sum(r.iter().copied()));
    let p = all / total;
    let spread = p * ((total - all) / total);
    let centre = sum(x.iter().zip(&n).map(|(x, n)| x * n)) / total;
    let square = sum(x.iter().zip(&n).map(|(x, n)| n * (x - centre) * (x - centre)));
    // r_i - n_i p, with whole numbers on top of one division.
    let excess: Vec<f64> = r.iter().zip(&n).map(|(r, n)| (r * total - n * all) / total).collect();
    let t = sum(x.iter().zip(&excess).map(|(x, e)| (x - centre) * e));
    let (z, slope) = (t / (spread * square).sqrt(), t / square);
    let of_range = slope / (scores[scores.len() - 1] - scores[0]);
    if !(z.is_finite() && of_range.is_finite()) {
        return Err(NoProportionTrend::NotFinite);
    }
    let departure = |line: f64| {
        let terms = excess.iter().zip(&n).zip(&x);
        sum(terms.map(|((e, n), x)| {
            let left = e / n - line * (x - centre);
            n * left * left
        })) / spread
    };
    let df = n.len() as f64 - 2.0;
    let left = departure(slope);
    let lack_of_fit = match n.len() {
        2 => None,
        _ => Some(LineDeparture { chi_squared: left, df, p: chi_squared::sf(left, df)? }),
    };
    let (greater, less) = (normal::sf(z)?, normal::cdf(z)?);
    Ok(CochranArmitage {
        z,
        slope: of_range,
        normal: TailProbabilities { both: (2.0 * greater.min(less)).min(1.0), greater, less },
        exact: counted(responders, sizes, &x),
        chi_squared: departure(0.0),
        lack_of_fit,
    })
}

/// The scores moved and scaled to the range from 0 to 1, which changes no test.
fn from_0_to_1(scores: &[f64]) -> Result<Vec<f64>, NoProportionTrend> {
    let (first, last) = (scores[0], scores[scores.len() - 1]);
    let x: Vec<f64> = scores.iter().map(|x| (x - first) / (last - first)).collect();
    let rises = x.windows(2).all(|pair| pair[0] < pair[1]);
    if rises && (last - first).is_finite() { Ok(x) } else { Err(NoProportionTrend::NotFinite) }
}

/// For each number of responders, the possible sums of whole scores with their weights, sums ascending.
type Sums = Vec<Vec<(i64, f64)>>;

/// The exact p-values for scores from 0 to 1; `None` where counting would take too long.
fn counted(responders: &[u32], sizes: &[u32], x: &[f64]) -> Option<TailProbabilities> {
    let all: usize = responders.iter().map(|r| *r as usize).sum();
    let total: usize = sizes.iter().map(|n| *n as usize).sum();
    let (scores, slack) = whole(x, all)?;
    let observed: i64 = responders.iter().zip(&scores).map(|(r, a)| i64::from(*r) * a).sum();
    let odds = all as f64 / (total - all) as f64;
    let mut budget = MOST_SUMS;
    let half = sizes.len() / 2;
    let mut side = |levels: std::ops::Range<usize>| -> Option<Sums> {
        let mut sums: Sums = vec![vec![(0, 1.0)]];
        for level in levels {
            sums = with_level(&sums, sizes[level] as usize, scores[level], odds, all, &mut budget)?;
        }
        Some(sums)
    };
    let (lower_half, upper_half) = (side(0..half)?, side(half..sizes.len())?);
    let (mut everything, mut greater, mut less) = (0.0, 0.0, 0.0);
    for (m, one) in lower_half.iter().enumerate() {
        let Some(other) = all.checked_sub(m).and_then(|rest| upper_half.get(rest)) else { continue };
        let weight = |sums: &[(i64, f64)]| sums.iter().map(|(_, w)| w).sum::<f64>();
        everything += weight(one) * weight(other);
        // As the sum of the lower half grows, that of the upper half may be the smaller.
        let (mut from, mut reached) = (other.len(), 0.0);
        for (sum, w) in one {
            while from > 0 && sum + other[from - 1].0 >= observed - slack {
                from -= 1;
                reached += other[from].1;
            }
            greater += w * reached;
        }
        let (mut to, mut reached) = (0, 0.0);
        for (sum, w) in one.iter().rev() {
            while to < other.len() && sum + other[to].0 <= observed + slack {
                reached += other[to].1;
                to += 1;
            }
            less += w * reached;
        }
    }
    let (greater, less) = ((greater / everything).min(1.0), (less / everything).min(1.0));
    let usable = everything > 0.0 && greater > 0.0 && less > 0.0;
    usable.then(|| TailProbabilities { both: (2.0 * greater.min(less)).min(1.0), greater, less })
}

/// The sums with one more level of `size` observations; `None` when the budget of additions is spent.
fn with_level(
    sums: &Sums,
    size: usize,
    score: i64,
    odds: f64,
    most: usize,
    budget: &mut usize,
) -> Option<Sums> {
    let states: usize = sums.iter().map(Vec::len).sum();
    *budget = budget.checked_sub(states.checked_mul(size + 1)?)?;
    let weights = binomial(size, odds);
    let count = (sums.len() - 1 + size).min(most) + 1;
    let mut next: Sums = Vec::with_capacity(count);
    for after in 0..count {
        let mut entries = Vec::new();
        for more in after.saturating_sub(sums.len() - 1)..=after.min(size) {
            let shift = score * more as i64;
            entries.extend(sums[after - more].iter().map(|(sum, w)| (sum + shift, w * weights[more])));
        }
        next.push(merged(entries));
    }
    Some(next)
}

/// Entries of equal sums put together, ascending: by a place for each possible sum where these are few, else by sorting.
fn merged(mut entries: Vec<(i64, f64)>) -> Vec<(i64, f64)> {
    let least = entries.iter().map(|entry| entry.0).min().unwrap_or(0);
    let span = entries.iter().map(|entry| entry.0 - least).max().unwrap_or(0) as usize + 1;
    if span <= 4 * entries.len() {
        let mut places = vec![0.0; span];
        entries.iter().for_each(|(sum, w)| places[(sum - least) as usize] += w);
        let filled = places.into_iter().enumerate().filter(|(_, w)| *w > 0.0);
        return filled.map(|(place, w)| (least + place as i64, w)).collect();
    }
    entries.sort_by_key(|entry| entry.0);
    entries.dedup_by(|later, earlier| {
        let same = later.0 == earlier.0;
        if same {
            earlier.1 += later.1;
        }
        same
    });
    entries
}

/// C(size, r) odds^r for r = 0..=size, divided by the largest of them: given the total of responders, the odds cancel, and with those
/// of all levels together the likely numbers have weights near 1.
fn binomial(size: usize, odds: f64) -> Vec<f64> {
    let ratio = |r: usize| (size - r) as f64 / (r + 1) as f64 * odds;
    let mode = (0..size).find(|r| ratio(*r) < 1.0).unwrap_or(size);
    let mut weights = vec![1.0; size + 1];
    for r in mode..size {
        weights[r + 1] = weights[r] * ratio(r);
    }
    for r in (0..mode).rev() {
        weights[r] = weights[r + 1] / ratio(r);
    }
    weights
}

/// Scores from 0 to 1 as whole numbers, and by how much sums of `count` of them that are equal can differ; `None` for more sums than
/// whole numbers hold.
fn whole(x: &[f64], count: usize) -> Option<(Vec<i64>, i64)> {
    // 2^40 times 2^20 responders stay below 2^63.
    if count > 1 << 20 {
        return None;
    }
    let unit = x.iter().try_fold(1_u64, |unit, x| {
        let denominator = denominator(*x)?;
        let (mut a, mut b) = (unit, denominator);
        while b != 0 {
            (a, b) = (b, a % b);
        }
        (unit / a).checked_mul(denominator).filter(|unit| *unit <= 1_000_000_000)
    });
    let (scale, slack) = match unit {
        Some(unit) => (unit as f64, 0),
        // Half a unit for each responder, on either side.
        None => (libm::ldexp(1.0, 40), count as i64),
    };
    Some((x.iter().map(|x| libm::round(x * scale) as i64).collect(), slack))
}

/// The smallest denominator up to 10000 of a fraction within 1e-13 of a number from 0 to 1, by its continued fraction.
fn denominator(x: f64) -> Option<u64> {
    let (mut rest, mut before, mut found) = (x, 0_u64, 1_u64);
    while found <= 10_000 {
        if (x * found as f64 - libm::round(x * found as f64)).abs() <= 1e-13 * found as f64 {
            return Some(found);
        }
        let whole = libm::floor(rest);
        rest = 1.0 / (rest - whole);
        if rest.is_nan() || rest >= 1e5 {
            return None;
        }
        (before, found) = (found, libm::floor(rest) as u64 * found + before);
    }
    None
}

fn check(responders: &[u32], sizes: &[u32], scores: &[f64]) -> Result<(), NoProportionTrend> {
    if responders.len() != sizes.len() || scores.len() != sizes.len() {
        let (responders, sizes, scores) = (responders.len(), sizes.len(), scores.len());
        return Err(NoProportionTrend::Count { responders, sizes, scores });
    }
    if sizes.len() < 2 {
        return Err(NoProportionTrend::TooFewLevels { levels: sizes.len() });
    }
    if let Some(level) = sizes.iter().position(|n| *n == 0) {
        return Err(NoProportionTrend::EmptyLevel { level });
    }
    if let Some(level) = (0..sizes.len()).find(|level| responders[*level] > sizes[*level]) {
        let (responders, size) = (responders[level], sizes[level]);
        return Err(NoProportionTrend::TooMany { level, responders, size });
    }
    let falls = |pair: &&[f64]| !(pair[0] < pair[1] && pair[0].is_finite() && pair[1].is_finite());
    if let Some(pair) = scores.windows(2).find(falls) {
        return Err(NoProportionTrend::NotIncreasing { before: pair[0], after: pair[1] });
    }
    if responders.iter().all(|r| *r == 0) {
        return Err(NoProportionTrend::NoneRespond);
    }
    if responders == sizes {
        return Err(NoProportionTrend::AllRespond);
    }
    Ok(())
}
