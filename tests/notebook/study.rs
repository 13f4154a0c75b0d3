//! Study cells: designs, the account of rows, and everything that keeps groups from being compared. The data are
//! invented.

use super::expect::{cell, check, named, results, settled};
use levelwise::answer::Block;
use levelwise::notebook::engine::{Condition, Engine};
use levelwise::notebook::sentence::{Part, in_words};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use serde_json::json;

const TABLE: &str = "\
id,training,words
p1,none,12
p2,none,14
p3,15 min,13
p4,15 min,NA
p5,15 min,19
p6,30 min,17
p7,30 min,150
p8,30 min,18
p9,pilot,11
p10,,12
p11,pilot,3
";

fn with_study(table: &str, data_fields: &str, study_fields: &str) -> String {
    format!(
        "levelwise = 1\n[[cell]]\nkind = \"data\"\nname = \"trial\"\ntable = '''\n{table}'''\n{data_fields}\n[[cell]]\nkind = \"study\"\nname = \"recall\"\ndata = \"trial\"\n{study_fields}\n"
    )
}

/// A study of `words` over `training` in the table above.
fn recall(fields: &str) -> String {
    with_study(
        TABLE,
        "exclude = [{ where = 'words > 100', reason = \"typing error\" }, { where = 'id = \"p11\"', reason = \"withdrew\" }]",
        &format!("outcome = \"words\"\ngroups = \"training\"\n{fields}"),
    )
}

/// A study of `y` over `g` in a table of these rows.
fn small(rows: &str, fields: &str) -> Engine {
    settled(&with_study(&format!("g,y\n{rows}"), "", &format!("outcome = \"y\"\ngroups = \"g\"\n{fields}")))
}

fn problem(engine: &Engine) -> (String, String) {
    let study = named(engine, "recall");
    assert_eq!(study.condition, Condition::NeedsYou, "{:?}", study.outcome);
    assert_eq!(study.diagnostics.len(), 1, "{:?}", study.diagnostics);
    let first = &study.diagnostics[0];
    (study.text[first.span.clone()].to_owned(), first.message.clone())
}

fn cautions(engine: &Engine) -> Vec<String> {
    let study = named(engine, "recall");
    assert_eq!(study.condition, Condition::Settled, "{:?}", study.diagnostics);
    study.outcome.expect("an outcome").answer.cautions.clone()
}

#[test]
fn every_row_is_accounted_for() {
    let engine = settled(&recall(
        "levels = [\"none\", \"15 min\", \"30 min\"]\nscores = [0, 15, 30]\ncontrol = \"none\"\nvariances = \"equal\"\nunit = \"words\"",
    ));
    assert_eq!(
        results(&engine, "recall"),
        json!({
            "levels": [
                { "level": "none", "score": 0.0, "received": 2, "n": 2, "missing": 0, "excluded": 0 },
                { "level": "15 min", "score": 15.0, "received": 3, "n": 2, "missing": 1, "excluded": 0 },
                { "level": "30 min", "score": 30.0, "received": 3, "n": 2, "missing": 0, "excluded": 1 },
            ],
            "outcome": "words",
            "groups": "training",
            "order_of_appearance": false,
            "control": "none",
            "variances": "equal",
            "alpha": 0.05,
            "confidence": 0.95,
            "unit": "words",
            "rows": 11,
            "without_level": { "received": 1, "excluded": 0 },
            "not_listed": { "received": 2, "excluded": 1, "levels": ["pilot"] },
            "exclusions": [
                { "where": "words > 100", "reason": "typing error", "rows": 1 },
                { "where": "id = \"p11\"", "reason": "withdrew", "rows": 1 },
            ],
        })
    );
    let study = named(&engine, "recall");
    assert_eq!(study.headline, "words over 3 levels of training: 6 of 8 rows analysed.");
    let answer = &study.outcome.expect("an outcome").answer;
    assert_eq!(answer.cautions, ["Left out because their level is not listed: 1 row (\"pilot\")."]);
    assert_eq!(
        answer.writeup.as_deref(),
        Some(
            "words (words) was compared over 3 levels of training: none (n = 2), 15 min (n = 2), 30 min (n = 2). Of 11 rows received, these were not analysed: 1 without a value of words, 1 without a level, 1 of other levels, 1 excluded (typing error), 1 excluded (withdrew)."
        )
    );
    let Some(Block::Table(table)) = answer.blocks.first() else { panic!("a table") };
    let lines: Vec<String> = table
        .rows
        .iter()
        .map(|row| row.cells.iter().map(|cell| cell.text.as_str()).collect::<Vec<_>>().join("|"))
        .collect();
    assert_eq!(
        lines,
        [
            "none (control)|0|2|2|0|0",
            "15 min|15|3|2|1|0",
            "30 min|30|3|2|0|1",
            "level missing||1|0|1|0",
            "level not listed||2|0|0|2",
            "all||11|6|2|3",
        ]
    );
}

