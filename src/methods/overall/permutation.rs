//! The permutation test of Fisher and Pitman for a one-way layout, by counting every assignment.

use super::{NoOverallTest, check_levels};
use crate::numerics::OutOfDomain;
use crate::study::{NoEstimates, Sample};
use serde::Serialize;

/// Most assignments that are counted; beyond them only a sample of assignments is practical.
pub const MOST_ASSIGNMENTS: u64 = 2_000_000;

/// The exact permutation test of the one-way F statistic.
///
/// Hypothesis: the labels of the groups are exchangeable, as they are after a random assignment if the groups make no
/// difference. It holds its error rate for any distribution, but as a test of means it needs equal spread: with unequal
/// variances and unequal sizes it rejects for the wrong reason.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct PermutationF {
    /// The share of assignments whose F is at least the observed one: `at_least` / `assignments`. Never 0, as the
    /// observed assignment counts.
    pub p: f64,
    pub at_least: u64,
    /// N!/(n₁! ... nₖ!): all ways to assign the observations to groups of these sizes, tied values told apart.
    pub assignments: u64,
}

impl PermutationF {
    /// The test of the values in `sample`, the levels being named by `labels`.
    ///
    /// The total sum of squares is the same in all assignments, so that F is at least as large as observed exactly when
    /// Σ T²/n is, with T the sums of the groups. That is decided in whole numbers: the values are taken as multiples of the
    /// largest power of ten that they all share. Values that share none within 13 digits or so (results of calculations)
    /// are rounded to that precision, and F then counts as equal within 1e-9 of the total sum of squares.
    ///
    /// # Errors
    /// [`NoOverallTest::NoEstimates`] for fewer than two levels, an empty level or values that are not finite;
    /// [`NoOverallTest::NoProbability`] for more than [`MOST_ASSIGNMENTS`] assignments.
    ///
    /// # Accuracy
    /// Whole numbers, divided once. At the limit the count takes 0.06 s natively (0.13 s for one observation against
    /// two million).
    ///
    /// # Source
    /// Fisher (1935), The Design of Experiments, section 21; Pitman (1938), Biometrika 29, 322-335,
    /// doi 10.1093/biomet/29.3-4.322.
    pub fn of(labels: &[String], sample: &Sample) -> Result<Self, NoOverallTest> {
        check_levels(labels, sample.groups.iter().map(Vec::len))?;
        if !sample.groups.iter().flatten().all(|value| value.is_finite()) {
            return Err(NoEstimates::OutOfRange.into());
        }
        let sizes: Vec<usize> = sample.groups.iter().map(Vec::len).collect();
        let assignments = countable(&sizes)?;
        let (values, rounding) = whole_numbers(&sample.groups.concat());
        let at_least = Enumeration::new(&values, &sizes, rounding).count();
        Ok(Self { p: at_least as f64 / assignments as f64, at_least, assignments })
    }
}

/// N!/(n₁! ... nₖ!), if that many are counted.
fn countable(sizes: &[usize]) -> Result<u64, OutOfDomain> {
    let (mut ways, mut dealt) = (1.0_f64, 0.0);
    for &size in sizes {
        for place in 1..=size {
            dealt += 1.0;
            // Whole at every step: these are binomial coefficients, far below 2⁵³ until the limit ends it.
            ways = ways * dealt / place as f64;
            if ways > 1e300 {
                break;
            }
        }
    }
    if ways > MOST_ASSIGNMENTS as f64 {
        let allowed = "at most 2000000 for an exact permutation test";
        return Err(OutOfDomain { argument: "number of assignments", value: ways, allowed });
    }
    Ok(ways as u64)
}

/// Whether the whole numbers are the values themselves, on another scale.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Rounding {
    Exact,
    Rounded,
}

