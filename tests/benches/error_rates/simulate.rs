//! Runs the trials of a cell and counts the errors.

use crate::cells::Cell;
use crate::judge::{ALPHA, Trial};
use crate::offered::{Ground, Row};
use levelwise::numerics::OutOfDomain;
use levelwise::numerics::distributions::normal;
use std::time::{Duration, Instant};

const THREADS: u64 = 2;

/// A share of false findings has a denominator of at most 6, so that in sixtieths it is a whole number: sums of whole
/// numbers do not depend on how the trials are spread over threads.
const SIXTIETHS: u64 = 60;

/// What the trials of one procedure in one cell came to.
#[derive(Debug, Clone, Copy, Default)]
pub struct Tally {
    pub trials: u64,
    /// Trials with at least one true hypothesis rejected.
    with_error: u64,
    /// The shares of false findings among the findings, in sixtieths, and their squares.
    shares: u64,
    squares: u64,
    /// Spent in the procedure, over all threads.
    pub time: Duration,
}

/// An estimate with its 95 % Monte Carlo interval, as fractions.
#[derive(Debug, Clone, Copy)]
pub struct Rate {
    pub estimate: f64,
    pub lower: f64,
    pub upper: f64,
}

impl Tally {
    fn count(&mut self, adjusted: &[f64], hypothesis_is_true: &[bool]) {
        let rejected = || adjusted.iter().zip(hypothesis_is_true).filter(|(p, _)| **p <= ALPHA);
        let (all, wrong) =
            (rejected().count() as u64, rejected().filter(|(_, is_true)| **is_true).count() as u64);
        let share = SIXTIETHS * wrong / all.max(1);
        self.trials += 1;
        self.with_error += u64::from(wrong > 0);
        self.shares += share;
        self.squares += share * share;
    }

    fn add(&mut self, other: &Self) {
        self.trials += other.trials;
        self.with_error += other.with_error;
        self.shares += other.shares;
        self.squares += other.squares;
        self.time += other.time;
    }

    /// The family-wise error, with Wilson's score interval (1927, J. Amer. Statist. Assoc. 22, 209-212).
    ///
    /// # Errors
    /// [`OutOfDomain`] never.
    pub fn family_wise_error(&self) -> Result<Rate, OutOfDomain> {
        let (n, z) = (self.trials as f64, normal::upper_quantile(0.025)?);
        let p = self.with_error as f64 / n;
        let middle = p + z * z / (2.0 * n);
        let half = z * (p * (1.0 - p) / n + z * z / (4.0 * n * n)).sqrt();
        let scale = 1.0 + z * z / n;
        Ok(Rate { estimate: p, lower: (middle - half) / scale, upper: (middle + half) / scale })
    }

    /// The false discovery rate: the mean share, with the normal interval of a mean.
    ///
    /// # Errors
    /// [`OutOfDomain`] never.
    pub fn false_discovery_rate(&self) -> Result<Rate, OutOfDomain> {
        let (n, unit) = (self.trials as f64, SIXTIETHS as f64);
        let mean = self.shares as f64 / n / unit;
        let variance = self.squares as f64 / n / (unit * unit) - mean * mean;
        let half = normal::upper_quantile(0.025)? * (variance.max(0.0) / n).sqrt();
        Ok(Rate { estimate: mean, lower: mean - half, upper: mean + half })
    }
}

/// One tally a row, or why the procedure does not decide.
pub type Counted = Vec<Result<Tally, String>>;

/// All trials of a cell on one ground; no procedure has more than `most` of them.
pub fn simulate(cell: &Cell, ground: Ground, rows: &[Row], most: u64) -> Counted {
    std::thread::scope(|scope| {
        let workers: Vec<_> =
            (0..THREADS).map(|first| scope.spawn(move || share(cell, ground, rows, most, first))).collect();
        let counted = workers.into_iter().map(|worker| worker.join().expect("a worker that counts"));
        counted.reduce(added).unwrap_or_default()
    })
}

fn added(one: Counted, other: Counted) -> Counted {
    let each = one.into_iter().zip(other);
    each.map(|(one, other)| {
        let (mut one, other) = (one?, other?);
        one.add(&other);
        Ok(one)
    })
    .collect()
}

/// Every trial from `first` on that is this worker's.
fn share(cell: &Cell, ground: Ground, rows: &[Row], most: u64, first: u64) -> Counted {
    let mut counted: Counted = rows.iter().map(|_| Ok(Tally::default())).collect();
    let longest = rows.iter().map(|row| row.trials).max().unwrap_or(0).min(most);
    for number in (first..longest).step_by(THREADS as usize) {
        let sample = cell.sample(number);
        let mut trial = match Trial::new(cell, ground, number, &sample) {
            Ok(trial) => trial,
            Err(reason) => return rows.iter().map(|_| Err(reason.to_string())).collect(),
        };
        for (row, counted) in rows.iter().zip(&mut counted).filter(|(row, _)| number < row.trials) {
            let Ok(tally) = counted else { continue };
            let start = Instant::now();
            match trial.adjusted(row) {
                Ok(Some(adjusted)) => tally.count(&adjusted, &cell.hypothesis_is_true),
                Ok(None) => tally.trials += 1,
                Err(reason) => {
                    *counted = Err(reason.to_string());
                    continue;
                }
            }
            tally.time += start.elapsed();
        }
    }
    counted
}
