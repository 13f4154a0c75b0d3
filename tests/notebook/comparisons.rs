//! Families of comparisons as cells: what they answer, what they show of a plan, and what must be mended.
//!
//! The numbers are those of Dunnett's (1955) blood counts, worked independently for this project (see
//! `tests/reference/comparisons.rs`).

use super::expect::{check, named, results};
use super::given::{
    ask, blood_counts, controlled, evaluated, near, numbers, settled, shown, study, summarised,
};
use levelwise::answer::Block;
use levelwise::notebook::ask::Ask;
use levelwise::notebook::kinds::Read;
use levelwise::study::{Observed, Study, Variances};
use serde_json::Value;

fn planned() -> Study {
    Study { observed: Observed::Plan, account: Vec::new(), ..controlled(Variances::Equal) }
}

/// The one diagnostic, with the text that it stands on.
fn problem(rest: &str, study: Study) -> (String, String) {
    let text = ask(rest);
    let outcome = evaluated(&text, study);
    let [only] = outcome.diagnostics.as_slice() else {
        panic!("one diagnostic, not {:?}", outcome.diagnostics)
    };
    (only.message.clone(), text[only.span.clone()].to_string())
}

#[test]
fn all_pairs_are_tukeys_with_equal_and_games_and_howells_with_unequal_variances() {
    let equal = settled("family = \"all pairs\"", blood_counts(Variances::Equal));
    assert_eq!(equal.results["adjust"], "Tukey");
    assert_eq!(equal.in_force["adjust"], "Tukey");
    near(&numbers(&equal, "p_adjusted"), &[0.676220, 0.00798514, 0.0659189], 5e-7);
    let unequal = settled("", blood_counts(Variances::Unequal));
    assert_eq!(unequal.results["adjust"], "Games-Howell");
    near(&numbers(&unequal, "p_adjusted"), &[0.546739, 0.0349601, 0.112635], 5e-7);
}

#[test]
fn a_settled_family_names_its_method_in_full_and_says_every_row() {
    let outcome = settled("family = \"all pairs\"", blood_counts(Variances::Equal));
    assert_eq!(
        outcome.answer.headline,
        "1 of 3 comparisons shows a difference: B \u{2212} control +2.63 (Tukey, family-wise error 5\u{a0}%)"
    );
    let text = shown(&outcome);
    for part in [
        "count: all pairs of drug; t tests with one SD pooled over all 3 levels (df 12), two-sided; the Tukey-Kramer \
         procedure (studentized range, unequal group sizes) over the family of 3 comparisons, family-wise error 5\u{a0}%",
        "not shown to differ",
        "differs: greater",
        "control (n = 6), A (n = 4) and B (n = 5)",
    ] {
        let squeezed = |text: &str| text.split_whitespace().collect::<Vec<_>>().join(" ");
        assert!(squeezed(&text).contains(&squeezed(part)), "{part} is not in {text}");
    }
    let writeup = outcome.answer.writeup.as_deref().unwrap();
    assert!(writeup.contains("B \u{2212} control: difference 2.63 (simultaneous 95\u{a0}% interval 0.73 to 4.53), q(3, 12) = 5.22, adjusted p = 0.008, d = 2.24"), "{writeup}");
    assert!(writeup.contains("A \u{2212} control: difference 0.65"), "every planned row is said: {writeup}");
    let figures = outcome.answer.blocks.iter().filter(|block| matches!(block, Block::Figure(_))).count();
    assert_eq!(figures, 2, "the differences and the groups");
}

#[test]
fn no_word_makes_a_missing_difference_an_equality_and_no_star_marks_a_difference() {
    for rest in [
        "",
        "adjust = \"Holm\"",
        "adjust = \"none\"",
        "family = \"neighbours\"\nsides = \"greater\"",
        "adjust = \"Benjamini-Hochberg\"",
    ] {
        let outcome = settled(rest, blood_counts(Variances::Equal));
        let text = shown(&outcome)
            + outcome.answer.writeup.as_deref().unwrap_or_default()
            + &outcome.answer.headline;
        for word in ["no difference between", "are equal", "the same as", "n.s.", "NS ", "*", "identical"] {
            assert!(!text.contains(word), "{word:?} in {text}");
        }
    }
}

