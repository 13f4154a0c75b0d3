//! Bad input, one test a kind: what is wrong is said on its cell, the other cells settle, and everything typed stands in
//! the file word for word. The finer points of each message are in the files of the kinds.

use super::expect::{cell, named, settled};
use levelwise::notebook::engine::{Condition, Edit, Engine, LARGEST_CELL};

/// A note before the cells in question and a study of its own after them: both must settle whatever is between.
fn around(cells: &str) -> String {
    format!(
        r#"levelwise = 1

[[cell]]
kind = "note"
name = "aim"
text = "To see." # kept

{cells}[[cell]]
kind = "data"
name = "sound"
table = """
g,y
a,1
a,2
b,4
b,5.5
"""

[[cell]]
kind = "study"
name = "good"
data = "sound"
outcome = "y"
groups = "g"

[[cell]]
kind = "overall"
name = "answer"
study = "good"
"#
    )
}

/// A data cell called "raw" with this table, a study called "trial" of it with these fields, and a comparison of that.
fn trial(table: &str, fields: &str) -> String {
    let fields = if fields.is_empty() { String::new() } else { format!("{}\n", fields.trim_end()) };
    format!(
        "[[cell]]\nkind = \"data\"\nname = \"raw\"\ntable = '''\n{table}'''\n\n[[cell]]\nkind = \"study\"\nname = \"trial\"\ndata = \"raw\"\noutcome = \"score\"\ngroups = \"dose\"\n{fields}\n[[cell]]\nkind = \"comparisons\"\nname = \"pairs\"\nstudy = \"trial\"\n\n"
    )
}

/// Settles `cells` among sound ones. `bad` must need mending with this message on these words of its text; the cells
/// called `waiting` must wait; all others must be settled; and the file must be written as it was read.
fn mend(cells: &str, bad: &str, words: &str, message: &str, waiting: &[&str]) -> Engine {
    let notebook = around(cells);
    let engine = settled(&notebook);
    assert_eq!(engine.write(), notebook);
    for id in engine.order() {
        let cell = engine.cell(id).expect("a cell");
        let name = cell.name.unwrap_or_default();
        let expected = match name {
            name if name == bad => Condition::NeedsYou,
            name if waiting.contains(&name) => Condition::Waiting,
            _ => Condition::Settled,
        };
        assert_eq!(cell.condition, expected, "{name}: {:?}", cell.diagnostics);
    }
    let problem = &named(&engine, bad).diagnostics[0];
    assert_eq!(&named(&engine, bad).text[problem.span.clone()], words);
    assert!(problem.message.contains(message), "{}", problem.message);
    engine
}

const DOSES: &str = "dose,score\nlow,1\nlow,2\nmiddle,3\nmiddle,4.5\nhigh,4\nhigh,6\n";

#[test]
fn an_empty_table() {
    mend(&trial("", ""), "raw", "'''\n'''", "The table is empty. Put in a header row", &["trial", "pairs"]);
}

#[test]
fn a_header_alone() {
    let message = "The table has a header (line 1) but no rows. Add at least one row";
    mend(&trial("dose,score\n", ""), "raw", "dose,score", message, &["trial", "pairs"]);
}

#[test]
fn one_level() {
    let message = "All rows have the level \"low\"; a comparison needs at least 2 levels.";
    mend(&trial("dose,score\nlow,1\nlow,2\n", ""), "trial", "\"dose\"", message, &["pairs"]);
}

#[test]
fn a_level_with_one_row() {
    let table = format!("{DOSES}highest,9\n");
    let message = "level \"highest\" has 1 observation; unequal variances need at least 2. Add data, leave the level out";
    let engine = mend(&trial(&table, ""), "pairs", "\"trial\"", message, &[]);
    let study = &named(&engine, "trial").outcome.expect("an outcome").answer;
    assert!(study.cautions.iter().any(|caution| caution.starts_with("Level \"highest\" has 1 observation")));
    // With one variance for all, its mean can be compared, and the study says on what ground.
    let engine = settled(&around(&trial(&table, "variances = \"equal\"")));
    assert_eq!(named(&engine, "pairs").condition, Condition::Settled);
    let study = &named(&engine, "trial").outcome.expect("an outcome").answer;
    assert!(study.cautions.iter().any(|caution| caution.contains("its spread is not seen but taken to be")));
}

#[test]
fn a_level_in_levels_that_no_row_has() {
    let message = "levels: no row has the level \"midle\" in column \"dose\". Did you mean \"middle\"?";
    let fields = "levels = [\"low\", \"midle\", \"high\"]";
    mend(&trial(DOSES, fields), "trial", "\"midle\"", message, &["pairs"]);
}

