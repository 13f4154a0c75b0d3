//! What a procedure makes of a family's tests: adjusted p-values, the levels at which the raw ones were judged, and how
//! far the intervals reach.

use super::compare::Request;
use super::graph::{BoundLevel, GraphDecision};
use super::long::Worked;
use super::ordered::{self, InOrder};
use super::p_values::{self, PValueMethod};
use super::ranges::{OrderedMeans, Stepwise};
use super::result::IntervalKind;
use super::row_test::Test;
use super::setting::{Basis, Family, Ranking, Sides};
use super::single_step::ready;
use super::{Adjust, CannotCompare, control, protected, step_down_control};
use crate::methods::contrasts::Set;
use crate::methods::departure;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::student_t;

/// A family decided, without the rows' own numbers.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Decision {
    pub adjusted: Vec<f64>,
    /// Bound on the error of each, or its standard error.
    pub errors: Vec<Option<f64>>,
    /// The level at which each raw p-value is judged, where there is one.
    pub alphas: Vec<Option<f64>>,
    pub reach: Vec<Reach>,
    /// How an ordered procedure went, in its own order.
    pub path: Option<GraphDecision>,
}

/// How far a row's interval reaches.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Reach {
    /// There is no interval.
    None,
    /// This many standard errors, which leaves this probability outside on a side where the row stands alone.
    Errors { critical: f64, outside: f64 },
    /// The bound is the value under the hypothesis: the row is rejected, and the procedure says no more.
    Border,
    /// As `Errors`, but no further from the hypothesis than its border.
    AtLeastBorder { critical: f64, outside: f64 },
}

impl Reach {
    /// The number of standard errors, where there is one.
    pub fn critical(self) -> Option<f64> {
        match self {
            Self::Errors { critical, .. } | Self::AtLeastBorder { critical, .. } => Some(critical),
            Self::None | Self::Border => None,
        }
    }
}

/// The decision on tests whose raw p-values are known.
pub(super) fn decide(
    request: &Request,
    tests: &[Test],
    worked: Option<&Worked>,
) -> Result<Decision, CannotCompare> {
    let raw: Vec<f64> = tests.iter().map(|test| test.p).collect();
    match request.adjust {
        Adjust::PValues(method) => by_p_values(request, tests, &raw, method),
        adjust if adjust.ordered() => in_order(request, tests, &raw),
        Adjust::MaxT | Adjust::StepDownMaxT => by_worked(request, tests, worked),
        Adjust::NewmanKeuls | Adjust::RyanEinotGabrielWelsch => {
            let adjusted = ordered_means(request, tests)?;
            beside(request, tests, adjusted, Adjust::Tukey)
        }
        Adjust::StepDownDunnett => step_down_dunnett(request, tests),
        Adjust::LeastSignificantDifference => behind_overall(request, tests, &raw),
        adjust => by_itself(request, tests, adjust),
    }
}

/// What the intervals of the procedure hold for.
pub(super) fn interval_kind(request: &Request) -> IntervalKind {
    if matches!(request.basis, Basis::Permutation | Basis::Ranks(Ranking::Joint)) {
        return IntervalKind::None;
    }
    let by = |method| IntervalKind::SimultaneousBy(Adjust::PValues(method));
    match request.adjust {
        Adjust::PValues(method) => match method {
            PValueMethod::Bonferroni | PValueMethod::Sidak => IntervalKind::Simultaneous,
            PValueMethod::Holm | PValueMethod::Hochberg | PValueMethod::Hommel => {
                by(PValueMethod::Bonferroni)
            }
            PValueMethod::HolmSidak => by(PValueMethod::Sidak),
            PValueMethod::None | PValueMethod::BenjaminiHochberg | PValueMethod::BenjaminiYekutieli => {
                IntervalKind::PerComparison
            }
        },
        Adjust::LeastSignificantDifference => IntervalKind::PerComparison,
        Adjust::NewmanKeuls | Adjust::RyanEinotGabrielWelsch => IntervalKind::SimultaneousBy(Adjust::Tukey),
        Adjust::StepDownDunnett => IntervalKind::SimultaneousBy(Adjust::Dunnett),
        Adjust::StepDownMaxT => IntervalKind::SimultaneousBy(Adjust::MaxT),
        adjust if adjust.ordered() && (request.sides == Sides::Both) => by(PValueMethod::Bonferroni),
        adjust if adjust.ordered() => IntervalKind::Compatible,
        _ => IntervalKind::Simultaneous,
    }
}

