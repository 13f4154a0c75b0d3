//! The least-squares search for a shape's one or two nonlinear parameters, the height and level of the curve being profiled out.
//!
//! For given θ the best e0 + e1 g(x; θ) is a straight line in g, so that the residual sum of squares is a function of θ alone.
//! It is first looked at on a grid, which depends on the doses and weights only and is made once for all data. From the
//! lowest of the grid's local minima Levenberg and Marquardt's steps lead to the minimum inside the bounds, with the derivatives of g
//! freed of the parts along 1 and g (Golub and Pereyra 1973, in Kaufman's form). Newton's steps end it, with second derivatives
//! from differences of the first, and go on while they shrink, so that the normal equations hold to rounding, not merely the
//! sum of squares.
//!
//! Bounds are where the data no longer tell curves apart:
//!
//! * e50 of the Emax shapes: from a hundredth of the lowest positive dose, where 99 % of the effect is reached (h = 1), to ten times
//!   the highest, where the curve departs from a line by 1 / 40 of its rise;
//! * h: from 1 / 8 to 32: at x = 2 e50 a steeper curve is within 2⁻³² of the step it tends to;
//! * δ of the exponential: from the last gap between doses over ln 100, where 99 % of the rise falls into that gap, to ten
//!   times the range, where the curve departs from a line by 1 / 80 of its rise;
//! * e50 of the logistic: half of the range beyond either end; its δ from a fifth of the least gap, where the curve is
//!   within 8 % of a step half a gap away, to twice the range, where it departs from a line by less than 2 % of its rise.
//!
//! # References
//! 1. Golub and Pereyra (1973), SIAM J. Numer. Anal. 10, 413-432; Kaufman (1975), BIT 15, 49-57.
//! 2. Marquardt (1963), SIAM J. Appl. Math. 11, 431-441.

use super::least_squares::Orthogonal;
use super::shape::{Doses, Shape};
use crate::numerics::sums::sum;

/// Points of the grid along a parameter that is alone, and along the steepness of a curve with two.
const ALONE: usize = 161;
const STEEPNESS: usize = 17;
/// Points of the grid for the place of a curve with two parameters: in each gap between doses, in all gaps at most, and beyond
/// either end. A steep curve may have its place in any gap, and a sum of squares that rises towards the others.
const IN_A_GAP: usize = 4;
const IN_ALL_GAPS: usize = 64;
const BEYOND: usize = 8;
/// The search begins at so many of the grid's local minima, and goes so far from each before the best goes on alone.
const STARTS: usize = 5;
const FIRST_STEPS: usize = 12;
/// Steps of each of the two kinds at most.
const STEPS: usize = 100;
/// A share of a column's length that is rounding.
const ROUNDING: f64 = 1e-13;

/// One nonlinear parameter as the search sees it.
#[derive(Debug, Clone)]
struct Axis {
    low: f64,
    high: f64,
    /// Whether it is searched for by its logarithm.
    log: bool,
    /// The bounds of the parameter itself.
    bounds: (f64, f64),
    /// Of the grid, ascending from `low` to `high`.
    points: Vec<f64>,
}

impl Axis {
    /// Equally spaced points of the logarithm.
    fn logarithmic(low: f64, high: f64, points: usize) -> Self {
        let (from, to) = (libm::log(low), libm::log(high));
        Self { low: from, high: to, log: true, bounds: (low, high), points: spaced(from, to, points) }
    }

    /// Points between and beyond the doses.
    fn among(doses: &[f64], low: f64, high: f64, log: bool) -> Self {
        let scale = |x: f64| if log { libm::log(x) } else { x };
        let (from, to, doses) =
            (scale(low), scale(high), doses.iter().map(|x| scale(*x)).collect::<Vec<_>>());
        let mut points = spaced(from, doses[0], BEYOND);
        let gaps = doses.len() - 1;
        let inside = (IN_A_GAP * gaps).min(IN_ALL_GAPS);
        points.extend((0..inside).map(|point| {
            let place = (point as f64 + 0.5) / inside as f64 * gaps as f64;
            let gap = (place as usize).min(gaps - 1);
            let share = place - gap as f64;
            doses[gap] * (1.0 - share) + doses[gap + 1] * share
        }));
        points.extend(spaced(doses[gaps], to, BEYOND));
        Self { low: from, high: to, log, bounds: (low, high), points }
    }

    fn parameter(&self, u: f64) -> f64 {
        if self.log { libm::exp(u) } else { u }
    }

    /// d parameter / du.
    fn stretch(&self, u: f64) -> f64 {
        if self.log { libm::exp(u) } else { 1.0 }
    }
}

