//! The study's design as typed, with everything that can be checked before there are data.

use crate::notebook::ask::{At, Reader};
use crate::notebook::diagnostics::{quoted_choices, suggestion};
use crate::study::{Better, Levels, Observed, Study, Variances};
use std::collections::BTreeSet;

/// The fields of a study cell.
pub(super) struct Design {
    pub outcome: String,
    pub factor: String,
    /// The levels as listed; `None` where they come from the data.
    pub levels: Option<Vec<At<String>>>,
    pub scores: Option<Vec<At<f64>>>,
    pub control: Option<String>,
    variances: Variances,
    alpha: f64,
    confidence: f64,
    unit: Option<String>,
    better: Option<Better>,
}

/// Reads the fields; problems are noted in the reader.
pub(super) fn read(reader: &mut Reader) -> Option<Design> {
    let (outcome, factor) = (reader.text("outcome"), reader.text("groups"));
    let given = reader.ask().given("levels");
    let levels = reader.texts("levels").filter(|_| given);
    if let Some(levels) = &levels {
        check_levels(reader, levels);
    }
    let scores = reader.ask().given("scores").then(|| reader.numbers("scores")).flatten();
    if let Some(scores) = &scores {
        check_scores(reader, scores, levels.as_deref());
    }
    let control = optional_text(reader, "control");
    let variances = match reader.choice("variances") {
        Some("equal") => Variances::Equal,
        _ => Variances::Unequal,
    };
    let alpha = reader.number("alpha").unwrap_or(0.05);
    let confidence = reader.number("confidence").unwrap_or(1.0 - alpha);
    let unit = optional_text(reader, "unit");
    let better = match reader.choice("better") {
        Some("higher") => Some(Better::Higher),
        Some("lower") => Some(Better::Lower),
        _ => None,
    };
    let (outcome, factor) = (outcome?, factor?);
    Some(Design { outcome, factor, levels, scores, control, variances, alpha, confidence, unit, better })
}

fn optional_text(reader: &mut Reader, field: &str) -> Option<String> {
    reader.ask().given(field).then(|| reader.text(field)).flatten()
}

fn check_levels(reader: &mut Reader, levels: &[At<String>]) {
    let mut seen = BTreeSet::new();
    for level in levels {
        if level.value.is_empty() {
            reader.problem_at(
                "levels",
                level.span.clone(),
                "levels: a level has no name. Give it one, or take it out.",
            );
        } else if !seen.insert(level.value.as_str()) {
            let message = format!("levels: \"{}\" is listed twice. List every level once.", level.value);
            reader.problem_at("levels", level.span.clone(), message);
        }
    }
    match levels {
        [] => reader
            .problem("levels", "levels: the list is empty. List at least 2 levels, or take the field out."),
        [only] => reader.problem(
            "levels",
            format!(
                "levels: only \"{}\" is listed; a comparison needs at least 2 levels. Add the others.",
                only.value
            ),
        ),
        many if many.len() > crate::study::MOST_LEVELS => reader.problem(
            "levels",
            format!(
                "levels: {} levels are listed; at most {} can be compared.",
                many.len(),
                crate::study::MOST_LEVELS
            ),
        ),
        _ => {}
    }
}

fn check_scores(reader: &mut Reader, scores: &[At<f64>], levels: Option<&[At<String>]>) {
    for pair in scores.windows(2) {
        if pair[1].value <= pair[0].value {
            let message = format!(
                "scores: {} follows {}, but scores must increase from level to level. Put the levels in the order of their scores.",
                pair[1].value, pair[0].value
            );
            reader.problem_at("scores", pair[1].span.clone(), message);
            return;
        }
    }
    if let Some(levels) = levels.filter(|levels| levels.len() != scores.len()) {
        let message = format!(
            "scores: {} for {} levels. Give each level one score, in the order of the levels.",
            if scores.len() == 1 { "1 score".to_owned() } else { format!("{} scores", scores.len()) },
            levels.len()
        );
        reader.problem("scores", message);
    }
}

impl Design {
    /// The study with these levels and observations; a control that is no level and scores without a stated order
    /// are noted.
    pub fn study(self, reader: &mut Reader, labels: Vec<String>, observed: Observed) -> Study {
        let control = self.control.as_ref().and_then(|control| {
            let at = labels.iter().position(|level| level == control);
            if at.is_none() {
                let known = || labels.iter().map(String::as_str);
                let message = format!(
                    "control: \"{control}\" is not one of the levels {}.{}",
                    quoted_choices(known()).replace(" or ", " and "),
                    suggestion(control, known())
                );
                reader.problem("control", message);
            }
            at
        });
        if self.scores.is_some() && self.levels.is_none() {
            let message = format!(
                "scores belong to levels in a stated order, and no order is stated. Add levels = {}, in the right order.",
                toml_list(&labels)
            );
            reader.problem("scores", message);
        }
        let scores = self.scores.map(|scores| scores.iter().map(|score| score.value).collect());
        Study {
            outcome: self.outcome,
            factor: self.factor,
            levels: Levels { labels, scores, control, order_of_appearance: self.levels.is_none() },
            variances: self.variances,
            alpha: self.alpha,
            confidence: self.confidence,
            unit: self.unit,
            better: self.better,
            account: Vec::new(),
            observed,
        }
    }

    /// The listed labels.
    pub fn listed(&self) -> Option<Vec<String>> {
        Some(self.levels.as_ref()?.iter().map(|level| level.value.clone()).collect())
    }
}

/// Texts as a list in a cell's text.
pub(super) fn toml_list(labels: &[String]) -> String {
    let quoted: Vec<String> =
        labels.iter().map(|label| toml_edit::Value::from(label.as_str()).to_string()).collect();
    format!("[{}]", quoted.join(", "))
}
