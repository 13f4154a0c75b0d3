//! The table that decides: every comparison with its estimate, interval, adjusted p and decision.

use super::decided::Laid;
use super::{json, words};
use crate::answer::{Cell, Precision, Row, Table, number};
use crate::methods::multiplicity::{Claim, ComparisonRow, ErrorRate, Family, IntervalKind, Rearranged};
use crate::notebook::kinds::wording::{left_out, outcome_with_unit, p_cell, sizes};

/// Names the method in full: tests, error term and df, side, adjustment, family and its size.
fn caption(laid: &Laid) -> String {
    let (result, study) = (laid.comparisons, laid.study);
    let k = study.levels.count();
    format!(
        "{}: {}; {}, {}; {} over the family of {}, {}",
        outcome_with_unit(study),
        words::family(laid.asked, study),
        words::tests(result.basis, study.variances, laid.estimates, k),
        words::sides(result.sides, result.claim),
        words::procedure_in_full(result.adjust, &laid.n()),
        words::comparisons(result.family_size),
        words::error_rate(result.adjust, result.alpha),
    )
}

/// Which columns there are: those that would be empty are left out.
struct Columns {
    interval: bool,
    df: bool,
    alpha: bool,
}

/// What decides stands first: the estimate, its interval, the adjusted p and the decision; how they came about follows.
pub fn table(laid: &Laid) -> Table {
    let result = laid.comparisons;
    let columns = Columns {
        interval: result.interval_kind != IntervalKind::None,
        df: result.rows.iter().any(|row| row.df.is_finite()),
        alpha: result.rows.iter().any(|row| row.alpha.is_some()),
    };
    let mut table =
        Table::new(caption(laid)).text_column("Comparison").number_column(capital(laid.estimate_word()));
    if columns.interval {
        table = table.number_column(capital(&words::interval(result)));
    }
    table = table.number_column("p, adjusted").text_column("Decision");
    table = table.number_column(result.rows.first().map_or("t", |row| row.statistic_name));
    if columns.df {
        table = table.number_column("df");
    }
    table = table.number_column("p, raw");
    if columns.alpha {
        table = table.number_column("alpha for raw p");
    }
    result.rows.iter().for_each(|row| table.push(table_row(laid, row, &columns)));
    notes(laid).into_iter().fold(table, Table::note)
}

fn table_row(laid: &Laid, row: &ComparisonRow, columns: &Columns) -> Row {
    let (result, precision) = (laid.comparisons, laid.precision);
    let mut cells = vec![Cell::text(laid.name(row)), Cell::estimate(row.estimate, precision)];
    if columns.interval {
        let shown = row.interval.map(|interval| Cell::interval(interval.lower, interval.upper, precision));
        cells.push(shown.unwrap_or_else(Cell::absent));
    }
    cells.push(p_cell(row.p_adjusted, result.alpha));
    cells.push(Cell::text(words::decision(row, result.sides, result.claim)));
    cells.push(Cell::statistic(row.statistic));
    if columns.df {
        cells.push(Cell::df(row.df));
    }
    cells.push(row.alpha.map_or_else(|| Cell::p_value(row.p), |alpha| p_cell(row.p, alpha)));
    if columns.alpha {
        cells.push(row.alpha.map_or_else(Cell::absent, level_cell));
    }
    let cells = Row::new(cells);
    if row.rejected { cells.strong() } else { cells }
}

/// A level such as 0.0167: four decimals, or the power of ten that keeps it apart from zero.
pub fn level_cell(alpha: f64) -> Cell {
    let shown = if alpha >= 0.001 {
        number::fixed(alpha, 4)
    } else {
        number::estimate(alpha, Precision::from_spread(alpha))
    };
    Cell::number(shown, alpha)
}

/// The first letter as a capital.
pub fn capital(text: &str) -> String {
    let mut letters = text.chars();
    letters.next().map(|first| first.to_uppercase().to_string()).unwrap_or_default() + letters.as_str()
}

