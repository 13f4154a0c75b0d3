//! The result under the names that outside checks rely on.

use super::Laid;
use super::asked::Asked;
use crate::methods::contrasts::{Contrast, in_words, rank};
use crate::methods::multiplicity::{
    Adjust, ComparisonRow, Disagreement, Explanation, IntervalKind, PValueMethod,
};
use crate::notebook::results::number;
use serde_json::{Map, Value, json};

/// All rows with full precision.
pub fn results(laid: &Laid) -> Value {
    let result = &laid.comparisons;
    let mut object = family(laid.asked, &laid.estimates.labels);
    insert(&mut object, "critical", result.critical.map(number));
    insert(&mut object, "alpha_per_comparison", result.alpha_per_comparison.map(number));
    object.insert("confidence".into(), number(result.confidence));
    object.insert("intervals".into(), interval_kind(result.interval_kind));
    let rows = (0..result.rows.len()).map(|i| row(laid, i));
    object.insert("rows".into(), rows.collect());
    let names: Vec<&str> = result.disagreeing.iter().map(|i| result.rows[*i].name.as_str()).collect();
    object.insert("intervals_disagree".into(), json!(names));
    insert(
        &mut object,
        "overall_and_comparisons_differ",
        laid.explanation.as_ref().map(|it| explanation(laid, it)),
    );
    Value::Object(object)
}

/// What is known before there are data: the family, its size, its contrasts and the method.
pub fn planned(asked: &Asked, labels: &[String]) -> Value {
    let mut object = family(asked, labels);
    let method_alpha = match asked.adjust {
        Adjust::PValues(PValueMethod::Bonferroni) => Some(asked.alpha / asked.contrasts.len().max(1) as f64),
        Adjust::PValues(PValueMethod::None) => Some(asked.alpha),
        _ => None,
    };
    insert(&mut object, "alpha_per_comparison", method_alpha.map(number));
    let rows = asked.contrasts.iter().map(|contrast| Value::Object(named(contrast, labels)));
    object.insert("rows".into(), rows.collect());
    Value::Object(object)
}

fn family(asked: &Asked, labels: &[String]) -> Map<String, Value> {
    let mut object = Map::new();
    object.insert("family".into(), json!(asked.family_name));
    object.insert("adjust".into(), json!(asked.adjust.name()));
    object.insert("family_size".into(), json!(asked.contrasts.len()));
    object.insert("rank".into(), json!(rank(&coefficients(&asked.contrasts))));
    object.insert("levels".into(), json!(labels));
    object.insert("sides".into(), json!(asked.sides));
    object.insert("alpha".into(), number(asked.alpha));
    object
}

/// The coefficients of several contrasts.
pub fn coefficients(contrasts: &[Contrast]) -> Vec<Vec<f64>> {
    contrasts.iter().map(|contrast| contrast.coefficients.clone()).collect()
}

fn named(contrast: &Contrast, labels: &[String]) -> Map<String, Value> {
    let mut object = Map::new();
    object.insert("name".into(), json!(contrast.name));
    object.insert("words".into(), json!(in_words(&contrast.coefficients, labels)));
    let by_level = labels.iter().zip(&contrast.coefficients).map(|(level, c)| (level.clone(), number(*c)));
    object.insert("coefficients".into(), Value::Object(by_level.collect()));
    object
}

fn row(laid: &Laid, i: usize) -> Value {
    let row = &laid.comparisons.rows[i];
    let mut object = named(&laid.asked.contrasts[i], &laid.estimates.labels);
    let numbers = [
        ("estimate", row.estimate),
        ("se", row.se),
        ("df", row.df),
        ("t", row.t),
        ("statistic", row.statistic),
        ("p", row.p),
        ("p_adjusted", row.p_adjusted),
        ("critical", row.critical),
    ];
    numbers.into_iter().for_each(|(key, value)| drop(object.insert(key.into(), number(value))));
    object.insert("statistic_name".into(), json!(row.statistic_name));
    insert(&mut object, "p_error", row.p_error.map(number));
    insert(&mut object, "alpha", row.alpha.map(number));
    object.insert("rejected".into(), json!(row.rejected));
    let own = procedure_has_intervals(laid);
    let bound = |value: f64| if own { number(value) } else { Value::Null };
    object.insert("lower".into(), bound(row.interval.lower));
    object.insert("upper".into(), bound(row.interval.upper));
    object.insert("shown_lower".into(), number(row.interval.lower));
    object.insert("shown_upper".into(), number(row.interval.upper));
    effect(row, &mut object);
    if !laid.also.is_empty() {
        let also = laid.also.iter().map(|(adjust, p)| (adjust.name().to_string(), number(p[i])));
        object.insert("also".into(), Value::Object(also.collect()));
    }
    Value::Object(object)
}

/// Whether the shown intervals are the procedure's own, so that they belong to its decisions.
fn procedure_has_intervals(laid: &Laid) -> bool {
    laid.comparisons.adjust.single_step() || laid.comparisons.family_size == 1
}

fn effect(row: &ComparisonRow, object: &mut Map<String, Value>) {
    let Some(effect) = &row.effect else { return };
    object.insert("d".into(), number(effect.d));
    object.insert("g".into(), number(effect.g));
    object.insert("standardiser".into(), number(effect.standardiser.sd));
    let pairs = [("d", effect.d_interval), ("g", effect.g_interval)];
    for (name, interval) in pairs {
        if let Some(interval) = interval {
            object.insert(format!("{name}_lower"), number(interval.lower));
            object.insert(format!("{name}_upper"), number(interval.upper));
        }
    }
}

fn interval_kind(kind: IntervalKind) -> Value {
    match kind {
        IntervalKind::Simultaneous => json!("simultaneous"),
        IntervalKind::SimultaneousBy(method) => {
            json!(format!("simultaneous by {}", Adjust::PValues(method).name()))
        }
        IntervalKind::PerComparison => json!("per comparison"),
    }
}

fn explanation(laid: &Laid, found: &Explanation) -> Value {
    json!({
        "significant": match found.disagreement {
            Disagreement::OverallOnly => "overall test only",
            Disagreement::ComparisonsOnly => "comparisons only",
        },
        "overall": found.overall,
        "carrying_contrast": named(&found.carrying, &laid.estimates.labels),
        "carrying_estimate": number(found.carrying_estimate.estimate),
        "carrying_t": number(found.carrying_estimate.estimate / found.carrying_estimate.se),
        "nearest": laid.comparisons.rows[found.nearest].name,
    })
}

fn insert(object: &mut Map<String, Value>, key: &str, value: Option<Value>) {
    if let Some(value) = value {
        object.insert(key.into(), value);
    }
}
