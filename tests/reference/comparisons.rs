//! Whole families of comparisons. Sources: `data/values/datasets.json` (twelve small data sets worked in exact
//! rationals and ball arithmetic, 15 digits; "diff" there is the earlier level less the later one, here the other
//! way round); the etch-rate data of Montgomery, Design and Analysis of Experiments, table 3.1, and the blood counts
//! of Dunnett (1955), both worked independently for this project by quadrature to the digits written here; Dunnett's
//! tables (1955, 1964) to their three decimals; NIST/SEMATECH e-Handbook 7.4.7, `data/nist-handbook`.

use crate::cases::{cases, number, relative_error};
use levelwise::methods::contrasts::{Contrast, Set, ready_set};
use levelwise::methods::multiplicity::PValueMethod::*;
use levelwise::methods::multiplicity::{
    Adjust, Basis, Bounds, CannotCompare, Claim, ComparisonRow, Comparisons, Disagreement, Family,
    IntervalKind, Request, Setting, Sides, compare, explain,
};
use levelwise::study::{Estimates, GroupSummary, Sample, Summary, Variances};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use serde_json::Value;

/// Distribution values here are good to about 1e-10; the data sets state 15 digits.
const TOLERANCE: f64 = 2e-9;

pub struct Layout {
    pub summary: Summary,
    pub estimates: Estimates,
}

pub fn layout(groups: &[Vec<f64>], variances: Variances) -> Layout {
    let labels: Vec<String> = (0..groups.len()).map(|i| format!("L{i}")).collect();
    // Offsets from a nearby number, as the table reader hands them on.
    let origin = groups[0][0].floor();
    let offsets = groups.iter().map(|group| group.iter().map(|y| y - origin).collect()).collect();
    let summary = Sample { origin, groups: offsets }.summary();
    let estimates = Estimates::one_way(&labels, &summary, variances).unwrap();
    Layout { summary, estimates }
}

pub fn groups_of(case: &Value) -> Vec<Vec<f64>> {
    let groups = case["groups"].as_array().unwrap();
    groups.iter().map(|group| group["data"].as_array().unwrap().iter().map(number).collect()).collect()
}

/// All defaults: both sides, alpha 0.05, 95 % confidence.
fn compared(layout: &Layout, set: Set, adjust: Adjust) -> Comparisons {
    sided(layout, set, adjust, Sides::Both, 0.05)
}

fn sided(layout: &Layout, set: Set, adjust: Adjust, sides: Sides, alpha: f64) -> Comparisons {
    let contrasts = ready_set(set, &layout.estimates.labels);
    by(layout, &contrasts, Family::Set(set), adjust, sides, alpha)
}

pub fn by(
    layout: &Layout,
    contrasts: &[Contrast],
    family: Family,
    adjust: Adjust,
    sides: Sides,
    alpha: f64,
) -> Comparisons {
    let request = Request::of_means(&layout.estimates, contrasts, family, adjust);
    compare(&Request { summary: Some(&layout.summary), sides, alpha, confidence: 1.0 - alpha, ..request })
        .unwrap()
}

fn excludes_zero(row: &ComparisonRow) -> bool {
    let interval = row.interval.unwrap();
    interval.lower > 0.0 || interval.upper < 0.0
}

fn suits(adjust: Adjust, set: Set, variances: Variances, sides: Sides) -> bool {
    let (family, basis, claim) = (Family::Set(set), Basis::Means, Claim::Difference);
    adjust.unsuitable(&Setting { family, basis, variances, sides, claim }).is_none() && !adjust.ordered()
}

pub fn close(computed: f64, expected: f64, tolerance: f64, what: &str) {
    let error = relative_error(computed, expected);
    assert!(error <= tolerance, "{what}: {computed} where {expected} is expected, relative error {error:e}");
}

fn column(comparisons: &Comparisons) -> Vec<f64> {
    comparisons.rows.iter().map(|row| row.p_adjusted).collect()
}