#[test]
fn levels_left_open_come_in_order_of_appearance_and_the_cell_says_so() {
    let engine = settled(&recall(""));
    let results = results(&engine, "recall");
    let levels: Vec<&str> = results["levels"]
        .as_array()
        .expect("levels")
        .iter()
        .filter_map(|level| level["level"].as_str())
        .collect();
    assert_eq!(levels, ["none", "15 min", "30 min", "pilot"]);
    assert_eq!(results["order_of_appearance"], true);
    assert_eq!(
        cautions(&engine),
        [
            "The levels stand in the order in which they first appear. To confirm or change it, fill in the levels, or set levels = [\"none\", \"15 min\", \"30 min\", \"pilot\"].",
            "Level \"pilot\" has 1 observation; unequal variances need at least 2. Exclude it with a reason, or add data.",
        ]
    );
    let study = named(&engine, "recall");
    assert!(
        in_words(&study.sentence).contains(
            "Levels: none, 15 min, 30 min, pilot (in order of first appearance); scores: no scores;"
        )
    );
    // A level may be called "none", so the absence of a control is said differently.
    assert!(in_words(&study.sentence).contains("control: no control."));
    let offered = |field: &str| {
        let blanks = study.sentence.iter().filter_map(|part| match part {
            Part::Blank(blank) if blank.field == field => Some(blank),
            _ => None,
        });
        blanks.flat_map(|blank| &blank.choices).map(|offer| offer.value.clone()).collect::<Vec<_>>()
    };
    assert_eq!(offered("outcome"), ["", "words"]);
    assert_eq!(offered("groups"), ["", "id", "training", "words"]);
    assert_eq!(offered("control"), ["", "none", "15 min", "30 min", "pilot"]);
}

#[test]
fn names_with_numbers_offer_scores() {
    let rows = "none,1\nnone,2\n30 min,3\n30 min,5\n15 min,4\n15 min,7\n";
    let found = cautions(&small(rows, "levels = [\"none\", \"15 min\", \"30 min\"]"));
    assert_eq!(
        found,
        [
            "The levels' names contain numbers. For a trend over them, set scores = [0, 15, 30] (0 is a guess for \"none\")."
        ]
    );
    let found = cautions(&small(rows, ""));
    assert_eq!(
        found[1],
        "The levels' names contain numbers. For a trend over them, set levels = [\"none\", \"15 min\", \"30 min\"] and scores = [0, 15, 30] (0 is a guess for \"none\")."
    );
    let rows = "0.5,1\n0.5,2\n2,3\n2,5\n";
    let found = cautions(&small(rows, "levels = [0.5, 2]"));
    assert_eq!(found, ["The levels' names contain numbers. For a trend over them, set scores = [0.5, 2]."]);
    let found = cautions(&small("a,1\na,2\nb,3\nb,5\n", "levels = [\"a\", \"b\"]"));
    assert_eq!(found, Vec::<String>::new());
}

#[test]
fn levels_of_a_column_of_numbers_are_compared_as_numbers() {
    let engine = small("0,1\n0.0,2\n15,3\n15.0,5\n", "levels = [0, 15]\nscores = [0, 15]");
    let results = results(&engine, "recall");
    assert_eq!(results["levels"][0]["n"], 2);
    assert_eq!(results["levels"][1]["n"], 2);
}

#[test]
fn levels_written_as_numbers_keep_their_digits() {
    let engine = small("0.50,1\n0.50,2\nrest,3\nrest,5\n", "levels = [0.50, \"rest\"]");
    assert_eq!(results(&engine, "recall")["levels"][0]["level"], "0.50");
}

