//! The comparisons of the family that an ask chooses.

use crate::methods::contrasts::{Contrast, NoContrast, Set, polynomial_set, ready_set};
use crate::methods::multiplicity::Family;
use crate::notebook::ask::{At, Reader, finite};
use crate::notebook::diagnostics::quoted_choices;
use crate::study::Study;
use std::ops::Range;
use toml_edit::Value;

/// The comparisons of the family.
pub struct Members {
    pub family: Family,
    pub contrasts: Vec<Contrast>,
    pub given: Option<Vec<(String, f64)>>,
}

/// The family's members; `None` where it cannot be said, which has been noted.
pub fn members(reader: &mut Reader, family_name: &str, study: Option<&Study>) -> Option<Members> {
    if family_name == "given p-values" {
        let given = given(reader)?;
        return Some(Members { family: Family::Given, contrasts: Vec::new(), given: Some(given) });
    }
    let Some(study) = study else {
        // A name that leads nowhere is the graph's to say.
        if !reader.ask().given("study") {
            reader
                .problem("study", "The field \"study\" is missing. Add study = the name of the study cell.");
        }
        return None;
    };
    let labels = &study.levels.labels;
    let set = match family_name {
        "each against control" => Set::AgainstControl(control(reader, study)?),
        "neighbours" => Set::Neighbours,
        "each against the rest" => Set::AgainstRest,
        "each against the earlier" => Set::AgainstEarlier,
        "polynomial" => return polynomial(reader, study),
        "contrasts" => {
            let contrasts = contrasts(reader, study)?;
            return Some(Members { family: Family::Contrasts, contrasts, given: None });
        }
        _ => Set::AllPairs,
    };
    Some(Members { family: Family::Set(set), contrasts: ready_set(set, labels), given: None })
}

/// Linear, quadratic and so on, on the study's scores; without scores on the levels' places.
fn polynomial(reader: &mut Reader, study: &Study) -> Option<Members> {
    let family = Family::Set(Set::Polynomial);
    let labels = &study.levels.labels;
    let contrasts = match &study.levels.scores {
        None => ready_set(Set::Polynomial, labels),
        Some(scores) => match polynomial_set(scores, labels) {
            Ok(contrasts) => contrasts,
            Err(error) => {
                let message =
                    format!("Polynomial contrasts cannot be made from the study's scores: {error}.");
                reader.problem("family", message);
                return None;
            }
        },
    };
    Some(Members { family, contrasts, given: None })
}

fn control(reader: &mut Reader, study: &Study) -> Option<usize> {
    if study.levels.control.is_none() {
        let levels = quoted_choices(study.levels.labels.iter().map(String::as_str));
        let field = if reader.ask().given("family") { "family" } else { "study" };
        let choose = if levels.is_empty() { String::new() } else { format!(": one of {levels}") };
        let message = format!(
            "\"each against control\" needs a control, and the study names none. Set control in the study{choose}."
        );
        reader.problem(field, message);
    }
    study.levels.control
}

fn given(reader: &mut Reader) -> Option<Vec<(String, f64)>> {
    if !reader.ask().given("given") {
        reader.problem(
            "family",
            "\"given p-values\" needs the p-values. Add given = { \"first\" = 0.012, \"second\" = 0.04 }.",
        );
        return None;
    }
    let known = reader.problems().len();
    let entries = reader.named_numbers("given")?;
    if reader.problems().len() > known {
        return None;
    }
    if entries.is_empty() {
        reader.problem("given", "No p-value is given. Write a name and a p-value for each comparison.");
        return None;
    }
    let mut fine = !twice(reader, "given", entries.iter().map(|(name, _)| name));
    for (name, p) in &entries {
        if !(0.0..=1.0).contains(p) {
            let message = format!("\"{}\" has the p-value {p}; a p-value is from 0 to 1.", name.value);
            reader.problem_at("given", name.span.clone(), message);
            fine = false;
        }
    }
    fine.then(|| entries.into_iter().map(|(name, p)| (name.value, p)).collect())
}