/// Values printed to some significant digits: half a unit of the last one.
pub fn printed(computed: &[f64], expected: &[&str], what: &str) {
    assert_eq!(computed.len(), expected.len(), "{what}");
    for (computed, text) in computed.iter().zip(expected) {
        let (mantissa, exponent) = text.split_once('e').unwrap_or((text, "0"));
        let decimals = mantissa.split_once('.').map_or(0, |(_, decimals)| decimals.len()) as i32;
        let unit = libm::pow(10.0, f64::from(exponent.parse::<i32>().unwrap() - decimals));
        let expected: f64 = text.parse().unwrap();
        assert!((computed - expected).abs() <= 0.505 * unit, "{what}: {computed} where {text} is expected");
    }
}

fn assert_bounds(bounds: Bounds, expected: &Value, what: &str) {
    // The file's difference has the opposite sign.
    let (lower, upper) = (-number(&expected["ci_upper"]), -number(&expected["ci_lower"]));
    let width = upper - lower;
    assert!((bounds.lower - lower).abs() < TOLERANCE * width, "{what}: {bounds:?}, expected {lower} {upper}");
    assert!((bounds.upper - upper).abs() < TOLERANCE * width, "{what}: {bounds:?}, expected {lower} {upper}");
}

#[test]
fn pooled_t_and_its_adjustments_agree_with_the_twelve_data_sets() {
    for case in cases("datasets") {
        let layout = layout(&groups_of(&case), Variances::Equal);
        let plain = compared(&layout, Set::AllPairs, Adjust::PValues(None));
        let bonferroni = compared(&layout, Set::AllPairs, Adjust::PValues(Bonferroni));
        let names = [("holm", Holm), ("sidak", Sidak), ("hochberg", Hochberg), ("hommel", Hommel)];
        let others =
            names.map(|(name, method)| (name, compared(&layout, Set::AllPairs, Adjust::PValues(method))));
        for (i, pair) in case["pairs"].as_array().unwrap().iter().enumerate() {
            let (expected, row) = (&pair["pooled_t"], &plain.rows[i]);
            let what = format!("{} {}", case["name"], row.name);
            close(row.estimate, -number(&pair["diff"]), 1e-9, &what);
            close(row.se.unwrap(), number(&expected["se"]), 1e-12, &what);
            close(row.t, -number(&expected["t"]), 1e-9, &what);
            close(row.df, number(&expected["df"]), 1e-14, &what);
            close(row.p, number(&expected["p"]), TOLERANCE, &what);
            assert_bounds(row.interval.unwrap(), expected, &what);
            let simultaneous = serde_json::json!({
                "ci_lower": expected["bonferroni_ci_lower"], "ci_upper": expected["bonferroni_ci_upper"] });
            assert_bounds(bonferroni.rows[i].interval.unwrap(), &simultaneous, &what);
            for (name, other) in &others {
                close(other.rows[i].p_adjusted, number(&expected["adjusted_p"][*name]), TOLERANCE, &what);
            }
        }
    }
}

#[test]
fn tukey_kramer_games_howell_and_scheffe_agree_with_the_twelve_data_sets() {
    for case in cases("datasets") {
        let groups = groups_of(&case);
        let equal = layout(&groups, Variances::Equal);
        let unequal = layout(&groups, Variances::Unequal);
        let tukey = compared(&equal, Set::AllPairs, Adjust::Tukey);
        let scheffe = compared(&equal, Set::AllPairs, Adjust::Scheffe);
        let games_howell = compared(&unequal, Set::AllPairs, Adjust::GamesHowell);
        close(tukey.critical.unwrap(), number(&case["tukey_critical_q"]), TOLERANCE, "critical q");
        for (i, pair) in case["pairs"].as_array().unwrap().iter().enumerate() {
            let what = format!("{} {}", case["name"], tukey.rows[i].name);
            for (result, key) in [(&tukey, "tukey_kramer"), (&games_howell, "games_howell")] {
                let (row, expected) = (&result.rows[i], &pair[key]);
                assert_eq!(row.statistic_name, "q");
                close(row.statistic, number(&expected["q"]), 1e-9, &what);
                close(row.df, number(&expected["df"]), 1e-9, &what);
                close(row.p_adjusted, number(&expected["p"]), TOLERANCE, &what);
                assert_bounds(row.interval.unwrap(), expected, &what);
            }
            let (row, expected) = (&scheffe.rows[i], &pair["scheffe"]);
            let levels = groups.len() as f64;
            close(row.t * row.t / (levels - 1.0), number(&expected["F"]), 1e-9, &what);
            close(row.p_adjusted, number(&expected["p"]), TOLERANCE, &what);
            assert_bounds(row.interval.unwrap(), expected, &what);
        }
    }
}

