//! The rearranging, as work in slices.

use super::partitions::{Partition, arrangements, generated, single};
use super::rearranged::{Question, Rearranged};
use super::{
    COUNTED, Closure, MOST_LOOKS, MOST_PARTITIONS, MOST_REPEATS, NoPermutation, PermutationComparisons,
    PermutationRequest, PermutationRow, Share,
};
use crate::methods::slices::{Advance, InSlices, Progress};
use crate::numerics::random::Streams;
use crate::study::{NoEstimates, Variances};

/// Observations that are looked at in a slice: some 2 to 10 ms native, twice that in a browser.
const SLICE: f64 = 1_000_000.0;
/// What a rearrangement costs beside its observations and rows (the beginning of a stream), in observations.
const BEGINNING: f64 = 30.0;
/// Rearrangements that are drawn for one partition before the next one has its turn, so that the estimate is of all of them from
/// early on.
const TURN: u64 = 200;

/// Comparisons by permutation, at work.
#[derive(Debug)]
pub struct PermutationWork {
    question: Question,
    closure: Closure,
    repeats: u64,
    seed: u64,
    layouts: Vec<Layout>,
    /// Layouts in the order of their turns: those that are counted, then those that are drawn, again and again.
    counted: Vec<usize>,
    drawn: Vec<usize>,
    turn: usize,
    current: Option<Turn>,
    /// Cost of all, and of what is done.
    cost: f64,
    done: f64,
}

/// A partition, and what has been found of it.
#[derive(Debug)]
struct Layout {
    partition: Partition,
    /// The rows inside cells, and whether this partition is the one of the row by itself.
    rows: Vec<(usize, bool)>,
    arrangements: f64,
    exact: bool,
    /// Cost of one rearrangement.
    cost: f64,
    /// Rearrangements looked at so far; those whose largest statistic reaches the observed one, and for each row tested alone,
    /// those in which it reaches its own.
    looked_at: u64,
    at_least: u64,
    alone_at_least: Vec<u64>,
}

/// A part of the work on one layout.
#[derive(Debug)]
struct Turn {
    layout: usize,
    rearranged: Rearranged,
    streams: Streams,
    /// Where it ends; for counted ones it ends by itself.
    to: u64,
}

impl PermutationWork {
    /// Work that gives the comparisons of `request`.
    ///
    /// Replicate i of a partition is drawn from stream i of its own, so that the result is the same for every slicing.
    ///
    /// # Errors
    /// [`NoPermutation`]: fewer than two levels, an empty level, a level of one observation where variances are unequal, values
    /// that are not finite or all equal, no error term (one observation a level), rows that are no contrasts, a number of repeats
    /// out of its range, more than [`MOST_PARTITIONS`] partitions in closed testing.
    ///
    /// # Accuracy
    /// Counted shares are exact but for statistics that differ by less than 1e-9 of the total variation, which count as equal.
    /// Drawn ones have the standard error that stands beside them.
    pub fn new(request: &PermutationRequest) -> Result<Self, NoPermutation> {
        check(request)?;
        let question = Question {
            groups: scaled(request.groups),
            rows: request.rows.to_vec(),
            sides: request.sides,
            variances: request.variances,
        };
        let supports: Vec<Vec<usize>> = (0..question.rows.len()).map(|row| question.support(row)).collect();
        let partitions = partitions(request, &supports)?;
        let sizes: Vec<usize> = question.groups.iter().map(Vec::len).collect();
        let layout = |partition| Layout::new(partition, &supports, &sizes, request);
        let layouts: Vec<Layout> = partitions.into_iter().map(layout).collect();
        let (counted, drawn) = (0..layouts.len()).partition(|at| layouts[*at].exact);
        let cost = layouts.iter().map(|layout| layout.cost * layout.all(request.repeats) as f64).sum();
        Ok(Self {
            question,
            closure: request.closure,
            repeats: request.repeats,
            seed: request.seed,
            layouts,
            counted,
            drawn,
            turn: 0,
            current: None,
            cost,
            done: 0.0,
        })
    }

    /// A slice in which `budget` observations are looked at.
    fn advance_by(&mut self, mut budget: f64) -> Advance<PermutationComparisons> {
        while let Some(mut turn) = self.current.take().or_else(|| self.next_turn()) {
            if !self.work_on(&mut turn, &mut budget) {
                self.current = Some(turn);
                return Advance::Working(Progress { done: self.done / self.cost, estimate: self.estimate() });
            }
            // Beginning a turn looks at every observation a few times.
            budget -= 4.0 * self.layouts[turn.layout].cost;
        }
        let partitions = self.layouts.len();
        Advance::Done(PermutationComparisons { rows: self.rows(), repeats: self.repeats, partitions })
    }

