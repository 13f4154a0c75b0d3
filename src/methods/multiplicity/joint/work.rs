//! The whole family as a list of probabilities and critical values, found one after the other in slices.

use super::law::Law;
use super::null_sets::{self, NullSet};
use super::refined::{CriticalWork, Found, TailWork};
use super::statistics::Statistics;
use super::{Joint, JointRow, Procedure, Steps};
use crate::methods::multiplicity::Sides;
use crate::methods::slices::{Advance, InSlices, Progress};
use crate::numerics::OutOfDomain;
use crate::study::Estimates;

/// What may be done in one slice: a slice of lattice points, which takes a few milliseconds, costs [`OF_POINTS`], anything
/// else, mostly a fraction of a millisecond, 1.
const PER_SLICE: usize = 20;
const OF_POINTS: usize = 10;

/// A probability that is wanted, and for whom.
struct Job {
    set: NullSet,
    /// The rows whose adjusted p-value is at least this probability.
    rows: Vec<usize>,
}

/// Single-step or step-down max-t in the making. It owns all it needs.
pub struct JointWork {
    statistics: Statistics,
    alpha: f64,
    steps: Steps,
    jobs: Vec<Job>,
    /// The job or, after all jobs, the row that comes next.
    next: usize,
    adjusted: Vec<Found>,
    critical: Vec<Option<Found>>,
    /// The law that was used last, with its rows and degrees of freedom.
    law: Option<(Vec<usize>, f64, Law)>,
    now: Now,
}

/// The number that is being worked out.
enum Now {
    Nothing,
    Tail(TailWork),
    Critical(CriticalWork),
}

impl JointWork {
    /// The work for these contrasts (`rows`: one coefficient a level), each against the value `null` under its hypothesis (0 for a
    /// difference, a margin otherwise), to be decided at `alpha`.
    ///
    /// # Errors
    /// [`OutOfDomain`] if there are no contrasts or more than 1000, one has not as many coefficients as there are levels, one
    /// has no finite t, `alpha` is not between 0 and 1, or the degrees of freedom are outside the distributions' range.
    pub fn new(
        estimates: &Estimates,
        rows: &[Vec<f64>],
        null: f64,
        sides: Sides,
        procedure: Procedure,
        alpha: f64,
    ) -> Result<Self, OutOfDomain> {
        if !(alpha > 0.0 && alpha < 1.0) {
            let allowed = "greater than 0 and less than 1";
            return Err(OutOfDomain { argument: "alpha", value: alpha, allowed });
        }
        let statistics = Statistics::of(estimates, rows, null, sides)?;
        let (steps, jobs) = match procedure {
            Procedure::SingleStep => (Steps::Single, single_step(&statistics)),
            Procedure::StepDown => {
                let (steps, sets) = null_sets::sets(&statistics);
                (steps, sets.into_iter().map(|set| Job { rows: set.rows.clone(), set }).collect())
            }
        };
        let adjusted = statistics.raw.iter().map(|raw| Found::exactly(*raw)).collect();
        let critical = vec![None; statistics.count()];
        Ok(Self { statistics, alpha, steps, jobs, next: 0, adjusted, critical, law: None, now: Now::Nothing })
    }

    /// Does a bit of the number at hand, or begins with the next one, and says what that cost; 0 once all is done.
    fn go_on(&mut self) -> Result<usize, OutOfDomain> {
        match std::mem::replace(&mut self.now, Now::Nothing) {
            Now::Nothing => return Ok(usize::from(self.begin()?)),
            Now::Tail(TailWork::Known(found)) => {
                self.take_tail(found);
                return Ok(1);
            }
            Now::Tail(mut work) => match work.advance() {
                Some(found) => self.take_tail(found),
                None => self.now = Now::Tail(work),
            },
            Now::Critical(mut work) => {
                let found = match &mut self.law {
                    Some((_, _, law)) => work.advance(law)?,
                    None => None,
                };
                match found {
                    Some(found) => self.take_critical(found),
                    None => self.now = Now::Critical(work),
                }
            }
        }
        Ok(OF_POINTS)
    }

    /// Begins with the next number, if there is one.
    fn begin(&mut self) -> Result<bool, OutOfDomain> {
        if let Some(job) = self.jobs.get(self.next) {
            if self.is_settled(job) {
                self.next += 1;
                return Ok(true);
            }
            let (rows, lead) = (job.set.rows.clone(), job.set.lead);
            let c = self.statistics.towards(lead);
            let alpha = self.alpha;
            let work = TailWork::new(self.law_of(&rows, self.statistics.df[lead])?, c, alpha)?;
            self.now = Now::Tail(work);
            return Ok(true);
        }
        let Some(row) = self.critical.iter().position(Option::is_none) else { return Ok(false) };
        let (df, alpha, sides) = (self.statistics.df[row], self.alpha, self.statistics.tails());
        let all: Vec<usize> = (0..self.statistics.count()).collect();
        self.next = self.jobs.len() + row;
        match self.law_of(&all, df)?.critical(alpha)? {
            Some(critical) => self.take_critical(Found::exactly(critical)),
            None => self.now = Now::Critical(CriticalWork::new(all.len(), df, sides, alpha)?),
        }
        Ok(true)
    }

