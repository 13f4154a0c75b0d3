//! Exact decimals: m · 10^e with an integer m, read from text without passing through a binary fraction.
//!
//! A table's numbers are decimal text, and most decimal fractions have no exact binary form: `1000000000000.4`
//! as an `f64` is off by 2e-5. Here the text is kept exactly, and only the difference between two decimals is
//! rounded, once, to the nearest `f64`. Work on such offsets does not lose the digits that a common large part
//! would take away.
//!
//! Up to 38 significant digits are exact; further digits are rounded into the 38th.

use std::fmt;

/// The character between the whole and the fractional digits.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum DecimalMark {
    Point,
    Comma,
}

impl DecimalMark {
    /// The character itself.
    pub fn character(self) -> char {
        match self {
            Self::Point => '.',
            Self::Comma => ',',
        }
    }

    /// The other of the two.
    pub fn other(self) -> Self {
        match self {
            Self::Point => Self::Comma,
            Self::Comma => Self::Point,
        }
    }
}

/// Why a text is not a decimal number.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
pub enum NotADecimal {
    #[error("not a number")]
    NotANumber,
    /// Beyond the largest finite `f64`, about 1.8e308.
    #[error("too large: numbers go up to about 1.8e308")]
    TooLarge,
    /// Not zero, but nearer to zero than any `f64`.
    #[error("too close to zero: numbers other than 0 start at about 4.9e-324")]
    TooSmall,
}

/// An exact decimal number, `mantissa` · 10^`exponent`, whose nearest `f64` is finite.
#[derive(Debug, Clone, Copy)]
pub struct Decimal {
    mantissa: i128,
    exponent: i32,
}

/// Digits that an `i128` always holds.
const DIGITS: u32 = 38;

impl Decimal {
    /// Zero.
    pub const ZERO: Self = Self { mantissa: 0, exponent: 0 };

    /// The number that `text` spells: an optional sign, digits with at most one `mark`, and an optional power of
    /// ten as in `1e-3`. No spaces, no thousands separators, no words.
    ///
    /// # Errors
    /// [`NotADecimal`] where the text is no such number, or the number is outside the range of `f64`.
    pub fn parse(text: &str, mark: DecimalMark) -> Result<Self, NotADecimal> {
        if let Some(plain) = short(text.as_bytes(), mark) {
            return Ok(plain);
        }
        let (negative, unsigned) = split_sign(text);
        let (digits, power) = split_power(unsigned)?;
        let (magnitude, exponent) = read_digits(digits, mark)?;
        let signed = if negative { -magnitude } else { magnitude };
        Self::checked(signed, exponent.saturating_add(power))
    }

    /// `mantissa` · 10^`exponent`.
    ///
    /// # Errors
    /// [`NotADecimal::TooLarge`] or [`NotADecimal::TooSmall`] outside the range of `f64`.
    pub fn new(mantissa: i128, exponent: i32) -> Result<Self, NotADecimal> {
        Self::checked(mantissa, i64::from(exponent))
    }

    fn checked(mantissa: i128, exponent: i64) -> Result<Self, NotADecimal> {
        if mantissa == 0 {
            return Ok(Self::ZERO);
        }
        // The largest finite f64 has 309 digits before the point; the smallest starts at the 324th after it.
        let order = exponent.saturating_add(i64::from(mantissa.unsigned_abs().ilog10()));
        if order > 308 {
            return Err(NotADecimal::TooLarge);
        }
        if order < -324 {
            return Err(NotADecimal::TooSmall);
        }
        let number = Self { mantissa, exponent: exponent as i32 };
        if order == 308 && number.to_f64().is_infinite() {
            return Err(NotADecimal::TooLarge);
        }
        if order == -324 && number.to_f64() == 0.0 {
            return Err(NotADecimal::TooSmall);
        }
        Ok(number)
    }

