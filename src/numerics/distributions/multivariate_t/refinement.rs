//! A probability in the making, refined slice by slice.

use super::estimator::{self, Estimator, Part, Ready, Scratch};
use super::lattice;
use super::leader::Side;
use super::{Answer, Effort, Method};
use crate::numerics::random::Streams;

/// Multiplications, roughly, of one slice: a few milliseconds.
const SLICE: usize = 2_000_000;

/// The probability of a region, refined slice by slice. The answer after so many points is the same however they are cut into
/// slices, and the same everywhere for one seed.
#[derive(Debug, Clone)]
pub struct Refinement {
    wanted: Side,
    state: State,
}

#[derive(Debug, Clone)]
enum State {
    /// Nothing is left to refine.
    Known(Answer),
    Points(Box<Points>),
}

impl Refinement {
    pub(super) fn known(value: f64, wanted: Side) -> Refinement {
        Refinement {
            wanted,
            state: State::Known(Answer { value, error: 0.0, points: 0, method: Method::Exact }),
        }
    }

    /// `first` is the number of points of each lattice before the first answer.
    pub(super) fn of(estimator: Estimator, wanted: Side, seed: u64, first: usize) -> Refinement {
        Refinement { wanted, state: State::Points(Box::new(Points::new(estimator, seed, first))) }
    }

    /// Does one slice of work, a few milliseconds, and says whether there is more to refine.
    pub fn advance(&mut self) -> bool {
        match &mut self.state {
            State::Known(_) => false,
            State::Points(points) => points.advance(),
        }
    }

    /// The probability as far as it is known: nothing before the first points are complete.
    ///
    /// # Accuracy
    /// The standard error that is part of the answer; it falls about in proportion to the number of points.
    pub fn estimate(&self) -> Option<Answer> {
        match &self.state {
            State::Known(answer) => Some(*answer),
            State::Points(points) => points.answer.map(|answer| {
                let same = points.estimator.side() == self.wanted;
                let value = if same { answer.value } else { 1.0 - answer.value };
                Answer { value: value.clamp(0.0, 1.0), ..answer }
            }),
        }
    }

    /// Refines until the error is small enough or the points are used up, and gives the answer.
    pub(super) fn run(mut self, effort: Effort) -> Answer {
        loop {
            let more = self.advance();
            if let Some(answer) = self.estimate() {
                let enough = answer.error <= effort.relative_error * answer.value;
                // The next refinement doubles the points.
                if !more || enough || 2 * self.points_each() > effort.most_points {
                    return answer;
                }
            }
        }
    }

    /// Points of each lattice in the last answer.
    pub(super) fn points_each(&self) -> usize {
        match &self.state {
            State::Known(_) => 0,
            State::Points(points) => points.complete,
        }
    }
}

/// Sums over lattices, one for each part and shift.
#[derive(Debug, Clone)]
struct Points {
    estimator: Estimator,
    parts: Vec<Part>,
    shifts: usize,
    streams: Streams,
    /// For each part, one for each shift.
    sums: Vec<f64>,
    /// Points of each lattice that the answer rests on, and up to which they are being added.
    complete: usize,
    goal: usize,
    /// The lattice and the point that come next.
    part: usize,
    shift: usize,
    point: usize,
    ready: Option<Ready>,
    answer: Option<Answer>,
}

impl Points {
    fn new(estimator: Estimator, seed: u64, first: usize) -> Points {
        let parts = estimator.parts();
        let shifts = estimator::shifts(&parts);
        let sums = vec![0.0; parts.len() * shifts];
        Points {
            estimator,
            parts,
            shifts,
            streams: Streams::new(seed, "multivariate t"),
            sums,
            complete: 0,
            goal: first.clamp(lattice::FEWEST, lattice::MOST),
            part: 0,
            shift: 0,
            point: 0,
            ready: None,
            answer: None,
        }
    }

    /// One slice; whether there is more.
    fn advance(&mut self) -> bool {
        if self.complete >= lattice::MOST {
            return false;
        }
        let mut left = SLICE;
        while left > 0 {
            let ready = self.ready.take().unwrap_or_else(|| self.estimator.prepare(self.part));
            let most = (left / ready.work()).max(1);
            let end = self.goal.min(self.point + most);
            self.add(&ready, end);
            left = left.saturating_sub((end - self.point) * ready.work());
            self.point = end;
            if end < self.goal {
                self.ready = Some(ready);
                return true;
            }
            self.point = self.complete;
            self.shift += 1;
            if self.shift < self.shifts {
                self.ready = Some(ready);
                continue;
            }
            (self.shift, self.part) = (0, self.part + 1);
            if self.part == self.parts.len() {
                self.conclude();
                return self.complete < lattice::MOST;
            }
        }
        true
    }

    /// Adds the points up to `end` of the present lattice to its sum.
    fn add(&mut self, ready: &Ready, end: usize) {
        let lattice = self.part * self.shifts + self.shift;
        let dimension = self.estimator.dimension(ready);
        let mut stream = self.streams.stream(lattice as u64);
        let shift: Vec<f64> = (0..dimension).map(|_| stream.uniform()).collect();
        let mut point = vec![0.0; dimension];
        let mut scratch = Scratch::default();
        for k in self.point..end {
            lattice::point(k, &shift, &mut point);
            self.sums[lattice] += self.estimator.sample(ready, &point, &mut scratch);
        }
    }

    /// The answer from the sums, which are complete.
    fn conclude(&mut self) {
        let (each, shifts) = (self.goal as f64, self.shifts as f64);
        let (mut value, mut variance) = (0.0, 0.0);
        for (part, sums) in self.parts.iter().zip(self.sums.chunks_exact(self.shifts)) {
            let mean = sums.iter().sum::<f64>() / (each * shifts);
            let squares: f64 = sums.iter().map(|sum| (sum / each - mean) * (sum / each - mean)).sum();
            value += part.constant + part.factor * mean;
            variance += part.factor * part.factor * squares / (shifts * (shifts - 1.0));
        }
        let method = match self.estimator {
            Estimator::Leader(_) => Method::Leader,
            Estimator::Separation(_) => Method::Separation,
        };
        let points = self.sums.len() * self.goal;
        self.answer = Some(Answer { value, error: variance.sqrt(), points, method });
        self.complete = self.goal;
        self.goal = (2 * self.goal).min(lattice::MOST);
        (self.part, self.shift, self.point) = (0, 0, self.complete);
    }
}
