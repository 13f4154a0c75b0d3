//! Reads a comparisons ask against the study that it names.

use crate::methods::contrasts::{Contrast, NoContrast, Set, ready_set};
use crate::methods::multiplicity::{Adjust, Family, Sides, default_adjust, suitable};
use crate::notebook::ask::{Ask, At, Reader, finite};
use crate::notebook::diagnostics::{Diagnostic, quoted_choices};
use crate::study::{Study, Variances};
use std::ops::Range;
use toml_edit::Value;

/// The error rate where neither the cell nor a study says one.
const ALPHA: f64 = 0.05;

/// A comparisons ask that can be answered.
#[derive(Debug, Clone)]
pub struct Asked {
    pub family: Family,
    /// The family as the ask chooses it.
    pub family_name: &'static str,
    pub contrasts: Vec<Contrast>,
    /// Named p-values; `Some` exactly when the family is given p-values.
    pub given: Option<Vec<(String, f64)>>,
    pub adjust: Adjust,
    pub also: Vec<Adjust>,
    pub sides: Sides,
    pub alpha: f64,
    /// Confidence of the intervals.
    pub confidence: f64,
    /// Fields that are written but that this family does not use.
    pub unused: Vec<&'static str>,
}

impl Asked {
    /// The ask, with every default filled in.
    ///
    /// # Errors
    /// What must be mended.
    pub fn of(ask: &Ask, study: Option<&Study>) -> Result<Self, Vec<Diagnostic>> {
        let mut reader = ask.reader();
        let family_name = family_name(&mut reader);
        let sides = match reader.choice("sides") {
            Some("greater") => Sides::Greater,
            Some("less") => Sides::Less,
            _ => Sides::Both,
        };
        let alpha = reader.number("alpha").or(study.map(|study| study.alpha)).unwrap_or(ALPHA);
        let confidence = match study {
            // A confidence that the study sets apart from its error rate is meant; else intervals agree with decisions.
            Some(study) if (study.confidence - (1.0 - study.alpha)).abs() > 1e-12 => study.confidence,
            _ => 1.0 - alpha,
        };
        let members = members(&mut reader, family_name, study);
        let family = members.as_ref().map_or(Family::Given, |members| members.family);
        let variances = study.map_or(Variances::Equal, |study| study.variances);
        let adjust = adjust(&mut reader, family, variances, sides, members.is_some());
        let also = also(&mut reader, family, variances, sides, adjust);
        let unused = unused(ask, family_name, family);
        let members = members.unwrap_or(Members { family, contrasts: Vec::new(), given: None });
        let (contrasts, given) = (members.contrasts, members.given);
        reader.finish(Self {
            family,
            family_name,
            contrasts,
            given,
            adjust,
            also,
            sides,
            alpha,
            confidence,
            unused,
        })
    }
}

fn family_name(reader: &mut Reader) -> &'static str {
    let ask = reader.ask();
    if !ask.given("family") && (ask.given("contrasts") || ask.given("given")) {
        let (field, family) = match ask.given("contrasts") {
            true => ("contrasts", "contrasts"),
            false => ("given", "given p-values"),
        };
        let message = format!("\"{field}\" is written, but no family is chosen. Add family = \"{family}\".");
        reader.problem(field, message);
        return family;
    }
    reader.choice("family").unwrap_or("all pairs")
}

/// The comparisons of the family.
struct Members {
    family: Family,
    contrasts: Vec<Contrast>,
    given: Option<Vec<(String, f64)>>,
}

fn members(reader: &mut Reader, family_name: &str, study: Option<&Study>) -> Option<Members> {
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
        "contrasts" => {
            let contrasts = contrasts(reader, study)?;
            return Some(Members { family: Family::Contrasts, contrasts, given: None });
        }
        _ => Set::AllPairs,
    };
    Some(Members { family: Family::Set(set), contrasts: ready_set(set, labels), given: None })
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
    let mut fine = true;
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
    let read: Vec<Option<Contrast>> =
        entries.iter().map(|(name, value)| contrast(reader, name, value, &study.levels.labels)).collect();
    read.into_iter().collect()
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

fn adjust(reader: &mut Reader, family: Family, variances: Variances, sides: Sides, known: bool) -> Adjust {
    let default = default_adjust(family, variances, sides);
    let Some(chosen) = reader.choice("adjust").and_then(Adjust::from_name) else {
        return default;
    };
    if known && let Some(message) = objection(chosen, family, variances, sides) {
        reader.problem("adjust", message);
    }
    chosen
}

fn also(
    reader: &mut Reader,
    family: Family,
    variances: Variances,
    sides: Sides,
    adjust: Adjust,
) -> Vec<Adjust> {
    if !reader.ask().given("also") {
        return Vec::new();
    }
    let mut found: Vec<Adjust> = Vec::new();
    for beside in reader.choices("also").into_iter().filter_map(Adjust::from_name) {
        if let Some(message) = objection(beside, family, variances, sides) {
            reader.problem("also", message);
        } else if beside != adjust && !found.contains(&beside) {
            found.push(beside);
        }
    }
    found
}

/// Why the procedure does not suit, with those that do.
fn objection(adjust: Adjust, family: Family, variances: Variances, sides: Sides) -> Option<String> {
    let reason = adjust.unsuitable(family, variances, sides)?;
    let fitting = suitable(family, variances, sides);
    let names = quoted_choices(fitting.iter().map(|adjust| adjust.name()));
    let mut letters = reason.chars();
    let first = letters.next().map(|letter| letter.to_uppercase().to_string()).unwrap_or_default();
    Some(format!("{first}{}. Suitable here: {names}.", letters.as_str()))
}

fn unused(ask: &Ask, family_name: &str, family: Family) -> Vec<&'static str> {
    let mut unused = Vec::new();
    if ask.given("contrasts") && family_name != "contrasts" {
        unused.push("contrasts");
    }
    if ask.given("given") && family_name != "given p-values" {
        unused.push("given");
    }
    if family == Family::Given && ask.given("sides") {
        unused.push("sides");
    }
    unused
}
