//! Long work that has begun: whose it is, one slice of it, and when it is dropped.

use super::{Engine, Stage};
use crate::methods::slices::Advance;
use crate::notebook::outcome::Fingerprint;
use crate::notebook::work::{Evaluation, Work};
use std::sync::Arc;

/// No progress is told before this many slices, about a tenth of a second: what is done by then needs no announcement.
const QUIET: u32 = 12;

/// Long work that has begun.
#[derive(Debug)]
pub(super) struct Running {
    /// The cell for which it was begun, and the text which that cell had.
    cell: u32,
    text: Arc<str>,
    /// What the outcome is made from.
    key: Fingerprint,
    work: Box<dyn Work>,
    slices: u32,
    /// The progress line, once there is one.
    line: Option<String>,
}

impl Engine {
    /// Computes what is quickly known before it goes on with long work: evaluates the first cell that no work has begun for, or
    /// else does one slice of the first work. False when nothing is left to compute.
    pub fn advance(&mut self) -> bool {
        let mut long = None;
        for index in self.graph.order.clone() {
            let Stage::Ready(key, read) = self.stage(index) else { continue };
            if self.work_towards(&key).is_some() {
                long = long.or(Some((index, key)));
                continue;
            }
            let Some(ask) = self.slots[index].ask.clone() else { continue };
            self.begin(index, key, ask.kind.evaluate(&ask, &read));
            return true;
        }
        let Some((index, key)) = long else { return false };
        self.slice(index, key);
        true
    }

    /// Takes the outcome for the cell at `index`, or the work that will give it.
    pub(super) fn begin(&mut self, index: usize, key: Fingerprint, evaluation: Evaluation) {
        match evaluation {
            Evaluation::Now(outcome) => self.finish(index, key, *outcome),
            Evaluation::Long(work) => {
                let (cell, text) = (self.slots[index].id, self.slots[index].text.clone());
                self.running.push(Running { cell, text, key, work, slices: 0, line: None });
            }
        }
    }

    /// One slice of the work towards the outcome under `key`, which the cell at `index` waits for.
    fn slice(&mut self, index: usize, key: Fingerprint) {
        let Some(at) = self.work_towards(&key) else { return };
        let running = &mut self.running[at];
        running.slices += 1;
        match running.work.advance() {
            Advance::Working(progress) => {
                let line = (running.slices >= QUIET).then(|| running.work.line(&progress));
                if line != running.line {
                    running.line = line;
                    self.slots
                        .iter_mut()
                        .filter(|slot| slot.awaits == Some(key))
                        .for_each(|slot| slot.changed = true);
                }
            }
            Advance::Done(outcome) => {
                let done = self.running.remove(at);
                // Diagnostics speak of places in a text, and this one has changed where it does not matter to the answer: the
                // work is done anew for the new places.
                if outcome.diagnostics.is_empty() || done.text == self.slots[index].text {
                    self.finish(index, key, outcome);
                }
            }
        }
    }

    /// Drops the work that has become pointless: nobody waits for what it is made from. Where a cell that it reads from is
    /// being computed, that is not yet known, and the work waits.
    pub(super) fn drop_pointless_work(&mut self) {
        if self.running.is_empty() {
            return;
        }
        let slots = &self.slots;
        let soon: Vec<u32> = (0..slots.len())
            .filter(|index| matches!(self.stage(*index), Stage::Soon))
            .map(|index| slots[index].id)
            .collect();
        self.running.retain(|running| {
            soon.contains(&running.cell) || slots.iter().any(|slot| slot.awaits == Some(running.key))
        });
    }

    /// The place of the work towards the outcome under `key`.
    fn work_towards(&self, key: &Fingerprint) -> Option<usize> {
        self.running.iter().position(|running| running.key == *key)
    }

    /// How far the work towards the outcome under `key` is, in a sentence; `None` while there is none to speak of.
    pub(super) fn progress(&self, key: Option<&Fingerprint>) -> Option<&str> {
        self.running[self.work_towards(key?)?].line.as_deref()
    }
}
