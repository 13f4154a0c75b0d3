//! Arithmetic on columns: `+ - * /`, brackets, and `log`, `log10`, `sqrt`, `exp`.

use super::Column;
use super::condition::column_index;
use super::nearest;
use super::tokens::{Cursor, Misfit, Placed, Token, tokens};
use crate::numerics::decimal::{Decimal, DecimalMark};
use std::ops::Range;

#[derive(Debug, Clone, PartialEq)]
pub(super) enum Expression {
    Number(f64),
    Column(usize, Range<usize>),
    Negative(Box<Expression>),
    Binary { sign: &'static str, left: Box<Expression>, right: Box<Expression> },
    Call { function: &'static str, argument: Box<Expression> },
}

const FUNCTIONS: [&str; 4] = ["log", "log10", "sqrt", "exp"];

/// The expression that `text` spells over columns called `names`.
///
/// # Errors
/// [`Misfit`] at the first place that does not fit, with what would.
pub(super) fn parse(text: &str, names: &[&str]) -> Result<Expression, Misfit> {
    let tokens = tokens(text)?;
    if tokens.is_empty() {
        return Err(Misfit::new(0..text.len(), "The expression is empty. Write one such as after - before."));
    }
    let mut parser = Parser { text, names, cursor: Cursor::new(&tokens, text.len()), operations: 0 };
    let expression = parser.sum()?;
    if parser.cursor.peek().is_some() {
        return Err(parser.expected("+, -, *, / or the end of the expression"));
    }
    Ok(expression)
}

struct Parser<'a> {
    text: &'a str,
    names: &'a [&'a str],
    cursor: Cursor<'a>,
    operations: usize,
}