    /// The next part of the work; `None` when all is done.
    fn next_turn(&mut self) -> Option<Turn> {
        let counted = self.counted.get(self.turn).copied();
        let drawn = || self.drawn.get((self.turn - self.counted.len()) % self.drawn.len().max(1)).copied();
        let at = counted.or_else(drawn)?;
        let layout = &self.layouts[at];
        let all = layout.all(self.repeats);
        if layout.looked_at >= all {
            return None;
        }
        self.turn += 1;
        Some(Turn {
            layout: at,
            rearranged: Rearranged::new(&self.question, &layout.partition, &layout.rows),
            streams: Streams::new(self.seed, &format!("rearranged cells {at}")),
            to: if layout.exact { all } else { all.min(layout.looked_at + TURN) },
        })
    }

    /// Goes on with the turn until it ends or `budget` is spent; true when it ends.
    fn work_on(&mut self, turn: &mut Turn, budget: &mut f64) -> bool {
        let layout = &mut self.layouts[turn.layout];
        while layout.looked_at < turn.to {
            if *budget <= 0.0 {
                return false;
            }
            if !layout.exact {
                turn.rearranged.draw(&mut turn.streams.stream(layout.looked_at));
            }
            let alone = &mut layout.alone_at_least;
            layout.at_least += u64::from(turn.rearranged.compare(|place| alone[place] += 1));
            layout.looked_at += 1;
            if layout.exact {
                turn.rearranged.step();
            }
            *budget -= layout.cost;
            self.done += layout.cost;
        }
        true
    }

    /// The shares by row as they stand: alone, and the largest of the partitions.
    fn rows(&self) -> Vec<PermutationRow> {
        let nothing = Share { p: 0.0, standard_error: 0.0, exact: true, arrangements: 1.0 };
        let mut rows = vec![PermutationRow { raw: nothing, adjusted: None }; self.question.rows.len()];
        for layout in &self.layouts {
            for (place, (row, alone)) in layout.rows.iter().enumerate() {
                let row = &mut rows[*row];
                let mut shares = Vec::new();
                if *alone {
                    row.raw = layout.share(layout.alone_at_least[place]);
                    shares.push(row.raw);
                }
                if self.closure == Closure::Closed {
                    shares.push(layout.share(layout.at_least));
                    let larger = |share: &Share| row.adjusted.is_none_or(|largest| share.p > largest.p);
                    if let Some(share) = shares.into_iter().max_by(|a, b| a.p.total_cmp(&b.p)).filter(larger)
                    {
                        row.adjusted = Some(share);
                    }
                }
            }
        }
        rows
    }

    /// The smallest p-value as it stands, adjusted if they are, with its standard error.
    fn estimate(&self) -> Option<(f64, f64)> {
        if self.layouts.iter().any(|layout| layout.looked_at == 0) {
            return None;
        }
        let shares = self.rows().into_iter().map(|row| row.adjusted.unwrap_or(row.raw));
        shares.min_by(|a, b| a.p.total_cmp(&b.p)).map(|share| (share.p, share.standard_error))
    }
}

impl InSlices for PermutationWork {
    type Result = PermutationComparisons;

    fn advance(&mut self) -> Advance<PermutationComparisons> {
        self.advance_by(SLICE)
    }
}

impl Layout {
    fn new(
        partition: Partition,
        supports: &[Vec<usize>],
        sizes: &[usize],
        request: &PermutationRequest,
    ) -> Self {
        let cells = partition.cells();
        let alone = |support: &Vec<usize>| cells.len() == 1 && cells[0] == *support;
        let inside = |row: &usize| match request.closure {
            Closure::Closed => partition.holds(&supports[*row]),
            Closure::Raw => alone(&supports[*row]),
        };
        let rows: Vec<_> =
            (0..supports.len()).filter(inside).map(|row| (row, alone(&supports[row]))).collect();
        let arrangements = arrangements(&cells, sizes);
        let observations: usize = cells.iter().flatten().map(|group| sizes[*group]).sum();
        let terms: usize = rows.iter().map(|(row, _)| supports[*row].len()).sum();
        let alone_at_least = vec![0; rows.len()];
        Self {
            partition,
            rows,
            arrangements,
            exact: arrangements <= (request.repeats as f64).max(MOST_LOOKS / observations as f64),
            cost: BEGINNING + (observations + terms) as f64,
            looked_at: 0,
            at_least: 0,
            alone_at_least,
        }
    }

    /// How many rearrangements are looked at in the end.
    fn all(&self, repeats: u64) -> u64 {
        if self.exact { self.arrangements as u64 } else { repeats }
    }

    fn share(&self, at_least: u64) -> Share {
        let (b, count) = (at_least as f64, self.looked_at as f64);
        let p = if self.exact { b / count.max(1.0) } else { (b + 1.0) / (count + 1.0) };
        let standard_error = if self.exact { 0.0 } else { (p * (1.0 - p) / count.max(1.0)).sqrt() };
        Share { p, standard_error, exact: self.exact, arrangements: self.arrangements }
    }
}

fn partitions(
    request: &PermutationRequest,
    supports: &[Vec<usize>],
) -> Result<Vec<Partition>, NoPermutation> {
    let levels = request.groups.len();
    if request.closure == Closure::Raw {
        return Ok(single(levels, supports));
    }
    let all =
        generated(levels, supports, COUNTED).ok_or(NoPermutation::TooManyPartitions { partitions: None })?;
    if all.len() > MOST_PARTITIONS {
        return Err(NoPermutation::TooManyPartitions { partitions: Some(all.len()) });
    }
    Ok(all)
}

