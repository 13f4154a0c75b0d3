//! Exact upper tail of H, ties included, counted over (group sizes, rank sums) after each rank has been dealt out.

use super::check_groups;
use crate::numerics::OutOfDomain;

/// Most ways of dealing the ranks out to the groups for which H is counted; ways that differ by an exchange of groups of
/// equal size are one.
pub const MOST_ARRANGEMENTS: f64 = 6e6;
/// Most observations and groups for which H is counted: a state then fits into one integer.
pub const MOST_OBSERVATIONS: usize = 31;
const MOST_GROUPS: usize = 9;

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
    // H does not depend on the order of the groups; in that of their sizes the largest needs no place in a state.
    let mut groups: Vec<(usize, u32)> =
        sizes.iter().copied().zip(doubled_rank_sums.iter().copied()).collect();
    groups.sort_unstable();
    let (sizes, observed): (Vec<usize>, Vec<u32>) = groups.into_iter().unzip();
    let mut states: Vec<(u128, u64)> = vec![(0, 1)];
    for (dealt, &rank) in doubled_ranks.iter().enumerate() {
        states = deal(&states, &sizes, dealt, rank);
    }
    Ok(share_at_least(&states, &sizes, doubled_ranks.iter().sum(), &observed))
}

/// Bits of one group's part of a state: its number of observations, then its doubled rank sum (10 bits).
const WIDTH: usize = COUNT + 10;
const COUNT: usize = 5;

/// One group's part of a state.
fn part(state: u128, group: usize) -> u128 {
    state >> (WIDTH * group) & ((1 << WIDTH) - 1)
}

/// The states and the ways to reach them after one more rank, when `dealt` ranks are dealt out already. A state has a
/// part for every group but the last.
fn deal(states: &[(u128, u64)], sizes: &[usize], dealt: usize, rank: u32) -> Vec<(u128, u64)> {
    let (last, others) = sizes.split_last().expect("at least two groups");
    let mut next = Vec::with_capacity(states.len() * sizes.len());
    for &(state, ways) in states {
        let part = |group: usize| part(state, group);
        let (mut in_others, mut alike) = (0, 1);
        for (group, &size) in others.iter().enumerate() {
            let count = (part(group) & ((1 << COUNT) - 1)) as usize;
            in_others += count;
            // Groups that are alike so far come to the same: one stands for all of them.
            if others.get(group + 1) == Some(&size) && part(group) == part(group + 1) {
                alike += 1;
                continue;
            }
            if count < size {
                let more = (1 + (u128::from(rank) << COUNT)) << (WIDTH * group);
                next.push((exchanged(state + more, others, group), alike * ways));
            }
            alike = 1;
        }
        if dealt - in_others < *last {
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
    next
}

/// The state with groups of equal size exchanged so that their parts ascend, where only that of `grown` may be too large:
/// H is the same, and there are far fewer states.
fn exchanged(mut state: u128, sizes: &[usize], grown: usize) -> u128 {
    for group in grown + 1..sizes.len() {
        let (low, high) = (WIDTH * (group - 1), WIDTH * group);
        let (one, other) = (part(state, group - 1), part(state, group));
        if sizes[group] != sizes[grown] || one <= other {
            break;
        }
        state ^= (one ^ other) << low | (one ^ other) << high;
    }
    state
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
            (0..sizes.len() - 1).map(|group| (part(state, group) >> COUNT) as u32).collect();
        sums.push(sum - sums.iter().sum::<u32>());
        all += ways;
        if weighted(&sums) >= threshold {
            at_least += ways;
        }
    }
    at_least as f64 / all as f64
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
    let arrangements = arrangements(sizes);
    if arrangements > MOST_ARRANGEMENTS {
        let allowed = "at most 6e6 for an exact count";
        return Err(OutOfDomain { argument: "number of arrangements", value: arrangements, allowed });
    }
    Ok(())
}

/// N!/(n₁! n₂! ...), divided by m! for every m groups of equal size.
fn arrangements(sizes: &[usize]) -> f64 {
    let mut sorted = sizes.to_vec();
    sorted.sort_unstable();
    let (mut ways, mut dealt) = (1.0, 0.0);
    for equal in sorted.chunk_by(|one, other| one == other) {
        for (before, &size) in equal.iter().enumerate() {
            for place in 1..=size {
                dealt += 1.0;
                ways *= dealt / place as f64;
            }
            ways /= (before + 1) as f64;
        }
    }
    ways
}
