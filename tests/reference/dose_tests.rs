//! Tests that use the doses' order or scores: scales tested together, Williams's test, contrasts of Williams's type, trends of
//! shares, the fixed sequence. Sources: the invented dose set, worked independently for this project to the digits written;
//! Williams (1971), worked example, FROM MEMORY; `data/trend/proportions.json`, `scales.json` and `steps.json` (script and second
//! opinions beside them).

use crate::cases::{cases, number, relative_error, rounds_to};
use crate::comparisons::{Layout, layout, printed};
use levelwise::methods::multiplicity::Sides;
use levelwise::methods::slices::InSlices;
use levelwise::methods::trend::{
    Direction, NoScaleTest, SCALES, Scale, ScaleRequest, ScaleTests, cochran_armitage, lowest_dose,
    lowest_levels, scale_tests, williams, williams_contrasts, williams_type,
};
use levelwise::numerics::distributions::student_t;
use levelwise::study::{Estimates, GroupSummary, Summary, Variances};
use proptest::prelude::*;
use serde_json::Value;

const DOSES: [f64; 4] = [0.0, 10.0, 30.0, 100.0];

fn dose_set(variances: Variances) -> Layout {
    let groups = [
        vec![12.0, 15.0, 14.0, 11.0, 13.0, 13.0],
        vec![14.0, 16.0, 15.0, 13.0, 17.0],
        vec![18.0, 17.0, 15.0, 19.0, 16.0],
        vec![19.0, 21.0, 18.0, 22.0],
    ];
    layout(&groups, variances)
}

fn estimates(groups: &[(usize, f64, f64)], variances: Variances) -> Estimates {
    let labels: Vec<String> = (0..groups.len()).map(|i| format!("L{i}")).collect();
    let group =
        |(n, mean, sd): &(usize, f64, f64)| GroupSummary { n: *n, mean: *mean, variance: Some(sd * sd) };
    let summary = Summary { origin: 0.0, groups: groups.iter().map(group).collect() };
    Estimates::one_way(&labels, &summary, variances).unwrap()
}

fn scales(estimates: &Estimates, scores: &[f64], sides: Sides) -> Result<ScaleTests, NoScaleTest> {
    scale_tests(&ScaleRequest { estimates, scores, scales: &SCALES, sides, alpha: 0.05 })
}

#[test]
fn three_scales_of_the_dose_set_give_the_values_computed_for_it() {
    let tests = scales(&dose_set(Variances::Equal).estimates, &DOSES, Sides::Both).unwrap();
    let of = |value: fn(&levelwise::methods::trend::ScaleRow) -> f64| -> Vec<f64> {
        tests.rows.iter().map(value).collect()
    };
    // In exact rationals the first two squares are 30976/675 and 620498/12275.
    assert!(relative_error(tests.rows[0].t, (30976.0_f64 / 675.0).sqrt()) < 1e-14);
    assert!(relative_error(tests.rows[1].t, (620_498.0_f64 / 12275.0).sqrt()) < 1e-14);
    rounds_to(tests.rows[2].t, "7.107742");
    printed(&of(|row| row.p_adjusted), &["7.3242e-6", "4.0712e-6", "4.0859e-6"], "adjusted p");
    rounds_to(tests.rows[0].critical, "2.30018");
    rounds_to(tests.zero_on_log_scale.unwrap(), "1.753279");
    assert_eq!((tests.strongest, tests.distinct), (1, 3));
    rounds_to(tests.rows[0].slope, "0.0651852");
}

#[test]
fn critical_values_of_three_scales_agree_with_an_integral_over_the_sphere() {
    for case in cases("trend/scales") {
        let (c, alpha) = (number(&case["c"]), number(&case["value"]));
        let estimates = &dose_set(Variances::Equal).estimates;
        let request = ScaleRequest { estimates, scores: &DOSES, scales: &SCALES, sides: Sides::Both, alpha };
        let tests = scale_tests(&request).unwrap();
        assert!(relative_error(tests.rows[0].critical, c) < 1e-6, "{case}: {}", tests.rows[0].critical);
    }
}

