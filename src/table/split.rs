//! Delimited text into fields, by the `csv-core` state machine; and which separator a text uses.

use super::ReadError;
use csv_core::{ReadFieldResult, ReadRecordResult, Reader, ReaderBuilder};
use std::collections::BTreeMap;
use std::ops::Range;

/// The character between the fields of a row.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Separator {
    Comma,
    Semicolon,
    Tab,
}

impl Separator {
    /// The three, in the order in which they win where a text can be read either way: a tab is hardly ever
    /// typed inside a field, a comma often.
    pub const ALL: [Self; 3] = [Self::Tab, Self::Semicolon, Self::Comma];

    /// The character itself, one byte of ASCII.
    pub fn character(self) -> char {
        match self {
            Self::Comma => ',',
            Self::Semicolon => ';',
            Self::Tab => '\t',
        }
    }

    /// As it stands in messages: "," ";" or tab.
    pub fn shown(self) -> &'static str {
        match self {
            Self::Comma => "\",\"",
            Self::Semicolon => "\";\"",
            Self::Tab => "tab",
        }
    }
}

/// The most fields that are read. A table of short fields takes some 25 bytes of memory for each of them until it is
/// read, and the page's engine has 4 GB.
const MOST_FIELDS: usize = 100_000_000;

/// Different values with spaces around them that are looked for without.
const MOST_SPACED: usize = 200;

/// The fields of a table, row by row, in one buffer: 4 bytes a field besides its text.
#[derive(Debug)]
pub(super) struct Cells {
    text: String,
    /// End of each field in `text`; a field begins where the one before ends.
    ends: Vec<u32>,
    columns: usize,
}

impl Cells {
    /// The field as it stands between its separators or quotes.
    fn raw(&self, row: usize, column: usize) -> &str {
        let at = row * self.columns + column;
        let start = if at == 0 { 0 } else { self.ends[at - 1] as usize };
        &self.text[start..self.ends[at] as usize]
    }

    /// A value of the column that is written with spaces around it in some rows (how many) and without in others.
    pub fn spaced_and_bare(&self, column: usize) -> Option<(&str, usize)> {
        let mut spaced: BTreeMap<&str, usize> = BTreeMap::new();
        for row in 0..self.rows() {
            let (raw, bare) = (self.raw(row, column), self.get(row, column));
            if raw.len() != bare.len() && (spaced.len() < MOST_SPACED || spaced.contains_key(bare)) {
                *spaced.entry(bare).or_default() += 1;
            }
        }
        if spaced.is_empty() {
            return None;
        }
        let bare = (0..self.rows()).map(|row| self.raw(row, column)).find(|raw| spaced.contains_key(raw))?;
        Some((bare, spaced[bare]))
    }

    /// The field, with the spaces around it removed. Row 0 is the first row below the header.
    pub fn get(&self, row: usize, column: usize) -> &str {
        let field = self.raw(row, column);
        let bare = |byte: Option<&u8>| byte.is_none_or(u8::is_ascii_graphic);
        // Most fields have nothing to remove, and one look at both ends shows it.
        if bare(field.as_bytes().first()) && bare(field.as_bytes().last()) { field } else { field.trim() }
    }

    /// Cells of one column, from their texts.
    pub fn single_column(texts: impl Iterator<Item = String>) -> Self {
        let (mut text, mut ends) = (String::new(), Vec::new());
        for part in texts {
            text.push_str(&part);
            ends.push(text.len() as u32);
        }
        Self { text, ends, columns: 1 }
    }

    /// Whether no row has anything in the column.
    pub fn is_blank(&self, column: usize) -> bool {
        (0..self.rows()).all(|row| self.get(row, column).is_empty())
    }

    pub fn rows(&self) -> usize {
        self.ends.len() / self.columns.max(1)
    }
}

/// A header and the rows under it.
pub(super) struct Split {
    pub header: Vec<String>,
    pub header_line: u32,
    pub cells: Cells,
    pub lines: Vec<u32>,
}

