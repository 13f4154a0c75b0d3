//! A note: CommonMark turned into HTML that can carry nothing but text and its structure.
//!
//! HTML in the source is shown as the text that it is. A link is its text followed by the address in brackets, never
//! an address to follow: the page promises that it cannot send anything, and following a link sends. An image is its
//! alternative text. Extensions (tables, footnotes) stay off: their markup carries style attributes and ids.

use super::clean::printable;
use pulldown_cmark::{CodeBlockKind, CowStr, Event, HeadingLevel, Parser, Tag, TagEnd, html};

/// The HTML of a note. Headings start at the third level, since they stand inside a cell of a page.
///
/// # Example
/// ```
/// use levelwise::answer::note;
/// assert_eq!(note::to_html("See <b>[here](https://example.org)</b>"),
///     "<p>See &lt;b&gt;here (https://example.org)&lt;/b&gt;</p>\n");
/// ```
pub fn to_html(common_mark: &str) -> String {
    let source = printable(common_mark);
    let mut addresses = Addresses::default();
    let events = Parser::new(&source).flat_map(|event| harmless(event, &mut addresses));
    let mut markup = String::with_capacity(source.len() * 3 / 2);
    html::push_html(&mut markup, events);
    markup
}

/// The links that are open, innermost last, each with the text seen so far inside it.
#[derive(Default)]
struct Addresses<'a> {
    open: Vec<(CowStr<'a>, String)>,
}

fn harmless<'a>(event: Event<'a>, addresses: &mut Addresses<'a>) -> Vec<Event<'a>> {
    if let (Event::Text(text) | Event::Code(text), Some((_, seen))) = (&event, addresses.open.last_mut()) {
        seen.push_str(text);
    }
    match event {
        Event::Html(text) | Event::InlineHtml(text) => vec![Event::Text(text)],
        Event::Start(Tag::HtmlBlock) => vec![Event::Start(Tag::Paragraph)],
        Event::End(TagEnd::HtmlBlock) => vec![Event::End(TagEnd::Paragraph)],
        Event::Start(Tag::Link { dest_url, .. }) => {
            addresses.open.push((dest_url, String::new()));
            Vec::new()
        }
        Event::End(TagEnd::Link) => match addresses.open.pop() {
            // An address that is its own text is not said twice.
            Some((address, seen)) if !address.is_empty() && address.trim_start_matches("mailto:") != seen => {
                vec![Event::Text(format!(" ({address})").into())]
            }
            _ => Vec::new(),
        },
        Event::Start(Tag::Image { .. }) | Event::End(TagEnd::Image) => Vec::new(),
        Event::Start(Tag::CodeBlock(_)) => vec![Event::Start(Tag::CodeBlock(CodeBlockKind::Indented))],
        Event::Start(Tag::Heading { level, .. }) => {
            let tag = Tag::Heading { level: lower(level), id: None, classes: Vec::new(), attrs: Vec::new() };
            vec![Event::Start(tag)]
        }
        Event::End(TagEnd::Heading(level)) => vec![Event::End(TagEnd::Heading(lower(level)))],
        other => vec![other],
    }
}

fn lower(level: HeadingLevel) -> HeadingLevel {
    match level {
        HeadingLevel::H1 => HeadingLevel::H3,
        HeadingLevel::H2 => HeadingLevel::H4,
        HeadingLevel::H3 => HeadingLevel::H5,
        _ => HeadingLevel::H6,
    }
}
