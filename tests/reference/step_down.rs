//! Dunnett and Tamhane's step-down procedure against a control.
//!
//! Sources: the dose set was worked for this project by quadrature to the digits written here; brute force: the closed
//! test, every intersection of which is judged by `many_to_one::sf` (checked in `many_to_one.rs`).

use crate::comparisons::printed;
use crate::worked_examples::{doses, estimates, random, standard_normal};
use levelwise::methods::multiplicity::Sides;
use levelwise::methods::multiplicity::step_down_control::{adjusted, judged};
use levelwise::numerics::distributions::{many_to_one, student_t};
use levelwise::study::Variances;

const ALL_SIDES: [Sides; 3] = [Sides::Both, Sides::Greater, Sides::Less];

fn single_step(t: f64, loadings: &[f64], df: f64, sides: Sides) -> f64 {
    let (t, sides) = match sides {
        Sides::Both => (t.abs(), many_to_one::Sides::Both),
        Sides::Greater => (t, many_to_one::Sides::Greater),
        Sides::Less => (-t, many_to_one::Sides::Greater),
    };
    many_to_one::sf(t, loadings, df, sides).unwrap()
}

#[test]
fn the_dose_set_gives_the_values_computed_for_it() {
    let estimates = estimates(&doses(), Variances::Equal);
    let contrast = |i: usize| {
        let mut coefficients = [-1.0, 0.0, 0.0, 0.0];
        coefficients[i] = 1.0;
        let found = estimates.contrast(&coefficients);
        found.estimate / found.se
    };
    let t: Vec<f64> = (1..4).map(contrast).collect();
    printed(&t, &["2.088932", "4.177864", "6.858571"], "t");
    let loadings = [5.0, 5.0, 4.0].map(|n: f64| (n / (n + 6.0)).sqrt());
    let p = |sides| adjusted(&t, &loadings, 16.0, sides).unwrap();
    printed(&p(Sides::Both), &[".0530492", ".00136879", "1.1135e-5"], "both sides");
    printed(&p(Sides::Greater), &[".0265246", "6.8443e-4", "5.5679e-6"], "greater");
    let single: Vec<f64> = t.iter().map(|t| single_step(*t, &loadings, 16.0, Sides::Both)).collect();
    printed(&single, &[".132239", ".00199711", "1.1135e-5"], "single step");
}

/// Statistics with loadings, df and a seed's worth of variety.
fn families() -> Vec<(Vec<f64>, Vec<f64>, f64)> {
    let mut stream = random(1);
    let mut families = Vec::new();
    for size in [1, 2, 3, 4, 5, 5, 6] {
        let t = (0..size).map(|_| 2.0 * standard_normal(&mut stream)).collect();
        let loadings = (0..size).map(|_| 0.3 + 0.6 * stream.uniform()).collect();
        families.push((t, loadings, [3.0, 12.5, 60.0, f64::INFINITY][size % 4]));
    }
    families
}

#[test]
fn it_is_the_closed_test() {
    for (t, loadings, df) in families() {
        for sides in ALL_SIDES {
            let direct = adjusted(&t, &loadings, df, sides).unwrap();
            let strength = |i: usize| match sides {
                Sides::Both => t[i].abs(),
                Sides::Greater => t[i],
                Sides::Less => -t[i],
            };
            let mut closed = vec![0.0_f64; t.len()];
            for set in 1_usize..1 << t.len() {
                let members: Vec<usize> = (0..t.len()).filter(|i| set >> i & 1 == 1).collect();
                let of: Vec<f64> = members.iter().map(|&i| loadings[i]).collect();
                let largest = members.iter().copied().max_by(|&i, &j| strength(i).total_cmp(&strength(j)));
                let p = single_step(t[largest.unwrap()], &of, df, sides);
                members.iter().for_each(|&i| closed[i] = closed[i].max(p));
            }
            for (direct, closed) in direct.iter().zip(&closed) {
                assert!((direct / closed - 1.0).abs() < 2e-11, "{t:?} {sides:?}: {direct} {closed}");
            }
        }
    }
}

