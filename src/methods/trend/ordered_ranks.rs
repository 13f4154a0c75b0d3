//! Jonckheere and Terpstra's test: do the values rise (or fall) with the order of the levels, by ranks and without scores?
//!
//! J is the number of pairs of a value of an earlier and one of a later level in which the later is the larger, a tied pair
//! counting ½. Under the hypothesis that all levels have one distribution every way of dealing the values out to the levels is
//! equally likely. Three p-values stand on that:
//!
//! * the exact one, by counting, given the ties, up to [`rank_counts::MOST_PAIRS`] pairs of values of different levels and
//!   [`rank_counts::MOST_ADDITIONS`] additions;
//! * the normal one at z = (J - E)/√V, E = (N² - Σn²)/4, V with the ties in it and no correction for continuity
//!   ([`rank_counts::large_samples`] has the formula);
//! * the one by permutation ([`JonckheereWork`]), for heavily tied values that are too many to be counted: the levels are dealt
//!   out at random again and again.
//!
//! # References
//! 1. Jonckheere (1954), Biometrika 41, 133-145, doi 10.1093/biomet/41.1-2.133; Terpstra (1952), Indag. Math. 14, 327-333.
//! 2. Phipson and Smyth (2010), Statist. Appl. Genet. Molec. Biol. 9, article 39, doi 10.2202/1544-6115.1585 ((b + 1)/(B + 1)).

use crate::methods::multiplicity::Sides;
use crate::methods::multiplicity::permutation::MOST_REPEATS;
use crate::methods::multiplicity::ranks::TailProbabilities;
use crate::methods::slices::{Advance, InSlices, Progress};
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::rank_counts::large_samples::{self, Continuity};
use crate::numerics::distributions::rank_counts::{self, InclusiveTails};
use crate::numerics::random::Streams;

/// The order of the levels against the order of the values.
#[derive(Debug, Clone, PartialEq)]
pub struct JonckheereTerpstra {
    /// Observations of each level.
    pub n: Vec<usize>,
    /// Pairs in which the later level's value is the larger, tied ones counting ½.
    pub j: f64,
    /// E, the expectation of `j` under the hypothesis: half the pairs.
    pub mean: f64,
    /// V, its variance under the hypothesis, given the ties.
    pub variance: f64,
    /// `(j - mean) / √variance`, without correction for continuity.
    pub z: f64,
    /// The share of the observations that share their value with another one.
    pub tied_share: f64,
    /// By the normal distribution, at `z`. Greater: the values rise with the levels.
    pub normal: TailProbabilities,
    /// By counting; `None` beyond the limits of `rank_counts`.
    pub exact: Option<TailProbabilities>,
}

impl JonckheereTerpstra {
    /// The p-value on the sides asked for: the exact one where there is one, else the normal one.
    pub fn p(&self, sides: Sides) -> f64 {
        self.exact.as_ref().unwrap_or(&self.normal).on(sides)
    }
}

/// Why the levels' order is not tested by ranks. Levels are told by their place in the order, from 0.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum NoOrderedTest {
    #[error("there are {levels} levels, and an order needs at least 2")]
    TooFewLevels { levels: usize },
    #[error("level {} has no observation; leave it out", level + 1)]
    EmptyLevel { level: usize },
    #[error("level {} has the value {value}, which is no finite number", level + 1)]
    NotFinite { level: usize, value: f64 },
    #[error("all values are equal, so there is nothing to rank")]
    AllTied,
    #[error("the number of rearrangements to draw is {repeats}, but must be from 1 to {MOST_REPEATS}")]
    Repeats { repeats: u64 },
    #[error("{0}")]
    OutOfDomain(#[from] OutOfDomain),
}

