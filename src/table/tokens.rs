//! The words and signs of conditions and expressions, with their places.

use std::ops::Range;

#[derive(Debug, Clone, PartialEq)]
pub(super) enum Token {
    /// A column: a plain word, or any name in single quotes.
    Name(String),
    /// A plain word: like [`Token::Name`], but it may also be `and`, `or` or a function.
    Word(String),
    /// A number without sign, as typed.
    Number(String),
    /// A text in double quotes.
    Text(String),
    Sign(&'static str),
}

#[derive(Debug, Clone, PartialEq)]
pub(super) struct Placed {
    pub token: Token,
    pub span: Range<usize>,
}

/// What is wrong with a condition or an expression, and where.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Misfit {
    pub span: Range<usize>,
    pub message: String,
}

impl Misfit {
    pub fn new(span: Range<usize>, message: impl Into<String>) -> Self {
        Self { span, message: message.into() }
    }
}

/// Signs, longest first.
const SIGNS: [&str; 13] = ["!=", "<=", ">=", "=", "<", ">", "≠", "≤", "≥", "+", "*", "/", "-"];
const BRACKETS: [&str; 2] = ["(", ")"];

/// Splits `text` into tokens.
///
/// # Errors
/// A quote that is never closed, or a character that has no meaning here.
pub(super) fn tokens(text: &str) -> Result<Vec<Placed>, Misfit> {
    let mut found = Vec::new();
    let mut at = 0;
    while let Some(first) = text[at..].chars().next() {
        let rest = &text[at..];
        let (token, length) = match first {
            c if c.is_whitespace() => {
                at += c.len_utf8();
                continue;
            }
            '\'' | '"' => {
                let (content, length) = until_quote(rest, first).ok_or_else(|| {
                    Misfit::new(at..text.len(), format!("The quote {first} is never closed."))
                })?;
                (if first == '"' { Token::Text(content) } else { Token::Name(content) }, length)
            }
            c if c.is_ascii_digit() || (c == '.' && rest[1..].starts_with(|c: char| c.is_ascii_digit())) => {
                let length = number_length(rest);
                (Token::Number(rest[..length].to_owned()), length)
            }
            c if c.is_alphabetic() || c == '_' => {
                let end = rest.find(|c: char| !(c.is_alphanumeric() || matches!(c, '_' | '.')));
                let length = end.unwrap_or(rest.len());
                (Token::Word(rest[..length].to_owned()), length)
            }
            _ => sign(rest).ok_or_else(|| unknown(text, at, first))?,
        };
        found.push(Placed { token, span: at..at + length });
        at += length;
    }
    Ok(found)
}

fn sign(rest: &str) -> Option<(Token, usize)> {
    if rest.starts_with("==") {
        return None;
    }
    let all = SIGNS.iter().chain(&BRACKETS);
    let sign = all.copied().find(|sign| rest.starts_with(sign))?;
    // The mathematical signs are the same as the typed ones.
    let meaning = match sign {
        "≠" => "!=",
        "≤" => "<=",
        "≥" => ">=",
        other => other,
    };
    Some((Token::Sign(meaning), sign.len()))
}

fn unknown(text: &str, at: usize, found: char) -> Misfit {
    if text[at..].starts_with("==") {
        return Misfit::new(at..at + 2, "\"==\" has no meaning here. Use a single = for equal.");
    }
    let advice = match found {
        ',' => "Numbers are written with a decimal point here.",
        '&' => "Use the word and.",
        '|' => "Use the word or.",
        '^' => "Multiply instead, or use exp and log.",
        _ => "Put a column name that contains it in single quotes, a text in double quotes.",
    };
    Misfit::new(at..at + found.len_utf8(), format!("\"{found}\" has no meaning here. {advice}"))
}

/// Content and length of the quoted text at the start; a doubled quote stands for one.
fn until_quote(rest: &str, quote: char) -> Option<(String, usize)> {
    let mut content = String::new();
    let mut characters = rest.char_indices().skip(1).peekable();
    while let Some((at, c)) = characters.next() {
        if c != quote {
            content.push(c);
        } else if characters.peek().is_some_and(|(_, next)| *next == quote) {
            content.push(quote);
            characters.next();
        } else {
            return Some((content, at + 1));
        }
    }
    None
}

fn number_length(rest: &str) -> usize {
    let bytes = rest.as_bytes();
    let digits =
        |from: usize| from + bytes[from..].iter().take_while(|b| b.is_ascii_digit() || **b == b'.').count();
    let end = digits(0);
    if matches!(bytes.get(end), Some(b'e' | b'E')) {
        let sign = usize::from(matches!(bytes.get(end + 1), Some(b'+' | b'-')));
        if bytes.get(end + 1 + sign).is_some_and(u8::is_ascii_digit) {
            return digits(end + 1 + sign);
        }
    }
    end
}

/// A list of tokens being read from left to right.
pub(super) struct Cursor<'a> {
    tokens: &'a [Placed],
    at: usize,
    end: usize,
    depth: usize,
}

impl<'a> Cursor<'a> {
    /// `length` is that of the text, where an error about its end points.
    pub fn new(tokens: &'a [Placed], length: usize) -> Self {
        Self { tokens, at: 0, end: length, depth: 0 }
    }

    pub fn peek(&self) -> Option<&'a Token> {
        self.tokens.get(self.at).map(|placed| &placed.token)
    }

    pub fn next(&mut self) -> Option<&'a Placed> {
        let placed = self.tokens.get(self.at)?;
        self.at += 1;
        Some(placed)
    }

    /// Makes the token that was read last the next one again.
    pub fn step_back(&mut self) {
        self.at = self.at.saturating_sub(1);
    }

    /// Where the token that was read last ends.
    pub fn reached(&self) -> usize {
        self.at.checked_sub(1).and_then(|at| self.tokens.get(at)).map_or(0, |placed| placed.span.end)
    }

    /// Takes the sign if it comes next.
    pub fn take(&mut self, sign: &str) -> bool {
        let there = matches!(self.peek(), Some(Token::Sign(next)) if *next == sign);
        self.at += usize::from(there);
        there
    }

    /// Takes the word, in any case of letters, if it comes next.
    pub fn take_word(&mut self, word: &str) -> bool {
        let there = matches!(self.peek(), Some(Token::Word(next)) if next.eq_ignore_ascii_case(word));
        self.at += usize::from(there);
        there
    }

    /// Where the next token stands; the end of the text after the last one.
    pub fn place(&self) -> Range<usize> {
        self.tokens.get(self.at).map_or(self.end..self.end, |placed| placed.span.clone())
    }

    /// What comes next, for a message.
    pub fn found(&self, text: &str) -> String {
        match self.tokens.get(self.at) {
            Some(placed) => super::column::shortened(&text[placed.span.clone()]),
            None => "the end".into(),
        }
    }

    /// Goes one bracket deeper, up to a depth that no person needs and any stack holds.
    pub fn deeper(&mut self) -> Result<(), Misfit> {
        self.depth += 1;
        if self.depth > 60 {
            return Err(Misfit::new(
                self.place(),
                "Brackets and signs are nested too deeply. Use at most 60.",
            ));
        }
        Ok(())
    }

    pub fn back_up(&mut self) {
        self.depth -= 1;
    }
}