#[test]
fn a_study_without_data_is_a_plan() {
    let engine = settled(
        "levelwise = 1\n[[cell]]\nkind = \"study\"\nname = \"recall\"\noutcome = \"words\"\ngroups = \"training\"\nlevels = [\"none\", \"15 min\"]\nscores = [0, 15]\ncontrol = \"none\"\nalpha = 0.01\n",
    );
    let study = cell(&engine, 0);
    assert_eq!(study.condition, Condition::Settled);
    assert_eq!(study.headline, "A plan without data so far: words over 2 levels of training.");
    let results = results(&engine, "recall");
    assert_eq!(
        results["levels"],
        json!([{ "level": "none", "score": 0.0 }, { "level": "15 min", "score": 15.0 }])
    );
    assert_eq!((&results["alpha"], &results["confidence"]), (&json!(0.01), &json!(0.99)));
}

#[test]
fn a_summary_can_be_studied_in_any_order() {
    let engine = check(
        r#"levelwise = 1
[[cell]]
kind = "summary"
name = "published"
groups = [{ level = "a", n = 5, mean = 1, sd = 1 }, { level = "b", n = 6, mean = 2, sd = 1 }, { level = "c", n = 7, mean = 3, sd = 1 }]
[[cell]]
kind = "study"
name = "recall"
data = "published"
outcome = "words"
groups = "training"
levels = ["c", "a"]
[[cell]]
kind = "study"
data = "published"
outcome = "words"
groups = "training"
levels = ["c", "zz"] # ! levels: no group is called "zz"; there are "a", "b" and "c".
"#,
    );
    let results = results(&engine, "recall");
    assert_eq!(
        results["levels"][0],
        json!({ "level": "c", "received": 7, "n": 7, "missing": 0, "excluded": 0 })
    );
    assert_eq!(cautions(&engine), ["Not among the levels and so not analysed: \"b\"."]);
    assert_eq!(
        named(&engine, "recall").headline,
        "words over 2 levels of training: 12 observations, known by size, mean and SD."
    );
}

/// Every ask that a study refuses, with its diagnostic beside it.
const REFUSED: &str = r#"levelwise = 1
[[cell]]
kind = "data"
name = "trial"
table = "id,training,words,note\n1,none,12,1\n2,none,14,2\n3,15 min,13,x\n4,15 min,19,1e400\n5,late,NA,3\n"
[[cell]]
kind = "study" # ! A study without data needs its levels. Add levels = ["a", "b"], or name the cell with the data in data.
outcome = "words"
groups = "training"
[[cell]]
kind = "study" # ! The field "outcome" is missing
groups = "training"
data = "trial"
[[cell]]
kind = "study"
data = "trial"
outcome = "wrods" # ! outcome: the table has no column "wrods"; it has "id", "training", "words" and "note". Did you mean "words"?
groups = "trainings" # ! groups: the table has no column "trainings"; it has "id", "training", "words" and "note". Did you mean "training"?
[[cell]]
kind = "study"
data = "trial"
outcome = "words"
groups = "words" # ! groups: "words" is the outcome already.
[[cell]]
kind = "study"
data = "trial"
outcome = "training" # ! Row 1, column "training": "none" is not a number. Correct it, or list it under missing.
groups = "words"
[[cell]]
kind = "study"
data = "trial"
outcome = "note" # ! Row 3, column "note": "x" is not a number. Correct it, or list it under missing.
groups = "training"
[[cell]]
kind = "study"
data = "trial"
outcome = "words"
groups = "training"
levels = ["none", "15 mn"] # ! levels: no row has the level "15 mn" in column "training". Did you mean "15 min"? Write it as in the table, or take it out of levels.
[[cell]]
kind = "study"
data = "trial"
outcome = "words"
groups = "training" # ! Level "late" has no value to analyse: 1 row received, 1 missing, 0 excluded. Add data, or leave the level out of levels.
[[cell]]
kind = "study"
outcome = "words"
groups = "training"
levels = ["none", "none"] # ! levels: "none" is listed twice. List every level once.
[[cell]]
kind = "study"
outcome = "words"
groups = "training"
levels = ["none"] # ! levels: only "none" is listed; a comparison needs at least 2 levels. Add the others.
[[cell]]
kind = "study"
outcome = "words"
groups = "training"
levels = [] # ! levels: the list is empty. List at least 2 levels, or take the field out.
[[cell]]
kind = "study"
outcome = "words"
groups = "training"
levels = ["none", ""] # ! levels: a level has no name. Give it one, or take it out.
[[cell]]
kind = "study"
outcome = "words"
groups = "training"
levels = ["none", "15 min", "30 min"]
scores = [0, 15, 15] # ! scores: 15 follows 15, but scores must increase from level to level. Put the levels in the order of their scores.
[[cell]]
kind = "study"
outcome = "words"
groups = "training"
levels = ["none", "15 min", "30 min"]
scores = [0, 15] # ! scores: 2 scores for 3 levels. Give each level one score, in the order of the levels.
[[cell]]
kind = "study"
outcome = "words"
groups = "training"
levels = ["none", "15 min"]
control = "nome" # ! control: "nome" is not one of the levels "none" and "15 min". Did you mean "none"?
[[cell]]
kind = "study"
data = "trial"
outcome = "words"
groups = "training"
levels = ["none", "15 min"]
alpha = 5 # ! a number between 0 and 1 is needed
variances = "equl" # ! Did you mean "equal"?
"#;

