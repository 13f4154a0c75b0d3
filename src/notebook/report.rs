//! A notebook's answers as one self-contained HTML document, and as plain text.

use super::engine::{CellView, Condition, Engine};
use super::kinds::Kind;
use super::sentence;
use crate::answer::report::{Content, Report, Section};
use crate::answer::{Block, report, text};

/// The report. `date` stands under its title as given.
pub fn document(engine: &Engine, date: Option<&str>) -> String {
    let cells: Vec<CellView> = engine.order().into_iter().filter_map(|id| engine.cell(id)).collect();
    let sentences: Vec<String> = cells.iter().map(in_words).collect();
    let title = cells
        .iter()
        .find(|cell| cell.kind == Some(Kind::Note))
        .map_or("Report", |note| note.headline.as_str());
    let sections = cells.iter().zip(&sentences).map(|(cell, sentence)| Section {
        name: cell.name,
        sentence,
        content: content(cell),
    });
    report::document(&Report { title, date, sections: sections.collect() })
}

/// The answers as plain text of the given width, cell after cell.
pub fn plain(engine: &Engine, width: usize) -> String {
    let cells = engine.order().into_iter().filter_map(|id| engine.cell(id));
    let mut all = String::new();
    for cell in cells {
        let kind = cell.kind.map_or("cell", Kind::name);
        let title = cell.name.map_or_else(|| kind.to_string(), |name| format!("{kind} \"{name}\""));
        all.push_str(&format!("— {title}: {}\n", cell.condition.words()));
        let sentence = in_words(&cell);
        if !sentence.is_empty() {
            all.push_str(&format!("{sentence}\n"));
        }
        match cell.outcome.filter(|outcome| outcome.diagnostics.is_empty()) {
            Some(outcome) => all.push_str(&text::answer(&outcome.answer, width)),
            None => all.push_str(&cell.headline),
        }
        all = all.trim_end().to_string();
        all.push_str("\n\n");
    }
    all
}

/// The cell's sentence; a note has none, it is its text.
fn in_words(cell: &CellView) -> String {
    match cell.kind {
        Some(Kind::Note) => String::new(),
        _ => sentence::in_words(&cell.sentence),
    }
}

fn content<'a>(cell: &CellView<'a>) -> Content<'a> {
    let answer = cell.outcome.filter(|outcome| outcome.diagnostics.is_empty()).map(|outcome| &outcome.answer);
    match answer {
        // What is in sight meanwhile is the answer to an older question, and a report does not say so.
        _ if cell.condition == Condition::Working => Content::Unanswered(vec![
            "It was still being computed when this report was made. Make the report again once the cell has settled.",
        ]),
        Some(answer) if cell.kind == Some(Kind::Note) => match answer.blocks.first() {
            Some(Block::Note(source)) => Content::Note(source),
            _ => Content::Answer(answer),
        },
        Some(answer) => Content::Answer(answer),
        None if cell.diagnostics.is_empty() => {
            Content::Unanswered(vec!["A cell that it reads from has no answer yet."])
        }
        None => {
            Content::Unanswered(cell.diagnostics.iter().map(|problem| problem.message.as_str()).collect())
        }
    }
}
