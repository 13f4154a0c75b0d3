//! Which hypotheses can be true together, and nothing else: the sets that a step-down procedure has to judge.
//!
//! With rows that are linearly independent any set can be. Otherwise a set of true equalities holds every row that it implies:
//! the rows in its span. For differences of levels these sets are the partitions of the levels, true being what lies inside
//! a cell (Shaffer 1986); in general they are found by ranks.
//!
//! This is about equalities. One-sided hypotheses of dependent rows imply one another in other ways (μ₁ <= μ₂ and μ₁ <= μ₃
//! say nothing of μ₂ and μ₃), so that for them the restrictions are not used.

use super::super::Sides;
use super::Steps;
use super::cells::difference;
use super::statistics::Statistics;
use crate::methods::contrasts::rank;

/// Partitions are listed for differences of up to so many levels: 877 of them for 7.
const MOST_LEVELS: usize = 7;
/// Subsets are listed for up to so many other rows.
const MOST_ROWS: usize = 10;

/// A set of rows that is judged at once.
#[derive(Debug, Clone, PartialEq)]
pub struct NullSet {
    pub rows: Vec<usize>,
    /// The row with the smallest p-value of its own, whose statistic is the largest.
    pub lead: usize,
}

/// The sets for a step-down procedure, and which kind it is. A row's adjusted p-value is the largest p-value of the sets
/// that contain it.
pub fn sets(statistics: &Statistics) -> (Steps, Vec<NullSet>) {
    let count = statistics.count();
    let order = statistics.order();
    let independent = count < statistics.covariance.nrows() && rank(&statistics.coefficients) == count;
    let closed = match statistics.sides {
        Sides::Both if !independent => closed_sets(&statistics.coefficients),
        _ => None,
    };
    if let Some(closed) = closed {
        return (Steps::LogicalRestrictions, largest_for_their_leads(&closed, &order));
    }
    // Of all sets that one row leads the largest is that of the rows left at its step.
    let left = (0..count).map(|step| NullSet { rows: ascending(&order[step..]), lead: order[step] });
    (if independent { Steps::FreeCombinations } else { Steps::RestrictionsIgnored }, left.collect())
}

fn ascending(rows: &[usize]) -> Vec<usize> {
    let mut rows = rows.to_vec();
    rows.sort_unstable();
    rows
}

/// The sets that hold every row they imply, as bits; none where they would be too many.
fn closed_sets(rows: &[Vec<f64>]) -> Option<Vec<u64>> {
    if let Some(pairs) = rows.iter().map(|row| difference(row)).collect::<Option<Vec<_>>>() {
        let mut levels: Vec<usize> = pairs.iter().flat_map(|&(i, j)| [i, j]).collect();
        levels.sort_unstable();
        levels.dedup();
        let place = |level: usize| levels.binary_search(&level).unwrap_or(0);
        let pairs: Vec<(usize, usize)> = pairs.iter().map(|&(i, j)| (place(i), place(j))).collect();
        if levels.len() <= MOST_LEVELS && rows.len() <= 64 {
            return Some(by_partitions(&pairs, levels.len()));
        }
    }
    (rows.len() <= MOST_ROWS).then(|| by_ranks(rows))
}

/// What lies inside the cells of each partition of `levels` levels.
fn by_partitions(pairs: &[(usize, usize)], levels: usize) -> Vec<u64> {
    // Each level's cell is at most one more than the largest before it: every partition once, in the order of counting.
    let mut partitions = vec![vec![0_usize]];
    for _ in 1..levels {
        let grow = |cells: &Vec<usize>| {
            let next = cells.iter().max().map_or(0, |most| most + 1);
            let cells = cells.clone();
            (0..=next).map(move |cell| [&cells[..], &[cell]].concat())
        };
        partitions = partitions.iter().flat_map(grow).collect();
    }
    let bits = |cells: &Vec<usize>| {
        let inside = pairs.iter().enumerate().filter(|(_, (i, j))| cells[*i] == cells[*j]);
        inside.fold(0, |bits, (row, _)| bits | 1 << row)
    };
    distinct(partitions.iter().map(bits).collect())
}

