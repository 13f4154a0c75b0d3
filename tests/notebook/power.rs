//! Planning the next study: a power cell reads from nothing and needs no data.
//!
//! Sources: `tests/reference/data/values/anova_sample_size.json` and `anova_power.json` (ball arithmetic, 20
//! digits). "Eta squared 0.46, three groups, 5 %, 80 %: 5 per group, 15 in all" is common practice as well.

use super::expect::{cell, check, results, settled};
use levelwise::notebook::engine::Condition;
use levelwise::notebook::sentence::in_words;

fn power(fields: &str) -> String {
    format!("levelwise = 1\n[[cell]]\nkind = \"power\"\nname = \"plan\"\n{fields}")
}

fn number(value: &serde_json::Value) -> f64 {
    value.as_f64().expect("a number")
}

#[test]
fn eta_squared_of_046_needs_five_per_group_and_fifteen_in_all() {
    let engine = settled(&power("groups = 3\neta_squared = 0.46\n"));
    let plan = results(&engine, "plan");
    assert_eq!(plan["n"], serde_json::json!({ "group 1": 5, "group 2": 5, "group 3": 5 }));
    assert_eq!(plan["total"], 15);
    assert!((number(&plan["power"]["estimate"]) - 0.808_952_615_900_182_8).abs() < 1e-9);
    assert!((number(&plan["power_one_fewer"]) - 0.670_615_850_795_767_2).abs() < 1e-9);
    let cell = cell(&engine, 0);
    assert_eq!(cell.headline, "5 in each of 3 groups, 15 in all: power 0.809 (target 0.8) for f = 0.923");
    let writeup = cell.outcome.expect("an outcome").answer.writeup.clone().expect("a write-up");
    assert_eq!(
        writeup,
        "To find an effect of f = 0.923 (eta squared = 0.460) with a power of at least 0.8 by a one-way F test over 3 \
         groups of equal size (alpha = 5\u{a0}%, equal variances), 5 observations per group are needed, 15 in all; the \
         power is then 0.809."
    );
    let curve = plan["curve"].as_array().expect("a curve");
    assert!(curve.windows(2).all(|pair| number(&pair[0][1]) < number(&pair[1][1])));
}

#[test]
fn power_and_smallest_effect_are_found_as_well() {
    let engine = settled(&power("groups = 3\neffect = 0.4\nfind = \"power\"\nn = 20\n"));
    let found = number(&results(&engine, "plan")["power"]["estimate"]);
    assert!((found - 0.775_730_435_063_246_6).abs() < 1e-9, "{found}");
    let engine =
        settled(&power("groups = 3\nfind = \"smallest effect\"\nn = 20\ntarget = 0.77573043506324663642\n"));
    let found = number(&results(&engine, "plan")["minimum_effect"]);
    assert!((found - 0.4).abs() < 1e-9, "{found}");
}

#[test]
fn the_sentence_shows_what_the_question_needs() {
    let sentence = |fields: &str| in_words(&cell(&settled(&power(fields)), 0).sentence);
    assert_eq!(
        sentence("means = [10, 11]\nsd = 1\n"),
        "For the overall test of 2 groups, find the n per group at error rate 0.05 and power 0.8. The effect, in one of \
         these ways: f not given; eta squared not given; expected means 10, 11 with SD 1."
    );
    assert_eq!(
        sentence("groups = 3\nfind = \"smallest effect\"\nn = 20\n"),
        "For the overall test of 3 groups, find the smallest effect at error rate 0.05 and power 0.8 with 20 in each group."
    );
}

#[test]
fn means_with_their_sd_are_an_effect() {
    // Two means one SD apart: f = 1/2, 17 per group for 80 % (anova_sample_size.json).
    let engine = settled(&power("means = [10, 11]\nsd = 1\n"));
    let plan = results(&engine, "plan");
    assert_eq!((&plan["n_per_group"], &plan["total"]), (&17.into(), &34.into()));
    assert_eq!(number(&plan["f"]), 0.5);
    assert_eq!(number(&plan["eta_squared"]), 0.2);
}

#[test]
fn what_is_wrong_or_too_much_is_said_on_its_line() {
    for fields in [
        "groups = 3\neffect = 0 # ! a number above 0 is needed\n",
        "groups = 3\nmeans = [1, 2] # ! There are 2 means for 3 groups\nsd = 1\n",
        "means = [4, 4, 4] # ! all equal\nsd = 1\n",
        "means = [1, 2] # ! Add sd\n",
        "groups = 3\neffect = 0.25\neta_squared = 0.1 # ! The effect is given twice, as effect and as eta_squared\n",
        "groups = 3\neffect = 0.25\ntarget = 0.04 # ! is not above alpha\n",
        "groups = 3\neffect = 0.00001 # ! is not reached with 10000000 per group\n",
        "groups = 1 # ! a whole number from 2\neffect = 0.25\n",
        "groups = 3\neffect = 0.25\nalpha = 1.5 # ! a number between 0 and 1\n",
        "groups = 3\neffect = 1e400 # ! cannot be read\n",
    ] {
        let engine = check(&power(fields));
        assert_eq!(cell(&engine, 0).condition, Condition::NeedsYou, "{fields}");
    }
}

#[test]
fn what_is_missing_is_asked_for() {
    for (fields, part) in [
        ("effect = 0.25\n", "The number of groups is missing"),
        ("groups = 3\n", "The power depends on the effect"),
        ("groups = 3\neffect = 0.25\nfind = \"power\"\n", "The power depends on the group size"),
        ("groups = 3\nfind = \"smallest effect\"\n", "The smallest effect depends on the group size"),
    ] {
        let engine = settled(&power(fields));
        let cell = cell(&engine, 0);
        assert_eq!(cell.condition, Condition::NeedsYou, "{fields}");
        assert!(cell.diagnostics[0].message.contains(part), "{:?}", cell.diagnostics);
    }
}

#[test]
fn fields_that_play_no_part_are_named() {
    let engine = settled(&power("groups = 3\neffect = 0.25\nn = 10\n"));
    let cautions = &cell(&engine, 0).outcome.expect("an outcome").answer.cautions;
    assert!(
        cautions.iter().any(|caution| caution.contains("Not used for this question: \"n\"")),
        "{cautions:?}"
    );
}

#[test]
fn extreme_plans_stay_numbers() {
    for fields in [
        "groups = 200\neffect = 1000\n",
        "groups = 2\neffect = 100\nalpha = 1e-12\n",
        "groups = 3\neffect = 0.002\n",
        "groups = 2\nfind = \"power\"\nn = 1000000\neffect = 50\n",
        "groups = 2\nfind = \"smallest effect\"\nn = 2\ntarget = 0.999999\nalpha = 0.0001\n",
    ] {
        let engine = settled(&power(fields));
        let cell = cell(&engine, 0);
        let text = levelwise::answer::text::answer(&cell.outcome.expect("an outcome").answer, 120);
        assert_eq!(cell.condition, Condition::Settled, "{fields}: {:?}", cell.diagnostics);
        assert!(!text.contains("NaN") && !text.contains("not available"), "{fields}: {text}");
    }
}