#[test]
fn all_values_equal() {
    let table = "dose,score\nlow,7\nlow,7.0\nhigh,7\nhigh,7\n";
    let message = "All values of \"score\" are 7, so there is nothing to compare.";
    mend(&trial(table, ""), "trial", "\"score\"", message, &["pairs"]);
}

#[test]
fn a_missing_outcome() {
    let cells = trial(DOSES, "").replace("outcome = \"score\"\n", "");
    mend(&cells, "trial", "\"study\"", "The field \"outcome\" is missing", &["pairs"]);
    let cells = trial("dose,score\nlow,NA\nlow,\nhigh,3\nhigh,4\n", "");
    let message = "Level \"low\" has no value to analyse: 2 rows received, 2 missing, 0 excluded.";
    mend(&cells, "trial", "\"dose\"", message, &["pairs"]);
}

#[test]
fn text_in_a_number_column() {
    let table = DOSES.replace("4.5", "4.5 mg");
    let message =
        "Row 4, column \"score\": \"4.5 mg\" is not a number. Correct it, or list it under missing.";
    mend(&trial(&table, ""), "trial", "\"score\"", message, &["pairs"]);
    let cells =
        trial(&table, "").replace("name = \"raw\"", "name = \"raw\"\ncolumns = { score = \"number\" }");
    mend(&cells, "raw", "middle,4.5 mg", message, &["trial", "pairs"]);
}

#[test]
fn numbers_like_1e400() {
    let message = "Row 4, column \"score\": \"1e400\" is too large; numbers go up to about 1.8e308.";
    mend(&trial(&DOSES.replace("4.5", "1e400"), ""), "trial", "\"score\"", message, &["pairs"]);
    let power = "[[cell]]\nkind = \"power\"\nname = \"plan\"\ngroups = 3\neffect = 1e400\n\n";
    mend(power, "plan", "1e400", "floating-point number overflowed", &[]);
    // The square of 1e300 is none either.
    let table = "dose,score\nlow,1e300\nlow,-1e300\nhigh,1\nhigh,2\n";
    mend(&trial(table, ""), "trial", "\"score\"", "too large to be squared", &["pairs"]);
}

#[test]
fn two_cells_with_one_name() {
    let twice = "[[cell]]\nkind = \"note\"\nname = \"twin\"\ntext = \"one\"\n\n[[cell]]\nkind = \"note\"\nname = \"twin\"\ntext = \"two\"\n\n";
    let notebook = around(twice);
    let engine = settled(&notebook);
    assert_eq!(engine.write(), notebook);
    let conditions: Vec<Condition> = (0..6).map(|place| cell(&engine, place).condition).collect();
    let sound = Condition::Settled;
    assert_eq!(conditions, [sound, sound, Condition::NeedsYou, sound, sound, sound]);
    let second = cell(&engine, 2);
    assert!(second.diagnostics[0].message.contains("Two cells are called \"twin\""));
    assert_eq!(&second.text[second.diagnostics[0].span.clone()], "\"twin\"");
}

#[test]
fn a_cell_that_reads_from_itself() {
    let itself = "[[cell]]\nkind = \"profile\"\nname = \"loop\"\nstudy = \"loop\"\n\n";
    mend(itself, "loop", "\"loop\"", "reads from itself", &[]);
}

#[test]
fn an_unknown_field_column_level_or_choice_names_the_nearest_known_one() {
    let with = |fields: &str| trial(DOSES, fields);
    mend(&with("contrl = \"low\""), "trial", "contrl", "Did you mean \"control\"?", &["pairs"]);
    let cells = with("").replace("outcome = \"score\"", "outcome = \"scroe\"");
    mend(&cells, "trial", "\"scroe\"", "Did you mean \"score\"?", &["pairs"]);
    let cells = with("").replace("study = \"trial\"\n", "study = \"trial\"\nadjust = \"Tuckey\"\n");
    mend(&cells, "pairs", "\"Tuckey\"", "Did you mean \"Tukey\"?", &[]);
    let contrasts = "study = \"trial\"\nfamily = \"contrasts\"\ncontrasts = { late = \"hihg - low\" }\n";
    let cells = with("").replace("study = \"trial\"\n", contrasts);
    mend(&cells, "pairs", "hihg", "Did you mean \"high\"?", &[]);
}

