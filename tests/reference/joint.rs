//! Single-step and step-down max-t for any contrasts.
//!
//! Sources: the blood counts and the dose set were worked for this project by quadrature to the digits written here;
//! `data/joint/closed.json` by `closed.py` beside it (plain quadrature, good to 1e-4); otherwise closed forms that other checks
//! stand behind (studentized range, many-to-one, Student's t, `multivariate_t` up to rank 3), and closed tests by brute force.

use crate::cases::{cases, number};
use crate::comparisons::printed;
use crate::worked_examples::{blood, doses, estimates, random, random_groups};
use levelwise::methods::contrasts::{Set, rank, ready_set};
use levelwise::methods::multiplicity::joint::{Joint, JointWork, Procedure, Steps};
use levelwise::methods::multiplicity::{Sides, step_down_control};
use levelwise::methods::slices::{Advance, InSlices};
use levelwise::numerics::distributions::multivariate_t::{Effort, Family};
use levelwise::numerics::distributions::{many_to_one, student_t, studentized_range};
use levelwise::study::{Estimates, Variances};

const ALL_SIDES: [Sides; 3] = [Sides::Both, Sides::Greater, Sides::Less];

fn rows(set: Set, estimates: &Estimates) -> Vec<Vec<f64>> {
    ready_set(set, &estimates.labels).into_iter().map(|contrast| contrast.coefficients).collect()
}

fn joint(estimates: &Estimates, rows: &[Vec<f64>], sides: Sides, procedure: Procedure) -> Joint {
    JointWork::new(estimates, rows, 0.0, sides, procedure, 0.05).unwrap().finish().unwrap()
}

fn p(joint: &Joint) -> Vec<f64> {
    joint.rows.iter().map(|row| row.p_adjusted).collect()
}

fn of(sizes: &[usize], spread: f64, seed: u64) -> Estimates {
    estimates(&random_groups(sizes, spread, &mut random(seed)), Variances::Equal)
}

#[track_caller]
fn same(one: f64, other: f64, tolerance: f64) {
    assert!((one - other).abs() <= tolerance * other.abs(), "{one} {other}");
}

#[test]
fn the_blood_counts_give_the_values_computed_for_them() {
    let estimates = estimates(&blood(), Variances::Equal);
    let pairs = rows(Set::AllPairs, &estimates);
    let single = joint(&estimates, &pairs, Sides::Both, Procedure::SingleStep);
    printed(&p(&single), &[".675821", ".00796492", ".0657741"], "single step");
    printed(&[single.rows[0].critical], &["2.666569"], "critical value");
    assert!(single.rows.iter().all(|row| row.exact));
    let closed = joint(&estimates, &pairs, Sides::Both, Procedure::StepDown);
    assert_eq!(closed.steps, Steps::LogicalRestrictions);
    // The source has the studentized range's .00798514 for all three together, here it is exact.
    printed(&p(&closed), &[".408217", ".00796492", ".0274298"], "closed step-down");
}

/// Contrast of a regression on these doses, weighted by the sizes.
fn slope(doses: &[f64], estimates: &Estimates) -> Vec<f64> {
    let n: Vec<f64> = estimates.n.iter().map(|n| *n as f64).collect();
    let centre = doses.iter().zip(&n).map(|(x, n)| x * n).sum::<f64>() / n.iter().sum::<f64>();
    doses.iter().zip(&n).map(|(x, n)| n * (x - centre)).collect()
}

