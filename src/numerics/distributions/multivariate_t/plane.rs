//! Rank 2: a polygon around, or beside, the origin of the plane.
//!
//! What lies outside is cut into cones over the edges, seen from the origin. Beyond an edge at distance d, at x along it
//! from the foot of the perpendicular, lies (1/2π) ∫ d/(d²+x²) P(|T| > √(d²+x²)) dx. An edge that turns its back to the origin
//! counts negative, so that the sum is P(outside), less 1 if the origin is outside itself.

use super::radial::Radial;
use super::region::{HalfSpace, Tails, distance_between};
use crate::numerics::quadrature;
use std::f64::consts::PI;

/// A side of the polygon: its distance from the origin, negative if the origin is on the wrong side, and its ends as
/// distances along it from the foot of the perpendicular.
struct Edge {
    distance: f64,
    from: f64,
    to: f64,
}

/// Both tails for `sides` of which the first `counted` count `weight` times.
pub(super) fn tails(sides: &[HalfSpace], counted: usize, weight: f64, radial: Radial) -> Tails {
    let edges: Vec<Edge> = (0..counted).filter_map(|i| edge(sides, i)).collect();
    let beyond = sum(&edges, radial, |r| radial.tail_in_plane(r)) * weight;
    let bounded = edges.iter().all(|edge| edge.from.is_finite() && edge.to.is_finite());
    Tails::from_beyond(sides, beyond, bounded, || sum(&edges, radial, |r| radial.centre_in_plane(r)) * weight)
}

/// The sum over the edges of (1/2π) ∫ d/(d²+x²) `radial_part`(√(d²+x²)) dx.
fn sum(edges: &[Edge], radial: Radial, radial_part: impl Fn(f64) -> f64) -> f64 {
    edges
        .iter()
        .map(|edge| {
            let d = edge.distance.abs();
            let share = |x: f64| d / (d * d + x * x) * radial_part(libm::hypot(d, x));
            let integral = quadrature::graded(edge.from, edge.to, d, radial.width(d), share);
            edge.distance.signum() * integral / (2.0 * PI)
        })
        .sum()
}

/// Side i as far as the others leave it.
fn edge(sides: &[HalfSpace], i: usize) -> Option<Edge> {
    let side = &sides[i];
    let (mut from, mut to) = (f64::NEG_INFINITY, f64::INFINITY);
    let along = [-side.normal[1], side.normal[0]];
    for (j, other) in sides.iter().enumerate().filter(|(j, _)| *j != i) {
        let between = distance_between(side, other);
        let slope = between.difference[0] * along[0] + between.difference[1] * along[1];
        let room = between.room;
        if between.parallel() {
            if between.hides(i, j) {
                return None;
            }
        } else if slope > 0.0 {
            to = to.min(room / slope);
        } else {
            from = from.max(room / slope);
        }
    }
    (from < to).then_some(Edge { distance: side.limit, from, to })
}
