//! An answer as plain text for the headless program: columns aligned by spaces, long lines wrapped.

use super::clean::{one_line, printable};
use super::{Align, Answer, Block, Cell, Table};

/// Between two columns of a table.
const GAP: usize = 2;

/// The answer as text of lines up to `width` columns wide, ended by a line break.
///
/// A table whose numbers alone are wider than that stays wider: a broken number would be worse than a long line.
pub fn answer(answer: &Answer, width: usize) -> String {
    let width = width.max(20);
    let mut parts = Vec::new();
    if !answer.headline.is_empty() {
        parts.push(paragraph(&answer.headline, width));
    }
    for block in &answer.blocks {
        parts.push(match block {
            Block::Table(t) => table(t, width),
            Block::Figure(f) => paragraph(&format!("[Figure: {}] {}", f.title, f.description), width),
            Block::Text(text) => paragraph(text, width),
            Block::Note(source) => format!("{}\n", printable(source).trim_end()),
        });
    }
    if let Some(writeup) = &answer.writeup {
        parts.push(format!("Write-up:\n{}", indented(writeup, width, "  ", "  ")));
    }
    if !answer.cautions.is_empty() {
        let list: String = answer.cautions.iter().map(|c| indented(c, width, "- ", "  ")).collect();
        parts.push(format!("Cautions:\n{list}"));
    }
    parts.join("\n")
}

/// One table as text with its caption above and its notes below.
pub fn table(table: &Table, width: usize) -> String {
    let widths = column_widths(table, width);
    let mut text = paragraph(&table.caption, width);
    let total: usize = widths.iter().sum::<usize>() + GAP * widths.len().saturating_sub(1);
    let headings: Vec<String> = table.columns.iter().map(|c| one_line(&c.heading)).collect();
    if headings.iter().any(|h| !h.is_empty()) {
        push_row(&mut text, table, &widths, &headings);
        text.push_str(&"-".repeat(total));
        text.push('\n');
    }
    for row in &table.rows {
        let cells: Vec<String> = (0..table.columns.len()).map(|i| shown(row.cells.get(i))).collect();
        push_row(&mut text, table, &widths, &cells);
    }
    for note in &table.notes {
        text.push_str(&paragraph(note, width));
    }
    text
}

fn shown(cell: Option<&Cell>) -> String {
    match cell {
        Some(cell) if cell.absent => "n/a".to_owned(),
        Some(cell) => one_line(&cell.text),
        None => String::new(),
    }
}

/// Widths at which every column shows its contents, the widest columns of words narrowed until the table fits.
fn column_widths(table: &Table, width: usize) -> Vec<usize> {
    let mut widths = Vec::with_capacity(table.columns.len());
    let mut narrowest = Vec::with_capacity(table.columns.len());
    for (place, column) in table.columns.iter().enumerate() {
        let heading = one_line(&column.heading);
        let cells = || table.rows.iter().map(move |row| shown(row.cells.get(place)));
        let whole = cells().map(|c| columns_of(&c)).max().unwrap_or(0);
        let longest_word = |text: &str| text.split(' ').map(columns_of).max().unwrap_or(0);
        widths.push(whole.max(columns_of(&heading)));
        narrowest.push(match column.align {
            Align::Number => whole.max(longest_word(&heading)),
            Align::Text => {
                cells().map(|c| longest_word(&c)).max().unwrap_or(0).max(longest_word(&heading)).min(16)
            }
        });
    }
    let gaps = GAP * table.columns.len().saturating_sub(1);
    while widths.iter().sum::<usize>() + gaps > width {
        let shrinkable = (0..widths.len()).filter(|&i| widths[i] > narrowest[i].max(1));
        let Some(widest) = shrinkable.max_by_key(|&i| widths[i]) else { break };
        widths[widest] -= 1;
    }
    // Wrapping at words seldom uses a column to its last place.
    for (place, column) in table.columns.iter().enumerate() {
        let cells = table.rows.iter().map(|row| shown(row.cells.get(place)));
        let lines = cells.chain([one_line(&column.heading)]).flat_map(|cell| wrap(&cell, widths[place]));
        widths[place] = lines.map(|line| columns_of(&line)).max().unwrap_or(0);
    }
    widths
}

fn push_row(text: &mut String, table: &Table, widths: &[usize], cells: &[String]) {
    let wrapped: Vec<Vec<String>> = cells.iter().zip(widths).map(|(cell, &w)| wrap(cell, w)).collect();
    let height = wrapped.iter().map(Vec::len).max().unwrap_or(0);
    for line_number in 0..height {
        let mut line = String::new();
        for (place, column) in table.columns.iter().enumerate() {
            let piece = wrapped[place].get(line_number).map_or("", String::as_str);
            let space = " ".repeat(widths[place].saturating_sub(columns_of(piece)));
            if place > 0 {
                line.push_str(&" ".repeat(GAP));
            }
            match column.align {
                Align::Text => line.extend([piece, &space]),
                Align::Number => line.extend([&space, piece]),
            }
        }
        text.push_str(line.trim_end());
        text.push('\n');
    }
}

fn paragraph(text: &str, width: usize) -> String {
    indented(text, width, "", "")
}

fn indented(text: &str, width: usize, first: &str, rest: &str) -> String {
    let mut result = String::new();
    for line in printable(text).lines() {
        for piece in wrap(&one_line(line), width.saturating_sub(rest.len()).max(1)) {
            result.push_str(if result.is_empty() { first } else { rest });
            result.push_str(&piece);
            result.push('\n');
        }
    }
    result
}

/// The text in lines of at most `width` columns, broken at spaces, and inside a word only where it is longer.
fn wrap(text: &str, width: usize) -> Vec<String> {
    let width = width.max(1);
    let mut lines = vec![String::new()];
    let mut used = 0;
    for word in text.split(' ').filter(|word| !word.is_empty()) {
        let size = columns_of(word);
        if used > 0 && used + 1 + size > width {
            lines.push(String::new());
            used = 0;
        }
        if used > 0 {
            push(&mut lines, " ");
            used += 1;
        }
        for c in word.chars() {
            let size = columns_of_char(c);
            if used > 0 && used + size > width {
                lines.push(String::new());
                used = 0;
            }
            push(&mut lines, c.encode_utf8(&mut [0; 4]));
            used += size;
        }
    }
    lines
}

fn push(lines: &mut [String], text: &str) {
    if let Some(line) = lines.last_mut() {
        line.push_str(text);
    }
}

fn columns_of(text: &str) -> usize {
    text.chars().map(columns_of_char).sum()
}

/// Terminal columns of a character: combining marks take none, East Asian wide characters and most pictographs two.
fn columns_of_char(c: char) -> usize {
    match c as u32 {
        0x300..=0x36f | 0x200b..=0x200f | 0xfe00..=0xfe0f => 0,
        0x1100..=0x115f | 0x2e80..=0xa4cf | 0xac00..=0xd7a3 | 0xf900..=0xfaff | 0xfe30..=0xfe6f => 2,
        0xff00..=0xff60 | 0xffe0..=0xffe6 | 0x1f300..=0x1faff | 0x20000..=0x3fffd => 2,
        _ => 1,
    }
}
