//! A region of the row space: the points within every half-space, and the geometry that all ranks share.

use super::leader::Side;
use super::radial::Radial;
use super::{line, plane, space};

/// Normals closer than this, and limits that are the same, make two half-spaces one. A normal turned by so little changes a
/// probability by about the same fraction.
pub(super) const SAME: f64 = 1e-11;
/// Limits smaller than this, on a scale where the largest is 1, are moved here: what lies exactly on the origin is then
/// seen from a definite side, and no probability changes by more than this fraction.
const SMALLEST_LIMIT: f64 = 1e-100;

/// The points x with normal·x <= limit; the normal has length 1.
#[derive(Debug, Clone)]
pub(super) struct HalfSpace {
    pub normal: Vec<f64>,
    pub limit: f64,
}

/// The range allowed to one direction of the row space; either end may be infinite.
#[derive(Debug, Clone)]
pub(super) struct Slab {
    pub row: Vec<f64>,
    pub low: f64,
    pub high: f64,
}

/// The probabilities of both sides, each computed where it is the smaller one.
#[derive(Debug, Clone, Copy)]
pub(super) struct Tails {
    pub inside: f64,
    pub outside: f64,
}

impl Tails {
    pub fn of(&self, side: Side) -> f64 {
        match side {
            Side::Inside => self.inside,
            Side::Outside => self.outside,
        }
    }

    /// From the signed sum over the faces of what lies `beyond` them. `direct` integrates the inside itself, free of
    /// cancellation where the region is bounded and around the origin.
    pub fn from_beyond(
        sides: &[HalfSpace],
        beyond: f64,
        bounded: bool,
        direct: impl FnOnce() -> f64,
    ) -> Tails {
        let around_origin = sides.iter().all(|side| side.limit >= 0.0);
        let (inside, outside) = if !around_origin {
            (-beyond, 1.0 + beyond)
        } else if bounded && beyond > 0.75 {
            let inside = direct();
            (inside, 1.0 - inside)
        } else {
            (1.0 - beyond, beyond)
        };
        Tails { inside: inside.clamp(0.0, 1.0), outside: outside.clamp(0.0, 1.0) }
    }
}

/// Both tails of the region within all `slabs`, exactly, for up to three dimensions.
pub(super) fn tails(slabs: &[Slab], dimension: usize, df: f64) -> Tails {
    if slabs
        .iter()
        .any(|slab| slab.low > slab.high || slab.low == f64::INFINITY || slab.high == f64::NEG_INFINITY)
    {
        return Tails { inside: 0.0, outside: 1.0 };
    }
    let mirrored = slabs.iter().all(|slab| slab.low == -slab.high);
    let limits =
        slabs.iter().flat_map(|slab| [slab.low.abs(), slab.high.abs()]).filter(|limit| limit.is_finite());
    let largest = limits.fold(0.0, f64::max);
    if largest == 0.0 && mirrored && slabs.iter().any(|slab| slab.high == 0.0) {
        return Tails { inside: 0.0, outside: 1.0 };
    }
    let scale = if largest > 0.0 { largest } else { 1.0 };
    let side = |slab: &Slab, sign: f64, limit: f64| HalfSpace {
        normal: slab.row.iter().map(|x| sign * x).collect(),
        limit: away_from_zero(limit / scale),
    };
    // Upper limits first: where the region is its own mirror image, they are half of the faces.
    let mut sides: Vec<HalfSpace> =
        slabs.iter().filter(|slab| slab.high.is_finite()).map(|slab| side(slab, 1.0, slab.high)).collect();
    let upper = sides.len();
    sides.extend(slabs.iter().filter(|slab| slab.low.is_finite()).map(|slab| side(slab, -1.0, -slab.low)));
    if sides.is_empty() {
        return Tails { inside: 1.0, outside: 0.0 };
    }
    let (counted, weight) = if mirrored { (upper, 2.0) } else { (sides.len(), 1.0) };
    let radial = Radial::new(df, scale);
    match dimension {
        1 => line::tails(&sides, radial),
        2 => plane::tails(&sides, counted, weight, radial),
        _ => space::tails(&sides, counted, weight, radial),
    }
}

fn away_from_zero(limit: f64) -> f64 {
    if limit.abs() >= SMALLEST_LIMIT {
        limit
    } else if limit < 0.0 {
        -SMALLEST_LIMIT
    } else {
        SMALLEST_LIMIT
    }
}

/// How another half-space cuts the boundary of one.
pub(super) struct Between {
    /// The other normal, less the part along the first, up to rounding across it: exact where the two nearly agree.
    pub difference: Vec<f64>,
    /// Distance that the other leaves to the foot of the first's perpendicular, times the sine of the angle.
    pub room: f64,
    same_direction: bool,
}

impl Between {
    pub fn parallel(&self) -> bool {
        self.difference.iter().map(|x| x * x).sum::<f64>().sqrt() < SAME
    }

    /// For parallel boundaries: whether half-space j leaves nothing of the boundary of i. Of two that are the same the first
    /// one keeps it.
    pub fn hides(&self, i: usize, j: usize) -> bool {
        self.room < 0.0 || (self.same_direction && self.room.abs() < SAME && j < i)
    }
}

/// With a, b the normals, d, e the limits and ρ = a·b: b·(d a + y) <= e becomes (b ∓ a)·y <= e - ρ d for y across a, and
/// e - ρ d = (e ∓ d) ± d |b ∓ a|²/2, which keeps its digits where the normals nearly agree (or are nearly opposite).
pub(super) fn distance_between(first: &HalfSpace, other: &HalfSpace) -> Between {
    let cosine: f64 = first.normal.iter().zip(&other.normal).map(|(a, b)| a * b).sum();
    let same_direction = cosine > 0.0;
    let sign = if same_direction { 1.0 } else { -1.0 };
    let difference: Vec<f64> = first.normal.iter().zip(&other.normal).map(|(a, b)| b - sign * a).collect();
    let square: f64 = difference.iter().map(|x| x * x).sum();
    let room = (other.limit - sign * first.limit) + sign * first.limit * 0.5 * square;
    Between { difference, room, same_direction }
}