/// Splits `text`; empty lines are passed over.
///
/// # Errors
/// A text without any row, a row with too few or too many fields, a quote that is never closed.
pub(super) fn split(text: &str, separator: Separator) -> Result<Split, ReadError> {
    split_up_to(MOST_FIELDS, text, separator)
}

fn split_up_to(most_fields: usize, text: &str, separator: Separator) -> Result<Split, ReadError> {
    // Ends of fields are kept in 32 bits.
    if text.len() >= u32::MAX as usize {
        return Err(ReadError::whole("The table is larger than 4 GB. Split it, or leave columns out."));
    }
    let mut records = Records::new(text, separator);
    let Some(record) = records.next_record() else {
        return Err(match records.unclosed {
            Some(line) => unclosed_quote(line),
            None => {
                ReadError::whole("The table is empty. Put in a header row and at least one row of values.")
            }
        });
    };
    let header: Vec<String> =
        (0..record.fields).map(|i| records.field(&record, i).trim().to_owned()).collect();
    let header_line = record.line;
    let columns = header.len();
    records.restart_output();
    let mut lines = Vec::new();
    let mut ends: Vec<u32> = Vec::new();
    while let Some(record) = records.next_record() {
        if record.fields != columns {
            if record.fields == 1 && records.field(&record, 0).trim().is_empty() {
                records.forget(&record);
                continue;
            }
            return Err(ragged(&record, columns, separator, header_line));
        }
        if ends.len() + columns > most_fields {
            return Err(too_many_fields(most_fields, &record, columns));
        }
        lines.push(record.line);
        ends.extend(records.ends[..columns].iter().map(|end| (record.start + end) as u32));
    }
    if let Some(line) = records.unclosed {
        return Err(unclosed_quote(line));
    }
    Ok(Split { header, header_line, cells: Cells { text: records.into_text(), ends, columns }, lines })
}

fn too_many_fields(most: usize, record: &Record, columns: usize) -> ReadError {
    let (rows, line) = (most / columns, record.line);
    let message = format!(
        "Line {line}: the table has more than {most} fields, the most that can be worked with ({rows} rows of {columns} columns). Leave out columns that are not needed, or split the table."
    );
    ReadError::at_line(line, message)
}

fn unclosed_quote(line: u32) -> ReadError {
    ReadError::at_line(
        line,
        format!("Line {line}: a double quote is opened and never closed. Close it, or remove it."),
    )
}

fn ragged(record: &Record, columns: usize, separator: Separator, header_line: u32) -> ReadError {
    let found = if record.fields == 1 { "1 field".into() } else { format!("{} fields", record.fields) };
    let advice = if record.fields > columns {
        "Put a field that contains the separator in double quotes, or remove the extra one."
    } else {
        "Add the missing separators; a field between them may stay empty."
    };
    let line = record.line;
    let message = format!(
        "Line {line}: {found}, but the header (line {header_line}) has {columns}, separated by {}. {advice}",
        separator.shown()
    );
    ReadError::at_line(line, message)
}

/// One record's place: `start` in the output, the ends of its fields in [`Records::ends`].
pub(super) struct Record {
    pub line: u32,
    pub fields: usize,
    start: usize,
    /// Where the record begins in the input.
    begin: usize,
}

/// Reads record after record, with line numbers for LF, CRLF and CR alike.
pub(super) struct Records<'a> {
    input: &'a [u8],
    reader: Reader,
    at: usize,
    line: u32,
    output: Vec<u8>,
    written: usize,
    ends: Vec<usize>,
    /// The line on which a record began whose quote is never closed.
    unclosed: Option<u32>,
    separator: u8,
    /// Bytes of the byte order mark in front of the input.
    skipped: usize,
}

impl<'a> Records<'a> {
    pub fn new(text: &'a str, separator: Separator) -> Self {
        let input = without_mark(text).as_bytes();
        let skipped = text.len() - input.len();
        let separator = separator.character() as u8;
        let reader = ReaderBuilder::new().delimiter(separator).build();
        // Unquoting only ever shortens, so the fields fit into as many bytes; one more for the final line end.
        let output = vec![0; input.len() + 1];
        Self {
            input,
            reader,
            at: 0,
            line: 1,
            output,
            written: 0,
            ends: vec![0; 16],
            unclosed: None,
            separator,
            skipped,
        }
    }