/// The subsets of rows outside of whose span all other rows lie.
fn by_ranks(rows: &[Vec<f64>]) -> Vec<u64> {
    let members = |bits: u64| (0..rows.len()).filter(move |row| bits >> row & 1 == 1);
    let ranks: Vec<usize> = (0..1_u64 << rows.len())
        .map(|bits| rank(&members(bits).map(|row| rows[row].clone()).collect::<Vec<_>>()))
        .collect();
    let is_closed = |bits: &u64| {
        let alone = ranks[*bits as usize];
        (0..rows.len()).all(|row| bits >> row & 1 == 1 || ranks[(bits | 1 << row) as usize] > alone)
    };
    distinct((0..1_u64 << rows.len()).filter(is_closed).collect())
}

/// Each set once, the empty one left out, in ascending order of their bits.
fn distinct(mut sets: Vec<u64>) -> Vec<u64> {
    sets.retain(|bits| *bits != 0);
    sets.sort_unstable();
    sets.dedup();
    sets
}

/// Of the sets with one lead those that are part of no other, since a larger set has a p-value at least as large; the
/// largest sets first.
fn largest_for_their_leads(sets: &[u64], order: &[usize]) -> Vec<NullSet> {
    let lead = |bits: u64| order.iter().copied().find(|row| bits >> row & 1 == 1).unwrap_or(0);
    let led: Vec<(u64, usize)> = sets.iter().map(|&bits| (bits, lead(bits))).collect();
    let mut kept: Vec<(u64, usize)> = led
        .iter()
        .filter(|(bits, lead)| {
            !led.iter().any(|(other, its)| its == lead && other != bits && other & bits == *bits)
        })
        .copied()
        .collect();
    kept.sort_by_key(|(bits, _)| std::cmp::Reverse(bits.count_ones()));
    kept.iter()
        .map(|&(bits, lead)| NullSet { rows: (0..64).filter(|row| bits >> row & 1 == 1).collect(), lead })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn all_pairs(levels: usize) -> Vec<Vec<f64>> {
        let pairs = (0..levels).flat_map(|i| (i + 1..levels).map(move |j| (i, j)));
        pairs.map(|(i, j)| (0..levels).map(|l| f64::from(l == j) - f64::from(l == i)).collect()).collect()
    }

    /// Bell's numbers 2, 5, 15, 52, 203, 877, less one for the set of no true hypothesis.
    #[test]
    fn pairs_have_as_many_sets_as_there_are_partitions() {
        for (levels, bell) in [(2, 2), (3, 5), (4, 15), (5, 52), (6, 203), (7, 877)] {
            assert_eq!(closed_sets(&all_pairs(levels)).unwrap().len(), bell - 1);
        }
        assert_eq!(closed_sets(&all_pairs(8)), None);
    }

    #[test]
    fn ranks_find_the_partitions_too() {
        for levels in 2..=5 {
            let rows = all_pairs(levels);
            assert_eq!(by_ranks(&rows), closed_sets(&rows).unwrap());
        }
        // Some of the pairs only, one of them turned round and a level left out.
        let mut rows = all_pairs(6);
        rows.retain(|row| row[2] == 0.0);
        rows.remove(4);
        rows[1].iter_mut().for_each(|c| *c = -*c);
        assert_eq!(by_ranks(&rows), closed_sets(&rows).unwrap());
    }

    #[test]
    fn of_three_levels_all_pairs_are_judged_together_or_each_alone() {
        // The first row leads: the other two are never true without it, but alone.
        let kept = largest_for_their_leads(&closed_sets(&all_pairs(3)).unwrap(), &[0, 1, 2]);
        let rows: Vec<Vec<usize>> = kept.into_iter().map(|set| set.rows).collect();
        assert_eq!(rows, [vec![0, 1, 2], vec![1], vec![2]]);
    }
}
