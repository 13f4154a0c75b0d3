//! What the engine recomputes, keeps and takes back.

use levelwise::notebook::engine::{Condition, Edit, Engine};
use levelwise::notebook::kinds::Kind;
use levelwise::notebook::sentence::Part;

const NOTES: &str = "levelwise = 1\n\n[[cell]]\nkind = \"note\"\ntext = \"one\"\n\n[[cell]]\nkind = \"note\"\nname = \"b\"\ntext = \"two\"\n";

fn opened(notebook: &str) -> Engine {
    let mut engine = Engine::new();
    engine.open(notebook).expect("a notebook");
    engine.settle();
    engine.take_changes();
    engine
}

fn apply(engine: &mut Engine, edit: Edit) -> Vec<u32> {
    engine.apply(edit).expect("accepted");
    engine.settle();
    engine.take_changes().recomputed
}

#[test]
fn opening_and_writing_gives_the_same_file() {
    assert_eq!(opened(NOTES).write(), NOTES);
}

#[test]
fn an_edit_recomputes_its_cell_and_undoing_it_finds_the_kept_answer() {
    let mut engine = opened(NOTES);
    let first = engine.order()[0];
    assert_eq!(
        apply(&mut engine, Edit::Field { cell: first, field: "text".into(), value: "new".into() }),
        [first]
    );
    assert_eq!(engine.cell(first).expect("a cell").headline, "new");
    assert_eq!(apply(&mut engine, Edit::Undo), [0u32; 0]);
    assert_eq!(engine.cell(first).expect("a cell").headline, "one");
    assert_eq!(apply(&mut engine, Edit::Redo), [0u32; 0]);
    assert_eq!(engine.cell(first).expect("a cell").headline, "new");
}

#[test]
fn comments_spacing_names_and_order_recompute_nothing() {
    let mut engine = opened(NOTES);
    let second = engine.order()[1];
    let text = "# why\nkind = \"note\"\n\ntext   = \"two\" # here\nname = \"c\"\n";
    assert_eq!(apply(&mut engine, Edit::Text { cell: second, text: text.into() }), [0u32; 0]);
    assert_eq!(apply(&mut engine, Edit::Rename { cell: second, name: "d".into() }), [0u32; 0]);
    assert!(engine.cell(second).expect("a cell").text.contains("# here\nname = \"d\""));
    assert_eq!(apply(&mut engine, Edit::Move { cell: second, to: 0 }), [0u32; 0]);
    assert_eq!(engine.order()[0], second);
}

#[test]
fn structural_edits_are_undone_one_by_one() {
    let mut engine = opened(NOTES);
    let [first, second] = engine.order()[..] else { panic!("two cells") };
    let added = apply(&mut engine, Edit::Add { kind: Kind::Note, after: Some(first) });
    assert_eq!(engine.order(), [first, added[0], second]);
    apply(&mut engine, Edit::Duplicate { cell: second });
    apply(&mut engine, Edit::Remove { cell: first });
    assert_eq!(engine.order().len(), 3);
    for expected in [4, 3, 2] {
        apply(&mut engine, Edit::Undo);
        assert_eq!(engine.order().len(), expected);
    }
    assert_eq!(engine.write(), NOTES);
    assert!(!engine.can_undo() && engine.can_redo());
}

#[test]
fn a_duplicate_gets_a_name_of_its_own_and_a_taken_name_is_refused() {
    let mut engine = opened(NOTES);
    let second = engine.order()[1];
    apply(&mut engine, Edit::Duplicate { cell: second });
    let copy = engine.order()[2];
    assert_eq!(engine.cell(copy).expect("a cell").name, Some("b 2"));
    let refused = engine.apply(Edit::Rename { cell: copy, name: "b".into() }).expect_err("taken");
    assert!(refused.to_string().contains("called \"b\" already"));
    assert_eq!(engine.cell(copy).expect("a cell").name, Some("b 2"));
}

#[test]
fn typing_on_in_one_cell_is_one_step() {
    let mut engine = opened(NOTES);
    let first = engine.order()[0];
    for text in
        ["kind = \"note\"\ntext = \"o\"", "kind = \"note\"\ntext = \"on\"", "kind = \"note\"\ntext = \"onw\""]
    {
        apply(&mut engine, Edit::Text { cell: first, text: text.into() });
    }
    apply(&mut engine, Edit::Undo);
    assert_eq!(engine.write(), NOTES);
}

