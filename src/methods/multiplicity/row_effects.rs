//! A row's interval and effect sizes, each at the row's own critical value.

use super::compare::Request;
use super::decision::Reach;
use super::ranks::shift::{Rejection, Shift};
use super::result::{Bounds, CannotCompare, RowEffects, Sized};
use super::row_test::Test;
use super::setting::{Basis, Family, Sides, Standardise};
use crate::methods::contrasts::Set;
use crate::methods::effect_size::control::GlassDelta;
use crate::methods::effect_size::ratio::{RatioOfMeans, Reach as RatioReach, Zero};
use crate::methods::effect_size::superiority::Superiority;
use crate::methods::effect_size::{Coverage, StandardisedEffect, Standardiser};
use crate::numerics::OutOfDomain;
use crate::study::ContrastEstimate;

/// The shift of a pair of levels ranked by themselves; `None` for any other row.
pub(super) fn shift(request: &Request, test: &Test, reach: Reach) -> Result<Option<Shift>, CannotCompare> {
    let (Some(pair), Some(sample)) = (test.pair, request.sample) else { return Ok(None) };
    let rejection = match reach {
        Reach::Errors { outside, .. } | Reach::AtLeastBorder { outside, .. } if test.p_counted => {
            Rejection::Counted { outside }
        }
        reach => Rejection::Beyond(reach.critical().unwrap_or(f64::INFINITY)),
    };
    let (first, second) = (&sample.groups[pair.first], &sample.groups[pair.second]);
    Ok(Some(Shift::of(first, second, &pair.ranks, rejection, request.sides)?))
}

/// The row's interval; infinite on a side that is not bounded.
pub(super) fn interval(
    request: &Request,
    test: &Test,
    reach: Reach,
    shift: Option<&Shift>,
) -> Option<Bounds> {
    let null = request.claim.null(request.sides);
    let (lower, upper) = match (reach, shift, test.se) {
        (Reach::None, ..) => return None,
        (Reach::Border, ..) => (null, null),
        (_, Some(shift), _) => (shift.interval.lower, shift.interval.upper),
        (_, None, Some(se)) => {
            let reached = reach.critical()? * se;
            (test.estimate - reached, test.estimate + reached)
        }
        (_, None, None) => return None,
    };
    // An ordered procedure that rejects everything bounds each at least at its border.
    let (lower, upper) = match reach {
        Reach::AtLeastBorder { .. } => (lower.max(null), upper.min(null)),
        _ => (lower, upper),
    };
    Some(Bounds {
        lower: if request.sides == Sides::Less { f64::NEG_INFINITY } else { lower },
        upper: if request.sides == Sides::Greater { f64::INFINITY } else { upper },
    })
}

/// Every effect size that the row's basis and family have.
pub(super) fn effects(request: &Request, test: &Test, reach: Reach) -> Result<RowEffects, OutOfDomain> {
    if request.summary.is_none() {
        return Ok(RowEffects::default());
    }
    let Some(coverage) = coverage(request, test, reach)? else { return Ok(RowEffects::default()) };
    Ok(match request.basis {
        Basis::Ranks(_) => {
            RowEffects { superiority: superiority(request, test, coverage), ..RowEffects::default() }
        }
        Basis::Means | Basis::Permutation => RowEffects {
            standardised: standardised(request, test, coverage),
            control_sd: control_sd(request, test, coverage),
            ratio: ratio(request, test, reach),
            superiority: None,
        },
    })
}

/// What the intervals of the row's effects leave outside. Where the procedure has no interval of its own, each stands alone.
fn coverage(request: &Request, test: &Test, reach: Reach) -> Result<Option<Coverage>, OutOfDomain> {
    let alone = request.outside();
    Ok(match (reach, request.sides) {
        (Reach::Border, _) => None,
        (Reach::None, Sides::Both) => Some(Coverage::Both { outside: alone }),
        (Reach::None, Sides::Greater) => Some(Coverage::LowerBound { outside: alone }),
        (Reach::None, Sides::Less) => Some(Coverage::UpperBound { outside: alone }),
        (Reach::Errors { critical, .. } | Reach::AtLeastBorder { critical, .. }, sides) => {
            Some(match sides {
                Sides::Both => Coverage::beyond_both(critical, test.df)?,
                Sides::Greater => Coverage::lower_beyond(critical, test.df)?,
                Sides::Less => Coverage::upper_beyond(critical, test.df)?,
            })
        }
    })
}

fn standardised(request: &Request, test: &Test, coverage: Coverage) -> Option<StandardisedEffect> {
    let summary = request.summary?;
    let standardiser = match request.standardise {
        None => Standardiser::of(summary, request.variances(), &test.coefficients),
        Some(Standardise::AllLevels) => Standardiser::over_all(summary, request.variances()),
        Some(Standardise::LevelsCompared) => {
            Standardiser::over_compared(summary, request.variances(), &test.coefficients)
        }
    }?;
    let contrast = ContrastEstimate { estimate: test.estimate, se: test.se?, df: test.df };
    StandardisedEffect::of(&contrast, &test.coefficients, standardiser, coverage)
}

/// Glass's, for comparisons with a control.
fn control_sd(request: &Request, test: &Test, coverage: Coverage) -> Option<Sized> {
    let Family::Set(Set::AgainstControl(control)) = request.family else { return None };
    let groups = &request.summary?.groups;
    let level = (0..groups.len()).find(|i| *i != control && test.coefficients[*i] != 0.0)?;
    let found = GlassDelta::of(&groups[level], &groups[control], request.variances(), coverage)?;
    Some(Sized { estimate: found.delta, interval: found.interval })
}

fn ratio(request: &Request, test: &Test, reach: Reach) -> Option<Sized> {
    let critical = reach.critical()?;
    let reach = match request.sides {
        Sides::Both => RatioReach::Both(critical),
        Sides::Greater => RatioReach::LowerBound(critical),
        Sides::Less => RatioReach::UpperBound(critical),
    };
    let found = RatioOfMeans::of(request.estimates?, &test.coefficients, reach, Zero::Natural).ok()?;
    Some(Sized { estimate: found.ratio, interval: found.set.interval() })
}

/// For pairs of levels, however they are ranked.
fn superiority(request: &Request, test: &Test, coverage: Coverage) -> Option<Sized> {
    let groups = &request.sample?.groups;
    let only = |sign: f64| {
        let mut which = (0..groups.len()).filter(|i| test.coefficients[*i] * sign > 0.0);
        which.next().filter(|_| which.next().is_none())
    };
    let found = Superiority::of(&groups[only(-1.0)?], &groups[only(1.0)?], coverage)?;
    Some(Sized { estimate: found.a, interval: Some(found.interval) })
}
