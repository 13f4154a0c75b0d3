//! Answers kept under what they were made from, so that undoing an edit finds the old answer again.

use super::outcome::{Fingerprint, Outcome};
use std::collections::BTreeMap;
use std::sync::Arc;

/// An outcome with the fingerprint of the value that it hands on.
#[derive(Debug, Clone)]
pub struct Kept {
    pub outcome: Arc<Outcome>,
    pub value: Option<Fingerprint>,
}

/// The kept outcomes, oldest use forgotten first.
#[derive(Debug, Default)]
pub struct Keeper {
    kept: BTreeMap<Fingerprint, (u64, Kept)>,
    uses: u64,
    weight: usize,
}

/// At most this many outcomes are kept.
const MOST: usize = 512;
/// At most about this many bytes of tables and samples are kept.
const HEAVIEST: usize = 256 << 20;

impl Keeper {
    /// The outcome made from what `key` stands for.
    pub fn find(&mut self, key: &Fingerprint) -> Option<Kept> {
        self.uses += 1;
        let (used, kept) = self.kept.get_mut(key)?;
        *used = self.uses;
        Some(kept.clone())
    }

    /// Keeps an outcome; the least recently used ones go when there are too many or they are too heavy.
    pub fn keep(&mut self, key: Fingerprint, kept: Kept) {
        self.uses += 1;
        self.weight += kept.outcome.weight();
        if let Some((_, old)) = self.kept.insert(key, (self.uses, kept)) {
            self.weight -= old.outcome.weight();
        }
        while self.kept.len() > 1 && (self.kept.len() > MOST || self.weight > HEAVIEST) {
            let oldest = self.kept.iter().min_by_key(|(_, (used, _))| *used).map(|(key, _)| *key);
            if let Some((_, gone)) = oldest.and_then(|key| self.kept.remove(&key)) {
                self.weight -= gone.outcome.weight();
            }
        }
    }
}
