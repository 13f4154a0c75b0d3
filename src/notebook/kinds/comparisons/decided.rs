//! Lays out decided comparisons: the headline, and the order of what follows.

use super::asked::Asked;
use super::{beside, cautions, differs, effects, figures, json, letters, rows, shares, words, writeup};
use crate::answer::{Answer, Precision, number};
use crate::methods::contrasts::Partition;
use crate::methods::multiplicity::{Adjust, ComparisonRow, Comparisons, Explanation, Sides};
use crate::notebook::kinds::wording::listed;
use crate::notebook::outcome::Outcome;
use crate::study::{Estimates, Study, Summary};

/// Everything from which the answer is laid out.
pub struct Laid<'a> {
    pub asked: &'a Asked,
    pub study: &'a Study,
    pub summary: &'a Summary,
    /// `None` where ranks are compared and a level has no variance of its own.
    pub estimates: Option<&'a Estimates>,
    pub comparisons: &'a Comparisons,
    /// One for all estimates, from their standard errors.
    pub precision: Precision,
    /// Adjusted p-values of the same rows under other procedures.
    pub also: &'a [(Adjust, Vec<f64>)],
    pub explanation: Option<Explanation>,
    /// How the contrasts split what lies between the groups; `None` where they do not.
    pub partition: Option<Partition>,
}

impl Laid<'_> {
    /// The row's name as shown.
    pub fn name(&self, row: &ComparisonRow) -> String {
        words::row_name(&row.name, self.asked.family)
    }

    /// What a row's estimate is: a difference of two sets of means, any contrast, a shift.
    pub fn estimate_word(&self) -> &'static str {
        words::estimate(self.asked.basis, self.asked.family)
    }

    /// Observations of each level.
    pub fn n(&self) -> Vec<usize> {
        self.summary.groups.iter().map(|group| group.n).collect()
    }
}

/// The settled answer.
pub fn outcome(laid: &Laid) -> Outcome {
    let mut answer = Answer::new(headline(laid)).with_table(rows::table(laid));
    let tables = [effects::table(laid), letters::table(laid), shares::table(laid), beside::table(laid)];
    for table in tables.into_iter().flatten() {
        answer = answer.with_table(table);
    }
    answer = answer.with_figure(figures::differences(laid)).with_figure(figures::groups(laid));
    answer = figures::path(laid).into_iter().fold(answer, Answer::with_figure);
    if let Some(found) = &laid.explanation {
        answer = answer.with_text(differs::explanation(laid, found));
    }
    answer = answer.with_writeup(writeup::writeup(laid));
    answer.cautions = cautions::of(laid);
    Outcome::settled(answer, json::results(laid))
}

fn headline(laid: &Laid) -> String {
    let result = laid.comparisons;
    let method =
        format!("{}, {}", words::procedure(result.adjust), words::error_rate(result.adjust, result.alpha));
    let found: Vec<&ComparisonRow> = result.rows.iter().filter(|row| row.rejected).collect();
    let what = words::shown(result.claim);
    let (of, all) = (found.len(), result.rows.len());
    let says = match (of, all) {
        (0, 1) => not_shown(laid),
        (0, _) => format!("None of the {} shows {what}", words::comparisons(all)),
        (1, 1) => {
            let size = number::signed(found[0].estimate, laid.precision);
            format!("{}: {size}, {what} is shown", laid.name(found[0]))
        }
        (2, 2) => format!("Both comparisons show {what}"),
        (of, all) if of == all => format!("All {} show {what}", words::comparisons(all)),
        (of, all) => {
            format!("{of} of {} {} {what}", words::comparisons(all), if of == 1 { "shows" } else { "show" })
        }
    };
    let which = if (1..=3).contains(&of) && all > 1 {
        let each = found
            .iter()
            .map(|row| format!("{} {}", laid.name(row), number::signed(row.estimate, laid.precision)));
        format!(": {}", listed(each))
    } else {
        String::new()
    };
    format!("{says}{which} ({method}){}", beside::firmness(laid))
}

fn not_shown(laid: &Laid) -> String {
    let (result, name) = (laid.comparisons, laid.name(&laid.comparisons.rows[0]));
    if result.claim != crate::methods::multiplicity::Claim::Difference {
        return format!("{name}: {} is not shown", words::shown(result.claim));
    }
    let against = match result.sides {
        Sides::Both => "not shown to differ from zero",
        Sides::Greater => "not shown to be greater than zero",
        Sides::Less => "not shown to be less than zero",
    };
    format!("{name} is {against}")
}
