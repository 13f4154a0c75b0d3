//! A parametric bootstrap of the dose with a target effect.
//!
//! Replicate r draws the mean of each dose from the normal law around the fitted curve, with variance s² / n, from random
//! stream r; fits the same shape to these means, its parameters held inside the same bounds; and reads its dose. The interval is the
//! percentile interval: with B replicates the doses number k and B + 1 - k in ascending order, k = ⌊(B + 1) α / 2⌋. A replicate whose
//! curve does not reach the target inside the range of the doses counts as a dose beyond the highest, so that the upper end
//! is open when there are many of them. The variance of a replicate has no part in its curve and is not drawn.
//!
//! # References
//! 1. Efron and Tibshirani (1993), An Introduction to the Bootstrap, sections 6.5 and 13.3.
//! 2. Pinheiro, Bornkamp and Bretz (2006), J. Biopharm. Statist. 16, 639-656, doi 10.1080/10543400600860428.

use super::dose::{check_target, dose_of};
use super::fit::{DoseResponse, ShapeFit};
use super::search::Search;
use crate::methods::slices::{Advance, InSlices, Progress};
use crate::numerics::OutOfDomain;
use crate::numerics::random::Streams;

/// Replicates of one slice, for shapes with none, one and two nonlinear parameters: up to some milliseconds each.
const PER_SLICE: [u64; 3] = [500, 100, 10];
/// The fewest and the most replicates: below, an end of a 95 % interval would be among the two most extreme doses.
const REPEATS: std::ops::RangeInclusive<u64> = 100..=1_000_000;

/// What the replicates say about the dose.
#[derive(Debug, Clone, PartialEq)]
pub struct Bootstrap {
    pub repeats: u64,
    pub seed: u64,
    /// Replicates whose curve does not reach the target inside the range of the doses.
    pub not_reached: u64,
    /// Replicates with a parameter at its bound; they count with the curve there.
    pub at_bound: u64,
    /// `None` where the end lies beyond the highest dose.
    pub lower: Option<f64>,
    pub upper: Option<f64>,
    /// The median dose, `None` where half of the replicates do not reach the target.
    pub median: Option<f64>,
}

impl Bootstrap {
    /// The share of the replicates that do not reach the target.
    pub fn share_not_reached(&self) -> f64 {
        self.not_reached as f64 / self.repeats as f64
    }
}

/// A bootstrap in the making. It owns all it needs.
#[derive(Debug)]
pub struct BootstrapWork {
    data: DoseResponse,
    search: Search,
    /// Of the fitted curve, and of a mean around it, at each dose.
    heights: Vec<f64>,
    errors: Vec<f64>,
    target: f64,
    confidence: f64,
    streams: Streams,
    repeats: u64,
    seed: u64,
    per_slice: u64,
    at_bound: u64,
    /// Infinite where the target is not reached.
    found: Vec<f64>,
}

impl BootstrapWork {
    /// The bootstrap of the dose with the effect `target` for `fit`, which was fitted to `data`.
    ///
    /// # Errors
    /// [`OutOfDomain`] if the target is 0 or not finite, the confidence is not between 0 and 1, or `repeats` is not from 100 to a
    /// million or so few that the interval would need a more extreme dose than there is.
    pub fn new(
        data: &DoseResponse,
        fit: &ShapeFit,
        target: f64,
        confidence: f64,
        repeats: u64,
        seed: u64,
    ) -> Result<Self, OutOfDomain> {
        check_target(target)?;
        if !(confidence > 0.0 && confidence < 1.0) {
            let allowed = "greater than 0 and less than 1";
            return Err(OutOfDomain { argument: "confidence", value: confidence, allowed });
        }
        if !REPEATS.contains(&repeats) || rank(repeats, confidence) == 0 {
            let allowed = "from 100 to 1000000, and at least 2 / (1 - confidence)";
            return Err(OutOfDomain { argument: "number of replicates", value: repeats as f64, allowed });
        }
        Ok(Self {
            search: Search::new(&fit.curve.shape, &data.doses, &data.n),
            heights: data.doses.values().iter().map(|x| fit.curve.at(*x)).collect(),
            errors: data.n.iter().map(|n| (fit.variance / n).sqrt()).collect(),
            data: data.clone(),
            target,
            confidence,
            streams: Streams::new(seed, "curves over doses"),
            repeats,
            seed,
            per_slice: PER_SLICE[fit.curve.shape.gradient(fit.highest).len().min(2)],
            at_bound: 0,
            found: Vec::new(),
        })
    }

    /// The same work with slices of so many replicates, at least 1.
    pub fn per_slice(mut self, replicates: u64) -> Self {
        self.per_slice = replicates.max(1);
        self
    }

    fn replicate(&mut self, index: u64) {
        let mut stream = self.streams.stream(index);
        let around = self.heights.iter().zip(&self.errors);
        let means: Vec<f64> = around.map(|(height, error)| height + error * stream.normal()).collect();
        let minimum = self.search.minimum(&means);
        self.at_bound += u64::from(minimum.at_bound.is_some());
        let (lowest, highest) = (self.data.doses.lowest(), self.data.doses.highest());
        let curve = self.data.curve(&minimum.shape, &means);
        let dose = curve.and_then(|curve| dose_of(&curve, self.target, lowest, highest));
        self.found.push(dose.unwrap_or(f64::INFINITY));
    }

    fn result(&mut self) -> Bootstrap {
        self.found.sort_by(f64::total_cmp);
        let k = rank(self.repeats, self.confidence) as usize;
        let known = |place: usize| self.found.get(place).copied().filter(|dose| dose.is_finite());
        Bootstrap {
            repeats: self.repeats,
            seed: self.seed,
            not_reached: self.found.iter().filter(|dose| dose.is_infinite()).count() as u64,
            at_bound: self.at_bound,
            lower: known(k - 1),
            upper: known(self.found.len() - k),
            median: known(self.found.len() / 2),
        }
    }
}

/// k of the module's head.
fn rank(repeats: u64, confidence: f64) -> u64 {
    // The small share keeps a product that is a whole number, 1000 x 0.025, from falling below it by rounding.
    libm::floor((repeats as f64 + 1.0) * 0.5 * (1.0 - confidence) + 1e-9) as u64
}

impl InSlices for BootstrapWork {
    type Result = Bootstrap;

    /// One slice of some milliseconds.
    fn advance(&mut self) -> Advance<Bootstrap> {
        let done = self.found.len() as u64;
        for index in done..(done + self.per_slice).min(self.repeats) {
            self.replicate(index);
        }
        if self.found.len() as u64 == self.repeats {
            return Advance::Done(self.result());
        }
        let done = self.found.len() as f64 / self.repeats as f64;
        Advance::Working(Progress { done, estimate: None })
    }
}
