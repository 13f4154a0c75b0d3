//! Arithmetic on level names: `(15 min + 30 min)/2 - none` becomes one coefficient a level.
//!
//! ```text
//! sum     = product { ("+" | "-") product }
//! product = signed { ("*" | "/") signed }
//! signed  = { "+" | "-" } operand
//! operand = number | level | "'" level "'" | "(" sum ")"
//! ```
//! A bare level name is the longest one that fits and ends at an operator, a bracket or the end. It needs single
//! quotes where it could be misread: when it is a number, when it holds a quote, or when it contains an operator
//! between the names of two other levels. A quote inside quotes is doubled.

use super::{listed, unknown_level};
use crate::table::nearest;
use std::ops::Range;

/// What is wrong in an expression, and where (bytes of the expression).
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[error("{message}")]
pub struct ExpressionError {
    pub span: Range<usize>,
    /// What was found and what to do, as one or two sentences.
    pub message: String,
}

/// The coefficient of each level in the expression `text`. Their sum is not judged here.
///
/// # Errors
/// [`ExpressionError`] for anything that is not arithmetic on the names in `levels`, for products of levels, for a
/// number that is added to a level, and for brackets more than 100 deep.
pub fn coefficients(text: &str, levels: &[String]) -> Result<Vec<f64>, ExpressionError> {
    let mut reader = Reader { text, at: 0, depth: 0, levels };
    let value = reader.sum()?;
    reader.skip_space();
    if reader.at < text.len() {
        let found = reader.rest().chars().next().unwrap_or(' ');
        let message = match found {
            ')' => "this bracket closes none that is open. Remove it, or open one before.".to_string(),
            _ => format!("\"{found}\" is not expected here. Put an operator (+ - * /) between the parts."),
        };
        return Err(reader.error(reader.at..reader.at + found.len_utf8(), message));
    }
    value.levels_only(&reader)
}

/// A number, plus a weight for each level.
struct Value {
    constant: f64,
    weights: Vec<f64>,
    span: Range<usize>,
}

impl Value {
    fn is_number(&self) -> bool {
        self.weights.iter().all(|weight| *weight == 0.0)
    }

    fn scaled(mut self, factor: f64) -> Self {
        self.constant *= factor;
        self.weights.iter_mut().for_each(|weight| *weight *= factor);
        self
    }

    fn levels_only(self, reader: &Reader) -> Result<Vec<f64>, ExpressionError> {
        if self.constant == 0.0 && self.constant.is_finite() {
            return Ok(self.weights);
        }
        let numeric = reader.levels.iter().find(|level| level.trim().parse::<f64>().is_ok());
        let hint = match numeric {
            Some(level) => format!("If a level is meant, put its name in single quotes: '{level}'."),
            None => "Use numbers only to multiply or divide levels.".to_string(),
        };
        let number = super::tidy(self.constant);
        let message = format!("the number {number} stands alone and is no level. {hint}");
        Err(reader.error(self.span, message))
    }
}

struct Reader<'a> {
    text: &'a str,
    at: usize,
    depth: usize,
    levels: &'a [String],
}

impl<'a> Reader<'a> {
    fn sum(&mut self) -> Result<Value, ExpressionError> {
        let mut total = self.product()?;
        while let Some(sign) = self.take(&['+', '-', '\u{2212}']) {
            let right = self.product()?.scaled(if sign == '+' { 1.0 } else { -1.0 });
            total.constant += right.constant;
            total.weights.iter_mut().zip(&right.weights).for_each(|(sum, weight)| *sum += weight);
            total.span.end = right.span.end;
        }
        Ok(total)
    }

    fn product(&mut self) -> Result<Value, ExpressionError> {
        let mut left = self.signed()?;
        while let Some(operator) = self.take(&['*', '/']) {
            let right = self.signed()?;
            let span = left.span.start..right.span.end;
            left = if operator == '/' {
                self.quotient(left, &right)?
            } else if right.is_number() {
                left.scaled(right.constant)
            } else if left.is_number() {
                right.scaled(left.constant)
            } else {
                let message = "two levels are multiplied. A level can only be multiplied by a number.";
                return Err(self.error(span, message.to_string()));
            };
            left.span = span;
        }
        Ok(left)
    }