fn by_p_values(
    request: &Request,
    tests: &[Test],
    raw: &[f64],
    method: PValueMethod,
) -> Result<Decision, CannotCompare> {
    let levels = p_values::alpha_per_comparison(raw, method, request.alpha);
    let outside = request.outside();
    let m = tests.len() as f64;
    let each = match interval_kind(request) {
        IntervalKind::None => None,
        IntervalKind::PerComparison => Some(outside),
        _ if matches!(method, PValueMethod::Sidak | PValueMethod::HolmSidak) => {
            Some(p_values::sidak_level(outside, m))
        }
        _ => Some(outside / m),
    };
    Ok(Decision {
        adjusted: p_values::adjusted(raw, method),
        errors: vec![None; tests.len()],
        alphas: levels.map_or(vec![None; tests.len()], |levels| levels.into_iter().map(Some).collect()),
        reach: match each {
            None => vec![Reach::None; tests.len()],
            Some(each) => reaches(request, tests, |_| each)?,
        },
        path: None,
    })
}

/// How far intervals reach that leave `each(row)` outside by themselves.
fn reaches(
    request: &Request,
    tests: &[Test],
    each: impl Fn(usize) -> f64,
) -> Result<Vec<Reach>, OutOfDomain> {
    // Two one-sided tests at `each` go with an interval that leaves `each` outside on either side.
    let halved = request.sides == Sides::Both && !request.claim.is_equivalence();
    let mut last: Option<(f64, f64, f64)> = None;
    let mut reaches = Vec::with_capacity(tests.len());
    for (i, test) in tests.iter().enumerate() {
        let outside = if halved { each(i) / 2.0 } else { each(i) };
        let critical = match last.filter(|(at, df, _)| *at == outside && *df == test.df) {
            Some((_, _, critical)) => critical,
            None => student_t::upper_quantile(outside, test.df)?,
        };
        last = Some((outside, test.df, critical));
        reaches.push(Reach::Errors { critical, outside });
    }
    Ok(reaches)
}

/// Fixed sequence, fallback and graph: p-values in a declared order.
fn in_order(request: &Request, tests: &[Test], raw: &[f64]) -> Result<Decision, CannotCompare> {
    let InOrder { adjusted, levels, path } = ordered::in_order(request.order, raw, request.alpha)?;
    let order = request.order.ok_or(CannotCompare::NoOrder)?;
    let reach = match interval_kind(request) {
        IntervalKind::None => vec![Reach::None; tests.len()],
        IntervalKind::Compatible => {
            let levels = order.graph.compatible_levels(&path);
            let mut reach = vec![Reach::None; tests.len()];
            for (row, level) in order.places.iter().zip(levels) {
                reach[*row] = bound(request, &tests[*row], level)?;
            }
            reach
        }
        _ => reaches(request, tests, |_| request.outside() / tests.len() as f64)?,
    };
    Ok(Decision {
        adjusted,
        errors: vec![None; tests.len()],
        alphas: levels.into_iter().map(Some).collect(),
        reach,
        path: Some(path),
    })
}

/// The one-sided bound that goes with an ordered decision. Its level is the decision's, whatever the confidence.
fn bound(request: &Request, test: &Test, level: BoundLevel) -> Result<Reach, OutOfDomain> {
    let scale = request.outside() / request.alpha;
    let critical = |alpha: f64| student_t::upper_quantile(alpha * scale, test.df);
    Ok(match level {
        BoundLevel::Rejected => Reach::Border,
        BoundLevel::Retained { alpha } if alpha <= 0.0 => Reach::None,
        BoundLevel::AllRejected { alpha } if alpha <= 0.0 => Reach::Border,
        BoundLevel::Retained { alpha } => {
            Reach::Errors { critical: critical(alpha)?, outside: alpha * scale }
        }
        BoundLevel::AllRejected { alpha } => {
            Reach::AtLeastBorder { critical: critical(alpha)?, outside: alpha * scale }
        }
    })
}

fn by_itself(request: &Request, tests: &[Test], adjust: Adjust) -> Result<Decision, CannotCompare> {
    let mut procedure = ready(request, adjust)?;
    let relative = procedure.relative_error();
    // Integration leaves errors of a few units in the last place; an adjusted p-value is never below its raw one.
    let found = procedure.adjusted_p(tests)?;
    let adjusted: Vec<f64> = found.iter().zip(tests).map(|(p, test)| p.clamp(test.p, 1.0)).collect();
    let outside = request.outside();
    let critical = procedure.critical(outside, tests)?;
    let deciding = match outside == request.alpha {
        true => critical.clone(),
        false => procedure.critical(request.alpha, tests)?,
    };
    Ok(Decision {
        errors: adjusted.iter().map(|p| relative.map(|relative| relative * p)).collect(),
        adjusted,
        alphas: levels_of(&deciding, tests, request.sides)?,
        reach: simultaneous(&critical, tests)?,
        path: None,
    })
}

