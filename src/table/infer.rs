//! What the cells of a table say about their type and their decimal mark.
//!
//! The mark is one for the whole table. Only columns that are mostly numbers under one mark or the other have a
//! say. A comma that might just as well separate thousands is never taken for a decimal comma in silence.

use super::column::{Column, ColumnKind, NotANumber, Numbers, Source, shortened};
use super::read::ReadError;
use super::split::{Cells, Separator};
use crate::numerics::decimal::{Decimal, DecimalMark, NotADecimal, common_origin};
use std::sync::Arc;

/// How many offending cells a column remembers.
const REMEMBERED: usize = 3;

/// A column's cells read with one decimal mark.
pub(super) struct Tally {
    /// Nearest `f64` of every cell, NaN where missing or no number; empty as long as no number was met.
    values: Vec<f64>,
    numbers: usize,
    missing: usize,
    /// Numbers that contain the mark, and how many of them could be read as thousands.
    marked: usize,
    marked_as_thousands: usize,
    /// No numbers here, but numbers with the other mark, and how many of them could be read as thousands.
    others: usize,
    others_as_thousands: usize,
    /// First number with the mark; first number with the other one.
    first_marked: Option<usize>,
    first_other: Option<usize>,
    not_numbers: Vec<NotANumber>,
    n_not_numbers: usize,
}

impl Tally {
    fn present(&self) -> usize {
        self.numbers + self.n_not_numbers
    }

    /// Whether at least half of the cells are numbers with one mark or the other.
    fn mostly_numbers(&self) -> bool {
        self.numbers + self.others > 0 && 2 * (self.numbers + self.others) >= self.present()
    }
}

/// Reads every cell of one column.
pub(super) fn tally(source: &Source) -> Tally {
    let rows = source.cells.rows();
    let mut tally = Tally {
        values: Vec::new(),
        numbers: 0,
        missing: 0,
        marked: 0,
        marked_as_thousands: 0,
        others: 0,
        others_as_thousands: 0,
        first_marked: None,
        first_other: None,
        not_numbers: Vec::new(),
        n_not_numbers: 0,
    };
    let mark = source.mark.character() as u8;
    for row in 0..rows {
        let text = source.text(row);
        let value = if source.is_missing(text) {
            tally.missing += 1;
            f64::NAN
        } else {
            match Decimal::parse(text, source.mark) {
                Ok(number) => {
                    tally.numbers += 1;
                    if text.as_bytes().contains(&mark) {
                        tally.marked += 1;
                        tally.marked_as_thousands += usize::from(like_thousands(text, source.mark));
                        tally.first_marked.get_or_insert(row);
                    }
                    number.to_f64()
                }
                Err(why) => {
                    tally.no_number(row, text, why, source.mark);
                    f64::NAN
                }
            }
        };
        if tally.numbers > 0 {
            if tally.values.is_empty() {
                tally.values.reserve_exact(rows);
                tally.values.resize(row, f64::NAN);
            }
            tally.values.push(value);
        }
    }
    tally
}

impl Tally {
    fn no_number(&mut self, row: usize, text: &str, why: NotADecimal, mark: DecimalMark) {
        self.n_not_numbers += 1;
        if self.not_numbers.len() < REMEMBERED {
            self.not_numbers.push(NotANumber { row, text: text.to_owned(), why });
        }
        let other = mark.other();
        if why == NotADecimal::NotANumber
            && text.contains(other.character())
            && Decimal::parse(text, other).is_ok()
        {
            self.others += 1;
            self.others_as_thousands += usize::from(like_thousands(text, other));
            self.first_other.get_or_insert(row);
        }
    }
}

/// Whether the mark in `text` could separate thousands: one to three digits without a leading zero, then
/// exactly three.
fn like_thousands(text: &str, mark: DecimalMark) -> bool {
    let text = text.trim_start_matches(['+', '-', '\u{2212}']);
    let Some((whole, fraction)) = text.split_once(mark.character()) else { return false };
    let digits = |part: &str| part.bytes().all(|b| b.is_ascii_digit());
    (1..=3).contains(&whole.len())
        && !whole.starts_with('0')
        && digits(whole)
        && fraction.len() == 3
        && digits(fraction)
}