#[test]
fn trends_on_three_scales_of_the_dose_give_the_values_computed_for_them() {
    let estimates = estimates(&doses(), Variances::Equal);
    let scales = [
        [0.0, 10.0, 30.0, 100.0],
        [0.0, 1.0, 2.0, 3.0],
        [1.753279, libm::log(10.0), libm::log(30.0), libm::log(100.0)],
    ];
    let trends = scales.map(|doses| slope(&doses, &estimates));
    let single = joint(&estimates, &trends, Sides::Both, Procedure::SingleStep);
    let t: Vec<f64> = single.rows.iter().map(|row| row.t).collect();
    // The source has 7.109833; in exact fractions it is 7.10983370.
    printed(&t, &["6.774243", "7.109834", "7.107742"], "t");
    printed(&p(&single), &["7.3242e-6", "4.0712e-6", "4.0859e-6"], "p");
    // The source has 2.30019, from lattice points. Trivariate normal rectangles by SciPy 1.17.1 (multivariate_normal.cdf, error
    // asked for 1e-9), mixed over S by 48 Gauss-Legendre nodes, give P(max > 2.30018329) = 0.0499999 and 0.0499991 at 2.30019.
    printed(&[single.rows[0].critical], &["2.30018"], "critical value");
}

#[test]
fn contrasts_of_williams_kind_give_the_values_computed_for_them() {
    let estimates = estimates(&doses(), Variances::Equal);
    let n: Vec<f64> = estimates.n.iter().map(|n| *n as f64).collect();
    let last = |from: usize| -> Vec<f64> {
        let all: f64 = n[from..].iter().sum();
        (0..4)
            .map(|i| {
                if i == 0 {
                    -1.0
                } else if i < from {
                    0.0
                } else {
                    n[i] / all
                }
            })
            .collect()
    };
    let contrasts = [last(3), last(2), last(1)];
    let single = joint(&estimates, &contrasts, Sides::Greater, Procedure::SingleStep);
    let t: Vec<f64> = single.rows.iter().map(|row| row.t).collect();
    printed(&t, &["6.858571", "6.4", "5.369757"], "t");
    printed(&[single.rows[0].critical], &["2.05711"], "critical value");
    printed(&p(&single), &["4.25e-6", "9.65e-6", "6.73e-5"], "p");
}

#[test]
fn one_row_is_the_t_test() {
    for variances in [Variances::Equal, Variances::Unequal] {
        let estimates = estimates(&blood(), variances);
        for sides in ALL_SIDES {
            for procedure in [Procedure::SingleStep, Procedure::StepDown] {
                let one = joint(&estimates, &[vec![-1.0, 0.5, 0.5]], sides, procedure).rows[0];
                assert_eq!(one.p_adjusted, one.p);
                let tails = if sides == Sides::Both { 2.0 } else { 1.0 };
                same(tails * student_t::sf(one.critical, one.df).unwrap(), 0.05, 1e-12);
            }
        }
    }
}

#[test]
fn all_pairs_of_equal_groups_are_tukeys_procedure() {
    for k in [2, 3, 4, 6, 9] {
        let estimates = of(&vec![5; k], 1.0, 20 + k as u64);
        let pairs = rows(Set::AllPairs, &estimates);
        let single = joint(&estimates, &pairs, Sides::Both, Procedure::SingleStep);
        let df = single.rows[0].df;
        for row in &single.rows {
            let tukey = studentized_range::sf(2_f64.sqrt() * row.t.abs(), k, df).unwrap();
            same(row.p_adjusted, tukey, 1e-10);
            same(row.critical, studentized_range::upper_quantile(0.05, k, df).unwrap() / 2_f64.sqrt(), 1e-10);
            assert!(row.exact);
        }
    }
}