    /// Whether Bonferroni's bound already shows that the job can raise no adjusted p-value.
    fn is_settled(&self, job: &Job) -> bool {
        let bound = job.set.rows.len() as f64 * self.statistics.raw[job.set.lead];
        let least = job.rows.iter().map(|&row| self.adjusted[row].value).fold(f64::INFINITY, f64::min);
        bound <= least
    }

    fn law_of(&mut self, rows: &[usize], df: f64) -> Result<&mut Law, OutOfDomain> {
        let known = self.law.take().filter(|(its, of, _)| its == rows && *of == df);
        let law = match known {
            Some(law) => law,
            None => (rows.to_vec(), df, Law::of(&self.statistics, rows, df)?),
        };
        Ok(&mut self.law.insert(law).2)
    }

    fn take_tail(&mut self, found: Found) {
        let job = &self.jobs[self.next];
        for &row in &job.rows {
            // Neither the rounding of an integral nor the error of a lattice brings a p-value below the row's own or above 1.
            let (so_far, raw) = (self.adjusted[row].value, self.statistics.raw[row]);
            if found.value > so_far || (row == job.set.lead && so_far == raw) {
                self.adjusted[row] = Found { value: found.value.clamp(raw, 1.0), ..found };
            }
        }
        self.next += 1;
    }

    fn take_critical(&mut self, found: Found) {
        let row = self.next - self.jobs.len();
        let df = self.statistics.df[row];
        for (critical, its) in self.critical.iter_mut().zip(&self.statistics.df) {
            if *its == df {
                *critical = Some(found);
            }
        }
    }

    fn progress(&self) -> Progress {
        let left = self.critical.iter().filter(|critical| critical.is_none()).count();
        let dfs = self.statistics.df.iter().filter(|df| **df != self.statistics.df[0]).count();
        // With one error term there is one critical value.
        let (criticals, left) = if dfs == 0 { (1, left.min(1)) } else { (self.critical.len(), left) };
        let all = self.jobs.len() + criticals;
        let done = self.next.min(self.jobs.len()) + criticals - left;
        let estimate = match &self.now {
            Now::Tail(work) => work.estimate().map(|found| (found.value, found.error)),
            _ => None,
        };
        Progress { done: done as f64 / all as f64, estimate }
    }

    fn result(&self) -> Joint {
        let statistics = &self.statistics;
        let row = |i: usize| {
            let (adjusted, critical) = (self.adjusted[i], self.critical[i].unwrap_or(Found::exactly(0.0)));
            JointRow {
                t: statistics.t[i],
                df: statistics.df[i],
                p: statistics.raw[i],
                p_adjusted: adjusted.value,
                p_error: adjusted.error,
                exact: adjusted.exact,
                critical: critical.value,
                critical_error: critical.error,
            }
        };
        Joint { rows: (0..statistics.count()).map(row).collect(), steps: self.steps }
    }
}

/// Every row in the family of all; with one error term a row has at least the p-value of those with larger statistics,
/// which the errors of lattices could undo.
fn single_step(statistics: &Statistics) -> Vec<Job> {
    let all: Vec<usize> = (0..statistics.count()).collect();
    let order = statistics.order();
    let same_df = statistics.df.iter().all(|df| *df == statistics.df[0]);
    let mut jobs: Vec<Job> = Vec::new();
    for (step, &lead) in order.iter().enumerate() {
        let alike = |job: &Job| {
            let of = |row: usize| (statistics.towards(row), statistics.df[row]);
            of(job.set.lead) == of(lead)
        };
        let rows = if same_df { order[step..].to_vec() } else { vec![lead] };
        match jobs.iter_mut().find(|job| alike(job)) {
            Some(job) if !same_df => job.rows.push(lead),
            Some(_) => {}
            None => jobs.push(Job { set: NullSet { rows: all.clone(), lead }, rows }),
        }
    }
    jobs
}

impl std::fmt::Debug for JointWork {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        formatter
            .debug_struct("JointWork")
            .field("jobs", &self.jobs.len())
            .field("next", &self.next)
            .finish_non_exhaustive()
    }
}

impl InSlices for JointWork {
    type Result = Result<Joint, OutOfDomain>;

    /// One slice of some ten milliseconds. A single exact number, the factoring of a matrix included, is never cut.
    fn advance(&mut self) -> Advance<Self::Result> {
        let mut spent = 0;
        while spent < PER_SLICE {
            match self.go_on() {
                Err(refused) => return Advance::Done(Err(refused)),
                Ok(0) => return Advance::Done(Ok(self.result())),
                Ok(cost) => spent += cost,
            }
        }
        Advance::Working(self.progress())
    }
}
