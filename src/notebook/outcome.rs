//! What evaluating a cell gives: its answer, what other cells may read from it, and what must be mended.

use super::diagnostics::Diagnostic;
use crate::answer::Answer;
use crate::study::{Study, Summary};
use crate::table::Table;
use serde_json::Value as Json;
use sha2::{Digest, Sha256};
use std::collections::BTreeMap;
use std::sync::Arc;

/// A fingerprint of an ask or of a value: equal only for equal content.
pub type Fingerprint = [u8; 32];

/// What a cell hands to the cells that read from it.
#[derive(Debug, Clone)]
pub enum Value {
    /// A table of data.
    Table(Arc<Table>),
    /// Sizes, means and standard deviations of groups, by level.
    Groups(Arc<Groups>),
    /// A study: design and observations.
    Study(Arc<Study>),
}

/// Groups known only by size, mean and standard deviation.
#[derive(Debug, Clone, PartialEq)]
pub struct Groups {
    pub levels: Vec<String>,
    pub summary: Summary,
}

/// The result of evaluating one cell.
#[derive(Debug, Clone, Default)]
pub struct Outcome {
    pub answer: Answer,
    /// Full-precision results under the names of the design.
    pub results: Json,
    pub value: Option<Value>,
    /// Empty for a settled cell.
    pub diagnostics: Vec<Diagnostic>,
    /// True for a cell that is complete as a plan and waits for numbers.
    pub waiting: bool,
    /// What the sentence shows for fields that are not given but have a default that depends on the data or on
    /// other fields: field to words.
    pub in_force: BTreeMap<&'static str, String>,
    /// What the sentence offers for fields whose choices depend on the data: field to values.
    pub choices: BTreeMap<&'static str, Vec<String>>,
}

impl Outcome {
    /// A settled answer with its full-precision results.
    pub fn settled(answer: Answer, results: Json) -> Self {
        Self { answer, results, ..Self::default() }
    }

    /// A plan: everything that can be said without numbers.
    pub fn plan(answer: Answer, results: Json) -> Self {
        Self { answer, results, waiting: true, ..Self::default() }
    }

    /// A cell that needs the person: what to mend, and no answer.
    pub fn mend(diagnostics: Vec<Diagnostic>) -> Self {
        let headline = diagnostics.first().map(|first| first.message.clone()).unwrap_or_default();
        Self { answer: Answer::new(headline), diagnostics, ..Self::default() }
    }

    /// The same, handing `value` to the cells that read from it.
    #[must_use]
    pub fn with_value(mut self, value: Value) -> Self {
        self.value = Some(value);
        self
    }

    /// The same, showing `words` in the sentence for a field that is not given.
    #[must_use]
    pub fn with_in_force(mut self, field: &'static str, words: impl Into<String>) -> Self {
        self.in_force.insert(field, words.into());
        self
    }

    /// The same, offering `values` in the sentence for the field.
    #[must_use]
    pub fn with_choices(mut self, field: &'static str, values: Vec<String>) -> Self {
        self.choices.insert(field, values);
        self
    }

    /// Roughly how many bytes keeping this outcome costs beyond a small answer.
    pub fn weight(&self) -> usize {
        match &self.value {
            Some(Value::Table(table)) => 24 * table.rows * table.columns.len(),
            Some(Value::Study(study)) => match &study.observed {
                crate::study::Observed::Sample(sample) => {
                    sample.groups.iter().map(|group| 8 * group.len()).sum()
                }
                _ => 0,
            },
            _ => 0,
        }
    }
}

impl Value {
    /// The study, when this is one.
    pub fn study(&self) -> Option<&Arc<Study>> {
        match self {
            Value::Study(study) => Some(study),
            _ => None,
        }
    }

    /// A fingerprint of the content, so that a cell upstream that comes to the same value again disturbs nobody.
    pub fn fingerprint(&self) -> Fingerprint {
        let mut hasher = Sha256::new();
        match self {
            Value::Table(table) => feed_table(table, &mut hasher),
            Value::Groups(groups) => hasher.update(format!("{groups:?}")),
            Value::Study(study) => feed_study(study, &mut hasher),
        }
        hasher.finalize().into()
    }
}

fn feed_table(table: &Table, hasher: &mut Sha256) {
    for column in &table.columns {
        hasher.update(format!("{:?}{:?}{:?}{:?}", column.name, column.kind, column.forced, table.decimal));
        for row in 0..table.rows {
            hasher.update([u8::from(column.missing(row))]);
            hasher.update(column.text(row));
            hasher.update([0xff]);
        }
    }
    for gone in &table.excluded {
        hasher.update((gone.row as u64).to_le_bytes());
        hasher.update((gone.exclusion as u64).to_le_bytes());
    }
    hasher.update(format!("{:?}", table.exclusions));
}

fn feed_study(study: &Study, hasher: &mut Sha256) {
    let Study { outcome, factor, levels, variances, alpha, confidence, unit, better, account, observed } =
        study;
    hasher.update(format!(
        "{outcome:?}{factor:?}{levels:?}{variances:?}{alpha:?}{confidence:?}{unit:?}{better:?}{account:?}"
    ));
    match observed {
        crate::study::Observed::Sample(sample) => {
            hasher.update(sample.origin.to_bits().to_le_bytes());
            for group in &sample.groups {
                hasher.update((group.len() as u64).to_le_bytes());
                for value in group {
                    hasher.update(value.to_bits().to_le_bytes());
                }
            }
        }
        other => hasher.update(format!("{other:?}")),
    }
}
