//! Partitions of the levels into cells, which are what intersections of hypotheses come to.

use std::collections::BTreeSet;

/// A partition of the levels: a level belongs to the cell that is named by its first level.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct Partition {
    cell_of: Vec<usize>,
}

impl Partition {
    /// The partition in which the levels of `support` form one cell, and every other level one of its own.
    pub fn of_one(levels: usize, support: &[usize]) -> Self {
        Self { cell_of: (0..levels).collect() }.joined(support)
    }

    /// The finest partition that is coarser than this one and has `support` in one cell.
    pub fn joined(&self, support: &[usize]) -> Self {
        let mut meets = vec![false; self.cell_of.len()];
        support.iter().for_each(|level| meets[self.cell_of[*level]] = true);
        let first = meets.iter().position(|meets| *meets).unwrap_or_default();
        Self { cell_of: self.cell_of.iter().map(|cell| if meets[*cell] { first } else { *cell }).collect() }
    }

    /// Whether the levels of `support` lie in one cell.
    pub fn holds(&self, support: &[usize]) -> bool {
        support.windows(2).all(|two| self.cell_of[two[0]] == self.cell_of[two[1]])
    }

    /// The cells of at least two levels, each in ascending order.
    pub fn cells(&self) -> Vec<Vec<usize>> {
        let mut cells = vec![Vec::new(); self.cell_of.len()];
        self.cell_of.iter().enumerate().for_each(|(level, cell)| cells[*cell].push(level));
        cells.into_iter().filter(|cell| cell.len() > 1).collect()
    }
}

/// Each different support as a partition, in the order of the first row that has it.
pub(super) fn single(levels: usize, supports: &[Vec<usize>]) -> Vec<Partition> {
    let mut known = BTreeSet::new();
    let partitions = supports.iter().map(|support| Partition::of_one(levels, support));
    partitions.filter(|partition| known.insert(partition.clone())).collect()
}

/// All the partitions that unions of supports generate, [`single`] ones first; `None` when there are more than `most`.
pub(super) fn generated(levels: usize, supports: &[Vec<usize>], most: usize) -> Option<Vec<Partition>> {
    let mut all = single(levels, supports);
    let mut known: BTreeSet<Partition> = all.iter().cloned().collect();
    let mut at = 0;
    while at < all.len() && all.len() <= most {
        for support in supports {
            let joined = all[at].joined(support);
            if known.insert(joined.clone()) {
                all.push(joined);
            }
        }
        at += 1;
    }
    (all.len() <= most).then_some(all)
}

/// The number of ways to rearrange the observations of groups of these sizes within each cell, tied values told apart: the
/// product of N!/(n₁! ... nₖ!) over the cells. Exact below 2⁵³ / N, infinite beyond 1e300.
pub(super) fn arrangements(cells: &[Vec<usize>], sizes: &[usize]) -> f64 {
    let mut ways = 1.0_f64;
    for cell in cells {
        let mut dealt = 0.0;
        for &group in cell {
            for place in 1..=sizes[group] {
                dealt += 1.0;
                // Whole at every step: these are binomial coefficients.
                ways = ways * dealt / place as f64;
                if ways > 1e300 {
                    return f64::INFINITY;
                }
            }
        }
    }
    ways
}

#[cfg(test)]
mod tests {
    use super::*;

    fn pairs(levels: usize) -> Vec<Vec<usize>> {
        (0..levels).flat_map(|j| (0..j).map(move |i| vec![i, j])).collect()
    }

    /// Bell's numbers less 1 (the partition without a cell of two is no hypothesis): 1, 4, 14, 51, 202, 876, 4139; on paper.
    #[test]
    fn all_pairs_generate_every_partition() {
        for (levels, bell) in [(2, 2), (3, 5), (4, 15), (5, 52), (6, 203), (7, 877), (8, 4140)] {
            assert_eq!(generated(levels, &pairs(levels), 5000).map(|all| all.len()), Some(bell - 1));
        }
        assert_eq!(generated(9, &pairs(9), 5000), None);
        assert_eq!(generated(200, &pairs(200), 5000), None);
    }

    /// Every set of treatments with the control: 2ᵏ⁻¹ - 1. Neighbours: every set of the k - 1 joints.
    #[test]
    fn control_and_neighbours_generate_the_sets_of_their_rows() {
        let control: Vec<Vec<usize>> = (1..11).map(|j| vec![0, j]).collect();
        assert_eq!(generated(11, &control, 5000).map(|all| all.len()), Some(1023));
        let neighbours: Vec<Vec<usize>> = (1..8).map(|j| vec![j - 1, j]).collect();
        assert_eq!(generated(8, &neighbours, 5000).map(|all| all.len()), Some(127));
    }

    #[test]
    fn cells_and_what_they_hold() {
        let partition = Partition::of_one(6, &[1, 4]).joined(&[2, 5]).joined(&[4, 3]);
        assert_eq!(partition.cells(), [vec![1, 3, 4], vec![2, 5]]);
        assert!(partition.holds(&[1, 3]) && partition.holds(&[2, 5]) && !partition.holds(&[1, 2]));
        assert_eq!(partition, Partition::of_one(6, &[5, 2]).joined(&[3, 4]).joined(&[1, 3]));
    }

    #[test]
    fn arrangements_are_counted_as_far_as_numbers_go() {
        assert_eq!(arrangements(&[vec![0, 1], vec![2, 3]], &[2, 2, 1, 3]), 24.0);
        assert_eq!(arrangements(&[vec![0, 1]], &[10, 10]), 184_756.0);
        assert_eq!(arrangements(&[vec![0, 1, 2]], &[5, 5, 5]), 756_756.0);
        assert_eq!(arrangements(&[vec![0, 1]], &[100_000_000, 100_000_000]), f64::INFINITY);
    }
}