/// The values as whole numbers on a common scale, their magnitudes together below 2⁵⁰.
fn whole_numbers(values: &[f64]) -> (Vec<i64>, Rounding) {
    let largest = values.iter().fold(0.0_f64, |largest, value| largest.max(value.abs()));
    let room = (1_u64 << 50) as f64 / values.len() as f64;
    let mut scale = 1.0;
    while largest * scale < room && scale < 1e15 {
        // A decimal with so many places is the quotient of these two, rounded once.
        if values.iter().all(|value| libm::rint(value * scale) / scale == *value) {
            return (values.iter().map(|value| libm::rint(value * scale) as i64).collect(), Rounding::Exact);
        }
        scale *= 10.0;
    }
    let (_, exponent) = libm::frexp(largest);
    let shift = libm::ilogb(room) - exponent;
    let rounded = values.iter().map(|value| libm::rint(libm::ldexp(*value, shift)) as i64);
    (rounded.collect(), Rounding::Rounded)
}

/// Chooses the members of one group after the other, the largest group taking the rest.
struct Enumeration<'a> {
    values: &'a [i64],
    taken: Vec<bool>,
    /// In ascending order.
    sizes: Vec<usize>,
    /// The least common multiple of the sizes, by the size: Σ T²/n times that multiple is whole. By Cauchy's inequality it is
    /// at most the multiple times Σ x² < 2¹⁰⁰; the multiple is below 2²² where the assignments can be counted.
    weights: Vec<i128>,
    threshold: i128,
    at_least: u64,
}

impl<'a> Enumeration<'a> {
    /// `values` in the order of the groups with these `sizes`, as observed.
    fn new(values: &'a [i64], sizes: &[usize], rounding: Rounding) -> Self {
        let multiple = sizes.iter().fold(1, |multiple, &size| least_common_multiple(multiple, size));
        let (mut threshold, mut rest) = (0, values);
        for &size in sizes {
            let (group, others) = rest.split_at(size);
            threshold += square(group.iter().sum()) * (multiple / size) as i128;
            rest = others;
        }
        if rounding == Rounding::Rounded {
            let (n, squares) =
                (values.len() as i128, values.iter().map(|&value| square(value)).sum::<i128>());
            threshold -= (n * squares - square(values.iter().sum())) * multiple as i128 / n / 1_000_000_000;
        }
        let mut sizes = sizes.to_vec();
        sizes.sort_unstable();
        let weights = sizes.iter().map(|size| (multiple / size) as i128).collect();
        Self { values, taken: vec![false; values.len()], sizes, weights, threshold, at_least: 0 }
    }

    fn count(mut self) -> u64 {
        let all = self.values.iter().sum();
        self.choose(0, self.sizes[0], 0, 0, 0, all);
        self.at_least
    }

    /// Chooses the last `missing` members of `group` from `start` on: `sum` is that of the members chosen so far, `spread` is
    /// Σ T² w of the groups before, `left` the sum of all that is not chosen yet.
    fn choose(&mut self, group: usize, missing: usize, start: usize, sum: i64, spread: i128, left: i64) {
        let before_last = group + 2 == self.sizes.len();
        for place in start..=self.values.len() - missing {
            if self.taken[place] {
                continue;
            }
            let value = self.values[place];
            let (sum, left) = (sum + value, left - value);
            if missing > 1 {
                self.taken[place] = true;
                self.choose(group, missing - 1, place + 1, sum, spread, left);
                self.taken[place] = false;
                continue;
            }
            let spread = spread + square(sum) * self.weights[group];
            if before_last {
                let complete = spread + square(left) * self.weights[group + 1];
                self.at_least += u64::from(complete >= self.threshold);
            } else {
                self.taken[place] = true;
                self.choose(group + 1, self.sizes[group + 1], 0, 0, spread, left);
                self.taken[place] = false;
            }
        }
    }
}

fn square(sum: i64) -> i128 {
    i128::from(sum) * i128::from(sum)
}

fn least_common_multiple(a: usize, b: usize) -> usize {
    let (mut x, mut y) = (a, b);
    while y != 0 {
        (x, y) = (y, x % y);
    }
    a / x * b
}
