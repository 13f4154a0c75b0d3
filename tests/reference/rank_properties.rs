//! Properties of the null distributions of rank statistics, from seeded inputs: tails that include their point, symmetry,
//! two groups, the way to the normal curve, and an answer or a named refusal for every input. No outside numbers.

use crate::cases::relative_error;
use levelwise::methods::overall::{KruskalWallis, midranks};
use levelwise::numerics::OutOfDomain;
use levelwise::numerics::distributions::rank_counts::large_samples::{self, Continuity};
use levelwise::numerics::distributions::rank_counts::{self, InclusiveTails};
use levelwise::study::Sample;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

/// Group sizes that can be counted, and sets of tied values that fill them.
fn countable() -> impl Strategy<Value = (Vec<usize>, Vec<usize>)> {
    prop::collection::vec(1..6_usize, 2..5)
        .prop_flat_map(|sizes| {
            let total: usize = sizes.iter().sum();
            (Just(sizes), prop::collection::vec(prop::bool::ANY, total - 1))
        })
        .prop_map(|(sizes, starts_anew)| {
            let mut ties = vec![1];
            for new in starts_anew {
                if new {
                    ties.push(1);
                } else {
                    *ties.last_mut().expect("one set") += 1;
                }
            }
            (sizes, ties)
        })
}

fn any_size() -> impl Strategy<Value = usize> {
    prop_oneof![3 => 0..8_usize, 1 => prop::sample::select(vec![100, 5000, 1 << 40, usize::MAX / 2, usize::MAX])]
}

fn pairs(sizes: &[usize]) -> f64 {
    let total: usize = sizes.iter().sum();
    (total * total - sizes.iter().map(|n| n * n).sum::<usize>()) as f64 / 2.0
}

fn is_inclusive(tails: InclusiveTails) -> Result<(), TestCaseError> {
    prop_assert!((tails.lower + tails.upper - tails.point - 1.0).abs() < 1e-14, "{tails:?}");
    prop_assert!((tails.mid_lower() + tails.mid_upper() - 1.0).abs() < 1e-14, "{tails:?}");
    prop_assert!((0.0..=1.0).contains(&tails.two_sided()), "{tails:?}");
    Ok(())
}

fn is_answer(result: Result<InclusiveTails, OutOfDomain>) -> Result<(), TestCaseError> {
    if let Ok(InclusiveTails { lower, upper, point }) = result {
        prop_assert!(
            [lower, upper, point].iter().all(|p| (0.0..=1.0).contains(p)),
            "{lower} {upper} {point}"
        );
    }
    Ok(())
}

fn config(seed: u64, cases: u32) -> ProptestConfig {
    ProptestConfig {
        rng_seed: RngSeed::Fixed(seed),
        failure_persistence: None,
        ..ProptestConfig::with_cases(cases)
    }
}

