//! The notebook file: a version line, then one `[[cell]]` after the other. A cell that does not parse is kept
//! word for word; it never keeps the others from being read.

/// The file format's version that this program writes and reads.
pub const VERSION: i64 = 1;

/// The line that begins a cell.
const CELL_HEADER: &str = "[[cell]]";

/// A notebook as text: what stands before the first cell, and the text of every cell without its header line.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Document {
    pub preamble: String,
    pub cells: Vec<CellText>,
    /// A remark on the whole file: a newer version, or a first line that could not be read.
    pub notice: Option<String>,
}

/// One cell's text and where it stood in the file.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct CellText {
    pub text: String,
    /// Line of the file, from 1, on which `text` begins.
    pub line: usize,
}

impl Document {
    /// A notebook without cells.
    pub fn empty() -> Self {
        Self { preamble: format!("levelwise = {VERSION}\n"), cells: Vec::new(), notice: None }
    }

    /// Reads a notebook file. Text that is no notebook at all comes back as the reason.
    ///
    /// # Errors
    /// A sentence, when the text has neither a version line nor a cell.
    pub fn read(file: &str) -> Result<Self, String> {
        let file = file.trim_start_matches('\u{feff}');
        let (preamble, cells) = split(file);
        let version = preamble
            .parse::<toml_edit::DocumentMut>()
            .ok()
            .and_then(|head| head.get("levelwise")?.as_integer());
        if version.is_none() && cells.is_empty() && !file.trim().is_empty() {
            return Err("This is not a notebook: it has no line \"levelwise = 1\" and no [[cell]]. Open a file saved as \
                        NAME.levelwise.toml; to compare the groups of a table, paste the table instead."
                .to_string());
        }
        let notice = match version {
            Some(version) if version > VERSION => Some(format!(
                "This notebook was written by a newer version (format {version}; this program reads format {VERSION}). Cells that it does not know \
                 are kept as they are; use the newer version to work with them."
            )),
            Some(_) => None,
            None if file.trim().is_empty() => None,
            None => Some(format!(
                "Line 1 should say \"levelwise = {VERSION}\" (the version of the file format); the cells were read all the same."
            )),
        };
        let preamble = if file.trim().is_empty() { Self::empty().preamble } else { preamble };
        Ok(Self { preamble, cells, notice })
    }

    /// The file's text.
    pub fn write<'a>(preamble: &str, cells: impl IntoIterator<Item = &'a str>) -> String {
        let mut file = preamble.trim_end().to_string();
        if !file.is_empty() {
            file.push('\n');
        }
        for cell in cells {
            file.push_str("\n[[cell]]\n");
            file.push_str(cell.trim_end_matches('\n'));
            file.push('\n');
        }
        file
    }
}

/// Cuts the file at its `[[cell]]` lines, except those inside a multi-line string.
fn split(file: &str) -> (String, Vec<CellText>) {
    let mut headers = header_lines(file, true);
    if headers.is_empty() && file.contains(CELL_HEADER) {
        headers = header_lines(file, false);
    }
    let preamble_end = headers.first().map_or(file.len(), |header| header.start);
    let mut cells = Vec::with_capacity(headers.len());
    for (index, header) in headers.iter().enumerate() {
        let end = headers.get(index + 1).map_or(file.len(), |next| next.start);
        let text = file[header.end..end].trim_end_matches(['\n', '\r']);
        cells.push(CellText { text: format!("{text}\n"), line: header.line + 1 });
    }
    (file[..preamble_end].to_string(), cells)
}

struct Header {
    start: usize,
    end: usize,
    line: usize,
}

/// Finds the header lines. With `respect_strings`, lines inside `"""` or `'''` strings do not count, unless the
/// string is never closed: then whoever broke it broke one cell only, and the headers after it count again.
fn header_lines(file: &str, respect_strings: bool) -> Vec<Header> {
    let mut headers = Vec::new();
    let mut offset = 0;
    let mut open: Option<&str> = None;
    for (index, line) in file.split_inclusive('\n').enumerate() {
        if open.is_none() && line.trim() == CELL_HEADER {
            headers.push(Header { start: offset, end: offset + line.len(), line: index + 1 });
        } else if respect_strings {
            open = match (open, string_state(line, open)) {
                (None, Some(quote)) if !file[offset + line.len()..].contains(quote) => None,
                (_, state) => state,
            };
        }
        offset += line.len();
    }
    headers
}

/// Which multi-line string, if any, is open after `line`.
fn string_state<'a>(line: &str, mut open: Option<&'a str>) -> Option<&'a str> {
    let bytes = line.as_bytes();
    let mut at = 0;
    while at < bytes.len() {
        let rest = &line[at..];
        match open {
            Some(quote) if rest.starts_with(quote) => {
                open = None;
                at += quote.len();
            }
            Some("\"\"\"") if bytes[at] == b'\\' => at += 2,
            None if rest.starts_with("\"\"\"") => {
                open = Some("\"\"\"");
                at += 3;
            }
            None if rest.starts_with("'''") => {
                open = Some("'''");
                at += 3;
            }
            None if bytes[at] == b'#' => return None,
            None if bytes[at] == b'"' || bytes[at] == b'\'' => at += one_line_string(&bytes[at..]),
            _ => at += 1,
        }
        while at < bytes.len() && !line.is_char_boundary(at) {
            at += 1;
        }
    }
    open
}

/// Length of the one-line string that begins at the first byte.
fn one_line_string(bytes: &[u8]) -> usize {
    let quote = bytes[0];
    let mut at = 1;
    while at < bytes.len() {
        match bytes[at] {
            b'\\' if quote == b'"' => at += 1,
            byte if byte == quote => return at + 1,
            _ => {}
        }
        at += 1;
    }
    at
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn byte_order_marks_before_a_notebook_are_no_part_of_it() {
        let one = Document::read("\u{feff}\u{feff}\n[[cell]]\n").unwrap();
        assert!(
            !Document::write(&one.preamble, one.cells.iter().map(|cell| &*cell.text)).contains('\u{feff}')
        );
    }

    fn texts(file: &str) -> Vec<String> {
        Document::read(file).expect("a notebook").cells.into_iter().map(|cell| cell.text).collect()
    }

    #[test]
    fn cells_are_cut_at_their_headers_and_written_back_the_same() {
        let file = "levelwise = 1\n\n[[cell]]\nkind = \"note\"\ntext = \"\"\"\n[[cell]]\nit's \"fine\"\n\"\"\"\n\n[[cell]]\nkind = \"profile\"\n";
        let document = Document::read(file).expect("a notebook");
        assert_eq!(document.cells.len(), 2);
        assert_eq!(document.cells[1].line, 11);
        assert_eq!(
            Document::write(&document.preamble, document.cells.iter().map(|cell| cell.text.as_str())),
            file
        );
    }

    #[test]
    fn a_string_that_is_never_closed_breaks_one_cell_only() {
        let file = "levelwise = 1\n[[cell]]\ntext = \"\"\"open\n[[cell]]\nkind = \"note\"\n";
        assert_eq!(texts(file), ["text = \"\"\"open\n", "kind = \"note\"\n"]);
    }

    #[test]
    fn a_newer_version_is_said_and_a_stranger_refused() {
        assert!(
            Document::read("levelwise = 99\n")
                .expect("a notebook")
                .notice
                .expect("a notice")
                .contains("newer version")
        );
        assert!(Document::read("a,b\n1,2\n").expect_err("no notebook").contains("not a notebook"));
        assert!(Document::read("").expect("an empty notebook").cells.is_empty());
    }
}