#[test]
fn dunnett_agrees_with_the_twelve_data_sets() {
    for case in cases("datasets") {
        let layout = layout(&groups_of(&case), Variances::Equal);
        let both = compared(&layout, Set::AgainstControl(0), Adjust::Dunnett);
        let greater = sided(&layout, Set::AgainstControl(0), Adjust::Dunnett, Sides::Greater, 0.05);
        close(both.critical.unwrap(), number(&case["dunnett"]["critical_d"]), TOLERANCE, "critical d");
        for (i, expected) in case["dunnett"]["comparisons"].as_array().unwrap().iter().enumerate() {
            let (row, what) = (&both.rows[i], format!("{} {}", case["name"], both.rows[i].name));
            close(row.estimate, number(&expected["diff"]), 1e-9, &what);
            close(row.t, number(&expected["t"]), 1e-9, &what);
            close(row.p_adjusted, number(&expected["p"]), TOLERANCE, &what);
            close(greater.rows[i].p_adjusted, number(&expected["p_greater"]), TOLERANCE, &what);
            close(row.interval.unwrap().lower, number(&expected["ci_lower"]), 1e-7, &what);
            close(row.interval.unwrap().upper, number(&expected["ci_upper"]), 1e-7, &what);
            assert_eq!(greater.rows[i].interval.unwrap().upper, f64::INFINITY);
        }
    }
}

fn etch() -> Vec<Vec<f64>> {
    [
        [575, 542, 530, 539, 570],
        [565, 593, 590, 579, 610],
        [600, 651, 610, 637, 629],
        [725, 700, 715, 685, 710],
    ]
    .map(|group| group.map(f64::from).to_vec())
    .to_vec()
}

/// Control, A, B.
fn blood() -> Vec<Vec<f64>> {
    vec![
        vec![7.40, 8.50, 7.20, 8.24, 9.84, 8.32],
        vec![9.76, 8.80, 7.68, 9.36],
        vec![12.80, 9.68, 12.16, 9.20, 10.55],
    ]
}

#[test]
fn the_etch_rates_give_the_values_computed_for_them() {
    let layout_equal = layout(&etch(), Variances::Equal);
    let tukey = compared(&layout_equal, Set::AllPairs, Adjust::Tukey);
    // The handbook's order is 180-160, 200-160, 200-180, 220-160, 220-180, 220-200; ours groups by the earlier level.
    let order = [0, 1, 3, 2, 4, 5];
    let ordered = |values: Vec<f64>| order.iter().map(|i| values[*i]).collect::<Vec<f64>>();
    let t = ordered(tukey.rows.iter().map(|row| row.t).collect());
    printed(&t, &["3.13329", "6.42238", "3.28909", "13.48526", "10.35197", "7.06288"], "t");
    printed(
        &ordered(column(&tukey)),
        &[".0294279", "4.5486e-5", ".0215995", "2.0908e-9", "9.4241e-8", "1.45978e-5"],
        "Tukey",
    );
    let scheffe = ordered(column(&compared(&layout_equal, Set::AllPairs, Adjust::Scheffe)));
    printed(&scheffe[..3], &[".048577", "1.07746e-4", ".0366587"], "Scheffe");
    let unequal = layout(&etch(), Variances::Unequal);
    printed(
        &ordered(column(&compared(&unequal, Set::AllPairs, Adjust::GamesHowell))),
        &[".059332", ".00184567", ".0517057", "6.2034e-6", "1.21611e-5", "6.46561e-4"],
        "Games-Howell",
    );
}