#[test]
fn against_a_control_is_dunnetts_or_welch_with_holm() {
    let equal = settled("family = \"each against control\"", controlled(Variances::Equal));
    assert_eq!(equal.results["adjust"], "Dunnett");
    near(&[equal.results["critical"].as_f64().unwrap()], &[2.513483], 5e-7);
    near(&numbers(&equal, "p_adjusted"), &[0.620102, 0.00582536], 5e-7);
    let greater =
        settled("family = \"each against control\"\nsides = \"greater\"", controlled(Variances::Equal));
    near(&numbers(&greater, "p_adjusted"), &[0.324978, 0.00291388], 5e-7);
    assert_eq!(greater.results["rows"][0]["upper"], "inf");
    let unequal = settled("family = \"each against control\"", controlled(Variances::Unequal));
    assert_eq!(unequal.results["adjust"], "Holm");
    near(&numbers(&unequal, "df"), &[6.7759, 6.3330], 5e-5);
}

#[test]
fn both_readings_of_a_correction_stand_side_by_side() {
    let bonferroni =
        settled("adjust = \"Bonferroni\"\nalso = [\"Holm\", \"Scheffe\"]", blood_counts(Variances::Equal));
    near(&[bonferroni.results["alpha_per_comparison"].as_f64().unwrap()], &[0.05 / 3.0], 1e-15);
    assert!(shown(&bonferroni).contains("Never both corrections at once"));
    let also = |name: &str| -> Vec<f64> {
        let rows = bonferroni.results["rows"].as_array().unwrap();
        rows.iter().map(|row| row["also"][name].as_f64().unwrap()).collect()
    };
    near(&also("Holm"), &[0.408217, 0.00921189, 0.0548596], 5e-7);
    near(&also("Scheffe"), &[0.700157, 0.0105001, 0.0795571], 5e-7);
}

#[test]
fn a_stepwise_procedure_has_no_intervals_of_its_own_and_names_rows_that_disagree() {
    let holm = settled("adjust = \"Holm\"\nalpha = 0.06", blood_counts(Variances::Equal));
    let rows = holm.results["rows"].as_array().unwrap();
    assert!(rows.iter().all(|row| row["lower"].is_null() && row["shown_lower"].is_number()));
    assert_eq!(holm.results["intervals"], "simultaneous by Bonferroni");
    assert_eq!(holm.results["intervals_disagree"], serde_json::json!(["B - A"]));
    assert!(
        holm.answer
            .cautions
            .iter()
            .any(|caution| caution.contains("disagree with the decision on B \u{2212} A"))
    );
}

#[test]
fn summaries_answer_as_the_raw_values_do_to_the_last_digit() {
    for rest in ["", "adjust = \"Holm\"", "family = \"each against the rest\""] {
        for variances in [Variances::Equal, Variances::Unequal] {
            let raw = settled(rest, blood_counts(variances));
            let summary = settled(rest, summarised(blood_counts(variances)));
            assert_eq!(raw.results, summary.results);
        }
    }
}

#[test]
fn contrasts_are_written_as_arithmetic_tables_or_lists() {
    let contrasts = "family = \"contrasts\"\ncontrasts = { a = \"(A + B)/2 - control\", b = { A = 0.5, B = 0.5, control = -1 }, c = [-1, 0.5, 0.5] }";
    let outcome = settled(contrasts, blood_counts(Variances::Equal));
    assert_eq!(outcome.results["adjust"], "Holm");
    assert_eq!(outcome.results["rank"], 1);
    near(&numbers(&outcome, "p"), &[0.0215686; 3], 5e-8);
    assert_eq!(outcome.results["rows"][0]["coefficients"]["control"], -1.0);
    assert!(shown(&outcome).contains("mean of A and B minus control"));
}

#[test]
fn given_p_values_need_no_study() {
    let text = "kind = \"comparisons\"\nfamily = \"given p-values\"\ngiven = { a = 0.010, b = 0.015, c = 0.020, d = 0.030, e = 0.041, f = 0.300 }\nalso = [\"Benjamini-Hochberg\"]";
    let (ask, problems) = Ask::parse(text).unwrap();
    assert!(problems.is_empty());
    let outcome = ask.kind.evaluate(&ask, &Read::default()).finish();
    assert!(outcome.diagnostics.is_empty(), "{:?}", outcome.diagnostics);
    near(&numbers(&outcome, "p_adjusted"), &[0.06, 0.075, 0.08, 0.09, 0.09, 0.3], 1e-12);
    let also: Vec<f64> = outcome.results["rows"]
        .as_array()
        .unwrap()
        .iter()
        .map(|row| row["also"]["Benjamini-Hochberg"].as_f64().unwrap())
        .collect();
    near(&also, &[0.04, 0.04, 0.04, 0.045, 0.0492, 0.3], 1e-12);
}