    /// The nearest `f64`.
    pub fn to_f64(self) -> f64 {
        if self.mantissa.unsigned_abs() < 1 << 53 && self.exponent.unsigned_abs() <= 22 {
            // Both factors are exact, so the one operation rounds once (Clinger 1990, PLDI '90, 92–101).
            let power = EXACT_POWERS[self.exponent.unsigned_abs() as usize];
            // Below 2^53 the shorter integer is the same number, and its conversion one instruction.
            let mantissa = self.mantissa as i64 as f64;
            return if self.exponent < 0 { mantissa / power } else { mantissa * power };
        }
        nearest(&format!("{}e{}", self.mantissa, self.exponent))
    }

    /// `self` - `other`: the exact difference, rounded once to the nearest `f64`. Infinite where the difference
    /// is beyond the range of `f64`.
    pub fn minus(self, other: Self) -> f64 {
        let exponent = self.exponent.min(other.exponent);
        let difference =
            self.scaled(exponent).zip(other.scaled(exponent)).and_then(|(a, b)| a.checked_sub(b));
        match difference {
            Some(0) => 0.0,
            Some(mantissa) => Self { mantissa, exponent }.to_f64(),
            None => nearest(&long_difference(self, other)),
        }
    }

    /// `self` with every digit below 10^`power` dropped.
    pub fn truncated(self, power: i32) -> Self {
        if power <= self.exponent {
            return self;
        }
        let divisor = u32::try_from(i64::from(power) - i64::from(self.exponent))
            .ok()
            .and_then(|places| POWERS.get(places as usize));
        match divisor {
            None => Self::ZERO,
            Some(divisor) if self.mantissa / divisor == 0 => Self::ZERO,
            Some(divisor) => Self { mantissa: self.mantissa / divisor, exponent: power },
        }
    }

    /// Mantissa when written with `exponent`, which must not be above the present one; `None` where it overflows.
    fn scaled(self, exponent: i32) -> Option<i128> {
        if self.mantissa == 0 {
            return Some(0);
        }
        let places = u32::try_from(i64::from(self.exponent) - i64::from(exponent)).ok()?;
        self.mantissa.checked_mul(*POWERS.get(places as usize)?)
    }
}

impl PartialEq for Decimal {
    /// Equal as numbers: 1.50 equals 1.5.
    fn eq(&self, other: &Self) -> bool {
        let exponent = self.exponent.min(other.exponent);
        match (self.scaled(exponent), other.scaled(exponent)) {
            (Some(one), Some(two)) => one == two,
            // One of them needs more than 38 digits at the other's scale: they differ.
            _ => false,
        }
    }
}

impl fmt::Display for Decimal {
    /// Every digit, with a decimal point and without a power of ten.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let sign = if self.mantissa < 0 { "-" } else { "" };
        let mut digits = self.mantissa.unsigned_abs().to_string();
        if self.exponent >= 0 {
            let zeros = if self.mantissa == 0 { 0 } else { self.exponent as usize };
            return write!(f, "{sign}{digits}{}", "0".repeat(zeros));
        }
        let places = self.exponent.unsigned_abs() as usize;
        if digits.len() <= places {
            digits.insert_str(0, &"0".repeat(places + 1 - digits.len()));
        }
        let (whole, fraction) = digits.split_at(digits.len() - places);
        let fraction = fraction.trim_end_matches('0');
        if fraction.is_empty() { write!(f, "{sign}{whole}") } else { write!(f, "{sign}{whole}.{fraction}") }
    }
}

/// A number to keep offsets from, for numbers that lie from `low` to `high`.
///
/// Zero where they lie around zero or spread over half their size: there the nearest `f64` of a number loses nothing
/// that counts. Else the digits that stand above the spread: 107.8681 for numbers from 107.86814 to 107.86819.
pub fn common_origin(low: Decimal, high: Decimal) -> Decimal {
    let (lowest, highest) = (low.to_f64(), high.to_f64());
    let spread = highest - lowest;
    if (lowest <= 0.0 && highest >= 0.0) || spread >= lowest.abs().max(highest.abs()) / 2.0 {
        return Decimal::ZERO;
    }
    let nearer_zero = if lowest > 0.0 { low } else { high };
    if spread <= 0.0 {
        return nearer_zero;
    }
    nearer_zero.truncated(libm::floor(libm::log10(spread)) as i32 + 1)
}