#[test]
fn the_blood_counts_give_the_values_computed_for_them() {
    let equal = layout(&blood(), Variances::Equal);
    let unequal = layout(&blood(), Variances::Unequal);
    let plain = compared(&equal, Set::AllPairs, Adjust::PValues(None));
    let t: Vec<f64> = plain.rows.iter().map(|row| row.t).collect();
    // The source prints 2.509557 for B - A, against its own d: 1.683466 / √(1/5 + 1/4) = 2.509563.
    printed(&t, &[".857032", "3.693752", "2.509563"], "t");
    printed(&column(&plain), &[".408217", ".00307063", ".0274298"], "raw p");
    let p = |layout, adjust| column(&compared(layout, Set::AllPairs, adjust));
    // The source has .00921189, three times its raw p-value as rounded.
    printed(&p(&equal, Adjust::PValues(Holm)), &[".408217", ".0092119", ".0548596"], "Holm");
    printed(&p(&equal, Adjust::Tukey), &[".676220", ".00798514", ".0659189"], "Tukey-Kramer");
    printed(&p(&equal, Adjust::Scheffe), &[".700157", ".0105001", ".0795571"], "Scheffe");
    printed(&p(&unequal, Adjust::GamesHowell), &[".546739", ".0349601", ".112635"], "Games-Howell");
    let df: Vec<f64> =
        compared(&unequal, Set::AllPairs, Adjust::GamesHowell).rows.iter().map(|row| row.df).collect();
    printed(&df, &["6.7759", "6.3330", "6.5333"], "Welch df");
    let tukey = compared(&equal, Set::AllPairs, Adjust::Tukey);
    printed(&[tukey.critical.unwrap() / 2_f64.sqrt()], &["2.667864"], "critical t");
}

#[test]
fn dunnetts_own_example_gives_his_critical_values_and_the_p_values_computed_for_it() {
    let layout = layout(&blood(), Variances::Equal);
    let both = compared(&layout, Set::AgainstControl(0), Adjust::Dunnett);
    printed(&[both.critical.unwrap()], &["2.513483"], "two-sided critical value");
    printed(&column(&both), &[".620102", ".00582536"], "two-sided");
    let greater = sided(&layout, Set::AgainstControl(0), Adjust::Dunnett, Sides::Greater, 0.05);
    printed(&[greater.critical.unwrap()], &["2.121078"], "one-sided critical value");
    printed(&column(&greater), &[".324978", ".00291388"], "one-sided");
}

#[test]
fn effect_sizes_of_the_blood_counts_agree_alone_and_at_tukeys_level() {
    let layout = layout(&blood(), Variances::Equal);
    let alone = compared(&layout, Set::AllPairs, Adjust::PValues(None));
    let effects = |result: &Comparisons| {
        result.rows.iter().map(|row| row.effects.standardised.clone().unwrap()).collect::<Vec<_>>()
    };
    let d: Vec<f64> = effects(&alone).iter().map(|effect| effect.d).collect();
    printed(&d, &[".553212", "2.236678", "1.683466"], "d");
    let g: Vec<f64> = effects(&alone).iter().map(|effect| effect.g).collect();
    printed(&g, &[".517774", "2.093401", "1.575626"], "g");
    let bounds = |result: &Comparisons| {
        let intervals = effects(result).into_iter().map(|effect| effect.d_interval.unwrap());
        intervals.flat_map(|bounds| [bounds.lower, bounds.upper]).collect::<Vec<f64>>()
    };
    let expected = ["-.741803", "1.826101", ".726776", "3.687414", ".181978", "3.129768"];
    printed(&bounds(&alone), &expected, "individual intervals");
    let tukey = compared(&layout, Set::AllPairs, Adjust::Tukey);
    let expected = ["-.975664", "2.060317", ".465940", "3.965787", "-.082871", "3.402178"];
    printed(&bounds(&tukey), &expected, "simultaneous intervals");
    printed(
        &[1.0 - tukey.alpha_per_comparison.unwrap()],
        &[".979509"],
        "the level that Tukey's critical value means",
    );
}

#[test]
fn a_contrast_of_the_blood_counts_agrees_with_one_error_term_and_with_separate_variances() {
    let expected = [
        (Variances::Equal, ["1.639", ".620803", "2.640130", "12", ".0215686"]),
        (Variances::Unequal, ["1.639", ".565321", "2.899239", "11.497748", ".0138787"]),
    ];
    for (variances, expected) in expected {
        let layout = layout(&blood(), variances);
        let contrast =
            Contrast::from_expression("treated", "(L1 + L2)/2 - L0", &layout.estimates.labels).unwrap();
        let result = by(&layout, &[contrast], Family::Contrasts, Adjust::PValues(Holm), Sides::Both, 0.05);
        let row = &result.rows[0];
        assert_eq!(row.words, "mean of L1 and L2 minus L0");
        printed(&[row.estimate, row.se.unwrap(), row.t, row.df, row.p_adjusted], &expected, "contrast");
    }
}