    fn quotient(&self, left: Value, right: &Value) -> Result<Value, ExpressionError> {
        let message = if !right.is_number() {
            "a level stands below the line. A level can only be divided by a number."
        } else if right.constant == 0.0 {
            "this divides by 0. Divide by the number of levels that are averaged."
        } else {
            return Ok(left.scaled(1.0 / right.constant));
        };
        Err(self.error(right.span.clone(), message.to_string()))
    }

    fn signed(&mut self) -> Result<Value, ExpressionError> {
        let mut factor = 1.0;
        while let Some(sign) = self.take(&['+', '-', '\u{2212}']) {
            factor *= if sign == '+' { 1.0 } else { -1.0 };
        }
        Ok(self.operand()?.scaled(factor))
    }

    fn operand(&mut self) -> Result<Value, ExpressionError> {
        self.skip_space();
        let start = self.at;
        match self.rest().chars().next() {
            None => {
                let message = "the expression ends where a level is needed. Write one, such as ".to_string();
                Err(self
                    .error(start..start, message + &listed(&self.levels[..self.levels.len().min(1)]) + "."))
            }
            Some('(') => self.bracket(),
            Some('\'') => self.quoted(),
            Some(found @ (')' | '*' | '/')) => {
                let message = format!("\"{found}\" stands where a level is needed.");
                Err(self.error(start..start + 1, message))
            }
            Some(_) => self.bare(),
        }
    }

    fn bracket(&mut self) -> Result<Value, ExpressionError> {
        let start = self.at;
        if self.depth >= 100 {
            return Err(self.error(start..start + 1, "brackets are more than 100 deep here.".to_string()));
        }
        self.at += 1;
        self.depth += 1;
        let mut inside = self.sum()?;
        self.depth -= 1;
        if self.take(&[')']).is_none() {
            return Err(self.error(start..start + 1, "this bracket is not closed. Add \")\".".to_string()));
        }
        inside.span = start..self.at;
        Ok(inside)
    }

    fn quoted(&mut self) -> Result<Value, ExpressionError> {
        let start = self.at;
        let mut name = String::new();
        let mut characters = self.rest()[1..].char_indices().peekable();
        while let Some((offset, character)) = characters.next() {
            if character != '\'' {
                name.push(character);
            } else if characters.next_if(|(_, next)| *next == '\'').is_some() {
                name.push('\'');
            } else {
                self.at = start + 1 + offset + 1;
                return self.level(&name, start..self.at);
            }
        }
        Err(self.error(
            start..self.text.len(),
            "this quote is not closed. Add \"'\" after the level's name.".to_string(),
        ))
    }

    /// A level name without quotes, or a number.
    fn bare(&mut self) -> Result<Value, ExpressionError> {
        let start = self.at;
        if let Some(length) = self.longest_level() {
            let name = &self.text[start..start + length];
            if let Some((one, other)) = self.two_levels(name) {
                let message = format!(
                    "\"{name}\" is a level, and could also mean \"{one}\" and \"{other}\" with an operator between. \
                     Put the level's name in single quotes: '{name}', or both names: '{one}' and '{other}'."
                );
                return Err(self.error(start..start + length, message));
            }
            self.at += length;
            return self.level(name, start..start + length);
        }
        if let Some((number, length)) = self.number() {
            self.at += length;
            let weights = vec![0.0; self.levels.len()];
            return Ok(Value { constant: number, weights, span: start..self.at });
        }
        let run =
            self.rest().find(['+', '-', '\u{2212}', '*', '/', '(', ')', '\'']).unwrap_or(self.rest().len());
        let name = self.rest()[..run].trim_end();
        let span = start..start + name.len();
        let message = match half_of(name, self.levels) {
            Some(level) => format!(
                "\"{name}\" is no level of this study. To multiply, write * between the number and \"{level}\"."
            ),
            None => unknown_level(name, nearest(name, self.levels.iter().map(String::as_str)), self.levels),
        };
        Err(self.error(span, message))
    }

