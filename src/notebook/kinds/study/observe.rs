//! What was observed: rows of a table or groups of a summary put under the study's levels, with everything that keeps
//! them from being compared said in words.

use super::design::Design;
use crate::answer::number;
use crate::notebook::ask::{At, Reader};
use crate::notebook::diagnostics::{quoted_choices, suggestion};
use crate::notebook::outcome::Groups;
use crate::study::{
    Apart, Assigned, LevelAccount, MOST_LEVELS, Observed, Sample, Study, Summary, Variances, assign,
};
use crate::table::{Column, Exclusion, Table};

/// A study with what its answer says about the rows.
pub(super) struct Observation {
    pub study: Study,
    /// `None` for a summary or a plan, which have no rows.
    pub rows: Option<Rows>,
    pub cautions: Vec<String>,
}

/// Rows of the table that the account by level leaves over.
pub(super) struct Rows {
    pub received: usize,
    pub without_level: Apart,
    pub not_listed: Apart,
    pub not_listed_levels: Vec<String>,
    pub exclusions: Vec<Exclusion>,
}

/// The study before there are data.
pub(super) fn plan(reader: &mut Reader, design: Design) -> Option<Observation> {
    let Some(labels) = design.listed() else {
        reader.problem("levels", "A study without data needs its levels. Add levels = [\"a\", \"b\"], or name the cell with the data in data.");
        return None;
    };
    let study = design.study(reader, labels, Observed::Plan);
    let cautions = remarks_on_levels(&study);
    Some(Observation { study, rows: None, cautions })
}

/// The study with the rows of a table.
pub(super) fn rows(reader: &mut Reader, design: Design, table: &Table) -> Option<Observation> {
    let outcome = column(reader, "outcome", &design.outcome, table);
    let groups = column(reader, "groups", &design.factor, table);
    let (outcome, groups) = (outcome?, groups?);
    if outcome.name == groups.name {
        let message = format!(
            "groups: \"{}\" is the outcome already. Choose the column that says which group a row belongs to.",
            groups.name
        );
        reader.problem("groups", message);
        return None;
    }
    let Some(numbers) = &outcome.numbers else {
        reader.problem("outcome", outcome.needs_numbers().unwrap_or_default());
        return None;
    };
    let listed = design.listed();
    let Ok(assigned) = assign(table, numbers, groups, listed.as_deref()) else {
        let message = format!(
            "groups: column \"{}\" has more than {MOST_LEVELS} different values. Choose the column that says which group a row belongs to, or list the levels to compare in levels.",
            groups.name
        );
        reader.problem("groups", message);
        return None;
    };
    check_account(reader, &design, &assigned);
    if !reader.problems().is_empty() {
        return None;
    }
    let Assigned { labels, mut account, sample, without_level, not_listed, not_listed_levels } = assigned;
    let mut study = design.study(reader, labels, Observed::Sample(sample));
    score(&mut account, &study);
    study.account = account;
    let mut cautions = remarks_on_levels(&study);
    cautions.extend(remarks_on_spread(reader, &study));
    let exclusions = table.exclusions.clone();
    let rows = Rows { received: table.rows, without_level, not_listed, not_listed_levels, exclusions };
    cautions.extend(remark_on_not_listed(&rows));
    Some(Observation { study, rows: Some(rows), cautions })
}

/// The study with groups known by size, mean and standard deviation.
pub(super) fn groups(reader: &mut Reader, design: Design, groups: &Groups) -> Option<Observation> {
    let labels = design.listed().unwrap_or_else(|| groups.levels.clone());
    let mut summaries = Vec::with_capacity(labels.len());
    let mut account = Vec::with_capacity(labels.len());
    for (at, level) in labels.iter().enumerate() {
        let Some(found) = groups.levels.iter().position(|known| known == level) else {
            let known = || groups.levels.iter().map(String::as_str);
            let have = quoted_choices(known()).replace(" or ", " and ");
            let message = format!(
                "levels: no group is called \"{level}\"; there are {have}.{}",
                suggestion(level, known())
            );
            problem_at_level(reader, &design.levels, at, message);
            continue;
        };
        let group = groups.summary.groups[found];
        summaries.push(group);
        account.push(LevelAccount {
            level: level.clone(),
            score: None,
            received: group.n,
            n: group.n,
            missing: 0,
            excluded: 0,
        });
    }
    if labels.len() < 2 {
        reader.problem("data", one_level(&labels));
    }
    if !reader.problems().is_empty() {
        return None;
    }
    let left_out: Vec<&str> =
        groups.levels.iter().filter(|level| !labels.contains(level)).map(String::as_str).collect();
    let summary = Summary { origin: groups.summary.origin, groups: summaries };
    let mut study = design.study(reader, labels, Observed::Summary(summary));
    score(&mut account, &study);
    study.account = account;
    let mut cautions = remarks_on_levels(&study);
    cautions.extend(remarks_on_spread(reader, &study));
    if !left_out.is_empty() {
        let names = quoted_choices(left_out).replace(" or ", " and ");
        cautions.push(format!("Not among the levels and so not analysed: {names}."));
    }
    Some(Observation { study, rows: None, cautions })
}

