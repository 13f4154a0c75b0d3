//! The long work of a family: joint distributions and rearrangements.

use super::compare::Request;
use super::joint::{Joint, JointWork, Procedure};
use super::permutation::{Closure, PermutationComparisons, PermutationRequest, PermutationWork};
use super::setting::{Basis, Family};
use super::{Adjust, CannotCompare};
use crate::methods::contrasts::Set;
use crate::methods::slices::{Advance, InSlices};
use crate::numerics::OutOfDomain;

/// Most comparisons that max-t steps down through where what is left at a step has no quick distribution: all pairs of 15
/// levels take about half a minute, and the time grows with more than the cube of their number.
const MOST_STEPS: usize = 105;

/// Work that a procedure needs before it can decide.
#[derive(Debug)]
pub(super) enum Long {
    /// The joint distribution at the level of the intervals; where the decision has another level, its critical values
    /// come from a second work.
    Joint {
        now: Box<JointWork>,
        deciding: Option<Box<JointWork>>,
        found: Option<Joint>,
    },
    Permutation(Box<PermutationWork>),
}

/// What the long work has found, in the order of the tests.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Worked {
    /// Empty where only raw p-values were asked for.
    pub adjusted: Vec<f64>,
    /// Bound on the error of each adjusted p-value, or its standard error.
    pub errors: Vec<Option<f64>>,
    /// The reach of single-step intervals in standard errors; `None` where there are no intervals.
    pub critical: Option<Vec<f64>>,
    /// The same at the error rate of the decision.
    pub deciding: Option<Vec<f64>>,
    /// Raw p-values that the work has found; `None` where those of the tests stand.
    pub raw: Option<Vec<RawP>>,
    pub rearranged: Option<Rearranged>,
}

/// A raw p-value from rearrangements.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct RawP {
    pub p: f64,
    pub counted: bool,
}

/// How the values of a family were rearranged.
#[derive(Debug, Clone, PartialEq)]
pub struct Rearranged {
    /// Whether all rearrangements were counted for every comparison.
    pub counted: bool,
    /// Rearrangements drawn where they were too many to be counted.
    pub repeats: u64,
    pub seed: u64,
    /// Different sets of levels within which values were rearranged.
    pub partitions: usize,
    /// Of the raw p-values, by row; 0 where all rearrangements were counted.
    pub raw_errors: Vec<f64>,
}

impl Long {
    /// The long work of the request; `None` where its procedure has none.
    pub fn of(request: &Request) -> Result<Option<Self>, CannotCompare> {
        let rows: Vec<Vec<f64>> =
            request.contrasts.iter().map(|contrast| contrast.coefficients.clone()).collect();
        if request.basis == Basis::Permutation {
            return Self::permutation(request, &rows).map(Some);
        }
        let procedure = match request.adjust {
            Adjust::MaxT => Procedure::SingleStep,
            Adjust::StepDownMaxT => Procedure::StepDown,
            _ => return Ok(None),
        };
        let against_control = matches!(request.family, Family::Set(Set::AgainstControl(_)));
        if procedure == Procedure::StepDown && rows.len() > MOST_STEPS && !against_control {
            return Err(CannotCompare::TooManySteps { comparisons: rows.len(), most: MOST_STEPS });
        }
        let (estimates, null) = (request.estimates()?, request.claim.null(request.sides));
        let at = |alpha| -> Result<Box<JointWork>, OutOfDomain> {
            Ok(Box::new(JointWork::new(estimates, &rows, null, request.sides, procedure, alpha)?))
        };
        let outside = request.outside();
        let deciding = if outside == request.alpha { None } else { Some(at(request.alpha)?) };
        Ok(Some(Self::Joint { now: at(outside)?, deciding, found: None }))
    }

    fn permutation(request: &Request, rows: &[Vec<f64>]) -> Result<Self, CannotCompare> {
        let sample = request.sample.ok_or(CannotCompare::NoValues("rearrangements"))?;
        let closure = if request.adjust == Adjust::StepDownMaxT { Closure::Closed } else { Closure::Raw };
        let work = PermutationWork::new(&PermutationRequest {
            labels: request.labels,
            groups: &sample.groups,
            rows,
            sides: request.sides,
            variances: request.variances(),
            repeats: request.resampling.repeats,
            seed: request.resampling.seed,
            closure,
        })?;
        Ok(Self::Permutation(Box::new(work)))
    }

    /// One slice.
    pub fn advance(&mut self, seed: u64) -> Advance<Result<Worked, CannotCompare>> {
        match self {
            Self::Permutation(work) => match work.advance() {
                Advance::Working(progress) => Advance::Working(progress),
                Advance::Done(found) => Advance::Done(Ok(of_permutation(&found, seed))),
            },
            Self::Joint { now, deciding, found } => match now.advance() {
                Advance::Working(progress) => Advance::Working(progress),
                Advance::Done(Err(error)) => Advance::Done(Err(error.into())),
                Advance::Done(Ok(joint)) => match deciding.take() {
                    Some(next) => {
                        let progress = crate::methods::slices::Progress { done: 0.5, estimate: None };
                        (*now, *found) = (next, Some(joint));
                        Advance::Working(progress)
                    }
                    None => Advance::Done(Ok(of_joint(found.take(), joint))),
                },
            },
        }
    }
}

/// `at_intervals` is there where the intervals have a level of their own; `decided` is at the level of the decision.
fn of_joint(at_intervals: Option<Joint>, decided: Joint) -> Worked {
    let critical = |joint: &Joint| joint.rows.iter().map(|row| row.critical).collect::<Vec<_>>();
    Worked {
        adjusted: decided.rows.iter().map(|row| row.p_adjusted).collect(),
        errors: decided.rows.iter().map(|row| Some(row.p_error)).collect(),
        critical: Some(critical(at_intervals.as_ref().unwrap_or(&decided))),
        deciding: Some(critical(&decided)),
        raw: None,
        rearranged: None,
    }
}

fn of_permutation(found: &PermutationComparisons, seed: u64) -> Worked {
    let adjusted = found.rows.iter().filter_map(|row| row.adjusted);
    Worked {
        adjusted: adjusted.clone().map(|share| share.p).collect(),
        errors: adjusted.map(|share| Some(share.standard_error)).collect(),
        critical: None,
        deciding: None,
        raw: Some(found.rows.iter().map(|row| RawP { p: row.raw.p, counted: row.raw.exact }).collect()),
        rearranged: Some(Rearranged {
            counted: found
                .rows
                .iter()
                .all(|row| row.raw.exact && row.adjusted.is_none_or(|share| share.exact)),
            repeats: found.repeats,
            seed,
            partitions: found.partitions,
            raw_errors: found.rows.iter().map(|row| row.raw.standard_error).collect(),
        }),
    }
}