/// Dunnett (1955, 1964), tables of t for p treatments and df degrees of freedom at 5 %.
#[test]
fn dunnetts_tables_are_met_to_their_last_digit() {
    let table = [
        (Sides::Both, [(2, 5, "3.030"), (2, 12, "2.502"), (3, 16, "2.592"), (4, 20, "2.651")]),
        (Sides::Greater, [(2, 5, "2.440"), (2, 12, "2.108"), (3, 16, "2.227"), (4, 20, "2.304")]),
    ];
    for (sides, rows) in table {
        for (treatments, df, expected) in rows {
            // Any means and variance do; what counts are equal sizes and the df, which are put in by hand.
            let groups: Vec<Vec<f64>> = (0..=treatments).map(|i| vec![i as f64, i as f64 + 1.0]).collect();
            let mut layout = layout(&groups, Variances::Equal);
            layout.estimates.df = levelwise::study::DegreesOfFreedom::Common(f64::from(df));
            let result = sided(&layout, Set::AgainstControl(0), Adjust::Dunnett, sides, 0.05);
            printed(&[result.critical.unwrap()], &[expected], "Dunnett's table");
        }
    }
}

pub fn nist() -> Value {
    let path = concat!(
        env!("CARGO_MANIFEST_DIR"),
        "/tests/reference/data/nist-handbook/multiple-comparisons-7.4.7.json"
    );
    serde_json::from_str(&std::fs::read_to_string(path).unwrap()).unwrap()
}

fn handbook_value(file: &Value, section: usize, id: &str) -> String {
    let values = file["sections"][section]["values"].as_array().unwrap();
    values.iter().find(|value| value["id"] == id).unwrap()["text"].as_str().unwrap().to_string()
}

pub fn handbook_groups(file: &Value) -> Vec<Vec<f64>> {
    let groups = file["data"]["groups"].as_array().unwrap();
    groups.iter().map(|group| group["values"].as_array().unwrap().iter().map(number).collect()).collect()
}

#[test]
fn the_nist_handbook_example_has_its_tukey_and_scheffe_intervals() {
    let file = nist();
    let layout = layout(&handbook_groups(&file), Variances::Equal);
    let tukey = compared(&layout, Set::AllPairs, Adjust::Tukey);
    for row in &tukey.rows {
        let at = |c: f64| row.coefficients.iter().position(|known| *known == c).unwrap() + 1;
        let (later, earlier) = (at(1.0), at(-1.0));
        let same = ["2_minus_1", "3_minus_1"].contains(&format!("{later}_minus_{earlier}").as_str());
        let id = if same { format!("{later}_minus_{earlier}") } else { format!("{earlier}_minus_{later}") };
        let (lower, upper) = if same {
            (row.interval.unwrap().lower, row.interval.unwrap().upper)
        } else {
            (-row.interval.unwrap().upper, -row.interval.unwrap().lower)
        };
        let text = |which: &str| handbook_value(&file, 0, &format!("{which}_{id}"));
        printed(&[lower, upper], &[&text("lower"), &text("upper")], &id);
        let without = [(4, 1), (3, 2)].contains(&(later, earlier));
        assert_eq!(row.rejected, !without, "{}: the handbook finds all but 1 - 4 and 2 - 3", row.name);
    }
    let contrast = |id: &str| -> Contrast {
        let c = file["contrasts"][id]["values"].as_array().unwrap().iter().map(number).collect();
        Contrast::new(id, c, &layout.estimates.labels).unwrap()
    };
    let contrasts = [contrast("C1"), contrast("C2")];
    let scheffe = by(&layout, &contrasts, Family::Contrasts, Adjust::Scheffe, Sides::Both, 0.05);
    let (one, two) = (&scheffe.rows[0], &scheffe.rows[1]);
    let computed = [
        one.estimate,
        two.estimate,
        scheffe.critical.unwrap(),
        one.interval.unwrap().upper,
        two.interval.unwrap().lower,
    ];
    let ids = ["C1_estimate", "C2_estimate", "scheffe_multiplier", "C1_upper", "C2_lower"];
    for (computed, id) in computed.iter().zip(ids) {
        printed(&[*computed], &[&handbook_value(&file, 1, id)], id);
    }
    let bonferroni =
        by(&layout, &contrasts, Family::Contrasts, Adjust::PValues(Bonferroni), Sides::Both, 0.05);
    let expected = &file["sections"][2]["further_recomputed"];
    close(bonferroni.critical.unwrap(), number(&expected["t_0.9875_16"]), 1e-12, "t at 1 - 0.05/4");
    close(
        bonferroni.rows[0].interval.unwrap().lower,
        number(&expected["C1"][0]),
        1e-12,
        "Bonferroni interval of C1",
    );
    close(
        bonferroni.rows[1].interval.unwrap().upper,
        number(&expected["C2"][1]),
        1e-12,
        "Bonferroni interval of C2",
    );
}