    /// The next record; `None` at the end of the text or at a quote that is never closed.
    pub fn next_record(&mut self) -> Option<Record> {
        self.skip_line_ends();
        if self.at >= self.input.len() || self.unclosed.is_some() {
            return None;
        }
        let (start, begin, line) = (self.written, self.at, self.line);
        let (mut fields, mut final_end_fed) = (0, false);
        loop {
            let at_end = self.at >= self.input.len();
            if at_end && final_end_fed {
                // Even a line end did not finish the record: it is inside a quoted field.
                self.unclosed = Some(line);
                return None;
            }
            let input = if at_end { b"\n".as_slice() } else { &self.input[self.at..] };
            final_end_fed |= at_end;
            let (result, read, wrote, ended) =
                self.reader.read_record(input, &mut self.output[self.written..], &mut self.ends[fields..]);
            if !at_end {
                self.at += read;
            }
            self.written += wrote;
            fields += ended;
            match result {
                ReadRecordResult::Record => break,
                ReadRecordResult::End => return None,
                ReadRecordResult::OutputEndsFull => {
                    self.ends.resize(self.ends.len() * 2, 0);
                    // The line end may not have been read yet.
                    final_end_fed &= read > 0;
                }
                ReadRecordResult::InputEmpty | ReadRecordResult::OutputFull => {}
            }
        }
        self.count_lines(begin, self.written - start, fields);
        Some(Record { line, fields, start, begin })
    }

    pub fn field(&self, record: &Record, index: usize) -> &str {
        let from = if index == 0 { 0 } else { self.ends[index - 1] };
        let bytes = &self.output[record.start + from..record.start + self.ends[index]];
        // Cut at ASCII characters only, the text stays valid.
        std::str::from_utf8(bytes).unwrap_or_default()
    }

    /// Lets the output begin anew: what was written so far is no longer needed.
    fn restart_output(&mut self) {
        self.written = 0;
    }

    /// Bytes of the text (byte order mark included) that hold the field of data row `row`, quotes and spaces and all.
    pub fn field_span(mut self, row: usize, column: usize) -> Option<Range<usize>> {
        let columns = self.next_record()?.fields;
        let mut at_row = 0;
        let begin = loop {
            let record = self.next_record()?;
            if record.fields == columns {
                if at_row == row {
                    break record.begin;
                }
                at_row += 1;
            }
            self.restart_output();
        };
        let body = &self.input[begin..self.at];
        let mut reader = ReaderBuilder::new().delimiter(self.separator).build();
        let (mut at, mut at_column) = (0, 0);
        let mut output = vec![0; body.len() + 1];
        while at < body.len() {
            let (result, read, _) = reader.read_field(&body[at..], &mut output);
            let ended = matches!(result, ReadFieldResult::Field { .. });
            if at_column == column {
                let span = begin + at..begin + at + read - usize::from(ended);
                return Some(span.start + self.skipped..span.end + self.skipped);
            }
            at += read;
            at_column += 1;
        }
        // A last field without a single character.
        let end = begin + body.len() + self.skipped;
        (at_column == column && column < columns).then_some(end..end)
    }

    /// Takes the last record's text out of the output again.
    fn forget(&mut self, record: &Record) {
        self.written = record.start;
    }

    /// Passes over line ends before a record, counting each CRLF once.
    fn skip_line_ends(&mut self) {
        while let Some(&byte) = self.input.get(self.at) {
            match byte {
                b'\r' => {
                    self.at += if self.input.get(self.at + 1) == Some(&b'\n') { 2 } else { 1 };
                    self.line += 1;
                }
                b'\n' => {
                    self.at += 1;
                    self.line += 1;
                }
                _ => break,
            }
        }
    }