fn contrasts(reader: &mut Reader, study: &Study) -> Option<Vec<Contrast>> {
    if !reader.ask().given("contrasts") {
        let example = example(&study.levels.labels);
        let message = format!(
            "The family \"contrasts\" needs them. Write a line \"first: {example}\" in the blank, or add contrasts = {{ first = {} }}.",
            Value::from(example.as_str())
        );
        reader.problem("family", message);
        return None;
    }
    if study.levels.labels.is_empty() {
        reader.problem("study", "The study does not say its levels yet, so contrasts of them cannot be read. Add levels to the study.");
        return None;
    }
    let entries = reader.entries("contrasts")?;
    if entries.is_empty() {
        reader.problem("contrasts", "No contrast is written. Write a name and an expression for each.");
        return None;
    }
    if twice(reader, "contrasts", entries.iter().map(|(name, _)| name)) {
        return None;
    }
    let read: Vec<Option<Contrast>> =
        entries.iter().map(|(name, value)| contrast(reader, name, value, &study.levels.labels)).collect();
    read.into_iter().collect()
}

/// Whether two of the names are the same without the spaces around them, which is noted.
fn twice<'n>(reader: &mut Reader, field: &str, names: impl Iterator<Item = &'n At<String>>) -> bool {
    let mut known: Vec<&str> = Vec::new();
    for name in names {
        let bare = name.value.trim();
        if known.contains(&bare) {
            let message = format!(
                "{field}: two have the name \"{bare}\" once the spaces around it are left out. Give each a name of its own."
            );
            reader.problem_at(field, name.span.clone(), message);
            return true;
        }
        known.push(bare);
    }
    false
}

fn example(labels: &[String]) -> String {
    match labels {
        [first, second, ..] => format!("{} - {}", in_expression(second), in_expression(first)),
        _ => "B - A".to_string(),
    }
}

/// A level's name as an expression takes it: in single quotes where it could be misread.
fn in_expression(level: &str) -> String {
    match level.contains(['+', '-', '\u{2212}', '*', '/', '(', ')', '\'']) {
        true => format!("'{}'", level.replace('\'', "''")),
        false => level.to_string(),
    }
}

/// One contrast: an expression, a table of coefficients by level, or a list of coefficients in the levels' order.
fn contrast(reader: &mut Reader, name: &At<String>, value: &Value, levels: &[String]) -> Option<Contrast> {
    let span = value.span().unwrap_or_else(|| name.span.clone());
    let made = match value {
        Value::String(text) => {
            let inside = inside_quotes(&span, text.value());
            Contrast::from_expression(&name.value, text.value(), levels).map_err(|error| {
                let place = match (error.span(), inside) {
                    (Some(part), Some(start)) => start + part.start..start + part.end.max(part.start + 1),
                    _ => span.clone(),
                };
                (place, error.to_string())
            })
        }
        Value::InlineTable(table) => {
            let numbers = table.iter().map(|(level, value)| Some((level.to_string(), finite(value)?)));
            match numbers.collect::<Option<Vec<_>>>() {
                Some(table) => {
                    Contrast::from_table(&name.value, &table, levels).map_err(|error| said(error, &span))
                }
                None => Err((span.clone(), not_numbers(&name.value))),
            }
        }
        Value::Array(array) => match array.iter().map(finite).collect::<Option<Vec<_>>>() {
            Some(list) if list.len() != levels.len() => {
                let (found, needed) = (list.len(), levels.len());
                let message = format!(
                    "Contrast \"{}\": {found} coefficients for {needed} levels. Write one for each level, in their order.",
                    name.value
                );
                Err((span.clone(), message))
            }
            Some(list) => Contrast::new(&name.value, list, levels).map_err(|error| said(error, &span)),
            None => Err((span.clone(), not_numbers(&name.value))),
        },
        _ => Err((
            span.clone(),
            format!(
                "Contrast \"{}\": write an expression in quotes, such as \"{}\".",
                name.value,
                example(levels)
            ),
        )),
    };
    made.map_err(|(place, message)| reader.problem_at("contrasts", place, message)).ok()
}

fn said(error: NoContrast, span: &Range<usize>) -> (Range<usize>, String) {
    (span.clone(), error.to_string())
}

fn not_numbers(name: &str) -> String {
    format!("Contrast \"{name}\": every coefficient must be a finite number.")
}

/// Where the text inside plain quotes starts; `None` where escapes or long quotes shift what is inside.
fn inside_quotes(span: &Range<usize>, text: &str) -> Option<usize> {
    (span.len() == text.len() + 2).then_some(span.start + 1)
}
