//! The saved report: one HTML document that needs nothing else, runs nothing and can load nothing.

use super::html::{Shown, body};
use super::{Answer, note};
use maud::{DOCTYPE, Markup, PreEscaped, html};
use sha2::{Digest, Sha256};

/// The style sheet of answers, the same in the page and in the report.
pub const STYLE: &str = include_str!("answer.css");

/// The general caution that stands under every report.
pub const CAUTION: &str = "For clinical or safety decisions this report supports, and does not replace, a qualified \
     statistician, the study's approved protocol, local rules and the data-protection office.";

/// What goes into a report.
#[derive(Debug, Clone, PartialEq)]
pub struct Report<'a> {
    pub title: &'a str,
    /// When it was made, as it shall stand there; nothing here reads a clock.
    pub date: Option<&'a str>,
    pub sections: Vec<Section<'a>>,
}

/// One cell in a report.
#[derive(Debug, Clone, PartialEq)]
pub struct Section<'a> {
    pub name: Option<&'a str>,
    /// The ask as a sentence; empty for a note, which has none.
    pub sentence: &'a str,
    pub content: Content<'a>,
}

/// What a cell has to say.
#[derive(Debug, Clone, PartialEq)]
pub enum Content<'a> {
    Answer(&'a Answer),
    /// A note's CommonMark, shown as text of the report.
    Note(&'a str),
    /// There is no answer: the reasons, so that a missing result is seen to be missing.
    Unanswered(Vec<&'a str>),
}

/// The report as one self-contained HTML document.
pub fn document(report: &Report<'_>) -> String {
    let title = if report.title.trim().is_empty() { "Report" } else { report.title };
    html! {
        (DOCTYPE)
        html lang="en" {
            head {
                meta charset="utf-8";
                meta http-equiv="Content-Security-Policy" content=(policy(STYLE));
                meta name="viewport" content="width=device-width, initial-scale=1";
                title { (Shown(title)) }
                style { (PreEscaped(STYLE)) }
            }
            body.a-report {
                header {
                    h1 { (Shown(title)) }
                    @if let Some(date) = report.date { p.a-date { (Shown(date)) } }
                }
                main { @for section in &report.sections { (section_markup(section)) } }
                footer { p { (CAUTION) } }
            }
        }
    }
    .into_string()
}

fn section_markup(section: &Section<'_>) -> Markup {
    let headline = match &section.content {
        Content::Answer(answer) => answer.headline.as_str(),
        Content::Unanswered(_) => "No answer",
        Content::Note(_) => "",
    };
    html! {
        section.a-cell {
            @if let Some(name) = section.name { p.a-name { (Shown(name)) } }
            @if !section.sentence.is_empty() { p.a-sentence { (Shown(section.sentence)) } }
            @if !headline.is_empty() { h2.a-headline { (Shown(headline)) } }
            @match &section.content {
                Content::Answer(answer) => { div.a-answer { (body(answer)) } }
                Content::Note(source) => { div.a-note { (PreEscaped(note::to_html(source))) } }
                Content::Unanswered(reasons) => {
                    div.a-answer {
                        section.a-cautions aria-label="Reasons" {
                            ul { @for reason in reasons { li { (Shown(reason)) } } }
                        }
                    }
                }
            }
        }
    }
}

/// A Content-Security-Policy under which a document can do nothing but show itself in this style.
fn policy(style: &str) -> String {
    let hash = base64(&Sha256::digest(style.as_bytes()));
    format!("default-src 'none'; style-src 'sha256-{hash}'; base-uri 'none'; form-action 'none'")
}

/// Base64 with padding (RFC 4648, section 4).
fn base64(bytes: &[u8]) -> String {
    const ALPHABET: &[u8; 64] = b"ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
    let mut text = String::with_capacity(bytes.len().div_ceil(3) * 4);
    for chunk in bytes.chunks(3) {
        let group = chunk.iter().fold(0u32, |acc, &b| acc << 8 | u32::from(b)) << (8 * (3 - chunk.len()));
        for place in 0..4 {
            let digit = ALPHABET[(group >> (18 - 6 * place) & 63) as usize];
            text.push(if place <= chunk.len() { digit as char } else { '=' });
        }
    }
    text
}

#[cfg(test)]
mod tests {
    use super::base64;

    #[test]
    fn base64_follows_the_test_vectors_of_rfc_4648_section_10() {
        let vectors = [
            ("", ""),
            ("f", "Zg=="),
            ("fo", "Zm8="),
            ("foo", "Zm9v"),
            ("foob", "Zm9vYg=="),
            ("fooba", "Zm9vYmE="),
            ("foobar", "Zm9vYmFy"),
        ];
        for (bytes, expected) in vectors {
            assert_eq!(base64(bytes.as_bytes()), expected);
        }
    }
}