#[test]
fn a_broken_text_is_kept_word_for_word_and_mended_from_the_kept_answer() {
    let mut engine = opened(NOTES);
    let first = engine.order()[0];
    let broken = "kind = \"note\"\ntext = \"one\n";
    assert_eq!(apply(&mut engine, Edit::Text { cell: first, text: broken.into() }), [0u32; 0]);
    let cell = engine.cell(first).expect("a cell");
    assert_eq!((cell.condition, &**cell.text), (Condition::NeedsYou, broken));
    assert!(engine.write().contains(broken));
    assert_eq!(
        apply(&mut engine, Edit::Text { cell: first, text: format!("{}\"\n", broken.trim_end()) }),
        [0u32; 0]
    );
    assert_eq!(engine.cell(first).expect("a cell").condition, Condition::Settled);
}

#[test]
fn a_sentence_edit_of_a_broken_text_is_refused_and_changes_nothing() {
    let mut engine = opened("levelwise = 1\n\n[[cell]]\nkind = \"note\"\ntext = \"open\n");
    let first = engine.order()[0];
    let before = engine.write();
    let refused = engine
        .apply(Edit::Field { cell: first, field: "text".into(), value: "x".into() })
        .expect_err("refused");
    assert!(refused.to_string().contains("Mend the text first"));
    assert_eq!(engine.write(), before);
    assert!(!engine.can_undo());
}

#[test]
fn a_pasted_table_stands_in_the_file_as_it_was_pasted() {
    let mut engine = Engine::new();
    apply(&mut engine, Edit::Table { cell: None, text: "arm\tscore\r\n\"a\\b\"\t1\r\nb\t2".into() });
    assert!(
        engine.write().contains("\ntable = '''\narm\tscore\n\"a\\b\"\t1\nb\t2\n'''\n"),
        "{}",
        engine.write()
    );
    let cell = engine.order()[0];
    apply(&mut engine, Edit::TableValue { cell, row: 1, column: 0, value: "'''".into() });
    assert_eq!(engine.table(cell).expect("a table").columns[0].text(1), "'''");
}

#[test]
fn a_pasted_table_with_one_outcome_and_one_grouping_column_fills_the_study() {
    let mut engine = Engine::new();
    apply(&mut engine, Edit::Table { cell: None, text: "arm,score\na,1\na,2\nb,4\nb,6".into() });
    let study = engine.cell(engine.order()[1]).expect("a cell");
    assert_eq!(
        (study.kind, study.condition),
        (Some(Kind::Study), Condition::Settled),
        "{:?}",
        study.diagnostics
    );
}

/// A notebook with two branches: a table with a study and its questions, and a power cell for itself.
const BRANCHES: &str = r#"levelwise = 1
[[cell]]
kind = "data"
name = "d"
table = '''
id,arm,score
p1,a,1
p2,a,2
p3,b,4
p4,b,6
p5,c,9
p6,c,7
'''
[[cell]]
kind = "study"
name = "s"
data = "d"
outcome = "score"
groups = "arm"
[[cell]]
kind = "overall"
name = "o"
study = "s"
[[cell]]
kind = "comparisons"
name = "c"
study = "s"
[[cell]]
kind = "power"
name = "p"
groups = 3
effect = 0.4
"#;

fn names(engine: &Engine, cells: &[u32]) -> Vec<String> {
    cells
        .iter()
        .map(|&id| engine.cell(id).and_then(|cell| cell.name.map(str::to_string)).unwrap_or_default())
        .collect()
}

fn changed_value(engine: &mut Engine, column: usize, value: &str) -> Vec<String> {
    let cell = engine.order()[0];
    let recomputed = apply(engine, Edit::TableValue { cell, row: 0, column, value: value.into() });
    names(engine, &recomputed)
}

#[test]
fn a_changed_value_recomputes_what_depends_on_it_and_nothing_else() {
    let mut engine = opened(BRANCHES);
    assert_eq!(changed_value(&mut engine, 2, "1.5"), ["d", "s", "o", "c"]);
    assert_eq!(changed_value(&mut engine, 2, "1"), [""; 0], "the old answers are found again");
}

#[test]
fn a_value_that_the_study_does_not_use_disturbs_nobody_beyond_it() {
    let mut engine = opened(BRANCHES);
    assert_eq!(changed_value(&mut engine, 0, "p0"), ["d", "s"]);
}