/// Powers of ten that an `f64` holds exactly.
const EXACT_POWERS: [f64; 23] = [
    1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18,
    1e19, 1e20, 1e21, 1e22,
];

/// All powers of ten below 2^127.
const POWERS: [i128; 39] = {
    let mut powers = [1; 39];
    let mut i = 1;
    while i < powers.len() {
        powers[i] = 10 * powers[i - 1];
        i += 1;
    }
    powers
};

/// The number, where the text is as nearly all are: at most 18 digits and no power of ten, so that it is in range and
/// fits into 64 bits. `None` decides nothing.
fn short(text: &[u8], mark: DecimalMark) -> Option<Decimal> {
    let mark = mark.character() as u8;
    let (negative, digits) = match text {
        [b'-', rest @ ..] => (true, rest),
        rest => (false, rest),
    };
    let (mut magnitude, mut count, mut after_mark) = (0_i64, 0, None);
    for &b in digits {
        if b.is_ascii_digit() {
            magnitude = magnitude.wrapping_mul(10).wrapping_add(i64::from(b - b'0'));
            count += 1;
        } else if b == mark && after_mark.is_none() {
            after_mark = Some(count);
        } else {
            return None;
        }
    }
    if count == 0 || count > 18 {
        return None;
    }
    let exponent = after_mark.map_or(0, |before: i32| before - count);
    let exponent = if magnitude == 0 { 0 } else { exponent };
    let signed = if negative { -magnitude } else { magnitude };
    Some(Decimal { mantissa: i128::from(signed), exponent })
}

/// Whether the text is negative, and the rest of it. The true minus sign (U+2212) is a minus as well.
fn split_sign(text: &str) -> (bool, &str) {
    if let Some(rest) = text.strip_prefix('+') {
        return (false, rest);
    }
    match text.strip_prefix('-').or_else(|| text.strip_prefix('\u{2212}')) {
        Some(rest) => (true, rest),
        None => (false, text),
    }
}

/// The digits before `e` or `E`, and the power of ten after it (0 without one).
fn split_power(text: &str) -> Result<(&[u8], i64), NotADecimal> {
    let bytes = text.as_bytes();
    // Labels fail on their first character, so that a long text is not searched for an e.
    if !bytes.first().is_some_and(|b| b.is_ascii_digit() || matches!(b, b'.' | b',')) {
        return Err(NotADecimal::NotANumber);
    }
    let Some(at) = bytes.iter().position(|b| matches!(b, b'e' | b'E')) else { return Ok((bytes, 0)) };
    let (negative, digits) = split_sign(&text[at + 1..]);
    if digits.is_empty() || !digits.bytes().all(|b| b.is_ascii_digit()) {
        return Err(NotADecimal::NotANumber);
    }
    // Saturated: anything of this size is out of range whatever the digits before it.
    let size =
        digits.bytes().fold(0_i64, |size, b| size.saturating_mul(10).saturating_add(i64::from(b - b'0')));
    let size = size.min(i64::from(i32::MAX));
    Ok((&bytes[..at], if negative { -size } else { size }))
}

/// Magnitude and exponent of plain digits with at most one mark.
fn read_digits(digits: &[u8], mark: DecimalMark) -> Result<(i128, i64), NotADecimal> {
    let mark = mark.character() as u8;
    let (mut magnitude, mut exponent) = (0_u64, 0_i64);
    let (mut any, mut marked) = (false, false);
    for (at, &b) in digits.iter().enumerate() {
        if b.is_ascii_digit() {
            if magnitude > (u64::MAX - 9) / 10 {
                return read_long_digits(&digits[at..], mark, magnitude, exponent, marked);
            }
            any = true;
            magnitude = magnitude * 10 + u64::from(b - b'0');
            exponent -= i64::from(marked);
        } else if b == mark && !marked {
            marked = true;
        } else {
            return Err(NotADecimal::NotANumber);
        }
    }
    if any { Ok((i128::from(magnitude), exponent)) } else { Err(NotADecimal::NotANumber) }
}

