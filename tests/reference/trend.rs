//! Orthogonal polynomial trends. Sources: `data/values/orthogonal_polynomials.json` (Gram-Schmidt in exact
//! rationals, 20 digits), `data/values/datasets.json` (15 digits), and the invented dose set of four groups worked
//! independently for this project to the digits written here. Common practice is marked so.

use crate::cases::{cases, number, relative_error};
use crate::comparisons::{Layout, extreme, groups_of, layout, try_summaries};
use levelwise::methods::departure::overall;
use levelwise::methods::trend::{
    NoTrend, PolynomialTrend, TrendRequest, Weights, coefficients, highest_degree, polynomial,
};
use levelwise::study::{Estimates, GroupSummary, Summary, Variances};
use proptest::prelude::*;
use serde_json::Value;

fn numbers(value: &Value) -> Vec<f64> {
    value.as_array().unwrap().iter().map(number).collect()
}

/// "-17/4" or "5".
fn rational(value: &Value) -> f64 {
    let text = value.as_str().unwrap();
    let (above, below) = text.split_once('/').unwrap_or((text, "1"));
    above.parse::<f64>().unwrap() / below.parse::<f64>().unwrap()
}

fn trend(
    layout: &Layout,
    scores: &[f64],
    degree: usize,
    weights: Weights,
) -> Result<PolynomialTrend, NoTrend> {
    polynomial(&TrendRequest {
        estimates: &layout.estimates,
        summary: Some(&layout.summary),
        scores,
        degree,
        weights,
        confidence: 0.95,
    })
}

#[test]
fn contrasts_agree_with_exact_rationals_to_thirteen_digits() {
    let all = cases("orthogonal_polynomials");
    for case in &all {
        let (scores, n) = (numbers(&case["levels"]), numbers(&case["n"]));
        let degree = case["degree"].as_u64().unwrap() as usize;
        let c = coefficients(&scores, &n, degree).unwrap().pop().unwrap();
        let size = c.iter().zip(&n).map(|(c, n)| c * c / n).sum::<f64>().sqrt();
        for ((c, n), (expected, value)) in c
            .iter()
            .zip(&n)
            .zip(numbers(&case["value"]).into_iter().zip(case["polynomial_values"].as_array().unwrap()))
        {
            assert!((c / size - expected).abs() < 2e-14, "{case}: {} {expected}", c / size);
            let monic = rational(value);
            assert!((c / n - monic).abs() <= 1e-13 * size, "{case}: {} {monic}", c / n);
        }
        // The smallest whole numbers in the same proportions, all of them exact doubles.
        let whole = numbers(&case["contrast_integers"]);
        let length = whole.iter().zip(&n).map(|(c, n)| c * c / n).sum::<f64>().sqrt();
        for (c, whole) in c.iter().zip(&whole) {
            assert!((c / size - whole / length).abs() < 2e-14, "{case}: {c} {whole}");
        }
    }
    assert!(all.len() > 50);
}

#[test]
fn weighted_and_unweighted_trends_agree_with_the_twelve_data_sets() {
    let close = |computed: f64, expected: &Value, scale: f64, what: &str| {
        let error = (computed - number(expected)).abs();
        assert!(error <= 1e-9 * scale.abs(), "{what}: {computed} where {expected} is expected");
    };
    for case in cases("datasets") {
        let layout = layout(&groups_of(&case), Variances::Equal);
        let scores = numbers(&case["scores"]);
        for (weights, key) in [(Weights::N, "weighted"), (Weights::Equal, "unweighted")] {
            let expected = case["trend"][key].as_array().unwrap();
            let result = trend(&layout, &scores, expected.len(), weights).unwrap();
            for (row, expected) in result.rows.iter().zip(expected) {
                let what = format!("{} {key} {}", case["name"], row.name);
                let exact: Vec<f64> =
                    expected["coefficients"].as_array().unwrap().iter().map(rational).collect();
                let largest = exact.iter().fold(0.0_f64, |most, c| most.max(c.abs()));
                assert!(
                    row.coefficients.iter().zip(&exact).all(|(c, e)| (c - e).abs() < 1e-12 * largest),
                    "{what}"
                );
                close(row.estimate, &expected["estimate"], row.se, &what);
                close(row.se, &expected["se"], row.se, &what);
                close(row.t, &expected["t"], row.t.abs().max(1.0), &what);
                close(row.df, &expected["df"], row.df, &what);
                close(row.p, &expected["p"], row.p, &what);
                close(row.ss, &expected["ss"], row.ss.max(row.ss / row.t.abs()), &what);
            }
        }
    }
}

