//! What must hold for the multivariate t distribution whatever the correlations are, against the distributions that have
//! their own names (exact themselves), and whether the stated standard errors are honest.

use crate::multivariate_t::{all_pairs, product_structure};
use levelwise::numerics::distributions::many_to_one::{self, Sides};
use levelwise::numerics::distributions::multivariate_t::{self, Answer, Effort, Family, Method};
use levelwise::numerics::distributions::studentized_range;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

/// A correlation matrix of `rows` statistics of rank at most `rank`: scalar products of random directions.
fn correlations(rows: usize, rank: usize) -> impl Strategy<Value = Vec<Vec<f64>>> {
    let direction = prop::collection::vec(-1.0..1.0f64, rank)
        .prop_filter("not too short", |row| row.iter().map(|x| x * x).sum::<f64>() > 0.01);
    prop::collection::vec(direction, rows).prop_map(|rows| {
        let length = |row: &Vec<f64>| row.iter().map(|x| x * x).sum::<f64>().sqrt();
        let cosine = |a: &Vec<f64>, b: &Vec<f64>| {
            a.iter().zip(b).map(|(a, b)| a * b).sum::<f64>() / (length(a) * length(b))
        };
        let entry = |i: usize, j: usize| if i == j { 1.0 } else { cosine(&rows[i.min(j)], &rows[i.max(j)]) };
        (0..rows.len()).map(|i| (0..rows.len()).map(|j| entry(i, j)).collect()).collect()
    })
}

/// Up to six statistics of rank up to `rank`.
fn families(rank: usize) -> impl Strategy<Value = Vec<Vec<f64>>> {
    (1..=6_usize, 1..=rank).prop_flat_map(|(rows, rank)| correlations(rows, rank))
}

fn degrees() -> impl Strategy<Value = f64> {
    prop_oneof![4 => 1.0..60.0f64, 1 => Just(f64::INFINITY)]
}

fn sides() -> impl Strategy<Value = Sides> {
    prop_oneof![Just(Sides::Both), Just(Sides::Greater)]
}

/// A thousandth, with few points: enough to see a wrong answer.
const QUICK: Effort = Effort { relative_error: 1e-3, most_points: 512, seed: 5 };