#[test]
fn a_procedure_that_does_not_suit_is_refused_with_the_suitable_ones() {
    let layout = layout(&blood(), Variances::Unequal);
    let contrasts = ready_set(Set::AllPairs, &layout.estimates.labels);
    let family = Family::Set(Set::AllPairs);
    let error =
        compare(&Request::of_means(&layout.estimates, &contrasts, family, Adjust::Tukey)).unwrap_err();
    assert!(matches!(error, CannotCompare::Unsuitable { .. }));
    assert_eq!(
        error.to_string(),
        "Tukey's procedure needs one standard deviation for all levels, and the study says unequal variances. \
         Suitable here: Games-Howell, step-down max-t, max-t, Dunnett T3, Dunnett C, Tamhane T2, Holm, Holm-Sidak, \
         Hochberg, Hommel, Bonferroni, Sidak, fixed sequence, fallback, graph, Benjamini-Hochberg, \
         Benjamini-Yekutieli, none."
    );
}

#[test]
fn a_stepwise_procedure_shows_single_step_intervals_and_names_the_rows_that_disagree() {
    let layout = layout(&blood(), Variances::Equal);
    // B - A has raw p 0.0274: Holm's second step compares it with 0.025 at 5 %, and with 0.03 at 6 %.
    let result = sided(&layout, Set::AllPairs, Adjust::PValues(Holm), Sides::Both, 0.06);
    assert_eq!(result.interval_kind, IntervalKind::SimultaneousBy(Adjust::PValues(Bonferroni)));
    assert!(result.rows[2].rejected && !excludes_zero(&result.rows[2]));
    assert_eq!(result.disagreeing, [2]);
}

#[test]
fn an_overall_f_without_any_significant_pair_is_explained_by_the_contrast_that_carries_it() {
    let groups =
        [0.0, 0.0, 1.0, 1.0].map(|mean| [-1.0, -0.6, -0.1, 0.1, 0.6, 1.0].map(|x| x + mean).to_vec());
    let layout = layout(&groups, Variances::Equal);
    let result = compared(&layout, Set::AllPairs, Adjust::PValues(Bonferroni));
    let found = explain(&layout.estimates, &result).unwrap().expect("F and the pairs differ");
    assert_eq!(found.disagreement, Disagreement::OverallOnly);
    assert_eq!(found.carrying_words, "mean of L2 and L3 minus mean of L0 and L1");
    // F (k - 1) is the t² of that contrast (Scheffé 1959, section 3.5).
    let t = found.carrying_estimate.estimate / found.carrying_estimate.se;
    close(t * t, found.overall.f * found.overall.df1, 1e-12, "t² of the carrying contrast");
    assert!(
        explain(&layout.estimates, &compared(&layout, Set::AllPairs, Adjust::PValues(None)))
            .unwrap()
            .is_none()
    );
}