const DOSES: [f64; 4] = [0.0, 10.0, 30.0, 100.0];

fn doses() -> Vec<Vec<f64>> {
    vec![
        vec![12.0, 15.0, 14.0, 11.0, 13.0, 13.0],
        vec![14.0, 16.0, 15.0, 13.0, 17.0],
        vec![18.0, 17.0, 15.0, 19.0, 16.0],
        vec![19.0, 21.0, 18.0, 22.0],
    ]
}

fn near(computed: f64, expected: f64) {
    // Half a unit of the sixth decimal, as the values are written.
    assert!((computed - expected).abs() <= 5.05e-7, "{computed} where {expected} is expected");
}

#[test]
fn the_dose_set_gives_the_values_computed_for_it() {
    let layout = layout(&doses(), Variances::Equal);
    let weighted = trend(&layout, &DOSES, 3, Weights::N).unwrap();
    let p1: Vec<f64> =
        weighted.rows[0].coefficients.iter().zip([6.0, 5.0, 5.0, 4.0]).map(|(c, n)| c / n).collect();
    assert!(p1.iter().zip([-30.0, -20.0, 0.0, 70.0]).all(|(p, e)| (p - e).abs() < 1e-12), "{p1:?}");
    let ss: Vec<f64> = weighted.rows.iter().map(|row| row.ss).collect();
    near(ss[0], 114.725926);
    near(ss[1], 12.279572);
    near(ss[2], 0.794502);
    near(ss.iter().sum(), 127.8);
    near(weighted.ss_between, 127.8);
    near(weighted.rows[0].t, 6.774243);
    near(weighted.rows[0].slope, 0.0651852);
    near(weighted.rows[1].t, -2.216265);
    near(weighted.rows[1].p, 0.0415145);
    near(weighted.rows[2].p, 0.580749);
    let unweighted = trend(&layout, &DOSES, 2, Weights::Equal).unwrap();
    near(unweighted.rows[0].ss, 106.604735);
    near(unweighted.rows[0].t, 6.530076);
    near(unweighted.rows[1].ss, 11.950078);
    let left = weighted.lack_of_fit[0];
    assert_eq!((left.degree, left.test.df1, left.test.df2), (1, 2.0, 16.0));
    near(left.test.f, 2.614815);
    near(left.test.p, 0.104093);
    assert_eq!(weighted.lack_of_fit.len(), 2, "a cubic through four means leaves nothing over");
}

/// Common practice: a straight line needs two levels, one bend three, two bends four.
#[test]
fn k_levels_give_at_most_k_minus_1_trends_and_a_cubic_needs_four_levels() {
    assert_eq!([2, 3, 4, 5, 6, 9].map(highest_degree), [1, 2, 3, 4, 4, 4]);
    let layout = layout(&doses()[..3], Variances::Equal);
    let error = trend(&layout, &DOSES[..3], 3, Weights::N).unwrap_err();
    assert_eq!(
        error.to_string(),
        "3 levels allow a polynomial of degree 2 at most: a curve with 3 parts needs 4 levels"
    );
    assert!(matches!(trend(&layout, &DOSES[..3], 0, Weights::N), Err(NoTrend::Degree { .. })));
}

