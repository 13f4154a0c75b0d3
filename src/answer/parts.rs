//! The answer of a cell and the blocks that it is built from.

use super::Table;

/// The answer of one cell, in the order in which it is read.
///
/// # Example
/// ```
/// use levelwise::answer::{Answer, Table};
/// let answer = Answer::new("The groups differ")
///     .with_table(Table::new("Welch's test").number_column("F").row(["5.12"]))
///     .with_writeup("F(2, 17.4) = 5.12, p = 0.018")
///     .with_caution("Group \"none\" has 3 observations.");
/// assert_eq!(answer.blocks.len(), 1);
/// ```
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Answer {
    /// One sentence in words: what the rail shows.
    pub headline: String,
    pub blocks: Vec<Block>,
    /// The sentence or sentences for the paper, to be copied.
    pub writeup: Option<String>,
    /// What could mislead, each in one or two sentences.
    pub cautions: Vec<String>,
}

/// One block of an answer's body.
#[derive(Debug, Clone, PartialEq)]
pub enum Block {
    Table(Table),
    Figure(Figure),
    /// A paragraph of plain text.
    Text(String),
    /// A note's CommonMark *source*. It becomes markup only in [`super::html`], which lets no HTML through.
    Note(String),
}

/// A figure: a drawing with its title and a text that says the same in words.
///
/// Only the functions in `answer::figure` make one, so that the drawing is known to be well-formed and to carry
/// no style attribute, script or address.
#[derive(Debug, Clone, PartialEq)]
pub struct Figure {
    /// Shown above the drawing.
    pub title: String,
    /// The text alternative: what the drawing shows, with its numbers where they are few.
    pub description: String,
    svg: String,
}

impl Figure {
    /// A figure from a finished drawing. The caller vouches for the markup.
    pub(in crate::answer) fn new(title: String, description: String, svg: String) -> Figure {
        Figure { title, description, svg }
    }

    /// The drawing as one complete `<svg>` element; saved by itself it is a valid SVG file that looks right.
    pub fn svg(&self) -> &str {
        &self.svg
    }
}

impl Answer {
    /// An answer that so far has only its headline.
    pub fn new(headline: impl Into<String>) -> Answer {
        Answer { headline: headline.into(), ..Answer::default() }
    }

    /// The answer with one more table.
    #[must_use]
    pub fn with_table(mut self, table: Table) -> Answer {
        self.blocks.push(Block::Table(table));
        self
    }

    /// The answer with one more figure.
    #[must_use]
    pub fn with_figure(mut self, figure: Figure) -> Answer {
        self.blocks.push(Block::Figure(figure));
        self
    }

    /// The answer with one more paragraph of plain text.
    #[must_use]
    pub fn with_text(mut self, text: impl Into<String>) -> Answer {
        self.blocks.push(Block::Text(text.into()));
        self
    }

    /// The answer with one more note, given as CommonMark.
    #[must_use]
    pub fn with_note(mut self, common_mark: impl Into<String>) -> Answer {
        self.blocks.push(Block::Note(common_mark.into()));
        self
    }

    /// The answer with its write-up.
    #[must_use]
    pub fn with_writeup(mut self, writeup: impl Into<String>) -> Answer {
        self.writeup = Some(writeup.into());
        self
    }

    /// The answer with one more caution.
    #[must_use]
    pub fn with_caution(mut self, caution: impl Into<String>) -> Answer {
        self.cautions.push(caution.into());
        self
    }
}
