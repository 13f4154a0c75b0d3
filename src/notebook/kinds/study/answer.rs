//! How a study is shown: its levels, where every row went, what is assumed, and the sentence for the paper.

use super::observe::{Observation, Rows, in_rows};
use crate::answer::{Answer, Cell, Row, Table, number};
use crate::study::{Apart, Better, Levels, Observed, Study, Variances};
use serde_json::{Map, Value as Json, json};

/// The study in words and tables.
pub(super) fn answer(observation: &Observation) -> Answer {
    let Observation { study, rows, cautions } = observation;
    let table = match study.observed {
        Observed::Plan => plan_table(study),
        _ => account_table(study, rows.as_ref()),
    };
    let mut answer = Answer::new(headline(study)).with_table(table).with_text(assumptions(study));
    if let Some(writeup) = writeup(study, rows.as_ref()) {
        answer = answer.with_writeup(writeup);
    }
    answer.cautions.clone_from(cautions);
    answer
}

/// What the sentence shows while no levels are listed.
pub(super) fn levels_in_words(study: &Study) -> String {
    let Levels { labels, order_of_appearance, .. } = &study.levels;
    let list = labels.join(", ");
    if *order_of_appearance { format!("{list} (in order of first appearance)") } else { list }
}

fn analysed(study: &Study) -> usize {
    study.account.iter().map(|level| level.n).sum()
}

fn headline(study: &Study) -> String {
    let Study { outcome, factor, levels, .. } = study;
    let compared = format!("{outcome} over {} levels of {factor}", levels.count());
    match &study.observed {
        Observed::Plan => format!("A plan without data so far: {compared}."),
        Observed::Summary(_) => {
            format!(
                "{compared}: {} observations, known by size, mean and SD.",
                number::count(analysed(study))
            )
        }
        Observed::Sample(_) => {
            let received: usize = study.account.iter().map(|level| level.received).sum();
            let n = analysed(study);
            if n == received {
                format!("{compared}: {} analysed.", in_rows(n))
            } else {
                format!("{compared}: {} of {} analysed.", number::count(n), in_rows(received))
            }
        }
    }
}

fn level_cell(levels: &Levels, at: usize) -> Cell {
    let label = &levels.labels[at];
    Cell::text(if levels.control == Some(at) { format!("{label} (control)") } else { label.clone() })
}

fn score_cell(levels: &Levels, at: usize) -> Option<Cell> {
    let score = *levels.scores.as_ref()?.get(at)?;
    Some(Cell::number(number::plain(score), score))
}

fn plan_table(study: &Study) -> Table {
    let mut table = Table::new(format!("Levels of {}, in order", study.factor)).text_column("Level");
    if study.levels.scores.is_some() {
        table = table.number_column("Score");
    }
    for at in 0..study.levels.count() {
        let cells = std::iter::once(level_cell(&study.levels, at)).chain(score_cell(&study.levels, at));
        table.push(Row::new(cells));
    }
    table
}

fn account_table(study: &Study, rows: Option<&Rows>) -> Table {
    let scored = study.levels.scores.is_some();
    let mut table =
        Table::new(format!("Rows by level of {}: received = analysed + missing + excluded", study.factor))
            .text_column("Level");
    if scored {
        table = table.number_column("Score");
    }
    for heading in ["Received", "Analysed", "Missing", "Excluded"] {
        table = table.number_column(heading);
    }
    let line = |name: Cell, score: Option<Cell>, counts: [usize; 4]| {
        let score = scored.then(|| score.unwrap_or_default());
        Row::new(std::iter::once(name).chain(score).chain(counts.map(Cell::count)))
    };
    let mut total = [0; 4];
    let mut add = |counts: [usize; 4]| {
        for (sum, count) in total.iter_mut().zip(counts) {
            *sum += count;
        }
        counts
    };
    for (at, level) in study.account.iter().enumerate() {
        let counts = add([level.received, level.n, level.missing, level.excluded]);
        table.push(line(level_cell(&study.levels, at), score_cell(&study.levels, at), counts));
    }
    if let Some(rows) = rows {
        let Apart { received, excluded } = rows.without_level;
        if received > 0 {
            let counts = add([received, 0, received - excluded, excluded]);
            table.push(line(Cell::text("level missing"), None, counts).quiet());
        }
        let Apart { received, .. } = rows.not_listed;
        if received > 0 {
            // Listing the levels is what takes these rows out.
            let counts = add([received, 0, 0, received]);
            table.push(line(Cell::text("level not listed"), None, counts).quiet());
        }
    }
    table.push(line(Cell::text("all"), None, total).total());
    for exclusion in rows.iter().flat_map(|rows| &rows.exclusions) {
        table = table.note(format!(
            "Excluded: {} with {} ({}).",
            in_rows(exclusion.rows),
            exclusion.condition,
            exclusion.reason
        ));
    }
    if rows.is_some_and(|rows| rows.not_listed.received > 0) {
        table = table.note("Rows of levels that are not listed count as excluded.");
    }
    table
}