#[test]
fn scores_that_do_not_rise_are_refused() {
    let layout = layout(&doses()[..3], Variances::Equal);
    for scores in [[0.0, 0.0, 1.0], [0.0, 2.0, 1.0], [0.0, f64::NAN, 1.0], [0.0, 1.0, f64::INFINITY]] {
        assert!(
            matches!(trend(&layout, &scores, 1, Weights::N), Err(NoTrend::NotIncreasing { .. })),
            "{scores:?}"
        );
    }
    assert!(matches!(trend(&layout, &[0.0, 1.0], 1, Weights::N), Err(NoTrend::ScoreCount { .. })));
}

/// Johansen's test of the constant model is Welch's test of equal means; the values are those of the data sets.
#[test]
fn what_a_constant_leaves_over_is_the_overall_test_pooled_and_welch() {
    for case in cases("datasets") {
        for (variances, key, df2) in
            [(Variances::Equal, "anova", "df_within"), (Variances::Unequal, "welch", "df2")]
        {
            let layout = layout(&groups_of(&case), variances);
            let test = overall(&layout.estimates).unwrap().unwrap();
            let what = format!("{} {key}", case["name"]);
            assert!(relative_error(test.f, number(&case[key]["F"])) < 1e-9, "{what}");
            assert!(relative_error(test.df2, number(&case[key][df2])) < 1e-9, "{what}");
            assert!(relative_error(test.p, number(&case[key]["p"])) < 1e-9, "{what}");
        }
    }
}

#[test]
fn separate_variances_give_satterthwaites_df_and_leave_the_estimates_alone() {
    let (equal, unequal) = (layout(&doses(), Variances::Equal), layout(&doses(), Variances::Unequal));
    let one = trend(&equal, &DOSES, 3, Weights::N).unwrap();
    let other = trend(&unequal, &DOSES, 3, Weights::N).unwrap();
    for (one, other) in one.rows.iter().zip(&other.rows) {
        assert_eq!((one.estimate, one.ss), (other.estimate, other.ss));
        let c = unequal.estimates.contrast(&other.coefficients);
        assert_eq!((other.se, other.df), (c.se, c.df));
        assert!(other.df < one.df);
    }
}

fn irregular() -> impl Strategy<Value = (Vec<(usize, f64, f64)>, Vec<f64>)> {
    (2..6_usize).prop_flat_map(|k| {
        let groups = proptest::collection::vec((2..15_usize, -3.0..3.0_f64, 0.2..2.0_f64), k);
        let steps = proptest::collection::vec(0.2..5.0_f64, k);
        (
            groups,
            steps.prop_map(|steps| {
                steps
                    .iter()
                    .scan(-3.0, |x, s| {
                        *x += s;
                        Some(*x)
                    })
                    .collect()
            }),
        )
    })
}

fn of(groups: &[(usize, f64, f64)], variances: Variances) -> Layout {
    let labels: Vec<String> = (0..groups.len()).map(|i| format!("L{i}")).collect();
    let groups =
        groups.iter().map(|(n, mean, sd)| GroupSummary { n: *n, mean: *mean, variance: Some(sd * sd) });
    let summary = Summary { origin: 0.0, groups: groups.collect() };
    let estimates = Estimates::one_way(&labels, &summary, variances).unwrap();
    Layout { summary, estimates }
}

