//! Adjusted p-values. Sources: the six p-values of "adjustments" and their results computed for this project (Hommel
//! by brute-force closure, as this file does again); the fifteen p-values of Benjamini and Hochberg (1995), J. R.
//! Stat. Soc. B 57, 289–300, section 3.2, with the numbers of rejections that they print; `data/values/datasets.json`
//! (raw p-values in ball arithmetic, adjusted from them; 15 digits). Common practice is marked so.

use crate::cases::{cases, number, relative_error};
use levelwise::methods::multiplicity::PValueMethod::{self, *};
use levelwise::methods::multiplicity::p_values::{adjusted, alpha_per_comparison};
use proptest::prelude::*;

const ALL: [PValueMethod; 9] =
    [None, Bonferroni, Sidak, Holm, HolmSidak, Hochberg, Hommel, BenjaminiHochberg, BenjaminiYekutieli];

fn assert_close(computed: &[f64], expected: &[f64], tolerance: f64, what: &str) {
    for (c, e) in computed.iter().zip(expected) {
        assert!((c - e).abs() <= tolerance, "{what}: {computed:?}, expected {expected:?}");
    }
}

#[test]
fn six_p_values_are_adjusted_as_computed_independently() {
    let p = [0.010, 0.015, 0.020, 0.030, 0.041, 0.300];
    let expected: [(PValueMethod, [f64; 6]); 6] = [
        (Holm, [0.06, 0.075, 0.08, 0.09, 0.09, 0.3]),
        (HolmSidak, [0.058520, 0.072783, 0.077632, 0.087327, 0.087327, 0.3]),
        (Hochberg, [0.06, 0.075, 0.08, 0.082, 0.082, 0.3]),
        (Hommel, [0.05, 0.054667, 0.06, 0.0615, 0.082, 0.3]),
        (BenjaminiHochberg, [0.04, 0.04, 0.04, 0.045, 0.0492, 0.3]),
        (BenjaminiYekutieli, [0.098, 0.098, 0.098, 0.11025, 0.12054, 0.735]),
    ];
    for (method, expected) in expected {
        assert_close(&adjusted(&p, method), &expected, 5.1e-7, &format!("{method:?}"));
    }
}

#[test]
fn benjamini_and_hochberg_reject_four_of_their_fifteen_and_the_family_wise_methods_three() {
    let p = [
        0.0001, 0.0004, 0.0019, 0.0095, 0.0201, 0.0278, 0.0298, 0.0344, 0.0459, 0.3240, 0.4262, 0.5719,
        0.6528, 0.7590, 1.0,
    ];
    let rejections = |method| adjusted(&p, method).iter().filter(|p| **p <= 0.05).count();
    assert_eq!(rejections(BenjaminiHochberg), 4);
    assert_eq!([Bonferroni, Holm, Hochberg].map(rejections), [3, 3, 3]);
}

#[test]
fn all_pairs_of_the_twelve_data_sets_are_adjusted_to_fourteen_digits() {
    let names = [
        ("bonferroni", Bonferroni),
        ("sidak", Sidak),
        ("holm", Holm),
        ("holm_sidak", HolmSidak),
        ("hochberg", Hochberg),
        ("hommel", Hommel),
        ("bh", BenjaminiHochberg),
        ("by", BenjaminiYekutieli),
    ];
    let mut checked = 0;
    for case in cases("datasets") {
        let pairs: Vec<_> = case["pairs"].as_array().unwrap().iter().map(|pair| &pair["pooled_t"]).collect();
        let raw: Vec<f64> = pairs.iter().map(|pair| number(&pair["p"])).collect();
        for (name, method) in names {
            for (pair, computed) in pairs.iter().zip(adjusted(&raw, method)) {
                let expected = number(&pair["adjusted_p"][name]);
                assert!(
                    relative_error(computed, expected) < 2e-14,
                    "{} {name}: {computed} {expected}",
                    case["name"]
                );
                checked += 1;
            }
        }
    }
    assert!(checked > 500, "only {checked} values were found");
}

