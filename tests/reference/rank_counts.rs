//! Null distributions of U, J and H against exact rational counts.
//!
//! Sources: `data/values/jonckheere_exact.json` (generating functions in whole numbers),
//! `data/values/kruskal_exact.json` (dynamic programming in exact rationals), and with ties `data/counts/*.json` (every
//! assignment enumerated, larger rank sums by subsets of midranks; the script with its second opinions beside them).

use crate::accuracy::{agree, agree_on};
use crate::cases::{cases, number, relative_error};
use crate::one_way::sample_of;
use levelwise::methods::overall::{KruskalWallis, midranks};
use levelwise::numerics::distributions::chi_squared;
use levelwise::numerics::distributions::rank_counts::large_samples::{self, Continuity};
use levelwise::numerics::distributions::rank_counts::{self, InclusiveTails};
use levelwise::study::Sample;
use serde_json::Value;

fn counts(list: &Value) -> Vec<usize> {
    list.as_array().unwrap().iter().map(|n| n.as_u64().unwrap() as usize).collect()
}

fn sizes(case: &Value) -> Vec<usize> {
    counts(&case["n"])
}

#[test]
pub fn both_tails_of_jonckheeres_statistic_agree_with_the_exact_counts() {
    agree("jonckheere_exact", "rank counts", |case| {
        rank_counts::jonckheere(number(&case["J"]), &sizes(case)).unwrap().upper
    });
    let fraction = |text: &Value| -> f64 {
        let (over, under) = text.as_str().unwrap().split_once('/').unwrap();
        over.parse::<f64>().unwrap() / under.parse::<f64>().unwrap()
    };
    for case in cases("jonckheere_exact") {
        let tails = rank_counts::jonckheere(number(&case["J"]), &sizes(&case)).unwrap();
        for (field, computed) in [("lower_p", tails.lower), ("two_sided", tails.two_sided())] {
            assert!(relative_error(computed, fraction(&case[field])) < 1e-14, "{case}: {field} {computed}");
        }
    }
}