#[test]
fn scales_that_coincide_are_one_test() {
    let all = dose_set(Variances::Equal).estimates;
    // Equally spaced scores are their own ranks; scores of equal ratios have logarithms that are.
    for (scores, distinct) in
        [([0.0, 1.0, 2.0, 3.0], 2), ([1.0, 2.0, 4.0, 8.0], 2), ([1.0, 2.0, 3.0, 5.0], 3)]
    {
        assert_eq!(scales(&all, &scores, Sides::Both).unwrap().distinct, distinct, "{scores:?}");
    }
    for variances in [Variances::Equal, Variances::Unequal] {
        let two = lowest_levels(&dose_set(variances).estimates, 2);
        for scores in [[0.0, 10.0], [3.0, 10.0]] {
            let tests = scales(&two, &scores, Sides::Greater).unwrap();
            let c = two.contrast(&[-1.0, 1.0]);
            assert_eq!((tests.distinct, tests.zero_on_log_scale), (1, None));
            for row in &tests.rows {
                assert!(relative_error(row.t, c.estimate / c.se) < 1e-14);
                assert_eq!(row.p_adjusted, row.p);
                assert!(relative_error(row.p, student_t::sf(c.estimate / c.se, c.df).unwrap()) < 1e-13);
                assert!(relative_error(row.critical, student_t::upper_quantile(0.05, c.df).unwrap()) < 1e-13);
            }
            assert_eq!(tests.rows[2].same_as, Some(Scale::Arithmetic));
        }
    }
}

#[test]
fn what_the_scales_cannot_be_tested_on_is_said() {
    let all = dose_set(Variances::Equal).estimates;
    let says = |scores: &[f64]| scales(&all, scores, Sides::Both).unwrap_err().to_string();
    let negative =
        "the score -1 is negative and has no logarithm; leave the log scale out, or shift the scores";
    assert_eq!(says(&[-1.0, 0.0, 1.0, 2.0]), negative);
    assert_eq!(says(&[0.0, 1.0, 1.0, 2.0]), "the scores must be strictly increasing, but 1 follows 1");
    assert_eq!(says(&[0.0, 1.0]), "2 scores were given for 4 levels; each level needs one");
    let two = [Scale::Arithmetic, Scale::Ordinal];
    let scores = [-1.0, 0.0, 1.0, 3.0];
    let request =
        ScaleRequest { estimates: &all, scores: &scores, scales: &two, sides: Sides::Both, alpha: 0.05 };
    assert_eq!(scale_tests(&request).unwrap().distinct, 2);
}

/// Means of 8 animals each, s² = 1.16. The example has 42 degrees of freedom (blocks took the others), not the 49 of one way.
fn williams_example() -> Estimates {
    let means = [10.4, 9.9, 10.0, 10.6, 11.4, 11.9, 11.7];
    let groups: Vec<_> = means.iter().map(|mean| (8, *mean, 1.16_f64.sqrt())).collect();
    let mut all = estimates(&groups, Variances::Equal);
    all.df = levelwise::study::DegreesOfFreedom::Common(42.0);
    all
}

#[test]
fn williamss_worked_example_comes_out() {
    let test = williams(&williams_example(), Direction::Rising, 0.05).unwrap();
    let amalgamated: Vec<f64> = test.steps.iter().map(|step| step.amalgamated).collect();
    assert!((amalgamated[4] - 11.8).abs() < 1e-14 && amalgamated[4] == amalgamated[5], "{amalgamated:?}");
    let t: Vec<f64> = test.steps[2..].iter().map(|step| step.t).collect();
    printed(&t, &["0.371", "1.857", "2.600", "2.600"], "t");
    assert_eq!(test.lowest_effective, Some(4));
    let rejected: Vec<bool> = test.steps.iter().map(|step| step.rejected).collect();
    assert_eq!(rejected, [false, false, false, true, true, true]);
    let unequal = estimates(&[(3, 0.0, 1.0), (3, 1.0, 2.0)], Variances::Unequal);
    let error = williams(&unequal, Direction::Rising, 0.05).unwrap_err().to_string();
    assert!(error.starts_with("Williams's test needs one error term for all levels"), "{error}");
}

