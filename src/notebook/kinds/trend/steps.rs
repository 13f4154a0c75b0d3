//! From which dose on? Williams's test of the doses against the first level, the control, for a monotone response.

use super::asked::Asked;
use super::words;
use crate::answer::{Answer, Cell, Precision, Row, Table, number};
use crate::methods::multiplicity::Sides;
use crate::methods::trend::{Direction, NoSteps, Williams, WilliamsStep, williams};
use crate::notebook::ask::Ask;
use crate::notebook::diagnostics::Diagnostic;
use crate::notebook::kinds::wording::{
    left_out, outcome_with_unit, p_cell, p_statement, refused, remedy, sentence, sizes,
};
use crate::notebook::outcome::Outcome;
use crate::notebook::results::number as json_number;
use crate::study::{Estimates, Study};
use serde_json::{Value, json};

/// The test, the plan for it, or what to mend.
pub fn outcome(ask: &Ask, asked: &Asked, study: &Study) -> Outcome {
    if let Some(problem) = not_asked_in_full(ask, asked, study) {
        return Outcome::mend(vec![problem]);
    }
    let direction = if asked.sides == Sides::Less { Direction::Falling } else { Direction::Rising };
    let Some(summary) = study.summary() else { return plan(asked, study) };
    let estimates = match Estimates::one_way(&study.levels.labels, &summary, study.variances) {
        Ok(estimates) => estimates,
        Err(error) => return refused(ask, format!("The trend cannot be given: {error}.{}", remedy(&error))),
    };
    match williams(&estimates, direction, asked.alpha) {
        Ok(test) => settled(&Laid { asked, study, estimates: &estimates, test }),
        Err(NoSteps::NoCommonErrorTerm) => refused(
            ask,
            "Williams's test needs one standard deviation for all levels, and the study says unequal variances. Set variances = \"equal\" in the study if that is credible, or compare each level with the control in a comparisons cell (max-t).",
        ),
        Err(error) => refused(ask, sentence(&error.to_string())),
    }
}

fn not_asked_in_full(ask: &Ask, asked: &Asked, study: &Study) -> Option<Diagnostic> {
    if asked.sides == Sides::Both {
        let message = "Williams's test assumes in which direction the response goes with the dose. Set direction = \"rising\" or \"falling\".";
        return Some(Diagnostic::new(message, ask.span("method"), Some("method")));
    }
    let control = study.levels.control.filter(|at| *at != 0)?;
    let message = format!(
        "Williams's test takes the first level, \"{}\", for the control, and the study's control is \"{}\". Put the control first in the study's levels.",
        study.levels.labels[0], study.levels.labels[control]
    );
    Some(Diagnostic::new(message, ask.span("method"), Some("method")))
}

/// Everything from which the answer is laid out.
struct Laid<'a> {
    asked: &'a Asked,
    study: &'a Study,
    estimates: &'a Estimates,
    test: Williams,
}

impl Laid<'_> {
    fn level(&self, step: &WilliamsStep) -> &str {
        &self.study.levels.labels[step.level]
    }

    fn control(&self) -> &str {
        &self.study.levels.labels[0]
    }
}

fn settled(laid: &Laid) -> Outcome {
    let mut answer = Answer::new(headline(laid)).with_table(table(laid)).with_writeup(writeup(laid));
    answer.cautions = cautions(laid);
    Outcome::settled(answer, results(laid))
}

fn headline(laid: &Laid) -> String {
    let (outcome, control) = (&laid.study.outcome, laid.control());
    match laid.test.lowest_effective {
        Some(level) => format!(
            "The lowest level of {} at which {outcome} differs from {control} is {} (Williams, family-wise error {})",
            laid.study.factor,
            laid.study.levels.labels[level],
            number::percent(laid.asked.alpha)
        ),
        None => format!(
            "No level of {} is shown to differ from {control} in {outcome} (Williams, family-wise error {})",
            laid.study.factor,
            number::percent(laid.asked.alpha)
        ),
    }
}

fn method(laid: &Laid) -> String {
    let direction = if laid.asked.sides == Sides::Less { "falling" } else { "rising" };
    format!(
        "Williams's test against {}, response assumed {direction} in the order {}; one SD pooled over all levels (df {}); one-sided, stepping down from the last level; family-wise error {}",
        laid.control(),
        words::order(&laid.study.levels.labels),
        number::df(laid.test.df),
        number::percent(laid.asked.alpha)
    )
}

