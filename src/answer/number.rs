//! Numbers as people read them: p-values, estimates to the precision that their spread allows, degrees of freedom,
//! intervals, percentages. Everything that is shown is rounded here and nowhere else.
//!
//! A minus sign is U+2212, so that it is as wide as a plus sign and never breaks from its digits. Minus zero is zero.
//! What is not a number is [`NOT_AVAILABLE`]; infinity is "∞".

use libm::{floor, log10};

/// What is shown in place of a quantity that does not exist.
pub const NOT_AVAILABLE: &str = "not available";

/// The minus sign, U+2212.
pub const MINUS: char = '\u{2212}';

/// From this size on a number is written with a power of ten: its last digits would be noise.
const HUGE: f64 = 1e15;

/// More decimals than this are unreadable: a power of ten is used instead.
const MOST_DECIMALS: i32 = 8;

/// The place of the last digit that is shown: decimals after the point, or, where negative, before it.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub struct Precision {
    decimals: i32,
}

impl Precision {
    /// This many digits after the point.
    pub fn decimals(decimals: u8) -> Precision {
        Precision { decimals: i32::from(decimals) }
    }

    /// The place itself: decimals after the point, or, where negative, before it.
    pub(in crate::answer) fn at_place(decimals: i32) -> Precision {
        Precision { decimals }
    }

    /// The precision at which `spread` (a standard error, the half-width of an interval) has two significant digits.
    /// A spread that is zero, negative or not finite tells nothing: two decimals.
    pub fn from_spread(spread: f64) -> Precision {
        if !spread.is_finite() || spread <= 0.0 {
            return Precision { decimals: 2 };
        }
        // 0.0996 has two significant digits as 0.10, not 0.100: the exponent is taken after rounding.
        let exponent = exponent_of(spread, 1);
        Precision { decimals: 1 - exponent }
    }

    /// One precision for a whole column, from the spreads of its rows: that of the smallest spread, but at most two
    /// digits finer than the largest one needs, so that one exact row does not fill the others with noise.
    pub fn for_column(spreads: impl IntoIterator<Item = f64>) -> Precision {
        let usable = spreads.into_iter().filter(|s| s.is_finite() && *s > 0.0).map(Precision::from_spread);
        let (finest, coarsest) = usable.fold((None, None), |(finest, coarsest), p| {
            (
                Some(finest.map_or(p, |f: Precision| f.max(p))),
                Some(coarsest.map_or(p, |c: Precision| c.min(p))),
            )
        });
        match (finest, coarsest) {
            (Some(finest), Some(coarsest)) => {
                Precision { decimals: finest.decimals.min(coarsest.decimals + 2) }
            }
            _ => Precision { decimals: 2 },
        }
    }

    /// A precision for observed values (smallest, median, largest): as many decimals as they were recorded with, but
    /// at most four significant digits of their range.
    pub fn for_values(values: &[f64]) -> Precision {
        let finite = || values.iter().copied().filter(|v| v.is_finite());
        let recorded = finite().map(recorded_decimals).max().unwrap_or(0);
        let (low, high) = finite().fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), v| (l.min(v), h.max(v)));
        let spread = if high > low { high - low } else { high.abs() };
        if !spread.is_finite() || spread <= 0.0 {
            return Precision { decimals: recorded.min(4) };
        }
        Precision { decimals: recorded.min(3 - exponent_of(spread, 3)) }
    }

    /// One digit more, as is usual for a standard deviation beside its mean.
    #[must_use]
    pub fn finer(self) -> Precision {
        Precision { decimals: self.decimals + 1 }
    }
}

/// A p-value with three decimals: "0.012"; "<0.001" below that, never "0.000"; ">0.999" where a p-value below one
/// would round to one. Outside 0 to 1 (beyond rounding error): [`NOT_AVAILABLE`].
pub fn p_value(p: f64) -> String {
    if !(0.0..=1.0 + 1e-9).contains(&p) {
        NOT_AVAILABLE.to_owned()
    } else if p < 0.001 {
        "<0.001".to_owned()
    } else if p >= 1.0 {
        "1.000".to_owned()
    } else {
        let text = format!("{p:.3}");
        if text == "1.000" { ">0.999".to_owned() } else { text }
    }
}

