//! Rank 3: a polyhedron around, or beside, the origin of space.
//!
//! What lies outside is cut into cones over the faces, and each of these into the triangles from the foot of the
//! perpendicular to the edges. Beyond such a triangle, at distance d, its edge at distance h from the foot, lies
//!
//!   (1/2π) ∫ h/(h²+x²) [P(t > d) - (d/r) P(t > r)] dx,   r² = d² + h² + x²,
//!
//! x along the edge: the radial integral d ∫ P(|T| > ρ)/ρ² dρ from d to r is 2 [P(t > d) - (d/r) P(t > r)], because by
//! Archimedes' theorem P(t > r) is half the mean of 1 - r/ρ over |T| = ρ > r. The first term of the bracket gives the
//! angle at the foot. A triangle whose edge the foot does not face, and a face that turns its back to the origin, count
//! negative, so that the sum is P(outside), less 1 if the origin is outside itself.

use super::facet::{Edge, Facet, facet};
use super::radial::Radial;
use super::region::{HalfSpace, Tails};
use crate::numerics::quadrature;
use std::f64::consts::PI;

/// An edge this near to the foot of its face's perpendicular, relative to the plane's distance from the origin or its own
/// length, closes a triangle of no weight.
const NEGLIGIBLE: f64 = 1e-19;

/// Both tails for `sides` of which the first `counted` count `weight` times.
pub(super) fn tails(sides: &[HalfSpace], counted: usize, weight: f64, radial: Radial) -> Tails {
    let facets: Vec<Facet> = (0..counted).filter_map(|i| facet(sides, i)).collect();
    let beyond = weight * facets.iter().map(|facet| beyond(facet, radial)).sum::<f64>();
    let bounded = facets.iter().all(|facet| facet.edges.iter().all(|edge| !edge.far));
    Tails::from_beyond(sides, beyond, bounded, || {
        weight * facets.iter().map(|facet| within(facet, radial)).sum::<f64>()
    })
}

/// What lies beyond a face as seen from the origin, negative if it turns its back.
fn beyond(facet: &Facet, radial: Radial) -> f64 {
    let d = facet.distance.abs();
    let tail = radial.tail(d);
    let triangles = facet.edges.iter().map(|edge| {
        let Some(h) = height(edge, d) else { return 0.0 };
        let angle = libm::atan2(edge.to, h) - libm::atan2(edge.from, h);
        let square = d * d + h * h;
        let nearest = square.sqrt();
        let corner = |x: f64| {
            let r = (square + x * x).sqrt();
            h / (h * h + x * x) * (d / r) * radial.tail(r)
        };
        // Farther than this d/r alone makes the second term vanish.
        let cut_off = if edge.far || h > 1e20 {
            0.0
        } else {
            quadrature::graded(edge.from, edge.to, h, radial.width(nearest), corner)
        };
        edge.distance.signum() * (angle * tail - cut_off)
    });
    facet.distance.signum() * triangles.sum::<f64>() / (2.0 * PI)
}

/// What lies between the origin and a face, for a bounded polyhedron around the origin: the same with P(|T| <= ρ).
fn within(facet: &Facet, radial: Radial) -> f64 {
    let d = facet.distance;
    let triangles = facet.edges.iter().map(|edge| {
        let Some(h) = height(edge, d) else { return 0.0 };
        let cone = |x: f64| h / (h * h + x * x) * radial.shell(d, h * h + x * x);
        let wide = radial.width(libm::hypot(d, h));
        edge.distance.signum() * quadrature::graded(edge.from, edge.to, h, wide, cone)
    });
    triangles.sum::<f64>() / (4.0 * PI)
}

/// The distance of the edge from the foot, if it is not negligible.
fn height(edge: &Edge, d: f64) -> Option<f64> {
    let h = edge.distance.abs();
    let length = edge.from.abs().max(edge.to.abs());
    (h > NEGLIGIBLE * d.min(length)).then_some(h)
}
