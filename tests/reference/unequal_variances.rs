//! Tamhane's T2 and Dunnett's T3 and C.
//!
//! Sources: the blood counts were worked for this project by quadrature to the digits written here; otherwise the
//! definitions themselves, by the distributions that the reference checks of `studentized_range.rs`, `wide.rs` and
//! `central.rs` stand behind.

use crate::comparisons::printed;
use crate::worked_examples::{blood, estimates, random, random_groups};
use levelwise::methods::multiplicity::unequal::{Pair, Pairs, Separate};
use levelwise::numerics::distributions::{student_t, studentized_maximum, studentized_range};
use levelwise::study::{Estimates, Variances};

const ALL: [Separate; 3] = [Separate::TamhaneT2, Separate::DunnettT3, Separate::DunnettC];

#[test]
fn the_blood_counts_give_the_values_computed_for_them() {
    let mut pairs = Pairs::of(&estimates(&blood(), Variances::Unequal)).unwrap();
    let p = |pairs: &mut Pairs, procedure| pairs.adjusted_p(procedure).unwrap();
    printed(&p(&mut pairs, Separate::TamhaneT2), &[".671983", ".0445025", ".145783"], "T2");
    printed(&p(&mut pairs, Separate::DunnettT3), &[".637601", ".0405921", ".132485"], "T3");
    let critical = pairs.critical(Separate::DunnettC, 0.05).unwrap();
    printed(&critical, &["3.791012", "3.491711", "3.746134"], "critical values of C");
}

/// Layouts of many shapes, with small and large groups side by side.
fn layouts() -> Vec<Estimates> {
    let mut stream = random(3);
    let sizes: [&[usize]; 6] =
        [&[2, 2, 2], &[3, 9], &[4, 5, 6, 7], &[2, 40, 3, 12, 12], &[30, 30, 31, 31], &[2, 200, 90]];
    let one = |sizes: &&[usize]| estimates(&random_groups(sizes, 1.5, &mut stream), Variances::Unequal);
    sizes.iter().map(one).collect()
}

fn raw(pair: &Pair) -> f64 {
    2.0 * student_t::sf(pair.t.abs(), pair.df).unwrap()
}

#[test]
fn the_shared_tables_give_what_each_pair_gives_alone() {
    for estimates in layouts() {
        let k = estimates.means.len();
        let m = k * (k - 1) / 2;
        let mut pairs = Pairs::of(&estimates).unwrap();
        let t3 = pairs.adjusted_p(Separate::DunnettT3).unwrap();
        let t3_critical = pairs.critical(Separate::DunnettT3, 0.01).unwrap();
        let c_critical = pairs.critical(Separate::DunnettC, 0.01).unwrap();
        for (i, pair) in pairs.pairs.iter().enumerate() {
            let alone = studentized_maximum::sf(pair.t.abs(), m, pair.df).unwrap();
            assert!((t3[i] / alone - 1.0).abs() < 1e-11, "{} {alone}", t3[i]);
            let alone = studentized_maximum::upper_quantile(0.01, m, pair.df).unwrap();
            assert!((t3_critical[i] / alone - 1.0).abs() < 1e-11, "{} {alone}", t3_critical[i]);
            let q = |df| studentized_range::upper_quantile(0.01, k, df).unwrap();
            let (v, w) = (pair.later.variance, pair.earlier.variance);
            let alone = (q(pair.later.df) * v + q(pair.earlier.df) * w) / (2_f64.sqrt() * (v + w));
            assert!((c_critical[i] / alone - 1.0).abs() < 1e-11, "{} {alone}", c_critical[i]);
        }
    }
}

#[test]
fn at_its_adjusted_p_value_each_pair_just_reaches_its_critical_value() {
    for estimates in layouts() {
        for procedure in ALL {
            let mut pairs = Pairs::of(&estimates).unwrap();
            let p = pairs.adjusted_p(procedure).unwrap();
            for (i, pair) in pairs.pairs.clone().iter().enumerate().filter(|(i, _)| p[*i] < 0.999) {
                let critical = pairs.critical(procedure, p[i]).unwrap()[i];
                let error = (critical / pair.t.abs() - 1.0).abs();
                assert!(error < 1e-10, "{procedure:?} {pair:?}: {critical}, p {}", p[i]);
            }
        }
    }
}

#[test]
fn p_values_are_ordered_as_they_should_be() {
    for estimates in layouts() {
        let mut pairs = Pairs::of(&estimates).unwrap();
        let [t2, t3, c] = ALL.map(|procedure| pairs.adjusted_p(procedure).unwrap());
        for (i, pair) in pairs.pairs.iter().enumerate() {
            assert!(
                t2[i] >= raw(pair) && t3[i] >= raw(pair) && c[i] >= raw(pair) * (1.0 - 1e-12),
                "{pair:?}"
            );
            // The modulus takes the common standard deviation into account, Šidák's bound does not.
            assert!(t3[i] <= t2[i] * (1.0 + 1e-11), "{pair:?}");
        }
    }
}

#[test]
fn two_levels_are_welchs_test() {
    let estimates = estimates(&random_groups(&[5, 9], 1.0, &mut random(4)), Variances::Unequal);
    let mut pairs = Pairs::of(&estimates).unwrap();
    let welch = raw(&pairs.pairs[0]);
    for procedure in [Separate::TamhaneT2, Separate::DunnettT3] {
        assert!((pairs.adjusted_p(procedure).unwrap()[0] / welch - 1.0).abs() < 1e-12);
    }
}

#[test]
fn relabelling_and_another_unit_change_nothing() {
    let groups = random_groups(&[4, 7, 12, 5], 1.0, &mut random(5));
    let changed: Vec<Vec<f64>> =
        groups.iter().rev().map(|group| group.iter().map(|y| 30.0 - 8.0 * y).collect()).collect();
    let mut one = Pairs::of(&estimates(&groups, Variances::Unequal)).unwrap();
    let mut other = Pairs::of(&estimates(&changed, Variances::Unequal)).unwrap();
    for procedure in ALL {
        let (p, mut reversed) = (one.adjusted_p(procedure).unwrap(), other.adjusted_p(procedure).unwrap());
        // The pair (i, j) is now (k-1-j, k-1-i).
        let of = |i: usize, j: usize| i * (7 - i) / 2 + j - i - 1;
        let place: Vec<usize> = (0..4).flat_map(|i| (i + 1..4).map(move |j| of(3 - j, 3 - i))).collect();
        reversed = place.iter().map(|&place| reversed[place]).collect();
        for (p, q) in p.iter().zip(&reversed) {
            assert!((p / q - 1.0).abs() < 1e-10, "{procedure:?}: {p} {q}");
        }
    }
}

#[test]
fn one_error_term_is_refused() {
    let refused = Pairs::of(&estimates(&blood(), Variances::Equal)).err().unwrap();
    assert_eq!(
        refused.to_string(),
        "df is 12, but must be those of a variance for each mean, and not common to all"
    );
}

#[test]
fn p_values_far_out_are_no_nan() {
    let mut stream = random(6);
    for spread in [0.0, 10.0, 1e3, 1e10, 1e150] {
        let mut far = estimates(&random_groups(&[2, 30, 200], 0.0, &mut stream), Variances::Unequal);
        far.means = vec![0.0, spread, -2.0 * spread];
        let mut pairs = Pairs::of(&far).unwrap();
        for procedure in ALL {
            let p = pairs.adjusted_p(procedure).unwrap();
            assert!(p.iter().all(|p| (0.0..=1.0).contains(p)), "{procedure:?} {spread}: {p:?}");
        }
    }
}
