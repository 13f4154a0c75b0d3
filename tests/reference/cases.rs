//! Reads the tables in `data` and measures agreement.

use serde_json::Value;

/// The cases of `data/values/NAME.json`, or of `data/FOLDER/NAME.json` if `name` is `FOLDER/NAME`.
pub fn cases(name: &str) -> Vec<Value> {
    let folder = if name.contains('/') { "" } else { "values/" };
    let path = format!("{}/tests/reference/data/{folder}{name}.json", env!("CARGO_MANIFEST_DIR"));
    let text = std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{path}: {error}"));
    let file: Value = serde_json::from_str(&text).unwrap_or_else(|error| panic!("{path}: {error}"));
    file["cases"].as_array().cloned().unwrap_or_else(|| panic!("{path} has no list of cases"))
}

/// A number that the tables write as a number, as a decimal string, or as "inf".
pub fn number(value: &Value) -> f64 {
    match value {
        Value::Number(number) => number.as_f64().expect("a finite number"),
        Value::String(text) => text.parse().unwrap_or_else(|_| panic!("\"{text}\" is not a number")),
        other => panic!("{other} is not a number"),
    }
}

/// |computed - expected| / |expected|, or the absolute error where zero is expected.
pub fn relative_error(computed: f64, expected: f64) -> f64 {
    let error = (computed - expected).abs();
    if expected == 0.0 { error } else { error / expected.abs() }
}

/// Log relative error: the number of correct significant digits, capped at 15 (the measure used with the NIST
/// StRD sets).
pub fn log_relative_error(computed: f64, expected: f64) -> f64 {
    let error = relative_error(computed, expected);
    if error == 0.0 { 15.0 } else { (-libm::log10(error)).min(15.0) }
}

/// Fails unless `computed` is the printed number `digits`, to half a unit of its last digit.
pub fn rounds_to(computed: f64, digits: &str) {
    let decimals = digits.split_once('.').map_or(0, |(_, decimals)| decimals.len());
    let printed: f64 = digits.parse().unwrap_or_else(|_| panic!("\"{digits}\" is not a number"));
    // The rounding of the printed number itself is far below a thousandth of the half unit.
    let half = 0.5005 * libm::pow(10.0, -(decimals as f64));
    assert!((computed - printed).abs() <= half, "computed {computed}, printed {digits}");
}
