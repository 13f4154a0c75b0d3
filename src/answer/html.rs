//! An answer as HTML for the page and for the saved report.
//!
//! Elements, classes with the prefix `a-` and SVG's presentation attributes only: no style attribute, no script, no
//! id, no address. The page's security policy refuses the first two, several answers stand on one page, and nothing
//! in an answer can be followed.

use super::clean::printable;
use super::{Align, Answer, Block, Cell, Column, Emphasis, Figure, Row, Table, note};
use maud::{Markup, PreEscaped, Render, html};
use std::borrow::Cow;

/// The whole answer: headline, blocks, write-up and cautions, inside one `div.a-answer`.
pub fn answer(answer: &Answer) -> String {
    html! {
        div.a-answer {
            @if !answer.headline.is_empty() { p.a-headline { (Shown(&answer.headline)) } }
            (body(answer))
        }
    }
    .into_string()
}

/// What stands below the headline.
pub(in crate::answer) fn body(answer: &Answer) -> Markup {
    html! {
        @for block in &answer.blocks { (self::block(block)) }
        @if let Some(writeup) = &answer.writeup {
            section.a-writeup aria-label="Write-up" {
                @for paragraph in paragraphs(writeup) { p { (Shown(paragraph)) } }
            }
        }
        @if !answer.cautions.is_empty() {
            section.a-cautions aria-label="Cautions" {
                ul { @for caution in &answer.cautions { li { (Shown(caution)) } } }
            }
        }
    }
}

fn block(block: &Block) -> Markup {
    html! {
        @match block {
            Block::Table(t) => { (table_markup(t)) }
            Block::Figure(f) => { (figure_markup(f)) }
            Block::Text(text) => { @for paragraph in paragraphs(text) { p.a-text { (Shown(paragraph)) } } }
            Block::Note(source) => { div.a-note { (PreEscaped(note::to_html(source))) } }
        }
    }
}

/// One table, also as the thing to copy into a word processor.
pub fn table(table: &Table) -> String {
    table_markup(table).into_string()
}

/// One figure with its title.
pub fn figure(figure: &Figure) -> String {
    figure_markup(figure).into_string()
}

fn figure_markup(figure: &Figure) -> Markup {
    html! {
        figure.a-figure {
            figcaption.a-title { (Shown(&figure.title)) }
            (PreEscaped(figure.svg()))
        }
    }
}

fn table_markup(table: &Table) -> Markup {
    let has_headings = table.columns.iter().any(|c| !c.heading.is_empty());
    html! {
        div.a-table {
            // A wide table scrolls inside its own region, which the keyboard can reach, and not the whole page.
            div.a-scroll role="region" tabindex="0" aria-label=(format!("Table: {}", printable(&table.caption))) {
                table {
                    caption { span.a-caption { (Shown(&table.caption)) } }
                    @if has_headings {
                        thead { tr { @for column in &table.columns { (heading(column)) } } }
                    }
                    tbody { @for row in &table.rows { (row_markup(row, &table.columns)) } }
                }
            }
            @for note in &table.notes { p.a-below { (Shown(note)) } }
        }
    }
}

fn heading(column: &Column) -> Markup {
    html! {
        // An empty corner is no heading: a screen reader would announce a nameless column.
        @if column.heading.is_empty() { td class=[class_of(column.align)] {} }
        @else { th scope="col" class=[class_of(column.align)] { (Shown(&column.heading)) } }
    }
}

fn row_markup(row: &Row, columns: &[Column]) -> Markup {
    let class = match row.emphasis {
        Emphasis::Plain => None,
        Emphasis::Strong => Some("a-strong"),
        Emphasis::Quiet => Some("a-quiet"),
        Emphasis::Total => Some("a-total"),
    };
    let empty = Cell::empty();
    html! {
        tr class=[class] {
            @for (place, column) in columns.iter().enumerate() {
                @let cell = row.cells.get(place).unwrap_or(&empty);
                @if place == 0 && !cell.absent { (row_heading(cell, column)) }
                @else { td class=[together(cell, column).or(class_of(column.align)).or(short(cell))] { (content(cell)) } }
            }
        }
    }
}

fn row_heading(cell: &Cell, column: &Column) -> Markup {
    html! { th scope="row" class=[class_of(column.align).or(short(cell))] { (content(cell)) } }
}

/// An interval is read as one thing: it is never broken, not on paper either.
fn together(cell: &Cell, column: &Column) -> Option<&'static str> {
    let interval = cell.text.starts_with(['[', '(']) && cell.text.ends_with([']', ')']);
    (interval && column.align == Align::Number).then_some("a-n a-whole")
}

/// Short words stay on one line; the numbers beside them may scroll.
fn short(cell: &Cell) -> Option<&'static str> {
    (!cell.text.is_empty() && cell.text.chars().count() <= 24).then_some("a-short")
}

fn content(cell: &Cell) -> Markup {
    html! {
        @if cell.absent { span.a-absent aria-hidden="true" { "–" } span.a-unseen { "not available" } }
        @else { (Shown(&cell.text)) }
    }
}

fn class_of(align: Align) -> Option<&'static str> {
    match align {
        Align::Text => None,
        Align::Number => Some("a-n"),
    }
}

fn paragraphs(text: &str) -> impl Iterator<Item = &str> {
    text.split("\n\n").map(str::trim).filter(|paragraph| !paragraph.is_empty())
}

/// Text from anywhere, made printable and then escaped.
pub(in crate::answer) struct Shown<'a>(pub &'a str);

impl Render for Shown<'_> {
    fn render_to(&self, buffer: &mut String) {
        unbroken(&printable(self.0)).as_ref().render_to(buffer);
    }
}

/// The text with "n = 14" and "p < 0.001" held together: a line that begins with a relation sign is hard to read.
fn unbroken(text: &str) -> Cow<'_, str> {
    if !text.contains(" = ") && !text.contains(" < ") {
        return Cow::Borrowed(text);
    }
    let mut held = String::with_capacity(text.len() + 16);
    let mut rest = text;
    while let Some(at) = rest.find(" = ").into_iter().chain(rest.find(" < ")).min() {
        let (before, after) = (&rest[..at], &rest[at + 3..]);
        let symbol = before.ends_with(|c: char| c.is_alphanumeric() || c == ')');
        let value = after.starts_with(|c: char| c.is_ascii_digit() || matches!(c, '-' | '\u{2212}' | '<'));
        held.push_str(before);
        if symbol && value {
            held.extend(['\u{a0}', char::from(rest.as_bytes()[at + 1]), '\u{a0}']);
        } else {
            held.push_str(&rest[at..at + 3]);
        }
        rest = after;
    }
    held.push_str(rest);
    Cow::Owned(held)
}