#[test]
fn against_a_control_it_is_dunnetts_procedure_in_one_step_and_in_several() {
    for (sizes, seed) in [(&[6, 4, 5][..], 31), (&[9, 3, 5, 7, 4, 6], 32)] {
        let estimates = of(sizes, 1.0, seed);
        let against = rows(Set::AgainstControl(0), &estimates);
        let n = |i: usize| sizes[i] as f64;
        let loadings: Vec<f64> = (1..sizes.len()).map(|i| (n(i) / (n(i) + n(0))).sqrt()).collect();
        for sides in ALL_SIDES {
            let single = joint(&estimates, &against, sides, Procedure::SingleStep);
            let df = single.rows[0].df;
            let (of_many, sign) = match sides {
                Sides::Both => (many_to_one::Sides::Both, 1.0),
                Sides::Greater => (many_to_one::Sides::Greater, 1.0),
                Sides::Less => (many_to_one::Sides::Greater, -1.0),
            };
            for row in &single.rows {
                let d = if sides == Sides::Both { row.t.abs() } else { sign * row.t };
                same(row.p_adjusted, many_to_one::sf(d, &loadings, df, of_many).unwrap(), 1e-10);
                same(row.critical, many_to_one::upper_quantile(0.05, &loadings, df, of_many).unwrap(), 1e-10);
            }
            let several = joint(&estimates, &against, sides, Procedure::StepDown);
            assert_eq!(several.steps, Steps::FreeCombinations);
            let t: Vec<f64> = several.rows.iter().map(|row| row.t).collect();
            let dunnett = step_down_control::adjusted(&t, &loadings, df, sides).unwrap();
            p(&several).iter().zip(&dunnett).for_each(|(one, other)| same(*one, *other, 1e-10));
        }
    }
}

#[test]
fn with_separate_variances_each_row_has_its_own_degrees_of_freedom() {
    let estimates = estimates(&random_groups(&[9, 4, 5, 7], 1.0, &mut random(33)), Variances::Unequal);
    let single =
        joint(&estimates, &rows(Set::AgainstControl(0), &estimates), Sides::Both, Procedure::SingleStep);
    // Hasler and Hothorn (2008): λ_i² = v_0 / (v_0 + v_i).
    let v = |i: usize| estimates.covariance[(i, i)];
    let loadings: Vec<f64> = (1..4).map(|i| (v(0) / (v(0) + v(i))).sqrt()).collect();
    for row in &single.rows {
        let both = many_to_one::Sides::Both;
        same(row.p_adjusted, many_to_one::sf(row.t.abs(), &loadings, row.df, both).unwrap(), 1e-10);
        same(row.critical, many_to_one::upper_quantile(0.05, &loadings, row.df, both).unwrap(), 1e-10);
    }
    assert!(single.rows[0].df != single.rows[1].df);
}

#[test]
fn four_unequal_groups_give_the_values_of_plain_quadrature() {
    let file = std::fs::read_to_string(concat!(
        env!("CARGO_MANIFEST_DIR"),
        "/tests/reference/data/joint/closed.json"
    ));
    let file: serde_json::Value = serde_json::from_str(&file.unwrap()).unwrap();
    let list = |key: &str| file[key].as_array().unwrap().iter().map(number).collect::<Vec<f64>>();
    let n: Vec<usize> = list("sizes").iter().map(|n| *n as usize).collect();
    let mut estimates = of(&n, 1.0, 1);
    estimates.means = list("means");
    let variance = number(&file["variance"]);
    (0..4).for_each(|i| estimates.covariance[(i, i)] = variance / n[i] as f64);
    let pairs = rows(Set::AllPairs, &estimates);
    let single = p(&joint(&estimates, &pairs, Sides::Both, Procedure::SingleStep));
    let closed = p(&joint(&estimates, &pairs, Sides::Both, Procedure::StepDown));
    for (i, case) in cases("joint/closed").iter().enumerate() {
        same(single[i], number(&case["single_step"]), 1e-4);
        same(closed[i], number(&case["closed"]), 1e-4);
    }
    assert!(closed.iter().zip(&single).any(|(closed, single)| *closed < 0.9 * single));
}

