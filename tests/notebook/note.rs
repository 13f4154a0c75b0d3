//! Notes, and what is common to the cells of every kind.

use super::expect::{cell, check, settled};
use levelwise::notebook::engine::Condition;

#[test]
fn a_note_is_settled_and_its_first_line_is_the_headline() {
    let engine = settled("levelwise = 1\n[[cell]]\nkind = \"note\"\ntext = \"# Aim\\nTo see.\"\n");
    let note = cell(&engine, 0);
    assert_eq!((note.condition, note.headline.as_str()), (Condition::Settled, "Aim"));
}

#[test]
fn what_cannot_be_read_is_said_in_its_cell_and_the_others_go_on() {
    let engine = check(
        r#"levelwise = 1
[[cell]]
kind = "note"
text = "fine"
[[cell]]
kind = "ntoe" # ! Did you mean "note"?
[[cell]]
kind = "note"
txt = "slip" # ! Did you mean "text"?
text = "x"
[[cell]]
kind = "note"
text = unquoted # ! cannot be read
[[cell]]
kind = "note" # ! The field "text" is missing
[[cell]]
kind = "note"
text = 5 # ! a text in quotes is needed
[[cell]]
kind = "note"
text = "last"
"#,
    );
    assert_eq!(cell(&engine, 0).condition, Condition::Settled);
    assert_eq!(cell(&engine, 6).condition, Condition::Settled);
}

#[test]
fn two_cells_with_one_name_circles_and_unknown_cells_are_named() {
    check(
        r#"levelwise = 1
[[cell]]
kind = "note"
name = "a"
text = "x"
[[cell]]
kind = "note"
name = "a" # ! Two cells are called "a"
text = "x"
[[cell]]
kind = "profile"
name = "itself"
study = "itself" # ! reads from itself
[[cell]]
kind = "profile"
study = "trail" # ! no cell is called "trail"
[[cell]]
kind = "profile"
study = "a" # ! is a note cell, but a study is needed
"#,
    );
}

#[test]
fn a_section_header_inside_a_cell_is_explained() {
    check(
        r#"levelwise = 1
[[cell]]
kind = "note"
text = "x"
[text.more] # ! cannot be read
y = 1
"#,
    );
}
