//! Do the values rise or fall with the order of the levels? Ranks against the order, without any scores.

use super::asked::Asked;
use super::words;
use crate::answer::figure::{self, Point, Trend, TrendPoint};
use crate::answer::{Answer, Cell, Figure, Precision, Row, Table, number};
use crate::methods::multiplicity::Sides;
use crate::methods::slices::Progress;
use crate::methods::trend::{
    Direction, JonckheereByPermutation, JonckheereTerpstra, JonckheereWork, MonotoneFit, NoOrderedTest,
    jonckheere_terpstra, monotone,
};
use crate::notebook::ask::Ask;
use crate::notebook::kinds::wording::{left_out, outcome_with_unit, p_cell, p_statement, refused, sizes};
use crate::notebook::outcome::Outcome;
use crate::notebook::results::number as json_number;
use crate::notebook::work::Evaluation;
use crate::study::{Observed, Sample, Study};
use serde_json::{Map, Value, json};
use std::sync::Arc;

/// Levels with fewer values than this make the normal distribution rough.
const SMALL: usize = 6;

/// The test, the plan for it, or what to mend.
pub fn start(ask: &Ask, asked: &Asked, study: &Arc<Study>) -> Evaluation {
    let sample = match &study.observed {
        Observed::Sample(sample) => sample,
        Observed::Plan => return plan(asked, study).into(),
        Observed::Summary(_) => {
            let message = "Ranks need every single value, and the study has only sizes, means and standard deviations. Choose method = \"polynomial\".";
            return refused(ask, message).into();
        }
    };
    let test = match jonckheere_terpstra(&sample.groups) {
        Ok(test) => test,
        Err(error) => return refused(ask, refusal(&error, study)).into(),
    };
    if !asked.rearranged {
        return settled(&Laid::new(asked, study, sample, test, None)).into();
    }
    let work = match JonckheereWork::new(&sample.groups, asked.resampling.repeats, asked.resampling.seed) {
        Ok(work) => work,
        Err(error) => return refused(ask, refusal(&error, study)).into(),
    };
    let (asked, study) = (asked.clone(), study.clone());
    Evaluation::long(work, line, move |found| {
        let Observed::Sample(sample) = &study.observed else { return Outcome::mend(Vec::new()) };
        settled(&Laid::new(&asked, &study, sample, test, Some(found)))
    })
}

fn line(progress: &Progress) -> String {
    let done = number::percent((progress.done * 100.0).floor() / 100.0);
    match progress.estimate {
        Some((p, error)) => {
            let error = number::estimate(error, Precision::from_spread(error));
            format!("Working: {done} of the rearrangements; p so far {} \u{b1} {error}", number::p_value(p))
        }
        None => format!("Working: {done} of the rearrangements"),
    }
}

fn refusal(error: &NoOrderedTest, study: &Study) -> String {
    let levels = words::order(&study.levels.labels);
    format!("The order of the levels ({levels}) cannot be tested by ranks: {error}.")
}

/// Everything from which the answer is laid out.
struct Laid<'a> {
    asked: &'a Asked,
    study: &'a Study,
    sample: &'a Sample,
    test: JonckheereTerpstra,
    rearranged: Option<JonckheereByPermutation>,
    /// Means made monotone, in the direction of the trend.
    monotone: Option<MonotoneFit>,
    means: Vec<f64>,
}

impl<'a> Laid<'a> {
    fn new(
        asked: &'a Asked,
        study: &'a Study,
        sample: &'a Sample,
        test: JonckheereTerpstra,
        rearranged: Option<JonckheereByPermutation>,
    ) -> Self {
        let groups = sample.summary().groups;
        let means: Vec<f64> = groups.iter().map(|group| group.mean).collect();
        let n: Vec<f64> = groups.iter().map(|group| group.n as f64).collect();
        let falling = match asked.sides {
            Sides::Both => test.z < 0.0,
            sides => sides == Sides::Less,
        };
        let direction = if falling { Direction::Falling } else { Direction::Rising };
        let monotone = monotone(&means, &n, direction).ok();
        Self { asked, study, sample, test, rearranged, monotone, means }
    }

    /// The p-value that decides, with where it comes from.
    fn p(&self) -> f64 {
        let sides = self.asked.sides;
        self.rearranged.as_ref().map_or_else(|| self.test.p(sides), |found| found.p.on(sides))
    }