/// J of the levels' values in the order of the levels, with its normal and, within the limits, its exact p-values.
///
/// `groups` has the values of each level, in the order that the alternative names; only comparisons of values count, so that any
/// rising function of them gives the same. With two levels it is the rank-sum test. The order must be fixed before looking
/// at the values. Rejecting says that the distributions differ in the direction of the order; that each level is
/// above the one before it is not shown.
///
/// # Errors
/// [`NoOrderedTest`] for fewer than two levels, an empty one, a value that is not finite, or if all values are equal.
///
/// # Accuracy
/// `j` exact below 2⁵² pairs; relative error of z below 1e-14, of the exact p-values below 1e-13.
///
/// # Source
/// \[1\].
///
/// # Example
/// ```
/// # use levelwise::methods::trend::jonckheere_terpstra;
/// let test = jonckheere_terpstra(&[vec![1.0, 2.0], vec![3.0, 4.0], vec![5.0, 6.0]])?;
/// assert_eq!(test.j, 12.0);
/// assert!((test.exact.unwrap().greater - 1.0 / 90.0).abs() < 1e-15); // one of 90 arrangements
/// # Ok::<(), levelwise::methods::trend::NoOrderedTest>(())
/// ```
pub fn jonckheere_terpstra(groups: &[Vec<f64>]) -> Result<JonckheereTerpstra, NoOrderedTest> {
    let ordered = Ordered::new(groups)?;
    let (j, ties) = (0.5 * ordered.doubled_j(&ordered.levels) as f64, &ordered.ties);
    let beside = large_samples::jonckheere(j, &ordered.n, ties, Continuity::Uncorrected)?;
    let total = ordered.levels.len();
    let tied: usize = ties.iter().filter(|t| **t > 1).sum();
    Ok(JonckheereTerpstra {
        j,
        mean: beside.mean,
        variance: beside.variance,
        z: beside.z,
        tied_share: tied as f64 / total as f64,
        normal: TailProbabilities { both: beside.two_sided(), greater: beside.upper, less: beside.lower },
        exact: counted(j, &ordered.n, ties),
        n: ordered.n,
    })
}

/// The exact p-values; `None` where counting would take too long.
fn counted(j: f64, n: &[usize], ties: &[usize]) -> Option<TailProbabilities> {
    let total: usize = n.iter().sum();
    let tails: InclusiveTails = if ties.len() == total {
        rank_counts::jonckheere(j, n).ok()?
    } else {
        rank_counts::jonckheere_with_ties(j, n, ties).ok()?
    };
    Some(TailProbabilities { both: tails.two_sided(), greater: tails.upper, less: tails.lower })
}

/// The p-values of J by random rearrangement.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct JonckheereByPermutation {
    /// Of the values as they were observed.
    pub j: f64,
    /// Rearrangements drawn.
    pub repeats: u64,
    /// (b + 1)/(B + 1) with b of the B rearrangements as extreme as the observed one: never 0. On both sides twice the smaller
    /// of the other two, at most 1.
    pub p: TailProbabilities,
    /// Of the p-values, from the drawing: √(p (1 - p)/B), on both sides twice that of the smaller one.
    pub standard_error: TailProbabilities,
}

/// What is drawn in a slice, in observations: some 5 ms native.
const SLICE: usize = 1_000_000;

/// J by permutation, at work: replicate i uses stream i, so that the result is the same for every slicing.
#[derive(Debug)]
pub struct JonckheereWork {
    ordered: Ordered,
    observed: u128,
    streams: Streams,
    repeats: u64,
    drawn: u64,
    at_least: u64,
    at_most: u64,
}

impl JonckheereWork {
    /// Work that draws `repeats` rearrangements of the levels from the streams of `seed`.
    ///
    /// # Errors
    /// [`NoOrderedTest`] as for [`jonckheere_terpstra`], and if `repeats` is not from 1 to [`MOST_REPEATS`].
    ///
    /// # Accuracy
    /// The standard error that stands beside each p-value; the statistics are compared in whole numbers.
    pub fn new(groups: &[Vec<f64>], repeats: u64, seed: u64) -> Result<Self, NoOrderedTest> {
        if !(1..=MOST_REPEATS).contains(&repeats) {
            return Err(NoOrderedTest::Repeats { repeats });
        }
        let ordered = Ordered::new(groups)?;
        let observed = ordered.doubled_j(&ordered.levels);
        let streams = Streams::new(seed, "ordered levels");
        Ok(Self { ordered, observed, streams, repeats, drawn: 0, at_least: 0, at_most: 0 })
    }