/// Whether two answers agree: to rounding if exact, to five standard errors otherwise.
fn agree(got: Answer, expected: f64, expected_error: f64) -> bool {
    let error = libm::hypot(got.error, expected_error);
    (got.value - expected).abs() <= 5.0 * error + 1e-11 * expected.abs() + 1e-14
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(1), failure_persistence: None, ..ProptestConfig::with_cases(150) })]

    #[test]
    fn product_structures_agree_with_comparisons_with_a_control(
        loadings in prop::collection::vec(-0.97..0.97f64, 2..8), df in degrees(), c in 0.1..6.0f64, sides in sides()
    ) {
        let family = Family::new(&product_structure(&loadings), df, sides).unwrap();
        let got = family.sf(c, QUICK).unwrap();
        let expected = many_to_one::sf(c, &loadings, df, sides).unwrap();
        prop_assert_eq!(got.method == Method::Exact, loadings.len() <= 3);
        prop_assert!(agree(got, expected, 0.0), "{:?} {}", got, expected);
    }

    #[test]
    fn all_pairs_of_equal_groups_agree_with_the_studentized_range(
        groups in 3..9_usize, df in degrees(), c in 0.3..6.0f64
    ) {
        let family = Family::new(&all_pairs(&vec![4.0; groups]), df, Sides::Both).unwrap();
        let got = family.sf(c, QUICK).unwrap();
        let expected = studentized_range::sf(c * f64::sqrt(2.0), groups, df).unwrap();
        prop_assert!(agree(got, expected, 0.0), "{:?} {}", got, expected);
    }

    #[test]
    fn repeated_negated_and_reordered_rows_change_nothing(
        matrix in families(5), df in degrees(), c in 0.1..5.0f64, repeat in 0..6_usize
    ) {
        let family = Family::new(&matrix, df, Sides::Both).unwrap();
        let before = family.sf(c, QUICK).unwrap();
        let count = matrix.len();
        // In reverse order, with one row again at the end, negated.
        let order: Vec<usize> = (0..count).rev().chain([repeat % count]).collect();
        let sign = |i: usize| if i == count { -1.0 } else { 1.0 };
        let changed: Vec<Vec<f64>> = (0..=count)
            .map(|i| (0..=count).map(|j| sign(i) * sign(j) * matrix[order[i]][order[j]]).collect())
            .collect();
        let after = Family::new(&changed, df, Sides::Both).unwrap().sf(c, QUICK).unwrap();
        prop_assert!(agree(after, before.value, before.error), "{:?} {:?}", before, after);
    }

    #[test]
    fn both_tails_add_to_one_and_the_probability_falls_with_the_limit(
        matrix in families(5), df in degrees(), c in 0.05..5.0f64, sides in sides()
    ) {
        let family = Family::new(&matrix, df, sides).unwrap();
        // The same points for all.
        let fixed = Effort { relative_error: 0.0, most_points: 64, seed: 3 };
        let upper = family.sf(c, fixed).unwrap();
        let lower = family.cdf(c, fixed).unwrap();
        prop_assert!((upper.value + lower.value - 1.0).abs() < 1e-14);
        let above = family.sf(c * 1.1, fixed).unwrap();
        // Where the integral changes from one side to the other the points do too.
        let slack = if above.method == Method::Exact { 1e-13 } else { 5.0 * libm::hypot(above.error, upper.error) };
        prop_assert!(above.value <= upper.value + slack, "{:?} {:?}", upper, above);
    }

    #[test]
    fn rectangles_grow_with_their_limits_and_agree_with_the_tail(
        matrix in families(5), df in degrees(), c in 0.2..4.0f64, shift in -2.0..2.0f64, drop in 0..6_usize
    ) {
        let family = Family::new(&matrix, df, Sides::Both).unwrap();
        let count = matrix.len();
        let inside = family.rectangle(&vec![-c; count], &vec![c; count], QUICK).unwrap();
        let outside = family.sf(c, QUICK).unwrap();
        prop_assert!(agree(inside, 1.0 - outside.value, outside.error), "{:?} {:?}", inside, outside);
        let (low, high) = (vec![shift - c; count], vec![shift + 1.5 * c; count]);
        let small = family.rectangle(&low, &high, QUICK).unwrap();
        let mut wider = low.clone();
        wider[drop % count] = f64::NEG_INFINITY;
        let large = family.rectangle(&wider, &high, QUICK).unwrap();
        let slack = 5.0 * libm::hypot(small.error, large.error) + 1e-13;
        prop_assert!(small.value <= large.value + slack, "{:?} {:?}", small, large);
        // Without any limit of its own a row might as well not be there.
        let mut none = high.clone();
        none[drop % count] = f64::INFINITY;
        let without = family.rectangle(&wider, &none, QUICK).unwrap();
        let kept: Vec<usize> = (0..count).filter(|i| *i != drop % count).collect();
        if kept.is_empty() {
            prop_assert_eq!(without.value, 1.0);
        } else {
            let rest: Vec<Vec<f64>> = kept.iter().map(|&i| kept.iter().map(|&j| matrix[i][j]).collect()).collect();
            let limits = |limits: &[f64]| kept.iter().map(|&i| limits[i]).collect::<Vec<f64>>();
            let rest = multivariate_t::rectangle(&limits(&wider), &limits(&none), &rest, df, QUICK).unwrap();
            prop_assert!(agree(without, rest.value, rest.error), "{:?} {:?}", without, rest);
        }
    }

    #[test]
    fn a_quantile_leads_back_to_its_probability(
        matrix in families(5), df in degrees(), p in 1e-6..0.999f64, sides in sides()
    ) {
        let family = Family::new(&matrix, df, sides).unwrap();
        let c = family.upper_quantile(p, QUICK).unwrap();
        let back = family.sf(c.value, QUICK).unwrap();
        // The error of the quantile as one of the probability.
        let beside = family.sf(c.value + 1e-3 * c.value.abs().max(0.1), QUICK).unwrap().value;
        let slope = ((beside - back.value) / (1e-3 * c.value.abs().max(0.1))).abs();
        prop_assert!(agree(back, p, 2.0 * slope * c.error + 1e-10 * p), "{:?} {:?} {}", c, back, p);
    }
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(2), failure_persistence: None, ..ProptestConfig::with_cases(400) })]

    #[test]
    fn every_number_is_answered_or_refused(
        matrix in families(4), c in any_number(), df in any_number(), other in any_number(), sides in sides()
    ) {
        let tiny = Effort { relative_error: 1e-2, most_points: 32, seed: 1 };
        let tails = [
            multivariate_t::sf(c, &matrix, df, sides, tiny),
            multivariate_t::cdf(c, &matrix, df, sides, tiny),
        ];
        for p in tails.into_iter().flatten() {
            prop_assert!((0.0..=1.0).contains(&p.value) && p.error >= 0.0, "{:?}", p);
        }
        let count = matrix.len();
        let rectangle = multivariate_t::rectangle(&vec![c; count], &vec![other; count], &matrix, df, tiny);
        if let Ok(p) = rectangle {
            prop_assert!((0.0..=1.0).contains(&p.value) && p.error >= 0.0, "{:?}", p);
        }
        let quantiles = [
            multivariate_t::quantile(c, &matrix, df, sides, tiny),
            multivariate_t::upper_quantile(c, &matrix, df, sides, tiny),
        ];
        for c in quantiles.into_iter().flatten() {
            prop_assert!(!c.value.is_nan() && c.error >= 0.0, "{:?}", c);
        }
    }

    #[test]
    fn any_matrix_of_any_numbers_is_answered_or_refused(
        entries in prop::collection::vec(any_number(), 9), c in 0.0..5.0f64
    ) {
        for size in 1..=3 {
            let matrix: Vec<Vec<f64>> = entries[..size * size].chunks(size).map(<[f64]>::to_vec).collect();
            if let Ok(p) = multivariate_t::sf(c, &matrix, 5.0, Sides::Both, Effort::default()) {
                prop_assert!((0.0..=1.0).contains(&p.value), "{:?}", p);
            }
        }
    }
}