    fn source(&self) -> String {
        match (&self.rearranged, &self.test.exact) {
            (Some(found), _) => format!(
                "{} random rearrangements from seed {}, standard error {}",
                number::count(found.repeats as usize),
                self.asked.resampling.seed,
                number::estimate(self.error(found), Precision::from_spread(self.error(found)))
            ),
            (None, Some(_)) => "all rearrangements counted".to_string(),
            (None, None) => "normal distribution, variance corrected for ties".to_string(),
        }
    }

    fn error(&self, found: &JonckheereByPermutation) -> f64 {
        found.standard_error.on(self.asked.sides)
    }

    fn shown(&self) -> bool {
        self.p() <= self.asked.alpha
    }
}

fn sides(sides: Sides) -> &'static str {
    match sides {
        Sides::Both => "two-sided",
        Sides::Greater => "one-sided (rising)",
        Sides::Less => "one-sided (falling)",
    }
}

fn settled(laid: &Laid) -> Outcome {
    let mut answer = Answer::new(headline(laid))
        .with_table(test_table(laid))
        .with_table(levels_table(laid))
        .with_figure(drawing(laid))
        .with_writeup(writeup(laid));
    answer.cautions = cautions(laid);
    Outcome::settled(answer, results(laid)).with_in_force("alpha", number::plain(laid.asked.alpha))
}

fn headline(laid: &Laid) -> String {
    let (outcome, factor) = (&laid.study.outcome, &laid.study.factor);
    let p = p_statement(laid.p(), laid.asked.alpha);
    match (laid.shown(), laid.test.z > 0.0) {
        (true, true) => format!("{outcome} rises with the order of {factor} (Jonckheere-Terpstra, {p})"),
        (true, false) => format!("{outcome} falls with the order of {factor} (Jonckheere-Terpstra, {p})"),
        (false, _) => {
            format!("A trend of {outcome} with the order of {factor} is not shown (Jonckheere-Terpstra, {p})")
        }
    }
}

fn method(laid: &Laid) -> String {
    format!(
        "Jonckheere-Terpstra test of the order {}; {}; p from: {}",
        words::order(&laid.study.levels.labels),
        sides(laid.asked.sides),
        laid.source()
    )
}

fn test_table(laid: &Laid) -> Table {
    let test = &laid.test;
    let two = Precision::decimals(2);
    let mut table = Table::new(format!("{}: {}", outcome_with_unit(laid.study), method(laid)))
        .number_column("J")
        .number_column("Expected")
        .number_column("SD")
        .number_column("z")
        .number_column("p");
    table.push(Row::new([
        Cell::estimate(test.j, Precision::decimals(1)),
        Cell::estimate(test.mean, Precision::decimals(1)),
        Cell::estimate(test.variance.sqrt(), two),
        Cell::statistic(test.z),
        p_cell(laid.p(), laid.asked.alpha),
    ]));
    let mut notes = vec![
        "J: pairs of a value of an earlier and one of a later level in which the later is the larger, ties counting half. Expected and SD: if all levels had one distribution.".to_string(),
    ];
    notes.extend(left_out(laid.study));
    notes.into_iter().fold(table, Table::note)
}

/// The order in use, with the means as they are and made monotone.
fn levels_table(laid: &Laid) -> Table {
    let spreads = laid.sample.summary().groups;
    let precision =
        Precision::for_column(spreads.iter().filter_map(|group| Some(group.sd()? / (group.n as f64).sqrt())));
    let scores = !laid.asked.scores.is_empty();
    let mut table = Table::new("The order in use").text_column("Level");
    if scores {
        table = table.number_column("Score");
    }
    table = table.number_column("n").number_column("Mean").number_column("Mean, monotone");
    for (i, level) in laid.study.levels.labels.iter().enumerate() {
        let mut cells = vec![Cell::text(level.clone())];
        if scores {
            cells.push(Cell::number(number::plain(laid.asked.scores[i]), laid.asked.scores[i]));
        }
        cells.push(Cell::count(laid.test.n[i]));
        cells.push(Cell::estimate(laid.sample.origin + laid.means[i], precision));
        let fitted = laid.monotone.as_ref().map(|fit| laid.sample.origin + fit.fitted[i]);
        cells.push(fitted.map_or_else(Cell::absent, |fitted| Cell::estimate(fitted, precision)));
        table.push(Row::new(cells));
    }
    table.note("Monotone: neighbouring means that run against the trend are pooled, weighted by n (pool-adjacent-violators).")
}

