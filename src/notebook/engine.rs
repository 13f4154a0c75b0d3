//! The engine: holds a notebook, takes edits, and keeps the answers current. An edit recomputes what depends on
//! it and nothing else: every outcome is kept under a fingerprint of its ask and of the values that it read.
//!
//! The engine works in slices: [`Engine::apply`] takes an edit and settles what is already known;
//! [`Engine::advance`] computes one cell, or does a slice of the work for a cell that takes longer than a moment. Between
//! slices it takes new edits.

mod cells;
mod edits;
mod running;
#[cfg(test)]
mod running_tests;

pub use edits::{Edit, Refused};

use super::ask::Ask;
use super::diagnostics::Diagnostic;
use super::document::Document;
use super::fields::Field;
use super::fields::Holds;
use super::graph::{Graph, Node};
use super::history::History;
use super::kept::{Keeper, Kept};
use super::kinds::{Kind, Read};
use super::outcome::{Fingerprint, Outcome, Value};
use super::sentence::{self, Around, Part};
use cells::Slot;
use running::Running;
use serde::Serialize;
use sha2::{Digest, Sha256};
use std::sync::Arc;

/// The most bytes of a cell that is read. While a table is read some ten times its size is in use, and the page's engine
/// has 4 GB of memory.
pub const LARGEST_CELL: usize = 256_000_000;

/// The four conditions of a cell.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
pub enum Condition {
    /// Its answer is current.
    #[serde(rename = "settled")]
    Settled,
    /// It is being computed, or soon will be.
    #[serde(rename = "working")]
    Working,
    /// A cell that it reads from has no answer yet.
    #[serde(rename = "waiting")]
    Waiting,
    /// Its ask or its data must be mended.
    #[serde(rename = "needs you")]
    NeedsYou,
}

impl Condition {
    /// The condition as people read it.
    pub fn words(self) -> &'static str {
        match self {
            Condition::Settled => "settled",
            Condition::Working => "working",
            Condition::Waiting => "waiting",
            Condition::NeedsYou => "needs you",
        }
    }
}

/// What changed since it was last asked.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Changes {
    /// Cells whose view is no longer the same, in the notebook's order.
    pub changed: Vec<u32>,
    /// Cells that were computed (not found kept), in the order of computing.
    pub recomputed: Vec<u32>,
}

/// A cell as it is shown.
#[derive(Debug)]
pub struct CellView<'a> {
    pub id: u32,
    pub kind: Option<Kind>,
    pub name: Option<&'a str>,
    pub text: &'a Arc<str>,
    pub condition: Condition,
    pub diagnostics: &'a [Diagnostic],
    /// The latest outcome; an outcome shown while the cell is working may be out of date.
    pub outcome: Option<&'a Arc<Outcome>>,
    pub sentence: Vec<Part>,
    /// How far long work for the cell is, in a sentence.
    pub progress: Option<&'a str>,
    /// The cell in one line; `progress` while there is such.
    pub headline: String,
}

/// A notebook with its answers.
#[derive(Debug, Default)]
pub struct Engine {
    preamble: String,
    notice: Option<String>,
    slots: Vec<Slot>,
    next_id: u32,
    graph: Graph,
    history: History,
    keeper: Keeper,
    /// Long work in the order in which it was begun.
    running: Vec<Running>,
    recomputed: Vec<u32>,
}

impl Engine {
    /// An engine with an empty notebook.
    pub fn new() -> Self {
        Self { preamble: Document::empty().preamble, ..Self::default() }
    }

    /// Opens a notebook's text in place of the present one. Cells that cannot be read stand as they are.
    ///
    /// # Errors
    /// A sentence, when the text is no notebook at all; the present one stays.
    pub fn open(&mut self, file: &str) -> Result<(), String> {
        let document = Document::read(file)?;
        self.preamble = document.preamble;
        self.notice = document.notice;
        self.history = History::default();
        self.slots.clear();
        for cell in document.cells {
            let id = self.new_id();
            self.slots.push(Slot::new(id, cell.text.into(), cell.line));
        }
        self.relink();
        Ok(())
    }

    /// The notebook as a file's text.
    pub fn write(&self) -> String {
        Document::write(&self.preamble, self.slots.iter().map(|slot| &*slot.text))
    }

    /// A remark on the notebook as a whole.
    pub fn notice(&self) -> Option<&str> {
        self.notice.as_deref()
    }

