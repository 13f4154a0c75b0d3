//! Exact null distributions of J and H against exact rational counts.
//!
//! Sources: `data/values/jonckheere_exact.json` (generating functions in whole numbers) and
//! `data/values/kruskal_exact.json` (dynamic programming in exact rationals).

use crate::accuracy::agree;
use crate::cases::{cases, number, relative_error};
use levelwise::methods::overall::KruskalWallis;
use levelwise::numerics::distributions::{chi_squared, rank_counts};
use levelwise::study::Sample;
use serde_json::Value;

fn sizes(case: &Value) -> Vec<usize> {
    case["n"].as_array().unwrap().iter().map(|n| n.as_u64().unwrap() as usize).collect()
}

#[test]
fn both_tails_of_jonckheeres_statistic_agree_with_the_exact_counts() {
    agree("jonckheere_exact", "rank counts", |case| {
        rank_counts::jonckheere(number(&case["J"]), &sizes(case)).unwrap().upper
    });
    for case in cases("jonckheere_exact") {
        let text = case["lower_p"].as_str().unwrap();
        let (over, under) = text.split_once('/').unwrap();
        let expected = over.parse::<f64>().unwrap() / under.parse::<f64>().unwrap();
        let lower = rank_counts::jonckheere(number(&case["J"]), &sizes(&case)).unwrap().lower;
        assert!(relative_error(lower, expected) < 1e-13, "{case}: {lower}");
    }
}

#[test]
fn the_upper_tail_of_kruskal_and_walliss_statistic_agrees_with_the_exact_counts() {
    agree("kruskal_exact", "rank counts", |case| {
        let sizes = sizes(case);
        let total = sizes.iter().sum::<usize>() as u32;
        let ranks: Vec<u32> = (1..=total).map(|rank| 2 * rank).collect();
        let sums = case["rank_sums"].as_array().unwrap();
        let sums: Vec<u32> = sums.iter().map(|sum| 2 * sum.as_u64().unwrap() as u32).collect();
        rank_counts::kruskal_wallis(&ranks, &sizes, &sums).unwrap()
    });
}

/// Values 1..N in groups of these sizes with these rank sums, if there are any: by trying, from the largest down.
fn dealt(sizes: &[usize], sums: &[u64]) -> Option<Vec<Vec<f64>>> {
    fn deal(value: u64, room: &mut [usize], left: &mut [u64], groups: &mut [Vec<f64>]) -> bool {
        if value == 0 {
            return true;
        }
        for group in 0..room.len() {
            // The values still to come for this group are at least 1 + 2 + ...
            let others = room[group].saturating_sub(1) as u64;
            if room[group] == 0 || left[group] < value + others * (others + 1) / 2 {
                continue;
            }
            room[group] -= 1;
            left[group] -= value;
            groups[group].push(value as f64);
            if deal(value - 1, room, left, groups) {
                return true;
            }
            groups[group].pop();
            left[group] += value;
            room[group] += 1;
        }
        false
    }
    let mut groups = vec![Vec::new(); sizes.len()];
    let total = sizes.iter().sum::<usize>() as u64;
    deal(total, &mut sizes.to_vec(), &mut sums.to_vec(), &mut groups).then_some(groups)
}

#[test]
fn the_kruskal_wallis_test_of_small_samples_has_the_exact_p_value() {
    for case in cases("kruskal_exact") {
        let sizes = sizes(&case);
        let sums: Vec<u64> =
            case["rank_sums"].as_array().unwrap().iter().map(|sum| sum.as_u64().unwrap()).collect();
        let groups = dealt(&sizes, &sums).expect("values with these rank sums");
        let labels: Vec<String> = (0..sizes.len()).map(|level| format!("level {level}")).collect();
        let test = KruskalWallis::of(&labels, &Sample { origin: 0.0, groups }).unwrap();
        assert!(test.exact, "{case}");
        assert!(relative_error(test.p, number(&case["value"])) <= 1e-14, "{case}: {}", test.p);
        assert!(relative_error(test.h, number(&case["H_decimal"])) <= 1e-12, "{case}: {}", test.h);
        assert_eq!(test.p_chi_squared, chi_squared::sf(test.h, test.df).unwrap());
    }
}

/// With ties the arrangements are those of the midranks. Source: counted by hand. Of the 6 ways to deal 1, 1, 2, 3 out to
/// two pairs, {1, 1} against {2, 3} and its mirror image (H largest) are 2; of the 6 ways to deal 1, 1, 2, 2, two.
#[test]
fn ties_are_counted_with_their_midranks() {
    let labels = ["a".to_owned(), "b".to_owned()];
    let p = |one: [f64; 2], other: [f64; 2]| {
        let sample = Sample { origin: 0.0, groups: vec![one.to_vec(), other.to_vec()] };
        let test = KruskalWallis::of(&labels, &sample).unwrap();
        assert!(test.exact);
        test.p
    };
    assert_eq!(p([1.0, 1.0], [2.0, 3.0]), 2.0 / 6.0);
    assert_eq!(p([1.0, 1.0], [2.0, 2.0]), 2.0 / 6.0);
    assert_eq!(p([1.0, 2.0], [1.0, 2.0]), 1.0);
}

#[test]
fn samples_too_large_to_count_have_the_large_sample_p_value_and_say_so() {
    let labels = ["a".to_owned(), "b".to_owned()];
    let groups = vec![(0..16).map(f64::from).collect(), (5..21).map(f64::from).collect()];
    let test = KruskalWallis::of(&labels, &Sample { origin: 0.0, groups }).unwrap();
    assert!(!test.exact);
    assert_eq!(test.p, test.p_chi_squared);
}

#[test]
fn counts_beyond_the_limits_are_refused_by_name() {
    let message = rank_counts::jonckheere(10.0, &[100, 100]).unwrap_err().to_string();
    assert_eq!(message, "number of pairs is 10000, but must be at most 4000 for an exact count");
    let message = rank_counts::jonckheere(10.0, &[5]).unwrap_err().to_string();
    assert_eq!(message, "number of groups is 1, but must be at least 2");
    let message = rank_counts::kruskal_wallis(&[2, 4], &[2, 1], &[4, 2]).unwrap_err().to_string();
    assert_eq!(message, "doubled_ranks is 2, but must be twice the midranks, one for each observation");
}
