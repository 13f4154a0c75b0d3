//! The critical value of a family: the root of the smaller tail, found on one set of points.

use super::leader::Side;
use super::refinement::Refinement;
use super::{Answer, Effort, Family, Method};
use crate::numerics::distributions::many_to_one::Sides;
use crate::numerics::distributions::student_t;
use crate::numerics::{OutOfDomain, roots};

/// Points of each lattice for a first root, which only has to be near.
const COARSE: usize = 64;

/// A change of variable.
type Scale = fn(f64) -> f64;

/// The c with the given tails.
pub(super) fn solve(family: &Family, lower: f64, upper: f64, effort: Effort) -> Result<Answer, OutOfDomain> {
    let least = if family.sides() == Sides::Both { 0.0 } else { f64::NEG_INFINITY };
    let known = |value: f64| Answer { value, error: 0.0, points: 0, method: Method::Exact };
    if lower == 0.0 || upper == 0.0 {
        return Ok(known(if lower == 0.0 { least } else { f64::INFINITY }));
    }
    // Bonferroni's bound, sharp in the tail.
    let start = student_t::upper_quantile(upper / family.tails(), family.df())?;
    // Heavy tails are straight in log c, the middle in c: arsinh c is both; from 0 on the logarithm is.
    let (to, from): (Scale, Scale) = match family.sides() {
        Sides::Both => (|c| libm::log(c.max(1e-300)), libm::exp),
        Sides::Greater => (libm::asinh, libm::sinh),
    };
    let side = if upper <= 0.5 { Side::Outside } else { Side::Inside };
    let log_excess = |probability: f64| match side {
        Side::Outside => libm::log(upper / probability),
        Side::Inside => libm::log(probability / lower),
    };
    if family.exact(0.0).is_some() {
        let excess = |x: f64| family.exact(within(from(x))).map_or(0.0, |tails| log_excess(tails.of(side)));
        return Ok(known(from(roots::increasing_secant(excess, to(start), 1.0))));
    }
    let on = |points: usize, c: f64| on_points(family, within(c), side, effort.seed, points);
    let near = from(roots::increasing_secant(
        |x| on(COARSE, from(x)).map_or(0.0, |answer| log_excess(answer.value)),
        to(start),
        1.0,
    ));
    let (points, slope) = points_needed(family, near, side, effort);
    let mut last = None;
    let value = from(roots::increasing_secant(
        |x| {
            last = on(points, from(x));
            last.map_or(0.0, |answer| log_excess(answer.value))
        },
        to(near),
        0.1,
    ));
    let Some(Answer { value: p, error, points, method }) = last else { return Ok(known(value)) };
    let error = error / (p * slope);
    // Where the probability underflows nothing is known of the slope.
    Ok(Answer { value, error: if error.is_finite() { error } else { value.abs() }, points, method })
}

/// A limit inside the range of doubles.
fn within(c: f64) -> f64 {
    c.clamp(f64::MIN, f64::MAX)
}

/// How many points of each lattice the error of the critical value near `c` takes, and by how much the logarithm of the
/// probability falls per unit of c.
fn points_needed(family: &Family, c: f64, side: Side, effort: Effort) -> (usize, f64) {
    let step = 1e-3 * c.abs().max(0.1);
    let value = |c: f64| on_points(family, c, side, effort.seed, COARSE).map_or(0.0, |answer| answer.value);
    let slope = (libm::log(value(c + step) / value(c - step)) / (2.0 * step)).abs();
    let mut refinement = Refinement::of(family.leader(c, side), side, effort.seed, COARSE);
    while refinement.advance() {
        let enough = refinement
            .estimate()
            .is_some_and(|answer| answer.error <= effort.relative_error * answer.value * slope * c.abs());
        if enough || 2 * refinement.points_each() > effort.most_points {
            break;
        }
    }
    (refinement.points_each().max(COARSE), slope)
}

/// The probability of the side on just so many points of each lattice.
fn on_points(family: &Family, c: f64, side: Side, seed: u64, points: usize) -> Option<Answer> {
    let mut refinement = Refinement::of(family.leader(c, side), side, seed, points);
    while refinement.estimate().is_none() && refinement.advance() {}
    refinement.estimate()
}
