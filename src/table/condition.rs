//! Conditions on rows: comparisons of a column with a number or a text, joined by `and` and `or`.
//!
//! `and` binds before `or`. A row whose value is missing meets no comparison, `!=` included: it is accounted
//! for as missing.

use super::read::unknown_column;
use super::tokens::{Cursor, Misfit, Token, tokens};
use super::{Column, ColumnKind};
use crate::numerics::decimal::{Decimal, DecimalMark};
use std::ops::Range;

#[derive(Debug, Clone, PartialEq)]
pub(super) enum Condition {
    Compare { column: usize, operator: &'static str, with: Operand, span: Range<usize> },
    All(Vec<Condition>),
    Any(Vec<Condition>),
}

/// What a column is compared with.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Operand {
    /// The number, and the text that spells it: in a column of labels it is compared as text.
    Number(f64, String),
    Text(String),
}

/// The condition that `text` spells over columns called `names`.
///
/// # Errors
/// [`Misfit`] at the first place that does not fit, with what would.
pub(super) fn parse(text: &str, names: &[&str]) -> Result<Condition, Misfit> {
    let tokens = tokens(text)?;
    let mut parser = Parser { text, names, cursor: Cursor::new(&tokens, text.len()) };
    if tokens.is_empty() {
        return Err(Misfit::new(0..text.len(), "The condition is empty. Write one such as score > 100."));
    }
    let condition = parser.any()?;
    if parser.cursor.peek().is_some() {
        return Err(parser.expected("and, or, or the end of the condition"));
    }
    Ok(condition)
}

struct Parser<'a> {
    text: &'a str,
    names: &'a [&'a str],
    cursor: Cursor<'a>,
}

impl Parser<'_> {
    fn expected(&self, what: &str) -> Misfit {
        Misfit::new(self.cursor.place(), format!("Expected {what}, found {}.", self.cursor.found(self.text)))
    }

    fn any(&mut self) -> Result<Condition, Misfit> {
        let mut parts = vec![self.all()?];
        while self.cursor.take_word("or") {
            parts.push(self.all()?);
        }
        Ok(if parts.len() == 1 { parts.remove(0) } else { Condition::Any(parts) })
    }

    fn all(&mut self) -> Result<Condition, Misfit> {
        let mut parts = vec![self.single()?];
        while self.cursor.take_word("and") {
            parts.push(self.single()?);
        }
        Ok(if parts.len() == 1 { parts.remove(0) } else { Condition::All(parts) })
    }

    fn single(&mut self) -> Result<Condition, Misfit> {
        if self.cursor.take("(") {
            self.cursor.deeper()?;
            let inside = self.any()?;
            self.cursor.back_up();
            if !self.cursor.take(")") {
                return Err(self.expected("and, or, or a closing bracket"));
            }
            return Ok(inside);
        }
        let (name, span) = match self.cursor.peek() {
            Some(Token::Name(name) | Token::Word(name)) => (name, self.cursor.place()),
            _ => return Err(self.expected("a column name")),
        };
        self.cursor.next();
        let column = column_index(name, &span, self.names)?;
        let operator = match self.cursor.peek() {
            Some(Token::Sign(sign @ ("=" | "!=" | "<" | "<=" | ">" | ">="))) => *sign,
            _ => return Err(self.expected("=, !=, <, <=, > or >=")),
        };
        self.cursor.next();
        let from = span.start;
        let with = self.operand()?;
        Ok(Condition::Compare { column, operator, with, span: from..self.cursor.reached() })
    }

    fn operand(&mut self) -> Result<Operand, Misfit> {
        let start = self.cursor.place();
        let negative = self.cursor.take("-");
        match self.cursor.peek() {
            Some(Token::Number(digits)) => {
                self.cursor.next();
                let spelled = if negative { format!("-{digits}") } else { digits.clone() };
                let number = Decimal::parse(&spelled, DecimalMark::Point)
                    .map_err(|why| Misfit::new(start, format!("\"{spelled}\" is {why}.")))?;
                Ok(Operand::Number(number.to_f64(), spelled))
            }
            Some(Token::Text(text)) if !negative => {
                self.cursor.next();
                Ok(Operand::Text(text.clone()))
            }
            Some(Token::Word(word)) if !negative => {
                let message = format!(
                    "Expected a number or a text, found {word}. Put a text in double quotes: \"{word}\"."
                );
                Err(Misfit::new(start, message))
            }
            _ => Err(self.expected("a number, or a text in double quotes")),
        }
    }
}

/// Position of the column called `name`.
pub(super) fn column_index(name: &str, span: &Range<usize>, names: &[&str]) -> Result<usize, Misfit> {
    let at = names.iter().position(|known| *known == name);
    at.ok_or_else(|| Misfit::new(span.clone(), unknown_column(name, names.iter().copied())))
}

impl Condition {
    /// The highest column index that the condition reads.
    pub fn highest_column(&self) -> usize {
        match self {
            Self::Compare { column, .. } => *column,
            Self::All(parts) | Self::Any(parts) => parts.iter().map(Self::highest_column).max().unwrap_or(0),
        }
    }

    /// Whether the columns can be compared as asked.
    ///
    /// # Errors
    /// An order between labels, or between a number and a text.
    pub fn check(&self, columns: &[Column]) -> Result<(), Misfit> {
        match self {
            Self::All(parts) | Self::Any(parts) => parts.iter().try_for_each(|part| part.check(columns)),
            Self::Compare { operator: "=" | "!=", .. } => Ok(()),
            Self::Compare { column, with, span, operator } => {
                if let Some(message) = columns[*column].needs_numbers() {
                    return Err(Misfit::new(span.clone(), message));
                }
                match with {
                    Operand::Number(..) => Ok(()),
                    Operand::Text(text) => {
                        let message = format!(
                            "{operator} compares numbers, and \"{text}\" is a text. Write a number without quotes."
                        );
                        Err(Misfit::new(span.clone(), message))
                    }
                }
            }
        }
    }

    /// Whether `row` meets the condition.
    pub fn met(&self, columns: &[Column], row: usize) -> bool {
        match self {
            Self::All(parts) => parts.iter().all(|part| part.met(columns, row)),
            Self::Any(parts) => parts.iter().any(|part| part.met(columns, row)),
            Self::Compare { column, operator, with, .. } => {
                let column = &columns[*column];
                if column.missing(row) {
                    return false;
                }
                match with {
                    Operand::Number(number, _) if column.kind == ColumnKind::Number => {
                        column.value(row).is_some_and(|value| compare(value, operator, *number))
                    }
                    Operand::Number(_, text) | Operand::Text(text) => {
                        (column.text(row) == text.trim()) == (*operator == "=")
                    }
                }
            }
        }
    }
}

fn compare(value: f64, operator: &str, number: f64) -> bool {
    match operator {
        "=" => value == number,
        "!=" => value != number,
        "<" => value < number,
        "<=" => value <= number,
        ">" => value > number,
        _ => value >= number,
    }
}