    /// Steps back before the line end that closed the record, for [`Self::skip_line_ends`] to count, and counts those
    /// inside the record that began at `begin`. Unless bytes were dropped for quotes there are none.
    fn count_lines(&mut self, begin: usize, wrote: usize, fields: usize) {
        let read = &self.input[begin..self.at];
        let body = read.strip_suffix(b"\r\n").or_else(|| read.strip_suffix(b"\n"));
        let body = body.or_else(|| read.strip_suffix(b"\r")).unwrap_or(read);
        self.at = begin + body.len();
        if wrote + fields == body.len() + 1 {
            return;
        }
        let mut before = 0;
        for &byte in body {
            self.line += u32::from(byte == b'\r' || (byte == b'\n' && before != b'\r'));
            before = byte;
        }
    }

    fn into_text(mut self) -> String {
        self.output.truncate(self.written);
        self.output.shrink_to_fit();
        String::from_utf8(self.output).unwrap_or_default()
    }
}

/// `text` without a byte order mark at its start.
pub(super) fn without_mark(text: &str) -> &str {
    text.strip_prefix('\u{feff}').unwrap_or(text)
}

/// What a look at the first part of a text says about its separator.
pub(super) struct Found {
    pub separator: Separator,
    /// Another separator that would split the text as evenly.
    pub rival: Option<Separator>,
}

/// The separator that splits the first rows most evenly. Where two do so equally well the order of
/// [`Separator::ALL`] decides, and the other is named.
pub(super) fn find_separator(text: &str) -> Found {
    let sample = beginning(text);
    let looks = Separator::ALL.map(|separator| look(sample, separator));
    let even: Vec<&Look> = looks.iter().filter(|look| look.columns > 1 && look.uneven == 0).collect();
    if let Some(first) = even.first() {
        return Found { separator: first.separator, rival: even.get(1).map(|look| look.separator) };
    }
    let splitting = looks.iter().filter(|look| look.columns > 1);
    if let Some(best) = splitting.min_by_key(|look| look.uneven) {
        return Found { separator: best.separator, rival: None };
    }
    // One column: a separator that never splits anything.
    let single = looks.iter().find(|look| look.uneven == 0);
    Found { separator: single.map_or(Separator::Tab, |look| look.separator), rival: None }
}

struct Look {
    separator: Separator,
    columns: usize,
    /// Rows of the sample with another number of fields than the header.
    uneven: usize,
}

fn look(sample: &str, separator: Separator) -> Look {
    let mut records = Records::new(sample, separator);
    let columns = records.next_record().map_or(0, |record| record.fields);
    let mut uneven = 0;
    while let Some(record) = records.next_record() {
        let blank = record.fields == 1 && records.field(&record, 0).trim().is_empty();
        uneven += usize::from(record.fields != columns && !blank);
    }
    // An opened quote swallowed what follows: nothing says that this separator fits.
    uneven += usize::from(records.unclosed.is_some());
    Look { separator, columns, uneven }
}

/// The first 64 kB or so, up to a line end where there is one.
fn beginning(text: &str) -> &str {
    let limit = 1 << 16;
    if text.len() <= limit {
        return text;
    }
    let bytes = &text.as_bytes()[..limit];
    match bytes.iter().rposition(|&b| b == b'\n' || b == b'\r') {
        Some(end) => &text[..=end],
        None => &text[..(0..=limit).rev().find(|&at| text.is_char_boundary(at)).unwrap_or(0)],
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn more_fields_than_can_be_worked_with_are_refused_on_the_line_that_goes_beyond() {
        let text = "g,y\na,1\nb,2\nc,3\n";
        assert!(split_up_to(6, text, Separator::Comma).is_ok());
        let Err(error) = split_up_to(5, text, Separator::Comma) else {
            panic!("six fields of five were taken")
        };
        assert_eq!(error.line, Some(4));
        assert_eq!(
            error.message,
            "Line 4: the table has more than 5 fields, the most that can be worked with (2 rows of 2 columns). Leave out columns that are not needed, or split the table."
        );
    }
}
