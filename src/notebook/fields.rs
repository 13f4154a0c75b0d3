//! What a cell of each kind can be asked: the one table of fields from which parsing, the sentence, completion
//! and the reference page are made. The tables themselves stand in `kinds/`, beside the code that reads them.

use super::kinds::Kind;

/// One field of a kind.
#[derive(Debug, Clone, Copy)]
pub struct Field {
    /// Name in the cell's text.
    pub name: &'static str,
    pub holds: Holds,
    /// What stands in the sentence while the field is not given: the default in words.
    pub default: Option<&'static str>,
    /// A field without an honest default must be given.
    pub required: bool,
    /// Short name for people, used as the blank's accessible name.
    pub label: &'static str,
    /// One sentence of help.
    pub help: &'static str,
    /// What a line of it looks like, for the fields that hold several lines; shown while the keyboard is in the empty blank.
    pub example: &'static str,
}

/// What a field holds.
#[derive(Debug, Clone, Copy)]
pub enum Holds {
    /// One line of text.
    Text,
    /// Several lines of text.
    LongText,
    /// A number in the open interval.
    Between(f64, f64),
    /// A number greater than the bound.
    Above(f64),
    /// Any finite number.
    Number,
    /// A whole number from the first to the second bound.
    Whole(i64, i64),
    /// One of the choices.
    Choice(&'static [Choice]),
    /// Some of the choices, as a list.
    Choices(&'static [Choice]),
    /// The name of a cell of one of these kinds.
    Cell(&'static [Kind]),
    /// A column of the table that the cell reads.
    Column,
    /// A level of the study.
    Level,
    /// A list of texts: written in the sentence with commas between.
    Texts,
    /// A list of numbers: written in the sentence with commas (or semicolons) between.
    Numbers,
    /// A table from names to texts: written in the sentence as lines `name: text`.
    NamedTexts,
    /// A table from names to numbers: written in the sentence as lines `name: number`.
    NamedNumbers,
    /// A list of records: written in the sentence as one line each, `;` between the parts.
    Records(&'static [Part]),
}

/// One part of a record.
#[derive(Debug, Clone, Copy)]
pub struct Part {
    pub name: &'static str,
    pub number: bool,
}

/// One of a field's choices.
#[derive(Debug, Clone, Copy)]
pub struct Choice {
    /// As written in the text.
    pub value: &'static str,
    /// As shown in the sentence.
    pub shown: &'static str,
}

/// A choice whose value is also what the sentence shows.
pub const fn choice(value: &'static str) -> Choice {
    Choice { value, shown: value }
}

/// A piece of a kind's sentence.
#[derive(Debug, Clone, Copy)]
pub enum Piece {
    Words(&'static str),
    /// A blank for the field of that name.
    Blank(&'static str),
    /// Pieces that stand only while the field has one of the values (its default counts when it is not given).
    When(&'static str, &'static [&'static str], &'static [Piece]),
}

/// Everything about a kind that is not code.
#[derive(Debug, Clone, Copy)]
pub struct KindTable {
    /// What a cell of this kind is for, as the list of kinds to add says it.
    pub purpose: &'static str,
    pub fields: &'static [Field],
    pub sentence: &'static [Piece],
    /// Lines that a new cell starts with, besides its kind and the cell that it reads from.
    pub starts_with: &'static str,
}

impl KindTable {
    pub fn field(&self, name: &str) -> Option<&'static Field> {
        self.fields.iter().find(|field| field.name == name)
    }
}

impl Field {
    /// An optional field.
    pub const fn new(name: &'static str, holds: Holds, label: &'static str, help: &'static str) -> Self {
        Self { name, holds, default: None, required: false, label, help, example: "" }
    }

    /// The same with the default in words.
    pub const fn or(self, default: &'static str) -> Self {
        Self { default: Some(default), ..self }
    }

    /// The same, but it must be given.
    pub const fn required(self) -> Self {
        Self { required: true, ..self }
    }

    /// The same with an example of a line.
    pub const fn such_as(self, example: &'static str) -> Self {
        Self { example, ..self }
    }

    /// The choices, for fields that have a fixed list.
    pub fn choices(&self) -> &'static [Choice] {
        match self.holds {
            Holds::Choice(choices) | Holds::Choices(choices) => choices,
            _ => &[],
        }
    }
}
