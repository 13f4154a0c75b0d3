//! Letters against what they promise, for every pattern of decisions. Sources: Piepho (2004), J. Comput. Graph. Stat. 13,
//! 456–466: two levels share a letter exactly when the pair is not shown to differ, and no column is contained in
//! another; which makes the columns the largest sets without a pair that differs, found here by trying all sets. The
//! two small examples are worked out by hand.

use levelwise::methods::multiplicity::{Letters, TooManyLetters, letters};
use proptest::prelude::*;
use std::collections::BTreeSet;

/// Whether each pair differs, by its place in (0,1), (0,2), (1,2), (0,3) ...
fn place(i: usize, j: usize) -> usize {
    j * (j - 1) / 2 + i
}

fn shown(k: usize, pairs: &[(usize, usize)]) -> Letters {
    letters(k, &vec![0.0; k], |i, j| pairs.contains(&(i, j))).unwrap()
}

fn share_a_letter(one: &str, other: &str) -> bool {
    one.split(' ').any(|name| other.split(' ').any(|known| known == name))
}

/// With up to 26 columns the letters of a level stand together.
fn apart(text: &str, columns: usize) -> String {
    if columns > 26 { text.to_string() } else { text.chars().map(String::from).collect::<Vec<_>>().join(" ") }
}

fn check(k: usize, means: &[f64], differs: &dyn Fn(usize, usize) -> bool, found: &Letters) {
    let names: Vec<String> = found.of_level.iter().map(|text| apart(text, found.columns.len())).collect();
    for j in 0..k {
        assert!(!names[j].is_empty());
        for i in 0..j {
            assert_eq!(share_a_letter(&names[i], &names[j]), !differs(i, j), "{i} and {j}: {found:?}");
            let together = found.columns.iter().any(|column| column.contains(&i) && column.contains(&j));
            assert_eq!(together, !differs(i, j), "{i} and {j}: {found:?}");
        }
    }
    let largest = |column: &Vec<usize>| column.iter().map(|i| means[*i]).fold(f64::NEG_INFINITY, f64::max);
    assert!(found.columns.windows(2).all(|pair| largest(&pair[0]) >= largest(&pair[1])), "{found:?}");
    for (a, one) in found.columns.iter().enumerate() {
        for other in &found.columns[..a] {
            let (one, other): (BTreeSet<_>, BTreeSet<_>) = (one.iter().collect(), other.iter().collect());
            assert!(!one.is_subset(&other) && !other.is_subset(&one), "{found:?}");
        }
    }
}

/// The largest sets of levels without a pair that differs, by trying all sets.
fn largest_sets(k: usize, differs: &dyn Fn(usize, usize) -> bool) -> BTreeSet<Vec<usize>> {
    let members = |set: usize| (0..k).filter(|i| set >> i & 1 == 1).collect::<Vec<_>>();
    let fits = |set: usize| {
        let members = members(set);
        members.iter().all(|j| members.iter().all(|i| i >= j || !differs(*i, *j)))
    };
    let fitting: Vec<usize> = (1..1_usize << k).filter(|set| fits(*set)).collect();
    let largest =
        fitting.iter().filter(|set| !fitting.iter().any(|other| other != *set && other & *set == **set));
    largest.map(|set| members(*set)).collect()
}

#[test]
fn two_small_patterns_worked_out_by_hand() {
    assert_eq!(shown(3, &[(0, 2)]).columns, [vec![0, 1], vec![1, 2]]);
    let crossed = shown(4, &[(0, 2), (1, 3)]);
    assert_eq!(crossed.columns, [vec![0, 1], vec![0, 3], vec![1, 2], vec![2, 3]]);
    assert_eq!(crossed.of_level, ["ab", "ac", "cd", "bd"]);
}

#[test]
fn the_largest_mean_has_the_first_letter() {
    let found = letters(3, &[1.0, 3.0, 2.0], |i, j| (i, j) == (0, 1)).unwrap();
    assert_eq!(found.columns, [vec![1, 2], vec![0, 2]]);
    assert_eq!(found.of_level, ["b", "a", "ab"]);
}