/// The largest p-value of the sets that contain each row, of all sets, each enlarged by what it implies.
fn closed_test(estimates: &Estimates, rows: &[Vec<f64>], sides: Sides, logic: bool) -> Vec<f64> {
    let m = rows.len();
    let found: Vec<_> = rows.iter().map(|row| estimates.contrast(row)).collect();
    let covariance = |i: usize, j: usize| estimates.covariance_of(&rows[i], &rows[j]);
    let t = |i: usize| match sides {
        Sides::Both => (found[i].estimate / found[i].se).abs(),
        Sides::Greater => found[i].estimate / found[i].se,
        Sides::Less => -found[i].estimate / found[i].se,
    };
    let mut adjusted = vec![0.0_f64; m];
    for bits in 1_usize..1 << m {
        let mut set: Vec<usize> = (0..m).filter(|i| bits >> i & 1 == 1).collect();
        if logic {
            let of = |set: &[usize]| rank(&set.iter().map(|i| rows[*i].clone()).collect::<Vec<_>>());
            let alone = of(&set);
            let implied: Vec<usize> =
                (0..m).filter(|i| !set.contains(i) && of(&[&set[..], &[*i]].concat()) == alone).collect();
            set.extend(implied);
        }
        let correlation: Vec<Vec<f64>> = set
            .iter()
            .map(|&i| {
                let one = |j: usize| if i == j { 1.0 } else { covariance(i, j) / found[i].se / found[j].se };
                set.iter().map(|&j| one(j)).collect()
            })
            .collect();
        let largest = set.iter().map(|&i| t(i)).fold(f64::NEG_INFINITY, f64::max);
        let tails = if sides == Sides::Both { many_to_one::Sides::Both } else { many_to_one::Sides::Greater };
        let family = Family::new(&correlation, found[0].df, tails).unwrap();
        let p = family.sf(largest, Effort::default()).unwrap();
        assert_eq!(p.error, 0.0, "rank 3 at most");
        set.iter().for_each(|&i| adjusted[i] = adjusted[i].max(p.value));
    }
    adjusted
}

#[test]
fn step_down_is_the_closed_test() {
    for (sizes, spread, seed) in [
        (&[5, 5, 5][..], 1.0, 41),
        (&[4, 7, 5], 1.0, 42),
        (&[6, 6, 6, 6], 1.2, 43),
        (&[3, 8, 5, 4], 1.2, 44),
        (&[3, 8, 5, 4], 0.5, 45),
    ] {
        let estimates = of(sizes, spread, seed);
        let k = sizes.len();
        let mut families = vec![rows(Set::AllPairs, &estimates), rows(Set::AgainstRest, &estimates)];
        if k == 4 {
            // Dependent rows that are no differences: of five the rank is 3.
            families.push(vec![
                vec![-1.0, 1.0, 0.0, 0.0],
                vec![0.0, -1.0, 1.0, 0.0],
                vec![-1.0, 0.0, 1.0, 0.0],
                vec![-0.5, -0.5, 0.5, 0.5],
                vec![-1.0, 0.0, 0.0, 1.0],
            ]);
            families.push(rows(Set::Neighbours, &estimates));
        }
        for family in families {
            for sides in ALL_SIDES {
                let steps = joint(&estimates, &family, sides, Procedure::StepDown);
                let logic = sides == Sides::Both;
                let independent = rank(&family) == family.len();
                let expected = match (independent, logic) {
                    (true, _) => Steps::FreeCombinations,
                    (false, true) => Steps::LogicalRestrictions,
                    (false, false) => Steps::RestrictionsIgnored,
                };
                assert_eq!(steps.steps, expected);
                let brute = closed_test(&estimates, &family, sides, logic);
                let all = p(&steps);
                let worst =
                    all.iter().zip(&brute).map(|(one, other)| (one / other - 1.0).abs()).fold(0.0, f64::max);
                assert!(worst < 1e-9, "{sizes:?} {family:?} {sides:?}: {all:?} {brute:?}");
            }
        }
    }
}