#[test]
fn a_plan_shows_its_family_its_coefficients_and_its_method_and_waits() {
    let outcome = evaluated(&ask("family = \"each against control\""), planned());
    assert!(outcome.waiting && outcome.diagnostics.is_empty(), "{:?}", outcome.diagnostics);
    assert_eq!(
        outcome.answer.headline,
        "Planned: 2 comparisons (each level of drug against control), Dunnett; waiting for data"
    );
    assert_eq!(outcome.results["family_size"], 2);
    assert_eq!(
        outcome.results["rows"][1]["coefficients"],
        serde_json::json!({ "control": -1.0, "A": 0.0, "B": 1.0 })
    );
    let bonferroni = evaluated(&ask("adjust = \"Bonferroni\""), planned());
    assert!(
        shown(&bonferroni).contains("Each raw p-value will be judged at 0.0167."),
        "{}",
        shown(&bonferroni)
    );
    let holm = evaluated(&ask("adjust = \"Holm\""), planned());
    assert!(shown(&holm).contains("from the smallest, will be judged at 0.0167, 0.0250, 0.0500."));
    let mut unknown = planned();
    unknown.levels.labels.clear();
    assert!(evaluated(&ask(""), unknown).waiting);
}

#[test]
fn a_procedure_that_does_not_suit_is_named_with_those_that_do() {
    let (message, place) = problem("adjust = \"Tukey\"", blood_counts(Variances::Unequal));
    assert_eq!(place, "\"Tukey\"");
    assert!(message.starts_with("Tukey's procedure needs one standard deviation for all levels, and the study says unequal variances. Suitable here: \"Games-Howell\", \"step-down max-t\""), "{message}");
    let contrasts = "family = \"contrasts\"\ncontrasts = { a = \"A - B\" }\nadjust = \"Tukey\"";
    assert!(problem(contrasts, blood_counts(Variances::Equal)).0.contains("is for all pairs of levels"));
    assert!(problem("adjust = \"Dunnett\"", controlled(Variances::Equal)).0.contains("with a control"));
    assert!(
        problem("also = [\"Games-Howell\"]", blood_counts(Variances::Equal))
            .0
            .contains("the study says equal variances")
    );
    let one_sided = problem("adjust = \"Tukey\"\nsides = \"less\"", blood_counts(Variances::Equal)).0;
    assert!(one_sided.contains("looks to both sides"), "{one_sided}");
}

#[test]
fn what_is_missing_or_mistyped_is_said_at_its_place() {
    let equal = || blood_counts(Variances::Equal);
    let contrasts = |text: &str| format!("family = \"contrasts\"\ncontrasts = {{ late = {text} }}");
    let cases: [(String, &str, &str); 11] = [
        (
            contrasts("\"A - control/2\""),
            "\"A - control/2\"",
            "Contrast \"late\": the coefficients sum to 0.5 and must sum to 0. Give both sides the same total weight.",
        ),
        (
            contrasts("\"A - contrl\""),
            "contrl",
            "\"contrl\" is no level of this study. Did you mean \"control\"?",
        ),
        (contrasts("{ C = 1, A = -1 }"), "{ C = 1, A = -1 }", "\"C\" is no level of this study."),
        (contrasts("[1, -1]"), "[1, -1]", "2 coefficients for 3 levels"),
        (contrasts("5"), "5", "write an expression in quotes"),
        ("family = \"contrasts\"".into(), "\"contrasts\"", "or add contrasts = { first = \"A - control\" }."),
        ("contrasts = { a = \"A - B\" }".into(), "{ a = \"A - B\" }", "Add family = \"contrasts\"."),
        (
            "family = \"each against control\"".into(),
            "\"each against control\"",
            "Set control in the study: one of \"control\", \"A\" or \"B\".",
        ),
        ("family = \"given p-values\"".into(), "\"given p-values\"", "Add given = {"),
        (
            "family = \"given p-values\"\ngiven = { a = 1.2 }".into(),
            "a",
            "\"a\" has the p-value 1.2; a p-value is from 0 to 1.",
        ),
        ("family = \"all pears\"".into(), "\"all pears\"", "Did you mean \"all pairs\"?"),
    ];
    for (rest, place, message) in cases {
        let (found, stands) = problem(&rest, equal());
        assert!(found.contains(message), "{rest}: {found}");
        assert_eq!(stands, place, "{rest}: {found}");
    }
}