/// A p-value as [`p_value`] gives it, with as many more decimals as show on which side of `alpha` it lies: 0.04996
/// beside 0.05 is "0.04996", because "0.050" would contradict the decision. At most nine decimals.
pub fn p_value_beside(p: f64, alpha: f64) -> String {
    let short = p_value(p);
    if !(0.0..=1.0).contains(&p) || p == alpha || short.starts_with(['<', '>']) {
        return short;
    }
    let misleading = |text: &str| {
        let shown: f64 = text.parse().unwrap_or(p);
        (shown <= alpha) != (p <= alpha) || shown == alpha
    };
    if !misleading(&short) {
        return short;
    }
    (4..=9).map(|decimals| format!("{p:.decimals$}")).find(|text| !misleading(text)).unwrap_or(short)
}

/// A p-value as a statement: "p = 0.012", "p < 0.001", "p > 0.999", "p not available".
pub fn p_equals(p: f64) -> String {
    statement("p", &p_value(p))
}

/// [`p_equals`] with another name for the p-value: "adjusted p = 0.012".
pub fn p_named(name: &str, p: f64) -> String {
    statement(name, &p_value(p))
}

fn statement(name: &str, shown: &str) -> String {
    if shown == NOT_AVAILABLE {
        return format!("{name} {NOT_AVAILABLE}");
    }
    match shown.split_at_checked(1) {
        Some((sign @ ("<" | ">"), number)) => format!("{name} {sign} {number}"),
        _ => format!("{name} = {shown}"),
    }
}

/// A number rounded to a precision: "12.3", "−0.45", "1.20 × 10⁻⁹" where decimals would be unreadable.
pub fn estimate(x: f64, precision: Precision) -> String {
    if let Some(word) = not_finite(x) {
        return word;
    }
    if x == 0.0 {
        return with_minus(format!("{:.*}", precision.decimals.clamp(0, MOST_DECIMALS) as usize, 0.0));
    }
    let size = x.abs();
    if size >= HUGE || (size < 1.0 && precision.decimals > MOST_DECIMALS) {
        return power_of_ten(x, precision);
    }
    // A double has no more than 17 digits that mean anything; the whole part takes its share.
    let whole_digits = if size < 1.0 { 0 } else { exponent_of(size, 0) + 1 };
    let decimals = precision.decimals.clamp(0, (16 - whole_digits).max(0));
    with_minus(format!("{x:.*}", decimals as usize))
}

/// A number with this many decimals: "0.46", "−1.20".
pub fn fixed(x: f64, decimals: u8) -> String {
    estimate(x, Precision::decimals(decimals))
}

/// A number with its sign always shown: "+1.25", "−0.40", and "0.00" without one.
pub fn signed(x: f64, precision: Precision) -> String {
    let text = estimate(x, precision);
    let is_zero = !text.contains(|c: char| c.is_ascii_digit() && c != '0');
    if x == f64::INFINITY || (x > 0.0 && x.is_finite() && !is_zero) { format!("+{text}") } else { text }
}

/// A test statistic (t, z, q, F, chi-squared): two decimals, none from 100,000 on.
pub fn statistic(x: f64) -> String {
    fixed(x, if x.abs() >= 1e5 { 0 } else { 2 })
}

/// Degrees of freedom: whole numbers as they are ("12"), others with two decimals ("6.33"), "∞".
pub fn df(df: f64) -> String {
    if df.is_finite() && (df - df.round()).abs() <= 1e-9 * df.abs().max(1.0) {
        fixed(df.round(), 0)
    } else {
        fixed(df, 2)
    }
}

/// A fraction as a percentage with up to two decimals, none of them a trailing zero: "5 %", "1.67 %", "<0.01 %",
/// ">99.99 %" where 100 % would not be true. The space does not break.
pub fn percent(fraction: f64) -> String {
    if !fraction.is_finite() {
        return not_finite(fraction).unwrap_or_default();
    }
    let percentage = fraction * 100.0;
    let number = if percentage > 0.0 && percentage < 0.005 {
        "<0.01".to_owned()
    } else if (99.995..100.0).contains(&percentage) {
        // 0.999999999999 that is meant as 1 differs by less than any share that is counted.
        if percentage > 100.0 - 1e-9 { "100".to_owned() } else { ">99.99".to_owned() }
    } else {
        let text = fixed(percentage, 2);
        if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
    };
    format!("{number}\u{a0}%")
}

