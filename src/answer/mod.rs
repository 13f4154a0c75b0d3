//! What an answer is made of: a headline, tables, figures, text, a write-up and cautions, and how these become
//! HTML, plain text, delimited text and a saved report. Only this layer rounds.
//!
//! It knows no statistics: it takes numbers and words and lays them out. It imports no other layer.
//! On purpose not here: what a number means, which row is emphasised, how a caution is worded.

mod clean;
pub mod delimited;
pub mod figure;
pub mod html;
pub mod note;
pub mod number;
mod parts;
pub mod report;
mod table;
pub mod text;

pub use number::Precision;
pub use parts::{Answer, Block, Figure};
pub use table::{Align, Cell, Column, Emphasis, Row, Table};
