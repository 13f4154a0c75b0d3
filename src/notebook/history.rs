//! Steps back and forth. A step is the whole notebook's text; texts are shared, so a step costs what changed.

use std::sync::Arc;

/// A notebook at one moment: each cell's identity and text, in order.
pub type Moment = Vec<(u32, Arc<str>)>;

/// What kind of change a step was: typing on in one cell is one step.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Step {
    Typing(u32),
    Other,
}

/// The moments before and after now.
#[derive(Debug, Default)]
pub struct History {
    back: Vec<Moment>,
    forth: Vec<Moment>,
    last: Option<Step>,
}

/// At most this many steps back.
const MOST: usize = 200;
/// At most about this many bytes of texts that only the history still holds.
const HEAVIEST: usize = 64 << 20;

impl History {
    /// Notes that the notebook, so far as in `before`, changes by `step`.
    pub fn note(&mut self, before: Moment, step: Step) {
        let goes_on = matches!(step, Step::Typing(_)) && self.last == Some(step) && !self.back.is_empty();
        if !goes_on {
            self.back.push(before);
        }
        self.last = Some(step);
        self.forth.clear();
        while self.back.len() > MOST || (self.back.len() > 1 && self.weight() > HEAVIEST) {
            self.back.remove(0);
        }
    }

    /// Goes one step back from `now`.
    pub fn undo(&mut self, now: Moment) -> Option<Moment> {
        let before = self.back.pop()?;
        self.forth.push(now);
        self.last = None;
        Some(before)
    }

    /// Goes one step forth again from `now`.
    pub fn redo(&mut self, now: Moment) -> Option<Moment> {
        let after = self.forth.pop()?;
        self.back.push(now);
        self.last = None;
        Some(after)
    }

    pub fn can_undo(&self) -> bool {
        !self.back.is_empty()
    }

    pub fn can_redo(&self) -> bool {
        !self.forth.is_empty()
    }

    fn weight(&self) -> usize {
        let mut seen = std::collections::BTreeSet::new();
        let texts = self
            .back
            .iter()
            .flatten()
            .filter(|(_, text)| seen.insert(Arc::as_ptr(text).cast::<u8>() as usize));
        texts.map(|(_, text)| text.len()).sum()
    }
}