#[test]
fn two_groups_are_the_t_test_whatever_the_procedure() {
    for case in cases("datasets").iter().filter(|case| case["groups"].as_array().unwrap().len() == 2) {
        for (variances, adjusts) in [
            (Variances::Equal, vec![Adjust::Tukey, Adjust::Scheffe, Adjust::PValues(Holm)]),
            (Variances::Unequal, vec![Adjust::GamesHowell, Adjust::PValues(Hommel)]),
        ] {
            let layout = layout(&groups_of(case), variances);
            for adjust in adjusts {
                let row = &compared(&layout, Set::AllPairs, adjust).rows[0];
                close(row.p_adjusted, row.p, 1e-10, adjust.name());
            }
        }
        let layout = layout(&groups_of(case), Variances::Equal);
        for sides in [Sides::Both, Sides::Greater, Sides::Less] {
            let row = &sided(&layout, Set::AgainstControl(0), Adjust::Dunnett, sides, 0.05).rows[0];
            close(row.p_adjusted, row.p, 1e-10, "Dunnett");
        }
    }
}

/// Groups given by size, mean and SD: enough for everything that rests on means.
fn summaries() -> impl Strategy<Value = Vec<(usize, f64, f64)>> {
    proptest::collection::vec((2..12_usize, -2.0..2.0_f64, 0.3..2.0_f64), 3..6)
}

/// Numbers of every size, 0 and equal ones among them.
pub fn extreme() -> impl Strategy<Value = f64> {
    let sizes = (-1.0..1.0_f64, -300..300_i32).prop_map(|(x, e)| x * libm::pow(10.0, f64::from(e)));
    prop_oneof![Just(0.0), Just(1.0), -3.0..3.0_f64, sizes]
}

/// The layout, where the summaries give estimates at all.
pub fn try_summaries(groups: &[(usize, f64, f64)], variances: Variances) -> Option<Layout> {
    let labels: Vec<String> = (0..groups.len()).map(|i| format!("L{i}")).collect();
    let groups = groups.iter().map(|(n, mean, sd)| GroupSummary {
        n: *n,
        mean: *mean,
        variance: (*n > 1).then_some(sd * sd),
    });
    let summary = Summary { origin: 0.0, groups: groups.collect() };
    let estimates = Estimates::one_way(&labels, &summary, variances).ok()?;
    Some(Layout { summary, estimates })
}