#[test]
fn a_field_recomputes_its_cell_only_unless_others_read_from_it() {
    let mut engine = opened(BRANCHES);
    let [_, study, _, comparisons, power] = engine.order()[..] else { panic!("five cells") };
    let set = |engine: &mut Engine, cell, field: &str, value: &str| {
        let recomputed = apply(engine, Edit::Field { cell, field: field.into(), value: value.into() });
        names(engine, &recomputed)
    };
    assert_eq!(set(&mut engine, comparisons, "adjust", "Holm"), ["c"]);
    assert_eq!(set(&mut engine, power, "groups", "4"), ["p"]);
    assert_eq!(set(&mut engine, study, "alpha", "1 %"), ["s", "o", "c"]);
    assert_eq!(
        set(&mut engine, study, "better", "sideways"),
        ["s"],
        "a study to be mended leaves the others waiting"
    );
    assert_eq!(engine.cell(comparisons).expect("a cell").condition, Condition::Waiting);
    assert_eq!(engine.cell(power).expect("a cell").condition, Condition::Settled);
}

#[test]
fn renaming_a_cell_takes_its_readers_along_and_recomputes_nothing() {
    let mut engine = opened(BRANCHES);
    let study = engine.order()[1];
    assert_eq!(apply(&mut engine, Edit::Rename { cell: study, name: "trial".into() }), [0u32; 0]);
    assert!(engine.write().matches("study = \"trial\"").count() == 2);
    assert!(
        engine.is_settled()
            && engine.cell(engine.order()[2]).expect("a cell").condition == Condition::Settled
    );
}

#[test]
fn edits_between_slices_are_taken_and_the_outcome_is_the_same() {
    let mut whole = opened(BRANCHES);
    let mut sliced = Engine::new();
    sliced.open(BRANCHES).expect("a notebook");
    assert!(!sliced.is_settled());
    assert!(sliced.advance());
    let cell = sliced.order()[1];
    let edit = Edit::Field { cell, field: "variances".into(), value: "equal".into() };
    sliced.apply(edit.clone()).expect("accepted");
    while sliced.advance() {}
    let recomputed = sliced.take_changes().recomputed;
    assert_eq!(
        names(&sliced, &recomputed),
        ["d", "s", "o", "c", "p"],
        "the study was not computed for the older ask"
    );
    whole.apply(edit).expect("accepted");
    whole.settle();
    let results = levelwise::notebook::results::results;
    assert_eq!(results(&whole), results(&sliced));
}

#[test]
fn a_report_made_meanwhile_leaves_an_older_answer_out_and_says_so() {
    let mut engine = opened(BRANCHES);
    let missing = |engine: &Engine| {
        levelwise::notebook::report::document(engine, None).matches("still being computed").count()
    };
    assert_eq!(missing(&engine), 0);
    let [_, study, ..] = engine.order()[..] else { panic!("five cells") };
    let edit = Edit::Field { cell: study, field: "alpha".into(), value: "1 %".into() };
    engine.apply(edit).expect("accepted");
    assert_eq!(missing(&engine), 3, "the study and the two that read from it");
    engine.settle();
    assert_eq!(missing(&engine), 0);
}

#[test]
fn deleting_the_study_leaves_its_readers_waiting_for_a_name_and_undo_settles_them_from_kept_answers() {
    let mut engine = opened(BRANCHES);
    let study = engine.order()[1];
    assert_eq!(apply(&mut engine, Edit::Remove { cell: study }), [0u32; 0]);
    let overall = engine.order()[1];
    assert_eq!(engine.cell(overall).expect("a cell").condition, Condition::NeedsYou);
    assert_eq!(apply(&mut engine, Edit::Undo), [0u32; 0]);
    assert_eq!(engine.cell(overall).expect("a cell").condition, Condition::Settled);
}

/// A value typed wrong where decimals have a comma: "14,9x" is one text, and stays one when the blank is shown and sent again.
#[test]
fn a_text_with_a_comma_in_a_list_survives_its_way_through_the_blank() {
    let mut engine = opened(
        "levelwise = 1\n[[cell]]\nkind = \"data\"\nname = \"d\"\ntable = \"a;b\\nx;1,5\\ny;14,9x\\n\"\n",
    );
    let cell = engine.order()[0];
    for (typed, written) in
        [("14,9x;", "[\"14,9x\"]"), ("14,9x; NA", "[\"14,9x\", \"NA\"]"), ("NA, -", "[\"NA\", \"-\"]")]
    {
        let mut typed = typed.to_owned();
        for _ in 0..2 {
            apply(&mut engine, Edit::Field { cell, field: "missing".into(), value: typed.clone() });
            assert!(engine.write().contains(&format!("missing = {written}")), "{typed}: {}", engine.write());
            let sentence = engine.cell(cell).expect("a cell").sentence;
            let blank = sentence.iter().find_map(|part| match part {
                Part::Blank(blank) if blank.field == "missing" => Some(blank.value.clone()),
                _ => None,
            });
            typed = blank.expect("the blank");
        }
    }
}