fn assumptions(study: &Study) -> String {
    let variances = match study.variances {
        Variances::Equal => "Variances are taken as equal, one pooled over all levels",
        Variances::Unequal => "Variances are taken as possibly unequal, each level with its own",
    };
    let mut text = format!(
        "{variances}; error rate {}, confidence {}.",
        number::percent(study.alpha),
        number::percent(study.confidence)
    );
    match study.better {
        Some(Better::Higher) => text.push_str(" Higher is better."),
        Some(Better::Lower) => text.push_str(" Lower is better."),
        None => {}
    }
    text
}

/// What was compared and where the rows went, for the paper.
fn writeup(study: &Study, rows: Option<&Rows>) -> Option<String> {
    if study.observed == Observed::Plan {
        return None;
    }
    let groups: Vec<String> =
        study.account.iter().map(|level| format!("{} (n = {})", level.level, level.n)).collect();
    let unit = study.unit.as_ref().map(|unit| format!(" ({unit})")).unwrap_or_default();
    let mut text = format!(
        "{}{unit} was compared over {} levels of {}: {}.",
        study.outcome,
        study.levels.count(),
        study.factor,
        groups.join(", ")
    );
    let Some(rows) = rows else { return Some(text) };
    let missing: usize = study.account.iter().map(|level| level.missing).sum();
    let mut left = Vec::new();
    if missing > 0 {
        left.push(format!("{} without a value of {}", number::count(missing), study.outcome));
    }
    let without = rows.without_level.received - rows.without_level.excluded;
    if without > 0 {
        left.push(format!("{} without a level", number::count(without)));
    }
    let other = rows.not_listed.received - rows.not_listed.excluded;
    if other > 0 {
        left.push(format!("{} of other levels", number::count(other)));
    }
    for exclusion in rows.exclusions.iter().filter(|exclusion| exclusion.rows > 0) {
        left.push(format!("{} excluded ({})", number::count(exclusion.rows), exclusion.reason));
    }
    if !left.is_empty() {
        text.push_str(&format!(
            " Of {} received, these were not analysed: {}.",
            in_rows(rows.received),
            left.join(", ")
        ));
    }
    Some(text)
}

/// Full-precision results.
pub(super) fn results(observation: &Observation) -> Json {
    let Observation { study, rows, .. } = observation;
    let mut results = Map::new();
    results.insert("levels".into(), levels(study));
    results.insert("outcome".into(), json!(study.outcome));
    results.insert("groups".into(), json!(study.factor));
    results.insert("order_of_appearance".into(), json!(study.levels.order_of_appearance));
    if let Some(control) = study.levels.control {
        results.insert("control".into(), json!(study.levels.labels[control]));
    }
    results.insert("variances".into(), json!(study.variances));
    results.insert("alpha".into(), json!(study.alpha));
    results.insert("confidence".into(), json!(study.confidence));
    if let Some(unit) = &study.unit {
        results.insert("unit".into(), json!(unit));
    }
    if let Some(better) = study.better {
        results.insert("better".into(), json!(better));
    }
    if let Some(rows) = rows {
        let apart = |apart: Apart| json!({ "received": apart.received, "excluded": apart.excluded });
        results.insert("rows".into(), json!(rows.received));
        results.insert("without_level".into(), apart(rows.without_level));
        results.insert("not_listed".into(), apart(rows.not_listed));
        results["not_listed"]["levels"] = json!(rows.not_listed_levels);
        let reasons = rows.exclusions.iter().map(
            |exclusion| json!({ "where": exclusion.condition, "reason": exclusion.reason, "rows": exclusion.rows }),
        );
        results.insert("exclusions".into(), reasons.collect());
    }
    Json::Object(results)
}

fn levels(study: &Study) -> Json {
    if !study.account.is_empty() {
        return json!(study.account);
    }
    let scores = study.levels.scores.as_deref().unwrap_or_default();
    let levels = study.levels.labels.iter().enumerate().map(|(at, label)| match scores.get(at) {
        Some(score) => json!({ "level": label, "score": score }),
        None => json!({ "level": label }),
    });
    levels.collect()
}