fn from_summaries(groups: &[(usize, f64, f64)], variances: Variances) -> Layout {
    let labels: Vec<String> = (0..groups.len()).map(|i| format!("L{i}")).collect();
    let groups =
        groups.iter().map(|(n, mean, sd)| GroupSummary { n: *n, mean: *mean, variance: Some(sd * sd) });
    let summary = Summary { origin: 0.0, groups: groups.collect() };
    let estimates = Estimates::one_way(&labels, &summary, variances).unwrap();
    Layout { summary, estimates }
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(3), failure_persistence: Option::None, cases: 24, ..ProptestConfig::default() })]

    #[test]
    fn single_step_decisions_intervals_effects_and_both_readings_agree(groups in summaries(), alpha in 0.001..0.2_f64) {
        let single_step = [Adjust::Tukey, Adjust::GamesHowell, Adjust::Dunnett, Adjust::Scheffe,
            Adjust::PValues(None), Adjust::PValues(Bonferroni), Adjust::PValues(Sidak)];
        for variances in [Variances::Equal, Variances::Unequal] {
            let layout = from_summaries(&groups, variances);
            for set in [Set::AllPairs, Set::AgainstControl(1), Set::AgainstRest] {
                for sides in [Sides::Both, Sides::Greater, Sides::Less] {
                    for adjust in single_step {
                        if !suits(adjust, set, variances, sides) { continue }
                        let result = sided(&layout, set, adjust, sides, alpha);
                        for row in result.rows.iter().filter(|row| (row.p_adjusted - alpha).abs() > 1e-7) {
                            prop_assert!(row.p_adjusted >= row.p);
                            prop_assert_eq!(excludes_zero(row), row.rejected, "{} {:?}", adjust.name(), row);
                            prop_assert_eq!(row.p <= row.alpha.unwrap(), row.rejected, "{} {:?}", adjust.name(), row);
                            let effect = row.effects.standardised.as_ref().unwrap().d_interval.unwrap();
                            prop_assert_eq!(effect.lower > 0.0 || effect.upper < 0.0, row.rejected);
                            prop_assert!(row.effects.standardised.as_ref().unwrap().d * row.estimate >= 0.0);
                        }
                    }
                }
            }
        }
    }

    #[test]
    fn the_order_of_the_levels_and_the_scale_of_the_outcome_change_no_p_value(
        groups in summaries(), turn in 1..5_usize, shift in -1e3..1e3_f64, scale in 0.01..100.0_f64
    ) {
        let mut turned: Vec<_> = groups.iter().map(|(n, m, s)| (*n, m * scale + shift, s * scale)).collect();
        let k = groups.len();
        turned.rotate_left(turn % k);
        for (variances, adjust) in [(Variances::Equal, Adjust::Tukey), (Variances::Unequal, Adjust::GamesHowell)] {
            let one = compared(&from_summaries(&groups, variances), Set::AllPairs, adjust);
            let other = compared(&from_summaries(&turned, variances), Set::AllPairs, adjust);
            for row in &one.rows {
                let mut coefficients: Vec<f64> = row.coefficients.clone();
                coefficients.rotate_left(turn % k);
                let negative: Vec<f64> = coefficients.iter().map(|c| -c).collect();
                let same = other.rows.iter().find(|r| r.coefficients == coefficients || r.coefficients == negative);
                let same = same.expect("every pair is there");
                prop_assert!((same.p_adjusted - row.p_adjusted).abs() <= 1e-7 * row.p_adjusted);
            }
        }
    }

    #[test]
    fn no_numbers_make_it_panic_or_answer_with_what_is_no_number(
        groups in proptest::collection::vec((1..5_usize, extreme(), extreme()), 2..5), alpha in 1e-9..0.999_f64
    ) {
        let groups: Vec<_> = groups.into_iter().map(|(n, mean, sd)| (n, mean, sd.abs())).collect();
        for variances in [Variances::Equal, Variances::Unequal] {
            let Some(layout) = try_summaries(&groups, variances) else { continue };
            for adjust in levelwise::methods::multiplicity::ALL {
                for (set, sides) in [(Set::AllPairs, Sides::Both), (Set::AgainstControl(1), Sides::Less)] {
                    let contrasts = ready_set(set, &layout.estimates.labels);
                    let request = Request::of_means(&layout.estimates, &contrasts, Family::Set(set), adjust);
                    let result = compare(&Request { summary: Some(&layout.summary), sides, alpha, confidence: 1.0 - alpha, ..request });
                    for row in result.iter().flat_map(|result| &result.rows) {
                        let effect = row.effects.standardised.as_ref().map_or([0.0; 2], |effect| [effect.d, effect.g]);
                        let numbers = [row.estimate, row.se.unwrap(), row.df, row.t, row.statistic, row.p, row.p_adjusted,
                            row.critical.unwrap(), row.interval.unwrap().lower, row.interval.unwrap().upper, effect[0], effect[1]];
                        prop_assert!(!numbers.iter().any(|x| x.is_nan()), "{row:?}");
                        prop_assert!((row.p..=1.0).contains(&row.p_adjusted), "{row:?}");
                    }
                    if let Ok(result) = &result {
                        let _ = explain(&layout.estimates, result);
                    }
                }
            }
        }
    }

    #[test]
    fn procedures_stand_in_their_known_order(groups in summaries()) {
        let layout = from_summaries(&groups, Variances::Equal);
        let p = |set, adjust| column(&compared(&layout, set, adjust));
        let below = |one: Vec<f64>, other: Vec<f64>| one.iter().zip(&other).all(|(a, b)| *a <= b * (1.0 + 1e-9));
        // Šidák's inequality (1967) for Dunnett's correlations; the range of the means is one contrast among all.
        let control = Set::AgainstControl(0);
        prop_assert!(below(p(control, Adjust::Dunnett), p(control, Adjust::PValues(Sidak))));
        prop_assert!(below(p(Set::AllPairs, Adjust::Tukey), p(Set::AllPairs, Adjust::Scheffe)));
        // One side looks at half of the tail when the difference lies on it.
        let (both, greater) = (
            sided(&layout, control, Adjust::PValues(None), Sides::Both, 0.05),
            sided(&layout, control, Adjust::PValues(None), Sides::Greater, 0.05),
        );
        for (both, greater) in both.rows.iter().zip(&greater.rows) {
            let expected = if both.t > 0.0 { both.p / 2.0 } else { 1.0 - both.p / 2.0 };
            prop_assert!((greater.p - expected).abs() < 1e-14);
        }
    }
}