#[test]
fn step_down_rejects_whatever_the_single_step_rejects_and_nothing_falls_below_its_own_p_value() {
    for (sizes, seed) in [(&[4, 6, 5, 7][..], 51), (&[4, 4, 4, 4, 4, 4], 52), (&[3, 9, 5, 4, 6], 53)] {
        let estimates = of(sizes, 1.2, seed);
        for set in [Set::AllPairs, Set::AgainstControl(1), Set::Neighbours, Set::AgainstRest] {
            for sides in [Sides::Both, Sides::Greater] {
                let rows = rows(set, &estimates);
                let single = joint(&estimates, &rows, sides, Procedure::SingleStep);
                let several = joint(&estimates, &rows, sides, Procedure::StepDown);
                for (single, several) in single.rows.iter().zip(&several.rows) {
                    let slack = 4.0 * (single.p_error + several.p_error);
                    assert!(several.p_adjusted <= single.p_adjusted + slack, "{single:?} {several:?}");
                    assert!(several.p_adjusted >= several.p && single.p_adjusted >= single.p);
                    assert!(several.p_adjusted <= 1.0 && single.p_adjusted <= 1.0);
                    // The critical value goes with the single step.
                    let statistic = if sides == Sides::Both { single.t.abs() } else { single.t };
                    assert_eq!(single.p_adjusted <= 0.05, statistic >= single.critical);
                }
            }
        }
    }
}

#[test]
fn relabelling_and_another_unit_change_nothing() {
    let groups = random_groups(&[4, 7, 3, 5], 1.0, &mut random(61));
    let changed: Vec<Vec<f64>> =
        groups.iter().rev().map(|group| group.iter().map(|y| 30.0 + 8.0 * y).collect()).collect();
    let (one, other) = (estimates(&groups, Variances::Equal), estimates(&changed, Variances::Equal));
    let pairs = rows(Set::AllPairs, &one);
    let turned: Vec<Vec<f64>> = pairs.iter().rev().map(|row| row.iter().rev().copied().collect()).collect();
    for procedure in [Procedure::SingleStep, Procedure::StepDown] {
        for sides in ALL_SIDES {
            let (one, other) =
                (joint(&one, &pairs, sides, procedure), joint(&other, &turned, sides, procedure));
            for (a, b) in one.rows.iter().zip(other.rows.iter().rev()) {
                assert!(
                    (a.p_adjusted / b.p_adjusted - 1.0).abs() < 1e-9,
                    "{procedure:?} {sides:?} {a:?} {b:?}"
                );
            }
        }
    }
}

/// All pairs of five unequal groups: rank 4, where nothing is exact.
#[test]
fn beyond_rank_three_the_errors_are_stated_and_hold() {
    let estimates = of(&[3, 9, 5, 4, 6], 1.0, 71);
    let pairs = rows(Set::AllPairs, &estimates);
    let single = joint(&estimates, &pairs, Sides::Both, Procedure::SingleStep);
    let correlation: Vec<Vec<f64>> = {
        let covariance = |i: usize, j: usize| estimates.covariance_of(&pairs[i], &pairs[j]);
        let one = |i: usize, j: usize| {
            if i == j { 1.0 } else { covariance(i, j) / (covariance(i, i) * covariance(j, j)).sqrt() }
        };
        (0..10).map(|i| (0..10).map(|j| one(i, j)).collect()).collect()
    };
    let df = single.rows[0].df;
    let family = Family::new(&correlation, df, many_to_one::Sides::Both).unwrap();
    // Other shifts, and more points.
    let effort = Effort { relative_error: 2e-5, seed: 99, ..Effort::default() };
    for row in &single.rows {
        assert!(!row.exact && row.p_error > 0.0);
        let clear =
            row.p_error <= 0.1 * (row.p_adjusted - 0.05).abs() && row.p_error <= 1e-3 * row.p_adjusted;
        assert!(clear || row.p_error <= 1e-5, "{row:?}");
        let finer = family.sf(row.t.abs(), effort).unwrap();
        assert!(
            (row.p_adjusted - finer.value).abs() <= 4.5 * (row.p_error + finer.error),
            "{row:?} {finer:?}"
        );
        let critical = family.upper_quantile(0.05, effort).unwrap();
        let slack = 4.5 * (row.critical_error + critical.error);
        assert!((row.critical - critical.value).abs() <= slack, "{row:?} {critical:?}");
        assert!(row.critical_error <= 1.01e-4 * row.critical);
    }
}