/// The raw p-value of a comparison that just reaches the critical value of the decision is its alpha.
fn levels_of(critical: &[f64], tests: &[Test], sides: Sides) -> Result<Vec<Option<f64>>, OutOfDomain> {
    tests.iter().zip(critical).map(|(test, critical)| beyond(*critical, test.df, sides).map(Some)).collect()
}

fn simultaneous(critical: &[f64], tests: &[Test]) -> Result<Vec<Reach>, OutOfDomain> {
    let each = tests.iter().zip(critical);
    each.map(|(test, critical)| {
        Ok(Reach::Errors { critical: *critical, outside: student_t::sf(*critical, test.df)? })
    })
    .collect()
}

/// A stepwise decision with the intervals of a single-step relative.
fn beside(
    request: &Request,
    tests: &[Test],
    adjusted: Vec<f64>,
    relative: Adjust,
) -> Result<Decision, CannotCompare> {
    let mut procedure = ready(request, relative)?;
    let critical = procedure.critical(request.outside(), tests)?;
    let error = procedure.relative_error();
    Ok(Decision {
        errors: adjusted.iter().map(|p| error.map(|error| error * p)).collect(),
        adjusted: adjusted.iter().zip(tests).map(|(p, test)| p.clamp(test.p, 1.0)).collect(),
        alphas: vec![None; tests.len()],
        reach: simultaneous(&critical, tests)?,
        path: None,
    })
}

fn ordered_means(request: &Request, tests: &[Test]) -> Result<Vec<f64>, CannotCompare> {
    let estimates = request.estimates()?;
    let procedure = match request.adjust {
        Adjust::NewmanKeuls => Stepwise::NewmanKeuls,
        _ => Stepwise::RyanEinotGabrielWelsch,
    };
    let ms_within = estimates.covariance[(0, 0)] * estimates.n[0] as f64;
    let df = tests.first().map_or(f64::INFINITY, |test| test.df);
    Ok(OrderedMeans { means: &estimates.means, n: &estimates.n, ms_within, df }.adjusted_p(procedure)?)
}

fn step_down_dunnett(request: &Request, tests: &[Test]) -> Result<Decision, CannotCompare> {
    let Family::Set(Set::AgainstControl(at)) = request.family else { return Err(CannotCompare::Empty) };
    let loadings = control::loadings(request.estimates()?, at);
    let t: Vec<f64> = tests.iter().map(|test| test.t).collect();
    let df = tests.first().map_or(f64::INFINITY, |test| test.df);
    let adjusted = step_down_control::adjusted(&t, &loadings, df, request.sides)?;
    let judged = step_down_control::judged(&t, &loadings, df, request.sides, request.alpha)?;
    let decision = beside(request, tests, adjusted, Adjust::Dunnett)?;
    Ok(Decision { alphas: judged.iter().map(|judged| Some(judged.level)).collect(), ..decision })
}

fn behind_overall(request: &Request, tests: &[Test], raw: &[f64]) -> Result<Decision, CannotCompare> {
    let overall = departure::overall(request.estimates()?)?.map_or(1.0, |overall| overall.p);
    let reach = reaches(request, tests, |_| request.outside())?;
    let alphas = vec![Some(request.alpha); tests.len()];
    let adjusted = protected::adjusted(overall, raw);
    Ok(Decision { adjusted, errors: vec![None; tests.len()], alphas, reach, path: None })
}

/// Adjusted p-values that long work has found.
fn by_worked(request: &Request, tests: &[Test], worked: Option<&Worked>) -> Result<Decision, CannotCompare> {
    let worked = worked.ok_or(CannotCompare::Empty)?;
    let adjusted = worked.adjusted.iter().zip(tests).map(|(p, test)| p.clamp(test.p, 1.0)).collect();
    let alphas = match (&worked.deciding, request.adjust.single_step()) {
        (Some(critical), true) => levels_of(critical, tests, request.sides)?,
        _ => vec![None; tests.len()],
    };
    let reach = match &worked.critical {
        Some(critical) => simultaneous(critical, tests)?,
        None => vec![Reach::None; tests.len()],
    };
    Ok(Decision { adjusted, errors: worked.errors.clone(), alphas, reach, path: None })
}

/// The probability that t on `df` goes beyond `critical` standard errors on the sides that count.
fn beyond(critical: f64, df: f64, sides: Sides) -> Result<f64, OutOfDomain> {
    let upper = student_t::sf(critical, df)?;
    Ok(if sides == Sides::Both { (2.0 * upper).min(1.0) } else { upper })
}
