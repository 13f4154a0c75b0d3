//! How large each difference is: the table of effect sizes, and what the design could have detected.

use super::decided::Laid;
use crate::answer::{Cell, Precision, Row, Table};
use crate::methods::effect_size::{Interval, StandardisedBy};
use crate::methods::multiplicity::{ComparisonRow, Sized};

/// Every effect size that the rows have, each with the interval that goes with the row's critical value.
pub fn table(laid: &Laid) -> Option<Table> {
    let rows = &laid.comparisons.rows;
    let shown: Vec<&Effect> =
        EFFECTS.iter().filter(|effect| rows.iter().any(|row| (effect.of)(row).is_some())).collect();
    let detectable = rows.iter().any(|row| row.detectable.is_some());
    if shown.is_empty() {
        return None;
    }
    let mut table = Table::new("Effect sizes of the same comparisons").text_column("Comparison");
    for effect in &shown {
        table = table.number_column(effect.symbol).number_column(format!("Interval of {}", effect.symbol));
    }
    if detectable {
        table = table.number_column("Detectable with 80 %");
    }
    for row in rows {
        let mut cells = vec![Cell::text(laid.name(row))];
        for effect in &shown {
            let size = (effect.of)(row);
            let two = Precision::decimals(effect.decimals);
            cells.push(size.map_or_else(Cell::absent, |size| Cell::estimate(size.estimate, two)));
            let bounds = size.and_then(|size| size.interval);
            cells.push(bounds.map_or_else(Cell::absent, |it| Cell::interval(it.lower, it.upper, two)));
        }
        if detectable {
            cells.push(row.detectable.map_or_else(Cell::absent, |size| Cell::estimate(size, laid.precision)));
        }
        let cells = Row::new(cells);
        table.push(if row.rejected { cells.strong() } else { cells });
    }
    let notes = shown.iter().map(|effect| meaning(laid, effect)).chain(closing(detectable));
    Some(notes.fold(table, Table::note))
}

/// One kind of effect size.
struct Effect {
    symbol: &'static str,
    decimals: u8,
    of: fn(&ComparisonRow) -> Option<Sized>,
    meaning: &'static str,
}

const EFFECTS: [Effect; 5] = [
    Effect { symbol: "d", decimals: 2, of: d, meaning: "the difference divided by" },
    Effect {
        symbol: "g",
        decimals: 2,
        of: g,
        meaning: "g is d without its small-sample bias, by Hedges' exact factor.",
    },
    Effect {
        symbol: "\u{394}",
        decimals: 2,
        of: |row| row.effects.control_sd,
        meaning: "\u{394} is the difference divided by the SD of the control alone (Glass).",
    },
    Effect {
        symbol: "ratio",
        decimals: 3,
        of: |row| row.effects.ratio,
        meaning: "The ratio is the one mean over the other, its interval by Fieller's method; an interval that is not bounded is left out.",
    },
    Effect {
        symbol: "superiority",
        decimals: 3,
        of: |row| row.effects.superiority,
        meaning: "Superiority is the chance that a value of the first level exceeds one of the second, ties counting half; its interval is on the logit scale and need not agree with the decision to the last digit.",
    },
];

fn d(row: &ComparisonRow) -> Option<Sized> {
    row.effects.standardised.as_ref().map(|effect| Sized { estimate: effect.d, interval: effect.d_interval })
}

fn g(row: &ComparisonRow) -> Option<Sized> {
    row.effects.standardised.as_ref().map(|effect| Sized { estimate: effect.g, interval: effect.g_interval })
}

fn meaning(laid: &Laid, effect: &Effect) -> String {
    if effect.symbol != "d" {
        return effect.meaning.to_string();
    }
    let scaled = laid.asked.contrasts.iter().any(|contrast| (contrast.half_weight() - 1.0).abs() > 1e-9);
    let scale = if scaled { ", scaled to the mean of one set less the mean of another" } else { "" };
    format!("d is the {} divided by {}{scale}.", laid.estimate_word(), standardiser(laid))
}

fn closing(detectable: bool) -> Vec<String> {
    let mut notes = Vec::new();
    if detectable {
        notes.push(
            "Detectable: the smallest true difference that this design finds with a power of 80 % in this comparison at its level. It is a property of the design (sizes, spread, level), not of the result; a power computed from the observed difference would only repeat the p-value and is not given."
                .to_string(),
        );
    }
    notes
}

/// The standard deviation that standardises.
pub fn standardiser(laid: &Laid) -> &'static str {
    let used = laid.comparisons.rows.iter().find_map(|row| row.effects.standardised.as_ref());
    match used.map(|effect| &effect.standardiser.by) {
        Some(StandardisedBy::PooledOverAllGroups) | None => "the SD pooled over all levels",
        Some(StandardisedBy::PooledOver(_)) => "the SD pooled over the levels compared",
        Some(StandardisedBy::AverageVarianceOf(levels))
            if laid.asked.standardise.is_some() && levels.len() == laid.study.levels.count() =>
        {
            "the root of the mean variance of all levels"
        }
        Some(StandardisedBy::AverageVarianceOf(_)) => "the root of the mean variance of the levels compared",
    }
}

/// An interval in the words of a write-up, or nothing.
pub fn bounds(interval: Option<Interval>) -> Option<String> {
    let it = interval?;
    Some(crate::answer::number::interval_in_words(it.lower, it.upper, Precision::decimals(2)))
}
