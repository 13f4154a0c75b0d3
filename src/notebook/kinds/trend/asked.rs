//! Reads a trend ask against the study that it names.

use super::words;
use crate::methods::multiplicity::{Resampling, Sides};
use crate::methods::trend::{Weights, highest_degree};
use crate::notebook::ask::{Ask, Reader};
use crate::notebook::diagnostics::Diagnostic;
use crate::notebook::kinds::resampling::resampling;
use crate::study::Study;

/// How the trend is looked for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Method {
    Polynomial,
    DoseScales,
    OrderedRanks,
    StepContrasts,
}

/// A trend ask that can be answered.
#[derive(Debug, Clone)]
pub struct Asked {
    pub method: Method,
    /// Which direction counts, for the methods that have one.
    pub sides: Sides,
    /// Whether the p-values of ranks come from random rearrangements.
    pub rearranged: bool,
    pub resampling: Resampling,
    /// One a level, strictly increasing; empty where a method can do without and there are none.
    pub scores: Vec<f64>,
    /// True when the cell gives its own scores instead of the study's.
    pub own_scores: bool,
    pub degree: usize,
    pub weights: Weights,
    pub alpha: f64,
    /// Confidence of the intervals, each by itself.
    pub confidence: f64,
}

impl Asked {
    /// The ask, with every default filled in.
    ///
    /// # Errors
    /// What must be mended.
    pub fn of(ask: &Ask, study: &Study) -> Result<Self, Vec<Diagnostic>> {
        let mut reader = ask.reader();
        let method = match reader.choice("method") {
            Some("dose scales") => Method::DoseScales,
            Some("ordered ranks") => Method::OrderedRanks,
            Some("step contrasts") => Method::StepContrasts,
            _ => Method::Polynomial,
        };
        let sides = match reader.choice("direction") {
            Some("rising") => Sides::Greater,
            Some("falling") => Sides::Less,
            _ => Sides::Both,
        };
        let rearranged = reader.choice("p_values") == Some("rearranged");
        let resampling = resampling(&mut reader);
        let weights = match reader.choice("weights") {
            Some("equal") => Weights::Equal,
            _ => Weights::N,
        };
        let alpha = reader.number("alpha").unwrap_or(study.alpha);
        let confidence = if (study.confidence - (1.0 - study.alpha)).abs() > 1e-12 {
            study.confidence
        } else {
            1.0 - alpha
        };
        let (scores, degree) = match method {
            Method::Polynomial => (scores(&mut reader, study), degree(&mut reader, study.levels.count())),
            Method::DoseScales => (scores(&mut reader, study), 1),
            Method::OrderedRanks | Method::StepContrasts => (study.levels.scores.clone(), 1),
        };
        let own_scores = ask.given("scores");
        reader.finish(Self {
            method,
            sides,
            rearranged,
            resampling,
            scores: scores.unwrap_or_default(),
            own_scores,
            degree,
            weights,
            alpha,
            confidence,
        })
    }
}

fn scores(reader: &mut Reader, study: &Study) -> Option<Vec<f64>> {
    let levels = &study.levels;
    if !reader.ask().given("scores") {
        let from_study = levels.scores.clone();
        if from_study.is_none() {
            let order = words::order(&levels.labels);
            let known =
                if order.is_empty() { String::new() } else { format!(" The order in use is {order}.") };
            let advice = match words::scores_in_names(&levels.labels) {
                Some(scores) => format!(
                    "Their names suggest scores = [{}]: set them in the study, or here, if they are right.",
                    words::scores(&scores)
                ),
                None => "Set scores in the study, or here, such as scores = [0, 15, 30].".to_string(),
            };
            let message = format!(
                "A trend needs a number for each level (its dose, its minutes), and the study has no scores.{known} {advice}"
            );
            reader.problem("study", message);
        }
        return from_study;
    }
    let given = reader.numbers("scores")?;
    if let Some(pair) = given.windows(2).find(|pair| pair[0].value >= pair[1].value) {
        let message = format!(
            "The scores must be strictly increasing in the order of the levels, but {} follows {}. Order the study's levels by their scores.",
            pair[1].value, pair[0].value
        );
        reader.problem_at("scores", pair[1].span.clone(), message);
        return None;
    }
    if given.len() != levels.count() {
        let message = format!(
            "{} scores are given for {} levels. Give one for each, in the order {}.",
            given.len(),
            levels.count(),
            words::order(&levels.labels)
        );
        reader.problem("scores", message);
        return None;
    }
    Some(given.into_iter().map(|at| at.value).collect())
}

fn degree(reader: &mut Reader, levels: usize) -> usize {
    let highest = highest_degree(levels).max(1);
    let Some(degree) = reader.number("degree") else { return highest };
    let degree = degree as usize;
    if degree > highest {
        let message = format!(
            "{levels} levels allow a trend of degree {highest} at most: one less than their number. A {} trend needs {} levels.",
            crate::methods::trend::degree_name(degree),
            degree + 1
        );
        reader.problem("degree", message);
    }
    degree
}