fn column<'a>(reader: &mut Reader, field: &str, name: &str, table: &'a Table) -> Option<&'a Column> {
    let found = table.column(name);
    if found.is_none() {
        let known = || table.columns.iter().map(|column| column.name.as_str()).take(20);
        let message = format!(
            "{field}: the table has no column \"{name}\"; it has {}.{}",
            quoted_choices(known()).replace(" or ", " and "),
            suggestion(name, table.columns.iter().map(|column| column.name.as_str()))
        );
        reader.problem(field, message);
    }
    found
}

/// Notes a problem with the level at a place of the list, or with the grouping variable where there is no list.
fn problem_at_level(reader: &mut Reader, listed: &Option<Vec<At<String>>>, at: usize, message: String) {
    match listed.as_ref().and_then(|levels| levels.get(at)) {
        Some(level) => reader.problem_at("levels", level.span.clone(), message),
        None => reader.problem("groups", message),
    }
}

fn one_level(labels: &[String]) -> String {
    match labels.first() {
        Some(only) => format!(
            "All rows have the level \"{only}\"; a comparison needs at least 2 levels. Choose another column for groups, or add data."
        ),
        None => "No row has a level to analyse. Choose another column for groups, or look at the exclusions."
            .to_owned(),
    }
}

fn check_account(reader: &mut Reader, design: &Design, assigned: &Assigned) {
    for (at, level) in assigned.account.iter().enumerate() {
        let name = &level.level;
        if level.received == 0 {
            let near = suggestion(name, assigned.not_listed_levels.iter().map(String::as_str));
            let message = format!(
                "levels: no row has the level \"{name}\" in column \"{}\".{near} Write it as in the table, or take it out of levels.",
                design.factor
            );
            problem_at_level(reader, &design.levels, at, message);
        } else if level.n == 0 {
            let message = format!(
                "Level \"{name}\" has no value to analyse: {} received, {} missing, {} excluded. Add data, or leave the level out of levels.",
                in_rows(level.received),
                level.missing,
                level.excluded
            );
            problem_at_level(reader, &design.levels, at, message);
        }
    }
    if assigned.labels.len() < 2 {
        reader.problem("groups", one_level(&assigned.labels));
    }
}

pub(super) fn in_rows(n: usize) -> String {
    if n == 1 { "1 row".to_owned() } else { format!("{} rows", number::count(n)) }
}

fn score(account: &mut [LevelAccount], study: &Study) {
    if let Some(scores) = &study.levels.scores {
        for (level, score) in account.iter_mut().zip(scores) {
            level.score = Some(*score);
        }
    }
}

/// The order of the levels where nobody has stated it, and scores that their names may contain.
fn remarks_on_levels(study: &Study) -> Vec<String> {
    let levels = &study.levels;
    let mut remarks = Vec::new();
    if levels.order_of_appearance {
        remarks.push(format!(
            "The levels stand in the order in which they first appear. To confirm or change it, fill in the levels, or set levels = {}.",
            super::design::toml_list(&levels.labels)
        ));
    }
    if levels.scores.is_none() {
        remarks.extend(remark_on_scores(&levels.labels));
    }
    let expected = 1.0 - study.alpha;
    if (study.confidence - expected).abs() > 1e-12 {
        remarks.push(format!(
            "Intervals have a confidence of {}, tests an error rate of {}: an interval and a test of the same difference may disagree.",
            number::percent(study.confidence),
            number::percent(study.alpha)
        ));
    }
    remarks
}

/// Scores read off the levels' names, as an offer. One level without a number counts as 0 and is named.
fn remark_on_scores(labels: &[String]) -> Option<String> {
    let numbers: Vec<Option<f64>> = labels.iter().map(|label| only_number(label)).collect();
    let without: Vec<usize> = (0..labels.len()).filter(|&i| numbers[i].is_none()).collect();
    if without.len() > 1 || labels.len() - without.len() < 2 {
        return None;
    }
    let mut scored: Vec<(f64, &String)> =
        numbers.iter().zip(labels).map(|(number, label)| (number.unwrap_or(0.0), label)).collect();
    let in_order = scored.windows(2).all(|pair| pair[0].0 < pair[1].0);
    scored.sort_by(|a, b| a.0.total_cmp(&b.0));
    if scored.windows(2).any(|pair| pair[0].0 >= pair[1].0) {
        return None;
    }
    let scores: Vec<String> = scored.iter().map(|(score, _)| score.to_string()).collect();
    let mut offer = format!("scores = [{}]", scores.join(", "));
    if !in_order {
        let ordered: Vec<String> = scored.iter().map(|(_, label)| (*label).clone()).collect();
        offer = format!("levels = {} and {offer}", super::design::toml_list(&ordered));
    }
    let zero = without.first().map(|&i| format!(" (0 is a guess for \"{}\")", labels[i])).unwrap_or_default();
    Some(format!("The levels' names contain numbers. For a trend over them, set {offer}{zero}."))
}