/// A number as short as it can be without changing it, for what a person typed (a score, a target): "0.05", "15".
pub fn plain(x: f64) -> String {
    if let Some(word) = not_finite(x) {
        return word;
    }
    let size = x.abs();
    if x != 0.0 && !(1e-6..HUGE).contains(&size) {
        let text = format!("{x:e}");
        let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
        return scientific(mantissa, exponent.parse().unwrap_or(0));
    }
    with_minus(format!("{x}"))
}

/// A count in prose; from 10,000 on in groups of three set apart by a narrow space that does not break.
/// In a table's cells use [`super::Cell::count`], which other programs read back as a number.
pub fn count(n: usize) -> String {
    let digits = n.to_string();
    if digits.len() < 5 {
        return digits;
    }
    let mut grouped = String::with_capacity(digits.len() * 2);
    for (i, digit) in digits.chars().enumerate() {
        if i > 0 && (digits.len() - i).is_multiple_of(3) {
            grouped.push('\u{202f}');
        }
        grouped.push(digit);
    }
    grouped
}

/// An interval in brackets: "[1.2, 3.4]"; a side without a limit is open: "[1.2, ∞)". A limit that is not a number
/// makes it [`NOT_AVAILABLE`].
pub fn interval(lower: f64, upper: f64, precision: Precision) -> String {
    if lower.is_nan() || upper.is_nan() {
        return NOT_AVAILABLE.to_owned();
    }
    let open = if lower.is_finite() { '[' } else { '(' };
    let close = if upper.is_finite() { ']' } else { ')' };
    format!("{open}{}, {}{close}", estimate(lower, precision), estimate(upper, precision))
}

/// An interval in prose: "1.2 to 3.4"; "at least 1.2" and "at most 3.4" where a side has no limit.
pub fn interval_in_words(lower: f64, upper: f64, precision: Precision) -> String {
    if lower.is_nan() || upper.is_nan() {
        return NOT_AVAILABLE.to_owned();
    }
    match (lower.is_finite(), upper.is_finite()) {
        (true, false) => format!("at least {}", estimate(lower, precision)),
        (false, true) => format!("at most {}", estimate(upper, precision)),
        _ => format!("{} to {}", estimate(lower, precision), estimate(upper, precision)),
    }
}

fn not_finite(x: f64) -> Option<String> {
    match x {
        _ if x.is_nan() => Some(NOT_AVAILABLE.to_owned()),
        f64::INFINITY => Some("∞".to_owned()),
        f64::NEG_INFINITY => Some(format!("{MINUS}∞")),
        _ => None,
    }
}

/// The hyphen of Rust's formatting as a minus sign; "-0.00" as "0.00".
fn with_minus(text: String) -> String {
    match text.strip_prefix('-') {
        Some(digits) if digits.contains(|c: char| c.is_ascii_digit() && c != '0') => {
            format!("{MINUS}{digits}")
        }
        Some(digits) => digits.to_owned(),
        None => text,
    }
}

/// The decimal exponent of a positive number after rounding to `decimals` + 1 significant digits.
fn exponent_of(x: f64, decimals: usize) -> i32 {
    let text = format!("{x:.decimals$e}");
    let rounded = text.rsplit_once('e').and_then(|(_, exponent)| exponent.parse().ok());
    rounded.unwrap_or_else(|| floor(log10(x)) as i32)
}

/// Decimals of the shortest text that reads back as this number.
fn recorded_decimals(x: f64) -> i32 {
    let text = format!("{x}");
    text.split_once('.').map_or(0, |(_, decimals)| decimals.len() as i32)
}

fn power_of_ten(x: f64, precision: Precision) -> String {
    let exponent = exponent_of(x.abs(), 0);
    let digits = precision.decimals.saturating_add(exponent);
    if digits < -1 {
        // Smaller than the last place that is shown.
        return "0".to_owned();
    }
    let text = format!("{x:.*e}", digits.clamp(0, 15) as usize);
    let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
    scientific(mantissa, exponent.parse().unwrap_or(0))
}

fn scientific(mantissa: &str, exponent: i32) -> String {
    let raise = |c: char| match c {
        '-' => '⁻',
        '1' => '¹',
        '2' => '²',
        '3' => '³',
        digit => char::from_u32(0x2070 + digit.to_digit(10).unwrap_or(0)).unwrap_or(digit),
    };
    let raised: String = exponent.to_string().chars().map(raise).collect();
    format!("{}\u{a0}×\u{a0}10{}", with_minus(mantissa.to_owned()), raised)
}
