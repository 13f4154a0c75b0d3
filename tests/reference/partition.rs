//! Sums of squares of contrasts and how they overlap. Sources: the counts of Dunnett (1955), J. Am. Stat. Assoc. 50,
//! 1096–1121 (data from memory), with sums of squares computed for this project to six decimals; the
//! definition in exact fractions for a layout worked out by hand; properties that follow from the definition: k - 1
//! orthogonal contrasts split the sum of squares between the groups (Scheffé 1959, section 3.5), a contrast's own is
//! that of the analysis of variance where there are two groups.

use levelwise::methods::contrasts::{
    Contrast, NoPartition, Overlap, Partition, Set, partition, polynomial_set, ready_set,
};
use proptest::prelude::*;

fn contrast(c: &[f64]) -> Contrast {
    Contrast { name: format!("{c:?}"), coefficients: c.to_vec() }
}

fn labels(k: usize) -> Vec<String> {
    (0..k).map(|i| format!("level {i}")).collect()
}

/// Control, A and B.
fn dunnett() -> ([usize; 3], [f64; 3]) {
    let groups: [&[f64]; 3] = [
        &[7.40, 8.50, 7.20, 8.24, 9.84, 8.32],
        &[9.76, 8.80, 7.68, 9.36],
        &[12.80, 9.68, 12.16, 9.20, 10.55],
    ];
    (groups.map(<[f64]>::len), groups.map(|y| y.iter().sum::<f64>() / y.len() as f64))
}

fn split(contrasts: &[&[f64]]) -> Partition {
    let (n, means) = dunnett();
    partition(&contrasts.iter().map(|c| contrast(c)).collect::<Vec<_>>(), &n, &means).unwrap()
}

fn near(computed: f64, expected: f64) -> bool {
    (computed - expected).abs() < 5.1e-7
}

#[test]
fn with_unequal_groups_the_plain_mean_overlaps_and_the_weighted_one_does_not() {
    let plain = split(&[&[-1.0, 0.5, 0.5], &[0.0, -1.0, 1.0]]);
    // Σ c d / n = -0.5 / 4 + 0.5 / 5 = -0.025; Σ c²/n = 1/6 + 1/16 + 1/20, Σ d²/n = 1/4 + 1/5.
    let r = -0.025 / ((1.0 / 6.0 + 1.0 / 16.0 + 1.0 / 20.0) * 0.45_f64).sqrt();
    assert!((plain.correlations[0][1] - r).abs() < 1e-15, "{plain:?}");
    assert!(!plain.orthogonal(0, 1) && !plain.all_orthogonal() && !plain.complete());
    let known = Overlap { first: 0, second: 1, correlation: plain.correlations[0][1] };
    assert_eq!(plain.overlaps().collect::<Vec<_>>(), [known]);
    assert!((plain.parts[0].estimate - 1.639).abs() < 5.1e-4);

    let weighted = split(&[&[-1.0, 4.0 / 9.0, 5.0 / 9.0], &[0.0, -1.0, 1.0]]);
    assert!(weighted.orthogonal(0, 1) && weighted.complete());
    assert!(near(weighted.parts[0].ss, 11.011004) && near(weighted.parts[1].ss, 8.694409), "{weighted:?}");
    assert!(near(weighted.ss_between, 19.705413));
    let shares: f64 = weighted.parts.iter().map(|part| part.share.unwrap()).sum();
    assert!((shares - 1.0).abs() < 1e-14);
}

#[test]
fn a_set_that_exceeds_the_degrees_of_freedom_is_known() {
    let pairs = split(&[&[-1.0, 1.0, 0.0], &[-1.0, 0.0, 1.0], &[0.0, -1.0, 1.0]]);
    assert_eq!((pairs.rank, pairs.df_between, pairs.overlaps().count()), (2, 2, 3));
    assert!(pairs.exceeds_df() && pairs.dependent() && !pairs.complete());
    let twice = split(&[&[-1.0, 1.0, 0.0], &[2.0, -2.0, 0.0]]);
    assert!(!twice.exceeds_df() && twice.dependent() && !twice.complete());
    assert!(twice.rank == 1 && (twice.correlations[0][1] + 1.0).abs() < 1e-15);
    // One orthogonal contrast alone leaves something over.
    let one = split(&[&[-1.0, 1.0, 0.0]]);
    assert!(one.all_orthogonal() && !one.complete() && !one.dependent());
}

#[test]
fn equal_groups_in_exact_fractions() {
    // n = 2, means 1, 2, 6: SS between = 2 (4 + 1 + 9) = 28; linear (6 - 1)² / (2/2) = 25, quadratic
    // (1 - 4 + 6)² / (6/2) = 3.
    let set = [contrast(&[-1.0, 0.0, 1.0]), contrast(&[1.0, -2.0, 1.0])];
    let found = partition(&set, &[2; 3], &[1.0, 2.0, 6.0]).unwrap();
    assert!((found.ss_between - 28.0).abs() < 1e-13);
    assert!((found.parts[0].ss - 25.0).abs() < 1e-13 && (found.parts[1].ss - 3.0).abs() < 1e-13);
    assert!(found.complete());
}

#[test]
fn groups_without_observations_count_for_nothing_and_means_that_are_alike_have_no_shares() {
    let set = [contrast(&[-1.0, 1.0, 0.0])];
    let found = partition(&set, &[3, 3, 0], &[1.0, 2.0, f64::NAN]).unwrap();
    assert!(found.complete() && found.df_between == 1 && found.parts[0].ss == found.ss_between);
    let alike = partition(&set, &[3, 3, 3], &[2.0; 3]).unwrap();
    assert_eq!((alike.ss_between, alike.parts[0].ss, alike.parts[0].share), (0.0, 0.0, None));
    assert!(partition(&[], &[], &[]).unwrap().complete());
}