#[test]
fn toml_that_does_not_parse() {
    let broken = "[[cell]]\nkind = \"study\"\nname = \"half\"\nlevels = [\"low\", \"hi\n\n";
    let notebook = around(broken);
    let mut engine = settled(&notebook);
    assert_eq!(engine.write(), notebook);
    let half = named(&engine, "half");
    assert_eq!(half.condition, Condition::NeedsYou);
    assert!(half.diagnostics[0].message.contains("cannot be read"), "{:?}", half.diagnostics);
    assert_eq!(named(&engine, "answer").condition, Condition::Settled);
    // A sound cell broken while typing keeps its text too, and the cells before it their answers.
    let study = named(&engine, "good").id;
    let text = "kind = \"study\"\nname = \"good\"\ndata = \"sound\noutcome = \"y\"\n".to_owned();
    engine.apply(Edit::Text { cell: study, text: text.clone() }).expect("typing is always taken");
    engine.settle();
    assert_eq!(**engine.cell(study).expect("the study").text, *text);
    assert_eq!(named(&engine, "good").condition, Condition::NeedsYou);
    assert_eq!(named(&engine, "sound").condition, Condition::Settled);
    assert_eq!(named(&engine, "answer").condition, Condition::Waiting);
}

#[test]
fn a_contrast_that_does_not_sum_to_zero() {
    for (written, words, message) in [
        ("\"high - low/2\"", "\"high - low/2\"", "the coefficients sum to 0.5 and must sum to 0"),
        ("{ high = 1, low = -2 }", "{ high = 1, low = -2 }", "the coefficients sum to -1 and must sum to 0"),
        ("[1, 1, 1]", "[1, 1, 1]", "the coefficients sum to 3 and must sum to 0"),
    ] {
        let contrasts =
            format!("study = \"trial\"\nfamily = \"contrasts\"\ncontrasts = {{ late = {written} }}\n");
        let cells = trial(DOSES, "").replace("study = \"trial\"\n", &contrasts);
        mend(&cells, "pairs", words, message, &[]);
    }
}

#[test]
fn scores_that_are_not_strictly_increasing() {
    let levels = "levels = [\"low\", \"middle\", \"high\"]\n";
    let fields = format!("{levels}scores = [0, 15, 15]");
    let message = "scores: 15 follows 15, but scores must increase from level to level.";
    mend(&trial(DOSES, &fields), "trial", "15", message, &["pairs"]);
    // Scores of the trend's own are held to the same.
    let trend = "[[cell]]\nkind = \"trend\"\nname = \"dose\"\nstudy = \"trial\"\nscores = [0, 30, 15]\n\n";
    let cells = format!("{}{trend}", trial(DOSES, levels));
    mend(&cells, "dose", "15", "The scores must be strictly increasing", &[]);
}

#[test]
fn a_control_that_is_no_level() {
    let message = "control: \"lowest\" is not one of the levels";
    mend(&trial(DOSES, "control = \"lowest\""), "trial", "\"lowest\"", message, &["pairs"]);
}

#[test]
fn a_notebook_written_by_a_newer_version() {
    let later = "[[cell]]\nkind = \"forest plot\"\nname = \"later\"\nof = [1, 2]\n\n";
    let notebook = around(later).replace("levelwise = 1", "levelwise = 2");
    let engine = settled(&notebook);
    assert_eq!(engine.write(), notebook);
    let notice = engine.notice().expect("a remark");
    assert!(notice.starts_with(
        "This notebook was written by a newer version (format 2; this program reads format 1)."
    ));
    assert_eq!(named(&engine, "later").condition, Condition::NeedsYou);
    assert_eq!(named(&engine, "answer").condition, Condition::Settled);
}

/// 200 MB are read (the time and memory they take are in the developers' notes); a cell beyond the limit is kept unread.
#[test]
fn a_file_of_200_mb_and_more() {
    const { assert!(LARGEST_CELL > 200_000_000) };
    let table = format!("{}\n", "low,1;".repeat(LARGEST_CELL / 6 + 1));
    let notebook = around(&trial(&table, ""));
    let engine = settled(&notebook);
    assert!(engine.write() == notebook, "the text is not what it was");
    let raw = named(&engine, "raw");
    assert_eq!(raw.condition, Condition::NeedsYou);
    assert_eq!(
        raw.diagnostics[0].message,
        "This cell has 257 MB, and a cell can have at most 256 MB. Its text is kept as it is, but not read. Leave out rows or columns that are not needed, or split the table."
    );
    assert_eq!(raw.diagnostics[0].span, 0.."kind = \"data\"".len());
    assert_eq!(named(&engine, "pairs").condition, Condition::Waiting);
    assert_eq!(named(&engine, "answer").condition, Condition::Settled);
}
