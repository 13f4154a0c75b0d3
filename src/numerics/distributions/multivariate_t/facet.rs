//! The faces of a polyhedron in space: each plane's polygon, as the other half-spaces leave it.
//!
//! A polygon is a closed chain of lines in the plane, in the order of their directions, and is cut by one half-plane after
//! another. Corners are never stored: each is where two neighbouring lines of the chain meet, so that a corner far away or
//! a sliver between nearly parallel lines costs no digits elsewhere. A rounding error can add or leave out a sliver, but the
//! chain stays closed, and integrals along it move by no more than that sliver.

use super::region::{HalfSpace, distance_between};

/// Where an unbounded face is cut off, on the scale of the largest limit.
const FAR: f64 = 1e30;

/// Directions that differ by no more than this are the same: their normals are right to a few units in the last place.
const PARALLEL: f64 = 16.0 * f64::EPSILON;

/// A line in the plane of a face: the points y with normal·y = offset, the face where it is less.
#[derive(Debug, Clone, Copy)]
struct Line {
    normal: [f64; 2],
    offset: f64,
    far: bool,
}

impl Line {
    /// How far along this line it meets `other`, from the foot of the perpendicular, and 0 if they are parallel.
    fn meets(&self, other: &Line) -> f64 {
        let sine = self.normal[0] * other.normal[1] - self.normal[1] * other.normal[0];
        let difference = [other.normal[0] - self.normal[0], other.normal[1] - self.normal[1]];
        let square = difference[0] * difference[0] + difference[1] * difference[1];
        // offset' - offset cos, with 1 - cos = |difference|²/2.
        let room = (other.offset - self.offset) + self.offset * 0.5 * square;
        if sine == 0.0 { 0.0 } else { room / sine }
    }

    /// 1 if the two have the same direction, up to rounding, -1 if they have opposite ones, else 0.
    fn runs_with(&self, other: &Line) -> i32 {
        let sine = self.normal[0] * other.normal[1] - self.normal[1] * other.normal[0];
        let cosine = self.normal[0] * other.normal[0] + self.normal[1] * other.normal[1];
        match sine.abs() <= PARALLEL {
            true if cosine > 0.0 => 1,
            true => -1,
            false => 0,
        }
    }

    /// The corner with the next line of the chain.
    fn corner(&self, next: &Line) -> [f64; 2] {
        let along = self.meets(next);
        let [x, y] = self.normal;
        [self.offset * x - along * y, self.offset * y + along * x]
    }
}

/// One edge of a face, as its foot sees it: the distance from the foot of the plane's perpendicular, negative if the foot lies
/// on the wrong side, and the ends as distances along the edge.
#[derive(Debug, Clone, Copy)]
pub(super) struct Edge {
    pub distance: f64,
    pub from: f64,
    pub to: f64,
    /// It stands for what is infinitely far away.
    pub far: bool,
}

/// One face.
#[derive(Debug, Clone)]
pub(super) struct Facet {
    /// Of its plane from the origin; negative if the origin is on the wrong side.
    pub distance: f64,
    pub edges: Vec<Edge>,
}

/// The face on plane i, as far as the others leave one.
pub(super) fn facet(sides: &[HalfSpace], i: usize) -> Option<Facet> {
    let side = &sides[i];
    let axes = across(&side.normal);
    let mut chain: Vec<Line> = [[1.0, 0.0], [0.0, 1.0], [-1.0, 0.0], [0.0, -1.0]]
        .map(|normal| Line { normal, offset: FAR, far: true })
        .to_vec();
    for (j, other) in sides.iter().enumerate().filter(|(j, _)| *j != i) {
        let between = distance_between(side, other);
        if between.parallel() {
            if between.hides(i, j) {
                return None;
            }
            continue;
        }
        let [x, y] = axes.each_ref().map(|axis| dot(axis, &between.difference));
        let sine = libm::hypot(x, y);
        let line = Line { normal: [x / sine, y / sine], offset: between.room / sine, far: false };
        chain = cut(&chain, line);
        if chain.len() < 2 {
            return None;
        }
    }
    let count = chain.len();
    let edges = (0..count).map(|k| {
        let (before, line, after) = (&chain[(k + count - 1) % count], &chain[k], &chain[(k + 1) % count]);
        let (from, to) = (line.meets(before), line.meets(after));
        Edge { distance: line.offset, from, to, far: line.far }
    });
    Some(Facet { distance: side.limit, edges: edges.collect() })
}

/// The chain after what lies beyond `line` is cut off.
fn cut(chain: &[Line], line: Line) -> Vec<Line> {
    let count = chain.len();
    // Opposite lines with nothing between them leave no face; corners far away on them could not tell.
    if chain.iter().any(|known| known.runs_with(&line) == -1 && known.offset + line.offset < 0.0) {
        return Vec::new();
    }
    let parallel = (0..count).find(|&k| chain[k].runs_with(&line) == 1);
    if parallel.is_some_and(|k| line.offset >= chain[k].offset) {
        return chain.to_vec();
    }
    let mut beyond: Vec<bool> = (0..count)
        .map(|k| {
            let corner = chain[k].corner(&chain[(k + 1) % count]);
            let reach = line.normal[0] * corner[0] + line.normal[1] * corner[1];
            // A corner on the line up to rounding is not cut off.
            let size = corner[0].abs() + corner[1].abs() + line.offset.abs();
            reach - line.offset > 2.0 * f64::EPSILON * size
        })
        .collect();
    // The far ends of a parallel line cannot be told from those of the new one: they go with it.
    if let Some(k) = parallel {
        (beyond[(k + count - 1) % count], beyond[k]) = (true, true);
    }
    let mut left = Vec::with_capacity(count + 1);
    for k in 0..count {
        let (start, end) = (beyond[(k + count - 1) % count], beyond[k]);
        if !start || !end {
            left.push(chain[k]);
        }
        if !start && end {
            left.push(line);
        }
    }
    left
}

/// Two directions across `normal` and across one another, in right-handed order.
fn across(normal: &[f64]) -> [Vec<f64>; 2] {
    // The axis least along the normal gives the best-conditioned cross product.
    let least = (0..3).fold(0, |least, k| if normal[k].abs() < normal[least].abs() { k } else { least });
    let mut axis = [0.0; 3];
    axis[least] = 1.0;
    let first = cross(normal, &axis);
    let length = dot(&first, &first).sqrt();
    let first: Vec<f64> = first.iter().map(|x| x / length).collect();
    let second = cross(normal, &first);
    [first, second]
}

fn cross(a: &[f64], b: &[f64]) -> Vec<f64> {
    vec![a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}