/// Any f64 at all, with the troublesome ones often.
fn any_number() -> impl Strategy<Value = f64> {
    prop_oneof![
        1 => any::<f64>(),
        1 => prop::sample::select(vec![
            0.0, -0.0, 1.0, -1.0, 1e-308, 5e-324, 1e308, f64::MAX, f64::MIN, f64::INFINITY, f64::NEG_INFINITY,
            f64::NAN, 1e-20, 1e20, 1e30, 1.0 - f64::EPSILON, 40.0, 1e-3,
        ]),
        3 => -10.0..10.0,
        2 => 0.0..1.0,
    ]
}

/// For many seeds, how far the answer lies from the exact one, in standard errors: the largest, and the mean square.
fn standardised(answers: impl Iterator<Item = Answer>, exact: f64) -> (f64, f64) {
    let z: Vec<f64> = answers.map(|answer| (answer.value - exact) / answer.error).collect();
    let largest = z.iter().fold(0.0_f64, |largest, z| largest.max(z.abs()));
    (largest, z.iter().map(|z| z * z).sum::<f64>() / z.len() as f64)
}

#[test]
fn the_stated_standard_errors_have_the_right_size() {
    // 150 seeds: the mean square of a t variable with 24 degrees of freedom is 1.09, its own standard deviation over
    // 150 about 0.13; 4.5 of them are exceeded with probability 2e-4 each.
    let (groups, df) = (6, 20.0);
    let family = Family::new(&all_pairs(&vec![1.0; groups]), df, Sides::Both).unwrap();
    for p in [0.9, 0.3, 0.05, 1e-4, 1e-10] {
        let c = studentized_range::upper_quantile(p, groups, df).unwrap() / f64::sqrt(2.0);
        let fixed = |seed: u64| family.sf(c, Effort { relative_error: 0.0, most_points: 64, seed }).unwrap();
        let (largest, square) = standardised((0..150).map(fixed), p);
        println!("standard errors at p = {p:e}: largest |z| {largest:.2}, mean square {square:.2}");
        assert!(largest < 4.5 && (0.6..1.6).contains(&square), "{p}: {largest} {square}");
    }
    // Rectangles by separation of variables: six comparisons with a control, below 0.5 each.
    let loadings = [0.7, 0.6, 0.5, 0.8, 0.3, 0.65];
    let exact = many_to_one::cdf(0.5, &loadings, df, Sides::Greater).unwrap();
    let family = Family::new(&product_structure(&loadings), df, Sides::Greater).unwrap();
    let inside = |seed: u64| {
        let fixed = Effort { relative_error: 0.0, most_points: 64, seed };
        family.rectangle(&[f64::NEG_INFINITY; 6], &[0.5; 6], fixed).unwrap()
    };
    assert_eq!(inside(1).method, Method::Separation);
    let (largest, square) = standardised((0..150).map(inside), exact);
    println!("standard errors of a rectangle: largest |z| {largest:.2}, mean square {square:.2}");
    assert!(largest < 4.5 && (0.6..1.7).contains(&square), "{largest} {square}");
}

