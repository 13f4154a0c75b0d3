//! Exact tails of U and J with ties, by dealing out one set of tied values after the other, from the smallest up.
//!
//! After some sets a state is how many observations each group has so far (c), with the distribution of 2J over the pairs
//! among them. A set of t tied values is dealt a₁, a₂, ... of its members with the multivariate hypergeometric probability
//! Π C(n_g - c_g, a_g) / C(left, t). That adds to 2J, for each pair of groups g < h, 2 c_g a_h (the new members of h
//! exceed all earlier ones of g) and a_g a_h (tied pairs count ½). Which sets the earlier groups got decides
//! what the later ones can get, so that J is no sum of independent parts here.
//!
//! With two groups this counts the subsets of the midranks by size and sum: U = R - n(n+1)/2, R the rank sum of the second.

use super::{InclusiveTails, check_ties, countable_pairs, tails};
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::finite;
use std::collections::BTreeMap;

/// Most additions (by an upper bound that is known before counting) for which U and J are counted with ties.
pub const MOST_ADDITIONS: f64 = 3e8;

/// Both exact tails of U with ties: the number of pairs in which the observation of the second group is the larger, plus
/// half the number of tied pairs, for groups of `first` and `second` observations.
///
/// `ties` tells how many observations share each distinct value, in ascending order of the values: all 1 without ties.
/// In midranks U is the rank sum of the second group less `second (second + 1) / 2`.
///
/// # Errors
/// [`OutOfDomain`] if `u` is not finite, a group or a set of tied values is empty, `ties` are not together as many as the
/// observations, or there are more than [`super::MOST_PAIRS`] pairs or [`MOST_ADDITIONS`] additions.
///
/// # Accuracy
/// Relative error below 1e-13: sums of positive terms.
///
/// # Example
/// ```
/// # use levelwise::numerics::distributions::rank_counts;
/// // 1, 1 against 2, 3: one of the 6 ways to choose two of the midranks 1.5, 1.5, 3, 4.
/// let tails = rank_counts::rank_sum_with_ties(4.0, 2, 2, &[2, 1, 1])?;
/// assert!((tails.upper - 1.0 / 6.0).abs() < 1e-15);
/// # Ok::<(), levelwise::numerics::OutOfDomain>(())
/// ```
pub fn rank_sum_with_ties(
    u: f64,
    first: usize,
    second: usize,
    ties: &[usize],
) -> Result<InclusiveTails, OutOfDomain> {
    let u = finite("u", u)?;
    count(u, &[first, second], ties)
}

/// Both exact tails of J with ties: the number of pairs from an earlier and a later group in which the later is larger, plus
/// half the number of tied pairs, for groups of the given `sizes` in their order.
///
/// `ties` tells how many observations share each distinct value, in ascending order of the values.
///
/// # Errors
/// [`OutOfDomain`] if `j` is not finite, there are fewer than 2 groups, a group or a set of tied values is empty, `ties` are
/// not together as many as the observations, or there are more than [`super::MOST_PAIRS`] pairs or
/// [`MOST_ADDITIONS`] additions.
///
/// # Accuracy
/// Relative error below 1e-13: sums of positive terms.
pub fn jonckheere_with_ties(j: f64, sizes: &[usize], ties: &[usize]) -> Result<InclusiveTails, OutOfDomain> {
    let j = finite("j", j)?;
    count(j, sizes, ties)
}

fn count(value: f64, sizes: &[usize], ties: &[usize]) -> Result<InclusiveTails, OutOfDomain> {
    let pairs = countable_pairs(sizes)?;
    let total = sizes.iter().sum();
    check_ties(ties, total)?;
    let additions = most_additions(sizes, ties, pairs);
    if additions > MOST_ADDITIONS {
        let allowed = "at most 3e8 for an exact count";
        return Err(OutOfDomain { argument: "number of additions", value: additions, allowed });
    }
    let mut states = BTreeMap::from([(vec![0; sizes.len()], vec![1.0])]);
    let mut left = total;
    for &size in ties {
        states = deal(&states, sizes, size, left);
        left -= size;
    }
    // The last set of values leaves one state: every group is full.
    let (_, probabilities) = states.pop_first().expect("a state after every set of tied values");
    Ok(tails(&probabilities, 0.5, value))
}

