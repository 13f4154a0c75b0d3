//! Decides every comparison of a family once.

use super::decision::{self, Decision};
use super::detectable::Detectable;
use super::letters::letters;
use super::long::{Long, Worked};
use super::ordered::Order;
use super::result::{CannotCompare, ComparisonRow, Comparisons, IntervalKind};
use super::row_test::{self, Test};
use super::setting::{Basis, Claim, Family, Resampling, Setting, Sides, Standardise};
use super::{Adjust, range, row_effects};
use crate::methods::contrasts::{Contrast, Set};
use crate::methods::slices::{Advance, Progress};
use crate::study::{DegreesOfFreedom, Estimates, Sample, Summary, Variances};

/// The power that a detectable difference is detected with.
const POWER: f64 = 0.8;

/// What is to be compared, and how.
#[derive(Debug, Clone, Copy)]
pub struct Request<'a> {
    /// The levels' names.
    pub labels: &'a [String],
    /// Means with their covariance; ranks can do without.
    pub estimates: Option<&'a Estimates>,
    /// For the standard deviations of effect sizes; without it there are none.
    pub summary: Option<&'a Summary>,
    /// Every value, for ranks and rearrangements.
    pub sample: Option<&'a Sample>,
    /// The whole family: its size is their number.
    pub contrasts: &'a [Contrast],
    pub family: Family,
    pub basis: Basis,
    pub adjust: Adjust,
    pub sides: Sides,
    pub claim: Claim,
    /// For the ordered procedures.
    pub order: Option<&'a Order>,
    /// `None` for all levels under equal variances, and those compared under unequal ones.
    pub standardise: Option<Standardise>,
    pub resampling: Resampling,
    /// Error rate, between 0 and 1.
    pub alpha: f64,
    /// Confidence of the intervals; 1 - alpha where they are to agree with the decisions.
    pub confidence: f64,
}

impl<'a> Request<'a> {
    /// Two-sided tests of the means at 5 %, without effect sizes.
    pub fn of_means(
        estimates: &'a Estimates,
        contrasts: &'a [Contrast],
        family: Family,
        adjust: Adjust,
    ) -> Self {
        Self {
            labels: &estimates.labels,
            estimates: Some(estimates),
            summary: None,
            sample: None,
            contrasts,
            family,
            basis: Basis::Means,
            adjust,
            sides: Sides::Both,
            claim: Claim::Difference,
            order: None,
            standardise: None,
            resampling: Resampling::default(),
            alpha: 0.05,
            confidence: 0.95,
        }
    }

    /// What it depends on whether the procedure suits.
    pub fn setting(&self) -> Setting {
        let Self { family, basis, sides, claim, .. } = *self;
        Setting { family, basis, variances: self.variances(), sides, claim }
    }

    /// The estimates, for a basis that cannot do without.
    pub(super) fn estimates(&self) -> Result<&'a Estimates, CannotCompare> {
        self.estimates.ok_or(CannotCompare::NoMeans)
    }

    /// What the intervals leave outside: alpha to the last bit where their confidence is 1 - alpha.
    pub(super) fn outside(&self) -> f64 {
        let outside = 1.0 - self.confidence;
        if (outside - self.alpha).abs() < 1e-12 { self.alpha } else { outside }
    }

    pub(super) fn variances(&self) -> Variances {
        match self.estimates.map(|estimates| &estimates.df) {
            Some(DegreesOfFreedom::PerMean(_)) => Variances::Unequal,
            _ => Variances::Equal,
        }
    }
}

/// The decision on every comparison of the family.
///
/// Hypotheses: each contrast of the population means is zero (or not beyond zero on the side asked for; or not on the
/// claimed side of its margin); with ranks and rearrangements, the levels of a comparison have one distribution. What
/// is controlled depends on `adjust` ([`Adjust::error_rate`]); with one error term the t statistics share it and its
/// df, with a variance for each mean every row has Satterthwaite's df.
///
/// # Errors
/// [`CannotCompare`] where the procedure does not suit what is asked, the family is empty, or the numbers are too
/// extreme.
pub fn compare(request: &Request) -> Result<Comparisons, CannotCompare> {
    let mut comparing = Comparing::new(request)?;
    while comparing.advance()?.is_some() {}
    comparing.conclude(request)
}

/// A family that is being decided. Joint distributions and rearrangements take long: they advance by slices.
#[derive(Debug)]
pub struct Comparing {
    tests: Vec<Test>,
    long: Option<Long>,
    seed: u64,
    worked: Option<Worked>,
}

impl Comparing {
    /// Every comparison's own test, and the long work that the procedure needs.
    ///
    /// # Errors
    /// As [`compare`].
    pub fn new(request: &Request) -> Result<Self, CannotCompare> {
        let setting = request.setting();
        if let Some(reason) = request.adjust.unsuitable(&setting) {
            return Err(CannotCompare::unsuitable(reason, &setting));
        }
        if request.contrasts.is_empty() {
            return Err(CannotCompare::Empty);
        }
        let tests = row_test::tests(request)?;
        let long = Long::of(request)?;
        Ok(Self { tests, long, seed: request.resampling.seed, worked: None })
    }

    /// One slice of the long work; `None` when nothing is left of it.
    ///
    /// # Errors
    /// [`CannotCompare`] where the work comes to no result.
    pub fn advance(&mut self) -> Result<Option<Progress>, CannotCompare> {
        let Some(long) = &mut self.long else { return Ok(None) };
        match long.advance(self.seed) {
            Advance::Working(progress) => Ok(Some(progress)),
            Advance::Done(worked) => {
                self.worked = Some(worked?);
                self.long = None;
                Ok(None)
            }
        }
    }

