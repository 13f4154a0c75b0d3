//! A note: text for the reader, between the questions.

use crate::answer::Answer;
use crate::notebook::ask::Ask;
use crate::notebook::fields::{Field, Holds, KindTable, Piece};
use crate::notebook::outcome::Outcome;
use serde_json::json;

pub const TABLE: KindTable = KindTable {
    purpose: "Write a note: what the study is about, what was decided and why",
    fields: &[
        Field::new("text", Holds::LongText, "text of the note", "The note's text, in CommonMark").required()
    ],
    sentence: &[Piece::Blank("text")],
    starts_with: "text = \"\"\"\n\"\"\"\n",
};

/// How many characters of a note its headline shows at most.
const HEADLINE: usize = 80;

/// The note as it is to be read; its first line is the headline.
pub fn evaluate(ask: &Ask) -> Outcome {
    let mut reader = ask.reader();
    let text = reader.raw_text("text").unwrap_or_default();
    if let Err(problems) = reader.finish(()) {
        return Outcome::mend(problems);
    }
    let first = text.lines().map(|line| line.trim_start_matches('#').trim()).find(|line| !line.is_empty());
    let first = first.unwrap_or("An empty note");
    let mut headline: String = first.chars().take(HEADLINE).collect();
    if first.chars().count() > HEADLINE {
        headline.push('…');
    }
    Outcome::settled(Answer::new(headline).with_note(text), json!({}))
}