#[test]
fn critical_values_beyond_rank_three_are_found_at_every_level() {
    let estimates = of(&[3, 9, 5, 4, 6], 1.0, 73);
    let pairs = rows(Set::AllPairs, &estimates);
    for sides in [Sides::Both, Sides::Less] {
        for alpha in [1e-9, 0.01, 0.4, 0.9] {
            let work = JointWork::new(&estimates, &pairs, 0.0, sides, Procedure::SingleStep, alpha).unwrap();
            let row = work.finish().unwrap().rows[0];
            // The probability there, by the same family with its first statistic put on the critical value.
            let mut there = estimates.clone();
            let first = there.contrast(&pairs[0]);
            let t = if sides == Sides::Less { -row.critical } else { row.critical };
            there.means = vec![0.0, t * first.se, 0.0, 0.0, 0.0];
            let found = joint(&there, &pairs, sides, Procedure::SingleStep).rows[0];
            // A critical value that is off by e standard errors of 1 moves the logarithm of its tail by less than (c + 3) e.
            let slack = alpha * (row.critical.abs() + 3.0) * row.critical_error + found.p_error;
            assert!((found.p_adjusted - alpha).abs() <= 4.5 * slack, "{sides:?} {alpha} {row:?} {found:?}");
        }
    }
}

#[test]
fn slices_end_in_the_same_result_and_tell_how_far_they_are() {
    let estimates = of(&[3, 9, 5, 4, 6], 1.0, 72);
    let pairs = rows(Set::AllPairs, &estimates);
    for procedure in [Procedure::SingleStep, Procedure::StepDown] {
        let mut work = JointWork::new(&estimates, &pairs, 0.0, Sides::Both, procedure, 0.05).unwrap();
        let (mut slices, mut done) = (0, 0.0);
        let result = loop {
            match work.advance() {
                Advance::Done(result) => break result.unwrap(),
                Advance::Working(progress) => {
                    assert!((done..=1.0).contains(&progress.done), "{done} {progress:?}");
                    (slices, done) = (slices + 1, progress.done);
                }
            }
        };
        assert!(slices > 1 && done > 0.5, "{slices} {done}");
        assert_eq!(result, joint(&estimates, &pairs, Sides::Both, procedure));
    }
}

#[test]
fn statistics_far_out_and_none_at_all_are_no_nan() {
    for spread in [0.0, 30.0, 1e4, 1e12] {
        let mut far = of(&[3, 9, 5, 4, 6], 1.0, 81);
        far.means = vec![0.0, spread, -spread, 2.0 * spread, 0.0];
        for set in [Set::AllPairs, Set::AgainstControl(0), Set::AgainstRest] {
            for sides in ALL_SIDES {
                for procedure in [Procedure::SingleStep, Procedure::StepDown] {
                    let joint = joint(&far, &rows(set, &far), sides, procedure);
                    let fine = |p: f64, e: f64| (0.0..=1.0).contains(&p) && e >= 0.0 && e.is_finite();
                    assert!(joint.rows.iter().all(|row| fine(row.p_adjusted, row.p_error)), "{joint:?}");
                    assert!(joint.rows.iter().all(|row| row.critical.is_finite()));
                }
            }
        }
    }
}

#[test]
fn what_has_no_joint_distribution_is_refused_by_name() {
    let estimates = estimates(&blood(), Variances::Equal);
    let refused = |rows: &[Vec<f64>], alpha: f64| {
        let work = JointWork::new(&estimates, rows, 0.0, Sides::Both, Procedure::StepDown, alpha);
        work.err().unwrap().to_string()
    };
    assert_eq!(refused(&[], 0.05), "number of contrasts is 0, but must be from 1 to 1000");
    assert_eq!(
        refused(&[vec![1.0, -1.0]], 0.05),
        "number of coefficients is 2, but must be one for each level"
    );
    assert!(refused(&[vec![0.0; 3]], 0.05).starts_with("t is NaN"));
    assert_eq!(
        refused(&[vec![1.0, -1.0, 0.0]], 0.0),
        "alpha is 0, but must be greater than 0 and less than 1"
    );
}