/// A grid for one shape over given doses and weights, and the way from it to the minimum.
#[derive(Debug, Clone)]
pub struct Search {
    shape: Shape,
    doses: Vec<f64>,
    weights: Vec<f64>,
    axes: Vec<Axis>,
    /// For each point the centred shape, of length 1, times the weights; none where the shape is flat.
    grid: Vec<Option<Vec<f64>>>,
}

/// The curve with the least residual sum of squares inside the bounds.
#[derive(Debug, Clone, PartialEq)]
pub struct Minimum {
    /// With the parameters found.
    pub shape: Shape,
    /// The parameter (its place) that ended at a bound, and whether at the upper one.
    pub at_bound: Option<(usize, bool)>,
}

/// A point on the way.
struct Point {
    u: Vec<f64>,
    rss: f64,
    /// Residuals along the freed derivatives, and those derivatives' products or what stands for them.
    gradient: Vec<f64>,
    products: Vec<Vec<f64>>,
}

impl Search {
    /// The search for `shape` over `doses` with these weights, the numbers of observations. A shape without nonlinear
    /// parameters is its own minimum.
    pub fn new(shape: &Shape, doses: &Doses, weights: &[f64]) -> Self {
        let axes = axes(shape, doses);
        let mut this = Self {
            shape: *shape,
            doses: doses.values().to_vec(),
            weights: weights.to_vec(),
            axes,
            grid: Vec::new(),
        };
        if !this.axes.is_empty() {
            let all = this.axes.iter().map(|axis| axis.points.len()).product();
            this.grid = (0..all).map(|place| this.direction(&this.place(place))).collect();
        }
        this
    }

    /// The minimum for these means.
    pub fn minimum(&self, means: &[f64]) -> Minimum {
        let mut best: Option<Point> = None;
        for start in self.starts(means) {
            let from = self.point(self.place(start), means);
            let Some(found) = from.map(|point| self.approach(point, means)) else { continue };
            if best.as_ref().is_none_or(|best| found.rss < best.rss) {
                best = Some(found);
            }
        }
        let Some(best) = best else { return Minimum { shape: self.shape, at_bound: None } };
        let found = self.polish(self.descend(best, means), means);
        Minimum { shape: self.shape_at(&found.u), at_bound: self.at_bound(&found.u) }
    }

    /// The point number `place` of the grid.
    fn place(&self, place: usize) -> Vec<f64> {
        let mut rest = place;
        let mut along = |axis: &Axis| {
            let step = rest % axis.points.len();
            rest /= axis.points.len();
            axis.points[step]
        };
        self.axes.iter().map(&mut along).collect()
    }

    fn shape_at(&self, u: &[f64]) -> Shape {
        let parameters: Vec<f64> = self.axes.iter().zip(u).map(|(axis, u)| axis.parameter(*u)).collect();
        self.shape.with(&parameters)
    }

    /// The part of the means' variation that a point explains is the square of its product with the means.
    fn direction(&self, u: &[f64]) -> Option<Vec<f64>> {
        let shape = self.shape_at(u);
        let values: Vec<f64> = self.doses.iter().map(|x| shape.at(*x)).collect();
        let largest = values.iter().fold(0.0_f64, |most, value| most.max(value.abs()));
        let scaled: Vec<f64> = values.iter().map(|value| value / largest).collect();
        let total = sum(self.weights.iter().copied());
        let centre = sum(self.weights.iter().zip(&scaled).map(|(w, g)| w * g)) / total;
        let centred: Vec<f64> = scaled.iter().map(|g| g - centre).collect();
        let length = sum(self.weights.iter().zip(&centred).map(|(w, g)| w * g * g)).sqrt();
        let usable = length > ROUNDING * total.sqrt() && length.is_finite();
        usable.then(|| self.weights.iter().zip(&centred).map(|(w, g)| w * g / length).collect())
    }

    /// The grid's local minima with the least residual sums of squares, best first.
    fn starts(&self, means: &[f64]) -> Vec<usize> {
        let centre = means.iter().sum::<f64>() / means.len() as f64;
        let explained = |direction: &Option<Vec<f64>>| {
            let Some(direction) = direction else { return -1.0 };
            let along: f64 = direction.iter().zip(means).map(|(d, m)| d * (m - centre)).sum();
            along * along
        };
        let values: Vec<f64> = self.grid.iter().map(explained).collect();
        let per_row = self.axes.first().map_or(1, |axis| axis.points.len() as isize);
        let rows = values.len() as isize / per_row;
        let is_top = |place: &usize| {
            let (i, j) = (*place as isize % per_row, *place as isize / per_row);
            values[*place] >= 0.0
                && (-1..=1).all(|down| {
                    (-1..=1).all(|right| {
                        let (i, j) = (i + right, j + down);
                        let inside = (0..per_row).contains(&i) && (0..rows).contains(&j);
                        !inside || values[(j * per_row + i) as usize] <= values[*place]
                    })
                })
        };
        let mut tops: Vec<usize> = (0..values.len()).filter(is_top).collect();
        tops.sort_by(|&a, &b| values[b].total_cmp(&values[a]));
        tops.truncate(STARTS);
        tops
    }