fn notes(laid: &Laid) -> Vec<String> {
    let (result, study) = (laid.comparisons, laid.study);
    let mut notes = vec![format!("Analysed: {}.", sizes(&study.levels.labels, laid.n().into_iter()))];
    notes.extend(left_out(study));
    if study.levels.order_of_appearance {
        notes.push(
            "The levels stand in the order of their first appearance in the data; the study can set another."
                .to_string(),
        );
    }
    notes.extend(against_margin(laid));
    notes.extend(two_readings(laid));
    notes.extend(how_p(laid));
    if laid.asked.family == Family::Contrasts {
        let rank = json::independent(laid.asked, laid.study.levels.count());
        if rank < result.family_size {
            notes.push(format!(
                "The {} contrasts carry {rank} independent question{}: some of them follow from others.",
                result.family_size,
                if rank == 1 { "" } else { "s" }
            ));
        }
        let each = result.rows.iter().map(|row| format!("{}: {}", row.name, row.words));
        notes.push(format!("In words: {}.", each.collect::<Vec<_>>().join("; ")));
    }
    notes
}

/// What t and p are of, where it is not a difference of zero.
fn against_margin(laid: &Laid) -> Option<String> {
    let result = laid.comparisons;
    match result.claim {
        Claim::Difference => None,
        Claim::NonInferiority { .. } => Some(format!(
            "t and p test the difference against the margin, {}, instead of zero.",
            number::plain(result.claim.null(result.sides))
        )),
        Claim::Equivalence { .. } => Some(
            "Each difference is tested against both margins; t and p are those of the test with the larger p."
                .to_string(),
        ),
    }
}

fn two_readings(laid: &Laid) -> Option<String> {
    let result = laid.comparisons;
    let judged = result.rows.iter().any(|row| row.alpha.is_some());
    if !judged || result.adjust.error_rate() == ErrorRate::PerComparison {
        return None;
    }
    let step = match result.adjust.single_step() {
        true => "",
        false => " The alpha beside a row is that of the step at which it was decided.",
    };
    Some(format!(
        "Two readings of one decision: the adjusted p against {}, or the raw p against the alpha beside it. Never both corrections at once.{step}",
        number::plain(result.alpha)
    ))
}

/// How the p-values came about, where that is not one distribution for all: counted, sampled, integrated with an error.
fn how_p(laid: &Laid) -> Vec<String> {
    use crate::methods::multiplicity::{Basis, Ranking};
    let result = laid.comparisons;
    let mut notes = Vec::new();
    if let Some(rearranged) = &result.rearranged {
        notes.push(rearrangements(rearranged, laid));
    } else if let Some(most) = result.rows.iter().filter_map(|row| row.p_error).max_by(f64::total_cmp)
        && most > 1e-7
    {
        notes.push(format!(
            "The adjusted p-values come from the joint distribution by integration on a lattice; their standard error is at most {}.",
            number::estimate(most, Precision::from_spread(most))
        ));
    }
    if result.basis == Basis::Ranks(Ranking::PairByPair) {
        let counted = result.rows.iter().filter(|row| row.p_counted).count();
        let how = match counted {
            0 => "from the normal distribution".to_string(),
            all if all == result.rows.len() => "counted exactly".to_string(),
            some => format!(
                "counted exactly in {some} rows with small groups, and else from the normal distribution"
            ),
        };
        notes.push(format!(
            "The shift is the median of all differences between a value of the one level and a value of the other. The raw p-values are {how}."
        ));
    }
    notes
}

/// How many rearrangements the p-values rest on, and how sure that makes them.
pub fn rearrangements(rearranged: &Rearranged, laid: &Laid) -> String {
    let sets = match rearranged.partitions {
        1 => "one set of levels".to_string(),
        many => format!("{} sets of levels", number::count(many)),
    };
    if rearranged.counted {
        return format!("All rearrangements within {sets} were counted; the p-values are exact.");
    }
    let errors = laid.comparisons.rows.iter().filter_map(|row| row.p_error);
    let largest = errors.chain(rearranged.raw_errors.iter().copied()).fold(0.0, f64::max);
    format!(
        "Rearrangements within {sets}: {} drawn from seed {} where they are too many to be counted. The p-values have a standard error of at most {}.",
        number::count(rearranged.repeats as usize),
        rearranged.seed,
        number::estimate(largest, Precision::from_spread(largest)),
    )
}
