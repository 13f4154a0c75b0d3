//! Long work in the engine. No kind is asked here: the tests begin the work themselves, in place of a note's outcome.

use super::{Condition, Edit, Engine, Stage};
use crate::answer::Answer;
use crate::methods::slices::{Advance, InSlices, Progress};
use crate::notebook::diagnostics::Diagnostic;
use crate::notebook::outcome::{Fingerprint, Outcome};
use crate::notebook::work::Evaluation;
use std::sync::Arc;

const NOTES: &str = "levelwise = 1\n\n[[cell]]\nkind = \"note\"\nname = \"a\"\ntext = \"one\"\n\n[[cell]]\nkind = \"note\"\nname = \"b\"\ntext = \"two\"\n";

/// The sum of the squares below `end`, `slice` of them at a time; `_alive` is shared with the test, which sees by it whether
/// the work has been dropped.
#[derive(Debug)]
struct Squares {
    at: u64,
    end: u64,
    slice: u64,
    sum: u64,
    _alive: Arc<()>,
}

impl InSlices for Squares {
    type Result = u64;

    fn advance(&mut self) -> Advance<u64> {
        let to = (self.at + self.slice).min(self.end);
        self.sum += (self.at..to).map(|i| i * i).sum::<u64>();
        self.at = to;
        if to == self.end {
            return Advance::Done(self.sum);
        }
        Advance::Working(Progress { done: to as f64 / self.end as f64, estimate: None })
    }
}

fn squares(slice: u64, alive: &Arc<()>) -> Evaluation {
    let work = Squares { at: 0, end: 1000, slice, sum: 0, _alive: alive.clone() };
    // Tenths, so that most slices leave the line as it is.
    let line = |progress: &Progress| format!("Working: {} tenths.", (10.0 * progress.done) as u32);
    Evaluation::long(work, line, |sum| Outcome::settled(Answer::new(sum.to_string()), sum.into()))
}

/// An engine in which the first note is long work of this slice, and the second is settled.
fn engine(slice: u64, alive: &Arc<()>) -> Engine {
    let mut engine = Engine::new();
    engine.open(NOTES).expect("a notebook");
    begin(&mut engine, slice, alive);
    assert!(engine.advance(), "what is quickly known comes first");
    engine.take_changes();
    assert_eq!(engine.cell(engine.order()[1]).expect("a cell").condition, Condition::Settled);
    engine
}

fn begin(engine: &mut Engine, slice: u64, alive: &Arc<()>) {
    engine.begin(0, key(engine), squares(slice, alive));
}

fn key(engine: &Engine) -> Fingerprint {
    match engine.stage(0) {
        Stage::Ready(key, _) => key,
        _ => panic!("the first cell is to be computed"),
    }
}

/// The first cell's condition and headline.
fn first(engine: &Engine) -> (Condition, String) {
    let cell = engine.cell(engine.order()[0]).expect("a cell");
    (cell.condition, cell.headline)
}

fn text(engine: &mut Engine, cell: usize, text: &str) {
    let cell = engine.order()[cell];
    engine.apply(Edit::Text { cell, text: text.into() }).expect("accepted");
}

#[test]
fn the_outcome_is_the_same_for_every_slicing_and_is_computed_once() {
    for slice in [1, 7, 64, 999, 1000, 5000] {
        let alive = Arc::new(());
        let mut engine = engine(slice, &alive);
        let mut slices = 0;
        while engine.advance() {
            slices += 1;
        }
        assert_eq!(slices, 1000_u64.div_ceil(slice));
        assert_eq!(first(&engine), (Condition::Settled, "332833500".to_string()));
        assert_eq!(engine.take_changes().recomputed, [engine.order()[0]]);
        assert_eq!(Arc::strong_count(&alive), 1, "the work is gone");
    }
}