fn check(request: &PermutationRequest) -> Result<(), NoPermutation> {
    let PermutationRequest { labels, groups, rows, repeats, .. } = *request;
    if groups.len() < 2 || labels.len() != groups.len() {
        return Err(NoEstimates::OneLevel.into());
    }
    let with = |n: usize| groups.iter().position(|group| group.len() == n).map(|at| labels[at].clone());
    if let Some(level) = with(0) {
        return Err(NoEstimates::EmptyLevel { level }.into());
    }
    match (request.variances, with(1)) {
        (Variances::Unequal, Some(level)) => return Err(NoEstimates::SingleObservation { level }.into()),
        (Variances::Equal, _) if groups.iter().all(|group| group.len() == 1) => {
            return Err(NoEstimates::NoErrorTerm.into());
        }
        _ => {}
    }
    if !groups.iter().flatten().all(|value| value.is_finite()) {
        return Err(NoEstimates::OutOfRange.into());
    }
    if groups.iter().flatten().all(|value| *value == groups[0][0]) {
        return Err(NoPermutation::AllEqual);
    }
    if rows.is_empty() {
        return Err(NoPermutation::Empty);
    }
    if let Some(at) = rows.iter().position(|row| !is_contrast(row, groups.len())) {
        return Err(NoPermutation::NoContrast { row: at + 1 });
    }
    if !(1..=MOST_REPEATS).contains(&repeats) {
        return Err(NoPermutation::Repeats { repeats });
    }
    Ok(())
}

/// Coefficients that sum to zero but for the rounding of thirds and the like.
fn is_contrast(row: &[f64], levels: usize) -> bool {
    let size: f64 = row.iter().map(|c| c.abs()).sum();
    row.len() == levels
        && (1e-100..1e100).contains(&size)
        && row.iter().sum::<f64>().abs() <= 1e-9 * size
        && row.iter().filter(|c| **c != 0.0).count() > 1
}

/// The values divided by a power of two that brings the largest to between 1/2 and 1, so that squares stay within the range of numbers.
fn scaled(groups: &[Vec<f64>]) -> Vec<Vec<f64>> {
    let largest = groups.iter().flatten().fold(0.0_f64, |largest, value| largest.max(value.abs()));
    let (_, exponent) = libm::frexp(largest);
    groups.iter().map(|group| group.iter().map(|value| libm::ldexp(*value, -exponent)).collect()).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::methods::multiplicity::Sides;

    /// Three groups of eight, all pairs: the pairs are counted, the whole is drawn.
    fn work() -> PermutationWork {
        let groups: Vec<Vec<f64>> =
            (0..3).map(|i| (0..8).map(|j| f64::from((7 * i + 5 * j) % 11 + i)).collect()).collect();
        let rows = [vec![-1.0, 1.0, 0.0], vec![-1.0, 0.0, 1.0], vec![0.0, -1.0, 1.0]];
        let request = PermutationRequest {
            labels: &["a".to_string(), "b".to_string(), "c".to_string()],
            groups: &groups,
            rows: &rows,
            sides: Sides::Both,
            variances: Variances::Equal,
            repeats: 1500,
            seed: 3,
            closure: Closure::Closed,
        };
        PermutationWork::new(&request).expect("work")
    }

    #[test]
    fn every_slicing_gives_the_same_and_says_how_far_it_is() {
        let whole = work().finish();
        assert!(whole.rows.iter().any(|row| row.adjusted.is_some_and(|share| !share.exact)));
        for budget in [1.0, 777.0, 20_000.0, 1e6, 1e9] {
            let mut work = work();
            let (mut before, mut slices) = (0.0, 0);
            let result = loop {
                match work.advance_by(budget) {
                    Advance::Done(result) => break result,
                    Advance::Working(progress) => {
                        assert!(
                            progress.done >= before && progress.done <= 1.0,
                            "{progress:?} after {before}"
                        );
                        before = progress.done;
                        slices += 1;
                    }
                }
            };
            assert_eq!(result, whole, "budget {budget}");
            assert_eq!(slices == 0, budget == 1e9);
            assert!((work.done / work.cost - 1.0).abs() < 1e-12);
        }
    }

    #[test]
    fn the_estimate_comes_to_the_result() {
        let mut work = work();
        let mut last = None;
        let result = loop {
            match work.advance_by(5000.0) {
                Advance::Done(result) => break result,
                Advance::Working(progress) => last = progress.estimate.or(last),
            }
        };
        let smallest =
            result.rows.iter().filter_map(|row| row.adjusted).map(|share| share.p).fold(1.0, f64::min);
        let (estimate, error) = last.expect("an estimate");
        assert!(error > 0.0 && (estimate - smallest).abs() < error, "{estimate} ± {error}, {smallest}");
    }
}
