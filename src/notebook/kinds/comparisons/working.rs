//! From an ask and its study to decisions, in slices where a procedure takes long.

use super::asked::Asked;
use super::decided::{self, Laid};
use super::{in_force, shares};
use crate::answer::{Precision, number};
use crate::methods::contrasts::partition;
use crate::methods::multiplicity::{
    Adjust, Basis, CannotCompare, Claim, Comparing, Comparisons, Request, Setting, explain, suitable,
};
use crate::methods::slices::{Advance, InSlices, Progress};
use crate::notebook::ask::Ask;
use crate::notebook::diagnostics::{Diagnostic, quoted_choices};
use crate::notebook::kinds::wording::{refused, remedy};
use crate::notebook::outcome::Outcome;
use crate::notebook::work::Evaluation;
use crate::study::{Estimates, Observed, Study, Summary, Variances};
use std::collections::VecDeque;
use std::sync::Arc;

/// The decisions of a study that has data: at once, or the work towards them.
pub fn start(ask: &Ask, asked: Asked, study: Arc<Study>) -> Evaluation {
    let Some(summary) = study.summary() else { return Outcome::mend(Vec::new()).into() };
    if let Some(problem) = no_values(ask, &asked, &study) {
        return Outcome::mend(vec![problem]).into();
    }
    let estimates = match Estimates::one_way(&study.levels.labels, &summary, study.variances) {
        Ok(estimates) => Some(estimates),
        // Ranks need no variance of each level.
        Err(_) if matches!(asked.basis, Basis::Ranks(_)) => None,
        Err(error) => {
            return refused(ask, format!("The comparisons cannot be made: {error}.{}", remedy(&error)))
                .into();
        }
    };
    let left = std::iter::once(asked.adjust).chain(asked.also.iter().copied()).collect();
    let mut deciding =
        Deciding { asked, study, summary, estimates, left, now: None, chosen: None, also: Vec::new() };
    match deciding.advance() {
        Advance::Done(decided) => lay_out(ask, decided).into(),
        Advance::Working(_) => {
            let ask = ask.clone();
            Evaluation::long(deciding, line, move |decided| lay_out(&ask, decided))
        }
    }
}

/// Ranks and rearrangements of a study that has no single values.
fn no_values(ask: &Ask, asked: &Asked, study: &Study) -> Option<Diagnostic> {
    if asked.basis == Basis::Means || matches!(study.observed, Observed::Sample(_)) {
        return None;
    }
    let Asked { family, sides, claim, .. } = *asked;
    let means = Setting { family, basis: Basis::Means, variances: study.variances, sides, claim };
    let names = suitable(&means);
    let message = format!(
        "The basis \"{}\" needs every single value, and the study has only sizes, means and standard deviations. Choose basis = \"means\"; suitable there: {}.",
        asked.basis.word(),
        quoted_choices(names.iter().map(|adjust| adjust.name()))
    );
    Some(Diagnostic::new(message, ask.span("basis"), Some("basis")))
}

/// What the cell says while it works.
fn line(progress: &Progress) -> String {
    let done = number::percent((progress.done * 100.0).floor() / 100.0);
    match progress.estimate {
        Some((estimate, error)) => format!(
            "Working: {done} done; the smallest adjusted p so far is {} \u{b1} {}",
            number::p_value(estimate),
            number::estimate(error, Precision::from_spread(error))
        ),
        None => format!("Working: {done} done"),
    }
}

fn lay_out(ask: &Ask, decided: Result<Decided, Refusal>) -> Outcome {
    match decided {
        Ok(decided) => in_force(decided.outcome(), &decided.asked, Some(decided.study.variances)),
        Err(Refusal { message }) => refused(ask, format!("The comparisons cannot be made: {message}.")),
    }
}

/// Why there are no decisions.
#[derive(Debug)]
struct Refusal {
    message: String,
}

impl From<CannotCompare> for Refusal {
    fn from(error: CannotCompare) -> Self {
        Self { message: error.to_string() }
    }
}

/// The chosen procedure and those beside it, one after the other.
#[derive(Debug)]
struct Deciding {
    asked: Asked,
    study: Arc<Study>,
    summary: Summary,
    estimates: Option<Estimates>,
    /// The chosen one first.
    left: VecDeque<Adjust>,
    now: Option<Comparing>,
    chosen: Option<Comparisons>,
    also: Vec<(Adjust, Vec<f64>)>,
}

impl InSlices for Deciding {
    type Result = Result<Decided, Refusal>;

