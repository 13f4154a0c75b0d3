//! The observations of one partition, rearranged within its cells, and whether the rows' statistics are then as large as
//! observed.
//!
//! A row's statistic is t = L / √(variance of L) with L = Σ c m. It is compared by its signed square, cross-multiplied, so that
//! nothing is divided by a variance of zero: with m = L|L| / Σ(c²/n) and w the variance that belongs to it (the error sum of squares,
//! or Σ(c² s²/n) / Σ(c²/n) where variances are unequal), t is at least t* exactly when m w* >= m* w. Both sides count as equal
//! within 1e-9 of m* times the largest w that the rearrangement allows, since arrangements with the same statistic come to it by
//! different roundings; an L below 1e-9 of the largest one is zero.

use super::partitions::Partition;
use crate::methods::multiplicity::Sides;
use crate::numerics::random::Stream;
use crate::study::Variances;
use std::ops::Range;

/// Statistics this close count as equal, relative to the total variation: the share of the total sum of squares within which F counts as
/// equal in `methods::overall::PermutationF`.
const EQUAL: f64 = 1e-9;

/// What is tested, for all partitions.
#[derive(Debug, Clone)]
pub(super) struct Question {
    /// One vector a level.
    pub groups: Vec<Vec<f64>>,
    /// One row of coefficients a comparison.
    pub rows: Vec<Vec<f64>>,
    pub sides: Sides,
    pub variances: Variances,
}

impl Question {
    /// The levels with a coefficient that is not zero.
    pub fn support(&self, row: usize) -> Vec<usize> {
        (0..self.groups.len()).filter(|level| self.rows[row][*level] != 0.0).collect()
    }
}

/// m and w of the module's head.
#[derive(Debug, Clone, Copy)]
struct Ratio {
    m: f64,
    w: f64,
}

/// A row whose levels lie in one cell.
#[derive(Debug)]
struct RowTest {
    /// Group and c/n, divided by √Σ(c²/n).
    weights: Vec<(usize, f64)>,
    /// Group and its share of Σ(c²/n).
    shares: Vec<(usize, f64)>,
    /// Largest w that the rearrangement allows.
    most_w: f64,
    /// m below which L is zero.
    zero: f64,
    observed: Ratio,
    /// Whether the statistic is to be compared with its own observed value as well.
    alone: bool,
}

/// The observations of the cells of a partition, at present in some arrangement.
#[derive(Debug)]
pub(super) struct Rearranged {
    /// Less the mean of their cell.
    values: Vec<f64>,
    /// The group of each value as observed, ascending in each cell, and at present.
    first: Vec<usize>,
    labels: Vec<usize>,
    /// The places of each cell.
    cells: Vec<Range<usize>>,
    /// Groups in cells of at least two.
    moved: Vec<usize>,
    sizes: Vec<f64>,
    sums: Vec<f64>,
    squares: Vec<f64>,
    /// Sum of squares inside the groups that stay as they are, and of all others about the means of their cells.
    error: Error,
    rows: Vec<RowTest>,
    /// The largest of the observed statistics.
    largest: Ratio,
    sides: Sides,
}

#[derive(Debug, Clone, Copy)]
enum Error {
    Pooled { fixed: f64, total: f64 },
    Separate,
}

impl Rearranged {
    /// The observed arrangement of the cells of `partition`; `rows` with whether each is also to be tested alone.
    pub fn new(question: &Question, partition: &Partition, rows: &[(usize, bool)]) -> Self {
        let (mut values, mut labels, mut cells) = (Vec::new(), Vec::new(), Vec::new());
        let mut total_of = vec![0.0; question.groups.len()];
        for cell in partition.cells() {
            let start = values.len();
            for &group in &cell {
                values.extend_from_slice(&question.groups[group]);
                labels.resize(values.len(), group);
            }
            let total = centre(&mut values[start..]);
            cell.iter().for_each(|group| total_of[*group] = total);
            cells.push(start..values.len());
        }
        let groups = question.groups.len();
        let mut moved = labels.clone();
        moved.dedup();
        let error = match question.variances {
            Variances::Unequal => Error::Separate,
            Variances::Equal => Error::Pooled {
                fixed: (0..groups)
                    .filter(|group| !moved.contains(group))
                    .map(|group| centre(&mut question.groups[group].clone()))
                    .sum(),
                total: values.iter().map(|value| value * value).sum(),
            },
        };
        let mut made = Self {
            values,
            first: labels.clone(),
            labels,
            cells,
            moved,
            sizes: question.groups.iter().map(|group| group.len() as f64).collect(),
            sums: vec![0.0; groups],
            squares: vec![0.0; groups],
            error,
            rows: Vec::new(),
            largest: Ratio { m: f64::NEG_INFINITY, w: 1.0 },
            sides: question.sides,
        };
        made.observe(question, &total_of, rows);
        made
    }

    /// Notes the observed statistics of the rows and the largest of them.
    fn observe(&mut self, question: &Question, total_of: &[f64], rows: &[(usize, bool)]) {
        let error = self.sum_up();
        for &(row, alone) in rows {
            let mut test = self.row_test(&question.rows[row], total_of, alone);
            test.observed = self.ratio(&test, error);
            let (now, best) = (test.observed, self.largest);
            if best.m == f64::NEG_INFINITY || now.m * best.w > best.m * now.w {
                self.largest = now;
            }
            self.rows.push(test);
        }
    }