impl Parser<'_> {
    fn expected(&self, what: &str) -> Misfit {
        Misfit::new(self.cursor.place(), format!("Expected {what}, found {}.", self.cursor.found(self.text)))
    }

    fn sum(&mut self) -> Result<Expression, Misfit> {
        let mut left = self.product()?;
        while let Some(sign) = self.take_any(["+", "-"]) {
            self.one_more()?;
            left = binary(sign, left, self.product()?);
        }
        Ok(left)
    }

    fn product(&mut self) -> Result<Expression, Misfit> {
        let mut left = self.factor()?;
        while let Some(sign) = self.take_any(["*", "/"]) {
            self.one_more()?;
            left = binary(sign, left, self.factor()?);
        }
        Ok(left)
    }

    /// A chain is evaluated by recursion on its left side, so its length is bounded like the brackets' depth.
    fn one_more(&mut self) -> Result<(), Misfit> {
        self.operations += 1;
        if self.operations <= 200 {
            return Ok(());
        }
        let message = "The expression is too long. Derive a part of it as a column of its own.";
        Err(Misfit::new(self.cursor.place(), message))
    }

    fn factor(&mut self) -> Result<Expression, Misfit> {
        if self.cursor.take("-") {
            self.cursor.deeper()?;
            let inside = self.factor()?;
            self.cursor.back_up();
            return Ok(Expression::Negative(Box::new(inside)));
        }
        if self.cursor.take("(") {
            return self.bracket();
        }
        let Some(Placed { token, span }) = self.cursor.next() else {
            return Err(self.expected("a number, a column or a bracket"));
        };
        match token {
            Token::Number(digits) => {
                let number = Decimal::parse(digits, DecimalMark::Point)
                    .map_err(|why| Misfit::new(span.clone(), format!("\"{digits}\" is {why}.")))?;
                Ok(Expression::Number(number.to_f64()))
            }
            Token::Word(name) if self.cursor.take("(") => self.call(name, span),
            Token::Word(name) | Token::Name(name) => {
                Ok(Expression::Column(column_index(name, span, self.names)?, span.clone()))
            }
            Token::Text(text) => {
                let message =
                    format!("Texts cannot be computed with. For a column, use single quotes: '{text}'.");
                Err(Misfit::new(span.clone(), message))
            }
            Token::Sign(_) => {
                self.cursor.step_back();
                Err(self.expected("a number, a column or a bracket"))
            }
        }
    }

    /// What follows an opening bracket, with the closing one.
    fn bracket(&mut self) -> Result<Expression, Misfit> {
        self.cursor.deeper()?;
        let inside = self.sum()?;
        self.cursor.back_up();
        if self.cursor.take(")") { Ok(inside) } else { Err(self.expected("+, -, *, / or a closing bracket")) }
    }

    fn call(&mut self, name: &str, span: &Range<usize>) -> Result<Expression, Misfit> {
        let Some(function) = FUNCTIONS.into_iter().find(|known| *known == name) else {
            let near =
                nearest(name, FUNCTIONS).map_or(String::new(), |near| format!(" Did you mean {near}?"));
            let message =
                format!("There is no function {name}.{near} There are log (natural), log10, sqrt and exp.");
            return Err(Misfit::new(span.clone(), message));
        };
        Ok(Expression::Call { function, argument: Box::new(self.bracket()?) })
    }

    fn take_any(&mut self, signs: [&'static str; 2]) -> Option<&'static str> {
        signs.into_iter().find(|sign| self.cursor.take(sign))
    }
}

fn binary(sign: &'static str, left: Expression, right: Expression) -> Expression {
    Expression::Binary { sign, left: Box::new(left), right: Box::new(right) }
}

impl Expression {
    /// Whether every column that is read holds numbers.
    ///
    /// # Errors
    /// The first column that does not, with what to do.
    pub fn check(&self, columns: &[Column]) -> Result<(), Misfit> {
        match self {
            Self::Number(_) => Ok(()),
            Self::Column(at, span) => {
                columns[*at].needs_numbers().map_or(Ok(()), |message| Err(Misfit::new(span.clone(), message)))
            }
            Self::Negative(inside) | Self::Call { argument: inside, .. } => inside.check(columns),
            Self::Binary { left, right, .. } => left.check(columns).and_then(|()| right.check(columns)),
        }
    }

    /// The value in `row`; `None` where a value that it reads is missing.
    ///
    /// # Errors
    /// Why it is not defined there, as the middle of a sentence: "log of 0 is not defined; ...".
    pub fn value(&self, columns: &[Column], row: usize) -> Result<Option<f64>, String> {
        let value = match self {
            Self::Number(number) => Some(*number),
            Self::Column(at, _) => columns[*at].value(row),
            Self::Negative(inside) => inside.value(columns, row)?.map(|value| -value),
            Self::Call { function, argument } => match argument.value(columns, row)? {
                Some(value) => Some(call(function, value)?),
                None => None,
            },
            Self::Binary { sign, left, right } => {
                match (left.value(columns, row)?, right.value(columns, row)?) {
                    (Some(left), Some(right)) => Some(combine(sign, left, right)?),
                    _ => None,
                }
            }
        };
        match value {
            Some(value) if !value.is_finite() => {
                Err("the result is too large; numbers go up to about 1.8e308".into())
            }
            value => Ok(value),
        }
    }
}

fn call(function: &str, value: f64) -> Result<f64, String> {
    match function {
        "log" | "log10" if value <= 0.0 => {
            Err(format!("{function} of {value} is not defined; it needs a number greater than 0"))
        }
        "sqrt" if value < 0.0 => Err(format!("sqrt of {value} is not defined; it needs a number from 0 up")),
        "log" => Ok(libm::log(value)),
        "log10" => Ok(libm::log10(value)),
        "sqrt" => Ok(value.sqrt()),
        _ => Ok(libm::exp(value)),
    }
}

fn combine(sign: &str, left: f64, right: f64) -> Result<f64, String> {
    match sign {
        "+" => Ok(left + right),
        "-" => Ok(left - right),
        "*" => Ok(left * right),
        _ if right == 0.0 => Err(format!("{left} is divided by 0")),
        _ => Ok(left / right),
    }
}
