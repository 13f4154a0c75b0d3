//! Exact null distributions of J and H against exact rational counts.
//!
//! Sources: `data/values/jonckheere_exact.json` (generating functions in whole numbers) and
//! `data/values/kruskal_exact.json` (dynamic programming in exact rationals).

use crate::accuracy::agree;
use crate::cases::{cases, number, relative_error};
use levelwise::numerics::distributions::rank_counts;
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

#[test]
fn counts_beyond_the_limits_are_refused_by_name() {
    let message = rank_counts::jonckheere(10.0, &[100, 100]).unwrap_err().to_string();
    assert_eq!(message, "number of pairs is 10000, but must be at most 4000 for an exact count");
    let message = rank_counts::jonckheere(10.0, &[5]).unwrap_err().to_string();
    assert_eq!(message, "number of groups is 1, but must be at least 2");
    let message = rank_counts::kruskal_wallis(&[2, 4], &[2, 1], &[4, 2]).unwrap_err().to_string();
    assert_eq!(message, "doubled_ranks is 2, but must be twice the midranks, one for each observation");
}