#[test]
fn a_cell_has_changed_only_when_its_line_has() {
    let mut engine = engine(10, &Arc::new(()));
    let mut lines = Vec::new();
    for slice in 1..100 {
        assert!(engine.advance());
        let changes = engine.take_changes();
        assert_eq!(changes.recomputed, [0; 0]);
        if !changes.changed.is_empty() {
            assert_eq!(changes.changed, [engine.order()[0]]);
            let cell = engine.cell(engine.order()[0]).expect("a cell");
            assert_eq!((cell.condition, cell.progress), (Condition::Working, Some(cell.headline.as_str())));
            lines.push((slice, cell.headline));
        }
    }
    let tenths: Vec<_> = std::iter::once(12).chain((20..100).step_by(10)).collect();
    let expected: Vec<_> =
        tenths.iter().map(|slice| (*slice, format!("Working: {} tenths.", slice / 10))).collect();
    assert_eq!(lines, expected, "quiet for the first slices, then a line for every tenth");
    assert!(engine.advance() && !engine.advance());
    assert_eq!(engine.cell(engine.order()[0]).expect("a cell").progress, None);
}

#[test]
fn the_answer_before_stays_in_sight_until_the_new_one_is_there() {
    let mut engine = Engine::new();
    engine.open(NOTES).expect("a notebook");
    engine.settle();
    text(&mut engine, 0, "kind = \"note\"\nname = \"a\"\ntext = \"new\"\n");
    begin(&mut engine, 10, &Arc::new(()));
    let shown = |engine: &Engine| {
        let cell = engine.cell(engine.order()[0]).expect("a cell");
        (cell.headline, cell.outcome.expect("an outcome").answer.headline.clone())
    };
    assert_eq!(shown(&engine), ("one".into(), "one".into()));
    (0..50).for_each(|_| assert!(engine.advance()));
    assert_eq!(shown(&engine), ("Working: 5 tenths.".into(), "one".into()));
    engine.settle();
    assert_eq!(shown(&engine), ("332833500".into(), "332833500".into()));
}

#[test]
fn an_edit_elsewhere_lets_the_work_go_on_and_so_does_a_comment() {
    let alive = Arc::new(());
    let mut engine = engine(10, &alive);
    (0..50).for_each(|_| assert!(engine.advance()));
    text(&mut engine, 1, "kind = \"note\"\nname = \"b\"\ntext = \"three\"\n");
    text(&mut engine, 0, "kind = \"note\"\nname = \"c\"\ntext = \"one\" # the same\n");
    engine.apply(Edit::Move { cell: engine.order()[0], to: 1 }).expect("accepted");
    engine.apply(Edit::Move { cell: engine.order()[1], to: 0 }).expect("accepted");
    assert_eq!(Arc::strong_count(&alive), 2);
    assert_eq!(first(&engine), (Condition::Working, "Working: 5 tenths.".into()));
    let mut slices = 0;
    while engine.advance() {
        slices += 1;
    }
    assert_eq!(slices, 51, "the other cell, and what was left of the work");
    assert_eq!(first(&engine).1, "332833500");
}

#[test]
fn work_whose_ask_has_changed_is_dropped_and_so_is_that_of_a_removed_cell() {
    let alive = Arc::new(());
    let mut changed = engine(10, &alive);
    (0..50).for_each(|_| assert!(changed.advance()));
    changed.take_changes();
    text(&mut changed, 0, "kind = \"note\"\nname = \"a\"\ntext = \"other\"\n");
    assert_eq!(Arc::strong_count(&alive), 1);
    assert_eq!(first(&changed), (Condition::Working, String::new()), "the line is gone with the work");
    changed.settle();
    assert_eq!(first(&changed).1, "other");

    let mut removed = engine(10, &alive);
    assert!(removed.advance());
    removed.apply(Edit::Remove { cell: removed.order()[0] }).expect("accepted");
    assert_eq!(Arc::strong_count(&alive), 1);
    assert!(removed.is_settled() && !removed.advance());

    let mut opened = engine(10, &alive);
    opened.open("levelwise = 1\n").expect("a notebook");
    assert_eq!(Arc::strong_count(&alive), 1);
}