#[test]
fn it_rejects_whatever_the_single_step_rejects_and_never_below_the_raw_p_value() {
    for (t, loadings, df) in families() {
        for sides in ALL_SIDES {
            let p = adjusted(&t, &loadings, df, sides).unwrap();
            for i in 0..t.len() {
                let raw = match sides {
                    Sides::Both => 2.0 * student_t::sf(t[i].abs(), df).unwrap(),
                    Sides::Greater => student_t::sf(t[i], df).unwrap(),
                    Sides::Less => student_t::sf(-t[i], df).unwrap(),
                };
                assert!(p[i] <= single_step(t[i], &loadings, df, sides) * (1.0 + 1e-11));
                assert!(p[i] >= raw * (1.0 - 1e-11), "{} {raw}", p[i]);
            }
        }
    }
}

#[test]
fn critical_values_and_adjusted_p_values_decide_alike() {
    let mut counts = [0, 0];
    for (t, loadings, df) in families() {
        for sides in ALL_SIDES {
            let p = adjusted(&t, &loadings, df, sides).unwrap();
            for alpha in [0.01, 0.05, 0.2, 0.6] {
                let judged = judged(&t, &loadings, df, sides, alpha).unwrap();
                for i in 0..t.len() {
                    let strength = match sides {
                        Sides::Both => t[i].abs(),
                        Sides::Greater => t[i],
                        Sides::Less => -t[i],
                    };
                    assert_eq!(strength >= judged[i].critical, p[i] <= alpha, "{t:?} {sides:?} {alpha}");
                    counts[usize::from(p[i] <= alpha)] += 1;
                    let tails = if sides == Sides::Both { 2.0 } else { 1.0 };
                    let level = tails * student_t::sf(judged[i].critical, df).unwrap();
                    assert!((judged[i].level / level - 1.0).abs() < 1e-12);
                }
            }
        }
    }
    assert!(counts.iter().all(|count| *count > 50), "both decisions occur: {counts:?}");
}

#[test]
fn the_order_of_the_comparisons_changes_nothing() {
    for (t, loadings, df) in families() {
        let reversed = |values: &[f64]| values.iter().rev().copied().collect::<Vec<f64>>();
        for sides in ALL_SIDES {
            let one = adjusted(&t, &loadings, df, sides).unwrap();
            let other = adjusted(&reversed(&t), &reversed(&loadings), df, sides).unwrap();
            assert_eq!(one, reversed(&other));
        }
    }
}

#[test]
fn equal_statistics_share_their_p_value_and_what_they_are_held_to() {
    let (t, loadings) = ([2.5, -2.5, 1.0], [0.8, 0.6, 0.7]);
    let p = adjusted(&t, &loadings, 10.0, Sides::Both).unwrap();
    assert_eq!(p[0], p[1]);
    let held = judged(&t, &loadings, 10.0, Sides::Both, 0.2).unwrap();
    assert_eq!(held[0], held[1]);
    assert_eq!((held[0].left, held[2].left), (3, 1));
}

#[test]
fn what_cannot_be_judged_is_refused_by_name() {
    let refusal = |t: &[f64], loadings: &[f64], df: f64| {
        adjusted(t, loadings, df, Sides::Both).unwrap_err().to_string()
    };
    assert_eq!(
        refusal(&[1.0, 2.0], &[0.5], 5.0),
        "number of loadings is 1, but must be one for each statistic"
    );
    assert_eq!(refusal(&[f64::NAN], &[0.5], 5.0), "d is NaN, but must be a finite number");
    assert!(refusal(&[1.0], &[1.0], 5.0).starts_with("loadings is 1"));
    assert!(refusal(&[1.0], &[0.5], 0.0).starts_with("df is 0"));
    assert_eq!(adjusted(&[], &[], 5.0, Sides::Both).unwrap(), Vec::<f64>::new());
}
