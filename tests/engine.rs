//! What the engine recomputes, keeps and takes back.

use levelwise::notebook::engine::{Condition, Edit, Engine};
use levelwise::notebook::kinds::Kind;

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
