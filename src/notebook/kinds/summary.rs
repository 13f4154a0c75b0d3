//! Groups known only by size, mean and standard deviation.

use crate::answer::{Answer, Cell, Row, Table, number};
use crate::notebook::ask::{Ask, At, Reader};
use crate::notebook::fields::{Field, Holds, KindTable, Part, Piece};
use crate::notebook::outcome::{Groups, Outcome, Value};
use crate::numerics::decimal::{Decimal, DecimalMark, NotADecimal, common_origin};
use crate::study::{GroupSummary, Summary};
use serde_json::{Value as Json, json};
use std::sync::Arc;

const PARTS: &[Part] = &[
    Part { name: "level", number: false },
    Part { name: "n", number: true },
    Part { name: "mean", number: true },
    Part { name: "sd", number: true },
];

pub const TABLE: KindTable = KindTable {
    purpose: "Type sizes, means and standard deviations, for instance from a publication",
    fields: &[Field::new(
        "groups",
        Holds::Records(PARTS),
        "groups",
        "A line \"level; n; mean; sd\" for each group",
    )
    .required()
    .such_as("control; 24; 21.4; 6.2")],
    sentence: &[
        Piece::Words("Groups known by size, mean and standard deviation (level; n; mean; sd):"),
        Piece::Blank("groups"),
    ],
    starts_with: "groups = []\n",
};

/// The groups as typed, checked, for a study to read.
pub fn evaluate(ask: &Ask) -> Outcome {
    let mut reader = ask.reader();
    let records = reader.records("groups").unwrap_or_default();
    let mut groups: Vec<Group> = Vec::with_capacity(records.len());
    for record in &records {
        let Some(group) = group(&mut reader, record) else { continue };
        if groups.iter().any(|other| other.level == group.level) {
            let message =
                format!("groups: the level \"{}\" is there twice. Give every level one line.", group.level);
            reader.problem_at("groups", record.span.clone(), message);
        }
        groups.push(group);
    }
    if records.is_empty() && reader.problems().is_empty() {
        reader.problem(
            "groups",
            "groups: the list is empty. Add { level = ..., n = ..., mean = ..., sd = ... } for each group.",
        );
    }
    if let Err(problems) = reader.finish(()) {
        return Outcome::mend(problems);
    }
    let value = Groups {
        levels: groups.iter().map(|group| group.level.clone()).collect(),
        summary: summary(&groups),
    };
    Outcome::settled(answer(&groups), results(&groups)).with_value(Value::Groups(Arc::new(value)))
}

/// One group as typed.
struct Group {
    level: String,
    n: usize,
    mean: Decimal,
    sd: f64,
    /// The numbers as they were written, for the answer.
    written: [String; 2],
}

fn group(reader: &mut Reader, record: &At<Vec<String>>) -> Option<Group> {
    let [level, n, mean, sd] = record.value.as_slice() else { return None };
    let mut complain = |message: String| {
        reader.problem_at("groups", record.span.clone(), message);
        None
    };
    if level.is_empty() {
        return complain("groups: a level has no name. Give every level one.".to_owned());
    }
    let place = format!("Level \"{level}\"");
    let size = typed(n).ok().map(Decimal::to_f64).filter(|n| (1.0..=1e9).contains(n) && n.fract() == 0.0);
    let Some(size) = size else {
        return complain(format!("{place}: n is {n}, but a whole number from 1 up is needed."));
    };
    let centre = match typed(mean) {
        Ok(centre) => centre,
        Err(why) => {
            return complain(format!(
                "{place}: the mean \"{mean}\" is {why}. Write a number with a decimal point."
            ));
        }
    };
    let spread = match typed(sd) {
        Ok(spread) => spread.to_f64(),
        Err(why) => {
            return complain(format!(
                "{place}: the sd \"{sd}\" is {why}. Write a number with a decimal point."
            ));
        }
    };
    if size == 1.0 && spread != 0.0 {
        return complain(format!(
            "{place} has 1 observation and so no standard deviation. Write sd = 0 for it."
        ));
    }
    // 0 is what equal values have; the study says what that means for its methods.
    if spread < 0.0 {
        return complain(format!("{place}: sd is {sd}, but a number from 0 up is needed."));
    }
    if spread > 0.0 && !(spread * spread).is_normal() {
        return complain(format!(
            "{place}: sd is {sd}, which cannot be squared. Change the unit of the outcome."
        ));
    }
    Some(Group {
        level: level.clone(),
        n: size as usize,
        mean: centre,
        sd: spread,
        written: [mean.clone(), sd.clone()],
    })
}

/// A number as the cell's text writes it: with a decimal point; underscores between digits are TOML's.
fn typed(written: &str) -> Result<Decimal, NotADecimal> {
    Decimal::parse(&written.replace('_', ""), DecimalMark::Point)
}

fn summary(groups: &[Group]) -> Summary {
    let means = || groups.iter().map(|group| group.mean);
    let low = means().min_by(|a, b| a.to_f64().total_cmp(&b.to_f64())).unwrap_or(Decimal::ZERO);
    let high = means().max_by(|a, b| a.to_f64().total_cmp(&b.to_f64())).unwrap_or(Decimal::ZERO);
    let origin = common_origin(low, high);
    let groups = groups.iter().map(|group| GroupSummary {
        n: group.n,
        mean: group.mean.minus(origin),
        variance: (group.n > 1).then_some(group.sd * group.sd),
    });
    Summary { origin: origin.to_f64(), groups: groups.collect() }
}

fn answer(groups: &[Group]) -> Answer {
    let mut table = Table::new("Groups as typed: size, mean and standard deviation")
        .text_column("Level")
        .number_column("n")
        .number_column("Mean")
        .number_column("SD");
    for group in groups {
        let [mean, sd] = &group.written;
        let spread = if group.n > 1 { Cell::number(shown(sd), group.sd) } else { Cell::absent() };
        table.push(Row::new([
            Cell::text(&group.level),
            Cell::count(group.n),
            Cell::number(shown(mean), group.mean.to_f64()),
            spread,
        ]));
    }
    let total: usize = groups.iter().map(|group| group.n).sum();
    let word = if groups.len() == 1 { "group" } else { "groups" };
    let headline = format!(
        "{} {word} with {} observations, known by size, mean and SD.",
        groups.len(),
        number::count(total)
    );
    Answer::new(headline).with_table(table)
}

fn shown(written: &str) -> String {
    written.replace('_', "").replace('-', &number::MINUS.to_string())
}

fn results(groups: &[Group]) -> Json {
    let groups = groups.iter().map(|group| {
        let mut entry = json!({ "level": group.level, "n": group.n, "mean": group.mean.to_f64() });
        if group.n > 1 {
            entry["sd"] = json!(group.sd);
        }
        entry
    });
    json!({ "groups": groups.collect::<Vec<_>>() })
}