/// Goes on where 64 bits are full; digits after the 38th are rounded off, half away from zero.
fn read_long_digits(
    rest: &[u8],
    mark: u8,
    start: u64,
    mut exponent: i64,
    mut marked: bool,
) -> Result<(i128, i64), NotADecimal> {
    let mut magnitude = i128::from(start);
    let (limit, mut full, mut round_up) = (10_i128.pow(DIGITS - 1), false, false);
    for &b in rest {
        if b.is_ascii_digit() {
            let digit = i128::from(b - b'0');
            if magnitude < limit {
                magnitude = magnitude * 10 + digit;
                exponent -= i64::from(marked);
            } else {
                round_up |= !full && digit >= 5;
                full = true;
                exponent += i64::from(!marked);
            }
        } else if b == mark && !marked {
            marked = true;
        } else {
            return Err(NotADecimal::NotANumber);
        }
    }
    Ok((magnitude + i128::from(round_up), exponent))
}

/// The nearest `f64` to a number in Rust's own notation; the standard library rounds correctly at any length.
fn nearest(text: &str) -> f64 {
    text.parse().unwrap_or(0.0)
}

/// `a` - `b` as text, digit by digit, for pairs that no 128-bit integer holds on one scale.
fn long_difference(a: Decimal, b: Decimal) -> String {
    let exponent = a.exponent.min(b.exponent);
    let (one, two) = (digits_at(a, exponent), digits_at(b, exponent));
    let (negative_one, negative_two) = (a.mantissa < 0, b.mantissa < 0);
    let (negative, digits) = if negative_one != negative_two {
        (negative_one, combine(&one, &two, 1))
    } else if larger(&one, &two) {
        (negative_one, combine(&one, &two, -1))
    } else {
        (!negative_one, combine(&two, &one, -1))
    };
    let text: String = digits.iter().rev().map(|digit| char::from(b'0' + digit)).collect();
    format!("{}{text}e{exponent}", if negative { "-" } else { "" })
}

/// Decimal digits of the magnitude at the scale 10^`exponent`, lowest first.
fn digits_at(number: Decimal, exponent: i32) -> Vec<u8> {
    let zeros = (i64::from(number.exponent) - i64::from(exponent)).max(0) as usize;
    let mut digits = vec![0; zeros];
    digits.extend(number.mantissa.unsigned_abs().to_string().bytes().rev().map(|b| b - b'0'));
    digits
}

/// Whether `one` is at least `two`, both lowest digit first.
fn larger(one: &[u8], two: &[u8]) -> bool {
    let length = one.len().max(two.len());
    let at = |digits: &[u8], i: usize| digits.get(i).copied().unwrap_or(0);
    let first = (0..length).rev().find(|&i| at(one, i) != at(two, i));
    first.is_none_or(|i| at(one, i) > at(two, i))
}

/// `one` + `sign` · `two`, lowest digit first; with `sign` -1, `one` must not be the smaller.
fn combine(one: &[u8], two: &[u8], sign: i8) -> Vec<u8> {
    let (mut result, mut carry) = (Vec::with_capacity(one.len().max(two.len()) + 1), 0_i8);
    for i in 0..=one.len().max(two.len()) {
        let digit = |digits: &[u8]| digits.get(i).copied().unwrap_or(0) as i8;
        let value = digit(one) + sign * digit(two) + carry;
        carry = value.div_euclid(10);
        result.push(value.rem_euclid(10) as u8);
    }
    result
}

#[cfg(test)]
mod tests {
    use super::*;

    fn point(text: &str) -> Decimal {
        Decimal::parse(text, DecimalMark::Point).unwrap_or_else(|error| panic!("{text}: {error}"))
    }