    /// The cells' identities, in order.
    pub fn order(&self) -> Vec<u32> {
        self.slots.iter().map(|slot| slot.id).collect()
    }

    pub fn can_undo(&self) -> bool {
        self.history.can_undo()
    }

    pub fn can_redo(&self) -> bool {
        self.history.can_redo()
    }

    /// Whether nothing is left to compute.
    pub fn is_settled(&self) -> bool {
        self.slots.iter().all(|slot| slot.condition != Condition::Working)
    }

    /// Takes the outcome that has been computed for the cell at `index`.
    fn finish(&mut self, index: usize, key: Fingerprint, outcome: Outcome) {
        let value = outcome.value.as_ref().map(Value::fingerprint);
        let kept = Kept { outcome: Arc::new(outcome), value };
        self.keeper.keep(key, kept.clone());
        self.recomputed.push(self.slots[index].id);
        self.slots[index].settle(key, kept);
        self.settle_known();
    }

    /// Computes until nothing is left.
    pub fn settle(&mut self) {
        while self.advance() {}
    }

    /// Whether an answer was computed since changes were last taken; otherwise what changed meanwhile is progress.
    pub fn has_new_answers(&self) -> bool {
        !self.recomputed.is_empty()
    }

    /// What changed since this was last called.
    pub fn take_changes(&mut self) -> Changes {
        let changed = self
            .slots
            .iter_mut()
            .filter_map(|slot| std::mem::take(&mut slot.changed).then_some(slot.id))
            .collect();
        Changes { changed, recomputed: std::mem::take(&mut self.recomputed) }
    }