    fn point(&self, u: Vec<f64>, means: &[f64]) -> Option<Point> {
        let shape = self.shape_at(&u);
        let g: Vec<f64> = self.doses.iter().map(|x| shape.at(*x)).collect();
        let basis = Orthogonal::of(&[vec![1.0; g.len()], g], &self.weights, ROUNDING)?;
        let (along, left) = basis.project(means);
        let height = basis.coefficients(&along)[1];
        let gradients: Vec<Vec<f64>> = self.doses.iter().map(|x| shape.gradient(*x)).collect();
        let freed: Vec<Vec<f64>> = (0..u.len())
            .map(|p| {
                let stretch = height * self.axes[p].stretch(u[p]);
                let column: Vec<f64> = gradients.iter().map(|gradient| gradient[p] * stretch).collect();
                basis.project(&column).1
            })
            .collect();
        let product = |one: &[f64], other: &[f64]| {
            sum(self.weights.iter().zip(one).zip(other).map(|((w, a), b)| w * a * b))
        };
        let gradient = freed.iter().map(|column| product(column, &left)).collect();
        let products = freed.iter().map(|one| freed.iter().map(|other| product(one, other)).collect());
        let point = Point { rss: product(&left, &left), gradient, products: products.collect(), u };
        let finite = point.products.iter().flatten().chain(&point.gradient).all(|number| number.is_finite());
        (finite && point.rss.is_finite()).then_some(point)
    }

    /// Some of Levenberg and Marquardt's steps towards the minimum inside the bounds.
    fn approach(&self, start: Point, means: &[f64]) -> Point {
        let (mut here, mut damping) = (start, 1e-3);
        for _ in 0..FIRST_STEPS {
            self.advance(&mut here, &mut damping, means);
        }
        here
    }

    /// Newton's steps, damped, down to the minimum.
    fn descend(&self, start: Point, means: &[f64]) -> Point {
        let (mut here, mut damping) = (self.sharpened(start, means), 0.0);
        for _ in 0..STEPS {
            let length = self.length(&self.step(&here, damping));
            if self.advance(&mut here, &mut damping, means) {
                here = self.sharpened(here, means);
            }
            if length < 1e-9 || damping > 1e12 {
                break;
            }
        }
        here
    }

    /// Takes the damped step if it leads down, and says whether it did; changes the damping accordingly.
    fn advance(&self, here: &mut Point, damping: &mut f64, means: &[f64]) -> bool {
        let step = self.step(here, *damping);
        match self.point(self.moved(&here.u, &step), means).filter(|there| there.rss < here.rss) {
            Some(there) => {
                *here = there;
                *damping *= 0.1;
                true
            }
            None => {
                *damping = (10.0 * *damping).max(1e-4);
                false
            }
        }
    }

    /// Undamped steps while they shrink: they end where the normal equations hold as well as rounding allows.
    fn polish(&self, from: Point, means: &[f64]) -> Point {
        let most = from.rss * (1.0 + 1e-9);
        let mut here = from;
        let mut last = f64::INFINITY;
        for _ in 0..STEPS {
            let step = self.step(&here, 0.0);
            let length = self.length(&step);
            if !(length > 0.0 && length < 0.9 * last) {
                break;
            }
            match self.point(self.moved(&here.u, &step), means).filter(|there| there.rss <= most) {
                Some(there) => here = self.sharpened(there, means),
                None => break,
            }
            last = length;
        }
        here
    }

    /// The point with the second derivatives of half the sum of squares in place of the products, where they have a minimum: with
    /// large residuals Gauss and Newton's steps, which leave a part of them out, hardly move.
    fn sharpened(&self, mut here: Point, means: &[f64]) -> Point {
        let count = here.u.len();
        let mut second = vec![vec![0.0; count]; count];
        for p in 0..count {
            // Short beside the lengths over which a curve changes, long beside rounding.
            let h = 1e-5 * (self.axes[p].high - self.axes[p].low);
            let moved = |by: f64| {
                let mut u = here.u.clone();
                u[p] += by;
                self.point(u, means)
            };
            let (Some(before), Some(after)) = (moved(-h), moved(h)) else { return here };
            for (q, row) in second.iter_mut().enumerate() {
                // The gradient points down.
                row[p] = (before.gradient[q] - after.gradient[q]) / (2.0 * h);
            }
        }
        if count == 2 {
            let mean = 0.5 * (second[0][1] + second[1][0]);
            (second[0][1], second[1][0]) = (mean, mean);
        }
        let convex = (0..count).all(|p| second[p][p] > 0.0);
        let across = if count == 2 { second[0][1] * second[0][1] / second[0][0] / second[1][1] } else { 0.0 };
        if convex && across < 1.0 {
            here.products = second;
        }
        here
    }

