//! The overall test as a cell: what it says, what it hands over, what it refuses.

use super::expect::{named, results, settled};
use super::given::{blood_counts, evaluated, shown, study, summarised};
use levelwise::study::{Observed, Variances};

const MEANS: &str = "kind = \"overall\"\nstudy = \"trial\"\n";
const RANKS: &str = "kind = \"overall\"\nstudy = \"trial\"\ntest = \"ranks\"\n";

#[test]
fn the_studys_variances_decide_and_both_tests_stand_side_by_side() {
    let welch = evaluated(MEANS, blood_counts(Variances::Unequal));
    assert_eq!(
        welch.answer.headline,
        "The means of count differ over the 3 levels of drug (Welch's F test, F(2, 7.21) = 5.00, p = 0.043)"
    );
    let pooled = evaluated(MEANS, blood_counts(Variances::Equal));
    assert_eq!(
        pooled.answer.headline,
        "The means of count differ over the 3 levels of drug (one-way F test, F(2, 12) = 7.14, p = 0.009)"
    );
    for outcome in [&welch, &pooled] {
        let text = shown(outcome);
        assert!(text.contains("Welch's F test, variances may differ (Welch 1951)"), "{text}");
        assert!(text.contains("One-way F test, one pooled variance"), "{text}");
        assert!(text.contains("decides, as the study says") && text.contains("for comparison"), "{text}");
    }
    assert!((welch.results["F"].as_f64().expect("F") - 5.002074).abs() < 1e-6);
    assert!((welch.results["equal_variances"]["F"].as_f64().expect("F") - 7.136936).abs() < 1e-6);
    assert!((pooled.results["eta_squared"]["estimate"].as_f64().expect("eta") - 0.543272).abs() < 1e-6);
    assert!((pooled.results["ms_within"].as_f64().expect("MS") - 1.380523).abs() < 1e-6);
}

#[test]
fn the_write_up_names_statistic_df_p_size_and_n() {
    let writeup = evaluated(MEANS, blood_counts(Variances::Equal)).answer.writeup.expect("a write-up");
    assert!(
        writeup.starts_with(
            "Mean count was compared over control (n = 6), A (n = 4) and B (n = 5) with the one-way F test (one pooled \
             variance) at 5\u{a0}%. The means differed, F(2, 12) = 7.14, p = 0.009, omega squared = 0.450"
        ),
        "{writeup}"
    );
}

#[test]
fn what_was_not_shown_is_never_called_equal() {
    let alike = study(&[("a", &[1.0, 2.0, 3.5]), ("b", &[1.5, 2.0, 3.0])], Variances::Unequal);
    for text in [MEANS, RANKS] {
        let outcome = evaluated(text, alike.clone());
        assert!(outcome.answer.headline.contains("was not shown"), "{}", outcome.answer.headline);
        let caution = &outcome.answer.cautions[0];
        assert!(caution.starts_with("Not shown to differ does not mean equal."), "{caution}");
        assert!(outcome.answer.writeup.expect("a write-up").contains("were not shown to differ"));
    }
}

#[test]
fn a_single_value_in_a_level_is_refused_with_a_way_out() {
    let single = study(&[("a", &[1.0, 2.0, 3.5]), ("b", &[1.5])], Variances::Unequal);
    let outcome = evaluated(MEANS, single.clone());
    let problem = &outcome.diagnostics[0];
    assert_eq!(
        problem.message,
        "Welch's F test of \"count\" cannot be given: level \"b\" has 1 observation; unequal variances need at least 2. \
         Add data, leave the level out of the study's levels, or set variances = \"equal\" in the study if one standard \
         deviation for all levels is credible."
    );
    let pooled = evaluated(MEANS, levelwise::study::Study { variances: Variances::Equal, ..single });
    assert!(pooled.diagnostics.is_empty());
    assert!(shown(&pooled).contains("cannot be given"), "{}", shown(&pooled));
}

#[test]
fn ranks_need_single_values_and_say_so_at_their_field() {
    let outcome = evaluated(RANKS, blood_counts(Variances::Unequal));
    assert_eq!(
        outcome.answer.headline,
        "The ranks of count differ over the 3 levels of drug (Kruskal-Wallis test, H(2) = 6.75, exact p = 0.025)"
    );
    assert_eq!(outcome.results["exact"], true);
    // Counted by itself with whole numbers: 15598 of the 630630 ways to deal the ranks out.
    assert!((outcome.results["p"].as_f64().expect("p") - 15_598.0 / 630_630.0).abs() < 1e-15);
    assert!(shown(&outcome).contains("The large-sample value from chi-squared would be 0.034."));
    assert!((outcome.results["epsilon_squared"]["estimate"].as_f64().expect("size") - 0.482143).abs() < 1e-6);
    let refused = evaluated(RANKS, summarised(blood_counts(Variances::Unequal)));
    assert_eq!(refused.diagnostics[0].field.as_deref(), Some("test"));
    assert!(refused.diagnostics[0].message.starts_with("Ranks need the single values"));
}

