//! What must be mended in a cell, and where.

use crate::table::nearest;
use std::ops::Range;

/// One thing to mend: a message that says where, what was found, what is needed and what to do.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Diagnostic {
    pub message: String,
    /// Bytes of the cell's text that the message speaks of.
    pub span: Range<usize>,
    /// The field concerned, where there is one.
    pub field: Option<String>,
}

impl Diagnostic {
    pub fn new(message: impl Into<String>, span: Range<usize>, field: Option<&str>) -> Self {
        Self { message: message.into(), span, field: field.map(str::to_string) }
    }
}

/// Line and column, both from 1, of the byte at `offset`; columns count characters.
pub fn position(text: &str, offset: usize) -> (usize, usize) {
    let mut end = offset.min(text.len());
    while !text.is_char_boundary(end) {
        end -= 1;
    }
    let before = &text[..end];
    let line_start = before.rfind('\n').map_or(0, |newline| newline + 1);
    (before.matches('\n').count() + 1, before[line_start..].chars().count() + 1)
}

/// ` Did you mean "x"?`, or nothing where none of `known` is near.
pub fn suggestion<'a>(typed: &str, known: impl IntoIterator<Item = &'a str>) -> String {
    nearest(typed, known).map(|word| format!(" Did you mean \"{word}\"?")).unwrap_or_default()
}

/// A list of words for a message: `"a", "b" or "c"`.
pub fn quoted_choices<'a>(words: impl IntoIterator<Item = &'a str>) -> String {
    let words: Vec<String> = words.into_iter().map(|word| format!("\"{word}\"")).collect();
    match words.split_last() {
        None => String::new(),
        Some((only, [])) => only.clone(),
        Some((last, others)) => format!("{} or {last}", others.join(", ")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_slip_gets_a_suggestion_and_a_stranger_none() {
        assert_eq!(suggestion("tukye", ["Holm", "Tukey"]), " Did you mean \"Tukey\"?");
        assert_eq!(suggestion("zebra", ["Holm", "Tukey"]), "");
    }

    #[test]
    fn choices_read_as_a_sentence() {
        assert_eq!(quoted_choices(["a", "b", "c"]), "\"a\", \"b\" or \"c\"");
    }

    #[test]
    fn positions_count_lines_and_characters_from_one() {
        assert_eq!(position("aé\nb", 0), (1, 1));
        assert_eq!(position("aé\nb", 3), (1, 3));
        assert_eq!(position("aé\nb", 4), (2, 1));
        assert_eq!(position("a", 99), (1, 2));
    }
}