    /// The result as it stands after the rearrangements drawn so far.
    fn result(&self) -> JonckheereByPermutation {
        let count = self.drawn as f64;
        let share = |extreme: u64| (extreme as f64 + 1.0) / (count + 1.0);
        let error = |p: f64| (p * (1.0 - p) / count.max(1.0)).sqrt();
        let (greater, less) = (share(self.at_least), share(self.at_most));
        let smaller = greater.min(less);
        JonckheereByPermutation {
            j: 0.5 * self.observed as f64,
            repeats: self.drawn,
            p: TailProbabilities { both: (2.0 * smaller).min(1.0), greater, less },
            standard_error: TailProbabilities {
                both: 2.0 * error(smaller),
                greater: error(greater),
                less: error(less),
            },
        }
    }
}

impl InSlices for JonckheereWork {
    type Result = JonckheereByPermutation;

    /// One slice of some 5 ms, at least one rearrangement.
    fn advance(&mut self) -> Advance<JonckheereByPermutation> {
        let cost = self.ordered.levels.len() + self.ordered.ties.len() + self.ordered.n.len();
        for _ in 0..(SLICE / cost).max(1) {
            if self.drawn == self.repeats {
                return Advance::Done(self.result());
            }
            // Always from the observed arrangement, so that a replicate does not depend on the one before it.
            let mut levels = self.ordered.levels.clone();
            self.streams.stream(self.drawn).shuffle(&mut levels);
            let j = self.ordered.doubled_j(&levels);
            self.at_least += u64::from(j >= self.observed);
            self.at_most += u64::from(j <= self.observed);
            self.drawn += 1;
        }
        let so_far = self.result();
        let estimate = Some((so_far.p.both, so_far.standard_error.both));
        Advance::Working(Progress { done: self.drawn as f64 / self.repeats as f64, estimate })
    }
}

/// The levels of the observations in ascending order of their values.
#[derive(Debug, Clone)]
struct Ordered {
    /// Observations of each level.
    n: Vec<usize>,
    /// Places of the levels, one an observation.
    levels: Vec<usize>,
    /// How many observations share each distinct value, in ascending order.
    ties: Vec<usize>,
}

impl Ordered {
    fn new(groups: &[Vec<f64>]) -> Result<Self, NoOrderedTest> {
        if groups.len() < 2 {
            return Err(NoOrderedTest::TooFewLevels { levels: groups.len() });
        }
        let mut values: Vec<(f64, usize)> = Vec::new();
        for (level, group) in groups.iter().enumerate() {
            if group.is_empty() {
                return Err(NoOrderedTest::EmptyLevel { level });
            }
            if let Some(&value) = group.iter().find(|value| !value.is_finite()) {
                return Err(NoOrderedTest::NotFinite { level, value });
            }
            values.extend(group.iter().map(|value| (*value, level)));
        }
        values.sort_by(|one, other| one.0.total_cmp(&other.0));
        // The == of numbers decides a tie, so that 0 and -0 are one value.
        let ties: Vec<usize> =
            values.chunk_by(|one, other| one.0 == other.0).map(<[(f64, usize)]>::len).collect();
        if ties.len() == 1 {
            return Err(NoOrderedTest::AllTied);
        }
        let levels = values.into_iter().map(|(_, level)| level).collect();
        Ok(Self { n: groups.iter().map(Vec::len).collect(), levels, ties })
    }

    /// 2J for observations in ascending order that belong to these levels: of each set of tied values, a member of level h
    /// gains 2 for each smaller value of an earlier level and 1 for each tied one.
    fn doubled_j(&self, levels: &[usize]) -> u128 {
        let mut below = vec![0_u64; self.n.len()];
        let mut beside = vec![0_u64; self.n.len()];
        let (mut gain, mut from) = (0_u128, 0);
        for &size in &self.ties {
            let set = &levels[from..from + size];
            from += size;
            if let [level] = *set {
                gain += 2 * u128::from(below[..level].iter().sum::<u64>());
                below[level] += 1;
                continue;
            }
            set.iter().for_each(|level| beside[*level] += 1);
            let (mut smaller, mut tied) = (0, 0);
            for (below, beside) in below.iter_mut().zip(&mut beside) {
                gain += u128::from(*beside) * u128::from(2 * smaller + tied);
                smaller += *below;
                tied += *beside;
                *below += *beside;
                *beside = 0;
            }
        }
        gain
    }
}