proptest! {
    #![proptest_config(config(11, 300))]

    #[test]
    fn tails_of_j_include_their_point_and_turn_over_with_the_order((sizes, ties) in countable(), share in 0.0..1.0f64) {
        let j = (share * 2.0 * pairs(&sizes)).round() / 2.0;
        let tails = rank_counts::jonckheere_with_ties(j, &sizes, &ties).unwrap();
        is_inclusive(tails)?;
        // In the opposite order of the groups J counts the other pairs.
        let opposite: Vec<usize> = sizes.iter().rev().copied().collect();
        let turned = rank_counts::jonckheere_with_ties(pairs(&sizes) - j, &opposite, &ties).unwrap();
        prop_assert!((turned.upper - tails.lower).abs() < 1e-14, "{tails:?} {turned:?}");
        // So it does when the values change their sign.
        let mirrored: Vec<usize> = ties.iter().rev().copied().collect();
        let turned = rank_counts::jonckheere_with_ties(pairs(&sizes) - j, &sizes, &mirrored).unwrap();
        prop_assert!((turned.upper - tails.lower).abs() < 1e-14, "{tails:?} {turned:?}");
    }

    #[test]
    fn without_ties_the_recurrence_and_the_count_by_sets_agree((sizes, _) in countable(), share in 0.0..1.0f64) {
        let j = (share * pairs(&sizes)).round();
        let total = sizes.iter().sum();
        let one = rank_counts::jonckheere(j, &sizes).unwrap();
        let other = rank_counts::jonckheere_with_ties(j, &sizes, &vec![1; total]).unwrap();
        is_inclusive(one)?;
        for (a, b) in [(one.lower, other.lower), (one.upper, other.upper), (one.point, other.point)] {
            prop_assert!(relative_error(a, b) < 1e-13, "{one:?} {other:?}");
        }
        let two = rank_counts::rank_sum(j, sizes[0], sizes[1]).unwrap();
        prop_assert_eq!(two, rank_counts::jonckheere(j, &sizes[..2]).unwrap());
        let turned = rank_counts::rank_sum((sizes[0] * sizes[1]) as f64 - j, sizes[0], sizes[1]).unwrap();
        prop_assert!((turned.upper - two.lower).abs() < 1e-14, "{two:?} {turned:?}");
    }

    #[test]
    fn two_groups_make_h_a_two_sided_rank_sum(values in prop::collection::vec(0..6_i32, 4..14), cut in 1..3_usize) {
        let (first, second) = values.split_at(values.len() * cut / 3);
        let groups: Vec<Vec<f64>> = [first, second].iter().map(|g| g.iter().map(|&x| f64::from(x)).collect()).collect();
        let (ranks, ties) = midranks(&groups);
        prop_assume!(ties.len() > 1);
        let u = ranks[1].iter().sum::<f64>() - (second.len() * (second.len() + 1)) as f64 / 2.0;
        let labels = ["a".to_owned(), "b".to_owned()];
        let test = KruskalWallis::of(&labels, &Sample { origin: 0.0, groups }).unwrap();
        prop_assert!(test.exact);
        // H is large where U is far from its mean, on whichever side.
        let most = (first.len() * second.len()) as f64;
        let tails = |u| rank_counts::rank_sum_with_ties(u, first.len(), second.len(), &ties).unwrap();
        let (low, high) = (u.min(most - u), u.max(most - u));
        let expected = if low == high { 1.0 } else { tails(low).lower + tails(high).upper };
        prop_assert!((test.p - expected).abs() < 1e-14, "{} {expected}", test.p);
        let z = large_samples::rank_sum(u, first.len(), second.len(), &ties, Continuity::Uncorrected).unwrap().z;
        prop_assert!((z * z - test.h).abs() < 1e-11, "{} {}", z * z, test.h);
    }

    #[test]
    fn every_input_is_answered_or_refused_by_name(
        sizes in prop::collection::vec(any_size(), 0..5), ties in prop::collection::vec(any_size(), 0..6),
        value in prop_oneof![any::<f64>(), -5.0..50.0f64], ranks in prop::collection::vec(any::<u32>(), 0..6)
    ) {
        is_answer(rank_counts::jonckheere(value, &sizes))?;
        is_answer(rank_counts::jonckheere_with_ties(value, &sizes, &ties))?;
        if let [first, second, ..] = sizes[..] {
            is_answer(rank_counts::rank_sum(value, first, second))?;
            is_answer(rank_counts::rank_sum_with_ties(value, first, second, &ties))?;
        }
        if let Ok(p) = rank_counts::kruskal_wallis(&ranks, &sizes, &ranks) {
            prop_assert!((0.0..=1.0).contains(&p));
        }
        for continuity in [Continuity::Uncorrected, Continuity::Half] {
            if let Ok(tails) = large_samples::jonckheere(value, &sizes, &ties, continuity) {
                prop_assert!([tails.lower, tails.upper].iter().all(|p| (0.0..=1.0).contains(p)), "{tails:?}");
                prop_assert!(!tails.z.is_nan() && tails.variance > 0.0, "{tails:?}");
            }
        }
        let mean_ranks = vec![value; sizes.len()];
        if let Ok(tail) = large_samples::kruskal_wallis(&mean_ranks, &sizes, &ties) {
            prop_assert!((0.0..=1.0).contains(&tail.upper) && tail.tie_correction > 0.0, "{tail:?}");
        }
    }
}

/// The largest error of the normal curve over all values falls like 1/n with the correction for continuity.
#[test]
fn exact_tails_approach_the_normal_curve() {
    let mut last = 0.02;
    for n in [5, 10, 20, 40] {
        let error = |u: usize| {
            let rough = large_samples::rank_sum(u as f64, n, n, &[], Continuity::Half).unwrap();
            (rough.upper - rank_counts::rank_sum(u as f64, n, n).unwrap().upper).abs()
        };
        let worst = (0..=n * n).step_by(n / 5).map(error).fold(0.0, f64::max);
        assert!(worst > 0.0 && worst < 0.6 * last, "{n}: {worst}");
        last = worst;
    }
    // Three groups, every value shared by two: half the point stands for the correction.
    let mut last = 0.02;
    for n in [4, 8, 16] {
        let (sizes, ties) = ([n; 3], vec![2; 3 * n / 2]);
        let error = |j: usize| {
            let rough = large_samples::jonckheere(j as f64, &sizes, &ties, Continuity::Uncorrected).unwrap();
            let exact = rank_counts::jonckheere_with_ties(j as f64, &sizes, &ties).unwrap();
            (rough.upper - exact.mid_upper()).abs()
        };
        let worst = (0..=3 * n * n).step_by(n / 4).map(error).fold(0.0, f64::max);
        assert!(worst > 0.0 && worst < 0.6 * last, "{n}: {worst}");
        last = worst;
    }
}

/// The variance of two groups in the form printed in textbooks.
#[test]
fn the_variance_of_two_groups_is_that_of_the_rank_sum() {
    for (first, second, ties) in
        [(4, 7, vec![2, 3, 6]), (30, 2, vec![1; 32]), (1, 1, vec![1, 1]), (100, 90, vec![95, 95])]
    {
        let n = (first + second) as f64;
        let tied: f64 = ties.iter().map(|&t| (t * t * t - t) as f64).sum();
        let printed = (first * second) as f64 / 12.0 * (n + 1.0 - tied / (n * (n - 1.0)));
        let ours = large_samples::rank_sum(1.0, first, second, &ties, Continuity::Half).unwrap().variance;
        assert!(relative_error(ours, printed) < 1e-13, "{first} {second}: {ours} {printed}");
    }
}