    /// Bytes of the longest level name that stands here and ends where a name can end. Names that read as numbers
    /// are left out: they need quotes.
    fn longest_level(&self) -> Option<usize> {
        let rest = self.rest();
        let fits = |name: &&String| {
            !name.is_empty()
                && rest.starts_with(name.as_str())
                && ends_here(&rest[name.len()..])
                && name.trim().parse::<f64>().is_err()
        };
        self.levels.iter().filter(fits).map(String::len).max()
    }

    /// The two other levels that `name` could mean, where it is one, an operator and the other.
    fn two_levels(&self, name: &str) -> Option<(String, String)> {
        let is_level = |part: &str| self.levels.iter().any(|level| level == part.trim());
        name.char_indices().filter(|(_, c)| matches!(c, '+' | '-' | '*' | '/' | '\u{2212}')).find_map(
            |(at, c)| {
                let (one, other) = (&name[..at], &name[at + c.len_utf8()..]);
                (is_level(one) && is_level(other)).then(|| (one.trim().to_string(), other.trim().to_string()))
            },
        )
    }

    /// A plain or scientific number that stands here, and its length.
    fn number(&self) -> Option<(f64, usize)> {
        let rest = self.rest();
        let plain = rest.find(|c: char| !c.is_ascii_digit() && c != '.').unwrap_or(rest.len());
        let bytes = rest.as_bytes();
        let mut length = plain;
        if plain > 0 && matches!(bytes.get(plain), Some(b'e' | b'E')) {
            let sign = usize::from(matches!(bytes.get(plain + 1), Some(b'+' | b'-')));
            let digits = rest[plain + 1 + sign..].bytes().take_while(u8::is_ascii_digit).count();
            length = if digits > 0 { plain + 1 + sign + digits } else { plain };
        }
        let value: f64 = rest[..length].parse().ok()?;
        (value.is_finite() && ends_here(&rest[length..])).then_some((value, length))
    }

    fn level(&self, name: &str, span: Range<usize>) -> Result<Value, ExpressionError> {
        let Some(index) = self.levels.iter().position(|level| level == name) else {
            let message =
                unknown_level(name, nearest(name, self.levels.iter().map(String::as_str)), self.levels);
            return Err(self.error(span, message));
        };
        let mut weights = vec![0.0; self.levels.len()];
        weights[index] = 1.0;
        Ok(Value { constant: 0.0, weights, span })
    }

    fn take(&mut self, wanted: &[char]) -> Option<char> {
        self.skip_space();
        let found = self.rest().chars().next().filter(|c| wanted.contains(c))?;
        self.at += found.len_utf8();
        Some(found)
    }

    fn skip_space(&mut self) {
        self.at += self.rest().len() - self.rest().trim_start().len();
    }

    fn rest(&self) -> &'a str {
        &self.text[self.at..]
    }

    fn error(&self, span: Range<usize>, message: String) -> ExpressionError {
        ExpressionError { span, message }
    }
}

/// Whether a name or a number can end before `rest`.
fn ends_here(rest: &str) -> bool {
    let next = rest.trim_start().chars().next();
    next.is_none_or(|c| matches!(c, '+' | '-' | '\u{2212}' | '*' | '/' | '(' | ')' | '\''))
}