#[test]
pub fn the_upper_tail_of_kruskal_and_walliss_statistic_agrees_with_the_exact_counts() {
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

/// Checks both tails and the point of one file's statistic.
fn tails_agree(file: &str, tails: impl Fn(&Value) -> InclusiveTails) {
    agree(file, "rank counts with ties", |case| tails(case).upper);
    agree_on(file, "lower", "rank counts with ties", |case| Some(tails(case).lower));
    agree_on(file, "point", "rank counts with ties", |case| Some(tails(case).point));
}

#[test]
pub fn tails_of_rank_sums_with_ties_agree_with_the_exact_counts() {
    let number_of = |case: &Value, field: &str| case[field].as_u64().unwrap() as usize;
    tails_agree("counts/rank_sum", |case| {
        let (first, second) = (number_of(case, "first"), number_of(case, "second"));
        rank_counts::rank_sum_with_ties(number(&case["u"]), first, second, &counts(&case["ties"])).unwrap()
    });
    agree_on("counts/rank_sum", "value", "rank counts", |case| {
        let untied = counts(&case["ties"]).iter().all(|&t| t == 1);
        let (first, second) = (number_of(case, "first"), number_of(case, "second"));
        untied.then(|| rank_counts::rank_sum(number(&case["u"]), first, second).unwrap().upper)
    });
    let rough = |case: &Value, continuity| {
        let (first, second) = (number_of(case, "first"), number_of(case, "second"));
        let (u, ties) = (number(&case["u"]), counts(&case["ties"]));
        large_samples::rank_sum(u, first, second, &ties, continuity).unwrap()
    };
    approximations_agree("counts/rank_sum", rough);
}

#[test]
pub fn tails_of_jonckheeres_statistic_with_ties_agree_with_every_assignment() {
    tails_agree("counts/jonckheere_ties", |case| {
        rank_counts::jonckheere_with_ties(number(&case["J"]), &sizes(case), &counts(&case["ties"])).unwrap()
    });
    approximations_agree("counts/jonckheere_ties", |case, continuity| {
        large_samples::jonckheere(number(&case["J"]), &sizes(case), &counts(&case["ties"]), continuity)
            .unwrap()
    });
}

fn approximations_agree(file: &str, rough: impl Fn(&Value, Continuity) -> large_samples::NormalTails) {
    let row = "rank statistics in large samples";
    agree_on(file, "mean", row, |case| Some(rough(case, Continuity::Uncorrected).mean));
    agree_on(file, "variance", row, |case| Some(rough(case, Continuity::Uncorrected).variance));
    agree_on(file, "normal", row, |case| Some(rough(case, Continuity::Uncorrected).upper));
    agree_on(file, "normal_half", row, |case| Some(rough(case, Continuity::Half).upper));
}

#[test]
pub fn the_kruskal_wallis_test_of_tied_samples_agrees_with_every_assignment() {
    let test = |case: &Value| {
        let groups: Vec<Vec<f64>> = case["data"].as_array().unwrap().iter().map(numbers).collect();
        let labels: Vec<String> = (0..groups.len()).map(|level| format!("level {level}")).collect();
        KruskalWallis::of(&labels, &Sample { origin: 0.0, groups }).unwrap()
    };
    agree("counts/kruskal_ties", "rank counts with ties", |case| test(case).p);
    let row = "rank statistics in large samples";
    agree_on("counts/kruskal_ties", "H", row, |case| Some(test(case).h));
    agree_on("counts/kruskal_ties", "chi_squared", row, |case| Some(test(case).p_chi_squared));
}

fn numbers(list: &Value) -> Vec<f64> {
    list.as_array().unwrap().iter().map(number).collect()
}

/// Source: `data/values/datasets.json`, statistic and variance in exact rationals, tails in ball arithmetic; 15 digits.
#[test]
fn jonckheeres_test_of_the_twelve_data_sets_comes_out() {
    for case in cases("datasets") {
        let sample = sample_of(&case);
        let (_, ties) = midranks(&sample.groups);
        let sizes: Vec<usize> = sample.groups.iter().map(Vec::len).collect();
        let j = doubled_j(&sample.groups) as f64 / 2.0;
        let expected = &case["jonckheere"];
        assert_eq!(j, number(&expected["JT"]), "{}", case["name"]);
        let tails = large_samples::jonckheere(j, &sizes, &ties, Continuity::Uncorrected).unwrap();
        for (computed, field) in [
            (tails.mean, "mean"),
            (tails.variance, "variance"),
            (tails.z, "z"),
            (tails.two_sided(), "p_two_sided"),
            (tails.upper, "p_increasing"),
        ] {
            assert!(
                relative_error(computed, number(&expected[field])) < 1e-13,
                "{} {field}: {computed}",
                case["name"]
            );
        }
    }
}

/// Twice the number of pairs from an earlier and a later group in which the later is larger, ties counting ½.
fn doubled_j(groups: &[Vec<f64>]) -> usize {
    let mut doubled = 0;
    for (place, earlier) in groups.iter().enumerate() {
        for (x, y) in earlier.iter().flat_map(|x| groups[place + 1..].iter().flatten().map(move |y| (x, y))) {
            doubled += if x < y { 2 } else { usize::from(x == y) };
        }
    }
    doubled
}

/// Source: Hollander and Wolfe's example of three groups of six (data FROM MEMORY): J = 79, variance 150.286765 with
/// and 153 without ties, z = 2.039293 and 2.021130, one-sided p = .020710, computed independently; 6 digits.
#[test]
fn a_textbook_example_of_jonckheeres_test_comes_out() {
    let groups = vec![
        vec![40.0, 35.0, 38.0, 43.0, 44.0, 41.0],
        vec![38.0, 40.0, 47.0, 44.0, 40.0, 42.0],
        vec![48.0, 40.0, 45.0, 43.0, 46.0, 44.0],
    ];
    let (_, ties) = midranks(&groups);
    let tied = large_samples::jonckheere(79.0, &[6, 6, 6], &ties, Continuity::Uncorrected).unwrap();
    let untied = large_samples::jonckheere(79.0, &[6, 6, 6], &[], Continuity::Uncorrected).unwrap();
    assert_eq!((tied.mean, untied.variance), (54.0, 153.0));
    assert!((tied.variance - 150.286765).abs() < 5e-7, "{}", tied.variance);
    assert!(
        (tied.z - 2.039293).abs() < 5e-7 && (untied.z - 2.021130).abs() < 5e-7,
        "{} {}",
        tied.z,
        untied.z
    );
    assert!((tied.upper - 0.020710).abs() < 5e-7, "{}", tied.upper);
}

/// Source: Mann and Whitney (1947), table I, P(U <= u) to three decimals, FROM MEMORY; each cell recounted by hand or as
/// a whole number over C(m+n, n).
#[test]
fn cells_of_mann_and_whitneys_table_come_out() {
    for (first, second, u, printed, ways, all) in [
        (3, 3, 0.0, 0.050, 1.0, 20.0),
        (3, 3, 1.0, 0.100, 2.0, 20.0),
        (3, 3, 2.0, 0.200, 4.0, 20.0),
        (4, 4, 0.0, 0.014, 1.0, 70.0),
        (4, 4, 1.0, 0.029, 2.0, 70.0),
        (4, 4, 2.0, 0.057, 4.0, 70.0),
        (4, 4, 3.0, 0.100, 7.0, 70.0),
        (5, 5, 2.0, 0.016, 4.0, 252.0),
        (5, 5, 4.0, 0.048, 12.0, 252.0),
    ] {
        let lower = rank_counts::rank_sum(u, first, second).unwrap().lower;
        assert!((lower - printed).abs() <= 5e-4, "{first} {second} {u}: {lower}");
        assert!(relative_error(lower, ways / all) < 1e-15, "{first} {second} {u}: {lower}");
    }
}

#[test]
fn counts_beyond_the_limits_are_refused_by_name() {
    let message = rank_counts::jonckheere(10.0, &[100, 101]).unwrap_err().to_string();
    assert_eq!(message, "number of pairs is 10100, but must be at most 10000 for an exact count");
    let message = rank_counts::jonckheere(10.0, &[5]).unwrap_err().to_string();
    assert_eq!(message, "number of groups is 1, but must be at least 2");
    let message = rank_counts::kruskal_wallis(&[2, 4], &[2, 1], &[4, 2]).unwrap_err().to_string();
    assert_eq!(message, "doubled_ranks is 2, but must be twice the midranks, one for each observation");
    let message = rank_counts::rank_sum_with_ties(1.0, 2, 0, &[1, 1]).unwrap_err().to_string();
    assert_eq!(message, "sizes is 0, but must be at least 1");
    let message = rank_counts::rank_sum_with_ties(1.0, 2, 2, &[1, 2]).unwrap_err().to_string();
    assert_eq!(message, "ties is 3, but must be together as many as the observations in all groups");
    let message = rank_counts::jonckheere_with_ties(1.0, &[20; 4], &[1; 80]).unwrap_err().to_string();
    assert!(
        message.starts_with("number of additions is ") && message.ends_with("at most 3e8 for an exact count")
    );
    let message = rank_counts::kruskal_wallis(&[2; 30], &[10, 10, 10], &[20; 3]).unwrap_err().to_string();
    assert_eq!(message, "doubled_ranks is 30, but must be twice the midranks, one for each observation");
    let ranks: Vec<u32> = (1..=30).map(|rank| 2 * rank).collect();
    let message = rank_counts::kruskal_wallis(&ranks, &[10, 10, 10], &[310; 3]).unwrap_err().to_string();
    assert!(
        message.starts_with("number of arrangements is 925")
            && message.ends_with("at most 6e6 for an exact count")
    );
    let rough = large_samples::rank_sum(1.0, 2, 3, &[5], Continuity::Half).unwrap_err().to_string();
    assert_eq!(rough, "ties is 5, but must be fewer than all observations at one value");
    let rough =
        large_samples::jonckheere(1.0, &[usize::MAX, 3], &[], Continuity::Half).unwrap_err().to_string();
    assert!(rough.starts_with("number of observations is ") && rough.ends_with("at most 1e12"), "{rough}");
}