    /// The step of the parameters that no bound holds back.
    fn step(&self, here: &Point, damping: f64) -> Vec<f64> {
        let free: Vec<bool> = (0..here.u.len())
            .map(|p| {
                let (axis, u, down) = (&self.axes[p], here.u[p], here.gradient[p]);
                !((u <= axis.low && down < 0.0) || (u >= axis.high && down > 0.0))
            })
            .collect();
        let size = |p: usize| here.products[p][p] * (1.0 + damping);
        let alone = |p: usize| if size(p) > 0.0 { here.gradient[p] / size(p) } else { 0.0 };
        if let [true, true] = free[..] {
            let across = here.products[0][1];
            let determinant = size(0) * size(1) - across * across;
            if determinant > 1e-14 * size(0) * size(1) {
                let one = (here.gradient[0] * size(1) - here.gradient[1] * across) / determinant;
                let other = (here.gradient[1] * size(0) - here.gradient[0] * across) / determinant;
                return vec![one, other];
            }
        }
        (0..free.len()).map(|p| if free[p] { alone(p) } else { 0.0 }).collect()
    }

    fn moved(&self, u: &[f64], step: &[f64]) -> Vec<f64> {
        let moved = u.iter().zip(step).zip(&self.axes);
        moved.map(|((u, step), axis)| (u + step).max(axis.low).min(axis.high)).collect()
    }

    /// The longest part of a step, as a share of the parameter's range.
    fn length(&self, step: &[f64]) -> f64 {
        let shares = step.iter().zip(&self.axes).map(|(step, axis)| step.abs() / (axis.high - axis.low));
        shares.fold(0.0, f64::max)
    }

    fn at_bound(&self, u: &[f64]) -> Option<(usize, bool)> {
        // Within a step that the search does not make any more.
        let near = |axis: &Axis| 1e-9 * (axis.high - axis.low);
        let is = |(axis, u): (&Axis, &f64)| *u - axis.low <= near(axis) || axis.high - *u <= near(axis);
        let place = self.axes.iter().zip(u).position(is)?;
        Some((place, self.axes[place].high - u[place] <= near(&self.axes[place])))
    }

    /// The values between which parameter number `place` was looked for.
    pub fn bounds(&self, place: usize) -> (f64, f64) {
        self.axes[place].bounds
    }
}

/// The nonlinear parameters with their bounds: see the module's head.
fn axes(shape: &Shape, doses: &Doses) -> Vec<Axis> {
    let values = doses.values();
    let range = doses.highest() - doses.lowest();
    let mut gaps = values.windows(2).map(|pair| pair[1] - pair[0]);
    let least = gaps.clone().fold(range, f64::min);
    let positive = &values[values.iter().position(|x| *x > 0.0).unwrap_or(values.len() - 1)..];
    let (least_effect, most_effect) = (0.01 * positive[0], 10.0 * doses.highest());
    match shape {
        Shape::Emax { .. } => vec![Axis::logarithmic(least_effect, most_effect, ALONE)],
        Shape::SigmoidEmax { .. } => {
            let e50 = Axis::among(positive, least_effect, most_effect, true);
            vec![e50, Axis::logarithmic(0.125, 32.0, STEEPNESS)]
        }
        Shape::Exponential { .. } => {
            let farthest = doses.lowest().abs().max(doses.highest().abs());
            let low = gaps.next_back().unwrap_or(range) / libm::log(100.0);
            let (low, high) = (low.max(farthest / 600.0), 10.0 * range.max(farthest / 600.0));
            vec![Axis::logarithmic(low, high, ALONE)]
        }
        Shape::Logistic { .. } => {
            let (low, high) = (doses.lowest() - 0.5 * range, doses.highest() + 0.5 * range);
            let e50 = Axis::among(values, low, high, false);
            vec![e50, Axis::logarithmic(0.2 * least, 2.0 * range, STEEPNESS)]
        }
        _ => vec![],
    }
}

/// So many equally spaced points, the ends included.
fn spaced(from: f64, to: f64, points: usize) -> Vec<f64> {
    let share = |point: usize| point as f64 / (points - 1) as f64;
    (0..points).map(|point| from * (1.0 - share(point)) + to * share(point)).collect()
}