#[test]
fn contrasts_of_williamss_type_give_the_values_computed_for_the_dose_set() {
    let all = dose_set(Variances::Equal).estimates;
    let joint = williams_type(&all, Direction::Rising, 0.05).unwrap().finish().unwrap();
    let of = |value: fn(&levelwise::methods::multiplicity::joint::JointRow) -> f64| -> Vec<f64> {
        joint.rows.iter().map(value).collect()
    };
    printed(&of(|row| row.t), &["6.858571", "6.400000", "5.369757"], "t");
    printed(&of(|row| row.p_adjusted), &["4.25e-6", "9.65e-6", "6.73e-5"], "p");
    rounds_to(joint.rows[0].critical, "2.05711");
}

#[test]
fn more_doses_than_three_agree_with_the_walk_followed_density_by_density() {
    for case in cases("trend/steps") {
        let n: Vec<usize> =
            case["n"].as_array().unwrap().iter().map(|n| n.as_u64().unwrap() as usize).collect();
        // Only the top dose departs, so far that its own t, or that of a larger set, is the c asked for.
        let mut groups: Vec<_> = n.iter().map(|n| (*n, 0.0, 1.0)).collect();
        let top = groups.len() - 1;
        let alone = (1.0 / n[0] as f64 + 1.0 / n[top] as f64).sqrt();
        groups[top].1 = number(&case["c"]) * alone;
        let all = estimates(&groups, Variances::Equal);
        let joint = williams_type(&all, Direction::Rising, 0.05).unwrap().finish().unwrap();
        let row = joint.rows[0];
        assert!(relative_error(row.t, number(&case["c"])) < 1e-13 && row.df == number(&case["df"]), "{case}");
        let error = (row.p_adjusted - number(&case["value"])).abs();
        // As stated of the joint test: a standard error of 1e-5, or a thousandth of a p-value that is clear of alpha.
        assert!(row.p_error <= (1e-3 * row.p_adjusted).max(1e-5), "{case}: {row:?}");
        assert!(error < 4.0 * row.p_error + 1e-10, "{case}: {row:?}");
    }
}

#[test]
fn trends_of_shares_agree_with_exact_rationals_and_every_table_gone_through() {
    let whole = |list: &Value| -> Vec<u32> {
        list.as_array().unwrap().iter().map(|n| n.as_u64().unwrap() as u32).collect()
    };
    let mut counted = 0;
    for case in cases("trend/proportions") {
        let scores: Vec<f64> = case["scores"].as_array().unwrap().iter().map(number).collect();
        let test = cochran_armitage(&whole(&case["r"]), &whole(&case["n"]), &scores).unwrap();
        let near = |computed: f64, field: &str, allowed: f64| {
            let (expected, what) = (number(&case[field]), format!("{case}: {field} {computed}"));
            assert!((computed - expected).abs() <= allowed * expected.abs().max(1e-3), "{what}");
        };
        near(test.z, "z", 1e-13);
        near(test.slope, "slope", 1e-13);
        near(test.chi_squared, "chi_squared", 1e-13);
        if let Some(left) = test.lack_of_fit {
            near(left.chi_squared, "left", 1e-12);
            near(left.p, "left_p", 1e-12);
        }
        if !case["exact_greater"].is_null() {
            let exact = test.exact.unwrap();
            near(exact.greater, "exact_greater", 1e-13);
            near(exact.less, "exact_less", 1e-13);
            counted += 1;
        }
    }
    assert!(counted > 15);
}

#[test]
fn the_four_shares_give_the_digits_computed_for_them_and_eight_levels_of_fifty_are_counted() {
    let test = cochran_armitage(&[3, 5, 9, 14], &[50; 4], &[0.0, 1.0, 2.0, 4.0]).unwrap();
    rounds_to(test.z, "3.269580");
    rounds_to(test.chi_squared, "10.803588");
    rounds_to(test.lack_of_fit.unwrap().chi_squared, "0.113435");
    let exact = test.exact.unwrap();
    assert!(
        exact.greater / test.normal.greater > 0.8 && exact.greater / test.normal.greater < 2.0,
        "{test:?}"
    );
    let scores: Vec<f64> = (0..8).map(f64::from).collect();
    let many = cochran_armitage(&[10, 12, 9, 14, 15, 20, 17, 22], &[50; 8], &scores).unwrap();
    assert!(relative_error(many.exact.unwrap().greater, many.normal.greater) < 0.2, "{many:?}");
    let larger =
        cochran_armitage(&[400; 8], &[1000; 8], &[0.0, 1.0, 3.3, 7.1, 8.0, 9.7, 11.1, 50.0]).unwrap();
    assert_eq!(larger.exact, None);
}