/// The number in a name that contains exactly one.
fn only_number(label: &str) -> Option<f64> {
    let mut runs = label
        .split(|c: char| !(c.is_ascii_digit() || c == '.'))
        .filter(|run| run.contains(|c: char| c.is_ascii_digit()));
    let run = runs.next()?.trim_matches('.');
    if runs.next().is_some() {
        return None;
    }
    let value: f64 = run.parse().ok()?;
    let negative =
        label.trim_start().strip_prefix(['-', '\u{2212}']).is_some_and(|rest| rest.starts_with(run));
    Some(if negative { -value } else { value }).filter(|value| value.is_finite())
}

/// What single observations and a lack of spread leave possible. Where nothing is left, a problem is noted.
fn remarks_on_spread(reader: &mut Reader, study: &Study) -> Vec<String> {
    let Some(summary) = study.summary() else { return Vec::new() };
    if let Observed::Sample(sample) = &study.observed
        && let Some(value) = the_only_value(sample)
    {
        let (outcome, value) = (&study.outcome, number::plain(value));
        let message = format!(
            "All values of \"{outcome}\" are {value}, so there is nothing to compare. Choose another outcome, or look at the data."
        );
        reader.problem("outcome", message);
        return Vec::new();
    }
    if summary.groups.iter().all(|group| group.n < 2) {
        reader.problem("groups", "Every level has 1 observation, so there is no spread inside a level to compare with. Add data, or choose another column for groups.");
        return Vec::new();
    }
    if let Some(message) = out_of_reach(study, &summary) {
        reader.problem("outcome", message);
        return Vec::new();
    }
    let constant = |i: usize| summary.groups[i].variance == Some(0.0);
    if (0..summary.groups.len()).all(|i| constant(i) || summary.groups[i].n < 2) {
        return vec!["Inside every level all values are equal: there is no spread to test differences of means against.".to_owned()];
    }
    let unequal = study.variances == Variances::Unequal;
    let remarks = study.levels.labels.iter().enumerate().filter_map(|(i, level)| match summary.groups[i].n {
        1 if unequal => Some(format!("Level \"{level}\" has 1 observation; unequal variances need at least 2. Exclude it with a reason, or add data.")),
        1 => Some(format!("Level \"{level}\" has 1 observation: its spread is not seen but taken to be that of the other levels.")),
        n if constant(i) && unequal => Some(format!("Level \"{level}\": all its {n} values are equal, so it has no variance of its own, which unequal variances need.")),
        n if constant(i) => Some(format!("Level \"{level}\": all its {n} values are equal.")),
        _ => None,
    });
    remarks.collect()
}

/// The value that all observations have, where they have one.
fn the_only_value(sample: &Sample) -> Option<f64> {
    let mut values = sample.groups.iter().flatten();
    let first = *values.next()?;
    values.all(|value| *value == first).then_some(sample.origin + first)
}

/// What to say where squares of the values are beyond the range of numbers, at either end.
fn out_of_reach(study: &Study, summary: &Summary) -> Option<String> {
    let variances = summary.groups.iter().filter_map(|group| group.variance);
    let sums = [summary.grand_mean(), summary.ss_between(), summary.pooled().map_or(0.0, |pooled| pooled.ss)];
    let too_large = variances.clone().chain(sums).any(|value| !value.is_finite());
    let too_close = match &study.observed {
        Observed::Sample(sample) => sample.groups.iter().zip(&summary.groups).any(|(values, group)| {
            values.iter().any(|value| *value != values[0]) && !group.variance.is_some_and(f64::is_normal)
        }),
        _ => false,
    };
    let outcome = &study.outcome;
    if too_large {
        return Some(format!(
            "The values of \"{outcome}\" are too large to be squared. Change their unit, for instance by derive in the data cell."
        ));
    }
    too_close.then(|| format!("The values of \"{outcome}\" differ by too little to be squared. Change their unit, for instance by derive in the data cell."))
}

fn remark_on_not_listed(rows: &Rows) -> Option<String> {
    let names: Vec<&str> = rows.not_listed_levels.iter().map(String::as_str).collect();
    let left = rows.not_listed.received - rows.not_listed.excluded;
    if left == 0 {
        return None;
    }
    let names = quoted_choices(names).replace(" or ", " and ");
    Some(format!("Left out because their level is not listed: {} ({names}).", in_rows(left)))
}