#[test]
fn what_cannot_be_split_is_said() {
    let said = |c: &[f64], n: &[usize], m: &[f64]| {
        let named = Contrast { name: "late".into(), coefficients: c.to_vec() };
        partition(&[named], n, m).unwrap_err()
    };
    assert_eq!(
        said(&[1.0, -1.0], &[2; 3], &[0.0; 3]).to_string(),
        "contrast \"late\" has 2 coefficients for 3 groups; each group needs one"
    );
    assert_eq!(
        said(&[1.0, -1.0], &[2; 2], &[0.0; 3]).to_string(),
        "3 means were given for 2 groups; each needs one"
    );
    assert_eq!(
        said(&[1.0, 0.0, -1.0], &[2, 2, 0], &[0.0; 3]).to_string(),
        "contrast \"late\" weighs group 3, which has no observation"
    );
    let endless = |error| matches!(error, NoPartition::NotFinite { .. });
    assert!(endless(said(&[0.0; 2], &[2; 2], &[0.0, 1.0])));
    assert!(endless(said(&[f64::INFINITY, -1.0], &[2; 2], &[0.0, 1.0])));
    assert!(endless(said(&[1.0, -1.0], &[2; 2], &[0.0, 1e300])));
}

fn layouts() -> impl Strategy<Value = (Vec<usize>, Vec<f64>)> {
    (2..9_usize)
        .prop_flat_map(|k| (prop::collection::vec(1..40_usize, k), prop::collection::vec(-9.0..9.0_f64, k)))
}

proptest! {
    #[test]
    fn averages_weighted_by_size_split_everything((n, means) in layouts()) {
        // Each level against the mean of all observations in the earlier ones.
        let k = n.len();
        let set: Vec<Contrast> = (1..k)
            .map(|i| {
                let before: usize = n[..i].iter().sum();
                let weight = |j: usize| if j < i { -(n[j] as f64) / before as f64 } else { f64::from(i == j) };
                contrast(&(0..k).map(weight).collect::<Vec<_>>())
            })
            .collect();
        let found = partition(&set, &n, &means).unwrap();
        prop_assert!(found.complete(), "{found:?}");
        let total: f64 = found.parts.iter().map(|part| part.ss).sum();
        prop_assert!((total - found.ss_between).abs() < 1e-12 * found.ss_between.max(1.0));
        for (part, c) in found.parts.iter().zip(&set) {
            let estimate: f64 = c.coefficients.iter().zip(&means).map(|(c, m)| c * m).sum();
            let size: f64 = c.coefficients.iter().zip(&n).map(|(c, n)| c * c / *n as f64).sum();
            prop_assert!((part.ss - estimate * estimate / size).abs() < 1e-12 * part.ss.max(1.0));
        }
    }

    #[test]
    fn ready_sets_are_orthogonal_for_equal_groups_where_they_should_be(k in 2..7_usize, n in 1..9_usize) {
        let means: Vec<f64> = (0..k).map(|i| (i * i) as f64).collect();
        let of = |set| partition(&ready_set(set, &labels(k)), &vec![n; k], &means).unwrap();
        prop_assert!(of(Set::AgainstEarlier).complete());
        prop_assert!(of(Set::Polynomial).complete());
        prop_assert_eq!(of(Set::Neighbours).complete(), k == 2);
        prop_assert_eq!(of(Set::AllPairs).exceeds_df(), k > 2);
        // Squares of the ranks have a linear and a quadratic part and nothing else.
        let rest: f64 = of(Set::Polynomial).parts.iter().skip(2).map(|part| part.share.unwrap()).sum();
        prop_assert!(rest < 1e-20);
    }

    #[test]
    fn scale_of_coefficients_and_origin_of_means_do_not_matter(
        (n, means) in layouts(), power in -900..900_i32, shift in -1e3..1e3_f64
    ) {
        let k = n.len();
        let scores: Vec<f64> = (0..k).map(|i| (i * (i + 2)) as f64).collect();
        let set = polynomial_set(&scores, &labels(k)).unwrap();
        let factor = libm::ldexp(1.0, power);
        let scaled: Vec<Contrast> = set
            .iter()
            .map(|c| Contrast { coefficients: c.coefficients.iter().map(|c| c * factor).collect(), ..c.clone() })
            .collect();
        let one = partition(&set, &n, &means).unwrap();
        let other = partition(&scaled, &n, &means).unwrap();
        prop_assert_eq!(&one.correlations, &other.correlations);
        prop_assert_eq!(one.rank, other.rank);
        let moved = partition(&set, &n, &means.iter().map(|m| m + shift).collect::<Vec<_>>()).unwrap();
        for ((a, b), c) in one.parts.iter().zip(&other.parts).zip(&moved.parts) {
            prop_assert_eq!(a.ss, b.ss);
            prop_assert!((a.ss - c.ss).abs() < 1e-9 * one.ss_between.max(1.0));
            prop_assert!(a.share.is_none_or(|share| (0.0..=1.0).contains(&share)));
        }
        for (i, row) in one.correlations.iter().enumerate() {
            prop_assert_eq!(row[i], 1.0);
            prop_assert!(row.iter().enumerate().all(|(j, r)| *r == one.correlations[j][i] && r.abs() <= 1.0));
        }
    }
}
