//! One cell as the engine holds it.

use super::{Condition, parse};
use crate::notebook::ask::Ask;
use crate::notebook::diagnostics::Diagnostic;
use crate::notebook::kept::Kept;
use crate::notebook::kinds::Kind;
use crate::notebook::outcome::{Fingerprint, Outcome};
use sha2::{Digest, Sha256};
use std::sync::Arc;

/// A cell: its text, what was parsed from it, and its latest outcome.
#[derive(Debug)]
pub(super) struct Slot {
    pub id: u32,
    pub text: Arc<str>,
    /// Line of the opened file on which the text began.
    pub line: usize,
    pub ask: Option<Arc<Ask>>,
    /// What is wrong with the text itself.
    pub problems: Vec<Diagnostic>,
    /// Kind and name; while the text cannot be parsed, as far as its lines show them.
    pub kind: Option<Kind>,
    pub name: Option<String>,
    /// Fingerprint of the ask without its name.
    pub essence: Fingerprint,
    pub condition: Condition,
    pub diagnostics: Vec<Diagnostic>,
    /// What the outcome was made from.
    pub key: Option<Fingerprint>,
    /// What the outcome that is being computed is made from.
    pub awaits: Option<Fingerprint>,
    pub outcome: Option<Arc<Outcome>>,
    /// Fingerprint of the value handed on.
    pub value: Option<Fingerprint>,
    /// Whether the view is no longer what it was when changes were last taken.
    pub changed: bool,
}

impl Slot {
    pub fn new(id: u32, text: Arc<str>, line: usize) -> Self {
        let mut slot = Self {
            id,
            text: "".into(),
            line,
            ask: None,
            problems: Vec::new(),
            kind: None,
            name: None,
            essence: [0; 32],
            condition: Condition::Working,
            diagnostics: Vec::new(),
            key: None,
            awaits: None,
            outcome: None,
            value: None,
            changed: true,
        };
        slot.set_text(text);
        slot
    }

    /// Takes a new text. Diagnostics speak of places in the text, so an outcome that has some is made anew.
    pub fn set_text(&mut self, text: Arc<str>) {
        let (ask, problems) = parse(&text);
        match &ask {
            Some(ask) => {
                self.kind = Some(ask.kind);
                self.name = ask.name.clone();
                self.essence = Sha256::digest(ask.essence()).into();
            }
            None => {
                self.kind = line_value(&text, "kind").and_then(|kind| Kind::named(&kind)).or(self.kind);
                self.name = line_value(&text, "name").or(self.name.take());
            }
        }
        if self.outcome.as_ref().is_some_and(|outcome| !outcome.diagnostics.is_empty()) {
            self.key = None;
        }
        self.ask = ask;
        self.problems = problems;
        self.text = text;
        self.changed = true;
    }

    /// Whether a kept outcome fits the text as it stands: one with diagnostics speaks of another text's places.
    pub fn can_take(&self, kept: &Kept) -> bool {
        kept.outcome.diagnostics.is_empty()
    }

    /// Takes the outcome made from `key`.
    pub fn settle(&mut self, key: Fingerprint, kept: Kept) {
        self.key = Some(key);
        self.value = kept.value;
        self.outcome = Some(kept.outcome);
        self.changed = true;
        self.confirm();
    }

    /// Sets the condition that the outcome at hand gives.
    pub fn confirm(&mut self) {
        let Some(outcome) = &self.outcome else { return };
        let condition = match () {
            () if !outcome.diagnostics.is_empty() => Condition::NeedsYou,
            () if outcome.waiting => Condition::Waiting,
            () => Condition::Settled,
        };
        let diagnostics = outcome.diagnostics.clone();
        self.set_condition(condition, diagnostics);
    }

    /// Sets the condition, leaving the outcome to be looked at until there is a new one.
    pub fn set_condition(&mut self, condition: Condition, diagnostics: Vec<Diagnostic>) {
        if self.condition != condition || self.diagnostics != diagnostics {
            self.condition = condition;
            self.diagnostics = diagnostics;
            self.changed = true;
        }
    }

    /// Sets the condition of a cell that has no outcome.
    pub fn clear(&mut self, condition: Condition, diagnostics: Vec<Diagnostic>) {
        self.changed |= self.outcome.is_some();
        self.key = None;
        self.outcome = None;
        self.value = None;
        self.set_condition(condition, diagnostics);
    }
}

/// The text in quotes on the first line `key = "text"`, for a cell that does not parse.
fn line_value(text: &str, key: &str) -> Option<String> {
    let value =
        text.lines().find_map(|line| line.trim().strip_prefix(key)?.trim_start().strip_prefix('='))?;
    let value = value.trim().strip_prefix('"')?;
    Some(value[..value.find('"')?].to_string())
}
