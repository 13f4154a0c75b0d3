//! What answers look like: numbers as text, HTML, plain text, delimited text, figures and the saved report.
//!
//! The expected texts are this project's own rules (design.md, "The page"), so they are stated here and not taken from
//! an outside source.

#[path = "answer/figures.rs"]
mod figures;
#[path = "answer/markup.rs"]
mod markup;
#[path = "answer/number.rs"]
mod number;
