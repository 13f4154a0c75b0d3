//! Data cells: what they show, and what keeps a table from being read. The tables are invented.

use super::expect::{cell, check, named, results, settled};
use levelwise::answer::Block;
use levelwise::notebook::diagnostics::position;
use levelwise::notebook::engine::{Condition, Engine};
use levelwise::notebook::sentence::in_words;
use serde_json::json;

fn notebook(fields: &str) -> String {
    format!("levelwise = 1\n[[cell]]\nkind = \"data\"\nname = \"trial\"\n{fields}\n")
}

fn with_table(table: &str, fields: &str) -> String {
    notebook(&format!("table = '''\n{table}'''\n{fields}"))
}

/// Line in the cell's text and message of every diagnostic of the first cell.
fn problems(notebook: &str) -> Vec<(usize, String)> {
    let engine = settled(notebook);
    let cell = cell(&engine, 0);
    assert_eq!(cell.condition, Condition::NeedsYou, "{:?}", cell.outcome);
    let place = |start| position(cell.text, start).0;
    cell.diagnostics.iter().map(|problem| (place(problem.span.start), problem.message.clone())).collect()
}

fn cautions(engine: &Engine) -> Vec<String> {
    cell(engine, 0).outcome.expect("an outcome").answer.cautions.clone()
}

const SCORES: &str = "id,group,score\np1,none,12.5\np2,none,NA\np3,drill,140\np4,drill,9\n";

#[test]
fn a_table_shows_how_it_was_read() {
    let engine = settled(&with_table(
        SCORES,
        "exclude = [{ where = 'score > 100', reason = \"typing error\" }]\nderive = { double = \"score * 2\" }",
    ));
    let data = named(&engine, "trial");
    assert_eq!(data.headline, "4 rows in 4 columns, 2 values missing, 1 row left out.");
    assert_eq!(
        results(&engine, "trial"),
        json!({
            "rows": 4,
            "columns": [
                { "name": "id", "type": "label", "missing": 0 },
                { "name": "group", "type": "label", "missing": 0 },
                { "name": "score", "type": "number", "missing": 1 },
                { "name": "double", "type": "number", "missing": 1 },
            ],
            "excluded": [{ "where": "score > 100", "reason": "typing error", "rows": [3] }],
            "separator": ",",
            "decimal": ".",
        })
    );
    let answer = &data.outcome.expect("an outcome").answer;
    let [Block::Table(columns), Block::Table(left_out)] = answer.blocks.as_slice() else {
        panic!("two tables: {:?}", answer.blocks)
    };
    let texts: Vec<Vec<&str>> =
        columns.rows.iter().map(|row| row.cells.iter().map(|cell| cell.text.as_str()).collect()).collect();
    assert_eq!(texts[1], ["group", "label", "0", "none, drill"]);
    assert_eq!(texts[2], ["score", "number", "1", "9 to 140"]);
    assert_eq!(texts[3], ["double", "number", "1", "18 to 280"]);
    assert_eq!(left_out.rows[0].cells[3].text, "3");
    assert!(in_words(&data.sentence).starts_with(
        "A table with columns separated by commas (as found) and numbers written with a decimal point (as found);"
    ));
}

#[test]
fn options_are_obeyed() {
    let table = "dose;score\n10;1,5\n20;-9\n";
    let fields = "separator = \";\"\ndecimal = \",\"\nmissing = [\"-9\"]\ncolumns = { dose = \"label\" }";
    let engine = settled(&with_table(table, fields));
    let results = results(&engine, "trial");
    assert_eq!(results["columns"][0]["type"], "label");
    assert_eq!(results["columns"][1], json!({ "name": "score", "type": "number", "missing": 1 }));
}

#[test]
fn tables_that_cannot_be_read_say_so_on_their_line() {
    for (table, line, message) in [
        ("", 3, "The table is empty. Put in a header row and at least one row of values."),
        (
            "group,score\n",
            4,
            "The table has a header (line 1) but no rows. Add at least one row of values under it.",
        ),
        (
            "group,score\na,1\nb\n",
            6,
            "Line 3: 1 field, but the header (line 1) has 2, separated by \",\". Add the missing separators; a field between them may stay empty.",
        ),
        ("group,group\na,1\n", 4, "Line 1: columns 1 and 2 are both called \"group\". Rename one of them."),
        (
            "group\tscore\na\tNA\nb\t1,234\n",
            6,
            "Row 2, column \"score\": \"1,234\" can be read as 1.234 or as 1234. Set decimal = \",\" if the comma begins the decimals, or remove the thousands separators.",
        ),
    ] {
        assert_eq!(problems(&with_table(table, "")), [(line, message.to_owned())], "{table:?}");
    }
}