fn table(laid: &Laid) -> Table {
    let estimates = laid.estimates;
    let precision =
        Precision::for_column((0..estimates.n.len()).map(|i| estimates.covariance[(i, i)].sqrt()));
    let mut table = Table::new(format!("{}: {}", outcome_with_unit(laid.study), method(laid)))
        .text_column("Level")
        .number_column("Mean")
        .number_column("Mean, amalgamated")
        .number_column("t")
        .number_column("p, adjusted")
        .text_column("Decision")
        .number_column("p of this step");
    table.push(Row::new([
        Cell::text(format!("{} (control)", laid.control())),
        Cell::estimate(estimates.origin + estimates.means[0], precision),
        Cell::absent(),
        Cell::absent(),
        Cell::absent(),
        Cell::text("control"),
        Cell::absent(),
    ]));
    for step in &laid.test.steps {
        let cells = Row::new([
            Cell::text(laid.level(step).to_string()),
            Cell::estimate(estimates.origin + estimates.means[step.level], precision),
            Cell::estimate(estimates.origin + step.amalgamated, precision),
            Cell::statistic(step.t),
            p_cell(step.p_adjusted, laid.asked.alpha),
            Cell::text(if step.rejected { "differs" } else { "not shown to differ" }),
            Cell::p_value(step.p),
        ]);
        table.push(if step.rejected { cells.strong() } else { cells });
    }
    let mut notes =
        vec![format!("Analysed: {}.", sizes(&laid.study.levels.labels, estimates.n.iter().copied()))];
    notes.extend(left_out(laid.study));
    notes.push("Amalgamated: neighbouring means of the levels after the control that run against the direction are pooled, weighted by n. The adjusted p is the largest from the last level down to this one.".to_string());
    notes.into_iter().fold(table, Table::note)
}

fn writeup(laid: &Laid) -> String {
    let each = laid.test.steps.iter().rev().map(|step| {
        format!(
            "{}: t = {}, adjusted {}",
            laid.level(step),
            number::statistic(step.t),
            p_statement(step.p_adjusted, laid.asked.alpha)
        )
    });
    format!(
        "{} was compared with the control ({}). {}. {}.",
        outcome_with_unit(laid.study),
        method(laid),
        each.collect::<Vec<_>>().join("; "),
        headline(laid)
    )
}

fn cautions(laid: &Laid) -> Vec<String> {
    let mut found: Vec<String> = words::unconfirmed_order(&laid.study.levels).into_iter().collect();
    let pooled = laid.test.blocks.iter().any(|block| block.first != block.last);
    found.push(format!(
        "The test assumes a monotone response.{} Dunnett's procedure in a comparisons cell does without that assumption.",
        if pooled { " Some of the means here run against it and were pooled, which carries an effect of lower levels to higher ones." } else { "" }
    ));
    found.push("A lowest effective dose for a clinical or safety decision rests on the approved protocol, a qualified statistician and local rules; this cell does not replace them.".to_string());
    found
}

fn results(laid: &Laid) -> Value {
    let rows = laid.test.steps.iter().map(|step| {
        json!({
            "name": laid.level(step),
            "amalgamated": json_number(laid.estimates.origin + step.amalgamated),
            "statistic": json_number(step.t),
            "statistic_name": "t",
            "df": json_number(laid.test.df),
            "p": json_number(step.p),
            "p_adjusted": json_number(step.p_adjusted),
            "rejected": step.rejected,
        })
    });
    json!({
        "method": "step contrasts",
        "levels": laid.study.levels.labels,
        "sides": laid.asked.sides,
        "alpha": json_number(laid.asked.alpha),
        "lowest_effective": laid.test.lowest_effective.map(|level| &laid.study.levels.labels[level]),
        "rows": rows.collect::<Vec<_>>(),
    })
}

fn plan(asked: &Asked, study: &Study) -> Outcome {
    let labels = &study.levels.labels;
    if labels.is_empty() {
        return Outcome::plan(Answer::new("Waiting for the study's levels"), json!({}));
    }
    let method = format!(
        "Williams's test of {} against {}, stepping down from {}",
        words::order(&labels[1..]),
        labels[0],
        labels[labels.len() - 1]
    );
    let answer = Answer::new(format!("Planned: {method}; waiting for data"))
        .with_writeup(format!("Planned: {method}, family-wise error {}.", number::percent(asked.alpha)));
    Outcome::plan(answer, json!({ "method": "step contrasts", "levels": labels, "sides": asked.sides }))
}
