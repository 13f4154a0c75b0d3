//! Text from a person's data made fit to be shown: no control characters, which XML forbids, terminals obey and
//! browsers drop.

use std::borrow::Cow;

/// The text with every control character other than a line break or tab, and every code point that XML does not
/// allow, shown as "\u{FFFD}".
pub fn printable(text: &str) -> Cow<'_, str> {
    if text.chars().any(is_unfit) {
        Cow::Owned(text.chars().map(|c| if is_unfit(c) { '\u{fffd}' } else { c }).collect())
    } else {
        Cow::Borrowed(text)
    }
}

/// The same on one line: line breaks and tabs become spaces.
pub fn one_line(text: &str) -> String {
    printable(text)
        .chars()
        .map(|c| if c.is_whitespace() && c != '\u{a0}' && c != '\u{202f}' { ' ' } else { c })
        .collect()
}

fn is_unfit(c: char) -> bool {
    (c.is_control() && !matches!(c, '\n' | '\t')) || matches!(c, '\u{fffe}' | '\u{ffff}')
}
