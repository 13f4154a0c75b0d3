//! Exact null distributions of rank statistics, by counting: Jonckheere and Terpstra's J (with two groups the
//! rank-sum statistic U of Mann and Whitney), and Kruskal and Wallis's H, also with ties.
//!
//! J is a sum of independent U, one for each group against all before it; U follows a recurrence of positive terms, so
//! that the smallest probabilities keep their digits. H is counted over (group sizes, rank sums) after each rank has been
//! dealt out. Beyond the stated limits there is no exact answer here; callers then use the normal or chi-squared
//! approximation and say so.
//!
//! # References
//! 1. Mann and Whitney (1947), Ann. Math. Statist. 18, 50-60, eq. (6) (the recurrence).
//! 2. Jonckheere (1954), Biometrika 41, 133-145; Kruskal and Wallis (1952), J. Amer. Statist. Assoc. 47, 583-621.

use crate::numerics::OutOfDomain;

/// Most pairs of observations from different groups for which J is counted.
pub const MOST_PAIRS: usize = 4000;
/// Most ways of dealing the ranks out to the groups for which H is counted.
pub const MOST_ARRANGEMENTS: f64 = 1e7;
/// Most observations and groups for which H is counted: a state then fits into one integer.
pub const MOST_OBSERVATIONS: usize = 31;
const MOST_GROUPS: usize = 9;

/// Both tails of a discrete statistic, the value itself counted in each.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct InclusiveTails {
    /// P(statistic <= value)
    pub lower: f64,
    /// P(statistic >= value)
    pub upper: f64,
}

/// Both exact tails of J, the number of pairs from an earlier and a later group in which the later is larger, without
/// ties, for groups of the given `sizes` in their order.
///
/// # Errors
/// [`OutOfDomain`] if `j` is not finite, there are fewer than 2 groups, a group is empty, or there are more than
/// [`MOST_PAIRS`] pairs.
///
/// # Accuracy
/// Relative error below 1e-13: sums of positive terms.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::rank_counts;
/// let tails = rank_counts::jonckheere(12.0, &[2, 2, 2])?;
/// assert!((tails.upper - 1.0 / 90.0).abs() < 1e-16); // one of 90 arrangements
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn jonckheere(j: f64, sizes: &[usize]) -> Result<InclusiveTails, OutOfDomain> {
    let j = super::finite("j", j)?;
    check_groups(sizes)?;
    let pairs = number_of_pairs(sizes);
    if pairs > MOST_PAIRS {
        let value = pairs as f64;
        return Err(OutOfDomain {
            argument: "number of pairs",
            value,
            allowed: "at most 4000 for an exact count",
        });
    }
    let mut probabilities = vec![1.0];
    let mut before = sizes[0];
    for &size in &sizes[1..] {
        probabilities = convolve(&probabilities, &rank_sum_probabilities(before, size));
        before += size;
    }
    let sum = |keep: &dyn Fn(f64) -> bool| -> f64 {
        let kept = probabilities.iter().enumerate().filter(|(value, _)| keep(*value as f64));
        kept.map(|(_, p)| p).sum::<f64>().min(1.0)
    };
    Ok(InclusiveTails { lower: sum(&|value| value <= j), upper: sum(&|value| value >= j) })
}

/// Exact P(H >= observed) for observations with the given ranks, ties included, where `doubled_ranks` are twice the
/// (mid)ranks of all observations, `sizes` the group sizes and `doubled_rank_sums` twice the observed rank sums.
///
/// Every way of dealing the observations out to the groups is equally likely. Two values of H are compared in whole numbers.
///
/// # Errors
/// [`OutOfDomain`] if there are fewer than 2 groups or more than 9, a group is empty, the ranks are not as many as the
/// sizes say, there are more than [`MOST_OBSERVATIONS`] of them, or there are more than [`MOST_ARRANGEMENTS`]
/// arrangements.
///
/// # Accuracy
/// Exact counts, divided once.
pub fn kruskal_wallis(
    doubled_ranks: &[u32],
    sizes: &[usize],
    doubled_rank_sums: &[u32],
) -> Result<f64, OutOfDomain> {
    check_groups(sizes)?;
    let total = sizes.iter().fold(0_usize, |sum, &size| sum.saturating_add(size));
    check_countable(doubled_ranks, sizes, doubled_rank_sums, total)?;
    // A state is, for every group but the last, its number of observations (5 bits) and doubled rank sum (10 bits).
    let mut states: Vec<(u128, u64)> = vec![(0, 1)];
    for (dealt, &rank) in doubled_ranks.iter().enumerate() {
        let mut next = Vec::with_capacity(states.len() * sizes.len());
        for &(state, ways) in &states {
            let mut in_others = 0;
            for (group, &size) in sizes[..sizes.len() - 1].iter().enumerate() {
                let count = (state >> (15 * group) & 31) as usize;
                in_others += count;
                if count < size {
                    next.push((state + ((1 + (u128::from(rank) << 5)) << (15 * group)), ways));
                }
            }
            if dealt - in_others < sizes[sizes.len() - 1] {
                next.push((state, ways));
            }
        }
        next.sort_unstable();
        next.dedup_by(|later, earlier| {
            let same = later.0 == earlier.0;
            if same {
                earlier.1 += later.1;
            }
            same
        });
        states = next;
    }
    Ok(share_at_least(&states, sizes, doubled_ranks.iter().sum(), doubled_rank_sums))
}