/// The level in "2 none": a number and a level without an operator between.
fn half_of<'a>(name: &str, levels: &'a [String]) -> Option<&'a str> {
    let (number, rest) = name.split_once(' ')?;
    number.parse::<f64>().ok()?;
    levels.iter().find(|level| level.as_str() == rest.trim()).map(String::as_str)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn of(text: &str, levels: &[&str]) -> Result<Vec<f64>, (Range<usize>, String)> {
        let levels: Vec<String> = levels.iter().map(|level| level.to_string()).collect();
        coefficients(text, &levels).map_err(|error| (error.span, error.message))
    }

    const TIMES: [&str; 3] = ["none", "15 min", "30 min"];

    #[test]
    fn level_names_with_spaces_and_digits_need_no_quotes() {
        assert_eq!(of("(15 min + 30 min)/2 - none", &TIMES), Ok(vec![-1.0, 0.5, 0.5]));
        assert_eq!(of("0.5*15 min+.5 * 30 min-none", &TIMES), Ok(vec![-1.0, 0.5, 0.5]));
        assert_eq!(of("-(none - '30 min')", &TIMES), Ok(vec![-1.0, 0.0, 1.0]));
        assert_eq!(of("30 min \u{2212} none", &TIMES), Ok(vec![-1.0, 0.0, 1.0]));
        assert_eq!(of("2e-1*30 min - none/5", &TIMES), Ok(vec![-0.2, 0.0, 0.2]));
    }

    #[test]
    fn a_name_with_an_operator_is_read_whole_unless_it_could_be_two() {
        assert_eq!(of("self-study - none", &["none", "self-study"]), Ok(vec![-1.0, 1.0]));
        let (span, message) = of("A-B", &["A", "B", "A-B"]).unwrap_err();
        assert_eq!(span, 0..3);
        assert!(message.contains("single quotes: 'A-B'"), "{message}");
        assert_eq!(of("'A' - 'B'", &["A", "B", "A-B"]), Ok(vec![1.0, -1.0, 0.0]));
        assert_eq!(of("'it''s' - B", &["it's", "B"]), Ok(vec![1.0, -1.0]));
    }

    #[test]
    fn numbers_as_level_names_need_quotes() {
        assert_eq!(of("'10' - '0'", &["0", "10"]), Ok(vec![-1.0, 1.0]));
        let (span, message) = of("10 - 0", &["0", "10"]).unwrap_err();
        assert_eq!(span, 0..6);
        assert_eq!(
            message,
            "the number 10 stands alone and is no level. If a level is meant, put its name in single quotes: '0'."
        );
    }

    #[test]
    fn errors_say_where_and_what_to_do() {
        let unknown = of("15 min - nome", &TIMES).unwrap_err();
        assert_eq!(
            unknown,
            (9..13, "\"nome\" is no level of this study. Did you mean \"none\"?".to_string())
        );
        let times = of("2 none - 2*30 min", &TIMES).unwrap_err();
        assert_eq!(times.0, 0..6);
        assert!(times.1.contains("write * between"), "{}", times.1);
        assert_eq!(of("(15 min - none", &TIMES).unwrap_err().0, 0..1);
        assert_eq!(of("15 min - none)", &TIMES).unwrap_err().0, 13..14);
        assert_eq!(of("15 min * none", &TIMES).unwrap_err().0, 0..13);
        assert_eq!(of("1 / none", &TIMES).unwrap_err().0, 4..8);
        assert_eq!(of("none/0", &TIMES).unwrap_err().0, 5..6);
        assert_eq!(of("15 min -", &TIMES).unwrap_err().0, 8..8);
        assert_eq!(of("'15 min - none", &TIMES).unwrap_err().0, 0..14);
        assert_eq!(of("", &TIMES).unwrap_err().0, 0..0);
        assert_eq!(of("* none", &TIMES).unwrap_err().0, 0..1);
    }

    #[test]
    fn deep_brackets_are_refused_and_do_not_exhaust_the_stack() {
        let (_, message) = of(&"(".repeat(100_000), &TIMES).unwrap_err();
        assert_eq!(message, "brackets are more than 100 deep here.");
        assert_eq!(of(&("-".repeat(100_000) + "none + none"), &TIMES), Ok(vec![2.0, 0.0, 0.0]));
    }
}
