//! The profile as a cell.

use super::given::{blood_counts, evaluated, shown, study, summarised};
use levelwise::answer::Block;
use levelwise::study::{Observed, Study, Variances};

const TEXT: &str = "kind = \"profile\"\nstudy = \"trial\"\n";

#[test]
fn groups_checks_and_figure_are_shown_and_handed_over() {
    let outcome = evaluated(TEXT, blood_counts(Variances::Unequal));
    assert_eq!(
        outcome.answer.headline,
        "15 values of count in 3 groups; means from 8.25 (control) to 10.88 (B)"
    );
    let groups = outcome.results["groups"].as_array().expect("groups");
    assert_eq!((groups[1]["level"].as_str(), groups[1]["n"].as_u64()), (Some("A"), Some(4)));
    assert!((groups[1]["mean"].as_f64().expect("a mean") - 8.9).abs() < 1e-12);
    assert!((groups[1]["median"].as_f64().expect("a median") - 9.08).abs() < 1e-12);
    // Sources of the three numbers: tests/reference/one_way.rs.
    assert!((outcome.results["brown_forsythe"]["F"].as_f64().expect("F") - 1.147120).abs() < 1e-6);
    assert!((outcome.results["bartlett"]["chi2"].as_f64().expect("chi2") - 1.389598).abs() < 1e-6);
    assert!((outcome.results["pooled_sd"].as_f64().expect("an SD") - 1.380523_f64.sqrt()).abs() < 1e-6);
    let figures = outcome.answer.blocks.iter().filter(|block| matches!(block, Block::Figure(_)));
    assert_eq!(figures.count(), 1);
    let text = shown(&outcome);
    for part in ["Levene", "Brown-Forsythe", "Bartlett", "Shapiro-Wilk", "Hyndman and Fan 1996, definition 7"]
    {
        assert!(text.contains(part), "{part} in {text}");
    }
}

#[test]
fn what_to_show_can_be_chosen() {
    let outcome = evaluated(&format!("{TEXT}show = [\"groups\"]\n"), blood_counts(Variances::Unequal));
    assert_eq!(outcome.answer.blocks.len(), 1);
}

#[test]
fn summaries_leave_out_what_they_cannot_give_and_say_so() {
    let outcome = evaluated(TEXT, summarised(blood_counts(Variances::Unequal)));
    assert!(outcome.results.get("levene").is_none() && outcome.results["groups"][0].get("median").is_none());
    assert!((outcome.results["bartlett"]["chi2"].as_f64().expect("chi2") - 1.389598).abs() < 1e-6);
    let text = shown(&outcome);
    assert!(text.contains("it needs the single values"), "{text}");
    assert!(outcome.answer.cautions.iter().any(|caution| caution.starts_with("Only sizes, means and SDs")));
}

#[test]
fn small_and_unequal_groups_are_cautioned() {
    let lopsided = study(
        &[("few", &[1.0, 5.0, 9.0]), ("many", &[4.0, 5.0, 5.5, 4.5, 5.2, 4.8, 5.1, 4.9, 5.3, 4.7])],
        Variances::Unequal,
    );
    let cautions = evaluated(TEXT, lopsided).answer.cautions;
    for part in
        ["Small groups: few (n = 3)", "Very unequal groups: from 3 to 10", "The groups vary differently"]
    {
        assert!(cautions.iter().any(|caution| caution.contains(part)), "{part} in {cautions:?}");
    }
}

#[test]
fn constant_and_single_values_are_described_without_a_test() {
    let odd = study(&[("same", &[0.1, 0.1, 0.1]), ("one", &[0.4]), ("none", &[])], Variances::Unequal);
    let outcome = evaluated(TEXT, odd);
    assert!(outcome.diagnostics.is_empty());
    let text = shown(&outcome);
    assert!(!text.contains("NaN") && !text.contains("∞"), "{text}");
    assert!(text.contains("level \"none\" has no observation"), "{text}");
}

#[test]
fn a_plan_waits() {
    let plan = Study { observed: Observed::Plan, ..blood_counts(Variances::Unequal) };
    let outcome = evaluated(TEXT, plan);
    assert!(outcome.waiting);
    assert_eq!(outcome.answer.headline, "Planned: count described for control, A and B");
}
