//! Words in a drawing: how wide they are, how they are shortened and wrapped.

use crate::answer::clean::one_line;

/// The width of a text in drawing units, estimated from its characters and a little too wide rather than too narrow:
/// nothing here can measure a font.
pub fn width(text: &str, size: f64) -> f64 {
    text.chars().map(em).sum::<f64>() * size
}

fn em(c: char) -> f64 {
    match c {
        'i' | 'j' | 'l' | '\'' | '|' | '.' | ',' | ':' | ';' | '!' | '’' => 0.32,
        ' ' | '\u{a0}' | '\u{202f}' | 'f' | 'r' | 't' | 'I' | '(' | ')' | '[' | ']' | '/' | '-' | '"' => 0.4,
        'm' | 'w' | 'M' | 'W' | '@' | '%' | '…' | '—' => 0.98,
        '−' | '+' | '=' | '<' | '>' | '×' | '≤' | '≥' => 0.82,
        'A'..='Z' => 0.73,
        '\u{300}'..='\u{36f}' => 0.0,
        '\u{1100}'..='\u{115f}'
        | '\u{2e80}'..='\u{d7a3}'
        | '\u{f900}'..='\u{faff}'
        | '\u{ff00}'..='\u{ffe6}' => 1.0,
        '\u{1f000}'.. => 1.2,
        _ => 0.63,
    }
}

/// The text on one line, shortened in its middle where it is wider than `most`: the ends of two level names differ
/// as often as their beginnings.
pub fn shorten(text: &str, size: f64, most: f64) -> String {
    let text = one_line(text);
    if width(&text, size) <= most {
        return text;
    }
    let room = (most - width("…", size)).max(0.0);
    let characters: Vec<char> = text.chars().collect();
    let (mut front, mut back) = (0, 0);
    let mut used = 0.0;
    while front + back < characters.len() {
        let take_front = front <= back;
        let c = if take_front { characters[front] } else { characters[characters.len() - 1 - back] };
        used += em(c) * size;
        if used > room {
            break;
        }
        if take_front {
            front += 1;
        } else {
            back += 1;
        }
    }
    let start: String = characters[..front].iter().collect();
    let end: String = characters[characters.len() - back..].iter().collect();
    format!("{}…{}", start.trim_end(), end.trim_start())
}

/// The text in at most `lines` lines no wider than `most`; what does not fit is shortened, in the last line or, where a single
/// word is too wide, in its own.
pub fn wrap(text: &str, size: f64, most: f64, lines: usize) -> Vec<String> {
    let text = one_line(text);
    let mut done: Vec<String> = Vec::new();
    let mut current = String::new();
    for word in text.split(' ').filter(|word| !word.is_empty()) {
        let longer = if current.is_empty() { word.to_owned() } else { format!("{current} {word}") };
        if width(&longer, size) <= most || current.is_empty() || done.len() + 1 >= lines.max(1) {
            current = longer;
        } else {
            done.push(std::mem::replace(&mut current, word.to_owned()));
        }
    }
    if !current.is_empty() {
        done.push(current);
    }
    done.into_iter().map(|line| shorten(&line, size, most)).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_long_label_keeps_both_of_its_ends() {
        let text = shorten("spaced training in the morning", 13.0, 110.0);
        assert!(text.starts_with("spaced") && text.ends_with("ning") && text.contains('…'), "{text}");
        assert!(width(&text, 13.0) <= 110.0);
        assert_eq!(shorten("none", 13.0, 110.0), "none");
        assert_eq!(shorten("anything", 13.0, 1.0), "…");
    }

    #[test]
    fn a_label_wraps_at_its_spaces_into_the_lines_allowed() {
        assert_eq!(wrap("thirty minutes later", 13.0, 105.0, 2), ["thirty minutes", "later"]);
        assert_eq!(wrap("thirty minutes later", 13.0, 1000.0, 2), ["thirty minutes later"]);
        assert!(wrap("", 13.0, 105.0, 2).is_empty());
        assert!(wrap(&"word ".repeat(40), 13.0, 105.0, 2).len() == 2);
    }
}