#[test]
fn asks_that_cannot_be_are_named_where_they_stand() {
    check(REFUSED);
}

#[test]
fn scores_need_a_stated_order() {
    let engine = small("b,1\nb,2\na,3\na,5\n", "scores = [1, 2]");
    let message = "scores belong to levels in a stated order, and no order is stated. Add levels = [\"b\", \"a\"], in the right order.";
    assert_eq!(problem(&engine), ("[1, 2]".to_owned(), message.to_owned()));
}

#[test]
fn text_in_the_outcome_is_named_by_row_and_column() {
    let rows = format!("{}b,\"12,5\"\n", "a,1.5\n".repeat(16));
    let message = "Row 17, column \"y\": \"12,5\" is not a number with decimal \".\". Set decimal = \",\", or list it under missing.";
    assert_eq!(problem(&small(&rows, "")), ("\"y\"".to_owned(), message.to_owned()));
    let message = "Row 2, column \"y\": \"1e400\" is too large; numbers go up to about 1.8e308. Correct it, or list it under missing.";
    assert_eq!(problem(&small("a,1\nb,1e400\n", "")).1, message);
}

#[test]
fn data_that_leave_nothing_to_compare_are_named() {
    for (rows, message) in [
        (
            "a,1\na,2\n",
            "All rows have the level \"a\"; a comparison needs at least 2 levels. Choose another column for groups, or add data.",
        ),
        (
            ",1\n,2\n",
            "No row has a level to analyse. Choose another column for groups, or look at the exclusions.",
        ),
        (
            "a,7\na,7\nb,7.0\nb,7\n",
            "All values of \"y\" are 7, so there is nothing to compare. Choose another outcome, or look at the data.",
        ),
        (
            "a,1\nb,2\nc,3\n",
            "Every level has 1 observation, so there is no spread inside a level to compare with. Add data, or choose another column for groups.",
        ),
        (
            "a,1e300\na,-1e300\nb,5\nb,6\n",
            "The values of \"y\" are too large to be squared. Change their unit, for instance by derive in the data cell.",
        ),
        (
            "a,1e-300\na,2e-300\nb,5\nb,6\n",
            "The values of \"y\" differ by too little to be squared. Change their unit, for instance by derive in the data cell.",
        ),
    ] {
        assert_eq!(problem(&small(rows, "")).1, message, "{rows:?}");
    }
}

#[test]
fn a_column_of_identifiers_is_no_grouping() {
    let rows: Vec<String> = (0..500).map(|i| format!("p{i},{i}")).collect();
    let message = "groups: column \"g\" has more than 200 different values. Choose the column that says which group a row belongs to, or list the levels to compare in levels.";
    assert_eq!(problem(&small(&rows.join("\n"), "")), ("\"g\"".to_owned(), message.to_owned()));
}