proptest! {
    #[test]
    fn weighted_sums_of_squares_add_up_to_the_one_between_groups_for_any_sizes_and_spacing(
        (groups, scores) in irregular()
    ) {
        let layout = of(&groups, Variances::Equal);
        let degree = groups.len() - 1;
        let result = trend(&layout, &scores, degree, Weights::N).unwrap();
        let total: f64 = result.rows.iter().map(|row| row.ss).sum();
        prop_assert!((total - layout.summary.ss_between()).abs() < 1e-9 * (1.0 + total));
        // What a degree leaves over is what the higher degrees have.
        for left in &result.lack_of_fit {
            let higher: f64 = result.rows[left.degree..].iter().map(|row| row.ss).sum();
            let pooled = layout.summary.pooled().unwrap();
            let f = higher / left.test.df1 / pooled.variance;
            prop_assert!((f - left.test.f).abs() < 1e-8 * (1.0 + f));
        }
    }

    #[test]
    fn the_curve_of_the_highest_degree_goes_through_every_mean((groups, scores) in irregular()) {
        for weights in [Weights::N, Weights::Equal] {
            let layout = of(&groups, Variances::Unequal);
            let result = trend(&layout, &scores, groups.len() - 1, weights).unwrap();
            for (x, mean) in scores.iter().zip(&layout.estimates.means) {
                prop_assert!((result.at(*x, groups.len() - 1) - mean).abs() < 1e-9, "{} {}", result.at(*x, groups.len() - 1), mean);
            }
            // A straight line is the least-squares one, and straight between the scores too.
            let line = trend(&layout, &scores, 1, weights).unwrap();
            let half = (scores[0] + scores[1]) / 2.0;
            prop_assert!((line.at(half, 1) - (line.at(scores[0], 1) + line.at(scores[1], 1)) / 2.0).abs() < 1e-12);
            prop_assert!((line.at(half + 1.0, 1) - line.at(half, 1) - line.rows[0].slope).abs() < 1e-9);
        }
    }

    #[test]
    fn shifting_and_stretching_the_scores_changes_no_t(
        (groups, scores) in irregular(), shift in -100.0..100.0_f64, stretch in 0.01..50.0_f64
    ) {
        for weights in [Weights::N, Weights::Equal] {
            let layout = of(&groups, Variances::Unequal);
            let moved: Vec<f64> = scores.iter().map(|x| x * stretch + shift).collect();
            let one = trend(&layout, &scores, groups.len() - 1, weights).unwrap();
            let other = trend(&layout, &moved, groups.len() - 1, weights).unwrap();
            for (one, other) in one.rows.iter().zip(&other.rows) {
                prop_assert!((one.t - other.t).abs() < 1e-7 * (1.0 + one.t.abs()), "{} {}", one.t, other.t);
            }
        }
    }

    #[test]
    fn two_levels_have_one_trend_which_is_the_t_test((groups, _) in irregular()) {
        let layout = of(&groups[..2], Variances::Unequal);
        let result = trend(&layout, &[0.0, 1.0], 1, Weights::N).unwrap();
        let t = layout.estimates.contrast(&[-1.0, 1.0]);
        prop_assert!((result.rows[0].t - t.estimate / t.se).abs() < 1e-12 * (1.0 + result.rows[0].t.abs()));
        prop_assert!((result.rows[0].slope - t.estimate).abs() < 1e-12);
        prop_assert!(result.lack_of_fit.is_empty());
    }

    #[test]
    fn no_numbers_make_it_panic_or_answer_with_what_is_no_number(
        groups in proptest::collection::vec((1..5_usize, extreme(), extreme()), 2..6),
        mut scores in proptest::collection::vec(extreme(), 6), degree in 0..6_usize
    ) {
        scores.sort_by(f64::total_cmp);
        scores.truncate(groups.len());
        let groups: Vec<_> = groups.into_iter().map(|(n, mean, sd)| (n, mean, sd.abs())).collect();
        for variances in [Variances::Equal, Variances::Unequal] {
            let Some(layout) = try_summaries(&groups, variances) else { continue };
            for weights in [Weights::N, Weights::Equal] {
                let Ok(result) = trend(&layout, &scores, degree, weights) else { continue };
                for row in &result.rows {
                    let numbers = [row.estimate, row.se, row.df, row.t, row.p, row.interval.lower, row.interval.upper,
                        row.slope, row.slope_interval.lower, row.slope_interval.upper, row.ss, row.share.unwrap_or(0.0)];
                    prop_assert!(!numbers.iter().any(|x| x.is_nan()), "{row:?}");
                }
                for left in &result.lack_of_fit {
                    prop_assert!(left.test.f >= 0.0 && (0.0..=1.0).contains(&left.test.p), "{left:?}");
                }
                prop_assert!(!result.centre.is_nan(), "{result:?}");
            }
        }
    }
}