#[test]
fn any_slicing_gives_the_same_answer_and_the_same_seed_too() {
    let family = Family::new(&all_pairs(&[3.0, 5.0, 9.0, 4.0, 6.0, 8.0, 7.0]), 30.0, Sides::Both).unwrap();
    let effort = Effort { relative_error: 1e-4, most_points: 1024, seed: 11 };
    let at_once = family.sf(2.9, effort).unwrap();
    assert_eq!(at_once, family.sf(2.9, effort).unwrap());
    let mut sliced = family.refine(2.9, 11).unwrap();
    let mut slices = 0;
    while sliced.estimate().is_none_or(|answer| answer.points < at_once.points) {
        assert!(sliced.advance());
        // Another computation in between disturbs nothing.
        let mut copy = sliced.clone();
        copy.advance();
        slices += 1;
    }
    assert!(slices > 3, "{slices}");
    assert_eq!(sliced.estimate(), Some(at_once));
    let other = family.sf(2.9, Effort { seed: 12, ..effort }).unwrap();
    assert!(other.value != at_once.value && agree(other, at_once.value, at_once.error));
}

#[test]
fn quantiles_are_smooth_in_their_probability() {
    let family = Family::new(&all_pairs(&[3.0, 5.0, 9.0, 4.0, 6.0]), 12.0, Sides::Both).unwrap();
    let fixed = Effort { relative_error: 0.0, most_points: 64, seed: 2 };
    let c: Vec<f64> =
        (0..9).map(|i| family.upper_quantile(0.05 + 1e-4 * f64::from(i), fixed).unwrap().value).collect();
    // Second differences are of the order of the step's square, far below the standard error of 1e-3.
    for three in c.windows(3) {
        assert!(three[0] > three[1], "{c:?}");
        assert!((three[0] - 2.0 * three[1] + three[2]).abs() < 1e-5, "{c:?}");
    }
}

/// Differences of four means of unequal sizes: 1 - 0 and 2 - 1 both below a negative limit leave 2 - 0 below its own, as its
/// variance is less than the sum of theirs. The planes of the three have one direction in common.
#[test]
fn a_row_that_others_imply_changes_nothing_below_a_negative_limit() {
    let n = [3.0, 8.0, 5.0, 4.0];
    let rows = [[-1.0, 1.0, 0.0, 0.0], [0.0, -1.0, 1.0, 0.0], [-1.0, 0.0, 0.0, 1.0], [-1.0, 0.0, 1.0, 0.0]];
    let covariance = |a: &[f64; 4], b: &[f64; 4]| (0..4).map(|i| a[i] * b[i] / n[i]).sum::<f64>();
    let correlation = |rows: &[[f64; 4]]| -> Vec<Vec<f64>> {
        let one = |a, b| covariance(a, b) / (covariance(a, a) * covariance(b, b)).sqrt();
        rows.iter().map(|a| rows.iter().map(|b| if a == b { 1.0 } else { one(a, b) }).collect()).collect()
    };
    for df in [2.0, 16.0, f64::INFINITY] {
        for c in [-4.0, -1.5, -0.3, -0.01] {
            let [without, with] = [&rows[..3], &rows[..]].map(|rows| {
                let below = multivariate_t::cdf(c, &correlation(rows), df, Sides::Greater, Effort::default());
                below.unwrap().value
            });
            assert!(with > 0.0 && (with / without - 1.0).abs() < 1e-8, "{df} {c}: {with} {without}");
        }
    }
}
