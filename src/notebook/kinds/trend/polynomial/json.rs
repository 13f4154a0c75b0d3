//! The result under the names that outside checks rely on.

use super::Laid;
use crate::methods::effect_size::StandardisedEffect;
use crate::methods::trend::TrendRow;
use crate::notebook::results::number;
use serde_json::{Map, Value, json};

/// All rows with full precision.
pub fn results(laid: &Laid) -> Value {
    let (asked, trend, labels) = (laid.asked, &laid.trend, &laid.estimates.labels);
    let mut object = Map::new();
    object.insert("method".into(), json!("polynomial"));
    object.insert("weights".into(), json!(asked.weights));
    object.insert("degree".into(), json!(asked.degree));
    object.insert("levels".into(), json!(labels));
    object.insert("scores".into(), by_level(labels, &asked.scores));
    object.insert("alpha".into(), number(asked.alpha));
    object.insert("confidence".into(), number(asked.confidence));
    object.insert("ss_between".into(), number(trend.ss_between));
    object.insert("rows".into(), trend.rows.iter().map(|row| self::row(laid, row)).collect());
    let tests = trend.lack_of_fit.iter();
    if let Some(last) = tests.clone().find(|left| left.degree == asked.degree) {
        object.insert("lack_of_fit".into(), json!(last.test));
    }
    let each = tests.map(|left| {
        let test = &left.test;
        json!({ "beyond_degree": left.degree, "F": test.f, "df1": test.df1, "df2": test.df2, "p": test.p })
    });
    object.insert("lack_of_fit_by_degree".into(), each.collect());
    Value::Object(object)
}

/// Numbers by level.
pub fn by_level(labels: &[String], values: &[f64]) -> Value {
    Value::Object(labels.iter().cloned().zip(values.iter().map(|value| number(*value))).collect())
}

fn row(laid: &Laid, row: &TrendRow) -> Value {
    let mut object = Map::new();
    object.insert("name".into(), json!(row.name));
    object.insert("degree".into(), json!(row.degree));
    object.insert("coefficients".into(), by_level(&laid.estimates.labels, &row.coefficients));
    let numbers = [
        ("estimate", row.estimate),
        ("se", row.se),
        ("df", row.df),
        ("t", row.t),
        ("statistic", row.t),
        ("p", row.p),
        ("lower", row.interval.lower),
        ("upper", row.interval.upper),
        ("slope", row.slope),
        ("slope_lower", row.slope_interval.lower),
        ("slope_upper", row.slope_interval.upper),
        ("ss", row.ss),
    ];
    numbers.into_iter().for_each(|(key, value)| drop(object.insert(key.into(), number(value))));
    object.insert("statistic_name".into(), json!("t"));
    if let Some(share) = row.share {
        object.insert("share".into(), number(share));
    }
    object.insert("rejected".into(), json!(row.p <= laid.asked.alpha));
    if let Some(StandardisedEffect { d, g, d_interval, .. }) = &row.effect {
        object.insert("d".into(), number(*d));
        object.insert("g".into(), number(*g));
        if let Some(bounds) = d_interval {
            object.insert("d_lower".into(), number(bounds.lower));
            object.insert("d_upper".into(), number(bounds.upper));
        }
    }
    Value::Object(object)
}