#[test]
fn summaries_give_the_same_answer_as_the_values() {
    for variances in [Variances::Equal, Variances::Unequal] {
        let raw = evaluated(MEANS, blood_counts(variances));
        let typed = evaluated(MEANS, summarised(blood_counts(variances)));
        assert_eq!(shown(&raw), shown(&typed));
        assert_eq!(raw.results, typed.results);
    }
}

#[test]
fn a_plan_waits_and_names_its_method() {
    let plan = levelwise::study::Study { observed: Observed::Plan, ..blood_counts(Variances::Unequal) };
    let outcome = evaluated(MEANS, plan);
    assert!(outcome.waiting);
    assert_eq!(
        outcome.answer.headline,
        "Planned: Welch's F test, which does not assume equal variances, over 3 levels at 5\u{a0}%"
    );
}

#[test]
fn rows_left_out_are_counted_under_the_groups() {
    let mut study = blood_counts(Variances::Unequal);
    study.account[0].missing = 1;
    study.account[1].excluded = 2;
    let text = shown(&evaluated(MEANS, study.clone()));
    let note = "Not analysed: 1 row with a missing value and 2 rows excluded by rule; the study's answer accounts for them.";
    assert!(text.contains(note), "{text}");
    assert!(!shown(&evaluated(MEANS, blood_counts(Variances::Unequal))).contains("Not analysed"));
}

#[test]
fn tests_that_decide_differently_are_named() {
    let cautions = |variances| {
        let study = study(
            &[
                ("control", &[7.4, 8.5, 7.2, 8.24]),
                ("A", &[9.76, 8.8, 7.68]),
                ("B", &[12.8, 9.68, 12.16, 9.2]),
            ],
            variances,
        );
        evaluated(MEANS, study).answer.cautions
    };
    for variances in [Variances::Equal, Variances::Unequal] {
        let found = cautions(variances);
        assert!(
            found.iter().any(|caution| caution.starts_with("The two F tests decide differently")),
            "{found:?}"
        );
    }
}

#[test]
fn pooling_over_unequal_spread_is_cautioned() {
    let spread = study(
        &[("a", &[1.0, 9.0, -7.0, 2.0, 4.0, -3.0]), ("b", &[1.5, 2.0, 3.0, 2.2, 2.4, 1.9, 2.1, 2.6])],
        Variances::Equal,
    );
    let cautions = evaluated(MEANS, spread).answer.cautions;
    assert!(cautions.iter().any(|caution| caution.contains("reject too often")), "{cautions:?}");
}

/// The blood counts as a notebook: data, study, profile and both overall tests. `shift` stands before each value.
fn notebook(shift: &str, study: &str) -> String {
    let rows = [
        ("control", &["7.40", "8.50", "7.20", "8.24", "9.84", "8.32"][..]),
        ("A", &["9.76", "8.80", "7.68", "9.36"]),
        ("B", &["12.80", "9.68", "12.16", "9.20", "10.55"]),
    ];
    let lines = rows.iter().flat_map(|(drug, values)| {
        values.iter().map(move |value| match value.split_once('.') {
            Some((whole, rest)) if !shift.is_empty() => format!("{drug},{shift}{whole:0>2}.{rest}\n"),
            _ => format!("{drug},{value}\n"),
        })
    });
    format!(
        r#"levelwise = 1
[[cell]]
kind = "data"
name = "counts"
table = """
drug,count
{}"""
[[cell]]
kind = "study"
name = "trial"
data = "counts"
outcome = "count"
groups = "drug"
{study}
[[cell]]
kind = "profile"
name = "groups"
study = "trial"
[[cell]]
kind = "overall"
name = "means"
study = "trial"
[[cell]]
kind = "overall"
name = "ranks"
study = "trial"
test = "ranks"
"#,
        lines.collect::<String>()
    )
}

#[test]
fn a_notebook_answers_from_its_table_and_a_shift_of_1e12_changes_no_digit() {
    let levels = "levels = [\"control\", \"A\", \"B\"]\nvariances = \"equal\"";
    let engine = settled(&notebook("", levels));
    let shifted = settled(&notebook("10000000000", levels));
    for name in ["means", "ranks"] {
        assert_eq!(results(&engine, name), results(&shifted, name), "{name}");
    }
    let f = results(&engine, "means")["F"].as_f64().expect("F");
    assert!((f - 7.136936).abs() < 1e-6, "{f}");
    let (near, far) = (results(&engine, "groups"), results(&shifted, "groups"));
    assert_eq!(near["levene"], far["levene"]);
    assert_eq!(near["groups"][0]["sd"], far["groups"][0]["sd"]);
    assert_eq!(far["groups"][0]["min"].as_f64(), Some(1_000_000_000_007.2));
}

#[test]
fn a_level_without_rows_is_refused_on_the_study_and_the_cells_after_it_wait() {
    let engine = settled(&notebook("", "levels = [\"control\", \"A\", \"B\", \"C\"]"));
    for name in ["groups", "means", "ranks"] {
        let cell = named(&engine, name);
        assert_ne!(cell.condition, levelwise::notebook::engine::Condition::Working, "{name}");
        assert!(cell.outcome.is_none_or(|outcome| !shown(outcome).contains("NaN")), "{name}");
    }
}