    fn advance(&mut self) -> Advance<Self::Result> {
        match self.step() {
            Ok(Some(progress)) => Advance::Working(progress),
            Ok(None) => Advance::Done(self.decided()),
            Err(error) => Advance::Done(Err(error.into())),
        }
    }
}

impl Deciding {
    /// Goes on until a slice of long work is done; `None` when nothing is left.
    fn step(&mut self) -> Result<Option<Progress>, CannotCompare> {
        while let Some(adjust) = self.left.front().copied() {
            let mut comparing = match self.now.take() {
                Some(comparing) => comparing,
                None => Comparing::new(&self.request(adjust))?,
            };
            if let Some(progress) = comparing.advance()? {
                self.now = Some(comparing);
                return Ok(Some(self.overall(progress)));
            }
            let found = comparing.conclude(&self.request(adjust))?;
            self.left.pop_front();
            match &self.chosen {
                None => self.chosen = Some(found),
                Some(_) => self.also.push((adjust, found.rows.iter().map(|row| row.p_adjusted).collect())),
            }
        }
        Ok(None)
    }

    /// How far all procedures are together.
    fn overall(&self, progress: Progress) -> Progress {
        let all = 1 + self.asked.also.len();
        let before = all - self.left.len();
        Progress { done: (before as f64 + progress.done) / all as f64, ..progress }
    }

    fn request(&self, adjust: Adjust) -> Request<'_> {
        let asked = &self.asked;
        Request {
            labels: &self.study.levels.labels,
            estimates: self.estimates.as_ref(),
            // Effect sizes belong to the rows of the procedure that decides.
            summary: self.chosen.is_none().then_some(&self.summary),
            sample: match &self.study.observed {
                Observed::Sample(sample) => Some(sample),
                _ => None,
            },
            contrasts: &asked.contrasts,
            family: asked.family,
            basis: asked.basis,
            adjust,
            sides: asked.sides,
            claim: asked.claim,
            order: asked.order.as_ref(),
            standardise: asked.standardise,
            resampling: asked.resampling,
            alpha: asked.alpha,
            confidence: asked.confidence,
        }
    }

    fn decided(&mut self) -> Result<Decided, Refusal> {
        let comparisons = self.chosen.take().ok_or(CannotCompare::Empty)?;
        Ok(Decided {
            asked: self.asked.clone(),
            study: self.study.clone(),
            summary: self.summary.clone(),
            estimates: self.estimates.take(),
            comparisons,
            also: std::mem::take(&mut self.also),
        })
    }
}

/// Everything that was decided, ready to be laid out.
#[derive(Debug)]
struct Decided {
    asked: Asked,
    study: Arc<Study>,
    summary: Summary,
    estimates: Option<Estimates>,
    comparisons: Comparisons,
    also: Vec<(Adjust, Vec<f64>)>,
}

impl Decided {
    fn outcome(&self) -> Outcome {
        let means = self.asked.basis == Basis::Means && self.asked.claim == Claim::Difference;
        let estimates = self.estimates.as_ref();
        let explanation = match estimates.filter(|_| means).map(|it| explain(it, &self.comparisons)) {
            Some(Ok(explanation)) => explanation,
            // Numbers too extreme for an F statistic: the comparisons stand without the explanation.
            Some(Err(_)) | None => None,
        };
        let partition = match self.study.variances {
            Variances::Equal
                if means && shares::worth_splitting(self.asked.family, self.asked.contrasts.len()) =>
            {
                let groups = &self.summary.groups;
                let n: Vec<usize> = groups.iter().map(|group| group.n).collect();
                let means: Vec<f64> = groups.iter().map(|group| group.mean).collect();
                partition(&self.asked.contrasts, &n, &means).ok()
            }
            _ => None,
        };
        decided::outcome(&Laid {
            asked: &self.asked,
            study: &self.study,
            summary: &self.summary,
            estimates,
            comparisons: &self.comparisons,
            precision: self.precision(),
            also: &self.also,
            explanation,
            partition,
        })
    }

    /// From the standard errors; where estimates have none, from what their intervals reach.
    fn precision(&self) -> Precision {
        let spread = self.comparisons.rows.iter().filter_map(|row| {
            let quarter = |bounds: crate::methods::multiplicity::Bounds| (bounds.upper - bounds.lower) / 4.0;
            row.se.or(row.interval.map(quarter).filter(|spread| spread.is_finite() && *spread > 0.0))
        });
        let spread: Vec<f64> = spread.collect();
        match spread.is_empty() {
            // Without any, from the values themselves.
            true => Precision::for_column(
                self.summary.groups.iter().filter_map(|group| Some(group.sd()? / (group.n as f64).sqrt())),
            ),
            false => Precision::for_column(spread),
        }
    }
}