/// The states after one more set of `size` tied values, with `left` observations not yet dealt before it.
fn deal(
    states: &BTreeMap<Vec<usize>, Vec<f64>>,
    sizes: &[usize],
    size: usize,
    left: usize,
) -> BTreeMap<Vec<usize>, Vec<f64>> {
    let mut next: BTreeMap<Vec<usize>, Vec<f64>> = BTreeMap::new();
    for (counts, probabilities) in states {
        let room: Vec<usize> = sizes.iter().zip(counts).map(|(size, count)| size - count).collect();
        for members in splits(&room, size) {
            let weight = hypergeometric(&room, &members, size, left);
            let shift = doubled_gain(counts, &members);
            let after: Vec<usize> = counts.iter().zip(&members).map(|(count, more)| count + more).collect();
            let length = 2 * pairs_among(&after) + 1;
            let row = next.entry(after).or_insert_with(|| vec![0.0; length]);
            for (sum, p) in row[shift..].iter_mut().zip(probabilities) {
                *sum += weight * p;
            }
        }
    }
    next
}

/// Every way to put `size` tied values into groups with the given `room`.
fn splits(room: &[usize], size: usize) -> Vec<Vec<usize>> {
    fn go(room: &[usize], left: usize, chosen: &mut Vec<usize>, found: &mut Vec<Vec<usize>>) {
        let group = chosen.len();
        if group == room.len() {
            found.push(chosen.clone());
            return;
        }
        // What the later groups cannot take must go into this one.
        let later: usize = room[group + 1..].iter().sum();
        for members in left.saturating_sub(later)..=left.min(room[group]) {
            chosen.push(members);
            go(room, left - members, chosen, found);
            chosen.pop();
        }
    }
    let mut found = Vec::new();
    go(room, size, &mut Vec::new(), &mut found);
    found
}

/// Π C(room_g, members_g) / C(left, size), its factors taken in an order that keeps the product near 1.
fn hypergeometric(room: &[usize], members: &[usize], size: usize, left: usize) -> f64 {
    let mut factors = room
        .iter()
        .zip(members)
        .flat_map(|(&room, &members)| (0..members).map(move |i| (room - i) as f64 / (i + 1) as f64));
    let mut divisors = (0..size).map(|i| (left - i) as f64 / (size - i) as f64);
    let (mut factor, mut divisor) = (factors.next(), divisors.next());
    let mut product = 1.0;
    loop {
        match (factor, divisor) {
            (Some(by), _) if product <= 1.0 || divisor.is_none() => {
                product *= by;
                factor = factors.next();
            }
            (_, Some(by)) => {
                product /= by;
                divisor = divisors.next();
            }
            _ => return product,
        }
    }
}

/// What a set of tied `members` adds to 2J when each group has `counts` smaller observations.
fn doubled_gain(counts: &[usize], members: &[usize]) -> usize {
    let (mut below, mut beside, mut gain) = (0, 0, 0);
    for (count, more) in counts.iter().zip(members) {
        gain += more * (2 * below + beside);
        below += count;
        beside += more;
    }
    gain
}

/// Pairs of observations from different groups.
fn pairs_among(counts: &[usize]) -> usize {
    let (mut pairs, mut before) = (0, 0);
    for count in counts {
        pairs += before * count;
        before += count;
    }
    pairs
}

/// An upper bound of the additions: over the sets of tied values, the states before it times the ways to deal it times
/// the possible values of 2J.
fn most_additions(sizes: &[usize], ties: &[usize], pairs: usize) -> f64 {
    // states[i]: ways to have i observations in groups of these sizes.
    let mut states = vec![1.0];
    for &size in sizes {
        let mut longer = vec![0.0; states.len() + size];
        for (i, ways) in states.iter().enumerate() {
            for sum in &mut longer[i..=i + size] {
                *sum += ways;
            }
        }
        states = longer;
    }
    let groups = sizes.len() as f64;
    let (mut dealt, mut additions) = (0, 0.0);
    for &size in ties {
        // Among i observations there are at most i²(k-1)/(2k) pairs from different groups.
        let i = (dealt + size) as f64;
        let values = (2.0 * pairs as f64).min(i * i * (groups - 1.0) / groups) + 1.0;
        additions += states[dealt] * states[size] * values;
        dealt += size;
    }
    additions
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_ways_to_deal_a_set_of_ties_have_probabilities_that_add_to_one() {
        for (room, size) in
            [(vec![3, 2, 4], 5), (vec![40, 60], 50), (vec![1, 1, 1], 3), (vec![5000, 1], 2500)]
        {
            let left = room.iter().sum();
            let all: f64 =
                splits(&room, size).iter().map(|members| hypergeometric(&room, members, size, left)).sum();
            assert!((all - 1.0).abs() < 1e-12, "{room:?} {size}: {all}");
        }
    }
}