/// Common practice, not a table: the level per comparison is the level divided by the number of comparisons.
#[test]
fn three_comparisons_at_five_per_cent_give_0_0167_each() {
    let levels = alpha_per_comparison(&[0.2, 0.01, 0.04], Bonferroni, 0.05).unwrap();
    assert!(levels.iter().all(|level| (level - 0.0167).abs() < 5e-5), "{levels:?}");
    let holm = alpha_per_comparison(&[0.2, 0.01, 0.02], Holm, 0.05).unwrap();
    assert_close(&holm, &[0.05, 0.05 / 3.0, 0.025], 1e-15, "Holm: 0.0167, 0.025, 0.05 by rank");
}

#[test]
fn hommel_is_the_closed_test_with_simes_for_every_intersection() {
    let mut runner = proptest::test_runner::TestRunner::deterministic();
    runner
        .run(&proptest::collection::vec(0.0..1.0_f64, 1..8), |p| {
            let computed = adjusted(&p, Hommel);
            for (i, computed) in computed.iter().enumerate() {
                prop_assert!((computed - closed_simes(&p, i)).abs() < 1e-14);
            }
            Ok(())
        })
        .unwrap();
}

/// The largest Simes p-value over all subsets of hypotheses that hold hypothesis `i`.
fn closed_simes(p: &[f64], i: usize) -> f64 {
    let subsets = (0_u32..1 << p.len()).filter(|subset| subset & (1 << i) != 0);
    let simes = |subset: u32| {
        let mut held: Vec<f64> = (0..p.len()).filter(|j| subset & (1 << j) != 0).map(|j| p[j]).collect();
        held.sort_by(f64::total_cmp);
        let size = held.len() as f64;
        held.iter().enumerate().map(|(j, p)| size * p / (j + 1) as f64).fold(1.0, f64::min)
    };
    subsets.map(simes).fold(0.0, f64::max)
}

proptest! {
    #[test]
    fn adjusted_p_values_are_ordered_like_the_raw_ones_and_never_below_them(
        p in proptest::collection::vec(0.0..=1.0_f64, 0..12)
    ) {
        for method in ALL {
            let result = adjusted(&p, method);
            for i in 0..p.len() {
                prop_assert!(result[i] >= p[i] && result[i] <= 1.0, "{method:?} {p:?} {result:?}");
                for j in 0..p.len() {
                    prop_assert!(p[i] > p[j] || result[i] <= result[j], "{method:?} {p:?} {result:?}");
                }
            }
        }
    }

    #[test]
    fn every_procedure_is_at_least_as_strict_as_the_one_that_it_improves(
        p in proptest::collection::vec(0.0..=1.0_f64, 1..12)
    ) {
        let chains = [[Hommel, Hochberg], [Hochberg, Holm], [Holm, Bonferroni], [HolmSidak, Sidak],
            [Sidak, Bonferroni], [BenjaminiHochberg, Hochberg], [BenjaminiHochberg, BenjaminiYekutieli]];
        for [finer, coarser] in chains {
            let (finer, coarser) = (adjusted(&p, finer), adjusted(&p, coarser));
            prop_assert!(finer.iter().zip(&coarser).all(|(f, c)| *f <= c + 1e-15), "{p:?} {finer:?} {coarser:?}");
        }
    }

    #[test]
    fn both_readings_of_a_correction_give_one_decision(
        p in proptest::collection::vec(prop_oneof![0.0..0.06_f64, 0.0..=1.0_f64], 1..12), alpha in 0.001..0.2_f64
    ) {
        for method in ALL {
            let Some(levels) = alpha_per_comparison(&p, method, alpha) else { continue };
            for ((p, level), adjusted) in p.iter().zip(levels).zip(adjusted(&p, method)) {
                // At the very edge the two divisions may round apart.
                if (adjusted - alpha).abs() > 1e-12 {
                    prop_assert_eq!(*p <= level, adjusted <= alpha, "{:?} p {} level {}", method, p, level);
                }
            }
        }
    }

    #[test]
    fn the_order_of_the_hypotheses_does_not_matter(
        p in proptest::collection::vec(0.0..=1.0_f64, 1..10), turn in 0..10_usize
    ) {
        let mut turned = p.clone();
        turned.rotate_left(turn % p.len());
        for method in ALL {
            let mut expected = adjusted(&p, method);
            expected.rotate_left(turn % p.len());
            prop_assert_eq!(adjusted(&turned, method), expected);
        }
    }
}