    #[test]
    fn numbers_are_read_as_they_are_written() {
        for (text, shown, value) in [
            ("12", "12", 12.0),
            ("-0.50", "-0.5", -0.5),
            ("+.5", "0.5", 0.5),
            ("5.", "5", 5.0),
            ("1e-3", "0.001", 0.001),
            ("2.5E+2", "250", 250.0),
            ("\u{2212}3", "-3", -3.0),
            ("0e999999999999", "0", 0.0),
            ("1000000000000.4", "1000000000000.4", 1000000000000.4),
            ("123456789012345678901234567890.5", "123456789012345678901234567890.5", 1.2345678901234568e29),
        ] {
            assert_eq!(point(text).to_string(), shown, "{text}");
            assert_eq!(point(text).to_f64(), value, "{text}");
        }
        let comma = Decimal::parse("12,5", DecimalMark::Comma).map(Decimal::to_f64);
        assert_eq!(comma, Ok(12.5));
    }

    #[test]
    fn what_is_no_number_is_refused() {
        let no = [
            "", " 1", "1 ", "1,5", "1.2.3", "1,234.5", "-", "+", ".", "e5", "1e", "1e+", "1e1.5", "--1",
            "inf", "NaN", "0x10", "1_000", "1 000", "12a", "١",
        ];
        for text in no {
            assert_eq!(Decimal::parse(text, DecimalMark::Point), Err(NotADecimal::NotANumber), "{text:?}");
        }
    }

    #[test]
    fn numbers_outside_the_range_say_which_way() {
        for text in ["1e400", "-1e309", "1.8e308", "1e99999999999999999999"] {
            assert_eq!(Decimal::parse(text, DecimalMark::Point), Err(NotADecimal::TooLarge), "{text}");
        }
        for text in ["1e-400", "-1e-325", "2e-324", "1e-99999999999999999999"] {
            assert_eq!(Decimal::parse(text, DecimalMark::Point), Err(NotADecimal::TooSmall), "{text}");
        }
        assert_eq!(point("1.7976931348623157e308").to_f64(), f64::MAX);
        assert_eq!(point("4.9e-324").to_f64(), 4.9e-324);
        let long = format!("{}e-400", "9".repeat(500));
        assert_eq!(point(&long).to_f64(), 1e100);
    }

    #[test]
    fn digits_beyond_the_38th_are_rounded() {
        let pi = point("3.14159265358979323846264338327950288419716939937510");
        assert_eq!(pi.to_string(), "3.1415926535897932384626433832795028842");
        assert_eq!(point(&format!("1{}", "0".repeat(60))).to_f64(), 1e60);
    }

    #[test]
    fn differences_are_rounded_once() {
        assert_eq!(point("1000000000000.4").minus(point("1000000000000")), 0.4);
        assert_eq!(point("0.3").minus(point("0.1")), 0.2);
        assert_eq!(point("1.50").minus(point("1.5")), 0.0);
        assert_eq!(point("1e300").minus(point("1e-300")), 1e300);
        assert_eq!(point("1e-300").minus(point("1e300")), -1e300);
        assert_eq!(point("-1e60").minus(point("1")), -1e60);
        assert_eq!(
            point("12345678901234567890123456789012345678").minus(point("-0.5")),
            1.2345678901234568e37
        );
        // 2^53 + 1 is half way between two f64s; a digit 60 places on decides.
        let tie = point("9007199254740993e0");
        assert_eq!(tie.minus(point("1e-45")), 9007199254740992.0);
        assert_eq!(tie.minus(point("-1e-45")), 9007199254740994.0);
    }

    #[test]
    fn truncation_keeps_the_leading_digits() {
        assert_eq!(point("107.8681419").truncated(-4).to_string(), "107.8681");
        assert_eq!(point("-196.3").truncated(1).to_string(), "-190");
        assert_eq!(point("12").truncated(5), Decimal::ZERO);
        assert_eq!(point("1.5").truncated(-9).to_string(), "1.5");
        assert_eq!(point("1.5").truncated(300), Decimal::ZERO);
    }
}
