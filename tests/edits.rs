//! Whatever is typed, in whatever order: the engine does not panic, does not lose the texts of other cells, and every step can
//! be taken back.

use levelwise::notebook::engine::{Edit, Engine};
use levelwise::notebook::kinds::Kind;
use levelwise::notebook::results::results;
use proptest::prelude::*;

/// A small notebook with every kind of cell.
const NOTEBOOK: &str = r#"levelwise = 1

[[cell]]
kind = "note"
text = "Aim"

[[cell]]
kind = "data"
name = "d"
table = """
id,dose,score
1,0 mg,4.5
2,0 mg,5.5
3,5 mg,6
4,5 mg,7.25
5,9 mg,7
6,9 mg,9
"""

[[cell]]
kind = "summary"
name = "g"
groups = [{ level = "a", n = 5, mean = 1, sd = 1 }, { level = "b", n = 6, mean = 2, sd = 1.5 }]

[[cell]]
kind = "study"
name = "s"
data = "d"
outcome = "score"
groups = "dose"
scores = [0, 5, 9]
control = "0 mg"

[[cell]]
kind = "profile"
study = "s"

[[cell]]
kind = "overall"
study = "s"

[[cell]]
kind = "comparisons"
study = "s"
family = "contrasts"
contrasts = { "up" = "'9 mg' - '0 mg'" }

[[cell]]
kind = "trend"
study = "s"

[[cell]]
kind = "power"
groups = 3
effect = 0.4
"#;

/// What a person may type into a blank, the right thing among it.
fn typed() -> impl Strategy<Value = String> {
    let usual = [
        "",
        "s",
        "d",
        "g",
        "score",
        "dose",
        "id",
        "0 mg",
        "0 mg; 5 mg; 9 mg",
        "9 mg, 0 mg",
        "0, 5, 9",
        "9; 5; 0",
        "1e400",
        "-1",
        "0",
        "1",
        "0.05",
        "5 %",
        "0,05",
        "equal",
        "unequal",
        "Tukey",
        "Dunnett",
        "Games-Howell",
        "Scheffe",
        "all pairs",
        "each against control",
        "neighbours",
        "each against the rest",
        "contrasts",
        "given p-values",
        "a: 0.01\nb: 0.2",
        "x: '9 mg' - '0 mg'",
        "x: ('9 mg' + '5 mg')/2 - '0 mg'",
        "9 mg",
        "score > 6; too high",
        "(((",
        "greater",
        "less",
        "ranks",
        "power",
        "smallest effect",
        "2",
        "1000000",
        "a; 3; 1; 1\nb; 4; 2; 0.5",
        "\"",
        "'''",
        "\\",
        "\u{0}",
        "é🙂",
        "nan",
        "inf",
    ];
    prop_oneof![3 => proptest::sample::select(usual.to_vec()).prop_map(str::to_string), 1 => ".{0,12}"]
}

/// One edit, of the cell at a place modulo how many there are.
#[derive(Debug, Clone)]
struct Act {
    place: usize,
    what: u8,
    number: usize,
    text: String,
}

fn acts() -> impl Strategy<Value = Vec<Act>> {
    let act = (0usize..12, 0u8..12, 0usize..12, typed()).prop_map(|(place, what, number, text)| Act {
        place,
        what,
        number,
        text,
    });
    proptest::collection::vec(act, 1..12)
}

fn edit(engine: &Engine, act: &Act) -> Option<Edit> {
    let order = engine.order();
    let cell = *order.get(act.place % order.len().max(1))?;
    let text = act.text.clone();
    Some(match act.what {
        0 => Edit::Text { cell, text },
        1 => {
            let old = engine.cell(cell)?.text.to_string();
            let cut = old.char_indices().nth(act.number * 7).map_or(old.len(), |(at, _)| at);
            Edit::Text { cell, text: format!("{}{text}{}", &old[..cut], &old[cut..]) }
        }
        2 => Edit::Add { kind: Kind::ALL[act.number % Kind::ALL.len()], after: Some(cell) },
        3 => Edit::Duplicate { cell },
        4 => Edit::Remove { cell },
        5 => Edit::Move { cell, to: act.number },
        6 => Edit::Rename { cell, name: text },
        7 => Edit::TableValue { cell, row: act.number, column: act.place % 4, value: text },
        8 => Edit::Table { cell: act.number.is_multiple_of(2).then_some(cell), text },
        _ => {
            let fields = engine.cell(cell)?.kind?.table().fields;
            Edit::Field { cell, field: fields[act.number % fields.len()].name.to_string(), value: text }
        }
    })
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 300, ..ProptestConfig::default() })]

    #[test]
    fn any_edits_are_answered_and_can_all_be_taken_back(acts in acts()) {
        let mut engine = Engine::new();
        engine.open(NOTEBOOK).expect("a notebook");
        engine.settle();
        let answers = results(&engine);
        for act in &acts {
            let before = engine.write();
            let Some(edit) = edit(&engine, act) else { continue };
            if engine.apply(edit).is_err() {
                prop_assert_eq!(engine.write(), before, "a refused edit changes nothing");
            }
            engine.settle();
            prop_assert!(engine.is_settled());
            for id in engine.order() {
                let cell = engine.cell(id).expect("a cell");
                for problem in cell.diagnostics {
                    prop_assert!(cell.text.get(problem.span.clone()).is_some(), "{:?} lies inside the text", problem);
                    prop_assert!(!problem.message.is_empty());
                }
            }
        }
        while engine.can_undo() {
            engine.apply(Edit::Undo).expect("there is something to undo");
        }
        engine.settle();
        prop_assert_eq!(engine.write(), NOTEBOOK);
        // Diagnostics name lines of the opened file; everything else must be as it was.
        prop_assert_eq!(results(&engine)["cells"][3]["results"].clone(), answers["cells"][3]["results"].clone());
        prop_assert_eq!(results(&engine)["cells"][6].clone(), answers["cells"][6].clone());
    }

    #[test]
    fn any_text_opens_or_is_refused_and_what_opens_is_written_back(text in "(levelwise = 1\n)?(\\[\\[cell\\]\\]\n|kind = \"note\"\n|text = \"\"\"\n|\"\"\"\n|'''|.{0,20}\n){0,12}") {
        let mut engine = Engine::new();
        if engine.open(&text).is_ok() {
            engine.settle();
            let written = engine.write();
            let mut again = Engine::new();
            again.open(&written).expect("what was written opens");
            prop_assert_eq!(again.write(), written);
        }
    }
}