#[test]
fn single_observations_and_equal_values_are_cautions_where_methods_can_go_on() {
    for (rows, fields, caution) in [
        (
            "a,1\na,2\nb,5\n",
            "levels = [\"a\", \"b\"]",
            "Level \"b\" has 1 observation; unequal variances need at least 2. Exclude it with a reason, or add data.",
        ),
        (
            "a,1\na,2\nb,5\n",
            "levels = [\"a\", \"b\"]\nvariances = \"equal\"",
            "Level \"b\" has 1 observation: its spread is not seen but taken to be that of the other levels.",
        ),
        (
            "a,1\na,2\nb,5\nb,5\n",
            "levels = [\"a\", \"b\"]",
            "Level \"b\": all its 2 values are equal, so it has no variance of its own, which unequal variances need.",
        ),
        (
            "a,1\na,2\nb,5\nb,5\n",
            "levels = [\"a\", \"b\"]\nvariances = \"equal\"",
            "Level \"b\": all its 2 values are equal.",
        ),
        (
            "a,1\na,1\nb,5\nb,5\n",
            "levels = [\"a\", \"b\"]",
            "Inside every level all values are equal: there is no spread to test differences of means against.",
        ),
        (
            "a,1\na,2\nb,5\nb,6\n",
            "levels = [\"a\", \"b\"]\nconfidence = 0.9",
            "Intervals have a confidence of 90\u{a0}%, tests an error rate of 5\u{a0}%: an interval and a test of the same difference may disagree.",
        ),
    ] {
        assert_eq!(cautions(&small(rows, fields)), [caution], "{rows:?} {fields:?}");
    }
}

#[test]
fn a_study_of_a_table_that_cannot_be_read_waits() {
    let engine = settled(&with_study("", "", "outcome = \"y\"\ngroups = \"g\""));
    assert_eq!(cell(&engine, 0).condition, Condition::NeedsYou);
    assert_eq!(named(&engine, "recall").condition, Condition::Waiting);
}

proptest! {
    #![proptest_config(ProptestConfig { rng_seed: RngSeed::Fixed(4), failure_persistence: None, cases: 300, ..ProptestConfig::default() })]

    #[test]
    fn no_table_and_no_design_makes_the_engine_panic(
        rows in prop::collection::vec((r#"[ab ]{0,1}|[0-3]"#, r#"-?[0-9.,]{0,3}(e3[0-9]{2})?|NA"#), 0..8),
        condition in r#"[gy]? ?[<>=]{0,2} ?("a"|[0-9]{1,3})?( (and|or) )?"#,
        levels in prop::collection::vec("[abc]|[0-3]", 0..4),
        scores in prop::collection::vec(-2_i32..4, 0..4),
        equal in any::<bool>(),
    ) {
        let rows: String = rows.iter().map(|(g, y)| format!("{g};{y}\n")).collect();
        let mut fields = format!("outcome = \"y\"\ngroups = \"g\"\nvariances = \"{}equal\"", if equal { "" } else { "un" });
        if !levels.is_empty() {
            fields.push_str(&format!("\nlevels = {levels:?}"));
        }
        if !scores.is_empty() {
            fields.push_str(&format!("\nscores = {scores:?}"));
        }
        for exclude in ["", &format!("exclude = [{{ where = '{condition}', reason = 'x' }}]\nderive = {{ d = 'log(y) / y' }}")] {
            let engine = settled(&with_study(&format!("g;y\n{rows}"), exclude, &fields));
            let study = named(&engine, "recall");
            if study.condition == Condition::Settled {
                let results = results(&engine, "recall");
                let count = |level: &serde_json::Value, key: &str| level[key].as_u64().expect("a count");
                for level in results["levels"].as_array().expect("levels") {
                    let parts = ["n", "missing", "excluded"].map(|key| count(level, key));
                    prop_assert_eq!(count(level, "received"), parts.iter().sum::<u64>());
                }
            } else {
                prop_assert!(study.condition == Condition::Waiting || !study.diagnostics.is_empty());
            }
        }
    }
}

#[test]
fn an_error_rate_in_per_cent_is_told_how_to_be_written() {
    let engine = settled(
        "levelwise = 1\n[[cell]]\nkind = \"study\"\noutcome = \"y\"\ngroups = \"g\"\nlevels = [\"a\", \"b\"]\nalpha = 2.5\n",
    );
    let problems = &cell(&engine, 0).diagnostics;
    assert_eq!(
        problems[0].message,
        "alpha: 2.5 was found, but a number between 0 and 1 is needed. For 2.5 % write 0.025."
    );
}