#[test]
fn shares_that_show_no_trend_are_refused_in_words() {
    let says = |r: &[u32], n: &[u32], x: &[f64]| cochran_armitage(r, n, x).unwrap_err().to_string();
    let x = [0.0, 1.0];
    assert_eq!(says(&[0, 0], &[5, 5], &x), "nobody responds at any level, so there is no trend to see");
    assert_eq!(says(&[5, 5], &[5, 5], &x), "everybody responds at every level, so there is no trend to see");
    assert_eq!(says(&[6, 1], &[5, 5], &x), "level 1 has 6 responders of 5, which is more than all");
    assert_eq!(says(&[0, 1], &[0, 5], &x), "level 1 has no observation; leave it out");
    assert_eq!(
        says(&[1, 1], &[5, 5], &[1.0, 1.0]),
        "the scores must be strictly increasing, but 1 follows 1"
    );
}

#[test]
fn the_sequence_from_the_top_dose_stops_at_the_first_failure() {
    let sequence = lowest_dose(&[0.001, 0.051, 0.05, 0.01], 0.05).unwrap();
    let adjusted: Vec<f64> = sequence.steps.iter().map(|step| step.p_adjusted).collect();
    assert_eq!((adjusted, sequence.lowest), (vec![0.051, 0.051, 0.05, 0.01], Some(2)));
    assert_eq!(lowest_dose(&[0.001, 0.06], 0.05).unwrap().lowest, None);
    let says = |p: &[f64], alpha| lowest_dose(p, alpha).unwrap_err().to_string();
    assert_eq!(says(&[], 0.05), "there is no dose to test");
    assert_eq!(says(&[0.1, f64::NAN], 0.05), "the p-value of dose 2 is NaN, but must be from 0 to 1");
    assert_eq!(says(&[0.1], 1.0), "alpha is 1, but must be greater than 0 and less than 1");
}

