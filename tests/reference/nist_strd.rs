//! The eleven NIST StRD one-way sets, from their text to F.
//!
//! Source: certified values of the Statistical Reference Datasets, analysis of variance suite (National Institute of
//! Standards and Technology), in `data/nist-strd-anova/certified.json`, printed there to 15 significant digits. That
//! folder's README says how they were obtained and why no program that stores the responses as binary fractions
//! can reach these digits on the sets with 7 and 13 constant leading digits.

use crate::cases::log_relative_error;
use levelwise::methods::overall::AnovaTable;
use levelwise::study::{Sample, Summary};
use levelwise::table::{ColumnKind, ReadOptions, Table, read};
use serde_json::Value;

const NAMES: [&str; 11] = [
    "SiRstv", "SmLs01", "SmLs02", "SmLs03", "AtmWtAg", "SmLs04", "SmLs05", "SmLs06", "SmLs07", "SmLs08",
    "SmLs09",
];

fn file(name: &str) -> String {
    let path = format!("{}/tests/reference/data/nist-strd-anova/{name}", env!("CARGO_MANIFEST_DIR"));
    std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{path}: {error}"))
}

fn certified() -> Value {
    serde_json::from_str::<Value>(&file("certified.json")).expect("the certified values are JSON")["datasets"]
        .clone()
}

fn table(name: &str) -> Table {
    read(&file(&format!("{name}.csv")), &ReadOptions::default())
        .unwrap_or_else(|error| panic!("{name}: {error}"))
}

fn summary(table: &Table) -> Summary {
    let treatment = table.column("treatment").expect("a column of treatments");
    let response = table.column("response").expect("a column of responses");
    let numbers = response.numbers.as_ref().expect("responses are numbers");
    let mut levels: Vec<&str> = Vec::new();
    let mut groups: Vec<Vec<f64>> = Vec::new();
    for row in 0..table.rows {
        let label = treatment.text(row);
        let at = levels.iter().position(|known| *known == label).unwrap_or_else(|| {
            levels.push(label);
            groups.push(Vec::new());
            levels.len() - 1
        });
        groups[at].push(numbers.offset(row).expect("no response is missing"));
    }
    Sample { origin: numbers.origin.to_f64(), groups }.summary()
}

fn assert_digits(name: &str, what: &str, computed: f64, expected: &Value) {
    let expected = expected["value"].as_f64().expect("a certified number");
    let digits = log_relative_error(computed, expected);
    assert!(digits >= 14.0, "{name}, {what}: {computed:e} against {expected:e} has {digits:.2} digits");
}

#[test]
fn f_and_the_sums_of_squares_have_14_digits_on_every_set() {
    let certified = certified();
    for name in NAMES {
        let expected = &certified[name]["certified"];
        let table = table(name);
        let summary = summary(&table);
        let labels: Vec<String> = (1..=summary.groups.len()).map(|i| i.to_string()).collect();
        let anova = AnovaTable::of(&labels, &summary).expect("every treatment is replicated");
        assert_eq!(Some(anova.df_between), expected["between"]["df"]["value"].as_f64(), "{name}");
        assert_eq!(Some(anova.df_within), expected["within"]["df"]["value"].as_f64(), "{name}");
        assert_digits(name, "F", anova.f, &expected["F"]);
        assert_digits(name, "sum of squares between", anova.ss_between, &expected["between"]["ss"]);
        assert_digits(name, "sum of squares within", anova.ss_within, &expected["within"]["ss"]);
        assert_digits(name, "mean square between", anova.ms_between, &expected["between"]["ms"]);
        assert_digits(name, "mean square within", anova.ms_within, &expected["within"]["ms"]);
        assert_digits(name, "residual standard deviation", anova.ms_within.sqrt(), &expected["residual_sd"]);
    }
}

#[test]
fn every_set_has_its_rows_and_two_columns_of_numbers() {
    let certified = certified();
    for name in NAMES {
        let table = table(name);
        assert_eq!(Some(table.rows as u64), certified[name]["n"].as_u64(), "{name}");
        assert!(table.columns.iter().all(|column| column.kind == ColumnKind::Number), "{name}");
        assert!(table.remarks.is_empty(), "{name}: {:?}", table.remarks);
    }
}
