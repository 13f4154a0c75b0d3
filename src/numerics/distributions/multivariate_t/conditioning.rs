//! Separation of variables: the probability that every wⱼ·Y lies between two limits, Y standard normal, as the mean over
//! the unit cube of a product of one-dimensional probabilities.
//!
//! The wⱼ are put into triangular form, so that row j only needs Y₁..Yₘ; given Y₁..Yₘ₋₁ the rows whose last coordinate is m leave
//! one interval to Yₘ. Its probability is a factor, and Yₘ is drawn from within it. Rows that depend on the same last
//! coordinate are taken together, so that singular families need no special care, and the coordinates are ordered so that the
//! narrowest limits, given typical values of the coordinates before, come first.
//!
//! # References
//! 1. Genz (1992), J. Comput. Graph. Statist. 1, 141-149; Genz and Bretz (2002), same journal 11, 950-971.
//! 2. Gibson, Glasbey and Elston (1994), in Advances in Numerical Methods and Applications, 120-126 (the order).
//! 3. Genz and Kwong (2000), J. Statist. Comput. Simul. 68, 1-21 (singular matrices).

use super::deviate;
use crate::numerics::distributions::normal;

/// A row of which less than this share of its length is left, once other coordinates are fixed, depends on them
/// alone: the rounding of a few hundred products leaves 1e-13.
const USED_UP: f64 = 1e-7;

/// The triangular form.
#[derive(Debug, Clone)]
pub(super) struct Order {
    /// One for each coordinate.
    steps: Vec<Step>,
    /// Rows of length 0.
    fixed: Vec<usize>,
}

#[derive(Debug, Clone, Default)]
struct Step {
    /// Rows whose last coordinate is this one.
    rows: Vec<usize>,
    /// 1 / the last coordinate of each.
    inverses: Vec<f64>,
    /// Their earlier coordinates, one row after the other.
    earlier: Vec<f64>,
}

impl Order {
    /// The triangular form of `rows`, ordered for these typical limits.
    pub fn new(mut rows: Vec<Vec<f64>>, low: &[f64], high: &[f64]) -> Order {
        let count = rows.len();
        let lengths: Vec<f64> = rows.iter().map(|row| length(row)).collect();
        let mut triangle: Vec<Vec<f64>> = vec![Vec::new(); count];
        let mut fixed = Vec::new();
        let mut open: Vec<usize> = Vec::new();
        for (i, &size) in lengths.iter().enumerate() {
            if size > USED_UP { open.push(i) } else { fixed.push(i) }
        }
        let (mut steps, mut typical) = (Vec::new(), Vec::new());
        while let Some((next, mean)) = narrowest(&rows, &triangle, &open, &typical, low, high) {
            let size = length(&rows[next]);
            let axis: Vec<f64> = rows[next].iter().map(|x| x / size).collect();
            typical.push(mean);
            let mut step = Step::default();
            open.retain(|&i| {
                let along = dot(&rows[i], &axis);
                rows[i].iter_mut().zip(&axis).for_each(|(x, a)| *x -= along * a);
                if i != next && length(&rows[i]) > USED_UP * lengths[i] {
                    triangle[i].push(along);
                    return true;
                }
                step.rows.push(i);
                step.inverses.push(1.0 / along);
                step.earlier.extend(&triangle[i]);
                false
            });
            steps.push(step);
        }
        Order { steps, fixed }
    }

    /// How many coordinates of a point in the cube are used.
    pub fn dimension(&self) -> usize {
        self.steps.len().saturating_sub(1)
    }

    /// About how many multiplications one product takes.
    pub fn work(&self) -> usize {
        // A normal probability or deviate is worth about 50.
        self.steps.iter().map(|step| step.earlier.len() + 4 * step.rows.len() + 150).sum()
    }

    /// The product at one `point` of the cube, for limits `low` and `high`; `y` is working space.
    pub fn product(&self, low: &[f64], high: &[f64], point: &[f64], y: &mut Vec<f64>) -> f64 {
        if self.fixed.iter().any(|&row| low[row] > 0.0 || high[row] < 0.0) {
            return 0.0;
        }
        y.clear();
        let mut product = 1.0;
        for (m, step) in self.steps.iter().enumerate() {
            let (mut from, mut to) = (f64::NEG_INFINITY, f64::INFINITY);
            let mut earlier = step.earlier.chunks_exact(m.max(1));
            for (&row, &inverse) in step.rows.iter().zip(&step.inverses) {
                let before = if m == 0 { 0.0 } else { earlier.next().map_or(0.0, |row| dot(row, y)) };
                let (a, b) = ((low[row] - before) * inverse, (high[row] - before) * inverse);
                let (a, b) = if inverse > 0.0 { (a, b) } else { (b, a) };
                from = from.max(a);
                to = to.min(b);
            }
            // Written so that no interval, and nothing that is no number, goes on.
            let open = from < to;
            if !open {
                return 0.0;
            }
            let (share, within) = interval(from, to, point.get(m).copied());
            product *= share;
            if product == 0.0 {
                return 0.0;
            }
            y.push(within);
        }
        product
    }
}

/// The open row with the least probability between its limits given the `typical` coordinates so far, and the mean of its
/// own coordinate between them.
fn narrowest(
    rows: &[Vec<f64>],
    triangle: &[Vec<f64>],
    open: &[usize],
    typical: &[f64],
    low: &[f64],
    high: &[f64],
) -> Option<(usize, f64)> {
    let mut best: Option<(f64, usize, f64)> = None;
    for &i in open {
        let (size, before) = (length(&rows[i]), dot(&triangle[i], typical));
        let (from, to) = ((low[i] - before) / size, (high[i] - before) / size);
        let share = (normal::lower(to) - normal::lower(from)).max(0.0);
        // Of rows that are equally narrow up to rounding the first.
        if best.is_none_or(|(least, _, _)| share < least * (1.0 - 1e-9)) {
            let mean = (normal::density(from) - normal::density(to)) / share;
            let bounded = if share > 1e-10 { mean } else { from.max(-9.0).min(to).min(9.0) };
            best = Some((share, i, bounded));
        }
    }
    best.map(|(_, i, mean)| (i, mean))
}

/// Below this length an interval's probability is φ at its middle times the length: the next term is below length²/24
/// (m² + 1), and a difference of two values of Φ would lose digits.
const SHORT: f64 = 1e-4;

/// The probability of an interval and, unless it is the last, the deviate within it at `share` of its probability.
fn interval(from: f64, to: f64, share: Option<f64>) -> (f64, f64) {
    if to - from < SHORT {
        let middle = 0.5 * (from + to);
        // The density falls by middle · length across the interval: to first order the share of the length is this.
        let along = |share: f64| share * (1.0 + 0.5 * middle * (to - from) * (share - 1.0));
        let within = share.map_or(0.0, |share| from + (to - from) * along(share));
        return (normal::density(middle) * (to - from), within);
    }
    // On the side where it loses least.
    let (low, high, sign) = if from > 0.0 { (-to, -from, -1.0) } else { (from, to, 1.0) };
    let start = normal::lower_in_integrals(low);
    let probability = (normal::lower_in_integrals(high) - start).max(0.0);
    let Some(share) = share else { return (probability, 0.0) };
    let p = start + share * probability;
    let within =
        if p > 0.0 && p < 1.0 { deviate::normal(p).clamp(low, high) } else { low.max(-40.0).min(high) };
    (probability, sign * within)
}

fn length(row: &[f64]) -> f64 {
    dot(row, row).sqrt()
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}