/// The decimal mark that the table's numbers use, given its columns read with decimal point.
///
/// # Errors
/// Where the only sign is a comma that may as well separate thousands.
pub(super) fn find_mark(
    names: &[String],
    sources: &[Source],
    tallies: &[Tally],
    labels: &[bool],
    separator: Separator,
    remarks: &mut Vec<String>,
) -> Result<DecimalMark, ReadError> {
    let voices = || (0..tallies.len()).filter(|&i| !labels[i] && tallies[i].mostly_numbers());
    let total = |count: fn(&Tally) -> usize| voices().map(|i| count(&tallies[i])).sum::<usize>();
    let (points, points_as_thousands) = (total(|t| t.marked), total(|t| t.marked_as_thousands));
    let (commas, commas_as_thousands) = (total(|t| t.others), total(|t| t.others_as_thousands));
    let cell = |first: fn(&Tally) -> Option<usize>| {
        let place = voices().filter_map(|i| Some((first(&tallies[i])?, i))).min();
        place.map(|(row, i)| (row, names[i].as_str(), shortened(sources[i].text(row))))
    };
    let (point_cell, comma_cell) = (cell(|t| t.first_marked), cell(|t| t.first_other));
    let semicolons = separator == Separator::Semicolon;
    let plain = |text: &str, mark: char| (text.replace(mark, "."), text.replace(mark, ""));
    match (point_cell, comma_cell) {
        (None, None) => Ok(DecimalMark::Point),
        (Some((row, name, text)), None) => {
            if semicolons && points == points_as_thousands {
                let whole = text.replace('.', "");
                remarks.push(format!(
                    "Row {}, column \"{name}\": \"{text}\" was read with decimal \".\". If it means {whole}, remove the thousands separators.",
                    row + 1
                ));
            }
            Ok(DecimalMark::Point)
        }
        (None, Some((row, name, text))) => {
            if commas == commas_as_thousands {
                let (fraction, whole) = plain(&text, ',');
                if !semicolons {
                    let message = format!(
                        "Row {}, column \"{name}\": \"{text}\" can be read as {fraction} or as {whole}. Set decimal = \",\" if the comma begins the decimals, or remove the thousands separators.",
                        row + 1
                    );
                    return Err(ReadError::at_cell(row, name, message));
                }
                remarks.push(format!(
                    "Row {}, column \"{name}\": \"{text}\" was read as {fraction}, with decimal \",\". If it means {whole}, remove the thousands separators.",
                    row + 1
                ));
            }
            Ok(DecimalMark::Comma)
        }
        (Some(point), Some(comma)) => {
            let comma_wins = if points == points_as_thousands && commas != commas_as_thousands {
                true
            } else if commas == commas_as_thousands {
                false
            } else {
                commas > points
            };
            let mark = if comma_wins { DecimalMark::Comma } else { DecimalMark::Point };
            let (row, name, text) = if comma_wins { point } else { comma };
            remarks.push(format!(
                "The table has numbers with a decimal point and with a decimal comma; it was read with decimal \"{}\". Row {}, column \"{name}\", \"{text}\" is no number then. Set decimal, or write all numbers alike.",
                mark.character(),
                row + 1
            ));
            Ok(mark)
        }
    }
}

/// The column, of the kind that was asked for or that its cells have.
///
/// # Errors
/// A cell that is no number where numbers were asked for.
pub(super) fn column(
    name: &str,
    source: Source,
    tally: Tally,
    forced: Option<ColumnKind>,
) -> Result<Column, ReadError> {
    let all_numbers = tally.n_not_numbers == 0 && tally.numbers > 0;
    let kind = forced.unwrap_or(if all_numbers { ColumnKind::Number } else { ColumnKind::Label });
    if kind == ColumnKind::Number
        && let Some(first) = tally.not_numbers.first()
    {
        return Err(ReadError::at_cell(first.row, name, first.message(name, source.mark)));
    }
    let Tally { values, missing, not_numbers, n_not_numbers, .. } = tally;
    let numbers = (kind == ColumnKind::Number).then(|| numbers(&source, values));
    Ok(Column {
        name: name.to_owned(),
        kind,
        numbers,
        not_numbers,
        n_not_numbers,
        n_missing: missing,
        forced: forced.is_some(),
        derived: false,
        source,
    })
}

/// Offsets from a suitable origin, given the nearest `f64` of every value.
fn numbers(source: &Source, mut values: Vec<f64>) -> Numbers {
    values.resize(source.cells.rows(), f64::NAN);
    let present = || values.iter().enumerate().filter(|(_, value)| !value.is_nan());
    let lowest = present().min_by(|a, b| a.1.total_cmp(b.1)).map(|(row, _)| row);
    let highest = present().max_by(|a, b| a.1.total_cmp(b.1)).map(|(row, _)| row);
    let (Some(lowest), Some(highest)) = (lowest, highest) else {
        return Numbers::new(Decimal::ZERO, values);
    };
    let parse = |row: usize| Decimal::parse(source.text(row), source.mark).unwrap_or(Decimal::ZERO);
    let origin = common_origin(parse(lowest), parse(highest));
    if origin == Decimal::ZERO {
        return Numbers::new(origin, values);
    }
    for (row, value) in values.iter_mut().enumerate() {
        if !value.is_nan() {
            *value = parse(row).minus(origin);
        }
    }
    Numbers::new(origin, values)
}

/// The sources of `count` columns, all read with `mark`.
pub(super) fn sources(
    cells: &Arc<Cells>,
    count: usize,
    missing: &Arc<[String]>,
    mark: DecimalMark,
) -> Vec<Source> {
    (0..count)
        .map(|index| Source { cells: Arc::clone(cells), index, missing: Arc::clone(missing), mark })
        .collect()
}