#[test]
fn no_level_one_level_and_levels_that_are_all_alike() {
    assert_eq!(shown(0, &[]), Letters { columns: Vec::new(), of_level: Vec::new() });
    assert_eq!(shown(1, &[]).of_level, ["a"]);
    let alike = letters(100, &[f64::NAN; 100], |_, _| false).unwrap();
    assert!(alike.columns.len() == 1 && alike.of_level.iter().all(|text| text == "a"));
}

#[test]
fn every_pattern_of_up_to_five_levels_keeps_the_promise() {
    for k in 1..=5 {
        let means: Vec<f64> = (0..k).map(|i| (i * 3 % 5) as f64).collect();
        for pattern in 0..1_usize << (k * (k - 1) / 2) {
            let differs = |i: usize, j: usize| pattern >> place(i, j) & 1 == 1;
            let found = letters(k, &means, differs).unwrap();
            check(k, &means, &differs, &found);
            let columns: BTreeSet<Vec<usize>> = found.columns.iter().cloned().collect();
            assert_eq!(columns, largest_sets(k, &differs));
        }
    }
}

#[test]
fn forty_levels_that_all_differ_go_on_after_z() {
    let means: Vec<f64> = (0..40).map(|i| -f64::from(i)).collect();
    let found = letters(40, &means, |_, _| true).unwrap();
    assert_eq!([&found.of_level[25], &found.of_level[26], &found.of_level[39]], ["z", "aa", "an"]);
    // Steps of the means of 1 against a distance of 5 that can be seen: runs of five, 36 of them.
    let runs = letters(40, &means, |i, j| j - i >= 5).unwrap();
    assert_eq!(runs.columns.len(), 36);
    assert_eq!(runs.of_level[39], "aj");
    assert_eq!(runs.of_level[26], "w x y z aa");
    check(40, &means, &|i, j| j - i >= 5, &runs);
}

#[test]
fn a_pattern_that_needs_too_many_letters_is_refused_in_words_and_at_once() {
    // Levels in threes that differ inside and nowhere else (Moon and Moser 1965): one of each three, 3^(k/3) ways.
    let in_threes = |i: usize, j: usize| i / 3 == j / 3;
    assert_eq!(letters(15, &[0.0; 15], in_threes).unwrap().columns.len(), 243);
    assert_eq!(letters(18, &[0.0; 18], in_threes), Err(TooManyLetters { levels: 18 }));
    let refused = letters(3000, &vec![0.0; 3000], in_threes).unwrap_err();
    assert_eq!(
        refused.to_string(),
        "the decisions on all pairs of 3000 levels need more than 702 letters; read them from the table of pairs"
    );
}

proptest! {
    #[test]
    fn any_pattern_keeps_the_promise(
        k in 2..41_usize, share in 0..100_u32, draws in prop::collection::vec((0..100_u32, -5..5_i32), 780)
    ) {
        let differs = |i: usize, j: usize| draws[place(i, j)].0 < share;
        let means: Vec<f64> = (0..k).map(|i| f64::from(draws[i].1)).collect();
        // A random pattern of forty levels can need too many letters; most do not.
        if let Ok(found) = letters(k, &means, differs) {
            check(k, &means, &differs, &found);
        } else {
            prop_assert!(k > 17, "at most 3^(17/3) = 505 columns");
        }
    }

    #[test]
    fn the_order_of_the_levels_changes_no_groups(k in 2..9_usize, draws in prop::collection::vec(any::<bool>(), 28)) {
        let differs = |i: usize, j: usize| draws[place(i.min(j), i.max(j))];
        let means: Vec<f64> = (0..k).map(|i| i as f64).collect();
        let turned = |i: usize| k - 1 - i;
        let one = letters(k, &means, differs).unwrap();
        let means_turned: Vec<f64> = (0..k).map(|i| means[turned(i)]).collect();
        let other = letters(k, &means_turned, |i, j| differs(turned(i), turned(j))).unwrap();
        let back: Vec<String> = (0..k).map(|i| other.of_level[turned(i)].clone()).collect();
        prop_assert_eq!(one.of_level, back);
    }
}