/// Means at their scores, or at their places where there are none, with the monotone fit.
fn drawing(laid: &Laid) -> Figure {
    let labels = &laid.study.levels.labels;
    let places: Vec<f64> = match laid.asked.scores.is_empty() {
        true => (1..=labels.len()).map(|place| place as f64).collect(),
        false => laid.asked.scores.clone(),
    };
    let origin = laid.sample.origin;
    let points = (0..labels.len()).map(|i| TrendPoint {
        label: labels[i].clone(),
        x: places[i],
        mean: origin + laid.means[i],
        interval: None,
    });
    let fitted = laid.monotone.iter().flat_map(|fit| fit.fitted.iter().enumerate());
    let (factor, outcome) = (&laid.study.factor, &laid.study.outcome);
    figure::trend(&Trend {
        title: format!("{outcome} in the order of {factor}"),
        x_axis: match laid.asked.scores.is_empty() {
            true => format!("Place in the order of {factor}"),
            false => format!("Score of {factor}"),
        },
        y_axis: outcome_with_unit(laid.study),
        bars: "Points: means of the levels".to_string(),
        curve_words: "Line: means made monotone".to_string(),
        points: points.collect(),
        curve: fitted.map(|(i, mean)| Point { x: places[i], y: origin + mean }).collect(),
    })
}

fn writeup(laid: &Laid) -> String {
    let test = &laid.test;
    let direction = if test.z > 0.0 { "rising" } else { "falling" };
    let decided = match laid.shown() {
        true => format!("a {direction} trend is shown"),
        false => "a trend is not shown".to_string(),
    };
    format!(
        "Whether {} follows the order of {} was tested by ranks ({}; {}): J = {}, z = {}, {}; {decided}.",
        outcome_with_unit(laid.study),
        laid.study.factor,
        sizes(&laid.study.levels.labels, test.n.iter().copied()),
        method(laid),
        number::estimate(test.j, Precision::decimals(1)),
        number::statistic(test.z),
        p_statement(laid.p(), laid.asked.alpha),
    )
}

fn cautions(laid: &Laid) -> Vec<String> {
    let mut found: Vec<String> = words::unconfirmed_order(&laid.study.levels).into_iter().collect();
    let normal = laid.rearranged.is_none() && laid.test.exact.is_none();
    if normal && laid.test.n.iter().any(|n| *n < SMALL) {
        found.push(format!(
            "A level has fewer than {SMALL} values, and they are too many to be counted exactly: the normal distribution is rough there. p_values = \"rearranged\" does without it."
        ));
    }
    if normal && laid.test.tied_share > 0.5 {
        found.push(format!(
            "{} of the values share their value with another one; the variance allows for it, but the normal distribution is rough with so many ties. p_values = \"rearranged\" does without it.",
            number::percent((laid.test.tied_share * 100.0).round() / 100.0)
        ));
    }
    found.push("The test asks whether later levels tend to have larger (or smaller) values. It is no proof that every step goes the same way.".to_string());
    found
}

fn results(laid: &Laid) -> Value {
    let test = &laid.test;
    let mut object = Map::new();
    object.insert("method".into(), json!("ordered ranks"));
    object.insert("levels".into(), json!(laid.study.levels.labels));
    object.insert("sides".into(), json!(laid.asked.sides));
    let numbers = [
        ("J", test.j),
        ("mean", test.mean),
        ("variance", test.variance),
        ("z", test.z),
        ("p", laid.p()),
        ("alpha", laid.asked.alpha),
    ];
    numbers.into_iter().for_each(|(key, value)| drop(object.insert(key.into(), json_number(value))));
    object.insert("exact".into(), json!(laid.rearranged.is_none() && test.exact.is_some()));
    if let Some(found) = &laid.rearranged {
        object.insert("repeats".into(), json!(found.repeats));
        object.insert("p_error".into(), json_number(laid.error(found)));
    }
    object.insert("rejected".into(), json!(laid.shown()));
    if let Some(fit) = &laid.monotone {
        let means = fit.fitted.iter().map(|mean| json_number(laid.sample.origin + mean));
        let by_level = laid.study.levels.labels.iter().cloned().zip(means);
        object.insert("monotone_means".into(), Value::Object(by_level.collect()));
    }
    Value::Object(object)
}

fn plan(asked: &Asked, study: &Study) -> Outcome {
    let labels = &study.levels.labels;
    if labels.is_empty() {
        return Outcome::plan(Answer::new("Waiting for the study's levels"), json!({}));
    }
    let method =
        format!("Jonckheere-Terpstra test of the order {}, {}", words::order(labels), sides(asked.sides));
    let answer = Answer::new(format!("Planned: {method}; waiting for data"))
        .with_writeup(format!("Planned: {method}, at an error rate of {}.", number::percent(asked.alpha)));
    Outcome::plan(answer, json!({ "method": "ordered ranks", "levels": labels, "sides": asked.sides }))
}