/// The share of ways whose Σ R²/n is at least the observed one. Times the product of the sizes, all is whole.
fn share_at_least(states: &[(u128, u64)], sizes: &[usize], sum: u32, observed: &[u32]) -> f64 {
    let product: u128 = sizes.iter().map(|&size| size as u128).product();
    let weighted = |sums: &[u32]| -> u128 {
        let terms = sums.iter().zip(sizes);
        terms.map(|(&sum, &size)| u128::from(sum) * u128::from(sum) * (product / size as u128)).sum()
    };
    let threshold = weighted(observed);
    let (mut at_least, mut all) = (0_u64, 0_u64);
    for &(state, ways) in states {
        let mut sums: Vec<u32> =
            (0..sizes.len() - 1).map(|group| (state >> (15 * group + 5) & 1023) as u32).collect();
        sums.push(sum - sums.iter().sum::<u32>());
        all += ways;
        if weighted(&sums) >= threshold {
            at_least += ways;
        }
    }
    at_least as f64 / all as f64
}

fn check_groups(sizes: &[usize]) -> Result<(), OutOfDomain> {
    if sizes.len() < 2 {
        return Err(OutOfDomain {
            argument: "number of groups",
            value: sizes.len() as f64,
            allowed: "at least 2",
        });
    }
    if sizes.contains(&0) {
        return Err(OutOfDomain { argument: "sizes", value: 0.0, allowed: "at least 1" });
    }
    Ok(())
}

fn check_countable(ranks: &[u32], sizes: &[usize], sums: &[u32], total: usize) -> Result<(), OutOfDomain> {
    let refuse =
        |argument, value: usize, allowed| Err(OutOfDomain { argument, value: value as f64, allowed });
    let whole = |numbers: &[u32]| numbers.iter().map(|&number| u64::from(number)).sum::<u64>();
    if sizes.len() > MOST_GROUPS {
        return refuse("number of groups", sizes.len(), "at most 9 for an exact count");
    }
    if total > MOST_OBSERVATIONS {
        return refuse("number of observations", total, "at most 31 for an exact count");
    }
    if ranks.len() != total || whole(ranks) != (total * (total + 1)) as u64 {
        return refuse("doubled_ranks", ranks.len(), "twice the midranks, one for each observation");
    }
    if sums.len() != sizes.len() || whole(sums) != (total * (total + 1)) as u64 {
        return refuse("doubled_rank_sums", sums.len(), "one for each group, together N(N+1)");
    }
    let mut arrangements = 1.0;
    let mut dealt = 0.0;
    for &size in sizes {
        for place in 1..=size {
            dealt += 1.0;
            arrangements *= dealt / place as f64;
        }
    }
    if arrangements > MOST_ARRANGEMENTS {
        let allowed = "at most 1e7 for an exact count";
        return Err(OutOfDomain { argument: "number of arrangements", value: arrangements, allowed });
    }
    Ok(())
}

/// Pairs of observations from different groups; saturates where no count would be tried.
fn number_of_pairs(sizes: &[usize]) -> usize {
    let (mut pairs, mut before) = (0_usize, 0_usize);
    for &size in sizes {
        pairs = pairs.saturating_add(before.saturating_mul(size));
        before = before.saturating_add(size);
    }
    pairs
}

/// P(U = u) for u = 0..mn: by whether the largest of all observations is one of the m, which then exceeds no later one, or
/// one of the n, which exceeds all m.
fn rank_sum_probabilities(m: usize, n: usize) -> Vec<f64> {
    // rows[j] is the distribution for i of the first and j of the second sample.
    let mut rows: Vec<Vec<f64>> = vec![vec![1.0]; n + 1];
    for i in 1..=m {
        rows[0] = vec![1.0];
        for j in 1..=n {
            let total = (i + j) as f64;
            let (first, second) = (i as f64 / total, j as f64 / total);
            let mut row = vec![0.0; i * j + 1];
            // rows[j] still holds (i-1, j); rows[j-1] already holds (i, j-1).
            for (u, p) in rows[j].iter().enumerate() {
                row[u] += first * p;
            }
            for (u, p) in rows[j - 1].iter().enumerate() {
                row[u + i] += second * p;
            }
            rows[j] = row;
        }
    }
    rows.swap_remove(n)
}

fn convolve(a: &[f64], b: &[f64]) -> Vec<f64> {
    let mut product = vec![0.0; a.len() + b.len() - 1];
    for (i, x) in a.iter().enumerate() {
        for (j, y) in b.iter().enumerate() {
            product[i + j] += x * y;
        }
    }
    product
}