#[test]
fn without_a_study_the_field_is_named() {
    let (ask, _) = Ask::parse("kind = \"comparisons\"\nfamily = \"all pairs\"").unwrap();
    let outcome = ask.kind.evaluate(&ask, &Read::default()).finish();
    assert!(outcome.diagnostics[0].message.contains("The field \"study\" is missing"));
}

#[test]
fn a_study_that_gives_no_estimates_is_refused_with_what_to_do() {
    let single = study(&[("a", &[1.0, 2.0]), ("b", &[3.0])], Variances::Unequal);
    let (message, place) = problem("", single.clone());
    assert_eq!(place, "\"blood\"");
    assert!(message.contains("level \"b\" has 1 observation") && message.contains("Add data"), "{message}");
    let constant = study(&[("a", &[1.0, 1.0]), ("b", &[3.0, 3.0])], Variances::Equal);
    assert!(problem("", constant).0.contains("no variation inside any group"));
    let pooled = Study { variances: Variances::Equal, ..single };
    settled("", pooled);
}

#[test]
fn cautions_stand_where_harm_is_possible() {
    let caution = |rest: &str, study: Study, part: &str| {
        let outcome = settled(rest, study);
        let found = outcome.answer.cautions.iter().any(|caution| caution.contains(part));
        assert!(found, "{part} is not in {:?}", outcome.answer.cautions);
    };
    let spread = study(&[("a", &[0.0, 10.0, 20.0]), ("b", &[3.0, 3.5, 4.0, 3.2, 3.7])], Variances::Equal);
    caution("", spread, "The smaller group has the larger spread");
    caution(
        "",
        blood_counts(Variances::Unequal),
        "small groups have unequal sizes or spreads: \"A\" (n = 4) and \"B\" (n = 5)",
    );
    caution("adjust = \"Hochberg\"", blood_counts(Variances::Equal), "For all pairs this is not guaranteed");
    caution("adjust = \"Benjamini-Hochberg\"", blood_counts(Variances::Equal), "exploratory screening");
    caution("adjust = \"none\"", blood_counts(Variances::Equal), "could reach 14.26\u{a0}%");
    caution(
        "contrasts = { a = \"A - B\" }\nfamily = \"all pairs\"",
        blood_counts(Variances::Equal),
        "\"contrasts\" is written in this cell but not used",
    );
    let odd = Study { confidence: 0.9, ..blood_counts(Variances::Equal) };
    caution("", odd, "they need not agree");
}

#[test]
fn an_overall_test_that_says_otherwise_is_explained_on_the_study_s_own_numbers() {
    let groups = [0.0, 0.0, 1.0, 1.0].map(|mean| [-1.0, -0.6, -0.1, 0.1, 0.6, 1.0].map(|x| x + mean));
    let named = ["a", "b", "c", "d"].iter().zip(&groups).map(|(name, values)| (*name, values.as_slice()));
    let study = study(&named.collect::<Vec<_>>(), Variances::Equal);
    let outcome = settled("adjust = \"Bonferroni\"", study);
    let text = shown(&outcome).replace('\n', " ");
    assert!(text.contains("Why the overall test is significant"), "{text}");
    // F = t²/(k - 1) of the contrast that carries it (Scheffé 1959, section 3.5); its t is √2 times that of a pair, 2.34.
    assert!(
        text.contains("mean of c and d minus mean of a and b (+1.00, t = 3.31; t\u{b2}/3 is the overall F)"),
        "{text}"
    );
    assert!(text.contains("It is not among the 6 comparisons of this family"), "{text}");
    let found = &outcome.results["overall_and_comparisons_differ"];
    let (t, f) = (found["carrying_t"].as_f64().unwrap(), found["overall"]["F"].as_f64().unwrap());
    assert!((t * t / 3.0 - f).abs() < 1e-12, "{t} {f}");
    assert_eq!(
        outcome.results["overall_and_comparisons_differ"]["significant"],
        Value::from("overall test only")
    );
}

/// The text that explains why the overall test and the comparisons differ, for groups of the same spread with these means.
fn why(rest: &str, means: &[f64]) -> String {
    let values = means.iter().map(|mean| [-1.0, -0.6, -0.1, 0.1, 0.6, 1.0].map(|x| x + mean));
    let groups: Vec<[f64; 6]> = values.collect();
    let named = ["a", "b", "c", "d"].into_iter().zip(groups.iter().map(|values| values.as_slice()));
    let outcome = settled(rest, study(&named.collect::<Vec<_>>(), Variances::Equal));
    let texts = outcome.answer.blocks.iter().filter_map(|block| match block {
        Block::Text(text) => Some(text.as_str()),
        _ => None,
    });
    texts.collect::<Vec<_>>().join(" ")
}