    /// The cell as it is shown.
    pub fn cell(&self, id: u32) -> Option<CellView<'_>> {
        let slot = self.slots.iter().find(|slot| slot.id == id)?;
        Some(CellView {
            id,
            kind: slot.kind,
            name: slot.name.as_deref(),
            text: &slot.text,
            condition: slot.condition,
            diagnostics: &slot.diagnostics,
            outcome: slot.outcome.as_ref(),
            sentence: self.sentence(slot),
            progress: self.progress(slot.awaits.as_ref()),
            headline: self.headline(slot),
        })
    }

    /// Line of the opened file on which the cell's text began.
    pub fn line(&self, id: u32) -> usize {
        self.slots.iter().find(|slot| slot.id == id).map_or(1, |slot| slot.line)
    }

    fn sentence(&self, slot: &Slot) -> Vec<Part> {
        let Some(ask) = &slot.ask else { return Vec::new() };
        let problems: Vec<&str> =
            slot.diagnostics.iter().filter_map(|problem| problem.field.as_deref()).collect();
        let cells = |field: &Field| self.names_for(field, slot.id);
        sentence::sentence(
            ask,
            &Around { outcome: slot.outcome.as_deref(), problems: &problems, cells: &cells },
        )
    }

    fn headline(&self, slot: &Slot) -> String {
        if let Some(progress) = self.progress(slot.awaits.as_ref()) {
            return progress.to_string();
        }
        match slot.condition {
            Condition::NeedsYou => {
                slot.diagnostics.first().map(|first| first.message.clone()).unwrap_or_default()
            }
            Condition::Waiting if slot.outcome.as_ref().is_none_or(|outcome| !outcome.waiting) => {
                let index = self.slots.iter().position(|other| other.id == slot.id).unwrap_or_default();
                let empty = |source: &&(&'static str, usize)| self.slots[source.1].value.is_none();
                let name = self.graph.reads[index]
                    .iter()
                    .find(empty)
                    .and_then(|(_, at)| self.slots[*at].name.clone());
                format!("Waits for \"{}\".", name.unwrap_or_default())
            }
            _ => slot.outcome.as_ref().map(|outcome| outcome.answer.headline.clone()).unwrap_or_default(),
        }
    }

    /// Names of the cells that `field` of the cell `reader` may read from.
    fn names_for(&self, field: &Field, reader: u32) -> Vec<String> {
        let Holds::Cell(kinds) = field.holds else { return Vec::new() };
        let fits = self
            .slots
            .iter()
            .filter(|slot| slot.id != reader && slot.kind.is_some_and(|kind| kinds.contains(&kind)));
        fits.filter_map(|slot| slot.name.clone()).collect()
    }

    fn new_id(&mut self) -> u32 {
        self.next_id += 1;
        self.next_id
    }

    /// Links the cells anew after a change of texts, and settles what is already known.
    fn relink(&mut self) {
        let nodes: Vec<Node> = self
            .slots
            .iter()
            .map(|slot| Node { kind: slot.kind, name: slot.name.as_deref(), ask: slot.ask.as_deref() })
            .collect();
        self.graph = Graph::link(&nodes);
        self.settle_known();
    }

    /// Gives every cell its condition, taking kept outcomes where they fit, and drops work that nobody waits for.
    fn settle_known(&mut self) {
        for index in self.graph.order.clone() {
            let stage = self.stage(index);
            let mut awaits = None;
            match stage {
                Stage::Current => self.slots[index].confirm(),
                Stage::Ready(key, _) => {
                    match self.keeper.find(&key).filter(|kept| self.slots[index].can_take(kept)) {
                        Some(kept) => self.slots[index].settle(key, kept),
                        None => {
                            awaits = Some(key);
                            self.slots[index].set_condition(Condition::Working, Vec::new());
                        }
                    }
                }
                Stage::Soon => self.slots[index].set_condition(Condition::Working, Vec::new()),
                Stage::Waiting => self.slots[index].clear(Condition::Waiting, Vec::new()),
                Stage::Broken(problems) => self.slots[index].clear(Condition::NeedsYou, problems),
            }
            // A progress line comes or goes with what is awaited.
            let shown = |key: &Option<Fingerprint>| self.progress(key.as_ref()).is_some();
            let changed =
                self.slots[index].awaits != awaits && (shown(&self.slots[index].awaits) || shown(&awaits));
            let slot = &mut self.slots[index];
            slot.awaits = awaits;
            slot.changed |= changed;
        }
        self.drop_pointless_work();
    }

    /// Where the cell at `index` stands, given where those that it reads from stand.
    fn stage(&self, index: usize) -> Stage {
        let slot = &self.slots[index];
        let mut problems = slot.problems.clone();
        problems.extend(self.graph.problems[index].iter().cloned());
        let Some(ask) = slot.ask.as_ref().filter(|_| problems.is_empty()) else {
            return Stage::Broken(problems);
        };
        let mut hasher = Sha256::new();
        hasher.update(slot.essence);
        let mut values = Vec::new();
        for &(field, source) in &self.graph.reads[index] {
            let source = &self.slots[source];
            match (&source.value, source.outcome.as_ref().and_then(|outcome| outcome.value.clone())) {
                _ if source.condition == Condition::Working => return Stage::Soon,
                (Some(print), Some(value)) => {
                    hasher.update(field);
                    hasher.update(print);
                    values.push((field, value));
                }
                _ => return Stage::Waiting,
            }
        }
        debug_assert_eq!(ask.references().len(), values.len());
        let key: Fingerprint = hasher.finalize().into();
        if slot.key == Some(key) { Stage::Current } else { Stage::Ready(key, Read::new(values)) }
    }
}

/// How far a cell is from its answer.
enum Stage {
    /// Its outcome is the one for its ask and what it reads.
    Current,
    /// It can be computed now.
    Ready(Fingerprint, Read),
    /// It can be computed once a cell that it reads from is.
    Soon,
    /// A cell that it reads from has nothing to hand over.
    Waiting,
    /// Its own text or links must be mended.
    Broken(Vec<Diagnostic>),
}

/// A parsed cell text.
fn parse(text: &str) -> (Option<Arc<Ask>>, Vec<Diagnostic>) {
    if text.len() > LARGEST_CELL {
        return (None, vec![too_large(text)]);
    }
    match Ask::parse(text) {
        Ok((ask, problems)) => (Some(Arc::new(ask)), problems),
        Err(problems) => (None, problems),
    }
}

/// A cell that is kept but not read, said on its first line.
fn too_large(text: &str) -> Diagnostic {
    let megabytes = |bytes: usize| bytes.div_ceil(1_000_000);
    let message = format!(
        "This cell has {} MB, and a cell can have at most {} MB. Its text is kept as it is, but not read. Leave out rows or columns that are not needed, or split the table.",
        megabytes(text.len()),
        LARGEST_CELL / 1_000_000
    );
    Diagnostic::new(message, 0..text.lines().next().map_or(0, str::len), None)
}