    /// The decisions, after the long work; `request` is the one that it was made for.
    ///
    /// # Errors
    /// As [`compare`].
    pub fn conclude(mut self, request: &Request) -> Result<Comparisons, CannotCompare> {
        if let Some(raw) = self.worked.as_ref().and_then(|worked| worked.raw.as_ref()) {
            for (test, raw) in self.tests.iter_mut().zip(raw) {
                (test.p, test.p_counted) = (raw.p, raw.counted);
            }
        }
        let decision = decision::decide(request, &self.tests, self.worked.as_ref())?;
        let mut rows =
            Rows { request, decision: &decision, detectable: Detectable::with_power(POWER, request.sides)? };
        let rows =
            (0..self.tests.len()).map(|i| rows.row(&self.tests[i], i)).collect::<Result<Vec<_>, _>>()?;
        Ok(Comparisons {
            adjust: request.adjust,
            family: request.family,
            basis: request.basis,
            claim: request.claim,
            family_size: rows.len(),
            sides: request.sides,
            variances: request.variances(),
            alpha: request.alpha,
            confidence: request.confidence,
            interval_kind: decision::interval_kind(request),
            critical: common(rows.iter().map(|row| row.critical)),
            alpha_per_comparison: common(rows.iter().map(|row| row.alpha)),
            disagreeing: (0..rows.len()).filter(|i| disagrees(&rows[*i], request)).collect(),
            letters: lettered(request, &rows),
            path: decision.path,
            rearranged: self.worked.and_then(|worked| worked.rearranged),
            rows,
        })
    }
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

/// Bounds that go with an ordered decision agree with it by their making: they are open where they end at the border of the
/// hypothesis.
fn disagrees(row: &ComparisonRow, request: &Request) -> bool {
    if decision::interval_kind(request) == IntervalKind::Compatible {
        return false;
    }
    row.interval.is_some_and(|interval| interval.supports(request.claim, request.sides) != row.rejected)
}

/// The one value of all, where there is one.
fn common(mut values: impl Iterator<Item = Option<f64>>) -> Option<f64> {
    let first = values.next()??;
    values.all(|value| value == Some(first)).then_some(first)
}

/// The letters of all pairs compared to both sides; `None` for any other family, and where they would be too many to read.
fn lettered(request: &Request, rows: &[ComparisonRow]) -> Option<super::letters::Letters> {
    let both = request.sides == Sides::Both && request.claim == Claim::Difference;
    if request.family != Family::Set(Set::AllPairs) || !both {
        return None;
    }
    let k = request.labels.len();
    let place = |i: usize, j: usize| i * (2 * k - i - 1) / 2 + (j - i - 1);
    let means: Vec<f64> = match (request.estimates, request.sample) {
        (Some(estimates), _) => estimates.means.clone(),
        (None, Some(sample)) => sample.summary().groups.iter().map(|group| group.mean).collect(),
        (None, None) => return None,
    };
    letters(k, &means, |i, j| rows[place(i.min(j), i.max(j))].rejected).ok()
}

/// Makes the rows of a result.
struct Rows<'a> {
    request: &'a Request<'a>,
    decision: &'a Decision,
    detectable: Detectable,
}

impl Rows<'_> {
    fn row(&mut self, test: &Test, i: usize) -> Result<ComparisonRow, CannotCompare> {
        let (request, decision) = (self.request, self.decision);
        let on_range = matches!(
            request.adjust,
            Adjust::Tukey | Adjust::GamesHowell | Adjust::NewmanKeuls | Adjust::RyanEinotGabrielWelsch
        );
        let scale = if on_range { std::f64::consts::SQRT_2 } else { 1.0 };
        let reach = decision.reach[i];
        let shift = row_effects::shift(request, test, reach)?;
        let statistic_name = match request.basis {
            _ if on_range => "q",
            Basis::Ranks(_) => "z",
            _ => "t",
        };
        Ok(ComparisonRow {
            name: test.name.clone(),
            words: test.words.clone(),
            coefficients: test.coefficients.clone(),
            estimate: shift.map_or(test.estimate, |shift| shift.estimate),
            se: test.se,
            df: test.df,
            t: test.t,
            statistic: if on_range { range::q(test.t) } else { test.t },
            statistic_name,
            p: test.p,
            p_counted: test.p_counted,
            p_adjusted: decision.adjusted[i],
            p_error: decision.errors[i],
            alpha: decision.alphas[i],
            rejected: decision.adjusted[i] <= request.alpha,
            critical: reach.critical().map(|critical| critical * scale),
            interval: row_effects::interval(request, test, reach, shift.as_ref()),
            effects: row_effects::effects(request, test, reach)?,
            detectable: self.detectable(test, reach)?,
        })
    }

    /// Only for differences of means: a margin or a rank has no difference of means to detect.
    fn detectable(&mut self, test: &Test, reach: decision::Reach) -> Result<Option<f64>, CannotCompare> {
        let means = self.request.basis == Basis::Means && self.request.claim == Claim::Difference;
        match (reach.critical(), test.se, self.request.summary) {
            (Some(critical), Some(se), Some(_)) if means => {
                Ok(Some(self.detectable.difference(critical, test.df, se)?))
            }
            _ => Ok(None),
        }
    }
}