    fn row_test(&self, coefficients: &[f64], total_of: &[f64], alone: bool) -> RowTest {
        let groups: Vec<usize> =
            (0..coefficients.len()).filter(|group| coefficients[*group] != 0.0).collect();
        let square = |group: &usize| coefficients[*group] * coefficients[*group] / self.sizes[*group];
        let scale: f64 = groups.iter().map(square).sum();
        let total = groups.first().map_or(0.0, |group| total_of[*group]);
        let most_w = match self.error {
            Error::Pooled { fixed, total } => fixed + total,
            Error::Separate => {
                groups.iter().map(|group| total / (self.sizes[*group] - 1.0)).fold(0.0, f64::max)
            }
        };
        let weight = |group: &usize| coefficients[*group] / self.sizes[*group] / scale.sqrt();
        RowTest {
            weights: groups.iter().map(|group| (*group, weight(group))).collect(),
            shares: groups.iter().map(|group| (*group, square(group) / scale)).collect(),
            most_w,
            zero: EQUAL * EQUAL * total,
            observed: Ratio { m: 0.0, w: 1.0 },
            alone,
        }
    }

    /// Puts the observations into the arrangement that `stream` draws.
    pub fn draw(&mut self, stream: &mut Stream) {
        // From the observed arrangement, so that it does not depend on what was drawn before.
        self.labels.copy_from_slice(&self.first);
        for cell in &self.cells {
            stream.shuffle(&mut self.labels[cell.clone()]);
        }
    }

    /// Goes on to the next arrangement; false when it is the observed one again, from which it begins.
    pub fn step(&mut self) -> bool {
        self.cells.iter().any(|cell| next_arrangement(&mut self.labels[cell.clone()]))
    }

    /// Whether the largest statistic is at least as large as the largest observed one. Calls `alone` with the place of each row that
    /// is tested alone and is at least as large as observed.
    pub fn compare(&mut self, mut alone: impl FnMut(usize)) -> bool {
        let error = self.sum_up();
        let mut at_least = false;
        for (place, row) in self.rows.iter().enumerate() {
            if at_least && !row.alone {
                continue;
            }
            let now = self.ratio(row, error);
            at_least |= reaches(now, self.largest, row.most_w);
            if row.alone && reaches(now, row.observed, row.most_w) {
                alone(place);
            }
        }
        at_least
    }

    /// Sums the groups of the present arrangement up; the sum of squares inside the groups, where it is the error term.
    fn sum_up(&mut self) -> f64 {
        self.moved.iter().for_each(|group| self.sums[*group] = 0.0);
        for (value, label) in self.values.iter().zip(&self.labels) {
            self.sums[*label] += value;
        }
        match self.error {
            Error::Pooled { fixed, total } => {
                let between = |group: &usize| self.sums[*group] * self.sums[*group] / self.sizes[*group];
                (fixed + (total - self.moved.iter().map(between).sum::<f64>())).max(0.0)
            }
            Error::Separate => {
                self.moved.iter().for_each(|group| self.squares[*group] = 0.0);
                for (value, label) in self.values.iter().zip(&self.labels) {
                    self.squares[*label] += value * value;
                }
                0.0
            }
        }
    }

    fn ratio(&self, row: &RowTest, error: f64) -> Ratio {
        let estimate: f64 = row.weights.iter().map(|(group, weight)| weight * self.sums[*group]).sum();
        let square = estimate * estimate;
        if square <= row.zero {
            return Ratio { m: 0.0, w: row.most_w };
        }
        let m = match self.sides {
            Sides::Both => square,
            Sides::Greater => square.copysign(estimate),
            Sides::Less => square.copysign(-estimate),
        };
        let variance = |group: usize| {
            let inside = self.squares[group] - self.sums[group] * self.sums[group] / self.sizes[group];
            inside.max(0.0) / (self.sizes[group] - 1.0)
        };
        let w = match self.error {
            Error::Pooled { .. } => error,
            Error::Separate => row.shares.iter().map(|(group, share)| share * variance(*group)).sum(),
        };
        Ratio { m, w }
    }
}

/// Whether the statistic is at least as large as `observed`, or equal to it but for rounding.
fn reaches(now: Ratio, observed: Ratio, most_w: f64) -> bool {
    now.m * observed.w - observed.m * now.w >= -EQUAL * observed.m.abs() * most_w
}

/// Takes the mean off; the sum of squares that is left.
fn centre(values: &mut [f64]) -> f64 {
    let mean = values.iter().sum::<f64>() / values.len() as f64;
    values.iter_mut().for_each(|value| *value -= mean);
    values.iter().map(|value| value * value).sum()
}

/// The next one of the different orders of `labels` in the order of the dictionary; false when it is the first one again.
fn next_arrangement(labels: &mut [usize]) -> bool {
    let Some(last) = labels.windows(2).rposition(|two| two[0] < two[1]) else {
        labels.reverse();
        return false;
    };
    let greater = labels.iter().rposition(|label| *label > labels[last]).unwrap_or(last);
    labels.swap(last, greater);
    labels[last + 1..].reverse();
    true
}
