//! The kinds of cell, one a file: the table of fields, and `evaluate`, which reads the ask, calls the methods
//! and lays out the answer.
//!
//! To add a kind: write its file with `TABLE` and `evaluate`, and add it to [`Kind`] below.

mod comparisons;
mod data;
mod note;
mod overall;
mod power;
mod profile;
mod resampling;
mod study;
mod summary;
mod trend;
mod wording;

use super::ask::Ask;
use super::fields::KindTable;
use super::outcome::Value;
use super::work::Evaluation;

/// A kind of cell.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Kind {
    Note,
    Data,
    Summary,
    Study,
    Profile,
    Overall,
    Comparisons,
    Trend,
    Power,
}

impl Kind {
    /// Every kind, in the order of the job.
    pub const ALL: [Kind; 9] = [
        Kind::Note,
        Kind::Data,
        Kind::Summary,
        Kind::Study,
        Kind::Profile,
        Kind::Overall,
        Kind::Comparisons,
        Kind::Trend,
        Kind::Power,
    ];

    /// The kind as written in a cell's text.
    pub fn name(self) -> &'static str {
        match self {
            Kind::Note => "note",
            Kind::Data => "data",
            Kind::Summary => "summary",
            Kind::Study => "study",
            Kind::Profile => "profile",
            Kind::Overall => "overall",
            Kind::Comparisons => "comparisons",
            Kind::Trend => "trend",
            Kind::Power => "power",
        }
    }

    /// The kind of that name.
    pub fn named(name: &str) -> Option<Kind> {
        Kind::ALL.into_iter().find(|kind| kind.name() == name)
    }

    /// Its fields and its sentence.
    pub fn table(self) -> &'static KindTable {
        match self {
            Kind::Note => &note::TABLE,
            Kind::Data => &data::TABLE,
            Kind::Summary => &summary::TABLE,
            Kind::Study => &study::TABLE,
            Kind::Profile => &profile::TABLE,
            Kind::Overall => &overall::TABLE,
            Kind::Comparisons => &comparisons::TABLE,
            Kind::Trend => &trend::TABLE,
            Kind::Power => &power::TABLE,
        }
    }

    /// Answers the ask from what the cells that it names have handed over, at once or as work in slices.
    pub fn evaluate(self, ask: &Ask, read: &Read) -> Evaluation {
        match self {
            Kind::Note => note::evaluate(ask).into(),
            Kind::Data => data::evaluate(ask).into(),
            Kind::Summary => summary::evaluate(ask).into(),
            Kind::Study => study::evaluate(ask, read).into(),
            Kind::Profile => profile::evaluate(ask, read).into(),
            Kind::Overall => overall::evaluate(ask, read).into(),
            Kind::Comparisons => comparisons::evaluate(ask, read),
            Kind::Trend => trend::evaluate(ask, read),
            Kind::Power => power::evaluate(ask).into(),
        }
    }
}

/// What the cells that an ask names have handed over, by field. The engine evaluates a cell only when every cell
/// that it names has a value of a kind that the field allows.
#[derive(Debug, Clone, Default)]
pub struct Read {
    values: Vec<(&'static str, Value)>,
}

impl Read {
    /// Values by field.
    pub fn new(values: Vec<(&'static str, Value)>) -> Self {
        Self { values }
    }

    /// The value read through the field; `None` when the field is not given.
    pub fn value(&self, field: &str) -> Option<&Value> {
        self.values.iter().find(|(name, _)| *name == field).map(|(_, value)| value)
    }

    /// The study read through the field `study`.
    pub fn study(&self) -> Option<&crate::study::Study> {
        self.shared_study().map(|study| &**study)
    }

    /// The same, to be kept while long work goes on.
    pub fn shared_study(&self) -> Option<&std::sync::Arc<crate::study::Study>> {
        self.value("study").and_then(Value::study)
    }
}