#[test]
fn text_in_a_column_declared_as_numbers_is_named_by_row_and_column() {
    let table = format!("group,score\n{}a,\"12,5\"\n", "a,1.5\n".repeat(16));
    let found = problems(&with_table(&table, "columns = { score = \"number\" }\ndecimal = \".\""));
    let message = "Row 17, column \"score\": \"12,5\" is not a number with decimal \".\". Set decimal = \",\", or list it under missing.";
    assert_eq!(found, [(21, message.to_owned())]);
}

#[test]
fn a_column_of_numbers_with_a_few_texts_is_pointed_out() {
    let engine = settled(&with_table("group,score\na,1\nb,2\nc,3 ?\n", ""));
    assert_eq!(
        cautions(&engine),
        [
            "Column \"score\" was read as labels, because not all its values are numbers. Row 3, column \"score\": \"3 ?\" is not a number. Correct it, or list it under missing."
        ]
    );
    let engine = settled(&with_table("a;b,c\n1;2,5\n3;4,5\n", ""));
    assert_eq!(cautions(&engine).len(), 1);
    let engine = settled(&with_table(SCORES, ""));
    assert_eq!(cautions(&engine), Vec::<String>::new());
}

#[test]
fn fields_that_do_not_fit_are_named_where_they_stand() {
    check(
        r#"levelwise = 1
[[cell]]
kind = "data" # ! The field "table" is missing
[[cell]]
kind = "data"
table = "a,b\n1,2\n"
separator = "|" # ! is not one of its choices
decimal = "'" # ! is not one of its choices
[[cell]]
kind = "data"
table = "a,b\n1,2\n"
columns = { a = "nummer" } # ! the type of "a" is "nummer", but "number" or "label" is needed
[[cell]]
kind = "data"
table = "score,b\n1,2\n"
columns = { scroe = "label" } # ! columns: There is no column "scroe". Did you mean "score"?
[[cell]]
kind = "data"
table = "score,b\n1,2\n"
exclude = [
  { where = "score > 1", reason = "" }, # ! exclude, entry 1: This exclusion has no reason.
  { where = "scroe > 1", reason = "x" }, # ! exclude, entry 2: There is no column "scroe". Did you mean "score"?
]
[[cell]]
kind = "data"
table = "score,b\n0,2\n"
derive = { "log score" = "log(score)" } # ! derive, entry 1: Row 1, column "log score": log of 0 is not defined
[[cell]]
kind = "data"
table = "score,b\n0,2\n"
derive = { gain = 5 } # ! derive: "gain" is 5, but an expression in quotes is needed
[[cell]]
kind = "data"
table = "score,b\n0,2\n"
exclude = [{ where = "score > 1" }] # ! "reason" is missing
"#,
    );
}

#[test]
fn a_problem_in_a_condition_is_marked_at_its_word() {
    let engine = settled(&with_table(SCORES, "exclude = [{ where = 'scroe > 1', reason = 'x' }]"));
    let data = cell(&engine, 0);
    assert_eq!(&data.text[data.diagnostics[0].span.clone()], "scroe");
}

#[test]
fn usual_slips_with_a_pasted_table_are_named() {
    let said = |table: &str| cautions(&settled(&with_table(table, "")));
    assert_eq!(
        said("dose;response\n0;12 %\n5;31,5%\n"),
        [
            "Column \"response\" was read as labels: \"12 %\" carries a percent sign, which is no part of a number. Remove the signs to use it as an outcome; the study's unit can say \"%\"."
        ]
    );
    assert_eq!(
        said("A,12\nA,13\nB,15\n"),
        [
            "The first row gives the columns their names, and one of them is \"12\". If the table has no such row, add one; else the first observation is missing from every answer."
        ]
    );
    assert_eq!(
        said("group   score\nA   12\nB   13\n"),
        [
            "The table has only one column; a study needs two, the groups and the outcome. Columns are separated by tabs, commas or semicolons, not by spaces."
        ]
    );
}

#[test]
fn an_empty_cell_is_missing_whatever_the_codes_are() {
    let engine = settled(&with_table("group,score\nA,12\nA,\nB,-9\nB,13\n", "missing = [\"-9\"]"));
    assert_eq!(
        results(&engine, "trial")["columns"][1],
        json!({ "name": "score", "type": "number", "missing": 2 })
    );
}