#[test]
fn a_comparison_without_a_significant_overall_test_is_explained_by_what_its_family_is_worth() {
    // F(3, 20) = 2.74, p = 0.071; d - a by itself: t(20) = 2.34, p = 0.030.
    let means = [0.0, 0.0, 0.0, 1.0];
    let planned = why("family = \"contrasts\"\ncontrasts = { late = \"d - a\" }", &means);
    assert!(planned.starts_with("Why a comparison is significant (late (adjusted p = 0.030))"), "{planned}");
    assert!(planned.contains("all 3 independent directions in which 4 means can differ"), "{planned}");
    assert!(planned.contains("The comparisons control their own error rate"), "{planned}");
    let alone = why("adjust = \"none\"", &means);
    assert!(alone.contains("Nothing is adjusted here"), "{alone}");
    assert!(!alone.contains("control their own error rate"), "{alone}");
    // Two levels: only the side makes the difference. F(1, 10) = 4.17, p = 0.061 (0.9 apart: p = 0.0615).
    let two = why("sides = \"greater\"", &[0.0, 0.9]);
    assert!(two.contains("the comparisons look to the one side that was chosen"), "{two}");
    assert!(two.contains("t\u{b2} is the overall F") && !two.contains("directions"), "{two}");
    // To the other side there is nothing to find, and the text says which side counts.
    let other = why("sides = \"less\"", &[0.0, 1.0]);
    assert!(other.contains("The comparisons look to one side only"), "{other}");
    assert_eq!(why("", &means), "");
}

#[test]
fn the_sentence_shows_the_procedure_that_is_really_used() {
    let outcome = settled("family = \"neighbours\"", blood_counts(Variances::Equal));
    assert_eq!(outcome.in_force["adjust"], "Holm");
    assert_eq!(outcome.in_force["alpha"], "0.05");
}

/// From the table to the families, through the data and study cells.
const WHOLE: &str = r#"levelwise = 1
[[cell]]
kind = "data"
name = "animals"
table = """
drug,count
control,7.40
control,8.50
control,7.20
control,8.24
control,9.84
control,8.32
A,9.76
A,8.80
A,7.68
A,9.36
B,12.80
B,9.68
B,12.16
B,9.20
B,10.55
"""
[[cell]]
kind = "study"
name = "blood"
data = "animals"
outcome = "count"
groups = "drug"
control = "control"
variances = "equal"
[[cell]]
kind = "comparisons"
name = "pairs"
study = "blood"
"#;

#[test]
fn from_the_table_to_the_family() {
    let engine = check(
        &(WHOLE.to_string()
            + r#"
[[cell]]
kind = "comparisons"
name = "late"
study = "blood"
family = "contrasts"
contrasts = { late = "(A + B)/2 - contrl" } # ! Did you mean "control"?
[[cell]]
kind = "comparisons"
name = "wrong"
study = "blood"
adjust = "Games-Howell" # ! gives each level its own variance, and the study says equal variances
[[cell]]
kind = "trend"
study = "blood" # ! the study has no scores
[[cell]]
kind = "comparisons" # ! The field "study" is missing
family = "neighbours"
"#),
    );
    let rows = results(&engine, "pairs")["rows"].as_array().unwrap().clone();
    let p: Vec<f64> = rows.iter().map(|row| row["p_adjusted"].as_f64().unwrap()).collect();
    near(&p, &[0.676220, 0.00798514, 0.0659189], 5e-7);
    assert!(named(&engine, "pairs").headline.contains("Tukey"));
}

#[test]
fn two_lines_with_one_name_are_both_kept_and_named() {
    use levelwise::notebook::{edit, kinds::Kind};
    let field = Kind::Comparisons.table().field("given").expect("a field");
    let text = "kind = \"comparisons\"\nfamily = \"given p-values\"\n";
    let text = edit::set_field(text, field, "a: 0.01\na: 0.02").expect("an edit");
    let engine = super::expect::settled(&format!("levelwise = 1\n[[cell]]\n{text}"));
    let cell = super::expect::cell(&engine, 0);
    assert!(cell.text.contains("0.01") && cell.text.contains("0.02"), "{}", cell.text);
    assert_eq!(
        cell.diagnostics[0].message,
        "given: two lines have the name \"a\". Give each line a name of its own."
    );
}