fn some_levels() -> impl Strategy<Value = (Vec<(usize, f64, f64)>, Vec<f64>)> {
    (2..6_usize).prop_flat_map(|k| {
        let groups = proptest::collection::vec((3..15_usize, -2.0..2.0_f64, 0.3..2.0_f64), k);
        let steps = proptest::collection::vec(0.2..5.0_f64, k);
        let climb = |steps: Vec<f64>| {
            steps
                .iter()
                .scan(-0.1, |x, s| {
                    *x += s;
                    Some(*x)
                })
                .collect()
        };
        (groups, steps.prop_map(climb))
    })
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]
    #[test]
    fn changing_all_signs_changes_the_direction_alone((groups, scores) in some_levels()) {
        let other: Vec<_> = groups.iter().map(|(n, mean, sd)| (*n, -mean, *sd)).collect();
        let (one, other) = (estimates(&groups, Variances::Equal), estimates(&other, Variances::Equal));
        let (up, down) = (williams(&one, Direction::Rising, 0.1), williams(&other, Direction::Falling, 0.1));
        if let (Ok(up), Ok(down)) = (up, down) {
            for (up, down) in up.steps.iter().zip(&down.steps) {
                prop_assert_eq!((up.t, up.p_adjusted, up.rejected), (down.t, down.p_adjusted, down.rejected));
            }
        }
        let (one, other) = (scales(&one, &scores, Sides::Both).unwrap(), scales(&other, &scores, Sides::Both).unwrap());
        for (one, other) in one.rows.iter().zip(&other.rows) {
            prop_assert_eq!((one.t, one.p_adjusted, one.slope), (-other.t, other.p_adjusted, -other.slope));
        }
    }

    #[test]
    fn stretching_the_scores_changes_no_scale_and_no_share_and_shifting_neither_rank_nor_arithmetic(
        (groups, scores) in some_levels(), stretch in 0.01..50.0_f64, shift in 0.0..30.0_f64
    ) {
        for variances in [Variances::Equal, Variances::Unequal] {
            let all = estimates(&groups, variances);
            let one = scales(&all, &scores, Sides::Greater).unwrap();
            let stretched: Vec<f64> = scores.iter().map(|x| x * stretch).collect();
            let other = scales(&all, &stretched, Sides::Greater).unwrap();
            for (one, other) in one.rows.iter().zip(&other.rows) {
                prop_assert!((one.t - other.t).abs() < 1e-9 * (1.0 + one.t.abs()));
                prop_assert!((one.p_adjusted - other.p_adjusted).abs() < 1e-8);
                prop_assert!(one.p_adjusted >= one.p);
            }
            let shifted: Vec<f64> = scores.iter().map(|x| x + shift).collect();
            let moved = scales(&all, &shifted, Sides::Greater).unwrap();
            for place in 0..2 {
                prop_assert!((one.rows[place].t - moved.rows[place].t).abs() < 1e-8);
            }
        }
        let n: Vec<u32> = groups.iter().map(|group| group.0 as u32).collect();
        let r: Vec<u32> = n.iter().enumerate().map(|(i, n)| (n * (i as u32 + 1)) / 7).collect();
        let moved: Vec<f64> = scores.iter().map(|x| x * stretch + shift).collect();
        if let (Ok(one), Ok(other)) = (cochran_armitage(&r, &n, &scores), cochran_armitage(&r, &n, &moved)) {
            prop_assert!((one.z - other.z).abs() < 1e-9);
            // Backwards: the sign alone.
            let back = |list: &[u32]| list.iter().rev().copied().collect::<Vec<_>>();
            let negated: Vec<f64> = scores.iter().rev().map(|x| -x).collect();
            let back = cochran_armitage(&back(&r), &back(&n), &negated).unwrap();
            prop_assert!((one.z + back.z).abs() < 1e-9);
            if let (Some(one), Some(back)) = (one.exact, back.exact) {
                prop_assert!(relative_error(one.greater, back.less) < 1e-10 && relative_error(one.both, back.both) < 1e-10);
            }
        }
    }

    #[test]
    fn williams_with_two_levels_is_the_t_test((groups, _) in some_levels()) {
        let two = estimates(&groups[..2], Variances::Equal);
        let c = two.contrast(&[-1.0, 1.0]);
        let step = williams(&two, Direction::Rising, 0.05).unwrap().steps[0];
        prop_assert!((step.t - c.estimate / c.se).abs() < 1e-13 * (1.0 + step.t.abs()));
        let p = student_t::sf(step.t, c.df).unwrap();
        prop_assert!(relative_error(step.p, p) < 1e-11);
        let joint = williams_type(&two, Direction::Rising, 0.05).unwrap().finish().unwrap();
        prop_assert!(relative_error(joint.rows[0].p_adjusted, p) < 1e-11);
    }

    #[test]
    fn contrasts_of_williamss_type_sum_to_zero(n in proptest::collection::vec(1..99_usize, 0..9)) {
        for row in williams_contrasts(&n) {
            prop_assert!(row.iter().sum::<f64>().abs() < 1e-14);
        }
    }

    #[test]
    fn no_shares_make_it_panic_or_answer_with_what_is_no_number(
        levels in proptest::collection::vec((0..9_u32, 0..9_u32, any::<f64>()), 0..6)
    ) {
        let mut scores: Vec<f64> = levels.iter().map(|level| level.2).collect();
        scores.sort_by(f64::total_cmp);
        let (r, n): (Vec<u32>, Vec<u32>) = levels.iter().map(|level| (level.0, level.1)).unzip();
        if let Ok(test) = cochran_armitage(&r, &n, &scores) {
            prop_assert!(test.z.is_finite() && (0.0..=1.0).contains(&test.p(Sides::Both)), "{:?}", test);
        }
    }
}