#[test]
fn undoing_an_edit_finds_the_answer_that_the_work_had_come_to() {
    let mut engine = engine(10, &Arc::new(()));
    engine.settle();
    text(&mut engine, 0, "kind = \"note\"\nname = \"a\"\ntext = \"other\"\n");
    engine.settle();
    engine.take_changes();
    engine.apply(Edit::Undo).expect("undone");
    assert_eq!(first(&engine), (Condition::Settled, "332833500".into()));
    assert!(!engine.advance());
    assert_eq!(engine.take_changes().recomputed, [0; 0]);
}

#[test]
fn a_copy_waits_for_the_same_work() {
    let alive = Arc::new(());
    let mut engine = engine(10, &alive);
    (0..50).for_each(|_| assert!(engine.advance()));
    engine.apply(Edit::Duplicate { cell: engine.order()[0] }).expect("accepted");
    let copy = engine.order()[1];
    assert_eq!(engine.cell(copy).expect("a cell").headline, "Working: 5 tenths.");
    engine.apply(Edit::Remove { cell: engine.order()[0] }).expect("accepted");
    assert_eq!(Arc::strong_count(&alive), 2, "the copy still waits for it");
    let mut slices = 0;
    while engine.advance() {
        slices += 1;
    }
    assert_eq!((slices, first(&engine).1.as_str()), (50, "332833500"));
}

#[test]
fn a_diagnostic_of_the_work_speaks_of_the_text_as_it_stands() {
    let mend = || {
        let work = Squares { at: 0, end: 10, slice: 5, sum: 0, _alive: Arc::new(()) };
        let diagnostic = Diagnostic::new("Mend this.".to_string(), 0..4, None);
        Evaluation::long(work, |_| String::new(), |_| Outcome::mend(vec![diagnostic]))
    };
    let mut same = Engine::new();
    same.open(NOTES).expect("a notebook");
    same.begin(0, key(&same), mend());
    same.settle();
    assert_eq!(first(&same), (Condition::NeedsYou, "Mend this.".into()));

    let mut moved = Engine::new();
    moved.open(NOTES).expect("a notebook");
    moved.begin(0, key(&moved), mend());
    text(&mut moved, 0, "# A line more.\nkind = \"note\"\nname = \"a\"\ntext = \"one\"\n");
    moved.settle();
    assert_eq!(first(&moved), (Condition::Settled, "one".into()), "evaluated anew, by its kind");
}

#[test]
fn work_waits_while_a_cell_that_it_reads_from_is_computed_and_goes_on_if_that_comes_to_the_same() {
    let data = |id: &str| {
        format!(
            "kind = \"data\"\nname = \"d\"\ntable = \"id,arm,score\\n{id},a,1\\nq,a,2\\nr,b,4\\ns,b,6\\n\"\n"
        )
    };
    let notebook = format!(
        "levelwise = 1\n\n[[cell]]\n{}\n[[cell]]\nkind = \"study\"\nname = \"s\"\ndata = \"d\"\noutcome = \"score\"\ngroups = \"arm\"\n\n[[cell]]\nkind = \"overall\"\nstudy = \"s\"\n",
        data("p")
    );
    let alive = Arc::new(());
    let mut engine = Engine::new();
    engine.open(&notebook).expect("a notebook");
    assert!(engine.advance() && engine.advance());
    let Stage::Ready(key, _) = engine.stage(2) else { panic!("the test is to be computed") };
    engine.begin(2, key, squares(10, &alive));
    (0..50).for_each(|_| assert!(engine.advance()));
    engine.take_changes();
    text(&mut engine, 0, &data("x"));
    assert_eq!(Arc::strong_count(&alive), 2, "the study may come to the same");
    let mut slices = 0;
    while engine.advance() {
        slices += 1;
    }
    assert_eq!(slices, 2 + 50);
    assert_eq!(engine.take_changes().recomputed, engine.order());
    assert_eq!(engine.cell(engine.order()[2]).expect("a cell").headline, "332833500");
}
